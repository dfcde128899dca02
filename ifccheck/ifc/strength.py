"""Concrete strength of a beam from what its property sets and materials say.

What speaks of a strength and cannot be read leaves the beam without one: a default is for
models that are silent.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ifccheck.beam import Given, Reason
from ifccheck.ifc.materials import Material, MaterialDefinition
from ifccheck.ifc.properties import PropertyValue, Set
from ifccheck.ifc.strength_texts import (
    Reading,
    Unread,
    is_credible,
    is_only_steel,
    lowest_of,
    read_strength_text,
)

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

GENERAL, OF_MATERIAL = "Pset_ConcreteElementGeneral", "Pset_MaterialConcrete"
"""Sets of a beam that may state its strength."""

Said = Reading | Unread
"""What one source says of a strength."""


@dataclass(frozen=True, slots=True)
class Strength:
    """The strength that the sources of one beam support, or why it cannot be told."""

    given: Given | None
    reason: Reason | None
    doubts: tuple[str, ...]


def concrete_strength(readings: Sequence[Said]) -> Strength:
    """Return the strength that the sources of one beam support, and what is doubtful of it."""
    read = [each for each in readings if isinstance(each, Reading)]
    unread = [each for each in readings if isinstance(each, Unread)]
    texts = [f"{one.value:.4g} MPa from {one.source} is no concrete strength"
             for one in unread if not math.isnan(one.value)]  # fmt: skip
    ranges = [(one.low, one.high) for one in read]
    low = lowest_of(ranges)[0] if read else 0.0
    blocking = [one for one in unread if not (read and one.at_least(low)) and one.value != 0.0]
    reason = Reason(_cannot_be_read(blocking[0])) if blocking else None
    texts += [_several(one) for one in read if one.others]
    given = None
    if read:
        lowest = next(one for one in read if (one.low, one.high) == lowest_of(ranges))
        texts += _doubts_of(read, lowest)
        given = Given(round(lowest.low, 6), lowest.source)
    return Strength(given if reason is None else None, reason, tuple(texts))


def _cannot_be_read(one: Unread) -> str:
    told = "" if math.isnan(one.value) else f" ({one.value:.4g} MPa is no concrete strength)"
    return (
        f"concrete strength cannot be read from {one.source}{told}: correct it, or state"
        " concrete_strength in an entry of [[materials]]"
    )


def _several(one: Reading) -> str:
    listed = ", ".join(f"{value:.4g}" for value in (one.low, *one.others))
    return f"{one.source} gives several strengths ({listed} MPa): {one.low:.4g} MPa is used"


def _doubts_of(read: Sequence[Reading], lowest: Reading) -> Iterator[str]:
    """What is doubtful of the lowest strength among others."""
    certain = [one for one in read if not one.doubtful]
    chosen = min(certain or read, key=_low)
    others = [one for one in read if not one.admits(chosen.low)]
    if others:
        listed = "; ".join(f"{one.low:.4g} MPa from {one.source}" for one in [chosen, *others])
        yield f"concrete strength differs between sources ({listed}): the lowest is used"
    if lowest.doubtful:
        yield (
            f"{lowest.source} can mean a cube or a cylinder strength: "
            f"taken as cube, {lowest.low:.4g} MPa on cylinders"
        )


def _low(reading: Reading) -> float:
    return reading.low


class Strengths:
    """Strength readings of the materials of a model, each read once."""

    def __init__(self, context: Context) -> None:
        self._context = context
        self._by_material: dict[int, tuple[Said, ...]] = {}

    def of(self, definition: MaterialDefinition, general: Set, of_material: Set) -> list[Said]:
        """Return what two of a beam's property sets and its materials say of its strength."""
        readings = list(_from_sets(general, of_material))
        for material in definition.materials:
            readings += self._of_material(material)
        for name in definition.set_names:
            readings += _from_text(name, f'material set name "{name}"')
        for step_id in definition.set_ids:
            readings += self._from_properties(step_id, f'of "{definition.title}"')
        return readings

    def _of_material(self, material: Material) -> tuple[Said, ...]:
        if material.step_id not in self._by_material:
            self._by_material[material.step_id] = tuple(self._read(material))
        return self._by_material[material.step_id]

    def _read(self, material: Material) -> Iterator[Said]:
        if is_only_steel(material.name):
            return
        yield from self._from_properties(material.step_id, f'of "{material.name}"')
        for text in dict.fromkeys((material.name, material.category, material.description)):
            yield from _from_text(text, f'material name "{text}"')

    def _from_properties(self, step_id: int, of_material: str) -> Iterator[Said]:
        """What the property sets of a material, or of a part of a set of them, say."""
        for name, values in self._context.properties.of_material(step_id).items():
            for strength in ("CompressiveStrength", "StrengthClass"):
                yield from _from_value(values.get(strength), f"{name}.{strength} {of_material}")


def strengths_told(properties: Iterable[tuple[str, str]]) -> Iterator[Said]:
    """Yield the strengths that texts of properties name, each given with its property."""
    for source, text in properties:
        yield from _from_text(text, f'{source} "{text}"')


def _from_text(text: str, source: str, bare: bool = False) -> Iterator[Said]:
    reading = read_strength_text(text, source, bare)
    if reading is not None:
        yield reading


def _from_sets(general: Set, of_material: Set) -> Iterator[Said]:
    yield from _from_value(general.get("StrengthClass"), f"{GENERAL}.StrengthClass")
    for name, values in ((GENERAL, general), (OF_MATERIAL, of_material)):
        yield from _from_value(values.get("CompressiveStrength"), f"{name}.CompressiveStrength")


def _from_value(value: PropertyValue | None, source: str) -> Iterator[Said]:
    """What a property for a strength says: a pressure, or a text such as "C30/37"."""
    if value is None or value.value is None:
        return
    if value.kind == "pressure":
        yield _pressure(value, value.source(source))
        return
    given = value.value if isinstance(value.value, tuple) else (value.value,)
    text = ", ".join(str(each).strip() for each in given)
    yield from _from_text(text, f'{source} "{text}"', bare=True)


def _pressure(value: PropertyValue, source: str) -> Said:
    number = value.number
    if number is None or math.isnan(number):
        return Unread(source)
    if not is_credible((number, number)):
        return Unread(source, number)
    return Reading(number, number, source)
