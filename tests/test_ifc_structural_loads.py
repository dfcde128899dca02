"""Loads of structural analysis models: read by hand from what was written, on whichever beam."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from ifccheck.beam import LaidAction, Model, ModelCase
from tests.ifc_models import Building
from tests.structural_models import POUND_FORCE, Analysis

UNITS = [("IFC2X3", "METRE", "kN"), ("IFC4", "INCH", "lbf"), ("IFC4X3", "FOOT", "kip"),
         ("IFC4", "MILLIMETRE", "N")]  # fmt: skip
DOWN = {"z": -10.0}


class Hall:
    """A beam of 300 x 600 from (0, 0, 3000) on, along x or up a slope, and an analysis model."""

    def __init__(
        self, schema: str = "IFC4", unit: str = "MILLIMETRE", force: str = "kN",
        along: tuple[float, float, float] = (1.0, 0.0, 0.0), declared: bool = True,
        beams: int = 1, shared: Any = None,
    ) -> None:  # fmt: skip
        self.building = Building(schema, unit)
        self.beams = [self._beam(n, along) for n in range(beams)]
        placement = self.building.placement(*shared) if shared else None
        self.analysis = Analysis(
            self.building.file, self.building.mm, self.building.history, force, declared, placement
        )

    def _beam(self, number: int, along: tuple[float, float, float]) -> Any:
        made = self.building
        place = made.placement((6000.0 * number, 0.0, 3000.0), along, (0.0, 1.0, 0.0))
        solid = made.extrusion(made.rectangle(300.0, 600.0), 6000.0)
        return made.beam(solid, placement=place, Name=f"B-{number + 1}")

    def read(self) -> Model:
        return self.building.read()


def only(model: Model) -> LaidAction:
    (laid,) = model.loads.laid
    return laid


def case_of(model: Model, name: str) -> ModelCase:
    (case,) = [case for case in model.loads.cases if case.name == name]
    return case


def doubts(model: Model) -> str:
    return "; ".join(doubt.text for doubt in model.loads.doubts)


@pytest.mark.parametrize(("schema", "unit", "force"), UNITS)
@pytest.mark.parametrize("ends", [(0.0, 6000.0), (6000.0, 0.0)], ids=["same way", "reversed"])
@pytest.mark.parametrize("tied", [None, "member to beam", "beam to member"])
def test_a_line_load_reaches_the_beam_in_every_schema_and_unit(
    schema: str, unit: str, force: str, ends: tuple[float, float], tied: str | None
) -> None:
    hall = Hall(schema, unit, force)
    analysis, (beam,) = hall.analysis, hall.beams
    high = 3000.0 if tied is None else 3450.0  # a tied member may lie off the beam's body
    member = analysis.member((ends[0], 0.0, high), (ends[1], 0.0, high))
    if tied == "member to beam":
        analysis.tie(member, beam)
    elif tied:
        analysis.tie(beam, member)
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live", "VARIABLE_Q"))
    model = hall.read()
    laid = only(model)
    assert (laid.case, laid.kind) == ("Live", "line")
    assert laid.values == pytest.approx((10.0, 10.0))
    assert (laid.start, laid.end) == pytest.approx((0.0, 6000.0))
    assert laid.origin.startswith("IfcStructuralLinearAction 'Line' (#")
    assert case_of(model, "Live").actions == 1
    assert case_of(model, "Live").permanent is False
    assert not model.loads.doubts
    assert not case_of(model, "Live").lost


def test_the_relation_of_ifc2x3_between_an_element_and_its_member_ties_too() -> None:
    hall = Hall("IFC2X3", "FOOT", "kip")
    analysis = hall.analysis
    member = analysis.member((0, 0, 3450), (6000, 0, 3450))
    analysis.root(
        "IfcRelConnectsStructuralElement", RelatingElement=hall.beams[0],
        RelatedStructuralMember=member,
    )  # fmt: skip
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live"))
    model = hall.read()
    assert only(model).values == pytest.approx((10.0, 10.0))
    assert not model.loads.doubts


def test_a_tied_member_beside_the_beam_asks_for_torsion() -> None:
    hall = Hall()
    analysis = hall.analysis
    member = analysis.member((0, 600, 3000), (6000, 600, 3000))
    analysis.tie(member, hall.beams[0])
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live"))
    model = hall.read()
    assert only(model).values == pytest.approx((10.0, 10.0))
    assert "it lies beside the beam: torsion is not checked" in doubts(model)


def test_a_member_that_is_not_tied_and_lies_off_the_body_reaches_no_beam() -> None:
    hall = Hall()
    member = hall.analysis.member((0.0, 0.0, 3450.0), (6000.0, 0.0, 3450.0))
    hall.analysis.along(member, hall.analysis.linear(**DOWN), hall.analysis.case("Live"))
    model = hall.read()
    assert not model.loads.laid
    assert case_of(model, "Live").lost == (
        "60.0 kN of 60.0 kN act on no beam in scope, or beyond the ends of the beams",
    )


@pytest.mark.parametrize(("schema", "unit", "force"), UNITS[1:])
def test_a_varying_load_over_a_part(schema: str, unit: str, force: str) -> None:
    """From 4 N/mm at 1.2 m to 9 N/mm at 4.8 m of a member that runs the other way."""
    hall = Hall(schema, unit, force)
    analysis = hall.analysis
    member = analysis.member((6000.0, 0.0, 3000.0), (0.0, 0.0, 3000.0))
    load = analysis.configured({1200.0: analysis.linear(z=-4.0), 4800.0: analysis.linear(z=-9.0)})
    analysis.along(member, load, analysis.case("Live"), kind="LINEAR")
    laid = only(hall.read())
    assert (laid.start, laid.end) == pytest.approx((1200.0, 4800.0))
    assert laid.values == pytest.approx((9.0, 4.0))


def varying_action(hall: Hall, places: tuple[float, ...], values: tuple[float, ...]) -> None:
    """An action of IFC2X3 with a load at each of some places."""
    analysis = hall.analysis
    member = analysis.member((0.0, 0.0, 3000.0), (6000.0, 0.0, 3000.0))
    points = [analysis.make("IfcVertexPoint", analysis.point(x, 0, 3000)) for x in places]
    shape = analysis.make("IfcTopologyRepresentation", analysis.context, "Loads", "Vertex", points)
    aspect = analysis.make("IfcShapeAspect", [shape], None, None, False, member.Representation)
    first, *others = (analysis.linear(z=-value) for value in values)
    action = analysis.root(
        "IfcStructuralLinearActionVarying", Name="Heap", AppliedLoad=first,
        GlobalOrLocal="GLOBAL_COORDS", DestabilizingLoad=False, ProjectedOrTrue="TRUE_LENGTH",
        VaryingAppliedLoadLocation=aspect, SubsequentAppliedLoads=others,
    )  # fmt: skip
    analysis.root(
        "IfcRelConnectsStructuralActivity", RelatingElement=member, RelatedStructuralActivity=action
    )
    analysis.group(analysis.case("Live"), action)


def test_a_varying_linear_action_of_ifc2x3() -> None:
    hall = Hall("IFC2X3", "METRE", "kN")
    varying_action(hall, (0.0, 3000.0, 6000.0), (1.0, 5.0, 2.0))
    first, second = hall.read().loads.laid
    assert (first.start, first.end, second.end) == pytest.approx((0.0, 3000.0, 6000.0))
    assert (*first.values, *second.values) == pytest.approx((1.0, 5.0, 5.0, 2.0))


@pytest.mark.parametrize("places", [(0.0, 6000.0), (6000.0, 3000.0, 0.0), (0.0, 3000.0, 9000.0)])
def test_varying_places_that_make_no_sense_drop_no_load(places: tuple[float, ...]) -> None:
    hall = Hall("IFC2X3", "METRE", "kN")
    varying_action(hall, places, (1.0, 5.0, 2.0))
    model = hall.read()
    assert not model.loads.laid
    assert "cannot be read" in doubts(model)


def test_short_members_count_on_the_beam_that_they_lie_in_alone() -> None:
    """Sixty members of 100 mm along the first of two beams that meet."""
    hall = Hall("IFC4", "METRE", beams=2)
    analysis, case = hall.analysis, hall.analysis.case("Live")
    for n in range(60):
        member = analysis.member((100.0 * n, 0, 3000), (100.0 * (n + 1), 0, 3000), name=f"M-{n}")
        analysis.along(member, analysis.linear(**DOWN), case)
    model = hall.read()
    assert {one.beam for one in model.loads.laid} == {model.beams[0].key}
    forces = [one.values[0] * (one.end - one.start) for one in model.loads.laid]
    assert sum(forces) == pytest.approx(60e3)
    assert not case_of(model, "Live").lost


@pytest.mark.parametrize("kind", ["POLYGONAL", "EQUIDISTANT"])
def test_a_polygon_of_loads(kind: str) -> None:
    hall = Hall()
    analysis = hall.analysis
    member = analysis.member((0.0, 0.0, 3000.0), (6000.0, 0.0, 3000.0))
    values = [analysis.linear(z=-value) for value in (2.0, 8.0, 4.0)]
    load = analysis.configured(list(zip((0.0, 3000.0, 6000.0), values, strict=True)))
    if kind == "EQUIDISTANT":
        load.Locations = None
    analysis.along(member, load, analysis.case("Live"), kind=kind)
    first, second = hall.read().loads.laid
    assert (first.start, first.end, second.end) == pytest.approx((0.0, 3000.0, 6000.0))
    assert (*first.values, *second.values) == pytest.approx((2.0, 8.0, 8.0, 4.0))


def test_single_forces_along_a_member() -> None:
    hall = Hall("IFC4X3", "FOOT", "kip")
    analysis = hall.analysis
    member = analysis.member((6000.0, 0.0, 3000.0), (0.0, 0.0, 3000.0))
    load = analysis.configured({1000.0: analysis.single(z=-5e3), 2500.0: analysis.single(z=-7e3)})
    analysis.along(member, load, analysis.case("Live"), kind="DISCRETE")
    found = [(one.kind, round(one.start, 6), *one.values) for one in hall.read().loads.laid]
    assert found == [
        ("point", 5000.0, pytest.approx(5e3), pytest.approx(5e3)),
        ("point", 3500.0, pytest.approx(7e3), pytest.approx(7e3)),
    ]


def test_an_action_with_a_line_and_one_with_a_point_of_its_own() -> None:
    hall = Hall("IFC4", "INCH", "lbf")
    analysis = hall.analysis
    member, case = analysis.member((0, 0, 3000), (6000, 0, 3000)), analysis.case("Live")
    part = analysis.edge((3500.0, 0.0, 3000.0), (1500.0, 0.0, 3000.0))
    analysis.along(member, analysis.linear(z=-3.0), case, shape=part)
    analysis.at(member, analysis.single(z=-9e3), case, shape=analysis.vertex((2100, 0, 3000)))
    line, point = sorted(hall.read().loads.laid)
    assert (line.start, line.end) == pytest.approx((1500.0, 3500.0))
    assert (point.kind, point.start) == ("point", pytest.approx(2100.0))
    assert point.values[0] == pytest.approx(9e3)


@pytest.mark.parametrize("projected", [True, False])
def test_a_projected_load_on_a_slope_counts_per_true_length(projected: bool) -> None:
    """Rise 3 to 4 along: 10 N/mm of plan are 8 N/mm of the beam, 48 kN on 4.8 m of plan."""
    hall = Hall("IFC4X3", "METRE", "kN", along=(0.8, 0.0, 0.6))
    analysis = hall.analysis
    member = analysis.member((0.0, 0.0, 3000.0), (4800.0, 0.0, 6600.0))
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Snow"), projected=projected)
    model = hall.read()
    laid = only(model)
    assert laid.values == pytest.approx((8.0, 8.0) if projected else (10.0, 10.0))
    assert (laid.start, laid.end) == pytest.approx((0.0, 6000.0))
    assert not model.loads.doubts


def test_local_axes_of_a_member() -> None:
    """Its own z is the beam's up; across a slope it acts along the building too."""
    hall = Hall()
    analysis = hall.analysis
    member = analysis.member((6000.0, 0.0, 3000.0), (0.0, 0.0, 3000.0), axis=(0.0, 0.0, 1.0))
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live"), local=True)
    assert only(hall.read()).values == pytest.approx((10.0, 10.0))
    hall = Hall(along=(0.8, 0.0, 0.6))
    member = hall.analysis.member((0, 0, 3000), (4800, 0, 6600), axis=(0, 0, 1))
    hall.analysis.along(
        member, hall.analysis.linear(**DOWN), hall.analysis.case("Wind"), local=True
    )
    model = hall.read()
    assert only(model).values == pytest.approx((8.0, 8.0))
    assert "acts sideways or along the beam" in doubts(model)


def test_local_axes_of_ifc2x3_are_not_told() -> None:
    hall = Hall("IFC2X3")
    member = hall.analysis.member((0.0, 0.0, 3000.0), (6000.0, 0.0, 3000.0))
    hall.analysis.along(
        member, hall.analysis.linear(**DOWN), hall.analysis.case("Live"), local=True
    )
    model = hall.read()
    assert not model.loads.laid
    assert "cannot be read" in doubts(model)


@pytest.mark.parametrize("schema", ["IFC4", "IFC4X3"])
def test_factors_multiply_from_group_to_group(schema: str) -> None:
    """-0.5 by the relation, 2 by the group's coefficient, 3 by the relation to the case."""
    hall = Hall(schema)
    analysis = hall.analysis
    member, case = analysis.member((0, 0, 3000), (6000, 0, 3000)), analysis.case("Live")
    group = analysis.load_group("Part", Coefficient=2.0)
    action = analysis.along(member, analysis.linear(**DOWN))
    analysis.group(group, action, factor=-0.5)
    analysis.group(case, group, factor=3.0)
    combination = analysis.load_group("Strength", "LOAD_COMBINATION")
    analysis.group(combination, case, factor=1.5)
    model = hall.read()
    laid = only(model)
    assert laid.case == "Live"
    assert laid.values == pytest.approx((-30.0, -30.0))
    assert laid.acts_upward
    assert "factor -3 included" in laid.text


def test_a_case_has_its_own_coefficient_and_says_so() -> None:
    hall = Hall("IFC4X3")
    analysis = hall.analysis
    member = analysis.member((0, 0, 3000), (6000, 0, 3000))
    case = analysis.case("Live", Coefficient=0.5)
    analysis.along(member, analysis.linear(**DOWN), case)
    model = hall.read()
    assert only(model).values == pytest.approx((5.0, 5.0))
    assert case_of(model, "Live").notes == ("its coefficient 0.5 is in the loads",)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_a_group_of_the_same_name_leads_to_the_case(schema: str) -> None:
    hall = Hall(schema)
    analysis = hall.analysis
    member = analysis.member((0, 0, 3000), (6000, 0, 3000))
    analysis.case("LC 2 - Live", Coefficient=2.0)
    analysis.along(member, analysis.linear(**DOWN), analysis.load_group("LC 2 - Live"))
    model = hall.read()
    assert only(model).case == "LC 2 - Live"
    assert only(model).values == pytest.approx((20.0, 20.0))
    case = case_of(model, "LC 2 - Live")
    assert case.actions == 1
    assert "1 action: reached only through a group of the same name" in case.notes


def test_a_group_that_no_case_holds_stands_for_itself() -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(**DOWN), hall.analysis.load_group("Roof"))
    assert only(hall.read()).case == "Roof"


def test_an_action_of_no_case_is_counted() -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(**DOWN))
    model = hall.read()
    assert only(model).case == ""
    assert case_of(model, "").actions == 1


def test_self_weight_of_a_case_is_told_and_not_taken() -> None:
    hall = Hall("IFC4")
    hall.analysis.case("Dead", "PERMANENT_G", SelfWeightCoefficients=[0.0, 0.0, -1.0])
    model = hall.read()
    (note,) = case_of(model, "Dead").notes
    assert "self weight (coefficients 0, 0, -1) is not taken" in note
    assert case_of(model, "Dead").permanent is True
    assert not model.loads.laid


def test_one_member_over_two_beams_and_beyond() -> None:
    """From 1 m before the first to 2 m beyond the second, with a load that grows by 1 per metre."""
    hall = Hall("IFC4X3", "METRE", beams=2)
    analysis = hall.analysis
    member = analysis.member((-1000.0, 0.0, 3000.0), (14000.0, 0.0, 3000.0))
    load = analysis.configured({0.0: analysis.linear(z=0.0), 15000.0: analysis.linear(z=-15.0)})
    analysis.along(member, load, analysis.case("Live"), kind="LINEAR")
    model = hall.read()
    first, second = model.loads.laid
    assert (first.start, first.end) == pytest.approx((-1000.0, 14000.0))
    assert (second.start, second.end) == pytest.approx((-7000.0, 8000.0))
    (lost,) = case_of(model, "Live").lost
    total = 15.0 * 15.0 / 2.0
    beyond = 0.95**2 / 2.0 + (15.0**2 - 13.05**2) / 2.0  # 50 mm of tolerance at either end
    assert lost.startswith(f"{beyond:.1f} kN of {total:.0f} kN act on no beam")


def test_nodes_within_a_beam_at_its_end_and_elsewhere() -> None:
    hall = Hall("IFC4", "FOOT", "kip")
    analysis, case = hall.analysis, hall.analysis.case("Plant")
    for place in ((2000.0, 0.0, 3000.0), (6000.0, 0.0, 3000.0), (2000.0, 4000.0, 3000.0)):
        analysis.at(analysis.node(place), analysis.single(z=-8e3), case)
    model = hall.read()
    assert sorted(one.start for one in model.loads.laid) == pytest.approx([2000.0, 6000.0])
    assert case_of(model, "Plant").lost[0].startswith("8.00 kN of 24.0 kN act on no beam")


def test_a_moment_about_the_beams_own_horizontal_and_what_twists_it() -> None:
    """+12 kN*m about Y turns z into x: clockwise seen with the start to the left, so -12."""
    hall = Hall("IFC4X3", "METRE", "kN")
    analysis, case = hall.analysis, hall.analysis.case("Plant")
    member = analysis.member((6000.0, 0.0, 3000.0), (0.0, 0.0, 3000.0))
    place = analysis.vertex((1500.0, 0.0, 3000.0))
    analysis.at(member, analysis.single(my=12e6), case, shape=place)
    model = hall.read()
    laid = only(model)
    assert (laid.kind, laid.start) == ("moment", pytest.approx(1500.0))
    assert laid.values[0] == pytest.approx(-12e6)
    assert not model.loads.doubts
    analysis.at(member, analysis.single(z=-1e3, mx=2e6), case, shape=place)
    assert "twists the beam or bends it sideways" in doubts(hall.read())


@pytest.mark.parametrize(
    ("components", "told"),
    [
        ({"x": 3.0, "z": -10.0}, "acts sideways or along the beam"),
        ({"y": 3.0}, "acts sideways or along the beam"),
        ({"z": -10.0, "mx": 50.0}, "has moments per length"),
    ],
)
def test_what_does_not_act_downward_is_a_doubt(components: dict[str, float], told: str) -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(**components), hall.analysis.case("Wind"))
    model = hall.read()
    assert told in doubts(model)
    down = -components.get("z", 0.0)
    assert [one.values[0] for one in model.loads.laid] == ([pytest.approx(down)] if down else [])


def test_the_placement_that_all_items_share_moves_and_turns_them() -> None:
    """The analysis model has its own axes: turned by 90 degrees, moved by (0, 0, 3000)."""
    hall = Hall("IFC4X3", shared=((0.0, 0.0, 3000.0), (0.0, 0.0, 1.0), (0.0, 1.0, 0.0)))
    analysis = hall.analysis
    member = analysis.member((0.0, 0.0, 0.0), (0.0, -6000.0, 0.0))
    analysis.along(member, analysis.linear(z=-10.0, x=2.0), analysis.case("Live"))
    model = hall.read()
    assert (only(model).start, only(model).end) == pytest.approx((0.0, 6000.0))
    assert only(model).values == pytest.approx((10.0, 10.0))
    assert "acts sideways" in doubts(model)


@pytest.mark.parametrize(
    ("unit", "force", "value", "doubtful"),
    [
        ("METRE", "N", 10.0, False),  # N/m either way
        ("METRE", "kN", 10.0, True),  # kN/m is more than N/m
        ("MILLIMETRE", "N", 10.0, True),  # N/mm is more than N/m
    ],
)
def test_a_unit_of_force_per_length_that_is_not_declared_is_a_doubt(
    unit: str, force: str, value: float, doubtful: bool
) -> None:
    hall = Hall("IFC4", unit, force, declared=False)
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(z=-value), hall.analysis.case("Live"))
    model = hall.read()
    assert only(model).values[0] == pytest.approx(value)
    assert ("declares no unit of force per length" in doubts(model)) is doubtful


def test_actions_on_surfaces_are_told_apart() -> None:
    hall = Hall("IFC4X3")
    hall.analysis.over(hall.analysis.surface(), hall.analysis.case("Live"))
    model = hall.read()
    assert not model.loads.laid
    assert case_of(model, "Live").uncarried == ("1 action: on a surface, not carried to beams",)


@pytest.mark.parametrize("kind", ["SINUS", "PARABOLA", "USERDEFINED"])
def test_a_course_of_loads_that_is_not_read_is_a_doubt_of_the_beam(kind: str) -> None:
    hall = Hall()
    analysis = hall.analysis
    member = analysis.member((0, 0, 3000), (6000, 0, 3000))
    load = analysis.configured({0.0: analysis.linear(**DOWN), 6000.0: analysis.linear(**DOWN)})
    analysis.along(member, load, analysis.case("Live"), kind=kind)
    model = hall.read()
    assert not model.loads.laid
    assert f"values that are {kind} are not read" in doubts(model)


def test_a_member_that_is_tied_and_runs_across_is_a_doubt() -> None:
    hall = Hall()
    member = hall.analysis.member((3000, -2000, 3000), (3000, 2000, 3000))
    hall.analysis.tie(member, hall.beams[0])
    hall.analysis.along(member, hall.analysis.linear(**DOWN), hall.analysis.case("Live"))
    model = hall.read()
    assert not model.loads.laid
    assert "does not run along the beam that it is tied to" in doubts(model)


def test_a_column_member_under_the_end_is_no_beam() -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 0), (0, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(x=5.0), hall.analysis.case("Wind"))
    model = hall.read()
    assert not model.loads.laid
    assert not model.loads.doubts


def test_a_model_without_analysis_has_none() -> None:
    building = Building()
    building.beam(building.extrusion(building.rectangle(), 6000.0))
    assert building.read().loads.cases == ()


def test_pounds_per_inch_by_hand() -> None:
    """100 lbf/in are 17.51 kN/m."""
    hall = Hall("IFC4", "INCH", "lbf")
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    load = hall.analysis.make("IfcStructuralLoadLinearForce", LinearForceZ=-100.0)
    hall.analysis.along(member, load, hall.analysis.case("Live"))
    assert only(hall.read()).values[0] == pytest.approx(100.0 * POUND_FORCE / 25.4)
    assert math.isclose(100.0 * POUND_FORCE / 25.4, 17.5127, rel_tol=1e-5)


def near(model: Model) -> list[str]:
    return [doubt.text for doubt in model.loads.doubts if doubt.only_near]


def test_a_member_that_runs_near_a_beam_and_on_none_is_a_doubt_of_that_beam() -> None:
    """An analysis model at the height of the floor must not lose its loads in silence."""
    hall = Hall(beams=2)
    member = hall.analysis.member((0, 0, 3450), (6000, 0, 3450))
    hall.analysis.along(member, hall.analysis.linear(**DOWN), hall.analysis.case("Live"))
    model = hall.read()
    (told,) = near(model)
    assert "acts near the beam, 150 mm off its body, and on no beam" in told
    assert model.loads.doubts[0].beam == model.beams[0].key


def test_it_is_none_where_another_beam_has_it_or_where_it_is_tied_to_another_member() -> None:
    hall = Hall()
    analysis, case = hall.analysis, hall.analysis.case("Live")
    high = hall.building.placement((0.0, 0.0, 3900.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0))
    solid = hall.building.extrusion(hall.building.rectangle(300.0, 600.0), 6000.0)
    hall.building.beam(solid, placement=high, Name="B-9")
    member = analysis.member((0, 0, 3900), (6000, 0, 3900))
    analysis.along(member, analysis.linear(**DOWN), case)
    steel = hall.building.beam(material="Steel S235", Name="S-1")
    beside = analysis.member((0, 400, 3000), (6000, 400, 3000), name="M-2")
    analysis.tie(beside, steel)
    analysis.along(beside, analysis.linear(**DOWN), case)
    model = hall.read()
    assert len(model.loads.laid) == 1
    assert not near(model)


def test_a_node_near_a_beam_is_a_doubt() -> None:
    hall = Hall("IFC4X3", "METRE")
    analysis = hall.analysis
    node = analysis.node((2000, 0, 3450))
    analysis.at(node, analysis.single(z=-4e3), analysis.case("Live"))
    assert "150 mm off its body" in near(hall.read())[0]


def test_a_node_of_a_tied_member_is_on_the_beam() -> None:
    hall = Hall("IFC4X3", "METRE")
    analysis = hall.analysis
    node = analysis.node((2000, 0, 3450))
    analysis.at(node, analysis.single(z=-4e3), analysis.case("Live"))
    member = analysis.member((0, 0, 3450), (6000, 0, 3450))
    analysis.tie(member, hall.beams[0])
    analysis.root(
        "IfcRelConnectsStructuralMember", RelatingStructuralMember=member,
        RelatedStructuralConnection=node,
    )  # fmt: skip
    model = hall.read()
    assert (only(model).kind, only(model).start) == ("point", pytest.approx(2000.0))
    assert not model.loads.doubts


def test_an_action_on_two_members_acts_on_both() -> None:
    hall = Hall(beams=2)
    analysis = hall.analysis
    first = analysis.member((0, 0, 3000), (6000, 0, 3000))
    second = analysis.member((6000, 0, 3000), (12000, 0, 3000), name="M-2")
    action = analysis.along(first, analysis.linear(**DOWN), analysis.case("Live"))
    analysis.root(
        "IfcRelConnectsStructuralActivity", RelatingElement=second, RelatedStructuralActivity=action
    )
    model = hall.read()
    assert {one.beam for one in model.loads.laid} == {beam.key for beam in model.beams}


def test_a_member_of_several_lines_is_not_taken_for_its_first() -> None:
    hall = Hall()
    analysis = hall.analysis
    member = analysis.member((0, 0, 3000), (3000, 0, 3000))
    (shape,) = member.Representation.Representations
    (more,) = analysis.edge((3000, 0, 3000), (6000, 0, 3000)).Representations
    shape.Items = [*shape.Items, *more.Items]
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live"))
    model = hall.read()
    assert not model.loads.laid
    (told,) = case_of(model, "Live").uncarried
    assert "is made of 2 lines" in told


@pytest.mark.parametrize("place", [(2000, 0, 3000), (2000, 4000, 3000)])
def test_a_point_load_on_a_surface_is_carried_where_it_stands_on_a_beam(
    place: tuple[float, float, float],
) -> None:
    hall = Hall()
    analysis = hall.analysis
    case, plate = analysis.case("Live"), analysis.surface()
    analysis.at(plate, analysis.single(z=-4e3), case, shape=analysis.vertex(place))
    model = hall.read()
    on_beam = place[1] == 0
    assert len(model.loads.laid) == on_beam
    assert len(case_of(model, "Live").uncarried) == (not on_beam)


@pytest.mark.parametrize("kind", ["IfcStructuralLoadTemperature", "displacement"])
def test_what_is_no_force_is_a_doubt_of_the_beam(kind: str) -> None:
    hall = Hall()
    analysis, case = hall.analysis, hall.analysis.case("Summer")
    if kind == "displacement":
        load = analysis.make("IfcStructuralLoadSingleDisplacement", DisplacementZ=-5.0)
        analysis.at(analysis.node((6000, 0, 3000)), load, case)
    else:
        member = analysis.member((0, 0, 3000), (6000, 0, 3000))
        analysis.along(member, analysis.make(kind, DeltaTConstant=20.0), case)
    model = hall.read()
    assert not model.loads.laid
    assert "cannot be read" in doubts(model)


def test_an_action_that_applies_nothing_is_counted() -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    hall.analysis.along(member, hall.analysis.linear(), hall.analysis.case("Live"))
    model = hall.read()
    assert case_of(model, "Live").notes == ("1 action: with no force and no moment",)
    assert not model.loads.laid


def test_a_factor_of_nothing_is_a_doubt() -> None:
    hall = Hall()
    member = hall.analysis.member((0, 0, 3000), (6000, 0, 3000))
    case = hall.analysis.case("Live", Coefficient=0.0)
    hall.analysis.along(member, hall.analysis.linear(**DOWN), case)
    assert "acts with the factor 0" in doubts(hall.read())


def test_loads_on_a_beam_itself_without_an_analysis_member() -> None:
    hall = Hall("IFC4", "INCH", "lbf")
    hall.analysis.along(hall.beams[0], hall.analysis.linear(**DOWN), hall.analysis.case("Live"))
    laid = only(hall.read())
    assert (laid.start, laid.end) == pytest.approx((0.0, 6000.0))
    assert laid.values[0] == pytest.approx(10.0)


def test_an_action_without_an_item_lies_where_its_case_puts_it() -> None:
    """Its analysis model is the one that the case loads, whose placement is 3 m up."""
    hall = Hall("IFC4X3", "METRE", shared=((0.0, 0.0, 3000.0),))
    analysis = hall.analysis
    shape = analysis.edge((1000, 0, 0), (2000, 0, 0))
    analysis.along(None, analysis.linear(**DOWN), analysis.case("Live"), shape=shape)
    laid = only(hall.read())
    assert (laid.start, laid.end) == pytest.approx((1000.0, 2000.0))


@pytest.mark.parametrize(("z", "read"), [((0.0, 0.0, 1.0), True), ((0.0, -1.0, 0.0), False)])
def test_a_plane_model_in_axes_of_its_own_is_not_taken_for_one_in_space(
    z: tuple[float, float, float], read: bool
) -> None:
    hall = Hall("IFC2X3")
    analysis = hall.analysis
    analysis.model.PredefinedType = "IN_PLANE_LOADING_2D"
    analysis.model.OrientationOf2DPlane = hall.building.axes((0, 0, 0), z, (1.0, 0.0, 0.0))
    member = analysis.member((0, 0, 3000), (6000, 0, 3000))
    analysis.along(member, analysis.linear(**DOWN), analysis.case("Live"))
    model = hall.read()
    assert bool(model.loads.laid) is read
    assert ("is plane, in axes that its loads may act in" in doubts(model)) is not read


@pytest.mark.parametrize(
    "along", [(1, 0, 0), (0, 1, 0), (-0.6, 0.8, 0), (0.6, -0.8, 0), (0, 0.8, 0.6)]
)
@pytest.mark.parametrize("backwards", [False, True])
def test_a_load_stays_at_its_place_in_the_building_however_the_beam_lies(
    along: tuple[float, float, float], backwards: bool
) -> None:
    """4 N/mm at 1 m from the beam's first end to 9 N/mm at 4 m, wherever its own start is."""
    hall = Hall("IFC4X3", "METRE", along=tuple(map(float, along)))
    analysis = hall.analysis
    ends = [tuple(np.array((0.0, 0.0, 3000.0)) + t * np.array(along)) for t in (0.0, 6000.0)]
    member = analysis.member(*(ends[::-1] if backwards else ends), axis=(1.0, 2.0, 3.0))
    values = [(1000.0, analysis.linear(z=-4.0)), (4000.0, analysis.linear(z=-9.0))]
    if backwards:
        values = [(6000.0 - place, load) for place, load in reversed(values)]
    analysis.along(member, analysis.configured(values), analysis.case("Live"), kind="LINEAR")
    model = hall.read()
    laid, axis = only(model), model.beams[0].axis
    assert axis is not None
    for place, value in zip((laid.start, laid.end), laid.values, strict=True):
        at = np.array(axis.origin) + place * np.array(axis.x)
        from_first = float((at - np.array(ends[0])) @ np.array(along))
        assert value == pytest.approx(4.0 + 5.0 * (from_first - 1000.0) / 3000.0, abs=1e-6)
