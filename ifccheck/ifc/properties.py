"""Property and quantity sets, read only for the objects that are asked about."""

from __future__ import annotations

from collections.abc import Collection, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import chain, islice
from typing import Any, Literal

from ifccheck.ifc.entity import Entity, UnreadableError, get, several, text, text_at
from ifccheck.ifc.relations import Relations
from ifccheck.ifc.statement_patterns import (
    REFERENCE_OR_NOTHING,
    TEXT,
    TEXT_OR_NOTHING,
    numbers_of_each,
    references,
    statement,
)
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.units import MEASURE_KINDS, ModelUnits, UnitKind, scale_of

HELD_BY = {
    "IfcElementQuantity": "Quantities",
    "IfcMaterialProperties": "Properties",
    "IfcExtendedMaterialProperties": "ExtendedProperties",
}
"""The attribute that holds the values of a set, where it is not HasProperties."""
IN_ATTRIBUTES = (
    "IfcGeneralMaterialProperties",
    "IfcMechanicalMaterialProperties",
    "IfcMechanicalConcreteMaterialProperties",
    "IfcMechanicalSteelMaterialProperties",
)
"""IFC2X3 keeps the common material values in attributes of these."""


Form = Literal["single", "list", "choice", "range", "table", "reference"]
FORMS: Mapping[str, Form] = {
    "IfcPropertyTableValue": "table", "IfcPropertyReferenceValue": "reference",
}  # fmt: skip
"""Properties that hold no value to be read, by class"""


@dataclass(frozen=True, slots=True)
class PropertyValue:
    """One value of a set, as the model gives it."""

    value: Any
    """str, float, int, bool or None; a tuple where the property holds several, or bounds."""
    measure: str
    """Name of its measure type, such as "IfcLengthMeasure"; "" where there is no value."""
    factor: float | None
    """Times ``value`` gives N, mm, MPa, rad, kg/m3; None where it has no unit, or one that
    contradicts its measure."""
    kind: UnitKind | None = None
    form: Form = "single"
    """What several values are: a list, choices of an enumeration, bounds."""
    declared: bool = True
    """False where neither the value nor the project says which unit is meant: the SI unit is taken,
    which only a value of the right size bears out."""

    def source(self, place: str) -> str:
        """Where it was found, and what had to be taken for granted."""
        return place if self.declared else f"{place} (no unit declared, taken in SI units)"

    @property
    def number(self) -> float | None:
        """The value in the units used inside; None where it is no number with a unit."""
        if self.factor is None or isinstance(self.value, bool):
            return None
        return self.value * self.factor if isinstance(self.value, int | float) else None


Set = Mapping[str, PropertyValue]
Sets = Mapping[str, Set]
Pairs = tuple[tuple[str, PropertyValue], ...]

_NAME = rb"'([ -&(-\[\]-~]*+)'"
"""A name that says itself: without escapes."""
SET = statement(b"IFCPROPERTYSET", TEXT, REFERENCE_OR_NOTHING, _NAME, TEXT_OR_NOTHING, references())


class Properties:
    """The property sets of a model's objects, read on demand and kept."""

    def __init__(
        self,
        file: Any,
        units: ModelUnits,
        relations: Relations,
        statements: StepTable | None = None,
    ) -> None:
        self._file = file
        self._units = units
        self._relations = relations
        self._statements = statements
        self._by_object: dict[int, Sets] = {}
        self._by_set: dict[int, Set] = {}
        self._names: dict[int, str] = {}
        """Of the sets that are written plainly."""
        self._texts: dict[int, tuple[list[int], list[bytes]]] = {}
        """Their properties and what these say, of the sets that are likely asked about."""
        self._by_text: dict[bytes, Pairs] = {}
        self._by_texts: dict[tuple[bytes, ...], Set] = {}

    def of(self, step_id: int) -> Sets:
        """Return the sets of an object by name; its own values go before those of its type."""
        if step_id not in self._by_object:
            self._by_object[step_id] = self._sets(self._relations.property_sets(step_id))
        return self._by_object[step_id]

    def held(self, step_id: int) -> Iterator[tuple[str, int]]:
        """Yield name and STEP id of each set that an object, or a type, holds itself."""
        for set_id in dict.fromkeys(self._relations.sets.get(step_id, ())):
            yield self._name(set_id), set_id

    def find(self, step_ids: Iterable[int], names: Collection[str]) -> None:
        """Find the sets of many objects in the file's text, and what those of some names hold."""
        if self._statements is None:
            return
        sets = dict.fromkeys(chain.from_iterable(map(self._relations.property_sets, step_ids)))
        matches = zip(sets, self._statements.matches(list(sets), SET), strict=True)
        asked: dict[int, bytes] = {}
        for set_id, match in matches:
            if match is not None and (name := match[1].decode("ascii").strip()):
                self._names[set_id] = name
                if name in names:
                    asked[set_id] = match[2]
        held = numbers_of_each(list(asked.values()))
        texts = iter(self._statements.texts(list(chain.from_iterable(held))))
        for set_id, properties in zip(asked, held, strict=True):
            self._texts[set_id] = properties, list(islice(texts, len(properties)))

    def of_material(self, material_id: int) -> Sets:
        """Return the property sets of a material."""
        return self._sets(tuple(self._relations.material_properties.get(material_id, ())))

    def _sets(self, set_ids: tuple[int, ...]) -> Sets:
        by_name: dict[str, list[int]] = {}
        for set_id in set_ids:
            by_name.setdefault(self._name(set_id), []).append(set_id)
        return _SetsOfObject(self, by_name)

    def _name(self, set_id: int) -> str:
        if set_id in self._names:
            return self._names[set_id]
        entity = self._file.by_id(set_id)
        return text(entity, "Name") or str(entity.is_a())

    def values(self, set_ids: Sequence[int]) -> Set:
        """Return the values of sets of one name; of two values the first counts."""
        if len(set_ids) == 1:
            return self._values_of(set_ids[0])
        merged: dict[str, PropertyValue] = {}
        for set_id in set_ids:
            for key, value in self._values_of(set_id).items():
                merged.setdefault(key, value)
        return merged

    def _values_of(self, set_id: int) -> Set:
        if set_id not in self._by_set:
            plain = self._plain_values(set_id)
            values = dict(self._values(self._file.by_id(set_id))) if plain is None else plain
            self._by_set[set_id] = values
        return self._by_set[set_id]

    def _plain_values(self, set_id: int) -> Set | None:
        """The values of a set that is written plainly, those of one text read once."""
        step_ids, texts = self._texts.get(set_id, ((), ()))
        if not texts or not all(texts):
            return None  # what is hidden says nothing of being the same
        key = tuple(texts)
        if key not in self._by_texts:
            each = map(self._pairs, step_ids, texts)
            self._by_texts[key] = dict(pair for pairs in each for pair in pairs)
        return self._by_texts[key]

    def _pairs(self, step_id: int, text: bytes) -> Pairs:
        """Names and values of a property; ``text`` is all of it but its number."""
        if text not in self._by_text:
            self._by_text[text] = tuple(self._property(self._file.by_id(step_id), ""))
        return self._by_text[text]

    def _values(self, entity: Entity) -> Iterator[tuple[str, PropertyValue]]:
        kind = entity.is_a()
        for item in several(entity, HELD_BY.get(kind, "HasProperties")):
            if kind == "IfcElementQuantity":
                yield text_at(item, 0), self._quantity(item)
            else:
                yield from self._property(item, "")
        if kind in IN_ATTRIBUTES:
            yield from self._attributes(entity)

    def _property(self, item: Entity, prefix: str) -> Iterator[tuple[str, PropertyValue]]:
        kind, name = item.is_a(), prefix + text_at(item, 0)
        if kind == "IfcPropertySingleValue":
            yield name, self._value(item, item.get_argument(2), item.get_argument(3))
        elif kind == "IfcComplexProperty":
            for inner in several(item, "HasProperties"):
                yield from self._property(inner, name + ".")
        elif kind == "IfcPropertyListValue":
            listed = several(item, "ListValues")
            yield name, self._several(item, listed, get(item, "Unit"), "list")
        elif kind == "IfcPropertyEnumeratedValue":
            yield name, self._several(item, several(item, "EnumerationValues"), None, "choice")
        elif kind == "IfcPropertyBoundedValue":
            bounds = [get(item, "LowerBoundValue"), get(item, "UpperBoundValue")]
            given = tuple(bound for bound in bounds if bound is not None)
            yield name, self._several(item, given, get(item, "Unit"), "range")
        elif kind in FORMS:
            yield name, PropertyValue(None, "", None, form=FORMS[kind])

    def _value(self, item: Entity, wrapped: Entity | None, unit: Entity | None) -> PropertyValue:
        if wrapped is None:
            return PropertyValue(None, "", None)
        measure = wrapped.is_a()
        kind, factor = self._scale(measure, unit)
        declared = unit is not None or self._declares(kind)
        return PropertyValue(wrapped.get_argument(0), measure, factor, kind, declared=declared)

    def _several(
        self, item: Entity, wrapped: tuple[Entity, ...], unit: Entity | None, form: Form
    ) -> PropertyValue:
        """Several values; one that stands alone is a single value, unless it is a bound."""
        if not wrapped or (len(wrapped) == 1 and form != "range"):
            return self._value(item, wrapped[0] if wrapped else None, unit)
        first = self._value(item, wrapped[0], unit)
        values = tuple(entity.get_argument(0) for entity in wrapped)
        return PropertyValue(values, first.measure, first.factor, first.kind, form, first.declared)

    def _declares(self, kind: UnitKind | None) -> bool:
        return kind is None or kind in self._units.declared

    def _quantity(self, quantity: Entity) -> PropertyValue:
        measure = quantity.is_a()
        if not quantity.is_a("IfcPhysicalSimpleQuantity"):
            return PropertyValue(None, measure, None)
        kind, factor = self._scale(measure, get(quantity, "Unit"))
        return PropertyValue(quantity.get_argument(3), measure, factor, kind)

    def _scale(self, measure: str, unit: Entity | None) -> tuple[UnitKind | None, float | None]:
        kind = MEASURE_KINDS.get(measure)
        if unit is None:
            return kind, self._units.of_measure(measure)
        try:
            own_kind, factor = scale_of(unit)
        except UnreadableError:
            return kind, None
        if kind is not None and own_kind != kind:
            return kind, None  # a length in newtons: nobody can tell what is meant
        return own_kind, factor

    def _attributes(self, entity: Entity) -> Iterator[tuple[str, PropertyValue]]:
        for name, kind in (
            ("CompressiveStrength", "pressure"),
            ("YieldStress", "pressure"),
            ("YoungModulus", "pressure"),
            ("MassDensity", "density"),
        ):
            value = get(entity, name)
            if value is not None:
                measure = "IfcPressureMeasure" if kind == "pressure" else "IfcMassDensityMeasure"
                factor, of_kind = self._units.of_measure(measure), MEASURE_KINDS[measure]
                declared = self._declares(of_kind)
                yield name, PropertyValue(value, measure, factor, of_kind, declared=declared)


class _SetsOfObject(Mapping[str, Set]):
    """The sets of one object; the values of a set are read when it is first looked into."""

    def __init__(self, properties: Properties, by_name: dict[str, list[int]]) -> None:
        self._properties = properties
        self._by_name = by_name
        self._read: dict[str, Set] = {}

    def __getitem__(self, name: str) -> Set:
        if name not in self._read:
            self._read[name] = self._properties.values(self._by_name[name])
        return self._read[name]

    def get(self, name: str, default: Any = None) -> Any:
        return self[name] if name in self._by_name else default

    def __contains__(self, name: object) -> bool:
        return name in self._by_name

    def __iter__(self) -> Iterator[str]:
        return iter(self._by_name)

    def __len__(self) -> int:
        return len(self._by_name)
