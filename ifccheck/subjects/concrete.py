"""The concrete of a beam: what the brief states, the model holds, or a default fills in."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import lru_cache
from typing import NamedTuple

from ifccheck.beam import Beam, Given, Remark
from ifccheck.brief.statements import MaterialStatement
from ifccheck.subjects.findings import NO_MATERIAL, Findings, Sources
from ifccheck.units import show

_WEIGHT_OF_DENSITY = 9.80665e-9
"""Unit weight [N/mm3] for each kg/m3, at standard gravity."""


class Concrete(NamedTuple):
    """The concrete that a beam is rated with."""

    strength: Given
    density_factor: Given
    aggregate_size: Given
    unit_weight: Given


def concrete_of(beam: Beam, sources: Sources, findings: Findings) -> Concrete:
    """Return the concrete of a beam, and note what is assumed or missing."""
    stated = sources.materials.get(beam.key, NO_MATERIAL)
    findings.remarks += stated.remarks
    strength = _strength(beam, stated, sources, findings)
    density = stated.density or beam.concrete_density
    return Concrete(
        strength=findings.assume("concrete strength", strength),
        density_factor=_density_factor(density, sources.standard.density_factor),
        aggregate_size=_aggregate(stated, sources, findings),
        unit_weight=_unit_weight(stated.density or beam.greatest_density, sources, findings),
    )


@lru_cache(maxsize=256)
def _density_factor(density: Given | None, factor_of: Callable[[float | None], float]) -> Given:
    if density is None:
        return Given(factor_of(None), "normal density", assumed=True)
    return Given(factor_of(density.value), density.source)


def _unit_weight(density: Given | None, sources: Sources, findings: Findings) -> Given:
    """The brief's unit weight [N/mm3], or that of a density stated for the beam if greater.

    A lesser density changes nothing: the brief's figure holds the weight of the steel too.
    """
    brief = sources.unit_weight
    if density is None or density.value * _WEIGHT_OF_DENSITY <= brief.value:
        return brief
    stated = Given(density.value * _WEIGHT_OF_DENSITY, density.source)
    text = (
        f"self weight by {show(density.value, 'density')} from {density.source}:"
        f" {show(stated.value, 'unit_weight')}, more than the"
        f" {show(brief.value, 'unit_weight')} of the brief"
    )
    findings.remarks.append(Remark(findings.key, "basis", text, "doubt"))
    return stated


def _strength(beam: Beam, stated: MaterialStatement, sources: Sources, findings: Findings) -> Given:
    """The brief's statement, the model's, the brief's default; nan where there is none.

    A strength that the model states and that cannot be read is no silence: no default fills it.
    """
    if stated.concrete_strength is None and beam.strength_reason is not None:
        findings.reasons.append(beam.strength_reason)
        return Given(math.nan, "not read")
    given = stated.concrete_strength or beam.concrete_strength or sources.defaults.concrete_strength
    if given is None:
        findings.refuse(
            "concrete strength unknown: neither the model nor the brief gives one (write"
            " defaults.concrete_strength or an entry of [[materials]])"
        )
        return Given(math.nan, "not known")
    return given


def _aggregate(stated: MaterialStatement, sources: Sources, findings: Findings) -> Given:
    """Size of the aggregate; where no one gives it, checks that need it cannot be made."""
    size = stated.aggregate_size or sources.defaults.aggregate_size
    if size is None:
        return Given(math.nan, "not given in the brief (defaults.aggregate_size)")
    return findings.assume("largest aggregate", size)
