"""The published check values under tests/reference, for tests in the office."""

import csv
import math
import pathlib

FOLDER = pathlib.Path(__file__).resolve().parents[1] / "reference"


def read_csv(name):
    """Rows with the headings first; numbers as numbers."""
    def cell(text):
        try:
            return float(text)
        except ValueError:
            return text
    with open(FOLDER / f"{name}.csv", newline="") as file:
        rows = list(csv.reader(file))
    return [rows[0]] + [[cell(text) for text in row] for row in rows[1:]]


def figures(name):
    """ "published | estimates | x1" -> "15.0618722713733", as printed."""
    found = {}
    for line in (FOLDER / f"{name}.txt").read_text().splitlines():
        if line and not line.startswith("#"):
            key, value = line.rsplit(" | ", 1)
            found[key] = value
    return found


def matching_digits(value, certified):
    """Log relative error, capped at 16; of the absolute error where `certified` is 0."""
    certified = float(certified)
    error = abs(value - certified) / (abs(certified) or 1)
    return 16.0 if error == 0 else min(16.0, -math.log10(error))


def column_of(answer, heading):
    """First column of an answer -> its value under `heading`."""
    at = answer[0].index(heading)
    return {row[0]: row[at] for row in answer[1:] if len(row) > at and row[at] != ""}
