"""Beams carried by beams, through the whole program: reactions passed on by hand, equilibrium, and
all that must keep a beam from being called adequate."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest

from ifccheck.beam import Verdict
from ifccheck.demand.path import LoadPath
from ifccheck.pipeline import Run
from ifccheck.subjects import gathering
from tests.models import MadeBeam, MadeColumn, load
from tests.rated_frames import (
    COMPLETE,
    STRONG,
    UNLOADED,
    doubts,
    envelope,
    girder_on_columns,
    line_on_columns,
    lying,
    passed,
    rated_frame,
    reactions,
    reasons,
    sheets_of,
    uniform,
    verdicts,
)


@pytest.fixture
def caught(monkeypatch: pytest.MonkeyPatch) -> list[LoadPath]:
    """The load path of every model that is rated."""
    found: list[LoadPath] = []
    solve: Callable[..., Any] = gathering.with_reactions

    def keep(*given: Any) -> Any:
        framing = solve(*given)
        found.append(framing.path)
        return framing

    monkeypatch.setattr(gathering, "with_reactions", keep)
    return found


# --- the way of loads ----------------------------------------------------------------------------


def test_secondary_beams_load_their_girder_by_their_reactions(tmp_path: Path) -> None:
    """Each spans 5.85 m from the girder's axis to the middle of its column, under a load over all
    its span: R = w 5.85 / 2; its weight is counted so too."""
    beams, columns = girder_on_columns()
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 10.0, "S*"),
                      uniform("press", 20.0, "S2"))  # fmt: skip
    found = sheets_of(run)
    for case, intensity, marks in (
        ("floor", 10.0, ("S1", "S2")),
        ("press", 20.0, ("S2",)),
        ("self", 0.3 * 0.6 * 24.0, ("S1", "S2")),
    ):
        rested = {each.origin: each for each in passed(found["G"], case)}
        assert set(rested) == {f"reaction of {mark} (IfcBeam)" for mark in marks}
        for mark in marks:
            each = rested[f"reaction of {mark} (IfcBeam)"]
            at_girder = 0 if mark == "S1" else 1
            told = reactions(found[mark], case)[at_girder]
            assert told == pytest.approx(intensity * 5.85 / 2.0, rel=1e-9)
            assert each.values[0] / 1e3 == pytest.approx(told, rel=1e-9)
            assert each.start == pytest.approx({"S1": 3000.0, "S2": 5000.0}[mark], abs=1e-6)
    by_hand = 10.0 * 5.85 / 2.0
    left = by_hand * ((7.85 - 3.0) + (7.85 - 5.0)) / 7.7
    assert reactions(found["G"], "floor") == pytest.approx((left, 2.0 * by_hand - left), rel=1e-9)


def test_a_rated_case_on_a_secondary_beam_limits_the_girder_too(tmp_path: Path) -> None:
    beams, columns = girder_on_columns()
    weak = {**STRONG, "BottomBars": "2-15M"}
    beams[0] = lying("G", (0.0, 0.0, 0.0), 8000.0, depth=900.0, notation=weak)
    entries = uniform("floor", 1.0), uniform("press", 5.0, "S1")
    run = rated_frame(tmp_path, beams, columns, *entries)
    found = sheets_of(run)
    factors = {
        mark: {each.case: each.factor for each in sheet.rating.safe_loads}
        for mark, sheet in found.items()
    }
    (case,) = run.reports[0].cases
    assert factors["G"]["press"] < factors["S1"]["press"]
    assert case.factor == factors["G"]["press"]
    assert case.beams_reached == 2
    assert case.governing_beam == found["G"].beam.key


def test_both_beams_that_meet_on_a_girder_are_settled_there(tmp_path: Path) -> None:
    """Two spans of 5.85 m over the girder: 1.25 wL comes down in the middle, by hand."""
    beams = [
        lying("G", (0.0, 0.0, 0.0), 8000.0, depth=900.0),
        lying("S1", (4000.0, -6000.0, 900.0), 6000.0, 90.0),
        lying("S2", (4000.0, 0.0, 900.0), 6000.0, 90.0),
    ]
    columns = [MadeColumn(150.0), MadeColumn(7850.0)]
    columns += [MadeColumn(4000.0, y, z=(-3000.0, 900.0)) for y in (-5850.0, 5850.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 10.0))
    assert set(verdicts(run).values()) == {Verdict.ADEQUATE}
    total = sum(each.values[0] for each in passed(sheets_of(run)["G"], "floor"))
    assert total / 1e3 == pytest.approx(1.25 * 10.0 * 5.85, rel=1e-9)
    run = rated_frame(tmp_path / "half", beams, columns, uniform("floor", 10.0, "S1"),
                      uniform("floor", 10.0, "G"))  # fmt: skip
    assert "not all that acts on S2 is known" in reasons(run, "G")


def tower() -> tuple[list[MadeBeam], list[MadeColumn]]:
    """Three tiers: K along x on columns; M on top of it and of a column, hanging over by 1.5 m; T
    on M's overhang and on a column; a line of three beside, on columns."""
    beams = [
        lying("K", (0.0, 0.0, 0.0), 8000.0, depth=900.0),
        lying("M", (4000.0, -1500.0, 900.0), 7500.0, 90.0),
        lying("T", (4000.0, -1200.0, 1500.0), 6000.0),
    ]
    columns = [
        MadeColumn(150.0), MadeColumn(7850.0), MadeColumn(4000.0, 5850.0, z=(-3000.0, 900.0)),
        MadeColumn(9850.0, -1200.0, z=(-3000.0, 1500.0)),
    ]  # fmt: skip
    of_line, under = line_on_columns([5000.0, 7000.0, 6000.0], cut=True, overhangs=(1900.0, 0.0))
    beams += [
        lying(each.mark, (each.origin[0], 9000.0, 0.0), each.length, notation=STRONG)
        for each in of_line
    ]
    return beams, columns + [MadeColumn(each.x, 9000.0) for each in under]


def test_all_that_acts_comes_down_to_the_ground(tmp_path: Path, caught: list[LoadPath]) -> None:
    beams, columns = tower()
    run = rated_frame(
        tmp_path, beams, columns, uniform("floor", 10.0),
        load("press", 'point = "30 kN"', 'at = "0.5 m"'),
        load("floor", 'moment = "20 kN*m"', 'at = "2 m"', beams="T"),
    )  # fmt: skip
    (path,) = caught
    lengths = math.fsum(beam.length for beam in beams) / 1e3
    weight = 24.0 * 0.3 * math.fsum(b.length * max(z for _, z in b.outline) for b in beams) / 1e6
    wanted = {"floor": 10.0 * lengths, "press": 30.0 * len(beams), "self": weight}
    applied = dict.fromkeys(wanted, 0.0)
    ground = dict(applied)
    for each in path.balance:
        assert abs(each.difference) <= 1e-9 * max(abs(each.applied) + abs(each.received), 1.0)
        applied[each.case] += each.applied / 1e3
        ground[each.case] += each.ground / 1e3
    assert applied == pytest.approx(wanted, rel=1e-9)
    assert ground == pytest.approx(wanted, rel=1e-9)
    assert math.fsum(each.received for each in path.balance) == pytest.approx(
        math.fsum(each.passed_on for each in path.balance), rel=1e-9
    )
    assert [reasons(run, mark) for mark in verdicts(run)] == [""] * len(beams)


# --- doubts --------------------------------------------------------------------------------------


def test_a_beam_without_load_keeps_its_girder_from_being_adequate(tmp_path: Path) -> None:
    beams, columns = girder_on_columns()
    entries = uniform("floor", 10.0, "G"), uniform("floor", 10.0, "S1")
    run = rated_frame(tmp_path, beams, columns, *entries)
    assert verdicts(run)["S1"] is Verdict.ADEQUATE
    assert verdicts(run)["G"] is Verdict.NOT_RATED
    assert "not all that acts on S2 is known" in reasons(run, "G")
    run = rated_frame(tmp_path / "meant", beams, columns, *entries, UNLOADED.format("S2"))
    assert verdicts(run)["G"] is Verdict.ADEQUATE


@pytest.mark.parametrize("stated", [(), (COMPLETE.format("T1"),)])
def test_a_beam_without_load_keeps_its_line_from_being_adequate(
    tmp_path: Path, stated: Sequence[str]
) -> None:
    """What acts on T2 bends T1; that all on T1 itself is given says nothing of that."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 10.0, "T1"), *stated)
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert "not all that acts on T2 is known" in reasons(run, "T1")
    apart = '\n[frame]\ncontinuity = "never"\n'
    run = rated_frame(tmp_path / "apart", beams, columns, uniform("floor", 10.0, "T1"),
                      frame=apart)  # fmt: skip
    assert verdicts(run)["T1"] is Verdict.ADEQUATE


def test_a_load_that_may_lift_by_a_slip_keeps_the_girder_from_being_adequate(
    tmp_path: Path,
) -> None:
    beams, columns = girder_on_columns()
    entries = uniform("floor", 5.0, "G"), uniform("floor", 5.0, "S1"), uniform("floor", -1.0, "S2")
    run = rated_frame(tmp_path, beams, columns, *entries)
    assert verdicts(run)["G"] is Verdict.NOT_RATED
    assert "not all that acts on S2 is known" in reasons(run, "G")


def test_weight_alone_from_above_is_no_load_assigned_for_what_carries_it(tmp_path: Path) -> None:
    """T is meant to carry nothing, of M nobody says so: what M gives K is not known."""
    beams, columns = tower()
    three, under = beams[:3], columns[:4]
    entries = uniform("floor", 10.0, "K"), UNLOADED.format("T")
    run = rated_frame(tmp_path, three, under, *entries)
    assert "no load assigned" in reasons(run, "M")
    assert verdicts(run)["K"] is Verdict.NOT_RATED
    assert "not all that acts on M is known" in reasons(run, "K")


def test_what_rests_on_a_secondary_beam_keeps_what_carries_that_from_being_adequate(
    tmp_path: Path,
) -> None:
    """A column stands on S1: what it brings is unknown, on S1 and on G."""
    beams, columns = girder_on_columns()
    post = MadeColumn(3000.0, 3000.0, z=(900.0, 3900.0))
    run = rated_frame(tmp_path, beams, [*columns, post], uniform("floor", 5.0))
    assert verdicts(run)["S1"] is verdicts(run)["G"] is Verdict.NOT_RATED
    assert "not all that acts on S1 is known" in reasons(run, "G")
    assert verdicts(run)["S2"] is Verdict.ADEQUATE


def test_beams_that_carry_each_other_in_a_ring_are_not_adequate(tmp_path: Path) -> None:
    """Four beams in a square, each ending at the side of the next, and no column."""
    beams = [
        lying("A", (150.0, 0.0, 0.0), 4000.0),
        lying("B", (4000.0, 150.0, 0.0), 4000.0, 90.0),
        lying("C", (3850.0, 4000.0, 0.0), 4000.0, 180.0),
        lying("D", (0.0, 3850.0, 0.0), 4000.0, 270.0),
    ]
    columns = [MadeColumn(20000.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert all("supports unknown" in reasons(run, mark) for mark in "ABCD")


def test_a_stated_span_of_one_beam_in_a_line_refuses_the_line(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0] * 3, cut=True)
    stated = '[[beams]]\nbeams = ["T1"]\nspan = "5.8 m"\n'
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 10.0), stated)
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert "the span of T1, in one line with it, is stated" in reasons(run, "T3")


def test_stated_span_and_bearing_overrule_the_model(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0])
    entry = uniform("floor", 10.0)
    stated = '[[beams]]\nbeams = ["ONE"]\nspan = "5.5 m"\n'
    sheet = sheets_of(rated_frame(tmp_path, beams, columns, entry, stated))["ONE"]
    (span,) = sheet.spans
    assert span.length == pytest.approx(5500.0)
    bearing = '[[supports]]\nbeams = ["ONE"]\nbearing = ["200 mm", "250 mm"]\n'
    sheet = sheets_of(rated_frame(tmp_path / "borne", beams, columns, entry, bearing))["ONE"]
    (span,) = sheet.spans
    assert span.faces == pytest.approx((200.0, 6300.0 - 250.0))
    assert (span.span.start, span.span.end) == pytest.approx((100.0, 6300.0 - 125.0))


@pytest.mark.parametrize("spans", [[6000.0, 1400.0], [1400.0, 6000.0]])
def test_the_shortest_clear_span_makes_a_deep_member(tmp_path: Path, spans: list[float]) -> None:
    """1.4 m between the middles of columns of 0.3 m, 0.6 m deep: 1.1 / 0.6 < 2."""
    beams, columns = line_on_columns(spans)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert verdicts(run)["ONE"] is Verdict.NOT_RATED
    assert "deep member: its clear span of 1.10 m" in reasons(run, "ONE")


# --- rated cases in lines ------------------------------------------------------------------------


def test_a_rated_case_limits_the_beams_that_it_bends_through_the_line(tmp_path: Path) -> None:
    """Nothing of it stands on T1, which is weak over the middle column."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    weak = {**STRONG, "TopBars": "2-15M"}
    beams[0] = lying("T1", beams[0].origin, beams[0].length, notation=weak)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 2.0), uniform("press", 5.0, "T2"))
    factors = {
        mark: each.factor
        for mark, sheet in sheets_of(run).items()
        for each in sheet.rating.safe_loads
    }
    (case,) = run.reports[0].cases
    assert factors["T1"] < factors["T2"]
    assert case.factor == factors["T1"]
    assert case.beams_reached == 2


def test_shares_of_cases_add_up_where_some_act_through_the_line_alone(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0, 5000.0, 7000.0], cut=True)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 2.0), uniform("press", 5.0, "T2"))
    for sheet in sheets_of(run).values():
        for check in sheet.checks:
            if check.shares and check.title.startswith(("flexure", "Flexure")):
                state = next(s for s in sheet.rating.limit_states if s.title == check.title)
                total = sum(each.factor * each.moment for each in check.shares if each.moment)
                assert abs(total) == pytest.approx(state.demand, rel=1e-9)


# --- uplift --------------------------------------------------------------------------------------


def lifted(run: Run, mark: str) -> list[str]:
    return [text for text in doubts(run, mark) if "is lifted by" in text]


def test_an_overhang_that_lifts_the_far_support_is_told(tmp_path: Path) -> None:
    """Over 4 m and an overhang of 3 m: 1.5 x 40 x 3^2 / 2 / 4 lifts, 0.9 x weight holds."""
    beams, columns = line_on_columns([4000.0], overhangs=(0.0, 3000.0))
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 40.0))
    (text,) = lifted(run, "ONE")
    assert text.startswith("its start is lifted by up to")
    weight = 0.3 * 0.6 * 24.0
    holds = weight * (4.0**2 - 3.0**2) / 2.0 / 4.0 + weight * 0.15
    wanted = 1.5 * 40.0 * 3.0**2 / 2.0 / 4.0 - 0.9 * holds
    assert f"{wanted:.1f} kN" in text


@pytest.mark.parametrize("cut", [False, True])
def test_an_inner_support_that_is_lifted_is_told(tmp_path: Path, cut: bool) -> None:
    """A short span between two long ones under patterned load is lifted at neither of its supports
    by its own side alone, but by both together: two spans of 2 m, of which an end lifts."""
    beams, columns = line_on_columns([1500.0, 1500.0, 8000.0], cut=cut)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 30.0))
    texts = lifted(run, "T1" if cut else "ONE")
    where = "its end" if cut else "its support at x = 1.65 m"
    assert any(text.startswith(where) for text in texts), texts
    if cut:
        told = next(text for text in texts if text.startswith(where))
        other = [text.replace("its start", where) for text in lifted(run, "T2")]
        assert told in other


def test_an_inner_support_that_both_sides_press_is_not_told(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 10.0))
    assert not lifted(run, "T1")
    assert not lifted(run, "T2")
    x, low, _ = envelope(sheets_of(run)["T1"], "shear force")
    assert low[-1] < 0.0
    assert x.size


def test_a_beam_that_goes_on_into_one_that_does_not_stand_is_not_adequate(tmp_path: Path) -> None:
    """T2's other end lies on a beam in the air: it may lean on T1 for all that is known."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    air = lying("AIR", (12000.0, -1000.0, -400.0), 2000.0, 90.0, depth=400.0)
    entries = uniform("floor", 10.0), COMPLETE.format("T1")
    run = rated_frame(tmp_path, [*beams, air], columns[:2], *entries)
    assert "supports unknown" in reasons(run, "T2")
    assert verdicts(run)["T1"] is Verdict.NOT_RATED
    assert "it goes on into T2" in reasons(run, "T1")


def test_what_the_brief_ignores_holds_no_beam_of_a_frame(tmp_path: Path) -> None:
    """A pad that is left out of scope lies under B at midspan: once the brief says that it
    does not hold it, B spans its 7.7 m from column to column."""
    beams = [
        lying("B", (0.0, 0.0, 0.0), 8000.0),
        lying("insulation pad", (4000.0, -500.0, -300.0), 1000.0, 90.0, depth=300.0),
    ]
    columns = [MadeColumn(150.0), MadeColumn(7850.0)]
    ignore = '[[supports]]\nbeams = ["B"]\nignore = ["insulation pad"]\n'
    entry = uniform("floor", 2.0, "B")
    run = rated_frame(tmp_path, beams, columns, entry, ignore, COMPLETE.format("B"))
    (span,) = sheets_of(run)["B"].spans
    assert span.length == pytest.approx(7700.0)


def test_a_member_that_is_ignored_holds_the_beam_nowhere(tmp_path: Path) -> None:
    """A block 2 m long lies under the start of B and on beyond it: ignored, it is no support at
    the start either, and B hangs on one column."""
    long = MadeColumn(1000.0, size=2000.0)
    ignore = f'[[supports]]\nbeams = ["B"]\nignore = ["{long.name}"]\n'
    run = rated_frame(
        tmp_path, [lying("B", (0.0, 0.0, 0.0), 8000.0)], [long, MadeColumn(7850.0)],
        uniform("floor", 2.0), ignore,
    )  # fmt: skip
    assert "supports unknown" in reasons(run, "B")
