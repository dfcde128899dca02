"""Standards are found by entry point, and a broken one disturbs nothing else."""

from __future__ import annotations

import sys
from dataclasses import fields
from pathlib import Path

import numpy as np
import pytest

from ifccheck.errors import BriefError
from ifccheck.standards import discovery
from ifccheck.standards.contract import Standard
from ifccheck.standards.csa_a23_3_14 import STANDARD, clear_spacing
from ifccheck.standards.discovery import all_standards, find_standard
from tests.csa_beams import beam, demand, rows


def test_our_own_standard_is_found_by_its_entry_point():
    assert find_standard("csa-a23.3-14") is STANDARD
    assert dict(all_standards())["csa-a23.3-14"] is STANDARD


def test_unknown_standard_names_what_comes_near():
    with pytest.raises(BriefError, match=r'"csa-a23-14": did you mean csa-a23\.3-14\?'):
        find_standard("csa-a23-14")
    with pytest.raises(BriefError, match=r"installed are .*csa-a23\.3-14"):
        find_standard("zzz")


@pytest.fixture
def plugins(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    """Install distributions with one entry point each, as files on the path."""

    def install(name: str, entry: str, body: str) -> None:
        module = name.replace("-", "_")
        (tmp_path / f"{module}.py").write_text(body)
        info = tmp_path / f"{module}-1.0.dist-info"
        info.mkdir()
        (info / "METADATA").write_text(f"Metadata-Version: 2.1\nName: {name}\nVersion: 1.0\n")
        (info / "entry_points.txt").write_text(
            f"[{discovery.GROUP}]\n{entry} = {module}:STANDARD\n"
        )
        monkeypatch.delitem(sys.modules, module, raising=False)

    monkeypatch.syspath_prepend(str(tmp_path))
    return install


@pytest.mark.parametrize(
    "body",
    ["import nothing_of_this_name", "raise RuntimeError('two\\nlines')", "raise SystemExit(7)"],
)
def test_a_plugin_that_fails_is_named_by_its_distribution(plugins, body):
    plugins("broken-codes", "broken-1", body)
    found = dict(all_standards())
    assert found["csa-a23.3-14"] is STANDARD
    assert isinstance(found["broken-1"], str)
    assert found["broken-1"].startswith("broken-codes 1.0 cannot be loaded: ")
    assert "\n" not in found["broken-1"]
    assert find_standard("csa-a23.3-14") is STANDARD
    with pytest.raises(BriefError, match=r"broken-codes 1\.0 cannot be loaded"):
        find_standard("broken-1")


def test_a_plugin_must_give_a_standard_of_its_own_id(plugins):
    plugins("odd-codes", "odd-1", "STANDARD = 3")
    plugins("vain-codes", "vain-1", "from ifccheck.standards.csa_a23_3_14 import STANDARD")
    found = dict(all_standards())
    assert found["odd-1"] == "odd-codes 1.0: odd_codes:STANDARD is not a Standard"
    assert found["vain-1"] == 'vain-codes 1.0: vain_codes:STANDARD calls itself "csa-a23.3-14"'


def test_an_id_given_twice_is_an_error(plugins):
    plugins("copied-codes", "csa-a23.3-14", "STANDARD = 3")
    with pytest.raises(BriefError, match="copied-codes"):
        find_standard("csa-a23.3-14")


def test_every_part_of_the_standard_is_there():
    assert all(getattr(STANDARD, f.name) for f in fields(Standard))
    names = [state.name for state in STANDARD.limit_states]
    assert names == [
        "FlexureSagging",
        "FlexureHogging",
        "Shear",
        "LongitudinalTension",
        "MinimumStirrups",
    ]


@pytest.mark.parametrize("state", STANDARD.limit_states, ids=lambda s: s.name)
def test_checks_have_one_shape_and_lines_name_their_fields(state):
    acting = demand([[1e6, 2e6], [-3e6, 4e6]], [[1e3, 2e3], [3e3, -4e3]])
    check = state.check(beam(x=(2000.0, 4000.0)), acting)
    for array in (check.demand, check.resistance, check.utilisation):
        assert array.shape == (2, 2)
    for outside in check.outside:
        assert outside.mask.shape == (2, 2)
    for field in fields(check.details):
        assert getattr(check.details, field.name).shape == (2, 2)
    for line in state.lines:
        assert getattr(check.details, line.field).shape == (2, 2)
        assert not line.when or getattr(check.details, line.when).dtype == np.bool_


def test_basis_and_notes_have_a_row_for_every_station():
    state = beam(x=(2000.0, 4000.0))
    assert all(array.shape == (2,) for array in STANDARD.basis(state).values())
    assert all(note.mask.shape == (2,) for note in STANDARD.notes(state))
    assert STANDARD.critical_distance(*rows(x=(2000.0, 4000.0))).shape == (2,)


def test_clear_spacing_from_memory():
    """CSA A23.1, 6.6.5.2 (from memory): the greatest of 1.4 db, 1.4 ag and 30 mm."""
    assert clear_spacing(29.9, 20.0) == pytest.approx(1.4 * 29.9)
    assert clear_spacing(16.0, 40.0) == pytest.approx(56.0)
    assert clear_spacing(11.3, 14.0) == 30.0
