"""Stretches beside steps, where plane sections do not stay plane and no section is checked."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise

from ifccheck.beam import Outline, Run
from ifccheck.mechanics.outlines import bounds
from ifccheck.rating.runs import profile_of
from ifccheck.units import show

SLIGHT = 0.02
"""Part of the depth, or of the area, by which a section may jump and still count as one."""
STEEPEST = 1.0 / 3.0
"""A face that moves by more than this for each mm along the beam is as good as a step."""


@dataclass(frozen=True, slots=True)
class Disturbed:
    """A stretch of a beam that is not rated."""

    start: float
    end: float
    text: str


def disturbed(runs: Sequence[Run]) -> tuple[Disturbed, ...]:
    """Stretches within one depth of every step, and of every taper that is as good as one.

    The depth is the greater of those on both sides.
    """
    if len(runs) == 1 and runs[0].outline_end is None:
        return ()
    return (*_steps(runs), *_steep_tapers(runs))


def _steps(runs: Sequence[Run]) -> Iterator[Disturbed]:
    for before, after in pairwise(runs):
        one, other = before.outline_end or before.outline, after.outline
        if _jumps(one, other):
            depth, x = max(depth_of(one), depth_of(other)), after.start
            text = f"not rated within one depth of the step at x = {show(x, 'length')}"
            yield Disturbed(x - depth, x + depth, text)


def _steep_tapers(runs: Sequence[Run]) -> Iterator[Disturbed]:
    for run in runs:
        if run.outline_end is None or _steepness(run, run.outline_end) <= STEEPEST:
            continue
        depth = max(depth_of(run.outline), depth_of(run.outline_end))
        text = (
            f"not rated within one depth of the steep taper from x = {show(run.start, 'length')}"
            f" to {show(run.end, 'length')}"
        )
        yield Disturbed(run.start - depth, run.end + depth, text)


@lru_cache(maxsize=4096)
def depth_of(outline: Outline) -> float:
    """From the lowest point of an outline to its highest [mm]."""
    _, _, low, high = bounds(outline.rings)
    return high - low


def _jumps(one: Outline, other: Outline) -> bool:
    slight = SLIGHT * max(depth_of(one), depth_of(other))
    edges = zip(bounds(one.rings), bounds(other.rings), strict=True)
    areas = profile_of(one).area, profile_of(other).area
    return (
        any(abs(a - b) > slight for a, b in edges)
        or abs(areas[0] - areas[1]) > SLIGHT * max(areas)
        or len(one.rings) != len(other.rings)
    )


def _steepness(run: Run, last: Outline) -> float:
    """How far a corner of the outline moves for each mm, at most."""
    moved = max(
        math.dist(a, b)
        for one, other in zip(run.outline.rings, last.rings, strict=True)
        for a, b in zip(one, other, strict=True)
    )
    return moved / max(run.end - run.start, 1e-9)


def undisturbed_length(stretches: Sequence[Disturbed], start: float, end: float) -> float:
    """Length of what the stretches leave between two places [mm].

    Examples
    --------
    >>> undisturbed_length([Disturbed(0, 300, ""), Disturbed(200, 500, "")], -100.0, 1000.0)
    600.0
    """
    left, place = 0.0, start
    for stretch in sorted(stretches, key=lambda each: each.start):
        left += max(min(stretch.start, end) - place, 0.0)
        place = max(place, stretch.end)
    return left + max(end - place, 0.0)
