"""Rating factors against a scan: whole checks at every arrangement under many factors."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from ifccheck.beam import Load
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating.assembly import frame_of
from ifccheck.rating.batch import rate_frame, rate_options
from ifccheck.rating.loaded import Loaded, loaded
from ifccheck.rating.subject import Subject
from ifccheck.standards import Options
from tests.made_subjects import (
    CASES,
    STANDARD,
    combinations,
    line,
    point,
    scaled,
    subject,
)

GREATEST = 1000.0
"""Up to which a case is looked at"""

METHODS = ("general", "simplified")


def twisted(
    length: float, depth: float, bars: tuple[int, int], ends: tuple[str, str],
    floor: float, twist: float, forces: tuple[float, float], sides: bool,
) -> Subject:  # fmt: skip
    """A beam whose moments may reverse as the press grows."""
    first, second = forces
    beam = subject(
        length=length, depth=depth, bottom=bars[0], top=bars[1], ends=ends,  # type: ignore[arg-type]
        loads=(
            line("floor", floor, length=length),
            Load("beam", "floor", "moment", 100.0, 100.0, (twist, twist)),
            point("press", first, 0.27 * length),
            point("press", second, 0.62 * length),
        ),
    )  # fmt: skip
    return replace(beam, side_loaded=sides)


twisted_beams = st.builds(
    twisted,
    st.sampled_from([3000.0, 4500.0, 6000.0]),
    st.floats(400.0, 800.0),
    st.tuples(st.integers(2, 6), st.integers(2, 6)),
    st.sampled_from([("pinned", "pinned"), ("fixed", "fixed"), ("fixed", "pinned")]),
    st.floats(0.3, 8.0),
    st.floats(-40e6, 40e6),
    st.tuples(st.floats(-60e3, 60e3), st.floats(-60e3, 60e3)),
    st.booleans(),
)

HUMP = replace(
    subject(
        depth=465.0, bottom=6, top=2, spacing=150.0, strength=25.0,
        loads=(
            line("floor", 3.28),
            point("floor", 19.3e3, 1417.0),
            Load("beam", "floor", "moment", 100.0, 100.0, (32.74e6, 32.74e6)),
            point("press", 5.41e3, 1572.0),
            point("press", 52.6e3, 3711.0),
        ),
    ),
    side_loaded=True,
)  # fmt: skip
"""While |Mf| < Vf dv, its top is pulled, too, by more than its bars hold; soon after no longer"""


def under(beams: list[Subject]) -> Loaded:
    return loaded(frame_of(beams, CASES), STANDARD, CASES, combinations(CASES))


def grown(acting: Loaded, factor: Floats) -> Demand:
    """What acts at every arrangement with the press of each beam multiplied."""
    total, (share,) = acting.acting.total, acting.acting.shares
    more = factor[acting.stations.beam] - 1.0
    numbers = {
        f.name: getattr(total, f.name) + more * getattr(share, f.name)
        for f in fields(total)
        if not f.name.startswith("can_")
    }
    return replace(total, **numbers)


def exceeding(acting: Loaded, method: str, factor: Floats) -> Bools:
    """Whether a check finds a beam short, or cannot say, at each beam's factor (B)."""
    prepared = STANDARD.prepare(acting.frame.members, acting.arrays, Options(method))
    demand, first = grown(acting, factor), acting.stations.first_rows(factor.size)[:-1]
    short = [
        ~(state.check(prepared, demand).utilisation <= 1.0).all(axis=(0, 1))
        for state in STANDARD.limit_states
    ]
    found: Bools = np.logical_or.reduceat(np.any(short, axis=0), first)
    return found


def factors_of(beams: list[Subject], method: str) -> tuple[Floats, Ints]:
    frame = frame_of(beams, CASES)
    batch = rate_frame(frame, beams, STANDARD, Options(method), CASES, combinations(CASES))
    return batch.factors["press"].factor, batch.factors["press"].element


@settings(deadline=None, max_examples=12)
@given(st.lists(twisted_beams, min_size=1, max_size=4), st.sampled_from(METHODS))
@example([HUMP], "general")
@example([HUMP], "simplified")
def test_no_factor_lies_above_one_at_which_a_check_finds_the_beam_short(
    some: list[Subject], method: str
) -> None:
    beams = [_named(beam, f"beam {i}") for i, beam in enumerate(some)]
    factor, _ = factors_of(beams, method)
    acting, reach = under(beams), np.minimum(factor, GREATEST)
    for part in (*np.linspace(0.0, 1.0, 40, endpoint=False), 1.0 - 1e-6):
        short = exceeding(acting, method, part * reach) & (reach > 0.0)
        assert not short.any(), (part, factor)
    limited = factor < GREATEST
    beyond = exceeding(acting, method, np.where(limited, factor * (1.0 + 1e-6), 0.0))
    assert beyond[limited].all(), factor


def test_a_beam_that_a_greater_load_relieves_is_limited_by_the_lesser_one() -> None:
    """At the stations that it has: short above the factor, and sound again far above it."""
    (factor,), _ = factors_of([HUMP], "general")
    shares = (1.0 - 1e-4, 1.02, 1.12)
    beams = [_named(scaled(HUMP, "press", factor * share), f"beam {share}") for share in shares]
    batch = rate_frame(
        frame_of(beams, CASES), beams, STANDARD, Options("general"), CASES, combinations(CASES)
    )
    greatest = np.max([each.worst.utilisation for each in batch.states], axis=0)
    assert (greatest > 1.0).tolist() == [False, True, False]


@pytest.mark.parametrize("methods", [METHODS, METHODS[::-1]])
def test_both_methods_at_once_give_what_each_gives_alone(methods: tuple[str, ...]) -> None:
    beams = [
        _named(twisted(6000.0, 500.0 + 20.0 * n, (4, 3), ("fixed", "pinned"), 4.0, 1e7,
                       (20e3, 4e3 * n), n % 2 == 0), f"beam {n}")
        for n in range(8)
    ]  # fmt: skip
    frame, chosen = frame_of(beams, CASES), combinations(CASES)
    together = rate_options(
        frame, beams, STANDARD, [Options(method) for method in methods], CASES, chosen
    )
    for batch, method in zip(together, methods, strict=True):
        alone = rate_frame(frame, beams, STANDARD, Options(method), CASES, chosen)
        for one, other in zip(batch.states, alone.states, strict=True):
            np.testing.assert_array_equal(one.worst.utilisation, other.worst.utilisation)
        for name in ("factor", "state", "element", "x"):
            found, wanted = (getattr(each.factors["press"], name) for each in (batch, alone))
            np.testing.assert_array_equal(found, wanted)


def _named(beam: Subject, key: str) -> Subject:
    return replace(
        beam,
        beam=replace(beam.beam, key=key),
        loads=tuple(load._replace(beam=key) for load in beam.loads),
    )
