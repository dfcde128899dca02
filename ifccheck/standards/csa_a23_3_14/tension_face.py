"""Which face a moment puts in tension, and the worse of both where it may be either."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields, replace
from typing import Any, TypeVar

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear import (
    SIMPLIFIED_GREATEST_STRENGTH,
    SIMPLIFIED_GREATEST_YIELD,
)

ROUNDING = 1e-9
"""What a limit may be exceeded by for rounding in the conversion of units"""

Values = TypeVar("Values", Floats, Bools)


@dataclass(frozen=True, slots=True)
class TensionFace:
    """What shear needs of a section with one face in tension; one row per station (N)."""

    top_in_tension: Bools
    inside: Bools
    concrete_strength: Floats
    density_factor: Floats
    aggregate_size: Floats
    stirrup_area: Floats
    stirrup_spacing: Floats
    stirrup_yield: Floats
    simplified: Bools
    shear_depth: Floats
    web_width: Floats
    tension_area: Floats
    tension_area_full: Floats
    critical_area: Floats
    critical_distance: Floats
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

    def take(self, rows: Ints) -> TensionFace:
        """The same at the given stations; rows may repeat."""
        return TensionFace(*(getattr(self, f.name)[rows] for f in fields(self)))


def tension_face(prepared: Prepared, *, top: bool) -> TensionFace:
    """The sections with the soffit, or the top, in tension."""
    around, soffit_face, top_face = prepared.surroundings, prepared.sagging, prepared.hogging
    levers = (
        np.where(np.isfinite(peak), peak, face.shear_depth)
        for peak, face in (
            (around.peak_lever_sagging, soffit_face),
            (around.peak_lever_hogging, top_face),
        )
    )
    soffit_side, top_side = (
        (face, lever, area)
        for face, lever, area in zip(
            (soffit_face, top_face),
            levers,
            (around.critical_area_sagging, around.critical_area_hogging),
            strict=True,
        )
    )
    (face, lever, area), (other, other_lever, _) = (
        (top_side, soffit_side) if top else (soffit_side, top_side)
    )
    return TensionFace(
        top_in_tension=np.full(prepared.x.shape, top),
        inside=prepared.inside,
        concrete_strength=prepared.concrete_strength,
        density_factor=prepared.density_factor,
        aggregate_size=prepared.aggregate_size,
        stirrup_area=prepared.stirrup_area,
        stirrup_spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
        simplified=around.simplified,
        shear_depth=face.shear_depth,
        web_width=face.web_width,
        tension_area=face.tension_area,
        tension_area_full=face.tension_area_full,
        critical_area=area,
        critical_distance=around.critical_distance,
        start_distance=around.start_distance,
        end_distance=around.end_distance,
        steel=face.tension_force,
        lever_arm=lever,
        other_steel=other.tension_force,
        other_lever_arm=other_lever,
        beyond_simplified=around.simplified & _beyond_simplified(prepared),
        beyond_materials=_beyond_materials(prepared),
    )


def _beyond_simplified(prepared: Prepared) -> Bools:
    beyond: Bools = (prepared.longitudinal_yield > SIMPLIFIED_GREATEST_YIELD * (1.0 + ROUNDING)) | (
        prepared.concrete_strength > SIMPLIFIED_GREATEST_STRENGTH * (1.0 + ROUNDING)
    )
    return beyond


def _beyond_materials(prepared: Prepared) -> Bools:
    strong_stirrups = (prepared.stirrup_area > 0.0) & (
        prepared.stirrup_yield > GREATEST_YIELD * (1.0 + ROUNDING)
    )
    beyond: Bools = prepared.beyond_concrete_strength | prepared.beyond_yield | strong_stirrups
    return beyond


def faces_in_tension(prepared: Prepared, demand: Demand) -> tuple[Bools, Bools]:
    """Which faces the moment, or its reversal, may put in tension: soffit and top.

    A face is tried where the moment tensions it, and also where |Mf| < Vf dv and some
    arrangement of the loads does. Where neither holds, the soffit is.
    """
    moment, shear = np.abs(demand.moment), np.abs(demand.critical_shear)
    sagging, hogging = demand.moment > 0.0, demand.moment < 0.0
    small_soffit = moment < shear * prepared.sagging.shear_depth
    small_top = moment < shear * prepared.hogging.shear_depth
    soffit = sagging | (small_soffit & demand.can_sag)
    top = hogging | (small_top & demand.can_hog)
    return soffit | ~top, top


class DetailsOfBothFaces:
    """Details on the face that governs, put together for each name when it is asked for.

    It has the fields of the details that it is made of. A run asks for the details of few places
    only, and to put all of them together would take longer than the check itself.
    """

    def __init__(
        self,
        soffit: Any,
        top: Any,
        places: tuple[Ints, ...],
        taken: Bools,
        shape: tuple[int, ...],
    ) -> None:
        """``top`` holds the places where the top is tried; it governs at those ``taken``, which
        are ``places`` of the whole."""
        self._soffit, self._top, self._places = soffit, top, places
        self._taken, self._shape = taken, shape

    @property
    def __dataclass_fields__(self) -> dict[str, Any]:
        return {f.name: f for f in fields(self._soffit)}

    def __getattr__(self, name: str) -> Any:
        if name.startswith("_"):
            raise AttributeError(name)
        whole = np.broadcast_to(getattr(self._soffit, name), self._shape)
        if self._taken.size == 0:
            return whole
        part = np.broadcast_to(getattr(self._top, name), self._taken.shape)
        return put(whole, self._places, part[self._taken])


def worse_face(
    prepared: Prepared,
    demand: Demand,
    evaluate: Callable[[TensionFace, Demand], tuple[Any, Floats]],
) -> tuple[Any, Floats]:
    """Evaluate the face in tension, both where both may be, and keep the worse.

    ``evaluate(face, demand)`` gives the details and the utilisation. A face that cannot be
    evaluated is worse than one that suffices and better than one that falls short.
    """
    soffit, top = faces_in_tension(prepared, demand)
    details, utilisation = evaluate(tension_face(prepared, top=False), demand)
    shape, tried = utilisation.shape, np.nonzero(top)
    if tried[0].size == 0:
        nowhere = np.zeros(0, dtype=np.bool_)
        return DetailsOfBothFaces(details, None, (), nowhere, shape), utilisation
    second, second_utilisation = evaluate(
        tension_face(prepared, top=True).take(tried[-1]), _at(demand, tried)
    )
    worse = _severity(second_utilisation) > _severity(utilisation[tried])
    taken = worse | ~soffit[tried]
    places = tuple(index[taken] for index in tried)
    return (
        DetailsOfBothFaces(details, second, places, taken, shape),
        put(utilisation, places, second_utilisation[taken]),
    )


def _at(demand: Demand, places: tuple[Ints, ...]) -> Demand:
    return replace(demand, **{f.name: getattr(demand, f.name)[places] for f in fields(demand)})


def put(values: Values, places: tuple[Ints, ...], others: Values) -> Values:
    """A copy of the values with others at the given places."""
    changed = np.array(values)
    changed[places] = others
    return changed


def _severity(utilisation: Floats) -> Floats:
    return np.where(np.isnan(utilisation), np.nextafter(1.0, 2.0), utilisation)


def utilisation_of(demand: Floats, resistance: Floats, inside: Bools) -> Floats:
    """Demand over resistance: 0 where nothing is demanded or outside the faces of the supports,
    inf where something is demanded of nothing, nan where either is not known."""
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = demand / resistance
    return np.where((demand <= 0.0) | ~inside, 0.0, ratio)
