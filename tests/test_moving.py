"""Loads that move, against published maxima and against trains set down at every millimetre."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import yaml

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
)
from ifccheck.analysis.line_table import LineTable, simple_lines
from ifccheck.analysis.lines import continuous, support_reactions
from ifccheck.analysis.loads import LINE, POINT
from ifccheck.analysis.moving import MovingCase, moving_effects, moving_reactions
from ifccheck.analysis.spans import CONTINUOUS, PINNED, SpanTable
from ifccheck.analysis.statics import CaseEffects, Solved, effects_at, solve
from ifccheck.analysis.stations import NOWHERE, StationTable, make_stations
from ifccheck.analysis.stiffness import Curvature, places_between
from ifccheck.analysis.trains import Train
from tests.line_models import Line, load_rows, tables

SINGLE_SPANS = ("ST-SS-", "ST-FF-", "ST-PC-", "ST-CANT")
NO_LOADS = load_rows([])
EI = 2.0e13


def train(*wheels: tuple[float, float]) -> Train:
    return Train(*(np.array(column, float) for column in zip(*wheels, strict=True)))


def single(length: float) -> tuple[SpanTable, LineTable]:
    spans = SpanTable(np.array([0.0]), np.array([length]), np.array([PINNED]), np.array([PINNED]))
    none = np.array([0])
    return spans, simple_lines(spans, none, none, np.array([False]), np.array([EI]))


def stations_of(spans: SpanTable, divisions: int) -> StationTable:
    return make_stations(spans, NO_LOADS, NOWHERE, divisions)


# --- published -------------------------------------------------------------------------------


def published(reference: Path, name: str) -> tuple[dict[str, float], dict[str, float], float]:
    stock = yaml.safe_load((reference / "statics.yaml").read_text())
    entry = next(one for one in stock if one["id"] == name)
    return entry["inputs"], entry["outputs"], entry["tolerance_pct"] / 100.0


@pytest.mark.parametrize("name", ["0.2", "0.4", "0.5", "far"])
def test_two_equal_wheels_on_a_simple_span(reference: Path, name: str) -> None:
    given, wanted, rel = published(reference, f"ST-MOV-2P-{name}")
    spans, lines = single(1000.0 * given["L"])
    wheels = train((0.0, given["P"]), (1000.0 * given["a"], given["P"]))
    case = MovingCase(0, 0, (wheels,), 0.0, spans.end[0], stays=False)
    stations = stations_of(spans, 1000)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    moment = found.moment[GREATEST_MOMENT, 0]
    assert moment.max() == pytest.approx(1000.0 * wanted["M"], rel=rel)
    if "x" in wanted:
        place = stations.x[moment.argmax()] / 1000.0
        assert min(place, 1.0 - place) == pytest.approx(wanted["x"], abs=1e-3)
    greatest = moving_reactions(spans, lines, [case]).greatest[0]
    assert greatest == pytest.approx([wanted["R"]] * 2, rel=rel)


def test_a_gantry_girder(reference: Path) -> None:
    given, wanted, rel = published(reference, "ST-MOV-8m")
    spans, lines = single(1000.0 * given["L"])
    wheels = train((0.0, given["P"]), (1000.0 * given["base"], given["P"]))
    case = MovingCase(0, 0, (wheels,), 0.0, spans.end[0])
    stations = stations_of(spans, 1600)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    moment = found.moment[GREATEST_MOMENT, 0] / 1000.0
    assert moment.max() == pytest.approx(wanted["M_kNm"], rel=rel)
    place = stations.x[moment.argmax()] / 1000.0
    assert min(place, 8.0 - place) == pytest.approx(wanted["x_from_support"], abs=1e-3)
    reactions = moving_reactions(spans, lines, [case])
    assert reactions.greatest[0].max() == pytest.approx(wanted["R_max_kN"], rel=rel)


def test_two_unequal_wheels_in_one_order(reference: Path) -> None:
    given, wanted, rel = published(reference, "ST-MOV-20m")
    left, right = given["P"]  # type: ignore[misc]
    spans, lines = single(1000.0 * given["L"])
    wheels = train((0.0, left), (1000.0 * given["base"], right))
    case = MovingCase(0, 0, (wheels,), 0.0, spans.end[0], stays=False, turns=False)
    stations = stations_of(spans, 2000)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    at = int(np.argmin(np.abs(stations.x - 1000.0 * given["section"])))
    assert found.moment[GREATEST_MOMENT, 0, at] / 1e3 == pytest.approx(wanted["M_at_7"], rel=rel)
    assert found.shear[GREATEST_SHEAR, 0, at] == pytest.approx(wanted["Vpos_at_7"], rel=rel)
    assert -found.shear[LEAST_SHEAR, 0, at] == pytest.approx(wanted["Vneg_at_7"], rel=rel)
    moment = found.moment[GREATEST_MOMENT, 0].max() / 1e3
    assert moment == pytest.approx(wanted["Mabs"], rel=rel)
    reactions = sorted(moving_reactions(spans, lines, [case]).greatest[0])
    assert reactions == pytest.approx([wanted["R_max_other"], wanted["R_max"]], rel=rel)
    one = replace(case, trains=(train((0.0, 1.0)),))
    unit = moving_effects(spans, lines, [one], stations)
    assert unit is not None
    ordinate = unit.moment[GREATEST_MOMENT, 0, at] / 1e3
    assert ordinate == pytest.approx(wanted["IL_ord"], rel=rel)


def test_a_crane_girder_hands_its_crab_to_the_wheels(reference: Path) -> None:
    """The crab at its closest approach is one wheel on the bridge of the crane."""
    given, wanted, rel = published(reference, "ST-CRANE-R")
    spans, lines = single(1000.0 * given["L"])
    case = MovingCase(0, 0, (train((0.0, given["P"])),), 1000.0 * given["approach"], spans.end[0])
    dead = load_rows([(0, 0, LINE, 0.0, spans.end[0], *[given["w"] / 1000.0] * 2)])
    weight = support_reactions(solve(spans, dead, 1), lines).force[0]
    reactions = moving_reactions(spans, lines, [case])
    assert reactions.greatest[0, 0] + weight[0] == pytest.approx(wanted["RA"], rel=rel)
    assert reactions.least[0, 1] + weight[1] == pytest.approx(weight[1])
    assert (reactions.greatest[0, 0] + weight[0]) / 2.0 == pytest.approx(wanted["wheel"], rel=rel)


def test_three_equal_wheels_on_a_simple_span() -> None:
    """Middle wheel in the middle, by hand: M = 3P/2 L/2 - P a for wheels a apart."""
    spans, lines = single(10000.0)
    case = MovingCase(0, 0, (train((0.0, 1e3), (1500.0, 1e3), (3000.0, 1e3)),), 0.0, 10000.0)
    found = moving_effects(spans, lines, [case], stations_of(spans, 400))
    assert found is not None
    assert found.moment[GREATEST_MOMENT, 0].max() == pytest.approx(1e3 * (7500.0 - 1500.0))


def test_every_published_line_of_the_shared_stock_is_covered(reference: Path) -> None:
    stock = yaml.safe_load((reference / "statics.yaml").read_text())
    names = {entry["id"] for entry in stock if not entry["id"].startswith(SINGLE_SPANS)}
    lines = {f"ST-CONT-{count}" for count in (2, 3, 4, 6)} | {"ST-CONT4-ALT"}
    patterns = {f"ST-PATT-{count}" for count in (2, 4, 5)}
    moving = {f"ST-MOV-2P-{name}" for name in ("0.2", "0.4", "0.5", "far")}
    assert names == lines | patterns | moving | {"ST-MOV-8m", "ST-MOV-20m", "ST-CRANE-R"}


# --- set down at every millimetre ------------------------------------------------------------


def swept(
    spans: SpanTable,
    lines: LineTable,
    curvature: Curvature | None,
    stations: StationTable,
    wheels: list[tuple[np.ndarray, np.ndarray]],
) -> tuple[CaseEffects, np.ndarray]:
    """Effects, and reactions (cases, nodes), of wheels (places and forces) in each case."""
    rows = []
    low = np.concatenate([[0.0], np.cumsum(spans.length)])
    for case, (places, forces) in enumerate(wheels):
        for place, force in zip(places.tolist(), forces.tolist(), strict=True):
            span = int(np.clip(np.searchsorted(low, place, side="right") - 1, 0, len(low) - 2))
            if not -1e-9 <= place <= low[-1] + 1e-9:
                continue
            along = place - low[span]
            x = spans.end[span] - along if lines.reversed[span] else spans.start[span] + along
            rows.append((span, case, POINT, x, x, force, force))
    solved: Solved = continuous(
        solve(spans, load_rows(rows), len(wheels)), replace(lines, settlement=None), curvature
    )
    return effects_at(solved, stations, False), support_reactions(solved, lines).force


def places_of(case: MovingCase) -> list[tuple[np.ndarray, np.ndarray]]:
    """The train at every millimetre of its way, in both directions; gone, where it runs off."""
    wheels = [] if case.stays else [(np.zeros(0), np.zeros(0))]
    (one,) = case.trains
    for each in (one, one.turned()) if case.turns else (one,):
        first = case.start if case.stays else case.start - each.length
        last = case.end - each.length if case.stays else case.end
        for at in np.arange(first + 0.25, last, 1.0):
            places = each.places + at
            on = (places >= case.start) & (places <= case.end)
            wheels.append((places[on], each.forces[on] * case.dynamic))
    return wheels


def assert_enveloped(found: np.ndarray, effects: CaseEffects, below: float = 1e-9) -> None:
    """``found`` (2, 4, N) has the extremes of all cases, is below none of them, and its pairs come
    near to a real one."""
    moment, shear = effects.moment, effects.shear
    scales = np.abs(moment).max(), np.abs(shear).max()
    for arrangement, every, scale, pick in (
        (GREATEST_MOMENT, moment, scales[0], np.max),
        (LEAST_MOMENT, moment, scales[0], np.min),
        (GREATEST_SHEAR, shear, scales[1], np.max),
        (LEAST_SHEAR, shear, scales[1], np.min),
    ):
        own = found[0 if arrangement < 2 else 1, arrangement]
        wanted = pick(every, axis=0)
        np.testing.assert_allclose(own, wanted, rtol=0, atol=1e-3 * scale)
        sign = -1.0 if arrangement % 2 else 1.0
        assert (own * sign >= wanted * sign - below * scale).all()
        gap = np.abs(moment - found[0, arrangement]) / scales[0]
        gap = np.maximum(gap, np.abs(shear - found[1, arrangement]) / scales[1])
        assert (gap.min(axis=0) < 3e-3).all()


def small_line(random: np.random.Generator, count: int) -> Line:
    lengths = random.uniform(2500.0, 4000.0, count).tolist()
    tips = (False, count > 2 and bool(random.random() < 0.5))
    return Line(
        lengths, [[] for _ in lengths], (EI * random.uniform(0.5, 2.0, count)).tolist(),
        vertical=random.choice([np.inf, 3e4], count + 1, p=[0.7, 0.3]).tolist(),
        rotational=random.choice([0.0, 3e10], count + 1).tolist(),
        against=(random.random(count) < 0.4).tolist(), tips=tips,
    )  # fmt: skip


def off_the_grid(spans: SpanTable, divisions: int) -> StationTable:
    """Stations at which no wheel of a sweep stands."""
    at = (np.arange(divisions) + 0.4142) / divisions
    x = spans.start[:, None] + spans.length[:, None] * at
    beam = np.repeat(np.arange(len(spans.start)), divisions)
    return StationTable(beam, x.ravel(), np.zeros(x.size, np.intp))


@pytest.mark.parametrize("seed", range(8))
def test_envelopes_agree_with_a_sweep(seed: int) -> None:
    random = np.random.default_rng(40 + seed)
    spans, _, lines = tables([small_line(random, 1 + seed % 3 if seed else 2)])
    if len(spans.start) == 1:
        lines = replace(lines, vertical_spring=np.full(2, np.inf))
    total = float(spans.length.sum())
    count = int(random.integers(1, 4))
    places = np.concatenate([[0.0], np.cumsum(random.uniform(150.0, 1200.0, count - 1))])
    wheels = Train(places, random.uniform(1e3, 9e3, count))
    stays = bool(seed % 2)
    case = MovingCase(
        0, 0, (wheels,), *(np.array([0.05, 0.93]) * total).tolist(), stays=stays,
        turns=bool(random.random() < 0.7), dynamic=1.25,
    )  # fmt: skip
    stations = off_the_grid(spans, 7)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    effects, force = swept(spans, lines, None, stations, places_of(case))
    assert_enveloped(np.stack([found.moment[:, 0], found.shear[:, 0]]), effects)
    reactions = moving_reactions(spans, lines, [case])
    size = np.abs(force).max()
    for ours, every in (
        (reactions.greatest, force.max(axis=0)),
        (reactions.least, force.min(axis=0)),
    ):
        np.testing.assert_allclose(ours[0], every, rtol=0, atol=1e-3 * size)


def test_envelopes_of_tapered_spans_agree_with_a_sweep() -> None:
    spans, _, lines = tables([small_line(np.random.default_rng(3), 3)])
    lines = replace(lines, vertical_spring=np.full(4, np.inf))
    spans = replace(spans, start_kind=np.full(3, CONTINUOUS), end_kind=np.full(3, CONTINUOUS))
    beam, x, length = places_between(stations_of(spans, 40))
    kept = beam == 1
    part = ((x - spans.start[beam]) / spans.length[beam])[kept]
    curvature = Curvature(beam[kept], x[kept], length[kept] / (EI * (1.0 + 2.0 * part) ** 3))
    case = MovingCase(0, 0, (train((0.0, 1e3), (300.0, 2e3)),), 0.0, float(spans.length.sum()))
    stations = off_the_grid(spans, 7)
    found = moving_effects(spans, lines, [case], stations, curvature)
    assert found is not None
    effects, _ = swept(spans, lines, curvature, stations, places_of(case))
    assert_enveloped(np.stack([found.moment[:, 0], found.shear[:, 0]]), effects, below=1e-5)


@pytest.mark.parametrize("seed", range(4))
def test_two_trains_agree_with_a_sweep_of_both(seed: int) -> None:
    """Both trains by steps of 6 mm of the one and the other, at no less than their approach."""
    random = np.random.default_rng(seed)
    line = small_line(random, 2)
    line.lengths = [500.0, 620.0]
    spans, _, lines = tables([line])
    total = float(spans.length.sum())
    one = train((0.0, 3e3), (80.0, 5e3))
    two = train((0.0, 4e3), (60.0, 2e3))
    approach, step = 70.0, 6.0
    case = MovingCase(
        0, 0, (one, two), 0.0, total, stays=bool(seed % 2), turns=seed > 1, approach=approach
    )
    wheels = []
    for first, second in (
        ((one, two), (two.turned(), one.turned())) if case.turns else ((one, two),)
    ):
        wheels += places_of(replace(case, trains=(first,), turns=False))
        wheels += places_of(replace(case, trains=(second,), turns=False))
        reach = -first.length if not case.stays else 0.0
        for at in np.arange(reach, total, step):
            for then in np.arange(at + first.length + approach, total + step, step):
                places = np.concatenate([first.places + at, second.places + then])
                forces = np.concatenate([first.forces, second.forces])
                on = (places >= 0.0) & (places <= total)
                if on.all() or not case.stays:
                    wheels.append((places[on], forces[on]))
    stations = off_the_grid(spans, 3)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    effects, force = swept(spans, lines, None, stations, wheels)
    found_both = np.stack([found.moment[:, 0], found.shear[:, 0]])
    size = np.abs(effects.moment).max(), np.abs(effects.shear).max()
    for arrangement, every, scale, pick in (
        (GREATEST_MOMENT, effects.moment, size[0], np.max),
        (LEAST_MOMENT, effects.moment, size[0], np.min),
        (GREATEST_SHEAR, effects.shear, size[1], np.max),
        (LEAST_SHEAR, effects.shear, size[1], np.min),
    ):
        own = found_both[0 if arrangement < 2 else 1, arrangement]
        wanted = pick(every, axis=0)
        sign = -1.0 if arrangement % 2 else 1.0
        assert (own * sign >= wanted * sign - 1e-9 * scale).all()
        np.testing.assert_allclose(own, wanted, rtol=0, atol=1.5e-2 * scale)
    reactions = moving_reactions(spans, lines, [case])
    np.testing.assert_allclose(
        reactions.greatest[0], force.max(axis=0), rtol=0, atol=1e-2 * np.abs(force).max()
    )


# --- laws ------------------------------------------------------------------------------------


def test_a_line_seen_from_the_other_end_has_the_same_envelope() -> None:
    random = np.random.default_rng(9)
    line = small_line(random, 3)
    spans, _, lines = tables([line])
    total = float(spans.length.sum())
    case = MovingCase(0, 0, (train((0.0, 2e3), (200.0, 5e3)),), 100.0, total, turns=False)
    there = LineTable(
        lines.line, lines.span[::-1], ~lines.reversed[::-1], lines.stiffness[::-1],
        lines.vertical_spring[::-1], lines.rotational_spring[::-1],
    )  # fmt: skip
    back = replace(case, trains=(case.trains[0].turned(),), start=0.0, end=total - 100.0)
    stations = stations_of(spans, 8)
    one, two = (
        moving_effects(spans, table, [each], stations)
        for table, each in ((lines, case), (there, back))
    )
    assert one is not None
    assert two is not None
    size = np.abs(one.moment).max()
    for arrangement in (GREATEST_MOMENT, LEAST_MOMENT):
        np.testing.assert_allclose(
            one.moment[arrangement], two.moment[arrangement], rtol=0, atol=1e-9 * size
        )
    for arrangement in (GREATEST_SHEAR, LEAST_SHEAR):
        np.testing.assert_allclose(
            one.shear[arrangement], two.shear[arrangement],
            rtol=0, atol=1e-9 * np.abs(one.shear).max(),
        )  # fmt: skip


def test_moving_cases_of_two_lines_do_not_mix() -> None:
    random = np.random.default_rng(2)
    first, second = small_line(random, 2), small_line(random, 3)
    spans, _, lines = tables([first, second])
    wheels = (train((0.0, 2e3)),)
    ways = [
        MovingCase(1, 0, wheels, 0.0, sum(first.lengths)),
        MovingCase(3, 1, wheels, 0.0, sum(second.lengths)),
    ]
    stations = stations_of(spans, 6)
    both = moving_effects(spans, lines, ways, stations)
    assert both is not None
    assert both.case.tolist() == [1, 3]
    on_first = stations.beam < 2
    assert not both.moment[:, 0, ~on_first].any()
    assert not both.moment[:, 1, on_first].any()
    alone, _, table = tables([second])
    one = moving_effects(
        alone, table, [replace(ways[1], line=0)], make_stations(alone, NO_LOADS, NOWHERE, 6)
    )
    assert one is not None
    np.testing.assert_allclose(one.shear[:, 0], both.shear[:, 1][:, ~on_first], rtol=1e-12)
    reactions = moving_reactions(spans, lines, ways)
    assert not reactions.greatest[0, 3:].any()
    assert not reactions.greatest[1, :3].any()


def test_a_line_without_stations_asks_for_nothing() -> None:
    first, second = (small_line(np.random.default_rng(2), 2) for _ in range(2))
    spans, _, lines = tables([first, second])
    case = MovingCase(0, 0, (train((0.0, 2e3)),), 0.0, sum(first.lengths))
    for rows in ([3, 3], []):
        beam = np.array(rows, np.intp)
        stations = StationTable(beam, spans.start[beam] + 100.0, 0 * beam)
        found = moving_effects(spans, lines, [case], stations)
        assert found is not None
        assert found.moment.shape == (4, 1, len(rows))
        assert not found.moment.any()
        assert np.isnan(found.places).all()


def test_the_place_of_a_wheel_at_a_station_is_seen_from_both_sides() -> None:
    """One wheel on a span of 4 m, at its quarter: 3/4 of it to the left, 1/4 to the right."""
    spans, lines = single(4000.0)
    case = MovingCase(0, 0, (train((0.0, 8e3)),), 1000.0, 3000.0)
    stations = stations_of(spans, 4)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    assert found.shear[GREATEST_SHEAR, 0, 1] == pytest.approx(6e3)
    assert found.shear[LEAST_SHEAR, 0, 1] == pytest.approx(-2e3)
    assert found.moment[GREATEST_MOMENT, 0, 1] == pytest.approx(6e6)
    assert found.shear[GREATEST_SHEAR, 0, 0] == pytest.approx(6e3)


def test_the_places_of_trains_are_told() -> None:
    """Set down where they are said to stand, they do what they are said to do."""
    line = small_line(np.random.default_rng(21), 3)
    spans, _, lines = tables([line])
    one, two = train((0.0, 4e3), (300.0, 1e3)), train((0.0, 2e3), (200.0, 7e3))
    case = MovingCase(0, 0, (one, two), 0.0, sum(line.lengths), approach=250.0)
    stations = off_the_grid(spans, 5)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    for arrangement in range(4):
        wheels = []
        for station in range(stations.x.size):
            turned = bool(found.turned[arrangement, 0, station])
            order = (two.turned(), one.turned()) if turned else (one, two)
            standing = [
                (each.places + place, each.forces)
                for each, place in zip(order, found.places[:, arrangement, 0, station], strict=True)
                if not np.isnan(place)
            ]
            assert standing
            if len(standing) == 2:
                assert standing[1][0][0] - standing[0][0][-1] >= case.approach - 1e-4
            wheels.append(tuple(np.concatenate(part) for part in zip(*standing, strict=True)))
        effects, _ = swept(spans, lines, None, stations, wheels)
        own = (found.moment if arrangement < 2 else found.shear)[arrangement, 0]
        each = np.arange(stations.x.size)
        set_down = (effects.moment if arrangement < 2 else effects.shear)[each, each]
        # A wheel at a station, where the shear jumps by it, may be meant on either side.
        jumps = np.array([0.0] if arrangement < 2 else [0.0, 1e3, 2e3, 4e3, 7e3])
        apart = np.abs(np.abs(set_down - own)[:, None] - jumps).min(axis=1)
        assert (apart <= 1e-5 * np.abs(own).max()).all()


def test_a_train_that_fits_exactly_stands_still() -> None:
    spans, lines = single(4000.0)
    case = MovingCase(0, 0, (train((0.0, 1e3), (2000.0, 3e3)),), 1000.0, 3000.0, turns=False)
    stations = stations_of(spans, 8)
    found = moving_effects(spans, lines, [case], stations)
    assert found is not None
    fixed = load_rows(
        [(0, 0, POINT, 1000.0, 1000.0, 1e3, 1e3), (0, 0, POINT, 3000.0, 3000.0, 3e3, 3e3)]
    )
    still = effects_at(solve(spans, fixed, 1), stations)
    np.testing.assert_allclose(found.moment[GREATEST_MOMENT, 0], still.moment[0], rtol=1e-7)
    np.testing.assert_allclose(found.moment[LEAST_MOMENT, 0], still.moment[0], rtol=1e-7)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"end": 5000.0}, "does not lie on its line"),
        ({"end": 500.0}, "longer than its way"),
        ({"trains": (Train(np.array([0.0, 900.0]), np.array([1.0, -1.0])),)}, "press downwards"),
        ({"trains": (Train(np.array([0.0, -900.0]), np.ones(2)),)}, "one behind the other"),
        ({"trains": ()}, "needs one train, or two"),
        ({"approach": -1.0}, "needs one train, or two"),
    ],
)
def test_what_cannot_run_is_refused(change: dict[str, object], words: str) -> None:
    spans, lines = single(4000.0)
    case = MovingCase(0, 0, (train((0.0, 1e3), (900.0, 3e3)),), 0.0, 4000.0)
    with pytest.raises(ValueError, match=words):
        moving_effects(spans, lines, [replace(case, **change)], stations_of(spans, 4))  # type: ignore[arg-type]
    with pytest.raises(ValueError, match="twice on line 0"):
        moving_effects(spans, lines, [case, case], stations_of(spans, 4))
    assert moving_effects(spans, lines, [], stations_of(spans, 4)) is None
