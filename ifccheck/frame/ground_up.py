"""What carries what, from the ground up: at the ends of beams and between them.

A beam stands on two places that hold it, or on one end that also holds its moment: built in,
fixed by the brief, or going on over its support into a beam that stands. No beam is carried by
what it carries.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Iterable, Mapping, Sequence, Set
from typing import NamedTuple

from ifccheck.beam import SupportKind
from ifccheck.frame.carrying import ENDS, NOT_CARRIED, End, Stated
from ifccheck.frame.seats import Candidate, Cluster

Joint = tuple[str, End]
"""An end of a beam, by key"""

IN_A_RING = "it is itself carried by what this beam carries"


class Order(NamedTuple):
    """What stands, and on what."""

    rounds: Mapping[str, int]
    """Of all that stands, how many others lie between it and the ground at least; in order"""
    rings: frozenset[tuple[str, str]]
    """Pairs (beam, other) of which the other may not carry the beam"""

    def speaks_against(self, key: str, candidate: Candidate) -> str:
        """Why a member cannot be counted on to carry a beam; empty where it can."""
        carrier = candidate.carrier
        if candidate.contact.doubt:
            return candidate.contact.doubt
        if carrier is not None and carrier not in self.rounds:
            return NOT_CARRIED
        return IN_A_RING if (key, carrier) in self.rings else ""


class _Needs(NamedTuple):
    """What a beam may stand on: places by their number."""

    clusters: Sequence[Cluster]
    said: Mapping[End, SupportKind]
    joined: Mapping[End, str]
    """Beams that this one goes on into over a support"""


def without_free(clusters: Sequence[Cluster], said: Mapping[End, SupportKind]) -> list[Cluster]:
    """The places that may hold a beam, without the ends that the brief says are free."""
    free = {end for end, kind in said.items() if kind == "free"}
    return [each for each in clusters if each.place not in free] if free else list(clusters)


def order_of(
    clusters: Mapping[str, Sequence[Cluster]],
    stated: Stated,
    joints: Mapping[Joint, Joint],
    fastened: Set[str] = frozenset(),
) -> Order:
    """Find what stands.

    Parameters
    ----------
    clusters
        Where each beam may be carried, without the ends that are stated as free.
    stated
        What the brief says of ends.
    joints
        Ends that go on into each other over a support, with all moment.
    fastened
        What stands in any case: corbels.
    """
    needs = {key: _needs(key, own, stated, joints) for key, own in clusters.items()}
    resting: dict[str, list[str]] = defaultdict(list)
    for key, each in needs.items():
        for carrier in _carriers(each) | set(each.joined.values()):
            resting[carrier].append(key)
    rounds: dict[str, int] = {}
    waiting: Iterable[str] = [
        key for key, each in needs.items() if key in fastened or _stands(each, rounds)
    ]
    count = 0
    while waiting:
        rounds |= dict.fromkeys(waiting, count)
        touched = dict.fromkeys(above for key in waiting for above in resting[key])
        waiting = [key for key in touched if key not in rounds and _stands(needs[key], rounds)]
        count += 1
    return Order(rounds, _rings(needs, rounds))


def _needs(
    key: str, clusters: Sequence[Cluster], stated: Stated, joints: Mapping[Joint, Joint]
) -> _Needs:
    joined = {end: joints[key, end][0] for end in ENDS if (key, end) in joints}
    return _Needs(clusters, stated.get(key, {}), joined)


def _carriers(needs: _Needs) -> set[str]:
    return {
        each.carrier
        for cluster in needs.clusters
        for each in cluster.candidates
        if each.carrier is not None and not each.contact.doubt
    }


def _leans(needs: _Needs, rounds: Mapping[str, int]) -> bool:
    """Whether it stands only because it goes on into another."""
    return bool(needs.joined) and not _stands(needs, rounds, alone=True)


def _stands(needs: _Needs, rounds: Mapping[str, int], *, alone: bool = False) -> bool:
    """Whether it stands on what stands; ``alone``: without going on into another."""

    def counts(candidate: Candidate) -> bool:
        carrier = candidate.carrier
        return not candidate.contact.doubt and (carrier is None or carrier in rounds)

    held = [cluster for cluster in needs.clusters if any(map(counts, cluster.candidates))]
    joined = () if alone else [end for end, other in needs.joined.items() if other in rounds]
    return stands_on(held, counts, needs.said, joined)


def stands_on(
    held: Sequence[Cluster],
    counts: Callable[[Candidate], bool],
    said: Mapping[End, SupportKind],
    joined: Iterable[End],
) -> bool:
    """Whether a beam stands on the places that hold it.

    Parameters
    ----------
    held
        Places where something can be counted on.
    counts
        Whether a member can be.
    said
        What the brief says of its ends.
    joined
        Ends that go on, over a support, into a beam that stands.
    """
    places = {cluster.place for cluster in held}
    by_word = [end for end in ENDS if said.get(end, "free") != "free" and end not in places]
    if len(held) + len(by_word) > 1:
        return True
    if by_word:
        return said[by_word[0]] == "fixed"
    return bool(held) and holds_moment(held[0], counts, said, joined)


def holds_moment(
    cluster: Cluster,
    counts: Callable[[Candidate], bool],
    said: Mapping[End, SupportKind],
    joined: Iterable[End],
) -> bool:
    """Whether a beam that is held there alone stands."""
    place = cluster.place
    if place == "between":
        return False
    if place in said:
        return said[place] == "fixed" or place in joined
    first = next(each for each in cluster.candidates if counts(each))
    return first.built_in or place in joined


def _rings(needs: Mapping[str, _Needs], rounds: Mapping[str, int]) -> frozenset[tuple[str, str]]:
    """Pairs that close a ring, of which the second came to stand no earlier than the first."""
    below = {key: _carriers(needs[key]) & rounds.keys() for key in rounds}
    for key in rounds:
        if _leans(needs[key], rounds):
            below[key] |= set(needs[key].joined.values()) & rounds.keys()
    on_rings = _on_rings(below)
    return frozenset(
        (key, carrier)
        for key in on_rings
        for carrier in _carriers(needs[key]) & on_rings
        if rounds[carrier] >= rounds[key]
    )


def _on_rings(below: Mapping[str, set[str]]) -> set[str]:
    """Keys that are left when what carries nothing, or rests on nothing, is taken away again and
    again: those on rings, and on ways between them."""
    above: dict[str, set[str]] = {key: set() for key in below}
    for key, carriers in below.items():
        for carrier in carriers:
            above[carrier].add(key)
    left = set(below)
    for one_way, back in ((below, above), (above, below)):
        counts = {key: len(one_way[key] & left) for key in left}
        loose = [key for key, count in counts.items() if not count]
        while loose:
            key = loose.pop()
            left.discard(key)
            for other in back[key] & left:
                counts[other] -= 1
                if not counts[other]:
                    loose.append(other)
    return left


def told_against(key: str, cluster: Cluster, order: Order) -> str:
    """Why nothing at a place can be counted on to carry a beam, for people."""
    found = {
        f"{each.contact.other}: {order.speaks_against(key, each)}" for each in cluster.candidates
    }
    return "; ".join(sorted(found))
