"""The arrows between the parts of the program, walked over the source."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

PACKAGE = Path(__file__).resolve().parents[1] / "ifccheck"
MODULES = sorted(PACKAGE.rglob("*.py"))
RIM = {"errors", "units", "notation", "beam", "openings", "result_sets", "findings", "framed"}

ALLOWED: dict[str, set[str]] = {
    "errors": set(),
    "units": {"errors"},
    "notation": {"errors", "units", "beam"},
    "cases": set(),
    "members": set(),
    "openings": set(),
    "slabs": set(),
    "standing": set(),
    "model_loads": set(),
    "wheels": set(),
    "beam": {"cases", "members", "model_loads", "openings", "slabs", "standing", "wheels"},
    "result_sets": set(),
    "outputs": {"errors"},
    "memory": set(),
    "ifc": RIM | {"mechanics"},
    "brief": RIM,
    "frame": RIM,
    "mechanics": {"errors", "units"},
    "analysis": RIM | {"mechanics"},
    "standards": RIM | {"mechanics"},
    "detailing": RIM | {"mechanics"},
    "rating": RIM | {"analysis", "standards", "mechanics"},
    "sheet": RIM | {"rating", "standards", "mechanics"},
    "findings": {"beam", "framed"},
    "framed": {"beam"},
    "tables": RIM | {"rating"},
    "demand": RIM | {"analysis", "frame", "mechanics", "rating"},
    "subjects": RIM | {"brief", "demand", "frame", "detailing", "rating", "standards"},
    "results": RIM
    | {"brief", "ifc", "outputs", "publish", "rating", "sheet", "standards", "subjects"},
    "publish": RIM | {"tables", "rating", "sheet", "standards", "mechanics"},
}
"""Who may import whom; those at the top may import all below."""

TOP = {"cli", "pipeline", "surveying", "__init__", "__main__"}

OUTSIDE: dict[str, set[str]] = {
    "click": {"cli"},
    "ifcopenshell": {"ifc"},
    "jinja2": {"publish"},
    "pandas": {"tables", "brief", "__init__"},
    "shapely": {"ifc", "frame"},
}


def part_of(path: Path) -> str:
    relative = path.relative_to(PACKAGE)
    return relative.parts[0].removesuffix(".py")


def imports_of(path: Path) -> set[str]:
    found: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path.name}: relative import"
            found.add(node.module or "")
            if node.module == "ifccheck":
                found |= {f"ifccheck.{alias.name}" for alias in node.names}
    return found


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_a_module_imports_only_what_lies_below_it(path: Path) -> None:
    part = part_of(path)
    if part not in ALLOWED:
        assert part in {"cli", "pipeline", "surveying", "__init__", "__main__"}, (
            f"{part}: a part with no arrows"
        )
        return
    own = {name.split(".")[1] for name in imports_of(path) if name.startswith("ifccheck.")}
    assert own - {part, "__version__"} <= ALLOWED[part]


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_a_library_is_used_only_where_it_belongs(path: Path) -> None:
    used = {name.split(".")[0] for name in imports_of(path)}
    for library, parts in OUTSIDE.items():
        if library in used:
            assert part_of(path) in parts


@pytest.mark.parametrize("part", ["analysis", "mechanics", "standards"])
def test_numeric_parts_use_numpy_alone(part: str) -> None:
    own = set(sys.stdlib_module_names) | {"numpy", "ifccheck"}
    for path in (PACKAGE / part).rglob("*.py"):
        assert {name.split(".")[0] for name in imports_of(path)} <= own, path.name


@pytest.mark.parametrize("call", [["-c", "import ifccheck"], ["-m", "ifccheck", "--help"]])
def test_a_light_call_loads_no_heavy_library(call: list[str]) -> None:
    run = subprocess.run(
        [sys.executable, "-X", "importtime", *call], capture_output=True, text=True, check=True
    )
    loaded = {line.rsplit("|", 1)[-1].strip() for line in run.stderr.splitlines()}
    assert not loaded & {"pandas", "ifcopenshell", "pint", "shapely", "openpyxl"}


def test_modules_and_functions_stay_short() -> None:
    for path in MODULES:
        text = path.read_text(encoding="utf-8")
        assert text.count("\n") <= 420, f"{path.name} is too long"
        for node in ast.walk(ast.parse(text)):
            if isinstance(node, ast.FunctionDef):
                assert _body_lines(node) <= 50, f"{path.name}: {node.name} is too long"


def _body_lines(node: ast.FunctionDef) -> int:
    docstring = ast.get_docstring(node, clean=False)
    total = (node.end_lineno or node.lineno) - node.lineno
    return total - (docstring.count("\n") + 1 if docstring else 0)
