"""Clause 12: over what length a bar takes up its yield stress."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints

GREATEST_ROOT_STRENGTH = 8.0
"""sqrt(f'c) in clause 12 is at most 8 MPa (12.1.2)"""

LEAST_DEVELOPMENT_LENGTH = 300.0
"""[mm] (12.2.1)"""

DEPTH_BELOW_TOP_BARS = 300.0
"""Concrete cast below a bar beyond which it is a top bar [mm] (12.2.4)"""

TOP_BAR_FACTOR = 1.3
"""k1 of top bars (12.2.4)"""

SMALL_BAR = 19.6
"""Greatest diameter that counts as 20M or smaller [mm]; a 20M bar has 19.5 (12.2.4)"""


def development_length(
    *,
    diameter: Floats,
    steel_yield: Floats,
    concrete_strength: Floats,
    cover_distance: Floats,
    top_bar: Bools,
    density_factor: Floats,
    bar_area: Floats | None = None,
) -> Floats:
    """Development length of a straight deformed bar in tension.

    ld = 1.15 k1 k2 k3 k4 / (dcs + Ktr) * fy / sqrt(f'c) * Ab >= 300 mm,
    with dcs + Ktr <= 2.5 db, Ktr = 0 and sqrt(f'c) <= 8 MPa

    Parameters
    ----------
    diameter : array [mm]
        db
    steel_yield, concrete_strength : arrays [MPa]
        fy and f'c
    cover_distance : array [mm]
        dcs, the lesser of the distance from the bar's centre to the nearest concrete surface
        and two thirds of the centre spacing.
    top_bar : array of bool
        More than 300 mm of concrete is cast below the bar: k1 = 1.3, else 1.0.
    density_factor : array [1]
        lambda; 1 gives k3 = 1.0, semi-low density 1.2, low density 1.3.
    bar_area : array [mm2], optional
        Ab; the circle of the diameter where it is not given.

    Returns
    -------
    array [mm]
        inf where the bar has no cover.

    Notes
    -----
    k2 = 1.0: bars are taken as uncoated. k4 = 0.8 for 20M and smaller bars, else 1.0.
    Confinement by stirrups is left out (Ktr = 0), which lengthens ld.

    Examples
    --------
    A 25M bar, fy = 400 MPa, f'c = 25 MPa, well covered: 730 mm when rounded to 10 mm.

    >>> ld = development_length(
    ...     diameter=np.array(25.2), steel_yield=np.array(400.0),
    ...     concrete_strength=np.array(25.0), cover_distance=np.array(100.0),
    ...     top_bar=np.array(False), density_factor=np.array(1.0), bar_area=np.array(500.0))
    >>> round(float(ld), 1)
    730.2

    References
    ----------
    CSA A23.3-14, 12.2.2 and 12.2.4
    """
    bar_area = np.pi / 4 * diameter**2 if bar_area is None else bar_area
    k1 = np.where(top_bar, TOP_BAR_FACTOR, 1.0)
    k3 = np.where(density_factor >= 1.0, 1.0, np.where(density_factor >= 0.85, 1.2, 1.3))
    k4 = np.where(diameter <= SMALL_BAR, 0.8, 1.0)
    confinement = np.minimum(np.maximum(cover_distance, 0.0), 2.5 * diameter)
    bond = steel_yield / np.minimum(np.sqrt(concrete_strength), GREATEST_ROOT_STRENGTH)
    with np.errstate(divide="ignore"):
        length = 1.15 * k1 * k3 * k4 * bond * bar_area / confinement
    return np.maximum(length, LEAST_DEVELOPMENT_LENGTH)


BUNDLED = (1.0, 1.1, 1.2, 1.33)
"""How much longer single bars and those of bundles of two, three and four bars develop (12.4.1,
from memory)"""

LAPPED = 1.3
"""How much longer a tension lap of class B is than the development length (12.15.1)"""


def bundle_factor(bars: Ints) -> Floats:
    """How many times longer each bar of a bundle develops than a bar alone.

    1.0, 1.1, 1.2 and 1.33 for 1, 2, 3 and 4 bars

    Parameters
    ----------
    bars : array of int
        Bars in contact.

    Returns
    -------
    array [1]
        inf for more than four bars, which no bundle may have (7.4.2, from memory).

    Examples
    --------
    >>> bundle_factor(np.array([1, 2, 3, 4, 5])).tolist()
    [1.0, 1.1, 1.2, 1.33, inf]

    References
    ----------
    CSA A23.3-14, 12.4.1 (from memory)
    """
    factors = np.array([*BUNDLED, np.inf])
    return np.asarray(factors[np.clip(bars, 1, len(factors)) - 1])


def hook_development_length(
    *,
    diameter: Floats,
    steel_yield: Floats,
    concrete_strength: Floats,
    density_factor: Floats,
) -> Floats:
    """Development length of a bar in tension that ends in a standard hook.

    ldh = 100 db / sqrt(f'c) * fy / 400 >= max(8 db, 150 mm), sqrt(f'c) <= 8 MPa

    Parameters
    ----------
    diameter : array [mm]
    steel_yield, concrete_strength : arrays [MPa]
    density_factor : array [1]
        lambda; below 1 the length is multiplied by 1.3.

    Returns
    -------
    array [mm]
        From the outside of the hook.

    Notes
    -----
    The reductions for side cover and for ties round the hook (12.5.3) are left out, which
    lengthens ldh.

    References
    ----------
    CSA A23.3-14, 12.5.2 and 12.5.3
    """
    root = np.minimum(np.sqrt(concrete_strength), GREATEST_ROOT_STRENGTH)
    factor = np.where(density_factor >= 1.0, 1.0, 1.3) * steel_yield / 400.0
    length: Floats = np.maximum(np.maximum(100.0 * diameter / root * factor, 8.0 * diameter), 150.0)
    return length


def compression_development_length(
    *, diameter: Floats, steel_yield: Floats, concrete_strength: Floats
) -> Floats:
    """Development length of a deformed bar in compression.

    ldc = max(0.24 db fy / sqrt(f'c), 0.044 db fy) >= 200 mm, sqrt(f'c) <= 8 MPa

    Parameters
    ----------
    diameter : array [mm]
    steel_yield, concrete_strength : arrays [MPa]

    Returns
    -------
    array [mm]

    References
    ----------
    CSA A23.3-14, 12.3.1 and 12.3.2
    """
    root = np.minimum(np.sqrt(concrete_strength), GREATEST_ROOT_STRENGTH)
    length: Floats = np.maximum(
        np.maximum(0.24 * diameter * steel_yield / root, 0.044 * diameter * steel_yield), 200.0
    )
    return length


def developed_fraction(
    *,
    x: Floats,
    side: Ints,
    bar_start: Floats,
    bar_end: Floats,
    start_length: Floats,
    end_length: Floats,
    start_beyond: Floats | float = 0.0,
    end_beyond: Floats | float = 0.0,
) -> Floats:
    """Part of its yield stress that a bar can reach at a place.

    min((x - start + b_start) / l_start, (end - x + b_end) / l_end, 1), 0 beyond the bar

    Parameters
    ----------
    x : array [mm]
    side : array of int
        -1 just left of x, 1 just right, 0 at x.
    bar_start, bar_end : arrays [mm]
        Outermost points of the bar, hooks included; infinite ends are allowed.
    start_length, end_length : arrays [mm]
        Development length from either end; 0 for an end that is fully anchored.
    start_beyond, end_beyond : arrays [mm], optional
        b_start and b_end: the length that the same bar goes on beyond its start and end, at
        another height or inclined, where it is bonded but not counted here.

    Returns
    -------
    array [1]
        From 0 to 1.

    Notes
    -----
    A fully anchored bar counts in full up to its end itself.

    Examples
    --------
    >>> developed_fraction(
    ...     x=np.array([0.0, 150.0, 600.0]), side=np.array([0, 0, 0]),
    ...     bar_start=np.array(0.0), bar_end=np.array(5000.0),
    ...     start_length=np.array(600.0), end_length=np.array(600.0)).tolist()
    [0.0, 0.25, 1.0]

    References
    ----------
    CSA A23.3-14, 12.1 and 12.2
    """
    before, after = x - bar_start, bar_end - x
    risen = np.minimum(
        _rise(before + start_beyond, start_length), _rise(after + end_beyond, end_length)
    )
    absent = (before < 0.0) | ((before == 0.0) & (side < 0))
    absent |= (after < 0.0) | ((after == 0.0) & (side > 0))
    return np.where(absent, 0.0, np.minimum(np.maximum(risen, 0.0), 1.0))


def _rise(distance: Floats, length: Floats) -> Floats:
    """Distance over length; 1 without a length to develop over, 0 where it has no end."""
    bonded = (length > 0.0) & ~np.isinf(length)
    rise = distance / np.where(bonded, length, 1.0)
    return np.where(
        bonded, rise, np.where(length == 0.0, 1.0, np.where(np.isinf(length), 0.0, np.nan))
    )
