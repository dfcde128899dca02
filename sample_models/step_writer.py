"""Small helpers that write beams, bars and their surroundings into an IFC model."""

from __future__ import annotations

import math
import uuid
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import Any

import ifcopenshell
import ifcopenshell.guid

_NAMESPACE = uuid.UUID("5e1f4f6e-6a86-5a0a-9a3e-0a4f7f0c7b11")
Point3 = tuple[float, float, float]
Profile = Sequence[tuple[float, float]]


@dataclass
class Writer:
    """An IFC file under construction; every GlobalId follows from a text, so that two runs
    write the same bytes."""

    schema: str
    file: Any = field(init=False)
    owner: Any = field(init=False)
    body: Any = field(init=False)
    building: Any = field(init=False)
    storeys: dict[str, Any] = field(default_factory=dict)
    contained: dict[str, list[Any]] = field(default_factory=dict)
    materials: dict[str, list[Any]] = field(default_factory=dict)
    material: dict[str, Any] = field(default_factory=dict)
    maps: dict[Any, Any] = field(default_factory=dict)

    def __post_init__(self) -> None:
        """Set up project, units, context, site and building."""
        self.file = ifcopenshell.file(schema=self.schema)
        self.owner = self._owner_history()
        origin = self.axes((0.0, 0.0, 0.0))
        context = self.make("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, origin)
        self.body = self.make(
            "IfcGeometricRepresentationSubContext", "Body", "Model",
            ParentContext=context, TargetView="MODEL_VIEW",
        )  # fmt: skip
        project = self.rooted("IfcProject", "project", Name="Print works, new presses")
        project.RepresentationContexts = [context]
        project.UnitsInContext = self._units()
        site = self.rooted("IfcSite", "site", Name="Site", ObjectPlacement=self.placement(None))
        site.CompositionType = "ELEMENT"
        self.building = self.rooted(
            "IfcBuilding", "building", Name="Print works",
            ObjectPlacement=self.placement(site.ObjectPlacement),
        )  # fmt: skip
        self.building.CompositionType = "ELEMENT"
        self.relate("IfcRelAggregates", "project-site", project, [site])
        self.relate("IfcRelAggregates", "site-building", site, [self.building])

    def make(self, kind: str, *values: Any, **named: Any) -> Any:
        """Create an entity."""
        return self.file.create_entity(kind, *values, **named)

    def rooted(self, kind: str, text: str, **named: Any) -> Any:
        """Create an entity with a GlobalId made from ``text``."""
        guid = ifcopenshell.guid.compress(uuid.uuid5(_NAMESPACE, text).hex)
        return self.make(kind, GlobalId=guid, OwnerHistory=self.owner, **named)

    def relate(self, kind: str, text: str, whole: Any, parts: Sequence[Any]) -> None:
        """Create an aggregation."""
        self.rooted(kind, text, RelatingObject=whole, RelatedObjects=list(parts))

    def _owner_history(self) -> Any:
        person = self.make("IfcPerson", FamilyName="Modeller")
        firm = self.make("IfcOrganization", Name="Structural office")
        both = self.make("IfcPersonAndOrganization", person, firm)
        application = self.make("IfcApplication", firm, "1", "Sample writer", "sample-writer")
        return self.make(
            "IfcOwnerHistory", both, application, None, "ADDED", None, None, None, 1767225600
        )

    def _units(self) -> Any:
        si = [
            ("LENGTHUNIT", "MILLI", "METRE"), ("AREAUNIT", None, "SQUARE_METRE"),
            ("VOLUMEUNIT", None, "CUBIC_METRE"), ("PLANEANGLEUNIT", None, "RADIAN"),
            ("FORCEUNIT", "KILO", "NEWTON"), ("PRESSUREUNIT", "MEGA", "PASCAL"),
        ]  # fmt: skip
        units = [
            self.make("IfcSIUnit", UnitType=kind, Prefix=prefix, Name=name)
            for kind, prefix, name in si
        ]
        return self.make("IfcUnitAssignment", units)

    # Geometry ------------------------------------------------------------------------------

    def point(self, *values: float) -> Any:
        """Create a point."""
        return self.make("IfcCartesianPoint", [float(v) for v in values])

    def axes(self, origin: Point3, axis: Point3 | None = None, ref: Point3 | None = None) -> Any:
        """Create an IfcAxis2Placement3D."""
        return self.make(
            "IfcAxis2Placement3D", self.point(*origin),
            axis and self.make("IfcDirection", [float(v) for v in axis]),
            ref and self.make("IfcDirection", [float(v) for v in ref]),
        )  # fmt: skip

    def placement(
        self, parent: Any, origin: Point3 = (0.0, 0.0, 0.0),
        axis: Point3 | None = None, ref: Point3 | None = None,
    ) -> Any:  # fmt: skip
        """Create an IfcLocalPlacement."""
        return self.make("IfcLocalPlacement", parent, self.axes(origin, axis, ref))

    def polygon(self, points: Profile, name: str | None = None) -> Any:
        """Create an arbitrary closed profile."""
        closed = [*points, points[0]]
        curve = self.make("IfcPolyline", [self.point(*p) for p in closed])
        return self.make("IfcArbitraryClosedProfileDef", "AREA", name, curve)

    def rectangle(self, width: float, depth: float, name: str | None = None) -> Any:
        """Create a rectangle profile centred on its origin."""
        centre = self.make("IfcAxis2Placement2D", self.point(0.0, 0.0))
        return self.make("IfcRectangleProfileDef", "AREA", name, centre, float(width), float(depth))

    def extrusion(
        self, profile: Any, origin: Point3, axis: Point3, ref: Point3, depth: float,
        direction: Point3 = (0.0, 0.0, 1.0),
    ) -> Any:  # fmt: skip
        """Create an extruded solid."""
        return self.make(
            "IfcExtrudedAreaSolid", profile, self.axes(origin, axis, ref),
            self.make("IfcDirection", list(direction)), float(depth),
        )  # fmt: skip

    def half_space(self, origin: Point3, normal: Point3, ref: Point3) -> Any:
        """Create the half space behind a plane (away from its normal)."""
        plane = self.make("IfcPlane", self.axes(origin, normal, ref))
        return self.make("IfcHalfSpaceSolid", plane, False)

    def shape(self, items: Sequence[Any], kind: str = "SweptSolid") -> Any:
        """Create a product definition shape of one body."""
        body = self.make("IfcShapeRepresentation", self.body, "Body", kind, list(items))
        return self.make("IfcProductDefinitionShape", None, None, [body])

    def mapped(self, key: Any, items: Sequence[Any], kind: str, origins: Iterable[Point3]) -> Any:
        """Create a shape of mapped items of one shared map at several places."""
        if key not in self.maps:
            source = self.make("IfcShapeRepresentation", self.body, "Body", kind, list(items))
            self.maps[key] = self.make("IfcRepresentationMap", self.axes((0.0, 0.0, 0.0)), source)
        targets = [
            self.make(
                "IfcMappedItem", self.maps[key],
                self.make("IfcCartesianTransformationOperator3D", LocalOrigin=self.point(*origin)),
            )
            for origin in origins
        ]  # fmt: skip
        return self.shape(targets, "MappedRepresentation")

    def bar_curve(self, points: Sequence[Point3], bend: float) -> Any:
        """Create a bar's centre line with every corner rounded to the radius ``bend``."""
        if self.schema == "IFC2X3":
            return self.make("IfcPolyline", [self.point(*p) for p in _chords(points, bend)])
        rounded, arcs = _rounded(points, bend)
        points_list = self.make("IfcCartesianPointList3D", [list(p) for p in rounded])
        segments = [
            self.make("IfcArcIndex" if len(index) == 3 else "IfcLineIndex", list(index))
            for index in arcs
        ]
        return self.make("IfcIndexedPolyCurve", points_list, segments, False)

    # Structure and relations ---------------------------------------------------------------

    def storey(self, name: str, elevation: float) -> Any:
        """Create a storey of the building."""
        placement = self.placement(self.building.ObjectPlacement, (0.0, 0.0, elevation))
        storey = self.rooted(
            "IfcBuildingStorey", f"storey {name}", Name=name, ObjectPlacement=placement
        )
        storey.CompositionType, storey.Elevation = "ELEMENT", float(elevation)
        self.storeys[name], self.contained[name] = storey, []
        return storey

    def concrete(self, name: str, strength: float | None = None) -> None:
        """Create a concrete material, with its strength as a property where given [MPa]."""
        self._material(name, "concrete")
        if strength is None:
            return
        value = self.make("IfcPressureMeasure", float(strength))
        single = self.make("IfcPropertySingleValue", "CompressiveStrength", None, value)
        if self.schema == "IFC2X3":
            self.make(
                "IfcMechanicalConcreteMaterialProperties", self.material[name],
                CompressiveStrength=float(strength),
            )  # fmt: skip
        else:
            self.make(
                "IfcMaterialProperties", "Pset_MaterialConcrete", None, [single],
                self.material[name],
            )  # fmt: skip

    def other_material(self, name: str, category: str | None) -> None:
        """Create any other material."""
        self._material(name, category)

    def _material(self, name: str, category: str | None) -> None:
        material = self.make("IfcMaterial", name)
        if self.schema != "IFC2X3":
            material.Category = category
        self.material[name], self.materials[name] = material, []

    def properties(self, text: str, element: Any, name: str, values: dict[str, Any]) -> None:
        """Create a property set on one element."""
        singles = [
            self.make("IfcPropertySingleValue", key, None, self._value(value))
            for key, value in values.items()
        ]
        properties = self.rooted("IfcPropertySet", text, Name=name, HasProperties=singles)
        self.rooted(
            "IfcRelDefinesByProperties", f"{text} relation",
            RelatedObjects=[element], RelatingPropertyDefinition=properties,
        )  # fmt: skip

    def _value(self, value: Any) -> Any:
        if isinstance(value, tuple):
            return self.make(value[0], value[1])
        return self.make("IfcLabel", str(value))

    def finish(self) -> None:
        """Relate elements to storeys and materials."""
        self.relate(
            "IfcRelAggregates", "building-storeys", self.building, list(self.storeys.values())
        )
        for name, elements in self.contained.items():
            if elements:
                self.rooted(
                    "IfcRelContainedInSpatialStructure", f"contents of {name}",
                    RelatedElements=elements, RelatingStructure=self.storeys[name],
                )  # fmt: skip
        for name, elements in self.materials.items():
            if elements:
                self.rooted(
                    "IfcRelAssociatesMaterial", f"material {name}",
                    RelatedObjects=elements, RelatingMaterial=self.material[name],
                )  # fmt: skip


def _corner(
    before: Point3, at: Point3, after: Point3, bend: float
) -> tuple[Point3, Point3, Point3]:
    """Start, middle and end of the arc that rounds a right-angled corner."""
    inward = [b - a for a, b in zip(at, before, strict=True)]
    onward = [b - a for a, b in zip(at, after, strict=True)]
    u = [v / math.dist(before, at) for v in inward]
    w = [v / math.dist(after, at) for v in onward]
    depth = bend * (1.0 - math.sqrt(0.5))
    start = tuple(a + bend * d for a, d in zip(at, u, strict=True))
    middle = tuple(a + depth * (d + e) for a, d, e in zip(at, u, w, strict=True))
    end = tuple(a + bend * d for a, d in zip(at, w, strict=True))
    return start, middle, end  # type: ignore[return-value]


def _rounded(points: Sequence[Point3], bend: float) -> tuple[list[Point3], list[tuple[int, ...]]]:
    line, segments = [points[0]], []
    for before, at, after in zip(points, points[1:], points[2:], strict=False):
        line.extend(_corner(before, at, after, bend))
        last = len(line)
        segments += [(last - 3, last - 2), (last - 2, last - 1, last)]
    line.append(points[-1])
    segments.append((len(line) - 1, len(line)))
    return line, segments


def _chords(points: Sequence[Point3], bend: float) -> list[Point3]:
    return _rounded(points, bend)[0]
