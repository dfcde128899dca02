"""The web before any loads: what shear and longitudinal tension both rest on, worked out once for
every station."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.faces import FaceState
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.stirrups import (
    greatest_stirrup_spacing,
    high_shear,
    minimum_stirrup_area,
)
from ifccheck.standards.csa_a23_3_14.tension_face import Faces

ROUNDING = 1e-9
"""What a limit may be exceeded by for rounding in the conversion of units"""


@dataclass(frozen=True, slots=True)
class Seldom:
    """What few places need of a section with one face in tension; one row per station (N)."""

    has_steel: Bools
    """The face holds tension steel, developed or not"""
    critical_area: Floats
    critical_distance: Floats
    shear_loss: Floats
    """What openings have taken off dv [mm]; nan where shear cannot be rated"""
    aggregate_size: Floats
    """Effective [mm]"""
    crack_spacing: Floats
    """sze without stirrups that count [mm]"""
    legs_unknown: Bools
    plain_unknown: Bools
    """Vc is not known where no stirrups count"""
    start_distance: Floats
    end_distance: Floats
    other_steel: Floats
    """phi_s fy As of the face in compression, developed [N]"""
    other_lever_arm: Floats
    """Lever arm for the greatest moment that tensions that face [mm]"""
    beyond_simplified: Bools
    """Outside the range of 11.3.6.3"""
    beyond_materials: Bools
    """Outside that of clause 8"""

    @property
    def special(self) -> Bools:
        """Where some of it must be looked at whatever acts"""
        sound = self.has_steel & (self.critical_area > 0.0)
        unknown = self.legs_unknown | self.plain_unknown
        return ~sound | unknown | self.beyond_simplified | self.beyond_materials


@dataclass(frozen=True, slots=True)
class Web:
    """A section with one face in tension, before the loads; one row per station (N).

    What every place needs are the rows of one table, which are looked up together.
    """

    top: bool
    """The top is in tension, else the soffit"""
    simplified: bool
    """By 11.3.6.3, else by 11.3.6.4"""
    table: Floats
    """The next nine (9, N)"""
    shear_depth: Floats
    """dv [mm]"""
    tension_area: Floats
    """As, developed [mm2]"""
    concrete_plain: Floats
    """Vc without stirrups that count, where nothing strains the web [N]"""
    concrete_gain: Floats
    """What stirrups that count add to that [N]"""
    stirrup_unit: Floats
    """Vs for theta = 45 degrees [N]; nan where the legs are not known"""
    counting_shear: Floats
    """Shear up to which the stirrups count [N]; -1 where they never do"""
    greatest: Floats
    """Vr,max [N]"""
    steel: Floats
    """phi_s fy As of this face, developed [N]"""
    lever_arm: Floats
    """Lever arm for the greatest moment that tensions this face [mm]"""
    outside: Bools
    """Beyond the faces of the supports"""
    special: Bools
    """Something of the rest must be looked at whatever acts"""
    doubtful: bool
    """Any is special"""
    rest: Seldom
    station: Ints | None = None
    """Row of the rest for each station (N); the station itself where None"""
    chord_rates: Floats | None = None
    """Shear that the upper and the lower chord put on the web for each unit of moment, by their
    inclination [1/mm] (N, 2); None where no chord is inclined"""

    def rows(self, places: Ints | slice = slice(None)) -> Ints | slice:
        """Rows of ``rest`` of the given stations."""
        return places if self.station is None else self.station[places]

    def take(self, rows: Ints | slice) -> Web:
        """The same at the given stations; rows may repeat."""
        places = np.arange(self.outside.size)[rows] if isinstance(rows, slice) else rows
        return _web(
            self.top,
            self.simplified,
            self.table.take(places, axis=1, mode="clip"),
            self.outside.take(places, mode="clip"),
            self.special.take(places, mode="clip"),
            self.rest,
            places if self.station is None else self.station[places],
            None if self.chord_rates is None else self.chord_rates[places],
        )


def _web(
    top: bool,
    simplified: bool,
    table: Floats,
    outside: Bools,
    special: Bools,
    rest: Seldom,
    station: Ints | None = None,
    chord_rates: Floats | None = None,
) -> Web:
    """Sections by the rows of their table."""
    depth, area, plain, gain, stirrups, counting, greatest, steel, lever = table
    return Web(
        top, simplified, table, depth, area, plain, gain, stirrups, counting, greatest, steel,
        lever, outside, special, bool(special.any()), rest, station, chord_rates,
    )  # fmt: skip


def webs(prepared: Prepared) -> Faces[Web]:
    """The sections with the soffit and with the top in tension."""
    return Faces(web(prepared, top=False), web(prepared, top=True))


def web(prepared: Prepared, *, top: bool) -> Web:
    """The sections with the top, or the soffit, in tension."""
    around = prepared.surroundings
    soffit = prepared.sagging, around.peak_lever_sagging
    upper = prepared.hogging, around.peak_lever_hogging
    (face, peak), other = (upper, soffit) if top else (soffit, upper)
    aggregate = formulas.effective_aggregate_size(
        concrete_strength=prepared.concrete_strength, aggregate_size=prepared.aggregate_size
    )
    plain, counting = _concrete_terms(prepared, face, aggregate)
    rest = _seldom(prepared, face, *other, top=top, aggregate=aggregate, plain=plain)
    plain = np.where(rest.plain_unknown, 0.0, plain)
    table = np.stack(
        [
            face.shear_depth,
            face.tension_area,
            plain,
            counting - plain,
            _stirrup_unit(prepared, face),
            _counting_shear(prepared, face),
            formulas.greatest_resistance(
                concrete_strength=prepared.concrete_strength,
                web_width=face.web_width,
                shear_depth=face.shear_depth,
            ),
            prepared.tension_force(top=top),
            _lever_arm(peak, face),
        ]
    )
    special = rest.special | ~(face.tension_area > 0.0)
    rates = _chord_rates(prepared, face, top=top)
    return _web(top, around.simplified, table, ~prepared.inside, special, rest, chord_rates=rates)


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


def _seldom(
    prepared: Prepared,
    face: FaceState,
    other: FaceState,
    other_peak: Floats,
    *,
    top: bool,
    aggregate: Floats,
    plain: Floats,
) -> Seldom:
    around = prepared.surroundings
    return Seldom(
        has_steel=face.tension_area_full > 0.0,
        critical_area=around.critical_area_hogging if top else around.critical_area_sagging,
        critical_distance=around.critical_distance,
        shear_loss=prepared.shear_loss,
        aggregate_size=aggregate,
        crack_spacing=formulas.equivalent_crack_spacing(
            shear_depth=face.shear_depth + prepared.shear_loss, aggregate_size=aggregate
        ),
        legs_unknown=np.isnan(prepared.stirrup_area),
        plain_unknown=np.isnan(plain),
        start_distance=around.start_distance,
        end_distance=around.end_distance,
        other_steel=prepared.tension_force(top=not top),
        other_lever_arm=_lever_arm(other_peak, other),
        beyond_simplified=_beyond_simplified(prepared) & around.simplified,
        beyond_materials=_beyond_materials(prepared),
    )


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


def _concrete_terms(
    prepared: Prepared, face: FaceState, aggregate: Floats
) -> tuple[Floats, Floats]:
    """Vc in a web that nothing strains, without and with stirrups that count [N]; cracks are
    spaced as in the web without openings."""
    whole = face.shear_depth + prepared.shear_loss
    spacing = formulas.equivalent_crack_spacing(shear_depth=whole, aggregate_size=aggregate)
    unit = formulas.concrete_resistance(
        beta=np.array(1.0),
        concrete_strength=prepared.concrete_strength,
        density_factor=prepared.density_factor,
        web_width=face.web_width,
        shear_depth=face.shear_depth,
    )
    if prepared.surroundings.simplified:
        plain, counting = (
            formulas.simplified_beta(
                stirrups=np.array(stirrups),
                shear_depth=whole,
                crack_spacing=spacing,
                aggregate_size=aggregate,
            )
            for stirrups in (False, True)
        )
    else:
        plain, counting = (
            formulas.general_beta(strain=np.array(0.0), crack_spacing=each)
            for each in (spacing, np.array(formulas.STIRRUP_CRACK_SPACING))
        )
    return unit * plain, unit * counting


def _counting_shear(prepared: Prepared, face: FaceState) -> Floats:
    """Shear up to which stirrups are at least the minimum area, within the widest spacing."""
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
    high = high_shear(**section)
    return np.where(enough & close, np.inf, np.where(enough & wide, high, -1.0))


def minimum_area(prepared: Prepared, face: FaceState) -> Floats:
    """Least stirrup area that counts [mm2] (N)."""
    return minimum_stirrup_area(
        concrete_strength=prepared.concrete_strength,
        web_width=face.web_width,
        spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
    )


def _stirrup_unit(prepared: Prepared, face: FaceState) -> Floats:
    with np.errstate(invalid="ignore"):
        return formulas.stirrup_resistance(
            stirrup_area=prepared.stirrup_area,
            stirrup_yield=prepared.stirrup_yield,
            stirrup_spacing=prepared.stirrup_spacing,
            shear_depth=face.shear_depth,
            theta=np.array(45.0),
        )
