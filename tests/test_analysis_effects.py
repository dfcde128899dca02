"""Cases put together, against every choice of factors tried one by one."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
)
from ifccheck.analysis.effects import Effects, case_share, combine, demands
from ifccheck.analysis.loads import LINE, MOMENT, POINT, LoadTable, by_beam
from ifccheck.analysis.peaks import case_peaks
from ifccheck.analysis.spans import FIXED, FREE, PINNED, SpanTable
from ifccheck.analysis.statics import CaseEffects, case_effects
from ifccheck.analysis.stations import Places, StationTable, critical_rows, make_stations, places
from ifccheck.analysis.turns import turning_places

PAIRS = (
    (PINNED, PINNED),
    (PINNED, FIXED),
    (FIXED, PINNED),
    (FIXED, FIXED),
    (FIXED, FREE),
    (FREE, FIXED),
)
LENGTH = 8000.0
FACTORS = np.array(
    [
        [[1.4, 0.9], [0.0, 0.0], [0.0, 0.0]],
        [[1.25, 0.9], [1.5, 0.0], [1.0, 0.0]],
        [[1.25, 0.9], [1.0, 0.0], [1.25, 0.9]],
    ]
)
NONE = Places(np.empty(0, np.intp), np.empty(0), np.empty(0, np.bool_))

Drawn = tuple[int, int, float, float, float]


def loads_of(drawn: list[Drawn], beams: int) -> LoadTable:
    """The same loads on every beam: case, kind, two parts of the length and a value."""
    rows = []
    for beam in range(beams):
        for case, kind, first, last, value in drawn:
            a, b = sorted((first * LENGTH, last * LENGTH))
            size = value * {LINE: 1.0, POINT: 1e3, MOMENT: 1e6}[kind]
            rows.append((beam, case, kind, a, b if kind == LINE else a, size))
    beam, case, kind, a, b, value = (np.array(column) for column in zip(*rows, strict=True))
    return by_beam(LoadTable(beam, case, kind, a, b, value, value))


def six_spans() -> SpanTable:
    start_kind, end_kind = (np.array(part) for part in zip(*PAIRS, strict=True))
    return SpanTable(np.zeros(6), np.full(6, LENGTH), start_kind, end_kind)


def solved(drawn: list[Drawn], extra: Places = NONE) -> tuple[StationTable, CaseEffects]:
    spans, loads = six_spans(), loads_of(drawn, 6)
    stations = make_stations(spans, loads, extra, divisions=10)
    return stations, case_effects(spans, loads, stations, 3)


values = st.floats(0.5, 40.0) | st.floats(-40.0, -0.5)
one_load = st.tuples(
    st.integers(0, 2),
    st.sampled_from([LINE, POINT, MOMENT]),
    st.integers(0, 16).map(lambda n: n / 16.0),
    st.integers(0, 16).map(lambda n: n / 16.0),
    values,
)
some_loads = st.lists(one_load, min_size=2, max_size=6)


def all_choices(cases: CaseEffects, factors: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Moment and shear of every choice of greater and lesser factors in one combination."""
    chosen = np.array(list(product(*factors)))
    return chosen @ cases.moment, chosen @ cases.shear


@settings(max_examples=60, deadline=None)
@given(some_loads)
def test_each_extreme_is_the_worst_choice_with_the_worst_that_comes_with_it(
    drawn: list[Drawn],
) -> None:
    _, cases = solved(drawn)
    effects = combine(cases, FACTORS)
    for combination, factors in enumerate(FACTORS):
        moments, shears = all_choices(cases, factors)
        for arrangement, own, other, sign in (
            (GREATEST_MOMENT, moments, shears, 1.0),
            (LEAST_MOMENT, moments, shears, -1.0),
            (GREATEST_SHEAR, shears, moments, 1.0),
            (LEAST_SHEAR, shears, moments, -1.0),
        ):
            of_moment = arrangement in (GREATEST_MOMENT, LEAST_MOMENT)
            ours = (effects.moment if of_moment else effects.shear)[combination, arrangement]
            with_it = (effects.shear if of_moment else effects.moment)[combination, arrangement]
            scale, scale_other = np.abs(own).max() + 1e-9, np.abs(other).max() + 1e-9
            worst = (own * sign).max(axis=0) * sign
            np.testing.assert_allclose(ours, worst, atol=1e-12 * scale)
            tied = (own * sign >= (own * sign).max(axis=0) - 1e-12 * scale) * np.abs(other)
            np.testing.assert_allclose(
                np.abs(with_it), tied.max(axis=0), atol=1e-9 * scale_other, rtol=1e-9
            )


@settings(max_examples=40, deadline=None)
@given(some_loads)
def test_the_parts_of_the_cases_make_up_the_whole(drawn: list[Drawn]) -> None:
    _, cases = solved(drawn)
    effects = combine(cases, FACTORS)
    shares = [case_share(effects, case) for case in range(3)]
    for whole, part in ((effects.moment, 0), (effects.shear, 1)):
        total = sum(share[part] for share in shares)
        np.testing.assert_allclose(total, whole, atol=1e-12 * (np.abs(whole).max() + 1e-9))


def test_a_permanent_case_is_taken_as_a_whole_and_a_passing_one_only_where_it_harms() -> None:
    """Pinned, even permanent 2 over 8, passing 6 upward in the middle: midspan 16 and -12."""
    spans = SpanTable(np.zeros(1), np.full(1, 8.0), np.array([PINNED]), np.array([PINNED]))
    loads = LoadTable(
        np.array([0, 0]),
        np.array([0, 1]),
        np.array([LINE, POINT]),
        np.array([0.0, 4.0]),
        np.array([8.0, 4.0]),
        np.array([2.0, -6.0]),
        np.array([2.0, -6.0]),
    )
    stations = make_stations(spans, loads, NONE, divisions=4)
    effects = combine(
        case_effects(spans, loads, stations, 2), np.array([[[1.25, 0.9], [1.5, 0.0]]])
    )
    middle = np.flatnonzero(stations.x == 4.0)[0]
    assert effects.moment[0, GREATEST_MOMENT, middle] == pytest.approx(1.25 * 16.0)
    assert effects.moment[0, LEAST_MOMENT, middle] == pytest.approx(0.9 * 16.0 - 1.5 * 12.0)
    assert effects.shear[0, GREATEST_SHEAR, 0] == pytest.approx(1.25 * 8.0)
    assert effects.shear[0, LEAST_SHEAR, 0] == pytest.approx(0.9 * 8.0 - 1.5 * 3.0)


def own_rows(stations: StationTable) -> np.ndarray:
    return np.arange(len(stations.x))


def extremes(effects: Effects) -> np.ndarray:
    """The driven effect of each of the four arrangements (C, 4, N)."""
    return np.concatenate([effects.moment[:, :2], effects.shear[:, 2:]], axis=1)


@settings(max_examples=40, deadline=None)
@given(some_loads, st.floats(0.01, 30.0))
def test_demand_is_linear_in_the_loads_of_a_scaled_case(drawn: list[Drawn], factor: float) -> None:
    """Against the case's loads multiplied from the outset."""
    _, cases = solved(drawn)
    grown = case_effects_grown(drawn, factor)
    stations = StationTable(cases.beam, cases.x, np.zeros(len(cases.x), np.intp))
    given_ = demands(combine(cases, FACTORS), own_rows(stations), [1])
    direct = demands(combine(grown, FACTORS), own_rows(stations))
    total, (share,) = given_.total, given_.shares
    driven = np.array([True, True, False, False])[None, :, None]
    for name in ("moment", "shear", "critical_shear", "peak_sagging", "peak_hogging"):
        ours = getattr(total, name) + (factor - 1.0) * getattr(share, name)
        wanted = getattr(direct.total, name)
        where = driven if name == "moment" else ~driven if "shear" in name else driven | ~driven
        scale = np.abs(wanted).max() + np.abs(getattr(total, name)).max() + 1e-9
        difference = np.where(where, ours - wanted, 0.0)
        np.testing.assert_allclose(difference, 0.0, atol=3e-6 * scale)


def case_effects_grown(drawn: list[Drawn], factor: float) -> CaseEffects:
    grown = [(c, k, a, b, v * factor if c == 1 else v) for c, k, a, b, v in drawn]
    return solved(grown)[1]


@settings(max_examples=40, deadline=None)
@given(some_loads, st.floats(0.0, 50.0))
def test_no_multiple_of_a_scaled_case_bends_a_beam_where_it_was_said_not_to(
    drawn: list[Drawn], factor: float
) -> None:
    _, cases = solved(drawn)
    given_ = demands(combine(cases, FACTORS), np.arange(len(cases.x)), [1])
    total, (share,) = given_.total, given_.shares
    moment = total.moment + (factor - 1.0) * share.moment
    slack = 1e-8 * (np.abs(total.moment) + factor * np.abs(share.moment))
    assert (total.can_sag | (moment <= slack)).all()
    assert (total.can_hog | (moment >= -slack)).all()
    np.testing.assert_array_equal(share.can_sag, total.can_sag)


def test_where_nothing_bends_the_stations_beside_it_say_which_face_is_pulled() -> None:
    _, cases = solved([(0, LINE, 0.0, 1.0, 10.0)])
    total = demands(combine(cases, FACTORS[:1]), np.arange(len(cases.x))).total
    simple = cases.beam == 0
    assert total.moment[0, 0, simple][0] == 0.0
    assert total.can_sag[0, 0, simple].all()
    assert not total.can_hog[0, 0, simple].any()
    cantilever = cases.beam == 4
    assert total.can_hog[0, 0, cantilever].all()
    assert not total.can_sag[0, 0, cantilever].any()


@settings(max_examples=60, deadline=None)
@given(some_loads)
def test_the_peaks_of_a_case_bound_its_moments_between_stations_too(drawn: list[Drawn]) -> None:
    """Against a far finer division of the same beams."""
    spans, loads = six_spans(), loads_of(drawn, 6)
    cases = case_effects(spans, loads, make_stations(spans, loads, NONE), 3)
    fine = case_effects(spans, loads, make_stations(spans, loads, NONE, 1000), 3)
    for sign, peaks in zip((1.0, -1.0), case_peaks(cases), strict=True):
        for beam in range(6):
            true = (fine.moment[:, fine.beam == beam] * sign).max(axis=1).clip(min=0.0)
            size = np.abs(fine.moment[:, fine.beam == beam]).max(axis=1)
            assert (peaks[:, beam] >= true - 1e-9 * size).all()
            assert (peaks[:, beam] <= true + 0.03 * size).all()


def test_the_bound_of_the_peaks_adds_the_cases_with_their_greater_factors() -> None:
    """Simple span 8 m: 10 N/mm gives 80 kN m, 16 kN in the middle 32 kN m; 1.25, 1.5."""
    _, cases = solved([(0, LINE, 0.0, 1.0, 10.0), (1, POINT, 0.5, 0.5, 16.0)])
    given_ = demands(combine(cases, FACTORS[1:2]), np.arange(len(cases.x)), [1])
    simple = cases.beam == 0
    bound = 1.25 * 80e6 + 1.5 * 32e6
    assert given_.total.peak_sagging.shape == given_.total.moment.shape
    np.testing.assert_allclose(given_.total.peak_sagging[..., simple], bound, rtol=1e-6)
    np.testing.assert_allclose(given_.total.peak_hogging[..., simple], 0.0)
    np.testing.assert_allclose(given_.shares[0].peak_sagging[..., simple], 1.5 * 32e6, rtol=1e-6)


def with_critical(drawn: list[Drawn]) -> tuple[StationTable, CaseEffects, np.ndarray]:
    start, end = np.full(6, 500.0), np.full(6, LENGTH - 500.0)
    extra = [places(np.arange(6), x, two_sided=False) for x in (start, end)]
    joined = Places(
        *(np.concatenate(p) for p in zip(*((e.beam, e.x, e.two_sided) for e in extra), strict=True))
    )
    stations, cases = solved(drawn, joined)
    return stations, cases, critical_rows(stations, start, end)


def test_nearer_stations_use_the_shear_at_the_critical_section_where_the_end_is_pressed() -> None:
    stations, cases, critical = with_critical([(0, LINE, 0.0, 1.0, 10.0)])
    total = demands(combine(cases, FACTORS[:1]), critical).total
    simple, tip = stations.beam == 0, stations.beam == 4
    checked = total.critical_shear[0, GREATEST_SHEAR, simple]
    assert total.shear[0, GREATEST_SHEAR, simple][0] == pytest.approx(1.4 * 10.0 * 4000.0)
    assert checked[0] == pytest.approx(1.4 * 10.0 * 3500.0)
    assert total.critical_shear[0, LEAST_SHEAR, simple][-1] == pytest.approx(-1.4 * 10.0 * 3500.0)
    # At the root of a cantilever too; towards its tip nothing presses, and each keeps its own.
    assert total.critical_shear[0, GREATEST_SHEAR, tip][0] == pytest.approx(1.4 * 10.0 * 7500.0)
    near_tip = stations.x[tip] > LENGTH - 500.0
    np.testing.assert_array_equal(
        total.critical_shear[0, :, tip][near_tip], total.shear[0, :, tip][near_tip]
    )


def test_an_end_that_lifts_keeps_its_own_shear() -> None:
    """Self weight presses, the passing case lifts: the least shear at the start is negative."""
    stations, cases, critical = with_critical(
        [(0, LINE, 0.0, 1.0, 1.0), (1, LINE, 0.0, 1.0, -10.0)]
    )
    total = demands(combine(cases, FACTORS[1:2]), critical).total
    first = int(np.flatnonzero(stations.beam == 0)[0])
    assert total.shear[0, LEAST_SHEAR, first] < 0.0
    assert total.critical_shear[0, LEAST_SHEAR, first] == total.shear[0, LEAST_SHEAR, first]
    assert total.critical_shear[0, GREATEST_SHEAR, first] == pytest.approx(1.25 * 1.0 * 3500.0)


def test_a_scaled_case_that_may_lift_the_end_takes_the_critical_section_away() -> None:
    """At full value the end is pressed; ten times the passing case would lift it."""
    stations, cases, critical = with_critical(
        [(0, LINE, 0.0, 1.0, 10.0), (1, LINE, 0.0, 1.0, -1.0)]
    )
    effects = combine(cases, FACTORS[1:2])
    first = int(np.flatnonzero(stations.beam == 0)[0])
    fixed = demands(effects, critical).total
    assert fixed.critical_shear[0, LEAST_SHEAR, first] < fixed.shear[0, LEAST_SHEAR, first]
    scaled = demands(effects, critical, [1])
    assert (
        scaled.total.critical_shear[0, LEAST_SHEAR, first]
        == scaled.total.shear[0, LEAST_SHEAR, first]
    )
    share = scaled.shares[0]
    assert share.critical_shear[0, LEAST_SHEAR, first] == share.shear[0, LEAST_SHEAR, first]


def test_stations_where_the_moment_turns_find_the_greatest_moment() -> None:
    """Even load, one end fixed: 9/128 w L^2 at 5/8 L (from memory: AISC beam diagrams), which no
    twelfth of the span meets."""
    spans = SpanTable(np.zeros(1), np.full(1, LENGTH), np.array([FIXED]), np.array([PINNED]))
    drawn: list[Drawn] = [(0, LINE, 0.0, 1.0, 10.0), (1, LINE, 0.0, 1.0, 5.0)]
    loads = loads_of(drawn, 1)
    coarse = make_stations(spans, loads, NONE, 12)
    first = combine(case_effects(spans, loads, coarse, 3), FACTORS)
    beam, x = turning_places(first.cases, FACTORS).places()
    np.testing.assert_allclose(x, 5.0 / 8.0 * LENGTH, rtol=1e-6)
    finer = make_stations(spans, loads, places(beam, x, two_sided=False), 12)
    second = combine(case_effects(spans, loads, finer, 3), FACTORS)
    peak = 9.0 / 128.0 * (1.25 * 10.0 + 1.5 * 5.0) * LENGTH**2
    assert first.moment[1].max() < 0.999 * peak
    assert second.moment[1].max() == pytest.approx(peak, rel=1e-9)


@settings(max_examples=30, deadline=None)
@given(some_loads)
def test_no_moment_between_stations_exceeds_that_at_the_turning_places(drawn: list[Drawn]) -> None:
    spans, loads = six_spans(), loads_of(drawn, 6)
    coarse = make_stations(spans, loads, NONE)
    beam, x = turning_places(case_effects(spans, loads, coarse, 3), FACTORS).places()
    found = make_stations(spans, loads, places(beam, x, two_sided=False))
    fine = make_stations(spans, loads, NONE, 2000)
    ours = combine(case_effects(spans, loads, found, 3), FACTORS)
    true = combine(case_effects(spans, loads, fine, 3), FACTORS)
    for row in range(6):
        size = np.abs(true.moment[..., true.cases.beam == row]).max()
        for arrangement, sign in ((GREATEST_MOMENT, 1.0), (LEAST_MOMENT, -1.0)):
            best = (ours.moment[:, arrangement, ours.cases.beam == row] * sign).max(axis=1)
            truth = (true.moment[:, arrangement, true.cases.beam == row] * sign).max(axis=1)
            assert (best >= truth - 1e-3 * size).all()


def test_a_moment_that_changes_sign_and_back_between_two_stations_is_found() -> None:
    """Pinned, a load that lifts on the first sixteenth and then presses: hogging near the start
    only, between a station without moment and one that sags."""
    drawn: list[Drawn] = [(0, LINE, 0.0, 0.0625, -6.0), (0, LINE, 0.0, 0.125, 3.0)]
    spans, loads = six_spans(), loads_of(drawn, 6)
    coarse = combine(case_effects(spans, loads, make_stations(spans, loads, NONE), 3), FACTORS)
    simple = coarse.cases.beam == 0
    assert not (coarse.moment[:, LEAST_MOMENT, simple] < 0.0).any()
    beam, x = turning_places(coarse.cases, FACTORS).places()
    stations = make_stations(spans, loads, places(beam, x, two_sided=False))
    finer = combine(case_effects(spans, loads, stations, 3), FACTORS)
    assert (finer.moment[:, LEAST_MOMENT, stations.beam == 0] < 0.0).any()


def test_rows_are_taken_together() -> None:
    """Demand.take serves the pipeline's beams: all fields keep one shape."""
    _, cases = solved([(0, LINE, 0.0, 1.0, 10.0)])
    total = demands(combine(cases, FACTORS), np.arange(len(cases.x))).total
    few = total.take(np.array([3, 3, 5]))
    assert few.can_sag.shape == few.moment.shape == (3, 4, 3)
    np.testing.assert_array_equal(few.peak_sagging, total.peak_sagging[..., [3, 3, 5]])
