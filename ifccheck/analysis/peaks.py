"""Upper bounds of what moments reach, also between stations."""

from __future__ import annotations

import numpy as np

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
    put_in,
)
from ifccheck.analysis.statics import CaseEffects
from ifccheck.analysis.stations import starts
from ifccheck.mechanics.arrays import Floats, Ints


def case_peaks(cases: CaseEffects) -> tuple[Floats, Floats]:
    """Upper bounds of the sagging and of the hogging moment of each case (K, B), both >= 0.

    Between two stations the moment of a steady load stays below the tangents at both. That of
    loads which move and press downwards, wherever they are, hangs down between stations and
    stays below the tangents of the greatest moment with the greatest and the least shear.
    """
    peaks = np.zeros((2, *cases.end_moments.shape[:2]))
    if cases.moment.size:
        first = starts(cases.beam)
        beams = cases.beam[first]
        for peak, sign, own in zip(
            peaks, (1.0, -1.0), (GREATEST_MOMENT, LEAST_MOMENT), strict=True
        ):
            moment, _ = put_in(cases.moving, own, cases.moment, cases.shear)
            most = np.maximum if sign > 0.0 else np.minimum
            peak[:, beams] = most.reduceat(moment, first, axis=1) * sign
            case, beam, bound = _bounds_between(cases, moment, sign)
            np.maximum.at(peak, (case, beam), bound)
    sagging, hogging = np.maximum(peaks, 0.0)
    return sagging, hogging


def _bounds_between(cases: CaseEffects, moment: Floats, sign: float) -> tuple[Ints, Ints, Floats]:
    """Upper bounds of the sagging (sign 1) or hogging (sign -1) moment (K, N) between two stations
    where the shear of a case turns: the cases, beams and bounds."""
    shears = GREATEST_SHEAR, LEAST_SHEAR
    (_, first), (_, last) = (
        put_in(cases.moving, own, cases.moment, cases.shear)
        for own in (shears if sign > 0.0 else shears[::-1])
    )
    rising, falling = first[:, :-1] * sign > 0.0, last[:, 1:] * sign < 0.0
    gap = np.diff(cases.x)
    held = (cases.beam[1:] == cases.beam[:-1]) & (gap > 0.0)
    case, row = np.nonzero(rising & falling & held)
    before, after = first[case, row] * sign, last[case, row + 1] * sign
    low, high, width = moment[case, row] * sign, moment[case, row + 1] * sign, gap[row]
    reach = np.clip((high - low - after * width) / (before - after), 0.0, width)
    return case, cases.beam[row], np.maximum(low + before * reach, low)
