"""One beam drawn in every way, in every schema and system of units, read and rated alike.

The outline and the length are held against ifcopenshell's geometry engine, the rating against that
of the plain extrusion in millimetres.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path
from typing import Any, NamedTuple

import ifcopenshell
import numpy as np
import pytest

from ifccheck.beam import Beam, Outline
from tests.bodies_of_beams import (
    KINDS,
    RECTANGLE,
    Bodies,
    engine_moments,
    outline_moments,
    run_moments,
)
from tests.models import POUND_FORCE, MadeBeam, Setting, answers, model, rate_model
from tests.test_laws_of_bodies import LOADS, assert_alike

LENGTH = 6300.0
WIDTH = max(y for y, _ in RECTANGLE) - min(y for y, _ in RECTANGLE)
DEPTH = max(z for _, z in RECTANGLE)
SYSTEMS = {"N, mm": ("mm", 1.0), "kN, m": ("m", 1e3), "lbf, in": ("inch", POUND_FORCE),
           "kip, ft": ("foot", 1e3 * POUND_FORCE)}  # fmt: skip
"""Unit of length, and newtons per unit of force"""
PLAIN = "extrusion"
ON_AXIS = "profile of the material on an axis"


class Way(NamedTuple):
    """A way to draw the beam, and whether the geometry engine builds it soundly."""

    draw: Callable[[Bodies], list[Any]]
    engine: bool = True


def ways(schema: str) -> dict[str, Way]:
    """Those of every outline, and those that only a rectangle can be drawn in."""
    half, ends = WIDTH / 2.0, (0.0, LENGTH)
    side = ((0.0, 0.0), (LENGTH, 0.0), (LENGTH, DEPTH), (0.0, DEPTH))
    plan = ((0.0, -half), (LENGTH, -half), (LENGTH, half), (0.0, half))
    found = {
        name: Way(lambda b, make=kind.make: make(b, RECTANGLE, LENGTH), kind.engine)  # type: ignore[misc]
        for name, kind in KINDS.items()
        if schema in kind.schemas
    }
    found["extrusion across the span"] = Way(lambda b: [b.elevation(side, WIDTH)])
    found["extrusion downwards"] = Way(lambda b: [b.plan(plan, 0.0, DEPTH)])
    found["block"] = Way(lambda b: [b.block((ends[0], -half, 0.0), (ends[1], half, DEPTH))])
    if schema != "IFC2X3":
        found[ON_AXIS] = Way(lambda b: [b.extrusion(RECTANGLE, *ends)], engine=False)
    return found


def beams_of(drawn: dict[str, Way]) -> list[MadeBeam]:
    """Side by side, each turned in plan."""
    bars = {"BottomBars": "3-25M", "TopBars": "2-20M", "Stirrups": "2 legs 10M @ 150"}
    outline = tuple((float(y), float(z)) for y, z in RECTANGLE)
    return [
        MadeBeam(outline, LENGTH, name, bars, origin=(0.0, 5000.0 * row, 0.0), direction=15.0,
                 body=way.draw)
        for row, (name, way) in enumerate(drawn.items())
    ]  # fmt: skip


def with_force_unit(file: Any, newtons: float) -> None:
    """Declare the system's unit of force."""
    make = file.create_entity
    newton = make("IfcSIUnit", UnitType="FORCEUNIT", Name="NEWTON")
    if newtons in (1.0, 1e3):
        newton.Prefix = "KILO" if newtons == 1e3 else None
        unit = newton
    else:
        value = make("IfcMeasureWithUnit", make("IfcForceMeasure", newtons), newton)
        powers = make("IfcDimensionalExponents", 1, 1, -2, 0, 0, 0, 0)
        unit = make("IfcConversionBasedUnit", powers, "FORCEUNIT", "own", value)
    (assignment,) = file.by_type("IfcUnitAssignment")
    assignment.Units = [*assignment.Units, unit]


def drawn_by_its_axis(file: Any, mm: float) -> None:
    """Leave of one beam its axis alone, and give its profile to its material."""
    (beam,) = [each for each in file.by_type("IfcBeam") if each.Name == ON_AXIS]
    (body,) = [
        r for r in beam.Representation.Representations if r.RepresentationIdentifier == "Body"
    ]
    (solid,) = body.Items
    make, start = file.create_entity, solid.Position.Location.Coordinates
    along = np.array(solid.Position.Axis.DirectionRatios)
    middle = np.add(start, (0.0, 0.0, DEPTH / 2.0 / mm))
    points = [
        make("IfcCartesianPoint", tuple((middle + along * x).tolist())) for x in (0.0, LENGTH / mm)
    ]
    axis = make("IfcShapeRepresentation", body.ContextOfItems, "Axis", "Curve3D",
                [make("IfcPolyline", points)])  # fmt: skip
    beam.Representation.Representations = [axis]
    profile = make("IfcRectangleProfileDef", "AREA", None, None, WIDTH / mm, DEPTH / mm)
    for relation in file.by_type("IfcRelAssociatesMaterial"):
        if beam in relation.RelatedObjects:
            part = make("IfcMaterialProfile", None, None, relation.RelatingMaterial, profile)
            held = make("IfcMaterialProfileSet", None, None, [part])
            usage = make("IfcMaterialProfileSetUsage", held, 5)
            relation.RelatedObjects = [one for one in relation.RelatedObjects if one != beam]
            make("IfcRelAssociatesMaterial", ifcopenshell.guid.new(), relation.OwnerHistory,
                 None, None, [beam], usage)  # fmt: skip


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """The rating of the plain extrusion in millimetres."""
    (beam, *_) = beams_of(ways("IFC4"))
    run = rate_model(tmp_path_factory.mktemp("plain"), model(beam), LOADS)
    return answers(run)[PLAIN]


@pytest.mark.parametrize("system", SYSTEMS)
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_a_beam_is_one_beam_however_and_in_whatever_units_it_is_drawn(
    schema: Any, system: str, plain: dict[str, Any], tmp_path: Path
) -> None:
    unit, newtons = SYSTEMS[system]
    drawn = ways(schema)
    made = model(*beams_of(drawn), setting=Setting(schema=schema, unit=unit))  # type: ignore[arg-type]
    file = ifcopenshell.file.from_string(made.decode())
    with_force_unit(file, newtons)
    if ON_AXIS in drawn:
        drawn_by_its_axis(file, {"mm": 1.0, "m": 1000.0, "inch": 25.4, "foot": 304.8}[unit])
    run = rate_model(tmp_path, file.to_string().encode(), LOADS)
    read = run.rated[0].read
    found = answers(run)
    assert found.keys() == drawn.keys()
    for beam in read.model.beams:
        assert_measured(beam, read.opened.file.by_id(beam.step_id), drawn[beam.name].engine)
        assert_alike(plain, found[beam.name], share=2e-3)


def assert_measured(beam: Beam, product: Any, engine: bool) -> None:
    """Outline and length, by formula and by the geometry engine, within 0.1 %."""
    (run,) = beam.runs
    half = WIDTH / 2.0
    corners = ((-half, 0.0), (half, 0.0), (half, DEPTH), (-half, DEPTH))
    wanted = outline_moments(Outline((corners,)))
    assert beam.length == pytest.approx(LENGTH, rel=1e-3)
    assert outline_moments(run.outline) == pytest.approx(wanted, rel=1e-3, abs=1e-3 * wanted[2])
    if not engine:
        return
    solid, points = engine_moments(product, beam)
    mine = run_moments(beam)
    assert float(np.ptp(points[:, 0])) == pytest.approx(beam.length, rel=1e-3)
    assert mine.volume == pytest.approx(solid.volume, rel=1e-3)
    assert mine.first[1] == pytest.approx(solid.first[1], rel=1e-3)
    assert mine.second == pytest.approx(solid.second, rel=1e-3)
    breadth = math.sqrt(solid.second[0] / solid.volume)
    assert mine.first[0] == pytest.approx(solid.first[0], abs=1e-3 * solid.volume * breadth)
