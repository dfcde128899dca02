"""Steel that seems more than it is: hooks that hold nothing, statements that deny one another."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import pytest

from ifccheck import pipeline
from ifccheck.beam import Anchor
from ifccheck.ifc.bar_sizes import yield_of_grade
from ifccheck.rating.results import Rating
from tests.barred_beams import Curve, Found, ModelWithBars, bent, straight
from tests.section_definitions import Piece, Writer
from tests.step_halls import LOAD, NOTATION, Beam, brief, hall, write

BOTTOM = tuple(straight(40.0, 5960.0, y, 60.0) for y in (-90.0, 0.0, 90.0))


# Legs that nothing holds -------------------------------------------------------------------------


def u_shaped(x: float, upper: tuple[tuple[float, float], ...], inward: float) -> Curve:
    """A stirrup open at the top: y and z of the points of one leg from the top down, and how far
    its ends turn inwards there."""
    down = [(x, y, z) for y, z in upper] + [(x, 100.0, 45.0)]
    ends = [(x, upper[0][0] - inward, upper[0][1])] if inward else []
    half = [*ends, *down]
    return Curve((*half, *((x, -y, z) for _, y, z in reversed(half))))


def with_stirrups(upper: tuple[tuple[float, float], ...], inward: float) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, *BOTTOM, diameter=25.2)
    places = [100.0 + 200.0 * number for number in range(5)]
    model.bars(beam, *(u_shaped(x, upper, inward) for x in places), diameter=11.3)
    return model.read(beam)


@pytest.mark.parametrize(
    ("upper", "inward"),
    [
        (((100.0, 560.0),), 0.0),
        (((100.0, 560.0), (104.0, 330.0), (104.0, 250.0)), 0.0),  # kinked: its leg in pieces
        (((100.0, 560.0),), 5.0),  # 5 mm are no hook
        (((100.0, 560.0),), 40.0),
    ],
)
def test_a_leg_whose_end_no_hook_holds_does_not_count(
    upper: tuple[tuple[float, float], ...], inward: float
) -> None:
    found = with_stirrups(upper, inward)
    assert found.stirrups == ()
    assert "not counted in shear" in found.remarks


@pytest.mark.parametrize("kinked", [False, True])
def test_a_leg_with_a_hook_of_six_diameters_counts(kinked: bool) -> None:
    middle = ((104.0, 330.0), (104.0, 250.0)) if kinked else ()
    (stirrups,) = with_stirrups(((100.0, 560.0), *middle), 6.0 * 11.3).stirrups
    assert stirrups.legs == 2


# Hooks -------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("radius", "end"), [(56.0, Anchor.HOOK), (300.0, Anchor.STRAIGHT)])
def test_a_bar_that_turns_off_in_a_wide_bend_ends_where_the_bend_begins(
    radius: float, end: Anchor
) -> None:
    """A bar of 16 mm, whose standard hook has a radius of 3.5 diameters to its centre line."""
    model = ModelWithBars()
    beam = model.beam()
    corners = [(0.0, 0.0, 60.0), (5900.0, 0.0, 60.0), (5900.0, 0.0, 590.0)]
    model.bars(beam, bent(corners, radius), diameter=16.0)
    (bars,) = model.read(beam).bars
    assert bars.end_anchor is end
    assert bars.end == pytest.approx(5908.0 if end is Anchor.HOOK else 5600.0)


# What the source that is taken does not say ------------------------------------------------------

SCHEDULE = '[reinforcement]\nschedule = "s.csv"\n'
ROW = "B-1,2-20M,3-25M,2 legs 10M @ 200"


def scheduled(folder: Path, table: str, **of_model: str) -> Rating:
    """A beam by a schedule, of which the model's own set says something too."""
    folder.mkdir()
    (folder / "s.csv").write_text(table, encoding="utf-8")
    beam = Beam(notation={**NOTATION, **of_model})
    write(folder, hall(beam), brief(LOAD) + SCHEDULE)
    run = pipeline.rate([folder / "hall.ifc"], folder / "brief.toml")
    (rating,) = run.reports[0].ratings.values()
    return rating


def resistances(rating: Rating) -> dict[str, float]:
    return {state.name: state.resistance for state in rating.limit_states}


@pytest.mark.parametrize(
    ("column", "said", "stated"),
    [
        ("bar_yield", "BarYield", "300 MPa"),
        ("stirrup_yield", "StirrupYield", "300 MPa"),
        ("cover", "Cover", "75 mm"),
    ],
)
def test_no_default_is_better_than_what_another_source_states(
    column: str, said: str, stated: str, tmp_path: Path
) -> None:
    head = "mark,top,bottom,stirrups"
    silent = scheduled(tmp_path / "silent", f"{head}\n{ROW}\n", **{said: stated})
    spoken = scheduled(tmp_path / "spoken", f"{head},{column}\n{ROW},{stated}\n")
    by_default = scheduled(tmp_path / "default", f"{head}\n{ROW}\n")
    assert resistances(silent) == pytest.approx(resistances(spoken), rel=1e-9, nan_ok=True)
    less, more = resistances(silent), resistances(by_default)
    assert any(less[name] < 0.97 * more[name] for name in more)


def test_a_yield_strength_that_another_source_denies_is_told(tmp_path: Path) -> None:
    table = f"mark,top,bottom,stirrups,bar_yield\n{ROW},500 MPa\n"
    rating = scheduled(tmp_path / "hall", table, BarYield="400 MPa")
    assert (
        "schedule used; properties differs: yield strength of the bars 400 MPa against 500 MPa"
        in [remark.text for remark in rating.remarks if remark.kind == "doubt"]
    )


# Properties that deny one another ----------------------------------------------------------------


@pytest.mark.parametrize(
    ("noted", "diameter", "spacing", "denied"),
    [
        ("2 legs 10M @ 100", None, "300", True),
        ("2 legs 15M @ 200", "10M", None, True),
        ("none", "10M", "200", True),
        ("2 legs 10M @ 200", "10M", "200", False),
    ],
)
def test_stirrups_that_two_properties_give_otherwise_are_a_reason(
    noted: str, diameter: str | None, spacing: str | None, denied: bool
) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, "BeamRating_Reinforcement", {"BottomBars": "3-25M", "Stirrups": noted})
    own = {"Size": diameter, "Pitch": spacing}
    model.properties(beam, "Office", {name: text for name, text in own.items() if text})
    mapping = {"stirrup_diameter": "Office.Size", "stirrup_spacing": "Office.Pitch"}
    found = model.read(beam, mapping)
    assert ("properties differ on the stirrups" in found.reasons) == denied
    (zone,) = found.source("properties").zones
    assert (zone.stirrups is None) == denied


# Section definitions that give the same bars twice ------------------------------------------------

ROW_AT_SOFFIT = Piece(depth=536.1)
ROW_AT_TOP = Piece(depth=61.05, count=2, diameter=19.5, area=600.0)


@pytest.mark.parametrize(
    ("twin", "name", "why"),
    [
        (ROW_AT_SOFFIT, "Bottom", ""),
        (replace(ROW_AT_SOFFIT, depth=536.1 + 1e-6), None, ""),
        (replace(ROW_AT_SOFFIT, end=6000.0 + 1e-6), None, ""),
        (replace(ROW_AT_SOFFIT, grade="500W"), None, "differ in number or grade"),
        (replace(ROW_AT_SOFFIT, count=4, area=2000.0), "Bottom", "differ in number or grade"),
    ],
)
def test_a_row_of_a_section_that_is_given_again_counts_once(
    twin: Piece, name: str | None, why: str
) -> None:
    model = ModelWithBars()
    beam = model.beam()
    Writer(model.file).give([beam], ROW_AT_SOFFIT, ROW_AT_TOP)
    Writer(model.file).give([beam], twin, name=name)
    found = model.read(beam)
    rows = [row for zone in found.source("sections").zones for row in zone.rows]
    assert [(row.face, row.group.count) for row in rows] == [("bottom", 3), ("top", 2)]
    assert why in found.reasons if why else "counted once" in found.remarks


def test_top_and_bottom_bars_of_one_effective_depth_are_no_repeat() -> None:
    model = ModelWithBars()
    beam = model.beam()
    for name in ("Bottom", "Top"):
        Writer(model.file).give([beam], ROW_AT_SOFFIT, name=name)
    (zone,) = model.read(beam).source("sections").zones
    assert [row.face for row in zone.rows] == ["bottom", "top"]


@pytest.mark.parametrize(
    ("end", "start", "why"),
    [(3050.0, 2950.0, "reach into"), (3000.0, 3000.0, ""), (6000.0, 2000.0, "")],
)
def test_rows_of_sections_that_overlap_in_part_are_a_reason(
    end: float, start: float, why: str
) -> None:
    """A lap of 100 mm would be laid out as bars that go on."""
    model = ModelWithBars()
    beam = model.beam()
    pieces = replace(ROW_AT_SOFFIT, end=end), replace(ROW_AT_SOFFIT, start=start)
    Writer(model.file).give([beam], *pieces, ROW_AT_TOP)
    found = model.read(beam)
    assert why in found.reasons if why else found.reasons == ""


# Bars that are weaker, or hold less, than steel of the default -----------------------------------


def of_material(name: str, **properties: str) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    bars = model.bars(beam, *BOTTOM, diameter=25.2)
    stuff = model.file.create_entity("IfcMaterial", name)
    model.root("IfcRelAssociatesMaterial", RelatedObjects=bars, RelatingMaterial=stuff)
    for bar in bars if properties else ():
        model.properties(bar, "Office", properties)
    return model.read(beam)


@pytest.mark.parametrize(
    ("material", "why"),
    [
        ("GFRP", "not of steel"),
        ("Glass fibre rod", "not of steel"),
        ("Rebar CFRP 1000 MPa", "not of steel"),
        ("Epoxy coated 400W", "coated with epoxy"),
        ("HPB300", "plain surface"),
        ("SR235", "plain surface"),
    ],
)
def test_bars_that_no_formula_covers_are_a_reason(material: str, why: str) -> None:
    found = of_material(material)
    assert why in found.reasons
    assert found.bars == ()


@pytest.mark.parametrize("attributes", [{"Name": "GFRP #5"}, {"ObjectType": "15M epoxy"}])
def test_names_of_bars_tell_so_too(attributes: dict[str, str]) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, *BOTTOM, diameter=16.0, **attributes)
    assert "not covered" in model.read(beam).reasons


@pytest.mark.parametrize("material", ["A240", "Q 235", "AT400C"])
def test_a_material_named_like_a_grade_leaves_no_room_for_a_default(material: str) -> None:
    """Where the yield strength is nan no default fills it."""
    (bars,) = of_material(material).bars
    assert bars.yield_strength is not None
    assert math.isnan(bars.yield_strength.value)


@pytest.mark.parametrize("material", ["Steel", "Rebar", "Stahl 1", "Material 12", "Concrete C30"])
def test_other_names_of_materials_do(material: str) -> None:
    (bars,) = of_material(material).bars
    assert bars.yield_strength is None


@pytest.mark.parametrize("name", ["fy", "fyk", "Fy"])
def test_a_yield_strength_by_its_symbol_is_read(name: str) -> None:
    (bars,) = of_material("Steel", **{name: "250 MPa"}).bars
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 250.0


@pytest.mark.parametrize(
    ("text", "strength"),
    [
        ("UTS 550 MPa", None),
        ("fu = 550 MPa", None),
        ("tensile strength: 620 N/mm2", None),
        ("fy 500 MPa, fu 540 MPa", 500.0),
        ("fu 450 MPa, fy 500 MPa", 500.0),
        ("500 MPa", 500.0),
    ],
)
def test_a_tensile_strength_is_no_yield_strength(text: str, strength: float | None) -> None:
    assert yield_of_grade(text) == strength


# Bars of the beam that lie in another one ---------------------------------------------------------


def test_bars_of_a_beam_that_lie_beyond_its_end_are_told() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, *BOTTOM, diameter=25.2)
    model.bars(beam, straight(6500.0, 12000.0, 0.0, 60.0), diameter=25.2)
    found = model.read(beam)
    (told,) = [r.text for r in found.source("bars").remarks if "lies beyond the end" in r.text]
    assert told.startswith("bar #")
