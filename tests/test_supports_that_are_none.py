"""What touches a beam and may carry nothing shortens no span."""

from __future__ import annotations

import pytest

from tests.frames_of_beams import SETTINGS, Maker, Setting, block, column, lying, read
from tests.test_beams_in_line import FIX, FREE, ON, PIN, Stood, rows_near, stand

TALL = (0.0, 6000.0)
KINDS = ("IfcWall", "IfcMember", "IfcColumn")


def cantilever(facade: Maker | None = None) -> list[Maker]:
    """Out of a wall that bears, 3 m up to the face of what may stand at its tip."""
    wall = block("W", (-150, 0), (300, 4000), TALL, "IfcWall", True)
    beam = lying("K", (0, 0, 3000), (3000, 0, 3000))
    return [wall, beam, *([facade] if facade else [])]


def at_the_tip(kind: str, bears: bool | None) -> Maker:
    return block("FACADE", (3100, 0), (200, 4000), TALL, kind, bears)


def propped(name: str, stood: Stood) -> bool:
    """Whether a beam spans between two supports."""
    ((span,),) = [line for line in stood.spans() if line[0][0] == name]
    return span[3:] == (PIN, PIN)


@pytest.mark.parametrize("setting", SETTINGS, ids=str)
@pytest.mark.parametrize("kind", KINDS)
def test_what_the_model_says_bears_no_load_holds_no_tip(kind: str, setting: Setting) -> None:
    stood = stand(read(cantilever(at_the_tip(kind, bears=False)), setting))
    rows_near(stood.spans()[0], [("K", 0, 3000, FIX, FREE)])


@pytest.mark.parametrize("setting", SETTINGS, ids=str)
@pytest.mark.parametrize("kind", KINDS)
def test_what_the_model_says_bears_load_holds_an_end(kind: str, setting: Setting) -> None:
    assert propped("K", stand(read(cantilever(at_the_tip(kind, bears=True)), setting)))


@pytest.mark.parametrize(
    ("kind", "common"), [("IfcWall", "Pset_WallCommon"), ("IfcMember", "Pset_MemberCommon")]
)
def test_of_a_facade_at_a_tip_somebody_must_say_whether_it_carries(kind: str, common: str) -> None:
    model = read(cantilever(at_the_tip(kind, None)))
    why = stand(model).why("K")
    assert why.startswith("supports unknown: at x = 3.10 m it touches only what may not carry it")
    assert f"FACADE ({kind}): nothing says that it carries" in why
    assert "load_bearing of [frame]" in why
    assert common in why
    assert propped("K", stand(model, load_bearing=["FACADE"]))


def test_a_wall_of_which_nothing_is_said_builds_nothing_in() -> None:
    wall = block("W", (-150, 0), (300, 4000), TALL, "IfcWall")
    model = read([wall, lying("K", (0, 0, 3000), (3000, 0, 3000))])
    assert "W (IfcWall): nothing says that it carries" in stand(model).why("K")
    rows_near(stand(model, load_bearing=["W"]).spans()[0], [("K", 0, 3000, FIX, FREE)])


def test_the_brief_does_not_overrule_a_model_that_says_it_bears_no_load() -> None:
    model = read(cantilever(at_the_tip("IfcWall", bears=False)))
    assert "the model says that it bears no load" in stand(model, load_bearing=["FACADE"]).why("K")


def on_columns(*more: Maker) -> list[Maker]:
    beam = lying("A", (0, 0, 3000), (8000, 0, 3000))
    return [beam, column("1", 200, 0), column("2", 7800, 0), *more]


def test_between_the_ends_the_model_tells_too() -> None:
    for bears, spans in ((True, 2), (False, 1)):
        for kind in KINDS:
            post = block("P", (3000, 0), (300, 300), (0, 3000), kind, bears)
            (line,) = stand(read(on_columns(post))).spans()
            assert len(line) == spans, (kind, bears)


def test_a_facade_at_an_end_that_a_column_holds_changes_nothing() -> None:
    facade = block("F", (8100, 0), (200, 4000), TALL, "IfcWall")
    (line,) = stand(read(on_columns(facade))).spans()
    rows_near(line, [("A", 200, 7800, PIN, PIN)])


def test_a_partition_at_a_tip_makes_no_end_of_the_column_beside_it() -> None:
    """The wall reaches from the beam's end to the column's face; without it the end hangs over."""
    beam = lying("A", (0, 0, 3000), (8000, 0, 3000))
    columns = [column("1", 1000, 0), column("2", 7800, 0)]
    wall = block("W", (400, 0), (800, 200), (0, 3000), "IfcWall")
    assert "W (IfcWall): nothing says" in stand(read([beam, *columns, wall])).why("A")
    bare = block("W", (400, 0), (800, 200), (0, 3000), "IfcWall", bears=False)
    (line,) = stand(read([beam, *columns, bare])).spans()
    rows_near(line, [("A", 0, 1000, FREE, ON), ("A", 1000, 7800, ON, PIN)])


@pytest.mark.parametrize("thick", [50.0, 100.0, 250.0])
def test_what_is_thinner_than_half_the_beams_depth_builds_nothing_in(thick: float) -> None:
    wall = block("W", (-thick / 2, 0), (thick, 4000), TALL, "IfcWall", bears=True)
    stood = stand(read([wall, lying("K", (0, 0, 3000), (2000, 0, 3000))]))
    assert "only W (IfcWall) carries it" in stood.why("K")
    assert "nothing shows that it holds a moment there" in stood.why("K")


# What columns stand on -----------------------------------------------------------------------


def weak_in_the_middle(*more: Maker) -> Stood:
    """On columns 7.6 m apart, with more at midspan."""
    return stand(read(on_columns(*more)))


AIRBORNE = {
    "a stub": block("P", (4000, 0), (400, 400), (2800, 3000)),
    "a hanger": block("P", (4000, 0), (400, 400), (2500, 6000)),
    "a column planted a little low": block("P", (4000, 0), (400, 400), (2994, 6000)),
    "a kicker": block("P", (4000, 0), (400, 400), (2900, 3000), "IfcFooting"),
    "a post that is no wider than a handrail's": block("P", (4000, 0), (40, 40), (0, 3000)),
    "a graze": block("P", (4000, 335), (400, 400), TALL),
    "a post of another class": block("P", (4000, 0), (120, 120), (2500, 3000), "IfcBeam"),
    "a member that bears": block("P", (4000, 0), (120, 120), (2500, 3000), "IfcMember", True),
}


@pytest.mark.parametrize("post", AIRBORNE.values(), ids=AIRBORNE)
def test_what_stands_on_nothing_or_hardly_touches_shortens_no_span(post: Maker) -> None:
    stood = weak_in_the_middle(post)
    assert not stood.spans()
    assert "it touches only what may not carry it (P (" in stood.why("A")


def test_the_brief_may_say_that_a_column_stands() -> None:
    stub = block("P", (4000, 0), (400, 400), (2800, 3000))
    silent = weak_in_the_middle(stub).why("A")
    assert (
        "nothing that the model shows carries it: if it stands, name it in load_bearing" in silent
    )
    (line,) = stand(read(on_columns(stub)), load_bearing=["P"]).spans()
    assert len(line) == 2


@pytest.mark.parametrize("gap", [-40.0, 0.0, 45.0])
@pytest.mark.parametrize("kind", ["IfcFooting", "IfcPile", "IfcSlab", "IfcColumn", "IfcWall"])
def test_a_column_stands_on_what_lies_under_its_foot(kind: str, gap: float) -> None:
    """1 m over the feet of the others; what is under it reaches down to theirs, or stands alone."""
    low = 0.0 if kind in ("IfcColumn", "IfcWall") else 700.0
    under = block("U", (4000, 0), (400, 400), (low, 1000 - gap), kind, None)
    (line,) = weak_in_the_middle(under, block("P", (4000, 0), (400, 400), (1000, 3000))).spans()
    assert len(line) == 2


def test_a_column_does_not_stand_on_what_lies_too_far_under_or_beside_its_foot() -> None:
    post = block("P", (4000, 0), (400, 400), (1000, 3000))
    for x, head in ((4000, 900), (4405, 1000)):
        under = block("U", (x, 0), (400, 400), (700, head), "IfcFooting")
        assert not weak_in_the_middle(under, post).spans()


def test_a_column_stands_on_a_beam_where_that_stands() -> None:
    post = block("P", (4000, 0), (400, 400), (2000, 3000))
    below = lying("B", (4000, -4000, 1400), (4000, 4000, 1400))
    feet = [column(name, 4000, y, (0.0, 1400.0)) for name, y in (("3", -3800), ("4", 3800))]
    lines = weak_in_the_middle(post, below, *feet).spans()
    assert sorted(len(line) for line in lines) == [1, 2]
    assert not weak_in_the_middle(post, below, feet[0]).spans()


def test_columns_of_storeys_stand_on_each_other() -> None:
    storeys = [(0.0, 3000.0), (3000.0, 6000.0), (6000.0, 9000.0)]
    posts = [column(f"{n}-{x}", x, 0, z) for n, z in enumerate(storeys) for x in (200, 7800)]
    upper = stand(read([lying("A", (0, 0, 9000), (8000, 0, 9000)), *posts])).spans()
    rows_near(upper[0], [("A", 200, 7800, PIN, PIN)])
    gone = [posts[0], *posts[2:]]
    why = stand(read([lying("A", (0, 0, 9000), (8000, 0, 9000)), *gone])).why("A")
    assert "2-7800 (IfcColumn): nothing that the model shows carries it" in why


@pytest.mark.parametrize(("common", "holds"), [(15.0, False), (180.0, False), (220.0, True)])
def test_an_end_face_counts_where_it_meets_a_third_of_the_depth(common: float, holds: bool) -> None:
    """The beam is 600 deep."""
    tall = block("1", (-200, 0), (400, 400), (0, 3000 + common))
    beam = lying("A", (0, 0, 3000), (8000, 0, 3000))
    stood = stand(read([beam, tall, column("2", 7800, 0)]))
    assert bool(stood.spans()) is holds
    if not holds:
        assert "less than a third of the depth" in stood.why("A")


def test_an_end_face_that_grazes_its_carrier_is_not_carried() -> None:
    girder = [
        lying("G", (0, 0, 3000), (8000, 0, 3000), 700),
        column("1", 200, 0),
        column("2", 7400, 0),
    ]
    for x, holds in ((7000, True), (8135, False)):
        beam = lying("S", (x, 150, 3100), (x, 5000, 3100))
        stood = stand(read([*girder, beam, column("3", x, 4800, (0.0, 3100.0))]))
        assert (stood.key("S") not in stood.lines.unknown) is holds


# Beams that cross ----------------------------------------------------------------------------


@pytest.mark.parametrize(("length", "carries"), [(7000.0, False), (2400.0, True)])
def test_the_deeper_of_two_that_cross_carries_where_it_is_stiffer_too(
    length: float, carries: bool
) -> None:
    """A beam of 1200 x 480 over 4.6 m through one of 250 x 650: by b h^3 / L^3 the deeper one is
    0.15 times as stiff at a length of 7 m and 4.6^3 / 2.4^3 x 0.52 = 3.6 times at 2.4 m; at a
    width of 600 mm it is 8.7 times as stiff."""
    width = 600.0 if carries else 250.0
    deep = lying("DEEP", (6000 - length / 2, 0, 3000), (6000 + length / 2, 0, 3000), 650, width)
    thin = lying("THIN", (6000, -2500, 3000), (6000, 2500, 3000), 480, 1200)
    feet = [column("1", 6200 - length / 2, 0), column("2", 5800 + length / 2, 0)]
    ends = [column("3", 6000, -2300), column("4", 6000, 2300)]
    stood = stand(read([deep, thin, *feet, *ends]))
    assert [row[4] for row in stood.rows("THIN")] == (["3", "DEEP", "4"] if carries else ["3", "4"])
    assert bool(stood.lines.doubts) is not carries
