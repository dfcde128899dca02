"""Leaving instances unparsed until they are asked for changes nothing of what is read.

ifcopenshell, opening a file at once and whole, is the judge: whatever it refuses, leaves out or
complains of must not be left for later.
"""

from __future__ import annotations

import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.errors import ModelError
from ifccheck.ifc import deferral, opening
from ifccheck.ifc.deferral import may_be_deferred
from ifccheck.ifc.lexer import StepError, scan
from ifccheck.ifc.opening import open_model
from tests.step_halls import Bar, Beam, hall

SAMPLE = Path(__file__).resolve().parents[1] / "sample_models" / "print_works.ifc"
HEADER = (
    "ISO-10303-21;\nHEADER;\nFILE_DESCRIPTION((''),'2;1');\n"
    "FILE_NAME('','2026-01-01T00:00:00',(''),(''),'','','');\nFILE_SCHEMA(('IFC4'));\nENDSEC;\n"
)
BEAM = "#1=IFCBEAM('0000000000000000000001',$,'B',$,$,$,$,'B-1',$);\n"
POINT = "#3=IFCCARTESIANPOINT((1.,-2.5,3.E-2));\n"
END = "ENDSEC;\nEND-ISO-10303-21;\n"


def model(*statements: str) -> bytes:
    return "".join((HEADER, "DATA;\n", BEAM, *statements, POINT, END)).encode("latin-1")


def with_value(value: str) -> bytes:
    """A model with a property whose value is written so."""
    return model(f"#2=IFCPROPERTYSINGLEVALUE('A',$,{value},$);\n")


def as_data(value: Any) -> Any:
    """A value of an attribute without its file: instances by number, others by class."""
    if isinstance(value, ifcopenshell.entity_instance):
        return ("#", value.id()) if value.id() else (value.is_a(), as_data(value[0]))
    if isinstance(value, tuple):
        return tuple(as_data(item) for item in value)
    return type(value).__name__, repr(value)


def reading(file: Any, every: int = 1) -> dict[str, Any]:
    """All that a file tells, and how often each instance is used; or every so many of these."""
    found: dict[str, Any] = {"names": file.entity_names(), "schema": file.schema}
    for name in found["names"][::every]:
        entity = file.by_id(name)
        values = [as_data(entity.get_argument(index)) for index in range(len(entity))]
        users = sorted(user.id() for user in file.get_inverse(entity))
        found[f"#{name}"] = (entity.is_a(), values, users, file.get_total_inverses(entity))
    for kind in file.types():
        found[kind] = [entity.id() for entity in file.by_type(kind)]
    return found


def complaint(data: bytes, path: Path, lazy: bool) -> str:
    """What ifcopenshell says or does where it opens a file and finds it wrong."""
    path.write_bytes(data)
    ifcopenshell.get_log()
    try:
        file = ifcopenshell.open(str(path), lazy=lazy)
    except ifcopenshell.Error as error:
        return str(error)
    log = str(ifcopenshell.get_log())
    if "not found at offset" in log and "Instance reference" in log:
        return log
    missing = len(scan(data).ids) - len(file.entity_names())
    return f"{missing} instances are missing" if missing else ""


FAULTS = {
    "too great": "1.E999",
    "too small": "1.E-400",
    "just too great": "1.E309",
    "too long": "1" * 400,
    "too long for its exponent": "1" + "0" * 220 + ".E99",
    "with two points": "1.5.3",
    "with two points together": "1..",
    "with a second sign": "--3",
    "with a sign behind": "3-",
    "of a sign": "-",
    "of a sign in a list": "(1.,-)",
    "of a sign before a bracket": "-(1.)",
    "with a letter": "5A",
    "with a letter behind the exponent": "1.E-05X",
    "without an exponent behind E": "5.E",
    "without an exponent behind a sign": "5.E-",
    "with two exponents": "5.E5E5",
    "with a point in the exponent": "5.E5.",
    "in hexadecimal": "0x10",
    "in groups": "1_000",
    "before a dollar": "5$",
    "before a star": "5*",
    "before a reference": "5#3",
    "before a text": "5'a'",
    "before a class": "5IFCLABEL('a')",
    "parted by a blank before a class": "5 IFCLABEL('a')",
    "wrapped before a letter": "5.\nE",
    "that begins with _": "_5",
    "of letters after _": "_A",
    "with a byte of no meaning": "@5",
    "of a colon": "1:2",
    "with a question mark": "?",
    "with a backslash": "\\",
    "in square brackets": "[1]",
    "in a binary that is none": '"G"',
    "with a zero byte in a text": "'a\0b'",
    "with a zero byte": "5\0",
    "of a class without brackets": "IFCLABEL",
    "of a class without brackets in a list": "(IFCREAL)",
    "that leads nowhere": "#99",
    "that leads nowhere in a list": "(#1,#99)",
    "that leads nowhere in a class": "IFCLABEL(#99)",
    "that leads to a negative number": "#-3",
    "that leads beyond the greatest number of a short word": "#12345678",
}


@pytest.mark.parametrize("value", FAULTS.values(), ids=FAULTS.keys())
def test_a_value(value: str, tmp_path: Path) -> None:
    data, path = with_value(value), tmp_path / "hall.ifc"
    assert complaint(data, path, lazy=False)
    assert not complaint(data, path, lazy=True), "no longer needed"
    assert not may_be_deferred(data, scan(data))
    with pytest.raises(ModelError) as caught:
        open_model(path)
    assert caught.value.exit_status == 1
    assert "\n" not in str(caught.value)
    assert "export the model again" in str(caught.value)


@pytest.mark.parametrize("value", ["1.5.3", "1..", "5A", "1" * 400, "--3", "3-", "@", "5 A"])
def test_a_value_at_a_joint(value: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """Where a file is looked through in pieces, no fault hides between two of them."""
    monkeypatch.setattr(deferral, "PIECE", 37)
    for length in range(37):
        data = model(f"#2=IFCPROPERTYSINGLEVALUE('{'x' * length}',$,{value},$);\n")
        assert not may_be_deferred(data, scan(data))
        sound = data.replace(f",{value},".encode(), b",1.5E3,")
        assert may_be_deferred(sound, scan(sound))


def test_an_instance_that_uses_one_of_an_unknown_class(tmp_path: Path) -> None:
    data, path = model("#2=IFCPOINTE((1.));\n#4=IFCVERTEXPOINT(#2);\n"), tmp_path / "hall.ifc"
    assert "#2 used by instance #4" in complaint(data, path, lazy=False)
    with pytest.raises(ModelError, match=r"1 can be read|only 3 can be read .*#2=IFCPOINTE"):
        open_model(path)


def test_a_second_data_section(tmp_path: Path) -> None:
    data = model(f"{END[:8]}DATA;\n#2=IFCVERTEXPOINT(#3);\n")
    path = tmp_path / "hall.ifc"
    assert not complaint(data, path, lazy=False)
    assert complaint(data, path, lazy=True) == "2 instances are missing", "no longer needed"
    assert not may_be_deferred(data, scan(data))
    assert len(open_model(path).file.entity_names()) == 3


LEFT_ASIDE = {
    "a comment among the instances": model("/* #99 */\n"),
    "a comment in an instance": with_value("1./* 5 */5"),
    "an apostrophe hidden in a text": with_value(r"IFCLABEL('\S\'')"),
    "a class without brackets, unknown": with_value("NAN"),
    "a binary": with_value('IFCBINARY("0F")'),
    "a sign before a point": with_value("-.5"),
    "a blank in a number": with_value("1. 5"),
    "a blank in a reference": with_value("# 3"),
    "a reference in a comment": model().replace(b"HEADER;", b"HEADER; /* #99 */"),
}


@pytest.mark.parametrize("data", LEFT_ASIDE.values(), ids=LEFT_ASIDE.keys())
def test_what_is_unusual_is_not_deferred(data: bytes, tmp_path: Path) -> None:
    assert not may_be_deferred(data, scan(data))
    assert not complaint(data, tmp_path / "hall.ifc", lazy=False)


SOUND = {
    value: with_value(value)
    for value in (
        "$", "*", "5", "-5", "+5", "5.", "-5.25", "5.E3", "5.5E-3", "5.E+03", "1.E-099", "5e3",
        "5E3", ".T.", ".NOTDEFINED.", ".TYPE2A.", "IFCLABEL('a')", "ifclabel('a')", "IFCLABEL($)",
        "IFCREAL(-1.E-05)", "(1.,2)", "((#1,#3),(#3))", "()", "#3", "#003", " 5 ", "'#99'",
        "'C25/30 @ 1.2.3 -- 5A 1.E999 _A #99'", "'it''s'", "''", "''''", "'\\X2\\00E9\\X0\\'",
        "'\\X\\E9'", "'a\nb'", "IFCCOMPLEXNUMBER((1.,2.))", "IFCCOMPOUNDPLANEANGLEMEASURE((1,2))",
        "IFCAXIS2PLACEMENT3D(#3,$,$)", "9" * 150 + ".",
    )
}  # fmt: skip
SOUND["a header comment"] = model().replace(b"HEADER;", b"HEADER; /* it's 1.2.3 */")
SOUND["CRLF"] = model().replace(b"\n", b"\r\n")
SOUND["blanks around the equals sign"] = model("#2 = IFCVERTEXPOINT (#3);\n")
SOUND["one line"] = model().replace(b"\n", b"")
SOUND["nothing"] = f"{HEADER}DATA;\n{END}".encode()
SOUND["too many attributes"] = model("#2=IFCVERTEXPOINT(#3,$);\n")
SOUND["too few attributes"] = model("#2=IFCAXIS2PLACEMENT3D(#3);\n")
SOUND["ids out of order"] = model("#9=IFCVERTEXPOINT(#3);\n", "#2=IFCVERTEXPOINT(#3);\n")
SOUND["great numbers"] = model("#2147483647=IFCVERTEXPOINT(#3);\n#2=IFCPOLYLINE((#2147483647));\n")


@pytest.mark.parametrize("data", SOUND.values(), ids=SOUND.keys())
def test_what_is_sound_is_deferred_and_reads_the_same(data: bytes, tmp_path: Path) -> None:
    path = tmp_path / "hall.ifc"
    path.write_bytes(data)
    assert may_be_deferred(data, scan(data))
    assert reading(ifcopenshell.open(str(path), lazy=True)) == reading(ifcopenshell.open(str(path)))


BARS = [Bar(0.0, 6000.0, -90.0, 60.0), Bar(0.0, 6000.0, 90.0, 60.0)]
HALL = hall(Beam(notation=None, bars=BARS), Beam("B''s #9", at=(0.0, 9000.0, 3000.0)))
PIECES = (
    ",", "(", ")", "'", '"', ".", "$", "*", "#", "-", "+", "E", "_", "5", "A", " ", "\n", ";", "=",
    "#99999", "#1", "1.E400", "1.5", "5A", "--1", ".T.", ".X.", "IFCLABEL('x')", "IFCLABEL(", "()",
    "IFCWALL", "IFCPOINTE", "nan", "/* c */", "\\X\\E9", "\\S\\'", "\\", "@", "\0", "\t", "\f", "0",
    "9" * 320, "$,$", "DATA;", "ENDSEC;", "#99999=IFCPERSON($,$,$,$,$,$,$,$);", '"0F"', ".5", "..",
)  # fmt: skip
FIRST, LAST = HALL.index("DATA;") + 5, HALL.rindex("ENDSEC;")
changes = st.lists(
    st.tuples(
        st.integers(FIRST, LAST), st.sampled_from([0, 0, 1, 2, 6]), st.sampled_from(("", *PIECES))
    ),
    min_size=1,
    max_size=3,
)


@given(changes)
@settings(max_examples=600, deadline=None)
def test_a_damaged_model_reads_the_same_where_it_is_deferred(
    tmp_path_factory: pytest.TempPathFactory, made: list[tuple[int, int, str]]
) -> None:
    text = HALL
    for at, length, piece in made:
        text = text[:at] + piece + text[at + length :]
    data = text.encode("ascii")
    path = tmp_path_factory.getbasetemp() / "damaged.ifc"
    path.write_bytes(data)
    try:
        found = scan(data)
    except StepError:
        return
    if not may_be_deferred(data, found):
        return
    normal = complaint(data, path, lazy=False)
    late = complaint(data, path, lazy=True)
    assert bool(normal) == bool(late), normal
    if not normal:
        at_once, later = (
            reading(ifcopenshell.open(str(path), lazy=lazy)) for lazy in (False, True)
        )
        assert without_users(later) == without_users(at_once)


def without_users(found: dict[str, Any]) -> dict[str, Any]:
    """A reading but for what uses an instance.

    Beyond the attributes of its class a broken instance uses others only when parsed later.
    """
    return {key: value[:2] if key.startswith("#") else value for key, value in found.items()}


def test_models_of_others(open_models: Path) -> None:
    """Most are read later, and all of them alike."""
    deferred = 0
    for path in (*open_models.glob("*.ifc"), SAMPLE):
        data = path.read_bytes()
        if may_be_deferred(data, scan(data)):
            deferred += 1
            later, at_once = (ifcopenshell.open(str(path), lazy=lazy) for lazy in (True, False))
            every = len(data) // 60_000 + 1
            assert reading(later, every) == reading(at_once, every)
    assert deferred == 6


@pytest.fixture
def laziness(monkeypatch: pytest.MonkeyPatch) -> list[bool]:
    """Whether each file that was opened was opened to be parsed later."""
    asked: list[bool] = []
    opened: Callable[..., Any] = ifcopenshell.open

    def spying(path: str, lazy: bool) -> Any:
        asked.append(lazy)
        return opened(path, lazy=lazy)

    monkeypatch.setattr(opening.ifcopenshell, "open", spying)
    return asked


def packed(folder: Path, data: bytes) -> Path:
    path = folder / "hall.ifczip"
    with zipfile.ZipFile(path, "w") as file:
        file.writestr("hall.ifc", data)
    return path


@pytest.mark.parametrize("deletes", [True, False])
def test_a_copy_is_deferred_where_it_can_be_deleted(
    deletes: bool, laziness: list[bool], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A file that may have to be parsed stays open, and not every system deletes it then."""
    monkeypatch.setattr(opening, "_DELETES_OPEN_FILES", deletes)
    opened = open_model(packed(tmp_path, model()))
    assert opened.file.by_id(3)[0] == (1.0, -2.5, 0.03)
    (tmp_path / "hall.ifc").write_bytes(model())
    open_model(tmp_path / "hall.ifc")
    assert laziness == [deletes, True]


def test_letters_that_are_not_escaped_are_parsed_at_once(
    laziness: list[bool], tmp_path: Path
) -> None:
    (tmp_path / "hall.ifc").write_bytes(with_value("'\xe9'"))
    assert open_model(tmp_path / "hall.ifc").file.by_id(2)[2] == "\xe9"
    assert laziness == [False]


def test_what_is_done_to_the_file_later_does_not_matter(
    laziness: list[bool], tmp_path: Path
) -> None:
    path = tmp_path / "hall.ifc"
    path.write_text(HALL, encoding="ascii")
    expected = reading(ifcopenshell.open(str(path), lazy=False))
    opened = open_model(path)
    with path.open("r+b") as file:
        file.write(b"X" * len(HALL))
    path.unlink()
    assert reading(opened.file) == expected
    assert laziness == [False, True]
