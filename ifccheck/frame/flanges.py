"""The slabs that may act as flanges of beams: those that meet a beam's side or lie on its top.

A slab meets a beam where its edge touches or overlaps the beam's side and its top is level with
the beam's top or lower. What stands out above the beam's top is left out, and a slab in the lower
half of the depth counts for nothing. It reaches as far as its own edge, and no farther than half
the clear distance to the next web, a beam or a wall that runs the same way at the slab's level
(CSA A23.3-14, 10.3, from memory). Where it begins or widens along the beam, what is added spreads
at 45 degrees. Where a beam that frames in parts two panels of slab, it is as much concrete as they
are.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

from ifccheck.beam import Axis, Beam, Flange, Member, Ring, Run, Slab
from ifccheck.frame.along import varies
from ifccheck.frame.figures import figure_of, narrowest
from ifccheck.frame.reaches import Reach, Side, apart, bridged, reaches, spread
from ifccheck.frame.webs import Web, webs_of

if TYPE_CHECKING:
    from shapely import Polygon

TOUCHING = 10.0
"""Gap up to which a slab meets a beam, and difference up to which they are level [mm]"""
HORIZONTAL = 1e-3
"""Slope up to which a beam is level"""
LEAST = 30.0
"""A slab that is thinner, or reaches out less, is no flange [mm]"""
LAP = 1.0
"""By how much the box of a flange reaches into the beam's side [mm]"""
FARTHEST = 0.1
"""Part of a beam's length beyond which no overhang counts"""
LOWER_HALF = "it lies in the lower half of the beam's depth"
VARIES = "the beam's section varies along it"


@dataclass(frozen=True, slots=True)
class Meeting:
    """Slabs that meet a beam, and what of them may count."""

    flanges: tuple[Flange, ...]
    doubts: tuple[str, ...]
    """Slabs of which nothing counts, and why"""


class _Strip(NamedTuple):
    """Slab along one side of a beam, at one level; what has one such key is of one piece."""

    outward: float
    bottom: float
    top: float
    on_top: bool
    face: float
    middle: float


def meetings(
    beams: Sequence[Beam], slabs: Sequence[Slab], members: Sequence[Member]
) -> dict[str, Meeting]:
    """What the slabs of a model may be to each beam that they meet, by the beam's key.

    Parameters
    ----------
    beams
        Those without a readable body, or on a slope, meet nothing.
    slabs, members
        Of the same model, the beams among the members.
    """
    if not slabs:
        return {}
    from shapely import STRtree

    concrete = {beam.step_id for beam in beams}
    plans, webs = [_polygon(slab.rings) for slab in slabs], webs_of(members, concrete)
    slab_tree, web_tree = STRtree(plans), STRtree([web.plan for web in webs])
    found: dict[str, Meeting] = {}
    for beam in beams:
        if not beam.runs or beam.axis is None or abs(beam.axis.x[2]) > HORIZONTAL:
            continue
        rows = sorted(slab_tree.query(_footprint(beam, beam.axis).buffer(TOUCHING)).tolist())
        near = {i for row in rows for i in web_tree.query(plans[row].buffer(TOUCHING)).tolist()}
        others = [webs[i] for i in sorted(near) if webs[i].step != beam.step_id]
        around = _Around(beam, beam.axis, others, concrete)
        meeting = around.meeting([(slabs[row], plans[row]) for row in rows])
        if meeting.flanges or meeting.doubts:
            found[beam.key] = meeting
    return found


def _polygon(rings: Sequence[Ring]) -> Polygon:
    from shapely import Polygon

    return Polygon(rings[0], rings[1:])


def _footprint(beam: Beam, axis: Axis) -> Polygon:
    from shapely import Polygon

    ys = [y for run in beam.runs for ring in run.outline.rings for y, _ in ring]
    (x0, y0, _), (x, y, _), (left_x, left_y, _) = axis.origin, axis.x, axis.y
    ends = ((0.0, min(ys)), (beam.length, min(ys)), (beam.length, max(ys)), (0.0, max(ys)))
    return Polygon([(x0 + a * x + b * left_x, y0 + a * y + b * left_y) for a, b in ends])


@dataclass(frozen=True)
class _Around:
    """A beam and the members near the slabs that it meets."""

    beam: Beam
    axis: Axis
    others: Sequence[Web]
    concrete: set[int]
    """Step ids of the beams in scope"""

    def meeting(self, slabs: Sequence[tuple[Slab, Polygon]]) -> Meeting:
        """What the slabs may be to the beam."""
        strips: dict[_Strip, list[Reach]] = defaultdict(list)
        doubts: dict[str, None] = {}
        for slab, plan in slabs:
            for run in self.beam.runs:
                for strip, reach in self._beside(run, slab, plan):
                    if doubt := slab.doubt or self._doubt(run, slab):
                        doubts[f"{slab.name}: {doubt}"] = None
                    else:
                        strips[strip].append(reach)
        flanges = [
            flange for strip, rows in strips.items() for flange in self._flanges(strip, rows)
        ]
        return Meeting(tuple(flanges), tuple(doubts))

    def _doubt(self, run: Run, slab: Slab) -> str:
        """Why a slab counts for nothing at a run."""
        if varies(self.beam.runs):
            return VARIES
        _, low, _, high = figure_of(run.outline).bounds
        bottom = slab.bottom - self.axis.origin[2]
        return LOWER_HALF if bottom < (low + high) / 2.0 else ""

    def _beside(self, run: Run, slab: Slab, plan: Polygon) -> Iterator[tuple[_Strip, Reach]]:
        """What of a slab lies beside a run of the beam, and what of it on top."""
        base, (_, low, _, high) = self.axis.origin[2], figure_of(run.outline).bounds
        bottom, top = slab.bottom - base, slab.top - base
        if bottom >= low - TOUCHING and min(top, high) - bottom >= LEAST:
            yield from self._along(run, slab, plan, (bottom, min(top, high)), on_top=False)
        thickness = top - max(bottom, high)
        if low < bottom <= high + TOUCHING and thickness >= LEAST:
            yield from self._along(run, slab, plan, (high, high + thickness), on_top=True)

    def _along(
        self, run: Run, slab: Slab, plan: Polygon, heights: tuple[float, float], *, on_top: bool
    ) -> Iterator[tuple[_Strip, Reach]]:
        _, (right, left) = narrowest(figure_of(run.outline))
        for outward in (1.0, -1.0):
            face, back = _faces(run, heights, outward, on_top=on_top)
            side = (
                Side(face, back, back + 1.0, 0.0)
                if on_top
                else Side(face, face - TOUCHING, face + TOUCHING, LEAST)
            )
            webs = [
                (self._local(web.plan, outward), web.name)
                for web in self.others
                if web.runs_with(self.axis)
                and web.high > slab.bottom - TOUCHING
                and web.low < slab.top - TOUCHING
            ]
            level = round(heights[0], 1), round(heights[1], 1)
            strip = _Strip(outward, *level, on_top, face, (right + left) / 2.0)
            local = self._local(plan, outward)
            for reach in reaches(slab, local, webs, side, run.start, run.end):
                yield strip, reach

    def _local(self, plan: Polygon, outward: float) -> Polygon:
        """A plan in the axes of the beam, y to its left, or to its right for -1."""
        from shapely.affinity import affine_transform

        (x0, y0, _), (x, y, _) = self.axis.origin, self.axis.x
        across = outward * self.axis.y[0], outward * self.axis.y[1]
        back = -(x * x0 + y * y0), -(across[0] * x0 + across[1] * y0)
        moved: Polygon = affine_transform(plan, [x, y, *across, *back])
        return moved

    def _flanges(self, strip: _Strip, found: Sequence[Reach]) -> Iterator[Flange]:
        """The boxes of slab along one side at one level."""
        length = self.beam.length
        whole = bridged(apart(found), self._framing(strip), strip.face)
        for one in spread(whole, length, FARTHEST * length):
            if not strip.on_top and one.reach < LEAST:
                continue
            inner = strip.outward * strip.middle if strip.on_top else strip.face - LAP
            outer = strip.face + one.reach
            limit = f"half the clear distance to {one.limit}" if one.limit else "its edge"
            yield Flange(
                start=one.start,
                end=one.end,
                right=min(strip.outward * inner, strip.outward * outer),
                left=max(strip.outward * inner, strip.outward * outer),
                bottom=strip.bottom,
                top=strip.top,
                origin=f"{one.slab.name}, to {limit}",
                strength=one.slab.strength,
                on_top=strip.on_top,
            )

    def _framing(self, strip: _Strip) -> list[Polygon]:
        """Plans of concrete beams across this one that fill the depth of the slab."""
        base = self.axis.origin[2]
        return [
            self._local(web.plan, strip.outward)
            for web in self.others
            if web.step in self.concrete
            and not web.runs_with(self.axis)
            and web.low <= base + strip.bottom + TOUCHING
            and web.high >= base + strip.top - TOUCHING
        ]


def _faces(
    run: Run, heights: tuple[float, float], outward: float, *, on_top: bool
) -> tuple[float, float]:
    """y of a side of the beam at the level of a slab and of the other side, outward positive."""
    from shapely import box

    figure = figure_of(run.outline)
    right, _, left, high = figure.bounds
    low, top = (high - 1.0, high) if on_top else heights
    right, _, left, _ = figure.intersection(box(right - 1.0, low, left + 1.0, top)).bounds
    return (left, right) if outward > 0.0 else (-right, -left)
