"""Beams of a frame that touch others, or come near them, and are not carried there: what is not
known of them keeps the others from being called adequate."""

from __future__ import annotations

from pathlib import Path

import pytest

from ifccheck.beam import Verdict
from tests.models import MadeBeam, MadeColumn
from tests.rated_frames import lying, rated_frame, reasons, uniform, verdicts


def girder(depth: float = 600.0) -> tuple[list[MadeBeam], list[MadeColumn]]:
    """G along y at x = 10 m on two columns, its soffit at z = 0."""
    beams = [lying("G", (10000.0, -4000.0, 0.0), 8000.0, 90.0, depth=depth)]
    return beams, [MadeColumn(10000.0, y) for y in (-3850.0, 3850.0)]


@pytest.mark.parametrize("gap", [30.0, 49.0])
def test_an_end_that_stops_short_of_a_girder_may_load_it(tmp_path: Path, gap: float) -> None:
    """B reaches over two columns to a girder's face, but for a joint that a model may leave."""
    beams, columns = girder()
    beams.append(lying("B", (0.0, 0.0, 0.0), 9850.0 - gap))
    columns += [MadeColumn(150.0), MadeColumn(4200.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert reasons(run, "G") == "reactions not included: B (IfcBeam)"


def test_a_beam_that_passes_close_above_a_girder_may_load_it(tmp_path: Path) -> None:
    beams, columns = girder()
    beams.append(lying("B", (5000.0, 0.0, 630.0), 10000.0))
    columns += [MadeColumn(x, z=(-3000.0, 630.0)) for x in (5150.0, 14850.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert reasons(run, "G") == "reactions not included: B (IfcBeam)"


@pytest.mark.parametrize("half", [150.0, 200.0])
def test_beams_that_touch_a_girder_over_a_column_give_it_nothing(
    tmp_path: Path, half: float
) -> None:
    """G goes through over a column in its middle, which B's end stands on or meets the face of."""
    beams, columns = girder()
    beams.append(lying("B", (4000.0, 0.0, 0.0), 6000.0 - half))
    columns += [MadeColumn(4150.0), MadeColumn(10000.0, size=400.0, z=(-3000.0, 600.0))]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.ADEQUATE}
