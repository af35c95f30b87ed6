"""Measures three processes on one workbook and prints their ratios: Risefall annotating it, openpyxl loading it,
adding a sheet and saving it, and a bare streaming read. Usage: annotate.py BOOK RISEFALL READER [RUNS]"""
import os, statistics, subprocess, sys, tempfile, time

book, risefall, reader = sys.argv[1:4]
runs = int(sys.argv[4]) if len(sys.argv) > 4 else 5
OPENPYXL = """
import sys, openpyxl
book = openpyxl.load_workbook(sys.argv[1])
sheet = book.create_sheet("Added")
for row in range(200):
    sheet.append([row, "added"])
book.save(sys.argv[2])
"""


def measure(command, allowed=(0,)):
    """Wall seconds and peak resident megabytes of one process."""
    start = time.perf_counter()
    process = subprocess.Popen(command, stdout=subprocess.DEVNULL)
    _, status, usage = os.wait4(process.pid, 0)
    seconds = time.perf_counter() - start
    code = os.waitstatus_to_exitcode(status)
    if code not in allowed:
        sys.exit(f"{command[0]} ended with {code}")
    return seconds, usage.ru_maxrss / 1024


with tempfile.TemporaryDirectory() as folder:
    annotated, saved = os.path.join(folder, "annotated.xlsx"), os.path.join(folder, "saved.xlsx")
    ours, read = [], []
    for _ in range(runs):
        ours.append(measure([risefall, "annotate", book, "-o", annotated, "-q"], (0, 1)))
        read.append(measure([reader, "--read", book]))
    other = [measure([sys.executable, "-c", OPENPYXL, book, saved])]
    middle = lambda list, place: statistics.median(item[place] for item in list)
    print(f"annotate            {middle(ours, 0):8.2f} s  {middle(ours, 1):7.1f} MB  (median of {runs})")
    print(f"openpyxl            {middle(other, 0):8.2f} s  {middle(other, 1):7.1f} MB")
    print(f"bare streaming read {middle(read, 0):8.2f} s  {middle(read, 1):7.1f} MB  (median of {runs})")
    print(f"annotate is {middle(other, 0) / middle(ours, 0):.1f} times faster than openpyxl, goal at least 30")
    print(f"annotate takes {middle(ours, 0) / middle(read, 0):.2f} times the bare streaming read, goal at most 1.5")
    print(f"annotate peaks at {middle(ours, 1):.0f} MB, goal at most 60")
