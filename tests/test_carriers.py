"""What a beam tells of those that carry it, and what the rated model tells of doubts."""

from __future__ import annotations

from pathlib import Path

from ifccheck.beam import Verdict
from ifccheck.publish.property_sets import result_sets
from tests.models import MadeColumn
from tests.rated_frames import STRONG, lying, rated_frame, sheets_of, uniform

WEAK = {**STRONG, "BottomBars": "2-15M", "TopBars": "2-15M"}


def carried(folder: Path, steel: dict[str, str]) -> dict[str, tuple[Verdict, list[str]]]:
    """S frames into the middle of G; verdict and doubts of each."""
    beams = [
        lying("G", (0.0, 0.0, 0.0), 8000.0, depth=900.0, notation=steel),
        lying("S", (4000.0, 150.0, 300.0), 5850.0, 90.0),
    ]
    columns = [
        MadeColumn(150.0),
        MadeColumn(7850.0),
        MadeColumn(4000.0, 5850.0, z=(-3000.0, 300.0)),
    ]
    run = rated_frame(folder, beams, columns, uniform("floor", 5.0), uniform("press", 12.0, "S"))
    sheets = sheets_of(run)
    written = {
        each.guid: {p.name: p.value for p in each.properties}.get("Doubts", "")
        for each in result_sets(run.reports[0])
        if each.name == "BeamRating_Result"
    }
    for sheet in sheets.values():
        doubts = [r.text for r in sheet.rating.remarks if r.kind == "doubt"]
        assert written[sheet.beam.guid] == "; ".join(doubts)
    return {
        mark: (sheet.rating.verdict, [r.text for r in sheet.rating.remarks if r.kind == "doubt"])
        for mark, sheet in sheets.items()
    }


def test_a_beam_tells_that_what_carries_it_falls_short(tmp_path: Path) -> None:
    found = carried(tmp_path, WEAK)
    assert found["G"][0] is Verdict.FALLS_SHORT
    assert found["S"][0] is Verdict.ADEQUATE
    assert "it is carried by G, which falls short" in found["S"][1]
    assert any(text.startswith("press: G, which carries it, allows") for text in found["S"][1])


def test_nothing_is_told_of_a_carrier_that_takes_more(tmp_path: Path) -> None:
    strong = {**STRONG, "BottomBars": "6-35M", "TopBars": "4-35M"}
    found = carried(tmp_path, strong)
    assert found["G"][0] is Verdict.ADEQUATE
    assert not [text for text in found["S"][1] if "carr" in text]
