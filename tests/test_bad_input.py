"""What is wrong is told in one line that names the file, the place and the remedy; nothing is
written, and what was written earlier stays as it was."""

from __future__ import annotations

import errno
import json
import os
import re
import subprocess
import sys
from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner, Result

from ifccheck import outputs
from ifccheck.cli import main
from tests.step_halls import BASIS, LOAD, NOTATION, Bar, Beam, brief, hall, write

GOOD_MODEL, GOOD_BRIEF = hall(Beam()), brief()
EARLIER = {"hall-rated.ifc": b"earlier model", "hall-rating.json": b"{}", "notes.txt": b"kept"}
SCHEDULE = '\n[reinforcement]\nschedule = "{}"\n'


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A folder with a sound model, a sound brief and the results of an earlier run."""
    write(tmp_path, GOOD_MODEL, GOOD_BRIEF)
    (tmp_path / "out").mkdir()
    for name, data in EARLIER.items():
        (tmp_path / "out" / name).write_bytes(data)
    return tmp_path


def contents(folder: Path) -> dict[str, bytes | None]:
    """Everything below a folder, by path."""
    return {
        str(path.relative_to(folder)): path.read_bytes() if path.is_file() else None
        for path in sorted(folder.rglob("*"))
    }


def rate(folder: Path, *arguments: str | Path, out: str = "out") -> Result:
    """Run ``rate``; without arguments on hall.ifc by brief.toml."""
    if not arguments:
        arguments = (folder / "hall.ifc", "--brief", folder / "brief.toml", "--out", folder / out)
    return CliRunner().invoke(main, ["rate", *map(str, arguments)])


def check_refused(result: Result, status: int, *words: str) -> None:
    """One line on standard error that holds the words; nothing else was said."""
    assert result.exception is None or isinstance(result.exception, SystemExit), result.exception
    assert result.exit_code == status, result.stderr
    assert result.stdout == ""
    lines = result.stderr.splitlines()
    assert len(lines) == 1, result.stderr
    assert lines[0].startswith("ifccheck: ")
    for word in words:
        assert word in lines[0], lines[0]


def refused(folder: Path, status: int, *words: str, arguments: Sequence[str | Path] = ()) -> None:
    """Rating is refused in one line, and nothing in the folder changed."""
    before = contents(folder)
    check_refused(rate(folder, *arguments), status, *words)
    assert contents(folder) == before


def changed(text: str, *pairs: tuple[str, str]) -> str:
    """A text with parts replaced that must be in it."""
    for old, new in pairs:
        assert old in text, old
        text = text.replace(old, new, 1)
    return text


def test_the_sound_twin_is_rated(folder: Path) -> None:
    result = rate(folder)
    assert (result.exit_code, result.stderr) == (0, "")
    assert set(contents(folder / "out")) > {"hall-rating.html", "hall-rating.csv", "notes.txt"}
    assert (folder / "out" / "hall-rated.ifc").read_bytes().startswith(b"ISO-10303-21;")


# Models ------------------------------------------------------------------------------------------

EXPORT = "export the model again from the program that made it"
MODELS: Mapping[str, tuple[str, Sequence[str]]] = {
    "not IFC": ("Dear colleague,\n", ("is not an IFC file", "give a .ifc file")),
    "empty file": ("", ("is empty", EXPORT)),
    "XML": ("<?xml version='1.0'?><ifcXML/>", ("is XML, not STEP", "export the model as .ifc")),
    "cut in half": (GOOD_MODEL[: len(GOOD_MODEL) // 2], ("cut short", EXPORT)),
    "cut after a statement": (
        GOOD_MODEL[: GOOD_MODEL.index(";\n", len(GOOD_MODEL) // 2) + 2], ("cut short", EXPORT),
    ),
    "without its end": (
        changed(GOOD_MODEL, ("END-ISO-10303-21;", "")), ("END-ISO-10303-21 is missing", EXPORT),
    ),
    "empty model": (
        re.sub(r"DATA;.*?ENDSEC;", "DATA;\nENDSEC;", GOOD_MODEL, flags=re.DOTALL),
        ("holds no beam (IfcBeam)", "export the model with its beams"),
    ),
    "no beams": (hall(), ("holds no beam (IfcBeam)", "export the model with its beams")),
    "ids twice": (
        changed(GOOD_MODEL, ("#101=", "#100=")), ("more than one instance numbered #100", EXPORT),
    ),
    "ANCHOR section": (
        changed(GOOD_MODEL, ("DATA;", "ANCHOR;\n<top>=#10;\nENDSEC;\nDATA;")),
        ("has the section ANCHOR", "export it without external references"),
    ),
    "unknown schema": (
        changed(GOOD_MODEL, ("'IFC4'", "'IFC9'")),
        ("its schema is IFC9", "export the model as IFC"),
    ),
    "no unit of length": (
        changed(GOOD_MODEL, ("IFCUNITASSIGNMENT((#1))", "IFCUNITASSIGNMENT(())")),
        ("declares no unit of length", "assign units to its project"),
    ),
    "reference that leads nowhere": (
        re.sub(r"IFCPOLYLINE\(\(#\d+", "IFCPOLYLINE((#99999", GOOD_MODEL, count=1),
        ("refers to #99999, which is not in it", EXPORT),
    ),
    "number beyond all bounds": (
        changed(GOOD_MODEL, (",6000.0)", ",1.E999)")), ("cannot be read", EXPORT),
    ),
    "number with two points": (
        changed(GOOD_MODEL, (",6000.0)", ",6000.0.5)")), ("cannot be read", EXPORT),
    ),
    "number with a letter": (
        changed(GOOD_MODEL, (",6000.0)", ",6O00.0)")), ("cannot be read", EXPORT),
    ),
    "byte that means nothing": (
        changed(GOOD_MODEL, (",6000.0)", ",6000.0@)")), ("cannot be read", EXPORT),
    ),
    "fault in what no beam uses": (
        changed(GOOD_MODEL, ("ENDSEC;\nEND", "#9999=IFCDIRECTION((1.,--1.));\nENDSEC;\nEND")),
        ("cannot be read", EXPORT),
    ),
    "class that the schema has not": (
        changed(GOOD_MODEL, ("IFCEXTRUDEDAREASOLID", "IFCEXTRUDEDAREASOLIDE")),
        ("instances but only", "=IFCEXTRUDEDAREASOLIDE(", EXPORT),
    ),
    "relation to a number": (
        changed(GOOD_MODEL, ("#10,(#11)", "#10,(1.0)")),
        ("does not hold what its class asks", EXPORT),
    ),
}  # fmt: skip


@pytest.mark.parametrize("kind", MODELS)
def test_models(folder: Path, kind: str) -> None:
    text, words = MODELS[kind]
    (folder / "hall.ifc").write_text(text, encoding="ascii")
    refused(folder, 1, "hall.ifc", *words)


def test_a_model_that_is_missing(folder: Path) -> None:
    (folder / "hall.ifc").unlink()
    refused(folder, 1, str(folder / "hall.ifc"), "there is no such file", "check the path")


def test_a_model_that_is_a_folder(folder: Path) -> None:
    (folder / "hall.ifc").unlink()
    (folder / "hall.ifc").mkdir()
    refused(folder, 1, "hall.ifc", "is a folder", "give the .ifc or .ifczip file in it")


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("hall.txt", "is no .ifc or .ifczip file; export the model as .ifc"),
        ("hall.ifcxml", "export the model as .ifc"),
        ("hall.ifczip", "cannot be unpacked"),
    ],
)
def test_a_model_of_another_kind(folder: Path, name: str, words: str) -> None:
    (folder / "hall.ifc").rename(folder / name)
    arguments = (folder / name, "--brief", folder / "brief.toml", "--out", folder / "out")
    refused(folder, 1, name, words, arguments=arguments)


def test_a_model_that_may_not_be_read(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """The tester may be allowed everything, so that the system's refusal is played."""
    read = Path.read_bytes

    def guarded(path: Path) -> bytes:
        if path.name == "hall.ifc":
            raise PermissionError(errno.EACCES, "Permission denied")
        return read(path)

    before = contents(folder)
    with monkeypatch.context() as patch:
        patch.setattr(Path, "read_bytes", guarded)
        result = rate(folder)
    check_refused(result, 1, "hall.ifc", "Permission denied", "check its permissions")
    assert contents(folder) == before


# Briefs ------------------------------------------------------------------------------------------

POINT = changed(LOAD, ('line = "10 kN/m"', 'point = "10 kN"\nat = "2 m"'))


def entry(*pairs: tuple[str, str], of: str = LOAD) -> str:
    """A brief whose one load is changed."""
    return brief(changed(of, *pairs))


BRIEFS: Mapping[str, tuple[str, Sequence[str]]] = {
    "unknown key": (entry(("line =", "lin =")), ("loads[1].lin (line", "did you mean line?")),
    "unknown table": (GOOD_BRIEF + "[[load]]\n", ("load", "unknown key", "did you mean loads?")),
    "wrong unit": (
        entry(("10 kN/m", "10 kN")), ("loads[1].line (line", "is a force", 'like "3.2 kN/m"'),
    ),
    "unit in the wrong case": (entry(("10 kN/m", "10 kn/m")), ("loads[1].line", "kN/m")),
    "missing unit": (
        entry(("10 kN/m", "10")), ("loads[1].line (line", "has no unit", 'like "3.2 kN/m"'),
    ),
    "bare number": (entry(('"10 kN/m"', "10")), ("loads[1].line", "has no unit", "as text")),
    "unknown case": (
        entry(("floor", "flor")), ("loads[1].case (line", "unknown case 'flor'", "mean floor?"),
    ),
    "unknown standard": (
        brief(basis=changed(BASIS, ("a23.3-14", "a23.3-19"))),
        ("basis.standard (line", "csa-a23.3-19", "did you mean csa-a23.3-14?"),
    ),
    "unknown shear method": (
        brief(basis=BASIS + 'shear_method = "genral"\n'),
        ("basis.shear_method (line", "'genral'", "use general or simplified"),
    ),
    "a load that reaches no beam": (
        entry(("B-*", "B-7")), ("loads[1].beams (line", "'B-7' reaches no beam", "correct it"),
    ),
    "a mistyped mark among good ones": (
        entry(('"B-*"', '"B-1", "B-7"')), ("loads[1].beams", "'B-7' reaches no beam", "correct it"),
    ),
    "a query that reaches no beam": (
        entry(('beams = ["B-*"]', "where = 'IfcBeam, location=\"Level 7\"'")),
        ("loads[1].where", "reaches no beam", "correct it"),
    ),
    "both beams and where": (
        entry(("line =", 'where = "IfcBeam"\nline =')), ("loads[1] (line", "both", "exactly one"),
    ),
    "neither beams nor where": (
        entry(('beams = ["B-*"]\n', "")), ("loads[1] (line", "neither", "exactly one"),
    ),
    "comma decimals": (entry(("10 kN/m", "3,2 kN/m")), ("loads[1].line", "comma", "decimal point")),
    "nan": (entry(("10 kN/m", "nan kN/m")), ("loads[1].line", "not a finite number", "like")),
    "infinite": (entry(("10 kN/m", "inf kN/m")), ("loads[1].line", "not a finite number", "like")),
    "huge": (entry(("10 kN/m", "1e300 kN/m")), ("loads[1].line", "beyond", "greatest")),
    "beyond all bounds": (
        entry(("10 kN/m", "1e999 kN/m")), ("loads[1].line", "beyond", "greatest"),
    ),
    "a TOML nan for a factor": (
        GOOD_BRIEF + '[[combinations]]\nname = "s"\nkind = "strength"\n'
        "factors = { self = nan, imposed = 1.5 }\n",
        ("combinations[1].factors", "from 0 to 10"),
    ),
    "a mass for a force": (
        entry(("10 kN", "3 t"), of=POINT), ("loads[1].point", "is a mass", "tf or kN"),
    ),
    "a mass per length": (entry(("10 kN/m", "10 kg/m")), ("loads[1].line", "is a mass", "kN/m")),
    "a load of zero length": (
        entry(("line =", 'from = "2 m"\nto = "2 m"\nline =')), ("loads[1].to", "not beyond from"),
    ),
    "a place beyond the beam": (
        entry(("2 m", "9 m"), of=POINT), ("loads[1].at", "9 m", "beam B-1", "6.000 m long"),
    ),
    "a load of nothing": (entry(("10 kN/m", "0 kN/m")), ("loads[1].line", "is zero", "unloaded")),
    "a negative span": (
        GOOD_BRIEF + '[[beams]]\nbeams = ["B-1"]\nspan = "-6 m"\n',
        ("beams[1].span", "'-6 m'", "100 mm to 200 m"),
    ),
    "a beam that cannot stand": (
        GOOD_BRIEF + '[[supports]]\nbeams = ["B-1"]\nstart = "free"\nend = "free"\n',
        ("supports[1]", "cannot stand", "one end must be fixed"),
    ),
    "a beam that cannot stand by two entries": (
        GOOD_BRIEF + '[[supports]]\nbeams = ["B-1"]\nend = "free"\n',
        ("supports[1]", "beam B-1", "cannot stand"),
    ),
    "an unknown class in a query": (
        entry(('beams = ["B-*"]', 'where = "IfcBeem"')),
        ("loads[1].where (line", "IfcBeem", "write IfcBeam"),
    ),
    "a query with a syntax error": (
        entry(('beams = ["B-*"]', "where = 'IfcBeam, ,,location=='")),
        ("loads[1].where (line", "cannot be understood at character", "write an element query"),
    ),
    "a query with a broken pattern": (
        entry(('beams = ["B-*"]', "where = 'IfcBeam, Name=/[/'")),
        ("loads[1].where (line", "cannot be answered", "correct it"),
    ),
    "broken TOML": (GOOD_BRIEF + "[[loads\n", ("not TOML at line",)),
    "a key twice": (GOOD_BRIEF + 'case = "floor"\n', ("not TOML at line",)),
    "an empty brief": ("", ("basis", "is missing")),
    "a case that no combination mentions": (
        GOOD_BRIEF + '[[combinations]]\nname = "s"\nkind = "strength"\nfactors = { self = 1.25 }\n',
        ("combinations[1].factors", "no factor for case 'floor'", "0 included"),
    ),
    "a schedule that is missing": (
        GOOD_BRIEF + SCHEDULE.format("none.csv"),
        ("reinforcement.schedule", "'none.csv'", "beside"),
    ),
}  # fmt: skip


@pytest.mark.parametrize("kind", BRIEFS)
def test_briefs(folder: Path, kind: str) -> None:
    text, words = BRIEFS[kind]
    (folder / "brief.toml").write_text(text, encoding="utf-8")
    refused(folder, 2, "brief.toml", *words)


def test_a_brief_that_is_missing(folder: Path) -> None:
    (folder / "brief.toml").unlink()
    refused(folder, 2, str(folder / "brief.toml"), "there is no file", "check the path")


def test_a_brief_that_is_a_folder(folder: Path) -> None:
    (folder / "brief.toml").unlink()
    (folder / "brief.toml").mkdir()
    refused(folder, 2, str(folder / "brief.toml"), "is a folder", "give the file in it")


def test_a_brief_that_is_no_text(folder: Path) -> None:
    (folder / "brief.toml").write_bytes(GOOD_BRIEF.encode() + b"# 3 m\xb2\n")
    refused(folder, 2, "brief.toml", "not UTF-8 at line", "save it as UTF-8")


TABLES: Mapping[str, tuple[str, bytes, Sequence[str]]] = {
    "unknown column": ("s.csv", b"mark,botom\nB-1,3-25M\n", ("row 1", "'botom'", "mean bottom?")),
    "negative spacing": (
        "s.csv", b"mark,bottom,stirrups\nB-1,3-25M,10M @ -200\n",
        ("row 2 stirrups", "spacing of -200", "25 to 3000 mm"),
    ),
    "an XLSX that is none": (
        "s.xlsx", b"mark,bottom\n", ("not an XLSX workbook", "save the table"),
    ),
    "an XLSX of another program": (
        "s.xlsx", b"PK\x05\x06" + bytes(18), ("not a readable XLSX workbook", "save the table"),
    ),
    "an empty table": ("s.csv", b"", ("is empty", "the first row must name the columns")),
    "bars that are none": ("s.csv", b"mark,bottom\nB-1,3-25Q\n", ("row 2 bottom", "did you mean")),
}  # fmt: skip


@pytest.mark.parametrize("kind", TABLES)
def test_schedules(folder: Path, kind: str) -> None:
    name, data, words = TABLES[kind]
    (folder / name).write_bytes(data)
    (folder / "brief.toml").write_text(GOOD_BRIEF + SCHEDULE.format(name), encoding="utf-8")
    refused(folder, 2, name, *words)


def test_a_schedule_row_for_an_unknown_mark_is_a_remark(folder: Path) -> None:
    """It stops nothing: a schedule covers more than one model."""
    (folder / "s.csv").write_text('mark,bottom\n"B-1, B-9",3-25M\n', encoding="utf-8")
    (folder / "brief.toml").write_text(GOOD_BRIEF + SCHEDULE.format("s.csv"), encoding="utf-8")
    result = rate(folder)
    assert result.stderr == ""
    data = json.loads((folder / "out" / "hall-rating.json").read_text(encoding="utf-8"))
    assert any("B-9" in remark["text"] for remark in data["remarks"])


def mapped(entry: str, *, optional: bool = False) -> str:
    said = "[reinforcement]\noptional = true\n" if optional else ""
    return f"{GOOD_BRIEF}\n{said}[reinforcement.properties]\n{entry}\n"


@pytest.mark.parametrize(
    ("entry", "meant"),
    [
        ('bottom = "BeamRating_Reinforcement.BotomBars"', "did you mean BeamRating_Rein"),
        ('cover = "BeamRating_Reinforcement.Zz"', "known are BeamRating_Reinforcement.TopBars"),
        ('cover = "Beam Rating Reinforcement.*Bars"', "BeamRating_Reinforcement."),
    ],
)
def test_a_mapping_that_reaches_no_property(folder: Path, entry: str, meant: str) -> None:
    (folder / "brief.toml").write_text(mapped(entry), encoding="utf-8")
    field = entry.partition(" ")[0]
    refused(folder, 2, f"brief.toml: reinforcement.properties.{field} (line ", "reaches no", meant,
            "optional = true under [reinforcement]")  # fmt: skip
    (folder / "brief.toml").write_text(mapped(entry, optional=True), encoding="utf-8")
    assert rate(folder).stderr == ""
    data = json.loads((folder / "out" / "hall-rating.json").read_text(encoding="utf-8"))
    (remark,) = [one for one in data["remarks"] if field in one["text"]]
    assert remark["kind"] == "doubt"


def test_a_mapping_that_reaches_a_property(folder: Path) -> None:
    for entry in ('bottom = "BeamRating_*.BottomBars"', 'top = "BeamRating_Reinforcement.TopBars"'):
        (folder / "brief.toml").write_text(mapped(entry), encoding="utf-8")
        assert rate(folder).stderr == ""


def test_an_unknown_category(folder: Path) -> None:
    for said, meant in (("ofices", "did you mean offices?"), ("zzz", "assembly, balcony")):
        text = GOOD_BRIEF.replace("[cases.press]", f'category = "{said}"\n[cases.press]')
        (folder / "brief.toml").write_text(text, encoding="utf-8")
        refused(folder, 2, "brief.toml: cases.floor.category (line ", f"'{said}'", meant)


@pytest.mark.parametrize("command", ["rate", "survey"])
def test_model_and_brief_the_wrong_way_round(folder: Path, command: str) -> None:
    model, brief_path = folder / "hall.ifc", folder / "brief.toml"
    out = ("--out", str(folder / "out"))
    swapped = CliRunner().invoke(main, [command, str(brief_path), "--brief", str(model), *out])
    check_refused(swapped, 2, str(model), "is a model, not a brief", f"{brief_path} look swapped")
    twice = CliRunner().invoke(main, [command, str(model), "--brief", str(model), *out])
    check_refused(twice, 2, str(model), "is a model, not a brief", "with --brief")


def test_a_brief_of_another_model(folder: Path) -> None:
    other = [LOAD.replace("B-*", mark) for mark in ("X-1", "X-2")]
    (folder / "brief.toml").write_text(brief(*other), encoding="utf-8")
    refused(folder, 2, "loads[1].beams", "like all 2 marks and queries", "another model")
    (folder / "brief.toml").write_text(brief(LOAD, other[0]), encoding="utf-8")
    refused(folder, 2, "loads[2].beams", "reaches no beam: correct it")


# Places of results -------------------------------------------------------------------------------


def test_a_result_that_would_fall_on_the_source(folder: Path) -> None:
    source = (folder / "hall.ifc").rename(folder / "hall-rated.ifc")
    arguments = (source, "--brief", folder / "brief.toml", "--out", folder)
    refused(folder, 2, str(source), "overwrite an input", "--out", arguments=arguments)


def test_a_result_that_would_fall_on_the_source_by_another_way(folder: Path) -> None:
    source = (folder / "hall.ifc").rename(folder / "hall-rated.ifc")
    (folder / "other").symlink_to(folder, target_is_directory=True)
    arguments = (source, "--brief", folder / "brief.toml", "--out", folder / "other")
    refused(folder, 2, "hall-rated.ifc", "overwrite an input", arguments=arguments)


@pytest.mark.parametrize("name", ["hall.ifc", "hall-rated.ifc", "hall.ifczip"])
def test_two_models_of_one_name(folder: Path, name: str) -> None:
    other = folder / "other" / name
    other.parent.mkdir()
    other.write_text(GOOD_MODEL, encoding="ascii")
    arguments = (
        folder / "hall.ifc", other, "--brief", folder / "brief.toml", "--out", folder / "out",
    )  # fmt: skip
    refused(folder, 2, str(other), "same names", "different folders", arguments=arguments)


def test_a_model_given_twice(folder: Path) -> None:
    model = folder / "hall.ifc"
    arguments = (model, model, "--brief", folder / "brief.toml", "--out", folder / "out")
    refused(folder, 2, str(model), "give each model once", arguments=arguments)


def test_one_bad_model_among_good_ones(folder: Path) -> None:
    (folder / "bad.ifc").write_text(GOOD_MODEL[:-20], encoding="ascii")
    arguments = (
        folder / "hall.ifc", folder / "bad.ifc", "--brief", folder / "brief.toml", "--out",
        folder / "out",
    )  # fmt: skip
    refused(folder, 1, "bad.ifc", "cut short", arguments=arguments)


@pytest.mark.parametrize("place", ["notes.txt", "notes.txt/deeper"])
def test_an_output_folder_that_is_a_file(folder: Path, place: str) -> None:
    (folder / "notes.txt").write_text("kept", encoding="ascii")
    before = contents(folder)
    result = rate(folder, out=place)
    check_refused(
        result, 1, str(folder / place), "cannot be written", "nothing was changed", "--out"
    )
    assert contents(folder) == before


def test_an_output_folder_that_may_not_be_written(
    folder: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    before = contents(folder)
    with monkeypatch.context() as patch:
        patch.setattr(Path, "mkdir", _denied)
        result = rate(folder, out="new")
    check_refused(result, 1, "new", "Permission denied", "nothing was changed", "--out")
    assert contents(folder) == before


def _denied(*_: Any, **__: Any) -> None:
    raise PermissionError(errno.EACCES, "Permission denied")


@pytest.mark.parametrize("at", [1, 2, 3, 4])
def test_a_disk_that_is_full(folder: Path, monkeypatch: pytest.MonkeyPatch, at: int) -> None:
    """The disk takes some of the four files and then no more."""
    real, calls = os.fsync, iter(range(1, 100))

    def fsync(descriptor: int) -> None:
        if next(calls) == at:
            raise OSError(errno.ENOSPC, "No space left on device")
        real(descriptor)

    before = contents(folder)
    with monkeypatch.context() as patch:
        patch.setattr(outputs.os, "fsync", fsync)
        result = rate(folder)
    check_refused(result, 1, "No space left on device", "nothing was changed", "free the place")
    assert contents(folder) == before


# Bad beams ---------------------------------------------------------------------------------------

CROSSING = ((-150.0, 0.0), (150.0, 600.0), (150.0, 0.0), (-150.0, 600.0))
PINCHED = (
    (-150.0, 0.0), (150.0, 0.0), (0.0, 300.0), (150.0, 600.0), (-150.0, 600.0), (0.0, 300.0),
)  # fmt: skip
BARS = (Bar(0.0, 6000.0, -90.0, 60.0), Bar(0.0, 6000.0, 90.0, 60.0))


def sized(length: float) -> Beam:
    return Beam(length=length, columns=False)


BEAMS: Mapping[str, tuple[str, str]] = {
    "negative spacing": (hall(Beam(notation={**NOTATION, "Stirrups": "10M @ -200"})), "-200"),
    "no spacing": (hall(Beam(notation={**NOTATION, "Stirrups": "2 legs 10M @ 0"})), "spacing of 0"),
    "negative bars": (hall(Beam(notation={**NOTATION, "BottomBars": "-3-25M"})), "-3 bars"),
    "zero length": (hall(sized(0.0)), "extruded by 0 mm"),
    "hardly any length": (hall(sized(0.001)), "vertical member"),
    "negative length": (hall(sized(-6000.0)), "extruded by -6000 mm"),
    "a depth that is no number": (changed(hall(Beam()), (",6000.0)", ",nan)")), "depth"),
    "crossing outline": (hall(Beam(outline=CROSSING)), "crosses itself"),
    "outline that meets itself": (hall(Beam(outline=PINCHED)), "crosses itself"),
    "outline without area": (
        hall(Beam(outline=((-150.0, 0.0), (150.0, 0.0), (-150.0, 0.0)))), "three corners",
    ),
    "a place that is no number": (
        changed(hall(Beam()), ("(0.0,0.0,3000.0)", "(0.0,nan,3000.0)")), "does not hold 3 numbers",
    ),
    "a place that is -nan": (
        changed(hall(Beam()), ("(0.0,0.0,3000.0)", "(0.0,-nan,3000.0)")), "3 numbers",
    ),
    "an infinite place": (
        changed(hall(Beam()), ("(0.0,0.0,3000.0)", "(0.0,-inf,3000.0)")), "3 numbers",
    ),
    "a corner that is no number": (
        changed(hall(Beam()), ("((-150.0,0.0))", "((nan,0.0))")), "does not hold 2 numbers",
    ),
    "a direction that is no number": (
        changed(hall(Beam(along=(0.0, 1.0, 0.5))), ("(0.0,1.0,0.5)", "(0.0,1.0,nan)")), "3 numbers",
    ),
    "a direction of no length": (hall(Beam(along=(0.0, 0.0, 0.0))), "direction of no length"),
    "a direction of texts": (
        changed(hall(Beam(along=(0.0, 1.0, 0.5))), ("(0.0,1.0,0.5)", "('a','b','c')")),
        "classes ask",
    ),
    "a placement without a position": (
        re.sub(r"IFCLOCALPLACEMENT\(\$,#\d+\)", "IFCLOCALPLACEMENT($,$)", hall(Beam()), count=1),
        "has no RelativePlacement",
    ),
    "a profile that is a unit": (
        re.sub(r"IFCEXTRUDEDAREASOLID\(#\d+", "IFCEXTRUDEDAREASOLID(#1", hall(Beam()), count=1),
        "profile of class IfcSIUnit",
    ),
    "a body that is a number": (
        re.sub(r"'SweptSolid',\(#\d+\)", "'SweptSolid',(1.0)", hall(Beam()), count=1),
        "does not hold what its classes ask",
    ),
    "bars without a diameter": (
        hall(Beam(notation=None, bars=[replace(bar, diameter=0.0, area=0.0) for bar in BARS])),
        "diameter",
    ),
    "bars of no length": (
        hall(Beam(notation=None, bars=[replace(bar, end=0.0) for bar in BARS])), "no longitudinal",
    ),
    "bars below the soffit": (
        hall(Beam(notation=None, bars=[replace(bar, z=-60.0) for bar in BARS])), "outside",
    ),
}  # fmt: skip


@pytest.mark.parametrize("kind", BEAMS)
def test_bad_beams_are_not_rated_and_the_rest_is(folder: Path, kind: str) -> None:
    """A beam that makes no sense has its reason; a sound one in the same model is rated.

    Where the first lies may be no more known than that it rests on nothing here.
    """
    model, words = BEAMS[kind]
    complete = '[[beams]]\nbeams = ["B-2"]\nloads_complete = true\n'
    (folder / "brief.toml").write_text(brief(LOAD, complete), encoding="utf-8")
    sound = hall(Beam("B-2", at=(0.0, 9000.0, 3000.0)))
    (folder / "hall.ifc").write_text(joined(model, sound), encoding="ascii")
    result = rate(folder)
    assert result.exception is None or isinstance(result.exception, SystemExit), result.exception
    assert (result.exit_code, result.stderr) == (3, "")
    data = json.loads((folder / "out" / "hall-rating.json").read_text(encoding="utf-8"))
    beams = {beam["mark"]: beam for beam in data["beams"]}
    assert beams["B-1"]["verdict"] == "not rated"
    assert beams["B-1"]["reasons"], kind
    assert words in " ".join(beams["B-1"]["reasons"])
    assert beams["B-2"]["verdict"] == "adequate"


def joined(first: str, second: str) -> str:
    """Two halls as one model: the instances of the second from #5100 on."""
    begin, end = "#14=", "ENDSEC;\nEND-ISO"
    body = second[second.index("\n", second.index(begin)) + 1 : second.index(end)]
    moved = re.sub(r"#(\d{3,})", lambda found: f"#{int(found[1]) + 5000}", body)
    return first.replace(end, moved + end)


# Other commands and the command line -------------------------------------------------------------


def test_other_commands_refuse_alike(folder: Path) -> None:
    run, brief_path = CliRunner(), str(folder / "brief.toml")
    missing, model = str(folder / "none.ifc"), str(folder / "hall.ifc")
    check_refused(run.invoke(main, ["survey", missing]), 1, missing, "check the path")
    check_refused(
        run.invoke(main, ["sheet", model, "B-9", "--brief", brief_path]), 2, model, "'B-9'", "Tag"
    )
    (folder / "brief.toml").write_text("", encoding="utf-8")
    check_refused(run.invoke(main, ["survey", model, "--brief", brief_path]), 2, "basis")


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["reat"], ("No such command 'reat'", "ifccheck --help")),
        (["rate"], ("Missing argument", "ifccheck rate --help")),
        (["rate", "hall.ifc", "--out", "out"], ("--brief", "ifccheck rate --help")),
        (["rate", "hall.ifc", "--breif", "b.toml"], ("--breif", "ifccheck rate --help")),
        (["rate", "a.ifc", "--only", "pdf"], ("'pdf'", "html", "ifccheck rate --help")),
    ],
)
def test_a_wrong_command_line(arguments: list[str], words: tuple[str, ...]) -> None:
    check_refused(CliRunner().invoke(main, arguments), 2, *words)


def command(folder: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-W", "error", "-m", "ifccheck", *arguments],
        cwd=folder, capture_output=True, text=True, timeout=120,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("arguments", "status", "words"),
    [
        (["rate", "none.ifc", "--brief", "brief.toml", "--out", "out"], 1, "none.ifc"),
        (["rate", "hall.ifc", "--brief", "none.toml", "--out", "out"], 2, "none.toml"),
        (
            ["rate", "hall.ifc", "--brief", "brief.toml", "--out", "hall.ifc"],
            1,
            "cannot be written",
        ),
        (["rate", "hall.ifc", "--brief", "hall.ifc", "--out", "out"], 2, "is a model, not a brief"),
        (["rate", "brief.toml", "--brief", "brief.toml", "--out", "out"], 1, "is no .ifc"),
        (["rate", "hall.ifc", "--brief", "brief.toml"], 2, "--out"),
    ],
)
def test_the_program_itself(folder: Path, arguments: list[str], status: int, words: str) -> None:
    before = contents(folder)
    done = command(folder, *arguments)
    assert (done.returncode, done.stdout) == (status, "")
    assert len(done.stderr.splitlines()) == 1
    assert words in done.stderr
    assert "Traceback" not in done.stderr
    assert contents(folder) == before


def test_the_program_itself_rates_the_sound_twin(folder: Path) -> None:
    done = command(folder, "rate", "hall.ifc", "--brief", "brief.toml", "--out", "out")
    assert (done.returncode, done.stderr) == (0, "")
    assert "1 adequate of 1 in scope" in done.stdout
