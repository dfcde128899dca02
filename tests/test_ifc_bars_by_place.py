"""Bars that no relation ties to a beam: found by where they lie, or left out, never guessed."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ifccheck.beam import Outline, Run
from tests.barred_beams import HEIGHT, LENGTH, WIDTH, Curve, ModelWithBars, bent, closed_stirrup
from tests.barred_beams import straight as along

PLACES = (100.0, 300.0, 500.0, 700.0, 900.0)
CAGE = (*(along(50, 5950, y, z) for y in (-90.0, 0.0, 90.0) for z in (60.0, 540.0)),)
LINKS = tuple(closed_stirrup(x, 110, 40, 560) for x in PLACES)


def loose(model: ModelWithBars, beam: Any, *shapes: Curve, diameter: float = 16.0) -> list[Any]:
    """Bars drawn in a beam, contained in the building alone."""
    return [model.bar(shape, diameter, beam) for shape in shapes]


def steel(model: ModelWithBars, beam: Any) -> tuple[Any, Any]:
    """What is read of a beam, without the names of the bars."""
    found = model.read(beam)
    return (
        [replace(bars, origin="") for bars in found.bars],
        [replace(stirrups, origin="") for stirrups in found.stirrups],
    )


def test_a_cage_that_nothing_ties_is_that_of_the_beam_it_lies_in() -> None:
    read = []
    for tied in (True, False):
        model = ModelWithBars()
        beam = model.beam(origin=(3000.0, 2000.0, 500.0), along=(3.0, 4.0, 0.0))
        bars = loose(model, beam, *CAGE, diameter=20.0) + loose(model, beam, *LINKS, diameter=10.0)
        if tied:
            model.aggregate(beam, bars)
        read.append(steel(model, beam))
        found = model.read(beam)
        assert found.reasons == ""
        assert ("found by its place" in found.remarks) is not tied
    assert read[0] == read[1]
    assert len(read[0][0]) == 2
    assert read[0][1][0].legs == 2


TAILS = [(60, 90, 300), (60, 90, 60), (5940, 90, 60), (5940, 90, 300)]
PIN = [(1500, -90, 300), (60, -90, 300), (60, 90, 300), (1500, 90, 300)]


@pytest.mark.parametrize("corners", [TAILS, [(x, y, 600 - z) for x, y, z in TAILS], TAILS[1:], PIN])
def test_bars_with_bends_are_found_as_straight_ones_are(corners: list[Any]) -> None:
    read = []
    for tied in (True, False):
        model = ModelWithBars()
        beam = model.beam()
        bars = loose(model, beam, bent(corners, 60.0), diameter=12.0)
        if tied:
            model.aggregate(beam, bars)
        read.append(steel(model, beam))
    assert read[0] == read[1]
    assert read[0][0]


def test_each_beam_has_the_bars_that_lie_in_it() -> None:
    model = ModelWithBars()
    beam, other = model.beam(), model.beam(origin=(0.0, 1000.0, 0.0))
    far = model.beam(origin=(0.0, 5000.0, 0.0))
    (bar,) = loose(model, beam, along(50, 5950, 0, 60), diameter=20.0)
    model.bars(other, along(50, 5950, 0, 60))
    loose(model, other, *LINKS, diameter=10.0)
    found = model.read(beam)
    assert [bars.count for bars in found.bars] == [1]
    assert f"#{bar.id()}" in found.remarks
    assert model.read(other).stirrups[0].legs == 2
    assert "found by its place" in model.read(other).remarks
    assert model.read(far).sources == ()


def test_a_bar_that_runs_on_through_several_beams_is_one_of_each() -> None:
    model = ModelWithBars()
    beams = [model.beam(origin=(k * LENGTH, 0.0, 0.0)) for k in range(4)]
    loose(model, beams[0], along(0, 4 * LENGTH, 0, 60), diameter=20.0)
    for number, beam in enumerate(beams):
        (bars,) = model.read(beam).bars
        assert (bars.start, bars.end) == pytest.approx((-number * LENGTH, (4 - number) * LENGTH))


def test_a_bar_of_the_next_beam_drawn_in_its_own_takes_nothing_from_a_beam() -> None:
    """The bars of a cantilever run on over the support, on the axis of those of the span."""
    read = []
    for reach in (0.0, 1500.0):
        model = ModelWithBars()
        beam, after = model.beam(), model.beam(origin=(LENGTH, 0.0, 0.0), length=2000.0)
        loose(model, beam, along(50, LENGTH - 50, 0, 540))
        loose(model, beam, along(LENGTH + 50 - reach, LENGTH + 1950, 0, 540))
        read.append(steel(model, beam))
        assert len(model.read(after).bars) == 1
    assert read[0] == read[1]
    assert "one runs on into it from another beam" in model.read(beam).remarks


def test_a_bar_that_ends_in_the_joint_with_the_next_beam_is_one_of_its_own_alone() -> None:
    """Two beams in one line whose bodies overlap by the width of a column."""
    model = ModelWithBars()
    beam, after = model.beam(), model.beam(origin=(LENGTH - 400.0, 0.0, 0.0))
    loose(model, beam, along(50, 5950, 0, 60))
    assert [bars.count for bars in model.read(beam).bars] == [1]
    assert model.read(after).sources == ()


@pytest.mark.parametrize("shape", [along(50, 5950, 0, 60), closed_stirrup(3000, 110, 40, 560)])
def test_a_bar_in_two_beams_alike_is_a_reason_for_both(shape: Curve) -> None:
    model = ModelWithBars()
    beam, other = model.beam(), model.beam(origin=(100.0, 20.0, 0.0))
    model.bars(beam, along(50, 5950, -50, 60))
    (bar,) = loose(model, beam, shape)
    for each in (beam, other):
        assert f"bar #{bar.id()}: lies in it and in another beam alike" in model.read(each).reasons
    assert sum(bars.count for bars in model.read(beam).bars) == 1


def test_a_bar_of_an_assembly_in_two_of_its_beams_alike_is_a_reason_for_both() -> None:
    model = ModelWithBars()
    beam, other = model.beam(), model.beam(origin=(100.0, 20.0, 0.0))
    bars = loose(model, beam, along(50, 5950, 0, 60))
    model.aggregate(model.root("IfcElementAssembly"), [beam, other, *bars])
    for each in (beam, other):
        assert "in another beam alike" in model.read(each).reasons
        assert model.read(each).bars == ()


STARTER = bent([(2600.0, 0.0, 60.0), (3000.0, 0.0, 60.0), (3000.0, 0.0, 1700.0)], 60.0)
CORNERS = [(2900, 0), (2900, 100), (3300, 100), (3300, -100), (2900, -100), (2900, 0)]
HOOP = bent([(x, y, 300) for x, y in CORNERS], 20.0)


@pytest.mark.parametrize(
    "passing",
    [
        Curve(((3000.0, 0.0, -2500.0), (3000.0, 0.0, 3000.0))),  # a column's bar
        Curve(((3000.0, 0.0, 40.0), (3000.0, 0.0, 800.0))),  # a starter
        STARTER,
        HOOP,  # of a column, flat in the joint
        Curve(((3000.0, -1500.0, 560.0), (3000.0, 1500.0, 560.0))),  # of a slab, across
        Curve(((2000.0, -900.0, 560.0), (3800.0, 900.0, 560.0))),  # of a slab, askew
        Curve(((3000.0, -130.0, 560.0), (3000.0, 140.0, 560.0))),  # a link across
    ],
)
def test_steel_that_passes_through_is_none_of_the_beam_and_blocks_nothing(passing: Curve) -> None:
    read = []
    for extra in ((), (passing,)):
        model = ModelWithBars()
        beam = model.beam()
        model.bars(beam, *CAGE, *LINKS, diameter=12.0)
        loose(model, beam, *extra, diameter=16.0)
        assert model.read(beam).reasons == ""
        read.append(steel(model, beam))
    assert read[0] == read[1]


def test_steel_that_passes_through_is_no_reinforcement_by_itself() -> None:
    model = ModelWithBars()
    beam = model.beam()
    loose(model, beam, STARTER, HOOP)
    found = model.read(beam)
    assert (found.bars, found.stirrups) == ((), ())
    assert "no relation ties" in found.reasons


def test_stirrups_of_a_beam_that_crosses_are_its_own() -> None:
    """Where the bodies of two beams cross, a stirrup of one lies along the other."""
    model = ModelWithBars()
    beam = model.beam()
    across = model.beam(origin=(3000.0, -3000.0, 0.0), along=(0.0, 1.0, 0.0))
    links = loose(model, across, *(closed_stirrup(x, 110, 40, 560) for x in (2950.0, 3050.0)))
    loose(model, beam, along(50, 5950, 0, 60))
    loose(model, across, along(50, 5950, 0, 80))
    assert model.read(beam).stirrups == ()
    assert [bars.z for bars in model.read(beam).bars] == [60.0]
    assert model.read(across).stirrups[0].legs == 2
    assert model.read(beam).reasons == model.read(across).reasons == ""
    assert len(links) == 2


def test_a_bar_mostly_in_the_beam_that_leaves_its_concrete_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, along(50, 5950, 60, 60))
    leaving = Curve(((500.0, 0.0, 540.0), (4000.0, 0.0, 540.0), (4000.0, 0.0, 1500.0)))
    loose(model, beam, leaving)
    assert "lies outside the concrete" in model.read(beam).reasons


def test_a_bar_mostly_elsewhere_is_not_counted() -> None:
    """Five metres of it are in no beam that is known."""
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, along(50, 5950, 60, 60))
    loose(model, beam, along(4000, 9000, 0, 540))
    found = model.read(beam)
    assert [bars.z for bars in found.bars] == [60.0]
    assert "no relation ties it to it: not counted" in found.remarks
    assert found.reasons == ""


TEE = [(-150.0, 0.0), (150.0, 0.0), (150.0, 450.0), (600.0, 450.0), (600.0, 600.0)]
TEE += [(-600.0, 600.0), (-600.0, 450.0), (-150.0, 450.0)]


def test_a_bar_beside_the_web_lies_in_no_concrete() -> None:
    """It is in the box round the section alone."""
    model = ModelWithBars()
    beam = model.beam(outline=TEE)
    loose(model, beam, along(50, 5950, 0, 60), along(50, 5950, 400, 60), along(50, 5950, 400, 540))
    found = model.read(beam)
    assert sorted(bars.z for bars in found.bars) == [60.0, 540.0]
    assert found.reasons == ""


def test_a_bar_under_a_haunch_lies_in_no_concrete() -> None:
    """The soffit rises by 200 mm from the start to the middle."""
    model = ModelWithBars()
    beam = model.beam()
    deep = Outline((((-150, 0), (150, 0), (150, HEIGHT), (-150, HEIGHT)),))
    lean = Outline((((-150, 200), (150, 200), (150, HEIGHT), (-150, HEIGHT)),))
    runs = (Run(0.0, 3000.0, deep, lean), Run(3000.0, LENGTH, lean))
    model.frames[beam.id()] = replace(model.frames[beam.id()], runs=runs)
    loose(model, beam, along(1000, 5950, 0, 150), along(50, 5950, 0, 260))
    found = model.read(beam)
    assert [bars.z for bars in found.bars] == [260.0]
    model.bars(beam, along(1000, 2500, 0, 150))
    assert "lies outside the concrete" in model.read(beam).reasons


def test_links_alone_give_way_to_steel_that_is_described() -> None:
    model = ModelWithBars()
    beam = model.beam()
    loose(model, beam, *LINKS, diameter=10.0)
    assert "no longitudinal bar is among the bars that lie in it" in model.read(beam).reasons
    model.properties(beam, "BeamRating_Reinforcement", {"BottomBars": "3-20M"})
    found = model.read(beam)
    assert [source.source for source in found.sources] == ["properties"]
    assert "found by its place" in found.remarks
    assert found.reasons == ""


def test_a_bar_just_beyond_the_side_is_not_in_the_beam() -> None:
    model = ModelWithBars()
    beam = model.beam()
    loose(model, beam, along(50, 5950, WIDTH / 2.0 + 20.0, 60), along(50, 5950, 0, HEIGHT + 40.0))
    assert model.read(beam).sources == ()
