"""Contacts of beams whose section varies: the box round them is larger than they are."""

from __future__ import annotations

from dataclasses import replace

from ifccheck.beam import Axis, Beam, Contact, Member, Outline, Run
from ifccheck.frame.contacts import find_contacts
from tests.test_contacts import column, member, places

LENGTH = 6000.0


def outline(low: float, high: float) -> Outline:
    return Outline((((-150.0, low), (150.0, low), (150.0, high), (-150.0, high)),))


TAPERED = (Run(0.0, LENGTH, outline(0, 800), outline(400, 800)),)
"""The soffit rises from 0 at the start to 400 at the end"""
DAPPED = (Run(0.0, 300.0, outline(400, 800)), Run(300.0, LENGTH, outline(0, 800)))
PITCHED = (
    Run(0.0, 3000.0, outline(0, 400), outline(0, 800)),
    Run(3000.0, LENGTH, outline(0, 800), outline(0, 400)),
)


def found(runs: tuple[Run, ...], *others: Member) -> tuple[Contact, ...]:
    own = member("B", "IfcBeam", (0.0, -150.0, 0.0), (LENGTH, 150.0, 800.0))
    axis = Axis((0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0), LENGTH)
    beam = Beam(
        "B", own.guid, 0, own.step_id, "m", "IfcBeam", "B", "B", "", "Level 1", axis, runs, "C30",
        None, None, None,
    )  # fmt: skip
    return find_contacts([beam], [own, *others])["B"]


def test_a_column_under_the_shallow_end_bears_it() -> None:
    contacts = found(TAPERED, column("C1", 0.0, -3000.0, 0.0), column("C2", 6000.0, -3000.0, 410.0))
    assert places(contacts) == [("C1", "start", "below"), ("C2", "end", "below")]


def test_a_column_that_stops_short_of_the_shallow_end_does_not() -> None:
    contacts = found(TAPERED, column("C2", 6000.0, -3000.0, 300.0))
    assert contacts == ()


def test_what_crosses_below_the_shallow_part_does_not_touch() -> None:
    crossing = member("G", "IfcBeam", (4000.0, -3000.0, 0.0), (4300.0, 3000.0, 200.0))
    assert found(TAPERED, crossing) == ()
    higher = replace(crossing, box=replace(crossing.box, half=(150.0, 3000.0, 170.0)))
    assert places(found(TAPERED, higher)) == [("G", "between", "below")]


def test_a_nib_sits_on_a_ledge_beam() -> None:
    ledge = member("L", "IfcBeam", (-200.0, -3000.0, 0.0), (290.0, 3000.0, 400.0))
    assert places(found(DAPPED, ledge)) == [("L", "start", "below")]


def test_what_stands_on_the_low_part_of_the_top_stands_on_the_beam() -> None:
    post = member("P", "IfcMember", (900.0, -100.0, 540.0), (1100.0, 100.0, 2000.0))
    assert places(found(PITCHED, post)) == [("P", "between", "above")]
    hovering = member("P", "IfcMember", (900.0, -100.0, 640.0), (1100.0, 100.0, 2000.0))
    assert found(PITCHED, hovering) == ()
