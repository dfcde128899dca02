"""Bodies of the model: an extruded profile in the building, and the cuts made into it."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from ifccheck.ifc.clips import Cloud, Cut, read_cut
from ifccheck.ifc.entity import REPRESENTATION, Entity, UnreadableError, get, need, numbers
from ifccheck.ifc.placements import IDENTITY, Matrix
from ifccheck.ifc.profile_curves import Points
from ifccheck.ifc.profile_shapes import Profile
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.vectors import Triple, combined, cross, scaled, unit

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

SOLID_TYPES = frozenset({
    "SweptSolid", "AdvancedSweptSolid", "Clipping", "CSG", "Brep", "AdvancedBrep", "SolidModel",
    "MappedRepresentation", "Tessellation", "SurfaceModel", "SectionedSpine",
})  # fmt: skip

BOOLEANS = ("IfcBooleanResult", "IfcBooleanClippingResult")
DEEPEST = 20
"""Mapped items nested deeper than this refer to each other."""
RIGID = 1e-9
"""How far from unit length and square an axis may be by rounding."""

UNIT = np.eye(2)


class Placed(NamedTuple):
    """A representation item, and the matrix that carries it into the building."""

    item: Entity
    matrix: Matrix
    mapped: bool
    """Through a mapped item, so that the matrix may scale and mirror."""


@dataclass(frozen=True)
class Prism:
    """A profile in the building, extruded along a vector, with half-spaces cut off [mm]."""

    profile: Profile
    matrix: Matrix
    """Rigid, from the profile's plane into the building; x and y are square unit vectors."""
    along: Triple
    cuts: tuple[Cut, ...] = ()

    def placed(self, points: Points) -> Cloud:
        """Return points of the profile's plane in the building."""
        return np.asarray(points @ self.matrix[:3, :2].T + self.matrix[:3, 3])

    def corners(self) -> Cloud:
        """Return the corners of the body before it is cut."""
        face = self.placed(self.profile.rings[0])
        return np.concatenate((face, face + self.along))

    @property
    def axes(self) -> tuple[Triple, Triple, Triple]:
        """The x, y of the profile's plane and the normal to their right hand."""
        x, y, _ = self.matrix[:3, :3].T.tolist()
        return x, y, cross(x, y)


def body_items(context: Context, product: Entity) -> list[Placed]:
    """Return the items of a product's body, mapped ones resolved, each with its matrix."""
    shape = product.get_argument(REPRESENTATION)
    representation = body_representation(shape) if shape is not None else None
    if representation is None:
        return []
    whole = context.placements.matrix(product)
    return list(resolved_items(context, representation, whole))


def body_representation(shape: Entity) -> Entity | None:
    """Return the representation that holds the body: the one named so, else the first solid."""
    solid: Entity | None = None
    for representation in shape.get_argument(2) or ():
        name = representation.get_argument(1)
        if name == "Body":
            return representation
        if solid is None and not name and representation.get_argument(2) in SOLID_TYPES:
            solid = representation
    return solid


def resolved_items(
    context: Context, representation: Entity, matrix: Matrix, depth: int = 0
) -> Iterator[Placed]:
    """Return the items of a representation, mapped ones resolved."""
    if depth > DEEPEST:
        raise UnreadableError("mapped items refer to each other")
    for item in representation.get_argument(3) or ():
        if item.is_a() != "IfcMappedItem":
            yield Placed(item, matrix, depth > 0)
            continue
        source = need(item, "MappingSource")
        mapping = context.placements.operator(need(item, "MappingTarget"))
        origin = context.placements.axes(get(source, "MappingOrigin"))
        inner = need(source, "MappedRepresentation")
        yield from resolved_items(context, inner, matrix @ mapping @ origin, depth + 1)


def read_prism(context: Context, profiles: Profiles, placed: Placed) -> Prism:
    """Return an extruded item with its cuts; raises UnreadableError for any other kind."""
    item, matrix, mapped = placed
    cuts: list[Cut] = []
    while item.is_a() in BOOLEANS:
        if get(item, "Operator") != "DIFFERENCE":
            raise UnreadableError(f"body is a boolean {get(item, 'Operator')}: no plain extrusion")
        cuts.append(read_cut(need(item, "SecondOperand"), context.placements))
        item = need(item, "FirstOperand")
    if item.is_a() != "IfcExtrudedAreaSolid":
        raise UnreadableError(f"body is an {item.is_a()}: no plain extrusion")
    prism = extrusion(context, profiles, Placed(item, matrix, mapped))
    return replace(prism, cuts=tuple(cut.moved(matrix) for cut in cuts)) if cuts else prism


def extrusion(context: Context, profiles: Profiles, placed: Placed) -> Prism:
    """Return an IfcExtrudedAreaSolid in the building; the taper of a tapered one is not in it."""
    item, matrix, mapped = placed
    area, position, along = extruded(context, item)
    profile = profiles.of(area)
    axes = context.placements.axes(position)
    whole = matrix if axes is IDENTITY else matrix @ axes
    along = combined(whole[:3, :3].T.tolist(), along)
    return _unscaled(profile, whole, along) if mapped else Prism(profile, whole, along)


def extruded(context: Context, item: Entity) -> tuple[Entity, Entity | None, Triple]:
    """Return what is extruded, where it is placed, and how far, in its own coordinates [mm]."""
    area, position, direction, depth = (item.get_argument(number) for number in range(4))
    if area is None or direction is None or depth is None:
        raise UnreadableError("body is an extrusion without a profile, a direction or a depth")
    depth *= context.units.length
    if not (math.isfinite(depth) and depth > 0.0):
        raise UnreadableError(f"body is extruded by {depth:g} mm")
    return area, position, scaled(unit(numbers(direction, 3)), depth)


def _unscaled(profile: Profile, matrix: Matrix, along: Triple) -> Prism:
    """The prism of a profile whose plane may be scaled, mirrored or skewed by a mapped item."""
    plane = matrix[:3, :2]
    if np.abs(plane.T @ plane - UNIT).max() < RIGID:
        return Prism(profile, matrix, along)
    x, y = plane.T
    first = x / np.sqrt(x @ x)
    second = y - (y @ first) * first
    second /= np.sqrt(second @ second)
    shape = np.eye(4)
    shape[:2, :2] = ((x @ first, y @ first), (0.0, y @ second))
    rigid = matrix.copy()
    rigid[:3, 0], rigid[:3, 1] = first, second
    return Prism(profile.moved(shape), rigid, along)
