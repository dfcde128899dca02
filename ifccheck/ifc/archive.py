"""Reads and writes .ifczip archives: one model, bounded before it is unpacked."""

from __future__ import annotations

import io
import zipfile
import zlib
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from ifccheck.errors import ModelError

LARGEST_MODEL = 4 * 2**30
LARGEST_RATIO = 200
_FIXED_DATE = (1980, 1, 1, 0, 0, 0)


@dataclass(frozen=True, slots=True)
class Unpacked:
    """The model of an archive, and the names of what else lies in it."""

    member: str
    data: bytes
    others: tuple[str, ...]


def unpack(path: Path) -> Unpacked:
    """Read the one model of an archive."""
    try:
        with zipfile.ZipFile(path) as archive:
            visible = [info for info in archive.infolist() if not _is_hidden(info)]
            member = _only_model(path, visible)
            _require_bounded(path, member)
            others = tuple(info.filename for info in visible if info is not member)
            return Unpacked(member.filename, archive.read(member), others)
    except (zipfile.BadZipFile, zlib.error, EOFError, NotImplementedError, RuntimeError) as error:
        raise ModelError(
            f"{path}: cannot be unpacked ({error}); make the archive again, without a password"
        ) from error


def pack(member: str, data: bytes) -> bytes:
    """Return an archive of one model; the same bytes for the same model."""
    info = zipfile.ZipInfo(member, _FIXED_DATE)
    info.compress_type = zipfile.ZIP_DEFLATED
    info.create_system = 3
    info.external_attr = 0o644 << 16
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w") as archive:
        archive.writestr(info, data)
    return buffer.getvalue()


def _is_hidden(info: zipfile.ZipInfo) -> bool:
    parts = PurePosixPath(info.filename).parts
    hidden = any(part.startswith(".") and part not in (".", "..") for part in parts)
    return info.is_dir() or hidden or "__MACOSX" in parts


def _only_model(path: Path, visible: list[zipfile.ZipInfo]) -> zipfile.ZipInfo:
    models = [info for info in visible if info.filename.lower().endswith(".ifc")]
    if len(models) != 1:
        found = "no .ifc file" if not models else f"{len(models)} .ifc files"
        raise ModelError(f"{path}: holds {found}; an .ifczip must hold exactly one")
    name = models[0].filename
    if name.startswith("/") or ".." in PurePosixPath(name).parts or "\\" in name or ":" in name:
        raise ModelError(
            f"{path}: the model in it has a path that leaves the archive; pack it anew"
        )
    return models[0]


def _require_bounded(path: Path, member: zipfile.ZipInfo) -> None:
    if member.file_size > LARGEST_MODEL:
        raise ModelError(f"{path}: unpacks to more than 4 GiB; split the model or give it as .ifc")
    if member.file_size > LARGEST_RATIO * max(member.compress_size, 1):
        raise ModelError(
            f"{path}: unpacks to more than {LARGEST_RATIO} times its size; give the model as .ifc"
        )
