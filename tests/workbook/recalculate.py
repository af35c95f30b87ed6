#!/usr/bin/python3
"""Recalculates annotated workbooks hard in a headless LibreOffice and compares every formula cell of the sheets that
Risefall made with the value stored beside it (relative 1e-9).

Usage: recalculate.py TOOLS BOOK ...    TOOLS is the folder of the shared tools. Needs python3-uno.
Prints each disagreement, then `N cells in M workbooks, K disagree, L not loaded`; exit code 1 if K or L is not 0."""
import os, re, sys

sys.path.insert(0, sys.argv[1])
from lo_common import Office, pv
from lo_recalc import CFG, snap


def agree(stored, now):
    if isinstance(stored, (int, float)) and isinstance(now, (int, float)):
        return abs(stored - now) <= 1e-9 * max(abs(stored), abs(now)) or stored == now
    return stored == now


def recalculated(office, path):
    """All cells by sheet as stored and after a hard recalculation, or None if the workbook does not load."""
    document = office.open(path, pv("ReadOnly", True))
    if document is None:
        return None
    sheets = list(document.Sheets.ElementNames)
    before = snap(document, sheets)
    document.calculateAll()
    helper = office.ctx.ServiceManager.createInstanceWithContext("com.sun.star.frame.DispatchHelper", office.ctx)
    helper.executeDispatch(document.CurrentController.Frame, ".uno:CalculateHard", "", 0, ())
    after = snap(document, sheets)
    document.close(True)
    return before, after


def differing(before, after, sheets):
    for sheet in sheets:
        for cell, (formula, now) in after[sheet].items():
            stored = before[sheet].get(cell, (None, None))[1]
            if formula and not agree(stored, now):
                yield sheet, cell, formula, stored, now


def user_values_differ(before, after, ours):
    """Whether the office program has other values in the user's cells than the file: formulas that change, such as
    RAND(), formulas that it does not know, and pivot tables that it fills anew. Then nothing can be compared."""
    theirs = [sheet for sheet in after if sheet not in ours]
    if next(differing(before, after, theirs), None):
        return True
    for sheet in ours:
        for formula, stored in before[sheet].values():
            plain = re.fullmatch(r"=\$?('?)(.+)\1\.([A-Z]+[0-9]+)", formula or "")
            if plain and plain[2].replace("''", "'") in theirs:
                known = after[plain[2].replace("''", "'")].get(plain[3], (None, 0.0))[1]
                if not agree(stored, known):
                    return True
    return False


cells = books = disagree = restless = 0
absent = []
office = Office(CFG)
for path in sys.argv[2:]:
    name = os.path.basename(path)
    try:
        result = recalculated(office, path)
    except Exception as error:
        result = None
        office.close()
        office = Office(CFG)
    if result is None:
        absent.append(name)
        print("not loaded", name)
        continue
    books += 1
    before, after = result
    ours = [sheet for sheet in after if sheet.startswith("Trend ")]
    if user_values_differ(before, after, ours):
        restless += 1
        continue
    cells += sum(1 for sheet in ours for formula, _ in after[sheet].values() if formula)
    for difference in differing(before, after, ours):
        disagree += 1
        print(name, *difference)
office.close()
print(f"{cells} cells in {books - restless} workbooks, {disagree} disagree; "
      f"{restless} workbooks whose own values change, {len(absent)} not loaded")
sys.exit(1 if disagree else 0)
