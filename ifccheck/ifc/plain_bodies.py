"""Bodies of members that are one extruded profile, read many at once from the file's text.

What no two members share, where they stand, is read from the text; of all else the text tells
which members are alike, and one of these is worked out for all of them.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import chain, islice

import numpy as np

from ifccheck.beam import Box, Ring
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bodies import Prism
from ifccheck.ifc.boxes import BoxShape, box_shape, plan_of_prism
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.plain_placements import read_axes, read_directions, read_placements
from ifccheck.ifc.products import Product
from ifccheck.ifc.profile_shapes import Profile
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.statement_patterns import (
    REFERENCE_OR_NOTHING,
    TEXT_OR_NOTHING,
    numbers_of_each,
    references,
    statement,
)
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.straight import Straight, StraightShape, shape_along_extrusion, straighten
from ifccheck.ifc.vectors import Triple, unit

SHAPE = statement(b"IFCPRODUCTDEFINITIONSHAPE", TEXT_OR_NOTHING, TEXT_OR_NOTHING, references())
REPRESENTATION = statement(
    b"IFCSHAPEREPRESENTATION", REFERENCE_OR_NOTHING, rb"(?:'([^'\\]*)'|\$)", TEXT_OR_NOTHING,
    references(),
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class _Extrusions:
    """Extruded profiles in the building (N)."""

    step_ids: list[int]
    """Of the members."""
    profiles: list[Profile]
    placement: Floats
    """Of the members (N, 4, 4)."""
    matrix: Floats
    """From the plane of the profile into the building (N, 4, 4)."""
    along: Floats

    def prism(self, row: int) -> Prism:
        """One of them as the thorough reader would give it."""
        a, b, c = self.along[row].tolist()
        return Prism(self.profiles[row], self.matrix[row], (a, b, c))

    def alike(self) -> list[int]:
        """Number of each among those that differ by more than where they stand."""
        turns = [matrix[:, :3, :3].reshape(-1, 9) for matrix in (self.matrix, self.placement)]
        rows = np.column_stack((*turns, self.along))
        said, size = rows.tobytes(), rows.itemsize * rows.shape[1]
        known: dict[tuple[int, bytes], int] = {}
        return [
            known.setdefault((id(profile), said[at : at + size]), len(known))
            for at, profile in zip(range(0, len(said), size), self.profiles, strict=True)
        ]


class PlainBodies:
    """The bodies of members that are one extrusion and written plainly."""

    def __init__(self, context: Context, profiles: Profiles, products: Sequence[Product]) -> None:
        self._found = found = _read(context, profiles, products)
        self._rows = {step_id: row for row, step_id in enumerate(found.step_ids)}
        self._origins: list[list[float]] = found.matrix[:, :3, 3].tolist()
        self._alike = found.alike()
        self._straight: dict[int, StraightShape | None] = {}
        self._boxes: dict[int, BoxShape] = {}
        self._plans: dict[int, Ring | None] = {}

    def __contains__(self, step_id: int) -> bool:
        return step_id in self._rows

    def of(self, step_id: int) -> tuple[Prism, Matrix]:
        """Return a member's body, and its placement in the building."""
        row = self._rows[step_id]
        return self._found.prism(row), self._found.placement[row]

    def straight(self, step_id: int) -> Straight:
        """Return a member's body as a straight member; raises UnreadableError where it is none."""
        row = self._rows[step_id]
        alike = self._alike[row]
        if alike not in self._straight:
            self._straight[alike] = shape_along_extrusion(*self.of(step_id))
        shape = self._straight[alike]
        if shape is None:
            return straighten(*self.of(step_id))
        return shape.at(self._origins[row])

    def box(self, step_id: int) -> Box:
        """Return the box round a member's body."""
        row = self._rows[step_id]
        alike = self._alike[row]
        if alike not in self._boxes:
            self._boxes[alike] = box_shape(self._found.prism(row))
        return self._boxes[alike].at(self._origins[row])

    def plan(self, step_id: int) -> Ring | None:
        """Return the outer ring in plan of a body that stands upright, as ``Boxes`` does."""
        row = self._rows[step_id]
        alike = self._alike[row]
        if alike not in self._plans:
            self._plans[alike] = plan_of_prism(self._found.prism(row))
        plan = self._plans[alike]
        return plan_of_prism(self._found.prism(row)) if plan else plan


def _read(context: Context, profiles: Profiles, products: Sequence[Product]) -> _Extrusions:
    table = context.statements
    told = [one for one in products if one.placement and one.shape]
    if table is None or not told:
        none = np.zeros((0, 4, 4))
        return _Extrusions([], [], none, none, np.zeros((0, 3)))
    scale = context.units.length
    solids = _read_solids(table, _single_items(table, [one.shape for one in told]))
    axes = read_axes(table, solids.position, scale)
    way = _units(table, solids.direction) * (solids.depth * scale)[:, None]
    figures = _figures(context, profiles, table, solids.area)
    placement_ids = np.array([one.placement for one in told], dtype=np.intp)
    placed, placement = _placements(context, table, placement_ids)
    drawn = np.array([area in figures for area in solids.area.tolist()], dtype=bool)
    kept = np.flatnonzero(
        solids.plain & (solids.depth > 0.0) & np.isfinite(way).all(axis=1)
        & axes.plain & placed & drawn
    )  # fmt: skip
    placement = placement[kept]
    still = axes.still[kept, None, None]
    matrix = np.where(still, placement, placement @ axes.matrix[kept])
    return _Extrusions(
        [told[row].step_id for row in kept.tolist()],
        [figures[area] for area in solids.area[kept].tolist()],
        placement,
        matrix,
        _combined(matrix[:, :3, :3], way[kept]),
    )


def _combined(turns: Floats, ways: Floats) -> Floats:
    """Ways along turned axes, added up as ``combined`` adds them."""
    x, y, z = (turns[:, :, axis] * ways[:, axis, None] for axis in range(3))
    return np.asarray(((0.0 + x) + y) + z)


def _single_items(table: StepTable, shapes: Sequence[int]) -> Ints:
    """The only item of the body of each shape, 0 where that is not plain."""
    found = table.matches(shapes, SHAPE)
    held = numbers_of_each([b"#0" if match is None else match[1] for match in found])
    matches = iter(table.matches(list(chain.from_iterable(held)), REPRESENTATION))
    return np.array([_body_item(list(islice(matches, len(one)))) for one in held], dtype=np.intp)


def _body_item(representations: Sequence[re.Match[bytes] | None]) -> int:
    for match in representations:
        if match is None:
            return 0
        if match[1] == b"Body":
            return 0 if b"," in match[2] else int(match[2][1:])
    return 0


@dataclass(frozen=True, slots=True)
class _Solids:
    """Extruded area solids as they are written (N); zeros where they are not plain."""

    plain: Bools
    area: Ints
    position: Ints
    direction: Ints
    depth: Floats


def _read_solids(table: StepTable, items: Ints) -> _Solids:
    solid = table.cursors(items, "IFCEXTRUDEDAREASOLID")
    area = solid.reference()
    solid.tokens(b",")
    position = solid.reference_or_nothing()
    solid.tokens(b",")
    direction = solid.reference()
    solid.tokens(b",")
    depth = solid.number()
    solid.tokens(b")", b";")
    columns = (np.where(solid.plain, one, 0) for one in (area, position, direction, depth))
    return _Solids(solid.plain, *columns)


def _placements(context: Context, table: StepTable, ids: Ints) -> tuple[Bools, Floats]:
    """Which placements are known, and their matrices; the thorough reader learns them, too."""
    found = read_placements(context.file, context.placements, table, ids)
    context.placements.learn(found.ids[found.found].tolist(), found.matrix[found.found])
    row = found.rows(ids)
    return row >= 0, found.matrix[row]


def _units(table: StepTable, ids: Ints) -> Floats:
    """Directions as unit vectors; nan where they are not plain."""
    known: dict[int, Triple] = {}
    for step_id, ratios in read_directions(table, ids).items():
        try:
            known[step_id] = unit(ratios)
        except UnreadableError:
            continue  # the reader of each member says so
    nowhere = (np.nan, np.nan, np.nan)
    return np.array([known.get(one, nowhere) for one in ids.tolist()]).reshape(-1, 3)


def _figures(
    context: Context, profiles: Profiles, table: StepTable, areas: Ints
) -> dict[int, Profile]:
    """Profiles by STEP id, those of one text read once; without those that cannot be read, or
    whose text is hidden."""
    distinct = np.unique(areas[areas > 0]).tolist()
    by_text: dict[bytes, Profile | None] = {b"": None}
    figures: dict[int, Profile] = {}
    for area, text in zip(distinct, table.texts(distinct), strict=True):
        if text not in by_text:
            by_text[text] = _figure(context, profiles, area)
        if (figure := by_text[text]) is not None:
            figures[area] = figure
    return figures


def _figure(context: Context, profiles: Profiles, area: int) -> Profile | None:
    try:
        return profiles.of(context.file.by_id(area))
    except (UnreadableError, *ILL_TYPED):
        return None
