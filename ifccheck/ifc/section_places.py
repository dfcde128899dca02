"""Where the rows of section definitions lie in their beam: from where to where, and how high."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Face
from ifccheck.ifc.context import BeamFrame
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.section_rows import Row
from ifccheck.units import show

END_TOLERANCE = 5.0
"""A section may reach beyond the end of its beam by this [mm]."""
SAME_PLACE = 1.0
"""Origins of positions, and levels of a surface, nearer than this [mm] are one."""
PARALLEL = 0.9998
"""Cosine of the angle (1 degree) within which an axis of the placement is that of the beam."""
SAME_HEIGHT = 0.01
"""Part of its height by which a profile may differ from the body."""
SHALLOW = 1.0 / 3.0
"""Part of the height within which a depth without words surely belongs to a face"""


class Extent(NamedTuple):
    """From where to where a row reaches in its beam [mm]."""

    start: float
    end: float


def offset_of(matrix: Matrix, frame: BeamFrame) -> float:
    """Return where the beam starts along that axis of its placement which is parallel to it [mm].

    Raises
    ------
    UnreadableError
        Where none is.
    """
    along = np.array(frame.axis.x)
    cosines = matrix[:3, :3].T @ along
    axis = int(np.argmax(np.abs(cosines)))
    if cosines[axis] < PARALLEL:
        raise UnreadableError(
            "positions of sections count along an axis of its placement, and none is its own axis"
        )
    return float((np.array(frame.axis.origin) - matrix[:3, 3]) @ matrix[:3, axis])


def extents(rows: Sequence[Row], offset: float, length: float) -> list[Extent]:
    """Return where rows lie along their beam.

    Positions count along the beam's placement. Where that does not stand at the beam's start they
    might count from there: then both readings must not hold.

    Raises
    ------
    UnreadableError
        Where a row leaves the beam or has no length, or where both readings hold.
    """
    for row in rows:
        if row.end - row.start <= SAME_PLACE:
            raise UnreadableError(
                f"{row.name}: reaches from {show(row.start, 'length')} to"
                f" {show(row.end, 'length')}, which is no length"
            )
    outside = [row for row in rows if not _fits(row, offset, length)]
    from_start = all(_fits(row, 0.0, length) for row in rows)
    if abs(offset) > SAME_PLACE and from_start:
        if not outside:
            raise UnreadableError(
                "positions of sections may count from the origin of its placement or from its"
                f" start, {show(offset, 'length')} from there: both readings hold"
            )
        if _spans(rows, length):
            return [_clipped(row, 0.0, length) for row in rows]
    if outside:
        row = outside[0]
        start, end = (show(place - offset, "length") for place in (row.start, row.end))
        raise UnreadableError(
            f"{row.name}: reaches from {start} to {end} along the beam, which is"
            f" {show(length, 'length')} long"
        )
    return [_clipped(row, offset, length) for row in rows]


def _fits(row: Row, offset: float, length: float) -> bool:
    return row.start - offset >= -END_TOLERANCE and row.end - offset <= length + END_TOLERANCE


def _spans(rows: Sequence[Row], length: float) -> bool:
    """Whether rows, counted from the beam's start, reach both of its ends."""
    return (
        min(row.start for row in rows) <= SAME_PLACE
        and max(row.end for row in rows) >= length - SAME_PLACE
    )


def _clipped(row: Row, offset: float, length: float) -> Extent:
    return Extent(max(row.start - offset, 0.0), min(row.end - offset, length))


class Levels(NamedTuple):
    """Soffit and top of a beam [mm]."""

    soffit: float
    top: float

    @property
    def height(self) -> float:
        """[mm]"""
        return self.top - self.soffit


def levels(row: Row, extent: Extent, frame: BeamFrame) -> Levels:
    """Return the levels of soffit and top beside a row.

    Raises
    ------
    UnreadableError
        Where they change along the row, where a profile of the section has another height, or where
        the row lies outside.
    """
    boxes = list(_boxes(extent, frame))
    lows, highs = [low for _, low, _ in boxes], [high for _, _, high in boxes]
    if not boxes or max(max(lows) - min(lows), max(highs) - min(highs)) > SAME_PLACE:
        raise UnreadableError(
            f"{row.name}: the depth of the body changes along its section, so its effective depth"
            " does not tell where its bars lie"
        )
    found = Levels(max(lows), min(highs))
    for profile in row.heights:
        if min(abs(size - found.height) for size in profile) > SAME_HEIGHT * found.height:
            raise UnreadableError(
                f"{row.name}: its section is {profile[0]:.0f} x {profile[1]:.0f} mm, the body is"
                f" {found.height:.0f} mm high"
            )
    if not 0.0 < row.depth < found.height:
        raise UnreadableError(
            f"{row.name}: its effective depth of {row.depth:.0f} mm leaves the body, which is"
            f" {found.height:.0f} mm high"
        )
    width = min(width for width, _, _ in boxes)
    if abs(row.transverse) > width:
        raise UnreadableError(
            f"{row.name}: its transverse position of {row.transverse:.0f} mm leaves the body,"
            f" which is {width:.0f} mm wide"
        )
    return found


def _boxes(extent: Extent, frame: BeamFrame) -> Iterator[tuple[float, float, float]]:
    """Width, lowest and highest place of every outline beside a row [mm]."""
    for run in frame.runs:
        if min(run.end, extent.end) - max(run.start, extent.start) > SAME_PLACE:
            for outline in (run.outline, run.outline_end or run.outline):
                ys, zs = zip(*outline.rings[0], strict=True)
                yield max(ys) - min(ys), min(zs), max(zs)


class Lying(NamedTuple):
    """The face that a row lies at, and the height of its bars [mm]."""

    face: Face
    z: float
    assumed: bool = False
    """Nothing but the meaning that IFC gives an effective depth tells so."""


def lie(rows: Sequence[Row], beside: Sequence[Levels]) -> list[Lying]:
    """Return the face and height of rows.

    IFC counts an effective depth from a common reference, usually the upper surface of a beam; an
    engineer counts it from the compressed face, which is the soffit for top bars. Both agree on
    depths in the upper half, and on bottom bars. So

    - the lesser half is counted from the top: top bars;
    - the greater half of bars that are called bottom bars from the top;
    - that of bars that are called top bars from the soffit, unless another row shows by a depth in
      the upper third that depths count from the top: that is a contradiction;
    - that of bars without such words from the top, where such a row shows so, or where it is the
      only row and lies in the lower third.

    Raises
    ------
    UnreadableError
        For anything else.
    """
    from_top = any(
        row.depth <= SHALLOW * at.height and row.said != "bottom"
        for row, at in zip(rows, beside, strict=True)
    )
    alone = len(rows) == 1
    return [_lying(row, at, from_top, alone) for row, at in zip(rows, beside, strict=True)]


def _lying(row: Row, at: Levels, from_top: bool, alone: bool) -> Lying:
    part, below_top = row.depth / at.height, at.top - row.depth
    is_deep = part > 0.5
    if row.said == "bottom" and is_deep:
        return Lying("bottom", below_top)
    if row.said == "top" and not is_deep:
        return Lying("top", below_top)
    if row.said == "top" and not from_top:
        return Lying("top", at.soffit + row.depth)
    if row.said is None and (from_top or part <= SHALLOW or (alone and part >= 1.0 - SHALLOW)):
        return Lying("bottom" if is_deep else "top", below_top, assumed=True)
    called = "" if row.said is None else f"which is called {row.said} reinforcement, "
    raise UnreadableError(
        f"{row.name}: an effective depth of {row.depth:.0f} mm in {at.height:.0f} mm, {called}"
        "does not tell at which face its bars lie: name the definition top or bottom"
    )
