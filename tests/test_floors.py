"""Entries of ``[[floors]]`` through the whole program, against statics by hand."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from shapely import Polygon

from ifccheck.beam import Floors, FloorSlab, Load
from ifccheck.errors import BriefError
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.scoping import Choice
from ifccheck.pipeline import Run
from tests.bodies_of_beams import Bodies
from tests.ifc_models import Building
from tests.models import (
    BEARINGS,
    MadeBeam,
    MadeSlab,
    Setting,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
    state,
)

BARS = {"TopBars": "2-20M", "BottomBars": "4-25M", "Stirrups": "2 legs 10M @ 150"}
SECTION = rectangle(300, 600)
OWN = 24.0 * 0.3 * 0.6
"""Self weight of a beam [kN/m]"""
COMPLETE = '[[beams]]\nbeams = ["*"]\nloads_complete = true\n'
PERMANENT = '[cases.slab]\nnature = "permanent"\n'


def lying(mark: str, x: float, y: float, length: float, turn: float = 0.0, **more: Any) -> MadeBeam:
    """A beam by the middle of its first column; columns 300 wide at ``length`` from each other."""
    shift = {0.0: (-150.0, 0.0), 90.0: (0.0, -150.0)}[turn]
    origin = x + shift[0], y + shift[1], 3000.0
    return MadeBeam(SECTION, length + 300.0, mark, BARS, origin=origin, direction=turn, **more)


def panel(*, turned: bool = False) -> tuple[MadeBeam, ...]:
    """Four beams round a panel of 4 m by 6 m, with columns under two, or the other two."""
    none = {"columns": (0.0, 0.0)}
    own, across = (none, {}) if turned else ({}, none)
    return (
        lying("SHORT", 0, 0, 4000, **own), lying("FAR", 0, 6000, 4000, **own),
        lying("LONG", 4000, 0, 6000, 90.0, **across), lying("BACK", 0, 0, 6000, 90.0, **across),
    )  # fmt: skip


PANEL = panel()


def slab(x0: float, y0: float, x1: float, y1: float, name: str = "S-1", *holes: Any) -> MadeSlab:
    ring = ((x0, y0), (x1, y0), (x1, y1), (x0, y1))
    return MadeSlab(ring, 3450.0, 150.0, name, holes)


SLAB = slab(0, 0, 4000, 6000)


def floor(*lines: str, case: str = "floor", area: str = "4.8 kN/m2") -> str:
    given = [f'area = "{area}"'] if area else []
    return "\n".join(["[[floors]]", f'case = "{case}"', *given, *lines, ""])


def run(
    folder: Path, *entries: str, beams: Sequence[MadeBeam] = PANEL,
    slabs: Sequence[MadeSlab] = (SLAB,), **setting: Any,
) -> Run:  # fmt: skip
    data = model(*beams, slabs=slabs, setting=Setting(**setting))
    return rate_model(folder, data, brief(BEARINGS, COMPLETE, *entries))


def loads_of(rated: Run, case: str = "floor") -> dict[str, list[Load]]:
    """By mark."""
    marks = {beam.key: beam.mark for beam in rated.rated[0].read.model.beams}
    found: dict[str, list[Load]] = {mark: [] for mark in marks.values()}
    for each in rated.rated[0].gathered.loads:
        if each.case == case:
            found[marks[each.beam]].append(each)
    return found


def force(loads: Sequence[Load]) -> float:
    """In all [kN]."""
    return sum(
        (one.end - one.start) * sum(one.values) / 2.0 if one.kind == "line" else one.values[0]
        for one in loads
        if one.kind != "moment"
    ) / 1e3  # fmt: skip


def told(rated: Run) -> list[str]:
    return [remark.text for remark in rated.reports[0].remarks if remark.stage == "floors"]


# Statics -----------------------------------------------------------------------------------------


def test_the_short_beam_carries_a_triangle(tmp_path: Path) -> None:
    """w = q a / 2 at its middle: w L^2 / 12 beside its own weight, w L / 4 at its end."""
    short = answers(run(tmp_path, floor()))["SHORT"]
    w, span = 4.8 * 2.0, 4.0
    moment = 1.25 * OWN * span**2 / 8.0 + 1.5 * w * span**2 / 12.0
    assert state(short, "FlexureSagging")["demand"] == pytest.approx(moment * 1e6, rel=1e-9)


def test_the_long_beam_carries_a_trapezoid(tmp_path: Path) -> None:
    """w (3 L^2 - a^2) / 24 for a trapezoid that rises over a/2 at either end (a = 4 m)."""
    long = answers(run(tmp_path, floor(), beams=panel(turned=True)))["LONG"]
    w, span, short = 4.8 * 2.0, 6.0, 4.0
    moment = 1.25 * OWN * span**2 / 8.0 + 1.5 * w * (3.0 * span**2 - short**2) / 24.0
    assert state(long, "FlexureSagging")["demand"] == pytest.approx(moment * 1e6, rel=1e-9)


def test_one_way_the_long_beams_carry_all(tmp_path: Path) -> None:
    rated = run(tmp_path, floor('span = "one way"'))
    found = {mark: force(own) for mark, own in loads_of(rated).items()}
    assert found == pytest.approx({"SHORT": 0, "FAR": 0, "LONG": 57.6, "BACK": 57.6})
    (line,) = loads_of(rated)["LONG"]
    assert line.values == pytest.approx((9.6, 9.6))
    assert line.text.startswith("4.8 kN/m2 over a width of 2.00 m")
    assert line.origin == "floors[1], slab S-1 (IfcSlab)"


@pytest.mark.parametrize("direction", ["X", "0 deg", "180 deg", "Y"])
def test_a_direction_is_that_of_the_span(tmp_path: Path, direction: str) -> None:
    rated = run(tmp_path, floor('span = "one way"', f'direction = "{direction}"'))
    on_long = 0.0 if direction == "Y" else 57.6
    found = loads_of(rated)
    assert force(found["LONG"]) == pytest.approx(on_long)
    assert force(found["SHORT"]) == pytest.approx(57.6 - on_long)


def test_self_weight_by_thickness_and_area_in_one(tmp_path: Path) -> None:
    rated = run(
        tmp_path, PERMANENT, floor("self_weight = true", case="slab", area="1.2 kN/m2"), floor()
    )
    assert force(loads_of(rated, "slab")["SHORT"]) == pytest.approx((24 * 0.15 + 1.2) * 4.0)
    assert force(loads_of(rated)["SHORT"]) == pytest.approx(4.8 * 4.0)


WORLDS: tuple[dict[str, Any], ...] = (
    {}, {"angle": 217.0}, {"angle": 37.0, "turned_by": "building"}, {"mirrored": True},
    {"unit": "m"}, {"unit": "inch", "schema": "IFC2X3"}, {"from_end": True, "schema": "IFC4X3"},
)  # fmt: skip
HOLE = ((1000, 1500), (2200, 1500), (2200, 3500), (1000, 3500))
OVERHANG = slab(-700, -500, 4300, 6150, "S-1", HOLE)


@pytest.mark.parametrize("setting", WORLDS)
def test_all_of_a_slab_is_on_the_beams_however_the_building_is_written(
    tmp_path: Path, setting: dict[str, Any]
) -> None:
    rated = run(tmp_path, floor(), slabs=(OVERHANG,), **setting)
    found = {mark: force(own) for mark, own in loads_of(rated).items()}
    assert sum(found.values()) == pytest.approx(4.8 * (5.0 * 6.65 - 1.2 * 2.0), rel=1e-9)
    # by hand: the back beam's trapezoid less the hole, and its strip, mitred at the corners
    hole = 1.0 * 1.5 + 0.5 * (0.5 + 1.0) / 2  # its corner at y = 1.5 m is cut off at 45 degrees
    strip = 0.7 * 6.0 + (0.5 * 0.5 / 2 + 0.2 * 0.5) + (0.15 * 0.15 / 2 + 0.55 * 0.15)
    assert found["BACK"] == pytest.approx(4.8 * (8.0 - hole + strip), rel=1e-6)


def test_floor_beyond_the_tip_of_a_cantilever_acts_with_its_arm(tmp_path: Path) -> None:
    """A strip of 2 m by 2.5 m on a beam of 2 m: as if the beam reached to its edge."""
    beam = MadeBeam(SECTION, 2000.0, "K", BARS, columns=(300.0, 0.0), origin=(0.0, 0.0, 3000.0))
    support = '[[supports]]\nbeams = ["K"]\nstart = "fixed"\nend = "free"\n'
    data = model(beam, slabs=[slab(0, -1000, 2500, 1000)])
    text = brief(support, COMPLETE, floor(area="3 kN/m2"))
    rated = rate_model(tmp_path, data, text)
    (span,) = rated.rated[0].gathered.subjects[0].spans
    fixed = span.span.start / 1e3
    found = state(answers(rated)["K"], "FlexureHogging")["demand"]
    moment = 1.25 * OWN * (2.0 - fixed) ** 2 / 2.0 + 1.5 * 6.0 * (2.5 - fixed) ** 2 / 2.0
    assert found == pytest.approx(moment * 1e6, rel=1e-6)
    assert force(loads_of(rated)["K"]) == pytest.approx(15.0)


FRAME = "[frame]\n"


def test_what_a_slab_brings_goes_down_through_girders_to_the_columns(tmp_path: Path) -> None:
    """A secondary beam in the middle hands half of its trapezoids to each girder; nothing is lost.

    Two panels of 3 m by 4 m on a frame of 6 m by 4 m: the beam between them carries
    a trapezoid of either, 2 x (4 - 1.5) x 1.5 x q in all, half at either end.
    """
    long = [lying("G1", 0, 0, 6000), lying("G2", 0, 4000, 6000)]
    short = [lying(mark, x, 0, 4000, 90.0, columns=(0, 0)) for mark, x in (("E1", 0), ("E2", 6000))]
    middle = MadeBeam(
        SECTION, 3700.0, "M", BARS, columns=(0, 0), origin=(3000.0, 150.0, 3000.0), direction=90.0
    )
    data = model(*long, *short, middle, slabs=(slab(0, 0, 6000, 4000),))
    text = brief(FRAME, floor()).replace('supports = ["pinned", "pinned"]\n', "")
    rated = rate_model(tmp_path, data, text)
    found = loads_of(rated)
    by_hand = 2.0 * (4.0 - 1.5) * 1.5 * 4.8
    assert sum(force([x for x in own if "floors" in x.origin]) for own in found.values()) == (
        pytest.approx(24.0 * 4.8, rel=1e-9)
    )
    assert force(found["M"]) == pytest.approx(by_hand, rel=1e-9)
    passed = [x for x in found["G1"] if "reaction of M" in x.origin]
    assert force(passed) == pytest.approx(by_hand / 2.0, rel=1e-9)
    framed = rated.rated[0].gathered.framed
    assert framed is not None
    rows = [row for row in framed.balance if row.case == "floor"]
    assert sum(row.applied for row in rows) / 1e3 == pytest.approx(24.0 * 4.8, rel=1e-9)
    assert all(abs(row.difference) <= 1e-9 * 24.0 * 4800.0 for row in rows)


# What is told ------------------------------------------------------------------------------------


def test_a_slab_that_no_beam_carries_is_told_with_its_load(tmp_path: Path) -> None:
    away = slab(10e3, 0, 12e3, 3000, "AWAY")
    rated = run(tmp_path, floor(), slabs=(SLAB, away))
    assert "floors[1]: 28.8 kN reaches no beam: AWAY (IfcSlab), 6 m2, 28.8 kN" in told(rated)
    assert "floors[1]: 2 slabs bring 115 kN to beams" in told(rated)


def test_where_nothing_is_carried_the_brief_is_refused_unless_optional(tmp_path: Path) -> None:
    away = slab(10e3, 0, 12e3, 3000, "AWAY")
    with pytest.raises(BriefError, match=r"floors\[1\] \(line \d+\): none of its slabs lies on a"):
        run(tmp_path / "a", floor(), slabs=(away,))
    rated = run(tmp_path / "b", floor("optional = true"), slabs=(away,))
    assert any("28.8 kN reaches no beam" in text for text in told(rated))


def test_slabs_are_chosen_by_mark_or_query(tmp_path: Path) -> None:
    two = (slab(0, 0, 4000, 3000, "S-1"), slab(0, 3000, 4000, 6000, "S-2"))
    for number, chosen in enumerate(('slabs = ["S-1"]', "where = 'IfcSlab, Name=S-1'")):
        rated = run(tmp_path / str(number), floor(chosen), slabs=two)
        assert sum(force(own) for own in loads_of(rated).values()) == pytest.approx(4.8 * 12.0)
    with pytest.raises(BriefError, match=r"floors\[1\].slabs .*'S-9' reaches no slab"):
        run(tmp_path / "none", floor('slabs = ["S-1", "S-9"]'), slabs=two)


@pytest.mark.parametrize(
    ("lines", "said"),
    [
        (['area = "4.8 kN"'], r"floors\[1\].area"),
        (['area = "-1 kPa"'], r"does not act downward"),
        (["self_weight = true"], r"self_weight .*is permanent, and cases.floor is imposed"),
        ([], r"states nothing"),
        (['area = "1 kPa"', 'direction = "X"'], r'direction .*belongs to span = "one way"'),
        (['area = "1 kPa"', 'span = "one way"', 'direction = "north"'], r"direction"),
        (['area = "1 kPa"', 'span = "both"'], r"span"),
        (['area = "1 kPa"', 'slabs = ["S-1"]', 'where = "IfcSlab"'], r"both slabs and where"),
        (['area = "1 kPa"', 'beams = ["B-1"]'], r"unknown key 'beams'"),
        (['area = "1 kPa"', 'slabs = [" "]'], r"holds an empty mark"),
    ],
)
def test_what_an_entry_may_not_say(tmp_path: Path, lines: list[str], said: str) -> None:
    with pytest.raises(BriefError, match=said):
        run(tmp_path, floor(*lines, area=""))


def test_an_unknown_case_is_refused(tmp_path: Path) -> None:
    with pytest.raises(BriefError, match=r"floors\[1\].case .*unknown case 'flor'"):
        run(tmp_path, floor(case="flor"))


def test_the_weight_of_a_flange_is_held_where_floors_lay_it(tmp_path: Path) -> None:
    flanges = COMPLETE.replace("loads_complete = true", "slab_flange = true")
    text = brief(BEARINGS, PERMANENT, flanges, floor())
    data = model(*PANEL, slabs=(SLAB,))
    weighed = text + floor("self_weight = true", case="slab", area="")

    def reasons(written: str, folder: str) -> str:
        return str(answers(rate_model(tmp_path / folder, data, written))["SHORT"]["reasons"])

    assert "weight of slab not included" in reasons(text, "without")
    assert "weight of slab" not in reasons(weighed, "with")


def test_a_brief_without_floors_reads_none(tmp_path: Path) -> None:
    rated = run(tmp_path, load("floor", 'line = "3 kN/m"'))
    assert rated.rated[0].read.model.floors == Floors()


def reasons_of(rated: Run) -> dict[str, str]:
    return {mark: str(each["reasons"]) for mark, each in answers(rated).items()}


def only_floor(folder: Path, *beams: MadeBeam, slabs: Sequence[MadeSlab] = (SLAB,)) -> Run:
    return rate_model(folder, model(*beams, slabs=slabs), brief(BEARINGS, floor()))


def test_slab_in_the_lower_half_of_a_beam_hangs_from_it(tmp_path: Path) -> None:
    low = MadeSlab(SLAB.ring, 3000.0, 150.0)
    rated = only_floor(tmp_path, *PANEL, slabs=(low,))
    assert {one.face for own in loads_of(rated).values() for one in own} == {"bottom"}
    assert "hung load" in reasons_of(rated)["SHORT"]


def test_a_beam_a_little_below_the_slab_may_carry_it_and_is_not_adequate(tmp_path: Path) -> None:
    short, far, *sides = PANEL
    below = replace(far, origin=(*far.origin[:2], 2960.0))
    rated = only_floor(tmp_path, short, below, *sides, slabs=(slab(0, 0, 4000, 6000),))
    assert "floor not included" not in reasons_of(rated)["FAR"]  # the slab is deeper than that
    above = MadeSlab(SLAB.ring, 3600.0, 150.0)
    rated = only_floor(tmp_path, short, below, *sides, slabs=(above,))
    assert "S-1 (IfcSlab): it lies 40.0 mm above the beam" in reasons_of(rated)["FAR"]
    assert force(loads_of(rated)["FAR"]) == 0.0
    assert "floor not included" not in reasons_of(rated)["SHORT"]


def test_slab_between_the_faces_of_beams_leaves_their_own_width_out(tmp_path: Path) -> None:
    rated = run(tmp_path, floor(), slabs=(slab(150, 150, 3850, 5850),))
    (text,) = [text for text in told(rated) if "faces" in text]
    assert text.endswith(
        "own width: SHORT (IfcBeam), FAR (IfcBeam), LONG (IfcBeam), BACK (IfcBeam)"
    )
    assert not any("faces" in text for text in told(run(tmp_path, floor())))


# Reading -----------------------------------------------------------------------------------------


def made(building: Building, *items: Any, **named: Any) -> Any:
    profile = building.rectangle(300.0, 600.0)
    building.beam(building.extrusion(profile, 6000.0, z=(1, 0, 0), x=(0, 1, 0)))
    ring = building.outline((0, 0), (4000, 0), (4000, 2500), (0, 2500))
    items = items or (building.extrusion(ring, 200.0, at=(0.0, 0.0, 3000.0)),)
    return building.member("IfcSlab", *items, **named)


def only(building: Building) -> FloorSlab:
    (found,) = read_model(building.open(), {}, None, Choice(floors=True)).floors.slabs
    return found


def test_an_opening_that_turns_back_is_taken_out_as_it_is_drawn() -> None:
    building = Building()
    product = made(building, Name="S-1")
    ell = building.outline((500, 500), (1500, 500), (1500, 900), (900, 900), (900, 1500),
                           (500, 1500))  # fmt: skip
    building.void(product, building.extrusion(ell, 400.0, at=(0.0, 0.0, 2900.0)))
    (opening,) = only(building).openings
    assert len(opening[0]) == 6


def test_a_recess_takes_nothing_out() -> None:
    building = Building()
    product = made(building)
    ring = building.outline((500, 500), (1500, 500), (1500, 900), (500, 900))
    building.void(product, building.extrusion(ring, 100.0, at=(0.0, 0.0, 3100.0)))
    assert only(building).openings == ()


def test_an_outline_that_crosses_itself_is_no_slab_to_share_out() -> None:
    building = Building()
    bow = building.outline((0, 0), (4000, 2500), (4000, 0), (0, 2500))
    made(building, building.extrusion(bow, 200.0, at=(0.0, 0.0, 3000.0)))
    assert only(building).unread


def faceted(building: Building, ring: Sequence[tuple[float, float]], top: float = 3200.0) -> Any:
    count = len(ring)
    corners = [(x, y, z) for z in (3000.0, top) for x, y in ring]
    sides = [(n, (n + 1) % count, count + (n + 1) % count, count + n) for n in range(count)]
    faces = [tuple(range(count))[::-1], tuple(range(count, 2 * count)), *sides]
    return Bodies(building.file, 1.0).brep(corners, faces)


def test_a_convex_plate_of_flat_faces_is_read() -> None:
    building = Building()
    made(building, faceted(building, [(0, 0), (4000, 0), (4500, 2500), (0, 2500)]))
    (plate,) = only(building).plates
    assert (plate.bottom, plate.top) == pytest.approx((3000, 3200))
    assert Polygon(plate.rings[0]).area == pytest.approx(2500 * 4250)


def test_a_plate_of_flat_faces_that_turns_back_is_not() -> None:
    ell = [(0, 0), (4000, 0), (4000, 1000), (1000, 1000), (1000, 2500), (0, 2500)]
    building = Building()
    made(building, faceted(building, ell))
    assert "no level plate" in only(building).unread


def test_a_slab_that_is_no_level_plate_is_told() -> None:
    building = Building()
    ring = building.outline((0, 0), (4000, 0), (4000, 200), (0, 200))
    made(building, building.extrusion(ring, 2500.0, z=(0, -1, 0.1), x=(1, 0, 0)), Name="S-9")
    found = only(building)
    assert (found.plates, found.told) == ((), "S-9 (IfcSlab)")
    assert "no level plate" in found.unread


def test_beams_near_a_slab_that_cannot_be_read_are_not_called_adequate(tmp_path: Path) -> None:
    """The slab's second item is none that is understood: all of it is left out, and said so."""
    data = model(*PANEL, slabs=(SLAB, slab(0, 6000, 4000, 9000, "S-2")))
    text = data.decode()
    # S-2 is laid on its side: its placement's axis is tipped.
    number = re.findall(r"#(\d+)=IFCSLAB\([^)]*'S-2'[^#]*#(\d+),#(\d+)", text)
    shape = number[0][2]
    representation = re.search(rf"#{shape}=IFCPRODUCTDEFINITIONSHAPE\([^#]*#(\d+)|#{shape}="
                               rf"IFCPRODUCTDEFINITIONSHAPE\(\$,\$,\(#(\d+)", text)  # fmt: skip
    assert representation
    item = re.search(
        rf"#{representation[1] or representation[2]}=IFCSHAPEREPRESENTATION\(.*?\(#(\d+)\)", text
    )
    assert item
    solid = re.search(rf"#{item[1]}=IFCEXTRUDEDAREASOLID\((#\d+),(#\d+),(#\d+),", text)
    assert solid
    way = re.search(rf"{solid[3]}=IFCDIRECTION\(.*?\);", text)
    assert way
    tipped = text.replace(way[0], f"{solid[3]}=IFCDIRECTION((0.2,0.,0.9797958971132712));")
    rated = rate_model(tmp_path, tipped.encode(), brief(BEARINGS, floor()))
    reasons = {mark: str(each["reasons"]) for mark, each in answers(rated).items()}
    assert "floor not included: S-2 (IfcSlab)" in reasons["FAR"]
    assert "floor not included" not in reasons["SHORT"]
    assert any("S-2 (IfcSlab) is not laid on beams" in text for text in told(rated))


@pytest.mark.parametrize(("stated", "walls"), [(None, 0), (True, 1), (False, 0)])
def test_walls_carry_where_the_model_calls_them_load_bearing(
    stated: bool | None, walls: int
) -> None:
    building = Building()
    made(building)
    ring = building.outline((0, 2400), (4000, 2400), (4000, 2600), (0, 2600))
    wall = building.member("IfcWall", building.extrusion(ring, 3000.0), Name="W")
    if stated is not None:
        building.give_set(
            wall, "Pset_WallCommon", LoadBearing=building.entity("IfcBoolean", stated)
        )
    found = read_model(building.open(), {}, None, Choice(floors=True)).floors
    assert len(found.load_bearing) == walls
