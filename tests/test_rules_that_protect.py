"""The rules that keep a doubtful beam from being called adequate, through the whole program.

Each test holds a beam that a broken rule would call adequate, and its sound twin that is.
"""

from __future__ import annotations

import csv
import io
import json
import math
import re
from collections.abc import Mapping
from dataclasses import replace
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest
from rich.console import Console

from ifccheck import pipeline
from ifccheck.beam import Verdict
from ifccheck.errors import BriefError
from ifccheck.publish.csv import ratings_csv
from ifccheck.publish.html import render
from ifccheck.publish.json import ratings_json
from ifccheck.publish.property_sets import result_sets
from ifccheck.publish.report import Report
from ifccheck.publish.terminal import closing_table
from ifccheck.publish.terminal_sheet import sheet_text
from ifccheck.rating import Rating
from tests.step_halls import DEFAULTS, LOAD, NOTATION, Bar, Beam, Block, brief, guid_of, hall, write

SOUND = hall(Beam())


def report_on(folder: Path, model: str, *entries: str, text: str = "") -> Report:
    """Rate a model by a brief with these entries, or with a load of 10 kN/m on every beam."""
    model_path, brief_path = write(folder, model, text or brief(*entries))
    return pipeline.rate([model_path], brief_path).reports[0]


def rating_of(report: Report, mark: str = "B-1") -> Rating:
    return next(report.ratings[beam.key] for beam in report.model.beams if beam.mark == mark)


def rated(folder: Path, model: str, *entries: str, text: str = "") -> Rating:
    """What the program says of beam B-1."""
    return rating_of(report_on(folder, model, *entries, text=text))


def check_adequate(rating: Rating) -> None:
    assert rating.verdict is Verdict.ADEQUATE, [reason.text for reason in rating.reasons]
    assert rating.utilisation <= 1.0


def check_not_rated(rating: Rating, why: str) -> None:
    assert rating.verdict is Verdict.NOT_RATED, rating.utilisation
    assert math.isnan(rating.utilisation)
    assert why in "; ".join(reason.text for reason in rating.reasons)


def load(text: str, case: str = "floor", beams: str = "B-*") -> str:
    return f'[[loads]]\ncase = "{case}"\nbeams = ["{beams}"]\n{text}\n'


def stated(table: str, text: str, beams: str = "B-1") -> str:
    return f'[[{table}]]\nbeams = ["{beams}"]\n{text}\n'


def changed(text: str, old: str, new: str) -> str:
    assert old in text
    return text.replace(old, new, 1)


def with_lines(model: str, *instances: str) -> str:
    """A model with further instances, #9001 and on, before its end."""
    lines = "".join(f"#{9001 + n}={text};\n" for n, text in enumerate(instances))
    return changed(model, "ENDSEC;\nEND-ISO", f"{lines}ENDSEC;\nEND-ISO")


def number_of(model: str, instance: str) -> str:
    """The number of the first instance that begins so."""
    found = re.search(rf"#(\d+)={re.escape(instance)}", model)
    assert found
    return found[1]


def test_the_sound_twin_of_all_is_adequate(tmp_path: Path) -> None:
    check_adequate(rated(tmp_path, SOUND))


# Loads -------------------------------------------------------------------------------------------


def test_no_load_but_self_weight(tmp_path: Path) -> None:
    other = hall(Beam(), Beam("D-2", at=(0.0, 9000.0, 3000.0)))
    elsewhere = load('line = "10 kN/m"', beams="D-2")
    check_not_rated(rated(tmp_path, other, elsewhere), "no load assigned")
    check_adequate(rated(tmp_path, other, elsewhere, stated("beams", "unloaded = true")))


def test_unloaded_does_not_hide_a_load(tmp_path: Path) -> None:
    heavy = load('line = "90 kN/m"')
    rating = rated(tmp_path, SOUND, heavy, stated("beams", "unloaded = true"))
    assert rating.verdict is Verdict.FALLS_SHORT


def test_a_mistyped_mark_among_good_ones_loses_no_load(tmp_path: Path) -> None:
    text = changed(LOAD, '"B-*"', '"B-1", "B-l"')
    with pytest.raises(BriefError, match="'B-l' reaches no beam"):
        rated(tmp_path, SOUND, text)
    check_adequate(rated(tmp_path, SOUND, text + "optional = true\n"))


ON_TOP = Beam("R-1", at=(3000.0, -2000.0, 3600.0), along=(0.0, 1.0, 0.0), length=4000.0,
              columns=False)  # fmt: skip
RESTING: Mapping[str, str] = {
    "a beam on top": hall(Beam(), ON_TOP),
    "a beam that frames into its side": hall(
        Beam(), Beam("R-1", at=(3000.0, 150.0, 3100.0), along=(0.0, 1.0, 0.0), depth=500.0,
                     length=4000.0, columns=False),
    ),
    "a column on top": hall(Beam(), others=[Block("C-9", (3000.0, 0.0, 3600.0), (300, 300), 3000)]),
    "a column on top near an end": hall(
        Beam(), others=[Block("C-9", (1300.0, 0.0, 3600.0), (300, 300), 3000)]
    ),
    "a column that reaches past the one below": hall(
        Beam(), others=[Block("C-9", (350.0, 0.0, 3600.0), (700, 300), 3000)]
    ),
    "a beam into its side that reaches past the column": hall(
        Beam(), Beam("R-1", at=(250.0, 150.0, 3100.0), along=(0.0, 1.0, 0.0), width=500.0,
                     depth=500.0, length=4000.0, columns=False),
    ),
    "a beam 30 mm from its side": hall(
        Beam(), Beam("R-1", at=(3000.0, 180.0, 3100.0), along=(0.0, 1.0, 0.0), depth=500.0,
                     length=4000.0, columns=False),
    ),
    "a wall on top": hall(
        Beam(), others=[Block("W-9", (3000.0, 0.0, 3600.0), (4000, 200), 3000, kind="IFCWALL")]
    ),
    "a proxy on top": hall(
        Beam(), others=[Block("X-9", (3000.0, 0.0, 3600.0), (900, 200), 900,
                              kind="IFCBUILDINGELEMENTPROXY")]
    ),
    "a stair flight on top": hall(
        Beam(), others=[Block("S-9", (3000.0, 0.0, 3600.0), (900, 200), 900,
                              kind="IFCSTAIRFLIGHT")]
    ),
    "an assembly on top": hall(
        Beam(), others=[Block("A-9", (3000.0, 0.0, 3600.0), (900, 200), 900,
                              kind="IFCELEMENTASSEMBLY")]
    ),
    "a steel beam on top": hall(
        Beam(),
        Beam("R-1", at=(3000.0, -2000.0, 3600.0), along=(0.0, 1.0, 0.0), length=4000.0,
             material="Structural steel S355", notation=None, columns=False),
    ),
}  # fmt: skip


@pytest.mark.parametrize("kind", RESTING)
def test_what_rests_between_the_supports(tmp_path: Path, kind: str) -> None:
    check_not_rated(rated(tmp_path, RESTING[kind]), "reactions not included: ")
    complete = stated("beams", "loads_complete = true")
    check_adequate(rated(tmp_path, RESTING[kind], LOAD, complete))


def test_what_rests_on_it_in_parts(tmp_path: Path) -> None:
    """A member whose body is that of its parts rests on the beam where they do."""
    whole = hall(Beam(), ON_TOP)
    check_not_rated(rated(tmp_path, in_parts(whole, "R-1")), "reactions not included: R-1")


def in_parts(model: str, mark: str) -> str:
    """A model in which the body of a beam is that of a part of it."""
    number = number_of(model, f"IFCBEAM('{guid_of(f'beam {mark}')}'")
    found = re.search(rf"#{number}=IFCBEAM\(.*?,(#\d+),(#\d+),\$,\.BEAM\.\);", model)
    assert found
    empty = found[0].replace(found[2], "$")
    return with_lines(
        changed(model, found[0], empty),
        f"IFCBUILDINGELEMENTPART('{guid_of('part')}',$,'part',$,$,{found[1]},{found[2]},$,$)",
        f"IFCRELAGGREGATES('{guid_of('parts')}',$,$,$,#{number},(#9001))",
    )


def representation_of(model: str, mark: str) -> tuple[str, str]:
    """The whole line of a beam's representation, and the number of its body."""
    number = number_of(model, f"IFCBEAM('{guid_of(f'beam {mark}')}'")
    shape = re.search(rf"#{number}=IFCBEAM\(.*?,#\d+,#(\d+),\$,\.BEAM\.\);", model)
    assert shape
    held = re.search(rf"#{shape[1]}=IFCPRODUCTDEFINITIONSHAPE\(\$,\$,\(#(\d+)\)\);", model)
    assert held
    line = re.search(rf"#{held[1]}=IFCSHAPEREPRESENTATION\(.*?\(#(\d+)\)\);", model)
    assert line
    return line[0], line[1]


def revolved(model: str, mark: str) -> str:
    """A beam bent in plan to a radius of 5 m, over 0.8 rad."""
    _, solid = representation_of(model, mark)
    line = re.search(rf"#{solid}=IFCEXTRUDEDAREASOLID\((#\d+),(#\d+),.*?\);", model)
    assert line
    return with_lines(
        changed(model, line[0], f"#{solid}=IFCREVOLVEDAREASOLID({line[1]},{line[2]},#9003,0.8);"),
        "IFCCARTESIANPOINT((5000.0,0.0,0.0))",
        "IFCDIRECTION((0.0,1.0,0.0))",
        "IFCAXIS1PLACEMENT(#9001,#9002)",
    )


def swept(model: str, mark: str) -> str:
    """A beam swept along a polyline."""
    _, solid = representation_of(model, mark)
    line = re.search(rf"#{solid}=IFCEXTRUDEDAREASOLID\((#\d+),.*?\);", model)
    assert line
    body = f"IFCFIXEDREFERENCESWEPTAREASOLID({line[1]},$,#9003,$,$,#9004)"
    return with_lines(
        changed(model, line[0], f"#{solid}={body};"),
        "IFCCARTESIANPOINT((0.0,0.0,0.0))",
        "IFCCARTESIANPOINT((4000.0,0.0,0.0))",
        "IFCPOLYLINE((#9001,#9002))",
        "IFCDIRECTION((0.0,0.0,1.0))",
    )


def axis_alone(model: str, mark: str, *curve: str) -> str:
    """A beam of which only the axis is modelled, as #9003."""
    line, solid = representation_of(model, mark)
    axis = line.replace("'Body','SweptSolid'", "'Axis','Curve3D'").replace(f"#{solid}", "#9003")
    return with_lines(
        changed(model, line, axis),
        "IFCCARTESIANPOINT((0.0,0.0,100.0))",
        "IFCCARTESIANPOINT((4000.0,0.0,100.0))",
        *(curve or ("IFCPOLYLINE((#9001,#9002))",)),
    )


def without_extent(model: str, mark: str) -> str:
    """A beam whose axis is a line without ends."""
    line = "IFCLINE(#9001,#9004)", "IFCVECTOR(#9005,1.0)", "IFCDIRECTION((1.0,0.0,0.0))"
    return axis_alone(model, mark, *line)


UNTRACED = hall(Beam(), ON_TOP, Beam("B-2", at=(0.0, 9000.0, 3000.0)))


@pytest.mark.parametrize("shape", [revolved, swept, axis_alone])
def test_what_rests_on_it_with_a_body_that_is_not_traced(tmp_path: Path, shape: Any) -> None:
    """Its box is rough, and too large rather than too small; where it is not, nothing rests."""
    report = report_on(tmp_path, shape(UNTRACED, "R-1"))
    check_not_rated(rating_of(report), "reactions not included: R-1")
    check_adequate(rating_of(report, "B-2"))
    assert any("known only roughly (1 IfcBeam)" in r.text for r in report.model.remarks)


def test_what_rests_no_one_knows_where(tmp_path: Path) -> None:
    """Then it may rest on any beam of its storey."""
    model = without_extent(UNTRACED, "R-1")
    report = report_on(tmp_path, model)
    for mark in ("B-1", "B-2"):
        check_not_rated(
            rating_of(report, mark),
            "reactions not included: 1 member has no readable extent (R-1)",
        )
    check_adequate(rated(tmp_path, model, LOAD, stated("beams", "loads_complete = true")))


L_PLAN = ((0.0, 0.0), (4000.0, 0.0), (4000.0, 200.0), (200.0, 200.0), (200.0, 4000.0),
          (0.0, 4000.0))  # fmt: skip
"""A wall round a corner, seen from above, with legs of 4 m"""


def test_a_wall_round_a_corner_holds_where_it_is_and_not_where_its_box_is(tmp_path: Path) -> None:
    """In the open quarter of its box the beam's end hangs in the air."""
    far = post("C-2", 6150.0, 0.0)
    inside = Block("W-1", (-1500.0, -1500.0, 0.0), (1, 1), 6000, kind="IFCWALL", ring=L_PLAN)
    model = hall(loose("B-1", 0.0), others=[far, inside])
    check_not_rated(rated(tmp_path, model), "supports unknown: its start touches no member")
    leg = Block("W-1", (-200.0, -1500.0, 0.0), (1, 1), 6000, kind="IFCWALL", ring=L_PLAN)
    along = hall(loose("B-1", 0.0), others=[far, leg])
    check_adequate(rated(tmp_path, along))


@pytest.mark.parametrize("kind", ["IFCMEMBER", "IFCBEAM"])
def test_what_hangs_below_it_between_its_ends(tmp_path: Path, kind: str) -> None:
    """It may pull or bear: the supports are not known, and once they are, its reaction is not."""
    hanger = Block("H-9", (3000.0, 0.0, 1500.0), (200, 200), 1500, kind=kind)
    if kind == "IFCBEAM":
        hanger = replace(hanger, material="Structural steel S355")
    hung = hall(Beam(), others=[hanger])
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"')
    complete = stated("beams", "loads_complete = true")
    check_not_rated(rated(tmp_path, hung, LOAD, complete), "supports unknown")
    check_not_rated(rated(tmp_path, hung, LOAD, pinned, complete), "supports unknown: H-9")
    named = stated("supports", 'ignore = ["H-9"]')
    check_not_rated(rated(tmp_path, hung, LOAD, named), "reactions not included: H-9")
    check_adequate(rated(tmp_path, hung, LOAD, named, complete))


def test_what_touches_the_tip_of_a_cantilever(tmp_path: Path) -> None:
    cantilever = Beam(notation={**NOTATION, "TopBars": "6-25M"}, length=3000.0, columns=False)
    fixed = stated("supports", 'start = "fixed"\nend = "free"')
    light = load('line = "2 kN/m"')
    tip = Block("C-9", (2850.0, 0.0, 3600.0), (300, 300), 3000)
    held = [Block("W-1", (-150.0, 0.0, 0.0), (300, 3000), 6000, kind="IFCWALL")]
    check_adequate(rated(tmp_path, hall(cantilever, others=held), light, fixed))
    loaded = hall(cantilever, others=[*held, tip])
    check_not_rated(rated(tmp_path, loaded, light, fixed), "reactions not included: C-9")


@pytest.mark.parametrize("how", ["torsion", "eccentricity"])
def test_torsion(tmp_path: Path, how: str) -> None:
    if how == "torsion":
        twisted = rated(tmp_path, SOUND, LOAD, stated("beams", "torsion = true"))
    else:
        twisted = rated(tmp_path, SOUND, LOAD + 'eccentricity = "200 mm"\n')
    check_not_rated(twisted, "torsion")
    straight = rated(tmp_path, SOUND, LOAD + 'eccentricity = "0 mm"\n')
    check_adequate(straight)
    assert any("through the web" in remark.text for remark in straight.remarks)


def test_a_hung_load(tmp_path: Path) -> None:
    check_not_rated(rated(tmp_path, SOUND, LOAD + 'face = "bottom"\n'), "hung load")
    check_adequate(rated(tmp_path, SOUND, LOAD + 'face = "top"\n'))


# Supports ----------------------------------------------------------------------------------------


def test_an_end_that_touches_nothing(tmp_path: Path) -> None:
    loose = hall(Beam(columns=False))
    check_not_rated(rated(tmp_path, loose), "supports unknown: its start touches no member")
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"')
    check_adequate(rated(tmp_path, loose, LOAD, pinned))


def test_one_end_that_touches_nothing(tmp_path: Path) -> None:
    column = Block("C-1", (150.0, 0.0, 0.0), (300, 300), 3000)
    overhanging = hall(Beam(columns=False), others=[column])
    check_not_rated(rated(tmp_path, overhanging), "supports unknown: its end touches no member")


def test_an_end_on_which_something_merely_stands(tmp_path: Path) -> None:
    column = Block("C-1", (150.0, 0.0, 0.0), (300, 300), 3000)
    above = Block("C-2", (5850.0, 0.0, 3600.0), (300, 300), 3000)
    standing = hall(Beam(columns=False), others=[column, above])
    check_not_rated(rated(tmp_path, standing), "supports unknown: its end touches no member")


def loose(mark: str, x: float, y: float = 0.0, *, turned: bool = False, **more: Any) -> Beam:
    """A beam without columns that starts at (x, y), along X or Y."""
    along = (0.0, 1.0, 0.0) if turned else (1.0, 0.0, 0.0)
    return Beam(mark, at=(x, y, 3000.0), along=along, columns=False, **more)


def post(name: str, x: float, y: float, kind: str = "IFCCOLUMN") -> Block:
    """A column of 300 by 300 from the ground to 6 m."""
    return Block(name, (x, y, 0.0), (300, 300), 6000, kind=kind)


HANGING: Mapping[str, tuple[str, str]] = {
    "two end to end": (
        hall(loose("B-1", 0.0), loose("B-2", 6000.0),
             others=[post("C-1", -150.0, 0.0), post("C-2", 12150.0, 0.0)]),
        "meet end to end",
    ),
    "three end to end": (
        hall(loose("B-2", -6000.0), loose("B-1", 0.0), loose("B-3", 6000.0)), "meet end to end",
    ),
    "a ring of four": (
        hall(loose("B-1", 0.0), loose("B-2", 6150.0, -150.0, turned=True, length=6150.0),
             loose("B-3", 150.0, 6150.0, length=6150.0),
             loose("B-4", 0.0, 150.0, turned=True, length=6150.0)),
        "touches no member",
    ),
    "girders that nothing carries": (
        hall(loose("B-1", 0.0), loose("G-1", -150.0, -3000.0, turned=True),
             loose("G-2", 6150.0, -3000.0, turned=True)),
        "nothing shows that it is carried",
    ),
    "columns beside its ends": (
        hall(loose("B-1", 0.0), others=[post("C-1", 150.0, 300.0), post("C-2", 5850.0, 300.0)]),
        "touches no member",
    ),
    "posts of which no one knows what they are": (
        hall(loose("B-1", 0.0), others=[post("P-1", -150.0, 0.0, "IFCBUILDINGELEMENTPROXY"),
                                        post("P-2", 6150.0, 0.0, "IFCBUILDINGELEMENTPROXY")]),
        "touches no member",
    ),
    "walls of insulation": (
        hall(loose("B-1", 0.0), others=[post("Insulation", -150.0, 0.0, "IFCWALL"),
                                        post("Insulation 2", 6150.0, 0.0, "IFCWALL")]),
        "insulation",
    ),
}  # fmt: skip


@pytest.mark.parametrize("kind", HANGING)
def test_a_beam_that_nothing_holds_up(tmp_path: Path, kind: str) -> None:
    """The brief's default needs a way down to the ground; its entries are the engineer's word."""
    model, why = HANGING[kind]
    rating = rated(tmp_path, model)
    check_not_rated(rating, "supports unknown: ")
    check_not_rated(rating, why)
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"', beams="*")
    complete = stated("beams", "loads_complete = true", beams="*")
    check_adequate(rated(tmp_path, model, LOAD, pinned, complete))


FACING = [post("C-1", -150.0, 0.0), post("C-2", 6150.0, 0.0)]


def test_columns_face_to_face_and_girders_on_columns_hold_it(tmp_path: Path) -> None:
    check_adequate(rated(tmp_path, hall(loose("B-1", 0.0), others=FACING)))
    girders = [
        loose("G-1", -150.0, -3000.0, turned=True),
        loose("G-2", 6150.0, -3000.0, turned=True),
    ]
    under = [post(f"C-{x}{y}", x, y) for x in (-150.0, 6150.0) for y in (-3150.0, 3150.0)]
    model = hall(loose("B-1", 0.0), *girders, others=under)
    check_adequate(rated(tmp_path, model, LOAD))
    one_gone = hall(loose("B-1", 0.0), *girders, others=under[1:])
    check_not_rated(rated(tmp_path, one_gone), "supports unknown: its start touches only")
    said = stated("supports", 'start = "pinned"\nend = "pinned"', beams="G-1")
    check_adequate(rated(tmp_path, one_gone, LOAD, said))


def test_face_to_face_it_spans_to_the_centres_of_its_columns(tmp_path: Path) -> None:
    """25 kN/m over 6.0 m from face to face, columns of 300: 6.3 m and a tenth more moment.

    1.25 x 4.32 + 1.5 x 25 = 42.9 kN/m; x 6.3^2 / 8 = 212.8 kN*m, x 6.0^2 / 8 = 193.05 kN*m.
    """
    facing = hall(loose("B-1", 0.0), others=FACING)
    heavy = load('line = "25 kN/m"')
    report = report_on(tmp_path, facing, heavy)
    rating = rating_of(report)
    sagging = next(state for state in rating.limit_states if state.name == "FlexureSagging")
    assert sagging.demand == pytest.approx(42.9 * 6300.0**2 / 8.0, rel=1e-6)
    assert sagging.position == pytest.approx(3000.0, abs=1.0)
    span = next(item for item in rating.basis if item.name == "Span")
    assert span.value == pytest.approx(6300.0)
    assert span.source.startswith("from the centre of C-1 (IfcColumn), 150 mm beyond its start")
    assert any(span.source in r.text and r.kind == "assumption" for r in rating.remarks)
    own = rated(tmp_path, facing, heavy, stated("beams", 'span = "6 m"'))
    shorter = next(state for state in own.limit_states if state.name == "FlexureSagging")
    assert shorter.demand == pytest.approx(42.9 * 6000.0**2 / 8.0, rel=1e-6)
    check_not_rated(
        rated(tmp_path, facing, heavy, stated("beams", 'span = "5.9 m"')),
        "the stated span of 5.90 m (brief, beams[1]) is less than the 6.00 m",
    )


def test_checks_stop_at_the_face_where_the_beam_does(tmp_path: Path) -> None:
    """Beyond its end there is a column and no section to check; what acts there still acts."""
    rating = rated(tmp_path, hall(loose("B-1", 0.0), others=FACING))
    check_adequate(rating)
    for state in rating.limit_states:
        assert math.isnan(state.position) or 0.0 <= state.position <= 6000.0


def test_a_steel_girder_holds_it_where_columns_hold_the_girder(tmp_path: Path) -> None:
    steel: Any = {"material": "Structural steel S355", "notation": None, "turned": True}
    girders = [loose("G-1", -150.0, -3000.0, **steel), loose("G-2", 6150.0, -3000.0, **steel)]
    under = [post(f"C-{x}{y}", x, y) for x in (-150.0, 6150.0) for y in (-3150.0, 3150.0)]
    check_adequate(rated(tmp_path, hall(loose("B-1", 0.0), *girders, others=under)))
    hanging = hall(loose("B-1", 0.0), *girders, others=under[1:])
    check_not_rated(rated(tmp_path, hanging), "supports unknown")


def test_ends_of_which_the_brief_does_not_speak(tmp_path: Path) -> None:
    silent = brief(defaults=changed(DEFAULTS, 'supports = ["pinned", "pinned"]\n', ""))
    check_not_rated(rated(tmp_path, SOUND, text=silent), "supports unknown")


def test_a_support_away_from_the_ends(tmp_path: Path) -> None:
    """A wall below the middle makes two spans and hogs the beam over it."""
    wall = hall(Beam(), others=[Block("W-1", (3000.0, 0.0, 0.0), (300, 300), 3000, kind="IFCWALL")])
    check_not_rated(rated(tmp_path, wall), "supports unknown")
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"')
    check_not_rated(rated(tmp_path, wall, LOAD, pinned), "supports unknown: W-1 (IfcWall)")
    check_adequate(rated(tmp_path, wall, LOAD, stated("supports", 'ignore = ["W-1"]')))


def test_the_later_of_two_entries_wins_and_says_so(tmp_path: Path) -> None:
    """60 kN/m: too much for a pinned beam, not for a fixed one of its top bars."""
    model = hall(Beam(notation={**NOTATION, "TopBars": "3-25M"}))
    heavy = load('line = "36 kN/m"')
    fixed = stated("supports", 'start = "fixed"\nend = "fixed"')
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"')
    check_adequate(rated(tmp_path, model, heavy, pinned, fixed))
    last = rated(tmp_path, model, heavy, fixed, pinned)
    assert last.verdict is Verdict.FALLS_SHORT
    texts = [remark.text for remark in last.remarks]
    assert any("supports[2] replaces" in text and "supports[1]" in text for text in texts)


def test_a_stated_span_much_shorter_than_the_beam(tmp_path: Path) -> None:
    heavy = load('line = "60 kN/m"')
    short = rated(tmp_path, SOUND, LOAD, stated("beams", 'span = "3.6 m"'))
    check_not_rated(short, "beyond its supports")
    assert rated(tmp_path, SOUND, heavy).verdict is Verdict.FALLS_SHORT
    check_adequate(rated(tmp_path, SOUND, LOAD, stated("beams", 'span = "5.7 m"')))


def test_an_end_that_frames_into_the_side_of_a_girder(tmp_path: Path) -> None:
    """Its reaction does not compress it: shear counts at the face and not at dv from it."""
    supply = {**NOTATION, "BottomBars": "5-25M", "Stirrups": "2 legs 10M @ 310"}
    beam = Beam(width=350.0, length=3600.0, notation=supply)
    girders = [
        Beam(f"G-{n}", at=(x, -3000.0, 2900.0), along=(0.0, 1.0, 0.0), depth=700.0)
        for n, x in enumerate((-150.0, 3750.0))
    ]
    loose = replace(beam, columns=False)
    heavy = load('line = "110 kN/m"')
    on_columns = rated(tmp_path, hall(beam), heavy)
    on_girders = rated(tmp_path, hall(loose, *girders), heavy)
    check_adequate(on_columns)
    assert on_girders.verdict is Verdict.FALLS_SHORT
    assert on_girders.governing is not None
    shear = next(state for state in on_girders.limit_states if state.name == "Shear")
    assert shear.utilisation > 1.0
    assert min(shear.position, 3600.0 - shear.position) < 1.0


# Reinforcement -----------------------------------------------------------------------------------


def noted(**notation: str) -> str:
    return hall(Beam(notation={**NOTATION, **notation}))


def test_legs_that_nobody_states(tmp_path: Path) -> None:
    check_not_rated(rated(tmp_path, noted(Stirrups="10M @ 200")), "legs of the stirrups")
    check_adequate(rated(tmp_path, noted(Stirrups="2 legs 10M @ 200")))


def test_stirrups_of_which_nobody_speaks(tmp_path: Path) -> None:
    silent = {name: text for name, text in NOTATION.items() if name != "Stirrups"}
    check_not_rated(rated(tmp_path, hall(Beam(notation=silent))), "whether there are stirrups")


@pytest.mark.parametrize("text", ["3-25Q", "3 bars", "25M"])
def test_reinforcement_that_cannot_be_read(tmp_path: Path, text: str) -> None:
    check_not_rated(rated(tmp_path, noted(BottomBars=text)), "cannot be read")


def test_a_tensioned_face_of_which_nobody_speaks(tmp_path: Path) -> None:
    silent = {name: text for name, text in NOTATION.items() if name != "BottomBars"}
    check_not_rated(rated(tmp_path, hall(Beam(notation=silent))), "bottom are not stated")


def test_no_reinforcement_at_all(tmp_path: Path) -> None:
    check_not_rated(rated(tmp_path, hall(Beam(notation=None))), "reinforcement")


BEARINGS = stated("supports", 'bearing = ["300 mm", "300 mm"]')


def barred(*bars: Bar) -> str:
    return hall(Beam(notation=None, bars=bars))


def row(z: float = 62.0, **ends: float) -> list[Bar]:
    """Four bars of 25M, from end to end unless told otherwise."""
    start, end = ends.get("start", 40.0), ends.get("end", 5960.0)
    return [Bar(start, end, y, z) for y in (-90.0, -30.0, 30.0, 90.0)]


def test_bars_outside_the_outline(tmp_path: Path) -> None:
    """A row that hangs below the soffit is not counted, and no one knows what it is."""
    light = load('line = "1 kN/m"')
    check_adequate(rated(tmp_path, barred(*row()), light, BEARINGS))
    hanging = barred(*row(), *row(z=-60.0))
    check_not_rated(rated(tmp_path, hanging, light, BEARINGS), "outside")


def test_bars_that_stop_short(tmp_path: Path) -> None:
    """A bar's stress falls to nothing at its end: what stops at the quarter points leaves the
    rest of the span without steel."""
    light = load('line = "1 kN/m"')
    check_adequate(rated(tmp_path, barred(*row()), light, BEARINGS))
    cut = rated(tmp_path, barred(*row(start=1500.0, end=4500.0)), light, BEARINGS)
    assert cut.verdict is Verdict.FALLS_SHORT
    assert math.isinf(cut.utilisation)


def test_bars_count_by_the_smallest_diameter_that_is_credible(tmp_path: Path) -> None:
    """Attributes say 25M (500 mm2), the swept body 16 mm (200 mm2): the body counts."""
    thick = hall(Beam(notation=None, bars=row(), column=600.0))
    thin = thick.replace("12.6,$,$,$", "8.0,$,$,$")
    heavy = load('line = "23 kN/m"')
    held = stated("supports", 'bearing = ["600 mm", "600 mm"]')
    check_adequate(rated(tmp_path, thick, heavy, held))
    assert rated(tmp_path, thin, heavy, held).verdict is Verdict.FALLS_SHORT


# Concrete, bodies and scope ----------------------------------------------------------------------


@pytest.mark.parametrize("material", ["Finish by others", ""])
def test_unknown_material(tmp_path: Path, material: str) -> None:
    """Not rated, though the brief knows a strength, and never out of scope."""
    known = brief(defaults=DEFAULTS + 'concrete_strength = "30 MPa"\n')
    report = report_on(tmp_path, hall(Beam(material=material)), text=known)
    check_not_rated(rating_of(report), "material unknown")
    assert report.model.out_of_scope == ()
    check_adequate(rated(tmp_path, hall(Beam(material="Concrete")), text=known))


@pytest.mark.parametrize(
    "material",
    ["Concrete 4,5 ksi", "Concrete M300", "Concrete with Grade 60 rebar", "Concrete 4 MPa"],
)
def test_a_default_does_not_replace_a_strength_that_cannot_be_read(
    tmp_path: Path, material: str
) -> None:
    default = brief(defaults=DEFAULTS + 'concrete_strength = "50 MPa"\n')
    told = hall(Beam(material=material))
    check_not_rated(rated(tmp_path, told, text=default), "concrete strength cannot be read from")
    check_adequate(rated(tmp_path, hall(Beam(material="Concrete")), text=default))
    word = default + stated("materials", 'concrete_strength = "31 MPa"')
    check_adequate(rated(tmp_path, told, text=word))


def with_density(value: str) -> str:
    model = hall(Beam())
    properties = "IFCPROPERTYSINGLEVALUE('MassDensity',$,IFCMASSDENSITYMEASURE({}),$)"
    concrete = number_of(model, "IFCMATERIAL('Concrete C30/37'")
    return with_lines(
        model,
        properties.format(value),
        f"IFCMATERIALPROPERTIES('Pset_MaterialCommon',$,(#9001),#{concrete})",
    )


@pytest.mark.parametrize(
    ("density", "weight", "source"),
    [
        ("2400.", "24.0 kN/m3", "brief"),  # 2400 x 9.80665 = 23.5 kN/m3 without the steel
        ("2447.", "24.0 kN/m3", "brief"),
        ("3000.", "29.4 kN/m3", "MassDensity"),
    ],
)
def test_a_greater_density_than_the_brief_weighs_what_it_does(
    tmp_path: Path, density: str, weight: str, source: str
) -> None:
    rating = rated(tmp_path, with_density(density))
    (told,) = (item for item in rating.basis if item.name == "ConcreteUnitWeight")
    assert str(told.value) == weight
    assert source in told.source
    assert any("self weight by" in remark.text for remark in rating.remarks) is (source != "brief")
    heavier = rating.utilisation / rated(tmp_path, SOUND).utilisation
    own, floor = 1.25 * 0.18 * float(str(told.value).split()[0]), 1.5 * 10.0  # kN/m
    assert heavier == pytest.approx((own + floor) / (1.25 * 0.18 * 24.0 + floor), rel=2e-3)


@pytest.mark.parametrize("material", ["Structural steel S355", "Timber GL24h"])
def test_out_of_scope_on_positive_evidence_alone(tmp_path: Path, material: str) -> None:
    other = Beam("B-2", at=(0.0, 9000.0, 3000.0), material=material, notation=None)
    report = report_on(tmp_path, hall(Beam(), other))
    assert [beam.mark for beam in report.model.beams] == ["B-1"]
    assert [left.name for left in report.model.out_of_scope] == ["B-2"]
    assert report.model.out_of_scope[0].evidence


def test_contradictory_material(tmp_path: Path) -> None:
    """Timber by its material, concrete by the bars in it: in scope, and not rated."""
    strange = hall(Beam(material="Timber GL24h", notation=None, bars=row()))
    check_not_rated(rated(tmp_path, strange), "material contradictory")


def test_the_smaller_of_two_strengths(tmp_path: Path) -> None:
    """C50/60 by the material, C20/25 by the beam's own class: the least of both, with a remark."""
    strong = hall(Beam(material="Concrete C50/60", notation={**NOTATION, "BottomBars": "5-25M"}))
    beam = number_of(strong, "IFCBEAM")
    both = with_lines(
        strong,
        "IFCPROPERTYSINGLEVALUE('StrengthClass',$,IFCLABEL('C20/25'),$)",
        f"IFCPROPERTYSET('{guid_of('p')}',$,'Pset_ConcreteElementGeneral',$,(#9001))",
        f"IFCRELDEFINESBYPROPERTIES('{guid_of('q')}',$,$,$,(#{beam}),#9002)",
    )
    heavy = load('line = "52 kN/m"')
    alone, disputed = rated(tmp_path, strong, heavy), rated(tmp_path, both, heavy)
    check_adequate(alone)
    assert strength_of(alone) == pytest.approx(50.0)
    assert strength_of(disputed) == pytest.approx(20.0)
    assert disputed.verdict is Verdict.FALLS_SHORT
    assert any("C50/60" in r.text or "50" in r.text for r in disputed.remarks)


def strength_of(rating: Rating) -> Any:
    return next(item.value for item in rating.basis if item.name == "ConcreteStrength")


def opening(model: str) -> str:
    beam = number_of(model, "IFCBEAM")
    return with_lines(
        model,
        f"IFCOPENINGELEMENT('{guid_of('o')}',$,'Duct',$,$,$,$,$,.OPENING.)",
        f"IFCRELVOIDSELEMENT('{guid_of('v')}',$,$,$,#{beam},#9001)",
    )


def tendon(model: str) -> str:
    beam = number_of(model, "IFCBEAM")
    return with_lines(
        model,
        f"IFCTENDON('{guid_of('t')}',$,'T-1',$,$,$,$,$,$,.STRAND.,15.2,140.,$,$,$,$,$)",
        f"IFCRELAGGREGATES('{guid_of('a')}',$,$,$,#{beam},(#9001))",
    )


def notched(model: str) -> str:
    """Half of the depth cut away along the beam."""
    solid = number_of(model, "IFCEXTRUDEDAREASOLID")
    cut = with_lines(
        model.replace(f"({'#' + solid}))", "(#9005))", 1),
        "IFCCARTESIANPOINT((0.0,0.0,300.0))",
        "IFCAXIS2PLACEMENT3D(#9001,$,$)",
        "IFCPLANE(#9002)",
        "IFCHALFSPACESOLID(#9003,.F.)",
        f"IFCBOOLEANCLIPPINGRESULT(.DIFFERENCE.,#{solid},#9004)",
    )
    assert cut.count("#9005") == 2
    return cut


def faceted(model: str) -> str:
    return re.sub(r"IFCEXTRUDEDAREASOLID\(.*?\);", "IFCFACETEDBREP($);", model, count=1)


BODIES: Mapping[str, tuple[str, str]] = {
    "opening": (opening(SOUND), "opening cannot be read"),
    "tendon": (tendon(SOUND), "prestressed"),
    "Brep without faces": (faceted(SOUND), "body has no faces"),
}


@pytest.mark.parametrize("kind", BODIES)
def test_bodies_that_cannot_be_rated(tmp_path: Path, kind: str) -> None:
    model, why = BODIES[kind]
    check_not_rated(rated(tmp_path, model), why)


def test_a_cut_along_the_beam_is_taken_off_its_section(tmp_path: Path) -> None:
    found = {item.name: item.value for item in rated(tmp_path, notched(SOUND)).basis}
    assert found["Depth"] == pytest.approx(300.0)
    assert found["EffectiveDepthSagging"] == pytest.approx(300.0 - 63.9)


def test_a_member_that_stands(tmp_path: Path) -> None:
    """Its own z lies along X, so that what was its length stands upright."""
    model = hall(Beam(columns=False))
    axes = number_of(model, "IFCLOCALPLACEMENT")
    upright = re.sub(
        rf"(#{axes}=IFCLOCALPLACEMENT\(\$,)#\d+\)", r"\g<1>#9004)", model, count=1
    )  # fmt: skip
    upright = with_lines(
        upright,
        "IFCCARTESIANPOINT((0.0,0.0,3000.0))",
        "IFCDIRECTION((1.0,0.0,0.0))",
        "IFCDIRECTION((0.0,0.0,1.0))",
        "IFCAXIS2PLACEMENT3D(#9001,#9002,#9003)",
    )
    pinned = stated("supports", 'start = "pinned"\nend = "pinned"')
    check_adequate(rated(tmp_path, model, LOAD, pinned))
    check_not_rated(rated(tmp_path, upright, LOAD, pinned), "vertical member")


# The rated case over the model -------------------------------------------------------------------


def test_one_unrated_beam_in_its_path_leaves_a_case_not_rated(tmp_path: Path) -> None:
    press = load('point = "40 kN"\nat = "50 %"', case="press")
    other = Beam("B-2", at=(0.0, 9000.0, 3000.0))
    sound = report_on(tmp_path, hall(Beam(), other), LOAD, press).cases[0]
    assert sound.factor > 1.0
    doubtful = replace(other, notation={**NOTATION, "Stirrups": "10M @ 200"})
    report = report_on(tmp_path, hall(Beam(), doubtful), LOAD, press)
    check_adequate(rating_of(report, "B-1"))
    (case,) = report.cases
    assert math.isnan(case.factor)
    assert case.governing_beam is None
    assert len(case.unrated_in_path) == 1
    assert case.text == (
        "cannot be said: an input or a check is not settled of 1 beam that it reaches"
    )
    beside = report_on(tmp_path, hall(Beam(), doubtful), LOAD, press.replace("B-*", "B-1"))
    assert beside.cases[0].factor == pytest.approx(sound.factor, rel=1e-6)


def test_a_case_on_a_beam_without_a_body_is_not_rated(tmp_path: Path) -> None:
    """The load on a beam that could not be read at all is not lost from the case's path."""
    press = load('point = "40 kN"\nat = "50 %"', case="press")
    other = Beam("B-2", at=(0.0, 9000.0, 3000.0))
    model = hall(other, Beam())
    (case,) = report_on(tmp_path, faceted(model), LOAD, press).cases
    assert math.isnan(case.factor)


# Words -------------------------------------------------------------------------------------------


class _Texts(HTMLParser):
    """The texts of a page, one for each element's stretch of text."""

    def __init__(self) -> None:
        super().__init__()
        self.texts: list[str] = []
        self.hidden = False

    def handle_starttag(self, tag: str, attrs: Any) -> None:
        self.hidden = tag in ("style", "script")

    def handle_endtag(self, tag: str) -> None:
        self.hidden = False

    def handle_data(self, data: str) -> None:
        if not self.hidden and data.strip():
            self.texts.append(data.strip())


def printed(report: Report) -> dict[str, list[str]]:
    """Every text that each output shows, cell by cell or line by line."""
    page = _Texts()
    page.feed(render(report))
    stream = io.StringIO()
    console = Console(file=stream, width=200, color_system=None)
    closing_table(report, console)
    for beam in report.model.beams:
        console.print(sheet_text(report.sheet(beam.key), console))
    cells = [cell for row in csv.reader(io.StringIO(ratings_csv(report))) for cell in row]
    return {"html": page.texts, "terminal": stream.getvalue().splitlines(), "csv": cells}


def test_a_utilisation_just_above_1_is_never_printed_as_1(tmp_path: Path) -> None:
    """Scaled by its own rating factor and 3e-8 more, so that it exceeds 1 by next to nothing."""
    text = 'point = "{!r} kN"\nat = "50 %"'
    first = rated(tmp_path, SOUND, load(text.format(40.0), case="press"))
    k = first.safe_loads[0].factor
    report = report_on(
        tmp_path, SOUND, load(text.format(40.0 * k * (1.0 + 3e-7)), case="press")
    )  # fmt: skip
    rating = rating_of(report)
    assert rating.verdict is Verdict.FALLS_SHORT
    assert 1.0 < rating.utilisation < 1.000001
    for output, texts in printed(report).items():
        assert any("falls short" in text for text in texts), output
        ones = [t for t in texts if re.search(r"utilisation *1(\.0+)?(?![\d.])", t)]
        assert not [t for t in texts if re.fullmatch(r"1(\.0+)?", t) and "." in t], output
        assert not ones, output


def test_where_adequate_is_shown_so_is_what_it_covers(tmp_path: Path) -> None:
    report = report_on(tmp_path, SOUND)
    check_adequate(rating_of(report))
    covered = "adequate in flexure, shear"
    texts = printed(report)
    for output in ("html", "terminal"):
        shown = [n for n, t in enumerate(texts[output]) if re.search(r"(?<![a-z])adequate", t)]
        assert len(shown) > 2, output
        for n in shown:  # a count or a choice may stand by itself, once, where the next text tells
            alone = covered not in texts[output][n]
            assert not alone or told_nearby(texts[output], n, covered), (output, texts[output][n])
    table = list(csv.DictReader(io.StringIO(ratings_csv(report))))
    assert [(row["verdict"], row["checked"][:14]) for row in table] == [
        ("adequate", "flexure, shear")
    ]
    assert "torsion" in table[0]["not_checked"]
    (beam,) = json.loads(ratings_json(report))["beams"]
    assert (beam["verdict"], beam["checked"][:2]) == ("adequate", ["flexure", "shear"])
    sets = {result.name: result for result in result_sets(report)}
    properties = {p.name: p.value for p in sets["BeamRating_Result"].properties}
    assert properties["Verdict"] == "adequate"
    assert "flexure, shear" in str(properties["LimitStatesChecked"])
    assert "torsion" in str(properties["LimitStatesNotChecked"])


def told_nearby(texts: list[str], place: int, covered: str) -> bool:
    """Whether the next texts say what it covers, or it is the filter of a page or its caution."""
    after = " ".join(texts[place + 1 : place + 5])
    is_filter = texts[place] == "adequate" and texts[place + 1 : place + 2] == ["falls short"]
    return covered in after or is_filter or "neither adequate nor inadequate" in texts[place]
