"""What must not change how beams in frames are rated, and what their rating factors mean."""

from __future__ import annotations

import math
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest

from ifccheck.beam import Verdict
from ifccheck.pipeline import Run
from tests.models import BEARINGS, MadeBeam, MadeColumn, Setting, brief, model, rate_model, shuffled
from tests.rated_frames import FRAME, line_on_columns, lying, rated_frame, sheets_of, uniform

Numbers = dict[str, tuple[str, dict[str, float], dict[str, float]]]


def building() -> tuple[list[MadeBeam], list[MadeColumn]]:
    """A girder that carries two beams from both sides, and a line of three with an overhang."""
    beams = [
        lying("G", (0.0, 0.0, 0.0), 8000.0, depth=900.0),
        lying("S1", (3000.0, 150.0, 300.0), 5850.0, 90.0),
        lying("S2", (5000.0, -6000.0, 300.0), 5850.0, 90.0),
    ]
    columns = [MadeColumn(150.0), MadeColumn(7850.0)]
    columns += [
        MadeColumn(x, y, z=(-3000.0, 300.0)) for x, y in ((3000.0, 5850.0), (5000.0, -5850.0))
    ]
    of_line, under = line_on_columns([5000.0, 7000.0, 6000.0], cut=True, overhangs=(1900.0, 0.0))
    beams += [lying(each.mark, (each.origin[0], 9000.0, 0.0), each.length) for each in of_line]
    return beams, columns + [MadeColumn(each.x, 9000.0) for each in under]


ENTRIES = (uniform("floor", 10.0), uniform("press", 4.0, "S1"), uniform("press", 6.0, "T2"))


def numbers(run: Run) -> Numbers:
    """Verdict, utilisations and rating factors of every beam."""
    return {
        mark: (
            sheet.rating.verdict.name,
            {each.name: each.utilisation for each in sheet.rating.limit_states},
            {each.case: each.factor for each in sheet.rating.safe_loads},
        )
        for mark, sheet in sheets_of(run).items()
    }


def assert_same(one: Numbers, other: Numbers, rel: float = 1e-6) -> None:
    assert one.keys() == other.keys()
    for mark, (verdict, states, factors) in one.items():
        assert other[mark][0] == verdict
        assert other[mark][1] == pytest.approx(states, rel=rel, abs=1e-9), mark
        assert other[mark][2] == pytest.approx(factors, rel=rel), mark


@cache
def plain() -> Numbers:
    with TemporaryDirectory() as folder:
        found = numbers(rated_frame(Path(folder), *building(), *ENTRIES))
    assert {verdict for verdict, *_ in found.values()} == {"ADEQUATE"}
    assert sum(len(factors) for *_, factors in found.values()) == 5
    return found


@pytest.mark.parametrize(
    "setting",
    [
        Setting(angle=37.0),
        Setting(angle=-113.0, turned_by="building"),
        Setting(mirrored=True),
        Setting(from_end=True),
        Setting(unit="inch", schema="IFC2X3"),
        Setting(unit="foot", mirrored=True, angle=20.0, schema="IFC4X3"),
    ],
    ids=str,
)
def test_turning_mirroring_and_units_change_no_rating(tmp_path: Path, setting: Setting) -> None:
    run = rated_frame(tmp_path, *building(), *ENTRIES, setting=setting)
    assert_same(numbers(run), plain())


def test_moving_and_the_order_of_entities_change_no_rating(tmp_path: Path) -> None:
    beams, columns = building()
    moved = [
        lying(each.mark, (each.origin[0] + 123456.0, each.origin[1] - 98765.0, each.origin[2]),
              each.length, each.direction, max(z for _, z in each.outline))
        for each in beams
    ]  # fmt: skip
    under = [MadeColumn(each.x + 123456.0, each.y - 98765.0, z=each.z) for each in columns]
    assert_same(numbers(rated_frame(tmp_path, moved, under, *ENTRIES)), plain())
    data = shuffled(model(*beams, columns=columns), 7)
    text = brief(FRAME, *ENTRIES).replace('supports = ["pinned", "pinned"]\n', "")
    assert_same(numbers(rate_model(tmp_path / "order", data, text)), plain())


@pytest.mark.parametrize("spans", [[6000.0, 6000.0], [5000.0, 7000.0, 6000.0]])
def test_cutting_a_beam_at_its_supports_changes_no_rating(
    tmp_path: Path, spans: list[float]
) -> None:
    """The parts together: the worst of each limit state, and the least factor."""
    entries = uniform("floor", 10.0), uniform("press", 5.0)
    one, parts = (
        numbers(rated_frame(tmp_path / str(cut), *line_on_columns(spans, cut=cut), *entries))
        for cut in (False, True)
    )
    assert {verdict for verdict, *_ in parts.values()} == {one["ONE"][0]} == {"ADEQUATE"}
    for name, utilisation in one["ONE"][1].items():
        worst = max(states[name] for _, states, _ in parts.values())
        assert worst == pytest.approx(utilisation, rel=1e-6, abs=1e-9), name
    least = min(factors["press"] for *_, factors in parts.values())
    assert least == pytest.approx(one["ONE"][2]["press"], rel=1e-6)


def test_a_beam_on_two_columns_is_rated_as_with_stated_supports(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0])
    entries = uniform("floor", 10.0), uniform("press", 5.0)
    shown = numbers(rated_frame(tmp_path / "shown", beams, columns, *entries))
    data = model(*beams, columns=columns)
    stated = numbers(rate_model(tmp_path / "stated", data, brief(BEARINGS, *entries)))
    assert_same(shown, stated)


@pytest.mark.parametrize("cut", [False, True])
@pytest.mark.parametrize("whole", [False, True])
def test_a_case_at_its_rating_factor_just_uses_all(tmp_path: Path, cut: bool, whole: bool) -> None:
    """Of every beam of a line with an overhang under patterns: no more than 1 just below the
    factor, more than 1 just above it."""
    beams, columns = line_on_columns([5000.0, 7000.0, 6000.0], cut=cut, overhangs=(1900.0, 0.0))
    press = 5.0

    def rated(name: str, times: float) -> Run:
        entries = uniform("floor", 10.0), uniform("press", press * times)
        return rated_frame(tmp_path / name, beams, columns, *entries, whole=whole)

    run = rated("as it is", 1.0)
    (case,) = run.reports[0].cases
    assert math.isfinite(case.factor)
    assert case.factor > 1.0
    below = [sheet.rating for sheet in sheets_of(rated("below", case.factor * (1 - 1e-6))).values()]
    above = [sheet.rating for sheet in sheets_of(rated("above", case.factor * (1 + 1e-4))).values()]
    assert all(each.verdict is Verdict.ADEQUATE for each in below)
    assert any(each.verdict is Verdict.FALLS_SHORT for each in above)
    assert all(each.utilisation > 1.0 for each in above if each.verdict is Verdict.FALLS_SHORT)


def test_patterns_ask_for_more_than_full_load(tmp_path: Path) -> None:
    beams, columns = line_on_columns([6000.0, 6000.0, 6000.0])
    whole, by_spans = (
        numbers(rated_frame(tmp_path / str(whole), beams, columns, uniform("floor", 20.0),
                            whole=whole))["ONE"][1]
        for whole in (True, False)
    )  # fmt: skip
    assert by_spans["FlexureSagging"] > 1.1 * whole["FlexureSagging"]
    assert by_spans["FlexureHogging"] > 1.05 * whole["FlexureHogging"]
    assert all(by_spans[name] >= whole[name] - 1e-9 for name in whole)
