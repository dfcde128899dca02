"""What is known, and what is not, of all that acts on a beam."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from ifccheck.beam import SELF, Beam, Contact, Load, Reason, Remark
from ifccheck.brief.statements import BeamStatement
from ifccheck.frame.reactions import unknown_reactions
from ifccheck.frame.spans import Standing
from ifccheck.subjects.findings import Findings, Sources
from ifccheck.subjects.framing import unsettled
from ifccheck.units import clipped

NO_STATEMENT = BeamStatement()
_CRANE = "crane loads stand where the brief puts them: they are not moved, and carry no impact"
_THROUGH_THE_WEB = "loads are assumed to act through the web: torsion is not checked"


def judge_loads(
    beam: Beam,
    sources: Sources,
    statement: BeamStatement,
    standing: Standing | None,
    loads: Sequence[Load],
    findings: Findings,
) -> None:
    """Note every doubt about what acts on the beam."""
    findings.reasons += _unsure(beam, sources, statement, loads)
    findings.remarks += _untaken(beam, sources)
    hung = sorted({load.origin for load in loads if load.face == "bottom"})
    if hung:
        places = ", ".join(hung)
        findings.refuse(f"hung load: hanger steel is not checked ({places})", blocking=False)
    if statement.torsion:
        findings.refuse("torsion: it is not checked", blocking=False)
    else:
        findings.remarks.append(Remark(beam.key, "demand", _THROUGH_THE_WEB, "assumption"))
    if sources.crane_cases and any(load.case in sources.crane_cases for load in loads):
        findings.remarks.append(Remark(beam.key, "demand", _CRANE, "assumption"))
    if standing:
        findings.reasons += _unknown(beam, sources, statement, standing)


def load_doubts(
    beam: Beam, sources: Sources, standing: Standing, loads: Sequence[Load]
) -> list[Reason]:
    """Why not all that acts on a beam, and so on what carries it, is known."""
    statement = sources.statements.get(beam.key, NO_STATEMENT)
    assert sources.framing is not None
    return [
        *_unsure(beam, sources, statement, loads),
        *_unknown(beam, sources, statement, standing),
        *sources.framing.lines.doubts.get(beam.key, ()),
    ]


def _unsure(
    beam: Beam, sources: Sources, statement: BeamStatement, loads: Sequence[Load]
) -> Iterator[Reason]:
    """Why the loads given to a beam may not be those that act."""
    if not statement.unloaded and all(load.case == SELF for load in loads):
        yield Reason("no load assigned", blocking=False)
    if sources.upward:
        yield from _upward(sources, loads)
    for doubt in sources.action_doubts.get(beam.key, ()):
        if not (doubt.only_near and statement.loads_complete):
            yield Reason(doubt.text, blocking=False)
    if not statement.loads_complete:
        yield from sources.floors.reasons.get(beam.key, ())
        for text in sources.uncarried:
            yield Reason(
                f"{text}; give what of it acts on this beam under [[loads]] and write"
                " loads_complete = true",
                blocking=False,
            )


def _upward(sources: Sources, loads: Sequence[Load]) -> Iterator[Reason]:
    """Loads that lift the beam and may be a slip of the sign."""
    for place in dict.fromkeys(load.origin for load in loads):
        if not sources.upward.get(place, True):
            yield Reason(
                f"load acts upward: {place}; write upward = true there if it is meant",
                blocking=False,
            )


def _untaken(beam: Beam, sources: Sources) -> Iterator[Remark]:
    """What of the model's own analysis model acts on the beam and is left out."""
    for name in sources.untaken.get(beam.key, ()):
        which = f"load case {clipped(name)}" if name else "an action of no load case"
        text = f"{which} of the model acts on it, and no case of the brief takes it"
        yield Remark(beam.key, "loads", text, "doubt")


def _unknown(
    beam: Beam, sources: Sources, statement: BeamStatement, standing: Standing
) -> Sequence[Reason]:
    """Why not all that acts on a beam is known."""
    framing = sources.framing
    beside = framing.beside.get(beam.key, ()) if framing else ()
    if statement.loads_complete:
        return beside
    contacts: Sequence[Contact] = sources.contacts.get(beam.key, ())
    if framing:
        contacts = unsettled(framing, sources.contacts, beam.key)
    reasons = unknown_reactions(beam, contacts, standing, sources.unmeasured)
    return [*reasons, *(framing.passed.get(beam.key, ()) if framing else ()), *beside]
