"""The ratings as a table for a spreadsheet, one row per beam."""

from __future__ import annotations

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
    rows = zip(*map(_spelled, columns.values()), strict=True)
    lines = [",".join(map(_quoted, columns)), *map(",".join, rows), ""]
    return "\n".join(lines)


class _Cells(dict[Cell, str]):
    """The cells of a column as they are written: what many beams share is spelled once.

    Zeros are not kept, for 0.0 and -0.0 are equal.
    """

    def __missing__(self, value: Cell) -> str:
        text = _quoted(value) if isinstance(value, str) else _figure(value)
        if value != 0.0:
            self[value] = text
        return text


def _spelled(column: list[Cell]) -> list[str]:
    return list(map(_Cells().__getitem__, column))


def _figure(value: float | None) -> str:
    return "" if value is None or not isfinite(value) else repr(value)


def _quoted(text: str) -> str:
    """A text as a cell: in quotation marks where it holds what ends a cell."""
    told = neutral(text)
    return '"{}"'.format(told.replace('"', '""')) if '"' in told or "," in told else told


def neutral(text: str) -> str:
    """Return a text that no spreadsheet takes for a formula.

    >>> neutral("=SUM(A1)"), neutral("B-204")
    ("'=SUM(A1)", 'B-204')
    """
    risky = text.startswith(_STARTS_A_FORMULA) or (text != "" and ord(text[0]) < 32)
    return f"'{plain(text)}" if risky else plain(text)
