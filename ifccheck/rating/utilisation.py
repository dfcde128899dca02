"""The greatest utilisation of each beam, and where it stands, from a check at every element."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.elements import first_greatest


@dataclass(frozen=True, slots=True)
class Worst:
    """One row per beam (B): the greatest utilisation of a limit state.

    A nan is never dropped: ``incomplete`` tells that some station has none, and
    ``incomplete_element`` which one. Elements index the flattened (arrangements, stations).
    """

    utilisation: Floats
    """Greatest of the utilisations that could be worked out (B)"""
    element: Ints
    """Where it stands (B)"""
    incomplete: Bools
    incomplete_element: Ints
    """(B); meaningful where incomplete"""

    @property
    def shown(self) -> Ints:
        """The element that a rating tells of (B): one without a utilisation, unless another
        exceeds 1."""
        incomplete = self.incomplete & (self.utilisation <= 1.0)
        return np.where(incomplete, self.incomplete_element, self.element)


def worst_of(utilisation: Floats, element: Ints, first: Ints) -> Worst:
    """Find the greatest utilisation of every beam.

    Parameters
    ----------
    utilisation
        Utilisation of a limit state at every element, beam after beam (E).
    element
        What each stands for (E).
    first
        Row of the first element of each beam, ascending (B).
    """
    missing = np.isnan(utilisation)
    if not missing.any():
        greatest, row = first_greatest(utilisation, first)
        complete = np.zeros(first.size, dtype=np.bool_)
        return Worst(np.maximum(greatest, 0.0), element[row], complete, element[row])
    greatest, row = first_greatest(np.where(missing, -np.inf, utilisation), first)
    lacks, lacking = first_greatest(missing.astype(np.float64), first)
    return Worst(np.maximum(greatest, 0.0), element[row], lacks > 0.0, element[lacking])
