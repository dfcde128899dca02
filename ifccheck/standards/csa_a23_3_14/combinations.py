"""Load combinations of the National Building Code of Canada 2015, Division B, 4.1.3.2.

Table 4.1.3.2.-A holds the cases without crane loads, Table 4.1.3.2.-B those with them. Each
companion alternative is a combination of its own. A load that is not permanent may be absent,
so its favourable factor is 0, which also covers the principal loads acting alone (4.1.3.2.(3)).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from ifccheck.beam import Case, Combination, Nature

ACTIONS = "National Building Code of Canada 2015, Division B, 4.1.3.2"

ORDINARY_CATEGORIES = frozenset(
    {
        "assembly",
        "balcony",
        "classroom",
        "corridor",
        "dining",
        "exit",
        "footbridge",
        "garage",
        "hospital",
        "laboratory",
        "lobby",
        "office",
        "offices",
        "parking",
        "residential",
        "retail",
        "roof",
        "sales",
        "school",
        "stairs",
    }
)
"""Occupancies that are neither storage, equipment area nor service room. Whatever is not named
here, or no category at all, takes the greater companion factor."""

CATEGORIES = (*sorted(ORDINARY_CATEGORIES), "storage", "equipment", "service room")

STORAGE_INCREASE = 0.5
"""Added to the companion factor of L in storage, equipment areas and service rooms,
4.1.3.2.(7). Where a text raises 0.5 to 1.0 only, this is the more onerous reading for 1.0L."""

_SYMBOLS: dict[Nature, str] = {
    "permanent": "D",
    "imposed": "L",
    "crane": "C",
    "snow": "S",
    "wind": "W",
}


@dataclass(frozen=True, slots=True)
class _Row:
    """One alternative of a table: factors by nature in the order in which they are named;
    ``companion`` tells that L acts as a companion."""

    permanent: tuple[float, float]
    variable: tuple[tuple[Nature, float], ...]
    companion: bool = False


_HELPED = (1.25, 0.9)

_ROWS: tuple[_Row, ...] = (
    _Row((1.4, 1.4), ()),
    _Row(_HELPED, ()),
    # Table 4.1.3.2.-A
    _Row(_HELPED, (("imposed", 1.5), ("snow", 1.0))),
    _Row(_HELPED, (("imposed", 1.5), ("wind", 0.4))),
    _Row(_HELPED, (("snow", 1.5), ("imposed", 1.0)), companion=True),
    _Row(_HELPED, (("snow", 1.5), ("wind", 0.4))),
    _Row(_HELPED, (("wind", 1.4), ("imposed", 0.5)), companion=True),
    _Row(_HELPED, (("wind", 1.4), ("snow", 0.5))),
    # Table 4.1.3.2.-B
    _Row(_HELPED, (("crane", 1.5), ("imposed", 1.0), ("snow", 1.0))),
    _Row(_HELPED, (("crane", 1.5), ("imposed", 1.0), ("wind", 0.4))),
    _Row(_HELPED, (("imposed", 1.5), ("crane", 1.0), ("snow", 1.0))),
    _Row(_HELPED, (("imposed", 1.5), ("crane", 1.0), ("wind", 0.4))),
    _Row(_HELPED, (("snow", 1.5), ("crane", 1.0), ("imposed", 1.0)), companion=True),
    _Row(_HELPED, (("wind", 1.4), ("crane", 1.0), ("imposed", 0.5)), companion=True),
)


def combinations(cases: Sequence[Case]) -> tuple[Combination, ...]:
    """Strength combinations, and one for service, for the cases of a run, ``self`` included.

    Every case appears in every combination, with (0, 0) where it takes no part. Combinations
    that come out equal for the natures present, or that another one covers at every case, are
    left out.
    """
    strength = [_combine(row, cases) for row in _ROWS if _applies(row, cases)]
    return (*_not_covered(strength), _service(cases))


def _applies(row: _Row, cases: Sequence[Case]) -> bool:
    """Whether the row says anything for these cases; a single permanent load needs no pair."""
    if row.variable:
        present = {case.nature for case in cases}
        return any(nature in present for nature, _ in row.variable)
    return row.permanent != _HELPED or sum(c.nature == "permanent" for c in cases) > 1


def _combine(row: _Row, cases: Sequence[Case]) -> Combination:
    variable = dict(row.variable)
    factors = {case.name: _factor(row, variable, case) for case in cases}
    terms = _terms(row, cases, factors)
    return Combination(" + ".join(text for _, text in terms), "strength", factors, terms)


def _factor(row: _Row, variable: dict[Nature, float], case: Case) -> tuple[float, float]:
    if case.nature == "permanent":
        return row.permanent
    factor = variable.get(case.nature, 0.0)
    if row.companion and case.nature == "imposed" and _as_storage(case):
        factor += STORAGE_INCREASE
    return factor, 0.0


def _as_storage(case: Case) -> bool:
    """Whether the imposed load takes the companion factor of storage."""
    return (case.category or "").strip().lower() not in ORDINARY_CATEGORIES


def _terms(
    row: _Row, cases: Sequence[Case], factors: dict[str, tuple[float, float]]
) -> tuple[tuple[Nature, str], ...]:
    terms: list[tuple[Nature, str]] = [("permanent", _term(row.permanent[0], "D"))]
    for nature, _ in row.variable:
        present = {factors[case.name][0] for case in cases if case.nature == nature}
        terms += [(nature, _term(factor, _SYMBOLS[nature])) for factor in sorted(present)]
    return tuple(terms)


def _term(factor: float, symbol: str) -> str:
    text = f"{factor:g}"
    return f"{text}{symbol}" if "." in text else f"{text}.0{symbol}"


def _not_covered(found: list[Combination]) -> list[Combination]:
    """The combinations without those that are equal to another one or covered by it."""
    kept: list[Combination] = []
    for index, one in enumerate(found):
        if not any(other.covers(one) for other in (*kept, *found[index + 1 :])):
            kept.append(one)
    return kept


def _service(cases: Sequence[Case]) -> Combination:
    """All loads at their specified values together: never less than with companion factors."""
    factors = {
        case.name: (1.0, 1.0) if case.nature == "permanent" else (1.0, 0.0) for case in cases
    }
    natures: tuple[Nature, ...] = ("permanent", "imposed", "crane", "snow", "wind")
    present = [_SYMBOLS[n] for n in natures if any(case.nature == n for case in cases)]
    name = " + ".join(f"1.0{symbol}" for symbol in present) or "1.0D"
    return Combination(f"service {name}", "service", factors)
