"""What of a beam meets a member whose body stands upright and does not fill its box."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.beam import Member
from ifccheck.frame.boxes import Boxes, Floats, Ints


def within_plan(
    covered: Floats, beams: Boxes, members: Sequence[Member], pairs: tuple[Ints, Ints]
) -> None:
    """Narrow the common parts with members whose plan is known to what lies in that plan.

    Parameters
    ----------
    covered
        Common parts of boxes along the axes of the beam [mm] (P, 3, 2): changed in place, nan
        where beam and plan do not meet.
    beams, members, pairs
        The boxes of the beams, the members, and the rows of each pair.
    """
    traced = np.array([bool(member.plan) for member in members], np.bool_)
    for row in np.flatnonzero(traced[pairs[1]]).tolist():
        member = members[pairs[1][row]]
        beam = beams.take(pairs[0][row : row + 1])
        covered[row] = _narrowed(covered[row], beam, member)


def _narrowed(covered: Floats, beam: Boxes, member: Member) -> Floats:
    from shapely import Polygon, box

    (x, y, _), (half_x, half_y, _) = beam.axes[0], beam.half[0]
    ring = np.array(member.plan) - beam.centre[0, :2]
    plan = Polygon(ring @ np.array([x[:2], y[:2]]).T)
    common = plan.intersection(box(-half_x, -half_y, half_x, half_y))
    if common.is_empty or np.isnan(covered).any():
        return np.full((3, 2), np.nan)
    x0, y0, x1, y1 = common.bounds
    return np.array([[x0, x1], [y0, y1], covered[2]])
