"""What is known of all beams of a model, and what is found out about one while it is gathered."""

from __future__ import annotations

from collections.abc import Mapping, Sequence, Set
from dataclasses import dataclass, field

from ifccheck.beam import ActionDoubt, Contact, Given, Reason, Remark, Support, Unmeasured
from ifccheck.brief.model import Brief
from ifccheck.brief.statements import BeamStatement, MaterialStatement
from ifccheck.frame.bar_ends import Surroundings
from ifccheck.frame.carrying import Touching
from ifccheck.frame.flanges import Slabs
from ifccheck.frame.openings import Net
from ifccheck.rating.runways import Runway
from ifccheck.rating.shape import Stance
from ifccheck.standards import Standard
from ifccheck.subjects.floors import NO_FLOOR_LOADS, FloorLoads
from ifccheck.subjects.framing import Framing

NO_MATERIAL = MaterialStatement()


@dataclass(slots=True)
class Findings:
    """Reasons and remarks on one beam while it is gathered."""

    key: str
    reasons: list[Reason] = field(default_factory=list)
    remarks: list[Remark] = field(default_factory=list)

    def refuse(self, text: str, *, blocking: bool = True) -> None:
        """Note why the beam cannot be rated."""
        self.reasons.append(Reason(text, blocking))

    def take(self, net: Net) -> None:
        """Note what openings bring."""
        self.reasons += net.reasons
        self.remarks += net.remarks

    def hear(self, stances: Sequence[Stance]) -> None:
        """Note how the sections stand."""
        self.reasons += [Reason(each.reason) for each in stances if each.reason]
        self.remarks += [
            Remark(self.key, "geometry", each.assumption, "assumption")
            for each in stances
            if each.assumption
        ]

    def assume(self, label: str, given: Given) -> Given:
        """Note an assumed value."""
        if given.assumed:
            text = f"{label} assumed: {given.source}"
            self.remarks.append(Remark(self.key, "basis", text, "assumption"))
        return given


@dataclass(frozen=True, slots=True)
class Sources:
    """What is known of all beams of a model, by key."""

    brief: Brief
    standard: Standard
    touching: Touching
    contacts: Mapping[str, Sequence[Contact]]
    """Of the beams, with doubts on what may not carry them"""
    unmeasured: Sequence[Unmeasured]
    statements: Mapping[str, BeamStatement]
    materials: Mapping[str, MaterialStatement]
    defaults: MaterialStatement
    supports: Mapping[str, tuple[Support, Support] | Reason]
    support_remarks: Mapping[str, Sequence[Remark]]
    unit_weight: Given
    """By the brief [N/mm3]"""
    crane_cases: Set[str]
    permanent_cases: Set[str]
    ignored: Mapping[str, Sequence[Contact]]
    """Under a beam between its ends, stated not to hold it"""
    stances: Mapping[str, Sequence[Stance]]
    """Of sections of which there is something to say"""
    upward: Mapping[str, bool]
    """Entries of loads that act upward, by place, and whether the engineer says so"""
    slabs: Slabs
    around: Surroundings
    action_doubts: Mapping[str, Sequence[ActionDoubt]]
    """What of the actions of an analysis model is not laid on each beam, or not surely"""
    untaken: Mapping[str, Sequence[str]]
    """Load cases of the model that load each beam and that the brief does not take"""
    uncarried: Sequence[str]
    """Actions of cases that the brief takes which may act on any beam"""
    floors: FloorLoads = NO_FLOOR_LOADS
    """What slabs bring to beams"""
    framing: Framing | None = None
    """None where the brief states every support"""
    runways: Mapping[str, Runway] = field(default_factory=dict)
    """Lines that trains run along, by the key of each of their beams"""
