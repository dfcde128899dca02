"""Reinforcement given by sections: IfcReinforcementDefinitionProperties of beams and types."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field

from ifccheck.beam import BarRow, DescribedZone, Reason, Reinforcement, Remark, RemarkKind
from ifccheck.ifc.bar_findings import STAGE
from ifccheck.ifc.context import BeamFrame, Context
from ifccheck.ifc.entity import UnreadableError, label
from ifccheck.ifc.section_places import SAME_PLACE, Extent, Lying, extents, levels, lie, offset_of
from ifccheck.ifc.section_rows import Row, RowReader, Stated
from ifccheck.notation import show_bars
from ifccheck.units import show

SECTIONS = "IfcReinforcementDefinitionProperties"


def read_sections(context: Context, hosts: Mapping[int, BeamFrame]) -> dict[int, Reinforcement]:
    """Read the reinforcement that section definitions give beams, by STEP id of the beam.

    The definitions of a beam itself go before those of its type.
    """
    defined = {entity.id() for entity in context.file.by_type(SECTIONS)}
    if not defined:
        return {}
    reader = RowReader(context)
    found: dict[int, Reinforcement] = {}
    for beam, frame in hosts.items():
        own, of_type = _definitions(context, beam, defined)
        if not own and not of_type:
            found.update(_of_whole(context, beam, defined))
        else:
            found[beam] = _read(context, beam, frame, reader.of(own or of_type), own and of_type)
    return found


def _definitions(context: Context, beam: int, defined: set[int]) -> tuple[list[int], list[int]]:
    """Definitions that a beam has itself, and those of its type."""
    sets = context.relations.sets
    type_id = context.relations.type_of(beam)
    own = [one for one in sets.get(beam, ()) if one in defined]
    of_type = [] if type_id is None else [one for one in sets.get(type_id, ()) if one in defined]
    return own, [one for one in of_type if one not in own]


def _of_whole(context: Context, beam: int, defined: set[int]) -> dict[int, Reinforcement]:
    """Definitions of what a beam is a part of count along an axis that is not the beam's."""
    for whole in context.relations.ancestors(beam):
        if not defined.isdisjoint(context.relations.property_sets(whole)):
            name = label(context.file.by_id(whole))
            text = f"sections of reinforcement are given for {name}, which it is a part of"
            return {beam: Reinforcement(source="sections", reasons=(Reason(text),))}
    return {}


@dataclass(slots=True)
class _Findings:
    """What is to be said of the sections of one beam."""

    key: str
    reasons: list[Reason] = field(default_factory=list)
    remarks: list[Remark] = field(default_factory=list)

    def remark(self, text: str, kind: RemarkKind = "doubt") -> None:
        """Say something once."""
        remark = Remark(self.key, STAGE, text, kind)
        if remark not in self.remarks:
            self.remarks.append(remark)


def _read(
    context: Context, beam: int, frame: BeamFrame, stated: Stated, passed_over: Sequence[int]
) -> Reinforcement:
    findings = _Findings(frame.guid, reasons=list(stated.reasons))
    if passed_over:
        findings.remark("its type defines sections of reinforcement too: its own are counted")
    rows = list(_without_repeats(stated.rows, findings))
    zones: tuple[DescribedZone, ...] = ()
    try:
        if rows:
            offset = offset_of(context.placements.matrix(context.file.by_id(beam)), frame)
            reach = extents(rows, offset, frame.axis.length)
            zones = tuple(_zones(rows, reach, frame, findings))
    except UnreadableError as error:
        findings.reasons.append(Reason(str(error)))
    return Reinforcement(
        source="sections",
        zones=zones,
        reasons=tuple(dict.fromkeys(findings.reasons)),
        remarks=tuple(findings.remarks),
    )


def _without_repeats(rows: Sequence[Row], findings: _Findings) -> Iterator[Row]:
    """Rows without those that say the very same of the same place as another."""
    seen: dict[tuple[object, ...], Row] = {}
    for row in rows:
        key = (row.start, row.end, row.depth, row.said, row.bars)
        first = seen.setdefault(key, row)
        if first is row:
            yield row
        else:
            findings.remark(f"{row.name} repeats {first.name}: counted once")


def _zones(
    rows: Sequence[Row], reach: Sequence[Extent], frame: BeamFrame, findings: _Findings
) -> Iterator[DescribedZone]:
    """Zones of a beam, one for all rows that reach from the same place to the same place."""
    beside = [levels(row, extent, frame) for row, extent in zip(rows, reach, strict=True)]
    lying = lie(rows, beside)
    together: dict[Extent, list[BarRow]] = {}
    known: list[_Placed] = []
    for placed in zip(rows, reach, lying, strict=True):
        if any(_repeats(placed, other, findings) for other in known):
            continue
        findings.reasons += [reason for other in known for reason in _laps(placed, other)]
        known.append(placed)
        row, extent, at = placed
        together.setdefault(extent, []).append(_bar_row(row, at))
        _tell(row, at, findings)
    for extent, held in together.items():
        origins = ", ".join(dict.fromkeys(row.origin for row in held))
        yield DescribedZone(*extent, rows=tuple(held), origin=origins)


_Placed = tuple[Row, Extent, Lying]


def _repeats(placed: _Placed, other: _Placed, findings: _Findings) -> bool:
    """Whether a row gives bars of one size where another row gives them, too: the same bars twice,
    or two statements of them of which nobody can tell which holds."""
    (row, extent, at), (known, reach, lying) = placed, other
    near = [*zip(extent, reach, strict=True), (at.z, lying.z), (row.transverse, known.transverse)]
    group, first = row.bars.group, known.bars.group
    if any(abs(a - b) > SAME_PLACE for a, b in near) or group.designation != first.designation:
        return False
    if (group.count, row.bars.yield_strength) == (first.count, known.bars.yield_strength):
        findings.remark(f"{row.name} repeats {known.name}: counted once")
    else:
        findings.reasons.append(
            Reason(
                f"{row.name} and {known.name} give {group.designation} bars at one height from and"
                " to the same places, and differ in number or grade: give all of them in one row"
            )
        )
    return True


def _laps(placed: _Placed, other: _Placed) -> Iterator[Reason]:
    """Bars that reach into others of their size at their height: laid out they would go on in them,
    however short the lap is."""
    (row, extent, at), (known, reach, lying) = placed, other
    start, end = max(extent.start, reach.start), min(extent.end, reach.end)
    differ = [a - b for a, b in zip(extent, reach, strict=True)]
    staggered = min(differ) > SAME_PLACE or max(differ) < -SAME_PLACE
    alike = row.bars.group.designation == known.bars.group.designation
    if alike and abs(at.z - lying.z) <= SAME_PLACE and staggered and end - start > SAME_PLACE:
        yield Reason(
            f"{row.name} reach into {known.name}, of the same size at the same height, from"
            f" {show(start, 'length')} to {show(end, 'length')}: whether they lap there or go on"
            " is not told"
        )


def _bar_row(row: Row, at: Lying) -> BarRow:
    return BarRow(at.face, row.bars.group, at.z, row.bars.yield_strength, row.name)


def _tell(row: Row, at: Lying, findings: _Findings) -> None:
    for doubt in row.bars.doubts:
        findings.remark(f"{row.name}: {doubt}")
    if at.assumed:
        findings.remark(
            f"{row.name}: its effective depth of {row.depth:.0f} mm is taken from the top:"
            f" {show_bars((row.bars.group,))} at the {at.face}",
            "assumption",
        )
    if row.transverse:
        findings.remark(
            f"{row.name}: its transverse position of {row.transverse:.0f} mm is not used: its"
            " bars are spread over the width",
            "note",
        )
