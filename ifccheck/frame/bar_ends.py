"""Bars that pass the end of their beam: what lies in the air beyond it develops nothing.

Where other concrete of the model meets that end, bars go on into it as they are drawn, and no
farther than it reaches where they leave it for the air. Elsewhere
they are taken as ending at the beam's own end, and what passes it by more than a slip of the
drawing cannot be as it is drawn.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Anchor, Bars, Beam, Contact, Member, Reason, Remark, Unmeasured
from ifccheck.frame.boxes import Boxes, Floats, Ints, member_boxes
from ifccheck.frame.carrying import ENDS, End
from ifccheck.frame.contacts import FRAMING, NEAR, TOLERANCE, UPRIGHT, kind_of
from ifccheck.frame.reactions import names_of, unmeasured_near
from ifccheck.units import show

OVERSHOOT = 50.0
"""Bars pass an end by no more than this, or by their own diameter, and are merely drawn a little
too long [mm]"""
SLIP = 1.0
"""What passes an end by no more is at the end: rounding of models [mm]"""
CAST = frozenset((*FRAMING, *UPRIGHT, "IfcSlab", "IfcRoof")) - {"IfcBearing"}
"""Members that bars may run on into"""
_NAMED = 3


class Ended(NamedTuple):
    """Bars as far as they count, and what is to be said of those that were cut."""

    bars: tuple[Bars, ...]
    reasons: tuple[Reason, ...] = ()
    remarks: tuple[Remark, ...] = ()


@dataclass(frozen=True)
class Surroundings:
    """The concrete round the beams of a model."""

    members: Sequence[Member]
    left_out: Collection[int] = frozenset()
    """Step ids of beams that are known not to be of concrete"""

    @cached_property
    def _cast(self) -> tuple[list[Member], Boxes]:
        cast = [
            member
            for member in self.members
            if kind_of(member.ifc_class) in CAST and member.step_id not in self.left_out
        ]
        return cast, member_boxes(cast).grown(TOLERANCE)

    def meets(self, contact: Contact, end: End) -> bool:
        """Whether a contact is one of concrete with the face of an end."""
        return (
            contact.place == end
            and contact.side == "end"
            and kind_of(contact.other_class) in CAST
            and contact.other_step not in self.left_out
        )

    def hold(self, points: Floats, but: int) -> bool:
        """Whether every place (N, 3) lies in a member other than that of a step id."""
        members, boxes = self._cast
        return all(
            any(members[row].step_id != but and _in_plan(members[row], point) for row in rows)
            for point in points
            for rows in [_holding(boxes, point).tolist()]
        )


def _holding(boxes: Boxes, point: Floats) -> Ints:
    """Rows of the boxes that a place lies in."""
    within = np.abs(np.einsum("mkd,md->mk", boxes.axes, point - boxes.centre)) <= boxes.half
    return np.flatnonzero(within.all(axis=1))


def _in_plan(member: Member, point: Floats) -> bool:
    """Whether a place in a member's box lies in its outline in plan, where it does not fill it."""
    if not member.plan:
        return True
    from shapely import Point, Polygon

    return bool(Polygon(member.plan).distance(Point(point[:2])) <= TOLERANCE)


def ended_in_concrete(
    beam: Beam,
    bars: Sequence[Bars],
    contacts: Sequence[Contact],
    around: Surroundings,
    unmeasured: Sequence[Unmeasured],
) -> Ended:
    """End bars at the ends of their beam beyond which there is no concrete of the model.

    Parameters
    ----------
    beam, bars, contacts
        The bars and the contacts of one beam.
    around
        What stands round it.
    unmeasured
        Members of the model that nobody knows the place of: where one may stand there, it is a
        doubt and no reason that bars lie in the air.
    """
    ended = Ended(tuple(bars))
    for end in ENDS:
        if not any(_reach(beam, bar, end) > SLIP for bar in ended.bars):
            continue
        met = [contact for contact in contacts if around.meets(contact, end)]
        if met:
            ended = _ended_beyond(beam, ended, end, max(each.beyond for each in met), around)
        else:
            ended = _ended(beam, ended, end, around, unmeasured)
    return ended


def _ended_beyond(beam: Beam, so_far: Ended, end: End, depth: float, around: Surroundings) -> Ended:
    """End straight bars that run out of what meets an end, on its far side, into the air.

    ``depth`` is how far that reaches beyond the end [mm].
    """
    bars, passing = list(so_far.bars), list[tuple[float, Bars]]()
    for row, bar in enumerate(bars):
        past = _past(beam, bar, end)
        goes_on = bar.start_beyond if end == "start" else bar.end_beyond
        if past > depth + SLIP and not goes_on and not _tip_is_held(beam, bar, end, around):
            bars[row] = _cut_at(beam, bar, end, depth)
            passing.append((past - depth, bar))
    if not passing:
        return so_far
    text = f"{_told(passing, end)}: past what meets it there, taken as ending in that"
    return Ended(tuple(bars), so_far.reasons, (*so_far.remarks, _doubt(beam, text)))


def _tip_is_held(beam: Beam, bar: Bars, end: End, around: Surroundings) -> bool:
    tip = _past(beam, bar, end) - TOLERANCE
    return _is_at(beam, bar, -tip if end == "start" else beam.length + tip, around)


def _cut_at(beam: Beam, bar: Bars, end: End, depth: float) -> Bars:
    if end == "start":
        return replace(bar, start=-depth, start_anchor=Anchor.STRAIGHT)
    return replace(bar, end=beam.length + depth, end_anchor=Anchor.STRAIGHT)


def _ended(
    beam: Beam, so_far: Ended, end: End, around: Surroundings, unmeasured: Sequence[Unmeasured]
) -> Ended:
    """End bars at one end, where they do not go on into a member."""
    bars, passing = list(so_far.bars), list[tuple[float, Bars]]()
    for row, bar in enumerate(bars):
        reach = _reach(beam, bar, end)
        if reach > SLIP and not _is_held(beam, bar, end, around):
            bars[row] = _cut(beam, bar, end)
            if _past(beam, bar, end) > -SLIP:
                passing.append((reach, bar))
    long = [(reach, bar) for reach, bar in passing if reach > max(OVERSHOOT, bar.diameter)]
    short = [each for each in passing if each not in long]
    reasons, remarks = list(so_far.reasons), list(so_far.remarks)
    near = unmeasured_near(beam, unmeasured) if long else []
    if long and not near:
        reasons.append(Reason(f"{_told(long, end)}, {_IN_THE_AIR}", blocking=False))
    elif long:
        remarks.append(
            _doubt(beam, f"{_told(long, end)}: counted to there alone, {_unknown(near)}")
        )
    if short:
        remarks.append(_doubt(beam, f"{_told(short, end)}: taken as ending there"))
    return Ended(tuple(bars), tuple(reasons), tuple(remarks))


def _doubt(beam: Beam, text: str) -> Remark:
    return Remark(beam.key, "reinforcement", text, "doubt")


_IN_THE_AIR = (
    "where no concrete of the model meets it: draw the bars to end within the beam, or model what"
    " they run on into"
)


def _past(beam: Beam, bar: Bars, end: End) -> float:
    """How far a bar's own stretch passes an end; less than nothing where it stops before [mm].

    What lies beyond the end from its one end to the other passes nothing.
    """
    if bar.end <= 0.0 or bar.start >= beam.length:
        return -np.inf
    return -bar.start if end == "start" else bar.end - beam.length


def _reach(beam: Beam, bar: Bars, end: End) -> float:
    """The most that a bar may pass an end by, with what goes on bent or in other bars [mm]."""
    return _past(beam, bar, end) + (bar.start_beyond if end == "start" else bar.end_beyond)


def _is_held(beam: Beam, bar: Bars, end: End, around: Surroundings) -> bool:
    """Whether bars go on into a member, at most a joint beyond the end."""
    beyond = min(_reach(beam, bar, end), NEAR + TOLERANCE)
    return _is_at(beam, bar, -beyond if end == "start" else beam.length + beyond, around)


def _is_at(beam: Beam, bar: Bars, x: float, around: Surroundings) -> bool:
    """Whether a member holds all of some bars at a place along a beam."""
    axis = beam.axis
    if axis is None:
        return False
    frame = np.array([axis.x, axis.y, axis.z])
    places = np.array([[x, y, bar.z] for y in bar.ys])
    return around.hold(np.array(axis.origin) + places @ frame, beam.step_id)


def _cut(beam: Beam, bar: Bars, end: End) -> Bars:
    """The bars as far as they surely lie before an end; a hook beyond it holds nothing.

    What goes on bent before the end is at least as long as the way to the end.
    """
    within = max(-_past(beam, bar, end), 0.0)
    hooked = _past(beam, bar, end) <= SLIP
    if end == "start":
        return replace(
            bar,
            start=max(bar.start, 0.0),
            start_beyond=min(bar.start_beyond, within),
            start_anchor=bar.start_anchor if hooked else Anchor.STRAIGHT,
        )
    return replace(
        bar,
        end=min(bar.end, beam.length),
        end_beyond=min(bar.end_beyond, within),
        end_anchor=bar.end_anchor if hooked else Anchor.STRAIGHT,
    )


def _told(passing: Sequence[tuple[float, Bars]], end: End) -> str:
    """Which bars pass an end, and by how much."""
    names = list(dict.fromkeys(bar.origin for _, bar in passing))
    more = f" and {len(names) - _NAMED} more rows" if len(names) > _NAMED else ""
    farthest = show(max(reach for reach, _ in passing), "dimension")
    by = f"by up to {farthest}" if len(passing) > 1 else f"by {farthest}"
    return f"{', '.join(names[:_NAMED])}{more}: beyond the {end} of the beam {by}"


def _unknown(near: Sequence[Unmeasured]) -> str:
    names = names_of(near)
    more = f" and {len(names) - _NAMED} more" if len(names) > _NAMED else ""
    return f"since nothing tells where {', '.join(names[:_NAMED])}{more} stands"
