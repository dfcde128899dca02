"""What the model says of bars beside their shape: size, grade and role."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from itertools import repeat
from typing import Any, NamedTuple

import numpy as np

from ifccheck.ifc.bar_bond import not_covered
from ifccheck.ifc.bar_paths import Ints
from ifccheck.ifc.bar_sizes import (
    BarSize,
    Grade,
    SizeSource,
    is_area_of_bar,
    named_size,
    settle_grade,
    settle_size,
    yield_of_grade,
)
from ifccheck.ifc.bar_yields import (
    GRADE_PROPERTIES,
    NO_YIELDS,
    YIELD_PROPERTIES,
    Yields,
    least,
    yields_of,
)
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import Entity, get, text
from ifccheck.ifc.materials import Materials
from ifccheck.ifc.properties import PropertyValue
from ifccheck.ifc.units import ModelUnits

SIZE_PROPERTIES = frozenset({"size", "barsize", "bar size", "diameter", "nominaldiameter"})
"""Names of properties, in lower case, that tell the size of a bar."""
TELLING = SIZE_PROPERTIES | GRADE_PROPERTIES | YIELD_PROPERTIES


@dataclass(frozen=True, slots=True)
class _Hints:
    """What property sets of a bar tell."""

    sizes: tuple[SizeSource, ...] = ()
    yields: Yields = NO_YIELDS


@dataclass(frozen=True, slots=True)
class _Type:
    """What the type of a bar tells."""

    name: str = ""
    role: str = ""
    diameter: float | None = None
    area: float | None = None
    surface: str = ""


class Named(NamedTuple):
    """What the name of a bar tells: its size, and why nothing here covers it."""

    size: str
    not_covered: str


@dataclass(frozen=True, slots=True)
class Data:
    """What is settled of a bar."""

    role: str
    """LIGATURE, MAIN ...; "" where neither the bar nor its type tells."""
    size: int
    """Index into ``BarData.sizes``; -1 where nobody tells."""
    grade: int
    """Index into ``BarData.grades``."""
    not_covered: str
    """Why nothing here covers its bond or its stuff; empty where it is covered."""


NO_HINTS, NO_TYPE = _Hints(), _Type()
Said = tuple[str | None, float | None, float | None, str | None]
"""Grade, diameter and area in units of the model, and role."""
NOTHING_SAID: Said = (None, None, None, None)
Swept = tuple[float, float]
"""What the diameter of a body is at least and at most [mm]; both are the same but for polygons."""
Related = tuple[int | None, int | None, tuple[int, ...] | None]
"""STEP ids of the type, the material and the property sets."""


class BarData:
    """Settles size, grade and role of bars; equal statements are settled once."""

    def __init__(self, context: Context) -> None:
        self.sizes: list[BarSize] = []
        self.grades: list[Grade] = []
        self._context = context
        self._settled: dict[tuple[object, ...], Data] = {}
        self._types: dict[int | None, _Type] = {None: NO_TYPE}
        self._materials = Materials(context)
        self._material_data: dict[int | None, Yields] = {}
        self._names: dict[str, str] = {}

    def of(
        self,
        product: Entity,
        step_id: int,
        name: str,
        swept: Swept | None,
        said: Said = NOTHING_SAID,
    ) -> Data:
        """Return what is settled of a bar; ``said`` is what is said of one that is no bar."""
        argument = product.get_argument
        surface = None
        if product.is_a() == "IfcReinforcingBar":
            said, surface = (argument(8), argument(9), argument(10), argument(12)), argument(13)
        related = self.related(step_id)
        key = (said, surface, argument(4), self.said_in(name), *related, swept)
        data = self._settled.get(key)
        if data is None:
            data = self._settled[key] = self._settle(step_id, *key)
        return data

    def related(self, step_id: int) -> Related:
        """Return the type, the material and the property sets of a bar."""
        relations = self._context.relations
        type_id = relations.types.get(step_id)
        sets = relations.property_sets(step_id) if type_id else relations.sets.get(step_id)
        material = relations.materials.get(step_id) or relations.materials.get(type_id or 0)
        return type_id, material, None if sets is None else tuple(sets)

    def relations_of(self, step_ids: Ints) -> tuple[Ints, ...]:
        """Numbers of what bars are related to: the same where ``related`` gives the same."""
        relations, ids = self._context.relations, step_ids.tolist()
        held = np.zeros(len(ids), dtype=np.intp)
        numbers: dict[tuple[int, ...], int] = {}
        has_sets = np.fromiter(map(relations.sets.__contains__, ids), dtype=bool, count=len(ids))
        for row in np.flatnonzero(has_sets).tolist():
            held[row] = numbers.setdefault(tuple(relations.sets[ids[row]]), len(numbers) + 1)
        return _looked_up(relations.types, ids), _looked_up(relations.materials, ids), held

    def said_in(self, name: str) -> Named:
        """The bar size in the name of a bar, and why it is not covered."""
        size = self._named(name) if "M" in name or "#" in name else ""
        return Named(size, not_covered("", (name,)) if "FRP" in name or "poxy" in name else "")

    def _settle(
        self,
        step_id: int,
        said: Said,
        surface: str | None,
        object_type: str | None,
        named: Named,
        type_id: int | None,
        material: int | None,
        sets: tuple[int, ...] | None,
        swept: Swept | None,
    ) -> Data:
        grade, diameter, area, role = said
        about = self._type(type_id)
        hints = self._hints_of(step_id, sets or ())
        name = named.size or self._named(object_type or "") or self._named(about.name)
        own_role = role if role and role != "NOTDEFINED" else about.role
        size = self._size(diameter, area, about, swept, name, hints)
        steel = self._material(material, step_id)
        said_of_steel = [text for _, text in (*hints.yields.texts, *steel.texts)]
        said_of_it = (grade, object_type, about.name, *said_of_steel)
        return Data(
            own_role,
            size,
            self._grade(grade, steel, hints, about.name, object_type),
            named.not_covered
            or not_covered(surface or "", filter(None, said_of_it), about.surface),
        )

    def _named(self, name: str) -> str:
        """The bar size in a name."""
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
                str(get(entity, "BarSurface") or ""),
            )
        return self._types[type_id]

    def _size(
        self,
        diameter: float | None,
        area: float | None,
        about: _Type,
        swept: Swept | None,
        name: str,
        hints: _Hints,
    ) -> int:
        length = self._context.units.length
        sources = [
            SizeSource("nominal diameter", _times(diameter, length)),
            SizeSource("nominal diameter of its type", _times(about.diameter, length)),
            _body_size(swept),
            SizeSource("area", area=area_of_bar(area, self._context.units)),
            SizeSource("area of its type", area=area_of_bar(about.area, self._context.units)),
            SizeSource("name", designation=name),
            *hints.sizes,
        ]
        size = settle_size(sources)
        return -1 if size is None else _index(self.sizes, size)

    def _grade(
        self,
        grade: str | None,
        material: Yields,
        hints: _Hints,
        *names: str | None,
    ) -> int:
        named = [("name", name) for name in names if name and yield_of_grade(name) is not None]
        sources = [("grade", grade or ""), *hints.yields.texts, *named, *material.texts]
        stated = least((hints.yields.stated, material.stated))
        return _index(self.grades, settle_grade(sources, stated))

    def _hints_of(self, step_id: int, sets: tuple[int, ...]) -> _Hints:
        if not any(self._tells(set_id) for set_id in sets):
            return NO_HINTS
        return self._read_hints(step_id)

    def _tells(self, set_id: int) -> bool:
        """Whether a set has a property that is wanted; cheap, as bars are many."""
        entity = self._context.file.by_id(set_id)
        if entity.is_a() != "IfcPropertySet":
            return False
        names = {str(item[0]).lower() for item in entity[4] or ()}
        return not names.isdisjoint(TELLING)

    def _read_hints(self, step_id: int) -> _Hints:
        sets = self._context.properties.of(step_id)
        sizes = [
            size
            for set_name, values in sets.items()
            for name, value in values.items()
            if name.lower() in SIZE_PROPERTIES
            for size in _size_hint(f"{set_name}.{name}", value)
        ]
        return _Hints(tuple(sizes), yields_of(sets))

    def _material(self, step_id: int | None, owner: int) -> Yields:
        """Names of the materials of a bar, and the yield strength that they state."""
        if step_id not in self._material_data:
            materials = self._materials.of(owner).materials
            each = [
                yields_of(
                    self._context.properties.of_material(one.step_id), f"material {one.name!r} "
                )
                for one in materials
            ]
            names = tuple(("material", one.name) for one in materials)
            texts = tuple(text for said in each for text in said.texts)
            self._material_data[step_id] = Yields(
                (*names, *texts), least(said.stated for said in each)
            )
        return self._material_data[step_id]


def area_of_bar(area: float | None, units: ModelUnits) -> float | None:
    """An area [mm2]: in the model's unit of area, or else in the square of its length unit."""
    if area is None:
        return None
    declared, by_length = (area * factor for factor in (units.area, units.length**2))
    return by_length if is_area_of_bar(by_length) and not is_area_of_bar(declared) else declared


def _body_size(swept: Swept | None) -> SizeSource:
    least, most = (None, None) if swept is None else swept
    return SizeSource("swept diameter", least, most=most)


def _looked_up(of: Mapping[int, int], ids: Sequence[int]) -> Ints:
    """What each has in a mapping, 0 for nothing."""
    if not of:
        return np.zeros(len(ids), dtype=np.intp)
    return np.fromiter(map(of.get, ids, repeat(0)), dtype=np.intp, count=len(ids))


def _index(known: list[Any], new: object) -> int:
    """Index of an entry in a list without repeats."""
    if new not in known:
        known.append(new)
    return known.index(new)


def _times(value: float | None, factor: float) -> float | None:
    return None if value is None else value * factor


def _size_hint(source: str, value: PropertyValue) -> Iterable[SizeSource]:
    """The size that a property tells: a designation, a length, or a bare number of mm."""
    if isinstance(value.value, str):
        if designation := named_size(value.value):
            yield SizeSource(source, designation=designation)
        elif value.value.strip().isdecimal():
            yield SizeSource(source, diameter=float(value.value), hint=True)
    elif value.kind is None and isinstance(value.value, int | float):
        yield SizeSource(source, diameter=float(value.value), hint=True)
    elif value.kind == "length" and value.number is not None:
        yield SizeSource(source, diameter=value.number, hint=True)
