"""The brief as frozen data, in N, mm, MPa; selections stay text until they are resolved."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Literal

from ifccheck.beam import (
    BarGroup,
    Case,
    CombinationKind,
    Face,
    LoadKind,
    SourceName,
    StirrupGroup,
    SupportKind,
    Travel,
)

ReinforcementField = Literal[
    "top", "bottom", "side", "stirrups", "cover", "bar_yield", "stirrup_yield",
    "stirrup_diameter", "stirrup_spacing", "stirrup_legs",
]  # fmt: skip


SlabFlange = Literal["none", "level", "on top"]
Restraint = Literal["pinned", "fixed", "columns"]
Continuity = Literal["bars", "always", "never"]
"""Whether slab that is modelled apart counts as a flange: none; what is level with the beam; also
what lies on its top."""


FloorSpan = Literal["by shape", "two ways", "one way"]
"""How slabs span: one way where a panel is more than twice as long as wide, or always so"""


SlabBars = Literal["anchored"]
"""What the engineer states of the bars of slabs that lie in the flange of a beam"""


@dataclass(frozen=True, slots=True)
class Selection:
    """Which beams an entry speaks of: marks, or an element query; exactly one is given."""

    beams: tuple[str, ...] | None = None
    where: str | None = None

    def __str__(self) -> str:
        if self.where is not None:
            return f"where = {self.where!r}"
        return f"beams = {', '.join(self.beams or ())}"

    @property
    def said(self) -> str:
        """The query, the mark, or the range of marks that a part of an entry is."""
        if self.where is not None:
            return self.where
        marks = self.beams or ("",)
        return marks[0] if len(marks) == 1 else f"{marks[0]}..{marks[-1]}"


@dataclass(frozen=True, slots=True)
class Position:
    """A place along a beam: [mm] from its start, or a share of its length and [mm] beyond."""

    value: float
    relative: bool
    text: str
    """As the engineer wrote it."""
    offset: float = 0.0
    """Distance [mm] beyond the share of the length; negative before it."""

    def on(self, length: float) -> float:
        """Distance from the start [mm] on a beam of a length."""
        return self.value * length + self.offset if self.relative else self.value

    def may_precede(self, other: Position, least: float) -> bool:
        """Whether a stretch from here to another place has a length on any beam [mm]."""
        share, distance = self._parts()
        further, beyond = other._parts()
        return further > share or beyond - distance >= least

    def _parts(self) -> tuple[float, float]:
        """The share of the length, and the distance from there [mm]."""
        return (self.value, self.offset) if self.relative else (0.0, self.value)


@dataclass(frozen=True, slots=True)
class LoadEntry:
    """One entry of ``[[loads]]``; an area load is already a line load."""

    place: str
    """ "loads[3]", counted from 1 as a reader counts"""
    selection: Selection
    optional: bool
    """True where the entry may reach no beam"""
    case: str
    kind: LoadKind
    values: tuple[float, float]
    """N/mm at ``start`` and ``end``, or N or N*mm twice."""
    start: Position | None
    """Place of a point load or moment; start of a line, None for the whole beam."""
    end: Position | None
    anchor: str | None
    """Member at the end of the beam from which positions are measured; None: the start."""
    face: Face
    projected: bool
    eccentricity: float
    """Offset from the web's middle [mm]; other than 0 it asks for torsion."""
    text: str
    """ "60 kN at 2.1 m" """
    upward: bool = False
    """The engineer means a load that acts upward"""
    in_table: bool = False
    """It is a row of a table: ``place`` is "loads.csv row 7" """

    @property
    def acts_upward(self) -> bool:
        """Whether any of it acts upward."""
        return self.kind != "moment" and min(self.values) < 0.0


@dataclass(frozen=True, slots=True)
class TrainEntry:
    """One entry of ``[[trains]]``."""

    place: str
    selection: Selection
    optional: bool
    case: str
    travel: Travel
    start: Position | None
    """Where the way begins; None for the whole beam or line"""
    end: Position | None
    text: str
    """ "train of 2 wheels, 85 kN + 85 kN at 1.8 m" """


@dataclass(frozen=True, slots=True)
class SupportEntry:
    """One entry of ``[[supports]]``; None for what it does not speak of."""

    place: str
    selection: Selection
    optional: bool
    start: SupportKind | None
    end: SupportKind | None
    bearing: tuple[float, float] | None
    ignore: tuple[str, ...] | None = None
    """Members under the beam between its ends that do not hold it"""


@dataclass(frozen=True, slots=True)
class BeamEntry:
    """One entry of ``[[beams]]``: statements about single beams; None where it is silent."""

    place: str
    selection: Selection
    optional: bool
    span: float | None
    unloaded: bool | None
    loads_complete: bool | None
    torsion: bool | None
    """True where loads act beside the web or the beam must twist to stand."""
    slab_flange: SlabFlange | None
    slab_bars: SlabBars | None = None


@dataclass(frozen=True, slots=True)
class MaterialEntry:
    """One entry of ``[[materials]]``; None where it is silent."""

    place: str
    selection: Selection
    optional: bool
    concrete_strength: float | None
    bar_yield: float | None
    stirrup_yield: float | None
    cover: float | None
    density: float | None
    """[kg/m3]"""
    aggregate_size: float | None


@dataclass(frozen=True, slots=True)
class FloorEntry:
    """One entry of ``[[floors]]``: what slabs bring to the beams under them."""

    place: str
    selection: Selection | None
    """Which slabs are meant; None for all"""
    optional: bool
    """True where it may reach no slab, or no beam"""
    case: str
    area: float
    """[N/mm2]"""
    area_text: str
    self_weight: bool
    span: FloorSpan
    direction: tuple[float, float] | None
    """Unit vector in plan along which slabs span one way; None for the short way of each panel"""
    walls: bool | None
    """Whether walls under slabs carry; None where the model tells it of each"""


Entry = LoadEntry | TrainEntry | SupportEntry | BeamEntry | MaterialEntry
"""What has a selection: ``place``, ``selection`` and ``optional``."""


@dataclass(frozen=True, slots=True)
class CombinationEntry:
    """One entry of ``[[combinations]]``: factors by case or nature as the engineer gave them,
    (unfavourable, favourable), the second None where only one was given."""

    place: str
    name: str
    kind: CombinationKind
    factors: Mapping[str, tuple[float, float | None]]


@dataclass(frozen=True, slots=True)
class Basis:
    """What the rating rests on."""

    standard: str
    shear_method: str | None
    concrete_unit_weight: float
    """[N/mm3]"""


@dataclass(frozen=True, slots=True)
class Defaults:
    """Used only where the model is silent; None where the brief gives none."""

    concrete_strength: float | None = None
    bar_yield: float | None = None
    stirrup_yield: float | None = None
    cover: float | None = None
    aggregate_size: float | None = None
    supports: tuple[SupportKind, SupportKind] | None = None
    slab_flanges: bool = False
    """Slabs that beams are cast with count as their flanges."""


@dataclass(frozen=True, slots=True)
class FrameOptions:
    """How beams stand that the brief says nothing of: on what the model shows under them."""

    restraint: Restraint = "pinned"
    """How an end stands that runs into a column or a wall"""
    continuity: Continuity = "bars"
    """Where moment passes from beam to beam over a support: where bars do, always or never"""
    load_bearing: tuple[str, ...] = ()
    """Marks of walls and members that carry the beams which lie on them between their ends"""


@dataclass(frozen=True, slots=True)
class Scope:
    """Element queries by their place: what is a beam beside what is one by class, and what is
    left out."""

    also: Mapping[str, str]
    leave_out: Mapping[str, str]
    optional: bool
    """True where the queries may reach nothing."""


NO_SCOPE = Scope({}, {}, False)


ROW_COLUMNS: Mapping[str, str] = {
    "beams": "beam", "line": "value", "point": "value", "moment": "value", "area": "value",
}  # fmt: skip
"""Columns of a table of loads that are not called as the key of ``[[loads]]`` is"""


@dataclass(frozen=True, slots=True)
class LoadTableFile:
    """One entry of ``[[load_tables]]``."""

    name: str
    """As the brief has it"""
    path: Path


@dataclass(frozen=True, slots=True)
class TakenCase:
    """A case of the brief that takes the loads of load cases of the model."""

    case: str
    upward: bool
    """The engineer means that some of them act upward"""


@dataclass(frozen=True, slots=True)
class Brief:
    """The engineer's brief, validated."""

    path: Path
    file_name: str
    sha256: str
    """Of the brief's bytes and of those of every table that it names."""
    basis: Basis
    defaults: Defaults
    sources: tuple[SourceName, ...]
    schedule: Path | None
    mapping_optional: bool
    """True where rows of the schedule may reach no beam, and the mapping no property."""
    property_mapping: Mapping[ReinforcementField, str]
    """Field to "Set.Property", either with ``*`` for any characters."""
    lines: Mapping[str, int]
    """Line of every table and key: "loads[3].at" to 46"""
    cases: tuple[Case, ...]
    """As declared, without ``self``."""
    loads: tuple[LoadEntry, ...] = ()
    floors: tuple[FloorEntry, ...] = ()
    trains: tuple[TrainEntry, ...] = ()
    supports: tuple[SupportEntry, ...] = ()
    beams: tuple[BeamEntry, ...] = ()
    materials: tuple[MaterialEntry, ...] = ()
    combinations: tuple[CombinationEntry, ...] = ()
    scope: Scope = NO_SCOPE
    load_tables: tuple[LoadTableFile, ...] = ()
    """Tables whose rows are among ``loads``"""
    from_model: Mapping[str, TakenCase] = field(default_factory=dict)
    """By the name of a load case in the model: the case of the brief that takes it"""
    frame: FrameOptions | None = None
    """None where every support is stated by the brief"""

    @property
    def asks_for_slabs(self) -> bool:
        """Slab may count as a flange of some beam."""
        return self.defaults.slab_flanges or any(
            entry.slab_flange not in (None, "none") for entry in self.beams
        )

    def entries(self) -> Iterator[Entry]:
        """Every entry with a selection, in the order of the brief's tables."""
        yield from self.loads
        yield from self.trains
        yield from self.supports
        yield from self.beams
        yield from self.materials

    def where(self, entry: Entry, key: str = "") -> str:
        """File, place and line of an entry, for an error."""
        if isinstance(entry, LoadEntry) and entry.in_table:
            return f"{entry.place} {ROW_COLUMNS.get(key, key)}".rstrip()
        place = f"{entry.place}.{key}" if key else entry.place
        return self.at(place, self.lines.get(entry.place))

    def at(self, place: str, otherwise: int | None = None) -> str:
        """File, place and line of a key, for an error."""
        line = self.lines.get(place, otherwise)
        return f"{self.file_name}: {place}" + ("" if line is None else f" (line {line})")


@dataclass(frozen=True, slots=True)
class ScheduleRow:
    """One row of the beam schedule; None for an empty cell, an empty tuple for "none"."""

    place: str
    """ "beam_schedule.csv row 7" """
    selection: Selection
    """True where the row may reach no beam"""
    start: Position | None
    end: Position | None
    top: tuple[BarGroup, ...] | None
    bottom: tuple[BarGroup, ...] | None
    side: tuple[BarGroup, ...] | None
    stirrups: StirrupGroup | None
    no_stirrups: bool
    cover: float | None
    bar_yield: float | None
    stirrup_yield: float | None
