"""What slabs bring to the beams under them: entries of ``[[floors]]`` as loads on beams."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import NamedTuple

from ifccheck.beam import Beam, Face, FloorSlab, Load, Model, Reason, Remark, RemarkKind, Ring
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief, FloorEntry
from ifccheck.frame.floor_carriers import Bearer, FloorCarriers, Under
from ifccheck.frame.floor_figures import covered, distance_from, floor_figure
from ifccheck.frame.panels import Carrier
from ifccheck.frame.spans import Standing
from ifccheck.frame.tributary import Share, Span, UnsharedError, shares
from ifccheck.frame.widths import Width, widths_along, within
from ifccheck.units import show

STAGE = "floors"
TOLD = 1e-3
"""Part of a slab that counts on two beams above which a note tells of it"""
NAMED = 5
"""Slabs or walls that a remark names"""
GRAVITY = 9.80665e-9
"""N/mm3 per kg/m3"""
PASSED_OVER = (
    "not counted on to carry slab, as nothing says that they do (of walls LoadBearing in the model"
    " does, or walls = true)"
)
FACES = "slab stops at the faces of beams, so that nothing is laid on their own width"
BESIDE = 1.0
"""An axis that is farther from a slab lies beside it [mm]"""
GIVE = "give what it brings to this beam under [[loads]] and write loads_complete = true"


@dataclass(frozen=True, slots=True)
class FloorLoads:
    """What slabs bring to the beams of a model."""

    loads: tuple[Load, ...] = ()
    remarks: tuple[Remark, ...] = ()
    reasons: Mapping[str, Sequence[Reason]] = field(default_factory=dict)
    """Why not all that slabs bring to a beam is known, by its key"""
    weighed: frozenset[int] = frozenset()
    """STEP ids of slabs whose self weight is laid on beams"""
    carried: frozenset[str] = frozenset()
    """Places of entries that lay something on some beam"""


NO_FLOOR_LOADS = FloorLoads()


class _Part(NamedTuple):
    """What one slab brings to one bearer: widths of floor along it."""

    bearer: Bearer
    area: float
    widths: tuple[Width, ...]
    beside: bool
    """The slab stops at the face of the beam"""


class _Figure(NamedTuple):
    """A plan of a slab under one load per area, and what of it is for people."""

    rings: tuple[Ring, ...]
    intensity: float
    """[N/mm2]"""
    text: str


@dataclass(slots=True)
class _Told:
    """What becomes of the loads of one entry [N]."""

    slabs: int = 0
    on_beams: float = 0.0
    elsewhere: dict[str, float] = field(default_factory=lambda: defaultdict(float))
    nowhere: dict[str, tuple[float, float]] = field(default_factory=dict)
    """Area and load of slabs that nothing carries"""
    partitions: dict[str, None] = field(default_factory=dict)
    beside: dict[str, None] = field(default_factory=dict)
    """Beams at whose faces slab stops"""
    notes: dict[str, None] = field(default_factory=dict)


def floor_loads(
    model: Model,
    brief: Brief,
    matches: Matches,
    standing: Mapping[str, Standing],
    unit_weight: float,
) -> FloorLoads:
    """Lay what slabs carry and weigh on the beams under them.

    Parameters
    ----------
    model, brief, matches
        What is read, and the slabs that each entry reaches.
    standing
        How beams stand, by key.
    unit_weight
        Of concrete by the brief [N/mm3].
    """
    if not brief.floors:
        return NO_FLOOR_LOADS
    laying = _Laying(model, standing, unit_weight)
    slabs = {slab.key: slab for slab in model.floors.slabs}
    remarks: list[Remark] = []
    for entry in brief.floors:
        told = _Told()
        for key in matches[entry.place]:
            laying.lay(entry, slabs[key], told)
        remarks += [Remark(None, STAGE, f"{entry.place}: {text}", kind)
                    for text, kind in _words(told)]  # fmt: skip
    return FloorLoads(
        tuple(laying.loads), tuple(remarks), laying.reasons, frozenset(laying.weighed),
        frozenset(laying.carried),
    )  # fmt: skip


class _Laying:
    """Loads on beams as they are laid, slab by slab."""

    def __init__(self, model: Model, standing: Mapping[str, Standing], unit_weight: float) -> None:
        self._beams = {beam.key: beam for beam in model.beams}
        self._carriers = FloorCarriers(model)
        self._standing, self._unit_weight = standing, unit_weight
        self._parts: dict[tuple[object, ...], tuple[_Part, ...]] = {}
        self.loads: list[Load] = []
        self.reasons: dict[str, list[Reason]] = defaultdict(list)
        self.weighed: set[int] = set()
        self.carried: set[str] = set()

    def lay(self, entry: FloorEntry, slab: FloorSlab, told: _Told) -> None:
        """Lay one slab on what carries it."""
        told.slabs += 1
        if slab.unread:
            self._doubt(self._carriers.beams_near(slab.step_id), slab, slab.unread)
            told.notes[f"{slab.told} is not laid on beams: {slab.unread}"] = None
            return
        under = self._carriers.under(slab, entry.walls)
        told.partitions |= dict.fromkeys(under.passed_over)
        told.notes |= dict.fromkeys(f"{slab.told}: {note}" for note in slab.notes)
        for number, figure in enumerate(self._figures(entry, slab)):
            self._lay_figure(entry, slab, number, figure, under, told)
        for key, why in under.doubtful:
            self._doubt([key], slab, why)
        if entry.self_weight and slab.unlike:
            keys = [one.beam for one in under.bearers if one.beam]
            self._doubt(keys, slab, f"its weight is not known: {slab.unlike}")

    def _doubt(self, keys: Sequence[str], slab: FloorSlab, why: str) -> None:
        text = f"floor not included: {slab.told}: {why}; {GIVE}"
        for key in dict.fromkeys(keys):
            self.reasons[key].append(Reason(text, blocking=False))

    def _figures(self, entry: FloorEntry, slab: FloorSlab) -> Iterator[_Figure]:
        """The plans of a slab that a load acts on: its plates by weight, all together by area."""
        if entry.self_weight:
            for plate in slab.plates:
                weight = self._weight(slab) * (plate.top - plate.bottom)
                thick = show(plate.top - plate.bottom, "dimension")
                yield _Figure(plate.rings, weight, f"self weight of {thick}")
        if entry.area > 0.0:
            for rings in _outlines(slab):
                yield _Figure(rings, entry.area, entry.area_text)

    def _weight(self, slab: FloorSlab) -> float:
        return max(self._unit_weight, (slab.density or 0.0) * GRAVITY)

    def _lay_figure(
        self, entry: FloorEntry, slab: FloorSlab, number: int, figure: _Figure, under: Under,
        told: _Told,
    ) -> None:  # fmt: skip
        if not under.bearers:
            area = floor_figure(figure.rings, slab.openings).area
            before = told.nowhere.get(slab.told, (0.0, 0.0))[1]
            told.nowhere[slab.told] = area, before + area * figure.intensity
            return
        try:
            parts = self._shared(entry, slab, figure.rings, under)
        except UnsharedError as error:
            self._doubt([one.beam for one in under.bearers if one.beam], slab, str(error))
            told.notes[f"{slab.told} is not laid on beams: {error}"] = None
            return
        told.notes |= dict.fromkeys(_counted_twice(slab, figure, parts))
        for part in parts:
            force = part.area * figure.intensity
            if not part.bearer.beam:
                told.elsewhere[part.bearer.told] += force
                continue
            told.on_beams += force
            if part.beside:
                told.beside[part.bearer.told] = None
            self.carried.add(entry.place)
            if figure.text.startswith("self weight"):
                self.weighed.add(slab.step_id)
            face = _face(part.bearer, slab)
            self.loads += [
                one._replace(face=face) for one in self._on_beam(entry, slab, figure, part)
            ]

    def _shared(
        self, entry: FloorEntry, slab: FloorSlab, rings: tuple[Ring, ...], under: Under
    ) -> tuple[_Part, ...]:
        key = (slab.key, rings, entry.span, entry.direction, entry.walls)
        if key not in self._parts:
            origin = rings[0][0]
            carriers = [one.carrier for one in under.bearers]
            found = shares(rings, slab.openings, carriers, Span(entry.span, entry.direction))
            self._parts[key] = tuple(
                _part(one, under.bearers[one.carrier], rings[0], origin) for one in found
            )
        return self._parts[key]

    def _on_beam(
        self, entry: FloorEntry, slab: FloorSlab, figure: _Figure, part: _Part
    ) -> Iterator[Load]:
        """The loads of one slab on one beam: lines along it, and at its ends what lies beyond."""
        beam, standing = self._beams[part.bearer.beam], self._standing.get(part.bearer.beam)
        first, last = standing.reach if standing else (0.0, beam.length)
        low, high = min(0.0, first), max(beam.length, last)
        origin = f"{entry.place}, slab {slab.told}"
        for width in within(part.widths, low, high):
            values = figure.intensity * width.first, figure.intensity * width.last
            yield Load(
                beam.key, entry.case, "line", width.start, width.end, values, origin=origin,
                text=_text(figure, width),
            )  # fmt: skip
        free = [end.kind == "free" for end in standing.ends] if standing else [False, False]
        ends = ((-INFINITE, low, first, free[0]), (high, INFINITE, last, free[1]))
        for start, end, place, hangs in ends:
            for width in within(part.widths, start, end):
                at = _Beyond(beam, entry.case, place, width, origin)
                yield from at.loads(figure, hangs=hangs)


INFINITE = 1e12
"""Farther than any floor [mm]"""


class _Beyond(NamedTuple):
    """Floor that lies beyond the end of the beam that carries it, brought to that end."""

    beam: Beam
    case: str
    place: float
    width: Width
    origin: str

    def loads(self, figure: _Figure, *, hangs: bool) -> Iterator[Load]:
        """Its weight at the end, and at a free end its moment too."""
        force, arm = figure.intensity * self.width.area, self.width.middle - self.place
        text = f"{show(force, 'force')} at {show(self.place, 'length')}: floor beyond its end"
        yield Load(
            self.beam.key, self.case, "point", self.place, self.place, (force, force),
            origin=self.origin, text=text,
        )  # fmt: skip
        if hangs:
            # Hogging on either side: past the end it turns the beam's tip down.
            yield Load(
                self.beam.key, self.case, "moment", self.place, self.place,
                (-force * arm, -force * arm), origin=self.origin,
                text=f"moment of the {show(force, 'force')} of floor beyond its end",
            )  # fmt: skip


def _face(bearer: Bearer, slab: FloorSlab) -> Face:
    """Slab in the lower half of a beam's depth hangs from it."""
    top = max(plate.top for plate in slab.plates)
    return "top" if top >= (bearer.low + bearer.high) / 2.0 else "bottom"


def _part(share: Share, bearer: Bearer, outer: Ring, origin: tuple[float, float]) -> _Part:
    widths = widths_along(share.figure, _seen_from(bearer.carrier, origin))
    area = share.figure.area
    middle = sum(each.area * each.middle for each in widths) / area
    beside = distance_from(outer, bearer.carrier.at(middle)) > BESIDE
    return _Part(bearer, area, widths, beside)


def _text(figure: _Figure, width: Width) -> str:
    one, other = show(width.first, "length"), show(width.last, "length")
    over = one if one == other else f"{one} to {other}"
    where = f"{show(width.start, 'length')} to {show(width.end, 'length')}"
    return f"{figure.text} over a width of {over}, from {where}"


def _seen_from(carrier: Carrier, origin: tuple[float, float]) -> Carrier:
    start, end = ((x - origin[0], y - origin[1]) for x, y in (carrier.start, carrier.end))
    return replace(carrier, start=start, end=end)


def _outlines(slab: FloorSlab) -> Iterator[tuple[Ring, ...]]:
    """The plans that all plates of a slab cover together, each place once."""
    if len(slab.plates) == 1:
        yield slab.plates[0].rings
        return
    yield from covered([plate.rings for plate in slab.plates])


def _counted_twice(slab: FloorSlab, figure: _Figure, parts: Sequence[_Part]) -> Iterator[str]:
    """Tell where parts of beams overlap."""
    area = floor_figure(figure.rings, slab.openings).area
    more = sum(part.area for part in parts) / area - 1.0 if area > 0.0 else 0.0
    if more > TOLD:
        yield f"{slab.told}: {more:.1%} of it counts on two beams, as axes all but coincide"


def _words(told: _Told) -> Iterator[tuple[str, RemarkKind]]:
    """What became of the loads of an entry, for people, each with the kind of its remark."""
    slabs = "1 slab brings" if told.slabs == 1 else f"{told.slabs} slabs bring"
    yield f"{slabs} {show(told.on_beams, 'force')} to beams", "note"
    if told.elsewhere:
        total = show(sum(told.elsewhere.values()), "force")
        named = [f"{name} {show(force, 'force')}" for name, force in told.elsewhere.items()]
        yield f"{total} goes to what is not rated: {_listed(named)}", "doubt"
    if told.nowhere:
        total = show(sum(force for _, force in told.nowhere.values()), "force")
        named = [f"{name}, {area / 1e6:.3g} m2, {show(force, 'force')}"
                 for name, (area, force) in told.nowhere.items()]  # fmt: skip
        yield f"{total} reaches no beam: {_listed(named)}", "doubt"
    if told.partitions:
        yield f"{PASSED_OVER}: {_listed(list(told.partitions))}", "doubt"
    if told.beside:
        yield f"{FACES}: {_listed(list(told.beside))}", "doubt"
    yield from ((text, "doubt") for text in told.notes)


def _listed(names: Sequence[str]) -> str:
    more = f" and {len(names) - NAMED} more" if len(names) > NAMED else ""
    return ", ".join(names[:NAMED]) + more
