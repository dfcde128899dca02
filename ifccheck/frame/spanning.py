"""What spans from support to support: its axis and its depth, be it read or only boxed."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import NamedTuple

from ifccheck.beam import Beam, Member, Vector
from ifccheck.frame.boxes import section_extent


class Spanning(NamedTuple):
    """A beam, or what spans as one and is known by its box alone."""

    key: str
    step: int
    told: str
    """Name and class, for people"""
    origin: Vector
    """The soffit's middle at the start [mm]"""
    x: Vector
    length: float
    """[mm]"""
    depth: float
    """[mm]"""
    width: float
    """[mm]"""

    def place(self, x: float) -> Vector:
        """The soffit's middle at a place along it [mm]."""
        (ox, oy, oz), (dx, dy, dz) = self.origin, self.x
        return ox + x * dx, oy + x * dy, oz + x * dz

    def soffit(self, x: float) -> float:
        """Height of the soffit in the building at a place along it [mm]."""
        return self.origin[2] + x * self.x[2]


def all_spanning(
    beams: Sequence[Beam], members: Mapping[int, Member], others: Iterable[str]
) -> dict[str, Spanning]:
    """What spans, by key.

    Parameters
    ----------
    beams
        Of one model.
    members
        Of that model, by step id.
    others
        Keys of what else spans: of a beam whose body was not read, or "#" and the step id.
    """
    found = {beam.key: spanning_of(beam) for beam in beams if beam.axis is not None and beam.runs}
    steps = {beam.key: beam.step_id for beam in beams}
    for key in others:
        step = int(key[1:]) if key.startswith("#") else steps[key]
        if key not in found:
            found[key] = _of_box(key, members[step])
    return found


def spanning_of(beam: Beam) -> Spanning:
    """A beam with an axis and runs."""
    assert beam.axis is not None
    right, left, low, high = section_extent(beam)
    (x, y, z), up = beam.axis.origin, beam.axis.z
    origin = (x + low * up[0], y + low * up[1], z + low * up[2])
    told = f"{beam.mark} ({beam.ifc_class})"
    return Spanning(
        beam.key,
        beam.step_id,
        told,
        origin,
        beam.axis.x,
        beam.axis.length,
        high - low,
        left - right,
    )


def _of_box(key: str, member: Member) -> Spanning:
    """By the box: its longest axis is x, and the more upright of the others its depth."""
    box = member.box
    along = max(range(3), key=lambda row: box.half[row])
    up = max((row for row in range(3) if row != along), key=lambda row: abs(box.axes[row][2]))
    x, half = box.axes[along], box.half
    rise = half[up] if box.axes[up][2] > 0.0 else -half[up]
    cx, cy, cz = (
        centre - half[along] * a - rise * u
        for centre, a, u in zip(box.centre, x, box.axes[up], strict=True)
    )
    told = f"{member.name or member.guid} ({member.ifc_class})"
    length, depth, width = (2.0 * half[row] for row in (along, up, 3 - along - up))
    return Spanning(key, member.step_id, told, (cx, cy, cz), x, length, depth, width)
