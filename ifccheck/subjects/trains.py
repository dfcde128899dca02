"""Trains of the brief on the beams that carry them, and what is to be told of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from ifccheck.beam import Beam, Load, Remark
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief
from ifccheck.brief.trains import trains_on_beams
from ifccheck.demand.trains import Laid, lay_trains, line_alone, scattered
from ifccheck.frame.spans import Standing
from ifccheck.subjects.findings import Findings, Sources
from ifccheck.subjects.framing import Framing

_WHEELS = (
    "wheels press vertically wherever they stand: side thrust, braking and fatigue are not checked"
)


def trains_of(
    brief: Brief,
    matches: Matches,
    beams: Mapping[str, Beam],
    standing: Mapping[str, Standing],
    framing: Framing | None,
) -> Laid:
    """The trains of the brief on the lines of the beams that are named for them."""
    trains = trains_on_beams(brief, matches, beams)
    if not trains:
        return Laid((), {})
    if framing:
        return lay_trains(trains, framing.lines.lines, beams)
    keys = dict.fromkeys(load.beam for load in trains if load.beam in standing)
    return lay_trains(trains, [line_alone(key, standing[key]) for key in keys], beams)


def fixed_cranes(brief: Brief) -> set[str]:
    """Cases of cranes whose loads stand where the brief puts them."""
    moving = {entry.case for entry in brief.trains}
    return {case.name for case in brief.cases if case.nature == "crane"} - moving


def judge_trains(key: str, sources: Sources, loads: Sequence[Load], findings: Findings) -> None:
    """Note what is not checked of trains on a beam, and doubts of those on what rests on it."""
    moving = {entry.case for entry in sources.brief.trains}
    if any(load.case in moving for load in loads):
        findings.remarks.append(Remark(key, "demand", _WHEELS, "assumption"))
    if moving and sources.framing and key in sources.framing.path.loads:
        received = {key: sources.framing.path.loads[key]}
        findings.reasons += scattered(received, sources.runways, moving).values()
