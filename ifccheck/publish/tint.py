"""The scale of utilisation: one tint for each band, told apart by lightness alone.

The bands of a beam that carries its loads go from pale to dark in one hue, so that they keep
their order in any colour vision and in a grey print. Falling short is told by a thick outline
and a broken line along the beam besides its colour, not rated by hatching.
"""

from __future__ import annotations

import math

from ifccheck.beam import Verdict
from ifccheck.rating import Rating

BANDS = (
    (0.50, "u0", "up to 0.50"),
    (0.70, "u1", "0.50 to 0.70"),
    (0.85, "u2", "0.70 to 0.85"),
    (0.95, "u3", "0.85 to 0.95"),
    (1.00, "u4", "0.95 to 1.00"),
)
"""Upper end, class and words of each band of an adequate beam."""

COLOURS = {
    "u0": "#e3edd9",
    "u1": "#b3d3c1",
    "u2": "#74acab",
    "u3": "#3a7d8f",
    "u4": "#184a66",
    "over": "#d2552b",
    "none": "#ffffff",
}


def band(rating: Rating) -> str:
    """Return the class that a beam is tinted with."""
    if rating.verdict is Verdict.FALLS_SHORT:
        return "over"
    if rating.verdict is Verdict.NOT_RATED or math.isnan(rating.utilisation):
        return "none"
    return next((name for limit, name, _ in BANDS if rating.utilisation <= limit), "over")


def style() -> str:
    """Return the tints as variables of a style sheet."""
    return f":root{{{''.join(f'--{name}:{colour};' for name, colour in COLOURS.items())}}}"


def luminance(colour: str) -> float:
    """Relative luminance of ``#rrggbb``, from 0 for black to 1 for white.

    Notes: the definition of WCAG 2.2 for sRGB.
    """
    channels = (int(colour[i : i + 2], 16) / 255.0 for i in (1, 3, 5))
    linear = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels)
    return sum(w * c for w, c in zip((0.2126, 0.7152, 0.0722), linear, strict=True))
