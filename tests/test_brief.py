"""The brief: what it says is read as it says it, and every fault is one clear line."""

import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ifccheck.beam import Case, Combination
from ifccheck.brief.cases import cases_of, combination_remarks, combinations_of
from ifccheck.brief.load import load_brief
from ifccheck.brief.model import Selection
from ifccheck.brief.places import lines_of
from ifccheck.errors import BriefError

BASIS = """\
[basis]
standard = "csa-a23.3-14"
concrete_unit_weight = "23.5 kN/m3"
"""
CASES = """
[cases.services]
nature = "permanent"
[cases.press]
nature = "imposed"
category = "storage"
rated = true
"""
LOAD = """
[[loads]]
case = "press"
beams = ["B-1"]
"""


@pytest.fixture
def load(tmp_path):
    def load(text, encoding="utf-8"):
        path = tmp_path / "brief.toml"
        path.write_bytes(text.encode(encoding) if isinstance(text, str) else text)
        return load_brief(path)

    return load


@pytest.fixture
def fault(load):
    """The one line that is told of a faulty brief."""

    def fault(text):
        with pytest.raises(BriefError) as caught:
            load(text)
        told = str(caught.value)
        assert "\n" not in told
        assert told.startswith("brief.toml:")
        assert caught.value.exit_status == 2
        return told

    return fault


WHOLE = """\
[basis]
standard = "csa-a23.3-14"            # an entry point
shear_method = "general"
concrete_unit_weight = "23.5 kN/m3"

[defaults]
concrete_strength = "4000 psi"
bar_yield = "400 MPa"
stirrup_yield = "400 MPa"
cover = "1.5 in"
aggregate_size = "20 mm"
supports = ["pinned", "fixed"]

[reinforcement]
sources = ["bars", "properties"]

[reinforcement.properties]
top = "Reinforcement_Beam.TopBars"

[cases.services]
nature = "permanent"
removable = true
[cases.press]
nature = "imposed"
category = "storage"
rated = true
[cases.hoist]
nature = "crane"
excludes = ["press"]

[[loads]]
case = "services"
where = 'IfcBeam, location="Level 2"'
line = "3.2 kN/m"

[[loads]]
case = "services"
beams = ["B-3*"]
area = "1.5 kN/m2"
tributary_width = "2.4 m"
projected = true

[[loads]]
case = "press"
beams = ["B-204", "B-21*"]
point = "60 kN"
at = "2.1 m"
face = "bottom"
optional = true

[[loads]]
case = "press"
beams = ["B-205"]
line = ["4 kN/m", "9 kN/m"]
from = "1.2 m"
to = "4.8 m"

[[loads]]
case = "hoist"
beams = ["B-206"]
moment = "-12 kN*m"
at = "35 %"
at_from = "C-3"

[[supports]]
beams = ["HB-*"]
start = "fixed"
end = "free"
bearing = ["400 mm", "0 mm"]

[[beams]]
beams = ["B-7"]
span = "6.4 m"
unloaded = true
loads_complete = true

[[materials]]
beams = ["B-8"]
concrete_strength = "45 MPa"
density = "2400 kg/m3"

[[combinations]]
name = "strength"
kind = "strength"
factors = { self = [1.25, 0.9], permanent = 1.25, imposed = 1.5, crane = [1.5, 0] }
"""


def test_a_whole_brief_is_read(load):
    brief = load(WHOLE)
    assert brief.file_name == "brief.toml"
    assert (brief.basis.standard, brief.basis.shear_method) == ("csa-a23.3-14", "general")
    assert brief.basis.concrete_unit_weight == 23.5e-6
    defaults = brief.defaults
    assert defaults.concrete_strength == pytest.approx(27.579, abs=1e-3)  # 4000 psi
    assert (defaults.bar_yield, defaults.stirrup_yield) == (400.0, 400.0)
    assert (defaults.cover, defaults.aggregate_size) == (38.1, 20.0)
    assert defaults.supports == ("pinned", "fixed")
    assert brief.sources == ("bars", "properties")
    assert brief.schedule is None
    assert brief.property_mapping == {"top": "Reinforcement_Beam.TopBars"}
    assert brief.cases == (
        Case("services", "permanent", removable=True),
        Case("press", "imposed", "storage", rated=True),
        Case("hoist", "crane", excludes=("press",)),
    )


def test_loads_are_read(load):
    line, area, point, trapezoid, moment = load(WHOLE).loads
    assert (line.place, line.kind, line.values) == ("loads[1]", "line", (3.2, 3.2))
    assert line.selection == Selection(where='IfcBeam, location="Level 2"')
    assert (line.start, line.end, line.face, line.projected) == (None, None, "top", False)
    assert area.kind == "line"
    assert area.values == pytest.approx((3.6, 3.6))  # 1.5 kN/m2 x 2.4 m
    assert area.projected
    assert (point.kind, point.values, point.face) == ("point", (60e3, 60e3), "bottom")
    assert (point.start.value, point.start.relative) == (2100.0, False)
    assert point.selection == Selection(beams=("B-204", "B-21*"))
    assert point.optional
    assert not line.optional
    assert (trapezoid.values, trapezoid.start.value, trapezoid.end.value) == (
        (4.0, 9.0),
        1200.0,
        4800.0,
    )
    assert (moment.kind, moment.values[0], moment.anchor) == ("moment", -12e6, "C-3")
    assert (moment.start.value, moment.start.relative) == (0.35, True)


def test_loads_say_for_people_what_the_engineer_wrote(load):
    assert [entry.text for entry in load(WHOLE).loads] == [
        "3.2 kN/m",
        "1.5 kN/m2 over a width of 2.4 m, per horizontal length",
        "60 kN at 2.1 m, hung from the bottom face",
        "4 kN/m to 9 kN/m from 1.2 m to 4.8 m",
        "-12 kN*m at 35 %, measured from C-3",
    ]


def test_the_brief_knows_the_line_of_every_entry_and_key(load):
    brief = load(WHOLE)
    lines = WHOLE.splitlines()
    for entry, heading in zip(
        (*brief.loads, *brief.supports, *brief.beams, *brief.materials),
        ["[[loads]]"] * 5 + ["[[supports]]", "[[beams]]", "[[materials]]"],
        strict=True,
    ):
        assert lines[brief.lines[entry.place] - 1] == heading
    assert lines[brief.lines["loads[3].at"] - 1] == 'at = "2.1 m"'


def test_other_entries_are_read(load):
    brief = load(WHOLE)
    (support,), (beam,), (material,) = brief.supports, brief.beams, brief.materials
    assert (support.start, support.end, support.bearing) == ("fixed", "free", (400.0, 0.0))
    assert (beam.span, beam.unloaded, beam.loads_complete, beam.torsion) == (
        6400.0,
        True,
        True,
        None,
    )
    assert (material.concrete_strength, material.density, material.cover) == (45.0, 2400.0, None)


@pytest.mark.parametrize(
    ("written", "wanted"), [("true", "level"), ("false", "none"), ('"on top"', "on top")]
)
def test_slabs_as_flanges_by_default_and_by_beam(load, written, wanted):
    brief = load(BASIS + f'[defaults]\nslab_flanges = true\n[[beams]]\nbeams = ["B"]\n'
                 f"slab_flange = {written}\n")  # fmt: skip
    assert brief.defaults.slab_flanges
    assert brief.beams[0].slab_flange == wanted
    assert not load(BASIS).defaults.slab_flanges


@pytest.mark.parametrize(
    "written", ['[defaults]\nslab_flanges = "yes"', '[[beams]]\nbeams = ["B"]\nslab_flange = "top"']
)
def test_slabs_as_flanges_are_asked_for_in_so_many_words(load, written):
    with pytest.raises(BriefError, match="slab_flange"):
        load(f"{BASIS}{written}\n")


def test_what_is_silent_stays_silent(load):
    brief = load(BASIS)
    assert brief.basis.shear_method is None
    assert brief.defaults.concrete_strength is None
    assert brief.defaults.supports is None
    assert brief.sources == ("schedule", "bars", "sections", "properties")
    assert brief.cases == brief.loads == brief.combinations == ()
    assert cases_of(brief) == (Case("self", "permanent"),)
    assert combinations_of(brief) == ()


def test_combinations_are_told_by_case(load):
    """Name before nature; what is not permanent never relieves, nor what may be removed."""
    brief = load(WHOLE)
    assert combinations_of(brief) == (
        Combination(
            "strength",
            "strength",
            {
                "self": (1.25, 0.9),
                "services": (1.25, 0.0),
                "press": (1.5, 0.0),
                "hoist": (1.5, 0.0),
            },
        ),
    )


def test_a_permanent_case_with_one_factor_is_remarked(load):
    brief = load(
        BASIS
        + CASES
        + """
[[combinations]]
name = "strength"
kind = "strength"
factors = { self = [1.25, 0.9], services = 1.2, permanent = 1.25, imposed = 1.5 }
"""
    )
    assert combinations_of(brief)[0].factors["services"] == (1.2, 1.2)
    (remark,) = combination_remarks(brief)
    assert "services has one factor, 1.2" in remark.text


def test_the_digest_follows_the_brief_and_the_schedule(load, tmp_path):
    schedule = tmp_path / "beams.csv"
    text = BASIS + '\n[reinforcement]\nschedule = "beams.csv"\n'
    schedule.write_text("mark,bottom\nB-1,3-25M\n")
    first = load(text)
    assert first.schedule == schedule
    assert load(text).sha256 == first.sha256
    assert load(text + "\n").sha256 != first.sha256
    schedule.write_text("mark,bottom\nB-1,4-25M\n")
    assert load(text).sha256 != first.sha256


def test_line_ends_and_byte_order_marks_do_not_matter(load):
    plain = load(WHOLE)
    for text in (WHOLE.replace("\n", "\r\n"), "\ufeff" + WHOLE):
        again = load(text)
        assert (again.loads, again.cases, again.basis) == (plain.loads, plain.cases, plain.basis)


COMBINATION = """
[[combinations]]
name = "strength"
kind = "strength"
"""

FAULTS = [
    # keys
    ("[basic]\n" + BASIS, "basic (line 1): unknown key 'basic': did you mean basis?"),
    (BASIS + "\n[[load]]\n", "load (line 5): unknown key 'load': did you mean loads?"),
    (BASIS + "sheer_method = 'general'\n", "basis.sheer_method (line 4): unknown key"),
    (BASIS + "sheer_method = 'general'\n", "did you mean shear_method?"),
    (BASIS + CASES + LOAD + 'pont = "5 kN"\n', "loads[1].pont (line 15): unknown key 'pont'"),
    (BASIS + CASES + LOAD + 'start = "1 m"\n', "loads[1].start (line 15): unknown key 'start'"),
    (BASIS + '[[beams]]\nbeams = ["B-1"]\nsapn = "6 m"\n', "did you mean span?"),
    (
        BASIS + "[reinforcement.properties]\nupper = 'A.B'\n",
        "reinforcement.properties.upper (line 5)",
    ),
    (BASIS + "[cases.press]\nnatures = 'crane'\n", "cases.press.natures (line 5): unknown key"),
    # basis
    ("", "basis: is missing"),
    ('[basis]\nstandard = "x"\n', "basis.concrete_unit_weight (line 1): is missing"),
    ('[basis]\nconcrete_unit_weight = "23.5 kN/m3"\n', "basis.standard (line 1): is missing"),
    (BASIS.replace("23.5 kN/m3", "2400 kg/m3"), "is a mass where a unit weight is needed"),
    (BASIS.replace("23.5 kN/m3", "2.35 kN/m3"), "is not plausible: 10 kN/m3 to 35 kN/m3 is read"),
    (
        BASIS.replace('"23.5 kN/m3"', "23.5"),
        "basis.concrete_unit_weight (line 3): 23.5 has no unit",
    ),
    (BASIS.replace('"csa-a23.3-14"', "23"), "basis.standard (line 2): 23 must be text in quotes"),
    (BASIS.replace('"csa-a23.3-14"', '""'), "basis.standard (line 2): is empty"),
    # defaults
    (BASIS + '[defaults]\nconcrete_strength = "30 kPa"\n', "5 MPa to 200 MPa is read"),
    (BASIS + '[defaults]\nbar_yield = "400 kN"\n', "is a force, but a stress is needed"),
    (
        BASIS + '[defaults]\ncover = "-40 mm"\n',
        "defaults.cover (line 5): '-40 mm' is not plausible",
    ),
    (BASIS + '[defaults]\nsupports = ["pinned", "free"]\n', "a free end is never a default"),
    (BASIS + '[defaults]\nsupports = ["pinned"]\n', "has 1 items where at least 2 are needed"),
    (
        BASIS + '[defaults]\nsupports = ["pinned", "hinged"]\n',
        "defaults.supports[2] (line 5): 'hinged' is not known: use pinned, fixed or free",
    ),
    # reinforcement
    (BASIS + '[reinforcement]\nsources = ["drawing"]\n', "'drawing' is not known: use"),
    (BASIS + '[reinforcement]\nsources = ["bars", "bars"]\n', "names a source twice"),
    (BASIS + '[reinforcement]\nsources = ["schedule"]\n', "gives no file"),
    (BASIS + '[reinforcement]\nschedule = "none.csv"\n', "there is no file 'none.csv' beside"),
    (BASIS + '[reinforcement]\nschedule = "none.pdf"\n', "is neither .csv nor .xlsx"),
    (BASIS + "[reinforcement]\noptional = true\n", "is for a mapping of properties, and none is"),
    (BASIS + CASES + LOAD.replace("B-1", "B-9..B-1") + "line = '1 kN/m'\n", "does not ascend"),
    (BASIS + "[reinforcement.properties]\ntop = 'TopBars'\n", "must be written Set.Property"),
    (BASIS + "[reinforcement.properties]\ntop = '.TopBars'\n", "must be written Set.Property"),
    # cases
    (BASIS + "[cases.self]\nnature = 'permanent'\n", "cases.self (line 4): 'self' is a reserved"),
    (BASIS + "[cases.wind]\nnature = 'wind'\n", "'wind' is a reserved name"),
    (
        BASIS + "[cases.press]\nnature = 'live'\n",
        "cases.press.nature (line 5): 'live' is not known",
    ),
    (BASIS + "[cases.press]\nrated = true\n", "cases.press.nature (line 4): is missing"),
    (BASIS + "[cases.press]\nnature = 'imposed'\nrated = 1\n", "1 must be true or false"),
    (BASIS + "[cases.a]\nnature = 'wind'\nexcludes = ['b']\n", "unknown case 'b'"),
    (BASIS + "[cases.a]\nnature = 'wind'\nexcludes = ['a']\n", "unknown case 'a'"),
    (BASIS + "[cases.a]\nnature = 'wind'\nremovable = true\n", "only a permanent case needs it"),
    # selections
    (
        BASIS + CASES + '[[loads]]\ncase = "press"\nline = "3 kN/m"\n',
        "loads[1] (line 11): has neither beams nor where: exactly one",
    ),
    (
        BASIS + CASES + LOAD + "where = 'IfcBeam'\nline = '3 kN/m'\n",
        "loads[1] (line 12): has both beams and where: exactly one",
    ),
    (BASIS + CASES + LOAD.replace('["B-1"]', "[]"), "has 0 items where at least 1 are needed"),
    (BASIS + CASES + LOAD.replace('["B-1"]', "'B-1'"), "'B-1' must be a list"),
    (BASIS + CASES + LOAD.replace('"B-1"', '" "') + "line = '3 kN/m'", "holds an empty mark"),
    # loads
    (BASIS + CASES + LOAD.replace("press", "pres") + "line = '3 kN/m'", "unknown case 'pres'"),
    (BASIS + CASES + LOAD.replace("press", "pres") + "line = '3 kN/m'", "did you mean press?"),
    (BASIS + CASES + LOAD, "needs exactly one of line, point, moment, area, and has none"),
    (
        BASIS + CASES + LOAD + 'line = "3 kN/m"\npoint = "5 kN"\nat = "1 m"\n',
        "needs exactly one of line, point, moment, area, and has line and point",
    ),
    (BASIS + CASES + LOAD + 'line = "3 kN"\n', "loads[1].line (line 15): '3 kN' is a force, but"),
    (BASIS + CASES + LOAD + "line = 3\n", "loads[1].line (line 15): 3 has no unit"),
    (BASIS + CASES + LOAD + 'line = "3"\n', "loads[1].line (line 15): '3' has no unit"),
    (BASIS + CASES + LOAD + 'line = "3,2 kN/m"\n', "'3,2 kN/m' has a comma"),
    (BASIS + CASES + LOAD + 'line = "nan kN/m"\n', "is not a finite number"),
    (BASIS + CASES + LOAD + "line = nan\n", "nan is not a finite number"),
    (BASIS + CASES + LOAD + "line = 3,2\n", "not TOML at line 15"),
    (BASIS + CASES + LOAD + 'line = "1e99 kN/m"\n', "is beyond 100000 kN/m"),
    (BASIS + CASES + LOAD + 'line = "300 kg/m"\n', "is a mass where a load per length is needed"),
    (BASIS + CASES + LOAD + 'line = "0 kN/m"\n', "loads[1].line (line 15): is zero"),
    (BASIS + CASES + LOAD + 'line = ["0 N/m", "0 N/m"]\n', "loads[1].line (line 15): is zero"),
    (BASIS + CASES + LOAD + 'line = ["1 N/m"]\n', "a list of two for the start and the end"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nat = "1 m"\n', "belongs to a point load or moment"),
    (
        BASIS + CASES + LOAD + 'line = "3 kN/m"\nfrom = "2 m"\nto = "2 m"\n',
        "loads[1].to (line 17): '2 m' is not beyond from = '2 m'",
    ),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nfrom = "3 m"\nto = "2 m"\n', "is not beyond"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nfrom = "9 %"\nto = "9 %"\n', "is not beyond"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nfrom = "-1 m"\n', "'-1 m' is negative"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nto = "101 %"\n', "is beyond the end of the beam"),
    (BASIS + CASES + LOAD + 'line = ["1 N/m", "2 N/m"]\nto = "1 m"\n', "give both from and to"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\nat_from = "C-3"\n', "anchors no place"),
    (BASIS + CASES + LOAD + 'line = "3 kN/m"\ntributary_width = "2 m"\n', "belongs to an area"),
    (BASIS + CASES + LOAD + 'area = "3 kN/m2"\n', "has area but no tributary_width"),
    (
        BASIS + CASES + LOAD + 'area = "3 kN/m2"\ntributary_width = "-2 m"\n',
        "loads[1].tributary_width (line 16): '-2 m' is not a width above zero",
    ),
    (BASIS + CASES + LOAD + 'point = "5 kN"\n', "has point but no at"),
    (BASIS + CASES + LOAD + 'point = "5 t"\nat = "1 m"\n', "'5 t' is a mass where a force"),
    (BASIS + CASES + LOAD + 'point = "0 kN"\nat = "1 m"\n', "loads[1].point (line 15): is zero"),
    (BASIS + CASES + LOAD + 'point = "5 kN"\nat = 2.1\n', "loads[1].at (line 16): 2.1 has no unit"),
    (BASIS + CASES + LOAD + 'point = "5 kN"\nat = "1 m"\nto = "2 m"\n', "belongs to a line load"),
    (BASIS + CASES + LOAD + 'point = "5 kN"\nat = "1 m"\nprojected = true\n', "belongs to a line"),
    (BASIS + CASES + LOAD + 'moment = "5 kN"\nat = "1 m"\n', "is a force, but a moment is needed"),
    (BASIS + CASES + LOAD + 'moment = "5 kN*m"\nat = "1 m"\nface = "top"\n', "acts on no face"),
    (
        BASIS + CASES + LOAD + 'point = "5 kN"\nat = "1 m"\nface = "side"\n',
        "loads[1].face (line 17): 'side' is not known: use top or bottom",
    ),
    # supports, beams, materials
    (BASIS + '[[supports]]\nbeams = ["B"]\n', "supports[1] (line 4): states nothing"),
    (
        BASIS + '[[supports]]\nbeams = ["B"]\nstart = "pinned"\nend = "free"\n',
        "a beam with a pinned start and a free end cannot stand",
    ),
    (BASIS + '[[supports]]\nbeams = ["B"]\nstart = "free"\nend = "pinned"\n', "cannot stand"),
    (BASIS + '[[supports]]\nbeams = ["B"]\nstart = "free"\nend = "free"\n', "cannot stand"),
    (BASIS + '[[supports]]\nbeams = ["B"]\nstart = "roller"\n', "'roller' is not known"),
    (BASIS + '[[supports]]\nbeams = ["B"]\nbearing = "400 mm"\n', "must be a list of two"),
    (BASIS + '[[supports]]\nbeams = ["B"]\nbearing = ["-1 mm", "0 mm"]\n', "is not plausible"),
    (
        BASIS + '[[supports]]\nbeams = ["B"]\nend = "free"\nbearing = ["1 mm", "1 mm"]\n',
        "supports[1].bearing (line 7): gives a free end a bearing",
    ),
    (BASIS + '[[beams]]\nbeams = ["B"]\nspan = "-6 m"\n', "beams[1].span (line 6): '-6 m' is not"),
    (BASIS + '[[beams]]\nbeams = ["B"]\nspan = "0 m"\n', "is not plausible: 100 mm to 200 m"),
    (BASIS + '[[beams]]\nbeams = ["B"]\nunloaded = "yes"\n', "'yes' must be true or false"),
    (BASIS + '[[beams]]\nbeams = ["B"]\nslab_flange = "top"\n', 'must be true, false or "on top"'),
    (BASIS + '[[materials]]\nbeams = ["B"]\n', "materials[1] (line 4): states nothing"),
    (BASIS + '[[materials]]\nbeams = ["B"]\ndensity = "24 kN/m3"\n', "a density is needed"),
    # combinations
    (BASIS + COMBINATION + "factors = { live = 1 }\n", "factors.live (line 8): unknown case or"),
    (BASIS + COMBINATION + "factors = { }\n", "factors (line 8): has 0 items"),
    (BASIS + COMBINATION + "factors = { self = -1 }\n", "is -1: a factor from 0 to 10"),
    (BASIS + COMBINATION + "factors = { self = nan }\n", "is nan: a factor from 0 to 10"),
    (BASIS + COMBINATION + "factors = { self = '1.25' }\n", "must be a number, or a pair"),
    (BASIS + COMBINATION + "factors = { self = [1.25] }\n", "must be a number, or a pair"),
    (BASIS + COMBINATION + "factors = { self = [0.9, 1.25] }\n", "the greater one first"),
    (BASIS + COMBINATION + "factors = { self = 0 }\n", "'self' counts in no strength"),
    (
        BASIS + CASES + COMBINATION + "factors = { self = 1, permanent = 1 }\n",
        "combinations[1].factors (line 15): has no factor for case 'press'",
    ),
    (
        BASIS + CASES + COMBINATION + "factors = { services = 1, imposed = 1 }\n",
        "has no factor for case 'self'",
    ),
    (
        BASIS + CASES + COMBINATION + "factors = { permanent = 1, imposed = 0 }\n",
        "case 'press' counts in no strength combination",
    ),
    (
        BASIS + CASES + COMBINATION + "factors = { permanent = 1, imposed = [1.5, 0.5] }\n",
        "may never relieve: its favourable factor is 0",
    ),
    (
        BASIS + (COMBINATION + "factors = { permanent = 1 }\n") * 2,
        "combinations[2].name (line 11): 'strength' is the name of combinations[1] too",
    ),
    (BASIS + COMBINATION.replace('d = "s', 'd = "S') + "factors = {}", "'Strength' is not known"),
    # shapes
    ("basis = 1\n", "basis (line 1): 1 must be a table"),
    (BASIS + "[loads]\ncase = 'x'\n", "must be a list"),
    (BASIS + CASES + "[[loads]]\ncase = 1\nbeams = [1]\n", "(and 1 more fault)"),
]


@pytest.mark.parametrize(("text", "message"), FAULTS)
def test_a_fault_is_told_in_one_line_with_its_place(fault, text, message):
    assert message in fault(text)


def test_a_missing_brief_is_told(tmp_path):
    with pytest.raises(
        BriefError, match=r"^brief.toml: there is no file .*brief.toml; check the path$"
    ):
        load_brief(tmp_path / "brief.toml")


def test_a_folder_is_no_brief(tmp_path):
    with pytest.raises(BriefError, match="is a folder; give the file in it"):
        load_brief(tmp_path)


def test_bytes_that_are_not_utf8_are_told_with_their_place(fault):
    told = fault(BASIS.encode() + "# Träger\n".encode("latin-1"))
    assert told == "brief.toml: not UTF-8 at line 4, column 5: save it as UTF-8 text"


def test_text_that_is_not_toml_is_told_with_its_place(fault):
    assert "not TOML at line 4, column 10" in fault(BASIS + "[defaults\n")
    assert "not TOML" in fault(b"ISO-10303-21;\nHEADER;\n")
    assert "not TOML" in fault(BASIS + "x = " + "9" * 5000)
    assert "nested" in fault(BASIS + "x = " + "[" * 20000)


def test_a_key_that_is_given_twice_is_told(fault):
    assert "not TOML at line 4" in fault(BASIS + 'standard = "other"\n')


def test_every_line_that_is_told_holds_its_key():
    lines = WHOLE.splitlines()
    found = lines_of(WHOLE)
    assert len(found) > 60
    for path, number in found.items():
        key = next(part for part in reversed(path) if isinstance(part, str))
        assert key in lines[number - 1]


def test_lines_are_found_past_strings_and_lists_over_many_lines(fault):
    text = (
        BASIS
        + CASES
        + '''
[[loads]]
case = "press"
where = """
[[loads]]
point = "5 kN"
"""
line = [
  "3 kN/m",   # [not a table]
  "4 kN/m",
]
[[loads]]
case = "press"
beams = ["B-1",
         "B-2"]
"line" = "oops"
'''
    )
    line = text.splitlines().index('"line" = "oops"') + 1
    assert f"loads[2].line (line {line}): 'oops' is not a load per length" in fault(text)


@settings(max_examples=300, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_a_damaged_brief_is_read_or_told_in_one_line(tmp_path, data):
    at = data.draw(st.integers(0, len(WHOLE) - 1))
    until = data.draw(st.integers(at, min(at + 30, len(WHOLE))))
    text = WHOLE[:at] + data.draw(st.text(max_size=10)) + WHOLE[until:]
    path = Path(tmp_path) / "brief.toml"
    path.write_text(text, encoding="utf-8", errors="replace")
    try:
        load_brief(path)
    except BriefError as error:
        told = str(error)
        assert told.startswith("brief.toml:")
        assert "\n" not in told


def test_reading_the_brief_is_light_to_import():
    code = (
        "import sys, ifccheck.brief.load, ifccheck.brief.loads, ifccheck.brief.schedule,"
        " ifccheck.brief.statements, ifccheck.brief.supports, ifccheck.brief.zones;"
        "print([m for m in ('pydantic', 'pandas', 'openpyxl', 'pint', 'numpy', 'ifcopenshell')"
        " if m in sys.modules])"
    )
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "[]"
