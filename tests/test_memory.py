"""The garbage collector is kept out of a run and left as it was."""

from __future__ import annotations

import gc
from collections.abc import Iterator

import pytest

from ifccheck.memory import uncollected


@pytest.fixture(params=[True, False], ids=["on", "off"])
def enabled(request: pytest.FixtureRequest) -> Iterator[bool]:
    before = gc.isenabled()
    (gc.enable if request.param else gc.disable)()
    yield request.param
    (gc.enable if before else gc.disable)()


def test_the_collector_is_off_inside_and_as_before_outside(enabled: bool) -> None:
    with uncollected():
        assert not gc.isenabled()
        with uncollected():
            assert not gc.isenabled()
        assert not gc.isenabled(), "the inner one leaves it as it found it"
    assert gc.isenabled() == enabled


def test_an_error_leaves_it_as_before_too(enabled: bool) -> None:
    with pytest.raises(ValueError, match="x"), uncollected():
        raise ValueError("x")
    assert gc.isenabled() == enabled


def test_what_a_process_made_that_ends_is_never_walked(enabled: bool) -> None:
    made: list[object] = []
    try:
        with uncollected(to_the_end=True):
            made.append([made])
        assert gc.isenabled() == enabled
        assert not any(one is made for one in gc.get_objects())
    finally:
        gc.unfreeze()
    assert any(one is made for one in gc.get_objects()), "the walk that is spared would find it"


def test_a_function_may_be_called_again_and_again(enabled: bool) -> None:
    @uncollected()
    def inside() -> bool:
        return gc.isenabled()

    assert (inside(), inside()) == (False, False)
    assert gc.isenabled() == enabled
