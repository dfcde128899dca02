"""Loads of structural analysis models through the whole program, and a model made by others."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ifccheck.beam import Verdict
from ifccheck.brief.load import load_brief
from ifccheck.errors import BriefError
from ifccheck.ifc.opening import open_model
from ifccheck.ifc.reader import read_model
from ifccheck.pipeline import Run, rate
from ifccheck.publish.html import render
from ifccheck.publish.sheet_html import sheet_html
from ifccheck.rating import Rating
from ifccheck.surveying import survey
from tests.models import LENGTH_UNITS, MadeBeam, Model, Setting, brief, load, model, rectangle
from tests.structural_models import Analysis
from tests.test_brief import BASIS

NOTATION = {"TopBars": "2-20M", "BottomBars": "3-25M", "Stirrups": "2 legs 10M @ 200"}
BEAM = MadeBeam(rectangle(300.0, 600.0), 6000.0, notation=NOTATION)
SETTINGS = [Setting("IFC2X3", "m"), Setting("IFC4", "inch"), Setting("IFC4X3", "foot"),
            Setting("IFC4", "mm")]  # fmt: skip
FLOOR = '[cases.floor]\nnature = "imposed"'
TAKES = f'{FLOOR}\nfrom_model = "Live"'
LINE = load("floor", 'line = "10 kN/m"')


def taking(text: str, *entries: str) -> str:
    """The brief of the made models, whose case ``floor`` says more."""
    whole = brief(*entries)
    assert FLOOR in whole
    return whole.replace(FLOOR, text)


class Made:
    """A beam on columns with a member along its soffit, and a case called Live."""

    def __init__(self, setting: Setting) -> None:
        self.model = Model(setting)
        self.model.add_beam(BEAM)
        force = {"inch": "lbf", "foot": "kip"}.get(setting.unit, "kN")
        self.analysis = Analysis(
            self.model.file, LENGTH_UNITS[setting.unit], self.model.owner, force
        )
        self.member = self.analysis.member((0, 0, 0), (6000, 0, 0))
        self.case = self.analysis.case("Live", "VARIABLE_Q")

    def line(self, **components: float) -> Any:
        return self.analysis.along(self.member, self.analysis.linear(**components), self.case)

    def rated(self, folder: Path, text: str) -> Run:
        path, brief_path = folder / "hall.ifc", folder / "brief.toml"
        path.write_bytes(self.model.finish())
        brief_path.write_text(text, encoding="utf-8")
        return rate([path], brief_path)


def only(run: Run) -> Rating:
    (rating,) = run.reports[0].ratings.values()
    return rating


def remarks(run: Run) -> str:
    return "; ".join(remark.text for remark in run.reports[0].remarks)


def why(rating: Rating) -> str:
    return "; ".join(reason.text for reason in rating.reasons)


@pytest.fixture
def made() -> Made:
    return Made(Setting("IFC4X3", "m"))


@pytest.mark.parametrize("setting", SETTINGS, ids=lambda s: f"{s.schema} {s.unit}")
def test_a_load_of_the_model_rates_as_that_of_the_brief_does(
    tmp_path: Path, setting: Setting
) -> None:
    plain = tmp_path / "plain"
    plain.mkdir()
    (plain / "hall.ifc").write_bytes(model(BEAM, setting=setting))
    (plain / "brief.toml").write_text(brief(LINE), encoding="utf-8")
    wanted = only(rate([plain / "hall.ifc"], plain / "brief.toml"))
    made = Made(setting)
    made.line(z=-10.0)
    run = made.rated(tmp_path, taking(TAKES))
    assert only(run).verdict is wanted.verdict is Verdict.ADEQUATE
    assert only(run).utilisation == pytest.approx(wanted.utilisation, rel=1e-9)
    (key,) = run.reports[0].ratings
    (_, shown) = run.reports[0].sheet(key).loads
    assert shown.origin.startswith("cases.floor, IfcStructuralLinearAction 'Line' (#")
    assert "10.0 kN/m of the model's load case 'Live'" in shown.text


def test_loads_of_the_model_and_of_the_brief_add_up(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    run = made.rated(tmp_path, taking(TAKES, load("floor", 'line = "50 kN/m"')))
    assert only(run).verdict is Verdict.FALLS_SHORT


def test_a_case_that_no_case_of_the_brief_takes_is_told(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    run = made.rated(tmp_path, brief(LINE))
    assert "load case 'Live' of the model: 1 action counts nowhere: no case" in remarks(run)
    on_beam = [remark.text for remark in only(run).remarks if remark.kind == "doubt"]
    assert any("load case 'Live' of the model acts on it" in text for text in on_beam)


def test_a_survey_tells_of_the_cases_too(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    (tmp_path / "hall.ifc").write_bytes(made.model.finish())
    (surveyed,) = survey([tmp_path / "hall.ifc"])
    assert any("load case 'Live'" in remark.text for remark in surveyed.survey.model.remarks)


def test_an_upward_load_needs_to_be_meant(tmp_path: Path, made: Made) -> None:
    """Exporters that write gravity as positive must not make a beam adequate."""
    made.line(z=+1.0)
    run = made.rated(tmp_path, taking(TAKES, LINE))
    assert only(run).verdict is Verdict.NOT_RATED
    assert "load acts upward: cases.floor, IfcStructuralLinearAction" in why(only(run))
    meant = taking(f"{TAKES}\nupward = true", LINE)
    (tmp_path / "brief.toml").write_text(meant, encoding="utf-8")
    run = rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml")
    assert only(run).verdict is Verdict.ADEQUATE, why(only(run))
    assert any("upward = true: cases.floor" in remark.text for remark in only(run).remarks)


@pytest.mark.parametrize(
    ("components", "told"),
    [({"z": -10.0, "y": 2.0}, "acts sideways"), ({"z": -10.0, "mx": 30.0}, "moments per length")],
)
def test_what_is_not_laid_keeps_from_adequate(
    tmp_path: Path, made: Made, components: dict[str, float], told: str
) -> None:
    made.line(**components)
    rating = only(made.rated(tmp_path, taking(TAKES)))
    assert rating.verdict is Verdict.NOT_RATED
    assert told in why(rating)


def test_it_is_no_reason_where_the_brief_takes_no_such_case(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0, y=2.0)
    assert only(made.rated(tmp_path, brief(LINE))).verdict is Verdict.ADEQUATE


def test_actions_on_surfaces_keep_beams_from_adequate_until_the_engineer_says(
    tmp_path: Path, made: Made
) -> None:
    made.line(z=-1.0)
    made.analysis.over(made.analysis.surface(), made.case)
    run = made.rated(tmp_path, taking(TAKES, LINE))
    assert only(run).verdict is Verdict.NOT_RATED
    assert "load case 'Live' of the model: 1 action: on a surface, not carried" in why(only(run))
    complete = '[[beams]]\nbeams = ["*"]\nloads_complete = true\n'
    (tmp_path / "brief.toml").write_text(taking(TAKES, LINE, complete), encoding="utf-8")
    run = rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml")
    assert only(run).verdict is Verdict.ADEQUATE
    assert "on a surface, not carried" in remarks(run)


def test_a_load_near_the_beam_keeps_it_from_adequate_until_the_engineer_says(
    tmp_path: Path, made: Made
) -> None:
    """An analysis model that lies at the top of the floor, 200 mm above the beam."""
    high = made.analysis.member((0, 0, 800), (6000, 0, 800), name="M-2")
    made.analysis.along(high, made.analysis.linear(z=-10.0), made.case)
    run = made.rated(tmp_path, taking(TAKES, LINE))
    assert only(run).verdict is Verdict.NOT_RATED
    assert "acts near the beam, 200 mm off its body, and on no beam" in why(only(run))
    complete = '[[beams]]\nbeams = ["*"]\nloads_complete = true\n'
    (tmp_path / "brief.toml").write_text(taking(TAKES, LINE, complete), encoding="utf-8")
    run = rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml")
    assert only(run).verdict is Verdict.ADEQUATE


def test_what_is_lost_is_told_with_its_size(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    made.analysis.at(made.analysis.node((0, 9000, 0)), made.analysis.single(z=-20e3), made.case)
    run = made.rated(tmp_path, taking(TAKES))
    assert "'Live' of the model: 20.0 kN of 80.0 kN act on no beam in scope" in remarks(run)


def test_names_of_strangers_are_shown_as_text(tmp_path: Path, made: Made) -> None:
    made.case.Name = "<script>x</script>\x07"
    made.analysis.along(made.member, made.analysis.linear(z=-1.0), made.case, name="<i>Snow</i>")
    page = render(made.rated(tmp_path, brief(LINE)).reports[0])
    taken = taking(f'{FLOOR}\nfrom_model = "<script>x</script>\\u0007"')
    (tmp_path / "brief.toml").write_text(taken, encoding="utf-8")
    report = rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml").reports[0]
    (key,) = report.ratings
    page += sheet_html(report.sheet(key), "")
    assert "&lt;script&gt;x" in page
    assert "&lt;i&gt;Snow" in page
    for raw in ("<script>x", "<i>Snow", "\x07"):
        assert raw not in page


def test_a_nature_that_contradicts_the_model_is_told(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    permanent = '[cases.floor]\nnature = "permanent"\nfrom_model = ["Live"]'
    assert "the model calls it not permanent, and cases.floor is permanent" in remarks(
        made.rated(tmp_path, taking(permanent))
    )


def test_a_case_that_no_model_has_is_an_error(tmp_path: Path, made: Made) -> None:
    made.line(z=-10.0)
    with pytest.raises(BriefError) as caught:
        made.rated(tmp_path, taking(f'{FLOOR}\nfrom_model = "Life"'))
    assert str(caught.value).startswith("brief.toml: cases.floor.from_model (line ")
    assert str(caught.value).endswith("no model has the load case 'Life': did you mean Live?")


@pytest.mark.parametrize(
    ("cases", "told"),
    [
        ('[cases.a]\nnature = "snow"\nfrom_model = []\n', "must be the name of a load case"),
        ('[cases.a]\nnature = "snow"\nfrom_model = [1]\n', "must be the name of a load case"),
        ('[cases.a]\nnature = "snow"\nfrom_model = ""\n', "must be the name of a load case"),
        ('[cases.a]\nnature = "snow"\nupward = true\n', "the case has no from_model"),
        (
            '[cases.a]\nnature = "snow"\nfrom_model = "S"\n'
            '[cases.b]\nnature = "wind"\nfrom_model = ["W", "S"]\n',
            "cases.b.from_model (line 9): 'S' is taken by cases.a already",
        ),
    ],
)
def test_a_wrong_key_is_told(tmp_path: Path, cases: str, told: str) -> None:
    (tmp_path / "brief.toml").write_text(BASIS + cases, encoding="utf-8")
    with pytest.raises(BriefError) as caught:
        load_brief(tmp_path / "brief.toml")
    assert told in str(caught.value)


BEAM_OF_CONCRETE = """
#9001=IFCCARTESIANPOINT((0.,0.,110.));
#9002=IFCDIRECTION((1.,0.,0.));
#9003=IFCDIRECTION((0.,1.,0.));
#9004=IFCAXIS2PLACEMENT3D(#9001,#9002,#9003);
#9005=IFCLOCALPLACEMENT($,#9004);
#9006=IFCRECTANGLEPROFILEDEF(.AREA.,$,$,12.,20.);
#9007=IFCDIRECTION((0.,0.,1.));
#9008=IFCEXTRUDEDAREASOLID(#9006,$,#9007,192.);
#9009=IFCSHAPEREPRESENTATION(#212,'Body','SweptSolid',(#9008));
#9010=IFCPRODUCTDEFINITIONSHAPE($,$,(#9009));
#9011=IFCBEAM('0000000000000000009011',$,'B-1',$,$,#9005,#9010,$,.BEAM.);
#9012=IFCMATERIAL('Concrete C30/37',$,$);
#9013=IFCRELASSOCIATESMATERIAL('0000000000000000009013',$,$,$,(#9011),#9012);
"""


def test_a_portal_made_by_others_loads_a_beam_put_in_its_place(
    tmp_path: Path, open_models: Path
) -> None:
    """100 lbf/in on the right half of a beam of 192 in: 9600 lbf, which its own reactions carry."""
    text = (open_models / "09_ifc4x3_analysis_inch.ifc").read_text(encoding="utf-8")
    body, end = text.rsplit("ENDSEC;", 1)
    path = tmp_path / "portal.ifc"
    path.write_text(f"{body}{BEAM_OF_CONCRETE}ENDSEC;{end}", encoding="utf-8")
    found = read_model(open_model(path), {}).loads
    (laid,) = found.laid
    pound_force, inch = 4.44822162, 25.4  # as the file declares them
    assert (laid.case, laid.kind) == ("Structural Load Case #1", "line")
    assert (laid.start, laid.end) == pytest.approx((96.0 * inch, 192.0 * inch))
    assert laid.values == pytest.approx((100.0 * pound_force / inch,) * 2)
    reactions = 2278.52897011915 + 7321.47102988085
    carried = laid.values[0] * (laid.end - laid.start)
    assert carried == pytest.approx(reactions * pound_force)
    (case,) = found.cases
    assert (case.name, case.actions, case.permanent) == ("Structural Load Case #1", 1, None)
    assert (case.notes, case.lost, case.uncarried, found.doubts) == ((), (), (), ())


def test_without_that_beam_all_of_it_is_lost(open_models: Path) -> None:
    found = read_model(open_model(open_models / "09_ifc4x3_analysis_inch.ifc"), {}).loads
    (case,) = found.cases
    assert not found.laid
    assert case.lost[0].startswith("42.7 kN of 42.7 kN act on no beam")
