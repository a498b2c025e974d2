"""The kernel against 60-digit arithmetic, against LAPACK, and against what must hold for every stress state."""

import threading
import tracemalloc
from collections.abc import Callable
from itertools import permutations

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.criteria import (
    BLOCK,
    equivalents,
    equivalents_into,
    in_plane_shear,
    max_shear,
    principals,
    shear_in_plane,
)
from engine.stress import components, frame, rotated, tensor

Generator = np.random.Generator
PURE_SHEAR_RATIO = 2 / np.sqrt(3)


# --- adversarial states -------------------------------------------------------------------------------------------


def turned(values: np.ndarray, rng: Generator) -> np.ndarray:
    """States (6, n) with principal stresses about `values` (3, n), each in random axes."""
    axes = np.linalg.qr(rng.normal(size=(values.shape[1], 3, 3)))[0]
    full = np.einsum("nij,jn,nkj->nik", axes, values, axes)
    return components((full + np.swapaxes(full, 1, 2)) / 2)


def gaps(rng: Generator, n: int, least: float) -> np.ndarray:
    return 10.0 ** rng.uniform(least, 0, n) * rng.choice([-1, 1], n)


def plane(rng: Generator, n: int) -> np.ndarray:
    """Plane states, half of them with |c| near R, where Tresca goes from one branch to the other."""
    stress = np.zeros((6, n))
    stress[[0, 1, 3]] = rng.normal(size=(3, n)) * 100
    product = np.abs(stress[0, ::2] * stress[1, ::2])
    stress[1, ::2] = np.abs(stress[1, ::2]) * np.sign(stress[0, ::2])
    stress[3, ::2] = np.sqrt(product) * (1 + gaps(rng, product.size, -16))
    return stress


def uneven(rng: Generator, n: int) -> np.ndarray:
    """Components of sizes from 1e-20 to 1e+20 beside each other, some zero."""
    return rng.choice([-1.0, 0.0, 1.0], (6, n)) * 10.0 ** rng.uniform(-20, 20, (6, n))


def on_mean(rng: Generator, n: int) -> np.ndarray:
    stress = rng.normal(size=(6, n)) * 10.0 ** rng.uniform(-14, 0, n)
    stress[:3] += 10.0 ** rng.uniform(0, 5, n)
    return stress


def shear_on_huge_mean(rng: Generator, n: int) -> np.ndarray:
    """Equal normals up to the largest, and shears down to the smallest: the normals say nothing."""
    stress = np.empty((6, n))
    stress[:3] = 10.0 ** rng.uniform(-5, 308, n)
    stress[3:] = rng.normal(size=(3, n)) * 10.0 ** rng.uniform(-290, 0, n)
    return stress


FAMILIES: dict[str, Callable[[Generator, int], np.ndarray]] = {
    "random": lambda rng, n: rng.normal(size=(6, n)) * 100,
    "uniaxial": lambda rng, n: np.eye(6)[:, rng.integers(0, 3, n)] * rng.normal(size=n),
    "uniaxial, turned": lambda rng, n: turned(np.outer([1, 0, 0], rng.normal(size=n)), rng),
    "pure shear": lambda rng, n: np.eye(6)[:, rng.integers(3, 6, n)] * rng.normal(size=n),
    "pure shear, turned": lambda rng, n: turned(np.outer([1, -1, 0], rng.normal(size=n)), rng),
    "two equal, turned": lambda rng, n: turned(rng.normal(size=(2, n))[[0, 0, 1]], rng),
    "two nearly equal, turned": lambda rng, n: turned(
        np.stack([np.ones(n), 1 + gaps(rng, n, -16), rng.normal(size=n) * 10]), rng
    ),
    "all nearly equal, turned": lambda rng, n: turned(1 + rng.normal(size=(3, n)) * gaps(rng, n, -15), rng),
    "tiny deviator on a large mean": on_mean,
    "tiny shear on a huge mean": shear_on_huge_mean,
    "uneven components": uneven,
    "small whole numbers": lambda rng, n: rng.integers(-2, 3, (6, n)).astype(float),
    "plane": plane,
    "1e-150": lambda rng, n: rng.normal(size=(6, n)) * 1e-150,
    "1e+150": lambda rng, n: rng.normal(size=(6, n)) * 1e150,
    "1e-308": lambda rng, n: rng.normal(size=(6, n)) * 1e-308,
    "1e+307": lambda rng, n: rng.uniform(-1, 1, (6, n)) * 2e307,
    "plane, 1e-150": lambda rng, n: plane(rng, n) * 1e-150,
    "plane, 1e+150": lambda rng, n: plane(rng, n) * 1e150,
    "plane, 1e-308": lambda rng, n: plane(rng, n) * 1e-310,
    "plane, 1e+307": lambda rng, n: plane(rng, n) / 1000 * 1e307,
}
EACH = 130
"""States of each family; 21 families make more than 2,700."""


def family(name: str, n: int = EACH) -> np.ndarray:
    return FAMILIES[name](np.random.default_rng(sorted(FAMILIES).index(name)), n)


def exact(state: np.ndarray) -> tuple[mp.mpf, mp.mpf]:
    """Tresca and von Mises of one state at 60 digits, from the very numbers given, by the Lode angle.

    Differences come first: at 60 digits they are as good as exact however large the mean.
    """
    xx, yy, zz, r, p, q = (mp.mpf(float(value)) for value in state)
    d3, d1, d2 = xx - yy, yy - zz, zz - xx
    a, b, c = (d3 - d2) / 3, (d1 - d3) / 3, (d2 - d1) / 3  # the deviator's diagonal
    J2 = (d1**2 + d2**2 + d3**2) / 6 + p**2 + q**2 + r**2
    J3 = a * b * c + 2 * p * q * r - a * p**2 - b * q**2 - c * r**2
    if J2 == 0:
        return mp.mpf(0), mp.mpf(0)
    sine = -3 * mp.sqrt(3) / 2 * J3 / mp.sqrt(J2) ** 3
    lode = mp.asin(max(mp.mpf(-1), min(mp.mpf(1), sine))) / 3
    return 2 * mp.sqrt(J2) * mp.cos(lode), mp.sqrt(3 * J2)


@pytest.mark.parametrize("name", FAMILIES)
def test_both_equivalents_agree_with_60_digit_arithmetic_to_2e_15(name: str) -> None:
    stress = family(name)
    got = np.stack(equivalents(stress))
    with mp.workdps(60):
        for state, pair in zip(stress.T, got.T, strict=True):
            for value, true in zip(pair, exact(state), strict=True):
                error = abs(mp.mpf(float(value)) - true)
                # beside 2e-15, half the spacing of the smallest floats, which is all that they can hold
                assert error <= max(2e-15 * true, mp.mpf(2.5e-324)), (name, state.tolist(), value)


def test_the_60_digit_reference_itself_knows_states_solved_by_hand() -> None:
    with mp.workdps(60):
        # common practice: uniaxial s gives s and s, pure shear t gives 2 t and sqrt(3) t
        for got, want in [
            (exact(np.array([7.0, 0, 0, 0, 0, 0])), (7, 7)),
            (exact(np.array([0, 0, 0, 0, 7.0, 0])), (14, 7 * mp.sqrt(3))),
            (exact(np.array([9.0, 5, 2, 0, 0, 0])), (7, mp.sqrt(37))),
        ]:
            assert mp.almosteq(got[0], want[0], 1e-28)
            assert mp.almosteq(got[1], want[1], 1e-58)


def test_random_states_agree_with_lapack_to_1e_12() -> None:
    stress = np.random.default_rng(11).normal(size=(6, 20_000)) * 100
    tresca, von_mises = equivalents(stress)
    low, middle, high = np.linalg.eigvalsh(tensor(stress)).T
    assert tresca == pytest.approx(high - low, rel=1e-12)
    distortion = ((high - middle) ** 2 + (middle - low) ** 2 + (low - high) ** 2) / 2
    assert von_mises == pytest.approx(np.sqrt(distortion), rel=1e-12)


# --- one state, many states ---------------------------------------------------------------------------------------


def bits(values: np.ndarray) -> list[int]:
    """The values as bit patterns, every NaN alike."""
    return np.where(np.isnan(values), np.nan, values).view(np.uint64).ravel().tolist()


def mixed(n: int) -> np.ndarray:
    """States of all families and sizes, and some that are not finite, in random order."""
    rng = np.random.default_rng(5)
    broken = rng.normal(size=(6, n))
    broken[rng.integers(0, 6, n), np.arange(n)] = rng.choice([np.nan, np.inf, -np.inf], n)
    zero = np.zeros((6, n))
    hydrostatic = np.repeat([[3.0], [3.0], [3.0], [0.0], [0.0], [0.0]], n, axis=1)
    everything = np.concatenate([family(name, n) for name in FAMILIES] + [broken, zero, hydrostatic], axis=1)
    return everything[:, rng.permutation(everything.shape[1])]


def test_a_batch_that_mixes_all_sizes_gives_the_bits_of_its_states_one_by_one() -> None:
    stress = mixed(40)
    together = np.stack(equivalents(stress))
    alone = np.stack([np.stack(equivalents(state)) for state in stress.T], axis=1)
    assert bits(together) == bits(alone)


@pytest.mark.parametrize("threads", [1, 2, 3])
def test_blocks_and_threads_change_no_bit(threads: int) -> None:
    stress = mixed(40)
    copies = 2 * BLOCK // stress.shape[1] + 2  # over two blocks, whose ends fall anywhere in the pattern
    got = np.stack(equivalents(np.tile(stress, copies), threads=threads))
    assert bits(got) == bits(np.tile(np.stack(equivalents(stress)), copies))


@pytest.mark.parametrize("shape", [(), (0,), (1,), (7,), (2, 3), (2, 0, 3)])
def test_results_have_the_trailing_shape_of_the_stress(shape: tuple[int, ...]) -> None:
    stress = np.random.default_rng(3).normal(size=(6, *shape))
    for result in (*equivalents(stress), max_shear(stress), in_plane_shear(stress), shear_in_plane(stress)):
        assert np.shape(result) == shape
    assert principals(stress).shape == (3, *shape)


def test_a_view_in_another_memory_order_gives_the_same_bits() -> None:
    by_state = np.ascontiguousarray(mixed(5).T)
    assert bits(np.stack(equivalents(by_state.T))) == bits(np.stack(equivalents(by_state.T.copy())))


def test_whole_numbers_are_read_as_stresses() -> None:
    assert equivalents([100, 0, 0, 0, 0, 0]) == (100.0, 100.0)


@pytest.mark.parametrize("function", [equivalents, principals, max_shear, in_plane_shear, shear_in_plane])
def test_stress_without_six_components_first_is_refused(function: Callable[[np.ndarray], object]) -> None:
    with pytest.raises(ValueError, match="expected 6 components first"):
        function(np.zeros((5, 6)))


def test_less_than_one_thread_is_refused() -> None:
    with pytest.raises(ValueError, match="threads is 0"):
        equivalents(np.zeros(6), threads=0)


# --- streaming ----------------------------------------------------------------------------------------------------


def test_streaming_writes_what_equivalents_returns() -> None:
    stress = mixed(40)
    tresca, von_mises = np.empty((2, stress.shape[1]))
    equivalents_into(stress, tresca, von_mises)
    assert bits(np.stack([tresca, von_mises])) == bits(np.stack(equivalents(stress)))


@pytest.mark.parametrize("shapes", [((6,), (1,), (1,)), ((5, 4), (4,), (4,)), ((6, 4), (3,), (4,)), ((6, 4), (4,), ())])
def test_streaming_refuses_shapes_that_do_not_fit(shapes: tuple[tuple[int, ...], ...]) -> None:
    with pytest.raises(ValueError, match="expected"):
        equivalents_into(*(np.zeros(shape) for shape in shapes))


@pytest.mark.parametrize("name", ["random", "plane"])
def test_streaming_pays_for_no_allocation(name: str) -> None:
    stress = family(name, 2 * BLOCK - 100)  # two blocks, not of one size
    results = np.empty((2, 2 * BLOCK - 100))
    equivalents_into(stress, *results)  # makes the work rows of this thread
    tracemalloc.start()
    try:
        equivalents_into(stress, *results)
        peak = tracemalloc.get_traced_memory()[1]
    finally:
        tracemalloc.stop()
    assert peak < BLOCK  # not even a byte for each state of one block


def test_threads_that_stream_at_once_do_not_disturb_each_other() -> None:
    parts = [family(name, 3000) for name in ("random", "plane", "1e+150", "uneven components")]
    results = [np.empty((2, 3000)) for _ in parts]

    def stream(stress: np.ndarray, out: np.ndarray) -> None:
        for _ in range(20):
            equivalents_into(stress, *out)

    threads = [threading.Thread(target=stream, args=pair) for pair in zip(parts, results, strict=True)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    for stress, out in zip(parts, results, strict=True):
        assert bits(out) == bits(np.stack(equivalents(stress)))


# --- states that are no ordinary number -----------------------------------------------------------------------------


@pytest.mark.filterwarnings("error")
@pytest.mark.parametrize("value", [np.nan, np.inf, -np.inf])
@pytest.mark.parametrize("component", range(6))
@pytest.mark.parametrize("plane_state", [False, True])
def test_a_state_that_is_not_finite_gives_nan_alone_and_quietly(
    value: float, component: int, plane_state: bool
) -> None:
    state = np.array([4.0, 5.0, 0.0, 6.0, 0.0, 0.0] if plane_state else [4.0, 5.0, 6.0, 1.0, 2.0, 3.0])
    stress = np.stack([state, state, state], axis=1)
    stress[component, 1] = value
    for result in (*equivalents(stress), max_shear(stress), *principals(stress)):
        assert np.isnan(result).tolist() == [False, True, False]
    assert not shear_in_plane(stress)[1]
    assert np.isnan(in_plane_shear(stress)).tolist() == [False, component in (0, 1, 3), False]


@pytest.mark.parametrize("normal", [0.0, -0.0, 30.0, -30.0, 1e308, 5e-324])
def test_no_stress_and_hydrostatic_stress_give_exactly_zero(normal: float) -> None:
    for value in equivalents([normal, normal, normal, 0.0, -0.0, 0.0]):
        assert value == 0.0
        assert not np.signbit(value)


@pytest.mark.filterwarnings("error")
@pytest.mark.parametrize(
    "state",
    [
        [1.7e308, -1.7e308, 0, 0, 0, 0],  # plane: 3.4e308 is no float
        [1.7e308, -1.7e308, 1, 0, 0, 0],  # general
        [0, 0, 0, 1.7e308, 1.7e308, 0],
    ],
)
def test_an_equivalent_beyond_the_largest_float_is_infinite(state: list[float]) -> None:
    assert equivalents(state)[0] == np.inf


def test_the_largest_stresses_that_still_have_an_equivalent_keep_it() -> None:
    # 1.7e308 - (-0.05e308): no square, sum or half of this may overflow on the way
    assert equivalents([1.7e308, -0.05e308, 0, 0, 0, 0])[0] == pytest.approx(1.75e308, rel=1e-15)
    assert equivalents([1.7e308, -0.05e308, 1, 0, 0, 0])[0] == pytest.approx(1.75e308, rel=1e-15)


# --- what holds for every state -------------------------------------------------------------------------------------

sizes = st.floats(1e-100, 1e100) | st.floats(-1e100, -1e-100) | st.just(0.0)
usual = st.floats(-1000, 1000, allow_subnormal=False)
whole = st.integers(-(10**6), 10**6).map(float)
any_float = st.floats(width=64)


def states(values: st.SearchStrategy[float]) -> st.SearchStrategy[np.ndarray]:
    """General states and, one time in three, plane ones."""
    general = st.lists(values, min_size=6, max_size=6)
    flat = st.tuples(values, values, values).map(lambda v: [v[0], v[1], 0.0, v[2], 0.0, 0.0])
    return (general | general | flat).map(lambda row: np.array(row, dtype=np.float64))


@given(states(st.floats(-5e307, 5e307)))
def test_tresca_over_von_mises_never_leaves_its_bounds(stress: np.ndarray) -> None:
    tresca, von_mises = equivalents(stress)
    spacing = 5e-324
    assert tresca >= von_mises * (1 - 4e-16) - spacing
    assert tresca <= von_mises * PURE_SHEAR_RATIO * (1 + 1e-15) + 2 * spacing


def test_tresca_over_von_mises_stays_in_bounds_where_the_bounds_are_met() -> None:
    for name in ("uniaxial", "two equal, turned", "pure shear", "pure shear, turned", "plane"):
        tresca, von_mises = equivalents(family(name, 20_000))
        ratio = tresca / von_mises
        assert ratio.min() >= 1 - 4e-16, name
        assert ratio.max() <= PURE_SHEAR_RATIO * (1 + 1e-15), name


@given(states(sizes), st.integers(-500, 500))
def test_a_power_of_two_scales_the_equivalents_exactly(stress: np.ndarray, power: int) -> None:
    scaled = np.stack(equivalents(np.ldexp(stress, power)))
    assert scaled.tolist() == np.ldexp(np.stack(equivalents(stress)), power).tolist()


def test_reversed_stress_has_the_same_equivalents_to_the_bit() -> None:
    stress = mixed(EACH)
    assert bits(np.stack(equivalents(-stress))) == bits(np.stack(equivalents(stress)))


@given(states(whole), whole)
def test_added_hydrostatic_stress_changes_nothing(stress: np.ndarray, added: float) -> None:
    shifted = stress + added * np.array([1, 1, 1, 0, 0, 0])  # whole numbers: the sum is exact
    assert np.stack(equivalents(shifted)) == pytest.approx(np.stack(equivalents(stress)), rel=3e-15)


@given(st.lists(whole, min_size=6, max_size=6).filter(lambda row: row[2] > 0), st.integers(0, 2**50))
def test_added_hydrostatic_stress_changes_no_bit_of_a_general_state(row: list[float], added: int) -> None:
    stress = np.array(row)
    shifted = stress + float(added) * np.array([1, 1, 1, 0, 0, 0])
    assert equivalents(shifted) == equivalents(stress)


@given(states(sizes))
def test_the_names_of_the_axes_do_not_matter(stress: np.ndarray) -> None:
    expected = pytest.approx(np.stack(equivalents(stress)), rel=3e-15)
    for order in permutations(range(3)):
        renamed = components(tensor(stress)[np.ix_(order, order)])
        assert np.stack(equivalents(renamed)) == expected


angles = st.floats(-np.pi, np.pi)


@given(states(usual), st.tuples(angles, angles, angles))
def test_turned_axes_change_nothing_but_rounding(stress: np.ndarray, by: tuple[float, float, float]) -> None:
    (cx, cy, cz), (sx, sy, sz) = np.cos(by), np.sin(by)
    other = rotated(stress, frame([1, 0, 0], [0, cx, sx]))
    other = rotated(other, frame([cy, 0, -sy], [0, 1, 0]))
    other = rotated(other, frame([cz, sz, 0], [-sz, cz, 0]))
    rounding = 1e-14 * np.abs(stress).max()  # of the turning itself, which the mean stress takes part in
    assert np.stack(equivalents(other)) == pytest.approx(np.stack(equivalents(stress)), abs=rounding)


@settings(max_examples=60)
@given(st.lists(states(any_float), min_size=1, max_size=12))
def test_no_company_changes_a_bit_of_a_state(batch: list[np.ndarray]) -> None:
    together = np.stack(equivalents(np.stack(batch, axis=1)))
    alone = np.stack([np.stack(equivalents(state)) for state in batch], axis=1)
    assert bits(together) == bits(alone)


@given(states(usual))
def test_the_plane_form_and_the_general_form_agree(stress: np.ndarray) -> None:
    stress[[2, 4, 5]] = 0.0
    nearly = stress + 1e-300 * np.array([0, 0, 1, 0, 0, 0])
    assert np.stack(equivalents(nearly)) == pytest.approx(np.stack(equivalents(stress)), rel=3e-15, abs=2e-300)


# --- principals and shears ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("stress", "expected"),
    [
        ([3, 1, 2, 0, 0, 0], [3, 2, 1]),  # no shear: the normals themselves, in order
        ([0.1, -0.3, 1e-17, 0, 0, 0], [0.1, 1e-17, -0.3]),  # and to the last digit
        ([5e-324, 1e308, -1e308, 0, 0, 0], [1e308, 5e-324, -1e308]),
        ([0, 0, 0, 0, 7, 0], [7, 0, -7]),  # pure shear (common practice)
        ([50, 50, 0, 50, 0, 0], [100, 0, 0]),  # uniaxial at 45 degrees
    ],
)
def test_principals_come_largest_first(stress: list[float], expected: list[float]) -> None:
    rounding = 1e-13 if any(stress[3:]) else 0.0
    assert principals(stress) == pytest.approx(expected, rel=0.0, abs=rounding)


def test_principals_agree_with_tresca_over_all_families() -> None:
    for name in FAMILIES:
        stress = family(name)
        first, second, third = principals(stress)
        assert (first >= second).all(), name
        assert (second >= third).all(), name
        rounding = 1e-14 * np.abs(stress).max(axis=0)
        assert (np.abs((first - third) - equivalents(stress)[0]) <= rounding).all(), name


@pytest.mark.parametrize(
    ("stress", "absolute", "in_plane", "inside"),
    [
        ([80, 20, 0, 0, 0, 0], 40, 30, False),  # same signs: the larger over 2, out of plane (common practice)
        ([-80, -20, 0, 0, 0, 0], 40, 30, False),  # the same in compression
        ([80, -20, 0, 0, 0, 0], 50, 50, True),  # opposite signs: in plane (common practice)
        ([80, 0, 0, 0, 0, 0], 40, 40, True),  # uniaxial: in plane as well as out of it
        ([0, 0, 0, 30, 0, 0], 30, 30, True),  # shear in the plane
        ([0, 0, 0, 0, 30, 0], 30, 0, False),  # shear across it
        ([40, 40, 40, 0, 0, 0], 0, 0, True),  # no shear anywhere
        ([80, -20, -21, 0, 0, 0], 50.5, 50, False),  # the third principal is the least
        ([80, -20, 10, 0, 0, 1e-5], 50, 50, True),  # within 1e-9: the slant counts only when squared
        ([80, -20, -20 - 2e-6, 0, 0, 0], 50.000001, 50, False),  # beyond 1e-9: 2e-8 of it
        ([1.6e308, -1.6e308, 0, 0, 0, 0], np.inf, 1.6e308, False),  # Tresca overflows, so nothing is known
    ],
)
def test_the_greatest_shear_and_its_plane(stress: list[float], absolute: float, in_plane: float, inside: bool) -> None:
    assert max_shear(stress) == pytest.approx(absolute, rel=1e-12)
    assert in_plane_shear(stress) == pytest.approx(in_plane, rel=1e-15)
    assert shear_in_plane(stress) == inside


def test_shear_in_plane_is_answered_for_each_state_of_an_array() -> None:
    stress = np.zeros((6, 2, 2))
    stress[:2] = [[[80, 80], [80, 0]], [[20, -20], [80, 0]]]
    assert shear_in_plane(stress).tolist() == [[False, True], [False, True]]
