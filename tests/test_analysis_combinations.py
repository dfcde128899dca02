"""Which cases act together, and with which factors."""

from __future__ import annotations

from itertools import combinations as subsets

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.analysis.combinations import expand_exclusions, factor_array
from ifccheck.beam import Case, Combination
from ifccheck.errors import BriefError

SELF = Case("self", "permanent")


def strength(name: str, **factors: tuple[float, float]) -> Combination:
    return Combination(name, "strength", factors)


def test_cases_that_exclude_each_other_never_act_together() -> None:
    cases = [SELF, Case("press", "imposed", excludes=("hoist",)), Case("hoist", "crane")]
    given_ = strength("1.25D + 1.5L", self=(1.25, 0.9), press=(1.5, 0.0), hoist=(1.5, 0.0))
    expanded = expand_exclusions([given_], cases)
    assert {c.name: c.factors for c in expanded} == {
        "1.25D + 1.5L, without hoist": {
            "self": (1.25, 0.9),
            "press": (1.5, 0.0),
            "hoist": (0.0, 0.0),
        },
        "1.25D + 1.5L, without press": {
            "self": (1.25, 0.9),
            "press": (0.0, 0.0),
            "hoist": (1.5, 0.0),
        },
    }


def test_combinations_that_are_equal_for_the_cases_in_use_are_given_once() -> None:
    both = [
        strength("1.25D + 1.5L", self=(1.25, 0.9), snow=(1.5, 0.0)),
        strength("1.25D + 1.5S", self=(1.25, 0.9), snow=(1.0, 0.0)),
        Combination("characteristic", "service", {"self": (1.25, 0.9), "snow": (1.5, 0.0)}),
    ]
    assert [c.name for c in expand_exclusions(both, [SELF])] == ["1.25D + 1.5L", "characteristic"]


def test_a_case_that_is_left_out_anyway_excludes_nothing() -> None:
    cases = [SELF, Case("press", "imposed", excludes=("hoist",)), Case("hoist", "crane")]
    given_ = strength("1.4D", self=(1.4, 0.9), press=(0.0, 0.0), hoist=(0.0, 0.0))
    (only,) = expand_exclusions([given_], cases)
    assert only.name == "1.4D"


def test_what_is_not_permanent_or_may_be_removed_never_relieves() -> None:
    cases = [SELF, Case("press", "imposed"), Case("screens", "permanent", removable=True)]
    given_ = strength("x", self=(1.25, 0.9), press=(1.5, 0.5), screens=(1.25, 0.9))
    np.testing.assert_array_equal(
        factor_array([given_], cases), [[[1.25, 0.9], [1.5, 0.0], [1.25, 0.0]]]
    )


def test_a_case_without_a_factor_is_an_error() -> None:
    with pytest.raises(BriefError, match="combination 'x' has no factor for case 'press'"):
        factor_array([strength("x", self=(1.25, 0.9))], [SELF, Case("press", "imposed")])


def test_exclusions_without_end_are_an_error() -> None:
    cases = [
        Case(f"{side}{n}", "imposed", excludes=(f"b{n}",) if side == "a" else ())
        for n in range(12)
        for side in "ab"
    ]
    given_ = strength("x", **{case.name: (1.5, 0.0) for case in cases})
    with pytest.raises(BriefError, match="more than 1000 ways"):
        expand_exclusions([given_], cases)


@settings(max_examples=80, deadline=None)
@given(st.sets(st.tuples(st.integers(0, 5), st.integers(0, 5)), max_size=9))
def test_the_sets_are_all_the_greatest_that_agree(pairs: set[tuple[int, int]]) -> None:
    """Against all subsets of six cases tried one by one."""
    pairs = {(a, b) for a, b in pairs if a != b}
    names = [f"c{n}" for n in range(6)]
    cases = [
        Case(name, "imposed", excludes=tuple(names[b] for a, b in pairs if names[a] == name))
        for name in names
    ]
    expanded = expand_exclusions([strength("x", **dict.fromkeys(names, (1.5, 0.0)))], cases)
    found = {frozenset(n for n, f in c.factors.items() if f[0] > 0.0) for c in expanded}
    agreeing = [
        frozenset(chosen)
        for size in range(7)
        for chosen in subsets(names, size)
        if not any(names[a] in chosen and names[b] in chosen for a, b in pairs)
    ]
    assert found == {s for s in agreeing if not any(s < other for other in agreeing)}
    assert len(expanded) == len(found)
