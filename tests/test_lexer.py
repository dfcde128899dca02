"""The lexer finds just the instances that ifcopenshell finds, and refuses what is unsound."""

from __future__ import annotations

from pathlib import Path

import ifcopenshell
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.ifc.lexer import LARGEST_ID, StepError, scan

HEADER = (
    b"ISO-10303-21;\nHEADER;\nFILE_DESCRIPTION((''),'2;1');\n"
    b"FILE_NAME('','2026-01-01T00:00:00',(''),(''),'','','');\nFILE_SCHEMA(('IFC4'));\nENDSEC;\n"
)
END = b"END-ISO-10303-21;\n"


def person(number: int, name: str = "A") -> bytes:
    return f"#{number}=IFCPERSON($,'{name}',$,$,$,$,$,$);".encode("latin-1")


def step_file(body: bytes) -> bytes:
    return HEADER + b"DATA;\n" + body + b"ENDSEC;\n" + END


def numbers_by_ifcopenshell(data: bytes, folder: Path) -> list[int]:
    path = folder / "model.ifc"
    path.write_bytes(data)
    return sorted(ifcopenshell.open(str(path)).entity_names())


ONE, TWO = person(1), person(2)
SOUND = {
    "one a line": (ONE + b"\n" + TWO + b"\n", [1, 2]),
    "joined": (ONE + TWO, [1, 2]),
    "out of order": (TWO + b"\n" + ONE + b"\n", [2, 1]),
    "wrapped": (b"#1\n=\nIFCPERSON($,\n'A',$,$,$,$\n,$,$)\n;\n" + TWO, [1, 2]),
    "spaced": (b"  #  1 \t= IFCPERSON ( $,'A',$,$,$,$,$,$ ) ;\n", [1]),
    "many blank lines": (b"\n" * 500 + ONE + b" \r\n" * 700 + TWO, [1, 2]),
    "leading zeros": (b"#0007=IFCPERSON($,'A',$,$,$,$,$,$);\n", [7]),
    "greatest number": (person(LARGEST_ID), [LARGEST_ID]),
    "doubled apostrophes": (person(1, "A''") + person(2, "''B''''"), [1, 2]),
    "statements in a text": (person(1, ";\nENDSEC;\n#5=IFCPERSON();\nEND-ISO-10303-21;"), [1]),
    "comment marks in a text": (person(1, "/*") + person(2, "*/"), [1, 2]),
    "statements in a comment": (b"/* " + person(5) + b"\nENDSEC; */" + ONE, [1]),
    "apostrophe in a comment": (b"/* it's */" + ONE + b"/* 'quoted */\n" + TWO, [1, 2]),
    "comment in an instance": (b"#1/* ; */=/*'*/IFCPERSON($,'A',$,$,$,$,$,$)/*;*/;", [1]),
    "stars and slashes": (b"/***/" + ONE + b"/* / * **/" + TWO + b"/**/", [1, 2]),
    "comment after a comment mark in a text": (person(1, "/*'' */") + b"/* ' */" + TWO, [1, 2]),
    "slash": (person(1, "C30/37") + person(2, "a/*b"), [1, 2]),
    "hidden apostrophe": (person(1, "\\S\\'x") + TWO, [1, 2]),
    "hidden apostrophe and comment": (b"/*'*/" + person(1, "\\S\\'/*") + b"/*'*/" + TWO, [1, 2]),
    "hidden letters": (person(1, "\\X2\\00E9\\X0\\\\S\\i\\X\\E9") + TWO, [1, 2]),
    "backslashes": (person(1, "C:\\\\S\\\\") + TWO, [1, 2]),
    "Latin-1": (person(1, "\xe9\xff") + TWO, [1, 2]),
    "nothing": (b"", []),
    "two DATA sections": (ONE + b"ENDSEC;\nDATA;\n" + TWO, [1, 2]),
    "named DATA section": (ONE + b"\nENDSEC ;\nDATA('b',('IFC4')) ;\n" + TWO, [1, 2]),
}


@pytest.mark.parametrize(("body", "expected"), SOUND.values(), ids=SOUND.keys())
@pytest.mark.parametrize("line_break", [b"\n", b"\r\n", b"\r", b""], ids=["LF", "CRLF", "CR", "-"])
def test_finds_the_instances_that_ifcopenshell_finds(
    body: bytes, expected: list[int], line_break: bytes, tmp_path: Path
) -> None:
    data = step_file(body).replace(b"\n", line_break)
    found = scan(data)
    assert found.ids.tolist() == expected
    assert sorted(expected) == numbers_by_ifcopenshell(data, tmp_path)
    assert found.schemas == ("IFC4",)
    for start, stop in zip(found.starts, found.stops, strict=True):
        assert data[start : start + 1] == b"#"
        assert data[stop - 1 : stop] == b";"


@pytest.mark.parametrize("body", [case[0] for case in SOUND.values()], ids=SOUND.keys())
def test_lines_added_at_the_insertion_are_read(body: bytes, tmp_path: Path) -> None:
    data = step_file(body)
    found = scan(data)
    added = data[: found.insertion] + person(99) + data[found.insertion :]
    assert data[found.insertion :] == b"ENDSEC;\n" + END
    assert numbers_by_ifcopenshell(added, tmp_path) == sorted([*found.ids.tolist(), 99])


@pytest.mark.parametrize(
    ("before_end", "on_own_line", "rest"),
    [
        (b"\n", True, b"ENDSEC;"),
        (b"\n \t ", True, b" \t ENDSEC;"),
        (b"", False, b"ENDSEC;"),
        (b" ", False, b"ENDSEC;"),
        (b"\n/* note */", False, b"ENDSEC;"),
        (b"\n/* ENDSEC; */\r\n", True, b"ENDSEC;"),
    ],
)
def test_insertion_is_before_the_line_of_the_end(
    before_end: bytes, on_own_line: bool, rest: bytes
) -> None:
    data = step_file(ONE + before_end)
    found = scan(data)
    assert found.on_own_line is on_own_line
    assert data[found.insertion :].startswith(rest)


@pytest.mark.parametrize("line_break", [b"\n", b"\r\n", b"\r"])
def test_line_break_is_that_of_the_file(line_break: bytes) -> None:
    assert scan(step_file(ONE + b"\n").replace(b"\n", line_break)).newline == line_break
    assert scan(step_file(ONE).replace(b"\n", line_break)).newline == line_break


def test_line_break_before_the_insertion_wins() -> None:
    assert scan(step_file(ONE + b"\r\n")).newline == b"\r\n"


def test_signature_is_seen_on_either_side_of_the_end() -> None:
    inside = step_file(ONE).replace(END, b"SIGNATURE;\nMIIB+/a==\nENDSEC;\n" + END)
    after = step_file(ONE) + b"SIGNATURE\nMIIB+/a==\nENDSEC;\n"
    for data in (inside, after):
        assert scan(data).names == ("HEADER", "DATA", "SIGNATURE")
        assert data[scan(data).insertion :].startswith(b"ENDSEC;")


def test_byte_order_mark_shifts_the_offsets() -> None:
    data = b"\xef\xbb\xbf" + step_file(ONE)
    assert data[scan(data).insertion :].startswith(b"ENDSEC;")


def test_blank_bytes_after_the_end_are_no_fault() -> None:
    assert scan(step_file(ONE) + b"\r\n\0\0\x1a").ids.tolist() == [1]


REFUSED = {
    "empty": (b"", "is empty"),
    "blank": (b" \n ", "is empty"),
    "text": (b"hello", "does not begin with ISO-10303-21"),
    "XML": (b"<?xml version='1.0'?><ifcXML/>", "XML"),
    "zip": (b"PK\x03\x04rest", ".ifczip"),
    "start word alone": (b"ISO-10303-21", "cut short"),
    "header alone": (HEADER, "END-ISO-10303-21 is missing"),
    "no DATA": (HEADER + END, "no DATA section"),
    "no header": (b"ISO-10303-21;\nDATA;\nENDSEC;\n" + END, "one header"),
    "no end": (step_file(ONE).removesuffix(END), "END-ISO-10303-21 is missing"),
    "cut in a section": (HEADER + b"DATA;\n" + ONE, "cut short in its section DATA"),
    "cut in an instance": (HEADER + b"DATA;\n" + ONE + b"#2=IFCPERSON($", "cut short"),
    "cut in a text": (HEADER + b"DATA;\n" + ONE + b"#2=IFCPERSON($,'B", "inside a text"),
    "cut in the header": (HEADER[:60], "cut short"),
    "open comment": (step_file(ONE + b"/* never closed"), "comment that is not closed"),
    "repeated number": (step_file(ONE + TWO + ONE), "more than one instance numbered #1"),
    "repeated number, other zeros": (step_file(ONE + b"#01=IFCPERSON();"), "numbered #1"),
    "repeated over two sections": (step_file(ONE + b"ENDSEC;DATA;" + ONE), "numbered #1"),
    "zero": (step_file(person(0)), "numbers run from 1"),
    "too great": (step_file(person(LARGEST_ID + 1)), "numbers run from 1"),
    "much too great": (step_file(person(10**40)), "numbers run from 1"),
    "no number": (step_file(b"#=IFCPERSON();"), "cannot be read"),
    "no equals sign": (step_file(b"#5;"), "cannot be read"),
    "no statement": (step_file(b"FOO BAR;"), "'FOO BAR' among its instances"),
    "scope": (step_file(b"&SCOPE " + ONE + b"ENDSCOPE " + TWO), "&SCOPE"),
    "anchor": (HEADER + b"ANCHOR;\n<a>=#1;\nENDSEC;\nDATA;\nENDSEC;\n" + END, "section ANCHOR"),
    "reference": (HEADER + b"REFERENCE;\n#5=<b#x>;\nENDSEC;\n" + END, "section REFERENCE"),
    "unknown section": (HEADER + b"DATUM;\nENDSEC;\n" + END, "where a section should begin"),
    "instance in the header": (
        step_file(ONE).replace(b"FILE_SCHEMA", TWO + b"FILE_SCHEMA"),
        "outside its DATA sections",
    ),
    "instance after the end": (step_file(ONE) + TWO, "outside its DATA sections"),
    "statement after the end": (step_file(ONE) + b"DATA;", "goes on after its end"),
    "text after the end": (step_file(ONE) + b"more", "goes on after its last statement"),
    "two files": (step_file(ONE) * 2, "goes on after its end"),
}


@pytest.mark.parametrize(("data", "words"), REFUSED.values(), ids=REFUSED.keys())
def test_refuses_what_is_unsound(data: bytes, words: str) -> None:
    with pytest.raises(StepError) as caught:
        scan(data)
    assert words in str(caught.value)
    assert "\n" not in str(caught.value)
    assert ";" in str(caught.value) or "give" in str(caught.value)


def test_every_truncation_is_refused() -> None:
    data = step_file(ONE + b"\n/* it's */\n" + person(2, "a;''b") + b"\n")
    for length in range(len(data.rstrip(b"\n"))):
        with pytest.raises(StepError):
            scan(data[:length])


PIECES = ["A", "''", ";", "ENDSEC;", "#5=", "/*", "*/", "\\\\", "\n", " ", "\\X\\E9", "\\S\\'", "é"]
texts = st.lists(st.sampled_from(PIECES), max_size=6).map("".join)
# ifcopenshell takes "/*/" for a whole comment, which ISO 10303-21 does not.
comments = st.lists(
    st.sampled_from(["'", ";", "ENDSEC;", "#7=A();", "/*", "*", "/", "\n", "\\S\\'"]), max_size=5
).map(lambda parts: "/* " + "".join(parts).replace("*/", "* /") + " */")
gaps = st.lists(st.one_of(st.sampled_from([" ", "\n", "\r\n", "\t"]), comments), max_size=3).map(
    "".join
)
bodies = st.lists(
    st.tuples(st.integers(1, 10**6), texts, gaps, gaps), max_size=8, unique_by=lambda item: item[0]
)


@given(bodies)
@settings(max_examples=300, deadline=None)
def test_agrees_with_ifcopenshell_on_made_up_files(
    tmp_path_factory: pytest.TempPathFactory, body: list[tuple[int, str, str, str]]
) -> None:
    written = "".join(
        f"{before}#{number}{inside}=IFCPERSON($,'{text}',$,$,$,$,$,$){inside};"
        for number, text, before, inside in body
    )
    data = step_file(written.encode("latin-1"))
    assert scan(data).ids.tolist() == [number for number, *_ in body]
    folder = tmp_path_factory.mktemp("made_up", numbered=True)
    assert numbers_by_ifcopenshell(data, folder) == sorted(number for number, *_ in body)


@given(st.binary(max_size=200))
@settings(max_examples=300)
def test_never_fails_otherwise_than_in_words(junk: bytes) -> None:
    for data in (junk, HEADER + junk, step_file(junk)):
        try:
            found = scan(data)
        except StepError:
            continue
        assert data[found.insertion :].lstrip(b" \t").startswith(b"ENDSEC")


def test_real_models(open_models: Path) -> None:
    for path in sorted(open_models.glob("*.ifc")):
        found = scan(path.read_bytes())
        assert sorted(found.ids.tolist()) == sorted(ifcopenshell.open(str(path)).entity_names())
