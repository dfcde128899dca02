"""Where the marks of beams stand in a plan: beside their beam and not over one another."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from ifccheck.publish.svg import Place, label

LETTER_HEIGHT, LETTER_WIDTH, LIFT = 9.0, 5.0, 3.0
STEP = 4.5
"""Distance of the places that stand for a label or a beam."""
SHARES = (0.5, 0.25, 0.75, 0.35, 0.65, 0.15, 0.85, 0.0, 1.0)
CELL = 24.0


@dataclass(frozen=True, slots=True)
class Stroke:
    """A beam on the drawing: its ends and half its breadth."""

    start: Place
    end: Place
    half: float

    @property
    def length(self) -> float:
        """Between the ends."""
        return math.dist(self.start, self.end)


@dataclass(frozen=True, slots=True)
class _Spot:
    middle: Place
    turn: float
    """Clockwise [deg]"""
    taken: tuple[Place, ...]
    """Places along the middle of the letters"""


class Labels:
    """Sets labels one after another, each where the earlier ones and the beams leave room."""

    def __init__(self, strokes: Sequence[Stroke]) -> None:
        self._beams: dict[tuple[int, int], list[tuple[Place, float, Stroke]]] = {}
        self._letters: dict[tuple[int, int], list[Place]] = {}
        for stroke in strokes:
            for place in _along(stroke.start, stroke.end):
                self._beams.setdefault(_cell(place), []).append((place, stroke.half, stroke))

    def set(self, stroke: Stroke, mark: str, used: str, *, always: bool) -> str:
        """Return a beam's mark and how much it is used, where they find room beside it.

        They stand on one line, or else apart. Where they find no room clear of other beams the
        mark stands alone, or, if both must ``always`` be shown, over those beams.
        """
        whole = [[f"{mark}  {used}"], [mark, used]] if used else []
        clear = [(each, True) for each in whole]
        across = [(each, False) for each in whole]
        alone = [([mark], True), ([mark], False)]
        for texts, clear_of_beams in clear + (across + alone if always else alone + across):
            if placed := self._placed(stroke, texts, clear_of_beams):
                return placed
        return ""

    def add(self, stroke: Stroke, words: Sequence[str]) -> str:
        """Return the first of several texts that finds room beside a beam, clear of all others."""
        return next(filter(None, (self._placed(stroke, [text], True) for text in words)), "")

    def _placed(self, stroke: Stroke, texts: Sequence[str], clear_of_beams: bool) -> str:
        """Texts beside a beam, each in room of its own; nothing where one finds none."""
        spots = self._room(stroke, texts, clear_of_beams)
        for spot in spots:
            self._take(spot)
        placed = zip(spots, texts, strict=False)
        return "".join(label(*spot.middle, text, "mark", spot.turn) for spot, text in placed)

    def _room(self, stroke: Stroke, texts: Sequence[str], clear_of_beams: bool) -> list[_Spot]:
        """A spot for each of the texts, or none at all."""
        found: list[_Spot] = []
        for text in texts:
            free = (
                spot
                for spot in _spots(stroke, len(text) * LETTER_WIDTH)
                if self._free(spot, stroke, clear_of_beams) and not _meet(spot, found)
            )
            if (spot := next(free, None)) is None:
                return []
            found.append(spot)
        return found

    def _free(self, spot: _Spot, own: Stroke, clear_of_beams: bool) -> bool:
        return not any(
            self._meets_letters(place) or (clear_of_beams and self._meets_a_beam(place, own))
            for place in spot.taken
        )

    def _meets_letters(self, place: Place) -> bool:
        return any(
            math.dist(place, other) < LETTER_HEIGHT
            for cell in _around(place)
            for other in self._letters.get(cell, ())
        )

    def _meets_a_beam(self, place: Place, own: Stroke) -> bool:
        return any(
            stroke is not own and math.dist(place, other) < half + LETTER_HEIGHT / 2.0
            for cell in _around(place)
            for other, half, stroke in self._beams.get(cell, ())
        )

    def _take(self, spot: _Spot) -> None:
        for place in spot.taken:
            self._letters.setdefault(_cell(place), []).append(place)


def _meet(spot: _Spot, others: Sequence[_Spot]) -> bool:
    return any(
        math.dist(place, taken) < LETTER_HEIGHT
        for other in others
        for taken in other.taken
        for place in spot.taken
    )


def _spots(stroke: Stroke, width: float) -> Iterator[_Spot]:
    """Places for a text of a width along the beam, read from the left or from below."""
    if width > stroke.length:
        return
    (x0, y0), (x1, y1) = sorted((stroke.start, stroke.end), key=lambda p: (round(p[0], 1), -p[1]))
    angle = math.atan2(y1 - y0, x1 - x0)
    cosine, sine = math.cos(angle), math.sin(angle)
    for share in SHARES:
        reach = min(max(share * stroke.length, width / 2.0), stroke.length - width / 2.0)
        for lift in (stroke.half + LIFT, -(stroke.half + LETTER_HEIGHT)):
            x, y = x0 + reach * cosine + lift * sine, y0 + reach * sine - lift * cosine
            up = LETTER_HEIGHT * 0.35
            centre = (x + up * sine, y - up * cosine)
            first = (centre[0] - width / 2.0 * cosine, centre[1] - width / 2.0 * sine)
            last = (centre[0] + width / 2.0 * cosine, centre[1] + width / 2.0 * sine)
            yield _Spot((x, y), math.degrees(angle), tuple(_along(first, last)))


def _along(start: Place, end: Place) -> Iterator[Place]:
    count = max(math.ceil(math.dist(start, end) / STEP), 1)
    for i in range(count + 1):
        share = i / count
        yield (start[0] + share * (end[0] - start[0]), start[1] + share * (end[1] - start[1]))


def _cell(place: Place) -> tuple[int, int]:
    return math.floor(place[0] / CELL), math.floor(place[1] / CELL)


def _around(place: Place) -> Iterator[tuple[int, int]]:
    column, row = _cell(place)
    for i in (-1, 0, 1):
        for j in (-1, 0, 1):
            yield column + i, row + j
