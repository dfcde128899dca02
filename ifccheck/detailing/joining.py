"""Bars that go on through neighbouring segments made into one."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

from ifccheck.beam import Anchor, Bars, Beam, Given
from ifccheck.detailing.layers import Placed
from ifccheck.detailing.room import soffit_and_top
from ifccheck.detailing.segments import SAME_PLACE, Kind, Place, Segment

CARRIED_ON = 0.25
"""Part of the lesser depth by which a step may move a bar that goes on through it"""

SURELY_DEVELOPED = 100.0
"""Diameters from its end at which a bar that bends along a taper is taken as developed"""


@dataclass(frozen=True, slots=True)
class _Piece:
    """A bar over the segments from ``first`` to ``last`` at one height."""

    kind: Kind
    first: int
    last: int
    z: float
    anchors: tuple[Anchor, Anchor]


def joined(
    beam: Beam, segments: Sequence[Segment], sections: Sequence[Sequence[tuple[Kind, Placed]]]
) -> tuple[Bars, ...]:
    """Bars over as many neighbouring segments as hold them.

    Along a taper a bar follows the face, in pieces of one height each.
    """
    together: dict[_Piece, list[float]] = {}
    for kind in dict.fromkeys(kind for section in sections for kind, _ in section):
        held = [[p for k, p in section if k == kind] for section in sections]
        for rank in range(max(len(bars) for bars in held)):
            ranked = [bars[rank : rank + 1] for bars in held]
            for first, last in _chains(segments, ranked):
                for piece, across in _pieces(beam, kind, segments, ranked, first, last):
                    together.setdefault(piece, []).append(across)
    return tuple(_bars(beam, piece, segments, ys) for piece, ys in together.items())


def _chains(
    segments: Sequence[Segment], held: Sequence[Sequence[Placed]]
) -> Iterator[tuple[int, int]]:
    """First and last segment of each bar."""
    first: int | None = None
    for index in range(len(held) + 1):
        here = index < len(held) and bool(held[index])
        if first is not None and not (here and _go_on(segments, held, index)):
            yield first, index - 1
            first = None
        if here and first is None:
            first = index


def _go_on(segments: Sequence[Segment], held: Sequence[Sequence[Placed]], index: int) -> bool:
    """Whether a bar of the segment before goes on into this one.

    A bar ends at a step in the section that moves its place up or down by more than a part of
    the lesser depth: carried on there, it would lie nowhere near the face that it belongs to.
    """
    if segments[index].start - segments[index - 1].end > SAME_PLACE:
        return False
    if segments[index].joint != "step":
        return True
    depths = [
        top - soffit
        for soffit, top in (soffit_and_top(segments[k].outline) for k in (index - 1, index))
    ]
    moved = abs(held[index][0].z - held[index - 1][0].z)
    return moved <= CARRIED_ON * min(depths)


def _pieces(
    beam: Beam,
    kind: Kind,
    segments: Sequence[Segment],
    held: Sequence[Sequence[Placed]],
    first: int,
    last: int,
) -> Iterator[tuple[_Piece, float]]:
    """A bar cut where it bends, each piece at its less favourable height, and its place across."""
    ends = (segments[first].start, segments[last].end)
    whole = _anchored(beam, *ends)
    for low, high, z, across in _levels(kind, segments, held, first, last):
        reach = (segments[low].start - ends[0], ends[1] - segments[high].end)
        start, end = (_anchor(kind, *each) for each in zip(whole, reach, strict=True))
        yield _Piece(kind, low, high, z, (start, end)), across


def _levels(
    kind: Kind,
    segments: Sequence[Segment],
    held: Sequence[Sequence[Placed]],
    first: int,
    last: int,
) -> list[tuple[int, int, float, float]]:
    """First and last segment of each piece of a bar, its height and its place across [mm]."""
    found: list[tuple[int, int, float, float]] = []
    bends = [k for k in range(first + 1, last + 1) if segments[k].joint == "bend"]
    for low, after in pairwise([first, *bends, last + 1]):
        places = [bars[0] for bars in held[low:after]]
        middle = 0.5 * sum(soffit_and_top(segments[low].outline))
        height = round(_less_favourable(kind.place, middle, [p.z for p in places]), 6)
        across = min((p.y for p in places), key=abs)  # the narrowest of them
        if found and found[-1][2:] == (height, across):
            low = found.pop()[0]
        found.append((low, after - 1, height, across))
    return found


def _anchored(beam: Beam, start: float, end: float) -> tuple[bool, bool]:
    """Whether a bar runs to the beam's ends, where it is taken as anchored."""
    return start <= SAME_PLACE, end >= beam.length - SAME_PLACE


def _anchor(kind: Kind, anchored: bool, distance: float) -> Anchor:
    """How a piece ends, so far from the end of its bar [mm]."""
    sure = anchored or distance >= SURELY_DEVELOPED * kind.diameter
    return Anchor.ANCHORED if sure else Anchor.STRAIGHT


def _less_favourable(place: Place, middle: float, heights: Sequence[float]) -> float:
    """The height of those that gives the bar the least lever arm."""
    if place == "side":
        return min(heights, key=lambda z: abs(z - middle))
    return min(heights) if place == "top" else max(heights)


def _bars(beam: Beam, piece: _Piece, segments: Sequence[Segment], ys: Sequence[float]) -> Bars:
    kind = piece.kind
    start, end = segments[piece.first].start, segments[piece.last].end
    at_start, at_end = _anchored(beam, start, end)
    stated = None if kind.bar_yield is None else Given(kind.bar_yield, kind.origin)
    return Bars(
        count=len(ys),
        diameter=kind.diameter,
        area=kind.area,
        start=0.0 if at_start else start,
        end=beam.length if at_end else end,
        z=piece.z,
        ys=tuple(sorted(ys, reverse=True)),
        yield_strength=stated,
        start_anchor=piece.anchors[0],
        end_anchor=piece.anchors[1],
        designation=kind.designation,
        origin=kind.origin,
    )
