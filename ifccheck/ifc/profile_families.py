"""The parametric profile families of IFC, as the edges of their figures.

Every family is centred on its bounding box, as the schema lays down.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.profile_curves import Arc, Corner, Piece, Place

Vertex = tuple[float, float, float]
"""A corner and the radius that rounds it [mm]."""
Length = Callable[..., float]
"""Gives the attribute of that name [mm]; a default where it may be empty."""
Edges = list[list[Piece]]


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


def _box(width: float, height: float, radius: float = 0.0) -> list[Piece]:
    if not (width > 0.0 and height > 0.0):
        raise UnreadableError("a rectangular profile of no width or height")
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
    bottom, y = length("BottomXDim"), length("YDim") / 2.0
    left = length("TopXOffset")
    right = left + length("TopXDim")
    middle = (min(0.0, left) + max(bottom, right)) / 2.0
    corners = [(0.0, -y), (bottom, -y), (right, y), (left, y)]
    return [rounded([(x - middle, height, 0.0) for x, height in corners])]


def _oval(along: float, across: float) -> list[Piece]:
    if not (along > 0.0 and across > 0.0):
        raise UnreadableError("a round profile of no radius")
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
    """The flange width is taken over the web; a reader that measures it from the web's middle
    draws a larger section."""
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
