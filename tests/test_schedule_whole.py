"""A schedule through the whole program: rows for one beam and for many, and how it differs."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import pytest
from click.testing import CliRunner

from ifccheck import pipeline
from ifccheck.cli import main
from tests.step_halls import LOAD, Beam, brief, hall, write

SCHEDULE = '[reinforcement]\nschedule = "s.csv"\n'
WHOLE = "mark,from,to,top,bottom,stirrups,cover\n"
BOTH = [Beam(mark="B-1"), Beam(mark="B-2", at=(0.0, 9000.0, 3000.0))]


def rated(folder: Path, table: str) -> pipeline.Run:
    folder.mkdir(exist_ok=True)
    (folder / "s.csv").write_text(table, encoding="utf-8")
    write(folder, hall(*BOTH), brief(LOAD) + SCHEDULE)
    return pipeline.rate([folder / "hall.ifc"], folder / "brief.toml")


def test_how_sources_differ_is_told_wherever_remarks_are(tmp_path: Path) -> None:
    run = rated(tmp_path, WHOLE + "B-*,,,2-20M,3-20M,2 legs 10M @ 100,40 mm\n")
    (doubt,) = [
        remark.text
        for remark in next(iter(run.reports[0].ratings.values())).remarks
        if remark.kind == "doubt" and "differs" in remark.text
    ]
    assert doubt.startswith(
        "schedule used; properties differs: bottom bars 1500 mm2 against 900 mm2 (+67 %)"
    )
    assert "stirrups 200 mm2 at 200 mm, 1000 mm2/m against 200 mm2 at 100 mm" in doubt
    arguments = [str(tmp_path / "hall.ifc"), "--brief", str(tmp_path / "brief.toml")]
    out = tmp_path / "out"
    CliRunner().invoke(main, ["rate", *arguments, "--out", str(out)])
    page = (out / "hall-rating.html").read_text(encoding="utf-8")
    assert doubt in page
    data = json.loads((out / "hall-rating.json").read_text(encoding="utf-8"))
    assert all(doubt in [r["text"] for r in beam["remarks"]] for beam in data["beams"])
    with (out / "hall-rating.csv").open(encoding="utf-8", newline="") as table:
        assert all(doubt in row["doubts"] for row in csv.DictReader(table))
    sheet = CliRunner().invoke(main, ["sheet", arguments[0], "B-1", *arguments[1:]])
    assert doubt.replace("mm2", "mm²") in " ".join(sheet.output.split())


@pytest.mark.parametrize(
    "rows",
    [
        "B-1..B-2,,,2-20M,3-25M,2 legs 10M @ 200,40 mm\nB-1,,,,2-25M,,\n",
        "B-*,,,2-20M,3-25M,2 legs 10M @ 200,40 mm\nB-1,,L/3,,2-25M,,\nB-1,L/3,L,,2-25M,,\n",
        '"B-1, B-2",,,2-20M,,2 legs 10M @ 200,40 mm\nB-*,,,,3-25M,,\nB-1,,,,2-25M,,\n',
    ],
)
def test_a_row_for_one_beam_rates_as_if_it_were_the_only_one(tmp_path: Path, rows: str) -> None:
    plain = "B-1,,,2-20M,2-25M,2 legs 10M @ 200,40 mm\nB-2,,,2-20M,3-25M,2 legs 10M @ 200,40 mm\n"
    one, other = (
        rated(tmp_path / name, WHOLE + text).reports[0].ratings
        for name, text in (("ranked", rows), ("plain", plain))
    )
    assert {key: r.verdict for key, r in one.items()} == {k: r.verdict for k, r in other.items()}
    for key, rating in one.items():
        assert rating.utilisation == pytest.approx(other[key].utilisation, rel=1e-9)
    first, second = (rating.utilisation for rating in one.values())
    assert first > 1.2 * second
