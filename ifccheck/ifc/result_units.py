"""The unit that each kind of result is written in: the model's own, or one that is added."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any, Literal, get_args

from ifccheck.ifc.entity import UnreadableError, get, several, text
from ifccheck.ifc.units import UNIT_TYPE_KINDS, scale_of
from ifccheck.result_sets import Measure

MeasureWithUnit = Literal["length", "force", "line_force", "moment", "pressure", "area"]
MEASURES_WITH_UNIT: tuple[MeasureWithUnit, ...] = get_args(MeasureWithUnit)

NewLine = Callable[[str], int]
"""Adds an instance, given without its number, and returns the number."""


@dataclass(frozen=True, slots=True)
class UnitEntity:
    """A unit in the model and how many N, mm, MPa (or their products) it is worth."""

    step_id: int
    worth: float


@dataclass(frozen=True, slots=True)
class _SiUnit:
    unit_type: str
    prefix: str
    name: str
    worth: float


_SI_UNITS: Mapping[MeasureWithUnit, _SiUnit] = {
    "length": _SiUnit("LENGTHUNIT", ".MILLI.", "METRE", 1.0),
    "force": _SiUnit("FORCEUNIT", ".KILO.", "NEWTON", 1e3),
    "pressure": _SiUnit("PRESSUREUNIT", ".MEGA.", "PASCAL", 1.0),
    "area": _SiUnit("AREAUNIT", ".MILLI.", "SQUARE_METRE", 1.0),
}
"""What is added where the model declares none: mm, kN, MPa, mm2."""

_METRE = _SiUnit("LENGTHUNIT", "$", "METRE", 1e3)

_PER_METRE: Mapping[MeasureWithUnit, tuple[str, int, float]] = {
    "line_force": ("LINEARFORCEUNIT", -1, 1.0),
    "moment": ("TORQUEUNIT", 1, 1e6),
}
"""kN/m and kN*m: the unit's type, the exponent of the metre and its worth."""


def result_units(
    file: Any, measures: Iterable[Measure], new_line: NewLine
) -> dict[Measure, UnitEntity]:
    """Return the unit of each measure that is used, adding those that the model lacks."""
    maker = _UnitMaker(str(file.schema), _declared(file), new_line)
    used = set(measures)
    return {measure: maker.unit(measure) for measure in MEASURES_WITH_UNIT if measure in used}


def _declared(file: Any) -> dict[MeasureWithUnit, UnitEntity]:
    """Find the units that the project assigns; of each kind the first counts."""
    found: dict[MeasureWithUnit, UnitEntity] = {}
    for unit in _assigned(file):
        if text(unit, "UnitType") not in UNIT_TYPE_KINDS:
            continue
        try:
            kind, worth = scale_of(unit)
        except UnreadableError:
            continue  # of other dimensions than its kind: one that is right is added instead
        if kind in MEASURES_WITH_UNIT:
            found.setdefault(kind, UnitEntity(unit.id(), worth))
    return found


def _assigned(file: Any) -> Iterator[Any]:
    for project in file.by_type("IfcProject"):
        assignment = get(project, "UnitsInContext")
        if assignment is not None:
            yield from several(assignment, "Units")


@dataclass
class _UnitMaker:
    """Gives each unit once, adding what the model does not declare."""

    schema: str
    declared: Mapping[MeasureWithUnit, UnitEntity]
    new_line: NewLine
    made: dict[_SiUnit, UnitEntity] = field(default_factory=dict)

    def unit(self, measure: MeasureWithUnit) -> UnitEntity:
        if measure in self.declared:
            return self.declared[measure]
        if measure in _SI_UNITS:
            return self._si(_SI_UNITS[measure])
        return self._derived(*_PER_METRE[measure])

    def _si(self, unit: _SiUnit) -> UnitEntity:
        if unit not in self.made:
            step_id = self.new_line(f"IFCSIUNIT(*,.{unit.unit_type}.,{unit.prefix},.{unit.name}.)")
            self.made[unit] = UnitEntity(step_id, unit.worth)
        return self.made[unit]

    def _derived(self, unit_type: str, metre_exponent: int, worth: float) -> UnitEntity:
        kilonewton = self._declared_or_added("force", _SI_UNITS["force"])
        metre = self._declared_or_added("length", _METRE)
        elements = (
            self.new_line(f"IFCDERIVEDUNITELEMENT(#{kilonewton.step_id},1)"),
            self.new_line(f"IFCDERIVEDUNITELEMENT(#{metre.step_id},{metre_exponent})"),
        )
        listed = ",".join(f"#{element}" for element in elements)
        name = ",$" if self.schema.startswith("IFC4X3") else ""
        step_id = self.new_line(f"IFCDERIVEDUNIT(({listed}),.{unit_type}.,${name})")
        return UnitEntity(step_id, worth)

    def _declared_or_added(self, measure: MeasureWithUnit, unit: _SiUnit) -> UnitEntity:
        declared = self.declared.get(measure)
        if declared is not None and declared.worth == unit.worth:
            return declared
        return self._si(unit)
