"""Reinforcement described by property sets: our own, and a project's through a mapping."""

from __future__ import annotations

import re
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.beam import BarGroup, DescribedZone, Reinforcement, StirrupGroup
from ifccheck.ifc.mapped import fits
from tests.barred_beams import ModelWithBars

OWN = "BeamRating_Reinforcement"


def described(
    values: dict[str, Any],
    name: str = OWN,
    mapping: dict[str, str] | None = None,
    unit: str = "mm",
) -> Reinforcement:
    model = ModelWithBars(unit=unit)
    beam = model.beam()
    made = {
        key: model.file.create_entity(*value) if isinstance(value, tuple) else value
        for key, value in values.items()
    }
    model.properties(beam, name, made)
    (source,) = model.read(beam, mapping).sources
    assert source.source == "properties"
    return source


def zone_of(*arguments: Any, **named: Any) -> DescribedZone:
    source = described(*arguments, **named)
    assert source.reasons == ()
    (zone,) = source.zones
    return zone


def test_all_of_our_own_set() -> None:
    zone = zone_of(
        {
            "TopBars": "2-20M + 2-15M",
            "BottomBars": "3-25M",
            "SideBars": "none",
            "Stirrups": "2 legs 10M @ 250",
            "Cover": ("IfcPositiveLengthMeasure", 40.0),
            "BarYield": ("IfcPressureMeasure", 400.0),
            "StirrupYield": ("IfcPressureMeasure", 300.0),
        }
    )
    # bar sizes of CSA G30.18, published
    assert zone.top == (BarGroup(2, "20M", 19.5, 300.0), BarGroup(2, "15M", 16.0, 200.0))
    assert zone.bottom == (BarGroup(3, "25M", 25.2, 500.0),)
    assert zone.side == ()
    assert zone.stirrups == StirrupGroup("10M", 11.3, 100.0, 250.0, 2)
    assert (zone.cover, zone.bar_yield, zone.stirrup_yield) == (40.0, 400.0, 300.0)
    assert (zone.start, zone.end) == (None, None)
    assert f"{OWN}.BottomBars" in zone.origin


def test_what_is_not_said_and_what_is_said_to_be_none_differ() -> None:
    zone = zone_of({"BottomBars": "3-25M", "Stirrups": "none", "TopBars": "  "})
    assert zone.top is None
    assert (zone.stirrups, zone.no_stirrups) == (None, True)
    zone = zone_of({"BottomBars": "3-25M"})
    assert (zone.stirrups, zone.no_stirrups) == (None, False)


@pytest.mark.parametrize(("unit", "cover"), [("mm", 40.0), ("m", 0.04), ("in", 40.0 / 25.4)])
@pytest.mark.parametrize("measure", ["IfcPositiveLengthMeasure", "IfcReal"])
def test_lengths_are_in_the_unit_of_the_model(unit: str, cover: float, measure: str) -> None:
    zone = zone_of({"BottomBars": "3-25M", "Cover": (measure, cover)}, unit=unit)
    assert zone.cover == pytest.approx(40.0)


def test_quantities_and_grades_as_texts() -> None:
    zone = zone_of({"BottomBars": "4#8", "Cover": "1.5 in", "BarYield": "Grade 60"})
    assert zone.cover == pytest.approx(38.1)
    assert zone.bar_yield == pytest.approx(413.7, abs=0.05)
    assert zone_of({"BottomBars": "4#8", "BarYield": "60 ksi"}).bar_yield == pytest.approx(
        413.685, abs=1e-2
    )


@pytest.mark.parametrize(
    ("key", "value", "part"),
    [
        ("BottomBars", "three big ones", "not bar notation"),
        ("BottomBars", "3-27M", "27M"),
        ("BottomBars", ("IfcReal", 3.0), "bar notation"),
        ("Stirrups", "10M @", "stirrup notation"),
        ("Stirrups", "10M @ -250", "spacing"),
        ("Cover", "40 kN", ""),
        ("Cover", ("IfcLengthMeasure", -5.0), "not between"),
        ("Cover", ("IfcBoolean", True), "length"),
        ("Cover", ("IfcForceMeasure", 40.0), "unit"),
        ("BarYield", ("IfcPressureMeasure", 400000.0), "not between"),
        ("BarYield", ("IfcReal", 60.0), "not between"),
        ("BarYield", "strong", ""),
    ],
)
def test_what_cannot_be_read_names_set_property_and_value(key: str, value: Any, part: str) -> None:
    source = described({"TopBars": "2-15M", key: value})
    (reason,) = source.reasons
    assert f"{OWN}.{key}" in reason.text
    assert part in reason.text
    assert reason.blocking
    if isinstance(value, str):
        assert value in reason.text


def test_a_set_of_the_projects_own_through_the_mapping() -> None:
    zone = zone_of(
        {
            "TopBars": "2x16",
            "BottomBars": "3x20",
            "StirrupDiameter": ("IfcPositiveLengthMeasure", 10.0),
            "Pitch": ("IfcPositiveLengthMeasure", 200.0),
            "Legs": ("IfcInteger", 4),
            "Steel": "B500B",
        },
        "Office.Beam",
        {
            "top": "Office.Beam.TopBars",
            "bottom": "Office.Beam.BottomBars",
            "stirrup_diameter": "Office.Beam.StirrupDiameter",
            "stirrup_spacing": "Office.Beam.Pitch",
            "stirrup_legs": "Office.Beam.Legs",
            "bar_yield": "Office.Beam.Steel",
        },
    )
    assert zone.top is not None
    assert (zone.top[0].count, zone.top[0].diameter) == (2, 16.0)
    assert zone.stirrups is not None
    assert (zone.stirrups.diameter, zone.stirrups.spacing, zone.stirrups.legs) == (10.0, 200.0, 4)
    assert zone.stirrups.area == pytest.approx(78.54, abs=0.01)
    assert zone.bar_yield == 500.0


def test_stirrup_diameter_by_designation() -> None:
    zone = zone_of(
        {"Size": "10M", "Pitch": "250 mm"},
        "Office",
        {"stirrup_diameter": "Office.Size", "stirrup_spacing": "Office.Pitch"},
    )
    assert zone.stirrups == StirrupGroup("10M", 11.3, 100.0, 250.0, None)


def test_legs_complete_a_notation_that_does_not_give_them() -> None:
    mapping = {"stirrups": "Office.S", "stirrup_legs": "Office.N"}
    values: dict[str, Any] = {"S": "10M @ 250", "N": ("IfcInteger", 4)}
    zone = zone_of(values, "Office", mapping)
    assert zone.stirrups is not None
    assert zone.stirrups.legs == 4
    values["S"] = "2 legs 10M @ 250"
    assert "legs" in described(values, "Office", mapping).reasons[0].text


def test_a_spacing_without_a_diameter_is_a_reason() -> None:
    source = described(
        {"Pitch": ("IfcLengthMeasure", 200.0)}, "Office", {"stirrup_spacing": "Office.Pitch"}
    )
    assert "without their diameter" in source.reasons[0].text


def test_two_sets_that_contradict_each_other_are_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, OWN, {"BottomBars": "3-25M"})
    model.properties(beam, "Office", {"Bottom": "4-25M"})
    found = model.read(beam, {"bottom": "Office.Bottom"})
    assert "says otherwise" in found.reasons
    model.properties(beam, "Other", {"Bottom": "3-25M"})
    assert model.read(beam, {"bottom": "Other.Bottom"}).reasons == ""


def test_the_set_may_be_on_the_type() -> None:
    model = ModelWithBars()
    beam = model.beam()
    value = model.file.create_entity("IfcLabel", "3-25M")
    item = model.file.create_entity("IfcPropertySingleValue", "BottomBars", None, value, None)
    held = model.root("IfcPropertySet", Name=OWN, HasProperties=[item])
    kind = model.root("IfcBeamType", HasPropertySets=[held], PredefinedType="BEAM")
    model.root("IfcRelDefinesByType", RelatedObjects=[beam], RelatingType=kind)
    (zone,) = model.read(beam).source("properties").zones
    assert zone.bottom == (BarGroup(3, "25M", 25.2, 500.0),)


def test_beams_without_such_sets_have_no_such_source() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, "Pset_ReinforcementBarPitchOfBeam", {"Reference": "R1"})
    assert model.read(beam, {"top": "Office.Top"}).sources == ()


# Properties of the project's own, of every kind ------------------------------------------------


def held(model: ModelWithBars, owner: Any, name: str, *items: Any) -> Any:
    """A set of properties that are given as entities."""
    made = model.root("IfcPropertySet", Name=name, HasProperties=list(items))
    if owner is not None:
        model.root(
            "IfcRelDefinesByProperties", RelatedObjects=[owner], RelatingPropertyDefinition=made
        )
    return made


def labels(model: ModelWithBars, *texts: str) -> list[Any]:
    return [model.file.create_entity("IfcLabel", text) for text in texts]


def single(model: ModelWithBars, name: str, measure: str, value: Any, unit: Any = None) -> Any:
    create = model.file.create_entity
    return create("IfcPropertySingleValue", name, None, create(measure, value), unit)


@pytest.mark.parametrize(
    "place",
    ["Office.Bars bottom", "Off*.Bars bottom", "*.*bottom", "Office.*", "*ice.Bars*", "O*e.*b*m"],
)
def test_names_may_hold_wildcards(place: str) -> None:
    zone = zone_of({"Bars bottom": "3-25M"}, "Office", {"bottom": place})
    assert zone.bottom == (BarGroup(3, "25M", 25.2, 500.0),)
    assert zone.origin == "Office.Bars bottom"


@given(st.text("ab*", max_size=6), st.text("ab", max_size=8))
def test_wildcards_are_those_of_a_regular_expression(pattern: str, name: str) -> None:
    expected = re.fullmatch(".*".join(map(re.escape, pattern.split("*"))), name)
    assert fits(pattern, name) == (expected is not None)


@pytest.mark.parametrize("place", ["office.Bars bottom", "Office.Bars", "*.bottom", "Of.*", "x*.*"])
def test_a_pattern_that_does_not_fit_reads_nothing(place: str) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, "Office", {"Bars bottom": "3-25M"})
    assert model.read(beam, {"bottom": place}).sources == ()


def test_a_pattern_that_finds_two_differing_values_is_a_reason_that_names_both() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, "Office 1", {"Bottom": "3-25M"})
    model.properties(beam, "Office 2", {"Bottom": "5-25M"})
    reasons = model.read(beam, {"bottom": "Office*.Bottom"}).reasons
    for part in ("Office 1.Bottom", "Office 2.Bottom", "'3-25M'", "'5-25M'"):
        assert part in reasons
    assert model.read(beam, {"bottom": "*1.Bottom"}).reasons == ""


def test_a_pattern_that_finds_the_same_twice_reads_it() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.properties(beam, "Office 1", {"Bottom": "3-25M"})
    model.properties(beam, "Office 2", {"Bottom": "3x25M"})
    (zone,) = model.read(beam, {"bottom": "Office*.Bottom"}).source("properties").zones
    assert zone.bottom == (BarGroup(3, "25M", 25.2, 500.0),)


def test_two_sets_of_one_name_that_differ_are_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    for text in ("3-25M", "5-25M"):
        model.properties(beam, OWN, {"BottomBars": text})
    assert "says otherwise: '3-25M'" in model.read(beam).reasons


def test_a_property_of_the_beam_goes_before_that_of_its_type() -> None:
    model = ModelWithBars()
    beam = model.beam()
    values = {"Bottom": "5-25M", "Top": "2-20M"}
    of_type = held(model, None, "Office", *(single(model, key, "IfcLabel", text)
                                            for key, text in values.items()))  # fmt: skip
    kind = model.root("IfcBeamType", HasPropertySets=[of_type], PredefinedType="BEAM")
    model.root("IfcRelDefinesByType", RelatedObjects=[beam], RelatingType=kind)
    model.properties(beam, "Office", {"Bottom": "3-25M"})
    found = model.read(beam, {"bottom": "Off*.Bottom", "top": "*.Top"})
    assert found.reasons == ""
    (zone,) = found.source("properties").zones
    assert zone.bottom == (BarGroup(3, "25M", 25.2, 500.0),)
    assert zone.top == (BarGroup(2, "20M", 19.5, 300.0),)


@pytest.mark.parametrize(
    ("measure", "value", "unit", "cover"),
    [
        ("IfcReal", 4.0, "CENTI", 40.0),
        ("IfcPositiveLengthMeasure", 4.0, "CENTI", 40.0),
        ("IfcLengthMeasure", 0.04, None, 40.0),
        ("IfcInteger", 35, "MILLI", 35.0),
    ],
)
def test_a_value_with_a_unit_of_its_own_goes_against_the_projects(
    measure: str, value: Any, unit: str | None, cover: float
) -> None:
    model = ModelWithBars(unit="in")
    beam = model.beam()
    own = model.file.create_entity("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=unit, Name="METRE")
    bars = single(model, "Bottom", "IfcLabel", "3-25M")
    held(model, beam, "Office", single(model, "Cover", measure, value, own), bars)
    mapping = {"cover": "Office.Cover", "bottom": "Office.Bottom"}
    (zone,) = model.read(beam, mapping).source("properties").zones
    assert zone.cover == pytest.approx(cover)


def test_a_unit_of_another_kind_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    newton = model.file.create_entity("IfcSIUnit", UnitType="FORCEUNIT", Name="NEWTON")
    for measure in ("IfcReal", "IfcLengthMeasure"):
        held(model, beam, "Office", single(model, "Cover", measure, 40.0, newton))
    assert model.read(beam, {"cover": "Office.Cover"}).reasons.count("its unit is none of") == 2


def listed(kind: str, *entries: Any, field: str = "bottom") -> Reinforcement:
    """What is read of a property of several values."""
    model = ModelWithBars()
    beam = model.beam()
    values = [
        model.file.create_entity(*entry) if isinstance(entry, tuple) else labels(model, entry)[0]
        for entry in entries
    ]
    held(model, beam, "Office", model.file.create_entity(kind, "Value", None, values))
    (source,) = model.read(beam, {field: "Office.Value"}).sources
    return source


def test_the_bars_of_a_list_are_added_up_and_that_is_said() -> None:
    source = listed("IfcPropertyListValue", "3-25M", "2-20M")
    assert source.reasons == ()
    assert source.zones[0].bottom == (
        BarGroup(3, "25M", 25.2, 500.0), BarGroup(2, "20M", 19.5, 300.0),
    )  # fmt: skip
    (remark,) = source.remarks
    assert "the bars of its list are added up" in remark.text
    assert remark.kind == "assumption"


@pytest.mark.parametrize(
    ("kind", "entries", "field", "part"),
    [
        ("IfcPropertyListValue", ("3-25M", "3-25M"), "bottom", "25M more than once"),
        ("IfcPropertyListValue", ("2-25M", "4-25M", "2-20M"), "top", "25M more than once"),
        ("IfcPropertyListValue", ("10M @ 150", "10M @ 250"), "stirrups", "different values"),
        ("IfcPropertyListValue", (("IfcLengthMeasure", 40.0), ("IfcLengthMeasure", 50.0)), "cover",
         "different values"),
        ("IfcPropertyListValue", ("400W", "300W"), "bar_yield", "different values"),
        ("IfcPropertyEnumeratedValue", ("3-25M", "4-25M"), "bottom", "several choices"),
        ("IfcPropertyListValue", (("IfcInteger", 3), ("IfcInteger", 25)), "bottom", "notation"),
    ],
)  # fmt: skip
def test_several_values_that_do_not_agree_are_a_reason(
    kind: str, entries: tuple[Any, ...], field: str, part: str
) -> None:
    source = listed(kind, *entries, field=field)
    (reason,) = source.reasons
    assert part in reason.text
    assert reason.blocking


def test_several_values_that_agree_are_one() -> None:
    length = ("IfcLengthMeasure", 40.0)
    assert listed("IfcPropertyListValue", length, length, field="cover").zones[0].cover == 40.0
    zone = listed("IfcPropertyListValue", "10M @ 150", "10M @ 150 mm", field="stirrups").zones[0]
    assert zone.stirrups == StirrupGroup("10M", 11.3, 100.0, 150.0, None)
    one = listed("IfcPropertyEnumeratedValue", "3-25M").zones[0]
    assert one.bottom == (BarGroup(3, "25M", 25.2, 500.0),)


@pytest.mark.parametrize("bounds", [(30.0, 50.0), (None, 40.0), (40.0, None)])
def test_a_range_is_a_reason(bounds: tuple[float | None, float | None]) -> None:
    model = ModelWithBars()
    beam = model.beam()
    create = model.file.create_entity
    low, high = (None if b is None else create("IfcLengthMeasure", b) for b in bounds)
    held(model, beam, "Office", create("IfcPropertyBoundedValue", "Cover", None, high, low))
    assert "it gives a range" in model.read(beam, {"cover": "Office.Cover"}).reasons


def test_a_table_and_a_reference_are_reasons() -> None:
    model = ModelWithBars()
    beam = model.beam()
    create = model.file.create_entity
    keys, bars = labels(model, "start", "middle"), labels(model, "2-25M", "4-25M")
    date = create("IfcTable", "Bars")
    held(model, beam, "Office", create("IfcPropertyTableValue", "Bottom", None, keys, bars),
         create("IfcPropertyReferenceValue", "Top", None, None, date))  # fmt: skip
    found = model.read(beam, {"bottom": "Office.Bottom", "top": "Office.T*"})
    assert "property Office.Bottom" in found.reasons
    assert "it holds a table" in found.reasons
    assert "it refers to something else" in found.reasons
