"""The brief laid on beams: loads, supports, statements, materials, and nothing lost."""

import dataclasses
import math
from pathlib import Path

import pytest

from ifccheck.beam import Axis, Beam, Contact, Given, Outline, Reason, Run, Support
from ifccheck.brief.load import load_brief
from ifccheck.brief.loads import loads_on_beams
from ifccheck.brief.selecting import check_reached, join, selections
from ifccheck.brief.statements import (
    BeamStatement,
    MaterialStatement,
    default_materials,
    materials,
    span_reason,
    statements,
)
from ifccheck.brief.supports import resolve_supports
from ifccheck.errors import BriefError

BASIS = """\
[basis]
standard = "csa-a23.3-14"
concrete_unit_weight = "23.5 kN/m3"
[cases.services]
nature = "permanent"
[cases.press]
nature = "imposed"
"""
PINNED = '[defaults]\nsupports = ["pinned", "pinned"]\n'


@pytest.fixture
def load(tmp_path):
    def load(text):
        path = Path(tmp_path) / "brief.toml"
        path.write_text(BASIS + text, encoding="utf-8")
        return load_brief(path)

    return load


def beam(key, length=6000.0, slope=0.0):
    outline = Outline((((-150.0, 0.0), (150.0, 0.0), (150.0, 500.0), (-150.0, 500.0)),))
    direction = (math.cos(slope), 0.0, math.sin(slope))
    upward = (-math.sin(slope), 0.0, math.cos(slope))
    axis = Axis((0.0, 0.0, 0.0), direction, (0.0, 1.0, 0.0), upward, length) if length else None
    return Beam(
        key=key,
        guid=key,
        ordinal=0,
        step_id=1,
        model="hall",
        ifc_class="IfcBeam",
        name=key,
        tag="",
        type_name="",
        storey="Level 1",
        axis=axis,
        runs=(Run(0.0, length, outline),) if length else (),
        material="C30/37",
        concrete_strength=None,
        concrete_density=None,
        cover=None,
    )


def touching(key, place, side="below", start=0.0, end=300.0, other="C-3"):
    return Contact(key, f"{other} (IfcColumn)", "IfcColumn", start, end, place, side)


def matched(brief, *keys):
    """Marks that are plain keys, resolved."""
    found = {
        place: tuple(
            key
            for key in keys
            for mark in selection.beams
            if mark in (key, "*") or (mark.endswith("*") and key.startswith(mark[:-1]))
        )
        for place, selection in selections(brief).items()
    }
    return join(brief, (), found)


def lay(brief, *beams, spans=None, contacts=None):
    by_key = {one.key: one for one in beams}
    return loads_on_beams(brief, matched(brief, *by_key), by_key, spans or {}, contacts)


def entry(case="press", **keys):
    lines = "".join(f"{name.rstrip('_')} = {value}\n" for name, value in keys.items())
    return f'[[loads]]\ncase = "{case}"\n{lines}'


# --- selections -----------------------------------------------------------------------------


def test_every_mark_is_looked_for_by_itself(load):
    brief = load(
        entry(beams='["B-1", "B-2*"]', line='"3 kN/m"')
        + entry(where="'IfcBeam'", line='"3 kN/m"')
        + '[[beams]]\nbeams = ["B-1"]\nunloaded = true\n'
    )
    places = selections(brief)
    assert list(places) == [
        "loads[1].beams[1]",
        "loads[1].beams[2]",
        "loads[2].where",
        "beams[1].beams[1]",
    ]
    assert places["loads[1].beams[2]"].beams == ("B-2*",)
    assert places["loads[2].where"].where == "IfcBeam"


def test_marks_that_reach_one_beam_twice_load_it_once(load):
    brief = load(entry(beams='["B-1", "B-*"]', line='"3 kN/m"'))
    assert len(lay(brief, beam("B-1"))) == 1
    assert len(lay(brief, beam("B-1"), beam("B-2"))) == 2


def test_a_mistyped_mark_among_good_ones_is_an_error(load):
    """Breaking this would drop a load and could print a wrong adequate."""
    brief = load(entry(beams='["B-1", "B-O1"]', line='"3 kN/m"'))
    found = {"loads[1].beams[1]": ("B-1",), "loads[1].beams[2]": ()}
    with pytest.raises(BriefError) as caught:
        check_reached(brief, [found])
    assert str(caught.value) == (
        "brief.toml: loads[1].beams (line 10): 'B-O1' reaches no beam: correct it, or write"
        " optional = true"
    )


def test_every_mark_of_a_range_must_reach_a_beam(load):
    """A mark that is missing from the range would drop its load."""
    brief = load(entry(beams='["B-8..B-10", "K-*"]', line='"3 kN/m"'))
    places = selections(brief)
    assert [part.beams for part in places.values()] == [("B-8",), ("B-9",), ("B-10",), ("K-*",)]
    found = {place: () if part.beams == ("B-9",) else ("B-1",) for place, part in places.items()}
    with pytest.raises(BriefError, match=r"^brief.toml: loads\[1\].beams .*'B-9' reaches no beam"):
        check_reached(brief, [found])
    assert join(brief, (), dict.fromkeys(places, ("B-1",)))["loads[1]"] == ("B-1",)


def test_a_mark_may_be_in_any_model_of_the_run(load):
    brief = load(entry(beams='["B-1"]', line='"3 kN/m"'))
    check_reached(brief, [{"loads[1].beams[1]": ()}, {"loads[1].beams[1]": ("B-1",)}])
    with pytest.raises(BriefError, match="reaches no beam"):
        check_reached(brief, [{"loads[1].beams[1]": ()}, {"loads[1].beams[1]": ()}])


@pytest.mark.parametrize(
    "table",
    [
        entry(where="'IfcBeam, Name=\"x\"'", line='"3 kN/m"'),
        "[[supports]]\nwhere = 'IfcBeam'\nstart = 'fixed'\n",
        "[[beams]]\nwhere = 'IfcBeam'\nspan = '6 m'\n",
        "[[materials]]\nwhere = 'IfcBeam'\ncover = '40 mm'\n",
    ],
)
def test_every_kind_of_entry_must_reach_a_beam_unless_optional(load, table):
    brief = load(table)
    found = dict.fromkeys(selections(brief), ())
    with pytest.raises(BriefError, match=r"^brief.toml: \w+\[1\].where \(line \d+\): .* no beam"):
        check_reached(brief, [found])
    optional = load(table + "optional = true\n")
    check_reached(optional, [found])


# --- loads ----------------------------------------------------------------------------------


def test_point_loads_stand_where_the_brief_says(load):
    brief = load(
        entry(beams='["B-1"]', point='"60 kN"', at='"2.1 m"', face='"bottom"')
        + entry(beams='["B-1"]', moment='"12 kN*m"', at='"35 %"')
    )
    point, moment = lay(brief, beam("B-1"))
    assert (point.beam, point.case, point.kind) == ("B-1", "press", "point")
    assert (point.start, point.end, point.values) == (2100.0, 2100.0, (60e3, 60e3))
    assert (point.face, point.origin) == ("bottom", "loads[1]")
    assert point.text == "60 kN at 2.1 m, hung from the bottom face"
    assert (moment.kind, moment.start, moment.values[0]) == ("moment", 2100.0, 12e6)


def test_a_line_without_places_covers_body_and_span(load):
    brief = load(entry(beams='["B-1"]', line='"3 kN/m"'))
    longer = lay(brief, beam("B-1"), spans={"B-1": (-100.0, 6150.0)})
    shorter = lay(brief, beam("B-1"), spans={"B-1": (150.0, 5850.0)})
    unknown = lay(brief, beam("B-1"))
    assert (longer[0].start, longer[0].end) == (-100.0, 6150.0)
    assert (shorter[0].start, shorter[0].end) == (0.0, 6000.0)
    assert (unknown[0].start, unknown[0].end) == (0.0, 6000.0)


def test_a_trapezoid_keeps_its_places_and_order(load):
    brief = load(
        entry(beams='["B-1"]', line='["4 kN/m", "9 kN/m"]', **{"from": '"20 %"'}, to='"4.8 m"')
    )
    (load_,) = lay(brief, beam("B-1"))
    assert (load_.start, load_.end, load_.values) == (1200.0, 4800.0, (4.0, 9.0))


def test_one_place_of_a_line_runs_to_the_end_of_the_beam(load):
    brief = load(
        entry(beams='["B-1"]', line='"4 kN/m"', **{"from": '"2 m"'})
        + entry(beams='["B-1"]', line='"4 kN/m"', to='"2 m"')
    )
    first, second = lay(brief, beam("B-1"))
    assert (first.start, first.end) == (2000.0, 6000.0)
    assert (second.start, second.end) == (0.0, 2000.0)


def test_an_area_load_is_its_width_times_its_intensity(load):
    brief = load(entry(beams='["B-1"]', area='"31.3 psf"', tributary_width='"8\'-0\\""'))
    (load_,) = lay(brief, beam("B-1"))
    # 31.3 lbf/ft2 x 8 ft = 250.4 lbf/ft; 1 lbf/ft = 0.0145939 N/mm
    assert load_.values[0] == pytest.approx(250.4 * 0.0145939, rel=1e-5)


def test_a_projected_load_counts_per_horizontal_length(load):
    text = entry(beams='["B-1"]', line='"3 kN/m"')
    slope = math.radians(30.0)
    (plain,) = lay(load(text), beam("B-1", slope=slope))
    (projected,) = lay(load(text + "projected = true\n"), beam("B-1", slope=slope))
    (level,) = lay(load(text + "projected = true\n"), beam("B-1"))
    assert plain.values == (3.0, 3.0)
    assert projected.values == pytest.approx((3.0 * math.cos(slope),) * 2)
    assert level.values == (3.0, 3.0)


@pytest.mark.parametrize(
    ("keys", "told"),
    [
        ({"point": '"5 kN"', "at": '"6.1 m"'}, "loads[1].at (line 12): 6.1 m lies beyond the end"),
        ({"line": '"5 kN/m"', "from": '"6.1 m"'}, "loads[1].from (line 12): 6.1 m lies beyond"),
        ({"line": '"5 kN/m"', "to": '"6.1 m"'}, "loads[1].to (line 12): 6.1 m lies beyond"),
        (
            {"line": '"5 kN/m"', "from": '"5 m"', "to": '"50 %"'},
            "loads[1].to (line 13): on beam B-1, 6.00 m long, the load has no length",
        ),
    ],
)
def test_a_place_outside_the_beam_is_an_error_that_names_it(load, keys, told):
    brief = load(entry(beams='["B-1"]', **keys))
    with pytest.raises(BriefError) as caught:
        lay(brief, beam("B-1"))
    assert str(caught.value).startswith(f"brief.toml: {told}")
    assert "B-1" in str(caught.value)


def test_a_place_a_millimetre_beyond_is_the_end(load):
    brief = load(entry(beams='["B-1"]', point='"5 kN"', at='"6000.9 mm"'))
    assert lay(brief, beam("B-1"))[0].start == 6000.0


def test_a_beam_without_axis_keeps_its_loads(load):
    """So that a rated case knows that an unrated beam is in its path."""
    brief = load(
        entry(beams='["B-1"]', point='"5 kN"', at='"2 m"')
        + entry(beams='["B-1"]', line='"5 kN/m"', to='"2 m"')
    )
    assert [load_.start for load_ in lay(brief, beam("B-1", length=0.0))] == [0.0, 0.0]


def test_places_may_be_measured_from_the_member_at_an_end(load):
    brief = load(
        entry(beams='["B-1"]', point='"5 kN"', at='"2 m"', at_from='"C-3"')
        + entry(
            beams='["B-1"]',
            line='["4 kN/m", "9 kN/m"]',
            **{"from": '"1 m"'},
            to='"2 m"',
            at_from='"C-3"',
        )
        + entry(beams='["B-1"]', moment='"7 kN*m"', at='"2 m"', at_from='"C-3"')
    )
    at_start = {"B-1": (touching("B-1", "start"), touching("B-1", "end", other="C-4"))}
    at_end = {"B-1": (touching("B-1", "start", other="C-4"), touching("B-1", "end"))}
    point, line, moment = lay(brief, beam("B-1"), contacts=at_start)
    assert (point.start, moment.start, moment.values[0]) == (2000.0, 2000.0, 7e6)
    assert (line.start, line.end, line.values) == (1000.0, 2000.0, (4.0, 9.0))
    point, line, moment = lay(brief, beam("B-1"), contacts=at_end)
    assert (point.start, point.values[0]) == (4000.0, 5e3)
    assert (line.start, line.end, line.values) == (4000.0, 5000.0, (9.0, 4.0))
    assert (moment.start, moment.values[0]) == (4000.0, -7e6)


@pytest.mark.parametrize(
    ("contacts", "told"),
    [
        ((), "'C-3' touches neither end of beam B-1"),
        ((touching("B-1", "between"),), "'C-3' touches neither end"),
        ((touching("B-1", "start", other="C-31"),), "'C-3' touches neither end"),
        ((touching("B-1", "start"), touching("B-1", "end")), "'C-3' touches both ends"),
    ],
)
def test_an_anchor_that_tells_no_end_is_an_error(load, contacts, told):
    brief = load(entry(beams='["B-1"]', point='"5 kN"', at='"2 m"', at_from='"C-3"'))
    with pytest.raises(BriefError, match=r"loads\[1\].at_from \(line 13\)") as caught:
        lay(brief, beam("B-1"), contacts={"B-1": contacts})
    assert told in str(caught.value)


# --- supports -------------------------------------------------------------------------------

BOTH_ENDS = {"B-1": (touching("B-1", "start"), touching("B-1", "end"))}


def stand(brief, contacts, *beams):
    beams = beams or (beam("B-1"),)
    by_key = {one.key: one for one in beams}
    supports, remarks = resolve_supports(brief, matched(brief, *by_key), by_key, contacts)
    return supports["B-1"], [remark.text for remark in remarks]


def test_the_default_holds_at_ends_that_touch_another_member(load):
    (start, end), remarks = stand(load(PINNED), BOTH_ENDS)
    assert (start.kind, end.kind, start.bearing) == ("pinned", "pinned", 0.0)
    assert start.source == "brief, defaults.supports"
    assert remarks == [
        "start taken as pinned, the brief's default",
        "end taken as pinned, the brief's default",
    ]


@pytest.mark.parametrize(
    ("contacts", "end"),
    [
        ((), "start"),
        ((touching("B-1", "start"),), "end"),
        ((touching("B-1", "end"),), "start"),
        ((touching("B-1", "start"), touching("B-1", "end", "above")), "end"),
        ((touching("B-1", "between", "side"),), "start"),
    ],
)
def test_an_end_that_nothing_can_carry_is_unknown(load, contacts, end):
    """A member that stands on the end does not carry it."""
    supports, _ = stand(load(PINNED), {"B-1": contacts})
    assert isinstance(supports, Reason)
    assert supports.blocking
    assert supports.text.startswith(f"supports unknown: its {end} touches no member")


def test_there_is_no_assumption_without_a_default(load):
    supports, _ = stand(load(""), BOTH_ENDS)
    assert isinstance(supports, Reason)
    assert supports.text.startswith("supports unknown: neither [[supports]] nor defaults.supports")


def test_an_entry_stands_where_nothing_touches(load):
    brief = load(
        '[[supports]]\nbeams = ["B-1"]\nstart = "fixed"\nend = "free"\n'
        'bearing = ["400 mm", "0 mm"]\n'
    )
    (start, end), remarks = stand(brief, {})
    assert (start.kind, start.bearing, end.kind, end.bearing) == ("fixed", 400.0, "free", 0.0)
    assert start.source == "brief, supports[1]"
    assert remarks == ["start is fixed because supports[1] of the brief says so"]


def test_an_entry_for_one_end_leaves_the_other_to_the_default(load):
    brief = load(PINNED + '[[supports]]\nbeams = ["B-1"]\nend = "fixed"\n')
    (start, end), _ = stand(brief, BOTH_ENDS)
    assert (start.kind, end.kind) == ("pinned", "fixed")
    supports, _ = stand(brief, {})
    assert isinstance(supports, Reason)


def test_bearings_may_be_stated_alone(load):
    brief = load(PINNED + '[[supports]]\nbeams = ["B-1"]\nbearing = ["300 mm", "200 mm"]\n')
    (start, end), _ = stand(brief, BOTH_ENDS)
    assert (start.kind, start.bearing, end.bearing) == ("pinned", 300.0, 200.0)


def test_a_free_end_has_no_bearing(load):
    brief = load(
        '[[supports]]\nbeams = ["*"]\nbearing = ["300 mm", "200 mm"]\n'
        '[[supports]]\nbeams = ["B-1"]\nstart = "fixed"\nend = "free"\n'
    )
    (start, end), _ = stand(brief, {})
    assert (start.bearing, end.bearing) == (300.0, 0.0)


def test_the_later_entry_wins_field_by_field_and_a_remark_says_so(load):
    brief = load(
        '[[supports]]\nbeams = ["B-*"]\nstart = "fixed"\nend = "fixed"\n'
        'bearing = ["300 mm", "300 mm"]\n'
        '[[supports]]\nbeams = ["B-1"]\nend = "pinned"\nbearing = ["300 mm", "200 mm"]\n'
    )
    (start, end), remarks = stand(brief, {}, beam("B-1"), beam("B-2"))
    assert (start.kind, end.kind, start.bearing, end.bearing) == ("fixed", "pinned", 300.0, 200.0)
    assert "end: pinned of supports[2] replaces fixed of supports[1]" in remarks
    assert "end bearing: 200 mm of supports[2] replaces 300 mm of supports[1]" in remarks
    assert not any("start bearing" in remark for remark in remarks)


def test_a_contact_from_below_between_the_ends_needs_a_word_of_its_own(load):
    contacts = {
        "B-1": (*BOTH_ENDS["B-1"], touching("B-1", "between", "below", 2900.0, 3200.0, "C-9"))
    }
    supports, _ = stand(load(PINNED), contacts)
    assert isinstance(supports, Reason)
    assert supports.text == (
        "supports unknown: C-9 (IfcColumn) touches it from below between its ends, at 2.90 m;"
        ' if it does not hold the beam, write ignore = ["C-9"] under [[supports]]'
    )
    one_end = load(PINNED + '[[supports]]\nbeams = ["B-1"]\nend = "pinned"\n')
    assert isinstance(stand(one_end, contacts)[0], Reason)
    both = load('[[supports]]\nbeams = ["B-1"]\nstart = "pinned"\nend = "pinned"\n')
    assert isinstance(stand(both, contacts)[0], Reason)
    for named in ("C-9", "C-9 (IfcColumn)"):
        ignored = load(PINNED + f'[[supports]]\nbeams = ["B-1"]\nignore = ["{named}"]\n')
        assert not isinstance(stand(ignored, contacts)[0], Reason)


def test_ends_that_together_cannot_stand_are_an_error(load):
    brief = load(PINNED + '[[supports]]\nbeams = ["B-1"]\nend = "free"\n')
    with pytest.raises(BriefError) as caught:
        stand(brief, BOTH_ENDS)
    assert str(caught.value) == (
        "brief.toml: supports[1] (line 10): beam B-1: a beam with a pinned start and a free end"
        " cannot stand"
    )


def test_bearings_that_swallow_the_beam_are_an_error(load):
    """Faces that pass each other would leave nothing to check in shear."""
    brief = load(PINNED + '[[supports]]\nbeams = ["B-1"]\nbearing = ["2 m", "1.5 m"]\n')
    with pytest.raises(BriefError) as caught:
        stand(brief, BOTH_ENDS)
    assert "beam B-1: bearings of 3500 mm leave too little of its length of 6000 mm" in str(
        caught.value
    )


@pytest.mark.parametrize(
    ("span", "kinds", "bearings", "beyond"),
    [
        (6000.0, ("pinned", "pinned"), (0.0, 0.0), None),
        (5700.0, ("pinned", "pinned"), (300.0, 300.0), None),
        (5600.0, ("fixed", "pinned"), (0.0, 0.0), None),
        (5000.0, ("pinned", "pinned"), (0.0, 0.0), "1.00 m"),
        (4000.0, ("pinned", "pinned"), (400.0, 400.0), "1.60 m"),
        (5600.0, ("fixed", "free"), (400.0, 0.0), None),
        (4000.0, ("fixed", "free"), (400.0, 0.0), "1.60 m"),
        (7000.0, ("pinned", "pinned"), (0.0, 0.0), None),
    ],
)
def test_a_stated_span_may_not_leave_an_overhang_unrated(span, kinds, bearings, beyond):
    """Breaking this would drop the load on the overhang and could print a wrong adequate."""
    start, end = (Support(kind, b, "brief") for kind, b in zip(kinds, bearings, strict=True))
    statement = BeamStatement(span=Given(span, "brief, beams[1]"))
    reason = span_reason(statement, beam("B-1"), (start, end))
    assert (reason is None) == (beyond is None)
    if reason is not None:
        assert f"leaves {beyond} of the beam beyond its supports" in reason.text
    assert span_reason(BeamStatement(), beam("B-1"), (start, end)) is None


# --- statements and materials ---------------------------------------------------------------


def test_statements_are_merged(load):
    brief = load(
        '[[beams]]\nbeams = ["B-*"]\nspan = "6 m"\nloads_complete = true\n'
        '[[beams]]\nbeams = ["B-1"]\nspan = "6.4 m"\nunloaded = true\n'
    )
    stated = statements(brief, matched(brief, "B-1", "B-2", "C-1"))
    assert set(stated) == {"B-1", "B-2"}
    first = stated["B-1"]
    assert first.span is not None
    assert (first.span.value, first.span.source) == (6400.0, "brief, beams[2]")
    assert (first.unloaded, first.loads_complete, first.torsion) == (True, True, False)
    assert [r.text for r in first.remarks] == [
        "span: 6.40 m of beams[2] replaces 6.00 m of beams[1]"
    ]
    assert not stated["B-2"].unloaded


def test_a_statement_may_be_taken_back(load):
    brief = load(
        '[[beams]]\nbeams = ["B-*"]\nunloaded = true\n'
        '[[beams]]\nbeams = ["B-1"]\nunloaded = false\n'
    )
    stated = statements(brief, matched(brief, "B-1", "B-2"))
    assert (stated["B-1"].unloaded, stated["B-2"].unloaded) == (False, True)


def test_unloaded_with_a_load_is_doubted(load):
    brief = load(
        entry(beams='["B-1"]', line='"3 kN/m"') + '[[beams]]\nbeams = ["B-1"]\nunloaded = true\n'
    )
    (remark,) = statements(brief, matched(brief, "B-1"))["B-1"].remarks
    assert remark.kind == "doubt"
    assert "loads[1] loads it" in remark.text


def test_an_eccentric_load_asks_for_torsion(load):
    text = entry(beams='["B-1"]', line='"3 kN/m"', eccentricity='"100 mm"')
    stated = statements(brief := load(text), matched(brief, "B-1"))
    assert stated["B-1"].torsion
    declared = load('[[beams]]\nbeams = ["B-1"]\ntorsion = true\n')
    assert statements(declared, matched(declared, "B-1"))["B-1"].torsion
    overruled = load(text + '[[beams]]\nbeams = ["B-1"]\ntorsion = false\n')
    assert statements(overruled, matched(overruled, "B-1"))["B-1"].torsion
    plain = load(entry(beams='["B-1"]', line='"3 kN/m"', eccentricity='"0 mm"'))
    assert statements(plain, matched(plain, "B-1")) == {}


def test_nothing_stated_is_nothing_claimed():
    assert BeamStatement() == BeamStatement(None, False, False, False, None, "", ())


def test_materials_are_merged_and_know_their_source(load):
    brief = load(
        '[[materials]]\nbeams = ["B-*"]\nconcrete_strength = "30 MPa"\ncover = "40 mm"\n'
        '[[materials]]\nbeams = ["B-1"]\nconcrete_strength = "45 MPa"\ndensity = "1900 kg/m3"\n'
    )
    stated = materials(brief, matched(brief, "B-1", "B-2"))
    first = stated["B-1"]
    assert first.concrete_strength is not None
    assert (first.concrete_strength.value, first.concrete_strength.source) == (
        45.0,
        "brief, materials[2]",
    )
    assert not first.concrete_strength.assumed
    assert first.cover is not None
    assert first.cover.value == 40.0
    assert first.bar_yield is None
    assert [r.text for r in first.remarks] == [
        "concrete strength: 45.0 MPa of materials[2] replaces 30.0 MPa of materials[1]"
    ]
    assert stated["B-2"].density is None


def test_defaults_are_assumed_values(load):
    defaults = default_materials(load('[defaults]\nconcrete_strength = "30 MPa"\n'))
    assert defaults.concrete_strength is not None
    assert defaults.concrete_strength.assumed
    assert defaults.concrete_strength.source == "brief, defaults.concrete_strength"
    others = dataclasses.replace(defaults, concrete_strength=None)
    assert others == MaterialStatement()
