"""One beam with one reinforcement, given in every way that a model or a schedule has for it."""

from __future__ import annotations

import itertools
import re
from collections.abc import Callable, Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.ifc.opening import open_model
from ifccheck.ifc.reader import read_model
from tests.models import (
    AREA_UNITS,
    LENGTH_UNITS,
    Layer,
    MadeBeam,
    Model,
    Setting,
    Ties,
    answers,
    brief,
    load,
    rate_model,
    rectangle,
    shuffled,
    state,
    tee,
)
from tests.section_definitions import Piece, Writer

LENGTH, WIDTH, HEIGHT = 7200.0, 300.0, 600.0
PLAIN = MadeBeam(rectangle(WIDTH, HEIGHT), LENGTH, columns=(900.0, 900.0))
"""Its columns are wide enough for bars to be developed in them"""
NOTATION = {"BottomBars": "3-25M", "TopBars": "2-20M", "Stirrups": "2 legs 10M @ 200"}
BOTTOM = Piece(end=LENGTH, depth=536.1)
TOP = Piece(end=LENGTH, depth=61.05, count=2, diameter=19.5, area=600.0)
"""Cover of 40 mm, 10M stirrups of 11.3 mm, and half a bar: 63.9 mm from the soffit, and 61.05 mm
from the top"""
COVER = 'cover = "40 mm"'
FIXED = """
[[supports]]
beams = ["*"]
start = "fixed"
end = "fixed"
bearing = ["900 mm", "900 mm"]
"""
LOADS = (FIXED, load("floor", 'line = "8 kN/m"'), load("press", 'point = "25 kN"', 'at = "50 %"'))


def text(*entries: str, sources: str = "", cover: bool = True) -> str:
    """The brief, with what it says of the reinforcement."""
    made = brief(*LOADS, *entries)
    head = f"[reinforcement]\n{sources}\n" if sources else ""
    made = made.replace("[cases.floor]", f"{head}[cases.floor]", 1)
    return made.replace("[defaults]", f"[defaults]\n{COVER}" if cover else "[defaults]", 1)


def written(setting: Setting, beam: MadeBeam = PLAIN, *pieces: Piece, name: str | None = None,
            change: Callable[[Model, Any], None] | None = None) -> bytes:  # fmt: skip
    """A model of the beam, with a section definition where there are pieces."""
    made = Model(setting)
    made.add_beam(beam)
    element = next(one for one in made.elements if one.is_a("IfcBeam"))
    if pieces:
        write = Writer(made.file, LENGTH_UNITS[setting.unit], AREA_UNITS[setting.unit], made.owner)
        write.give([element], *pieces, name=name)
    if change is not None:
        change(made, element)
    return made.finish()


def rated(folder: Path, data: bytes, brief_text: str) -> dict[str, Any]:
    (answer,) = answers(rate_model(folder, data, brief_text)).values()
    return answer


def bars() -> MadeBeam:
    half = WIDTH / 2.0 - 63.9
    places = tuple(150.0 + 200.0 * n for n in range(36))
    return replace(
        PLAIN,
        layers=(
            Layer("25M", 63.9, (-half, 0.0, half), 40.0, LENGTH - 40.0, (True, True), 400.0),
            Layer("20M", HEIGHT - 61.05, (-half, half), 40.0, LENGTH - 40.0, (True, True), -400.0),
        ),
        ties=(Ties("10M", places, WIDTH / 2.0 - 45.65, 45.65, HEIGHT - 45.65),),
    )


def project_set(made: Model, element: Any) -> None:
    """A set of the project's own, with lists, an enumeration and a unit of a value's own."""
    create = made.file.create_entity
    label = lambda value: create("IfcLabel", value)  # noqa: E731
    inch = made._converted("LENGTHUNIT", "inch", "IfcLengthMeasure", 0.0254,
                           create("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE"))  # fmt: skip
    kept = create("IfcPropertyEnumeration", "Sizes", [label("2-20M"), label("3-20M")])
    held = [
        create("IfcPropertyListValue", "Rebar bottom", None, [label("3x25M")]),
        create("IfcPropertyEnumeratedValue", "Rebar top", None, [label("2-20M")], kept),
        create("IfcPropertyListValue", "Rebar links", None, [label("2 legs 10M @ 200")] * 2),
        create("IfcPropertySingleValue", "Cover", None, create("IfcReal", 40.0 / 25.4), inch),
    ]
    values = made.rooted("IfcPropertySet", "own", Name="Office Beam 7", HasProperties=held)
    made.rooted("IfcRelDefinesByProperties", "own", RelatedObjects=[element],
                RelatingPropertyDefinition=values)  # fmt: skip


MAPPING = """
[reinforcement.properties]
top = "Office Beam*.Rebar top"
bottom = "Office*.*bottom"
stirrups = "*.Rebar links"
cover = "Office Beam 7.Cover"
"""
SCHEDULE = "Mark,Top,Bottom,Stirrups,Cover\nB-1,2-20M,3-25M,2 legs 10M @ 200,40 mm\n"

WAYS: Mapping[str, Callable[[Path, Setting], dict[str, Any]]] = {
    "bars": lambda folder, setting: rated(folder, written(setting, bars()), text()),
    "sections": lambda folder, setting: rated(folder, written(setting, PLAIN, BOTTOM, TOP), text()),
    "type": lambda folder, setting: rated(folder, written(setting, change=by_type), text()),
    "project's set": lambda folder, setting: rated(
        folder, written(setting, change=project_set), text(MAPPING, cover=False)
    ),
    "own set": lambda folder, setting: rated(
        folder, written(setting, replace(PLAIN, notation=NOTATION)), text(cover=False)
    ),
}


def by_type(made: Model, element: Any) -> None:
    write = Writer(
        made.file, LENGTH_UNITS[made.setting.unit], AREA_UNITS[made.setting.unit], made.owner
    )
    write.give_by_type([element], write.definition(BOTTOM, name="Bottom"),
                       write.definition(TOP, name="Top"))  # fmt: skip


def by_schedule(folder: Path, setting: Setting) -> dict[str, Any]:
    folder.mkdir(parents=True, exist_ok=True)
    (folder / "bars.csv").write_text(SCHEDULE, encoding="utf-8")
    return rated(folder, written(setting), text(sources='schedule = "bars.csv"', cover=False))


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
@pytest.mark.parametrize("unit", ["mm", "m", "inch"])
def test_the_same_steel_gives_the_same_rating(schema: Any, unit: Any, tmp_path: Path) -> None:
    setting = Setting(schema=schema, unit=unit)
    found = {name: way(tmp_path / name, setting) for name, way in WAYS.items()}
    found["schedule"] = by_schedule(tmp_path / "schedule", setting)
    first = found["bars"]
    assert first["verdict"] == "adequate"
    for name, answer in found.items():
        for each in ("FlexureSagging", "FlexureHogging"):
            one, other = state(first, each), state(answer, each)
            for key in ("utilisation", "resistance", "demand"):
                assert other[key] == pytest.approx(one[key], rel=0.002), (name, each, key)
        if name in ("sections", "type"):
            assert answer["verdict"] == "not rated"
            assert "stirrups" in " ".join(answer["reasons"])
            continue
        assert answer["verdict"] == "adequate"
        shear, same = state(answer, "Shear"), state(first, "Shear")
        assert shear["utilisation"] == pytest.approx(same["utilisation"], rel=0.002)


def telling(answer: dict[str, Any]) -> str:
    """All that is said of a beam."""
    said = [one["text"] if isinstance(one, dict) else one for one in answer["remarks"]]
    return "; ".join([*said, *answer["reasons"]])


@pytest.mark.parametrize(
    ("change", "part"),
    [
        ({"role": "LIGATURE"}, "(LIGATURE) reinforcement against shear"),
        ({"role": "NOTDEFINED"}, "does not tell whether its bars run along"),
        ({"area": 0.0}, "the area is that of the diameter"),
        ({"area": 15.0}, "sizes differ"),
        ({"diameter": 28.0}, "sizes differ"),
        ({"end": LENGTH / 0.3048}, "along the beam, which is 7.20 m long"),
        ({"grade": ""}, "yield strength of the bars assumed"),
        ({"depth": None}, "has no EffectiveDepth"),
    ],
)
def test_a_wrong_statement_ends_at_the_safe_area_and_is_told(
    change: dict[str, Any], part: str, tmp_path: Path
) -> None:
    setting = Setting()
    honest = rated(tmp_path / "honest", written(setting, PLAIN, BOTTOM, TOP), text())
    answer = rated(
        tmp_path / "wrong", written(setting, PLAIN, replace(BOTTOM, **change), TOP), text()
    )
    assert part in telling(answer)
    assert answer["verdict"] != "adequate"
    states = {one["name"]: one["utilisation"] for one in answer["limit_states"]}
    sagging = states.get("FlexureSagging")
    least = state(honest, "FlexureSagging")["utilisation"]
    assert sagging is None or sagging >= 0.995 * least


def test_bars_that_stop_short_of_the_middle_do_not_count_there(tmp_path: Path) -> None:
    short = replace(BOTTOM, end=LENGTH / 2.0 - 300.0)
    answer = rated(tmp_path, written(Setting(), PLAIN, short, TOP), text())
    assert answer["verdict"] == "not rated"
    assert "flexure, sagging: the bars of the bottom are not stated" in answer["reasons"]
    assert state(answer, "FlexureSagging")["position"] >= LENGTH / 2.0 - 300.0


def test_positions_turn_with_the_placement(tmp_path: Path) -> None:
    """More steel under a load off the middle, whichever way the placement looks."""
    found = []
    for from_end, place in itertools.product((False, True), ("25 %", "75 %")):
        start, end = (4200.0, LENGTH) if from_end else (0.0, 3000.0)
        more = replace(BOTTOM, start=start, end=end, depth=490.0)
        entry = load("press", 'point = "300 kN"', f'at = "{place}"')
        answer = rated(
            tmp_path / f"{from_end} {place}",
            written(Setting(from_end=from_end), PLAIN, BOTTOM, more, TOP),
            text().replace(LOADS[-1], entry),
        )
        found.append(state(answer, "FlexureSagging"))
    left, right, mirrored_right, mirrored_left = found
    assert left["utilisation"] < 0.9 * right["utilisation"]
    assert left["utilisation"] == pytest.approx(mirrored_left["utilisation"], rel=1e-9)
    assert right["utilisation"] == pytest.approx(mirrored_right["utilisation"], rel=1e-9)


@pytest.mark.parametrize(
    "setting",
    [
        Setting(angle=37.0),
        Setting(angle=37.0, turned_by="building"),
        Setting(mirrored=True),
        Setting(unit="inch", angle=-120.0, schema="IFC4X3"),
    ],
)
def test_a_turned_building_and_another_order_change_nothing(
    setting: Setting, tmp_path: Path
) -> None:
    """Pieces that are alike from either end, so that it does not matter which is the start."""
    middle = replace(BOTTOM, start=1000.0, end=LENGTH - 1000.0, depth=490.0)
    plain = rated(tmp_path / "plain", written(Setting(), PLAIN, BOTTOM, middle, TOP), text())
    data = written(setting, PLAIN, BOTTOM, middle, TOP)
    for number, model in enumerate((data, shuffled(data, 7))):
        answer = rated(tmp_path / str(number), model, text())
        for name in ("FlexureSagging", "FlexureHogging"):
            one, other = state(plain, name), state(answer, name)
            assert other["utilisation"] == pytest.approx(one["utilisation"], rel=1e-6)


def test_a_body_that_is_turned_in_its_placement_is_a_reason(tmp_path: Path) -> None:
    setting = Setting(angle=37.0, turned_by="bodies")
    answer = rated(tmp_path, written(setting, PLAIN, BOTTOM, TOP), text())
    assert answer["verdict"] == "not rated"
    assert "none is its own axis" in telling(answer)


def test_rows_that_do_not_fit_are_a_reason(tmp_path: Path) -> None:
    wide = replace(BOTTOM, count=9, area=4500.0)
    low = replace(BOTTOM, depth=595.0)
    for piece, part in ((wide, "do not fit side by side"), (low, "stand out of the concrete")):
        answer = rated(tmp_path / part[:6], written(Setting(), PLAIN, piece, TOP), text())
        assert answer["verdict"] == "not rated"
        assert part in telling(answer)


def test_another_source_beside_sections_is_compared_in_numbers(tmp_path: Path) -> None:
    more = replace(PLAIN, notation={**NOTATION, "BottomBars": "4-25M"})
    answer = rated(tmp_path, written(Setting(), more, BOTTOM, TOP), text())
    said = "sections used; properties differs: bottom bars 2000 mm2 against 1500 mm2"
    assert said in telling(answer)


def test_shear_names_the_source_that_knows_of_stirrups(tmp_path: Path) -> None:
    model = written(Setting(), replace(PLAIN, notation=NOTATION), BOTTOM, TOP)
    answer = rated(tmp_path / "by order", model, text())
    assert answer["verdict"] == "not rated"
    assert (
        "the section definitions are used, which do not say whether there are stirrups, as the"
        ' property sets do: write them there (stirrups = "none"'
    ) in telling(answer)
    order = 'sources = ["properties", "sections"]'
    assert rated(tmp_path / "turned", model, text(sources=order))["verdict"] == "adequate"


@pytest.fixture(scope="module")
def meant(tmp_path_factory: pytest.TempPathFactory) -> float:
    """Utilisation in sagging of the steel that is meant, drawn as bars."""
    answer = rated(tmp_path_factory.mktemp("meant"), written(Setting(), bars()), text())
    utilisation: float = state(answer, "FlexureSagging")["utilisation"]
    return utilisation


ODD = st.sampled_from([0.0, -1.0, 1e-6, 1e9, 0.3, 25.2, 600.0, None])
CHANGES: Mapping[str, Any] = {
    "start": ODD, "end": ODD, "depth": ODD, "diameter": ODD, "area": ODD, "transverse": ODD,
    "count": st.sampled_from([None, 0, 1, 2, 4, 7, -1, 2.5, 10**7]),
    "role": st.sampled_from([None, "LIGATURE", "NOTDEFINED", "EDGE", "SHEAR"]),
    "grade": st.sampled_from([None, "", "B500B", "300W", "great", "9999"]),
    "surface": st.sampled_from([None, "PLAIN"]),
    "profile": st.sampled_from([None, (300.0, 700.0), (600.0, 300.0), (0.0, 600.0)]),
}  # fmt: skip


@given(data=st.data(), fields=st.sets(st.sampled_from(sorted(CHANGES)), min_size=1, max_size=3))
@settings(max_examples=40, deadline=None)
def test_contradictory_sections_never_rate_a_beam_better(
    tmp_path_factory: pytest.TempPathFactory, meant: float, data: Any, fields: set[str]
) -> None:
    """No traceback, no "adequate"; and no more sagging resistance than of the steel that was meant,
    unless more bars or a stronger steel are said without contradiction."""
    changes = {name: data.draw(CHANGES[name], label=name) for name in sorted(fields)}
    piece = replace(BOTTOM, **changes)
    name = data.draw(st.sampled_from([None, "Top", "Bottom"]), label="name")
    folder = tmp_path_factory.mktemp("odd")
    answer = rated(folder, written(Setting(), PLAIN, piece, TOP, name=name), text())
    assert answer["verdict"] != "adequate"
    assert answer["reasons"]
    found = next((s for s in answer["limit_states"] if s["name"] == "FlexureSagging"), None)
    if found is not None and found["utilisation"] is not None and not fields & {"count", "grade"}:
        assert found["utilisation"] >= 0.98 * meant


NOTATIONS = ["3-25M", "5-25M", "none", "", "3 - 25M", "25M", "many", "99-55M"]
LINKS = ["2 legs 10M @ 200", "10M @ 200", "none", "", "10M @ 5 km", "2 legs 10M @ 1500"]


@given(
    st.lists(st.sampled_from(NOTATIONS), min_size=1, max_size=3),
    st.lists(st.sampled_from(LINKS), min_size=1, max_size=2),
)
@settings(max_examples=30, deadline=None)
def test_properties_that_contradict_one_another_never_rate_a_beam(
    tmp_path_factory: pytest.TempPathFactory, bottoms: list[str], links: list[str]
) -> None:
    def sets(made: Model, element: Any) -> None:
        for number, pair in enumerate(itertools.zip_longest(bottoms, links)):
            singles = [
                made._single(name, "IfcLabel", value)
                for name, value in zip(("Bottom", "Links"), pair, strict=True)
                if value is not None
            ]
            held = made.rooted("IfcPropertySet", f"{number}", Name=f"Set {number}",
                               HasProperties=singles)  # fmt: skip
            made.rooted("IfcRelDefinesByProperties", f"{number}", RelatedObjects=[element],
                        RelatingPropertyDefinition=held)  # fmt: skip

    entries = (
        "[reinforcement]\noptional = true\n"
        '[reinforcement.properties]\nbottom = "Set*.Bottom"\nstirrups = "*.Links"\n'
    )
    simple = text(entries).replace('"fixed"', '"pinned"')
    answer = rated(tmp_path_factory.mktemp("sets"), written(Setting(), change=sets), simple)
    said = {one.replace(" ", "") for one in bottoms if one}
    tied = {one for one in links if one}
    if answer["verdict"] == "adequate":
        assert said in ({"3-25M"}, {"5-25M"})
        assert tied in ({"2 legs 10M @ 200"}, {"2 legs 10M @ 1500"}, {"none"})
    elif said == {"3-25M"} and tied == {"2 legs 10M @ 200"}:
        pytest.fail(f"not adequate: {telling(answer)}")


@pytest.mark.parametrize(
    "entity",
    [
        "IFCREINFORCEMENTBARPROPERTIES",
        "IFCSECTIONREINFORCEMENTPROPERTIES",
        "IFCREINFORCEMENTDEFINITIONPROPERTIES",
        "IFCSECTIONPROPERTIES",
    ],
)
@pytest.mark.parametrize("token", ["$", "*", "'x'", ".T.", "(1.,2.)", "('x')", "(#1)", "#1", "-1."])
def test_what_its_class_does_not_allow_is_no_traceback(
    entity: str, token: str, tmp_path: Path
) -> None:
    """Each attribute of a definition in turn; the model is read all the same."""
    data = written(Setting(), PLAIN, BOTTOM, TOP).decode()
    (line, *_) = re.findall(rf"^#\d+={entity}\(.*\);$", data, flags=re.MULTILINE)
    head, arguments = line.removesuffix(");").split("(", 1)
    parts = re.split(r",(?![^(]*\))", arguments)
    first = 4 if "DEFINITION" in entity else 0
    for place in range(first, len(parts)):
        changed = ",".join([*parts[:place], token, *parts[place + 1 :]])
        model = data.replace(line, f"{head}({changed});")
        path = tmp_path / f"{place}.ifc"
        path.write_text(model, encoding="ascii")
        (beam,) = read_model(open_model(path), {}).beams
        (source,) = beam.reinforcement
        held = [row for zone in source.zones for row in zone.rows]
        area = sum(row.group.count * row.group.area for row in held)
        assert source.reasons or area == pytest.approx(2100.0, rel=0.005)
        assert all(63.8 < row.z < 539.0 for row in held)


def test_rows_of_a_tee_lie_as_the_schedule_has_them(tmp_path: Path) -> None:
    """Two 25M in the web, seven 20M that need the flange's width."""
    beam = MadeBeam(tee(250.0, 700.0, 800.0, 150.0), LENGTH, columns=(900.0, 900.0))
    shape = {"profile": (800.0, 700.0)}
    layers = (
        Piece(end=LENGTH, depth=700.0 - 63.9, count=2, area=1000.0, **shape),
        Piece(end=LENGTH, depth=61.05, count=7, diameter=19.5, area=2100.0, **shape),
    )
    by_sections = rated(tmp_path / "sections", written(Setting(), beam, *layers), text())
    folder = tmp_path / "schedule"
    folder.mkdir()
    rows = "Mark,Top,Bottom,Stirrups,Cover\nB-1,7-20M,2-25M,2 legs 10M @ 200,40 mm\n"
    (folder / "bars.csv").write_text(rows, encoding="utf-8")
    brief_text = text(sources='schedule = "bars.csv"', cover=False)
    by_schedule = rated(folder, written(Setting(), beam), brief_text)
    for name in ("FlexureSagging", "FlexureHogging"):
        one, other = state(by_sections, name), state(by_schedule, name)
        assert one["utilisation"] == pytest.approx(other["utilisation"], rel=0.002)
