"""Tails of the beta distribution with mpmath at 150 digits. Run: python3 beta_tails.py > beta_tails.rs"""

import mpmath

mpmath.mp.dps = 150
CASES = [
    (0.5, 0.5, 0.1), (2, 3, 1e-8), (4.483050847457627, 4.483050847457627, 0.375),
    (144.70585454887993, 144.70585454887993, 0.09017100178608495), (49.2, 49.2, 0.0889), (0.5, 1.0, 0.3), (0.5, 49.0, 0.9),
    (0.5, 49.0, 0.2), (48.5, 0.5, 0.05), (4.5, 0.5, 0.9999), (498.5, 0.5, 0.6), (4999.0, 0.5, 0.99), (1e4, 1e4, 0.49),
    (99.5, 0.5, 0.001), (1.0, 0.5, 0.25), (0.5, 4998.5, 0.02), (7.0, 7.0, 0.5),
]


def lower_tail(a, b, x):
    """The lower tail by a series of positive terms: x^a (1-x)^b / (a B(a, b)) times the sum of (a+b)_k / (a+1)_k x^k."""
    a, b, x = mpmath.mpf(a), mpmath.mpf(b), mpmath.mpf(x)
    if x > a / (a + b):
        return 1 - lower_tail(b, a, 1 - x)
    term = total = mpmath.mpf(1)
    k = 0
    while term > total * mpmath.mpf(10) ** -60:
        term *= (a + b + k) / (a + 1 + k) * x
        total += term
        k += 1
    return x**a * (1 - x) ** b / (a * mpmath.beta(a, b)) * total


print("// Made by beta_tails.py with mpmath at 150 digits; do not edit.")
print(f"const REFERENCE_BETA: [(f64, f64, f64, f64, f64); {len(CASES)}] = [")
for a, b, x in CASES:
    a, b, x = float(a), float(b), float(x)
    print(f"    ({a!r}, {b!r}, {x!r}, {float(lower_tail(a, b, x))!r}, {float(lower_tail(b, a, 1 - mpmath.mpf(x)))!r}),")
print("];")
