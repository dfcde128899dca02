"""How beams stand in lines: spans from support to support, overhangs and cantilevers, as the
model shows them and the brief says."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from graphlib import TopologicalSorter
from operator import attrgetter
from typing import NamedTuple

from ifccheck.beam import Contact, Model, Reason, Remark, SupportKind
from ifccheck.frame import told
from ifccheck.frame.beam_lines import BeamLine, EndKind, LineSpan, SpanEnd, chains
from ifccheck.frame.carrying import ENDS, End, Stated, judged_contacts
from ifccheck.frame.contacts import TOLERANCE
from ifccheck.frame.ground_up import Joint, Order, order_of, told_against, without_free
from ifccheck.frame.joints import meeting_ends
from ifccheck.frame.seats import Cluster, Seat, clusters_of, corbels, crossings, seat_of
from ifccheck.frame.spanning import Spanning, all_spanning

RunsThrough = Callable[[Joint, Joint], bool]
"""Whether moment passes from one end of a beam to that of another over their support: by bars
that run through, or by the brief"""


class Lines(NamedTuple):
    """How all beams of a model stand."""

    lines: tuple[BeamLine, ...]
    unknown: Mapping[str, Reason]
    """Of each beam with a readable body that is in no line, why"""
    seats: Mapping[str, tuple[Seat, ...]]
    """Of all that spans, out of scope too ("#" and step id), in order along it"""
    order: tuple[str, ...]
    """All that stands: what carries comes before what it carries"""
    crossing: Mapping[str, tuple[Reason, ...]]
    """Doubts on beams that cross others at one level"""
    remarks: Mapping[str, tuple[Remark, ...]]


class _Frame(NamedTuple):
    """What lines are made of."""

    bodies: Mapping[str, Spanning]
    clusters: Mapping[str, Sequence[Cluster]]
    meeting: Mapping[Joint, Joint]
    joints: Mapping[Joint, Joint]
    """Those that meet and pass moment on"""
    stated: Stated
    order: Order


def find_lines(
    model: Model,
    contacts: Mapping[str, Sequence[Contact]],
    others: Mapping[str, Sequence[Contact]],
    stated: Stated,
    runs_through: RunsThrough,
) -> Lines:
    """Stand all beams of a model, from the ground up.

    Parameters
    ----------
    model
        As it was read.
    contacts
        Of its beams, by key, as ``find_contacts`` gives them; without those that the brief says
        do not hold a beam.
    others
        Of what else spans, as ``contacts_of_others`` gives them.
    stated
        What the brief's entries say of ends.
    runs_through
        Whether moment passes from one end to another that meets it over their support.
    """
    everything = {**contacts, **others}
    judged = judged_contacts(everything, model.beams, model.out_of_scope)
    members = {member.step_id: member for member in model.members}
    bodies = all_spanning(model.beams, members, others)
    crossed = crossings(judged, bodies)
    clusters = {
        key: without_free(
            clusters_of(body, judged[key], members, crossed.deeper.get(key, {})),
            stated.get(key, {}),
        )
        for key, body in bodies.items()
    }
    keys = [beam.key for beam in model.beams if beam.axis is not None and beam.runs]
    meeting = meeting_ends({key: clusters[key] for key in keys}, bodies)
    joints = {one: other for one, other in meeting.items() if runs_through(one, other)}
    order = order_of(clusters, stated, joints, corbels(judged, bodies))
    frame = _Frame(bodies, clusters, meeting, joints, stated, order)
    seats = {key: _seats(frame, key) for key in clusters}
    unknown, spans = _standing(frame, keys, seats)
    return Lines(
        lines=tuple(chains(spans, joints, bodies)),
        unknown=unknown,
        seats=seats,
        order=_carriers_first(seats, order),
        crossing={key: tuple(map(told.crossing, own)) for key, own in crossed.level.items()},
        remarks={key: tuple(_remarks(frame, key, seats[key], own)) for key, own in spans.items()},
    )


def _seats(frame: _Frame, key: str) -> tuple[Seat, ...]:
    body, order, said = frame.bodies[key], frame.order, frame.stated.get(key, {})
    found: list[Seat] = []
    for cluster in frame.clusters[key]:
        held = [each for each in cluster.candidates if not order.speaks_against(key, each)]
        if held:
            found.append(seat_of(body, cluster, held))
        elif cluster.place not in said:
            doubt = told_against(key, cluster, order)
            found.append(seat_of(body, cluster, cluster.candidates, doubt))
    places = {seat.place for seat in found}
    stated = [end for end in ENDS if said.get(end, "free") != "free" and end not in places]
    found += [_by_word(body, end) for end in stated]
    return tuple(sorted(found, key=_x))


_x = attrgetter("x")


def _by_word(body: Spanning, end: End) -> Seat:
    """The seat of an end of which the brief alone says that it is held."""
    x = 0.0 if end == "start" else body.length
    return Seat(body.key, end, x, x, x, 0, "the brief", "", "", "end", direct=False, built_in=False)


def _standing(
    frame: _Frame, keys: Sequence[str], seats: Mapping[str, Sequence[Seat]]
) -> tuple[dict[str, Reason], dict[str, tuple[LineSpan, ...]]]:
    """Why beams do not stand, and the spans of those that do."""
    rounds = frame.order.rounds
    unknown: dict[str, Reason] = {}
    for key in sorted(keys, key=lambda key: rounds.get(key, len(rounds))):
        if why := _why_not(frame, key, seats[key], unknown):
            unknown[key] = Reason(f"supports unknown: {why}")
    spans = {}
    for key in keys:
        if key not in unknown:
            joined = [end for end, other in _joined(frame, key) if other not in unknown]
            spans[key] = tuple(
                _spans(frame.bodies[key], seats[key], joined, frame.stated.get(key, {}))
            )
    return unknown, spans


def _joined(frame: _Frame, key: str) -> list[tuple[End, str]]:
    return [(end, frame.joints[key, end][0]) for end in ENDS if (key, end) in frame.joints]


def _why_not(frame: _Frame, key: str, seats: Sequence[Seat], unknown: Mapping[str, Reason]) -> str:
    """Why nothing tells how a beam stands; empty where it is told."""
    for cluster in frame.clusters[key]:
        if cluster.whole:
            return told.lies_along(cluster.candidates[0].contact)
    doubted = [seat for seat in seats if seat.doubt]
    if doubted:
        return told.unsure(doubted)
    if key not in frame.order.rounds:
        return told.no_way(seats)
    if len(seats) == 1 and not _holds_alone(seats[0], frame.stated.get(key, {})):
        leans_on = [other for _, other in _joined(frame, key)]
        if any(other in unknown for other in leans_on):
            return told.leans(frame.bodies[leans_on[0]].told)
    return ""


def _holds_alone(seat: Seat, said: Mapping[End, SupportKind]) -> bool:
    place = seat.place
    if place == "between":
        return False
    return said[place] == "fixed" if place in said else seat.built_in


def _spans(
    body: Spanning, seats: Sequence[Seat], joined: Sequence[End], said: Mapping[End, SupportKind]
) -> Iterator[LineSpan]:
    """Spans of one beam, in its own x."""
    first, last = seats[0], seats[-1]
    tips = SpanEnd("free", 0.0, 0.0), SpanEnd("free", body.length, body.length)
    if len(seats) == 1 and first.place not in joined:
        if first.place == "start":
            yield LineSpan(body.key, SpanEnd("fixed", first.high, first.high, first), tips[1])
        else:
            yield LineSpan(body.key, tips[0], SpanEnd("fixed", first.low, first.low, first))
        return
    kinds: list[EndKind] = ["continuous"] * len(seats)
    if not (hangs_over_start := first.place != "start" and first.low > TOLERANCE):
        kinds[0] = _kind("start", joined, said)
    if not (hangs_over_end := last.place != "end" and last.high < body.length - TOLERANCE):
        kinds[-1] = _kind("end", joined, said)
    starts = [
        SpanEnd(kind, seat.x, max(seat.high, 0.0), seat)
        for kind, seat in zip(kinds, seats, strict=True)
    ]
    ends = [
        SpanEnd(kind, seat.x, min(seat.low, body.length), seat)
        for kind, seat in zip(kinds, seats, strict=True)
    ]
    if hangs_over_start:
        yield LineSpan(body.key, tips[0], ends[0])
    for start, end in zip(starts[:-1], ends[1:], strict=True):
        yield LineSpan(body.key, start, end)
    if hangs_over_end:
        yield LineSpan(body.key, starts[-1], tips[1])


def _kind(end: End, joined: Sequence[End], said: Mapping[End, SupportKind]) -> EndKind:
    return "continuous" if end in joined else said.get(end, "pinned")


def _remarks(
    frame: _Frame, key: str, seats: Sequence[Seat], spans: Sequence[LineSpan]
) -> Iterator[Remark]:
    """What an engineer must see of how a beam was stood."""
    for seat in seats:
        if seat.carrier:
            yield told.supported(seat)
    for span in spans:
        if "free" in (span.start.kind, span.end.kind):
            yield told.hangs_over(span.beam, span.start, span.end)
    for seat in seats:
        if seat.place != "between" and (key, seat.place) in frame.meeting:
            other = frame.bodies[frame.meeting[key, seat.place][0]].told
            goes_on = any(
                end.kind == "continuous" and end.seat is seat
                for span in spans
                for end in (span.start, span.end)
            )
            yield told.meets(seat, other, goes_on=goes_on)


def _carriers_first(seats: Mapping[str, Sequence[Seat]], order: Order) -> tuple[str, ...]:
    """All that stands, what carries before what it carries."""
    below = {
        key: {seat.carrier_beam for seat in seats[key] if not seat.doubt} & order.rounds.keys()
        for key in order.rounds
    }
    return tuple(TopologicalSorter(below).static_order())
