"""Which beams are rated, and the strength of their concrete, from what models say of them."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from ifccheck.beam import Beam, Model
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.strength_texts import Reading, Unread, read_strength_text
from ifccheck.ifc.vocabulary import (
    STEMS,
    USE_WORDS,
    WORD,
    families_named,
    families_of_material,
)
from tests.ifc_models import Building, Opened, only_beam, only_left_out, reasons


def read_open_model(folder: Path, name: str) -> Model:
    file = ifcopenshell.open(str(folder / name))
    return read_model(Opened(file, str(file.schema)), {})


def solid(building: Building) -> Any:
    return building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0), x=(0, 1, 0))


def read_one(material: str = "", schema: str = "IFC4", **named: Any) -> Model:
    building = Building(schema)
    building.beam(solid(building), material=material, **named)
    return building.read()


# the open models: facts of their README, and of the names and materials that they give


def test_precast_model_has_116_concrete_beams(open_models: Path) -> None:
    model = read_open_model(open_models, "03_ifc2x3_precast_mixed_rebar.ifc")
    file = ifcopenshell.open(str(open_models / "03_ifc2x3_precast_mixed_rebar.ifc"))
    of_concrete = {
        product.id()
        for relation in file.by_type("IfcRelAssociatesMaterial")
        if relation.RelatingMaterial.Name.startswith("CONCRETE")
        for product in relation.RelatedObjects
        if product.is_a("IfcBeam")
    }
    assert len(of_concrete) == 116
    known = [beam for beam in model.beams if "material unknown" not in reasons(beam)]
    assert {beam.step_id for beam in known} == of_concrete
    assert {beam.material for beam in model.beams} - {beam.material for beam in known} == {
        "Undefined/3500"
    }
    assert {beam.concrete_strength.value for beam in known if beam.concrete_strength} == {45, 53}
    left_out = {one.reason for one in model.out_of_scope}
    assert left_out == {"steel", "insulation", "rubber", "plastic"}
    assert "insulation" in {one.reason for one in model.out_of_scope if one.name == "isokorf"}


def test_timber_and_steel_model_has_nothing_in_scope(open_models: Path) -> None:
    model = read_open_model(open_models, "05_ifc2x3_structural_timber_steel.ifc")
    assert model.beams == ()
    counts = [one.reason for one in model.out_of_scope]
    assert (len(counts), counts.count("timber"), counts.count("steel")) == (152, 128, 24)


def test_bridge_leaves_its_footings_and_bearings_out(open_models: Path) -> None:
    model = read_open_model(open_models, "06_ifc2x3_bridge_concrete.ifc")
    assert {(one.name, one.reason) for one in model.out_of_scope} == {
        ("LAGER", "bearing"),
        ("FUNDAMENT", "footing"),
    }
    assert len(model.out_of_scope) == 11
    assert len(model.beams) == 5
    for beam in model.beams:  # B35: the lower reading is a cube strength of 35 MPa
        assert beam.concrete_strength is not None
        assert beam.concrete_strength.value == pytest.approx(28.0)
        assert any("cube or a cylinder" in remark.text for remark in beam.remarks)


def test_timber_with_a_reinforcement_set_stays_timber(open_models: Path) -> None:
    model = read_open_model(open_models, "16_ifc4_timber_mapped_negz.ifc")
    assert model.beams == ()
    assert [one.reason for one in model.out_of_scope] == ["timber"] * 284


def test_grid_model_has_ten_concrete_beams(open_models: Path) -> None:
    model = read_open_model(open_models, "08_ifc4x3_grid_concrete_beams.ifc")
    assert len(model.beams) == 10
    assert {reasons(beam) for beam in model.beams} == {""}
    assert {beam.storey for beam in model.beams} == {"Ground Floor"}
    assert all(beam.concrete_strength is None for beam in model.beams)
    (size,) = {outline_size(beam) for beam in model.beams}
    profile = ifcopenshell.open(
        str(open_models / "08_ifc4x3_grid_concrete_beams.ifc")
    ).by_type("IfcBeam")[0].Representation.Representations[0].Items[0].SweptArea  # fmt: skip
    assert sorted(size) == pytest.approx(sorted((profile.XDim, profile.YDim)))


def test_stirrup_model_is_200_wide_and_400_high(open_models: Path) -> None:
    (beam,) = read_open_model(open_models, "01_ifc4x3_beam_34_stirrups.ifc").beams
    assert outline_size(beam) == pytest.approx((200.0, 400.0))
    assert reasons(beam) == ""


def outline_size(beam: Beam) -> tuple[float, float]:
    ys, zs = zip(*beam.runs[0].outline.rings[0], strict=True)
    return round(max(ys) - min(ys), 3), round(max(zs), 3)


def test_no_open_model_gives_a_beam_of_another_material(open_models: Path) -> None:
    for path in sorted(open_models.glob("*.ifc")):
        model = read_open_model(open_models, path.name)
        for beam in model.beams:
            name = beam.material.casefold()
            assert not any(word in name for word in ("steel", "staal", "hout", "timber", "pvc"))


# names of materials


@pytest.mark.parametrize(
    ("name", "family"),
    [
        ("Stahlbeton C30/37", "concrete"),
        ("Gewapend beton", "concrete"),
        ("Armert betong B45", "concrete"),
        ("Béton armé", "concrete"),
        ("Hormigón HA-30", "concrete"),
        ("Calcestruzzo C25/30", "concrete"),
        ("prefabbeton", "concrete"),
        ("C35/45", "concrete"),
        ("Steel fibre reinforced concrete", "concrete"),
        ("Cast-in-place RC", "concrete"),
        ("Betonstahl B500B", "reinforcing steel"),
        ("Wapeningsstaal", "reinforcing steel"),
        ("Acier d'armature HA500", "reinforcing steel"),
        ("S355J2", "steel"),
        ("Baustahl St37", "steel"),
        ("ASTM A992", "steel"),
        ("Konstruksjonsstål", "steel"),
        ("Acero A36", "steel"),
        ("Profilé acier", "steel"),
        ("Brettschichtholz GL24h", "timber"),
        ("Limtre", "timber"),
        ("Bois lamellé-collé", "timber"),
        ("Madera laminada", "timber"),
        ("Betonplex 18 mm", "timber"),
        ("Kalksandstein", "masonry"),
        ("Betonstein", "masonry"),
        ("Neoprene", "rubber"),
        ("EPS 100", "insulation"),
        ("Aluminium 6061", "aluminium"),
    ],
)
def test_material_names_of_many_languages(name: str, family: str) -> None:
    assert families_of_material(name) == {family}


@pytest.mark.parametrize("name", ["Radial Gradient Fill", "Default", "C24", "Misc_Undefined", "B1"])
def test_names_that_tell_nothing(name: str) -> None:
    assert families_of_material(name) == frozenset()


@pytest.mark.parametrize(
    "name", ["load-bearing beam", "Lagerhalle Achse B", "Fundamentbalken", "Oak Street 4", "W-12"]
)
def test_beam_names_that_only_sound_like_something_else(name: str) -> None:
    assert families_named(name) == frozenset()


@pytest.mark.parametrize("name", ["Wall beam 3", "Wandbalken", "Lintel over wall 2", "Beam anchor"])
def test_beams_named_after_something_else_are_beams(name: str) -> None:
    assert reasons(only_beam(read_one("Concrete C30/37", Name=name))) == ""
    assert "material unknown" in reasons(only_beam(read_one("", Name=name)))


# what a beam is


@pytest.mark.parametrize(
    ("named", "material", "reason"),
    [
        ({"Name": "B1"}, "Structural steel S355", "steel"),
        ({"Name": "Timber purlin"}, "", "timber"),
        ({"Name": "W Shapes:W12X26:4711"}, "", "steel"),
        ({"Name": "B2", "ObjectType": "HEA 200"}, "Default", "steel"),
        ({"Name": "Strip footing SF-1"}, "Concrete C30/37", "footing"),
        ({"Name": "Zapata Z3"}, "Hormigón HA-25", "footing"),
        ({"Name": "Elastomeric bearing 3"}, "", "bearing"),
        ({"Name": "LAGER"}, "Diverse", "bearing"),
        ({"Name": "strip"}, "Isolatie", "insulation"),
        ({"Name": "B3"}, "B500B", "steel"),
        ({"Name": "Anchor A12"}, "", "anchor"),
        ({"Name": "Ankerplatte 7"}, "Default", "anchor"),
        ({"Name": "Hijsanker"}, "STEEL/St52-3", "steel"),
        ({"Name": "Pipe sleeve DN100"}, "", "sleeve"),
        ({"Name": "kopel sparing"}, "Undefined", "sleeve"),
        ({"Name": "Padstone 3"}, "", "pad"),
        ({"Name": "X1", "ObjectType": "Shim pad 5 mm"}, "", "pad"),
        ({"Name": "Wall W-3"}, "Concrete C30/37", "wall"),
        ({"Name": "Wand 12"}, "", "wall"),
    ],
)
def test_left_out_on_positive_evidence(named: dict[str, str], material: str, reason: str) -> None:
    left_out = only_left_out(read_one(material, **named))
    assert left_out.reason == reason
    assert left_out.evidence
    assert left_out.storey == "Level 1"


@pytest.mark.parametrize(
    ("named", "material", "words"),
    [
        ({"Name": "B1"}, "", "material unknown: none given"),
        ({"Name": "B1"}, "Radial Gradient Fill", 'material unknown: "Radial Gradient Fill"'),
        ({"Name": "Steel beam 4"}, "Concrete C30/37", "material contradictory: concrete"),
        ({"Name": "HE220B encased"}, "Concrete C30/37", "material contradictory: concrete"),
        ({"Name": "footing tie beam"}, "Concrete C30/37", "named both a footing and a beam"),
        ({"Name": "bearing 2"}, "Concrete C30/37", "of concrete, yet named a bearing"),
        ({"Name": "Anchor block 2"}, "Concrete C30/37", "of concrete, yet named an anchor"),
        ({"Name": "Pad 4"}, "Concrete C30/37", "of concrete, yet named a pad"),
    ],
)
def test_doubtful_beams_stay_in_scope_with_the_reason(
    named: dict[str, str], material: str, words: str
) -> None:
    beam = only_beam(read_one(material, **named))
    assert words in reasons(beam)
    assert all(reason.blocking for reason in beam.reasons)


def test_category_and_constituents_count() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="")
    concrete = building.entity("IfcMaterial", "Mix 7", None, "Concrete")
    steel = building.entity("IfcMaterial", "B500B", None, "Reinforcing steel")
    parts = [
        building.entity("IfcMaterialConstituent", None, None, one) for one in (concrete, steel)
    ]
    constituents = building.entity("IfcMaterialConstituentSet", "RC", None, parts)
    building.give_material(beam, constituents)
    found = only_beam(building.read())
    assert reasons(found) == ""
    assert found.material == "Mix 7, B500B"


def test_material_of_the_type_counts_where_the_beam_has_none() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="")
    defined = building.give_type(beam, Name="RB 300x500", PredefinedType="BEAM")
    building.give_material(defined, building.entity("IfcMaterial", "Concrete C40/50"))
    found = only_beam(building.read())
    assert reasons(found) == ""
    assert found.type_name == "RB 300x500"
    assert found.concrete_strength is not None
    assert found.concrete_strength.value == 40.0


def test_profile_set_usage_gives_material_and_steel_section() -> None:
    building = Building("IFC4")
    for title, section in (("S235 grade", "IPE 300"), ("Concrete C25/30", "300x500")):
        beam = building.beam(solid(building), material="")
        profile = building.rectangle(name=section)
        part = building.entity(
            "IfcMaterialProfile", None, None, building.entity("IfcMaterial", title), profile
        )
        whole = building.entity("IfcMaterialProfileSet", None, None, [part])
        building.give_material(beam, building.entity("IfcMaterialProfileSetUsage", whole, 5))
    model = building.read()
    (beam,), (left_out,) = model.beams, model.out_of_scope
    assert left_out.reason == "steel"
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == 25.0


@pytest.mark.parametrize(
    ("value", "in_scope"),
    [("Concrete, Cast-in-Place, C28/35", True), ("Metal - Steel 43-275", False)],
)
def test_a_property_that_names_the_material_counts_where_nothing_else_does(
    value: str, in_scope: bool
) -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="Default")
    label = building.file.create_entity("IfcLabel", value)
    building.give_set(beam, "Materials and Finishes", **{"Structural Material": label})
    model = building.read()
    assert len(model.beams) == in_scope
    if in_scope:
        assert reasons(only_beam(model)) == ""
        assert only_beam(model).concrete_strength.value == 28.0  # type: ignore[union-attr]
    else:
        assert only_left_out(model).evidence.startswith(
            "Materials and Finishes.Structural Material"
        )


def test_size_that_looks_like_a_steel_section_does_not_contradict_concrete() -> None:
    assert reasons(only_beam(read_one("Concrete C30/37", Name="W300x500"))) == ""
    assert only_left_out(read_one("", Name="W12x26")).reason == "steel"
    assert reasons(only_beam(read_one("Concrete C30/37", Name="bearing beam 3"))) == ""


def test_hosted_bars_mean_concrete() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="")
    assembly = building.member("IfcElementAssembly")
    bar = building.root("IfcReinforcingBar", NominalDiameter=16.0)
    building.give_parts(beam, assembly)
    building.give_parts(assembly, bar)
    found = only_beam(building.read())
    assert "material unknown" not in reasons(found)


def test_bars_in_timber_contradict_each_other() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="Timber C24")
    building.give_parts(beam, building.root("IfcReinforcingBar", NominalDiameter=16.0))
    assert "material contradictory: concrete (it hosts reinforcing bars)" in reasons(
        only_beam(building.read())
    )


def test_reinforcement_set_on_steel_proves_nothing() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="S355")
    label = building.file.create_entity("IfcLabel", "std")
    building.give_set(beam, "Pset_ReinforcementBarPitchOfBeam", Reference=label)
    assert only_left_out(building.read()).reason == "steel"


@pytest.mark.parametrize(
    "name", ["Post Tensioned Beam", "post_tensioned 600x900", "Pre stressed", "Hollow core 265"]
)
def test_words_for_prestress_may_be_written_apart(name: str) -> None:
    beam = only_beam(read_one("Concrete C30/37", Name=name))
    assert f'prestressed: named so in "{name}"' in reasons(beam)


@pytest.mark.parametrize("material", ["Concrete C16/20", "Beton C18/22"])
def test_a_low_class_of_concrete_is_no_timber(material: str) -> None:
    assert "contradictory" not in reasons(only_beam(read_one(material)))


@pytest.mark.parametrize("how", ["in the beam", "beside it", "by name", "hollow core", "by type"])
def test_prestressed_beams_are_told(how: str) -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building))
    if how == "in the beam":
        building.give_parts(beam, building.root("IfcTendon", NominalDiameter=15.2))
    elif how == "beside it":
        assembly = building.member("IfcElementAssembly")
        building.give_parts(assembly, beam, building.root("IfcTendon", NominalDiameter=15.2))
    elif how == "by name":
        beam.Name = "Prestressed girder"
    elif how == "by type":
        building.give_type(beam, Name="HC 265", PredefinedType="HOLLOWCORE")
    else:
        beam.PredefinedType = "HOLLOWCORE"
    assert "prestressed" in reasons(only_beam(building.read()))


def tendon(building: Building, at: tuple[float, float, float]) -> Any:
    """A straight tendon of 5 m along x, as a swept disk."""
    line = building.entity("IfcPolyline", [building.point(0, 0, 0), building.point(5000, 0, 0)])
    disk = building.entity("IfcSweptDiskSolid", line, 7.6 / building.mm)
    return building.member("IfcTendon", disk, placement=building.placement(at))


@pytest.mark.parametrize(("height", "found"), [(0.0, True), (200.0, True), (400.0, False)])
def test_tendon_tied_to_nothing_prestresses_the_beam_that_it_runs_in(
    height: float, found: bool
) -> None:
    building = Building("IFC4", "METRE")
    building.beam(solid(building))
    tendon(building, (500, 0, height))
    assert ("prestressed" in reasons(only_beam(building.read()))) is found


def test_tendon_without_a_place_is_a_doubt_of_the_model() -> None:
    building = Building("IFC4")
    building.beam(solid(building))
    building.member("IfcTendon")
    model = building.read()
    assert "1 tendons belong to no member" in model.remarks[0].text


# strength


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("C30/37", 30.0, 30.0),
        ("CONCRETE/C45/55", 45.0, 45.0),
        ("beton_C20/25", 20.0, 20.0),
        ("LC25/28", 25.0, 25.0),
        ("Concrete f'c = 5.900 KSI", 5900 * 0.00689475729, 5900 * 0.00689475729),
        ("Concrete, 4000 psi", 27.579, 27.579),
        ("4000-psi concrete", 27.579, 27.579),
        ("Concrete f'c = 40 MPa precast", 40.0, 40.0),
        ("fc' 35 MPa", 35.0, 35.0),
        ("35 N/mm2", 35.0, 35.0),
        ("HA-30/B/20/IIa", 30.0, 30.0),
        ("Concrete - B35", 28.0, 35.0),
        ("K35", 28.0, 35.0),
        ("M30 grade", 24.0, 30.0),
        ("Concrete C35 in situ", 28.0, 35.0),
        ("fcu = 40", 32.0, 32.0),
        ("Rck 37", 29.6, 29.6),
        ("RC25/30", 25.0, 25.0),
        ("Concrete RC25/30", 25.0, 25.0),
        ("BetonC25/30", 25.0, 25.0),
        ("RC40", 32.0, 40.0),
        ("25 N", 20.0, 25.0),
        ("Concrete 25N", 20.0, 25.0),
        ("Grade 25", 20.0, 25.0),
        ("Concrete f'c=4,000 psi", 27.579, 27.579),
        ("Concrete 4,000 psi", 27.579, 27.579),
        ("rebar 400MPa concrete 25MPa", 25.0, 25.0),
        ("concrete 25MPa rebar 400MPa", 25.0, 25.0),
        ("f'c 56d = 35 MPa", 35.0, 35.0),
        ("f'c 28 days 25 MPa", 25.0, 25.0),
        ("f'c 28-day = 25 MPa", 25.0, 25.0),
        ("f'c(28) = 25 MPa", 25.0, 25.0),
        ("f'c28 = 25 MPa", 25.0, 25.0),
        ("f'c 7d 20 MPa, f'c 28d 30 MPa", 20.0, 20.0),
        ("Concrete 25-30 MPa", 25.0, 25.0),
        ("Concrete 25 to 30 MPa", 25.0, 25.0),
        ("Concrete 30 MPa / 25 MPa", 25.0, 25.0),
        ("Concrete 250 kgf/cm2", 24.517, 24.517),
        ("Concrete 280 kg/cm2", 27.459, 27.459),
        ("fcu = 40 MPa", 32.0, 32.0),
        ("Concrete 4000 psi, Gr 60 bars", 27.579, 27.579),
        ("C30/37 (30 MPa)", 30.0, 30.0),
        ("C35 (35 MPa)", 35.0, 35.0),
        ("Concrete fc28 25", 25.0, 25.0),
        ("f'c = 4-5 ksi", 27.579, 27.579),
        ("Concrete 30-35-40 MPa", 30.0, 30.0),
        ("f'c 35 28d", 35.0, 35.0),
        ("f´c = 28", 28.0, 28.0),
        ("f’c = 210 kgf/cm2", 20.594, 20.594),
        ("Concrete cube strength 30 MPa", 24.0, 30.0),
        ("Concrete, cubes 30 N/mm2, f'c = 25", 25.0, 25.0),
    ],
)
def test_strength_in_a_name(text: str, low: float, high: float) -> None:
    reading = read_strength_text(text, "here")
    assert isinstance(reading, Reading)
    assert (reading.low, reading.high) == pytest.approx((low, high), rel=1e-4)


@pytest.mark.parametrize(
    "text",
    [
        "Concrete",
        "B500B",
        "FeB500",
        "C",
        "Mix 35",
        "B300x500",
        "R 300x500 2",
        "B35x60",
        "Beton C",
        "R 300/500",
        "40/80",
        "Concrete 300 wide",
        "Concrete 300x600",
        "Concrete 01",
        "Concrete density 2400 kg/m3",
        "Rebar 400 MPa",
        "Reinforced concrete",
        "Concrete exposure class 25",
    ],
)
def test_names_without_a_strength(text: str) -> None:
    assert read_strength_text(text, "here") is None


@pytest.mark.parametrize(
    "text",
    [
        "Concrete C.30/37",
        "Beton C30/60",
        "Concrete 4,5 ksi",
        "Concrete 27,5 MPa",
        "f'c = 27,5",
        "Concrete f'c as drawn",
        "Concrete30MPa",
        "Concrete 4 000 psi",
        "Concrete 4 MPa",
        "f'c = 4",
        "f'c = 4 / 40 mm",
        "f'c = 4, grout 40 MPa",
        "Concrete f'c 28d",
        "Concrete f´c as drawn",
        "Concrete M300",
        "Concrete N32",
        "Concrete H-25",
        "Concrete 3000#",
        "Concrete strength class 102",
        "Concrete 30",
        "Concrete - 4000",
        "Concrete with Grade 60 rebar",
        "Concrete, 400 MPa",
    ],
)
def test_strengths_that_cannot_be_read(text: str) -> None:
    assert isinstance(read_strength_text(text, "here"), Unread)


@pytest.mark.parametrize("text", ["S4", "X", "Type 3", "H-25", "400 MPa", "B500B", "25,5"])
def test_a_strength_class_that_is_not_understood(text: str) -> None:
    beam = with_strengths(strength_class=text)
    assert beam.concrete_strength is None
    assert beam.strength_reason is not None
    assert beam.strength_reason.blocking
    assert f'Pset_ConcreteElementGeneral.StrengthClass "{text}"' in beam.strength_reason.text
    both = with_strengths(strength_class=text, material="Concrete C50/60")
    assert both.concrete_strength is None or text == "400 MPa"


@pytest.mark.parametrize("text", ["-", "NOTDEFINED", "n/a", "<None>"])
def test_a_strength_class_that_nobody_set(text: str) -> None:
    beam = with_strengths(strength_class=text)
    assert beam.concrete_strength is None
    assert beam.strength_reason is None


@pytest.mark.parametrize(
    ("pressure", "material", "readable"),
    [
        (30.0, "Concrete C30/37", True),  # 30 MPa without its unit
        (25.0, "Concrete C30/37", False),  # perhaps 25 MPa
        (25.0e9, "Concrete C30/37", False),
        (400.0e6, "Concrete C30/37", True),  # the steel's
        (4.0e6, "Concrete C30/37", False),  # perhaps 4 ksi, 27.6 MPa
        (0.0, "Concrete C30/37", True),
    ],
)
def test_a_pressure_that_no_concrete_has(pressure: float, material: str, readable: bool) -> None:
    beam = with_strengths(pressure=pressure, material=material)
    assert (beam.concrete_strength is not None) is readable
    assert (beam.strength_reason is None) is readable
    assert "is no concrete strength" in beam.remarks[0].text


def test_several_strengths_in_one_text_are_told() -> None:
    beam = with_strengths(material="Concrete 25-30 MPa")
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == 25.0
    assert "several strengths (25, 30 MPa)" in beam.remarks[0].text


def with_strengths(
    *, strength_class: str = "", pressure: float | None = None, material: str = "Concrete"
) -> Beam:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="")
    make = building.file.create_entity
    one = building.entity("IfcMaterial", material)
    building.give_material(beam, one)
    if strength_class:
        label = make("IfcLabel", strength_class)
        building.give_set(beam, "Pset_ConcreteElementGeneral", StrengthClass=label)
    if pressure is not None:
        value = building.entity(
            "IfcPropertySingleValue",
            "CompressiveStrength",
            None,
            make("IfcPressureMeasure", pressure),
        )
        building.entity("IfcMaterialProperties", "Pset_MaterialConcrete", None, [value], one)
    return only_beam(building.read())


@pytest.mark.parametrize(
    ("given", "value", "words"),
    [
        ({"strength_class": "C30/37"}, 30.0, ""),
        ({"strength_class": "30"}, 24.0, "cube or a cylinder"),
        ({"strength_class": "30/37"}, 30.0, ""),
        ({"pressure": 3.5e7}, 35.0, ""),
        ({"pressure": 3.5e7, "material": "Concrete C35"}, 35.0, ""),
        ({"material": "Concrete C35"}, 28.0, "cube or a cylinder"),
        ({"strength_class": "C30/37", "material": "Concrete C25/30"}, 25.0, "differs"),
        ({"strength_class": "C25/30", "pressure": 4.0e7}, 25.0, "differs"),
        ({"strength_class": "C50/60", "material": "Concrete - B35"}, 28.0, "differs"),
        ({"strength_class": "C30/37", "pressure": 30.0}, 30.0, "is no concrete strength"),
    ],
)
def test_the_lowest_credible_strength_counts(
    given: dict[str, Any], value: float, words: str
) -> None:
    beam = with_strengths(**given)
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == pytest.approx(value)
    assert not beam.concrete_strength.assumed
    assert beam.concrete_strength.source
    texts = " ".join(remark.text for remark in beam.remarks)
    assert words in texts
    assert bool(words) == bool(beam.remarks)


def test_no_source_gives_no_strength() -> None:
    assert with_strengths().concrete_strength is None


def test_strength_in_wrong_units_is_not_used() -> None:
    """30 MPa written as 30 Pa."""
    beam = with_strengths(pressure=30.0)
    assert beam.concrete_strength is None
    assert beam.strength_reason is not None
    assert "is no concrete strength" in beam.remarks[0].text


def test_ifc2x3_mechanical_properties_of_a_material() -> None:
    building = Building("IFC2X3")
    beam = building.beam(solid(building), material="")
    one = building.entity("IfcMaterial", "Concrete")
    building.give_material(beam, one)
    building.entity(
        "IfcMechanicalConcreteMaterialProperties", Material=one, CompressiveStrength=3.2e7
    )
    building.entity("IfcGeneralMaterialProperties", Material=one, MassDensity=2350.0)
    found = only_beam(building.read())
    assert found.concrete_strength is not None
    assert found.concrete_strength.value == pytest.approx(32.0)
    assert found.concrete_density is not None
    assert found.concrete_density.value == pytest.approx(2350.0)


# cover and density


@pytest.mark.parametrize("unit", ["MILLIMETRE", "METRE", "INCH"])
def test_cover_in_the_models_unit(unit: str) -> None:
    building = Building("IFC4", unit)
    beam = building.beam(solid(building))
    cover = building.file.create_entity("IfcPositiveLengthMeasure", 40.0 / building.mm)
    building.give_set(beam, "Pset_ConcreteElementGeneral", ConcreteCover=cover)
    found = only_beam(building.read())
    assert found.cover is not None
    assert found.cover.value == pytest.approx(40.0)
    assert found.cover.source == "Pset_ConcreteElementGeneral.ConcreteCover"


def test_of_two_covers_the_thicker_counts() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building))
    make = building.file.create_entity
    building.give_set(
        beam,
        "Pset_ConcreteElementGeneral",
        ConcreteCover=make("IfcPositiveLengthMeasure", 30.0),
        ConcreteCoverAtLinks=make("IfcPositiveLengthMeasure", 45.0),
    )
    found = only_beam(building.read())
    assert found.cover is not None
    assert found.cover.value == 45.0


def test_cover_that_is_none_is_not_used() -> None:
    building = Building("IFC4", "METRE")
    beam = building.beam(solid(building))
    cover = building.file.create_entity("IfcPositiveLengthMeasure", 40.0)  # 40 m
    building.give_set(beam, "Pset_ConcreteElementGeneral", ConcreteCover=cover)
    found = only_beam(building.read())
    assert found.cover is None
    assert "is no cover" in found.remarks[0].text


def test_of_several_densities_the_least_and_the_greatest_are_kept() -> None:
    building = Building("IFC4")
    beam = building.beam(solid(building), material="")
    make = building.file.create_entity
    layers = []
    for name, density in (("Concrete C30/37", 2300.0), ("Heavy concrete C30/37", 3000.0)):
        one = building.entity("IfcMaterial", name)
        value = make("IfcMassDensityMeasure", density)
        single = building.entity("IfcPropertySingleValue", "MassDensity", None, value)
        building.entity("IfcMaterialProperties", "Pset_MaterialCommon", None, [single], one)
        layers.append(building.entity("IfcMaterialLayer", one, 100.0))
    building.give_material(beam, building.entity("IfcMaterialLayerSet", layers))
    found = only_beam(building.read())
    assert found.concrete_density is not None
    assert found.greatest_density is not None
    assert (found.concrete_density.value, found.greatest_density.value) == (2300.0, 3000.0)


def test_lightweight_concrete_of_unstated_density_is_a_doubt() -> None:
    beam = only_beam(read_one("LC30/33"))
    (reason,) = beam.reasons
    assert "lightweight" in reason.text
    assert not reason.blocking
    assert beam.concrete_density is None


def test_every_phrase_has_the_letters_by_which_names_without_any_are_passed_over() -> None:
    phrases = [
        phrase for words in (STEMS, USE_WORDS) for group in words.values() for phrase in group
    ]
    assert len(phrases) > 100
    assert [phrase for phrase in phrases if WORD.search(phrase) is None] == []
    assert families_named("B-12 x 4") == families_named("ab_12_cd") == frozenset()
