"""How beams were stood in the building, in the plain facts that are shown of it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace

from ifccheck.beam import Beam, Model, Reason
from ifccheck.brief.model import FrameOptions
from ifccheck.frame.beam_lines import BeamLine, LineSpan, SpanEnd
from ifccheck.frame.carrying import touching_in
from ifccheck.frame.lines import find_lines
from ifccheck.framed import Balance, Framed, FramedEnd, FramedLine, FramedSpan
from ifccheck.subjects.framing import Framing, runs_through


def framed(framing: Framing) -> Framed:
    """What is shown of the beams of a run."""
    lines, path = framing.lines.lines, framing.path
    shown = _framed(lines, framing.unknown, framing.beams)
    solved = {each.key for line in path.solved for each in line.beams}
    left_out = tuple(key for key in framing.beams if key not in solved)
    return replace(
        shown,
        balance=_summed(path.balance),
        left_out=left_out,
        moving=path.moving,
        carriers=_carriers(path.resting, framing.beams),
    )


def _carriers(
    resting: Mapping[str, Iterable[str]], beams: Mapping[str, Beam]
) -> dict[str, dict[str, str]]:
    """Marks of all beams between each and the ground, by key."""
    under: dict[str, list[str]] = {}
    for carrier, own in resting.items():
        for key in own:
            under.setdefault(key, []).append(carrier)
    found = {}
    for key in under:
        below: dict[str, str] = {}
        waiting = under[key][::-1]
        while waiting:
            carrier = waiting.pop()
            if carrier not in below:
                below[carrier] = beams[carrier].mark
                waiting += under.get(carrier, ())
        found[key] = below
    return found


def framed_by_the_model(model: Model) -> Framed:
    """What beams would stand on if the model alone told it."""
    beams = {beam.key: beam for beam in model.beams}
    contacts, others = touching_in(model)
    lines = find_lines(model, contacts, others, {}, runs_through(FrameOptions(), beams))
    return _framed(lines.lines, lines.unknown, beams)


def _framed(
    lines: Iterable[BeamLine], unknown: Mapping[str, Reason], beams: Mapping[str, Beam]
) -> Framed:
    found: dict[str, FramedLine] = {}
    for line in lines:
        told = FramedLine(tuple(_span(span, beams[span.beam].mark) for span in line.spans))
        found.update({each.key: told for each in line.beams if each.key not in unknown})
    whys = {key: reason.text for key, reason in unknown.items()}
    return Framed(found, whys)


def _span(span: LineSpan, mark: str) -> FramedSpan:
    return FramedSpan(span.beam, mark, _end(span.start), _end(span.end), span.reversed)


def _end(end: SpanEnd) -> FramedEnd:
    seat = end.seat
    if seat is None:
        return FramedEnd(end.kind, end.x)
    return FramedEnd(end.kind, end.x, seat.carrier_name, seat.direct, stated=not seat.carrier)


def _summed(balance: Sequence[Balance]) -> tuple[Balance, ...]:
    """One row for each storey and case: lines are solved in several rounds."""
    rows: dict[tuple[str, str], tuple[float, ...]] = {}
    for row in balance:
        known = rows.get((row.storey, row.case), (0.0,) * len(row.figures))
        rows[row.storey, row.case] = tuple(a + b for a, b in zip(known, row.figures, strict=True))
    return tuple(Balance(*key, *figures) for key, figures in rows.items())
