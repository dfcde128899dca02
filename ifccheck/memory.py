"""Spares a run the garbage collector."""

from __future__ import annotations

import gc
from collections.abc import Iterator
from contextlib import contextmanager


@contextmanager
def uncollected() -> Iterator[None]:
    """Keep the garbage collector away, and leave it as it was.

    A run makes millions of small objects and keeps nearly all of them to its end, so that the
    collector would walk them over and over to free nothing. What has no cycles is freed as ever.
    """
    enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if enabled:
            gc.enable()
