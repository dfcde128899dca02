"""Described reinforcement laid out in the section, by geometry written out here."""

from __future__ import annotations

from dataclasses import replace
from itertools import permutations

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from ifccheck.beam import (
    Anchor,
    Axis,
    BarGroup,
    BarRow,
    Bars,
    Beam,
    DescribedZone,
    Given,
    Outline,
    Reason,
    Reinforcement,
    Run,
    Stirrups,
)
from ifccheck.detailing import choose_source, lay_out
from ifccheck.notation import parse_bars, parse_stirrups
from ifccheck.standards.csa_a23_3_14 import clear_spacing

LENGTH = 6000.0
ALL = ("schedule", "bars", "sections", "properties")


def rectangle(width: float, height: float) -> Outline:
    half = 0.5 * width
    return Outline((((-half, 0.0), (half, 0.0), (half, height), (-half, height)),))


T_SECTION = Outline(
    (
        (
            (-150.0, 0.0), (150.0, 0.0), (150.0, 480.0), (600.0, 480.0),
            (600.0, 600.0), (-600.0, 600.0), (-600.0, 480.0), (-150.0, 480.0),
        ),
    )
)  # fmt: skip
L_SECTION = Outline(
    (
        (
            (-450.0, 0.0), (-150.0, 0.0), (-150.0, 480.0), (450.0, 480.0),
            (450.0, 600.0), (-450.0, 600.0),
        ),
    )
)  # fmt: skip
I_SECTION = Outline(
    (
        (
            (-250.0, 0.0), (250.0, 0.0), (250.0, 200.0), (75.0, 250.0), (75.0, 650.0),
            (300.0, 700.0), (300.0, 850.0), (-300.0, 850.0), (-300.0, 700.0), (-75.0, 650.0),
            (-75.0, 250.0), (-250.0, 200.0),
        ),
    )
)  # fmt: skip
TRAPEZOID = Outline((((-150.0, 0.0), (150.0, 0.0), (250.0, 600.0), (-250.0, 600.0)),))
HOLLOW = Outline(
    (
        ((-300.0, 0.0), (300.0, 0.0), (300.0, 700.0), (-300.0, 700.0)),
        ((-150.0, 150.0), (150.0, 150.0), (150.0, 550.0), (-150.0, 550.0)),
    )
)


def beam(*outlines: Outline, reinforcement: tuple[Reinforcement, ...] = ()) -> Beam:
    outlines = outlines or (rectangle(400.0, 600.0),)
    part = LENGTH / len(outlines)
    return Beam(
        key="k",
        guid="k",
        ordinal=0,
        step_id=1,
        model="m",
        ifc_class="IfcBeam",
        name="B-1",
        tag="",
        type_name="",
        storey="",
        axis=Axis((0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0), LENGTH),
        runs=tuple(Run(i * part, (i + 1) * part, o) for i, o in enumerate(outlines)),
        material="",
        concrete_strength=None,
        concrete_density=None,
        cover=None,
        reinforcement=reinforcement,
    )


def zone(
    bottom: str | None = "3-25M",
    top: str | None = "2-20M",
    *,
    side: str | None = None,
    stirrups: str | None = "2 legs 10M @ 250",
    **other,
) -> DescribedZone:
    return DescribedZone(
        bottom=None if bottom is None else parse_bars(bottom),
        top=None if top is None else parse_bars(top),
        side=None if side is None else parse_bars(side),
        stirrups=None if stirrups is None else parse_stirrups(stirrups),
        origin=other.pop("origin", "row 2"),
        **other,
    )


def laid(*zones: DescribedZone, of: Beam | None = None, cover: float | None = 40.0):
    given_cover = None if cover is None else Given(cover, "brief, defaults.cover", assumed=True)
    return lay_out(
        of or beam(),
        zones,
        clear_spacing=lambda diameter: clear_spacing(diameter, 20.0),
        fallback_cover=given_cover,
    )


# --- one section -----------------------------------------------------------------------------


def test_one_layer_by_hand():
    """40 cover, 11.3 stirrup: bars of 25.2 stand at 63.9 mm, corners at 200 - 63.9."""
    layout = laid(zone())
    bottom, top = layout.bars
    assert (bottom.count, bottom.designation, bottom.area) == (3, "25M", 500.0)
    assert bottom.z == pytest.approx(40.0 + 11.3 + 12.6)
    assert bottom.ys == pytest.approx((136.1, 0.0, -136.1))
    assert top.z == pytest.approx(600.0 - 40.0 - 11.3 - 9.75)
    assert (bottom.start, bottom.end) == (0.0, LENGTH)
    assert {bottom.start_anchor, bottom.end_anchor} == {Anchor.ANCHORED}
    assert not layout.reasons
    texts = [remark.text for remark in layout.remarks]
    assert "bars given without their ends are taken as anchored" in texts
    assert "cover assumed: 40.0 mm, brief, defaults.cover" in texts
    assert "bars laid out: 3-25M at 64 mm, 2-20M at 539 mm" in texts


def test_second_layer_where_the_first_is_full():
    """Inside 400 - 2 x 51.3 = 297.4 mm, n bars of 25.2 with 1.4 db between need
    25.2 n + 35.28 (n - 1): five need 267.1, six 327.6. So five, then one."""
    layout = laid(zone("6-25M"))
    first, second, _ = layout.bars
    assert (first.count, second.count) == (5, 1)
    assert second.z - first.z == pytest.approx(25.2 + 1.4 * 25.2)
    assert second.ys == (0.0,)


def test_the_larger_bars_take_the_corners():
    layout = laid(zone("2-15M + 2-25M"))
    large, small, _ = layout.bars
    assert (large.designation, small.designation) == ("25M", "15M")
    assert min(abs(y) for y in large.ys) > max(abs(y) for y in small.ys)
    assert small.z == pytest.approx(40.0 + 11.3 + 8.0)


def test_side_bars_stand_in_pairs_along_the_height():
    layout = laid(zone(side="4-15M"))
    side = [bars for bars in layout.bars if bars.designation == "15M"]
    low, high = 63.9, 600.0 - 40.0 - 11.3 - 9.75
    expected = [low + (high - low) / 3, low + 2 * (high - low) / 3]
    assert [bars.z for bars in side] == pytest.approx(expected)
    assert all(bars.ys == pytest.approx((140.7, -140.7)) for bars in side)


def test_web_and_flange_of_a_t_section():
    layout = laid(zone("3-25M", "3-20M"), of=beam(T_SECTION))
    bottom, top = layout.bars
    assert max(bottom.ys) == pytest.approx(150.0 - 63.9)
    assert max(top.ys) == pytest.approx(150.0 - 61.05)
    many = laid(zone("3-25M", "12-20M"), of=beam(T_SECTION)).bars[1:]
    assert [bars.count for bars in many] == [12]
    assert max(many[0].ys) > 150.0


def test_the_web_of_an_l_section_is_not_in_the_middle():
    bottom, top = laid(zone("2-25M", "2-20M"), of=beam(L_SECTION)).bars
    assert bottom.ys == pytest.approx((-150.0 - 63.9, -450.0 + 63.9))
    assert top.ys == pytest.approx((-150.0 - 61.05, -450.0 + 61.05))


def test_an_i_section_has_its_bars_in_the_flanges():
    bottom, top = laid(zone("4-25M", "6-20M"), of=beam(I_SECTION)).bars
    assert (bottom.count, top.count) == (4, 6)
    assert max(bottom.ys) == pytest.approx(250.0 - 63.9)
    assert max(top.ys) == pytest.approx(300.0 - 61.05)


def test_a_trapezoid_narrows_towards_the_soffit():
    """At 51.3 mm, the lower edge of the bars, its half width is 150 + 51.3 / 6."""
    bottom = laid(zone("2-25M"), of=beam(TRAPEZOID)).bars[0]
    assert max(bottom.ys) == pytest.approx(150.0 + 51.3 / 6 - 40.0 - 11.3 - 12.6, abs=0.01)


def test_a_hollow_section_takes_bars_above_and_below_the_void_only():
    layout = laid(zone("4-25M", "4-20M"), of=beam(HOLLOW))
    assert not layout.reasons
    refused = laid(zone("4-25M", "4-20M", side="2-15M"), of=beam(HOLLOW))
    assert "several webs or a void" in refused.reasons[0].text
    assert refused.bars == ()


def test_bars_that_do_not_fit_are_a_reason():
    layout = laid(zone("40-35M"), of=beam(rectangle(300.0, 400.0)))
    assert layout.bars == ()
    [reason] = layout.reasons
    assert reason.text.startswith("bars do not fit from 0 m to 6.00 m (bottom 40-35M")
    narrow = laid(zone("1-25M"), of=beam(rectangle(120.0, 400.0)))
    assert "not one bar of 25 mm fits a width of 17 mm" in narrow.reasons[0].text
    meeting = laid(zone("12-25M", "12-25M"), of=beam(rectangle(300.0, 400.0)))
    assert "the layers of bottom and top bars meet" in meeting.reasons[0].text


# --- cover and what is not said ----------------------------------------------------------------


def test_cover_of_the_brief_beats_the_zone_beats_the_default():
    def height(layout) -> float:
        return layout.bars[0].z - 11.3 - 12.6

    spoken = zone(cover=30.0)
    assert height(laid(spoken)) == pytest.approx(30.0)
    stated = lay_out(
        beam(),
        [spoken],
        clear_spacing=lambda d: 30.0,
        stated_cover=Given(50.0, "brief"),
        fallback_cover=Given(40.0, "default", assumed=True),
    )
    assert height(stated) == pytest.approx(50.0)
    assert not any("cover assumed" in remark.text for remark in stated.remarks)


def test_no_cover_anywhere_is_a_reason():
    layout = laid(zone(), cover=None)
    assert layout.bars == ()
    assert layout.reasons[0].text.startswith("cover unknown")
    assert layout.reasons[0].blocking


def test_what_is_not_said_is_listed():
    layout = laid(zone("3-25M", None, stirrups=None))
    assert layout.silent == ("top",)
    assert not layout.stirrups_known
    assert layout.stirrups == ()
    assert "top bars not stated: taken as none" in [remark.text for remark in layout.remarks]
    # kept clear of an assumed stirrup of 12 mm
    assert layout.bars[0].z == pytest.approx(40.0 + 12.0 + 12.6)


def test_what_is_said_to_be_absent_is_known():
    layout = laid(zone("3-25M", "none", stirrups=None, no_stirrups=True))
    assert layout.silent == ()
    assert layout.stirrups_known
    assert layout.bars[0].z == pytest.approx(40.0 + 12.6)


def test_legs_that_no_one_states_stay_unknown():
    [stirrups] = laid(zone(stirrups="10M @ 250")).stirrups
    assert stirrups.legs is None
    assert (stirrups.spacing, stirrups.leg_area) == (250.0, 100.0)
    assert (stirrups.bottom, stirrups.top, stirrups.half_width) == (40.0, 560.0, 160.0)


def test_strengths_carry_their_source():
    layout = laid(zone(bar_yield=500.0, stirrup_yield=420.0))
    assert layout.bars[0].yield_strength == Given(500.0, "row 2")
    assert layout.stirrups[0].yield_strength == Given(420.0, "row 2")
    assert laid(zone()).bars[0].yield_strength is None


# --- zones --------------------------------------------------------------------------------------


def by_extent(layout) -> dict[tuple[float, float], int]:
    found: dict[tuple[float, float], int] = {}
    for bars in layout.bars:
        if bars.designation == "25M":
            key = (bars.start, bars.end)
            found[key] = found.get(key, 0) + bars.count
    return found


def test_bars_that_the_next_zone_holds_too_go_on():
    layout = laid(
        zone("2-25M", end=1500.0),
        zone("4-25M", start=1500.0, end=4500.0),
        zone("2-25M", start=4500.0),
    )
    assert by_extent(layout) == {(0.0, LENGTH): 2, (1500.0, 4500.0): 2}
    inner = next(bars for bars in layout.bars if bars.start == 1500.0)
    assert (inner.start_anchor, inner.end_anchor) == (Anchor.STRAIGHT, Anchor.STRAIGHT)


def test_bars_of_another_size_end_at_the_zone():
    layout = laid(zone("2-20M", end=3000.0), zone("2-25M", start=3000.0))
    [bars] = [bars for bars in layout.bars if bars.designation == "25M"]
    assert (bars.start, bars.start_anchor) == (3000.0, Anchor.STRAIGHT)
    assert (bars.end, bars.end_anchor) == (LENGTH, Anchor.ANCHORED)


def test_a_zone_between_breaks_the_bars():
    layout = laid(
        zone("2-25M", end=2000.0),
        zone("none", start=2000.0, end=4000.0),
        zone("2-25M", start=4000.0),
    )
    assert by_extent(layout) == {(0.0, 2000.0): 2, (4000.0, LENGTH): 2}


def test_a_continuous_bar_takes_its_less_favourable_height():
    layout = laid(
        zone("2-25M", stirrups="2 legs 10M @ 250", end=3000.0),
        zone("2-25M", stirrups="2 legs 15M @ 250", start=3000.0),
    )
    assert layout.bars[0].z == pytest.approx(40.0 + 16.0 + 12.6)
    top = next(bars for bars in layout.bars if bars.designation == "20M")
    assert top.z == pytest.approx(600.0 - 40.0 - 16.0 - 9.75)


def test_stirrups_keep_their_zones_while_bars_run_through():
    layout = laid(
        zone("3-25M", "2-20M", stirrups=None),
        zone(None, None, stirrups="2 legs 10M @ 100", end=1000.0),
        zone(None, None, stirrups="2 legs 10M @ 300", start=1000.0),
    )
    assert by_extent(layout) == {(0.0, LENGTH): 3}
    assert [(s.start, s.end, s.spacing) for s in layout.stirrups] == [
        (0.0, 1000.0, 100.0),
        (1000.0, LENGTH, 300.0),
    ]
    assert layout.silent == ()


def test_a_stretch_without_word_is_listed():
    layout = laid(zone(end=4000.0))
    assert layout.silent == ("bottom", "top")
    assert not layout.stirrups_known
    assert by_extent(layout) == {(0.0, 4000.0): 3}


def test_the_same_bars_twice_are_a_reason():
    layout = laid(zone(origin="row 2"), zone(origin="row 3", start=1000.0, end=2000.0))
    assert "bottom bars given twice: row 2 and row 3" in [r.text for r in layout.reasons]


def test_a_step_in_the_outline_keeps_bars_whole_and_in_the_shallower_part():
    layout = laid(zone(), of=beam(rectangle(400.0, 600.0), rectangle(400.0, 500.0)))
    assert by_extent(layout) == {(0.0, LENGTH): 3}
    top = next(bars for bars in layout.bars if bars.designation == "20M")
    assert top.z == pytest.approx(500.0 - 40.0 - 11.3 - 9.75)


@settings(deadline=None, max_examples=80)
@given(
    st.sampled_from([rectangle(400, 600), T_SECTION, L_SECTION, I_SECTION, TRAPEZOID]),
    st.integers(1, 9),
    st.integers(1, 9),
    st.sampled_from(["15M", "20M", "25M", "35M"]),
    st.floats(20.0, 60.0),
)
def test_bars_lie_inside_cover_and_keep_their_distance(outline, low, high, size, cover):
    layout = laid(zone(f"{low}-{size}", f"{high}-{size}"), of=beam(outline), cover=cover)
    assume(not layout.reasons)
    centres = [(y, bars.z) for bars in layout.bars for y in bars.ys]
    diameter = layout.bars[0].diameter
    assert len(centres) == low + high
    least = diameter + clear_spacing(diameter, 20.0)
    for i, (y, z) in enumerate(centres):
        for other_y, other_z in centres[:i]:
            assert (y - other_y) ** 2 + (z - other_z) ** 2 >= (least - 1e-3) ** 2
    heights = [z for _, z in outline.rings[0]]
    for _, z in centres:
        assert z - 0.5 * diameter >= min(heights) + cover + 11.3 - 1e-6
        assert z + 0.5 * diameter <= max(heights) - cover - 11.3 + 1e-6


# --- sources ------------------------------------------------------------------------------------


def physical(count: int = 3, *, spacing: float = 250.0, legs: int | None = 2) -> Reinforcement:
    bottom = Bars(count, 25.2, 500.0, 0.0, LENGTH, 64.0, tuple(range(count)), designation="25M")
    top = replace(bottom, count=2, area=300.0, z=540.0, ys=(0.0, 1.0))
    stirrups = Stirrups(0.0, LENGTH, spacing, 11.3, 100.0, legs)
    return Reinforcement("bars", bars=(bottom, top), stirrups=(stirrups,))


def described(source, *zones: DescribedZone, reasons: tuple[Reason, ...] = ()) -> Reinforcement:
    return Reinforcement(source, zones=zones, reasons=reasons)


def test_the_first_source_in_the_order_rates():
    both = beam(reinforcement=(physical(), described("schedule", zone())))
    assert choose_source(both, ALL).reinforcement.source == "schedule"
    assert choose_source(both, ("bars", "schedule")).reinforcement.source == "bars"
    assert choose_source(both, ALL).remarks == ()


def test_differences_are_reported_in_numbers():
    both = beam(reinforcement=(physical(4, spacing=200.0), described("schedule", zone())))
    [remark] = choose_source(both, ALL).remarks
    assert remark.kind == "doubt"
    assert remark.text == (
        "schedule used; bars differs: bottom bars 2000 mm2 against 1500 mm2 (+33 %);"
        " stirrups 200 mm2 at 200 mm, 1000 mm2/m against 200 mm2 at 250 mm, 800 mm2/m (+25 %)"
    )


def says(source, *, bars=(4, 500.0), from_=0.0, to=LENGTH):
    """A source, drawn or described, of four 25M bars below from a place to another."""
    count, area = bars
    if source == "bars":
        drawn = Bars(count, 25.2, area, from_, to, 64.0, tuple(range(count)), designation="25M")
        return Reinforcement("bars", bars=(drawn,))
    group = BarGroup(count, "25M", 25.2, area)
    return described(source, DescribedZone(start=from_, end=to, bottom=(group,), origin="row 2"))


@pytest.mark.parametrize(("first", "second"), list(permutations(ALL, 2)))
def test_every_pair_of_sources_that_differ_is_told_in_numbers(first, second):
    both = beam(reinforcement=(says(first), says(second, bars=(3, 500.0))))
    [remark] = choose_source(both, (first, second)).remarks
    assert remark.text == (
        f"{first} used; {second} differs: bottom bars 1500 mm2 against 2000 mm2 (-25 %)"
    )
    agreeing = beam(reinforcement=(says(first), says(second, bars=(4, 490.9))))
    assert choose_source(agreeing, (first, second)).remarks == ()


@pytest.mark.parametrize(("first", "second"), list(permutations(ALL, 2)))
def test_a_difference_over_a_part_of_the_beam_is_told_with_its_place(first, second):
    longer, shorter = says(first), says(second, from_=40.0, to=4000.0)
    remarks = choose_source(beam(reinforcement=(longer, shorter)), (first, second)).remarks
    if second == "bars":  # a description says nothing of what is outside of its zones
        assert [remark.text for remark in remarks] == [
            f"{first} used; bars differs: bottom bars none against 2000 mm2 between 4.00 m and"
            " 6.00 m"
        ]
    else:
        assert remarks == ()
    remarks = choose_source(beam(reinforcement=(longer, shorter)), (second, first)).remarks
    against = "2000 mm2 against none" if second == "bars" else f"2000 mm2, not stated by {second}"
    assert [remark.text for remark in remarks] == [
        f"{second} used; {first} differs: bottom bars {against} between 4.00 m and 6.00 m"
    ]


def test_steel_that_only_the_source_not_used_states_is_told():
    both = beam(
        reinforcement=(physical(), described("schedule", zone("3-25M", None, stirrups=None)))
    )
    [remark] = choose_source(both, ALL).remarks
    assert remark.text == (
        "schedule used; bars differs: top bars 600 mm2, not stated by schedule;"
        " stirrups 200 mm2 at 250 mm, 800 mm2/m, not stated by schedule"
    )


def test_rows_whose_height_is_given_count_at_their_face():
    group = BarGroup(2, "25M", 25.2, 500.0)
    rows = DescribedZone(rows=(BarRow("bottom", group, 40.0), BarRow("bottom", group, 88.0)))
    both = beam(reinforcement=(described("sections", rows), says("bars", bars=(5, 500.0))))
    [remark] = choose_source(both, ("sections", "bars")).remarks
    assert "bottom bars 2500 mm2 against 2000 mm2 (+25 %)" in remark.text
    agreeing = beam(reinforcement=(described("sections", rows), says("bars")))
    assert choose_source(agreeing, ("sections", "bars")).remarks == ()


def test_many_stretches_are_told_in_short():
    stripes = [
        DescribedZone(start=x, end=x + 500.0, bottom=parse_bars("2-25M"))
        for x in range(0, 6000, 1000)
    ]
    both = beam(reinforcement=(says("schedule"), described("properties", *stripes)))
    [remark] = choose_source(both, ALL).remarks
    assert remark.text.count("1000 mm2 against 2000 mm2 (-50 %) between") == 3
    assert remark.text.endswith("; bottom bars on 3 more stretches")


def test_a_schedule_that_gives_cover_alone_is_told_where_another_source_is_used():
    cover = described("schedule", DescribedZone(cover=60.0, origin="s.csv row 4"))
    both = beam(reinforcement=(physical(), cover))
    [remark] = choose_source(both, ALL).remarks
    assert remark.text.startswith("s.csv row 4: gives no bars and no stirrups, bars used instead")


@pytest.mark.parametrize("side", [None, ()])
def test_a_yield_in_a_row_of_its_own_is_that_of_the_bars_there(side):
    steel = zone("3-25M", "2-20M", stirrups="2 legs 10M @ 250")
    yields = DescribedZone(start=0.0, end=3000.0, side=side, bar_yield=300.0, stirrup_yield=250.0)
    laid = lay_out(beam(), (steel, yields), clear_spacing=lambda d: clear_spacing(d, 20.0))
    for each in laid.bars:
        assert (each.yield_strength and each.yield_strength.value) == (
            300.0 if each.end <= 3000.0 else None
        )
    assert [s.yield_strength and s.yield_strength.value for s in laid.stirrups] == [250.0, None]


def test_what_a_source_does_not_say_is_no_difference():
    both = beam(
        reinforcement=(
            physical(legs=None),
            described("schedule", zone("3-25M", "2-20M", stirrups="10M @ 250")),
        )
    )
    assert choose_source(both, ALL).remarks == ()


def test_covers_that_two_sources_give_otherwise_are_told():
    of = {cover: described("schedule", zone(cover=cover)) for cover in (40.0, 41.0, 60.0)}
    stated = described("properties", zone(cover=40.0))
    [remark] = choose_source(beam(reinforcement=(of[60.0], stated)), ALL).remarks
    assert remark.kind == "doubt"
    assert remark.text == (
        "schedule used; properties differs: clear cover 40.0 mm against 60.0 mm (-33 %)"
    )
    for near in (of[40.0], of[41.0], described("schedule", zone())):
        assert choose_source(beam(reinforcement=(near, stated)), ALL).remarks == ()


def test_a_cover_that_drawn_stirrups_do_not_have_is_told():
    """Stirrups drawn 25 mm from the soffit and 40 mm from the top of a beam 600 high."""
    drawn = physical()
    stirrups = (replace(drawn.stirrups[0], bottom=25.0, top=560.0),)
    both = beam(
        reinforcement=(
            replace(drawn, stirrups=stirrups),
            described("properties", zone(cover=40.0)),
        )
    )
    [remark] = choose_source(both, ("bars", "properties")).remarks
    assert remark.text == (
        "bars used; properties differs: clear cover 40.0 mm against 25.0 mm (+60 %)"
    )


@pytest.mark.parametrize(("z", "told"), [(63.0, ""), (110.0, "110 mm against 64.0 mm (+72 %)")])
def test_bars_that_two_sources_place_otherwise_are_told(z: float, told: str):
    rows = DescribedZone(
        rows=(
            BarRow("bottom", BarGroup(3, "25M", 25.2, 500.0), z),
            BarRow("top", BarGroup(2, "20M", 19.5, 300.0), 540.0),
        )
    )
    both = beam(reinforcement=(physical(), described("sections", rows)))
    remarks = choose_source(both, ("bars", "sections")).remarks
    assert "".join(remark.text for remark in remarks) == (
        f"bars used; sections differs: middle of the bottom bars from the soffit {told}"
        if told
        else ""
    )


def test_bars_that_do_not_overlap_are_not_added_up():
    bars = physical().bars
    halves = (replace(bars[0], end=2000.0), replace(bars[0], start=2250.0), bars[1])
    both = beam(reinforcement=(replace(physical(), bars=halves), described("schedule", zone())))
    assert choose_source(both, ALL).remarks == ()


def test_a_source_that_could_not_be_read_gives_way_with_a_remark():
    unread = Reinforcement("bars", reasons=(Reason("bar #41 has no diameter"),))
    both = beam(reinforcement=(unread, described("properties", zone())))
    chosen = choose_source(both, ALL)
    assert chosen.reinforcement.source == "properties"
    assert chosen.reasons == ()
    [remark] = chosen.remarks
    assert remark.text == "bars: bar #41 has no diameter; properties used instead"


def test_what_the_source_taken_could_not_read_is_a_reason():
    partly = replace(physical(), reasons=(Reason("bar #41 has no diameter"),))
    both = beam(reinforcement=(partly, described("properties", zone())))
    chosen = choose_source(both, ALL)
    assert chosen.reinforcement is partly
    assert chosen.reasons == partly.reasons


def test_only_unread_sources_give_their_reasons():
    unread = Reinforcement("bars", reasons=(Reason("bar #41 has no diameter"),))
    chosen = choose_source(beam(reinforcement=(unread,)), ALL)
    assert chosen.reinforcement is None
    assert chosen.reasons == unread.reasons


def test_no_source_at_all():
    assert choose_source(beam(), ALL).reasons == (Reason("no reinforcement found"),)
    silent = beam(reinforcement=(described("properties", DescribedZone(cover=40.0)),))
    assert choose_source(silent, ALL).reasons == (Reason("no reinforcement found"),)


def test_a_source_that_the_brief_leaves_out_is_not_used():
    only = beam(reinforcement=(physical(),))
    [reason] = choose_source(only, ("schedule",)).reasons
    assert reason.text == (
        "no reinforcement found in the sources of the brief (the model has bars)"
    )
