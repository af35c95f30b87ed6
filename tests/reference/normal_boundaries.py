"""Boundaries of a process of independent normal steps at five looks with equal information between them, one-sided 2.5 %.

python3 tests/reference/normal_boundaries.py prints those in tests/published/planned_looks.rs. The density of the paths that
have not crossed is carried from look to look by numerical integration (Armitage, McPherson and Rowe 1969).
"""

import numpy as np
from scipy.signal import fftconvolve
from scipy.stats import norm

RISK, LOOKS = 0.025, 5


def o_brien_fleming(information):
    return 2 * norm.sf(norm.isf(RISK / 2) / np.sqrt(information))


def pocock(information):
    return RISK * np.log(1 + (np.e - 1) * information)


for spending in [o_brien_fleming, pocock]:
    x = np.linspace(-9, 9, 20001)
    width = x[1] - x[0]
    step = np.sqrt(1 / LOOKS)
    density, spent, boundary = norm.pdf(x, 0, step), 0.0, []
    for look in range(1, LOOKS + 1):
        if look > 1:
            density = fftconvolve(density, norm.pdf((np.arange(20001) - 10000) * width, 0, step), "same") * width
        information = look / LOOKS
        beyond = np.cumsum(density[::-1])[::-1] * width
        wanted = spending(information) - spent
        place = np.argmax(beyond <= wanted)
        part = (beyond[place - 1] - wanted) / (beyond[place - 1] - beyond[place])
        least = x[place - 1] + (part - 0.5) * width
        boundary.append(least / np.sqrt(information))
        density, spent = np.where(x >= least, 0.0, density), spending(information)
    print(spending.__name__, np.round(boundary, 3))
