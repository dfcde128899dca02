"""Reinforcement that a model gives by sections: what is read, what is refused, what is said."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import ifcopenshell.guid
import pytest

from ifccheck.beam import BarGroup, Outline, Reinforcement, Run
from tests.barred_beams import MILLIMETRES, ModelWithBars, straight
from tests.section_definitions import Piece, Writer

BOTTOM = Piece(depth=536.1)
TOP = Piece(depth=61.05, count=2, diameter=19.5, area=600.0)
THREE_25M, TWO_20M = BarGroup(3, "25M", 25.2, 500.0), BarGroup(2, "20M", 19.5, 300.0)
"""Bars of CSA G30.18: 25.2 mm and 500 mm2, 19.5 mm and 300 mm2"""


def writer(model: ModelWithBars) -> Writer:
    return Writer(model.file, MILLIMETRES[model.unit])


def read(*pieces: Piece, name: str | None = None, **beam: Any) -> Reinforcement:
    """What is read of a beam of 300 x 600 x 6000 with one definition."""
    model = ModelWithBars()
    made = model.beam(**beam)
    writer(model).give([made], *pieces, name=name)
    return model.read(made).source("sections")


def rows(found: Reinforcement) -> list[tuple[str, BarGroup, float]]:
    return [(row.face, row.group, round(row.z, 3)) for zone in found.zones for row in zone.rows]


def told(found: Reinforcement) -> str:
    return "; ".join(remark.text for remark in found.remarks)


def why(found: Reinforcement) -> str:
    return "; ".join(reason.text for reason in found.reasons)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3_ADD2"])
@pytest.mark.parametrize("unit", ["mm", "m", "in"])
def test_bars_of_a_section_in_every_schema_and_unit(schema: str, unit: str) -> None:
    model = ModelWithBars(schema, unit)
    beam = model.beam(Name="B-1")
    writer(model).give([beam], BOTTOM, TOP)
    found = model.read(beam).source("sections")
    assert why(found) == ""
    (zone,) = found.zones
    assert (zone.start, zone.end) == pytest.approx((0.0, 6000.0))
    bottom, top = zone.rows
    assert (bottom.face, bottom.group.count, bottom.group.designation) == ("bottom", 3, "25M")
    assert bottom.group.area == pytest.approx(500.0)
    assert bottom.z == pytest.approx(600.0 - 536.1)
    assert (top.face, top.group.count, top.group.designation) == ("top", 2, "20M")
    assert top.z == pytest.approx(600.0 - 61.05)
    assert bottom.bar_yield == 400.0


def test_an_empty_grade_states_no_strength_and_a_strange_one_is_told() -> None:
    (row, _) = read(replace(BOTTOM, grade=""), TOP).zones[0].rows
    assert row.bar_yield is None
    found = read(replace(BOTTOM, grade="good"), TOP)
    assert found.zones[0].rows[0].bar_yield is None
    assert "no yield strength can be read from grade 'good'" in told(found)


# At which face -----------------------------------------------------------------------------------


def test_a_depth_counts_from_the_top_where_another_row_shows_so() -> None:
    assert rows(read(BOTTOM, replace(BOTTOM, depth=490.0), TOP)) == [
        ("bottom", THREE_25M, 63.9), ("bottom", THREE_25M, 110.0), ("top", TWO_20M, 538.95),
    ]  # fmt: skip


def test_a_single_row_near_the_soffit_is_bottom_bars_and_said_to_be_assumed() -> None:
    found = read(BOTTOM)
    assert rows(found) == [("bottom", THREE_25M, 63.9)]
    (remark,) = found.remarks
    assert remark.kind == "assumption"
    assert "taken from the top: 3-25M at the bottom" in remark.text


@pytest.mark.parametrize("name", ["Top bars", "TopBars", "Obere Bewehrung", "hogging steel"])
def test_top_bars_by_name_count_from_the_soffit(name: str) -> None:
    """An engineer's effective depth of top bars is that from the compressed soffit."""
    assert rows(read(BOTTOM, name=name)) == [("top", THREE_25M, 536.1)]
    assert rows(read(TOP, name=name)) == [("top", TWO_20M, 538.95)]


@pytest.mark.parametrize("name", ["Upper floor", "TopLevel", "roof, top", "stop", "Untere Etage"])
def test_names_that_tell_of_storeys_tell_of_no_face(name: str) -> None:
    assert rows(read(BOTTOM, name=name)) == [("bottom", THREE_25M, 63.9)]


def test_bottom_and_top_bars_by_name() -> None:
    model = ModelWithBars()
    beam = model.beam()
    for piece, name in ((BOTTOM, "Bottom"), (replace(BOTTOM, depth=530.0), "Top")):
        writer(model).give([beam], piece, name=name)
    found = model.read(beam).source("sections")
    assert why(found) == ""
    assert rows(found) == [("bottom", THREE_25M, 63.9), ("top", THREE_25M, 530.0)]


@pytest.mark.parametrize(
    ("pieces", "name"),
    [
        ((BOTTOM, replace(BOTTOM, depth=500.0)), None),  # two layers, or bottom and top
        ((replace(BOTTOM, end=1500.0), replace(BOTTOM, start=1500.0)), None),
        ((replace(BOTTOM, depth=300.0),), None),
        ((replace(BOTTOM, depth=250.0),), None),
        ((TOP,), "bottom"),  # counted from the soffit?
        ((BOTTOM, TOP), "top"),  # depths count from the top, and yet 536 mm are said to be there
        ((BOTTOM, replace(BOTTOM, depth=530.0)), "top and bottom"),
    ],
)
def test_a_depth_that_does_not_tell_the_face_is_a_reason(
    pieces: tuple[Piece, ...], name: str | None
) -> None:
    found = read(*pieces, name=name)
    assert "does not tell at which face its bars lie" in why(found)
    assert found.zones == ()


@pytest.mark.parametrize("depth", [-10.0, 0.0, 600.0, 5400.0])
def test_a_depth_beyond_the_section_is_a_reason(depth: float) -> None:
    assert "leaves the body, which is 600 mm high" in why(read(replace(BOTTOM, depth=depth)))


def test_no_depth_is_a_reason() -> None:
    assert "has no EffectiveDepth" in why(read(replace(BOTTOM, depth=None)))


@pytest.mark.parametrize("profile", [(300.0, 500.0), (400.0, 620.0)])
def test_a_section_of_another_height_is_a_reason(profile: tuple[float, float]) -> None:
    assert "the body is 600 mm high" in why(read(replace(BOTTOM, profile=profile)))


@pytest.mark.parametrize("profile", [(600.0, 300.0), (250.0, 603.0), None])
def test_a_section_of_about_the_height_in_either_direction_is_not(profile: Any) -> None:
    assert why(read(replace(BOTTOM, profile=profile))) == ""


def _frame(run: Run, model: ModelWithBars, beam: Any) -> None:
    model.frames[beam.id()] = replace(model.frames[beam.id()], runs=(run,))


def test_a_taper_beside_a_section_is_a_reason() -> None:
    low, high = (
        Outline((((-150.0, 600.0 - h), (150.0, 600.0 - h), (150.0, 600.0), (-150.0, 600.0)),))
        for h in (600.0, 500.0)
    )
    model = ModelWithBars()
    beam = model.beam()
    writer(model).give([beam], BOTTOM)
    _frame(Run(0.0, 6000.0, low, high), model, beam)
    assert "depth of the body changes along its section" in model.read(beam).reasons


# How many, how thick -----------------------------------------------------------------------------


def group(**changes: Any) -> tuple[BarGroup, str]:
    found = read(replace(BOTTOM, **changes), TOP)
    assert why(found) == ""
    return found.zones[0].rows[0].group, told(found)


def test_a_number_that_is_not_given_follows_from_area_and_diameter() -> None:
    assert group(count=None)[0] == THREE_25M
    assert group(count=None, diameter=20.0, area=4 * math.pi * 100.0)[0].count == 4


def test_a_diameter_that_is_not_given_follows_from_area_and_number() -> None:
    found, _ = group(diameter=None)
    assert (found.count, found.area) == (3, 500.0)
    assert found.diameter == pytest.approx(25.2, abs=0.05)


@pytest.mark.parametrize("area", [0.0, None])
def test_no_area_is_that_of_the_diameter_and_told(area: float | None) -> None:
    found, remarks = group(area=area)
    assert found.count == 3
    assert found.area <= 500.0
    assert found.area == pytest.approx(math.pi * 25.2**2 / 4.0, rel=0.005)
    assert "the area is that of the diameter" in remarks


def test_square_centimetres_are_not_believed_and_told() -> None:
    """15 cm2 for three bars of 25.2 mm in a model whose unit would make it 15 mm2."""
    found, remarks = group(area=15.0)
    assert found.count * found.area == pytest.approx(1500.0, rel=0.005)
    assert "sizes differ (nominal diameter 25.2 mm; total area / number 5 mm2)" in remarks


def test_an_area_in_the_square_of_the_unit_of_length_is_read() -> None:
    """mm2 in a model of mm whose unit of area is declared to be the square metre."""
    assert group(area=1500.0 * 1e6)[0] == THREE_25M


@pytest.mark.parametrize(
    ("changes", "most"),
    [
        ({"diameter": 28.0}, 1500.0),  # over the ribs
        ({"diameter": 35.7}, 1500.0),
        ({"area": 2100.0}, 1500.0),
        ({"area": 900.0}, 900.0),
        ({"count": 4}, 1500.0),
        ({"count": 2}, 1000.0),
    ],
)
def test_the_least_of_what_contradicts_itself_counts(changes: dict[str, Any], most: float) -> None:
    """Never more than what diameter times number, or the total area, allow; a standard bar may be
    taken for an area that it has within 5 %."""
    found, remarks = group(**changes)
    assert found.count * found.area <= most * 1.05
    assert "sizes differ" in remarks
    assert "nominal diameter" in remarks
    assert "total area / number" in remarks


@pytest.mark.parametrize(
    ("changes", "part"),
    [
        ({"count": None, "diameter": None}, "number of bars does not follow"),
        ({"count": None, "area": 0.0}, "number of bars does not follow"),
        ({"count": None, "area": 15.0}, "not that of a whole number of bars"),
        ({"count": None, "diameter": 29.0}, "not that of a whole number of bars"),
        ({"diameter": None, "area": 0.0}, "is that of a bar"),
        ({"diameter": 0.0252, "area": None}, "is that of a bar"),
        ({"count": 0}, "no number of bars"),
        ({"count": -3}, "no number of bars"),
        ({"count": 2.5}, "no number of bars"),
        ({"count": 100000}, "no number of bars"),
        ({"surface": "PLAIN"}, "plain surface"),
    ],
)
def test_what_does_not_give_number_and_size_is_a_reason(changes: dict[str, Any], part: str) -> None:
    found = read(replace(BOTTOM, **changes))
    assert part in why(found)
    assert found.zones == ()


# Roles -------------------------------------------------------------------------------------------


@pytest.mark.parametrize("role", ["LIGATURE", "SHEAR", "RING", "STUD", "PUNCHING"])
def test_reinforcement_against_shear_is_not_counted(role: str) -> None:
    found = read(BOTTOM, TOP, replace(BOTTOM, role=role, count=20, diameter=11.3, area=2000.0))
    assert rows(found) == [("bottom", THREE_25M, 63.9), ("top", TWO_20M, 538.95)]
    (reason,) = found.reasons
    assert f"({role}) reinforcement against shear" in reason.text
    assert not reason.blocking


@pytest.mark.parametrize("role", ["NOTDEFINED", "USERDEFINED", "ANCHORING", None])
def test_a_role_that_does_not_tell_is_a_reason(role: str | None) -> None:
    found = read(BOTTOM, TOP, replace(BOTTOM, role=role))
    (reason,) = found.reasons
    assert "does not tell whether its bars run along" in reason.text
    assert reason.blocking


# From where to where -----------------------------------------------------------------------------


def test_a_section_that_stops_short_stops_there() -> None:
    found = read(replace(BOTTOM, start=500.0, end=4000.0), TOP)
    assert [(zone.start, zone.end) for zone in found.zones] == [(500.0, 4000.0), (0.0, 6000.0)]


@pytest.mark.parametrize(
    ("start", "end"), [(0.0, 6100.0), (-100.0, 6000.0), (0.0, 19685.0), (3000.0, 9000.0)]
)
def test_a_section_that_leaves_the_beam_is_a_reason(start: float, end: float) -> None:
    """The feet of 6000 mm in a model of metres among them."""
    found = read(replace(BOTTOM, start=start, end=end), TOP)
    assert "along the beam, which is 6.00 m long" in why(found)
    assert found.zones == ()


@pytest.mark.parametrize(("start", "end"), [(4000.0, 1000.0), (2000.0, 2000.0)])
def test_a_section_of_no_length_is_a_reason(start: float, end: float) -> None:
    assert "which is no length" in why(read(replace(BOTTOM, start=start, end=end)))


@pytest.mark.parametrize("name", ["start", "end"])
def test_a_position_that_is_missing_is_a_reason(name: str) -> None:
    assert "Position, so nobody can tell" in why(read(replace(BOTTOM, **{name: None})))


def _placed_at(origin: float, *pieces: Piece) -> Reinforcement:
    """A beam whose placement stands at a place along it."""
    model = ModelWithBars()
    beam = model.beam()
    moved = model.beam(origin=(origin, 0.0, 0.0), host=False)
    beam.ObjectPlacement = moved.ObjectPlacement
    writer(model).give([beam], *pieces)
    return model.read(beam).source("sections")


def test_positions_count_along_the_placement() -> None:
    found = _placed_at(3000.0, replace(BOTTOM, start=-3000.0, end=3000.0), replace(
        TOP, start=-3000.0, end=-1000.0))  # fmt: skip
    assert [(zone.start, zone.end) for zone in found.zones] == [(0.0, 6000.0), (0.0, 2000.0)]


def test_positions_that_span_the_beam_from_its_start_count_from_there() -> None:
    found = _placed_at(3000.0, BOTTOM, replace(TOP, end=2000.0))
    assert [(zone.start, zone.end) for zone in found.zones] == [(0.0, 6000.0), (0.0, 2000.0)]


def test_positions_that_can_be_read_in_two_ways_are_a_reason() -> None:
    assert "both readings hold" in why(_placed_at(3000.0, replace(BOTTOM, start=500.0, end=2500.0)))
    assert "along the beam" in why(_placed_at(3000.0, replace(BOTTOM, start=500.0, end=4500.0)))


def test_a_placement_that_is_not_along_the_beam_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    turned = model.beam(along=(1.0, 0.2, 0.0), host=False)
    beam.ObjectPlacement = turned.ObjectPlacement
    writer(model).give([beam], BOTTOM)
    assert "none is its own axis" in model.read(beam).reasons


def test_a_transverse_position_is_held_against_the_width() -> None:
    assert "is not used" in told(read(replace(BOTTOM, transverse=150.0)))
    assert "leaves the body, which is 300 mm wide" in why(read(replace(BOTTOM, transverse=400.0)))


# Whose definition --------------------------------------------------------------------------------


def test_a_definition_on_the_type_holds_for_its_occurrences() -> None:
    model = ModelWithBars()
    beams = [model.beam(), model.beam(origin=(0.0, 5000.0, 0.0))]
    write = writer(model)
    write.give_by_type(beams, write.definition(BOTTOM, TOP))
    for beam in beams:
        assert len(rows(model.read(beam).source("sections"))) == 2


def test_a_definition_of_the_beam_goes_before_that_of_its_type() -> None:
    model = ModelWithBars()
    beam = model.beam()
    write = writer(model)
    write.give_by_type([beam], write.definition(replace(BOTTOM, count=6, area=3000.0), TOP))
    write.give([beam], BOTTOM, TOP)
    found = model.read(beam).source("sections")
    assert rows(found)[0] == ("bottom", THREE_25M, 63.9)
    assert "its type defines sections of reinforcement too" in told(found)


def test_a_definition_that_is_related_twice_or_repeated_counts_once() -> None:
    model = ModelWithBars()
    beam = model.beam()
    held = writer(model).give([beam], BOTTOM, TOP)
    model.file.create_entity(
        "IfcRelDefinesByProperties", ifcopenshell.guid.new(), RelatedObjects=[beam],
        RelatingPropertyDefinition=held,
    )  # fmt: skip
    assert len(rows(model.read(beam).source("sections"))) == 2
    writer(model).give([beam], BOTTOM, TOP)
    found = model.read(beam).source("sections")
    assert len(rows(found)) == 2
    assert "repeats" in told(found)
    assert "counted once" in told(found)


def test_a_definition_of_the_assembly_is_told_and_not_read() -> None:
    model = ModelWithBars()
    beam = model.beam()
    whole = model.root("IfcElementAssembly", Name="A-1")
    model.aggregate(whole, [beam])
    writer(model).give([whole], BOTTOM, TOP)
    found = model.read(beam).source("sections")
    assert found.zones == ()
    assert "IfcElementAssembly, which it is a part of" in why(found)


def test_bars_that_are_modelled_stay_a_source_of_their_own() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40.0, 5960.0, 0.0, 60.0))
    writer(model).give([beam], BOTTOM, TOP)
    assert [source.source for source in model.read(beam).sources] == ["bars", "sections"]


@pytest.mark.parametrize("holds", ["no sections", "no bars"])
def test_a_definition_that_is_empty_is_a_reason(holds: str) -> None:
    model = ModelWithBars()
    beam = model.beam()
    held = writer(model).give([beam], BOTTOM)
    if holds == "no sections":
        held.ReinforcementSectionDefinitions = ()
    else:
        held.ReinforcementSectionDefinitions[0].CrossSectionReinforcementDefinitions = ()
    assert f"holds {holds.removesuffix('s')}" in model.read(beam).reasons
