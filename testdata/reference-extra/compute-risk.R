# Profile-likelihood limits of the risk of a fitted acceptance curve, by base R
# alone. Run in this folder: Rscript compute-risk.R > expected-r-risk.json
msa <- read.csv("../reference/msa-manual-50x3x3.csv")
L <- 0.450; U <- 0.545
mu <- 0.4975; sd <- 0.02                 # the process
crit <- qchisq(0.95, 1)

shares <- function(theta, band) {
  s <- exp(theta[3])
  accept <- function(x) pnorm((x - theta[1] - band) / s) - pnorm((x - theta[2] + band) / s)
  part <- function(f, from, to) integrate(function(x) f(x) * dnorm(x, mu, sd), from, to,
                                          rel.tol = 1e-11, abs.tol = 0, subdivisions = 2000)$value
  far <- 9 * sd
  escape <- part(accept, L - far, L) + part(accept, U, U + far)
  c(escape = escape, false_reject = part(function(x) 1 - accept(x), L, U),
    good = part(accept, L, U))
}
logit <- function(p) log(p) - log1p(-p)
quantity <- list(
  escape = function(s) s[["escape"]],
  false_reject = function(s) s[["false_reject"]],
  bad_among_accepted = function(s) s[["escape"]] / (s[["escape"]] + s[["good"]]))

one <- function(name, columns) {
  a <- rowSums(msa[, columns]); n <- length(columns); x <- msa$value
  lost0 <- function(theta) {
    s <- exp(theta[3])
    p <- pnorm((x - theta[1]) / s) - pnorm((x - theta[2]) / s)
    q <- pnorm((x - theta[1]) / s, lower.tail = FALSE) + pnorm((x - theta[2]) / s)
    -2 * sum(ifelse(a > 0, a * log(p), 0) + ifelse(a < n, (n - a) * log(q), 0))
  }
  polish <- function(f, at) {             # restarted until it stays
    for (i in 1:30) {
      new <- optim(at, f, control = list(reltol = 1e-15, maxit = 5000, parscale = c(0.002, 0.002, 0.2)))
      if (max(abs(new$par - at)) < 1e-10) break
      at <- new$par
    }
    new
  }
  best <- polish(lost0, c(0.453, 0.543, log(0.005)))
  out <- list()
  for (band in c(0, 0.005, 0.012)) for (q in names(quantity)) {
    h <- function(theta) logit(quantity[[q]](shares(theta, band)))
    limit <- function(sign) {
      at <- best$par
      for (penalty in c(10, 1e3, 1e5, 1e7)) {
        f <- function(theta) {
          v <- try(-sign * h(theta) + penalty * max(0, lost0(theta) - best$value - crit)^2, silent = TRUE)
          if (inherits(v, "try-error") || !is.finite(v)) 1e10 else v
        }
        at <- polish(f, at)$par
      }
      plogis(h(at))
    }
    out[[length(out) + 1]] <- sprintf('    {"calls": "%s", "band": %g, "quantity": "%s", "estimate": %.12g, "lower": %.10g, "upper": %.10g}',
                                      name, band, q, plogis(h(best$par)), limit(-1), limit(1))
  }
  unlist(out)
}
rows <- c(one("C", c("C.1", "C.2", "C.3")),
          one("all", grep("^[ABC]\\.", names(msa), value = TRUE)))
cat('{\n  "versions": {"R": "', as.character(getRversion()), '"},\n  "risk_profile": [\n',
    paste(rows, collapse = ",\n"), '\n  ]\n}\n', sep = "")
