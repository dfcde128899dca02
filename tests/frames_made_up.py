"""How the beams of the hall in ``reports_made_up`` might stand, made up for the publishers."""

from __future__ import annotations

from dataclasses import replace

from ifccheck.beam import Beam
from ifccheck.framed import Balance, Framed, FramedEnd, FramedLine, FramedSpan
from ifccheck.publish.report import Report
from ifccheck.sheet import CaseShare
from tests.reports_made_up import HOSTILE, made_up_report

EVIL = HOSTILE[0]

ON_COLUMN = FramedEnd("pinned", 0.0, "C-1 (IfcColumn)", direct=True)
IN_SIDE = FramedEnd("pinned", 0.0, "G-9 (IfcBeam)")
BALANCE = (
    Balance("Level 1", "self", 100e3, 20e3, 20e3, 100e3),
    Balance("Level 1", "press", 60e3, 0.0, 0.0, 60e3),
    Balance("Level 2", "self", 50e3, 0.0, 0.0, 50e3),
    Balance("Level 2", "press", 0.0, 0.0, 0.0, 0.0),
)


def alone(beam: Beam, start: FramedEnd = ON_COLUMN, end: FramedEnd = IN_SIDE) -> FramedLine:
    span = FramedSpan(beam.key, beam.mark, start, end._replace(x=beam.length))
    return FramedLine((span,))


def in_line(first: Beam, second: Beam) -> FramedLine:
    """Two spans and an overhang, as the beams are drawn."""
    over = FramedEnd("continuous", first.length, "C-2 (IfcColumn)", direct=True)
    inner = over._replace(x=second.length - 1500.0, carrier="C-3 (IfcColumn)")
    tip = FramedEnd("free", second.length)
    return FramedLine(
        (
            FramedSpan(first.key, first.mark, ON_COLUMN, over),
            FramedSpan(second.key, second.mark, over._replace(x=0.0), inner),
            FramedSpan(second.key, second.mark, inner, tip),
        )
    )


def framed_hall(report: Report, balance: tuple[Balance, ...] = BALANCE) -> Report:
    """All kinds of standing: B-1000 and B-1001 in line, B-1002 without a way to stand, W-1 built
    in by the brief, the others on a column and in a side."""
    beams = {beam.mark: beam for beam in report.model.beams if beam.axis}
    lines = {beam.key: alone(beam) for beam in beams.values()}
    first, second, third, *_ = beams.values()
    lines[first.key] = lines[second.key] = in_line(first, second)
    del lines[third.key]
    if "W-1" in beams:
        stated = FramedEnd("fixed", 0.0, "the brief", stated=True)
        lines[beams["W-1"].key] = alone(beams["W-1"], stated, FramedEnd("free", 0.0))
    unknown = {third.key: "supports unknown: nothing carries it; say how its ends stand under X"}
    framed = Framed(lines, unknown, balance, left_out=(third.key,))
    sheet = report.sheet
    return replace(
        report, framed=framed, sheet=lambda key: replace(sheet(key), line=lines.get(key))
    )


def made_up_frame() -> Report:
    return framed_hall(made_up_report())


def hostile_frame() -> Framed:
    """Every text of it is what an attacker would write."""
    report = made_up_report()
    first, second, *_ = report.model.beams
    evil = FramedEnd("pinned", 0.0, f"{EVIL} (IfcColumn)", direct=True)
    line = alone(first, evil)
    spans = (line.spans[0]._replace(mark=EVIL), *alone(second, evil).spans)
    return Framed(
        {first.key: FramedLine(spans)},
        {second.key: f"supports unknown: {EVIL}"},
        (Balance(EVIL, EVIL, 5e3, 0.0, 0.0, 1e3),),
    )


def patterned(line: FramedLine) -> CaseShare:
    """A case that acts on the first and the last span of a line."""
    return CaseShare("press", "imposed", 1.5, 80e6, 40e3, len(line.spans), (0, len(line.spans) - 1))
