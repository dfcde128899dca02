"""The shape of the brief's TOML: every key, what it may hold, and nothing else."""

from __future__ import annotations

from collections.abc import Callable
from typing import Annotated, Any, Literal

from pydantic import (
    AfterValidator,
    BaseModel,
    ConfigDict,
    Field,
    PlainValidator,
    StringConstraints,
)

from ifccheck.beam import CombinationKind, Face, Nature, SourceName, SupportKind
from ifccheck.brief.floor_entries import read_direction
from ifccheck.brief.mark_ranges import expanded
from ifccheck.brief.model import Continuity, Position, Restraint, SlabBars, SlabFlange
from ifccheck.brief.places import did_you_mean
from ifccheck.brief.quantities import (
    CONCRETE_STRENGTH,
    COVER,
    DENSITY,
    YIELD,
    Range,
    Written,
    read_position,
    read_within,
    read_written,
)
from ifccheck.units import Kind


def _written(kind: Kind) -> Any:
    return PlainValidator(lambda value: read_written(value, kind))


def _within(limits: Range) -> Any:
    return PlainValidator(lambda value: read_within(value, limits))


def _pair(read: Callable[[object], float]) -> Any:
    """Two quantities in a list."""

    def pair(value: object) -> tuple[float, float]:
        if not isinstance(value, list) or len(value) != 2:
            raise ValueError("must be a list of two quantities, for the start and the end")
        return read(value[0]), read(value[1])

    return PlainValidator(pair)


def _one_or_pair(value: object) -> tuple[Written, Written]:
    if not isinstance(value, list):
        intensity = read_written(value, "line_load")
        return intensity, intensity
    if len(value) != 2:
        raise ValueError("must be one load per length, or a list of two for the start and the end")
    return read_written(value[0], "line_load"), read_written(value[1], "line_load")


def _factor(value: object) -> tuple[float, float | None]:
    """A number, or a list [unfavourable, favourable]; None for what is not said."""
    if not isinstance(value, list):
        return _plain_factor(value), None
    if len(value) != 2:
        raise ValueError("must be a number, or a pair [unfavourable, favourable]")
    return _plain_factor(value[0]), _plain_factor(value[1])


def _plain_factor(value: object) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValueError("must be a number, or a pair [unfavourable, favourable]")
    if not 0.0 <= value <= 10.0:  # also where value is nan
        raise ValueError(f"is {value}: a factor from 0 to 10 is needed")
    return float(value)


def _dynamic(value: object) -> float:
    """A factor on wheels that move."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValueError("must be a number, 1 where the wheels have their dynamic effect in them")
    if not 1.0 <= value <= 3.0:  # also where value is nan
        raise ValueError(f"is {value}: a factor from 1 to 3 is needed")
    return float(value)


def _above_zero(value: object, kind: Kind) -> Written:
    written = read_written(value, kind)
    if not written.value > 0.0:
        raise ValueError(f"'{written.text}' is not above zero")
    return written


def _slab_flange(value: object) -> SlabFlange:
    """Which slab counts as a flange: none, what is level with the beam, also what is on top."""
    if value == "on top":
        return "on top"
    if not isinstance(value, bool):
        raise ValueError('must be true, false or "on top"')
    return "level" if value else "none"


def _slab_bars(value: object) -> SlabBars:
    """What is stated of the bars of slabs in a beam's flange."""
    if value != "anchored":
        hint = f": {did_you_mean(value, ['anchored'])}" if isinstance(value, str) else ""
        raise ValueError(f'must be "anchored", or left out where they are not{hint}')
    return "anchored"


def _names(value: object) -> tuple[str, ...]:
    """One text, or a list of texts."""
    given = value if isinstance(value, list) else [value]
    names = [name.strip() for name in given if isinstance(name, str) and name.strip()]
    if not names or len(names) != len(given):
        raise ValueError("must be the name of a load case of the model, or a list of such names")
    return tuple(names)


Name = Annotated[
    str, StringConstraints(min_length=1, max_length=80, pattern=r"^[^\x00-\x1f\x7f]*$")
]
Length = Annotated[Written, _written("length")]
WheelForce = Annotated[Written, PlainValidator(lambda value: _above_zero(value, "force"))]
Gap = Annotated[Written, PlainValidator(lambda value: _above_zero(value, "length"))]
MOST_WHEELS = 40
Place = Annotated[Position, PlainValidator(read_position)]
Factor = Annotated[tuple[float, float | None], PlainValidator(_factor)]


class Table(BaseModel):
    """A table of the brief: strict types, no unknown key, finite numbers."""

    model_config = ConfigDict(extra="forbid", strict=True, allow_inf_nan=False, frozen=True)


class BasisTable(Table):
    """``[basis]``"""

    standard: Name
    shear_method: Name | None = None
    concrete_unit_weight: Annotated[float, _within(Range("unit_weight", "10 kN/m3", "35 kN/m3"))]


class MaterialsTable(Table):
    """What ``[defaults]`` and ``[[materials]]`` have in common."""

    concrete_strength: Annotated[float, _within(CONCRETE_STRENGTH)] | None = None
    bar_yield: Annotated[float, _within(YIELD)] | None = None
    stirrup_yield: Annotated[float, _within(YIELD)] | None = None
    cover: Annotated[float, _within(COVER)] | None = None
    aggregate_size: Annotated[float, _within(Range("length", "0 mm", "100 mm"))] | None = None


class FrameTable(Table):
    """``[frame]``"""

    restraint: Restraint = "pinned"
    continuity: Continuity = "bars"
    load_bearing: list[Name] = Field(default_factory=list)


class DefaultsTable(MaterialsTable):
    """``[defaults]``"""

    supports: list[SupportKind] | None = Field(default=None, min_length=2, max_length=2)
    slab_flanges: bool = False


class PropertiesTable(Table):
    """``[reinforcement.properties]``"""

    top: Name | None = None
    bottom: Name | None = None
    side: Name | None = None
    stirrups: Name | None = None
    cover: Name | None = None
    bar_yield: Name | None = None
    stirrup_yield: Name | None = None
    stirrup_diameter: Name | None = None
    stirrup_spacing: Name | None = None
    stirrup_legs: Name | None = None


class ReinforcementTable(Table):
    """``[reinforcement]``"""

    sources: list[SourceName] | None = Field(default=None, min_length=1)
    schedule: Name | None = None
    optional: bool = False
    properties: PropertiesTable = Field(default_factory=PropertiesTable)


class CaseTable(Table):
    """``[cases.<name>]``"""

    nature: Nature
    category: Name | None = None
    rated: bool = False
    excludes: list[Name] = Field(default_factory=list)
    removable: bool = False
    from_model: Annotated[tuple[str, ...], PlainValidator(_names)] = ()
    upward: bool = False
    whole: bool = False


def _mark(text: str) -> str:
    expanded(text)
    return text


Mark = Annotated[Name, AfterValidator(_mark)]
Query = Annotated[str, StringConstraints(min_length=1, max_length=2000)]


class ScopeTable(Table):
    """``[scope]``"""

    also: list[Query] = Field(default_factory=list)
    leave_out: list[Query] = Field(default_factory=list)
    optional: bool = False


class SelectingTable(Table):
    """What every entry with a selection has."""

    beams: list[Mark] | None = Field(default=None, min_length=1)
    where: Query | None = None
    optional: bool = False


class LoadTable(SelectingTable):
    """``[[loads]]``"""

    case: Name
    line: Annotated[tuple[Written, Written], PlainValidator(_one_or_pair)] | None = None
    point: Annotated[Written, _written("force")] | None = None
    moment: Annotated[Written, _written("moment")] | None = None
    area: Annotated[Written, _written("area_load")] | None = None
    tributary_width: Length | None = None
    at: Place | None = None
    start: Place | None = Field(default=None, alias="from")
    end: Place | None = Field(default=None, alias="to")
    at_from: Name | None = None
    face: Face | None = None
    projected: bool = False
    upward: bool = False
    eccentricity: Length | None = None


class SecondTrainTable(Table):
    """``[trains.second]``"""

    wheels: Annotated[list[WheelForce], Field(min_length=1, max_length=MOST_WHEELS)]
    spacing: list[Gap] = Field(default_factory=list)
    approach: Length


class TrainTable(SelectingTable):
    """``[[trains]]``"""

    case: Name
    wheels: Annotated[list[WheelForce], Field(min_length=1, max_length=MOST_WHEELS)]
    spacing: list[Gap] = Field(default_factory=list)
    dynamic: Annotated[float, PlainValidator(_dynamic)]
    start: Place | None = Field(default=None, alias="from")
    end: Place | None = Field(default=None, alias="to")
    stops: bool = False
    turned: bool = True
    second: SecondTrainTable | None = None


class FloorTable(Table):
    """``[[floors]]``"""

    slabs: list[Mark] | None = Field(default=None, min_length=1)
    where: Query | None = None
    optional: bool = False
    case: Name
    area: Annotated[Written, _written("area_load")] | None = None
    self_weight: bool = False
    span: Literal["two ways", "one way"] | None = None
    direction: Annotated[tuple[float, float], PlainValidator(read_direction)] | None = None
    walls: bool | None = None


class LoadFileTable(Table):
    """``[[load_tables]]``"""

    file: Name


class SupportTable(SelectingTable):
    """``[[supports]]``"""

    start: SupportKind | None = None
    end: SupportKind | None = None
    bearing: (
        Annotated[
            tuple[float, float],
            _pair(lambda value: read_within(value, Range("length", "0 mm", "2 m"))),
        ]
        | None
    ) = None
    ignore: list[Name] | None = Field(default=None, min_length=1)


class BeamTable(SelectingTable):
    """``[[beams]]``"""

    span: Annotated[float, _within(Range("length", "100 mm", "200 m"))] | None = None
    unloaded: bool | None = None
    loads_complete: bool | None = None
    torsion: bool | None = None
    slab_flange: Annotated[SlabFlange, PlainValidator(_slab_flange)] | None = None
    slab_bars: Annotated[SlabBars, PlainValidator(_slab_bars)] | None = None


class MaterialTable(MaterialsTable, SelectingTable):
    """``[[materials]]``"""

    density: Annotated[float, _within(DENSITY)] | None = None


class CombinationTable(Table):
    """``[[combinations]]``"""

    name: Name
    kind: CombinationKind
    factors: dict[str, Factor] = Field(min_length=1)


class BriefTable(Table):
    """The whole file."""

    basis: BasisTable
    scope: ScopeTable = Field(default_factory=ScopeTable)
    defaults: DefaultsTable = Field(default_factory=DefaultsTable)
    frame: FrameTable | None = None
    reinforcement: ReinforcementTable = Field(default_factory=ReinforcementTable)
    cases: dict[Name, CaseTable] = Field(default_factory=dict)
    loads: list[LoadTable] = Field(default_factory=list)
    trains: list[TrainTable] = Field(default_factory=list)
    load_tables: list[LoadFileTable] = Field(default_factory=list)
    floors: list[FloorTable] = Field(default_factory=list)
    supports: list[SupportTable] = Field(default_factory=list)
    beams: list[BeamTable] = Field(default_factory=list)
    materials: list[MaterialTable] = Field(default_factory=list)
    combinations: list[CombinationTable] = Field(default_factory=list)


_TABLES: dict[str, type[Table]] = {
    "basis": BasisTable,
    "scope": ScopeTable,
    "defaults": DefaultsTable,
    "reinforcement": ReinforcementTable,
    "cases": CaseTable,
    "loads": LoadTable,
    "trains": TrainTable,
    "load_tables": LoadFileTable,
    "floors": FloorTable,
    "supports": SupportTable,
    "beams": BeamTable,
    "materials": MaterialTable,
    "combinations": CombinationTable,
}


def known_keys(path: tuple[str | int, ...]) -> list[str]:
    """Return the keys that the table at a path may hold."""
    if not path:
        return list(BriefTable.model_fields)
    table = _TABLES[str(path[0])]
    if path[:2] == ("reinforcement", "properties"):
        table = PropertiesTable
    elif path[0] == "trains" and "second" in path:
        table = SecondTrainTable
    return [field.alias or name for name, field in table.model_fields.items()]
