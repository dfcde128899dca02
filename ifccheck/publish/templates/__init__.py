"""The templates, style and script of the summary, and the one place that loads them."""

from __future__ import annotations

from functools import cache
from importlib.resources import files
from typing import Any

from jinja2 import Environment, PackageLoader, StrictUndefined, Template

from ifccheck.publish.words import plain


def _safe(value: Any) -> Any:
    """What cannot be shown is replaced in every text that a template prints."""
    return plain(value) if type(value) is str else value


@cache
def _environment() -> Environment:
    return Environment(
        loader=PackageLoader("ifccheck.publish", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_safe,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=False,
    )


@cache
def template(name: str) -> Template:
    """Return a template, compiled once."""
    return _environment().get_template(name)


@cache
def asset(name: str) -> str:
    """Return the style or the script as text."""
    return files(__name__).joinpath(name).read_text(encoding="utf-8")
