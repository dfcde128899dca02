"""Concrete strength from property values and from the names that people give concretes.

The strength read is the specified cylinder strength [MPa]. A name that can mean a cylinder or
a cube is read both ways and the lower counts.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

from ifccheck.beam import Given, Remark
from ifccheck.ifc.materials import Material, MaterialDefinition
from ifccheck.ifc.properties import PropertyValue, Sets

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

CUBE_TO_CYLINDER = 0.8
"""Cylinder strength over cube strength of normal concrete, the usual lower value."""
MPA_PER_PSI = 6.894757293168361e-3
LEAST, MOST = 5.0, 150.0
"""Strengths outside these are misread units [MPa]."""
AGREE = 0.01
"""Relative difference below which two sources agree."""
STAGE = "materials"

TWO_STRENGTHS = re.compile(
    r"(?<![a-z0-9.])(?:u?hpc|l?c)?[ _]?(\d{2,3}) ?/ ?(\d{2,3})(?![\d.])", re.I
)
CYLINDER = re.compile(
    r"(?<![a-z])f['’`]?c['’`]?k?\s*[=:]?\s*(\d+(?:\.\d+)?)\s*(ksi|psi|mpa|n/mm)?", re.I
)
CUBE = re.compile(r"(?<![a-z])(?:fcu|rck|fck,? ?cube)\s*[=:]?\s*(\d+(?:\.\d+)?)", re.I)
WITH_UNIT = re.compile(r"(?<![\w.])(\d+(?:\.\d+)?)[\s-]*(ksi|psi|mpa|n/mm)", re.I)
SPANISH = re.compile(r"(?<![a-z])h[aplm]-? ?(\d{2,3})(?!\d)", re.I)
AMBIGUOUS = re.compile(r"(?<![a-z])([bckm]) ?-?(\d{2})(?![\d/.]|\s*[x×])", re.I)
BARE = re.compile(r"\s*(\d{2,3}(?:\.\d+)?)\s*$")


@dataclass(frozen=True, slots=True)
class Reading:
    """A strength that one source gives: the lowest and the highest that it can mean [MPa]."""

    low: float
    high: float
    source: str

    @property
    def doubtful(self) -> bool:
        """Tell whether it can be read two ways."""
        return self.high > self.low * (1.0 + AGREE)

    @property
    def credible(self) -> bool:
        """Tell whether it is a strength that concrete has."""
        return self.low >= LEAST and self.high <= MOST

    def admits(self, value: float) -> bool:
        """Tell whether it can mean a value."""
        return self.low * (1.0 - AGREE) <= value <= self.high * (1.0 + AGREE)


@lru_cache(maxsize=4096)
def read_strength_text(text: str, source: str, bare: bool = False) -> Reading | None:
    """Return the cylinder strength that a text names, None where it names none.

    ``bare``: the text is a strength class, so that a number alone counts too.
    """
    low, high = _range(text, bare)
    return Reading(low, high, source) if high > 0.0 else None


def _range(text: str, bare: bool) -> tuple[float, float]:
    """Lowest and highest strength that a text can mean; (0, 0) where it means none."""
    if found := CUBE.search(text):
        return (CUBE_TO_CYLINDER * float(found[1]),) * 2
    if found := CYLINDER.search(text):
        return (_in_mpa(float(found[1]), found[2]),) * 2
    if (found := TWO_STRENGTHS.search(text)) and _is_class(float(found[1]), float(found[2])):
        return (float(found[1]),) * 2
    if found := WITH_UNIT.search(text):
        return (_in_mpa(float(found[1]), found[2]),) * 2
    if found := SPANISH.search(text):
        return (float(found[1]),) * 2
    if found := AMBIGUOUS.search(text):
        return CUBE_TO_CYLINDER * float(found[2]), float(found[2])
    if bare and (found := BARE.match(text)):
        return CUBE_TO_CYLINDER * float(found[1]), float(found[1])
    return 0.0, 0.0


def _is_class(cylinder: float, cube: float) -> bool:
    """Tell whether two numbers are a strength class and not, say, two sides of a section."""
    return cylinder <= MOST and 1.05 <= cube / cylinder <= 1.4


def _in_mpa(value: float, unit: str | None) -> float:
    folded = (unit or "").lower()
    if folded == "ksi":
        return value * 1000.0 * MPA_PER_PSI
    if folded == "psi" or (not folded and value >= 1000.0):
        return value * MPA_PER_PSI
    return value


def concrete_strength(readings: Sequence[Reading], beam: str) -> tuple[Given | None, list[Remark]]:
    """Return the strength that the sources of one beam support, and what is doubtful of it."""
    remarks = [
        Remark(beam, STAGE, f"{one.low:.4g} MPa from {one.source} is no concrete strength", "doubt")
        for one in readings
        if not one.credible
    ]
    credible = [reading for reading in readings if reading.credible]
    if not credible:
        return None, remarks
    certain = [reading for reading in credible if not reading.doubtful]
    chosen = min(certain or credible, key=_low)
    others = [reading for reading in credible if not reading.admits(chosen.low)]
    lowest = min([chosen, *others], key=_low)
    if others:
        listed = "; ".join(f"{one.low:.4g} MPa from {one.source}" for one in [chosen, *others])
        text = f"concrete strength differs between sources ({listed}): the lowest is used"
        remarks.append(Remark(beam, STAGE, text, "doubt"))
    if lowest.doubtful:
        text = (
            f"{lowest.source} can mean a cube or a cylinder strength: "
            f"taken as cube, {lowest.low:.4g} MPa on cylinders"
        )
        remarks.append(Remark(beam, STAGE, text, "doubt"))
    return Given(round(lowest.low, 6), lowest.source), remarks


def _low(reading: Reading) -> float:
    return reading.low


class Strengths:
    """Strength readings of the materials of a model, each read once."""

    def __init__(self, context: Context) -> None:
        self._context = context
        self._by_material: dict[int, tuple[Reading, ...]] = {}

    def of(self, definition: MaterialDefinition, sets: Sets) -> list[Reading]:
        """Return what a beam's property sets and materials say of its strength."""
        readings = list(_from_sets(sets))
        for material in definition.materials:
            readings += self._of_material(material)
        for name in definition.set_names:
            reading = read_strength_text(name, f'material set name "{name}"')
            readings += [reading] if reading is not None else []
        return readings

    def _of_material(self, material: Material) -> tuple[Reading, ...]:
        if material.step_id not in self._by_material:
            self._by_material[material.step_id] = tuple(self._read(material))
        return self._by_material[material.step_id]

    def _read(self, material: Material) -> Iterator[Reading]:
        sets = self._context.properties.of_material(material.step_id)
        for name, values in sets.items():
            value = values.get("CompressiveStrength")
            if value is not None:
                yield from _from_value(value, f'{name}.CompressiveStrength of "{material.name}"')
            yield from _from_class(values.get("StrengthClass"), f"{name}.StrengthClass")
        for text in dict.fromkeys((material.name, material.category, material.description)):
            reading = read_strength_text(text, f'material name "{text}"')
            if reading is not None:
                yield reading


def strengths_told(properties: Iterable[tuple[str, str]]) -> Iterator[Reading]:
    """Yield the strengths that texts of properties name, each given with its property."""
    for source, text in properties:
        reading = read_strength_text(text, f'{source} "{text}"')
        if reading is not None:
            yield reading


def _from_sets(sets: Sets) -> Iterator[Reading]:
    general = sets.get("Pset_ConcreteElementGeneral", {})
    yield from _from_class(
        general.get("StrengthClass"), "Pset_ConcreteElementGeneral.StrengthClass"
    )
    for name in ("Pset_ConcreteElementGeneral", "Pset_MaterialConcrete"):
        value = sets.get(name, {}).get("CompressiveStrength")
        if value is not None:
            yield from _from_value(value, f"{name}.CompressiveStrength")


def _from_class(value: PropertyValue | None, source: str) -> Iterator[Reading]:
    if value is None or value.value is None:
        return
    if value.kind == "pressure":
        yield from _from_value(value, source)
        return
    text = str(value.value).strip()
    reading = read_strength_text(text, f'{source} "{text}"', bare=True)
    if reading is not None:
        yield reading


def _from_value(value: PropertyValue, source: str) -> Iterator[Reading]:
    number = value.number
    if number is not None and value.kind == "pressure":
        yield Reading(number, number, source)
