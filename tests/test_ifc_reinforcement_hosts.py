"""Which beam bars belong to: by relations, beside it in an assembly, or by place alone."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest

from tests.barred_beams import HEIGHT, Curve, ModelWithBars, closed_stirrup, straight

Model = tuple[ModelWithBars, Any]


@pytest.fixture
def made() -> Model:
    model = ModelWithBars()
    return model, model.beam()


def assembly(model: ModelWithBars, *parts: Any) -> Any:
    whole = model.root("IfcElementAssembly")
    if parts:
        model.aggregate(whole, parts)
    return whole


def test_bars_of_an_assembly_that_is_part_of_the_beam(made: Model) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    model.aggregate(beam, [assembly(model, assembly(model, bar))])
    assert model.read(beam).bars[0].count == 1


def test_nested_bars_are_parts_too(made: Model) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    model.root("IfcRelNests", RelatingObject=beam, RelatedObjects=[bar])
    assert model.read(beam).bars[0].count == 1


def test_a_bar_that_two_relations_name_counts_once(made: Model) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    model.aggregate(beam, [bar])
    model.aggregate(beam, [bar])
    found = model.read(beam)
    assert found.bars[0].count == 1
    assert found.remarks == ""


def test_bars_beside_the_beam_through_a_second_relation_of_the_assembly(made: Model) -> None:
    model, beam = made
    strip = model.beam(origin=(0.0, 0.0, 0.0), host=False)  # insulation in the same place
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    whole = assembly(model, strip, beam)
    model.aggregate(whole, [bar])
    assert model.read(beam).bars[0].count == 1


def test_bars_beside_the_beam_in_a_sub_assembly(made: Model) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    assembly(model, beam, assembly(model, bar))
    assert model.read(beam).bars[0].count == 1


def test_of_two_beams_in_an_assembly_the_one_that_holds_the_bar_has_it(made: Model) -> None:
    model, beam = made
    other = model.beam(origin=(0.0, 1000.0, 0.0))
    here = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    there = model.bar(straight(50, 5950, 0, 60), 25.0, other)
    assembly(model, beam, other, here, there)
    assert [b.diameter for b in model.read(beam).bars] == [20.0]
    assert [b.diameter for b in model.read(other).bars] == [25.0]


def test_a_bar_beside_the_only_beam_but_outside_it_is_a_reason(made: Model) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 2000.0), 20.0, beam)
    assembly(model, beam, bar)
    assert "in no concrete beam there" in model.read(beam).reasons


def test_a_bar_beside_two_beams_but_outside_both_is_remarked_on(made: Model) -> None:
    model, beam = made
    other = model.beam(origin=(0.0, 1000.0, 0.0))
    model.bars(beam, straight(50, 5950, 0, 60))
    model.bars(other, straight(50, 5950, 0, 60))
    bar = model.bar(straight(50, 5950, 0, 2000.0), 20.0, beam)
    assembly(model, beam, other, bar)
    for each in (beam, other):
        assert "in no concrete beam there" in model.read(each).remarks
        assert model.read(each).reasons == ""


@pytest.mark.parametrize("kind", ["IfcColumn", "IfcSlab", "IfcFooting"])
def test_bars_of_other_elements_are_not_noticed(made: Model, kind: str) -> None:
    model, beam = made
    bar = model.bar(straight(50, 5950, 0, 60), 20.0, beam)
    model.aggregate(model.root(kind), [bar])
    assert model.read(beam).sources == ()


def test_bars_of_a_beam_out_of_scope_that_lie_in_the_beam_are_noticed(made: Model) -> None:
    model, beam = made
    strip = model.beam(host=False)
    model.aggregate(strip, [model.bar(straight(50, 5950, 0, 60), 20.0, beam)])
    assert "no relation ties" in model.read(beam).reasons
    assert model.read(beam).bars == ()


def test_bars_of_another_beam_of_the_assembly_are_no_matter_of_this_one(made: Model) -> None:
    model, beam = made
    model.bars(beam, straight(50, 5950, 0, 60))
    unread = model.beam(origin=(0.0, 1000.0, 0.0), host=False)  # its body is not read
    model.aggregate(unread, [model.bar(straight(50, 5950, 0, 60), 20.0, unread)])
    assembly(model, beam, unread)
    found = model.read(beam)
    assert (found.bars[0].count, found.reasons, found.remarks) == (1, "", "")


def test_a_large_assembly_does_not_tell_every_beam_of_every_bar(made: Model) -> None:
    model, beam = made
    beams = [beam] + [model.beam(origin=(0.0, 1000.0 * k, 0.0)) for k in range(1, 12)]
    inside = [model.bar(straight(50, 5950, 0, 60), 20.0, one) for one in beams]
    outside = model.bar(straight(50, 5950, 0, 2000.0), 20.0, beam)
    assembly(model, *beams, *inside, outside)
    for one in beams:
        found = model.read(one)
        assert (found.bars[0].count, found.reasons, found.remarks) == (1, "", "")


def test_a_bar_that_stands_nowhere_is_a_reason(made: Model) -> None:
    model, beam = made
    (bar,) = model.bars(beam, straight(50, 5950, 0, 60))
    bar.ObjectPlacement.RelativePlacement.Location.Coordinates = (1e300, 0.0, 0.0)
    assert "stands nowhere" in model.read(beam).reasons


@pytest.mark.parametrize("coordinates", [[(50.0, 0.0, 60.0)], [(0.0, 0.0, 0.0), (1e300, 0.0, 0.0)]])
def test_a_bar_of_no_length_or_of_an_absurd_one_is_a_reason(
    made: Model, coordinates: list[tuple[float, float, float]]
) -> None:
    model, beam = made
    (bar,) = model.bars(beam, straight(50, 5950, 0, 60))
    curve = bar.Representation.Representations[0].Items[0].Directrix
    curve.Segments = None
    curve.Points.CoordList = coordinates
    assert "no earthly length" in model.read(beam).reasons


def test_loose_bars_elsewhere_are_not_noticed(made: Model) -> None:
    model, beam = made
    upright = Curve(((3000.0, 0.0, -2500.0), (3000.0, 0.0, 3000.0)))  # a column's bar
    model.bar(upright, 20.0, beam)
    model.bar(straight(50, 5950, 0, HEIGHT + 100.0), 20.0, beam)
    assert model.read(beam).sources == ()


def test_proxies_of_a_bar_type_are_bars(made: Model) -> None:
    model, beam = made
    curve = straight(50, 5950, 0, 60)
    proxy = model.bar(curve, 20.0, beam, kind="IfcBuildingElementProxy")
    kind = model.root("IfcReinforcingBarType", PredefinedType="MAIN", NominalDiameter=20.0)
    model.root("IfcRelDefinesByType", RelatedObjects=[proxy], RelatingType=kind)
    model.aggregate(beam, [proxy])
    assert model.read(beam).bars[0].diameter == 20.0


def test_reinforcement_by_sections_is_not_lost_in_silence(made: Model) -> None:
    model, beam = made
    create = model.file.create_entity
    profile = create("IfcRectangleProfileDef", "AREA", None, None, 300.0, 600.0)
    section = create("IfcSectionProperties", "UNIFORM", profile)
    steel = create("IfcReinforcementBarProperties", 1500.0, "400W")
    part = create("IfcSectionReinforcementProperties", 0.0, 6000.0, None, "MAIN", section, [steel])
    defined = model.root(
        "IfcReinforcementDefinitionProperties", ReinforcementSectionDefinitions=[part]
    )
    model.root(
        "IfcRelDefinesByProperties", RelatedObjects=[beam], RelatingPropertyDefinition=defined
    )
    found = model.read(beam)
    assert [source.source for source in found.sources] == ["sections"]
    assert "has no EffectiveDepth" in found.reasons


def test_the_order_of_entities_changes_nothing() -> None:
    """The same bars written in the opposite order."""
    curves = [straight(50, 5950, y, 60) for y in (-90.0, 0.0, 90.0)]
    curves += [closed_stirrup(x, 110, 40, 560) for x in (100.0, 300.0, 500.0, 600.0, 700.0)]
    read = []
    for order in (curves, curves[::-1]):
        model = ModelWithBars()
        beam = model.beam()
        model.bars(beam, *order, diameter=12.0)
        found = model.read(beam)
        read.append(
            (
                [(b.count, b.ys, b.z, b.start, b.end, b.area) for b in found.bars],
                [(s.start, s.end, s.spacing, s.legs) for s in found.stirrups],
            )
        )
    assert read[0] == read[1]


def test_bars_beside_beams_that_are_insulation_stay_away(open_models: Any) -> None:
    """In this open model six bars lie with an insulation strip, three in each of two assemblies."""
    import ifcopenshell

    from ifccheck.ifc.bar_hosts import Hosts
    from ifccheck.ifc.context import make_context

    file = ifcopenshell.open(str(open_models / "03_ifc2x3_precast_mixed_rebar.ifc"))
    context = make_context(file, "IFC2X3")
    bars = file.by_type("IfcReinforcingBar")
    assert len(bars) == 6
    concrete = {beam.id() for beam in file.by_type("IfcBeam") if beam[2] != "isokorf"}
    hosts = Hosts(file, context.relations, concrete)
    found = [hosts.of(bar.id()) for bar in bars]
    assert {host.tie for host in found} == {"beside"}
    # the strip's assembly is part of that of the balcony, whose concrete the bars may reinforce
    assert all("Balkon" in {file.by_id(beam)[2] for beam in host.beams} for host in found)
    strips = Hosts(file, context.relations, {b.id() for b in file.by_type("IfcBeam")} - concrete)
    nearest = [strips.of(bar.id()) for bar in bars]
    assert {file.by_id(beam)[2] for host in nearest for beam in host.beams} == {"isokorf"}


def test_over_rib_diameters_of_an_open_model_are_found_out(open_models: Any) -> None:
    """Its bars say 10 mm and sweep 10 mm, but a property set calls them size 8; area is 0."""
    import ifcopenshell

    from ifccheck.ifc.bar_table import gather_bars
    from ifccheck.ifc.context import make_context

    file = ifcopenshell.open(str(open_models / "03_ifc2x3_precast_mixed_rebar.ifc"))
    context = make_context(file, "IFC2X3")
    bars = np.array([bar.id() for bar in file.by_type("IfcReinforcingBar")])
    table = gather_bars(context, bars)
    assert not table.unreadable
    sizes = table.sizes
    assert {round(size.area, 2) for size in sizes} == {50.27}
    assert all("10 mm" in size.doubt and "8 mm" in size.doubt for size in sizes)
    strengths = {grade.strength for grade in table.grades}
    assert {given.value for given in strengths if given is not None} == {500.0}
    assert len(table.bar) > len(table.size)  # several of them are many mapped bars


@pytest.mark.parametrize(
    ("found", "put"),
    [
        (r"(IFCSWEPTDISKSOLID\(#\d+),8\.", r"\1,'thick'"),
        (r"IFCSWEPTDISKSOLID\(#\d+", "IFCSWEPTDISKSOLID(#1"),
        (r"\(\(50\.,0\.,60\.\),", "((nan,0.,60.),"),
        (r"(\$,\$),16\.,", r"\1,'thick',"),
    ],
)
def test_bars_that_hold_what_their_class_does_not_allow_are_a_reason(
    made: Model, found: str, put: str
) -> None:
    import ifcopenshell

    model, beam = made
    model.bars(beam, straight(50, 5950, 0, 60))
    text = model.file.to_string()
    assert re.search(found, text)
    model.file = ifcopenshell.file.from_string(re.sub(found, put, text))
    assert model.read(beam).bars == ()
    assert model.read(beam).reasons != ""
