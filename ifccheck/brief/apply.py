"""The brief laid on the beams of a run; pure, and all in one place for the pipeline.

The order of use: ``selections`` says what to look for, the model answers with keys, ``join``
gives the ``Matches`` that everything else takes; ``check_reached`` and ``schedule_remarks``
look at all the models of the run together.
"""

from ifccheck.brief.cases import cases_of, combination_remarks, combinations_of
from ifccheck.brief.loads import loads_on_beams
from ifccheck.brief.merging import Matches
from ifccheck.brief.selecting import Found, check_reached, join, selections
from ifccheck.brief.statements import (
    BeamStatement,
    MaterialStatement,
    default_materials,
    materials,
    statements,
)
from ifccheck.brief.supports import resolve_supports
from ifccheck.brief.zones import schedule_remarks, with_schedule

__all__ = [
    "BeamStatement",
    "Found",
    "Matches",
    "MaterialStatement",
    "cases_of",
    "check_reached",
    "combination_remarks",
    "combinations_of",
    "default_materials",
    "join",
    "loads_on_beams",
    "materials",
    "resolve_supports",
    "schedule_remarks",
    "selections",
    "statements",
    "with_schedule",
]
