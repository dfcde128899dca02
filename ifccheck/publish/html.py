"""The HTML summary: one file that shows the whole answer and asks the network for nothing."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from markupsafe import Markup

from ifccheck.beam import Combination, Verdict
from ifccheck.publish.equilibrium import EquilibriumRow, equilibrium_rows, equilibrium_words
from ifccheck.publish.page import MOST_NAMED, Tally, dress, figures, left_out, proportion
from ifccheck.publish.plan import framing_plans
from ifccheck.publish.report import Assumption, CaseSummary, Counts, Report
from ifccheck.publish.rows import (
    Row,
    governing_titles,
    storey_names,
    table_rows,
)
from ifccheck.publish.sheet_html import (
    Block,
    foot_line,
    packed,
    sheet_html,
)
from ifccheck.publish.templates import template
from ifccheck.publish.tint import BANDS
from ifccheck.publish.words import (
    CAUTIONS,
    covered_phrases,
    factor_words,
    reason_groups,
)

WORST = 10


def render(report: Report) -> str:
    """Return the summary as one HTML file."""
    rows = table_rows(report)
    numbers = {row.key: row.number for row in rows}
    tallies = _tallies(report.counts)
    return template("page.html.j2").render(
        **dress(report.framed),
        model=report.model,
        title_block=_title_block(report),
        counts=report.counts,
        tallies=tallies,
        proportion=Markup(proportion([(t.swatch, t.count) for t in tallies[:-1]])),
        covered=covered_phrases(report.ratings.values()),
        worst=[row for row in rows if row.utilisation][:WORST],
        cases=[_case(case, report, numbers) for case in report.cases],
        plans=figures(framing_plans(report.model, report.ratings, numbers, report.framed)),
        legend=[(name, words) for _, name, words in BANDS]
        + [("over", "falls short"), ("none", "not rated")],
        storeys=storey_names(report.model),
        verdicts=[str(verdict) for verdict in Verdict],
        governing=governing_titles(report),
        rows=rows,
        unrated=_unrated(report, rows),
        out_of_scope=left_out(report.model.out_of_scope),
        assumptions=[_assumption(a, report) for a in report.assumptions],
        doubts=[remark for remark in report.remarks if remark.kind == "doubt"],
        remarks=[remark for remark in report.remarks if remark.kind != "doubt"],
        sources=_sources(report),
        equilibrium=_equilibrium(report, numbers),
        most_named=MOST_NAMED,
        combined=_combined(report.combinations),
        combinations=_combinations(report),
        cautions=CAUTIONS,
        foot=foot_line(report),
        blocks=_blocks(report, rows),
    )


def _title_block(report: Report) -> list[tuple[str, str]]:
    return [
        ("model", report.model.file_name),
        ("standard", report.standard_name),
        ("actions", report.actions),
        ("brief", report.brief_name),
        ("model hash", report.model.sha256[:16]),
        ("brief hash", report.brief_sha256[:16]),
    ]


def _sources(report: Report) -> list[tuple[str, str]]:
    return [
        ("standard", report.standard_title),
        ("identifier", report.standard_id),
        ("edition", report.standard_edition),
        ("shear method", report.shear_method),
        ("combinations from", report.actions),
        ("model", f"{report.model.file_name} ({report.model.schema})"),
        ("model SHA-256, without results", report.model.sha256),
        ("brief", report.brief_name),
        ("brief SHA-256", report.brief_sha256),
        ("program", f"ifccheck {report.version}"),
    ]


def _tallies(counts: Counts) -> list[Tally]:
    return [
        Tally("falls-short", "over", counts.falls_short, "falls short"),
        Tally("not-rated", "none", counts.not_rated, "not rated"),
        Tally("adequate", "u3", counts.adequate, "adequate"),
        Tally("out", "out", counts.out_of_scope, "out of scope"),
    ]


@dataclass(frozen=True, slots=True)
class _Case:
    name: str
    nature: str
    kind: str
    factor: str
    row: int | None
    mark: str
    text: str
    reached: int
    unrated: list[tuple[int, str]]
    more: int


def _case(case: CaseSummary, report: Report, numbers: Mapping[str, int]) -> _Case:
    governing = case.governing_beam
    named = case.unrated_in_path[:MOST_NAMED]
    return _Case(
        name=case.case,
        nature=case.nature,
        kind="short" if case.factor < 1.0 else "unknown" if math.isnan(case.factor) else "",
        factor=factor_words(case.factor),
        row=numbers[governing] if governing else None,
        mark=report.beam(governing).mark if governing else "",
        text=case.text,
        reached=case.beams_reached,
        unrated=[(numbers[key], report.beam(key).mark) for key in named],
        more=len(case.unrated_in_path) - len(named),
    )


@dataclass(frozen=True, slots=True)
class _Unrated:
    text: str
    cure: str
    rows: list[Row]


def _unrated(report: Report, rows: Sequence[Row]) -> list[_Unrated]:
    """Reasons, the most frequent first, each with all its beams."""
    by_key = {row.key: row for row in rows}
    groups = reason_groups(report.ratings[row.key] for row in rows)
    return [
        _Unrated(group.text, group.cure, [by_key[key] for key in group.beams]) for group in groups
    ]


@dataclass(frozen=True, slots=True)
class _Assumption:
    text: str
    count: str
    marks: str


def _assumption(assumption: Assumption, report: Report) -> _Assumption:
    if not assumption.beams:
        return _Assumption(assumption.text, "all", "")
    marks = [report.beam(key).mark for key in assumption.beams]
    if len(marks) > MOST_NAMED:
        more = len(marks) - MOST_NAMED
        marks = [*marks[:MOST_NAMED], f"and {more} more"]
    return _Assumption(assumption.text, str(len(assumption.beams)), ", ".join(marks))


@dataclass(frozen=True, slots=True)
class _Equilibrium:
    words: str
    rows: list[EquilibriumRow]
    left_out: list[tuple[int, str]]
    balances: bool


def _equilibrium(report: Report, numbers: Mapping[str, int]) -> _Equilibrium | None:
    framed = report.framed
    if framed is None:
        return None
    rows = equilibrium_rows(framed)
    return _Equilibrium(
        words=(words := equilibrium_words(framed))[0].upper() + words[1:],
        rows=rows,
        left_out=[(numbers[key], report.beam(key).mark) for key in framed.left_out],
        balances=all(row.balances for row in rows),
    )


@dataclass(frozen=True, slots=True)
class _Combination:
    name: str
    kind: str
    labels: str
    factors: list[str]


def _combined(combinations: Iterable[Combination]) -> list[str]:
    return list(dict.fromkeys(case for combination in combinations for case in combination.factors))


def _combinations(report: Report) -> list[_Combination]:
    cases = _combined(report.combinations)
    return [
        _Combination(
            c.name, c.kind, "; ".join(labels), [_factors(c.factors.get(case)) for case in cases]
        )
        for c, labels in zip(report.combinations, report.labels, strict=True)
    ]


def _factors(pair: tuple[float, float] | None) -> str:
    if pair is None:
        return "–"
    unfavourable, favourable = pair
    if unfavourable == favourable:
        return f"{unfavourable:g}"
    return f"{unfavourable:g} / {favourable:g}"


def _blocks(report: Report, rows: Sequence[Row]) -> Iterator[Block]:
    foot = foot_line(report)
    return packed(sheet_html(report.sheet(row.key), foot) for row in rows)
