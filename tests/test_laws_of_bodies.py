"""Laws that hold through the whole program for bodies of every kind: a beam is rated alike
however it is drawn, and units, schema, turning and mirroring change nothing."""

from __future__ import annotations

import math
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from ifccheck.beam import Verdict
from tests.bodies_of_beams import (
    EYE,
    KINDS,
    RECTANGLE,
    TEE,
    TRAPEZOID,
    Bodies,
    Places,
)
from tests.models import (
    BEARINGS,
    MadeBeam,
    Outline,
    Setting,
    answers,
    brief,
    load,
    model,
    rate_model,
)

LENGTH = 6300.0
LOADS = brief(
    BEARINGS,
    load("floor", 'line = ["6 kN/m", "11 kN/m"]'),
    load("press", 'point = "25 kN"', 'at = "2.1 m"'),
)


def numbers(answer: dict[str, Any]) -> dict[str, float]:
    """Utilisation, demand and resistance of every limit state, and the factors."""
    found = {}
    for each in answer["limit_states"]:
        for name in ("utilisation", "demand", "resistance"):
            if isinstance(each[name], int | float):
                found[f"{each['name']} {name}"] = float(each[name])
    for safe in answer["rated_cases"]:
        if isinstance(safe["factor"], int | float):
            found[f"factor of {safe['case']}"] = float(safe["factor"])
    return found


def assert_alike(one: dict[str, Any], other: dict[str, Any], share: float) -> None:
    first, second = numbers(one), numbers(other)
    assert first.keys() == second.keys()
    assert len(first) > 6
    for name, value in first.items():
        assert second[name] == pytest.approx(value, rel=share), name
    assert one["verdict"] == other["verdict"]
    assert one["reasons"] == other["reasons"]


# The same beam in every way --------------------------------------------------------------------

SIZES: dict[str, tuple[Places, dict[str, str]]] = {
    "rectangle": (RECTANGLE, {"BottomBars": "3-25M", "TopBars": "2-20M"}),
    "tee": (TEE, {"BottomBars": "3-25M", "TopBars": "2-20M"}),
    "eye": (EYE, {"BottomBars": "4-25M", "TopBars": "4-20M"}),
    "trapezoid": (TRAPEZOID, {"BottomBars": "2-25M", "TopBars": "2-20M"}),
}


def row_of(outline: str, schema: Any) -> list[MadeBeam]:
    """A beam of each kind of the schema, side by side."""
    places, bars = SIZES[outline]
    kinds = [name for name, kind in KINDS.items() if schema in kind.schemas]
    return [
        MadeBeam(
            tuple((float(y), float(z)) for y, z in places),
            LENGTH,
            name,
            bars | {"Stirrups": "2 legs 10M @ 150"},
            origin=(0.0, 5000.0 * row, 0.0),
            direction=15.0,
            body=lambda bodies, make=KINDS[name].make: make(bodies, places, LENGTH),
        )
        for row, name in enumerate(kinds)
    ]


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("outline", SIZES)
def test_a_beam_is_rated_alike_however_it_is_drawn(
    outline: str, schema: Any, tmp_path: Path
) -> None:
    data = model(*row_of(outline, schema), setting=Setting(schema=schema))
    found = answers(rate_model(tmp_path, data, LOADS))
    assert len(found) >= (16 if schema == "IFC2X3" else 20)
    assert found["extrusion"]["verdict"] in (Verdict.ADEQUATE, Verdict.FALLS_SHORT)
    for answer in found.values():
        assert_alike(found["extrusion"], answer, share=2e-3)


# Tapers and steps ------------------------------------------------------------------------------

XS = (0.0, 1300.0, 4400.0, LENGTH)
LOWS = (-250.0, 0.0, 0.0, -350.0)
HIGHS = (550.0, 550.0, 620.0, 620.0)
WIDTH = 320.0


def box_of(low: float, high: float) -> Places:
    half = WIDTH / 2.0
    return ((-half, low), (half, low), (half, high), (-half, high))


STATIONS = [(x, box_of(low, high)) for x, low, high in zip(XS, LOWS, HIGHS, strict=True)]
VARYING: dict[str, Any] = {
    "faceted Brep": lambda b: [b.brep(b.corners(STATIONS), b.rings(STATIONS))],
    "triangulated face set": lambda b: [b.triangles(b.corners(STATIONS), b.rings(STATIONS))],
    "sectioned spine": lambda b: [b.spine(STATIONS)],
    "elevation": lambda b: [b.elevation(elevation(), WIDTH)],
    "cut from a block": lambda b: [
        b.less(b.block((0, -WIDTH / 2, -350), (LENGTH, WIDTH / 2, 620)), *wedges(b))
    ],
    "tapers in a row": lambda b: [in_row(b, *pair) for pair in pairwise(STATIONS)],
}


def elevation() -> Places:
    return [*zip(XS, LOWS, strict=True), *list(zip(XS, HIGHS, strict=True))[::-1]]


def wedges(bodies: Bodies) -> list[Any]:
    """What lies under the soffit and over the top, pushed across the beam."""
    under = [(-1.0, -400.0), (LENGTH + 1, -400.0), (LENGTH + 1, -350.0), (LENGTH, -350.0),
             (4400.0, 0.0), (1300.0, 0.0), (0.0, -250.0), (-1.0, -250.0)]  # fmt: skip
    over = [(-1.0, 550.0), (1300.0, 550.0), (4400.0, 620.0), (4400.0, 700.0), (-1.0, 700.0)]
    return [bodies.elevation(places, WIDTH + 100.0) for places in (under, over)]


def in_row(bodies: Bodies, first: tuple[float, Places], last: tuple[float, Places]) -> Any:
    ends = [first, last]
    return bodies.brep(bodies.corners(ends), bodies.rings(ends))


def varying(kind: str) -> MadeBeam:
    outline: Outline = ((-160, 0), (160, 0), (160, 550), (-160, 550))
    return MadeBeam(
        outline, LENGTH, "H-1",
        {"BottomBars": "4-25M", "TopBars": "2-25M", "Stirrups": "2 legs 10M @ 150"},
        body=VARYING[kind], origin=(2000.0, 500.0, 0.0), direction=20.0,
    )  # fmt: skip


def rated(folder: Path, beam: MadeBeam, setting: Setting | None = None) -> dict[str, Any]:
    text = brief(
        BEARINGS,
        load("floor", 'line = "9 kN/m"'),
        load("press", 'point = "25 kN"', 'at = "50 %"'),
    )
    return answers(rate_model(folder, model(beam, setting=setting), text))[beam.mark]


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    return rated(tmp_path_factory.mktemp("plain"), varying("faceted Brep"))


def test_the_haunched_beam_is_fit_to_test_with(plain: dict[str, Any]) -> None:
    assert plain["verdict"] in (Verdict.ADEQUATE, Verdict.FALLS_SHORT)
    assert plain["reasons"] == []
    used = {state["name"]: state["utilisation"] for state in plain["limit_states"]}
    assert used["FlexureSagging"] > 0.2
    assert used["Shear"] > 0.1


@pytest.mark.parametrize("kind", list(VARYING)[1:])
def test_a_haunched_beam_is_rated_alike_however_it_is_drawn(
    kind: str, plain: dict[str, Any], tmp_path: Path
) -> None:
    assert_alike(plain, rated(tmp_path, varying(kind)), share=2e-3)


@pytest.mark.parametrize("kind", ["faceted Brep", "sectioned spine", "cut from a block"])
@pytest.mark.parametrize(
    "setting",
    [
        Setting(unit="m"), Setting(unit="inch"), Setting("IFC2X3"), Setting("IFC4X3"),
        Setting(angle=37.0), Setting(angle=111.0, turned_by="building"),
        Setting(mirrored=True), Setting(mirrored=True, unit="inch", angle=37.0),
    ],
    ids=str,
)  # fmt: skip
def test_how_the_model_is_written_changes_nothing(
    kind: str, setting: Setting, plain: dict[str, Any], tmp_path: Path
) -> None:
    assert_alike(plain, rated(tmp_path, varying(kind), setting), share=1e-5)


@pytest.mark.parametrize("kind", ["faceted Brep", "elevation"])
def test_a_beam_seen_from_its_other_end_swaps_ends_alone(
    kind: str, plain: dict[str, Any], tmp_path: Path
) -> None:
    other = rated(tmp_path, varying(kind), Setting(from_end=True))
    assert_alike(plain, other, share=1e-5)
    for one, swapped in zip(plain["limit_states"], other["limit_states"], strict=True):
        if one["name"].startswith("Flexure") and one["position"] is not None:
            assert swapped["position"] == pytest.approx(LENGTH - one["position"], abs=20.0)


def test_turned_bodies_are_the_same_beam(plain: dict[str, Any], tmp_path: Path) -> None:
    """Where the body holds the turn, the start may be at either end: the answers are the same."""
    setting = Setting(angle=np.degrees(0.3), turned_by="bodies")
    assert_alike(plain, rated(tmp_path, varying("faceted Brep"), setting), share=1e-5)


def test_a_daps_reason_is_told_through_the_whole_program(tmp_path: Path) -> None:
    dap = [(0, 300), (300, 300), (300, 0), (LENGTH, 0), (LENGTH, 600), (0, 600)]
    beam = MadeBeam(
        ((-160, 0), (160, 0), (160, 600), (-160, 600)), LENGTH, "D-1",
        {"BottomBars": "3-25M", "TopBars": "2-20M", "Stirrups": "2 legs 10M @ 150"},
        body=lambda bodies: [bodies.elevation(dap, WIDTH)],
    )  # fmt: skip
    answer = rated(tmp_path, beam)
    assert answer["verdict"] == Verdict.NOT_RATED
    assert "not rated within one depth of the step at x = 0.30 m" in answer["reasons"]
    assert math.isfinite(answer["limit_states"][0]["utilisation"])
