"""The whole run on one page: read, brief, demand, resistance, rating, publish."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from ifccheck import __version__, results
from ifccheck.analysis.combinations import expand_exclusions, not_covered
from ifccheck.beam import Case, Combination, Model, Remark, Verdict
from ifccheck.brief.cases import cases_of, combination_remarks, combinations_of
from ifccheck.brief.floor_entries import (
    check_floors_carried,
    check_floors_reached,
    floor_parts,
)
from ifccheck.brief.load import load_brief
from ifccheck.brief.loads import upward_remarks
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief, ScheduleRow
from ifccheck.brief.model_cases import case_remarks, check_model_cases
from ifccheck.brief.places import did_you_mean
from ifccheck.brief.schedule import read_schedule
from ifccheck.brief.selecting import (
    Found,
    check_mapping,
    check_reached,
    check_scope,
    join,
    mapping_remarks,
    selections,
)
from ifccheck.brief.zones import schedule_remarks, with_schedule
from ifccheck.errors import BriefError, ModelError, UsageError
from ifccheck.ifc.opening import OpenedModel, open_model
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.scoping import NO_CHOICE, Choice, choose
from ifccheck.ifc.selection import select
from ifccheck.ifc.step_table import make_step_table
from ifccheck.ifc.suggestions import all_properties
from ifccheck.memory import uncollected
from ifccheck.outputs import Content, write_all
from ifccheck.publish.report import Report
from ifccheck.rating.batch import Batch, batches
from ifccheck.sheet import Sheet
from ifccheck.standards import Options, Standard
from ifccheck.standards.discovery import all_standards, find_standard
from ifccheck.subjects import Gathered, gather

Say = Callable[[str], None]


@dataclass(frozen=True)
class Plan:
    """The brief joined with its standard: what every model of the run is rated by."""

    brief: Brief
    standard: Standard
    options: Options
    cases: tuple[Case, ...]
    combinations: tuple[Combination, ...]
    actions: str
    """Where the combinations come from"""
    remarks: tuple[Remark, ...]
    """On the combinations, where they are the brief's own"""
    schedule: tuple[ScheduleRow, ...]


@dataclass(frozen=True)
class Read:
    """One model as it was opened and read."""

    opened: OpenedModel
    model: Model
    reached: Mapping[str, int]
    """How many members each query of the brief's scope reaches, by its place"""


@dataclass(frozen=True)
class Rated:
    """One model with what each stage gave, so that a changed brief can be rated anew."""

    read: Read
    gathered: Gathered
    batches: tuple[Batch, ...]
    report: Report


@dataclass(frozen=True)
class Run:
    """All models of a run."""

    plan: Plan
    rated: tuple[Rated, ...]

    @property
    def reports(self) -> tuple[Report, ...]:
        """What there is to publish, model by model."""
        return tuple(rated.report for rated in self.rated)

    @property
    def exit_status(self) -> int:
        """0 where every beam in scope is adequate and there is at least one, else 3."""
        verdicts = [r.verdict for report in self.reports for r in report.ratings.values()]
        return 0 if verdicts and set(verdicts) == {Verdict.ADEQUATE} else 3


@uncollected()
def rate(models: Sequence[Path], brief_path: Path, say: Say = lambda _: None) -> Run:
    """Rate every beam of the models by the brief."""
    check_order(models, brief_path)
    plan = make_plan(brief_path)
    reads = read_models(models, plan.brief, say)
    found = tuple(find_beams(read, plan) for read in reads)
    check_reached(plan.brief, found)
    check_floors_reached(plan.brief, found)
    check_mapping(plan.brief, [read.model.mapped for read in reads], _properties_of(reads))
    check_model_cases(plan.brief, [read.model.loads for read in reads])
    rated = tuple(
        rate_model(read, join(plan.brief, plan.schedule, of_model), plan, found, say)
        for read, of_model in zip(reads, found, strict=True)
    )
    check_floors_carried(plan.brief, [each.gathered.floors.carried for each in rated])
    return Run(plan, rated)


APART = (
    Remark(
        None,
        "supports",
        "beams of one model are not stood on those of another: what they bring to each other is not"
        " in the loads",
        "doubt",
    ),
)
"""Of models that are rated together, with beams stood on what they show"""

MODEL_SUFFIXES = (".ifc", ".ifczip", ".ifcxml")


def check_order(models: Sequence[Path], brief_path: Path) -> None:
    """Refuse a model given as the brief."""
    if brief_path.suffix.lower() not in MODEL_SUFFIXES:
        return
    swapped = [path for path in models if path.suffix.lower() not in MODEL_SUFFIXES]
    advice = (
        f"it and {swapped[0]} look swapped: give the model first, and the brief with --brief"
        if swapped
        else "give the engineer's brief (TOML) with --brief"
    )
    raise UsageError(f"{brief_path}: is a model, not a brief: {advice}")


def _properties_of(reads: Sequence[Read]) -> Callable[[], list[str]]:
    return lambda: [
        name for read in reads for name in all_properties(read.opened, read.model.beams)
    ]


def make_plan(brief_path: Path) -> Plan:
    """Read the brief with the standard, cases and combinations that it names."""
    brief = load_brief(brief_path)
    standard = _standard(brief)
    _check_categories(brief, standard)
    cases = cases_of(brief)
    stated = [c for c in combinations_of(brief) if c.kind == "strength"]
    published = [c for c in standard.combinations(cases) if c.kind == "strength"]
    return Plan(
        brief=brief,
        standard=standard,
        options=Options(_shear_method(brief, standard)),
        cases=cases,
        combinations=expand_exclusions(stated or published, cases),
        actions=f"the brief's own, not {standard.actions}" if stated else standard.actions,
        remarks=own_combinations(stated, published, standard.actions) if stated else (),
        schedule=read_schedule(brief.schedule) if brief.schedule else (),
    )


def own_combinations(
    stated: Sequence[Combination], published: Sequence[Combination], actions: str
) -> tuple[Remark, ...]:
    """Tell that the brief's combinations replace the published ones, and which of those they
    do not cover."""
    missed = not_covered(published, stated)
    text = f"the strength combinations are the brief's own and replace those of {actions}"
    remarks = [Remark(None, "combinations", text, "doubt")]
    if missed:
        names = ", ".join(combination.name for combination in missed)
        text = f"the brief's combinations ask for less than {names} of {actions}"
        remarks.append(Remark(None, "combinations", text, "doubt"))
    return tuple(remarks)


def _standard(brief: Brief) -> Standard:
    try:
        return find_standard(brief.basis.standard)
    except BriefError as error:
        raise BriefError(f"{brief.at('basis.standard')}: {error}") from None


def _shear_method(brief: Brief, standard: Standard) -> str:
    method = brief.basis.shear_method or standard.shear_methods[0]
    if method not in standard.shear_methods:
        raise BriefError(
            f"{brief.at('basis.shear_method')}: '{method}' is not offered by {standard.id}:"
            f" use {' or '.join(standard.shear_methods)}"
        )
    return method


def _check_categories(brief: Brief, standard: Standard) -> None:
    """Refuse a category that the standard does not know: it would silently count as another."""
    for case in brief.cases:
        named = case.category
        if named is not None and named.strip().lower() not in standard.categories:
            place = brief.at(f"cases.{case.name}.category")
            raise BriefError(
                f"{place}: unknown category '{named}':"
                f" {did_you_mean(named, list(standard.categories))}; without a category the case"
                " takes the most onerous factors"
            )


@uncollected()
def read_models(models: Sequence[Path], brief: Brief | None, say: Say) -> tuple[Read, ...]:
    """Open and read the models; their names must differ, since results are named after them."""
    known: dict[str, Path] = {}
    for path in models:
        other = known.setdefault(output_name(path), path)
        if other is not path:
            raise UsageError(
                f"{path}: would write results of the same names as {other}: give each model once,"
                " and rate models of one name into different folders"
            )
    reads = tuple(_read(path, brief, say) for path in models)
    if brief:
        check_scope(brief, [read.reached for read in reads])
    return reads


def _read(path: Path, brief: Brief | None, say: Say) -> Read:
    say(f"opening {path.name}")
    opened = open_model(path)
    say(f"reading {path.name}")
    statements = make_step_table(opened.source, opened.scan)
    choice = _choice(opened, brief)
    model = read_model(opened, _mapping(brief), statements, choice)
    if not model.beams and not model.out_of_scope:
        raise ModelError(
            f"{path}: holds no beam (IfcBeam); export the model with its beams, or name what they"
            " are under [scope] of the brief"
        )
    remarks = (*model.remarks, *(mapping_remarks(brief, model.mapped) if brief else ()))
    return Read(opened, replace(model, remarks=remarks), choice.reached)


def _choice(opened: OpenedModel, brief: Brief | None) -> Choice:
    if brief is None:
        return NO_CHOICE
    try:
        scope = brief.scope
        return choose(
            opened,
            scope.also,
            scope.leave_out,
            slabs=brief.asks_for_slabs,
            floors=bool(brief.floors),
        )
    except BriefError as error:
        raise BriefError(f"{brief.file_name}: {error}") from None


def _mapping(brief: Brief | None) -> dict[str, str]:
    return {str(name): place for name, place in brief.property_mapping.items()} if brief else {}


def find_beams(read: Read, plan: Plan) -> Found:
    """Keys of the beams, or slabs, that each mark and query of the brief reaches in a model."""
    beams, slabs = read.model.beams, read.model.floors.slabs
    of_beams = selections(plan.brief, plan.schedule)
    of_slabs = {place: part for entry in plan.brief.floors for place, part in floor_parts(entry)}
    found: dict[str, tuple[str, ...]] = {}
    for place, part in (of_beams | of_slabs).items():
        sought = slabs if place in of_slabs else beams
        try:
            found[place] = select(read.opened, sought, part.beams, part.where)
        except BriefError as error:
            raise BriefError(f"{plan.brief.at(place)}: {error}") from None
    return found


def rate_model(read: Read, matches: Matches, plan: Plan, found: Sequence[Found], say: Say) -> Rated:
    """Rate one model: gather what each beam rests on, then all of them on arrays."""
    model, gathered = gather_model(read, matches, plan, say)
    say(f"rating {read.model.file_name}")
    rated = tuple(
        batches(gathered.subjects, plan.standard, plan.options, plan.cases, plan.combinations)
    )
    remarks = (
        *model.remarks,
        *gathered.floors.remarks,
        *schedule_remarks(plan.schedule, found),
        *combination_remarks(plan.brief),
        *upward_remarks(plan.brief),
        *plan.remarks,
        *(APART if plan.brief.frame and len(found) > 1 else ()),
    )
    report = results.report_of(
        model, gathered, rated, remarks, version=__version__, brief=plan.brief,
        standard=plan.standard, options=plan.options, cases=plan.cases,
        combinations=plan.combinations, actions=plan.actions,
    )  # fmt: skip
    return Rated(read, gathered, rated, report)


def gather_model(read: Read, matches: Matches, plan: Plan, say: Say) -> tuple[Model, Gathered]:
    """Join one model with the brief and its schedule: what each beam rests on."""
    say(f"gathering loads and supports of {read.model.file_name}")
    beams = {beam.key: beam for beam in read.model.beams}
    model = results.with_beams(
        read.model, tuple(with_schedule(plan.schedule, matches, beams).values())
    )
    told = case_remarks(plan.brief, model.loads)
    model = replace(model, remarks=(*model.remarks, *told)) if told else model
    return model, gather(model, plan.brief, matches, plan.standard)


@uncollected()
def publish(
    run: Run, out: Path, only: Collection[str], say: Say = lambda _: None
) -> dict[str, tuple[Path, ...]]:
    """Write the results of a run, all of them or none; return the paths by model."""
    files: dict[Path, Content] = {}
    written: dict[str, tuple[Path, ...]] = {}
    for rated in run.rated:
        say(f"publishing {rated.report.model.file_name}")
        made = results.files_of(rated.read.opened, rated.report, out, only)
        written[rated.report.model.file_name] = tuple(made)
        files.update(made)
    write_beside(files, [*(rated.read.opened.path for rated in run.rated), run.plan.brief.path])
    return written


def write_beside(files: Mapping[Path, Content], inputs: Iterable[Path]) -> None:
    """Write files, all of them or none, and none of them over an input."""
    sources = {path.resolve() for path in inputs}
    if overwritten := sources & {path.resolve() for path in files}:
        raise UsageError(
            f"{sorted(overwritten)[0]}: a result would overwrite an input; name another folder"
            " with --out"
        )
    write_all(files)


def output_name(path: Path) -> str:
    """Stem of the results of a model; a trailing ``-rated`` is not repeated."""
    return path.stem.removesuffix("-rated")


def sheets(
    model: Path, mark: str, brief_path: Path, say: Say = lambda _: None
) -> tuple[Sheet, ...]:
    """Return the calculation of each beam that goes by a GlobalId, Tag or Name."""
    run = rate([model], brief_path, say)
    read, report = run.rated[0].read, run.rated[0].report
    keys = select(read.opened, read.model.beams, [mark], None)
    if not keys:
        raise UsageError(f"{model}: no beam in scope is '{mark}'; give a GlobalId, Tag or Name")
    return tuple(report.sheet(key) for key in keys)


def standards() -> tuple[tuple[str, Standard | str], ...]:
    """Return every installed standard, or what is wrong with it."""
    return all_standards()
