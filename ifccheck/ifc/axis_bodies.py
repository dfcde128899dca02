"""A member of which only the axis is drawn, with the profile that its material set names."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.bodies import Prism, resolved_items
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import REPRESENTATION, Entity, UnreadableError, get, need, several
from ifccheck.ifc.lofts import straight_line
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.profile_shapes import Profile
from ifccheck.ifc.profiles import Profiles

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

TOLD = (
    "its body is not drawn: its section is the profile of its material, placed about its axis by"
    " cardinal point {point}"
)
MIDDLE = 5
ALONG = 0.999
"""Cosine of the angle within which an axis runs along that of the placement."""


def axis_line(context: Context, entity: Entity) -> tuple[Cloud, Cloud] | None:
    """Return the ends of an element's Axis representation in the building [mm].

    None where it has none that is a single straight line.
    """
    shape = entity.get_argument(REPRESENTATION)
    whole = context.placements.matrix(entity)
    for representation in (shape.get_argument(2) or ()) if shape is not None else ():
        if get(representation, "RepresentationIdentifier") != "Axis":
            continue
        items = list(resolved_items(context, representation, whole))
        if len(items) != 1:
            return None
        matrix = items[0].matrix
        start, end = straight_line(context, items[0].item)
        first, last = (matrix[:3, :3] @ place + matrix[:3, 3] for place in (start, end))
        return np.asarray(first), np.asarray(last)
    return None


def prism_about_axis(context: Context, profiles: Profiles, entity: Entity) -> tuple[Prism, str]:
    """Return an element as its material's profile pushed along its axis, and what to tell of it.

    The profile's axes are those of the placement where the axis runs along its z, as the schema
    has it; else the profile's y points up.

    Raises UnreadableError where there is no such axis or profile.
    """
    line = axis_line(context, entity)
    definition = context.relations.material_of(entity.id())
    if line is None or definition is None:
        raise UnreadableError("no body in the model")
    profile, point = _profile(profiles, context.file.by_id(definition))
    frame = _frame(line[1] - line[0], context.placements.matrix(entity))
    moved = profile.moved(_shifted(profile, point))
    matrix = np.eye(4)
    matrix[:3, :3], matrix[:3, 3] = frame, line[0]
    x, y, z = (line[1] - line[0]).tolist()
    return Prism(moved, matrix, (x, y, z)), TOLD.format(point=point)


def _profile(profiles: Profiles, definition: Entity) -> tuple[Profile, int]:
    """The profile of a material set, and the cardinal point that lies on the axis."""
    point = MIDDLE
    if definition.is_a("IfcMaterialProfileSetUsage"):
        point = get(definition, "CardinalPoint") or MIDDLE
        definition = need(definition, "ForProfileSet")
    if not definition.is_a("IfcMaterialProfileSet"):
        raise UnreadableError("no body in the model")
    area = get(definition, "CompositeProfile")
    parts = several(definition, "MaterialProfiles")
    if area is None and len(parts) == 1:
        if parts[0].is_a("IfcMaterialProfileWithOffsets"):
            raise UnreadableError("no body in the model, and a material profile with offsets")
        area = get(parts[0], "Profile")
    if area is None:
        raise UnreadableError("no body in the model, and not one profile in its material set")
    return profiles.of(area), int(point)


def _frame(along: Cloud, placement: Matrix) -> Matrix:
    """Columns: x and y of the profile, and the axis."""
    z = along / np.sqrt(along @ along)
    own_x, _, own_z = placement[:3, :3].T
    upright = abs(z @ own_z) > ALONG
    x = own_x - (own_x @ z) * z if upright else np.cross((0.0, 0.0, 1.0), z)
    size = float(np.sqrt(x @ x))
    if size < 1.0 - ALONG:
        raise UnreadableError("vertical member")
    x = x / size
    return np.stack([x, np.cross(z, x), z], axis=1)


def _shifted(profile: Profile, point: int) -> Matrix:
    """The move that brings a cardinal point of a profile to its origin."""
    low, high = profile.rings[0].min(axis=0), profile.rings[0].max(axis=0)
    middle, centroid = (low + high) / 2.0, np.array(profile.centroid)
    columns = (low[0], middle[0], high[0])
    rows = (low[1], middle[1], high[1])
    places = {3 * row + column + 1: (columns[column], rows[row])
              for row in range(3) for column in range(3)}  # fmt: skip
    places |= {10: tuple(centroid), 11: (centroid[0], low[1]), 12: (low[0], centroid[1]),
               13: (high[0], centroid[1]), 14: (centroid[0], high[1])}  # fmt: skip
    if point not in places:
        raise UnreadableError(f"no body in the model, and an axis at cardinal point {point}")
    matrix = np.eye(4)
    matrix[:2, 3] = -np.array(places[point])
    return matrix
