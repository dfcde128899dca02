"""Entries that name beams: their selections, and what they state of supports and beams."""

from __future__ import annotations

from typing import TypedDict

from ifccheck.brief import schema
from ifccheck.brief.faults import FaultError
from ifccheck.brief.model import (
    BeamEntry,
    MaterialEntry,
    Selection,
    SupportEntry,
)
from ifccheck.brief.places import Path, shown
from ifccheck.brief.supports import cannot_stand


class Head(TypedDict):
    """What every entry begins with."""

    place: str
    selection: Selection
    optional: bool


def head(path: Path, table: schema.SelectingTable) -> Head:
    """Place and selection of an entry."""
    return Head(
        place=shown(path),
        selection=_selection(path, table),
        optional=table.optional,
    )


def _selection(path: Path, table: schema.SelectingTable) -> Selection:
    if (table.beams is None) == (table.where is None):
        both = "both beams and where" if table.beams is not None else "neither beams nor where"
        raise FaultError(path, f"has {both}: exactly one of them says which beams are meant")
    if table.where is not None:
        if not table.where.strip():
            raise FaultError((*path, "where"), "is empty")
        return Selection(where=table.where)
    for mark in table.beams or ():
        if not mark.strip():
            raise FaultError((*path, "beams"), "holds an empty mark")
    return Selection(beams=tuple(table.beams or ()))


def _states_something(path: Path, table: schema.SelectingTable, keys: tuple[str, ...]) -> None:
    if all(getattr(table, key) is None for key in keys):
        raise FaultError(path, f"states nothing: give at least one of {', '.join(keys)}")


def support_entry(index: int, table: schema.SupportTable) -> SupportEntry:
    """An entry of ``[[supports]]``."""
    path: Path = ("supports", index)
    _states_something(path, table, ("start", "end", "bearing", "ignore"))
    if table.start and table.end and (reason := cannot_stand(table.start, table.end)):
        raise FaultError(path, f"{reason}: one end must be fixed, or neither free")
    for kind, width in zip((table.start, table.end), table.bearing or (0.0, 0.0), strict=True):
        if kind == "free" and width > 0.0:
            raise FaultError((*path, "bearing"), "gives a free end a bearing: write 0 mm for it")
    if any(not mark.strip() for mark in table.ignore or ()):
        raise FaultError((*path, "ignore"), "holds an empty mark")
    return SupportEntry(
        **head(path, table),
        start=table.start,
        end=table.end,
        bearing=table.bearing,
        ignore=None if table.ignore is None else tuple(table.ignore),
    )


def beam_entry(index: int, table: schema.BeamTable) -> BeamEntry:
    """An entry of ``[[beams]]``."""
    path: Path = ("beams", index)
    keys = ("span", "unloaded", "loads_complete", "torsion", "slab_flange", "slab_bars")
    _states_something(path, table, keys)
    if table.slab_bars and table.slab_flange == "none":
        raise FaultError(
            (*path, "slab_bars"),
            "counts only where slab counts as a flange: slab_flange = false says that none does",
        )
    return BeamEntry(
        **head(path, table),
        span=table.span,
        unloaded=table.unloaded,
        loads_complete=table.loads_complete,
        torsion=table.torsion,
        slab_flange=table.slab_flange,
        slab_bars=table.slab_bars,
    )


def material_entry(index: int, table: schema.MaterialTable) -> MaterialEntry:
    """An entry of ``[[materials]]``."""
    path: Path = ("materials", index)
    keys = (*schema.MaterialsTable.model_fields, "density")
    _states_something(path, table, keys)
    return MaterialEntry(
        **head(path, table),
        concrete_strength=table.concrete_strength,
        bar_yield=table.bar_yield,
        stirrup_yield=table.stirrup_yield,
        cover=table.cover,
        density=table.density,
        aggregate_size=table.aggregate_size,
    )
