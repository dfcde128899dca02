"""The ratings as a table for a spreadsheet, one row per beam."""

from __future__ import annotations

import csv
import io
from math import isfinite

from ifccheck.publish.report import Report
from ifccheck.publish.words import plain
from ifccheck.tables import Cell, ratings_columns

_STARTS_A_FORMULA = tuple("=+-@＝＋－＠")


def ratings_csv(report: Report) -> str:
    """Return the ratings as CSV in the order of the model; units are in the column names.

    Figures are written in full. A figure that is not finite is left empty: the column
    ``..._state`` beside it says why.
    """
    cases = [case.case for case in report.cases]
    columns = ratings_columns(report.model.beams, report.ratings, report.spans, cases)
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(map(neutral, columns))
    writer.writerows(zip(*map(_cells, columns.values()), strict=True))
    return text.getvalue()


def _cells(column: list[Cell]) -> list[Cell]:
    """A column as it is written; what is the same is looked at once."""
    distinct = set(column)
    other: dict[Cell, Cell] = {
        each: told
        for each in distinct
        if isinstance(each, str) and (told := neutral(each)) is not each
    }
    other |= {each: None for each in distinct if isinstance(each, float) and not isfinite(each)}
    return [other.get(value, value) for value in column] if other else column


def neutral(text: str) -> str:
    """Return a text that no spreadsheet takes for a formula.

    >>> neutral("=SUM(A1)"), neutral("B-204")
    ("'=SUM(A1)", 'B-204')
    """
    risky = text.startswith(_STARTS_A_FORMULA) or (text != "" and ord(text[0]) < 32)
    return f"'{plain(text)}" if risky else plain(text)
