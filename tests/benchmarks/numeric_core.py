"""How many beams a second the numeric core rates on one core.

41 stations at least, 4 combinations, one rated case, flexure, shear by one method after the
other, longitudinal tension, minimum stirrups and rating factors; assembly of arrays apart.
"""

from __future__ import annotations

import time

from ifccheck.beam import Case
from ifccheck.rating.batch import rate_batch
from ifccheck.standards import Options
from tests.made_subjects import STANDARD, combinations, line, point, subject

CASES = (
    Case("self", "permanent"),
    Case("floor", "imposed", category="office"),
    Case("press", "imposed", rated=True),
    Case("snow", "snow"),
)
BEAMS = 2000
SIZE = 500


def main() -> None:
    """Print beams per second of processor time for each shear method, and for both."""
    beams = [
        subject(
            key=f"beam {i}", depth=500.0 + 10.0 * (i % 30), bottom=3 + i % 3, spacing=150.0 + i % 150,
            loads=(
                line("floor", 8.0 + i % 7, f"beam {i}"),
                point("press", 30e3 + 1e3 * (i % 40), 1500.0 + i % 2000, f"beam {i}"),
                line("snow", 2.0, f"beam {i}"),
            ),
        )
        for i in range(BEAMS)
    ]  # fmt: skip
    chosen = combinations(CASES)
    print(f"{BEAMS} beams, {len(chosen)} combinations: {'; '.join(c.name for c in chosen)}")
    total = 0.0
    for method in STANDARD.shear_methods:
        began = time.process_time()
        for first in range(0, BEAMS, SIZE):
            rate_batch(beams[first : first + SIZE], STANDARD, Options(method), CASES, chosen)
        spent = time.process_time() - began
        total += spent
        print(f"{method}: {BEAMS / spent:.0f} beams/s")
    print(f"both methods, one after the other: {BEAMS / total:.0f} beams/s")


if __name__ == "__main__":
    main()
