"""Times SciPy on the same readings as the Kendall benchmark. Usage: kendall.py FOLDER, which holds readings as raw doubles.
Prints one line a case: its name, the seconds, the value to compare."""
import pathlib, sys, time
import numpy
from scipy import stats

folder = pathlib.Path(sys.argv[1])


def timed(name, runs, compute):
    values = numpy.fromfile(folder / name)
    moments = numpy.arange(1.0, len(values) + 1)
    seconds = []
    for _ in range(runs):
        start = time.perf_counter()
        answer = compute(moments, values)
        seconds.append(time.perf_counter() - start)
    print(name, sorted(seconds)[len(seconds) // 2], answer, flush=True)


timed("s", 3, lambda t, x: stats.kendalltau(t, x, method="asymptotic").statistic)
timed("exact", 3, lambda t, x: stats.kendalltau(t, x, method="exact").pvalue)
timed("slope", 1, lambda t, x: stats.theilslopes(x, t).slope)
