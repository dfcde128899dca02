"""Clause 11: shear resistance of members with and without stirrups."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.angles import cotangent
from ifccheck.mechanics.arrays import Bools, Floats
from ifccheck.standards.csa_a23_3_14.materials import CONCRETE_FACTOR, STEEL_FACTOR, STEEL_MODULUS

GREATEST_ROOT = 8.0
"""Greatest sqrt(f'c) in the concrete term [MPa] (11.3.4)"""

GREATEST_STRAIN = 0.003
"""Greatest eps_x of the general method (11.3.6.4)"""

SIMPLIFIED_THETA = 35.0
"""Angle of the simplified method [deg] (11.3.6.3)"""

SIMPLIFIED_GREATEST_YIELD, SIMPLIFIED_GREATEST_STRENGTH = 400.0, 60.0
"""Range of the simplified method: longitudinal fy and f'c [MPa] (11.3.6.3)"""

STIRRUP_CRACK_SPACING = 300.0
"""sze with at least minimum stirrups [mm] (11.3.6.4)"""

SIMPLIFIED_AGGREGATE = 20.0
"""Least aggregate size for 230/(1000 + dv) [mm] (11.3.6.3)"""


def effective_aggregate_size(*, concrete_strength: Floats, aggregate_size: Floats) -> Floats:
    """Aggregate size that holds cracks together: none in strong concrete, whose cracks cut it.

    ag up to f'c = 60 MPa, falling linearly to 0 at 70 MPa

    Parameters
    ----------
    concrete_strength
        f'c [MPa]
    aggregate_size
        Nominal largest size [mm]

    Returns
    -------
    Floats
        ag [mm]

    References
    ----------
    CSA A23.3-14, 11.3.6.4
    """
    return aggregate_size * np.clip((70.0 - concrete_strength) / 10.0, 0.0, 1.0)


def equivalent_crack_spacing(*, shear_depth: Floats, aggregate_size: Floats) -> Floats:
    """Crack spacing parameter of a member without stirrups.

    sze = max(35 sz / (15 + ag), 0.85 sz) with sz = dv

    Parameters
    ----------
    shear_depth
        dv [mm]
    aggregate_size
        ag, effective [mm]

    Returns
    -------
    Floats
        sze [mm]

    Notes
    -----
    Layers of bars spread over the depth, which lessen sz, are not counted on.

    Examples
    --------
    >>> float(equivalent_crack_spacing(shear_depth=np.array(500.0), aggregate_size=np.array(20.0)))
    500.0

    References
    ----------
    CSA A23.3-14, 11.3.6.3 and 11.3.6.4
    """
    return np.maximum(35.0 * shear_depth / (15.0 + aggregate_size), 0.85 * shear_depth)


def simplified_beta(
    *, stirrups: Bools, shear_depth: Floats, crack_spacing: Floats, aggregate_size: Floats
) -> Floats:
    """Share of cracked concrete in shear by the simplified method.

    beta = 0.18 with at least minimum stirrups; without them 230 / (1000 + dv) where the
    aggregate is at least 20 mm, else 230 / (1000 + sze)

    Parameters
    ----------
    stirrups
        At least minimum stirrups
    shear_depth
        dv [mm]
    crack_spacing
        sze [mm]
    aggregate_size
        ag, effective [mm]

    Returns
    -------
    Floats
        beta

    Notes
    -----
    Holds for longitudinal fy <= 400 MPa, f'c <= 60 MPa and no significant axial tension.

    Examples
    --------
    >>> beta = simplified_beta(
    ...     stirrups=np.array([True, False]),
    ...     shear_depth=np.array(150.0),
    ...     crack_spacing=np.array(150.0),
    ...     aggregate_size=np.array(20.0),
    ... )
    >>> [round(float(value), 6) for value in beta]
    [0.18, 0.2]

    References
    ----------
    CSA A23.3-14, 11.3.6.3
    """
    size = np.where(aggregate_size >= SIMPLIFIED_AGGREGATE, shear_depth, crack_spacing)
    return np.where(stirrups, 0.18, 230.0 / (1000.0 + size))


def longitudinal_strain(
    *, moment: Floats, shear: Floats, shear_depth: Floats, tension_area: Floats
) -> Floats:
    """Longitudinal strain at mid-depth of the cracked section.

    eps_x = (Mf / dv + Vf) / (2 Es As), with Mf >= Vf dv

    Parameters
    ----------
    moment
        Mf, not negative [N*mm]
    shear
        Vf, not negative [N]
    shear_depth
        dv [mm]
    tension_area
        As, reduced where bars are not developed [mm2]

    Returns
    -------
    Floats
        eps_x; 0 where nothing acts, inf where something acts on no steel. Above 0.003 it lies
        outside the general method.

    Examples
    --------
    >>> strain = longitudinal_strain(
    ...     moment=np.array(0.0),
    ...     shear=np.array(200e3),
    ...     shear_depth=np.array(500.0),
    ...     tension_area=np.array(1000.0),
    ... )
    >>> round(float(strain), 6)
    0.001

    References
    ----------
    CSA A23.3-14, 11.3.6.4
    """
    force = np.maximum(moment / shear_depth, shear) + shear
    stiffness = 2.0 * STEEL_MODULUS * tension_area
    if (tension_area > 0.0).all():
        strain: Floats = force / stiffness
        return strain
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(force > 0.0, force / stiffness, 0.0)


def general_beta(*, strain: Floats, crack_spacing: Floats) -> Floats:
    """Share of cracked concrete in shear by the general method.

    beta = 0.40 / (1 + 1500 eps_x) * 1300 / (1000 + sze)

    Parameters
    ----------
    strain
        eps_x, 0 to 0.003
    crack_spacing
        sze [mm]; 300 with at least minimum stirrups

    Returns
    -------
    Floats
        beta

    Examples
    --------
    >>> round(float(general_beta(strain=np.array(0.85e-3), crack_spacing=np.array(300.0))), 4)
    0.1758

    References
    ----------
    CSA A23.3-14, 11.3.6.4
    """
    return 0.4 / softening(strain=strain) * 1300.0 / (1000.0 + crack_spacing)


def softening(*, strain: Floats) -> Floats:
    """By what the strain divides the share of the cracked concrete in the general method.

    1 + 1500 eps_x

    Parameters
    ----------
    strain
        eps_x, 0 to 0.003

    References
    ----------
    CSA A23.3-14, 11.3.6.4
    """
    return 1.0 + 1500.0 * strain


def general_theta(*, strain: Floats) -> Floats:
    """Angle of the diagonal compression by the general method.

    theta = 29 + 7000 eps_x

    Parameters
    ----------
    strain
        eps_x, 0 to 0.003

    Returns
    -------
    Floats
        theta [deg]

    Examples
    --------
    >>> round(float(general_theta(strain=np.array(0.85e-3))), 2)
    34.95

    References
    ----------
    CSA A23.3-14, 11.3.6.4
    """
    return 29.0 + 7000.0 * strain


def concrete_resistance(
    *,
    beta: Floats,
    concrete_strength: Floats,
    density_factor: Floats,
    web_width: Floats,
    shear_depth: Floats,
    concrete_factor: float = CONCRETE_FACTOR,
) -> Floats:
    """Shear that the cracked concrete carries.

    Vc = phi_c lambda beta sqrt(f'c) bw dv, with sqrt(f'c) <= 8 MPa

    Parameters
    ----------
    beta
        Share of the cracked concrete
    concrete_strength
        f'c [MPa]
    density_factor
        lambda
    web_width, shear_depth
        bw, dv [mm]
    concrete_factor
        phi_c; 1 gives the nominal strength

    Returns
    -------
    Floats
        Vc [N]

    Examples
    --------
    A slab strip of a published example (CSA-SHEAR-07), Vr = 24.66 kN:

    >>> resistance = concrete_resistance(
    ...     beta=np.array(0.21),
    ...     concrete_strength=np.array(20.0),
    ...     density_factor=np.array(1.0),
    ...     web_width=np.array(1000.0),
    ...     shear_depth=np.array(40.4),
    ... )
    >>> round(float(resistance) / 1000.0, 2)
    24.66

    References
    ----------
    CSA A23.3-14, 11.3.4
    """
    root = np.minimum(np.sqrt(concrete_strength), GREATEST_ROOT)
    return concrete_factor * density_factor * beta * root * web_width * shear_depth


def stirrup_resistance(
    *,
    stirrup_area: Floats,
    stirrup_yield: Floats,
    stirrup_spacing: Floats,
    shear_depth: Floats,
    theta: Floats,
    steel_factor: float = STEEL_FACTOR,
) -> Floats:
    """Shear that stirrups square to the axis carry.

    Vs = phi_s Av fy dv cot(theta) / s

    Parameters
    ----------
    stirrup_area
        Av, all legs [mm2]
    stirrup_yield
        fy [MPa]
    stirrup_spacing
        s [mm]
    shear_depth
        dv [mm]
    theta
        [deg]
    steel_factor
        phi_s; 1 gives the nominal strength

    Returns
    -------
    Floats
        Vs [N]

    Examples
    --------
    >>> resistance = stirrup_resistance(
    ...     stirrup_area=np.array(200.0),
    ...     stirrup_yield=np.array(400.0),
    ...     stirrup_spacing=np.array(200.0),
    ...     shear_depth=np.array(500.0),
    ...     theta=np.array(45.0),
    ... )
    >>> round(float(resistance))
    170000

    References
    ----------
    CSA A23.3-14, 11.3.5.1
    """
    force = steel_factor * stirrup_area * stirrup_yield
    return force * shear_depth * cotangent(theta) / stirrup_spacing


def greatest_resistance(
    *,
    concrete_strength: Floats,
    web_width: Floats,
    shear_depth: Floats,
    concrete_factor: float = CONCRETE_FACTOR,
) -> Floats:
    """Shear at which the web crushes, whatever the stirrups.

    Vr,max = 0.25 phi_c f'c bw dv

    Parameters
    ----------
    concrete_strength
        f'c [MPa]
    web_width, shear_depth
        bw, dv [mm]
    concrete_factor
        phi_c; 1 gives the nominal strength

    Returns
    -------
    Floats
        Vr,max [N]

    References
    ----------
    CSA A23.3-14, 11.3.3
    """
    return 0.25 * concrete_factor * concrete_strength * web_width * shear_depth
