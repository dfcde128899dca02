"""Which face a moment puts in tension, and the worse of both where it may be either."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, fields
from typing import Any, Generic, Protocol, Self, TypeVar

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints


class Face(Protocol):
    """Sections with one face in tension; arrays with one row per station (N)."""

    @property
    def shear_depth(self) -> Floats:
        """dv [mm] (N)"""
        ...

    def take(self, rows: Ints | slice) -> Self:
        """The same at the given stations; rows may repeat."""
        ...


AnyFace = TypeVar("AnyFace", bound=Face)
Values = TypeVar("Values", Floats, Bools)


@dataclass(frozen=True, slots=True)
class Faces(Generic[AnyFace]):
    """Sections with the soffit and with the top in tension."""

    soffit: AnyFace
    top: AnyFace
    top_rows: Ints | None = None
    """Row of ``top`` of each station (N); the station itself where None. Few stations need
    their top, so that it is looked up only there."""

    def take(self, rows: Ints | slice) -> Faces[AnyFace]:
        """The same at the given stations; rows may repeat."""
        every = np.arange(self.top.shear_depth.size) if self.top_rows is None else self.top_rows
        return Faces(self.soffit.take(rows), self.top, every[rows])

    def top_at(self, rows: Ints) -> AnyFace:
        """The sections with the top in tension at the given stations."""
        return self.top.take(rows if self.top_rows is None else self.top_rows[rows])

    @property
    def top_depth(self) -> Floats:
        """dv with the top in tension [mm] (N)"""
        depth = self.top.shear_depth
        return depth if self.top_rows is None else depth[self.top_rows]


def faces_in_tension(faces: Faces[AnyFace], demand: Demand) -> tuple[Bools, Bools]:
    """Which faces the moment, or its reversal, may put in tension: soffit and top.

    A face is tried where the moment tensions it, and also where |Mf| < Vf dv and some
    arrangement of the loads does. Where neither holds, the soffit is.
    """
    sagging, hogging = demand.moment > 0.0, demand.moment < 0.0
    moment, shear = np.abs(demand.moment), np.abs(demand.critical_shear)
    soffit = sagging | ((moment < shear * faces.soffit.shear_depth) & demand.can_sag)
    top = hogging | ((moment < shear * faces.top_depth) & demand.can_hog)
    return soffit | ~top, top


class DetailsOfBothFaces:
    """Details on the face that governs, put together for each name when it is asked for.

    It has the fields of the details that it is made of. A run asks for the details of few places
    only, and to put all of them together would take longer than the check itself.
    """

    def __init__(
        self,
        soffit: Any,
        top: Any,
        places: tuple[Ints, ...],
        taken: Bools,
        shape: tuple[int, ...],
    ) -> None:
        """``top`` holds the places where the top is tried; it governs at those ``taken``, which
        are ``places`` of the whole."""
        self._soffit, self._top, self._places = soffit, top, places
        self._taken, self._shape = taken, shape

    @property
    def __dataclass_fields__(self) -> dict[str, Any]:
        return {f.name: f for f in fields(self._soffit)}

    def __getattr__(self, name: str) -> Any:
        if name.startswith("_"):
            raise AttributeError(name)
        whole = np.broadcast_to(getattr(self._soffit, name), self._shape)
        if self._taken.size == 0:
            return whole
        part = np.broadcast_to(getattr(self._top, name), self._taken.shape)
        return put(whole, self._places, part[self._taken])


def worse_face(
    faces: Faces[AnyFace],
    demand: Demand,
    evaluate: Callable[[AnyFace, Demand], tuple[Any, Floats]],
) -> tuple[Any, Floats]:
    """Evaluate the face in tension, both where both may be, and keep the worse.

    ``evaluate(face, demand)`` gives the details and the utilisation. A face that cannot be
    evaluated is worse than one that suffices and better than one that falls short.
    """
    soffit, top = faces_in_tension(faces, demand)
    details, utilisation = evaluate(faces.soffit, demand)
    shape, tried = utilisation.shape, np.nonzero(top)
    if tried[0].size == 0:
        nowhere = np.zeros(0, dtype=np.bool_)
        return DetailsOfBothFaces(details, None, (), nowhere, shape), utilisation
    second, second_utilisation = evaluate(faces.top_at(tried[-1]), demand.at(tried))
    taken = _worse(second_utilisation, utilisation[tried]) | ~soffit[tried]
    places = tuple(index[taken] for index in tried)
    return (
        DetailsOfBothFaces(details, second, places, taken, shape),
        put(utilisation, places, second_utilisation[taken]),
    )


def worse_faces(
    faces: Faces[AnyFace],
    demand: Demand,
    evaluate: Callable[[AnyFace, Demand], Sequence[tuple[Floats, Floats]]],
) -> Sequence[tuple[Floats, Floats]]:
    """Utilisation and resistance of several limit states, each with its worse face in tension.

    ``evaluate(face, demand)`` gives those of one face.
    """
    first = evaluate(faces.soffit, demand)
    if not (demand.can_hog.any() or (demand.moment < 0.0).any()):
        return first
    soffit, top = faces_in_tension(faces, demand)
    tried, found = np.flatnonzero(top), []
    second = evaluate(faces.top_at(tried), demand.take(tried))
    for (one, resistance), (other, other_resistance) in zip(first, second, strict=True):
        taken = _worse(other, one[tried]) | ~soffit[tried]
        rows = (tried[taken],)
        found.append((put(one, rows, other[taken]), put(resistance, rows, other_resistance[taken])))
    return found


def _worse(utilisation: Floats, other: Floats) -> Bools:
    return _severity(utilisation) > _severity(other)


def put(values: Values, places: tuple[Ints, ...], others: Values) -> Values:
    """A copy of the values with others at the given places."""
    changed = np.array(values)
    changed[places] = others
    return changed


def _severity(utilisation: Floats) -> Floats:
    return np.where(np.isnan(utilisation), np.nextafter(1.0, 2.0), utilisation)


def utilisation_of(demand: Floats, resistance: Floats, outside: Bools) -> Floats:
    """Demand over resistance: 0 where nothing is demanded or outside the faces of the supports,
    inf where something is demanded of nothing, nan where either is not known."""
    ratio = np.asarray(demand / resistance)
    np.copyto(ratio, 0.0, where=(demand <= 0.0) | outside)
    return ratio
