"""How the ends of every beam stand, by the brief's entries and its default."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import lru_cache
from typing import Literal

from ifccheck.beam import Beam, Contact, EndKind, Reason, Remark, Support, SupportKind
from ifccheck.brief.merging import Matches, Said, merge
from ifccheck.brief.model import Brief, SupportEntry
from ifccheck.errors import BriefError
from ifccheck.units import clipped, show

End = Literal["start", "end"]
Supports = tuple[Support, Support]
_BEARINGS: Mapping[End, str] = {"start": "start_bearing", "end": "end_bearing"}

STANDING_PAIRS = frozenset(
    {
        ("pinned", "pinned"),
        ("pinned", "fixed"),
        ("fixed", "pinned"),
        ("fixed", "fixed"),
        ("fixed", "free"),
        ("free", "fixed"),
    }
)
"""Kinds of the start and the end with which a single beam can stand."""

MOST_BEARING = 0.5
"""Part of a beam's length that its bearings may cover together."""


def cannot_stand(start: EndKind, end: EndKind) -> str | None:
    """Say why a single beam with such ends falls down; None where it stands."""
    if (start, end) in STANDING_PAIRS:
        return None
    return f"a beam with a {start} start and a {end} end cannot stand"


def resolve_supports(
    brief: Brief,
    matches: Matches,
    beams: Mapping[str, Beam],
    contacts: Mapping[str, Sequence[Contact]],
) -> tuple[dict[str, Supports | Reason], tuple[Remark, ...]]:
    """Return the supports of every beam, or why they are unknown, and the remarks.

    The brief's default holds at an end that sits on another member, or meets its face, where
    nothing speaks against that member. Any other end needs its own entry. What touches the beam
    from below between its ends makes it no single span, whatever is said of the ends, until an
    entry says by name that it does not hold the beam. Raises BriefError for a beam that cannot
    stand, and for such a name that touches nothing.
    """
    ignored = ignored_contacts(brief, matches, contacts)
    stated, overruled = merge(brief.supports, matches, _say)
    supports: dict[str, Supports | Reason] = {}
    remarks: list[Remark] = []
    for key, beam in beams.items():
        said, touching = stated.get(key, {}), contacts.get(key, ())
        if key in ignored:
            touching = [contact for contact in touching if contact not in ignored[key]]
        supports[key] = _supports(brief, beam, said, touching)
        remarks += (*overruled.get(key, ()), *_remarks(key, supports[key], said))
    return supports, tuple(remarks)


def stated_ends(brief: Brief, matches: Matches) -> dict[str, dict[End, SupportKind]]:
    """How entries of the brief say that ends stand, by the key of the beam."""
    stated, _ = merge(brief.supports, matches, _say)
    ends: tuple[End, End] = ("start", "end")
    return {
        key: {end: said[end].value for end in ends if end in said} for key, said in stated.items()
    }


def stated_bearings(brief: Brief, matches: Matches) -> dict[tuple[str, str], float]:
    """Width of the bearing that entries of the brief give an end, by the key of the beam."""
    stated, _ = merge(brief.supports, matches, _say)
    return {
        (key, end): said[name].value
        for key, said in stated.items()
        for end, name in _BEARINGS.items()
        if name in said
    }


def overruled_supports(brief: Brief, matches: Matches) -> tuple[Remark, ...]:
    """Tell where a later entry of ``[[supports]]`` overrules another."""
    _, overruled = merge(brief.supports, matches, _say)
    return tuple(remark for remarks in overruled.values() for remark in remarks)


def ignored_contacts(
    brief: Brief, matches: Matches, contacts: Mapping[str, Sequence[Contact]]
) -> dict[str, tuple[Contact, ...]]:
    """Return the contacts under each beam, between its ends, that the brief says do not hold it.

    Raises BriefError for a name that touches none of the beams which its entry reaches.
    """
    entries = [entry for entry in brief.supports if entry.ignore and matches[entry.place]]
    for entry in entries:
        below = [c for key in matches[entry.place] for c in between_below(contacts.get(key, ()))]
        for mark in entry.ignore or ():
            if not entry.optional and not any(contact.goes_by(mark) for contact in below):
                raise BriefError(
                    f"{brief.where(entry, 'ignore')}: {clipped(mark, 120)} touches no beam of"
                    " this entry from below between its ends: correct it, or write optional = true"
                )
    if not entries:
        return {}
    stated, _ = merge(entries, matches, _say)
    found = {
        key: tuple(
            contact
            for contact in between_below(contacts.get(key, ()))
            if any(contact.goes_by(mark) for mark in said["ignore"].value)
        )
        for key, said in stated.items()
    }
    return {key: each for key, each in found.items() if each}


def between_below(contacts: Sequence[Contact]) -> list[Contact]:
    """Return what touches a beam from below between its ends, near enough to hold it."""
    return [c for c in contacts if c.place == "between" and c.side == "below" and c.bears]


def told_ignored(contacts: Sequence[Contact]) -> tuple[str, ...]:
    """Return the statement on each contact that does not hold a beam, for people."""
    return tuple(
        f"ignore: {contact.other}, under it at {show(contact.start, 'length')}, does not hold it"
        for contact in contacts
    )


def _say(entry: SupportEntry) -> dict[str, Said]:
    said = {
        end: Said(kind, kind, entry.place)
        for end, kind in (("start", entry.start), ("end", entry.end))
        if kind is not None
    }
    if entry.ignore is not None:
        said["ignore"] = Said(entry.ignore, ", ".join(entry.ignore), entry.place)
    for end, width in zip(("start", "end"), entry.bearing or (), strict=False):
        said[f"{end}_bearing"] = Said(width, show(width, "dimension"), entry.place)
    return said


def _supports(
    brief: Brief, beam: Beam, said: Mapping[str, Said], contacts: Sequence[Contact]
) -> Supports | Reason:
    if below := between_below(contacts):
        return _touched_between(below[0])
    start = _end(brief, "start", said, contacts)
    end = _end(brief, "end", said, contacts)
    if isinstance(start, Reason):
        return start
    if isinstance(end, Reason):
        return end
    _check(brief, beam, said, start, end)
    return start, end


def _check(
    brief: Brief, beam: Beam, said: Mapping[str, Said], start: Support, end: Support
) -> None:
    """Raise BriefError where the beam cannot stand, or its bearings swallow it."""
    if reason := cannot_stand(start.kind, end.kind):
        place = next(said[name].place for name in ("start", "end") if name in said)
        raise BriefError(f"{_told_at(brief, place)}: beam {beam.mark}: {reason}")
    bearings = start.bearing + end.bearing
    if beam.axis is not None and bearings > MOST_BEARING * beam.length:
        place = next(said[f"{name}_bearing"].place for name in ("start", "end"))
        raise BriefError(
            f"{_told_at(brief, place)}: beam {beam.mark}: bearings of {show(bearings, 'dimension')}"
            f" leave too little of its length of {show(beam.length, 'dimension')}"
        )


def _touched_between(contact: Contact) -> Reason:
    return Reason(
        f"supports unknown: {contact.other} touches it from below between its ends, at"
        f" {show(contact.start, 'length')}; if it does not hold the beam, write ignore ="
        f' ["{contact.other_name}"] under [[supports]]'
    )


def _told_at(brief: Brief, place: str) -> str:
    return next(brief.where(entry) for entry in brief.supports if entry.place == place)


def _end(
    brief: Brief, end: End, said: Mapping[str, Said], contacts: Sequence[Contact]
) -> Support | Reason:
    width = said.get(_BEARINGS[end])
    bearing = width.value if width else 0.0
    if end in said:
        kind, source = said[end].value, f"brief, {said[end].place}"
        return Support(kind, 0.0 if kind == "free" else bearing, source)
    if reason := _nothing_holds(end, contacts):
        return reason
    if brief.defaults.supports is None:
        return Reason(
            f"supports unknown: neither [[supports]] nor defaults.supports speaks of its {end}"
        )
    return _by_default(brief.defaults.supports[0 if end == "start" else 1], bearing)


@lru_cache(maxsize=256)
def _by_default(kind: SupportKind, bearing: float) -> Support:
    return Support(kind, bearing, DEFAULT)


def _nothing_holds(end: End, contacts: Sequence[Contact]) -> Reason | None:
    """Why none of what touches an end can be counted on to hold it; None where one can."""
    seats = [c for c in contacts if c.place == end and c.bears and c.side in ("below", "end")]
    if any(not contact.doubt for contact in seats):
        return None
    unsure = "; ".join(sorted({f"{contact.other}: {contact.doubt}" for contact in seats}))
    found = f"only what may not carry it ({unsure})" if unsure else "no member that could carry it"
    return Reason(
        f"supports unknown: its {end} touches {found}, and no entry of [[supports]] speaks of it"
    )


DEFAULT = "brief, defaults.supports"


@lru_cache(maxsize=16)
def _taken_as(end: End, kind: SupportKind) -> str:
    return f"{end} taken as {kind}, the brief's default"


def _remarks(key: str, supports: Supports | Reason, said: Mapping[str, Said]) -> list[Remark]:
    if isinstance(supports, Reason):
        return []
    remarks = []
    for end, support in zip(_BEARINGS, supports, strict=True):
        if support.source == DEFAULT:
            text = _taken_as(end, support.kind)
            remarks.append(Remark(key, "supports", text, "assumption"))
        elif support.kind == "fixed":
            text = f"{end} is fixed because {said[end].place} of the brief says so"
            remarks.append(Remark(key, "supports", text, "note"))
    return remarks
