"""Openings cut into a beam: the box, in the beam's own axes, round what each takes off it.

A box is never smaller than the opening: what it takes off besides is taken as gone too.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from ifccheck.beam import Axis, Opening, Run
from ifccheck.ifc.bodies import BOOLEANS, Placed, body_items, extrusion
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import (
    ILL_TYPED,
    NAME,
    Entity,
    UnreadableError,
    get,
    label,
    need,
    several,
    text_at,
)
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.points import points_of
from ifccheck.ifc.profile_curves import SAGITTA
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.tessellated import tessellated
from ifccheck.openings import OpeningShape

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

    from ifccheck.ifc.context import Context

FACETED = (
    "IfcFacetedBrep", "IfcTessellatedItem", "IfcShellBasedSurfaceModel",
    "IfcFaceBasedSurfaceModel",
)  # fmt: skip
"""Bodies with plane faces alone, which lie within the hull of their points."""

NOTHING = 0.1
"""What takes off less than this takes nothing off [mm]."""
SQUARE = 1e-6
"""Sine of the angle up to which a direction runs along an axis."""
EXACT = ("IfcRectangleProfileDef", "IfcCircleProfileDef")
"""Profiles of which the extent is known without tracing them."""


@dataclass(slots=True)
class Voids:
    """What was found of a beam's openings."""

    openings: list[Opening] = field(default_factory=list)
    unread: list[str] = field(default_factory=list)
    """Of which the extent cannot be told, with the reason"""
    missed: list[str] = field(default_factory=list)
    """That do not meet the body of the beam that they are said to cut"""


class _Extent(NamedTuple):
    """What a body covers along the axes of a beam [mm], and how it looks from its side."""

    low: Cloud
    high: Cloud
    shape: OpeningShape


class VoidReader:
    """Reads the openings of the beams of one model."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles

    def of(self, step_id: int, axis: Axis, runs: Sequence[Run]) -> Voids:
        """Return the openings of a beam: its own, those of its parts, which its body shows
        whole, and those of the wholes that it is part of."""
        found = Voids()
        relations, by_id = self._context.relations, self._context.file.by_id
        if not relations.openings:
            return found
        around = (*relations.descendants(step_id), *relations.ancestors(step_id))
        for number, owner in enumerate((step_id, *around)):
            for opening in map(by_id, relations.openings.get(owner, ())):
                self._read(opening, axis, runs, found, own=number == 0)
        return found

    def _read(
        self, opening: Entity, axis: Axis, runs: Sequence[Run], found: Voids, own: bool
    ) -> None:
        name = text_at(opening, NAME)
        origin = f'{label(opening)} "{name}"' if name else label(opening)
        try:
            items = body_items(self._context, opening)
            if not items:
                raise UnreadableError("it has no body")
            extents = [_grown(self._extent(item, axis, runs), item.item) for item in items]
        except (UnreadableError, *ILL_TYPED) as error:
            found.unread.append(f"{origin}: {error}")
            return
        boxes = [one for one in (_cut(e, axis, runs, origin) for e in extents) if one is not None]
        if not boxes and own:
            found.missed.append(origin)
        found.openings += [one for one in boxes if not _known(one, found.openings)]

    def _extent(self, placed: Placed, axis: Axis, runs: Sequence[Run]) -> _Extent:
        """What one item of an opening's body covers in the axes of the beam."""
        while placed.item.is_a() in BOOLEANS and get(placed.item, "Operator") == "DIFFERENCE":
            placed = placed._replace(item=need(placed.item, "FirstOperand"))
        if placed.item.is_a() == "IfcExtrudedAreaSolid":
            return self._extruded(placed, axis, runs)
        cloud = _local(self._points(placed), axis)
        return _Extent(cloud.min(axis=0), cloud.max(axis=0), "other")

    def _points(self, placed: Placed) -> Cloud:
        item, matrix, _ = placed
        if any(item.is_a(name) for name in FACETED):
            return _moved(points_of(self._context, item), matrix)
        return _moved(tessellated(item).points, matrix)

    def _extruded(self, placed: Placed, axis: Axis, runs: Sequence[Run]) -> _Extent:
        prism = extrusion(self._context, self._profiles, placed)
        frame = _frame(axis)
        start, along = _local(prism.placed(prism.profile.rings[0]), axis), frame @ prism.along
        kind = need(placed.item, "SweptArea").is_a()
        if kind == "IfcCircleProfileDef" and not placed.mapped:
            centre = _local(prism.placed(np.array([prism.profile.centroid])), axis)
            start = centre + self._reach(placed, frame @ np.array(prism.axes[:2]).T)
        near, far = _through(start, along, _sides(runs))
        cloud = np.concatenate((near, far))
        return _Extent(cloud.min(axis=0), cloud.max(axis=0), _seen(kind, along))

    def _reach(self, placed: Placed, plane: Cloud) -> Cloud:
        """Corners of the box round a circle about its centre, by its plane's axes in the beam's."""
        radius = float(need(need(placed.item, "SweptArea"), "Radius")) * self._context.units.length
        signs = np.array([[x, y, z] for x in (-1, 1) for y in (-1, 1) for z in (-1, 1)])
        return np.asarray(signs * radius * np.sqrt((plane**2).sum(axis=1)))


def _frame(axis: Axis) -> Cloud:
    return np.array((axis.x, axis.y, axis.z))


def _local(points: Cloud, axis: Axis) -> Cloud:
    """Places in the building, in the axes of the beam."""
    return np.asarray((points - np.array(axis.origin)) @ _frame(axis).T)


def _moved(points: Cloud, matrix: Matrix) -> Cloud:
    return np.asarray(points @ matrix[:3, :3].T + matrix[:3, 3])


def _through(start: Cloud, along: Cloud, sides: tuple[float, float]) -> tuple[Cloud, Cloud]:
    """The two ends of an extrusion, cut off at the sides of the beam where it passes both.

    A slanting pipe that sticks out far would otherwise seem to take the whole depth.
    """
    end = start + along
    if abs(along[1]) < SQUARE * np.sqrt(along @ along):
        return start, end
    shares = [(side - start[:, 1]) / along[1] for side in sides]
    first, last = np.minimum(*shares), np.maximum(*shares)
    if first.min() < 0.0 or last.max() > 1.0:
        return start, end
    return start + first[:, None] * along, start + last[:, None] * along


def _sides(runs: Sequence[Run]) -> tuple[float, float]:
    """Least and greatest y of a beam's body."""
    ys = [y for run in runs for outline in _outlines(run) for ring in outline for y, _ in ring]
    return min(ys), max(ys)


def _outlines(run: Run) -> Iterator[Sequence[Sequence[tuple[float, float]]]]:
    yield run.outline.rings
    if run.outline_end is not None:
        yield run.outline_end.rings


def _seen(kind: str, along: Cloud) -> OpeningShape:
    """How an extrusion looks from the side of the beam."""
    across = abs(along[1]) > (1.0 - SQUARE) * np.sqrt(along @ along)
    if kind == "IfcCircleProfileDef":
        return "circle" if across else "rectangle"
    return "rectangle" if kind == "IfcRectangleProfileDef" else "other"


def _grown(extent: _Extent, item: Entity) -> _Extent:
    """The extent with what tracing its curves may have cut short."""
    if item.is_a() == "IfcExtrudedAreaSolid":
        short = 0.0 if _straight_edged(need(item, "SweptArea")) else SAGITTA
    else:
        short = SAGITTA
    return extent._replace(low=extent.low - short, high=extent.high + short)


def _straight_edged(area: Entity) -> bool:
    """Whether the extent of a profile is known to the last digit."""
    curve = get(area, "OuterCurve")
    if curve is None:
        return area.is_a() in EXACT
    if curve.is_a() == "IfcIndexedPolyCurve":
        return not any(segment.is_a("IfcArcIndex") for segment in several(curve, "Segments"))
    return bool(curve.is_a() == "IfcPolyline")


def _cut(extent: _Extent, axis: Axis, runs: Sequence[Run], origin: str) -> Opening | None:
    """The box that an extent shares with the box round the beam; None where it takes nothing."""
    from shapely import box

    low, high = extent.low.tolist(), extent.high.tolist()
    start, end = max(low[0], 0.0), min(high[0], axis.length)
    met = [run for run in runs if run.start < end - NOTHING and run.end > start + NOTHING]
    if end - start < NOTHING or not met:
        return None
    right, left, bottom, top = _bounds(met)
    right, left = max(right, low[1]), min(left, high[1])
    bottom, top = max(bottom, low[2]), min(top, high[2])
    if left - right < NOTHING or top - bottom < NOTHING:
        return None
    taken = box(right, bottom, left, top)
    if not any(taken.intersection(_covered(run)).area > NOTHING**2 for run in met):
        return None
    start, end, right, left, bottom, top = (
        round(value, 6) for value in (start, end, right, left, bottom, top)
    )
    return Opening(start, end, right, left, bottom, top, extent.shape, origin)


def _rings(runs: Sequence[Run]) -> list[Sequence[Sequence[tuple[float, float]]]]:
    return [rings for run in runs for rings in _outlines(run)]


def _bounds(runs: Sequence[Run]) -> tuple[float, float, float, float]:
    points = [point for rings in _rings(runs) for ring in rings for point in ring]
    ys, zs = [y for y, _ in points], [z for _, z in points]
    return min(ys), max(ys), min(zs), max(zs)


def _covered(run: Run) -> BaseGeometry:
    """What a run covers as seen along the beam; of a taper the hull of both of its ends."""
    from shapely import MultiPoint

    if run.outline_end is None:
        return _polygon(run.outline.rings)
    return MultiPoint(
        [point for rings in _rings([run]) for ring in rings for point in ring]
    ).convex_hull


def _polygon(rings: Sequence[Sequence[tuple[float, float]]]) -> BaseGeometry:
    """What lies in an odd number of rings."""
    from shapely import Polygon

    shape: BaseGeometry = Polygon(rings[0])
    for ring in rings[1:]:
        shape = shape.symmetric_difference(Polygon(ring))
    return shape


def _known(opening: Opening, others: Sequence[Opening]) -> bool:
    """Whether the same box was found before: one opening told of a beam and of its whole."""
    return any(
        all(
            abs(getattr(opening, name) - getattr(other, name)) < NOTHING
            for name in ("start", "end", "right", "left", "bottom", "top")
        )
        for other in others
    )
