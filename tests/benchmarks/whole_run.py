"""A whole run on a frame of 1,980 beams and 51,000 bars, against opening the same file.

    python -m tests.benchmarks.whole_run [FRAME.ifc]

Prints ratios of processor time within this one run. Without a file, one is written by the
frame generator that lies beside the checkout.
"""

from __future__ import annotations

import gc
import itertools
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

GENERATOR = Path(__file__).resolve().parents[2].parent / "shared" / "bench" / "frame_model.py"
BRIEF = """
[basis]
standard = "csa-a23.3-14"
concrete_unit_weight = "24 kN/m3"
[defaults]
bar_yield = "500 MPa"
stirrup_yield = "500 MPa"
aggregate_size = "20 mm"
supports = ["pinned", "pinned"]
[cases.floor]
nature = "imposed"
category = "office"
[cases.plant]
nature = "imposed"
rated = true
[[loads]]
case = "floor"
where = "IfcBeam"
line = "12 kN/m"
[[loads]]
case = "plant"
where = "IfcBeam"
point = "20 kN"
at = "40 %"
"""
ROUNDS = 5


def main() -> None:
    """Write, time and print."""
    with tempfile.TemporaryDirectory() as folder:
        model = Path(sys.argv[1]) if len(sys.argv) > 1 else written(Path(folder))
        brief = Path(folder) / "brief.toml"
        brief.write_text(BRIEF, encoding="utf-8")
        _warm()
        best: dict[str, float] = {}
        openings, wholes = [_timed(lambda: _open(model))[0]], []
        for _ in range(ROUNDS):  # by turns, for other work on the machine comes and goes
            stages = _stages(model, brief, Path(folder) / "out")
            for stage, spent in stages:
                best[stage] = min(best.get(stage, spent), spent)
            wholes.append(sum(spent for _, spent in stages))
            openings.append(_timed(lambda: _open(model))[0])
        opening = min(openings)
        print(f"ifcopenshell.open: {opening:.2f} s of processor time, the measure of what follows")
        for stage, spent in best.items():
            print(f"{stage:<45} {spent / opening:5.2f} x open")
        print(f"{'whole run without HTML':<45} {sum(best.values()) / opening:5.2f} x open")
        beside = [(before + after) / 2.0 for before, after in itertools.pairwise(openings)]
        ratios = [whole / one for whole, one in zip(wholes, beside, strict=True)]
        rounds = " ".join(f"{ratio:.2f}" for ratio in ratios)
        median = statistics.median(ratios)
        print(f"{'each round against those beside it, median':<45} {median:5.2f} x open ({rounds})")


def written(folder: Path) -> Path:
    """Return the frame, written into a folder by the generator."""
    model = folder / "frame.ifc"
    size = ["--storeys", "9", "--bx", "10", "--by", "10"]
    subprocess.run([sys.executable, str(GENERATOR), str(model), *size], check=True)
    return model


def _open(model: Path) -> Any:
    import ifcopenshell

    return ifcopenshell.open(str(model))


def _warm() -> None:
    """Load every library once, so that no stage pays for it."""
    import pandas  # noqa: F401

    import ifccheck.pipeline  # noqa: F401


def _timed(call: Callable[[], Any]) -> tuple[float, Any]:
    began = time.process_time()
    found = call()
    return time.process_time() - began, found


def _stages(model: Path, brief: Path, out: Path) -> list[tuple[str, float]]:
    from ifccheck import pipeline
    from ifccheck.memory import uncollected

    marks: list[tuple[float, str]] = []

    def say(stage: str) -> None:
        marks.append((time.process_time(), stage.split()[0]))

    gc.unfreeze()  # what the round before left, which the command would not live to see
    gc.collect()
    with uncollected(to_the_end=True):  # as the command runs
        run = pipeline.rate([model], brief, say)
        pipeline.publish(run, out, ("model", "csv", "json"), say)
    marks.append((time.process_time(), ""))
    return [(name, end - at) for (at, name), (end, _) in itertools.pairwise(marks)]


if __name__ == "__main__":
    main()
