"""The figures of signal's worked examples (signal/example_test.go), by a plain
search over the likelihood and a midpoint sum, with Python's math alone.
Run in this folder: python3 examples.py"""
import math

# Value, times accepted out of 6, at an upper limit of 20 (invented).
SHAFTS = [(19.990, 6), (19.994, 6), (19.996, 6), (19.998, 5), (20.000, 5),
          (20.001, 4), (20.003, 2), (20.005, 1), (20.008, 0), (20.012, 0)]


def phi(z):
    return 0.5 * math.erfc(-z / math.sqrt(2))


def loglik(cut, sigma):
    return sum(a * math.log(phi(-(x - cut) / sigma)) + (6 - a) * math.log(phi((x - cut) / sigma))
               for x, a in SHAFTS)


def highest(f, lo, hi, steps):
    """The place of the maximum of f, which has one, by golden sections."""
    part = (math.sqrt(5) - 1) / 2
    for _ in range(steps):
        left, right = hi - part * (hi - lo), lo + part * (hi - lo)
        if f(left) > f(right):
            hi = right
        else:
            lo = left
    return (lo + hi) / 2


def best_sigma(cut):
    return highest(lambda s: loglik(cut, s), 0.0008, 0.02, 80)


cut = highest(lambda m: loglik(m, best_sigma(m)), 19.995, 20.010, 60)
sigma = best_sigma(cut)
top = loglik(cut, sigma)


def end(way):
    """Where twice the log-likelihood lost reaches 3.8415 (chi-square, 1 df)."""
    inside, outside = cut, cut + way * 0.006
    for _ in range(50):
        middle = (inside + outside) / 2
        if 2 * (top - loglik(middle, best_sigma(middle))) < 3.841458820694124:
            inside = middle
        else:
            outside = middle
    return inside - 20


def mass(lo, hi, share, band, n=40000):
    """Parts of a normal process (19.990, 0.004) between lo and hi, each times share
    of its chance of acceptance."""
    step, total = (hi - lo) / n, 0.0
    for i in range(n):
        x = lo + (i + 0.5) * step
        density = math.exp(-((x - 19.99) / 0.004) ** 2 / 2) / (0.004 * math.sqrt(2 * math.pi))
        total += step * density * share(phi(-(x - cut + band) / sigma))
    return total


print(f"cuts at {cut:.4f}, {cut - 20:+.4f} off the limit ({end(-1):+.4f} to {end(1):+.4f})")
print(f"grey zone {cut - 2.575829 * sigma:.4f} to {cut + 2.575829 * sigma:.4f}")
escape = mass(20, 20.04, lambda p: p, 0)
lo, hi = 0.0, 0.02
for _ in range(40):
    middle = (lo + hi) / 2
    if mass(20, 20.04, lambda p: p, middle, 4000) > 500e-6:
        lo = middle
    else:
        hi = middle
print(f"{1e6 * escape:.0f} ppm escape; a guard band of {hi:.4f} holds "
      f"{1e6 * mass(20, 20.04, lambda p: p, hi):.0f} ppm and rejects "
      f"{100 * mass(19.95, 20, lambda p: 1 - p, hi):.1f} % of good parts")

# d′ of 45 of 48 and 5 of 102, log-linear correction (Hautus 1995).
hit, alarm = 45.5 / 49, 5.5 / 103


def quantile(p):
    lo, hi = -10.0, 10.0
    for _ in range(100):
        middle = (lo + hi) / 2
        lo, hi = (middle, hi) if phi(middle) < p else (lo, middle)
    return lo


zh, zf = quantile(hit), quantile(alarm)
density = lambda z: math.exp(-z * z / 2) / math.sqrt(2 * math.pi)
se = math.sqrt(hit * (1 - hit) / 48 / density(zh) ** 2 + alarm * (1 - alarm) / 102 / density(zf) ** 2)
print(f"d′ = {zh - zf:.2f} ({zh - zf - 1.959964 * se:.2f} to {zh - zf + 1.959964 * se:.2f}), criterion {-(zh + zf) / 2 + 0:.2f}")
