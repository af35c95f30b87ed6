"""Makes chi_square_tails.rs: chi-square tails with mpmath at 60 digits."""
from mpmath import mp, mpf, gammainc
mp.dps = 60
cases = [(1, 0.001), (1, 3.84), (1, 200.0), (2, 0.5), (2, 1000.0), (3, 0.01), (3, 11.5), (4, 1e-8), (5, 40.0), (6, 1200.0), (7, 2.5), (12, 2.078842607801404),
         (20, 37.22808148348317), (20, 0.125), (20, 500.0), (21, 21.0), (99, 162.25), (99, 1.5), (200, 20.0), (200, 200.0), (200, 900.0), (2000, 1500.0),
         (2000, 2000.0), (2000, 3000.0), (20001, 18000.0), (200000, 202000.0)]
print("// Made by chi_square_tails.py with mpmath at 60 digits; do not edit.")
print(f"const REFERENCE_CHI_SQUARE: [(u64, f64, f64, f64); {len(cases)}] = [")
for v, x in cases:
    s, y = mpf(v) / 2, mpf(x) / 2
    low, up = gammainc(s, 0, y, regularized=True), gammainc(s, y, regularized=True)
    assert abs(low + up - 1) < mpf(10) ** -40
    print(f"    ({v}, {x!r}, {float(low)!r}, {float(up)!r}),")
print("];")
