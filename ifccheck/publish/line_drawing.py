"""The line that a beam belongs to: its spans and supports, and what is loaded where it governs."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise

from ifccheck.framed import FramedEnd, FramedLine
from ifccheck.publish.elevation import LEFT, LETTER_WIDTH, RIGHT, WIDTH
from ifccheck.publish.framed_words import lifting_words, line_words
from ifccheck.publish.plan_layers import mark_data, mark_kind, ring
from ifccheck.publish.quantities import quantity_words
from ifccheck.publish.svg import drawing, label, number, path, segment
from ifccheck.sheet import CaseShare, Sheet

AXIS, ROW = 26.0, 15.0
"""Height of the line on the drawing, and of each row under it."""

Loaded = tuple[str, tuple[int, ...]]
"""Limit states with cases, and the spans that these load where those govern"""


def line_drawing(sheet: Sheet) -> str:
    """Return the line of a beam as a drawing; empty where the beam is a single span alone."""
    line = sheet.line
    if line is None or len(line.spans) < 2:
        return ""
    at = _places(line)
    rows = list(loaded_spans(sheet))
    parts = [*_spans(line, sheet.beam.key, at), *_supports(line, at)]
    for i, (words, spans) in enumerate(rows):
        parts += _row(words, spans, at, AXIS + 22.0 + (i + 1) * 2.0 * ROW)
    height = AXIS + 24.0 + len(rows) * 2.0 * ROW + (8.0 if rows else 0.0)
    return drawing(WIDTH, height, "line", line_words(line, sheet.beam.key), parts)


def _places(line: FramedLine) -> list[float]:
    """Where the ends of the spans are drawn, to scale."""
    total = sum(span.length for span in line.spans) or 1.0
    places, reached = [LEFT], 0.0
    for span in line.spans:
        reached += span.length
        places.append(LEFT + (WIDTH - LEFT - RIGHT) * reached / total)
    return places


def _spans(line: FramedLine, key: str, at: Sequence[float]) -> Iterator[str]:
    for i, (span, (x0, x1)) in enumerate(zip(line.spans, pairwise(at), strict=True), 1):
        own = span.beam == key
        yield path(segment(x0, AXIS, x1, AXIS), "own" if own else "other")
        length = quantity_words(span.length, "length")
        whole = f"{i}: {span.mark}, {length}"
        words = whole if len(whole) * LETTER_WIDTH < x1 - x0 - 6.0 else str(i)
        yield label((x0 + x1) / 2.0, AXIS - 9.0, words, "m title" if own else "m note")


def _supports(line: FramedLine, at: Sequence[float]) -> Iterator[str]:
    first = line.spans[0].ends[0]
    ends = [(first, 1.0), *((span.ends[1], -1.0) for span in line.spans)]
    taken = 0.0
    for (end, inward), x in zip(ends, at, strict=True):
        yield from _mark(end, inward, x)
        name = end.carrier_name
        half = len(name) * LETTER_WIDTH / 2.0
        middle = min(max(x, half + 2.0), WIDTH - half - 2.0)
        if name and middle - half > taken:
            yield label(middle, AXIS + 18.0, name, "m note")
            taken = middle + half + 6.0


def _mark(end: FramedEnd, inward: float, x: float) -> Iterator[str]:
    if end.kind == "free":
        yield path(ring((x, AXIS)), "seat tip")
        return
    yield path(mark_data(end, (x, AXIS), (inward, 0.0)), f"seat {mark_kind(end)}")
    if end.kind == "fixed":
        yield path(segment(x, AXIS - 8.0, x, AXIS + 8.0), "seat held")


def _row(words: str, spans: Sequence[int], at: Sequence[float], y: float) -> Iterator[str]:
    """What a limit state governs under: the loaded spans filled, the others open."""
    yield label(at[0], y - 3.0, words, "note")
    for i, (x0, x1) in enumerate(pairwise(at)):
        kind = "load" if i in spans else "idle"
        yield (
            f'<rect class="{kind}" x="{number(x0 + 1.0)}" y="{number(y)}"'
            f' width="{number(x1 - x0 - 2.0)}" height="7"/>'
        )


def loaded_spans(sheet: Sheet) -> Iterator[Loaded]:
    """With which loaded spans limit states govern, of the cases that act span by span."""
    titles: dict[tuple[str, tuple[int, ...]], list[str]] = {}
    for check in sheet.checks:
        cases: dict[tuple[int, ...], list[str]] = {}
        for share in check.shares:
            if share.of_spans > 1 and (share.spans or share.lifting):
                spans = tuple(sorted({*share.spans, *share.lifting}))
                cases.setdefault(spans, []).append(_case(share))
        for spans, names in cases.items():
            titles.setdefault((", ".join(names), spans), []).append(check.title)
    for (acting, spans), of in titles.items():
        govern = "governs" if len(of) == 1 else "govern"
        yield f"{acting} on the filled spans, where {'; '.join(of)} {govern}", spans


def _case(share: CaseShare) -> str:
    lifting = lifting_words(share)
    return f"{share.case} ({lifting})" if lifting else share.case
