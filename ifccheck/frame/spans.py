"""Where a beam spans, from how its ends stand."""

from __future__ import annotations

from ifccheck.beam import Beam, Line, Span, Support


def single_span(beam: Beam, supports: tuple[Support, Support], span: float | None) -> Line:
    """The line of a beam that stands alone.

    A span runs between the centres of its bearings, a cantilever's from the face of its
    support. A ``span`` [mm] that the engineer states replaces that length: a cantilever's is
    counted from the face, any other lies centred on the beam.
    """
    start, end = _bearing_centres(beam.length, supports)
    if span is not None:
        start, end = _stated(start, end, supports, span)
    return Line(beams=(beam.key,), spans=(Span(start, end, *supports),))


def _bearing_centres(length: float, supports: tuple[Support, Support]) -> tuple[float, float]:
    first, last = supports
    if last.kind == "free":
        return first.bearing, length
    if first.kind == "free":
        return 0.0, length - last.bearing
    return first.bearing / 2.0, length - last.bearing / 2.0


def _stated(
    start: float, end: float, supports: tuple[Support, Support], span: float
) -> tuple[float, float]:
    if supports[1].kind == "free":
        return start, start + span
    if supports[0].kind == "free":
        return end - span, end
    middle = (start + end) / 2.0
    return middle - span / 2.0, middle + span / 2.0


def support_faces(span: Span) -> tuple[float, float]:
    """Places [mm] of the faces of a span's supports; a free end is its own face."""
    if "free" in (span.start_support.kind, span.end_support.kind):
        return span.start, span.end
    return span.start + span.start_support.bearing / 2.0, span.end - span.end_support.bearing / 2.0
