"""How far a slab reaches out from the side of a beam, stretch by stretch along it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import NamedTuple

from ifccheck.beam import Ring, Slab

Plan = tuple[Ring, ...]
"""Rings in the axes of a beam, x along it and y outward from the side that is looked at; what lies
in an odd number of them is covered"""

STEP = 0.5
"""How far beside a corner of the plan the reach is measured [mm]"""
FAR = 1e6
"""Beyond every slab [mm]"""
SAME = 1.0
"""Reaches that differ by less are one, and stretches with a lesser gap are neighbours [mm]"""


class NextWeb(NamedTuple):
    """A member that may carry the slab as the beam does."""

    whole: Plan
    """Its flange of its own included"""
    core: Plan
    """Its web alone, where that is known, else the whole"""
    name: str


@dataclass(frozen=True, slots=True)
class Side:
    """One side of a beam in its own plan, x along it and y outward [mm]."""

    face: float
    """y of the beam's side, be it that of a flange of its own"""
    web: float
    """y of the side of its web"""
    inner: float
    """y from which on outward a slab is looked for"""
    latest: float
    """y by which it must have begun"""
    least: float
    """How far it must reach beyond the face"""


@dataclass(frozen=True, slots=True)
class Reach:
    """A stretch along a beam over which a slab reaches equally far out from its side [mm]."""

    start: float
    end: float
    reach: float
    limit: str
    """The next web, to which half the distance counts; empty where the slab ends first"""
    slab: Slab


def reaches(
    slab: Slab, plan: Plan, webs: Sequence[NextWeb], side: Side, start: float, end: float
) -> list[Reach]:
    """How far a slab reaches out, and no farther than half the clear distance to the next web.

    Parameters
    ----------
    slab
        The slab.
    plan
        Of the slab.
    webs
        The members beside it.
    side
        Where the beam's side is.
    start, end
        Stretch of the beam.

    Notes
    -----
    Edges are straight: between two corners of all the plans the least is at either end.
    """
    found: list[Reach] = []
    plans = [plan, *(each for other in webs for each in (other.whole, other.core))]
    for low, high in pairwise(_corners(plans, start, end)):
        if high - low <= 2.0 * STEP:
            continue
        reach, limit = min(_reach_at(plan, webs, side, x) for x in (low + STEP, high - STEP))
        if reach >= side.least:
            found.append(Reach(low, high, max(reach, 0.0), limit, slab))
    return joined(found)


def _corners(plans: Sequence[Plan], start: float, end: float) -> list[float]:
    places = {start, end}
    for plan in plans:
        for ring in plan:
            places |= {round(x, 6) for x, _ in ring if start < x < end}
    return sorted(places)


def _reach_at(plan: Plan, webs: Sequence[NextWeb], side: Side, x: float) -> tuple[float, str]:
    covered = covered_from(plan, x, side.inner)
    if covered is None or covered[0] > side.latest:
        return -FAR, ""
    found = covered[1] - side.face, ""
    for other in webs:
        if (limit := _half_way(other, side, x)) is not None:
            found = min(found, (limit, other.name))
    return found


def _half_way(other: NextWeb, side: Side, x: float) -> float | None:
    """How far beyond the face half the clear distance between two webs reaches.

    No farther than the other member, whose own flange is none of the slab's.
    """
    beyond = covered_from(other.whole, x, side.face + STEP)
    if beyond is None:
        return None
    core = covered_from(other.core, x, side.face + STEP) or beyond
    half = (max(core[0], beyond[0]) + side.web) / 2.0
    return max(min(half, beyond[0]) - side.face, 0.0)


def covered_from(plan: Plan, x: float, inner: float) -> tuple[float, float] | None:
    """The first stretch that a plan covers on a line outward from a place; None without any."""
    ys = sorted(
        y0 + (y1 - y0) * (x - x0) / (x1 - x0)
        for ring in plan
        for (x0, y0), (x1, y1) in pairwise((*ring, ring[0]))
        if (x0 <= x) != (x1 <= x)
    )
    for low, high in zip(ys[::2], ys[1::2], strict=True):
        if high > inner:
            return max(low, inner), high
    return None


def joined(found: Sequence[Reach]) -> list[Reach]:
    """Neighbours of one slab that reach equally far, as one stretch of the lesser reach."""
    whole: list[Reach] = []
    for one in found:
        last = whole[-1] if whole else None
        if last and _alike(last, one):
            whole[-1] = replace(min(last, one, key=_reach), start=last.start, end=one.end)
        else:
            whole.append(one)
    return whole


def _alike(one: Reach, after: Reach) -> bool:
    near = after.start - one.end < SAME and abs(after.reach - one.reach) < SAME
    return near and after.slab is one.slab


def apart(found: Sequence[Reach]) -> list[Reach]:
    """Stretches that lie over one another, as neighbours: the farther reach counts."""
    edges = sorted({x for one in found for x in (one.start, one.end)})
    pieces = []
    for low, high in pairwise(edges):
        here = [one for one in found if one.start < high and one.end > low]
        if here and high - low > 0.0:
            pieces.append(replace(max(here, key=_reach), start=low, end=high))
    return joined(pieces)


def bridged(found: Sequence[Reach], framing: Sequence[Plan], face: float) -> list[Reach]:
    """The reaches with the gaps filled that beams leave which frame in between two panels.

    Parameters
    ----------
    found
        Sorted by their start, none over another.
    framing
        Plans of beams that fill the depth of the slab; they are convex.
    face
        y of the beam's side.
    """
    filled: list[Reach] = []
    for one in found:
        last = filled[-1] if filled else None
        if last and one.start - last.end >= SAME and _is_filled(last.end, one.start, framing, face):
            filled.append(replace(min(last, one, key=_reach), start=last.end, end=one.start))
        filled.append(one)
    return joined(filled)


def _reach(one: Reach) -> float:
    return one.reach


def _is_filled(start: float, end: float, framing: Sequence[Plan], face: float) -> bool:
    """Whether one of the beams covers the gap beside the face from end to end."""
    beside = face + 2.0 * STEP

    def covers(plan: Plan, x: float) -> bool:
        found = covered_from(plan, x, beside)
        return found is not None and found[0] <= beside

    return any(covers(plan, start + STEP) and covers(plan, end - STEP) for plan in framing)


def spread(found: Sequence[Reach], length: float, farthest: float) -> list[Reach]:
    """The reaches with what is added along the beam spread at 45 degrees, by safe steps.

    At a place counts no more than any other place has, and the distance between them.

    Parameters
    ----------
    found
        Sorted by their start, none over another.
    length
        Of the beam: at its own ends nothing has to spread.
    farthest
        No flange is wider than this, so that nothing needs longer to spread [mm].
    """
    levels = [(one.start, one.end, one.reach) for one in found]
    levels += [(start, end, 0.0) for start, end in _gaps(found, length)]
    return joined([piece for one in found for piece in _grown(one, levels, farthest)])


def _gaps(found: Sequence[Reach], length: float) -> Iterator[tuple[float, float]]:
    edges = [0.0, *(x for one in found for x in (one.start, one.end)), length]
    for start, end in zip(edges[::2], edges[1::2], strict=True):
        if end - start >= SAME:
            yield start, end


def _grown(
    one: Reach, levels: Sequence[tuple[float, float, float]], farthest: float
) -> Iterator[Reach]:
    """Steps of one stretch: within it what may count first grows and then falls again."""
    most = min(one.reach, farthest)

    def counts(x: float) -> float:
        return min(reach + max(start - x, x - end, 0.0) for start, end, reach in levels)

    grown = (end + most - reach for _, end, reach in levels if end <= one.start)
    falls = (start - most + reach for start, _, reach in levels if start >= one.end)
    first, last = max((one.start, *grown)), min((one.end, *falls))
    if first > last:
        first = last = min(max((first + last) / 2.0, one.start), one.end)
    for start, end in pairwise((one.start, first, last, one.end)):
        reach = one.reach if (start, end) == (first, last) else min(counts(start), counts(end))
        if end > start:
            yield replace(one, start=start, end=end, reach=reach)
