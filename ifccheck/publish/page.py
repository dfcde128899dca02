"""What every HTML page is made of: its dress, its plans, what was left out of scope."""

from __future__ import annotations

import base64
import hashlib
from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

from markupsafe import Markup

from ifccheck.beam import OutOfScope
from ifccheck.framed import Framed
from ifccheck.publish import tint
from ifccheck.publish.plan import Plan
from ifccheck.publish.rows import GAUGE, GAUGE_END
from ifccheck.publish.sheet_html import SHEETS_PER_BLOCK
from ifccheck.publish.svg import number
from ifccheck.publish.templates import asset

MOST_NAMED = 12
"""Marks named in a list before the rest are only counted."""


def dress(framed: Framed | None = None) -> dict[str, Any]:
    """Return style, script and the policy that admits these and nothing else.

    ``framed`` is how the beams were stood, where the page shows it.
    """
    style, script = _style() + (asset("frame.css") if framed else ""), asset("page.js")
    return {
        "policy": _policy(style, script),
        "style": Markup(style),
        "script": Markup(script),
        "sheets_per_block": SHEETS_PER_BLOCK,
        "framed": framed,
    }


def _policy(style: str, script: str) -> str:
    """Nothing from anywhere, and of script and style only the very texts in the file."""
    return (
        f"default-src 'none'; script-src {_fingerprint(script)}; style-src {_fingerprint(style)};"
        " base-uri 'none'; form-action 'none'"
    )


def _fingerprint(text: str) -> str:
    digest = base64.b64encode(hashlib.sha256(text.encode()).digest()).decode("ascii")
    return f"'sha256-{digest}'"


def _style() -> str:
    """The style sheet, with what it shares with the drawings and the table."""
    widths = "".join(f".w{i}{{width:{i}px}}" for i in range(GAUGE + 1))
    full = f":root{{--gauge:{GAUGE}px;--one:{GAUGE / GAUGE_END:.0f}px}}"
    return tint.style() + full + widths + asset("page.css")


@dataclass(frozen=True, slots=True)
class Tally:
    """A number of beams of one kind, with the swatch that the plans tint them by."""

    kind: str
    swatch: str
    count: int
    words: str


def proportion(parts: Sequence[tuple[str, int]]) -> str:
    """Return the beams in scope as one bar, each part with its class and number."""
    of, left, drawn = max(sum(count for _, count in parts), 1), 0.0, []
    for kind, count in parts:
        width = 600.0 * count / of
        if count:
            drawn.append(
                f'<rect class="{kind} part" x="{number(left)}" y="1" width="{number(width)}"'
                ' height="12"/>'
            )
        left += width
    shape = 'viewBox="0 0 600 14" preserveAspectRatio="none"'
    return f'<svg class="proportion" {shape} aria-hidden="true">{"".join(drawn)}</svg>'


@dataclass(frozen=True, slots=True)
class Figure:
    """A framing plan in its frame."""

    storey: str
    elevation: float | None
    beams: int
    not_drawn: tuple[str, ...]
    svg: Markup


def figures(plans: Iterable[Plan]) -> list[Figure]:
    """Return plans as a page shows them."""
    return [
        Figure(plan.storey, plan.elevation, plan.beams, plan.not_drawn, Markup(plan.svg))
        for plan in plans
    ]


@dataclass(frozen=True, slots=True)
class LeftOut:
    """Members that are out of scope for one reason, with the evidence."""

    reason: str
    count: int
    items: list[tuple[str, int]]


def left_out(members: Iterable[OutOfScope]) -> list[LeftOut]:
    """Return what is out of scope, by reason."""
    groups: dict[str, Counter[str]] = {}
    for member in members:
        where = f", {member.storey}" if member.storey else ""
        words = f"{member.name or member.guid}{where}: {member.evidence}"
        groups.setdefault(member.reason, Counter())[words] += 1
    return [
        LeftOut(reason, found.total(), sorted(found.items()))
        for reason, found in sorted(groups.items())
    ]
