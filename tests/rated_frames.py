"""Lines and grids of rectangular beams on columns, as IFC models, and their rating.

Beams are 300 x 600 unless stated, with enough steel drawn by notation; their soffits lie at
z = 0, columns go up to it.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path

import numpy as np

from ifccheck.beam import Load, Verdict
from ifccheck.pipeline import Run
from ifccheck.sheet import Sheet
from tests.models import (
    MadeBeam,
    MadeColumn,
    Setting,
    brief,
    load,
    model,
    rate_model,
    rectangle,
)

STRONG: Mapping[str, str] = {
    "BottomBars": "4-25M", "TopBars": "4-25M", "Stirrups": "2 legs 10M @ 100",
}  # fmt: skip
FRAME = '\n[frame]\ncontinuity = "always"\n'
WHOLE = "[cases.floor]\nwhole = true"
UNLOADED = '[[beams]]\nbeams = ["{}"]\nunloaded = true\n'
COMPLETE = '[[beams]]\nbeams = ["{}"]\nloads_complete = true\n'
ALONE = """
[[combinations]]
name = "imposed alone"
kind = "strength"
factors = { self = 1e-12, imposed = 1.0 }
"""
"""What acts in the one combination is then next to nothing but the imposed cases, unfactored"""


def lying(
    mark: str,
    origin: tuple[float, float, float],
    length: float,
    direction: float = 0.0,
    depth: float = 600.0,
    width: float = 300.0,
    notation: Mapping[str, str] = STRONG,
) -> MadeBeam:
    """A beam from the middle of its soffit at its start."""
    return MadeBeam(
        rectangle(width, depth), length, mark, notation, columns=(0.0, 0.0), origin=origin,
        direction=direction,
    )  # fmt: skip


def line_on_columns(
    spans: Sequence[float], *, cut: bool = False, overhangs: tuple[float, float] = (0.0, 0.0)
) -> tuple[list[MadeBeam], list[MadeColumn]]:
    """A line over columns, x from the middle of the first, as one beam "ONE" that reaches past the
    outer columns' middles by half a column or by an overhang, or cut at the inner ones into
    "T1", "T2", ..."""
    places = [0.0, *np.cumsum(spans).tolist()]
    first = -(overhangs[0] or 150.0)
    last = places[-1] + (overhangs[1] or 150.0)
    ends = [first, *places[1:-1], last] if cut else [first, last]
    marks = [f"T{number}" for number in range(1, len(ends))] if cut else ["ONE"]
    beams = [
        lying(mark, (x0, 0.0, 0.0), x1 - x0)
        for mark, x0, x1 in zip(marks, ends[:-1], ends[1:], strict=True)
    ]
    return beams, [MadeColumn(x) for x in places]


def rated_frame(
    folder: Path,
    beams: Sequence[MadeBeam],
    columns: Sequence[MadeColumn],
    *entries: str,
    frame: str = FRAME,
    whole: bool = False,
    setting: Setting | None = None,
) -> Run:
    data = model(*beams, columns=columns, setting=setting)
    text = brief(frame, *entries).replace('supports = ["pinned", "pinned"]\n', "")
    if whole:
        text = text.replace("[cases.floor]", WHOLE)
    return rate_model(folder, data, text)


def sheets_of(run: Run) -> dict[str, Sheet]:
    """The sheet of every beam, by mark."""
    report = run.reports[0]
    return {beam.mark: report.sheet(beam.key) for beam in report.model.beams}


def reactions(sheet: Sheet, case: str) -> tuple[float, ...]:
    """Forces of the supports of a beam, unfactored [kN]."""
    (found,) = [each.forces for each in sheet.reactions if each.case == case]
    return tuple(force / 1e3 for force in found)


def envelope(sheet: Sheet, title: str) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Places along a beam [mm], and the least and the greatest effect there [kN*m or kN]."""
    (found,) = [each for each in sheet.diagrams if each.title == title]
    return found.x, found.demand_low, found.demand_high


def uniform(case: str, intensity: float, beams: str = "*") -> str:
    return load(case, f'line = "{intensity} kN/m"', beams=beams)


def girder_on_columns() -> tuple[list[MadeBeam], list[MadeColumn]]:
    """G along x on columns 7.7 m apart; S1 frames into its left side at x = 3 m, S2 into its right
    side at x = 5 m, each on a column of its own at its other end."""
    beams = [
        lying("G", (0.0, 0.0, 0.0), 8000.0, depth=900.0),
        lying("S1", (3000.0, 150.0, 300.0), 5850.0, 90.0),
        lying("S2", (5000.0, -6000.0, 300.0), 5850.0, 90.0),
    ]
    columns = [MadeColumn(150.0), MadeColumn(7850.0)]
    columns += [
        MadeColumn(x, y, z=(-3000.0, 300.0)) for x, y in ((3000.0, 5850.0), (5000.0, -5850.0))
    ]
    return beams, columns


def passed(sheet: Sheet, case: str, origin: str = "reaction") -> list[Load]:
    return [each for each in sheet.loads if each.case == case and each.origin.startswith(origin)]


def verdicts(run: Run) -> dict[str, Verdict]:
    return {mark: sheet.rating.verdict for mark, sheet in sheets_of(run).items()}


def reasons(run: Run, mark: str) -> str:
    return "; ".join(reason.text for reason in sheets_of(run)[mark].rating.reasons)


def doubts(run: Run, mark: str) -> list[str]:
    return [each.text for each in sheets_of(run)[mark].rating.remarks if each.kind == "doubt"]
