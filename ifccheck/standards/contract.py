"""What a standard must give. A standard is data plus pure functions; there is no base class."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from ifccheck.beam import Case, Combination, Face
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints, Members, Stations


@dataclass(frozen=True, slots=True)
class Options:
    """Choices that the brief makes within a standard."""

    shear_method: str


class Prepared(Protocol):
    """All that a standard needs of each station before demand is known.

    A frozen dataclass whose array fields all have the stations as their first axis.
    """

    def take(self, rows: Ints | slice) -> Prepared:
        """The same at the given stations; rows may repeat."""
        ...


@dataclass(frozen=True, slots=True)
class Outside:
    """Where a check lies outside the validity of a clause; ``mask`` has the check's shape."""

    clause: str
    text: str
    mask: Bools


@dataclass(frozen=True, slots=True)
class Check:
    """A limit state evaluated at every station and arrangement; arrays of shape (..., N).

    ``utilisation`` is 0 where nothing is demanded, inf where something is demanded of nothing,
    nan outside validity or where an input is missing. ``details`` is a frozen dataclass of
    named arrays of the same shape: what the calculation lines print.
    """

    demand: Floats
    resistance: Floats
    utilisation: Floats
    outside: tuple[Outside, ...]
    details: Any


@dataclass(frozen=True, slots=True)
class CalculationLine:
    """One line of a calculation: ``symbol = formula`` gives the field of Check.details.

    ``formula`` is Python arithmetic on the symbols of earlier lines (with sqrt, min, max, tan,
    radians, where); "" for a given quantity. Values are in N, mm, MPa, rad unless ``unit`` is
    "deg". ``when`` names a boolean field of details: the line is shown only where it is true.
    """

    symbol: str
    text: str
    """What it is, in words."""
    formula: str
    field: str
    unit: str
    """"N", "N*mm", "mm", "mm2", "MPa", "deg", "" ..."""
    clause: str
    when: str = ""


@dataclass(frozen=True, slots=True)
class LimitState:
    """A way in which a beam can fall short."""

    name: str
    """As written to property sets: "FlexureSagging"."""
    title: str
    """For people: "flexure, sagging"."""
    clause: str
    covers: str
    """The word used in "adequate in flexure and shear"."""
    demand_unit: str
    """"N*mm", "N" ..."""
    check: Callable[[Any, Demand], Check]
    lines: tuple[CalculationLine, ...]


@dataclass(frozen=True, slots=True)
class Quick:
    """Limit states that have much in common, without what their calculations print: for the many
    places where nothing is printed."""

    states: tuple[LimitState, ...]
    basis: Callable[[Any], Any]
    """What ``evaluate`` needs of a Prepared; has ``take`` like one"""
    evaluate: Callable[[Any, Demand], Sequence[tuple[Floats, Floats]]]
    """Utilisation and resistance of each of them as Check has them, given that basis; demand
    and basis may hold any stations in any order, so that arrays are (N)"""
    loaded: bool = True
    """False where the loads change nothing"""
    demanded: Callable[[Demand], Sequence[Floats]] | None = None
    """Where no resistance depends on the loads: the demand of each of them, linear in the loads,
    before what is less than nothing counts as nothing"""
    turns: Callable[[Any, Demand, Demand], Sequence[Floats]] | None = None
    """Multiples of a case at which another rule begins to hold and utilisation may drop, given
    that basis, what acts and the part that the case has in it; nan or inf where there is none"""
    most: Callable[[Any, Demand], Sequence[Floats]] | None = None
    """Utilisations that none exceeds whatever moment and shear act, given that basis and the
    greatest moments of the beam; inf where nothing bounds them"""

    @property
    def steady(self) -> bool:
        """No resistance depends on the loads; none of these limit states may depend on the
        options"""
        return not self.loaded or self.demanded is not None


@dataclass(frozen=True, slots=True)
class Note:
    """A remark that the standard makes at some stations; ``mask`` (N)."""

    clause: str
    text: str
    mask: Bools
    face: Face | None = None
    """Where given, the remark only matters where this face may be in tension"""


class FlangeOverhangs(Protocol):
    """How far the overhangs of a top flange count [mm]."""

    def __call__(
        self, *, left: Floats, right: Floats, thickness: Floats, span: Floats
    ) -> tuple[Floats, Floats]:
        """To the left and to the right of the web."""
        ...


@dataclass(frozen=True, slots=True)
class Standard:
    """A published standard."""

    id: str
    title: str
    edition: str
    actions: str
    """The document that the combinations come from, with its edition."""
    shear_methods: tuple[str, ...]
    """The first is the default."""
    combinations: Callable[[Sequence[Case]], tuple[Combination, ...]]
    """Strength (and service) combinations for the cases of a run, ``self`` included."""
    categories: tuple[str, ...]
    """Occupancies that a case may name, in lower case"""
    clear_spacing: Callable[[float, float], float]
    """Least clear distance [mm] between bars of a diameter, given the aggregate size."""
    density_factor: Callable[[float | None], float]
    """lambda for a concrete density [kg/m3]; None is normal density."""
    prepare: Callable[[Members, Stations, Options], Any]
    """Gives a Prepared."""
    with_options: Callable[[Any, Options], Any]
    """The same Prepared under other options."""
    critical_distance: Callable[[Members, Stations], Floats]
    """Distance of the critical section for shear from the face of a support, for stations at
    the faces [mm] (N)."""
    limit_states: tuple[LimitState, ...]
    quick: tuple[Quick, ...]
    """Each limit state once"""
    notes: Callable[[Any], tuple[Note, ...]]
    """Remarks on a Prepared, such as minimum reinforcement."""
    basis: Callable[[Any], dict[str, Floats]]
    """Named arrays (N) that the basis of a rating prints, such as effective depths."""
    flange_overhangs: FlangeOverhangs
    """Overhangs of a flange that count in compression"""
    flange_clause: str
    flange_steel_overhangs: FlangeOverhangs
    """Overhangs of a flange within which bars count where it is in tension"""
    flange_steel_clause: str
    least_slenderness: float
    """Clear span over depth below which beam theory does not hold"""
    slenderness_clause: str
    not_checked: tuple[str, ...] = ()
    """What a reader might expect to be checked and is not: "torsion", "deflection" ..."""
