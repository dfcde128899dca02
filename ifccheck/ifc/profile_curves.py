"""Plane curves traced to polygons, so that the traced area never exceeds the true one.

An arc that bulges out of the concrete is replaced by chords, one that bites into it by
tangents: either way the polygon lies within the true outline.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import Entity, UnreadableError, get, label, need, numbers, several
from ifccheck.ifc.placements import Placements
from ifccheck.ifc.splines import spline_points

Points = npt.NDArray[np.float64]
"""Points of a plane, one a row [mm]."""
Place = tuple[float, float]

SAGITTA = 0.1
"""Greatest distance between an arc and its chord [mm]."""
SAME_POINT = 1e-4
"""Points closer than this are one point [mm]."""
FULL_TURN = 2.0 * math.pi


@dataclass(frozen=True, slots=True)
class Corner:
    """A point where the curve turns."""

    at: Place


@dataclass(frozen=True, slots=True)
class Arc:
    """Part of an ellipse: centre + first*cos(t) + second*sin(t), from start over sweep."""

    centre: Place
    first: Place
    second: Place
    start: float
    sweep: float

    def at(self, angle: float, stretch: float = 1.0) -> Place:
        """Return the point at an angle, moved away from the centre by a factor."""
        cosine, sine = stretch * math.cos(angle), stretch * math.sin(angle)
        return (
            self.centre[0] + self.first[0] * cosine + self.second[0] * sine,
            self.centre[1] + self.first[1] * cosine + self.second[1] * sine,
        )

    @property
    def anticlockwise(self) -> bool:
        """Tell whether it turns to the left."""
        turn = self.first[0] * self.second[1] - self.first[1] * self.second[0]
        return (turn > 0) == (self.sweep > 0)

    def reversed(self) -> Arc:
        """Return the same arc run backwards."""
        return Arc(self.centre, self.first, self.second, self.start + self.sweep, -self.sweep)

    def traced(self, inside: bool) -> list[Place]:
        """Return points by chords (inside) or by tangents; its two ends included."""
        radius = max(math.hypot(*self.first), math.hypot(*self.second))
        step = 2.0 * math.acos(max(0.5, 1.0 - SAGITTA / radius)) if radius > 0 else FULL_TURN
        pieces = max(1, math.ceil(abs(self.sweep) / step - 1e-9))
        angle = self.sweep / pieces
        if inside:
            return [self.at(self.start + angle * number) for number in range(pieces + 1)]
        stretch = 1.0 / math.cos(angle / 2.0)
        tops = [self.at(self.start + angle * (number + 0.5), stretch) for number in range(pieces)]
        return [self.at(self.start), *tops, self.at(self.start + self.sweep)]


Piece = Corner | Arc


def ring(pieces: Sequence[Piece], hole: bool = False) -> Points:
    """Return a closed polygon from the pieces of its edge, anticlockwise (a hole clockwise)."""
    rough = clean([place for piece in pieces for place in _traced(piece, True)])
    anticlockwise = signed_area(rough) > 0
    places = rough
    if any(isinstance(piece, Arc) for piece in pieces):
        # material lies left of an anticlockwise outer edge: an arc turning left bulges out
        outward = anticlockwise != hole
        places = clean([place for piece in pieces for place in _traced(piece, outward)])
    return np.array(places if anticlockwise != hole else places[::-1])


def traced(piece: Piece) -> list[Place]:
    """Return points on a piece of a curve, its two ends included."""
    return [piece.at] if isinstance(piece, Corner) else piece.traced(inside=True)


def _traced(piece: Piece, left_turns_inside: bool) -> list[Place]:
    if isinstance(piece, Corner):
        return [piece.at]
    return piece.traced(inside=piece.anticlockwise == left_turns_inside)


def clean(places: Sequence[Place]) -> list[Place]:
    """Return the corners of a closed polygon without repeated points."""
    kept: list[Place] = []
    last = places[-1] if places else (0.0, 0.0)
    for place in places:
        if not (math.isfinite(place[0]) and math.isfinite(place[1])):
            raise UnreadableError("an outline with coordinates that are no numbers")
        if abs(place[0] - last[0]) > SAME_POINT or abs(place[1] - last[1]) > SAME_POINT:
            kept.append(place)
            last = place
    if len(kept) < 3:
        raise UnreadableError("an outline with fewer than three corners")
    return kept


def signed_area(places: Sequence[Place]) -> float:
    """Return the area of a polygon [mm2], positive where it runs anticlockwise."""
    x0, y0 = places[0]
    twice = 0.0
    x1, y1 = places[-1][0] - x0, places[-1][1] - y0
    for x, y in places:
        x2, y2 = x - x0, y - y0
        twice += x1 * y2 - x2 * y1
        x1, y1 = x2, y2
    return twice / 2.0


def after(points: Points) -> Points:
    """Return for each point of a closed polygon the next one (np.roll, several times faster)."""
    return np.concatenate((points[1:], points[:1]))


def before(points: Points) -> Points:
    """Return for each point of a closed polygon the one before it."""
    return np.concatenate((points[-1:], points[:-1]))


def read_pieces(curve: Entity, placements: Placements) -> list[Piece]:
    """Return the pieces of a plane curve of the model [mm]."""
    reader = READERS.get(curve.is_a())
    if reader is None:
        raise UnreadableError(f"outline drawn by an {curve.is_a()}")
    return reader(curve, placements)


def _polyline(curve: Entity, placements: Placements) -> list[Piece]:
    scale = placements.scale
    return [
        Corner((c[0] * scale, c[1] * scale))
        for c in (numbers(point, 2) for point in several(curve, "Points"))
    ]


def _indexed(curve: Entity, placements: Placements) -> list[Piece]:
    scale = placements.scale
    listed = need(curve, "Points")
    points = [(x * scale, y * scale) for x, y in _pairs(listed)]
    segments = several(curve, "Segments")
    if not segments:
        return [Corner(point) for point in points]
    pieces: list[Piece] = []
    for segment in segments:
        places = [points[index - 1] for index in segment[0]]
        if segment.is_a("IfcArcIndex"):
            pieces += arc_through(*places)
        else:
            pieces += [Corner(place) for place in places]
    return pieces


def _pairs(points: Entity) -> Sequence[Place]:
    """Coordinates of a list of points; what is no number ifcopenshell leaves out."""
    pairs: Sequence[Place] = need(points, "CoordList")
    if any(len(pair) != 2 for pair in pairs):
        raise UnreadableError(f"{label(points)} does not hold 2 numbers for each point")
    return pairs


def arc_through(start: Place, middle: Place, end: Place) -> list[Piece]:
    """Return the circular arc through three points; a straight one as its two ends."""
    (ax, ay), (bx, by), (cx, cy) = start, middle, end
    bx, by, cx, cy = bx - ax, by - ay, cx - ax, cy - ay
    turn = 2.0 * (bx * cy - by * cx)
    if abs(turn) <= 1e-9 * (bx * bx + by * by + cx * cx + cy * cy):
        return [Corner(start), Corner(end)]
    ux = (cy * (bx * bx + by * by) - by * (cx * cx + cy * cy)) / turn
    uy = (bx * (cx * cx + cy * cy) - cx * (bx * bx + by * by)) / turn
    radius = math.hypot(ux, uy)
    first = math.atan2(-uy, -ux)
    sweep = (math.atan2(cy - uy, cx - ux) - first) % FULL_TURN
    if turn < 0:
        sweep -= FULL_TURN
    return [Arc((ax + ux, ay + uy), (radius, 0.0), (0.0, radius), first, sweep)]


def _conic(curve: Entity, placements: Placements) -> Arc:
    """A whole circle or ellipse, starting on its own x axis."""
    matrix = placements.axes(get(curve, "Position"))
    if curve.is_a("IfcCircle"):
        across = along = need(curve, "Radius") * placements.scale
    else:
        along = need(curve, "SemiAxis1") * placements.scale
        across = need(curve, "SemiAxis2") * placements.scale
    return Arc(
        (float(matrix[0, 3]), float(matrix[1, 3])),
        (float(matrix[0, 0] * along), float(matrix[1, 0] * along)),
        (float(matrix[0, 1] * across), float(matrix[1, 1] * across)),
        0.0,
        FULL_TURN,
    )


def _whole_conic(curve: Entity, placements: Placements) -> list[Piece]:
    return [_conic(curve, placements)]


def _composite(curve: Entity, placements: Placements) -> list[Piece]:
    pieces: list[Piece] = []
    for segment in several(curve, "Segments"):
        if not segment.is_a("IfcCompositeCurveSegment"):
            raise UnreadableError(f"outline drawn by an {segment.is_a()}")
        part = read_pieces(need(segment, "ParentCurve"), placements)
        pieces += part if get(segment, "SameSense") is not False else backwards(part)
    return pieces


def backwards(pieces: Sequence[Piece]) -> list[Piece]:
    """Return the pieces in the opposite sense."""
    return [piece.reversed() if isinstance(piece, Arc) else piece for piece in reversed(pieces)]


def _trimmed(curve: Entity, placements: Placements) -> list[Piece]:
    basis = need(curve, "BasisCurve")
    trims = several(curve, "Trim1"), several(curve, "Trim2")
    if basis.is_a("IfcLine"):
        return [Corner(_on_line(basis, trim, placements)) for trim in trims]
    if not basis.is_a("IfcConic"):
        raise UnreadableError(f"outline drawn by a trimmed {basis.is_a()}")
    conic = _conic(basis, placements)
    first, last = (_on_conic(conic, trim, placements) for trim in trims)
    if get(curve, "SenseAgreement") is not False:
        sweep = (last - first) % FULL_TURN or FULL_TURN
    else:
        sweep = -((first - last) % FULL_TURN or FULL_TURN)
    return [Arc(conic.centre, conic.first, conic.second, first, sweep)]


def _trim(trim: Sequence[Entity], placements: Placements) -> tuple[Place | None, float | None]:
    """The point and the parameter that a trim gives; either may be missing."""
    point: Place | None = None
    parameter: float | None = None
    for entity in trim:
        if entity.is_a("IfcCartesianPoint"):
            point = (
                entity[0][0] * placements.scale,
                entity[0][1] * placements.scale,
            )
        else:
            parameter = float(entity[0])
    return point, parameter


def _on_line(line: Entity, trim: Sequence[Entity], placements: Placements) -> Place:
    point, parameter = _trim(trim, placements)
    if point is not None:
        return point
    if parameter is None:
        raise UnreadableError(f"{label(line)} is trimmed nowhere")
    start, vector = need(line, "Pnt")[0], need(line, "Dir")
    ratios = need(vector, "Orientation")[0]
    reach = parameter * need(vector, "Magnitude") / math.hypot(ratios[0], ratios[1])
    return (
        (start[0] + ratios[0] * reach) * placements.scale,
        (start[1] + ratios[1] * reach) * placements.scale,
    )


def _on_conic(conic: Arc, trim: Sequence[Entity], placements: Placements) -> float:
    """The angle at which a conic is trimmed [rad]."""
    point, parameter = _trim(trim, placements)
    if point is not None:
        basis = np.column_stack((conic.first, conic.second))
        cosine, sine = np.linalg.solve(basis, np.subtract(point, conic.centre))
        return math.atan2(sine, cosine)
    if parameter is None:
        raise UnreadableError("an arc that is trimmed nowhere")
    return parameter * placements.angle_scale


def _spline(curve: Entity, placements: Placements) -> list[Piece]:
    return [Corner((y, z)) for y, z in spline_points(curve, placements.scale).tolist()]


READERS: dict[str, Callable[[Entity, Placements], list[Piece]]] = {
    "IfcPolyline": _polyline,
    "IfcIndexedPolyCurve": _indexed,
    "IfcCompositeCurve": _composite,
    "Ifc2DCompositeCurve": _composite,
    "IfcTrimmedCurve": _trimmed,
    "IfcCircle": _whole_conic,
    "IfcEllipse": _whole_conic,
    "IfcBSplineCurveWithKnots": _spline,
    "IfcRationalBSplineCurveWithKnots": _spline,
}
