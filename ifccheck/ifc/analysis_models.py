"""Reads structural analysis models: what acts on the beams that their members stand for."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from ifccheck.beam import NO_MODEL_LOADS, ActionDoubt, Beam, LaidAction, ModelCase, ModelLoads
from ifccheck.ifc.analysis_hosts import Finder, Hosts
from ifccheck.ifc.analysis_lines import Places
from ifccheck.ifc.applied_loads import Applied, applied_along, applied_at, applied_varying
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError, get, label, several, text
from ifccheck.ifc.laying import Source, lay_piece, lay_spot, size_of, uncovered
from ifccheck.ifc.load_groups import CASE, LoadGroups, Share
from ifccheck.ifc.load_units import load_units
from ifccheck.units import show

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

ACTIONS, GROUPS = "IfcStructuralAction", "IfcStructuralLoadGroup"
SURFACE_ACTIONS = ("IfcStructuralSurfaceAction", "IfcStructuralPlanarAction")
SURFACES = ("IfcStructuralSurfaceMember", "IfcStructuralSurfaceConnection")
ON_SURFACE = "on a surface, not carried to beams"
BY_NAME = "reached only through a group of the same name"
NOTHING = "with no force and no moment"
UNREAD = "on no beam in scope, and not read"
TIE = "tie its member to the beam by IfcRelAssignsToProduct, or write loads_complete = true"
LEAST_LOST = 1e-3
"""Part of a case's load that may reach no beam without a word"""
PERMANENT = {"PERMANENT_G": True, "VARIABLE_Q": False, "EXTRAORDINARY_A": False}


def read_model_loads(context: Context, beams: Sequence[Beam]) -> ModelLoads:
    """Return what acts on beams by the analysis models of a file, case by case."""
    if not context.file.by_type(ACTIONS) and not context.file.by_type(GROUPS):
        return NO_MODEL_LOADS
    return _Reader(context, beams).read()


class _Case:
    """What is gathered of one case."""

    def __init__(self) -> None:
        self.actions = 0
        self.total = self.lost = 0.0
        self.uncarried: Counter[str] = Counter()
        self.notes: Counter[str] = Counter()


class _Reader:
    def __init__(self, context: Context, beams: Sequence[Beam]) -> None:
        self._file = context.file
        self._scale = context.units.length
        self._units = load_units(context.units)
        self._groups = LoadGroups(context.file)
        self._finder = Finder(context.file, Places(context.placements, self._groups), beams)
        self._cases: defaultdict[str, _Case] = defaultdict(_Case)
        self._laid: list[LaidAction] = []
        self._doubts: dict[ActionDoubt, None] = {}

    def read(self) -> ModelLoads:
        """Read every action, then what the cases say of themselves."""
        for action in self._file.by_type(ACTIONS):
            self._action(action)
        groups = defaultdict(list)
        for group in self._file.by_type(GROUPS):
            if text(group, "PredefinedType") == CASE or _name(group) in self._cases:
                groups[_name(group)].append(group)
        names = dict.fromkeys((*groups, *self._cases))
        return ModelLoads(
            cases=tuple(self._case(name, groups.get(name, [])) for name in names),
            laid=tuple(self._laid),
            doubts=tuple(self._doubts),
        )

    def _action(self, action: Entity) -> None:
        shares = self._groups.shares(action)
        sources = [_source(action, share) for share in shares]
        sources = sources or [Source("", _origin(action), 1.0)]
        for share in shares:
            if share.by_name:
                self._cases[_name(share.case)].notes[BY_NAME] += 1
        for source in sources:
            self._cases[source.case].actions += 1
        for item in self._finder.items(action):
            self._on_item(action, item, sources)

    def _on_item(self, action: Entity, item: Entity | None, sources: Sequence[Source]) -> None:
        if _is_any(action, SURFACE_ACTIONS):
            self._unplaced(sources, ON_SURFACE)
            return
        try:
            hosts = self._finder.hosts(action, item)
        except (UnreadableError, *ILL_TYPED) as error:
            self._unhosted(item, sources, str(error))
            return
        if item is not None and _is_any(item, SURFACES) and not hosts.boxes:
            self._unplaced(sources, ON_SURFACE)
            return
        try:
            applied = self._applied(action, item, hosts)
        except (UnreadableError, *ILL_TYPED) as error:
            self._unread(hosts, sources, str(error))
            return
        for source in sources:
            self._lay(applied, hosts, source)

    def _applied(self, action: Entity, item: Entity | None, hosts: Hosts) -> Applied:
        axes = self._finder.frame(action, item)
        if hosts.point is not None:
            return applied_at(action, hosts.point, axes, self._units)
        assert hosts.line is not None  # it lies along a line, or at a point
        if action.is_a() == "IfcStructuralLinearActionVarying":
            points = self._finder.points_of(action, item, _varying_points(action))
            places = [float((p - hosts.line.start) @ hosts.line.along) for p in points]
            return applied_varying(action, hosts.line, places, axes, self._units)
        return applied_along(action, hosts.line, axes, self._scale, self._units)

    def _lay(self, applied: Applied, hosts: Hosts, source: Source) -> None:
        case = self._cases[source.case]
        times = abs(source.factor)
        case.total += times * size_of(applied)
        if applied.acts_not:
            case.notes[NOTHING] += 1
        reached = set()
        for piece in applied.pieces:
            for held in hosts.helds:
                reached |= self._keep(lay_piece(piece, held, source), held.box.beam, source)
            assert hosts.line is not None  # pieces lie along one
            parts = [held.covered(hosts.line) for held in hosts.helds]
            case.lost += times * uncovered(piece, parts)
        for spot in applied.spots:
            on = [self._keep(lay_spot(spot, box, source), box.beam, source) for box in hosts.boxes]
            if not any(on):
                case.lost += times * abs(float(spot.force[2]))
            reached |= set().union(*on)
        for key in reached:
            for doubt in applied.doubts:
                self._doubt(key, source, f"{source.origin}: {doubt}")
        for box in hosts.boxes if source.factor == 0.0 else ():
            self._doubt(box.beam.key, source, f"{source.origin} acts with the factor 0")
        for key, doubt in hosts.doubts.items():
            self._doubt(key, source, f"{source.origin}: {doubt}")
        self._lay_near(hosts, source)

    def _lay_near(self, hosts: Hosts, source: Source) -> None:
        for key, how in hosts.near.items():
            text = f"{source.origin} acts near the beam, {how}, and on no beam: {TIE}"
            self._doubts[ActionDoubt(key, source.case, text, only_near=True)] = None

    def _keep(self, found: Iterator[LaidAction | str], beam: Beam, source: Source) -> set[str]:
        """Keep what was laid on a beam and what was not; the beam's key where either was."""
        keys = set()
        for one in found:
            keys.add(beam.key)
            if isinstance(one, str):
                self._doubt(beam.key, source, one)
            else:
                self._laid.append(one)
        return keys

    def _doubt(self, key: str, source: Source, said: str) -> None:
        self._doubts[ActionDoubt(key, source.case, said)] = None

    def _unplaced(self, sources: Sequence[Source], why: str) -> None:
        for source in sources:
            self._cases[source.case].uncarried[why] += 1

    def _unhosted(self, item: Entity | None, sources: Sequence[Source], why: str) -> None:
        """An action whose place cannot be told: a doubt of the beams that it is tied to."""
        tied = self._finder.tied(item)
        if not tied:
            self._unplaced(sources, f"cannot be placed ({why})")
        for beam in tied:
            for source in sources:
                self._doubt(beam.key, source, f"{source.origin} cannot be read: {why}")

    def _unread(self, hosts: Hosts, sources: Sequence[Source], why: str) -> None:
        """An action whose load cannot be read: a doubt of every beam that it may act on."""
        keys = dict.fromkeys((*(box.beam.key for box in hosts.boxes), *hosts.doubts))
        for source in sources:
            self._lay_near(hosts, source)
            if not keys:
                self._cases[source.case].notes[UNREAD] += 1
            for key in keys:
                self._doubt(key, source, f"{source.origin} cannot be read: {why}")

    def _case(self, name: str, groups: Sequence[Entity]) -> ModelCase:
        found = self._cases[name]
        kinds = {PERMANENT.get(text(group, "ActionType")) for group in groups} - {None}
        lost: tuple[str, ...] = ()
        if found.lost > LEAST_LOST * found.total:
            lost = (
                f"{show(found.lost, 'force')} of {show(found.total, 'force')} act on no beam in"
                " scope, or beyond the ends of the beams",
            )
        return ModelCase(
            name=name,
            actions=found.actions,
            permanent=kinds.pop() if len(kinds) == 1 else None,
            notes=(*dict.fromkeys(_told(groups)), *_counted(found.notes)),
            lost=lost,
            uncarried=tuple(_counted(found.uncarried)),
        )


def _counted(counts: Counter[str]) -> Iterator[str]:
    for what, count in counts.items():
        yield f"{count} {'action' if count == 1 else 'actions'}: {what}"


def _is_any(entity: Entity, names: Sequence[str]) -> bool:
    """Whether an entity is of one of some classes, or of one that begins as they do."""
    return str(entity.is_a()).startswith(tuple(names))


def _name(group: Entity) -> str:
    return text(group, "Name") or str(get(group, "GlobalId"))


def _origin(action: Entity) -> str:
    name = text(action, "Name")
    return f"{action.is_a()} {name!r} (#{action.id()})" if name else label(action)


def _source(action: Entity, share: Share) -> Source:
    return Source(_name(share.case), _origin(action), share.factor)


def _varying_points(action: Entity) -> list[Entity]:
    """Points at which a varying action (IFC2X3) gives its loads."""
    aspect = get(action, "VaryingAppliedLoadLocation")
    if aspect is None:
        raise UnreadableError(f"{label(action)} does not say where its loads vary")
    return [
        item
        for representation in several(aspect, "ShapeRepresentations")
        for item in several(representation, "Items")
    ]


def _told(groups: Sequence[Entity]) -> Iterator[str]:
    """What the load cases of one name say of themselves."""
    if len(groups) > 1:
        yield f"{len(groups)} load cases go by this name: they count together"
    for group in groups:
        coefficient = get(group, "Coefficient")
        if coefficient not in (None, 1.0):
            yield f"its coefficient {coefficient:g} is in the loads"
        weights = get(group, "SelfWeightCoefficients")
        if weights and any(weights):
            factors = ", ".join(f"{weight:g}" for weight in weights)
            yield (
                f"its self weight (coefficients {factors}) is not taken: self weight is counted"
                " once, from the outlines, as the case self"
            )
