"""Imposed loads that act on some spans of a line and not on others.

A case that is patterned is split into parts, one for the loads of each span of a line. Every part
is solved as a case, so that each takes its unfavourable factor or none by its own effect: no
pattern need be tried.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.arrangements import ARRANGEMENTS, GREATEST_SHEAR
from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.loads import LoadTable
from ifccheck.analysis.statics import CaseEffects
from ifccheck.mechanics.arrays import Bools, Floats, Ints

ANYWHERE = -1


@dataclass(frozen=True, slots=True)
class Parts:
    """Parts of the cases, in the order of the cases (K')."""

    case: Ints
    """Case that each belongs to (K')"""
    place: Ints
    """Number of the span along its line, from 0, whose loads the part holds; ANYWHERE for a case
    that is not patterned (K')"""

    def factors(self, factors: Floats) -> Floats:
        """Factors of the cases (C, K, 2) for their parts (C, K', 2)."""
        return factors[:, self.case]

    def once(self, values: Floats) -> Floats:
        """Values of the cases (K, ...) at the first part of each, 0 at the others (K', ...)."""
        first = np.diff(self.case, prepend=-1) > 0
        return values[self.case] * first.reshape(-1, *[1] * (values.ndim - 1))


def span_places(lines: LineTable, spans: int) -> Ints:
    """Number of each span along its line, from 0; 0 for a span of no line (B)."""
    found = np.zeros(spans, np.intp)
    first = np.searchsorted(lines.line, lines.line)
    found[lines.span] = np.arange(len(lines.line)) - first
    return found


def split_cases(loads: LoadTable, patterned: Bools, place: Ints) -> tuple[LoadTable, Parts]:
    """Loads with the parts of the cases in place of the cases.

    Parameters
    ----------
    loads
        Loads by case, sorted by span (P).
    patterned
        Whether the loads of a case act on each span by themselves (K).
    place
        Number of each span along its line, see ``span_places`` (B).

    Returns
    -------
    tuple
        The loads by part (as they were, where no case has loads on two spans of a line), and the
        parts (K').
    """
    cases, reach = len(patterned), int(place.max(initial=0)) + 1
    whole = Parts(np.arange(cases), np.full(cases, ANYWHERE, np.intp))
    if reach == 1 or not patterned.any():
        return loads, whole
    of_place = np.where(patterned[loads.case], place[loads.beam], 0)
    cell = loads.case * reach + of_place
    present = np.zeros((cases, reach), np.bool_)
    present.ravel()[cell] = True
    present[~present.any(axis=1), 0] = True
    case, at = np.nonzero(present)
    part = np.cumsum(present.ravel()) - 1
    split = replace(loads, case=part[cell].astype(np.intp, copy=False))
    return split, Parts(case, np.where(patterned[case], at, ANYWHERE))


def prescribed(spans: int) -> tuple[tuple[str, ...], Floats]:
    """The loadings of a line that standards prescribe, as names and as 0 or 1 for each span.

    All spans, alternate spans, two adjacent spans; each once.

    Returns
    -------
    tuple
        Names (T) and which spans are loaded (T, spans).

    References
    ----------
    CSA A23.3-14, 9.2.3 (from memory).
    """
    number = np.arange(spans)
    found = {"all spans": np.ones(spans)}
    if spans > 1:
        found["spans 1, 3, 5 ..."] = (number % 2 == 0).astype(np.float64)
        found["spans 2, 4, 6 ..."] = (number % 2 == 1).astype(np.float64)
    if spans > 2:
        for first in range(spans - 1):
            pair = (number == first) | (number == first + 1)
            found[f"spans {first + 1} and {first + 2}"] = pair.astype(np.float64)
    return tuple(found), np.stack(list(found.values()))


def prescribed_effects(
    cases: CaseEffects, parts: Parts, case: int, loaded: Floats
) -> tuple[Floats, Floats]:
    """Moment and shear of a patterned case under each of several loadings.

    Parameters
    ----------
    cases
        Effects of the parts (K', N).
    parts
        The parts.
    case
        The patterned case.
    loaded
        Which spans of a line are loaded (T, spans).

    Returns
    -------
    tuple
        Moment [N*mm] and shear [N] (T, N).
    """
    rows = np.flatnonzero(parts.case == case)
    chosen = loaded[:, parts.place[rows]]
    moment, shear = (
        np.einsum("tp,pn->tn", chosen, effect[rows]) for effect in (cases.moment, cases.shear)
    )
    return moment, shear


def governing_loading(cases: CaseEffects, parts: Parts, case: int, loaded: Floats) -> Ints:
    """Which of several loadings of a patterned case governs each arrangement at each station
    (4, N); parameters as for ``prescribed_effects``."""
    moment, shear = prescribed_effects(cases, parts, case, loaded)
    found = np.zeros((ARRANGEMENTS, cases.x.size), np.intp)
    for arrangement in range(ARRANGEMENTS):
        effect = shear if arrangement >= GREATEST_SHEAR else moment
        found[arrangement] = (-effect if arrangement % 2 else effect).argmax(axis=0)
    return found
