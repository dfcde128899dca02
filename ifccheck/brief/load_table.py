"""A table of loads: a CSV or XLSX of the engineer's, one row per load, as in ``[[loads]]``."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any, NamedTuple

from ifccheck.beam import Case, Face
from ifccheck.brief.faults import FaultError
from ifccheck.brief.load_entries import load_entry
from ifccheck.brief.model import ROW_COLUMNS, LoadEntry, LoadTableFile
from ifccheck.brief.places import did_you_mean
from ifccheck.brief.quantities import Written, read_position, read_written
from ifccheck.brief.row_cells import Cells, marks_in, named, read_cell
from ifccheck.brief.schema import LoadTable
from ifccheck.brief.sheets import read_cells
from ifccheck.errors import BriefError
from ifccheck.units import UNITS, Kind, clipped

MEASURED = ("value", "value_end", "tributary_width", "from", "to", "at", "eccentricity")
"""Columns whose heading may hold a unit"""
PLAIN = ("beam", "case", "kind", "at_from", "face", "projected", "upward", "optional")
LOAD_COLUMNS = (*PLAIN, *MEASURED)
NEEDED = ("beam", "case", "kind", "value")
KINDS: Mapping[str, Kind] = {
    "line": "line_load",
    "trapezoid": "line_load",
    "point": "force",
    "moment": "moment",
    "area": "area_load",
}
_WORDS = {"yes": True, "true": True, "no": False, "false": False, "": False}
_KNOWN_UNITS = {unit for units in UNITS.values() for unit in units}
_HEADING = re.compile(r"(?P<name>[^\[(]*)(?:[\[(](?P<unit>[^\])]*)[\])]\s*)?")
_BARE = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")


class _Column(NamedTuple):
    name: str
    unit: str


def read_load_table(table: LoadTableFile, cases: Sequence[Case]) -> tuple[LoadEntry, ...]:
    """Read a table of loads; raise BriefError naming file, row and column.

    Columns: beam (marks apart by commas, ``*`` as wildcard, ``B-201..B-204`` as range), case, kind
    (line, trapezoid, point, moment, area), value, value_end of a trapezoid, tributary_width of an
    area, from and to or at, and what else an entry of ``[[loads]]`` may say. A unit stands in the
    cell, or in the heading: ``value [kN/m]``.
    """
    rows = read_cells(table.path, "loads")
    if len(rows) < 2:
        raise BriefError(
            f"{table.name}: holds no load: the first row names the columns, each other is a load"
        )
    columns = _columns(table.name, rows[0][1])
    names = [column.name for column in columns]
    entries, faults = [], []
    for number, row in rows[1:]:
        try:
            cells = _cells(columns, named(table.name, number, names, row))
            entries.append(_entry(f"{table.name} row {number}", cells, cases))
        except BriefError as fault:
            faults.append(str(fault))
    if faults:
        more = len(faults) - 1
        raise BriefError(faults[0] + (f" (and {more} more wrong {_rows(more)})" if more else ""))
    return tuple(entries)


def _rows(count: int) -> str:
    return "row" if count == 1 else "rows"


def _columns(file_name: str, header: Sequence[str]) -> list[_Column]:
    columns = [_column(f"{file_name} row 1", cell) for cell in header]
    names = [column.name for column in columns]
    for name in names:
        if names.count(name) > 1:
            raise BriefError(f"{file_name} row 1: column '{name}' is given twice")
    for name in NEEDED:
        if name not in names:
            raise BriefError(f"{file_name} row 1: there is no column '{name}'")
    return columns


def _column(place: str, heading: str) -> _Column:
    found = _HEADING.fullmatch(heading.strip())
    name = (found["name"] if found else heading).strip().lower().replace(" ", "_")
    if found is None or name not in LOAD_COLUMNS:
        said = f"unknown column {clipped(heading.strip())}" if name else "column without name"
        raise BriefError(f"{place}: {said}: {did_you_mean(name, list(LOAD_COLUMNS))}")
    if found["unit"] is None:
        return _Column(name, "")
    unit = found["unit"].strip()
    if name not in MEASURED:
        raise BriefError(f"{place}: column '{name}' takes no unit: leave {clipped(unit)} out")
    if unit not in _KNOWN_UNITS:
        raise BriefError(
            f"{place}: column '{name}' has the unknown unit {clipped(unit)}:"
            f" {did_you_mean(unit, sorted(_KNOWN_UNITS))}"
        )
    return _Column(name, unit)


def _cells(columns: Sequence[_Column], cells: Cells) -> Cells:
    """The cells with the unit of their heading behind every number that has none."""
    units = {column.name: column.unit for column in columns if column.unit}
    return {
        name: f"{text} {units[name]}" if name in units and _BARE.fullmatch(text) else text
        for name, text in cells.items()
    }


def _entry(place: str, cells: Cells, cases: Sequence[Case]) -> LoadEntry:
    """The row as the entry of ``[[loads]]`` that says the same, held to the same rules."""
    keys: dict[str, Any] = {
        "beams": list(marks_in(place, cells, "beam")),
        "case": _filled(place, cells, "case"),
        **_amount(place, cells),
        **{key: _length(place, cells, key) for key in ("tributary_width", "eccentricity")},
        **{key: read_cell(place, cells, key, read_position) for key in ("at", "from", "to")},
        **{key: _yes(place, cells, key) for key in ("projected", "upward", "optional")},
        "at_from": cells.get("at_from") or None,
        "face": _face(place, cells),
    }
    try:
        entry = load_entry(0, LoadTable.model_construct(**keys), cases)
    except FaultError as fault:
        key = str(fault.path[2]) if len(fault.path) > 2 else ""
        where = f"{place} {ROW_COLUMNS.get(key, key)}".rstrip()
        raise BriefError(f"{where}: {fault.text}") from None
    return replace(entry, place=place, in_table=True)


def _amount(place: str, cells: Cells) -> dict[str, Written | tuple[Written, Written]]:
    """The one key of ``[[loads]]`` that gives the load, with its quantity."""
    word = _filled(place, cells, "kind").lower()
    if word not in KINDS:
        raise BriefError(
            f"{place} kind: {clipped(word)} is not known: {did_you_mean(word, list(KINDS))}"
        )
    kind = KINDS[word]
    first = _quantity(place, cells, "value", kind)
    if first is None:
        raise BriefError(f"{place} value: is empty: give the load, with its unit")
    last = _quantity(place, cells, "value_end", kind)
    if last is None and word == "trapezoid":
        raise BriefError(f"{place} value_end: is empty: a trapezoid has a value at either end")
    if last is not None and word != "trapezoid":
        raise BriefError(f"{place} value_end: belongs to a trapezoid, not to a {word} load")
    if kind == "line_load":
        return {"line": (first, last or first)}
    return {word: first}


def _filled(place: str, cells: Cells, column: str) -> str:
    text = cells.get(column, "")
    if not text:
        raise BriefError(f"{place} {column}: is empty")
    return text


def _quantity(place: str, cells: Cells, column: str, kind: Kind) -> Written | None:
    return read_cell(place, cells, column, lambda text: read_written(text, kind))


def _length(place: str, cells: Cells, column: str) -> Written | None:
    return _quantity(place, cells, column, "length")


def _face(place: str, cells: Cells) -> Face | None:
    word = cells.get("face", "").lower()
    if word in ("top", "bottom"):
        return "top" if word == "top" else "bottom"
    if word:
        raise BriefError(f"{place} face: {clipped(word)} is not known: use top or bottom")
    return None


def _yes(place: str, cells: Cells, column: str) -> bool:
    word = cells.get(column, "").lower()
    if word not in _WORDS:
        raise BriefError(f"{place} {column}: {clipped(word)} is not known: use yes or no")
    return _WORDS[word]
