"""Fixed ends of beams whose section varies, against beam elements, closed forms and equilibrium."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.statics import effects_at, solve
from ifccheck.analysis.stations import Places, make_stations
from ifccheck.analysis.stiffness import Curvature, places_between, with_varying_stiffness
from ifccheck.beam import Load, Outline, Run, SupportKind
from ifccheck.mechanics.width_profile import pack_strips, strips_of
from ifccheck.rating.batch import Batch
from ifccheck.rating.results import Rating
from ifccheck.rating.stiffness import second_moments
from ifccheck.rating.subject import Subject
from tests.made_subjects import held, line, point, rated, subject
from tests.test_analysis_statics import SUPPORTS, Row, span_rows, table

LENGTH = 6000.0
ELEMENTS = 600
WIDTH = 300.0
FIXED_PAIRS: list[tuple[SupportKind, SupportKind]] = [
    ("fixed", "fixed"), ("fixed", "pinned"), ("pinned", "fixed"),
]  # fmt: skip

# --- beam elements ------------------------------------------------------------------------------


def element_end_moments(
    inertia: np.ndarray, ends: tuple[str, str], intensity: float, force: float, node: int
) -> tuple[float, float]:
    """Moments at the ends of a beam of equal elements, each of one stiffness (E = 1).

    Cubic elements with the loads at their nodes that are equivalent to an even load: exact at the
    nodes where the stiffness is constant within each.
    """
    count, h = inertia.size, LENGTH / inertia.size
    shape = np.array(
        [[12, 6 * h, -12, 6 * h], [6 * h, 4 * h * h, -6 * h, 2 * h * h],
         [-12, -6 * h, 12, -6 * h], [6 * h, 2 * h * h, -6 * h, 4 * h * h]]
    ) / h**3  # fmt: skip
    even = intensity * h / 2.0 * np.array([1.0, h / 6.0, 1.0, -h / 6.0])
    stiffness, load = np.zeros((2 * count + 2, 2 * count + 2)), np.zeros(2 * count + 2)
    for row, stiff in enumerate(inertia):
        part = slice(2 * row, 2 * row + 4)
        stiffness[part, part] += stiff * shape
        load[part] += even
    load[2 * node] += force
    held = [0, 2 * count] + [place for place, end in zip((1, 2 * count + 1), ends, strict=True)
                             if end == "fixed"]  # fmt: skip
    free = np.setdiff1d(np.arange(2 * count + 2), held)
    moved = np.zeros(2 * count + 2)
    moved[free] = np.linalg.solve(stiffness[np.ix_(free, free)], load[free])
    first = inertia[0] * shape @ moved[:4] - even
    last = inertia[-1] * shape @ moved[-4:] - even
    return float(first[1]), -float(last[3])  # hogging negative


def our_end_moments(
    inertia: np.ndarray, ends: tuple[str, str], intensity: float, force: float, node: int
) -> tuple[float, float]:
    """The same with a stiffness that is constant within each of the elements."""
    spans = span_rows([(0.0, LENGTH, SUPPORTS[ends[0]], SUPPORTS[ends[1]])])
    at = node * LENGTH / inertia.size
    rows: list[Row] = [
        (0, 0, 0, 0.0, LENGTH, intensity, intensity),
        (0, 0, 1, at, at, force, force),
    ]
    loads = table(rows)
    edges = np.linspace(0.0, LENGTH, inertia.size + 1)
    changes = Places(np.zeros(edges.size, np.intp), edges, np.zeros(edges.size, np.bool_))
    beam, x, length = places_between(make_stations(spans, loads, changes))
    stiff = inertia[np.minimum((x / LENGTH * inertia.size).astype(int), inertia.size - 1)]
    solved = with_varying_stiffness(solve(spans, loads, 1), Curvature(beam, x, length / stiff))
    effects = effects_at(solved, make_stations(spans, loads, changes))
    assert np.isnan(effects.deflection).all()  # which are those of one stiffness
    assert effects.reactions[0, 0].sum() == pytest.approx(intensity * LENGTH + force)
    first, last = effects.end_moments[0, 0]
    return float(first), float(last)


@settings(deadline=None, max_examples=25)
@given(
    st.lists(st.floats(1.0, 30.0), min_size=2, max_size=12), st.sampled_from(FIXED_PAIRS),
    st.floats(-20.0, 40.0), st.floats(-1e5, 1e5), st.integers(1, 11),
)  # fmt: skip
def test_end_moments_are_those_of_beam_elements(
    inertia: list[float], ends: tuple[str, str], intensity: float, force: float, node: int
) -> None:
    at = min(node, len(inertia) - 1)
    found = our_end_moments(np.array(inertia), ends, intensity, force, at)
    expected = element_end_moments(np.array(inertia), ends, intensity, force, at)
    size = (abs(intensity) * LENGTH + abs(force)) * LENGTH
    assert found == pytest.approx(expected, abs=1e-9 * size + 1e-9)


# --- sections -----------------------------------------------------------------------------------


def test_second_moments_of_area() -> None:
    """b h3 / 12 wherever it stands, b h3 / 36 of a triangle, and a box less what is hollow."""
    box = [(-150.0, 200.0), (150.0, 200.0), (150.0, 800.0), (-150.0, 800.0)]
    hollow = [(-50.0, 300.0), (50.0, 300.0), (50.0, 500.0), (-50.0, 500.0)]
    triangle = [(0.0, 0.0), (400.0, 0.0), (0.0, 300.0)]
    strips = pack_strips([strips_of(rings) for rings in ([box], [triangle], [box, hollow])])
    whole, cut = 300.0 * 600.0**3 / 12.0, 100.0 * 200.0**3 / 12.0
    area = 300.0 * 600.0 - 100.0 * 200.0
    centre = (300.0 * 600.0 * 500.0 - 100.0 * 200.0 * 400.0) / area
    boxed = whole + 180e3 * (500.0 - centre) ** 2 - cut - 20e3 * (400.0 - centre) ** 2
    assert second_moments(strips) == pytest.approx([whole, 400.0 * 300.0**3 / 36.0, boxed])


# --- beams --------------------------------------------------------------------------------------


def outline(depth: float) -> Outline:
    low = 600.0 - depth
    return Outline((((-150.0, low), (150.0, low), (150.0, 600.0), (-150.0, 600.0)),))


def haunched(
    deep: float, reach: float, ends: tuple[SupportKind, SupportKind], *loads: Load
) -> Subject:
    """600 deep between haunches that reach down to ``deep`` at both ends."""
    made = subject(loads=loads, ends=ends, bearing=0.0, bottom=4, top=4)
    middle, end = outline(600.0), outline(deep)
    runs = (
        Run(0.0, reach, end, middle), Run(reach, LENGTH - reach, middle),
        Run(LENGTH - reach, LENGTH, middle, end),
    )  # fmt: skip
    return held(replace(made, beam=replace(made.beam, runs=runs)), faces=(0.0, LENGTH))


def depth_at(deep: float, reach: float, x: np.ndarray) -> np.ndarray:
    near = np.minimum(x, LENGTH - x)
    return 600.0 + (deep - 600.0) * np.clip(1.0 - near / reach, 0.0, 1.0)


def end_moments(batch: Batch, ratings: list[Rating]) -> tuple[float, float]:
    """Of the case ``floor``."""
    from ifccheck.rating.shares import arising
    from tests.made_subjects import CASES

    found = arising(batch, CASES).end_moments[1, 0]
    return float(found[0]), float(found[1])


@pytest.mark.parametrize("ends", FIXED_PAIRS)
@pytest.mark.parametrize(("deep", "reach"), [(900.0, 1500.0), (700.0, 2000.0)])
def test_haunches_draw_moment_to_fixed_ends(
    deep: float, reach: float, ends: tuple[SupportKind, SupportKind]
) -> None:
    """As beam elements do whose stiffness is that of the depth at their middle."""
    found = end_moments(*rated(haunched(deep, reach, ends, line("floor", 20.0))))
    middles = (np.arange(ELEMENTS) + 0.5) * LENGTH / ELEMENTS
    inertia = WIDTH * depth_at(deep, reach, middles) ** 3 / 12.0
    expected = element_end_moments(inertia, ends, 20.0, 0.0, 1)
    assert found == pytest.approx(expected, rel=2e-5, abs=1.0)
    alone = 20.0 * LENGTH**2 / (12.0 if ends == ("fixed", "fixed") else 8.0)
    assert max(map(abs, found)) > 1.02 * alone


def test_hogging_of_a_haunched_beam_is_rated_with_that_moment() -> None:
    """Demand at the face: 1.25 of its own weight, lumped at nodes, and 1.5 of the floor."""
    made = haunched(900.0, 1500.0, ("fixed", "fixed"), line("floor", 20.0))
    _, (rating,) = rated(made)
    hogging = next(state for state in rating.limit_states if state.name == "FlexureHogging")
    count, each = 120, LENGTH / 120
    depth = depth_at(900.0, 1500.0, (np.arange(count) + 0.5) * each)
    inertia = WIDTH * depth**3 / 12.0
    floor = element_end_moments(inertia, ("fixed", "fixed"), 20.0, 0.0, 1)[0]
    weight = sum(
        element_end_moments(inertia, ("fixed", "fixed"), 0.0, load, node)[0]
        for node in range(3, count, 6)
        for load in [24e-6 * WIDTH * float(depth[node - 3 : node + 3].sum()) * each]
    )
    assert -hogging.demand == pytest.approx(1.25 * weight + 1.5 * floor, rel=3e-3)


def test_nothing_changes_where_the_section_does_not() -> None:
    """One outline in several runs is one stiffness, and so is whatever the statics do not ask."""
    made = subject(
        loads=(line("floor", 20.0), point("press", 5e4, 2000.0)), ends=("fixed", "fixed")
    )
    (run,) = made.beam.runs
    parts = (replace(run, end=2500.0), replace(run, start=2500.0))
    split = replace(made, beam=replace(made.beam, runs=parts))
    (one,), (other,) = rated(made)[1], rated(split)[1]
    assert one.utilisation == pytest.approx(other.utilisation, rel=1e-12)
    pinned = haunched(900.0, 1500.0, ("pinned", "pinned"), line("floor", 20.0))
    assert end_moments(*rated(pinned)) == pytest.approx((0.0, 0.0), abs=1.0)
    free = haunched(900.0, 1500.0, ("fixed", "free"), line("floor", 20.0))
    assert end_moments(*rated(free))[0] == pytest.approx(-20.0 * LENGTH**2 / 2.0)


def test_beside_others_a_beam_is_rated_as_alone() -> None:
    plain = subject("plain", loads=(line("floor", 20.0, "plain"),), ends=("fixed", "fixed"))
    alone = haunched(900.0, 1500.0, ("fixed", "fixed"), line("floor", 20.0))
    for one, other in zip(rated(plain, alone)[1], (plain, alone), strict=True):
        assert one.utilisation == pytest.approx(rated(other)[1][0].utilisation, rel=1e-12)
