"""The brief of an engineer who has said nothing yet."""

from __future__ import annotations

import math
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
        property_mapping={},
        lines={},
        cases=(),
    )
