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
from collections.abc import Collection, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property, lru_cache
from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from ifccheck.beam import Axis, Beam, Flange, Member, Outline, Ring, Run, Slab
from ifccheck.frame.along import varies
from ifccheck.frame.boxes import extent_of
from ifccheck.frame.contacts import kind_of
from ifccheck.frame.figures import figure_of, narrowest
from ifccheck.frame.reaches import NextWeb, Plan, Reach, Side, apart, bridged, reaches, spread
from ifccheck.frame.webs import Web, levels_of, ring_of, webs_of

if TYPE_CHECKING:
    from shapely import STRtree
    from shapely.geometry.base import BaseGeometry

TOUCHING = 10.0
"""Gap up to which a slab meets a beam, and difference up to which they are level [mm]"""
HORIZONTAL = 1e-3
"""Slope up to which a beam is level"""
LEAST = 30.0
"""A slab that is thinner, or reaches out less, is no flange [mm]"""
LAP = 1.0
"""How far over its middle a slab on top may begin [mm]"""
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


NO_MEETING = Meeting((), ())


class _Strip(NamedTuple):
    """Slab along one side of a beam, at one level; what has one such key is of one piece."""

    outward: float
    bottom: float
    top: float
    on_top: bool
    face: float
    middle: float


class Slabs:
    """The slabs of a model, and which of them meet its beams.

    Parameters
    ----------
    beams
        Those without a readable body, or on a slope, meet nothing.
    slabs, members
        Of the same model, the beams among the members.
    """

    def __init__(
        self, beams: Sequence[Beam], slabs: Sequence[Slab], members: Sequence[Member]
    ) -> None:
        self._slabs, self._members = slabs, members
        self._concrete = {beam.step_id: beam for beam in beams}
        self._level = [
            one for one in beams if one.runs and one.axis and abs(one.axis.x[2]) <= HORIZONTAL
        ]
        self._webs: dict[int, list[Web]] = {}

    def names_near(self, beam: Beam) -> tuple[str, ...]:
        """Names of the slabs whose boxes touch a beam."""
        return self._named.get(beam.key, ())

    @cached_property
    def _named(self) -> dict[str, tuple[str, ...]]:
        slabs = [one for one in self._members if kind_of(one.ifc_class) == "IfcSlab"]
        plans = [(ring_of(slab.box),) for slab in slabs]
        heights = [levels_of(slab.box) for slab in slabs]
        return {
            key: tuple(dict.fromkeys(_called(slabs[row]) for row in rows))
            for key, rows in _near(self._level, plans, heights).items()
        }

    @cached_property
    def _near(self) -> dict[str, list[int]]:
        heights = [(slab.bottom, slab.top) for slab in self._slabs]
        return _near(self._level, [slab.rings for slab in self._slabs], heights)

    def meeting(self, beam: Beam) -> Meeting:
        """What the slabs may be to a beam that they meet."""
        rows = self._near.get(beam.key, ())
        if not rows or beam.axis is None:
            return NO_MEETING
        others = {web.step: web for row in rows for web in self._webs_beside(row)}
        others.pop(beam.step_id, None)
        around = _Around(beam, beam.axis, tuple(others.values()), self._concrete.keys())
        return around.meeting([self._slabs[row] for row in rows])

    def _webs_beside(self, row: int) -> list[Web]:
        """The members in plan over or beside a slab."""
        if row not in self._webs:
            tree, webs = self._tree
            near = tree.query(_box_round(self._slabs[row].rings[0])).tolist()
            self._webs[row] = [webs[i] for i in sorted(near)]
        return self._webs[row]

    @cached_property
    def _tree(self) -> tuple[STRtree, list[Web]]:
        from shapely import STRtree

        webs = [web for web in webs_of(self._members, self._concrete) if web.ring]
        return STRtree([_box_round(web.ring) for web in webs]), webs


def _box_round(ring: Ring) -> BaseGeometry:
    from shapely import box

    xs, ys = zip(*ring, strict=True)
    found: BaseGeometry = box(min(xs), min(ys), max(xs), max(ys))
    return found


def _called(member: Member) -> str:
    return f"{member.name or member.guid} ({member.ifc_class})"


def _near(
    beams: Sequence[Beam], plans: Sequence[Plan], heights: Sequence[tuple[float, float]]
) -> dict[str, list[int]]:
    """Rows of the plans that touch each beam and share some height with it, by its key."""
    found: dict[str, list[int]] = defaultdict(list)
    if not (beams and plans):
        return found
    import shapely

    places, own = zip(*map(footprint, beams), strict=True)
    tree = shapely.STRtree(_polygons(plans))
    pairs = tree.query(shapely.polygons(list(places)), predicate="intersects")
    (soffit, top), (bottom, upper) = np.array(own)[pairs[0]].T, np.array(heights)[pairs[1]].T
    level = pairs[:, (bottom <= top + TOUCHING) & (upper >= soffit)]
    for beam, row in sorted(zip(*level.tolist(), strict=True)):
        found[beams[beam].key].append(row)
    return found


def _polygons(plans: Sequence[Plan]) -> NDArray[np.object_]:
    """Many plans as polygons; one that covers nothing as an empty one."""
    import shapely

    rings = [ring for plan in plans for ring in plan if ring]
    of_plan = [row for row, plan in enumerate(plans) for ring in plan if ring]
    found = np.full(len(plans), shapely.Polygon(), dtype=np.object_)
    if rings:
        points = np.array([point for ring in rings for point in ring])
        of_ring = np.repeat(np.arange(len(rings)), list(map(len, rings)))
        lines = np.asarray(shapely.linearrings(points, indices=of_ring), dtype=np.object_)
        rows, number = np.unique(of_plan, return_inverse=True)
        found[rows] = shapely.polygons(lines, indices=number)
    return found


def footprint(beam: Beam) -> tuple[list[tuple[float, float]], tuple[float, float]]:
    """The rectangle that a beam covers in plan, a little grown, and its soffit and top."""
    assert beam.axis is not None
    extents = [extent_of(run.outline) for run in beam.runs]
    least_y, greatest_y, least_z, greatest_z = zip(*extents, strict=True)
    (x0, y0, z0), (x, y, _), (left_x, left_y, _) = beam.axis.origin, beam.axis.x, beam.axis.y
    right, left = min(least_y) - TOUCHING, max(greatest_y) + TOUCHING
    ends = ((0.0, right), (beam.length, right), (beam.length, left), (0.0, left))
    corners = [(x0 + a * x + b * left_x, y0 + a * y + b * left_y) for a, b in ends]
    return corners, (z0 + min(least_z), z0 + max(greatest_z))


@dataclass(frozen=True)
class _Around:
    """A beam and the members near the slabs that it meets."""

    beam: Beam
    axis: Axis
    others: Sequence[Web]
    concrete: Collection[int]
    """Step ids of the beams in scope"""

    def meeting(self, slabs: Sequence[Slab]) -> Meeting:
        """What the slabs may be to the beam."""
        strips: dict[_Strip, list[Reach]] = defaultdict(list)
        doubts: dict[str, None] = {}
        for slab in slabs:
            for run in self.beam.runs:
                for strip, reach in self._beside(run, slab):
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

    def _beside(self, run: Run, slab: Slab) -> Iterator[tuple[_Strip, Reach]]:
        """What of a slab lies beside a run of the beam, and what of it on top."""
        base, (_, low, _, high) = self.axis.origin[2], figure_of(run.outline).bounds
        bottom, top = slab.bottom - base, slab.top - base
        if bottom >= low - TOUCHING and min(top, high) - bottom >= LEAST:
            yield from self._along(run, slab, (bottom, min(top, high)), on_top=False)
        thickness = top - max(bottom, high)
        if low < bottom <= high + TOUCHING and thickness >= LEAST:
            yield from self._along(run, slab, (high, high + thickness), on_top=True)

    def _along(
        self, run: Run, slab: Slab, heights: tuple[float, float], *, on_top: bool
    ) -> Iterator[tuple[_Strip, Reach]]:
        _, (right, left) = narrowest(figure_of(run.outline))
        middle = (right + left) / 2.0
        for outward in (1.0, -1.0):
            own_web = left if outward > 0.0 else -right
            face = _face(run, heights, outward, on_top=on_top)
            begin = outward * middle if on_top else face - TOUCHING
            latest = begin + LAP if on_top else face + TOUCHING
            side = Side(face, own_web, begin, latest, 0.0 if on_top else LEAST)
            webs = [
                NextWeb(
                    whole=self._local((web.ring,), outward),
                    core=self._local((web.core,), outward),
                    name=web.name,
                )
                for web in self.others
                if web.runs_with(self.axis)
                and web.high > slab.bottom - TOUCHING
                and web.low < slab.top - TOUCHING
            ]
            low, high = round(heights[0], 1), round(heights[1], 1)
            strip = _Strip(outward, low, high, on_top, face, middle)
            local = self._local(slab.rings, outward)
            for reach in reaches(slab, local, webs, side, run.start, run.end):
                yield strip, reach

    def _local(self, rings: Sequence[Ring], outward: float) -> Plan:
        """A plan in the axes of the beam, y to its left, or to its right for -1."""
        (x0, y0, _), (x, y, _) = self.axis.origin, self.axis.x
        across, along = outward * self.axis.y[0], outward * self.axis.y[1]
        return tuple(
            tuple(
                ((a - x0) * x + (b - y0) * y, (a - x0) * across + (b - y0) * along) for a, b in ring
            )
            for ring in rings
        )

    def _flanges(self, strip: _Strip, found: Sequence[Reach]) -> Iterator[Flange]:
        """The boxes of slab along one side at one level."""
        length = self.beam.length
        whole = bridged(apart(found), self._framing(strip), strip.face)
        for one in spread(whole, length, FARTHEST * length):
            if not strip.on_top and one.reach < LEAST:
                continue
            inner = strip.outward * strip.middle if strip.on_top else strip.face
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
                step=one.slab.step_id,
                outward=0.0 if strip.on_top else strip.outward,
            )

    def _framing(self, strip: _Strip) -> list[Plan]:
        """Plans of concrete beams across this one that fill the depth of the slab."""
        base = self.axis.origin[2]
        return [
            self._local((web.ring,), strip.outward)
            for web in self.others
            if web.step in self.concrete
            and not web.runs_with(self.axis)
            and web.low <= base + strip.bottom + TOUCHING
            and web.high >= base + strip.top - TOUCHING
        ]


def _face(run: Run, heights: tuple[float, float], outward: float, *, on_top: bool) -> float:
    """y of a side of the beam at the level of a slab, outward positive."""
    _, _, _, high = figure_of(run.outline).bounds
    right, left = _sides_between(run.outline, *((high - 1.0, high) if on_top else heights))
    return left if outward > 0.0 else -right


@lru_cache(maxsize=4096)
def _sides_between(outline: Outline, low: float, high: float) -> tuple[float, float]:
    """How far an outline reaches to the right and to the left between two heights."""
    from shapely import box

    figure = figure_of(outline)
    right, _, left, _ = figure.bounds
    right, _, left, _ = figure.intersection(box(right - 1.0, low, left + 1.0, high)).bounds
    return right, left
