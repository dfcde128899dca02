"""Cells of a CSV or XLSX table as plain text; nothing in them is ever evaluated."""

from __future__ import annotations

import csv
import io
import zipfile
from pathlib import Path
from typing import Any

from ifccheck.brief.files import read_bytes, read_text
from ifccheck.errors import BriefError
from ifccheck.units import clipped

GREATEST_ROWS, GREATEST_COLUMNS = 100_000, 200
GREATEST_UNPACKED = 512 * 1024 * 1024
GREATEST_EXPANSION = 200
_SAVE = "save the table again as .xlsx or .csv"

Rows = list[tuple[int, list[str]]]


def read_cells(path: Path, sheet: str = "schedule") -> Rows:
    """Return the rows that hold anything, each with its number in the file, counted from 1.

    Of a workbook with several sheets the one called ``sheet`` is read.
    """
    cells = _xlsx(path, sheet) if path.suffix.lower() == ".xlsx" else _csv(path)
    rows = [(number, row) for number, row in enumerate(cells, 1) if any(c.strip() for c in row)]
    if len(rows) > GREATEST_ROWS:
        raise BriefError(f"{path.name}: has more than {GREATEST_ROWS} rows")
    return rows


def _csv(path: Path) -> list[list[str]]:
    text = read_text(path)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=_separator(text), strict=True)
    rows: list[list[str]] = []
    try:
        rows.extend(reader)
    except csv.Error as error:
        raise BriefError(f"{path.name} row {len(rows) + 1}: not CSV: {error}") from None
    return rows


def _separator(text: str) -> str:
    """The separator that the heading uses most: a comma, a semicolon or a tab."""
    heading = next((line for line in text.splitlines() if line.strip()), "")
    return max(",;\t", key=heading.count)


def _xlsx(path: Path, sheet_name: str) -> list[list[str]]:
    content = read_bytes(path, path.name)
    _check_archive(content, path.name)
    import openpyxl

    try:
        book = openpyxl.load_workbook(io.BytesIO(content), read_only=True, data_only=False)
    except Exception as error:  # openpyxl raises whatever its parts raise
        raise BriefError(
            f"{path.name}: not a readable XLSX workbook ({_oneline(error)}); {_SAVE}"
        ) from None
    sheet = _sheet(book, path.name, sheet_name)
    try:
        return [
            [_text(cell, path.name) for cell in row[:GREATEST_COLUMNS]]
            for row in sheet.iter_rows(max_row=GREATEST_ROWS + 1)
        ]
    except BriefError:
        raise
    except Exception as error:
        raise BriefError(
            f"{path.name}: not a readable XLSX sheet ({_oneline(error)}); {_SAVE}"
        ) from None


def _oneline(error: Exception) -> str:
    return " ".join(str(error).split()) or type(error).__name__


def _sheet(book: Any, file_name: str, name: str) -> Any:
    sheets = book.worksheets
    if len(sheets) == 1:
        return sheets[0]
    named = [sheet for sheet in sheets if sheet.title.strip().lower() == name]
    if len(named) != 1:
        raise BriefError(
            f"{file_name}: has {len(sheets)} sheets: keep one, or name the one to read '{name}'"
        )
    return named[0]


def _text(cell: Any, file_name: str) -> str:
    """What a cell shows, where it is text or a plain number; anything else is refused."""
    value = cell.value
    if value is None or (isinstance(value, str) and cell.data_type not in _NO_TEXT):
        return value or ""
    number = isinstance(value, int | float) and not isinstance(value, bool)
    if number and "%" in cell.number_format:
        return f"{round(100.0 * value, 9):.12g} %"
    if number:
        return f"{value:.12g}" if isinstance(value, float) else str(value)
    if isinstance(value, bool):
        return "yes" if value else "no"
    what = _NO_TEXT.get(cell.data_type, "a date or time")
    raise BriefError(
        f"{file_name} row {cell.row} column {cell.column_letter}: holds {what}"
        f" ({clipped(str(value))}): make the cell text and write there what is meant"
    )


_NO_TEXT = {"f": "a formula", "e": "an error"}


def _check_archive(content: bytes, file_name: str) -> None:
    """Refuse what is no zip, unpacks beyond bounds, or declares entities in its XML."""
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            unpacked = sum(info.file_size for info in archive.infolist())
            if unpacked > GREATEST_UNPACKED or unpacked > GREATEST_EXPANSION * len(content):
                raise BriefError(f"{file_name}: unpacks to {unpacked} bytes, too many for a table")
            for info in archive.infolist():
                if info.filename.endswith((".xml", ".rels")):
                    _check_entities(archive.read(info), file_name)
    except (zipfile.BadZipFile, NotImplementedError, RuntimeError, OSError) as error:
        raise BriefError(
            f"{file_name}: not an XLSX workbook ({_oneline(error)}); {_SAVE}"
        ) from None


def _check_entities(xml: bytes, file_name: str) -> None:
    if b"<!DOCTYPE" in xml or b"<!ENTITY" in xml:
        raise BriefError(f"{file_name}: declares entities in its XML: refused")
