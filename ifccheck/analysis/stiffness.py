"""Spans whose stiffness varies along them: what that does to the moments of their fixed ends."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.spans import FIXED, SpanTable, between_supports, in_line
from ifccheck.analysis.statics import Solved, moments_at, with_end_moments
from ifccheck.analysis.stations import SAME_PLACE, StationTable
from ifccheck.mechanics.arrays import Bools, Floats, Ints

POINTS = 5
"""Places in each stretch between two stations at which curvature is summed"""


@dataclass(frozen=True, slots=True)
class Curvature:
    """Places of spans whose stiffness varies, sorted by beam and x (Q)."""

    beam: Ints
    x: Floats
    """[mm] from the beam's start (Q)"""
    flexibility: Floats
    """Length that the place stands for over the second moment of area there [mm/mm4] (Q)"""


def indeterminate(spans: SpanTable) -> Bools:
    """Whether moments of a span depend on how its stiffness varies (B)."""
    fixed: Bools = (spans.start_kind == FIXED) | (spans.end_kind == FIXED)
    return np.asarray((fixed | in_line(spans)) & between_supports(spans))


def places_between(stations: StationTable) -> tuple[Ints, Floats, Floats]:
    """Places by Gauss between neighbouring stations of a beam, and the length of each.

    Parameters
    ----------
    stations
        Wherever loads or sections change, sorted by beam and x (N).

    Returns
    -------
    tuple
        Beam, x [mm] and length [mm] of each place (Q).
    """
    beam, x = stations.beam, stations.x
    first = np.flatnonzero((beam[1:] == beam[:-1]) & (np.diff(x) > SAME_PLACE))
    nodes, weights = np.polynomial.legendre.leggauss(POINTS)
    middle, half = (x[first + 1] + x[first]) / 2.0, (x[first + 1] - x[first]) / 2.0
    at = middle[:, None] + half[:, None] * nodes
    return np.repeat(beam[first], POINTS), at.ravel(), (half[:, None] * weights).ravel()


def with_varying_stiffness(solved: Solved, curvature: Curvature) -> Solved:
    """Solve for the moments of fixed ends where stiffness varies.

    The end of a span that is fixed does not turn: with s from its start,

        int M (1 - s/L) / EI ds = 0 at the start, int M (s/L) / EI ds = 0 at the end.

    The moments M of one stiffness and straight lines from the two ends keep equilibrium; the
    conditions give the latter.

    Parameters
    ----------
    solved
        Spans (B) solved for one stiffness along each.
    curvature
        Of the spans whose stiffness varies, statically indeterminate ones; those of lines are
        left to ``lines.continuous``.

    References
    ----------
    First principles: the unit load theorem.
    """
    turns = end_turns(solved, curvature)
    varying = turns.near > 0.0
    return with_end_moments(solved, *_end_moments(solved.spans, turns), varying)


@dataclass(frozen=True, slots=True)
class EndTurns:
    """How the two ends of spans turn where stiffness varies; 0 for all other spans."""

    near: Floats
    """int (1 - s/L)^2 / EI ds: what a unit moment at the start turns the start (B)"""
    across: Floats
    """int (1 - s/L) (s/L) / EI ds (B)"""
    far: Floats
    """int (s/L)^2 / EI ds (B)"""
    start: Floats
    """int M (1 - s/L) / EI ds (K, B)"""
    end: Floats
    """int M (s/L) / EI ds (K, B)"""


def end_turns(solved: Solved, curvature: Curvature) -> EndTurns:
    """Sum curvature along spans (B) whose stiffness varies, for every case (K)."""
    spans, beams = solved.spans, len(solved.spans.start)
    moment = moments_at(
        solved, StationTable(curvature.beam, curvature.x, np.zeros_like(curvature.beam))
    )
    far = (curvature.x - spans.start[curvature.beam]) / spans.length[curvature.beam]
    near, flexible = 1.0 - far, curvature.flexibility

    def summed(each: Floats) -> Floats:
        sums = np.bincount(curvature.beam, weights=each, minlength=beams)
        return sums.astype(np.float64, copy=False)

    start, end = (np.array([summed(one * flexible * m) for m in moment]) for one in (near, far))
    across = summed(near * far * flexible)
    return EndTurns(summed(near**2 * flexible), across, summed(far**2 * flexible), start, end)


def _end_moments(spans: SpanTable, turns: EndTurns) -> tuple[Floats, Floats]:
    """What must be added at the two ends so that those which are fixed do not turn (K, B)."""
    near, across, far, start, end = turns.near, turns.across, turns.far, turns.start, turns.end
    known = (near > 0.0) & ~in_line(spans)
    at_start, at_end = known & (spans.start_kind == FIXED), known & (spans.end_kind == FIXED)
    both = at_start & at_end
    determinant = np.where(known, near * far - across**2, 1.0)
    near, far = np.where(known, near, 1.0), np.where(known, far, 1.0)
    first = np.where(both, (across * end - far * start) / determinant, -start / near)
    last = np.where(both, (across * start - near * end) / determinant, -end / far)
    return np.where(at_start, first, 0.0), np.where(at_end, last, 0.0)
