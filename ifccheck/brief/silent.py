"""The brief of an engineer who has said nothing yet."""

from __future__ import annotations

import math
from dataclasses import fields, replace
from pathlib import Path

from ifccheck.brief.convert import DEFAULT_SOURCES
from ifccheck.brief.model import Basis, Brief, Defaults


def silent_brief(standard: str) -> Brief:
    """Return a brief that only lets ends stand on the members that can hold them.

    Nothing is rated by it: it has no load, and a weight that no stated density exceeds.
    """
    return Brief(
        path=Path(),
        file_name="",
        sha256="",
        basis=Basis(standard, shear_method=None, concrete_unit_weight=math.inf),
        defaults=Defaults(supports=("pinned", "pinned")),
        sources=DEFAULT_SOURCES,
        schedule=None,
        mapping_optional=False,
        property_mapping={},
        lines={},
        cases=(),
    )


def with_all_defaults(brief: Brief) -> Brief:
    """Return a brief that gives every default which it left open, to see what else is missing.

    Nothing is rated by it, and none of these values is told to anyone.
    """
    usual = Defaults(
        concrete_strength=30.0,
        bar_yield=400.0,
        stirrup_yield=400.0,
        cover=40.0,
        aggregate_size=20.0,
        supports=("pinned", "pinned"),
    )
    given = {name: value for name in _NAMES if (value := getattr(brief.defaults, name)) is not None}
    return replace(brief, defaults=replace(usual, **given))


_NAMES = tuple(field.name for field in fields(Defaults))
