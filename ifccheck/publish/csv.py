"""The ratings as a table for a spreadsheet, one row per beam."""

from __future__ import annotations

import csv
import io
import math
from functools import lru_cache

from ifccheck.publish.report import Report
from ifccheck.publish.words import plain
from ifccheck.tables import Cell, ratings_rows

_STARTS_A_FORMULA = tuple("=+-@＝＋－＠")


def ratings_csv(report: Report) -> str:
    """Return the ratings as CSV in the order of the model; units are in the column names.

    Figures are written in full. A figure that is not finite is left empty: the column
    ``..._state`` beside it says why.
    """
    cases = [case.case for case in report.cases]
    rows = ratings_rows(report.model.beams, report.ratings, report.spans, cases)
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow([neutral(name) for name in (rows[0] if rows else ())])
    writer.writerows([_cell(value) for value in row.values()] for row in rows)
    return text.getvalue()


def _cell(value: Cell) -> Cell:
    if isinstance(value, str):
        return neutral(value)
    return None if isinstance(value, float) and not math.isfinite(value) else value


@lru_cache(maxsize=8192)
def neutral(text: str) -> str:
    """Return a text that no spreadsheet takes for a formula.

    >>> neutral("=SUM(A1)"), neutral("B-204")
    ("'=SUM(A1)", 'B-204')
    """
    risky = text.startswith(_STARTS_A_FORMULA) or (text != "" and ord(text[0]) < 32)
    return f"'{plain(text)}" if risky else plain(text)
