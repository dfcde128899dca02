"""The ratings as CSV, JSON, tables and property sets: complete, honest and inert."""

from __future__ import annotations

import csv
import io
import json
import math
from dataclasses import replace

import pytest

from ifccheck.beam import Beam, Verdict
from ifccheck.publish.csv import neutral, ratings_csv
from ifccheck.publish.json import ratings_json
from ifccheck.publish.property_sets import basis_identifier, result_sets
from ifccheck.publish.report import Report
from ifccheck.rating import BasisItem, Rating
from ifccheck.result_sets import ResultSet
from ifccheck.tables import (
    basis_frame,
    limit_states_frame,
    out_of_scope_frame,
    ratings_frame,
    remarks_frame,
    safe_loads_frame,
)
from tests.reports_made_up import HOSTILE, hostile_report, made_up_report

REPORT = made_up_report()


def with_rating(rating: Rating) -> Report:
    return replace(REPORT, ratings={**REPORT.ratings, rating.beam: rating})


def first(verdict: Verdict) -> Rating:
    return next(r for r in REPORT.ratings.values() if r.verdict is verdict)


def rows(report: Report) -> dict[str, dict[str, str]]:
    return {row["key"]: row for row in csv.DictReader(io.StringIO(ratings_csv(report)))}


# CSV


def test_the_table_has_one_row_per_beam_in_the_order_of_the_model() -> None:
    assert list(rows(REPORT)) == [beam.key for beam in REPORT.model.beams]


def test_a_row_says_what_governs_in_the_units_of_its_columns() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.utilisation == 1.0004)
    row = rows(REPORT)[rating.beam]
    assert row["verdict"] == "falls short"
    assert float(row["utilisation"]) == 1.0004
    assert row["governing"] == "shear"
    assert float(row["governing_demand"]) == pytest.approx(1.0004 * 187.4)
    assert float(row["governing_resistance"]) == pytest.approx(187.4)
    assert row["governing_unit"] == "kN"
    assert float(row["span_m"]) == pytest.approx(5.6)
    assert float(row["governing_position_m"]) == pytest.approx(0.448)
    assert float(row["utilisation_FlexureSagging"]) == 0.88
    assert row["checked"] == "flexure, shear, longitudinal tension"


def test_a_rated_case_has_factor_and_safe_load() -> None:
    rating = first(Verdict.FALLS_SHORT)
    safe = rating.safe_loads[0]
    row = rows(REPORT)[rating.beam]
    assert float(row["press_factor"]) == pytest.approx(safe.factor)
    assert row["press_factor_state"] == "rated"
    assert row["press_safe_load"] == safe.text
    assert float(row["press_single_load"]) == pytest.approx(60.0 * safe.factor)
    assert row["press_single_unit"] == "kN"


def test_what_is_not_finite_is_empty_and_says_why() -> None:
    table = rows(REPORT)
    free = next(
        r for r in REPORT.ratings.values() if any(math.isinf(s.factor) for s in r.safe_loads)
    )
    assert table[free.beam]["press_factor"] == ""
    assert table[free.beam]["press_factor_state"] == "not limited"
    blocked = next(r for r in REPORT.ratings.values() if r.reasons and not r.limit_states)
    assert table[blocked.beam]["utilisation"] == ""
    assert table[blocked.beam]["utilisation_state"] == "not known"
    assert table[blocked.beam]["press_factor_state"] == "not rated"
    assert table[blocked.beam]["reasons"] == blocked.reasons[0].text
    short = replace(first(Verdict.FALLS_SHORT), utilisation=math.inf)
    row = rows(with_rating(short))[short.beam]
    assert (row["utilisation"], row["utilisation_state"]) == ("", "no resistance")
    assert "nan" not in ratings_csv(REPORT)
    assert "inf" not in ratings_csv(REPORT).replace("reinforcement", "")


@pytest.mark.parametrize("text", ["=1+1", "+1", "-1", "@SUM(A1)", "\t=1", "\r=1", "\n=1", "＝1"])
def test_a_text_that_a_spreadsheet_would_run_is_neutralised(text: str) -> None:
    assert neutral(text).startswith("'")


def test_a_table_is_spelled_as_the_csv_module_spells_it() -> None:
    for report in (REPORT, hostile_report()):
        text = ratings_csv(report)
        again = io.StringIO()
        csv.writer(again, lineterminator="\n").writerows(csv.reader(io.StringIO(text)))
        assert text == again.getvalue()
        assert '"' in text


def test_no_cell_and_no_head_of_a_hostile_table_starts_a_formula() -> None:
    report = hostile_report()
    hostile_case = replace(report.cases[0], case="=cmd|' /C calc'!A1")
    text = ratings_csv(replace(report, cases=(hostile_case,)))
    for row in csv.reader(io.StringIO(text)):
        for cell in row:
            assert not cell.startswith(("=", "+", "@", "\t", "\r", "\n"))
            if cell.startswith("-"):
                float(cell)
    assert "'=HYPERLINK" in text
    text.encode("utf-8")


def test_a_report_without_beams_has_an_empty_table() -> None:
    empty = replace(REPORT, model=replace(REPORT.model, beams=()), ratings={})
    assert ratings_csv(empty).strip() in {"", '""'}


# tables


def test_tables_hold_what_the_ratings_hold() -> None:
    beams, ratings = REPORT.model.beams, REPORT.ratings
    assert len(ratings_frame(beams, ratings)) == len(beams)
    for frame, count in (
        (limit_states_frame(beams, ratings), sum(len(r.limit_states) for r in ratings.values())),
        (safe_loads_frame(beams, ratings), sum(len(r.safe_loads) for r in ratings.values())),
        (basis_frame(beams, ratings), sum(len(r.basis) for r in ratings.values())),
        (
            remarks_frame(beams, ratings),
            sum(len(r.remarks) + len(r.reasons) for r in ratings.values()),
        ),
        (out_of_scope_frame(REPORT.model.out_of_scope), 3),
    ):
        assert len(frame) == count
    moments = limit_states_frame(beams, ratings).query("limit_state == 'FlexureSagging'")
    assert set(moments["unit"]) == {"kN*m"}
    assert moments["resistance"].to_list() == pytest.approx([210.0] * len(moments))


# JSON


def test_json_says_what_it_is_and_in_which_units() -> None:
    data = json.loads(ratings_json(REPORT))
    assert (data["schema"], data["schema_version"]) == ("ifccheck-rating", "1.0")
    assert data["units"]["moment"] == "N*mm"
    assert data["counts"]["falls_short"] == REPORT.counts.falls_short
    assert [beam["key"] for beam in data["beams"]] == [beam.key for beam in REPORT.model.beams]
    assert data["combinations"][1]["factors"]["imposed"] == [1.5, 0.0]


def test_json_has_no_figure_that_is_not_finite() -> None:
    def refuse(text: str) -> float:
        raise AssertionError(text)

    data = json.loads(ratings_json(REPORT), parse_constant=refuse)
    hoist = data["rated_cases"][1]
    assert (hoist["factor"], hoist["factor_state"]) == (None, "not rated")
    free = [
        c for b in data["beams"] for c in b["rated_cases"] if c["factor_state"] == "not limited"
    ]
    assert free
    assert all(c["factor"] is None for c in free)


def test_json_keeps_every_figure_whole() -> None:
    data = {beam["key"]: beam for beam in json.loads(ratings_json(REPORT))["beams"]}
    for key, rating in REPORT.ratings.items():
        used = data[key]["utilisation"]
        assert used == (None if math.isnan(rating.utilisation) else rating.utilisation)
        for state, told in zip(rating.limit_states, data[key]["limit_states"], strict=True):
            assert (told["demand"], told["resistance"]) == (state.demand, state.resistance)


def test_json_is_the_same_twice_and_plain_ascii() -> None:
    assert ratings_json(made_up_report()) == ratings_json(REPORT)
    text = ratings_json(hostile_report())
    text.encode("ascii")
    assert json.loads(text)["beams"][0]["mark"] == HOSTILE[0]


@pytest.mark.parametrize("report", [REPORT, hostile_report()], ids=["made up", "hostile"])
def test_every_row_is_spelled_as_json_spells_it(report: Report) -> None:
    text = ratings_json(report)
    rows = text[text.index('"beams": [\n') + 11 : text.index('\n],\n"out_of_scope"')].split(",\n")
    assert len(rows) == len(report.model.beams)
    for row in rows:
        assert json.dumps(json.loads(row)) == row


# property sets


def sets_of(report: Report, beam: Beam) -> dict[str, dict[str, object]]:
    return {s.name: values(s) for s in result_sets(report) if s.guid == beam.guid}


def values(result: ResultSet) -> dict[str, object]:
    assert len({p.name for p in result.properties}) == len(result.properties)
    return {p.name: p.value for p in result.properties}


def test_every_beam_in_scope_has_its_result_also_one_that_is_not_rated() -> None:
    results = [s for s in result_sets(REPORT) if s.name == "BeamRating_Result"]
    assert [(s.step_id, s.guid, s.ordinal) for s in results] == [
        (b.step_id, b.guid, b.ordinal) for b in REPORT.model.beams
    ]
    for result in results:
        rating = REPORT.ratings[result.guid]
        told = values(result)
        assert told["Verdict"] == str(rating.verdict)
        assert told["Adequate"] is {"adequate": True, "falls short": False}.get(rating.verdict)
        assert told["LimitStatesNotChecked"] == "torsion, deflection, crack width"
        assert told["Standard"] == REPORT.standard_name
        assert told["Basis"] == basis_identifier(REPORT)
        assert ("Reason" in told) is bool(rating.reasons)
        assert ("Utilisation" in told) is not math.isnan(rating.utilisation)


def test_a_result_is_in_the_units_of_the_inside() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.utilisation == 1.0004)
    beam = REPORT.beam(rating.beam)
    found = sets_of(REPORT, beam)
    assert found["BeamRating_Result"]["GoverningPosition"] == pytest.approx(0.08 * beam.length)
    assert found["BeamRating_LimitStates"] == {
        "FlexureSagging": 0.88, "FlexureHogging": 0.31, "Shear": 1.0004,
    }  # fmt: skip
    safe = rating.safe_loads[0]
    assert found["BeamRating_SafeLoads"]["press safe load"] == pytest.approx(60_000 * safe.factor)
    assert found["BeamRating_Result"]["LeastRatingFactor"] == safe.factor
    assert found["BeamRating_Basis"]["ConcreteStrength"] == 30.0
    assert found["BeamRating_Basis"]["CoverSource"] == "assumed: defaults of the brief"


def test_a_case_that_never_governs_has_no_factor() -> None:
    free = next(
        r for r in REPORT.ratings.values() if r.safe_loads and math.isinf(r.safe_loads[0].factor)
    )
    found = sets_of(REPORT, REPORT.beam(free.beam))
    assert "press factor" not in found["BeamRating_SafeLoads"]
    assert found["BeamRating_SafeLoads"]["press safe load"] == "not limited"
    assert "LeastRatingFactor" not in found["BeamRating_Result"]


def test_one_case_that_is_not_rated_leaves_no_least_factor() -> None:
    rating = first(Verdict.FALLS_SHORT)
    doubtful = rating.safe_loads[1]._replace(
        factor=math.nan, single_value=math.nan, text="not rated"
    )
    changed = replace(rating, safe_loads=(rating.safe_loads[0], doubtful))
    found = sets_of(with_rating(changed), REPORT.beam(rating.beam))
    assert "LeastRatingFactor" not in found["BeamRating_Result"]
    assert found["BeamRating_SafeLoads"]["hoist safe load"] == "not rated"


def test_nothing_that_is_not_finite_is_written() -> None:
    short = replace(first(Verdict.FALLS_SHORT), utilisation=math.inf)
    report = with_rating(short)
    for result in result_sets(report):
        for value in values(result).values():
            assert not isinstance(value, float) or math.isfinite(value)
    told = sets_of(report, REPORT.beam(short.beam))["BeamRating_Result"]
    assert "Utilisation" not in told
    assert told["Adequate"] is False
    assert told["UtilisationState"] == "no resistance where some is demanded"


def test_a_long_label_is_cut_and_given_whole_beside_it() -> None:
    rating = first(Verdict.ADEQUATE)
    source = "bars " + "#4410, " * 60
    item = BasisItem("AreaSagging", "steel", 1500.0, "area", source)
    found = sets_of(with_rating(replace(rating, basis=(item, item))), REPORT.beam(rating.beam))
    basis = found["BeamRating_Basis"]
    cut = basis["AreaSaggingSource"]
    assert isinstance(cut, str)
    assert len(cut) == 255
    assert cut.endswith("…")
    assert basis["AreaSaggingSourceText"] == source
    assert basis["AreaSagging2"] == 1500.0


def test_the_basis_names_brief_standard_and_version() -> None:
    same = basis_identifier(made_up_report())
    assert same == basis_identifier(REPORT)
    for change in ({"brief_sha256": "0"}, {"standard_edition": "2019"}, {"version": "9"}):
        assert basis_identifier(replace(REPORT, **change)) != same


def test_a_measure_that_the_domain_does_not_know_is_an_error() -> None:
    rating = first(Verdict.ADEQUATE)
    odd = BasisItem("Odd", "odd", 1.0, "furlong", "nowhere")
    with pytest.raises(ValueError, match="furlong"):
        result_sets(with_rating(replace(rating, basis=(odd,))))
