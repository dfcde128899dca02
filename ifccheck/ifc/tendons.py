"""Tendons of a model, and which beams they prestress."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Box, Remark
from ifccheck.ifc.bodies import Placed, body_items, extrusion
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError
from ifccheck.ifc.points import points_of
from ifccheck.ifc.profiles import Profiles

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

CLASSES = ("IfcTendon", "IfcTendonAnchor", "IfcTendonConduit")
SAMPLES = 20
"""Places looked at between two points of a tendon."""


class Tendons:
    """What the tendons of a model tell of its beams, by their relations or by their place."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._wholes: set[int] = set()
        self._places: list[Cloud] = []
        self._lost = 0
        for kind in CLASSES:
            for tendon in _entities(context, kind):
                self._add(tendon)

    def _add(self, tendon: Entity) -> None:
        by_id = self._context.file.by_id
        wholes = [
            whole
            for whole in self._context.relations.ancestors(tendon.id())
            if by_id(whole).is_a("IfcElement")
        ]
        self._wholes.update(wholes)
        if not wholes:
            self._locate(tendon)

    def _locate(self, tendon: Entity) -> None:
        """Keep the places that a tendon runs through which belongs to no member."""
        try:
            placed = body_items(self._context, tendon)
            self._places += [_between(self._course(one)) for one in placed]
            self._lost += not placed
        except (UnreadableError, *ILL_TYPED):
            self._lost += 1

    def _course(self, placed: Placed) -> Cloud:
        """Points that a tendon's body runs through."""
        item, matrix, _ = placed
        if item.is_a() == "IfcExtrudedAreaSolid":
            prism = extrusion(self._context, self._profiles, placed)
            start = prism.placed(np.array([prism.profile.centroid]))
            return np.concatenate((start, start + prism.along))
        return np.asarray(points_of(self._context, item) @ matrix[:3, :3].T + matrix[:3, 3])

    def in_beam(self, step_id: int, box: Box | None) -> bool:
        """Tell whether a tendon is part of a beam, of its assembly, or runs within its box."""
        around = (step_id, *self._context.relations.ancestors(step_id))
        if not self._wholes.isdisjoint(around):
            return True
        return box is not None and any(_meets(box, places) for places in self._places)

    @property
    def remarks(self) -> tuple[Remark, ...]:
        """What is doubtful of the model because of its tendons."""
        if not self._lost:
            return ()
        text = (
            f"{self._lost} tendons belong to no member and cannot be placed: "
            "the beams that they prestress are not known"
        )
        return (Remark(None, "scope", text, "doubt"),)


def _entities(context: Context, kind: str) -> tuple[Entity, ...]:
    try:
        return tuple(context.file.by_type(kind))
    except RuntimeError:  # the schema has no such class
        return ()


def _between(points: Cloud) -> Cloud:
    """Points along the straight lines from each point to the next."""
    share = np.linspace(0.0, 1.0, SAMPLES)[:, None, None]
    between = points[:-1] + share * (points[1:] - points[:-1])
    return np.concatenate((points, between.reshape(-1, 3)))


def _meets(box: Box, places: Cloud) -> bool:
    inner = (places - np.array(box.centre)) @ np.array(box.axes).T
    return bool((np.abs(inner) <= np.array(box.half)).all(axis=1).any())
