"""Meshes of wires: which wires run which way, and what the model says of them."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.ifc.bar_data import Said
from ifccheck.ifc.bar_paths import Floats, Path, path_length
from ifccheck.ifc.bar_shapes import Strand
from ifccheck.ifc.entity import Entity, UnreadableError, get
from ifccheck.ifc.units import ModelUnits

MESH = "IfcReinforcingMesh"
ONE_WAY = 0.985
"""Cosine of the angle (10 degrees) within which wires run one way."""
SAME_LENGTH, SAME_DIAMETER = 0.05, 0.025
"""Relative difference within which wires are as long as the mesh, and as thick as stated."""
LENGTHWISE, CROSSWISE = 0, 1


class Wires(NamedTuple):
    """The wires of a mesh that run one way."""

    strands: tuple[Strand, ...]
    said: Said


class _Stated(NamedTuple):
    """What a mesh says of its wires one way, in units of the model."""

    length: float | None
    diameter: float | None
    area: float | None


def wires_of(
    mesh: Entity, of_type: Entity | None, strands: Sequence[Strand], paths: Sequence[Path],
    units: ModelUnits,
) -> list[Wires]:  # fmt: skip
    """Divide the wires of a mesh by the way they run, each with what the mesh says of it.

    Lengths tell which wires are the longitudinal ones, else their thickness; where neither does,
    the thinner counts for both. Raises UnreadableError where wires run more ways than two.
    """
    ways = [_way(strand, paths[strand.path]) for strand in strands]
    families: list[list[int]] = []
    for number, way in enumerate(ways):
        own = next((f for f in families if abs(float(way @ ways[f[0]])) >= ONE_WAY), None)
        if own is None:
            families.append(own := [])
        own.append(number)
    if len(families) > 2:
        raise UnreadableError("is a mesh whose wires run more ways than two")
    stated = _stated(mesh, of_type, units.length)
    grade = get(mesh, "SteelGrade")
    held = [tuple(strands[number] for number in family) for family in families]
    found = _by_length(held, paths, stated)
    return [
        Wires(wires, (grade, *_sizes(stated, found[at], wires, units.length), None))
        for at, wires in enumerate(held)
    ]


def _way(strand: Strand, path: Path) -> Floats:
    """The direction of the longest piece of a wire."""
    points = np.array(path.points)
    steps = np.diff(points, axis=0) @ strand.matrix[:3, :3].T
    longest = steps[np.argmax((steps**2).sum(axis=1))]
    size = float(np.sqrt(longest @ longest))
    if size <= 0.0:
        raise UnreadableError("is a mesh with a wire of no length")
    return np.asarray(longest / size)


def _stated(mesh: Entity, of_type: Entity | None, scale: float) -> tuple[_Stated, _Stated]:
    def said(name: str) -> float | None:
        value = get(mesh, name)
        if not value and of_type is not None:
            value = get(of_type, name)
        return value or None

    def one(length: str, way: str) -> _Stated:
        drawn = said(length)
        return _Stated(
            None if drawn is None else drawn * scale,
            said(f"{way}BarNominalDiameter"),
            said(f"{way}BarCrossSectionArea"),
        )

    return one("MeshLength", "Longitudinal"), one("MeshWidth", "Transverse")


def _by_length(
    families: Sequence[Sequence[Strand]], paths: Sequence[Path], stated: Sequence[_Stated]
) -> list[int | None]:
    """Which way of the mesh each family runs, by its longest wire; None where it is open."""
    lengths = [max(path_length(paths[s.path]) for s in family) for family in families]

    def fits(order: Sequence[int]) -> bool:
        known = [(length, stated[way].length) for length, way in zip(lengths, order, strict=False)]
        return all(own is not None and abs(one / own - 1.0) <= SAME_LENGTH for one, own in known)

    orders = ((LENGTHWISE, CROSSWISE), (CROSSWISE, LENGTHWISE))
    fitting = [order for order in orders if fits(order)]
    return list(fitting[0]) if len(fitting) == 1 else [None] * len(families)


def _sizes(
    stated: Sequence[_Stated], way: int | None, wires: Sequence[Strand], scale: float
) -> tuple[float | None, float | None]:
    """Diameter and area that the mesh states of wires."""
    if way is None:
        thick = [wire.diameter for wire in wires if wire.diameter is not None]
        near = [
            one for one in stated
            if one.diameter and thick
            and abs(one.diameter * scale / min(thick) - 1.0) <= SAME_DIAMETER
        ]  # fmt: skip
        if len(near) == 1:
            return near[0].diameter, near[0].area
        diameters = [one.diameter for one in stated if one.diameter]
        areas = [one.area for one in stated if one.area]
        return min(diameters, default=None), min(areas, default=None)
    return stated[way].diameter, stated[way].area
