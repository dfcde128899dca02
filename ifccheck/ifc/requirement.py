"""The information requirement, and which beams meet it.

What a modeller must give of a beam is written once, in the IDS file of the package. The few
kinds of requirement that the file uses are checked here; a test holds that against a checker
of its own standing.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from xml.etree import ElementTree

from ifccheck.beam import Beam
from ifccheck.ifc.context import Context, make_context
from ifccheck.ifc.entity import Entity, get
from ifccheck.ifc.materials import MaterialDefinition, Materials
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.properties import PropertyValue
from ifccheck.units import clipped

FILE_NAME = "beam-information.ids"
SPACES = {
    "ids": "http://standards.buildingsmart.org/IDS",
    "xs": "http://www.w3.org/2001/XMLSchema",
}
BEAM = "IFCBEAM"
SI_FACTORS = {"length": 1e-3, "pressure": 1e6}
"""From the units used inside to those in which an IDS states its values."""

Allowed = Callable[[str | float], bool]


@dataclass(frozen=True, slots=True)
class Asked:
    """One thing that is asked of a beam."""

    kind: str
    """attribute, property or material"""
    name: str
    """Of the attribute or property"""
    property_set: str = ""
    data_type: str = ""
    optional: bool = False
    allows: Allowed | None = None
    """Whether a value is as asked; None where any is"""


@dataclass(frozen=True, slots=True)
class Specification:
    """What is asked of the beams of certain materials."""

    name: str
    of_material: Allowed | None
    """None where it is asked of all beams"""
    asked: tuple[Asked, ...]


def requirement_bytes() -> bytes:
    """Return the information requirement as it is given to a modeller."""
    return files("ifccheck").joinpath("ids", FILE_NAME).read_bytes()


def unmet_requirements(opened: OpenedModel, beams: Sequence[Beam]) -> dict[str, tuple[str, ...]]:
    """Return, by key, what is asked of each beam and not given as asked; empty where all is."""
    context = make_context(opened.file, opened.schema)
    checker = _Checker(context, Materials(context))
    return {beam.key: tuple(checker.unmet(opened.file.by_id(beam.step_id))) for beam in beams}


@cache
def specifications() -> tuple[Specification, ...]:
    """Return what the file asks of beams."""
    root = ElementTree.fromstring(requirement_bytes())
    return tuple(
        _specification(element)
        for element in root.iterfind(".//ids:specification", SPACES)
        if element.findtext("ids:applicability/ids:entity/ids:name/*", "", SPACES) == BEAM
    )


def _specification(element: ElementTree.Element) -> Specification:
    material = element.find("ids:applicability/ids:material/ids:value", SPACES)
    requirements = element.find("ids:requirements", SPACES)
    return Specification(
        element.attrib["name"],
        None if material is None else _allowed(material),
        tuple(map(_asked, requirements if requirements is not None else ())),
    )


def _asked(element: ElementTree.Element) -> Asked:
    kind = element.tag.rpartition("}")[2]
    name = "ids:baseName" if kind == "property" else "ids:name"
    value = element.find("ids:value", SPACES)
    return Asked(
        kind=kind,
        name=element.findtext(f"{name}/ids:simpleValue", "", SPACES),
        property_set=element.findtext("ids:propertySet/ids:simpleValue", "", SPACES),
        data_type=element.get("dataType", ""),
        optional=element.get("cardinality") == "optional",
        allows=None if value is None else _allowed(value),
    )


def _allowed(value: ElementTree.Element) -> Allowed:
    """What a restriction allows: texts of a pattern, or numbers between two bounds."""
    pattern = value.find("xs:restriction/xs:pattern", SPACES)
    if pattern is not None:
        matches = re.compile(pattern.attrib["value"]).fullmatch
        return lambda given: isinstance(given, str) and matches(given) is not None
    bounds = [
        float(value.find(f"xs:restriction/xs:{end}Inclusive", SPACES).attrib["value"])  # type: ignore[union-attr]
        for end in ("min", "max")
    ]
    return lambda given: not isinstance(given, str) and bounds[0] <= given <= bounds[1]


@dataclass(frozen=True, slots=True)
class _Checker:
    context: Context
    materials: Materials

    def unmet(self, entity: Entity) -> Iterator[str]:
        """Yield what is asked of a beam and not given as asked."""
        if (own := entity.is_a()).upper() != BEAM:
            yield f"it is an {own}: an IfcBeam is asked"
            return
        definition = self.materials.of(entity.id())
        for specification in specifications():
            of_material = specification.of_material
            if of_material and not any(map(of_material, _material_words(definition))):
                yield "its material is not named as concrete: no more can be asked of it"
                return
            for asked in specification.asked:
                yield from self._unmet(asked, entity, definition)

    def _unmet(self, asked: Asked, entity: Entity, definition: MaterialDefinition) -> Iterator[str]:
        if asked.kind == "material":
            if self.context.relations.material_of(entity.id()) is None:
                yield "no material is given"
        elif asked.kind == "attribute":
            if get(entity, asked.name) in (None, ""):
                yield f"no {asked.name} is given"
        else:
            sets = self.context.properties.of(entity.id())
            yield from _unmet_property(asked, sets.get(asked.property_set, {}).get(asked.name))


def _material_words(definition: MaterialDefinition) -> Iterator[str]:
    for material in definition.materials:
        yield from (material.name, material.category)
    yield from definition.set_names


def _unmet_property(asked: Asked, value: PropertyValue | None) -> Iterator[str]:
    place = f"{asked.property_set}.{asked.name}"
    if value is None or value.value is None or value.value == "":
        if not asked.optional:
            yield f"{place} is not given"
    elif value.measure.upper() != asked.data_type:
        yield f"{place} is an {value.measure}: {_cased(asked.data_type)} is asked"
    elif asked.allows and not any(map(asked.allows, _given(value))):
        yield f"{place} is {clipped(value.value)}: not as is asked"


_MEASURES = ("IfcLabel", "IfcPositiveLengthMeasure", "IfcPressureMeasure")


def _cased(data_type: str) -> str:
    return next((name for name in _MEASURES if name.upper() == data_type), data_type)


def _given(value: PropertyValue) -> Iterator[str | float]:
    """The values of a property, numbers in the units of an IDS."""
    for each in value.value if isinstance(value.value, tuple) else (value.value,):
        if isinstance(each, str):
            yield each
        elif value.factor is not None and value.kind is not None:
            yield each * value.factor * SI_FACTORS.get(value.kind, 1.0)
