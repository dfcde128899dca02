"""One beam drawn in every way that the schemas allow: the same solid by other entities.

A beam is given by its outline (y, z) [mm], its length, and its own axes: x along from its start,
y to the left, z up. ``Bodies`` writes it into any file; ``KINDS`` names the ways, with the
schemas that have them.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import ifcopenshell.geom
import numpy as np

from ifccheck.beam import Beam, Outline

Triple = tuple[float, float, float]
Places = Sequence[tuple[float, float]]

RECTANGLE: Places = ((-150, 0), (150, 0), (150, 500), (-150, 500))
TEE: Places = ((-125, 0), (125, 0), (125, 450), (500, 450), (500, 600), (-500, 600), (-500, 450),
               (-125, 450))  # fmt: skip
EYE: Places = ((-250, 0), (250, 0), (250, 150), (90, 220), (90, 620), (250, 690), (250, 800),
               (-250, 800), (-250, 690), (-90, 620), (-90, 220), (-250, 150))  # fmt: skip
TRAPEZOID: Places = ((-100, 0), (100, 0), (180, 600), (-180, 600))
ELL: Places = ((-150, 0), (150, 0), (150, 450), (550, 450), (550, 600), (-150, 600))
OUTLINES = {"rectangle": RECTANGLE, "tee": TEE, "eye": EYE, "trapezoid": TRAPEZOID, "ell": ELL}

ALL, FROM_4, ONLY_4X3 = ("IFC2X3", "IFC4", "IFC4X3"), ("IFC4", "IFC4X3"), ("IFC4X3",)


def same(place: Triple) -> Triple:
    return place


@dataclass
class Bodies:
    """Writes bodies of beams into a file; coordinates are in mm and in the beam's own axes."""

    file: Any
    mm: float = 1.0
    at: Callable[[Triple], Triple] = same
    """Where a place of the beam's own axes is in those of the element"""
    way: Callable[[Triple], Triple] = same

    def make(self, kind: str, *values: Any, **named: Any) -> Any:
        return self.file.create_entity(kind, *values, **named)

    def length(self, value: float) -> float:
        return float(value) / self.mm

    def flat(self, *place: float) -> Any:
        return self.make("IfcCartesianPoint", [self.length(value) for value in place])

    def point(self, x: float, y: float, z: float) -> Any:
        return self.flat(*self.at((x, y, z)))

    def direction(self, x: float, y: float, z: float) -> Any:
        return self.make("IfcDirection", [float(value) for value in self.way((x, y, z))])

    def axes(self, place: Triple = (0, 0, 0), z: Triple = (0, 0, 1), x: Triple = (1, 0, 0)) -> Any:
        return self.make(
            "IfcAxis2Placement3D", self.point(*place), self.direction(*z), self.direction(*x)
        )

    def up(self) -> Any:
        return self.make("IfcDirection", (0.0, 0.0, 1.0))

    def profile(self, places: Places) -> Any:
        points = [self.flat(y, z) for y, z in places]
        curve = self.make("IfcPolyline", [*points, points[0]])
        return self.make("IfcArbitraryClosedProfileDef", "AREA", None, curve)

    # One outline from end to end -----------------------------------------------------------------

    def extrusion(self, places: Places, start: float, end: float) -> Any:
        axes = self.axes((start, 0, 0), (1, 0, 0), (0, 1, 0))
        depth = self.length(end - start)
        return self.make("IfcExtrudedAreaSolid", self.profile(places), axes, self.up(), depth)

    def against(self, places: Places, start: float, end: float) -> Any:
        """The same, pushed from the end of the beam to its start."""
        axes = self.axes((end, 0, 0), (-1, 0, 0), (0, -1, 0))
        depth = self.length(end - start)
        mirrored = [(-y, z) for y, z in places]
        return self.make("IfcExtrudedAreaSolid", self.profile(mirrored), axes, self.up(), depth)

    def plan(self, places: Places, low: float, high: float) -> Any:
        """What its plan (x, y) makes, pushed down from its top."""
        axes = self.axes((0, 0, high), (0, 0, -1), (1, 0, 0))
        depth = self.length(high - low)
        mirrored = [(x, -y) for x, y in places]
        return self.make("IfcExtrudedAreaSolid", self.profile(mirrored), axes, self.up(), depth)

    def elevation(self, places: Places, width: float) -> Any:
        """What its elevation (x, z) makes, pushed across its width."""
        axes = self.axes((0, width / 2.0, 0), (0, -1, 0), (1, 0, 0))
        depth = self.length(width)
        return self.make("IfcExtrudedAreaSolid", self.profile(places), axes, self.up(), depth)

    def mapped(self, item: Any, **operator: Any) -> Any:
        context = next(iter(self.file.by_type("IfcGeometricRepresentationContext")))
        shape = self.make("IfcShapeRepresentation", context, "Body", "SweptSolid", [item])
        zero = self.make("IfcCartesianPoint", [0.0, 0.0, 0.0])
        source = self.make(
            "IfcRepresentationMap", self.make("IfcAxis2Placement3D", zero, None, None), shape
        )
        operator.setdefault("LocalOrigin", zero)
        kind = "IfcCartesianTransformationOperator3D"
        kind += "nonUniform" if "Scale2" in operator else ""
        return self.make("IfcMappedItem", source, self.make(kind, **operator))

    def half_space(self, place: Triple, normal: Triple) -> Any:
        """All that the normal points to, to be taken off."""
        across = (0, 0, 1) if abs(normal[2]) < 0.9 else (1, 0, 0)
        plane = self.make("IfcPlane", self.axes(place, normal, across))
        return self.make("IfcHalfSpaceSolid", plane, False)

    def less(self, solid: Any, *others: Any) -> Any:
        for other in others:
            solid = self.make("IfcBooleanResult", "DIFFERENCE", solid, other)
        return solid

    def block(self, low: Triple, high: Triple) -> Any:
        sides = [self.length(b - a) for a, b in zip(low, high, strict=True)]
        return self.make("IfcBlock", self.axes(low), *sides)

    def joined(self, *solids: Any) -> Any:
        whole = solids[0]
        for other in solids[1:]:
            whole = self.make("IfcBooleanResult", "UNION", whole, other)
        return whole

    # By faces ----------------------------------------------------------------------------------

    def corners(self, stations: Sequence[tuple[float, Places]]) -> list[Triple]:
        return [(x, y, z) for x, places in stations for y, z in places]

    def rings(self, stations: Sequence[tuple[float, Places]]) -> list[list[int]]:
        """Faces of the solid between outlines at several places, as rows of its corners."""
        count = len(stations[0][1])
        faces = [list(range(count))[::-1]]
        for place in range(len(stations) - 1):
            a, b = place * count, (place + 1) * count
            around = [(k, (k + 1) % count) for k in range(count)]
            faces += [[a + k, a + n, b + n, b + k] for k, n in around]
        last = (len(stations) - 1) * count
        faces.append([last + k for k in range(count)])
        return faces

    def _faces(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> list[Any]:
        points = [self.point(*corner) for corner in corners]
        made = []
        for face in faces:
            loop = self.make("IfcPolyLoop", [points[row] for row in face])
            made.append(self.make("IfcFace", [self.make("IfcFaceOuterBound", loop, True)]))
        return made

    def brep(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        shell = self.make("IfcClosedShell", self._faces(corners, faces))
        return self.make("IfcFacetedBrep", shell)

    def shells(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        shell = self.make("IfcClosedShell", self._faces(corners, faces))
        return self.make("IfcShellBasedSurfaceModel", [shell])

    def face_model(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        made = self._faces(corners, faces)
        sets = [self.make("IfcConnectedFaceSet", made[:2]),
                self.make("IfcConnectedFaceSet", made[2:])]  # fmt: skip
        return self.make("IfcFaceBasedSurfaceModel", sets)

    def _list(self, corners: Sequence[Triple]) -> Any:
        rows = [[self.length(value) for value in self.at(corner)] for corner in corners]
        return self.make("IfcCartesianPointList3D", rows)

    def polygons(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        made = [self.make("IfcIndexedPolygonalFace", [row + 1 for row in face]) for face in faces]
        return self.make("IfcPolygonalFaceSet", self._list(corners), True, made)

    def triangles(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        rows = [[row + 1 for row in each] for each in triangulated(corners, faces)]
        return self.make("IfcTriangulatedFaceSet", self._list(corners), None, True, rows)

    def advanced(self, corners: Sequence[Triple], faces: Sequence[Sequence[int]]) -> Any:
        """A Brep of plane faces between straight edges."""
        vertices = [self.make("IfcVertexPoint", self.point(*corner)) for corner in corners]
        edges: dict[tuple[int, int], Any] = {}
        made = []
        for face in faces:
            sides = list(zip(face, [*face[1:], face[0]], strict=True))
            oriented = [self._oriented(one, other, corners, vertices, edges)
                        for one, other in sides]  # fmt: skip
            loop = self.make("IfcEdgeLoop", oriented)
            bound = self.make("IfcFaceOuterBound", loop, True)
            a, b = (np.subtract(corners[face[k]], corners[face[0]]) for k in (1, -1))
            normal = np.cross(a, b) / np.linalg.norm(np.cross(a, b))
            plane = self.make(
                "IfcPlane",
                self.axes(corners[face[0]], tuple(normal), tuple(a / np.linalg.norm(a))),
            )
            made.append(self.make("IfcAdvancedFace", [bound], plane, True))
        return self.make("IfcAdvancedBrep", self.make("IfcClosedShell", made))

    def _oriented(self, one: int, other: int, corners: Sequence[Triple],
                  vertices: Sequence[Any], edges: dict[tuple[int, int], Any]) -> Any:  # fmt: skip
        key = (min(one, other), max(one, other))
        if key not in edges:
            first, last = corners[key[0]], corners[key[1]]
            along = np.subtract(last, first)
            size = float(np.linalg.norm(along))
            way = self.direction(*(along / size))
            line = self.make("IfcLine", self.point(*first),
                             self.make("IfcVector", way, self.length(size)))  # fmt: skip
            edges[key] = self.make("IfcEdgeCurve", vertices[key[0]], vertices[key[1]], line, True)
        return self.make("IfcOrientedEdge", None, None, edges[key], one == key[0])

    # Along a line --------------------------------------------------------------------------------

    def line(self, *xs: float) -> Any:
        return self.make("IfcPolyline", [self.point(x, 0, 0) for x in xs])

    def spine(self, stations: Sequence[tuple[float, Places]]) -> Any:
        parts = [
            self.make("IfcCompositeCurveSegment", "CONTINUOUS", True, self.line(a, b))
            for (a, _), (b, _) in pairwise(stations)
        ]
        curve = self.make("IfcCompositeCurve", parts, False)
        profiles = [self.profile(places) for _, places in stations]
        axes = [self.axes((x, 0, 0), (1, 0, 0), (0, 1, 0)) for x, _ in stations]
        return self.make("IfcSectionedSpine", curve, profiles, axes)

    def horizontal(self, stations: Sequence[tuple[float, Places]]) -> Any:
        directrix = self.line(stations[0][0], stations[-1][0])
        profiles = [self.profile(places) for _, places in stations]
        distances = [self.length(x - stations[0][0]) for x, _ in stations]
        points = [
            self.make("IfcPointByDistanceExpression", self.make("IfcLengthMeasure", d),
                      None, None, None, directrix)
            for d in distances
        ]  # fmt: skip
        places = [self.make("IfcAxis2PlacementLinear", each) for each in points]
        return self.make("IfcSectionedSolidHorizontal", directrix, profiles, places)

    def tapered(self, first: Places, last: Places, length: float) -> Any:
        axes = self.axes((0, 0, 0), (1, 0, 0), (0, 1, 0))
        return self.make(
            "IfcExtrudedAreaSolidTapered", self.profile(first), axes, self.up(),
            self.length(length), self.profile(last),
        )  # fmt: skip

    def rod(self, radius: float, length: float) -> Any:
        ends = (0.0, 1.0) if self.file.schema == "IFC2X3" else (None, None)
        line = self.line(0.0, length)
        return self.make("IfcSweptDiskSolid", line, self.length(radius), None, *ends)


def triangulated(
    corners: Sequence[Triple], faces: Sequence[Sequence[int]]
) -> list[tuple[int, int, int]]:
    """Faces as triangles, each cut off at the first corner where one fits."""
    found = []
    for face in faces:
        rest = list(face)
        points = np.array(corners, dtype=float)
        normal = sum(np.cross(points[a], points[b])
                     for a, b in zip(rest, [*rest[1:], rest[0]], strict=True))  # fmt: skip
        while len(rest) > 3:
            for at in range(len(rest)):
                ear = (rest[at - 1], rest[at], rest[(at + 1) % len(rest)])
                if _is_ear(points, ear, rest, normal):
                    found.append(ear)
                    del rest[at]
                    break
            else:
                raise ValueError("a face that cannot be cut into triangles")
        found.append((rest[0], rest[1], rest[2]))
    return found


def _is_ear(points: Any, ear: tuple[int, int, int], rest: Sequence[int], normal: Any) -> bool:
    a, b, c = (points[row] for row in ear)
    if np.dot(np.cross(b - a, c - a), normal) <= 1e-9:
        return False
    for row in rest:
        if row not in ear:
            p = points[row]
            turns = [np.dot(np.cross(v - u, p - u), normal) for u, v in ((a, b), (b, c), (c, a))]
            if min(turns) >= 0.0:
                return False
    return True


Maker = Callable[[Bodies, Places, float], list[Any]]


def _stations(places: Places, length: float) -> list[tuple[float, Places]]:
    return [(0.0, places), (length, places)]


def _by_faces(write: Callable[..., Any], pieces: int = 1) -> Maker:
    def made(bodies: Bodies, places: Places, length: float) -> list[Any]:
        stations = [(length * k / pieces, places) for k in range(pieces + 1)]
        return [write(bodies, bodies.corners(stations), bodies.rings(stations))]

    return made


def _clipped(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """A longer one, cut square at both ends and once where there is nothing."""
    solid = bodies.extrusion(places, -400.0, length + 700.0)
    cuts = [((0, 0, 0), (-1, 0, 0)), ((length, 0, 0), (1, 0, 0)), ((0, 0, 5000), (0, 0, 1))]
    for place, normal in cuts:
        half = bodies.half_space(place, normal)  # type: ignore[arg-type]
        solid = bodies.make("IfcBooleanClippingResult", "DIFFERENCE", solid, half)
    return [solid]


def _cut_by_solids(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """A longer one, cut by a Brep at the start and by a block at the end."""
    wide = ((-900, -300), (900, -300), (900, 1500), (-900, 1500))
    ends = [(-600.0, wide), (0.0, wide)]
    brep = bodies.brep(bodies.corners(ends), bodies.rings(ends))
    block = bodies.block((length, -900, -300), (length + 900, 900, 1500))
    return [bodies.less(bodies.extrusion(places, -400.0, length + 700.0), brep, block)]


def _cut_from_the_side(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """Its box, with prisms of what is not its outline taken off along the whole length."""
    ys, zs = [y for y, _ in places], [z for _, z in places]
    low, high = (min(ys), min(zs)), (max(ys), max(zs))
    box = [(low[0], low[1]), (high[0], low[1]), (high[0], high[1]), (low[0], high[1])]
    whole = bodies.extrusion(box, 0.0, length)
    taken = [bodies.extrusion(rest, -50.0, length + 50.0) for rest in _rest(places)]
    return [bodies.less(whole, *taken)]


def _rest(places: Places) -> list[Places]:
    from shapely import Polygon, box

    outline = Polygon(places)
    rest = box(*outline.bounds).difference(outline)
    parts = [part for part in getattr(rest, "geoms", [rest]) if not part.is_empty]
    return [list(part.exterior.coords)[:-1] for part in parts]


def _blocks(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """Prisms one above another, put together in a tree of a CSG solid."""
    from shapely import Polygon, box

    outline = Polygon(places)
    heights = sorted({z for _, z in places})
    solids = []
    for low, high in pairwise(heights):
        slab = _polygon(outline.intersection(box(-2000, low, 2000, high)))
        left, bottom, right, top = slab.bounds
        if abs(slab.area - (right - left) * (top - bottom)) < 1e-6:
            solids.append(bodies.block((0, left, bottom), (length, right, top)))
        else:
            solids.append(bodies.extrusion(list(slab.exterior.coords)[:-1], 0.0, length))
    root = bodies.joined(*solids)
    if all(solid.is_a("IfcBlock") for solid in solids):
        root = bodies.make("IfcCsgSolid", root)
    return [root]


def _polygon(figure: Any) -> Any:
    """The only polygon of a figure, without lines beside it."""
    (polygon,) = [part for part in getattr(figure, "geoms", [figure]) if part.area > 0.0]
    return polygon


def _layers(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """Two items in one body, one above the other."""
    from shapely import Polygon, box

    outline = Polygon(places)
    middle = sorted({z for _, z in places})[-1] / 2.0
    parts = [outline.intersection(box(-2000, a, 2000, b)) for a, b in ((0, middle), (middle, 5000))]
    return [bodies.extrusion(list(part.exterior.coords)[:-1], 0.0, length) for part in parts]


def _in_halves(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """Two items in one body, one behind the other."""
    cut = 0.37 * length
    return [bodies.extrusion(places, 0.0, cut), bodies.extrusion(places, cut, length)]


def _intersection(bodies: Bodies, places: Places, length: float) -> list[Any]:
    longer = bodies.extrusion(places, -200.0, length + 300.0)
    block = bodies.block((0, -1000, -1000), (length, 1000, 2000))
    return [bodies.make("IfcBooleanResult", "INTERSECTION", longer, block)]


def _mapped_larger(bodies: Bodies, places: Places, length: float) -> list[Any]:
    half = [(y / 2.0, z / 2.0) for y, z in places]
    return [bodies.mapped(bodies.extrusion(half, 0.0, length / 2.0), Scale=2.0)]


def _mapped_mirrored(bodies: Bodies, places: Places, length: float) -> list[Any]:
    """Drawn from right to left, mirrored by the item."""
    turned = [(-y, z) for y, z in places][::-1]
    stations = _stations(turned, length)
    brep = bodies.brep(bodies.corners(stations), bodies.rings(stations))
    axes = [bodies.make("IfcDirection", each) for each in ((1.0, 0.0, 0.0), (0.0, -1.0, 0.0))]
    return [bodies.mapped(brep, Axis1=axes[0], Axis2=axes[1])]


def _mapped_stretched(bodies: Bodies, places: Places, length: float) -> list[Any]:
    stations = _stations([(y / 1.25, z / 0.8) for y, z in places], length / 1.5)
    brep = bodies.brep(bodies.corners(stations), bodies.rings(stations))
    return [bodies.mapped(brep, Scale=1.5, Scale2=1.25, Scale3=0.8)]


@dataclass(frozen=True)
class Kind:
    """A way to draw a beam of one outline."""

    make: Maker
    schemas: tuple[str, ...] = ALL
    engine: bool = True
    """The geometry engine builds it soundly: a tapered extrusion it closes twice at both ends"""


KINDS: dict[str, Kind] = {
    "extrusion": Kind(lambda b, places, length: [b.extrusion(places, 0.0, length)]),
    "extrusion against the span": Kind(lambda b, places, length: [b.against(places, 0.0, length)]),
    "mapped item": Kind(lambda b, places, length: [b.mapped(b.extrusion(places, 0.0, length))]),
    "mapped item, larger": Kind(_mapped_larger),
    "mapped item, mirrored": Kind(_mapped_mirrored),
    "mapped item, stretched": Kind(_mapped_stretched),
    "clipped solid": Kind(_clipped),
    "cut by solids": Kind(_cut_by_solids),
    "cut from the side": Kind(_cut_from_the_side),
    "blocks put together": Kind(_blocks),
    "intersection": Kind(_intersection),
    "two items, one above the other": Kind(_layers),
    "two items, one behind the other": Kind(_in_halves),
    "faceted Brep": Kind(_by_faces(Bodies.brep)),
    "faceted Brep in pieces": Kind(_by_faces(Bodies.brep, 5)),
    "shell-based surface model": Kind(_by_faces(Bodies.shells)),
    "face-based surface model": Kind(_by_faces(Bodies.face_model)),
    "polygonal face set": Kind(_by_faces(Bodies.polygons), FROM_4),
    "triangulated face set": Kind(_by_faces(Bodies.triangles), FROM_4),
    "advanced Brep": Kind(_by_faces(Bodies.advanced), FROM_4),
    "tapered extrusion of equal ends": Kind(
        lambda b, places, length: [b.tapered(places, places, length)], FROM_4, engine=False
    ),
    "sectioned spine": Kind(
        lambda b, places, length: [b.spine(_stations(places, length))], engine=False
    ),
    "sectioned solid": Kind(
        lambda b, places, length: [b.horizontal(_stations(places, length))], ONLY_4X3, engine=False
    ),
}  # fmt: skip


# Referees ----------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Moments:
    """Volume [mm3], its first moments and second moments about the beam's own axes."""

    volume: float
    first: tuple[float, float]
    """About the axis, of y and of z [mm4]"""
    second: tuple[float, float]
    """[mm5]"""


def engine_moments(product: Any, beam: Beam) -> tuple[Moments, np.ndarray]:
    """What ifcopenshell's geometry engine makes of a product, in the axes of a beam that was
    read, and its corners there [mm]."""
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", 0.00005)
    settings.set("use-world-coords", True)
    geometry = ifcopenshell.geom.create_shape(settings, product).geometry
    assert beam.axis is not None
    frame = np.array((beam.axis.x, beam.axis.y, beam.axis.z))
    points = np.array(geometry.verts).reshape(-1, 3) * 1000.0
    points = (points - np.array(beam.axis.origin)) @ frame.T
    corners = points[np.array(geometry.faces).reshape(-1, 3)]
    return of_triangles(corners), points


def of_triangles(corners: np.ndarray) -> Moments:
    """Moments of what triangles (N, 3, 3) enclose, whichever way they face."""
    a, b, c = corners[:, 0], corners[:, 1], corners[:, 2]
    volume = np.einsum("nk,nk->n", a, np.cross(b, c)) / 6.0
    sign = math.copysign(1.0, volume.sum())
    first = (volume[:, None] * (a + b + c)).sum(axis=0) / 4.0
    squares = a * a + b * b + c * c + a * b + b * c + c * a
    second = (volume[:, None] * squares).sum(axis=0) / 10.0
    return Moments(
        sign * float(volume.sum()),
        (sign * float(first[1]), sign * float(first[2])),
        (sign * float(second[1]), sign * float(second[2])),
    )


def run_moments(beam: Beam) -> Moments:
    """The same from the runs of a beam that was read: at each place polynomials of the corners,
    along it three points of Gauss, which are exact to the fifth degree."""
    places, weights = np.polynomial.legendre.leggauss(3)
    total = np.zeros(5)
    for run in beam.runs:
        for place, weight in zip((places + 1.0) / 2.0, weights / 2.0, strict=True):
            outline = outline_between(run.outline, run.outline_end or run.outline, float(place))
            total += weight * (run.end - run.start) * np.array(outline_moments(outline))
    volume, first_y, first_z, second_y, second_z = total.tolist()
    return Moments(volume, (first_y, first_z), (second_y, second_z))


def outline_between(one: Outline, other: Outline, share: float) -> Outline:
    return Outline(
        tuple(
            tuple(
                (y0 + (y1 - y0) * share, z0 + (z1 - z0) * share)
                for (y0, z0), (y1, z1) in zip(first, last, strict=True)
            )
            for first, last in zip(one.rings, other.rings, strict=True)
        )
    )


def outline_moments(outline: Outline) -> tuple[float, ...]:
    """Area, first moments of y and z, second moments of y and z, by Green's theorem."""
    total = np.zeros(5)
    for ring in outline.rings:
        p = np.array(ring)
        q = np.roll(p, -1, axis=0)
        cross = p[:, 0] * q[:, 1] - q[:, 0] * p[:, 1]
        squares = p * p + p * q + q * q
        total += [
            cross.sum() / 2.0,
            *(((p + q) * cross[:, None]).sum(axis=0) / 6.0),
            *((squares * cross[:, None]).sum(axis=0) / 12.0),
        ]
    return tuple(total.tolist())
