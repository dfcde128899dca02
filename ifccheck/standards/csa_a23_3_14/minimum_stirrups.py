"""Clause 11.2.8.1: where minimum stirrups are required whatever the shear."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.contract import (
    CalculationLine,
    Check,
    LimitState,
    Note,
    Quick,
)
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_lines import given
from ifccheck.standards.csa_a23_3_14.stirrups import GREATEST_SPACING, minimum_stirrup_area

DEEP = 750.0
"""Thickness beyond which a beam needs minimum stirrups [mm] (11.2.8.1)"""


@dataclass(frozen=True, slots=True)
class MinimumStirrupDetails:
    """Stirrup area for each mm of beam, asked for and provided; arrays of one shape."""

    depth: Floats
    web_width: Floats
    concrete_strength: Floats
    stirrup_area: Floats
    stirrup_spacing: Floats
    stirrup_yield: Floats
    required: Floats
    """[mm2/mm]"""
    provided: Floats
    """[mm2/mm]"""
    needed: Bools
    """The beam is deep"""
    has_stirrups: Bools


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check that a deep beam has minimum stirrups at every station.

    Where the shear alone asks for minimum stirrups (Vf > Vc), the shear check does: without
    them its resistance is Vc. Does not depend on the loads.
    """
    details = _details(prepared)
    utilisation = _utilisation(details, prepared.inside)
    shape = demand.moment.shape
    return Check(
        demand=np.broadcast_to(np.where(details.needed, details.required, 0.0), shape),
        resistance=np.broadcast_to(details.provided, shape),
        utilisation=np.broadcast_to(utilisation, shape),
        outside=(),
        details=_broadcast(details, shape),
    )


def _broadcast(details: MinimumStirrupDetails, shape: tuple[int, ...]) -> MinimumStirrupDetails:
    return replace(
        details,
        **{f.name: np.broadcast_to(getattr(details, f.name), shape) for f in fields(details)},
    )


def _utilisation(details: MinimumStirrupDetails, inside: Bools) -> Floats:
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(details.provided == 0.0, np.inf, details.required / details.provided)
    return np.where(details.needed & inside, ratio, 0.0)


@dataclass(frozen=True, slots=True)
class _Stations:
    """Utilisation and resistance of each station (N)."""

    utilisation: Floats
    provided: Floats

    def take(self, rows: Ints | slice) -> _Stations:
        """The same at the given stations; rows may repeat."""
        return _Stations(self.utilisation[rows], self.provided[rows])


def _stations(prepared: Prepared) -> _Stations:
    details = _details(prepared)
    return _Stations(_utilisation(details, prepared.inside), details.provided)


def _quick(stations: _Stations, demand: Demand) -> tuple[tuple[Floats, Floats], ...]:
    """Utilisation and resistance alone: the same whatever the loads."""
    return ((stations.utilisation, stations.provided),)


def _details(prepared: Prepared) -> MinimumStirrupDetails:
    none = prepared.stirrup_area == 0.0
    steel_yield = np.where(none, GREATEST_YIELD, prepared.stirrup_yield)
    width = np.fmax(prepared.sagging.web_width, prepared.hogging.web_width)
    required = minimum_stirrup_area(
        concrete_strength=prepared.concrete_strength,
        web_width=width,
        spacing=np.ones_like(width),
        stirrup_yield=steel_yield,
    )
    provided = np.where(none, 0.0, prepared.stirrup_area / prepared.stirrup_spacing)
    return MinimumStirrupDetails(
        depth=prepared.depth,
        web_width=width,
        concrete_strength=prepared.concrete_strength,
        stirrup_area=prepared.stirrup_area,
        stirrup_spacing=prepared.stirrup_spacing,
        stirrup_yield=steel_yield,
        required=required,
        provided=provided,
        needed=prepared.depth > DEEP,
        has_stirrups=~none,
    )


def idle_stirrups(prepared: Prepared) -> tuple[Note, ...]:
    """Where there are stirrups that add nothing to the shear resistance, whatever the shear.

    References
    ----------
    CSA A23.3-14, 11.2.8.2 and 11.3.8.1
    """
    least_depth = np.minimum(prepared.sagging.shear_depth, prepared.hogging.shear_depth)
    present = (prepared.stirrup_area > 0.0) & prepared.inside
    details = _details(prepared)
    wide = prepared.stirrup_spacing > np.minimum(0.7 * least_depth, GREATEST_SPACING)
    return (
        Note(
            "11.2.8.2",
            "stirrups below the minimum area add nothing to the shear resistance",
            present & (details.provided < details.required),
        ),
        Note(
            "11.3.8.1",
            "stirrups wider apart than the limit add nothing to the shear resistance",
            present & wide,
        ),
    )


LINES = (
    given("h", "thickness; beyond 750 mm minimum stirrups are required", "depth", "mm", "11.2.8.1"),
    given("bw", "web width", "web_width", "mm"),
    given("fc", "concrete strength", "concrete_strength", "MPa"),
    CalculationLine("Av", "stirrup legs", "", "stirrup_area", "mm2", "", "has_stirrups"),
    CalculationLine("s", "stirrup spacing", "", "stirrup_spacing", "mm", "", "has_stirrups"),
    given("fyv", "stirrup yield strength, 500 where there are none", "stirrup_yield", "MPa"),
    CalculationLine(
        "r",
        "least stirrup area for each mm of beam",
        "0.06 * sqrt(fc) * bw / fyv",
        "required",
        "mm2/mm",
        "11.2.8.2",
    ),
    CalculationLine(
        "p", "stirrup area for each mm of beam", "Av / s", "provided", "mm2/mm", "", "has_stirrups"
    ),
)

MINIMUM_STIRRUPS = LimitState(
    name="MinimumStirrups",
    title="minimum stirrups",
    clause="11.2.8.1",
    covers="minimum stirrups",
    demand_unit="mm2/mm",
    check=check,
    lines=LINES,
)

QUICK_MINIMUM_STIRRUPS = Quick((MINIMUM_STIRRUPS,), _stations, _quick, loaded=False)
