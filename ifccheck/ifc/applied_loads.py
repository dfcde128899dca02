"""What an action of a structural analysis model applies: forces and moments along a line."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.analysis_lines import Stretch, Vector
from ifccheck.ifc.entity import Entity, UnreadableError, get, label, need, several, text
from ifccheck.ifc.load_units import LoadUnits
from ifccheck.ifc.placements import Matrix

ALL_ALONG = ("", "CONST", "NOTDEFINED")
BY_PLACES = ("", "CONST", "LINEAR", "POLYGONAL", "EQUIDISTANT", "NOTDEFINED")
"""Kinds of curve actions whose values go over into one another in straight lines"""
TOLERANCE = 1.0
"""Distance [mm] by which a place may lie beyond the end of its line"""

WARPING = "its warping moment is not checked"

Pair = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Piece:
    """A load over a part of a line: forces [N/mm] at its start and its end (2, 3)."""

    start: float
    end: float
    forces: Pair
    twisting: bool
    """It has moments per length too"""


@dataclass(frozen=True, slots=True)
class Spot:
    """A load at a place in the building: force [N] and moment [N*mm] (3,)."""

    at: Vector
    force: Vector
    moment: Vector


@dataclass(slots=True)
class Applied:
    """All that an action applies."""

    pieces: list[Piece] = field(default_factory=list)
    spots: list[Spot] = field(default_factory=list)
    doubts: list[str] = field(default_factory=list)

    @property
    def acts_not(self) -> bool:
        """It applies neither a force nor a moment."""
        along = any(piece.forces.any() or piece.twisting for piece in self.pieces)
        return not along and not any(s.force.any() or s.moment.any() for s in self.spots)


def applied_along(
    action: Entity, line: Stretch, axes: Matrix, scale: float, units: LoadUnits
) -> Applied:
    """Return what a curve action applies along a line.

    ``axes`` holds the directions (columns) of its components, ``scale`` mm per unit of length.
    Raises UnreadableError where it cannot be read.
    """
    load = need(action, "AppliedLoad")
    kind = text(action, "PredefinedType")
    if load.is_a("IfcStructuralLoadConfiguration"):
        values, places = _configured(load, kind, line, scale)
    else:
        if kind not in ALL_ALONG:
            raise UnreadableError(f"{label(action)} is {kind} and has one value only")
        values, places = [load, load], [0.0, line.length]
    if values[0].is_a("IfcStructuralLoadSingleForce"):
        return _spots(values, [line.start + place * line.along for place in places], axes, units)
    turned = axes * _shares(action, axes, line)
    return _pieces(action, values, places, turned, units)


def applied_varying(
    action: Entity, line: Stretch, places: Sequence[float], axes: Matrix, units: LoadUnits
) -> Applied:
    """Return what a varying linear action (IFC2X3) applies, given the places of its values."""
    values = [need(action, "AppliedLoad"), *several(action, "SubsequentAppliedLoads")]
    _require_order(action, places, len(values), line.length)
    return _pieces(action, values, places, axes * _shares(action, axes, line), units)


def applied_at(action: Entity, at: Vector, axes: Matrix, units: LoadUnits) -> Applied:
    """Return what a point action applies."""
    return _spots([need(action, "AppliedLoad")], [at], axes, units)


def _configured(
    load: Entity, kind: str, line: Stretch, scale: float
) -> tuple[list[Entity], list[float]]:
    """The values of a configuration with the places along the line [mm] that they stand at."""
    values, given = list(several(load, "Values")), several(load, "Locations")
    single = bool(values) and values[0].is_a("IfcStructuralLoadSingleForce")
    if not values or (kind not in BY_PLACES if not single else kind != "DISCRETE"):
        raise UnreadableError(f"{label(load)}: values that are {kind or 'of no kind'} are not read")
    if kind == "EQUIDISTANT" or (not given and len(values) == 2 and not single):
        places = np.linspace(0.0, line.length, len(values)).tolist()
    elif not given and len(values) == 1 and kind in ALL_ALONG:
        values, places = values * 2, [0.0, line.length]
    else:
        places = [float(place[0]) * scale for place in given]
    _require_order(load, places, len(values), line.length)
    return values, [min(max(place, 0.0), line.length) for place in places]


def _require_order(load: Entity, places: Sequence[float], count: int, length: float) -> None:
    if len(places) != count:
        raise UnreadableError(f"{label(load)} has {count} values at {len(places)} places")
    ascending = all(first <= second for first, second in pairwise(places))
    if not ascending or places[0] < -TOLERANCE or places[-1] > length + TOLERANCE:
        raise UnreadableError(f"{label(load)} has places that do not ascend, or beyond its member")


def _shares(action: Entity, axes: Matrix, line: Stretch) -> Vector:
    """Length projected square to each direction per length of the line; 1 for true lengths."""
    if text(action, "ProjectedOrTrue") != "PROJECTED_LENGTH":
        return np.ones(3)
    if text(action, "GlobalOrLocal") == "LOCAL_COORDS":
        raise UnreadableError(f"{label(action)} is projected, but in local coordinates")
    return np.asarray(np.linalg.norm(np.cross(axes.T, line.along), axis=1))


def _pieces(
    action: Entity, values: Sequence[Entity], places: Sequence[float], axes: Matrix,
    units: LoadUnits,
) -> Applied:  # fmt: skip
    for value in values:
        if not value.is_a("IfcStructuralLoadLinearForce"):
            raise UnreadableError(f"{label(action)} applies {label(value)}, which is no load here")
    forces = [axes @ _triple(value, "LinearForce") * units.line_force.factor for value in values]
    twists = [bool(_triple(value, "LinearMoment").any()) for value in values]
    found = Applied(doubts=[units.line_force.doubt] if units.line_force.doubt else [])
    for first, second in pairwise(range(len(values))):
        if places[second] - places[first] > 0.0:
            found.pieces.append(
                Piece(
                    places[first],
                    places[second],
                    np.array([forces[first], forces[second]]),
                    twists[first] or twists[second],
                )
            )
    if not found.pieces:
        raise UnreadableError(f"{label(action)} acts over no length")
    return found


def _spots(
    values: Sequence[Entity], places: Sequence[Vector], axes: Matrix, units: LoadUnits
) -> Applied:
    found = Applied()
    doubts = set()
    for value, at in zip(values, places, strict=True):
        if not value.is_a("IfcStructuralLoadSingleForce"):
            raise UnreadableError(f"{label(value)} is no load that beams are checked for")
        force = axes @ _triple(value, "Force") * units.force.factor
        moment = axes @ _triple(value, "Moment") * units.moment.factor
        found.spots.append(Spot(at, force, moment))
        doubts |= {WARPING} if get(value, "WarpingMoment") else set()
        doubts |= {units.force.doubt} if force.any() else set()
        doubts |= {units.moment.doubt} if moment.any() else set()
    found.doubts = sorted(doubts - {""})
    return found


def _triple(load: Entity, name: str) -> Vector:
    values = [get(load, f"{name}{axis}") for axis in "XYZ"]
    numbers = [0.0 if value is None else float(value) for value in values]
    if not all(map(math.isfinite, numbers)):
        raise UnreadableError(f"{label(load)} holds what is no number")
    return np.array(numbers)
