"""The shear calculation as an engineer writes it down, line by line."""

from __future__ import annotations

from ifccheck.standards.contract import CalculationLine


def given(symbol: str, text: str, field: str, unit: str, clause: str = "") -> CalculationLine:
    """Line of a given quantity."""
    return CalculationLine(symbol, text, "", field, unit, clause)


SECTION_LINES = (
    CalculationLine(
        "Vf",
        "shear, at the critical section where that is allowed",
        "",
        "shear",
        "N",
        "11.3.2",
        "level",
    ),
    given("V", "shear at the place", "own_shear", "N"),
    given("Mf", "moment that goes with it", "moment", "N*mm"),
    given("dv", "effective shear depth", "shear_depth", "mm", "2.3"),
    CalculationLine(
        "do",
        "height of the openings, which is not in dv",
        "",
        "shear_loss",
        "mm",
        "rule for openings",
        "opened",
    ),
    CalculationLine(
        "Vo",
        "shear of the loads, at the critical section where that is allowed",
        "",
        "shear_of_loads",
        "N",
        "11.3.2",
        "inclined",
    ),
    CalculationLine(
        "iu",
        "rise of the upper chord for each mm, positive where it adds to the shear",
        "",
        "upper_rise",
        "",
        "",
        "inclined",
    ),
    CalculationLine(
        "il",
        "rise of the lower chord for each mm, positive where it adds to the shear",
        "",
        "lower_rise",
        "",
        "",
        "inclined",
    ),
    CalculationLine(
        "Vu",
        "vertical component of the upper chord",
        "iu * Mf / dv",
        "upper_shear",
        "N",
        "",
        "inclined",
    ),
    CalculationLine(
        "Vl",
        "vertical component of the lower chord",
        "il * Mf / dv",
        "lower_shear",
        "N",
        "",
        "inclined",
    ),
    CalculationLine(
        "Vf",
        "shear with the components of the chords where they are unfavourable",
        "max(Vo, Vo + Vu, Vo + Vl, Vo + Vu + Vl, -Vo - Vu, -Vo - Vl, -Vo - Vu - Vl)",
        "shear",
        "N",
        "11.2.4",
        "inclined",
    ),
    given("bw", "least web width within the depth", "web_width", "mm", "2.3"),
    given("fc", "concrete strength", "concrete_strength", "MPa"),
    given("lam", "factor for the density of the concrete", "density_factor", "", "8.6.5"),
)

STIRRUP_LINES = (
    CalculationLine("Av", "stirrup legs", "", "stirrup_area", "mm2", "", "has_stirrups"),
    CalculationLine("s", "stirrup spacing", "", "stirrup_spacing", "mm", "", "has_stirrups"),
    CalculationLine(
        "fyv", "stirrup yield strength", "", "stirrup_yield", "MPa", "", "has_stirrups"
    ),
    CalculationLine(
        "Av_min",
        "least stirrup area that counts",
        "0.06 * sqrt(fc) * bw * s / fyv",
        "minimum_stirrup_area",
        "mm2",
        "11.2.8.2",
        "has_stirrups",
    ),
    CalculationLine(
        "s_max",
        "widest spacing that counts",
        "min(0.7 * dv, 600) * where(Vf > 0.125 * lam * 0.65 * fc * bw * dv, 0.5, 1)",
        "greatest_spacing",
        "mm",
        "11.3.8",
        "has_stirrups",
    ),
)

CRACK_LINES = (
    CalculationLine(
        "ag", "effective aggregate size", "", "aggregate_size", "mm", "11.3.6.4", "plain"
    ),
    CalculationLine(
        "As", "developed tension steel", "", "tension_area", "mm2", "11.3.6.4", "general"
    ),
    CalculationLine(
        "e",
        "how far off the section is at which eps_x is taken; 0 where it is this place",
        "",
        "distance",
        "mm",
        "11.3.6.4",
        "general",
    ),
    CalculationLine(
        "Mv",
        "moment for the strain",
        "max(Mf + V * e, Vf * dv)",
        "strain_moment",
        "N*mm",
        "11.3.6.4",
        "general",
    ),
    CalculationLine(
        "eps_x",
        "longitudinal strain at mid-depth",
        "(Mv / dv + Vf) / (2 * 200000 * As)",
        "strain",
        "",
        "11.3.6.4",
        "general",
    ),
    CalculationLine(
        "sze",
        "crack spacing with minimum stirrups",
        "300",
        "crack_spacing",
        "mm",
        "11.3.6.4",
        "general_effective",
    ),
    CalculationLine(
        "sze",
        "equivalent crack spacing",
        "max(35 * dv / (15 + ag), 0.85 * dv)",
        "crack_spacing",
        "mm",
        "11.3.6.4",
        "general_plain",
    ),
    CalculationLine(
        "sze",
        "equivalent crack spacing",
        "max(35 * (dv + do) / (15 + ag), 0.85 * (dv + do))",
        "crack_spacing",
        "mm",
        "11.3.6.4",
        "opened_general_plain",
    ),
    CalculationLine(
        "sze",
        "equivalent crack spacing",
        "max(35 * dv / (15 + ag), 0.85 * dv)",
        "crack_spacing",
        "mm",
        "11.3.6.3",
        "simplified_plain_spacing",
    ),
    CalculationLine(
        "sze",
        "equivalent crack spacing",
        "max(35 * (dv + do) / (15 + ag), 0.85 * (dv + do))",
        "crack_spacing",
        "mm",
        "11.3.6.3",
        "opened_simplified_plain_spacing",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete",
        "0.4 / (1 + 1500 * eps_x) * 1300 / (1000 + sze)",
        "beta",
        "",
        "11.3.6.4",
        "general",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete, with minimum stirrups",
        "0.18",
        "beta",
        "",
        "11.3.6.3",
        "simplified_effective",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete, without minimum stirrups",
        "230 / (1000 + dv)",
        "beta",
        "",
        "11.3.6.3",
        "simplified_plain_depth",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete, without minimum stirrups",
        "230 / (1000 + dv + do)",
        "beta",
        "",
        "11.3.6.3",
        "opened_simplified_plain_depth",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete, without minimum stirrups",
        "230 / (1000 + sze)",
        "beta",
        "",
        "11.3.6.3",
        "simplified_plain_spacing",
    ),
    CalculationLine(
        "beta",
        "share of the cracked concrete, without minimum stirrups",
        "230 / (1000 + sze)",
        "beta",
        "",
        "11.3.6.3",
        "opened_simplified_plain_spacing",
    ),
    CalculationLine(
        "theta",
        "angle of the diagonal compression",
        "29 + 7000 * eps_x",
        "theta",
        "deg",
        "11.3.6.4",
        "general",
    ),
    CalculationLine(
        "theta",
        "angle of the diagonal compression",
        "35",
        "theta",
        "deg",
        "11.3.6.3",
        "simplified",
    ),
)

STIRRUP_TERM_LINES = (
    CalculationLine(
        "Vs",
        "carried by stirrups",
        "0.85 * Av * fyv * dv / tan(radians(theta)) / s",
        "stirrup_term",
        "N",
        "11.3.5.1",
        "stirrup_force",
    ),
    CalculationLine(
        "Vs",
        "no stirrups, or fewer or wider apart than counts",
        "0",
        "stirrup_term",
        "N",
        "11.2.8.2, 11.3.8",
        "idle",
    ),
    CalculationLine(
        "Vs", "stirrup legs not stated", "", "stirrup_term", "N", "11.3.5.1", "legs_unknown"
    ),
)

RESISTANCE_LINES = (
    CalculationLine(
        "Vc",
        "carried by the concrete",
        "0.65 * lam * beta * min(sqrt(fc), 8) * bw * dv",
        "concrete_term",
        "N",
        "11.3.4",
        "computable",
    ),
    *STIRRUP_TERM_LINES,
    CalculationLine(
        "Vr_max",
        "greatest shear whatever the stirrups",
        "0.25 * 0.65 * fc * bw * dv",
        "greatest",
        "N",
        "11.3.3",
    ),
    given(
        "k",
        "1: the tension face holds steel; 0: it holds none, so there is no resistance",
        "steel_present",
        "",
        "11.3.1",
    ),
    CalculationLine(
        "Vr",
        "shear resistance",
        "k * min(Vc + Vs, Vr_max)",
        "resistance",
        "N",
        "11.3.3",
        "computable",
    ),
    CalculationLine(
        "Vr",
        "shear resistance: none without developed tension steel",
        "",
        "resistance",
        "N",
        "11.3.6.4",
        "without_steel",
    ),
)

SHEAR_LINES = (*SECTION_LINES, *STIRRUP_LINES, *CRACK_LINES, *RESISTANCE_LINES)
