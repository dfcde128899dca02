"""The command line: words to one pipeline call, and exit statuses. No engineering."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterable
from io import TextIOWrapper
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from ifccheck import __version__
from ifccheck.errors import IfccheckError
from ifccheck.memory import uncollected

if TYPE_CHECKING:
    from rich.console import Console

FILE = click.Path(path_type=Path)
OUTPUTS = ("model", "html", "csv", "json")
_CAUTION = (
    "An aid for a licensed engineer. Local codes and the engineer's judgement govern; every "
    "result rests on the assumptions that it lists."
)


class _OneLineGroup(click.Group):
    """Tells a wrong command line in one line, as every other error is told."""

    def main(self, *args: Any, **extra: Any) -> Any:
        """Run a command and leave with its exit status."""
        try:
            status = super().main(*args, **extra | {"standalone_mode": False})
        except click.exceptions.NoArgsIsHelpError as error:
            error.show()
            sys.exit(error.exit_code)
        except click.UsageError as error:
            of = error.ctx.command_path if error.ctx else "ifccheck"
            _tell(f"{error.format_message()} See '{of} --help'.")
            sys.exit(error.exit_code)
        except click.Abort:
            _tell("interrupted")
            sys.exit(1)
        sys.exit(status if isinstance(status, int) else 0)


@click.group(
    name="ifccheck",
    cls=_OneLineGroup,
    context_settings={"help_option_names": ["-h", "--help"]},
    epilog=_CAUTION,
    no_args_is_help=True,
)
@click.version_option(__version__, prog_name="ifccheck")
def main() -> None:
    """Rate the reinforced-concrete beams of an IFC model by a published standard."""


@main.command()
@click.argument("models", nargs=-1, required=True, type=FILE, metavar="MODEL...")
@click.option("--brief", required=True, type=FILE, help="The engineer's brief (TOML).")
@click.option("--out", required=True, type=FILE, help="Folder for the results.")
@click.option(
    "--only",
    type=click.Choice(OUTPUTS),
    multiple=True,
    help="Write only this result; may be repeated. All four are written without it.",
)
@uncollected(to_the_end=True)
def rate(models: tuple[Path, ...], brief: Path, out: Path, only: tuple[str, ...]) -> None:
    """Rate every beam and write the rated model, the summary, the table and the data.

    The exit status is 0 where every beam in scope is adequate, 3 where some fall short or are
    not rated, 2 where the command or the brief is wrong, and 1 where a model cannot be read or
    a result cannot be written.
    """
    from ifccheck import pipeline
    from ifccheck.publish.terminal import closing_table

    console = _console()
    with _progress() as say:
        run = _guarded(lambda: pipeline.rate(models, brief, say))
        written = _guarded(lambda: pipeline.publish(run, out, only or OUTPUTS, say))
    for report in run.reports:
        closing_table(report, console, written[report.model.file_name])
    sys.exit(run.exit_status)


@main.command()
@click.argument("models", nargs=-1, required=True, type=FILE, metavar="MODEL...")
@click.option("--brief", type=FILE, help="The engineer's brief, where there is one already.")
@click.option("--out", type=FILE, help="Folder for a page of each model, <model>-survey.html.")
@click.option("--starter", type=FILE, help="A new file for a brief to start from (TOML).")
def survey(
    models: tuple[Path, ...], brief: Path | None, out: Path | None, starter: Path | None
) -> None:
    """Show what models hold and what a rating would lack.

    Tells for each group of beams what was read, what is missing for a rating and what is
    doubtful. No brief is needed yet: --starter writes one with the marks, storeys, materials and
    property sets of the models, ready to fill in. With --brief, what the brief settles is not
    missing. The exit status is 0 where the models could be read.
    """
    from ifccheck import surveying
    from ifccheck.outputs import refuse_existing
    from ifccheck.publish.terminal_survey import survey_text

    inputs = [*models, *([brief] if brief else [])]
    with _progress() as say:
        if starter:
            _guarded(lambda: refuse_existing(starter))  # before the models are read
        found = _guarded(lambda: surveying.survey(models, brief, say))
        written = _guarded(
            lambda: surveying.publish(found, inputs, out=out, starter=starter, say=say)
        )
    console = _console()
    for each in found:
        console.print(survey_text(each.survey, console))
    _tell_written(console, written)


@main.command()
@click.argument("file", type=FILE)
def requirement(file: Path) -> None:
    """Write to FILE what a modeller must give of a beam (IDS 1.0).

    A file that exists already is left as it is. What survey says of the information requirement
    is held against the same text.
    """
    from ifccheck import surveying

    _guarded(lambda: surveying.write_requirement(file))
    _tell_written(_console(), [file])


@main.command()
@click.argument("model", type=FILE)
@click.argument("beam")
@click.option("--brief", required=True, type=FILE, help="The engineer's brief (TOML).")
def sheet(model: Path, beam: str, brief: Path) -> None:
    """Print the line-by-line calculation of BEAM (its GlobalId, Tag or Name)."""
    from ifccheck import pipeline
    from ifccheck.publish.terminal_sheet import sheet_text

    with _progress() as say:
        sheets = _guarded(lambda: pipeline.sheets(model, beam, brief, say))
    console = _console()
    for each in sheets:
        console.print(sheet_text(each, console))


@main.command()
def standards() -> None:
    """List the standards that can be named in a brief."""
    from ifccheck import pipeline
    from ifccheck.publish.terminal import standards_table

    console = _console()
    console.print(standards_table(pipeline.standards(), console))


def _console() -> Console:
    from rich.console import Console

    if isinstance(sys.stdout, TextIOWrapper):
        sys.stdout.reconfigure(errors="replace")  # a name that the terminal cannot show
    return Console(markup=False, highlight=False, emoji=False, soft_wrap=False)


def _tell_written(console: Console, paths: Iterable[Path]) -> None:
    from ifccheck.publish.words import printable

    for path in paths:
        console.print(f"  {printable(str(path))}", soft_wrap=True)


class _Silent:
    """Stands in for a progress display where no one watches."""

    def __enter__(self) -> Callable[[str], None]:
        return lambda _: None

    def __exit__(self, *_: object) -> None:
        return None


class _Shown:
    """A line on the terminal that tells which stage the run is in."""

    def __init__(self) -> None:
        from rich.console import Console
        from rich.text import Text

        self._text = Text
        self._status = Console(stderr=True).status("")

    def __enter__(self) -> Callable[[str], None]:
        self._status.start()
        return lambda stage: self._status.update(self._text(stage))

    def __exit__(self, *_: object) -> None:
        self._status.stop()


def _progress() -> _Silent | _Shown:
    return _Shown() if sys.stderr.isatty() else _Silent()


def _guarded(call: Callable[[], Any]) -> Any:
    """Turn an error for people into its one line and its exit status."""
    try:
        return call()
    except IfccheckError as error:
        _tell(str(error))
        sys.exit(error.exit_status)


def _tell(message: str) -> None:
    """Say what is wrong, on one line of standard error."""
    printable = "".join(c if c.isprintable() else "?" for c in " ".join(message.split()))
    click.echo(f"ifccheck: {printable}", err=True)
