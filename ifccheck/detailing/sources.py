"""Which of several sources rates a beam."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from ifccheck.beam import Beam, Reason, Reinforcement, Remark, SourceName
from ifccheck.detailing.differences import difference

STAGE = "reinforcement"


class Chosen(NamedTuple):
    """The source that rates a beam; None where there is none, and why."""

    reinforcement: Reinforcement | None
    remarks: tuple[Remark, ...] = ()
    reasons: tuple[Reason, ...] = ()


def choose_source(beam: Beam, order: Sequence[SourceName]) -> Chosen:
    """Take the first source in the order that speaks, and report what the others say.

    What a source could not read makes the beam not rated where that source is the one taken,
    or where no source speaks at all; otherwise it is a remark.
    """
    found = [r for source in order for r in beam.reinforcement if r.source == source]
    speaking = [r for r in found if _speaks(r)]
    if not speaking:
        reasons = tuple(reason for r in found for reason in r.reasons)
        remarks = tuple(remark for r in found for remark in r.remarks)
        return Chosen(None, remarks, reasons or (Reason(_nothing(beam)),))
    taken, others = speaking[0], speaking[1:]
    if len(found) == 1:
        return Chosen(taken, taken.remarks, taken.reasons)
    unread = [
        Remark(beam.key, STAGE, f"{r.source}: {reason.text}; {taken.source} used instead", "doubt")
        for r in found
        if r is not taken
        for reason in r.reasons
    ]
    differing = [
        Remark(beam.key, STAGE, text, "doubt")
        for other in others
        if (text := difference(beam, taken, other))
    ]
    unused = [r for r in found if r.source == "schedule" and r.zones and not _speaks(r)]
    idle = [Remark(beam.key, STAGE, _idle(r, taken), "doubt") for r in unused]
    return Chosen(taken, (*taken.remarks, *unread, *differing, *idle), taken.reasons)


def _idle(silent: Reinforcement, taken: Reinforcement) -> str:
    origins = ", ".join(zone.origin for zone in silent.zones)
    return (
        f"{origins}: gives no bars and no stirrups, {taken.source} used instead: its cover and"
        " yields are not used; state them under [[materials]] of the brief"
    )


def _nothing(beam: Beam) -> str:
    unused = sorted({r.source for r in beam.reinforcement if _speaks(r)})
    if not unused:
        return "no reinforcement found"
    return f"no reinforcement found in the sources of the brief (the model has {', '.join(unused)})"


def _speaks(reinforcement: Reinforcement) -> bool:
    if reinforcement.bars or reinforcement.stirrups:
        return True
    return any(
        zone.top is not None
        or zone.bottom is not None
        or zone.side is not None
        or zone.stirrups is not None
        or zone.no_stirrups
        or zone.rows
        for zone in reinforcement.zones
    )
