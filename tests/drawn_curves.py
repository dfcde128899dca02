"""One centre line drawn by every kind of curve that may draw it.

Points are in the model's own unit of length; at each index in ``arcs`` an arc runs through three.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from scipy.interpolate import make_interp_spline

Vector = Any
CHORD = math.radians(4.0)
"""Angle of one chord of an arc that is drawn by chords."""


class Arc:
    """A circular arc through three points."""

    def __init__(self, a: Vector, m: Vector, b: Vector) -> None:
        ab, ac = m - a, b - a
        normal = np.cross(ab, ac)
        to = np.cross(normal, ab) * (ac @ ac) + np.cross(ac, normal) * (ab @ ab)
        self.centre = a + to / (2.0 * normal @ normal)
        self.radius = float(np.linalg.norm(a - self.centre))
        self.axis = normal / np.linalg.norm(normal)
        self.x = (a - self.centre) / self.radius
        self.y = np.cross(self.axis, self.x)
        arm = b - self.centre
        self.turn = math.atan2(arm @ self.y, arm @ self.x) % (2.0 * math.pi)

    def at(self, angle: float) -> Vector:
        return self.centre + self.radius * (math.cos(angle) * self.x + math.sin(angle) * self.y)


Piece = Any
"""Two ends of a line, or an arc."""


def pieces_of(points: Sequence[Sequence[float]], arcs: Sequence[int]) -> list[Piece]:
    places = [np.array(point, dtype=float) for point in points]
    pieces: list[Piece] = []
    at = 0
    while at < len(places) - 1:
        if at in arcs:
            pieces.append(Arc(places[at], places[at + 1], places[at + 2]))
        else:
            pieces.append((places[at], places[at + 1]))
        at += 2 if at in arcs else 1
    return pieces


def ends(piece: Piece) -> tuple[Vector, Vector]:
    return (piece.at(0.0), piece.at(piece.turn)) if isinstance(piece, Arc) else piece


def chords(pieces: Sequence[Piece]) -> list[Vector]:
    found = [ends(pieces[0])[0]]
    for piece in pieces:
        if isinstance(piece, Arc):
            count = math.ceil(piece.turn / CHORD)
            found += [piece.at(piece.turn * (n + 1) / count) for n in range(count)]
        else:
            found.append(piece[1])
    return found


class Drawing:
    """Draws curves into a file."""

    def __init__(self, file: Any) -> None:
        self.make = file.create_entity

    def point(self, place: Vector) -> Any:
        return self.make("IfcCartesianPoint", [float(value) for value in place])

    def direction(self, ratios: Vector) -> Any:
        return self.make("IfcDirection", [float(value) for value in ratios])

    def polyline(self, pieces: Sequence[Piece]) -> Any:
        return self.make("IfcPolyline", [self.point(place) for place in chords(pieces)])

    def indexed(self, pieces: Sequence[Piece]) -> Any:
        places, segments = [ends(pieces[0])[0]], []
        for piece in pieces:
            first = len(places)
            if isinstance(piece, Arc):
                places.append(piece.at(piece.turn / 2.0))
            places.append(ends(piece)[1])
            kind = "IfcArcIndex" if isinstance(piece, Arc) else "IfcLineIndex"
            segments.append(self.make(kind, list(range(first, len(places) + 1))))
        listed = self.make("IfcCartesianPointList3D", [[float(v) for v in p] for p in places])
        return self.make("IfcIndexedPolyCurve", listed, segments, False)

    def basis(self, piece: Piece, conic: str = "IfcCircle") -> tuple[Any, float]:
        """The endless curve of a piece, and the parameter of its end; it begins at 0."""
        if isinstance(piece, Arc):
            axes = self.make("IfcAxis2Placement3D", self.point(piece.centre),
                             self.direction(piece.axis), self.direction(piece.x))  # fmt: skip
            radii = [piece.radius] * (2 if conic == "IfcEllipse" else 1)
            return self.make(conic, axes, *radii), piece.turn
        start, end = piece
        vector = self.make("IfcVector", self.direction(end - start), 1.0)
        return self.make("IfcLine", self.point(start), vector), float(np.linalg.norm(end - start))

    def trimmed(self, piece: Piece, conic: str = "IfcCircle", way: str = "PARAMETER",
                backwards: bool = False) -> Any:  # fmt: skip
        curve, last = self.basis(piece, conic)
        trims = [
            [self.make("IfcParameterValue", value)] if way == "PARAMETER" else [self.point(place)]
            for value, place in zip((0.0, last), ends(piece), strict=True)
        ]
        first, second = trims[::-1] if backwards else trims
        return self.make("IfcTrimmedCurve", curve, first, second, not backwards, way)

    def joined(self, curves: Sequence[Any], sense: bool = True) -> Any:
        segments = [
            self.make("IfcCompositeCurveSegment", "CONTINUOUS", sense, curve) for curve in curves
        ]
        return self.make("IfcCompositeCurve", segments, False)

    def composite(self, pieces: Sequence[Piece]) -> Any:
        return self.joined([self.trimmed(piece) for piece in pieces])

    def at_points(self, pieces: Sequence[Piece]) -> Any:
        return self.joined([self.trimmed(piece, way="CARTESIAN") for piece in pieces])

    def of_ellipses(self, pieces: Sequence[Piece]) -> Any:
        return self.joined([self.trimmed(piece, "IfcEllipse") for piece in pieces])

    def against_sense(self, pieces: Sequence[Piece]) -> Any:
        return self.joined([self.trimmed(piece, backwards=True) for piece in pieces], False)

    def nested(self, pieces: Sequence[Piece]) -> Any:
        inner = [self.joined([self.trimmed(piece)]) for piece in pieces]
        return self.joined([inner[0], self.joined(inner[1:])]) if inner[1:] else inner[0]

    def trimmed_whole(self, pieces: Sequence[Piece]) -> Any:
        """A composite curve that goes on at both ends, trimmed to the line by parameters."""
        longer, parameters = self.longer(pieces)
        trims = [[self.make("IfcParameterValue", value)] for value in parameters]
        return self.make("IfcTrimmedCurve", longer, *trims, True, "PARAMETER")

    def trimmed_at_ends(self, pieces: Sequence[Piece]) -> Any:
        """The same by points; none where the curve touches itself."""
        longer, _ = self.longer(pieces)
        trims = [[self.point(ends(pieces[at])[at])] for at in (0, -1)]
        return self.make("IfcTrimmedCurve", longer, *trims, True, "CARTESIAN")

    def longer(self, pieces: Sequence[Piece]) -> tuple[Any, tuple[float, float]]:
        (first, second), (before, last) = ends(pieces[0]), ends(pieces[-1])
        begin = float(np.linalg.norm(second - first))
        length = sum(self.basis(piece)[1] for piece in pieces)
        parts = [(2.0 * first - second, first), *pieces, (last, 2.0 * last - before)]
        return self.composite(parts), (begin, begin + length)

    def rational_spline(self, pieces: Sequence[Piece]) -> Any:
        """Exact: a line is a parabola on one line, an arc of up to a quarter a rational one."""
        poles, weights = [ends(pieces[0])[0]], [1.0]
        for piece in pieces:
            if not isinstance(piece, Arc):
                poles += [(piece[0] + piece[1]) / 2.0, piece[1]]
                weights += [1.0, 1.0]
                continue
            count = math.ceil(piece.turn / (math.pi / 2.0) - 1e-9)
            step = piece.turn / count
            for n in range(count):
                middle = piece.at(step * (n + 0.5)) - piece.centre
                poles += [piece.centre + middle / math.cos(step / 2.0), piece.at(step * (n + 1))]
                weights += [math.cos(step / 2.0), 1.0]
        spans = (len(poles) - 1) // 2
        counts = [3, *[2] * (spans - 1), 3]
        return self.spline(2, poles, counts, [float(n) for n in range(spans + 1)], weights)

    def linear_spline(self, pieces: Sequence[Piece]) -> Any:
        poles = chords(pieces)
        counts = [2, *[1] * (len(poles) - 2), 2]
        return self.spline(1, poles, counts, [float(n) for n in range(len(poles))])

    def smooth_spline(self, pieces: Sequence[Piece]) -> Any:
        """A cubic spline through many points; it leaves a line of arcs by next to nothing."""
        places = [ends(pieces[0])[0]]
        for piece in pieces:
            a, b = ends(piece)
            shares = np.linspace(0.0, 1.0, 41)[1:]
            if isinstance(piece, Arc):
                places += [piece.at(piece.turn * share) for share in shares]
            else:
                places += [a + (b - a) * share for share in shares]
        length = np.cumsum([0.0, *(np.linalg.norm(b - a) for a, b in pairwise(places))])
        curve = make_interp_spline(length, np.array(places), 3)
        knots, counts = np.unique(curve.t, return_counts=True)
        return self.spline(3, list(curve.c), counts.tolist(), knots.tolist())

    def spline(self, degree: int, poles: Sequence[Vector], counts: Sequence[int],
               knots: Sequence[float], weights: Sequence[float] = ()) -> Any:  # fmt: skip
        kind = "IfcRationalBSplineCurveWithKnots" if weights else "IfcBSplineCurveWithKnots"
        more = [[float(weight) for weight in weights]] if weights else []
        return self.make(
            kind, degree, [self.point(pole) for pole in poles], "UNSPECIFIED", False, False,
            [int(count) for count in counts], [float(knot) for knot in knots], "UNSPECIFIED", *more,
        )  # fmt: skip


KINDS: dict[str, Callable[[Drawing, Sequence[Piece]], Any]] = {
    "polyline": Drawing.polyline,
    "indexed": Drawing.indexed,
    "composite": Drawing.composite,
    "trimmed at points": Drawing.at_points,
    "ellipses": Drawing.of_ellipses,
    "against its sense": Drawing.against_sense,
    "nested": Drawing.nested,
    "trimmed composite": Drawing.trimmed_whole,
    "rational spline": Drawing.rational_spline,
    "linear spline": Drawing.linear_spline,
}
EXACT = tuple(name for name in KINDS if name not in ("polyline", "linear spline"))


def drawn(file: Any, kind: str, points: Sequence[Sequence[float]], arcs: Sequence[int] = ()) -> Any:
    """Draw a centre line by a kind of curve."""
    return KINDS[kind](Drawing(file), pieces_of(points, arcs))
