"""Actions of an analysis model that lie beyond the end of the beam that they are laid on."""

from __future__ import annotations

from types import SimpleNamespace
from typing import Any

import pytest

from ifccheck.beam import LaidAction, ModelLoads
from ifccheck.brief.model import TakenCase
from ifccheck.brief.model_cases import taken_loads

TAKEN = TakenCase("floor", upward=False)
BRIEF: Any = SimpleNamespace(from_model={"Live": TAKEN})
BEAM: Any = SimpleNamespace(key="B", length=6000.0)


def laid(kind: Any, start: float, end: float, values: tuple[float, float]) -> Any:
    action = LaidAction("B", "Live", kind, start, end, values, "action", "text")
    (load,) = taken_loads(BRIEF, ModelLoads(laid=(action,)), {"B": BEAM}, {})
    return load


@pytest.mark.parametrize(("start", "end", "x"), [(-40.0, -10.0, 0.0), (6005.0, 6035.0, 6000.0)])
def test_a_line_wholly_beyond_an_end_stands_at_that_end(start: float, end: float, x: float) -> None:
    """30 mm of 100 to 300 N/mm are 6 kN."""
    load = laid("line", start, end, (100.0, 300.0))
    assert (load.kind, load.start, load.end) == ("point", x, x)
    assert load.values == pytest.approx((6000.0, 6000.0))


@pytest.mark.parametrize(("at", "x"), [(-20.0, 0.0), (6020.0, 6000.0), (2000.0, 2000.0)])
def test_a_point_beyond_an_end_stands_at_that_end(at: float, x: float) -> None:
    load = laid("point", at, at, (5e3, 5e3))
    assert (load.start, load.end, load.values) == (x, x, (5e3, 5e3))


def test_a_line_that_reaches_past_an_end_is_cut_there() -> None:
    load = laid("line", -1000.0, 3000.0, (0.0, 40.0))
    assert (load.kind, load.start, load.end) == ("line", 0.0, 3000.0)
    assert load.values == pytest.approx((10.0, 40.0))
