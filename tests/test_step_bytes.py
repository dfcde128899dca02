"""Numbers at many places of a file are those that a plain pattern finds there."""

from __future__ import annotations

import re

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.ifc import step_bytes
from ifccheck.ifc.step_bytes import places, stretches, whole_numbers

GREATEST = 2**31 - 1
pieces = st.one_of(
    st.text("0123456789", max_size=22), st.sampled_from(["#", " ", ",", "\0", "\xff"])
)


def by_pattern(data: bytes, at: int) -> tuple[int, int]:
    found = re.compile(rb"\d{0,20}").match(data, at)
    assert found is not None
    return min(int(found[0] or b"0"), GREATEST + 1), found.end()


@given(st.lists(pieces, max_size=12).map("".join))
def test_whole_numbers(text: str) -> None:
    data = text.encode("latin-1")
    at = np.arange(len(data))
    numbers, stops = whole_numbers(np.frombuffer(data, np.uint8), at, GREATEST)
    found = list(zip(numbers.tolist(), stops.tolist(), strict=True))
    assert found == [by_pattern(data, index) for index in range(len(data))]


def test_a_number_at_the_very_end() -> None:
    numbers, stops = whole_numbers(np.frombuffer(b"#12", np.uint8), np.array([1, 3]), GREATEST)
    assert (numbers.tolist(), stops.tolist()) == ([12, 0], [3, 3])


@pytest.mark.parametrize("piece", [1, 8, 64])
def test_pieces_hide_nothing(piece: int, monkeypatch: pytest.MonkeyPatch) -> None:
    data = b"".join(b"#%d," % number for number in range(0, 10**6, 7919))
    monkeypatch.setattr(step_bytes, "PIECE", 8 * piece)
    array = np.frombuffer(data, np.uint8)
    at = places(array, ord("#"))
    assert at.tolist() == [found.start() for found in re.finditer(b"#", data)]
    assert whole_numbers(array, at + 1, GREATEST)[0].tolist() == list(range(0, 10**6, 7919))
    assert places(array[:0], ord("#")).tolist() == []


@given(st.binary(max_size=40), st.data(), st.integers(1, 24))
def test_stretches_are_slices_with_zeros_behind_the_end(
    text: bytes, drawn: st.DataObject, size: int
) -> None:
    at = drawn.draw(st.lists(st.integers(0, len(text) + 9), max_size=6))
    data = np.frombuffer(text, np.uint8)
    found = stretches(data, np.array(at, np.int64), size)
    assert [row.tobytes() for row in found] == [
        text[first : first + size].ljust(size, b"\0") for first in at
    ]
