"""Stretches of a beam with one outline on which every zone holds throughout or not at all."""

from __future__ import annotations

import math
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

HEIGHT_OF_PIECE, MOST_PIECES = 50.0, 6
"""What a taper may rise or widen by within a piece of one height of bars [mm], and how many
pieces it is cut into at most"""

Joint = Literal["through", "bend", "step"]
"""Bars pass on as they are, follow a face that turns or rises, or meet a step in the section"""

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
    z: float | None = None
    """Height of its centre, where that is given [mm]"""


@dataclass(frozen=True, slots=True)
class Segment:
    """A stretch of one outline on which every zone either holds throughout or not at all.

    A taper is cut into pieces that bars pass at one height each; each piece is two segments, with
    the outlines at its ends.
    """

    start: float
    end: float
    outline: Outline
    zones: tuple[DescribedZone, ...]
    joint: Joint = "through"
    """How bars come into it from the segment before"""


def segments_of(beam: Beam, zones: Sequence[DescribedZone]) -> list[Segment]:
    """Cut the beam at every end of a zone and of an outline, and tapers into pieces, too."""
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
            found += _of_run(runs[0], start, end, held, _joint(beam, start))
    return found


def _joint(beam: Beam, x: float) -> Joint:
    """How the runs of a beam meet at a place; "through" where none does."""
    for before, after in pairwise(beam.runs):
        if abs(after.start - x) <= SAME_PLACE:
            edges = zip(
                bounds((before.outline_end or before.outline).rings),
                bounds(after.outline.rings),
                strict=True,
            )
            if any(abs(one - other) > JUMP for one, other in edges):
                return "step"
            return "through" if before.outline_end is None else "bend"
    return "through"


def _of_run(
    run: Run, start: float, end: float, zones: tuple[DescribedZone, ...], joint: Joint
) -> Iterator[Segment]:
    if run.outline_end is None:
        yield Segment(start, end, run.outline, zones, joint)
        return
    first, last = bounds(run.outline.rings), bounds(run.outline_end.rings)
    moved = max(abs(one - other) for one, other in zip(first, last, strict=True))
    part = (end - start) / max(run.end - run.start, 1e-9)
    pieces = max(1, min(math.ceil(moved * part / HEIGHT_OF_PIECE), MOST_PIECES))
    places = [start + (end - start) * piece / pieces for piece in range(pieces + 1)]
    for low, high in pairwise(places):
        middle = 0.5 * (low + high)
        comes: Joint = "step" if joint == "step" and low == start else "bend"
        yield Segment(low, middle, _outline_at(run, run.outline_end, low), zones, comes)
        yield Segment(middle, high, _outline_at(run, run.outline_end, high), zones)


def _outline_at(run: Run, last: Outline, x: float) -> Outline:
    """The outline of a taper at a place on it."""
    share = min(max((x - run.start) / max(run.end - run.start, 1e-9), 0.0), 1.0)
    return Outline(rings_between(run.outline.rings, last.rings, share), run.outline.name)


def _extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    start = 0.0 if zone.start is None else zone.start
    return start, beam.length if zone.end is None else zone.end


def _distinct(places: Iterable[float]) -> list[float]:
    cuts: list[float] = []
    for place in sorted(places):
        if not cuts or place - cuts[-1] > SAME_PLACE:
            cuts.append(place)
    return cuts
