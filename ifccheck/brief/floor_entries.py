"""Entries of ``[[floors]]``: what slabs bring to the beams under them; which slabs are meant."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from ifccheck.beam import Case
from ifccheck.brief.faults import FaultError
from ifccheck.brief.mark_ranges import expanded
from ifccheck.brief.model import Brief, FloorEntry, Selection
from ifccheck.brief.places import Path, did_you_mean, shown
from ifccheck.errors import BriefError
from ifccheck.units import clipped, parse_quantity

if TYPE_CHECKING:
    from ifccheck.brief import schema
    from ifccheck.brief.selecting import Found

AXES = {"X": 0.0, "Y": math.pi / 2.0}


def read_direction(value: object) -> tuple[float, float]:
    """Return the unit vector in plan of a direction: X, Y, or an angle from X to the left."""
    angle = AXES[value] if isinstance(value, str) and value in AXES else None
    if angle is None:
        if not isinstance(value, str):
            raise ValueError('must be "X", "Y" or an angle from X to the left, like "30 deg"')
        angle = parse_quantity(value, "angle")
    return math.cos(angle), math.sin(angle)


def floor_entry(index: int, table: schema.FloorTable, cases: Sequence[Case]) -> FloorEntry:
    """An entry of ``[[floors]]``; raises FaultError at the key that is wrong."""
    path: Path = ("floors", index)
    selection = _selection(path, table)
    _check_case(path, table, cases)
    if table.area is None and not table.self_weight:
        raise FaultError(path, "states nothing: give area, or self_weight = true, or both")
    if table.area is not None and table.area.value <= 0.0:
        raise FaultError(
            (*path, "area"),
            f"'{table.area.text}' does not act downward: give what lifts beams under [[loads]]",
        )
    if table.direction is not None and table.span != "one way":
        raise FaultError((*path, "direction"), 'belongs to span = "one way"')
    return FloorEntry(
        place=shown(path),
        selection=selection,
        optional=table.optional,
        case=table.case,
        area=table.area.value if table.area else 0.0,
        area_text=table.area.text if table.area else "",
        self_weight=table.self_weight,
        span=table.span or "by shape",
        direction=table.direction,
        walls=table.walls,
    )


def _selection(path: Path, table: schema.FloorTable) -> Selection | None:
    """Which slabs are meant; None for all."""
    if table.slabs is not None and table.where is not None:
        raise FaultError(path, "has both slabs and where: one of them says which slabs are meant")
    for key, given in (("slabs", table.slabs or ()), ("where", (table.where or " .",))):
        if any(not text.strip() for text in given):
            raise FaultError((*path, key), "holds an empty mark" if key == "slabs" else "is empty")
    if table.slabs is None and table.where is None:
        return None
    return Selection(None if table.slabs is None else tuple(table.slabs), table.where)


def _check_case(path: Path, table: schema.FloorTable, cases: Sequence[Case]) -> None:
    known = {case.name: case for case in cases}
    if table.case not in known:
        raise FaultError(
            (*path, "case"),
            f"unknown case '{table.case}': {did_you_mean(table.case, list(known))}",
        )
    if table.self_weight and known[table.case].nature != "permanent":
        raise FaultError(
            (*path, "self_weight"),
            f"is permanent, and cases.{table.case} is {known[table.case].nature}: give it in an"
            " entry of its own, in a permanent case",
        )


def floor_parts(entry: FloorEntry) -> Iterator[tuple[str, Selection]]:
    """Each query or single mark of an entry with its place: ``floors[1].slabs[2]``."""
    selection = entry.selection
    if selection is None:
        yield entry.place, Selection(beams=("*",))
        return
    if selection.where is not None:
        yield f"{entry.place}.where", selection
    for index, mark in enumerate(selection.beams or (), 1):
        place, marks = f"{entry.place}.slabs[{index}]", expanded(mark)
        for one in marks:
            yield place if len(marks) == 1 else f"{place} {one}", Selection(beams=(one,))


def check_floors_reached(brief: Brief, found: Sequence[Found]) -> None:
    """Raise BriefError for a mark or query of ``[[floors]]`` that reaches no slab in any model."""
    for entry in brief.floors:
        for place, part in floor_parts(entry):
            if entry.optional or any(of_model[place] for of_model in found):
                continue
            if entry.selection is None:
                raise BriefError(
                    f"{brief.at(entry.place)}: no model has a slab (IfcSlab): leave it out, or"
                    " write optional = true"
                )
            key = "where" if part.where is not None else "slabs"
            place = brief.at(f"{entry.place}.{key}", brief.lines.get(entry.place))
            raise BriefError(
                f"{place}: {clipped(part.said, 120)} reaches no slab: correct it, or write"
                " optional = true"
            )


def check_floors_carried(brief: Brief, carried: Sequence[frozenset[str]]) -> None:
    """Raise BriefError for an entry of ``[[floors]]`` of which no model lays anything on a beam."""
    for entry in brief.floors:
        if not entry.optional and not any(entry.place in of_model for of_model in carried):
            raise BriefError(
                f"{brief.at(entry.place)}: none of its slabs lies on a beam: correct which slabs"
                " are meant, give the loads under [[loads]], or write optional = true"
            )
