"""What is to be said of beams' bars, gathered so that each thing is said once of all its bars."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from ifccheck.beam import Reason, Remark, RemarkKind

STAGE = "reinforcement"
LISTED = 3
"""So many bars are named, the others counted."""


class Findings:
    """Remarks and reasons on beams, each with the bars that it is about."""

    def __init__(self, guids: Sequence[str]) -> None:
        self._guids = guids
        self._remarks: dict[int, dict[tuple[str, RemarkKind], list[str]]] = {}
        self._reasons: dict[int, dict[tuple[str, bool], list[str]]] = {}

    def remark(
        self, beam: int, text: str, bars: Iterable[str] = (), kind: RemarkKind = "doubt"
    ) -> None:
        """Say something of bars of a beam."""
        self._remarks.setdefault(beam, {}).setdefault((text, kind), []).extend(bars)

    def reason(self, beam: int, text: str, bars: Iterable[str] = (), blocking: bool = True) -> None:
        """Say why bars keep a beam from being rated."""
        self._reasons.setdefault(beam, {}).setdefault((text, blocking), []).extend(bars)

    def beams(self) -> Iterable[int]:
        """Beams of which something is said."""
        return self._remarks.keys() | self._reasons.keys()

    def remarks(self, beam: int) -> tuple[Remark, ...]:
        """The remarks on a beam."""
        said = self._remarks.get(beam)
        if not said:
            return ()
        guid = self._guids[beam]
        return tuple(
            Remark(guid, STAGE, _sentence(bars, text), kind) for (text, kind), bars in said.items()
        )

    def reasons(self, beam: int) -> tuple[Reason, ...]:
        """The reasons why a beam is not rated."""
        said = self._reasons.get(beam)
        if not said:
            return ()
        return tuple(
            Reason(_sentence(bars, text), blocking) for (text, blocking), bars in said.items()
        )


def _sentence(bars: Sequence[str], text: str) -> str:
    distinct = list(dict.fromkeys(bars))
    return f"{name_bars(distinct[:LISTED], len(distinct))}: {text}" if bars else text


def name_bars(first: Sequence[str], count: int) -> str:
    """Name bars for people: the first few, and how many more there are."""
    more = f" and {count - len(first)} more" if count > len(first) else ""
    return f"{'bar' if count == 1 else 'bars'} {', '.join(first)}{more}"
