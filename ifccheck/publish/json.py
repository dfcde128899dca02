"""The whole answer as data, schema version 1.0.

Everything is in N, mm, MPa and N*mm, as the member ``units`` states; ratios have no unit. A
figure that is not finite is null; the member beside it with the same name and ``_state`` says
why: utilisation ``known``, ``not known`` or ``no resistance`` (something is demanded of
nothing); factor ``rated``, ``not limited`` or ``not rated``.

    schema, schema_version, program, units
    standard      id, title, edition, actions, shear_method
    brief         file, sha256
    model         file, schema, sha256 (of the bytes without any results)
    counts        adequate, falls_short, not_rated, out_of_scope
    rated_cases   case, nature, factor, factor_state, governing_beam, text, beams_reached,
                  unrated_in_path
    combinations  name, kind, labels (names by which beams call it where the rest of it does not
                  act), factors: case -> [unfavourable, favourable]
    frame         only where the brief has [frame]; lines: of each its spans in order (beam,
                  against: its x runs against the line, start and end along the beam: x, kind,
                  carrier, direct, stated by the brief alone); unknown: beam, reason; balance:
                  storey, case, own (self weight with it), received, passed_on, ground,
                  difference, balances
    beams         key, global_id, ordinal, mark, name, tag, type, storey, material, length,
                  span (start, end, supports), verdict, utilisation, governing (name of a limit
                  state), limit_states, rated_cases, reasons, remarks, basis, checked,
                  not_checked; where there are any, openings (start, end along the axis; right,
                  left across; bottom, top; shape; origin): the box round each
    out_of_scope  global_id, name, storey, reason, evidence
    assumptions   text, beams (empty: the whole run)
    remarks       beam, stage, kind, text

Beams are named by ``key``: the GlobalId, with ~2, ~3 ... where the model repeats it. Members
are only added within a major version.
"""

from __future__ import annotations

import json
import math
from collections.abc import Iterator, Sequence
from typing import Any

from ifccheck.beam import Combination, OutOfScope, Remark
from ifccheck.framed import Framed, FramedEnd, FramedLine, balances
from ifccheck.publish.json_beams import beam_texts
from ifccheck.publish.report import CaseSummary, Report
from ifccheck.tables import factor_state

SCHEMA_VERSION = "1.0"
UNITS = {"length": "mm", "force": "N", "moment": "N*mm", "line_force": "N/mm",
         "pressure": "MPa", "area": "mm2", "real": "1"}  # fmt: skip

Data = dict[str, Any]

_text = json.JSONEncoder(allow_nan=False).encode


def ratings_json(report: Report) -> str:
    """Return the whole answer as JSON; the same report gives the same text."""
    return "".join(json_pieces(report))


def json_pieces(report: Report) -> Iterator[str]:
    """Return the same piece by piece, so that no more than a row of it is held at once."""
    before = "{\n"
    for name, value in _report(report).items():
        yield f"{before}{_text(name)}: "
        yield from _lines(value)
        before = ",\n"
    yield "\n}\n"


def _lines(value: Any) -> Iterator[str]:
    """A member of the whole: a list with one row a line, so that two runs can be compared.

    An iterator gives the rows as texts.
    """
    if not isinstance(value, list | Iterator):
        yield _text(value)
        return
    before = "[\n"
    for row in value if isinstance(value, Iterator) else map(_text, value):
        yield before
        yield row
        before = ",\n"
    yield "[]" if before == "[\n" else "\n]"


def _report(report: Report) -> Data:
    counts = report.counts
    return {
        "schema": "ifccheck-rating",
        "schema_version": SCHEMA_VERSION,
        "program": {"name": "ifccheck", "version": report.version},
        "units": UNITS,
        "standard": {
            "id": report.standard_id,
            "title": report.standard_title,
            "edition": report.standard_edition,
            "actions": report.actions,
            "shear_method": report.shear_method,
        },
        "brief": {"file": report.brief_name, "sha256": report.brief_sha256},
        "model": {
            "file": report.model.file_name,
            "schema": report.model.schema,
            "sha256": report.model.sha256,
        },
        "counts": {
            "adequate": counts.adequate,
            "falls_short": counts.falls_short,
            "not_rated": counts.not_rated,
            "out_of_scope": counts.out_of_scope,
        },
        "rated_cases": [_case(case) for case in report.cases],
        "combinations": [
            _combination(*each) for each in zip(report.combinations, report.labels, strict=True)
        ],
        **({"frame": _frame(report.framed)} if report.framed else {}),
        "beams": beam_texts(report),
        "out_of_scope": [_out_of_scope(member) for member in report.model.out_of_scope],
        "assumptions": [{"text": a.text, "beams": list(a.beams)} for a in report.assumptions],
        "remarks": [_remark(remark) for remark in report.remarks],
    }


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _factor(factor: float) -> Data:
    return {"factor": _finite(factor), "factor_state": factor_state(factor)}


def _case(case: CaseSummary) -> Data:
    return {
        "case": case.case,
        "nature": case.nature,
        **_factor(case.factor),
        "governing_beam": case.governing_beam,
        "text": case.text,
        "beams_reached": case.beams_reached,
        "unrated_in_path": list(case.unrated_in_path),
    }


def _frame(framed: Framed) -> Data:
    return {
        "lines": [_line(line) for line in framed.all_lines],
        "unknown": [{"beam": key, "reason": why} for key, why in framed.unknown.items()],
        "balance": [
            {
                "storey": row.storey,
                "case": row.case,
                "own": _finite(row.applied),
                "received": _finite(row.received),
                "passed_on": _finite(row.passed_on),
                "ground": _finite(row.ground),
                "difference": _finite(row.difference),
                "balances": balances(row),
            }
            for row in framed.balance
        ],
    }


def _line(line: FramedLine) -> list[Data]:
    return [
        {
            "beam": span.beam,
            "against": span.reversed,
            "start": _span_end(span.start),
            "end": _span_end(span.end),
        }
        for span in line.spans
    ]


def _span_end(end: FramedEnd) -> Data:
    told: Data = {"x": end.x, "kind": end.kind}
    if end.kind != "free":
        told |= {"carrier": end.carrier, "direct": end.direct, "stated": end.stated}
    return told


def _combination(combination: Combination, labels: Sequence[str]) -> Data:
    factors = {case: list(pair) for case, pair in combination.factors.items()}
    return {
        "name": combination.name,
        "kind": combination.kind,
        "labels": list(labels),
        "factors": factors,
    }


def _out_of_scope(member: OutOfScope) -> Data:
    return {
        "global_id": member.guid,
        "name": member.name,
        "storey": member.storey,
        "reason": member.reason,
        "evidence": member.evidence,
    }


def _remark(remark: Remark) -> Data:
    return {
        "beam": remark.beam,
        "stage": remark.stage,
        "kind": remark.kind,
        "text": remark.text,
    }
