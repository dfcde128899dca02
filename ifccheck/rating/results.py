"""What a rating says, for people, viewers and tables.

Its parts are named tuples, as there are tens of thousands of them, made and looked up by all
that they hold.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

from ifccheck.beam import Reason, Remark, Verdict


class LimitStateRating(NamedTuple):
    """The greatest utilisation of one limit state on one beam and where it stands."""

    name: str
    title: str
    covers: str
    utilisation: float
    """inf where something is demanded of nothing; nan where it cannot be said"""
    position: float
    """x from the beam's start [mm]; nan where nothing is demanded"""
    combination: str
    demand: float
    resistance: float
    demand_unit: str
    clause: str
    counted: bool
    why_not: str = ""
    """Where utilisation is nan: "outside 10.5.2: ..." or the missing input"""


class SafeLoad(NamedTuple):
    """What a rated case may grow to on one beam."""

    case: str
    factor: float
    """Rating factor; inf where the case never governs, nan where it cannot be said"""
    assigned: str
    """The case's loads on this beam, for people: "60 kN at 2.1 m" """
    single_value: float
    """factor x assigned [N or N/mm] where the case is one load on this beam, else nan"""
    single_kind: str
    """ "point", "line" or "" """
    text: str
    """Largest safe load, unfactored, for people: "84.2 kN at 2.1 m"; "not limited" """
    governing: str
    """Title of the limit state that limits it; "" where none does"""
    position: float
    combination: str


class BasisItem(NamedTuple):
    """One thing that a rating rests on, with its source."""

    name: str
    """As a property name: "ConcreteStrength", "EffectiveDepthSagging" ..."""
    label: str
    """For people: "concrete strength f'c" """
    value: float | str
    measure: str
    """A ``beam.Measure``"""
    source: str
    assumed: bool = False


@dataclass(frozen=True, slots=True)
class Rating:
    """The answer for one beam."""

    beam: str
    verdict: Verdict
    utilisation: float
    """Greatest of the counted limit states; nan where none could be evaluated"""
    governing: LimitStateRating | None
    limit_states: tuple[LimitStateRating, ...]
    safe_loads: tuple[SafeLoad, ...]
    reasons: tuple[Reason, ...]
    """Why the beam is not rated; empty otherwise"""
    remarks: tuple[Remark, ...]
    basis: tuple[BasisItem, ...]
    checked: tuple[str, ...]
    """What was checked: "flexure", "shear", ... """
    not_checked: tuple[str, ...]
    """What no one checked: "torsion", "deflection", ... """
