"""What the run must find the beams of, and the check that no mark or query misses them all."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence, Set

from ifccheck.beam import Remark
from ifccheck.brief.floor_entries import floor_parts
from ifccheck.brief.mark_ranges import expanded
from ifccheck.brief.model import Brief, Entry, ScheduleRow, Selection
from ifccheck.brief.places import did_you_mean
from ifccheck.errors import BriefError
from ifccheck.units import clipped

Found = Mapping[str, Sequence[str]]
"""Keys of the beams that each single mark or query reaches, by its place."""


def selections(brief: Brief, rows: Sequence[ScheduleRow] = ()) -> dict[str, Selection]:
    """Return every query and every single mark of the brief and its schedule, by its place.

    Marks are looked for one by one, so that a mistyped one among good ones is not lost.
    """
    return {place: part for entry in (*brief.entries(), *rows) for place, part in parts_of(entry)}


def parts_of(entry: Entry | ScheduleRow) -> Iterator[tuple[str, Selection]]:
    """Each query or mark of an entry or row with its place: ``loads[3].beams[2]``.

    Of a range each mark stands by itself, since one that is missing would drop a load; a range in
    a schedule, whose rows drop none, stands as a whole.
    """
    if entry.selection.where is not None:
        yield f"{entry.place}.where", entry.selection
    for index, mark in enumerate(entry.selection.beams or (), 1):
        place, marks = f"{entry.place}.beams[{index}]", expanded(mark)
        if len(marks) == 1 or isinstance(entry, ScheduleRow):
            yield place, Selection(beams=marks)
        else:
            yield from ((f"{place} {one}", Selection(beams=(one,))) for one in marks)


def join(brief: Brief, rows: Sequence[ScheduleRow], found: Found) -> dict[str, tuple[str, ...]]:
    """Return the keys of the beams that each entry and row reaches, each beam once, and those of
    the slabs that entries of ``[[floors]]`` do.

    What each single mark of a row reaches is kept beside.
    """
    entries = {
        entry.place: tuple(
            dict.fromkeys(key for place, _ in parts_of(entry) for key in found[place])
        )
        for entry in (*brief.entries(), *rows)
    }
    floors = {
        entry.place: tuple(
            dict.fromkeys(key for place, _ in floor_parts(entry) for key in found[place])
        )
        for entry in brief.floors
    }
    marks = {place: tuple(found[place]) for row in rows for place, _ in parts_of(row)}
    return {**entries, **floors, **marks}


def check_scope(brief: Brief, reached: Sequence[Mapping[str, int]]) -> None:
    """Raise BriefError for a query of the scope that reaches nothing in any model of the run.

    ``reached`` is how many members each query reaches in each model, by its place.
    """
    for place, query in (*brief.scope.also.items(), *brief.scope.leave_out.items()):
        if not brief.scope.optional and not any(of_model[place] for of_model in reached):
            key = place.partition("[")[0]
            raise BriefError(
                f"{brief.at(place, brief.lines.get(key))}: {clipped(query, 120)} reaches no member"
                " (columns, walls, slabs and footings are never taken in): correct it, or write"
                " optional = true under [scope]"
            )


def check_reached(brief: Brief, found: Sequence[Found]) -> None:
    """Raise BriefError for a mark or query that reaches no beam in any model of the run.

    An entry with ``optional = true`` may reach none.
    """
    parts = [place for entry in brief.entries() for place, _ in parts_of(entry)]
    none = len(parts) > 1 and not any(of_model[place] for of_model in found for place in parts)
    advice = (
        f", like all {len(parts)} marks and queries of the brief, which looks like that of another"
        " model: give the model that it was written for, or correct them"
        if none
        else ": correct it, or write optional = true"
    )
    for entry in brief.entries():
        for place, part in parts_of(entry):
            if not entry.optional and not any(of_model[place] for of_model in found):
                key = "where" if part.where is not None else "beams"
                raise BriefError(
                    f"{brief.where(entry, key)}: {clipped(part.said, 120)} reaches no beam{advice}"
                )


def mapping_remarks(brief: Brief, held: Set[str]) -> tuple[Remark, ...]:
    """Return a remark for every entry of the mapping that reaches no property in a model."""
    return tuple(
        Remark(
            None,
            "reinforcement",
            f"reinforcement.properties.{field}: no beam of the model has {clipped(place, 120)}",
            "doubt",
        )
        for field, place in brief.property_mapping.items()
        if field not in held
    )


def check_mapping(
    brief: Brief, held: Sequence[Set[str]], properties: Callable[[], Sequence[str]]
) -> None:
    """Raise BriefError for a mapping that reaches no property in any model of the run.

    Unseen it would leave the field to another source or to a default that is less. ``properties``
    gives the "Set.Property" that beams have, to tell which may be meant.
    """
    if brief.mapping_optional:
        return
    for field, place in brief.property_mapping.items():
        if any(field in of_model for of_model in held):
            continue
        raise BriefError(
            f"{brief.at(f'reinforcement.properties.{field}')}: {clipped(place, 120)} reaches no"
            f" property of a beam: {_meant(place, list(properties()))}; correct it, or write"
            " optional = true under [reinforcement]"
        )


def _meant(place: str, known: list[str]) -> str:
    """Which property may be meant: of the set that is named, if there is one."""
    set_name, _, name = place.partition(".")
    prefix = f"{set_name}."
    own = [each.removeprefix(prefix) for each in known if each.startswith(prefix)]
    return did_you_mean(name, own, prefix) if own else did_you_mean(place, known)


def unreached(row: ScheduleRow, found: Sequence[Found]) -> Iterator[Selection]:
    """The marks of a row that reach no beam in any model of the run."""
    for place, part in parts_of(row):
        if not any(of_model[place] for of_model in found):
            yield part
