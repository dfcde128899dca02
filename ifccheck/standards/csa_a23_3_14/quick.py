"""Limit states evaluated together where nothing is printed."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.mechanics.arrays import Demand, Floats
from ifccheck.standards.contract import Quick
from ifccheck.standards.csa_a23_3_14 import longitudinal, shear_check
from ifccheck.standards.csa_a23_3_14.cracked import acting, crack
from ifccheck.standards.csa_a23_3_14.flexure import QUICK_FLEXURE
from ifccheck.standards.csa_a23_3_14.minimum_stirrups import QUICK_MINIMUM_STIRRUPS
from ifccheck.standards.csa_a23_3_14.tension_face import Faces, worse_faces
from ifccheck.standards.csa_a23_3_14.web import Web, webs


def _evaluate(faces: Faces[Web], demand: Demand) -> Sequence[tuple[Floats, Floats]]:
    """Shear and longitudinal tension, which share the cracked web."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return worse_faces(faces, demand, _evaluate_face)


def _evaluate_face(web: Web, demand: Demand) -> tuple[tuple[Floats, Floats], ...]:
    acts = acting(web, demand)
    cracked = crack(web, acts, strained=False)
    return (
        shear_check.quick_face(web, acts, cracked),
        longitudinal.quick_face(web, demand, acts, cracked),
    )


def _turns(faces: Faces[Web], total: Demand, share: Demand) -> tuple[Floats, ...]:
    """Where |Mf| = Vf dv, beyond which one face in tension is looked at instead of both."""
    beside = total.moment - share.moment, total.critical_shear - share.critical_shear
    depths = faces.soffit.shear_depth, faces.top_depth
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return tuple(
            (depth * beside[1] - beside[0]) / (share.moment - depth * share.critical_shear)
            for each in depths
            for depth in (each, -each)
        )


def _most(faces: Faces[Web], demand: Demand) -> tuple[Floats, Floats]:
    """Nothing bounds shear; the tension of each face need not exceed what the greatest moment
    that tensions it needs alone (11.3.9.2 to 11.3.9.4)."""
    sides = (
        (demand.peak_sagging, faces.soffit.lever_arm * faces.soffit.steel),
        (demand.peak_hogging, faces.top.lever_arm * faces.top.steel),
    )
    with np.errstate(divide="ignore", invalid="ignore"):
        soffit, top = (np.where(peak > 0.0, peak / resisted, 0.0) for peak, resisted in sides)
    return np.full(soffit.shape, np.inf), np.maximum(soffit, top)


QUICK_WEB = Quick(
    (shear_check.SHEAR, longitudinal.LONGITUDINAL), webs, _evaluate, turns=_turns, most=_most
)

QUICK = (QUICK_FLEXURE, QUICK_WEB, QUICK_MINIMUM_STIRRUPS)
