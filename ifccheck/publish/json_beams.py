"""The rows of beams in the answer as data, written as text from what many beams share.

A model has thousands of beams and tens of thousands of things to tell of them, most of them
equal: each is spelled once. What is written is what ``json`` would write of the same data.
"""

from __future__ import annotations

import json.encoder
import math
from collections.abc import Iterable, Iterator, Sequence
from functools import cache, lru_cache

from ifccheck.beam import Beam, Opening, RatedSpan, Remark, Support
from ifccheck.publish.report import Report
from ifccheck.rating import BasisItem, LimitStateRating, Rating, SafeLoad
from ifccheck.tables import factor_state, utilisation_state

KEPT = 16384
"""Texts of each kind that are kept while a model is written"""

_text = json.encoder.encode_basestring_ascii


def _template(*names: str) -> str:
    """An object with these members, for texts of their values."""
    return "{" + ", ".join(f"{_text(name)}: %s" for name in names) + "}"


_BEAM = _template(
    "key", "global_id", "ordinal", "mark", "name", "tag", "type", "storey", "material", "length",
    "spans", "verdict", "utilisation", "utilisation_state", "governing", "limit_states",
    "rated_cases", "reasons", "remarks", "basis", "checked", "not_checked",
)  # fmt: skip
_OPENING = _template(
    "start", "end", "right", "left", "bottom", "top", "shape", "origin",
)  # fmt: skip
_SPAN = _template("start", "end", "start_support", "end_support")
_SUPPORT = _template("kind", "bearing", "source")
_LIMIT_STATE = _template(
    "name", "title", "utilisation", "utilisation_state", "position", "combination", "demand",
    "resistance", "unit", "clause", "counted", "why_not",
)  # fmt: skip
_SAFE_LOAD = _template(
    "case", "factor", "factor_state", "assigned", "safe_load", "single_load", "single_unit",
    "limited_by", "position", "combination",
)  # fmt: skip
_BASIS = _template("name", "label", "value", "measure", "source", "assumed")
_REMARK = _template("beam", "stage", "kind", "text")

_SINGLE_UNITS = {"point": _text("N"), "line": _text("N/mm")}


def beam_texts(report: Report) -> Iterator[str]:
    """Return the row of each beam, in the order of the model."""
    for beam in report.model.beams:
        yield _beam(beam, report.spans.get(beam.key, ()), report.ratings[beam.key])


def _number(value: float) -> str:
    return float.__repr__(value) if math.isfinite(value) else "null"


def _truth(value: bool) -> str:
    return "true" if value else "false"


def _list(texts: Iterable[str]) -> str:
    return f"[{', '.join(texts)}]"


@lru_cache(maxsize=KEPT)
def _texts(values: tuple[str, ...]) -> str:
    return _list(map(_text, values))


def _beam(beam: Beam, spans: Sequence[RatedSpan], rating: Rating) -> str:
    row = _row(beam, spans, rating)
    if not beam.openings:
        return row
    return f'{row[:-1]}, "openings": {_list(map(_opening, beam.openings))}}}'


def _row(beam: Beam, spans: Sequence[RatedSpan], rating: Rating) -> str:
    governing = rating.governing
    return _BEAM % (
        _text(beam.key),
        _text(beam.guid),
        beam.ordinal,
        _text(beam.mark),
        _text(beam.name),
        _text(beam.tag),
        _text(beam.type_name),
        _text(beam.storey),
        _text(beam.material),
        _number(beam.length) if beam.axis else "null",
        _list(map(_span, spans)),
        _text(str(rating.verdict)),
        _number(rating.utilisation),
        _text(utilisation_state(rating.utilisation)),
        _text(governing.name) if governing else "null",
        _list(map(_limit_state, rating.limit_states)),
        _list(map(_safe_load, rating.safe_loads)),
        _list(_text(reason.text) for reason in rating.reasons),
        _list(map(_remark, rating.remarks)),
        _list(map(_basis, rating.basis)),
        _texts(rating.checked),
        _texts(rating.not_checked),
    )


def _opening(opening: Opening) -> str:
    box = opening.start, opening.end, opening.right, opening.left, opening.bottom, opening.top
    return _OPENING % (*map(_number, box), _text(opening.shape), _text(opening.origin))


def _span(rated: RatedSpan) -> str:
    span = rated.span
    ends = _support(span.start_support), _support(span.end_support)
    return _SPAN % (_number(span.start), _number(span.end), *ends)


@lru_cache(maxsize=KEPT)
def _support(support: Support) -> str:
    return _SUPPORT % (_text(support.kind), _number(support.bearing), _text(support.source))


def _limit_state(state: LimitStateRating) -> str:
    words = _limit_state_words(
        state.name, state.title, utilisation_state(state.utilisation), state.combination,
        state.demand_unit, state.clause, state.counted, state.why_not,
    )  # fmt: skip
    return words % (
        _number(state.utilisation),
        _number(state.position),
        _number(state.demand),
        _number(state.resistance),
    )


@lru_cache(maxsize=KEPT)
def _limit_state_words(
    name: str,
    title: str,
    known: str,
    combination: str,
    unit: str,
    clause: str,
    counted: bool,
    why_not: str,
) -> str:
    """What many beams share, with places for the figures of each."""
    name, title, known, combination, unit, clause, why_not = (
        _text(each).replace("%", "%%")
        for each in (name, title, known, combination, unit, clause, why_not)
    )
    return _LIMIT_STATE % (
        name, title, "%s", known, "%s", combination, "%s", "%s", unit, clause, _truth(counted),
        why_not,
    )  # fmt: skip


def _safe_load(safe: SafeLoad) -> str:
    return _SAFE_LOAD % (
        _text(safe.case),
        _number(safe.factor),
        _text(factor_state(safe.factor)),
        _text(safe.assigned),
        _text(safe.text),
        _number(safe.single_value),
        _SINGLE_UNITS.get(safe.single_kind, "null"),
        _text(safe.governing) if safe.governing else "null",
        _number(safe.position),
        _text(safe.combination),
    )


def _remark(remark: Remark) -> str:
    beam = _text(remark.beam) if remark.beam is not None else "null"
    return _REMARK % (beam, _word(remark.stage), _word(remark.kind), _text(remark.text))


_word = cache(_text)
"""Of words of which there are few"""


@lru_cache(maxsize=KEPT)
def _basis(item: BasisItem) -> str:
    value = item.value
    return _BASIS % (
        _text(item.name),
        _text(item.label),
        _text(value) if isinstance(value, str) else _number(value),
        _text(item.measure),
        _text(item.source),
        _truth(item.assumed),
    )
