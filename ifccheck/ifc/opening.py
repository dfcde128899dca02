"""Opens a model and makes sure that all of it was read."""

from __future__ import annotations

import hashlib
import os
import re
import tempfile
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import ifcopenshell
import numpy as np

from ifccheck.beam import Remark
from ifccheck.errors import ModelError
from ifccheck.ifc.archive import unpack
from ifccheck.ifc.deferral import may_be_deferred
from ifccheck.ifc.earlier import InUseError, may_hold_results, result_instances, without_instances
from ifccheck.ifc.lexer import BYTE_ORDER_MARK, EXPORT_AGAIN, Scan, StepError, scan, shown
from ifccheck.ifc.marks import without_intact_block
from ifccheck.ifc.step_text import escaped

SUPPORTED_SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3_ADD2")
_OUTSIDE_ASCII = re.compile(rb"[\x80-\xff]+")
_LOST = re.compile(r"Instance reference (#-?\d+) used by instance #(\d+) .*not found")
"""What ifcopenshell notes of a reference that leads nowhere when it parses it; it leaves it out."""
_DELETES_OPEN_FILES = os.name != "nt"
"""ifcopenshell holds a file open as long as it may have to parse an instance of it."""
_STAGE = "opening"


@dataclass(frozen=True)
class OpenedModel:
    """A model that was read whole, and its bytes without any results of ours."""

    path: Path
    name: str
    """The file's stem."""
    file_name: str
    source: bytes
    """The bytes of the .ifc without any results of ours."""
    file: Any
    """The ifcopenshell file of these bytes."""
    schema: str
    """IFC2X3, IFC4 or IFC4X3."""
    sha256: str
    """Hash of ``source``."""
    zipped_member: str | None
    """Name of the model in its archive, None for a plain .ifc."""
    scan: Scan
    """What the lexer found in ``source``."""
    remarks: tuple[Remark, ...]


@dataclass(frozen=True)
class _Raw:
    """What lies on the disk."""

    data: bytes
    member: str | None
    remarks: tuple[Remark, ...]


@dataclass(frozen=True)
class _Sound:
    """Bytes, what the lexer found in them, and the same as ifcopenshell read it."""

    data: bytes
    scan: Scan
    file: Any
    remarks: tuple[Remark, ...] = ()


def open_model(path: Path) -> OpenedModel:
    """Open a .ifc or .ifczip; raise ModelError where it cannot be read surely and whole."""
    raw = _read(path)
    sound = _parse_source(path, raw)
    remarks = raw.remarks + sound.remarks + _remarks(sound)
    return OpenedModel(
        path=path,
        name=path.stem,
        file_name=path.name,
        source=sound.data,
        file=sound.file,
        schema=str(sound.file.schema),
        sha256=hashlib.sha256(sound.data).hexdigest(),
        zipped_member=raw.member,
        scan=sound.scan,
        remarks=remarks,
    )


def _read(path: Path) -> _Raw:
    suffix = path.suffix.lower()
    if path.is_dir():
        raise ModelError(f"{path}: is a folder; give the .ifc or .ifczip file in it")
    if suffix in (".ifcxml", ".xml", ".ifcjson", ".json"):
        raise ModelError(f"{path}: ifcXML and ifcJSON are not read; export the model as .ifc")
    if suffix not in (".ifc", ".ifczip"):
        raise ModelError(f"{path}: is no .ifc or .ifczip file; export the model as .ifc")
    try:
        if suffix == ".ifc":
            return _Raw(path.read_bytes(), None, ())
        unpacked = unpack(path)
    except FileNotFoundError as error:
        raise ModelError(f"{path}: there is no such file; check the path") from error
    except OSError as error:
        raise ModelError(
            f"{path}: cannot be read ({error.strerror or error}); check its permissions"
        ) from error
    return _Raw(unpacked.data, unpacked.member, _left_behind(unpacked.others))


def _left_behind(others: tuple[str, ...]) -> tuple[Remark, ...]:
    if not others:
        return ()
    text = f"the archive also holds {', '.join(others)}: not carried over into the rated archive"
    return (Remark(None, _STAGE, text),)


def _parse_source(path: Path, raw: _Raw) -> _Sound:
    """Read the model as it was before any earlier results of ours."""
    found = _scan(path, raw.data)
    source = without_intact_block(raw.data, found)
    if source is not None:
        return _parse(path, source, _scan(path, source))
    sound = _parse(path, raw.data, found, on_disk=raw.member is None)
    return _without_earlier(path, sound) if may_hold_results(raw.data) else sound


def _scan(path: Path, data: bytes) -> Scan:
    try:
        found = scan(data)
    except StepError as error:
        raise ModelError(f"{path}: {error}") from error
    if len(found.schemas) != 1 or found.schemas[0].upper() not in SUPPORTED_SCHEMAS:
        schema = " and ".join(found.schemas) or "not stated"
        raise ModelError(
            f"{path}: its schema is {schema}; export the model as {', '.join(SUPPORTED_SCHEMAS)}"
        )
    return found


def _parse(path: Path, data: bytes, found: Scan, on_disk: bool = False) -> _Sound:
    """Read bytes with ifcopenshell; ``on_disk`` where the file at the path holds just these."""
    readable = _readable(data)
    deferred = readable is data and may_be_deferred(data, found)
    if on_disk and readable is data:
        file = _open(path, path, deferred)
    else:
        file = _open_copy(path, readable, deferred and _DELETES_OPEN_FILES)
    _require_all(path, data, found, file)
    if lost := _LOST.search(ifcopenshell.get_log()):
        raise ModelError(
            f"{path}: #{lost[2]} refers to {lost[1]}, which is not in it; {EXPORT_AGAIN}"
        )
    return _Sound(data, found, file)


def _open_copy(path: Path, readable: bytes, deferred: bool) -> Any:
    try:
        with tempfile.TemporaryDirectory(prefix="ifccheck-") as folder:
            copy = Path(folder) / "model.ifc"
            copy.write_bytes(readable)
            return _open(path, copy, deferred)
    except OSError as error:
        raise ModelError(
            f"{path}: cannot be copied to the temporary folder ({error.strerror or error}); "
            "free some space there"
        ) from error


def _readable(data: bytes) -> bytes:
    """Return bytes that ifcopenshell reads rightly: no mark in front, no letters outside ASCII.

    It leaves such letters out, where they are not escaped, without a word.
    """
    if data.isascii():
        return data
    data = data.removeprefix(BYTE_ORDER_MARK)
    try:
        data.decode("utf-8")
        encoding = "utf-8"
    except UnicodeDecodeError:
        encoding = "latin-1"
    return _OUTSIDE_ASCII.sub(lambda match: escaped(match[0].decode(encoding)).encode(), data)


def _open(path: Path, place: Path, deferred: bool) -> Any:
    """Open a file; ``deferred`` where its instances may be parsed when each is asked for."""
    try:
        ifcopenshell.get_log()  # what was said of earlier files
        return ifcopenshell.open(str(place), lazy=deferred)
    except (ifcopenshell.Error, OSError, RuntimeError) as error:
        cause = str(error).removesuffix(", check logs")
        raise ModelError(f"{path}: cannot be read ({cause}); {EXPORT_AGAIN}") from error


def _require_all(path: Path, data: bytes, found: Scan, file: Any) -> None:
    """Require that ifcopenshell read every instance that stands in the file."""
    read = file.entity_names()
    if len(read) == len(found.ids):
        return
    missing = np.flatnonzero(~np.isin(found.ids, np.fromiter(read, np.int64, len(read))))
    example = ""
    for first in missing[:1]:
        example = f" (the first is {shown(data[found.starts[first] : found.stops[first]])})"
    raise ModelError(
        f"{path}: holds {len(found.ids)} instances but only {len(read)} can be read{example}; "
        f"{EXPORT_AGAIN}"
    )


def _without_earlier(path: Path, sound: _Sound) -> _Sound:
    """Take away results of ours that another program saved with the model."""
    try:
        numbers, foreign = result_instances(sound.file)
    except InUseError as error:
        raise ModelError(
            f"{path}: earlier results cannot be taken away ({error}); delete the BeamRating_ sets "
            "in the program that saved the model, or rate the model without results"
        ) from error
    remarks = _foreign_remarks(foreign)
    if not numbers:
        return _Sound(sound.data, sound.scan, sound.file, remarks)
    data = without_instances(sound.data, sound.scan, numbers)
    clean = _parse(path, data, _scan(path, data))
    return _Sound(clean.data, clean.scan, clean.file, remarks)


def _foreign_remarks(foreign: dict[str, list[int]]) -> tuple[Remark, ...]:
    return tuple(
        Remark(
            None,
            _STAGE,
            f"{len(numbers)} sets named {name} (the first is #{min(numbers)}) were not written by "
            "ifccheck for their beams: they stay beside the new results",
            "doubt",
        )
        for name, numbers in sorted(foreign.items())
    )


def _remarks(sound: _Sound) -> tuple[Remark, ...]:
    remarks = []
    if "SIGNATURE" in sound.scan.names:
        text = "the digital signature is kept but no longer verifies: lines were added"
        remarks.append(Remark(None, _STAGE, text))
    if not sound.data.removeprefix(BYTE_ORDER_MARK).isascii():
        text = "texts hold letters that are not escaped as STEP asks; they are read nevertheless"
        remarks.append(Remark(None, _STAGE, text))
    return tuple(remarks)
