"""Loads that a structural analysis model holds, laid on beams. Frozen data; part of ``beam``."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, NamedTuple


class LaidAction(NamedTuple):
    """A part of one action on one beam: as a ``Load``, in N, mm and the beam's own x.

    ``start`` and ``end`` may lie beyond the ends of the beam, where the member does.
    """

    beam: str
    case: str
    """Name of the load case in the model"""
    kind: Literal["line", "point", "moment"]
    start: float
    end: float
    values: tuple[float, float]
    origin: str
    """ "IfcStructuralCurveAction 'Snow' (#317)" """
    text: str

    @property
    def acts_upward(self) -> bool:
        """Whether any of it acts upward."""
        return self.kind != "moment" and min(self.values) < 0.0


class ActionDoubt(NamedTuple):
    """What of an action is not laid on its beam, or not surely."""

    beam: str
    case: str
    text: str
    only_near: bool = False
    """It acts near the beam, and whether on it is what the engineer may know"""


@dataclass(frozen=True, slots=True)
class ModelCase:
    """A load case of the model."""

    name: str
    actions: int
    """Actions that reach it"""
    permanent: bool | None
    """Whether the model calls it permanent; None where it does not say"""
    notes: tuple[str, ...] = ()
    """What must be known where the brief takes it"""
    lost: tuple[str, ...] = ()
    """What of it reaches no beam in scope, where that is known"""
    uncarried: tuple[str, ...] = ()
    """Actions of which it is not known which beams carry them"""


@dataclass(frozen=True, slots=True)
class ModelLoads:
    """All that is read of the structural analysis models of a file."""

    cases: tuple[ModelCase, ...] = ()
    laid: tuple[LaidAction, ...] = ()
    doubts: tuple[ActionDoubt, ...] = ()


NO_MODEL_LOADS = ModelLoads()
