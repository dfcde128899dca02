"""Entries of ``[[trains]]``: wheels that move along beams, each in a case of its own."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from ifccheck.beam import Case, Travel, Wheels
from ifccheck.brief import schema
from ifccheck.brief.entries import head
from ifccheck.brief.faults import FaultError
from ifccheck.brief.model import Brief, LoadEntry, TrainEntry
from ifccheck.brief.places import Path, did_you_mean
from ifccheck.brief.quantities import LEAST_LENGTH, Written
from ifccheck.errors import BriefError

OWN_CASE = "holds a train that moves, beside which no other load may be in it: give it another case"


def train_entries(
    tables: Sequence[schema.TrainTable], cases: Sequence[Case]
) -> tuple[TrainEntry, ...]:
    """The entries of ``[[trains]]``; raises FaultError at the key that is wrong."""
    found: list[TrainEntry] = []
    for index, table in enumerate(tables):
        _check_case(index, table, cases, [entry.case for entry in found])
        found.append(_entry(index, table))
    return tuple(found)


def _check_case(
    index: int, table: schema.TrainTable, cases: Sequence[Case], taken: Sequence[str]
) -> None:
    path: Path = ("trains", index, "case")
    case = next((case for case in cases if case.name == table.case), None)
    if case is None:
        known = [case.name for case in cases]
        raise FaultError(path, f"unknown case '{table.case}': {did_you_mean(table.case, known)}")
    if case.nature == "permanent":
        raise FaultError(path, f"'{table.case}' is permanent, and a train may be elsewhere")
    if case.whole:
        raise FaultError(path, f"'{table.case}' is whole: leave that out, it is for what is fixed")
    if table.case in taken:
        raise FaultError(path, f"'{table.case}' holds another train already: give each its own")


def check_own_cases(brief: Brief) -> None:
    """Raise FaultError where a case with a train holds another load."""
    moving = {entry.case for entry in brief.trains}
    for index, entry in enumerate(brief.loads):
        if entry.case in moving:
            raise FaultError(("loads", index, "case"), f"'{entry.case}' {OWN_CASE}")
    for index, floor in enumerate(brief.floors):
        if floor.case in moving:
            raise FaultError(("floors", index, "case"), f"'{floor.case}' {OWN_CASE}")
    for taken in brief.from_model.values():
        if taken.case in moving:
            raise FaultError(("cases", taken.case, "from_model"), f"'{taken.case}' {OWN_CASE}")


def check_rows(brief: Brief, rows: Sequence[LoadEntry]) -> None:
    """Raise BriefError where a row of a table puts a load into a case with a train."""
    moving = {entry.case for entry in brief.trains}
    for row in rows:
        if row.case in moving:
            raise BriefError(f"{row.place} case: '{row.case}' {OWN_CASE}")


def _entry(index: int, table: schema.TrainTable) -> TrainEntry:
    path: Path = ("trains", index)
    _check_places(path, table)
    second = table.second
    trains = [_wheels(path, table.wheels, table.spacing)]
    if second is not None:
        if second.approach.value < 0.0:
            raise FaultError((*path, "second", "approach"), "is negative")
        trains.append(_wheels((*path, "second"), second.wheels, second.spacing))
    return TrainEntry(
        **head(path, table),
        case=table.case,
        travel=Travel(
            trains=tuple(trains),
            dynamic=table.dynamic,
            turned=table.turned,
            stops=table.stops,
            whole=table.start is None,
            approach=second.approach.value if second else 0.0,
        ),
        start=table.start,
        end=table.end,
        text=", ".join(_words(table)),
    )


def _check_places(path: Path, table: schema.TrainTable) -> None:
    first, last = table.start, table.end
    if table.stops and first is None:
        raise FaultError((*path, "stops"), "stand somewhere: give from and to")
    if (first is None) != (last is None):
        raise FaultError(path, "has one end of the way: give both from and to, or neither")
    if first is not None and last is not None and not first.may_precede(last, LEAST_LENGTH):
        raise FaultError((*path, "to"), f"'{last.text}' is not beyond from = '{first.text}'")


def _wheels(path: Path, forces: Sequence[Written], gaps: Sequence[Written]) -> Wheels:
    if len(gaps) != len(forces) - 1:
        raise FaultError(
            (*path, "spacing"),
            f"{len(forces)} wheels need {len(forces) - 1} distances between them, and has"
            f" {len(gaps)}",
        )
    places = [0.0]
    for gap in gaps:
        places.append(places[-1] + gap.value)
    return Wheels(tuple(places), tuple(force.value for force in forces))


def _words(table: schema.TrainTable) -> Iterator[str]:
    """What the entry says, for people."""
    yield _train(table.wheels, table.spacing)
    if table.second is not None:
        yield "a second " + _train(table.second.wheels, table.second.spacing)
        yield f"no nearer than {table.second.approach.text}"
    if table.dynamic != 1.0:
        yield f"dynamic factor {table.dynamic:g}"
    if table.start is not None and table.end is not None:
        yield f"from {table.start.text} to {table.end.text}"
    if table.stops:
        yield "between stops"
    if not table.turned:
        yield "never turned round"


def _train(forces: Sequence[Written], gaps: Sequence[Written]) -> str:
    if not gaps:
        return f"train of 1 wheel, {forces[0].text}"
    together = " + ".join(force.text for force in forces)
    return f"train of {len(forces)} wheels, {together} at {', '.join(gap.text for gap in gaps)}"
