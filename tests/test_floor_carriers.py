"""What carries slabs beside beams in scope: walls, beams of steel; and what may be a partition."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ifccheck.beam import Axis, Beam, Box, Floors, FloorSlab, Member, Model, OutOfScope, Plate
from ifccheck.frame.floor_carriers import NOT_LEVEL, FloorCarriers
from tests.made_subjects import subject

SLAB = FloorSlab(
    90, "S", "S", "IfcSlab", "S-1", "",
    (Plate((((0.0, 0.0), (6000.0, 0.0), (6000.0, 4000.0), (0.0, 4000.0)),), 450.0, 600.0),),
)  # fmt: skip


def beam(key: str, y: float, step: int, z: float = 0.0, rise: float = 0.0) -> Beam:
    made = subject(key).beam
    x = ((1.0 - rise**2) ** 0.5, 0.0, rise)
    axis = Axis((0.0, y, z), x, (0.0, 1.0, 0.0), (-rise, 0.0, x[0]), 6000.0)
    return replace(made, step_id=step, name=key, axis=axis)


def box_member(
    step: int, kind: str, x: tuple[float, float], y: tuple[float, float], z: tuple[float, float]
) -> Member:
    middle, half = zip(*(((a + b) / 2.0, (b - a) / 2.0) for a, b in (x, y, z)), strict=True)
    axes = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
    return Member(step, f"guid {step}", kind, f"M{step}", "", Box(middle, axes, half))  # type: ignore[arg-type]


def building(*beams: Beam, members: Any = (), **changes: Any) -> FloorCarriers:
    model = Model("m", "m.ifc", "IFC4", "", beams, (), tuple(members), ())
    return FloorCarriers(replace(model, **changes))


WALL = box_member(5, "IfcWallStandardCase", (0, 6000), (3900, 4100), (-3000, 450))


@pytest.mark.parametrize(
    ("bearing", "walls", "carries"),
    [((), None, False), ((5,), None, True), ((5,), False, False), ((), True, True)],
)
def test_a_wall_carries_where_the_model_or_the_brief_says_so(
    bearing: tuple[int, ...], walls: bool | None, carries: bool
) -> None:
    carriers = building(beam("B", 0, 1), members=[WALL], floors=Floors((), frozenset(bearing)))
    under = carriers.under(SLAB, walls)
    assert [one.told for one in under.bearers] == ["B (IfcBeam)"] + carries * [
        "M5 (IfcWallStandardCase)"
    ]
    assert under.passed_over == (
        () if carries or walls is not None else ("M5 (IfcWallStandardCase)",)
    )


def test_a_wall_that_stands_on_the_slab_does_not_carry_it() -> None:
    above = box_member(6, "IfcWall", (0, 6000), (3900, 4100), (600, 3600))
    assert building(beam("B", 0, 1), members=[above]).under(SLAB, True).bearers[1:] == ()


def test_a_trim_that_is_out_of_scope_relieves_no_beam_and_is_told() -> None:
    trim = box_member(7, "IfcBeam", (0, 6000), (3900, 4100), (150, 450))
    left_out = OutOfScope("guid 7", 7, "M7", "", "insulation", "")
    under = building(beam("B", 0, 1), members=[trim], out_of_scope=(left_out,)).under(SLAB, True)
    assert [one.told for one in under.bearers] == ["B (IfcBeam)"]
    assert under.passed_over == ("M7 (IfcBeam)",)


def test_a_beam_of_steel_carries_its_part() -> None:
    steel = box_member(7, "IfcBeam", (0, 6000), (3900, 4100), (150, 450))
    left_out = OutOfScope("guid 7", 7, "M7", "", "steel", "")
    under = building(beam("B", 0, 1), members=[steel], out_of_scope=(left_out,)).under(SLAB, None)
    assert [(one.beam != "", one.told) for one in under.bearers] == [
        (True, "B (IfcBeam)"), (False, "M7 (IfcBeam)"),
    ]  # fmt: skip
    assert (under.bearers[1].carrier.start, under.bearers[1].carrier.end) == (
        (0.0, 4000.0), (6000.0, 4000.0),
    )  # fmt: skip


def test_a_column_is_no_line_to_carry_along() -> None:
    post = box_member(8, "IfcBeam", (0, 300), (3900, 4100), (-3000, 450))
    left_out = OutOfScope("guid 8", 8, "M8", "", "steel", "")
    under = building(beam("B", 0, 1), members=[post], out_of_scope=(left_out,)).under(SLAB, None)
    assert len(under.bearers) == 1


def test_a_beam_on_a_slope_is_in_doubt_where_it_meets_the_slab() -> None:
    carriers = building(beam("B", 0, 1), beam("R", 2000, 2, -100.0, 0.05))
    under = carriers.under(SLAB, None)
    assert [one.told for one in under.bearers] == ["B (IfcBeam)"]
    assert [why for _, why in under.doubtful] == [NOT_LEVEL]


def test_beams_near_a_slab_of_which_only_the_box_is_known() -> None:
    member = box_member(90, "IfcSlab", (0, 6000), (0, 1000), (450, 900))
    carriers = building(beam("B", 0, 1), beam("C", 4000, 2), members=[member])
    assert carriers.beams_near(90) == [carriers.under(SLAB, None).bearers[0].beam]
    assert carriers.beams_near(91) == []
