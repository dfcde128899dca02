"""The cotangent of strut angles against numpy's tangent."""

from __future__ import annotations

import numpy as np
import pytest

from ifccheck.mechanics.angles import cotangent


def test_cotangent_is_that_of_numpy_at_every_angle() -> None:
    degrees = np.linspace(0.5, 89.5, 20001)
    np.testing.assert_allclose(cotangent(degrees), 1.0 / np.tan(np.radians(degrees)), rtol=1e-13)


def test_cotangent_of_a_single_angle_and_of_none() -> None:
    assert float(cotangent(np.array(30.0))) == pytest.approx(3.0**0.5, rel=1e-14)
    assert float(cotangent(np.array(10.0))) == pytest.approx(5.671281819617709, rel=1e-14)
    assert np.isnan(cotangent(np.array([np.nan])))[0]
