"""Rows of the engineer's tables: their cells by column, and what each of them says."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from typing import TypeVar

from ifccheck.brief.mark_ranges import expanded
from ifccheck.errors import BriefError
from ifccheck.notation import NotationError
from ifccheck.units import QuantityError

Parsed = TypeVar("Parsed")
Cells = Mapping[str, str]


def named(file_name: str, number: int, columns: Sequence[str], cells: Sequence[str]) -> Cells:
    """The cells of a row by the column that they stand in."""
    if any(cell.strip() for cell in cells[len(columns) :]):
        raise BriefError(
            f"{file_name} row {number}: has more cells than there are columns: a text that holds"
            " the separator must stand in quotes"
        )
    return {name: cell.strip() for name, cell in zip(columns, cells, strict=False)}


def marks_in(place: str, cells: Cells, column: str) -> tuple[str, ...]:
    """The marks that a cell names, apart by commas or lines."""
    marks = tuple(mark.strip() for mark in re.split(r"[,\n]", cells.get(column, "")))
    if not all(marks):
        raise BriefError(f"{place} {column}: is empty: name the beam that the row is for")
    for mark in marks:
        try:
            expanded(mark)
        except ValueError as error:
            raise BriefError(f"{place} {column}: {error}") from None
    return marks


def read_cell(
    place: str, cells: Cells, column: str, parse: Callable[[str], Parsed]
) -> Parsed | None:
    """What a cell says; None where it is empty."""
    text = cells.get(column)
    if not text:
        return None
    try:
        return parse(text)
    except (NotationError, QuantityError) as error:
        raise BriefError(f"{place} {column}: {error}") from None
