"""Longitudinal tension (11.3.9) and minimum stirrups (11.2.8.1) by first principles."""

from __future__ import annotations

from math import radians, sqrt, tan

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.mechanics.arrays import ANCHOR_STRAIGHT
from ifccheck.standards.csa_a23_3_14.flexure import FLEXURE_SAGGING
from ifccheck.standards.csa_a23_3_14.longitudinal import LONGITUDINAL, tension_side_force
from ifccheck.standards.csa_a23_3_14.minimum_stirrups import MINIMUM_STIRRUPS, idle_stirrups
from ifccheck.standards.csa_a23_3_14.shear_check import SHEAR
from tests.csa_beams import HEIGHT, SPAN, WIDTH, a, beam, demand

DV = max(0.9 * (HEIGHT - 60.0), 0.72 * HEIGHT)
COT = 1 / tan(radians(35))


def test_tension_side_by_hand():
    moment, shear = 60e6, 150e3
    stirrups = 0.85 * 200 * 400 * DV * COT / 250  # more than Vf
    assert stirrups > shear
    check = LONGITUDINAL.check(beam(method="simplified"), demand([moment], [shear]))
    assert check.demand[0] == pytest.approx(moment / DV + 0.5 * shear * COT)
    assert check.resistance[0] == pytest.approx(0.85 * 400 * 1500)


def test_without_stirrups_the_whole_shear_pulls():
    moment, shear = 60e6, 60e3
    state = beam(method="simplified", stirrup_area=0.0)
    check = LONGITUDINAL.check(state, demand([moment], [shear]))
    assert check.demand[0] == pytest.approx(moment / DV + shear * COT)


def test_the_angle_is_that_of_the_shear_check():
    acting = demand([60e6], [150e3])
    shear, found = SHEAR.check(beam(), acting), LONGITUDINAL.check(beam(), acting)
    theta = shear.details.theta[0]
    assert theta != 35.0
    assert found.demand[0] == pytest.approx(60e6 / DV + 75e3 / tan(radians(theta)))


def test_shear_at_the_place_itself_counts_not_that_of_the_critical_section():
    acting = demand([60e6], [150e3], critical=[100e3])
    check = LONGITUDINAL.check(beam(method="simplified"), acting)
    assert check.demand[0] == pytest.approx(60e6 / DV + 0.5 * 150e3 * COT)


def test_need_not_exceed_what_the_greatest_moment_needs_alone():
    """At the greatest moment the steel is used as much as in flexure, no more."""
    state = beam()
    moment = 0.97 * state.sagging.moment_resistance[0]
    acting = demand([moment], [50e3], peak_sagging=moment)
    flexure = FLEXURE_SAGGING.check(state, acting).utilisation[0]
    found = LONGITUDINAL.check(state, acting).utilisation[0]
    assert found == pytest.approx(flexure, rel=1e-9)


def test_no_developed_steel_is_inf_whatever_the_method():
    for method in ("general", "simplified"):
        state = beam(x=(0.0, SPAN / 2), soffit_start=0.0, anchor=ANCHOR_STRAIGHT, method=method)
        assert state.sagging.tension_area[0] == 0.0
        check = LONGITUDINAL.check(state, demand([0.0, 100e6], [100e3, 0.0]))
        assert check.utilisation[0] == np.inf


def test_anchorage_at_the_face_of_an_end_support():
    """11.3.9.5 by hand: (Vf - 0.5 Vs) cot(theta) against the steel developed there."""
    state = beam(x=(150.0, 4000.0), soffit_start=40.0, anchor=ANCHOR_STRAIGHT, method="simplified")
    developed = state.sagging.tension_area[0]
    assert 0.0 < developed < 1500.0
    check = LONGITUDINAL.check(state, demand([0.0, 0.0], [100e3, 0.0]))
    expected = 0.5 * 100e3 * COT / (0.85 * 400 * developed)
    assert check.utilisation[0] == pytest.approx(expected)


def test_compression_side_near_a_point_of_contraflexure():
    """Hogging small against shear, far from any support: the soffit is pulled by the shear."""
    shear, moment = 150e3, -20e6
    state = beam(x=(0.0, 3000.0, SPAN), method="simplified", soffit_area=300.0, top_area=3000.0)
    acting = demand(
        np.full(3, moment), np.full(3, -shear), sag=False, peak_sagging=200e6, peak_hogging=200e6
    )
    check = LONGITUDINAL.check(state, acting)
    assert check.details.compression_side[1]
    assert check.demand[1] == pytest.approx(0.5 * shear * COT - 20e6 / DV)
    assert check.resistance[1] == pytest.approx(0.85 * 400 * 300)


def test_compression_side_of_a_simple_span_is_never_pulled():
    state = beam(x=(0.0, 3000.0, SPAN), method="simplified", top_area=0.0)
    acting = demand([0.0, 5e6, 0.0], [150e3, 150e3, -150e3], peak_sagging=300e6, peak_hogging=0.0)
    check = LONGITUDINAL.check(state, acting)
    assert np.isfinite(check.utilisation).all()
    assert check.details.tension_side.all()


def test_compression_side_within_the_fan_of_a_support_is_not_pulled():
    """At the pinned end of a propped beam the top needs no steel for the shear there."""
    state = beam(x=(0.0, 3000.0, SPAN), method="simplified", top_area=0.0)
    acting = demand([0.0, 60e6, 0.0], [150e3, 10e3, -150e3], peak_sagging=300e6, peak_hogging=200e6)
    check = LONGITUDINAL.check(state, acting)
    assert np.isfinite(check.utilisation[0])


def test_unknown_legs_are_taken_as_none_and_never_make_a_beam_fall_short():
    state = beam(method="simplified", stirrup_area=np.nan)
    light = LONGITUDINAL.check(state, demand([60e6], [60e3]))
    assert light.demand[0] == pytest.approx(60e6 / DV + 60e3 * COT)
    assert light.utilisation[0] < 1.0
    heavy = LONGITUDINAL.check(state, demand([200e6], [300e3]))
    assert np.isnan(heavy.utilisation[0])


def test_outside_the_method_nothing_is_said_unless_the_greatest_moment_is_borne():
    state = beam(method="simplified", bar_yield=450.0)
    resistance = state.sagging.moment_resistance[0]
    unknown = LONGITUDINAL.check(state, demand([60e6], [100e3], peak_sagging=1.2 * resistance))
    assert np.isnan(unknown.utilisation[0])
    assert [o.clause for o in unknown.outside if o.mask.any()] == ["11.3.6.3"]
    borne = LONGITUDINAL.check(state, demand([60e6], [100e3], peak_sagging=0.5 * resistance))
    assert borne.utilisation[0] == pytest.approx(0.5, rel=1e-9)


@settings(deadline=None, max_examples=60)
@given(
    st.floats(0.0, 1e9), st.floats(0.0, 1e6), st.floats(0.0, 1e6), st.floats(29.0, 50.0),
    st.floats(100.0, 2000.0), st.floats(1.0, 2.0),
)  # fmt: skip
def test_tension_grows_with_shear_and_moment_and_lessens_with_stirrups(m, v, vs, theta, dv, k):
    def force(moment: float, shear: float, stirrups: float) -> float:
        return float(
            tension_side_force(
                moment=a(moment), shear=a(shear), stirrup_term=a(stirrups), shear_depth=a(dv),
                theta=a(theta), greatest_moment=a(1e15), lever_arm=a(dv),
            )
        )  # fmt: skip

    base = force(m, v, vs)
    slack = 1e-9 * (base + 1.0)
    assert force(m * k, v, vs) >= base - slack
    assert force(m, v * k, vs) >= base - slack
    assert force(m, v, vs * k) <= base + slack
    assert base >= m / dv + 0.5 * v / tan(radians(theta)) - slack


# --- minimum stirrups ----------------------------------------------------------------------


def test_deep_beam_needs_minimum_stirrups_by_hand():
    state = beam(height=800.0, stirrup_area=100.0, spacing=300.0)
    check = MINIMUM_STIRRUPS.check(state, demand([0.0], [0.0]))
    assert check.demand[0] == pytest.approx(0.06 * sqrt(30) * WIDTH / 400)
    assert check.utilisation[0] == pytest.approx(0.06 * sqrt(30) * WIDTH * 300 / 400 / 100)


def test_beam_of_750_mm_needs_none_and_a_deeper_one_without_falls_short():
    acting = demand([0.0], [1e3])
    shallow = MINIMUM_STIRRUPS.check(beam(height=750.0, stirrup_area=0.0), acting)
    deep = MINIMUM_STIRRUPS.check(beam(height=751.0, stirrup_area=0.0), acting)
    assert shallow.utilisation[0] == 0.0
    assert deep.utilisation[0] == np.inf
    unknown = MINIMUM_STIRRUPS.check(beam(height=751.0, stirrup_area=np.nan), acting)
    assert np.isnan(unknown.utilisation[0])


def test_only_between_the_faces():
    state = beam(x=(100.0, 4000.0), height=800.0, stirrup_area=0.0, faces=(200.0, SPAN))
    check = MINIMUM_STIRRUPS.check(state, demand([0.0, 0.0], [0.0, 0.0]))
    assert check.utilisation.tolist() == [0.0, np.inf]


def test_idle_stirrups_are_noted():
    few, wide = idle_stirrups(beam(stirrup_area=70.0))
    assert (few.mask.tolist(), wide.mask.tolist()) == ([True], [False])
    few, wide = idle_stirrups(beam(spacing=400.0))
    assert (few.mask.tolist(), wide.mask.tolist()) == ([False], [True])
    assert not any(note.mask.any() for note in idle_stirrups(beam(stirrup_area=0.0)))
