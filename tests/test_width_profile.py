"""Width profiles against shapely's polygons and against first principles."""

from __future__ import annotations

import itertools
import math
import random

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely.geometry import LineString, Polygon, box

from ifccheck.mechanics.overhangs import overhangs
from ifccheck.mechanics.width_profile import (
    area_below,
    bottom_of,
    compression_block,
    first_moment_below,
    flipped,
    from_soffit,
    greatest_width,
    least_width,
    pack_strips,
    second_moment_below,
    strips_of,
    top_of,
    width_at,
)

TEE = (
    ((-150.0, 0.0), (150.0, 0.0), (150.0, 450.0), (600.0, 450.0), (600.0, 600.0),
     (-600.0, 600.0), (-600.0, 450.0), (-150.0, 450.0)),
)  # fmt: skip
ELL = (
    ((-150.0, 0.0), (150.0, 0.0), (150.0, 500.0), (550.0, 500.0), (550.0, 650.0), (-150.0, 650.0)),
)
PRECAST_I = (
    ((-300.0, 0.0), (300.0, 0.0), (300.0, 150.0), (80.0, 250.0), (80.0, 700.0), (250.0, 780.0),
     (250.0, 900.0), (-250.0, 900.0), (-250.0, 780.0), (-80.0, 700.0), (-80.0, 250.0),
     (-300.0, 150.0)),
)  # fmt: skip
TRAPEZOID = (((-150.0, 0.0), (150.0, 0.0), (220.0, 500.0), (-220.0, 500.0)),)


def star(seed: int, centre: tuple[float, float], least: float, most: float):
    """A random outline without crossings round a centre."""
    rng = random.Random(seed)
    angles = sorted(rng.uniform(0.0, 2.0 * math.pi) for _ in range(rng.randint(5, 14)))
    gaps = [b - a for a, b in zip(angles, [*angles[1:], angles[0] + 2 * math.pi], strict=True)]
    if max(gaps) > 2.8 or min(gaps) < 1e-3:
        angles = [2.0 * math.pi * i / 7 for i in range(7)]
    return tuple(
        (centre[0] + r * math.cos(a), centre[1] + r * math.sin(a))
        for a in angles
        for r in [rng.uniform(least, most)]
    )


def moments_below(polygon: Polygon, z: float) -> tuple[float, float, float]:
    """Area, first and second moment about z = 0 of what lies below z, by shapely and by
    integrating y over the boundary triangle by triangle."""
    y0, z0, y1, _ = polygon.bounds
    part = polygon.intersection(box(y0 - 1, z0 - 1, y1 + 1, z))
    area = first = second = 0.0
    for piece in getattr(part, "geoms", [part]):
        if piece.geom_type != "Polygon":
            continue
        for ring, sign in [(piece.exterior, 1.0), *((r, -1.0) for r in piece.interiors)]:
            a = f = s = 0.0
            points = list(ring.coords)
            for (ya, za), (yb, zb) in itertools.pairwise(points):
                cross = ya * zb - yb * za
                a += cross / 2
                f += cross * (za + zb) / 6
                s += cross * (za**2 + za * zb + zb**2) / 12
            orientation = sign * math.copysign(1.0, a)
            area, first, second = (
                area + orientation * a,
                first + orientation * f,
                second + orientation * s,
            )
    return area, first, second


@given(st.integers(0, 10**6), st.floats(0.0, 1.0), st.booleans())
def test_polynomials_agree_with_shapely(seed: int, share: float, hollow: bool) -> None:
    rings = [star(seed, (40.0, 400.0), 150.0, 400.0)]
    if hollow:
        rings.append(star(seed + 1, (40.0, 400.0), 20.0, 60.0))
    polygon = Polygon(rings[0], rings[1:])
    if not polygon.is_valid:
        polygon = Polygon(rings[0])
        rings = rings[:1]
    _, low, _, high = polygon.bounds
    z = low + share * (high - low)
    strips = strips_of(rings)[None]
    area, first, second = moments_below(polygon, z)
    assert area_below(strips, np.array([z]))[0] == pytest.approx(area, rel=1e-9, abs=1e-3)
    assert first_moment_below(strips, np.array([z]))[0] == pytest.approx(first, rel=1e-9, abs=1.0)
    assert second_moment_below(strips, np.array([z]))[0] == pytest.approx(second, rel=1e-9, abs=1e3)


@given(st.integers(0, 10**6), st.floats(0.01, 0.99))
def test_width_agrees_with_shapely(seed: int, share: float) -> None:
    ring = star(seed, (0.0, 300.0), 100.0, 300.0)
    polygon = Polygon(ring)
    _, low, _, high = polygon.bounds
    z = low + share * (high - low)
    chord = polygon.intersection(LineString([(-1000.0, z), (1000.0, z)])).length
    assert width_at(strips_of([ring])[None], np.array([z]))[0] == pytest.approx(chord, abs=1e-6)


@given(st.integers(0, 10**6), st.floats(0.0, 1.0))
def test_turning_upside_down_keeps_area_and_swaps_ends(seed: int, share: float) -> None:
    strips = strips_of([star(seed, (0.0, 500.0), 100.0, 450.0)])[None]
    turned = flipped(strips)
    np.testing.assert_allclose(flipped(turned), strips, atol=1e-9)
    low, high = bottom_of(strips), top_of(strips)
    z = low + share * (high - low)
    whole = area_below(strips, high)
    np.testing.assert_allclose(
        area_below(turned, low + high - z), whole - area_below(strips, z), atol=1e-4
    )


def test_direction_closing_and_start_of_a_ring_do_not_matter() -> None:
    ring = TEE[0]
    expected = strips_of(TEE)
    for other in (ring[::-1], (*ring, ring[0]), (*ring[3:], *ring[:3])):
        np.testing.assert_allclose(strips_of((other,)), expected)


def test_tee_is_web_and_flange() -> None:
    np.testing.assert_allclose(strips_of(TEE), [[0, 450, 300, 300], [450, 600, 1200, 1200]])


def test_void_is_taken_away() -> None:
    outer = ((-200.0, 0.0), (200.0, 0.0), (200.0, 500.0), (-200.0, 500.0))
    void = ((-100.0, 100.0), (100.0, 100.0), (100.0, 350.0), (-100.0, 350.0))
    strips = strips_of((outer, void))
    np.testing.assert_allclose(strips[:, 2], [400, 200, 400])
    assert area_below(strips[None], np.array([500.0]))[0] == pytest.approx(400 * 500 - 200 * 250)


def test_padding_changes_nothing() -> None:
    packed = pack_strips([strips_of(TEE), strips_of(PRECAST_I)])
    assert packed.shape[0] == 2
    for row, rings in zip(packed, (TEE, PRECAST_I), strict=True):
        alone = strips_of(rings)
        z = np.array([333.0])
        assert area_below(row[None], z) == pytest.approx(area_below(alone[None], z))
        assert flipped(row[None])[..., 1].max() == pytest.approx(alone[-1, 1])
        low, high = np.array([100.0]), np.array([500.0])
        assert least_width(row[None], low, high) == least_width(alone[None], low, high)
        assert least_width(flipped(row[None]), low, high) == least_width(
            flipped(alone[None]), low, high
        )


def test_compression_block_of_a_triangle() -> None:
    """A triangle of base 300 at the face and height 600: at depth a, the area and the
    centroid of a trapezoid."""
    strips = strips_of((((-150.0, 0.0), (150.0, 0.0), (0.0, 600.0)),))[None]
    a = 200.0
    width = 300.0 * (1 - a / 600.0)
    area, first = compression_block(strips, np.array([a]))
    assert area[0] == pytest.approx((300.0 + width) / 2 * a)
    assert first[0] / area[0] == pytest.approx(a / 3 * (300.0 + 2 * width) / (300.0 + width))


def test_block_beyond_the_section_adds_nothing() -> None:
    strips = strips_of(TEE)[None]
    whole = compression_block(strips, np.array([600.0]))
    for beyond in (601.0, 1e9, np.inf):
        np.testing.assert_allclose(compression_block(strips, np.array([beyond])), whole)


@pytest.mark.parametrize(
    ("rings", "low", "high", "least", "greatest"),
    [
        (TEE, 0.0, 600.0, 300.0, 1200.0),
        (TEE, 450.0, 600.0, 1200.0, 1200.0),
        (PRECAST_I, 0.0, 900.0, 160.0, 600.0),
        (PRECAST_I, 800.0, 900.0, 500.0, 500.0),
        (TRAPEZOID, 250.0, 500.0, 370.0, 440.0),
        (TRAPEZOID, 600.0, 700.0, 0.0, 0.0),
    ],
)
def test_widths_between_heights(rings, low, high, least, greatest) -> None:
    strips, low, high = strips_of(rings)[None], np.array([low]), np.array([high])
    assert least_width(strips, low, high)[0] == pytest.approx(least)
    assert greatest_width(strips, low, high)[0] == pytest.approx(greatest)


def test_a_height_that_is_not_known_gives_no_width() -> None:
    strips = strips_of(TEE)[None]
    assert np.isnan(least_width(strips, np.array([0.0]), np.array([np.nan]))[0])
    assert np.isnan(area_below(strips, np.array([np.nan]))[0])


@pytest.mark.parametrize(
    ("rings", "expected"),
    [
        (TEE, (450.0, 450.0, 150.0)),
        (ELL, (400.0, 0.0, 150.0)),
        (TRAPEZOID, (0.0, 0.0, 0.0)),
        (PRECAST_I, (170.0, 170.0, 120.0)),
        ((((-150.0, 0.0), (150.0, 0.0), (150.0, 500.0), (-150.0, 500.0)),), (0.0, 0.0, 0.0)),
    ],
)
def test_overhangs_of_a_top_flange(rings, expected) -> None:
    assert overhangs(rings) == pytest.approx(expected)


def test_a_bottom_flange_is_no_top_flange() -> None:
    upside_down = (tuple((y, 600.0 - z) for y, z in TEE[0]),)
    assert overhangs(upside_down) == (0.0, 0.0, 0.0)


def test_mirroring_swaps_the_overhangs() -> None:
    left, right, thickness = overhangs(ELL)
    mirrored = (tuple((-y, z) for y, z in ELL[0]),)
    assert overhangs(mirrored) == pytest.approx((right, left, thickness))
    np.testing.assert_allclose(strips_of(mirrored), strips_of(ELL))


def test_heights_may_start_anywhere() -> None:
    lifted = (tuple((y, z - 250.0) for y, z in TEE[0]),)
    np.testing.assert_allclose(from_soffit(strips_of(lifted)[None]), strips_of(TEE)[None])


@pytest.mark.parametrize(
    ("rings", "message"),
    [
        ((), "no height"),
        ((((0.0, 0.0), (1.0, 1.0)),), "fewer than three"),
        ((((0.0, 0.0), (100.0, 0.0), (50.0, 0.0)),), "no height"),
        ((((0.0, 0.0), (100.0, math.nan), (50.0, 10.0)),), "not finite"),
        ((((0.0, 0.0), (100.0, 400.0), (100.0, 0.0), (0.0, 400.0)),), "cross"),
    ],
)
def test_an_outline_that_is_none_is_refused(rings, message) -> None:
    with pytest.raises(ValueError, match=message):
        strips_of(rings)
