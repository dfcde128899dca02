"""The profiles of a model as plane figures [mm], each traced once."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.entity import Entity, UnreadableError, get, need, several, text
from ifccheck.ifc.placements import IDENTITY, Placements
from ifccheck.ifc.profile_curves import Corner, Points, read_pieces, ring, traced
from ifccheck.ifc.profile_families import FAMILIES, SLOPES
from ifccheck.ifc.profile_shapes import Profile

if TYPE_CHECKING:
    from shapely import Polygon

MAY_BE_NEGATIVE = ("TopXOffset",)


class Profiles:
    """The profiles of a model, each traced once."""

    def __init__(self, placements: Placements) -> None:
        self._placements = placements
        self._by_id: dict[int, Profile | UnreadableError] = {}

    def of(self, profile: Entity) -> Profile:
        """Return a profile as polygons; raises UnreadableError where it cannot be."""
        step_id = profile.id()
        if step_id not in self._by_id:
            try:
                self._by_id[step_id] = self._read(profile)
            except UnreadableError as error:
                self._by_id[step_id] = error
        found = self._by_id[step_id]
        if isinstance(found, UnreadableError):
            raise found
        return found

    def _read(self, profile: Entity) -> Profile:
        name = text(profile, "ProfileName")
        kind = profile.is_a()
        if get(profile, "ProfileType") == "CURVE":
            raise UnreadableError("profile is a curve without an area")
        if kind in ("IfcDerivedProfileDef", "IfcMirroredProfileDef"):
            found = self._derived(profile)
        elif kind == "IfcCompositeProfileDef":
            found = self._composite(profile)
        elif kind == "IfcCenterLineProfileDef":
            found = self._along_centre_line(profile)
        elif kind in ("IfcArbitraryClosedProfileDef", "IfcArbitraryProfileDefWithVoids"):
            found = self._arbitrary(profile)
        elif kind in FAMILIES:
            found = self._parametric(profile)
        else:
            raise UnreadableError(f"profile of class {kind}")
        if not (math.isfinite(found.area) and found.area > 0):
            raise UnreadableError("profile without an area")
        return Profile(found.rings, name or found.name)

    def _parametric(self, profile: Entity) -> Profile:
        scale = self._placements.scale

        def length(name: str, default: float | None = None) -> float:
            value = get(profile, name)
            if value is None and default is None:
                raise UnreadableError(f"{profile.is_a()} without {name}")
            if value is None:
                return default or 0.0
            if value < 0.0 and name not in MAY_BE_NEGATIVE:
                raise UnreadableError(f"{profile.is_a()} with {name} of {value:g}")
            return float(value) * scale

        family = FAMILIES[profile.is_a()]
        for slope in SLOPES.get(family, ()):
            if get(profile, slope):
                raise UnreadableError(f"{profile.is_a()} with sloping faces")
        rings = tuple(ring(pieces, hole=number > 0) for number, pieces in enumerate(family(length)))
        if profile.is_a() != "IfcRectangleProfileDef":
            require_simple(rings)  # a flange thicker than the depth, a wall thicker than the tube
        matrix = self._placements.axes(get(profile, "Position"))
        return Profile(rings) if matrix is IDENTITY else Profile(rings).moved(matrix)

    def _arbitrary(self, profile: Entity) -> Profile:
        curves = (need(profile, "OuterCurve"), *several(profile, "InnerCurves"))
        rings = tuple(
            ring(read_pieces(curve, self._placements), hole=number > 0)
            for number, curve in enumerate(curves)
        )
        require_simple(rings)
        return Profile(rings)

    def _along_centre_line(self, profile: Entity) -> Profile:
        """A strip of even thickness, its corners mitred, its ends square."""
        from shapely import LineString, Polygon

        pieces = read_pieces(need(profile, "Curve"), self._placements)
        places = [place for piece in pieces for place in traced(piece)]
        thickness = float(need(profile, "Thickness")) * self._placements.scale
        line = LineString(list(dict.fromkeys(places)))
        strip = line.buffer(thickness / 2.0, cap_style="flat", join_style="mitre", mitre_limit=10.0)
        if not isinstance(strip, Polygon) or not line.is_simple:
            raise UnreadableError("centre line of a profile that crosses itself")
        return _of_polygon(strip)

    def _derived(self, profile: Entity) -> Profile:
        parent = self.of(need(profile, "ParentProfile"))
        if profile.is_a() == "IfcMirroredProfileDef":
            return parent.moved(np.diag((-1.0, 1.0, 1.0, 1.0)))
        return parent.moved(self._placements.operator(need(profile, "Operator")))

    def _composite(self, profile: Entity) -> Profile:
        from shapely import Polygon, unary_union

        parts = [self.of(part) for part in several(profile, "Profiles")]
        joined = unary_union([Polygon(part.rings[0], part.rings[1:]) for part in parts])
        if not isinstance(joined, Polygon):
            raise UnreadableError("composite profile of separate parts")
        return _of_polygon(joined)


def _of_polygon(polygon: Polygon) -> Profile:
    rings = [polygon.exterior, *polygon.interiors]
    return Profile(
        tuple(
            ring([Corner((x, y)) for x, y in part.coords], hole=number > 0)
            for number, part in enumerate(rings)
        )
    )


def require_simple(rings: Sequence[Points]) -> None:
    """Raise UnreadableError where an outline crosses itself or a void leaves it."""
    from shapely import Polygon, is_valid

    if not is_valid(Polygon(rings[0], list(rings[1:]))):
        raise UnreadableError("outline crosses itself")
