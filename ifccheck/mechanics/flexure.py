"""Flexural strength of any reinforced concrete section by equilibrium and strain compatibility.

Knows no standard: the stress block, strains and factors are given.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints, rows_of
from ifccheck.mechanics.width_profile import compression_block, width_at

TOLERANCE = 1e-12
"""Relative accuracy of the neutral axis depth and of equilibrium."""

LAST_STEP = 1e-9
"""A Newton step of this relative size leaves an error far below it."""

NEGLIGIBLE_FORCE = 1e-6
"""Steel that can take no more than this [N] is none."""

AT_MIDDLE = 1e-6
"""A layer within this share of the depth from mid-depth is at it."""

NEWTON_STEPS = 12
"""Steps after which every other step halves the bracket, so that the search must end."""

MOST_STEPS = 120

FINISHED_SHARE = 0.3
"""Share of sections in balance above which the rest is worth working on alone."""


@dataclass(frozen=True, slots=True)
class FlexuralStrength:
    """Equilibrium at crushing of the compression face; one row per section (n).

    Depths are measured from the compression face.
    """

    moment: Floats
    """[N*mm]; the same about any axis, because no axial force acts"""
    neutral_axis_depth: Floats
    """[mm]"""
    block_depth: Floats
    """[mm], as the stress block has it, even beyond the section"""
    block_area: Floats
    """Concrete under the block [mm2]"""
    block_centroid: Floats
    """Depth of that area's centroid [mm]"""
    concrete_force: Floats
    """[N]"""
    compression_steel_force: Floats
    """Steel in compression less the concrete that it displaces [N]"""
    compression_steel_depth: Floats
    """[mm]; 0 where there is no such force"""
    tension_force: Floats
    """[N]"""
    tension_depth: Floats
    """[mm]; 0 where there is no such force"""
    lever_arm: Floats
    """Between the resultants of tension and compression [mm]"""


@dataclass(frozen=True, slots=True)
class _Sections:
    """What equilibrium needs, one row per section (n), layers along the second axis."""

    strips: Floats
    depth: Floats
    """Of each layer [mm]"""
    yield_force: Floats
    """Factored force of each layer at yield [N]"""
    elastic_force: Floats
    """Factored force of each layer at the crushing strain, if it were elastic [N]"""
    displaced_force: Floats
    """Force of the concrete that each layer displaces within the block [N]"""
    reach: Floats
    """How far into its diameter the block reaches, less the part that grows with c [1]"""
    reach_rate: Floats
    """That part over c [1/mm]"""
    deepest: Floats
    """Depth of the deepest layer [mm]"""
    block_stress: Floats
    block_factor: Floats

    def take(self, rows: Ints) -> _Sections:
        """The same at the given rows, laid out in memory so that sums over layers are quick."""
        return _Sections(*(rows_of(getattr(self, name), rows) for name in self.__slots__))

    def laid_out(self) -> _Sections:
        """The same, laid out in that way."""
        return _Sections(*(np.asfortranarray(getattr(self, name)) for name in self.__slots__))


def flexural_strength(
    *,
    strips: Floats,
    layer_depth: Floats,
    layer_area: Floats,
    layer_yield: Floats,
    layer_diameter: Floats,
    block_stress: Floats | float,
    block_factor: Floats | float,
    crushing_strain: Floats | float,
    steel_modulus: Floats | float,
    steel_factor: Floats | float,
) -> FlexuralStrength:
    """Moment at which the compression face crushes, all layers on their own strain.

    sum of forces = 0 with eps(y) = eps_cu (c - y)/c, concrete f_block over a = beta c,
    steel phi_s min(Es |eps|, fy); M = sum of force times depth.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
        Width profile from the compression face.
    layer_depth, layer_area, layer_yield, layer_diameter : arrays (n, L) [mm], [mm2], [MPa], [mm]
        Bar layers; the yield stress is the usable one, already reduced for lack of
        development. Layers of no area are padding.
    block_stress, block_factor : arrays (n) [MPa], [1]
        Factored stress of the rectangular block, and its depth over c.
    crushing_strain, steel_modulus, steel_factor : arrays (n) [1], [MPa], [1]

    Returns
    -------
    FlexuralStrength
        All forces and the moment are 0 where there is no usable steel; nan in gives nan.

    Notes
    -----
    Concrete carries no tension and there is no axial force. Steel in compression loses the
    concrete that it displaces, over the part of the bar that lies within the block, and is
    never taken as less than nothing. That part grows over the bar's diameter, so that the
    sum of forces rises steadily with c and equilibrium has one answer.
    """
    stress, beta, eps_cu, Es, phi_s = (
        np.asarray(a, dtype=np.float64)[..., None]
        for a in (block_stress, block_factor, crushing_strain, steel_modulus, steel_factor)
    )
    ones = np.ones((len(strips), 1))
    sections = _Sections(
        strips=strips,
        depth=layer_depth,
        yield_force=phi_s * layer_area * layer_yield,
        elastic_force=phi_s * layer_area * Es * eps_cu,
        displaced_force=stress * layer_area,
        reach=0.5 - layer_depth / layer_diameter,
        reach_rate=beta / layer_diameter,
        deepest=np.where(layer_area > 0.0, layer_depth, 0.0).max(axis=1, initial=0.0),
        block_stress=(stress * ones)[:, 0],
        block_factor=(beta * ones)[:, 0],
    ).laid_out()
    return _strength(sections, _neutral_axis(sections))


def _steel_forces(sections: _Sections, c: Floats) -> tuple[Floats, Floats]:
    """Net force of each layer, compression positive (n, L), and its slope with c."""
    s = sections
    depth_ratio = s.depth / c[:, None]
    elastic = s.elastic_force * (1.0 - depth_ratio)
    force = np.minimum(np.maximum(elastic, -s.yield_force), s.yield_force)
    rising = np.where(force == elastic, s.elastic_force * depth_ratio / c[:, None], 0.0)
    reached = s.reach + s.reach_rate * c[:, None]
    within = np.minimum(np.maximum(reached, 0.0), 1.0)
    net = force - s.displaced_force * within
    sinking = np.where(within == reached, s.displaced_force * s.reach_rate, 0.0)
    pushing = force > 0.0
    slope = np.where(pushing, np.where(net > 0.0, rising - sinking, 0.0), rising)
    return np.where(pushing, np.maximum(net, 0.0), force), slope


def _out_of_balance(sections: _Sections, c: Floats) -> tuple[Floats, Floats]:
    """Sum of all forces, compression positive, and its slope with c."""
    forces, slopes = _steel_forces(sections, c)
    a = sections.block_factor * c
    area, _ = compression_block(sections.strips, a)
    width = width_at(sections.strips, a)
    balance = sections.block_stress * area + forces.sum(axis=-1)
    return balance, sections.block_stress * sections.block_factor * width + slopes.sum(axis=-1)


def _neutral_axis(sections: _Sections) -> Floats:
    """Depth c at which the forces balance; 0 without usable steel, nan where an input is nan.

    Between 0, where all steel pulls, and the deepest layer, where none does, the sum of forces
    rises from below to above nothing.
    """
    capacity = sections.yield_force.sum(axis=-1)
    guess = _first_guess(sections, capacity)
    known = np.isfinite(guess + (sections.elastic_force + sections.reach_rate).sum(axis=-1))
    c = np.where(capacity <= NEGLIGIBLE_FORCE, 0.0, np.nan)
    rows = np.flatnonzero(known & (capacity > NEGLIGIBLE_FORCE) & (sections.deepest > 0.0))
    if len(rows):
        c[rows] = _search(sections.take(rows), guess[rows], capacity[rows])
    return c


def _search(sections: _Sections, c: Floats, capacity: Floats) -> Floats:
    """Newton's method from a first guess, kept within a bracket, for all sections at once."""
    found = np.full_like(c, np.nan)
    place = np.arange(len(c))
    finished = np.zeros(len(c), dtype=np.bool_)
    low, high = np.zeros_like(c), sections.deepest
    for step in range(MOST_STEPS):
        balance, slope = _out_of_balance(sections, c)
        low, high = np.where(balance < 0.0, c, low), np.where(balance >= 0.0, c, high)
        with np.errstate(divide="ignore", invalid="ignore"):
            better = c - balance / slope
        unsafe = ~((better > low) & (better < high))
        if step >= NEWTON_STEPS and step % 2:
            unsafe[:] = True
        better = np.where(unsafe, (low + high) / 2, better)
        done = (np.abs(balance) <= TOLERANCE * capacity) | (high - low <= TOLERANCE * high)
        last_step = ~unsafe & (np.abs(better - c) <= LAST_STEP * c)
        done |= last_step
        found[place[done]] = np.where(last_step, better, c)[done]
        finished |= done
        if finished.all():
            break
        c = better
        if np.mean(finished) > FINISHED_SHARE:
            going = np.flatnonzero(~finished)
            sections, place, capacity = sections.take(going), place[going], capacity[going]
            low, high, c, finished = low[going], high[going], c[going], finished[going]
    return found


def _first_guess(sections: _Sections, capacity: Floats) -> Floats:
    """Neutral axis if all steel yielded in tension and the section were as wide as on average."""
    height = sections.strips[..., 1].max(axis=-1)
    area, _ = compression_block(sections.strips, height)
    breadth = np.divide(area, height, out=np.ones_like(area), where=area > 0.0)
    c = capacity / np.maximum(sections.block_stress * sections.block_factor * breadth, 1e-300)
    guess: Floats = np.minimum(np.maximum(c, 0.01 * sections.deepest), 0.9 * sections.deepest)
    return guess


def _strength(sections: _Sections, c: Floats) -> FlexuralStrength:
    """Forces and the moment at a neutral axis depth."""
    a = sections.block_factor * c
    area, first = compression_block(sections.strips, a)
    concrete, concrete_moment = sections.block_stress * area, sections.block_stress * first
    forces = _steel_forces(sections, np.where(c > 0.0, c, np.nan))[0]
    forces = np.where((c == 0.0)[:, None], 0.0, forces)
    pushing, pulling = np.maximum(forces, 0.0), np.maximum(-forces, 0.0)
    steel, steel_moment = _resultant(pushing, sections.depth)
    tension, tension_moment = _resultant(pulling, sections.depth)
    compression_depth = _ratio(concrete_moment + steel_moment, concrete + steel)
    return FlexuralStrength(
        moment=tension_moment - concrete_moment - steel_moment,
        neutral_axis_depth=c,
        block_depth=a,
        block_area=area,
        block_centroid=_ratio(first, area),
        concrete_force=concrete,
        compression_steel_force=steel,
        compression_steel_depth=_ratio(steel_moment, steel),
        tension_force=tension,
        tension_depth=_ratio(tension_moment, tension),
        lever_arm=_ratio(tension_moment, tension) - compression_depth,
    )


def _resultant(forces: Floats, depths: Floats) -> tuple[Floats, Floats]:
    """Sum of the layers' forces and of their moments about the compression face."""
    total: Floats = forces.sum(axis=-1)
    moment: Floats = (forces * depths).sum(axis=-1)
    return total, moment


def _ratio(moment: Floats, force: Floats) -> Floats:
    """moment/force, 0 where there is no force."""
    ratio: Floats = np.divide(moment, force, out=np.zeros_like(force), where=force != 0.0)
    return ratio


def tension_side(layer_depth: Floats, layer_area: Floats, depth: Floats) -> Bools:
    """Layers with steel in the half of the depth on the tension side (n, L).

    One at mid-depth is in neither half, so that it cannot serve both faces.

    Parameters
    ----------
    layer_depth, layer_area : arrays (n, L) [mm], [mm2]
        Depths from the compression face.
    depth : array (n) [mm]
        Overall depth of the section.
    """
    side: Bools = ~(layer_area <= 0.0) & (layer_depth > depth[:, None] * (0.5 + AT_MIDDLE))
    return side


def centroid_depth(layer_depth: Floats, layer_area: Floats) -> Floats:
    """Depth of the centroid of the layers' area; nan where there is no area.

    Parameters
    ----------
    layer_depth, layer_area : arrays (n, L) [mm], [mm2]

    Returns
    -------
    array (n) [mm]
    """
    area, moment = _resultant(layer_area, layer_depth)
    centroid: Floats = np.divide(moment, area, out=np.full_like(area, np.nan), where=area > 0.0)
    return centroid
