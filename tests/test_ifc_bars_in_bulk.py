"""Bars read many at once from the file's text are those that are read one by one.

The referee is the reader that goes through ifcopenshell's entities; numbers are compared with
Python's own ``float``. Each model is written anew as several programs write: with blanks after
commas, wrapped lines, other spellings of numbers, typed measures, ids out of order.
"""

from __future__ import annotations

import random
import re
from collections.abc import Sequence
from typing import Any

import ifcopenshell
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.ifc import reinforcement
from ifccheck.ifc.bar_table import BarTable, gather_bars
from ifccheck.ifc.context import make_context
from ifccheck.ifc.lexer import scan
from ifccheck.ifc.plain_bars import read_plain_bars
from ifccheck.ifc.step_cursors import Cursors, read_numbers
from ifccheck.ifc.step_table import StepTable, make_step_table
from ifccheck.ifc.swept_texts import read_swept_texts
from tests.barred_beams import ModelWithBars, bent, closed_stirrup, straight

HEAD = "ISO-10303-21;HEADER;FILE_SCHEMA(('IFC4'));ENDSEC;DATA;"
FOOT = "ENDSEC;END-ISO-10303-21;"
PLAIN_NAMES = (
    "bottom 20M",
    "GFRP #5",
    "L1",
    "",
    "a (b); c",
    "it is #7",
    "trailing ",
    "\u00d8 16",
    "\\x\\",
)
NAMES = (*PLAIN_NAMES, "it's", "a, b", ",", "it's, so", "'", "),#1,")


def table_of(text: str) -> StepTable:
    data = text.encode()
    table = make_step_table(data, scan(data))
    assert table is not None
    return table


def frame_of_bars(unit: str, schema: str, rng: random.Random) -> ModelWithBars:
    """Two turned beams with bars of every kind that the bulk reader knows, and others."""
    model = ModelWithBars(schema=schema, unit=unit)
    beams = [model.beam(origin=(1000.0, y, 3000.0), along=(1.0, 0.5, 0.1)) for y in (0.0, 2000.0)]
    hooked = bent([(300.0, 0.0, 60.0), (50.0, 0.0, 60.0), (50.0, 0.0, 400.0)], 50.0)
    for beam in beams:
        model.bars(beam, straight(50, 5950, -90, 60), hooked, diameter=20.0, SteelGrade="400W")
        polyline = model.file.create_entity("IfcPolyline", places_in(model, 50.0, 3000.0, 5950.0))
        solid = model.file.create_entity("IfcSweptDiskSolid", polyline, 10.0 * model.scale)
        model.aggregate(beam, [model.bar([solid], 20.0, beam, SteelGrade="400W")])
        model.bars(beam, straight(50, 5950, 90, 60), diameter=20.0, SteelGrade="500W")
        for y, surface in ((-30.0, "PLAIN"), (0.0, "TEXTURED"), (30.0, "PLAIN")):
            model.bars(beam, straight(50, 5950, y, 60), diameter=20.0, BarSurface=surface)
        solid = model.swept(closed_stirrup(0.0, 110.0, 40.0, 560.0), 10.0)
        items = model.mapped(solid, [(150.0 + 200.0 * k, 0.0, 0.0) for k in range(8)])
        stirrups = [model.bar([item], 10.0, beam, Name=rng.choice(NAMES)) for item in items]
        model.aggregate(beam, stirrups)
        model.aggregate(beam, [model.bar(items[:2], 16.0, beam)])
    _make_unusual(model, rng)
    return model


def places_in(model: ModelWithBars, *xs: float) -> list[Any]:
    return [model.point((x, 45.0, 60.0)) for x in xs]


def _make_unusual(model: ModelWithBars, rng: random.Random) -> None:
    _sweep_between_parameters(model, rng)
    bars = model.file.by_type("IfcReinforcingBar")
    for bar in rng.sample(bars, 6):
        bar.Name, bar.Tag = rng.choice(NAMES), rng.choice((None, "T1", "it's"))
    moved, turned, lost, nowhere, sizeless, flat = rng.sample(bars, 6)
    moved.ObjectPlacement.RelativePlacement.Location.Coordinates = (1.5e-3, 0.0, -1.25)
    turned.ObjectPlacement.RelativePlacement = model.file.create_entity(
        "IfcAxis2Placement3D",
        model.point((0.0, 0.0, 0.0)),
        model.direction((0, 0, 1)),
        model.direction((1, 1e-3, 0)),
    )
    lost.Representation = None
    nowhere.ObjectPlacement = None
    sizeless.NominalDiameter = 0.0
    flat.ObjectPlacement.RelativePlacement.Location.Coordinates = (1.0, 2.0)


def _sweep_between_parameters(model: ModelWithBars, rng: random.Random) -> None:
    """Give some solids the parameters that they are swept between: all of the curve counted in
    either way, nearly all of it, or a part; stirrups stay, so that some are read."""
    solids = model.file.by_type("IfcSweptDiskSolid")
    bars = [solid for solid in solids if solid.Radius > 6.0 * model.scale]
    for solid in rng.sample(bars, 5):
        whole = rng.choice((pieces_of(solid.Directrix), length_of(solid.Directrix)))
        share = rng.choice((1.0, 1.0, 1.0 + 2e-5, 1.0 - 9e-5, 1.0 + 2e-4, 0.5))
        solid.StartParam, solid.EndParam = rng.choice((0.0, 0.0, None, 0.25)), whole * share


def points_of(curve: Any) -> np.ndarray:
    if curve.is_a("IfcPolyline"):
        return np.array([point.Coordinates for point in curve.Points])
    return np.array(curve.Points.CoordList)


def pieces_of(curve: Any) -> float:
    """The last parameter of a curve as the standard counts."""
    if curve.is_a("IfcPolyline"):
        return len(curve.Points) - 1.0
    return float(len(curve.Segments))


def length_of(curve: Any) -> float:
    """Length along straight steps: that of a curve without arcs, in units of the model."""
    return float(np.linalg.norm(np.diff(points_of(curve), axis=0), axis=1).sum())


def as_written(text: str, rng: random.Random, style: str) -> str:
    """The same model in another program's spelling."""
    head, data, foot = re.fullmatch(r"(.*?DATA;)(.*?)(ENDSEC;\s*END-ISO.*)", text, re.S).groups()  # type: ignore[union-attr]
    statements = re.findall(r"#\d+=(?:'[^']*'|[^';])*;", data)
    if style == "out of order":
        rng.shuffle(statements)
    return head + "\n".join(_respelt(one, rng, style) for one in statements) + "\n" + foot


def _respelt(statement: str, rng: random.Random, style: str) -> str:
    parts = re.split(r"('[^']*')", statement)
    return "".join(part if part[:1] == "'" else _part(part, rng, style) for part in parts)


def _part(part: str, rng: random.Random, style: str) -> str:
    if style == "spaced":
        return part.replace(",", ", ").replace("=", " = ").replace("(", "( ")
    if style == "wrapped":
        return re.sub(r"[,(]", lambda m: m[0] + rng.choice(("", "\n", "\r\n\t ")), part)
    if style == "numbers":
        return re.sub(r"(?<=[(,])-?\d+\.(?:\d*)(?:E[-+]?\d+)?(?=[,)])", _other_number(rng), part)
    if style == "typed" and "IFCREINFORCINGBAR" in part:
        return re.sub(r",(\d+\.\d*),", r",IFCPOSITIVELENGTHMEASURE(\1),", part, count=1)
    return part


def _other_number(rng: random.Random) -> Any:
    def respelt(match: re.Match[str]) -> str:
        value = float(match[0])
        kinds = [match[0], f"{value:.17g}", f"{value:.17E}", f"{value:.3E}".replace("E+0", "e")]
        text = rng.choice(kinds[:3] if value % 1.0 else kinds)
        mantissa, mark, exponent = text.replace("e", "E").partition("E")
        return (mantissa if "." in mantissa else mantissa + ".") + mark + exponent

    return respelt


STYLES = ("as it is", "spaced", "wrapped", "numbers", "typed", "out of order")


@pytest.mark.parametrize("style", STYLES)
@pytest.mark.parametrize(("unit", "schema"), [("mm", "IFC4"), ("m", "IFC2X3"), ("in", "IFC4X3")])
@given(seed=st.integers(0, 10**6))
@settings(max_examples=8, deadline=None)
def test_bars_in_bulk_are_those_read_one_by_one(
    unit: str, schema: str, style: str, seed: int
) -> None:
    rng = random.Random(seed)
    model = frame_of_bars(unit, schema, rng)
    text = as_written(model.file.to_string(), rng, style)
    file = ifcopenshell.file.from_string(text)
    context = make_context(file, schema)
    table = table_of(text)
    thorough = reinforcement.read_reinforcement(context, model.frames, {})
    assert reinforcement.read_reinforcement(context, model.frames, {}, table) == thorough
    assert any(source.stirrups for sources in thorough.values() for source in sources)
    bars = np.array([bar.id() for bar in file.by_type("IfcReinforcingBar")])
    assert_same_table(gather_bars(context, bars, table), gather_bars(context, bars))


def assert_same_table(found: BarTable, expected: BarTable) -> None:
    """All columns are the same to the last bit; paths may be numbered otherwise."""
    assert named(found.names, found.name) == named(expected.names, expected.name)
    assert named(found.roles, found.role) == named(expected.roles, expected.role)
    assert (found.sizes, found.grades) == (expected.sizes, expected.grades)
    assert found.unreadable == expected.unreadable
    for column in ("product", "step_ids", "size", "grade", "bar", "rotation", "translation"):
        assert np.array_equal(getattr(found, column), getattr(expected, column)), column
    for one, other in zip(found.path.tolist(), expected.path.tolist(), strict=True):
        for mine, theirs in zip(line_of(found, one), line_of(expected, other), strict=True):
            assert np.array_equal(mine, theirs)


def named(texts: Sequence[str], number: np.ndarray) -> list[str]:
    return [texts[one] for one in number.tolist()]


def line_of(table: BarTable, path: int) -> tuple[np.ndarray, np.ndarray]:
    """Points of a centre line, and where arcs begin in it."""
    line = int(table.paths.line[path])
    first, stop = table.paths.first[line : line + 2].tolist()
    arcs = table.paths.arcs
    return table.paths.points[first:stop], arcs[(arcs >= first) & (arcs < stop)] - first


@pytest.mark.parametrize("style", ["as it is", "spaced", "wrapped", "numbers", "out of order"])
def test_most_bars_are_read_in_bulk(style: str) -> None:
    """Else the test above would compare the thorough reader with itself."""
    rng = random.Random(1)
    model = frame_of_bars("mm", "IFC4", rng)
    text = as_written(model.file.to_string(), rng, style)
    file = ifcopenshell.file.from_string(text)
    bars = np.array([bar.id() for bar in file.by_type("IfcReinforcingBar")])
    readers = reinforcement_readers(file)
    gathered, left = read_plain_bars(readers, table_of(text), bars)
    assert len(gathered.columns.product) + len(gathered.unreadable) + len(left) == len(bars)
    assert len(gathered.columns.product) >= len(bars) / 3
    assert len(readers.swept_paths) > 0


@pytest.mark.parametrize("style", STYLES)
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_polylines_are_read_in_bulk(schema: str, style: str) -> None:
    """Each with its parameters: left out are those swept over a part and those without length."""
    rng = random.Random(2)
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    for xs in ((50.0, 5950.0), (50.0, 100.0, 3000.0), (50.0, 60.0, 70.0, 80.0)):
        model.bars(beam, straight(xs[0], xs[-1], 0, 60))
        curve = model.file.create_entity("IfcPolyline", places_in(model, *xs))
        for start, end in ((None, None), (0.0, len(xs) - 1.0), (None, xs[-1] - xs[0]), (0.0, 0.5)):
            solid = model.file.create_entity("IfcSweptDiskSolid", curve, 8.0)
            solid.StartParam, solid.EndParam = start, end
            model.aggregate(beam, [model.bar([solid], 16.0, beam)])
    text = as_written(model.file.to_string(), rng, style)
    file = ifcopenshell.file.from_string(text)
    solids = file.by_type("IfcSweptDiskSolid")
    found = read_swept_texts(table_of(text), np.array([solid.id() for solid in solids]), 1.0)
    whole = [place for place, solid in enumerate(solids) if solid.EndParam != 0.5]
    assert sorted(found.place.tolist()) == whole
    for row, place in enumerate(found.place.tolist()):
        line = int(found.paths.line[row])
        first, stop = found.paths.first[line : line + 2].tolist()
        points = points_of(solids[place].Directrix)
        assert found.paths.points[first:stop].tolist() == points.tolist()


def reinforcement_readers(file: Any) -> Any:
    from ifccheck.ifc.bar_columns import BarReaders

    return BarReaders(make_context(file, "IFC4"))


@pytest.mark.parametrize("style", STYLES)
def test_instances_of_a_class_are_listed_as_they_are_opened(style: str) -> None:
    rng = random.Random(3)
    model = frame_of_bars("mm", "IFC4", rng)
    model.root("IfcReinforcingBarType", Name="IFCREINFORCINGBAR(", PredefinedType="MAIN")
    text = as_written(model.file.to_string(), rng, style)
    file, table = ifcopenshell.file.from_string(text), table_of(text)
    for name in ("IfcReinforcingBar", "IfcReinforcingBarType", "IfcDirection", "IfcTendon"):
        found = table.ids_of(name.upper())
        assert found is not None
        assert found.tolist() == [entity.id() for entity in file.by_type(name)]


@pytest.mark.parametrize(
    "statement",
    ["#2=ifcx();", "#2=IfcX();", "#2=IFCX/**/();", "#2=IFCX;"],
)
def test_a_class_is_not_listed_where_a_statement_is_written_otherwise(statement: str) -> None:
    assert table_of(f"{HEAD}#1=IFCX();#3=IFCXY();{statement}{FOOT}").ids_of("IFCX") is None
    assert table_of(f"{HEAD}#1=IFCX();#3=IFCXY();{FOOT}").ids_of("IFCX").tolist() == [1]  # type: ignore[union-attr]


@pytest.mark.parametrize("number", ["#02", "# 2", "#\t002"])
def test_numbers_are_read_however_they_are_written(number: str) -> None:
    text = f"{HEAD}#1=IFCDIRECTION((0.,1.));{number}=IFCDIRECTION((1.,0.));{FOOT}"
    named = text.replace(
        "HEADER;", "HEADER;FILE_DESCRIPTION((''),'2;1');FILE_NAME('','',(''),(''),'','','');"
    )
    listed = [
        entity.id() for entity in ifcopenshell.file.from_string(named).by_type("IfcDirection")
    ]
    found = table_of(text).ids_of("IFCDIRECTION")
    assert found is not None
    assert found.tolist() == listed == [1, 2]


def test_statements_that_hide_what_is_text_are_not_followed() -> None:
    words = ("IFCX('a');", "/* #9=IFCX('b'); */IFCX('c');", r"IFCX('\S\'d');", "IFCX('e');")
    text = "".join(f"#{number}={word} /* ' */" for number, word in enumerate(words, start=1))
    table = table_of(f"{HEAD}{text}{FOOT}")
    ids = np.array([1, 2, 3, 4, 9])
    assert table.rows(ids).tolist() == [0, -1, -1, 1, -1]
    rests = table.rests(table.cursors(ids, "IFCX"), ids)
    assert [rests.of(row) for row in range(5)] == [b"'a');", b"", b"", b"'e');", b""]


def test_no_table_is_made_where_no_statement_is_left() -> None:
    for text in ("", "#1=/* x */IFCX('a');"):
        data = f"{HEAD}{text}{FOOT}".encode()
        assert make_step_table(data, scan(data)) is None


@pytest.mark.parametrize(
    "curve",
    [
        "IFCINDEXEDPOLYCURVE(#8,(IFCLINEINDEX((1,2)),IFCLINEINDEX((3,2))),.F.)",  # does not meet
        "IFCINDEXEDPOLYCURVE(#8,(IFCLINEINDEX((1,4))),.F.)",  # has no fourth point
        "IFCINDEXEDPOLYCURVE(#8,(IFCARCINDEX((1,2))),.F.)",  # is no arc
        "IFCPOLYLINE((#8,#8))",
        "IFCPOLYLINE(())",
        "IFCPOLYLINE((#20))",
        "IFCPOLYLINE((#20,$))",
        "IFCPOLYLINE((#20,,#21))",
        "IFCPOLYLINE((#20,#21),#20)",
        "IFCPOLYLINE((#20,x#21))",
        "IFCPOLYLINE((#20,#21x))",
        "IFCPOLYLINE((1,#20,#21))",
        "IFCPOLYLINE((#20,#22))",
        "IFCPOLYLINE((#20,#23))",
        "IFCPOLYLINE((#20,#24))",
        "IFCPOLYLINE((#20,#20#21))",
        "IFCPOLYLINE(#20,#21)",
        "IFCINDEXEDPOLYCURVE(#10,$,.F.)",
        "IFCINDEXEDPOLYCURVE(#11,$,.F.)",
        "IFCINDEXEDPOLYCURVE(#12,$,.F.)",
        "IFCINDEXEDPOLYCURVE(#13,$,.F.)",
        "IFCINDEXEDPOLYCURVE(#14,$,.F.)",
        "IFCINDEXEDPOLYCURVE(#99,$,.F.)",
    ],
)
def test_curves_that_are_not_plain_are_left_to_the_thorough_reader(curve: str) -> None:
    table = table_of(
        f"{HEAD}#5=IFCSWEPTDISKSOLID(#7,8.,$,$,$);#6=IFCSWEPTDISKSOLID(#9,8.,$,$,$);"
        f"#7={curve};#9=IFCINDEXEDPOLYCURVE(#8,$,.F.);"
        "#8=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.E3,0.,0.),(2000.,0.,-0.5)));"
        "#10=IFCCARTESIANPOINTLIST3D(((0.,0.),(1.E3,0.,0.,0.)));"
        "#11=IFCCARTESIANPOINTLIST3D(((0.,0.,0.)));"
        "#12=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.E12,0.,0.)));"
        "#13=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.,nan,0.)));"
        "#14=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.,.5,0.)));"
        "#20=IFCCARTESIANPOINT((0.,0.,0.));#21=IFCCARTESIANPOINT((1.,0.,0.));"
        "#22=IFCCARTESIANPOINT((1.,0.));#23=IFCCARTESIANPOINT((1.E12,0.,0.));" + FOOT
    )
    found = read_swept_texts(table, np.array([5, 6]), 2.0)
    assert found.place.tolist() == [1]
    assert found.diameter.tolist() == [32.0]
    points = [[0.0, 0.0, 0.0], [2000.0, 0.0, 0.0], [4000.0, 0.0, -1.0]]
    (line,) = found.paths.line.tolist()
    first, stop = found.paths.first[line : line + 2].tolist()
    assert found.paths.points[first:stop].tolist() == points


def numbers_in(texts: Sequence[str]) -> tuple[list[float], list[bool]]:
    joined = ",".join(texts) + ","
    begin = np.cumsum([0, *(len(text) + 1 for text in texts[:-1])])
    values, stop, sound = read_numbers(np.frombuffer(joined.encode(), np.uint8), begin)
    whole = stop == begin + np.array([len(text) for text in texts])
    return values.tolist(), (sound & whole).tolist()


@given(st.lists(st.floats(allow_nan=False, allow_infinity=False), min_size=1, max_size=30))
def test_numbers_are_rounded_as_python_rounds_them(values: list[float]) -> None:
    texts = [repr(value).replace("e", "E") for value in values]
    found, sound = numbers_in(texts)
    assert all(sound)
    assert found == [float(text) for text in texts]


@given(
    st.lists(
        st.from_regex(r"\A-?[0-9]{1,12}\.[0-9]{0,9}(E[-+]?[0-9]{1,2})?\Z"), min_size=1, max_size=30
    )
)
def test_any_spelling_of_a_number_is_read_as_python_reads_it(texts: list[str]) -> None:
    found, sound = numbers_in(texts)
    for text, value, is_sound in zip(texts, found, sound, strict=True):
        assert not is_sound or value == float(text)
        assert is_sound or len(text) > 15


@pytest.mark.parametrize("text", ["", "-", ".5", "-.5", "+1.", "nan", "1.e3", "1.E", "0x1", "1_0."])
def test_what_step_does_not_call_a_number_is_none(text: str) -> None:
    assert numbers_in([text])[1] == [False]


def cursors_at(texts: Sequence[bytes]) -> Cursors:
    begin = np.cumsum([0, *(len(text) + 1 for text in texts[:-1])])
    data = np.frombuffer(b"|".join(texts) + b"|", np.uint8)
    return Cursors(data, begin, np.ones(len(texts), dtype=bool))


@given(st.lists(st.from_regex(rb"\A ?#? ?[0-9]{0,20}[,x]\Z"), min_size=1, max_size=30))
def test_references_of_any_length_are_read(texts: list[bytes]) -> None:
    cursors = cursors_at(texts)
    found = cursors.reference().tolist()
    cursors.tokens(b",")
    for text, number, plain in zip(texts, found, cursors.plain.tolist(), strict=True):
        match = re.fullmatch(rb" ?#([0-9]{1,18})(,?)x?", text)
        assert number == (int(match[1]) if match else 0)
        assert plain == bool(match and match[2])


@given(st.lists(st.from_regex(rb"\A ?('[a-z(;,]{0,90}'|\$|'')'?,\Z"), min_size=1, max_size=30))
def test_texts_up_to_some_length_are_passed_over(texts: list[bytes]) -> None:
    cursors = cursors_at(texts)
    cursors.text_or_nothing()
    cursors.tokens(b",")
    for text, plain in zip(texts, cursors.plain.tolist(), strict=True):
        match = re.fullmatch(rb" ?(?:'([^']*)'|\$),", text)
        if match and len(match[1] or b"") < 80:
            assert plain
        assert not plain or match


BEGINNINGS = (b"$,'a',(#1", b"$,'b',(#2", b"#7,$,(#3", b"$, $,(#4", b"x")


@given(
    st.lists(st.sampled_from(BEGINNINGS), min_size=1),
    st.lists(st.sampled_from([b"$,'c%d',(#5" % number for number in range(9)]), max_size=9),
)
def test_the_same_text_is_passed_over_as_when_it_is_read(
    texts: list[bytes], more: list[bytes]
) -> None:
    def read(cursors: Cursors) -> None:
        cursors.reference_or_nothing()
        cursors.tokens(b",")
        cursors.text_or_nothing()
        cursors.tokens(b",", b"(")

    together, alone = cursors_at(texts + more), cursors_at(texts + more)
    together.same_text(read)
    read(alone)
    assert together.plain.tolist() == alone.plain.tolist()
    assert together.at[alone.plain].tolist() == alone.at[alone.plain].tolist()


def test_cursors_pass_over_what_is_asked_and_nothing_else() -> None:
    text = b"( #12 , $,'a;(,',\n-1.5E1 )|( #12 , #3,$,7 )|(12,$,$,1.)"
    begin = np.array([0, text.find(b"|") + 1, text.rfind(b"|") + 1])
    cursors = Cursors(np.frombuffer(text, np.uint8), begin, np.ones(3, dtype=bool))
    cursors.tokens(b"(")
    assert cursors.reference().tolist() == [12, 12, 0]
    cursors.tokens(b",")
    assert cursors.reference_or_nothing().tolist() == [0, 3, 0]
    cursors.tokens(b",")
    cursors.text_or_nothing()
    cursors.tokens(b",")
    assert np.nan_to_num(cursors.number(), nan=-1.0).tolist() == [-15.0, 7.0, -1.0]
    cursors.tokens(b")")
    assert cursors.plain.tolist() == [True, True, False]
