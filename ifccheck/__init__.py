"""ifccheck: rate every reinforced-concrete beam of an IFC model by a published standard."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import pandas as pd

__version__ = "0.1.0"
__all__ = ["rate", "survey"]


def rate(models: str | Path | Sequence[str | Path], brief: str | Path) -> pd.DataFrame:
    """Rate the beams of one or more models; one row per beam, units in the column names.

    Nothing is written. Raises ``ifccheck.errors.IfccheckError`` with one line for people.
    """
    from ifccheck import pipeline
    from ifccheck.tables import run_frame

    paths = [models] if isinstance(models, str | Path) else list(models)
    run = pipeline.rate([Path(path) for path in paths], Path(brief))
    cases = [case.name for case in run.plan.cases if case.rated]
    return run_frame(
        ((report.model, report.ratings, report.spans) for report in run.reports), cases
    )


def survey(
    models: str | Path | Sequence[str | Path], brief: str | Path | None = None
) -> pd.DataFrame:
    """Tell what one or more models hold; one row per beam, with what a rating of it would lack.

    Nothing is written. Raises ``ifccheck.errors.IfccheckError`` with one line for people.
    """
    from ifccheck import surveying
    from ifccheck.tables import survey_frame

    paths = [models] if isinstance(models, str | Path) else list(models)
    found = surveying.survey([Path(path) for path in paths], Path(brief) if brief else None)
    return survey_frame(each.survey for each in found)
