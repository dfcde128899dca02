"""Clause 11: when stirrups count."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import Floats
from ifccheck.standards.csa_a23_3_14.materials import CONCRETE_FACTOR

GREATEST_SPACING = 600.0
"""[mm] (11.3.8.1)"""


def minimum_stirrup_area(
    *, concrete_strength: Floats, web_width: Floats, spacing: Floats, stirrup_yield: Floats
) -> Floats:
    """Least area of all stirrup legs for stirrups to count.

    Av,min = 0.06 sqrt(f'c) bw s / fy

    Parameters
    ----------
    concrete_strength
        f'c [MPa]
    web_width
        bw [mm]
    spacing
        s [mm]
    stirrup_yield
        fy [MPa]

    Returns
    -------
    Floats
        Av,min [mm2]

    Examples
    --------
    >>> area = minimum_stirrup_area(
    ...     concrete_strength=np.array(25.0),
    ...     web_width=np.array(400.0),
    ...     spacing=np.array(300.0),
    ...     stirrup_yield=np.array(400.0),
    ... )
    >>> round(float(area), 6)
    90.0

    References
    ----------
    CSA A23.3-14, 11.2.8.2
    """
    return 0.06 * np.sqrt(concrete_strength) * web_width * spacing / stirrup_yield


def high_shear(
    *, concrete_strength: Floats, density_factor: Floats, web_width: Floats, shear_depth: Floats
) -> Floats:
    """Shear beyond which the widest spacing of stirrups is halved.

    0.125 lambda phi_c f'c bw dv

    Parameters
    ----------
    concrete_strength
        f'c [MPa]
    density_factor
        lambda
    web_width, shear_depth
        bw, dv [mm]

    Returns
    -------
    Floats
        [N]

    References
    ----------
    CSA A23.3-14, 11.3.8.3
    """
    return 0.125 * density_factor * CONCRETE_FACTOR * concrete_strength * web_width * shear_depth


def greatest_stirrup_spacing(
    *,
    shear: Floats,
    concrete_strength: Floats,
    density_factor: Floats,
    web_width: Floats,
    shear_depth: Floats,
) -> Floats:
    """Widest spacing at which stirrups count.

    s_max = min(0.7 dv, 600 mm), halved where Vf > 0.125 lambda phi_c f'c bw dv

    Parameters
    ----------
    shear
        Vf, not negative [N]
    concrete_strength
        f'c [MPa]
    density_factor
        lambda
    web_width, shear_depth
        bw, dv [mm]

    Returns
    -------
    Floats
        s_max [mm]

    References
    ----------
    CSA A23.3-14, 11.3.8.1 and 11.3.8.3
    """
    high = high_shear(
        concrete_strength=concrete_strength,
        density_factor=density_factor,
        web_width=web_width,
        shear_depth=shear_depth,
    )
    spacing = np.minimum(0.7 * shear_depth, GREATEST_SPACING)
    return np.where(shear > high, 0.5 * spacing, spacing)
