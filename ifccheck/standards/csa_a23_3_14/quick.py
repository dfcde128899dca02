"""Limit states evaluated together where nothing is printed."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import Demand, Floats
from ifccheck.standards.contract import Quick
from ifccheck.standards.csa_a23_3_14 import longitudinal, shear_check
from ifccheck.standards.csa_a23_3_14.flexure import QUICK_FLEXURE
from ifccheck.standards.csa_a23_3_14.minimum_stirrups import QUICK_MINIMUM_STIRRUPS
from ifccheck.standards.csa_a23_3_14.tension_face import Faces, worse_faces
from ifccheck.standards.csa_a23_3_14.web import Web, acting, crack, webs


def _evaluate(faces: Faces[Web], demand: Demand) -> list[tuple[Floats, Floats]]:
    """Shear and longitudinal tension, which share the cracked web."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return worse_faces(faces, demand, _evaluate_face)


def _evaluate_face(web: Web, demand: Demand) -> tuple[tuple[Floats, Floats], ...]:
    acts = acting(web, demand)
    cracked = crack(web, acts)
    return (
        shear_check.quick_face(web, acts, cracked),
        longitudinal.quick_face(web, demand, acts, cracked),
    )


QUICK_WEB = Quick((shear_check.SHEAR, longitudinal.LONGITUDINAL), webs, _evaluate)

QUICK = (QUICK_FLEXURE, QUICK_WEB, QUICK_MINIMUM_STIRRUPS)
