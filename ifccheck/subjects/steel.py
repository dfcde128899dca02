"""The reinforcement of a beam, by the first source that speaks of it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

from ifccheck.beam import Bars, Beam, Face, Given, Reinforcement, Remark, Stirrups
from ifccheck.brief.statements import MaterialStatement
from ifccheck.detailing import Layout, choose_source, lay_out
from ifccheck.frame.bar_ends import ended_in_concrete
from ifccheck.subjects.elsewhere import (
    Stated,
    differing_yields,
    greatest_cover,
    least_yield,
    stated_elsewhere,
)
from ifccheck.subjects.findings import NO_MATERIAL, Findings, Sources

_LAYOUT_AGGREGATE = 20.0


class Steel(NamedTuple):
    """The reinforcement that a beam is rated with."""

    bars: tuple[Bars, ...]
    stirrups: tuple[Stirrups, ...]
    stirrups_known: bool
    source: str
    bar_yield: tuple[Given, ...]
    stirrup_yield: tuple[Given, ...]
    silent: tuple[Face, ...]


def steel_of(beam: Beam, sources: Sources, findings: Findings) -> Steel | None:
    """Return the reinforcement of a beam; None where no source speaks of it."""
    stated = sources.materials.get(beam.key, NO_MATERIAL)
    chosen = choose_source(beam, sources.brief.sources)
    findings.remarks += chosen.remarks
    findings.reasons += chosen.reasons
    if chosen.reinforcement is None:
        return None
    taken, defaults = chosen.reinforcement, sources.defaults
    placed = _ended(beam, _placed(beam, taken, sources, stated, findings), sources, findings)
    bar_yield = _fallback(beam, taken, "bar_yield", stated.bar_yield, defaults.bar_yield, findings)
    stirrup_yield = _fallback(
        beam, taken, "stirrup_yield", stated.stirrup_yield, defaults.stirrup_yield, findings
    )
    return Steel(
        bars=placed.bars,
        stirrups=placed.stirrups,
        stirrups_known=placed.stirrups_known,
        source=taken.source,
        bar_yield=_yields(placed.bars, stated.bar_yield, bar_yield, "bars", findings),
        stirrup_yield=_yields(
            placed.stirrups, stated.stirrup_yield, stirrup_yield, "stirrups", findings
        ),
        silent=placed.silent,
    )


def _fallback(
    beam: Beam,
    taken: Reinforcement,
    what: Stated,
    stated: Given | None,
    default: Given | None,
    findings: Findings,
) -> Given | None:
    """Yield strength of the steel of which the source that is taken states none; tells where other
    sources state another one, unless the brief states it for the beam."""
    if stated is None and len(beam.reinforcement) > 1:
        for text in differing_yields(beam, taken, what):
            findings.remarks.append(Remark(beam.key, "reinforcement", text, "doubt"))
        return least_yield(default, stated_elsewhere(beam, taken, what))
    return default


def _placed(
    beam: Beam,
    reinforcement: Reinforcement,
    sources: Sources,
    stated: MaterialStatement,
    findings: Findings,
) -> Layout:
    """Bars and stirrups by place: as modelled, or laid out from a description."""
    if not reinforcement.zones:
        if reinforcement.bars and not reinforcement.stirrups:
            text = "no stirrups are modelled: none are counted on"
            findings.remarks.append(Remark(beam.key, "reinforcement", text, "doubt"))
        return Layout(reinforcement.bars, reinforcement.stirrups)
    size = _aggregate_for_layout(stated, sources, findings)
    laid = lay_out(
        beam,
        reinforcement.zones,
        clear_spacing=lambda diameter: sources.standard.clear_spacing(diameter, size),
        stated_cover=stated.cover,
        fallback_cover=greatest_cover(
            beam.cover or sources.defaults.cover, stated_elsewhere(beam, reinforcement, "cover")
        ),
    )
    findings.remarks += laid.remarks
    findings.reasons += laid.reasons
    return laid


def _ended(beam: Beam, placed: Layout, sources: Sources, findings: Findings) -> Layout:
    """The same with its bars as far as they lie in concrete of the model."""
    contacts = sources.contacts.get(beam.key, ())
    ended = ended_in_concrete(beam, placed.bars, contacts, sources.around, sources.unmeasured)
    findings.reasons += ended.reasons
    findings.remarks += ended.remarks
    return placed._replace(bars=ended.bars)


def _aggregate_for_layout(stated: MaterialStatement, sources: Sources, findings: Findings) -> float:
    size = stated.aggregate_size or sources.defaults.aggregate_size
    if size is not None:
        return size.value
    text = f"bars laid out for aggregate of {_LAYOUT_AGGREGATE:g} mm: the brief gives no size"
    findings.remarks.append(Remark(findings.key, "reinforcement", text, "assumption"))
    return _LAYOUT_AGGREGATE


def _yields(
    steel: Sequence[Bars | Stirrups],
    stated: Given | None,
    default: Given | None,
    what: str,
    findings: Findings,
) -> tuple[Given, ...]:
    """Yield strength of each set: the brief's statement, the model's, the brief's default."""
    given = [each for bar in steel if (each := stated or bar.yield_strength or default)]
    if len(given) < len(steel):
        findings.refuse(yield_unknown(what))
        return ()
    for unread in dict.fromkeys(each.source for each in given if math.isnan(each.value)):
        findings.refuse(yield_unread(what, unread))
        return ()
    for assumed in dict.fromkeys([each for each in given if each.assumed]):
        findings.assume(f"yield strength of the {what}", assumed)
    return tuple(given)


def yield_unread(what: str, source: str) -> str:
    """Return the reason for which bars, or stirrups, of a grade that nobody can read are not
    rated: a default is for models that are silent."""
    return (
        f"yield strength of the {what} cannot be read from {source}: state it in an entry of"
        " [[materials]]"
    )


def yield_unknown(what: str) -> str:
    """Return the reason for which bars, or stirrups, without a known yield are not rated."""
    return f"yield strength of the {what} unknown: neither model nor brief gives one"
