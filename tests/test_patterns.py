"""Patterned loads against every pattern tried one by one, and published coefficients."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from pathlib import Path

import numpy as np
import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
)
from ifccheck.analysis.effects import Demands, Effects, case_share, combine, demands
from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.lines import continuous
from ifccheck.analysis.loads import LINE, LoadTable, join_loads
from ifccheck.analysis.parts import Parts, parts_of
from ifccheck.analysis.statics import CaseEffects, effects_at, solve
from ifccheck.analysis.stations import NOWHERE, StationTable, make_stations
from tests.line_models import Line, tables

PERMANENT, IMPOSED = 0, 1
FACTORS = np.array([[[1.25, 0.9], [1.5, 0.0]], [[1.4, 0.9], [0.0, 0.0]]])


def places_of(lines: list[Line]) -> np.ndarray:
    return np.concatenate([np.arange(len(line.lengths)) for line in lines])


def model(lines: list[Line], heavy: float = 0.0) -> tuple[StationTable, CaseEffects, Parts]:
    """The loads of the lines as an imposed case that is patterned, and a permanent one."""
    spans, imposed, table = tables(lines, case=IMPOSED, cases=2)
    beams = np.arange(len(spans.start))
    weight = LoadTable(
        beams,
        beams * 0,
        beams * 0,
        spans.start,
        spans.end,
        heavy + 0.0 * beams,
        heavy + 0.0 * beams,
    )
    loads = join_loads(weight, imposed)
    places = places_of(lines)
    parts = parts_of([False, True], int(places.max()) + 1, apart=False)
    split = parts.of(loads, places, apart=False)
    solved = continuous(solve(spans, split, len(parts.case)), without_settlement(table))
    stations = make_stations(spans, split, NOWHERE, 10)
    return stations, effects_at(solved, stations), parts


def without_settlement(table: LineTable) -> LineTable:
    return replace(table, settlement=None)


def loaded_line(random: np.random.Generator, count: int) -> Line:
    lengths = random.uniform(3000.0, 8000.0, count).tolist()
    loads = [[(LINE, 0.0, length, *random.uniform(2.0, 20.0, 2).tolist())] for length in lengths]
    return Line(
        lengths, loads, random.uniform(1e13, 4e13, count).tolist(),
        rotational=random.choice([0.0, 1e10], count + 1).tolist(),
        against=(random.random(count) < 0.4).tolist(),
        tips=(False, count > 2 and bool(random.random() < 0.4)),
    )  # fmt: skip


@pytest.mark.parametrize("count", [2, 4, 5])
def test_patterned_spans_have_the_published_coefficients(reference: Path, count: int) -> None:
    stock = yaml.safe_load((reference / "statics.yaml").read_text())
    entry = next(one for one in stock if one["id"] == f"ST-PATT-{count}")
    line = Line([1.0] * count, [[(LINE, 0.0, 1.0, 1.0, 1.0)]] * count, [1.0] * count)
    spans, loads, table = tables([line])
    parts = parts_of([True], count, apart=False)
    split = parts.of(loads, np.arange(count), apart=False)
    solved = continuous(solve(spans, split, count), without_settlement(table))
    stations = make_stations(spans, split, NOWHERE, 1000)
    effects = combine(effects_at(solved, stations), np.array([[[1.0, 0.0]]])[:, parts.case])
    rel = entry["tolerance_pct"] / 100.0
    found = {
        "Ms1": -effects.moment[0, LEAST_MOMENT, stations.beam == 0][-1],
        "M1": effects.moment[0, GREATEST_MOMENT, stations.beam == 0].max(),
        "M2": effects.moment[0, GREATEST_MOMENT, stations.beam == 1].max(),
    }
    for name, value in entry["outputs"].items():
        assert found[name] == pytest.approx(value, rel=rel)


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 10**6), st.integers(2, 6))
def test_no_pattern_is_worse_than_what_is_found(seed: int, count: int) -> None:
    """Every pattern by itself, with the permanent case at either factor; and the worst is met."""
    random = np.random.default_rng(seed)
    line = loaded_line(random, count)
    stations, cases, parts = model([line], heavy=4.0)
    effects = combine(cases, FACTORS[:, parts.case])
    moments, shears = [], []
    for dead, chosen in product((1.25, 0.9), product((0.0, 1.5), repeat=count)):
        weights = np.array([dead, *chosen])
        moments.append(weights @ cases.moment)
        shears.append(weights @ cases.shear)
    for arrangement, found, every, most in (
        (GREATEST_MOMENT, effects.moment, moments, np.max),
        (LEAST_MOMENT, effects.moment, moments, np.min),
        (GREATEST_SHEAR, effects.shear, shears, np.max),
        (LEAST_SHEAR, effects.shear, shears, np.min),
    ):
        wanted = most(every, axis=0)
        size = np.abs(every).max()
        np.testing.assert_allclose(found[0, arrangement], wanted, rtol=0, atol=1e-12 * size)
    assert stations.x.size == cases.x.size


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 10**6), st.integers(2, 6))
def test_parts_of_a_case_are_the_case(seed: int, count: int) -> None:
    random = np.random.default_rng(seed)
    line = loaded_line(random, count)
    _, cases, parts = model([line])
    spans, loads, table = tables([line], case=IMPOSED, cases=2)
    solved = continuous(solve(spans, loads, 2), without_settlement(table))
    whole = effects_at(solved, make_stations(spans, loads, NOWHERE, 10))
    for name in ("moment", "shear", "deflection"):
        sum_ = getattr(cases, name)[parts.case == IMPOSED].sum(axis=0)
        size = np.abs(sum_).max()
        np.testing.assert_allclose(sum_, getattr(whole, name)[IMPOSED], rtol=0, atol=3e-6 * size)


def demands_of(effects: Effects, parts: Parts | None) -> Demands:
    of = None if parts is None else parts.case
    return demands(effects, np.arange(effects.cases.x.size), [IMPOSED], parts=of)


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 10**6), st.integers(2, 5), st.floats(0.0, 6.0))
def test_a_rated_case_is_multiplied_in_all_its_parts(seed: int, count: int, by: float) -> None:
    """total + (k - 1) share is what the case's loads times k give."""
    line = loaded_line(np.random.default_rng(seed), count)
    _, cases, parts = model([line], heavy=4.0)
    acting = demands_of(combine(cases, FACTORS[:, parts.case]), parts)
    more = FACTORS.copy()
    more[:, IMPOSED] *= by
    wanted = demands_of(combine(cases, more[:, parts.case]), parts).total
    share = acting.shares[0]
    for name in ("moment", "shear", "peak_sagging", "peak_hogging"):
        found = getattr(acting.total, name) + (by - 1.0) * getattr(share, name)
        size = np.abs(getattr(wanted, name)).max() + np.abs(getattr(share, name)).max()
        driven = wanted.moment != 0.0 if by > 0.0 else np.zeros_like(found, bool)
        np.testing.assert_allclose(
            found[driven], getattr(wanted, name)[driven], rtol=0, atol=1e-11 * size
        )


def test_the_share_of_a_case_is_the_sum_over_its_parts() -> None:
    line = loaded_line(np.random.default_rng(8), 4)
    _, cases, parts = model([line], heavy=4.0)
    effects = combine(cases, FACTORS[:, parts.case])
    shares = [case_share(effects, case, parts.case) for case in (PERMANENT, IMPOSED)]
    for found, whole in zip(np.sum(shares, axis=0), (effects.moment, effects.shear), strict=True):
        np.testing.assert_allclose(found, whole, rtol=0, atol=1e-9 * np.abs(whole).max())


def test_where_nothing_is_patterned_all_stays_as_it_is() -> None:
    _, loads, _ = tables([loaded_line(np.random.default_rng(1), 3)], IMPOSED, 2)
    for by_spans, places in (([False, False], 3), ([False, True], 1)):
        parts = parts_of(by_spans, places, apart=False)
        assert parts.case.tolist() == [0, 1]
        assert parts.of(loads, np.zeros(3, int), apart=False) is loads


def test_lines_of_several_lengths_share_their_parts() -> None:
    random = np.random.default_rng(3)
    short, long = loaded_line(random, 2), loaded_line(random, 4)
    stations, cases, parts = model([short, long])
    assert parts.case.tolist() == [0, 1, 1, 1, 1]
    on_short = stations.beam < 2
    assert not cases.moment[np.ix_([3, 4], on_short)].any()
    assert cases.moment[np.ix_([2], on_short)].any()
