"""How each beam of a line stands, as its rating asks for it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from ifccheck.beam import Beam, RatedSpan, Remark, Span, Support
from ifccheck.frame.beam_lines import BeamLine, LineSpan, SpanEnd
from ifccheck.frame.spans import Standing

FROM_THE_MODEL = "from centre to centre of what the model shows under it"


def standing_in_lines(
    lines: Sequence[BeamLine],
    beams: Mapping[str, Beam],
    remarks: Mapping[str, Sequence[Remark]],
    stated: Mapping[str, str],
) -> dict[str, Standing]:
    """The standing of every beam of some lines, by key.

    Parameters
    ----------
    lines
        As the model shows them.
    beams
        By key.
    remarks
        On each beam, of what carries it.
    stated
        Where the brief says how ends stand, by the key of the beam.
    """
    spans: dict[str, list[LineSpan]] = {}
    for line in lines:
        for span in line.spans:
            spans.setdefault(span.beam, []).append(span)
    return {
        key: _standing(sorted(own, key=_from), beams[key], remarks.get(key, ()), stated.get(key))
        for key, own in spans.items()
    }


def _from(span: LineSpan) -> float:
    return span.start.x


def _standing(
    spans: Sequence[LineSpan], beam: Beam, remarks: Sequence[Remark], stated: str | None
) -> Standing:
    first, last = spans[0].start, spans[-1].end
    return Standing(
        spans=tuple(_rated(span, stated) for span in spans),
        bearings=(
            0.0 if first.kind == "free" else max(first.face, 0.0),
            0.0 if last.kind == "free" else max(beam.length - last.face, 0.0),
        ),
        source=FROM_THE_MODEL,
        remarks=tuple(remarks),
    )


def _rated(span: LineSpan, stated: str | None) -> RatedSpan:
    start, end = span.start, span.end
    return RatedSpan(
        Span(start.x, end.x, _support(start, stated), _support(end, stated)),
        faces=(max(start.face, start.x) if start.kind == "free" else start.face, end.face),
        direct=(_direct(start), _direct(end)),
    )


def _direct(end: SpanEnd) -> bool:
    return end.seat is not None and end.seat.direct


def _support(end: SpanEnd, stated: str | None) -> Support:
    if end.seat is None:
        return Support("free", 0.0, "model")
    if not end.seat.carrier:
        return Support(end.kind, 0.0, stated or "brief, [[supports]]")
    said = f"; {stated}" if stated and end.seat.place != "between" else ""
    return Support(end.kind, end.seat.width, f"model: {end.seat.carrier_name}{said}")
