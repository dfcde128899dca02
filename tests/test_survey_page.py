"""The page of a survey: complete, self-contained, inert whatever the names are."""

from __future__ import annotations

import base64
import hashlib
import re
from dataclasses import replace

import pytest

from ifccheck.beam import Remark
from ifccheck.findings import Finding, State, Survey
from ifccheck.publish.survey_html import render_survey
from ifccheck.publish.survey_sheet import survey_sheet_html
from ifccheck.publish.survey_words import gist, told_of
from ifccheck.publish.words import CAUTIONS_OF_A_SURVEY, plain
from tests.html_seen import Seen, sheets_in
from tests.reports_made_up import HOSTILE
from tests.surveys_made_up import hostile_survey, made_up_survey, survey_of

SURVEY = made_up_survey()
PAGE = render_survey(SURVEY)
SEEN = Seen(PAGE)


def test_elements_are_balanced() -> None:
    assert (SEEN.unbalanced, SEEN.open) == ([], [])
    for sheet in sheets_in(SEEN):
        assert Seen(sheet).unbalanced == []


def test_the_same_survey_gives_the_same_file() -> None:
    assert render_survey(made_up_survey()) == PAGE


def test_the_policy_names_the_very_script_and_style_in_the_file() -> None:
    policy = next(a["content"] for t, a in SEEN.elements if a.get("http-equiv"))
    assert policy
    assert policy.startswith("default-src 'none'")
    (script,) = [text for kind, text in SEEN.scripts if kind is None]
    (style,) = SEEN.styles
    for name, text in (("script-src", script), ("style-src", style)):
        digest = base64.b64encode(hashlib.sha256(text.encode()).digest()).decode()
        assert f"{name} 'sha256-{digest}'" in policy


@pytest.mark.parametrize("survey", [SURVEY, hostile_survey()], ids=["plain", "hostile"])
def test_nothing_in_it_asks_the_network_or_runs(survey: Survey) -> None:
    page = Seen(render_survey(survey))
    for seen in (page, *map(Seen, sheets_in(page))):
        for tag, attributes in seen.elements:
            assert tag not in {"img", "iframe", "object", "embed", "link", "base", "audio", "video"}
            assert not any(name.startswith("on") or name == "style" for name in attributes)
            for name in ("href", "src", "action", "xlink:href"):
                assert (attributes.get(name) or "#").startswith("#")
    assert len([kind for kind, _ in page.scripts if kind is None]) == 1
    assert "http:" not in PAGE
    assert "https:" not in PAGE


def test_hostile_names_and_findings_are_shown_as_text() -> None:
    seen = Seen(render_survey(hostile_survey()))
    for name in HOSTILE:
        assert re.sub(r"\s+", " ", plain(name)) in seen.text
    shown = seen.text + "".join(sheets_in(seen))
    assert not re.search(
        "[\x00-\x08\x0b\x0c\x0e-\x1d\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]", shown
    )
    render_survey(hostile_survey()).encode("utf-8")


def test_every_beam_has_a_row_and_a_sheet() -> None:
    keys = [a["data-key"] for t, a in SEEN.elements if t == "tr" and "data-key" in a]
    assert sorted(map(str, keys)) == sorted(beam.key for beam in SURVEY.model.beams)
    sheets = sheets_in(SEEN)
    assert len(sheets) == len(keys)
    for key, sheet in zip(keys, sheets, strict=True):
        assert f"<bdi>{key}</bdi>" in sheet


def test_incomplete_beams_come_first_and_states_are_counted() -> None:
    states = [a["data-v"] for t, a in SEEN.elements if t == "tr" and "data-key" in a]
    order = [str(state) for state in State]
    assert states == sorted(states, key=lambda state: order.index(str(state)))
    for state in State:
        assert states.count(str(state)) == SURVEY.count(state) > 0
        assert re.search(rf"{SURVEY.count(state)} {state}", SEEN.text)


def test_every_beam_stands_in_a_plan_with_what_was_read_of_it() -> None:
    drawn = {a["data-row"] for t, a in SEEN.elements if t == "a" and a.get("tabindex") == "-1"}
    placed = [beam for beam in SURVEY.model.beams if beam.axis]
    assert len(drawn) == len(placed)
    titles = re.findall(r"<title>([^<]*)</title>", PAGE)[1:]
    assert len(titles) == len(placed)
    for title in titles:
        assert re.search(r": .*; concrete 30 MPa; steel from (bars, properties|properties|none); ",
                         title)  # fmt: skip
    assert any("missing: no reinforcement found" in title for title in titles)
    assert any("doubt: the start is cut obliquely" in title for title in titles)


def test_what_is_missing_is_listed_with_its_beams_and_what_settles_it() -> None:
    section = PAGE[PAGE.index('<section id="missing">') : PAGE.index('<section id="doubtful">')]
    lacking = [b for b in SURVEY.model.beams if SURVEY.of(b).lacks]
    assert section.count("data-row=") == 2 * len(lacking)
    text = Seen(section).text
    assert "no reinforcement found settled by a schedule, a mapping" in text
    assert f"{len(lacking)} " in text
    assert "defaults.concrete_strength in the brief" in text


def test_doubts_that_differ_by_numbers_alone_are_one() -> None:
    section = PAGE[PAGE.index('<section id="doubtful">') : PAGE.index('<section id="to-state">')]
    assert section.count("<tr><th scope") == 2
    assert gist("bars #1, #2: ends in a bend") == "ends in a bend"
    assert gist("material name 'B35': a doubt") == "material name 'B35': a doubt"
    told = told_of([("a", "cut over 3 mm"), ("b", "cut over 12.5 mm"), ("c", "other")])
    assert [(each.shown, each.beams) for each in told] == [
        ("e.g. cut over 3 mm", ("a", "b")), ("other", ("c",)),
    ]  # fmt: skip


def test_a_sheet_shows_what_each_source_says_and_what_could_not_be_read() -> None:
    beam = next(b for b in SURVEY.model.beams if len(b.reinforcement) == 2 and b.axis)
    sheet = Seen(survey_sheet_html(beam, SURVEY.of(beam), "foot"))
    assert "Reinforcement by bars, as drawn" in sheet.text
    assert "Reinforcement by properties" in sheet.text
    assert "bottom 3-25M; stirrups 2 legs 10M @ 250 mm; cover 40 mm" in sheet.text
    assert "Set.BottomBars" in sheet.text
    assert "not read property Set.TopBars 'many' cannot be read" in sheet.text
    assert "material name 'Concrete C30/37'" in sheet.text
    kinds = {a.get("class") for t, a in sheet.elements if t in {"path", "circle"}}
    assert {"concrete", "bar", "stirrup", "steel"} <= kinds


def test_a_sheet_tells_what_is_missing_what_to_state_and_what_is_unmet() -> None:
    beam = next(b for b in SURVEY.model.beams if SURVEY.of(b).lacks)
    text = Seen(survey_sheet_html(beam, SURVEY.of(beam), "foot")).text
    assert text.index("Missing for a rating") < text.index("Doubtful in what was read")
    assert "supports unknown: its end touches no member" in text
    assert "write an entry of [[supports]] that names them" in text
    assert "No source speaks of its reinforcement." in text
    assert "BeamRating_Reinforcement.TopBars is not given" in text


def test_a_beam_whose_body_was_not_read_says_so() -> None:
    beam = replace(SURVEY.model.beams[0], axis=None, runs=())
    text = Seen(survey_sheet_html(beam, Finding(lacks=("body is odd: not read",)), "foot")).text
    assert "The body was not read: there is nothing to draw." in text
    page = Seen(render_survey(survey_of(replace(SURVEY.model, beams=(beam,), members=()), {})))
    assert f"Place not read, not drawn: {beam.mark}" in page.text


def test_out_of_scope_doubts_of_the_model_and_cautions_are_there() -> None:
    doubt = Remark(None, "reading", "2 beams share the GlobalId X", "doubt")
    note = Remark(None, "reading", "a signature section", "note")
    model = replace(SURVEY.model, remarks=(doubt, note))
    seen = Seen(render_survey(replace(SURVEY, model=model)))
    for member in model.out_of_scope:
        assert member.evidence in seen.text
    assert "Doubts about the model as a whole 2 beams share the GlobalId X" in seen.text
    assert "note a signature section" in seen.text
    for caution in CAUTIONS_OF_A_SURVEY:
        assert caution in seen.text


def test_a_model_without_a_concrete_beam_has_a_short_page() -> None:
    seen = Seen(render_survey(survey_of(replace(SURVEY.model, beams=()), {})))
    assert seen.unbalanced == []
    assert "There is no concrete beam in this model." in seen.text
    assert "0 of 0" not in seen.text
    assert "What was read, storey by storey" not in seen.text


def test_a_brief_is_named() -> None:
    seen = Seen(render_survey(replace(SURVEY, brief_name="press.toml", brief_sha256="ab" * 32)))
    assert "brief press.toml" in seen.text
    assert "Loads, and how the beams stand" not in seen.text
    assert "Loads, and how the beams stand" in SEEN.text
