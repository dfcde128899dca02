"""The ratings as a table for a spreadsheet, one row per beam."""

from __future__ import annotations

import math

from ifccheck.publish.report import Report
from ifccheck.publish.words import plain
from ifccheck.tables import Cell, ratings_frame

_STARTS_A_FORMULA = tuple("=+-@＝＋－＠")


def ratings_csv(report: Report) -> str:
    """Return the ratings as CSV in the order of the model; units are in the column names.

    Figures are written in full. A figure that is not finite is left empty: the column
    ``..._state`` beside it says why.
    """
    cases = [case.case for case in report.cases]
    frame = ratings_frame(report.model.beams, report.ratings, report.spans, cases)
    frame.columns = frame.columns.map(neutral)
    text: str = frame.map(_cell).to_csv(index=False, lineterminator="\n")
    return text


def _cell(value: Cell) -> Cell:
    if isinstance(value, str):
        return neutral(value)
    return None if isinstance(value, float) and not math.isfinite(value) else value


def neutral(text: str) -> str:
    """Return a text that no spreadsheet takes for a formula.

    >>> neutral("=SUM(A1)"), neutral("B-204")
    ("'=SUM(A1)", 'B-204')
    """
    risky = text.startswith(_STARTS_A_FORMULA) or (text != "" and ord(text[0]) < 32)
    return f"'{plain(text)}" if risky else plain(text)
