"""The brief's loads laid on the beams that they reach, in each beam's own x."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import NamedTuple

from ifccheck.beam import Beam, Contact, Load, Remark
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief, LoadEntry, Position
from ifccheck.brief.quantities import LEAST_LENGTH
from ifccheck.errors import BriefError
from ifccheck.units import show

TOLERANCE = 1.0
"""Distance [mm] by which a place may lie beyond the end of a beam."""


def upward_remarks(brief: Brief) -> tuple[Remark, ...]:
    """Tell of loads that act upward and do not say that they are meant to."""
    return tuple(
        Remark(
            None,
            "loads",
            f"{entry.place} acts upward ({entry.text}): write upward = true there if it is meant",
            "doubt",
        )
        for entry in brief.loads
        if entry.acts_upward and not entry.upward
    )


class _Stretch(NamedTuple):
    start: float
    end: float
    reversed: bool
    """True where places are measured from the end of the beam."""


def loads_on_beams(
    brief: Brief,
    matches: Matches,
    beams: Mapping[str, Beam],
    spans: Mapping[str, tuple[float, float]],
    contacts: Mapping[str, Sequence[Contact]] | None = None,
) -> tuple[Load, ...]:
    """Return every load of the brief on every beam that it reaches.

    A line without places runs over the whole beam, and over the span where that is longer. A
    projected load counts per horizontal length. Raises BriefError for a place outside a beam.
    A beam whose axis could not be read keeps its loads, all at x = 0, so that none is lost.
    """
    touching = contacts or {}
    return tuple(
        _load(brief, entry, beams[key], spans.get(key), touching.get(key, ()))
        for entry in brief.loads
        for key in matches[entry.place]
    )


def _load(
    brief: Brief,
    entry: LoadEntry,
    beam: Beam,
    span: tuple[float, float] | None,
    contacts: Sequence[Contact],
) -> Load:
    stretch = _stretch(brief, entry, beam, span, contacts)
    projection = _projection(beam) if entry.projected else 1.0
    first, last = entry.values[0] * projection, entry.values[1] * projection
    return Load(
        beam=beam.key,
        case=entry.case,
        kind=entry.kind,
        start=stretch.start,
        end=stretch.end,
        values=_as_seen_from_start(entry, first, last) if stretch.reversed else (first, last),
        face=entry.face,
        origin=entry.place,
        text=entry.text,
    )


def _as_seen_from_start(entry: LoadEntry, first: float, last: float) -> tuple[float, float]:
    """Values that were given looking from the end of the beam; a moment changes its sense."""
    return (-first, -last) if entry.kind == "moment" else (last, first)


def _projection(beam: Beam) -> float:
    """Horizontal length per length of axis."""
    if beam.axis is None:
        return 1.0
    return math.hypot(beam.axis.x[0], beam.axis.x[1])


def _stretch(
    brief: Brief,
    entry: LoadEntry,
    beam: Beam,
    span: tuple[float, float] | None,
    contacts: Sequence[Contact],
) -> _Stretch:
    if beam.axis is None:
        return _Stretch(0.0, 0.0, False)
    if entry.start is None and entry.end is None:
        first, last = span or (0.0, beam.length)
        return _Stretch(min(0.0, first), max(beam.length, last), False)
    from_end = entry.anchor is not None and _anchored_at_end(brief, entry, beam, contacts)
    if entry.kind != "line":
        x = _place(brief, entry, beam, "at", entry.start)
        x = beam.length - x if from_end else x
        return _Stretch(x, x, from_end)
    start = _place(brief, entry, beam, "from", entry.start) if entry.start else 0.0
    end = _place(brief, entry, beam, "to", entry.end) if entry.end else beam.length
    if end - start < LEAST_LENGTH:
        raise BriefError(
            f"{brief.where(entry, 'to')}: on beam {beam.mark}, {show(beam.length, 'length')}"
            " long, the load has no length"
        )
    if from_end:
        return _Stretch(beam.length - end, beam.length - start, True)
    return _Stretch(start, end, False)


def _place(
    brief: Brief, entry: LoadEntry, beam: Beam, key: str, position: Position | None
) -> float:
    assert position is not None  # the brief gives every point load and moment its place
    return place_on(brief.where(entry, key), beam, position)


def place_on(told_at: str, beam: Beam, position: Position) -> float:
    """x of a place on a beam [mm]; raises BriefError where that lies beyond its end."""
    x = position.on(beam.length)
    if not -TOLERANCE <= x <= beam.length + TOLERANCE:
        raise BriefError(
            f"{told_at}: {position.text} lies beyond the end of beam"
            f" {beam.mark}, which is {beam.length / 1000.0:.3f} m long"
        )
    return min(max(x, 0.0), beam.length)


def _anchored_at_end(
    brief: Brief, entry: LoadEntry, beam: Beam, contacts: Sequence[Contact]
) -> bool:
    """Whether the member that places are measured from is at the end of the beam."""
    ends = {c.place for c in contacts if c.place != "between" and c.goes_by(entry.anchor or "")}
    if len(ends) != 1:
        found = "both ends" if ends else "neither end"
        raise BriefError(
            f"{brief.where(entry, 'at_from')}: '{entry.anchor}' touches {found} of beam"
            f" {beam.mark}: name a member that touches one end"
        )
    return ends == {"end"}
