"""The drawings: to scale, where the model says, with what was read."""

from __future__ import annotations

import math
import re
from dataclasses import replace
from xml.etree import ElementTree

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.beam import SELF, Anchor, Axis, Outline, RatedSpan, Run, Span, Support
from ifccheck.publish.drawings import diagram, section
from ifccheck.publish.elevation import LEFT, RIGHT, WIDTH, Frame, elevation
from ifccheck.publish.plan import framing_plans
from ifccheck.publish.plan_labels import Labels, Stroke
from ifccheck.publish.svg import thinned
from ifccheck.publish.words import utilisation_words
from ifccheck.sheet import Diagram, Sheet
from tests.reports_made_up import made_up_report, rectangle, tee

REPORT = made_up_report()
ROWS = {beam.key: i for i, beam in enumerate(REPORT.model.beams)}
SPAN_OF_STRIP = WIDTH - LEFT - RIGHT


def sheet_of(mark: str) -> Sheet:
    return REPORT.sheet(next(b.key for b in REPORT.model.beams if b.mark == mark))


def of_class(svg: str, kind: str) -> list[ElementTree.Element]:
    root = ElementTree.fromstring(svg)
    return [e for e in root.iter() if kind in (e.get("class") or "").split()]


def numbers(data: str) -> list[tuple[float, float]]:
    found = [float(n) for n in re.findall(r"-?\d+(?:\.\d+)?", data)]
    return list(zip(found[::2], found[1::2], strict=True))


def texts(svg: str) -> list[str]:
    return [e.text or "" for e in ElementTree.fromstring(svg).iter() if e.tag == "text"]


def test_an_elevation_is_to_scale() -> None:
    sheet = sheet_of("B-1000")
    svg = elevation(sheet)
    (body,) = of_class(svg, "concrete")
    corners = numbers(body.get("d") or "")
    wide = max(x for x, _ in corners) - min(x for x, _ in corners)
    high = max(y for _, y in corners) - min(y for _, y in corners)
    assert wide == pytest.approx(SPAN_OF_STRIP, abs=0.2)
    assert high / wide == pytest.approx(600.0 / sheet.beam.length, rel=5e-3)
    assert "to scale" in texts(svg)


def test_a_slender_beam_says_how_much_its_heights_are_stretched() -> None:
    sheet = sheet_of("B-1000")
    axis = sheet.beam.axis
    assert axis
    run = replace(sheet.beam.runs[0], end=20_000.0)
    beam = replace(sheet.beam, axis=replace(axis, length=20_000.0), runs=(run,))
    svg = elevation(replace(sheet, beam=beam, spans=()))
    stretch = Frame(20_000.0, 600.0).exaggeration
    assert stretch > 1
    assert f"heights drawn {stretch} times the lengths" in texts(svg)
    (body,) = of_class(svg, "concrete")
    ys = [y for _, y in numbers(body.get("d") or "")]
    assert max(ys) - min(ys) == pytest.approx(600 * stretch * SPAN_OF_STRIP / 20_000, abs=0.2)


def test_bars_lie_where_they_are_and_show_how_they_end() -> None:
    sheet = sheet_of("B-1000")
    svg = elevation(sheet)
    length = sheet.beam.length
    soffit = max(y for _, y in numbers(of_class(svg, "concrete")[0].get("d") or ""))
    along = SPAN_OF_STRIP / length
    drawn = of_class(svg, "bar")
    assert len(drawn) == len(sheet.bars)
    for bars, element in zip(sheet.bars, drawn, strict=True):
        (x0, y0), (x1, _), *hooks = numbers(element.get("d") or "")
        assert x0 == pytest.approx(LEFT + bars.start * along, abs=0.1)
        assert x1 == pytest.approx(LEFT + bars.end * along, abs=0.1)
        assert soffit - y0 == pytest.approx(bars.z * along, abs=0.15)
        assert bool(hooks) is (bars.start_anchor is Anchor.HOOK)
    assert {"3-25M", "2-20M", "2-15M"} <= set(texts(svg))


def test_stirrups_are_drawn_at_their_spacing() -> None:
    sheet = sheet_of("B-1000")
    along = SPAN_OF_STRIP / sheet.beam.length
    for stirrups, element in zip(
        sheet.stirrups, of_class(elevation(sheet), "stirrup"), strict=True
    ):
        places = [float(x) for x in re.findall(r"M(-?[\d.]+)", element.get("d") or "")]
        assert len(places) == int((stirrups.end - stirrups.start) / stirrups.spacing)
        steps = np.diff(places)
        assert steps == pytest.approx(stirrups.spacing * along, abs=0.11)


def test_a_downward_load_points_down_above_and_below_the_beam() -> None:
    svg = elevation(sheet_of("B-1000"))
    heads = [numbers(e.get("d") or "") for e in of_class(svg, "head")]
    assert len(heads) == 2
    for tip, *back in heads:
        assert all(y < tip[1] for _, y in back)


@pytest.mark.parametrize("moment", [5e6, -5e6])
def test_a_moment_load_turns_as_it_acts(moment: float) -> None:
    """A positive moment turns anticlockwise with x to the right and z up (``beam.Load``)."""
    sheet = sheet_of("B-1000")
    load = sheet.loads[-1]._replace(kind="moment", values=(moment, 0.0), face="top")
    (drawn,) = of_class(elevation(replace(sheet, loads=(load,))), "moment")
    data = drawn.get("d") or ""
    (arc,) = re.findall(r"^M(\S+) (\S+)A11 11 0 1 ([01]) (\S+) (\S+)l", data)
    x0, y0, sweep, x1, y1 = map(float, arc)
    assert (sweep == 1.0) is (moment < 0.0), "SVG draws an arc of sweep 1 clockwise"
    centre = (x1, y0)
    before = math.atan2(centre[1] - y0, x0 - centre[0])
    after = math.atan2(centre[1] - y1, x1 - centre[0])
    turned = (after - before) % math.tau if moment > 0.0 else (before - after) % math.tau
    assert turned == pytest.approx(1.5 * math.pi), "three quarters of a turn, y of SVG downward"


def test_every_support_pair_can_be_drawn() -> None:
    svg = elevation(sheet_of("W-3"))
    assert len(of_class(svg, "support")) == 2
    assert len(of_class(svg, "fixed")) == 1


def test_a_beam_whose_body_was_not_read_has_no_drawings() -> None:
    sheet = sheet_of("X-9")
    assert elevation(sheet) == ""
    assert section(sheet) == ""


@pytest.mark.parametrize("outline", [rectangle(350, 600), tee(300, 600, 1100, 150)], ids=str)
def test_a_section_is_to_scale_with_its_bars(outline: object) -> None:
    sheet = replace(sheet_of("B-1000"), section=outline)  # type: ignore[arg-type]
    svg = section(sheet)
    ring = sheet.section.rings[0] if sheet.section else ()
    width = max(y for y, _ in ring) - min(y for y, _ in ring)
    drawn = numbers(of_class(svg, "concrete")[0].get("d") or "")
    scale = (max(x for x, _ in drawn) - min(x for x, _ in drawn)) / width
    foot = max(y for _, y in drawn)
    here = [b for b in sheet.bars if b.start <= sheet.section_x <= b.end]
    circles = of_class(svg, "steel")
    assert len(circles) == sum(bars.count for bars in here)
    for bars, z in ((b, b.z) for b in here for _ in b.ys):
        assert any(
            foot - float(c.get("cy") or 0) == pytest.approx(z * scale, abs=0.15)
            and float(c.get("r") or 0)
            == pytest.approx(max(bars.diameter / 2 * scale, 1.6), abs=0.06)
            for c in circles
        )


def test_a_section_shows_only_the_bars_that_are_there() -> None:
    sheet = replace(sheet_of("B-1000"), section_x=100.0)
    assert "2-20M" not in texts(section(sheet))
    assert "2-20M" in texts(section(sheet_of("B-1000")))


def test_left_is_left_seen_from_the_start() -> None:
    sheet = sheet_of("B-1000")
    bars = replace(sheet.bars[0], count=1, ys=(100.0,))
    svg = section(replace(sheet, bars=(bars,)))
    drawn = numbers(of_class(svg, "concrete")[0].get("d") or "")
    middle = (max(x for x, _ in drawn) + min(x for x, _ in drawn)) / 2
    (circle,) = of_class(svg, "steel")
    assert float(circle.get("cx") or 0) < middle


def made_up_diagram(**changes: object) -> Diagram:
    x = np.linspace(0.0, 6000.0, 41)
    moment = 100.0 * 4 * (x / 6000) * (1 - x / 6000)
    given = Diagram(
        "Moment", "kN*m", x, moment, 0.4 * moment, np.full_like(x, 125.0), np.full_like(x, -60.0),
        3000.0,
    )  # fmt: skip
    return replace(given, **changes)  # type: ignore[arg-type]


def test_demand_and_resistance_share_a_scale() -> None:
    svg = diagram(made_up_diagram(), 6000.0)
    (demand,) = of_class(svg, "at-demand")
    (resistance,) = of_class(svg, "at-resistance")
    axis = numbers(of_class(svg, "axis")[0].get("d") or "")[0][1]
    up = [axis - float(e.get("cy") or 0) for e in (demand, resistance)]
    assert up[0] / up[1] == pytest.approx(100.0 / 125.0, rel=5e-3)
    assert float(demand.get("cx") or 0) == pytest.approx(LEFT + SPAN_OF_STRIP / 2, abs=0.1)
    assert "x = 3.00 m" in texts(svg)


def test_a_resistance_that_is_not_known_is_left_out() -> None:
    resistance = np.full(41, 125.0)
    resistance[10:20] = math.nan
    svg = diagram(made_up_diagram(resistance_high=resistance), 6000.0)
    lines = of_class(svg, "resistance")
    assert sum((e.get("d") or "").count("M") for e in lines) == 3
    assert "nan" not in svg


def test_a_resistance_far_above_says_that_it_is_cut() -> None:
    svg = diagram(made_up_diagram(resistance_high=np.full(41, 9000.0)), 6000.0)
    assert "resistance beyond the drawing is not shown" in texts(svg)
    assert "inf" not in diagram(made_up_diagram(resistance_high=np.full(41, math.inf)), 6000.0)


def test_a_diagram_without_demand_can_be_drawn() -> None:
    nothing = np.zeros(41)
    svg = diagram(
        made_up_diagram(demand_high=nothing, demand_low=nothing, governing_x=math.nan), 6000.0
    )
    ElementTree.fromstring(svg)
    assert of_class(svg, "governs") == []


@given(
    st.lists(
        st.tuples(st.floats(0, 700), st.floats(-100, 100)), min_size=0, max_size=60, unique=True
    )
)
def test_a_thinned_line_stays_where_the_line_was(places: list[tuple[float, float]]) -> None:
    places.sort()
    kept = thinned(places)
    assert set(kept) <= set(places)
    assert kept[:1] == places[:1]
    assert kept[-1:] == places[-1:]
    curve = [(float(x), 60 * math.sin(x / 90)) for x in range(0, 690, 6)]
    few = thinned(curve)
    xs, ys = zip(*few, strict=True)
    drawn = np.interp([x for x, _ in curve], xs, ys)
    assert np.abs(drawn - [y for _, y in curve]).max() < 0.5


def plan_of(storey: str) -> str:
    plans = framing_plans(REPORT.model, REPORT.ratings, ROWS)
    return next(plan.svg for plan in plans if plan.storey == storey)


def along(svg: str, key: str) -> tuple[float, float]:
    """The beam's direction and length on the drawing, from its first run's outline."""
    for link in ElementTree.fromstring(svg).iter("a"):
        if link.get("data-row") == str(ROWS[key]):
            body = next(e for e in link.iter() if "body" in (e.get("class") or ""))
            (x0, y0), (x1, y1), *_ = numbers(body.get("d") or "")
            return x1 - x0, y0 - y1
    raise AssertionError(key)


def test_a_plan_is_true_in_length_and_direction_with_north_up() -> None:
    svg = plan_of("Level 1")
    scales = []
    for beam in REPORT.model.beams:
        if beam.storey != "Level 1" or beam.axis is None:
            continue
        east, north = along(svg, beam.key)
        turned = math.degrees(math.atan2(north, east))
        wanted = math.degrees(math.atan2(beam.axis.x[1], beam.axis.x[0]))
        assert turned == pytest.approx(wanted, abs=0.1)
        scales.append(math.hypot(east, north) / beam.length)
    assert scales == pytest.approx([scales[0]] * len(scales), rel=2e-3)


def test_a_sloped_beam_is_as_long_in_plan_as_its_projection() -> None:
    svg = plan_of("Level 2")
    ramp, level = (next(b for b in REPORT.model.beams if b.mark == m) for m in ("R-1", "B-2000"))
    ratio = math.hypot(*along(svg, ramp.key)) / math.hypot(*along(svg, level.key))
    assert ratio == pytest.approx(4000 * math.cos(0.22) / level.length, rel=2e-3)


def test_falling_short_and_not_rated_can_be_told_without_colour() -> None:
    svg = plan_of("Level 1")
    for link in ElementTree.fromstring(svg).iter("a"):
        key = next(k for k, row in ROWS.items() if str(row) == link.get("data-row"))
        kinds = {k for e in link.iter() for k in (e.get("class") or "").split()}
        verdict = str(REPORT.ratings[key].verdict)
        assert ("over" in kinds and "dashes" in kinds) is (verdict == "falls short")
        assert ("none" in kinds) is (verdict == "not rated")
        assert "start" in kinds
        title = link.find("title")
        assert title is not None
        assert verdict in (title.text or "")


def test_a_beam_without_a_place_is_named_beside_the_plan() -> None:
    plans = framing_plans(REPORT.model, REPORT.ratings, ROWS)
    assert next(p for p in plans if p.storey == "Level 2").not_drawn == ("X-9",)
    assert [p.storey for p in plans] == ["Level 1", "Level 2", "Roof"]


def test_a_building_far_from_the_origin_is_drawn_the_same() -> None:
    def moved(axis: Axis | None) -> Axis | None:
        return axis and replace(
            axis, origin=(axis.origin[0] + 5e8, axis.origin[1] - 3e8, axis.origin[2])
        )

    beams = tuple(replace(b, axis=moved(b.axis)) for b in REPORT.model.beams)
    here = framing_plans(replace(REPORT.model, members=()), REPORT.ratings, ROWS)
    there = framing_plans(replace(REPORT.model, members=(), beams=beams), REPORT.ratings, ROWS)
    for near, far in zip(here, there, strict=True):
        near_places, far_places = (
            [float(n) for n in re.findall(r"-?\d+\.?\d*", p.svg)] for p in (near, far)
        )
        assert far_places == pytest.approx(near_places, abs=0.11)


def letters(svg: str) -> list[tuple[str, list[tuple[float, float]]]]:
    """Every mark of a plan with places along the middle of its letters."""
    found = []
    for text in of_class(svg, "mark"):
        words = text.text or ""
        turn = math.radians(
            float(re.findall(r"rotate\((-?[\d.]+)", text.get("transform") or "rotate(0")[0])
        )
        x, y = (float(text.get(name) or 0) for name in "xy")
        x, y = x + 3.0 * math.sin(turn), y - 3.0 * math.cos(turn)
        half = len(words) * 5.0 / 2.0
        steps = [half * i / 10.0 for i in range(-10, 11)]
        found.append((words, [(x + s * math.cos(turn), y + s * math.sin(turn)) for s in steps]))
    return found


def test_no_mark_is_printed_over_another() -> None:
    report = made_up_report(bays=14, rows=6)
    rows = {beam.key: i for i, beam in enumerate(report.model.beams)}
    for plan in framing_plans(report.model, report.ratings, rows):
        found = letters(plan.svg)
        assert len(found) > 0.5 * plan.beams
        for i, (_, places) in enumerate(found):
            for _, others in found[i + 1 :]:
                if math.dist(places[10], others[10]) < 120.0:
                    assert min(math.dist(a, b) for a in places for b in others) > 5.0


def test_the_broken_line_of_an_edge_beam_lies_on_its_stem() -> None:
    ring = ((-600.0, 0.0), (-300.0, 0.0), (-300.0, 450.0), (600.0, 450.0), (600.0, 600.0),
            (-600.0, 600.0))  # fmt: skip
    short = next(r for r in REPORT.ratings.values() if str(r.verdict) == "falls short")
    beam = REPORT.beam(short.beam)
    edge = replace(beam, runs=(replace(beam.runs[0], outline=Outline((ring,), "L")),))
    model = replace(REPORT.model, beams=(edge,), members=())
    (plan,) = framing_plans(model, REPORT.ratings, {edge.key: 0})
    (body,) = of_class(plan.svg, "body")
    (dashes,) = of_class(plan.svg, "dashes")
    across = [y for _, y in numbers(body.get("d") or "")]
    (_, y), *_ = numbers(dashes.get("d") or "")
    assert y == pytest.approx((min(across) + max(across)) / 2.0, abs=0.1)


def test_a_plan_tells_how_far_every_beam_falls_short() -> None:
    for storey in ("Level 1", "Level 2", "Roof"):
        plan = plan_of(storey)
        shown = {word for text, _ in letters(plan) for word in text.split("  ")}
        for beam in (b for b in REPORT.model.beams if b.storey == storey and b.axis):
            rating = REPORT.ratings[beam.key]
            if rating.utilisation > 1.0:
                assert {beam.mark, utilisation_words(rating.utilisation)} <= shown


def test_a_plate_out_of_level_is_drawn_in_its_whole_width() -> None:
    """Not as a line along its lower edge: 4 m wide, 0.2 m thick, with a fall of 1 in 20."""
    beam = next(b for b in REPORT.model.beams if b.mark == "B-1000")
    fall = ((-2000.0, 0.0), (2000.0, 200.0), (2000.0, 400.0), (-2000.0, 200.0))
    plate = replace(beam, runs=(replace(beam.runs[0], outline=Outline((fall,))),))
    model = replace(REPORT.model, beams=(plate,), members=())
    (plan,) = framing_plans(model, REPORT.ratings, {plate.key: 0})
    (body,) = of_class(plan.svg, "body")
    xs, ys = zip(*numbers(body.get("d") or ""), strict=True)
    wide, long = max(ys) - min(ys), max(xs) - min(xs)
    assert wide / long == pytest.approx(4000.0 / beam.length, rel=1e-3)
    assert of_class(plan.svg, "flange") == []


def test_a_text_beside_a_beam_is_the_first_that_finds_room() -> None:
    beam = Stroke((0.0, 100.0), (60.0, 100.0), 3.0)
    labels = Labels([beam])
    labels.set(beam, "B-1", "", always=False)
    added = labels.add(beam, ["300 x 500, 35 MPa, bars", "300 x 500", "35"])
    assert re.findall(r">([^<]+)</text>", added) == ["300 x 500"]
    assert labels.add(beam, ["300 x 500"]) == ""


def test_mark_and_utilisation_part_where_no_room_for_both_is_on_one_side() -> None:
    """Crossing beams leave room for six letters at a time: too few for both, enough for each."""
    girder = Stroke((0.0, 100.0), (200.0, 100.0), 3.0)
    crossing = [Stroke((x, 0.0), (x, 200.0), 3.0) for x in (0.0, 50.0, 100.0, 150.0, 200.0)]
    set_ = Labels([girder, *crossing]).set(girder, "G-101", "1.66", always=False)
    assert re.findall(r">([^<]+)</text>", set_) == ["G-101", "1.66"]
    narrow = [Stroke((float(x), 0.0), (float(x), 200.0), 3.0) for x in range(0, 201, 20)]
    alone = Labels([girder, *narrow]).set(girder, "G-101", "0.66", always=False)
    assert re.findall(r">([^<]+)</text>", alone) == ["G-101"]
    both = Labels([girder, *narrow]).set(girder, "G-101", "1.66", always=True)
    assert re.findall(r">([^<]+)</text>", both) == ["G-101  1.66"]


# Sections that vary -------------------------------------------------------------------------------


def varying_sheet(*runs: Run) -> Sheet:
    sheet = sheet_of("B-1000")
    assert sheet.beam.axis
    axis = replace(sheet.beam.axis, length=runs[-1].end)
    support = Support("pinned", 200.0, "test")
    length = runs[-1].end
    span = Span(100.0, length - 100.0, support, support)
    spans = (RatedSpan(span, (200.0, length - 200.0), (True, True)),)
    return replace(sheet, beam=replace(sheet.beam, axis=axis, runs=runs), spans=spans)


def at(low: float, high: float) -> Outline:
    return Outline((((-150.0, low), (150.0, low), (150.0, high), (-150.0, high)),))


def test_tapers_and_steps_are_drawn_to_scale() -> None:
    svg = elevation(
        varying_sheet(
            Run(0.0, 400.0, at(400, 800)), Run(400.0, 3000.0, at(0, 800)),
            Run(3000.0, 6000.0, at(0, 800), at(300, 800)),
        )
    )  # fmt: skip
    along = SPAN_OF_STRIP / 6000.0
    corners = numbers(of_class(svg, "concrete")[0].get("d") or "")
    foot = max(y for _, y in corners)
    places = {(round((x - LEFT) / along, -1), round((foot - y) / along, -1)) for x, y in corners}
    assert places == {
        (0, 400), (0, 800), (400, 400), (400, 800), (400, 0), (3000, 0), (3000, 800), (6000, 300),
        (6000, 800),
    }  # fmt: skip


def test_a_support_stands_under_the_soffit_that_the_beam_has_there() -> None:
    svg = elevation(varying_sheet(Run(0.0, 400.0, at(400, 800)), Run(400.0, 6000.0, at(0, 800))))
    along = SPAN_OF_STRIP / 6000.0
    first, last = (numbers(e.get("d") or "")[0][1] for e in of_class(svg, "bearing"))
    assert last - first == pytest.approx(400.0 * along, abs=0.15)


def test_what_is_not_rated_beside_a_step_is_hatched() -> None:
    svg = elevation(varying_sheet(Run(0.0, 2000.0, at(400, 800)), Run(2000.0, 6000.0, at(0, 800))))
    (hatched,) = of_class(svg, "unrated")
    xs = [x for x, _ in numbers(hatched.get("d") or "")]
    along = SPAN_OF_STRIP / 6000.0
    assert [min(xs), max(xs)] == pytest.approx(
        [LEFT + 1200.0 * along, LEFT + 2800.0 * along], abs=0.15
    )
    assert of_class(elevation(varying_sheet(Run(0.0, 6000.0, at(0, 800)))), "unrated") == []


def test_self_weight_in_several_parts_is_one_band() -> None:
    sheet = sheet_of("B-1000")
    own = next(load for load in sheet.loads if load.case == SELF)
    half = sheet.beam.length / 2.0
    parts = (
        own._replace(end=half, values=(3.0, 4.0)), own._replace(start=half, values=(4.0, 5.0)),
    )  # fmt: skip
    others = tuple(load for load in sheet.loads if load.case != SELF)
    one, two = (elevation(replace(sheet, loads=(*some, *others))) for some in ((own,), parts))
    assert ElementTree.fromstring(one).get("viewBox") == ElementTree.fromstring(two).get("viewBox")
    assert "self: 3.00 kN/m to 5.00 kN/m" in texts(two)


def test_bars_along_a_taper_are_named_once() -> None:
    sheet = varying_sheet(Run(0.0, 6000.0, at(0, 800), at(300, 800)))
    bar = replace(sheet.bars[0], start=0.0, end=3000.0, z=100.0)
    pieces = (bar, replace(bar, start=3000.0, end=6000.0, z=250.0))
    svg = elevation(replace(sheet, bars=pieces))
    assert len(of_class(svg, "bar")) == 1
    assert len(of_class(svg, "bar-name")) == 1


def test_a_bearing_is_drawn_to_the_face_that_is_calculated_with() -> None:
    """A bearing of 400 mm where no member is modelled lies from the beam's end inward, however
    far out the span begins; one of 300 mm before the end's face lies beyond it."""
    sheet = varying_sheet(Run(0.0, 6000.0, at(0, 800)))
    pinned = [Support("pinned", width, "test") for width in (400.0, 300.0)]
    span = Span(0.0, 6150.0, *pinned)
    svg = elevation(replace(sheet, spans=(RatedSpan(span, (400.0, 6000.0), (True, True)),)))
    along = SPAN_OF_STRIP / 6000.0
    first, last = (
        [x for x, _ in numbers(each.get("d") or "")] for each in of_class(svg, "bearing")
    )
    assert sorted(first) == pytest.approx([LEFT, LEFT + 400.0 * along], abs=0.15)
    assert min(last) == pytest.approx(LEFT + 6000.0 * along, abs=0.15)
