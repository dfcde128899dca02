"""Where bars stand and which shape they have, of those that are moved, not turned, and whose shape
is one item: all followed at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.step_cursors import Cursors
from ifccheck.ifc.step_table import StepTable


@dataclass(frozen=True, slots=True)
class Chains:
    """Where plain bars stand and which shape they have (P)."""

    place: Ints
    """Which of the bars asked for each is."""
    parent: Ints
    """STEP id of the placement that each is moved in; 0 for the building itself."""
    move: Floats
    """In units of the model (P, 3)."""
    item: Ints
    """STEP id of its item."""
    source: Ints
    """STEP ids of what is mapped and of how; 0 where the item is not mapped."""
    target: Ints


def follow_chains(table: StepTable, placement: Ints, shape: Ints) -> Chains:
    """Follow the placements and the shapes of bars by their STEP ids, 0 for none."""
    moved, parent, move = _places(table, placement)
    single, item = _items(table, shape)
    plain = np.flatnonzero(moved & single)
    mapped, source, target = _mapped(table, item[plain])
    return Chains(
        place=plain,
        parent=parent[plain],
        move=move[plain],
        item=item[plain],
        source=np.where(mapped, source, 0),
        target=np.where(mapped, target, 0),
    )


def _places(table: StepTable, placement: Ints) -> tuple[Bools, Ints, Floats]:
    """Whether each placement only moves, its parent and its move."""
    local = table.cursors(placement, "IFCLOCALPLACEMENT")
    parent = local.reference_or_nothing()
    local.tokens(b",")
    position = local.reference()
    local.tokens(b")", b";")
    axes = table.cursors(np.where(local.plain, position, 0), "IFCAXIS2PLACEMENT3D")
    location = axes.reference()
    axes.tokens(b",", b"$", b",", b"$", b")", b";")
    found, move = read_points(table, np.where(axes.plain, location, 0))
    return found, parent, move


def read_points(
    table: StepTable, ids: Ints, word: str = "IFCCARTESIANPOINT"
) -> tuple[Bools, Floats]:
    """Read points in space, or what is written like them, by their STEP ids: which are, and their
    coordinates (N, 3)."""
    point = table.cursors(ids, word)
    point.tokens(b"(")
    x = point.number()
    point.tokens(b",")
    y = point.number()
    point.tokens(b",")
    z = point.number()
    point.tokens(b")", b")", b";")
    return point.plain, np.stack((x, y, z), axis=1)


def _items(table: StepTable, shape: Ints) -> tuple[Bools, Ints]:
    """Whether each shape is one item, and that."""
    product = table.starts(shape)
    product.same_text(_until_representations)
    representation = product.reference()
    product.tokens(b")", b")", b";")
    body = table.starts(np.where(product.plain, representation, 0))
    body.same_text(_until_items)
    item = body.reference()
    body.tokens(b")", b")", b";")
    return body.plain, np.where(body.plain, item, 0)


def _until_representations(product: Cursors) -> None:
    product.tokens(b"=", b"IFCPRODUCTDEFINITIONSHAPE", b"(")
    product.text_or_nothing()
    product.tokens(b",")
    product.text_or_nothing()
    product.tokens(b",", b"(")


def _until_items(body: Cursors) -> None:
    body.tokens(b"=", b"IFCSHAPEREPRESENTATION", b"(")
    body.reference_or_nothing()
    body.tokens(b",")
    body.text_or_nothing()
    body.tokens(b",")
    body.text_or_nothing()
    body.tokens(b",", b"(")


def _mapped(table: StepTable, item: Ints) -> tuple[Bools, Ints, Ints]:
    """Whether each item is mapped, its source and its target."""
    mapped = table.cursors(item, "IFCMAPPEDITEM")
    source = mapped.reference()
    mapped.tokens(b",")
    target = mapped.reference()
    mapped.tokens(b")", b";")
    return mapped.plain, source, target
