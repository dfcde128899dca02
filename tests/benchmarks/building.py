"""Standing beams in their building, lines with patterns and the load path, against opening.

    python -m tests.benchmarks.building [STOREYS BAYS]...

For frames of 240, 2,200 and 10,120 beams (or of the sizes given) the processor time of finding
supports and lines, and of solving them and passing reactions on, over that of ifcopenshell.open
of the same file; and the exponent with which both grow with the number of beams.
"""

from __future__ import annotations

import math
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

from tests.benchmarks.whole_run import BRIEF, GENERATOR

SIZES = ((4, 5), (10, 10), (10, 22))
IN_A_FRAME = BRIEF.replace('supports = ["pinned", "pinned"]\n', "").replace(
    "[cases.floor]", '[frame]\ncontinuity = "always"\n[cases.floor]'
)
ROUNDS = 3


def main() -> None:
    """Write the frames, time and print."""
    given = [int(text) for text in sys.argv[1:]]
    sizes = tuple(zip(given[::2], given[1::2], strict=True)) or SIZES
    with tempfile.TemporaryDirectory() as folder:
        found = [_measured(Path(folder), storeys, bays) for storeys, bays in sizes]
    for beams, opening, standing, path in found:
        print(
            f"{beams:6d} beams: open {opening:.2f} s; supports and lines"
            f" {standing / opening:.2f} x, analysis and load path {path / opening:.2f} x,"
            f" together {(standing + path) / opening:.2f} x open"
        )
    (first, _, *one), (last, _, *other) = found[0], found[-1]
    growth = math.log(sum(other) / sum(one)) / math.log(last / first)
    print(f"cost grows with the number of beams to the power {growth:.2f}")


def _measured(folder: Path, storeys: int, bays: int) -> tuple[int, float, float, float]:
    import ifcopenshell

    model = folder / f"{storeys}-{bays}.ifc"
    size = ["--storeys", str(storeys), "--bx", str(bays), "--by", str(bays)]
    subprocess.run([sys.executable, str(GENERATOR), str(model), *size], check=True)
    opening = min(_timed(lambda: ifcopenshell.open(str(model))) for _ in range(ROUNDS))
    gather, beams = _gathering(model, folder)
    stages = [_stages(gather) for _ in range(ROUNDS)]
    return beams, opening, min(s for s, _ in stages), min(p for _, p in stages)


def _gathering(model: Path, folder: Path) -> tuple[Callable[[], Any], int]:
    """A call that gathers the model once it was read, and its number of beams."""
    from ifccheck import pipeline
    from ifccheck.brief.selecting import join

    brief = folder / "brief.toml"
    brief.write_text(IN_A_FRAME, encoding="utf-8")
    plan = pipeline.make_plan(brief)
    (read,) = pipeline.read_models([model], plan.brief, lambda _: None)
    matches = join(plan.brief, plan.schedule, pipeline.find_beams(read, plan))
    return lambda: pipeline.gather_model(read, matches, plan, lambda _: None), len(read.model.beams)


def _stages(gather: Callable[[], Any]) -> tuple[float, float]:
    """Processor time of standing the beams, and of the load path."""
    from ifccheck.subjects import framing, gathering

    spent = {"stand_in_building": 0.0, "load_path": 0.0}
    watched = ((gathering, "stand_in_building"), (framing, "load_path"))
    kept = {name: getattr(module, name) for module, name in watched}

    def timed(name: str) -> Callable[..., Any]:
        def call(*given: Any) -> Any:
            began = time.process_time()
            found = kept[name](*given)
            spent[name] += time.process_time() - began
            return found

        return call

    try:
        for module, name in watched:
            setattr(module, name, timed(name))
        gather()
    finally:
        for module, name in watched:
            setattr(module, name, kept[name])
    return spent["stand_in_building"], spent["load_path"]


def _timed(call: Callable[[], Any]) -> float:
    began = time.process_time()
    call()
    return time.process_time() - began


if __name__ == "__main__":
    main()
