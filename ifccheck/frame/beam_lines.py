"""Lines of beams that act as one member, joined from the spans of each."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from itertools import pairwise
from typing import NamedTuple

from ifccheck.beam import EndKind
from ifccheck.frame.ground_up import Joint
from ifccheck.frame.seats import Seat
from ifccheck.frame.spanning import Spanning

SAME = 1.0
"""Lengths that differ by no more are the same [mm]."""


class SpanEnd(NamedTuple):
    """One end of a span; places along the beam's own x [mm]."""

    kind: EndKind
    x: float
    """The centre of the support, the face that a cantilever is built into, or the tip"""
    face: float
    """The face of the support towards the span; the tip is its own face"""
    seat: Seat | None = None
    """What carries the beam there; None at a tip"""


class LineSpan(NamedTuple):
    """A span, an overhang or a cantilever; ``start`` lies before ``end`` in the beam's own x."""

    beam: str
    start: SpanEnd
    end: SpanEnd
    reversed: bool = False
    """The beam's x runs against the line"""

    @property
    def length(self) -> float:
        """[mm]."""
        return self.end.x - self.start.x

    @property
    def ends(self) -> tuple[SpanEnd, SpanEnd]:
        """Its two ends in the order of the line."""
        return (self.end, self.start) if self.reversed else (self.start, self.end)


class Node(NamedTuple):
    """A tip or a support of a line."""

    kind: EndKind
    seats: tuple[Seat, ...]
    """Of the beam, or of the two that meet there; none at a tip"""
    spring: float = 0.0
    """What its columns need to turn, in units of the beam's E [mm3]; of a continuous one"""


class LineBeam(NamedTuple):
    """A beam of a line."""

    key: str
    reversed: bool
    """Its x runs against the line"""


class BeamLine(NamedTuple):
    """Beams that act as one member, in order along it."""

    beams: tuple[LineBeam, ...]
    spans: tuple[LineSpan, ...]
    nodes: tuple[Node, ...]
    """One more than spans: node n lies between spans n - 1 and n"""


def chains(
    spans: Mapping[str, Sequence[LineSpan]],
    joints: Mapping[Joint, Joint],
    bodies: Mapping[str, Spanning],
) -> Iterator[BeamLine]:
    """Lines of beams.

    A line runs as the x of its beams does, or of the greater length of them.

    Parameters
    ----------
    spans
        Of each beam that stands, by key and in its own x.
    joints
        Ends that go on into each other.
    bodies
        By key.
    """
    links = {one: other for one, other in joints.items() if one[0] in spans and other[0] in spans}
    placed: set[str] = set()
    for key in spans:
        if key not in placed:
            beams = _directed(_chain(key, links), bodies)
            placed |= {beam.key for beam in beams}
            yield _line(beams, spans)


def _chain(key: str, links: Mapping[Joint, Joint]) -> tuple[LineBeam, ...]:
    """The beams of the line that one belongs to, as its own x runs."""
    after = _followers(key, links, onward=True)
    before = _followers(key, links, onward=False)
    return (*before[::-1], LineBeam(key, reversed=False), *after)


def _followers(key: str, links: Mapping[Joint, Joint], *, onward: bool) -> list[LineBeam]:
    """The beams that follow one beyond its end, or its start."""
    found: list[LineBeam] = []
    leaving: Joint = (key, "end" if onward else "start")
    while leaving in links and links[leaving][0] != key:
        other, entered = links[leaving]
        found.append(LineBeam(other, reversed=(entered == "end") == onward))
        leaving = (other, "start" if entered == "end" else "end")
    return found


def _directed(beams: tuple[LineBeam, ...], bodies: Mapping[str, Spanning]) -> tuple[LineBeam, ...]:
    if len(beams) == 1:
        return beams
    excess = sum([bodies[key].length * (-1.0 if against else 1.0) for key, against in beams])
    if excess > SAME:
        return beams
    back = tuple([LineBeam(key, not against) for key, against in reversed(beams)])
    if excess < -SAME:
        return back
    return min(beams, back, key=lambda each: (bodies[each[0].key].told, each[0].key))


def _line(beams: tuple[LineBeam, ...], spans: Mapping[str, Sequence[LineSpan]]) -> BeamLine:
    along: list[LineSpan] = []
    for key, against in beams:
        if against:
            along += [span._replace(reversed=True) for span in reversed(spans[key])]
        else:
            along += spans[key]
    return BeamLine(beams, tuple(along), tuple(_nodes(along)))


def _nodes(spans: Sequence[LineSpan]) -> Iterator[Node]:
    first, last = spans[0].ends[0], spans[-1].ends[1]
    yield _node(first)
    for before, after in pairwise(spans):
        one, other = before.ends[1], after.ends[0]
        meeting = (one.seat,) if one.seat is other.seat else (one.seat, other.seat)
        yield Node("continuous", tuple([seat for seat in meeting if seat]))
    yield _node(last)


def _node(end: SpanEnd) -> Node:
    return Node(end.kind, (end.seat,) if end.seat else ())
