"""Continuous lines against finite elements, published coefficients and equilibrium."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.line_table import LineTable, simple_lines
from ifccheck.analysis.lines import continuous, support_reactions
from ifccheck.analysis.loads import LINE, MOMENT, POINT
from ifccheck.analysis.spans import CONTINUOUS, FIXED, FREE, PINNED, SpanTable
from ifccheck.analysis.statics import CaseEffects, Solved, effects_at, solve
from ifccheck.analysis.stations import NOWHERE, StationTable, make_stations
from ifccheck.analysis.stiffness import Curvature, places_between, with_varying_stiffness
from tests.line_models import Line, Load, Solution, finite_elements, load_rows, tables

EI = 4.0e13


def solved_lines(lines: list[Line]) -> tuple[Solved, LineTable]:
    spans, loads, table = tables(lines)
    return continuous(solve(spans, loads, 1), table), table


def uniform(count: int, loaded: list[int] | None = None, w: float = 1.0) -> Line:
    """Equal spans of 1 with a uniform load on some (counted from 1)."""
    loads = [
        [(LINE, 0.0, 1.0, w, w)] if loaded is None or place + 1 in loaded else []
        for place in range(count)
    ]
    return Line([1.0] * count, loads, [1.0] * count)


def along(solved: Solved, divisions: int = 1000) -> tuple[StationTable, CaseEffects]:
    stations = make_stations(solved.spans, solved.loads, NOWHERE, divisions)
    return stations, effects_at(solved, stations)


# --- published -------------------------------------------------------------------------------


@pytest.mark.parametrize("count", [2, 3, 4, 6])
def test_equal_spans_under_one_load_have_the_published_coefficients(
    reference: Path, count: int
) -> None:
    entry = published(reference, f"ST-CONT-{count}")
    solved, table = solved_lines([uniform(count)])
    stations, effects = along(solved)
    near = pytest.approx
    rel = entry["tolerance_pct"] / 100.0
    for place, value in enumerate(entry["outputs"]["M_support"]):
        assert -effects.end_moments[0, place, 1] == near(value, rel=rel)
    force = support_reactions(solved, table).force[0]
    for place, value in enumerate(entry["outputs"]["R"]):
        assert force[[place, -1 - place]] == near([value, value], rel=rel)
    for place, value in enumerate(entry["outputs"]["M_span"]):
        assert effects.moment[0, stations.beam == place].max() == near(value, rel=rel)


def test_four_spans_of_which_two_are_loaded(reference: Path) -> None:
    entry = published(reference, "ST-CONT4-ALT")
    wanted, rel = entry["outputs"], entry["tolerance_pct"] / 100.0
    solved, table = solved_lines([uniform(4, entry["inputs"]["loaded"])])
    stations, effects = along(solved)
    assert support_reactions(solved, table).force[0] == pytest.approx(wanted["R"], rel=rel)
    for place, name in enumerate(("MB", "MC", "MD")):
        assert -effects.end_moments[0, place, 1] == pytest.approx(wanted[name], rel=rel)
    for place, name in ((0, "M1"), (2, "M3")):
        here = stations.beam == place
        assert effects.moment[0, here].max() == pytest.approx(wanted[name], rel=rel)
    assert effects.deflection is not None
    assert effects.deflection[0].max() == pytest.approx(wanted["defl"], rel=rel)


def published(reference: Path, name: str) -> dict[str, dict[str, object]]:
    stock = yaml.safe_load((reference / "statics.yaml").read_text())
    return next(entry for entry in stock if entry["id"] == name)


# --- finite elements -------------------------------------------------------------------------


def random_line(random: np.random.Generator) -> Line:
    count = int(random.integers(1, 9))
    lengths = random.uniform(2000.0, 9000.0, count).tolist()
    line = Line(
        lengths,
        [random_loads(random, length) for length in lengths],
        (EI * random.uniform(0.3, 3.0, count)).tolist(),
        vertical=random.choice([np.inf, 5e3, 1e5], count + 1, p=[0.6, 0.2, 0.2]).tolist(),
        rotational=random.choice([0.0, 3e10, np.inf], count + 1, p=[0.6, 0.3, 0.1]).tolist(),
        settlement=(random.uniform(-5.0, 20.0, count + 1) * (random.random() < 0.5)).tolist(),
        tips=tuple((random.random(2) < 0.3).tolist()) if count > 2 else (False, False),
        against=(random.random(count) < 0.4).tolist(),
    )
    if count == 1 and not any(line.rotational):
        line.rotational[0] = 2e10
    return line


def random_loads(random: np.random.Generator, length: float) -> list[Load]:
    """Loads at whole 24ths of a span, so that no element of a mesh is very short."""
    loads: list[Load] = []
    for kind in random.integers(0, 3, size=random.integers(0, 4)).tolist():
        start, end = (np.sort(random.choice(25, 2, replace=False)) / 24.0 * length).tolist()
        one, two = (
            random.uniform(-10.0, 40.0, 2) * {LINE: 1, POINT: 2e3, MOMENT: 2e6}[kind]
        ).tolist()
        loads.append(
            (kind, start, end, one, two) if kind == LINE else (kind, start, start, one, one)
        )
    return loads


def assert_agree(
    line: Line, solution: Solution, solved: Solved, table: LineTable, first: int, slack: float
) -> None:
    """Compare every element's two ends, just inside it, and every support."""
    bounds = np.concatenate([[0.0], np.cumsum(line.lengths)])
    middle = solution.x.mean(axis=1)
    place = np.clip(np.searchsorted(bounds, middle) - 1, 0, len(line.lengths) - 1)
    row = first + place
    local = solution.x - bounds[place][:, None]
    against = np.array(line.against)[place]
    local = np.where(against[:, None], np.array(line.lengths)[place][:, None] - local, local)
    x = solved.spans.start[row][:, None] + local
    side = np.where(against[:, None], [[-1, 1]], [[1, -1]])
    effects = effects_at(
        solved, StationTable(np.repeat(row, 2), x.ravel(), side.ravel().astype(np.intp))
    )
    sign = np.where(against, -1.0, 1.0)[:, None]
    scale = np.abs(solution.moment).max() + 1.0
    shape = solution.x.shape
    np.testing.assert_allclose(
        effects.moment[0].reshape(shape), solution.moment, rtol=0, atol=slack * scale
    )
    np.testing.assert_allclose(
        effects.shear[0].reshape(shape) * sign, solution.shear,
        rtol=0, atol=slack * max(np.abs(solution.shear).max(), 1.0),
    )  # fmt: skip
    node = np.flatnonzero(table.line == table.line[np.flatnonzero(table.span == first)[0]])
    nodes = np.append(table.left[node], table.right[node[-1]])
    reactions = support_reactions(solved, table)
    for found, wanted in ((reactions.force, solution.force), (reactions.moment, solution.turning)):
        size = np.abs(wanted).max() + scale
        np.testing.assert_allclose(found[0, nodes], wanted, rtol=0, atol=slack * size)
    if effects.deflection is not None and not np.isnan(effects.deflection[0]).any():
        stiffness = np.array(line.stiffness)[place][:, None]
        wanted = np.stack([solution.deflection[:-1], solution.deflection[1:]], axis=1)
        np.testing.assert_allclose(
            effects.deflection[0].reshape(shape) / stiffness, wanted,
            rtol=0, atol=slack * np.abs(wanted).max(),
        )  # fmt: skip


@pytest.mark.parametrize("seed", range(6))
def test_random_lines_agree_with_finite_elements(seed: int) -> None:
    random = np.random.default_rng(700 + seed)
    lines = [random_line(random) for _ in range(8)]
    solved, table = solved_lines(lines)
    first = 0
    for line in lines:
        assert_agree(line, finite_elements(line, 12), solved, table, first, 1e-7)
        first += len(line.lengths)


def test_tapered_lines_agree_with_finite_elements() -> None:
    """Depth varies linearly in some spans: middle stiffness of ever finer elements, and the
    limit that two meshes of second order point to."""
    random = np.random.default_rng(12)
    for _ in range(4):
        line = random_line(random)
        line.settlement = [0.0] * len(line.settlement)
        bounds = np.concatenate([[0.0], np.cumsum(line.lengths)])
        ends = EI * random.uniform(0.5, 3.0, (len(line.lengths), 2))
        ends[random.random(len(line.lengths)) < 0.4] = EI

        def stiffness_at(x: float, bounds=bounds, ends=ends) -> float:  # type: ignore[no-untyped-def]
            span = int(np.clip(np.searchsorted(bounds, x) - 1, 0, len(ends) - 1))
            part = (x - bounds[span]) / (bounds[span + 1] - bounds[span])
            roots = np.cbrt(ends[span])
            return float((roots[0] + (roots[1] - roots[0]) * part) ** 3)

        coarse, fine = (finite_elements(line, 24, stiffness_at, parts) for parts in (2, 4))
        spans, loads, table = tables([line])
        table = replace(table, stiffness=np.array([one[0] for one in ends]))
        curvature = curvature_along(line, spans, loads, ends)
        solved = continuous(solve(spans, loads, 1), table, curvature)
        limit = {
            name: (4.0 * getattr(fine, name) - getattr(coarse, name)) / 3.0
            for name in ("force", "turning")
        }
        reactions = support_reactions(solved, table)
        for found, name in ((reactions.force, "force"), (reactions.moment, "turning")):
            of = fine.moment if name == "turning" else limit[name]
            size = np.abs(of).max() + 1.0
            np.testing.assert_allclose(found[0], limit[name], rtol=0, atol=1e-6 * size)


def curvature_along(line: Line, spans: SpanTable, loads: object, ends: np.ndarray) -> Curvature:
    varying = ends[:, 0] != ends[:, 1]
    beam, x, length = places_between(make_stations(spans, loads, NOWHERE))  # type: ignore[arg-type]
    part = (x - spans.start[beam]) / spans.length[beam]
    part = np.where(np.array(line.against)[beam], 1.0 - part, part)
    roots = np.cbrt(ends[beam])
    stiffness = (roots[:, 0] + (roots[:, 1] - roots[:, 0]) * part) ** 3
    kept = varying[beam]
    return Curvature(beam[kept], x[kept], (length / stiffness)[kept])


# --- single spans as lines -------------------------------------------------------------------


def test_one_span_held_by_springs_lies_between_pinned_and_fixed() -> None:
    """With a column of stiffness k at both ends: w L2 / 12 / (1 + 2 EI / (k L)) by hand."""
    k, length = 2.0e10, 6000.0
    line = Line([length], [[(LINE, 0.0, length, 10.0, 10.0)]], [EI], rotational=[k, k])
    solved, table = solved_lines([line])
    expected = 10.0 * length**2 / 12.0 / (1.0 + 2.0 * EI / (k * length))
    assert -effects_of(solved)[0] == pytest.approx([expected, expected], rel=1e-12)
    moment = support_reactions(solved, table).moment[0]
    assert moment == pytest.approx([expected, -expected], rel=1e-12)


def effects_of(solved: Solved) -> np.ndarray:
    stations = make_stations(solved.spans, solved.loads, NOWHERE, 4)
    return effects_at(solved, stations).end_moments[0]


PAIRS = ((PINNED, PINNED), (PINNED, FIXED), (FIXED, PINNED), (FIXED, FIXED), (FREE, FIXED))


@pytest.mark.parametrize("kinds", PAIRS)
def test_a_line_of_one_span_is_that_span(kinds: tuple[int, int]) -> None:
    """Ends of a line that are PINNED, FIXED or FREE are those of a single span, whether the line
    says so or the kinds of its CONTINUOUS ends are springs."""
    loads = load_rows([(0, 0, LINE, 500.0, 4000.0, 3.0, 9.0), (0, 0, MOMENT, 0.0, 0.0, 5e6, 5e6)])
    rotational = [np.inf if kind == FIXED else 0.0 for kind in kinds]
    vertical = [0.0 if kind == FREE else np.inf for kind in kinds]
    one = [np.array([kind]) for kind in kinds]
    single = SpanTable(np.array([0.0]), np.array([5000.0]), *one)
    sprung = replace(
        single,
        start_kind=np.where(one[0] == FREE, FREE, CONTINUOUS),
        end_kind=np.where(one[1] == FREE, FREE, CONTINUOUS),
    )
    table = LineTable(
        np.array([0]), np.array([0]), np.array([False]), np.array([EI]),
        np.array(vertical), np.array(rotational),
    )  # fmt: skip
    plain = solve(single, loads, 1)
    stations = make_stations(single, loads, NOWHERE)
    wanted = effects_at(plain, stations)
    for spans in (single, sprung):
        found = effects_at(continuous(solve(spans, loads, 1), table), stations)
        for name in ("moment", "shear", "deflection", "reactions", "end_moments"):
            value = getattr(wanted, name)
            np.testing.assert_allclose(
                getattr(found, name), value, rtol=1e-9, atol=1e-9 * np.abs(value).max()
            )


def test_spans_of_no_line_stay_what_they_are_to_the_last_bit() -> None:
    spans, _, table = tables([uniform(2)])
    single = SpanTable(
        np.append(spans.start, 0.0), np.append(spans.end, 3.0),
        np.append(spans.start_kind, FIXED), np.append(spans.end_kind, PINNED),
    )  # fmt: skip
    rows = load_rows([(2, 0, LINE, 0.3, 2.1, 1.7, 0.9)])
    before = solve(single, rows, 1)
    after = continuous(before, table)
    for name in ("reaction", "moment", "slope", "deflection"):
        assert getattr(after.start, name)[0, 2] == getattr(before.start, name)[0, 2]


# --- laws ------------------------------------------------------------------------------------

seeds = st.integers(0, 10**6)


def reactions_of(line: Line) -> tuple[np.ndarray, np.ndarray]:
    solved, table = solved_lines([line])
    found = support_reactions(solved, table)
    return found.force[0], found.moment[0]


@settings(max_examples=40, deadline=None)
@given(seeds)
def test_supports_carry_the_whole_load(seed: int) -> None:
    line = random_line(np.random.default_rng(seed))
    line.settlement = [0.0] * len(line.settlement)
    force, moment = reactions_of(line)
    bounds = np.concatenate([[0.0], np.cumsum(line.lengths)])
    total, about, size = 0.0, 0.0, 1e-6
    for low, part in zip(bounds, line.loads, strict=False):
        for kind, start, end, one, two in part:
            w = (one + two) / 2.0 * (end - start) if kind == LINE else one * (kind == POINT)
            centre = low + start
            if kind == LINE and one + two:
                centre += (end - start) * (one + 2.0 * two) / (3.0 * (one + two))
            total += w
            about += w * centre - (one if kind == MOMENT else 0.0)
            size += abs(w) + (abs(one) / 1e3 if kind == MOMENT else 0.0)
    assert force.sum() == pytest.approx(total, abs=1e-12 * size)
    turning = (force * bounds).sum() - about
    assert moment.sum() == pytest.approx(-turning, abs=1e-12 * size * bounds[-1])


@settings(max_examples=30, deadline=None)
@given(seeds)
def test_a_line_turned_round_gives_the_same(seed: int) -> None:
    """The nodes of the line are counted from the other end; no span changes its own x."""
    line = random_line(np.random.default_rng(seed))
    back = Line(
        line.lengths[::-1],
        turned_loads(line)[::-1],
        line.stiffness[::-1], line.vertical[::-1], line.rotational[::-1], line.settlement[::-1],
        line.tips[::-1], [not one for one in line.against][::-1],
    )  # fmt: skip
    force, moment = reactions_of(line)
    there, turning = reactions_of(back)
    np.testing.assert_allclose(force, there[::-1], atol=1e-9 * (np.abs(force).max() + 1.0))
    np.testing.assert_allclose(moment, -turning[::-1], atol=1e-9 * (np.abs(moment).max() + 1e3))


def turned_loads(line: Line) -> list[list[Load]]:
    return [
        [turned(load, length) for load in part]
        for length, part in zip(line.lengths, line.loads, strict=True)
    ]


def turned(load: Load, length: float) -> Load:
    kind, start, end, one, two = load
    sign = -1.0 if kind == MOMENT else 1.0
    return kind, length - end, length - start, sign * two, sign * one


@settings(max_examples=30, deadline=None)
@given(seeds, st.floats(0.05, 0.95))
def test_a_line_load_cut_in_two_does_the_same(seed: int, part: float) -> None:
    line = random_line(np.random.default_rng(seed))
    cut = [[piece for load in loads for piece in pieces(load, part)] for loads in line.loads]
    force, moment = reactions_of(line)
    again, turning = reactions_of(replace(line, loads=cut))
    np.testing.assert_allclose(force, again, atol=1e-9 * (np.abs(force).max() + 1.0))
    np.testing.assert_allclose(moment, turning, atol=1e-9 * (np.abs(moment).max() + 1e3))


def pieces(load: Load, part: float) -> list[Load]:
    kind, start, end, one, two = load
    if kind != LINE:
        return [
            (kind, start, end, one * part, two * part),
            (kind, start, end, one * (1 - part), two * (1 - part)),
        ]
    at, value = start + part * (end - start), one + part * (two - one)
    return [(kind, start, at, one, value), (kind, at, end, value, two)]


@settings(max_examples=30, deadline=None)
@given(seeds)
def test_a_span_cut_at_a_place_without_support_stays_one(seed: int) -> None:
    random = np.random.default_rng(seed)
    line = random_line(random)
    place = int(random.integers(len(line.lengths)))
    length = line.lengths[place]
    at = float(random.uniform(0.2, 0.8)) * length
    halves: tuple[list[Load], list[Load]] = ([], [])
    for kind, start, end, one, two in line.loads[place]:
        for half, low, high in ((0, 0.0, at), (1, at, length)):
            first, last = max(start, low), min(end, high)
            if kind != LINE and (start < at) == (half == 0):
                halves[half].append((kind, start - low, start - low, one, two))
            elif kind == LINE and first < last:
                values = [one + (two - one) * (x - start) / (end - start) for x in (first, last)]
                halves[half].append((kind, first - low, last - low, *values))
    if (place == 0 and line.tips[0]) or (place == len(line.lengths) - 1 and line.tips[1]):
        return

    def spread(values: list, *new: object) -> list:  # type: ignore[type-arg]
        return [*values[:place], *new, *values[place + 1 :]]

    def between(values: list, new: float) -> list:  # type: ignore[type-arg]
        return [*values[: place + 1], new, *values[place + 1 :]]

    cut = Line(
        spread(line.lengths, at, length - at), spread(line.loads, *halves),
        spread(line.stiffness, *[line.stiffness[place]] * 2), between(line.vertical, 0.0),
        between(line.rotational, 0.0), between(line.settlement, 0.0), line.tips,
        spread(line.against, *[line.against[place]] * 2),
    )  # fmt: skip
    force, moment = reactions_of(line)
    again, turning = reactions_of(cut)
    assert abs(again[place + 1]) <= 1e-9 * (np.abs(force).max() + 1.0)
    scale = np.abs(force).max() + 1.0
    np.testing.assert_allclose(force, np.delete(again, place + 1), atol=1e-8 * scale)
    scale = np.abs(moment).max() + 1e3
    np.testing.assert_allclose(moment, np.delete(turning, place + 1), atol=1e-8 * scale)


@settings(max_examples=20, deadline=None)
@given(seeds)
def test_effects_of_a_line_add_up(seed: int) -> None:
    """Each case alone, and both together as a third."""
    random = np.random.default_rng(seed)
    line = random_line(random)
    line.settlement = [0.0] * len(line.settlement)
    other = replace(line, loads=[random_loads(random, length) for length in line.lengths])
    both = replace(line, loads=[a + b for a, b in zip(line.loads, other.loads, strict=True)])
    first, second, sum_ = (reactions_of(one) for one in (line, other, both))
    for one, two, three in zip(first, second, sum_, strict=True):
        scale = np.abs(one).max() + np.abs(two).max() + 1.0
        np.testing.assert_allclose(one + two, three, atol=1e-10 * scale)


def test_many_lines_at_once_are_each_what_they_are_alone() -> None:
    random = np.random.default_rng(5)
    lines = [random_line(random) for _ in range(20)]
    solved, table = solved_lines(lines)
    found = support_reactions(solved, table)
    force = np.concatenate([reactions_of(line)[0] for line in lines])
    moment = np.concatenate([reactions_of(line)[1] for line in lines])
    np.testing.assert_allclose(found.force[0], force, atol=1e-6)
    np.testing.assert_allclose(found.moment[0], moment, atol=1e-2)


# --- what cannot be --------------------------------------------------------------------------


def test_a_line_that_nothing_holds_is_refused() -> None:
    spans, loads, table = tables([uniform(1)])
    with pytest.raises(ValueError, match="row 0 is not held"):
        continuous(solve(spans, loads, 1), replace(table, vertical_spring=np.array([np.inf, 0.0])))
    spans, loads, table = tables([Line([1.0, 1.0], [[], []], [1.0, 1.0], tips=(True, True))])
    with pytest.raises(ValueError, match="row 0 is not held"):
        continuous(solve(spans, loads, 1), table)


def test_a_line_broken_at_a_support_is_refused() -> None:
    spans, loads, table = tables([uniform(2)])
    broken = replace(spans, start_kind=np.array([CONTINUOUS, PINNED]))
    with pytest.raises(ValueError, match="row 1 does not go on"):
        continuous(solve(broken, loads, 1), table)


def test_a_spring_below_nothing_is_refused() -> None:
    spans, loads, table = tables([uniform(2)])
    with pytest.raises(ValueError, match="spring below 0"):
        continuous(
            solve(spans, loads, 1), replace(table, rotational_spring=np.array([0.0, -1.0, 0.0]))
        )
    with pytest.raises(ValueError, match="spring below 0"):
        continuous(
            solve(spans, loads, 1), replace(table, vertical_spring=np.array([np.inf, np.nan, 1.0]))
        )


@pytest.mark.parametrize("stiffness", [0.0, -1.0, np.nan, np.inf])
def test_a_span_without_stiffness_is_refused(stiffness: float) -> None:
    spans, loads, table = tables([uniform(2)])
    with pytest.raises(ValueError, match="no stiffness"):
        continuous(solve(spans, loads, 1), replace(table, stiffness=np.array([1.0, stiffness])))


def test_supports_that_sink_need_an_end_that_minds() -> None:
    spans, loads, table = tables([uniform(1)])
    fixed = replace(spans, start_kind=np.array([FIXED]), end_kind=np.array([FIXED]))
    with pytest.raises(ValueError, match="row 0 has supports that sink"):
        continuous(solve(fixed, loads, 1), replace(table, settlement=np.array([[0.0, 1.0]])))
    with pytest.raises(ValueError, match="row 0 has supports that sink"):
        continuous(solve(fixed, loads, 1), replace(table, vertical_spring=np.array([9.0, 9.0])))


def test_simple_lines_rest_on_all_but_their_tips() -> None:
    spans, _, table = tables([Line([1.0, 2.0], [[], []], [1.0, 1.0], tips=(False, True))])
    made = simple_lines(spans, table.line, table.span, table.reversed, table.stiffness)
    assert made.vertical_spring.tolist() == [np.inf, np.inf, 0.0]
    assert made.rotational_spring.tolist() == [0.0, 0.0, 0.0]
    rows = load_rows([(1, 0, POINT, spans.end[1], spans.end[1], 3.0, 3.0)])
    solved = continuous(solve(spans, rows, 1), made)
    assert support_reactions(solved, made).force[0] == pytest.approx([-6.0, 9.0, 0.0])


def test_varying_spans_of_no_line_are_solved_beside_lines() -> None:
    """A fixed tapered span by itself, and next to it a line with none: neither minds the other."""
    spans, _, table = tables([uniform(2)])
    both = SpanTable(
        np.append(spans.start, 0.0), np.append(spans.end, 1.0),
        np.append(spans.start_kind, FIXED), np.append(spans.end_kind, FIXED),
    )  # fmt: skip
    ends = np.stack([both.start, both.end], axis=1).tolist()
    every = load_rows([(row, 0, LINE, *ends[row], 1.0, 1.0) for row in range(3)])
    beam, x, length = places_between(make_stations(both, every, NOWHERE))
    kept = beam == 2
    curvature = Curvature(beam[kept], x[kept], (length / (1.0 + x))[kept])
    single = with_varying_stiffness(solve(both, every, 1), curvature)
    solved = continuous(single, table, curvature)
    assert effects_of(solved).shape == (3, 2)
    found, wanted = solved.start.moment[0], single.start.moment[0]
    assert found[2] == wanted[2] != 0.0
    assert found[1] == pytest.approx(-0.125)
