"""Makes normal_tails.rs: upper tails of the standard normal with mpmath at 50 digits."""
from mpmath import mp, erfc, mpf, sqrt
mp.dps = 50
zs = ["-8", "-3", "-1", "-0.1", "0", "0.1", "0.5", "1", "1.5", "2", "2.5", "3", "4", "5", "6", "8", "10", "13", "16", "20", "25", "30", "37"]
print("// Made by normal_tails.py with mpmath at 50 digits; do not edit.")
print(f"const REFERENCE_TAILS: [(f64, f64); {len(zs)}] = [")
for z in zs:
    value = erfc(mpf(z) / sqrt(mpf(2))) / 2
    print(f"    ({float(z)!r}, {float(value)!r}),")
print("];")
