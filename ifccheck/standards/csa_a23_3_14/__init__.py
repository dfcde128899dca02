"""CSA A23.3-14, Design of concrete structures: beams in flexure and shear.

Later editions changed clauses 10 and 11; this is the edition of 2014.
"""

from __future__ import annotations

from ifccheck.mechanics.arrays import Floats
from ifccheck.standards.contract import Note, Standard
from ifccheck.standards.csa_a23_3_14 import flange, flexure
from ifccheck.standards.csa_a23_3_14.combinations import ACTIONS, CATEGORIES, combinations
from ifccheck.standards.csa_a23_3_14.longitudinal import LONGITUDINAL
from ifccheck.standards.csa_a23_3_14.materials import density_factor
from ifccheck.standards.csa_a23_3_14.minimum_stirrups import MINIMUM_STIRRUPS, idle_stirrups
from ifccheck.standards.csa_a23_3_14.quick import QUICK
from ifccheck.standards.csa_a23_3_14.sections import (
    Prepared,
    critical_distance,
    prepare,
    with_options,
)
from ifccheck.standards.csa_a23_3_14.shear_check import SHEAR

LEAST_SLENDERNESS = 2.0
"""Clear span over overall depth below which a flexural member is deep (10.7.1, from memory)"""

LEAST_CLEAR_SPACING = 30.0
"""[mm] (CSA A23.1, 6.6.5.2)"""


def clear_spacing(diameter: float, aggregate_size: float) -> float:
    """Least clear distance between parallel bars of a layer.

    max(1.4 db, 1.4 ag, 30 mm)

    Parameters
    ----------
    diameter
        db, of the larger bar [mm]
    aggregate_size
        ag, nominal largest size [mm]

    Returns
    -------
    float
        [mm]

    Notes
    -----
    From memory.

    Examples
    --------
    >>> clear_spacing(25.0, 20.0), clear_spacing(11.3, 10.0)
    (35.0, 30.0)

    References
    ----------
    CSA A23.1-14, 6.6.5.2, as CSA A23.3-14, 7.4.1.1 asks
    """
    return max(1.4 * diameter, 1.4 * aggregate_size, LEAST_CLEAR_SPACING)


def notes(prepared: Prepared) -> tuple[Note, ...]:
    """Remarks at stations: minimum flexural reinforcement, stirrups that do not count."""
    return (*flexure.notes(prepared), *idle_stirrups(prepared))


def basis(prepared: Prepared) -> dict[str, Floats]:
    """What the basis of a rating prints, by name [mm, mm2] (N)."""
    sagging, hogging = prepared.sagging, prepared.hogging
    return {
        "Depth": prepared.depth,
        "EffectiveDepthSagging": sagging.effective_depth,
        "EffectiveDepthHogging": hogging.effective_depth,
        "ShearDepthSagging": sagging.shear_depth,
        "ShearDepthHogging": hogging.shear_depth,
        "WebWidthSagging": sagging.web_width,
        "WebWidthHogging": hogging.web_width,
        "TensionAreaSagging": sagging.tension_area_full,
        "TensionAreaHogging": hogging.tension_area_full,
        "DevelopedAreaSagging": sagging.tension_area,
        "DevelopedAreaHogging": hogging.tension_area,
        "StirrupArea": prepared.stirrup_area,
        "StirrupSpacing": prepared.stirrup_spacing,
    }


STANDARD = Standard(
    id="csa-a23.3-14",
    title="CSA A23.3, Design of concrete structures",
    edition="2014",
    actions=ACTIONS,
    shear_methods=("general", "simplified"),
    combinations=combinations,
    categories=CATEGORIES,
    clear_spacing=clear_spacing,
    density_factor=density_factor,
    prepare=prepare,
    with_options=with_options,
    critical_distance=critical_distance,
    limit_states=(
        flexure.FLEXURE_SAGGING,
        flexure.FLEXURE_HOGGING,
        SHEAR,
        LONGITUDINAL,
        MINIMUM_STIRRUPS,
    ),
    quick=QUICK,
    notes=notes,
    basis=basis,
    flange_overhangs=flange.effective_overhangs,
    flange_clause="10.3.3, 10.3.4",
    flange_steel_overhangs=flange.tension_overhangs,
    flange_steel_clause="10.5.3.1",
    least_slenderness=LEAST_SLENDERNESS,
    slenderness_clause="10.7.1",
    not_checked=(
        "torsion",
        "axial force",
        "deflection",
        "crack control",
        "bearing",
        "fire resistance",
    ),
)
