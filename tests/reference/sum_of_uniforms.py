"""Makes sum_of_uniforms.rs: tails of a sum of uniforms by the alternating closed form in exact rationals."""
from fractions import Fraction
from math import comb, factorial, floor
def lower(n, x):
    return sum((-1) ** k * comb(n, k) * (x - k) ** n for k in range(floor(x) + 1)) / Fraction(factorial(n))
cases = [(1, 0.25), (2, 0.5), (2, 1.75), (3, 1.5), (5, 0.125), (6, 5.125), (10, 3.71875), (20, 10.0), (20, 2.5), (50, 30.0), (50, 49.5), (100, 50.25), (100, 20.0),
         (300, 170.0), (300, 60.5)]
print("// Made by sum_of_uniforms.py in exact rational arithmetic; do not edit.")
print(f"const REFERENCE_SUM_OF_UNIFORMS: [(usize, f64, f64, f64); {len(cases)}] = [")
for n, x in cases:
    exact = Fraction(x)
    print(f"    ({n}, {x!r}, {float(lower(n, exact))!r}, {float(lower(n, n - exact))!r}),")
print("];")
