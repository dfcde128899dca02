"""Angles of struts, quickly."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import Floats

_MIDDLE, _REACH = 40.0, 12.0
"""Angles [deg] within which the continued fraction below is exact to rounding."""


def cotangent(degrees: Floats) -> Floats:
    """Cotangent of an angle.

    cot(a) = (1 - tan(a0) tan(a - a0)) / (tan(a0) + tan(a - a0)), with
    tan(d) = d / (1 - d2/(3 - d2/(5 - d2/(7 - d2/9))))

    Parameters
    ----------
    degrees : array [deg]

    Returns
    -------
    array [1]
        nan for nan.

    Notes
    -----
    Within 12 degrees of a0 = 40 degrees, where the struts of a cracked web lie, the continued
    fraction stands for numpy's tangent, which takes about ten times as long; all other
    angles take numpy's.

    Examples
    --------
    >>> cotangent(np.array([35.0, 45.0, 60.0])).round(9).tolist()
    [1.428148007, 1.0, 0.577350269]
    """
    angle = (degrees - _MIDDLE) * (np.pi / 180.0)
    square = angle * angle
    over = angle * (945.0 - square * (105.0 - square))
    under = 945.0 - square * (420.0 - 15.0 * square)
    middle = np.tan(np.radians(_MIDDLE))
    cot: Floats = np.asarray((under - middle * over) / (middle * under + over))
    far = ~(np.abs(degrees - _MIDDLE) <= _REACH)
    if np.any(far):
        cot[far] = 1.0 / np.tan(np.radians(np.asarray(degrees)[far]))
    return cot
