"""How thick a bar is taken where the sources disagree, and the strength of named grades."""

from __future__ import annotations

import math

import pytest

from ifccheck.beam import Given
from ifccheck.ifc.bar_sizes import (
    BarSize,
    SizeSource,
    named_size,
    settle_grade,
    settle_size,
    yield_of_grade,
)
from tests.barred_beams import ModelWithBars, straight


def circle(diameter: float) -> float:
    return math.pi * diameter**2 / 4.0


def settled(*sources: SizeSource) -> BarSize:
    size = settle_size(sources)
    assert size is not None
    return size


def test_a_diameter_alone_is_a_circle() -> None:
    size = settled(SizeSource("swept diameter", 20.0))
    assert (size.diameter, size.doubt) == (20.0, "")
    assert size.area == pytest.approx(circle(20.0))


def test_the_area_that_is_stated_counts_where_all_agree() -> None:
    size = settled(SizeSource("nominal diameter", 29.9), SizeSource("area", area=700.0))
    assert (size.area, size.doubt) == (700.0, "")


def test_a_diameter_over_the_ribs_does_not_raise_the_area() -> None:
    """10 over the ribs of an 8 mm bar would be 56 % too much steel."""
    size = settled(
        SizeSource("nominal diameter", 10.0),
        SizeSource("swept diameter", 10.0),
        SizeSource("nominal diameter of its type", 8.0),
    )
    assert size.area == pytest.approx(circle(8.0))
    assert circle(10.0) / size.area == pytest.approx(1.5625)
    assert "10 mm" in size.doubt
    assert "8 mm" in size.doubt


def test_the_smaller_of_two_diameters_counts_whoever_says_it() -> None:
    for first, second in ((16.0, 32.0), (32.0, 16.0)):
        size = settled(SizeSource("nominal diameter", first), SizeSource("swept diameter", second))
        assert size.area <= circle(16.0)


@pytest.mark.parametrize("area", [0.0, -5.0, math.nan, math.inf])
def test_an_area_that_says_nothing_is_passed_over(area: float) -> None:
    size = settled(SizeSource("nominal diameter", 12.0), SizeSource("area", area=area))
    assert size.area == pytest.approx(circle(12.0))


@pytest.mark.parametrize("diameter", [12.0, 32.0])
def test_an_area_in_square_centimetres_is_recognised_and_told(diameter: float) -> None:
    size = settled(
        SizeSource("nominal diameter", diameter), SizeSource("area", area=circle(diameter) / 100.0)
    )
    assert size.area == pytest.approx(circle(diameter))
    assert "area" in size.doubt


def test_an_area_that_is_smaller_counts() -> None:
    size = settled(SizeSource("nominal diameter", 25.0), SizeSource("area", area=circle(20.0)))
    assert size.area == pytest.approx(circle(20.0))


def test_a_diameter_in_the_wrong_unit_is_told_and_passed_over() -> None:
    size = settled(SizeSource("nominal diameter", 0.016), SizeSource("swept diameter", 16.0))
    assert size.diameter == 16.0
    assert "0.016" in size.doubt


def test_nothing_credible_is_no_size() -> None:
    assert settle_size((SizeSource("nominal diameter", 0.0), SizeSource("area", area=0.0))) is None
    assert settle_size((SizeSource("nominal diameter", 500.0),)) is None


def test_a_number_in_a_name_counts_only_near_the_thickness() -> None:
    named = SizeSource("name", designation="#5")
    assert settled(SizeSource("swept diameter", 15.875), named).designation == "#5"
    assert settled(SizeSource("swept diameter", 32.0), named).area == pytest.approx(circle(32.0))


@pytest.mark.parametrize(
    ("text", "size"),
    [
        ("top 15M", "15M"),
        ("15M-A4", "15M"),
        ("Bar #8", "#8"),
        ("M15", ""),
        ("12M", ""),
        ("L5M", ""),
        ("2500M", ""),
        ("#99", ""),
    ],
)
def test_sizes_in_names(text: str, size: str) -> None:
    assert named_size(text) == size


@pytest.mark.parametrize(
    ("text", "strength"),
    [
        ("400W", 400.0),  # CSA G30.18
        ("G30.18 500R", 500.0),
        ("B500NC", 500.0),
        ("B500B", 500.0),
        ("BSt 500", 500.0),
        ("BSt 500 S", 500.0),
        ("FeB500", 500.0),
        ("FeB 400 HWL", 400.0),
        ("Grade 60", 60 * 6.894757),
        ("A615 Gr. 60", 60 * 6.894757),
        ("Grade 420", 420.0),
        ("60 ksi", 60 * 6.894757),
        ("fy = 500 MPa", 500.0),
        ("500", 500.0),
        ("SD390", 390.0),
        ("HRB400", 400.0),
        ("ReinforcingSteel", None),
        ("Steel", None),
        ("Radial Gradient Fill", None),
        ("Grade 3", None),
        ("B35", None),
        ("Rebar 10", None),
        ("", None),
        ("Steel 12000", None),
    ],
)
def test_strength_of_named_grades(text: str, strength: float | None) -> None:
    value = yield_of_grade(text)
    assert value == (None if strength is None else pytest.approx(strength))


def test_the_lowest_of_several_grades_counts_and_is_told() -> None:
    grade = settle_grade([("grade", "500W"), ("material", "400W")])
    assert grade.strength is not None
    assert grade.strength.value == 400.0
    assert "500 MPa" in grade.doubt


def test_a_stated_strength_counts_with_the_names() -> None:
    grade = settle_grade([("grade", "500W")], Given(350.0, "material"))
    assert grade.strength is not None
    assert grade.strength.value == 350.0


def test_a_grade_that_is_not_known_is_told() -> None:
    grade = settle_grade([("grade", "X-STEEL")])
    assert grade.strength is None
    assert "X-STEEL" in grade.doubt
    assert settle_grade([]).doubt == ""


def test_grade_and_size_come_from_the_material_and_the_type_of_a_model() -> None:
    model = ModelWithBars(unit="m")
    beam = model.beam()
    (bar,) = model.bars(beam, straight(50, 5950, 0, 60), diameter=20.0)
    bar.NominalDiameter = None
    kind = model.root(
        "IfcReinforcingBarType", PredefinedType="MAIN", NominalDiameter=0.016, Name="T 15M"
    )
    model.root("IfcRelDefinesByType", RelatedObjects=[bar], RelatingType=kind)
    steel = model.file.create_entity("IfcMaterial", "B500NC")
    model.root("IfcRelAssociatesMaterial", RelatedObjects=[bar], RelatingMaterial=steel)
    found = model.read(beam)
    (bars,) = found.bars
    assert (bars.designation, bars.area) == ("15M", 200.0)
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 500.0
    assert "B500NC" in bars.yield_strength.source
    assert "swept diameter 20 mm" in found.remarks


def test_the_strength_that_a_material_states_as_a_property() -> None:
    model = ModelWithBars()
    beam = model.beam()
    (bar,) = model.bars(beam, straight(50, 5950, 0, 60), diameter=20.0)
    create = model.file.create_entity
    steel = create("IfcMaterial", "Rebar")
    strength = create(
        "IfcPropertySingleValue", "YieldStress", None, create("IfcPressureMeasure", 420.0), None
    )
    create("IfcMaterialProperties", "Pset_MaterialSteel", None, [strength], steel)
    model.root("IfcRelAssociatesMaterial", RelatedObjects=[bar], RelatingMaterial=steel)
    (bars,) = model.read(beam).bars
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 420.0


@pytest.mark.parametrize("in_square_metres", [True, False])
def test_areas_in_the_unit_of_area_or_in_the_square_of_the_unit_of_length(
    in_square_metres: bool,
) -> None:
    model = ModelWithBars()  # millimetres and square metres
    beam = model.beam()
    area = 300.0 * (1e-6 if in_square_metres else 1.0)
    model.bars(beam, straight(50, 5950, 0, 60), diameter=19.5, CrossSectionArea=area)
    (bars,) = model.read(beam).bars
    assert bars.area == pytest.approx(300.0)
    assert model.read(beam).remarks == ""


def test_a_bar_whose_thickness_nobody_states_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    axis = model.curve(straight(50, 5950, 0, 60))
    bar = model.bar([axis], None, beam)
    model.aggregate(beam, [bar])
    assert "diameter that nobody states" in model.read(beam).reasons


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_bars_of_plain_surface_are_not_read(schema: str) -> None:
    """Development lengths are those of deformed bars (CSA A23.3-14 12.1.1, from memory)."""
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    (plain,) = model.bars(beam, straight(50, 5950, -80, 60), BarSurface="PLAIN")
    model.bars(beam, straight(50, 5950, 80, 60), BarSurface="TEXTURED")
    found = model.read(beam)
    assert f"bar #{plain.id()}: has a plain surface" in found.reasons
    assert [bars.count for bars in found.bars] == [1]


def test_a_surface_that_only_the_type_tells() -> None:
    model = ModelWithBars()
    beam = model.beam()
    bars = model.bars(beam, straight(50, 5950, -80, 60), straight(50, 5950, 80, 60))
    kind = model.root("IfcReinforcingBarType", Name="T", PredefinedType="MAIN", BarSurface="PLAIN")
    model.root("IfcRelDefinesByType", RelatedObjects=bars, RelatingType=kind)
    assert "plain surface" in model.read(beam).reasons


@pytest.mark.parametrize(
    ("of_type", "own", "told"),
    [
        ("PLAIN", "TEXTURED", "plain surface by its type and a textured one by itself"),
        ("TEXTURED", "PLAIN", "plain surface by itself and a textured one by its type"),
        ("TEXTURED", "TEXTURED", ""),
    ],
)
def test_a_surface_that_the_type_denies_is_the_worse_one(of_type: str, own: str, told: str) -> None:
    model = ModelWithBars()
    beam = model.beam()
    bars = model.bars(beam, straight(50, 5950, -80, 60), straight(50, 5950, 80, 60))
    kind = model.root("IfcReinforcingBarType", Name="T", PredefinedType="MAIN", BarSurface=of_type)
    model.root("IfcRelDefinesByType", RelatedObjects=bars[1:], RelatingType=kind)
    bars[1].BarSurface = own
    found = model.read(beam)
    assert told in found.reasons
    assert bool(found.reasons) == bool(told)
    assert sum(bar.count for bar in found.bars) == (1 if told else 2)
