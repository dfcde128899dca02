"""The rules of demand and resistance that keep a weak beam from being called adequate.

Each test holds a beam that a broken rule would call adequate, and its sound twin that is.
Numbers are worked out in the test by hand, with phi_c = 0.65 and phi_s = 0.85 (CSA A23.3-14,
8.4) and the factors of NBCC 2015, table 4.1.3.2.-A, both from memory.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

import pytest

from ifccheck.beam import Anchor, Bars, Case, Given, Load, Outline, Run, Stirrups, Verdict
from ifccheck.rating.results import LimitStateRating, Rating
from ifccheck.rating.subject import Subject
from tests.made_subjects import held, line, point, rated, subject

OWN = 24e-6 * 300.0 * 600.0
"""Self weight of the made beam [N/mm]"""


def of(beam: Subject, method: str = "general", cases: Sequence[Case] | None = None) -> Rating:
    (rating,) = rated(beam, method=method, **({"cases": cases} if cases else {}))[1]
    return rating


def state(rating: Rating, name: str) -> LimitStateRating:
    return next(s for s in rating.limit_states if s.name == name)


def check_adequate(rating: Rating) -> None:
    assert rating.verdict is Verdict.ADEQUATE, (rating.utilisation, rating.reasons)


def check_short(rating: Rating, name: str) -> None:
    assert rating.verdict is Verdict.FALLS_SHORT, [reason.text for reason in rating.reasons]
    assert state(rating, name).utilisation > 1.0


def check_not_rated(rating: Rating, why: str) -> None:
    assert rating.verdict is Verdict.NOT_RATED
    assert math.isnan(rating.utilisation)
    assert rating.governing is None
    assert why in "; ".join(reason.text for reason in rating.reasons)


# Nothing unknown is dropped ----------------------------------------------------------------------


def zones(*spec: tuple[float, float, int | None]) -> tuple[Stirrups, ...]:
    """Stirrups of 10M at 200 mm: from, to, legs."""
    sound = subject().stirrups[0]
    return tuple(replace(sound, start=a, end=b, legs=legs) for a, b, legs in spec)


def with_zones(beam: Subject, *spec: tuple[float, float, int | None]) -> Subject:
    found = zones(*spec)
    return replace(beam, stirrups=found, stirrup_yield=beam.stirrup_yield * len(found))


def test_a_nan_at_a_few_stations_is_never_dropped() -> None:
    """The legs of 200 mm of the beam are not stated; its greatest utilisation lies elsewhere."""
    beam = subject(loads=(line("floor", 10.0),))
    check_adequate(of(with_zones(beam, (0, 3300, 2), (3300, 3500, 2), (3500, 6000, 2))))
    check_not_rated(of(with_zones(beam, (0, 3300, 2), (3300, 3500, None), (3500, 6000, 2))), "legs")


def test_the_weaker_of_two_zones_counts_where_they_overlap() -> None:
    heavy = subject(bottom=5, loads=(line("floor", 40.0),))
    check_adequate(of(with_zones(heavy, (0, 6000, 2))))
    check_not_rated(of(with_zones(heavy, (0, 6000, 2), (0, 600, None))), "legs")


# Stirrups ----------------------------------------------------------------------------------------


def sheared(spacing: float, leg_area: float = 100.0) -> Rating:
    """Vf at dv: 1.25 x 4.32 + 1.5 x 35 = 57.9 kN/m over 2.9 - 0.48 m gives 140 kN, between the
    80 kN of plain concrete and the 220 kN of concrete with 10M at 300."""
    beam = subject(bottom=5, loads=(line("floor", 35.0),))
    stirrups = (replace(beam.stirrups[0], spacing=spacing, leg_area=leg_area),)
    return of(replace(beam, stirrups=stirrups))


def without_stirrups() -> Rating:
    beam = subject(bottom=5, loads=(line("floor", 35.0),))
    return of(replace(beam, stirrups=(), stirrup_yield=()))


@pytest.mark.parametrize(
    ("spacing", "leg_area"),
    [
        (400.0, 100.0),  # beyond 0.7 dv = 0.7 x 484 = 339 mm (11.3.8.1)
        (650.0, 900.0),  # beyond 600 mm, though there is plenty of steel
        (300.0, 36.0),  # 72 mm2; 0.06 sqrt(30) 300 x 300 / 400 = 73.9 mm2 are asked (11.2.8.2)
    ],
)
def test_stirrups_that_do_not_count_add_nothing(spacing: float, leg_area: float) -> None:
    """What is left is the concrete term of a beam without stirrups, not of one with some."""
    check_adequate(sheared(300.0))
    idle, plain = sheared(spacing, leg_area), without_stirrups()
    check_short(idle, "Shear")
    assert state(idle, "Shear").utilisation == pytest.approx(state(plain, "Shear").utilisation)
    assert state(idle, "Shear").resistance == pytest.approx(state(plain, "Shear").resistance)


def test_a_deep_beam_without_stirrups_falls_short_of_the_minimum() -> None:
    """11.2.8.1 asks for minimum stirrups in beams deeper than 750 mm, however little the shear."""

    def unstirred(depth: float) -> Rating:
        beam = subject(depth=depth, loads=(line("floor", 2.0),))
        return of(replace(beam, stirrups=(), stirrup_yield=()))

    check_adequate(unstirred(740.0))
    check_short(unstirred(760.0), "MinimumStirrups")


def test_stirrups_end_where_they_end() -> None:
    heavy = subject(bottom=5, loads=(line("floor", 40.0),))
    check_adequate(of(with_zones(heavy, (0, 6000, 2))))
    check_short(of(with_zones(heavy, (900, 5100, 2))), "Shear")


# Where shear is checked --------------------------------------------------------------------------


def test_a_concentrated_load_near_the_face_is_not_stepped_over() -> None:
    """11.3.2.1: 300 kN at 0.3 m from the face, less than dv = 0.48 m: V at the face counts.

    V = 1.5 x 300 x (5.8 - 0.4) / 5.8 = 419 kN left of the load, 31 kN right of it.
    """
    near = of(subject(bottom=6, loads=(point("press", 300e3, 500.0),)))
    check_short(near, "Shear")
    shear = state(near, "Shear")
    assert shear.position <= 500.0
    assert shear.demand >= 1.5 * 300e3 * 5400.0 / 5800.0
    check_adequate(of(subject(bottom=6, loads=(point("press", 100e3, 500.0),))))


def test_an_end_that_is_not_compressed_is_checked_at_the_face() -> None:
    """w = 1.25 x 4.32 + 1.5 x 145 = 222.9 kN/m; at the face, 1.4 m from the middle of a span of
    3.0 m, V = 312 kN; at dv = 0.48 m further in, 204 kN."""
    stout = subject(
        length=3200.0, bottom=5, spacing=300.0, loads=(line("floor", 145.0, length=3200.0),)
    )  # fmt: skip
    pressed = of(stout)
    hung = of(held(stout, direct=(False, False)))
    check_adequate(pressed)
    check_short(hung, "Shear")
    face = 222.9 * 1400.0
    assert state(hung, "Shear").demand == pytest.approx(face, rel=1e-6)
    assert state(pressed, "Shear").demand < 0.7 * face


# Factors of loads --------------------------------------------------------------------------------


def lifted(press: float, *others: Load) -> Rating:
    return of(subject(loads=(*others, point("press", -press, 3000.0))))


def test_a_permanent_load_that_helps_takes_the_lesser_factor() -> None:
    """A load lifts at midspan: M = 1.5 P 5.8 / 4 - 0.9 x 4.32 x 5.8^2 / 8; with 1.25 for the self
    weight the beam would pass."""
    resistance = state(lifted(60e3), "FlexureHogging").resistance
    own = OWN * 5800.0**2 / 8.0
    lever = 1.5 * 5800.0 / 4.0
    passes, fails = resistance + 0.85 * own, resistance + 0.95 * own
    assert fails - 1.25 * own < resistance
    assert state(lifted(passes / lever), "FlexureHogging").utilisation < 1.0
    short = lifted(fails / lever)
    check_short(short, "FlexureHogging")
    assert state(short, "FlexureHogging").demand == pytest.approx(fails - 0.9 * own, rel=1e-9)
    check_adequate(lifted(40e3))


def test_a_variable_load_that_relieves_counts_for_nothing() -> None:
    bare = lifted(60e3)
    held_down = lifted(60e3, line("floor", 12.0))
    hogging = state(bare, "FlexureHogging")
    assert state(held_down, "FlexureHogging").demand == pytest.approx(hogging.demand, rel=1e-9)
    check_short(lifted(72e3, line("floor", 12.0)), "FlexureHogging")
    check_adequate(lifted(40e3, line("floor", 2.0)))


def test_a_permanent_case_takes_one_factor_as_a_whole() -> None:
    """Two forces of one permanent case, down at 1.5 m and up at 4.5 m of a span of 5.8 m: the
    moment at each is 1.25 times that of both together, never 1.25 of one and 0.9 of the other."""
    cases = (Case("self", "permanent"), Case("plant", "permanent"), Case("floor", "imposed"))
    loads = (point("plant", 40e3, 1500.0), point("plant", -40e3, 4500.0), line("floor", 1e-6))
    beam = replace(subject(loads=loads), unit_weight=Given(1e-15, "test"))
    couple = 40e3 * 3000.0 / 5800.0  # the reactions of the two forces together
    greatest = couple * 1400.0
    rating = of(beam, cases=cases)
    assert state(rating, "FlexureSagging").demand == pytest.approx(1.4 * greatest, rel=1e-6)
    assert state(rating, "FlexureHogging").demand == pytest.approx(1.4 * greatest, rel=1e-6)


def lifts(rating: Rating) -> list[str]:
    return [remark.text for remark in rating.remarks if "is lifted by" in remark.text]


def test_a_support_that_is_lifted_is_told() -> None:
    """40 kN up at 5.0 m, 4.9 m from the start of a span of 5.8 m: of 1.5 x 40 = 60 kN the end
    takes 50.7 kN, its own weight presses it with 0.9 x 4.32 x 6.0 / 2 = 11.7 kN."""
    rating = of(subject(top=4, loads=(point("press", -40e3, 5000.0),)))
    (text,) = lifts(rating)
    pull = 60.0 * 4900.0 / 5800.0 - 0.9 * OWN * 6000.0 / 2.0 / 1e3
    assert f"its end is lifted by up to {pull:.1f} kN under " in text
    assert "what holds it down is not checked" in text


def test_both_supports_may_be_lifted() -> None:
    texts = lifts(lifted(60e3))
    assert [text[:7] for text in texts] == ["its sta", "its end"]


def test_supports_that_press_are_not_told() -> None:
    """At midspan 1.5 P / 2 must exceed 0.9 x 4.32 x 6.0 / 2 = 11.66 kN: P > 15.55 kN."""
    assert lifts(lifted(15.5e3)) == []
    assert len(lifts(lifted(15.6e3))) == 2
    assert lifts(of(subject(loads=(line("floor", 10.0),)))) == []
    # a live load presses nothing that may not be there
    assert len(lifts(lifted(15.6e3, line("floor", 10.0)))) == 2


def test_a_support_that_a_rated_case_lifts_before_its_factor_is_told() -> None:
    """1.5 x 5 kN f / 2 = 0.9 x 4.32 x 6.0 / 2 where f = 3.11; the top's bars carry far more."""
    rating = lifted(5e3)
    (safe,) = rating.safe_loads
    assert safe.factor > 4.0
    factor = 0.9 * OWN * 6000.0 / (1.5 * 5e3)
    texts = [r.text for r in rating.remarks if f"press is more than {factor:.2f} x" in r.text]
    assert [text[:7] for text in texts] == ["its sta", "its end"]
    # what presses and grows lifts nothing
    down = of(subject(loads=(point("press", 5e3, 3000.0),)))
    assert not [r for r in down.remarks if "is lifted" in r.text]


def test_a_fixed_end_holds_itself() -> None:
    beam = subject(
        length=2200.0, top=4, bearing=0.0, ends=("fixed", "free"),
        loads=(point("press", -40e3, 1500.0),),
    )  # fmt: skip
    assert lifts(of(held(beam, faces=(0.0, 2200.0)))) == []


# The face in tension -----------------------------------------------------------------------------


def cantilever(top: int, bottom: int, depth: float = 600.0) -> Rating:
    loads = (line("floor", 10.0, length=2200.0),)
    beam = subject(
        length=2200.0, depth=depth, top=top, bottom=bottom, bearing=0.0, ends=("fixed", "free"),
        loads=loads,
    )  # fmt: skip
    return of(held(beam, faces=(0.0, 2200.0)))


def test_a_cantilever_with_bars_only_at_its_bottom_falls_short() -> None:
    check_adequate(cantilever(top=4, bottom=0))
    check_short(cantilever(top=0, bottom=6), "FlexureHogging")


def test_the_depth_is_that_of_the_face_in_tension() -> None:
    """Top bars that were set deep: d = 600 - 200 = 400 mm for hogging, not the 538 mm of the
    bottom bars. Mr = phi_s As fy (d - a/2), a = phi_s As fy / (0.805 x 0.65 x 30 x 300)."""
    sound = subject(
        length=2200.0, top=4, bottom=0, bearing=0.0, ends=("fixed", "free"),
        loads=(line("floor", 10.0, length=2200.0),),
    )  # fmt: skip
    bars = tuple(replace(bar, z=400.0) for bar in sound.bars)
    deep = held(replace(sound, bars=bars), faces=(0.0, 2200.0))
    force = 0.85 * 4 * 300.0 * 400.0
    lever = 400.0 - force / (0.805 * 0.65 * 30.0 * 300.0) / 2.0
    assert state(of(deep), "FlexureHogging").resistance == pytest.approx(force * lever, rel=1e-6)


TEE = Outline(((
    (-150.0, 0.0), (150.0, 0.0), (150.0, 450.0), (600.0, 450.0), (600.0, 600.0), (-600.0, 600.0),
    (-600.0, 450.0), (-150.0, 450.0),
),))  # fmt: skip


def tee(top: int, bottom: int) -> Rating:
    beam = subject(
        length=2200.0, top=top, bottom=bottom, bearing=0.0, ends=("fixed", "free"),
        loads=(line("floor", 10.0, length=2200.0),),
    )  # fmt: skip
    run = Run(0.0, 2200.0, TEE)
    return of(held(replace(beam, beam=replace(beam.beam, runs=(run,))), faces=(0.0, 2200.0)))


def test_of_a_flange_in_tension_only_its_steel_counts() -> None:
    """Hogging compresses the web's 300 mm at the bottom, whatever the flange's width."""
    check_short(tee(top=0, bottom=6), "FlexureHogging")
    sound = tee(top=4, bottom=0)
    check_adequate(sound)
    force = 0.85 * 4 * 300.0 * 400.0
    lever = 540.0 - force / (0.805 * 0.65 * 30.0 * 300.0) / 2.0
    assert state(sound, "FlexureHogging").resistance == pytest.approx(force * lever, rel=1e-6)


def test_stress_falls_to_nothing_at_the_end_of_a_bar() -> None:
    """Bars that are developed (12.2) well before the moment needs them, and bars that are not.

    12 kN/m factored 23.4 kN/m: at 1.6 m from the support M = 23.4 x 1.6 x 4.2 / 2 = 78.6 kN*m.
    """
    beam = subject(anchor=Anchor.STRAIGHT, loads=(line("floor", 12.0),), bearing=300.0)
    full = cut_to(beam, 0.0, 6000.0)
    short = cut_to(beam, 1700.0, 4300.0)
    check_adequate(of(full))
    rating = of(short)
    check_short(rating, "FlexureSagging")
    assert math.isinf(state(rating, "FlexureSagging").utilisation)


def test_a_bar_counts_only_as_far_as_it_is_developed() -> None:
    """Two bars run through, four more begin where two are not enough any more."""
    base = subject(bottom=2, loads=(line("floor", 30.0),))
    through = next(b for b in base.bars if b.z < 300.0)
    added = replace(through, count=4, ys=(-60.0, -20.0, 20.0, 60.0), start_anchor=Anchor.STRAIGHT,
                    end_anchor=Anchor.STRAIGHT)  # fmt: skip

    def with_added(start: float) -> Rating:
        more = replace(added, start=start, end=6000.0 - start)
        return of(replace(base, bars=(*base.bars, more), bar_yield=(*base.bar_yield, STEEL)))

    check_adequate(with_added(900.0))
    check_short(with_added(1800.0), "FlexureSagging")
    check_short(with_added(1500.0), "LongitudinalTension")


@pytest.mark.parametrize("bearing", [0.0, 100.0])
def test_a_straight_bar_that_ends_near_the_face_anchors_little(bearing: float) -> None:
    """11.3.9.5 asks the bottom bars for a force there; 0 or 100 mm past the face a straight 25M,
    whose development length is some 0.8 m (12.2.3), has next to none."""
    loads = (line("floor", 20.0),)
    check_adequate(of(subject(loads=loads, bearing=bearing, anchor=Anchor.ANCHORED)))
    straight = of(subject(loads=loads, bearing=bearing, anchor=Anchor.STRAIGHT))
    check_short(straight, "LongitudinalTension")
    check_adequate(of(subject(loads=loads, bearing=600.0, anchor=Anchor.STRAIGHT)))


STEEL = Given(400.0, "test")


def cut_to(beam: Subject, start: float, end: float) -> Subject:
    bars: tuple[Bars, ...] = tuple(
        replace(b, start=start, end=end) if b.z < 300.0 else b for b in beam.bars
    )
    return replace(beam, bars=bars)


# Outside the range of a clause -------------------------------------------------------------------


def test_too_much_steel_is_outside_10_5_2() -> None:
    """c/d <= 700 / (700 + 400) = 0.636: 12-25M in 300 x 600 exceed it."""
    light = (line("floor", 5.0),)
    check_adequate(of(subject(bottom=3, top=0, loads=light)))
    check_not_rated(of(subject(bottom=12, top=0, loads=light)), "outside 10.5.2")


@pytest.mark.parametrize("strength", [19.0, 81.0])
def test_concrete_outside_its_range(strength: float) -> None:
    light = (line("floor", 5.0),)
    check_not_rated(of(subject(strength=strength, loads=light)), "outside")
    check_adequate(of(subject(strength=20.0 if strength < 20.0 else 80.0, loads=light)))


def yielding(at: float, method: str) -> Rating:
    beam = subject(loads=(line("floor", 5.0),))
    steel = Given(at, "test")
    bars = tuple(replace(b, yield_strength=steel) for b in beam.bars)
    return of(replace(beam, bars=bars, bar_yield=tuple(steel for _ in bars)), method)


def test_steel_stronger_than_the_standard_knows() -> None:
    check_adequate(yielding(500.0, "general"))
    check_not_rated(yielding(501.0, "general"), "outside")


def test_the_simplified_method_with_stronger_bars_is_outside_11_3_6_3() -> None:
    check_adequate(yielding(400.0, "simplified"))
    check_not_rated(yielding(500.0, "simplified"), "outside 11.3.6.3")
    check_adequate(yielding(500.0, "general"))


def test_the_simplified_method_with_stronger_concrete_is_outside_11_3_6_3() -> None:
    light = (line("floor", 5.0),)
    check_adequate(of(subject(strength=60.0, loads=light), "simplified"))
    check_not_rated(of(subject(strength=61.0, loads=light), "simplified"), "outside 11.3.6.3")


# The rating factor -------------------------------------------------------------------------------


def test_the_safe_load_of_a_beam_that_is_not_rated_is_not_told() -> None:
    loads = (line("floor", 5.0), point("press", 20e3, 3000.0))
    (told,) = of(subject(loads=loads)).safe_loads
    assert told.factor > 1.0
    (untold,) = of(subject(loads=loads, legs=None)).safe_loads
    assert math.isnan(untold.factor)
    assert math.isnan(untold.single_value)
    assert "cannot be said" in untold.text


@pytest.mark.parametrize("length", [1.0, 100.0, 300.0])
def test_a_strip_of_load_beside_a_support_is_a_concentrated_load(length: float) -> None:
    """11.3.2: the shear at dv serves the stretch to the face only without a concentrated load."""
    start = 450.0 - length / 2.0
    strip = Load("beam", "floor", "line", start, start + length, (250e3 / length,) * 2)
    lump = subject(spacing=300.0, bottom=5, loads=(point("floor", 250e3, 450.0),))
    _, (as_point,) = rated(lump)
    _, (as_strip,) = rated(replace(lump, loads=(strip,)))
    shear = next(state.utilisation for state in as_strip.limit_states if state.name == "Shear")
    reference = next(state.utilisation for state in as_point.limit_states if state.name == "Shear")
    assert as_point.verdict is as_strip.verdict is Verdict.FALLS_SHORT
    assert shear == pytest.approx(reference, rel=0.05)


def test_the_tension_at_the_greatest_moment_bounds_nothing_where_loads_come_from_the_side() -> None:
    """11.3.9.4 asks that the load presses into the compression face (from memory)."""
    beam = subject(loads=(point("floor", 150e3, 3000.0),))
    _, (on_top,) = rated(beam)
    _, (at_side,) = rated(replace(beam, side_loaded=True))

    def tension(rating: Rating) -> float:
        return next(s.utilisation for s in rating.limit_states if s.name == "LongitudinalTension")

    assert tension(at_side) > 1.02 * tension(on_top)
