"""Turns what a run found into reports and files."""

from __future__ import annotations

import math
from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from ifccheck.beam import Beam, Case, Combination, Model, Reason, Remark
from ifccheck.brief.model import Brief
from ifccheck.findings import Finding
from ifccheck.framed import Framed
from ifccheck.outputs import Content
from ifccheck.publish.report import Assumption, CaseSummary, Report
from ifccheck.publish.words import CURES, NO_LOAD, head_of
from ifccheck.rating.answers import ratings_of, unrated, unstated_stirrups
from ifccheck.rating.batch import Batch
from ifccheck.rating.carriers import told_of_carriers
from ifccheck.rating.in_line import held_by_lines
from ifccheck.rating.results import Rating
from ifccheck.rating.subject import Subject, Unrated
from ifccheck.sheet import Sheet, bare_sheet, sheet_maker
from ifccheck.standards import Options, Standard
from ifccheck.subjects import Gathered, yield_unknown

if TYPE_CHECKING:
    from ifccheck.ifc.opening import OpenedModel


def with_beams(model: Model, beams: tuple[Beam, ...]) -> Model:
    """The model with its beams replaced by the same ones, told more of."""
    return replace(model, beams=beams)


def report_of(
    model: Model,
    gathered: Gathered,
    batches: Sequence[Batch],
    remarks: Sequence[Remark],
    *,
    version: str,
    brief: Brief,
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    actions: str,
) -> Report:
    """Gather all that the publishers need of one model."""
    answers = {
        rating.beam: rating for batch in batches for rating in ratings_of(batch, standard, cases)
    }
    answers |= {each.beam.key: unrated(each, standard) for each in gathered.unrated}
    if gathered.framed:
        answers = held_by_lines(answers, gathered.framed.joined)
        answers = told_of_carriers(answers, gathered.framed.carriers)
    ratings = {beam.key: answers[beam.key] for beam in model.beams}
    return Report(
        version=version,
        standard_id=standard.id,
        standard_title=standard.title,
        standard_edition=standard.edition,
        actions=actions,
        shear_method=options.shear_method,
        brief_name=brief.file_name,
        brief_sha256=brief.sha256,
        model=model,
        ratings=ratings,
        sheet=_sheets(model, batches, ratings, cases, gathered.framed),
        spans={subject.beam.key: subject.spans for subject in gathered.subjects},
        cases=tuple(_case(case, gathered, ratings) for case in cases if case.rated),
        combinations=tuple(combinations),
        remarks=tuple(remarks),
        assumptions=_assumptions(ratings.values()),
        framed=gathered.framed,
    )


def _sheets(
    model: Model,
    batches: Sequence[Batch],
    ratings: Mapping[str, Rating],
    cases: Sequence[Case],
    framed: Framed | None,
) -> Callable[[str], Sheet]:
    """A function that makes the sheet of a beam; a batch's details are worked out when first
    asked for."""
    beams = {beam.key: beam for beam in model.beams}
    place = {
        subject.beam.key: (number, row)
        for number, batch in enumerate(batches)
        for row, subject in enumerate(batch.subjects)
    }
    makers: dict[int, Callable[[int], Sheet]] = {}

    def sheet(key: str) -> Sheet:
        if key not in place:
            return bare_sheet(beams[key], ratings[key])
        number, row = place[key]
        if number not in makers:
            batch = batches[number]
            own = [ratings[subject.beam.key] for subject in batch.subjects]
            makers[number] = sheet_maker(batch, own, cases)
        return makers[number](row)

    return (lambda key: replace(sheet(key), line=framed.lines.get(key))) if framed else sheet


def _case(case: Case, gathered: Gathered, ratings: Mapping[str, Rating]) -> CaseSummary:
    """The factor of a rated case over the whole model."""
    reached = list(
        dict.fromkeys(
            [
                *(load.beam for load in gathered.loads if load.case == case.name),
                *(key for key, cases in gathered.through_lines.items() if case.name in cases),
            ]
        )
    )
    factors = {
        key: safe.factor
        for key in reached
        for safe in ratings[key].safe_loads
        if safe.case == case.name
    }
    open_ = tuple(key for key in reached if math.isnan(factors.get(key, math.nan)))
    least = min(factors, key=lambda key: factors[key], default=None) if not open_ else None
    limited = least is not None and math.isfinite(factors[least])
    return CaseSummary(
        case=case.name,
        nature=case.nature,
        factor=math.nan if least is None else factors[least],
        governing_beam=least if limited else None,
        text=_case_text(case.name, least if limited else None, open_, ratings)
        if reached
        else "no beam in scope carries it",
        beams_reached=len(reached),
        unrated_in_path=open_,
    )


def _case_text(
    case: str, governing: str | None, unrated_keys: Sequence[str], ratings: Mapping[str, Rating]
) -> str:
    if unrated_keys:
        beams = "1 beam" if len(unrated_keys) == 1 else f"{len(unrated_keys)} beams"
        return f"cannot be said: an input or a check is not settled of {beams} that it reaches"
    if governing is None:
        return "no beam limits it"
    safe = next(each for each in ratings[governing].safe_loads if each.case == case)
    return safe.governing


_BY_BEAM = {
    "the span is taken from ": "the span is taken from centre to centre of what the beam stands"
    " on, or from its ends: each sheet says which",
    "supported at x = ": "supported by what the model shows under the beam, at its ends or crossing"
    " it: each sheet names what, and the plans mark it",
    "meets ": "meets another beam in one line over a support, and takes no moment from it: each"
    " sheet names it and says why",
    "goes on into ": "goes on into another beam over a support with all moment: each sheet names"
    " it, and the plans show the line",
    "a cantilever of ": "a cantilever: each sheet tells its length, and what it is built into",
    "it hangs over by ": "hangs over past its last support: each sheet tells how far",
}
"""Assumptions that differ only by the members that they name, by how they begin."""
_NAMING = tuple(_BY_BEAM)


def _assumptions(ratings: Iterable[Rating]) -> tuple[Assumption, ...]:
    """Every assumption once, with the beams that it was made for."""
    beams: dict[str, dict[str, None]] = {}
    by_words: dict[str, dict[str, None]] = {}
    for rating in ratings:
        for remark in rating.remarks:
            if remark.kind == "assumption":
                if remark.text not in by_words:
                    by_words[remark.text] = beams.setdefault(_assumed(remark.text), {})
                by_words[remark.text][rating.beam] = None
    return tuple(Assumption(text, tuple(keys)) for text, keys in beams.items())


def _assumed(text: str) -> str:
    if not text.startswith(_NAMING):
        return text
    return next(words for start, words in _BY_BEAM.items() if text.startswith(start))


def files_of(
    opened: OpenedModel, report: Report, out: Path, only: Collection[str]
) -> dict[Path, Content]:
    """Name and make the result files of one model."""
    stem = opened.path.stem.removesuffix("-rated")
    files: dict[Path, Content] = {}
    if "model" in only:
        from ifccheck.ifc.writeback import packed, rated_parts
        from ifccheck.publish.property_sets import result_sets

        parts = rated_parts(opened, result_sets(report))
        files[out / f"{stem}-rated{opened.path.suffix}"] = packed(opened, parts)
    if "html" in only:
        from ifccheck.publish.html import render

        files[out / f"{stem}-rating.html"] = render(report).encode("utf-8")
    if "csv" in only:
        from ifccheck.publish.csv import ratings_csv

        files[out / f"{stem}-rating.csv"] = ratings_csv(report).encode("utf-8")
    if "json" in only:
        from ifccheck.publish.json import json_pieces

        files[out / f"{stem}-rating.json"] = map(str.encode, json_pieces(report))
    return files


def findings_of(
    model: Model,
    gathered: Gathered,
    filled: Gathered,
    unmet: Mapping[str, tuple[str, ...]],
    brief: Brief,
) -> dict[str, Finding]:
    """What a rating of each beam would lack, by key.

    ``gathered`` is by the brief as it is, ``filled`` by the same with all defaults given: it
    shows what else is missing once they are. ``unmet`` is of the information requirement.
    """
    hidden = {each.beam.key: _hidden(each, brief) for each in filled.subjects}
    hidden |= {each.beam.key: list(each.reasons) for each in filled.unrated}
    as_it_is: list[Subject | Unrated] = [*gathered.subjects, *gathered.unrated]
    known = {each.beam.key: each for each in as_it_is}
    return {
        beam.key: _finding(
            (*known[beam.key].reasons, *hidden[beam.key]),
            known[beam.key].remarks,
            unmet.get(beam.key, ()),
            briefed=bool(brief.file_name),
        )
        for beam in model.beams
    }


def _hidden(subject: Subject, brief: Brief) -> list[Reason]:
    """What is missing of a beam's steel once its cover is known."""
    steel = (
        ("bars", subject.bar_yield, brief.defaults.bar_yield),
        ("stirrups", subject.stirrup_yield, brief.defaults.stirrup_yield),
    )
    unknown = [
        yield_unknown(what)
        for what, yields, default in steel
        if default is None and any(given.assumed for given in yields)
    ]
    texts = [Reason(text) for text in (*unknown, *unstated_stirrups(subject))]
    return [*subject.reasons, *texts]


def _finding(
    reasons: Sequence[Reason], remarks: Sequence[Remark], unmet: tuple[str, ...], *, briefed: bool
) -> Finding:
    said = dict.fromkeys(each.text for each in reasons)
    texts = [text for text in said if briefed or text != NO_LOAD]
    to_state = [text for text in texts if head_of(text) in CURES]
    return Finding(
        lacks=tuple(text for text in texts if text not in to_state),
        to_state=tuple(to_state),
        doubts=tuple(dict.fromkeys(each.text for each in remarks if each.kind == "doubt")),
        unmet=unmet,
    )
