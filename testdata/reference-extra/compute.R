# Results of general-purpose R packages on the data sets of ../reference.
# Run in this folder: Rscript compute.R > expected-r-extra.json
suppressMessages({ library(boot); library(survey); library(jsonlite) })
options(survey.lonely.psu = "fail")

# --- Standard errors linearised over parts, with calls missing -------------
# Each part contributes a vector; the coefficient is a function of its totals.
# survey takes its variance by the delta method, the part being the cluster.
linearised <- function(contributions, coefficient) {
  d <- svydesign(ids = ~1, weights = ~1, data = contributions)
  total <- svytotal(as.formula(paste("~", paste(names(contributions), collapse = "+"))), d)
  s <- suppressWarnings(svycontrast(total, coefficient))
  list(estimate = as.numeric(coef(s)), se = as.numeric(SE(s)))
}
calls <- read.csv("../reference/incomplete-12x4.csv")[, -1]
categories <- 5
tab <- t(apply(calls, 1, function(x) table(factor(x, levels = 1:categories))))
n <- rowSums(tab)
differ <- n^2 - rowSums(tab^2)            # ordered pairs of different calls
# Gwet's generalised forms: each part weighs the same.
shares <- as.data.frame(tab / n)
names(shares) <- paste0("p", 1:categories)
by_shares <- cbind(compared = as.numeric(n >= 2),
                   disagreed = ifelse(n >= 2, differ / (n * (n - 1)), 0),
                   parts = 1, shares)
S <- "((p1^2 + p2^2 + p3^2 + p4^2 + p5^2) / parts^2)"
expr <- function(chance) parse(text = paste0("1 - (disagreed / compared) / (", chance, ")"))[[1]]
# Krippendorff's alpha: parts weigh by their calls; single calls do not count.
two <- n >= 2
counts <- as.data.frame(unclass(tab[two, ]))
names(counts) <- paste0("p", 1:categories)
by_calls <- cbind(compared = n[two], disagreed = differ[two] / (n[two] - 1), parts = n[two], counts)
incomplete <- list(
  fleiss = linearised(by_shares, expr(paste("1 -", S))),
  ac1 = linearised(by_shares, expr(paste("1 - (1 -", S, ") /", categories - 1))),
  alpha = linearised(by_calls, expr(paste("(1 -", S, ") * parts / (parts - 1)"))))

# --- BCa of kappas, resampling whole parts ---------------------------------
msa <- read.csv("../reference/msa-manual-50x3x3.csv")
cols <- lapply(c("A", "B", "C"), function(a) grep(paste0("^", a), names(msa), value = TRUE))
stopifnot(all(lengths(cols) == 3))
cohen <- function(x, y) {
  t <- table(factor(x, 0:1), factor(y, 0:1)) / length(x)
  (sum(diag(t)) - sum(rowSums(t) * colSums(t))) / (1 - sum(rowSums(t) * colSums(t)))
}
fleiss <- function(m) {
  k <- ncol(m); ones <- rowSums(m)
  p <- mean(ones / k)
  1 - mean(2 * ones * (k - ones) / (k * (k - 1))) / (2 * p * (1 - p))
}
reference <- msa[[2]]
statistics <- list(
  "A-reference" = function(d, i) cohen(unlist(d[i, cols[[1]]]), rep(d[i, 2], 3)),
  "C-reference" = function(d, i) cohen(unlist(d[i, cols[[3]]]), rep(d[i, 2], 3)),
  "A-C" = function(d, i) cohen(unlist(d[i, cols[[1]]]), unlist(d[i, cols[[3]]])),
  "Fleiss" = function(d, i) fleiss(as.matrix(d[i, unlist(cols)])))
bca <- lapply(statistics, function(f) {
  set.seed(1)
  b <- boot(msa, f, R = 20000)
  L <- empinf(b, type = "jack")
  L <- L - mean(L)   # Efron and Tibshirani (1993), (14.15): about the mean
  ci <- boot.ci(b, conf = c(0.90, 0.95), type = "bca", L = L)$bca
  list(estimate = b$t0, acceleration = sum(L^3) / (6 * sum(L^2)^1.5),
       lower_90 = ci[1, 4], upper_90 = ci[1, 5], lower_95 = ci[2, 4], upper_95 = ci[2, 5])
})

# --- Quantiles far out ------------------------------------------------------
limits <- lapply(list(c(0, 1e7), c(3, 1e7), c(5e6, 1e7), c(1, 2), c(1, 1e6), c(199, 200)), function(x)
  list(x = x[1], n = x[2],
       lower = if (x[1] == 0) 0 else qbeta(0.005, x[1], x[2] - x[1] + 1),
       upper = qbeta(0.995, x[1] + 1, x[2] - x[1])))
expanded <- lapply(c(3, 5, 20, 50, 1000), function(n)
  list(parts = n, confidence = 1 - 2 * pnorm(-qt(0.975, n - 1) * sqrt(n / (n - 1)))))

cat(toJSON(list(
  versions = list(R = as.character(getRversion()), boot = as.character(packageVersion("boot")),
                  survey = as.character(packageVersion("survey"))),
  incomplete = incomplete, bca = bca, clopper_pearson_99 = limits, expanded_95 = expanded),
  auto_unbox = TRUE, digits = 14, pretty = TRUE), "\n", sep = "")
