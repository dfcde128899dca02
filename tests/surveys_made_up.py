"""Surveys made up for the tests of the publishers, of the hall in ``reports_made_up``."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from ifccheck.beam import BarGroup, DescribedZone, Model, Reason, Reinforcement, StirrupGroup
from ifccheck.findings import Finding, Survey
from ifccheck.publish.report import Report
from tests.reports_made_up import HOSTILE, hostile_report, made_up_report

REPORT = made_up_report()
DESCRIBED = Reinforcement(
    "properties",
    zones=(
        DescribedZone(
            bottom=(BarGroup(3, "25M", 25.2, 500.0),),
            stirrups=StirrupGroup("10M", 11.3, 100.0, 250.0, 2),
            cover=40.0,
            origin="Set.BottomBars",
        ),
    ),
    reasons=(Reason("property Set.TopBars 'many' cannot be read: it is not bar notation"),),
)


def survey_of(model: Model, findings: Mapping[str, Finding], brief_name: str = "") -> Survey:
    """A survey with the given findings; of any other beam nothing is amiss."""
    known = {beam.key: findings.get(beam.key, Finding()) for beam in model.beams}
    return Survey("0.1.0", model, known, brief_name=brief_name)


def made_up_survey() -> Survey:
    """Every state occurs, steel is read from bars by place, from notation, and from nothing."""
    findings = {
        beam.key: (
            Finding(
                lacks=(
                    "no reinforcement found",
                    "concrete strength unknown: neither gives it",
                ),
                to_state=("supports unknown: its end touches no member",),
                doubts=(f"bars #{i}, #{i + 1}: ends in a bend: taken as straight",),
                unmet=("BeamRating_Reinforcement.TopBars is not given",),
            ),
            Finding(doubts=(f"the start is cut obliquely over {i} mm of the axis: measured",)),
            Finding(),
        )[i % 3]
        for i, beam in enumerate(REPORT.model.beams)
    }
    return survey_of(_reinforced(REPORT), findings)


def _reinforced(report: Report) -> Model:
    def steel(i: int, key: str) -> tuple[Reinforcement, ...]:
        sheet = report.sheet(key)
        placed = Reinforcement("bars", bars=sheet.bars, stirrups=sheet.stirrups)
        return ((), (placed, DESCRIBED), (DESCRIBED,))[i % 3]

    beams = tuple(
        replace(beam, reinforcement=steel(i, beam.key)) for i, beam in enumerate(report.model.beams)
    )
    return replace(report.model, beams=beams)


def hostile_survey() -> Survey:
    """The same with names and findings that try to break out of every output."""
    model = hostile_report().model
    finding = Finding(HOSTILE, HOSTILE, HOSTILE, HOSTILE)
    return survey_of(model, {beam.key: finding for beam in model.beams}, brief_name=HOSTILE[0])
