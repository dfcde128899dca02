"""Small models with bars, built for tests; bars are drawn in the axes of their beam in mm.

In those axes x runs along the beam from its start, y to the left, z up from the soffit.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import ifcopenshell
import ifcopenshell.guid
import numpy as np

from ifccheck.beam import Axis, Bars, Outline, Reinforcement, Run, Stirrups
from ifccheck.ifc.context import BeamFrame, make_context
from ifccheck.ifc.reinforcement import read_reinforcement

Point = tuple[float, float, float]
MILLIMETRES = {"mm": 1.0, "m": 1000.0, "in": 25.4}
WIDTH, HEIGHT, LENGTH = 300.0, 600.0, 6000.0


@dataclass(frozen=True)
class Curve:
    """Points, and the indices at which an arc runs through three of them."""

    points: tuple[Point, ...]
    arcs: tuple[int, ...] = ()


def bent(corners: Sequence[Point], radius: float) -> Curve:
    """A polyline with its inner corners rounded to the radius of the centre line [mm]."""
    places = [np.array(corner, dtype=float) for corner in corners]
    points, arcs = [places[0]], []
    for before, corner, after in zip(places, places[1:], places[2:], strict=False):
        back = (before - corner) / np.linalg.norm(before - corner)
        on = (after - corner) / np.linalg.norm(after - corner)
        half = np.arccos(np.clip(back @ on, -1.0, 1.0)) / 2.0
        inward = (back + on) / np.linalg.norm(back + on)
        tangent = radius / np.tan(half)
        middle = corner + inward * (radius / np.sin(half) - radius)
        arcs.append(len(points))
        points += [corner + back * tangent, middle, corner + on * tangent]
    points.append(places[-1])
    return Curve(tuple((float(x), float(y), float(z)) for x, y, z in points), tuple(arcs))


def straight(start: float, end: float, y: float, z: float) -> Curve:
    """A straight bar along the beam."""
    return Curve(((start, y, z), (end, y, z)))


def closed_stirrup(
    x: float, half_width: float, bottom: float, top: float, radius: float = 25.0
) -> Curve:
    """A closed stirrup without hooks, drawn through its centre line."""
    w = half_width
    ring = [(x, 0.0, bottom), (x, w, bottom), (x, w, top), (x, -w, top), (x, -w, bottom)]
    return bent([*ring, (x, 0.0, bottom)], radius)


def hooked_stirrup(x: float, half_width: float, bottom: float, top: float, tail: float) -> Curve:
    """A closed stirrup whose ends hook by 135 degrees round the upper left corner."""
    w, inward = half_width, tail / np.sqrt(2.0)
    return bent(
        [
            (x, w - inward, top - inward),
            (x, w, top),
            (x, -w, top),
            (x, -w, bottom),
            (x, w, bottom),
            (x, w, top),
            (x, w - inward, top - inward),
        ],
        5.0,
    )


@dataclass
class ModelWithBars:
    """A model that is being built."""

    schema: str = "IFC4"
    unit: str = "mm"
    file: Any = field(init=False)
    frames: dict[int, BeamFrame] = field(default_factory=dict)
    _places: dict[int, Any] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.file = ifcopenshell.file(schema=self.schema)
        create = self.file.create_entity
        if self.unit == "in":
            exponents = create("IfcDimensionalExponents", 1, 0, 0, 0, 0, 0, 0)
            base = create("IfcSIUnit", UnitType="LENGTHUNIT", Prefix="MILLI", Name="METRE")
            factor = create("IfcMeasureWithUnit", create("IfcLengthMeasure", 25.4), base)
            length = create("IfcConversionBasedUnit", exponents, "LENGTHUNIT", "INCH", factor)
        else:
            prefix = "MILLI" if self.unit == "mm" else None
            length = create("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=prefix, Name="METRE")
        pressure = create("IfcSIUnit", UnitType="PRESSUREUNIT", Prefix="MEGA", Name="PASCAL")
        area = create("IfcSIUnit", UnitType="AREAUNIT", Name="SQUARE_METRE")
        units = create("IfcUnitAssignment", [length, area, pressure])
        self.root("IfcProject", UnitsInContext=units)
        axes = create("IfcAxis2Placement3D", self.point((0.0, 0.0, 0.0)))
        self.view = create("IfcGeometricRepresentationContext", None, "Model", 3, None, axes)

    @property
    def scale(self) -> float:
        """Units of the model per mm."""
        return 1.0 / MILLIMETRES[self.unit]

    def root(self, kind: str, **attributes: Any) -> Any:
        """An entity with a GlobalId."""
        return self.file.create_entity(kind, GlobalId=ifcopenshell.guid.new(), **attributes)

    def point(self, place: Sequence[float]) -> Any:
        """A point given in mm."""
        values = [float(value) * self.scale for value in place]
        return self.file.create_entity("IfcCartesianPoint", values)

    def direction(self, ratios: Sequence[float]) -> Any:
        """A direction."""
        return self.file.create_entity("IfcDirection", [float(ratio) for ratio in ratios])

    def beam(
        self,
        origin: Point = (0.0, 0.0, 0.0),
        along: Point = (1.0, 0.0, 0.0),
        outline: Sequence[tuple[float, float]] | None = None,
        length: float = LENGTH,
        host: bool = True,
        **attributes: Any,
    ) -> Any:
        """A beam that starts at a place and runs in a direction; by default 300 x 600 x 6000."""
        x = np.array(along, dtype=float) / np.linalg.norm(along)
        y = np.cross((0.0, 0.0, 1.0), x)
        y /= np.linalg.norm(y)
        z = np.cross(x, y)
        axes = self.file.create_entity(
            "IfcAxis2Placement3D", self.point(origin), self.direction(z), self.direction(x)
        )
        placement = self.file.create_entity("IfcLocalPlacement", None, axes)
        beam = self.root("IfcBeam", ObjectPlacement=placement, **attributes)
        w = WIDTH / 2.0
        ring = outline or ((-w, 0.0), (w, 0.0), (w, HEIGHT), (-w, HEIGHT))
        axis = Axis(origin, _triple(x), _triple(y), _triple(z), length)
        run = Run(0.0, length, Outline((tuple(ring),)))
        self._places[beam.id()] = placement
        if host:
            self.frames[beam.id()] = BeamFrame(beam.GlobalId, axis, (run,))
        return beam

    def curve(self, curve: Curve) -> Any:
        """A curve of lines and arcs."""
        create = self.file.create_entity
        if self.schema == "IFC2X3":
            return create("IfcPolyline", [self.point(place) for place in curve.points])
        scaled = [[value * self.scale for value in place] for place in curve.points]
        points = create("IfcCartesianPointList3D", scaled)
        segments, at = [], 0
        while at < len(curve.points) - 1:
            step = 2 if at in curve.arcs else 1
            kind = "IfcArcIndex" if step == 2 else "IfcLineIndex"
            segments.append(create(kind, [at + 1 + k for k in range(step + 1)]))
            at += step
        return create("IfcIndexedPolyCurve", points, segments, False)

    def swept(self, curve: Curve, diameter: float) -> Any:
        """A solid swept by a disk."""
        radius = diameter / 2.0 * self.scale
        return self.file.create_entity("IfcSweptDiskSolid", self.curve(curve), radius)

    def mapped(self, solid: Any, moves: Sequence[Point]) -> list[Any]:
        """One solid mapped to several places."""
        create = self.file.create_entity
        axes = create("IfcAxis2Placement3D", self.point((0.0, 0.0, 0.0)))
        source = create("IfcRepresentationMap", axes, self.representation([solid]))
        items = []
        for move in moves:
            target = create(
                "IfcCartesianTransformationOperator3D", None, None, self.point(move), 1.0, None
            )
            items.append(create("IfcMappedItem", source, target))
        return items

    def representation(self, items: Sequence[Any], identifier: str = "Body") -> Any:
        """A representation of a product."""
        return self.file.create_entity(
            "IfcShapeRepresentation", self.view, identifier, "AdvancedSweptSolid", list(items)
        )

    def bar(
        self,
        shape: Curve | Sequence[Any],
        diameter: float | None = 16.0,
        beam: Any = None,
        kind: str = "IfcReinforcingBar",
        world: bool = False,
        **attributes: Any,
    ) -> Any:
        """A bar drawn in the axes of a beam (or of the building); it is not yet tied to it."""
        create = self.file.create_entity
        items = [self.swept(shape, diameter or 16.0)] if isinstance(shape, Curve) else shape
        body = create("IfcProductDefinitionShape", None, None, [self.representation(items)])
        parent = None if beam is None or world else self._places[beam.id()]
        axes = create("IfcAxis2Placement3D", self.point((0.0, 0.0, 0.0)))
        if kind == "IfcReinforcingBar" and diameter is not None:
            attributes.setdefault("NominalDiameter", diameter * self.scale)
        if kind == "IfcReinforcingBar" and self.schema == "IFC2X3":
            attributes.setdefault("CrossSectionArea", 0.0)
            attributes.setdefault("BarRole", "NOTDEFINED")
        return self.root(
            kind,
            ObjectPlacement=create("IfcLocalPlacement", parent, axes),
            Representation=body,
            **attributes,
        )

    def bars(self, beam: Any, *shapes: Curve, diameter: float = 16.0, **attributes: Any) -> Any:
        """Several bars that are parts of a beam."""
        made = [self.bar(shape, diameter, beam, **attributes) for shape in shapes]
        self.aggregate(beam, made)
        return made

    def aggregate(self, whole: Any, parts: Sequence[Any]) -> None:
        """Make parts of a whole."""
        self.root("IfcRelAggregates", RelatingObject=whole, RelatedObjects=list(parts))

    def properties(self, owner: Any, name: str, values: Mapping[str, Any]) -> None:
        """A property set on an element; texts become labels, others are given as entities."""
        create = self.file.create_entity
        items = [
            create(
                "IfcPropertySingleValue",
                key,
                None,
                create("IfcLabel", value) if isinstance(value, str) else value,
                None,
            )
            for key, value in values.items()
        ]
        held = self.root("IfcPropertySet", Name=name, HasProperties=items)
        self.root(
            "IfcRelDefinesByProperties", RelatedObjects=[owner], RelatingPropertyDefinition=held
        )

    def read(self, beam: Any, mapping: Mapping[str, str] | None = None) -> Found:
        """Read what the model holds for a beam."""
        context = make_context(self.file, self.schema)
        return Found(read_reinforcement(context, self.frames, mapping or {})[beam.id()])


@dataclass(frozen=True)
class Found:
    """What was read of a beam."""

    sources: tuple[Reinforcement, ...]

    def source(self, name: str) -> Reinforcement:
        """The reinforcement of one source."""
        return next(source for source in self.sources if source.source == name)

    @property
    def bars(self) -> tuple[Bars, ...]:
        """Longitudinal bars of the bodies."""
        return self.source("bars").bars

    @property
    def stirrups(self) -> tuple[Stirrups, ...]:
        """Stirrups of the bodies."""
        return self.source("bars").stirrups

    @property
    def reasons(self) -> str:
        """All reasons, as one text."""
        return "; ".join(reason.text for source in self.sources for reason in source.reasons)

    @property
    def remarks(self) -> str:
        """All remarks, as one text."""
        return "; ".join(remark.text for source in self.sources for remark in source.remarks)


def _triple(vector: Any) -> Point:
    x, y, z = vector
    return float(x), float(y), float(z)
