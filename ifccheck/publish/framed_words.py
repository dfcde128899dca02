"""How beams were stood on what the model shows, in words that all outputs share."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from ifccheck.framed import Framed, FramedEnd, FramedLine, FramedSpan
from ifccheck.publish.quantities import quantity_words
from ifccheck.publish.words import joined
from ifccheck.sheet import CaseShare


def standing_words(framed: Framed, key: str) -> str:
    """Return what a beam stands on, and what it goes on into.

    "on C-1 and G-101; in line with B-2"; or why nothing tells how it stands.
    """
    if key in framed.unknown:
        return f"no way to stand: {_why(framed.unknown[key])}"
    line = framed.lines.get(key)
    if line is None:
        return "its body was not read"
    own = line.of(key)
    told = [_carried(own)]
    if len(own) > 1:
        told.append(f"{len(own)} spans")
    others = [mark for other, mark in line.marks.items() if other != key]
    if others:
        told.append(f"in line with {', '.join(others)}")
    return "; ".join(told)


def _why(reason: str) -> str:
    """A reason without its head, and without the advice on what to write in a brief."""
    return reason.removeprefix("supports unknown: ").partition("; say how its ends stand")[0]


def _carried(spans: Sequence[FramedSpan]) -> str:
    """What carries the spans of one beam, from its start to its end."""
    ends = list(_supports(spans))
    names = [end.carrier_name for end in ends]
    if len(ends) == 1 and ends[0].kind == "fixed":
        return f"built into {names[0]}"
    if len(set(names)) == 1 and len(names) > 1:
        return f"on {names[0]} at {len(names)} places"
    words = f"on {joined(names)}"
    if any(span.hangs_over for span in spans):
        words += ", and hangs over"
    return words


def _supports(spans: Sequence[FramedSpan]) -> Iterator[FramedEnd]:
    """Every support of a beam once: an inner one serves two of its spans."""
    ends = (end for span in spans for end in (span.start, span.end) if end.kind != "free")
    yield from {round(end.x): end for end in ends}.values()


def own_line_words(line: FramedLine | None, key: str) -> str:
    """Return the same of a beam in a line of several spans; empty of any other."""
    return line_words(line, key) if line and len(line.spans) > 1 else ""


def line_words(line: FramedLine, key: str) -> str:
    """Return the spans of a line in their order, the beam's own marked.

    "line of 3 spans: 1 B-1 6.40 m, 2 B-2 6.40 m (this beam), 3 B-3 2.00 m, hangs over"
    """
    spans = ", ".join(_span(i, span, key) for i, span in enumerate(line.spans, 1))
    return f"line of {len(line.spans)} spans: {spans}"


def _span(number: int, span: FramedSpan, key: str) -> str:
    words = f"{number} {span.mark} {quantity_words(span.length, 'length')}"
    if span.hangs_over:
        words += " hanging over"
    return f"{words} (this beam)" if span.beam == key else words


def spans_words(spans: Sequence[int], of: int) -> str:
    """Return which spans of a line are loaded, counted from 0.

    >>> spans_words((0, 2), 3), spans_words((1,), 2), spans_words((0, 1), 2), spans_words((), 2)
    ('on spans 1 and 3 of 3', 'on span 2 of 2', 'on every span', 'on no span')
    """
    if not spans:
        return "on no span"
    if len(spans) == of:
        return "on every span"
    numbers = joined(str(each + 1) for each in spans)
    return f"on {'span' if len(spans) == 1 else 'spans'} {numbers} of {of}"


def acting_words(share: CaseShare) -> str:
    """Return on which spans of its line a case acts, where it may act on some and not on others;
    empty where it acts as a whole, or the beam stands alone and nothing lifts."""
    if not share.of_spans or math.isnan(share.factor):
        return ""
    spans = spans_words(share.spans, share.of_spans) if share.of_spans > 1 else ""
    if share.of_spans > 1 and share.lifting and not share.spans:
        spans = ""
    return ", ".join(filter(None, [spans, lifting_words(share)]))


def lifting_words(share: CaseShare) -> str:
    """Return that beams which rest on this one lift it; empty where none does."""
    if not share.lifting:
        return ""
    where = f" {spans_words(share.lifting, share.of_spans)}" if share.of_spans > 1 else ""
    return f"beams that rest on it lift{where}"
