"""One beam of a model: what it is, its axis and outline, its concrete."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass, field, replace

from ifccheck.beam import Beam, Box, Opening, OutOfScope, Reason, Remark, Run
from ifccheck.ifc.concretes import Concretes
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, UnreadableError, text
from ifccheck.ifc.hollows import not_among
from ifccheck.ifc.materials import MaterialDefinition, Materials
from ifccheck.ifc.plain_bodies import PlainBodies
from ifccheck.ifc.precast import told_precast
from ifccheck.ifc.products import Product
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.properties import Sets
from ifccheck.ifc.scope import Clues, Scope, judge
from ifccheck.ifc.shapes import Shapes
from ifccheck.ifc.storeys import Storeys
from ifccheck.ifc.straight import Straight
from ifccheck.ifc.strength import GENERAL
from ifccheck.ifc.tendons import Tendons
from ifccheck.ifc.vocabulary import speaks_of_lightweight, speaks_of_prestress
from ifccheck.ifc.voids import VoidReader

GEOMETRY, MATERIALS = "geometry", "materials"
REINFORCING = ("IfcReinforcingBar", "IfcReinforcingMesh")
BAR = b"=IFCREINFORCINGBAR("
"""How a bar is most often written behind its number."""
HOLLOW_CORE = "HOLLOWCORE"
SPEAKS_OF_MATERIAL = re.compile(r"materi[ae]l|werkstoff|matériau|betong?güte", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Identity:
    """How a beam is known."""

    key: str
    guid: str
    ordinal: int


@dataclass
class Found:
    """A beam as it was read: kept or left out, and the box round it where its body was read."""

    beam: Beam | OutOfScope
    box: Box | None


@dataclass
class _Doubts:
    """What is doubtful of one beam."""

    beam: str
    reasons: list[Reason] = field(default_factory=list)
    remarks: list[Remark] = field(default_factory=list)

    def reason(self, text: str, blocking: bool = True) -> None:
        self.reasons.append(Reason(text, blocking))

    def remark(self, stage: str, text: str) -> None:
        self.remarks.append(Remark(self.beam, stage, text, "doubt"))


class BeamReader:
    """Reads the beams of one model."""

    def __init__(
        self,
        context: Context,
        profiles: Profiles,
        storeys: Storeys,
        model: str,
        bodies: PlainBodies,
    ) -> None:
        self._context = context
        self._shapes = Shapes(context, profiles)
        self._bodies = bodies
        self._storeys = storeys
        self._model = model
        self._tendons = Tendons(context, profiles)
        self._voids = VoidReader(context, profiles)
        self._materials = Materials(context)
        self._concretes = Concretes(context)
        self._types: dict[int, tuple[str, str]] = {}

    @property
    def remarks(self) -> tuple[Remark, ...]:
        """What is doubtful of the model, and not of a single beam."""
        return self._tendons.remarks

    def read(self, product: Product, identity: Identity) -> Found:
        """Return what the model says of a beam."""
        step_id = product.step_id
        doubts = _Doubts(identity.key)
        straight = self._plain(step_id)
        definition = self._materials.of(step_id)
        sets = self._context.properties.of(step_id)
        clues, scope = self._scope(product, straight, definition, sets)
        if straight is None and scope.left_out is None:
            straight = self._sliced(step_id, doubts)
            clues, scope = self._scope(product, straight, definition, sets)
        if straight is not None:
            _note_shape(straight, doubts)
        box = straight.box if straight is not None else None
        if scope.left_out is not None:
            return Found(self._left_out(product, identity, *scope.left_out), box)
        if scope.doubt is not None:
            doubts.reason(scope.doubt)
        self._doubt_kind(product, clues, box, doubts)
        beam = self._beam(product, identity, straight, clues, sets, doubts)
        return Found(beam, box)

    def _plain(self, step_id: int) -> Straight | None:
        """The body where it is a plain extrusion; None where it is not, or is none."""
        try:
            if step_id in self._bodies:
                return self._bodies.straight(step_id)
            return self._shapes.plain(self._context.file.by_id(step_id))
        except (UnreadableError, *ILL_TYPED):
            return None  # slicing it tells why, where it cannot be read

    def _sliced(self, step_id: int, doubts: _Doubts) -> Straight | None:
        try:
            return self._shapes.sliced(self._context.file.by_id(step_id))
        except UnreadableError as error:
            doubts.reason(str(error))
        except ILL_TYPED as error:
            doubts.reason(f"body cannot be read: it does not hold what its classes ask ({error})")
        return None

    def _scope(
        self,
        product: Product,
        straight: Straight | None,
        definition: MaterialDefinition,
        sets: Sets,
    ) -> tuple[Clues, Scope]:
        clues = self._clues(product, straight, definition, sets)
        scope = judge(clues)
        if scope.unknown:
            clues = replace(clues, properties=_told_by_properties(sets))
            scope = judge(clues)
        return clues, scope

    def _clues(
        self,
        product: Product,
        straight: Straight | None,
        definition: MaterialDefinition,
        sets: Sets,
    ) -> Clues:
        step_id = product.step_id
        profile = straight.outline.name if straight is not None else ""
        own = (product.name, product.object_type, self._type_name(step_id), profile)
        strength_class = sets.get(GENERAL, {}).get("StrengthClass")
        return Clues(
            definition=definition,
            names=tuple(dict.fromkeys(one for one in own if one)),
            hosts_bars=self._hosts_bars(step_id),
            concrete_class=strength_class is not None and bool(strength_class.value),
        )

    def _type_name(self, step_id: int) -> str:
        return self._type(step_id)[0]

    def _type(self, step_id: int) -> tuple[str, str]:
        """Name and predefined type of a beam's type; empty where it has none."""
        type_id = self._context.relations.type_of(step_id)
        if type_id is None:
            return "", ""
        if type_id not in self._types:
            entity = self._context.file.by_id(type_id)
            self._types[type_id] = text(entity, "Name"), text(entity, "PredefinedType")
        return self._types[type_id]

    def _hosts_bars(self, step_id: int) -> bool:
        statements = self._context.statements
        by_id, is_any = self._context.file.by_id, self._context.classes.is_any
        for part in self._context.relations.descendants(step_id):
            if statements is not None and statements.begins(part, BAR):
                return True
            if is_any(by_id(part).is_a(), REINFORCING):
                return True
        return False

    def _left_out(
        self, product: Product, identity: Identity, reason: str, evidence: str
    ) -> OutOfScope:
        return OutOfScope(
            guid=identity.guid,
            step_id=product.step_id,
            name=product.name or product.tag,
            storey=self._storeys.name_of(product.step_id),
            reason=reason,
            evidence=evidence,
        )

    def _doubt_kind(self, product: Product, clues: Clues, box: Box | None, doubts: _Doubts) -> None:
        """Reasons that lie in what the beam is: prestressed, with projections."""
        step_id = product.step_id
        relations = self._context.relations
        if self._tendons.in_beam(step_id, box):
            doubts.reason("prestressed: the model holds tendons in it")
        elif HOLLOW_CORE in (product.own.strip("."), self._type(step_id)[1]):
            doubts.reason("prestressed: a hollow-core unit")
        elif named := _first(speaks_of_prestress, clues):
            doubts.reason(f'prestressed: named so in "{named}"')
        if features := relations.projections.get(step_id):
            doubts.reason(f"{_count(len(features), 'projecting feature')} not read yet")

    def _beam(
        self,
        product: Product,
        identity: Identity,
        straight: Straight | None,
        clues: Clues,
        sets: Sets,
        doubts: _Doubts,
    ) -> Beam:
        step_id = product.step_id
        concrete = self._concretes.of(clues.definition, sets, clues.properties)
        for told in concrete.doubts:
            doubts.remark(MATERIALS, told)
        if concrete.least_density is None:
            _doubt_density(clues, doubts)
        return Beam(
            key=identity.key,
            guid=identity.guid,
            ordinal=identity.ordinal,
            step_id=step_id,
            model=self._model,
            ifc_class=product.ifc_class,
            name=product.name,
            tag=product.tag,
            type_name=self._type_name(step_id) or product.object_type,
            storey=self._storeys.name_of(step_id),
            axis=straight.axis if straight is not None else None,
            runs=_runs(straight),
            material=clues.definition.title,
            concrete_strength=concrete.strength,
            strength_reason=concrete.strength_reason,
            concrete_density=concrete.least_density,
            greatest_density=concrete.greatest_density,
            cover=concrete.cover,
            openings=self._openings(step_id, straight, doubts),
            precast=told_precast(self._context, step_id, clues, sets),
            reasons=tuple(doubts.reasons),
            remarks=tuple(doubts.remarks),
        )

    def _openings(
        self, step_id: int, straight: Straight | None, doubts: _Doubts
    ) -> tuple[Opening, ...]:
        """What openings take off a beam; one whose extent cannot be told is a reason."""
        if straight is None:
            return ()
        found = self._voids.of(step_id, straight.axis, _runs(straight))
        for why in found.unread:
            doubts.reason(f"opening cannot be read: {why}")
        for origin in found.missed:
            doubts.remark(GEOMETRY, f"opening {origin} does not meet the beam: nothing taken off")
        return (*found.openings, *not_among(straight.openings, found.openings))


def _told_by_properties(sets: Sets) -> tuple[tuple[str, str], ...]:
    """Texts of properties that are called a material, with where they stand.

    Looked up only where nothing else tells: reading every set of every beam takes long.
    """
    return tuple(
        (f"{name}.{key}", value.value)
        for name, values in sets.items()
        for key, value in values.items()
        if isinstance(value.value, str) and SPEAKS_OF_MATERIAL.search(key)
    )


def _note_shape(straight: Straight, doubts: _Doubts) -> None:
    doubts.reasons += straight.reasons
    for told in straight.remarks:
        doubts.remark(GEOMETRY, told)
    for end, length, steep in zip(("start", "end"), straight.oblique, straight.steep, strict=True):
        _note_oblique(end, length, steep, doubts)


def _note_oblique(end: str, length: float, steep: bool, doubts: _Doubts) -> None:
    if length > 1.0:
        text = (
            f"the {end} is cut obliquely over {length:.0f} mm of the axis: "
            "the length is measured on the line through the outline's centroid"
        )
        doubts.remark(GEOMETRY, text)
    if steep:
        doubts.reason(f"depth is reduced by the oblique cut at the {end}", blocking=False)


def _runs(straight: Straight | None) -> tuple[Run, ...]:
    if straight is None:
        return ()
    return straight.runs or (Run(0.0, straight.axis.length, straight.outline),)


def _doubt_density(clues: Clues, doubts: _Doubts) -> None:
    if named := _first(speaks_of_lightweight, clues):
        doubts.reason(f'lightweight concrete of unstated density: "{named}"', blocking=False)


def _first(speaks: Callable[[str], bool], clues: Clues) -> str:
    """The first of the names of materials, then of the beam's own, that speaks of something."""
    return next(filter(speaks, (*clues.definition.names, *clues.names)), "")


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}{'s' if number > 1 else ''}"
