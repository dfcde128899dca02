"""Rectangular beams made for tests, ready to be rated, without any model."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from ifccheck.analysis.combinations import expand_exclusions
from ifccheck.beam import (
    Anchor,
    Axis,
    Bars,
    Beam,
    Case,
    Combination,
    Given,
    Load,
    Outline,
    RatedSpan,
    Run,
    Span,
    Stirrups,
    Support,
    SupportKind,
)
from ifccheck.rating.answers import ratings_of
from ifccheck.rating.batch import Batch, rate_batch
from ifccheck.rating.results import Rating
from ifccheck.rating.subject import Subject
from ifccheck.standards import Options
from ifccheck.standards.discovery import find_standard

STANDARD = find_standard("csa-a23.3-14")
CASES = (
    Case("self", "permanent"),
    Case("floor", "imposed"),
    Case("press", "imposed", rated=True),
)
STEEL = Given(400.0, "test")


def combinations(cases: Sequence[Case] = CASES) -> tuple[Combination, ...]:
    strength = [c for c in STANDARD.combinations(cases) if c.kind == "strength"]
    return expand_exclusions(strength, cases)


def subject(
    key: str = "beam",
    width: float = 300.0,
    depth: float = 600.0,
    length: float = 6000.0,
    bottom: int = 3,
    top: int = 2,
    spacing: float = 200.0,
    legs: int | None = 2,
    loads: Sequence[Load] = (),
    ends: tuple[SupportKind, SupportKind] = ("pinned", "pinned"),
    bearing: float = 200.0,
    strength: float = 30.0,
    anchor: Anchor = Anchor.ANCHORED,
) -> Subject:
    half = width / 2.0
    outline = Outline((((-half, 0.0), (half, 0.0), (half, depth), (-half, depth)),))
    beam = Beam(
        key=key, guid=key, ordinal=0, step_id=1, model="test", ifc_class="IfcBeam", name=key,
        tag="", type_name="", storey="Level 1",
        axis=Axis((0, 0, 0), (1, 0, 0), (0, 1, 0), (0, 0, 1), length),
        runs=(Run(0.0, length, outline),), material="C30",
        concrete_strength=Given(strength, "test"), concrete_density=None, cover=None,
    )  # fmt: skip
    supports = (Support(ends[0], bearing, "test"), Support(ends[1], bearing, "test"))
    bars = (
        *_layer(bottom, 25.2, 500.0, 62.0, length, half - 60.0, anchor),
        *_layer(top, 19.5, 300.0, depth - 60.0, length, half - 60.0, anchor),
    )
    stirrups = (
        Stirrups(0.0, length, spacing, 11.3, 100.0, legs, True, STEEL, 40.0, depth - 40.0, half),
    )
    return Subject(
        beam=beam,
        spans=(
            RatedSpan(
                Span(bearing / 2.0, length - bearing / 2.0, *supports),
                faces=(bearing, length - bearing), direct=(True, True),
            ),
        ),
        span_source="test",
        bars=bars, stirrups=stirrups,
        stirrups_known=True, silent=(), side_loaded=False, statements=(),
        reinforcement_source="bars", loads=tuple(loads),
        concrete_strength=Given(strength, "test"), unit_weight=Given(24e-6, "test"),
        density_factor=Given(1.0, "test"), aggregate_size=Given(20.0, "test"),
        bar_yield=tuple(STEEL for _ in bars), stirrup_yield=(STEEL,), reasons=(), remarks=(),
    )  # fmt: skip


def _layer(
    count: int, diameter: float, area: float, z: float, length: float, half: float, anchor: Anchor
) -> list[Bars]:
    if count == 0:
        return []
    ys = tuple(-half + 2.0 * half * i / max(1, count - 1) for i in range(count))
    return [Bars(count, diameter, area, 0.0, length, z, ys, STEEL, anchor, anchor)]


def line(case: str, intensity: float, key: str = "beam", length: float = 6000.0) -> Load:
    return Load(key, case, "line", 0.0, length, (intensity, intensity), text=f"{intensity} kN/m")


def point(case: str, force: float, x: float, key: str = "beam") -> Load:
    return Load(key, case, "point", x, x, (force, force), text=f"{force / 1e3} kN at {x / 1e3} m")


def rated(
    *subjects: Subject, method: str = "general", cases: Sequence[Case] = CASES
) -> tuple[Batch, list[Rating]]:
    batch = rate_batch(subjects, STANDARD, Options(method), cases, combinations(cases))
    return batch, ratings_of(batch, STANDARD, cases)


def held(beam: Subject, **changes: Any) -> Subject:
    """The same with its one span held otherwise: ``faces``, ``direct``."""
    (span,) = beam.spans
    return replace(beam, spans=(span._replace(**changes),))


def scaled(beam: Subject, case: str, factor: float) -> Subject:
    loads = tuple(
        load._replace(values=(load.values[0] * factor, load.values[1] * factor))
        if load.case == case
        else load
        for load in beam.loads
    )
    return replace(beam, loads=loads)
