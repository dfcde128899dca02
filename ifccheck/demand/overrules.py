"""What the brief states of spans that the model shows: restraint, bearings and lengths."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence, Set
from typing import Literal, NamedTuple

from ifccheck.beam import Given
from ifccheck.frame.beam_lines import BeamLine, LineSpan, Node, SpanEnd
from ifccheck.frame.seats import Seat

Restraint = Literal["pinned", "fixed", "columns"]
Springs = Callable[[Seat], float]
"""What the columns at a seat need to turn, in units of the beam's E [mm3]"""


def no_spring(seat: Seat) -> float:
    """Hold no moment at any seat."""
    return 0.0


class Overrules(NamedTuple):
    """What the engineer says of how beams stand, by key."""

    restraint: Restraint = "pinned"
    """How an end of a line stands that runs into a column or a wall"""
    bearings: Mapping[tuple[str, str], float] = {}
    """Width of the bearing at an end ("start", "end") of a beam [mm]"""
    sizes: Mapping[str, tuple[float, float]] = {}
    """Depth of the beams, half of which a span reaches into a wide bearing at most, and length
    [mm]"""
    spans: Mapping[str, Given] = {}
    """Length of the span of a beam [mm]"""
    stated: Set[tuple[str, str]] = frozenset()
    """Ends of beams that entries of the brief speak of"""
    springs: Springs = no_spring
    """Where columns restrain ends"""


def overruled(lines: Sequence[BeamLine], said: Overrules) -> tuple[BeamLine, ...]:
    """The lines as the engineer says that they stand."""
    return tuple(_overruled(line, said) for line in lines)


def several_spans(lines: Sequence[BeamLine], said: Overrules) -> list[str]:
    """Keys of beams of which one span is stated, and which make several or go on."""
    return [
        beam.key
        for line in lines
        if len(line.spans) > 1
        for beam in line.beams
        if beam.key in said.spans
    ]


def _overruled(line: BeamLine, said: Overrules) -> BeamLine:
    spans = tuple(_span(span, said) for span in line.spans)
    if len(spans) == 1 and spans[0].beam in said.spans:
        spans = (_stated(spans[0], said.spans[spans[0].beam].value),)
    first, last = spans[0].ends[0], spans[-1].ends[1]
    nodes = [*line.nodes]
    nodes[0], nodes[-1] = _node(nodes[0], first), _node(nodes[-1], last)
    return BeamLine(line.beams, spans, tuple(_sprung(node, said) for node in nodes))


def _sprung(node: Node, said: Overrules) -> Node:
    if node.kind != "continuous" or not node.seats:
        return node
    return node._replace(spring=said.springs(node.seats[0]))


def _node(node: Node, end: SpanEnd) -> Node:
    return Node(end.kind, (end.seat,) if end.seat and len(node.seats) < 2 else node.seats)


def _span(span: LineSpan, said: Overrules) -> LineSpan:
    return span._replace(
        start=_end(span, span.start, "start", said), end=_end(span, span.end, "end", said)
    )


def _end(span: LineSpan, end: SpanEnd, which: str, said: Overrules) -> SpanEnd:
    if end.seat is None:
        return end
    seat = end.seat
    end = _restrained(end, seat, said)
    width = said.bearings.get((span.beam, which), 0.0)
    if not width or seat.place != which:
        return end
    return _borne(end, which, width, *said.sizes[span.beam])


def _restrained(end: SpanEnd, seat: Seat, said: Overrules) -> SpanEnd:
    """An end of which the brief says nothing, as it is restrained."""
    if end.kind != "pinned" or (seat.beam, seat.place) in said.stated:
        return end
    if said.restraint == "fixed" and seat.built_in:
        return end._replace(kind="fixed")
    return end._replace(kind="continuous") if said.springs(seat) > 0.0 else end


def _borne(end: SpanEnd, which: str, width: float, depth: float, length: float) -> SpanEnd:
    """An end on a bearing of stated width: within the beam where that lies on it, beyond the end
    where that meets its face."""
    seat = end.seat
    assert seat is not None
    if not seat.carrier:
        return end._replace(face=width if which == "start" else length - width)
    half, lies_on = min(width, depth) / 2.0, seat.way == "below"
    if which == "start":
        low = max(seat.low, 0.0) if lies_on else seat.high - width
        high, face, centre = low + width, low + width, low + width - half
    else:
        high = min(seat.high, length) if lies_on else seat.low + width
        low, face, centre = high - width, high - width, high - width + half
    face = min(max(face, 0.0), length)
    x = face if end.kind == "fixed" and end.x == end.face else centre
    return SpanEnd(end.kind, x, face, seat._replace(low=low, high=high, x=centre))


def _stated(span: LineSpan, length: float) -> LineSpan:
    """A cantilever's is counted from the face, any other lies centred."""
    start, end = span.start, span.end
    if end.kind == "free":
        return span._replace(end=end._replace(x=start.x + length))
    if start.kind == "free":
        return span._replace(start=start._replace(x=end.x - length))
    middle = (start.x + end.x) / 2.0
    return span._replace(
        start=start._replace(x=middle - length / 2.0), end=end._replace(x=middle + length / 2.0)
    )
