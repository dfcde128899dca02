"""Trains along lines of several spans, and on beams that rest on others, through the program."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np
import pytest

from ifccheck import pipeline
from ifccheck.errors import BriefError
from ifccheck.publish.equilibrium import equilibrium_words
from ifccheck.publish.report import Report
from ifccheck.rating.results import Rating
from tests.step_halls import Beam, Block, brief, hall, write

CASES = """[cases.hoist]
nature = "crane"
rated = true
[cases.still]
nature = "crane"
rated = true
whole = true
"""
DEFAULTS = """[defaults]
bar_yield = "400 MPa"
stirrup_yield = "400 MPa"
cover = "40 mm"
aggregate_size = "20 mm"
[frame]
continuity = "always"
"""
STEEL = {"TopBars": "6-25M", "BottomBars": "6-25M", "Stirrups": "2 legs 15M @ 150"}
FORCES, GAPS = (60.0, 100.0, 40.0), (1.1, 1.7)
OFFSETS = np.concatenate([[0.0], np.cumsum(GAPS)])
TRAIN = """[[trains]]
case = "hoist"
beams = {beams}
wheels = ["60 kN", "100 kN", "40 kN"]
spacing = ["1.1 m", "1.7 m"]
dynamic = 1.0
turned = false
"""
LENGTH, MEETING = 18.15, 12.15


def line(y: float, name: str) -> tuple[list[Beam], list[Block]]:
    """A beam over three columns, and one drawn the other way round that goes on from it over a
    fourth and 2.15 m past it."""
    beams = [
        Beam(
            f"{name}{half}", at=(x, y, 3000.0), along=(way, 0.0, 0.0), length=length, width=400.0,
            depth=700.0, columns=False, notation=STEEL,
        )
        for half, x, way, length in (("a", 0.0, 1.0, 12150.0), ("b", 18150.0, -1.0, 6000.0))
    ]  # fmt: skip
    places = enumerate((150.0, 6150.0, 12150.0, 16000.0))
    return beams, [Block(f"C-{name}{n}", (x, y, 0.0), (300.0, 300.0), 3000.0) for n, x in places]


def report_on(
    folder: Path, beams: Sequence[Beam], blocks: Sequence[Block], *entries: str
) -> Report:
    text = brief(*entries, cases=CASES, defaults=DEFAULTS)
    model, path = write(folder, hall(*beams, others=blocks), text)
    return pipeline.rate([model], path).reports[0]


def by_mark(report: Report) -> dict[str, Rating]:
    return {beam.mark: report.ratings[beam.key] for beam in report.model.beams}


def point(name: str, force: float, x: float) -> str:
    """A point load at a place along the line."""
    half, at = ("a", x) if x <= MEETING else ("b", LENGTH - x)
    return (
        f'[[loads]]\ncase = "still"\nbeams = ["{name}{half}"]\npoint = "{force:g} kN"\n'
        f'at = "{at:.4f} m"\n'
    )


def test_no_place_of_still_wheels_uses_a_line_more(tmp_path: Path) -> None:
    moving = by_mark(report_on(tmp_path, *line(0.0, "R"), TRAIN.format(beams='["Ra"]')))
    beams, blocks, entries = [], [], []
    for number, first in enumerate(np.arange(-OFFSETS[-1] + 0.05, LENGTH, 0.1).tolist()):
        name = f"S{number}-"
        more = line(5000.0 * number, name)
        beams += more[0]
        blocks += more[1]
        wheels = zip(FORCES, (first + OFFSETS).tolist(), strict=True)
        entries += [point(name, force, x) for force, x in wheels if 0.0 <= x <= LENGTH]
    for mark, still in by_mark(report_on(tmp_path, beams, blocks, *entries)).items():
        for own, other in zip(moving[f"R{mark[-1]}"].limit_states, still.limit_states, strict=True):
            assert other.utilisation <= own.utilisation * (1.0 + 1e-6), (mark, own.title)


def test_wheels_stand_where_the_sheet_says(tmp_path: Path) -> None:
    """The hogging moment over the last column is that of wheels on the overhang."""
    report = report_on(tmp_path, *line(0.0, "R"), TRAIN.format(beams='["Ra"]'))
    key = next(beam.key for beam in report.model.beams if beam.mark == "Rb")
    check = next(each for each in report.sheet(key).checks if each.title == "flexure, hogging")
    share = next(each for each in check.shares if each.case == "hoist")
    assert share.wheels == pytest.approx((0.0, 1100.0), abs=0.1)
    assert share.moment == pytest.approx(-(100e3 * 2150.0 + 60e3 * 1050.0), rel=1e-4)


def test_supports_that_a_train_lifts_are_told(tmp_path: Path) -> None:
    report = report_on(tmp_path, *line(0.0, "R"), TRAIN.format(beams='["Ra"]'))
    told = [remark.text for remark in by_mark(report)["Ra"].remarks if remark.kind == "doubt"]
    assert any("its start is lifted by up to" in text for text in told)
    assert any("x = 12.15 m is lifted" in text or "its end is lifted" in text for text in told)


def test_a_train_for_both_beams_of_a_line_is_one(tmp_path: Path) -> None:
    found = [
        by_mark(report_on(tmp_path, *line(0.0, "R"), TRAIN.format(beams=beams)))
        for beams in ('["Ra"]', '["Rb"]', '["Ra", "Rb"]')
    ]
    for mark in ("Ra", "Rb"):
        used = [each[mark].utilisation for each in found]
        assert used == [used[0]] * 3


def test_a_way_that_two_beams_of_a_line_are_given_is_refused(tmp_path: Path) -> None:
    entry = TRAIN.format(beams='["Ra", "Rb"]') + 'from = "1 m"\nto = "5 m"\n'
    with pytest.raises(BriefError, match="two beams of one line, Ra and Rb"):
        report_on(tmp_path, *line(0.0, "R"), entry)


def test_a_way_on_one_beam_uses_the_line_less(tmp_path: Path) -> None:
    whole = by_mark(report_on(tmp_path, *line(0.0, "R"), TRAIN.format(beams='["Ra"]')))
    entry = TRAIN.format(beams='["Ra"]') + 'from = "0.15 m"\nto = "5 m"\nstops = true\n'
    part = by_mark(report_on(tmp_path, *line(0.0, "R"), entry))
    for mark in ("Ra", "Rb"):
        assert 0.0 < part[mark].utilisation < whole[mark].utilisation


def carried(runways: Sequence[float]) -> tuple[list[Beam], list[Block]]:
    """Beams of 6 m that begin on a girder of 8 m, at places along it, and end on columns."""
    girder = Beam(
        "G", at=(0.0, 0.0, 2000.0), along=(0.0, 1.0, 0.0), length=8000.0, width=400.0,
        depth=1000.0, columns=False, notation=STEEL,
    )  # fmt: skip
    beams = [
        Beam(f"R{n}", at=(-200.0, y, 3000.0), length=6200.0, depth=600.0, columns=False,
             notation=STEEL)
        for n, y in enumerate(runways)
    ]  # fmt: skip
    blocks = [
        Block(f"C{n}", (5850.0, y, 0.0), (300.0, 300.0), 3000.0) for n, y in enumerate(runways)
    ]
    blocks += [Block(f"P{y:g}", (0.0, y, 0.0), (300.0, 300.0), 2000.0) for y in (150.0, 7850.0)]
    return [girder, *beams], blocks


COMPLETE = '[[beams]]\nbeams = ["*"]\nloads_complete = true\n'


def test_a_girder_carries_the_most_that_a_train_gives_it(tmp_path: Path) -> None:
    """Against wheels that stand where the reaction is greatest: the heaviest over the girder."""
    wheels = '["100 kN", "60 kN", "40 kN"]'
    train = TRAIN.format(beams='["R0"]').replace('["60 kN", "100 kN", "40 kN"]', wheels)
    moving = report_on(tmp_path, *carried([3000.0]), train, COMPLETE)
    span = 5850.0
    standing = [(100.0, 0.2), (60.0, 1.3), (40.0, 3.0)]
    entries = [
        f'[[loads]]\ncase = "still"\nbeams = ["R0"]\npoint = "{force:g} kN"\nat = "{x} m"\n'
        for force, x in standing
    ]
    still = report_on(tmp_path, *carried([3000.0]), *entries, COMPLETE)
    most = sum(force * (1.0 - (x * 1e3 - 200.0) / span) for force, x in standing)
    load = next(each for each in moving.sheet(_key(moving, "G")).loads if each.case == "hoist")
    assert load.values[0] / 1e3 == pytest.approx(most, rel=1e-6)
    found, wanted = by_mark(moving)["G"], by_mark(still)["G"]
    assert found.utilisation == pytest.approx(wanted.utilisation, rel=1e-9)
    assert found.verdict == wanted.verdict
    assert moving.framed is not None
    words = equilibrium_words(moving.framed)
    assert "balance in every case" in words
    assert "hoist, which moves, is not in it" in words


def test_a_train_on_one_of_two_beams_on_a_girder_is_not_followed(tmp_path: Path) -> None:
    train = TRAIN.format(beams='["R0", "R1"]')
    rating = by_mark(report_on(tmp_path, *carried([2500.0, 5500.0]), train, COMPLETE))["G"]
    assert any("meet it at several places" in reason.text for reason in rating.reasons)


def _key(report: Report, mark: str) -> str:
    return next(beam.key for beam in report.model.beams if beam.mark == mark)
