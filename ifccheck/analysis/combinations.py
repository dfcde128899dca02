"""Combinations of load cases: which cases act together, and with which factors."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ifccheck.beam import Case, Combination
from ifccheck.errors import BriefError
from ifccheck.mechanics.arrays import Floats

MOST_COMBINATIONS = 1000
"""More than this come from exclusions that no one can have meant."""


def expand_exclusions(
    combinations: Sequence[Combination], cases: Sequence[Case]
) -> tuple[Combination, ...]:
    """Combinations in which no two cases that exclude each other act together.

    Each combination becomes one per greatest set of its cases that may act together, named
    after the cases that stay away. Of combinations of one kind with the same factors on the
    cases in use the first stays.

    Parameters
    ----------
    combinations
        Combinations that give factors for every case.
    cases
        Cases in use; an exclusion holds both ways, whichever case states it.

    Raises
    ------
    BriefError
        Where a combination says nothing of a case, or the exclusions make too many.
    """
    excluded = _exclusions(cases)
    expanded: dict[tuple[object, ...], Combination] = {}
    for combination in combinations:
        factors = {case.name: case_factors(combination, case) for case in cases}
        acting = [case.name for case in cases if max(factors[case.name]) != 0.0]
        for together in _greatest_sets(acting, excluded):
            kept = _with_only(combination, factors, acting, together)
            expanded.setdefault((kept.kind, *kept.factors.values()), kept)
            if len(expanded) > MOST_COMBINATIONS:
                raise BriefError(
                    f"combination {combination.name!r}: the cases exclude each other in more than "
                    f"{MOST_COMBINATIONS} ways; let fewer cases exclude each other"
                )
    return tuple(expanded.values())


def not_covered(
    wanted: Sequence[Combination], given: Sequence[Combination]
) -> tuple[Combination, ...]:
    """The combinations of which no given one is at least as onerous at every case."""
    return tuple(one for one in wanted if not any(other.covers(one) for other in given))


def case_factors(combination: Combination, case: Case) -> tuple[float, float]:
    """Unfavourable and favourable factor of a case in a combination.

    A case that is not permanent, or may be removed, counts nothing where it relieves.

    Raises
    ------
    BriefError
        Where the combination says nothing of the case.
    """
    if case.name not in combination.factors:
        raise BriefError(
            f"combination {combination.name!r} has no factor for case {case.name!r}: add one, "
            "zero included"
        )
    unfavourable, favourable = combination.factors[case.name]
    if case.nature != "permanent" or case.removable:
        favourable = 0.0
    return unfavourable, favourable


def factor_array(combinations: Sequence[Combination], cases: Sequence[Case]) -> Floats:
    """Unfavourable and favourable factor of every case in every combination (C, K, 2)."""
    factors = [[case_factors(combination, case) for case in cases] for combination in combinations]
    return np.array(factors, np.float64).reshape(len(combinations), len(cases), 2)


def _exclusions(cases: Sequence[Case]) -> dict[str, set[str]]:
    """The cases that may not act with each case, both ways."""
    excluded: dict[str, set[str]] = {case.name: set() for case in cases}
    for case in cases:
        for other in case.excludes:
            if other in excluded and other != case.name:
                excluded[case.name].add(other)
                excluded[other].add(case.name)
    return excluded


def _greatest_sets(acting: Sequence[str], excluded: dict[str, set[str]]) -> list[frozenset[str]]:
    """The sets of acting cases that may act together and to which none can be added."""
    sets = [frozenset[str]()]
    for name in acting:
        grown = [chosen - excluded[name] | {name} for chosen in sets]
        candidates = dict.fromkeys([*grown, *(s for s in sets if s & excluded[name])])
        sets = [s for s in candidates if not any(s < other for other in candidates)]
        if len(sets) > MOST_COMBINATIONS:
            break
    return sets


def _with_only(
    combination: Combination,
    factors: dict[str, tuple[float, float]],
    acting: Sequence[str],
    together: frozenset[str],
) -> Combination:
    """The combination with the acting cases outside the set left out, and named so."""
    away = [name for name in acting if name not in together]
    kept = {name: (0.0, 0.0) if name in away else pair for name, pair in factors.items()}
    name = f"{combination.name}, without {', '.join(away)}" if away else combination.name
    return replace(combination, name=name, factors=kept)
