"""Beams whose section varies: tapers and steps, against constant ones and hand calculation."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Anchor, BarGroup, Bars, DescribedZone, Outline, Run, Verdict
from ifccheck.detailing import lay_out
from ifccheck.notation import bars_in_a_row
from ifccheck.rating.disturbed import disturbed
from ifccheck.rating.results import LimitStateRating, Rating
from ifccheck.rating.shape import shape_reasons
from ifccheck.rating.subject import Subject
from ifccheck.standards.csa_a23_3_14.cracked import with_chords
from ifccheck.standards.csa_a23_3_14.shear_lines import SHEAR_LINES
from tests.made_subjects import STANDARD, line, point, rated, subject

LENGTH = 6000.0
LOADS = (line("floor", 14.0), point("press", 60e3, 2200.0))


def box(width: float, low: float, high: float) -> Outline:
    half = width / 2.0
    return Outline((((-half, low), (half, low), (half, high), (-half, high)),))


def with_runs(one: Subject, *runs: Run) -> Subject:
    return replace(one, beam=replace(one.beam, runs=tuple(runs)))


def taper(*stations: tuple[float, Outline]) -> list[Run]:
    return [
        Run(a, b, one, None if one == other else other)
        for (a, one), (b, other) in pairwise(stations)
    ]


def of(rating: Rating, name: str) -> LimitStateRating:
    return next(state for state in rating.limit_states if state.name == name)


def assert_same(one: Rating, other: Rating, rel: float = 1e-9) -> None:
    for first, second in zip(one.limit_states, other.limit_states, strict=True):
        assert second.utilisation == pytest.approx(first.utilisation, rel=rel)
    for safe, same in zip(one.safe_loads, other.safe_loads, strict=True):
        assert same.factor == pytest.approx(safe.factor, rel=max(rel, 1e-7), nan_ok=True)


# The same beam otherwise ------------------------------------------------------------------------


@pytest.mark.parametrize("method", ["general", "simplified"])
def test_a_run_cut_in_two_is_one_run(method: str) -> None:
    beam, outline = subject(loads=LOADS), box(300, 0, 600)
    halves = with_runs(beam, Run(0.0, 2345.0, outline), Run(2345.0, LENGTH, outline))
    (_, (one,)), (_, (two,)) = rated(beam, method=method), rated(halves, method=method)
    assert_same(one, two)


@pytest.mark.parametrize("method", ["general", "simplified"])
def test_a_taper_between_equal_ends_is_a_constant_run(method: str) -> None:
    beam, outline = subject(loads=LOADS), box(300, 0, 600)
    flat = with_runs(beam, Run(0.0, LENGTH, outline, outline))
    (_, (one,)), (_, (two,)) = rated(beam, method=method), rated(flat, method=method)
    assert_same(one, two)


@settings(deadline=None, max_examples=15)
@given(
    start=st.floats(400.0, 900.0), end=st.floats(400.0, 900.0), width=st.floats(200.0, 400.0),
    method=st.sampled_from(["general", "simplified"]),
)  # fmt: skip
def test_a_beam_turned_round_is_the_same(
    start: float, end: float, width: float, method: str
) -> None:
    beam = subject(width=width, loads=LOADS, top=2)
    there = with_runs(beam, *taper((0.0, box(width, 0, start)), (LENGTH, box(width, 0, end))))
    back = with_runs(beam, *taper((0.0, box(width, 0, end)), (LENGTH, box(width, 0, start))))
    bars = tuple(bar for bar in beam.bars if bar.z < 200.0)
    there, back = (
        replace(each, bars=bars, bar_yield=beam.bar_yield[: len(bars)]) for each in (there, back)
    )
    mirrored = (line("floor", 14.0), point("press", 60e3, LENGTH - 2200.0))
    _, (one,) = rated(there, method=method)
    _, (two,) = rated(replace(back, loads=mirrored), method=method)
    assert_same(one, two, rel=1e-6)


def test_a_taper_is_the_limit_of_many_small_steps() -> None:
    """A top that rises to midspan: its compression relieves the web, which is not counted, so
    that a staircase of sections says the same. Each step is too slight to disturb."""
    beam = subject(loads=LOADS, top=0)
    smooth = with_runs(
        beam,
        *taper((0.0, box(300, 0, 450)), (3000.0, box(300, 0, 700)), (LENGTH, box(300, 0, 450))),
    )
    steps = 60
    runs = []
    for k in range(2 * steps):
        middle = (k + 0.5) / steps
        rise = middle if middle < 1.0 else 2.0 - middle
        x = 3000.0 * k / steps
        runs.append(Run(x, x + 3000.0 / steps, box(300, 0, 450 + 250 * rise)))
    stairs = with_runs(beam, *runs)
    assert disturbed(runs) == ()
    for method in ("general", "simplified"):
        _, (one,) = rated(smooth, method=method)
        _, (two,) = rated(stairs, method=method)
        assert_same(one, two, rel=0.012)
        assert of(one, "FlexureSagging").position == pytest.approx(
            of(two, "FlexureSagging").position, abs=60.0
        )


# By hand --------------------------------------------------------------------------------------

FC, FY, WIDTH, AREA, AV, SPACING = 30.0, 400.0, 300.0, 1500.0, 200.0, 200.0
BAR_Z, DEEP, SHALLOW = 62.0, 800.0, 500.0
WEIGHT, FLOOR, BEARING = 24e-6, 14.0, 200.0


def depth_at(x: float) -> float:
    """A V-shaped top: deep at the supports, shallow at midspan."""
    return DEEP + (SHALLOW - DEEP) * (1.0 - abs(x - 3000.0) / 3000.0)


def load_left_of(x: float) -> tuple[float, float]:
    """1.25 times self weight and 1.5 times the floor from the start of the span to x: force [N]
    and moment about x. What lies beyond goes straight into the bearing."""
    xs = np.linspace(BEARING / 2.0, x, 4001)
    w = 1.25 * WEIGHT * WIDTH * np.array([depth_at(each) for each in xs]) + 1.5 * FLOOR
    return float(np.trapezoid(w, xs)), float(np.trapezoid(w * (x - xs), xs))


def acting(x: float) -> tuple[float, float]:
    """Moment and shear at x of a beam on bearings of 200 mm, its span between their middles."""
    half = BEARING / 2.0
    whole = load_left_of(LENGTH - half)[0]
    force, about = load_left_of(x)
    return whole / 2.0 * (x - half) - about, whole / 2.0 - force


def moment_resistance(h: float) -> float:
    """phi_s As fy (d - a/2), the block in the width of the beam."""
    d = h - BAR_Z
    alpha1 = 0.85 - 0.0015 * FC
    a = 0.85 * AREA * FY / (alpha1 * 0.65 * FC * WIDTH)
    return 0.85 * AREA * FY * (d - a / 2.0)


def shear_resistance(h: float) -> tuple[float, float]:
    """The simplified method with stirrups, and dv."""
    dv = max(0.9 * (h - BAR_Z), 0.72 * h)
    concrete = 0.65 * 0.18 * math.sqrt(FC) * WIDTH * dv
    stirrups = 0.85 * AV * FY * dv / math.tan(math.radians(35.0)) / SPACING
    return concrete + stirrups, dv


def hollow_backed() -> Subject:
    """Three bars along a level soffit, parallel to the axis, under a top that dips to midspan."""
    beam = subject(loads=(line("floor", FLOOR),), top=0)
    top = taper((0.0, box(WIDTH, 0, DEEP)), (3000.0, box(WIDTH, 0, SHALLOW)),
                (LENGTH, box(WIDTH, 0, DEEP)))  # fmt: skip
    return with_runs(beam, *top)


def test_flexure_of_a_tapered_beam_by_hand() -> None:
    _, (rating,) = rated(hollow_backed(), method="simplified")
    flexure = of(rating, "FlexureSagging")
    moment, _ = acting(flexure.position)
    assert flexure.demand == pytest.approx(moment, rel=1e-5)
    assert flexure.resistance == pytest.approx(
        moment_resistance(depth_at(flexure.position)), rel=1e-6
    )
    worst = max(
        acting(x)[0] / moment_resistance(depth_at(x)) for x in np.linspace(100.0, 5900.0, 117)
    )
    assert flexure.utilisation == pytest.approx(worst, rel=1e-4)


def test_shear_of_a_tapered_beam_by_hand() -> None:
    """The compression follows the top down to midspan and presses on the web: the shear is
    V + (M / dv) 0.1. The bars run level and carry none."""
    _, (rating,) = rated(hollow_backed(), method="simplified")
    shear = of(rating, "Shear")
    moment, force = acting(shear.position)
    resistance, dv = shear_resistance(depth_at(shear.position))
    assert shear.resistance == pytest.approx(resistance, rel=1e-6)
    assert shear.demand == pytest.approx(abs(force) + moment / dv * 0.1, rel=1e-5)
    worst = 0.0
    for x in np.linspace(BEARING + 600.0, 3000.0, 100):
        m, v = acting(float(x))
        vr, dv = shear_resistance(depth_at(float(x)))
        worst = max(worst, (v + m / dv * 0.1) / vr)
    assert shear.utilisation == pytest.approx(worst, rel=5e-3)


def test_bars_given_by_number_follow_the_face() -> None:
    """A soffit that rises to midspan: bars that lie along it pull the web down with M/dv 0.1;
    the same bars drawn level do not."""
    beam = subject(loads=(line("floor", FLOOR),), top=0)
    bars = tuple(replace(bar, z=300.0 + BAR_Z) for bar in beam.bars)
    runs = taper((0.0, box(WIDTH, 0, 800)), (3000.0, box(WIDTH, 300, 800)),
                 (LENGTH, box(WIDTH, 0, 800)))  # fmt: skip
    drawn = with_runs(replace(beam, bars=bars), *runs)
    told = replace(drawn, reinforcement_source="schedule")
    _, (level,) = rated(drawn, method="simplified")
    _, (along,) = rated(told, method="simplified")
    shear = of(along, "Shear")
    moment, force = acting(shear.position)
    _, dv = shear_resistance_of(depth_at(shear.position), 800.0 - 300.0 - BAR_Z)
    assert shear.demand == pytest.approx(abs(force) + moment / dv * 0.1, rel=1e-5)
    same = of(level, "Shear")
    assert same.demand == pytest.approx(abs(acting(same.position)[1]), rel=1e-5)
    assert of(along, "FlexureSagging").resistance == pytest.approx(
        of(level, "FlexureSagging").resistance * math.cos(math.atan(0.1)), rel=2e-3
    )


def shear_resistance_of(h: float, d: float) -> tuple[float, float]:
    dv = max(0.9 * d, 0.72 * h)
    return 0.0, dv


def test_a_cantilever_that_deepens_to_its_support_is_not_relieved() -> None:
    """The compression along the rising soffit carries shear, which is never counted."""
    beam = subject(
        length=3000.0, loads=(line("floor", 20.0, length=3000.0),), ends=("fixed", "free"),
        top=3, bottom=2,
    )  # fmt: skip
    bars = tuple(replace(bar, z=640.0) if bar.z > 300.0 else replace(bar, z=360.0)
                 for bar in beam.bars)  # fmt: skip
    runs = taper((0.0, box(300, 0, 700)), (3000.0, box(300, 300, 700)))
    _, (rating,) = rated(with_runs(replace(beam, bars=bars), *runs), method="simplified")
    shear = of(rating, "Shear")
    h = 700.0 - 300.0 * shear.position / 3000.0
    weight = 1.25 * WEIGHT * 300.0 * (h + 400.0) / 2.0
    beyond = (1.5 * 20.0 + weight) * (3000.0 - shear.position)
    assert shear.demand == pytest.approx(beyond, rel=1e-6)


@pytest.mark.parametrize(
    ("moment", "force", "rise", "wanted"),
    [  # published: vu b d of a tapered beam, V - M tan(b) / d
        (195.012e6, 134.559e3, 0.1042, 134.559e3 - 195.012e6 * 0.1042 / 447.04),
    ],
)
def test_the_published_component_of_a_tapered_beam(
    moment: float, force: float, rise: float, wanted: float
) -> None:
    """Hassoun and Al-Manaseer, Structural Concrete, 6th ed., p. 216: 1.048 MPa over 0.75 b d at
    the deeper section, where the depth grows with the moment; here it is never taken off."""
    b, d = 254.0, 447.04
    assert wanted / (0.75 * b * d) == pytest.approx(1.048, rel=5e-3)
    component = np.array([-moment / d * rise])
    assert with_chords(np.array([force]), np.zeros(1), component)[0] == force
    assert with_chords(np.array([force]), np.zeros(1), -component)[0] == pytest.approx(
        2 * force - wanted
    )


def test_a_web_that_is_pressed_the_other_way_is_checked_for_that() -> None:
    """Where chords carry more than the whole shear, the web carries the rest the other way."""
    assert with_chords(np.array([5e3]), np.array([-40e3]), np.zeros(1))[0] == 35e3


@pytest.mark.parametrize("method", ["general", "simplified"])
def test_every_printed_line_of_an_inclined_chord_gives_its_number(method: str) -> None:
    batch, _ = rated(hollow_backed(), method=method)
    state = next(each for each in batch.states if each.state.name == "Shear")
    details = state.shown.details
    allowed = {"max": max, "min": min, "sqrt": math.sqrt, "tan": math.tan,
               "radians": math.radians, "where": lambda c, a, b: a if c else b}  # fmt: skip
    known: dict[str, float] = {}
    printed = []
    for each in SHEAR_LINES:
        if each.when and not bool(np.ravel(getattr(details, each.when))[0]):
            continue
        value = float(np.ravel(getattr(details, each.field))[0])
        if each.formula:
            assert eval(each.formula, {"__builtins__": {}}, allowed | known) == pytest.approx(value)
        known[each.symbol] = value
        printed.append(each.symbol)
    assert {"Vo", "iu", "il", "Vu", "Vl"} <= set(printed)
    assert known["iu"] == pytest.approx(0.1)
    assert known["il"] == 0.0
    assert known["Vf"] > known["Vo"]


# Steps ------------------------------------------------------------------------------------------


def stepped(loads: Sequence = LOADS, depth: float = 400.0) -> Subject:
    """600 deep, but less from 4.5 m on."""
    return with_runs(
        subject(loads=loads, top=0),
        Run(0.0, 4500.0, box(300, 0, 600)), Run(4500.0, LENGTH, box(300, 0, depth)),
    )  # fmt: skip


def test_a_step_is_not_rated_within_one_depth_of_it() -> None:
    (stretch,) = disturbed(stepped().beam.runs)
    assert (stretch.start, stretch.end) == (3900.0, 5100.0)
    batch, (rating,) = rated(stepped())
    x = batch.stations.x
    held = (x > 3900.0 + 1e-3) & (x < 5100.0 - 1e-3)
    resistance = batch.envelope.resistance["FlexureSagging"]
    assert np.isnan(resistance[held]).all()
    assert np.isfinite(resistance[~held]).all()
    assert {3900.0, 5100.0} <= set(np.round(x, 6).tolist())
    for state in rating.limit_states:
        assert not 3900.0 < state.position < 5100.0


def test_the_span_and_not_the_shape_decides_where_it_is_checked() -> None:
    """The greatest moment lies at the step: it is checked just outside, and bounds the tension."""
    heavy = (point("press", 200e3, 4500.0),)
    _, (rating,) = rated(stepped(heavy))
    assert of(rating, "FlexureSagging").position in (3900.0, 5100.0)


def test_a_beam_with_a_step_is_not_adequate_and_falls_short_elsewhere() -> None:
    light, heavy = (line("floor", 2.0),), (line("floor", 60.0),)
    for loads, verdict in ((light, Verdict.NOT_RATED), (heavy, Verdict.FALLS_SHORT)):
        beam = stepped(loads)
        reasons = tuple(shape_reasons(beam.beam.runs, beam.spans, STANDARD))
        assert [reason.text for reason in reasons] == [
            "not rated within one depth of the step at x = 4.50 m"
        ]
        _, (rating,) = rated(replace(beam, reasons=reasons))
        assert rating.verdict is verdict


def test_a_slight_step_is_none() -> None:
    assert disturbed(stepped(depth=592.0).beam.runs) == ()


@pytest.mark.parametrize(("width", "depth"), [(500.0, 600.0), (300.0, 600.0)])
def test_end_blocks_and_voids_are_steps(width: float, depth: float) -> None:
    void = ((-50.0, 200.0), (-50.0, 400.0), (50.0, 400.0), (50.0, 200.0))
    plain = box(300, 0, 600)
    first = box(width, 0, depth) if width > 300.0 else Outline((*plain.rings, void))
    assert len(disturbed([Run(0.0, 800.0, first), Run(800.0, LENGTH, plain)])) == 1


def test_a_taper_steeper_than_one_in_three_is_as_good_as_a_step() -> None:
    gentle = taper((0.0, box(300, 0, 900)), (1200.0, box(300, 310, 900)))
    steep = taper((0.0, box(300, 0, 900)), (800.0, box(300, 310, 900)))
    assert disturbed(gentle) == ()
    (stretch,) = disturbed(steep)
    assert (stretch.start, stretch.end) == (-900.0, 1700.0)
    assert "steep taper from x = 0 m to 0.80 m" in stretch.text


def test_steps_that_leave_nothing_to_check_block() -> None:
    beam = with_runs(
        subject(length=1500.0), Run(0.0, 750.0, box(300, 0, 600)),
        Run(750.0, 1500.0, box(300, 0, 450)),
    )  # fmt: skip
    texts = [r.text for r in shape_reasons(beam.beam.runs, beam.spans, STANDARD)
             if r.blocking]  # fmt: skip
    assert texts[-1] == "steps in the section leave no stretch of it to be rated"


@pytest.mark.parametrize(("depth", "deep"), [(2790.0, False), (2810.0, True)])
def test_a_deep_member_is_not_rated(depth: float, deep: bool) -> None:
    """The clear span is 5.6 m: 10.7.1 begins below twice the depth (from memory)."""
    beam = subject(depth=depth)
    texts = [r.text for r in shape_reasons(beam.beam.runs, beam.spans, STANDARD)]
    assert [("deep member" in text, "10.7.1" in text) for text in texts] == [(True, True)] * deep


# Weight and cover -------------------------------------------------------------------------------


def test_the_weight_of_a_taper_in_two_ways_is_its_volume() -> None:
    """Width grows as depth falls: the area is a parabola, its volume by Simpson's rule."""
    beam = with_runs(
        subject(top=0), Run(0.0, LENGTH, box(300, 0, 600), box(450, 0, 400))
    )  # fmt: skip
    batch, _ = rated(beam)
    shares = [(x - 0.0) / LENGTH for x in (100.0, 3000.0, 5900.0)]
    areas = [(300 + 150 * share) * (600 - 200 * share) for share in shares]
    volume = (areas[0] + 4 * areas[1] + areas[2]) / 6.0 * 5800.0
    first, last = batch.envelope.shear_high[0], batch.envelope.shear_low[-1]
    assert first - last == pytest.approx(1.4 * WEIGHT * volume, rel=1e-3)


def test_cover_is_the_least_along_the_bar() -> None:
    from ifccheck.rating.covers import bonds_of

    beam = subject(top=0, bottom=1)
    bars = (replace(beam.bars[0], z=362.0, ys=(0.0,)),)
    runs = taper((0.0, box(300, 0, 800)), (LENGTH, box(300, 300, 800)))
    found = bonds_of([with_runs(replace(beam, bars=bars), *runs)]).cover_distance[0]
    assert found == pytest.approx(62.0)
    short: tuple[Bars, ...] = (replace(bars[0], end=3000.0),)
    found = bonds_of([with_runs(replace(beam, bars=short), *runs)]).cover_distance[0]
    assert found == pytest.approx(min(150.0, 212.0), rel=0.01)


# Bars given by number ---------------------------------------------------------------------------


def laid_out(runs: list[Run], **zones: tuple[BarGroup, ...]) -> tuple[Bars, ...]:
    beam = with_runs(subject(), *runs).beam
    zone = DescribedZone(cover=40.0, no_stirrups=True, origin="test", **zones)
    layout = lay_out(beam, [zone], clear_spacing=lambda diameter: 1.4 * diameter)
    assert layout.reasons == ()
    return layout.bars


BOTTOM, TOP = BarGroup(3, "25M", 25.2, 500.0), BarGroup(2, "20M", 19.5, 300.0)


def test_bars_given_by_number_never_cross_to_the_other_half() -> None:
    """The soffit rises by two thirds of the depth: bottom bars rise with it, and stay near it,
    so that they are never taken for top bars at the deep end."""
    runs = taper((0.0, box(300, 0, 900)), (LENGTH, box(300, 600, 900)))
    bars = laid_out(runs, bottom=(BOTTOM,), top=(TOP,))
    bottom = [bar for bar in bars if bar.designation == "25M"]
    top = [bar for bar in bars if bar.designation == "20M"]
    assert len(bottom) > 3
    assert len(top) == 1
    for bar in bottom:
        soffits = [600.0 * x / LENGTH for x in (bar.start, bar.end)]
        assert bar.z == pytest.approx(max(soffits) + 40.0 + 12.6, abs=1e-6)
        assert all(bar.z < (soffit + 900.0) / 2.0 for soffit in soffits)
    assert [a.end for a in bottom[:-1]] == [b.start for b in bottom[1:]]
    assert (bottom[0].start, bottom[-1].end) == (0.0, LENGTH)
    assert len(bars_in_a_row(bars)) == 2


def test_pieces_of_a_bar_are_developed_only_far_from_its_end() -> None:
    """Bottom bars from 1 m to 5 m along a taper: near their ends no piece counts as anchored."""
    runs = taper((0.0, box(300, 0, 900)), (LENGTH, box(300, 300, 900)))
    beam = with_runs(subject(), *runs).beam
    here = DescribedZone(1000.0, 5000.0, bottom=(BOTTOM,), cover=40.0, no_stirrups=True)
    layout = lay_out(beam, [here], clear_spacing=lambda diameter: 1.4 * diameter)
    assert len(layout.bars) == 4
    for bar in layout.bars:
        before, behind = bar.start - 1000.0, 5000.0 - bar.end
        assert (bar.start_anchor is Anchor.ANCHORED) == (before >= 100.0 * 25.2)
        assert (bar.end_anchor is Anchor.ANCHORED) == (behind >= 100.0 * 25.2)


def test_bars_given_by_number_end_at_a_deep_step() -> None:
    deep, nib = box(300, 0, 600), box(300, 300, 600)
    bars = laid_out([Run(0.0, 300.0, nib), Run(300.0, LENGTH, deep)], bottom=(BOTTOM,), top=(TOP,))
    bottom = sorted((bar.start, bar.end, bar.z) for bar in bars if bar.designation == "25M")
    assert bottom == [
        (0.0, 300.0, pytest.approx(352.6)), (300.0, LENGTH, pytest.approx(52.6)),
    ]  # fmt: skip
    assert [(b.start, b.end) for b in bars if b.designation == "20M"] == [(0.0, LENGTH)]
