"""Levels of the standard normal homogeneity test's T0 (standard deviation with n - 1) by plain simulation with NumPy.

Run: python3 homogeneity_levels.py > homogeneity_levels.rs
"""

import numpy

ROUNDS = 400_000
generator = numpy.random.default_rng(20240501)
levels = [0.1, 0.05, 0.01]
sizes = [5, 10, 20, 30, 50, 100]

print(f"// Made by homogeneity_levels.py with NumPy, {ROUNDS} series of normal readings for each size; do not edit.")
print("// Readings, chance, and the value that T0 exceeds with that chance.")
print(f"const HOMOGENEITY_LEVELS: [(usize, f64, f64); {len(levels) * len(sizes)}] = [")
for n in sizes:
    largest = []
    for _ in range(ROUNDS // 20_000):
        readings = generator.standard_normal((20_000, n))
        z = (readings - readings.mean(1, keepdims=True)) / readings.std(1, ddof=1, keepdims=True)
        k = numpy.arange(1, n)
        first = numpy.cumsum(z, 1)[:, :-1]
        second = z.sum(1, keepdims=True) - first
        largest.append((k * (first / k) ** 2 + (n - k) * (second / (n - k)) ** 2).max(1))
    largest = numpy.concatenate(largest)
    for level in levels:
        print(f"    ({n}, {level}, {numpy.quantile(largest, 1 - level):.4f}),")
print("];")
