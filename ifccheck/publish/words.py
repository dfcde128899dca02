"""Words for people that every output shares, made safe to show."""

from __future__ import annotations

import math
import re
from collections import Counter
from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass

from ifccheck.beam import Beam, Outline, Verdict
from ifccheck.rating import Rating
from ifccheck.rating.in_line import NOT_HELD
from ifccheck.units import show_ratio

# Controls, marks that turn the direction of the text round, and halves of a character.
_UNSHOWABLE = re.compile(
    "[\x00-\x1f\x7f-\x9f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff\ud800-\udfff]"
)
_BLANKS = re.compile(r"[\t\r\n]+")

CAUTIONS = (
    "This summary is an aid for a licensed engineer, who alone decides whether a beam may carry"
    " its loads. It is not a certificate.",
    "Local codes, the conditions of the permit and professional judgement govern over anything"
    " printed here.",
    "Every result rests on the model, the brief and the assumptions listed; an input that is"
    " wrong there makes the result wrong. Check them against the structure as it was built.",
    "A verdict covers the limit states that it names and no others: what was not checked is"
    " listed for each beam. The state of the structure (cracks, corrosion, openings, damage) is"
    " not known to the program.",
    "A beam that is not rated is neither adequate nor inadequate: nothing may be concluded"
    " from it, and no load may be put on it on the strength of this summary.",
)

CAUTIONS_OF_A_SURVEY = (
    "This page is an aid for a licensed engineer. It rates nothing: that nothing is missing of a"
    " beam says nothing of what the beam can carry.",
    "It tells what the program read, which may differ from what the modeller meant and from what"
    " was built. Compare it with the drawings and the structure.",
    "What is doubtful is used all the same where a rule decides it on the safe side; the sheet of"
    " the rating says how.",
)


def plain(text: str) -> str:
    """Return a text on one line that can be shown anywhere: what cannot be shown becomes U+FFFD.

    >>> plain("B-1\\n\\x1b[31m\\u202e")
    'B-1 �[31m�'
    """
    return text if text.isprintable() else _UNSHOWABLE.sub("\ufffd", _BLANKS.sub(" ", text))


def printable(text: str) -> str:
    """Return a text on one line without anything that would steer a terminal.

    >>> printable("B-1\\n\\x1b[31mred")
    'B-1 [31mred'
    """
    return text if text.isprintable() else _UNSHOWABLE.sub("", _BLANKS.sub(" ", text))


def joined(words: Iterable[str]) -> str:
    """Return words as a phrase.

    >>> joined(["flexure", "shear", "anchorage"]), joined(["flexure", "flexure"])
    ('flexure, shear and anchorage', 'flexure')
    """
    *most, last = list(dict.fromkeys(words)) or [""]
    return f"{', '.join(most)} and {last}" if most else last


def section_words(beam: Beam) -> str:
    """Return a beam's sections as people name them: by name, else by width and height [mm]."""
    outlines = [end for run in beam.runs for end in (run.outline, run.outline_end) if end]
    return " to ".join(dict.fromkeys(map(_outline_words, outlines)))


def _outline_words(outline: Outline) -> str:
    return outline.name or outline_size(outline)


def outline_size(outline: Outline) -> str:
    """Return the greatest width and height of an outline [mm]."""
    ys, zs = zip(*outline.rings[0], strict=True)
    return f"{max(ys) - min(ys):.0f} × {max(zs) - min(zs):.0f}"


def verdict_phrase(rating: Rating) -> str:
    """Return the verdict with what it covers: "adequate in flexure and shear"."""
    if rating.verdict is Verdict.ADEQUATE:
        return f"adequate in {joined(rating.checked)}"
    if rating.verdict is Verdict.FALLS_SHORT and rating.governing:
        short = [state.covers for state in rating.limit_states if falls_short(state.utilisation)]
        return f"falls short in {joined(short or [rating.governing.covers])}"
    return str(rating.verdict)


def covered_phrases(ratings: Iterable[Rating]) -> list[tuple[str, int]]:
    """Return what the adequate beams are adequate in, each wording with its number of beams."""
    phrases = Counter(verdict_phrase(r) for r in ratings if r.verdict is Verdict.ADEQUATE)
    return phrases.most_common()


def falls_short(utilisation: float) -> bool:
    """Whether a utilisation is beyond 1; false where it is not known."""
    return utilisation > 1.0


def utilisation_words(utilisation: float) -> str:
    """Return a utilisation for people, on its true side of 1."""
    if math.isnan(utilisation):
        return "–"
    return "no resistance" if math.isinf(utilisation) else show_ratio(utilisation)


def factor_words(factor: float) -> str:
    """Return a rating factor for people."""
    if math.isnan(factor):
        return "not known"
    return "not limited" if math.isinf(factor) else show_ratio(factor)


NO_LOAD = "no load assigned"

CURES = {
    "reactions not included": "put what rests on them in the loads, then write loads_complete ="
    " true under [[beams]]",
    "weight of slab not included": "put it in a permanent case of the loads, or write"
    " loads_complete = true under [[beams]] where another member carries it",
    NO_LOAD: "reach them with an entry of [[loads]], or write unloaded = true under [[beams]]",
    "load acts upward": "write upward = true in that entry of [[loads]] if it is meant, else take"
    " its minus sign out",
    "supports unknown": "write an entry of [[supports]] that names them",
    NOT_HELD: "mend what it goes on into, or call the end that meets it pinned under [[supports]]",
}
"""What lets a beam be rated, for reasons that the brief can settle; by the words before ":"."""


def head_of(text: str) -> str:
    """Return the words of a reason before what it names.

    >>> head_of("reactions not included: T-111 (IfcBeam)")
    'reactions not included'
    """
    return text.partition(":")[0]


_NUMBERS = re.compile(r"\d+(?:\.\d+)?")


def without_numbers(text: str) -> str:
    """Return a text by which those are grouped that differ by their numbers alone.

    >>> without_numbers("bars do not fit from 0 m to 1.50 m")
    'bars do not fit from 0 m to 0 m'
    """
    return _NUMBERS.sub("0", text)


def example_of(texts: Collection[str]) -> str:
    """Return what stands for texts that differ by their numbers: the one, or an example.

    >>> example_of(["cut over 3 mm"]), example_of(["cut over 3 mm", "cut over 12 mm"])
    ('cut over 3 mm', 'e.g. cut over 3 mm')
    """
    first = next(iter(texts))
    return f"e.g. {first}" if len(set(texts)) > 1 else first


NAMED = 3
"""Members, or groups of them, that a reason names before the rest is counted."""


@dataclass(frozen=True, slots=True)
class ReasonGroup:
    """Reasons that differ only by the members, or the numbers, that they name."""

    text: str
    cure: str
    beams: tuple[str, ...]
    """Keys"""


def reason_groups(ratings: Iterable[Rating]) -> list[ReasonGroup]:
    """Return why beams are not rated, the most frequent first."""
    found: dict[str, dict[str, list[str]]] = {}
    for rating in ratings:
        for reason in rating.reasons:
            head = head_of(reason.text)
            group = head if head in CURES else without_numbers(reason.text)
            found.setdefault(group, {}).setdefault(reason.text, []).append(rating.beam)
    groups = [_reason_group(group, texts) for group, texts in found.items()]
    return sorted(groups, key=lambda group: (-len(group.beams), group.text))


def _reason_group(group: str, texts: Mapping[str, Sequence[str]]) -> ReasonGroup:
    """Reasons of one group: with the first few of the members that they name, or one for all."""
    beams = tuple(dict.fromkeys(key for keys in texts.values() for key in keys))
    if group not in CURES:
        return ReasonGroup(example_of(texts), "", beams)
    named = [text.removeprefix(group).removeprefix(": ") for text in texts]
    more = [f"and {len(named) - NAMED} more"] if len(named) > NAMED else []
    told = "; ".join([*filter(None, named[:NAMED]), *more])
    return ReasonGroup(f"{group}: {told}" if told else group, CURES[group], beams)
