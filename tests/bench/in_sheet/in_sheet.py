"""From cells to the ESTIMATES block, against reading the same cells: time and memory, as ratios.

    python3 in_sheet.py [rows [predictors [repeats]]]       (as ctest's environment names the packages; see README)

One office, one sheet filled from a seeded generator. In turn, `repeats` times: read every cell and keep nothing;
answer UNPLY.ESTIMATES after an edit of one cell (a new analysis); answer it again with nothing changed (a kept one).
Prints one CSV line: the ratio of the medians, and the peak growth of the office's memory over the plain doubles.
"""

import os
import pathlib
import statistics
import sys
import time

sys.path.insert(0, str(pathlib.Path(__file__).resolve().parents[2] / "office"))
BENCH_PACKAGE = pathlib.Path(os.environ["UNPLY_BENCH_PACKAGE"]).resolve()
os.environ["UNPLY_TYPES"] = os.environ["UNPLY_BENCH_TYPES"]

from office import PACKAGE, Office  # noqa: E402

SEED = 20260103


def main(rows=1048576, predictors=10, repeats=5):
    last = chr(ord("A") + predictors)
    with Office((PACKAGE, BENCH_PACKAGE)) as office:
        document = office.new_document()
        document.component.UndoManager.lock()
        data = document.range(f"A1:{last}{rows}")
        office.service("UNPLYBENCH").fill(data, SEED)
        ranges = f"$Sheet1.A1:A{rows};$Sheet1.B1:{last}{rows}"
        answers = document.add_sheet("Answers")
        place = answers.getCellRangeByPosition(0, 0, 9, predictors + 8)
        edited = document.range("B2").getCellByPosition(0, 0)

        def timed(formula):
            begin = time.perf_counter()
            place.setArrayFormula("=" + formula)
            cells = place.getDataArray()
            seconds = time.perf_counter() - begin
            place.setArrayFormula("")
            return seconds, cells

        plain = (rows - 1) * (predictors + 1) * 8
        reading, new, kept, peaks = [], [], [], []
        for repeat in range(repeats + 1):
            read, _ = timed(f"UNPLYBENCH.READ({ranges})")
            edited.setValue(10 + 0.001 * repeat)
            before, _ = office.memory(reset_peak=True)
            fresh, cells = timed(f"UNPLY.ESTIMATES({ranges})")
            peaks.append(office.memory()[1] - before)
            again, _ = timed(f"UNPLY.ESTIMATES({ranges})")
            if len([row for row in cells if row[0] in ("Intercept", "x1")]) != 2:
                raise RuntimeError(f"not an answer: {cells[0][0]}")
            if repeat:  # the first round warms up
                reading.append(read)
                new.append(fresh)
                kept.append(again)
            if repeat == 0:
                baseline = before  # before any table was kept
                growth = [before - baseline + peaks[0]]
            else:
                growth.append(before - baseline + peaks[-1])
        median = statistics.median
        print("rows,predictors,seed,new_over_reading,kept_over_reading,peak_growth_over_doubles")
        print(f"{rows},{predictors},{SEED},{median(new) / median(reading):.3f},{median(kept) / median(reading):.3f},"
              f"{max(growth) / plain:.2f}", flush=True)
        print(f"reading {median(reading):.3f} s, {1e9 * median(reading) / (rows * (predictors + 1)):.0f} ns a cell; "
              f"targets: new_over_reading <= 1.25, peak_growth_over_doubles <= 2.5", file=sys.stderr)


if __name__ == "__main__":
    main(*(int(argument) for argument in sys.argv[1:]))
