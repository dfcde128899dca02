"""Cases cut into parts that act or not, each for itself."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from ifccheck.analysis.parts import parts_of
from ifccheck.rating.subject import Continuity
from tests.made_subjects import CASES, line, rated, subject


def test_cases_have_parts_for_every_span_and_for_loads_apart() -> None:
    parts = parts_of([False, True, True], 3, apart=True)
    assert parts.case.tolist() == [0] + [1] * 6 + [2] * 6
    assert parts.rows(1).tolist() == [1, 2, 3, 4, 5, 6]
    assert parts.apart
    assert parts.whole(np.ones((13, 2))).tolist() == [[1.0, 1.0], [6.0, 6.0], [6.0, 6.0]]
    whole = parts_of([False, True], 1, apart=False)
    assert (whole.cut, whole.apart) == (False, False)


def continuous(moment: float, *, apart: bool) -> Continuity:
    """The one span of a beam, the second of two in its line, with moments from the other span's
    ``floor`` load; from its loads apart, too."""
    parts = parts_of([case.by_spans for case in CASES], 2, apart=apart)
    moments = np.zeros((parts.case.size, 1, 2))
    moments[parts.rows(1)[0], 0, 0] = -moment
    if apart:
        moments[parts.rows(1)[2], 0, 0] = moment / 2.0
    beside = np.zeros((parts.case.size, 2))
    return Continuity((1,), 2, parts, moments, beside, frozenset({"floor"}))


@pytest.mark.parametrize("apart", [False, True])
def test_moments_of_a_line_act_with_and_without_loads_apart(apart: bool) -> None:
    """The other span's load hogs this one by 40 kN*m at its start, and stays away where it would
    relieve: sagging is that of the simple span, w L^2 / 8. What lifts there sags it by 20 kN*m."""
    alone = subject(key="alone", loads=(line("floor", 20.0, key="alone"),))
    joined = subject(key="joined", loads=(line("floor", 20.0, key="joined"),))
    batch, _ = rated(alone, replace(joined, continuity=continuous(40e6, apart=apart)))
    high, low = (
        [edge(values[batch.stations.beam == beam]) for beam in (0, 1)]
        for edge, values in (
            (np.max, batch.envelope.moment_high), (np.min, batch.envelope.moment_low),
        )
    )  # fmt: skip
    lifted = 1.5 * 20e6 if apart else 0.0
    assert high[0] == pytest.approx((1.25 * 0.18 * 24 + 1.5 * 20.0) * 5800.0**2 / 8.0, rel=1e-3)
    assert high[0] <= high[1] <= high[0] + lifted
    assert bool(high[1] > high[0]) is apart
    assert low[0] == pytest.approx(0.0, abs=1.0)
    assert low[1] == pytest.approx(-1.5 * 40e6, rel=0.05)
