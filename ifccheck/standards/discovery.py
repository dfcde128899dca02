"""Find the standards that are installed, our own among them, by their entry points."""

from __future__ import annotations

from difflib import get_close_matches
from importlib.metadata import EntryPoint, entry_points

from ifccheck.errors import BriefError
from ifccheck.standards.contract import Standard

GROUP = "ifccheck.standards"


def find_standard(name: str) -> Standard:
    """Return the standard that goes by an id.

    Raises
    ------
    BriefError
        Where no installed standard has this id, with those that come near; or where it cannot
        be loaded, naming the distribution that it comes from.
    """
    known = _entries()
    found = [entry for entry in known if entry.name == name]
    if not found:
        raise BriefError(f'unknown standard "{name}": {_advice(name, known)}')
    if len(found) > 1:
        sources = " and ".join(_distribution(entry) for entry in found)
        raise BriefError(f'standard "{name}" is given by {sources}: uninstall one of them')
    standard = _load(found[0])
    if isinstance(standard, str):
        raise BriefError(f'standard "{name}": {standard}')
    return standard


def all_standards() -> tuple[tuple[str, Standard | str], ...]:
    """Return every installed standard by id, with what is wrong where one does not load."""
    return tuple((entry.name, _load(entry)) for entry in _entries())


def _entries() -> list[EntryPoint]:
    """Entry points by name; the same one twice, as an editable install shows it, is one."""
    distinct = {(e.name, e.value, _distribution(e)): e for e in entry_points(group=GROUP)}
    return [distinct[key] for key in sorted(distinct)]


def _load(entry: EntryPoint) -> Standard | str:
    """The standard, or one line that tells why it cannot be had.

    Whatever a foreign package raises while it is imported must not disturb the others.
    """
    try:
        standard = entry.load()
    except (Exception, SystemExit) as error:
        detail = " ".join(str(error).split()) or "no message"
        return f"{_distribution(entry)} cannot be loaded: {type(error).__name__}: {detail}"
    if not isinstance(standard, Standard):
        return f"{_distribution(entry)}: {entry.value} is not a Standard"
    if standard.id != entry.name:
        return f'{_distribution(entry)}: {entry.value} calls itself "{standard.id}"'
    return standard


def _distribution(entry: EntryPoint) -> str:
    return f"{entry.dist.name} {entry.dist.version}" if entry.dist else entry.value


def _advice(name: str, known: list[EntryPoint]) -> str:
    names = [entry.name for entry in known]
    if near := get_close_matches(name.lower(), names, n=3, cutoff=0.4):
        return f"did you mean {' or '.join(near)}?"
    return f"installed are {', '.join(names)}" if names else "none is installed"
