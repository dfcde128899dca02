"""Who belongs to whom: one pass over the relationships of a model, keyed by STEP id."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from ifccheck.ifc.entity import Entity, get, label, several
from ifccheck.ifc.statement_patterns import (
    CLASS,
    REFERENCE_OR_NOTHING,
    TEXT,
    TEXT_OR_NOTHING,
    numbers_of,
    numbers_of_each,
    references,
    statement,
)
from ifccheck.ifc.step_table import StepTable

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


_ROOT = (TEXT, REFERENCE_OR_NOTHING, TEXT_OR_NOTHING, TEXT_OR_NOTHING)
_ONE, _MANY = rb"#(?P<one>\d++)", references(rb"?P<many>")
ONE_TO_MANY = statement(CLASS, *_ROOT, _ONE, _MANY)
MANY_TO_ONE = statement(CLASS, *_ROOT, _MANY, _ONE)
ONE_TO_ONE = statement(CLASS, *_ROOT, _ONE, rb"(?P<many>#\d++)")
ONE_TO_MANY_AT_END = re.compile(r",#(\d+),\(((?:#\d+,?)+)\)\)$")
MANY_TO_ONE_AT_END = re.compile(r",\(((?:#\d+,?)+)\),#(\d+)\)$")
"""The ends of a relation as ifcopenshell writes them."""


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


def read_relations(file: Any, statements: StepTable | None = None) -> Relations:
    """Read every relationship of a model once; with its ``statements`` most from their text."""
    found = _Gathering()
    by_class: dict[str, list[int]] = {}
    for relation in file.by_type("IfcRelationship"):
        by_class.setdefault(relation.is_a(), []).append(relation.id())
    for name, step_ids in by_class.items():
        if name in READERS:
            _read_class(found, file, statements, name, step_ids)
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


def _read_class(
    found: _Gathering, file: Any, statements: StepTable | None, name: str, step_ids: list[int]
) -> None:
    """Read the relationships of a class in their order, most from their text.

    Making an object of each of fifty thousand bars, to ask it for its id, takes as long as reading
    half of the beams.
    """
    thorough = READERS[name]
    if statements is None or name not in PLAIN:
        for step_id in step_ids:
            thorough(found, file.by_id(step_id))
        return
    pattern, add = PLAIN[name]
    matches = statements.matches(step_ids, pattern)
    plain = [match.group("one", "many") for match in matches if match is not None]
    related = iter(numbers_of_each([many for _, many in plain]))
    relating = iter([int(one) for one, _ in plain])
    for step_id, match in zip(step_ids, matches, strict=True):
        if match is None:
            thorough(found, file.by_id(step_id))
        else:
            add(found, next(relating), next(related))


def _keep_first(known: dict[int, int], elements: Sequence[int], one: int) -> None:
    """Relate elements to one; of several that a model relates to an element the first counts."""
    if known.keys().isdisjoint(elements):  # then it goes without a step in Python for each
        known.update(dict.fromkeys(elements, one))
    else:
        for element in elements:
            known.setdefault(element, one)


def _add_parts(found: _Gathering, whole: int, parts: Sequence[int]) -> None:
    found.parts[whole] += parts
    _keep_first(found.wholes, parts, whole)


def _add_contained(found: _Gathering, structure: int, elements: Sequence[int]) -> None:
    _keep_first(found.containers, elements, structure)


def _add_typed(found: _Gathering, type_id: int, elements: Sequence[int]) -> None:
    _keep_first(found.types, elements, type_id)


def _add_made_of(found: _Gathering, material: int, elements: Sequence[int]) -> None:
    _keep_first(found.materials, elements, material)


def _add_set(found: _Gathering, set_id: int, elements: Sequence[int]) -> None:
    for element in elements:
        found.sets[element].append(set_id)


def _add_opening(found: _Gathering, element: int, openings: Sequence[int]) -> None:
    found.openings[element] += openings


def _add_projection(found: _Gathering, element: int, features: Sequence[int]) -> None:
    found.projections[element] += features


def _ids(entities: Iterable[Entity] | None) -> list[int]:
    return [entity.id() for entity in entities or ()]


def _read_parts(found: _Gathering, relation: Entity) -> None:
    match = ONE_TO_MANY_AT_END.search(relation.to_string())
    if match is not None:
        _add_parts(found, int(match[1]), numbers_of(match[2].encode()))
    elif relation.get_argument(4) and relation.get_argument(5):
        raise ValueError(f"{label(relation)} relates what is no instance")


def _read_container(found: _Gathering, relation: Entity) -> None:
    structure = get(relation, "RelatingStructure")
    if structure is not None:
        _add_contained(found, structure.id(), _ids(get(relation, "RelatedElements")))


def _read_type(found: _Gathering, relation: Entity) -> None:
    relating = relation.get_argument(5)
    if relating is not None:
        _add_typed(found, relating.id(), _ids(relation.get_argument(4)))


def _read_material(found: _Gathering, relation: Entity) -> None:
    match = MANY_TO_ONE_AT_END.search(relation.to_string())
    if match is not None:
        _add_made_of(found, int(match[2]), numbers_of(match[1].encode()))


def _read_sets(found: _Gathering, relation: Entity) -> None:
    relating = relation.get_argument(5)
    if relating is None:
        return
    # IFC4 lets one relation carry a set of definitions, wrapped in a defined type (id 0)
    sets = [relating.id()] if relating.id() else _ids(relating[0])
    elements = _ids(relation.get_argument(4))
    for set_id in sets:
        _add_set(found, set_id, elements)


def _read_opening(found: _Gathering, relation: Entity) -> None:
    element, opening = relation.get_argument(4), relation.get_argument(5)
    if element is not None and opening is not None:
        _add_opening(found, element.id(), (opening.id(),))


def _read_projection(found: _Gathering, relation: Entity) -> None:
    element, feature = relation.get_argument(4), relation.get_argument(5)
    if element is not None and feature is not None:
        _add_projection(found, element.id(), (feature.id(),))


READERS: Mapping[str, Callable[[_Gathering, Entity], None]] = {
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

Add = Callable[[_Gathering, int, Sequence[int]], None]
PLAIN: Mapping[str, tuple[re.Pattern[bytes], Add]] = {
    "IfcRelAggregates": (ONE_TO_MANY, _add_parts),
    "IfcRelNests": (ONE_TO_MANY, _add_parts),
    "IfcRelContainedInSpatialStructure": (MANY_TO_ONE, _add_contained),
    "IfcRelDefinesByType": (MANY_TO_ONE, _add_typed),
    "IfcRelAssociatesMaterial": (MANY_TO_ONE, _add_made_of),
    "IfcRelDefinesByProperties": (MANY_TO_ONE, _add_set),
    "IfcRelVoidsElement": (ONE_TO_ONE, _add_opening),
    "IfcRelProjectsElement": (ONE_TO_ONE, _add_projection),
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
