"""Profiles by splines and centre lines, and members of which only the axis is drawn."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from scipy.interpolate import BSpline
from scipy.spatial import cKDTree

from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.splines import SAGITTA, spline_points
from tests.ifc_models import Building, area, only_beam, reasons
from tests.test_ifc_profiles import read

POLES = [(0, 0), (200, -30), (380, 120), (350, 420), (120, 560), (-60, 300)]
DEGREE, COUNTS, KNOTS = 3, [4, 1, 1, 4], [0.0, 1.0, 2.5, 3.0]


def spline(building: Building, weights: list[float] | None = None, **changed: Any) -> Any:
    values = {
        "Degree": DEGREE,
        "ControlPointsList": [building.point(*place) for place in POLES],
        "CurveForm": "UNSPECIFIED",
        "ClosedCurve": False,
        "SelfIntersect": False,
        "KnotMultiplicities": COUNTS,
        "Knots": KNOTS,
        "KnotSpec": "UNSPECIFIED",
    } | changed
    if weights is None:
        return building.entity("IfcBSplineCurveWithKnots", **values)
    return building.entity("IfcRationalBSplineCurveWithKnots", WeightsData=weights, **values)


@pytest.mark.parametrize("weights", [None, [1.0, 0.7, 1.4, 1.0, 2.0, 1.0]])
def test_points_lie_on_the_spline_and_chords_near_it(weights: list[float] | None) -> None:
    """scipy evaluates the same spline, weighed poles and all."""
    building = Building("IFC4", "METRE")
    points = spline_points(spline(building, weights), building.mm)
    poles, w = np.array(POLES, dtype=float), np.array(weights or [1.0] * len(POLES))
    knots = np.repeat(KNOTS, COUNTS)
    curve = BSpline(knots, np.column_stack([poles * w[:, None], w]), DEGREE)
    fine = curve(np.linspace(0.0, 3.0, 200001))
    nearest = cKDTree(fine[:, :2] / fine[:, 2:])
    assert nearest.query(points)[0].max() < 0.03
    assert nearest.query((points[1:] + points[:-1]) / 2.0)[0].max() < 1.3 * SAGITTA
    assert points[0] == pytest.approx(POLES[0])
    assert points[-1] == pytest.approx(POLES[-1])


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"KnotMultiplicities": [4, 1, 4], "Knots": [0.0, 1.0, 3.0]}, "do not fit"),
        ({"Knots": [0.0, 3.0, 2.5, 3.0]}, "make no curve"),
    ],
)
def test_splines_that_make_no_sense_are_reasons(changed: dict[str, Any], words: str) -> None:
    building = Building()
    with pytest.raises(UnreadableError, match=words):
        spline_points(spline(building, **changed), building.mm)


def test_a_profile_closed_by_a_spline() -> None:
    building = Building()
    back = building.entity("IfcPolyline", [building.point(*POLES[-1]), building.point(*POLES[0])])
    parts = [
        building.entity("IfcCompositeCurveSegment", "CONTINUOUS", True, each)
        for each in (spline(building), back)
    ]
    curve = building.entity("IfcCompositeCurve", parts, False)
    profile = building.entity("IfcArbitraryClosedProfileDef", "AREA", None, curve)
    building.beam(building.extrusion(profile, 6000.0, z=(1, 0, 0), x=(0, 1, 0)))
    beam = only_beam(building.read())
    assert reasons(beam) == ""
    fine = BSpline(np.repeat(KNOTS, COUNTS), np.array(POLES, dtype=float), DEGREE)(
        np.linspace(0.0, 3.0, 20001)
    )
    after = np.roll(fine, -1, axis=0)
    wanted = abs((fine[:, 0] * after[:, 1] - after[:, 0] * fine[:, 1]).sum()) / 2.0
    assert area(beam) == pytest.approx(wanted, rel=1e-3)


def test_a_centre_line_is_a_strip_of_even_thickness() -> None:
    """An angle of 600 x 400 along its middle, 100 thick: corners mitred, ends square."""
    building = Building()
    line = building.entity(
        "IfcPolyline", [building.point(*place) for place in ((0, 600), (0, 0), (400, 0))]
    )
    profile = building.entity("IfcCenterLineProfileDef", "AREA", "angle", line, 100 / building.mm)
    building.beam(building.extrusion(profile, 6000.0, z=(1, 0, 0), x=(0, 1, 0)))
    beam = only_beam(building.read())
    assert reasons(beam) == ""
    assert area(beam) == pytest.approx(100 * 650 + 100 * 350)
    assert read(building, profile).name == "angle"


# A member of which only the axis is drawn --------------------------------------------------------


def along_axis(
    building: Building, start: tuple[float, ...], end: tuple[float, ...], point: int | None = 5,
    **placed: Any,
) -> Any:  # fmt: skip
    line = building.entity("IfcPolyline", [building.point(*start), building.point(*end)])
    axis = building.representation(line, kind="Curve3D", name="Axis")
    shape = building.entity("IfcProductDefinitionShape", None, None, [axis])
    product = building.root(
        "IfcBeam", ObjectPlacement=building.placement(**placed), Representation=shape
    )
    building.contained.append(product)
    tee = building.outline(
        (-125, 0), (125, 0), (125, 450), (500, 450), (500, 600), (-500, 600), (-500, 450),
        (-125, 450),
    )  # fmt: skip
    material = building.entity("IfcMaterial", "Concrete C30/37")
    part = building.entity("IfcMaterialProfile", None, None, material, tee, None, None)
    whole = building.entity("IfcMaterialProfileSet", None, None, [part], None)
    building.give_material(
        product, building.entity("IfcMaterialProfileSetUsage", whole, point, None)
    )
    return product


@pytest.mark.parametrize("way", ["along z", "along x"])
def test_the_profile_of_the_material_stands_about_the_axis(way: str) -> None:
    """Top centre (8) on the axis: the axis runs along the top of the beam."""
    building = Building("IFC4")
    if way == "along z":
        along_axis(building, (0, 0, 0), (0, 0, 6000), 8, at=(0, 0, 3000), z=(1, 0, 0), x=(0, 1, 0))
    else:
        along_axis(building, (0, 0, 0), (6000, 0, 0), 8, at=(0, 0, 3000))
    beam = only_beam(building.read())
    assert reasons(beam) == ""
    assert any("not drawn" in remark.text for remark in beam.remarks)
    assert beam.length == pytest.approx(6000.0)
    assert area(beam) == pytest.approx(250 * 450 + 1000 * 150)
    assert beam.axis is not None
    assert beam.axis.origin == pytest.approx((0.0, 0.0, 3000.0 - 600.0))
    assert max(z for _, z in beam.runs[0].outline.rings[0]) == pytest.approx(600.0)
    widest = [z for y, z in beam.runs[0].outline.rings[0] if abs(y) > 400]
    assert min(widest) == pytest.approx(450.0)


@pytest.mark.parametrize(
    ("point", "soffit"),
    [(2, 0.0), (5, -300.0), (8, -600.0), (10, -(250 * 450 * 225 + 1000 * 150 * 525) / 262500),
     (14, -600.0), (None, -300.0)],
)  # fmt: skip
def test_cardinal_points_lie_on_the_axis(point: int | None, soffit: float) -> None:
    building = Building("IFC4")
    along_axis(building, (0, 0, 0), (6000, 0, 0), point)
    beam = only_beam(building.read())
    assert beam.axis is not None
    assert beam.axis.origin == pytest.approx((0.0, 0.0, soffit), abs=1e-6)


def test_a_point_that_needs_the_shear_centre_is_a_reason() -> None:
    building = Building("IFC4")
    along_axis(building, (0, 0, 0), (6000, 0, 0), 15)
    assert (
        reasons(only_beam(building.read()))
        == "no body in the model, and an axis at cardinal point 15"
    )


def test_an_axis_without_a_profile_is_no_body() -> None:
    building = Building("IFC4")
    product = along_axis(building, (0, 0, 0), (6000, 0, 0))
    for relation in building.file.by_type("IfcRelAssociatesMaterial"):
        building.file.remove(relation)
    building.give_material(product, building.entity("IfcMaterial", "Concrete C30/37"))
    assert reasons(only_beam(building.read())) == "no body in the model"


def test_a_bent_axis_is_not_straight() -> None:
    building = Building("IFC4")
    product = along_axis(building, (0, 0, 0), (6000, 0, 0))
    line = product.Representation.Representations[0].Items[0]
    line.Points = [*line.Points, building.point(9000, 2000, 0)]
    assert "which bends" in reasons(only_beam(building.read()))


def test_a_standard_case_beam_is_a_beam() -> None:
    building = Building("IFC4")
    solid = building.extrusion(building.rectangle(300, 500), 6000.0)
    product = building.member(
        "IfcBeamStandardCase", solid, placement=building.placement((0, 0, 0), (1, 0, 0), (0, 1, 0))
    )
    building.give_material(product, building.entity("IfcMaterial", "Concrete C30/37"))
    beam = only_beam(building.read())
    assert reasons(beam) == ""
    assert (beam.ifc_class, beam.length) == ("IfcBeamStandardCase", 6000.0)
    assert math.isclose(area(beam), 150000.0)
