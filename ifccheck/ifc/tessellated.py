"""Solids with curved faces, by the geometry engine."""

from __future__ import annotations

import ctypes
import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager

import numpy as np

from ifccheck.ifc.entity import Entity, UnreadableError
from ifccheck.ifc.profile_curves import SAGITTA
from ifccheck.ifc.solids import Facets, facets

MM_PER_M = 1000.0


STREAMS = (1, 2)
"""Descriptors of what a process prints, and of its errors"""


@contextmanager
def _quiet() -> Iterator[None]:
    """Keep off our output what the engine prints by itself, past Python's own streams."""
    _flush()
    kept = {stream: os.dup(stream) for stream in STREAMS if _is_open(stream)}
    nowhere = os.open(os.devnull, os.O_WRONLY)
    try:
        for stream in kept:
            os.dup2(nowhere, stream)
        yield
    finally:
        _flush()
        for stream, own in kept.items():
            os.dup2(own, stream)
            os.close(own)
        os.close(nowhere)


def _is_open(stream: int) -> bool:
    """Whether a descriptor is open: a service may run without one."""
    try:
        os.fstat(stream)
    except OSError:
        return False
    return True


def _flush() -> None:
    """Write out what Python and the C library hold back."""
    for stream in filter(None, (sys.stdout, sys.stderr)):
        stream.flush()
    library = ctypes.cdll.msvcrt if sys.platform == "win32" else ctypes.CDLL(None)
    library.fflush(None)


def tessellated(item: Entity) -> Facets:
    """Return an item by flat triangles that lie within a tenth of a mm of its faces [mm].

    Raises UnreadableError where the geometry engine cannot build it.
    """
    import ifcopenshell.geom

    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", SAGITTA / MM_PER_M)
    try:
        with _quiet():
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
