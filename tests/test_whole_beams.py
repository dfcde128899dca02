"""Whole beams, built as IFC models and rated by the whole program.

What is expected is published where a published figure exists, and worked out here from first
principles where not: nothing of the program's formulas is used. N, mm, MPa.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from scipy import integrate, optimize

from tests.models import (
    BEARINGS,
    SIZES,
    Layer,
    MadeBeam,
    Outline,
    Setting,
    Ties,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
    state,
    tee,
)

PUBLISHED = Path(__file__).parent / "published"
EXACT = 1e-6
"""Both sides are worked out in full"""

LENGTH, SPAN = 6300.0, 6000.0
"""Of a simple beam on bearings of 300 mm: the span runs between their middles"""
HALF_BEARING = 150.0
TIES = "2 legs 10M @ 200"
FIXED = '[[supports]]\nbeams = ["*"]\nstart = "fixed"\nend = "fixed"\n'
CANTILEVER = '[[supports]]\nbeams = ["*"]\nstart = "fixed"\nend = "free"\n'


def rated(folder: Path, beam: MadeBeam, text: str, strength: float = 30.0) -> dict[str, Any]:
    run = rate_model(folder, model(beam, setting=Setting(strength=strength)), text)
    return answers(run)[beam.mark]


def simple_beam(outline: Outline, bottom: str, stirrups: str = TIES, top: str = "none") -> MadeBeam:
    notation = {"TopBars": top, "BottomBars": bottom, "Stirrups": stirrups}
    return MadeBeam(outline, LENGTH, notation=notation)


# First principles ------------------------------------------------------------------------------

PHI_C, PHI_S, STEEL_MODULUS, CRUSHING = 0.65, 0.85, 200e3, 0.0035
"""CSA A23.3-14: 8.4.2, 8.4.3, 8.5.4.1, 10.1.3"""


@dataclass(frozen=True)
class Steel:
    area: float
    depth: float
    """From the compressed face"""


def moment_resistance(
    blocks: Sequence[tuple[float, float]], steel: Sequence[Steel], strength: float
) -> float:
    """Plane sections and the rectangular stress block (10.1): moment at which forces balance.

    ``blocks`` are rectangles from the compressed face inwards: thickness and width. Steel of
    400 MPa; steel under the block displaces concrete.
    """
    alpha, beta = 0.85 - 0.0015 * strength, 0.97 - 0.0025 * strength
    stress = alpha * PHI_C * strength

    def forces(axis: float) -> list[tuple[float, float]]:
        found, level = [], 0.0
        for thickness, width in blocks:
            part = min(max(beta * axis - level, 0.0), thickness)
            found.append((stress * width * part, level + part / 2.0))
            level += thickness
        for bars in steel:
            strain = CRUSHING * (axis - bars.depth) / axis
            force = PHI_S * bars.area * max(-400.0, min(400.0, STEEL_MODULUS * strain))
            displaced = stress * bars.area if bars.depth < beta * axis else 0.0
            found.append((force - displaced, bars.depth))
        return found

    depth = sum(thickness for thickness, _ in blocks)
    axis = optimize.brentq(lambda c: sum(f for f, _ in forces(c)), 1.0, depth, xtol=1e-10)
    return -sum(force * place for force, place in forces(axis))


def simple_span(dead: float, live: float, point: float = 0.0) -> tuple[Any, Any]:
    """Factored moment and shear of a simple span, x from the middle of the bearing: even loads,
    and a live point load in the middle, by 1.25 D + 1.5 L."""
    even, force = 1.25 * dead + 1.5 * live, 1.5 * point

    def moment(x: float) -> float:
        return even * x * (SPAN - x) / 2.0 + force * x / 2.0

    def shear(x: float) -> float:
        return even * (SPAN / 2.0 - x) + force / 2.0

    return moment, shear


def weight(outline: Outline) -> float:
    """Self weight [N/mm] at 24 kN/m3 of a polygon."""
    pairs = zip(outline, (*outline[1:], outline[0]), strict=True)
    return 24e-6 * abs(sum(y0 * z1 - y1 * z0 for (y0, z0), (y1, z1) in pairs)) / 2.0


# Flexure -----------------------------------------------------------------------------------------

HANDBOOK = yaml.safe_load((PUBLISHED / "csa_whole_beams.yaml").read_text(encoding="utf-8"))


@pytest.mark.parametrize("case", HANDBOOK, ids=lambda case: str(case["id"]))
def test_handbook_beams(case: dict[str, Any], tmp_path: Path) -> None:
    outline = rectangle(case["width"], case["depth"])
    made = MadeBeam(
        outline, LENGTH, cover=case["cover"],
        notation={"TopBars": "none", "BottomBars": case["bottom"], "Stirrups": case["stirrups"]},
    )  # fmt: skip
    text = brief(BEARINGS, load("floor", 'line = "20 kN/m"'))
    answer = rated(tmp_path, made, text, case["concrete_strength"])
    flexure = state(answer, "FlexureSagging")
    assert case["resistance"]["least"] <= flexure["resistance"] <= case["resistance"]["greatest"]
    basis = {item["name"]: item["value"] for item in answer["basis"]}
    assert basis["EffectiveDepthSagging"] == pytest.approx(case["effective_depth"], abs=0.5)
    assert flexure["demand"] == pytest.approx(
        (1.25 * weight(outline) + 1.5 * 20.0) * SPAN**2 / 8.0, rel=EXACT
    )
    assert flexure["position"] == pytest.approx(LENGTH / 2.0, abs=0.01)
    assert flexure["combination"] == "1.25D + 1.5L"


def test_singly_reinforced_by_hand(tmp_path: Path) -> None:
    """4-20M at d = 538.95 in 400 x 600 of 30 MPa: a = 408e3/(0.805 x 0.65 x 30 x 400) = 64.98,
    Mr = 408e3 (538.95 - 32.49) = 206.64 kN*m."""
    answer = rated(
        tmp_path, simple_beam(rectangle(400, 600), "4-20M"),
        brief(BEARINGS, load("floor", 'line = "20 kN/m"')),
    )  # fmt: skip
    block = PHI_S * 1200 * 400 / (0.805 * PHI_C * 30 * 400)
    expected = PHI_S * 1200 * 400 * (538.95 - block / 2.0)
    assert expected == pytest.approx(206.64e6, rel=1e-4)
    flexure = state(answer, "FlexureSagging")
    assert flexure["resistance"] == pytest.approx(expected, rel=EXACT)
    assert answer["verdict"] == "adequate"


def bars(size: str, count: int, z: float, half_width: float) -> Layer:
    """Straight bars from cover to cover, evenly over the width."""
    step = 2.0 * half_width / (count - 1)
    ys = tuple(-half_width + step * number for number in range(count))
    return Layer(size, z, ys, 40.0, LENGTH - 40.0)


def ties(width: float, depth: float, spacing: float = 200.0) -> Ties:
    """10M stirrups in a cover of 40 mm, evenly about the middle of the beam."""
    count = int((LENGTH - 200.0) // spacing)
    first = (LENGTH - count * spacing) / 2.0
    places = tuple(first + number * spacing for number in range(count + 1))
    return Ties("10M", places, width / 2.0 - 45.65, 45.65, depth - 45.65)


def test_doubly_reinforced(tmp_path: Path) -> None:
    """Eight 25M bars in two layers, three 25M bars on top that do not yield or only just."""
    width, depth = 400.0, 600.0
    beam = MadeBeam(
        rectangle(width, depth), LENGTH,
        layers=(bars("25M", 4, 64.0, 130.0), bars("25M", 4, 124.0, 130.0),
                bars("25M", 3, 536.0, 130.0)),
        ties=(ties(width, depth),),
    )  # fmt: skip
    answer = rated(tmp_path, beam, brief(BEARINGS, load("floor", 'line = "60 kN/m"')))
    expected = moment_resistance(
        [(depth, width)], [Steel(2000, 536.0), Steel(2000, 476.0), Steel(1500, 64.0)], 30.0
    )
    alone = moment_resistance([(depth, width)], [Steel(2000, 536.0), Steel(2000, 476.0)], 30.0)
    assert expected > 1.05 * alone, "the compression steel matters"
    assert state(answer, "FlexureSagging")["resistance"] == pytest.approx(expected, rel=EXACT)


@pytest.mark.parametrize(
    ("flange", "thickness", "counted", "what"),
    [
        (700.0, 80.0, 700.0, "the block reaches into the web"),
        (2400.0, 60.0, 350.0 + 2.0 * 600.0, "each overhang counts up to a tenth of the span"),
        (2000.0, 40.0, 350.0 + 2.0 * 480.0, "each overhang counts up to 12 flange thicknesses"),
    ],
)
def test_tee(flange: float, thickness: float, counted: float, what: str, tmp_path: Path) -> None:
    web, depth = 350.0, 650.0
    outline = tee(web, depth, flange, thickness)
    beam = MadeBeam(
        outline, LENGTH, layers=(bars("30M", 3, 66.0, 100.0), bars("30M", 3, 140.0, 100.0)),
        ties=(ties(web, depth),),
    )  # fmt: skip
    answer = rated(tmp_path, beam, brief(BEARINGS, load("floor", 'line = "40 kN/m"')))
    steel = [Steel(2100, depth - 66.0), Steel(2100, depth - 140.0)]
    concrete = [(thickness, counted), (depth - thickness, web)]
    flexure = state(answer, "FlexureSagging")
    assert flexure["resistance"] == pytest.approx(
        moment_resistance(concrete, steel, 30.0), rel=EXACT
    ), what
    moment, _ = simple_span(weight(outline), 40.0)
    assert flexure["demand"] == pytest.approx(moment(SPAN / 2.0), rel=EXACT)


def test_cantilever(tmp_path: Path) -> None:
    """Top bars in tension at the root; the safe load by statics and the section alone."""
    width, depth, length, arm = 350.0, 550.0, 2000.0, 1800.0
    notation = {"TopBars": "3-25M", "BottomBars": "2-15M", "Stirrups": "2 legs 10M @ 150"}
    beam = MadeBeam(rectangle(width, depth), length, notation=notation, columns=(0.0, 0.0))
    text = brief(
        CANTILEVER,
        load("floor", 'line = "15 kN/m"'),
        load("press", 'point = "20 kN"', 'at = "1.8 m"'),
    )
    answer = rated(tmp_path, beam, text)
    top_depth, bottom_depth = depth - 40 - 11.3 - 12.6, 40 + 11.3 + 8.0
    resistance = moment_resistance(
        [(depth, width)], [Steel(1500, top_depth), Steel(400, bottom_depth)], 30.0
    )
    rest = (1.25 * weight(beam.outline) + 1.5 * 15.0) * length**2 / 2.0
    press = 1.5 * 20e3 * arm
    flexure = state(answer, "FlexureHogging")
    assert flexure["demand"] == pytest.approx(rest + press, rel=EXACT)
    assert flexure["resistance"] == pytest.approx(resistance, rel=EXACT)
    assert flexure["position"] == 0.0
    assert state(answer, "FlexureSagging")["demand"] == 0.0
    (safe,) = answer["rated_cases"]
    assert safe["factor"] == pytest.approx((resistance - rest) / press, rel=1e-3)
    assert safe["single_load"] == pytest.approx(20e3 * (resistance - rest) / press, rel=1e-3)


def test_fixed_at_both_ends(tmp_path: Path) -> None:
    """w L2/12 at the ends and w L2/24 in the middle (ST-FF-UDL, published)."""
    width, depth, length, strength = 300.0, 500.0, 6000.0, 25.0
    notation = {"TopBars": "4-20M", "BottomBars": "2-20M", "Stirrups": "2 legs 10M @ 200"}
    beam = MadeBeam(rectangle(width, depth), length, notation=notation, columns=(0.0, 0.0))
    answer = rated(tmp_path, beam, brief(FIXED, load("floor", 'line = "20 kN/m"')), strength)
    even = 1.25 * weight(beam.outline) + 1.5 * 20.0
    place = 40 + 11.3 + 19.5 / 2.0
    sagging, hogging = state(answer, "FlexureSagging"), state(answer, "FlexureHogging")
    assert hogging["demand"] == pytest.approx(0.0833333 * even * length**2, rel=EXACT)
    assert sagging["demand"] == pytest.approx(0.0416667 * even * length**2, rel=EXACT)
    top, bottom = Steel(1200, depth - place), Steel(600, place)
    expected = moment_resistance([(depth, width)], [top, bottom], strength)
    assert hogging["resistance"] == pytest.approx(expected, rel=EXACT)
    top, bottom = Steel(1200, place), Steel(600, depth - place)
    expected = moment_resistance([(depth, width)], [top, bottom], strength)
    assert sagging["resistance"] == pytest.approx(expected, rel=EXACT)


# Shear -------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Web:
    """A rectangular section in shear, soffit in tension; normal-density concrete of 30 MPa."""

    width: float
    depth: float
    effective_depth: float
    area: float
    stirrups: float = 0.0
    """Av/s [mm]"""

    @property
    def shear_depth(self) -> float:
        return max(0.9 * self.effective_depth, 0.72 * self.depth)

    def resistance(self, beta: float, theta: float) -> float:
        """Vc + Vs (11.3.4, 11.3.5), theta in degrees."""
        concrete = PHI_C * beta * math.sqrt(30.0) * self.width * self.shear_depth
        steel = PHI_S * self.stirrups * 400.0 * self.shear_depth / math.tan(math.radians(theta))
        return concrete + steel

    def simplified(self) -> float:
        """11.3.6.3"""
        if self.stirrups:
            return self.resistance(0.18, 35.0)
        return self.resistance(230.0 / (1000.0 + self.shear_depth), 35.0)

    def general(self, moment: float, shear: float) -> float:
        """11.3.6.4, with 20 mm aggregate"""
        force = max(moment / self.shear_depth, shear) + shear
        strain = force / (2.0 * STEEL_MODULUS * self.area)
        spacing = 300.0 if self.stirrups else 35.0 * self.shear_depth / (15.0 + 20.0)
        beta = 0.40 / (1.0 + 1500.0 * strain) * 1300.0 / (1000.0 + spacing)
        return self.resistance(beta, 29.0 + 7000.0 * strain)


def worst(utilisation: Callable[[float], float], low: float, high: float) -> tuple[float, float]:
    """Where a utilisation is greatest, and how great."""
    places = np.linspace(low, high, 4001)
    values = [utilisation(float(x)) for x in places]
    at = int(np.argmax(values))
    return float(places[at]), values[at]


WITH_STIRRUPS = Web(300.0, 600.0, 600 - 40 - 11.3 - 12.6, 1500.0, 200.0 / 250.0)
WITHOUT = Web(300.0, 400.0, 400 - 40 - 19.5 / 2.0, 900.0)
SHEAR_BEAMS = {
    "stirrups": (WITH_STIRRUPS, "3-25M", "2 legs 10M @ 250"),
    "none": (WITHOUT, "3-20M", "none"),
}


@pytest.mark.parametrize("which", SHEAR_BEAMS)
def test_shear_simplified(which: str, tmp_path: Path) -> None:
    """The shear at dv from the face of the support against Vc + Vs at 35 degrees."""
    web, bottom, stirrups = SHEAR_BEAMS[which]
    outline = rectangle(web.width, web.depth)
    text = brief(BEARINGS, load("floor", 'line = "15 kN/m"'), method="simplified")
    shear = state(rated(tmp_path, simple_beam(outline, bottom, stirrups), text), "Shear")
    _, acting = simple_span(weight(outline), 15.0)
    demand = acting(HALF_BEARING + web.shear_depth)
    assert shear["demand"] == pytest.approx(demand, rel=EXACT)
    assert shear["resistance"] == pytest.approx(web.simplified(), rel=EXACT)
    assert shear["utilisation"] == pytest.approx(demand / web.simplified(), rel=EXACT)


GENERAL_LOADS = {
    "even load": ('line = "15 kN/m"',),
    "point load": ('point = "40 kN"', 'at = "50 %"'),
}


@pytest.mark.parametrize("loaded", GENERAL_LOADS)
@pytest.mark.parametrize("which", SHEAR_BEAMS)
def test_shear_general(which: str, loaded: str, tmp_path: Path) -> None:
    """Vc and Vs with the moment that goes with the shear, at the worst place from dv on."""
    web, bottom, stirrups = SHEAR_BEAMS[which]
    outline = rectangle(web.width, web.depth)
    text = brief(BEARINGS, load("floor", *GENERAL_LOADS[loaded]))
    found = state(rated(tmp_path, simple_beam(outline, bottom, stirrups), text), "Shear")
    live, force = (15.0, 0.0) if loaded == "even load" else (0.0, 40e3)
    moment, shear = simple_span(weight(outline), live, force)
    critical = HALF_BEARING + web.shear_depth

    def utilisation(x: float) -> float:
        return float(shear(x) / web.general(moment(x), shear(x)))

    _, expected = worst(utilisation, critical, SPAN / 2.0)
    assert found["utilisation"] == pytest.approx(expected, rel=1e-3)
    from_end = min(found["position"], LENGTH - found["position"])
    place = max(from_end - HALF_BEARING, critical)
    assert found["demand"] == pytest.approx(shear(place), rel=EXACT)
    resistance = web.general(moment(place), shear(place))
    assert found["resistance"] == pytest.approx(resistance, rel=EXACT)


def test_beam_without_stirrups_falls_short_where_shear_asks_for_them(tmp_path: Path) -> None:
    """With twice the load that Vc carries at dv from the face."""
    web, bottom, stirrups = SHEAR_BEAMS["none"]
    outline = rectangle(web.width, web.depth)
    _, shear = simple_span(weight(outline), 1.0)
    _, own = simple_span(weight(outline), 0.0)
    at = HALF_BEARING + web.shear_depth
    intensity = (2.0 * web.simplified() - own(at)) / (shear(at) - own(at))
    text = brief(BEARINGS, load("floor", f'line = "{intensity} N/mm"'), method="simplified")
    answer = rated(tmp_path, simple_beam(outline, bottom, stirrups), text)
    assert state(answer, "Shear")["utilisation"] == pytest.approx(2.0, rel=EXACT)
    assert answer["verdict"] == "falls short"


def test_an_outline_out_of_level_by_rounding_is_a_rectangle(tmp_path: Path) -> None:
    """Corners that differ by millionths of a mm, as exporters write them, leave the web whole."""
    web, bottom, stirrups = SHEAR_BEAMS["stirrups"]
    level: Outline = rectangle(web.width, web.depth)
    noise = (0.0, 4e-6, 0.0, 3e-4)
    ragged = tuple((y, z + dz) for (y, z), dz in zip(level, noise, strict=True))
    text = brief(BEARINGS, load("floor", 'line = "15 kN/m"'))
    exact = rated(tmp_path / "exact", simple_beam(level, bottom, stirrups), text)
    found = rated(tmp_path / "ragged", simple_beam(ragged, bottom, stirrups), text)
    for each in ("FlexureSagging", "Shear", "LongitudinalTension"):
        for key in ("utilisation", "resistance"):
            assert state(found, each)[key] == pytest.approx(state(exact, each)[key], rel=1e-5)


# Loads -------------------------------------------------------------------------------------------

STATICS = yaml.safe_load((PUBLISHED / "statics.yaml").read_text(encoding="utf-8"))
UNIT_COMBINATION = """
[[combinations]]
name = "imposed alone"
kind = "strength"
factors = { self = 1e-9, permanent = 0.0, imposed = 1.0 }
"""


def published_moments(case: dict[str, Any]) -> dict[str, float]:
    """Greatest printed sagging and hogging moment of a published case."""
    moments = [
        e["value"] for e in case["expected"] if e["quantity"] in ("moment", "greatest_moment")
    ]
    found = {}
    if any(m > 0.0 for m in moments):
        found["FlexureSagging"] = max(moments)
    if any(m < 0.0 for m in moments):
        found["FlexureHogging"] = -min(moments)
    return found


def entries_of(case: dict[str, Any], mark: str, length: float) -> list[str]:
    """Supports and loads of a published case on a beam; its loads as kN/m and kN."""
    start, end = case["supports"]
    entries = [f'[[supports]]\nbeams = ["{mark}"]\nstart = "{start}"\nend = "{end}"\n']
    for each in case["loads"]:
        if each["kind"] == "point":
            at = each["from"] * length
            entries.append(
                load("floor", f'point = "{each["values"][0]} kN"', f'at = "{at} mm"', beams=mark)
            )
            continue
        first, last = each["values"]
        start_at, end_at = each["from"] * length, each["to"] * length
        entries.append(
            load(
                "floor", f'line = ["{first} kN/m", "{last} kN/m"]', f'from = "{start_at} mm"',
                f'to = "{end_at} mm"', beams=mark,
            )
        )  # fmt: skip
    return entries


def test_published_statics_through_the_whole_program(tmp_path: Path) -> None:
    """All published single spans as one model, each beam under its own published loads; self
    weight, which no combination may leave out, counts next to nothing."""
    length = 5000.0
    cases = {
        f"S-{number}": case
        for number, case in enumerate(STATICS)
        if "span" not in case and published_moments(case)
    }
    assert len(cases) >= 10
    notation = {"TopBars": "3-20M", "BottomBars": "3-20M", "Stirrups": TIES}
    beams = [
        MadeBeam(
            rectangle(300, 500),
            length,
            mark,
            notation,
            columns=(0.0, 0.0),
            origin=(0.0, 3000.0 * row, 0.0),
        )
        for row, mark in enumerate(cases)
    ]
    entries = [entry for mark, case in cases.items() for entry in entries_of(case, mark, length)]
    found = answers(rate_model(tmp_path, model(*beams), brief(UNIT_COMBINATION, *entries)))
    for mark, case in cases.items():
        scale = length if case["loads"][0]["kind"] == "point" else length**2
        unit = 1000.0 if case["loads"][0]["kind"] == "point" else 1.0
        for name, printed in published_moments(case).items():
            assert state(found[mark], name)["demand"] == pytest.approx(
                printed * unit * scale, rel=case["tolerance_pct"] / 100.0
            ), (case["id"], name)


def test_trapezoidal_load_over_a_part(tmp_path: Path) -> None:
    """6 rising to 18 kN/m from 1.2 m to 4.8 m of the beam, integrated by scipy."""
    outline = rectangle(300, 600)
    text = brief(
        BEARINGS,
        load("floor", 'line = ["6 kN/m", "18 kN/m"]', 'from = "1.2 m"', 'to = "4.8 m"'),
    )
    answer = rated(tmp_path, simple_beam(outline, "3-25M"), text)
    first, last = 1200.0 - HALF_BEARING, 4800.0 - HALF_BEARING

    def intensity(x: float) -> float:
        live = 6.0 + 12.0 * (x - first) / (last - first) if first <= x <= last else 0.0
        return 1.25 * weight(outline) + 1.5 * live

    def over(function: Callable[[float], float], end: float) -> float:
        points = [p for p in (first, last) if p < end]
        return float(integrate.quad(function, 0.0, end, points=points, epsrel=1e-12)[0])

    reaction = over(lambda x: intensity(x) * (SPAN - x), SPAN) / SPAN

    def moment(x: float) -> float:
        return reaction * x - over(lambda s: intensity(s) * (x - s), x)

    best = optimize.minimize_scalar(
        lambda x: -moment(x), bounds=(0.0, SPAN), method="bounded", options={"xatol": 1e-6}
    )
    flexure = state(answer, "FlexureSagging")
    assert flexure["demand"] == pytest.approx(-best.fun, rel=1e-5)
    assert flexure["position"] == pytest.approx(best.x + HALF_BEARING, abs=20.0)


# Anchorage ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("hooked", [False, True], ids=["straight", "hooked"])
def test_bars_at_the_face_of_the_support(hooked: bool, tmp_path: Path) -> None:
    """11.3.9 at the face, with the steel as far as it is developed there (12.2, 12.5): bars that
    reach 100 mm into a bearing of 300 mm.

    Three 25M bars 86 mm apart: dcs = 2/3 of that, and 1.15 x 400/sqrt(30) x 500/57.3 = 732 mm
    of straight bar; 100 x 25.2/sqrt(30) = 460 mm behind the outside of a hook.
    """
    size, z, start = "25M", 63.9, 200.0
    diameter, area = SIZES[size]
    layer = Layer(
        size, z, (-86.0, 0.0, 86.0), start, LENGTH - start, (hooked, hooked), 16.0 * diameter
    )
    beam = MadeBeam(rectangle(300, 600), LENGTH, layers=(layer,), ties=(ties(300, 600, 250.0),))
    text = brief(BEARINGS, load("floor", 'line = "20 kN/m"'), method="simplified")
    found = state(rated(tmp_path, beam, text), "LongitudinalTension")

    web = Web(300.0, 600.0, 600.0 - z, 3.0 * area, 200.0 / 250.0)
    moment, shear = simple_span(weight(beam.outline), 20.0)
    cot = 1.0 / math.tan(math.radians(35.0))
    stirrup_term = web.resistance(0.0, 35.0)
    full = PHI_S * 400.0 * 3.0 * area
    lever = web.effective_depth - full / (0.805 * PHI_C * 30.0 * 300.0) / 2.0
    greatest = moment(SPAN / 2.0) / max(lever, web.shear_depth)
    straight = 1.15 * 400.0 / math.sqrt(30.0) * area / (86.0 * 2.0 / 3.0)
    hook = 100.0 * diameter / math.sqrt(30.0)
    tip, developed = (start - diameter / 2.0, hook) if hooked else (start, straight)

    def force(x: float) -> float:
        acting = shear(x)
        return min(
            moment(x) / web.shear_depth + (acting - 0.5 * min(stirrup_term, acting)) * cot, greatest
        )

    def steel(x: float) -> float:
        return full * min((x + HALF_BEARING - tip) / developed, 1.0)

    place, expected = worst(lambda x: force(x) / steel(x), HALF_BEARING, SPAN / 2.0)
    assert place == pytest.approx(HALF_BEARING), "the face is the worst place"
    assert found["demand"] == pytest.approx(force(HALF_BEARING), rel=EXACT)
    assert found["resistance"] == pytest.approx(steel(HALF_BEARING), rel=EXACT)
    assert found["utilisation"] == pytest.approx(expected, rel=EXACT)


# Safe loads --------------------------------------------------------------------------------------


def test_safe_load_of_a_simple_beam(tmp_path: Path) -> None:
    """(Mr - M of all else) / M of the press, where flexure is what gives way first."""
    outline = rectangle(400, 600)
    text = brief(
        BEARINGS,
        load("floor", 'line = "8 kN/m"'),
        load("press", 'point = "25 kN"', 'at = "50 %"'),
    )
    answer = rated(tmp_path, simple_beam(outline, "4-20M", "2 legs 10M @ 150"), text)
    resistance = moment_resistance([(600.0, 400.0)], [Steel(1200, 538.95)], 30.0)
    rest = (1.25 * weight(outline) + 1.5 * 8.0) * SPAN**2 / 8.0
    factor = (resistance - rest) / (1.5 * 25e3 * SPAN / 4.0)
    (safe,) = answer["rated_cases"]
    assert safe["factor"] == pytest.approx(factor, rel=1e-5)
    assert safe["single_load"] == pytest.approx(25e3 * factor, rel=1e-5)
    assert safe["single_unit"] == "N"
