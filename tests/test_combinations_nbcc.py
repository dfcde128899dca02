"""Load combinations of the National Building Code of Canada 2015.

The factors of both tables are from memory. Seen: that principal loads also act without their
companions, that 0.9D is used where dead load counteracts, and that storage raises the companion
factor of L (Ontario Building Code 2012, 4.1.3.2, the same article); 1.25D + 1.5L (CSA-LOAD-05).
"""

from __future__ import annotations

from itertools import product
from pathlib import Path

import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.beam import SELF, Case, Combination, Nature
from ifccheck.standards.csa_a23_3_14.combinations import combinations

REFERENCE = Path(__file__).resolve().parents[1].parent / "shared" / "reference" / "csa.yaml"

DEAD = Case(SELF, "permanent")
OFFICE = Case("office", "imposed", category="office")
SNOW = Case("snow", "snow")
WIND = Case("wind", "wind")
CRANE = Case("hoist", "crane")


def strength(*cases: Case) -> dict[str, Combination]:
    return {c.name: c for c in combinations(cases) if c.kind == "strength"}


def unfavourable(combination: Combination) -> dict[str, float]:
    return {name: pair[0] for name, pair in combination.factors.items()}


def test_published_factored_load():
    if not REFERENCE.exists():
        pytest.skip("the reference stock is not beside this checkout")
    cases = {case["id"]: case for case in yaml.safe_load(REFERENCE.read_text())}
    case = cases["CSA-LOAD-05"]
    dead, live = case["inputs"]["D_kPa"], case["inputs"]["L_kPa"]
    found = strength(DEAD, OFFICE)
    factored = max(
        c.factors[SELF][0] * dead + c.factors["office"][0] * live for c in found.values()
    )
    assert factored == pytest.approx(case["outputs"]["wf_kPa"], rel=case["tolerance_pct"] / 100)


def test_dead_load_alone():
    assert list(strength(DEAD)) == ["1.4D"]


def test_two_permanent_loads_may_counteract_each_other():
    found = strength(DEAD, Case("services", "permanent"))
    assert list(found) == ["1.4D", "1.25D"]
    assert found["1.25D"].factors["services"] == (1.25, 0.9)


def test_dead_and_live():
    found = strength(DEAD, OFFICE)
    assert list(found) == ["1.4D", "1.25D + 1.5L"]
    assert found["1.25D + 1.5L"].factors == {SELF: (1.25, 0.9), "office": (1.5, 0.0)}
    assert found["1.4D"].factors == {SELF: (1.4, 1.4), "office": (0.0, 0.0)}


def test_table_a_of_2015_from_memory():
    found = strength(DEAD, OFFICE, SNOW, WIND)
    assert set(found) == {
        "1.4D",
        "1.25D + 1.5L + 1.0S",
        "1.25D + 1.5L + 0.4W",
        "1.25D + 1.5S + 1.0L",
        "1.25D + 1.5S + 0.4W",
        "1.25D + 1.4W + 0.5L",
        "1.25D + 1.4W + 0.5S",
    }


def test_table_b_of_2015_from_memory():
    found = strength(DEAD, OFFICE, SNOW, WIND, CRANE)
    assert {
        "1.25D + 1.5C + 1.0L + 1.0S",
        "1.25D + 1.5C + 1.0L + 0.4W",
        "1.25D + 1.5L + 1.0C + 1.0S",
        "1.25D + 1.5L + 1.0C + 0.4W",
        "1.25D + 1.5S + 1.0C + 1.0L",
        "1.25D + 1.4W + 1.0C + 0.5L",
    } <= set(found)
    # not covered by any row with crane loads, so they stay
    assert {"1.25D + 1.5S + 0.4W", "1.25D + 1.4W + 0.5S"} <= set(found)
    # covered by the rows with crane loads
    assert "1.25D + 1.5L + 1.0S" not in found


def test_no_snow_no_snow_combinations():
    assert list(strength(DEAD, CRANE)) == ["1.4D", "1.25D + 1.5C"]


@pytest.mark.parametrize("category", [None, "storage", "Storage ", "equipment", "storge"])
def test_storage_and_unknown_occupancies_take_the_greater_companion_factor(category):
    imposed = Case("plant", "imposed", category=category)
    found = strength(DEAD, imposed, WIND)
    assert found["1.25D + 1.4W + 1.0L"].factors["plant"] == (1.0, 0.0)
    office = strength(DEAD, OFFICE, WIND)
    assert office["1.25D + 1.4W + 0.5L"].factors["office"] == (0.5, 0.0)


def test_two_occupancies_keep_their_own_factors():
    found = strength(DEAD, OFFICE, Case("archive", "imposed", category="storage"), WIND)
    factors = unfavourable(found["1.25D + 1.4W + 0.5L + 1.0L"])
    assert factors == {SELF: 1.25, "office": 0.5, "archive": 1.0, "wind": 1.4}


def test_service_takes_all_loads_at_their_specified_values():
    [service] = [c for c in combinations((DEAD, OFFICE, SNOW)) if c.kind == "service"]
    assert service.name == "service 1.0D + 1.0L + 1.0S"
    assert service.factors == {SELF: (1.0, 1.0), "office": (1.0, 0.0), "snow": (1.0, 0.0)}


NATURES: tuple[Nature, ...] = ("permanent", "imposed", "crane", "snow", "wind")
CASES = st.lists(st.sampled_from(NATURES), max_size=4).map(
    lambda natures: (DEAD, *(Case(f"c{i}", n) for i, n in enumerate(natures)))
)


@given(CASES)
def test_every_case_is_in_every_combination_and_names_are_unique(cases):
    found = combinations(cases)
    assert len({c.name for c in found}) == len(found)
    for combination in found:
        assert set(combination.factors) == {case.name for case in cases}


@given(CASES, st.lists(st.floats(-10, 10), min_size=5, max_size=5))
def test_nothing_that_the_tables_ask_for_is_lost(cases, effects):
    """The worst of the kept set is the worst of every row written out here, for any effects."""
    tables = [
        {"D": 1.4},
        {"D": 1.25},
        *({"D": 1.25, "L": 1.5, **c} for c in ({}, {"S": 1.0}, {"W": 0.4})),
        *({"D": 1.25, "S": 1.5, **c} for c in ({}, {"L": 1.5}, {"W": 0.4})),
        *({"D": 1.25, "W": 1.4, **c} for c in ({}, {"L": 1.0}, {"S": 0.5})),
        *({"D": 1.25, "C": 1.5, "L": 1.0, **c} for c in ({}, {"S": 1.0}, {"W": 0.4})),
        *({"D": 1.25, "L": 1.5, "C": 1.0, **c} for c in ({}, {"S": 1.0}, {"W": 0.4})),
        {"D": 1.25, "S": 1.5, "C": 1.0, "L": 1.5},
        {"D": 1.25, "W": 1.4, "C": 1.0, "L": 1.0},
    ]
    letters = dict(zip(NATURES, "DLCSW", strict=True))
    effect = {case.name: effects[i] for i, case in enumerate(cases)}

    def worst_of_row(row: dict[str, float]) -> float:
        total = 0.0
        for case in cases:
            factor = row.get(letters[case.nature], 0.0)
            least = 0.0 if case.nature != "permanent" else (1.4 if row["D"] == 1.4 else 0.9)
            total += max(factor * effect[case.name], least * effect[case.name])
        return total

    def worst_kept() -> float:
        return max(
            sum(max(f * effect[name] for f in pair) for name, pair in c.factors.items())
            for c in combinations(cases)
            if c.kind == "strength"
        )

    permanent_alone = [case for case in cases if case.nature == "permanent"] == [DEAD]
    if permanent_alone and len(cases) == 1 and effect[SELF] < 0:
        return  # one permanent load that acts the other way is the same load, upside down
    assert worst_kept() == pytest.approx(max(worst_of_row(row) for row in tables), abs=1e-9)


def test_no_combination_covers_another():
    for one, other in product(combinations((DEAD, OFFICE, SNOW, WIND, CRANE)), repeat=2):
        if one is other or "service" in (one.kind, other.kind):
            continue
        assert any(
            other.factors[n][0] < pair[0] or other.factors[n][1] > pair[1]
            for n, pair in one.factors.items()
        )
