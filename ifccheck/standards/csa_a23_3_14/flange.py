"""Clause 10.3: how much of a flange counts in compression."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import Floats
from ifccheck.mechanics.width_profile import SLIVER, bottom_of, top_of

LEAST_FLANGE = 0.05
"""An overhang of less than this share of the one on the other side is no flange."""


def effective_overhangs(
    *, left: Floats, right: Floats, thickness: Floats, span: Floats
) -> tuple[Floats, Floats]:
    """Overhangs of a top flange that count in compression.

    flange on both sides: overhang <= min(span/10, 12 hf) each;
    flange on one side: overhang <= min(span/12, 6 hf);
    an overhang of less than a twentieth of the other is none

    Parameters
    ----------
    left, right : arrays (n) [mm]
        Overhangs of the outline beyond the web.
    thickness : array (n) [mm]
    span : array (n) [mm]

    Returns
    -------
    left, right : arrays (n) [mm]

    Notes
    -----
    The limit for continuous beams, a tenth of the span, is used for every beam; simply
    supported ones may have a fifth. The limits are recalled. That a mere ledge on the other side
    makes no T of an L is our reading: the doubled limit is for slab on both sides. The outline
    itself is taken as the T or L: slab that is modelled apart adds nothing, and the outline ends
    before half the clear distance to the next web.

    Examples
    --------
    A flange of 150 mm that overhangs 2 m on both sides of a span of 8 m:

    >>> a, b = effective_overhangs(
    ...     left=np.array([2000.0]), right=np.array([2000.0]),
    ...     thickness=np.array([150.0]), span=np.array([8000.0]))
    >>> float(a[0]), float(b[0])
    (800.0, 800.0)

    References
    ----------
    CSA A23.3-14, 10.3.3 and 10.3.4
    """
    lesser, greater = np.minimum(left, right), np.maximum(left, right)
    both_sides = (lesser > 0.0) & (lesser >= LEAST_FLANGE * greater)
    limit = np.where(
        both_sides,
        np.minimum(span / 10.0, 12.0 * thickness),
        np.minimum(span / 12.0, 6.0 * thickness),
    )
    return np.minimum(left, limit), np.minimum(right, limit)


def tension_overhangs(
    *, left: Floats, right: Floats, thickness: Floats, span: Floats
) -> tuple[Floats, Floats]:
    """Overhangs of a top flange in tension within which its bars count.

    overhang <= min(span/20, what counts in compression)

    Parameters
    ----------
    left, right, thickness, span : arrays (n) [mm]
        As for ``effective_overhangs``.

    Returns
    -------
    left, right : arrays (n) [mm]

    Notes
    -----
    The clause asks that a part of the tension reinforcement be spread over a twentieth of the
    span, or over what 10.3 gives where that is less (recalled); farther out no bar counts here.

    Examples
    --------
    >>> a, b = tension_overhangs(
    ...     left=np.array([2000.0]), right=np.array([300.0]),
    ...     thickness=np.array([150.0]), span=np.array([8000.0]))
    >>> float(a[0]), float(b[0])
    (400.0, 300.0)

    References
    ----------
    CSA A23.3-14, 10.5.3.1
    """
    pushed = effective_overhangs(left=left, right=right, thickness=thickness, span=span)
    one, other = (np.minimum(overhang, span / 20.0) for overhang in pushed)
    return one, other


def effective_strips(
    strips: Floats, *, left: Floats, right: Floats, thickness: Floats, span: Floats
) -> Floats:
    """Width profile with the flange cut down to what counts in compression.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
        From the soffit up.
    left, right, thickness, span : arrays (n) [mm]
        As for ``effective_overhangs``.

    Returns
    -------
    array (n, S, 4) [mm]

    Notes
    -----
    The flange and everything in the upper half of the depth is at most as wide as the cut
    flange, so that a haunch under it does not stand out.

    References
    ----------
    CSA A23.3-14, 10.3
    """
    kept_left, kept_right = effective_overhangs(
        left=left, right=right, thickness=thickness, span=span
    )
    excess = (left - kept_left) + (right - kept_right)
    top = top_of(strips)
    underside = np.minimum((top + bottom_of(strips)) / 2, top - thickness)
    upper = strips[..., 0] >= underside[:, None] - SLIVER
    widest = np.where(upper[..., None], strips[..., 2:], 0.0).max(axis=(-1, -2))
    limit = np.where(
        upper & (excess > 0.0)[:, None], np.maximum(widest - excess, 0.0)[:, None], np.inf
    )
    cut = strips.copy()
    cut[..., 2:] = np.minimum(strips[..., 2:], limit[..., None])
    return cut
