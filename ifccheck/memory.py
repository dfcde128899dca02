"""Spares a run the garbage collector."""

from __future__ import annotations

import gc
from collections.abc import Iterator
from contextlib import contextmanager


@contextmanager
def uncollected(*, to_the_end: bool = False) -> Iterator[None]:
    """Keep the garbage collector away, and leave it as it was.

    A run makes millions of small objects and keeps nearly all of them to its end, so that the
    collector would walk them over and over to free nothing. What has no cycles is freed as ever.
    ``to_the_end`` where the process ends with the run: the collector then never walks at all what
    was made by then, as it else would as soon as it may, and once more at the end of the process.
    """
    enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if to_the_end:
            gc.freeze()
        if enabled:
            gc.enable()
