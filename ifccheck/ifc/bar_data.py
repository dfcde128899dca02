"""What the model says of bars beside their shape: size, grade and role."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from ifccheck.beam import Given
from ifccheck.ifc.bar_sizes import (
    GREATEST_YIELD,
    LEAST_YIELD,
    BarSize,
    Grade,
    SizeSource,
    is_area_of_bar,
    named_size,
    settle_grade,
    settle_size,
    yield_of_grade,
)
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import Entity, get, text
from ifccheck.ifc.properties import PropertyValue

GRADE_PROPERTIES = frozenset({"grade", "steelgrade", "steel grade"})
SIZE_PROPERTIES = frozenset({"size", "barsize", "bar size", "diameter", "nominaldiameter"})
"""Names of properties, in lower case, that tell the grade and the size of a bar."""
YIELD_PROPERTY = "YieldStress"
INNER_MATERIALS = (
    "ForProfileSet", "MaterialProfiles", "ForLayerSet", "MaterialLayers", "MaterialConstituents",
    "Materials", "Material",
)  # fmt: skip
"""Attributes through which a material definition holds materials."""


@dataclass(frozen=True, slots=True)
class _Hints:
    """What property sets of a bar tell."""

    sizes: tuple[SizeSource, ...] = ()
    grades: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class _Type:
    """What the type of a bar tells."""

    name: str = ""
    role: str = ""
    diameter: float | None = None
    area: float | None = None


NO_HINTS, NO_TYPE = _Hints(), _Type()


class BarData:
    """Settles size, grade and role of bars; equal statements are settled once."""

    def __init__(self, context: Context) -> None:
        self.sizes: list[BarSize] = []
        self.grades: list[Grade] = []
        self._context = context
        self._size_index: dict[tuple[object, ...], int] = {}
        self._grade_index: dict[tuple[object, ...], int] = {}
        self._hints: dict[tuple[int, ...], _Hints] = {}
        self._types: dict[int | None, _Type] = {None: NO_TYPE}
        self._materials: dict[int | None, tuple[tuple[tuple[str, str], ...], Given | None]] = {
            None: ((), None)
        }
        self._names: dict[str, str] = {}

    def of(self, product: Entity, step_id: int, swept: float | None) -> tuple[str, int, int]:
        """Return role, index of size (-1 where nobody tells it) and index of grade."""
        relations = self._context.relations
        type_id = relations.types.get(step_id)
        about = self._type(type_id)
        hints = self._hints_of(step_id)
        role, diameter, area, grade = "", None, None, ""
        if product.is_a() == "IfcReinforcingBar":
            grade, diameter, area, role = product[8] or "", product[9], product[10], product[12]
        name = self._named(product[2]) or self._named(product[4]) or self._named(about.name)
        size_key = (diameter, area, type_id, swept, name, hints.sizes)
        if size_key not in self._size_index:
            self._size_index[size_key] = self._settled_size(*size_key)
        grade_key = (grade, relations.material_of(step_id), hints.grades, about.name, product[4])
        if grade_key not in self._grade_index:
            self._grade_index[grade_key] = self._settled_grade(*grade_key)
        own_role = role if role and role != "NOTDEFINED" else about.role
        return own_role, self._size_index[size_key], self._grade_index[grade_key]

    def _named(self, name: str | None) -> str:
        """The bar size in a name."""
        if not name or ("M" not in name and "#" not in name):
            return ""
        if name not in self._names:
            self._names[name] = named_size(name)
        return self._names[name]

    def _type(self, type_id: int | None) -> _Type:
        if type_id not in self._types:
            entity = self._context.file.by_id(type_id)
            self._types[type_id] = _Type(
                text(entity, "Name"),
                str(get(entity, "PredefinedType") or ""),
                get(entity, "NominalDiameter"),
                get(entity, "CrossSectionArea"),
            )
        return self._types[type_id]

    def _settled_size(
        self,
        diameter: float | None,
        area: float | None,
        type_id: int | None,
        swept: float | None,
        name: str,
        hints: tuple[SizeSource, ...],
    ) -> int:
        length = self._context.units.length
        about = self._type(type_id)
        sources = [
            SizeSource("nominal diameter", _times(diameter, length)),
            SizeSource("nominal diameter of its type", _times(about.diameter, length)),
            SizeSource("swept diameter", swept),
            SizeSource("area", area=self._area(area)),
            SizeSource("area of its type", area=self._area(about.area)),
            SizeSource("name", designation=name),
            *hints,
        ]
        size = settle_size(sources)
        if size is None:
            return -1
        self.sizes.append(size)
        return len(self.sizes) - 1

    def _area(self, area: float | None) -> float | None:
        """An area [mm2]: in the model's unit of area, or else in the square of its length unit."""
        if area is None:
            return None
        declared, by_length = (
            area * factor for factor in (self._context.units.area, self._context.units.length**2)
        )
        return by_length if is_area_of_bar(by_length) and not is_area_of_bar(declared) else declared

    def _settled_grade(
        self,
        grade: str,
        material: int | None,
        hints: tuple[tuple[str, str], ...],
        *names: str | None,
    ) -> int:
        texts, stated = self._material(material)
        named = [("name", name) for name in names if name and yield_of_grade(name) is not None]
        self.grades.append(settle_grade([("grade", grade), *hints, *named, *texts], stated))
        return len(self.grades) - 1

    def _hints_of(self, step_id: int) -> _Hints:
        set_ids = self._context.relations.property_sets(step_id)
        if not set_ids:
            return NO_HINTS
        if set_ids not in self._hints:
            wanted = any(self._tells(set_id) for set_id in set_ids)
            self._hints[set_ids] = self._read_hints(step_id) if wanted else NO_HINTS
        return self._hints[set_ids]

    def _tells(self, set_id: int) -> bool:
        """Whether a set has a property that is wanted; cheap, as bars are many."""
        entity = self._context.file.by_id(set_id)
        if entity.is_a() != "IfcPropertySet":
            return False
        names = {str(item[0]).lower() for item in entity[4] or ()}
        return not names.isdisjoint(GRADE_PROPERTIES) or not names.isdisjoint(SIZE_PROPERTIES)

    def _read_hints(self, step_id: int) -> _Hints:
        sizes: list[SizeSource] = []
        grades: list[tuple[str, str]] = []
        for set_name, values in self._context.properties.of(step_id).items():
            for name, value in values.items():
                source = f"{set_name}.{name}"
                if name.lower() in SIZE_PROPERTIES:
                    sizes.extend(_size_hint(source, value))
                elif name.lower() in GRADE_PROPERTIES and isinstance(value.value, str):
                    grades.append((source, value.value))
        return _Hints(tuple(sizes), tuple(grades))

    def _material(self, step_id: int | None) -> tuple[tuple[tuple[str, str], ...], Given | None]:
        if step_id not in self._materials:
            materials = list(_materials(self._context.file.by_id(step_id)))
            texts = tuple(("material", text(material, "Name")) for material in materials)
            stated = [given for one in materials for given in self._stated_yields(one)]
            self._materials[step_id] = (
                texts,
                min(stated, key=lambda given: given.value, default=None),
            )
        return self._materials[step_id]

    def _stated_yields(self, material: Entity) -> Iterator[Given]:
        for set_name, values in self._context.properties.of_material(material.id()).items():
            value = values.get(YIELD_PROPERTY)
            number = None if value is None else value.number
            if number is not None and LEAST_YIELD <= number <= GREATEST_YIELD:
                yield Given(
                    number, f"material {text(material, 'Name')!r} {set_name}.{YIELD_PROPERTY}"
                )


def _times(value: float | None, factor: float) -> float | None:
    return None if value is None else value * factor


def _size_hint(source: str, value: PropertyValue) -> Iterable[SizeSource]:
    """The size that a property tells: a designation, a length, or a bare number of mm."""
    if isinstance(value.value, str):
        if designation := named_size(value.value):
            yield SizeSource(source, designation=designation)
        elif value.value.strip().isdecimal():
            yield SizeSource(source, diameter=float(value.value), hint=True)
    elif value.kind == "length" and value.number is not None:
        yield SizeSource(source, diameter=value.number, hint=True)


def _materials(definition: Entity) -> Iterator[Entity]:
    """The materials of a material definition."""
    if definition.is_a("IfcMaterial"):
        yield definition
        return
    for name in INNER_MATERIALS:
        for inner in _listed(get(definition, name)):
            yield from _materials(inner)


def _listed(value: Entity | tuple[Entity, ...] | None) -> tuple[Entity, ...]:
    if value is None:
        return ()
    return value if isinstance(value, tuple) else (value,)


def materials_of(definition: Entity) -> tuple[Entity, ...]:
    """Return the materials that a material definition holds."""
    return tuple(_materials(definition))
