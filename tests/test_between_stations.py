"""What beams reach between stations, against stations that stand fifty times as close."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import pytest

from ifccheck.analysis.stations import places
from ifccheck.beam import Anchor, Bars, Load
from ifccheck.mechanics.arrays import Floats
from ifccheck.rating.assembly import frame_of
from ifccheck.rating.batch import Batch, batches, rate_batch, rate_frame
from ifccheck.rating.subject import Subject
from ifccheck.standards import Options
from tests.made_subjects import CASES, STANDARD, STEEL, combinations, line, point, scaled, subject
from tests.test_factors import HUMP, _named

METHODS = ("general", "simplified")
ALLOWED = 1e-4
"""Part by which the greatest utilisation, or a rating factor, may be wrong between stations"""


def made(seed: int) -> Subject:
    """A beam with bars that stop, whose ends turn, under all kinds of loads."""
    some = np.random.default_rng(seed)
    length, depth = float(some.choice([3000.0, 4500.0, 6000.0])), float(some.uniform(400.0, 800.0))
    ends = (("pinned", "pinned"), ("fixed", "fixed"), ("fixed", "pinned"))[some.integers(3)]
    key, twist = f"beam {seed}", float(some.uniform(-6e7, 6e7))
    first, last = sorted(some.uniform(0.0, length, 2).tolist())
    force, at = float(some.uniform(0.0, 9e4)), float(some.uniform(0.1, 0.9)) * length
    beam = subject(
        key, depth=depth, length=length, bottom=int(some.integers(2, 7)), ends=ends,
        top=int(some.integers(2, 7)), spacing=float(some.choice([100.0, 150.0, 200.0])),
        loads=(
            line("floor", float(some.uniform(0.5, 15.0)), key, length),
            Load(key, "floor", "moment", 100.0, 100.0, (twist, twist)),
            Load(key, "press", "line", first, last, tuple(some.uniform(0.0, 20.0, 2).tolist())),
            point("press", force, at, key),
        ),
        anchor=some.choice(np.array([Anchor.ANCHORED, Anchor.STRAIGHT, Anchor.HOOK])),
    )  # fmt: skip
    stop, straight = float(some.uniform(0.2, 0.4)) * length, (Anchor.STRAIGHT, Anchor.STRAIGHT)
    stretches = ((0.0, stop, depth - 110.0), (stop / 2.0, length - stop / 2.0, 110.0),
                 (length - stop, length, depth - 110.0))  # fmt: skip
    short = [Bars(2, 19.5, 300.0, *each, (-50.0, 50.0), STEEL, *straight) for each in stretches]
    bars = (*beam.bars, *short)
    return replace(beam, bars=bars, bar_yield=tuple(STEEL for _ in bars))


def settled(beams: Sequence[Subject], method: str) -> Batch:
    return rate_batch(beams, STANDARD, Options(method), CASES, combinations())


def dense(beams: Sequence[Subject], method: str) -> Batch:
    """The beams at stations that stand closely, once."""
    frame = frame_of(beams, CASES)
    part = np.linspace(0.0, 1.0, 2001)
    x = frame.spans.start[:, None] + part * frame.spans.length[:, None]
    more = places(np.repeat(np.arange(len(beams)), part.size), x.ravel(), two_sided=False)
    return rate_frame(frame, beams, STANDARD, Options(method), CASES, combinations(), more)


def greatest(batch: Batch) -> Floats:
    """Greatest utilisation of each beam; nan where it is not known."""
    states = [
        np.where(each.worst.incomplete, np.nan, each.worst.utilisation) for each in batch.states
    ]
    return np.asarray(np.max(states, axis=0))


SHORT = _named(scaled(HUMP, "press", 1.97), "short")
"""Stations that stand far apart find 0.96 of it used, and it is just short between two"""

BEAMS = [*map(made, range(16)), HUMP, SHORT]


@pytest.mark.parametrize("method", METHODS)
def test_no_beam_is_used_more_between_its_stations(method: str) -> None:
    few, many = (greatest(rate(BEAMS, method)) for rate in (settled, dense))
    known = np.isfinite(few)
    assert known.sum() > 8
    np.testing.assert_array_equal(known, np.isfinite(many))
    assert (many / few)[known].max() < 1.0 + ALLOWED


@pytest.mark.parametrize("method", METHODS)
def test_no_beam_is_short_between_its_stations_below_a_rating_factor(method: str) -> None:
    factor = settled(BEAMS, method).factors["press"].factor
    limited = np.flatnonzero((factor > 0.0) & np.isfinite(factor))
    beams = [scaled(BEAMS[row], "press", float(factor[row]) * (1.0 - ALLOWED)) for row in limited]
    assert len(beams) > 8
    assert greatest(dense(beams, method)).max() < 1.0 + ALLOWED


def test_beams_that_need_more_stations_are_rated_again_in_a_later_batch() -> None:
    found = list(batches(BEAMS, STANDARD, Options("general"), CASES, combinations()))
    whole = settled(BEAMS, "general")
    assert len(found) == 2
    again = [each.beam.key for each in found[1].subjects]
    assert 0 < len(again) < len(BEAMS)
    last = {
        each.beam.key: value
        for batch in found
        for each, value in zip(batch.subjects, greatest(batch), strict=True)
    }
    np.testing.assert_allclose(
        [last[each.beam.key] for each in BEAMS], greatest(whole), rtol=ALLOWED
    )


def test_even_beams_need_no_more_stations() -> None:
    beams = [subject(f"beam {n}", loads=(line("floor", 4.0 + n, f"beam {n}"),)) for n in range(4)]
    frame = frame_of(beams, CASES)
    batch = rate_frame(frame, beams, STANDARD, Options("general"), CASES, combinations())
    assert not batch.between.beam.size
