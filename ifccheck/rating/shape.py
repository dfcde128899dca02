"""What the shape of a beam keeps beam theory from saying."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from functools import lru_cache
from typing import NamedTuple

from ifccheck.beam import Beam, Outline, RatedSpan, Reason, Run
from ifccheck.mechanics.inclination import inclination_of
from ifccheck.rating.disturbed import Disturbed, depth_of, disturbed, undisturbed_length
from ifccheck.standards import Standard
from ifccheck.units import show, show_ratio

LEAST_PART = 0.05
"""Part of a span that steps must leave, for any section of it to be checked"""
LEAST_LENGTH = 150.0
"""The same as a length, beyond the cover of bars at a free end [mm]"""


def shape_reasons(
    runs: Sequence[Run], spans: Sequence[RatedSpan], standard: Standard
) -> Iterator[Reason]:
    """Why a beam of such a shape is not rated, or not everywhere.

    Parameters
    ----------
    runs
        Of the beam, at least one.
    spans
        That it makes, at least one.
    standard
        Whose beam theory is asked for.
    """
    yield from deep_member(runs, spans, standard)
    stretches = disturbed(runs)
    if any(_nothing_left(stretches, each, runs[-1].end) for each in spans):
        yield Reason("steps in the section leave no stretch of it to be rated")
    for stretch in stretches:
        yield Reason(stretch.text, blocking=False)


def _nothing_left(stretches: Sequence[Disturbed], each: RatedSpan, length: float) -> bool:
    start, end = max(each.span.start, 0.0), min(each.span.end, length)
    left = undisturbed_length(stretches, start, end)
    return left < max(LEAST_PART * each.length, LEAST_LENGTH)


def deep_member(
    runs: Sequence[Run], spans: Sequence[RatedSpan], standard: Standard
) -> Iterator[Reason]:
    """Why a beam, with what it is cast with, is too deep for its span; see ``shape_reasons``."""
    depth = max(_greatest_depth(run) for run in runs)
    clear = min(last - first for _, (first, last), _ in spans)
    if clear < standard.least_slenderness * depth:
        yield Reason(
            f"deep member: its clear span of {show(clear, 'length')} is"
            f" {show_ratio(clear / depth)} times its depth, less than"
            f" {standard.least_slenderness:g} (clause {standard.slenderness_clause})"
        )


class Stance(NamedTuple):
    """What is said of how a section stands."""

    reason: str = ""
    """Why a vertical load does not bend it about a level axis; empty where it does"""
    assumption: str = ""
    """What is assumed of a level section that is not symmetric"""


def stances(beams: Sequence[Beam]) -> dict[str, tuple[Stance, ...]]:
    """How the sections of beams stand, by key, where there is something to say of it.

    Each outline is looked at once, however many beams share it.
    """
    known: dict[int, Stance] = {}  # by identity, which the beams keep: hashing each takes long
    found: dict[str, tuple[Stance, ...]] = {}
    for beam in beams:
        for run in beam.runs:
            for outline in (run.outline, run.outline_end):
                if outline is None:
                    continue
                stance = known.get(id(outline))
                if stance is None:
                    stance = known[id(outline)] = _stance(outline)
                if stance is not _LEVEL and stance not in found.get(beam.key, ()):
                    found[beam.key] = (*found.get(beam.key, ()), stance)
    return found


_LEVEL = Stance()


@lru_cache(maxsize=4096)
def _stance(outline: Outline) -> Stance:
    stands = inclination_of(outline.rings)
    if stands.rolled:
        return Stance(
            f"rolled by {_degrees(stands.rolled)} about its axis: it does not bend about a level"
            " axis"
        )
    if not stands.principal:
        return _LEVEL
    inclined = f"principal axes inclined by {_degrees(stands.principal)}"
    if not stands.upright:
        return Stance(
            f"section does not stand level, {inclined}: it does not bend about a level axis"
        )
    return Stance(
        assumption=f"its section is not symmetric ({inclined}): it is assumed to be held from"
        " turning, as by a slab, and to bend about its level axis"
    )


def _degrees(angle: float) -> str:
    return f"{abs(math.degrees(angle)):.2g} degrees"


def _greatest_depth(run: Run) -> float:
    """The depth of a run where it is greatest [mm]."""
    outlines = [run.outline] if run.outline_end is None else [run.outline, run.outline_end]
    return max(map(depth_of, outlines))
