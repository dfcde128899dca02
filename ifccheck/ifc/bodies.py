"""Bodies of the model: an extruded profile in the building, and the cuts made into it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.clips import Cloud, Cut, Vector, read_cut
from ifccheck.ifc.entity import Entity, UnreadableError, get, several
from ifccheck.ifc.placements import IDENTITY, Matrix, cross_product, ratios
from ifccheck.ifc.profile_curves import Points
from ifccheck.ifc.profiles import Profile, Profiles

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

SOLID_TYPES = frozenset({
    "SweptSolid", "AdvancedSweptSolid", "Clipping", "CSG", "Brep", "AdvancedBrep", "SolidModel",
    "MappedRepresentation", "Tessellation", "SurfaceModel", "SectionedSpine",
})  # fmt: skip

NOT_READ_YET = {
    "IfcFacetedBrep": "faceted Brep",
    "IfcFacetedBrepWithVoids": "faceted Brep",
    "IfcAdvancedBrep": "Brep with curved faces",
    "IfcAdvancedBrepWithVoids": "Brep with curved faces",
    "IfcTriangulatedFaceSet": "tessellation",
    "IfcPolygonalFaceSet": "tessellation",
    "IfcTriangulatedIrregularNetwork": "tessellation",
    "IfcShellBasedSurfaceModel": "surface model",
    "IfcFaceBasedSurfaceModel": "surface model",
    "IfcCsgSolid": "CSG solid",
    "IfcExtrudedAreaSolidTapered": "tapered extrusion",
    "IfcRevolvedAreaSolid": "revolved solid",
    "IfcRevolvedAreaSolidTapered": "revolved solid",
    "IfcSweptDiskSolid": "swept disk",
    "IfcSweptDiskSolidPolygonal": "swept disk",
    "IfcFixedReferenceSweptAreaSolid": "solid swept along a curve",
    "IfcSurfaceCurveSweptAreaSolid": "solid swept along a curve",
    "IfcDirectrixDerivedReferenceSweptAreaSolid": "solid swept along a curve",
    "IfcSectionedSpine": "sectioned solid",
    "IfcSectionedSolidHorizontal": "sectioned solid",
}

RIGID = 1e-9
"""How far from unit length and square an axis may be by rounding."""

Placed = tuple[Entity, Matrix]
"""A representation item and the matrix that carries it into the building."""


@dataclass(frozen=True)
class Prism:
    """A profile in the building, extruded along a vector, with half-spaces cut off [mm]."""

    profile: Profile
    matrix: Matrix
    """Rigid, from the profile's plane into the building; x and y are square unit vectors."""
    along: Vector
    cuts: tuple[Cut, ...] = ()

    def face(self) -> Cloud:
        """Return the corners of the outer ring of the face that the extrusion starts from."""
        return self.placed(self.profile.rings[0])

    def placed(self, points: Points) -> Cloud:
        """Return points of the profile's plane in the building."""
        return np.asarray(points @ self.matrix[:3, :2].T + self.matrix[:3, 3])

    def corners(self) -> Cloud:
        """Return the corners of the body before it is cut."""
        face = self.face()
        return np.concatenate((face, face + self.along))

    @property
    def normal(self) -> Vector:
        """Unit normal of the profile's plane, to the right hand of its x and y."""
        x, y = self.matrix[:3, 0].tolist(), self.matrix[:3, 1].tolist()
        return np.array(cross_product(x, y))


def body_items(context: Context, product: Entity) -> list[Placed]:
    """Return the items of a product's body, mapped ones resolved, each with its matrix."""
    shape = get(product, "Representation")
    representation = body_representation(shape) if shape is not None else None
    if representation is None:
        return []
    matrix = context.placements.matrix(product)
    return list(_resolved(context, representation, matrix, depth=0))


def body_representation(shape: Entity) -> Entity | None:
    """Return the representation that holds the body: the one named so, else the first solid."""
    solid: Entity | None = None
    for representation in several(shape, "Representations"):
        name = get(representation, "RepresentationIdentifier")
        if name == "Body":
            return representation
        if solid is None and not name and representation[2] in SOLID_TYPES:
            solid = representation
    return solid


def _resolved(
    context: Context, representation: Entity, matrix: Matrix, depth: int
) -> Iterator[Placed]:
    if depth > 20:
        raise UnreadableError("mapped items refer to each other")
    for item in several(representation, "Items"):
        if not item.is_a("IfcMappedItem"):
            yield item, matrix
            continue
        source = get(item, "MappingSource")
        mapping = context.placements.operator(get(item, "MappingTarget"))
        origin = context.placements.axes(get(source, "MappingOrigin"))
        inner = get(source, "MappedRepresentation")
        yield from _resolved(context, inner, matrix @ mapping @ origin, depth + 1)


def read_prism(context: Context, profiles: Profiles, placed: Placed) -> Prism:
    """Return an extruded item with its cuts; raises UnreadableError for any other kind."""
    item, matrix = placed
    cuts: list[Cut] = []
    while item.is_a("IfcBooleanResult"):
        if get(item, "Operator") != "DIFFERENCE":
            raise UnreadableError(f"body is a boolean {get(item, 'Operator')}: not read yet")
        cuts.append(read_cut(get(item, "SecondOperand"), context.placements))
        item = get(item, "FirstOperand")
    kind = item.is_a()
    if kind != "IfcExtrudedAreaSolid":
        raise UnreadableError(f"body is a {NOT_READ_YET.get(kind, kind)}: not read yet")
    prism = extrusion(context, profiles, item, matrix)
    return replace(prism, cuts=tuple(cut.moved(matrix) for cut in cuts)) if cuts else prism


def extrusion(context: Context, profiles: Profiles, item: Entity, matrix: Matrix) -> Prism:
    """Return an IfcExtrudedAreaSolid in the building; the taper of a tapered one is not in it."""
    profile = profiles.of(item[0])
    position = context.placements.axes(item[1])
    depth = item[3] * context.units.length
    if not (np.isfinite(depth) and depth > 0.0):
        raise UnreadableError(f"body is extruded by {depth:g} mm")
    whole = matrix if position is IDENTITY else matrix @ position
    along = whole[:3, :3] @ np.array([ratio * depth for ratio in ratios(item[2][0])])
    return _unscaled(profile, whole, along)


def _unscaled(profile: Profile, matrix: Matrix, along: Vector) -> Prism:
    """The prism of a profile whose plane may be scaled, mirrored or skewed by a mapped item."""
    x, y = matrix[:3, 0], matrix[:3, 1]
    square = abs(x @ y) < RIGID and abs(x @ x - 1.0) < RIGID and abs(y @ y - 1.0) < RIGID
    if square:
        return Prism(profile, matrix, along)
    first = x / np.sqrt(x @ x)
    second = y - (y @ first) * first
    second /= np.sqrt(second @ second)
    rigid = matrix.copy()
    rigid[:3, 0], rigid[:3, 1] = first, second
    shape = np.eye(4)
    shape[:2, :2] = ((x @ first, y @ first), (0.0, y @ second))
    return Prism(profile.moved(shape), rigid, along)
