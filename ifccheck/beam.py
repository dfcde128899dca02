"""The domain: what is known of a beam, its reinforcement, supports and loads.

Frozen dataclasses, and named tuples of what a model has many thousands of: no IFC, no
formulas. Inside the program lengths are mm, forces N, stresses MPa, moments N*mm and angles rad.
Local axes of a beam: x along the axis from its start, z up in the vertical plane, y to the left.
In a section, z is measured up from the soffit and y from the middle of the outline's width;
where the section varies, from the lowest soffit and the middle of the first section, so that all
sections are in one frame.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import Literal, NamedTuple

from ifccheck.cases import SELF as SELF
from ifccheck.cases import Case as Case
from ifccheck.cases import Combination as Combination
from ifccheck.cases import CombinationKind as CombinationKind
from ifccheck.cases import Nature as Nature
from ifccheck.members import Box as Box
from ifccheck.members import Member as Member
from ifccheck.members import OutOfScope as OutOfScope
from ifccheck.members import Storey as Storey
from ifccheck.members import Unmeasured as Unmeasured
from ifccheck.model_loads import NO_MODEL_LOADS as NO_MODEL_LOADS
from ifccheck.model_loads import ActionDoubt as ActionDoubt
from ifccheck.model_loads import LaidAction as LaidAction
from ifccheck.model_loads import ModelCase as ModelCase
from ifccheck.model_loads import ModelLoads as ModelLoads
from ifccheck.openings import Opening as Opening
from ifccheck.openings import ShearLoss as ShearLoss
from ifccheck.slabs import NO_FLOORS as NO_FLOORS
from ifccheck.slabs import Flange as Flange
from ifccheck.slabs import FlangeWidth as FlangeWidth
from ifccheck.slabs import Floors as Floors
from ifccheck.slabs import FloorSlab as FloorSlab
from ifccheck.slabs import Plate as Plate
from ifccheck.slabs import Slab as Slab
from ifccheck.standing import Contact as Contact
from ifccheck.standing import EndKind as EndKind
from ifccheck.standing import RatedSpan as RatedSpan
from ifccheck.standing import Span as Span
from ifccheck.standing import Support as Support
from ifccheck.standing import SupportKind as SupportKind
from ifccheck.wheels import Travel as Travel
from ifccheck.wheels import Wheels as Wheels

Vector = tuple[float, float, float]
Point = tuple[float, float]
Ring = tuple[Point, ...]

SourceName = Literal["schedule", "bars", "sections", "properties"]
LoadKind = Literal["line", "point", "moment", "train"]
Face = Literal["top", "bottom"]
BarPlace = Literal["own", "near web", "in flange"]
"""Whether a bar is one of the beam itself, or lies in slab that is its flange: near to the web or
farther out"""
RemarkKind = Literal["assumption", "doubt", "note"]


class Verdict(StrEnum):
    """The three words that a beam may be given."""

    ADEQUATE = "adequate"
    FALLS_SHORT = "falls short"
    NOT_RATED = "not rated"


class Anchor(StrEnum):
    """How a bar ends."""

    STRAIGHT = "straight"
    HOOK = "hook"
    ANCHORED = "anchored"
    """Stated or taken as fully anchored: the end is not modelled."""


class Remark(NamedTuple):
    """Something that the reader of a rating must know of one beam, or of the run (beam None)."""

    beam: str | None
    stage: str
    text: str
    kind: RemarkKind = "note"


class Reason(NamedTuple):
    """Why a beam is not rated. ``blocking``: nothing can be computed at all;
    otherwise a utilisation above 1 still makes the beam fall short."""

    text: str
    blocking: bool = True


class Given(NamedTuple):
    """A number with the place that it came from; ``assumed`` where a default was used."""

    value: float
    source: str
    assumed: bool = False


@dataclass(frozen=True, slots=True)
class Axis:
    """The axis of a beam in the building: origin at the soffit's middle at the start [mm] (at the
    height of the lowest soffit), unit vectors, and the length [mm]."""

    origin: Vector
    x: Vector
    y: Vector
    z: Vector
    length: float


class Outline(NamedTuple):
    """A section's outline: the outer ring, then any voids; points (y, z) [mm].

    Where an opening divides it, several outer rings; what lies in an odd number of rings is
    concrete."""

    rings: tuple[Ring, ...]
    name: str = ""


@dataclass(frozen=True, slots=True)
class Run:
    """A stretch of a beam of one outline, or tapering linearly to ``outline_end``, each corner of
    the outline to the like corner of that."""

    start: float
    end: float
    outline: Outline
    outline_end: Outline | None = None
    whole: Outline | None = None
    """The outline without the openings that were taken off it; None where there are none."""


@dataclass(frozen=True, slots=True)
class RatedBody:
    """What is rated of a beam, where that is not its body and nothing else."""

    runs: tuple[Run, ...]
    """With slab that counts as a flange, without openings"""
    losses: tuple[ShearLoss, ...]
    weighed: tuple[Run, ...]
    """What self weight is that of"""
    flanges: tuple[Flange, ...] = ()
    """Slab that counts"""
    flange_source: str = ""
    """Where the brief says so"""
    widths: tuple[FlangeWidth, ...] = ()
    """How far the flange counts by the standard"""
    width_source: str = ""
    """The clauses that say so"""
    steel_source: str = ""
    """And those that say within which width bars of it count"""


@dataclass(frozen=True, slots=True)
class Bars:
    """Equal longitudinal bars side by side in one layer, parallel to the axis."""

    count: int
    diameter: float
    area: float
    """Area of one bar [mm2]."""
    start: float
    end: float
    z: float
    """Height of the bar centres above the soffit [mm]."""
    ys: tuple[float, ...]
    """Place of each bar across the width [mm], y to the left; ``len(ys) == count``."""
    yield_strength: Given | None = None
    start_anchor: Anchor = Anchor.STRAIGHT
    end_anchor: Anchor = Anchor.STRAIGHT
    """How the bars themselves end, be it beyond ``start`` and ``end``."""
    designation: str = ""
    origin: str = ""
    """The entity, property or schedule row that it was read from."""
    start_beyond: float = 0.0
    """How far the same bars go on beyond ``start``, bent or sloping, along themselves [mm]."""
    end_beyond: float = 0.0
    along: float = 1.0
    """Part of their strength that acts along the axis."""
    place: BarPlace = "own"


@dataclass(frozen=True, slots=True)
class Stirrups:
    """A set of equal stirrups, square to the axis, at one spacing from ``start`` to ``end``
    (the stretch of the beam that they serve)."""

    start: float
    end: float
    spacing: float
    diameter: float
    leg_area: float
    """Area of one leg [mm2]."""
    legs: int | None
    """Legs that cross the section's height; None where nobody states it."""
    closed: bool = True
    yield_strength: Given | None = None
    bottom: float | None = None
    """Height of the lowest point of the stirrup's outside above the soffit [mm]."""
    top: float | None = None
    half_width: float | None = None
    designation: str = ""
    origin: str = ""


@dataclass(frozen=True, slots=True)
class BarGroup:
    """Bars given by number and designation: one term of a bar notation."""

    count: int
    designation: str
    diameter: float
    area: float


@dataclass(frozen=True, slots=True)
class StirrupGroup:
    """Stirrups given by notation; ``legs`` None where the text does not say."""

    designation: str
    diameter: float
    area: float
    spacing: float
    legs: int | None


@dataclass(frozen=True, slots=True)
class BarRow:
    """Bars given by number and by the height of their centres, not by their places across."""

    face: Face
    group: BarGroup
    z: float
    """Height of the bar centres [mm]"""
    bar_yield: float | None = None
    origin: str = ""


@dataclass(frozen=True, slots=True)
class DescribedZone:
    """Reinforcement of a stretch of a beam given by notation, not by place.

    ``None`` for a field means that the source does not speak of it; an empty tuple means
    that it states that there is none.
    """

    start: float | None = None
    end: float | None = None
    top: tuple[BarGroup, ...] | None = None
    bottom: tuple[BarGroup, ...] | None = None
    side: tuple[BarGroup, ...] | None = None
    stirrups: StirrupGroup | None = None
    no_stirrups: bool = False
    """True where the source states that there are none."""
    cover: float | None = None
    bar_yield: float | None = None
    stirrup_yield: float | None = None
    origin: str = ""
    rows: tuple[BarRow, ...] = ()
    """Bars whose height is given; they say nothing of a face that none of them lies at."""


@dataclass(frozen=True, slots=True)
class Reinforcement:
    """What one source says of a beam's reinforcement.

    Physical sources fill ``bars`` and ``stirrups``; described sources fill ``zones`` and the
    layout turns them into bars and stirrups. ``reasons`` tell what could not be read.
    """

    source: SourceName
    bars: tuple[Bars, ...] = ()
    stirrups: tuple[Stirrups, ...] = ()
    zones: tuple[DescribedZone, ...] = ()
    reasons: tuple[Reason, ...] = ()
    remarks: tuple[Remark, ...] = ()

    @property
    def speaks_of_stirrups(self) -> bool:
        """Whether it gives stirrups somewhere, or states that there are none."""
        return bool(self.stirrups) or any(z.stirrups or z.no_stirrups for z in self.zones)


@dataclass(frozen=True, slots=True)
class Beam:
    """One member in scope and all that the model says of it."""

    key: str
    """The GlobalId; where that is repeated, GlobalId~n with n counting from 2."""
    guid: str
    ordinal: int
    """0 for the first beam with this GlobalId in file order, 1 for the second, ..."""
    step_id: int
    model: str
    ifc_class: str
    name: str
    tag: str
    type_name: str
    storey: str
    axis: Axis | None
    runs: tuple[Run, ...]
    """Of the body without its openings"""
    material: str
    concrete_strength: Given | None
    concrete_density: Given | None
    """Density of the concrete [kg/m3] where the model states it; the least of several."""
    cover: Given | None
    reinforcement: tuple[Reinforcement, ...] = ()
    """At most one entry per source, as found in the model (or added from the schedule)."""
    reasons: tuple[Reason, ...] = ()
    remarks: tuple[Remark, ...] = ()
    strength_reason: Reason | None = None
    """Why its strength cannot be read; it counts unless the brief states that of this beam."""
    greatest_density: Given | None = None
    """The greatest density that the model states for its concrete, for its weight [kg/m3]"""
    openings: tuple[Opening, ...] = ()
    precast: str = ""
    """What tells that it is precast; empty where nothing does"""
    slab_bars: tuple[Bars, ...] = ()
    """Bars of slabs beside it or on it that run along it, wherever they lie; read only where the
    brief asks for slabs"""
    slab_bar_doubts: tuple[str, ...] = ()
    """What the reader of those must know"""
    slab_bar_fault: str = ""
    """Why none of them may count; empty where they may"""

    @property
    def mark(self) -> str:
        """What people call the beam."""
        return self.name or self.tag or self.key

    @property
    def length(self) -> float:
        """Length along the axis [mm]; 0 where the body could not be read."""
        return self.axis.length if self.axis else 0.0


@dataclass(frozen=True, slots=True)
class Model:
    """What was read of one IFC model."""

    name: str
    """The file's stem."""
    file_name: str
    schema: str
    sha256: str
    """Hash of the bytes without any results of ours."""
    beams: tuple[Beam, ...]
    out_of_scope: tuple[OutOfScope, ...]
    members: tuple[Member, ...]
    """Every member with a readable box, beams included."""
    storeys: tuple[Storey, ...]
    remarks: tuple[Remark, ...] = ()
    unmeasured: tuple[Unmeasured, ...] = ()
    """Beams, columns and members that may rest on any beam of their storey"""
    slabs: tuple[Slab, ...] = ()
    """Level slabs, which beams may be cast with"""
    mapped: frozenset[str] = frozenset()
    """Fields of the brief's mapping of which some beam in scope has a property"""
    loads: ModelLoads = NO_MODEL_LOADS
    """Of its structural analysis models"""
    floors: Floors = NO_FLOORS
    """Slabs that bring load to beams; read only where the brief asks for it"""


class Load(NamedTuple):
    """One load on one beam, vertical and positive downward, in the beam's own x.

    line: intensity [N/mm] from ``values[0]`` at ``start`` to ``values[1]`` at ``end``;
    point: force [N] ``values[0]`` at ``start``; moment: ``values[0]`` [N*mm] at ``start``,
    positive where it turns the left part into sagging just left of it (anticlockwise seen
    with x to the right and z up): the moment falls by the value from left to right;
    train: wheels that move between ``start`` and ``end``, ``values[0]`` [N] in all.
    """

    beam: str
    case: str
    kind: LoadKind
    start: float
    end: float
    values: tuple[float, float]
    face: Face = "top"
    origin: str = ""
    text: str = ""
    """What the brief says, for people: "60 kN at 2.1 m"."""
    apart: bool = False
    """Acts where the others of its case on that span do not: what rests on a beam presses on it or
    lifts it"""
    travel: Travel | None = None
    """How a train moves; None for what stands still"""
