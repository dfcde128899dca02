"""Cases of a run, and the brief's own combinations with a factor for each."""

from __future__ import annotations

from ifccheck.beam import SELF, Case, Combination, Remark
from ifccheck.brief.model import Brief, CombinationEntry

SELF_WEIGHT = Case(SELF, "permanent")


def cases_of(brief: Brief) -> tuple[Case, ...]:
    """Every case of a run: self weight, then those that the brief declares."""
    return (SELF_WEIGHT, *brief.cases)


def factors_of(entry: CombinationEntry, case: Case) -> tuple[float, float]:
    """Unfavourable and favourable factor of a case: by its name, else by its nature."""
    given = entry.factors.get(case.name) or entry.factors[case.nature]
    unfavourable, favourable = given
    if case.nature != "permanent" or case.removable:
        return unfavourable, 0.0
    return unfavourable, unfavourable if favourable is None else favourable


def combinations_of(brief: Brief) -> tuple[Combination, ...]:
    """Return the brief's own combinations, factors by case name; empty where it gives none.

    A case that is not permanent never relieves: its favourable factor is 0. So is that of a
    permanent case which may be removed.
    """
    return tuple(
        Combination(
            entry.name,
            entry.kind,
            {case.name: factors_of(entry, case) for case in cases_of(brief)},
        )
        for entry in brief.combinations
    )


def combination_remarks(brief: Brief) -> tuple[Remark, ...]:
    """Say where a permanent case has one factor only, which then also counts where it helps."""
    return tuple(
        Remark(
            None,
            "brief",
            f"combination {entry.name}: {case.name} has one factor, {factor:g}, which also counts"
            " where it relieves",
            "note",
        )
        for entry in brief.combinations
        for case in cases_of(brief)
        if case.nature == "permanent" and not case.removable
        for factor, favourable in [entry.factors.get(case.name) or entry.factors[case.nature]]
        if favourable is None and factor > 1.0
    )
