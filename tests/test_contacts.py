"""Which members touch a beam, by hand-made buildings and against a linear program."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import count

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from ifccheck.beam import Axis, Beam, Box, Contact, Member, Outline, Run, Vector
from ifccheck.frame.boxes import Boxes, overlaps
from ifccheck.frame.contacts import find_contacts, is_seat
from ifccheck.frame.reactions import between_reactions, loaded_from_side, reactions_reason

DEPTH, WIDTH, LENGTH = 600.0, 300.0, 6000.0
RECTANGLE = Outline((((-150.0, 0.0), (150.0, 0.0), (150.0, DEPTH), (-150.0, DEPTH)),))
UP = (0.0, 0.0, 1.0)
STEPS = count(1)


def turned(v: Vector, angle: float) -> Vector:
    c, s = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    return (c * v[0] - s * v[1], s * v[0] + c * v[1], v[2])


def box(low: Vector, high: Vector, angle: float = 0.0) -> Box:
    """A box by its corners before the building is turned about the vertical."""
    centre = tuple((a + b) / 2.0 for a, b in zip(low, high, strict=True))
    half = tuple((b - a) / 2.0 for a, b in zip(low, high, strict=True))
    axes = tuple(turned(v, angle) for v in ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)))
    return Box(turned(centre, angle), axes, half)  # type: ignore[arg-type]


def member(name: str, ifc_class: str, low: Vector, high: Vector, angle: float = 0.0) -> Member:
    step = next(STEPS)
    return Member(step, f"guid{step}", ifc_class, name, "Level 1", box(low, high, angle))


def beam(angle: float = 0.0, key: str = "B", length: float = LENGTH) -> tuple[Beam, Member]:
    """A beam 300 x 600 along X from the origin, soffit at 0, and its own member."""
    own = member(key, "IfcBeam", (0.0, -150.0, 0.0), (length, 150.0, DEPTH), angle)
    axis = Axis(
        (0.0, 0.0, 0.0),
        turned((1.0, 0.0, 0.0), angle),
        turned((0.0, 1.0, 0.0), angle),
        (0.0, 0.0, 1.0),
        length,
    )
    made = Beam(
        key, own.guid, 0, own.step_id, "m", "IfcBeam", key, key, "", "Level 1", axis,
        (Run(0.0, length, RECTANGLE),), "C30", None, None, None,
    )  # fmt: skip
    return made, own


def found(*others: Member, angle: float = 0.0, length: float = LENGTH) -> tuple[Contact, ...]:
    one, own = beam(angle, length=length)
    return find_contacts([one], [own, *others])["B"]


def places(contacts: tuple[Contact, ...]) -> list[tuple[str, str, str]]:
    return [(c.other.split(" ")[0], c.place, c.side) for c in contacts]


def column(name: str, x: float, low: float, high: float, angle: float = 0.0) -> Member:
    return member(name, "IfcColumn", (x - 200.0, -200.0, low), (x + 200.0, 200.0, high), angle)


def held_ends(contacts: tuple[Contact, ...]) -> tuple[bool, bool]:
    """Whether each end sits on something or meets its face."""
    held = {c.place for c in contacts if is_seat(c)}
    return "start" in held, "end" in held


ANGLES = (0.0, 30.0, 77.0)


@pytest.mark.parametrize("angle", ANGLES)
def test_a_beam_on_two_columns(angle: float) -> None:
    contacts = found(
        column("C1", 200.0, -3000.0, 0.0, angle), column("C2", 5800.0, -3000.0, 0.0, angle),
        angle=angle,
    )  # fmt: skip
    assert places(contacts) == [("C1", "start", "below"), ("C2", "end", "below")]
    assert (contacts[0].start, contacts[0].end) == pytest.approx((0.0, 400.0))
    assert (contacts[1].start, contacts[1].end) == pytest.approx((5600.0, 6000.0))
    assert contacts[0].other == "C1 (IfcColumn)"
    assert held_ends(contacts) == (True, True)
    assert not between_reactions(contacts)


@pytest.mark.parametrize("angle", ANGLES)
def test_ends_that_frame_into_girders(angle: float) -> None:
    """Face to face, with a gap within tolerance, and built into the girder's body."""
    face = member("G1", "IfcBeam", (-300.0, -2000.0, -200.0), (0.0, 2000.0, DEPTH), angle)
    gap = member("G2", "IfcBeam", (6009.0, -2000.0, -200.0), (6300.0, 2000.0, DEPTH), angle)
    built_in = member("G3", "IfcBeam", (5850.0, -2000.0, -200.0), (6150.0, 2000.0, DEPTH), angle)
    assert places(found(face, gap, angle=angle)) == [("G1", "start", "end"), ("G2", "end", "end")]
    assert places(found(built_in, angle=angle)) == [("G3", "end", "end")]


@pytest.mark.parametrize("angle", ANGLES)
def test_a_beam_that_frames_into_our_side_brings_its_reaction(angle: float) -> None:
    other = member("S", "IfcBeam", (2850.0, 150.0, 100.0), (3150.0, 5000.0, DEPTH), angle)
    contacts = found(other, angle=angle)
    assert places(contacts) == [("S", "between", "side")]
    assert (contacts[0].start, contacts[0].end) == pytest.approx((2850.0, 3150.0))
    assert between_reactions(contacts) == contacts
    assert held_ends(contacts) == (False, False)


def test_seen_from_the_girder_our_end_is_between_and_at_its_side() -> None:
    one, own = beam()
    girder_box = member("G", "IfcBeam", (-300.0, -3000.0, 0.0), (0.0, 3000.0, DEPTH))
    girder = replace(
        one, key="G", guid=girder_box.guid, step_id=girder_box.step_id,
        axis=Axis((-150.0, -3000.0, 0.0), (0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), UP, LENGTH),
    )  # fmt: skip
    contacts = find_contacts([one, girder], [own, girder_box])
    assert places(contacts["B"]) == [("G", "start", "end")]
    assert places(contacts["G"]) == [("B", "between", "side")]


def test_what_stands_on_the_beam_brings_its_reaction_and_so_may_what_crosses_under() -> None:
    post = column("P", 3000.0, DEPTH, 3600.0)
    under = member("U", "IfcBeam", (1000.0, -3000.0, -500.0), (1300.0, 3000.0, 0.0))
    contacts = found(post, under)
    assert places(contacts) == [("U", "between", "below"), ("P", "between", "above")]
    assert between_reactions(contacts) == contacts
    prop = found(column("C", 3000.0, -3000.0, 0.0))
    assert between_reactions(prop) == ()


@pytest.mark.parametrize("top", [0.0, 300.0, DEPTH, 4000.0])
def test_a_column_from_below_is_below_however_high_it_is_drawn(top: float) -> None:
    """Else a support between the ends would pass for a reaction that loads_complete waves on."""
    assert places(found(column("C", 3000.0, -3000.0, top))) == [("C", "between", "below")]
    assert places(found(column("C", 5900.0, -3000.0, top))) == [("C", "end", "below")]


def test_a_column_drawn_from_the_soffit_up_stands_on_the_beam() -> None:
    contacts = found(column("P", 3000.0, 0.0, 3600.0))
    assert places(contacts) == [("P", "between", "above")]
    assert between_reactions(contacts) == contacts
    at_end = found(column("P", 5800.0, 0.0, 3600.0))
    assert places(at_end) == [("P", "end", "above")]
    assert held_ends(at_end) == (False, False)


def test_a_deeper_beam_that_crosses_ours_may_rest_on_it() -> None:
    across = member("X", "IfcBeam", (2850.0, -3000.0, -300.0), (3150.0, 3000.0, DEPTH))
    contacts = found(across)
    assert places(contacts) == [("X", "between", "side")]
    assert between_reactions(contacts) == contacts


def test_a_beam_within_a_wall_lies_on_it() -> None:
    wall = member("W", "IfcWall", (-500.0, -150.0, -2000.0), (6500.0, 150.0, 900.0))
    assert places(found(wall)) == [
        ("W", "between", "below"),
        ("W", "end", "below"),
        ("W", "start", "below"),
    ]


@pytest.mark.parametrize("standing", [True, False])
def test_what_stands_on_an_end_does_not_hold_it(standing: bool) -> None:
    contacts = found(
        column("P", 5800.0, DEPTH if standing else -3000.0, 3600.0 if standing else 0.0)
    )
    assert held_ends(contacts) == (False, not standing)


def test_a_beam_near_ours_on_a_turned_grid_does_not_touch_it() -> None:
    """Boxes along X and Y overlap by metres; the bodies are 1.5 m and 60 mm apart."""
    aside = member("N", "IfcBeam", (0.0, 1650.0, 0.0), (6000.0, 1950.0, DEPTH), 30.0)
    corner = member("C", "IfcColumn", (6060.0, -200.0, 0.0), (6400.0, 200.0, DEPTH), 30.0)
    assert found(aside, corner, angle=30.0) == ()


@pytest.mark.parametrize(
    ("gap", "bears", "loads"),
    [(9.9, True, True), (10.1, False, True), (49.9, False, True), (50.1, False, False)],
)
def test_ten_millimetres_hold_and_fifty_may_load(gap: float, bears: bool, loads: bool) -> None:
    """A joint left open in the model must neither hold the beam nor hide what rests on it."""
    for low, high in (
        ((2000.0, 150.0 + gap, 0.0), (2300.0, 900.0, DEPTH)),
        ((2000.0, -900.0, 0.0), (2300.0, -150.0 - gap, DEPTH)),
        ((2000.0, -150.0, -900.0), (2300.0, 150.0, -gap)),
        ((2000.0, -150.0, DEPTH + gap), (2300.0, 150.0, 3000.0)),
        ((LENGTH + gap, -150.0, 0.0), (LENGTH + 300.0, 150.0, DEPTH)),
        ((-300.0, -150.0, 0.0), (-gap, 150.0, DEPTH)),
    ):
        for angle in ANGLES:
            contacts = found(member("N", "IfcBeam", low, high, angle), angle=angle)
            assert bool(contacts) is loads
            assert any(contact.bears for contact in contacts) is bears
            between = 0.0 < low[0] < LENGTH
            assert bool(between_reactions(contacts, LENGTH)) is (loads and between)


def test_a_column_face_to_face_is_at_the_end_and_one_beside_the_end_is_not() -> None:
    """How beams are mostly modelled: from face to face of columns; a column merely beside the
    end, or whose head lies under its soffit beyond the end or beside it, holds nothing."""
    facing = member("C1", "IfcColumn", (-400.0, -200.0, -3000.0), (0.0, 200.0, 3000.0))
    contacts = found(facing, member("C2", "IfcWall", (6005.0, -2e3, -3e3), (6205.0, 2e3, 3e3)))
    assert places(contacts) == [("C1", "start", "end"), ("C2", "end", "end")]
    assert [contact.beyond for contact in contacts] == pytest.approx([400.0, 205.0])
    assert held_ends(contacts) == (True, True)
    beside = member("C3", "IfcColumn", (5700.0, 150.0, -3000.0), (6000.0, 450.0, 3000.0))
    beyond = member("C4", "IfcColumn", (-400.0, -200.0, -3000.0), (0.0, 200.0, 0.0))
    lower = member("C5", "IfcColumn", (5700.0, 150.0, -3000.0), (6000.0, 450.0, 0.0))
    for other in (beside, beyond, lower):
        assert [c.side for c in found(other)] == ["side"]
        assert held_ends(found(other)) == (False, False)


@pytest.mark.parametrize(
    ("low", "high"),
    [
        ((5300.0, -150.0, DEPTH), (6000.0, 150.0, 3600.0)),
        ((5300.0, 150.0, 0.0), (6000.0, 4000.0, DEPTH)),
        ((5300.0, 150.0, 0.0), (5990.0, 4000.0, DEPTH)),
    ],
)
@pytest.mark.parametrize("ifc_class", ["IfcColumn", "IfcBeam"])
def test_what_reaches_further_in_than_the_support_counts(
    low: Vector, high: Vector, ifc_class: str
) -> None:
    other = member("R", ifc_class, low, high)
    narrow = member("C", "IfcColumn", (5600.0, -200.0, -3000.0), (6100.0, 200.0, 0.0))
    wide = member("C", "IfcColumn", (4990.0, -200.0, -3000.0), (6100.0, 200.0, 0.0))
    facing = member("C", "IfcColumn", (6000.0, -200.0, -3000.0), (6400.0, 200.0, 3000.0))
    for support, counts in ((narrow, True), (wide, False), (facing, True)):
        resting = between_reactions(found(other, support), LENGTH)
        assert [c.other for c in resting] == [f"R ({ifc_class})"] * counts
        beside = low[1] > 0.0
        assert loaded_from_side(found(other, support), LENGTH, (0.0, 0.0)) is (counts and beside)
    assert not between_reactions(found(other, narrow), LENGTH, (0.0, 1000.0))


def test_a_long_bearing_is_both_an_end_and_between() -> None:
    """A wall under the first 2 m of 6: longer than 1.5 depths (900) and an eighth (750)."""
    wall = member("W", "IfcWallStandardCase", (-100.0, -100.0, -3000.0), (2000.0, 100.0, 0.0))
    short = member("V", "IfcWall", (5150.0, -100.0, -3000.0), (6100.0, 100.0, 0.0))
    assert places(found(wall, short)) == [
        ("W", "between", "below"),
        ("W", "start", "below"),
        ("V", "end", "below"),
    ]


def test_what_runs_alongside_or_along_the_top_holds_no_end() -> None:
    beside = member("T", "IfcBeam", (-500.0, 150.0, 0.0), (6500.0, 450.0, DEPTH))
    on_top = member("W", "IfcWall", (0.0, -100.0, DEPTH), (6000.0, 100.0, 3000.0))
    contacts = found(beside, on_top)
    assert places(contacts) == [("T", "between", "side"), ("W", "between", "above")]
    assert held_ends(contacts) == (False, False)
    assert [c.other_class for c in between_reactions(contacts)] == ["IfcBeam", "IfcWall"]
    reason = reactions_reason(between_reactions(contacts))
    assert reason is not None
    assert reason.text.endswith("W (IfcWall), which stands along 6.00 m of it")


def test_a_beam_at_our_corner_touches_the_end_from_the_side() -> None:
    other = member("K", "IfcBeam", (5700.0, 150.0, 0.0), (6000.0, 4000.0, DEPTH))
    assert places(found(other)) == [("K", "end", "side")]


def test_what_touches_the_tip_of_a_cantilever_hangs_on_it() -> None:
    edge = member("E", "IfcBeam", (6000.0, -3000.0, 0.0), (6300.0, 3000.0, DEPTH))
    contacts = found(edge)
    assert not between_reactions(contacts)
    assert between_reactions(contacts, free_end=True) == contacts
    assert not between_reactions(contacts, free_start=True)


@pytest.mark.parametrize(
    "ifc_class",
    ["IfcSlab", "IfcPlate", "IfcCovering", "IfcRoof", "IfcReinforcingBar",
     "IfcBuildingElementPart"],
)  # fmt: skip
def test_what_makes_no_contact(ifc_class: str) -> None:
    floor = member("F", ifc_class, (-500.0, -3000.0, DEPTH), (6500.0, 3000.0, 800.0))
    at_end = member("F", ifc_class, (5900.0, -100.0, -100.0), (6100.0, 100.0, 0.0))
    assert found(floor, at_end) == ()


@pytest.mark.parametrize(
    "ifc_class",
    ["IfcBeam", "IfcBeamStandardCase", "IfcColumn", "IfcColumnStandardCase", "IfcMember",
     "IfcMemberStandardCase", "IfcWall", "IfcWallStandardCase", "IfcWallElementedCase",
     "IfcFooting", "IfcPile", "IfcCaissonFoundation", "IfcBearing"],
)  # fmt: skip
def test_what_makes_contacts(ifc_class: str) -> None:
    at_end = member("F", ifc_class, (5800.0, -100.0, -100.0), (6100.0, 100.0, 0.0))
    assert places(found(at_end)) == [("F", "end", "below")]


def test_proxies_may_load_a_beam_and_never_hold_it_nor_count_from_within() -> None:
    name = "IfcBuildingElementProxy"
    pad = member("pad", name, (0.0, -100.0, -100.0), (300.0, 100.0, 0.0))
    middle = member("box", name, (3000.0, 150.0, 0.0), (3300.0, 400.0, 300.0))
    stirrup = member("stirrup", name, (5900.0, -110.0, 40.0), (5910.0, 110.0, 560.0))
    anchor = member("anchor", name, (5950.0, -10.0, 300.0), (6005.0, 10.0, 320.0))
    contacts = found(pad, middle, stirrup, anchor)
    assert places(contacts) == [("pad", "start", "below"), ("box", "between", "side")]
    assert held_ends(contacts) == (False, False)
    assert [c.other for c in between_reactions(contacts)] == [f"box ({name})"]


@pytest.mark.parametrize(
    "ifc_class",
    ["IfcBuildingElementProxy", "IfcElementAssembly", "IfcStair", "IfcStairFlight", "IfcRamp",
     "IfcRampFlight", "IfcWall", "IfcWallStandardCase"],
)  # fmt: skip
def test_what_may_rest_on_a_beam(ifc_class: str) -> None:
    on_top = found(member("R", ifc_class, (2000.0, -100.0, DEPTH), (2900.0, 100.0, 3000.0)))
    assert between_reactions(on_top, LENGTH) == on_top != ()
    reason = reactions_reason(on_top)
    assert reason is not None
    assert reason.text == f"reactions not included: R ({ifc_class})"


def test_a_beam_within_ours_holds_no_end() -> None:
    """An anchor written as a beam must not make a free end a supported one."""
    anchor = member("anchor", "IfcBeam", (5950.0, -10.0, 300.0), (6005.0, 10.0, 320.0))
    contacts = found(anchor)
    assert places(contacts) == [("anchor", "between", "side")]
    assert held_ends(contacts) == (False, False)


def test_a_sloped_beam_on_a_girder_that_lies_across() -> None:
    """Rising 1 in 10; the girder's top edge lies under the soffit at its start."""
    one, own = beam()
    c, s = 10.0 / math.sqrt(101.0), 1.0 / math.sqrt(101.0)
    sloped = replace(
        one, axis=Axis((0.0, 0.0, 0.0), (c, 0.0, s), (0.0, 1.0, 0.0), (-s, 0.0, c), LENGTH)
    )
    girder = member("G", "IfcBeam", (0.0, -9000.0, -600.0), (300.0, 9000.0, 0.0))
    assert places(find_contacts([sloped], [own, girder])["B"]) == [("G", "start", "below")]


def test_a_beam_that_could_not_be_read_has_no_contacts() -> None:
    one, own = beam()
    unread = replace(one, key="U", axis=None, runs=())
    assert find_contacts([unread], [own]) == {"U": ()}
    assert find_contacts([], []) == {}
    assert find_contacts([one], []) == {"B": ()}


def test_order_of_members_changes_nothing() -> None:
    one, own = beam()
    others = [own, column("C1", 200.0, -3000.0, 0.0), column("P", 3000.0, DEPTH, 3600.0),
              column("C2", 5800.0, -3000.0, 0.0)]  # fmt: skip
    expected = find_contacts([one], others)
    assert find_contacts([one], others[::-1]) == expected
    assert len(expected["B"]) == 3


def test_the_reason_names_three_at_most() -> None:
    one = found(member("S1", "IfcBeam", (900.0, 150.0, 0.0), (1200.0, 5000.0, DEPTH)))
    five = [one[0]._replace(other=f"S{n} (IfcBeam)") for n in (1, 2, 2, 3, 4, 5)]
    assert reactions_reason([]) is None
    reason = reactions_reason(one)
    assert reason is not None
    assert reason.text == "reactions not included: S1 (IfcBeam)"
    assert not reason.blocking
    many = reactions_reason(five)
    assert many is not None
    assert many.text == (
        "reactions not included: S1 (IfcBeam), S2 (IfcBeam), S3 (IfcBeam) and 2 more"
    )


# --- overlaps of two boxes against a linear program -------------------------------------------

unit = st.floats(-1.0, 1.0)


def orthonormal(numbers: list[float]) -> np.ndarray:
    matrix = np.array(numbers).reshape(3, 3)
    with np.errstate(all="ignore"):  # numbers next to nothing make no axes
        assume(abs(np.linalg.det(matrix)) > 1e-2)
    return np.linalg.qr(matrix)[0].T


def extreme(a: tuple[np.ndarray, ...], b: tuple[np.ndarray, ...], way: np.ndarray) -> float | None:
    """Greatest of way . p over the points p common to two boxes, by scipy."""
    rows, limits = [], []
    for centre, axes, half in (a, b):
        for axis, reach in zip(axes, half, strict=True):
            rows += [axis, -axis]
            limits += [reach + axis @ centre, reach - axis @ centre]
    answer = linprog(-way, A_ub=np.array(rows), b_ub=np.array(limits), bounds=(None, None))
    return -float(answer.fun) if answer.success else None


@settings(max_examples=150, deadline=None)
@given(
    st.lists(unit, min_size=9, max_size=9),
    st.lists(unit, min_size=9, max_size=9),
    st.tuples(unit, unit, unit),
    st.tuples(*[st.floats(0.05, 1.0)] * 6),
    st.permutations(range(3)),
    st.tuples(*[st.sampled_from([-1.0, 1.0])] * 3),
    st.sampled_from(["askew", "square", "upright"]),
)
def test_overlaps_agree_with_a_linear_program(
    first: list[float],
    second: list[float],
    offset: tuple[float, float, float],
    halves: tuple[float, ...],
    order: list[int],
    signs: tuple[float, float, float],
    how: str,
) -> None:
    axes = np.eye(3) if how == "upright" else orthonormal(first)
    other_axes = orthonormal(second) if how == "askew" else axes[order] * np.array(signs)[:, None]
    a = (np.array([0.3, -0.2, 0.1]), axes, np.array(halves[:3]))
    b = (a[0] + 1.5 * np.array(offset), other_axes, np.array(halves[3:]))
    ours = overlaps(*(Boxes(*(part[None] for part in box)) for box in (a, b)))[0]
    for axis, (low, high) in zip(axes, ours, strict=True):
        most, least = extreme(a, b, axis), extreme(a, b, -axis)
        if most is None or least is None:
            assert np.isnan(low) or high - low < 1e-6
        else:
            assume(most + least > 1e-6)
            assert high == pytest.approx(most - axis @ a[0], abs=1e-6)
            assert low == pytest.approx(-least - axis @ a[0], abs=1e-6)
