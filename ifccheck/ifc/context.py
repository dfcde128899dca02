"""What every reader of a model shares: its units, relationships, placements, properties."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from ifccheck.beam import Axis, Run
from ifccheck.ifc.classes import Classes
from ifccheck.ifc.placements import Placements
from ifccheck.ifc.properties import Properties
from ifccheck.ifc.relations import Relations, read_relations
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.units import ModelUnits, read_units


@dataclass(frozen=True)
class Context:
    """An open model and what was gathered from it once."""

    file: Any
    schema: str
    """IFC2X3, IFC4 or IFC4X3."""
    units: ModelUnits
    relations: Relations
    placements: Placements
    properties: Properties
    classes: Classes
    statements: StepTable | None = None
    """The statements of the file, where they let the same of many be read at once."""


@dataclass(frozen=True, slots=True)
class BeamFrame:
    """A beam as its reinforcement is measured in it."""

    guid: str
    axis: Axis
    runs: tuple[Run, ...]


def make_context(file: Any, schema: str, statements: StepTable | None = None) -> Context:
    """Gather what the readers of one model share."""
    units = read_units(file)
    relations = read_relations(file, statements)
    return Context(
        file=file,
        schema=schema,
        units=units,
        relations=relations,
        placements=Placements(file, units.length, units.angle),
        properties=Properties(file, units, relations, statements),
        classes=Classes(file),
        statements=statements,
    )
