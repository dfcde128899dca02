"""The materials of an element: what their definitions name."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from ifccheck.ifc.entity import Entity, get, text

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context


@dataclass(frozen=True, slots=True)
class Material:
    """One IfcMaterial of an element."""

    step_id: int
    name: str
    category: str
    description: str = ""


@dataclass(frozen=True)
class MaterialDefinition:
    """All that an element's material definition names."""

    materials: tuple[Material, ...] = ()
    set_names: tuple[str, ...] = ()
    """Names of layer, profile and constituent sets and of their parts."""
    profile_names: tuple[str, ...] = ()
    set_ids: tuple[int, ...] = ()
    """Of the sets and their parts, which may have property sets beside those of the materials."""

    @cached_property
    def title(self) -> str:
        """The materials' names, for people."""
        return ", ".join(dict.fromkeys(one.name for one in self.materials if one.name))

    @cached_property
    def names(self) -> tuple[str, ...]:
        """All names and descriptions but those of profiles."""
        materials = (part for one in self.materials for part in (one.name, one.description))
        return (*materials, *self.set_names)


NONE = MaterialDefinition()


class Materials:
    """The material definitions of a model, each read once."""

    def __init__(self, context: Context) -> None:
        self._context = context
        self._by_id: dict[int, MaterialDefinition] = {}

    def of(self, step_id: int) -> MaterialDefinition:
        """Return what the material definition of an element, or of its type, names."""
        definition_id = self._context.relations.material_of(step_id)
        if definition_id is None:
            return NONE
        if definition_id not in self._by_id:
            self._by_id[definition_id] = _read(self._context.file.by_id(definition_id))
        return self._by_id[definition_id]


def _read(definition: Entity) -> MaterialDefinition:
    parts = list(_parts(definition))
    materials = [
        Material(part.id(), text(part, "Name"), text(part, "Category"), text(part, "Description"))
        for part in parts
        if part.is_a("IfcMaterial")
    ]
    others = [part for part in parts if not part.is_a("IfcMaterial")]
    names = [text(part, name) for part in others for name in ("Name", "LayerSetName", "Category")]
    profiles = [get(part, "Profile") for part in others]
    return MaterialDefinition(
        tuple(dict.fromkeys(materials)),
        tuple(dict.fromkeys(name for name in names if name)),
        tuple(
            dict.fromkeys(
                text(profile, "ProfileName")
                for profile in profiles
                if profile is not None and text(profile, "ProfileName")
            )
        ),
        tuple(dict.fromkeys(part.id() for part in others)),
    )


INNER = (
    "ForLayerSet", "ForProfileSet", "Material", "Materials", "MaterialLayers",
    "MaterialProfiles", "MaterialConstituents",
)  # fmt: skip
"""Attributes by which one material definition holds others."""


def _parts(definition: Entity) -> Iterator[Entity]:
    yield definition
    for name in INNER:
        held = get(definition, name)
        if held is not None:
            for part in held if isinstance(held, tuple) else (held,):
                yield from _parts(part)
