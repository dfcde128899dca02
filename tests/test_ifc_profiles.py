"""Profile families against formulae of their areas and against ifcopenshell's engine."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Beam
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Placements
from ifccheck.ifc.profile_curves import SAGITTA, Arc, arc_through, ring, signed_area
from ifccheck.ifc.profile_shapes import Profile
from ifccheck.ifc.profiles import Profiles
from tests.ifc_models import Building, area, local, only_beam, reasons, volume_and_points

CORNER = 1.0 - math.pi / 4.0
"""Area that a fillet of radius 1 takes from, or adds to, a square corner."""


def read(building: Building, profile: Any) -> Profile:
    return Profiles(Placements(building.file, building.mm)).of(profile)


# family, lengths [mm], area by formula [mm2], area that its arcs bound [mm2]
FAMILIES: list[tuple[str, dict[str, float], float]] = [
    ("IfcRectangleProfileDef", {"XDim": 300, "YDim": 500}, 300 * 500),
    (
        "IfcRoundedRectangleProfileDef",
        {"XDim": 300, "YDim": 500, "RoundingRadius": 50},
        300 * 500 - 4 * CORNER * 50**2,
    ),
    (
        "IfcRectangleHollowProfileDef",
        {"XDim": 600, "YDim": 900, "WallThickness": 120, "InnerFilletRadius": 60,
         "OuterFilletRadius": 90},
        600 * 900 - 4 * CORNER * 90**2 - (360 * 660 - 4 * CORNER * 60**2),
    ),
    (
        "IfcTrapeziumProfileDef",
        {"BottomXDim": 300, "TopXDim": 500, "YDim": 600, "TopXOffset": -80},
        (300 + 500) / 2 * 600,
    ),
    ("IfcCircleProfileDef", {"Radius": 250}, math.pi * 250**2),
    (
        "IfcCircleHollowProfileDef",
        {"Radius": 400, "WallThickness": 100},
        math.pi * (400**2 - 300**2),
    ),
    ("IfcEllipseProfileDef", {"SemiAxis1": 200, "SemiAxis2": 350}, math.pi * 200 * 350),
    (
        "IfcIShapeProfileDef",
        {"OverallWidth": 400, "OverallDepth": 800, "WebThickness": 120, "FlangeThickness": 150,
         "FilletRadius": 40},
        400 * 800 - (400 - 120) * (800 - 300) + 4 * CORNER * 40**2,
    ),
    (
        "IfcTShapeProfileDef",
        {"Depth": 700, "FlangeWidth": 900, "WebThickness": 250, "FlangeThickness": 150,
         "FilletRadius": 30},
        900 * 150 + 250 * 550 + 2 * CORNER * 30**2,
    ),
    (
        "IfcLShapeProfileDef",
        {"Depth": 600, "Width": 450, "Thickness": 200, "FilletRadius": 25, "EdgeRadius": 20},
        600 * 200 + 250 * 200 + CORNER * 25**2 - 2 * CORNER * 20**2,
    ),
    (
        "IfcUShapeProfileDef",
        {"Depth": 600, "FlangeWidth": 350, "WebThickness": 120, "FlangeThickness": 100,
         "FilletRadius": 30, "EdgeRadius": 15},
        600 * 120 + 2 * 230 * 100 + 2 * CORNER * 30**2 - 2 * CORNER * 15**2,
    ),
    (
        "IfcCShapeProfileDef",
        {"Depth": 400, "Width": 250, "WallThickness": 50, "Girth": 120},
        400 * 50 + 2 * 200 * 50 + 2 * 70 * 50,
    ),
    (
        "IfcZShapeProfileDef",
        {"Depth": 500, "FlangeWidth": 300, "WebThickness": 120, "FlangeThickness": 100},
        500 * 120 + 2 * 180 * 100,
    ),
]  # fmt: skip

ASYMMETRIC_AREA = 600 * 120 + 400 * 150 + 130 * (900 - 270)
ASYMMETRIC = {
    "IFC2X3": {"OverallWidth": 400, "OverallDepth": 900, "WebThickness": 130,
               "FlangeThickness": 150, "TopFlangeWidth": 600, "TopFlangeThickness": 120},
    "IFC4": {"BottomFlangeWidth": 400, "OverallDepth": 900, "WebThickness": 130,
             "BottomFlangeThickness": 150, "TopFlangeWidth": 600, "TopFlangeThickness": 120},
}  # fmt: skip


def beam_of(building: Building, profile: Any) -> tuple[Any, Beam]:
    """A beam of that profile: its x to the left, its y up."""
    product = building.beam(building.extrusion(profile, 6000.0, z=(1, 0, 0), x=(0, 1, 0)))
    return product, only_beam(building.read())


@pytest.mark.parametrize(("family", "lengths", "expected"), FAMILIES, ids=lambda v: str(v)[:28])
def test_area_by_formula_and_never_more(
    family: str, lengths: dict[str, float], expected: float
) -> None:
    building = Building("IFC4", "METRE")
    _, beam = beam_of(building, building.profile(family, **lengths))
    assert reasons(beam) == ""
    assert area(beam) <= expected * (1.0 + 1e-9)
    assert area(beam) == pytest.approx(expected, rel=2e-3)


@pytest.mark.parametrize(("family", "lengths", "expected"), FAMILIES, ids=lambda v: str(v)[:28])
def test_corners_stand_where_the_engine_puts_them(
    family: str, lengths: dict[str, float], expected: float
) -> None:
    """Every corner of the engine's body lies on the outline's edge, and the other way round."""
    building = Building("IFC4", "MILLIMETRE")
    product, beam = beam_of(building, building.profile(family, **lengths))
    if family == "IfcZShapeProfileDef":
        # the engine measures the flange from the web's middle, which draws a larger section
        assert area(beam) < volume_and_points(product)[0] / beam.length
        from_middle = lengths["FlangeWidth"] - lengths["WebThickness"] / 2
        product[6][2][0][3][0][0].FlangeWidth = from_middle
    volume, points = volume_and_points(product)
    assert area(beam) * beam.length == pytest.approx(volume, rel=3e-3)
    corners = local(beam, points)[:, 1:]
    rings = beam.runs[0].outline.rings
    assert max(distance(corner, rings) for corner in corners) < 2.0 * SAGITTA
    assert expected > 0.0


def distance(point: np.ndarray, rings: tuple[Any, ...]) -> float:
    """Distance of a point from the nearest edge of the rings."""
    nearest = math.inf
    for places in rings:
        start = np.array(places)
        along = np.roll(start, -1, axis=0) - start
        share = ((point - start) * along).sum(axis=1) / (along * along).sum(axis=1)
        foot = start + np.clip(share, 0.0, 1.0)[:, None] * along
        nearest = min(nearest, float(np.hypot(*(point - foot).T).min()))
    return nearest


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_asymmetric_i_in_both_spellings_of_the_schema(schema: str) -> None:
    building = Building(schema)
    profile = building.profile("IfcAsymmetricIShapeProfileDef", **ASYMMETRIC[schema])
    product, beam = beam_of(building, profile)
    assert area(beam) == pytest.approx(ASYMMETRIC_AREA)
    top = [y for y, z in beam.runs[0].outline.rings[0] if z == pytest.approx(900)]
    soffit = [y for y, z in beam.runs[0].outline.rings[0] if z == pytest.approx(0)]
    assert (min(top), max(top)) == pytest.approx((-300, 300))
    assert (min(soffit), max(soffit)) == pytest.approx((-200, 200))
    assert area(beam) * beam.length == pytest.approx(volume_and_points(product)[0], rel=1e-6)


def test_profile_position_moves_and_turns_it() -> None:
    """Offset by (100, 50) and turned by 90 degrees."""
    building = Building()
    position = building.axes_2d((100, 50), (0, 1))
    profile = building.rectangle(300, 500, Position=position)
    (points,) = read(building, profile).rings
    assert points.min(axis=0) == pytest.approx((100 - 250, 50 - 150))
    assert points.max(axis=0) == pytest.approx((100 + 250, 50 + 150))


def test_derived_profile_scales_and_moves() -> None:
    building = Building()
    operator = building.entity(
        "IfcCartesianTransformationOperator2D",
        LocalOrigin=building.point(1000, 0),
        Axis1=building.direction((0, 1)),
        Scale=0.5,
    )
    parent = building.rectangle(300, 500)
    derived = building.entity("IfcDerivedProfileDef", "AREA", "half", parent, operator)
    profile = read(building, derived)
    (points,) = profile.rings
    assert points.min(axis=0) == pytest.approx((1000 - 125, -75))
    assert points.max(axis=0) == pytest.approx((1000 + 125, 75))
    assert profile.area == pytest.approx(150 * 250)
    assert profile.name == "half"


def test_mirrored_profile_stands_on_the_other_side() -> None:
    building = Building("IFC4")
    parent = building.outline((0, 0), (400, 0), (400, 200), (100, 200), (100, 500), (0, 500))
    mirrored = building.entity("IfcMirroredProfileDef", "AREA", None, parent)
    plain, other = read(building, parent), read(building, mirrored)
    assert other.area == pytest.approx(plain.area)
    assert other.centroid == pytest.approx((-plain.centroid[0], plain.centroid[1]))


def test_composite_profile_is_the_union_of_its_parts() -> None:
    building = Building()
    web = building.rectangle(300, 600)
    flange = building.rectangle(900, 150, Position=building.axes_2d((0, 375)))
    whole = building.entity("IfcCompositeProfileDef", "AREA", None, [web, flange])
    profile = read(building, whole)
    assert profile.area == pytest.approx(300 * 600 + 900 * 150)
    apart = building.rectangle(900, 150, Position=building.axes_2d((0, 900)))
    with pytest.raises(UnreadableError, match="separate parts"):
        read(building, building.entity("IfcCompositeProfileDef", "AREA", None, [web, apart]))


def half_disc(building: Building, how: str) -> Any:
    """A half disc of radius 200 over the x axis, drawn in the several ways of the schema."""
    centre, left = (0, 0), (-200, 0)
    if how == "indexed":
        points = building.entity(
            "IfcCartesianPointList2D",
            [building.out(place) for place in ((-200, 0), (200, 0), (0, 200))],
        )
        segments = [building.file.create_entity("IfcLineIndex", (1, 2)),
                    building.file.create_entity("IfcArcIndex", (2, 3, 1))]  # fmt: skip
        return building.entity("IfcIndexedPolyCurve", points, segments, False)
    circle = building.entity("IfcCircle", building.axes_2d(centre), 200 / building.mm)
    by_points = [building.point(200, 0)], [building.point(*left)]
    by_angles = [[building.entity("IfcParameterValue", angle)] for angle in (0.0, math.pi)]
    start, end = by_points if how != "angles" else by_angles
    backwards = how == "backwards"
    if backwards:
        start, end = end, start
    arc = building.entity("IfcTrimmedCurve", circle, start, end, not backwards, "CARTESIAN")
    line = building.entity("IfcPolyline", [building.point(*left), building.point(200, 0)])
    segments = [
        building.entity("IfcCompositeCurveSegment", "CONTINUOUS", True, line),
        building.entity("IfcCompositeCurveSegment", "CONTINUOUS", not backwards, arc),
    ]
    return building.entity("IfcCompositeCurve", segments, False)


@pytest.mark.parametrize("how", ["points", "angles", "backwards", "indexed"])
def test_arcs_in_every_spelling(how: str) -> None:
    building = Building("IFC4", "METRE")
    curve = half_disc(building, how)
    profile = read(building, building.entity("IfcArbitraryClosedProfileDef", "AREA", None, curve))
    expected = math.pi * 200**2 / 2
    assert profile.area <= expected
    assert profile.area == pytest.approx(expected, rel=2e-3)
    assert profile.centroid == pytest.approx((0.0, 4 * 200 / (3 * math.pi)), abs=0.2)


def test_arc_that_bites_into_the_section_leaves_it_smaller() -> None:
    """A square of 600 with a quarter disc of radius 300 taken out of one corner."""
    building = Building("IFC4")
    places = [(0, 0), (600, 0), (600, 300), (300, 600), (0, 600)]
    bite = (600 - 300 * math.sqrt(0.5), 600 - 300 * math.sqrt(0.5))
    points = building.entity("IfcCartesianPointList2D", [building.out(p) for p in [*places, bite]])
    segments = [
        building.file.create_entity("IfcLineIndex", (4, 5, 1, 2, 3)),
        building.file.create_entity("IfcArcIndex", (3, 6, 4)),
    ]
    curve = building.entity("IfcIndexedPolyCurve", points, segments, False)
    profile = read(building, building.entity("IfcArbitraryClosedProfileDef", "AREA", None, curve))
    expected = 600**2 - math.pi * 300**2 / 4
    assert profile.area <= expected
    assert profile.area == pytest.approx(expected, rel=2e-3)


@given(
    radius=st.floats(5.0, 3000.0),
    start=st.floats(0.0, 6.0),
    sweep=st.floats(0.05, 6.2),
)
@settings(max_examples=100, deadline=None)
def test_traced_arcs_stay_within_the_sagitta(radius: float, start: float, sweep: float) -> None:
    arc = Arc((0.0, 0.0), (radius, 0.0), (0.0, radius), start, sweep)
    chords, tangents = np.array(arc.traced(inside=True)), np.array(arc.traced(inside=False))
    middles = (chords[1:] + chords[:-1]) / 2.0
    limit = max(SAGITTA, radius * 1e-12)
    assert np.hypot(*chords.T) == pytest.approx(radius)
    assert (radius - np.hypot(*middles.T)).max() <= limit * (1 + 1e-6)
    assert (np.hypot(*tangents.T) >= radius * (1 - 1e-12)).all()
    assert (np.hypot(*tangents.T) - radius).max() <= 2.5 * limit


@given(st.lists(st.floats(-500, 500), min_size=6, max_size=6))
@settings(max_examples=100, deadline=None)
def test_arc_through_three_points_passes_them(values: list[float]) -> None:
    start, middle, end = [(values[n], values[n + 1]) for n in (0, 2, 4)]
    (piece, *_) = arc_through(start, middle, end)
    if isinstance(piece, Arc):
        scale = max(1.0, math.hypot(*piece.first))
        assert piece.at(piece.start) == pytest.approx(start, abs=1e-6 * scale)
        assert piece.at(piece.start + piece.sweep) == pytest.approx(end, abs=1e-6 * scale)
        angles = np.linspace(0.0, piece.sweep, 2001) + piece.start
        reach = min(math.dist(piece.at(float(angle)), middle) for angle in angles)
        assert reach <= abs(piece.sweep) * math.hypot(*piece.first) / 2000 + 1e-6 * scale


def test_circle_of_a_ring_has_the_right_sense() -> None:
    circle = [Arc((0.0, 0.0), (100.0, 0.0), (0.0, 100.0), 0.0, 2 * math.pi)]
    assert signed_area(ring(circle).tolist()) > 0
    assert signed_area(ring(circle, hole=True).tolist()) < 0
    assert abs(signed_area(ring(circle, hole=True).tolist())) >= math.pi * 100**2


@pytest.mark.parametrize(
    ("family", "lengths", "words"),
    [
        ("IfcRectangleProfileDef", {"XDim": -300, "YDim": 500}, "XDim of -300"),
        ("IfcRectangleProfileDef", {"XDim": 0, "YDim": 500}, "no width or height"),
        ("IfcRoundedRectangleProfileDef", {"XDim": 300, "YDim": 500, "RoundingRadius": 400},
         "rounding radius"),
        ("IfcCircleHollowProfileDef", {"Radius": 100, "WallThickness": 150}, "no radius"),
        ("IfcIShapeProfileDef", {"OverallWidth": 400, "OverallDepth": 300, "WebThickness": 100,
                                 "FlangeThickness": 200}, "crosses itself"),
        ("IfcLShapeProfileDef", {"Depth": 600, "Width": 300, "Thickness": 100, "LegSlope": 0.1},
         "sloping faces"),
    ],
)  # fmt: skip
def test_profiles_that_make_no_sense_are_reasons(
    family: str, lengths: dict[str, float], words: str
) -> None:
    building = Building()
    with pytest.raises(UnreadableError, match=words):
        read(building, building.profile(family, **lengths))


def test_outline_that_crosses_itself_is_a_reason() -> None:
    building = Building()
    bow_tie = building.outline((0, 0), (300, 500), (300, 0), (0, 500))
    _, beam = beam_of(building, bow_tie)
    assert reasons(beam) == "outline crosses itself"


def test_open_profile_is_a_reason() -> None:
    building = Building()
    curve = building.polyline((0, 0), (300, 0), (300, 500))
    profile = building.entity("IfcArbitraryClosedProfileDef", "CURVE", None, curve)
    with pytest.raises(UnreadableError, match="curve without an area"):
        read(building, profile)
