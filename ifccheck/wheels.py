"""Trains of wheels that move along a beam. Named tuples only; read as part of ``beam``."""

from __future__ import annotations

from typing import NamedTuple


class Wheels(NamedTuple):
    """A train: wheels one behind the other at fixed distances."""

    places: tuple[float, ...]
    """Of the wheels, from the first [mm]"""
    forces: tuple[float, ...]
    """Downward [N]"""

    @property
    def length(self) -> float:
        """From the first wheel to the last [mm]."""
        return self.places[-1]


class Travel(NamedTuple):
    """How one train, or two that cannot pass each other, move."""

    trains: tuple[Wheels, ...]
    dynamic: float
    """Factor on all forces"""
    turned: bool
    """They may stand turned round, too"""
    stops: bool
    """Stops keep all wheels within the way; else wheels run on past its ends"""
    whole: bool
    """Their way is the whole beam, or the whole line that it is in"""
    approach: float = 0.0
    """Least distance between the last wheel of the first and the first of the second [mm]"""
