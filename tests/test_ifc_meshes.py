"""Meshes of wires that beams host, bars whose type tells what they are, and bars not drawn."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import pytest

from tests.barred_beams import Curve, Found, ModelWithBars, straight

LENGTHWISE = [straight(50.0, 5950.0, y, 60.0) for y in (-100.0, 0.0, 100.0)]
"""5,900 long, at 100 mm."""


def flat(z: float = 68.0) -> list[Curve]:
    """Wires across the beam, 240 long, at 200 mm."""
    return [Curve(((x, -120.0, z), (x, 120.0, z))) for x in range(100, 6000, 200)]


def bent_up() -> list[Curve]:
    """Wires across that turn up at both sides and over at the top: open stirrups."""
    return [
        Curve(((x, -60, 540), (x, -110, 540), (x, -110, 46), (x, 110, 46), (x, 110, 540),
               (x, 60, 540)))
        for x in range(100, 6000, 200)
    ]  # fmt: skip


def mesh(
    lengthwise: Sequence[tuple[Sequence[Curve], float]], schema: str = "IFC4", **said: float
) -> Found:
    """Read the only mesh of a beam: wires with the diameter that each is swept by."""
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    items = [model.swept(wire, thick) for wires, thick in lengthwise for wire in wires]
    if schema == "IFC2X3":
        for way in ("Longitudinal", "Transverse"):
            said.setdefault(f"{way}BarNominalDiameter", 0.0)
            said.setdefault(f"{way}BarCrossSectionArea", 0.0)
            said.setdefault(f"{way}BarSpacing", 200.0)
    made = model.bar(items, None, beam, "IfcReinforcingMesh", Name="M-1", SteelGrade="500W", **said)
    model.aggregate(beam, [made])
    return model.read(beam)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_wires_along_the_beam_are_bars_and_flat_ones_across_are_no_stirrups(schema: str) -> None:
    found = mesh([(LENGTHWISE, 8.0), (flat(), 6.0)], schema,
                 MeshLength=5900.0, MeshWidth=240.0, LongitudinalBarNominalDiameter=8.0,
                 TransverseBarNominalDiameter=6.0)  # fmt: skip
    (bars,) = found.bars
    assert (bars.count, bars.z) == (3, pytest.approx(60.0))
    assert bars.area == pytest.approx(16.0 * math.pi)
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 500.0
    assert found.stirrups == ()
    assert "no leg crosses the height" in found.remarks
    assert found.reasons == ""


def test_wires_that_are_bent_up_are_stirrups() -> None:
    found = mesh([(LENGTHWISE, 8.0), (bent_up(), 6.0)],
                 MeshLength=5900.0, MeshWidth=1308.0, LongitudinalBarNominalDiameter=8.0,
                 TransverseBarNominalDiameter=6.0)  # fmt: skip
    (ties,) = found.stirrups
    assert (ties.legs, ties.closed, ties.spacing) == (2, False, pytest.approx(200.0))
    assert ties.leg_area == pytest.approx(9.0 * math.pi)


def test_areas_that_the_mesh_states_are_those_of_its_wires() -> None:
    found = mesh([(LENGTHWISE, 8.0), (flat(), 6.0)], MeshLength=5900.0, MeshWidth=240.0,
                 LongitudinalBarCrossSectionArea=49e-6,
                 TransverseBarCrossSectionArea=28e-6)  # fmt: skip
    assert found.bars[0].area == pytest.approx(49.0)


@pytest.mark.parametrize(
    ("longitudinal", "transverse", "area", "doubt"),
    [
        (8.0, 6.0, 16.0 * math.pi, False),  # as thick as those swept
        (6.0, 8.0, 16.0 * math.pi, False),
        (7.0, 6.0, 9.0 * math.pi, True),  # neither fits: the thinner for both
    ],
)
def test_without_lengths_the_thickness_tells_which_wires_are_which(
    longitudinal: float, transverse: float, area: float, doubt: bool
) -> None:
    found = mesh([(LENGTHWISE, 8.0), (flat(), 6.0)], LongitudinalBarNominalDiameter=longitudinal,
                 TransverseBarNominalDiameter=transverse)  # fmt: skip
    assert found.bars[0].area == pytest.approx(area)
    assert ("sizes differ" in found.remarks) is doubt


def test_what_is_drawn_thicker_than_stated_counts_as_stated_and_is_told() -> None:
    found = mesh([(LENGTHWISE, 10.0), (flat(), 6.0)], MeshLength=5900.0, MeshWidth=240.0,
                 LongitudinalBarNominalDiameter=8.0)  # fmt: skip
    assert found.bars[0].area == pytest.approx(16.0 * math.pi)
    assert "sizes differ" in found.remarks
    assert "M-1" in found.remarks


def test_the_type_of_a_mesh_tells_what_the_mesh_does_not() -> None:
    model = ModelWithBars()
    beam = model.beam()
    items = [model.swept(wire, 8.0) for wire in LENGTHWISE]
    made = model.bar(items, None, beam, "IfcReinforcingMesh")
    kind = model.root("IfcReinforcingMeshType", PredefinedType="NOTDEFINED", MeshLength=5900.0,
                      LongitudinalBarNominalDiameter=7.0)  # fmt: skip
    model.root("IfcRelDefinesByType", RelatedObjects=[made], RelatingType=kind)
    model.aggregate(beam, [made])
    assert model.read(beam).bars[0].area == pytest.approx(49.0 * math.pi / 4.0)


def test_mapped_wires_are_those_drawn_one_by_one() -> None:
    model = ModelWithBars()
    beam = model.beam()
    wire = model.swept(straight(50.0, 5950.0, 0.0, 60.0), 8.0)
    items = model.mapped(wire, [(0.0, y, 0.0) for y in (-100.0, 0.0, 100.0)])
    model.aggregate(beam, [model.bar(items, None, beam, "IfcReinforcingMesh")])
    (bars,) = model.read(beam).bars
    assert bars.ys == pytest.approx((-100.0, 0.0, 100.0))


def test_a_mesh_that_is_not_drawn_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    made = model.root("IfcReinforcingMesh", Name="Q188", MeshLength=5900.0, MeshWidth=240.0,
                      LongitudinalBarNominalDiameter=6.0)  # fmt: skip
    model.aggregate(beam, [made])
    assert f"Q188 #{made.id()}: is a mesh that is not drawn" in model.read(beam).reasons


def test_a_mesh_of_wires_in_three_ways_is_a_reason() -> None:
    aslant = [Curve(((100.0, -100.0, 76.0), (300.0, 100.0, 76.0)))]
    assert "more ways than two" in mesh([(LENGTHWISE, 8.0), (flat(), 6.0), (aslant, 6.0)]).reasons


def test_a_mesh_of_nobody_states_thickness_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    lines = [model.curve(wire) for wire in LENGTHWISE]
    model.aggregate(beam, [model.bar(lines, None, beam, "IfcReinforcingMesh")])
    assert "a diameter that nobody states" in model.read(beam).reasons


def test_a_mesh_that_no_relation_ties_is_none_of_the_beam() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bar([model.swept(wire, 8.0) for wire in LENGTHWISE], None, beam, "IfcReinforcingMesh")
    assert model.read(beam).sources == ()


# Types ---------------------------------------------------------------------------------------


def typed(schema: str = "IFC4", **said: Any) -> tuple[Found, Any]:
    """A bar of which only the centre line is drawn, and its type."""
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    bar = model.bar([model.curve(straight(50, 5950, 0, 60))], None, beam)
    kind = model.root("IfcReinforcingBarType", PredefinedType="MAIN", Name="T-1", **said)
    model.root("IfcRelDefinesByType", RelatedObjects=[bar], RelatingType=kind)
    steel = model.file.create_entity("IfcMaterial", "B500B")
    model.root("IfcRelAssociatesMaterial", RelatedObjects=[kind], RelatingMaterial=steel)
    model.aggregate(beam, [bar])
    return model.read(beam), bar


@pytest.mark.parametrize(
    ("said", "area"),
    [
        ({"NominalDiameter": 20.0}, 100.0 * math.pi),
        ({"CrossSectionArea": 300e-6, "BarLength": 5900.0}, 300.0),
        ({"NominalDiameter": 19.5, "CrossSectionArea": 300e-6}, 300.0),
    ],
)
@pytest.mark.parametrize("schema", ["IFC4", "IFC4X3"])
def test_what_the_type_of_a_bar_tells_is_told_of_the_bar(
    schema: str, said: dict[str, float], area: float
) -> None:
    found, _ = typed(schema, **said)
    (bars,) = found.bars
    assert bars.area == pytest.approx(area)
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 500.0


def test_a_line_of_no_thickness_is_a_reason_that_names_the_bar() -> None:
    found, bar = typed()
    assert f"bar #{bar.id()}: is of a diameter that nobody states" in found.reasons


def test_a_bar_that_only_its_type_draws_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    bar = model.root("IfcReinforcingBar", Name="B-9", NominalDiameter=20.0)
    (item,) = model.mapped(model.swept(straight(50, 5950, 0, 60), 20.0), [(0.0, 0.0, 0.0)])
    kind = model.root("IfcReinforcingBarType", PredefinedType="MAIN",
                      RepresentationMaps=[item.MappingSource])  # fmt: skip
    model.root("IfcRelDefinesByType", RelatedObjects=[bar], RelatingType=kind)
    model.aggregate(beam, [bar])
    assert f"B-9 #{bar.id()}: is not drawn: only its type has a shape" in model.read(beam).reasons


def test_a_bar_without_a_shape_is_a_reason_that_names_it() -> None:
    model = ModelWithBars()
    beam = model.beam()
    bar = model.root("IfcReinforcingBar", Name="B-9", NominalDiameter=20.0)
    model.aggregate(beam, [bar])
    assert f"bar B-9 #{bar.id()}: has no shape" in model.read(beam).reasons
