"""Makes binomial_tails.rs: binomial tails with mpmath at 60 digits, exact intervals with SciPy."""
from mpmath import mp, mpf, binomial
from scipy.stats import binomtest
mp.dps = 60
cases = [(7, 7, 0.5), (9, 4, 0.5), (52, 40, 0.5), (52, 52, 0.5), (104, 70, 0.75), (500, 480, 0.5), (1000, 530, 0.5),
         (1000, 999, 0.5), (1000, 700, 0.75), (26000, 13400, 0.5), (26000, 14600, 0.5), (40, 3, 0.001953125), (60, 2, 0.9375)]
fmt = lambda value: repr(float(value))
print("// Made by binomial_tails.py with mpmath at 60 digits and SciPy; do not edit.")
print(f"const REFERENCE_BINOMIAL: [(u64, u64, f64, f64, f64); {len(cases)}] = [")
for n, k, share in cases:
    p = mpf(share); q = 1 - p
    terms = [binomial(n, j) * p**j * q**(n - j) for j in range(n + 1)]
    print(f"    ({n}, {k}, {share!r}, {fmt(sum(terms[:k + 1]))}, {fmt(sum(terms[k:]))}),")
print("];")
intervals = [(n, k, level) for n, k in [(1, 0), (1, 1), (7, 7), (9, 4), (26, 18), (52, 1), (52, 40), (1000, 530)] for level in (0.95, 0.9)]
print(f"const REFERENCE_INTERVAL: [(u64, u64, f64, f64, f64); {len(intervals)}] = [")
for n, k, level in intervals:
    ci = binomtest(k, n).proportion_ci(level, "exact")
    print(f"    ({n}, {k}, {level!r}, {float(ci.low)!r}, {float(ci.high)!r}),")
print("];")
