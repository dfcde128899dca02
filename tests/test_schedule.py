"""The beam schedule: CSV and XLSX read alike, faults told with their row, zones on beams."""

import zipfile
from dataclasses import replace
from datetime import datetime, time
from itertools import pairwise
from pathlib import Path

import openpyxl
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.beam import Axis, Beam, DescribedZone, Remark
from ifccheck.brief.mark_ranges import expanded
from ifccheck.brief.model import Selection
from ifccheck.brief.quantities import read_position
from ifccheck.brief.schedule import read_schedule
from ifccheck.brief.selecting import parts_of
from ifccheck.brief.zone_ranks import by_rank, speaks
from ifccheck.brief.zones import schedule_remarks, with_schedule
from ifccheck.errors import BriefError
from ifccheck.notation import parse_bars, parse_stirrups
from ifccheck.units import QuantityError

HEADER = ["Mark", "From", "To", "Top", "Bottom", "Side", "Stirrups", "Cover", "Bar yield"]
ROWS = [
    ["B-204", "", "", "2-20M", "3-25M + 2-20M", "none", "", "40 mm", "400 MPa"],
    ["B-204", "", "1.5 m", "", "", "", "2 legs 10M @ 150", "", ""],
    ["B-3*, B-4", "50 %", "100 %", "", "4#8", "", "none", "1.5 in", "60 ksi"],
]


@pytest.fixture
def write(tmp_path):
    """Write a table as CSV or XLSX."""

    def write(rows, suffix=".csv", separator=","):
        path = Path(tmp_path) / f"beams{suffix}"
        if suffix == ".xlsx":
            book = openpyxl.Workbook()
            for row in rows:
                book.active.append(row)
            book.save(path)
            book.close()
        else:
            quoted = [[f'"{c}"' if separator in c else c for c in row] for row in rows]
            path.write_text("\n".join(separator.join(row) for row in quoted) + "\n", "utf-8")
        return path

    return write


@pytest.mark.parametrize(
    ("suffix", "separator"), [(".csv", ","), (".csv", ";"), (".csv", "\t"), (".xlsx", "")]
)
def test_a_schedule_is_read(write, suffix, separator):
    first, second, third = read_schedule(write([HEADER, *ROWS], suffix, separator))
    assert first.place == f"beams{suffix} row 2"
    assert first.selection == Selection(beams=("B-204",))
    assert (first.start, first.end) == (None, None)
    assert first.top == parse_bars("2-20M")
    assert first.bottom == parse_bars("3-25M + 2-20M")
    assert first.side == ()
    assert (first.stirrups, first.no_stirrups) == (None, False)
    assert (first.cover, first.bar_yield, first.stirrup_yield) == (40.0, 400.0, None)
    assert second.end.value == 1500.0
    assert (second.top, second.bottom, second.side) == (None, None, None)
    assert second.stirrups == parse_stirrups("2 legs 10M @ 150")
    assert third.selection == Selection(beams=("B-3*", "B-4"))
    assert (third.start.value, third.start.relative) == (0.5, True)
    assert (third.stirrups, third.no_stirrups) == (None, True)
    assert third.cover == pytest.approx(38.1)
    assert third.bar_yield == pytest.approx(413.685, abs=1e-3)  # 60 ksi


def test_a_byte_order_mark_blank_rows_and_order_of_columns_do_not_matter(tmp_path):
    path = Path(tmp_path) / "beams.csv"
    path.write_bytes("\ufeffBOTTOM,mark\r\n,\r\n3-25M,B-1\r\n\r\n".encode())
    (row,) = read_schedule(path)
    assert (row.place, row.bottom) == ("beams.csv row 3", parse_bars("3-25M"))


def test_numbers_as_marks_are_text(write):
    (row,) = read_schedule(write([["mark", "bottom"], [204, "3-25M"]], ".xlsx"))
    assert row.selection.beams == ("204",)


@pytest.mark.parametrize(
    ("value", "told"),
    [
        ('="3-"&"25M"', "column B: holds a formula"),
        ("=#REF!", "column B: holds a formula"),
        (datetime(2026, 4, 3), "column B: holds a date or time ('2026-04-03 00:00:00')"),
        (time(3, 25), "column B: holds a date or time"),
    ],
)
def test_cells_that_are_no_text_are_told_and_never_evaluated(write, value, told):
    path = write([["mark", "bottom"], ["B-1", value]], ".xlsx")
    with pytest.raises(BriefError) as caught:
        read_schedule(path)
    assert str(caught.value).startswith(f"beams.xlsx row 2 {told}")


def test_a_cell_that_holds_an_error_is_told(tmp_path):
    book = openpyxl.Workbook()
    book.active.append(["mark", "bottom"])
    book.active.append(["B-1", "#N/A"])
    book.active["B2"].data_type = "e"
    book.save(tmp_path / "beams.xlsx")
    with pytest.raises(BriefError, match=r"row 2 column B: holds an error \('#N/A'\)"):
        read_schedule(tmp_path / "beams.xlsx")


def test_numbers_of_a_workbook_are_read_as_they_are_shown(tmp_path):
    book = openpyxl.Workbook()
    book.active.append(["mark", "from", "to", "bottom"])
    book.active.append([204.0, 0.07, 0.5, "3-25M"])
    book.active["B2"].number_format = book.active["C2"].number_format = "0 %"
    book.save(tmp_path / "beams.xlsx")
    (row,) = read_schedule(tmp_path / "beams.xlsx")
    assert row.selection.beams == ("204",)
    assert (row.start.value, row.start.relative, row.start.text) == (0.07, True, "7 %")
    assert row.end.on(6000.0) == 3000.0


def test_a_number_without_a_unit_is_refused_in_a_workbook_too(write):
    path = write([["mark", "to", "bottom"], ["B-1", 1.5, "3-25M"]], ".xlsx")
    with pytest.raises(BriefError, match=r"^beams.xlsx row 2 to: '1.5' has no unit"):
        read_schedule(path)


def test_a_mark_may_be_a_range_or_one_of_several_lines(write):
    rows = [["mark", "bottom"], ["B-8..B-10, K-1*\nB-40", "3-25M"]]
    (row,) = read_schedule(write(rows, ".xlsx"))
    assert [part.beams for _, part in parts_of(row)] == [
        ("B-8", "B-9", "B-10"),
        ("K-1*",),
        ("B-40",),
    ]
    assert [part.said for _, part in parts_of(row)] == ["B-8..B-10", "K-1*", "B-40"]


@pytest.mark.parametrize(
    ("text", "marks"),
    [
        ("B-201..B-203", ("B-201", "B-202", "B-203")),
        ("L2/B9 .. L2/B11", ("L2/B9", "L2/B10", "L2/B11")),
        ("B-08N..B-10N", ("B-08N", "B-09N", "B-10N")),
        ("2B3x1..2B3x2", ("2B3x1", "2B3x2")),
        ("7..9", ("7", "8", "9")),
        ("B-1", ("B-1",)),
        ("A..B", ("A..B",)),
        ("B-١..B-٣", ("B-١..B-٣",)),
        ("B-2*..", ("B-2*..",)),
    ],
)
def test_marks_that_a_text_stands_for(text, marks):
    assert expanded(text) == marks


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("B-204..B-201", "does not ascend"),
        ("B-204..B-204", "does not ascend"),
        ("B-201..C-204", "differs in more than its last number"),
        ("B-201N..B-204S", "differs in more than its last number"),
        ("B-08..B-100", "has numbers of unequal length"),
        ("B-1..B-100000", "stands for more than 1000 marks"),
    ],
)
def test_ranges_that_make_no_sense_are_told(write, text, told):
    with pytest.raises(BriefError, match=f"^beams.csv row 2 mark: .*{told}"):
        read_schedule(write([["mark", "bottom"], [text, "3-25M"]]))


@pytest.mark.parametrize(
    ("text", "on_six_metres"),
    [
        ("L/4", 1500.0),
        ("3L/4", 4500.0),
        ("2 L / 3", 4000.0),
        ("0.1 L", 600.0),
        ("L", 6000.0),
        ("L - 1.5 m", 4500.0),
        ("L/2 + 2 ft", 3609.6),
        ("25 %", 1500.0),
        ("1500 mm", 1500.0),
    ],
)
def test_places_are_lengths_or_shares_of_the_length(text, on_six_metres):
    assert read_position(text).on(6000.0) == pytest.approx(on_six_metres)


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("4L/3", "is beyond the end"),
        ("L + 1 m", "is beyond the end"),
        ("L/0", "is beyond the end"),
        ("0L - 1 m", "is before the start"),
        ("L/4 - 1", "has no unit"),
        ("L - 1,5 m", "has a comma"),
        ("1/4", "is no"),
        ("third", "is no"),
        ("L/4 of B-3", "is no"),
    ],
)
def test_places_that_cannot_be_are_told(text, told):
    with pytest.raises(QuantityError, match=told):
        read_position(text)


FAULTS = [
    ([], "beams.csv: is empty"),
    ([["mark", "botom"], ["B-1", "3-25M"]], "row 1: unknown column 'botom': did you mean bottom?"),
    ([["mark", ""], ["B-1", ""]], "row 1: column without name"),
    ([["bottom"], ["3-25M"]], "row 1: there is no column 'mark'"),
    ([["mark", "mark"], ["B-1", "B-1"]], "row 1: column 'mark' is given twice"),
    ([["mark", "bottom"], ["", "3-25M"]], "beams.csv row 2 mark: is empty"),
    ([["mark", "bottom"], ["B-1,", "3-25M"]], "beams.csv row 2 mark: is empty"),
    ([["mark", "bottom"], ["B-1", ""]], "beams.csv row 2: states nothing"),
    ([["mark", "bottom"], ["B-1", "3-25M", "x"]], "beams.csv row 2: has more cells than"),
    ([["mark", "bottom"], ["B-1", "3-25"]], "beams.csv row 2 bottom: '3-25' can be read in"),
    ([["mark", "bottom"], ["B-1", "3-26M"]], "row 2 bottom: '26M' is no standard bar"),
    ([["mark", "bottom"], ["B-1", "-3-25M"]], "row 2 bottom: '-3-25M' has -3 bars"),
    ([["mark", "stirrups"], ["B-1", "10M @ -250"]], "row 2 stirrups: '10M @ -250' has a spacing"),
    ([["mark", "cover"], ["B-1", "40"]], "beams.csv row 2 cover: '40' has no unit"),
    ([["mark", "cover"], ["B-1", "40 m"]], "row 2 cover: '40 m' is not plausible"),
    ([["mark", "cover"], ["B-1", "40 kN"]], "row 2 cover: '40 kN' is a force"),
    ([["mark", "bar_yield"], ["B-1", "4,00 MPa"]], "row 2 bar_yield: '4,00 MPa' has a comma"),
    ([["mark", "top", "from"], ["B-1", "none", "-1 m"]], "row 2 from: '-1 m' is negative"),
    ([["mark", "top", "to"], ["B-1", "none", "3"]], "row 2 to: '3' has no unit"),
    ([["mark", "bottom"], ["B-1", "3,5-25M"]], "row 2 bottom: '3,5-25M'"),
    ([["mark", "stirrups"], ["B-1", "10M @ 12,5"]], "row 2 stirrups: '10M @ 12,5'"),
    ([["mark", "top", "from"], ["B-1", "none", "1,5 m"]], "row 2 from: '1,5 m' has a comma"),
    ([["mark", "top", "from"], ["B-1", "none", "12,5 %"]], "row 2 from: '12,5 %' has a comma"),
    ([["mark", "from"], ["B-1", "1 m"]], "row 2: states nothing"),
    (
        [["mark", "top", "from", "to"], ["B-1", "none", "3 m", "2 m"]],
        "row 2 to: '2 m' is not beyond from = '3 m'",
    ),
]


@pytest.mark.parametrize(("rows", "told"), FAULTS)
def test_a_fault_is_told_with_file_row_and_column(write, rows, told):
    with pytest.raises(BriefError) as caught:
        read_schedule(write(rows))
    assert told in str(caught.value)
    assert str(caught.value).startswith("beams.csv")
    assert "\n" not in str(caught.value)


def test_files_that_are_no_tables_are_told(tmp_path):
    folder = Path(tmp_path)
    (folder / "beams.csv").write_bytes("mark,bottom\nTräger,3-25M\n".encode("latin-1"))
    with pytest.raises(BriefError, match=r"^beams.csv: not UTF-8 at line 2, column 3"):
        read_schedule(folder / "beams.csv")
    (folder / "open.csv").write_text('mark,bottom\n"B-1,3-25M\n')
    with pytest.raises(BriefError, match=r"^open.csv row 2: not CSV"):
        read_schedule(folder / "open.csv")
    (folder / "beams.xlsx").write_text("mark,bottom\n")
    with pytest.raises(BriefError, match=r"^beams.xlsx: not an XLSX workbook"):
        read_schedule(folder / "beams.xlsx")
    with zipfile.ZipFile(folder / "other.xlsx", "w") as archive:
        archive.writestr("readme.txt", "no workbook")
    with pytest.raises(BriefError, match=r"^other.xlsx: not a readable XLSX workbook"):
        read_schedule(folder / "other.xlsx")
    with pytest.raises(BriefError, match=r"^none.csv: there is no file"):
        read_schedule(folder / "none.csv")


def test_hostile_workbooks_are_refused(tmp_path, write):
    good = write([["mark", "bottom"], ["B-1", "3-25M"]], ".xlsx")
    with zipfile.ZipFile(good) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    entities = Path(tmp_path) / "entities.xlsx"
    with zipfile.ZipFile(entities, "w") as archive:
        for name, content in parts.items():
            archive.writestr(name, content.replace(b"<worksheet", b"<!DOCTYPE x><worksheet", 1))
    with pytest.raises(BriefError, match="declares entities"):
        read_schedule(entities)
    bomb = Path(tmp_path) / "bomb.xlsx"
    with zipfile.ZipFile(bomb, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in parts.items():
            archive.writestr(name, content)
        archive.writestr("xl/media/zeros.bin", bytes(20_000_000))
    with pytest.raises(BriefError, match="too many for a table"):
        read_schedule(bomb)


def test_of_several_sheets_the_one_named_schedule_is_read(tmp_path):
    path = Path(tmp_path) / "beams.xlsx"
    book = openpyxl.Workbook()
    book.active.append(["notes"])
    book.create_sheet("Sheet 2").append(["mark", "bottom"])
    book.save(path)
    with pytest.raises(BriefError, match="has 2 sheets: keep one, or name the one"):
        read_schedule(path)
    schedule = book.create_sheet("Schedule")
    schedule.append(["mark", "bottom"])
    schedule.append(["B-1", "3-25M"])
    book.save(path)
    assert read_schedule(path)[0].bottom == parse_bars("3-25M")


# --- zones on beams -------------------------------------------------------------------------


def beam(key, length=6000.0):
    axis = Axis((0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0), length)
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
        runs=(),
        material="",
        concrete_strength=None,
        concrete_density=None,
        cover=None,
    )


def laid(rows, **reached):
    matches = {}
    for n, row in enumerate(rows, 2):
        keys = reached.get(f"row{n}", ("B-1",))
        matches |= {row.place: keys} | {place: keys for place, _ in parts_of(row)}
    return with_schedule(rows, matches, {"B-1": beam("B-1"), "B-2": beam("B-2")})


def test_rows_become_described_zones(write):
    rows = read_schedule(write([HEADER, *ROWS]))
    beams = laid(rows, row4=("B-1", "B-2"), row2=("B-1",), row3=())
    (one,), (other,) = beams["B-1"].reinforcement, beams["B-2"].reinforcement
    assert one.source == "schedule"
    first, third = one.zones
    assert (first.start, first.end, first.origin) == (None, None, "beams.csv row 2")
    assert (first.bottom, first.side) == (parse_bars("3-25M + 2-20M"), ())
    assert (third.start, third.end, third.no_stirrups) == (3000.0, 6000.0, True)
    assert other.zones == (third,)
    assert other.reasons == ()


def test_a_beam_without_rows_is_left_as_it_is(write):
    rows = read_schedule(write([HEADER, *ROWS]))
    assert laid(rows)["B-2"] == beam("B-2")


@pytest.mark.parametrize(
    ("one", "other", "told"),
    [
        (["", "", "3-25M", ""], ["2 m", "4 m", "3-25M", ""], "both give bottom between 2.00 m and"),
        (["", "", "", "none"], ["", "", "", "10M @ 200"], "both give stirrups between 0 m and"),
        (["", "50 %", "none", ""], ["2.9 m", "", "3-25M", ""], "between 2.90 m and 3.00 m"),
    ],
)
def test_rows_that_contradict_each_other_are_a_reason(write, one, other, told):
    header = ["mark", "from", "to", "bottom", "stirrups"]
    rows = read_schedule(write([header, ["B-1", *one], ["B-1", *other]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert reason.text.startswith("beams.csv row 2 and beams.csv row 3 both give")
    assert told in reason.text
    assert reason.blocking


@pytest.mark.parametrize(
    ("one", "other"),
    [
        (["", "50 %", "3-25M", "", ""], ["3 m", "", "2-25M", "", ""]),
        (["", "", "3-25M", "", ""], ["", "1 m", "", "10M @ 100", ""]),
        (["", "", "3-25M", "", "40 mm"], ["", "1 m", "", "10M @ 100", "40 mm"]),
    ],
)
def test_rows_that_agree_are_no_reason(write, one, other):
    header = ["mark", "from", "to", "bottom", "stirrups", "cover"]
    rows = read_schedule(write([header, ["B-1", *one], ["B-1", *other]]))
    assert laid(rows)["B-1"].reinforcement[0].reasons == ()


def test_rows_of_unequal_cover_are_a_reason(write):
    rows = read_schedule(write([["mark", "cover"], ["B-1", "40 mm"], ["B-1", "30 mm"]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert "both give cover" in reason.text


def test_a_zone_beyond_the_beam_is_a_reason(write):
    header = ["mark", "from", "to", "bottom"]
    rows = read_schedule(write([header, ["B-1", "1 m", "8 m", "3-25M"]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert reason.text == "beams.csv row 2: reaches to 8.00 m, beyond the beam's end"
    rows = read_schedule(write([header, ["B-1", "50 %", "2 m", "3-25M"]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert reason.text == "beams.csv row 2: the zone has no length on this beam"
    rows = read_schedule(write([header, ["B-1", "1 m", "6000.8 mm", "3-25M"]]))
    (described,) = laid(rows)["B-1"].reinforcement
    assert described.reasons == ()
    assert described.zones[0].end == 6000.0


def test_a_schedule_on_a_beam_of_unread_body_keeps_its_rows(write):
    rows = read_schedule(write([HEADER, *ROWS]))
    unread = replace(beam("B-1"), axis=None)
    places = {row.place for row in rows} | {place for row in rows for place, _ in parts_of(row)}
    laid_on = with_schedule(rows, dict.fromkeys(places, ("B-1",)), {"B-1": unread})
    assert len(laid_on["B-1"].reinforcement[0].zones) == 3


def test_marks_that_no_model_knows_are_remarks(write):
    rows = read_schedule(write([HEADER, ROWS[2]]))
    found = {"beams.csv row 2.beams[1]": ("B-31",), "beams.csv row 2.beams[2]": ()}
    assert schedule_remarks(rows, [found]) == (
        Remark(
            None,
            "schedule",
            "beams.csv row 2: no beam is marked B-4, the row is not used",
            "doubt",
        ),
    )
    elsewhere = {"beams.csv row 2.beams[1]": (), "beams.csv row 2.beams[2]": ("B-4",)}
    assert schedule_remarks(rows, [found, elsewhere]) == ()


# --- rows for a beam itself and rows for many -----------------------------------------------------


def fields(zones, *names):
    return [(z.start, z.end, *(getattr(z, name) for name in names)) for z in zones]


def test_a_row_for_the_beam_itself_goes_before_a_wildcard_field_by_field(write):
    header = ["mark", "from", "to", "top", "bottom", "stirrups", "cover"]
    rows = read_schedule(
        write(
            [
                header,
                ["B-*", "", "", "2-20M", "3-25M", "2 legs 10M @ 250", "40 mm"],
                ["B-1", "", "2 m", "", "4-25M", "", "50 mm"],
            ]
        )
    )
    beams = laid(rows, row2=("B-1", "B-2"))
    (one,), (other,) = beams["B-1"].reinforcement, beams["B-2"].reinforcement
    assert (one.reasons, other.reasons, other.remarks) == ((), (), ())
    assert fields(one.zones, "bottom", "top", "cover") == [
        (0.0, 2000.0, parse_bars("4-25M"), None, 50.0),
        (0.0, 2000.0, None, parse_bars("2-20M"), None),
        (2000.0, 6000.0, parse_bars("3-25M"), parse_bars("2-20M"), 40.0),
    ]
    assert all(z.stirrups for z in one.zones if z.origin == "beams.csv row 2")
    assert other.zones[0].bottom == parse_bars("3-25M")
    (remark,) = one.remarks
    assert remark.kind == "note"
    assert remark.text == (
        "beams.csv row 3 names the beam and replaces bottom, cover of beams.csv row 2"
        " between 0 m and 2.00 m"
    )


@pytest.mark.parametrize("pattern", ["B-*", "B-1..B-9"])
def test_none_for_the_beam_itself_takes_the_stirrups_of_a_pattern_away(write, pattern):
    rows = [[pattern, "3-25M", "10M @ 250"], ["B-1", "", "none"]]
    (described,) = laid(read_schedule(write([["mark", "bottom", "stirrups"], *rows])))[
        "B-1"
    ].reinforcement
    assert [z.stirrups for z in described.zones] == [None, None]
    assert [z.no_stirrups for z in described.zones] == [True, False]


def test_two_patterns_that_reach_one_beam_contradict_each_other(write):
    rows = read_schedule(write([["mark", "bottom"], ["B-*", "3-25M"], ["B-1..B-9", "4-25M"]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert "both give bottom" in reason.text


def test_steel_keeps_the_yield_of_the_steel_that_it_replaces(write):
    header = ["mark", "top", "bottom", "bar_yield"]
    rows = [["B-*", "2-20M", "3-25M", "300 MPa"], ["B-1", "", "4-25M", ""]]
    (described,) = laid(read_schedule(write([header, *rows])))["B-1"].reinforcement
    assert {z.bar_yield for z in described.zones} == {300.0}
    rows = [["B-*", "2-20M", "", "500 MPa"], ["B-1", "", "4-25M", ""]]
    (described,) = laid(read_schedule(write([header, *rows])))["B-1"].reinforcement
    assert [z.bar_yield for z in described.zones] == [None, 500.0]


def test_equal_rows_for_many_and_for_one_are_no_remark(write):
    rows = read_schedule(write([["mark", "bottom"], ["B-*", "3-25M"], ["B-1", "3-25M"]]))
    (described,) = laid(rows)["B-1"].reinforcement
    assert (described.remarks, described.reasons) == ((), ())
    assert [z.bottom for z in described.zones] == [parse_bars("3-25M")]


@pytest.mark.parametrize(
    ("start", "end", "sound"),
    [
        ("L - 1 m", "L - 2 m", False),
        ("L/2 + 1 m", "L/2", False),
        ("50 %", "0 m", False),
        ("L/3", "L/4", False),
        ("1 m", "1 m", False),
        ("1 m", "L - 1 m", True),
        ("L - 2 m", "L - 1 m", True),
        ("50 %", "2 m", True),
        ("L/4", "3L/4", True),
    ],
)
def test_a_zone_that_has_no_length_on_any_beam_is_told(write, start, end, sound):
    path = write([["mark", "from", "to", "bottom"], ["B-1", start, end, "3-25M"]])
    if sound:
        assert read_schedule(path)[0].end.text == end
        return
    with pytest.raises(BriefError, match=r"row 2 to: .* is not beyond from"):
        read_schedule(path)


def test_a_zone_before_the_start_is_a_reason(write):
    rows = read_schedule(write([["mark", "from", "bottom"], ["B-1", "L - 8 m", "3-25M"]]))
    (reason,) = laid(rows)["B-1"].reinforcement[0].reasons
    assert reason.text == "beams.csv row 2: begins 2.00 m before the beam's start"


PLACES = st.integers(min_value=0, max_value=12).map(lambda place: 500.0 * place)
BARS = st.sampled_from([None, None, (), parse_bars("3-25M"), parse_bars("2-20M")])


@st.composite
def stretches(draw, origin):
    """Zones that do not overlap, so that no two of them contradict each other."""
    cuts = sorted(set(draw(st.lists(PLACES, min_size=2, max_size=5))))
    return [
        DescribedZone(
            start=start,
            end=end,
            top=draw(BARS),
            bottom=draw(BARS),
            no_stirrups=draw(st.booleans()),
            cover=draw(st.sampled_from([None, 30.0, 50.0])),
            origin=f"{origin} {start:.0f}",
        )
        for start, end in pairwise(cuts)
    ]


@given(stretches("own"), stretches("wide"))
def test_at_every_place_a_field_is_that_of_the_beams_own_row_or_else_of_the_others(own, wide):
    merged = by_rank(beam("B-1"), own, wide).zones
    for x in range(250, 6000, 500):
        for name in ("top", "bottom", "no_stirrups", "cover"):
            said = [[getattr(z, name) for z in zones if z.start < x < z.end and speaks(z, name)]
                    for zones in (own, wide, merged)]  # fmt: skip
            fields = [[value for value in each if value not in (None, False)] for each in said]
            assert fields[2] == (fields[0] or fields[1]), (x, name)
