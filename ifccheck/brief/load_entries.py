"""Entries of ``[[loads]]``: one kind of load each, with the places that it needs."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from ifccheck.beam import Case, LoadKind
from ifccheck.brief import schema
from ifccheck.brief.entries import head
from ifccheck.brief.faults import FaultError
from ifccheck.brief.model import LoadEntry
from ifccheck.brief.places import Path, did_you_mean
from ifccheck.brief.quantities import LEAST_LENGTH, Written

KINDS = ("line", "point", "moment", "area")


class _Amount(NamedTuple):
    kind: LoadKind
    values: tuple[float, float]
    text: str


def load_entry(index: int, table: schema.LoadTable, cases: Sequence[Case]) -> LoadEntry:
    """An entry of ``[[loads]]``; raises FaultError at the key that is wrong."""
    path: Path = ("loads", index)
    beginning = head(path, table)
    _check_case(path, table, cases)
    amount = _amount(path, table)
    _check_places(path, table, amount.kind)
    _check_upward(path, table, amount)
    return LoadEntry(
        **beginning,
        case=table.case,
        kind=amount.kind,
        values=amount.values,
        start=table.start if amount.kind == "line" else table.at,
        end=table.end if amount.kind == "line" else table.at,
        anchor=table.at_from,
        face=table.face or "top",
        projected=table.projected,
        eccentricity=table.eccentricity.value if table.eccentricity else 0.0,
        text=_text(table, amount),
        upward=table.upward,
    )


def _check_case(path: Path, table: schema.LoadTable, cases: Sequence[Case]) -> None:
    known = [case.name for case in cases]
    if table.case not in known:
        raise FaultError(
            (*path, "case"), f"unknown case '{table.case}': {did_you_mean(table.case, known)}"
        )


def _amount(path: Path, table: schema.LoadTable) -> _Amount:
    given = [kind for kind in KINDS if getattr(table, kind) is not None]
    if len(given) != 1:
        said = " and ".join(given) if given else "none"
        raise FaultError(path, f"needs exactly one of {', '.join(KINDS)}, and has {said}")
    if table.tributary_width is not None and table.area is None:
        raise FaultError(
            (*path, "tributary_width"), "belongs to an area load: give area, not " + given[0]
        )
    if table.line is not None:
        return _line(path, *table.line)
    if table.area is not None:
        return _area(path, table.area, table.tributary_width)
    written = table.point if table.point is not None else table.moment
    assert written is not None  # one of the four is given
    kind: LoadKind = "point" if table.point is not None else "moment"
    _check_not_zero((*path, kind), written)
    return _Amount(kind, (written.value, written.value), written.text)


def _check_upward(path: Path, table: schema.LoadTable, amount: _Amount) -> None:
    if not table.upward:
        return
    if amount.kind == "moment":
        raise FaultError((*path, "upward"), "a moment acts neither up nor down: leave it out")
    if min(amount.values) >= 0.0:
        raise FaultError(
            (*path, "upward"),
            f"'{amount.text}' acts downward: write a load that acts upward with a minus sign",
        )


def _check_not_zero(path: Path, *written: Written) -> None:
    if all(one.value == 0.0 for one in written):
        raise FaultError(
            path,
            "is zero: leave the load out; a beam that carries nothing but itself is stated by"
            " unloaded = true under [[beams]]",
        )


def _line(path: Path, first: Written, last: Written) -> _Amount:
    _check_not_zero((*path, "line"), first, last)
    text = first.text if first is last else f"{first.text} to {last.text}"
    return _Amount("line", (first.value, last.value), text)


def _area(path: Path, area: Written, width: Written | None) -> _Amount:
    if width is None:
        raise FaultError(
            path, 'has area but no tributary_width: give the width carried, like "2.4 m"'
        )
    if width.value <= 0.0:
        raise FaultError((*path, "tributary_width"), f"'{width.text}' is not a width above zero")
    _check_not_zero((*path, "area"), area)
    intensity = area.value * width.value
    return _Amount("line", (intensity, intensity), f"{area.text} over a width of {width.text}")


def _check_places(path: Path, table: schema.LoadTable, kind: LoadKind) -> None:
    if kind == "line":
        _check_line_places(path, table)
        return
    if table.at is None:
        raise FaultError(path, f'has {kind} but no at: give its place, like "2.1 m" or "35 %"')
    for key, given in (("from", table.start), ("to", table.end)):
        if given is not None:
            raise FaultError((*path, key), f"belongs to a line load: a {kind} stands at one place")
    if table.projected:
        raise FaultError((*path, "projected"), f"belongs to a line load, not to a {kind}")
    if kind == "moment" and table.face is not None:
        raise FaultError((*path, "face"), "a moment acts on no face: leave it out")


def _check_line_places(path: Path, table: schema.LoadTable) -> None:
    if table.at is not None:
        raise FaultError((*path, "at"), "belongs to a point load or moment: a line runs from .. to")
    first, last = table.start, table.end
    if table.at_from is not None and first is None and last is None:
        raise FaultError((*path, "at_from"), "anchors no place: give from and to, or leave it out")
    if (
        table.line is not None
        and table.line[0] != table.line[1]
        and (first is None) != (last is None)
    ):
        raise FaultError(path, "has a load that varies: give both from and to, or neither")
    if first is not None and last is not None and not first.may_precede(last, LEAST_LENGTH):
        text = f"'{last.text}' is not beyond from = '{first.text}'"
        raise FaultError((*path, "to"), text)


def _text(table: schema.LoadTable, amount: _Amount) -> str:
    """What the entry says, for people."""
    text = amount.text
    if table.at is not None:
        text += f" at {table.at.text}"
    if table.start is not None:
        text += f" from {table.start.text}"
    if table.end is not None:
        text += f" to {table.end.text}"
    if table.at_from is not None:
        text += f", measured from {table.at_from}"
    if table.face == "bottom":
        text += ", hung from the bottom face"
    return text + (", per horizontal length" if table.projected else "")
