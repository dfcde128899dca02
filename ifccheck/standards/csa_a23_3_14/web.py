"""The cracked web: strain, angle of the struts and the stirrups that count.

Shear and longitudinal tension both rest on it. What does not depend on the loads is worked out
once for every station; the rest for every combination and rating factor.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from ifccheck.mechanics.angles import cotangent
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.faces import FaceState
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.stirrups import (
    greatest_stirrup_spacing,
    high_shear,
    minimum_stirrup_area,
)
from ifccheck.standards.csa_a23_3_14.tension_face import Faces, put

ROUNDING = 1e-9
"""What a limit may be exceeded by for rounding in the conversion of units"""


@dataclass(frozen=True, slots=True)
class Web:
    """A section with one face in tension, before the loads; one row per station (N)."""

    top: bool
    """The top is in tension, else the soffit"""
    inside: Bools
    simplified: Bools
    shear_depth: Floats
    shear_loss: Floats
    """What openings have taken off it [mm]; nan where shear cannot be rated"""
    tension_area: Floats
    has_steel: Bools
    """The face holds tension steel, developed or not"""
    critical_area: Floats
    critical_distance: Floats
    aggregate_size: Floats
    """Effective [mm]"""
    crack_spacing: Floats
    """sze without stirrups that count [mm]"""
    high_shear: Floats
    """Shear beyond which the widest spacing of stirrups is halved [N]"""
    counts: Bools
    """The stirrups count up to that shear"""
    counts_at_high_shear: Bools
    legs_unknown: Bools
    concrete_unit: Floats
    """Vc for beta = 1 [N]"""
    stirrup_unit: Floats
    """Vs for theta = 45 degrees [N]; nan where the legs are not known"""
    greatest: Floats
    """Vr,max [N]"""
    start_distance: Floats
    end_distance: Floats
    steel: Floats
    """phi_s fy As of this face, developed [N]"""
    lever_arm: Floats
    """Lever arm for the greatest moment that tensions this face [mm]"""
    other_steel: Floats
    """The same of the face in compression [N]"""
    other_lever_arm: Floats
    beyond_simplified: Bools
    """Outside the range of 11.3.6.3"""
    beyond_materials: Bools
    """Outside that of clause 8"""
    chord_rates: Floats | None
    """Shear that the upper and the lower chord put on the web for each unit of moment, by their
    inclination [1/mm] (N, 2); None where no chord is inclined"""

    @property
    def whole_depth(self) -> Floats:
        """dv of the web without openings: cracks are spaced by it [mm] (N)"""
        return self.shear_depth + self.shear_loss

    def take(self, rows: Ints | slice) -> Web:
        """The same at the given stations; rows may repeat."""
        arrays: dict[str, Any] = {f.name: getattr(self, f.name)[rows] for f in fields(self)[1:-1]}
        rates = None if self.chord_rates is None else self.chord_rates[rows]
        return Web(self.top, **arrays, chord_rates=rates)


def webs(prepared: Prepared) -> Faces[Web]:
    """The sections with the soffit and with the top in tension."""
    return Faces(web(prepared, top=False), web(prepared, top=True))


def web(prepared: Prepared, *, top: bool) -> Web:
    """The sections with the top, or the soffit, in tension."""
    around = prepared.surroundings
    soffit = prepared.sagging, around.peak_lever_sagging, around.critical_area_sagging
    upper = prepared.hogging, around.peak_lever_hogging, around.critical_area_hogging
    (face, peak, area), (other, other_peak, _) = (upper, soffit) if top else (soffit, upper)
    return Web(
        top=top,
        inside=prepared.inside,
        simplified=around.simplified,
        shear_depth=face.shear_depth,
        shear_loss=prepared.shear_loss,
        tension_area=face.tension_area,
        has_steel=face.tension_area_full > 0.0,
        critical_area=area,
        critical_distance=around.critical_distance,
        start_distance=around.start_distance,
        end_distance=around.end_distance,
        steel=face.tension_force,
        lever_arm=_lever_arm(peak, face),
        other_steel=other.tension_force,
        other_lever_arm=_lever_arm(other_peak, other),
        beyond_simplified=around.simplified & _beyond_simplified(prepared),
        beyond_materials=_beyond_materials(prepared),
        chord_rates=_chord_rates(prepared, face, top=top),
        **_cracks(prepared, face),
        **_stirrups(prepared, face),
        **_units(prepared, face),
    )


def _chord_rates(prepared: Prepared, face: FaceState, *, top: bool) -> Floats | None:
    """What inclined chords add to the shear for each unit of moment [1/mm] (N, 2).

    With the moment M, sagging positive, the compression M / dv runs along the concrete's face and
    the tension along the bars. Equilibrium of the part to the left leaves the web
    V - M / dv * (rise of the upper chord) + M / dv * (rise of the lower chord).
    """
    chords = prepared.chords
    if chords is None:
        return None
    steel = chords.steel_follows.astype(np.float64)
    upper = -chords.top_rise * (steel if top else 1.0)
    lower = chords.soffit_rise * (1.0 if top else steel)
    rises = np.stack([upper, lower], axis=-1)
    # a level chord adds nothing, also where an opening leaves no known depth
    rates: Floats = np.where(rises == 0.0, 0.0, rises / face.shear_depth[:, None])
    return rates


def _lever_arm(peak: Floats, face: FaceState) -> Floats:
    return np.where(np.isfinite(peak), peak, face.shear_depth)


def _beyond_simplified(prepared: Prepared) -> Bools:
    beyond: Bools = (
        prepared.longitudinal_yield > formulas.SIMPLIFIED_GREATEST_YIELD * (1.0 + ROUNDING)
    ) | (prepared.concrete_strength > formulas.SIMPLIFIED_GREATEST_STRENGTH * (1.0 + ROUNDING))
    return beyond


def _beyond_materials(prepared: Prepared) -> Bools:
    strong_stirrups = (prepared.stirrup_area > 0.0) & (
        prepared.stirrup_yield > GREATEST_YIELD * (1.0 + ROUNDING)
    )
    beyond: Bools = prepared.beyond_concrete_strength | prepared.beyond_yield | strong_stirrups
    return beyond


def _cracks(prepared: Prepared, face: FaceState) -> dict[str, Any]:
    aggregate = formulas.effective_aggregate_size(
        concrete_strength=prepared.concrete_strength, aggregate_size=prepared.aggregate_size
    )
    spacing = formulas.equivalent_crack_spacing(
        shear_depth=face.shear_depth + prepared.shear_loss, aggregate_size=aggregate
    )
    return {"aggregate_size": aggregate, "crack_spacing": spacing}


def _stirrups(prepared: Prepared, face: FaceState) -> dict[str, Any]:
    """When the stirrups count: at least the minimum area, within the widest spacing."""
    section = {
        "concrete_strength": prepared.concrete_strength,
        "density_factor": prepared.density_factor,
        "web_width": face.web_width,
        "shear_depth": face.shear_depth,
    }
    enough = (prepared.stirrup_area > 0.0) & (prepared.stirrup_area >= minimum_area(prepared, face))
    wide, close = (
        prepared.stirrup_spacing
        <= greatest_stirrup_spacing(shear=np.full(enough.shape, shear), **section)
        for shear in (0.0, np.inf)
    )
    return {
        "high_shear": high_shear(**section),
        "counts": enough & wide,
        "counts_at_high_shear": enough & close,
        "legs_unknown": np.isnan(prepared.stirrup_area),
    }


def minimum_area(prepared: Prepared, face: FaceState) -> Floats:
    """Least stirrup area that counts [mm2] (N)."""
    return minimum_stirrup_area(
        concrete_strength=prepared.concrete_strength,
        web_width=face.web_width,
        spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
    )


def _units(prepared: Prepared, face: FaceState) -> dict[str, Any]:
    """Terms of the resistance for beta = 1 and theta = 45 degrees, in which they are linear."""
    with np.errstate(invalid="ignore"):
        stirrups = formulas.stirrup_resistance(
            stirrup_area=prepared.stirrup_area,
            stirrup_yield=prepared.stirrup_yield,
            stirrup_spacing=prepared.stirrup_spacing,
            shear_depth=face.shear_depth,
            theta=np.array(45.0),
        )
    return {
        "concrete_unit": formulas.concrete_resistance(
            beta=np.array(1.0),
            concrete_strength=prepared.concrete_strength,
            density_factor=prepared.density_factor,
            web_width=face.web_width,
            shear_depth=face.shear_depth,
        ),
        "stirrup_unit": stirrups,
        "greatest": formulas.greatest_resistance(
            concrete_strength=prepared.concrete_strength,
            web_width=face.web_width,
            shear_depth=face.shear_depth,
        ),
    }


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
    """eps_x"""
    area: Floats
    """Developed tension steel where the strain is taken [mm2]"""
    has_steel: Bools
    """There is tension steel, developed or not, where the strain is taken"""
    at_critical: tuple[Ints, ...]
    """Places whose strain is taken at the critical section"""
    effective: Bools
    """Stirrups that count"""
    theta: Floats
    """[deg]"""
    stirrup_term: Floats
    """Vs [N]"""
    cot_theta: Floats
    beyond_strain: Bools
    """eps_x exceeds 0.003 in the general method"""


def crack(web: Web, acts: Acting) -> Cracked:
    """Work out the strain, the angle and the stirrups that count."""
    strain, area, has_steel, at_critical = _strain(web, acts)
    effective = web.counts_at_high_shear | (web.counts & ~(acts.shear > web.high_shear))
    theta = _theta(web, strain)
    cot_theta = cotangent(theta)
    return Cracked(
        strain=strain,
        area=area,
        has_steel=has_steel,
        at_critical=at_critical,
        effective=effective,
        theta=theta,
        stirrup_term=np.where(effective | web.legs_unknown, web.stirrup_unit * cot_theta, 0.0),
        cot_theta=cot_theta,
        beyond_strain=(strain > formulas.GREATEST_STRAIN) & has_steel & ~web.simplified,
    )


def _theta(web: Web, strain: Floats) -> Floats:
    if web.simplified.all():
        return np.full(1, formulas.SIMPLIFIED_THETA)
    return formulas.general_theta(strain=strain)


def _strain(web: Web, acts: Acting) -> tuple[Floats, Floats, Bools, tuple[Ints, ...]]:
    """eps_x at the place, or where it is less, at the critical section nearer to midspan.

    The latter is open to a place nearer to a support than its critical section, where the shear
    at that section is used too; the moment there is bounded from the place's own.

    Returns
    -------
    tuple
        Strain, the steel that it is taken with, whether there is any, developed or not, and the
        places where the critical section's is taken.
    """
    strain = formulas.longitudinal_strain(
        moment=acts.moment,
        shear=acts.shear,
        shear_depth=web.shear_depth,
        tension_area=web.tension_area,
    )
    nearer = np.nonzero((acts.shear < acts.own_shear) & (web.critical_distance > 0.0))
    if nearer[0].size == 0:
        return strain, web.tension_area, web.has_steel, nearer
    rows = nearer[-1]
    critical_area = web.critical_area[rows]
    critical = formulas.longitudinal_strain(
        moment=acts.moment[nearer] + acts.own_shear[nearer] * web.critical_distance[rows],
        shear=acts.shear[nearer],
        shear_depth=web.shear_depth[rows],
        tension_area=critical_area,
    )
    less = critical < strain[nearer]
    places = tuple(index[less] for index in nearer)
    area = np.broadcast_to(web.tension_area, strain.shape)
    has_steel = np.broadcast_to(web.has_steel, strain.shape)
    return (
        put(strain, places, critical[less]),
        put(area, places, critical_area[less]),
        put(has_steel, nearer, has_steel[nearer] | (critical_area > 0.0)),
        places,
    )
