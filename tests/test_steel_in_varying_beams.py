"""Bars that were drawn into beams of varying section: in the concrete, and out of it."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from ifccheck.beam import Verdict
from tests.bodies_of_beams import Places
from tests.models import BEARINGS, Layer, MadeBeam, Ties, answers, brief, load, model, rate_model

LENGTH, WIDTH = 6300.0, 320.0
DIPPED: Places = [(0, 0), (LENGTH, 0), (LENGTH, 800), (LENGTH / 2, 500), (0, 800)]
"""A top that dips to midspan"""
SOFFIT = Layer("25M", 64.0, (-100.0, 0.0, 100.0), 40.0, LENGTH - 40.0)
LOW_TOP = Layer("20M", 430.0, (-100.0, 100.0), 40.0, LENGTH - 40.0)
LOW = Ties("10M", tuple(100.0 + 150.0 * n for n in range(41)), 114.0, 45.65, 454.35)


def dipped(*layers: Layer, ties: tuple[Ties, ...] = (LOW,)) -> MadeBeam:
    outline = ((-160.0, 0.0), (160.0, 0.0), (160.0, 800.0), (-160.0, 800.0))
    return MadeBeam(outline, LENGTH, "V-1", layers=layers, ties=ties,
                    body=lambda bodies: [bodies.elevation(DIPPED, WIDTH)])  # fmt: skip


def rated(folder: Path, beam: MadeBeam) -> dict[str, Any]:
    text = brief(BEARINGS, load("floor", 'line = "8 kN/m"'))
    return answers(rate_model(folder, model(beam), text))[beam.mark]


def test_level_bars_within_the_concrete_are_rated(tmp_path: Path) -> None:
    answer = rated(tmp_path, dipped(SOFFIT, LOW_TOP))
    assert answer["reasons"] == []
    assert answer["verdict"] in (Verdict.ADEQUATE, Verdict.FALLS_SHORT)


def test_a_level_bar_that_leaves_the_concrete_in_the_dip_is_a_reason(tmp_path: Path) -> None:
    """Its ends lie in the concrete, its middle in the air."""
    answer = rated(tmp_path, dipped(SOFFIT, replace(LOW_TOP, z=740.0)))
    assert answer["verdict"] != Verdict.ADEQUATE
    assert any("concrete" in reason or "section" in reason for reason in answer["reasons"])


def test_stirrups_that_stand_out_of_the_dip_are_a_reason(tmp_path: Path) -> None:
    high = replace(LOW, high=700.0)
    answer = rated(tmp_path, dipped(SOFFIT, LOW_TOP, ties=(high,)))
    assert answer["verdict"] != Verdict.ADEQUATE
    assert any("stirrup" in reason for reason in answer["reasons"])
