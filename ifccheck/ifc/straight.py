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
import numpy.typing as npt

from ifccheck.beam import Axis, Box, Outline
from ifccheck.ifc.bodies import Prism
from ifccheck.ifc.clips import Vector, acts
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.profile_curves import Points, signed_area
from ifccheck.ifc.profiles import Profile

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


@dataclass(frozen=True)
class Sweep:
    """A ring set swept along a span vector, ended by planes: (point, outward normal)."""

    rings: tuple[npt.NDArray[np.float64], ...]
    """Points in space [mm]; their place along the span does not matter."""
    span: Vector
    ends: tuple[tuple[Vector, Vector], ...]


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


def straighten(prism: Prism, placement: Matrix) -> Straight:
    """Return a prism as a straight member; raises UnreadableError where it is none."""
    sweep = _sweep(prism)
    frame = _frame(sweep.span, placement)
    base = sweep.rings[0][0]
    rings = tuple(
        _oriented((ring - base) @ frame[1:].T, hole=n > 0) for n, ring in enumerate(sweep.rings)
    )
    planes = [(frame @ normal, float(normal @ (point - base))) for point, normal in sweep.ends]
    planes += _cut_planes(prism, frame, base)
    return _member(prism.profile.name, rings, planes, frame, base)


def _sweep(prism: Prism) -> Sweep:
    faces = prism.faces()
    length = float(np.sqrt(prism.along @ prism.along))
    elevation = _elevation(prism, faces)
    if elevation is None:
        size = _diameter(faces[0])
        if length < size:
            raise UnreadableError(VARIES)
        return _along(prism, faces)
    sides, across = elevation
    _require_clear(length, *sides)
    return across if sides[0] > length else _along(prism, faces)


def _along(prism: Prism, faces: Sequence[npt.NDArray[np.float64]]) -> Sweep:
    normal = prism.normal
    if normal @ prism.along < 0:
        normal = -normal
    start = faces[0][0]
    ends = ((start, -normal), (start + prism.along, normal))
    return Sweep(tuple(faces), prism.along, ends)


def _elevation(
    prism: Prism, faces: Sequence[npt.NDArray[np.float64]]
) -> tuple[tuple[float, float], Sweep] | None:
    """The profile taken as an elevation: its length and depth, and the body swept along it."""
    if len(faces) > 1:
        return None
    flat = prism.profile.rings[0]
    keep = _corner_rows(flat)
    face = faces[0][keep]
    if len(face) > 12 or not _convex(flat[keep]):
        return None
    edges = np.roll(face, -1, axis=0) - face
    lengths = np.sqrt((edges * edges).sum(axis=1))
    first = int(lengths.argmax())
    direction = edges[first] / lengths[first]
    opposite = [n for n in range(len(face)) if _opposed(edges[n] / lengths[n], direction)]
    if len(opposite) != 1:
        return None
    second = opposite[0]
    width = prism.along
    near, far = face[first], face[second]
    ring = np.array((near, near + width, far + width, far))
    middle = face.mean(axis=0) + width / 2.0
    ends = []
    for number in range(len(face)):
        if number not in (first, second):
            normal = np.cross(edges[number], width)
            outward = normal if normal @ (face[number] - middle) > 0 else -normal
            ends.append((face[number], outward))
    across = far - near
    depth = float(np.sqrt(max(0.0, across @ across - (across @ direction) ** 2)))
    return (float(lengths[first]), depth), Sweep((ring,), edges[first], tuple(ends))


def _opposed(edge: Vector, direction: Vector) -> bool:
    return float(edge @ direction) < 0.0 and _sine(edge, direction) < 1e-5


def _sine(first: Vector, second: Vector) -> float:
    normal = np.cross(first, second)
    return float(np.sqrt(normal @ normal))


def _corner_rows(points: Points) -> list[int]:
    """Rows of a polygon at which it turns."""
    back = points - np.roll(points, 1, axis=0)
    ahead = np.roll(points, -1, axis=0) - points
    turn = back[:, 0] * ahead[:, 1] - back[:, 1] * ahead[:, 0]
    size = np.hypot(*back.T) * np.hypot(*ahead.T)
    return np.flatnonzero(np.abs(turn) > 1e-7 * size).tolist()


def _convex(points: Points) -> bool:
    back = points - np.roll(points, 1, axis=0)
    ahead = np.roll(points, -1, axis=0) - points
    return bool((back[:, 0] * ahead[:, 1] - back[:, 1] * ahead[:, 0] > 0).all())


def _diameter(points: npt.NDArray[np.float64]) -> float:
    apart = points[:, None, :] - points[None, :, :]
    return float(np.sqrt((apart * apart).sum(axis=2).max()))


def _require_clear(length: float, side: float, depth: float) -> None:
    """Raise UnreadableError where nobody can tell along which side the beam spans."""
    longest, *_ = ranked = sorted((length, side, depth), reverse=True)
    if longest < CLEARLY_LONGER * ranked[1]:
        raise UnreadableError(
            f"span direction unclear: body is {longest:.0f} x {ranked[1]:.0f} x {ranked[2]:.0f} mm"
        )


def _frame(span: Vector, placement: Matrix) -> Matrix:
    """Rows: the axes x along the span from the start, y to the left, z up."""
    x = span / np.sqrt(span @ span)
    if abs(x[2]) > VERTICAL:
        raise UnreadableError("vertical member")
    cosines = x @ placement[:3, :3]
    sizes = np.abs(cosines)
    nearest = int(np.flatnonzero(sizes >= sizes.max() - TIE)[0])
    if cosines[nearest] < 0:
        x = -x
    z = np.array((0.0, 0.0, 1.0)) - x[2] * x
    z /= np.sqrt(z @ z)
    return np.array((x, np.cross(z, x), z))


def _oriented(points: Points, hole: bool) -> Points:
    return points if (signed_area(points) > 0) != hole else points[::-1]


Plane = tuple[Vector, float]
"""Outward normal in the member's axes, and its distance from the base point along it."""


def _cut_planes(prism: Prism, frame: Matrix, base: Vector) -> list[Plane]:
    if not prism.cuts:
        return []
    corners = prism.corners()
    return [
        (frame @ cut.outward, float(cut.outward @ (cut.point - base)))
        for cut in prism.cuts
        if acts(cut, corners)
    ]


def _member(
    name: str, rings: tuple[Points, ...], planes: Sequence[Plane], frame: Matrix, base: Vector
) -> Straight:
    centroid = np.array([Profile(rings).centroid])
    starts, ends = _reach(planes, rings[0])
    (start,), (end,) = _reach(planes, centroid)
    if not end - start > 0:
        raise UnreadableError("nothing is left of the body after its cuts")
    oblique = float(starts.max() - starts.min()), float(ends.max() - ends.min())
    if sum(oblique) > OBLIQUE_SHARE * (end - start) or (ends <= starts).any():
        raise UnreadableError(VARIES)
    low, high = rings[0].min(axis=0), rings[0].max(axis=0)
    middle = np.array(((low[0] + high[0]) / 2.0, low[1]))
    axis = Axis(
        origin=_vector(base + np.array((start, *middle)) @ frame),
        x=_vector(frame[0]),
        y=_vector(frame[1]),
        z=_vector(frame[2]),
        length=round(float(end - start), 6),
    )
    outline = Outline(tuple(_ring(points - middle) for points in rings), name)
    box = _box(frame, base, (starts.min(), *low), (ends.max(), *high))
    return Straight(axis, outline, box, oblique, _steep(planes, rings[0], starts, ends))


def _reach(planes: Sequence[Plane], points: Points) -> tuple[Vector, Vector]:
    """Where lines along the span through points of the outline start and end [mm]."""
    starts = np.full(len(points), -np.inf)
    ends = np.full(len(points), np.inf)
    for normal, offset in planes:
        room = offset - points @ normal[1:]
        if abs(normal[0]) < 1e-6 * np.sqrt(normal @ normal):
            raise UnreadableError("body is cut along its length: not read yet")
        if normal[0] > 0:
            np.minimum(ends, room / normal[0], out=ends)
        else:
            np.maximum(starts, room / normal[0], out=starts)
    return starts, ends


def _steep(
    planes: Sequence[Plane], points: Points, starts: Vector, ends: Vector
) -> tuple[bool, bool]:
    steep = [False, False]
    for normal, offset in planes:
        reach = (offset - points @ normal[1:]) / normal[0]
        limit = ends if normal[0] > 0 else starts
        if np.abs(reach - limit).min() < 1e-6 and abs(normal[2]) > STEEP_CUT * abs(normal[0]):
            steep[int(normal[0] > 0)] = True
    return steep[0], steep[1]


def _vector(values: npt.NDArray[np.float64]) -> tuple[float, float, float]:
    x, y, z = np.round(values, 9).tolist()
    return x, y, z


def _ring(points: Points) -> tuple[tuple[float, float], ...]:
    return tuple((y, z) for y, z in np.round(points, 6).tolist())


def _box(frame: Matrix, base: Vector, low: Sequence[float], high: Sequence[float]) -> Box:
    lower, upper = np.array(low), np.array(high)
    centre = base + ((lower + upper) / 2.0) @ frame
    x, y, z = (_vector(row) for row in frame)
    return Box(_vector(centre), (x, y, z), _vector((upper - lower) / 2.0))
