"""Supports that a combination lifts: what would hold the beam down is not checked."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.effects import Effects
from ifccheck.analysis.spans import CONTINUOUS, PINNED
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
    """The greatest upward pull on every support of each beam (J)."""

    beam: Ints
    """Beam of each support or tip (J)"""
    x: Floats
    """From the start of the beam [mm]"""
    force: Floats
    """[N]; 0 where no combination lifts the support"""
    combination: Ints
    """Row of the combination that lifts it most"""
    beyond: Mapping[str, Floats]
    """Factor of each rated case beyond which a combination lifts the support (J); inf where none
    does"""


def uplift_of(effects: Effects, frame: Frame, rated: Mapping[str, int]) -> Uplift:
    """The greatest pull on each support in any combination, but on those that hold a moment.

    pull = -min over the combinations of sum(factor x reaction), each part of a case by the factor
    that makes it least; the reaction is that of the spans on both sides, of the next beam too
    where a line goes on into that

    Parameters
    ----------
    effects
        Reactions of each part of a case alone (P, S, 2), and its factors (C, P).
    frame
        How the spans are held (S), which parts the cases have, and what other beams bring.
    rated
        Row of each rated case.
    """
    parts = frame.parts
    beam, x, lifted_off, reactions = _supports(effects.cases.reactions, frame)
    pressing, lifting = np.maximum(reactions, 0.0), np.maximum(-reactions, 0.0)
    if frame.runways is not None:
        least = _of_wheels(frame.runways.reactions()[1], frame)
        pressing, lifting = pressing + np.maximum(least, 0.0), lifting + np.maximum(-least, 0.0)
    up, down = effects.greater @ lifting, effects.lesser @ pressing
    net = np.where(up - down > ROUNDING * (up + down), up - down, 0.0)
    beyond = {}
    for name, k in rated.items():
        rows = parts.rows(k)
        own = effects.greater[:, rows] @ lifting[rows]
        own -= effects.lesser[:, rows] @ pressing[rows]
        holds = own - (up - down)
        grows = (own > 0.0) & (holds > 0.0)
        with np.errstate(over="ignore"):  # of next to no uplift it takes infinitely much
            factor = np.where(grows, holds / np.where(grows, own, 1.0), np.inf).min(axis=0)
        beyond[name] = np.where(lifted_off, factor, np.inf)
    force = np.where(lifted_off, net.max(axis=0), 0.0)
    return Uplift(beam, x, force, net.argmax(axis=0), beyond)


def _supports(reactions: Floats, frame: Frame) -> tuple[Ints, Floats, Bools, Floats]:
    """Supports and tips of beams (J): of which beam and where each is, whether it may be lifted
    off, and its reaction, from reactions at the ends of spans (P, S, 2) to (P, J)."""
    spans, near = frame.spans, np.arange(frame.beam_of.size) + frame.beam_of
    count = int(near[-1]) + 2
    beam, kind, x = np.empty(count, np.intp), np.empty(count, np.intp), np.empty(count)
    for node, ends, kinds in (
        (near, spans.start, spans.start_kind),
        (near + 1, spans.end, spans.end_kind),
    ):
        beam[node], x[node], kind[node] = frame.beam_of, ends, kinds
    forces = np.zeros((len(reactions), count))
    forces[:, near] += reactions[:, :, 0]
    forces[:, near + 1] += reactions[:, :, 1]
    if frame.beside is not None:
        first = np.searchsorted(beam, np.arange(frame.beside.shape[1]))
        last = np.append(first[1:], count) - 1
        forces[:, first] += frame.beside[:, :, 0]
        forces[:, last] += frame.beside[:, :, 1]
    return beam, x, (kind == PINNED) | (kind == CONTINUOUS), forces


def _of_wheels(least: Floats, frame: Frame) -> Floats:
    """Least reactions of whole supports under trains, by the ends of spans (P, S, 2), by supports
    and tips of beams (P, J)."""
    near = np.arange(frame.beam_of.size) + frame.beam_of
    forces = np.zeros((len(least), int(near[-1]) + 2))
    forces[:, near], forces[:, near + 1] = least[:, :, 0], least[:, :, 1]
    return forces


def uplift_remarks(
    uplift: Uplift, keys: Sequence[str], places: Places
) -> Iterator[tuple[int, Remark]]:
    """What to tell of each support that is lifted, with the row of its beam; keys of all (B)."""
    for node in np.flatnonzero(uplift.force > 0.0).tolist():
        force, row = float(uplift.force[node]), int(uplift.combination[node])
        beam = int(uplift.beam[node])
        text = (
            f"{_support(uplift, node)} is lifted by up to {show(force, 'force')} under"
            f" {places.combination_of(row, beam)}: what holds it down is not checked"
        )
        yield beam, Remark(keys[beam], "demand", text, "doubt")


def growing_uplift_remarks(
    uplift: Uplift, factors: Mapping[str, Floats], keys: Sequence[str]
) -> Iterator[tuple[int, Remark]]:
    """What to tell of each support that a rated case lifts before it reaches its rating factor
    (B), though not as it is."""
    for case, beyond in uplift.beyond.items():
        early = (uplift.force == 0.0) & (beyond < factors[case][uplift.beam])
        for node in np.flatnonzero(early).tolist():
            beam = int(uplift.beam[node])
            text = (
                f"{_support(uplift, node)} is lifted where {case} is more than"
                f" {show_ratio(float(beyond[node]))} x assigned: what holds it down is not"
                " checked"
            )
            yield beam, Remark(keys[beam], "demand", text, "doubt")


def _support(uplift: Uplift, node: int) -> str:
    """A support of a beam, for people."""
    same = uplift.beam == uplift.beam[node]
    if not same[:node].any() or not same[node + 1 :].any():
        return f"its {ENDS[int(same[:node].any())]}"
    return f"its support at x = {show(float(uplift.x[node]), 'length')}"
