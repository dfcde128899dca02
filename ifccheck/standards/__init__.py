"""Standards: each one is data and pure functions on arrays, found by entry point."""

from ifccheck.standards.contract import (
    CalculationLine,
    Check,
    LimitState,
    Note,
    Options,
    Outside,
    Prepared,
    Quick,
    Standard,
)

__all__ = [
    "CalculationLine", "Check", "LimitState", "Note", "Options", "Outside", "Prepared", "Quick",
    "Standard",
]  # fmt: skip
