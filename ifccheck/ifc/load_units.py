"""The units of forces, of forces per length and of moments, and whether they are sure."""

from __future__ import annotations

import math
from typing import NamedTuple

from ifccheck.ifc.units import INNER_FACTORS, ModelUnits


class LoadUnit(NamedTuple):
    """Factor of a measure to N and mm, and why it may be another."""

    factor: float
    doubt: str


class LoadUnits(NamedTuple):
    """Units of the loads of a model."""

    force: LoadUnit
    line_force: LoadUnit
    moment: LoadUnit


def load_units(units: ModelUnits) -> LoadUnits:
    """Return the units of a model's loads.

    What is not declared is in coherent SI units by convention; many a program means the unit of
    force by the unit of length. Where these differ, the greater counts, with a doubt.
    """
    force_known = "force" in units.declared
    doubt = "" if force_known else "the model declares no unit of force: newton is taken"
    return LoadUnits(
        force=LoadUnit(units.force, doubt),
        line_force=_derived(
            units, "line_force" in units.declared, units.line_force,
            INNER_FACTORS["line_force"], units.force / units.length, "force per length",
        ),
        moment=_derived(
            units, "moment" in units.declared, units.moment,
            INNER_FACTORS["moment"], units.force * units.length, "moment",
        ),
    )  # fmt: skip


def _derived(
    units: ModelUnits, declared: bool, stated: float, coherent: float, meant: float, words: str
) -> LoadUnit:
    if declared:
        return LoadUnit(stated, "")
    if "force" in units.declared and math.isclose(coherent, meant, rel_tol=1e-9):
        return LoadUnit(coherent, "")
    return LoadUnit(
        max(coherent, meant), f"the model declares no unit of {words}: the greatest that may be"
        " meant is taken"
    )  # fmt: skip
