"""The shear limit state: clause 11.3 at every station, on the face or faces in tension."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.contract import Check, LimitState, Outside
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.cracked import (
    Acting,
    Cracked,
    acting,
    area_there,
    crack,
    has_steel,
)
from ifccheck.standards.csa_a23_3_14.faces import LEAST_WEB
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_lines import SHEAR_LINES
from ifccheck.standards.csa_a23_3_14.stirrups import greatest_stirrup_spacing
from ifccheck.standards.csa_a23_3_14.tension_face import (
    Faces,
    utilisation_of,
    worse_face,
)
from ifccheck.standards.csa_a23_3_14.web import Web, minimum_area, web


@dataclass(frozen=True, slots=True)
class ShearDetails:
    """A section in shear with one face in tension; arrays of one shape."""

    shear: Floats
    """Vf, at the critical section where that is allowed [N]"""
    own_shear: Floats
    """Shear at the place itself [N]"""
    shear_of_loads: Floats
    """Vf before inclined chords count [N]"""
    upper_rise: Floats
    """Rise of the upper chord for each mm, positive where it adds to the shear"""
    lower_rise: Floats
    """The same of the lower chord"""
    upper_shear: Floats
    """Vertical component of the upper chord [N]"""
    lower_shear: Floats
    level: Bools
    """No chord is inclined"""
    inclined: Bools
    moment: Floats
    """Moment that goes with it [N*mm]"""
    top_in_tension: Bools
    shear_depth: Floats
    shear_loss: Floats
    web_width: Floats
    concrete_strength: Floats
    density_factor: Floats
    aggregate_size: Floats
    """Effective [mm]"""
    tension_area: Floats
    distance: Floats
    """Distance to the section at which eps_x is taken [mm]"""
    strain_moment: Floats
    strain: Floats
    crack_spacing: Floats
    beta: Floats
    theta: Floats
    stirrup_area: Floats
    stirrup_spacing: Floats
    stirrup_yield: Floats
    minimum_stirrup_area: Floats
    greatest_spacing: Floats
    concrete_term: Floats
    stirrup_term: Floats
    greatest: Floats
    steel_present: Floats
    """1 where the face holds any tension steel, else 0"""
    resistance: Floats
    has_stirrups: Bools
    effective: Bools
    """Stirrups that count: at least the minimum, within the spacing limit"""
    plain: Bools
    general: Bools
    general_effective: Bools
    general_plain: Bools
    opened: Bools
    """Openings take depth from the web"""
    opened_general_plain: Bools
    simplified: Bools
    simplified_effective: Bools
    simplified_plain_depth: Bools
    simplified_plain_spacing: Bools
    opened_simplified_plain_depth: Bools
    opened_simplified_plain_spacing: Bools
    computable: Bools
    """The concrete term can be worked out"""
    without_steel: Bools
    """The general method finds no developed tension steel: eps_x has no bound"""
    idle: Bools
    """No stirrups, or such as do not count"""
    legs_unknown: Bools
    stirrup_force: Bools
    """The stirrup term can be worked out, and is not 0"""
    beyond_strain: Bools
    beyond_simplified: Bools
    beyond_materials: Bools
    disturbed: Bools
    """An opening disturbs the section more than sectional design allows for"""


@dataclass(frozen=True, slots=True)
class Section:
    """A section with one face in tension, with all that its calculation prints; one row per
    station (N)."""

    web: Web
    web_width: Floats
    concrete_strength: Floats
    density_factor: Floats
    stirrup_area: Floats
    stirrup_spacing: Floats
    stirrup_yield: Floats
    minimum_stirrup_area: Floats

    @property
    def shear_depth(self) -> Floats:
        """dv [mm] (N)"""
        return self.web.shear_depth

    def take(self, rows: Ints | slice) -> Section:
        """The same at the given stations; rows may repeat."""
        arrays = (getattr(self, f.name)[rows] for f in fields(self)[1:])
        return Section(self.web.take(rows), *arrays)


def sections(prepared: Prepared) -> Faces[Section]:
    """The sections with the soffit and with the top in tension."""
    return Faces(_section(prepared, top=False), _section(prepared, top=True))


def _section(prepared: Prepared, *, top: bool) -> Section:
    face = prepared.hogging if top else prepared.sagging
    return Section(
        web=web(prepared, top=top),
        web_width=face.web_width,
        concrete_strength=prepared.concrete_strength,
        density_factor=prepared.density_factor,
        stirrup_area=prepared.stirrup_area,
        stirrup_spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
        minimum_stirrup_area=minimum_area(prepared, face),
    )


def _concrete_term(web: Web, cracked: Cracked) -> Floats:
    """Vc [N]"""
    term: Floats = web.concrete_plain + web.concrete_gain * cracked.counting
    if web.doubtful:
        unknown = web.rest.plain_unknown[web.rows()] & (cracked.counting == 0.0)
        term = np.where(unknown, np.nan, term)
    return term if web.simplified else term / formulas.softening(strain=cracked.strain)


def _resistance(web: Web, cracked: Cracked) -> Floats:
    """Vr [N]; nan outside the range of the method.

    A face that holds no tension steel at all resists no shear, for clause 11.3 presumes that
    steel.
    """
    resistance = np.minimum(_concrete_term(web, cracked) + cracked.stirrup_term, web.greatest)
    if web.doubtful:
        rest, rows = web.rest, web.rows()
        held = has_steel(web, cracked.nearer, resistance.shape)
        outside = rest.beyond_simplified[rows] | rest.beyond_materials[rows]
        resistance = np.where(outside, np.nan, np.where(held, resistance, 0.0))
    if cracked.beyond_strain is not None:
        resistance = np.where(cracked.beyond_strain, np.nan, resistance)
    return resistance


def quick_face(web: Web, acts: Acting, cracked: Cracked) -> tuple[Floats, Floats]:
    """Utilisation and resistance alone, with one face in tension."""
    resistance = _resistance(web, cracked)
    return utilisation_of(acts.shear, resistance, web.outside), resistance


def evaluate(section: Section, demand: Demand) -> tuple[ShearDetails, Cracked]:
    """Work out all that the calculation of shear prints, with one face in tension."""
    acts = acting(section.web, demand)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        cracked = crack(section.web, acts)
        return _details(section, acts, cracked, _chords(section.web, demand)), cracked


def _chords(web: Web, demand: Demand) -> dict[str, Any]:
    """What the inclination of the chords makes of the shear, by the names of the details."""
    none = np.zeros(demand.shear.shape)
    rates = np.zeros((web.shear_depth.size, 2)) if web.chord_rates is None else web.chord_rates
    adds = np.where(demand.critical_shear * demand.moment < 0.0, -1.0, 1.0)
    upper, lower = (rates[:, chord] * web.shear_depth * adds for chord in (0, 1))
    inclined = none + (rates != 0.0).any(axis=1) > 0.0
    return {
        "shear_of_loads": np.abs(demand.critical_shear),
        "upper_rise": none + upper,
        "lower_rise": none + lower,
        "upper_shear": upper * np.abs(demand.moment) / web.shear_depth,
        "lower_shear": lower * np.abs(demand.moment) / web.shear_depth,
        "level": ~inclined,
        "inclined": inclined,
    }


def _details(
    section: Section, acts: Acting, cracked: Cracked, chords: dict[str, Any]
) -> ShearDetails:
    web, rest, rows = section.web, section.web.rest, section.web.rows()
    counting, distance = cracked.counting > 0.0, _distance(web, cracked)
    area, held = area_there(web, cracked), has_steel(web, cracked.nearer, counting.shape)
    spacing = np.where(counting, formulas.STIRRUP_CRACK_SPACING, rest.crack_spacing[rows])
    never = np.zeros(counting.shape, dtype=np.bool_)
    return ShearDetails(
        shear=acts.shear,
        own_shear=acts.own_shear,
        moment=acts.moment,
        top_in_tension=np.full(web.shear_depth.shape, web.top),
        shear_depth=web.shear_depth,
        shear_loss=rest.shear_loss[rows],
        web_width=section.web_width,
        concrete_strength=section.concrete_strength,
        density_factor=section.density_factor,
        aggregate_size=rest.aggregate_size[rows],
        tension_area=area,
        distance=distance,
        strain_moment=np.maximum(
            acts.moment + acts.own_shear * distance, acts.shear * web.shear_depth
        ),
        strain=cracked.strain,
        crack_spacing=spacing,
        beta=_beta(web, cracked, spacing),
        theta=cracked.theta,
        stirrup_area=section.stirrup_area,
        stirrup_spacing=section.stirrup_spacing,
        stirrup_yield=section.stirrup_yield,
        minimum_stirrup_area=section.minimum_stirrup_area,
        greatest_spacing=greatest_stirrup_spacing(
            shear=acts.shear,
            concrete_strength=section.concrete_strength,
            density_factor=section.density_factor,
            web_width=section.web_width,
            shear_depth=web.shear_depth,
        ),
        concrete_term=_concrete_term(web, cracked),
        stirrup_term=cracked.stirrup_term,
        greatest=web.greatest,
        steel_present=held.astype(np.float64),
        resistance=_resistance(web, cracked),
        **_methods(section, counting, area),
        **chords,
        beyond_strain=never if cracked.beyond_strain is None else cracked.beyond_strain,
        beyond_simplified=rest.beyond_simplified[rows],
        beyond_materials=rest.beyond_materials[rows],
    )


def _beta(web: Web, cracked: Cracked, spacing: Floats) -> Floats:
    """Share of the cracked concrete."""
    if not web.simplified:
        return formulas.general_beta(strain=cracked.strain, crack_spacing=spacing)
    rest, rows = web.rest, web.rows()
    return formulas.simplified_beta(
        stirrups=cracked.counting > 0.0,
        shear_depth=web.shear_depth + rest.shear_loss[rows],
        crack_spacing=rest.crack_spacing[rows],
        aggregate_size=rest.aggregate_size[rows],
    )


def _distance(web: Web, cracked: Cracked) -> Floats:
    """Distance to the section at which the strain is taken [mm]."""
    distance = np.zeros(cracked.strain.shape)
    if cracked.at_critical[0].size:
        distance[cracked.at_critical] = web.rest.critical_distance[
            web.rows(cracked.at_critical[-1])
        ]
    return distance


def _methods(section: Section, effective: Bools, area: Floats) -> dict[str, Any]:
    """Which method and which of its forms holds, by the names of the details."""
    web, plain = section.web, ~effective
    simplified = np.full(web.outside.shape, web.simplified)
    rest, rows = web.rest, web.rows()
    aggregate, unknown = rest.aggregate_size[rows], rest.legs_unknown[rows]
    by_depth, lost = aggregate >= formulas.SIMPLIFIED_AGGREGATE, rest.shear_loss[rows]
    opened = lost != 0.0
    general = ~simplified & (area > 0.0)
    computable = simplified | general
    return {
        "has_stirrups": section.stirrup_area > 0.0,
        "effective": effective,
        "plain": plain,
        "general": general,
        "general_effective": effective & general,
        "general_plain": plain & general & ~opened,
        "opened": opened,
        "disturbed": np.isnan(lost),
        "opened_general_plain": plain & general & opened,
        "simplified": simplified,
        "simplified_effective": effective & simplified,
        "simplified_plain_depth": plain & simplified & by_depth & ~opened,
        "simplified_plain_spacing": plain & simplified & ~by_depth & ~opened,
        "opened_simplified_plain_depth": plain & simplified & by_depth & opened,
        "opened_simplified_plain_spacing": plain & simplified & ~by_depth & opened,
        "computable": computable,
        "without_steel": ~computable,
        "idle": plain & ~unknown,
        "legs_unknown": unknown,
        "stirrup_force": effective & computable,
    }


def outside_of(details: Any, checked: Bools) -> tuple[Outside, ...]:
    """Where shear lies outside the validity of a clause, among the places checked."""
    found = (
        ("11.3.6.4", "longitudinal strain above 0.003", details.beyond_strain),
        (
            "11.3.6.3",
            "the simplified method holds for longitudinal fy up to 400 MPa and f'c up to 60 MPa",
            details.beyond_simplified,
        ),
        (
            "8.5.1, 8.6.1.1",
            "fy above 500 MPa, or f'c outside 20 to 80 MPa",
            details.beyond_materials,
        ),
        (
            "11.3",
            "an opening, recess or notch disturbs the web too much for the design of sections",
            details.disturbed,
        ),
    )
    return tuple(Outside(clause, text, mask & checked) for clause, text, mask in found)


def _evaluate(section: Section, demand: Demand) -> tuple[ShearDetails, Floats]:
    details, _ = evaluate(section, demand)
    with np.errstate(divide="ignore", invalid="ignore"):
        utilisation = utilisation_of(details.shear, details.resistance, section.web.outside)
    return details, utilisation


def _without_web(details: ShearDetails, checked: Bools) -> Outside:
    """Where an outline runs out to nothing between the compression face and the steel."""
    text = f"within the depth the outline is narrower than {LEAST_WEB:.0f} mm: it has no web"
    return Outside("2.3", text, np.isnan(details.web_width) & ~details.disturbed & checked)


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check shear by 11.3.6.3 or 11.3.6.4 at every station and arrangement."""
    details, utilisation = worse_face(sections(prepared), demand, _evaluate)
    checked = (details.shear != 0.0) & prepared.inside
    return Check(
        demand=details.shear,
        resistance=details.resistance,
        utilisation=utilisation,
        outside=(*outside_of(details, checked), _without_web(details, checked)),
        details=details,
    )


SHEAR = LimitState(
    name="Shear",
    title="shear",
    clause="11.3",
    covers="shear",
    demand_unit="N",
    check=check,
    lines=SHEAR_LINES,
)
