"""How many beams a second the numeric core rates on one core.

At least 41 stations, 4 combinations, one rated case; flexure, shear, longitudinal tension, minimum
stirrups and rating factors, by each method for shear alone and by both in one pass, which works
out once what the method does not touch. Assembly of the arrays from the beams is timed apart, and
so is a fixed piece of numpy, for other work on the same processor slows all alike.
"""

from __future__ import annotations

import time
from collections.abc import Sequence

import numpy as np

from ifccheck.beam import Case, Combination
from ifccheck.rating.assembly import frame_of
from ifccheck.rating.batch import batches_of, keep_memory, rate_options
from ifccheck.rating.subject import Subject
from ifccheck.standards import Options
from tests.made_subjects import STANDARD, combinations, line, point, subject

CASES = (
    Case("self", "permanent"),
    Case("floor", "imposed", category="office"),
    Case("press", "imposed", rated=True),
    Case("snow", "snow"),
)
BEAMS = 2000
FOURTH = Combination("1.0D + 1.0L + 1.0S", "strength", {case.name: (1.0, 0.0) for case in CASES})
AIM = 2000.0
"""Beams a second"""


def main() -> None:
    """Print beams per second of processor time for each shear method, and for both at once."""
    beams = made_beams()
    chosen = (*combinations(CASES), FOURTH)
    print(f"{BEAMS} beams, {len(chosen)} combinations: {'; '.join(c.name for c in chosen)}")
    keep_memory()
    began = time.process_time()
    frames = [(frame_of(batch, CASES), batch) for batch in batches_of(beams)]
    assembled = time.process_time() - began
    print(f"assembly: {BEAMS / assembled:.0f} beams/s")
    for methods in (*((method,) for method in STANDARD.shear_methods), STANDARD.shear_methods):
        options, yard = [Options(method) for method in methods], yardstick()
        began = time.process_time()
        for frame, batch in frames:
            for _ in rate_options(frame, batch, STANDARD, options, CASES, chosen):
                pass
        spent = time.process_time() - began
        rate, ratio = BEAMS / spent, spent / BEAMS / (yard + yardstick()) * 2.0
        name = " and ".join(methods)
        print(f"core, {name}: {rate:.0f} beams/s ({rate / AIM:.2f} of the aim), {ratio:.3f} yards")


def made_beams() -> Sequence[Subject]:
    """Simple beams that differ in depth, bars, stirrups and loads."""
    return [
        subject(
            key=f"beam {i}",
            depth=500.0 + 10.0 * (i % 30),
            bottom=3 + i % 3,
            spacing=150.0 + i % 150,
            loads=(
                line("floor", 8.0 + i % 7, f"beam {i}"),
                point("press", 30e3 + 1e3 * (i % 40), 1500.0 + i % 2000, f"beam {i}"),
                line("snow", 2.0, f"beam {i}"),
            ),
        )
        for i in range(BEAMS)
    ]


def yardstick() -> float:
    """Processor time of a million roots and quotients, a cache's worth at a time [s]."""
    values = np.linspace(0.0, 1.0, 10_000)
    began = time.process_time()
    for _ in range(100):
        np.sqrt(values * values + 1.0) / (values + 2.0)
    return time.process_time() - began


if __name__ == "__main__":
    main()
