"""Containers that cannot change."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from engine.frozen import FrozenMap, StressRows

ONE, TWO = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0], [-1.0, 0.0, 0.0, 0.5, 0.0, 0.0]


# FrozenMap


def test_maps_with_the_same_items_are_equal_in_any_order() -> None:
    assert FrozenMap({"a": 1, "b": 2}) == FrozenMap([("b", 2), ("a", 1)])
    assert hash(FrozenMap({"a": 1, "b": 2})) == hash(FrozenMap({"b": 2, "a": 1}))


@pytest.mark.parametrize(
    "other",
    [
        FrozenMap({"a": 1}),  # less
        FrozenMap({"a": 1, "b": 3}),  # another value
        FrozenMap({"a": 1, "c": 2}),  # another key
        {"a": 1, "b": 2},  # one that can change
    ],
)
def test_maps_that_differ_are_not_equal(other: object) -> None:
    assert FrozenMap({"a": 1, "b": 2}) != other


def test_a_map_keeps_the_order_in_which_it_was_given() -> None:
    given = FrozenMap({"z": 1, "a": 2, "m": 3})
    assert list(given) == list(given.keys()) == ["z", "a", "m"]
    assert list(given.values()) == [1, 2, 3]
    assert list(given.items()) == [("z", 1), ("a", 2), ("m", 3)]
    assert len(given) == 3
    assert given["m"] == 3
    assert given.get("x") is None
    assert "a" in given
    assert "x" not in given


def test_a_map_does_not_follow_what_it_was_made_of() -> None:
    source = {"a": 1}
    made = FrozenMap(source)
    source["b"] = 2
    assert made == FrozenMap({"a": 1})


def test_a_map_takes_no_items() -> None:
    made: Any = FrozenMap({"a": 1})
    with pytest.raises(TypeError):
        made["b"] = 2
    with pytest.raises(TypeError):
        del made["a"]


def test_a_renamed_key_keeps_its_place_and_value() -> None:
    renamed = FrozenMap({"a": 1, "b": 2, "c": 3}).renamed("b", "x")
    assert list(renamed.items()) == [("a", 1), ("x", 2), ("c", 3)]


def test_renaming_a_key_that_is_absent_gives_the_same_map() -> None:
    given = FrozenMap({"a": 1})
    assert given.renamed("b", "x") is given


def test_a_map_shows_its_items() -> None:
    assert repr(FrozenMap({"a": 1})) == "FrozenMap({'a': 1})"


# StressRows


def test_rows_are_found_by_their_names() -> None:
    given = StressRows(["A", "B"], [ONE, TWO])
    assert len(given) == 2
    assert list(given) == ["A", "B"]
    assert "A" in given
    assert "C" not in given
    assert (given.index("B"), given.index("C")) == (1, -1)
    assert given.get("B") is not None
    assert np.array_equal(given.get("B"), TWO)  # type: ignore[arg-type]
    assert given.get("C") is None


def test_no_rows_are_an_array_of_none() -> None:
    assert StressRows().array.shape == (0, 6)
    assert len(StressRows()) == 0


def test_rows_cannot_be_written() -> None:
    given = StressRows(["A"], [ONE])
    with pytest.raises(ValueError, match="read-only"):
        given.array[0, 0] = 5.0
    row = given.get("A")
    assert row is not None
    with pytest.raises(ValueError, match="read-only"):
        row[0] = 5.0


def test_rows_do_not_follow_the_array_they_were_made_of() -> None:
    source = np.array([ONE])
    given = StressRows(["A"], source)
    source[0, 0] = 99.0
    assert given.array[0, 0] == 1.0


@pytest.mark.parametrize(
    ("names", "array"),
    [
        (["A", "A"], [ONE, TWO]),  # a name twice
        (["A", "B"], [ONE]),  # a row too few
        (["A"], [ONE, TWO]),  # a row too many
        (["A"], [ONE[:5]]),  # a component too few
        (["A"], ONE),  # no row at all
    ],
)
def test_rows_that_do_not_fit_their_names_are_refused(names: list[str], array: Any) -> None:
    with pytest.raises(ValueError, match=r"a name stands twice|names and an array of shape"):
        StressRows(names, array)


def test_rows_are_the_same_in_any_order() -> None:
    assert StressRows(["A", "B"], [ONE, TWO]).same(StressRows(["B", "A"], [TWO, ONE]))


@pytest.mark.parametrize(
    "other",
    [
        StressRows(["A", "B"], [TWO, ONE]),  # rows of each other
        StressRows(["B", "A"], [ONE, TWO]),  # the same array under other names
        StressRows(["A", "C"], [ONE, TWO]),  # another name
        StressRows(["A"], [ONE]),  # less
    ],
)
def test_rows_that_differ_are_not_the_same(other: StressRows) -> None:
    assert not StressRows(["A", "B"], [ONE, TWO]).same(other)


def test_a_row_is_replaced_in_its_place() -> None:
    given = StressRows(["A", "B"], [ONE, TWO])
    put = given.put("A", TWO)
    assert put.names == ("A", "B")
    assert put.array.tolist() == [TWO, TWO]
    assert given.array.tolist() == [ONE, TWO]


def test_a_new_row_comes_last() -> None:
    put = StressRows(["A"], [ONE]).put("B", TWO)
    assert put.names == ("A", "B")
    assert put.array.tolist() == [ONE, TWO]
    assert put.index("B") == 1


def test_the_first_row_is_put_into_no_rows() -> None:
    assert StressRows().put("A", ONE).array.tolist() == [ONE]


def test_a_row_is_taken_out() -> None:
    left = StressRows(["A", "B"], [ONE, TWO]).put("A", None)
    assert left.names == ("B",)
    assert left.array.tolist() == [TWO]
    assert left.put("B", None).array.shape == (0, 6)


def test_taking_out_a_row_that_is_absent_gives_the_same_rows() -> None:
    given = StressRows(["A"], [ONE])
    assert given.put("B", None) is given


def test_a_renamed_row_keeps_its_place() -> None:
    renamed = StressRows(["A", "B"], [ONE, TWO]).renamed("A", "X")
    assert renamed.names == ("X", "B")
    assert renamed.array.tolist() == [ONE, TWO]
    assert renamed.index("A") == -1


def test_renaming_a_row_that_is_absent_gives_the_same_rows() -> None:
    given = StressRows(["A"], [ONE])
    assert given.renamed("B", "X") is given
