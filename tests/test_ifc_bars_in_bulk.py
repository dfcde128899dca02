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
PLAIN_NAMES = ("bottom 20M", "L1", "", "a (b); c", "it is #7", "trailing ", "\u00d8 16", "\\x\\")
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
        model.bars(beam, straight(50, 5950, 90, 60), diameter=20.0, SteelGrade="500W")
        solid = model.swept(closed_stirrup(0.0, 110.0, 40.0, 560.0), 10.0)
        items = model.mapped(solid, [(150.0 + 200.0 * k, 0.0, 0.0) for k in range(8)])
        stirrups = [model.bar([item], 10.0, beam, Name=rng.choice(NAMES)) for item in items]
        model.aggregate(beam, stirrups)
        model.aggregate(beam, [model.bar(items[:2], 16.0, beam)])
    _make_unusual(model, rng)
    return model


def _make_unusual(model: ModelWithBars, rng: random.Random) -> None:
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
    first, stop = table.paths.first[path : path + 2].tolist()
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


def reinforcement_readers(file: Any) -> Any:
    from ifccheck.ifc.bar_columns import BarReaders

    return BarReaders(make_context(file, "IFC4"))


def test_statements_that_hide_what_is_text_are_not_followed() -> None:
    words = ("IFCX('a');", "/* #9=IFCX('b'); */IFCX('c');", r"IFCX('\S\'d');", "IFCX('e');")
    text = "".join(f"#{number}={word} /* ' */" for number, word in enumerate(words, start=1))
    table = table_of(f"{HEAD}{text}{FOOT}")
    ids = np.array([1, 2, 3, 4, 9])
    assert table.rows(ids).tolist() == [0, -1, -1, 1, -1]
    assert table.rest(table.cursors(ids, "IFCX"), ids) == [b"'a');", b"", b"", b"'e');", b""]


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
        "#14=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.,.5,0.)));" + FOOT
    )
    found = read_swept_texts(table, np.array([5, 6]), 2.0)
    assert found.place.tolist() == [1]
    assert found.diameter.tolist() == [32.0]
    points = [[0.0, 0.0, 0.0], [2000.0, 0.0, 0.0], [4000.0, 0.0, -1.0]]
    assert found.paths.points.tolist() == points
    assert found.paths.first.tolist() == [0, 3]


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
