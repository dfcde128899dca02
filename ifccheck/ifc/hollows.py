"""Holes and recesses that are modelled in a body: the box round what each takes off it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple

from ifccheck.beam import Opening
from ifccheck.ifc.blemishes import Blemish
from ifccheck.ifc.figures import Figure, parts_of, polygon_of
from ifccheck.ifc.profile_curves import SAGITTA
from ifccheck.ifc.solids import Solid
from ifccheck.ifc.tracing import Piece

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

Bounds = tuple[float, float, float, float]
"""Least y and z, greatest y and z [mm]"""

NOISE = 0.1
"""What is missing over less than twice this is noise of what was cut [mm]."""
BESIDE = 0.01
"""How far from its ends a stretch is cut [mm]."""
SAME = 1.0
"""A hole that reaches no farther beyond an opening than this is that opening [mm]."""


class Hollow(NamedTuple):
    """A hole or recess, in the axes of the slices [mm]."""

    what: str
    start: float
    end: float
    right: float
    left: float
    bottom: float
    top: float

    def in_beam(self, start: float, middle: float, soffit: float, length: float) -> Opening | None:
        """The opening that it is in the axes of a beam, with what its chords may cut short; None
        where it lies beyond an oblique end's middle."""
        first = max(self.start - start - SAGITTA, 0.0)
        last = min(self.end - start + SAGITTA, length)
        if first >= last:
            return None
        right, left = self.right - middle - SAGITTA, self.left - middle + SAGITTA
        bottom, top = self.bottom - soffit - SAGITTA, self.top - soffit + SAGITTA
        first, last, right, left, bottom, top = (
            round(place, 6) for place in (first, last, right, left, bottom, top)
        )
        return Opening(first, last, right, left, bottom, top, "other", self.what)


@dataclass(slots=True)
class Hollows:
    """What was found where a section was carried on."""

    read: list[Hollow] = field(default_factory=list)
    unread: list[Blemish] = field(default_factory=list)
    """That are no mere holes: the body has more than the section there, too"""


def hollows(
    solid: Solid, whole: Sequence[Piece], pieces: Sequence[Piece], blemishes: Sequence[Blemish]
) -> Hollows:
    """Measure what is missing where a section was carried on.

    Parameters
    ----------
    solid
        Along x.
    whole, pieces
        Its stretches with and without the section carried on.
    blemishes
        Where it was.
    """
    found = Hollows()
    for blemish in blemishes:
        what, start, end = blemish
        within = [piece for piece in pieces if piece.start < end and piece.end > start]
        missing: list[Bounds] = []
        more = False
        for x in _places(within):
            section, left = polygon_of(_section_at(whole, x)), solid.section(x)
            missing += _bounds(section.difference(left))
            more |= bool(_bounds(left.difference(section)))
        if more or not missing:
            found.unread.append(blemish)
            continue
        right, bottom, left_most, top = zip(*missing, strict=True)
        first = max((piece.end for piece in pieces if piece.end <= start), default=start)
        last = min((piece.start for piece in pieces if piece.start >= end), default=end)
        found.read.append(
            Hollow(what, first, last, min(right), max(left_most), min(bottom), max(top))
        )
    return found


def _places(pieces: Sequence[Piece]) -> Iterator[float]:
    """Near the ends and in the middle of every stretch: between them corners move straight."""
    for piece in pieces:
        yield from (piece.start + BESIDE, (piece.start + piece.end) / 2.0, piece.end - BESIDE)


def _section_at(whole: Sequence[Piece], x: float) -> Figure:
    return next(piece for piece in whole if x <= piece.end).at(x)


def _bounds(figure: BaseGeometry) -> list[Bounds]:
    """Bounds of every part of a figure that is more than noise."""
    return [
        part.buffer(NOISE, join_style="mitre").bounds for part in parts_of(figure.buffer(-NOISE))
    ]


def not_among(found: Sequence[Opening], openings: Sequence[Opening]) -> Iterator[Opening]:
    """Those that are not openings of the model, cut into its body as well."""
    for one in found:
        if not any(_covers(opening, one) for opening in openings):
            yield one


def _covers(opening: Opening, other: Opening) -> bool:
    lows = ("start", "right", "bottom")
    highs = ("end", "left", "top")
    return all(getattr(opening, name) <= getattr(other, name) + SAME for name in lows) and all(
        getattr(opening, name) >= getattr(other, name) - SAME for name in highs
    )
