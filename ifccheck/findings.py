"""What a model holds of each beam and what a rating of it would lack, as plain data."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

from ifccheck.beam import Beam, Model
from ifccheck.framed import Framed


class State(StrEnum):
    """How far the model and the brief tell what a rating needs of a beam."""

    INCOMPLETE = "incomplete"
    DOUBTFUL = "doubts only"
    COMPLETE = "nothing missing"


@dataclass(frozen=True, slots=True)
class Finding:
    """What is found of one beam before anything is rated."""

    lacks: tuple[str, ...] = ()
    """What a rating needs and neither the model nor the brief gives"""
    to_state: tuple[str, ...] = ()
    """What only a brief can settle, and does not yet"""
    doubts: tuple[str, ...] = ()
    unmet: tuple[str, ...] = ()
    """What the information requirement asks and the model does not give as asked"""

    @property
    def state(self) -> State:
        """What is to be settled by the brief alone does not count as missing."""
        if self.lacks:
            return State.INCOMPLETE
        return State.DOUBTFUL if self.doubts else State.COMPLETE


@dataclass(frozen=True, slots=True)
class PropertySeen:
    """A property of the project's own that may tell of reinforcement."""

    field: str
    """Of the brief's mapping: top, bottom, stirrups, ..."""
    place: str
    """ "Set.Property" """
    example: str
    beams: int
    """Number of beams that have it"""


@dataclass(frozen=True)
class Survey:
    """What one model holds."""

    version: str
    model: Model
    findings: Mapping[str, Finding]
    """By key of the beam"""
    brief_name: str = ""
    """Empty where there is no brief yet"""
    brief_sha256: str = ""
    bars_in_file: int = 0
    """Bars and meshes that the model holds, whosever they are"""
    framed: Framed | None = None
    """What the beams would stand on by what the model shows, and the brief where it says so"""

    @property
    def beams_with_bars(self) -> int:
        """Number of beams in scope of which physical bars were read."""
        return sum(
            any(source.source == "bars" for source in beam.reinforcement)
            for beam in self.model.beams
        )

    def count(self, state: State) -> int:
        """Return the number of beams in a state."""
        return sum(finding.state is state for finding in self.findings.values())

    @property
    def meeting(self) -> int:
        """Number of beams that meet the information requirement."""
        return sum(not finding.unmet for finding in self.findings.values())

    def of(self, beam: Beam) -> Finding:
        """Return what is found of a beam."""
        return self.findings[beam.key]
