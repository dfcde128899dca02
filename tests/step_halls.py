"""Small halls of beams on columns as STEP text, so that a test may also write what no honest
program would: a missing end, a coordinate that is no number, an id twice."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

Point3 = tuple[float, float, float]
Outline = Sequence[tuple[float, float]]

NOTATION: Mapping[str, str] = {
    "TopBars": "2-20M", "BottomBars": "3-25M", "Stirrups": "2 legs 10M @ 200",
}  # fmt: skip
_DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"


@dataclass(frozen=True)
class Bar:
    """A straight physical bar from ``start`` to ``end`` of its beam's x, at y and z."""

    start: float
    end: float
    y: float
    z: float
    diameter: float = 25.2
    area: float = 500.0


@dataclass(frozen=True)
class Beam:
    """A concrete beam: soffit's middle at its start, direction, outline, notation, columns."""

    mark: str = "B-1"
    at: Point3 = (0.0, 0.0, 3000.0)
    along: Point3 = (1.0, 0.0, 0.0)
    length: float = 6000.0
    width: float = 300.0
    depth: float = 600.0
    outline: Outline | None = None
    material: str = "Concrete C30/37"
    notation: Mapping[str, str] | None = field(default_factory=lambda: NOTATION)
    bars: Sequence[Bar] = ()
    columns: bool = True
    """Whether a column stands under either end."""
    column: float = 300.0
    """Width of those columns."""
    tag: str = ""
    guid: str = ""

    def ring(self) -> Outline:
        """The outline's corners (y, z)."""
        half = self.width / 2.0
        rectangle = ((-half, 0.0), (half, 0.0), (half, self.depth), (-half, self.depth))
        return self.outline or rectangle


@dataclass(frozen=True)
class Block:
    """Another member: a box of a class, its middle in plan, its foot and its height."""

    name: str
    at: Point3
    size: tuple[float, float]
    height: float
    kind: str = "IFCCOLUMN"
    material: str = "Concrete C30/37"
    ring: Outline | None = None
    """Its plan about that middle, if it is no rectangle."""


def guid_of(text: str) -> str:
    """A GlobalId that follows from a text."""
    number = int(hashlib.sha256(text.encode()).hexdigest(), 16) >> 128
    letters = []
    for _ in range(22):
        number, digit = divmod(number, 64)
        letters.append(_DIGITS[digit])
    return "".join(letters[:21][::-1]).rjust(22, "0")


class _Lines:
    """STEP instances under construction."""

    def __init__(self) -> None:
        self.lines: list[str] = []
        self.materials: dict[str, list[str]] = {}

    def add(self, text: str) -> str:
        self.lines.append(f"#{100 + len(self.lines)}={text};")
        return f"#{99 + len(self.lines)}"

    def point(self, *values: float) -> str:
        return self.add(f"IFCCARTESIANPOINT(({','.join(map(_real, values))}))")

    def direction(self, *values: float) -> str:
        return self.add(f"IFCDIRECTION(({','.join(map(_real, values))}))")

    def axes(self, at: Point3, axis: Point3, reference: Point3) -> str:
        parts = self.point(*at), self.direction(*axis), self.direction(*reference)
        return self.add(f"IFCAXIS2PLACEMENT3D({','.join(parts)})")

    def placement(self, at: Point3, reference: Point3 = (1.0, 0.0, 0.0)) -> str:
        axes = self.axes(at, (0.0, 0.0, 1.0), reference)
        return self.add(f"IFCLOCALPLACEMENT($,{axes})")

    def shape(self, solid: str, kind: str = "SweptSolid") -> str:
        body = self.add(f"IFCSHAPEREPRESENTATION(#8,'Body','{kind}',({solid}))")
        return self.add(f"IFCPRODUCTDEFINITIONSHAPE($,$,({body}))")

    def prism(self, ring: Outline, axes: str, length: float) -> str:
        points = [self.point(*corner) for corner in (*ring, ring[0])]
        curve = self.add(f"IFCPOLYLINE(({','.join(points)}))")
        profile = self.add(f"IFCARBITRARYCLOSEDPROFILEDEF(.AREA.,$,{curve})")
        way = self.direction(0.0, 0.0, 1.0)
        solid = self.add(f"IFCEXTRUDEDAREASOLID({profile},{axes},{way},{_real(length)})")
        return self.shape(solid)

    def made_of(self, material: str, entity: str) -> None:
        self.materials.setdefault(material, []).append(entity)


def _real(value: float) -> str:
    text = repr(float(value))
    return text if "." in text or "n" in text else text.replace("e", ".e")


def hall(*beams: Beam, others: Iterable[Block] = (), more: str = "") -> str:
    """The text of an IFC4 model in millimetres; ``more`` holds further instances below #100."""
    lines = _Lines()
    placed = [_beam(lines, beam) for beam in beams]
    blocks = [*(column for beam in beams for column in _columns(beam)), *others]
    placed += [_block(lines, block) for block in blocks]
    for material, entities in lines.materials.items():
        stuff = lines.add(f"IFCMATERIAL('{material}',$,$)") if material else ""
        if stuff:
            lines.add(
                f"IFCRELASSOCIATESMATERIAL('{guid_of(material)}',$,$,$,({','.join(entities)}),{stuff})"
            )
    if placed:
        contents = guid_of("contents")
        lines.add(f"IFCRELCONTAINEDINSPATIALSTRUCTURE('{contents}',$,$,$,({','.join(placed)}),#13)")
    return _HEAD + more + "\n".join(lines.lines) + _TAIL


def _beam(lines: _Lines, beam: Beam) -> str:
    axes = lines.axes((0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0))
    shape = lines.prism(beam.ring(), axes, beam.length)
    placement = lines.placement(beam.at, beam.along)
    guid = beam.guid or guid_of(f"beam {beam.mark}")
    tag = f"'{beam.tag}'" if beam.tag else "$"
    made = lines.add(f"IFCBEAM('{guid}',$,'{beam.mark}',$,$,{placement},{shape},{tag},.BEAM.)")
    lines.made_of(beam.material, made)
    if beam.notation is not None:
        _notation(lines, beam, made)
    if beam.bars:
        bars = [_bar(lines, beam, number, bar) for number, bar in enumerate(beam.bars)]
        guid = guid_of(f"bars of {beam.mark}")
        lines.add(f"IFCRELAGGREGATES('{guid}',$,$,$,{made},({','.join(bars)}))")
    return made


def _notation(lines: _Lines, beam: Beam, made: str) -> None:
    singles = [
        lines.add(f"IFCPROPERTYSINGLEVALUE('{name}',$,IFCLABEL('{text}'),$)")
        for name, text in (beam.notation or {}).items()
    ]
    if not singles:
        return
    guid = guid_of(f"notation of {beam.mark}")
    named = f"'{guid}',$,'BeamRating_Reinforcement',$"
    group = lines.add(f"IFCPROPERTYSET({named},({','.join(singles)}))")
    guid = guid_of(f"notation relation of {beam.mark}")
    lines.add(f"IFCRELDEFINESBYPROPERTIES('{guid}',$,$,$,({made}),{group})")


def _bar(lines: _Lines, beam: Beam, number: int, bar: Bar) -> str:
    ends = [lines.point(x, bar.y, bar.z) for x in (bar.start, bar.end)]
    curve = lines.add(f"IFCPOLYLINE(({','.join(ends)}))")
    solid = lines.add(f"IFCSWEPTDISKSOLID({curve},{_real(bar.diameter / 2.0)},$,$,$)")
    shape = lines.shape(solid, "AdvancedSweptSolid")
    placement = lines.placement(beam.at, beam.along)
    guid = guid_of(f"bar {number} of {beam.mark}")
    return lines.add(
        f"IFCREINFORCINGBAR('{guid}',$,'bar {number}',$,$,{placement},{shape},$,'400W',"
        f"{_real(bar.diameter)},{_real(bar.area)},{_real(bar.end - bar.start)},.MAIN.,$)"
    )


def _columns(beam: Beam) -> list[Block]:
    if not beam.columns:
        return []
    (x, y, z), (along_x, along_y, _) = beam.at, beam.along
    size, half = beam.column, beam.column / 2.0
    return [
        Block(
            f"C-{beam.mark}-{end}",
            (x + along_x * t, y + along_y * t, z - 3000.0),
            (size, size),
            3000,
        )
        for end, t in (("start", half), ("end", beam.length - half))
    ]


def _block(lines: _Lines, block: Block) -> str:
    half_x, half_y = block.size[0] / 2.0, block.size[1] / 2.0
    ring = ((-half_x, -half_y), (half_x, -half_y), (half_x, half_y), (-half_x, half_y))
    axes = lines.axes((0.0, 0.0, 0.0), (0.0, 0.0, 1.0), (1.0, 0.0, 0.0))
    shape = lines.prism(block.ring or ring, axes, block.height)
    placement = lines.placement(block.at)
    guid = guid_of(f"block {block.name}")
    rest = ",$" * _FURTHER.get(block.kind, 2)
    made = lines.add(f"{block.kind}('{guid}',$,'{block.name}',$,$,{placement},{shape}{rest})")
    lines.made_of(block.material, made)
    return made


_FURTHER = {"IFCELEMENTASSEMBLY": 3, "IFCSTAIRFLIGHT": 6}
"""Attributes from the tag on, where a class has others than two."""

_HEAD = """ISO-10303-21;
HEADER;
FILE_DESCRIPTION((''),'2;1');
FILE_NAME('','2026-01-01T00:00:00',(''),(''),'','','');
FILE_SCHEMA(('IFC4'));
ENDSEC;
DATA;
#1=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
#2=IFCUNITASSIGNMENT((#1));
#6=IFCCARTESIANPOINT((0.,0.,0.));
#7=IFCAXIS2PLACEMENT3D(#6,$,$);
#8=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#7,$);
#10=IFCPROJECT('0000000000000000000010',$,'Hall',$,$,$,$,(#8),#2);
#11=IFCBUILDING('0000000000000000000011',$,'Hall',$,$,$,$,$,.ELEMENT.,$,$,$);
#12=IFCRELAGGREGATES('0000000000000000000012',$,$,$,#10,(#11));
#13=IFCBUILDINGSTOREY('0000000000000000000013',$,'Level 1',$,$,$,$,$,.ELEMENT.,3000.);
#14=IFCRELAGGREGATES('0000000000000000000014',$,$,$,#11,(#13));
"""
_TAIL = """
ENDSEC;
END-ISO-10303-21;
"""

BASIS = """[basis]
standard = "csa-a23.3-14"
concrete_unit_weight = "24 kN/m3"
"""
DEFAULTS = """[defaults]
bar_yield = "400 MPa"
stirrup_yield = "400 MPa"
cover = "40 mm"
aggregate_size = "20 mm"
supports = ["pinned", "pinned"]
"""
CASES = """[cases.floor]
nature = "imposed"
[cases.press]
nature = "imposed"
rated = true
"""
LOAD = """[[loads]]
case = "floor"
beams = ["B-*"]
line = "10 kN/m"
"""


def brief(*entries: str, basis: str = BASIS, defaults: str = DEFAULTS, cases: str = CASES) -> str:
    """The text of a brief; with a load of 10 kN/m on every ``B-`` beam unless entries are given."""
    return "\n".join((basis, defaults, cases, *(entries or (LOAD,))))


def write(folder: Path, model: str, brief_text: str, name: str = "hall") -> tuple[Path, Path]:
    """Write a model and a brief into a folder; return their paths."""
    model_path, brief_path = folder / f"{name}.ifc", folder / "brief.toml"
    model_path.write_text(model, encoding="ascii")
    brief_path.write_text(brief_text, encoding="utf-8")
    return model_path, brief_path
