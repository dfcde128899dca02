"""Steel that seems more than it is: hooks that hold nothing, statements that deny one another."""

from __future__ import annotations

import pytest

from ifccheck.beam import Anchor
from tests.barred_beams import Curve, Found, ModelWithBars, bent, straight

BOTTOM = tuple(straight(40.0, 5960.0, y, 60.0) for y in (-90.0, 0.0, 90.0))


# Legs that nothing holds -------------------------------------------------------------------------


def u_shaped(x: float, upper: tuple[tuple[float, float], ...], inward: float) -> Curve:
    """A stirrup open at the top: y and z of the points of one leg from the top down, and how far
    its ends turn inwards there."""
    down = [(x, y, z) for y, z in upper] + [(x, 100.0, 45.0)]
    ends = [(x, upper[0][0] - inward, upper[0][1])] if inward else []
    half = [*ends, *down]
    return Curve((*half, *((x, -y, z) for _, y, z in reversed(half))))


def with_stirrups(upper: tuple[tuple[float, float], ...], inward: float) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, *BOTTOM, diameter=25.2)
    places = [100.0 + 200.0 * number for number in range(5)]
    model.bars(beam, *(u_shaped(x, upper, inward) for x in places), diameter=11.3)
    return model.read(beam)


@pytest.mark.parametrize(
    ("upper", "inward"),
    [
        (((100.0, 560.0),), 0.0),
        (((100.0, 560.0), (104.0, 330.0), (104.0, 250.0)), 0.0),  # kinked: its leg in pieces
        (((100.0, 560.0),), 5.0),  # 5 mm are no hook
        (((100.0, 560.0),), 40.0),
    ],
)
def test_a_leg_whose_end_no_hook_holds_does_not_count(
    upper: tuple[tuple[float, float], ...], inward: float
) -> None:
    found = with_stirrups(upper, inward)
    assert found.stirrups == ()
    assert "not counted in shear" in found.remarks


@pytest.mark.parametrize("kinked", [False, True])
def test_a_leg_with_a_hook_of_six_diameters_counts(kinked: bool) -> None:
    middle = ((104.0, 330.0), (104.0, 250.0)) if kinked else ()
    (stirrups,) = with_stirrups(((100.0, 560.0), *middle), 6.0 * 11.3).stirrups
    assert stirrups.legs == 2


# Hooks -------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("radius", "end"), [(56.0, Anchor.HOOK), (300.0, Anchor.STRAIGHT)])
def test_a_bar_that_turns_off_in_a_wide_bend_ends_where_the_bend_begins(
    radius: float, end: Anchor
) -> None:
    """A bar of 16 mm, whose standard hook has a radius of 3.5 diameters to its centre line."""
    model = ModelWithBars()
    beam = model.beam()
    corners = [(0.0, 0.0, 60.0), (5900.0, 0.0, 60.0), (5900.0, 0.0, 590.0)]
    model.bars(beam, bent(corners, radius), diameter=16.0)
    (bars,) = model.read(beam).bars
    assert bars.end_anchor is end
    assert bars.end == pytest.approx(5908.0 if end is Anchor.HOOK else 5600.0)
