"""B-spline curves as points that lie on them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from ifccheck.ifc.entity import Entity, UnreadableError, label, need, numbers, several
from ifccheck.ifc.placements import Matrix

SAGITTA = 0.1
"""Greatest distance between the curve and the chord of two points next to one another [mm]."""
MOST_POINTS = 4096


@dataclass(frozen=True, slots=True)
class Spline:
    """A B-spline curve, rational or not."""

    poles: Matrix
    """Control points times their weights, and the weights [mm] (N, dimensions + 1)."""
    knots: Matrix
    degree: int

    def breaks(self) -> list[float]:
        """The parameters at which one polynomial ends and the next begins, and both ends."""
        spans: list[float] = np.unique(self.knots[self.degree : len(self.poles) + 1]).tolist()
        return spans

    def at(self, place: float) -> Matrix:
        """The point at a parameter [mm]."""
        point = _at(self.poles, self.knots, self.degree, place)
        return np.asarray(point[:-1] / point[-1])


def read_spline(curve: Entity, scale: float, dimensions: int = 2) -> Spline:
    """Read an IfcBSplineCurveWithKnots.

    Raises UnreadableError where its knots do not fit its control points.
    """
    poles = np.array([numbers(point, dimensions)[:dimensions] for point in need(
        curve, "ControlPointsList")], dtype=float) * scale  # fmt: skip
    weights = np.array(several(curve, "WeightsData") or [1.0] * len(poles), dtype=float)
    degree, knots = int(need(curve, "Degree")), _knots(curve)
    if len(weights) != len(poles) or len(knots) != len(poles) + degree + 1 or degree < 1:
        raise UnreadableError(f"{label(curve)} has knots that do not fit its control points")
    if not (np.isfinite(poles).all() and (weights > 0.0).all() and (np.diff(knots) >= 0.0).all()):
        raise UnreadableError(f"{label(curve)} has weights or knots that make no curve")
    return Spline(np.column_stack([poles * weights[:, None], weights]), knots, degree)


def spline_points(curve: Entity, scale: float, dimensions: int = 2) -> Matrix:
    """Return points along an IfcBSplineCurveWithKnots, both ends included [mm] (N, dimensions).

    By de Boor's recursion, as many in each span between knots as it takes for no chord to lie
    further from the curve than SAGITTA.

    Raises UnreadableError where its knots do not fit its control points.
    """
    spline = read_spline(curve, scale, dimensions)
    spans = spline.breaks()
    found = [_at(spline.poles, spline.knots, spline.degree, spans[0])]
    for low, high in pairwise(spans):
        found += _along(spline.poles, spline.knots, spline.degree, low, high)
    homogeneous = np.array(found)
    return np.asarray(homogeneous[:, :-1] / homogeneous[:, -1:])


def _knots(curve: Entity) -> Matrix:
    if not curve.is_a("IfcBSplineCurveWithKnots"):
        raise UnreadableError(f"{label(curve)} has no knots")
    counts: Sequence[int] = need(curve, "KnotMultiplicities")
    return np.repeat(np.array(need(curve, "Knots"), dtype=float), counts)


def _along(poles: Matrix, knots: Matrix, degree: int, low: float, high: float) -> list[Matrix]:
    """Points after the start of one span to its end."""
    pieces = 1 if degree == 1 else 4
    while True:
        places = np.linspace(low, high, 2 * pieces + 1)
        points = [_at(poles, knots, degree, float(place)) for place in places]
        flat = np.array([point[:-1] / point[-1] for point in points])
        sagitta = flat[1::2] - (flat[:-1:2] + flat[2::2]) / 2.0
        near = np.sqrt((sagitta * sagitta).sum(axis=1)).max() <= SAGITTA
        if near or degree == 1:
            return points[2::2]
        if pieces > MOST_POINTS:
            raise UnreadableError("a spline that is too intricate to be traced")
        pieces *= 2


def _at(poles: Matrix, knots: Matrix, degree: int, place: float) -> Matrix:
    """De Boor's recursion; the last span is closed at its end."""
    last = len(poles) - 1
    span = min(max(int(np.searchsorted(knots, place, side="right")) - 1, degree), last)
    d = [poles[j + span - degree].copy() for j in range(degree + 1)]
    for r in range(1, degree + 1):
        for j in range(degree, r - 1, -1):
            first = knots[j + span - degree]
            width = knots[j + 1 + span - r] - first
            share = (place - first) / width if not math.isclose(width, 0.0) else 0.0
            d[j] = (1.0 - share) * d[j - 1] + share * d[j]
    return np.asarray(d[degree])
