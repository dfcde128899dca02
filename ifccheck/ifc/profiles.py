"""Profiles of the model as polygons in their own plane [mm]."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Outline
from ifccheck.ifc.entity import Entity, UnreadableError, get, several, text
from ifccheck.ifc.placements import IDENTITY, Matrix, Placements
from ifccheck.ifc.profile_curves import (
    Arc,
    Corner,
    Piece,
    Place,
    Points,
    after,
    before,
    read_pieces,
    ring,
    signed_area,
)

Vertex = tuple[float, float, float]
"""A corner and the radius that rounds it [mm]."""


@dataclass(frozen=True)
class Elevation:
    """A convex profile with two parallel long sides: rows of the corners that start them."""

    corners: Points
    """The corners at which the profile turns."""
    first: int
    """Row of the corner that starts the longest side."""
    second: int
    """Row of the corner that starts the side opposite."""
    length: float
    """Length of the longest side [mm]."""
    depth: float
    """Distance between the two sides [mm]."""


@dataclass(frozen=True)
class Turned:
    """A profile turned into the axes of a member: y to the left, z up, about its own origin."""

    corners: tuple[Place, ...]
    """Corners of the outer ring, then the centroid."""
    low: Place
    """Least y and z of the outer ring [mm]."""
    high: Place
    outline: Outline


@dataclass(frozen=True, eq=False)
class Profile:
    """A plane figure: the outer ring anticlockwise, then voids clockwise."""

    rings: tuple[Points, ...]
    name: str = ""
    _turned: dict[tuple[float, ...], Turned] = field(default_factory=dict, repr=False)

    @cached_property
    def area(self) -> float:
        """Area [mm2]."""
        return sum(signed_area(points.tolist()) for points in self.rings)

    @cached_property
    def centroid(self) -> Place:
        """Centroid of the area [mm]."""
        base = self.rings[0][0]
        area = moment_x = moment_y = 0.0
        for points in self.rings:
            x, y = (points - base).T
            next_x, next_y = after(x), after(y)
            twice = x * next_y - next_x * y
            area += float(twice.sum()) / 2.0
            moment_x += float((x + next_x) @ twice) / 6.0
            moment_y += float((y + next_y) @ twice) / 6.0
        return float(base[0] + moment_x / area), float(base[1] + moment_y / area)

    @cached_property
    def diameter(self) -> float:
        """Greatest distance between two corners [mm]."""
        points = self.rings[0]
        apart = points[:, None, :] - points[None, :, :]
        return float(np.sqrt((apart * apart).sum(axis=2).max()))

    @cached_property
    def longest_side(self) -> Place:
        """Direction of the longest side, a unit vector."""
        sides = after(self.rings[0]) - self.rings[0]
        x, y = sides[int((sides * sides).sum(axis=1).argmax())].tolist()
        length = math.hypot(x, y)
        return x / length, y / length

    @cached_property
    def extent(self) -> tuple[float, float, float, float]:
        """Least and greatest coordinates along its longest side and to the left of it [mm]."""
        x, y = self.longest_side
        local = self.rings[0] @ np.array(((x, -y), (y, x)))
        (low_x, low_y), (high_x, high_y) = local.min(axis=0).tolist(), local.max(axis=0).tolist()
        return low_x, high_x, low_y, high_y

    @cached_property
    def elevation(self) -> Elevation | None:
        """The profile as an elevation, None where it has no two parallel long sides."""
        return as_elevation(self.rings[0]) if len(self.rings) == 1 else None

    def turned(self, yx: float, yy: float, zx: float, zy: float) -> Turned:
        """Return the profile in other axes: y = yx X + yy Y, z = zx X + zy Y."""
        key = (round(yx, 9), round(yy, 9), round(zx, 9), round(zy, 9))
        if key not in self._turned:
            self._turned[key] = self._turn(key)
        return self._turned[key]

    def _turn(self, turn: tuple[float, float, float, float]) -> Turned:
        matrix = np.eye(4)
        matrix[:2, :2] = np.reshape(turn, (2, 2))
        moved = self.moved(matrix)
        low, high = moved.rings[0].min(axis=0).tolist(), moved.rings[0].max(axis=0).tolist()
        middle = np.array(((low[0] + high[0]) / 2.0, low[1]))
        rings = tuple(
            tuple((y, z) for y, z in np.round(points - middle, 6).tolist())
            for points in moved.rings
        )
        outline = Outline(rings, self.name)
        corners = (*((y, z) for y, z in moved.rings[0].tolist()), moved.centroid)
        return Turned(corners, (low[0], low[1]), (high[0], high[1]), outline)

    def moved(self, matrix: Matrix) -> Profile:
        """Return the profile after a transformation in its plane, mirrored ones included."""
        turn, shift = matrix[:2, :2], matrix[:2, 3]
        rings = tuple(points @ turn.T + shift for points in self.rings)
        if turn[0, 0] * turn[1, 1] < turn[0, 1] * turn[1, 0]:
            rings = tuple(points[::-1] for points in rings)
        return Profile(rings, self.name)


MOST_CORNERS = 12
"""An elevation with mitred ends has few corners."""


def as_elevation(points: Points) -> Elevation | None:
    """Return a convex polygon with two parallel long sides as an elevation, else None."""
    corners = points[_turning(points)]
    if not 4 <= len(corners) <= MOST_CORNERS or not _convex(corners):
        return None
    sides = after(corners) - corners
    lengths = np.hypot(sides[:, 0], sides[:, 1])
    first = int(lengths.argmax())
    along = sides[first] / lengths[first]
    cosines = sides @ along / lengths
    sines = (sides[:, 1] * along[0] - sides[:, 0] * along[1]) / lengths
    opposite = np.flatnonzero((cosines < 0.0) & (np.abs(sines) < 1e-5))
    if len(opposite) != 1:
        return None
    second = int(opposite[0])
    across = corners[second] - corners[first]
    depth = abs(float(across[1] * along[0] - across[0] * along[1]))
    return Elevation(corners, first, second, float(lengths[first]), depth)


def _turns(points: Points) -> Points:
    back, ahead = points - before(points), after(points) - points
    return np.asarray(back[:, 0] * ahead[:, 1] - back[:, 1] * ahead[:, 0])


def _turning(points: Points) -> npt.NDArray[np.bool_]:
    """Which points of a polygon are corners."""
    back, ahead = points - before(points), after(points) - points
    size = np.hypot(*back.T) * np.hypot(*ahead.T)
    return np.asarray(np.abs(_turns(points)) > 1e-7 * size)


def _convex(points: Points) -> bool:
    return bool((_turns(points) > 0.0).all())


class Profiles:
    """The profiles of a model, each traced once."""

    def __init__(self, placements: Placements) -> None:
        self._placements = placements
        self._by_id: dict[int, Profile | UnreadableError] = {}

    def of(self, profile: Entity) -> Profile:
        """Return a profile as polygons; raises UnreadableError where it cannot be."""
        step_id = profile.id()
        if step_id not in self._by_id:
            try:
                self._by_id[step_id] = self._read(profile)
            except UnreadableError as error:
                self._by_id[step_id] = error
        found = self._by_id[step_id]
        if isinstance(found, UnreadableError):
            raise found
        return found

    def _read(self, profile: Entity) -> Profile:
        name = text(profile, "ProfileName")
        kind = profile.is_a()
        if get(profile, "ProfileType") == "CURVE":
            raise UnreadableError("profile is a curve without an area")
        if kind in ("IfcDerivedProfileDef", "IfcMirroredProfileDef"):
            found = self._derived(profile)
        elif kind == "IfcCompositeProfileDef":
            found = self._composite(profile)
        elif kind in ("IfcArbitraryClosedProfileDef", "IfcArbitraryProfileDefWithVoids"):
            found = self._arbitrary(profile)
        elif kind in FAMILIES:
            found = self._parametric(profile)
        else:
            raise UnreadableError(f"profile of class {kind}")
        if not (math.isfinite(found.area) and found.area > 0):
            raise UnreadableError("profile without an area")
        return Profile(found.rings, name or found.name)

    def _parametric(self, profile: Entity) -> Profile:
        scale = self._placements.scale

        def length(name: str, default: float | None = None) -> float:
            value = get(profile, name)
            if value is None and default is None:
                raise UnreadableError(f"{profile.is_a()} without {name}")
            return default if value is None and default is not None else float(value) * scale

        family = FAMILIES[profile.is_a()]
        for slope in SLOPES.get(family, ()):
            if get(profile, slope):
                raise UnreadableError(f"{profile.is_a()} with sloping faces")
        rings = tuple(ring(pieces, hole=number > 0) for number, pieces in enumerate(family(length)))
        matrix = self._placements.axes(get(profile, "Position"))
        return Profile(rings) if matrix is IDENTITY else Profile(rings).moved(matrix)

    def _arbitrary(self, profile: Entity) -> Profile:
        curves = (get(profile, "OuterCurve"), *several(profile, "InnerCurves"))
        rings = tuple(
            ring(read_pieces(curve, self._placements), hole=number > 0)
            for number, curve in enumerate(curves)
        )
        require_simple(rings)
        return Profile(rings)

    def _derived(self, profile: Entity) -> Profile:
        parent = self.of(get(profile, "ParentProfile"))
        if profile.is_a() == "IfcMirroredProfileDef":
            return parent.moved(np.diag((-1.0, 1.0, 1.0, 1.0)))
        return parent.moved(self._placements.operator(get(profile, "Operator")))

    def _composite(self, profile: Entity) -> Profile:
        from shapely import Polygon, unary_union

        parts = [self.of(part) for part in several(profile, "Profiles")]
        joined = unary_union([Polygon(part.rings[0], part.rings[1:]) for part in parts])
        if not isinstance(joined, Polygon):
            raise UnreadableError("composite profile of separate parts")
        rings = [joined.exterior, *joined.interiors]
        return Profile(
            tuple(
                ring([Corner((x, y)) for x, y in part.coords], hole=number > 0)
                for number, part in enumerate(rings)
            )
        )


def require_simple(rings: Sequence[Points]) -> None:
    """Raise UnreadableError where an outline crosses itself or a void leaves it."""
    from shapely import Polygon, is_valid

    if not is_valid(Polygon(rings[0], list(rings[1:]))):
        raise UnreadableError("outline crosses itself")


def rounded(vertices: Sequence[Vertex]) -> list[Piece]:
    """Return the edge of a polygon whose corners are rounded by their radii."""
    pieces: list[Piece] = []
    count = len(vertices)
    for number, (x, y, radius) in enumerate(vertices):
        if radius <= 0.0:
            pieces.append(Corner((x, y)))
        else:
            before, after = vertices[number - 1], vertices[(number + 1) % count]
            pieces.append(_fillet((x, y), radius, before[:2], after[:2]))
    return pieces


def _fillet(at: Place, radius: float, before: Place, after: Place) -> Arc:
    """The arc tangent to both edges that meet at a corner."""
    back, back_length = _direction(at, before)
    ahead, ahead_length = _direction(at, after)
    cosine = back[0] * ahead[0] + back[1] * ahead[1]
    half = math.acos(max(-1.0, min(1.0, cosine))) / 2.0
    tangent = radius / math.tan(half)
    if tangent > min(back_length, ahead_length) * (1 + 1e-9):
        raise UnreadableError("a rounding radius larger than the profile's side")
    bisector = ((back[0] + ahead[0]), (back[1] + ahead[1]))
    reach = radius / math.sin(half) / math.hypot(*bisector)
    centre = (at[0] + bisector[0] * reach, at[1] + bisector[1] * reach)
    start = (at[0] + back[0] * tangent, at[1] + back[1] * tangent)
    first = math.atan2(start[1] - centre[1], start[0] - centre[0])
    left = -back[0] * ahead[1] + back[1] * ahead[0] > 0
    sweep = math.pi - 2.0 * half
    return Arc(centre, (radius, 0.0), (0.0, radius), first, sweep if left else -sweep)


def _direction(start: Place, end: Place) -> tuple[Place, float]:
    along = (end[0] - start[0], end[1] - start[1])
    length = math.hypot(*along)
    if length == 0.0:
        raise UnreadableError("a profile with a side of no length")
    return (along[0] / length, along[1] / length), length


Length = Callable[..., float]
Edges = list[list[Piece]]


def _box(width: float, height: float, radius: float = 0.0) -> list[Piece]:
    x, y = width / 2.0, height / 2.0
    return rounded([(-x, -y, radius), (x, -y, radius), (x, y, radius), (-x, y, radius)])


def _rectangle(length: Length) -> Edges:
    return [_box(length("XDim"), length("YDim"))]


def _rounded_rectangle(length: Length) -> Edges:
    return [_box(length("XDim"), length("YDim"), length("RoundingRadius"))]


def _hollow_rectangle(length: Length) -> Edges:
    width, height, wall = length("XDim"), length("YDim"), length("WallThickness")
    inner = _box(width - 2 * wall, height - 2 * wall, length("InnerFilletRadius", 0.0))
    return [_box(width, height, length("OuterFilletRadius", 0.0)), inner]


def _trapezium(length: Length) -> Edges:
    x, y = length("BottomXDim") / 2.0, length("YDim") / 2.0
    left = -x + length("TopXOffset")
    right = left + length("TopXDim")
    return [rounded([(-x, -y, 0.0), (x, -y, 0.0), (right, y, 0.0), (left, y, 0.0)])]


def _oval(along: float, across: float) -> list[Piece]:
    return [Arc((0.0, 0.0), (along, 0.0), (0.0, across), 0.0, 2.0 * math.pi)]


def _circle(length: Length) -> Edges:
    return [_oval(length("Radius"), length("Radius"))]


def _hollow_circle(length: Length) -> Edges:
    inner = length("Radius") - length("WallThickness")
    return [_oval(length("Radius"), length("Radius")), _oval(inner, inner)]


def _ellipse(length: Length) -> Edges:
    return [_oval(length("SemiAxis1"), length("SemiAxis2"))]


@dataclass(frozen=True, slots=True)
class _Flange:
    width: float
    thickness: float
    fillet: float
    edge: float


def _flanged(bottom: _Flange, top: _Flange, depth: float, web: float) -> Edges:
    y, x = depth / 2.0, web / 2.0
    low, high = bottom.width / 2.0, top.width / 2.0
    under, over = -y + bottom.thickness, y - top.thickness
    right = [
        (low, -y, 0.0), (low, under, bottom.edge), (x, under, bottom.fillet),
        (x, over, top.fillet), (high, over, top.edge), (high, y, 0.0),
    ]  # fmt: skip
    return [rounded([*right, *((-at, height, r) for at, height, r in reversed(right))])]


def _i_shape(length: Length) -> Edges:
    flange = _Flange(
        length("OverallWidth"),
        length("FlangeThickness"),
        length("FilletRadius", 0.0),
        length("FlangeEdgeRadius", 0.0),
    )
    return _flanged(flange, flange, length("OverallDepth"), length("WebThickness"))


def _asymmetric_i_shape(length: Length) -> Edges:
    """IFC2X3 names the lower flange as that of the symmetric shape."""
    try:
        bottom = _Flange(
            length("BottomFlangeWidth"),
            length("BottomFlangeThickness"),
            length("BottomFlangeFilletRadius", 0.0),
            length("BottomFlangeEdgeRadius", 0.0),
        )
    except UnreadableError:
        bottom = _Flange(
            length("OverallWidth"), length("FlangeThickness"), length("FilletRadius", 0.0), 0.0
        )
    top = _Flange(
        length("TopFlangeWidth"),
        length("TopFlangeThickness", bottom.thickness),
        length("TopFlangeFilletRadius", 0.0),
        length("TopFlangeEdgeRadius", 0.0),
    )
    return _flanged(bottom, top, length("OverallDepth"), length("WebThickness"))


def _t_shape(length: Length) -> Edges:
    y, x = length("Depth") / 2.0, length("WebThickness") / 2.0
    wing, under = length("FlangeWidth") / 2.0, y - length("FlangeThickness")
    toe, fillet = length("WebEdgeRadius", 0.0), length("FilletRadius", 0.0)
    edge = length("FlangeEdgeRadius", 0.0)
    right = [(x, -y, toe), (x, under, fillet), (wing, under, edge), (wing, y, 0.0)]
    return [rounded([*right, *((-at, height, r) for at, height, r in reversed(right))])]


def _l_shape(length: Length) -> Edges:
    depth, thick = length("Depth"), length("Thickness")
    y, x = depth / 2.0, length("Width", depth) / 2.0
    edge, fillet = length("EdgeRadius", 0.0), length("FilletRadius", 0.0)
    corners = [
        (-x, -y, 0.0), (x, -y, 0.0), (x, -y + thick, edge), (-x + thick, -y + thick, fillet),
        (-x + thick, y, edge), (-x, y, 0.0),
    ]  # fmt: skip
    return [rounded(corners)]


def _u_shape(length: Length) -> Edges:
    y, x = length("Depth") / 2.0, length("FlangeWidth") / 2.0
    web, flange = length("WebThickness"), length("FlangeThickness")
    edge, fillet = length("EdgeRadius", 0.0), length("FilletRadius", 0.0)
    corners = [
        (-x, -y, 0.0), (x, -y, 0.0), (x, -y + flange, edge), (-x + web, -y + flange, fillet),
        (-x + web, y - flange, fillet), (x, y - flange, edge), (x, y, 0.0), (-x, y, 0.0),
    ]  # fmt: skip
    return [rounded(corners)]


def _c_shape(length: Length) -> Edges:
    y, x = length("Depth") / 2.0, length("Width") / 2.0
    wall, girth = length("WallThickness"), length("Girth")
    inner = length("InternalFilletRadius", 0.0)
    outer = inner + wall if inner > 0.0 else 0.0
    corners = [
        (-x, -y, outer), (x, -y, outer), (x, -y + girth, 0.0), (x - wall, -y + girth, 0.0),
        (x - wall, -y + wall, inner), (-x + wall, -y + wall, inner), (-x + wall, y - wall, inner),
        (x - wall, y - wall, inner), (x - wall, y - girth, 0.0), (x, y - girth, 0.0),
        (x, y, outer), (-x, y, outer),
    ]  # fmt: skip
    return [rounded(corners)]


def _z_shape(length: Length) -> Edges:
    y, half = length("Depth") / 2.0, length("WebThickness") / 2.0
    reach, flange = length("FlangeWidth") - half, length("FlangeThickness")
    edge, fillet = length("EdgeRadius", 0.0), length("FilletRadius", 0.0)
    corners = [
        (-half, -y, 0.0), (reach, -y, 0.0), (reach, -y + flange, edge),
        (half, -y + flange, fillet), (half, y, 0.0), (-reach, y, 0.0),
        (-reach, y - flange, edge), (-half, y - flange, fillet),
    ]  # fmt: skip
    return [rounded(corners)]


FAMILIES: dict[str, Callable[[Length], Edges]] = {
    "IfcRectangleProfileDef": _rectangle,
    "IfcRoundedRectangleProfileDef": _rounded_rectangle,
    "IfcRectangleHollowProfileDef": _hollow_rectangle,
    "IfcTrapeziumProfileDef": _trapezium,
    "IfcCircleProfileDef": _circle,
    "IfcCircleHollowProfileDef": _hollow_circle,
    "IfcEllipseProfileDef": _ellipse,
    "IfcIShapeProfileDef": _i_shape,
    "IfcAsymmetricIShapeProfileDef": _asymmetric_i_shape,
    "IfcTShapeProfileDef": _t_shape,
    "IfcLShapeProfileDef": _l_shape,
    "IfcUShapeProfileDef": _u_shape,
    "IfcCShapeProfileDef": _c_shape,
    "IfcZShapeProfileDef": _z_shape,
}

SLOPES: dict[Callable[[Length], Edges], tuple[str, ...]] = {
    _i_shape: ("FlangeSlope",),
    _asymmetric_i_shape: ("BottomFlangeSlope", "TopFlangeSlope"),
    _t_shape: ("FlangeSlope", "WebSlope"),
    _l_shape: ("LegSlope",),
    _u_shape: ("FlangeSlope",),
}
"""Attributes by which the faces of a family may slope."""
