"""What is read of the open models, counted and pinned; the counts were reviewed by eye.

These numbers were made by this program: they guard against change, not against error. What can
be counted without it is held against ifcopenshell's own queries below.

Renew the table after a change that is meant to read more, look at the difference, and commit
both: ``python -m tests.regression_open_models``.
"""

from __future__ import annotations

import json
import re
from collections import Counter
from collections.abc import Iterable
from functools import cache
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element
import pytest

from ifccheck.beam import Beam
from ifccheck.errors import ModelError
from ifccheck.findings import State
from ifccheck.publish.survey_words import gist, lack_words, source_words, state_words
from ifccheck.publish.words import head_of
from ifccheck.surveying import Surveyed, survey

FOLDER = Path(__file__).resolve().parents[1].parent / "shared" / "open_models"
TABLE = Path(__file__).with_suffix(".json")
NUMBERS = re.compile(r"\d+(?:\.\d+)?")
NAMED = re.compile(r"#\d+")
MORE = re.compile(r"and (\d+) more")

MATERIALS = {
    "steel": re.compile(r"^STEEL/|^REBAR_MESH/|^staal$", re.IGNORECASE),
    "plastic": re.compile(r"^MISCELLANEOUS/PVC$"),
    "rubber": re.compile(r"^MISCELLANEOUS/RUBBER_HARD$"),
    "insulation": re.compile(r"^MISCELLANEOUS/ISOL_HARD$"),
    "timber": re.compile(r"^hout$|timber", re.IGNORECASE),
}
"""How the makers of the models name what is not concrete, as read in the files"""
USES = {"footing": re.compile(r"^FUNDAMENT$"), "bearing": re.compile(r"^LAGER$")}


def model_names() -> list[str]:
    return sorted(path.stem for path in FOLDER.glob("*.ifc")) or ["none"]


@cache
def surveyed(name: str) -> Surveyed:
    (found,) = survey([FOLDER / f"{name}.ifc"])
    return found


def table_of(name: str) -> dict[str, Any]:
    """The counts of one model."""
    try:
        found = surveyed(name)
    except ModelError as error:
        return {"refused": str(error).rpartition(f"{name}.ifc: ")[2]}
    model, findings = found.survey.model, found.survey.findings
    beams = model.beams
    bodies = body_classes(FOLDER / f"{name}.ifc")
    read = [f"{bodies[b.step_id]}: {'read' if b.runs else 'not read'}" for b in beams]
    return {
        "schema": model.schema,
        "in scope": len(beams),
        "out of scope": counted(member.reason for member in model.out_of_scope),
        "section source": counted(read),
        "reinforcement source": counted(map(source_words, beams)),
        "bars in the file": len(bars_of(FOLDER / f"{name}.ifc")),
        "bars read of beams in scope": sum(map(bars_read, beams)),
        "state": {str(state): found.survey.count(state) for state in State},
        "missing": counted(lack_words(text) for f in findings.values() for text in f.lacks),
        "for the brief": counted(text for f in findings.values() for text in state_words(f)),
        "doubts": counted(masked(text) for f in findings.values() for text in f.doubts),
        "remarks on the model": counted(f"{r.kind}: {masked(r.text)}" for r in model.remarks),
        "meeting the requirement": found.survey.meeting,
    }


def counted(words: Iterable[str]) -> dict[str, int]:
    return dict(sorted(Counter(words).items()))


def masked(text: str) -> str:
    """A remark without the numbers and members that differ from beam to beam."""
    return NUMBERS.sub("n", head_of(gist(text)))


def bars_read(beam: Beam) -> int:
    """Number of bar entities that the beam's reinforcement names as its origin."""
    origins = {
        each.origin
        for source in beam.reinforcement
        if source.source == "bars"
        for each in (*source.bars, *source.stirrups)
    }
    return sum(
        len(NAMED.findall(origin)) + sum(int(more) for more in MORE.findall(origin))
        for origin in origins
    )


# What can be counted without the program ---------------------------------------------------------


def body_classes(path: Path) -> dict[int, str]:
    """Class of the body of every beam, by step id; what a mapping or a cut starts from."""
    file = ifcopenshell.open(str(path))
    return {beam.id(): _body_class(beam) for beam in file.by_type("IfcBeam")}


def _body_class(beam: Any) -> str:
    if beam.Representation is None:
        return "no body"
    items = [
        item
        for shape in beam.Representation.Representations
        if shape.RepresentationIdentifier in ("Body", "Facetation", None)
        for item in shape.Items
    ]
    return " + ".join(sorted(map(_item_class, items))) or "no body"


def _item_class(item: Any) -> str:
    if item.is_a("IfcMappedItem"):
        return f"mapped {_item_class(item.MappingSource.MappedRepresentation.Items[0])}"
    if item.is_a("IfcBooleanResult"):
        cutter = item.SecondOperand.is_a()
        return f"{_item_class(item.FirstOperand)} cut by {cutter}"
    kind: str = item.is_a()
    return kind


def bars_of(path: Path) -> list[int]:
    file = ifcopenshell.open(str(path))
    return [bar.id() for bar in file.by_type("IfcReinforcingBar")]


def left_out_by_hand(path: Path) -> dict[str, int]:
    """Beams that are none of concrete by the words of the model, by reason."""
    file = ifcopenshell.open(str(path))
    found: Counter[str] = Counter()
    for beam in file.by_type("IfcBeam"):
        materials = ifcopenshell.util.element.get_materials(beam)
        named = [kind for kind, words in USES.items() if words.search(beam.Name or "")]
        named += [
            kind
            for kind, words in MATERIALS.items()
            if any(words.search(material.Name) for material in materials)
        ]
        found.update(named[:1])
    return dict(sorted(found.items()))


@pytest.mark.parametrize("name", model_names())
def test_the_counts_are_those_of_the_table(name: str, open_models: Path) -> None:
    committed = json.loads(TABLE.read_text(encoding="utf-8"))
    assert table_of(name) == committed[name]


def test_the_table_holds_every_model(open_models: Path) -> None:
    assert sorted(json.loads(TABLE.read_text(encoding="utf-8"))) == model_names()


@pytest.mark.parametrize("name", model_names())
def test_what_is_left_out_is_what_the_model_calls_something_else(
    name: str, open_models: Path
) -> None:
    """By queries of ifcopenshell alone: nothing else is left out, and nothing of it is kept."""
    table = table_of(name)
    if "refused" in table:
        assert left_out_by_hand(FOLDER / f"{name}.ifc") == {}
        return
    assert table["out of scope"] == left_out_by_hand(FOLDER / f"{name}.ifc")
    total = table["in scope"] + sum(table["out of scope"].values())
    assert total == len(body_classes(FOLDER / f"{name}.ifc"))


def test_no_bar_of_the_beam_with_stirrups_is_lost(open_models: Path) -> None:
    """All 34 of its bars hang under an assembly under it."""
    table = table_of("01_ifc4x3_beam_34_stirrups")
    assert table["bars read of beams in scope"] == table["bars in the file"] == 34


def main() -> None:
    """Write the table anew, and tell what changed."""
    before = json.loads(TABLE.read_text(encoding="utf-8")) if TABLE.exists() else {}
    now = {name: table_of(name) for name in model_names()}
    for name, table in now.items():
        for key in sorted(table.keys() | before.get(name, {}).keys()):
            old, new = before.get(name, {}).get(key), table.get(key)
            if old != new:
                print(f"{name}, {key}: {old} -> {new}")
    TABLE.write_text(json.dumps(now, indent=1, ensure_ascii=False) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
