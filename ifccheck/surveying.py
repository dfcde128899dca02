"""The run of a survey: read, hold against the requirement, tell what a rating would lack."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path

from ifccheck import __version__, results
from ifccheck.brief.selecting import join
from ifccheck.brief.silent import silent_brief, with_all_defaults
from ifccheck.brief.starter import StarterModel, quoted, starter_brief
from ifccheck.errors import BriefError, UsageError
from ifccheck.findings import Survey
from ifccheck.frame.carrying import contacts_of, touching_in, unheld_ends
from ifccheck.ifc.requirement import requirement_bytes, unmet_requirements
from ifccheck.ifc.selection import select
from ifccheck.ifc.suggestions import bars_in_file, properties_of_steel
from ifccheck.memory import uncollected
from ifccheck.outputs import refuse_existing, write_new
from ifccheck.pipeline import (
    Plan,
    Read,
    Say,
    check_order,
    find_beams,
    gather_model,
    make_plan,
    output_name,
    read_models,
    write_beside,
)
from ifccheck.publish.words import head_of
from ifccheck.standards import Options, Standard
from ifccheck.standards.discovery import all_standards
from ifccheck.subjects import framed_by_the_model, gather


@dataclass(frozen=True)
class Surveyed:
    """One model as it was read, with its survey."""

    read: Read
    survey: Survey


@uncollected()
def survey(
    models: Sequence[Path], brief_path: Path | None = None, say: Say = lambda _: None
) -> tuple[Surveyed, ...]:
    """Tell what models hold and what a rating would lack, with a brief or before there is one."""
    if brief_path:
        check_order(models, brief_path)
    plan = make_plan(brief_path) if brief_path else silent_plan()
    brief = plan.brief if brief_path else None
    reads = read_models(models, brief, say)
    return tuple(Surveyed(read, _survey(read, plan, say)) for read in reads)


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
    filled = gather(model, with_all_defaults(plan.brief), matches, plan.standard)
    say(f"holding {model.file_name} against the information requirement")
    unmet = unmet_requirements(read.opened, model.beams)
    return Survey(
        version=__version__,
        model=model,
        findings=results.findings_of(model, gathered, filled, unmet, plan.brief),
        brief_name=plan.brief.file_name,
        brief_sha256=plan.brief.sha256,
        bars_in_file=bars_in_file(read.opened),
        framed=gathered.framed or framed_by_the_model(model),
    )


@uncollected()
def publish(
    surveyed: Sequence[Surveyed],
    inputs: Iterable[Path],
    *,
    out: Path | None = None,
    starter: Path | None = None,
    say: Say = lambda _: None,
) -> tuple[Path, ...]:
    """Write a page of each survey and a brief to start from, where asked, all of them or none.

    Nothing is written over an input, and no brief over a file that stands already. Returns the
    paths.
    """
    files = _pages(surveyed, out, say) if out else {}
    if starter:
        refuse_existing(starter)
        say(f"writing {starter.name}")
        files[starter] = _starter(surveyed).encode("utf-8")
    write_beside(files, inputs)
    return tuple(files)


def _pages(surveyed: Iterable[Surveyed], out: Path, say: Say) -> dict[Path, bytes]:
    from ifccheck.publish.survey_html import render_survey

    files: dict[Path, bytes] = {}
    for each in surveyed:
        say(f"publishing the survey of {each.survey.model.file_name}")
        page = render_survey(each.survey).encode("utf-8")
        files[out / f"{output_name(each.read.opened.path)}-survey.html"] = page
    return files


def _starter(surveyed: Iterable[Surveyed]) -> str:
    known = [name for name, each in all_standards() if isinstance(each, Standard)]
    return starter_brief([_starter_model(each) for each in surveyed], known)


def _starter_model(surveyed: Surveyed) -> StarterModel:
    opened, model = surveyed.read.opened, surveyed.survey.model
    contacts = contacts_of(model, touching_in(model), {})
    unknown = {
        key
        for key, finding in surveyed.survey.findings.items()
        if any(head_of(text) == "supports unknown" for text in finding.to_state)
    }
    return StarterModel(
        survey=surveyed.survey,
        loose_ends={key: unheld_ends(contacts.get(key, ())) for key in unknown},
        storey_queries=_storey_queries(surveyed.read),
        properties=properties_of_steel(opened, model.beams),
    )


def _storey_queries(read: Read) -> dict[str, str]:
    """A query for each storey, where it is found to reach the beams of that storey alone."""
    queries: dict[str, str] = {}
    for storey in dict.fromkeys(beam.storey for beam in read.model.beams):
        query = f"IfcBeam, location={quoted(storey)}"
        wanted = tuple(beam.key for beam in read.model.beams if beam.storey == storey)
        try:
            found = select(read.opened, read.model.beams, None, query)
        except BriefError:
            continue  # no query says the name of this storey: its beams are listed
        if storey and found == wanted:
            queries[storey] = query
    return queries


def write_requirement(target: Path) -> None:
    """Write the information requirement for a modeller, where no file stands yet."""
    write_new(target, requirement_bytes())
