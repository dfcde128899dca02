"""The beam schedule: a CSV or XLSX table of the engineer's, one row per mark and zone."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from ifccheck.beam import BarGroup
from ifccheck.brief.model import Position, ScheduleRow, Selection
from ifccheck.brief.places import did_you_mean
from ifccheck.brief.quantities import (
    COVER,
    LEAST_LENGTH,
    YIELD,
    Range,
    read_position,
    read_within,
)
from ifccheck.brief.row_cells import Cells, marks_in, named, read_cell
from ifccheck.brief.sheets import read_cells
from ifccheck.errors import BriefError
from ifccheck.notation import parse_bars, parse_stirrups

COLUMNS = (
    "mark", "from", "to", "top", "bottom", "side", "stirrups", "cover", "bar_yield",
    "stirrup_yield",
)  # fmt: skip
STATING = COLUMNS[3:]
"""Columns of which a row must fill at least one."""


def read_schedule(path: Path) -> tuple[ScheduleRow, ...]:
    """Read a beam schedule; raise BriefError naming file, row and column.

    Columns: mark (marks apart by commas, ``*`` as wildcard, ``B-201..B-204`` as range), from and
    to (places along the beam, the whole of it where empty), top, bottom, side and stirrups in
    bar notation, cover, bar_yield and stirrup_yield with their units. An empty cell says nothing;
    ``none`` says that there is none.
    """
    table = read_cells(path)
    if not table:
        raise BriefError(f"{path.name}: is empty: the first row must name the columns")
    columns = _columns(path.name, table[0][1])
    return tuple(
        _row(f"{path.name} row {number}", named(path.name, number, columns, cells))
        for number, cells in table[1:]
    )


def _columns(file_name: str, header: Sequence[str]) -> list[str]:
    names = [cell.strip().lower().replace(" ", "_") for cell in header]
    for position, name in enumerate(names):
        if name not in COLUMNS:
            said = f"unknown column '{header[position].strip()}'" if name else "column without name"
            raise BriefError(f"{file_name} row 1: {said}: {did_you_mean(name, list(COLUMNS))}")
        if name in names[:position]:
            raise BriefError(f"{file_name} row 1: column '{name}' is given twice")
    if "mark" not in names:
        raise BriefError(f"{file_name} row 1: there is no column 'mark'")
    return names


def _row(place: str, cells: Cells) -> ScheduleRow:
    if not any(cells.get(name) for name in STATING):
        raise BriefError(f"{place}: states nothing: fill at least one of {', '.join(STATING)}")
    start, end = (read_cell(place, cells, name, read_position) for name in ("from", "to"))
    _check_order(place, start, end)
    stirrups = read_cell(place, cells, "stirrups", parse_stirrups)
    return ScheduleRow(
        place=place,
        selection=Selection(beams=marks_in(place, cells, "mark")),
        start=start,
        end=end,
        top=_bars(place, cells, "top"),
        bottom=_bars(place, cells, "bottom"),
        side=_bars(place, cells, "side"),
        stirrups=stirrups,
        no_stirrups=bool(cells.get("stirrups")) and stirrups is None,
        cover=_within(place, cells, "cover", COVER),
        bar_yield=_within(place, cells, "bar_yield", YIELD),
        stirrup_yield=_within(place, cells, "stirrup_yield", YIELD),
    )


def _check_order(place: str, start: Position | None, end: Position | None) -> None:
    if start and end and not start.may_precede(end, LEAST_LENGTH):
        raise BriefError(f"{place} to: '{end.text}' is not beyond from = '{start.text}'")


def _bars(place: str, cells: Cells, column: str) -> tuple[BarGroup, ...] | None:
    return read_cell(place, cells, column, parse_bars)


def _within(place: str, cells: Cells, column: str, limits: Range) -> float | None:
    return read_cell(place, cells, column, lambda text: read_within(text, limits))
