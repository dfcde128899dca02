"""Equal rows are found as a dictionary finds them; products are those of numpy, bit by bit."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.ifc.equal_rows import (
    _mixer,
    first_of_each,
    first_of_each_number,
    first_of_each_text,
    renumbered,
    used,
)
from ifccheck.ifc.many_vectors import crosses, dots, sizes

Found = tuple[npt.NDArray[np.intp], npt.NDArray[np.intp]]
NUMBERS = st.integers(-2, 2) | st.sampled_from([2**62, -(2**62), 2**63 - 1])
TEXTS = st.lists(
    st.text("\0ab", max_size=3).map(str.encode)
    | st.sampled_from([b"a" * count for count in (7, 8, 9, 15, 16, 17, 33, 200)]),
    max_size=40,
)


def assert_equal_rows(found: Found, rows: list[object]) -> None:
    """Every row has the first of the rows that are the same, and these are all different."""
    first, number = (column.tolist() for column in found)
    seen: dict[object, int] = {}
    for place, row in enumerate(rows):
        seen.setdefault(row, place)
    assert sorted(first) == sorted(seen.values())
    assert [first[one] for one in number] == [seen[row] for row in rows]


@given(st.lists(st.tuples(NUMBERS, NUMBERS, NUMBERS), max_size=40))
def test_equal_rows_of_numbers_have_one_number(rows: list[tuple[int, int, int]]) -> None:
    key = np.array(rows, dtype=np.int64).reshape(-1, 3)
    assert_equal_rows(first_of_each(*key.T), list(rows))
    assert_equal_rows(first_of_each_number(key[:, 0]), [row[0] for row in rows])


def test_rows_that_only_look_the_same_are_told_apart() -> None:
    """Two rows whose difference the sum of products does not see: it is taken from the first."""
    one, two = _mixer(0), _mixer(1)
    other = one * pow(two, -1, 2**64) % 2**64
    hidden = other - 2**64 if other >= 2**63 else other
    key = np.array([(1, 0), (0, hidden), (0, hidden), (1, 0)], dtype=np.int64)
    assert len(set((key[:, 0] * one + key[:, 1] * two).tolist())) == 1
    assert_equal_rows(first_of_each(*key.T), [tuple(row) for row in key.tolist()])


@given(TEXTS)
def test_equal_texts_have_one_number(texts: list[bytes]) -> None:
    stop = np.cumsum([len(text) for text in texts]).astype(np.intp)
    start = stop - np.array([len(text) for text in texts], dtype=np.intp)
    data = np.frombuffer(b"".join(texts), np.uint8)
    assert_equal_rows(first_of_each_text(data, start, stop), list(texts))


@given(st.lists(st.integers(0, 9), max_size=30))
def test_numbers_in_use_are_counted_through(numbers: list[int]) -> None:
    column = np.array(numbers, dtype=np.intp)
    kept, number = renumbered(column, 10)
    assert kept.tolist() == used(column, 10).tolist() == sorted(set(numbers))
    assert kept[number].tolist() == numbers


def test_products_of_many_vectors_are_those_of_numpy_to_the_last_bit() -> None:
    rng = np.random.default_rng(4)
    scale = 10.0 ** rng.integers(-6, 6, (2, 1000, 3))
    one, other = rng.normal(size=(2, 1000, 3)) * scale
    assert dots(one, other).tolist() == (one * other).sum(axis=1).tolist()
    assert sizes(one).tolist() == np.sqrt((one**2).sum(axis=1)).tolist()
    assert crosses(one, other).tolist() == np.cross(one, other).tolist()
