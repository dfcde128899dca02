"""Clause 8: material factors, strengths and the range in which they hold."""

from __future__ import annotations

import math

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats

CONCRETE_FACTOR = 0.65
"""phi_c (8.4.2)"""

STEEL_FACTOR = 0.85
"""phi_s (8.4.3)"""

CRUSHING_STRAIN = 0.0035
"""Greatest strain of concrete in compression (10.1.3)"""

STEEL_MODULUS = 200_000.0
"""Es [MPa] (8.5.4.1)"""

LEAST_CONCRETE_STRENGTH, GREATEST_CONCRETE_STRENGTH = 20.0, 80.0
"""f'c [MPa] (8.6.1.1)"""

GREATEST_YIELD = 500.0
"""fy [MPa] (8.5.1)"""

NORMAL_DENSITY = 2150.0
"""Concrete at or above this density [kg/m3] is of normal density (2.2)"""

LOW_DENSITY = 1850.0
"""Concrete above this density [kg/m3] and below normal is of semi-low density (2.2)"""


def block_stress_ratio(concrete_strength: Floats) -> Floats:
    """Ratio of the stress in the rectangular block to the concrete strength.

    alpha1 = 0.85 - 0.0015 f'c >= 0.67

    Parameters
    ----------
    concrete_strength : array [MPa]

    Examples
    --------
    >>> round(float(block_stress_ratio(np.array(20.0))), 3)
    0.82

    References
    ----------
    CSA A23.3-14, 10.1.7
    """
    ratio: Floats = np.maximum(0.85 - 0.0015 * concrete_strength, 0.67)
    return ratio


def block_depth_ratio(concrete_strength: Floats) -> Floats:
    """Ratio of the depth of the rectangular block to that of the neutral axis.

    beta1 = 0.97 - 0.0025 f'c >= 0.67

    Parameters
    ----------
    concrete_strength : array [MPa]

    References
    ----------
    CSA A23.3-14, 10.1.7
    """
    ratio: Floats = np.maximum(0.97 - 0.0025 * concrete_strength, 0.67)
    return ratio


def density_factor(density: float | None) -> float:
    """Factor for the lower tensile strength of low-density concrete.

    lambda = 1.00 normal density, 0.85 semi-low density, 0.75 low density

    Parameters
    ----------
    density : float [kg/m3] or None
        None is normal density.

    Returns
    -------
    float
        nan where the density is not a positive number.

    Notes
    -----
    The figures are recalled. Semi-low density takes the value for concrete whose fine
    aggregate is natural sand only above 1850 kg/m3; anything lighter takes 0.75.

    References
    ----------
    CSA A23.3-14, 8.6.5
    """
    if density is None:
        return 1.0
    if not density > 0.0:
        return math.nan
    if density >= NORMAL_DENSITY:
        return 1.0
    return 0.85 if density > LOW_DENSITY else 0.75


def cracking_stress(*, concrete_strength: Floats, density_factor: Floats) -> Floats:
    """Modulus of rupture of concrete [MPa].

    fr = 0.6 lambda sqrt(f'c)

    Parameters
    ----------
    concrete_strength : array [MPa]
    density_factor : array [1]

    References
    ----------
    CSA A23.3-14, 8.6.4
    """
    stress: Floats = 0.6 * density_factor * np.sqrt(concrete_strength)
    return stress


def concrete_modulus(*, concrete_strength: Floats, density: Floats | float = 2300.0) -> Floats:
    """Modulus of elasticity of concrete [MPa].

    Ec = (3300 sqrt(f'c) + 6900) (gamma_c / 2300)^1.5

    Parameters
    ----------
    concrete_strength : array [MPa]
    density : array [kg/m3]

    Notes
    -----
    For densities of 1500 to 2500 kg/m3; nan outside.

    References
    ----------
    CSA A23.3-14, 8.6.2.2
    """
    density = np.asarray(density, dtype=np.float64)
    modulus = (3300.0 * np.sqrt(concrete_strength) + 6900.0) * (density / 2300.0) ** 1.5
    return np.where((density >= 1500.0) & (density <= 2500.0), modulus, np.nan)


def beyond_concrete_strength(concrete_strength: Floats) -> Bools:
    """Where f'c lies outside 20 to 80 MPa.

    References
    ----------
    CSA A23.3-14, 8.6.1.1
    """
    beyond: Bools = (concrete_strength < LEAST_CONCRETE_STRENGTH) | (
        concrete_strength > GREATEST_CONCRETE_STRENGTH
    )
    return beyond


def beyond_yield(steel_yield: Floats) -> Bools:
    """Where fy exceeds 500 MPa.

    References
    ----------
    CSA A23.3-14, 8.5.1
    """
    beyond: Bools = steel_yield > GREATEST_YIELD
    return beyond
