"""Openings and slab flanges on beams whose section varies: what is rated there, and what is not."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from ifccheck.beam import Outline, Run, Verdict
from ifccheck.frame.flanges import VARIES
from ifccheck.frame.net_outlines import net_runs
from ifccheck.rating.results import LimitStateRating, Rating
from ifccheck.rating.shape import deep_member
from ifccheck.rating.subject import Subject
from tests.bodies_of_beams import Bodies
from tests.made_subjects import STANDARD, held, line, rated, subject
from tests.models import answers, brief, model, rate_model, rectangle
from tests.test_openings import hole, texts, weight_on, with_openings
from tests.test_openings_whole import LOADS as WHOLE_LOADS
from tests.test_openings_whole import OPENED
from tests.test_slab_flanges import made_beam, made_slab, met

LENGTH = 6000.0
LOADS = (line("floor", 2.0),)
SMALL = (100.0, 250.0, 100.0)
"""Length, lower edge and height of an opening that is small in a beam 600 deep"""


def box(low: float, high: float) -> Outline:
    return Outline((((-150.0, low), (150.0, low), (150.0, high), (-150.0, high)),))


def haunched(end: float = 1500.0, depth: float = 900.0) -> Subject:
    """Deep at the start, its soffit rising to a constant depth of 600."""
    made = subject(loads=LOADS)
    runs = (
        Run(0.0, end, box(600.0 - depth, 600.0), box(0.0, 600.0)),
        Run(end, LENGTH, box(0.0, 600.0)),
    )
    return replace(made, beam=replace(made.beam, runs=runs))


def stepped(at: float = 1500.0) -> Subject:
    made = subject(loads=LOADS)
    runs = (Run(0.0, at, box(-150.0, 600.0)), Run(at, LENGTH, box(0.0, 600.0)))
    return replace(made, beam=replace(made.beam, runs=runs))


def of(rating: Rating, name: str) -> LimitStateRating:
    return next(each for each in rating.limit_states if each.name == name)


# Openings -----------------------------------------------------------------------------------------


def test_an_opening_that_reaches_into_a_taper_is_not_read() -> None:
    opened = with_openings(haunched(), hole(1450.0, *SMALL))
    assert opened.body is None
    (reason,) = opened.reasons
    assert reason.blocking
    assert "lies where the section varies: not read yet" in reason.text


def test_a_taper_stays_whole_beside_openings() -> None:
    made = haunched()
    opened = with_openings(made, hole(3500.0, *SMALL))
    runs, _ = net_runs(made.beam.runs, opened.beam.openings)
    assert opened.runs[0] == runs[0] == made.beam.runs[0]
    assert [run.start for run in opened.runs] == [0.0, 1500.0, 3500.0, 3600.0]
    # an opening that only rounding puts beyond the end of the taper does not cut it
    grazing = net_runs(made.beam.runs, (hole(1499.95, *SMALL),))[0]
    assert grazing[0] == made.beam.runs[0]


def test_beside_a_small_opening_of_a_haunched_beam_shear_has_less_depth() -> None:
    made = haunched()
    opened = with_openings(made, hole(3500.0, *SMALL))
    assert not opened.reasons
    (_, (whole,)), (_, (cut,)) = rated(made), rated(opened)
    assert cut.verdict is whole.verdict
    for one, other in zip(whole.limit_states, cut.limit_states, strict=True):
        assert other.utilisation >= one.utilisation * (1.0 - 1e-9)


def test_the_weight_of_a_haunched_beam_is_that_of_its_whole_body() -> None:
    """Two prisms: 300 x 600 throughout, and a wedge of 300 x 300 under 1.5 m of it."""
    weight = (0.3 * 0.6 * 6.0 + 0.3 * 0.3 / 2.0 * 1.5) * 24e3
    assert weight_on(haunched()) == pytest.approx(weight)
    opened = with_openings(haunched(), hole(3500.0, *SMALL))
    assert weight_on(opened) == pytest.approx(weight)


@pytest.mark.parametrize("made", [haunched(), stepped()], ids=["taper", "step"])
@pytest.mark.parametrize("beyond", [590.0, 610.0])
def test_nothing_is_small_within_one_depth_of_a_change_of_the_section(
    made: Subject, beyond: float
) -> None:
    opened = with_openings(made, hole(1500.0 + beyond, *SMALL))
    near = "within one depth of where the section changes (1.50 m)" in texts(opened)
    assert near == (beyond < 600.0)
    assert opened.body is not None
    assert near == any(math.isnan(loss.height) for loss in opened.body.losses)


def test_shear_that_is_not_rated_beside_a_taper_is_said_to_be_so() -> None:
    opened = with_openings(haunched(), hole(1520.0, *SMALL))
    rating = rated(opened)[1][0]
    assert rating.verdict is Verdict.NOT_RATED
    assert "an opening, recess or notch" in of(rating, "Shear").why_not


@pytest.mark.parametrize("start", [100.0, 400.0, 5700.0])
def test_an_opening_at_a_support_of_a_varying_beam_is_not_rated(start: float) -> None:
    """The critical section for shear is not known there."""
    for made in (stepped(2500.0), haunched(50.0, 620.0)):
        rating = rated(with_openings(made, hole(start, *SMALL)))[1][0]
        assert rating.verdict is Verdict.NOT_RATED


# Slab flanges -------------------------------------------------------------------------------------


@pytest.mark.parametrize("made", [haunched(), stepped()], ids=["taper", "step"])
def test_no_slab_counts_along_a_beam_whose_section_varies(made: Subject) -> None:
    found = met(made_slab(), beam=made_beam(runs=made.beam.runs))
    assert not found.flanges
    assert found.doubts == (f"S-1 (IfcSlab): {VARIES}",)


def test_slab_on_top_makes_a_beam_a_deep_member() -> None:
    """Its clear span is 2.1 times its own depth, and less than twice that with the slab."""
    spans = held(subject(length=1260.0), faces=(0.0, 1260.0)).spans
    bare, topped = (Run(0.0, 1260.0, box(0.0, high)) for high in (600.0, 700.0))
    assert not list(deep_member([bare], spans, STANDARD))
    (reason,) = deep_member([topped], spans, STANDARD)
    assert reason.text.startswith("deep member")


# Whole runs ---------------------------------------------------------------------------------------


def tapered(bodies: Bodies) -> list[Any]:
    return [bodies.tapered(rectangle(300, 600), rectangle(300, 750), OPENED.length)]


def test_an_opening_in_a_tapered_body_is_not_rated_and_says_why(tmp_path: Path) -> None:
    beam = replace(OPENED, body=tapered)
    answer = answers(rate_model(tmp_path, model(beam), brief(*WHOLE_LOADS)))["O-1"]
    assert answer["verdict"] == "not rated"
    assert len(answer["openings"]) == 1
    assert any("lies where the section varies: not read yet" in each for each in answer["reasons"])


def test_a_tapered_body_without_its_opening_is_rated(tmp_path: Path) -> None:
    beam = replace(OPENED, openings=(), body=tapered)
    answer = answers(rate_model(tmp_path, model(beam), brief(*WHOLE_LOADS)))["O-1"]
    assert answer["verdict"] == "adequate"
