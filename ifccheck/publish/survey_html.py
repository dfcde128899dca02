"""The page of a survey: the engineer's first look at what a model holds."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from markupsafe import Markup

from ifccheck.beam import Beam
from ifccheck.findings import State, Survey
from ifccheck.publish.page import Tally, dress, figures, left_out, proportion
from ifccheck.publish.plan import Look, storey_plans
from ifccheck.publish.quantities import metres, quantity_words
from ifccheck.publish.rows import storey_names
from ifccheck.publish.sheet_html import packed
from ifccheck.publish.survey_sheet import survey_sheet_html
from ifccheck.publish.survey_words import (
    Told,
    bars_words,
    doubts_of,
    gist,
    lack_words,
    missing_of,
    source_words,
    stands_words,
    state_band,
    state_words,
    strength_words,
    to_state_of,
    unmet_of,
    what_settles,
)
from ifccheck.publish.templates import template
from ifccheck.publish.words import CAUTIONS_OF_A_SURVEY, section_words

MOST_FIRST = 6
"""Things missing, and doubts, that are named at the top of the page."""


def render_survey(survey: Survey) -> str:
    """Return a survey as one HTML file."""
    beams = survey.model.beams
    rows = _rows(survey)
    by_key = {row.key: row for row in rows}
    numbers = {row.key: row.number for row in rows}
    missing = [_listed(told, by_key) for told in missing_of(survey, beams)]
    foot = _foot(survey)
    return template("survey.html.j2").render(
        **dress(survey.framed),
        model=survey.model,
        title_block=_title_block(survey),
        beams=len(beams),
        briefed=bool(survey.brief_name),
        tallies=_tallies(survey),
        proportion=Markup(proportion([(state_band(each), survey.count(each)) for each in State])),
        missing=missing,
        doubts=[_listed(told, by_key) for told in doubts_of(survey, beams)],
        most=MOST_FIRST,
        to_state=[_listed(told, by_key) for told in to_state_of(survey, beams)],
        plans=figures(storey_plans(survey.model, _looks(survey), numbers, survey.framed)),
        legend=[(state_band(each), str(each)) for each in State],
        storeys=storey_names(survey.model),
        states=[str(each) for each in State],
        sources=_sources_of_steel(beams),
        rows=rows,
        meeting=survey.meeting,
        bars=bars_words(survey),
        unmet=[_listed(told, by_key) for told in unmet_of(survey)],
        out_of_scope=left_out(survey.model.out_of_scope),
        model_doubts=[each for each in survey.model.remarks if each.kind == "doubt"],
        remarks=[each for each in survey.model.remarks if each.kind != "doubt"],
        origins=_origins(survey),
        cautions=CAUTIONS_OF_A_SURVEY,
        foot=foot,
        blocks=packed(
            survey_sheet_html(row.beam, survey.of(row.beam), foot, row.stands) for row in rows
        ),
    )  # fmt: skip


def _title_block(survey: Survey) -> list[tuple[str, str]]:
    return [
        ("model", survey.model.file_name),
        ("schema", survey.model.schema),
        ("brief", survey.brief_name or "none yet"),
        ("model hash", survey.model.sha256[:16]),
    ]


def _origins(survey: Survey) -> list[tuple[str, str]]:
    brief = [("brief SHA-256", survey.brief_sha256)] if survey.brief_sha256 else []
    return [
        ("model", f"{survey.model.file_name} ({survey.model.schema})"),
        ("model SHA-256, without results", survey.model.sha256),
        ("brief", survey.brief_name or "none yet"),
        *brief,
        ("program", f"ifccheck {survey.version}"),
    ]


def _foot(survey: Survey) -> str:
    brief = f" · brief {survey.brief_name} {survey.brief_sha256[:12]}" if survey.brief_name else ""
    return (
        f"survey of {survey.model.file_name} · model {survey.model.sha256[:12]}{brief}"
        f" · ifccheck {survey.version}"
    )


def _tallies(survey: Survey) -> list[Tally]:
    kinds = {State.INCOMPLETE: "incomplete", State.DOUBTFUL: "doubtful", State.COMPLETE: "whole"}
    return [
        *(Tally(kinds[each], state_band(each), survey.count(each), str(each)) for each in State),
        Tally("out", "out", len(survey.model.out_of_scope), "out of scope"),
    ]


@dataclass(frozen=True, slots=True)
class _Row:
    """One line of the table of beams."""

    number: int
    beam: Beam
    key: str
    mark: str
    storey: str
    storey_index: int
    section: str
    length: str
    state: str
    state_index: int
    band: str
    lacks: str
    doubts: str
    to_state: str
    strength: str
    strength_value: str
    steel: str
    steel_index: int
    meets: str
    stands: str


def _rows(survey: Survey) -> list[_Row]:
    """Rows by state, what is missing first, then by storey as in the model."""
    storeys = {name: i for i, name in enumerate(storey_names(survey.model))}
    steel = {name: i for i, name in enumerate(_sources_of_steel(survey.model.beams))}
    states = {state: i for i, state in enumerate(State)}
    ordered = sorted(
        survey.model.beams, key=lambda b: (states[survey.of(b).state], storeys[b.storey])
    )
    return [_row(i, beam, survey, storeys, steel, states) for i, beam in enumerate(ordered)]


def _row(
    i: int,
    beam: Beam,
    survey: Survey,
    storeys: Mapping[str, int],
    steel: Mapping[str, int],
    states: Mapping[State, int],
) -> _Row:
    strength, finding = beam.concrete_strength, survey.of(beam)
    return _Row(
        number=i,
        beam=beam,
        key=beam.key,
        mark=beam.mark,
        storey=beam.storey,
        storey_index=storeys[beam.storey],
        section=section_words(beam) or "not read",
        length=metres(beam.length) if beam.length else "",
        state=str(finding.state),
        state_index=states[finding.state],
        band=state_band(finding.state),
        lacks="; ".join(map(lack_words, finding.lacks)),
        doubts="; ".join(map(gist, finding.doubts)),
        to_state=", ".join(state_words(finding)),
        strength=strength_words(beam),
        strength_value=repr(strength.value) if strength else "",
        steel=source_words(beam),
        steel_index=steel[source_words(beam)],
        meets=f"{len(finding.unmet)} unmet" if finding.unmet else "met",
        stands=stands_words(survey, beam),
    )


def _sources_of_steel(beams: Iterable[Beam]) -> list[str]:
    return sorted({source_words(beam) for beam in beams})


def _looks(survey: Survey) -> dict[str, Look]:
    return {beam.key: _look(beam, survey) for beam in survey.model.beams}


def _look(beam: Beam, survey: Survey) -> Look:
    """How a beam is drawn, and all that was read of it in a few words."""
    section, finding = section_words(beam) or "section not read", survey.of(beam)
    told = [f"{beam.mark}: {section}", f"concrete {strength_words(beam)}",
            f"steel from {source_words(beam)}", str(finding.state)]  # fmt: skip
    told += [f"missing: {lack_words(text)}" for text in finding.lacks]
    told += [f"doubt: {gist(text)}" for text in finding.doubts]
    told += filter(None, [stands_words(survey, beam)])
    return Look(state_band(finding.state), "; ".join(told), more=_in_words(beam))


def _in_words(beam: Beam) -> tuple[str, ...]:
    """What was read of a beam, in ever fewer words."""
    strength = beam.concrete_strength
    read = [section_words(beam).replace(" × ", "×")]
    read += [quantity_words(strength.value, "stress")] if strength else []
    read += [each.source for each in beam.reinforcement]
    known = list(filter(None, read))
    return tuple(", ".join(known[:count]) for count in range(len(known), 0, -1))


@dataclass(frozen=True, slots=True)
class _Listed:
    text: str
    cure: str
    rows: Sequence[_Row]


def _listed(told: Told, rows: Mapping[str, _Row]) -> _Listed:
    cure = what_settles(told.text)
    return _Listed(told.shown, cure, [rows[key] for key in told.beams])
