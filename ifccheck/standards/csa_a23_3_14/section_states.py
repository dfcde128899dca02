"""Sections and the layers of bars in them, as arrays from which any rows can be taken."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, ClassVar, Protocol, TypeVar

import numpy as np
import numpy.typing as npt

from ifccheck.mechanics.arrays import Bools, Floats, Ints, rows_of
from ifccheck.mechanics.width_profile import SLIVER, bottom_of, top_of


class _Dataclass(Protocol):
    """Any dataclass"""

    __dataclass_fields__: ClassVar[dict[str, Any]]


State = TypeVar("State", bound=_Dataclass)
Change = Callable[[npt.NDArray[Any]], npt.NDArray[Any]]


def take_rows(state: State, rows: Ints | slice) -> State:
    """The same state at the given rows of the first axis of its arrays, nested states included."""
    if isinstance(rows, slice):
        return _each_array(state, lambda values: values[rows])
    return _each_array(state, lambda values: rows_of(values, rows))


def twice(state: State) -> State:
    """All rows of a state, and all of them once more."""
    return _each_array(state, lambda values: np.concatenate([values, values]))


def _each_array(state: State, change: Change) -> State:
    def changed(value: Any) -> Any:
        if isinstance(value, np.ndarray):
            return change(value)
        return _each_array(value, change) if hasattr(value, "__dataclass_fields__") else value

    return type(state)(*(changed(getattr(state, name)) for name in state.__dataclass_fields__))


@dataclass(frozen=True, slots=True)
class Layers:
    """Layers and their development lengths; one row per beam (B, L)."""

    height: Floats
    area: Floats
    diameter: Floats
    yield_strength: Floats
    start: Floats
    end: Floats
    start_length: Floats
    """Development length in tension from the bars' start [mm]; inf for padding"""
    end_length: Floats
    start_push: Floats
    """Development length in compression, nowhere less than that in tension [mm]"""
    end_push: Floats
    start_beyond: Floats
    """Length of the bars beyond the start of the layer over which they develop too [mm]"""
    end_beyond: Floats

    @property
    def slower_in_compression(self) -> bool:
        """Some bar needs a longer way to develop in compression than in tension."""
        return bool((self.start_push != self.start_length).any()) or bool(
            (self.end_push != self.end_length).any()
        )

    def take(self, rows: Ints, count: int) -> Layers:
        """The first layers of the given beams, laid out so that sums over layers are quick."""
        return Layers(*(rows_of(getattr(self, name)[:, :count], rows) for name in self.__slots__))


@dataclass(frozen=True, slots=True)
class SectionState:
    """Sections that differ from their neighbours; one row each."""

    strength: Floats
    density_factor: Floats
    span: Floats
    strips: Floats
    overhang_left: Floats
    overhang_right: Floats
    flange_thickness: Floats
    bars: Layers
    pulled: Floats
    pushed: Floats

    @property
    def depth(self) -> Floats:
        """h [mm]"""
        return top_of(self.strips) - bottom_of(self.strips)

    @property
    def present(self) -> Bools:
        """Layers that reach the section"""
        reach: Bools = ~(self.pulled <= 0.0)
        return reach

    @property
    def steel_yield(self) -> Floats:
        """Greatest fy of the layers that reach the section [MPa]"""
        greatest: Floats = np.where(self.present, self.bars.yield_strength, 0.0).max(
            axis=1, initial=0.0
        )
        return greatest

    @property
    def bars_outside(self) -> Bools:
        """A bar that reaches the section has its centre outside the outline's height"""
        above = self.bars.height > top_of(self.strips)[:, None] + SLIVER
        below = self.bars.height < bottom_of(self.strips)[:, None] - SLIVER
        outside: Bools = np.any((above | below) & self.present, axis=1)
        return outside
