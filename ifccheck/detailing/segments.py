"""Stretches of a beam with one outline on which every zone holds throughout or not at all."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Literal

from ifccheck.beam import Beam, DescribedZone, Outline

SAME_PLACE = 1.0
"""Zone ends nearer to one another, or to the beam's end, than this are one [mm]"""

Place = Literal["bottom", "top", "side"]
PLACES: tuple[Place, ...] = ("bottom", "top", "side")


@dataclass(frozen=True, slots=True)
class Kind:
    """Bars that may be one bar across zones."""

    place: Place
    diameter: float
    area: float
    designation: str
    bar_yield: float | None
    origin: str = field(compare=False)


@dataclass(frozen=True, slots=True)
class Segment:
    """A stretch of one outline on which every zone either holds throughout or not at all."""

    start: float
    end: float
    outline: Outline
    zones: tuple[DescribedZone, ...]


def segments_of(beam: Beam, zones: Sequence[DescribedZone]) -> list[Segment]:
    """Cut the beam at every end of a zone and of an outline."""
    extents = [(zone, *_extent(beam, zone)) for zone in zones]
    places = [run_end for run in beam.runs for run_end in (run.start, run.end)]
    places += [place for _, start, end in extents for place in (start, end)]
    cuts = _distinct(places)
    found = []
    for start, end in pairwise(cuts):
        middle = 0.5 * (start + end)
        outlines = [run.outline for run in beam.runs if run.start <= middle <= run.end]
        held = tuple(zone for zone, first, last in extents if first <= middle <= last)
        if outlines and start >= -SAME_PLACE and end <= beam.length + SAME_PLACE:
            found.append(Segment(start, end, outlines[0], held))
    return found


def _extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    start = 0.0 if zone.start is None else zone.start
    return start, beam.length if zone.end is None else zone.end


def _distinct(places: Iterable[float]) -> list[float]:
    cuts: list[float] = []
    for place in sorted(places):
        if not cuts or place - cuts[-1] > SAME_PLACE:
            cuts.append(place)
    return cuts
