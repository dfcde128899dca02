"""A building of beams that are carried in every way, as an IFC model, with places written out.

Every case stands in a band of its own along y; the whole may be turned about the vertical,
mirrored, written in another unit or in another order.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from ifccheck.beam import Model
from tests.ifc_models import Building

Point3 = tuple[float, float, float]


@dataclass(frozen=True)
class Setting:
    """How the building is written."""

    angle: float = 0.0
    """Turned about the vertical by so much [deg]"""
    mirrored: bool = False
    """y against y"""
    unit: str = "MILLIMETRE"
    backward: bool = False
    """The last member first"""
    schema: str = "IFC4"

    def way(self, v: Point3) -> Point3:
        x, y, z = v[0], -v[1] if self.mirrored else v[1], v[2]
        c, s = math.cos(math.radians(self.angle)), math.sin(math.radians(self.angle))
        return (c * x - s * y, s * x + c * y, z)


SETTINGS = (
    Setting(),
    Setting(angle=30.0),
    Setting(angle=-123.0, mirrored=True),
    Setting(mirrored=True),
    Setting(unit="METRE", backward=True),
    Setting(unit="INCH", angle=90.0),
    Setting(backward=True, schema="IFC2X3"),
)

Maker = Callable[[Building, Setting], None]


def lying(
    name: str, start: Point3, end: Point3, depth: float = 600.0, width: float = 300.0,
    kind: str = "IfcBeam",
) -> Maker:  # fmt: skip
    """A beam from the soffit's middle at its start to that at its end."""

    def make(building: Building, setting: Setting) -> None:
        length = math.dist(start, end)
        ahead = setting.way(tuple((b - a) / length for a, b in zip(start, end, strict=True)))  # type: ignore[arg-type]
        left = (-ahead[1], ahead[0], 0.0)
        x, y, z = setting.way(start)
        solid = building.extrusion(building.rectangle(width, depth), length)
        place = building.placement((x, y, z + depth / 2.0), ahead, left)
        product = building.member(kind, solid, placement=place, Name=name)
        building.give_material(product, building.entity("IfcMaterial", "Concrete C30/37"))

    return make


def block(
    name: str, centre: tuple[float, float], size: tuple[float, float], z: tuple[float, float],
    kind: str = "IfcColumn", bears: bool | None = None,
) -> Maker:  # fmt: skip
    """An upright box by its middle in plan, its sides along x and y, and its foot and head.

    ``bears`` is what the model says of whether it bears load.
    """

    def make(building: Building, setting: Setting) -> None:
        x, y, _ = setting.way((*centre, 0.0))
        ahead = setting.way((1.0, 0.0, 0.0))
        solid = building.extrusion(building.rectangle(*size), z[1] - z[0])
        place = building.placement((x, y, z[0]), (0.0, 0.0, 1.0), ahead)
        product = building.member(kind, solid, placement=place, Name=name)
        if bears is not None:
            common = f"Pset_{kind.removeprefix('Ifc')}Common"
            building.give_set(product, common, LoadBearing=building.entity("IfcBoolean", bears))

    return make


def column(name: str, x: float, y: float, z: tuple[float, float] = (0.0, 3000.0)) -> Maker:
    return block(name, (x, y), (400.0, 400.0), z)


def read(members: Sequence[Maker], setting: Setting = Setting()) -> Model:
    """The building as the program reads it."""
    building = Building(setting.schema, setting.unit)
    for make in members[::-1] if setting.backward else members:
        make(building, setting)
    return building.read()


def one_over_three_columns() -> list[Maker]:
    return [
        lying("ONE", (0, 0, 3000), (14200, 0, 3000)),
        column("C1", 200, 0), column("C2", 6200, 0), column("C3", 12200, 0),
    ]  # fmt: skip


def three_over_three_columns() -> list[Maker]:
    """The same, cut over the columns' centres; the middle part is drawn the other way round."""
    y = 10000
    return [
        lying("T1", (0, y, 3000), (6200, y, 3000)),
        lying("T2", (12200, y, 3000), (6200, y, 3000)),
        lying("T3", (12200, y, 3000), (14200, y, 3000)),
        column("D1", 200, y), column("D2", 6200, y), column("D3", 12200, y),
    ]  # fmt: skip


def face_to_face() -> list[Maker]:
    """Between columns that go up past the beams."""
    y, tall = 20000, (0.0, 6000.0)
    return [
        lying("F1", (200, y, 3000), (5800, y, 3000)),
        lying("F2", (6200, y, 3000), (11800, y, 3000)),
        column("E1", 0, y, tall), column("E2", 6000, y, tall), column("E3", 12000, y, tall),
    ]  # fmt: skip


def girders() -> list[Maker]:
    """Three girders on columns; secondary beams frame into their sides, one lies on top."""
    found = []
    for number, y in enumerate((30000, 35000, 40000), 1):
        found += [
            lying(f"G{number}", (0, y, 3000), (8000, y, 3000), 700),
            column(f"H{number}a", 200, y),
            column(f"H{number}b", 7800, y),
        ]
    return [
        *found,
        lying("S1", (4000, 30150, 3200), (4000, 34850, 3200), 500),
        lying("S2", (4000, 35150, 3200), (4000, 39850, 3200), 500),
        lying("TOP", (2000, 29850, 3700), (2000, 40150, 3700), 400),
    ]


def walls() -> list[Maker]:
    """A cantilever drawn into a wall, one that meets its face, a beam on walls, one along one."""
    y = 50000
    return [
        block("W1", (-150, y), (300, 4000), (0, 6000), "IfcWall", bears=True),
        lying("K1", (-200, y, 3000), (2000, y, 3000)),
        lying("K2", (-300, y + 1000, 3000), (-2300, y + 1000, 3000)),
        block("W2", (10000, y), (250, 2000), (0, 3000), "IfcWall"),
        block("W3", (15000, y), (250, 2000), (0, 3000), "IfcWall"),
        lying("ON", (9875, y, 3000), (15125, y, 3000)),
        block("W4", (23000, y), (4000, 250), (0, 3000), "IfcWall"),
        lying("ALONG", (21000, y, 3000), (25000, y, 3000)),
    ]


def ground() -> list[Maker]:
    """A beam on a pile, a footing and a bearing pad, one on corbels, one in the air."""
    y = 60000
    return [
        lying("P", (0, y, 0), (9000, y, 0)),
        block("PILE", (300, y), (600, 600), (-9000, 0), "IfcPile"),
        block("FOOT", (4500, y), (1000, 1000), (-500, 0), "IfcFooting"),
        block("PAD", (8850, y), (300, 300), (-20, 0), "IfcFooting"),
        column("Q1", 12000, y, (0.0, 6000.0)), column("Q2", 18000, y, (0.0, 6000.0)),
        lying("N1", (12200, y, 2700), (12450, y, 2700), 300, 400, "IfcMember"),
        lying("N2", (17800, y, 2700), (17550, y, 2700), 300, 400, "IfcMember"),
        lying("CORB", (12230, y, 3000), (17770, y, 3000)),
        lying("AIR", (22000, y, 3000), (26000, y, 3000)),
        lying("ODD", (30000, y, 3000), (34000, y, 3000)), column("Q3", 30200, y),
    ]  # fmt: skip


def crossing() -> list[Maker]:
    """Two alike that cross at one level, and a shallow one through a deep one."""
    y = 70000
    return [
        lying("X1", (0, y, 3000), (8000, y, 3000)),
        column("U1", 200, y), column("U2", 7800, y),
        lying("X2", (4000, y - 4000, 3000), (4000, y + 4000, 3000)),
        column("U3", 4000, y - 3800), column("U4", 4000, y + 3800),
        lying("DEEP", (20000, y, 2800), (28000, y, 2800), 900, 600),
        column("V1", 20200, y, (0.0, 2800.0)), column("V2", 27800, y, (0.0, 2800.0)),
        lying("THIN", (24000, y - 4000, 3200), (24000, y + 4000, 3200), 500),
        column("V3", 24000, y - 3800, (0.0, 3200.0)), column("V4", 24000, y + 3800, (0.0, 3200.0)),
    ]  # fmt: skip


def everything() -> list[Maker]:
    return [
        *one_over_three_columns(), *three_over_three_columns(), *face_to_face(), *girders(),
        *walls(), *ground(), *crossing(),
    ]  # fmt: skip
