"""The whole reading: identity, storeys, repeats, units and order, the open models, selections."""

from __future__ import annotations

import math
import random
import re
import subprocess
import sys
import textwrap
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from ifccheck.beam import Beam, Model
from ifccheck.errors import BriefError
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.selection import select
from tests.ifc_models import Building, Opened, only_beam, reasons

FILES = (
    "01_ifc4x3_beam_34_stirrups.ifc",
    "03_ifc2x3_precast_mixed_rebar.ifc",
    "05_ifc2x3_structural_timber_steel.ifc",
    "06_ifc2x3_bridge_concrete.ifc",
    "08_ifc4x3_grid_concrete_beams.ifc",
    "09_ifc4x3_analysis_inch.ifc",
    "16_ifc4_timber_mapped_negz.ifc",
)


@pytest.mark.parametrize("name", FILES)
def test_open_models_are_read_whole_and_left_alone(name: str, open_models: Path) -> None:
    file = ifcopenshell.open(str(open_models / name))
    before = file.to_string()
    model = read_model(Opened(file, str(file.schema)), {})
    assert len(model.beams) + len(model.out_of_scope) == len(file.by_type("IfcBeam"))
    for beam in model.beams:
        if beam.axis is None:
            assert beam.reasons
            continue
        assert beam.length > 0
        assert all(math.isfinite(value) for value in (*beam.axis.origin, *beam.axis.x))
        assert beam.runs[-1].end == pytest.approx(beam.length)
    select(Opened(file, str(file.schema)), model.beams, ["*"], None)
    assert file.to_string() == before


def simple(building: Building, **named: Any) -> Any:
    solid = building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0), x=(0, 1, 0))
    return building.beam(solid, **named)


def test_identity_of_a_beam() -> None:
    building = Building("IFC4")
    product = simple(building, Name=" B-1 ", Tag="4711", ObjectType="RC 300x500")
    beam = only_beam(building.read())
    assert (beam.name, beam.tag) == ("B-1", "4711")
    assert beam.type_name == "RC 300x500"
    assert beam.key == beam.guid == product.GlobalId
    assert (beam.step_id, beam.model, beam.ordinal) == (product.id(), "made", 0)
    assert beam.ifc_class == "IfcBeam"
    assert beam.material == "Concrete C30/37"


def test_standard_case_is_a_beam_too() -> None:
    building = Building("IFC4")
    solid = building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0), x=(0, 1, 0))
    building.member("IfcBeamStandardCase", solid, Name="Concrete beam")
    assert only_beam(building.read()).ifc_class == "IfcBeamStandardCase"


def test_repeated_globalids_are_all_kept() -> None:
    building = Building("IFC4")
    guid = ifcopenshell.guid.new()
    products = [simple(building, GlobalId=guid, Name=f"B{number}") for number in range(3)]
    model = building.read()
    assert [beam.key for beam in model.beams] == [guid, f"{guid}~2", f"{guid}~3"]
    assert [beam.ordinal for beam in model.beams] == [0, 1, 2]
    assert [beam.step_id for beam in model.beams] == [product.id() for product in products]
    (remark,) = model.remarks
    assert guid in remark.text
    opened = Opened(building.file, "IFC4")
    assert len(select(opened, model.beams, [guid], None)) == 3
    assert select(opened, model.beams, [f"{guid}~2"], None) == (f"{guid}~2",)


def test_storeys_from_below_and_storey_of_a_part() -> None:
    building = Building("IFC4", "METRE")
    upper = building.root("IfcBuildingStorey", Name="Roof", Elevation=9.0)
    cellar = building.root("IfcBuildingStorey", Name="Cellar")
    cellar.ObjectPlacement = building.placement((0, 0, -2500))
    space = building.root("IfcSpace", Name="Hall")
    building.give_parts(upper, space)
    first = simple(building, Name="in an assembly")
    assembly = building.member("IfcElementAssembly")
    building.give_parts(assembly, first)
    second = simple(building, Name="in a space")
    building.contained.remove(first)
    building.contained.remove(second)
    building.root(
        "IfcRelContainedInSpatialStructure", RelatedElements=[second], RelatingStructure=space
    )
    model = building.read()
    assert [(storey.name, storey.elevation) for storey in model.storeys] == [
        ("Cellar", pytest.approx(-2500.0)),
        ("Level 1", pytest.approx(3000.0)),
        ("Roof", pytest.approx(9000.0)),
    ]
    assert {beam.name: beam.storey for beam in model.beams} == {
        "in an assembly": "Level 1",
        "in a space": "Roof",
    }


def varied(schema: str, unit: str, turn: float = 0.0) -> Model:
    """Beams of several bodies, all turned about the vertical through the building's origin."""
    building = Building(schema, unit)
    whole = building.placement((0, 0, 0), (0, 0, 1), (math.cos(turn), math.sin(turn), 0))
    l_shape = ((0, 0), (600, 0), (600, 200), (250, 200), (250, 500), (0, 500))
    along = {"z": (1, 0, 0), "x": (0, 1, 0)}
    solids = [
        building.extrusion(building.rectangle(), 6000.0, **along),
        building.extrusion(building.outline(*l_shape), 5000.0, at=(0, 3000, 0), **along),
        building.extrusion(building.profile("IfcCircleProfileDef", Radius=250), 4000.0, **along),
        building.clipped(
            building.extrusion(building.rectangle(), 6000.0, **along),
            building.half_space((5500, 0, 0), (1, 1, 0)),
        ),
        building.extrusion(building.rectangle(7000, 300), 500.0, at=(0, 6000, 0)),
    ]
    for number, solid in enumerate(solids):
        place = building.placement((1000 * number, 500, 3000), within=whole)
        building.beam(solid, placement=place, Name=f"B{number}")
    return building.read()


def shape(beam: Beam) -> tuple[Any, ...]:
    """Length and outline, without noise."""
    ring = [(round(y, 3), round(z, 3)) for y, z in beam.runs[0].outline.rings[0]]
    start = ring.index(min(ring))
    return round(beam.length, 3), ring[start:] + ring[:start]


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("unit", ["METRE", "INCH", "FOOT"])
def test_the_same_building_in_any_unit_and_schema(schema: str, unit: str) -> None:
    expected, found = varied("IFC4", "MILLIMETRE"), varied(schema, unit)
    for one, other in zip(expected.beams, found.beams, strict=True):
        assert shape(one)[0] == pytest.approx(shape(other)[0], abs=2e-3)
        for place, same in zip(shape(one)[1], shape(other)[1], strict=True):
            assert same == pytest.approx(place, abs=2e-3)
        assert one.axis is not None
        assert other.axis is not None
        assert other.axis.origin == pytest.approx(one.axis.origin, abs=1e-3)
        assert reasons(other) == ""


@pytest.mark.parametrize("turn", [0.4, 1.9, 3.0, 5.5])
def test_turning_the_building_turns_nothing_else(turn: float) -> None:
    expected, found = varied("IFC4", "MILLIMETRE"), varied("IFC4", "MILLIMETRE", turn)
    cosine, sine = math.cos(turn), math.sin(turn)
    for one, other in zip(expected.beams, found.beams, strict=True):
        assert shape(one)[0] == pytest.approx(shape(other)[0], abs=2e-3)
        for place, same in zip(shape(one)[1], shape(other)[1], strict=True):
            assert same == pytest.approx(place, abs=2e-3)
        assert one.axis is not None
        assert other.axis is not None
        x, y, z = one.axis.origin
        turned = (x * cosine - y * sine, x * sine + y * cosine, z)
        assert other.axis.origin == pytest.approx(turned, abs=1e-3)


def test_order_of_the_entities_changes_nothing(open_models: Path) -> None:
    """Lines shuffled, and every id replaced by another."""
    name = "03_ifc2x3_precast_mixed_rebar.ifc"
    text = (open_models / name).read_text(encoding="latin-1")
    head, body, tail = re.split(r"(?<=DATA;\n)|(?=ENDSEC;\s*END-ISO)", text.replace("\r\n", "\n"))
    lines = re.findall(r"#\d+ ?=.*?;\n", body, flags=re.DOTALL)
    rng = random.Random(7)
    ids = [int(re.match(r"#(\d+)", line)[1]) for line in lines]  # type: ignore[index]
    others = dict(zip(ids, rng.sample(ids, len(ids)), strict=True))
    rng.shuffle(lines)
    renamed = re.sub(
        r"'(?:[^']|'')*'|#(\d+)",
        lambda found: f"#{others[int(found[1])]}" if found[1] else found[0],
        "".join(lines),
    )
    models = [
        read_model(Opened(ifcopenshell.file.from_string(one), "IFC2X3"), {})
        for one in (head + body + tail, head + renamed + tail)
    ]
    first, second = ({beam.guid: beam for beam in model.beams} for model in models)
    assert first.keys() == second.keys()
    for guid, beam in first.items():
        other = second[guid]
        assert beam.axis == other.axis
        assert beam.runs == other.runs
        assert reasons(beam) == reasons(other)
        assert beam.concrete_strength == other.concrete_strength
    assert {one.guid: one.reason for one in models[0].out_of_scope} == {
        one.guid: one.reason for one in models[1].out_of_scope
    }


# selections


@pytest.fixture
def marked() -> tuple[Opened, Model]:
    building = Building("IFC4")
    for name, tag in (("B-1", "T1"), ("B-2", "T2"), ("T1", "x"), ("b-1", ""), ("B-1", None)):
        simple(building, Name=name, Tag=tag)
    building.member("IfcColumn", Name="B-1")
    opened = building.open()
    return opened, read_model(opened, {})


def names(marked: tuple[Opened, Model], *patterns: str, where: str | None = None) -> list[int]:
    opened, model = marked
    keys = select(opened, model.beams, None if where else patterns, where)
    return [number for number, beam in enumerate(model.beams) if beam.key in keys]


def test_patterns_reach_tags_or_names(marked: tuple[Opened, Model]) -> None:
    assert names(marked, "T2") == [1]
    assert names(marked, "B-1") == [0, 4]
    assert names(marked, "T2*") == [1]
    assert names(marked, "B-*") == [0, 1, 4]  # case counts
    assert names(marked, "b-1", "x") == [2, 3]
    assert names(marked, "*") == [0, 1, 2, 3, 4]
    assert names(marked, "*-1") == [0, 3, 4]
    assert names(marked, "B-?") == []
    assert names(marked, "B-[12]") == []
    assert names(marked, "") == []


@pytest.mark.parametrize("pattern", ["T1", "T*", "*1"])
def test_a_mark_that_is_the_tag_of_one_beam_and_the_name_of_another(
    marked: tuple[Opened, Model], pattern: str
) -> None:
    """Whichever it loaded, it would leave out the other."""
    opened, model = marked
    with pytest.raises(BriefError, match="fits the Tag of one beam") as error:
        names(marked, pattern)
    assert model.beams[0].guid in str(error.value)
    assert "and the Name of another" in str(error.value)
    assert select(opened, model.beams, [model.beams[0].guid], None) == (model.beams[0].key,)


def test_a_mark_that_is_tag_and_name_of_one_beam() -> None:
    building = Building("IFC4")
    simple(building, Name="B-1", Tag="B-1")
    simple(building, Name="B-2", Tag="B-2")
    opened = building.open()
    model = read_model(opened, {})
    assert select(opened, model.beams, ["B-1"], None) == (model.beams[0].key,)
    assert len(select(opened, model.beams, ["B-*"], None)) == 2


def test_exact_globalid_goes_first_and_wildcards_never_reach_it(
    marked: tuple[Opened, Model],
) -> None:
    opened, model = marked
    guid = model.beams[2].guid
    assert select(opened, model.beams, [guid], None) == (guid,)
    assert select(opened, model.beams, [guid[:10] + "*"], None) == ()


@pytest.mark.parametrize(
    ("query", "found"),
    [
        ("IfcBeam", [0, 1, 2, 3, 4]),
        ('IfcBeam, location="Level 1"', [0, 1, 2, 3, 4]),
        ('IfcBeam, Name="B-1"', [0, 4]),
        ("IfcBeam, Name=/B-.*/", [0, 1, 4]),
        ("IfcBeam, Tag=T2", [1]),
        ("IfcColumn", []),
        ('IfcBeam, material="Concrete C30/37"', [0, 1, 2, 3, 4]),
        ("IfcElement, ! IfcBeam", []),
        ('IfcBeam, Name="T1" + IfcBeam, Tag=T2', [1, 2]),
    ],
)
def test_element_queries(marked: tuple[Opened, Model], query: str, found: list[int]) -> None:
    assert names(marked, where=query) == found


@pytest.mark.parametrize(
    ("query", "words"),
    [
        ("IfcBream", "names the class IfcBream, which IFC4 does not have"),
        ("IfcBeam, ! IfcNothing", "names the class IfcNothing"),
        ("IfcBeam, =", "cannot be understood at character 10"),
        ("B-1", "cannot be understood"),
        ("IfcBeam, Name=/B-(/", "cannot be answered in made.ifc"),
        ("  ", "where is empty"),
    ],
)
def test_queries_that_are_wrong_are_errors_of_the_brief(
    marked: tuple[Opened, Model], query: str, words: str
) -> None:
    opened, model = marked
    with pytest.raises(BriefError, match=re.escape(words)) as error:
        select(opened, model.beams, None, query)
    assert "\n" not in str(error.value)


CLASSES = (
    "IfcBeam", " IfcBeam\n", "IfcBEAM", "IfcBeamStandardCase", "IfcBuildingElement", "IfcElement",
    "IfcProduct", "IfcRoot", "IfcColumn", "IfcLabel", "IfcElementCompositionEnum",
)  # fmt: skip


@pytest.mark.parametrize("query", CLASSES)
def test_a_class_alone_reaches_what_the_selector_of_ifcopenshell_finds(query: str) -> None:
    from ifcopenshell.util import selector

    building = Building("IFC4")
    for kind in ("IfcBeam", "IfcBeamStandardCase", "IfcBeam"):
        solid = building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0), x=(0, 1, 0))
        building.member(kind, solid, Name="Concrete beam")
    opened = building.open()
    beams = read_model(opened, {}).beams
    candidates = {opened.file.by_id(beam.step_id) for beam in beams}
    found = {entity.id() for entity in selector.filter_elements(opened.file, query, candidates)}
    expected = tuple(beam.key for beam in beams if beam.step_id in found)
    assert select(opened, beams, None, query) == expected


def test_a_class_alone_does_not_load_the_selector() -> None:
    script = """
        import sys
        from ifccheck.ifc.reader import read_model
        from ifccheck.ifc.selection import select
        from tests.ifc_models import Building
        building = Building("IFC4")
        building.member("IfcBeam", Name="Concrete beam")
        opened = building.open()
        model = read_model(opened, {})
        assert len(select(opened, model.beams, None, "IfcBeam")) == 1
        assert "ifcopenshell.util.selector" not in sys.modules
        select(opened, model.beams, None, "IfcBeam, ! IfcColumn")
        assert "ifcopenshell.util.selector" in sys.modules
    """
    subprocess.run([sys.executable, "-c", textwrap.dedent(script)], check=True)


def test_query_without_candidates_finds_nothing(marked: tuple[Opened, Model]) -> None:
    opened, _ = marked
    assert select(opened, (), None, "IfcBeam") == ()
