"""Lays what acts along members of an analysis model on the beams that they stand for."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Beam, LaidAction
from ifccheck.ifc.analysis_lines import Stretch, Vector
from ifccheck.ifc.applied_loads import Applied, Piece, Spot
from ifccheck.ifc.placements import Matrix
from ifccheck.units import ShownKind, clipped, show

NEAR = 1000.0
"""Distance [mm] within which a member that stands for no beam may be meant to stand for one"""
TOLERANCE = 50.0
"""Distance [mm] by which a member may lie outside of the body of the beam that it stands for"""
LEAST_PART = 0.6
"""Part of a short line that must lie over a beam: one that only begins at its end does not"""
PARALLEL = np.cos(np.radians(2.0))
NO_PART = 1e-3
"""Part of a load below which what does not act downward is noise"""


@dataclass(frozen=True, slots=True)
class BeamBox:
    """A beam as members are looked for in it: its axis, and the box of its body about that."""

    beam: Beam
    origin: Vector
    axes: Matrix
    """Unit vectors x, y, z in rows"""
    low: Vector
    high: Vector
    """Of the body in x, y, z [mm]"""

    def inside(self, points: Matrix) -> Matrix:
        """Points of the building (N, 3) in the beam's axes."""
        return np.asarray((points - self.origin) @ self.axes.T)

    def off(self, points: Matrix) -> float:
        """The least distance [mm] of points (N, 2) across from the body."""
        beyond = np.maximum(self.low[1:] - points, points - self.high[1:])
        return float(np.linalg.norm(np.maximum(beyond, 0.0), axis=1).min())

    def holds(self, points: Matrix) -> bool:
        """Whether points of its axes lie in its body, within the tolerance."""
        inside = (points >= self.low - TOLERANCE) & (points <= self.high + TOLERANCE)
        return bool(inside.all())


def box_of(beam: Beam) -> BeamBox | None:
    """The box that members are looked for in; None where the beam's body could not be read."""
    if beam.axis is None:
        return None
    outlines = [one for run in beam.runs for one in (run.outline, run.outline_end) if one]
    corners = np.array([point for outline in outlines for ring in outline.rings for point in ring])
    if not len(corners):
        return None
    (y0, z0), (y1, z1) = corners.min(axis=0), corners.max(axis=0)
    axis = beam.axis
    return BeamBox(
        beam,
        np.array(axis.origin),
        np.array((axis.x, axis.y, axis.z)),
        np.array((0.0, y0, z0)),
        np.array((axis.length, y1, z1)),
    )


class Held(NamedTuple):
    """A line as it runs along a beam: x [mm] at its start, and the cosine of the angle to it."""

    box: BeamBox
    x: float
    cosine: float

    def places(self, start: float, end: float) -> tuple[float, float]:
        """Distances along the line as x of the beam."""
        return self.x + start * self.cosine, self.x + end * self.cosine

    def covered(self, line: Stretch) -> tuple[float, float]:
        """The part of the line that lies over the beam, as distances along the line."""
        ends = sorted(
            (limit - self.x) / self.cosine
            for limit in (-TOLERANCE, float(self.box.high[0]) + TOLERANCE)
        )
        return max(ends[0], 0.0), min(ends[1], line.length)


def runs_along(box: BeamBox, line: Stretch) -> Held | None:
    """How a line runs along a beam; None where they are not parallel."""
    inner = box.inside(np.array((line.start, line.end)))
    cosine = float((inner[1, 0] - inner[0, 0]) / line.length)
    return Held(box, float(inner[0, 0]), cosine) if abs(cosine) >= PARALLEL else None


def coincides(box: BeamBox, line: Stretch) -> Held | None:
    """How a line that lies in a beam's body runs along it; None where it does not."""
    held = runs_along(box, line)
    if held is None:
        return None
    start, end = held.covered(line)
    if end - start <= min(LEAST_PART * line.length, 3.0 * TOLERANCE):
        return None
    ends = np.array([line.start + s * line.along for s in (start, end)])
    return held if box.holds(box.inside(ends)) else None


def off(held: Held, line: Stretch) -> float:
    """Distance [mm] of a line from the body of the beam that it runs along; inf where it lies
    beyond its ends."""
    start, end = held.covered(line)
    if end - start <= min(LEAST_PART * line.length, 3.0 * TOLERANCE):
        return float("inf")
    ends = held.box.inside(np.array([line.start + s * line.along for s in (start, end)]))
    return held.box.off(ends[:, 1:])


def beside(held: Held, line: Stretch) -> bool:
    """Whether a line lies beside the body of the beam that it runs along."""
    across = held.box.inside(np.array((line.start, line.end)))[:, 1]
    low, high = held.box.low[1] - TOLERANCE, held.box.high[1] + TOLERANCE
    return bool((across < low).any() or (across > high).any())


class Source(NamedTuple):
    """What an action is called, the case that it acts in, and its factor there."""

    case: str
    origin: str
    factor: float

    def said(self, value: float, kind: ShownKind) -> str:
        """A value for people, with the factor."""
        times = "" if self.factor == 1.0 else f", factor {self.factor:g} included"
        plain = float(f"{value:.9g}")  # 9.999999999 is 10 in another unit
        return f"{show(plain, kind)} of the model's load case {clipped(self.case)}{times}"


def lay_piece(piece: Piece, held: Held, source: Source) -> Iterator[LaidAction | str]:
    """A piece as a load on a beam, and what of it is not laid."""
    forces = piece.forces * source.factor
    first, last = (-forces[:, 2] / abs(held.cosine)).tolist()
    start, end = held.places(piece.start, piece.end)
    if held.cosine < 0.0:
        start, end, first, last = end, start, last, first
    length = float(held.box.high[0])
    if end <= -TOLERANCE or start >= length + TOLERANCE:
        return
    if _counts(forces[:, 2], forces):
        said = source.said(max(first, last, key=abs), "line_load")
        beam = held.box.beam.key
        yield LaidAction(beam, source.case, "line", start, end, (first, last), source.origin, said)
    yield from _not_laid(forces, source)
    if piece.twisting:
        yield f"{source.origin} has moments per length, which are not checked"


def lay_spot(spot: Spot, box: BeamBox, source: Source) -> Iterator[LaidAction | str]:
    """A load at a place as a load on a beam, and what of it is not laid."""
    force, moment = spot.force * source.factor, spot.moment * source.factor
    x = _place_of(spot, box)
    if x is None:
        return
    beam = box.beam.key
    if _counts(force[2:], force):
        value = -float(force[2])
        said = source.said(value, "force")
        yield LaidAction(beam, source.case, "point", x, x, (value, value), source.origin, said)
    turning = box.axes @ moment
    if _counts(turning[1:2], moment):
        value = -float(turning[1])
        said = source.said(value, "moment")
        yield LaidAction(beam, source.case, "moment", x, x, (value, value), source.origin, said)
    yield from _not_laid(force[None, :], source)
    if _counts(turning[[0, 2]], moment):
        yield f"{source.origin} twists the beam or bends it sideways: it is not checked"


def _place_of(spot: Spot, box: BeamBox) -> float | None:
    """x of a place on a beam; None beyond its ends."""
    x = float(box.inside(spot.at[None, :])[0, 0])
    length = float(box.high[0])
    if not -TOLERANCE <= x <= length + TOLERANCE:
        return None
    return min(max(x, 0.0), length)


def _counts(part: Vector, whole: Vector) -> bool:
    return bool(np.abs(part).max() > NO_PART * np.abs(whole).max())


def _not_laid(forces: Matrix, source: Source) -> Iterator[str]:
    if _counts(forces[:, :2], forces):
        yield (
            f"{source.origin} acts sideways or along the beam: neither axial force nor sideways"
            " bending nor torsion is checked"
        )


def uncovered(piece: Piece, covered: Sequence[tuple[float, float]]) -> float:
    """The vertical force [N] of a piece outside of the covered parts of its line."""
    lost, reached = 0.0, piece.start
    for start, end in sorted(covered):
        lost += _force(piece, reached, min(start, piece.end))
        reached = max(reached, min(end, piece.end))
    return lost + _force(piece, reached, piece.end)


def _force(piece: Piece, start: float, end: float) -> float:
    """The size of the vertical force [N] of a piece between two distances."""
    if end <= start:
        return 0.0
    share = (np.array((start, end)) - piece.start) / (piece.end - piece.start)
    first, last = piece.forces[0, 2] + share * (piece.forces[1, 2] - piece.forces[0, 2])
    return float(abs(first + last) / 2.0 * (end - start))


def size_of(applied: Applied) -> float:
    """The size of all vertical force that an action applies [N]."""
    along = sum(_force(piece, piece.start, piece.end) for piece in applied.pieces)
    return along + sum(abs(float(spot.force[2])) for spot in applied.spots)
