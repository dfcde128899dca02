"""What the brief states of single beams and of their materials."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass, replace

from ifccheck.beam import Beam, Given, Reason, Remark, Support
from ifccheck.brief.merging import Matches, Said, merge
from ifccheck.brief.model import BeamEntry, Brief, MaterialEntry, SlabFlange
from ifccheck.units import ShownKind, show

MATERIAL_KINDS: Mapping[str, ShownKind] = {
    "concrete_strength": "stress",
    "bar_yield": "stress",
    "stirrup_yield": "stress",
    "cover": "dimension",
    "density": "density",
    "aggregate_size": "dimension",
}

MOST_BEYOND = 0.1
"""Part of a beam's length that may lie beyond its bearings where the brief states the span."""


@dataclass(frozen=True, slots=True)
class BeamStatement:
    """What the brief states of one beam."""

    span: Given | None = None
    unloaded: bool = False
    """Self weight alone is meant."""
    loads_complete: bool = False
    """What rests on the beam is in the loads given."""
    torsion: bool = False
    """Loads act beside the web, or the beam must twist to stand."""
    slab_flange: SlabFlange | None = None
    """None where the default holds."""
    slab_bars_from: str = ""
    """Where the brief says that bars of slabs in its flange are anchored; empty where it does
    not."""
    remarks: tuple[Remark, ...] = ()


@dataclass(frozen=True, slots=True)
class MaterialStatement:
    """Material values of one beam; None where the brief gives none."""

    concrete_strength: Given | None = None
    bar_yield: Given | None = None
    stirrup_yield: Given | None = None
    cover: Given | None = None
    density: Given | None = None
    """[kg/m3]"""
    aggregate_size: Given | None = None
    remarks: tuple[Remark, ...] = ()


def statements(brief: Brief, matches: Matches) -> dict[str, BeamStatement]:
    """Return what ``[[beams]]`` and eccentric loads state, for each beam that they reach."""
    stated, overruled = merge(brief.beams, matches, _say_of_beam)
    loaded, eccentric = _loaded_by(brief, matches), _loaded_by(brief, matches, eccentric=True)
    return {
        key: _statement(
            key, stated.get(key, {}), overruled.get(key, ()), loaded[key], eccentric[key]
        )
        for key in (*stated, *(key for key in eccentric if key not in stated))
    }


def slab_flange(brief: Brief, statement: BeamStatement) -> tuple[SlabFlange, str]:
    """Return what slab counts as a flange of a beam, and where the brief says so."""
    if statement.slab_flange is not None:
        return statement.slab_flange, "brief, [[beams]]"
    wanted: SlabFlange = "level" if brief.defaults.slab_flanges else "none"
    return wanted, "brief, defaults.slab_flanges"


def span_reason(
    statement: BeamStatement, beam: Beam, supports: tuple[Support, Support]
) -> Reason | None:
    """Say that a stated span leaves a part of the beam beyond its supports; None where not.

    Such a part is an overhang, or another span: neither is in the span that is rated.
    """
    if statement.span is None or beam.axis is None:
        return None
    free = any(support.kind == "free" for support in supports)
    bearings = sum(support.bearing for support in supports) * (1.0 if free else 0.5)
    beyond = beam.length - bearings - statement.span.value
    if beyond <= MOST_BEYOND * beam.length:
        return None
    return Reason(
        f"the stated span of {show(statement.span.value, 'length')} leaves"
        f" {show(beyond, 'length')} of the beam beyond its supports"
    )


def _loaded_by(brief: Brief, matches: Matches, eccentric: bool = False) -> dict[str, list[str]]:
    """Places of the loads, or of the eccentric ones, that reach each beam."""
    places: defaultdict[str, list[str]] = defaultdict(list)
    for entry in brief.loads:
        if entry.eccentricity or not eccentric:
            for key in matches[entry.place]:
                places[key].append(entry.place)
    return places


def _say_of_beam(entry: BeamEntry) -> dict[str, Said]:
    said = {
        name: Said(value, "yes" if value else "no", entry.place)
        for name in ("unloaded", "loads_complete", "torsion")
        if (value := getattr(entry, name)) is not None
    }
    if entry.slab_flange is not None:
        said["slab_flange"] = Said(entry.slab_flange, entry.slab_flange, entry.place)
    if entry.slab_bars is not None:
        said["slab_bars"] = Said(entry.slab_bars, entry.slab_bars, entry.place)
    if entry.span is not None:
        said["span"] = Said(entry.span, show(entry.span, "length"), entry.place)
    return said


def _statement(
    key: str,
    said: Mapping[str, Said],
    overruled: tuple[Remark, ...],
    loaded: list[str],
    eccentric: list[str],
) -> BeamStatement:
    unloaded, torsion = (name in said and said[name].value for name in ("unloaded", "torsion"))
    remarks = list(overruled)
    if unloaded and loaded:
        text = f"stated as unloaded, yet {', '.join(loaded)} loads it: the loads count"
        remarks.append(Remark(key, "brief", text, "doubt"))
    if eccentric and not torsion:
        text = f"{', '.join(eccentric)} acts beside the web"
        remarks.append(Remark(key, "brief", text, "note"))
    return BeamStatement(
        span=Given(said["span"].value, f"brief, {said['span'].place}") if "span" in said else None,
        unloaded=bool(unloaded),
        loads_complete="loads_complete" in said and said["loads_complete"].value,
        torsion=bool(torsion or eccentric),
        slab_flange=said["slab_flange"].value if "slab_flange" in said else None,
        slab_bars_from=f"brief, {said['slab_bars'].place}" if "slab_bars" in said else "",
        remarks=tuple(remarks),
    )


def materials(brief: Brief, matches: Matches) -> dict[str, MaterialStatement]:
    """Return what ``[[materials]]`` states, for each beam that it reaches; it beats the model."""
    stated, overruled = merge(brief.materials, matches, _say_of_material)
    return {
        key: replace(
            _material_statement(
                {name: Given(one.value, f"brief, {one.place}") for name, one in said.items()}
            ),
            remarks=overruled.get(key, ()),
        )
        for key, said in stated.items()
    }


def _say_of_material(entry: MaterialEntry) -> dict[str, Said]:
    return {
        name: Said(value, show(value, kind), entry.place)
        for name, kind in MATERIAL_KINDS.items()
        if (value := getattr(entry, name)) is not None
    }


def default_materials(brief: Brief) -> MaterialStatement:
    """Return the brief's defaults, as assumed values: used only where the model is silent."""
    given = {
        name: Given(value, f"brief, defaults.{name}", assumed=True)
        for name in MATERIAL_KINDS
        if (value := getattr(brief.defaults, name, None)) is not None
    }
    return _material_statement(given)


def _material_statement(given: Mapping[str, Given]) -> MaterialStatement:
    return MaterialStatement(
        concrete_strength=given.get("concrete_strength"),
        bar_yield=given.get("bar_yield"),
        stirrup_yield=given.get("stirrup_yield"),
        cover=given.get("cover"),
        density=given.get("density"),
        aggregate_size=given.get("aggregate_size"),
    )
