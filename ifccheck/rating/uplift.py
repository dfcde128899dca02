"""Supports that a combination lifts: what would hold the beam down is not checked."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.effects import Effects
from ifccheck.analysis.spans import PINNED
from ifccheck.beam import Remark
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.assembly import Frame
from ifccheck.rating.verdict import Places
from ifccheck.units import show, show_ratio

ROUNDING = 1e-9
"""Share of what presses and lifts a support below which its reaction is zero"""

ENDS = ("start", "end")


@dataclass(frozen=True, slots=True)
class Uplift:
    """The greatest upward pull on either support of each span (S, 2)."""

    beam: Ints
    """Beam of each span (S)"""
    x: Floats
    """Of the supports, from the start of the beam [mm]"""
    force: Floats
    """[N]; 0 where no combination lifts the support"""
    combination: Ints
    """Row of the combination that lifts it most"""
    beyond: Mapping[str, Floats]
    """Factor of each rated case beyond which a combination lifts the support (S, 2); inf where
    none does"""


def uplift_of(effects: Effects, frame: Frame, rated: Mapping[str, int]) -> Uplift:
    """The greatest pull on each pinned support in any combination.

    pull = -min over the combinations of sum(factor x reaction), each case by the factor that
    makes its part least

    Parameters
    ----------
    effects
        Reactions of each part of a case alone (P, S, 2), and its factors (C, P).
    frame
        How the spans are held (S), and which parts the cases have.
    rated
        Row of each rated case.
    """
    spans, parts = frame.spans, frame.parts
    reactions = effects.cases.reactions
    pressing, lifting = np.maximum(reactions, 0.0), np.maximum(-reactions, 0.0)
    up = np.einsum("ck,kbe->cbe", effects.greater, lifting)
    down = np.einsum("ck,kbe->cbe", effects.lesser, pressing)
    net = np.where(up - down > ROUNDING * (up + down), up - down, 0.0)
    pinned: Bools = np.stack([spans.start_kind, spans.end_kind], axis=-1) == PINNED
    beyond = {}
    for name, k in rated.items():
        rows = parts.rows(k)
        own = np.einsum("ck,kbe->cbe", effects.greater[:, rows], lifting[rows])
        own -= np.einsum("ck,kbe->cbe", effects.lesser[:, rows], pressing[rows])
        holds = own - (up - down)
        grows = (own > 0.0) & (holds > 0.0)
        with np.errstate(over="ignore"):  # of next to no uplift it takes infinitely much
            factor = np.where(grows, holds / np.where(grows, own, 1.0), np.inf).min(axis=0)
        beyond[name] = np.where(pinned, factor, np.inf)
    supports = np.stack([spans.start, spans.end], axis=-1)
    force = np.where(pinned, net.max(axis=0), 0.0)
    return Uplift(frame.beam_of, supports, force, net.argmax(axis=0), beyond)


def uplift_remarks(
    uplift: Uplift, keys: Sequence[str], places: Places
) -> Iterator[tuple[int, Remark]]:
    """What to tell of each support that is lifted, with the row of its beam; keys of all (B)."""
    for span, end in np.argwhere(uplift.force > 0.0).tolist():
        force, row = float(uplift.force[span, end]), int(uplift.combination[span, end])
        beam = int(uplift.beam[span])
        text = (
            f"{_support(uplift, span, end)} is lifted by up to {show(force, 'force')} under"
            f" {places.combination_of(row, beam)}: what holds it down is not checked"
        )
        yield beam, Remark(keys[beam], "demand", text, "doubt")


def growing_uplift_remarks(
    uplift: Uplift, factors: Mapping[str, Floats], keys: Sequence[str]
) -> Iterator[tuple[int, Remark]]:
    """What to tell of each support that a rated case lifts before it reaches its rating factor
    (B), though not as it is."""
    for case, beyond in uplift.beyond.items():
        early = (uplift.force == 0.0) & (beyond < factors[case][uplift.beam, None])
        for span, end in np.argwhere(early).tolist():
            beam = int(uplift.beam[span])
            text = (
                f"{_support(uplift, span, end)} is lifted where {case} is more than"
                f" {show_ratio(float(beyond[span, end]))} x assigned: what holds it down is not"
                " checked"
            )
            yield beam, Remark(keys[beam], "demand", text, "doubt")


def _support(uplift: Uplift, span: int, end: int) -> str:
    """The support at an end of a span, for people."""
    beside = span + 2 * end - 1
    inner = 0 <= beside < uplift.beam.size and uplift.beam[beside] == uplift.beam[span]
    if inner:
        return f"its support at x = {show(float(uplift.x[span, end]), 'length')}"
    return f"its {ENDS[end]}"
