"""The sheet of one beam in a survey: what was read of it, from where, and what is amiss."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from markupsafe import Markup

from ifccheck.beam import Bars, Beam, DescribedZone, Given, Load, Outline, RatedSpan, Run, Stirrups
from ifccheck.findings import Finding
from ifccheck.publish.drawings import section
from ifccheck.publish.elevation import elevation
from ifccheck.publish.quantities import metres, quantity_words
from ifccheck.publish.sheet_html import SteelRow, bar_row, beam_facts, stirrup_row
from ifccheck.publish.survey_words import state_band, zone_words
from ifccheck.publish.templates import template
from ifccheck.publish.words import CURES, head_of, outline_size
from ifccheck.units import ShownKind


@dataclass(frozen=True, slots=True)
class ReadSheet:
    """A beam with what is drawn of it: the bars that a source gives by place."""

    beam: Beam
    bars: tuple[Bars, ...]
    stirrups: tuple[Stirrups, ...]
    section: Outline | None
    section_x: float
    spans: tuple[RatedSpan, ...] = ()
    loads: tuple[Load, ...] = ()


def read_sheet(beam: Beam) -> ReadSheet:
    """Return what is drawn of a beam, cut in the middle of its length."""
    placed = next((each for each in beam.reinforcement if each.bars or each.stirrups), None)
    middle = beam.length / 2.0
    run = next((run for run in beam.runs if run.start <= middle <= run.end), None)
    return ReadSheet(
        beam=beam,
        bars=placed.bars if placed else (),
        stirrups=placed.stirrups if placed else (),
        section=run.outline if run else None,
        section_x=middle,
    )


def survey_sheet_html(beam: Beam, finding: Finding, foot: str, stands: str = "") -> str:
    """Return the sheet of a beam; ``foot`` is printed at the end of each sheet.

    ``stands`` tells what it would stand on.
    """
    sheet = read_sheet(beam)
    return template("survey_sheet.html.j2").render(
        beam=beam,
        finding=finding,
        band=state_band(finding.state),
        to_state=[(text, CURES.get(head_of(text), "")) for text in finding.to_state],
        facts=beam_facts(
            beam, [("class", f"{beam.ifc_class} #{beam.step_id}"), ("would stand", stands)]
        ),
        elevation=Markup(elevation(sheet)),
        section=Markup(section(sheet)),
        read=list(_read(beam)),
        sources=[_source(beam, i) for i in range(len(beam.reinforcement))],
        remarks=[each for each in _remarks(beam) if each not in finding.doubts],
        foot=foot,
    )


@dataclass(frozen=True, slots=True)
class _Read:
    label: str
    value: str
    source: str


def _read(beam: Beam) -> Iterator[_Read]:
    """What the model says of the beam itself, each with its source."""
    kinds: tuple[tuple[str, Given | None, ShownKind], ...] = (
        ("concrete strength", beam.concrete_strength, "stress"),
        ("density of the concrete", beam.concrete_density, "density"),
        ("cover", beam.cover, "dimension"),
    )
    for label, given, kind in kinds:
        if given is not None:
            yield _Read(label, quantity_words(given.value, kind), given.source)
        else:
            yield _Read(label, "not stated", "")
    for run in beam.runs:
        yield _Read(f"section, x = {metres(run.start)} to {metres(run.end)} m", _run_words(run), "")
    if beam.axis is not None:
        x, y, z = (f"{each / 1000.0:.3f}" for each in beam.axis.origin)
        yield _Read("soffit at the start (x, y, z)", f"{x}, {y}, {z} m", "")


def _run_words(run: Run) -> str:
    outlines = [run.outline, *([run.outline_end] if run.outline_end else [])]
    sizes = " tapering to ".join(dict.fromkeys(f"{outline_size(one)} mm" for one in outlines))
    names = ", ".join(dict.fromkeys(one.name for one in outlines if one.name))
    return f"{sizes} ({names})" if names else sizes


@dataclass(frozen=True, slots=True)
class _Source:
    """What one source says of the reinforcement."""

    name: str
    drawn: bool
    rows: list[SteelRow]
    reasons: tuple[str, ...]


def _source(beam: Beam, index: int) -> _Source:
    source = beam.reinforcement[index]
    drawn = next((i for i, each in enumerate(beam.reinforcement) if each.bars or each.stirrups), -1)
    rows = [
        *(bar_row(each, each.yield_strength) for each in source.bars),
        *(stirrup_row(each, each.yield_strength) for each in source.stirrups),
        *(_zone_row(zone, beam.length) for zone in source.zones),
    ]
    return _Source(source.source, index == drawn, rows, tuple(each.text for each in source.reasons))


def _zone_row(zone: DescribedZone, length: float) -> SteelRow:
    """Reinforcement that is described, in one row: it has no place of its own yet."""
    yields = (zone.bar_yield, *(row.bar_yield for row in zone.rows))
    return SteelRow(
        name="; ".join(zone_words(zone)),
        area="",
        height="",
        start=metres(zone.start if zone.start is not None else 0.0),
        end=metres(zone.end if zone.end is not None else length),
        ends="",
        strength=", ".join(f"{stated:.0f}" for stated in dict.fromkeys(yields) if stated),
        assumed=False,
        origin=zone.origin,
    )


def _remarks(beam: Beam) -> list[str]:
    of_sources = (remark for source in beam.reinforcement for remark in source.remarks)
    return list(dict.fromkeys(remark.text for remark in (*beam.remarks, *of_sources)))
