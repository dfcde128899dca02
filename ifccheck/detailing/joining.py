"""Bars that go on through neighbouring segments made into one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from ifccheck.beam import Anchor, Bars, Beam, Given
from ifccheck.detailing.layers import Placed
from ifccheck.detailing.room import soffit_and_top
from ifccheck.detailing.segments import SAME_PLACE, Kind, Place, Segment

CARRIED_ON = 0.25
"""Part of the lesser depth by which a step may move a bar that goes on through it"""


@dataclass(frozen=True, slots=True)
class _Piece:
    """One bar over the segments that hold it, ``first`` to ``last``, at one height."""

    kind: Kind
    first: int
    last: int
    y: float
    z: float


def joined(
    beam: Beam, segments: Sequence[Segment], sections: Sequence[Sequence[tuple[Kind, Placed]]]
) -> tuple[Bars, ...]:
    """Bars over as many neighbouring segments as hold them."""
    pieces: list[_Piece] = []
    for kind in dict.fromkeys(kind for section in sections for kind, _ in section):
        held = [[p for k, p in section if k == kind] for section in sections]
        for rank in range(max(len(bars) for bars in held)):
            pieces += _stretches(kind, segments, [bars[rank : rank + 1] for bars in held])
    together: dict[tuple[Kind, int, int, float], list[float]] = {}
    for piece in pieces:
        key = (piece.kind, piece.first, piece.last, piece.z)
        together.setdefault(key, []).append(piece.y)
    return tuple(
        _bars(beam, kind, segments[first].start, segments[last].end, z, ys)
        for (kind, first, last, z), ys in together.items()
    )


def _stretches(
    kind: Kind, segments: Sequence[Segment], held: Sequence[Sequence[Placed]]
) -> list[_Piece]:
    """Runs of neighbouring segments that hold a bar, at the less favourable height of each run."""
    pieces: list[_Piece] = []
    first: int | None = None
    for index in range(len(held) + 1):
        here = index < len(held) and bool(held[index])
        touching = first is None or not here or _go_on(segments, held, index)
        if first is not None and (not here or not touching):
            run = [bars[0] for bars in held[first:index]]
            middle = 0.5 * sum(soffit_and_top(segments[first].outline))
            height = _less_favourable(kind.place, middle, [p.z for p in run])
            across = min((p.y for p in run), key=abs)  # the narrowest of them
            pieces.append(_Piece(kind, first, index - 1, across, height))
            first = None
        if here and first is None:
            first = index
    return pieces


def _go_on(segments: Sequence[Segment], held: Sequence[Sequence[Placed]], index: int) -> bool:
    """Whether a bar of the segment before goes on into this one.

    A bar ends at a step in the section that moves its place up or down by more than a part of
    the lesser depth: carried on there, it would lie nowhere near the face that it belongs to.
    """
    if segments[index].start - segments[index - 1].end > SAME_PLACE:
        return False
    if not segments[index].stepped:
        return True
    depths = [
        top - soffit
        for soffit, top in (soffit_and_top(segments[k].outline) for k in (index - 1, index))
    ]
    moved = abs(held[index][0].z - held[index - 1][0].z)
    return moved <= CARRIED_ON * min(depths)


def _less_favourable(place: Place, middle: float, heights: Sequence[float]) -> float:
    """The height of those that gives the bar the least lever arm."""
    if place == "side":
        return min(heights, key=lambda z: abs(z - middle))
    return min(heights) if place == "top" else max(heights)


def _bars(beam: Beam, kind: Kind, start: float, end: float, z: float, ys: Sequence[float]) -> Bars:
    at_start, at_end = start <= SAME_PLACE, end >= beam.length - SAME_PLACE
    stated = None if kind.bar_yield is None else Given(kind.bar_yield, kind.origin)
    return Bars(
        count=len(ys),
        diameter=kind.diameter,
        area=kind.area,
        start=0.0 if at_start else start,
        end=beam.length if at_end else end,
        z=z,
        ys=tuple(sorted(ys, reverse=True)),
        yield_strength=stated,
        start_anchor=Anchor.ANCHORED if at_start else Anchor.STRAIGHT,
        end_anchor=Anchor.ANCHORED if at_end else Anchor.STRAIGHT,
        designation=kind.designation,
        origin=kind.origin,
    )
