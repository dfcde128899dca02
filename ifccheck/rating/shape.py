"""What the shape of a beam keeps beam theory from saying."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from ifccheck.beam import Reason, Run, Span
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


def _greatest_depth(run: Run) -> float:
    """The depth of a run where it is greatest [mm]."""
    outlines = [run.outline] if run.outline_end is None else [run.outline, run.outline_end]
    depths = [high - low for _, _, low, high in (bounds(each.rings) for each in outlines)]
    return max(depths)
