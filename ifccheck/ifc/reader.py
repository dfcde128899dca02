"""Reads a model: its beams, what they touch, its storeys."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import fields, replace
from operator import attrgetter

from ifccheck.beam import NO_FLOORS, Beam, Box, Model, Reinforcement, Remark
from ifccheck.errors import ModelError
from ifccheck.ifc.analysis_models import read_model_loads
from ifccheck.ifc.beams import BeamReader, Identity
from ifccheck.ifc.context import BeamFrame, Context, make_context
from ifccheck.ifc.described import sets_described
from ifccheck.ifc.entity import ILL_TYPED
from ifccheck.ifc.floors import FloorReader
from ifccheck.ifc.lexer import EXPORT_AGAIN
from ifccheck.ifc.mapped import fields_held
from ifccheck.ifc.members import MemberReader, members_of
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.plain_bodies import PlainBodies
from ifccheck.ifc.products import Product, read_products
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.reinforcement import read_reinforcement
from ifccheck.ifc.scoping import NO_CHOICE, Choice, candidates, parted
from ifccheck.ifc.slab_bars import SlabBars, read_slab_bars
from ifccheck.ifc.slabs import SlabReader
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.storeys import Storeys
from ifccheck.ifc.strength import GENERAL, OF_MATERIAL

STAGE = "reading"
BEAMS = ("IfcBeam",)

_FIELDS = [field.name for field in fields(Beam)]
_VALUES, _PLACE = attrgetter(*_FIELDS), _FIELDS.index("reinforcement")


def read_model(
    opened: OpenedModel,
    mapping: Mapping[str, str],
    statements: StepTable | None = None,
    choice: Choice = NO_CHOICE,
) -> Model:
    """Return all that a model says of its beams.

    ``mapping`` names the properties that hold reinforcement: field = "Set.Property".
    ``statements`` of the same file let the plainest bars be read many at once. ``choice`` is what
    the brief takes in beside the beams by class, and what it leaves out; slabs are read only where
    it asks for them.
    Raises ModelError where the model has no unit of length to measure its beams by, or breaks
    its schema where that is not the matter of a single beam.
    """
    try:
        return _read(opened, mapping, statements, choice)
    except ILL_TYPED as error:
        raise ModelError(
            f"{opened.file_name}: an instance does not hold what its class asks ({error}); "
            f"{EXPORT_AGAIN}"
        ) from error


MOST_NAMED = 100
"""Beams of one GlobalId that are named"""


def _read(
    opened: OpenedModel,
    mapping: Mapping[str, str],
    statements: StepTable | None,
    choice: Choice,
) -> Model:
    context = make_context(opened.file, opened.schema, statements)
    products = read_products(context, members_of(opened.file))
    beams_by_class = [one for one in products if context.classes.is_any(one.ifc_class, BEAMS)]
    own = candidates(context, products, beams_by_class, choice)
    if own:
        _require_length_unit(context, opened)
    profiles, storeys = Profiles(context.placements), Storeys(context)
    bodies = PlainBodies(context, profiles, products)
    reader = BeamReader(context, profiles, storeys, opened.name, bodies)
    asked = {GENERAL, OF_MATERIAL, *sets_described(mapping)}
    context.properties.find((product.step_id for product in own), asked)
    beams: list[Beam] = []
    own, left_out = parted(context, storeys, own, choice)
    known: dict[int, Box] = {}
    for product, identity in _identified(own):
        found = reader.read(product, identity)
        if found.box is not None:
            known[product.step_id] = found.box
        if isinstance(found.beam, Beam):
            beams.append(found.beam)
        else:
            left_out.append(found.beam)
    members = MemberReader(context, profiles, storeys, bodies).read(products, known)
    reinforced, unread = _reinforced(context, beams, mapping, statements, choice)
    told = (*choice.remarks, *_repeats(own), *reader.remarks, *members.remarks, *unread)
    return Model(
        name=opened.name,
        file_name=opened.file_name,
        schema=opened.schema,
        sha256=opened.sha256,
        beams=reinforced,
        out_of_scope=tuple(left_out),
        members=members.members,
        storeys=storeys.all,
        remarks=(*opened.remarks, *told),
        unmeasured=members.unmeasured,
        slabs=SlabReader(context, profiles).read() if beams and choice.slabs else (),
        floors=FloorReader(context, profiles).read() if beams and choice.floors else NO_FLOORS,
        mapped=fields_held(context, (beam.step_id for beam in beams), mapping),
        loads=read_model_loads(context, beams),
    )


def _require_length_unit(context: Context, opened: OpenedModel) -> None:
    if "length" not in context.units.declared:
        raise ModelError(
            f"{opened.file_name}: declares no unit of length, so no beam can be measured; "
            "assign units to its project"
        )


def _identified(products: Sequence[Product]) -> Iterator[tuple[Product, Identity]]:
    """Each beam with its key: the GlobalId, numbered from its second appearance on."""
    seen: Counter[str] = Counter()
    for product in products:
        guid = product.guid
        ordinal = seen[guid]
        seen[guid] += 1
        key = guid if ordinal == 0 else f"{guid}~{ordinal + 1}"
        yield product, Identity(key, guid, ordinal)


def _repeats(products: Sequence[Product]) -> Iterator[Remark]:
    sharing: dict[str, list[Product]] = {}
    for product in products:
        sharing.setdefault(product.guid, []).append(product)
    for guid, beams in sharing.items():
        if len(beams) > 1:
            named = [f"{beam.name} (#{beam.step_id})".strip() for beam in beams[:MOST_NAMED]]
            rest = len(beams) - len(named)
            more = f" and {rest} more" if rest else ""
            yield Remark(
                None,
                STAGE,
                f"{len(beams)} beams share the GlobalId {guid}: {', '.join(named)}{more}; from the"
                f" second on they are called {guid}~2 and so forth",
                "doubt",
            )


def _reinforced(
    context: Context,
    beams: Sequence[Beam],
    mapping: Mapping[str, str],
    statements: StepTable | None,
    choice: Choice,
) -> tuple[tuple[Beam, ...], tuple[Remark, ...]]:
    """The beams with the reinforcement that the model holds for those whose body is read."""
    frames = {
        beam.step_id: BeamFrame(beam.guid, beam.axis, beam.runs)
        for beam in beams
        if beam.axis is not None
    }
    found = read_reinforcement(context, frames, mapping, statements)
    whole = [_with(beam, _of_key(beam, found.get(beam.step_id, ()))) for beam in beams]
    if not choice.slabs:
        return tuple(whole), ()
    of_slabs, remarks = read_slab_bars(context, frames, statements)
    return tuple(_with_slab_bars(beam, of_slabs.get(beam.step_id)) for beam in whole), remarks


def _of_key(beam: Beam, sources: tuple[Reinforcement, ...]) -> tuple[Reinforcement, ...]:
    return tuple(_by_key(source, beam.key) for source in sources) if beam.ordinal else sources


def _with_slab_bars(beam: Beam, found: SlabBars | None) -> Beam:
    if found is None:
        return beam
    return replace(
        beam, slab_bars=found.bars, slab_bar_doubts=found.doubts, slab_bar_fault=found.fault
    )


def _with(beam: Beam, sources: tuple[Reinforcement, ...]) -> Beam:
    """The same beam with reinforcement; ``replace`` takes twice as long."""
    values = list(_VALUES(beam))
    values[_PLACE] = sources
    return Beam(*values)


def _by_key(source: Reinforcement, key: str) -> Reinforcement:
    """The same reinforcement with its remarks on the beam of a repeated GlobalId."""
    return replace(source, remarks=tuple(r._replace(beam=key) for r in source.remarks))
