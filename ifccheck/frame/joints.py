"""Ends of beams in one line that meet over the same support, or face to face within it."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from itertools import chain
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Bars, Beam
from ifccheck.frame.boxes import Bools, Floats, Ints, section_extent
from ifccheck.frame.carrying import End, Stated
from ifccheck.frame.contacts import TOLERANCE
from ifccheck.frame.ground_up import Joint
from ifccheck.frame.seats import LEVEL, Candidate, Cluster, Seat
from ifccheck.frame.spanning import Spanning

OFF_LINE = 50.0
"""Axes up to so far apart sideways are in one line; so are soffits or tops in height [mm]."""

WIDEST_JOINT = 1500.0
"""Ends farther apart are two supports, however wide what stands between them [mm]."""


BY_THE_BRIEF = "the brief says that its end holds none"
BY_THE_OTHERS = "the brief says that the other's end holds none"
ON_ITS_OWN = "each of the two stands on something of its own"
"""Why moment does not pass over a support where bars, or the brief, would have it"""


class Meeting(NamedTuple):
    """An end of a beam that meets that of another over the same support."""

    beam: str
    end: End
    other: str
    other_end: End
    far: float
    """The face of the support that is the farther one from the beam, in its own x [mm]"""


RunsThrough = Callable[[Meeting], bool]
"""Whether a beam passes moment on into the one that it meets, by its own bars or by the brief"""


class _Ends(NamedTuple):
    """Ends of beams that something may carry (E)."""

    joints: Sequence[Joint]
    place: Floats
    """The soffit's middle [mm] (E, 3)"""
    outward: Floats
    """Unit vector along the beam, out of its end (E, 3)"""
    depth: Floats
    """[mm] (E)"""
    row: Ints
    """Row of the end of each of its carriers (C)"""
    carrier: Ints
    """Step id (C)"""
    reach: Floats
    """How far it reaches beyond the end [mm] (C)"""


def meeting_ends(
    clusters: Mapping[str, Sequence[Cluster]], bodies: Mapping[str, Spanning]
) -> dict[Joint, Joint]:
    """Pairs of ends that meet in one line over what may carry both, each under both its ends.

    Parameters
    ----------
    clusters
        Where each beam may be carried.
    bodies
        By key.
    """
    ends = _ends(clusters, bodies)
    if len(ends.joints) < 2:
        return {}
    best: dict[int, tuple[float, int]] = {}
    for one, other, off in _in_line(ends, *_near(ends)):
        if one not in best or off < best[one][0]:
            best[one] = (off, other)
    return {
        ends.joints[one]: ends.joints[other]
        for one, (_, other) in best.items()
        if other in best and best[other][1] == one
    }


def continuous_joints(
    meeting: Mapping[Joint, Joint],
    clusters: Mapping[str, Sequence[Cluster]],
    runs_through: RunsThrough,
) -> dict[Joint, Joint]:
    """Those pairs of ends over which moment passes, by what either beam has there."""
    passing = {
        one for one, other in meeting.items() if runs_through(_meeting(one, other, clusters))
    }
    return {one: other for one, other in meeting.items() if one in passing or other in passing}


def stated_apart(joints: Mapping[Joint, Joint], stated: Stated) -> dict[Joint, str]:
    """Why ends do not go on into each other, of one of which the brief says that it holds none.

    One that the brief says is fixed goes on: the other beam is then what holds it.
    """
    said = {(key, end) for key, ends in stated.items() for end in ends if ends[end] != "fixed"}
    own = {one: BY_THE_BRIEF for one in joints if one in said}
    return {one: BY_THE_OTHERS for one, other in joints.items() if other in said} | own


def carried_apart(
    joints: Mapping[Joint, Joint], seats: Mapping[str, Sequence[Seat]]
) -> dict[Joint, str]:
    """Why ends do not go on into each other that different beams carry, or a beam and what stands.

    What either brings down is then its own, and goes to what carries it.
    """
    of_end = {(key, seat.place): seat for key, _ in joints for seat in seats[key]}
    found: dict[Joint, str] = {}
    for one, other in joints.items():
        own, others = of_end.get(one), of_end.get(other)
        if not own or not others or own.doubt or others.doubt:
            continue
        if own.carrier_beam != others.carrier_beam:
            found[one] = ON_ITS_OWN
    return found


def _meeting(one: Joint, other: Joint, clusters: Mapping[str, Sequence[Cluster]]) -> Meeting:
    both = _candidates(one, clusters)
    if len(both) == 1:
        return Meeting(*one, *other, both[0].high if one[1] == "end" else both[0].low)
    there = {each.contact.other_step for each in _candidates(other, clusters)}
    both = [each for each in both if each.contact.other_step in there]
    if one[1] == "end":
        return Meeting(*one, *other, max([each.high for each in both]))
    return Meeting(*one, *other, min([each.low for each in both]))


def _candidates(joint: Joint, clusters: Mapping[str, Sequence[Cluster]]) -> Sequence[Candidate]:
    key, end = joint
    for cluster in clusters[key]:
        if cluster.place == end:
            return cluster.candidates
    return ()


def by_bars(beams: Mapping[str, Beam], bars: Mapping[str, Sequence[Bars]]) -> RunsThrough:
    """Let moment pass where bars near the top of a beam reach past the support.

    Parameters
    ----------
    beams
        By key, each with runs.
    bars
        The bars that each beam is rated with, by its key.
    """

    def runs_through(meeting: Meeting) -> bool:
        *_, low, high = section_extent(beams[meeting.beam])
        top = [bar for bar in bars.get(meeting.beam, ()) if bar.z > (low + high) / 2.0]
        if meeting.end == "end":
            return any(bar.end >= meeting.far for bar in top)
        return any(bar.start <= meeting.far for bar in top)

    return runs_through


def _ends(clusters: Mapping[str, Sequence[Cluster]], bodies: Mapping[str, Spanning]) -> _Ends:
    joints: list[Joint] = []
    carriers: list[float] = []
    beams: list[int] = []
    for beam, (key, own) in enumerate(clusters.items()):
        for cluster in own:
            if cluster.place != "between" and not cluster.whole:
                beams.append(beam)
                for candidate in cluster.candidates:
                    contact = candidate.contact
                    carriers += (len(joints), contact.other_step, contact.beyond)
                joints.append((key, cluster.place))
    numbers = ((*b.origin, *b.x, b.length, b.depth) for b in map(bodies.__getitem__, clusters))
    axes = np.fromiter(chain.from_iterable(numbers), np.float64, 8 * len(clusters))
    axes = axes.reshape(-1, 8)[beams]
    at_end = np.array([end == "end" for _, end in joints], np.bool_)[:, None]
    table = np.array(carriers, np.float64).reshape(-1, 3)
    return _Ends(
        joints,
        place=axes[:, :3] + np.where(at_end, axes[:, 6:7], 0.0) * axes[:, 3:6],
        outward=np.where(at_end, 1.0, -1.0) * axes[:, 3:6],
        depth=axes[:, 7],
        row=table[:, 0].astype(np.intp),
        carrier=table[:, 1].astype(np.intp),
        reach=table[:, 2],
    )


def _near(ends: _Ends) -> tuple[Ints, Ints]:
    """Rows of the pairs of ends with a carrier in common that may reach across it.

    Every carrier has a field of its own beside those of the others, so that one tree finds them
    all.
    """
    import shapely

    rows = ends.row
    _, field = np.unique(ends.carrier, return_inverse=True)
    x, y, _ = ends.place[rows].T
    reach = np.minimum(ends.reach, WIDEST_JOINT) + OFF_LINE
    x = x + field * (np.ptp(x) + 4.0 * WIDEST_JOINT)
    tree = shapely.STRtree(shapely.points(x, y))
    one, other = tree.query(shapely.box(x - reach, y - reach, x + reach, y + reach))
    different = rows[one] != rows[other]
    return rows[one[different]], rows[other[different]]


def _in_line(ends: _Ends, one: Ints, other: Ints) -> Iterator[tuple[int, int, float]]:
    """Those pairs that are in one line, and how far each is from being so exactly [mm]."""
    way, between = ends.outward[one], ends.place[other] - ends.place[one]
    gap = np.einsum("pd,pd->p", way, between)
    away = between - gap[:, None] * way
    side = np.hypot(away[:, 0], away[:, 1])
    soffits = np.abs(away[:, 2])
    tops = np.abs(away[:, 2] + ends.depth[other] - ends.depth[one])
    height = np.minimum(soffits, tops)
    turned = np.linalg.norm(way + ends.outward[other], axis=1)
    fits: Bools = (turned <= LEVEL) & (side <= OFF_LINE) & (height <= OFF_LINE)
    fits &= (gap >= -TOLERANCE) & (gap <= WIDEST_JOINT)
    off = (side + height + np.abs(gap))[fits]
    return zip(one[fits].tolist(), other[fits].tolist(), off.tolist(), strict=True)
