"""Which of the slabs that meet a beam count as its flanges, and what the reader must know of it."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from ifccheck.beam import Beam, Flange, Load, Reason, Remark, Run, ShearLoss
from ifccheck.frame.figures import figure_of
from ifccheck.frame.flanges import Meeting
from ifccheck.frame.net_outlines import with_flanges
from ifccheck.units import show

STAGE = "flanges"
NAMED = 3
"""Slabs that a remark names"""
Wanted = Literal["none", "level", "on top"]
"""What the brief lets count: nothing, slab that is level with the beam, also what lies on it"""

ASKED = "(write slab_flange = true for it under [[beams]] where both are cast as one)"
ON_TOP_ASKED = '(write slab_flange = "on top" for it under [[beams]] where both are one)'
NOT_BESIDE = "no level plate of one thickness was found to reach out from the beam"
NOT_INCLUDED = "weight of slab not included"
ROUNDING = 0.005
"""Share of the slab's weight that the loads may fall short by: the engineer writes three digits"""
WEIGHED = "slab that counts as a flange is not in the self weight: [[floors]] lays its weight"
WEIGHT = "slab that counts as a flange is not in the self weight: its weight must be in the loads"


@dataclass(frozen=True, slots=True)
class Asked:
    """What is asked of the slabs that meet a beam."""

    near: tuple[str, ...]
    """Names of the slabs that touch it and might count"""
    meeting: Meeting
    """Looked up only where some slab is wanted"""
    wanted: Wanted
    source: str
    """Where the brief says so"""
    strength: float
    """Of the beam's concrete [MPa]"""
    unit_weight: float
    """[N/mm3]"""
    permanent: Collection[str]
    """Names of the permanent cases"""
    loads_complete: bool = False
    """The engineer states that what rests on the beam is in the loads"""
    weighed: Collection[int] = ()
    """STEP ids of slabs whose self weight is laid on the beams that carry them"""


@dataclass(frozen=True, slots=True)
class Counted:
    """The slab that counts as a flange of a beam."""

    flanges: tuple[Flange, ...] = ()
    source: str = ""
    """Where the brief says so"""
    remarks: tuple[Remark, ...] = ()
    reasons: tuple[Reason, ...] = ()
    """Not blocking: why the loads cannot be all"""

    @property
    def losses(self) -> tuple[ShearLoss, ...]:
        """Where the depth of slab on top of the beam does not carry shear.

        The stirrups are those of the beam, and so is the depth that they serve.
        """
        edges = sorted({x for one in self.flanges for x in (one.start, one.end)})
        found = ((start, end, self._height_on_top(start, end)) for start, end in pairwise(edges))
        return tuple(ShearLoss(*each) for each in found if each[2] > 0.0)

    def _height_on_top(self, start: float, end: float) -> float:
        here = (one for one in self.flanges if one.start < end and one.end > start and one.on_top)
        return max((one.top - one.bottom for one in here), default=0.0)


def counted(beam: Beam, asked: Asked, loads: Sequence[Load]) -> Counted:
    """Choose the slab that counts as a flange of a beam.

    Never for a precast beam, nor where the brief does not ask for it, nor slab of concrete that
    is known to be weaker than the beam's.
    """
    if why := _refused(beam, asked):
        return Counted(remarks=(Remark(beam.key, STAGE, why, "note"),))
    if asked.wanted == "none":
        return Counted(source=asked.source)
    meeting = asked.meeting
    level = [one for one in meeting.flanges if asked.wanted == "on top" or not one.on_top]
    flanges = tuple(one for one in level if not _weaker(one, asked.strength))
    texts = [*_not_counted(meeting, asked, level), *_told(flanges, asked)]
    remarks = [Remark(beam.key, STAGE, text, "assumption") for text in texts]
    unweighed = [one for one in flanges if one.step not in asked.weighed]
    text = _too_light(beam, unweighed, asked, loads) if unweighed else ""
    if text and asked.loads_complete:
        remarks.append(Remark(beam.key, STAGE, text, "doubt"))
    reasons = (Reason(text, blocking=False),) if text and not asked.loads_complete else ()
    return Counted(flanges, asked.source, tuple(remarks), reasons)


def _weaker(flange: Flange, strength: float) -> bool:
    """Whether it is known to be weaker than the beam; so it is where the beam's is not known."""
    return flange.strength is not None and not flange.strength >= strength


def _refused(beam: Beam, asked: Asked) -> str:
    """Why no slab counts at all."""
    if not asked.near or (asked.wanted != "none" and not beam.precast):
        return ""
    more = f" and {len(asked.near) - NAMED} more" if len(asked.near) > NAMED else ""
    slabs = f"{', '.join(asked.near[:NAMED])}{more}"
    if beam.precast:
        return f"slab is never counted as a flange of a precast beam ({beam.precast}): {slabs}"
    return f"slab is not counted as a flange: {slabs} {ASKED}"


def _not_counted(meeting: Meeting, asked: Asked, level: Sequence[Flange]) -> Iterator[str]:
    if asked.wanted == "none":
        return
    known = (*(one.origin for one in meeting.flanges), *meeting.doubts)
    for name in asked.near:
        if not any(text.startswith(name) for text in known):
            yield f"slab is not counted as a flange: {name}: {NOT_BESIDE}"
    for doubt in meeting.doubts:
        yield f"slab is not counted as a flange: {doubt}"
    for origin in dict.fromkeys(one.origin for one in meeting.flanges if one not in level):
        yield f"slab on top is not counted as a flange: {origin} {ON_TOP_ASKED}"
    for one in level:
        if _weaker(one, asked.strength):
            given, needed = (
                show(value, "stress") for value in (one.strength or 0.0, asked.strength)
            )
            yield (
                f"slab is not counted as a flange: {one.origin}, of {given}, less than the"
                f" {needed} of the beam"
            )


def _told(flanges: Sequence[Flange], asked: Asked) -> Iterator[str]:
    """What counts, and by whose word."""
    for one in flanges:
        yield f"slab counts as a flange: {words(one)} ({asked.source})"
    if any(one.strength is None for one in flanges):
        yield "slab that counts as a flange is taken to be of the beam's concrete"
    if any(one.on_top for one in flanges):
        yield "slab on top carries no shear: dv is less by its thickness"
    if any(one.step not in asked.weighed for one in flanges):
        yield WEIGHT
    elif flanges:
        yield WEIGHED


def words(flange: Flange) -> str:
    """A flange for people."""
    where = f"x = {show(flange.start, 'length')} to {show(flange.end, 'length')}"
    across = f"y = {show(flange.right, 'dimension')} to {show(flange.left, 'dimension')}"
    high = f"z = {show(flange.bottom, 'dimension')} to {show(flange.top, 'dimension')}"
    return f"{where}, {across}, {high}: {flange.origin}"


def _too_light(beam: Beam, flanges: Sequence[Flange], asked: Asked, loads: Sequence[Load]) -> str:
    """Say that the permanent loads cannot hold the weight of the slab."""
    added = _area_along(with_flanges(beam.runs, flanges)) - _area_along(beam.runs)
    weight = added * asked.unit_weight
    given = sum(
        (load.values[0] + load.values[1]) / 2.0 * (load.end - load.start)
        if load.kind == "line"
        else load.values[0]
        for load in loads
        if load.kind != "moment" and load.case in asked.permanent
    )
    if given >= (1.0 - ROUNDING) * weight:
        return ""
    pairs = [[show(each, "force", digits) for each in (given, weight)] for digits in (3, 4)]
    said, needed = next((pair for pair in pairs if pair[0] != pair[1]), pairs[-1])
    return (
        f"{NOT_INCLUDED}: the permanent loads, {said} in all, cannot hold that of what counts as"
        f" a flange, {needed}"
    )


def _area_along(runs: Sequence[Run]) -> float:
    return sum((run.end - run.start) * figure_of(run.outline).area for run in runs)
