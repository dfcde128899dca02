"""Solids with curved faces, by the geometry engine."""

from __future__ import annotations

import numpy as np

from ifccheck.ifc.entity import Entity, UnreadableError
from ifccheck.ifc.profile_curves import SAGITTA
from ifccheck.ifc.solids import Facets, facets

MM_PER_M = 1000.0


def tessellated(item: Entity) -> Facets:
    """Return an item by flat triangles that lie within a tenth of a mm of its faces [mm].

    Raises UnreadableError where the geometry engine cannot build it.
    """
    import ifcopenshell.geom

    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", SAGITTA / MM_PER_M)
    try:
        shape = ifcopenshell.geom.create_shape(settings, item)
    except RuntimeError as error:
        raise UnreadableError(
            f"body is an {item.is_a()} that the geometry engine cannot build"
        ) from error
    geometry = getattr(shape, "geometry", shape)
    points = np.array(geometry.verts, dtype=float).reshape(-1, 3) * MM_PER_M
    triangles = np.array(geometry.faces, dtype=np.intp).reshape(-1, 3)
    if not len(triangles):
        raise UnreadableError(
            f"body is an {item.is_a()} of which the geometry engine makes nothing"
        )
    return facets(points, ([corners] for corners in triangles.tolist()))
