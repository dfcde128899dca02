"""Clause 10: flexure with the soffit or the top in tension."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Face
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.contract import (
    CalculationLine,
    Check,
    LimitState,
    Note,
    Outside,
    Quick,
)
from ifccheck.standards.csa_a23_3_14 import materials
from ifccheck.standards.csa_a23_3_14.faces import FaceState, ductility_limit
from ifccheck.standards.csa_a23_3_14.sections import Prepared

CLAUSE = "10.1"

CRACKING_MARGIN = 1.2
"""Mr at least this many times Mcr makes a minimum area needless (10.5.1.1)"""


@dataclass(frozen=True, slots=True)
class FlexureDetails:
    """What the calculation of flexure prints; arrays of the check's shape."""

    demand: Floats
    concrete_strength: Floats
    alpha1: Floats
    beta1: Floats
    concrete_factor: Floats
    steel_factor: Floats
    depth: Floats
    tension_area: Floats
    tension_yield: Floats
    effective_depth: Floats
    neutral_axis_depth: Floats
    block_depth: Floats
    axis_ratio: Floats
    axis_ratio_limit: Floats
    compression_area: Floats
    compression_depth: Floats
    concrete_force: Floats
    compression_steel_force: Floats
    compression_steel_depth: Floats
    tension_resultant: Floats
    tension_resultant_depth: Floats
    resistance: Floats
    utilisation: Floats
    yielding: Bools
    """All the tension steel yields, and no other steel is in tension"""
    not_yielding: Bools
    singly: Bools
    """No steel is in compression"""
    doubly: Bools
    resisting: Bools
    """The resistance is not nothing"""
    not_resisting: Bools


def _check_sagging(prepared: Prepared, demand: Demand) -> Check:
    """Flexure with the soffit in tension."""
    return _check(prepared, prepared.sagging, _sagging(demand))


def _check_hogging(prepared: Prepared, demand: Demand) -> Check:
    """Flexure with the top in tension."""
    return _check(prepared, prepared.top_in_flexure, _hogging(demand))


def _sagging(demand: Demand) -> Floats:
    return np.maximum(demand.moment, 0.0)


def _hogging(demand: Demand) -> Floats:
    return np.maximum(-demand.moment, 0.0)


def _check(prepared: Prepared, face: FaceState, moment: Floats) -> Check:
    """Moment against resistance on one face."""
    details = _details(prepared, face, moment)
    return Check(
        demand=moment,
        resistance=details.resistance,
        utilisation=details.utilisation,
        outside=_outside(prepared, face, moment),
        details=details,
    )


def utilisation(demand: Floats, resistance: Floats) -> Floats:
    """demand / resistance; 0 where nothing is demanded, inf where nothing resists."""
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = demand / resistance
    return np.where(demand == 0.0, 0.0, ratio)


def _details(prepared: Prepared, face: FaceState, moment: Floats) -> FlexureDetails:
    """The arrays that the calculation prints."""
    fully = materials.STEEL_FACTOR * face.tension_area * face.tension_yield
    yielding = np.abs(face.tension_resultant - fully) <= 1e-9 * fully
    doubly = face.compression_steel_force > 0.0
    ratio = face.neutral_axis_depth / face.effective_depth
    resistance = np.broadcast_to(face.moment_resistance, moment.shape)
    details = FlexureDetails(
        demand=moment,
        concrete_strength=prepared.concrete_strength,
        alpha1=prepared.alpha1,
        beta1=prepared.beta1,
        concrete_factor=np.full_like(prepared.x, materials.CONCRETE_FACTOR),
        steel_factor=np.full_like(prepared.x, materials.STEEL_FACTOR),
        depth=prepared.depth,
        tension_area=face.tension_area,
        tension_yield=face.tension_yield,
        effective_depth=face.effective_depth,
        neutral_axis_depth=face.neutral_axis_depth,
        block_depth=face.block_depth,
        axis_ratio=ratio,
        axis_ratio_limit=ductility_limit(face.tension_yield),
        compression_area=face.compression_area,
        compression_depth=face.compression_depth,
        concrete_force=face.concrete_force,
        compression_steel_force=face.compression_steel_force,
        compression_steel_depth=face.compression_steel_depth,
        tension_resultant=face.tension_resultant,
        tension_resultant_depth=face.tension_resultant_depth,
        resistance=resistance,
        utilisation=utilisation(moment, resistance),
        yielding=yielding,
        not_yielding=~yielding,
        singly=~doubly,
        doubly=doubly,
        resisting=resistance != 0.0,
        not_resisting=resistance == 0.0,
    )
    return _spread(details, moment.shape)


def _spread(details: FlexureDetails, shape: tuple[int, ...]) -> FlexureDetails:
    """The same with every array of one shape."""
    return replace(
        details,
        **{
            name: np.broadcast_to(getattr(details, name), shape)
            for name in FlexureDetails.__dataclass_fields__
        },
    )


def _outside(prepared: Prepared, face: FaceState, moment: Floats) -> tuple[Outside, ...]:
    """Clauses outside whose range a moment is demanded."""
    demanded = moment != 0.0
    return (
        Outside(
            "8.6.1.1",
            "concrete strength is not between 20 and 80 MPa",
            demanded & prepared.beyond_concrete_strength,
        ),
        Outside("8.5.1", "yield stress of a bar exceeds 500 MPa", demanded & prepared.beyond_yield),
        Outside(
            "10.5.2",
            "the tension steel cannot be taken to yield: c/d exceeds 700/(700 + fy)",
            demanded & face.beyond_ductility,
        ),
        Outside(
            "10.1",
            "a bar lies above or below the concrete of this section",
            demanded & face.bars_outside,
        ),
    )


def notes(prepared: Prepared) -> tuple[Note, ...]:
    """Where a face holds less than the minimum flexural reinforcement.

    As < 0.2 sqrt(f'c)/fy bt h and Mr < 1.2 Mcr

    Notes
    -----
    Looked at where the bars of the face are fully developed. Whether the steel is a third
    more than the analysis asks for (10.5.1.3) is not known here.

    References
    ----------
    CSA A23.3-14, 10.5.1
    """
    states: tuple[tuple[FaceState, str, Face], ...] = (
        (prepared.sagging, "soffit", "bottom"),
        (prepared.hogging, "top", "top"),
    )
    return tuple(
        Note(
            "10.5.1",
            f"the {name} has less than the minimum flexural reinforcement, "
            "which is enough only if it is a third more than the moment needs",
            _below_minimum(state),
            face,
        )
        for state, name, face in states
    )


def _below_minimum(face: FaceState) -> Bools:
    """Fully developed steel that is less than 10.5.1.1 and 10.5.1.2 ask for."""
    developed = (face.tension_area_full > 0.0) & (face.tension_area >= face.tension_area_full)
    strong = face.moment_resistance >= CRACKING_MARGIN * face.cracking_moment
    short: Bools = developed & (face.tension_area < face.minimum_area) & ~strong
    return short


LINES = (
    CalculationLine("M_f", "factored moment", "", "demand", "N*mm", "8.3"),
    CalculationLine("f_c", "concrete strength f'c", "", "concrete_strength", "MPa", "8.6.1"),
    CalculationLine(
        "alpha_1", "stress of the block over f'c",
        "max(0.85 - 0.0015*f_c, 0.67)", "alpha1", "", "10.1.7",
    ),
    CalculationLine(
        "beta_1", "depth of the block over c",
        "max(0.97 - 0.0025*f_c, 0.67)", "beta1", "", "10.1.7",
    ),
    CalculationLine("phi_c", "resistance factor of concrete", "", "concrete_factor", "", "8.4.2"),
    CalculationLine("phi_s", "resistance factor of bars", "", "steel_factor", "", "8.4.3"),
    CalculationLine("h", "depth of the section", "", "depth", "mm", ""),
    CalculationLine(
        "A_s", "tension steel, as far as it is developed", "", "tension_area", "mm2", "12.1",
    ),
    CalculationLine("f_y", "yield stress of that steel", "", "tension_yield", "MPa", "8.5.1"),
    CalculationLine("d", "effective depth to that steel", "", "effective_depth", "mm", "10.1"),
    CalculationLine(
        "c", "neutral axis depth at which the forces balance, every layer on its own strain",
        "", "neutral_axis_depth", "mm", "10.1.2",
    ),
    CalculationLine("a", "depth of the block", "min(beta_1*c, h)", "block_depth", "mm", "10.1.7"),
    CalculationLine("r_c", "neutral axis depth over d", "c/d", "axis_ratio", "", "10.5.2"),
    CalculationLine(
        "r_max", "greatest such ratio", "700/(700 + f_y)", "axis_ratio_limit", "", "10.5.2",
    ),
    CalculationLine(
        "A_c", "concrete under the block", "", "compression_area", "mm2", "10.1.7",
    ),
    CalculationLine(
        "x_c", "depth of that area's centroid", "", "compression_depth", "mm", "10.1.7",
    ),
    CalculationLine(
        "C_c", "force in the concrete",
        "alpha_1*phi_c*f_c*A_c", "concrete_force", "N", "10.1.7",
    ),
    CalculationLine(
        "C_s", "force in compression steel less the concrete that it displaces",
        "", "compression_steel_force", "N", "10.1.2", when="doubly",
    ),
    CalculationLine(
        "x_s", "depth of that force", "", "compression_steel_depth", "mm", "10.1.2", when="doubly",
    ),
    CalculationLine(
        "T", "force in the steel in tension, all yielding",
        "phi_s*A_s*f_y", "tension_resultant", "N", "8.5.3", when="yielding",
    ),
    CalculationLine(
        "T", "force in the steel in tension, by its strains",
        "", "tension_resultant", "N", "8.5.3", when="not_yielding",
    ),
    CalculationLine(
        "d_T", "depth of that force", "", "tension_resultant_depth", "mm", "10.1.2",
    ),
    CalculationLine(
        "M_r", "moment resistance",
        "T*d_T - C_c*x_c", "resistance", "N*mm", "10.1.1", when="singly",
    ),
    CalculationLine(
        "M_r", "moment resistance",
        "T*d_T - C_c*x_c - C_s*x_s", "resistance", "N*mm", "10.1.1", when="doubly",
    ),
    CalculationLine(
        "U", "utilisation", "M_f/M_r", "utilisation", "", "8.1.3", when="resisting",
    ),
    CalculationLine("U", "utilisation", "", "utilisation", "", "8.1.3", when="not_resisting"),
)  # fmt: skip


FLEXURE_SAGGING = LimitState(
    name="FlexureSagging",
    title="flexure, sagging",
    clause=CLAUSE,
    covers="flexure",
    demand_unit="N*mm",
    check=_check_sagging,
    lines=LINES,
)

FLEXURE_HOGGING = LimitState(
    name="FlexureHogging",
    title="flexure, hogging",
    clause=CLAUSE,
    covers="flexure",
    demand_unit="N*mm",
    check=_check_hogging,
    lines=LINES,
)


@dataclass(frozen=True, slots=True)
class _Resistances:
    """Moment resistance with the soffit and with the top in tension; one row per station (N)."""

    soffit: Floats
    top: Floats

    def take(self, rows: Ints | slice) -> _Resistances:
        """The same at the given stations; rows may repeat."""
        return _Resistances(self.soffit[rows], self.top[rows])


def _resistances(prepared: Prepared) -> _Resistances:
    top = prepared.top_in_flexure.moment_resistance
    return _Resistances(prepared.sagging.moment_resistance, top)


def _quick(resists: _Resistances, demand: Demand) -> tuple[tuple[Floats, Floats], ...]:
    """Utilisation and resistance alone."""
    return (
        (utilisation(_sagging(demand), resists.soffit), resists.soffit),
        (utilisation(_hogging(demand), resists.top), resists.top),
    )


def _moments(demand: Demand) -> tuple[Floats, Floats]:
    """The moment that tensions the soffit, and that which tensions the top."""
    return demand.moment, -demand.moment


QUICK_FLEXURE = Quick((FLEXURE_SAGGING, FLEXURE_HOGGING), _resistances, _quick, demanded=_moments)
