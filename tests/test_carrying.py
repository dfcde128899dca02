"""Which beams are carried, on contacts written out: from the ground up and in no other way."""

from __future__ import annotations

from dataclasses import replace
from itertools import permutations

import pytest

from ifccheck.beam import Beam, Contact, OutOfScope, SupportKind
from ifccheck.frame.carrying import END_TO_END, NOT_CARRIED, carried_contacts, pressed_ends
from tests.test_contacts import beam

GROUND = 0
STEPS = {"A": 1, "B": 2, "C": 3, "D": 4}


def beams() -> list[Beam]:
    return [replace(beam()[0], key=key, step_id=step) for key, step in STEPS.items()]


def on(key: str, place: str, other: str | None, side: str = "end") -> Contact:
    """An end of a beam on another beam, or on a column."""
    ifc_class = "IfcBeam" if other else "IfcColumn"
    step = GROUND if other is None else STEPS.get(other) or int(other.removeprefix("#"))
    return Contact(
        key, other or "C-1", ifc_class, 0.0, 0.0, place, side, other_step=step,  # type: ignore[arg-type]
    )  # fmt: skip


def doubts(
    *contacts: Contact,
    others: dict[str, tuple[Contact, ...]] | None = None,
    out: tuple[OutOfScope, ...] = (),
    stated: dict[str, dict[str, SupportKind]] | None = None,
) -> dict[tuple[str, str], str]:
    """What speaks against each end."""
    of = {key: tuple(c for c in contacts if c.beam == key) for key in STEPS}
    found = carried_contacts(of, others or {}, beams(), out, stated or {})  # type: ignore[arg-type]
    return {(c.beam, c.place): c.doubt for own in found.values() for c in own}


def both(key: str, other: str | None) -> tuple[Contact, Contact]:
    return on(key, "start", other), on(key, "end", other)


def test_beams_on_beams_are_carried_from_the_ground_up() -> None:
    chain = (*both("D", "C"), *both("C", "B"), *both("B", "A"), *both("A", None))
    assert set(doubts(*chain).values()) == {""}
    loose = (*both("D", "C"), *both("C", "B"), *both("B", "A"), on("A", "start", None))
    assert doubts(*loose)["D", "end"] == NOT_CARRIED
    assert doubts(*loose)["A", "start"] == ""


@pytest.mark.parametrize("order", list(permutations("ABCD"))[:6])
def test_a_ring_carries_none_of_its_beams(order: tuple[str, ...]) -> None:
    ring = zip(order, (*order[1:], order[0]), strict=True)
    contacts = [contact for key, other in ring for contact in both(key, other)]
    assert set(doubts(*contacts).values()) == {NOT_CARRIED}
    stated: dict[str, dict[str, SupportKind]] = {order[2]: {"start": "pinned", "end": "pinned"}}
    assert set(doubts(*contacts, stated=stated).values()) == {""}


def test_ends_that_meet_hold_neither() -> None:
    row = (on("A", "start", None), on("A", "end", "B"), on("B", "start", "A"), on("B", "end", None))
    found = doubts(*row)
    assert (found["A", "end"], found["B", "start"]) == (END_TO_END, END_TO_END)
    assert (found["A", "start"], found["B", "end"]) == ("", "")
    resting = (on("A", "end", "B", "below"), *both("B", None))
    assert doubts(*resting)["A", "end"] == ""


@pytest.mark.parametrize(
    ("said", "carried"),
    [
        ({"start": "fixed", "end": "free"}, True),
        ({"start": "free", "end": "fixed"}, True),
        ({"start": "pinned", "end": "pinned"}, True),
        ({"start": "pinned"}, False),
        ({"start": "fixed"}, False),
    ],
)
def test_what_the_brief_says_of_a_beam_carries_others(
    said: dict[str, SupportKind], carried: bool
) -> None:
    found = doubts(*both("B", "A"), stated={"A": said})
    assert found["B", "start"] == ("" if carried else NOT_CARRIED)


@pytest.mark.parametrize(
    ("reason", "ends", "doubt"),
    [
        ("footing", 0, ""),
        ("bearing", 0, ""),
        ("steel", 2, ""),
        ("steel", 1, NOT_CARRIED),
        ("timber", 2, ""),
        ("insulation", 2, "it is left out as insulation"),
    ],
)
def test_beams_that_are_out_of_scope(reason: str, ends: int, doubt: str) -> None:
    out = (OutOfScope("g", 77, "#77", "", reason, ""),)
    others = {"#77": both("#77", None)[:ends]}
    assert doubts(*both("A", "#77"), others=others, out=out)["A", "start"] == doubt


def test_only_what_surely_holds_an_end_presses_into_it() -> None:
    """A column beside the end, one too far off, a girder's side and a doubt press nothing."""
    column = on("A", "start", None)
    assert pressed_ends((column, on("A", "end", None, "below"))) == (True, True)
    for other in (
        column._replace(side="side"),
        column._replace(side="above"),
        column._replace(bears=False),
        column._replace(doubt=NOT_CARRIED),
        column._replace(place="between", side="below"),
        on("A", "start", "B"),
    ):
        assert pressed_ends((other,)) == (False, False)
    assert pressed_ends((on("A", "start", "B", "below"),)) == (True, False)
