"""Openings in a beam, and where they take away depth that carries shear.

Frozen dataclasses only; read as part of ``beam``.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

OpeningShape = Literal["circle", "rectangle", "other"]


@dataclass(frozen=True, slots=True)
class Opening:
    """A hole, recess or notch in a beam: the box round what it takes off the beam's body, in
    the beam's own axes [mm]."""

    start: float
    end: float
    right: float
    """Least y"""
    left: float
    """Greatest y"""
    bottom: float
    """Least z"""
    top: float
    shape: OpeningShape
    """As it is seen from the beam's side"""
    origin: str = ""
    """The entity that it was read from."""


@dataclass(frozen=True, slots=True)
class ShearLoss:
    """A stretch of a beam on which some of the depth carries no shear.

    ``height`` [mm] is taken off the shear depth; nan where shear is not rated.
    """

    start: float
    end: float
    height: float
