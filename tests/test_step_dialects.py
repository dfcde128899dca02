"""One model written in every way that STEP files come, through the whole program.

Each is rated as the plain one is, and its bytes come back when the results are taken away.
"""

from __future__ import annotations

import hashlib
import io
import re
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element
import pytest

from ifccheck.ifc.lexer import scan
from ifccheck.ifc.marks import without_intact_block
from ifccheck.pipeline import Run, publish, rate
from tests.models import MadeBeam, answers, brief, load, model, rectangle
from tests.test_laws_of_bodies import LOADS, assert_alike

NOTATION = {"BottomBars": "3-25M", "TopBars": "2-20M", "Stirrups": "2 legs 10M @ 150"}
BEAMS = [
    MadeBeam(rectangle(300, 600), 6300.0, mark, NOTATION, origin=(0.0, 6000.0 * row, 0.0))
    for row, mark in enumerate(("B-1", "B-2"))
]
PLAIN = model(*BEAMS)
_TEXT_OR_NOT = re.compile(rb"'(?:[^']|'')*'|[^']+")


def outside_texts(change: Callable[[bytes], bytes], data: bytes = PLAIN) -> bytes:
    """A model with all changed that stands outside of its texts."""
    return _TEXT_OR_NOT.sub(lambda m: m[0] if m[0].startswith(b"'") else change(m[0]), data)


def described(text: bytes) -> bytes:
    """A model of which a beam has a description."""
    changed = PLAIN.replace(b"'B-1',$,", b"'B-1','" + text + b"',")
    assert changed != PLAIN
    return changed


def commented(comment: bytes) -> bytes:
    head, body = PLAIN.split(b"DATA;\n", 1)
    return head + b"DATA;\n" + comment + body.replace(b";\n", b"; " + comment + b"\n")


def in_two_sections() -> bytes:
    head, body = PLAIN.split(b"DATA;\n", 1)
    lines = body.splitlines(keepends=True)
    middle = len(lines) // 2
    again = [b"ENDSEC;\nDATA;\n", *lines[middle:]]
    return b"".join([head, b"DATA;\n", *lines[:middle], *again])


def zipped(data: bytes) -> bytes:
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("__MACOSX/._hall.ifc", b"stray")
        archive.writestr("hall.ifc", data)
    return packed.getvalue()


DIALECTS: dict[str, bytes] = {
    "byte-order mark": b"\xef\xbb\xbf" + PLAIN,
    "CRLF": PLAIN.replace(b"\n", b"\r\n"),
    "CR": PLAIN.replace(b"\n", b"\r"),
    "byte-order mark and CRLF": b"\xef\xbb\xbf" + PLAIN.replace(b"\n", b"\r\n"),
    "joined lines": outside_texts(lambda part: part.replace(b"\n", b"")),
    "wrapped lines": outside_texts(lambda part: part.replace(b",", b",\n   ")),
    "spaced": outside_texts(lambda part: part.replace(b"(", b" ( ").replace(b"=", b" = ")),
    "blank lines": PLAIN.replace(b"\n", b"\n\n \n"),
    "comments": commented(b"/* it's #1=IFCBEAM(); ENDSEC; END-ISO-10303-21; */"),
    "statements in a text": described(b"it''s; #7=IFCBEAM($); ENDSEC; /* END-ISO-10303-21;"),
    "escaped letters": described(b"\\X2\\00C4\\X0\\ \\S\\d \\X\\E9"),
    "raw Latin-1": described(b"Tr\xe4ger"),
    "UTF-8": described("Träger 梁".encode()),
    "two DATA sections": in_two_sections(),
    "a signature": PLAIN + b"SIGNATURE\nMIIB+/a==\nENDSEC;\n",
}


def rated(folder: Path, data: bytes, name: str = "hall.ifc") -> Run:
    (folder / name).write_bytes(data)
    (folder / "brief.toml").write_text(LOADS, encoding="utf-8")
    return rate([folder / name], folder / "brief.toml")


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    return answers(rated(tmp_path_factory.mktemp("plain"), PLAIN))


def assert_written_beside(source: bytes, written: bytes) -> None:
    """The results stand in the model, and without them it is the source byte for byte."""
    assert without_intact_block(written, scan(written)) == source


@pytest.mark.parametrize("dialect", DIALECTS)
def test_a_model_is_rated_alike_however_its_file_is_written(
    dialect: str, plain: dict[str, Any], tmp_path: Path
) -> None:
    source = DIALECTS[dialect]
    run = rated(tmp_path, source)
    found = answers(run)
    assert found.keys() == plain.keys()
    for mark, answer in found.items():
        assert_alike(plain[mark], answer, share=1e-12)
    publish(run, tmp_path / "out", ("model",))
    written = (tmp_path / "out" / "hall-rated.ifc").read_bytes()
    assert_written_beside(source, written)
    again = answers(rated(tmp_path, written))
    assert {mark: a["utilisation"] for mark, a in again.items()} == {
        mark: a["utilisation"] for mark, a in found.items()
    }
    assert (tmp_path / "hall.ifc").read_bytes() == written


def test_an_archive_with_a_stray_hidden_member(plain: dict[str, Any], tmp_path: Path) -> None:
    source = zipped(PLAIN)
    run = rated(tmp_path, source, "hall.ifczip")
    for mark, answer in answers(run).items():
        assert_alike(plain[mark], answer, share=1e-12)
    publish(run, tmp_path / "out", ("model",))
    with zipfile.ZipFile(tmp_path / "out" / "hall-rated.ifczip") as archive:
        (member,) = archive.namelist()
        assert_written_beside(PLAIN, archive.read(member))


def test_beams_of_one_globalid_are_rated_each_and_named_by_their_lines(tmp_path: Path) -> None:
    """The second beam carries twice the load of the first, and its results are its own."""
    first, second = (re.search(rb"IFCBEAM\('([^']{22})',#\d+,'%s'" % mark, PLAIN)
                     for mark in (b"B-1", b"B-2"))  # fmt: skip
    assert first is not None
    assert second is not None
    data = PLAIN.replace(second[1], first[1])
    (tmp_path / "hall.ifc").write_bytes(data)
    text = brief(
        load("floor", 'line = "5 kN/m"', beams="B-1"),
        load("floor", 'line = "10 kN/m"', beams="B-2"),
    )
    (tmp_path / "brief.toml").write_text(text, encoding="utf-8")
    run = rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml")
    found = answers(run)
    assert found["B-2"]["utilisation"] > 1.2 * found["B-1"]["utilisation"]
    assert {a["key"] for a in found.values()} == {first[1].decode(), f"{first[1].decode()}~2"}
    numbers = re.findall(rb"#(\d+)=IFCBEAM\(", data)
    told = " ".join(
        remark.text for report in run.reports
        for remark in (*report.remarks, *(r for a in report.ratings.values() for r in a.remarks))
    )  # fmt: skip
    assert len(numbers) == 2
    assert all(f"#{number.decode()}" in told for number in numbers)
    publish(run, tmp_path / "out", ("model",))
    file = ifcopenshell.open(str(tmp_path / "out" / "hall-rated.ifc"))
    for beam in file.by_type("IfcBeam"):
        sets = ifcopenshell.util.element.get_psets(beam)
        stated = sets["BeamRating_Result"]["Utilisation"]
        assert stated == pytest.approx(found[beam.Name]["utilisation"])


def test_the_basis_of_every_dialect_is_told_apart_by_its_own_hash(tmp_path: Path) -> None:
    run = rated(tmp_path, DIALECTS["CRLF"])
    assert run.reports[0].model.sha256 == hashlib.sha256(DIALECTS["CRLF"]).hexdigest()
