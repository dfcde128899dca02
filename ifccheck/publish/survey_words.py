"""What a survey says of beams, in words that its table and its page share."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from ifccheck.beam import Beam, DescribedZone
from ifccheck.findings import Finding, State, Survey
from ifccheck.notation import show_bars, show_stirrups
from ifccheck.publish.framed_words import standing_words
from ifccheck.publish.quantities import quantity_words
from ifccheck.publish.words import NO_LOAD, example_of, head_of, without_numbers

STATES = {
    "supports unknown": "supports",
    "reactions not included": "what rests on it",
    NO_LOAD: "loads",
}
"""What the brief must still state, by the head of the reason."""

_BANDS = {State.INCOMPLETE: "none", State.DOUBTFUL: "u1", State.COMPLETE: "u3"}

SETTLED = {
    "concrete strength unknown": "defaults.concrete_strength in the brief, or [[materials]]",
    "yield strength of the bars unknown": "defaults.bar_yield in the brief",
    "yield strength of the bars cannot be read": "[[materials]] bar_yield in the brief",
    "yield strength of the stirrups cannot be read": "[[materials]] stirrup_yield in the brief",
    "yield strength of the stirrups unknown": "defaults.stirrup_yield in the brief",
    "cover unknown": "defaults.cover in the brief",
    "no reinforcement found": "a schedule, a mapping of the project's own property sets, or"
    " BeamRating_Reinforcement in the model",
    "the legs of the stirrups are not stated": "a schedule, or the modeller: 2 legs 10M @ 250",
    "no source says whether there are stirrups": "a schedule, or the modeller: none, if so",
    "no longitudinal bar is among": "a schedule, named before bars in reinforcement.sources; or the"
    " modeller: tie its main bars to the beam",
    "bars lie in it or beside it that no relation ties to it": "the modeller: tie the bars to the"
    " beam; or a schedule, named before bars in reinforcement.sources",
    "bars do not fit": "the bars, the cover or the section, whichever is wrong: correct it in the"
    " schedule or the model that gives it",
    "hole in the body": "the modeller: model it as an opening (IfcOpeningElement) of the beam",
    "section is in separate parts": "the modeller: make the body one solid all along the beam",
    "not straight": "a calculation by hand: only straight beams are rated",
    "rolled by": "a calculation by hand: only bending about a level axis is rated",
    "its section runs out to nothing": "the modeller: correct the ends of the body",
    "its ends are cut so obliquely": "the modeller: correct the ends of the body",
    "material unknown": "the modeller: a material that is named as concrete",
}
"""What settles a thing that is missing, by how it begins."""

_OF_BARS = re.compile(r"^(?:bars?|stirrups?|mesh(?:es)?) [^:]*: (?=.)")


@dataclass(frozen=True, slots=True)
class Told:
    """One thing that is said of several beams."""

    text: str
    """As it is said of the first of them"""
    shown: str
    """For people: an example, where beams differ by their numbers"""
    beams: tuple[str, ...]
    """Keys"""


def state_band(state: State) -> str:
    """Return the class that a beam is tinted with: hatched where a rating could not be made."""
    return _BANDS[state]


def lack_words(text: str) -> str:
    """Return what is missing, without the advice that comes with it.

    >>> lack_words("yield strength of the bars unknown: neither model nor brief gives one")
    'yield strength of the bars unknown'
    """
    return text.partition(": neither ")[0]


def what_settles(text: str) -> str:
    """Return what settles a thing that is missing; empty where nothing is known to.

    >>> what_settles("cover unknown")
    'defaults.cover in the brief'
    """
    return next((cure for head, cure in SETTLED.items() if text.startswith(head)), "")


def gist(text: str) -> str:
    """Return a doubt without the bars that it names first.

    >>> gist("bars #12, #18 and 3 more: ends in a bend")
    'ends in a bend'
    """
    return _OF_BARS.sub("", text, count=1)


def told_of(said: Iterable[tuple[str, str]]) -> list[Told]:
    """Return texts, each given with the key of its beam, the most frequent first.

    Those that differ by their numbers alone are one, with the first as an example.
    """
    groups: dict[str, dict[str, str]] = {}
    for key, text in said:
        groups.setdefault(without_numbers(text), {}).setdefault(key, text)
    told = [_told(texts) for texts in groups.values()]
    return sorted(told, key=lambda each: -len(each.beams))


def _told(texts: Mapping[str, str]) -> Told:
    """One thing that is said of beams, by key of the beam."""
    return Told(next(iter(texts.values())), example_of(texts.values()), tuple(texts))


def missing_of(survey: Survey, beams: Iterable[Beam]) -> list[Told]:
    """Return what is missing of beams."""
    return told_of((beam.key, lack_words(text)) for beam in beams for text in survey.of(beam).lacks)


def doubts_of(survey: Survey, beams: Iterable[Beam]) -> list[Told]:
    """Return what is doubtful of beams."""
    return told_of((beam.key, gist(text)) for beam in beams for text in survey.of(beam).doubts)


def to_state_of(survey: Survey, beams: Iterable[Beam]) -> list[Told]:
    """Return what the brief must still state of beams."""
    return told_of((beam.key, text) for beam in beams for text in state_words(survey.of(beam)))


def unmet_of(survey: Survey) -> list[Told]:
    """Return what the information requirement asks and beams do not meet."""
    return told_of((key, text) for key, f in survey.findings.items() for text in f.unmet)


def state_words(finding: Finding) -> list[str]:
    """Return in a word each what the brief must still state."""
    return list(dict.fromkeys(STATES.get(head_of(text), text) for text in finding.to_state))


def bars_words(survey: Survey) -> str:
    """Return how many bars the file holds and of how many beams they were read."""
    if not survey.bars_in_file:
        return "The file holds no bars."
    bars = "1 bar" if survey.bars_in_file == 1 else f"{survey.bars_in_file} bars"
    beams = "1 beam" if survey.beams_with_bars == 1 else f"{survey.beams_with_bars} beams"
    return f"The file holds {bars}; bars were read of {beams} in scope."


def strength_words(beam: Beam) -> str:
    """Return the concrete strength that was read."""
    strength = beam.concrete_strength
    return quantity_words(strength.value, "stress") if strength else "not stated"


def stands_words(survey: Survey, beam: Beam) -> str:
    """Return what a beam would stand on by the model; empty where that was not looked for."""
    return standing_words(survey.framed, beam.key) if survey.framed else ""


def source_words(beam: Beam) -> str:
    """Return the sources that speak of a beam's reinforcement."""
    return ", ".join(each.source for each in beam.reinforcement) or "none"


def zone_words(zone: DescribedZone) -> list[str]:
    """Return the reinforcement that a zone describes: "top 3-25M"."""
    faces = (("top", zone.top), ("bottom", zone.bottom), ("side", zone.side))
    words = [f"{name} {show_bars(groups)}" for name, groups in faces if groups is not None]
    for row in zone.rows:
        height = quantity_words(row.z, "dimension")
        words.append(f"{row.face} {show_bars((row.group,))} at z = {height}")
    if zone.stirrups is not None:
        words.append(f"stirrups {show_stirrups(zone.stirrups)}")
    elif zone.no_stirrups:
        words.append("no stirrups")
    if zone.cover is not None:
        words.append(f"cover {quantity_words(zone.cover, 'dimension')}")
    return words
