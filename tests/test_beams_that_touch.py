"""Beams of a frame that touch others, or come near them, and are not carried there: what is not
known of them keeps the others from being called adequate."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from ifccheck.beam import Load, Verdict
from ifccheck.pipeline import Run, rate
from tests.frames_of_beams import Setting, column
from tests.ifc_models import Building
from tests.models import MadeBeam, MadeColumn, brief, model, rate_model
from tests.rated_frames import FRAME, lying, rated_frame, reasons, sheets_of, uniform, verdicts


def girder(depth: float = 600.0) -> tuple[list[MadeBeam], list[MadeColumn]]:
    """G along y at x = 10 m on two columns, its soffit at z = 0."""
    beams = [lying("G", (10000.0, -4000.0, 0.0), 8000.0, 90.0, depth=depth)]
    return beams, [MadeColumn(10000.0, y) for y in (-3850.0, 3850.0)]


@pytest.mark.parametrize("gap", [30.0, 49.0])
def test_an_end_that_stops_short_of_a_girder_may_load_it(tmp_path: Path, gap: float) -> None:
    """B reaches over two columns to a girder's face, but for a joint that a model may leave."""
    beams, columns = girder()
    beams.append(lying("B", (0.0, 0.0, 0.0), 9850.0 - gap))
    columns += [MadeColumn(150.0), MadeColumn(4200.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert reasons(run, "G") == "reactions not included: B (IfcBeam)"


def test_a_beam_that_passes_close_above_a_girder_may_load_it(tmp_path: Path) -> None:
    beams, columns = girder()
    beams.append(lying("B", (5000.0, 0.0, 630.0), 10000.0))
    columns += [MadeColumn(x, z=(-3000.0, 630.0)) for x in (5150.0, 14850.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.NOT_RATED}
    assert reasons(run, "G") == "reactions not included: B (IfcBeam)"


@pytest.mark.parametrize("half", [150.0, 200.0])
def test_beams_that_touch_a_girder_over_a_column_give_it_nothing(
    tmp_path: Path, half: float
) -> None:
    """G goes through over a column in its middle, which B's end stands on or meets the face of."""
    beams, columns = girder()
    beams.append(lying("B", (4000.0, 0.0, 0.0), 6000.0 - half))
    columns += [MadeColumn(4150.0), MadeColumn(10000.0, size=400.0, z=(-3000.0, 600.0))]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0))
    assert set(verdicts(run).values()) == {Verdict.ADEQUATE}


def test_what_the_brief_calls_free_may_still_hang_on_the_girder_that_it_touches(
    tmp_path: Path,
) -> None:
    beams, columns = girder()
    beams.append(lying("B", (0.0, 0.0, 0.0), 9850.0))
    columns += [MadeColumn(150.0), MadeColumn(6150.0)]
    free = '[[supports]]\nbeams = ["B"]\nend = "free"\n'
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0), free)
    assert reasons(run, "G") == "reactions not included: B (IfcBeam)"


def test_an_end_that_the_brief_alone_holds_is_named(tmp_path: Path) -> None:
    beams, columns = [lying("B", (0.0, 0.0, 0.0), 6000.0)], [MadeColumn(150.0)]
    held = '[[supports]]\nbeams = ["B"]\nend = "pinned"\n'
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 1.0), held)
    texts = [each.text for each in sheets_of(run)["B"].rating.remarks]
    assert any(text.startswith("held at its end by the brief alone") for text in texts)


def test_models_that_are_rated_together_are_told_to_stand_apart(tmp_path: Path) -> None:
    for number in (1, 2):
        data = model(lying(f"B{number}", (0.0, 0.0, 0.0), 6000.0), columns=[MadeColumn(150.0)])
        (tmp_path / f"{number}.ifc").write_bytes(data)
    text = brief(FRAME, uniform("floor", 1.0)).replace('supports = ["pinned", "pinned"]\n', "")
    (tmp_path / "brief.toml").write_text(text)
    paths = [tmp_path / "1.ifc", tmp_path / "2.ifc"]

    def told(run: Run) -> list[int]:
        told = "beams of one model are not stood on those of another"
        return [sum(told in each.text for each in report.remarks) for report in run.reports]

    assert told(rate(paths, tmp_path / "brief.toml")) == [1, 1]
    assert told(rate(paths[:1], tmp_path / "brief.toml")) == [0]


# --- what lies on a slope ------------------------------------------------------------------------


@pytest.mark.parametrize("backward", [False, True])
def test_what_lies_on_a_sloping_girder_loads_it_where_it_lies_in_plan(
    tmp_path: Path, backward: bool
) -> None:
    """G climbs by 30 degrees; S lies across on top of it at 3.5 m in plan, 3.5 / cos 30 along."""
    rise = math.tan(math.radians(30.0))
    top = 3000.0 + 3500.0 * rise + 600.0 / math.cos(math.radians(30.0))
    building = Building()
    _sloping(building, "G", (0.0, 0.0, 3000.0), (7000.0, 0.0, 3000.0 + 7000.0 * rise), backward)
    _sloping(building, "S", (3500.0, -150.0, top), (3500.0, 5000.0, top), False)
    for name, x, y, head in (
        ("C1", 200.0, 0.0, 3000.0 + 200.0 * rise),
        ("C2", 6800.0, 0.0, 3000.0 + 6800.0 * rise),
        ("C3", 3500.0, 4800.0, top),
    ):
        column(name, x, y, (0.0, head))(building, Setting())
    building.open()
    text = brief(FRAME, uniform("floor", 1.0)).replace('supports = ["pinned", "pinned"]\n', "")
    run = rate_model(tmp_path, building.file.to_string().encode(), text)
    found: list[Load] = [
        load for load in run.rated[0].gathered.loads if load.origin.startswith("reaction of S")
    ]
    along = 3500.0 / math.cos(math.radians(30.0))
    whole = 7000.0 / math.cos(math.radians(30.0))
    assert found
    for load in found:
        assert load.start == pytest.approx(whole - along if backward else along, abs=1.0)


def _sloping(
    building: Building,
    name: str,
    start: tuple[float, float, float],
    end: tuple[float, float, float],
    backward: bool,
) -> None:
    """A beam of 300 x 600 from the soffit's middle at its start to that at its end."""
    if backward:
        start, end = end, start
    length = math.dist(start, end)
    x, y, z = ((b - a) / length for a, b in zip(start, end, strict=True))
    level = math.hypot(x, y)
    left = (-y / level, x / level, 0.0)
    up = (y * left[2] - z * left[1], z * left[0] - x * left[2], x * left[1] - y * left[0])
    up = (-up[0], -up[1], -up[2]) if up[2] < 0.0 else up
    solid = building.extrusion(building.rectangle(300.0, 600.0), length)
    origin = tuple(p + 300.0 * u for p, u in zip(start, up, strict=True))
    place = building.placement(origin, (x, y, z), left)
    product = building.member("IfcBeam", solid, placement=place, Name=name)
    building.give_material(product, building.entity("IfcMaterial", "Concrete C30/37"))


@pytest.mark.parametrize(("depth", "soft"), [(300.0, True), (2000.0, False)])
def test_a_cantilever_whose_tip_meets_a_soft_beam_is_not_adequate(
    depth: float, soft: bool, tmp_path: Path
) -> None:
    """K is built into a column and meets the middle of EDGE, which spans 9.7 m: 48 E I / L^3 of
    300 x 300 is far below 8 x 3 E I / L^3 of K (300 x 600, 2.5 m), that of 300 x 2000 above it."""
    beams = [
        lying("K", (300.0, 0.0, 0.0), 2500.0),
        lying("EDGE", (2950.0, -5000.0, 300.0 - depth / 2.0), 10000.0, 90.0, depth=depth),
    ]
    foot = 300.0 - depth / 2.0
    columns = [MadeColumn(0.0, size=600.0, z=(-3000.0, 1500.0))]
    columns += [MadeColumn(2950.0, y, z=(-3000.0, foot)) for y in (-4850.0, 4850.0)]
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 2.0))
    told = "; ".join(reason.text for reason in sheets_of(run)["K"].rating.reasons)
    assert ("may hang over from its other end" in told) is soft, told
