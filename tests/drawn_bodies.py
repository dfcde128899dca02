"""Bars drawn as bodies of faces: a regular polygon swept along a line of legs and chords."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import ifcopenshell.geom
import numpy as np

from tests.barred_beams import Curve
from tests.drawn_curves import Arc, ends, pieces_of

Vector = Any


def stations(curve: Curve, step: float) -> list[Vector]:
    """The corners of a centre line whose arcs are cut into chords of a step [deg]."""
    pieces = pieces_of(curve.points, curve.arcs)
    found = [ends(pieces[0])[0]]
    for piece in pieces:
        count = math.ceil(math.degrees(piece.turn) / step - 1e-6) if isinstance(piece, Arc) else 0
        found += [piece.at(piece.turn * (n + 1) / count) for n in range(count)]
        found += [] if count else [piece[1]]
    return found


def rings(curve: Curve, diameter: float, corners: int, step: float = 15.0) -> list[Vector]:
    """Rings of a polygon whose corners lie on the bar's surface, in the planes between legs."""
    places = stations(curve, step)
    ways = [(b - a) / np.linalg.norm(b - a) for a, b in pairwise(places)]
    x = np.cross(ways[0], (0.3, 0.5, 0.7))
    x /= np.linalg.norm(x)
    angles = 2.0 * math.pi * np.arange(corners) / corners
    y = np.cross(ways[0], x)
    ring = places[0] + diameter / 2.0 * (np.outer(np.cos(angles), x) + np.outer(np.sin(angles), y))
    found = [ring]
    for at, way in enumerate(ways):
        on = ways[min(at + 1, len(ways) - 1)]
        normal = way + on
        reach = ((places[at + 1] - found[-1]) @ normal) / (way @ normal)
        found.append(found[-1] + reach[:, None] * way)
    return found


@dataclass
class Mesh:
    points: Vector
    faces: list[list[int]]
    """From 0, outwards."""


def tube(curve: Curve, diameter: float, corners: int, step: float = 15.0) -> Mesh:
    layers = rings(curve, diameter, corners, step)
    faces = [list(range(corners))[::-1]]
    for layer in range(len(layers) - 1):
        base = layer * corners
        for k in range(corners):
            a, b = base + k, base + (k + 1) % corners
            faces.append([a, b, b + corners, a + corners])
    last = (len(layers) - 1) * corners
    faces.append([last + k for k in range(corners)])
    return Mesh(np.concatenate(layers), faces)


def triangles(mesh: Mesh, fan: bool = False) -> Mesh:
    """The faces cut into triangles; those of more than four corners round their middle."""
    points, faces = list(mesh.points), []
    for face in mesh.faces:
        if fan and len(face) > 4:
            points.append(mesh.points[face].mean(axis=0))
            middle = len(points) - 1
            faces += [[middle, a, b] for a, b in zip(face, [*face[1:], face[0]], strict=True)]
        else:
            faces += [[face[0], a, b] for a, b in pairwise(face[1:])]
    return Mesh(np.array(points), faces)


def _rows(points: Vector) -> list[list[float]]:
    return [[float(value) for value in point] for point in points]


def triangulated(file: Any, mesh: Mesh, fan: bool = False) -> Any:
    cut = triangles(mesh, fan)
    listed = file.create_entity("IfcCartesianPointList3D", _rows(cut.points))
    faces = [[corner + 1 for corner in face] for face in cut.faces]
    return file.create_entity("IfcTriangulatedFaceSet", listed, None, True, faces)


def polygonal(file: Any, mesh: Mesh) -> Any:
    listed = file.create_entity("IfcCartesianPointList3D", _rows(mesh.points))
    faces = [
        file.create_entity("IfcIndexedPolygonalFace", [corner + 1 for corner in face])
        for face in mesh.faces
    ]
    return file.create_entity("IfcPolygonalFaceSet", listed, True, faces)


def shell(file: Any, mesh: Mesh, kind: str = "IfcClosedShell") -> Any:
    make = file.create_entity
    points = [make("IfcCartesianPoint", row) for row in _rows(mesh.points)]
    faces = []
    for face in mesh.faces:
        loop = make("IfcPolyLoop", [points[corner] for corner in face])
        faces.append(make("IfcFace", [make("IfcFaceOuterBound", loop, True)]))
    return make(kind, faces)


def faceted(file: Any, mesh: Mesh) -> Any:
    return file.create_entity("IfcFacetedBrep", shell(file, mesh))


def surface_model(file: Any, mesh: Mesh) -> Any:
    """Open at both ends."""
    mantle = Mesh(mesh.points, mesh.faces[1:-1])
    return file.create_entity("IfcShellBasedSurfaceModel", [shell(file, mantle, "IfcOpenShell")])


BODIES: dict[str, Callable[[Any, Mesh], Any]] = {
    "triangulated": triangulated,
    "fans": lambda file, mesh: triangulated(file, mesh, True),
    "polygonal": polygonal,
    "faceted": faceted,
    "surface model": surface_model,
}


class Advanced:
    """A body of cylinders, tori and two flat ends, for a bar that lies in one plane."""

    def __init__(self, file: Any, curve: Curve, diameter: float, square: Vector) -> None:
        self.make = file.create_entity
        self.radius, self.square = diameter / 2.0, np.array(square, dtype=float)
        self.pieces = pieces_of(curve.points, curve.arcs)
        faces = []
        ways = [self.way(piece, 0.0) for piece in self.pieces]
        places = [ends(piece)[0] for piece in self.pieces]
        ways.append(self.way(self.pieces[-1], 1.0))
        places.append(ends(self.pieces[-1])[1])
        circles = [self.circle(*each) for each in zip(places, ways, strict=True)]
        for number, piece in enumerate(self.pieces):
            faces += self.mantle(piece, circles[number], circles[number + 1])
        faces += [self.end(circles[0], places[0], -ways[0], False)]
        faces += [self.end(circles[-1], places[-1], ways[-1], True)]
        self.item = self.make("IfcAdvancedBrep", self.make("IfcClosedShell", faces))

    def way(self, piece: Any, share: float) -> Vector:
        if isinstance(piece, Arc):
            angle = piece.turn * share
            return -math.sin(angle) * piece.x + math.cos(angle) * piece.y
        return (piece[1] - piece[0]) / np.linalg.norm(piece[1] - piece[0])

    def point(self, place: Vector) -> Any:
        return self.make("IfcCartesianPoint", [float(value) for value in place])

    def axes(self, place: Vector, z: Vector, x: Vector) -> Any:
        ways = [self.make("IfcDirection", [float(value) for value in way]) for way in (z, x)]
        return self.make("IfcAxis2Placement3D", self.point(place), *ways)

    def circle(self, place: Vector, way: Vector) -> Any:
        """The two halves of a ring, and its two corners."""
        out = np.cross(self.square, way)
        places = [place + sign * self.radius * out for sign in (1.0, -1.0)]
        corners = [self.make("IfcVertexPoint", self.point(each)) for each in places]
        curve = self.make("IfcCircle", self.axes(place, way, out), self.radius)
        halves = [
            self.make("IfcEdgeCurve", *pair, curve, True) for pair in (corners, corners[::-1])
        ]
        return halves, corners, places

    def seam(self, piece: Any, side: int, first: Any, last: Any) -> Any:
        a, b = first[2][side], last[2][side]
        corners = (first[1][side], last[1][side])
        if isinstance(piece, Arc):
            axes = self.axes(piece.centre, piece.axis, piece.x)
            curve = self.make("IfcCircle", axes, float(np.linalg.norm(a - piece.centre)))
        else:
            way = self.make("IfcDirection", [float(value) for value in b - a])
            vector = self.make("IfcVector", way, 1.0)
            curve = self.make("IfcLine", self.point(a), vector)
        return self.make("IfcEdgeCurve", *corners, curve, True)

    def mantle(self, piece: Any, first: Any, last: Any) -> list[Any]:
        seams = [self.seam(piece, side, first, last) for side in (0, 1)]
        if isinstance(piece, Arc):
            axes = self.axes(piece.centre, piece.axis, piece.x)
            surface = self.make("IfcToroidalSurface", axes, piece.radius, self.radius)
        else:
            axes = self.axes(piece[0], self.way(piece, 0.0), self.square)
            surface = self.make("IfcCylindricalSurface", axes, self.radius)
        loops = [
            ((first[0][side], True), (seams[1 - side], True), (last[0][side], False),
             (seams[side], False))
            for side in (0, 1)
        ]  # fmt: skip
        return [self.face(loop, surface) for loop in loops]

    def end(self, circle: Any, place: Vector, outwards: Vector, forward: bool) -> Any:
        surface = self.make("IfcPlane", self.axes(place, outwards, self.square))
        halves = circle[0] if forward else circle[0][::-1]
        return self.face([(half, forward) for half in halves], surface)

    def face(self, edges: Sequence[tuple[Any, bool]], surface: Any) -> Any:
        listed = [self.make("IfcOrientedEdge", None, None, edge, way) for edge, way in edges]
        bound = self.make("IfcFaceOuterBound", self.make("IfcEdgeLoop", listed), True)
        return self.make("IfcAdvancedFace", [bound], surface, True)


def engine_volume(item: Any, mm: float = 1.0) -> float:
    """Volume of an item by ifcopenshell's geometry engine [mm3]."""
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", 0.00001)
    shape = ifcopenshell.geom.create_shape(settings, item)
    geometry = getattr(shape, "geometry", shape)
    points = np.array(geometry.verts).reshape(-1, 3) * 1000.0
    return volume(points, np.array(geometry.faces).reshape(-1, 3).tolist())


def volume(points: Vector, faces: Sequence[Sequence[int]]) -> float:
    """By the divergence theorem."""
    total = 0.0
    for face in faces:
        for a, b in pairwise(face[1:]):
            total += float(np.dot(points[face[0]], np.cross(points[a], points[b]))) / 6.0
    return total
