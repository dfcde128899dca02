"""What all tests share: where the open data lie, and that nothing skips where it must not."""

from __future__ import annotations

import os
from collections.abc import Generator
from pathlib import Path

import pytest

REPOSITORY = Path(__file__).resolve().parents[1]
SHARED = REPOSITORY.parent / "shared"


@pytest.hookimpl(wrapper=True)
def pytest_runtest_makereport(
    item: pytest.Item, call: pytest.CallInfo[None]
) -> Generator[None, pytest.TestReport, pytest.TestReport]:
    """Turn a skip into a failure where the environment promises that nothing skips."""
    report = yield
    if report.skipped and os.environ.get("IFCCHECK_NOTHING_SKIPS"):
        report.outcome = "failed"
        report.longrepr = f"skipped although nothing may skip here: {report.longrepr}"
    return report


@pytest.fixture(scope="session")
def open_models() -> Path:
    """Folder of the open IFC models made by others."""
    folder = SHARED / "open_models"
    if not folder.is_dir():
        pytest.skip(f"the open models are not beside this checkout ({folder.parent.name}/)")
    return folder


@pytest.fixture(scope="session")
def reference() -> Path:
    """Folder of the published facts and figures."""
    folder = SHARED / "reference"
    if not folder.is_dir():
        pytest.skip(f"the reference data are not beside this checkout ({folder.parent.name}/)")
    return folder
