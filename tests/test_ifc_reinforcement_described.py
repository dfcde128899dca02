"""Reinforcement described by property sets: our own, and a project's through a mapping."""

from __future__ import annotations

from typing import Any

import pytest

from ifccheck.beam import BarGroup, DescribedZone, Reinforcement, StirrupGroup
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
