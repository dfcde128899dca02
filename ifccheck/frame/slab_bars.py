"""Which bars of slabs count as steel of a beam's flange, and over which length.

A bar counts as far as it lies wholly in slab that is a flange of the beam, outside of the beam's
own concrete (there it may be one of the beam's own bars) and within the overhang that the standard
gives for steel. Its force spreads to the web at 45 degrees, so that at both its ends it counts as
much later as it lies away from the web; its ends are straight. Where an opening of the beam reaches
into the flange it counts for nothing. Beyond the beam's own ends it goes on as it was modelled.

One within the slab's thickness of the web is in the web's reach: it counts in longitudinal tension
as well, others in flexure alone. This is ours, on the cautious side.
"""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import NamedTuple

from ifccheck.beam import Anchor, BarPlace, Bars, Beam, Flange, FlangeWidth, RatedBody
from ifccheck.frame.figures import Stretch, figure_of, narrowest

SAME = 1.0
"""Stretches with a lesser gap are one, and places that are nearer to an end are at it [mm]"""
FIT = 1e-6
"""Rounding [mm]"""
LEAST_RUN = 20.0
"""Bars that count over fewer diameters do not count"""


class _Counting(NamedTuple):
    """Where a bar of a slab counts."""

    start: float
    end: float
    place: BarPlace


def bars_in_flanges(beam: Beam, body: RatedBody) -> tuple[Bars, ...]:
    """The bars of slabs that may count as steel of a beam's flanges, as far as they do."""
    if not beam.slab_bars or not body.flanges:
        return ()
    _, web = narrowest(figure_of(beam.runs[0].outline))
    return tuple(one for bars in beam.slab_bars for one in _in_flanges(beam, body, bars, web))


def _in_flanges(beam: Beam, body: RatedBody, bars: Bars, web: Stretch) -> Iterator[Bars]:
    alike: dict[_Counting, list[float]] = defaultdict(list)
    for y in bars.ys:
        if not _in_the_beam(beam, bars, y):
            for each in _counting(beam, body, bars, y, web):
                alike[each].append(y)
    for (start, end, place), ys in alike.items():
        away = max(_beyond(y, web) for y in ys)
        start, end = start + away, end - away
        if end - start >= LEAST_RUN * bars.diameter:
            yield replace(
                bars, count=len(ys), ys=tuple(ys), start=start, end=end, place=place,
                start_anchor=Anchor.STRAIGHT, end_anchor=Anchor.STRAIGHT,
                start_beyond=0.0, end_beyond=0.0,
            )  # fmt: skip


def _in_the_beam(beam: Beam, bars: Bars, y: float) -> bool:
    """Whether a bar lies in the beam's own concrete, or touches it."""
    from shapely import Point

    own = figure_of(beam.runs[0].outline)
    return bool(own.distance(Point(y, bars.z)) < bars.diameter / 2.0 - FIT)


def _beyond(y: float, web: Stretch) -> float:
    """How far a bar lies beyond the side of the web [mm]."""
    return max(y - web[1], web[0] - y, 0.0)


def _counting(
    beam: Beam, body: RatedBody, bars: Bars, y: float, web: Stretch
) -> Iterator[_Counting]:
    boxes = [one for one in body.flanges if _holds(one, bars, y)]
    if not boxes:
        return
    away = _beyond(y, web)
    near = away <= min(one.top - one.bottom for one in boxes)
    bottom = min(one.bottom for one in boxes)
    stretches = _joined(
        (max(one.start, width.start), min(one.end, width.end))
        for one in boxes
        for width in body.widths
        if away <= _overhang(width, y, web) + FIT
    )
    openings = [(one.start, one.end) for one in beam.openings if one.top > bottom + FIT]
    for stretch in stretches:
        for low, high in _without(stretch, openings):
            start, end = _of_bar(beam, bars, low, high)
            if end > start:
                yield _Counting(start, end, "near web" if near else "in flange")


def _holds(flange: Flange, bars: Bars, y: float) -> bool:
    """Whether a bar lies wholly within the box of a flange."""
    radius = bars.diameter / 2.0 - FIT
    across = flange.right + radius <= y <= flange.left - radius
    return across and flange.bottom + radius <= bars.z <= flange.top - radius


def _overhang(width: FlangeWidth, y: float, web: Stretch) -> float:
    """Overhang within which bars count on the side of a bar [mm]."""
    return width.steel_left if y > (web[0] + web[1]) / 2.0 else width.steel_right


def _joined(stretches: Iterator[Stretch]) -> list[Stretch]:
    found: list[Stretch] = []
    for start, end in sorted(stretches):
        if end <= start:
            continue
        if found and start - found[-1][1] < SAME:
            found[-1] = (found[-1][0], max(found[-1][1], end))
        else:
            found.append((start, end))
    return found


def _without(stretch: Stretch, openings: Sequence[Stretch]) -> Iterator[Stretch]:
    """What openings leave of a stretch."""
    start, end = stretch
    for low, high in sorted(openings):
        if high > start and low < end:
            if low > start:
                yield start, low
            start = high
    if end > start:
        yield start, end


def _of_bar(beam: Beam, bars: Bars, low: float, high: float) -> Stretch:
    """The part of a bar that lies on a stretch; beyond the ends of the beam all of it."""
    first = -math.inf if low <= SAME else low
    last = math.inf if high >= beam.length - SAME else high
    return max(bars.start, first), min(bars.end, last)
