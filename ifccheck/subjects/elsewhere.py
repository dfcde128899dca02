"""What sources of reinforcement state that are not taken: no default is better than that."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import Literal

from ifccheck.beam import Bars, Beam, Given, Reinforcement, Stirrups
from ifccheck.units import show

Stated = Literal["bar_yield", "stirrup_yield", "cover"]
SAME = 1e-3
"""Relative difference within which two sources state the same."""


def stated_elsewhere(beam: Beam, taken: Reinforcement, what: Stated) -> list[Given]:
    """Return what the sources that are not taken state of the steel, or of its cover."""
    return [
        Given(each.value, f"{other.source}, {each.source}", assumed=True)
        for other in beam.reinforcement
        if other is not taken
        for each in stated_by(other, what)
    ]


def stated_by(source: Reinforcement, what: Stated) -> Iterator[Given]:
    """Yield what one source states."""
    placed: Sequence[Bars | Stirrups] = ()
    if what != "cover":
        placed = source.bars if what == "bar_yield" else source.stirrups
    yield from (each.yield_strength for each in placed if each.yield_strength is not None)
    for zone in source.zones:
        value = getattr(zone, what)
        if value is not None:
            yield Given(value, zone.origin)
        if what == "bar_yield":
            yield from (Given(r.bar_yield, r.origin) for r in zone.rows if r.bar_yield is not None)


def least_yield(default: Given | None, elsewhere: Sequence[Given]) -> Given | None:
    """Return the yield strength of steel of which the source that is taken gives none.

    The model is not silent where another source states one: the least counts, and one that cannot
    be read (nan) before all.
    """
    known = [*([] if default is None else [default]), *elsewhere]
    unread = [given for given in known if math.isnan(given.value)]
    return min(unread or known, key=lambda given: given.value, default=None)


def greatest_cover(default: Given | None, elsewhere: Sequence[Given]) -> Given | None:
    """Return the cover where the source that is taken gives none: the greatest that is stated."""
    known = [*([] if default is None else [default]), *elsewhere]
    return max(known, key=lambda given: given.value, default=None)


def differing_yields(beam: Beam, taken: Reinforcement, what: Stated) -> Iterator[str]:
    """Yield what is to be told of sources that state another yield strength than the one taken."""
    used = _known(taken, what)
    if not used:
        return
    for other in beam.reinforcement:
        values = [] if other is taken else _known(other, what)
        if values and abs(min(values) - min(used)) > SAME * min(used):
            name = what.removesuffix("_yield")
            yield (
                f"{taken.source} used; {other.source} differs: yield strength of the {name}s"
                f" {show(min(values), 'stress')} against {show(min(used), 'stress')}"
            )


def _known(source: Reinforcement, what: Stated) -> list[float]:
    return [given.value for given in stated_by(source, what) if not math.isnan(given.value)]
