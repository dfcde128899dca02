"""Tables of loads: CSV and XLSX read alike, the same as entries of the brief, faults with place."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import openpyxl
import pytest

from ifccheck.beam import Case, Verdict
from ifccheck.brief.load import load_brief
from ifccheck.brief.load_table import read_load_table
from ifccheck.brief.model import LoadEntry, LoadTableFile
from ifccheck.errors import BriefError
from ifccheck.publish.json import ratings_json
from tests.step_halls import LOAD, Beam, brief, hall
from tests.test_brief import BASIS, CASES
from tests.test_rules_that_protect import SOUND, check_not_rated, rating_of, report_on

TABLE = '[[load_tables]]\nfile = "loads.csv"\n'
KNOWN = (Case("floor", "imposed"), Case("plant", "permanent"))
HEADER = (
    "beam", "case", "kind", "value", "value_end", "tributary_width", "from", "to", "at", "at_from",
    "face", "projected", "upward", "optional", "eccentricity",
)  # fmt: skip


def entries(folder: Path, *rows: str, name: str = "loads.csv") -> tuple[LoadEntry, ...]:
    path = folder / name
    path.write_text("\n".join(rows) + "\n", encoding="utf-8")
    return read_load_table(LoadTableFile(name, path), KNOWN)


def row(**cells: str) -> str:
    assert set(cells) <= set(HEADER) | {"from_"}
    cells = {name.rstrip("_"): text for name, text in cells.items()}
    return ",".join(f'"{cells[name]}"' if name in cells else "" for name in HEADER)


LINE = {"beam": "B-1", "case": "floor", "kind": "line", "value": "3.2 kN/m"}
POINT = {**LINE, "kind": "point", "value": "60 kN", "at": "35 %"}

ROWS_AND_ENTRIES = [
    (row(**LINE), 'line = "3.2 kN/m"'),
    (
        row(**{**LINE, "kind": "Trapezoid", "from_": "1.2 m", "to": "L - 1 m"}, value_end="9 kN/m"),
        'line = ["3.2 kN/m", "9 kN/m"]\nfrom = "1.2 m"\nto = "L - 1 m"',
    ),
    (row(**POINT, face="Bottom"), 'point = "60 kN"\nat = "35 %"\nface = "bottom"'),
    (row(**POINT, at_from="C-3"), 'point = "60 kN"\nat = "35 %"\nat_from = "C-3"'),
    (
        row(**{**POINT, "kind": "moment", "value": "-12 kN*m", "at": "2.1 m"}),
        'moment = "-12 kN*m"\nat = "2.1 m"',
    ),
    (
        row(**{**LINE, "kind": "area", "value": "1.5 kPa"}, tributary_width="8 ft"),
        'area = "1.5 kPa"\ntributary_width = "8 ft"',
    ),
    (row(**LINE, projected="yes", optional="TRUE"), 'line = "3.2 kN/m"\nprojected = true'),
    (
        row(**{**LINE, "value": "-2 kN/m"}, upward="yes", eccentricity="50 mm"),
        'line = "-2 kN/m"\nupward = true\neccentricity = "50 mm"',
    ),
]


@pytest.mark.parametrize(("cells", "entry"), ROWS_AND_ENTRIES)
def test_a_row_is_the_entry_that_says_the_same(tmp_path: Path, cells: str, entry: str) -> None:
    (read,) = entries(tmp_path, ",".join(HEADER), cells)
    path = tmp_path / "brief.toml"
    cases = '[cases.floor]\nnature = "imposed"\n'
    path.write_text(
        f'{BASIS}{cases}[[loads]]\ncase = "floor"\nbeams = ["B-1"]\n{entry}\n', encoding="utf-8"
    )
    (written,) = load_brief(path).loads
    assert read.place == "loads.csv row 2"
    assert read.in_table
    assert read == replace(written, place=read.place, in_table=True, optional="TRUE" in cells)


def test_units_may_stand_in_the_heading(tmp_path: Path) -> None:
    first, second, third = entries(
        tmp_path,
        "beam;Case;kind;value [kN/m];value end (kN/m);from [m];to [m]",
        "B-1;floor;line;3.2;;;",
        "B-1;floor;trapezoid;1e1;.5;1.5;L/2",
        "B-1;floor;line;12 plf;;;",
    )
    assert first.values == (3.2, 3.2)
    assert (second.values, second.start.value, second.end.relative) == ((10.0, 0.5), 1500.0, True)
    assert third.values[0] == pytest.approx(12 * 4.4482216152605 / 304.8)
    assert second.text == "1e1 kN/m to .5 kN/m from 1.5 m to L/2"


def test_a_workbook_is_read_as_a_csv_is(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    book.active.title = "notes"
    sheet = book.create_sheet("Loads")
    sheet.append(["beam", "case", "kind", "value [kN]", "at", "optional"])
    sheet.append([204, "floor", "point", 60, 0.35, True])
    sheet["E2"].number_format = "0 %"
    book.save(tmp_path / "loads.xlsx")
    (read,) = read_load_table(LoadTableFile("loads.xlsx", tmp_path / "loads.xlsx"), KNOWN)
    assert (read.selection.beams, read.values, read.optional) == (("204",), (60e3, 60e3), True)
    assert (read.start.value, read.start.relative) == (0.35, True)


FAULTS = [
    ({**LINE, "case": "flor"}, "row 2 case: unknown case 'flor': did you mean floor?"),
    ({**LINE, "case": ""}, "row 2 case: is empty"),
    ({**LINE, "beam": ""}, "row 2 beam: is empty: name the beam"),
    ({**LINE, "beam": "B-9..B-1"}, "row 2 beam: 'B-9..B-1' does not ascend"),
    ({**LINE, "kind": "lime"}, "row 2 kind: 'lime' is not known: did you mean line?"),
    ({**LINE, "value": ""}, "row 2 value: is empty: give the load"),
    ({**LINE, "value": "3.2"}, "row 2 value: '3.2' has no unit"),
    ({**LINE, "value": "3,2 kN/m"}, "row 2 value: '3,2 kN/m' has a comma"),
    ({**LINE, "value": "0 kN/m"}, "row 2 value: is zero: leave the load out"),
    ({**LINE, "value": "3 kN"}, "row 2 value: '3 kN' is a force, but a load per length is needed"),
    ({**LINE, "value_end": "3 kN/m"}, "row 2 value_end: belongs to a trapezoid"),
    ({**LINE, "kind": "trapezoid"}, "row 2 value_end: is empty"),
    ({**LINE, "at": "2 m"}, "row 2 at: belongs to a point load or moment"),
    ({**LINE, "tributary_width": "2 m"}, "row 2 tributary_width: belongs to an area load"),
    ({**LINE, "from_": "3 m", "to": "2 m"}, "row 2 to: '2 m' is not beyond from = '3 m'"),
    ({**LINE, "face": "side"}, "row 2 face: 'side' is not known: use top or bottom"),
    ({**LINE, "upward": "yes"}, "row 2 upward: '3.2 kN/m' acts downward"),
    ({**LINE, "optional": "maybe"}, "row 2 optional: 'maybe' is not known: use yes or no"),
    ({**POINT, "at": ""}, "row 2: has point but no at"),
    ({**POINT, "at": "-1 m"}, "row 2 at: '-1 m' is negative"),
    ({**POINT, "from_": "1 m"}, "row 2 from: belongs to a line load"),
    ({**LINE, "kind": "area", "value": "1 kPa"}, "row 2: has area but no tributary_width"),
]  # fmt: skip


@pytest.mark.parametrize(("cells", "told"), FAULTS)
def test_a_wrong_row_is_told_with_file_row_and_column(
    tmp_path: Path, cells: dict[str, str], told: str
) -> None:
    with pytest.raises(BriefError) as caught:
        entries(tmp_path, ",".join(HEADER), row(**cells))
    assert str(caught.value).startswith(f"loads.csv {told}")
    assert "\n" not in str(caught.value)


def test_other_wrong_rows_are_counted(tmp_path: Path) -> None:
    wrong = [row(**{**LINE, "case": "x"}), row(**LINE), row(**{**LINE, "value": "1"})]
    with pytest.raises(BriefError, match=r"^loads.csv row 2 case: .* \(and 2 more wrong rows\)$"):
        entries(tmp_path, ",".join(HEADER), *wrong, row(**{**LINE, "beam": ""}))


def test_a_decimal_comma_is_refused_where_the_heading_has_the_unit_too(tmp_path: Path) -> None:
    with pytest.raises(BriefError, match=r"^loads.csv row 2 value: '3,2' has a comma"):
        entries(tmp_path, "beam;case;kind;value [kN/m]", "B-1;floor;line;3,2")


HEADINGS = [
    ("beam,case,kind,valu", "unknown column 'valu': did you mean value?"),
    ("beam,case,kind,value,", "column without name"),
    ("beam,case,kind,value,Value [kN]", "column 'value' is given twice"),
    ("beam,case,kind", "there is no column 'value'"),
    ("beam,case,kind,value [kN/mm3]", "column 'value' has the unknown unit 'kN/mm3'"),
    ("beam [m],case,kind,value", "column 'beam' takes no unit: leave 'm' out"),
]


@pytest.mark.parametrize(("heading", "told"), HEADINGS)
def test_a_wrong_heading_is_told(tmp_path: Path, heading: str, told: str) -> None:
    with pytest.raises(BriefError) as caught:
        entries(tmp_path, heading, "B-1,floor,line,3 kN/m")
    assert str(caught.value).startswith(f"loads.csv row 1: {told}")


def test_a_table_without_rows_is_no_table_of_loads(tmp_path: Path) -> None:
    with pytest.raises(BriefError, match=r"^loads.csv: holds no load"):
        entries(tmp_path, "beam,case,kind,value")


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ('[[load_tables]]\nfile = "none.csv"\n', "load_tables[1].file (line"),
        ('[[load_tables]]\nfile = "brief.toml"\n', "'brief.toml' is neither .csv nor .xlsx"),
        ('[[load_tables]]\nfiles = "a.csv"\n', "unknown key 'files': did you mean file?"),
        (TABLE * 2, "'loads.csv' is given twice: its loads would count twice"),
    ],
)
def test_an_entry_that_names_no_table_is_told(tmp_path: Path, text: str, told: str) -> None:
    (tmp_path / "loads.csv").write_text("beam,case,kind,value\nB-1,press,line,3 kN/m\n")
    (tmp_path / "brief.toml").write_text(BASIS + CASES + text, encoding="utf-8")
    with pytest.raises(BriefError) as caught:
        load_brief(tmp_path / "brief.toml")
    assert told in str(caught.value)


def test_the_digest_follows_the_table(tmp_path: Path) -> None:
    path, table = tmp_path / "brief.toml", tmp_path / "loads.csv"
    path.write_text(BASIS + CASES + TABLE, encoding="utf-8")
    digests = set()
    for value in ("3 kN/m", "4 kN/m"):
        table.write_text(f"beam,case,kind,value\nB-1,press,line,{value}\n", encoding="utf-8")
        digests.add(load_brief(path).sha256)
    assert len(digests) == 2


def rated_with(folder: Path, *rows: str, before: str = ""):
    (folder / "loads.csv").write_text(
        "\n".join(("beam,case,kind,value,value_end,from,to,at,upward,optional,face", *rows)) + "\n",
        encoding="utf-8",
    )
    return report_on(folder, SOUND, text=brief(before) + TABLE)


def test_a_row_rates_as_the_entry_does_and_shows_where_it_comes_from(tmp_path: Path) -> None:
    for name in ("entry", "table"):
        (tmp_path / name).mkdir()
    by_entry = rating_of(report_on(tmp_path / "entry", SOUND, text=brief(LOAD)))
    report = rated_with(tmp_path / "table", "B-1,floor,line,10 kN/m,,,,,,,")
    by_row = rating_of(report)
    assert by_row.verdict is Verdict.ADEQUATE
    assert by_row.utilisation == by_entry.utilisation
    (key,) = report.ratings
    assert [load.origin for load in report.sheet(key).loads[1:]] == ["loads.csv row 2"]
    assert json.loads(ratings_json(report))["beams"][0]["verdict"] == "adequate"


def test_rows_and_entries_add_up(tmp_path: Path) -> None:
    alone = rating_of(report_on(tmp_path, SOUND, text=brief(LOAD)))
    both = rating_of(rated_with(tmp_path, "B-*,floor,line,10 kN/m,,,,,,,", before=LOAD))
    assert both.utilisation > alone.utilisation * 1.2


@pytest.mark.parametrize(
    ("cells", "told"),
    [
        ("X-9,floor,line,10 kN/m,,,,,,,", "loads.csv row 3 beam: 'X-9' reaches no beam"),
        ("B-1..B-2,floor,line,10 kN/m,,,,,,,", "loads.csv row 3 beam: 'B-2' reaches no beam"),
        ("B-1,floor,point,10 kN,,,,9 m,,,", "loads.csv row 3 at: 9 m lies beyond the end of beam"),
    ],
)
def test_a_row_that_reaches_no_beam_or_no_place_is_an_error(
    tmp_path: Path, cells: str, told: str
) -> None:
    with pytest.raises(BriefError) as caught:
        rated_with(tmp_path, "B-1,floor,line,10 kN/m,,,,,,,", cells)
    assert str(caught.value).startswith(told)


def test_an_optional_row_may_reach_none(tmp_path: Path) -> None:
    report = rated_with(
        tmp_path, "B-1,floor,line,10 kN/m,,,,,,,", "X-9,floor,line,10 kN/m,,,,,,yes,"
    )
    assert rating_of(report).verdict is Verdict.ADEQUATE


def test_a_row_that_lifts_or_hangs_is_a_doubt_as_an_entry_is(tmp_path: Path) -> None:
    lifted = rated_with(tmp_path, "B-1,floor,line,10 kN/m,,,,,,,", "B-1,floor,line,-1 kN/m,,,,,,,")
    check_not_rated(rating_of(lifted), "load acts upward: loads.csv row 3; write upward = true")
    hung = rated_with(tmp_path, "B-1,floor,line,10 kN/m,,,,,,,bottom")
    check_not_rated(rating_of(hung), "hung load: hanger steel is not checked (loads.csv row 2)")


def test_two_tables_of_one_name_in_two_folders_are_told_apart(tmp_path: Path) -> None:
    for folder in ("north", "south"):
        (tmp_path / folder).mkdir()
        (tmp_path / folder / "loads.csv").write_text(
            "beam,case,kind,value\nB-1,press,line,3 kN/m\n", encoding="utf-8"
        )
    tables = "".join(f'[[load_tables]]\nfile = "{f}/loads.csv"\n' for f in ("north", "south"))
    (tmp_path / "brief.toml").write_text(BASIS + CASES + tables, encoding="utf-8")
    places = [entry.place for entry in load_brief(tmp_path / "brief.toml").loads]
    assert places == ["north/loads.csv row 2", "south/loads.csv row 2"]


def test_a_hall_of_two_beams_takes_a_range(tmp_path: Path) -> None:
    beams = [Beam(mark="B-1"), Beam(mark="B-2", at=(0.0, 9000.0, 3000.0))]
    (tmp_path / "loads.csv").write_text(
        'beam,case,kind,value [kN/m]\nB-1..B-2,floor,line,10\n"B-1, B-2",floor,line,1\n',
        encoding="utf-8",
    )
    report = report_on(tmp_path, hall(*beams), text=brief() + TABLE)
    assert [rating_of(report, mark).verdict for mark in ("B-1", "B-2")] == [Verdict.ADEQUATE] * 2
