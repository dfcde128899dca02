"""Statics of single spans against sympy's beams, published cases and equilibrium."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.loads import LINE, MOMENT, POINT, LoadTable, by_beam
from ifccheck.analysis.spans import FIXED, FREE, PINNED, SpanTable
from ifccheck.analysis.statics import CaseEffects, case_effects, join_effects
from ifccheck.analysis.stations import Places, StationTable, insert_stations, make_stations

PAIRS = (
    (PINNED, PINNED),
    (PINNED, FIXED),
    (FIXED, PINNED),
    (FIXED, FIXED),
    (FIXED, FREE),
    (FREE, FIXED),
)
KINDS = {"line": LINE, "point": POINT, "moment": MOMENT}
SUPPORTS = {"free": FREE, "pinned": PINNED, "fixed": FIXED}
PUBLISHED = yaml.safe_load((Path(__file__).parent / "published" / "statics.yaml").read_text())
NO_PLACES = Places(np.empty(0, np.intp), np.empty(0), np.empty(0, np.bool_))

Row = tuple[int, int, int, float, float, float, float]
"""beam, case, kind, start, end, value at the start, value at the end"""


def table(rows: list[Row]) -> LoadTable:
    columns = list(zip(*rows, strict=True)) if rows else [()] * 7
    whole = [np.array(column, np.intp) for column in columns[:3]]
    return by_beam(LoadTable(*whole, *(np.array(column, float) for column in columns[3:])))


def span_rows(rows: list[tuple[float, float, int, int]]) -> SpanTable:
    start, end, start_kind, end_kind = zip(*rows, strict=True)
    return SpanTable(
        np.array(start, float), np.array(end, float), np.array(start_kind), np.array(end_kind)
    )


def solved(
    spans: SpanTable, loads: LoadTable, cases: int = 1, divisions: int = 40
) -> tuple[StationTable, CaseEffects]:
    stations = make_stations(spans, loads, NO_PLACES, divisions)
    return stations, case_effects(spans, loads, stations, cases)


# --- sympy -----------------------------------------------------------------------------------


def random_rows(random: np.random.Generator, beam: int, span: int) -> list[Row]:
    """Loads at places that are whole eighths, so that sympy keeps exact fractions."""
    rows: list[Row] = []
    for kind in random.integers(0, 3, size=4).tolist():
        first, last = np.sort(random.choice(8 * span + 1, 2, replace=False)) / 8.0
        one, two = (random.integers(-20, 40, size=2) / 4.0).tolist()
        end, two = (float(last), two) if kind == LINE else (float(first), one)
        rows.append((beam, 0, kind, float(first), end, one, two))
    return rows


def sympy_beam(span: int, pair: tuple[int, int], rows: list[Row]) -> Any:
    from sympy import Rational
    from sympy.physics.continuum_mechanics.beam import Beam

    beam = Beam(span, 1, 1)
    unknown = []
    for place, kind in ((0, pair[0]), (span, pair[1])):
        if kind == PINNED:
            unknown.append(beam.apply_support(place, "pin"))
        elif kind == FIXED:
            unknown.extend(beam.apply_support(place, "fixed"))
    for _, _, kind, start, end, one, two in rows:
        a, b, p, q = (Rational(v) for v in (start, end, one, two))
        if kind == LINE:
            beam.apply_load(p, a, 0, end=b)
            beam.apply_load((q - p) / (b - a), a, 1, end=b)
        else:
            beam.apply_load(p, a, -1 if kind == POINT else -2)
    beam.solve_for_reaction_loads(*unknown)
    return beam


def values_of(expression: Any, places: list[Any]) -> list[float]:
    """Sum of the terms c <x - a>^n of sympy's singularity functions at each place."""
    from sympy import Add, SingularityFunction

    terms = []
    for term in Add.make_args(expression.expand()):
        brackets = list(term.atoms(SingularityFunction))
        constant = term if not brackets else term / brackets[0]
        _, a, n = brackets[0].args if brackets else (None, None, None)
        terms.append((constant, a, n))
    results = []
    for place in places:
        total = 0.0
        for constant, a, n in terms:
            factor = float(constant.subs("x", place))
            if a is None:
                total += factor
            elif n >= 0 and place >= a:
                total += factor * float((place - a) ** n)
        results.append(total)
    return results


@pytest.mark.parametrize("pair", PAIRS)
def test_moment_shear_and_deflection_agree_with_sympy(pair: tuple[int, int]) -> None:
    from sympy import Rational

    random = np.random.default_rng(20240 + PAIRS.index(pair))
    spans_of = random.integers(2, 9, size=6).tolist()
    rows = [random_rows(random, beam, span) for beam, span in enumerate(spans_of)]
    spans = span_rows([(0.0, float(span), *pair) for span in spans_of])
    stations, effects = solved(spans, table([r for part in rows for r in part]), divisions=8)
    for beam, span in enumerate(spans_of):
        model = sympy_beam(span, pair, rows[beam])
        here = np.flatnonzero(stations.beam == beam)
        places = []
        for row in here:
            x = Rational(float(stations.x[row])).limit_denominator(64)
            inward = {0.0: 1, float(span): -1}.get(float(stations.x[row]), int(stations.side[row]))
            places.append(x + inward * Rational(1, 10**12))
        for ours, expression in (
            (effects.moment, model.bending_moment()),
            (effects.shear, model.shear_force()),
            (effects.deflection, model.deflection()),
        ):
            expected = np.array(values_of(expression, places))
            scale = np.abs(expected).max()
            assert scale > 0.0
            found = ours[0, here]
            counted = found != 0.0
            np.testing.assert_allclose(found[counted], expected[counted], atol=1e-9 * scale)
            assert (np.abs(expected[~counted]) <= 1.001e-6 * scale).all()


# --- published -------------------------------------------------------------------------------


def quantity(name: str, at: float, stations: StationTable, effects: CaseEffects) -> float:
    """A published quantity read from the effects of one case on one beam."""
    row = int(np.argmin(np.abs(stations.x - at))) if at is not None else 0
    step = np.diff(effects.deflection[0]) / np.where(
        np.diff(stations.x) > 0, np.diff(stations.x), 1
    )
    return {
        "reaction_start": effects.reactions[0, 0, 0],
        "reaction_end": effects.reactions[0, 0, 1],
        "moment": effects.moment[0, row],
        "deflection": effects.deflection[0, row],
        "greatest_moment": effects.moment[0].max(),
        "greatest_deflection": effects.deflection[0].max(),
        "slope_start": step[0],
        "slope_end": step[-1],
    }[name]


def id_of(case: dict[str, Any]) -> str:
    origin = case["source"] if case["seen"] else f"{case['source']} (from memory)"
    return f"{case['id']}: {case['topic']} [{origin}]"


@pytest.mark.parametrize("case", PUBLISHED, ids=id_of)
def test_published_cases(case: dict[str, Any]) -> None:
    rows: list[Row] = [
        (0, 0, KINDS[load["kind"]], load["from"], load.get("to", load["from"]), load["values"][0],
         load["values"][-1])
        for load in case["loads"]
    ]  # fmt: skip
    ends = (SUPPORTS[case["supports"][0]], SUPPORTS[case["supports"][1]])
    spans = span_rows([(0.0, float(case.get("span", 1.0)), *ends)])
    stations, effects = solved(spans, table(rows), divisions=10000)
    for wanted in case["expected"]:
        found = quantity(wanted["quantity"], wanted.get("at"), stations, effects)
        assert found == pytest.approx(wanted["value"], rel=case["tolerance_pct"] / 100.0)
        if wanted["quantity"].startswith("greatest") and "at" in wanted:
            of = effects.moment if wanted["quantity"].endswith("moment") else effects.deflection
            assert stations.x[np.argmax(of[0])] == pytest.approx(wanted["at"], abs=2e-4)


def test_every_single_span_case_of_the_shared_stock_is_covered(reference: Path) -> None:
    stock = [
        entry
        for entry in yaml.safe_load((reference / "statics.yaml").read_text())
        if entry["id"].startswith(("ST-SS-", "ST-FF-", "ST-PC-", "ST-CANT"))
    ]
    assert stock
    ours: dict[str, list[float]] = {}
    for case in PUBLISHED:
        for wanted in case["expected"]:
            ours.setdefault(case["id"], []).extend([abs(wanted["value"]), wanted.get("at", -1.0)])
    for entry in stock:
        for name, value in entry["outputs"].items():
            assert any(value == pytest.approx(v, rel=1e-6) for v in ours[entry["id"]]), (
                entry["id"],
                name,
            )


# --- laws ------------------------------------------------------------------------------------

lengths = st.floats(1500.0, 20000.0)
parts = st.floats(0.0, 1.0)
values = st.floats(-50.0, 50.0).filter(lambda v: v == 0.0 or abs(v) > 1e-3)
one_load = st.tuples(st.sampled_from([LINE, POINT, MOMENT]), parts, parts, values, values)
some_loads = st.lists(one_load, min_size=1, max_size=4)
pairs = st.sampled_from(PAIRS)
SIZES = {LINE: 1.0, POINT: 1e3, MOMENT: 1e6}


def rows_of(loads: list[Any], length: float, beam: int = 0, case: int = 0) -> list[Row]:
    rows = []
    for kind, first, last, one, two in loads:
        a, b = sorted((first * length, last * length))
        b, two = (b, two) if kind == LINE else (a, one)
        rows.append((beam, case, kind, a, b, one * SIZES[kind], two * SIZES[kind]))
    return rows


def total_size(rows: list[Row], length: float) -> float:
    """A size of moment that the loads can make [N*mm]."""
    size = {LINE: length * length, POINT: length, MOMENT: 1.0}
    return sum((abs(row[5]) + abs(row[6])) * size[row[2]] for row in rows)


@settings(max_examples=60, deadline=None)
@given(some_loads, lengths, pairs)
def test_shear_is_the_slope_of_the_moment(
    loads: list[Any], length: float, pair: tuple[int, int]
) -> None:
    """Between stations the shear is at most quadratic, so Simpson's rule is exact."""
    rows = rows_of(loads, length)
    spans = span_rows([(0.0, length, *pair)])
    coarse, _ = solved(spans, table(rows), divisions=5)
    between = np.flatnonzero(np.diff(coarse.x) > 1e-3)
    middles = (coarse.x[between] + coarse.x[between + 1]) / 2.0
    extra = Places(np.zeros(len(middles), np.intp), middles, np.zeros(len(middles), np.bool_))
    stations = make_stations(spans, table(rows), extra, 5)
    effects = case_effects(spans, table(rows), stations, 1)
    moment, shear = effects.moment[0], effects.shear[0]
    for middle in np.searchsorted(stations.x, middles - 1e-9):
        low, high = middle - 1, middle + 1
        area = (
            (stations.x[high] - stations.x[low])
            / 6.0
            * (shear[low] + 4.0 * shear[middle] + shear[high])
        )
        assert moment[high] - moment[low] == pytest.approx(
            area, rel=1e-9, abs=1e-5 * total_size(rows, length)
        )


@settings(max_examples=60, deadline=None)
@given(some_loads, lengths, pairs)
def test_the_supports_carry_the_whole_load(
    loads: list[Any], length: float, pair: tuple[int, int]
) -> None:
    rows = rows_of(loads, length)
    _, effects = solved(span_rows([(0.0, length, *pair)]), table(rows))
    force = sum(
        {LINE: (row[5] + row[6]) / 2.0 * (row[4] - row[3]), POINT: row[5], MOMENT: 0.0}[row[2]]
        for row in rows
    )
    about_start = sum(
        {
            LINE: (row[4] - row[3])
            * (row[5] * (2.0 * row[3] + row[4]) + row[6] * (row[3] + 2.0 * row[4]))
            / 6.0,
            POINT: row[5] * row[3],
            MOMENT: -row[5],
        }[row[2]]
        for row in rows
    )
    start, end = effects.reactions[0, 0]
    slack = 1e-9 * (total_size(rows, length) / length + 1e-3)
    assert start + end == pytest.approx(force, abs=slack)
    near, far = fixing_moments(effects, rows, length, pair)
    assert end * length + far - near == pytest.approx(about_start, abs=slack * length)


def fixing_moments(
    effects: CaseEffects, rows: list[Row], length: float, pair: tuple[int, int]
) -> tuple[float, float]:
    """Moments of the supports on the beam, as sagging moments, moment loads at the ends put
    back that the values just inside leave out."""
    at_start = sum(row[5] for row in rows if row[2] == MOMENT and row[3] <= 1e-6)
    at_end = sum(row[5] for row in rows if row[2] == MOMENT and row[3] >= length - 1e-6)
    start, end = effects.end_moments[0, 0]
    near = start + at_start if pair[0] == FIXED else 0.0
    far = end - at_end if pair[1] == FIXED else 0.0
    return near, far


@settings(max_examples=60, deadline=None)
@given(some_loads, lengths, pairs)
def test_a_mirrored_beam_mirrors_its_effects(
    loads: list[Any], length: float, pair: tuple[int, int]
) -> None:
    rows = rows_of(loads, length)
    mirrored: list[Row] = []
    for _, _, kind, a, b, one, two in rows:
        sign = -1.0 if kind == MOMENT else 1.0
        # Seen from behind, a moment load turns the other way.
        mirrored.append((1, 0, kind, length - b, length - a, sign * two, sign * one))
    spans = span_rows([(0.0, length, *pair), (0.0, length, pair[1], pair[0])])
    at = np.linspace(0.0, length, 12) + 1e-3
    at = at[:-1]
    extra = Places(
        np.repeat([0, 1], len(at)), np.concatenate([at, length - at]), np.zeros(2 * len(at), bool)
    )
    stations = make_stations(spans, table(rows + mirrored), extra)
    effects = case_effects(spans, table(rows + mirrored), stations, 1)
    first, second = np.flatnonzero(stations.beam == 0), np.flatnonzero(stations.beam == 1)
    second = second[::-1]
    np.testing.assert_array_equal(stations.side[first], -stations.side[second])
    slack = 2e-6 * total_size(rows, length)
    np.testing.assert_allclose(effects.moment[0, first], effects.moment[0, second], atol=slack)
    np.testing.assert_allclose(
        effects.shear[0, first], -effects.shear[0, second], atol=slack / length * 10.0
    )
    np.testing.assert_allclose(
        effects.deflection[0, first], effects.deflection[0, second], atol=slack * length**2
    )
    np.testing.assert_allclose(
        effects.end_moments[0, 0], effects.end_moments[0, 1, ::-1], atol=slack
    )


@settings(max_examples=40, deadline=None)
@given(some_loads, some_loads, st.floats(-3.0, 3.0), lengths, pairs)
def test_effects_add_up_and_scale(
    one: list[Any], two: list[Any], factor: float, length: float, pair: tuple[int, int]
) -> None:
    first, second = rows_of(one, length, case=0), rows_of(two, length, case=1)
    both = [(0, 2, *row[2:]) for row in first] + [
        (0, 2, *row[2:5], row[5] * factor, row[6] * factor) for row in second
    ]
    _, effects = solved(span_rows([(0.0, length, *pair)]), table(first + second + both), cases=3)
    slack = 4e-6 * (total_size(first, length) + total_size(second, length) + 1e-3)
    for name, arm in (("moment", 1.0), ("shear", length), ("deflection", 1.0 / length**2)):
        value = getattr(effects, name)
        np.testing.assert_allclose(
            value[2] * arm, (value[0] + factor * value[1]) * arm, rtol=1e-9, atol=slack
        )


def test_many_beams_give_what_each_gives_alone() -> None:
    random = np.random.default_rng(7)
    rows = [random_rows(random, beam, 6) for beam in range(12)]
    spans = [(0.25, 5.75, *PAIRS[beam % 6]) for beam in range(12)]
    stations, together = solved(span_rows(spans), table([r for part in rows for r in part]))
    for beam in range(12):
        alone = [(0, *row[1:]) for row in rows[beam]]
        _, single = solved(span_rows([spans[beam]]), table(alone))
        here = stations.beam == beam
        np.testing.assert_allclose(together.moment[:, here], single.moment, rtol=1e-12, atol=1e-12)
        np.testing.assert_allclose(together.shear[:, here], single.shear, rtol=1e-12, atol=1e-12)


# --- loads beyond the span, moments at the ends, sides ---------------------------------------


def test_what_lies_beyond_a_support_goes_straight_into_it() -> None:
    """Even load w over a beam of 10 whose supports stand at 1 and 9: the span of 8 carries 8 w,
    each support w more from its bearing; a point load over the bearing does not bend the span."""
    rows: list[Row] = [(0, 0, LINE, 0.0, 10.0, 2.0, 2.0), (0, 1, POINT, 0.5, 0.5, 7.0, 7.0)]
    _, effects = solved(span_rows([(1.0, 9.0, PINNED, PINNED)]), table(rows), cases=2)
    assert effects.moment[0].max() == pytest.approx(2.0 * 8.0**2 / 8.0)
    np.testing.assert_allclose(effects.reactions[0, 0], [2.0 * 5.0, 2.0 * 5.0])
    assert effects.shear[0, 0] == pytest.approx(2.0 * 4.0)
    np.testing.assert_allclose(effects.reactions[1, 0], [7.0, 0.0], atol=1e-12)
    assert not effects.moment[1].any()
    assert not effects.shear[1].any()


def test_a_trapezoid_is_cut_at_the_supports() -> None:
    """w = x from 0 to 10 on supports at 2 and 8: between them w = 2 + s, total 30 (2 * 6 + 18);
    about the start 2 * 36 / 2 + 6^3 / 3 = 108, so R_end = 18 from the span; beyond it 2 on the
    start's bearing and 18 on the end's."""
    rows: list[Row] = [(0, 0, LINE, 0.0, 10.0, 0.0, 10.0)]
    _, effects = solved(span_rows([(2.0, 8.0, PINNED, PINNED)]), table(rows))
    np.testing.assert_allclose(effects.reactions[0, 0], [12.0 + 2.0, 18.0 + 18.0])
    assert effects.shear[0, 0] == pytest.approx(12.0)


@pytest.mark.parametrize(("pair", "at"), [((FIXED, FREE), 12.0), ((FREE, FIXED), -2.0)])
def test_what_lies_beyond_a_free_end_keeps_its_arm(pair: tuple[int, int], at: float) -> None:
    """A load that reaches past the stated tip bends the root with its own arm: 5 * 12."""
    rows: list[Row] = [(0, 0, POINT, at, at, 5.0, 5.0)]
    _, effects = solved(span_rows([(0.0, 10.0, *pair)]), table(rows))
    root = effects.moment[0, 0 if pair[0] == FIXED else -1]
    assert root == pytest.approx(-5.0 * 12.0)


@pytest.mark.parametrize(("pair", "span"), [((FIXED, FREE), (0, 3)), ((FREE, FIXED), (1, 4))])
def test_a_line_past_a_free_end_keeps_its_arm(
    pair: tuple[int, int], span: tuple[float, float]
) -> None:
    """An even load of 2 over 4, root at one end: 2 * 4^2 / 2, though the stated span is 3."""
    rows: list[Row] = [(0, 0, LINE, 0.0, 4.0, 2.0, 2.0)]
    _, effects = solved(span_rows([(*span, *pair)]), table(rows))
    root = effects.moment[0, 0 if pair[0] == FIXED else -1]
    assert root == pytest.approx(-2.0 * 4.0**2 / 2.0)


def test_a_moment_load_lowers_the_moment_from_left_to_right() -> None:
    """Positive 12 at 2 of 8 on pins: reaction 12 / 8 up at the start, +3 just left, -9 right."""
    rows: list[Row] = [(0, 0, MOMENT, 2.0, 2.0, 12.0, 12.0)]
    stations, effects = solved(span_rows([(0.0, 8.0, PINNED, PINNED)]), table(rows))
    here = np.flatnonzero(np.abs(stations.x - 2.0) < 1e-9)
    np.testing.assert_array_equal(stations.side[here], [-1, 1])
    np.testing.assert_allclose(effects.moment[0, here], [3.0, -9.0])
    np.testing.assert_allclose(effects.reactions[0, 0], [1.5, -1.5])


def test_a_moment_load_at_a_pinned_end_bends_the_span_and_at_a_fixed_end_does_not() -> None:
    rows: list[Row] = [(beam, 0, MOMENT, 0.0, 0.0, 12.0, 12.0) for beam in (0, 1)]
    stations, effects = solved(
        span_rows([(0.5, 8.5, PINNED, PINNED), (0.5, 8.5, FIXED, FIXED)]), table(rows)
    )
    np.testing.assert_allclose(effects.end_moments[0, 0], [-12.0, 0.0], atol=1e-12)
    assert effects.moment[0, 0] == pytest.approx(-12.0)
    assert not effects.moment[0, stations.beam == 1].any()
    assert not effects.shear[0, stations.beam == 1].any()


def test_shear_differs_on_the_two_sides_of_a_point_load() -> None:
    rows: list[Row] = [(0, 0, POINT, 2.0, 2.0, 4.0, 4.0)]
    stations, effects = solved(span_rows([(0.0, 8.0, PINNED, PINNED)]), table(rows))
    here = np.flatnonzero(np.abs(stations.x - 2.0) < 1e-9)
    np.testing.assert_allclose(effects.shear[0, here], [3.0, -1.0])


def test_effects_that_only_rounding_leaves_are_zero() -> None:
    rows: list[Row] = [(0, 0, LINE, 0.0, 7777.7, 3.3, 4.4), (0, 0, POINT, 3333.3, 3333.3, 1e5, 1e5)]
    stations, effects = solved(span_rows([(0.0, 7777.7, PINNED, PINNED)]), table(rows))
    ends = (stations.x == 0.0) | (stations.x == 7777.7)
    assert (effects.moment[0, ends] == 0.0).all()
    assert (effects.moment[0, ~ends] != 0.0).all()


@pytest.mark.parametrize("pair", [(PINNED, FREE), (FREE, PINNED), (FREE, FREE)])
def test_a_span_that_cannot_stand_is_refused(pair: tuple[int, int]) -> None:
    with pytest.raises(ValueError, match="not held"):
        solved(span_rows([(0.0, 8.0, *pair)]), table([(0, 0, LINE, 0.0, 8.0, 1.0, 1.0)]))


def test_a_span_without_length_is_refused() -> None:
    with pytest.raises(ValueError, match="no length"):
        solved(span_rows([(8.0, 8.0, PINNED, PINNED)]), table([]))


def test_stations_put_in_later_have_the_effects_of_stations_made_at_once() -> None:
    """Effects worked out at two sets of stations and joined are those at all of them."""
    random = np.random.default_rng(5)
    spans = span_rows([(100.0, 6100.0, PINNED, PINNED), (0.0, 3000.0, FIXED, FREE)])
    loads = table(
        [
            (0, 0, LINE, 100.0, 6100.0, 5.0, 9.0),
            (0, 1, POINT, 2100.0, 2100.0, 40e3, 40e3),
            (1, 0, LINE, 0.0, 3000.0, 3.0, 3.0),
            (1, 1, MOMENT, 1200.0, 1200.0, -7e6, -7e6),
        ]
    )
    beam = np.repeat([0, 1], 6)
    x = np.concatenate([np.sort(random.uniform(101.0, 6099.0, 6)), np.linspace(1.0, 2999.0, 6)])
    few = make_stations(spans, loads, NO_PLACES)
    at_once = make_stations(spans, loads, Places(beam, x, np.zeros(12, np.bool_)))
    joined, rows = insert_stations(few, beam, x)
    for name in ("beam", "x", "side"):
        np.testing.assert_array_equal(getattr(joined, name), getattr(at_once, name))
    later = StationTable(beam, x, np.zeros_like(beam))
    found = join_effects(
        case_effects(spans, loads, few, 2), case_effects(spans, loads, later, 2), rows
    )
    whole = case_effects(spans, loads, at_once, 2)
    for name in ("beam", "x", "moment", "shear", "deflection", "reactions", "end_moments"):
        np.testing.assert_array_equal(getattr(found, name), getattr(whole, name))


def test_moment_and_shear_are_the_same_without_deflections() -> None:
    spans = span_rows([(0.0, 6000.0, FIXED, PINNED)])
    loads = table([(0, 0, LINE, 500.0, 6000.0, 5.0, 9.0), (0, 0, POINT, 2e3, 2e3, 4e4, 4e4)])
    stations = make_stations(spans, loads, NO_PLACES)
    whole = case_effects(spans, loads, stations, 1)
    less = case_effects(spans, loads, stations, 1, deflections=False)
    np.testing.assert_array_equal(less.moment, whole.moment)
    np.testing.assert_array_equal(less.shear, whole.shear)
    assert less.deflection is None
