"""What else a model holds of reinforcement: its bars in number, and property sets of a project
that speak of it by their names and their values.

Only suggestions come from this: what a property means is the engineer's to say, in the mapping
of the brief.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence

from ifccheck.beam import Beam
from ifccheck.findings import PropertySeen
from ifccheck.ifc.context import make_context
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.properties import PropertyValue
from ifccheck.notation import NotationError, parse_bars, parse_stirrups

OWN = "BeamRating_"
"""How the names of our own sets begin"""
SPEAKS_OF_STEEL = re.compile(
    r"re-?inf|re-?bar|stirrup|bewehr|armier|bügel|buegel|wapen|beugel|armer|bøyle|ferraill"
    r"|armatur|étrier|etrier|armad|estribo|refuerzo|staff[ae]|\bbars?(?![a-z])|(?<=[a-z])Bars?\b"
    r"|steel|ties\b|\blinks?\b",
    re.IGNORECASE,
)
FIELD_WORDS: Mapping[str, str] = {
    "stirrup_yield": r"(?:stirrup|tie|link|bügel|beugel|bøyle|estribo|étrier|etrier|staff)"
    r".*(?:yield|grade|fy)",
    "bar_yield": r"yield|fy[kd]?\b|streckgrenze|rebargrade|bargrade",
    "cover": r"cover|deckung|dekking|overdekning|enrobage|recubrimiento|copriferro",
    "stirrups": r"stirrup|(?<![a-z])ties?(?![a-z])|(?<=[a-z])Ties?\b|(?<![a-z])links?(?![a-z])"
    r"|bügel|buegel|beugel|bøyle|estribo|étrier|etrier|staff[ae]",
    "side": r"side|skin|face(?:bar|steel)|seiten|flank|zij|piel|peau",
    "top": r"top|upper|oben|obere|boven|overkant|sup[ée]r",
    "bottom": r"bottom|lower|soffit|unten|untere|onder|underkant|inf[ée]r",
}
"""Words of a property's name by the field that they speak of; the first that fits counts."""
_FIELDS = {field: re.compile(words, re.IGNORECASE) for field, words in FIELD_WORDS.items()}
_NOTATION = ("top", "bottom", "side", "stirrups")


def bars_in_file(opened: OpenedModel) -> int:
    """Return how many reinforcing bars and meshes a model holds."""
    return sum(
        len(opened.file.by_type(kind)) for kind in ("IfcReinforcingBar", "IfcReinforcingMesh")
    )


def all_properties(opened: OpenedModel, beams: Sequence[Beam]) -> tuple[str, ...]:
    """Return "Set.Property" of every property of beams, or of their types, each once."""
    context = make_context(opened.file, opened.schema)
    sets = [context.properties.of(beam.step_id) for beam in beams]
    return tuple({f"{name}.{key}": None for one in sets for name in one for key in one[name]})


def properties_of_steel(opened: OpenedModel, beams: Sequence[Beam]) -> tuple[PropertySeen, ...]:
    """Return the properties that may tell of the reinforcement of beams, most frequent first."""
    context = make_context(opened.file, opened.schema)
    seen: dict[tuple[str, str], list[str]] = defaultdict(list)
    for beam in beams:
        for name, values in context.properties.of(beam.step_id).items():
            if name.startswith(OWN):
                continue
            for field, place, text in _told(name, values):
                seen[field, place].append(text)
    found = [
        PropertySeen(field, place, texts[0], len(texts)) for (field, place), texts in seen.items()
    ]
    return tuple(sorted(found, key=lambda each: -each.beams))


def _told(name: str, values: Mapping[str, PropertyValue]) -> Iterator[tuple[str, str, str]]:
    """Field, place and text of each property of a set that may tell of reinforcement."""
    for key, value in values.items():
        if value.value is None or isinstance(value.value, bool) or not str(value.value).strip():
            continue
        field = next((field for field, words in _FIELDS.items() if words.search(key)), None)
        if field is None:
            continue
        text = str(value.value)
        if SPEAKS_OF_STEEL.search(name) or SPEAKS_OF_STEEL.search(key) or _is_notation(field, text):
            yield field, f"{name}.{key}", text


def _is_notation(field: str, text: str) -> bool:
    if field not in _NOTATION:
        return field == "cover"
    try:
        return bool(parse_stirrups(text) if field == "stirrups" else parse_bars(text))
    except NotationError:
        return False
