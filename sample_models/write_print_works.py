"""Write the sample building: a two-storey print works that gets new presses and a hoist runway.

The building, its marks and its loads are invented. Run it as

    python sample_models/write_print_works.py [IFC4 | IFC2X3 | IFC4X3] [OUT.ifc]

It writes the same bytes every time.
"""

from __future__ import annotations

import math
import re
import sys
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from step_writer import Point3, Profile, Writer

BAY_X, BAY_Y, COLUMN = 7200.0, 7500.0, 400.0
LINES_X, LINES_Y = 6, 3
LEVEL_1, ROOF = "Level 1", "Roof"
BAR_SIZES = {"10M": (11.3, 100), "15M": (16.0, 200), "20M": (19.5, 300), "25M": (25.2, 500), "30M": (29.9, 700)}  # fmt: skip
COVER = 40.0


@dataclass(frozen=True)
class Place:
    """Where a beam stands: soffit's middle at the start, plan direction, rise per length."""

    storey: str
    start: Point3
    direction: tuple[float, float] = (1.0, 0.0)
    rise: float = 0.0

    @property
    def along(self) -> Point3:
        """Unit vector along the beam."""
        level = math.hypot(1.0, self.rise)
        return (self.direction[0] / level, self.direction[1] / level, self.rise / level)

    @property
    def upward(self) -> Point3:
        """Unit vector up, square to the beam."""
        x, y, z = self.along
        plan = math.hypot(x, y)
        return (-x * z / plan, -y * z / plan, plan)


@dataclass(frozen=True)
class Layer:
    """Longitudinal bars: number and size, height of the centres, ends, hooks, half width."""

    count: int
    size: str
    z: float
    start: float
    end: float
    half_width: float
    hooks: tuple[bool, bool] = (False, False)


@dataclass(frozen=True)
class Zone:
    """Stirrups of one spacing from ``start`` to ``end``."""

    size: str
    spacing: float
    start: float
    end: float
    half_width: float
    bottom: float
    top: float


class PrintWorks:
    """The building under construction."""

    def __init__(self, schema: str) -> None:
        """Write storeys, materials, columns and all beams."""
        self.writer = Writer(schema)
        self.tag = 1000
        for name, elevation in ((LEVEL_1, 4500.0), (ROOF, 9000.0)):
            self.writer.storey(name, elevation)
        self.writer.concrete("Concrete C35 in situ", 35.0)
        self.writer.concrete("Concrete f'c = 40 MPa precast")
        self.writer.concrete("Concrete, existing")
        self.writer.other_material("Reinforcing steel 400W", "steel")
        self.writer.other_material("Structural steel 350W", "steel")
        self.writer.other_material("Timber D.Fir-L", "wood")
        self.writer.other_material("Elastomer", None)
        self.writer.other_material("Finish by others", None)

    # Members that are not beams --------------------------------------------------------------

    def column(self, name: str, storey: str, at: tuple[float, float], size: float,
               bottom: float, top: float) -> None:  # fmt: skip
        """Write a square column."""
        w = self.writer
        solid = w.extrusion(w.rectangle(size, size), (0, 0, 0), (0, 0, 1), (1, 0, 0), top - bottom)
        placement = w.placement(w.storeys[storey].ObjectPlacement, (*at, bottom))
        column = w.rooted(
            "IfcColumn", name, Name=name, ObjectPlacement=placement, Representation=w.shape([solid])
        )
        w.contained[storey].append(column)
        w.materials["Concrete C35 in situ"].append(column)

    def slab(self, name: str, storey: str, ring: Profile, soffit: float, thickness: float) -> None:
        """Write a level slab of a ring in plan."""
        w = self.writer
        solid = w.extrusion(w.polygon(ring), (0, 0, 0), (0, 0, 1), (1, 0, 0), thickness)
        placement = w.placement(w.storeys[storey].ObjectPlacement, (0.0, 0.0, soffit))
        slab = w.rooted(
            "IfcSlab", name, Name=name, ObjectPlacement=placement, Representation=w.shape([solid])
        )
        slab.PredefinedType = "FLOOR"
        w.contained[storey].append(slab)
        w.materials["Concrete C35 in situ"].append(slab)

    def opening(self, beam: Any, name: str, x: float, z: float, size: tuple[float, float]) -> None:
        """Write an opening right across a beam: its start and soffit, its length and height."""
        w, (length, height) = self.writer, size
        solid = w.extrusion(
            w.rectangle(length, 2000.0), (x + length / 2, 0, z), (0, 0, 1), (1, 0, 0), height
        )
        opening = w.rooted(
            "IfcOpeningElement", name, Name=name, Representation=w.shape([solid]),
            ObjectPlacement=w.placement(beam.ObjectPlacement),
        )  # fmt: skip
        w.rooted(
            "IfcRelVoidsElement", f"{name} void", RelatingBuildingElement=beam,
            RelatedOpeningElement=opening,
        )  # fmt: skip

    # Beams -------------------------------------------------------------------------------------

    def element(self, mark: str, place: Place, shape: Any, material: str, kind: str = "IfcBeam",
                frame: tuple[Point3, Point3] | None = None) -> Any:  # fmt: skip
        """Write a beam of a given shape in its own axes: x along, z up."""
        w = self.writer
        self.tag += 1
        axis, ref = frame or (place.upward, place.along)
        placement = w.placement(w.storeys[place.storey].ObjectPlacement, place.start, axis, ref)
        beam = w.rooted(
            kind,
            mark,
            Name=mark,
            Tag=str(self.tag),
            ObjectPlacement=placement,
            Representation=shape,
        )
        if w.schema != "IFC2X3" and kind == "IfcBeam":
            beam.PredefinedType = "BEAM"
        w.contained[place.storey].append(beam)
        w.materials[material].append(beam)
        return beam

    def prism(self, profile: Any, length: float, lift: float = 0.0) -> Any:
        """Make a solid along x of a profile whose X is the beam's y and whose Y is its z."""
        return self.writer.extrusion(profile, (0, 0, lift), (1, 0, 0), (0, 1, 0), length)

    def rectangular(self, mark: str, place: Place, width: float, depth: float, length: float,
                    material: str = "Concrete C35 in situ") -> Any:  # fmt: skip
        """Write a rectangular beam."""
        solid = self.prism(self.writer.rectangle(width, depth), length, depth / 2.0)
        return self.element(mark, place, self.writer.shape([solid]), material)

    def traced(self, mark: str, place: Place, outline: Profile, length: float,
               material: str = "Concrete C35 in situ") -> Any:  # fmt: skip
        """Write a beam of any outline (y to the left, z up from the soffit)."""
        solid = self.prism(self.writer.polygon(outline), length)
        return self.element(mark, place, self.writer.shape([solid]), material)

    # Reinforcement -------------------------------------------------------------------------------

    def bars(self, beam: Any, mark: str, layers: Sequence[Layer], zones: Sequence[Zone]) -> None:
        """Write physical bars and stirrups under a beam."""
        made = [bar for layer in layers for bar in self._layer(beam, mark, layer)]
        made += [self._stirrups(beam, mark, zone) for zone in zones]
        self.writer.relate("IfcRelAggregates", f"{mark} bars", beam, made)
        self.writer.materials["Reinforcing steel 400W"].extend(made)

    def _layer(self, beam: Any, mark: str, layer: Layer) -> list[Any]:
        diameter = BAR_SIZES[layer.size][0]
        step = 2.0 * layer.half_width / max(1, layer.count - 1)
        inward = 1.0 if layer.z < 300.0 else -1.0
        made = []
        for number in range(layer.count):
            y = -layer.half_width + number * step if layer.count > 1 else 0.0
            points: list[Point3] = [(layer.start, y, layer.z), (layer.end, y, layer.z)]
            tail = inward * 16.0 * diameter
            if layer.hooks[0]:
                points.insert(0, (layer.start, y, layer.z + tail))
            if layer.hooks[1]:
                points.append((layer.end, y, layer.z + tail))
            solid = self._swept(points, diameter)
            name = f"{mark} {layer.size} z{layer.z:.0f} x{layer.start:.0f} no {number + 1}"
            made.append(self._bar(beam, name, layer.size, self.writer.shape([solid], "AdvancedSweptSolid"), "MAIN"))  # fmt: skip
        return made

    def _stirrups(self, beam: Any, mark: str, zone: Zone) -> Any:
        diameter = BAR_SIZES[zone.size][0]
        y, low, high = zone.half_width, zone.bottom, zone.top
        middle = (low + high) / 2.0
        loop: list[Point3] = [(0, -y, middle), (0, -y, low), (0, y, low), (0, y, high), (0, -y, high), (0, -y, middle)]  # fmt: skip
        count = math.floor((zone.end - zone.start) / zone.spacing + 1e-9) + 1
        origins = [(zone.start + i * zone.spacing, 0.0, 0.0) for i in range(count)]
        key = ("stirrup", zone.size, y, low, high)
        shape = self.writer.mapped(
            key, [self._swept(loop, diameter)], "AdvancedSweptSolid", origins
        )
        name = f"{mark} {zone.size} stirrups x{zone.start:.0f} to {zone.end:.0f}"
        return self._bar(beam, name, zone.size, shape, "LIGATURE")

    def _swept(self, points: Sequence[Point3], diameter: float) -> Any:
        curve = self.writer.bar_curve(points, 3.0 * diameter)
        solid = self.writer.make("IfcSweptDiskSolid", curve, diameter / 2.0)
        if self.writer.schema == "IFC2X3":
            solid.StartParam, solid.EndParam = 0.0, float(len(curve.Points) - 1)
        return solid

    def _bar(self, beam: Any, name: str, size: str, shape: Any, role: str) -> Any:
        w = self.writer
        diameter, area = BAR_SIZES[size]
        bar = w.rooted(
            "IfcReinforcingBar", name, Name=name, SteelGrade="400W", NominalDiameter=diameter,
            CrossSectionArea=area * 1e-6, Representation=shape,
            ObjectPlacement=w.placement(beam.ObjectPlacement),
        )  # fmt: skip
        setattr(bar, "BarRole" if w.schema == "IFC2X3" else "PredefinedType", role)
        return bar

    def notation(self, beam: Any, mark: str, top: str, bottom: str, stirrups: str,
                 side: str = "") -> None:  # fmt: skip
        """Write reinforcement as text in our own property set."""
        values: dict[str, Any] = {"TopBars": top, "BottomBars": bottom, "Stirrups": stirrups}
        if side:
            values["SideBars"] = side
        values["Cover"] = ("IfcPositiveLengthMeasure", COVER)
        self.writer.properties(f"{mark} notation", beam, "BeamRating_Reinforcement", values)

    def precast_notation(self, beam: Any, mark: str, upper: str, lower: str, ties: str) -> None:
        """Write reinforcement the way this project's precaster types it."""
        values = {"UpperSteel": upper, "LowerSteel": lower, "Ties": ties}
        self.writer.properties(f"{mark} precast", beam, "PrintWorks_Precast", {
            **values, "ClearCover": ("IfcPositiveLengthMeasure", 35.0),
        })  # fmt: skip


def rectangle_bars(width: float, depth: float, length: float, bottom: tuple[int, str],
                   top: tuple[int, str], reach: float = 350.0) -> list[Layer]:  # fmt: skip
    """Bars of a rectangular beam that run ``reach`` into the columns, hooked there."""

    def layer(group: tuple[int, str], at_top: bool) -> Layer:
        edge = COVER + 11.3 + BAR_SIZES[group[1]][0] / 2.0
        z = depth - edge if at_top else edge
        return Layer(*group, z, -reach, length + reach, width / 2.0 - edge, (True, True))

    return [layer(bottom, at_top=False), layer(top, at_top=True)]


def rectangle_zones(width: float, depth: float, spec: Sequence[tuple[str, float, float, float]]) -> list[Zone]:  # fmt: skip
    """Stirrup zones (size, spacing, start, end) of a rectangular beam."""
    inset = COVER + 11.3 / 2.0
    return [
        Zone(size, spacing, start, end, width / 2.0 - inset, inset, depth - inset)
        for size, spacing, start, end in spec
    ]


def tee(web: float, depth: float, flange: float, thickness: float) -> Profile:
    """Outline of a T."""
    w, f, t = web / 2.0, flange / 2.0, depth - thickness
    return [(-w, 0), (w, 0), (w, t), (f, t), (f, depth), (-f, depth), (-f, t), (-w, t)]


def ell(web: float, depth: float, flange: float, thickness: float) -> Profile:
    """Outline of an L with its flange to the left (+y)."""
    w, t = web / 2.0, depth - thickness
    return [(-w, 0), (w, 0), (w, t), (w + flange, t), (w + flange, depth), (-w, depth)]


def eye(bottom: float, top: float, web: float, depth: float) -> Profile:
    """Outline of an I with sloped transitions."""
    b, t, w = bottom / 2.0, top / 2.0, web / 2.0
    right = [(b, 0), (b, 140), (w, 220), (w, depth - 190), (t, depth - 120), (t, depth)]
    return [*right, *[(-y, z) for y, z in reversed(right)]]


def write_columns(works: PrintWorks) -> None:
    """Columns of the hall, of the runway and of the annex."""
    for i in range(LINES_X):
        for j in range(LINES_Y):
            at = (i * BAY_X, j * BAY_Y)
            works.column(f"C-{i + 1}{'ABC'[j]} lower", LEVEL_1, at, COLUMN, -4500.0, 0.0)
            works.column(f"C-{i + 1}{'ABC'[j]} upper", ROOF, at, COLUMN, -4500.0, -700.0)
    for i in range(5):
        works.column(f"C-H{i + 1}", LEVEL_1, (i * BAY_X, 3300.0), 360.0, 0.0, 2600.0)


def write_girders(works: PrintWorks) -> None:
    """Girders on line B: physical bars, fixed at both ends by the brief."""
    length = BAY_X - COLUMN
    supply = [((4, "25M"), (6, "25M"), 160.0), ((3, "25M"), (4, "25M"), 200.0),
              ((4, "25M"), (5, "25M"), 520.0), ((4, "25M"), (3, "25M"), 200.0),
              ((4, "25M"), (6, "25M"), 160.0)]  # fmt: skip
    for i, (bottom, top, spacing) in enumerate(supply):
        mark = f"G-{101 + i}"
        place = Place(LEVEL_1, (i * BAY_X + COLUMN / 2, BAY_Y, -700.0))
        beam = works.rectangular(mark, place, COLUMN, 700.0, length)
        layers = rectangle_bars(COLUMN, 700.0, length, bottom, top)
        if i in (0, 4):
            second = replace(layers[0], count=2, z=layers[0].z + 60.0, start=1100.0, end=length - 1100.0, hooks=(False, False))  # fmt: skip
            layers.append(second)
        zones = rectangle_zones(COLUMN, 700.0, [
            ("10M", spacing, 75.0, 1675.0), ("10M", max(300.0, spacing), 1875.0, length - 1875.0),
            ("10M", spacing, length - 1675.0, length - 75.0),
        ])  # fmt: skip
        works.bars(beam, mark, layers, zones)


def write_floor(works: PrintWorks) -> None:
    """Secondary T beams, edge L beams and line beams of Level 1."""
    for i in range(5):
        x = (i + 0.5) * BAY_X
        for j, (start, end) in enumerate(
            ((150.0, BAY_Y - 200.0), (BAY_Y + 200.0, 2 * BAY_Y - 150.0))
        ):
            mark = f"T-{111 + 2 * i + j}"
            place = Place(LEVEL_1, (x, start, -600.0), (0.0, 1.0))
            beam = works.traced(mark, place, tee(300.0, 600.0, 1500.0, 150.0), end - start)
            bottom = "5-25M" if i != 3 else "4-25M"
            stirrups = "10M @ 250 2 legs" if i != 4 else "10M @ 250"
            works.notation(beam, mark, "2-20M", bottom, stirrups)
    for i in range(5):
        for j, y in enumerate((0.0, 2 * BAY_Y)):
            mark = f"E-{131 + 2 * i + j}"
            forward = j == 0
            start = (i * BAY_X + COLUMN / 2 if forward else (i + 1) * BAY_X - COLUMN / 2, y, -600.0)
            place = Place(LEVEL_1, start, (1.0, 0.0) if forward else (-1.0, 0.0))
            works.traced(mark, place, ell(300.0, 600.0, 600.0, 150.0), BAY_X - COLUMN)
    for number, line in enumerate((0, 2, 3, 5)):
        for j in range(2):
            mark = f"R-{161 + 2 * number + j}"
            start = (line * BAY_X, j * BAY_Y + COLUMN / 2, -600.0)
            length = BAY_Y - COLUMN
            beam = works.rectangular(mark, Place(LEVEL_1, start, (0.0, 1.0)), 280.0, 600.0, length)
            layers = rectangle_bars(280.0, 600.0, length, (3, "25M"), (2, "20M"))
            spacing = 250.0 if number != 1 else 520.0
            zones = rectangle_zones(280.0, 600.0, [("10M", spacing, 75.0, length - 75.0)])
            works.bars(beam, mark, layers, zones)


def write_dock(works: PrintWorks) -> None:
    """Cantilevers of the loading dock and the sloped beams of the ramp."""
    for j in range(3):
        mark = f"K-{141 + j}"
        place = Place(LEVEL_1, ((LINES_X - 1) * BAY_X + COLUMN / 2, j * BAY_Y, -550.0))
        beam = works.rectangular(mark, place, 350.0, 550.0, 2200.0)
        layers = rectangle_bars(350.0, 550.0, 2200.0, (2, "15M"), (4 if j else 2, "25M"))
        layers = [replace(each, start=-1100.0, end=2150.0, hooks=(False, True)) for each in layers]
        works.bars(
            beam, mark, layers, rectangle_zones(350.0, 550.0, [("10M", 150.0, 75.0, 2100.0)])
        )
    for i in range(2):
        mark = f"S-{151 + i}"
        place = Place(LEVEL_1, (3000.0, -3000.0 - 2400.0 * i, -4400.0), (1.0, 0.0), 0.45)
        beam = works.rectangular(mark, place, 300.0, 500.0, 8000.0)
        works.notation(beam, mark, "2-15M", "3-25M" if i == 0 else "3-20M", "10M @ 200 2 legs")


def write_runway(works: PrintWorks) -> None:
    """Precast I beams that carry the paper-roll hoist."""
    length = BAY_X - 20.0
    for i in range(4):
        mark = f"H-{201 + i}"
        place = Place(LEVEL_1, (i * BAY_X + 10.0, 3300.0, 2600.0))
        outline = eye(360.0, 400.0, 160.0, 800.0)
        beam = works.traced(mark, place, outline, length, "Concrete f'c = 40 MPa precast")
        layers = [
            Layer(4, "25M", 62.0, 40.0, length - 40.0, 115.0),
            Layer(2, "25M", 112.0, 40.0, length - 40.0, 115.0),
            Layer(2, "15M", 742.0, 40.0, length - 40.0, 140.0),
        ]
        if i == 1:
            layers = layers[:1] + layers[2:]
        spacing = 150.0 if i != 2 else 300.0
        zones = [
            Zone("10M", spacing, 60.0, 1860.0, 50.0, 45.7, 754.3),
            Zone("10M", 300.0, 2160.0, length - 2160.0, 50.0, 45.7, 754.3),
            Zone("10M", spacing, length - 1860.0, length - 60.0, 50.0, 45.7, 754.3),
        ]
        works.bars(beam, mark, layers, zones)


def write_roof(works: PrintWorks) -> None:
    """Roof beams: trapezoidal precast, traced, extruded in other ways, mitred."""
    length = BAY_Y - 20.0
    trapezoid: Profile = [(-140, 0), (140, 0), (220, 700), (-220, 700)]
    for i in range(4):
        mark = f"P-{211 + i}"
        place = Place(ROOF, (i * BAY_X, 10.0, -700.0), (0.0, 1.0))
        beam = works.traced(mark, place, trapezoid, length, "Concrete f'c = 40 MPa precast")
        works.precast_notation(
            beam, mark, "2-15M", "4-20M" if i != 2 else "2-15M", "2 legs 10M @ 200"
        )
    ledger: Profile = [(-300, 0), (300, 0), (300, 250), (180, 280), (180, 700), (-180, 700), (-180, 280), (-300, 250)]  # fmt: skip
    for i in range(2):
        mark = f"F-{221 + i}"
        place = Place(ROOF, (i * BAY_X, BAY_Y + 10.0, -700.0), (0.0, 1.0))
        beam = works.traced(mark, place, ledger, length)
        works.notation(beam, mark, "3-20M", "4-25M", "10M @ 250 2 legs", "2-15M")
    write_other_bodies(works, length)


def write_other_bodies(works: PrintWorks, length: float) -> None:
    """Beams whose solids are not extruded along the span, and mitred ones."""
    w = works.writer
    side: Profile = [(0, 0), (length, 0), (length, 700), (0, 700)]
    across = w.extrusion(w.polygon(side), (0, 175, 0), (0, -1, 0), (1, 0, 0), 350.0)
    down = w.extrusion(
        w.rectangle(length, 350.0), (length / 2, 0, 700), (0, 0, 1), (1, 0, 0), 700.0, (0, 0, -1)
    )
    for i, solid in enumerate((across, down)):
        mark = f"D-{231 + i}"
        place = Place(ROOF, ((2 + i) * BAY_X, BAY_Y + 10.0, -700.0), (0.0, 1.0))
        beam = works.element(mark, place, w.shape([solid]), "Concrete, existing")
        works.notation(beam, mark, "2-20M", "3-25M", "10M @ 250 2 legs")
    for i in range(2):
        mark = f"M-{241 + i}"
        solid = works.prism(w.rectangle(350.0, 700.0), length, 350.0)
        cut = w.half_space((length, 0, 0), (1.0, 0.0, 0.12), (0.0, 1.0, 0.0))
        clipped = w.make("IfcBooleanClippingResult", "DIFFERENCE", solid, cut)
        place = Place(ROOF, ((4 + i) * BAY_X, BAY_Y + 10.0, -700.0), (0.0, 1.0))
        beam = works.element(mark, place, w.shape([clipped], "Clipping"), "Concrete C35 in situ")
        works.notation(beam, mark, "2-20M", "3-25M" if i == 0 else "2-15M", "10M @ 250 2 legs")


def write_annex(works: PrintWorks) -> None:
    """The annex on a grid turned by 18 degrees: one shape, mapped."""
    w = works.writer
    cosine, sine = math.cos(math.radians(18.0)), math.sin(math.radians(18.0))

    def turned(x: float, y: float) -> tuple[float, float]:
        return 45000.0 + x * cosine - y * sine, 2000.0 + x * sine + y * cosine

    for i in range(3):
        for j in range(2):
            works.column(f"C-X{i + 1}{j + 1}", LEVEL_1, turned(6000.0 * i, 5000.0 * j), 480.0, -4500.0, 0.0)  # fmt: skip
    solid = works.prism(w.rectangle(300.0, 550.0), 5600.0, 275.0)
    for number in range(4):
        mark = f"A-{301 + number}"
        i, j = divmod(number, 2)
        start = (*turned(6000.0 * i + 200.0, 5000.0 * j), -550.0)
        place = Place(LEVEL_1, start, (cosine, sine))
        shape = w.mapped(("annex", 5600), [solid], "SweptSolid", [(0.0, 0.0, 0.0)])
        beam = works.element(mark, place, shape, "Concrete C35 in situ")
        layers = rectangle_bars(
            300.0, 550.0, 5600.0, (3, "20M"), (3 if number else 2, "20M"), 200.0
        )
        layers.append(Layer(1, "15M", 275.0, -150.0, 5750.0, 0.0))
        works.bars(
            beam, mark, layers, rectangle_zones(300.0, 550.0, [("10M", 200.0, 75.0, 5525.0)])
        )
    for i in range(3):
        mark = f"A-{305 + i}"
        start = (*turned(6000.0 * i, 200.0), -550.0)
        beam = works.rectangular(mark, Place(LEVEL_1, start, (-sine, cosine)), 300.0, 550.0, 4600.0)
        works.notation(beam, mark, "2-20M", "3-20M", "10M @ 200 2 legs")


def write_paper_store(works: PrintWorks) -> None:
    """Beams of the old paper store: each lacks something that a rating needs."""
    w = works.writer
    for number in range(6):
        y = -12000.0 - 2500.0 * number
        mark = f"N-{401 + number}"
        place = Place(LEVEL_1, (0.0, y, -500.0))
        if number != 4:
            for x in (150.0, 5850.0):
                works.column(f"C-N{number + 1} at {x:.0f}", LEVEL_1, (x, y), 300.0, -4500.0, -500.0)
        material = "Finish by others" if number == 0 else "Concrete C35 in situ"
        if number == 1:
            beam = works.element(mark, place, faceted_box(w, 6000.0, 300.0, 500.0), material)
        else:
            beam = works.rectangular(mark, place, 300.0, 500.0, 6000.0, material)
        if number != 2:
            stirrups = "10M @ 200" if number == 5 else "10M @ 200 2 legs"
            works.notation(beam, mark, "2-15M", "3-20M", stirrups)


def write_plant_deck(works: PrintWorks) -> None:
    """Beams under the plant deck: openings, haunches, a dapped end, slab as flange, a proxy."""
    for number in range(6):
        mark, y = f"Q-{601 + number}", -12000.0 - 2500.0 * number
        for x in (10150.0, 15850.0):
            head = -350.0 if number == 3 and x > 15000.0 else -600.0
            works.column(f"C-Q{number + 1} at {x:.0f}", LEVEL_1, (x, y), 300.0, -4500.0, head)
        place = Place(LEVEL_1, (10000.0, y, -600.0))
        beam = write_deck_beam(works, mark, number, place)
        layers = rectangle_bars(300.0, 600.0, 6000.0, (3, "25M"), (2, "20M"), -COVER)
        zones = rectangle_zones(300.0, 600.0, [("10M", 200.0, 100.0, 5900.0)])
        if number in (2, 3):
            works.notation(beam, mark, "2-20M", "4-25M", "10M @ 200 2 legs")
        else:
            works.bars(beam, mark, layers, zones)
    plate: Profile = [(10000, -24500), (16000, -24500), (16000, -20500), (10000, -20500)]
    works.slab("SL-Q5", LEVEL_1, [*plate[:2], (16000, -22150), (10000, -22150)], -150.0, 150.0)
    works.slab("SL-Q6", LEVEL_1, [(10000, -21850), (16000, -21850), *plate[2:]], -150.0, 150.0)


def write_deck_beam(works: PrintWorks, mark: str, number: int, place: Place) -> Any:
    """Write one body of the plant deck."""
    w = works.writer
    haunched: Profile = [(0, 0), (1500, 200), (4500, 200), (6000, 0), (6000, 600), (0, 600)]
    dapped: Profile = [(0, 0), (5600, 0), (5600, 250), (6000, 250), (6000, 600), (0, 600)]
    if number in (2, 3):
        side = w.polygon(haunched if number == 2 else dapped)
        solid = w.extrusion(side, (0, 150, 0), (0, -1, 0), (1, 0, 0), 300.0)
        return works.element(mark, place, w.shape([solid]), "Concrete C35 in situ")
    if number == 5:
        solid = works.prism(w.rectangle(300.0, 600.0), 6000.0, 300.0)
        shape = w.shape([solid])
        return works.element(mark, place, shape, "Concrete C35 in situ", "IfcBuildingElementProxy")
    beam = works.rectangular(mark, place, 300.0, 600.0, 6000.0)
    if number == 0:
        works.opening(beam, f"{mark} pipe", 2600.0, 240.0, (140.0, 140.0))
    elif number == 1:
        works.opening(beam, f"{mark} duct", 1400.0, 180.0, (650.0, 260.0))
    return beam


def faceted_box(w: Writer, length: float, width: float, depth: float) -> Any:
    """Make a box as a faceted boundary representation."""
    corner = [
        w.point(x, y, z)
        for x in (0.0, length)
        for y in (-width / 2, width / 2)
        for z in (0.0, depth)
    ]
    rings = [(0, 1, 3, 2), (4, 6, 7, 5), (0, 4, 5, 1), (2, 3, 7, 6), (0, 2, 6, 4), (1, 5, 7, 3)]
    faces = [
        w.make("IfcFace", [w.make("IfcFaceOuterBound", w.make("IfcPolyLoop", [corner[i] for i in ring]), True)])
        for ring in rings
    ]  # fmt: skip
    return w.shape([w.make("IfcFacetedBrep", w.make("IfcClosedShell", faces))], "Brep")


def write_others(works: PrintWorks) -> None:
    """Members that are beams in the model and none of our business."""
    steel: Profile = [(-90, 0), (90, 0), (90, 12), (4, 12), (4, 388), (90, 388), (90, 400), (-90, 400), (-90, 388), (-4, 388), (-4, 12), (-90, 12)]  # fmt: skip
    for i in range(4):
        place = Place(ROOF, (i * BAY_X + 300.0, 3750.0, 60.0))
        works.traced(f"W-{501 + i}", place, steel, BAY_X - 600.0, "Structural steel 350W")
    for i in range(2):
        place = Place(ROOF, (30000.0, 2000.0 + 1500.0 * i, 60.0))
        works.rectangular(f"GL-{511 + i}", place, 140.0, 380.0, 5200.0, "Timber D.Fir-L")
    works.rectangular("Elastomeric bearing BP-521", Place(ROOF, (0.0, 60.0, -720.0)), 200.0, 20.0, 250.0, "Elastomer")  # fmt: skip
    works.rectangular("Strip footing FB-531", Place(LEVEL_1, (0.0, -9000.0, -5400.0)), 900.0, 400.0, 6000.0)  # fmt: skip


def write_print_works(schema: str) -> bytes:
    """The whole building as the bytes of an IFC file."""
    works = PrintWorks(schema)
    for write in (write_columns, write_girders, write_floor, write_dock, write_runway, write_roof,
                  write_annex, write_paper_store, write_plant_deck, write_others):  # fmt: skip
        write(works)
    works.writer.finish()
    text: str = works.writer.file.to_string()
    header = "FILE_NAME('print_works.ifc','2026-01-01T00:00:00',('Modeller'),('Structural office'),'sample writer','sample writer','');"  # fmt: skip
    return re.sub(r"FILE_NAME\(.*?\);", header, text, count=1, flags=re.DOTALL).encode("ascii")


def main() -> None:
    """Write the model in the schema and to the path of the command line."""
    schema = sys.argv[1] if len(sys.argv) > 1 else "IFC4"
    default = Path(__file__).parent / "print_works.ifc"
    out = Path(sys.argv[2]) if len(sys.argv) > 2 else default
    out.write_bytes(write_print_works(schema))


if __name__ == "__main__":
    main()
