"""A brief to start from: the model's own marks, storeys, materials and sets, ready to fill in.

It loads as it is written and rates nothing adequate, for it assigns no load. What only the
engineer can say is commented out: a line that begins with ``#`` and no space is TOML, and the
``?`` in it is refused until a value stands there.
"""

from __future__ import annotations

import json
import math
import textwrap
from collections import Counter
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from ifccheck.beam import Beam
from ifccheck.brief.convert import DEFAULT_SOURCES
from ifccheck.findings import PropertySeen, Survey

WIDTH = 98
LONGEST_MARK = 80
"""The brief takes no longer ones"""
MOST_EXAMPLES = 6
"""Beams that an example of a load names"""


@dataclass(frozen=True, slots=True)
class StarterModel:
    """One model of the run, with what a brief for it must speak of."""

    survey: Survey
    loose_ends: Mapping[str, Sequence[str]]
    """Ends that nothing holds, by key of the beam"""
    storey_queries: Mapping[str, str]
    """An element query that reaches the beams of a storey, by its name, where there is one"""
    properties: Sequence[PropertySeen]

    @property
    def beams(self) -> tuple[Beam, ...]:
        """The beams in scope."""
        return self.survey.model.beams


def starter_brief(models: Sequence[StarterModel], standards: Sequence[str]) -> str:
    """Return the text of a brief for models that were surveyed, by the first of the standards."""
    beams = [beam for model in models for beam in model.beams]
    names = _Names(beams)
    parts = (
        _head(models),
        _basis(standards),
        _scope(),
        _defaults(models, names),
        _reinforcement(models, names),
        _cases(),
        *(_storeys(model, names) for model in models),
        _supports(models, names),
        _statements(models, names),
        _materials(models, names),
    )
    return "\n\n".join("\n".join(part) for part in map(list, parts) if part) + "\n"


def _head(models: Sequence[StarterModel]) -> Iterator[str]:
    files = ", ".join(model.survey.model.file_name for model in models)
    yield from _prose(
        f"Brief for {files}, started from a survey of what the model holds.",
        "",
        "As it stands it loads, and rates no beam adequate, since it assigns no load. What only the"
        ' engineer can say is commented out: a line that begins with "#" and no space is TOML. Take'
        ' the "#" away and put a value for each "?": a "?" that is left is refused. Every quantity'
        ' is text with its unit, such as "3.2 kN/m".',
    )


def _basis(standards: Sequence[str]) -> Iterator[str]:
    yield "[basis]"
    yield f"standard = {quoted(standards[0])}"
    if others := ", ".join(standards[1:]):
        yield from _prose(f"Also installed: {others}.")
    yield from _prose(
        "CHECK: the weight of concrete with its reinforcement, for the beams' own weight."
    )
    yield 'concrete_unit_weight = "24 kN/m3"'


def _scope() -> Iterator[str]:
    yield from _prose(
        "Beams that are modelled as something else (a member, a proxy, an assembly) are taken in by"
        " queries, as in also = ['IfcMember, Name=/HB-.*/']; leave_out = [...] names what is not to"
        " be looked at."
    )
    yield "#[scope]"


# Defaults --------------------------------------------------------------------------------------


def _defaults(models: Sequence[StarterModel], names: _Names) -> Iterator[str]:
    yield from _prose("Used only where the model is silent; the results list each use.")
    yield "[defaults]"
    lacking: tuple[tuple[str, str, str], ...] = (
        ("concrete_strength", "concrete strength unknown", '"? MPa"'),
        ("bar_yield", "yield strength of the bars unknown", '"? MPa"'),
        ("stirrup_yield", "yield strength of the stirrups unknown", '"? MPa"'),
    )
    for key, reason, value in lacking:
        yield from _prose(_silence(models, reason, names))
        yield f"#{key} = {value}"
    yield from _prose(
        "Clear cover to the stirrups, where bars are given by number and not by place."
    )
    yield '#cover = "? mm"'
    yield '#aggregate_size = "? mm"'
    yield from _prose(
        "How an end stands (pinned or fixed) that lies on a member which can hold it; any other"
        " end needs an entry of [[supports]]."
    )
    yield '#supports = ["?", "?"]'
    yield from _prose(
        "Or leave supports out and write [frame], a table of its own with nothing in it: the model"
        " then tells what beams stand on, beams in one line go on into each other where bars run"
        " through, and each passes its reactions on to what carries it. The survey shows what every"
        " beam would stand on; entries of [[supports]] overrule it."
    )
    yield from _prose(
        "Slabs that beams are cast with count as their flanges only where you say so."
    )
    yield "#slab_flanges = true"
    yield from _prose(
        "Bars and meshes of such slabs count as top steel only where an entry of [[beams]] says"
        ' slab_bars = "anchored".'
    )


def _silence(models: Sequence[StarterModel], reason: str, names: _Names) -> str:
    found = [
        beam
        for model in models
        for beam in model.beams
        if any(text.startswith(reason) for text in model.survey.of(beam).lacks)
    ]
    if not found:
        return "No beam was found to need it yet."
    return f"The model gives none for {_some(found, names)}."


def _reinforcement(models: Sequence[StarterModel], names: _Names) -> Iterator[str]:
    bare = [beam for model in models for beam in model.beams if not beam.reinforcement]
    yield "[reinforcement]"
    yield from _prose("The first of these that speaks of a beam is used; this order is the usual.")
    yield f"#sources = [{', '.join(map(quoted, DEFAULT_SOURCES))}]"
    yield from _prose(
        "A beam schedule, CSV or XLSX beside this file, with a column mark and columns top, bottom,"
        " stirrups, cover."
        + (f" The model has no reinforcement for {_some(bare, names)}." if bare else "")
    )
    yield '#schedule = "?"'
    yield from _mapping([seen for model in models for seen in model.properties])


def _mapping(seen: Sequence[PropertySeen]) -> Iterator[str]:
    """The project's own properties that may tell of reinforcement, the most frequent first."""
    seen = [each for each in seen if _is_plain(each.place)]
    if not seen:
        yield from _prose("The model has no property set whose names speak of reinforcement.")
        return
    yield ""
    yield from _prose(
        "Property sets of the project that may speak of reinforcement, by their names and values:"
        " check that each means what its field says."
    )
    yield "#[reinforcement.properties]"
    for field in dict.fromkeys(each.field for each in seen):
        first, *others = [each for each in seen if each.field == field]
        yield from _prose(_as_seen(first))
        yield f"#{field} = {quoted(first.place)}"
        for other in others:
            yield from _prose(f"or {quoted(other.place)}: {_as_seen(other)}")


def _as_seen(seen: PropertySeen) -> str:
    beams = "1 beam" if seen.beams == 1 else f"{seen.beams} beams"
    return f"{quoted(textwrap.shorten(seen.example, 40))} on one of {beams}"


# Loads -------------------------------------------------------------------------------------------


def _cases() -> Iterator[str]:
    yield from _prose(
        "Load cases. Their nature is permanent, imposed, crane, snow or wind; an imposed case may"
        " name its category (office, parking, ...), else it counts as storage. A case with rated ="
        " true gets its rating factor and its largest safe load. Own weight needs no case."
    )
    yield "#[cases.finishes]"
    yield '#nature = "permanent"'
    yield ""
    yield "#[cases.floor]"
    yield '#nature = "imposed"'
    yield ""
    yield "#[cases.equipment]"
    yield '#nature = "imposed"'
    yield "#rated = true"


def _storeys(model: StarterModel, names: _Names) -> Iterator[str]:
    heights = {storey.name: storey.elevation for storey in model.survey.model.storeys}
    by_storey: dict[str, list[Beam]] = {}
    for beam in model.beams:
        by_storey.setdefault(beam.storey, []).append(beam)
    yield from _prose(
        f"Loads on the beams of {model.survey.model.file_name}, storey by storey. Each entry gives"
        " one of line, point (with at), area (with tributary_width) or moment (with at)."
    )
    yield from _prose(
        "Entries of [[floors]] (case, with area or self_weight) share slabs out between the beams"
        " under them; without one, what slabs bring is given here."
    )
    for storey in sorted(by_storey, key=lambda each: (heights.get(each, math.inf), each)):
        yield ""
        yield from _storey(storey, heights.get(storey), by_storey[storey], model, names)


def _storey(
    storey: str, height: float | None, beams: Sequence[Beam], model: StarterModel, names: _Names
) -> Iterator[str]:
    at = "" if height is None else f", elevation {height / 1000.0:.2f} m"
    yield from _prose(f"{storey or 'No storey'}{at}: {_count(beams)}")
    alike: dict[tuple[str, str], list[Beam]] = {}
    for beam in beams:
        alike.setdefault((_section(beam), beam.material or "no material"), []).append(beam)
    for (section, material), group in alike.items():
        yield from _prose(f"  {section}, {material}: {names.told(group)}", indent="    ")
    yield "#[[loads]]"
    yield '#case = "floor"'
    query = model.storey_queries.get(storey)
    yield from [f"#where = {quoted(query)}"] if query else _marks(beams, names)
    yield '#line = "? kN/m"'
    yield ""
    yield "#[[loads]]"
    yield '#case = "equipment"'
    yield from _marks(beams[:MOST_EXAMPLES], names)
    yield '#point = "? kN"'
    yield '#at = "? m"'


def _section(beam: Beam) -> str:
    outlines = dict.fromkeys(run.outline for run in beam.runs)
    return (
        " to ".join(outline.name or _size(outline.rings[0]) for outline in outlines) or "not read"
    )


def _size(ring: Sequence[tuple[float, float]]) -> str:
    ys, zs = zip(*ring, strict=True)
    return f"{max(ys) - min(ys):.0f} x {max(zs) - min(zs):.0f}"


# Statements about beams --------------------------------------------------------------------------


def _supports(models: Sequence[StarterModel], names: _Names) -> Iterator[str]:
    """Ends that nothing holds, the beams with the same ones together."""
    groups: dict[tuple[str, ...], list[Beam]] = {}
    for model in models:
        for beam in model.beams:
            if ends := tuple(model.loose_ends.get(beam.key, ())):
                groups.setdefault(ends, []).append(beam)
    if not groups:
        yield from _prose("Every end that was read lies on a member which can hold it.")
        return
    yield from _prose(
        "Ends that touch nothing which can be counted on to hold them, and beams that something"
        " touches from below between their ends: say how each end stands (pinned, fixed or free)."
        " The start is the end that plan and sheets mark. What touches a beam from below and does"
        " not hold it is named in such an entry, too, by ignore = and a list of marks; what holds"
        " it makes it no single span, and it is not rated."
    )
    for i, (ends, beams) in enumerate(groups.items()):
        yield from [""] if i else []
        yield "#[[supports]]"
        yield from _marks(beams, names)
        yield from (f'#{end} = "?"' for end in ends)


def _statements(models: Sequence[StarterModel], names: _Names) -> Iterator[str]:
    rested = _whose(models, lambda text: text.startswith("reactions not included"))
    yield from _prose(
        "What rests on a beam between its supports: put its reactions in the loads above, then say"
        " so. A beam that is meant to carry its own weight alone says unloaded = true."
    )
    if rested:
        yield "#[[beams]]"
        yield from _marks(rested, names)
        yield "#loads_complete = true"
    else:
        yield from _prose("Nothing was found to rest on a beam whose supports are known.")


def _materials(models: Sequence[StarterModel], names: _Names) -> Iterator[str]:
    beams = [beam for model in models for beam in model.beams]
    found = Counter(_concrete(beam) for beam in beams)
    yield from _prose("Concretes of the model:")
    for words, count in found.most_common():
        yield from _prose(f"  {words}: {count} of {_count(beams)}", indent="    ")
    unknown = [beam for beam in beams if beam.concrete_strength is None]
    if unknown:
        yield from _prose("What is stated of single beams beats the model:")
        yield "#[[materials]]"
        yield from _marks(unknown, names)
        yield '#concrete_strength = "? MPa"'


def _concrete(beam: Beam) -> str:
    strength = beam.concrete_strength
    told = f"{strength.value:.4g} MPa from {strength.source}" if strength else "no strength stated"
    return f"{beam.material or 'no material'}, {told}"


def _whose(models: Sequence[StarterModel], says: Callable[[str], bool]) -> list[Beam]:
    return [
        beam
        for model in models
        for beam in model.beams
        if any(map(says, model.survey.of(beam).to_state))
    ]


# Words -------------------------------------------------------------------------------------------


class _Names:
    """How beams are named so that the names reach them and no others."""

    def __init__(self, beams: Sequence[Beam]) -> None:
        self._keys = {beam.key for beam in beams} | {beam.guid for beam in beams}
        self._named = _by(beams, lambda beam: beam.name)
        self._tagged = _by(beams, lambda beam: beam.tag)

    def references(self, beams: Sequence[Beam]) -> list[str]:
        """Return Names or Tags where they reach none but these beams, else their keys."""
        own = {beam.key for beam in beams}
        return list(dict.fromkeys(self._reference(beam, own) for beam in beams))

    def _reference(self, beam: Beam, own: set[str]) -> str:
        for text in (beam.name, beam.tag):
            tagged, named = self._tagged.get(text, set()), self._named.get(text, set())
            clear = not tagged or named <= tagged
            if clear and (tagged or named) <= own and _is_plain(text) and text not in self._keys:
                return text
        return beam.key

    def told(self, beams: Sequence[Beam], most: int | None = None) -> str:
        """Return what people call the beams, each mark once with how many go by it."""
        counts = Counter(beam.mark for beam in beams)
        marks = [f"{mark} ({n} times)" if n > 1 else mark for mark, n in counts.items()]
        shown = marks[:most]
        more = len(marks) - len(shown)
        return ", ".join(shown) + (f" and {more} more" if more else "")


def _by(beams: Sequence[Beam], text: Callable[[Beam], str]) -> dict[str, set[str]]:
    found: dict[str, set[str]] = {}
    for beam in beams:
        found.setdefault(text(beam), set()).add(beam.key)
    return found


def _is_plain(text: str) -> bool:
    """Whether a text can stand for itself in a selection."""
    fits = 0 < len(text) <= LONGEST_MARK and text == text.strip()
    return fits and text.isprintable() and "*" not in text


def quoted(text: str) -> str:
    """Return a text as a basic string of TOML.

    >>> print(quoted("beam 7\\n"))
    "beam 7\\n"
    """
    written = json.dumps(text, ensure_ascii=False)
    return "".join(c if c.isprintable() else f"\\U{ord(c):08x}" for c in written)


def _marks(beams: Sequence[Beam], names: _Names) -> Iterator[str]:
    """A list of beams, commented out, on as many lines as it takes."""
    line = "#beams = ["
    for mark in (f"{quoted(each)}, " for each in names.references(beams)):
        if len(line) + len(mark) > WIDTH:
            yield line.rstrip()
            line = "#"
        line += mark
    yield line.removesuffix(", ") + "]"


def _some(beams: Sequence[Beam], names: _Names) -> str:
    return f"{_count(beams)}: {names.told(beams, MOST_EXAMPLES)}"


def _count(beams: Sequence[Beam]) -> str:
    return "1 beam" if len(beams) == 1 else f"{len(beams)} beams"


def _prose(*paragraphs: str, indent: str = "") -> Iterator[str]:
    """Comments: each line begins with "# ", and nothing in a text ends the line."""
    for text in paragraphs:
        safe = "".join(c if c.isprintable() else "\ufffd" for c in text)
        lines = textwrap.wrap(
            safe, WIDTH - 2, subsequent_indent=indent, break_on_hyphens=False
        ) or [""]  # fmt: skip
        yield from (f"# {line}".rstrip() for line in lines)
