"""Cases that move among others: combinations, shares, bounds and places where moments turn."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
)
from ifccheck.analysis.effects import case_share, combine, demands, scaled_case
from ifccheck.analysis.line_table import LineTable, simple_lines
from ifccheck.analysis.lines import continuous
from ifccheck.analysis.loads import LINE, LoadTable
from ifccheck.analysis.moving import MovingCase, moving_effects
from ifccheck.analysis.peaks import case_peaks
from ifccheck.analysis.spans import CONTINUOUS, PINNED, SpanTable
from ifccheck.analysis.statics import CaseEffects, effects_at, join_effects, solve
from ifccheck.analysis.stations import NOWHERE, StationTable, insert_stations, make_stations
from ifccheck.analysis.trains import Train
from ifccheck.analysis.turns import turning_places
from tests.line_models import load_rows

SELF, FLOOR, CRANE = range(3)
FACTORS = np.array([[[1.25, 0.9], [1.5, 0.0], [0.5, 0.0]], [[1.25, 0.9], [0.5, 0.0], [1.5, 0.0]]])
WAY = MovingCase(CRANE, 0, (Train(np.array([0.0, 900.0]), np.array([40e3, 55e3])),), 500.0, 12500.0)


def two_spans() -> tuple[SpanTable, LineTable, LoadTable]:
    """Spans of 6 m and 7 m under self weight and a floor; a crane runs along both."""
    spans = SpanTable(
        np.array([0.0, 100.0]), np.array([6000.0, 7100.0]),
        np.array([PINNED, CONTINUOUS]), np.array([CONTINUOUS, PINNED]),
    )  # fmt: skip
    rows = [
        (span, case, LINE, spans.start[span], spans.end[span], w, w)
        for span in (0, 1)
        for case, w in ((SELF, 6.0), (FLOOR, 9.0))
    ]
    row = np.arange(2)
    lines = simple_lines(spans, row * 0, row, row > 1, np.full(2, 2e13))
    return spans, lines, load_rows(rows)


def effects_along(divisions: int) -> tuple[StationTable, CaseEffects]:
    spans, _, loads = two_spans()
    stations = make_stations(spans, loads, NOWHERE, divisions)
    return stations, effects_of(stations)


def effects_of(stations: StationTable) -> CaseEffects:
    spans, lines, loads = two_spans()
    still = effects_at(continuous(solve(spans, loads, 3), lines), stations, deflections=False)
    return replace(still, moving=moving_effects(spans, lines, [WAY], stations))


def test_a_moving_case_adds_its_own_extreme_to_each() -> None:
    stations, cases = effects_along(12)
    combined = combine(cases, FACTORS)
    moving = cases.moving
    assert moving is not None
    for combination, factors in enumerate(FACTORS):
        for arrangement, still, crane, found in (
            (GREATEST_MOMENT, cases.moment, moving.moment, combined.moment),
            (LEAST_MOMENT, cases.moment, moving.moment, combined.moment),
            (GREATEST_SHEAR, cases.shear, moving.shear, combined.shear),
            (LEAST_SHEAR, cases.shear, moving.shear, combined.shear),
        ):
            own = np.stack([*still[:2], crane[arrangement, 0]])
            pick = np.min if arrangement in (LEAST_MOMENT, LEAST_SHEAR) else np.max
            wanted = pick(own * factors.T[:, :, None], axis=0).sum(axis=0)
            np.testing.assert_allclose(found[combination, arrangement], wanted, rtol=1e-12)
    assert stations.x.size == cases.x.size


def test_what_goes_with_an_extreme_stands_where_the_extreme_does() -> None:
    """The crane's shear beside the greatest moment is that of the place which gives the moment."""
    _, cases = effects_along(12)
    moving = cases.moving
    assert moving is not None
    only = np.zeros((1, 3, 2))
    only[0, CRANE, 0] = 1.0
    combined = combine(replace(cases, moment=0.0 * cases.moment, shear=0.0 * cases.shear), only)
    for arrangement in range(4):
        own = (moving.moment if arrangement < 2 else moving.shear)[arrangement, 0]
        acts = own < 0.0 if arrangement % 2 else own > 0.0
        for found, wanted in ((combined.moment, moving.moment), (combined.shear, moving.shear)):
            np.testing.assert_array_equal(found[0, arrangement, acts], wanted[arrangement, 0, acts])


@pytest.mark.parametrize("by", [0.0, 0.4, 3.0])
def test_a_moving_case_that_is_rated_is_multiplied(by: float) -> None:
    stations, cases = effects_along(12)
    own = np.arange(stations.x.size)
    acting = demands(combine(cases, FACTORS), own, [CRANE])
    more = FACTORS.copy()
    more[:, CRANE] *= by
    wanted = demands(combine(cases, more), own, [CRANE]).total
    for name in ("moment", "shear", "peak_sagging", "peak_hogging"):
        found = getattr(acting.total, name) + (by - 1.0) * getattr(acting.shares[0], name)
        size = np.abs(getattr(wanted, name)).max()
        np.testing.assert_allclose(
            found, getattr(wanted, name), rtol=0, atol=1e-11 * size, err_msg=name
        )


def test_a_case_scaled_before_is_one_with_greater_factors() -> None:
    stations, cases = effects_along(12)
    for case in (FLOOR, CRANE):
        grown = scaled_case(cases, case, np.full(stations.x.size, 1.7))
        more = FACTORS.copy()
        more[:, case] *= 1.7
        found, wanted = combine(grown, FACTORS), combine(cases, more)
        for name in ("moment", "shear"):
            np.testing.assert_allclose(
                getattr(found, name), getattr(wanted, name), rtol=1e-12, atol=1e-6
            )


def test_shares_of_all_cases_are_the_whole() -> None:
    _, cases = effects_along(12)
    effects = combine(cases, FACTORS)
    shares = [case_share(effects, case) for case in range(3)]
    for found, whole in zip(np.sum(shares, axis=0), (effects.moment, effects.shear), strict=True):
        np.testing.assert_allclose(found, whole, rtol=0, atol=1e-9 * np.abs(whole).max())


def test_peaks_bound_the_envelope_between_stations() -> None:
    _, coarse = effects_along(5)
    stations, fine = effects_along(200)
    assert fine.moving is not None
    sagging, hogging = case_peaks(coarse)
    for span in range(2):
        here = stations.beam == span
        greatest = fine.moving.moment[GREATEST_MOMENT, 0, here].max()
        least = fine.moving.moment[LEAST_MOMENT, 0, here].min()
        assert greatest <= sagging[CRANE, span] * (1.0 + 1e-12)
        assert -least <= hogging[CRANE, span] * (1.0 + 1e-12)
        assert sagging[CRANE, span] < 1.5 * greatest


def test_stations_are_put_where_the_moments_of_moving_loads_turn() -> None:
    stations, cases = effects_along(9)
    beam, x = turning_places(cases, FACTORS).places()
    more, rows = insert_stations(stations, beam, x)
    joined = join_effects(cases, effects_of(StationTable(beam, x, 0 * beam)), rows)
    assert joined.moving is not None
    direct = effects_of(more).moving
    assert direct is not None
    np.testing.assert_allclose(joined.moving.moment, direct.moment, atol=1.0)
    np.testing.assert_allclose(joined.moving.shear, direct.shear, atol=1.0)
    fine = combine(effects_along(900)[1], FACTORS).moment[:, GREATEST_MOMENT].max(axis=1)
    found = combine(joined, FACTORS).moment[:, GREATEST_MOMENT].max(axis=1)
    before = combine(cases, FACTORS).moment[:, GREATEST_MOMENT].max(axis=1)
    assert (found >= before).all()
    assert (found >= fine * (1.0 - 1e-3)).all()


def test_moving_cases_known_at_some_stations_only_are_refused() -> None:
    stations, cases = effects_along(4)
    rows = np.arange(2 * stations.x.size)
    with pytest.raises(ValueError, match="at all stations or at none"):
        join_effects(cases, replace(cases, moving=None), rows)


def test_some_stations_can_be_taken() -> None:
    _, cases = effects_along(4)
    assert cases.moving is not None
    some = cases.moving.take(np.array([3, 1]))
    np.testing.assert_array_equal(some.moment[:, :, 0], cases.moving.moment[:, :, 3])
    np.testing.assert_array_equal(some.shear[:, :, 1], cases.moving.shear[:, :, 1])
