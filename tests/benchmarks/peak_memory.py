"""Peak memory of reading a model and of a whole run, against ifcopenshell.open of the same file.

    python -m tests.benchmarks.peak_memory [FRAME.ifc]

Each is measured in a process of its own, from its start to its end, libraries included, and the
ratios are printed with those of processor time. Without a file, the frame of ``whole_run`` is
written.
"""

from __future__ import annotations

import json
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from tests.benchmarks.whole_run import BRIEF, written

MEBIBYTE = 1024.0
"""The kernel counts in KiB."""


def _open(model: Path, brief: Path, out: Path) -> Callable[[], object]:
    import ifcopenshell

    return lambda: ifcopenshell.open(str(model))


def _read(model: Path, brief: Path, out: Path) -> Callable[[], object]:
    from ifccheck import pipeline

    return lambda: pipeline.read_models([model], None, lambda _: None)


def _rate(model: Path, brief: Path, out: Path) -> Callable[[], object]:
    from ifccheck import pipeline

    return lambda: pipeline.rate([model], brief)


def _publish(formats: tuple[str, ...]) -> Callable[[Path, Path, Path], Callable[[], object]]:
    def prepared(model: Path, brief: Path, out: Path) -> Callable[[], object]:
        from ifccheck import pipeline

        return lambda: pipeline.publish(pipeline.rate([model], brief), out, formats)

    return prepared


STAGES = {
    "ifcopenshell.open": _open,
    "reading": _read,
    "reading and rating": _rate,
    "whole run without HTML": _publish(("model", "csv", "json")),
    "whole run with HTML": _publish(("model", "csv", "json", "html")),
}


def measure(stage: str, model: Path, brief: Path, out: Path) -> tuple[float, float]:
    """Return the peak memory [MiB] and the processor time [s] of a stage in this process."""
    run = STAGES[stage](model, brief, out)
    began = time.process_time()
    kept = run()
    spent = time.process_time() - began
    del kept
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / MEBIBYTE, spent


def main() -> None:
    """Write, measure and print."""
    if sys.argv[1:2] == ["--stage"]:
        print(json.dumps(measure(sys.argv[2], *map(Path, sys.argv[3:]))))
        return
    with tempfile.TemporaryDirectory() as folder:
        model = Path(sys.argv[1]) if len(sys.argv) > 1 else written(Path(folder))
        brief = Path(folder) / "brief.toml"
        brief.write_text(BRIEF, encoding="utf-8")
        found = {
            stage: _in_a_process(stage, model, brief, Path(folder) / "out") for stage in STAGES
        }
    memory, spent = found["ifcopenshell.open"]
    print(f"ifcopenshell.open: {memory:.0f} MiB and {spent:.2f} s, the measures of what follows")
    for stage, (peak, seconds) in found.items():
        print(f"{stage:<28} {peak / memory:5.2f} x memory {seconds / spent:6.2f} x time")


def _in_a_process(stage: str, *paths: Path) -> tuple[float, float]:
    command = [sys.executable, "-m", "tests.benchmarks.peak_memory", "--stage", stage]
    done = subprocess.run([*command, *map(str, paths)], check=True, capture_output=True, text=True)
    peak, spent = json.loads(done.stdout)
    return peak, spent


if __name__ == "__main__":
    main()
