"""What is said on the terminal: the closing table, the standards."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich.console import Console, Group, RenderableType
from rich.table import Table
from rich.text import Text

from ifccheck.beam import Beam, Verdict
from ifccheck.publish.equilibrium import equilibrium_rows, equilibrium_words, left_out_words
from ifccheck.publish.quantities import metres
from ifccheck.publish.report import Report, ratings_in_order
from ifccheck.publish.terminal_parts import CAUTION, SHORT, Cell, Terminal
from ifccheck.publish.words import (
    ReasonGroup,
    covered_phrases,
    factor_words,
    reason_groups,
    utilisation_words,
)
from ifccheck.rating import Rating

if TYPE_CHECKING:
    from ifccheck.standards import Standard

MOST_LISTED = 25


def closing_table(report: Report, console: Console, written: Iterable[Path] = ()) -> None:
    """Print how many beams have each verdict, which fall short, and where the files are."""
    to = Terminal(console)
    console.print(_counts_line(report, to))
    for phrase, count in covered_phrases(report.ratings.values()):
        console.print(to.text(f"{count} {phrase}; nothing else was checked"))
    for part in (_cases(report, to), _short_beams(report, to), _unrated(report, to)):
        if part is not None:
            console.print(part)
    for line in (*_equilibrium(report, to), *_doubts(report, to)):
        console.print(line)
    console.print(to.text(CAUTION))
    for path in written:
        console.print(to.text(f"  {path}"), soft_wrap=True)


def _equilibrium(report: Report, to: Terminal) -> Iterator[Text]:
    """Whether all that is put on beams which stand in the building comes out at the ground."""
    framed = report.framed
    if framed is None:
        return
    wrong = any(not row.balances for row in equilibrium_rows(framed))
    yield to.text(equilibrium_words(framed), style=SHORT if wrong else "")
    marks = [report.beam(key).mark for key in framed.left_out]
    if left_out := left_out_words(marks):
        yield to.text(left_out)


def _doubts(report: Report, to: Terminal) -> Iterator[Text]:
    """What may undermine the verdicts of the whole run, and how many beams have doubts."""
    doubts = [remark.text for remark in report.remarks if remark.kind == "doubt"]
    yield from (to.text(f"doubt: {text}", style=SHORT) for text in doubts[:MOST_LISTED])
    if (more := len(doubts) - MOST_LISTED) > 0:
        yield to.text(f"and {more} more doubts in the summary", style=SHORT)
    doubted = sum(
        any(remark.kind == "doubt" for remark in rating.remarks)
        for rating in report.ratings.values()
    )
    if doubted:
        yield to.text(
            "1 beam has doubts of its own, on its sheet"
            if doubted == 1
            else f"{doubted} beams have doubts of their own, on their sheets"
        )


def _counts_line(report: Report, to: Terminal) -> Text:
    counts = report.counts
    line = to.text(f"{report.model.file_name}: ")
    short = f"{counts.falls_short} {'falls' if counts.falls_short == 1 else 'fall'} short"
    line.append(short, style=SHORT if counts.falls_short else "")
    return line.append(
        f", {counts.not_rated} not rated, {counts.adequate} adequate"
        f" of {counts.in_scope} in scope; {counts.out_of_scope} out of scope"
    )


def _cases(report: Report, to: Terminal) -> Table | None:
    if not report.cases:
        return None
    rows = []
    for case in report.cases:
        governing = report.beam(case.governing_beam).mark if case.governing_beam else ""
        factor = to.text(factor_words(case.factor), style=SHORT if case.factor < 1.0 else "")
        rows.append((case.case, factor, governing, case.text))
    return to.table(("rated case", ">factor over the model", "governing beam", "limited by"), rows)


def _short_beams(report: Report, to: Terminal) -> RenderableType | None:
    ordered = ratings_in_order(report.ratings.values())
    short = [rating for rating in ordered if rating.verdict is Verdict.FALLS_SHORT]
    if not short:
        return None
    table = to.table(
        ("falls short", "storey", ">utilisation", "governs", ">x [m]", "clause"),
        [_short_row(rating, report.beam(rating.beam), to) for rating in short[:MOST_LISTED]],
    )
    more = len(short) - MOST_LISTED
    return Group(table, Text(f"and {more} more in the summary")) if more > 0 else table


def _short_row(rating: Rating, beam: Beam, to: Terminal) -> list[Cell]:
    used = to.text(utilisation_words(rating.utilisation), style=SHORT)
    worst = rating.governing
    if worst is None:
        return [beam.mark, beam.storey, used, "", "", ""]
    return [beam.mark, beam.storey, used, worst.title, metres(worst.position), worst.clause]


def _unrated(report: Report, to: Terminal) -> Table | None:
    groups = reason_groups(report.ratings.values())
    if not groups:
        return None
    rows = [(_reason(group, to), str(len(group.beams))) for group in groups[:MOST_LISTED]]
    return to.table(("not rated, because", ">beams"), rows)


def _reason(group: ReasonGroup, to: Terminal) -> Text:
    words = to.text(group.text)
    if group.cure:
        words.append("\n").append_text(to.text(f"  to rate them: {group.cure}", style="dim"))
    return words


def standards_table(
    standards: Iterable[tuple[str, Standard | str]], console: Console
) -> RenderableType:
    """Return the standards that a brief can name, and what is wrong with one that fails."""
    to = Terminal(console)
    rows: list[Sequence[Cell]] = []
    for name, standard in standards:
        if isinstance(standard, str):
            rows.append((name, to.text(f"cannot be used: {standard}", style=SHORT), *[""] * 4))
            continue
        checks = ", ".join(state.title for state in standard.limit_states)
        methods = ", ".join(standard.shear_methods)
        rows.append(
            (standard.id, standard.title, standard.edition, standard.actions, methods, checks)
        )
    names = ("standard", "title", "edition", "actions", "shear methods", "checks")
    return to.table(names, rows)
