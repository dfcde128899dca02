"""Who belongs to whom: one pass over the relationships of a model, keyed by STEP id."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from ifccheck.ifc.entity import Entity, get, label, several

Ids = tuple[int, ...]


@dataclass(frozen=True)
class Relations:
    """The relationships that the reading needs. All keys and values are STEP ids."""

    parts: Mapping[int, Sequence[int]]
    """Parts of a whole, through every aggregation and nesting relation that names it."""
    wholes: Mapping[int, int]
    containers: Mapping[int, int]
    """Spatial structure element that an element is placed in directly."""
    types: Mapping[int, int]
    materials: Mapping[int, int]
    """Material definition related to an element or a type directly."""
    sets: Mapping[int, Sequence[int]]
    """Property and quantity sets related to an object directly, or held by a type."""
    openings: Mapping[int, Sequence[int]]
    projections: Mapping[int, Sequence[int]]
    """Features that stick out of an element, modelled beside its body."""
    material_properties: Mapping[int, Sequence[int]]
    """Property entities of a material."""

    def whole(self, step_id: int) -> int | None:
        """Return what the element is a part of."""
        return self.wholes.get(step_id)

    def ancestors(self, step_id: int) -> Iterator[int]:
        """Yield the wholes from the nearest outwards."""
        seen = {step_id}
        while (whole := self.wholes.get(step_id)) is not None and whole not in seen:
            seen.add(whole)
            yield whole
            step_id = whole

    def descendants(self, step_id: int) -> Iterator[int]:
        """Yield the parts, their parts, and so on."""
        seen, waiting = {step_id}, list(self.parts.get(step_id, ()))
        while waiting:
            part = waiting.pop()
            if part not in seen:
                seen.add(part)
                yield part
                waiting.extend(self.parts.get(part, ()))

    def container(self, step_id: int) -> int | None:
        """Return the spatial element that holds the element, or the whole that it is part of."""
        if (found := self.containers.get(step_id)) is not None:
            return found
        for whole in self.ancestors(step_id):
            if (found := self.containers.get(whole)) is not None:
                return found
        return None

    def type_of(self, step_id: int) -> int | None:
        """Return the type of an occurrence."""
        return self.types.get(step_id)

    def material_of(self, step_id: int) -> int | None:
        """Return the material definition of an element, or else of its type."""
        own = self.materials.get(step_id)
        if own is not None:
            return own
        type_id = self.types.get(step_id)
        return None if type_id is None else self.materials.get(type_id)

    def property_sets(self, step_id: int) -> Ids:
        """Return the sets of an object, its own first, then those of its type."""
        own = tuple(self.sets.get(step_id, ()))
        type_id = self.types.get(step_id)
        return own if type_id is None else own + tuple(self.sets.get(type_id, ()))


# The ends of a relation as they are written. Making an object of each of fifty thousand bars,
# to ask it for its id, takes as long as reading half of the beams.
ONE_TO_MANY = re.compile(r",#(\d+),\(((?:#\d+,?)+)\)\)$")
MANY_TO_ONE = re.compile(r",\(((?:#\d+,?)+)\),#(\d+)\)$")


def _ids(listed: str) -> list[int]:
    return [int(reference) for reference in listed[1:].split(",#")]


@dataclass
class _Gathering:
    parts: dict[int, list[int]] = field(default_factory=lambda: defaultdict(list))
    wholes: dict[int, int] = field(default_factory=dict)
    containers: dict[int, int] = field(default_factory=dict)
    types: dict[int, int] = field(default_factory=dict)
    materials: dict[int, int] = field(default_factory=dict)
    sets: dict[int, list[int]] = field(default_factory=lambda: defaultdict(list))
    openings: dict[int, list[int]] = field(default_factory=lambda: defaultdict(list))
    projections: dict[int, list[int]] = field(default_factory=lambda: defaultdict(list))
    material_properties: dict[int, list[int]] = field(default_factory=lambda: defaultdict(list))


def read_relations(file: Any) -> Relations:
    """Read every relationship of a model once."""
    found = _Gathering()
    for relation in file.by_type("IfcRelationship"):
        reader = READERS.get(relation.is_a())
        if reader is not None:
            reader(found, relation)
    _read_type_sets(found, file)
    _read_material_properties(found, file)
    return Relations(
        parts=dict(found.parts),
        wholes=found.wholes,
        containers=found.containers,
        types=found.types,
        materials=found.materials,
        sets=dict(found.sets),
        openings=dict(found.openings),
        projections=dict(found.projections),
        material_properties=dict(found.material_properties),
    )


def _read_parts(found: _Gathering, relation: Entity) -> None:
    match = ONE_TO_MANY.search(relation.to_string())
    if match is None:
        if relation.get_argument(4) and relation.get_argument(5):
            raise ValueError(f"{label(relation)} relates what is no instance")
        return
    whole, related = int(match[1]), _ids(match[2])
    found.parts[whole] += related
    for part in related:
        found.wholes.setdefault(part, whole)


def _read_container(found: _Gathering, relation: Entity) -> None:
    structure = get(relation, "RelatingStructure")
    if structure is not None:
        for element in several(relation, "RelatedElements"):
            found.containers.setdefault(element.id(), structure.id())


def _read_type(found: _Gathering, relation: Entity) -> None:
    relating = relation.get_argument(5)
    if relating is not None:
        type_id = relating.id()
        for element in relation.get_argument(4) or ():
            found.types.setdefault(element.id(), type_id)


def _read_material(found: _Gathering, relation: Entity) -> None:
    match = MANY_TO_ONE.search(relation.to_string())
    if match is not None:
        material = int(match[2])
        for element in _ids(match[1]):
            found.materials.setdefault(element, material)


def _read_sets(found: _Gathering, relation: Entity) -> None:
    relating = relation.get_argument(5)
    if relating is None:
        return
    # IFC4 lets one relation carry a set of definitions, wrapped in a defined type (id 0)
    sets = [relating.id()] if relating.id() else [entity.id() for entity in relating[0]]
    for element in relation.get_argument(4) or ():
        found.sets[element.id()].extend(sets)


def _read_opening(found: _Gathering, relation: Entity) -> None:
    element, opening = relation.get_argument(4), relation.get_argument(5)
    if element is not None and opening is not None:
        found.openings[element.id()].append(opening.id())


def _read_projection(found: _Gathering, relation: Entity) -> None:
    element, feature = relation.get_argument(4), relation.get_argument(5)
    if element is not None and feature is not None:
        found.projections[element.id()].append(feature.id())


READERS = {
    "IfcRelAggregates": _read_parts,
    "IfcRelNests": _read_parts,
    "IfcRelContainedInSpatialStructure": _read_container,
    "IfcRelDefinesByType": _read_type,
    "IfcRelAssociatesMaterial": _read_material,
    "IfcRelDefinesByProperties": _read_sets,
    "IfcRelOverridesProperties": _read_sets,
    "IfcRelVoidsElement": _read_opening,
    "IfcRelProjectsElement": _read_projection,
}


def _read_type_sets(found: _Gathering, file: Any) -> None:
    for entity in file.by_type("IfcTypeObject"):
        held = several(entity, "HasPropertySets")
        if held:
            found.sets[entity.id()].extend(definition.id() for definition in held)


def _read_material_properties(found: _Gathering, file: Any) -> None:
    for entity in file.by_type("IfcMaterialProperties"):
        material = get(entity, "Material")
        if material is not None:
            found.material_properties[material.id()].append(entity.id())
