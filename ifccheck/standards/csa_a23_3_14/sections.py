"""What clauses 8, 10, 11 and 12 need of each station before any demand is known."""

from __future__ import annotations

from dataclasses import dataclass, fields, is_dataclass, replace
from typing import Any, TypeVar

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.standards.csa_a23_3_14.critical import Surroundings

T = TypeVar("T")


def _take(state: T, rows: Ints) -> T:
    """The same state at the given rows of the first axis, nested states included."""
    taken: dict[str, Any] = {}
    for item in fields(state):  # type: ignore[arg-type]
        value = getattr(state, item.name)
        taken[item.name] = _take(value, rows) if is_dataclass(value) else value[rows]
    return replace(state, **taken)  # type: ignore[type-var]


@dataclass(frozen=True, slots=True)
class FaceState:
    """A section with one face in tension; one row per station (N).

    Flexural tension steel is what lies within half the depth of the tension face, each bar
    reduced pro rata where it is not fully developed. Depths are measured from the
    compression face.
    """

    moment_resistance: Floats
    """Mr [N*mm]; 0 without flexural tension steel, nan outside the standard's range"""
    effective_depth: Floats
    """d to the centroid of the flexural tension steel [mm]; nan where there is none"""
    shear_depth: Floats
    """dv, the greater of 0.9 d and 0.72 h [mm]; 0.72 h where there is no tension steel"""
    web_width: Floats
    """bw, the least width between the compression face and the depth d [mm]"""
    tension_area: Floats
    """As, flexural tension steel, developed [mm2]"""
    tension_area_full: Floats
    """The same as if fully developed [mm2]"""
    tension_force: Floats
    """phi_s fy As of the flexural tension steel, developed [N]"""
    tension_yield: Floats
    """Greatest fy of the flexural tension steel [MPa]; 0 where there is none"""
    neutral_axis_depth: Floats
    """c [mm]"""
    block_depth: Floats
    """a = beta1 c, at most h [mm]"""
    lever_arm: Floats
    """Distance between the resultants of tension and compression [mm]"""
    compression_area: Floats
    """Concrete area under the stress block, effective flange width counted [mm2]"""
    compression_depth: Floats
    """Depth of the centroid of that area [mm]"""
    concrete_force: Floats
    """alpha1 phi_c f'c times that area [N]"""
    compression_steel_force: Floats
    """Force in compression steel less the concrete that it displaces [N]"""
    compression_steel_depth: Floats
    """Depth of that force [mm]; 0 where there is none"""
    tension_resultant: Floats
    """Force of all steel in tension at the resistance Mr [N]"""
    tension_resultant_depth: Floats
    """Depth of that force [mm]; 0 where there is none"""
    minimum_area: Floats
    """Minimum flexural reinforcement of 10.5.1.2 [mm2]"""
    cracking_moment: Floats
    """Mcr of the gross section [N*mm]"""
    beyond_ductility: Bools
    """c/d exceeds 700/(700 + fy) (10.5.2): Mr is nan"""


@dataclass(frozen=True, slots=True)
class Prepared:
    """Sections of clauses 8, 10, 11 and 12 at each station (N)."""

    beam: Ints
    """Row of Members"""
    x: Floats
    """[mm] from the beam's start"""
    inside: Bools
    """Between the faces of the supports"""
    concrete_strength: Floats
    """f'c [MPa]"""
    density_factor: Floats
    """lambda"""
    aggregate_size: Floats
    """ag [mm]"""
    alpha1: Floats
    beta1: Floats
    depth: Floats
    """h [mm]"""
    longitudinal_yield: Floats
    """Greatest fy of all bars that reach the station [MPa]; 0 where there are none"""
    stirrup_area: Floats
    """Av of all legs [mm2]; 0 without stirrups, nan where not known"""
    stirrup_spacing: Floats
    """s [mm]; inf without stirrups"""
    stirrup_yield: Floats
    """[MPa]"""
    sagging: FaceState
    """The soffit in tension"""
    hogging: FaceState
    """The top in tension"""
    beyond_concrete_strength: Bools
    """f'c lies outside 20 to 80 MPa (8.6.1.1)"""
    beyond_yield: Bools
    """A longitudinal bar's fy exceeds 500 MPa (8.5.1)"""
    surroundings: Surroundings
    """Faces and critical sections as seen from each station: critical.surroundings(...)"""

    def take(self, rows: Ints) -> Prepared:
        """The same at the given stations; rows may repeat."""
        return _take(self, rows)
