"""Bodies of bars: the centre lines and the thickness of what a solid draws."""

from __future__ import annotations

import math
from collections.abc import Hashable, Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.ifc.bar_breps import read_curved_bar
from ifccheck.ifc.bar_courses import JOINT_GAP
from ifccheck.ifc.bar_curves import read_path, read_swept_path
from ifccheck.ifc.bar_paths import Floats, Path, path_length, rounded, whole_arc
from ifccheck.ifc.bar_traces import as_point
from ifccheck.ifc.bar_tubes import Tube, find_tubes
from ifccheck.ifc.entity import Entity, UnreadableError, get, several
from ifccheck.ifc.placements import Matrix, Placements, unit
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.shells import FACED, listed_faces
from ifccheck.ifc.solids import Loop, facets
from ifccheck.ifc.units import ModelUnits

RECOVERED = "its axis is found from the faces of its body"
SWEPT = ("IfcSweptDiskSolid", "IfcSweptDiskSolidPolygonal")
SQUARE = 0.9999
"""Cosine of the angle to its profile within which a bar is pushed straight out of it."""
SAME_RADIUS = 0.02
"""Part of the radius by which the corners of a regular polygon may leave its circle."""
PLACE_STEPS = 1e4
"""Steps per mm within which bodies are equal."""
UNEVEN = 2.1
"""Ratio of the sides of a polygon that passes for a regular one: a side may be in two halves."""
SAME_SURFACE = 0.03
"""Relative difference between the surfaces of a curved body, cut into facets, and of its sweep."""


class Drawn(NamedTuple):
    """One bar that a solid draws."""

    path: Path
    least: float | None
    """Diameter [mm]; None where only a centre line is given."""
    most: float | None
    """Greater than ``least`` where a polygon stands for a circle: that round the polygon."""
    note: str = ""


class BarSolids:
    """Reads solids of bars."""

    def __init__(self, units: ModelUnits, placements: Placements) -> None:
        self._units = units
        self._placements = placements
        self._tubes: dict[Hashable, list[Tube]] = {}

    def of(self, item: Entity) -> list[Drawn]:
        """Return the bars that a solid or a curve draws.

        Raises UnreadableError where it is of a kind that is not read.
        """
        kind = item.is_a()
        if kind in SWEPT:
            return [self._swept(item)]
        if kind == "IfcExtrudedAreaSolid":
            return [self._extruded(item)]
        if kind == "IfcRevolvedAreaSolid":
            return [self._revolved(item)]
        if kind in FACED or kind == "IfcAdvancedBrep":
            try:
                return self._faced(item)
            except UnreadableError as error:
                raise UnreadableError(
                    f"has a body of kind {kind}: its axis is not found ({error})"
                ) from error
        if item.is_a("IfcCurve"):
            return [Drawn(read_path(item, self._units), None, None)]
        raise UnreadableError(f"has a body of kind {kind}, which is not read")

    def _swept(self, item: Entity) -> Drawn:
        argument = item.get_argument
        if argument(2):
            raise UnreadableError("is hollow, which is not read")
        path = read_swept_path(argument(0), argument(3), argument(4), self._units)
        if item.is_a() == "IfcSweptDiskSolidPolygonal" and argument(5):
            path = rounded(path, argument(5) * self._units.length)
        diameter = 2.0 * argument(1) * self._units.length
        return Drawn(path, diameter, diameter)

    def _extruded(self, solid: Entity) -> Drawn:
        """A circle or a regular polygon pushed along: a straight bar."""
        centre, least, most = self._profile(solid[0])
        direction = unit(solid[2][0])
        if abs(float(direction[2])) < SQUARE:
            raise UnreadableError("is extruded aslant, which is not read")
        along = direction * (solid[3] * self._units.length)
        position = self._placements.axes(solid[1])
        return Drawn(
            Path((_placed(position, centre), _placed(position, centre + along))), least, most
        )

    def _revolved(self, solid: Entity) -> Drawn:
        """A circle swung round an axis: a bend."""
        centre, least, most = self._profile(solid[0])
        axis = solid[2]
        along = np.array((0.0, 0.0, 1.0)) if axis[1] is None else unit(axis[1][0])
        foot = np.array(axis[0][0], dtype=float) * self._placements.scale
        foot = foot + ((centre - foot) @ along) * along
        arm = centre - foot
        radius = math.sqrt(float(arm @ arm))
        angle = solid[3] * self._units.angle
        if abs(float(along[2])) > math.sqrt(1.0 - SQUARE**2) or radius <= most / 2.0:
            raise UnreadableError("is revolved about an axis that is not read")
        if not 0.0 < angle < 2.0 * math.pi:
            raise UnreadableError("is revolved by an angle that is not read")
        frame = np.eye(4)
        frame[:3, 0], frame[:3, 2], frame[:3, 3] = arm / radius, along, foot
        frame[:3, 1] = np.cross(along, arm / radius)
        path = whole_arc(frame, radius, 0.0, angle)
        position = self._placements.axes(solid[1])
        points = tuple(_placed(position, np.array(point)) for point in path.points)
        return Drawn(Path(points, path.arcs), least, most)

    def _profile(self, profile: Entity) -> tuple[Floats, float, float]:
        """Middle, least and greatest diameter of a round profile [mm]."""
        kind = profile.is_a()
        if kind == "IfcCircleProfileDef":
            centre = self._placements.axes(get(profile, "Position"))[:3, 3]
            diameter = 2.0 * get(profile, "Radius") * self._units.length
            return np.asarray(centre), diameter, diameter
        if kind != "IfcArbitraryClosedProfileDef":
            raise UnreadableError(f"is extruded from an {kind}, which is not read")
        outer = get(profile, "OuterCurve")
        if outer.is_a("IfcCircle"):
            centre = self._placements.axes(get(outer, "Position"))[:3, 3]
            diameter = 2.0 * get(outer, "Radius") * self._units.length
            return np.asarray(centre), diameter, diameter
        return self._polygon(profile)

    def _polygon(self, profile: Entity) -> tuple[Floats, float, float]:
        (ring,) = Profiles(self._placements).of(profile).rings
        middle = ring.mean(axis=0)
        radii = np.sqrt(((ring - middle) ** 2).sum(axis=1))
        sides = np.sqrt((np.diff(ring, axis=0, append=ring[:1]) ** 2).sum(axis=1))
        uneven = radii.max() - radii.min() > SAME_RADIUS * radii.max()
        if uneven or sides.max() > UNEVEN * sides.min():
            raise UnreadableError("is extruded from an outline that is no regular polygon")
        half = float(sides.max()) / 2.0
        least = math.sqrt(max(float(radii.min()) ** 2 - half**2, 0.0))
        return np.append(middle, 0.0), 2.0 * least, 2.0 * float(radii.max())

    def _faced(self, item: Entity) -> list[Drawn]:
        if item.is_a() == "IfcAdvancedBrep":
            path, diameter = read_curved_bar(item, self._placements)
            _require_surface(item, path_length(path), diameter)
            return [Drawn(path, diameter, diameter, RECOVERED)]
        if several(item, "Voids"):
            raise UnreadableError("it has voids")
        points, faces = listed_faces(item, self._units.length)
        return [
            Drawn(_moved(tube.path, points[0]), tube.least, tube.most, RECOVERED)
            for tube in self._tubes_of(points - points[0], faces)
        ]

    def _tubes_of(self, points: Floats, faces: Sequence[Sequence[Loop]]) -> list[Tube]:
        """The tubes of a body that begins at the origin; equal bodies are looked at once."""
        steps = (np.rint(points * PLACE_STEPS) + 0.0).tobytes()  # without minus zeros
        key = steps, tuple(tuple(map(tuple, loops)) for loops in faces)
        if key not in self._tubes:
            self._tubes[key] = find_tubes(facets(points, faces))
        return self._tubes[key]


def _moved(path: Path, by: Floats) -> Path:
    return Path(tuple(as_point(np.array(point) + by) for point in path.points), path.arcs)


def _placed(position: Matrix, place: Floats) -> tuple[float, float, float]:
    return as_point(np.asarray(position[:3, :3] @ place + position[:3, 3]))


def _require_surface(item: Entity, length: float, diameter: float) -> None:
    """That the geometry engine finds the surface of the sweep in a curved body.

    Its facets may look to either side, so that they enclose no volume.
    """
    from ifccheck.ifc.tessellated import tessellated

    surface = float(np.sqrt((tessellated(item).normals ** 2).sum(axis=1)).sum()) / 2.0
    expected = math.pi * diameter * length + math.pi / 2.0 * diameter**2
    if abs(surface / expected - 1.0) > SAME_SURFACE:
        raise UnreadableError("its surface is not that of the sweep found for it")


def end_to_end(bars: Sequence[Drawn]) -> list[Drawn]:
    """Join parts of bars of one thickness that meet end to end."""
    left, whole = list(bars), list[Drawn]()
    while left:
        bar = left.pop(0)
        while (found := _next(bar, left)) is not None:
            number, first, second = found
            offset = len(first.points) - 1
            arcs = (*first.arcs, *(offset + at for at in second.arcs))
            bar = bar._replace(path=Path((*first.points, *second.points[1:]), arcs))
            del left[number]
        whole.append(bar)
    return whole


def _next(bar: Drawn, others: Sequence[Drawn]) -> tuple[int, Path, Path] | None:
    """Which part goes on from a bar, and both lines one after the other."""
    for number, other in enumerate(others):
        link = _link(bar.path, other.path) if bar.least == other.least else None
        if link is not None:
            return number, *link
    return None


def _link(one: Path, other: Path) -> tuple[Path, Path] | None:
    """Two lines turned so that the second goes on where the first ends; None where none does."""
    for first in (one, one.reversed()):
        for second in (other, other.reversed()):
            if math.dist(first.points[-1], second.points[0]) <= JOINT_GAP:
                return first, second
    return None
