"""The units of a model, as factors to N, mm, MPa, rad and kg/m3."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any, Literal

from ifccheck.ifc.entity import Entity, UnreadableError, get, need, several, text

UnitKind = Literal[
    "length", "area", "volume", "second_moment", "angle", "force", "pressure", "line_force",
    "moment", "density", "mass", "linear_density",
]  # fmt: skip
Dimensions = tuple[int, int, int]
"""Exponents of length, mass and time."""

PREFIXES: Mapping[str, float] = {
    "EXA": 1e18, "PETA": 1e15, "TERA": 1e12, "GIGA": 1e9, "MEGA": 1e6, "KILO": 1e3,
    "HECTO": 1e2, "DECA": 1e1, "DECI": 1e-1, "CENTI": 1e-2, "MILLI": 1e-3, "MICRO": 1e-6,
    "NANO": 1e-9, "PICO": 1e-12, "FEMTO": 1e-15, "ATTO": 1e-18,
}  # fmt: skip

SI_UNITS: Mapping[str, tuple[float, Dimensions, int]] = {
    "METRE": (1.0, (1, 0, 0), 1),
    "SQUARE_METRE": (1.0, (2, 0, 0), 2),
    "CUBIC_METRE": (1.0, (3, 0, 0), 3),
    "GRAM": (1e-3, (0, 1, 0), 1),
    "SECOND": (1.0, (0, 0, 1), 1),
    "NEWTON": (1.0, (1, 1, -2), 1),
    "PASCAL": (1.0, (-1, 1, -2), 1),
    "JOULE": (1.0, (2, 1, -2), 1),
    "RADIAN": (1.0, (0, 0, 0), 1),
}
"""Value in coherent SI, dimensions, and the power that a prefix takes (mm2 is milli, squared)."""

KIND_DIMENSIONS: Mapping[UnitKind, Dimensions] = {
    "length": (1, 0, 0), "area": (2, 0, 0), "volume": (3, 0, 0), "second_moment": (4, 0, 0),
    "angle": (0, 0, 0), "force": (1, 1, -2), "pressure": (-1, 1, -2), "line_force": (0, 1, -2),
    "moment": (2, 1, -2), "density": (-3, 1, 0), "mass": (0, 1, 0), "linear_density": (-1, 1, 0),
}  # fmt: skip

INNER_FACTORS: Mapping[UnitKind, float] = {
    "length": 1e3, "area": 1e6, "volume": 1e9, "second_moment": 1e12, "angle": 1.0, "force": 1.0,
    "pressure": 1e-6, "line_force": 1e-3, "moment": 1e3, "density": 1.0, "mass": 1.0,
    "linear_density": 1e-3,
}  # fmt: skip
"""From coherent SI to the units used inside."""

UNIT_TYPE_KINDS: Mapping[str, UnitKind] = {
    "LENGTHUNIT": "length", "AREAUNIT": "area", "VOLUMEUNIT": "volume",
    "PLANEANGLEUNIT": "angle", "FORCEUNIT": "force", "PRESSUREUNIT": "pressure",
    "MASSUNIT": "mass", "MOMENTOFINERTIAUNIT": "second_moment", "LINEARFORCEUNIT": "line_force",
    "TORQUEUNIT": "moment", "MASSDENSITYUNIT": "density", "MASSPERLENGTHUNIT": "linear_density",
}  # fmt: skip

MEASURE_KINDS: Mapping[str, UnitKind] = {
    "IfcLengthMeasure": "length", "IfcPositiveLengthMeasure": "length",
    "IfcNonNegativeLengthMeasure": "length", "IfcAreaMeasure": "area",
    "IfcVolumeMeasure": "volume", "IfcPlaneAngleMeasure": "angle",
    "IfcPositivePlaneAngleMeasure": "angle", "IfcForceMeasure": "force",
    "IfcPressureMeasure": "pressure", "IfcLinearForceMeasure": "line_force",
    "IfcTorqueMeasure": "moment", "IfcMassDensityMeasure": "density", "IfcMassMeasure": "mass",
    "IfcMomentOfInertiaMeasure": "second_moment", "IfcMassPerLengthMeasure": "linear_density",
    "IfcQuantityLength": "length", "IfcQuantityArea": "area", "IfcQuantityVolume": "volume",
    "IfcQuantityWeight": "mass",
}  # fmt: skip


@dataclass(frozen=True)
class ModelUnits:
    """Factors from the project's units to N, mm, MPa, rad, kg/m3 and kg.

    Of a kind that the project does not declare the coherent SI unit is taken, which is what
    measures without a declared unit mean by convention; ``declared`` tells which were declared.
    """

    factors: Mapping[UnitKind, float]
    declared: frozenset[UnitKind]

    @property
    def length(self) -> float:
        """Millimetres per length unit."""
        return self.factors["length"]

    @property
    def area(self) -> float:
        """Square millimetres per area unit."""
        return self.factors["area"]

    @property
    def angle(self) -> float:
        """Radians per plane angle unit."""
        return self.factors["angle"]

    @property
    def force(self) -> float:
        """Newtons per force unit."""
        return self.factors["force"]

    @property
    def pressure(self) -> float:
        """Megapascals per pressure unit."""
        return self.factors["pressure"]

    @property
    def line_force(self) -> float:
        """Newtons per millimetre per unit of force per length."""
        return self.factors["line_force"]

    @property
    def moment(self) -> float:
        """Newton millimetres per torque unit."""
        return self.factors["moment"]

    @property
    def density(self) -> float:
        """Kilograms per cubic metre per mass density unit."""
        return self.factors["density"]

    def of_measure(self, measure: str) -> float | None:
        """Return the factor of a measure type or quantity class, None where it has no unit."""
        kind = MEASURE_KINDS.get(measure)
        return None if kind is None else self.factors[kind]


def read_units(file: Any) -> ModelUnits:
    """Read the units that the project assigns."""
    factors = dict(INNER_FACTORS)
    declared: set[UnitKind] = set()
    for unit in _assigned_units(file):
        if text(unit, "UnitType") not in UNIT_TYPE_KINDS:
            continue  # a moment per length has the dimensions of a force, and is none
        try:
            kind, factor = scale_of(unit)
        except UnreadableError:
            continue  # its dimensions are not those of its kind: as if it were not declared
        if kind not in declared:
            factors[kind] = factor
            declared.add(kind)
    return ModelUnits(MappingProxyType(factors), frozenset(declared))


def _assigned_units(file: Any) -> Iterable[Entity]:
    projects = file.by_type("IfcProject")
    assignments = [get(project, "UnitsInContext") for project in projects]
    given = [assignment for assignment in assignments if assignment is not None]
    if not given:
        alone = file.by_type("IfcUnitAssignment")
        given = list(alone) if len(alone) == 1 else []
    for assignment in given:
        yield from several(assignment, "Units")


def scale_of(unit: Entity) -> tuple[UnitKind, float]:
    """Return the kind of a unit entity and its factor to the units used inside.

    Raises UnreadableError where the unit is of no kind known here, or where its dimensions are not
    those of the kind that it claims.
    """
    scale, dimensions = _si_scale(unit)
    kind = _kind(text(unit, "UnitType"), dimensions)
    if KIND_DIMENSIONS[kind] != dimensions:
        raise UnreadableError(f"unit #{unit.id()} claims {kind} but has other dimensions")
    if not (math.isfinite(scale) and scale > 0):
        raise UnreadableError(f"unit #{unit.id()} has the conversion factor {scale}")
    return kind, scale * INNER_FACTORS[kind]


def _kind(unit_type: str, dimensions: Dimensions) -> UnitKind:
    named = UNIT_TYPE_KINDS.get(unit_type)
    if named is not None:
        return named
    for kind, expected in KIND_DIMENSIONS.items():
        if expected == dimensions and kind != "angle":
            return kind
    raise UnreadableError(f"unit type {unit_type or 'without a name'}")


def _si_scale(unit: Entity) -> tuple[float, Dimensions]:
    """Value of a unit in coherent SI, and its dimensions."""
    if unit.is_a("IfcSIUnit"):
        return _si_unit(unit)
    if unit.is_a("IfcConversionBasedUnit"):
        measure = need(unit, "ConversionFactor")
        scale, dimensions = _si_scale(need(measure, "UnitComponent"))
        return float(need(measure, "ValueComponent")[0]) * scale, dimensions
    if unit.is_a("IfcDerivedUnit"):
        return _derived_unit(unit)
    raise UnreadableError(f"unit of class {unit.is_a()}")


def _si_unit(unit: Entity) -> tuple[float, Dimensions]:
    name = get(unit, "Name")
    if name not in SI_UNITS:
        raise UnreadableError(f"unit {name}")
    value, dimensions, power = SI_UNITS[name]
    prefix = get(unit, "Prefix")
    return value * (PREFIXES[prefix] ** power if prefix else 1.0), dimensions


def _derived_unit(unit: Entity) -> tuple[float, Dimensions]:
    total, length, mass, time = 1.0, 0, 0, 0
    for element in several(unit, "Elements"):
        scale, (of_length, of_mass, of_time) = _si_scale(need(element, "Unit"))
        exponent = need(element, "Exponent")
        total *= scale**exponent
        length += of_length * exponent
        mass += of_mass * exponent
        time += of_time * exponent
    return total, (length, mass, time)
