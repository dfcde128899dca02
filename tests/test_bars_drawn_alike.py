"""The same reinforcement drawn in every way gives the same rating through the whole program."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ifcopenshell
import numpy as np
import pytest

from tests.barred_beams import Curve, bent
from tests.drawn_bodies import BODIES, Advanced, Mesh, tube
from tests.drawn_curves import KINDS, drawn
from tests.models import (
    BEARINGS,
    Layer,
    MadeBeam,
    Ties,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
)

SAME = 0.002
"""Within 0.2 %"""
LENGTH = 6300.0
BEAM = MadeBeam(
    rectangle(300.0, 600.0),
    LENGTH,
    layers=(
        Layer("25M", 64.0, (-85.0, 0.0, 85.0), 40.0, LENGTH - 40.0, (True, False), 460.0),
        Layer("15M", 540.0, (-85.0, 85.0), 900.0, 5200.0),
    ),
    ties=(Ties("10M", tuple(100.0 + 200.0 * n for n in range(31)), 110.0, 40.0, 560.0),),
)
BRIEF = brief(BEARINGS, load("press", 'point = "60 kN"', 'at = "2.1 m"'),
              load("floor", 'line = "9 kN/m"'))  # fmt: skip
BEND = 60.0


@pytest.fixture(scope="module")
def swept(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """The answer on indexed curves of lines and arcs."""
    return redrawn(tmp_path_factory.mktemp("swept"), "indexed")


def redrawn(folder: Path, kind: str) -> dict[str, Any]:
    """The answer of the program where all bars are drawn in one way."""
    file = ifcopenshell.file.from_string(model(BEAM).decode("ascii"))
    for solid in list(file.by_type("IfcSweptDiskSolid")):
        corners = [tuple(point.Coordinates) for point in solid.Directrix.Points]
        _redraw(file, solid, kind, bent(corners, BEND))
    data = file.to_string().encode("ascii")
    return answers(rate_model(folder, data, BRIEF))[BEAM.mark]


def _redraw(file: Any, solid: Any, kind: str, curve: Curve) -> None:
    if kind in KINDS:
        solid.Directrix = drawn(file, kind, curve.points, curve.arcs)
        return
    solid.Directrix = drawn(file, "indexed", curve.points, curve.arcs)
    if math.dist(curve.points[0], curve.points[-1]) < 1.0:
        return  # a ring without ends stays a swept disk
    if kind == "advanced":
        item = Advanced(file, curve, 2.0 * solid.Radius, (0.0, 1.0, 0.0)).item
    elif kind == "pushed":
        item = pushed(file, solid, curve)
    else:
        mesh = tube(curve, 2.0 * solid.Radius, 16)
        item = BODIES[kind](file, Mesh(np.round(mesh.points, 6), mesh.faces))
    if item is None:
        return
    for representation in file.get_inverse(solid):
        representation.Items = [item]


def pushed(file: Any, solid: Any, curve: Curve) -> Any:
    """A straight bar pushed out of a circle; None for a bent one."""
    if len(curve.points) > 2:
        return None
    make = file.create_entity
    origin = make("IfcAxis2Placement2D", make("IfcCartesianPoint", (0.0, 0.0)))
    profile = make("IfcCircleProfileDef", "AREA", None, origin, solid.Radius)
    along = make("IfcDirection", (1.0, 0.0, 0.0))
    across = make("IfcDirection", (0.0, 1.0, 0.0))
    place = make("IfcAxis2Placement3D", make("IfcCartesianPoint", curve.points[0]), along, across)
    depth = math.dist(curve.points[0], curve.points[-1])
    return make(
        "IfcExtrudedAreaSolid", profile, place, make("IfcDirection", (0.0, 0.0, 1.0)), depth
    )


WAYS = (*(kind for kind in KINDS if kind != "indexed"), *BODIES, "advanced", "pushed")


@pytest.mark.parametrize("kind", WAYS)
def test_bars_drawn_in_any_way_give_the_same_rating(
    tmp_path: Path, swept: dict[str, Any], kind: str
) -> None:
    found = redrawn(tmp_path, kind)
    assert swept["rated_cases"]
    assert found["verdict"] == swept["verdict"] == "adequate"
    assert found["reasons"] == swept["reasons"] == []
    assert found["utilisation"] == pytest.approx(swept["utilisation"], rel=SAME)
    for one, same in zip(swept["limit_states"], found["limit_states"], strict=True):
        assert one["name"] == same["name"]
        assert same["utilisation"] == pytest.approx(one["utilisation"], rel=SAME)
    for one, same in zip(swept["rated_cases"], found["rated_cases"], strict=True):
        assert same["factor"] == pytest.approx(one["factor"], rel=SAME)
