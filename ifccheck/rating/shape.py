"""What the shape of a beam keeps beam theory from saying."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from ifccheck.beam import Reason, Run, Span
from ifccheck.mechanics.inclination import Inclination, inclination_of
from ifccheck.mechanics.outlines import bounds
from ifccheck.rating.disturbed import disturbed, undisturbed_length
from ifccheck.standards import Standard
from ifccheck.units import show, show_ratio

LEAST_PART = 0.05
"""Part of a span that steps must leave, for any section of it to be checked"""
LEAST_LENGTH = 150.0
"""The same as a length, beyond the cover of bars at a free end [mm]"""


def shape_reasons(
    runs: Sequence[Run], span: Span, faces: tuple[float, float], standard: Standard
) -> Iterator[Reason]:
    """Why a beam of such a shape is not rated, or not everywhere.

    Parameters
    ----------
    runs
        Of the beam, at least one.
    span, faces
        Where it spans, and the faces of its supports [mm].
    standard
        Whose beam theory is asked for.
    """
    yield from deep_member(runs, faces, standard)
    stretches = disturbed(runs)
    start, end = max(span.start, 0.0), min(span.end, runs[-1].end)
    left = undisturbed_length(stretches, start, end)
    if left < max(LEAST_PART * (span.end - span.start), LEAST_LENGTH):
        yield Reason("steps in the section leave no stretch of it to be rated")
    for stretch in stretches:
        yield Reason(stretch.text, blocking=False)


def deep_member(
    runs: Sequence[Run], faces: tuple[float, float], standard: Standard
) -> Iterator[Reason]:
    """Why a beam, with what it is cast with, is too deep for its span; see ``shape_reasons``."""
    depth = max(_greatest_depth(run) for run in runs)
    clear = faces[1] - faces[0]
    if clear < standard.least_slenderness * depth:
        yield Reason(
            f"deep member: its clear span of {show(clear, 'length')} is"
            f" {show_ratio(clear / depth)} times its depth, less than"
            f" {standard.least_slenderness:g} (clause {standard.slenderness_clause})"
        )


def rolled_section(runs: Sequence[Run]) -> Iterator[Reason]:
    """Why a beam whose section does not stand level is not rated.

    A vertical load bends such a section about an axis that is inclined.
    """
    for each in _inclinations(runs):
        if each.rolled:
            yield Reason(
                f"rolled by {_degrees(each.rolled)} about its axis: it does not bend about a level"
                " axis"
            )
            return
        if each.principal and not each.upright:
            yield Reason(
                f"the principal axes of its section are inclined by {_degrees(each.principal)}:"
                " it does not bend about a level axis"
            )
            return


def held_from_turning(runs: Sequence[Run]) -> str:
    """Return what is assumed of a level section that is not symmetric; empty where it is."""
    one_sided = [each for each in _inclinations(runs) if each.principal and each.upright]
    if not one_sided:
        return ""
    angle = max(abs(each.principal) for each in one_sided)
    return (
        f"its section is not symmetric (principal axes inclined by {_degrees(angle)}): it is"
        " assumed to be held from turning, by the slab, and to bend about its level axis"
    )


def _inclinations(runs: Sequence[Run]) -> list[Inclination]:
    outlines = [outline for run in runs for outline in (run.outline, run.outline_end) if outline]
    return [inclination_of(outline.rings) for outline in outlines]


def _degrees(angle: float) -> str:
    return f"{abs(math.degrees(angle)):.2g} degrees"


def _greatest_depth(run: Run) -> float:
    """The depth of a run where it is greatest [mm]."""
    outlines = [run.outline] if run.outline_end is None else [run.outline, run.outline_end]
    depths = [high - low for _, _, low, high in (bounds(each.rings) for each in outlines)]
    return max(depths)
