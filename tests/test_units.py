"""Quantities in and out, with pint's registry as the referee of every factor."""

import math
import re
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.errors import BriefError
from ifccheck.units import (
    UNITS,
    QuantityError,
    parse_quantity,
    read_quantity,
    show,
    show_ratio,
)

INNER = {
    "length": "mm",
    "force": "N",
    "line_load": "N/mm",
    "area_load": "N/mm**2",
    "stress": "N/mm**2",
    "moment": "N*mm",
    "unit_weight": "N/mm**3",
    "density": "kg/m**3",
    "angle": "radian",
}
PINT_NAMES = {
    "tf": "(1000*kgf)",
    "kip": "(1000*lbf)",
    "plf": "lbf/ft",
    "klf": "1000*lbf/ft",
    "psf": "lbf/ft**2",
    "ksf": "1000*lbf/ft**2",
    "psi": "lbf/in**2",
    "ksi": "1000*lbf/in**2",
    "pcf": "lbf/ft**3",
    "kPa": "kPa",
    "MPa": "MPa",
    "in": "inch",
}
WORD = re.compile(r"[A-Za-z]+")
EVERY_UNIT = [(kind, unit) for kind, units in UNITS.items() for unit in units]


@pytest.fixture(scope="module")
def registry():
    return pint.UnitRegistry()


def _for_pint(kind, unit):
    if kind == "density" and unit == "pcf":
        return "lb/ft**3"
    spelled = WORD.sub(lambda word: PINT_NAMES.get(word[0], word[0]), unit)
    return re.sub(r"([a-z])([23])$", r"\1**\2", spelled)


@pytest.mark.parametrize(("kind", "unit"), [k for k in EVERY_UNIT if k[0] != "ratio"])
def test_every_factor_agrees_with_pint(registry, kind, unit):
    expected = registry.parse_expression(_for_pint(kind, unit)).to(INNER[kind]).magnitude
    assert float(UNITS[kind][unit]) == pytest.approx(expected, rel=1e-12)


def test_percent_is_a_hundredth():
    assert UNITS["ratio"] == {"%": Fraction(1, 100)}


@pytest.mark.parametrize(("kind", "unit"), EVERY_UNIT)
def test_every_unit_is_read(kind, unit):
    assert parse_quantity(f"1e-3 {unit}", kind) == pytest.approx(1e-3 * float(UNITS[kind][unit]))
    assert parse_quantity(f"1e-3{unit}", kind) == parse_quantity(f" 1e-3  {unit} ", kind)


def test_the_closed_list_holds_what_the_design_names():
    named = {
        "length": "m mm cm in ft",
        "force": "N kN lbf kip kgf tf",
        "line_load": "kN/m kip/ft plf klf N/mm",
        "area_load": "kN/m2 kPa psf ksf",
        "stress": "MPa N/mm2 psi ksi kPa",
        "unit_weight": "kN/m3 pcf",
        "moment": "kN*m kip*ft N*mm",
        "angle": "deg rad",
        "ratio": "%",
        "density": "kg/m3",
    }
    for kind, units in named.items():
        assert set(units.split()) <= set(UNITS[kind])


@pytest.mark.parametrize(
    ("text", "millimetres"),
    [
        ("12 ft 6 in", 3810.0),
        ("12'-6\"", 3810.0),
        ("12'6\"", 3810.0),
        ("12' 6\"", 3810.0),
        ("12'-6 1/2\"", 3822.7),
        ("12 ft 6 1/2 in", 3822.7),
        ("12'", 3657.6),
        ('6"', 152.4),
        ("-12'-6\"", -3810.0),
        ("0 ft 11.5 in", 292.1),
        ("12 ft", 3657.6),
    ],
)
def test_feet_and_inches(text, millimetres):
    assert parse_quantity(text, "length") == millimetres


def test_decimal_text_is_converted_without_binary_noise():
    assert parse_quantity("2.01 m", "length") == 2010.0
    assert 2.01 * 1000.0 != 2010.0
    assert parse_quantity("35 %", "ratio") == 0.35


finite = st.floats(-1e6, 1e6, allow_nan=False, allow_subnormal=False)


@given(value=finite, choice=st.sampled_from(EVERY_UNIT))
def test_what_is_written_is_read_back(value, choice):
    kind, unit = choice
    inner = value * float(UNITS[kind][unit])
    text = f"{value!r} {unit}"
    read, told = _read(text, kind)
    assert told is None or "is beyond" in told
    assert read is None or read == pytest.approx(inner, rel=1e-12, abs=0.0)


def _read(text, kind):
    """The quantity, or what is told of it."""
    try:
        return parse_quantity(text, kind), None
    except QuantityError as error:
        return None, str(error)


@given(st.text(max_size=40), st.sampled_from(sorted(UNITS)))
def test_any_text_is_a_finite_number_or_one_clear_line(text, kind):
    read, told = _read(text, kind)
    assert math.isfinite(read) if told is None else told and "\n" not in told


@given(st.from_regex(r"[+-]?[0-9.,' e-]{1,8} ?[a-zA-Z/0-9 \"*%]{0,8}", fullmatch=True))
def test_near_quantities_are_read_or_refused(text):
    read, told = _read(text, "length")
    assert math.isfinite(read) if told is None else told and "\n" not in told


REFUSED = [
    (5, "force", "5 has no unit: write a force as text like"),
    (5.5, "length", "5.5 has no unit: write a length as text like"),
    ("5", "force", "'5' has no unit"),
    (True, "force", "True is not a force"),
    (None, "force", "None is not a force"),
    (["5 kN"], "force", "is not a force"),
    (float("nan"), "force", "nan is not a finite number"),
    ("nan kN", "force", "'nan kN' is not a finite number"),
    ("inf kN", "force", "'inf kN' is not a finite number"),
    ("-Infinity kN", "force", "is not a finite number"),
    ("1e300 kN", "force", "'1e300 kN' is beyond 1000000 kN, the greatest force"),
    ("1e999 kN", "force", "is beyond"),
    ("-1e999 kN", "force", "is beyond"),
    ("9" * 5000 + " kN", "force", "is not a force"),
    ("1001 m", "length", "is beyond 1000 m, the greatest length"),
    ("3,2 kN/m", "line_load", "has a comma"),
    ("1,200 mm", "length", "has a comma"),
    ("1.200,5 mm", "length", "has a comma"),
    ("60 kn", "force", "unknown unit 'kn': did you mean kN?"),
    ("60 KN", "force", "did you mean kN?"),
    ("30 Mpa", "stress", "did you mean MPa?"),
    ("5 kNm", "moment", "did you mean kN*m?"),
    ("5 kN·m", "moment", "did you mean kN*m?"),
    ("5 kip-ft", "moment", "did you mean kip*ft?"),
    ("5 kips", "force", "did you mean kip?"),
    ("5 kN/m²", "area_load", "did you mean kN/m2?"),
    ("5 furlong", "length", "unknown unit 'furlong': use one of m, cm, mm, ft, in"),
    ("5 kN", "length", "'5 kN' is a force, but a length is needed"),
    ("5 kN", "line_load", "'5 kN' is a force, but a load per length is needed"),
    ("5 m", "force", "'5 m' is a length, but a force is needed"),
    ("5 kg", "force", "is a mass where a force is needed: write a force, in kgf or kN"),
    ("5 t", "force", "is a mass where a force is needed: write a force, in tf or kN"),
    ("5 lb", "force", "is a mass where a force is needed: write a force, in lbf or kN"),
    ("5 kg/m", "line_load", "write a force, in kgf/m or kN/m"),
    ("5 t/m2", "area_load", "write a force, in tf/m2 or kN/m2"),
    ("2400 kg/m3", "unit_weight", "write a force, in kgf/m3 or kN/m3"),
    ("", "force", "is empty"),
    ("  ", "force", "is empty"),
    ("heavy", "force", "'heavy' is not a force"),
    ("5 mm # wide", "length", "unknown unit"),
    ("3 2 kN", "force", "is not a force"),
    ("1_000 mm", "length", "is not a length"),
    ("٣ mm", "length", "is not a length"),
    ("5\n6 mm", "length", "is not a length"),
    ("0x10 mm", "length", "unknown unit"),
    ("12 ft 13 in", "length", "has 13 inches after the feet"),
    ("12'-12\"", "length", "has 12 inches after the feet"),
    ("12'-6 3/2\"", "length", "is not a proper fraction"),
    ("12'-6 1/0\"", "length", "is not a proper fraction"),
]


@pytest.mark.parametrize(("text", "kind", "message"), REFUSED)
def test_what_is_no_quantity_is_refused_in_one_line(text, kind, message):
    with pytest.raises(BriefError) as caught:
        read_quantity(text, kind, "brief.toml: loads[1].point (line 7)")
    told = str(caught.value)
    assert told.startswith("brief.toml: loads[1].point (line 7): ")
    assert message in told
    assert "\n" not in told
    assert len(told) < 250


def test_no_text_is_evaluated():
    for text in ("2*3 mm", "(5) mm", "5+5 mm", "5 mm**2", "__import__('os') mm", "5 m*m"):
        with pytest.raises(QuantityError):
            parse_quantity(text, "length")


@pytest.mark.parametrize(
    ("value", "kind", "text"),
    [
        (84_249.0, "force", "84.2 kN"),
        (1_234_567.0, "force", "1235 kN"),
        (842.49, "force", "0.842 kN"),
        (-157.2e6, "moment", "-157 kN*m"),
        (2100.0, "length", "2.10 m"),
        (6400.0, "length", "6.40 m"),
        (30.0, "stress", "30.0 MPa"),
        (3.2, "line_load", "3.20 kN/m"),
        (1.5e-3, "area_load", "1.50 kN/m2"),
        (23.5e-6, "unit_weight", "23.5 kN/m3"),
        (400.0, "dimension", "400 mm"),
        (1500.0, "area", "1500 mm2"),
        (0.35, "ratio", "35.0 %"),
        (math.radians(35.0), "angle", "35.0 deg"),
        (0.0, "force", "0 kN"),
        (-0.0, "moment", "0 kN*m"),
        (1.5, "moment", "1.50e-06 kN*m"),
        (0.4, "length", "0.00 m"),
        (-0.4, "length", "0.00 m"),
        (math.nan, "force", "not known"),
        (math.inf, "force", "infinite"),
        (-math.inf, "force", "-infinite"),
    ],
)
def test_quantities_are_shown_in_the_units_of_the_trade(value, kind, text):
    assert show(value, kind) == text


def test_a_safe_load_is_rounded_down_and_never_up():
    assert show(84_299.0, "force", rounding="down") == "84.2 kN"
    assert show(84_201.0, "force", rounding="up") == "84.3 kN"
    assert show(84_200.0, "force", rounding="down") == "84.2 kN"
    assert show(-84_201.0, "force", rounding="down") == "-84.3 kN"


@given(st.floats(1e-6, 1e9))
def test_rounding_down_never_overstates(value):
    number, unit = show(value, "force", rounding="down").split()
    assert unit == "kN"
    assert float(number) * 1e3 <= value * (1.0 + 1e-11)


@given(st.floats(1.0, 1e9), st.sampled_from(["force", "moment", "stress", "length", "line_load"]))
def test_what_is_shown_is_near_what_is_meant(value, kind):
    number, unit = show(value, kind).split()
    inner = float(number) * float(UNITS[kind][unit])
    step = 5.0 if kind == "length" else 0.0051 * value
    assert inner == pytest.approx(value, abs=step)


@pytest.mark.parametrize(
    ("ratio", "text"),
    [
        (0.836, "0.84"),
        (1.0, "1.00"),
        (0.996, "0.996"),
        (0.9996, "0.9996"),
        (0.99999, "<1"),
        (1.0004, "1.0004"),
        (1.004, "1.004"),
        (1.006, "1.01"),
        (1.0000001, ">1"),
        (0.0, "0.00"),
        (0.001, "<0.01"),
        (12.345, "12.35"),
        (math.inf, "infinite"),
        (math.nan, "not known"),
    ],
)
def test_a_ratio_is_shown_on_its_side_of_one(ratio, text):
    assert show_ratio(ratio) == text


@given(st.one_of(st.floats(0.0, 3.0), st.floats(0.99, 1.01), st.floats(1 - 1e-6, 1 + 1e-6)))
def test_a_ratio_never_reads_as_one_unless_it_is(ratio):
    text = show_ratio(ratio)
    if text.startswith(("<", ">")):
        bound = float(text[1:])
        assert ratio < bound if text[0] == "<" else ratio > bound
        return
    shown = float(text)
    assert (shown > 1.0) == (ratio > 1.0)
    assert (shown < 1.0) == (ratio < 1.0)
