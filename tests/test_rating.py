"""Utilisation, rating factors and verdicts of whole batches."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from ifccheck.beam import Anchor, Case, Load, Reason, Verdict
from ifccheck.mechanics.arrays import Floats
from ifccheck.rating.elements import Elements
from ifccheck.rating.results import Rating
from ifccheck.rating.subject import Subject
from ifccheck.rating.utilisation import peaks_of, worst_of
from tests.made_subjects import held, line, point, rated, scaled, subject

loads_of_floor = st.floats(2.0, 25.0)
forces = st.floats(5e3, 250e3)
places = st.floats(300.0, 5700.0)
beams = st.builds(
    lambda width, depth, bottom, spacing, floor, force, at: subject(
        width=width, depth=depth, bottom=bottom, spacing=spacing,
        loads=(line("floor", floor), point("press", force, at)),
    ),
    st.sampled_from([250.0, 300.0, 400.0]), st.floats(400.0, 900.0), st.integers(2, 6),
    st.floats(100.0, 600.0), loads_of_floor, forces, places,
)  # fmt: skip


def utilisations(rating: Rating) -> Floats:
    return np.array([state.utilisation for state in rating.limit_states])


def test_a_simple_beam_by_hand() -> None:
    """Span 5.8 m, 24 kN/m3 on 300 x 600, 10 kN/m floor: Mf = (1.25 x 4.32 + 1.5 x 10) 5.8^2/8.

    Mr of 3-25M at d = 538 with 2-20M on top: compression steel counts, so the resistance lies
    a little above that of the singly reinforced section, phi_s As fy (d - a/2) with
    a = 510e3/(0.805 x 0.65 x 30 x 300) = 108.3: 246.8 kN*m.
    """
    _, (rating,) = rated(subject(loads=(line("floor", 10.0),)))
    flexure = rating.limit_states[0]
    assert flexure.demand == pytest.approx((1.25 * 4.32 + 15.0) * 5.8**2 / 8 * 1e6, rel=1e-9)
    assert 246.8e6 < flexure.resistance < 1.06 * 246.8e6
    assert rating.verdict is Verdict.ADEQUATE
    assert flexure.position == pytest.approx(3000.0, abs=1.0)


@settings(deadline=None, max_examples=25)
@given(st.lists(beams, min_size=2, max_size=6), st.sampled_from(["general", "simplified"]))
def test_a_batch_gives_what_its_beams_give_alone(some: list[Subject], method: str) -> None:
    named = [_renamed(beam, f"beam {i}") for i, beam in enumerate(some)]
    _, together = rated(*named, method=method)
    for beam, rating in zip(named, together, strict=True):
        _, (alone,) = rated(beam, method=method)
        np.testing.assert_allclose(utilisations(rating), utilisations(alone), rtol=1e-9)
        assert rating.verdict == alone.verdict
        for safe, same in zip(rating.safe_loads, alone.safe_loads, strict=True):
            assert safe.factor == pytest.approx(same.factor, rel=1e-7, nan_ok=True)


def _renamed(beam: Subject, key: str) -> Subject:
    return replace(
        beam,
        beam=replace(beam.beam, key=key),
        loads=tuple(load._replace(beam=key) for load in beam.loads),
    )


@settings(deadline=None, max_examples=25)
@given(beams, st.sampled_from(["general", "simplified"]))
@example(
    # the greatest moment stands elsewhere under 33 times the press
    subject(
        width=250.0, depth=400.0, bottom=4, spacing=100.0,
        loads=(line("floor", 23.0), point("press", 5000.0, 333.0)),
    ),
    "simplified",
)  # fmt: skip
def test_the_rating_factor_is_where_the_beam_begins_to_fall_short(
    beam: Subject, method: str
) -> None:
    _, (rating,) = rated(beam, method=method)
    (safe,) = rating.safe_loads
    if not math.isfinite(safe.factor) or safe.factor == 0.0:
        return
    for share, exceeds in ((1.0 - 1e-6, False), (1.0 + 1e-4, True)):
        _, (at,) = rated(scaled(beam, "press", safe.factor * share), method=method)
        greatest = np.max(np.where(np.isnan(utilisations(at)), np.inf, utilisations(at)))
        assert (greatest > 1.0) == exceeds, (safe, share, utilisations(at))


@settings(deadline=None, max_examples=25)
@given(beams, st.floats(0.05, 4.0))
def test_flexure_is_linear_in_the_load(beam: Subject, factor: float) -> None:
    alone = replace(beam, unit_weight=beam.unit_weight._replace(value=1e-15))
    grown = scaled(scaled(alone, "press", factor), "floor", factor)
    _, (first, second) = rated(_renamed(alone, "a"), _renamed(grown, "b"))
    assert second.limit_states[0].utilisation == pytest.approx(
        factor * first.limit_states[0].utilisation, rel=1e-6, nan_ok=True
    )


@settings(deadline=None, max_examples=25)
@given(beams)
def test_a_mirrored_beam_is_as_good(beam: Subject) -> None:
    length = beam.beam.length
    turned = replace(
        beam,
        loads=tuple(
            load._replace(start=length - load.end, end=length - load.start) for load in beam.loads
        ),
    )
    _, (one, other) = rated(_renamed(beam, "a"), _renamed(turned, "b"))
    np.testing.assert_allclose(utilisations(one), utilisations(other), rtol=1e-6)


def test_a_factor_of_zero_where_the_rest_alone_exceeds() -> None:
    _, (rating,) = rated(subject(loads=(line("floor", 90.0), point("press", 1e3, 3000.0))))
    assert rating.verdict is Verdict.FALLS_SHORT
    assert rating.safe_loads[0].factor == 0.0
    assert "alone exceed" in rating.safe_loads[0].text


def test_a_case_that_never_governs_is_not_limited() -> None:
    _, (rating,) = rated(subject(loads=(line("floor", 5.0), point("press", 1.0, 3000.0))))
    assert math.isinf(rating.safe_loads[0].factor)
    assert rating.safe_loads[0].text == "not limited"


def test_a_lifting_case_is_limited_by_the_top() -> None:
    """A case that lifts relieves sagging first and then tensions the top.

    The factor cannot exceed that at which 1.5 k P l/4 - 0.9 own reaches the hogging resistance
    of the top bars, at most phi_s fy As (h - 60) = 0.85 x 400 x 600 x 540 = 110 kN*m.
    """
    _, (rating,) = rated(subject(loads=(line("floor", 5.0), point("press", -30e3, 3000.0))))
    (safe,) = rating.safe_loads
    own = 0.9 * 4.32 * 5.8**2 / 8
    assert 1.0 < safe.factor <= (110.16 + own) / (1.5 * 30 * 5.8 / 4)
    assert safe.governing != "flexure, sagging"


def test_a_nan_is_never_dropped() -> None:
    """Three stations of two elements each: two of the first beam, one of the second."""
    utilisation = np.array([0.5, 0.1, np.nan, 0.3, 0.2, 0.4])
    first = np.array([0, 2, 4])
    station = np.repeat(np.arange(3), 2)
    nothing, never = np.zeros((5, 6)), np.zeros(6, dtype=np.bool_)
    elements = Elements(
        element=np.array([0, 3, 1, 4, 2, 5]), station=station, beam=station // 2,
        first_of_station=first, first_of_beam=np.array([0, 4]),
        total=nothing, shares=(), can_sag=never, can_hog=never,
    )  # fmt: skip
    worst = worst_of(peaks_of(utilisation, np.ones(6), first, station), elements)
    assert worst.incomplete.tolist() == [True, False]
    assert worst.utilisation.tolist() == [0.5, 0.4]
    assert worst.shown.tolist() == [1, 5]


@settings(deadline=None, max_examples=25)
@given(st.lists(beams, min_size=1, max_size=4), st.sampled_from(["general", "simplified"]))
def test_every_arrangement_left_out_equals_one_that_is_evaluated(
    some: list[Subject], method: str
) -> None:
    """The whole check at every arrangement finds no utilisation above those of the elements."""
    batch, _ = rated(*(_renamed(beam, f"beam {i}") for i, beam in enumerate(some)), method=method)
    for found in batch.states:
        whole = found.state.check(batch.prepared, batch.demand).utilisation
        missing = np.isnan(whole)
        known = np.where(missing, 0.0, whole).max(axis=(0, 1))
        greatest = np.maximum.reduceat(known, batch.first[:-1])
        np.testing.assert_allclose(found.worst.utilisation, greatest, rtol=1e-12)
        incomplete = np.logical_or.reduceat(missing.any(axis=(0, 1)), batch.first[:-1])
        np.testing.assert_array_equal(found.worst.incomplete, incomplete)
        shown = np.where(incomplete & (greatest <= 1.0), np.nan, greatest)
        np.testing.assert_allclose(found.shown.utilisation, shown, rtol=1e-12)


def test_unknown_stirrup_legs_leave_the_beam_not_rated() -> None:
    _, (rating,) = rated(subject(legs=None, loads=(line("floor", 3.0),)))
    assert rating.verdict is Verdict.NOT_RATED
    assert any("legs of the stirrups are not stated" in r.text for r in rating.reasons)


def test_a_doubt_never_hides_a_beam_that_falls_short() -> None:
    doubtful = replace(
        subject(loads=(line("floor", 200.0),)), reasons=(Reason("no load assigned", False),)
    )
    _, (rating,) = rated(doubtful)
    assert rating.verdict is Verdict.FALLS_SHORT


def test_a_doubt_keeps_a_sound_beam_from_being_adequate() -> None:
    doubtful = replace(
        subject(loads=(line("floor", 3.0),)), reasons=(Reason("reactions not included", False),)
    )
    _, (rating,) = rated(doubtful)
    assert rating.verdict is Verdict.NOT_RATED
    assert math.isnan(rating.utilisation)


def test_no_bars_on_the_tensioned_face_falls_short() -> None:
    _, (rating,) = rated(subject(bottom=0, loads=(line("floor", 3.0),)))
    assert rating.verdict is Verdict.FALLS_SHORT
    assert math.isinf(rating.utilisation)


def test_straight_bars_that_end_at_the_face_carry_no_longitudinal_tension() -> None:
    """A bar's stress is nothing at its end (12.2): at the face of a support of no width the
    longitudinal tension of 11.3.9 finds no steel."""
    loads = (line("floor", 10.0),)
    _, (anchored, straight) = rated(
        _renamed(subject(loads=loads, bearing=0.0), "a"),
        _renamed(subject(loads=loads, bearing=0.0, anchor=Anchor.STRAIGHT), "b"),
    )
    assert anchored.verdict is Verdict.ADEQUATE
    assert straight.verdict is Verdict.FALLS_SHORT


def test_more_load_cases_change_nothing_where_they_are_empty() -> None:
    cases = (
        Case("self", "permanent"), Case("floor", "imposed"),
        Case("press", "imposed", rated=True), Case("snow", "snow"),
    )  # fmt: skip
    beam = subject(loads=(line("floor", 10.0), point("press", 40e3, 2000.0)))
    _, (without,) = rated(beam)
    _, (with_snow,) = rated(beam, cases=cases)
    assert with_snow.utilisation == pytest.approx(without.utilisation, rel=1e-12)


def test_a_tensioned_face_of_which_no_source_speaks_is_not_rated() -> None:
    loads = (line("floor", 3.0),)
    unknown = replace(subject(bottom=0, loads=loads), silent=("bottom",))
    unneeded = replace(subject(top=0, loads=loads), silent=("top",))
    _, (not_rated, sound) = rated(_renamed(unknown, "a"), _renamed(unneeded, "b"))
    assert not_rated.verdict is Verdict.NOT_RATED
    assert "bottom are not stated" in not_rated.reasons[0].text
    assert sound.verdict is Verdict.ADEQUATE


def cantilever(bars_stop_before_the_tip: float) -> Subject:
    beam = subject(
        length=2200.0, top=4, bearing=0.0, ends=("fixed", "free"),
        loads=(line("floor", 10.0, length=2200.0), point("press", 20e3, 2180.0)),
    )  # fmt: skip
    bars = tuple(replace(bar, end=2200.0 - bars_stop_before_the_tip) for bar in beam.bars)
    return held(replace(beam, bars=bars), faces=(0.0, 2200.0))


def test_bars_that_stop_in_the_end_cover_of_a_cantilever_serve_it() -> None:
    """Bars stop a cover short of a tip in every cantilever; a load at the very tip still acts."""
    _, (rating,) = rated(cantilever(40.0))
    assert rating.verdict is Verdict.ADEQUATE
    hogging = rating.limit_states[1]
    own, floor = 1.25 * 24e-6 * 300 * 600, 1.5 * 10.0
    by_hand = (own + floor) * 2200**2 / 2 + 1.5 * 20e3 * 2180
    assert hogging.demand == pytest.approx(by_hand, rel=1e-9)


def test_bars_that_stop_well_before_the_tip_leave_it_without_steel() -> None:
    _, (rating,) = rated(cantilever(400.0))
    assert rating.verdict is Verdict.FALLS_SHORT
    assert math.isinf(rating.utilisation)


def test_no_beam_falls_short_just_below_its_factor_where_utilisation_has_humps() -> None:
    """With end moments and loads from the side, longitudinal tension drops as a case grows past
    the place where the moment outdoes the shear: the first crossing counts."""
    random = np.random.default_rng(2)
    made = []
    for number in range(250):
        key, length = f"beam {number}", float(random.choice([3000.0, 4500.0, 6000.0]))
        twist = float(random.uniform(-60e6, 60e6))
        loads = (
            line("floor", float(random.uniform(1.0, 20.0)), key, length),
            Load(key, "floor", "moment", 100.0, 100.0, (twist, twist)),
            point(
                "press", float(random.uniform(300.0, 60e3)),
                float(random.uniform(300.0, length - 300.0)), key,
            ),
        )  # fmt: skip
        beam = subject(
            key=key, length=length,
            bottom=int(random.integers(2, 6)), top=int(random.integers(2, 5)),
            spacing=float(random.choice([100.0, 200.0, 300.0])), loads=loads,
        )  # fmt: skip
        made.append(replace(beam, side_loaded=True))
    _, ratings = rated(*made)
    limited = [
        (beam, rating.safe_loads[0].factor)
        for beam, rating in zip(made, ratings, strict=True)
        if 0.0 < rating.safe_loads[0].factor < math.inf
    ]
    assert len(limited) > 200
    # Just above, the stations where moments turn have moved a little; further up, a hump is over.
    for share, exceeds in ((1.0 - 1e-6, False), (1.002, True)):
        _, found = rated(*(scaled(beam, "press", factor * share) for beam, factor in limited))
        greatest = [np.max(np.nan_to_num(utilisations(rating), nan=np.inf)) for rating in found]
        assert [value > 1.0 for value in greatest] == [exceeds] * len(limited)
