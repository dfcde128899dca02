"""Where along the beams things are evaluated, and the tables that go in."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.loads import (
    LINE,
    MOMENT,
    POINT,
    join_loads,
    load_table,
    self_weight_lines,
)
from ifccheck.analysis.spans import FIXED, FREE, PINNED, SpanTable, span_table, stands
from ifccheck.analysis.stations import (
    Places,
    critical_rows,
    join_places,
    make_stations,
    places,
    station_rows,
)
from ifccheck.beam import Load, Span, Support

NONE = Places(np.empty(0, np.intp), np.empty(0), np.empty(0, np.bool_))
NO_LOADS = load_table([], {}, {})


def simple(*ends: tuple[float, float]) -> SpanTable:
    start, end = (np.array(part, float) for part in zip(*ends, strict=True))
    kind = np.full(len(start), PINNED)
    return SpanTable(start, end, kind, kind)


def test_loads_become_a_table_sorted_by_beam() -> None:
    loads = [
        Load("b", "press", "line", 100.0, 900.0, (4.0, 9.0)),
        Load("a", "self", "point", 500.0, 999.0, (60e3, 0.0)),
        Load("b", "self", "moment", 700.0, 700.0, (5e6, 0.0)),
    ]
    table = load_table(loads, {"a": 0, "b": 1}, {"self": 0, "press": 1})
    np.testing.assert_array_equal(table.beam, [0, 1, 1])
    np.testing.assert_array_equal(table.case, [0, 1, 0])
    np.testing.assert_array_equal(table.kind, [POINT, LINE, MOMENT])
    np.testing.assert_array_equal(table.start, [500.0, 100.0, 700.0])
    np.testing.assert_array_equal(table.end, [500.0, 900.0, 700.0])
    np.testing.assert_array_equal(table.value_end, [0.0, 9.0, 0.0])


@pytest.mark.parametrize(("beam", "case"), [("lost", "self"), ("a", "lost")])
def test_a_load_on_nothing_is_not_dropped(beam: str, case: str) -> None:
    with pytest.raises(KeyError, match="lost"):
        load_table([Load(beam, case, "point", 1.0, 1.0, (1.0, 1.0))], {"a": 0}, {"self": 0})


def test_self_weight_is_area_times_unit_weight() -> None:
    """300 x 600 at 23.5 kN/m3 is 4.23 kN/m, and a taper goes from one end's to the other's."""
    lines = self_weight_lines(
        beam=np.array([1, 0]),
        case=3,
        start=np.array([0.0, 10.0]),
        end=np.array([5000.0, 4000.0]),
        area_start=np.array([300.0 * 600.0, 1e5]),
        area_end=np.array([300.0 * 300.0, 1e5]),
        unit_weight=np.array([23.5e-6, 20e-6]),
    )
    np.testing.assert_array_equal(lines.beam, [0, 1])
    np.testing.assert_allclose(lines.value_start, [2.0, 4.23])
    np.testing.assert_allclose(lines.value_end, [2.0, 2.115])
    np.testing.assert_array_equal(lines.case, [3, 3])
    joined = join_loads(lines, lines)
    np.testing.assert_array_equal(joined.beam, [0, 0, 1, 1])


def test_spans_become_a_table() -> None:
    hinge, root, tip = (Support(kind, 200.0, "brief") for kind in ("pinned", "fixed", "free"))
    table = span_table([Span(100.0, 900.0, hinge, root), Span(0.0, 500.0, root, tip)])
    np.testing.assert_array_equal(table.start_kind, [PINNED, FIXED])
    np.testing.assert_array_equal(table.end_kind, [FIXED, FREE])
    np.testing.assert_array_equal(table.length, [800.0, 500.0])
    with pytest.raises(ValueError, match="row 1 is not held"):
        span_table([Span(0.0, 9.0, hinge, hinge), Span(0.0, 9.0, tip, hinge)])


def test_the_pairs_that_stand() -> None:
    kinds = (FREE, PINNED, FIXED)
    standing = {(a, b) for a in kinds for b in kinds if stands(np.array([a]), np.array([b]))[0]}
    assert standing == {
        (PINNED, PINNED),
        (PINNED, FIXED),
        (FIXED, PINNED),
        (FIXED, FIXED),
        (FIXED, FREE),
        (FREE, FIXED),
    }


def test_stations_stand_at_every_change_and_on_both_sides_of_a_jump() -> None:
    loads = load_table(
        [
            Load("a", "x", "line", -50.0, 610.0, (1.0, 1.0)),
            Load("a", "x", "point", 333.0, 333.0, (1.0, 1.0)),
            Load("a", "x", "moment", 500.0, 500.0, (1.0, 1.0)),
        ],
        {"a": 0},
        {"x": 0},
    )
    edges = join_places(
        places(np.zeros(3, np.intp), np.array([0.0, 77.0, 1500.0]), two_sided=True),
        places(np.zeros(2, np.intp), np.array([90.0, np.nan]), two_sided=False),
    )
    stations = make_stations(simple((0.0, 1000.0)), loads, edges, divisions=4)
    found = list(zip(stations.x.tolist(), stations.side.tolist(), strict=True))
    assert found == [
        (0.0, 1),
        (77.0, -1),
        (77.0, 1),
        (90.0, 0),
        (250.0, 0),
        (333.0, -1),
        (333.0, 1),
        (500.0, -1),
        (500.0, 1),
        (610.0, 0),
        (750.0, 0),
        (1000.0, 0),
    ]


def test_places_that_are_one_are_put_together() -> None:
    near = Places(
        np.zeros(3, np.intp),
        np.array([500.0 + 4e-7, 300.0, 300.0 + 5e-7]),
        np.array([True, False, True]),
    )
    stations = make_stations(simple((0.0, 1000.0)), NO_LOADS, near, divisions=2)
    np.testing.assert_allclose(stations.x, [0.0, 300.0, 300.0, 500.0, 500.0, 1000.0], atol=1e-6)
    np.testing.assert_array_equal(stations.side, [0, -1, 1, -1, 1, 0])


spans_drawn = st.tuples(st.floats(0.0, 500.0), st.floats(600.0, 20000.0))


@settings(max_examples=50, deadline=None)
@given(
    st.lists(spans_drawn, min_size=1, max_size=4),
    st.lists(st.tuples(st.integers(0, 3), st.floats(0.0, 20000.0), st.booleans()), max_size=12),
)
def test_laws_of_stations(
    ends: list[tuple[float, float]], extra: list[tuple[int, float, bool]]
) -> None:
    extra = [(beam % len(ends), x, two) for beam, x, two in extra]
    table = Places(
        np.array([beam for beam, _, _ in extra], np.intp),
        np.array([x for _, x, _ in extra], float),
        np.array([two for _, _, two in extra], bool),
    )
    stations = make_stations(simple(*ends), NO_LOADS, table)
    for beam, (start, end) in enumerate(ends):
        here = stations.beam == beam
        x, side = stations.x[here], stations.side[here]
        assert x[0] == start
        assert x[-1] == end
        gaps = np.diff(x)
        assert gaps.max() <= (end - start) / 40.0 * (1.0 + 1e-9)
        together = gaps < 1e-7
        assert (side[:-1][together] == -1).all()
        assert (side[1:][together] == 1).all()
    for beam, x, two_sided in extra:
        start, end = ends[beam]
        at = (stations.beam == beam) & (np.abs(stations.x - x) <= 2e-6)
        inside = start + 1e-5 < x < end - 1e-5
        if start <= x <= end:
            assert at.any()
        if inside and two_sided:
            assert {-1, 1} <= set(stations.side[at].tolist())
    shuffled = np.random.default_rng(1).permutation(len(extra))
    again = make_stations(
        simple(*ends),
        NO_LOADS,
        Places(table.beam[shuffled], table.x[shuffled], table.two_sided[shuffled]),
    )
    np.testing.assert_array_equal(again.x, stations.x)
    np.testing.assert_array_equal(again.side, stations.side)


def test_the_critical_section_serves_what_lies_between_it_and_its_support() -> None:
    spans = simple((0.0, 1000.0), (0.0, 1000.0))
    start, end = np.array([260.0, np.nan]), np.array([800.0, 900.0])
    extra = join_places(
        places(np.arange(2), start, two_sided=True), places(np.arange(2), end, two_sided=True)
    )
    stations = make_stations(spans, NO_LOADS, extra, divisions=4)
    rows = critical_rows(stations, start, end)
    served = [
        (int(b), float(x), int(s), float(stations.x[r]), int(stations.side[r]))
        for b, x, s, r, n in zip(
            stations.beam, stations.x, stations.side, rows, range(len(rows)), strict=True
        )
        if r != n
    ]
    assert served == [
        (0, 0.0, 0, 260.0, -1),
        (0, 250.0, 0, 260.0, -1),
        (0, 1000.0, 0, 800.0, 1),
        (1, 1000.0, 0, 900.0, 1),
    ]


def test_a_place_without_a_station_is_refused() -> None:
    stations = make_stations(simple((0.0, 1000.0)), NO_LOADS, NONE, divisions=4)
    assert station_rows(stations, np.array([0]), np.array([250.0]), left=True).tolist() == [1]
    with pytest.raises(ValueError, match="no station on row 0 at 260"):
        station_rows(stations, np.array([0]), np.array([260.0]), left=True)
    with pytest.raises(ValueError, match="no station"):
        critical_rows(stations, np.array([1200.0]), np.array([np.nan]))
