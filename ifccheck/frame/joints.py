"""Ends of beams in one line that meet over the same support, or face to face within it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.frame.boxes import Bools, Floats, Ints
from ifccheck.frame.carrying import End
from ifccheck.frame.contacts import TOLERANCE
from ifccheck.frame.ground_up import Joint
from ifccheck.frame.seats import LEVEL, Cluster
from ifccheck.frame.spanning import Spanning

OFF_LINE = 50.0
"""Axes up to so far apart sideways are in one line; so are soffits or tops in height [mm]."""

WIDEST_JOINT = 1500.0
"""Ends farther apart are two supports, however wide what stands between them [mm]."""


class _Ends(NamedTuple):
    """Ends of beams that something may carry (E)."""

    joints: Sequence[Joint]
    carriers: Sequence[frozenset[int]]
    place: Floats
    """The soffit's middle [mm] (E, 3)"""
    outward: Floats
    """Unit vector along the beam, out of its end (E, 3)"""
    depth: Floats
    """[mm] (E)"""
    reach: Floats
    """How far its carrier reaches beyond the end [mm] (E)"""


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


def _ends(clusters: Mapping[str, Sequence[Cluster]], bodies: Mapping[str, Spanning]) -> _Ends:
    joints: list[Joint] = []
    carriers, numbers = [], []
    for key, own in clusters.items():
        for cluster in own:
            place = cluster.place
            if place == "between" or cluster.whole:
                continue
            body = bodies[key]
            end: End = place
            joints.append((key, end))
            carriers.append(frozenset([each.contact.other_step for each in cluster.candidates]))
            at, sign = (0.0, -1.0) if end == "start" else (body.length, 1.0)
            reach = max([each.contact.beyond for each in cluster.candidates])
            x, y, z = body.x
            numbers.append((*body.place(at), sign * x, sign * y, sign * z, body.depth, reach))
    table = np.array(numbers, np.float64).reshape(-1, 8)
    return _Ends(joints, carriers, table[:, :3], table[:, 3:6], table[:, 6], table[:, 7])


def _near(ends: _Ends) -> tuple[Ints, Ints]:
    """Rows of the pairs of ends with a carrier in common that may reach across it.

    Every carrier has a field of its own beside those of the others, so that one tree finds them
    all.
    """
    import shapely

    rows = np.repeat(np.arange(len(ends.carriers)), [len(each) for each in ends.carriers])
    _, field = np.unique([step for each in ends.carriers for step in each], return_inverse=True)
    x, y, _ = ends.place[rows].T
    reach = np.minimum(ends.reach[rows], WIDEST_JOINT) + OFF_LINE
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
