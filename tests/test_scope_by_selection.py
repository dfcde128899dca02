"""What the brief takes in as beams beside IfcBeam, and what it leaves out."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import pytest

from ifccheck.beam import Beam, Verdict
from ifccheck.errors import BriefError
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.scoping import choose
from tests.ifc_models import Building, only_beam, reasons
from tests.models import (
    BEARINGS,
    Hole,
    MadeBeam,
    Model,
    Setting,
    answers,
    brief,
    load,
    rate_model,
    rectangle,
)

LENGTH = 6000.0


def solid(building: Building, width: float = 300.0, depth: float = 600.0) -> Any:
    profile = building.rectangle(width, depth)
    return building.extrusion(profile, LENGTH, z=(1, 0, 0), x=(0, 1, 0))


def member(building: Building, kind: str, name: str, material: str = "Concrete C30/37") -> Any:
    made = building.member(kind, solid(building), Name=name)
    if material:
        building.give_material(made, building.entity("IfcMaterial", material))
    return made


def read(building: Building, also: Sequence[str] = (), leave_out: Sequence[str] = ()) -> Any:
    opened = building.open()
    choice = choose(
        opened,
        {f"scope.also[{n}]": query for n, query in enumerate(also, 1)},
        {f"scope.leave_out[{n}]": query for n, query in enumerate(leave_out, 1)},
    )
    return read_model(opened, {}, None, choice)


def names(beams: Sequence[Beam]) -> set[str]:
    return {beam.name for beam in beams}


@pytest.mark.parametrize(
    "kind", ["IfcMember", "IfcBuildingElementProxy", "IfcPlate", "IfcCovering"]
)
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_members_of_other_classes(schema: str, kind: str) -> None:
    building = Building(schema)
    product = member(building, kind, "HB-1")
    member(building, kind, "X-1")
    beam = only_beam(read(building, [f"{kind}, Name=/HB-.*/"]))
    assert (beam.step_id, beam.name, beam.ifc_class) == (product.id(), "HB-1", kind)
    assert beam.length == pytest.approx(LENGTH)
    assert not beam.reasons


def test_what_is_taken_in_is_judged_like_any_beam() -> None:
    building = Building()
    member(building, "IfcMember", "M-1")
    member(building, "IfcMember", "M-2", "Steel S355")
    member(building, "IfcMember", "M-3", "")
    building.give_material(
        building.member("IfcMember", Name="M-4"), building.entity("IfcMaterial", "Concrete C30/37")
    )
    found = read(building, ["IfcMember"])
    assert names(found.beams) == {"M-1", "M-3", "M-4"}
    assert [(one.name, one.reason) for one in found.out_of_scope] == [("M-2", "steel")]
    told = {beam.name: reasons(beam) for beam in found.beams}
    assert "material unknown" in told["M-3"]
    assert "no body in the model" in told["M-4"]


def test_a_beam_by_class_is_there_once() -> None:
    building = Building()
    building.beam(solid(building), Name="B-1")
    assert names(read(building, ["IfcBeam", "IfcElement"]).beams) == {"B-1"}


def test_an_assembly_stands_for_its_solid_part() -> None:
    building = Building()
    whole = building.member("IfcElementAssembly", Name="HB-1", Tag="17")
    part = member(building, "IfcBuildingElementPart", "concrete")
    strip = member(building, "IfcBuildingElementPart", "strip", "EPS insulation")
    bar = building.member("IfcReinforcingBar", Name="bar")
    building.give_parts(whole, part, strip, bar)
    found = read(building, ["IfcElementAssembly, Name=/HB-.*/"])
    beam = only_beam(found)
    assert (beam.step_id, beam.name, beam.tag) == (part.id(), "HB-1", "17")
    assert not beam.reasons
    assert [one.reason for one in found.out_of_scope] == ["insulation"]


def test_an_assembly_with_a_beam_in_it_adds_nothing() -> None:
    building = Building()
    beam = building.beam(solid(building), Name="B-1")
    building.give_parts(building.member("IfcElementAssembly", Name="HB-1"), beam)
    found = read(building, ["IfcElementAssembly"])
    assert names(found.beams) == {"B-1"}


def test_an_assembly_with_nothing_in_it_says_so() -> None:
    building = Building()
    building.member("IfcElementAssembly", Name="HB-1")
    assert "no body in the model" in reasons(only_beam(read(building, ["IfcElementAssembly"])))


def test_bars_openings_and_fasteners_are_never_taken_in() -> None:
    building = Building()
    product = building.beam(solid(building), Name="B-1")
    building.void(product, solid(building, 50.0, 50.0), Name="hole")
    building.member("IfcReinforcingBar", Name="bar")
    building.member("IfcMechanicalFastener", Name="bolt")
    opened = building.open()
    choice = choose(opened, {"scope.also[1]": "IfcElement"}, {})
    assert choice.reached == {"scope.also[1]": 1}
    assert choice.also == {product.id()}


def test_beams_and_wholes_are_left_out_by_the_brief() -> None:
    building = Building()
    kept = building.beam(solid(building), Name="B-1")
    building.beam(solid(building), Name="X-1")
    inside = building.beam(solid(building), Name="B-2")
    building.give_parts(building.member("IfcElementAssembly", Name="old"), inside)
    found = read(building, (), ["IfcBeam, Name=/X-.*/", 'IfcElementAssembly, Name="old"'])
    assert only_beam_id(found) == kept.id()
    said = {one.name: (one.reason, one.evidence) for one in found.out_of_scope}
    assert said == {
        "X-1": ("the brief says so", "scope.leave_out: IfcBeam, Name=/X-.*/"),
        "B-2": ("the brief says so", 'scope.leave_out: IfcElementAssembly, Name="old"'),
    }


@pytest.mark.parametrize("kind", ["IfcColumn", "IfcWall", "IfcSlab", "IfcFooting", "IfcPile"])
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_members_that_are_never_beams_are_passed_over_and_named(schema: str, kind: str) -> None:
    building = Building(schema)
    building.beam(solid(building), Name="B-1")
    member(building, kind, "X-1")
    found = read(building, ["IfcElement"])
    assert names(found.beams) == {"B-1"}
    (told,) = [one.text for one in found.remarks if one.stage == "scope"]
    assert told.startswith(f'scope.also[1] = "IfcElement" reaches X-1 ({kind}): columns, walls')


def test_parts_of_walls_are_no_beams_alone_or_in_an_assembly() -> None:
    building = Building()
    building.beam(solid(building), Name="B-1")
    wall = building.member("IfcWall", Name="W-1")
    building.give_parts(wall, member(building, "IfcBuildingElementPart", "leaf"))
    building.give_parts(
        building.member("IfcElementAssembly", Name="A"), member(building, "IfcColumn", "C-1")
    )
    found = read(building, ["IfcBuildingElementPart", "IfcElementAssembly"])
    assert names(found.beams) == {"B-1"}
    assert not found.out_of_scope


def only_beam_id(model: Any) -> int:
    return int(only_beam(model).step_id) if not model.out_of_scope else int(model.beams[0].step_id)


def test_leaving_out_goes_before_taking_in() -> None:
    building = Building()
    member(building, "IfcMember", "HB-1")
    member(building, "IfcMember", "HB-2")
    found = read(building, ["IfcMember"], ['IfcMember, Name="HB-2"'])
    assert names(found.beams) == {"HB-1"}
    assert [one.name for one in found.out_of_scope] == ["HB-2"]


@pytest.mark.parametrize(
    ("query", "why"),
    [
        ("IfcNonsense", "names the class IfcNonsense"),
        ("IfcMember, Name=", "cannot be understood"),
        ("IfcMember, Name=/(/", "cannot be answered"),
    ],
)
def test_queries_that_cannot_be_answered(query: str, why: str) -> None:
    building = Building()
    member(building, "IfcMember", "HB-1")
    with pytest.raises(BriefError, match=why):
        read(building, [query])


# Through the whole program -----------------------------------------------------------------------

BARS = {"BottomBars": "3-25M", "TopBars": "2-15M", "Stirrups": "2 legs 10M @ 200"}
LOADS = (BEARINGS, load("floor", 'line = "10 kN/m"'), load("press", 'line = "5 kN/m"'))


def hall(*beams: MadeBeam) -> bytes:
    made = Model(Setting())
    for beam in beams:
        made.add_beam(beam)
    return made.finish()


def proxy(name: str, y: float = 0.0, **changes: Any) -> MadeBeam:
    return MadeBeam(
        rectangle(300, 600), 6300.0, name, BARS, origin=(0.0, y, 0.0),
        class_name=changes.pop("class_name", "IfcBuildingElementProxy"), **changes,
    )  # fmt: skip


def scoped(*lines: str) -> str:
    return "\n".join(["[scope]", *lines, "", brief(*LOADS)])


def test_a_proxy_is_rated_as_the_same_beam_is(tmp_path: Path) -> None:
    also = scoped("also = ['IfcBuildingElementProxy, Name=/HB-.*/']")
    run = rate_model(tmp_path / "proxy", hall(proxy("HB-1")), also)
    same = rate_model(tmp_path / "beam", hall(proxy("HB-1", class_name="IfcBeam")), brief(*LOADS))
    one, other = answers(run)["HB-1"], answers(same)["HB-1"]
    assert one["verdict"] == "adequate"
    assert one["utilisation"] == other["utilisation"]
    # a proxy without the brief's word is no beam at all, and rests on nothing
    with pytest.raises(Exception, match="holds no beam"):
        rate_model(tmp_path / "none", hall(proxy("HB-1")), brief(*LOADS))


def test_results_are_written_to_what_was_taken_in(tmp_path: Path) -> None:
    import ifcopenshell

    from ifccheck.pipeline import publish

    also = scoped("also = ['IfcBuildingElementProxy']")
    run = rate_model(tmp_path, hall(proxy("HB-1", openings=(
        Hole((3000.0, 3100.0), (-200.0, 200.0), (250.0, 350.0)),
    ))), also)  # fmt: skip
    (verdict,) = {rating.verdict for rating in run.reports[0].ratings.values()}
    assert verdict is Verdict.ADEQUATE
    publish(run, tmp_path / "out", ["model"])
    file = ifcopenshell.open(str(tmp_path / "out" / "hall-rated.ifc"))
    (sets,) = [
        relation.RelatedObjects[0].is_a()
        for relation in file.by_type("IfcRelDefinesByProperties")
        if relation.RelatingPropertyDefinition.Name == "BeamRating_Result"
    ]
    assert sets == "IfcBuildingElementProxy"


@pytest.mark.parametrize(
    ("lines", "place"),
    [
        (["also = ['IfcMember']"], "scope.also[1] (line 2): 'IfcMember'"),
        (["also = ['IfcBeam', 'IfcMember']"], "scope.also[2] (line 2): 'IfcMember'"),
        (["leave_out = ['IfcBeam, Name=\"Z\"']"], "scope.leave_out[1] (line 2): 'IfcBeam"),
    ],
)
def test_a_query_that_reaches_nothing_is_an_error(
    tmp_path: Path, lines: list[str], place: str
) -> None:
    data = hall(proxy("B-1", class_name="IfcBeam"))
    with pytest.raises(BriefError) as caught:
        rate_model(tmp_path, data, scoped(*lines))
    assert place in str(caught.value)
    assert "reaches no member" in str(caught.value)
    run = rate_model(tmp_path, data, scoped(*lines, "optional = true"))
    assert answers(run)["B-1"]["verdict"] == "adequate"


def test_one_model_of_several_is_enough(tmp_path: Path) -> None:
    from ifccheck.pipeline import rate

    paths = []
    for name, beam in (("one", proxy("B-1", class_name="IfcBeam")), ("two", proxy("HB-1"))):
        path = tmp_path / f"{name}.ifc"
        path.write_bytes(hall(beam))
        paths.append(path)
    brief_path = tmp_path / "brief.toml"
    brief_path.write_text(scoped("also = ['IfcBuildingElementProxy']"), encoding="utf-8")
    assert len(rate(paths, brief_path).reports) == 2


def test_a_query_that_cannot_be_understood_names_its_place(tmp_path: Path) -> None:
    with pytest.raises(BriefError) as caught:
        rate_model(tmp_path, hall(proxy("HB-1")), scoped("also = ['IfcMember, Name=']"))
    assert "brief.toml: scope.also[1]" in str(caught.value)


@pytest.mark.parametrize(
    ("line", "why"),
    [
        ("also = 'IfcMember'", "must be a list"),
        ("also = [' ']", "holds an empty query"),
        ("also = [1]", "scope.also"),
        ("take = ['IfcMember']", "unknown key"),
        ("optional = 1", "must be true or false"),
    ],
)
def test_faults_of_the_table_are_told(tmp_path: Path, line: str, why: str) -> None:
    with pytest.raises(BriefError, match=why):
        rate_model(tmp_path, hall(proxy("B-1", class_name="IfcBeam")), scoped(line))


def test_a_selected_beam_is_the_next_web_of_its_neighbour(tmp_path: Path) -> None:
    """What is no IfcBeam by class halves the slab all the same where it is taken in."""
    from ifccheck.frame.flanges import Slabs
    from tests.models import MadeSlab

    made = Model(Setting())
    made.add_beam(proxy("B-1", class_name="IfcBeam"))
    made.add_beam(proxy("HB-2", 3000.0))
    made.add_slab(MadeSlab(((0, -500), (6300, -500), (6300, 4000), (0, 4000)), 450.0, 150.0))
    text = scoped("also = ['IfcBuildingElementProxy']")
    text = text.replace("[defaults]", "[defaults]\nslab_flanges = true")
    run = rate_model(tmp_path, made.finish(), text)
    model = run.rated[0].read.model
    (beam,) = [beam for beam in model.beams if beam.name == "B-1"]
    found = Slabs(model.beams, model.slabs, model.members).meeting(beam)
    assert max(flange.left for flange in found.flanges) == pytest.approx(150.0 + 2700.0 / 2.0)
