"""Far tails of every exact test, counted in whole numbers and printed to fifty digits.

python3 tests/reference/far_tails.py > tests/published/reference/far_tails.json

Each series is chosen so that its statistic is known without a program: sorted but for a few neighbours. The counts come
from the generating function or the recursion that the test's paper gives, in Python's whole numbers; mpmath serves the one
continuous distribution that has no rational value.
"""

import itertools
import json
from fractions import Fraction
from math import comb, factorial

from mpmath import mp, mpf

mp.dps = 60
cases = []


def case(method, body, key, value, by):
    shown = mpf(value.numerator) / mpf(value.denominator) if isinstance(value, Fraction) else value
    cases.append({"method": method, "body": body, "key": key, "value": mp.nstr(shown, 50), "made_by": by})


def times(a, b):
    product = [0] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        if x:
            for j, y in enumerate(b):
                product[i + j] += x * y
    return product


def inversions(n):
    """How many orders of n readings have 0, 1, 2, ... inversions."""
    counts = [1]
    for size in range(2, n + 1):
        counts = times(counts, [1] * size)
    return counts


def sorted_but(n, swaps):
    """1 to n with neighbours exchanged: one inversion each."""
    readings = list(range(1, n + 1))
    for swap in range(swaps):
        readings[2 * swap], readings[2 * swap + 1] = readings[2 * swap + 1], readings[2 * swap]
    return readings


for pairs, falls in [(100, 0), (100, 3), (400, 20)]:
    readings = [0] * pairs + [1] * (pairs - falls) + [-1] * falls
    tail = Fraction(sum(comb(pairs, k) for k in range(falls + 1)), 2**pairs)
    case("cox-stuart", {"readings": readings}, "p_rising", tail, "binomial coefficients")

for n, falls in [(60, 2), (200, 5)]:
    readings = list(range(1, n + 1))
    for fall in range(falls):
        readings[2 * fall], readings[2 * fall + 1] = readings[2 * fall + 1], readings[2 * fall]
    eulerian = [1]
    for size in range(2, n + 1):
        before = eulerian + [0]
        eulerian = [(k + 1) * before[k] + (size - k) * (before[k - 1] if k else 0) for k in range(size)]
    tail = Fraction(sum(eulerian[: falls + 1]), factorial(n))
    case("difference-signs", {"readings": readings}, "p_rising", tail, "Eulerian numbers")

for n, swaps in [(20, 0), (40, 3), (100, 7)]:
    tail = Fraction(sum(inversions(n)[: swaps + 1]), factorial(n))
    for method in ["mann-kendall", "theil-sen"]:
        case(method, {"readings": sorted_but(n, swaps)}, "p_rising", tail, "product of 1 + q + ... + q^(i-1)")

for blocks, n, swaps in [(4, 10, 1), (12, 20, 4)]:
    # Each block has n readings in order, but for one swap in the first `swaps` of them.
    total = [1]
    for _ in range(blocks):
        total = times(total, inversions(n))[: swaps + 1]
    tail = Fraction(sum(total), factorial(n) ** blocks)
    rows = [sorted_but(n, 1 if block < swaps else 0) for block in range(blocks)]
    readings = [rows[block][moment] for moment in range(n) for block in range(blocks)]
    body = {"readings": readings, "blocks": [f"b{block}" for _ in range(n) for block in range(blocks)]}
    for method in ["seasonal-kendall", "regional-kendall"]:
        case(method, body, "p_rising", tail, "powers of the product of 1 + q + ... + q^(i-1)")

for n, swaps in [(20, 0), (40, 3), (100, 7)]:
    tail = Fraction(sum(inversions(n)[: swaps + 1]), factorial(n))
    body = {"readings": sorted_but(n, swaps), "readings_are": "gaps"}
    case("reverse-arrangements", body, "p_falling", tail, "product of 1 + q + ... + q^(i-1)")

for n in [12, 60, 120]:
    runs = [0, 2]
    for size in range(3, n + 1):
        before = runs + [0, 0]
        runs = [0] + [
            k * before[k] + 2 * before[k - 1] + (size - k) * (before[k - 2] if k > 1 else 0) for k in range(1, size)
        ]
    assert sum(runs) == factorial(n)
    up_down = list(range(1, n, 2)) + list(range(n - n % 2, 0, -2))
    assert sorted(up_down) == list(range(1, n + 1))
    tail = Fraction(runs[1] + runs[2], factorial(n))
    for method in ["turning-points", "runs-up-down"]:
        case(method, {"readings": up_down}, "p_smooth", tail, "Andre's recursion")

for half in [20, 100]:
    readings = list(range(1, 2 * half + 1))
    case("runs-about-median", {"readings": readings}, "p_smooth", Fraction(2, comb(2 * half, half)), "binomial coefficients")
    readings = readings[1 : half + 1] + [2 * half] + [1] + readings[half + 1 : -1]
    runs_four = 2 * comb(half - 1, 1) ** 2
    tail = Fraction(2 + 2 * comb(half - 1, 1) + runs_four, comb(2 * half, half))
    readings = [1] * (half - 1) + [9] + [1] + [9] * (half - 1)
    case("runs-about-median", {"readings": readings}, "p_smooth", tail, "binomial coefficients")

for n in [9, 12]:
    case("spearman", {"readings": sorted_but(n, 0)}, "p_rising", Fraction(1, factorial(n)), "one order of n!")
    case("spearman", {"readings": sorted_but(n, 1)}, "p_rising", Fraction(n, factorial(n)), "the sorted order and its n - 1 neighbours")
tied = [1] * 12 + [2] * 13 + [3] * 15
chance = Fraction(factorial(12) * factorial(13) * factorial(15), factorial(40))
case("spearman", {"readings": tied}, "p_rising", chance, "multinomial coefficient")

for sizes, swaps in [((5, 5, 5, 5), 0), ((8, 8, 8, 8, 8), 1), ((10, 12, 9, 11), 2)]:
    n = sum(sizes)
    readings, moments, end = list(range(1, n + 1)), [], 0
    for group, size in enumerate(sizes, 1):
        moments += [group] * size
    for swap in range(swaps):
        end += sizes[swap]
        readings[end - 1], readings[end] = readings[end], readings[end - 1]
    # The Gaussian multinomial: quotient of products of q-integers, by exact division of power series.
    top = inversions(n)[: swaps + 1]
    for size in sizes:
        below, quotient = inversions(size) + [0] * (swaps + 1), []
        for k in range(len(top)):
            quotient.append(top[k] - sum(quotient[j] * below[k - j] for j in range(k)))
        top = quotient
    ways = factorial(n)
    for size in sizes:
        ways //= factorial(size)
    body = {"readings": readings, "moments": moments}
    case("jonckheere-terpstra", body, "p_rising", Fraction(sum(top), ways), "Gaussian multinomial")

for blocks, places, swaps in [(12, 5, 1), (20, 4, 3)]:
    one = {}
    for order in itertools.permutations(range(places)):
        loss = sum(k * k for k in range(places)) - sum(k * x for k, x in enumerate(order))
        one[loss] = one.get(loss, 0) + 1
    one = [one.get(loss, 0) for loss in range(max(one) + 1)]
    total = [1]
    for _ in range(blocks):
        total = times(total, one)
    readings, moments, labels = [], [], []
    for block in range(blocks):
        row = list(range(1, places + 1))
        if block < swaps:
            row[-1], row[-2] = row[-2], row[-1]
        for moment, reading in enumerate(row, 1):
            readings.append((moment, block, reading))
    readings.sort()
    body = {"readings": [r for _, _, r in readings], "moments": [m for m, _, _ in readings], "blocks": [f"b{b}" for _, b, _ in readings]}
    case("page", body, "p_rising", Fraction(sum(total[: swaps + 1]), factorial(places) ** blocks), "all orders within a block")

for moments, size, events in [(6, 10, [0, 0, 0, 0, 2, 9]), (8, 20, [0, 0, 0, 1, 0, 2, 15, 20])]:
    drawn, score = sum(events), sum(place * count for place, count in enumerate(events))
    ways = {(0, 0): 1}
    for place in range(moments):
        after = {}
        for (used, at), count in ways.items():
            for e in range(min(size, drawn - used) + 1):
                key = (used + e, at + place * e)
                after[key] = after.get(key, 0) + count * comb(size, e)
        ways = after
    tail = sum(count for (used, at), count in ways.items() if used == drawn and at >= score)
    body = {"readings": events, "trials": [size] * moments}
    case("cochran-armitage", body, "p_rising", Fraction(tail, comb(moments * size, drawn)), "products of binomial coefficients")

for moments, events in [(8, [0, 0, 0, 0, 1, 2, 7, 30]), (12, [0] * 9 + [1, 3, 60])]:
    total = [1]
    for _ in range(sum(events)):
        total = times(total, [1] * moments)
    score = sum(place * count for place, count in enumerate(events))
    tail = Fraction(sum(total[score:]), moments ** sum(events))
    case("poisson-trend", {"readings": events}, "p_rising", tail, "powers of 1 + q + ... + q^(k-1)")

for n in [8, 9]:
    case("rank-von-neumann", {"readings": sorted_but(n, 0)}, "p_smooth", Fraction(2, factorial(n)), "two orders of n!")

for half in [6, 8]:
    readings = [1.5 + k for k in range(half)] + [100.0 + k for k in range(half)]
    case("pettitt", {"readings": readings}, "p_rising", Fraction(1, comb(2 * half, half)), "binomial coefficient")

for count, end in [(20, 64), (40, 256)]:
    readings = [end - 1 - k for k in range(count)][::-1]
    short = Fraction(sum(end - reading for reading in readings), end)
    tail = sum((-1) ** k * comb(count, k) * (short - k) ** count for k in range(int(short) + 1)) / factorial(count)
    case("laplace", {"readings": readings, "end": end}, "p_rising", Fraction(tail), "Irwin and Hall's sum, exact rationals")
    statistic = 2 * sum(mp.log(mpf(end) / reading) for reading in readings)
    tail = mp.gammainc(count, 0, statistic / 2, regularized=True)
    case("military-handbook", {"readings": readings, "end": end}, "p_rising", tail, "incomplete gamma function, 60 digits")

def advanced(paths, readings, more):
    """Paths by their number of rises, `more` readings after `readings`, counted in whole numbers."""
    for newest in range(readings + 1, readings + more + 1):
        sums = [0]
        for count in paths:
            sums.append(sums[-1] + count)
        last = len(paths)
        paths = [sums[min(k + 1, last)] - sums[max(k + 1 - newest, 0)] for k in range(last + newest - 1)]
    return paths


def crossing(looks, boundary):
    """How many of the orders, as a share, have a path of S that is at or beyond the boundary at some look."""
    paths, readings, crossed = [1], 1, Fraction(0)
    for look, least in zip(looks, boundary):
        paths, readings = advanced(paths, readings, look - readings), look
        first = len(paths) if least is None else max(0, -(-(least + look * (look - 1) // 2) // 2))
        crossed += Fraction(sum(paths[first:]), factorial(look))
        paths = paths[:first]
    return crossed


def spending_boundary(looks, risk):
    """The lowest boundary that spends no more than Lan and DeMets' function of Pocock's kind, one-sided."""
    variance = lambda n: mpf(n * (n - 1) * (2 * n + 5)) / 18
    boundary, paths, readings, spent = [], [1], 1, Fraction(0)
    for look in looks:
        paths, readings = advanced(paths, readings, look - readings), look
        allowed = risk * mp.log(1 + (mp.e - 1) * variance(look) / variance(looks[-1]))
        pairs, crossed, least = look * (look - 1) // 2, 0, None
        for rises in range(pairs, pairs // 2, -1):
            more = crossed + (paths[rises] if rises < len(paths) else 0)
            tail = spent + Fraction(more, factorial(look))
            if mpf(tail.numerator) / tail.denominator > allowed:
                break
            crossed, least = more, 2 * rises - pairs
        boundary.append(least)
        spent += Fraction(crossed, factorial(look))
        if least is not None:
            paths = paths[: (least + pairs) // 2]
    return boundary


for horizon, first, every, swaps in [(60, 60, 1, 2), (40, 10, 1, 3), (60, 12, 6, 0), (104, 10, 1, 5)]:
    looks = sorted({*range(first, horizon + 1, every), horizon})
    boundary = spending_boundary(looks, mpf(5) / 100)
    readings = sorted_but(horizon, swaps)
    signs = [sum((later > earlier) - (later < earlier) for earlier in readings[:k]) for k, later in enumerate(readings)]
    reaches = [Fraction(sum(signs[:look]), least) for look, least in zip(looks, boundary) if least is not None]
    as_far = [None if least is None else -int(-(max(reaches) * least) // 1) for least in boundary]
    body = {"readings": readings, "horizon": horizon, "first_look": first, "every": every, "spending": "pocock"}
    case("planned-looks", body, "p_rising", crossing(looks, as_far), "whole-number counts of paths, carried from look to look")

print("[\n" + ",\n".join(json.dumps(case) for case in cases) + "\n]")
