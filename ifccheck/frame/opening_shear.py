"""The rule by which a beam is rated in shear at its openings, or not.

It is ours, on the cautious side of what is published:

- An opening right through the web is small where neither its height nor its length exceeds a
  quarter of the beam's depth, and where the chord above and the chord below are each a quarter of
  the depth or more. Somes and Corley (1974) found circular openings of up to a quarter of the
  web's depth small, and Mansur and Tan (Concrete Beams with Openings, 1999) such as are circular
  or nearly square and no longer than the deeper chord (both from memory). There the crack runs
  through the opening, and concrete and stirrups carry shear over the depth less the opening's
  height: dv - do (Mansur and Tan, from memory). As such a crack may begin beside the opening, that
  holds over half a depth on either side as well. A notch that leaves no chord is measured alike.
- An opening that only narrows the web is small where it takes a quarter of the web's width at the
  most; where it lies within the web, its length is limited as well. Width is that of what is left.
- Within one depth of the face of a support (half of the depth in Tan and Mansur, ACI Structural
  Journal 93-S37, 1996) or of a change of the section, within half a depth of a concentrated load
  (same paper), where openings less than a depth apart are together too high or too long, and where
  a stirrup's leg is cut, nothing is small. What is not small is not rated in shear, over its length
  and half a depth on either side.
- Openings one above the other leave a chord between them, which is measured as well. Recesses that
  take the web's whole width only together are not small.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from ifccheck.beam import (
    Beam,
    Contact,
    Load,
    Opening,
    RatedSpan,
    Reason,
    Run,
    ShearLoss,
    Stirrups,
)
from ifccheck.frame.figures import Stretch, figure_of, levels_of, narrowest, parts_of
from ifccheck.frame.net_outlines import NOTHING, place_of, without
from ifccheck.units import show

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

SMALL = 0.25
"""Greatest height and length of a small opening over the depth, and greatest share of the width
of the web that one which narrows it may take"""
LEAST_CHORD = 0.25
"""Least depth of what is left above and below, over the depth"""
DISTURBED = 1.0
"""Depths from the face of a support within which sections are disturbed already"""
BESIDE = 0.5
"""Depths on either side of an opening over which a crack may run into it"""
OFF_MIDDLE = 1.0
"""How far from the middle of the outline the web may stand for its stirrups to be known by half
their width [mm]"""
APART = 1.0
"""Depths between two openings from which on each stands alone"""

RULE = (  # its figures from memory
    "rule for openings: small up to a quarter of the depth in height and in length, with chords of"
    " a quarter of the depth or more, one depth off a support and a change of the section, half a"
    " depth off a concentrated load; there shear is carried over dv less the opening's height,"
    " over its length and half a depth on either side (after Mansur and Tan, Concrete Beams with"
    " Openings, 1999, on the cautious side); openings in a row less than a depth"
    " apart, and such as lie one above another, are judged together; what is not small is not rated"
    " in shear; flexure is that of the outline which is left"
)


@dataclass(frozen=True, slots=True)
class Surroundings:
    """What stands near the openings of a beam."""

    spans: Sequence[RatedSpan]
    """Of the beam, in their order along it"""
    loads: Sequence[Load]
    stirrups: Sequence[Stirrups]
    changes: Sequence[float] = ()
    """Where the section of the beam changes, or begins to taper [mm]"""
    resting: Sequence[Contact] = ()
    """Members that may bring a reaction to it, whatever loads stand for that"""


@dataclass(frozen=True, slots=True)
class Measured:
    """What one opening does to the outline of its beam."""

    opening: Opening
    depth: float
    hole: float
    """Height of what is right through [mm]"""
    notch: float
    """Height of what is taken off the top and the soffit [mm]"""
    chord: float
    """Depth of the shallowest part that it leaves with those above and below it [mm]"""
    web: float
    """Width of the web [mm]"""
    narrowed: float
    """What the web is narrowed by [mm]"""
    within: bool
    """It lies within the web, with concrete on both sides"""
    middle: float
    """y of the middle of the web [mm]"""
    shared: float = 0.0
    """Height over which only those side by side take the whole width [mm]"""

    @property
    def height(self) -> float:
        """What is taken off the depth [mm]"""
        return self.hole + self.notch

    @property
    def matters(self) -> bool:
        """Whether it takes anything of the web"""
        return max(self.height, self.narrowed, self.shared) > NOTHING


@dataclass(frozen=True, slots=True)
class Judged:
    """An opening and what speaks against rating shear there."""

    measured: Measured
    faults: tuple[str, ...] = ()
    """Why it is not small"""

    @property
    def reason(self) -> Reason:
        """Why the beam is not rated in shear there."""
        text = (
            f"not rated in shear at the {place_of(self.measured.opening)}: {'; '.join(self.faults)}"
        )
        return Reason(text, blocking=False)


def judged_openings(beam: Beam, around: Surroundings) -> list[Judged]:
    """Every opening with what speaks against it."""
    measured = [_measured(beam, opening) for opening in beam.openings]
    return [
        Judged(one, tuple(_faults(one, measured, around)) if one.matters else ())
        for one in measured
    ]


def _measured(beam: Beam, opening: Opening) -> Measured:
    """What it does where that is worst."""
    found = [
        _measured_in(run, opening, beam.openings)
        for run in beam.runs
        if run.start < opening.end and run.end > opening.start
    ]
    return max(found, key=lambda one: (one.height / one.depth, one.narrowed / one.web))


def _measured_in(run: Run, opening: Opening, openings: Sequence[Opening]) -> Measured:
    """What an opening takes off a run; the web is narrowed by all that lie side by side."""
    whole = figure_of(run.outline)
    beside = [one for one in openings if one.start < opening.end and one.end > opening.start]
    left = without(whole, beside)
    (low, high), levels = (whole.bounds[1], whole.bounds[3]), levels_of(without(whole, [opening]))
    web, (right, leftmost) = narrowest(whole)
    return Measured(
        opening=opening,
        depth=high - low,
        hole=levels[-1][1] - levels[0][0] - _covered(levels),
        notch=levels[0][0] - low + high - levels[-1][1],
        chord=min((top - bottom for bottom, top in levels_of(left)), default=0.0),
        web=web,
        narrowed=max(web - _least_width(left), 0.0),
        within=right < opening.right - NOTHING and opening.left < leftmost - NOTHING,
        middle=(right + leftmost) / 2.0,
        shared=sum(_covered(levels_of(without(whole, [one]))) for one in beside)
        - (len(beside) - 1) * _covered(levels_of(whole))
        - _covered(levels_of(left)),
    )


def _covered(levels: Sequence[Stretch]) -> float:
    return sum(top - bottom for bottom, top in levels)


def _least_width(figure: BaseGeometry) -> float:
    return narrowest(figure)[0] if parts_of(figure) else 0.0


def _faults(one: Measured, everyone: Sequence[Measured], around: Surroundings) -> Iterator[str]:
    opening, depth = one.opening, one.depth
    length = opening.end - opening.start
    if one.height > SMALL * depth + NOTHING:
        yield f"its height of {show(one.height, 'dimension')} is more than {SMALL:g} of the depth"
    if (one.height > NOTHING or one.within) and length > SMALL * depth + NOTHING:
        yield f"its length of {show(length, 'dimension')} is more than {SMALL:g} of the depth"
    if one.hole > NOTHING and one.chord < LEAST_CHORD * depth - NOTHING:
        yield f"a chord of {show(one.chord, 'dimension')} is less than {LEAST_CHORD:g} of the depth"
    if one.narrowed > SMALL * one.web + NOTHING:
        yield f"it takes {show(one.narrowed, 'dimension')} of the web, more than {SMALL:g} of it"
    if one.shared > NOTHING:
        height = show(one.shared, "dimension")
        yield f"with those beside it, it takes the whole web over {height} of height"
    if one.narrowed > NOTHING and (leg := _cut_leg(one, around.stirrups)):
        yield leg
    yield from _near_support(one, around)
    yield from _near_change(one, around.changes)
    yield from _near_load(one, around.loads)
    yield from _near_member(one, around.resting)
    yield from _near_others(one, everyone)


def _near_support(one: Measured, around: Surroundings) -> Iterator[str]:
    reach = DISTURBED * one.depth - NOTHING
    first, last = around.spans[0], around.spans[-1]
    if first.span.start_support.kind != "free" and one.opening.start - first.faces[0] < reach:
        yield "it lies within one depth of the support at the start"
    if last.span.end_support.kind != "free" and last.faces[1] - one.opening.end < reach:
        yield "it lies within one depth of the support at the end"
    for before, after in pairwise(around.spans):
        low, high = before.faces[1] - reach, after.faces[0] + reach
        if one.opening.end > low and one.opening.start < high:
            place = show(before.span.end, "length")
            yield f"it lies within one depth of the support at x = {place}"


def _near_change(one: Measured, changes: Sequence[float]) -> Iterator[str]:
    """Beside a step, or where a chord turns, the depth that carries shear is disturbed already."""
    reach = DISTURBED * one.depth - NOTHING
    near = [x for x in changes if one.opening.start - reach < x < one.opening.end + reach]
    if near:
        yield f"it lies within one depth of where the section changes ({show(near[0], 'length')})"


def _near_load(one: Measured, loads: Sequence[Load]) -> Iterator[str]:
    near = {load.origin for load in loads if load.travel or _is_concentrated_beside(one, load)}
    if near:
        yield f"a concentrated load stands within half a depth of it ({', '.join(sorted(near))})"


def _near_member(one: Measured, resting: Sequence[Contact]) -> Iterator[str]:
    near = {contact.other for contact in resting if _is_concentrated_beside(one, contact)}
    if near:
        yield f"within half a depth of it a member meets the beam ({', '.join(sorted(near))})"


def _is_concentrated_beside(one: Measured, what: Load | Contact) -> bool:
    """Whether something acts within half a depth of an opening, on less than a depth."""
    reach = BESIDE * one.depth - NOTHING
    near = what.start < one.opening.end + reach and what.end > one.opening.start - reach
    return near and what.end - what.start < one.depth


def _near_others(one: Measured, everyone: Sequence[Measured]) -> Iterator[str]:
    near = [
        other
        for other in everyone
        if other.height > NOTHING
        and other.opening.start - one.opening.end < APART * one.depth - NOTHING
        and one.opening.start - other.opening.end < APART * one.depth - NOTHING
    ]
    total = sum(other.height for other in near)
    if len(near) > 1 and one.height > NOTHING and total > SMALL * one.depth + NOTHING:
        yield (
            f"{len(near)} openings less than a depth apart take {show(total, 'dimension')}"
            f" together, more than {SMALL:g} of the depth"
        )
    length = _length_of([other.opening for other in near])
    if len(near) > 1 and one.height > NOTHING and length > SMALL * one.depth + NOTHING:
        yield (
            f"{len(near)} openings less than a depth apart are {show(length, 'dimension')} long"
            f" together, more than {SMALL:g} of the depth"
        )


def _length_of(openings: Sequence[Opening]) -> float:
    """How much of the beam's length some openings take [mm]."""
    length, place = 0.0, -math.inf
    for one in sorted(openings, key=lambda each: each.start):
        length += max(one.end - max(one.start, place), 0.0)
        place = max(place, one.end)
    return length


def _cut_leg(one: Measured, stirrups: Sequence[Stirrups]) -> str:
    """Say that a leg of a stirrup runs through the opening, or may do so."""
    opening = one.opening
    for zone in stirrups:
        if zone.end <= opening.start or zone.start >= opening.end:
            continue
        if zone.half_width is None or zone.legs != 2 or abs(one.middle) > OFF_MIDDLE:
            return "where the legs of the stirrups run is not known"
        outer, inner = zone.half_width, zone.half_width - zone.diameter
        for near, far in ((inner, outer), (-outer, -inner)):
            if opening.right < far and near < opening.left:
                return "a leg of the stirrups would run through it"
    return ""


def losses_of(judged: Judged) -> Iterator[ShearLoss]:
    """Where an opening takes depth from what carries shear.

    Within a notch the outline itself is the less deep one.
    """
    one = judged.measured
    if not one.matters:
        return
    start, end, beside = one.opening.start, one.opening.end, BESIDE * one.depth
    if judged.faults:
        yield ShearLoss(start - beside, end + beside, math.nan)
    elif one.height > NOTHING:
        yield ShearLoss(start - beside, start, one.height)
        yield ShearLoss(start, end, one.hole)
        yield ShearLoss(end, end + beside, one.height)


def told(judged: Judged) -> str:
    """What an opening is, and how it is rated."""
    return f"{_described(judged.measured)}: {_verdict(judged)}"


def _described(one: Measured) -> str:
    opening = one.opening
    size = f"{show(opening.end - opening.start, 'dimension')} long"
    high = f"z = {show(opening.bottom, 'dimension')} to {show(opening.top, 'dimension')}"
    across = f"y = {show(opening.right, 'dimension')} to {show(opening.left, 'dimension')}"
    return f"{place_of(opening)}, {size}, {high}, {across} ({opening.origin})"


def _verdict(judged: Judged) -> str:
    one = judged.measured
    if not one.matters:
        return "lies in the flange alone and takes nothing from the web"
    if judged.faults:
        return "not small"
    if one.height > NOTHING:
        return f"small: it takes {show(one.height, 'dimension')} off the shear depth"
    return f"small: it narrows the web by {show(one.narrowed, 'dimension')}"
