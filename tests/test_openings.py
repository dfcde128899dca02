"""Openings in beams: what is left of section and shear, by first principles."""

from __future__ import annotations

import math
import random
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from shapely import Polygon, box
from shapely.ops import unary_union

from ifccheck.beam import Opening, Outline, RatedBody, Run, ShearLoss, Stirrups, Verdict
from ifccheck.frame.figures import figure_of
from ifccheck.frame.net_outlines import net_runs
from ifccheck.frame.openings import GROSS_WEIGHT, NET_WEIGHT, Net, net_of
from ifccheck.frame.spans import Standing
from ifccheck.mechanics.overhangs import overhangs
from ifccheck.mechanics.width_profile import gaps_of, least_width, strips_of
from ifccheck.rating.shape import shape_reasons
from ifccheck.rating.subject import Subject
from ifccheck.units import show
from tests.made_subjects import STANDARD, line, point, rated, subject

LENGTH, DEPTH, WIDTH = 6000.0, 600.0, 300.0
TEE = Outline((
    ((-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-600, 600), (-600, 450),
     (-150, 450)),
))  # fmt: skip


def hole(
    start: float = 2000.0, length: float = 150.0, bottom: float = 225.0, height: float = 150.0,
    right: float = -150.0, left: float = 150.0,
) -> Opening:  # fmt: skip
    return Opening(start, start + length, right, left, bottom, bottom + height, "rectangle", "duct")


def with_openings(made: Subject, *openings: Opening, outline: Outline | None = None) -> Subject:
    """The subject as the program rates it with openings."""
    runs = (Run(0.0, LENGTH, outline),) if outline else made.beam.runs
    beam = replace(made.beam, openings=openings, runs=runs)
    net = judged(made, beam)
    return replace(
        made, beam=beam, body=net.body, reasons=(*made.reasons, *net.reasons),
        remarks=(*made.remarks, *net.remarks),
    )  # fmt: skip


def judged(made: Subject, beam) -> Net:
    standing = Standing(made.spans, (0.0, 0.0), "test")
    return net_of(beam, standing, made.loads, made)


def texts(made: Subject) -> str:
    return "; ".join(reason.text for reason in made.reasons)


# Sections ----------------------------------------------------------------------------------------


@settings(deadline=None, max_examples=60)
@given(
    st.lists(
        st.tuples(
            st.floats(-700, 500), st.floats(20, 900), st.floats(-50, 500), st.floats(20, 500)
        ),
        min_size=1,
        max_size=4,
    )
)
def test_the_net_outline_is_what_shapely_leaves_less_flange_beyond(boxes) -> None:
    openings = [
        Opening(1000, 2000, right, right + wide, bottom, bottom + high, "other")
        for right, wide, bottom, high in boxes
    ]
    beam = replace(
        subject().beam, runs=(Run(0.0, LENGTH, TEE),), openings=tuple(openings)
    )  # fmt: skip
    runs, gone = net_runs(beam.runs, beam.openings)
    left = figure_of(TEE).difference(
        unary_union([box(o.right, o.bottom, o.left, o.top) for o in openings])
    )
    if gone:
        assert left.intersection(box(-150, 0, 150, 600)).area < 1e-3
        return
    (middle,) = [run for run in runs if run.start == 1000.0]
    assert {run.start for run in runs} <= {0.0, 1000.0, 2000.0}
    net = figure_of(middle.outline)
    assert net.difference(left).area == pytest.approx(0.0, abs=1.0)
    web = box(-150.1, -1, 150.1, 601)
    assert left.difference(net).intersection(web).area == pytest.approx(0.0, abs=1.0)
    strips = strips_of(middle.outline.rings)
    area = ((strips[:, 1] - strips[:, 0]) * (strips[:, 2] + strips[:, 3]) / 2).sum()
    assert area == pytest.approx(net.area, abs=1.0)


def test_an_opening_through_the_web_divides_the_section() -> None:
    made = with_openings(subject(), hole())
    before, within, after = made.runs
    assert (within.start, within.end) == (2000.0, 2150.0)
    assert before.outline == after.outline == made.beam.runs[0].outline
    assert before.whole is None
    assert within.whole == before.outline
    strips = strips_of(within.outline.rings)
    assert gaps_of(strips[None]) == pytest.approx([150.0])
    whole, none = np.array([0.0]), np.array([600.0])
    assert least_width(strips[None], whole, none) == pytest.approx([300.0])


@pytest.mark.parametrize(
    ("opening", "left", "right", "width"),
    [
        (hole(right=300, left=400, bottom=0, height=600), 150.0, 450.0, 300.0 + 150 + 450),
        (hole(right=-400, left=-300, bottom=0, height=600), 450.0, 150.0, 300.0 + 150 + 450),
        (hole(right=100, left=200, bottom=450, height=150), 0.0, 450.0, 250.0 + 450),
        (hole(right=-600, left=600, bottom=450, height=150), 0.0, 0.0, 0.0),
        (hole(), 450.0, 450.0, 1200.0),
    ],
)
def test_flange_beyond_an_opening_does_not_count(opening, left, right, width) -> None:
    """The web is 300 wide, the flange 1200 wide and 150 thick."""
    runs, _ = net_runs((Run(0.0, LENGTH, TEE),), (opening,))
    run = next(run for run in runs if run.whole)
    assert run.whole is not None
    found = overhangs(run.outline.rings, run.whole.rings)
    assert found == pytest.approx((left, right, 150.0))
    strips = strips_of(run.outline.rings)
    top = strips[strips[:, 1] > 599.0]
    assert top[:, 3].sum() == pytest.approx(width)


def test_flexure_is_that_of_the_chord_in_compression_while_the_block_lies_in_it() -> None:
    """3-25M: a = 0.85*1500*400/(0.805*0.65*30*300) = 108.3 mm < 225 mm of chord, so Mr is that of
    the whole section without its top bars' help in tension; in a notch it loses 100 mm of d."""
    made = subject(top=0, loads=(line("floor", 10.0),))
    solid, _ = rated(made)
    opened, _ = rated(with_openings(made, hole(3000.0)))
    notched, _ = rated(with_openings(made, hole(3000.0, 100.0, 500.0, 100.0)))
    moment = {
        name: resistance(batch, *stretch, "FlexureSagging")
        for name, batch, stretch in (
            ("solid", solid, (2000.0, 4000.0)),
            ("opened", opened, (3000.0, 3150.0)),
            ("notched", notched, (3000.0, 3100.0)),
        )
    }
    force, a = 0.85 * 1500 * 400, 0.85 * 1500 * 400 / (0.805 * 0.65 * 30 * 300)
    assert moment["solid"] == pytest.approx(force * (538 - a / 2), rel=1e-9)
    assert moment["opened"] == pytest.approx(moment["solid"], rel=1e-9)
    assert moment["notched"] == pytest.approx(force * (438 - a / 2), rel=1e-9)
    assert resistance(notched, 2700.0, 3000.0, "FlexureSagging") == pytest.approx(moment["solid"])


def test_flexure_where_the_block_reaches_past_the_opening() -> None:
    """5-25M need 180.5 mm of full width; the opening takes z = 400 to 500, 100 to 200 from the
    top: the block needs 80.5 mm below it. Moments about the bars, by hand."""
    made = subject(bottom=5, top=0, loads=(line("floor", 10.0),))
    opened, _ = rated(with_openings(made, hole(3000.0, 100.0, 400.0, 100.0)))
    force = 0.85 * 2500 * 400
    stress = 0.805 * 0.65 * 30 * 300
    below = force / stress - 100.0
    expected = stress * (100.0 * (538 - 50) + below * (538 - 200 - below / 2))
    assert resistance(opened, 3000.0, 3100.0, "FlexureSagging") == pytest.approx(expected, rel=1e-9)


def resistance(batch, start: float, end: float, state: str) -> float:
    """What resists at the stations of a stretch; there it must be the same at all of them."""
    place = batch.stations.x + 1e-6 * batch.stations.side
    rows = np.flatnonzero((place > start) & (place < end))
    assert len(rows)
    found = batch.envelope.resistance[state][rows]
    assert found == pytest.approx(found[0], rel=1e-9)
    return float(found[0])


# Shear -------------------------------------------------------------------------------------------

DV = 0.9 * 538.0
COT = 1.0 / math.tan(math.radians(35.0))


def shear_by_hand(depth: float, width: float = 300.0, spacing: float = 200.0) -> float:
    """Simplified method with minimum stirrups, 2 legs 10M."""
    concrete = 0.65 * 0.18 * math.sqrt(30.0) * width * depth
    return concrete + 0.85 * 200.0 * 400.0 * depth * COT / spacing


def test_shear_in_a_small_opening_by_hand() -> None:
    """dv - do within it and half a depth on either side; the whole dv beyond."""
    made = with_openings(subject(loads=(line("floor", 10.0),)), hole(2000.0))
    batch, _ = rated(made, method="simplified")
    x, shear = batch.stations.x, batch.envelope.resistance["Shear"]
    near = (x > 1700.0 + 1) & (x < 2450.0 - 1)
    far = ((x > 500.0) & (x < 1700.0 - 1)) | ((x > 2450.0 + 1) & (x < 5500.0))
    assert near.sum() > 5
    assert shear[near] == pytest.approx(shear_by_hand(DV - 150.0), rel=1e-9)
    assert shear[far] == pytest.approx(shear_by_hand(DV), rel=1e-9)
    details = batch.prepared
    assert details.shear_loss[near] == pytest.approx(150.0)
    assert not details.shear_loss[far].any()


def test_stirrups_too_far_apart_for_the_depth_that_is_left_do_not_count() -> None:
    """0.7 (dv - do) = 234 mm: at 250 mm they add nothing, though the whole web's 0.7 dv is 339.

    Cracks are spaced by the whole depth: beta = 230/(1000 + dv)."""
    made = subject(spacing=250.0, loads=(line("floor", 10.0),))
    batch, _ = rated(with_openings(made, hole()), method="simplified")
    expected = 0.65 * 230.0 / (1000.0 + DV) * math.sqrt(30.0) * 300.0 * (DV - 150.0)
    assert resistance(batch, 2000.0, 2150.0, "Shear") == pytest.approx(expected, rel=1e-9)


def test_general_method_in_a_small_opening_by_hand() -> None:
    made = with_openings(subject(loads=(line("floor", 40.0),)), hole(4000.0))
    batch, _ = rated(made, method="general")
    row = int(np.flatnonzero(np.isclose(batch.stations.x, 4150.0))[0])
    demand, depth = batch.demand, DV - 150.0
    utilisation = []
    for element in np.ndindex(*demand.moment.shape[:2]):
        moment, shear = (abs(float(a[(*element, row)])) for a in (demand.moment, demand.shear))
        strain = (max(moment / depth, shear) + shear) / (2.0 * 200e3 * 1500.0)
        beta, theta = 0.4 / (1.0 + 1500.0 * strain), math.radians(29.0 + 7000.0 * strain)
        concrete = 0.65 * beta * math.sqrt(30.0) * 300.0 * depth
        steel = 0.85 * 200.0 * 400.0 * depth / math.tan(theta) / 200.0
        utilisation.append((shear / (concrete + steel), concrete + steel))
    assert batch.envelope.resistance["Shear"][row] == pytest.approx(max(utilisation)[1], rel=1e-9)


NAMES = {
    "sqrt": math.sqrt, "min": min, "max": max, "tan": math.tan, "radians": math.radians,
    "where": lambda test, one, other: one if test else other,
}  # fmt: skip


@pytest.mark.parametrize("method", ["general", "simplified"])
@pytest.mark.parametrize("spacing", [200.0, 250.0])
def test_every_line_of_the_calculation_at_an_opening_gives_its_field(method, spacing) -> None:
    from ifccheck.sheet import values_at

    loads = (line("floor", 20.0), point("press", 120e3, 4200.0))
    made = with_openings(subject(spacing=spacing, loads=loads), hole(1800.0))
    batch, _ = rated(made, method=method)
    for found in batch.states:
        values = values_at(found.state.lines, found.shown.details, 0)
        for calculation in values.shown:
            if calculation.formula:
                value = eval(calculation.formula, NAMES | values.values)
                assert value == pytest.approx(values.values[calculation.symbol], rel=1e-9)


def test_a_recess_narrows_the_web_over_its_length() -> None:
    """50 mm off one side, clear of the stirrups 60 mm in: 250 mm carry shear, all of the depth."""
    recess = hole(2000.0, 1000.0, 200.0, 200.0, 100.0, 150.0)
    made = subject(loads=(line("floor", 10.0),))
    made = replace(made, stirrups=tuple(replace(s, half_width=90.0) for s in made.stirrups))
    opened = with_openings(made, recess)
    assert not opened.reasons
    batch, _ = rated(opened, method="simplified")
    assert resistance(batch, 2000.0, 3000.0, "Shear") == pytest.approx(
        shear_by_hand(DV, 250.0), rel=1e-9
    )
    assert resistance(batch, 3000.0, 4000.0, "Shear") == pytest.approx(shear_by_hand(DV), rel=1e-9)


def test_an_opening_from_above_through_the_web_narrows_it() -> None:
    sleeve = hole(2000.0, 60.0, 0.0, 600.0, 20.0, 70.0)
    batch, _ = rated(
        with_openings(subject(loads=(line("floor", 10.0),)), sleeve), method="simplified"
    )
    assert resistance(batch, 2000.0, 2060.0, "Shear") == pytest.approx(
        shear_by_hand(DV, 250.0), rel=1e-9
    )


def test_an_opening_in_the_flange_alone_leaves_shear_as_it_is() -> None:
    sleeve = hole(300.0, 800.0, 450.0, 150.0, 300.0, 400.0)
    opened = with_openings(subject(loads=(line("floor", 10.0),)), sleeve, outline=TEE)
    assert not opened.reasons
    assert opened.body is not None
    assert opened.body.losses == ()
    assert "lies in the flange alone" in opened.remarks[0].text


def test_a_small_notch_loses_its_height_beside_it_and_is_less_deep_itself() -> None:
    notch = hole(3000.0, 100.0, 500.0, 100.0)
    opened = with_openings(subject(top=0, loads=(line("floor", 10.0),)), notch)
    assert not opened.reasons
    assert opened.body is not None
    assert opened.body.losses == (
        ShearLoss(2700.0, 3000.0, 100.0),
        ShearLoss(3000.0, 3100.0, 0.0),
        ShearLoss(3100.0, 3400.0, 100.0),
    )
    batch, _ = rated(opened, method="simplified")
    assert resistance(batch, 3000.0, 3100.0, "Shear") == pytest.approx(shear_by_hand(0.9 * 438.0))
    assert resistance(batch, 2700.0, 3000.0, "Shear") == pytest.approx(shear_by_hand(DV - 100.0))


# What is not small ------------------------------------------------------------------------------

LARGE = {
    "higher than a quarter": (hole(2500, 150, 220, 160), "its height of 160 mm"),
    "longer than a quarter": (hole(2500, 200), "its length of 200 mm"),
    "chord below too shallow": (hole(2500, 100, 140, 100), "a chord of 140 mm"),
    "chord above too shallow": (hole(2500, 100, 360, 100), "a chord of 140 mm"),
    "near the start": (hole(700), "within one depth of the support at the start"),
    "near the end": (hole(5100), "within one depth of the support at the end"),
    "over the support": (hole(0), "within one depth of the support at the start"),
    "dap": (hole(0, 300, 560, 40), "within one depth of the support at the start"),
    "high notch": (hole(2500, 100, 440, 160), "its height of 160 mm"),
    "long notch": (hole(2500, 500, 500, 100), "its length of 500 mm"),
    "deep recess": (hole(2500, 100, 200, 200, 70, 150), "it takes 80.0 mm of the web"),
    "recess through a leg": (hole(2500, 100, 200, 200, 100, 150), "a leg of the stirrups"),
    "long slot from above": (
        hole(2500, 200, 0, 600, 20, 60), "its length of 200 mm"),
}  # fmt: skip


@pytest.mark.parametrize("kind", LARGE)
def test_what_is_not_small_is_not_rated_in_shear(kind: str) -> None:
    """The same beam without the opening is adequate: only the rule keeps it from being so."""
    opening, why = LARGE[kind]
    made = subject(top=0, loads=(line("floor", 2.0),))
    solid = rated(made)[1][0]
    assert solid.verdict is Verdict.ADEQUATE
    opened = with_openings(made, opening)
    rating = rated(opened)[1][0]
    assert rating.verdict is Verdict.NOT_RATED
    place = f"not rated in shear at the opening at x = {show(opening.start, 'length')}"
    assert place in texts(opened)
    assert why in texts(opened)
    shear = next(state for state in rating.limit_states if state.name == "Shear")
    if opening.end > 200.0:
        assert math.isnan(shear.utilisation)
        assert shear.why_not.startswith("outside 11.3: an opening")


def test_just_small_is_small() -> None:
    made = subject(top=0, loads=(line("floor", 2.0),))
    opened = with_openings(made, hole(800.0), hole(5050.0), hole(3000.0, 150.0, 225.0, 150.0))
    assert not opened.reasons
    rating = rated(opened)[1][0]
    assert rating.verdict is Verdict.ADEQUATE
    told = [remark.text for remark in opened.remarks]
    assert any("small: it takes 150 mm off the shear depth" in text for text in told)
    assert any("Mansur and Tan" in text for text in told)
    assert GROSS_WEIGHT in told


def test_openings_near_one_another_are_judged_together() -> None:
    """Half a depth apart they take 200 mm of 600, more than a quarter; a depth apart each alone."""
    made = subject(top=0, loads=(line("floor", 2.0),))
    near = with_openings(made, hole(2000, 100, 250, 100), hole(2400, 100, 250, 100))
    assert "2 openings less than a depth apart take 200 mm together" in texts(near)
    far = with_openings(made, hole(2000, 100, 250, 100), hole(2700, 100, 250, 100))
    assert not far.reasons
    little = with_openings(made, hole(2000, 70, 250, 70), hole(2300, 70, 250, 70))
    assert not little.reasons
    batch, _ = rated(little, method="simplified")
    # between them a crack may run into both
    assert resistance(batch, 2070.0, 2300.0, "Shear") == pytest.approx(shear_by_hand(DV - 140.0))


def test_recesses_side_by_side_narrow_the_web_together() -> None:
    """40 mm from either side are 80 of 300 mm, more than a quarter; one after the other, 40."""
    made = subject(bottom=0, top=0, loads=(line("floor", 2.0),))
    bare = replace(made, stirrups=(), stirrup_yield=())
    right = hole(2000.0, 500.0, 200.0, 200.0, -150.0, -110.0)
    beside = hole(2200.0, 500.0, 200.0, 200.0, 110.0, 150.0)
    assert "it takes 80.0 mm of the web" in texts(with_openings(bare, right, beside))
    after = hole(2600.0, 500.0, 200.0, 200.0, 110.0, 150.0)
    assert not with_openings(bare, right, after).reasons


def test_slots_in_a_row_are_as_long_as_all_of_them() -> None:
    """Five of 140 x 20 with 10 mm between: one slot of 740 mm, whatever the posts are worth."""
    made = subject(top=0, loads=(line("floor", 2.0),))
    row = [hole(2500.0 + 150.0 * n, 140.0, 290.0, 20.0) for n in range(5)]
    opened = with_openings(made, *row)
    assert "5 openings less than a depth apart are 700 mm long together" in texts(opened)
    assert rated(opened)[1][0].verdict is Verdict.NOT_RATED
    stacked = with_openings(made, hole(2500, 140, 150, 20), hole(2500, 140, 330, 20))
    assert not stacked.reasons


def test_what_is_left_between_openings_is_a_chord() -> None:
    """From 220 to 320 there are 100 mm left, less than a quarter; to 375 there are 155."""
    made = subject(top=0, loads=(line("floor", 2.0),))
    one, close, far = (hole(2500, 100, bottom, 60) for bottom in (160.0, 320.0, 375.0))
    assert "a chord of 100 mm" in texts(with_openings(made, one, close))
    assert not with_openings(made, one, far).reasons


@pytest.mark.parametrize(("bottom", "height"), [(250.0, 100.0), (350.0, 250.0)])
def test_two_halves_make_a_whole(bottom: float, height: float) -> None:
    """A duct, or a notch from the top, drawn in two from either side of the beam."""
    made = subject(bottom=0, top=0, loads=(line("floor", 2.0),))
    right, left = (hole(2500, 100, bottom, height, *each) for each in ((-150, 0), (0, 150)))
    opened = with_openings(made, right, left)
    assert f"it takes the whole web over {show(height, 'dimension')} of height" in texts(opened)
    assert opened.body is not None
    assert [(one.start, one.end) for one in opened.body.losses] == [(2200.0, 2900.0)] * 2
    assert all(math.isnan(one.height) for one in opened.body.losses)
    assert "flange alone" not in " ".join(remark.text for remark in opened.remarks)


@pytest.mark.parametrize("gap", [0.0, 299.0, 301.0])
def test_a_concentrated_load_near_an_opening(gap: float) -> None:
    load = point("press", 5e3, 2150.0 + gap)
    opened = with_openings(subject(loads=(line("floor", 2.0), load)), hole(2000.0))
    assert ("a concentrated load stands within half a depth" in texts(opened)) == (gap < 300.0)


def test_short_line_loads_are_concentrated() -> None:
    load = line("press", 20.0)._replace(start=2200.0, end=2700.0)
    assert "a concentrated load" in texts(with_openings(subject(loads=(load,)), hole(2000.0)))


def test_a_free_tip_is_no_support() -> None:
    made = subject(ends=("fixed", "free"), loads=(line("floor", 1.0),))
    assert not with_openings(made, hole(5500.0)).reasons


def test_unknown_legs_and_recesses_do_not_go_together() -> None:
    recess = hole(2500, 100, 200, 200, 140, 150)
    made = subject(legs=None, loads=(line("floor", 2.0),))
    assert "where the legs of the stirrups run is not known" in texts(with_openings(made, recess))
    none = replace(made, stirrups=(), stirrup_yield=())
    assert not with_openings(none, recess).reasons
    ell = Outline((
        ((-350, 0), (-50, 0), (-50, 450), (350, 450), (350, 600), (-350, 600)),
    ))  # fmt: skip
    beside = hole(2500, 100, 200, 200, -350, -340)
    two = subject(bottom=0, top=0, loads=(line("floor", 2.0),))
    assert "is not known" in texts(with_openings(two, beside, outline=ell))


def test_an_opening_between_face_and_critical_section_takes_the_lesser_shear_away() -> None:
    """The face is at 200, the critical section at 200 + 484, the opening at 800: its zone begins
    at 500, so that places nearer to the support answer for their own shear."""
    made = subject(loads=(line("floor", 40.0),))
    solid, opened = rated(made)[0], rated(with_openings(made, hole(800.0)))[0]
    for batch, own in ((solid, False), (opened, True)):
        row = int(np.flatnonzero(np.isclose(batch.stations.x, 200.0))[-1])
        same = batch.demand.critical_shear[..., row] == batch.demand.shear[..., row]
        assert bool(np.abs(same).all()) is own


# Bars, weight and what cannot be ----------------------------------------------------------------


@pytest.mark.parametrize(
    ("bottom", "height", "cut"), [(40, 30, True), (76, 100, False), (74, 100, True)]
)
def test_a_bar_that_runs_through_an_opening_is_a_reason(bottom, height, cut) -> None:
    """25M bars, 25.2 thick, at z = 62 mm: their upper edge is at 74.6."""
    made = with_openings(subject(loads=(line("floor", 2.0),)), hole(2500, 100, bottom, height))
    assert (
        "3 bars at z = 62.0 mm would run through the opening at x = 2.50 m" in texts(made)
    ) == cut
    blocking = [reason for reason in made.reasons if "would run" in reason.text]
    assert all(reason.blocking for reason in blocking)
    if cut:
        assert made.body is None


def test_bars_that_end_before_an_opening_do_not_run_through_it() -> None:
    made = subject(loads=(line("floor", 2.0),))
    short = tuple(replace(bar, end=2400.0) if bar.z < 100 else bar for bar in made.bars)
    opened = with_openings(replace(made, bars=short), hole(2500, 100, 0, 100))
    assert "would run" not in texts(opened)


def test_an_opening_that_leaves_nothing_is_a_reason() -> None:
    opened = with_openings(subject(bottom=0, top=0), hole(2500, 100, 0, 600))
    assert texts(opened) == "opening at x = 2.50 m to 2.60 m takes the whole section"
    assert opened.reasons[0].blocking


def test_an_opening_where_the_section_varies_is_a_reason() -> None:
    made = subject()
    outline = made.beam.runs[0].outline
    beam = replace(made.beam, runs=(Run(0.0, LENGTH, outline, TEE),), openings=(hole(),))
    assert "lies where the section varies" in judged(made, beam).reasons[0].text


def weight_on(made: Subject) -> float:
    from ifccheck.rating.assembly import frame_of
    from tests.made_subjects import CASES

    loads = frame_of([made], CASES).loads
    own = loads.case == 0
    middle = (loads.value_start + loads.value_end)[own] / 2.0
    return float((middle * (loads.end - loads.start)[own]).sum())


def test_self_weight_is_that_of_the_whole_body() -> None:
    made = subject(loads=(line("floor", 2.0),))
    opened = with_openings(made, hole(2000), hole(4000))
    assert weight_on(opened) == pytest.approx(weight_on(made))
    assert weight_on(made) == pytest.approx(0.3 * 0.6 * 6.0 * 24e3)


@pytest.mark.parametrize(
    "made",
    [
        subject(loads=(line("floor", -2.0),)),
        subject(ends=("fixed", "pinned"), loads=(line("floor", 2.0),)),
        subject(loads=(point("floor", 1e6, 5800.0)._replace(kind="moment"),)),
    ],
    ids=["upward", "fixed", "moment"],
)
def test_self_weight_that_may_relieve_is_that_of_what_is_left(made: Subject) -> None:
    opened = with_openings(made, hole(2000))
    assert weight_on(opened) == pytest.approx(weight_on(made) - 0.15 * 0.15 * 0.3 * 24e3)
    assert NET_WEIGHT in [remark.text for remark in opened.remarks]


def test_flange_beyond_an_opening_carries_nothing_but_weighs() -> None:
    """A slot of 100 x 2000 mm beside the web parts 350 mm of flange from it."""
    made = subject(ends=("fixed", "fixed"), loads=(line("floor", 2.0),))
    slot = hole(2000.0, 2000.0, 450.0, 150.0, 150.0, 250.0)
    opened = with_openings(made, slot, outline=TEE)
    assert not opened.reasons
    assert overhangs(opened.runs[1].outline.rings, TEE.rings)[:2] == pytest.approx((0.0, 450.0))
    gross = 0.3 * 0.45 + 1.2 * 0.15
    assert weight_on(opened) == pytest.approx((gross * 6.0 - 0.1 * 0.15 * 2.0) * 24e3)


def test_a_divided_section_that_no_rule_has_judged_is_not_rated_in_shear() -> None:
    made = subject(loads=(line("floor", 2.0),))
    runs, _ = net_runs(made.beam.runs, (hole(2500),))
    body = RatedBody(runs, (), made.beam.runs)
    rating = rated(replace(made, body=body))[1][0]
    assert rating.verdict is Verdict.NOT_RATED
    assert any("an opening, recess or notch" in state.why_not for state in rating.limit_states)


def test_a_hole_that_no_opening_tells_of_is_a_step() -> None:
    """A body may be modelled with a hole in it."""
    made = subject()
    runs, _ = net_runs(made.beam.runs, (hole(2500),))
    drawn = tuple(replace(run, whole=None) for run in runs)
    found = [each.text for each in shape_reasons(drawn, made.spans, STANDARD)]
    assert found == [
        "not rated within one depth of the step at x = 2.50 m",
        "not rated within one depth of the step at x = 2.65 m",
    ]


def test_more_opening_is_never_more_strength() -> None:
    """Larger, nearer, more of them: every utilisation stays or grows, or is not known."""
    made = subject(loads=(line("floor", 20.0),))
    opened = [
        (),
        (hole(2000, 100, 250, 100),),
        (hole(2000, 150, 225, 150),),
        (hole(2000, 150, 225, 150), hole(4000, 100, 250, 100)),
        (hole(2000, 150, 225, 150), hole(4000, 100, 250, 120)),
    ]
    found = [rated(with_openings(made, *each))[1][0].limit_states for each in opened]
    for less, more in pairwise(found):
        for one, other in zip(less, more, strict=True):
            assert not other.utilisation < one.utilisation * (1.0 - 1e-9)


def test_bars_near_an_opening_are_no_better_anchored_than_by_their_distance_from_it() -> None:
    """Bars at z = 62, the opening's edge 20 mm above them: dcs is 20 + 12.6, not 60."""
    from ifccheck.rating.covers import bonds_of

    made = subject(loads=(line("floor", 2.0),))
    opened = with_openings(made, hole(2500, 100, 94.6, 100))
    assert bonds_of([made]).cover_distance[0] == pytest.approx(60.0)
    assert bonds_of([opened]).cover_distance[0] == pytest.approx(32.6)


def test_stirrups_are_looked_at_where_they_are() -> None:
    recess = hole(2500, 100, 200, 200, 100, 150)
    made = subject(loads=(line("floor", 2.0),))
    (zone,) = made.stirrups
    elsewhere: tuple[Stirrups, ...] = (replace(zone, end=2400.0), replace(zone, start=2700.0))
    beyond = replace(made, stirrups=elsewhere, stirrup_yield=made.stirrup_yield * 2)
    assert "a leg" in texts(with_openings(made, recess))
    assert "a leg" not in texts(with_openings(beyond, recess))


def test_shapely_sees_the_void_of_an_outline() -> None:
    ring = ((-100.0, 100.0), (100.0, 100.0), (100.0, 300.0), (-100.0, 300.0))
    outline = Outline((*subject().beam.runs[0].outline.rings, ring))
    assert figure_of(outline).area == pytest.approx(300 * 600 - 200 * 200)
    assert isinstance(figure_of(outline), Polygon)


def _random_beam(rng: random.Random, key: str) -> tuple[Subject, tuple[Opening, ...]]:
    ends = rng.choice([("pinned", "pinned"), ("fixed", "free"), ("fixed", "fixed")])
    loads = (
        line("floor", rng.choice([1.0, 20.0, -3.0]), key),
        point("press", rng.choice([1e3, 8e4]), rng.uniform(0.0, LENGTH), key),
    )
    made = subject(
        key, bottom=rng.choice([0, 3, 5]), top=rng.choice([0, 2]), ends=ends, loads=loads,
        legs=rng.choice([2, 2, None, 4]),
    )  # fmt: skip
    openings = []
    for _ in range(rng.randint(1, 4)):
        x, right, bottom = rng.uniform(0, 5900), rng.uniform(-700, 500), rng.uniform(-20, 580)
        end = min(LENGTH, x + rng.choice([20, 100, 150, 800]))
        left, top = right + rng.choice([30, 200, 1200]), bottom + rng.choice([30, 100, 150, 400])
        openings.append(Opening(x, end, right, left, bottom, top, "other"))
    return made, tuple(openings)


@pytest.mark.parametrize("method", ["general", "simplified"])
def test_no_random_opening_makes_a_beam_better_or_the_program_fail(method: str) -> None:
    """Adequate with openings only where no reason speaks against it and it is so without them."""
    rng = random.Random(5)
    pairs = []
    for number in range(120):
        made, openings = _random_beam(rng, f"b{number}")
        outline = rng.choice([made.beam.runs[0].outline, TEE])
        opened = with_openings(made, *openings, outline=outline)
        if not any(reason.blocking for reason in opened.reasons):
            pairs.append((replace(opened, body=None, reasons=()), opened))
    assert len(pairs) > 60
    solid = rated(*(pair[0] for pair in pairs), method=method)[1]
    found = rated(*(pair[1] for pair in pairs), method=method)[1]
    adequate = 0
    for (_, opened), whole, rating in zip(pairs, solid, found, strict=True):
        if rating.verdict is Verdict.ADEQUATE:
            adequate += 1
            assert whole.verdict is Verdict.ADEQUATE
            assert not opened.reasons
    assert adequate > 3


def test_the_rule_tells_that_openings_near_one_another_are_judged_together() -> None:
    from ifccheck.frame.opening_shear import RULE

    assert "in a row less than a depth apart, and such as lie one above another, are judged" in RULE
