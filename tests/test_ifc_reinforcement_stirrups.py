"""Stirrups read from bodies: legs, zones of one spacing, what does not count.

What is expected is written out from the geometry that each test draws.
"""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.ifc.stirrup_sets import Zones, zones_of_one_spacing
from tests.barred_beams import (
    LENGTH,
    Curve,
    Found,
    ModelWithBars,
    bent,
    closed_stirrup,
    hooked_stirrup,
    straight,
)

TEN = math.pi * 100.0 / 4.0


def read_stirrups(*curves: Curve, diameter: float = 10.0, **attributes: str) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60), diameter=20.0)
    model.bars(beam, *curves, diameter=diameter, **attributes)
    return model.read(beam)


def at(places: list[float]) -> list[Curve]:
    return [closed_stirrup(x, 110.0, 40.0, 560.0) for x in places]


def spans(found: Found) -> list[tuple[float, float, float]]:
    return [(s.start, s.end, s.spacing) for s in found.stirrups]


def test_equal_stirrups_make_one_zone_over_the_whole_beam() -> None:
    found = read_stirrups(*at([50.0 + 200.0 * k for k in range(30)]), SteelGrade="B500B")
    (zone,) = found.stirrups
    assert (zone.start, zone.end, zone.spacing) == pytest.approx((0.0, LENGTH, 200.0))
    assert (zone.legs, zone.closed) == (2, True)
    assert (zone.diameter, zone.leg_area) == pytest.approx((10.0, TEN))
    assert (zone.bottom, zone.top, zone.half_width) == pytest.approx((35.0, 565.0, 115.0))
    assert zone.yield_strength is not None
    assert zone.yield_strength.value == 500.0
    assert found.reasons == ""


def test_closer_stirrups_at_the_ends_make_zones_of_their_own() -> None:
    left = [50.0 + 100.0 * k for k in range(11)]  # 50 to 1050
    middle = [1050.0 + 300.0 * k for k in range(1, 13)]  # 1350 to 4650, and on to 4950
    middle = [x for x in middle if x < 4950.0]
    right = [4950.0 + 100.0 * k for k in range(11)]  # 4950 to 5950
    found = read_stirrups(*at([*left, *middle, *right]))
    assert spans(found) == [
        pytest.approx((0.0, 1050.0, 100.0)),
        pytest.approx((1050.0, 4950.0, 300.0)),
        pytest.approx((4950.0, 6000.0, 100.0)),
    ]


def test_the_greatest_gap_of_a_zone_is_its_spacing() -> None:
    found = read_stirrups(*at([100.0, 300.0, 497.0, 694.0, 897.0, 1097.0]))
    assert spans(found)[0] == pytest.approx((0.0, 1097.0 + 101.5, 203.0))


def test_zones_end_half_a_spacing_beyond_stirrups_that_do_not_reach_the_end() -> None:
    found = read_stirrups(*at([1000.0, 1200.0, 1400.0]))
    assert spans(found) == [pytest.approx((900.0, 1500.0, 200.0))]


def test_a_wide_gap_is_a_zone_of_its_own_spacing() -> None:
    found = read_stirrups(*at([100.0, 300.0, 500.0, 1100.0, 1300.0, 1500.0]))
    assert spans(found) == [
        pytest.approx((0.0, 500.0, 200.0)),
        pytest.approx((500.0, 1100.0, 600.0)),
        pytest.approx((1100.0, 1600.0, 200.0)),
    ]


def test_two_stirrups_close_together_do_not_make_a_close_zone() -> None:
    found = read_stirrups(*at([100.0, 300.0, 500.0, 550.0, 750.0, 950.0]))
    assert all(spacing == pytest.approx(200.0) for _, _, spacing in spans(found))


def test_a_single_stirrup_does_not_count() -> None:
    found = read_stirrups(*at([3000.0]))
    assert found.stirrups == ()
    assert "the only stirrup" in found.remarks


def test_stirrups_modelled_twice_count_once() -> None:
    found = read_stirrups(*at([100.0, 300.0, 500.0, 100.0, 300.0, 500.0]))
    assert [zone.legs for zone in found.stirrups] == [2]
    assert "modelled twice" in found.remarks


@pytest.mark.parametrize("offset", [0.0, 3.0, 12.0])
def test_nested_stirrups_add_their_legs(offset: float) -> None:
    outer = at([100.0, 300.0, 500.0])
    inner = [closed_stirrup(x + offset, 40.0, 40.0, 560.0) for x in (100.0, 300.0, 500.0)]
    found = read_stirrups(*outer, *inner)
    assert [zone.legs for zone in found.stirrups] == [4]
    (zone,) = found.stirrups
    assert zone.leg_area == pytest.approx(TEN)
    assert zone.spacing == pytest.approx(200.0)


def cross_tie(x: float, y: float) -> Curve:
    """A single leg with a 180 degree hook at each end."""
    points = [(x, y + 40, 500), (x, y + 40, 550), (x, y, 550), (x, y, 50), (x, y + 40, 50)]
    return bent([*points, (x, y + 40, 100)], 15.0)


def test_a_single_leg_between_stirrup_legs_counts_one() -> None:
    places = [100.0, 300.0, 500.0]
    found = read_stirrups(*at(places), *(cross_tie(x, 0.0) for x in places))
    assert [zone.legs for zone in found.stirrups] == [3]


def test_stirrups_of_two_diameters_add_their_areas() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60), diameter=20.0)
    places = (100.0, 300.0, 500.0)
    model.bars(beam, *(closed_stirrup(x, 110, 40, 560) for x in places), diameter=12.0)
    model.bars(beam, *(closed_stirrup(x, 40, 40, 560) for x in places), diameter=8.0)
    (zone,) = model.read(beam).stirrups
    assert zone.legs == 4
    total = 2.0 * math.pi * 12.0**2 / 4.0 + 2.0 * math.pi * 8.0**2 / 4.0
    assert zone.legs * zone.leg_area == pytest.approx(total)


def test_zones_change_where_the_legs_change_and_the_gap_between_has_the_lesser() -> None:
    places = [100.0 + 200.0 * k for k in range(10)]  # 100 to 1900
    inner = [closed_stirrup(x, 40.0, 40.0, 560.0) for x in places[:4]]
    found = read_stirrups(*at(places), *inner)
    assert [(z.start, z.end, z.legs) for z in found.stirrups] == [
        pytest.approx((0.0, 700.0, 4)),
        pytest.approx((700.0, 2000.0, 2)),
    ]


def open_stirrup(x: float, up: float, hook: float) -> Curve:
    """A U that is open at the top, its ends hooked inwards where ``hook`` is not 0."""
    legs = [(x, 110.0, up), (x, 110.0, 40.0), (x, -110.0, 40.0), (x, -110.0, up)]
    if hook:
        legs = [(x, 110.0 - hook, up), *legs, (x, -110.0 + hook, up)]
    return bent(legs, 25.0)


def test_an_open_stirrup_with_hooks_has_two_legs() -> None:
    found = read_stirrups(*(open_stirrup(x, 560.0, 85.0) for x in (100.0, 300.0, 500.0)))
    assert [(zone.legs, zone.closed) for zone in found.stirrups] == [(2, False)]


def test_legs_that_end_without_a_hook_do_not_count() -> None:
    found = read_stirrups(*(open_stirrup(x, 560.0, 0.0) for x in (100.0, 300.0, 500.0)))
    assert found.stirrups == ()
    assert "no leg crosses the height" in found.remarks


def test_legs_that_lap_are_not_counted_twice() -> None:
    """A U from below and a cap from above lap over the middle of the height."""
    places = (100.0, 300.0, 500.0)
    below = [open_stirrup(x, 400.0, 85.0) for x in places]
    above = [
        Curve(tuple((x, y, 600.0 - z) for x, y, z in curve.points), curve.arcs) for curve in below
    ]
    found = read_stirrups(*below, *above)
    assert [zone.legs for zone in found.stirrups] == [2]


def test_stirrups_of_part_of_the_height_do_not_count() -> None:
    found = read_stirrups(*(closed_stirrup(x, 110.0, 40.0, 400.0) for x in (100.0, 300.0, 500.0)))
    assert found.stirrups == ()
    assert "do not run through the height" in found.remarks


def test_ties_that_cross_only_the_width_do_not_count() -> None:
    found = read_stirrups(
        *(Curve(((x, -110.0, 300.0), (x, 110.0, 300.0))) for x in (100.0, 300.0, 500.0))
    )
    assert found.stirrups == ()
    assert "not counted in shear" in found.remarks


def test_diagonal_ties_do_not_count() -> None:
    found = read_stirrups(
        *(
            bent([(x, 110, 100), (x, 110, 40), (x, -110, 560), (x, -110, 500)], 12)
            for x in (1e3, 2e3)
        )
    )
    assert found.stirrups == ()


def test_inclined_stirrups_are_not_counted_and_said() -> None:
    ring = [(0.0, 110.0, 40.0), (520.0, 110.0, 560.0), (520.0, -110.0, 560.0), (0.0, -110.0, 40.0)]
    leaning = [Curve((*((x + a, b, c) for a, b, c in ring), (x, 110.0, 40.0))) for x in (1e3, 2e3)]
    found = read_stirrups(*leaning)
    assert found.stirrups == ()
    assert "inclined, not counted" in found.remarks


def test_hooks_round_one_corner_close_a_stirrup() -> None:
    found = read_stirrups(*(hooked_stirrup(x, 110, 40, 560, 80) for x in (100.0, 300.0, 500.0)))
    assert [(zone.legs, zone.closed) for zone in found.stirrups] == [(2, True)]


def test_stirrups_beyond_the_end_do_not_count() -> None:
    found = read_stirrups(*at([-200.0, 0.0, 200.0, 400.0]))
    assert spans(found) == [pytest.approx((0.0, 500.0, 200.0))]
    assert "beyond the end" in found.remarks


def test_stirrups_outside_the_concrete_are_a_reason() -> None:
    found = read_stirrups(*(closed_stirrup(x, 110.0, 40.0, 700.0) for x in (100.0, 300.0)))
    assert "outside the concrete" in found.reasons


def test_the_lowest_strength_of_stirrups_at_one_place_counts() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60))
    places = (100.0, 300.0, 500.0)
    model.bars(beam, *at(list(places)), diameter=10.0, SteelGrade="500W")
    inner = [closed_stirrup(x, 40, 40, 560) for x in places]
    model.bars(beam, *inner, diameter=10.0, SteelGrade="300R")
    (zone,) = model.read(beam).stirrups
    assert zone.yield_strength is not None
    assert zone.yield_strength.value == 300.0


def test_strength_known_of_some_stirrups_only_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60))
    places = (100.0, 300.0, 500.0)
    model.bars(beam, *at(list(places)), diameter=10.0, SteelGrade="500W")
    model.bars(beam, *(closed_stirrup(x, 40, 40, 560) for x in places), diameter=10.0)
    found = model.read(beam)
    assert "known and of others not" in found.reasons


@pytest.mark.parametrize("unit", ["mm", "m", "in"])
def test_mapped_stirrups_are_those_drawn_one_by_one(unit: str) -> None:
    places = [60.0, 160.0, 260.0, 460.0, 660.0, 860.0]
    expected = spans(read_stirrups(*at(places)))
    model = ModelWithBars(unit=unit)
    beam = model.beam(origin=(1000.0, 500.0, 3000.0), along=(1.0, 2.0, 0.25))
    model.bars(beam, straight(40, 5960, 0, 60))
    solid = model.swept(closed_stirrup(0.0, 110.0, 40.0, 560.0), 10.0)
    items = model.mapped(solid, [(x, 0.0, 0.0) for x in places])
    model.aggregate(beam, [model.bar([item], 10.0, beam) for item in items])
    found = model.read(beam)
    assert spans(found) == [pytest.approx(zone) for zone in expected]
    assert [zone.legs for zone in found.stirrups] == [2, 2]


def test_stirrups_in_a_low_and_in_a_high_place_of_one_map_are_told_apart() -> None:
    """The same map at two heights: only the lower one fits the section."""
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60))
    solid = model.swept(closed_stirrup(0.0, 110.0, 40.0, 560.0), 10.0)
    items = model.mapped(solid, [(100, 0, 0), (300, 0, 0), (500, 0, 0), (700, 0, 60)])
    bars = [model.bar([item], 10.0, beam) for item in items]
    model.aggregate(beam, bars)
    found = model.read(beam)
    assert f"#{bars[3].id()}: lies outside" in found.reasons
    assert f"#{bars[0].id()}" not in found.reasons


# the same stirrups modelled twice: legs nearer than two can lie


PLACES = (100.0, 300.0, 500.0)


@pytest.mark.parametrize(
    ("along", "wider", "higher"),
    [(0, 3, 0), (4, 0, 0), (8, 8, 0), (-4, -3, 5), (0, 0, 15), (4, 3, -8)],
)
def test_stirrups_nearer_than_they_can_lie_count_once(
    along: float, wider: float, higher: float
) -> None:
    copy = [
        closed_stirrup(x + along, 110.0 + wider, 40.0 - higher / 2.0, 560.0 + higher / 2.0)
        for x in PLACES
    ]
    found = read_stirrups(*at(list(PLACES)), *copy)
    assert [zone.legs for zone in found.stirrups] == [2]
    assert found.stirrups[0].leg_area == pytest.approx(TEN)
    assert "modelled twice" in found.remarks
    assert [s.kind for s in found.source("bars").remarks if "twice" in s.text] == ["doubt"]


@pytest.mark.parametrize(("along", "wider"), [(0, 10), (10, 0)])
def test_stirrups_that_touch_count_each(along: float, wider: float) -> None:
    copy = [closed_stirrup(x + along, 110.0 + wider, 40.0, 560.0) for x in PLACES]
    found = read_stirrups(*at(list(PLACES)), *copy)
    assert [zone.legs for zone in found.stirrups] == [4]
    assert "twice" not in found.remarks


def test_of_stirrups_in_one_another_the_thinner_counts() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60), diameter=20.0)
    model.bars(beam, *at(list(PLACES)), diameter=12.0)
    model.bars(beam, *at(list(PLACES)), diameter=8.0)
    (zone,) = model.read(beam).stirrups
    assert zone.legs * zone.leg_area == pytest.approx(2.0 * math.pi * 64.0 / 4.0)


@pytest.mark.parametrize("grades", [("500W", "300R"), ("300R", "500W")])
def test_of_equal_stirrups_in_one_another_the_weaker_steel_counts(grades: tuple[str, str]) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60), diameter=20.0)
    for grade in grades:
        model.bars(beam, *at(list(PLACES)), diameter=10.0, SteelGrade=grade)
    (zone,) = model.read(beam).stirrups
    assert zone.legs == 2
    assert zone.yield_strength is not None
    assert zone.yield_strength.value == 300.0


def test_a_side_drawn_twice_in_one_stirrup_is_one_leg() -> None:
    """A closed stirrup that goes on over its first side again."""
    ring = [(110, 560), (110, 40), (-110, 40), (-110, 560), (110, 560), (110, 40), (0, 40)]
    found = read_stirrups(*(Curve(tuple((x, float(y), float(z)) for y, z in ring)) for x in PLACES))
    assert [zone.legs for zone in found.stirrups] == [2]


def test_a_leg_drawn_through_that_of_another_stirrup_counts_once() -> None:
    found = read_stirrups(*at(list(PLACES)), *(cross_tie(x, 107.0) for x in PLACES))
    assert [zone.legs for zone in found.stirrups] == [2]
    assert "modelled twice" in found.remarks


# stirrups that hold the bars of neither face, or of one


def with_both_chords(*curves: Curve, top: float = 540.0, bar: float = 20.0) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, 0, 60), straight(40, 5960, 0, top), diameter=bar)
    model.bars(beam, *curves, diameter=10.0)
    return model.read(beam)


@pytest.mark.parametrize(
    ("bottom", "top"), [(145.0, 460.0), (45.0, 460.0), (145.0, 555.0), (91.0, 555.0), (45.0, 509.0)]
)
def test_stirrups_that_leave_bars_out_do_not_count(bottom: float, top: float) -> None:
    """Held where the centre line is within 1.5 diameters, 30 mm, of the bars at 60 and 540."""
    found = with_both_chords(*(closed_stirrup(x, 110.0, bottom, top) for x in PLACES))
    assert found.stirrups == ()
    assert "does not run from the outermost bars" in found.remarks
    kinds = [s.kind for s in found.source("bars").remarks if "outermost" in s.text]
    assert kinds == ["doubt"]


@pytest.mark.parametrize(("bottom", "top"), [(45.0, 555.0), (89.0, 511.0), (60.0, 540.0)])
def test_stirrups_that_hold_the_bars_count(bottom: float, top: float) -> None:
    found = with_both_chords(*(closed_stirrup(x, 110.0, bottom, top) for x in PLACES))
    assert [zone.legs for zone in found.stirrups] == [2]
    assert found.remarks == ""


def test_only_stirrups_that_hold_the_bars_count_beside_others() -> None:
    outer = [closed_stirrup(x, 110.0, 45.0, 555.0) for x in PLACES]
    inner = [closed_stirrup(x, 60.0, 145.0, 460.0) for x in PLACES]
    found = with_both_chords(*outer, *inner)
    assert [zone.legs for zone in found.stirrups] == [2]
    assert "does not run from the outermost bars" in found.remarks


def test_a_short_hoop_does_not_add_to_two_that_lap() -> None:
    below = [open_stirrup(x, 400.0, 85.0) for x in PLACES]
    above = [Curve(tuple((x, y, 600.0 - z) for x, y, z in c.points), c.arcs) for c in below]
    inner = [closed_stirrup(x, 60.0, 145.0, 460.0) for x in PLACES]
    found = with_both_chords(*below, *above, *inner)
    assert [zone.legs for zone in found.stirrups] == [2]


def test_where_a_face_has_no_bars_stirrups_reach_near_its_surface() -> None:
    """0.15 of 600 mm: the outside 90 mm from the top at most."""
    for top, counted in ((507.0, True), (503.0, False)):
        found = read_stirrups(*(closed_stirrup(x, 110.0, 45.0, top) for x in PLACES))
        assert bool(found.stirrups) is counted


def test_the_bars_that_count_are_those_at_the_stirrup() -> None:
    """Top bars at 560 end at 1000; from there on two at 520 are the outermost."""
    model = ModelWithBars()
    beam = model.beam()
    bars = [straight(40, 5960, 0, 60), straight(40, 5960, 0, 520), straight(40, 1000, 50, 570)]
    model.bars(beam, *bars, diameter=20.0)
    places = [100.0 + 200.0 * k for k in range(20)]
    model.bars(beam, *(closed_stirrup(x, 110.0, 45.0, 535.0) for x in places), diameter=10.0)
    assert spans(model.read(beam)) == [pytest.approx((1000.0, 4000.0, 200.0))]


# legs in the box round a section that is no rectangle, but not in the concrete


def in_a_tee(half_width: float) -> Found:
    """Stirrups in a T of 300/1200 x 150, 600 deep."""
    tee = [(150, 0), (150, 450), (600, 450), (600, 600)]
    outline = [*((float(y), float(z)) for y, z in tee)]
    outline += [(-y, z) for y, z in reversed(outline)]
    model = ModelWithBars()
    beam = model.beam(outline=outline)
    model.bars(beam, straight(40, 5960, 0, 60), straight(40, 5960, 0, 540), diameter=20.0)
    model.bars(beam, *(closed_stirrup(x, half_width, 45.0, 555.0) for x in PLACES), diameter=10.0)
    return model.read(beam)


@pytest.mark.parametrize("half_width", [148.0, 160.0, 400.0])
def test_legs_beside_the_web_are_a_reason(half_width: float) -> None:
    found = in_a_tee(half_width)
    assert "outside the concrete" in found.reasons
    assert all(reason.blocking for reason in found.source("bars").reasons)


def test_legs_in_the_web_are_none() -> None:
    found = in_a_tee(110.0)
    assert found.reasons == ""
    assert [zone.legs for zone in found.stirrups] == [2]


Steps = list[tuple[float, int]]
"""Gaps before stirrups, and the legs of these."""
MANY_STEPS = st.lists(
    st.tuples(
        st.floats(20.0, 900.0) | st.sampled_from([100.0, 103.0, 106.0, 200.0]),
        st.sampled_from([2, 2, 2, 4]),
    ),
    min_size=1,
    max_size=25,
)


def zones_of(beams: list[Steps], beyond: float) -> tuple[Zones, list[list[float]]]:
    """Zones of several beams that end a stretch beyond their last stirrups, and these."""
    places = [np.cumsum([gap for gap, _ in steps]).tolist() for steps in beams]
    legs = np.array([count for steps in beams for _, count in steps], dtype=np.intp)
    counts = [len(xs) for xs in places]
    zones = zones_of_one_spacing(
        np.repeat(np.arange(len(beams)), counts),
        np.array([x for xs in places for x in xs]),
        legs * TEN,
        legs,
        np.repeat([xs[-1] + beyond for xs in places], counts),
    )
    return zones, places


@settings(max_examples=300, deadline=None)
@given(MANY_STEPS, st.floats(0.0, 900.0))
def test_zones_cover_without_gaps_and_promise_no_more_than_there_is(
    steps: Steps, beyond: float
) -> None:
    zones, (xs,) = zones_of([steps], beyond)
    assert (len(xs) < 2) == (len(zones.start) == 0)
    if len(xs) < 2:
        return
    assert zones.end[:-1].tolist() == zones.start[1:].tolist()
    assert 0.0 <= zones.start[0] <= xs[0]
    assert xs[-1] <= zones.end[-1] <= xs[-1] + beyond
    for index, (x, following) in enumerate(pairwise(xs)):
        (zone,) = np.flatnonzero((zones.first <= index) & (index < zones.last)).tolist()
        assert zones.start[zone] <= x
        assert following <= zones.end[zone]
        assert zones.spacing[zone] >= following - x
        held = [count for _, count in steps[zones.first[zone] : zones.last[zone] + 1]]
        assert min(held) <= min(count for _, count in steps[index : index + 2])


def zones_by_definition(steps: Steps, length: float) -> list[tuple[float, float, float, int, int]]:
    """Start, end, spacing, first and last stirrup of each zone of a beam, gap by gap."""
    xs = np.cumsum([gap for gap, _ in steps]).tolist()
    gaps = [after - x for x, after in pairwise(xs)]
    lesser = [min(one, other) for (_, one), (_, other) in pairwise(steps)]
    begins = [0]
    for index in range(1, len(gaps)):
        held = gaps[begins[-1] : index + 1]
        if lesser[index] != lesser[begins[-1]] or max(held) > 1.05 * min(held):
            begins.append(index)
    stops = [*begins[1:], len(gaps)]
    widest = [max(gaps[a:b]) for a, b in zip(begins, stops, strict=True)]
    found = []
    for zone, (a, b) in enumerate(zip(begins, stops, strict=True)):
        beside = [widest[k] for k in (zone - 1, zone + 1) if 0 <= k < len(begins)]
        lone = b == a + 1 and beside and widest[zone] < min(beside)
        spacing = min(beside) if lone else widest[zone]
        start, end = xs[a], xs[b]
        if zone == 0:
            start = 0.0 if start <= spacing else start - spacing / 2.0
        if zone == len(begins) - 1:
            end = length if length - end <= spacing else end + spacing / 2.0
        found.append((start, end, spacing, a, b))
    return found


@settings(max_examples=300, deadline=None)
@given(st.lists(MANY_STEPS, max_size=6), st.floats(0.0, 900.0))
def test_zones_of_many_beams_are_those_found_gap_by_gap(beams: list[Steps], beyond: float) -> None:
    zones, places = zones_of(beams, beyond)
    expected, before = [], 0
    for steps, xs in zip(beams, places, strict=True):
        if len(xs) > 1:
            for *stretch, first, last in zones_by_definition(steps, xs[-1] + beyond):
                expected.append((*stretch, first + before, last + before))
        before += len(xs)
    columns = (zones.start, zones.end, zones.spacing, zones.first, zones.last)
    assert list(zip(*(column.tolist() for column in columns), strict=True)) == expected


def test_thirty_four_stirrups_of_an_open_model(open_models: object) -> None:
    """An IFC4X3 model made by others: bar data on the type only, bars under an assembly.

    Its file places 34 stirrups from y = 25 to 4975 along a beam of 5000 and draws them 138 wide
    and 338 high between centres, of 12 mm, in a section of 200 x 400.
    """
    import ifcopenshell

    from ifccheck.beam import Axis, Outline, Run
    from ifccheck.ifc.context import BeamFrame, make_context
    from ifccheck.ifc.reinforcement import read_reinforcement

    file = ifcopenshell.open(str(open_models / "01_ifc4x3_beam_34_stirrups.ifc"))  # type: ignore[operator]
    (beam,) = file.by_type("IfcBeam")
    axis = Axis((0.0, 0.0, -400.0), (0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), (0.0, 0.0, 1.0), 5000.0)
    ring = ((-100.0, 0.0), (100.0, 0.0), (100.0, 400.0), (-100.0, 400.0))
    frame = BeamFrame("", axis, (Run(0.0, 5000.0, Outline((ring,))),))
    context = make_context(file, "IFC4X3")
    (bars,) = read_reinforcement(context, {beam.id(): frame}, {})[beam.id()]
    (zone,) = bars.stirrups
    assert (zone.start, zone.end, zone.spacing) == pytest.approx((0.0, 5000.0, 150.0))
    assert (zone.legs, zone.closed, zone.diameter) == (2, True, 12.0)
    assert zone.leg_area == pytest.approx(113.097, abs=1e-3)
    assert (zone.bottom, zone.top, zone.half_width) == pytest.approx((25.0, 375.0, 75.0))
    assert "31 more" in zone.origin
    assert "no longitudinal bar" in bars.reasons[0].text
