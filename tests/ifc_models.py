"""Small IFC models built for tests; every length is given in mm and written in the model's unit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.guid
import ifcopenshell.util.shape
import numpy as np

from ifccheck.beam import Beam, Model, OutOfScope, Remark
from ifccheck.ifc.reader import read_model

MM_PER_UNIT = {"MILLIMETRE": 1.0, "METRE": 1000.0, "INCH": 25.4, "FOOT": 304.8}
Vector = Sequence[float]


@dataclass(frozen=True)
class Opened:
    """An opened model, as the reader wants it."""

    file: Any
    schema: str
    name: str = "made"
    file_name: str = "made.ifc"
    sha256: str = ""
    remarks: tuple[Remark, ...] = ()


class Building:
    """A model with one storey, to which members are added."""

    def __init__(self, schema: str = "IFC4", unit: str = "MILLIMETRE") -> None:
        self.file = ifcopenshell.file(schema=schema)
        self.mm = MM_PER_UNIT[unit]
        self.history = self._history() if schema == "IFC2X3" else None
        self.project = self.root("IfcProject", Name="made")
        self.project.UnitsInContext = self.file.create_entity(
            "IfcUnitAssignment", [self.length_unit(unit), *self._other_units()]
        )
        self.context = self.file.create_entity(
            "IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, self.axes()
        )
        self.project.RepresentationContexts = [self.context]
        self.storey = self.root("IfcBuildingStorey", Name="Level 1", Elevation=3000.0 / self.mm)
        self.storey.ObjectPlacement = self.placement()
        self.storey.CompositionType = "ELEMENT"
        self.contained: list[Any] = []

    def entity(self, kind: str, *values: Any, **named: Any) -> Any:
        return self.file.create_entity(kind, *values, **named)

    def root(self, kind: str, **named: Any) -> Any:
        named.setdefault("GlobalId", ifcopenshell.guid.new())
        return self.entity(kind, OwnerHistory=self.history, **named)

    def _history(self) -> Any:
        person = self.entity("IfcPersonAndOrganization", self.entity("IfcPerson"),
                             self.entity("IfcOrganization", None, "made"))  # fmt: skip
        program = self.entity("IfcApplication", person[1], "1", "made", "made")
        return self.entity(
            "IfcOwnerHistory", person, program, ChangeAction="NOCHANGE", CreationDate=0
        )

    def length_unit(self, unit: str) -> Any:
        if unit == "MILLIMETRE":
            return self.si("LENGTHUNIT", "METRE", "MILLI")
        if unit == "METRE":
            return self.si("LENGTHUNIT", "METRE")
        return self.conversion("LENGTHUNIT", unit, self.mm / 1000.0, self.si("LENGTHUNIT", "METRE"))

    def _other_units(self) -> list[Any]:
        return [
            self.si("AREAUNIT", "SQUARE_METRE"),
            self.si("PLANEANGLEUNIT", "RADIAN"),
            self.si("PRESSUREUNIT", "PASCAL"),
        ]

    def si(self, kind: str, name: str, prefix: str | None = None) -> Any:
        return self.entity("IfcSIUnit", UnitType=kind, Prefix=prefix, Name=name)

    def conversion(self, kind: str, name: str, factor: float, base: Any) -> Any:
        measure = "IfcLengthMeasure" if kind == "LENGTHUNIT" else "IfcReal"
        return self.entity(
            "IfcConversionBasedUnit",
            self.entity("IfcDimensionalExponents", 1, 0, 0, 0, 0, 0, 0),
            kind,
            name,
            self.entity("IfcMeasureWithUnit", self.entity(measure, factor), base),
        )

    # placements and curves

    def out(self, lengths: Vector) -> list[float]:
        return [float(value) / self.mm for value in lengths]

    def point(self, *place: float) -> Any:
        return self.entity("IfcCartesianPoint", self.out(place))

    def direction(self, ratios: Vector) -> Any:
        return self.entity("IfcDirection", [float(value) for value in ratios])

    def axes(self, at: Vector = (0, 0, 0), z: Vector | None = None, x: Vector | None = None) -> Any:
        return self.entity(
            "IfcAxis2Placement3D",
            self.point(*at),
            None if z is None else self.direction(z),
            None if x is None else self.direction(x),
        )

    def axes_2d(self, at: Vector = (0, 0), x: Vector | None = None) -> Any:
        return self.entity(
            "IfcAxis2Placement2D", self.point(*at), None if x is None else self.direction(x)
        )

    def placement(
        self,
        at: Vector = (0, 0, 0),
        z: Vector | None = None,
        x: Vector | None = None,
        within: Any = None,
    ) -> Any:
        return self.entity("IfcLocalPlacement", within, self.axes(at, z, x))

    def polyline(self, *places: Vector) -> Any:
        points = [self.point(*place) for place in places]
        return self.entity("IfcPolyline", [*points, points[0]])

    # profiles and solids

    def profile(self, kind: str, name: str = "", **lengths: Any) -> Any:
        values = {
            key: value / self.mm if isinstance(value, int | float) else value
            for key, value in lengths.items()
        }
        values.setdefault("Position", self.axes_2d())
        return self.entity(kind, ProfileType="AREA", ProfileName=name, **values)

    def rectangle(self, width: float = 300.0, height: float = 500.0, **others: Any) -> Any:
        return self.profile("IfcRectangleProfileDef", XDim=width, YDim=height, **others)

    def outline(self, *places: Vector, voids: Sequence[Sequence[Vector]] = ()) -> Any:
        curve = self.polyline(*places)
        if voids:
            inner = [self.polyline(*void) for void in voids]
            return self.entity("IfcArbitraryProfileDefWithVoids", "AREA", None, curve, inner)
        return self.entity("IfcArbitraryClosedProfileDef", "AREA", None, curve)

    def extrusion(
        self,
        profile: Any,
        depth: float,
        direction: Vector = (0, 0, 1),
        at: Vector = (0, 0, 0),
        z: Vector | None = None,
        x: Vector | None = None,
    ) -> Any:
        return self.entity(
            "IfcExtrudedAreaSolid",
            profile,
            self.axes(at, z, x),
            self.direction(direction),
            depth / self.mm,
        )

    def half_space(self, at: Vector, normal: Vector, agrees: bool = False) -> Any:
        """A half-space; subtracting it takes off what the normal points to, or the other side."""
        plane = self.entity("IfcPlane", self.axes(at, normal))
        return self.entity("IfcHalfSpaceSolid", plane, agrees)

    def bounded_half_space(self, at: Vector, normal: Vector, *bound: Vector) -> Any:
        """The same, bounded by a polygon in the plane that z points out of."""
        plane = self.entity("IfcPlane", self.axes(at, normal))
        return self.entity(
            "IfcPolygonalBoundedHalfSpace", plane, False, self.axes(), self.polyline(*bound)
        )

    def clipped(self, solid: Any, *half_spaces: Any) -> Any:
        for half_space in half_spaces:
            solid = self.entity("IfcBooleanClippingResult", "DIFFERENCE", solid, half_space)
        return solid

    def mapped(self, *items: Any, origin: Any = None, **operator: Any) -> Any:
        shape = self.representation(*items)
        source = self.entity("IfcRepresentationMap", origin or self.axes(), shape)
        kind = "IfcCartesianTransformationOperator3D"
        if "Scale2" in operator or "Scale3" in operator:
            kind += "nonUniform"
        operator.setdefault("LocalOrigin", self.point(0, 0, 0))
        return self.entity("IfcMappedItem", source, self.entity(kind, **operator))

    def representation(self, *items: Any, kind: str = "SweptSolid", name: str = "Body") -> Any:
        return self.entity("IfcShapeRepresentation", self.context, name, kind, list(items))

    # members

    def member(self, kind: str, *items: Any, placement: Any = None, **named: Any) -> Any:
        placement = placement or self.placement()
        shape = None
        if items:
            shape = self.entity(
                "IfcProductDefinitionShape", None, None, [self.representation(*items)]
            )
        product = self.root(kind, ObjectPlacement=placement, Representation=shape, **named)
        self.contained.append(product)
        return product

    def beam(self, *items: Any, placement: Any = None, material: str = "Concrete C30/37",
             **named: Any) -> Any:  # fmt: skip
        product = self.member("IfcBeam", *items, placement=placement, **named)
        if material:
            self.give_material(product, self.entity("IfcMaterial", material))
        return product

    def give_material(self, product: Any, material: Any) -> None:
        self.root("IfcRelAssociatesMaterial", RelatedObjects=[product], RelatingMaterial=material)

    def give_set(self, product: Any, name: str, **values: Any) -> Any:
        items = [
            value
            if getattr(value, "is_a", None) and value.is_a("IfcProperty")
            else self.entity("IfcPropertySingleValue", Name=key, NominalValue=value)
            for key, value in values.items()
        ]
        definition = self.root("IfcPropertySet", Name=name, HasProperties=items)
        self.root(
            "IfcRelDefinesByProperties",
            RelatedObjects=[product],
            RelatingPropertyDefinition=definition,
        )
        return definition

    def void(self, product: Any, *items: Any, kind: str = "IfcOpeningElement", **named: Any) -> Any:
        """An opening in a product, placed within it."""
        named.setdefault("placement", self.placement(within=product.ObjectPlacement))
        opening = self.member(kind, *items, **named)
        self.contained.pop()
        self.root(
            "IfcRelVoidsElement", RelatingBuildingElement=product, RelatedOpeningElement=opening
        )
        return opening

    def give_parts(self, whole: Any, *parts: Any) -> None:
        self.root("IfcRelAggregates", RelatingObject=whole, RelatedObjects=list(parts))

    def give_type(self, product: Any, **named: Any) -> Any:
        kind = named.pop("kind", "IfcBeamType")
        defined = self.root(kind, **named)
        self.root("IfcRelDefinesByType", RelatedObjects=[product], RelatingType=defined)
        return defined

    def open(self) -> Opened:
        self.root(
            "IfcRelContainedInSpatialStructure",
            RelatedElements=self.contained,
            RelatingStructure=self.storey,
        )
        self.contained = []
        return Opened(self.file, str(self.file.schema))

    def read(self, **mapping: str) -> Model:
        return read_model(self.open(), mapping)


def only_beam(model: Model) -> Beam:
    (beam,) = model.beams
    return beam


def only_left_out(model: Model) -> OutOfScope:
    (left_out,) = model.out_of_scope
    assert not model.beams
    return left_out


def reasons(beam: Beam) -> str:
    return "; ".join(reason.text for reason in beam.reasons)


def area(beam: Beam) -> float:
    """Area of the only run's outline by the shoelace formula [mm2]."""
    (run,) = beam.runs
    total = 0.0
    for ring in run.outline.rings:
        for (y1, z1), (y2, z2) in zip(ring, [*ring[1:], ring[0]], strict=True):
            total += (y1 * z2 - y2 * z1) / 2.0
    return total


def volume_and_points(product: Any) -> tuple[float, np.ndarray]:
    """Volume [mm3] and corners [mm] of a product by ifcopenshell's geometry engine."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    settings.set("mesher-linear-deflection", 0.00005)
    shape = ifcopenshell.geom.create_shape(settings, product)
    points = ifcopenshell.util.shape.get_vertices(shape.geometry) * 1000.0
    return float(ifcopenshell.util.shape.get_volume(shape.geometry)) * 1e9, points


def local(beam: Beam, points: np.ndarray) -> np.ndarray:
    """Points of the building in the beam's x, y, z, from its start at the soffit's middle."""
    assert beam.axis is not None
    frame = np.array((beam.axis.x, beam.axis.y, beam.axis.z))
    return (points - np.array(beam.axis.origin)) @ frame.T
