"""Slabs that act as flanges of beams: what is found, what counts, and what never does."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from shapely import LineString, Polygon

from ifccheck.beam import Axis, Beam, Box, Flange, Member, Outline, Run, ShearLoss, Slab
from ifccheck.frame.flanges import LOWER_HALF, NO_MEETING, Meeting, Slabs
from ifccheck.frame.net_outlines import with_flanges
from ifccheck.frame.reaches import Reach, Side, bridged, reaches, spread
from ifccheck.frame.slab_flanges import NOT_BESIDE, Asked, counted
from ifccheck.mechanics.overhangs import overhangs
from ifccheck.rating.assembly import frame_of
from tests.made_subjects import CASES, line, rated, subject
from tests.models import (
    BEARINGS,
    MadeBeam,
    MadeSlab,
    Setting,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
    state,
    tee,
)

LENGTH, WIDTH, DEPTH = 6000.0, 300.0, 600.0


def made_beam(key: str = "B", y: float = 0.0, step: int = 1, **changes: Any) -> Beam:
    """A beam 300 x 600 along X, its soffit at level 0, its middle at y."""
    beam = replace(subject(key).beam, step_id=step, name=key)
    axis = Axis((0.0, y, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0), LENGTH)
    return replace(beam, axis=axis, **changes)


def member_of(beam: Beam, ifc_class: str = "IfcBeam") -> Member:
    assert beam.axis is not None
    x, y, z = beam.axis.origin
    box = Box((x + LENGTH / 2, y, z + DEPTH / 2), (beam.axis.x, beam.axis.y, beam.axis.z),
              (LENGTH / 2, WIDTH / 2, DEPTH / 2))  # fmt: skip
    return Member(beam.step_id, beam.guid, ifc_class, beam.name, "Level 1", box)


def across(x: float, step: int = 50, low: float = 0.0, high: float = DEPTH) -> Member:
    """A beam across, 200 wide."""
    box = Box((x, 0.0, (low + high) / 2), ((0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), (0.0, 0.0, 1.0)),
              (9000.0, 100.0, (high - low) / 2))  # fmt: skip
    return Member(step, f"across {step}", "IfcBeam", f"across {step}", "Level 1", box)


def made_slab(
    x: tuple[float, float] = (0.0, LENGTH), y: tuple[float, float] = (150.0, 3000.0),
    z: tuple[float, float] = (450.0, 600.0), *voids: tuple[float, float, float, float],
    **changes: Any,
) -> Slab:  # fmt: skip
    rings = [((x[0], y[0]), (x[1], y[0]), (x[1], y[1]), (x[0], y[1]))]
    rings += [((a, c), (b, c), (b, d), (a, d)) for a, b, c, d in voids]
    return replace(Slab(90, "S-1 (IfcSlab)", tuple(rings), *z, None), **changes)


def met(slab: Slab, *others: Member, beam: Beam | None = None) -> Meeting:
    beam = beam or made_beam()
    return met_by(beam, [slab], [member_of(beam), *others])


def met_by(beam: Beam, slabs: Sequence[Slab], members: Sequence[Member], *more: Beam) -> Meeting:
    return Slabs([beam, *more], slabs, members).meeting(beam)


def boxes(meeting: Meeting) -> list[tuple[float, ...]]:
    return [(f.start, f.end, f.right, f.left, f.bottom, f.top) for f in meeting.flanges]


# What meets --------------------------------------------------------------------------------------


def test_a_slab_at_the_side_reaches_to_its_edge() -> None:
    (flange,) = met(made_slab()).flanges
    assert (flange.start, flange.end) == pytest.approx((0, LENGTH))
    assert (flange.right, flange.left) == pytest.approx((150, 3000))
    assert (flange.bottom, flange.top) == pytest.approx((450, 600))
    assert flange.origin == "S-1 (IfcSlab), to its edge"


def test_a_slab_that_is_drawn_over_the_beam_lies_on_both_sides() -> None:
    both = met(made_slab(y=(-1000.0, 2000.0)))
    assert boxes(both) == [
        pytest.approx((0, LENGTH, 150, 2000, 450, 600)),
        pytest.approx((0, LENGTH, -1000, -150, 450, 600)),
    ]


def test_half_the_clear_distance_to_the_next_web() -> None:
    """Webs 300 wide at 3000 centres: 2700 clear, so 1350 on this side; a wall counts alike."""
    slab = made_slab(y=(-8000.0, 8000.0))
    right, left = made_beam("R", -3000.0, 2), made_beam("L", 2000.0, 3)
    found = met(slab, member_of(right), member_of(left, "IfcWall"))
    assert boxes(found) == [
        pytest.approx((0, LENGTH, 150, 150 + 850, 450, 600)),
        pytest.approx((0, LENGTH, -150 - 1350, -150, 450, 600)),
    ]
    assert found.flanges[0].origin.endswith("to half the clear distance to L (IfcWall)")


@pytest.mark.parametrize(
    ("low", "high", "counts"),
    [(0, 600, True), (-900, 445, True), (-900, 430, False), (700, 900, False)],
)
def test_a_next_web_carries_the_slab_at_its_level(low: float, high: float, counts: bool) -> None:
    other = member_of(made_beam("L", 2000.0, 3))
    other = replace(other, box=replace(other.box, centre=(3000.0, 2000.0, (low + high) / 2),
                                       half=(3000.0, 150.0, (high - low) / 2)))  # fmt: skip
    (flange,) = met(made_slab(), other).flanges
    assert flange.left == pytest.approx(1000.0 if counts else 3000.0)


@pytest.mark.parametrize(
    ("slab", "why"),
    [
        (made_slab(y=(161.0, 3000.0)), "a gap of 11 mm"),
        (made_slab(x=(6020.0, 9000.0)), "beyond its end"),
        (made_slab(z=(611.0, 800.0)), "above a gap"),
        (made_slab(z=(-200.0, -50.0)), "below"),
        (made_slab(y=(-150.0, 160.0)), "only over the beam itself"),
        (made_slab(z=(580.0, 600.0)), "thinner than 30 mm"),
    ],
)
def test_slabs_that_do_not_meet(slab: Slab, why: str) -> None:
    assert met(slab) == NO_MEETING, why


def test_a_small_gap_is_a_joint_of_the_drawing() -> None:
    (flange,) = met(made_slab(y=(159.0, 3000.0))).flanges
    assert flange.left == pytest.approx(3000.0)


def test_what_stands_above_the_top_is_left_out_and_lower_slabs_count() -> None:
    (raised,) = (f for f in met(made_slab(z=(500.0, 650.0))).flanges if not f.on_top)
    assert (raised.bottom, raised.top) == (500.0, 600.0)
    (lower,) = met(made_slab(z=(400.0, 550.0))).flanges
    assert (lower.bottom, lower.top) == (400.0, 550.0)
    outline = with_flanges(made_beam().runs, [lower])[0].outline
    assert overhangs(outline.rings) == pytest.approx((2850.0, 0.0, 150.0))


def test_a_slab_in_the_lower_half_counts_for_nothing() -> None:
    found = met(made_slab(z=(299.0, 450.0)))
    assert found.flanges == ()
    assert found.doubts == (f"S-1 (IfcSlab): {LOWER_HALF}",)
    assert met(made_slab(z=(300.0, 450.0))).flanges


def test_a_slab_on_top_must_cover_half_of_the_beam() -> None:
    found = met(made_slab(y=(-150.0, 900.0), z=(600.0, 750.0)))
    assert all(flange.on_top for flange in found.flanges)
    assert boxes(found) == [
        pytest.approx((0, LENGTH, 0, 900, 600, 750)),
        pytest.approx((0, LENGTH, -150, 0, 600, 750)),
    ]
    # from its middle on, for a panel may end there and another begin
    assert met(made_slab(y=(-100.0, 900.0), z=(600.0, 750.0))).flanges == found.flanges[:1]
    assert met(made_slab(y=(0.0, 900.0), z=(600.0, 750.0))).flanges == found.flanges[:1]
    assert met(made_slab(y=(20.0, 900.0), z=(600.0, 750.0))).flanges == ()
    panels = [
        made_slab(y=(0.0, 900.0), z=(600.0, 750.0)),
        made_slab(y=(-150.0, 0.0), z=(600.0, 750.0)),
    ]
    beam = made_beam()
    assert boxes(met_by(beam, panels, [member_of(beam)])) == boxes(found)
    left, _ = met(made_slab(y=(-150.0, 900.0), z=(608.0, 750.0))).flanges
    assert (left.bottom, left.top) == (600.0, 742.0)


def test_a_void_beside_the_beam_ends_the_flange_and_what_is_beyond_spreads() -> None:
    """A shaft 1000 long and 400 out: 250 of slab before it. Beyond its ends the flange grows at
    45 degrees, up to a tenth of the length."""
    found = met(made_slab((0.0, LENGTH), (150.0, 3000.0), (450.0, 600.0), (2000, 3000, 400, 800)))
    assert boxes(found) == [
        pytest.approx((0, 1650, 150, 3000, 450, 600)),
        pytest.approx((1650, 3350, 150, 400, 450, 600)),
        pytest.approx((3350, LENGTH, 150, 3000, 450, 600)),
    ]


def test_a_shaft_at_the_beam_leaves_no_flange_there() -> None:
    found = met(made_slab((0.0, LENGTH), (-150.0, 3000.0), (450.0, 600.0), (2000, 3000, 140, 800)))
    assert boxes(found) == [
        pytest.approx((0, 1400, 150, 3000, 450, 600)),
        pytest.approx((3600, LENGTH, 150, 3000, 450, 600)),
    ]


def test_a_slab_over_part_of_the_length_spreads_from_where_it_begins() -> None:
    (flange,) = met(made_slab(x=(1000.0, 7000.0))).flanges
    assert (flange.start, flange.end) == pytest.approx((1600.0, LENGTH))


def test_a_slanting_edge_counts_as_it_does_at_its_least() -> None:
    ring = ((0, 150), (6000, 150), (6000, 650), (3000, 1150), (0, 650))
    slab = replace(made_slab(), rings=(ring,))
    (one,) = met(slab).flanges
    assert one.left == pytest.approx(650.0, abs=0.2)


def test_panels_parted_by_a_concrete_beam_across_are_one_flange() -> None:
    beam, crossing = made_beam(), across(3000.0)
    slabs = [made_slab(x=(0.0, 2900.0)), made_slab(x=(3100.0, LENGTH), name="S-2 (IfcSlab)")]
    members = (member_of(beam), crossing)
    other = made_beam("across", 9999.0, crossing.step_id)
    whole = met_by(beam, slabs, members, other)
    assert [(f.start, f.end) for f in whole.flanges] == [
        pytest.approx((0, 3100)), pytest.approx((3100, LENGTH))
    ]  # fmt: skip
    steel = met_by(beam, slabs, members)
    assert [(f.start, f.end) for f in steel.flanges] == [
        pytest.approx((0, 2300)), pytest.approx((3700, LENGTH))
    ]  # fmt: skip
    shallow = met_by(beam, slabs, (member_of(beam), across(3000.0, low=500.0)), other)
    assert len(shallow.flanges) == 2
    assert shallow.flanges[0].end == pytest.approx(2300)


def test_a_beam_across_is_no_next_web() -> None:
    (flange,) = met(made_slab(), across(3000.0)).flanges
    assert flange.left == pytest.approx(3000.0)


def test_a_turned_building_has_the_same_flanges() -> None:
    """Turned by 30 degrees about the vertical, and moved."""
    c, s = np.cos(0.5), np.sin(0.5)

    def turned(x: float, y: float) -> tuple[float, float]:
        return (c * x - s * y + 1e5, s * x + c * y - 4e4)

    beam, slab = made_beam(), made_slab((500.0, LENGTH), (-2000.0, 3000.0))
    plain = met(slab, beam=beam)
    axis = Axis((*turned(0, 0), 250.0), (c, s, 0), (-s, c, 0), (0, 0, 1), LENGTH)
    ring = tuple(turned(x, y) for x, y in slab.rings[0])
    moved = met(
        replace(slab, rings=(ring,), bottom=700.0, top=850.0), beam=replace(beam, axis=axis)
    )
    for one, other in zip(boxes(plain), boxes(moved), strict=True):
        assert other == pytest.approx(one, abs=1e-6)


def test_beams_on_a_slope_and_without_a_body_meet_nothing() -> None:
    beam = made_beam()
    assert beam.axis is not None
    slope = replace(beam, axis=replace(beam.axis, x=(0.99, 0.0, 0.14)))
    assert met(made_slab(), beam=slope) == NO_MEETING
    bare = replace(beam, axis=None, runs=())
    assert met_by(bare, [made_slab()], [member_of(beam)]) == NO_MEETING


def test_a_doubtful_slab_is_named_and_counts_for_nothing() -> None:
    found = met(made_slab(doubt="it is of timber"))
    assert found == Meeting((), ("S-1 (IfcSlab): it is of timber",))


def test_where_the_section_varies_no_slab_counts() -> None:
    beam = made_beam()
    run = replace(beam.runs[0], outline_end=beam.runs[0].outline)
    found = met(made_slab(), beam=replace(beam, runs=(run,)))
    assert found.flanges == ()
    assert "varies" in found.doubts[0]


TEE = Outline((((-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-600, 600), (-600, 450),
                (-150, 450)),))  # fmt: skip
"""A beam with a flange of its own, 450 beyond its web on both sides"""


def tee_member(beam: Beam) -> Member:
    member = member_of(beam)
    half = (LENGTH / 2, 600.0, DEPTH / 2)
    return replace(member, box=replace(member.box, half=half))


def test_half_the_clear_distance_is_measured_from_web_to_web() -> None:
    """Webs 300 wide at 3000 centres: 2700 clear. A T with a flange of 450 of its own reaches 900
    beyond that to the middle, and what is beside it as far as it would reach beside any web."""
    wide = made_beam(runs=(Run(0.0, LENGTH, TEE),))
    slim = made_beam("R", 3000.0, 2)
    slab = made_slab(y=(600.0, 2850.0))
    (flange,) = met_by(wide, [slab], [tee_member(wide), member_of(slim)], slim).flanges
    assert (flange.right, flange.left) == pytest.approx((600, 1500))
    (other,) = met_by(slim, [slab], [tee_member(wide), member_of(slim)], wide).flanges
    assert (other.right, other.left) == pytest.approx((-1500, -150))
    twin = made_beam("R", 3000.0, 2, runs=(Run(0.0, LENGTH, TEE),))
    (alike,) = met_by(wide, [made_slab(y=(600.0, 2400.0))], [tee_member(wide), tee_member(twin)],
                      twin).flanges  # fmt: skip
    assert alike.left == pytest.approx(1500)


def test_half_way_lies_within_a_wide_flange_of_its_own() -> None:
    """Webs 900 apart: half way, 450, is where the flange of its own ends."""
    wide = made_beam(runs=(Run(0.0, LENGTH, TEE),))
    slim = made_beam("R", 1200.0, 2)
    slab = made_slab(y=(600.0, 1050.0))
    assert met_by(wide, [slab], [tee_member(wide), member_of(slim)], slim).flanges == ()


# Reaches -----------------------------------------------------------------------------------------


def test_reaches_against_shapely() -> None:
    """The least overhang of a random polygon at many places is never less than what is found."""
    rng = np.random.default_rng(7)
    side = Side(150.0, 150.0, 140.0, 160.0, 30.0)
    found_any = 0
    for _ in range(30):
        xs = np.sort(rng.uniform(0.0, 6000.0, 6))
        ys = rng.uniform(250.0, 3000.0, 8)
        top = [(x, y) for x, y in zip((0.0, *xs, 6000.0), ys, strict=True)]
        ring = ((0.0, 150.0), (6000.0, 150.0), *reversed(top))
        plan = Polygon(ring)
        for found in reaches(made_slab(), (ring,), [], side, 0.0, 6000.0):
            found_any += 1
            for x in np.linspace(found.start + 1.0, found.end - 1.0, 20):
                deep = plan.intersection(LineString([(x, 0.0), (x, 9e3)])).length
                assert found.reach <= deep + 1.0
    assert found_any >= 30


def test_spreading_never_adds() -> None:
    slab = made_slab()
    rng = np.random.default_rng(3)
    for _ in range(50):
        edges = np.sort(rng.uniform(0.0, 6000.0, 6))
        found = [
            Reach(a, b, r, "", slab)
            for a, b, r in zip(edges[:-1], edges[1:], rng.uniform(0.0, 2000.0, 5), strict=True)
        ]

        def at(rows, x):
            return max((row.reach for row in rows if row.start <= x <= row.end), default=0.0)

        after = spread(found, 6000.0, 600.0)
        for x in np.linspace(1.0, 5999.0, 200):
            assert at(after, x) <= at(found, x) + 1e-9
            # nowhere more than what lies beside plus the distance to it
            for y in np.linspace(max(x - 550.0, 5.0), min(x + 550.0, 5995.0), 12):
                if at(after, x) <= 600.0:
                    assert at(after, x) <= at(found, y) + abs(x - y) + 1.0


def test_bridging_needs_concrete_over_the_whole_gap() -> None:
    slab = made_slab()
    panels = [Reach(0.0, 2900.0, 900.0, "", slab), Reach(3100.0, 6000.0, 700.0, "", slab)]
    beam = (((2900, -1000), (3100, -1000), (3100, 1000), (2900, 1000)),)
    assert [one.reach for one in bridged(panels, [beam], 150.0)] == [900.0, 700.0]
    narrow = (((2950, -1000), (3050, -1000), (3050, 1000), (2950, 1000)),)
    assert bridged(panels, [narrow], 150.0) == panels
    away = (((2900, 300), (3100, 300), (3100, 1000), (2900, 1000)),)
    assert bridged(panels, [away], 150.0) == panels


# What counts -------------------------------------------------------------------------------------


def asked(meeting: Meeting, wanted: Any = "level") -> Asked:
    near = tuple(dict.fromkeys(f.origin.partition(", to ")[0] for f in meeting.flanges))
    return Asked(near, meeting, wanted, "brief, test", 30.0, 24e-6, {"self", "dead"})


ON_TOP = made_slab(y=(-900.0, 900.0), z=(600.0, 750.0))


@pytest.mark.parametrize(
    ("slab", "wanted", "count"),
    [
        (made_slab(), "none", 0),
        (made_slab(), "level", 1),
        (made_slab(), "on top", 1),
        (ON_TOP, "none", 0),
        (ON_TOP, "level", 0),
        (ON_TOP, "on top", 2),
        (made_slab(strength=29.0), "level", 0),
        (made_slab(strength=30.0), "level", 1),
    ],
)
def test_what_counts(slab: Slab, wanted: str, count: int) -> None:
    found = counted(made_beam(), asked(met(slab), wanted), ())
    assert len(found.flanges) == count
    assert found.remarks
    told = " ".join(remark.text for remark in found.remarks)
    assert ("not counted" in told) == (count == 0)
    assert ("must be in the loads" in told) == (count > 0)


def test_precast_beams_never_have_a_slab_as_flange() -> None:
    precast = made_beam(precast='name "Precast 300x600"')
    found = counted(precast, asked(met(made_slab())), ())
    assert found.flanges == ()
    assert "never counted as a flange of a precast beam" in found.remarks[0].text


def test_nothing_is_said_where_no_slab_is_met() -> None:
    assert counted(made_beam(), asked(NO_MEETING), ()).remarks == ()
    assert counted(made_beam(), asked(Meeting((), ("S: timber",)), "none"), ()).remarks == ()


def plate(name: str, x: float, z: float, ifc_class: str = "IfcSlab") -> Member:
    """A slab of 6 m by 3 m beside the beam, 150 thick."""
    box = Box((x, 1650.0, z), ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)),
              (3000.0, 1500.0, 75.0))  # fmt: skip
    return Member(hash(name), name, ifc_class, name, "Level 1", box)


def test_a_slab_that_is_asked_for_in_vain_is_told() -> None:
    """One that slopes, or of a body that is no plate, is not read as a slab at all."""
    near = replace(asked(met(made_slab())), near=("S-1 (IfcSlab)", "ramp (IfcSlab)"))
    texts = [remark.text for remark in counted(made_beam(), near, ()).remarks]
    assert [text for text in texts if "not counted" in text] == [
        f"slab is not counted as a flange: ramp (IfcSlab): {NOT_BESIDE}"
    ]


def test_slabs_near_are_named_by_their_boxes() -> None:
    beam = made_beam()
    members = [
        member_of(beam), plate("S-1", 3000.0, 525.0), plate("far", 9020.0, 525.0),
        plate("above", 3000.0, 690.0), plate("below", 3000.0, -80.0),
        plate("covering", 3000.0, 525.0, "IfcCovering"),
    ]  # fmt: skip
    assert Slabs([beam], (), members).names_near(beam) == ("S-1 (IfcSlab)",)


def test_the_weight_of_the_slab_as_it_is_entered_is_enough() -> None:
    """10.26 kN/m, of which three digits were written; beyond that the figures must differ."""
    said, weight = asked(met(made_slab())), 2.85 * 0.15 * 24.0
    for share, light in ((0.996, False), (0.994, True)):
        loads = (line("floor", share * weight)._replace(case="dead"),)
        texts = [reason.text for reason in counted(made_beam(), said, loads).reasons]
        assert len(texts) == light
    given, needed = re.findall(r"([0-9.]+) kN", texts[0])
    assert float(given) < float(needed)


@pytest.mark.parametrize(("intensity", "light"), [(10.0, True), (10.5, False)])
def test_permanent_loads_must_be_able_to_hold_the_slab(intensity: float, light: bool) -> None:
    """2850 x 150 mm at 24 kN/m3: 10.26 kN/m."""
    loads = (line("floor", intensity)._replace(case="dead"), line("press", 50.0))
    said = asked(met(made_slab()))
    found = counted(made_beam(), said, loads)
    texts = [reason.text for reason in found.reasons if not reason.blocking]
    assert len(texts) == light
    # the engineer may say that something else carries it
    stated = counted(made_beam(), replace(said, loads_complete=True), loads)
    assert not stated.reasons
    assert [one.text for one in stated.remarks if one.kind == "doubt"] == texts
    if light:
        assert "60.0 kN in all, cannot hold" in texts[0]
        assert "61.6 kN" in texts[0]


def test_slab_on_top_carries_no_shear() -> None:
    found = counted(made_beam(), asked(met(ON_TOP), "on top"), ())
    assert found.losses == (ShearLoss(0.0, LENGTH, 150.0),)


# Through the whole program -----------------------------------------------------------------------

SPAN_X = (-150.0, 6150.0)


def hall(outline: Any, name: str = "B-1", **changes: Any) -> MadeBeam:
    bars = {"BottomBars": "4-25M", "TopBars": "2-15M", "Stirrups": "2 legs 10M @ 200"}
    return replace(MadeBeam(outline, 6300.0, name, bars, origin=(-150.0, 0.0, 3000.0)), **changes)


PLAIN = hall(rectangle(300, 600))
SLAB = MadeSlab(((-150, -1000), (6150, -1000), (6150, 1000), (-150, 1000)), 3450.0, 150.0)
FLOOR = (BEARINGS, load("floor", 'line = "12 kN/m"'), load("press", 'line = "8 kN/m"'))
ON = "[defaults]\nslab_flanges = true"


def text(*entries: str, flanges: bool = True) -> str:
    written = brief(*FLOOR, *entries)
    return written.replace("[defaults]", ON) if flanges else written


def rated_hall(
    folder: Path, beam: MadeBeam, slabs: Any = (SLAB,), written: str = "", **setting: Any
) -> dict[str, Any]:
    data = model(beam, slabs=slabs, setting=Setting(**setting))
    return answers(rate_model(folder, data, written or text()))[beam.mark]


def test_a_slab_beside_is_as_good_as_the_same_flange_in_the_outline(tmp_path: Path) -> None:
    """Flexure and shear alike; only the self weight of the slab is not there."""
    apart = rated_hall(tmp_path / "apart", PLAIN)
    whole = rated_hall(tmp_path / "whole", hall(tee(300, 600, 2000, 150)), ())
    for name in ("FlexureSagging", "Shear"):
        one, other = state(apart, name), state(whole, name)
        if name == "FlexureSagging":
            assert one["resistance"] == pytest.approx(other["resistance"], rel=1e-9)
        assert one["utilisation"] < other["utilisation"]
    none = rated_hall(tmp_path / "none", PLAIN, ())
    assert (
        state(apart, "FlexureSagging")["resistance"]
        > 1.02 * state(none, "FlexureSagging")["resistance"]
    )


def test_moment_resistance_with_a_slab_by_hand(tmp_path: Path) -> None:
    """Effective width 300 + 2 x 600 (a tenth of 6 m); the neutral axis lies above all the bars."""
    from ifccheck.mechanics.flexure import flexural_strength

    found = state(rated_hall(tmp_path, PLAIN), "FlexureSagging")
    strips = np.array([[[0.0, 150.0, 1500.0, 1500.0], [150.0, 600.0, 300.0, 300.0]]])
    depths = 600.0 - np.array([[63.9, 63.9 + 35.28 + 25.2, 600.0 - 40.0 - 11.3 - 8.0]])
    by_hand = flexural_strength(
        strips=strips, layer_depth=depths, layer_area=np.array([[1500.0, 500.0, 400.0]]),
        layer_yield=np.full((1, 3), 400.0), layer_diameter=np.array([[25.2, 25.2, 16.0]]),
        block_stress=0.805 * 0.65 * 30.0, block_factor=0.895, crushing_strain=0.0035,
        steel_modulus=200e3, steel_factor=0.85,
    )  # fmt: skip
    assert found["resistance"] == pytest.approx(float(by_hand.moment[0]), rel=1e-6)


def test_off_unless_asked_for(tmp_path: Path) -> None:
    off = rated_hall(tmp_path / "off", PLAIN, written=text(flanges=False))
    none = rated_hall(tmp_path / "none", PLAIN, (), text(flanges=False))
    assert state(off, "FlexureSagging")["resistance"] == state(none, "FlexureSagging")["resistance"]
    told = [remark["text"] for remark in off["remarks"]]
    assert any("slab is not counted as a flange: S-1 (IfcSlab)" in one for one in told)


def test_single_beams_may_say_otherwise(tmp_path: Path) -> None:
    yes = '[[beams]]\nbeams = ["B-1"]\nslab_flange = true\n'
    no = yes.replace("true", "false")
    on = rated_hall(tmp_path / "on", PLAIN, written=text(yes, flanges=False))
    off = rated_hall(tmp_path / "off", PLAIN, written=text(no))
    both = rated_hall(tmp_path / "both", PLAIN)
    strength = [state(each, "FlexureSagging")["resistance"] for each in (on, both, off)]
    assert strength[0] == strength[1] > 1.02 * strength[2]


def test_slab_on_top_only_where_stated(tmp_path: Path) -> None:
    slab = replace(SLAB, bottom=3600.0)
    stated = '[[beams]]\nbeams = ["B-1"]\nslab_flange = "on top"\n'
    on = rated_hall(tmp_path / "on", PLAIN, (slab,), text(stated))
    off = rated_hall(tmp_path / "off", PLAIN, (slab,))
    assert (
        state(on, "FlexureSagging")["resistance"] > 1.2 * state(off, "FlexureSagging")["resistance"]
    )
    # the beam's own web carries the shear, over no more of its depth than before
    assert state(on, "Shear")["resistance"] < 1.05 * state(off, "Shear")["resistance"]
    assert any('slab_flange = "on top"' in remark["text"] for remark in off["remarks"])


def test_a_precast_beam_rates_as_if_there_were_no_slab(tmp_path: Path) -> None:
    precast = rated_hall(tmp_path / "precast", hall(rectangle(300, 600), "Precast B-1"))
    alone = rated_hall(tmp_path / "alone", PLAIN, ())
    for name in ("FlexureSagging", "Shear"):
        assert state(precast, name)["utilisation"] == state(alone, name)["utilisation"]


def test_the_basis_lists_the_flange(tmp_path: Path) -> None:
    answer = rated_hall(tmp_path, PLAIN)
    (item,) = [item for item in answer["basis"] if item["name"] == "Flange"]
    assert "S-1 (IfcSlab), to its edge" in item["value"]
    assert item["source"] == "model; brief, defaults.slab_flanges"
    assert "y = 150 mm to 1000 mm" in item["value"]
    assert "y = -1000 mm to -150 mm" in item["value"]
    # a tenth of the span of 6 m, less than 12 times the thickness of 150
    (width,) = [item for item in answer["basis"] if item["name"] == "FlangeOverhangs"]
    assert width["value"].endswith(
        "x = 0 m to 6.30 m: 600 mm to the left of the web, 600 mm to the right"
    )
    assert "10.3.4" in width["source"]
    told = " ".join(remark["text"] for remark in answer["remarks"])
    assert "y = 150 mm to 1000 mm" in told
    assert "taken to be of" not in told  # the slab states its own strength
    assert "must be in the loads" in told
    assert answer["verdict"] == "not rated"
    assert answer["reasons"][0].startswith("weight of slab not included: ")


@pytest.mark.parametrize(
    "setting",
    [
        {"schema": "IFC2X3", "unit": "m"},
        {"schema": "IFC4X3", "unit": "inch"},
        {"angle": 217.0},
        {"angle": 37.0, "turned_by": "building"},
        {"mirrored": True},
        {"from_end": True},
    ],
)
def test_how_a_model_is_written_changes_nothing(tmp_path: Path, setting: dict[str, Any]) -> None:
    slab = replace(SLAB, ring=((-150, -700), (6150, -700), (6150, 1000), (-150, 1000)),
                   holes=(((2000, 600), (2600, 600), (2600, 900), (2000, 900)),))  # fmt: skip
    plain = rated_hall(tmp_path / "plain", PLAIN, (slab,))
    other = rated_hall(tmp_path / "other", PLAIN, (slab,), **setting)
    for one in plain["limit_states"]:
        found = state(other, one["name"])
        assert found["utilisation"] == pytest.approx(one["utilisation"], rel=1e-6)
        if one["resistance"] is not None:
            assert found["resistance"] == pytest.approx(one["resistance"], rel=1e-6)


def test_a_shaft_beside_the_beam_takes_the_flange_away_there(tmp_path: Path) -> None:
    shaft = ((2000, 100), (4000, 100), (4000, 900), (2000, 900))
    both = ((2000, -900), (4000, -900), (4000, -100), (2000, -100))
    whole = rated_hall(tmp_path / "whole", PLAIN)
    holed = rated_hall(tmp_path / "holed", PLAIN, (replace(SLAB, holes=(shaft, both)),))
    none = rated_hall(tmp_path / "none", PLAIN, ())
    strength = [state(each, "FlexureSagging")["resistance"] for each in (whole, holed, none)]
    assert strength[1] == pytest.approx(strength[2], rel=1e-9)
    assert strength[0] > strength[1]


def test_openings_and_slab_go_together() -> None:
    """The opening is taken off the section with its slab; self weight stays that of the beam."""
    from ifccheck.beam import Opening
    from ifccheck.frame.openings import net_of
    from ifccheck.frame.spans import Standing

    made = subject(loads=(line("floor", 5.0),))
    hole = Opening(2000.0, 2150.0, -150.0, 150.0, 225.0, 375.0, "rectangle")
    beam = replace(made_beam("beam"), openings=(hole,))
    slab = counted(beam, asked(met(made_slab(), beam=replace(beam, key="B"))), made.loads)
    standing = Standing(made.spans, (0.0, 0.0), "test")
    net = net_of(beam, standing, made.loads, made, slab)
    assert net.body is not None
    within = next(run for run in net.body.runs if run.whole)
    assert overhangs(within.outline.rings, within.whole.rings) == pytest.approx((2850, 0, 150))
    whole = replace(made, beam=beam, body=net.body)
    loads = frame_of([whole], CASES).loads
    own = loads.case == 0
    assert loads.value_start[own] == pytest.approx(0.3 * 0.6 * 24.0)
    batch, _ = rated(whole)
    assert batch.prepared.shear_loss.max() == pytest.approx(150.0)


def test_a_flange_box_joins_the_outline_of_a_battered_beam() -> None:
    outline = Outline((((-100, 0), (100, 0), (150, 600), (-150, 600)),))
    flange = Flange(0.0, LENGTH, 149.0, 1000.0, 450.0, 600.0, "S-1", None)
    (run,) = with_flanges((Run(0.0, LENGTH, outline),), [flange])
    assert len(run.outline.rings) == 1
