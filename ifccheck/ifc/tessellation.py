"""Bodies that nothing else reads, traced by ifcopenshell's geometry engine."""

from __future__ import annotations

import numpy as np

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import Entity, UnreadableError, label

DEFLECTION = 0.5
"""Greatest distance between a curved face and its facets [mm]."""


def tessellated(item: Entity) -> Cloud:
    """Return the corners of the facets of a representation item, in its own axes [mm].

    Raises UnreadableError where the engine cannot make a body of it.
    """
    # The engine takes long to load and is seldom needed.
    from ifcopenshell import geom

    settings = geom.settings()
    settings.set("mesher-linear-deflection", DEFLECTION / 1000.0)
    try:
        shape = geom.create_shape(settings, item)
    except RuntimeError as error:
        raise UnreadableError(f"the geometry engine makes no body of {label(item)}") from error
    corners = np.array(shape.verts, dtype=float).reshape(-1, 3) * 1000.0
    if not len(corners) or not np.isfinite(corners).all():
        raise UnreadableError(f"the geometry engine makes no body of {label(item)}")
    return corners
