"""The README tells the truth about commands, keys and files."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from ifccheck.brief import schema
from ifccheck.brief.load import load_brief
from ifccheck.brief.load_table import KINDS, LOAD_COLUMNS
from ifccheck.brief.schedule import COLUMNS
from ifccheck.standards.csa_a23_3_14.combinations import ORDINARY_CATEGORIES

REPOSITORY = Path(__file__).resolve().parents[1]
README = (REPOSITORY / "README.md").read_text(encoding="utf-8")
TABLES = [
    table
    for table in vars(schema).values()
    if isinstance(table, type) and issubclass(table, schema.Table)
]


@pytest.mark.parametrize("table", TABLES, ids=lambda table: table.__name__)
def test_every_key_of_the_brief_is_explained(table: type[schema.Table]) -> None:
    for name, field in table.model_fields.items():
        key = field.alias or name
        assert re.search(rf"(?<![a-z_]){re.escape(key)}(?![a-z_])", README), key


def test_every_column_and_category_is_listed() -> None:
    for word in (*COLUMNS, *LOAD_COLUMNS, *KINDS, *(ORDINARY_CATEGORIES - {"offices"})):
        assert word in README, word


def test_the_example_brief_is_one(tmp_path: Path) -> None:
    (example,) = re.findall(r"```toml\n(\[basis\].*?)```", README, flags=re.DOTALL)
    brief = tmp_path / "brief.toml"
    brief.write_text(example, encoding="utf-8")
    assert load_brief(brief).basis.standard == "csa-a23.3-14"


def test_every_file_that_it_shows_is_there() -> None:
    for target in re.findall(r"\]\(([^)#:]+)\)", README):
        assert (REPOSITORY / target).is_file(), target


def test_it_has_two_commands_that_do_all_the_setting_up() -> None:
    commands = re.findall(r"```sh\n(.*?)```", README, flags=re.DOTALL)
    assert len(commands) == 2
    assert all(command.startswith("python3 -m venv .venv && ") for command in commands)
    assert "ifccheck rate sample_models/" in commands[0]
    assert "pytest" in commands[1]
