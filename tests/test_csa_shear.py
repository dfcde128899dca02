"""Shear by CSA A23.3-14, clause 11, against published figures and first principles."""

from __future__ import annotations

from dataclasses import fields
from math import cos, radians, sin, sqrt, tan
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.mechanics.arrays import ANCHOR_STRAIGHT, Demand
from ifccheck.standards.contract import CalculationLine, Check
from ifccheck.standards.csa_a23_3_14 import STANDARD
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.critical import critical_shear_depth
from ifccheck.standards.csa_a23_3_14.longitudinal import LONGITUDINAL
from ifccheck.standards.csa_a23_3_14.minimum_stirrups import MINIMUM_STIRRUPS
from ifccheck.standards.csa_a23_3_14.shear_check import SHEAR
from ifccheck.standards.csa_a23_3_14.stirrups import greatest_stirrup_spacing, minimum_stirrup_area
from tests.csa_beams import HEIGHT, SPAN, WIDTH, a, beam, demand, rows

REFERENCE = Path(__file__).resolve().parents[1].parent / "shared" / "reference" / "csa.yaml"


def reference(name: str) -> dict[str, Any]:
    if not REFERENCE.exists():
        pytest.skip("the reference stock is not beside this checkout")
    return next(case for case in yaml.safe_load(REFERENCE.read_text()) if case["id"] == name)


D = HEIGHT - 60.0
DV = max(0.9 * D, 0.72 * HEIGHT)  # 486


# --- published figures ---------------------------------------------------------------------


def test_csa_shear_07_concrete_term():
    case = reference("CSA-SHEAR-07")
    given_ = case["inputs"]
    found = formulas.concrete_resistance(
        beta=a(given_["beta"]),
        concrete_strength=a(given_["fc_MPa"]),
        density_factor=a(given_["lam"]),
        web_width=a(given_["bw_mm"]),
        shear_depth=a(given_["d_mm"]),
    )
    tolerance = case["tolerance_pct"] / 100
    assert float(found) / 1e3 == pytest.approx(case["outputs"]["Vr_kN"], rel=tolerance)


def test_csa_shear_09_general_method_at_the_strain_of_the_simplified():
    case = reference("CSA-SHEAR-09")
    strain, tolerance = a(case["inputs"]["eps_x"]), case["tolerance_pct"] / 100
    beta = formulas.general_beta(strain=strain, crack_spacing=a(case["inputs"]["s_ze_mm"]))
    theta = formulas.general_theta(strain=strain)
    assert float(beta) == pytest.approx(case["outputs"]["beta"], rel=tolerance)
    assert float(theta) == pytest.approx(case["outputs"]["theta_deg"], rel=tolerance)
    assert 1 / tan(radians(float(theta))) == pytest.approx(
        case["outputs"]["cot_theta"], rel=tolerance
    )


@pytest.mark.parametrize("name", ["YB2000_0", "BN100", "BN25"])
def test_csa_test_25_beams_without_stirrups(name):
    """Laboratory beams (from memory), nominal strength, a sanity band of the file's width.

    The critical section lies dv from the load, where M = V (a - dv); V is found by bisection.
    """
    case = reference(f"CSA-TEST-25-{name}")
    i = case["inputs"]
    depth = 0.9 * i["d_mm"]
    arm = i["a_over_d"] * i["d_mm"] - depth

    def resistance(shear: float) -> float:
        strain = formulas.longitudinal_strain(
            moment=a(shear * arm), shear=a(shear), shear_depth=a(depth), tension_area=a(i["As_mm2"])
        )
        spacing = formulas.equivalent_crack_spacing(
            shear_depth=a(depth), aggregate_size=a(i["ag_mm"])
        )
        return float(
            formulas.concrete_resistance(
                beta=formulas.general_beta(strain=strain, crack_spacing=spacing),
                concrete_strength=a(i["fc_MPa"]),
                density_factor=a(1.0),
                web_width=a(i["bw_mm"]),
                shear_depth=a(depth),
                concrete_factor=1.0,
            )
        )

    low, high = 1e3, 2e6
    for _ in range(80):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if resistance(middle) > middle else (low, middle)
    measured, tolerance = case["outputs"]["V_test_kN"], case["tolerance_pct"] / 100
    assert low / 1e3 == pytest.approx(measured, rel=tolerance)


# --- first principles ----------------------------------------------------------------------


def test_general_method_with_stirrups_by_hand():
    moment, shear = 150e6, 180e3
    strain = (moment / DV + shear) / (2 * 200_000 * 1500)
    beta, theta = 0.4 / (1 + 1500 * strain), radians(29 + 7000 * strain)
    concrete = 0.65 * beta * sqrt(30) * WIDTH * DV
    stirrups = 0.85 * 200 * 400 * DV * cos(theta) / sin(theta) / 250
    check = SHEAR.check(beam(), demand([moment], [shear]))
    assert check.resistance[0] == pytest.approx(concrete + stirrups, rel=1e-12)
    assert check.utilisation[0] == pytest.approx(shear / (concrete + stirrups), rel=1e-12)


def test_general_method_without_stirrups_by_hand():
    moment, shear = 40e6, 60e3  # M < V dv is not the case: 40e6 > 29.2e6
    strain = (moment / DV + shear) / (2 * 200_000 * 1500)
    beta = 0.4 / (1 + 1500 * strain) * 1300 / (1000 + max(35 * DV / (15 + 20), 0.85 * DV))
    check = SHEAR.check(beam(stirrup_area=0.0), demand([moment], [shear]))
    assert check.resistance[0] == pytest.approx(0.65 * beta * sqrt(30) * WIDTH * DV, rel=1e-12)


def test_simplified_method_by_hand():
    with_stirrups = SHEAR.check(beam(method="simplified"), demand([50e6], [180e3]))
    concrete = 0.65 * 0.18 * sqrt(30) * WIDTH * DV
    stirrups = 0.85 * 200 * 400 * DV / tan(radians(35)) / 250
    assert with_stirrups.resistance[0] == pytest.approx(concrete + stirrups, rel=1e-12)
    plain = SHEAR.check(beam(method="simplified", stirrup_area=0.0), demand([50e6], [60e3]))
    assert plain.resistance[0] == pytest.approx(
        0.65 * 230 / (1000 + DV) * sqrt(30) * WIDTH * DV, rel=1e-12
    )
    small = beam(method="simplified", stirrup_area=0.0, aggregate=10.0)
    spacing = 35 * DV / 25
    assert SHEAR.check(small, demand([50e6], [60e3])).resistance[0] == pytest.approx(
        0.65 * 230 / (1000 + spacing) * sqrt(30) * WIDTH * DV, rel=1e-12
    )


def test_crushing_of_the_web_caps_the_resistance():
    heavy = beam(stirrup_area=2000.0, spacing=100.0, soffit_area=6000.0)
    check = SHEAR.check(heavy, demand([1e6], [900e3]))
    assert check.resistance[0] == pytest.approx(0.25 * 0.65 * 30 * WIDTH * DV, rel=1e-12)


def test_root_of_strong_concrete_is_limited_to_8():
    term = formulas.concrete_resistance(
        beta=a(0.2),
        concrete_strength=a([64.0, 80.0]),
        density_factor=a(1.0),
        web_width=a(300.0),
        shear_depth=a(500.0),
    )
    assert term[0] == term[1]


def test_aggregate_is_cut_by_cracks_in_strong_concrete():
    size = formulas.effective_aggregate_size(
        concrete_strength=a([40.0, 60.0, 65.0, 70.0, 80.0]), aggregate_size=a(20.0)
    )
    assert size.tolist() == [20.0, 20.0, 10.0, 0.0, 0.0]


def test_minimum_stirrups_and_spacing_by_hand():
    minimum = minimum_stirrup_area(
        concrete_strength=a(36.0), web_width=a(400.0), spacing=a(250.0), stirrup_yield=a(400.0)
    )
    assert float(minimum) == pytest.approx(0.06 * 6 * 400 * 250 / 400)
    limit = 0.125 * 0.65 * 30 * 400 * 486
    spacing = greatest_stirrup_spacing(
        shear=a([limit * 0.999, limit * 1.001]),
        concrete_strength=a(30.0),
        density_factor=a(1.0),
        web_width=a(400.0),
        shear_depth=a(486.0),
    )
    assert spacing == pytest.approx([0.7 * 486, 0.35 * 486])
    assert greatest_stirrup_spacing(
        shear=a(0.0),
        concrete_strength=a(30.0),
        density_factor=a(1.0),
        web_width=a(400.0),
        shear_depth=a(2000.0),
    ) == pytest.approx(600.0)


# --- rules that keep a wrong "adequate" away -----------------------------------------------


@pytest.mark.parametrize(
    "idle",
    [
        {"stirrup_area": 70.0},  # Av,min = 0.06 sqrt(30) 400 250 / 400 = 82
        {"stirrup_area": 200.0, "spacing": 345.0},  # 0.7 dv = 340
    ],
)
@pytest.mark.parametrize("method", ["general", "simplified"])
def test_stirrups_that_do_not_count_add_nothing(idle, method):
    acting = demand([50e6], [60e3])
    found = SHEAR.check(beam(method=method, **idle), acting)
    plain = SHEAR.check(beam(method=method, stirrup_area=0.0), acting)
    assert found.resistance[0] == plain.resistance[0]
    assert found.details.plain[0]


def test_spacing_limit_halves_under_high_shear():
    limit = 0.125 * 0.65 * 30 * WIDTH * DV
    acting = demand(np.full(2, 50e6), [limit * 0.99, limit * 1.01])
    resistance = SHEAR.check(beam(x=(3000.0, 4000.0), spacing=250.0), acting).resistance
    assert resistance[1] < 0.75 * resistance[0]


def test_unknown_legs_give_no_number():
    check = SHEAR.check(beam(stirrup_area=np.nan), demand([50e6], [1e3]))
    assert np.isnan(check.utilisation[0])


def test_unknown_aggregate_gives_no_number_where_it_matters():
    acting = demand([50e6], [60e3])
    plain = SHEAR.check(beam(stirrup_area=0.0, aggregate=np.nan), acting)
    assert np.isnan(plain.utilisation[0])
    stirrups = SHEAR.check(beam(aggregate=np.nan), acting)
    assert stirrups.utilisation[0] == SHEAR.check(beam(), acting).utilisation[0]


def test_moment_is_at_least_shear_times_depth():
    check = SHEAR.check(beam(), demand([0.0], [100e3]))
    assert check.details.strain[0] == pytest.approx(2 * 100e3 / (2 * 200_000 * 1500))


def test_strain_beyond_0003_is_outside():
    check = SHEAR.check(beam(soffit_area=100.0), demand([80e6], [100e3]))
    assert np.isnan(check.utilisation[0])
    assert [o.clause for o in check.outside if o.mask.any()] == ["11.3.6.4"]


def test_a_face_without_steel_resists_nothing():
    check = SHEAR.check(beam(soffit_area=0.0), demand([80e6], [100e3]))
    assert check.utilisation[0] == np.inf
    assert check.resistance[0] == 0.0


@pytest.mark.parametrize("beyond", [{"bar_yield": 420.0}, {"strength": 61.0}])
def test_simplified_method_only_in_its_range(beyond):
    simplified = SHEAR.check(beam(method="simplified", **beyond), demand([50e6], [100e3]))
    assert np.isnan(simplified.utilisation[0])
    assert [o.clause for o in simplified.outside if o.mask.any()] == ["11.3.6.3"]
    general = SHEAR.check(beam(**beyond), demand([50e6], [100e3]))
    assert general.utilisation[0] > 0.0


@pytest.mark.parametrize("beyond", [{"stirrup_yield": 520.0}, {"strength": 19.0}])
def test_materials_beyond_clause_8_are_outside(beyond):
    check = SHEAR.check(beam(**beyond), demand([50e6], [100e3]))
    assert np.isnan(check.utilisation[0])
    assert [o.clause for o in check.outside if o.mask.any()] == ["8.5.1, 8.6.1.1"]


def test_nothing_is_demanded_outside_the_faces_or_without_shear():
    state = beam(x=(100.0, 4000.0, 5000.0), faces=(200.0, SPAN), stirrup_area=np.nan)
    check = SHEAR.check(state, demand(np.zeros(3), [100e3, 0.0, 100e3]))
    assert check.utilisation[:2].tolist() == [0.0, 0.0]
    assert np.isnan(check.utilisation[2])


def test_depth_and_steel_belong_to_the_face_in_tension():
    state = beam(top_area=600.0)
    sag = SHEAR.check(state, demand([120e6], [100e3]))
    hog = SHEAR.check(state, demand([-120e6], [100e3]))
    assert sag.details.tension_area[0] == 1500.0
    assert hog.details.tension_area[0] == 600.0
    assert hog.resistance[0] < sag.resistance[0]


def test_both_faces_are_tried_where_a_small_moment_can_reverse():
    state = beam(top_area=600.0)
    small, shear = 10e6, 100e3  # |M| < V dv
    sure = SHEAR.check(state, demand([small], [shear], hog=False))
    reversible = SHEAR.check(state, demand([small], [shear], hog=True))
    assert not sure.details.top_in_tension[0]
    assert reversible.details.top_in_tension[0]
    assert reversible.utilisation[0] > sure.utilisation[0]
    large = SHEAR.check(state, demand([120e6], [shear], hog=True))
    assert not large.details.top_in_tension[0]


def test_a_face_that_falls_short_beats_one_that_cannot_be_evaluated():
    state = beam(soffit_area=60.0, top_area=0.0)
    found = SHEAR.check(state, demand([10e6], [100e3], hog=True))
    assert found.utilisation[0] == np.inf  # top: no steel at all; soffit: strain beyond 0.003


def test_strain_at_the_critical_section_serves_places_nearer_to_a_support():
    """Straight bars from the end: As at the face is a small part of that at dv."""
    critical = DV
    x = (0.0, 100.0, critical, 4000.0, SPAN)
    state = beam(x=x, soffit_start=-100.0, anchor=ANCHOR_STRAIGHT)
    area = state.sagging.tension_area
    assert 0.0 < area[0] < 0.5 * area[2]
    shear = np.array([100e3, 97e3, 90e3, 0.0, -100e3])
    moment = np.array([0.0, 10e6, 46e6, 200e6, 0.0])
    reduced = np.array([90e3, 90e3, 90e3, 0.0, -100e3])
    found = SHEAR.check(state, demand(moment, shear, critical=reduced)).details
    assert found.tension_area[:3].tolist() == [area[2]] * 3
    assert found.distance[:3] == pytest.approx([DV, DV - 100.0, 0.0])
    # never less than the strain at the critical section itself
    assert (found.strain[:2] >= found.strain[2]).all()
    # without the critical section's shear the place stands for itself
    own = SHEAR.check(state, demand(moment, shear)).details
    assert own.tension_area[0] == area[0]


def test_critical_distance_is_of_the_faces_that_have_steel():
    found = critical_shear_depth(
        sagging_depth=a([500.0, 500.0, 500.0, 500.0]),
        hogging_depth=a([450.0, 450.0, 450.0, 450.0]),
        sagging_area=a([100.0, 0.0, 100.0, 0.0]),
        hogging_area=a([100.0, 100.0, 0.0, 0.0]),
    )
    assert found.tolist() == [450.0, 450.0, 500.0, 450.0]
    assert STANDARD.critical_distance(*rows()).tolist() == [DV]


# --- laws ----------------------------------------------------------------------------------


@st.composite
def cases(draw):
    number = draw(st.integers(1, 5))
    method = draw(st.sampled_from(["general", "simplified"]))
    state = beam(
        x=np.linspace(0.0, SPAN, number + 2)[1:-1],
        strength=draw(st.floats(21.0, 79.0)),
        aggregate=draw(st.sampled_from([10.0, 14.0, 20.0, 28.0])),
        soffit_area=draw(st.sampled_from([0.0, 400.0, 1500.0, 4000.0])),
        top_area=draw(st.sampled_from([0.0, 400.0, 1500.0])),
        stirrup_area=draw(st.sampled_from([0.0, 60.0, 200.0, 600.0])),
        spacing=draw(st.floats(80.0, 500.0)),
        height=draw(st.sampled_from([400.0, 600.0, 900.0])),
        method=method,
    )
    shape = (draw(st.integers(1, 3)), number)
    values = st.floats(-3e8, 3e8)
    moment = np.array([[draw(values) for _ in range(number)] for _ in range(shape[0])])
    shear = np.array([[draw(values) / 500 for _ in range(number)] for _ in range(shape[0])])
    acting = demand(
        moment,
        shear,
        sag=draw(st.booleans()),
        hog=draw(st.booleans()),
        peak_sagging=np.maximum(moment.max(), 0.0),
        peak_hogging=np.maximum(-moment.min(), 0.0),
    )
    return state, acting


FUNCTIONS = {
    "sqrt": sqrt,
    "min": min,
    "max": max,
    "tan": tan,
    "radians": radians,
    "where": lambda condition, one, other: one if condition else other,
}


def assert_lines_give_their_fields(lines: tuple[CalculationLine, ...], check: Check, place):
    values: dict[str, float] = {}
    details = check.details
    for line in lines:
        if line.when and not getattr(details, line.when)[place]:
            continue
        field = float(getattr(details, line.field)[place])
        if line.formula:
            names = {"__builtins__": {}, **FUNCTIONS, **values}
            assert eval(line.formula, names) == pytest.approx(field, rel=1e-9), line
        values[line.symbol] = field


@settings(deadline=None, max_examples=30)
@given(cases())
@pytest.mark.parametrize("state_of", [SHEAR, LONGITUDINAL, MINIMUM_STIRRUPS], ids=lambda s: s.name)
def test_every_line_gives_its_field(state_of, case):
    state, acting = case
    check = state_of.check(state, acting)
    for place in np.ndindex(check.utilisation.shape):
        if not np.isnan(check.utilisation[place]) and check.utilisation[place] > 0.0:
            assert_lines_give_their_fields(state_of.lines, check, place)


@settings(deadline=None, max_examples=30)
@given(cases())
@pytest.mark.parametrize("state_of", [SHEAR, LONGITUDINAL, MINIMUM_STIRRUPS], ids=lambda s: s.name)
def test_array_equals_scalar(state_of, case):
    state, acting = case
    check = state_of.check(state, acting)
    for place in np.ndindex(check.utilisation.shape):
        row = np.array([place[-1]])
        single = Demand(**{f.name: getattr(acting, f.name)[place][None] for f in fields(acting)})
        alone = state_of.check(state.take(row), single)
        assert alone.utilisation[0] == pytest.approx(check.utilisation[place], nan_ok=True)
        assert alone.resistance[0] == pytest.approx(check.resistance[place], nan_ok=True)
        for one, whole in zip(alone.outside, check.outside, strict=True):
            assert one.mask[0] == whole.mask[place]


@settings(deadline=None, max_examples=30)
@given(cases())
@pytest.mark.parametrize("quick", STANDARD.quick, ids=lambda q: q.states[0].name)
def test_the_quick_evaluation_is_that_of_the_check(quick, case):
    """Wherever a run evaluates a limit state, it is what the calculation prints."""
    state, acting = case
    shape = acting.moment.shape
    every = np.indices(shape).reshape(2, -1)
    basis, flat = quick.basis(state).take(every[1]), acting.at(tuple(every))
    found = quick.evaluate(basis, flat)
    some = slice(0, None, 2)
    again = quick.evaluate(basis.take(some), flat.take(some))
    for state_of, one, other in zip(quick.states, found, again, strict=True):
        whole = state_of.check(state, acting)
        np.testing.assert_allclose(one[0].reshape(shape), whole.utilisation, rtol=1e-12)
        np.testing.assert_allclose(one[1].reshape(shape), whole.resistance, rtol=1e-12)
        np.testing.assert_array_equal(other, [values[some] for values in one])


def test_every_limit_state_is_evaluated_quickly_once():
    quick = [state.name for quick in STANDARD.quick for state in quick.states]
    assert sorted(quick) == sorted(state.name for state in STANDARD.limit_states)


@settings(deadline=None, max_examples=30)
@given(cases(), st.floats(1.0, 3.0))
def test_shear_utilisation_never_lessens_as_all_loads_grow(case, factor):
    state, acting = case
    grown = Demand(
        **{
            f.name: getattr(acting, f.name) * (1.0 if f.name.startswith("can_") else factor)
            for f in fields(acting)
        }
        | {"can_sag": acting.can_sag, "can_hog": acting.can_hog}
    )
    before, after = SHEAR.check(state, acting), SHEAR.check(state, grown)
    one, other = before.utilisation, after.utilisation
    known = np.isfinite(one) & np.isfinite(other)
    # Where one face passes out of the method's range, the other one's figure above 1 is shown.
    short_in_both = (one > 1.0) & (other > 1.0)
    assert (short_in_both | (other >= one * (1 - 1e-9)))[known].all()


@settings(deadline=None, max_examples=30)
@given(st.floats(0.0, 2e8), st.floats(1e3, 3e5), st.floats(500.0, 4000.0), st.floats(1.0, 2.0))
def test_more_tension_steel_never_less_shear_strength(moment, shear, area, more):
    acting = demand([moment], [shear])
    less = SHEAR.check(beam(soffit_area=area), acting).utilisation[0]
    greater = SHEAR.check(beam(soffit_area=area * more), acting).utilisation[0]
    assert np.isnan(less) or greater <= less * (1 + 1e-9)


@settings(deadline=None, max_examples=30)
@given(st.floats(-2e8, 2e8), st.floats(-3e5, 3e5))
def test_the_sense_of_shear_changes_nothing_at_midspan(moment, shear):
    state = beam()
    one = SHEAR.check(state, demand([moment], [shear]))
    other = SHEAR.check(state, demand([moment], [-shear]))
    assert one.utilisation[0] == pytest.approx(other.utilisation[0], nan_ok=True)
