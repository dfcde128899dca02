"""Read the engineer's brief from its TOML file."""

from __future__ import annotations

import hashlib
import re
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

from ifccheck.brief.faults import FaultError, Source, first_fault
from ifccheck.brief.files import decoded, read_bytes
from ifccheck.brief.model import Brief
from ifccheck.brief.places import lines_of
from ifccheck.errors import BriefError


def load_brief(path: Path) -> Brief:
    """Read and validate a brief; raise BriefError in one line for whatever is wrong with it."""
    from pydantic import ValidationError

    from ifccheck.brief.convert import to_brief
    from ifccheck.brief.load_table import read_load_table
    from ifccheck.brief.schema import BriefTable, known_keys
    from ifccheck.brief.train_entries import check_rows

    content = read_bytes(path, path.name)
    text = decoded(content, path.name).replace("\r\n", "\n")
    data = _parsed(text, path.name)
    source = Source(path.name, lines_of(text))
    try:
        table = BriefTable.model_validate(data)
    except ValidationError as error:
        raise first_fault(error.errors(), known_keys, source) from None
    try:
        brief = to_brief(table, path, source)
    except FaultError as fault:
        raise source.error(fault.path, fault.text) from None
    rows = tuple(row for table in brief.load_tables for row in read_load_table(table, brief.cases))
    check_rows(brief, rows)
    return _with_digest(replace(brief, loads=(*brief.loads, *rows)), content)


def _parsed(text: str, file_name: str) -> dict[str, Any]:
    try:
        return tomllib.loads(text)
    except RecursionError:
        raise BriefError(f"{file_name}: lists are nested too deeply") from None
    except ValueError as error:  # TOMLDecodeError, or a number beyond all bounds
        said = " ".join(str(error).split())
        found = re.fullmatch(r"(.*?) \(at (.*)\)", said)
        reason, at = (found[1], f" at {found[2]}") if found else (said, "")
        raise BriefError(f"{file_name}: not TOML{at}: {reason}") from None


def _with_digest(brief: Brief, content: bytes) -> Brief:
    digest = hashlib.sha256(content)
    if brief.schedule is not None:
        digest.update(read_bytes(brief.schedule, f"{brief.file_name}: reinforcement.schedule"))
    for table in brief.load_tables:
        digest.update(read_bytes(table.path, table.name))
    return replace(brief, sha256=digest.hexdigest())
