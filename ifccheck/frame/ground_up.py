"""What carries what, from the ground up: at the ends of beams and between them.

A beam stands on two places that hold it, or on one end that also holds its moment: built in,
fixed by the brief, or going on over its support into a beam that stands. No beam is carried by
what it carries.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Collection, Iterable, Mapping, Sequence, Set
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
    """What a beam may stand on, where that takes more than what stands by itself."""

    clusters: Sequence[Cluster]
    said: Mapping[End, SupportKind]
    joined: Mapping[End, str]
    """Beams that this one goes on into over a support"""

    @property
    def carriers(self) -> set[str]:
        """Keys of what spans and may carry it."""
        return {carrier for cluster in self.clusters for carrier in cluster.carriers}


def without_free(clusters: Sequence[Cluster], said: Mapping[End, SupportKind]) -> Sequence[Cluster]:
    """The places that may hold a beam, without the ends that the brief says are free."""
    free = {end for end, kind in said.items() if kind == "free"}
    return [each for each in clusters if each.place not in free] if free else clusters


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
    needs = {
        key: _Needs(
            own,
            stated.get(key, {}),
            {end: joints[key, end][0] for end in ENDS if (key, end) in joints},
        )
        for key, own in clusters.items()
        if not _all_stand(own)
    }
    resting: dict[str, list[str]] = defaultdict(list)
    for key, each in needs.items():
        for carrier in each.carriers | set(each.joined.values()):
            resting[carrier].append(key)
    rounds: dict[str, int] = {}
    waiting: Collection[str] = [
        key for key in clusters if key not in needs or key in fastened or _stands(needs[key], {})
    ]
    count = 0
    while waiting:
        rounds |= dict.fromkeys(waiting, count)
        touched = dict.fromkeys(above for key in waiting for above in resting.get(key, ()))
        waiting = [key for key in touched if key not in rounds and _stands(needs[key], rounds)]
        count += 1
    return Order(rounds, _rings(needs, rounds))


def _all_stand(clusters: Sequence[Cluster]) -> bool:
    """Whether a beam stands on the ground alone, whatever the brief says of ends that it holds."""
    if len(clusters) < 2:
        return False
    return all(cluster.stands and not cluster.carriers for cluster in clusters)


def _stands(needs: _Needs, rounds: Mapping[str, int], *, alone: bool = False) -> bool:
    """Whether it stands on what stands; ``alone``: without going on into another."""
    said = needs.said
    held = [
        cluster
        for cluster in needs.clusters
        if cluster.stands or any(carrier in rounds for carrier in cluster.carriers)
    ]
    places = {cluster.place for cluster in held}
    by_word = [end for end in ENDS if said.get(end, "free") != "free" and end not in places]
    if len(held) + len(by_word) > 1:
        return True
    if by_word:
        return said[by_word[0]] == "fixed"
    joined = () if alone else [end for end, other in needs.joined.items() if other in rounds]
    return bool(held) and _holds_moment(held[0], rounds, said, joined)


def _holds_moment(
    cluster: Cluster,
    rounds: Mapping[str, int],
    said: Mapping[End, SupportKind],
    joined: Iterable[End],
) -> bool:
    """Whether a beam that is held at one place alone stands."""
    place = cluster.place
    if place == "between":
        return False
    if place in joined:
        return True
    if place in said:
        return said[place] == "fixed"
    for each in cluster.candidates:
        if not each.contact.doubt and (each.carrier is None or each.carrier in rounds):
            return each.built_in
    return False


def _rings(needs: Mapping[str, _Needs], rounds: Mapping[str, int]) -> frozenset[tuple[str, str]]:
    """Pairs that close a ring, of which the second came to stand no earlier than the first."""
    below = {key: each.carriers for key, each in needs.items() if key in rounds}
    for key in below:
        if needs[key].joined and not _stands(needs[key], rounds, alone=True):
            below[key] |= set(needs[key].joined.values())
    below = {key: carriers & below.keys() for key, carriers in below.items()}
    on_rings = _on_rings(below)
    return frozenset(
        (key, carrier)
        for key in on_rings
        for carrier in needs[key].carriers & on_rings
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
