"""What carries beams, and the lines that they form, in a building with known answers."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache

import pytest

from ifccheck.beam import Bars, Beam, Model
from ifccheck.frame.carrying import Stated
from ifccheck.frame.column_springs import FarEnd, column_stiffness
from ifccheck.frame.contacts import contacts_of_others, find_contacts
from ifccheck.frame.joints import Meeting, by_bars
from ifccheck.frame.lines import Lines, find_lines
from tests.frames_of_beams import (
    SETTINGS,
    Maker,
    Setting,
    block,
    column,
    everything,
    face_to_face,
    girders,
    lying,
    one_over_three_columns,
    read,
    three_over_three_columns,
)
from tests.ifc_models import Building

Row = tuple[str, float, float, float, str, str, bool]
"""Place, centre, faces, carrier, way, direct"""

BELOW, END, THROUGH = "below", "end", "through"
SEATS: Mapping[str, Sequence[Row]] = {
    "ONE": [
        ("start", 200, 0, 400, "C1", BELOW, True),
        ("between", 6200, 6000, 6400, "C2", BELOW, True),
        ("between", 12200, 12000, 12400, "C3", BELOW, True),
    ],
    "T1": [
        ("start", 200, 0, 400, "D1", BELOW, True),
        ("end", 6200, 6000, 6400, "D2", BELOW, True),
    ],
    "T2": [
        ("start", 0, -200, 200, "D3", BELOW, True),
        ("end", 6000, 5800, 6200, "D2", BELOW, True),
    ],
    "T3": [("start", 0, -200, 200, "D3", BELOW, True)],
    "F1": [
        ("start", -200, -400, 0, "E1", END, True),
        ("end", 5800, 5600, 6000, "E2", END, True),
    ],
    "F2": [
        ("start", -200, -400, 0, "E2", END, True),
        ("end", 5800, 5600, 6000, "E3", END, True),
    ],
    "G2": [
        ("start", 200, 0, 400, "H2a", BELOW, True),
        ("end", 7800, 7600, 8000, "H2b", BELOW, True),
    ],
    "S1": [
        ("start", -150, -300, 0, "G1", END, False),
        ("end", 4850, 4700, 5000, "G2", END, False),
    ],
    "S2": [
        ("start", -150, -300, 0, "G2", END, False),
        ("end", 4850, 4700, 5000, "G3", END, False),
    ],
    "TOP": [
        ("start", 150, 0, 300, "G1", BELOW, True),
        ("between", 5150, 5000, 5300, "G2", BELOW, True),
        ("end", 10150, 10000, 10300, "G3", BELOW, True),
    ],
    "K1": [("start", 50, -100, 200, "W1", BELOW, True)],
    "K2": [("start", -150, -300, 0, "W1", END, True)],
    "ON": [
        ("start", 125, 0, 250, "W2", BELOW, True),
        ("end", 5125, 5000, 5250, "W3", BELOW, True),
    ],
    "P": [
        ("start", 300, 0, 600, "PILE", BELOW, True),
        ("between", 4500, 4000, 5000, "FOOT", BELOW, True),
        ("end", 8850, 8700, 9000, "PAD", BELOW, True),
    ],
    "CORB": [
        ("start", -15, -30, 0, "N1", BELOW, True),
        ("end", 5555, 5540, 5570, "N2", BELOW, True),
    ],
    "AIR": [],
    "ODD": [("start", 200, 0, 400, "Q3", BELOW, True)],
    "X1": [
        ("start", 200, 0, 400, "U1", BELOW, True),
        ("end", 7800, 7600, 8000, "U2", BELOW, True),
    ],
    "DEEP": [
        ("start", 200, 0, 400, "V1", BELOW, True),
        ("end", 7800, 7600, 8000, "V2", BELOW, True),
    ],
    "THIN": [
        ("start", 200, 0, 400, "V3", BELOW, True),
        ("between", 4000, 3700, 4300, "DEEP", THROUGH, False),
        ("end", 7800, 7600, 8000, "V4", BELOW, True),
    ],
}

BEARING = ("W2", "W3", "N1", "N2")
"""Walls and members that the brief says carry"""

Span = tuple[str, float, float, str, str]
"""Beam, start and end in its own x, kinds in its own x"""

PIN, ON, FREE, FIX = "pinned", "continuous", "free", "fixed"
LINES: Sequence[Sequence[Span]] = [
    [
        ("ONE", 200, 6200, PIN, ON), ("ONE", 6200, 12200, ON, ON), ("ONE", 12200, 14200, ON, FREE),
    ],
    [("T1", 200, 6200, PIN, ON), ("T2", 0, 6000, ON, ON), ("T3", 0, 2000, ON, FREE)],
    [("F1", -200, 5800, PIN, ON), ("F2", -200, 5800, ON, PIN)],
    [("S1", -150, 4850, PIN, ON), ("S2", -150, 4850, ON, PIN)],
    [("TOP", 150, 5150, PIN, ON), ("TOP", 5150, 10150, ON, PIN)],
    [("G1", 200, 7800, PIN, PIN)],
    [("K1", 200, 2200, FIX, FREE)],
    [("K2", 0, 2000, FIX, FREE)],
    [("ON", 125, 5125, PIN, PIN)],
    [("P", 300, 4500, PIN, ON), ("P", 4500, 8850, ON, PIN)],
    [("CORB", -15, 5555, PIN, PIN)],
    [("X2", 200, 7800, PIN, PIN)],
    [("THIN", 200, 4000, PIN, ON), ("THIN", 4000, 7800, ON, PIN)],
]  # fmt: skip


@dataclass(frozen=True)
class Stood:
    """A building and how its beams stand."""

    model: Model
    lines: Lines

    @property
    def names(self) -> dict[str, str]:
        return {beam.key: beam.name for beam in self.model.beams}

    def key(self, name: str) -> str:
        return next(beam.key for beam in self.model.beams if beam.name == name)

    def beam(self, name: str) -> Beam:
        return next(beam for beam in self.model.beams if beam.name == name)

    def rows(self, name: str) -> list[Row]:
        return [
            (s.place, s.x, s.low, s.high, s.carrier_name.split(" ")[0], s.way, s.direct)
            for s in self.lines.seats[self.key(name)]
        ]

    def spans(self) -> list[list[Span]]:
        names = self.names
        return [
            [(names[s.beam], s.start.x, s.end.x, s.start.kind, s.end.kind) for s in line.spans]
            for line in self.lines.lines
        ]

    def told(self, name: str) -> list[str]:
        return [remark.text for remark in self.lines.remarks[self.key(name)]]

    def why(self, name: str) -> str:
        return self.lines.unknown[self.key(name)].text


def always(meeting: Meeting) -> bool:
    return True


def never(meeting: Meeting) -> bool:
    return False


def stand(
    model: Model,
    *,
    through: bool = True,
    stated: Stated | None = None,
    load_bearing: Sequence[str] = (),
) -> Stood:
    by_name = {beam.name: beam.key for beam in model.beams}
    contacts = find_contacts(model.beams, model.members)
    others = contacts_of_others(model.beams, model.members)
    said = {by_name[name]: ends for name, ends in (stated or {}).items()}
    bearing = {member.step_id for member in model.members if member.name in load_bearing}
    found = find_lines(model, contacts, others, said, always if through else never, bearing)
    return Stood(model, found)


@cache
def building(setting: Setting) -> Stood:
    return stand(read(everything(), setting), load_bearing=BEARING)


def rows_near(found: Sequence[Sequence[object]], expected: Sequence[Sequence[object]]) -> None:
    assert len(found) == len(expected)
    for one, other in zip(found, expected, strict=True):
        assert len(one) == len(other)
        for a, b in zip(one, other, strict=True):
            assert a == (pytest.approx(b, abs=1e-3) if isinstance(b, int | float) else b), one


@pytest.mark.parametrize("setting", SETTINGS, ids=str)
@pytest.mark.parametrize("name", SEATS)
def test_what_carries_each_beam(name: str, setting: Setting) -> None:
    rows_near(building(setting).rows(name), SEATS[name])


@pytest.mark.parametrize("setting", SETTINGS, ids=str)
@pytest.mark.parametrize("expected", LINES, ids=lambda line: line[0][0])
def test_the_line_of_each_beam(expected: Sequence[Span], setting: Setting) -> None:
    spans = building(setting).spans()
    (line,) = [line for line in spans if line[0][0] == expected[0][0]]
    rows_near(line, expected)


@pytest.mark.parametrize("setting", SETTINGS, ids=str)
def test_every_beam_is_in_one_line_or_has_a_reason(setting: Setting) -> None:
    stood = building(setting)
    in_lines = [beam.key for line in stood.lines.lines for beam in line.beams]
    assert sorted(in_lines + list(stood.lines.unknown)) == sorted(stood.names)
    assert {stood.names[key] for key in stood.lines.unknown} == {"AIR", "ALONG", "ODD"}
    for line in stood.lines.lines:
        assert len(line.nodes) == len(line.spans) + 1


def test_reasons_say_why_a_beam_has_no_way_to_stand() -> None:
    stood = building(Setting())
    assert "nothing that could carry it touches it" in stood.why("AIR")
    assert "W4 (IfcWall): nothing says that it carries" in stood.why("ALONG")
    bearing = stand(stood.model, load_bearing=[*BEARING, "W4"])
    assert "it lies on W4 (IfcWall) from end to end" in bearing.why("ALONG")
    assert "only Q3 (IfcColumn) carries it, at x = 0.20 m" in stood.why("ODD")
    assert all(stood.why(name).startswith("supports unknown: ") for name in ("AIR", "ALONG", "ODD"))


def test_remarks_name_what_carries() -> None:
    stood = building(Setting())
    assert stood.told("ONE") == [
        "supported at x = 0.20 m by C1 (IfcColumn), from below, 400 mm wide",
        "supported at x = 6.20 m by C2 (IfcColumn), from below, 400 mm wide",
        "supported at x = 12.20 m by C3 (IfcColumn), from below, 400 mm wide",
        "it hangs over by 2.00 m, to its tip at x = 14.20 m",
    ]
    assert "supported at x = -0.15 m by G1 (IfcBeam), framing into its side, 300 mm wide" in (
        stood.told("S1")
    )
    assert "a cantilever of 2.00 m, built into W1 (IfcWall) at x = 0.20 m" in stood.told("K1")
    assert "goes on into T2 (IfcBeam) over D2 (IfcColumn) at x = 6.20 m with all moment" in (
        stood.told("T1")
    )
    kinds = {remark.kind for own in stood.lines.remarks.values() for remark in own}
    assert kinds == {"assumption"}


def test_the_middle_part_drawn_backward_runs_against_the_line() -> None:
    stood = building(Setting())
    (line,) = [line for line in stood.lines.lines if stood.names[line.beams[0].key] == "T1"]
    assert [(stood.names[beam.key], beam.reversed) for beam in line.beams] == [
        ("T1", False), ("T2", True), ("T3", False),
    ]  # fmt: skip
    assert [span.reversed for span in line.spans] == [False, True, False]
    assert [node.kind for node in line.nodes] == [PIN, ON, ON, FREE]
    assert [[seat.carrier_name.split(" ")[0] for seat in node.seats] for node in line.nodes] == [
        ["D1"], ["D2", "D2"], ["D3", "D3"], [],
    ]  # fmt: skip
    first, second = line.spans[1].ends
    assert (first.x, first.face, second.x, second.face) == pytest.approx((6000, 5800, 0, 200))


def test_one_element_and_three_have_the_same_spans() -> None:
    stood = building(Setting())
    lengths = {}
    for line in stood.lines.lines:
        name = stood.names[line.beams[0].key]
        lengths[name] = [span.length for span in line.spans]
    for name in ("ONE", "T1"):
        assert lengths[name] == pytest.approx([6000, 6000, 2000])


def test_without_bars_that_run_through_every_part_stands_alone() -> None:
    stood = stand(read(three_over_three_columns()), through=False)
    rows_near(sorted(map(tuple, (line[0] for line in stood.spans()))), [
        ("T1", 200, 6200, PIN, PIN), ("T2", 0, 6000, PIN, PIN),
    ])  # fmt: skip
    assert "only D3 (IfcColumn) carries it" in stood.why("T3")
    assert stood.told("T1")[-1] == (
        "meets T2 (IfcBeam) over D2 (IfcColumn) at x = 6.20 m, and takes no moment from it:"
        " nothing shows bars that run through"
    )


def test_each_beam_is_asked_whether_it_goes_on() -> None:
    model = read(face_to_face())
    names = {beam.key: beam.name for beam in model.beams}
    asked = []

    def ask(meeting: Meeting) -> bool:
        asked.append((names[meeting.beam], meeting.end, names[meeting.other], meeting.other_end))
        assert meeting.far == pytest.approx(6000 if meeting.end == "end" else -400)
        return False

    contacts = find_contacts(model.beams, model.members)
    find_lines(model, contacts, {}, {}, ask)
    assert sorted(asked) == [("F1", "end", "F2", "start"), ("F2", "start", "F1", "end")]


def bars(z: float, start: float, end: float) -> Bars:
    return Bars(1, 25.2, 500.0, start, end, z, (0.0,))


@pytest.mark.parametrize(
    ("first", "second", "lines"),
    [
        (bars(540, 40, 6000), None, 1),
        (bars(540, 40, 7500), None, 1),
        (bars(540, 40, 5999), None, 2),
        (bars(60, 40, 7500), None, 2),
        (None, bars(540, -401, 3000), 1),
        (None, bars(540, -399, 5000), 2),
        (bars(540, 40, 5560), bars(540, 40, 5560), 2),
        (None, None, 2),
    ],
)
def test_moment_passes_where_top_bars_of_one_beam_reach_past_the_support(
    first: Bars | None, second: Bars | None, lines: int
) -> None:
    """F1 ends at 5600 and F2 starts 400 beyond it, on the other face of the column."""
    model = read(face_to_face())
    by_name = {beam.name: beam for beam in model.beams}
    placed = {
        by_name[name].key: [bar] for name, bar in (("F1", first), ("F2", second)) if bar is not None
    }
    contacts = find_contacts(model.beams, model.members)
    asks = by_bars({beam.key: beam for beam in model.beams}, placed)
    assert len(find_lines(model, contacts, {}, {}, asks).lines) == lines


def test_beams_that_cross_over_a_column_are_both_carried_by_it() -> None:
    model = read([
        lying("X1", (0, 0, 3000), (8000, 0, 3000)), column("1", 200, 0), column("2", 7800, 0),
        lying("X2", (4000, -4000, 3000), (4000, 4000, 3000)), column("M", 4000, 0),
        column("3", 4000, -3800), column("4", 4000, 3800),
    ])  # fmt: skip
    stood = stand(model)
    assert not stood.lines.doubts
    rows_near(stood.rows("X1")[1:2], [("between", 4000, 3800, 4200, "M", BELOW, True)])
    assert [len(line) for line in stood.spans()] == [2, 2]


def test_beams_off_the_line_do_not_go_on_into_each_other() -> None:
    tall = (0.0, 6000.0)
    for off, level, expected in ((0, 0, 1), (40, 0, 1), (120, 0, 2), (0, 40, 1), (0, 150, 2)):
        members = [
            lying("A", (200, 0, 3000), (5800, 0, 3000)),
            lying("B", (6200, off, 3000 + level), (11800, off, 3000 + level)),
            column("1", 0, 0, tall), column("2", 6000, 0, tall), column("3", 12000, 0, tall),
        ]  # fmt: skip
        assert len(stand(read(members)).lines.lines) == expected, (off, level)


def test_a_wall_of_many_beams_joins_only_those_in_line() -> None:
    walls = [
        block(f"W{n}", (x, 30000), (300, 60000), (0, 3000), "IfcWall")
        for n, x in enumerate((0, 5000, 10000))
    ]
    beams = [
        lying(f"{n}-{side}", (x, 1500 * n, 3000), (x + 5000, 1500 * n, 3000))
        for n in range(1, 40)
        for side, x in (("a", 0), ("b", 5000))
    ]
    stood = stand(read([*walls, *beams]), load_bearing=["W0", "W1", "W2"])
    assert sorted(tuple(span[0] for span in line) for line in stood.spans()) == sorted(
        (f"{n}-a", f"{n}-b") for n in range(1, 40)
    )


def test_beams_that_cross_at_one_level_are_both_told() -> None:
    stood = building(Setting())
    told = {stood.names[key]: reasons for key, reasons in stood.lines.doubts.items()}
    assert set(told) == {"X1", "X2"}
    assert "X2 (IfcBeam) crosses it at one level at x = 4.00 m" in told["X1"][0].text
    assert not told["X1"][0].blocking


def test_what_carries_comes_before_what_it_carries() -> None:
    stood = building(Setting())
    place = {key: n for n, key in enumerate(stood.lines.order)}
    for key, seats in stood.lines.seats.items():
        for seat in seats:
            if seat.carrier_beam and not seat.doubt:
                assert place[seat.carrier_beam] < place[key]
    assert stood.key("G1") in place
    assert stood.key("AIR") not in place


def test_beams_on_beams_that_nothing_carries_do_not_stand() -> None:
    model = read(girders())
    model = replace(model, members=tuple(m for m in model.members if not m.name.startswith("H2")))
    stood = stand(model)
    assert {stood.names[key] for key in stood.lines.unknown} == {"G2", "S1", "S2", "TOP"}
    assert "nothing that could carry it" in stood.why("G2")
    assert "G2 (IfcBeam): nothing shows that it is carried" in stood.why("S1")


def pinwheel(columns: Sequence[int]) -> list[Maker]:
    """Four beams of which each frames into the side of the next; some have outer columns."""
    outward = [((-150, 0), (9000, 0)), ((6000, -150), (6000, 9000)),
               ((6150, 6000), (-3000, 6000)), ((0, 6150), (0, -3000))]  # fmt: skip
    found = []
    for n, ((x0, y0), (x1, y1)) in enumerate(outward):
        length = math.dist((x0, y0), (x1, y1))
        u, v = (x1 - x0) / length, (y1 - y0) / length
        start = (x0 + 300 * u, y0 + 300 * v, 3000)
        found.append(lying(f"R{n}", start, (x1, y1, 3000)))
        if n in columns:
            found.append(column(f"C{n}", x1 - 200 * u, y1 - 200 * v))
    return found


def test_a_ring_of_beams_holds_itself_up_by_none() -> None:
    stood = stand(read(pinwheel([0, 1, 2, 3])))
    assert {stood.names[key] for key in stood.lines.unknown} == {"R0", "R1", "R2", "R3"}


def test_a_beam_is_not_carried_by_what_it_carries() -> None:
    """One of the ring stands on columns of its own: the seat that closes the ring is refused."""
    own = pinwheel([0, 1, 2, 3])
    stood = stand(read([*own, column("EXTRA", 3000, 0)]))
    assert "R0" in {stood.names[key] for key in stood.lines.unknown}
    assert "is itself carried by what this beam carries" in stood.why("R0")
    assert {stood.names[key] for key in stood.lines.unknown} == {"R0"}


@pytest.mark.parametrize(
    ("said", "kinds"),
    [
        ({}, (PIN, PIN)),
        ({"start": "fixed"}, (FIX, PIN)),
        ({"start": "fixed", "end": "free"}, (FIX, FREE)),
        ({"end": "pinned"}, (PIN, PIN)),
    ],
)
def test_the_brief_may_say_otherwise(said: dict[str, str], kinds: tuple[str, str]) -> None:
    stood = stand(read(girders()), stated={"G1": said})  # type: ignore[dict-item]
    (line,) = [line for line in stood.spans() if line[0][0] == "G1"]
    assert (line[0][3], line[-1][4]) == kinds


def test_the_brief_may_hold_a_beam_in_the_air() -> None:
    model = read([lying("AIR", (0, 0, 3000), (4000, 0, 3000))])
    pinned = stand(model, stated={"AIR": {"start": "pinned", "end": "pinned"}})
    rows_near(pinned.spans()[0], [("AIR", 0, 4000, PIN, PIN)])
    fixed = stand(model, stated={"AIR": {"start": "free", "end": "fixed"}})
    rows_near(fixed.spans()[0], [("AIR", 0, 4000, FREE, FIX)])
    assert len(fixed.told("AIR")) == 2
    assert fixed.told("AIR")[0].startswith("held at its end by the brief alone")


@pytest.mark.parametrize(("far", "factor"), [("fixed", 4.0), ("pinned", 3.0)])
@pytest.mark.parametrize("setting", SETTINGS[:3], ids=str)
def test_columns_above_and_below_resist_turning(
    far: FarEnd, factor: float, setting: Setting
) -> None:
    """A column 300 x 500, long side along the beam, 3000 below the soffit and 2400 above the top;
    the beam is 600 deep. I = 300 * 500^3 / 12; lengths 3300 and 2700 to its middle."""
    members = [
        lying("A", (0, 0, 3000), (6000, 0, 3000)),
        block("under", (200, 0), (500, 300), (0, 3000)),
        block("over", (200, 0), (500, 300), (3600, 6000)),
        block("through", (5900, 0), (400, 400), (0, 6000)),
    ]
    stood = stand(read(members, setting))
    beam, contacts = stood.beam("A"), find_contacts(stood.model.beams, stood.model.members)
    by_step = {member.step_id: member for member in stood.model.members}
    first, last = stood.lines.seats[beam.key]
    found = [
        column_stiffness(beam, seat, contacts[beam.key], by_step, far) for seat in (first, last)
    ]
    lengths = 1 / 3300 + 1 / 2700
    assert found[0] == pytest.approx(factor * 300 * 500**3 / 12 * lengths, rel=1e-6)
    assert found[1] == pytest.approx(factor * 400 * 400**3 / 12 * lengths, rel=1e-6)


def test_a_column_turned_by_45_degrees_is_as_stiff_as_its_outline() -> None:
    """A rectangle b x h at 45 degrees: (b h^3 + h b^3) / 24."""
    members = [lying("A", (0, 0, 3000), (6000, 0, 3000)), column("far", 5800, 0)]
    model = read([*members, block("near", (200, 0), (300, 500), (0, 3000))])
    c = math.sqrt(0.5)
    axes = ((c, c, 0.0), (-c, c, 0.0), (0.0, 0.0, 1.0))
    turned = tuple(
        replace(m, box=replace(m.box, axes=axes, half=(150.0, 250.0, 1500.0)))
        if m.name == "near"
        else m
        for m in model.members
    )
    model = replace(model, members=turned)
    stood = stand(model)
    beam = stood.beam("A")
    contacts = find_contacts(model.beams, model.members)[beam.key]
    by_step = {member.step_id: member for member in model.members}
    found = column_stiffness(beam, stood.lines.seats[beam.key][0], contacts, by_step, "fixed")
    inertia = (300 * 500**3 + 500 * 300**3) / 24
    assert found == pytest.approx(4 * inertia / 3300, rel=1e-6)


def test_one_element_over_columns_needs_no_joint() -> None:
    stood = stand(read(one_over_three_columns()), through=False)
    assert len(stood.spans()[0]) == 3


@pytest.mark.parametrize(
    ("name", "kind"), [("PART", "IfcWall"), ("POST", "IfcMember"), ("COL", "IfcColumn")]
)
def test_a_partition_or_a_mullion_under_a_beam_carries_nothing_unless_told(
    name: str, kind: str
) -> None:
    """A wall or a post that ends under the soffit may only fill the space; a column carries."""
    ends = [lying("A", (0, 0, 3000), (8000, 0, 3000)), column("1", 200, 0), column("2", 7800, 0)]
    model = read([*ends, block(name, (3000, 0), (100, 100), (0, 3000), kind)])
    told = stand(model, load_bearing=[name])
    rows_near(told.spans()[0], [("A", 200, 3000, PIN, ON), ("A", 3000, 7800, ON, PIN)])
    silent = stand(model)
    if kind == "IfcColumn":
        assert silent.spans() == told.spans()
    else:
        assert "nothing says that it carries" in silent.why("A")
        assert f'write ignore = ["{name}"] under [[supports]]' in silent.why("A")


def test_an_infill_wall_between_columns_shortens_no_span() -> None:
    ends = [lying("A", (0, 0, 3000), (8000, 0, 3000)), column("1", 200, 0), column("2", 7800, 0)]
    for low, high in ((400, 7600), (0, 4000), (0, 8000)):
        wall = block("W", ((low + high) / 2, 0), (high - low, 200), (0, 3000), "IfcWall")
        stood = stand(read([*ends, wall]))
        assert "W (IfcWall)" in stood.why("A"), (low, high)


def test_a_mullion_beside_a_column_does_not_take_its_place() -> None:
    """The beam meets the column's face; a post under its end is narrower and may carry nothing."""
    tall = (0.0, 6000.0)
    model = read([
        lying("A", (200, 0, 3000), (5800, 0, 3000)), column("1", 0, 0, tall),
        column("2", 6000, 0, tall), block("M", (250, 0), (100, 100), (0, 3000), "IfcMember"),
    ])  # fmt: skip
    stood = stand(model)
    first = stood.lines.seats[stood.key("A")][0]
    assert (first.carrier_name, first.x, first.others) == (
        "1 (IfcColumn)", pytest.approx(-200), ("M (IfcMember)",),
    )  # fmt: skip


def test_a_beam_that_leans_on_one_of_unknown_supports_is_unknown_too() -> None:
    """T3 hangs over from T2; a partition under T2 leaves open how that stands."""
    wall = block("W", (9000, 10000), (100, 2000), (0, 3000), "IfcWall")
    stood = stand(read([*three_over_three_columns(), wall]))
    assert "W (IfcWall)" in stood.why("T2")
    assert "it stands only as it goes on into T2 (IfcBeam)" in stood.why("T3")
    (line,) = stood.spans()
    rows_near(line, [("T1", 200, 6200, PIN, PIN)])
    assert stood.told("T1")[-1].endswith(
        "takes no moment from it: the other's supports are unknown"
    )


def test_what_hangs_over_may_carry_others() -> None:
    """A beam rests on the tip of T3 and on a column; without bars over D3 nothing holds either."""
    members = [
        *three_over_three_columns(),
        lying("Z", (13500, 9850, 3600), (13500, 14000, 3600)),
        column("Y", 13500, 13800, (0.0, 3600.0)),
    ]
    model = read(members)
    stood = stand(model)
    assert [span[3:] for line in stood.spans() for span in line if span[0] == "Z"] == [(PIN, PIN)]
    order = [stood.names[key] for key in stood.lines.order if key in stood.names]
    assert order.index("T3") < order.index("Z")
    loose = stand(model, through=False)
    assert "T3 (IfcBeam): nothing shows that it is carried" in loose.why("Z")


@pytest.mark.parametrize("shift", [-9.0, -4.0, 4.0, 9.0])
def test_gaps_within_the_tolerance_change_no_line(shift: float) -> None:
    """Columns drawn a little too high or too low, beams a little short or long."""
    members = [
        lying("A", (200 + shift, 0, 3000), (6000, 0, 3000)),
        lying("B", (6000 + shift / 2, 0, 3000), (12000, 0, 3000)),
        column("1", 0, 0, (0.0, 6000.0)),
        column("2", 6000, 0, (0.0, 3000.0 + shift)),
        column("3", 11800, 0, (0.0, 3000.0 + shift)),
    ]
    (line,) = stand(read(members)).spans()
    assert [span[0] for span in line] == ["A", "B"]
    assert [span[3:] for span in line] == [(PIN, ON), (ON, PIN)]
    lengths = [span[2] - span[1] for span in line]
    assert lengths == pytest.approx([6000, 5800], abs=abs(shift))


def test_what_stands_askew_is_measured_on_the_axis() -> None:
    """Square columns of 400 at 45 degrees: 400 sqrt(2) / 2 on either side along the axis through
    their middle. A girder 300 wide at 60 degrees: 150 / sin 60 on either side of its middle."""
    c, turn = math.sqrt(0.5), math.radians(60.0)
    model = read([
        lying("A", (0, 0, 3000), (8000, 0, 3000)),
        column("1", 0, 0), column("2", 4000, 0),
        lying("G", (8000 - 3000 * math.cos(turn), -3000 * math.sin(turn), 2400),
              (8000 + 3000 * math.cos(turn), 3000 * math.sin(turn), 2400)),
        column("3", 8000 - 2900 * math.cos(turn), -2900 * math.sin(turn), (0.0, 2400.0)),
        column("4", 8000 + 2900 * math.cos(turn), 2900 * math.sin(turn), (0.0, 2400.0)),
    ])  # fmt: skip
    axes = ((c, c, 0.0), (-c, c, 0.0), (0.0, 0.0, 1.0))
    turned = tuple(
        replace(m, box=replace(m.box, axes=axes)) if m.name in ("1", "2") else m
        for m in model.members
    )
    reach, girder = 200 * math.sqrt(2), 150 / math.sin(turn)
    seats = stand(replace(model, members=turned)).rows("A")
    assert [row[2:4] for row in seats] == [
        pytest.approx((-reach, reach), abs=0.01),
        pytest.approx((4000 - reach, 4000 + reach), abs=0.01),
        pytest.approx((8000 - girder, 8000 + girder), abs=0.01),
    ]


def test_on_a_ledge_a_beam_bears_no_farther_in_than_its_end() -> None:
    """The box of an L does not tell where in it a beam that reaches into it bears."""

    def ell(building: Building, setting: Setting) -> None:
        shape = building.outline((-300, 0), (300, 0), (300, 700), (0, 700), (0, 300), (-300, 300))
        solid = building.extrusion(shape, 6000)
        place = building.placement((0, -3000, 2400), (0, 1, 0), (-1, 0, 0))
        building.beam(solid, placement=place, Name="L")

    members = [
        lying("A", (50, 0, 2700), (6000, 0, 2700), 400), column("far", 5800, 0, (0.0, 2700.0)),
        ell, column("a", 0, -2800, (0.0, 2400.0)), column("b", 0, 2800, (0.0, 2400.0)),
    ]  # fmt: skip
    stood = stand(read(members))
    first = stood.rows("A")[0]
    assert first[4] == "L"
    assert first[3] == pytest.approx(0.0)
    assert first[1] <= 0.0


def test_a_pad_on_a_column_bears_no_farther_in_than_the_pad() -> None:
    """The column's nib is drawn up behind the beam's end: its box goes past the pad."""
    members = [
        lying("A", (0, 0, 3000), (6000, 0, 3000)),
        column("1", 200, 0, (0.0, 3400.0)), column("2", 5800, 0, (0.0, 3400.0)),
        block("P", (75, 0), (150, 300), (2980, 3000), "IfcFooting"),
        block("Q", (5900, 0), (100, 300), (2980, 3000), "IfcFooting"),
    ]  # fmt: skip
    rows = stand(read(members)).rows("A")
    assert [row[4] for row in rows] == ["1", "2"]
    assert (rows[0][3], rows[1][2]) == pytest.approx((150, 5850))
