"""Component order, tensors, axes."""

from itertools import permutations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from engine.stress import COMPONENTS, components, frame, mean, permutation, rotated, tensor

STATE = np.array([1.0, 2.0, 3.0, 4.0, 5.0, 6.0])

directions = st.tuples(*[st.floats(-10, 10, allow_subnormal=False)] * 3).filter(lambda v: np.linalg.norm(v) > 0.1)


def random_frame(x: tuple[float, ...], other: tuple[float, ...]) -> np.ndarray:
    """A frame whose x is given and whose y is what is left of another direction (or of any other, if they agree)."""
    unit = np.array(x) / np.linalg.norm(x)
    rest = np.array(other) - (unit @ other) * unit
    if np.linalg.norm(rest) < 1e-3:
        rest = np.eye(3)[np.argmin(np.abs(unit))]
        rest = rest - (unit @ rest) * unit
    return frame(x, rest)


def test_tensor_puts_each_component_in_both_its_places() -> None:
    assert tensor(STATE).tolist() == [[1, 4, 6], [4, 2, 5], [6, 5, 3]]


@pytest.mark.parametrize("shape", [(6,), (6, 4), (6, 2, 3), (6, 0)])
def test_components_undo_tensor_for_any_trailing_shape(shape: tuple[int, ...]) -> None:
    stress = np.random.default_rng(1).normal(size=shape)
    turned_back = components(tensor(stress))
    assert tensor(stress).shape == (*shape[1:], 3, 3)
    assert np.array_equal(turned_back, stress)


@pytest.mark.parametrize("bad", [5.0, np.zeros(5), np.zeros((3, 3)), np.zeros((0, 6))])
def test_stress_without_six_components_first_is_refused(bad: object) -> None:
    with pytest.raises(ValueError, match="expected 6 components first"):
        tensor(bad)  # type: ignore[arg-type]


def test_components_of_something_other_than_3x3_are_refused() -> None:
    with pytest.raises(ValueError, match=r"expected \(\.\.\., 3, 3\)"):
        components(np.zeros((3, 2)))


@pytest.mark.parametrize("order", [COMPONENTS, " ".join(COMPONENTS), "xx  yy\tzz xy yz zx"])
def test_the_engines_own_order_is_left_alone(order: str | tuple[str, ...]) -> None:
    assert permutation(order).tolist() == [0, 1, 2, 3, 4, 5]


def test_every_order_of_a_files_rows_is_read_into_the_engines_order() -> None:
    value = dict(zip(COMPONENTS, STATE, strict=True))
    for order in permutations(COMPONENTS):
        row = np.array([value[name] for name in order])
        assert np.array_equal(row[permutation(order)], STATE)


@pytest.mark.parametrize(
    ("order", "complaint"),
    [
        ("xx yy zz xy yz xz", "unknown stress component 'xz'"),  # xz is written zx
        ("xx yy zz xy yz zx ww", "unknown stress component 'ww'"),
        ("XX yy zz xy yz zx", "unknown stress component 'XX'"),
        ("xx yy zz xy yz zx xx", "'xx' is named 2 times"),
        ("xx yy zz xy yz yz", "'yz' is named 2 times"),
        ("xx yy zz xy", "'yz', 'zx' is missing"),
        ("", "'xx', 'yy', 'zz', 'xy', 'yz', 'zx' is missing"),
    ],
)
def test_a_wrong_order_is_refused_and_says_what_is_wrong(order: str, complaint: str) -> None:
    with pytest.raises(ValueError, match=complaint):
        permutation(order)


def test_turning_a_bar_by_a_right_angle_moves_its_stress_to_the_other_axis() -> None:
    quarter = frame([0, 1, 0], [-1, 0, 0])
    assert rotated([100, 0, 0, 0, 0, 0], quarter).tolist() == [0, 100, 0, 0, 0, 0]


def test_axes_halfway_between_tension_and_compression_see_pure_shear() -> None:
    halfway = frame([1, 1, 0], [-1, 1, 0])
    assert rotated([100, -100, 0, 0, 0, 0], halfway) == pytest.approx([0, 0, 0, -100, 0, 0], abs=1e-13)


def test_rows_of_axes_are_the_new_directions_in_the_old_axes() -> None:
    axes = frame([2, 1, 2], [1, 2, -2])
    seen = tensor(rotated(STATE, axes))
    for i in range(3):
        for j in range(3):
            assert seen[i, j] == pytest.approx(axes[i] @ tensor(STATE) @ axes[j], abs=1e-13)


def test_the_identity_changes_no_bit_of_any_state() -> None:
    stress = np.random.default_rng(2).normal(size=(6, 50))
    assert np.array_equal(rotated(stress, np.eye(3)), stress)


@given(directions, directions)
def test_turning_there_and_back_is_nothing(x: tuple[float, ...], other: tuple[float, ...]) -> None:
    axes = random_frame(x, other)
    assert rotated(rotated(STATE, axes), axes.T) == pytest.approx(STATE, abs=2e-14)


@pytest.mark.parametrize(
    "axes",
    [
        np.eye(2),
        np.diag([1.0, 1.0, -1.0]),  # left-handed
        np.diag([1.0, 1.0, 2.0]),  # stretched
        [[1, 0, 0], [0.1, 1, 0], [0, 0, 1]],  # slanted
        np.full((3, 3), np.nan),
    ],
)
def test_axes_that_are_no_rotation_are_refused(axes: object) -> None:
    with pytest.raises(ValueError, match="axes"):
        rotated(STATE, axes)  # type: ignore[arg-type]


@given(directions, directions)
def test_a_frame_is_orthonormal_and_right_handed(x: tuple[float, ...], other: tuple[float, ...]) -> None:
    axes = random_frame(x, other)
    assert np.abs(axes @ axes.T - np.eye(3)).max() < 1e-15 * 4
    assert np.linalg.det(axes) == pytest.approx(1.0, abs=1e-14)
    assert axes[0] * np.linalg.norm(x) == pytest.approx(x, abs=1e-13)


def test_a_frame_of_the_axes_themselves_is_the_identity() -> None:
    assert np.array_equal(frame([5, 0, 0], [0, 1e-9, 0]), np.eye(3))


@pytest.mark.parametrize("size", [1e-300, 1e300])
def test_lengths_of_directions_do_not_matter(size: float) -> None:
    assert frame([3 * size, 4 * size, 0], [0, 0, size]) == pytest.approx(frame([3, 4, 0], [0, 0, 1]), abs=1e-15)


def test_a_slant_within_tolerance_is_taken_out_of_y() -> None:
    axes = frame([1, 0, 0], [9e-7, 1, 0])
    assert axes[0].tolist() == [1, 0, 0]
    assert axes[1] == pytest.approx([0, 1, 0], abs=1e-15)


@pytest.mark.parametrize(
    ("x", "y", "complaint"),
    [
        ([1, 0, 0], [1.1e-6, 1, 0], "not perpendicular"),
        ([1, 0, 0], [2, 0, 0], "not perpendicular"),
        ([0, 0, 0], [0, 1, 0], "x direction is zero"),
        ([1, 0, 0], [0, 0, 0], "y direction is zero"),
        ([1, 0, float("nan")], [0, 1, 0], "x direction is not finite"),
        ([1, 0, 0], [0, float("inf"), 0], "y direction is not finite"),
        ([1, 0], [0, 1, 0], "x direction has shape"),
    ],
)
def test_directions_that_make_no_frame_are_refused(x: list[float], y: list[float], complaint: str) -> None:
    with pytest.raises(ValueError, match=complaint):
        frame(x, y)


def test_mean_is_a_third_of_the_normals_and_ignores_shear() -> None:
    assert mean([30, 60, -15, 7, 8, 9]) == 25.0
    assert mean(np.full((6, 2, 3), 4.0)).tolist() == [[4, 4, 4], [4, 4, 4]]


def test_mean_of_the_largest_stresses_is_finite() -> None:
    assert mean([1.5e308, 1.5e308, 1.5e308, 0, 0, 0]) == 1.5e308
