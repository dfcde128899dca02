"""The check that what is put on the beams comes out at the ground, in rows and words."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from ifccheck.framed import NOTHING, Balance, Framed, Total, balances, totals
from ifccheck.units import show

MOST_NAMED = 12
"""Marks named before the rest are only counted."""


@dataclass(frozen=True, slots=True)
class EquilibriumRow:
    """One case on the beams of one storey, or of all; forces [kN]."""

    storey: str
    case: str
    own: str
    received: str
    passed_on: str
    ground: str
    difference: str
    balances: bool
    total: bool = False


def equilibrium_rows(framed: Framed) -> list[EquilibriumRow]:
    """Return a row for each storey and case in which anything acts, then one for all storeys."""
    rows = [_row(row.storey or "no storey", row) for row in framed.balance if _acts(row)]
    return rows + [_row("all storeys", row) for row in totals(framed.balance) if _acts(row)]


def _acts(row: Balance | Total) -> bool:
    return max(map(abs, row.figures)) > NOTHING or not balances(row)


def _row(storey: str, row: Balance | Total) -> EquilibriumRow:
    return EquilibriumRow(
        storey=storey,
        case=row.case,
        own=_kn(row.applied),
        received=_kn(row.received),
        passed_on=_kn(row.passed_on),
        ground=_kn(row.ground),
        difference="0" if balances(row) else _kn(row.difference),
        balances=balances(row),
        total=isinstance(row, Total),
    )


def _kn(force: float) -> str:
    """With one decimal for all, so that a row can be added up by hand."""
    if math.isnan(force):
        return "not known"
    return "0" if abs(force) <= NOTHING else f"{force / 1000.0:.1f}"


def equilibrium_words(framed: Framed) -> str:
    """Return in one line whether loads and reactions balance, and where they do not."""
    moving = f"; {', '.join(framed.moving)}, which moves, is not in it" if framed.moving else ""
    return _balance_words(framed) + moving


def _balance_words(framed: Framed) -> str:
    if wrong := list(_wrong(framed.balance)):
        return f"loads and reactions do not balance: {'; '.join(wrong)}"
    carried = [row for row in totals(framed.balance) if _acts(row)]
    if not carried:
        return "no beam stands: there are no reactions to hold against the loads"
    told = ", ".join(f"{row.case} {show(row.ground, 'force')}" for row in carried)
    return f"loads and reactions balance in every case: {told} to the ground"


def _wrong(balance: tuple[Balance, ...]) -> Iterator[str]:
    """What does not balance; what is passed on and received nowhere shows in the sum alone."""
    rows: list[Balance | Total] = [*balance, *totals(balance)]
    for row in rows:
        if not balances(row):
            where = f"on {row.storey or 'no storey'}" if isinstance(row, Balance) else "in all"
            yield f"{row.case} {where} by {show(row.difference, 'force')}"


def left_out_words(marks: Sequence[str]) -> str:
    """Return which beams the check leaves out, by their marks; empty where it leaves out none.

    >>> left_out_words(["B-1"])
    'what acts on beams of which nothing tells how they stand is not in it: B-1'
    """
    if not marks:
        return ""
    more = f" and {len(marks) - MOST_NAMED} more" if len(marks) > MOST_NAMED else ""
    named = ", ".join(marks[:MOST_NAMED])
    return f"what acts on beams of which nothing tells how they stand is not in it: {named}{more}"
