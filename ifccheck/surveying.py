"""The run of a survey: read, hold against the requirement, tell what a rating would lack."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path

from ifccheck import __version__, results
from ifccheck.brief.selecting import join
from ifccheck.brief.silent import silent_brief
from ifccheck.errors import UsageError
from ifccheck.ifc.requirement import unmet_requirements
from ifccheck.memory import uncollected
from ifccheck.pipeline import (
    Plan,
    Read,
    Say,
    find_beams,
    gather_model,
    make_plan,
    output_name,
    read_models,
    write_beside,
)
from ifccheck.standards import Options, Standard
from ifccheck.standards.discovery import all_standards
from ifccheck.survey import Survey


@uncollected()
def survey(
    models: Sequence[Path], brief_path: Path | None = None, say: Say = lambda _: None
) -> tuple[Survey, ...]:
    """Tell what models hold and what a rating would lack, with a brief or before there is one."""
    plan = make_plan(brief_path) if brief_path else silent_plan()
    brief = plan.brief if brief_path else None
    return tuple(_survey(read, plan, say) for read in read_models(models, brief, say))


def silent_plan() -> Plan:
    """The plan of an engineer who has said nothing yet, by the first standard that loads."""
    usable = [each for _, each in all_standards() if isinstance(each, Standard)]
    if not usable:
        raise UsageError("no standard that can be loaded is installed: see ifccheck standards")
    standard = usable[0]
    return Plan(
        brief=silent_brief(standard.id),
        standard=standard,
        options=Options(standard.shear_methods[0]),
        cases=(),
        combinations=(),
        actions="",
        remarks=(),
        schedule=(),
    )


def _survey(read: Read, plan: Plan, say: Say) -> Survey:
    matches = join(plan.brief, plan.schedule, find_beams(read, plan))
    model, gathered = gather_model(read, matches, plan, say)
    say(f"holding {model.file_name} against the information requirement")
    briefed = bool(plan.brief.file_name)
    unmet = unmet_requirements(read.opened, model.beams)
    return Survey(
        version=__version__,
        path=read.opened.path,
        model=model,
        findings=results.findings_of(model, gathered, unmet, briefed=briefed),
        brief_name=plan.brief.file_name,
        brief_sha256=plan.brief.sha256,
    )


@uncollected()
def publish_surveys(
    surveys: Iterable[Survey], out: Path, inputs: Iterable[Path], say: Say = lambda _: None
) -> tuple[Path, ...]:
    """Write the page of each survey, all of them or none; return the paths."""
    from ifccheck.publish.survey_html import render_survey

    files: dict[Path, bytes] = {}
    for each in surveys:
        say(f"publishing the survey of {each.model.file_name}")
        page = render_survey(each).encode("utf-8")
        files[out / f"{output_name(each.path)}-survey.html"] = page
    write_beside(files, inputs)
    return tuple(files)
