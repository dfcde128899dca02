"""A body as a straight member: span direction, outline square to it, and oblique ends.

Rules. The span runs along the extrusion, or, where the profile is a convex elevation with two
parallel long sides (a rectangle, a parallelogram, a beam with mitred ends), along those sides
if they are longer. Length is measured on the line through the outline's centroid, between the
planes that end the body. A body whose oblique ends take up more than half of its length, or
that is cut along its length, has no constant section and is not read.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Axis, Box, Outline
from ifccheck.ifc.bodies import Prism
from ifccheck.ifc.clips import Vector, acts
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix, cross_product
from ifccheck.ifc.profile_curves import Corner, Points, ring
from ifccheck.ifc.profiles import Elevation, Profile, Turned

VERTICAL = math.cos(math.radians(10.0))
"""A member within ten degrees of the vertical stands."""
CLEARLY_LONGER = 1.1
"""The span must be this much longer than the next candidate."""
OBLIQUE_SHARE = 0.5
"""Greatest share of the length that oblique ends may take up."""
STEEP_CUT = 0.5
"""Slant of an end in elevation, along the axis per height, beyond which the depth near the
end is in doubt."""
TIE = 1e-6
VARIES = "section varies along the beam: not read yet"

Place3 = tuple[float, float, float]
Plane = tuple[Vector, float]
"""A plane that ends a member: outward normal in the member's axes, and its distance from the
member's base point along that normal."""


@dataclass(frozen=True)
class Straight:
    """A straight member: axis, outline, the box round it, and how its ends slant."""

    axis: Axis
    outline: Outline
    box: Box
    oblique: tuple[float, float]
    """Stretch along the axis over which the start and the end are cut obliquely [mm]."""
    steep: tuple[bool, bool]
    """Whether the depth near the start and the end is reduced by the slant."""


@dataclass(frozen=True)
class _Member:
    """A section in the axes (rows of ``frame``) of a member, about a base point."""

    frame: Matrix
    base: Vector
    section: Turned
    planes: tuple[Plane, ...]


def straighten(prism: Prism, placement: Matrix) -> Straight:
    """Return a prism as a straight member; raises UnreadableError where it is none."""
    length = math.sqrt(prism.along @ prism.along)
    elevation = prism.profile.elevation
    if elevation is None:
        if length < prism.profile.diameter:
            raise UnreadableError(VARIES)
        member = _along_extrusion(prism, placement)
    else:
        _require_clear(length, elevation.length, elevation.depth)
        if elevation.length > length:
            member = _along_elevation(prism, elevation, placement)
        else:
            member = _along_extrusion(prism, placement)
    return _finished(member, _cut_planes(prism, member))


def _require_clear(length: float, side: float, depth: float) -> None:
    """Raise UnreadableError where nobody can tell along which side the beam spans."""
    ranked = sorted((length, side, depth), reverse=True)
    if ranked[0] < CLEARLY_LONGER * ranked[1]:
        size = " x ".join(f"{value:.0f}" for value in ranked)
        raise UnreadableError(f"span direction unclear: body is {size} mm")


def _along_extrusion(prism: Prism, placement: Matrix) -> _Member:
    frame = _frame(prism.along, placement)
    section = prism.profile.turned(frame[1:] @ prism.matrix[:3, :2])
    normal = frame @ prism.normal
    reach = frame @ prism.along
    if normal @ reach < 0.0:
        normal = -normal
    planes = ((-normal, 0.0), (normal, float(normal @ reach)))
    return _Member(frame, prism.matrix[:3, 3], section, planes)


def _along_elevation(prism: Prism, elevation: Elevation, placement: Matrix) -> _Member:
    """The body swept along the two parallel sides of its profile, ended by the other sides."""
    corners = prism.placed(elevation.corners)
    count = len(corners)
    sides = [corners[(row + 1) % count] - corners[row] for row in range(count)]
    frame = _frame(sides[elevation.first], placement)
    base = corners[elevation.first]
    local = (corners - base) @ frame.T
    width = frame @ prism.along
    far = local[elevation.second]
    around = [(0.0, 0.0), width[1:], width[1:] + far[1:], far[1:]]
    section = ring([Corner((float(y), float(z))) for y, z in around])
    middle = local.mean(axis=0)
    planes = []
    for row in range(count):
        if row not in (elevation.first, elevation.second):
            normal = np.array(cross_product((frame @ sides[row]).tolist(), width.tolist()))
            normal = normal if normal @ (local[row] - middle) > 0.0 else -normal
            planes.append((normal, float(normal @ local[row])))
    turned = Profile((section,), prism.profile.name).turned(np.eye(2))
    return _Member(frame, base, turned, tuple(planes))


def _frame(span: Vector, placement: Matrix) -> Matrix:
    """Rows: the axes x along the span from the start, y to the left, z up."""
    a, b, c = span.tolist()
    length = math.sqrt(a * a + b * b + c * c)
    x = (a / length, b / length, c / length)
    if abs(x[2]) > VERTICAL:
        raise UnreadableError("vertical member")
    cosines = (np.array(x) @ placement[:3, :3]).tolist()
    most = max(abs(value) for value in cosines)
    if next(value for value in cosines if abs(value) >= most - TIE) < 0.0:
        x = (-x[0], -x[1], -x[2])
    level = math.hypot(x[0], x[1])
    y = (-x[1] / level, x[0] / level, 0.0)
    return np.array((x, y, cross_product(x, y)))


def _cut_planes(prism: Prism, member: _Member) -> tuple[Plane, ...]:
    if not prism.cuts:
        return ()
    corners = prism.corners()
    return tuple(
        (member.frame @ cut.outward, float(cut.outward @ (cut.point - member.base)))
        for cut in prism.cuts
        if acts(cut, corners)
    )


def _finished(member: _Member, cuts: tuple[Plane, ...]) -> Straight:
    section, planes = member.section, member.planes + cuts
    starts, ends = _reach(planes, section.rings[0])
    (start,), (end,) = _reach(planes, np.array([section.centroid]))
    length = float(end - start)
    if not length > 0.0:
        raise UnreadableError("nothing is left of the body after its cuts")
    first, last = float(starts.min()), float(ends.max())
    oblique = float(starts.max()) - first, last - float(ends.min())
    if sum(oblique) > OBLIQUE_SHARE * length or (ends <= starts).any():
        raise UnreadableError(VARIES)
    low, high = (first, *section.low), (last, *section.high)
    x, y, z = (_triple(row) for row in member.frame)
    origin = (float(start), (section.low[0] + section.high[0]) / 2.0, section.low[1])
    axis = Axis(_place(member, origin), x, y, z, round(length, 6))
    centre = [(a + b) / 2.0 for a, b in zip(low, high, strict=True)]
    half = [(b - a) / 2.0 for a, b in zip(low, high, strict=True)]
    box = Box(_place(member, centre), (x, y, z), _triple(half))
    steep = _steep(planes, section.rings[0], starts, ends)
    return Straight(axis, section.outline, box, oblique, steep)


def _reach(planes: Sequence[Plane], points: Points) -> tuple[Vector, Vector]:
    """Where lines along the span through points of the outline start and end [mm]."""
    starts = np.full(len(points), -np.inf)
    ends = np.full(len(points), np.inf)
    for normal, offset in planes:
        size = math.sqrt(normal @ normal)
        if abs(normal[0]) < 1e-6 * size:
            raise UnreadableError("body is cut along its length: not read yet")
        reach = (offset - points @ normal[1:]) / normal[0]
        if normal[0] > 0:
            np.minimum(ends, reach, out=ends)
        else:
            np.maximum(starts, reach, out=starts)
    return starts, ends


def _steep(
    planes: Sequence[Plane], points: Points, starts: Vector, ends: Vector
) -> tuple[bool, bool]:
    steep = [False, False]
    for normal, offset in planes:
        if abs(normal[2]) > STEEP_CUT * abs(normal[0]):
            reach = (offset - points @ normal[1:]) / normal[0]
            limit = ends if normal[0] > 0 else starts
            if np.abs(reach - limit).min() < 1e-6:
                steep[int(normal[0] > 0)] = True
    return steep[0], steep[1]


def _place(member: _Member, local: Sequence[float]) -> Place3:
    """A place in the member's axes, in the building."""
    return _triple(member.base + np.array(local) @ member.frame)


def _triple(values: Vector | Sequence[float]) -> Place3:
    x, y, z = values.tolist() if isinstance(values, np.ndarray) else values
    return round(x, 9), round(y, 9), round(z, 9)
