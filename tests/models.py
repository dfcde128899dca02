"""Small buildings made for tests: an IFC model of a few beams, its brief, and its rating.

A beam is described in its own axes (x along from its start, y to the left, z up from the middle
of the soffit) in mm; a ``Setting`` says in which schema and unit the model is written, and how
the whole building is turned, mirrored or described. GlobalIds follow from names, so that the
same description gives the same bytes.
"""

from __future__ import annotations

import json
import math
import random
import re
import uuid
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal

import ifcopenshell
import ifcopenshell.guid

from ifccheck.pipeline import Run, rate
from ifccheck.publish.json import ratings_json
from tests.bodies_of_beams import Bodies

Triple = tuple[float, float, float]
Outline = tuple[tuple[float, float], ...]

NAMESPACE = uuid.UUID("0d4b7a52-1c0e-5d6c-8f7e-6b1f5a2c9e44")
SIZES = {"10M": (11.3, 100.0), "15M": (16.0, 200.0), "20M": (19.5, 300.0), "25M": (25.2, 500.0),
         "30M": (29.9, 700.0)}  # fmt: skip
"""Diameter [mm] and area [mm2] of the Canadian bars"""
POUND_FORCE = 4.4482216152605
LENGTH_UNITS = {"mm": 1.0, "m": 1000.0, "inch": 25.4, "foot": 304.8}
PSI = POUND_FORCE / 25.4**2
PRESSURE_UNITS = {"mm": 1.0, "m": 1e-6, "inch": PSI, "foot": 1000.0 * PSI}
AREA_UNITS = {"mm": 1e6, "m": 1e6, "inch": 25.4**2, "foot": 304.8**2}
"""What each unit of the models is worth in mm, MPa and mm2"""


def rectangle(width: float, depth: float) -> Outline:
    half = width / 2.0
    return ((-half, 0.0), (half, 0.0), (half, depth), (-half, depth))


def tee(web: float, depth: float, flange: float, thickness: float) -> Outline:
    w, f, under = web / 2.0, flange / 2.0, depth - thickness
    return ((-w, 0), (w, 0), (w, under), (f, under), (f, depth), (-f, depth), (-f, under),
            (-w, under))  # fmt: skip


@dataclass(frozen=True)
class Layer:
    """Bars at one height, each at its place across, from ``start`` to ``end`` of the beam's x;
    a hooked end turns up or down by ``tail``."""

    size: str
    z: float
    ys: tuple[float, ...]
    start: float
    end: float
    hooks: tuple[bool, bool] = (False, False)
    tail: float = 0.0


@dataclass(frozen=True)
class Ties:
    """Closed stirrups at even places; the loop of their centre line."""

    size: str
    places: tuple[float, ...]
    half_width: float
    low: float
    high: float


@dataclass(frozen=True)
class MadeBeam:
    """One beam of a model."""

    outline: Outline
    length: float
    mark: str = "B-1"
    notation: Mapping[str, str] = field(default_factory=dict)
    """BeamRating_Reinforcement: TopBars, BottomBars, SideBars, Stirrups"""
    cover: float = 40.0
    layers: tuple[Layer, ...] = ()
    ties: tuple[Ties, ...] = ()
    columns: tuple[float, float] = (300.0, 300.0)
    """Width of the column under either end; 0 for none"""
    origin: Triple = (0.0, 0.0, 0.0)
    direction: float = 0.0
    """Of the beam in plan [deg]"""
    class_name: str = "IfcBeam"
    body: Callable[[Bodies], list[Any]] | None = None
    """Draws the items of its body; None extrudes the outline"""
    openings: tuple[Hole, ...] = ()


@dataclass(frozen=True)
class Hole:
    """An opening: a box in the beam's axes."""

    x: tuple[float, float]
    y: tuple[float, float]
    z: tuple[float, float]


@dataclass(frozen=True)
class MadeSlab:
    """A level slab in the building's axes."""

    ring: Outline
    bottom: float
    thickness: float
    name: str = "S-1"
    holes: tuple[Outline, ...] = ()


@dataclass(frozen=True)
class MadeColumn:
    """A square column in the building's axes, by its middle in plan, its foot and its head."""

    x: float
    y: float = 0.0
    size: float = 300.0
    z: tuple[float, float] = (-3000.0, 0.0)

    @property
    def name(self) -> str:
        return f"column at {self.x}, {self.y}, {self.z[0]}"


@dataclass(frozen=True)
class Setting:
    """How a model is written."""

    schema: Literal["IFC2X3", "IFC4", "IFC4X3"] = "IFC4"
    unit: Literal["mm", "m", "inch", "foot"] = "mm"
    angle: float = 0.0
    """The building is turned about the vertical by this [deg]"""
    turned_by: Literal["building", "elements", "bodies"] = "elements"
    """Whether the placement of the building, of each element, or each body holds the turn"""
    mirrored: bool = False
    """The building is mirrored, left for right, in a plane that stands along Y"""
    from_end: bool = False
    """Each beam's own placement stands at its other end and looks back"""
    strength: float = 30.0
    material: str = "Concrete"


@dataclass(frozen=True)
class Frame:
    """A place in plan and a direction."""

    origin: Triple = (0.0, 0.0, 0.0)
    angle: float = 0.0

    def vector(self, v: Triple) -> Triple:
        c, s = math.cos(math.radians(self.angle)), math.sin(math.radians(self.angle))
        return (c * v[0] - s * v[1], s * v[0] + c * v[1], v[2])

    def point(self, p: Triple) -> Triple:
        x, y, z = self.vector(p)
        return (self.origin[0] + x, self.origin[1] + y, self.origin[2] + z)

    def turned(self, angle: float) -> Frame:
        """This frame as the building is turned about its own origin."""
        return Frame(Frame(angle=angle).point(self.origin), self.angle + angle)


class Model:
    """An IFC file under construction."""

    def __init__(self, setting: Setting) -> None:
        self.setting = setting
        self.file = ifcopenshell.file(schema=setting.schema)
        self.owner = self._owner_history()
        origin = self._axes(Frame())
        self.context = self.make(
            "IfcGeometricRepresentationContext", None, "Model", 3, 1e-6, origin
        )
        project = self.rooted("IfcProject", "project", Name="Test hall")
        project.RepresentationContexts = [self.context]
        project.UnitsInContext = self.make("IfcUnitAssignment", self._units())
        self.building = self._spatial("IfcBuilding", "building", self._building_frame(), None)
        self.storey = self._spatial("IfcBuildingStorey", "Level 1", Frame(), self.building)
        self.aggregate("project", project, [self.building])
        self.aggregate("building", self.building, [self.storey])
        self.concrete = self._concrete()
        self.steel = self.make("IfcMaterial", "Reinforcing steel 400W")
        self.elements: list[Any] = []
        self.bars: list[Any] = []

    def make(self, kind: str, *values: Any, **named: Any) -> Any:
        return self.file.create_entity(kind, *values, **named)

    def rooted(self, kind: str, text: str, **named: Any) -> Any:
        guid = ifcopenshell.guid.compress(uuid.uuid5(NAMESPACE, f"{kind} {text}").hex)
        return self.make(kind, GlobalId=guid, OwnerHistory=self.owner, **named)

    def aggregate(self, text: str, whole: Any, parts: Sequence[Any]) -> None:
        self.rooted("IfcRelAggregates", text, RelatingObject=whole, RelatedObjects=list(parts))

    # Project ---------------------------------------------------------------------------------

    def _owner_history(self) -> Any:
        person = self.make("IfcPerson", FamilyName="Modeller")
        firm = self.make("IfcOrganization", Name="Office")
        both = self.make("IfcPersonAndOrganization", person, firm)
        program = self.make("IfcApplication", firm, "1", "Test writer", "test-writer")
        return self.make(
            "IfcOwnerHistory", both, program, None, "ADDED", None, None, None, 1767225600
        )

    def _units(self) -> list[Any]:
        metre = self.make("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        square = self.make("IfcSIUnit", UnitType="AREAUNIT", Name="SQUARE_METRE")
        pascal = self.make("IfcSIUnit", UnitType="PRESSUREUNIT", Name="PASCAL")
        unit = self.setting.unit
        if unit in ("inch", "foot"):
            long, stress = LENGTH_UNITS[unit] / 1000.0, PRESSURE_UNITS[unit] * 1e6
            name = "psi" if unit == "inch" else "ksi"
            return [
                self._converted("LENGTHUNIT", unit, "IfcLengthMeasure", long, metre),
                self._converted("AREAUNIT", f"square {unit}", "IfcAreaMeasure", long**2, square),
                self._converted("PRESSUREUNIT", name, "IfcPressureMeasure", stress, pascal),
            ]
        if self.setting.unit == "mm":
            metre.Prefix, pascal.Prefix = "MILLI", "MEGA"
        return [metre, square, pascal]

    def _converted(self, kind: str, name: str, measure: str, factor: float, base: Any) -> Any:
        powers = {"LENGTHUNIT": (1, 0, 0), "AREAUNIT": (2, 0, 0), "PRESSUREUNIT": (-1, 1, -2)}
        dimensions = self.make("IfcDimensionalExponents", *powers[kind], 0, 0, 0, 0)
        value = self.make("IfcMeasureWithUnit", self.make(measure, factor), base)
        return self.make("IfcConversionBasedUnit", dimensions, kind, name, value)

    def _building_frame(self) -> Frame:
        by_building = self.setting.turned_by == "building"
        return Frame(angle=self.setting.angle if by_building else 0.0)

    def _spatial(self, kind: str, name: str, frame: Frame, above: Any) -> Any:
        placement = self.make(
            "IfcLocalPlacement", above and above.ObjectPlacement, self._axes(frame)
        )
        return self.rooted(
            kind, name, Name=name, ObjectPlacement=placement, CompositionType="ELEMENT"
        )

    def _concrete(self) -> Any:
        material = self.make("IfcMaterial", self.setting.material)
        value = self.setting.strength / PRESSURE_UNITS[self.setting.unit]
        if self.setting.schema == "IFC2X3":
            self.make(
                "IfcMechanicalConcreteMaterialProperties", material, CompressiveStrength=value
            )
        else:
            single = self._single("CompressiveStrength", "IfcPressureMeasure", value)
            self.make("IfcMaterialProperties", "Pset_MaterialConcrete", None, [single], material)
        return material

    def _single(self, name: str, measure: str, value: Any) -> Any:
        return self.make("IfcPropertySingleValue", name, None, self.make(measure, value))

    # Geometry --------------------------------------------------------------------------------

    def length(self, value: float) -> float:
        return float(value) / LENGTH_UNITS[self.setting.unit]

    def _point(self, *values: float) -> Any:
        return self.make("IfcCartesianPoint", [self.length(v) for v in values])

    def _axes(self, frame: Frame, axis: Triple = (0, 0, 1), ref: Triple = (1, 0, 0)) -> Any:
        directions = [
            self.make("IfcDirection", [float(v) for v in frame.vector(each)])
            for each in (axis, ref)
        ]
        return self.make("IfcAxis2Placement3D", self._point(*frame.origin), *directions)

    def _extrusion(self, outline: Outline, frame: Frame, upright: bool, depth: float) -> Any:
        points = [self._point(*p) for p in (*outline, outline[0])]
        profile = self.make(
            "IfcArbitraryClosedProfileDef", "AREA", None, self.make("IfcPolyline", points)
        )
        axes = self._axes(frame) if upright else self._axes(frame, (1, 0, 0), (0, 1, 0))
        up = self.make("IfcDirection", (0.0, 0.0, 1.0))
        return self.make("IfcExtrudedAreaSolid", profile, axes, up, self.length(depth))

    def _sweep(self, points: Sequence[Triple], diameter: float, frame: Frame) -> Any:
        curve = self.make("IfcPolyline", [self._point(*frame.point(p)) for p in points])
        ends = (0.0, float(len(points) - 1)) if self.setting.schema == "IFC2X3" else (None, None)
        return self.make("IfcSweptDiskSolid", curve, self.length(diameter / 2.0), None, *ends)

    def _shape(self, *solids: Any, kind: str = "SweptSolid") -> Any:
        body = self.make("IfcShapeRepresentation", self.context, "Body", kind, list(solids))
        return self.make("IfcProductDefinitionShape", None, None, [body])

    def _frames(self, frame: Frame) -> tuple[Frame, Frame]:
        """The frame of an element's placement, and that of its body within it."""
        if self.setting.turned_by == "building":
            return frame, Frame()
        frame = frame.turned(self.setting.angle)
        return (Frame(), frame) if self.setting.turned_by == "bodies" else (frame, Frame())

    # Elements --------------------------------------------------------------------------------

    def add_beam(self, beam: MadeBeam) -> None:
        frame = self._beam_frame(beam)
        placed, inner = self._frames(frame)
        outline = tuple((self._y(y), z) for y, z in beam.outline)
        if beam.body is None:
            items = [self._extrusion(outline, inner, False, beam.length)]
        else:
            items = self._drawn(beam, beam.body, inner)
        element = self._element(beam.class_name, beam.mark, placed, self._shape(*items))
        element.Tag = f"tag of {beam.mark}"
        for number, hole in enumerate(beam.openings):
            self._opening(beam, hole, element, inner, f"hole {number} of {beam.mark}")
        self._notation(beam, element)
        made = [bar for layer in beam.layers for bar in self._layer(beam, layer, element, inner)]
        made += [bar for ties in beam.ties for bar in self._ties(beam, ties, element, inner)]
        if made:
            self.aggregate(f"bars of {beam.mark}", element, made)
            self.bars += made
        self._columns(beam, frame)

    def _drawn(
        self, beam: MadeBeam, draw: Callable[[Bodies], list[Any]], inner: Frame
    ) -> list[Any]:
        """The items of a body; in a mirrored building each a mapped item that mirrors it."""
        turn = -1.0 if self.setting.from_end else 1.0

        def at(place: Triple) -> Triple:
            return inner.point((self._x(beam, place[0]), turn * place[1], place[2]))

        def way(vector: Triple) -> Triple:
            return inner.vector((turn * vector[0], turn * vector[1], vector[2]))

        mm = LENGTH_UNITS[self.setting.unit]
        if not self.setting.mirrored:
            return draw(Bodies(self.file, mm, at, way))
        bodies = Bodies(self.file, mm)
        axes = [
            self.make("IfcDirection", [float(v) for v in way(each)])
            for each in ((1, 0, 0), (0, -1, 0), (0, 0, 1))
        ]
        origin = self._point(*at((0.0, 0.0, 0.0)))
        named = dict(zip(("Axis1", "Axis2", "Axis3"), axes, strict=True))
        return [bodies.mapped(item, LocalOrigin=origin, **named) for item in draw(bodies)]

    def add_column(self, column: MadeColumn) -> None:
        x = -column.x if self.setting.mirrored else column.x
        placed, inner = self._frames(Frame((x, column.y, column.z[0])))
        half = column.size / 2.0
        ring = ((-half, -half), (half, -half), (half, half), (-half, half))
        solid = self._extrusion(ring, inner, True, column.z[1] - column.z[0])
        self._element("IfcColumn", column.name, placed, self._shape(solid))

    def add_slab(self, slab: MadeSlab) -> None:
        frame, sign = Frame((0.0, 0.0, slab.bottom)), -1.0 if self.setting.mirrored else 1.0
        placed, inner = self._frames(frame)
        ring = tuple((sign * x, y) for x, y in slab.ring)
        solid = self._extrusion(ring, inner, True, slab.thickness)
        shape = self._shape(solid)
        element = self._element("IfcSlab", slab.name, placed, shape)
        for number, hole in enumerate(slab.holes):
            ring = tuple((sign * x, y) for x, y in hole)
            below = Frame(inner.point((0.0, 0.0, -50.0)), inner.angle)
            body = self._extrusion(ring, below, True, slab.thickness + 100.0)
            self._void(element, body, f"hole {number} of {slab.name}")

    def _opening(self, beam: MadeBeam, hole: Hole, host: Any, inner: Frame, name: str) -> None:
        (y0, y1), (z0, z1) = (tuple(map(self._y, hole.y)), hole.z)
        ring = ((y0, z0), (y1, z0), (y1, z1), (y0, z1))
        start = min(self._x(beam, x) for x in hole.x)
        frame = Frame(inner.point((start, 0.0, 0.0)), inner.angle)
        solid = self._extrusion(ring, frame, False, hole.x[1] - hole.x[0])
        self._void(host, solid, name)

    def _void(self, host: Any, solid: Any, name: str) -> None:
        placement = self.make("IfcLocalPlacement", host.ObjectPlacement, self._axes(Frame()))
        opening = self.rooted(
            "IfcOpeningElement", name, Name=name, ObjectPlacement=placement,
            Representation=self._shape(solid),
        )  # fmt: skip
        self.rooted(
            "IfcRelVoidsElement", name, RelatingBuildingElement=host,
            RelatedOpeningElement=opening,
        )  # fmt: skip

    def _y(self, y: float) -> float:
        return -y if self.setting.mirrored != self.setting.from_end else y

    def _x(self, beam: MadeBeam, x: float) -> float:
        return beam.length - x if self.setting.from_end else x

    def _beam_frame(self, beam: MadeBeam) -> Frame:
        frame = Frame(beam.origin, beam.direction)
        if self.setting.mirrored:
            x, y, z = frame.origin
            frame = Frame((-x, y, z), 180.0 - frame.angle)
        if self.setting.from_end:
            frame = Frame(frame.point((beam.length, 0.0, 0.0)), frame.angle + 180.0)
        return frame

    def _element(self, kind: str, name: str, frame: Frame, shape: Any) -> Any:
        placement = self.make("IfcLocalPlacement", self.storey.ObjectPlacement, self._axes(frame))
        element = self.rooted(
            kind, name, Name=name, ObjectPlacement=placement, Representation=shape
        )
        self.elements.append(element)
        return element

    def _notation(self, beam: MadeBeam, element: Any) -> None:
        if not beam.notation:
            return
        singles = [self._single(k, "IfcLabel", v) for k, v in beam.notation.items()]
        cover = self.length(beam.cover)
        singles.append(self._single("Cover", "IfcPositiveLengthMeasure", cover))
        name = "BeamRating_Reinforcement"
        properties = self.rooted(
            "IfcPropertySet", f"{name} {beam.mark}", Name=name, HasProperties=singles
        )
        self.rooted(
            "IfcRelDefinesByProperties", beam.mark, RelatedObjects=[element],
            RelatingPropertyDefinition=properties,
        )  # fmt: skip

    def _layer(self, beam: MadeBeam, layer: Layer, host: Any, frame: Frame) -> list[Any]:
        made = []
        for number, y in enumerate(layer.ys):
            points = [(layer.start, y, layer.z), (layer.end, y, layer.z)]
            if layer.hooks[0]:
                points.insert(0, (layer.start, y, layer.z + layer.tail))
            if layer.hooks[1]:
                points.append((layer.end, y, layer.z + layer.tail))
            name = f"{beam.mark} {layer.size} at {layer.z} from {layer.start} no {number}"
            made.append(self._bar(beam, name, layer.size, points, host, frame, "MAIN"))
        return made

    def _ties(self, beam: MadeBeam, ties: Ties, host: Any, frame: Frame) -> list[Any]:
        half, low, high = ties.half_width, ties.low, ties.high
        ring = ((-half, low), (half, low), (half, high), (-half, high), (-half, low))
        return [
            self._bar(
                beam, f"{beam.mark} stirrup at {x}", ties.size,
                [(x, y, z) for y, z in ring], host, frame, "LIGATURE",
            )
            for x in ties.places
        ]  # fmt: skip

    def _bar(self, beam: MadeBeam, name: str, size: str, points: Sequence[Triple], host: Any,
             frame: Frame, role: str) -> Any:  # fmt: skip
        diameter, area = SIZES[size]
        own = [(self._x(beam, x), self._y(y), z) for x, y, z in points]
        placement = self.make("IfcLocalPlacement", host.ObjectPlacement, self._axes(Frame()))
        bar = self.rooted(
            "IfcReinforcingBar", name, Name=name, SteelGrade="400W",
            NominalDiameter=self.length(diameter),
            CrossSectionArea=area / AREA_UNITS[self.setting.unit],
            ObjectPlacement=placement,
            Representation=self._shape(
                self._sweep(own, diameter, frame), kind="AdvancedSweptSolid"
            ),
        )  # fmt: skip
        setattr(bar, "BarRole" if self.setting.schema == "IFC2X3" else "PredefinedType", role)
        return bar

    def _columns(self, beam: MadeBeam, frame: Frame) -> None:
        for end, size in zip(("start", "end"), beam.columns, strict=True):
            if size == 0.0:
                continue
            x = size / 2.0 if end == "start" else beam.length - size / 2.0
            placed, inner = self._frames(
                Frame(frame.point((self._x(beam, x), 0.0, -3000.0)), frame.angle)
            )
            solid = self._extrusion(rectangle(size, size), inner, True, 3000.0)
            shape = self._shape(solid)
            self._element("IfcColumn", f"{beam.mark} column at {end}", placed, shape)

    def finish(self) -> bytes:
        self.rooted(
            "IfcRelContainedInSpatialStructure", "contents", RelatedElements=self.elements,
            RelatingStructure=self.storey,
        )  # fmt: skip
        self._associate("concrete", self.concrete, self.elements)
        if self.bars:
            self._associate("steel", self.steel, self.bars)
        text: str = self.file.to_string()
        header = (
            "FILE_NAME('hall.ifc','2026-01-01T00:00:00',('Modeller'),('Office'),"
            "'test writer','test writer','');"
        )
        return re.sub(r"FILE_NAME\(.*?\);", header, text, count=1, flags=re.DOTALL).encode("ascii")

    def _associate(self, text: str, material: Any, elements: Sequence[Any]) -> None:
        self.rooted(
            "IfcRelAssociatesMaterial", text, RelatedObjects=list(elements),
            RelatingMaterial=material,
        )  # fmt: skip


def model(
    *beams: MadeBeam,
    setting: Setting | None = None,
    slabs: Sequence[MadeSlab] = (),
    columns: Sequence[MadeColumn] = (),
) -> bytes:
    """The bytes of an IFC model of the beams."""
    made = Model(setting or Setting())
    for beam in beams:
        made.add_beam(beam)
    for column in columns:
        made.add_column(column)
    for slab in slabs:
        made.add_slab(slab)
    return made.finish()


def shuffled(data: bytes, seed: int) -> bytes:
    """The same model with its entities in another order under other numbers."""
    head, body = data.split(b"DATA;\n", 1)
    body, tail = body.split(b"ENDSEC;", 1)
    lines = body.decode("ascii").splitlines()
    order = random.Random(seed)
    numbers = [int(n) for n in re.findall(r"^#(\d+)=", body.decode("ascii"), flags=re.MULTILINE)]
    new = dict(zip(numbers, order.sample(range(1, 9 * len(numbers)), len(numbers)), strict=True))
    order.shuffle(lines)
    text = re.sub(r"#(\d+)", lambda found: f"#{new[int(found[1])]}", "\n".join(lines))
    return head + b"DATA;\n" + text.encode("ascii") + b"\nENDSEC;" + tail


# Brief and rating ------------------------------------------------------------------------------

BASIS = """
[basis]
standard = "csa-a23.3-14"
shear_method = "{method}"
concrete_unit_weight = "24 kN/m3"

[defaults]
bar_yield = "400 MPa"
stirrup_yield = "400 MPa"
aggregate_size = "20 mm"
supports = ["pinned", "pinned"]

[cases.floor]
nature = "imposed"

[cases.press]
nature = "imposed"
rated = true
"""

BEARINGS = """
[[supports]]
beams = ["*"]
bearing = ["300 mm", "300 mm"]
"""


def brief(*entries: str, method: str = "general") -> str:
    """A brief with an imposed case ``floor`` and a rated imposed case ``press``."""
    return BASIS.format(method=method) + "\n".join(entries)


def load(case: str, *lines: str, beams: str = "*") -> str:
    """An entry of ``[[loads]]``."""
    return "\n".join(["[[loads]]", f'case = "{case}"', f'beams = ["{beams}"]', *lines, ""])


def rate_model(folder: Path, data: bytes, text: str, name: str = "hall.ifc") -> Run:
    """Write a model and its brief, and rate it by the whole program."""
    folder.mkdir(parents=True, exist_ok=True)
    path, brief_path = folder / name, folder / "brief.toml"
    path.write_bytes(data)
    brief_path.write_text(text, encoding="utf-8")
    return rate([path], brief_path)


def answers(run: Run) -> dict[str, dict[str, Any]]:
    """What the program's JSON says of every beam in scope, by mark."""
    beams = json.loads(ratings_json(run.reports[0]))["beams"]
    return {beam["mark"]: beam for beam in beams}


def state(answer: Mapping[str, Any], name: str) -> dict[str, Any]:
    """What it says of one limit state."""
    found: dict[str, Any] = next(s for s in answer["limit_states"] if s["name"] == name)
    return found
