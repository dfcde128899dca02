"""Stretches of a beam with one outline on which every zone holds throughout or not at all."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Literal

from ifccheck.beam import Beam, DescribedZone, Outline, Run
from ifccheck.mechanics.outlines import bounds, rings_between

JUMP = 5.0
"""Edges of an outline that jump by less than this go on [mm]"""

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
    """A stretch of one outline on which every zone either holds throughout or not at all.

    Of a taper it is half of a stretch, with the outline at its far end: bars that go on through
    both halves lie at the less favourable of the heights found in them.
    """

    start: float
    end: float
    outline: Outline
    zones: tuple[DescribedZone, ...]
    stepped: bool = False
    """It begins with a step in the section"""


def segments_of(beam: Beam, zones: Sequence[DescribedZone]) -> list[Segment]:
    """Cut the beam at every end of a zone and of an outline, and tapers in the middle, too."""
    extents = [(zone, *_extent(beam, zone)) for zone in zones]
    places = [run_end for run in beam.runs for run_end in (run.start, run.end)]
    places += [place for _, start, end in extents for place in (start, end)]
    cuts = _distinct(places)
    found: list[Segment] = []
    for start, end in pairwise(cuts):
        middle = 0.5 * (start + end)
        runs = [run for run in beam.runs if run.start <= middle <= run.end]
        held = tuple(zone for zone, first, last in extents if first <= middle <= last)
        if runs and start >= -SAME_PLACE and end <= beam.length + SAME_PLACE:
            found += _of_run(runs[0], start, end, held, _is_step(beam, start))
    return found


def _is_step(beam: Beam, x: float) -> bool:
    """Whether the outline jumps in height or width at a place."""
    for before, after in pairwise(beam.runs):
        if abs(after.start - x) <= SAME_PLACE:
            edges = zip(
                bounds((before.outline_end or before.outline).rings),
                bounds(after.outline.rings),
                strict=True,
            )
            return any(abs(one - other) > JUMP for one, other in edges)
    return False


def _of_run(
    run: Run, start: float, end: float, zones: tuple[DescribedZone, ...], stepped: bool
) -> Iterator[Segment]:
    if run.outline_end is None:
        yield Segment(start, end, run.outline, zones, stepped)
        return
    length, middle = max(run.end - run.start, 1e-9), 0.5 * (start + end)
    for low, high, at, steps in ((start, middle, start, stepped), (middle, end, end, False)):
        share = min(max((at - run.start) / length, 0.0), 1.0)
        rings = rings_between(run.outline.rings, run.outline_end.rings, share)
        yield Segment(low, high, Outline(rings, run.outline.name), zones, steps)


def _extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    start = 0.0 if zone.start is None else zone.start
    return start, beam.length if zone.end is None else zone.end


def _distinct(places: Iterable[float]) -> list[float]:
    cuts: list[float] = []
    for place in sorted(places):
        if not cuts or place - cuts[-1] > SAME_PLACE:
            cuts.append(place)
    return cuts
