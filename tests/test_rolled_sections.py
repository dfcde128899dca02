"""Sections that do not stand level: what bends them, and what is said of them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path

import numpy as np
import pytest
import shapely
from shapely import Polygon
from shapely.affinity import rotate

from ifccheck import pipeline
from ifccheck.beam import Verdict
from ifccheck.mechanics.inclination import Moments, inclination_of, second_moments
from ifccheck.rating import Rating
from tests.ifc_models import Building, only_beam
from tests.models import rectangle, tee
from tests.step_halls import LOAD, Beam, brief, hall, write
from tests.test_ifc_straight import LENGTH, width_height

Ring = Sequence[tuple[float, float]]

ELL = ((-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-150, 600))
TRAPEZOID = ((-100, 0), (100, 0), (200, 700), (-200, 700))
ONE_SLOPED = ((-100, 0), (100, 0), (200, 700), (-100, 700))
TRIANGLE = ((0, 0), (400, 400), (-400, 400))
Z_SHAPE = ((-450, 0), (150, 0), (150, 450), (450, 450), (450, 600), (-150, 600), (-150, 150),
           (-450, 150))  # fmt: skip
ROUND = tuple(
    (300 * math.cos(math.radians(10 * k + 3)), 300 * math.sin(math.radians(10 * k + 3)))
    for k in range(36)
)


def turned(ring: Ring, degrees: float) -> Ring:
    c, s = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))
    return tuple((c * y - s * z, s * y + c * z) for y, z in ring)


def rings(*every: Ring) -> tuple[tuple[tuple[float, float], ...], ...]:
    return tuple(tuple((float(y), float(z)) for y, z in ring) for ring in every)


def degrees(angle: float) -> float:
    return math.degrees(angle)


# First principles --------------------------------------------------------------------------------


@pytest.mark.parametrize("angle", [0.0, 7.0, 30.0, -62.0])
def test_moments_of_a_turned_rectangle(angle: float) -> None:
    """I_yy = I_1 cos^2 + I_2 sin^2, I_yz = (I_2 - I_1) sin cos, I_1 = b h^3 / 12, I_2 = h b^3 / 12;
    the turn carries a point (y, z) to (y cos - z sin, y sin + z cos)."""
    strong, weak = 300.0 * 600.0**3 / 12.0, 600.0 * 300.0**3 / 12.0
    c, s = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    found = second_moments(rings(turned(rectangle(300, 600), angle)))
    expected = (strong * c * c + weak * s * s, strong * s * s + weak * c * c,
                (weak - strong) * s * c)  # fmt: skip
    assert found == pytest.approx(expected, rel=1e-9, abs=1.0)


def test_moments_of_an_outline_with_a_void_by_small_squares() -> None:
    """Summed over a grid of 2 mm squares whose middles lie in the figure."""
    void = ((0, 100), (0, 200), (100, 200), (50, 100))
    figure = Polygon(ELL, [void])
    side = 2.0
    low_y, low_z, high_y, high_z = figure.bounds
    ys, zs = np.meshgrid(
        np.arange(low_y + side / 2, high_y, side), np.arange(low_z + side / 2, high_z, side)
    )

    inside = shapely.contains_xy(figure, ys.ravel(), zs.ravel())
    y, z = ys.ravel()[inside], zs.ravel()[inside]
    y, z = y - y.mean(), z - z.mean()
    area = side * side
    for void_ring in (void, void[::-1]):
        found = second_moments(rings(ELL, void_ring))
        expected = ((z * z).sum() * area, (y * y).sum() * area, (y * z).sum() * area)
        assert found == pytest.approx(expected, rel=2e-3)


def test_neutral_axis_of_a_turned_rectangle() -> None:
    """A moment about the level axis: the neutral axis is inclined by beta to the section's own
    axis with tan(beta) = I_1 / I_2 tan(angle), beyond the roll itself."""
    roll = math.radians(10.0)
    strong, weak = 300.0 * 600.0**3 / 12.0, 600.0 * 300.0**3 / 12.0
    moments = second_moments(rings(turned(rectangle(300, 600), 10.0)))
    beyond = math.atan(strong / weak * math.tan(roll))
    assert abs(moments.neutral) == pytest.approx(beyond - roll, rel=1e-9)
    assert degrees(moments.principal) == pytest.approx(10.0)


def test_principal_axes_of_a_circle_are_level() -> None:
    assert inclination_of(rings(ROUND)).principal == 0.0
    assert Moments(1.0, 1.0, 0.0).neutral == 0.0


# What is rolled ----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "ring",
    [rectangle(300, 600), rectangle(1500, 200), rectangle(400, 400), tee(300, 600, 1200, 150), ELL,
     Z_SHAPE],
)  # fmt: skip
@pytest.mark.parametrize("angle", [1.2, 5.0, 15.0, 30.0, -10.0, 44.0])
def test_a_plain_shape_turned_is_rolled(ring: Ring, angle: float) -> None:
    assert degrees(inclination_of(rings(turned(ring, angle))).rolled) == pytest.approx(angle)


@pytest.mark.parametrize(
    "ring",
    [rectangle(300, 600), rectangle(1500, 200), tee(300, 600, 1200, 150), TRAPEZOID, TRIANGLE,
     ROUND, turned(rectangle(400, 400), 45.0)],
)  # fmt: skip
def test_a_symmetric_shape_is_level(ring: Ring) -> None:
    found = inclination_of(rings(ring))
    assert (found.rolled, found.slip, found.principal) == (0.0, 0.0, 0.0)


@pytest.mark.parametrize("ring", [ELL, Z_SHAPE, ONE_SLOPED])
def test_a_level_shape_that_is_not_symmetric_stays_upright(ring: Ring) -> None:
    found = inclination_of(rings(ring))
    assert (found.rolled, found.slip) == (0.0, 0.0)
    assert found.upright
    assert abs(degrees(found.principal)) > 1.0


def test_a_turned_trapezoid_is_told_by_its_principal_axes() -> None:
    found = inclination_of(rings(turned(TRAPEZOID, 8.0)))
    assert not found.upright
    assert degrees(found.principal) == pytest.approx(8.0)


@pytest.mark.parametrize("ring", [rectangle(300, 600), rectangle(1500, 200), TRAPEZOID, ELL])
@pytest.mark.parametrize("angle", [1.0, 0.3, -0.3, 0.01])
def test_a_slip_is_told_by_the_sides_that_are_meant_to_be_level(ring: Ring, angle: float) -> None:
    found = inclination_of(rings(turned(ring, angle)))
    assert found.rolled == 0.0
    assert degrees(found.slip) == pytest.approx(angle)


def test_a_crossfall_of_the_top_alone_is_no_slip() -> None:
    sloped = ((-150, 0), (150, 0), (150, 600), (-150, 603))
    assert inclination_of(rings(sloped)).slip == 0.0


# Through the whole program -----------------------------------------------------------------------

SLAB_LIKE = {"TopBars": "4-15M", "BottomBars": "4-25M", "Stirrups": "4 legs 10M @ 100"}


def rated(folder: Path, ring: Ring, **more: object) -> Rating:
    """A beam of 6 m with this outline, its lowest corner at the height of its columns' tops."""
    foot = min(z for _, z in ring)
    outline = tuple((y, z - foot) for y, z in ring)
    made = Beam(outline=outline, **more)  # type: ignore[arg-type]
    model, brief_path = write(folder, hall(made), brief(LOAD))
    (report,) = pipeline.rate([model], brief_path).reports
    (rating,) = report.ratings.values()
    return rating


def texts(rating: Rating) -> str:
    return "; ".join(each.text for each in (*rating.reasons, *rating.remarks))


@pytest.mark.parametrize("angle", [15.0, 5.0, 20.0, -15.0])
def test_a_rolled_slab_like_beam_is_not_rated(tmp_path: Path, angle: float) -> None:
    rating = rated(tmp_path, turned(rectangle(1500, 200), angle), notation=SLAB_LIKE)
    assert rating.verdict is Verdict.NOT_RATED
    assert math.isnan(rating.utilisation)
    assert f"rolled by {abs(angle):.0f} degrees about its axis" in texts(rating)


@pytest.mark.parametrize("angle", [5.0, 20.0, 45.0 - 1e-3])
def test_a_rolled_rectangle_is_not_rated(tmp_path: Path, angle: float) -> None:
    rating = rated(tmp_path, turned(rectangle(300, 600), angle))
    assert rating.verdict is Verdict.NOT_RATED
    assert "about its axis: it does not bend about a level axis" in texts(rating)


def test_a_rolled_trapezoid_is_not_rated(tmp_path: Path) -> None:
    rating = rated(tmp_path, turned(((-150, 0), (150, 0), (200, 600), (-200, 600)), 8.0))
    assert rating.verdict is Verdict.NOT_RATED
    assert "principal axes inclined by 8 degrees: it does not bend" in texts(rating)


@pytest.mark.parametrize("angle", [0.001, 0.3, -0.3, 0.99])
def test_a_slip_of_modelling_is_rated_as_level(tmp_path: Path, angle: float) -> None:
    level = rated(tmp_path, rectangle(300, 600))
    slipped = rated(tmp_path, turned(rectangle(300, 600), angle))
    assert slipped.verdict is Verdict.ADEQUATE, texts(slipped)
    assert slipped.utilisation == pytest.approx(level.utilisation, rel=1e-6)
    told = f"drawn rolled by {abs(angle):.2f} degrees about its axis: taken as level"
    assert (told in texts(slipped)) == (abs(angle) > 0.01)
    assert "drawn rolled" not in texts(level)


def test_an_ell_with_a_level_flange_is_rated_and_told(tmp_path: Path) -> None:
    rating = rated(tmp_path, ELL)
    assert rating.verdict is Verdict.ADEQUATE, texts(rating)
    assert "it is assumed to be held from turning" in texts(rating)
    assert "held from turning" not in texts(rated(tmp_path, tee(300, 600, 1200, 150)))


def test_a_top_out_of_level_has_no_web_and_gives_no_number(tmp_path: Path) -> None:
    """In sagging the compression face is a line at the upper corner: bw = 0 there."""
    sloped = ((-150, 0), (150, 0), (150, 600), (-150, 610))
    rating = rated(tmp_path, sloped)
    assert rating.verdict is Verdict.NOT_RATED, rating.utilisation
    assert "the outline is narrower than 10 mm: it has no web" in texts(rating)
    assert not any(state.utilisation > 1.0 for state in rating.limit_states)


def test_a_rectangle_on_its_corner_is_not_rated(tmp_path: Path) -> None:
    rating = rated(tmp_path, turned(rectangle(420, 420), 45.0))
    assert rating.verdict is Verdict.NOT_RATED, rating.utilisation


# How a slip is read ------------------------------------------------------------------------------


@pytest.mark.parametrize("way", ["extruded", "across", "sliced"])
@pytest.mark.parametrize("angle", [0.5, -0.5])
def test_a_slip_is_levelled_however_the_body_is_drawn(way: str, angle: float) -> None:
    """The body turns about the axis of its element; the beam's own axes turn with it."""
    building = Building()
    if way == "across":
        elevation = building.outline((0, -250), (LENGTH, -250), (LENGTH, 250), (0, 250))
        solid = building.extrusion(elevation, 300.0, at=(0, 150, 0), z=(0, -1, 0), x=(1, 0, 0))
    else:
        solid = building.extrusion(building.rectangle(300, 500), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    if way == "sliced":
        solid = building.clipped(solid, building.half_space((0, 0, 400), (0, 0, 1)))
        cut = building.extrusion(
            building.rectangle(100, 100), LENGTH, at=(0, 0, 200), z=(1, 0, 0), x=(0, 1, 0)
        )
        solid = building.entity("IfcBooleanResult", "DIFFERENCE", solid, cut)
    c, s = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    building.beam(solid, placement=building.placement((0, 0, 0), (0, -s, c), (1, 0, 0)))
    beam = only_beam(building.read())
    assert beam.axis is not None, beam.reasons
    assert width_height(beam) == pytest.approx((300.0, 500.0), abs=1e-5)
    assert beam.axis.z == pytest.approx((0.0, -s, c), abs=1e-8)
    assert beam.axis.y == pytest.approx((0.0, c, s), abs=1e-8)
    assert beam.axis.origin == pytest.approx((0.0, 250.0 * s, -250.0 * c), abs=1e-4)
    assert any("drawn rolled by 0.50 degrees" in remark.text for remark in beam.remarks)


def test_a_turn_of_shapely_is_that_of_the_tests() -> None:
    one = Polygon(turned(ELL, 20.0))
    assert one.symmetric_difference(rotate(Polygon(ELL), 20.0, origin=(0, 0))).area < 1e-3
