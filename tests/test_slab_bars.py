"""Bars and meshes of slabs in the flanges of beams: read, listed, and counted where anchored."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from ifccheck.beam import Anchor, Bars, Beam, Flange, FlangeWidth, Given, Opening, RatedBody
from ifccheck.brief.load import load_brief
from ifccheck.errors import BriefError
from ifccheck.frame.net_outlines import with_flanges
from ifccheck.frame.slab_bars import bars_in_flanges
from ifccheck.ifc.opening import open_model
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.scoping import Choice
from ifccheck.mechanics.flexure import flexural_strength
from ifccheck.publish.sheet_html import bar_row
from ifccheck.rating.subject import Subject
from tests.made_subjects import STANDARD, line, rated, subject
from tests.models import (
    BEARINGS,
    MadeBeam,
    MadeSlab,
    Model,
    Setting,
    answers,
    brief,
    load,
    rate_model,
    rectangle,
    state,
)

LENGTH = 6000.0
STEEL = Given(400.0, "test")

# What of a bar counts ----------------------------------------------------------------------------

FLANGE = Flange(0.0, LENGTH, 150.0, 3000.0, 450.0, 600.0, "S-1", None, outward=1.0)
WIDTH = FlangeWidth(0.0, LENGTH, 600.0, 0.0, 300.0, 0.0)


def bar(*ys: float, z: float = 560.0, start: float = -500.0, end: float = 6500.0) -> Bars:
    hook = Anchor.HOOK
    return Bars(len(ys), 11.3, 100.0, start, end, z, ys, STEEL, hook, hook, "10M", "S", 200.0)


def in_flanges(
    *bars: Bars,
    flanges: Sequence[Flange] = (FLANGE,),
    widths: Sequence[FlangeWidth] = (WIDTH,),
    openings: Sequence[Opening] = (),
) -> tuple[Bars, ...]:
    beam = replace(subject().beam, slab_bars=bars, openings=tuple(openings))
    body = RatedBody(
        with_flanges(beam.runs, flanges), (), beam.runs, tuple(flanges), "", tuple(widths)
    )
    return bars_in_flanges(beam, body)


def test_a_bar_counts_from_as_far_within_its_ends_as_it_lies_away_from_the_web() -> None:
    """150 from the web, so from -500 + 150; its ends are straight, whatever is bent beyond them."""
    (found,) = in_flanges(bar(300.0))
    assert (found.start, found.end) == pytest.approx((-350.0, 6350.0))
    assert (found.start_anchor, found.end_anchor) == (Anchor.STRAIGHT, Anchor.STRAIGHT)
    assert (found.start_beyond, found.end_beyond) == (0.0, 0.0)
    assert found.place == "near web"


def test_bars_within_the_thickness_of_the_slab_are_near_the_web() -> None:
    near, far = in_flanges(bar(200.0, 290.0, 310.0, 440.0))
    assert (near.ys, near.place) == ((200.0, 290.0), "near web")
    assert (far.ys, far.place) == ((310.0, 440.0), "in flange")
    assert (near.start, far.start) == pytest.approx((-500.0 + 140.0, -500.0 + 290.0))


@pytest.mark.parametrize(
    ("y", "z", "why"),
    [
        (451.0, 560.0, "beyond the overhang for steel"),
        (0.0, 560.0, "in the beam's own concrete"),
        (155.0, 560.0, "touches the beam's own concrete"),
        (-300.0, 560.0, "no slab on that side"),
        (300.0, 455.0, "half out of the slab below"),
        (300.0, 596.0, "half out of it above"),
    ],
)
def test_bars_that_do_not_count(y: float, z: float, why: str) -> None:
    assert in_flanges(bar(y, z=z)) == (), why


def test_a_bar_counts_only_in_slab_that_counts() -> None:
    """The flange begins at 1600 and an opening of the beam takes it from 3000 to 3200."""
    part = replace(FLANGE, start=1600.0)
    hole = Opening(3000.0, 3200.0, -150.0, 150.0, 400.0, 500.0, "hole")
    low = replace(hole, top=440.0)
    found = in_flanges(bar(200.0), flanges=[part], openings=[hole])
    assert [(one.start, one.end) for one in found] == [
        pytest.approx((1650.0, 2950.0)), pytest.approx((3250.0, 6450.0))
    ]  # fmt: skip
    (whole,) = in_flanges(bar(200.0), flanges=[part], openings=[low])
    assert (whole.start, whole.end) == pytest.approx((1650.0, 6450.0))


def test_boxes_that_go_on_hold_one_bar() -> None:
    boxes = [replace(FLANGE, end=2000.0), replace(FLANGE, start=2000.0, left=700.0)]
    (found,) = in_flanges(bar(200.0), flanges=boxes)
    assert (found.start, found.end) == pytest.approx((-450.0, 6450.0))


def test_short_pieces_do_not_count() -> None:
    assert in_flanges(bar(200.0, start=1000.0, end=1320.0)) == ()
    assert in_flanges(bar(200.0, start=1000.0, end=1330.0))


# What the standard makes of them -----------------------------------------------------------------


def flanged(*bars: Bars, **changes: Any) -> Subject:
    """A beam with slab of 1 m on both sides, fixed at both ends, and bars of that slab."""
    made = subject(
        ends=("fixed", "fixed"), loads=(line("floor", 20.0), line("press", 30.0)), **changes
    )
    flanges = (FLANGE, replace(FLANGE, right=-3000.0, left=-150.0, outward=-1.0))
    body = RatedBody(with_flanges(made.beam.runs, flanges), (), made.beam.runs, flanges)
    return replace(
        made,
        bars=(*made.bars, *bars),
        bar_yield=tuple(STEEL for _ in (*made.bars, *bars)),
        body=body,
    )


def of_slab(y: float, place: Any, z: float = 560.0) -> Bars:
    straight = Anchor.ANCHORED
    return Bars(2, 11.3, 100.0, -2000.0, 8000.0, z, (y, -y), STEEL, straight, straight, place=place)


NEAR, FAR = of_slab(220.0, "near web"), of_slab(420.0, "in flange")


def test_hogging_resistance_with_bars_of_the_slab_by_hand() -> None:
    """600 mm2 at 540 and 400 mm2 at 560 above the soffit, 1500 mm2 below, by mechanics alone."""
    batch, _ = rated(flanged(NEAR, FAR))
    found = batch.prepared.top_in_flexure.moment_resistance
    strips = np.array([[[0.0, 450.0, 300.0, 300.0], [450.0, 600.0, 6000.0, 6000.0]]])
    by_hand = flexural_strength(
        strips=strips, layer_depth=np.array([[62.0, 540.0, 560.0]]),
        layer_area=np.array([[1500.0, 600.0, 400.0]]), layer_yield=np.full((1, 3), 400.0),
        layer_diameter=np.array([[25.2, 19.5, 11.3]]), block_stress=0.805 * 0.65 * 30.0,
        block_factor=0.895, crushing_strain=0.0035, steel_modulus=200e3, steel_factor=0.85,
    )  # fmt: skip
    assert found == pytest.approx(float(by_hand.moment[0]), rel=1e-6)


def test_bars_of_the_slab_raise_nothing_but_the_top_in_tension() -> None:
    """Not shear, not sagging, not longitudinal tension where they lie farther out."""
    (plain, _), (far, _), (near, _) = (rated(flanged(*bars)) for bars in ((), (FAR,), (NEAR,)))
    for name in ("moment_resistance", "shear_depth", "tension_area", "web_width"):
        for one, other in (("sagging", "sagging"), ("hogging", "hogging")):
            least = [getattr(getattr(b.prepared, one), name).max() for b in (plain, far, near)]
            assert least == pytest.approx([least[0]] * 3), (other, name)
    force = [b.prepared.tension_force(top=True).max() for b in (plain, far, near)]
    assert force[1] == pytest.approx(force[0])
    assert force[2] == pytest.approx(force[0] + 0.85 * 400.0 * 200.0)
    assert [b.prepared.tension_force(top=False).max() for b in (far, near)] == pytest.approx(
        [plain.prepared.tension_force(top=False).max()] * 2
    )
    strength = [b.prepared.top_in_flexure.moment_resistance.max() for b in (plain, far, near)]
    assert strength[1] == pytest.approx(strength[2])
    assert strength[1] > 1.2 * strength[0]


def test_low_bars_near_the_web_give_less_of_their_force() -> None:
    """The tension is M / dv with dv to the beam's own bars, 0.9 x 540; to all of them it is less:
    d = (600 x 540 + 200 x 465) / 800 = 521.25."""
    batch, _ = rated(flanged(of_slab(220.0, "near web", z=465.0)))
    force = batch.prepared.tension_force(top=True).max()
    assert force == pytest.approx(0.85 * 400.0 * 800.0 * 521.25 / 540.0)


def test_bars_of_the_slab_count_with_no_more_than_the_greatest_yield() -> None:
    """Wire of 600 MPa counts as if it had the 500 MPa of 8.5.1, and makes nothing else doubtful."""
    made = flanged(FAR)
    found = []
    for strength in (500.0, 600.0):
        yields = (*made.bar_yield[:-1], Given(strength, "test"))
        batch, (answer,) = rated(replace(made, bar_yield=yields))
        found.append((batch.prepared.top_in_flexure.moment_resistance.max(), answer.verdict))
    assert found[0] == found[1]
    assert found[0][0] > 0.0


def test_quick_and_full_checks_agree_with_bars_of_slabs() -> None:
    """Each limit state gives one utilisation, however it is asked for."""
    batch, (answer,) = rated(flanged(NEAR, FAR))
    for state_of in STANDARD.limit_states:
        check = state_of.check(batch.prepared, batch.demand)
        (found,) = [s for s in answer.limit_states if s.name == state_of.name]
        assert np.nanmax(check.utilisation) == pytest.approx(found.utilisation, rel=1e-9)


def test_the_table_of_steel_tells_bars_of_slabs_apart() -> None:
    own, near, far = (
        bar_row(replace(one, origin="bar X"), STEEL).origin for one in (bar(0.0), NEAR, FAR)
    )
    assert (own, near, far) == ("bar X", "slab, near web: bar X", "slab, in flange: bar X")


def test_bars_of_slabs_change_nothing_else_in_a_batch() -> None:
    """Random beams, every other with bars of slabs, rated together and without them: hogging and
    longitudinal tension may get less, all else and all other beams stay."""
    rng = np.random.default_rng(11)
    with_bars, without = [], []
    for number in range(16):
        kind = {
            "key": f"B{number}", "top": int(rng.integers(2, 5)), "bottom": int(rng.integers(2, 5)),
            "strength": float(rng.uniform(25.0, 50.0)), "depth": 600.0,
        }  # fmt: skip
        bars = [
            of_slab(float(rng.uniform(200.0, 450.0)), place, float(rng.uniform(460.0, 590.0)))
            for place in rng.choice(["near web", "in flange"], 3)
        ]
        loads = tuple(one._replace(beam=kind["key"]) for one in flanged().loads)
        without.append(replace(flanged(**kind), loads=loads))
        with_bars.append(replace(flanged(*(bars if number % 2 else ()), **kind), loads=loads))
    for number, (one, other) in enumerate(
        zip(rated(*with_bars)[1], rated(*without)[1], strict=True)
    ):
        for found, plain in zip(one.limit_states, other.limit_states, strict=True):
            if number % 2 and found.name in ("FlexureHogging", "LongitudinalTension"):
                assert found.utilisation <= plain.utilisation * (1.0 + 1e-9)
            else:
                assert found.utilisation == pytest.approx(plain.utilisation, rel=2e-3)


# Through the whole program -----------------------------------------------------------------------

OWN = {"BottomBars": "4-25M", "TopBars": "2-15M", "Stirrups": "2 legs 10M @ 200"}
BEAM = MadeBeam(rectangle(300, 600), 6300.0, "B-1", OWN, origin=(-150.0, 0.0, 3000.0))
SLAB = MadeSlab(((-900, -1500), (6900, -1500), (6900, 1500), (-900, 1500)), 3450.0, 150.0)
FIXED = (
    '[[supports]]\nbeams = ["*"]\nstart = "fixed"\nend = "fixed"\nbearing = ["300 mm", "300 mm"]\n'
)
LOADS = (FIXED, load("floor", 'line = "12 kN/m"'), load("press", 'line = "40 kN/m"'))
ANCHORED = '[[beams]]\nbeams = ["B-1"]\nslab_bars = "anchored"\nloads_complete = true\n'
COMPLETE = '[[beams]]\nbeams = ["B-1"]\nloads_complete = true\n'


@dataclass(frozen=True)
class Drawn:
    """Bars along the beam in its own axes."""

    ys: Sequence[float]
    z: float = 560.0
    start: float = -700.0
    end: float = 7000.0
    tie: str = "slab"
    mesh: bool = False
    aside: float = 0.0
    """How far their other end lies to the left of the first [mm]"""


def hall(*drawn: Drawn, beam: MadeBeam = BEAM, **setting: Any) -> bytes:
    made = Model(Setting(**setting))
    made.add_beam(beam)
    element = made.elements[0]
    made.add_slab(SLAB)
    slab = made.elements[-1]
    _, inner = made._frames(made._beam_frame(beam))
    for number, one in enumerate(drawn):
        bars = [
            made._bar(beam, f"slab bar {number} at {y}", "10M",
                      [(one.start, y, one.z), (one.end, y + one.aside, one.z)], element, inner,
                      "MAIN")
            for y in one.ys
        ]  # fmt: skip
        if one.mesh:
            bars = [_as_mesh(made, element, bars, number)]
        if one.tie == "slab":
            made.aggregate(f"slab bars {number}", slab, bars)
        made.bars += bars
    return made.finish()


def _as_mesh(made: Model, host: Any, bars: Sequence[Any], number: int) -> Any:
    """One mesh with the bodies of bars as its wires."""
    items = [bar.Representation.Representations[0].Items[0] for bar in bars]
    extra = {}
    if made.setting.schema == "IFC2X3":
        extra = {
            "LongitudinalBarNominalDiameter": made.length(11.3), "LongitudinalBarSpacing": 1.0,
            "TransverseBarNominalDiameter": made.length(11.3), "TransverseBarSpacing": 1.0,
            "LongitudinalBarCrossSectionArea": 0.0, "TransverseBarCrossSectionArea": 0.0,
        }  # fmt: skip
    mesh = made.rooted(
        "IfcReinforcingMesh", f"mesh {number}", Name=f"M-{number}", SteelGrade="400W",
        ObjectPlacement=bars[0].ObjectPlacement,
        Representation=made._shape(*items, kind="AdvancedSweptSolid"), **extra,
    )  # fmt: skip
    for bar in bars:
        made.file.remove(bar)
    return mesh


def text(*entries: str) -> str:
    return brief(*LOADS, *entries).replace("[defaults]", "[defaults]\nslab_flanges = true")


def rated_hall(
    folder: Path, *drawn: Drawn, said: str = ANCHORED, beam: MadeBeam = BEAM, **setting: Any
) -> dict[str, Any]:
    return answers(rate_model(folder, hall(*drawn, beam=beam, **setting), text(said)))["B-1"]


def hogging(answer: dict[str, Any]) -> float:
    return float(state(answer, "FlexureHogging")["resistance"])


def listed(answer: dict[str, Any]) -> str:
    found = [item["value"] for item in answer["basis"] if item["name"] == "SlabBars"]
    return str(found[0]) if found else ""


TOP = Drawn((200.0, 260.0, 400.0, -200.0, -260.0, -400.0))


def test_bars_are_listed_and_count_only_where_they_are_anchored(tmp_path: Path) -> None:
    none = rated_hall(tmp_path / "none", said=COMPLETE)
    silent = rated_hall(tmp_path / "silent", TOP, said=COMPLETE)
    counted = rated_hall(tmp_path / "counted", TOP)
    for one in none["limit_states"]:
        assert state(silent, one["name"]) == one
    assert listed(none) == ""
    assert listed(silent).endswith(": not counted")
    assert "4-10M, 400 mm2 at z = 560 mm" in listed(silent)
    assert "2-10M, 200 mm2 at z = 560 mm" in listed(silent)
    assert listed(counted).endswith(": counted where the top is in tension")
    assert hogging(counted) > 1.8 * hogging(none)
    (top,) = [item["value"] for item in counted["basis"] if item["name"] == "TopBars"]
    assert top.startswith("2-15M")
    for name in ("FlexureSagging", "Shear", "MinimumStirrups"):
        assert state(counted, name) == pytest.approx(state(none, name))
    tension = [state(one, "LongitudinalTension")["utilisation"] for one in (none, counted)]
    assert tension[1] < tension[0]
    told = " ".join(remark["text"] for remark in counted["remarks"])
    assert 'slab_bars = "anchored"' in told
    assert "never in shear" in told
    assert "these must not hold them as well" in told


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("change", [{"mesh": True}, {"tie": "none"}])
def test_meshes_and_bars_that_nothing_ties_count_alike(
    tmp_path: Path, schema: Any, change: dict[str, Any]
) -> None:
    plain = rated_hall(tmp_path / "plain", TOP)
    other = rated_hall(tmp_path / "other", replace(TOP, **change), schema=schema)
    assert hogging(other) == pytest.approx(hogging(plain), rel=2e-3)


@pytest.mark.parametrize(
    "drawn",
    [
        Drawn((460.0, -460.0)),
        Drawn((0.0, 50.0)),
        Drawn((200.0,), z=650.0),
        Drawn((200.0,), z=440.0),
        Drawn((-1000.0,), start=1000.0, end=1000.0, aside=2000.0),
        Drawn((200.0,), aside=600.0),
        Drawn((200.0,), start=2000.0, end=2200.0),
    ],
)  # fmt: skip
def test_bars_that_count_for_nothing(tmp_path: Path, drawn: Drawn) -> None:
    """Beyond a twentieth of the span, over the web, out of the slab, across, askew, short."""
    none = rated_hall(tmp_path / "none")
    found = rated_hall(tmp_path / "found", drawn)
    assert listed(found) == ""
    assert hogging(found) == pytest.approx(hogging(none))
    told = " ".join(remark["text"] for remark in found["remarks"])
    assert "no bar of a slab was found along it" in told


def test_a_bar_that_stops_before_the_support_gives_nothing_there(tmp_path: Path) -> None:
    none = rated_hall(tmp_path / "none")
    found = rated_hall(tmp_path / "found", replace(TOP, start=1500.0, end=4800.0))
    assert listed(found)
    assert state(found, "FlexureHogging")["utilisation"] == pytest.approx(
        state(none, "FlexureHogging")["utilisation"]
    )


def test_the_same_steel_modelled_twice_counts_once(tmp_path: Path) -> None:
    once = rated_hall(tmp_path / "once", TOP)
    twice = rated_hall(tmp_path / "twice", TOP, replace(TOP, mesh=True))
    assert hogging(twice) <= hogging(once) * (1.0 + 1e-9)
    assert any("counted once" in remark["text"] for remark in twice["remarks"])


@pytest.mark.parametrize(
    "setting",
    [{"unit": "m"}, {"schema": "IFC4X3", "unit": "inch"}, {"angle": 217.0}, {"mirrored": True},
     {"from_end": True}],
)  # fmt: skip
def test_how_a_model_is_written_changes_nothing(tmp_path: Path, setting: dict[str, Any]) -> None:
    plain = rated_hall(tmp_path / "plain", TOP)
    other = rated_hall(tmp_path / "other", TOP, **setting)
    for one in plain["limit_states"]:
        found = state(other, one["name"])
        assert found["utilisation"] == pytest.approx(one["utilisation"], rel=1e-6)


def test_where_no_slab_counts_the_statement_counts_for_nothing(tmp_path: Path) -> None:
    precast = replace(BEAM, mark="Precast B-1")
    said = ANCHORED.replace("B-1", "Precast B-1")
    run = rate_model(tmp_path, hall(TOP, beam=precast), text(said))
    answer = answers(run)["Precast B-1"]
    told = " ".join(remark["text"] for remark in answer["remarks"])
    assert "counts for nothing: no slab counts as a flange of it" in told
    assert listed(answer) == ""


# The brief ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("written", "told"),
    [
        ('slab_bars = "ancored"', 'must be "anchored".*did you mean anchored'),
        ("slab_bars = true", 'must be "anchored", or left out'),
        ('slab_bar = "anchored"', "unknown key 'slab_bar': did you mean slab_bars"),
        (
            'slab_bars = "anchored"\nslab_flange = false',
            r"beams\[\d\].slab_bars.*slab_flange = false",
        ),
        ('slab_bars = "anchored"', r"beams\[\d\].slab_bars.*write slab_flange = true here"),
    ],
)
def test_what_a_brief_may_not_say(tmp_path: Path, written: str, told: str) -> None:
    path = tmp_path / "brief.toml"
    path.write_text(brief(BEARINGS, f'[[beams]]\nbeams = ["B-1"]\n{written}\n'), encoding="utf-8")
    with pytest.raises(BriefError, match=told):
        load_brief(path)


def test_without_a_brief_that_asks_no_bars_of_slabs_are_read(tmp_path: Path) -> None:
    path = tmp_path / "hall.ifc"
    path.write_bytes(hall(TOP))
    opened = open_model(path)
    read: list[Beam] = [
        read_model(opened, {}, None, Choice(slabs=slabs)).beams[0] for slabs in (False, True)
    ]
    assert read[0].slab_bars == ()
    assert sum(one.count for one in read[1].slab_bars) == 6


def test_bars_that_cannot_be_read_are_told_once(tmp_path: Path) -> None:
    data = hall(TOP).replace(b"IFCSWEPTDISKSOLID(", b"IFCSPHERE(#1,", 1)
    data = re.sub(rb"IFCSPHERE\(#1,[^)]*\)", b"IFCBLOCK($,1.,1.,1.)", data)
    answer = rate_model(tmp_path, data, text(ANCHORED))
    told = [one.text for one in answer.reports[0].remarks]
    assert any("cannot be read: not counted in any flange" in one for one in told)
    assert "5-10M" in listed(answers(answer)["B-1"]) or "3-10M" in listed(answers(answer)["B-1"])


@pytest.mark.parametrize(
    ("grade", "default", "counts"),
    [(b"'400W'", "", True), (b"$", "", False), (b"$", 'bar_yield = "400 MPa"', True)],
)
def test_bars_of_unknown_yield_do_not_count(
    tmp_path: Path, grade: bytes, default: str, counts: bool
) -> None:
    """The beam's own yield is stated; that says nothing of bars of a slab."""
    own = '[[materials]]\nbeams = ["B-1"]\nbar_yield = "500 MPa"\nstirrup_yield = "400 MPa"\n'
    said = re.sub(r"(?m)^(bar|stirrup)_yield.*\n", "", text())
    said = said.replace("[defaults]", f"[defaults]\n{default}") + ANCHORED + own
    data = hall(TOP).replace(b"'400W'", grade).replace(b"Reinforcing steel 400W", b"Steel")
    answer = answers(rate_model(tmp_path, data, said))["B-1"]
    assert listed(answer).endswith(
        "counted where the top is in tension" if counts else "not counted"
    )
    told = " ".join(remark["text"] for remark in answer["remarks"])
    assert ("neither the model nor the brief gives their yield" in told) is not counts
