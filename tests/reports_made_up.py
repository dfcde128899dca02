"""Reports made up for the tests of the publishers: a hall of invented beams, all verdicts.

Nothing here is a result of the program. Demands are those of simple spans written out
(w L2 / 8 and w L / 2); resistances are set so that every verdict and band occurs.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ifccheck.beam import (
    Anchor,
    Axis,
    Bars,
    Beam,
    Box,
    Combination,
    Given,
    Load,
    Member,
    Model,
    Outline,
    OutOfScope,
    RatedSpan,
    Reason,
    Remark,
    Run,
    Span,
    Stirrups,
    Storey,
    Support,
    Verdict,
)
from ifccheck.publish.report import Assumption, CaseSummary, Report
from ifccheck.rating import BasisItem, LimitStateRating, Rating, SafeLoad
from ifccheck.sheet import Diagram, Sheet, SheetCheck, SheetLine
from ifccheck.units import show_ratio

BAY, SPAN_Y = 6000.0, 7500.0
STOREYS = ("Level 1", "Level 2", "Roof")
HEIGHT = 4200.0
TO_BE_RATED = "the brief gives no load for it: no load assigned"


def rectangle(width: float, height: float) -> Outline:
    half = width / 2.0
    ring = ((-half, 0.0), (half, 0.0), (half, height), (-half, height))
    return Outline((ring,), f"{width:.0f}x{height:.0f}")


def tee(web: float, height: float, flange: float, thick: float) -> Outline:
    w, f, low = web / 2.0, flange / 2.0, height - thick
    ring = (
        (-w, 0.0),
        (w, 0.0),
        (w, low),
        (f, low),
        (f, height),
        (-f, height),
        (-f, low),
        (-w, low),
    )
    return Outline((ring,), f"T {flange:.0f}/{web:.0f}x{height:.0f}")


def _axis(x: float, y: float, z: float, angle: float, length: float, rise: float = 0.0) -> Axis:
    c, s = math.cos(angle), math.sin(angle)
    cr, sr = math.cos(rise), math.sin(rise)
    return Axis((x, y, z), (c * cr, s * cr, sr), (-s, c, 0.0), (-c * sr, -s * sr, cr), length)


def _beam(i: int, mark: str, storey: int, axis: Axis | None, outline: Outline) -> Beam:
    runs = (Run(0.0, axis.length, outline),) if axis else ()
    guid = f"{i:04d}MadeUpBeam$_{i * 7919 % 100000:07d}"
    return Beam(
        key=guid,
        guid=guid,
        ordinal=0,
        step_id=1000 + i,
        model="press-hall",
        ifc_class="IfcBeam",
        name=mark,
        tag=f"{300000 + i}",
        type_name=f"RC {outline.name}",
        storey=STOREYS[storey],
        axis=axis,
        runs=runs,
        material="Concrete C30/37",
        concrete_strength=Given(30.0, "material name 'Concrete C30/37'"),
        concrete_density=None,
        cover=Given(40.0, "defaults of the brief", assumed=True),
    )


def _beams(bays: int, rows: int) -> list[Beam]:
    """Frames along X and Y on every storey, a wing turned by 24 degrees, a ramp."""
    beams: list[Beam] = []

    def add(mark: str, storey: int, axis: Axis | None, outline: Outline) -> None:
        beams.append(_beam(len(beams), mark, storey, axis, outline))

    for storey in range(len(STOREYS)):
        z = (storey + 1) * HEIGHT - 600.0
        for row in range(rows + 1):
            for bay in range(bays):
                axis = _axis(bay * BAY + 200.0, row * SPAN_Y, z, 0.0, BAY - 400.0)
                outline = rectangle(350.0, 600.0)
                add(f"B-{storey + 1}{row}{bay:02d}", storey, axis, outline)
        for bay in range(bays + 1):
            for row in range(rows):
                axis = _axis(bay * BAY, row * SPAN_Y + 200.0, z, math.pi / 2, SPAN_Y - 400.0)
                outline = tee(300.0, 600.0, 1100.0, 150.0) if bay % 2 else rectangle(400.0, 600.0)
                add(f"G-{storey + 1}{bay:02d}{row}", storey, axis, outline)
    turned = math.radians(24.0)
    for k in range(3):
        axis = _axis(bays * BAY + 1200.0, 1500.0 + 2600.0 * k, HEIGHT - 500.0, turned, 5200.0)
        add(f"W-{k + 1}", 0, axis, rectangle(300.0, 500.0))
    add("R-1", 1, _axis(-4200.0, 3000.0, 5400.0, 0.0, 4000.0, 0.22), rectangle(300.0, 450.0))
    add("X-9", 1, None, rectangle(300.0, 450.0))
    return beams


def _members(beams: Sequence[Beam], bays: int, rows: int) -> list[Member]:
    members = []
    for storey in range(len(STOREYS)):
        for bay in range(bays + 1):
            for row in range(rows + 1):
                centre = (bay * BAY, row * SPAN_Y, (storey + 0.5) * HEIGHT)
                members.append(
                    _member(len(members), "IfcColumn", centre, (200.0, 200.0, HEIGHT / 2))
                )
    wall = (-125.0 - 200.0, rows * SPAN_Y / 2, HEIGHT * 1.5)
    members.append(_member(len(members), "IfcWall", wall, (125.0, rows * SPAN_Y / 2, HEIGHT * 1.5)))
    return members


def _member(
    i: int, name: str, centre: tuple[float, float, float], half: tuple[float, float, float]
) -> Member:
    axes = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
    return Member(
        5000 + i, f"member{i:04d}", name, f"{name} {i}", "Level 1", Box(centre, axes, half)
    )


def _utilisations(i: int, of: int) -> tuple[float, float, float]:
    """Flexure in sagging, in hogging and shear of a beam, so that every band occurs."""
    spread = (i * 37 % 97) / 97.0
    if i % 11 == 3:
        return 1.02 + spread * 0.4, 0.0, 0.71
    if i % 17 == 5:
        return 0.88, 0.31, 1.0004 + 0.2 * (i % 2)
    return 0.25 + 0.74 * spread, 0.3 * spread, 0.2 + 0.7 * ((i * 53 % 89) / 89.0)


def _limit_states(beam: Beam, used: tuple[float, float, float]) -> tuple[LimitStateRating, ...]:
    names = (
        ("FlexureSagging", "flexure, sagging", "flexure", "10.1, 10.3", "N*mm", 0.5, 210e6),
        ("FlexureHogging", "flexure, hogging", "flexure", "10.1, 10.3", "N*mm", 0.0, 160e6),
        ("Shear", "shear", "shear", "11.3.4", "N", 0.08, 187.4e3),
    )
    return tuple(
        LimitStateRating(
            name=name,
            title=title,
            covers=covers,
            utilisation=value,
            position=place * beam.length if value else math.nan,
            combination="1.25 permanent + 1.5 imposed",
            demand=value * resistance,
            resistance=resistance,
            demand_unit=unit,
            clause=clause,
            counted=True,
        )
        for (name, title, covers, clause, unit, place, resistance), value in zip(
            names, used, strict=True
        )
    )


def _safe_load(beam: Beam, case: str, used: float, i: int) -> SafeLoad:
    factor = math.inf if i % 5 == 0 and used < 1.0 else max(0.0, 1.0 + (1.0 - used) / 0.45)
    value = 60_000.0 * factor if math.isfinite(factor) else math.nan
    text = (
        f"{math.floor(value / 100.0) / 10.0} kN at 2.10 m"
        if math.isfinite(value)
        else "not limited"
    )
    limited = math.isfinite(factor)
    return SafeLoad(
        case=case,
        factor=factor,
        assigned="60 kN at 2.1 m",
        single_value=value,
        single_kind="point",
        text=text,
        governing="flexure, sagging" if limited else "",
        position=2100.0 if limited else math.nan,
        combination="1.25 permanent + 1.5 imposed" if limited else "",
    )


def _basis(beam: Beam) -> tuple[BasisItem, ...]:
    return (
        BasisItem("ConcreteStrength", "concrete strength f'c", 30.0, "pressure",
                  "material name 'Concrete C30/37'"),
        BasisItem("BarYield", "yield of bars fy", 400.0, "pressure", "defaults of the brief",
                  True),
        BasisItem("Cover", "clear cover to stirrups", 40.0, "length", "defaults of the brief",
                  True),
        BasisItem("EffectiveDepthSagging", "effective depth, sagging", 536.0, "length",
                  "bars: IfcReinforcingBar #4410, #4411"),
        BasisItem("AreaSagging", "tension steel, sagging", 1500.0, "area", "bars: 3-25M"),
        BasisItem("Span", "span between bearings", beam.length, "length",
                  "axis of the body, bearing 0 mm"),
        BasisItem("Supports", "supports", "pinned, pinned", "label", "defaults of the brief",
                  True),
    )  # fmt: skip


def _rating(beam: Beam, i: int, cases: Sequence[str], of: int) -> Rating:
    used = _utilisations(i, of)
    states = _limit_states(beam, used)
    governing = max(states, key=lambda state: state.utilisation)
    short = governing.utilisation > 1.0
    reasons = () if short else _reasons(beam, i)
    verdict = Verdict.FALLS_SHORT if short else Verdict.NOT_RATED if reasons else Verdict.ADEQUATE
    blocked = any(reason.blocking for reason in reasons)
    return Rating(
        beam=beam.key,
        verdict=verdict,
        utilisation=math.nan if blocked else governing.utilisation,
        governing=None if blocked else governing,
        limit_states=() if blocked else states,
        safe_loads=() if blocked else tuple(
            _safe_load(beam, case, governing.utilisation, i) for case in cases
        ),
        reasons=reasons,
        remarks=(
            Remark(beam.key, "read", "cover is taken from the brief's defaults", "assumption"),
            Remark(beam.key, "rate", "loads are assumed to act through the web", "note"),
        ),
        basis=_basis(beam),
        checked=() if blocked else ("flexure", "shear", "longitudinal tension"),
        not_checked=("torsion", "deflection", "crack width"),
    )  # fmt: skip


def _reasons(beam: Beam, i: int) -> tuple[Reason, ...]:
    if beam.axis is None:
        return (Reason("the body is a boundary representation, which is not read yet"),)
    if i % 13 == 7:
        return (Reason("reinforcement of the soffit could not be read: bar #4417 has no area"),)
    if i % 19 == 11:
        return (
            Reason("reactions not included: IfcBeam 'B-1204' rests on it at x = 2.80 m", False),
        )
    return (Reason(TO_BE_RATED),) if i % 29 == 2 else ()


def made_up_sheet(beam: Beam, rating: Rating) -> Sheet:
    if beam.axis is None:
        return Sheet(beam, rating, (), (), (), (), None, math.nan, (), ())
    length = beam.length
    end = Support("fixed" if beam.mark.startswith("W") else "pinned", 300.0, "brief")
    span = Span(0.0, length, Support("pinned", 300.0, "touches a column"), end)
    spans = (RatedSpan(span, (150.0, length - 150.0), (True, True)),)
    blocked = any(reason.blocking for reason in rating.reasons)
    return Sheet(
        beam=beam,
        rating=rating,
        spans=spans,
        loads=_loads(beam),
        bars=_bars(length),
        stirrups=_stirrups(length),
        section=beam.runs[0].outline,
        section_x=length / 2.0,
        checks=() if blocked else tuple(map(_check, rating.limit_states)),
        diagrams=() if blocked else _diagrams(length, rating.limit_states),
    )


def _loads(beam: Beam) -> tuple[Load, ...]:
    length = beam.length
    return (
        Load(beam.key, "self", "line", 0.0, length, (4.9, 4.9), origin="outline", text="4.9 kN/m"),
        Load(beam.key, "services", "line", 0.0, length, (3.2, 3.2), origin="brief.toml: loads[0]",
             text="3.2 kN/m"),
        Load(beam.key, "press", "line", 0.2 * length, 0.7 * length, (4.0, 9.0),
             origin="brief.toml: loads[3]", text="4 to 9 kN/m"),
        Load(beam.key, "press", "point", 2100.0, 2100.0, (60e3, 0.0),
             origin="brief.toml: loads[4]", text="60 kN at 2.1 m"),
        Load(beam.key, "hoist", "point", 0.6 * length, 0.6 * length, (25e3, 0.0), face="bottom",
             origin="brief.toml: loads[5]", text="25 kN at 60 %, hung"),
    )  # fmt: skip


def _bars(length: float) -> tuple[Bars, ...]:
    steel = Given(400.0, "defaults of the brief", assumed=True)
    return (
        Bars(3, 25.2, 500.0, 40.0, length - 40.0, 64.0, (-100.0, 0.0, 100.0), steel,
             Anchor.HOOK, Anchor.HOOK, "25M", "IfcReinforcingBar #4410"),
        Bars(2, 19.5, 300.0, 0.2 * length, 0.8 * length, 115.0, (-100.0, 100.0), steel,
             Anchor.STRAIGHT, Anchor.STRAIGHT, "20M", "IfcReinforcingBar #4411"),
        Bars(2, 16.0, 200.0, 0.0, length, 539.0, (-104.0, 104.0), steel,
             Anchor.ANCHORED, Anchor.ANCHORED, "15M", "IfcReinforcingBar #4412"),
    )  # fmt: skip


def _stirrups(length: float) -> tuple[Stirrups, ...]:
    ends = ((0.0, 0.25, 150.0), (0.25, 0.75, 250.0), (0.75, 1.0, 150.0))
    return tuple(
        Stirrups(a * length, b * length, s, 11.3, 100.0, 2, True, Given(400.0, "brief"),
                 40.0, 560.0, 130.0, f"10M @ {s:.0f}", "IfcReinforcingBar #4420")
        for a, b, s in ends
    )  # fmt: skip


def _diagrams(length: float, states: Sequence[LimitStateRating]) -> tuple[Diagram, ...]:
    x = np.linspace(0.0, length, 49)
    sagging, _, shear = states
    moment = 4.0 * sagging.demand / 1e6 * (x / length) * (1.0 - x / length)
    force = shear.demand / 1e3 * (1.0 - 2.0 * x / length)
    stepped = np.where((x < 0.25 * length) | (x > 0.75 * length), 1.0, 0.62)
    ends = np.clip(np.minimum(x, length - x) / (0.12 * length), 0.15, 1.0)
    return (
        Diagram("Moment", "kN*m", x, moment, 0.45 * moment, ends * sagging.resistance / 1e6,
                np.full_like(x, -62.0), sagging.position),
        Diagram("Shear", "kN", x, force, 0.45 * force, stepped * shear.resistance / 1e3,
                -stepped * shear.resistance / 1e3, shear.position),
    )  # fmt: skip


def _check(state: LimitStateRating) -> SheetCheck:
    scale, unit = (1e6, "kN*m") if state.demand_unit == "N*mm" else (1e3, "kN")
    demand, resistance = state.demand / scale, state.resistance / scale
    return SheetCheck(
        title=state.title,
        clause=state.clause,
        place=f"at x = {state.position / 1000.0:.2f} m, combination {state.combination}",
        lines=_lines(demand, resistance, unit),
        utilisation=state.utilisation,
        outcome=(
            f"{show_ratio(state.utilisation)}: demand {demand:.1f} {unit},"
            f" resistance {resistance:.1f} {unit}"
        ),
    )


def _lines(demand: float, resistance: float, unit: str) -> tuple[SheetLine, ...]:
    given = (
        ("fc", "concrete strength", "30 MPa", ""),
        ("bw", "least width of the web", "350 mm", ""),
        ("d", "effective depth", "536 mm", ""),
        ("phi_c", "resistance factor of concrete", "0.65", "8.4.2"),
        ("phi_s", "resistance factor of bars", "0.85", "8.4.3"),
    )
    worked = (
        ("alpha1", "stress block", "0.85 - 0.0015 * fc", "0.85 - 0.0015 * 30", "0.805", "10.1.7"),
        ("beta1", "stress block", "0.97 - 0.0025 * fc", "0.97 - 0.0025 * 30", "0.895", "10.1.7"),
        ("T", "tension in the bars", "phi_s * As * fy", "0.85 * 2100 * 400", "714 kN", "8.4.3"),
        ("a", "depth of the block", "T / (alpha1 * phi_c * fc * bw)",
         "714000 / (0.805 * 0.65 * 30 * 350)", "130 mm", "10.1.7"),
        ("dv", "effective shear depth", "max(0.9 * d, 0.72 * h)", "max(0.9 * 536, 0.72 * 600)",
         "482 mm", "3.2"),
        ("eps_x", "strain at mid-depth", "(Mf / dv + Vf) / (2 * Es * As)",
         "(98.1e6 / 482 + 121000) / (2 * 200000 * 2100)", "0.000386", "11.3.6.4"),
        ("beta", "factor of aggregate interlock", "0.4 / (1 + 1500 * eps_x)",
         "0.4 / (1 + 1500 * 0.000386)", "0.253", "11.3.6.4"),
        ("Vc", "shear carried by concrete", "phi_c * lambda * beta * sqrt(fc) * bw * dv",
         "0.65 * 1.0 * 0.253 * sqrt(30) * 350 * 482", "152 kN", "11.3.4"),
    )  # fmt: skip
    return (
        *(SheetLine(s, text, "", "", result, clause) for s, text, result, clause in given),
        *(SheetLine(s, text, f, n, r, c) for s, text, f, n, r, c in worked),
        SheetLine("R", "resistance", "T * (d - a / 2)", "714 * (536 - 130 / 2)",
                  f"{resistance:.1f} {unit}", "10.1"),
        SheetLine("E", "demand", "", "", f"{demand:.1f} {unit}", ""),
    )  # fmt: skip


def _case(case: str, ratings: Sequence[Rating]) -> CaseSummary:
    factors = {r.beam: s.factor for r in ratings for s in r.safe_loads if s.case == case}
    unrated = tuple(r.beam for r in ratings if r.verdict is Verdict.NOT_RATED)[:2]
    worst = min(factors, key=lambda key: factors[key], default=None)
    if case == "hoist":
        return CaseSummary(case, "crane", math.nan, None, "", len(factors) + 2, unrated)
    factor = factors[worst] if worst else math.inf
    return CaseSummary(case, "imposed", factor, worst, "limited by flexure, sagging", len(factors))


def made_up_report(
    bays: int = 3, rows: int = 1, cases: Sequence[str] = ("press", "hoist")
) -> Report:
    """About 40 beams with the default bays and rows; more of both for a larger hall."""
    beams = _beams(bays, rows)
    ratings = {beam.key: _rating(beam, i, cases, len(beams)) for i, beam in enumerate(beams)}
    by_key = {beam.key: beam for beam in beams}
    sheets = {key: made_up_sheet(by_key[key], rating) for key, rating in ratings.items()}
    model = Model(
        name="press-hall",
        file_name="press-hall.ifc",
        schema="IFC4",
        sha256="3f5a" * 16,
        beams=tuple(beams),
        out_of_scope=(
            OutOfScope("s1", 1, "Runway HEA 300", "Level 1", "steel", "material S355"),
            OutOfScope("s2", 2, "Runway HEA 300", "Level 1", "steel", "material S355"),
            OutOfScope("t1", 3, "Purlin", "Roof", "timber", "material GL24h"),
        ),
        members=tuple(_members(beams, bays, rows)),
        storeys=tuple(Storey(name, (i + 1) * HEIGHT) for i, name in enumerate(STOREYS)),
    )
    assumed = tuple(beam.key for beam in beams[: len(beams) // 2])
    return Report(
        version="0.0.0",
        standard_id="csa-a23.3-14",
        standard_title="CSA A23.3, Design of concrete structures",
        standard_edition="2014",
        actions="National Building Code of Canada 2015",
        shear_method="general",
        brief_name="brief.toml",
        brief_sha256="9c1e" * 16,
        model=model,
        ratings=ratings,
        sheet=sheets.__getitem__,
        spans={key: sheet.spans for key, sheet in sheets.items() if sheet.spans},
        cases=tuple(_case(case, list(ratings.values())) for case in cases),
        combinations=(
            Combination("1.4 permanent", "strength", {"self": (1.4, 1.4), "permanent": (1.4, 1.4)}),
            Combination("1.25 permanent + 1.5 imposed", "strength",
                        {"self": (1.25, 0.9), "permanent": (1.25, 0.9), "imposed": (1.5, 0.0)}),
        ),
        remarks=(Remark(None, "read", "schedule row 14: no beam of the model has the mark B-999"),),
        assumptions=(
            Assumption("clear cover 40 mm, from the defaults of the brief", assumed),
            Assumption("loads act through the web of every beam"),
        ),
    )  # fmt: skip


HOSTILE = (
    "<script>alert(1)</script>",
    "</script><img src=x onerror=alert(1)>",
    "\"'><svg onload=alert(1)>",
    '=HYPERLINK("http://x")',
    "\u202egnp.exe\x1b[31m\x00\x07",
    "{{ 7*7 }} [bold red]x[/]",
    "@SUM(A1) \ud800",
    "بعد \u2066-1",
)


def hostile_report() -> Report:
    """The made-up report with names that try to break out of every output."""
    report = made_up_report()
    spoilt = [
        replace(
            beam,
            name=HOSTILE[i % len(HOSTILE)],
            tag=HOSTILE[(i + 1) % len(HOSTILE)],
            storey=HOSTILE[i % 3],
            type_name=HOSTILE[(i + 2) % len(HOSTILE)],
            material=HOSTILE[(i + 3) % len(HOSTILE)],
        )
        for i, beam in enumerate(report.model.beams)
    ]
    by_key = {beam.key: beam for beam in spoilt}
    ratings = {key: _spoilt(rating) for key, rating in report.ratings.items()}
    model = replace(
        report.model,
        file_name=HOSTILE[1],
        beams=tuple(spoilt),
        out_of_scope=(OutOfScope("x", 1, HOSTILE[0], HOSTILE[1], HOSTILE[2], HOSTILE[3]),),
    )
    return replace(
        report,
        model=model,
        ratings=ratings,
        brief_name=HOSTILE[0],
        sheet=lambda key: made_up_sheet(by_key[key], ratings[key]),
    )


def _spoilt(rating: Rating) -> Rating:
    return replace(
        rating,
        reasons=tuple(reason._replace(text=HOSTILE[1]) for reason in rating.reasons),
        remarks=tuple(Remark(rating.beam, "read", text, "doubt") for text in HOSTILE),
        basis=tuple(item._replace(source=HOSTILE[2]) for item in rating.basis),
    )
