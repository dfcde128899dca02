"""The cracked web: strain, angle of the struts and the stirrups that count.

Shear and longitudinal tension both rest on it, under every combination and rating factor.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.angles import cotangent
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.web import Web


@dataclass(frozen=True, slots=True)
class Acting:
    """What acts, without its sense."""

    shear: Floats
    """Vf, at the critical section where that is allowed [N]"""
    own_shear: Floats
    """Shear at the place itself [N]"""
    moment: Floats
    """[N*mm]"""


def acting(web: Web, demand: Demand) -> Acting:
    """What acts, without its sense; the shear with what inclined chords put on the web."""
    if web.chord_rates is None:
        return Acting(np.abs(demand.critical_shear), np.abs(demand.shear), np.abs(demand.moment))
    upper, lower = (web.chord_rates[:, chord] * demand.moment for chord in (0, 1))
    return Acting(
        with_chords(demand.critical_shear, upper, lower),
        with_chords(demand.shear, upper, lower),
        np.abs(demand.moment),
    )


def with_chords(shear: Floats, upper: Floats, lower: Floats) -> Floats:
    """Shear on the web of a member of varying depth, without its sense.

    max(|V|, |V + Vu|, |V + Vl|, |V + Vu + Vl|): what an inclined chord carries counts where it
    adds to the shear, and never where it relieves the web.

    Parameters
    ----------
    shear
        V of the loads [N]
    upper, lower
        Vertical component of the upper and of the lower chord as it acts on the web [N]

    Returns
    -------
    Floats
        [N]

    Examples
    --------
    >>> shear = with_chords(np.array([60e3, 60e3]), np.array([9e3, -9e3]), np.zeros(2))
    >>> [float(value) for value in shear]
    [69000.0, 60000.0]

    References
    ----------
    CSA A23.3-14, 11.2.4 (number from memory): where the effect is unfavourable it must be taken,
    and where it is favourable it may be. The component itself is first principles.
    """
    both = np.maximum(np.abs(shear), np.abs(shear + upper + lower))
    return np.maximum(both, np.maximum(np.abs(shear + upper), np.abs(shear + lower)))


@dataclass(frozen=True, slots=True)
class Cracked:
    """The web under load; arrays of the shape of what acts."""

    strain: Floats
    """eps_x; 0 where it was not asked for"""
    at_critical: tuple[Ints, ...]
    """Places whose strain is taken at the critical section"""
    nearer: tuple[Ints, ...]
    """Places that may take it there"""
    counting: Floats
    """1 where the stirrups count, else 0"""
    theta: Floats
    """[deg]"""
    stirrup_term: Floats
    """Vs [N]"""
    cot_theta: Floats
    beyond_strain: Bools | None
    """eps_x exceeds 0.003 in the general method; None where it nowhere does"""


def crack(web: Web, acts: Acting, *, strained: bool = True) -> Cracked:
    """Work out the strain, the angle and the stirrups that count.

    ``strained`` tells whether the strain is wanted even where the method does not need it.
    """
    nearer = _nearer(web, acts)
    strain, at_critical, beyond = np.zeros(1), tuple(index[:0] for index in nearer), None
    if strained or not web.simplified:
        strain, at_critical = _strain(web, acts, nearer)
    theta = np.full(1, formulas.SIMPLIFIED_THETA)
    if not web.simplified:
        theta = formulas.general_theta(strain=strain)
        beyond = _beyond_strain(web, strain, nearer)
    cot_theta = cotangent(theta)
    counting = (acts.shear <= web.counting_shear).astype(np.float64)
    return Cracked(
        strain=strain,
        at_critical=at_critical,
        nearer=nearer,
        counting=counting,
        theta=theta,
        stirrup_term=_stirrup_term(web, cot_theta, counting),
        cot_theta=cot_theta,
        beyond_strain=beyond,
    )


def _stirrup_term(web: Web, cot_theta: Floats, counting: Floats) -> Floats:
    """Vs [N]"""
    term: Floats = web.stirrup_unit * cot_theta
    if not web.doubtful:
        return term * counting
    carrying = (counting > 0.0) | web.rest.legs_unknown[web.rows()]
    return np.where(carrying, term, 0.0)


def _beyond_strain(web: Web, strain: Floats, nearer: tuple[Ints, ...]) -> Bools | None:
    beyond: Bools = strain > formulas.GREATEST_STRAIN
    if not beyond.any():
        return None
    return beyond & has_steel(web, nearer, strain.shape) if web.doubtful else beyond


def area_there(web: Web, cracked: Cracked) -> Floats:
    """Developed tension steel where the strain is taken [mm2]."""
    area = np.array(np.broadcast_to(web.tension_area, cracked.counting.shape))
    area[cracked.at_critical] = web.rest.critical_area[web.rows(cracked.at_critical[-1])]
    return area


def has_steel(web: Web, nearer: tuple[Ints, ...], shape: tuple[int, ...]) -> Bools:
    """Whether there is tension steel, developed or not, where the strain may be taken."""
    found = np.array(np.broadcast_to(web.rest.has_steel[web.rows()], shape))
    found[nearer] |= web.rest.critical_area[web.rows(nearer[-1])] > 0.0
    return found


def _nearer(web: Web, acts: Acting) -> tuple[Ints, ...]:
    """Places nearer to a support than their critical section, whose shear they use."""
    less = np.nonzero(acts.shear < acts.own_shear)
    if less[0].size:
        before = web.rest.critical_distance[web.rows(less[-1])] > 0.0
        less = tuple(index[before] for index in less)
    return less


def _strain(web: Web, acts: Acting, nearer: tuple[Ints, ...]) -> tuple[Floats, tuple[Ints, ...]]:
    """eps_x at the place, or where it is less, at the critical section nearer to midspan.

    The latter is open to a place nearer to a support than its critical section, where the shear
    at that section is used too; the moment there is bounded from the place's own.

    Returns
    -------
    tuple
        Strain, and the places where the critical section's is taken.
    """
    strain = formulas.longitudinal_strain(
        moment=acts.moment,
        shear=acts.shear,
        shear_depth=web.shear_depth,
        tension_area=web.tension_area,
    )
    if nearer[0].size == 0:
        return strain, nearer
    rows = web.rows(nearer[-1])
    critical = formulas.longitudinal_strain(
        moment=acts.moment[nearer] + acts.own_shear[nearer] * web.rest.critical_distance[rows],
        shear=acts.shear[nearer],
        shear_depth=web.shear_depth[nearer[-1]],
        tension_area=web.rest.critical_area[rows],
    )
    less = critical < strain[nearer]
    places = tuple(index[less] for index in nearer)
    strain[places] = critical[less]
    return strain, places
