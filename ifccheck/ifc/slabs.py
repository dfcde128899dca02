"""The level slabs of a model: their outline in plan, what they are made of, and their openings."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from ifccheck.beam import Slab
from ifccheck.ifc.bodies import BOOLEANS, Placed, Prism, body_items, extrusion
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.concretes import Concretes
from ifccheck.ifc.entity import (
    ILL_TYPED,
    NAME,
    OBJECT_TYPE,
    Entity,
    UnreadableError,
    label,
    need,
    text,
    text_at,
)
from ifccheck.ifc.materials import Materials
from ifccheck.ifc.points import points_of
from ifccheck.ifc.precast import told_precast
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.scope import Clues, judge
from ifccheck.ifc.strength import GENERAL
from ifccheck.ifc.tessellated import tessellated
from ifccheck.ifc.vectors import unit
from ifccheck.ifc.vocabulary import speaks_of_prestress
from ifccheck.ifc.voids import FACETED

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

    from ifccheck.ifc.context import Context

LEVEL = 0.9999
"""Least z of the unit vectors of what lies level."""
LEAST_PART = 1e4
"""Parts of a slab smaller than this are no flange [mm2]."""


class MadeOf(NamedTuple):
    """What a slab is made of."""

    strength: float | None
    """Of its concrete [MPa]"""
    doubt: str
    """Why it may not be the concrete of a flange"""
    unlike: str
    """Why it may not be concrete at all"""
    density: float | None
    """The greatest that is stated [kg/m3]"""


class SlabReader:
    """Reads the slabs of one model."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._materials = Materials(context)
        self._concretes = Concretes(context)

    def read(self) -> tuple[Slab, ...]:
        """Return every slab that lies level and is extruded upright; others are no flange."""
        return tuple(
            slab for entity in self._context.file.by_type("IfcSlab") for slab in self._slabs(entity)
        )

    def _slabs(self, entity: Entity) -> Iterator[Slab]:
        try:
            plates = [plate for plate in self.plates(entity) if plate is not None]
            if not plates:
                return
            made = self.made_of(entity)
            doubt = made.doubt or ("its body is cut" if any(cut for _, cut in plates) else "")
            holes, unread = self._holes(entity)
        except (UnreadableError, *ILL_TYPED):
            return
        name = f"{text_at(entity, NAME) or label(entity)} ({entity.is_a()})"
        for prism, _ in plates:
            bottom, top = levels(prism)
            for rings in _rings(prism, holes):
                yield Slab(entity.id(), name, rings, bottom, top, made.strength, doubt or unread)

    def plates(self, entity: Entity) -> list[tuple[Prism, bool] | None]:
        """The items of a slab's body: upright extrusions, and whether each is cut; None for any
        other."""
        return [self._plate(placed) for placed in body_items(self._context, entity)]

    def _plate(self, placed: Placed) -> tuple[Prism, bool] | None:
        """An upright extrusion, and whether it is cut; None for any other body."""
        item, cut = placed.item, False
        while item.is_a() in BOOLEANS:
            item, cut = need(item, "FirstOperand"), True
        if item.is_a() != "IfcExtrudedAreaSolid":
            return None
        prism = extrusion(self._context, self._profiles, placed._replace(item=item))
        upright = min(abs(prism.axes[2][2]), abs(unit(prism.along)[2])) >= LEVEL
        return (prism, cut) if upright else None

    def made_of(self, entity: Entity) -> MadeOf:
        """What a slab is made of."""
        step_id = entity.id()
        definition = self._materials.of(step_id)
        sets = self._context.properties.of(step_id)
        names = tuple(filter(None, self._names(entity)))
        clues = Clues(definition, names, False, "StrengthClass" in sets.get(GENERAL, {}))
        scope, concrete = judge(clues), self._concretes.of(definition, sets, ())
        given = concrete.strength.value if concrete.strength else None
        precast = told_precast(self._context, step_id, clues, sets)
        prestressed = any(map(speaks_of_prestress, (*definition.names, *names)))
        doubts = (
            f"it is of {scope.left_out[0]}" if scope.left_out else "",
            scope.doubt or "",
            "it is made of several materials" if len(definition.materials) > 1 else "",
            f"it is precast: {precast}" if precast else "",
            "it is prestressed" if prestressed else "",
            "its strength cannot be read" if concrete.strength_reason else "",
        )
        density = concrete.greatest_density.value if concrete.greatest_density else None
        return MadeOf(given, next(filter(None, doubts), ""), doubts[0], density)

    def _names(self, entity: Entity) -> tuple[str, ...]:
        own = text_at(entity, NAME), text_at(entity, OBJECT_TYPE)
        type_id = self._context.relations.type_of(entity.id())
        if type_id is None:
            return own
        return (*own, text(self._context.file.by_id(type_id), "Name"))

    def openings(self, entity: Entity) -> list[Entity]:
        """The openings in a slab and in what it is a part of."""
        relations, by_id = self._context.relations, self._context.file.by_id
        owners = (entity.id(), *relations.ancestors(entity.id()))
        return [by_id(one) for owner in owners for one in relations.openings.get(owner, ())]

    def _holes(self, entity: Entity) -> tuple[list[Cloud], str]:
        """Places in plan that enclose each opening, and why one could not be read."""
        openings = self.openings(entity)
        holes: list[Cloud] = []
        for opening in openings:
            try:
                items = body_items(self._context, opening)
                holes += [self.points(placed)[:, :2] for placed in items]
            except (UnreadableError, *ILL_TYPED):
                items = []
            if not items:
                return holes, f"{label(opening)} in it cannot be read"
        return holes, ""

    def points(self, placed: Placed) -> Cloud:
        """Places in the building that enclose a body."""
        item, matrix, _ = placed
        if item.is_a() == "IfcExtrudedAreaSolid":
            return extrusion(self._context, self._profiles, placed).corners()
        flat = any(item.is_a(name) for name in FACETED)
        local = points_of(self._context, item) if flat else tessellated(item).points
        return np.asarray(local @ matrix[:3, :3].T + matrix[:3, 3])


def levels(prism: Prism) -> tuple[float, float]:
    """Underside and top of a level plate [mm]."""
    one = float(prism.matrix[2, 3])
    other = one + prism.along[2]
    return round(min(one, other), 6), round(max(one, other), 6)


def drawn_rings(prism: Prism) -> tuple[tuple[tuple[float, float], ...], ...]:
    """The rings in plan of an upright extrusion, the outer one first [mm]."""
    return tuple(
        tuple((float(x), float(y)) for x, y, _ in prism.placed(ring))
        for ring in prism.profile.rings
    )


def _rings(
    prism: Prism, holes: list[Cloud]
) -> Iterator[tuple[tuple[tuple[float, float], ...], ...]]:
    """The rings in plan of each part that the openings leave."""
    from shapely import MultiPoint, Polygon

    outer, *voids = drawn_rings(prism)
    figure: BaseGeometry = Polygon(outer, voids)
    for hole in holes:
        figure = figure.difference(MultiPoint(hole).convex_hull)
    for part in getattr(figure, "geoms", [figure]):
        if part.area > LEAST_PART:
            lines = (part.exterior, *part.interiors)
            yield tuple(tuple((x, y) for x, y in line.coords[:-1]) for line in lines)
