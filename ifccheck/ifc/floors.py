"""The slabs of a model that bring load to beams, as they are drawn, and what goes through them."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING, NamedTuple

from ifccheck.beam import Floors, FloorSlab, Plate, Ring
from ifccheck.ifc.bodies import Placed, Prism, body_items, extrusion
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import (
    GLOBAL_ID,
    ILL_TYPED,
    NAME,
    TAG,
    Entity,
    UnreadableError,
    label,
    text_at,
)
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.slabs import LEVEL, SlabReader, drawn_rings, levels
from ifccheck.ifc.vectors import unit
from ifccheck.ifc.voids import FACETED

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

NO_PLATE = "it is no level plate that can be read"
CROSSES = "its outline crosses itself"
NO_BODY = "it has no body of its own"
OF_WALL = "Pset_WallCommon"
THROUGH = 1.0
"""How far an opening may stop short of either face and still go through [mm]"""
SAME = 0.1
"""Places that differ by no more are one [mm]"""


class _Upright(NamedTuple):
    rings: tuple[Ring, ...]
    bottom: float
    top: float


class FloorReader:
    """Reads the slabs of one model for the loads that they bring to beams."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context, self._profiles = context, profiles
        self._slabs = SlabReader(context, profiles)

    def read(self) -> Floors:
        """Return every slab, also those of which it cannot be told where they lie."""
        seen: Counter[str] = Counter()
        found = []
        for entity in self._context.file.by_type("IfcSlab"):
            guid = text_at(entity, GLOBAL_ID)
            seen[guid] += 1
            key = guid if seen[guid] == 1 else f"{guid}~{seen[guid]}"
            found.append(self._slab(entity, key, guid))
        return Floors(tuple(found), self._load_bearing())

    def _slab(self, entity: Entity, key: str, guid: str) -> FloorSlab:
        name, tag = text_at(entity, NAME), text_at(entity, TAG)
        named = (entity.id(), key, guid, entity.is_a(), name, tag)
        try:
            placed = body_items(self._context, entity)
            items = self._slabs.plates(entity)
            faceted = [
                self._faceted(one) for one, each in zip(placed, items, strict=True) if not each
            ]
            made = self._slabs.made_of(entity)
        except (UnreadableError, *ILL_TYPED):
            return FloorSlab(*named, unread=NO_PLATE)
        drawn = [each for each in items if each is not None]
        if not items or None in faceted:
            return FloorSlab(*named, unread=NO_PLATE if items else NO_BODY)
        plates = (
            *(Plate(drawn_rings(prism), *levels(prism)) for prism, _ in drawn),
            *(Plate(*each) for each in faceted if each),
        )
        if not all(_is_plain(plate.rings) for plate in plates):
            return FloorSlab(*named, unread=CROSSES)
        openings, notes = self._openings(entity, plates)
        if any(cut for _, cut in drawn):
            notes = ("what is cut off its body counts as there", *notes)
        return FloorSlab(
            *named, plates=plates, openings=openings, notes=notes, unlike=made.unlike,
            density=made.density,
        )  # fmt: skip

    def _faceted(self, placed: Placed) -> _Upright | None:
        """A body of flat faces that is a convex level plate; None for any other."""
        if not any(placed.item.is_a(kind) for kind in FACETED):
            return None
        return _upright_hull(self._slabs.points(placed))

    def _openings(
        self, entity: Entity, plates: tuple[Plate, ...]
    ) -> tuple[tuple[tuple[Ring, ...], ...], tuple[str, ...]]:
        """What goes through a slab, and what may and is not taken out."""
        bottom = min(plate.bottom for plate in plates)
        top = max(plate.top for plate in plates)
        found, notes = [], []
        for opening in self._slabs.openings(entity):
            try:
                holes = [self._hole(placed) for placed in body_items(self._context, opening)]
            except (UnreadableError, *ILL_TYPED):
                holes = []
            if not holes or not all(hole and _is_plain(hole.rings) for hole in holes):
                notes.append(f"{label(opening)} in it cannot be read and is not taken out")
            found += [
                hole.rings
                for hole in holes
                if hole
                and _is_plain(hole.rings)
                and hole.bottom <= bottom + THROUGH
                and hole.top >= top - THROUGH
            ]
        return tuple(found), tuple(notes)

    def _hole(self, placed: Placed) -> _Upright | None:
        """An opening that stands upright; None for any other."""
        if placed.item.is_a() == "IfcExtrudedAreaSolid":
            prism = extrusion(self._context, self._profiles, placed)
            if _upright(prism):
                return _Upright(drawn_rings(prism), *levels(prism))
        return _upright_hull(self._slabs.points(placed))

    def _load_bearing(self) -> frozenset[int]:
        walls = [wall.id() for wall in self._context.file.by_type("IfcWall")]
        self._context.properties.find(walls, {OF_WALL})
        return frozenset(wall for wall in walls if self._bears(wall))

    def _bears(self, wall: int) -> bool:
        stated = self._context.properties.of(wall).get(OF_WALL, {}).get("LoadBearing")
        return stated is not None and stated.value is True


def _is_plain(rings: tuple[Ring, ...]) -> bool:
    """Whether no ring crosses itself or another."""
    from shapely import Polygon

    outer, *voids = rings
    return bool(Polygon(outer, voids).is_valid)


def _upright(prism: Prism) -> bool:
    return min(abs(prism.axes[2][2]), abs(unit(prism.along)[2])) >= LEVEL


def _upright_hull(points: Cloud) -> _Upright | None:
    """A convex body of level faces and upright sides by its corners; None for any other."""
    from shapely import MultiPoint, Point, Polygon

    bottom, top = float(points[:, 2].min()), float(points[:, 2].max())
    hull = MultiPoint(points[:, :2]).convex_hull
    if not isinstance(hull, Polygon):
        return None
    corners = [Point(corner) for corner in hull.exterior.coords[:-1]]
    for level in (bottom, top):
        here = MultiPoint(points[abs(points[:, 2] - level) <= SAME][:, :2])
        if any(here.distance(corner) > SAME for corner in corners):
            return None
    between = (points[:, 2] > bottom + SAME) & (points[:, 2] < top - SAME)
    inside = MultiPoint(points[:, :2]).difference(hull.exterior.buffer(SAME))
    if between.any() or not inside.is_empty:
        return None
    return _Upright(
        (tuple((float(x), float(y)) for x, y in hull.exterior.coords[:-1]),), bottom, top
    )
