"""Which face a moment puts in tension, and the worse of both where it may be either."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from typing import Any, TypeVar

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.csa_a23_3_14.sections import Prepared

Details = TypeVar("Details", bound=Any)


def faces_in_tension(prepared: Prepared, demand: Demand) -> tuple[Bools, Bools]:
    """Which faces the moment, or its reversal, may put in tension: soffit and top.

    A face is tried where the moment tensions it, and also where |Mf| < Vf dv and some
    arrangement of the loads does. Where neither holds, the soffit is.
    """
    moment, shear = demand.moment, np.abs(demand.critical_shear)
    small_soffit = np.abs(moment) < shear * prepared.sagging.shear_depth
    small_top = np.abs(moment) < shear * prepared.hogging.shear_depth
    soffit = (moment > 0.0) | (small_soffit & demand.can_sag)
    top = (moment < 0.0) | (small_top & demand.can_hog)
    return soffit | ~top, top


def broadcast(details: Details, shape: tuple[int, ...]) -> Details:
    """Give every array of the details the shape of the check."""
    return replace(
        details,
        **{f.name: np.broadcast_to(getattr(details, f.name), shape) for f in fields(details)},
    )


def worse_face(
    prepared: Prepared,
    demand: Demand,
    evaluate_face: Callable[[Prepared, Demand, Bools], tuple[Details, Floats]],
) -> tuple[Details, Floats]:
    """Evaluate the face in tension, both where both may be, and keep the worse.

    ``evaluate_face(prepared, demand, top)`` gives the details and the utilisation. A face that
    cannot be evaluated is worse than one that suffices and better than one that falls short.
    """
    soffit, top = faces_in_tension(prepared, demand)
    details, utilisation = evaluate_face(prepared, demand, ~soffit)
    details = broadcast(details, utilisation.shape)
    both = np.nonzero(soffit & top)
    if both[0].size == 0:
        return details, utilisation
    second, second_utilisation = evaluate_face(
        prepared.take(both[-1]), _at(demand, both), np.ones(both[-1].shape, dtype=np.bool_)
    )
    second = broadcast(second, second_utilisation.shape)
    worse = _severity(second_utilisation) > _severity(utilisation[both])
    places = tuple(index[worse] for index in both)
    return (
        replace(
            details,
            **{
                f.name: _put(getattr(details, f.name), places, getattr(second, f.name)[worse])
                for f in fields(details)
            },
        ),
        _put(utilisation, places, second_utilisation[worse]),
    )


def _at(demand: Demand, places: tuple[Ints, ...]) -> Demand:
    return replace(demand, **{f.name: getattr(demand, f.name)[places] for f in fields(demand)})


def _put(values: Floats, places: tuple[Ints, ...], others: Floats) -> Floats:
    changed = np.array(values)
    changed[places] = others
    return changed


def _severity(utilisation: Floats) -> Floats:
    return np.where(np.isnan(utilisation), np.nextafter(1.0, 2.0), utilisation)


def utilisation_of(demand: Floats, resistance: Floats, inside: Bools) -> Floats:
    """Demand over resistance: 0 where nothing is demanded or outside the faces of the supports,
    inf where something is demanded of nothing, nan where the resistance is not known."""
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(resistance == 0.0, np.inf, demand / resistance)
    return np.where((demand <= 0.0) | ~inside, 0.0, ratio)
