"""The concrete of beams: what materials and property sets say of its strength, density and cover.

Read once for all beams of which they say the same.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ifccheck.beam import Given, Reason
from ifccheck.ifc.materials import MaterialDefinition
from ifccheck.ifc.properties import PropertyValue, Set, Sets
from ifccheck.ifc.strength import (
    GENERAL,
    OF_MATERIAL,
    Strengths,
    concrete_strength,
    strengths_told,
)

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

COVERS = ("ConcreteCoverAtLinks", "ConcreteCover")
THICKEST_COVER = 200.0
"""Covers beyond this are misread units [mm]."""
DENSITIES = (1000.0, 3500.0)
"""Densities that concrete has [kg/m3]."""
Told = tuple[tuple[str, str], ...]
"""Texts of properties that may name a material, each with where it stands."""


@dataclass(frozen=True, slots=True)
class Concrete:
    """What a model says of the concrete of a beam, and what is doubtful of it."""

    strength: Given | None
    strength_reason: Reason | None
    least_density: Given | None
    greatest_density: Given | None
    cover: Given | None
    doubts: tuple[str, ...]


class Concretes:
    """The concretes of a model, each read once."""

    def __init__(self, context: Context) -> None:
        self._context = context
        self._strengths = Strengths(context)
        self._known: dict[tuple[int, int, int, Told], Concrete] = {}

    def of(self, definition: MaterialDefinition, sets: Sets, told: Told) -> Concrete:
        """Return what the materials and the property sets of a beam say of its concrete."""
        general, of_material = sets.get(GENERAL), sets.get(OF_MATERIAL)
        # The readers of materials and properties keep these, so that their identity stays theirs.
        key = (id(definition), id(general), id(of_material), told)
        if key not in self._known:
            self._known[key] = self._read(definition, general or {}, of_material or {}, told)
        return self._known[key]

    def _read(
        self, definition: MaterialDefinition, general: Set, of_material: Set, told: Told
    ) -> Concrete:
        readings = [
            *self._strengths.of(definition, general, of_material), *strengths_told(told)
        ]  # fmt: skip
        strength = concrete_strength(readings)
        doubts = list(strength.doubts)
        densities = list(self._densities(definition, doubts))
        return Concrete(
            strength=strength.given,
            strength_reason=strength.reason,
            least_density=min(densities, key=_value, default=None),
            greatest_density=max(densities, key=_value, default=None),
            cover=_cover(general, doubts),
            doubts=tuple(doubts),
        )

    def _densities(self, definition: MaterialDefinition, doubts: list[str]) -> Iterator[Given]:
        """The densities that the materials state."""
        named = [(material.step_id, material.name) for material in definition.materials]
        named += [(step_id, definition.title) for step_id in definition.set_ids]
        for step_id, material in named:
            for name, values in self._context.properties.of_material(step_id).items():
                if (value := values.get("MassDensity")) is not None:
                    source = f'{name}.MassDensity of "{material}"'
                    yield from _stated_density(value, source, doubts)


def _value(given: Given) -> float:
    return given.value


def _stated_density(value: PropertyValue, source: str, doubts: list[str]) -> Iterator[Given]:
    density = value.number
    if density is not None and DENSITIES[0] <= density <= DENSITIES[1]:
        yield Given(density, value.source(source))
    elif value.value:
        doubts.append(f"{source} of {value.value} is no density of concrete: not used")


def _cover(general: Set, doubts: list[str]) -> Given | None:
    """The thickest cover that the beam's set states: that makes the least of the depth."""
    found: list[Given] = []
    for name in COVERS:
        value = general.get(name)
        if value is None or value.value is None:
            continue
        source = f"{GENERAL}.{name}"
        cover = value.number
        if value.kind == "length" and cover is not None and 0.0 < cover <= THICKEST_COVER:
            found.append(Given(cover, source))
        else:
            doubts.append(f"{source} of {value.value} is no cover: not used")
    return max(found, key=_value, default=None)
