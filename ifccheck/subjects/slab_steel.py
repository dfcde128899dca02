"""The bars of slabs in the flange of a beam: listed, and counted where they are anchored."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import NamedTuple

from ifccheck.beam import Bars, Beam, Given, RatedBody, Remark
from ifccheck.brief.statements import BeamStatement, MaterialStatement
from ifccheck.frame.slab_bars import bars_in_flanges
from ifccheck.subjects.findings import NO_MATERIAL, Findings, Sources
from ifccheck.subjects.steel import Steel

STAGE = "flanges"
ANCHORED = 'slab_bars = "anchored"'
NO_FLANGE = "counts for nothing: no slab counts as a flange of it"
NO_BARS = "counts for nothing: no bar of a slab was found along it within the flange that counts"
NO_YIELD = "bars of slabs are not counted: neither the model nor the brief gives their yield"
HOW = (
    "bars of slabs count where the top is in tension, each from as far within its ends as it lies"
    " away from the web; in longitudinal tension only those within the slab's thickness of the web;"
    " never in shear, nor where the soffit is in tension; that the slab's bars across the beam can"
    " carry their force to the web is not checked"
)
TWICE = "bars of slabs are counted beside those from {source}: these must not hold them as well"


class SlabSteel(NamedTuple):
    """The bars of slabs within the flange of one beam."""

    listed: tuple[Bars, ...] = ()
    yields: tuple[Given, ...] = ()
    """Of each that counts"""
    source: str = ""
    """Where the brief says that they are anchored; empty where they do not count"""

    @property
    def counted(self) -> tuple[Bars, ...]:
        """Those that count"""
        return self.listed if self.source else ()


def slab_steel_of(
    beam: Beam,
    body: RatedBody | None,
    steel: Steel,
    statement: BeamStatement,
    sources: Sources,
    findings: Findings,
) -> SlabSteel:
    """The bars of slabs within a beam's flange, which count where the brief says so."""
    listed = bars_in_flanges(beam, body) if body else ()
    source = statement.slab_bars_from
    texts = list(beam.slab_bar_doubts if listed else ())
    yields: tuple[Given, ...] = ()
    if source and not listed:
        why = NO_BARS if body and body.flanges else NO_FLANGE
        texts.append(f"{ANCHORED} ({source}) {why}")
    elif source:
        given = tuple(_yields(listed, sources.materials.get(beam.key, NO_MATERIAL), sources))
        fault = _fault(beam, listed, given)
        yields = () if fault else given
        texts += [fault] if fault else _doubled(steel)
    if yields:
        findings.remarks.append(Remark(beam.key, STAGE, HOW, "assumption"))
    findings.remarks += [Remark(beam.key, STAGE, text, "doubt") for text in texts]
    for one in dict.fromkeys(one for one in yields if one.assumed):
        findings.assume("yield strength of the bars of slabs", one)
    return SlabSteel(listed, yields, source if yields else "")


def _fault(beam: Beam, listed: tuple[Bars, ...], yields: tuple[Given, ...]) -> str:
    """Why bars that are anchored do not count."""
    if beam.slab_bar_fault:
        return f"bars of slabs are not counted: {beam.slab_bar_fault}"
    known = len(yields) == len(listed) and not any(math.isnan(one.value) for one in yields)
    return "" if known else NO_YIELD


def _doubled(steel: Steel) -> Iterator[str]:
    if steel.source != "bars":
        yield TWICE.format(source=steel.source)


def _yields(
    listed: tuple[Bars, ...], stated: MaterialStatement, sources: Sources
) -> Iterator[Given]:
    """Yield of each that is known: what the model gives, or the default where it gives none; never
    more than what the brief states of the beam's own bars."""
    for bars in listed:
        own = bars.yield_strength or sources.defaults.bar_yield
        if own is not None:
            yield min(own, stated.bar_yield or own, key=_least)


def _least(given: Given) -> float:
    """What cannot be read goes first."""
    return -math.inf if math.isnan(given.value) else given.value
