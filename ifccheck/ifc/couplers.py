"""Couplers of bars, and where they stand."""

from __future__ import annotations

import re
from collections.abc import Iterator
from functools import cached_property

import numpy as np

from ifccheck.beam import Box
from ifccheck.ifc.bar_paths import Bools, Floats
from ifccheck.ifc.boxes import Boxes
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError, get
from ifccheck.ifc.profiles import Profiles

BY_CLASS = ("IfcMechanicalFastener", "IfcFastener")
"""Couplers where nothing says that they are something else"""
BY_NAME = ("IfcDiscreteAccessory", "IfcBuildingElementProxy")
"""Couplers where their name says so"""
NAMED = re.compile(r"coupl|koppl|muffe|manchon|mechanical.?splice", re.IGNORECASE)
OTHER = re.compile(
    r"bolt|anchor|anker|screw|schraube|nail|dowel|stud|rivet|weld|washer|bracket|plate|clip",
    re.IGNORECASE,
)
"""Names of fasteners that hold no bars together"""
UNTOLD = (None, "NOTDEFINED", "USERDEFINED", "COUPLER")
NEAR = 5.0
"""A joint may lie outside the box of its coupler by this [mm]."""
LONGEST = 1000.0
"""Nothing longer than this is a coupler [mm]."""


class Couplers:
    """The couplers of a model, looked for where bars meet end to end."""

    def __init__(self, context: Context) -> None:
        self._context = context

    @cached_property
    def _boxes(self) -> list[Box]:
        context = self._context
        boxes, found = Boxes(context, Profiles(context.placements)), []
        for product in self._products():
            try:
                found.append(boxes.of(product))
            except (UnreadableError, *ILL_TYPED):
                continue  # of one that stands nowhere nothing is joined: the bars end there
        return [box for box in found if box and 2.0 * max(box.half) <= LONGEST]

    def _products(self) -> Iterator[Entity]:
        for name in (*BY_CLASS, *BY_NAME):
            try:
                listed = self._context.file.by_type(name)
            except RuntimeError:
                continue  # the schema has no such class
            yield from (one for one in listed if _is_coupler(one, name in BY_CLASS))

    def at(self, points: Floats) -> Bools:
        """Whether a coupler stands at each point in the building (N, 3)."""
        found = np.zeros(len(points), dtype=bool)
        for box in self._boxes:
            local = (points - np.array(box.centre)) @ np.array(box.axes).T
            found |= (np.abs(local) <= np.array(box.half) + NEAR).all(axis=1)
        return found


def _is_coupler(product: Entity, by_class: bool) -> bool:
    texts = (get(product, "Name"), get(product, "ObjectType"), get(product, "Description"))
    said = " ".join(text for text in texts if isinstance(text, str))
    if NAMED.search(said):
        return True
    untold = get(product, "PredefinedType") in UNTOLD
    return by_class and untold and OTHER.search(said) is None
