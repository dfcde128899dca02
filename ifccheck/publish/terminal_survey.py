"""What a survey says on the terminal: each group of equal beams, then the whole model."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable, Iterator, Sequence

from rich.console import Console, Group, RenderableType
from rich.text import Text

from ifccheck.beam import Beam
from ifccheck.findings import State, Survey
from ifccheck.publish.framed_words import standing_words
from ifccheck.publish.survey_words import (
    Told,
    bars_words,
    doubts_of,
    missing_of,
    source_words,
    strength_words,
    to_state_of,
    unmet_of,
    what_settles,
)
from ifccheck.publish.terminal_parts import SHORT, Cell, Terminal
from ifccheck.publish.words import head_of, section_words

MOST_GROUPS, MOST_LISTED, MOST_UNMET = 60, 12, 4
COLUMNS = (">beams", "section", "concrete", "steel", "missing for a rating; doubts")

_Key = tuple[str, ...]
"""What the beams of a group have in common, the storey first"""


def survey_text(survey: Survey, console: Console) -> RenderableType:
    """Return what a model holds and what a rating of its beams would lack."""
    to = Terminal(console)
    parts: list[RenderableType] = [to.text(_heading(survey), style="bold")]
    if left_out := _left_out(survey):
        parts.append(to.text(f"Out of scope: {left_out}"))
    if survey.model.beams:
        parts += [_table(survey, to), *_whole(survey, to)]
    parts += _model_remarks(survey, to)
    return Group(*parts)


def _heading(survey: Survey) -> str:
    model = survey.model
    in_scope = f"{_beams(len(model.beams))} in scope" if model.beams else "no concrete beam"
    return f"{model.file_name} ({model.schema}): {in_scope}"


def _left_out(survey: Survey) -> str:
    reasons = Counter(member.reason for member in survey.model.out_of_scope)
    return ", ".join(f"{count} {reason}" for reason, count in sorted(reasons.items()))


def _table(survey: Survey, to: Terminal) -> RenderableType:
    """One row for each group of beams of a storey that read alike, or, of many, by their steel."""
    beams = survey.model.beams
    groups = _grouped(beams, _fine)
    if len(groups) > MOST_GROUPS:
        groups = _grouped(beams, _coarse)
    heights = {storey.name: storey.elevation for storey in survey.model.storeys}
    by_storey: dict[str, list[list[Cell]]] = {}
    for key in sorted(groups, key=lambda key: (heights.get(key[0], math.inf), key)):
        by_storey.setdefault(key[0], []).append(_row(groups[key], survey, to))
    titled = [(name or "no storey", rows) for name, rows in by_storey.items()]
    return to.tables(COLUMNS, titled)


def _grouped(beams: Sequence[Beam], key: Callable[[Beam], _Key]) -> dict[_Key, list[Beam]]:
    groups: dict[_Key, list[Beam]] = {}
    for beam in beams:
        groups.setdefault(key(beam), []).append(beam)
    return groups


def _fine(beam: Beam) -> _Key:
    return beam.storey, _section(beam), strength_words(beam), beam.material, source_words(beam)


def _coarse(beam: Beam) -> _Key:
    return beam.storey, source_words(beam)


def _section(beam: Beam) -> str:
    return section_words(beam) or "not read"


def _row(beams: Sequence[Beam], survey: Survey, to: Terminal) -> list[Cell]:
    strengths = _one_or_count([strength_words(beam) for beam in beams], "strengths")
    materials = _one_or_count([beam.material or "no material" for beam in beams], "materials")
    concrete = to.text(strengths).append("\n").append_text(to.text(materials))
    sections = _one_or_count([_section(beam) for beam in beams], "sections")
    return [
        str(len(beams)), sections, concrete, source_words(beams[0]), _findings(beams, survey, to),
    ]  # fmt: skip


def _one_or_count(words: Sequence[str], noun: str) -> str:
    distinct = dict.fromkeys(words)
    return next(iter(distinct)) if len(distinct) == 1 else f"{len(distinct)} {noun}"


def _findings(beams: Sequence[Beam], survey: Survey, to: Terminal) -> Text:
    lines = [to.text(_share(each, beams)) for each in missing_of(survey, beams)]
    states = to_state_of(survey, beams)
    if states:
        told = ", ".join(_share(each, beams) for each in states)
        lines.append(to.text(f"brief to state: {told}"))
    for each in doubts_of(survey, beams):
        head = head_of(each.shown)
        short = Told(head, head, each.beams)
        lines.append(to.text(f"doubt: {_share(short, beams)}", style=SHORT))
    return Text("\n").join(lines) if lines else to.text("nothing missing")


def _share(told: Told, beams: Sequence[Beam]) -> str:
    count = len(told.beams)
    return told.shown if count == len(beams) else f"{told.shown} ({count} of {len(beams)})"


def _whole(survey: Survey, to: Terminal) -> Iterator[RenderableType]:
    """What holds for the model as a whole."""
    beams = survey.model.beams
    if missing := missing_of(survey, beams)[:MOST_LISTED]:
        rows = [(_count(told), told.shown, what_settles(told.text)) for told in missing]
        yield to.table((">beams", "missing for a rating", "what settles it"), rows)
    if doubts := doubts_of(survey, beams)[:MOST_LISTED]:
        yield to.table((">beams", "doubt"), [(_count(told), told.shown) for told in doubts])
    yield from _standing(survey, to)
    ready = len(beams) - survey.count(State.INCOMPLETE)
    doubtful = survey.count(State.DOUBTFUL)
    doubts_only = f" ({doubtful} with doubts)" if doubtful else ""
    loads = "" if survey.brief_name else " Loads are the brief's to give."
    yield to.text(f"Nothing missing: {ready} of {_beams(len(beams))}{doubts_only}.{loads}")
    lost = survey.bars_in_file and not survey.beams_with_bars
    yield to.text(bars_words(survey), style=SHORT if lost else "")
    yield to.text(_requirement(survey))


def _standing(survey: Survey, to: Terminal) -> Iterator[RenderableType]:
    """What every beam would stand on, those first that have no way to stand."""
    framed = survey.framed
    if framed is None:
        return
    beams = sorted(survey.model.beams, key=lambda beam: beam.key in framed.lines)
    rows = [(beam.mark, standing_words(framed, beam.key)) for beam in beams[:MOST_GROUPS]]
    yield to.table(("beam", "would stand, by the model"), rows)
    if (more := len(beams) - MOST_GROUPS) > 0:
        yield to.text(f"and {more} more, on the page that --out writes")


def _count(told: Told) -> str:
    return str(len(told.beams))


def _requirement(survey: Survey) -> str:
    """How many beams meet the information requirement, and what most often is unmet."""
    told = f"Information requirement met: {survey.meeting} of {_beams(len(survey.model.beams))}"
    first = [f"{each.shown} ({len(each.beams)})" for each in unmet_of(survey)[:MOST_UNMET]]
    return told + (f"; unmet most often: {', '.join(first)}." if first else ".")


def _model_remarks(survey: Survey, to: Terminal) -> Iterator[RenderableType]:
    for remark in survey.model.remarks:
        style = SHORT if remark.kind == "doubt" else ""
        yield to.text(f"{remark.kind}: {remark.text}", style=style)


def _beams(count: int) -> str:
    return "1 beam" if count == 1 else f"{count} beams"
