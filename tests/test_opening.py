"""Opening: what ifcopenshell reads wrongly or not at all is refused in one clear line."""

from __future__ import annotations

import hashlib
import io
import struct
import zipfile
from pathlib import Path

import ifcopenshell
import pytest

from ifccheck.errors import ModelError
from ifccheck.ifc import archive
from ifccheck.ifc.archive import pack
from ifccheck.ifc.opening import open_model

HEADER = (
    "ISO-10303-21;\nHEADER;\nFILE_DESCRIPTION((''),'2;1');\n"
    "FILE_NAME('','2026-01-01T00:00:00',(''),(''),'','','');\nFILE_SCHEMA(('{schema}'));\nENDSEC;\n"
)
BEAM = "#1=IFCBEAM('0000000000000000000001',$,'{name}',$,$,$,$,'B-1',$);\n"


def model(body: str = "", schema: str = "IFC4", name: str = "B", encoding: str = "ascii") -> bytes:
    text = HEADER.format(schema=schema) + "DATA;\n" + BEAM.format(name=name) + body
    return (text + "ENDSEC;\nEND-ISO-10303-21;\n").encode(encoding)


def saved(folder: Path, data: bytes, name: str = "hall.ifc") -> Path:
    path = folder / name
    path.write_bytes(data)
    return path


def zipped(members: dict[str, bytes]) -> bytes:
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as file:
        for name, data in members.items():
            file.writestr(name, data)
    return buffer.getvalue()


def refusal(path: Path) -> str:
    with pytest.raises(ModelError) as caught:
        open_model(path)
    message = str(caught.value)
    assert message.startswith(f"{path}: ")
    assert "\n" not in message
    assert ";" in message, "the remedy is missing"
    assert caught.value.exit_status == 1
    return message


def test_opens_a_model(tmp_path: Path) -> None:
    data = model()
    opened = open_model(saved(tmp_path, data, "hall-rated.ifc"))
    assert (opened.name, opened.file_name) == ("hall-rated", "hall-rated.ifc")
    assert opened.source == data
    assert opened.sha256 == hashlib.sha256(data).hexdigest()
    assert opened.file.by_id(1).Tag == "B-1"
    assert (opened.schema, opened.zipped_member, opened.remarks) == ("IFC4", None, ())
    assert opened.scan.ids.tolist() == [1]


@pytest.mark.parametrize(
    ("schema", "expected"), [("IFC2X3", "IFC2X3"), ("IFC4", "IFC4"), ("IFC4X3_ADD2", "IFC4X3")]
)
def test_schemas(schema: str, expected: str, tmp_path: Path) -> None:
    assert open_model(saved(tmp_path, model(schema=schema))).schema == expected


@pytest.mark.parametrize(
    "schema", ["IFC5", "IFC4X1", "IFC2X2_FINAL", "IFC4X3_RC4", "AP214", "IFC \x1b[31m4"]
)
def test_other_schemas_are_refused_naming_what_is_read(schema: str, tmp_path: Path) -> None:
    message = refusal(saved(tmp_path, model(schema=schema)))
    assert message.isprintable()
    assert f"its schema is {schema[:3]}" in message
    assert "IFC2X3, IFC4, IFC4X3_ADD2" in message


WHOLE = model()
SILENT = {
    "truncated": (WHOLE[: WHOLE.index(b"ENDSEC;\nEND-")], "cut short"),
    "without its end": (WHOLE[: WHOLE.index(b"END-ISO")], "END-ISO-10303-21 is missing"),
    "with an ANCHOR section": (
        WHOLE.replace(b"DATA;", b"ANCHOR;\n<a>=#1;\nENDSEC;\nDATA;"),
        "section ANCHOR",
    ),
    "with a repeated number": (model(BEAM.format(name="C")), "more than one instance numbered #1"),
    "with a statement that is none": (model("FOO BAR;\n"), "FOO BAR"),
    "with an open comment": (model("/* never closed\n"), "comment that is not closed"),
    "with an unknown class": (
        model("#2=IFCBEEM('0000000000000000000002',$,'C',$,$,$,$,$,$);\n"),
        "2 instances but only 1 can be read (the first is #2=IFCBEEM(",
    ),
    "with a complex instance": (
        model("#2=(IFCBEAM()IFCWALL());\n"),
        "2 instances but only 1 can be read",
    ),
    "with a comment that ifcopenshell ends early": (
        model("/*/ #2=IFCPERSON($,'A',$,$,$,$,$,$); */\n"),
        "can be read",
    ),
}


@pytest.mark.parametrize(("data", "words"), SILENT.values(), ids=SILENT.keys())
def test_what_ifcopenshell_opens_without_a_word_is_refused(
    data: bytes, words: str, tmp_path: Path
) -> None:
    path = saved(tmp_path, data)
    ifcopenshell.open(str(path))
    assert words in refusal(path)


BAD = {
    "empty": (b"", "is empty"),
    "text": (b"no model\n", "is not an IFC file"),
    "ifcXML named .ifc": (b"<?xml version='1.0'?><ifcXML/>", "is XML"),
    "archive named .ifc": (zipped({"a.ifc": WHOLE}), ".ifczip"),
    "cut in a text": (WHOLE[: WHOLE.index(b"B-1") + 1], "inside a text"),
    "number too great": (model("#2147483648=IFCPERSON($,'A',$,$,$,$,$,$);\n"), "2147483648"),
    "backslash before an apostrophe": (model("#2=IFCPERSON($,'A\\',$,$,$,$,$,$);\n"), "Syntax"),
}


@pytest.mark.parametrize(("data", "words"), BAD.values(), ids=BAD.keys())
def test_bad_files_are_refused(data: bytes, words: str, tmp_path: Path) -> None:
    assert words in refusal(saved(tmp_path, data))


def test_missing_file(tmp_path: Path) -> None:
    assert "no such file" in refusal(tmp_path / "hall.ifc")
    assert "no such file" in refusal(tmp_path / "hall.ifczip")


def test_folder(tmp_path: Path) -> None:
    folder = tmp_path / "hall.ifc"
    folder.mkdir()
    assert "is a folder" in refusal(folder)


@pytest.mark.parametrize("name", ["hall.ifcxml", "hall.ifcXML", "hall.xml", "hall.ifcjson"])
def test_other_serialisations(name: str, tmp_path: Path) -> None:
    assert "export the model as .ifc" in refusal(saved(tmp_path, WHOLE, name))


def test_other_endings(tmp_path: Path) -> None:
    assert "no .ifc or .ifczip file" in refusal(saved(tmp_path, WHOLE, "hall.txt"))


def test_unreadable_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def denied(self: Path) -> bytes:
        raise PermissionError(13, "Permission denied", str(self))

    monkeypatch.setattr(Path, "read_bytes", denied)
    assert "Permission denied" in refusal(saved(tmp_path, WHOLE))


def test_no_room_for_a_copy(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(self: Path, data: bytes) -> int:
        raise OSError(28, "No space left on device")

    path = saved(tmp_path, b"\xef\xbb\xbf" + WHOLE)
    monkeypatch.setattr(Path, "write_bytes", full)
    assert "No space left" in refusal(path)


def test_schema_in_a_comment_is_none(tmp_path: Path) -> None:
    data = WHOLE.replace(b"FILE_SCHEMA((", b"FILE_SCHEMA(( /* 'IFC2X3', */ ")
    assert open_model(saved(tmp_path, data)).schema == "IFC4"


def test_ending_in_capitals(tmp_path: Path) -> None:
    assert open_model(saved(tmp_path, WHOLE, "HALL.IFC")).name == "HALL"


def test_byte_order_mark_is_kept_in_the_source(tmp_path: Path) -> None:
    data = b"\xef\xbb\xbf" + WHOLE
    path = saved(tmp_path, data)
    with pytest.raises(ifcopenshell.Error):
        ifcopenshell.open(str(path))
    opened = open_model(path)
    assert opened.source == data == path.read_bytes()
    assert opened.file.by_id(1).Name == "B"
    assert opened.remarks == ()


@pytest.mark.parametrize("encoding", ["latin-1", "utf-8"])
def test_letters_that_are_not_escaped_are_read(encoding: str, tmp_path: Path) -> None:
    data = model(name="Tr\xe4ger", encoding=encoding)
    path = saved(tmp_path, data)
    assert ifcopenshell.open(str(path)).by_id(1).Name == "Trger", "no longer needed"
    opened = open_model(path)
    assert opened.source == data
    assert opened.file.by_id(1).Name == "Tr\xe4ger"
    assert "not escaped" in opened.remarks[0].text


def test_letters_beyond_two_bytes_are_read(tmp_path: Path) -> None:
    data = model(name="\U0001d538b", encoding="utf-8")
    assert open_model(saved(tmp_path, data)).file.by_id(1).Name == "\U0001d538b"


def test_two_data_sections_are_read(tmp_path: Path) -> None:
    second = "ENDSEC;\nDATA;\n#2=IFCBEAM('0000000000000000000002',$,'C',$,$,$,$,$,$);\n"
    opened = open_model(saved(tmp_path, model(second)))
    assert sorted(beam.Name for beam in opened.file.by_type("IfcBeam")) == ["B", "C"]


def test_signature_brings_a_remark(tmp_path: Path) -> None:
    opened = open_model(saved(tmp_path, WHOLE + b"SIGNATURE\nMIIB+/a==\nENDSEC;\n"))
    assert ["no longer verifies" in remark.text for remark in opened.remarks] == [True]


def test_archive(tmp_path: Path) -> None:
    members = {
        "__MACOSX/._hall.ifc": b"x",
        ".hidden/old.ifc": b"x",
        "models/.old.ifc": b"x",
        "models/hall.IFC": WHOLE,
    }
    opened = open_model(saved(tmp_path, zipped(members), "hall.ifczip"))
    assert opened.source == WHOLE
    assert opened.zipped_member == "models/hall.IFC"
    assert opened.file.by_id(1).Tag == "B-1"
    assert opened.remarks == ()


def test_other_members_are_named(tmp_path: Path) -> None:
    data = zipped({"hall.ifc": WHOLE, "tex.png": b"x"})
    opened = open_model(saved(tmp_path, data, "hall.ifczip"))
    assert "tex.png" in opened.remarks[0].text


def encrypted(data: bytes) -> bytes:
    """Set the flag of encryption in both headers of an archive's only member."""
    central = data.index(b"PK\x01\x02")
    changed = bytearray(data)
    changed[6] |= 1
    changed[central + 8] |= 1
    return bytes(changed)


ARCHIVES = {
    "no model": (zipped({"a.txt": b"x"}), "no .ifc file"),
    "two models": (zipped({"a.ifc": WHOLE, "b/c.ifc": WHOLE}), "2 .ifc files"),
    "only hidden": (zipped({"__MACOSX/a.ifc": WHOLE}), "no .ifc file"),
    "climbs out": (zipped({"../a.ifc": WHOLE}), "leaves the archive"),
    "absolute": (zipped({"/tmp/a.ifc": WHOLE}), "leaves the archive"),
    "drive": (zipped({"C:a.ifc": WHOLE}), "leaves the archive"),
    "bomb": (zipped({"a.ifc": WHOLE + b" " * 10**7}), "more than 200 times"),
    "no archive": (WHOLE, "cannot be unpacked"),
    "empty": (b"", "cannot be unpacked"),
    "cut": (zipped({"a.ifc": WHOLE})[:-30], "cannot be unpacked"),
    "password": (encrypted(zipped({"a.ifc": WHOLE})), "cannot be unpacked"),
    "bad model": (zipped({"a.ifc": b"no model"}), "is not an IFC file"),
}


@pytest.mark.parametrize(("data", "words"), ARCHIVES.values(), ids=ARCHIVES.keys())
def test_bad_archives_are_refused(data: bytes, words: str, tmp_path: Path) -> None:
    assert words in refusal(saved(tmp_path, data, "hall.ifczip"))


def test_damaged_member_is_refused(tmp_path: Path) -> None:
    data = bytearray(zipped({"a.ifc": WHOLE}))
    data[60] ^= 0xFF
    assert "cannot be unpacked" in refusal(saved(tmp_path, bytes(data), "hall.ifczip"))


def test_size_is_bounded_before_unpacking(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    assert archive.LARGEST_MODEL == 4 * 1024**3
    monkeypatch.setattr(archive, "LARGEST_MODEL", len(WHOLE) - 1)
    assert "4 GiB" in refusal(saved(tmp_path, zipped({"a.ifc": WHOLE}), "hall.ifczip"))


def test_a_size_that_lies_unpacks_no_further(tmp_path: Path) -> None:
    """A member that states a small size is read up to that size and then found damaged."""
    data = zipped({"a.ifc": WHOLE + b" " * 10**6})
    central = data.index(b"PK\x01\x02")
    changed = bytearray(data)
    struct.pack_into("<I", changed, central + 24, len(WHOLE))
    assert "cannot be unpacked" in refusal(saved(tmp_path, bytes(changed), "hall.ifczip"))


def test_packing_is_the_same_every_time(tmp_path: Path) -> None:
    packed = pack("models/hall.ifc", WHOLE)
    assert packed == pack("models/hall.ifc", WHOLE)
    with zipfile.ZipFile(io.BytesIO(packed)) as file:
        assert file.namelist() == ["models/hall.ifc"]
        assert file.read("models/hall.ifc") == WHOLE
        assert file.infolist()[0].date_time == (1980, 1, 1, 0, 0, 0)
    assert open_model(saved(tmp_path, packed, "again.ifczip")).source == WHOLE


def test_real_models(open_models: Path) -> None:
    for path in sorted(open_models.glob("*.ifc")):
        opened = open_model(path)
        assert opened.source == path.read_bytes()
        assert len(opened.scan.ids) == len(ifcopenshell.open(str(path)).entity_names())
