"""Floors shared out between beams: areas and widths written out by hand, and checked by shapely."""

from __future__ import annotations

import math
import random
from collections.abc import Sequence
from itertools import pairwise

import pytest
from shapely import Point, Polygon, box, unary_union
from shapely.affinity import rotate, scale

from ifccheck.frame.panels import Carrier
from ifccheck.frame.tributary import Share, Span, UnsharedError, Ways, shares
from ifccheck.frame.widths import Width, widths_along, within

Ring = tuple[tuple[float, float], ...]
TWO_WAYS = Span("two ways")


def ring(*corners: tuple[float, float]) -> Ring:
    return corners


def rectangle(x0: float, y0: float, x1: float, y1: float) -> Ring:
    return ((x0, y0), (x1, y0), (x1, y1), (x0, y1))


def beams(*axes: tuple[float, float, float, float], half: float = 150.0) -> list[Carrier]:
    return [Carrier((x0, y0), (x1, y1), half) for x0, y0, x1, y1 in axes]


def areas(found: Sequence[Share], count: int) -> list[float]:
    """In m2, by the number of the carrier."""
    of = {share.carrier: share.figure.area / 1e6 for share in found}
    return [of.get(number, 0.0) for number in range(count)]


def profile(share: Share, carrier: Carrier, origin: tuple[float, float]) -> list[tuple[float, ...]]:
    (x0, y0), (x1, y1) = carrier.start, carrier.end
    local = Carrier((x0 - origin[0], y0 - origin[1]), (x1 - origin[0], y1 - origin[1]), 150.0)
    return [
        tuple(round(value, 6) for value in width) for width in widths_along(share.figure, local)
    ]


ROUND = beams((0, 0, 6000, 0), (6000, 0, 6000, 4000), (0, 4000, 6000, 4000), (0, 0, 0, 4000))
"""Four beams round a panel of 6 m by 4 m, axis to axis"""
SLAB = rectangle(0, 0, 6000, 4000)


def test_two_ways_the_short_side_carries_a_triangle_and_the_long_one_a_trapezoid() -> None:
    """Textbook: peak width a/2 = 2 m on both; area a2/4 = 4 m2 and a (2b - a)/4 = 8 m2."""
    found = shares([SLAB], [], ROUND, TWO_WAYS)
    assert areas(found, 4) == pytest.approx([8.0, 4.0, 8.0, 4.0], rel=1e-12)
    assert profile(found[0], ROUND[0], (0, 0)) == [
        (0, 2000, 0, 2000), (2000, 4000, 2000, 2000), (4000, 6000, 2000, 0),
    ]  # fmt: skip
    assert profile(found[1], ROUND[1], (0, 0)) == [(0, 2000, 0, 2000), (2000, 4000, 2000, 0)]


@pytest.mark.parametrize(
    ("ways", "direction", "expected"),
    [
        ("one way", None, [12.0, 0.0, 12.0, 0.0]),
        ("one way", (1.0, 0.0), [0.0, 12.0, 0.0, 12.0]),
        ("by shape", None, [8.0, 4.0, 8.0, 4.0]),
    ],
)
def test_one_way_each_side_across_the_span_carries_half(
    ways: Ways, direction: tuple[float, float] | None, expected: list[float]
) -> None:
    found = shares([SLAB], [], ROUND, Span(ways, direction))
    assert areas(found, 4) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(("length", "one_way"), [(8000.0, False), (8001.0, True)])
def test_a_panel_more_than_twice_as_long_as_wide_spans_one_way(
    length: float, one_way: bool
) -> None:
    carriers = beams(
        (0, 0, length, 0), (length, 0, length, 4000), (0, 4000, length, 4000), (0, 0, 0, 4000)
    )
    found = areas(shares([rectangle(0, 0, length, 4000)], [], carriers, Span()), 4)
    assert (found[1] == 0.0) is one_way
    assert sum(found) == pytest.approx(4.0 * length / 1e3, rel=1e-12)


def test_beams_that_stop_at_the_faces_of_columns_meet_at_their_middle() -> None:
    stopping = beams(
        (200, 0, 5800, 0), (6000, 200, 6000, 3800), (200, 4000, 5800, 4000), (0, 200, 0, 3800)
    )
    assert areas(shares([SLAB], [], stopping, TWO_WAYS), 4) == pytest.approx([8, 4, 8, 4])


def test_beams_drawn_to_the_far_faces_of_each_other() -> None:
    over = beams(
        (-150, 0, 6150, 0), (6000, -150, 6000, 4150), (-150, 4000, 6150, 4000), (0, -150, 0, 4150)
    )
    assert areas(shares([SLAB], [], over, TWO_WAYS), 4) == pytest.approx([8, 4, 8, 4], rel=1e-9)


def test_slab_that_is_drawn_between_the_faces_of_its_beams() -> None:
    """5.7 m by 3.7 m clear: the parts keep the lines from the corners of the axes."""
    found = shares([rectangle(150, 150, 5850, 3850)], [], ROUND, TWO_WAYS)
    short = (3.7 + 0.0) * 1.85 / 2.0
    assert areas(found, 4)[1] == pytest.approx(short)
    assert sum(areas(found, 4)) == pytest.approx(5.7 * 3.7, rel=1e-12)


def test_slab_beyond_the_edge_beams_goes_to_the_nearest() -> None:
    """An overhang of 1 m all round: a strip each, mitred at the corners."""
    found = areas(shares([rectangle(-1e3, -1e3, 7e3, 5e3)], [], ROUND, TWO_WAYS), 4)
    assert found == pytest.approx([8 + 6 + 1, 4 + 4 + 1, 8 + 6 + 1, 4 + 4 + 1], rel=1e-9)


def test_an_opening_is_taken_out_of_the_part_that_it_lies_in() -> None:
    hole = rectangle(2500, 200, 3500, 1200)
    found = areas(shares([SLAB], [[hole]], ROUND, TWO_WAYS), 4)
    assert found == pytest.approx([7.0, 4.0, 8.0, 4.0], rel=1e-12)
    as_void = areas(shares([SLAB, hole], [], ROUND, TWO_WAYS), 4)
    assert as_void == pytest.approx(found, rel=1e-12)


def test_the_width_beside_an_opening_falls_to_nothing() -> None:
    hole = rectangle(2500, 0, 3500, 2500)
    (first, *_) = shares([SLAB], [[hole]], ROUND, TWO_WAYS)
    assert profile(first, ROUND[0], (0, 0)) == [
        (0, 2000, 0, 2000), (2000, 2500, 2000, 2000), (3500, 4000, 2000, 2000),
        (4000, 6000, 2000, 0),
    ]  # fmt: skip


def test_one_long_slab_over_two_bays_and_a_girder() -> None:
    """The girder in the middle carries a triangle from either side."""
    two = [*beams((0, 0, 12e3, 0), (0, 4e3, 12e3, 4e3), (0, 0, 0, 4e3), (12e3, 0, 12e3, 4e3)),
           *beams((6e3, 150, 6e3, 3850))]  # fmt: skip
    found = areas(shares([rectangle(0, 0, 12e3, 4e3)], [], two, TWO_WAYS), 5)
    assert found == pytest.approx([16, 16, 4, 4, 8], rel=1e-12)


def test_beams_in_a_row_share_at_the_support_between_them() -> None:
    row = [*beams((0, 0, 5850, 0), (6150, 0, 12e3, 0), (0, 4e3, 12e3, 4e3)),
           *beams((0, 0, 0, 4e3), (12e3, 0, 12e3, 4e3))]  # fmt: skip
    found = areas(shares([rectangle(0, 0, 12e3, 4e3)], [], row, TWO_WAYS), 5)
    assert found == pytest.approx([10, 10, 20, 4, 4], rel=1e-12)


L_SHAPE = ring((0, 0), (8000, 0), (8000, 4000), (4000, 4000), (4000, 8000), (0, 8000))


def test_an_l_shaped_floor_with_a_beam_across_its_corner() -> None:
    """Two squares and a rectangle are cut out by the beams."""
    carriers = beams(
        (0, 0, 8000, 0), (8000, 0, 8000, 4000), (4000, 4000, 8000, 4000), (4000, 4000, 4000, 8000),
        (0, 8000, 4000, 8000), (0, 0, 0, 8000), (0, 4000, 4000, 4000), (4000, 0, 4000, 4000),
    )  # fmt: skip
    found = areas(shares([L_SHAPE], [], carriers, TWO_WAYS), 8)
    assert found == pytest.approx([8, 4, 4, 4, 4, 8, 8, 8], rel=1e-12)


def test_an_l_shaped_floor_without_a_beam_within() -> None:
    """Straight lines from all six corners: the inner one halves its 270 degrees.

    Roof of an L of 8 m and legs of 4 m, by hand: the long outer sides carry the trapezoid (8 + 4)
    / 2 x 2 = 12 less what the ends take, the ends a triangle of 4, the inner sides the rest.
    """
    carriers = beams(
        (0, 0, 8000, 0), (8000, 0, 8000, 4000), (4000, 4000, 8000, 4000), (4000, 4000, 4000, 8000),
        (0, 8000, 4000, 8000), (0, 0, 0, 8000),
    )  # fmt: skip
    found = areas(shares([L_SHAPE], [], carriers, TWO_WAYS), 6)
    # outer long side: corners (0,0) (8,0) (6,2) (2,2); inner: (4,4) (8,4) (6,2) (2,2)
    outer = Polygon([(0, 0), (8, 0), (6, 2), (2, 2)]).area
    inner = Polygon([(4, 4), (8, 4), (6, 2), (2, 2)]).area
    assert found == pytest.approx([outer, 4, inner, inner, 4, outer], rel=1e-9)
    assert sum(found) == pytest.approx(48.0, rel=1e-12)


def test_a_side_without_a_beam_carries_nothing() -> None:
    """Three sides carry: the parts of the two that meet the free one run on to it."""
    found = areas(shares([SLAB], [], [ROUND[0], ROUND[2], ROUND[3]], TWO_WAYS), 3)
    assert found == pytest.approx([10, 10, 4], rel=1e-12)
    assert areas(shares([SLAB], [], [ROUND[0]], TWO_WAYS), 1) == pytest.approx([24.0])
    assert shares([SLAB], [], [], TWO_WAYS) == []


def test_a_beam_that_ends_within_the_floor_carries_no_more_than_lies_beside_it() -> None:
    """Beyond its end the beams on either side carry all: none may be too light."""
    carriers = beams((0, 0, 12e3, 0), (0, 8e3, 12e3, 8e3), (0, 4e3, 6e3, 4e3), half=150)
    floor = rectangle(0, 0, 12e3, 8e3)
    found = areas(shares([floor], [], carriers, TWO_WAYS), 3)
    assert found == pytest.approx([6 * 2 + 6 * 4, 6 * 2 + 6 * 4, 6 * 4], rel=1e-9)


def test_a_triangular_panel_is_shared_at_its_bisectors() -> None:
    """By the incircle: each side carries its length times the radius over two."""
    corners = [(0.0, 0.0), (6000.0, 0.0), (0.0, 8000.0)]
    sides = [(*a, *b) for a, b in zip(corners, corners[1:] + corners[:1], strict=True)]
    found = areas(shares([tuple(corners)], [], beams(*sides), TWO_WAYS), 3)
    assert found == pytest.approx([6 * 2 / 2, 10 * 2 / 2, 8 * 2 / 2], rel=1e-12)


@pytest.mark.parametrize("seed", range(6))
def test_random_convex_panels_against_the_nearest_side_place_by_place(seed: int) -> None:
    rng = random.Random(seed)
    turns = sorted(rng.uniform(0, math.tau) for _ in range(6))
    corners = [(5e3 * math.cos(a), 4e3 * math.sin(a)) for a in turns]
    sides = [(*a, *b) for a, b in zip(corners, corners[1:] + corners[:1], strict=True)]
    carriers = beams(*sides)
    found = shares([tuple(corners)], [], carriers, TWO_WAYS)
    x0, y0 = corners[0]
    for share in found:
        for _ in range(30):
            low_x, low_y, high_x, high_y = share.figure.bounds
            x, y = rng.uniform(low_x, high_x), rng.uniform(low_y, high_y)
            if share.figure.buffer(-1.0).contains(Point(x, y)):
                far = [each.across((x + x0, y + y0)) for each in carriers]
                assert min(range(6), key=lambda n: far[n]) == share.carrier
    total = sum(share.figure.area for share in found)
    assert total == pytest.approx(Polygon(corners).area, rel=1e-9)


def floor_plan() -> tuple[Polygon, Polygon, list[tuple[float, float, float, float]]]:
    """An L-shaped floor of six bays with a stair hole, beams that stop at faces, an overhang."""
    floor = Polygon([(-500, -300), (12300, -300), (12300, 5200), (6900, 5200), (6900, 10200),
                     (-500, 10200)])  # fmt: skip
    hole = box(1000, 6000, 3500, 8300)
    lines = [(200.0, 0.0, 5800.0, 0.0), (6200, 0, 11800, 0), (150, 5000, 5850, 5000),
             (6150, 5000, 11850, 5000), (150, 10000, 6150, 10000), (0, 200, 0, 9800),
             (6000, 150, 6000, 9850), (12000, 150, 12000, 4850),
             (3000, 150, 3000, 4850)]  # fmt: skip
    return floor, hole, [tuple(map(float, line)) for line in lines]  # type: ignore[misc]


def shared(
    floor: Polygon, hole: Polygon, carriers: list[Carrier], span: Span = TWO_WAYS
) -> list[float]:
    rings = tuple(tuple(map(tuple, each.exterior.coords[:-1])) for each in (floor, hole))
    return areas(shares([rings[0]], [[rings[1]]], carriers, span), len(carriers))  # type: ignore[list-item]


def test_all_of_a_floor_is_shared_out_and_no_part_twice() -> None:
    floor, hole, lines = floor_plan()
    rings = tuple(tuple(map(tuple, each.exterior.coords[:-1])) for each in (floor, hole))
    found = shares([rings[0]], [[rings[1]]], beams(*lines), Span())  # type: ignore[list-item]
    total = floor.difference(hole).area
    assert sum(share.figure.area for share in found) == pytest.approx(total, rel=1e-9)
    assert unary_union([share.figure for share in found]).area == pytest.approx(total, rel=1e-9)
    assert len(found) == len(lines)


@pytest.mark.parametrize("angle", [17.0, 90.0, -123.0])
@pytest.mark.parametrize("mirror", [1.0, -1.0])
@pytest.mark.parametrize("unit", [1.0, 1000.0])
def test_turning_mirroring_and_moving_change_nothing(
    angle: float, mirror: float, unit: float
) -> None:
    floor, hole, lines = floor_plan()
    expected = shared(floor, hole, beams(*lines))

    def moved(figure: Polygon) -> Polygon:
        turned = rotate(scale(figure, mirror, 1.0, origin=(0, 0)), angle, origin=(0, 0))
        return Polygon([(x + 3e6 * unit, y - 2e6) for x, y in turned.exterior.coords])

    def moved_line(line: tuple[float, float, float, float]) -> tuple[float, ...]:
        # A third place makes the line a figure that the same functions can move.
        x0, y0, x1, y1 = line
        corners = list(moved(Polygon([(x0, y0), (x1, y1), (x0 + 777, y0 + 333)])).exterior.coords)
        return (*corners[0], *corners[1])

    carriers = beams(*map(moved_line, lines))  # type: ignore[arg-type]
    assert shared(moved(floor), moved(hole), carriers) == pytest.approx(expected, rel=1e-6)


def test_widths_keep_area_and_middle_of_any_figure() -> None:
    floor, hole, _ = floor_plan()
    figure = floor.difference(hole)
    carrier = Carrier((100.0, 200.0), (3100.0, 4200.0), 150.0)
    widths = widths_along(figure, carrier)
    assert sum(width.area for width in widths) == pytest.approx(figure.area, rel=1e-12)
    middle = sum(width.area * width.middle for width in widths) / figure.area
    assert middle == pytest.approx(carrier.along((figure.centroid.x, figure.centroid.y)), rel=1e-9)


def test_widths_within_two_places() -> None:
    widths = (Width(-1000.0, 3000.0, 0.0, 4000.0), Width(3000.0, 5000.0, 100.0, 100.0))
    assert within(widths, 0.0, 4000.0) == (
        Width(0.0, 3000.0, 1000.0, 4000.0), Width(3000.0, 4000.0, 100.0, 100.0),
    )  # fmt: skip


@pytest.mark.parametrize("seed", range(60))
def test_irregular_floors_never_lose_a_part(seed: int) -> None:
    """Beams that are missing, out of line by 30 mm, or lie across; any angle; an opening."""
    rng = random.Random(seed)
    xs, ys = (0.0, 6000.0, 10000.0, 19000.0), (0.0, 4000.0, 6500.0)
    lines = [(x0 + 150, y + rng.choice((0, 30)), x1 - 150, y) for y in ys
             for x0, x1 in pairwise(xs) if rng.random() < 0.8]  # fmt: skip
    lines += [(x, y0 + rng.choice((0, 300)), x, y1) for x in xs
              for y0, y1 in pairwise(ys) if rng.random() < 0.8]  # fmt: skip
    lines.append((rng.uniform(0, 19e3), 100.0, rng.uniform(0, 19e3), 6400.0))
    floor = box(-800, -800, 19800, 7300)
    hole = box(1000, 1000, 1900, 2200)
    turn = rng.uniform(0.0, 360.0)
    plans = [rotate(figure, turn, origin=(0, 0)) for figure in (floor, hole)]
    rings = [tuple((x, y) for x, y in plan.exterior.coords[:-1]) for plan in plans]
    ends = [rotate(Polygon([line[:2], line[2:], (-9e3, -9e3)]), turn, origin=(0, 0)).exterior.coords
            for line in lines]  # fmt: skip
    carriers = [Carrier(tuple(one[0]), tuple(one[1]), 150.0) for one in ends]
    for span in (TWO_WAYS, Span(), Span("one way", (1.0, 0.0))):
        try:
            found = shares([rings[0]], [[rings[1]]], carriers, span)
        except UnsharedError:
            continue
        total = plans[0].area - plans[1].area
        laid = sum(share.figure.area for share in found)
        assert total * (1.0 - 1e-6) <= laid <= total * 1.1
