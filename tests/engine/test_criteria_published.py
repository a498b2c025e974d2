"""The kernel against figures that others have published, and against facts of the trade.

Each row names an entry of tests/reference/check_values.toml; source and mark stand beside it, as there: `confirmed`
is a figure that was seen, `from memory` one that was only recomputed.
"""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from scipy.optimize import brentq

from engine.criteria import equivalents, in_plane_shear, max_shear, principals
from engine.stress import mean

from ..reference import check, checks

Figures = dict[str, Any]
Answer = Callable[[Figures], Figures]

INPUTS = {"sigma_x": 0, "sigma_y": 1, "sigma_z": 2, "tau_xy": 3, "tau_yz": 4, "tau_xz": 5}


def state(xx: float = 0.0, yy: float = 0.0, zz: float = 0.0, xy: float = 0.0) -> np.ndarray:
    return np.array([xx, yy, zz, xy, 0.0, 0.0])


def given_state(inputs: Figures) -> np.ndarray:
    """The stress of an entry that gives it by components: one state, or several side by side."""
    rows = {INPUTS[name]: value for name, value in inputs.items() if name in INPUTS}
    stress = np.zeros((6, *np.shape(rows[0])))
    for row, value in rows.items():
        stress[row] = value
    return stress


def tresca(stress: np.ndarray) -> Any:
    return equivalents(stress)[0]


def von_mises(stress: np.ndarray) -> Any:
    return equivalents(stress)[1]


def where(equivalent: Callable[[float], float], limit: float, low: float, high: float) -> float:
    """The quantity between `low` and `high` at which an equivalent stress reaches its limit."""
    return float(brentq(lambda quantity: equivalent(quantity) - limit, low, high, rtol=1e-12))


def strength_factors(inputs: Figures) -> Figures:
    stress = given_state(inputs)
    return {"fos_tresca": inputs["S_y"] / tresca(stress), "fos_mises": inputs["S_y"] / von_mises(stress)}


def dieter(inputs: Figures) -> Figures:
    stress = given_state(inputs)
    return {"sigma_mises": von_mises(stress), "fos_mises": inputs["S_y"] / von_mises(stress)}


def octahedral(inputs: Figures) -> Figures:
    stress = given_state(inputs)
    shear, octahedral_shear = max_shear(stress), np.sqrt(2) / 3 * von_mises(stress)
    return {
        "principals": principals(stress),
        "tau_max": shear,
        "tau_oct": octahedral_shear,
        "tau_max_over_tau_oct": shear / octahedral_shear,
        "sigma_mises": von_mises(stress),
        "sigma_tresca": tresca(stress),
    }


def principals_and_shear(inputs: Figures) -> Figures:
    stress = given_state(inputs)
    return {"principals": principals(stress), "tau_max": max_shear(stress)}


def allowed_torque(inputs: Figures) -> Figures:
    """Of a round shaft in bending and torsion: bending 32 M / (pi d^3), torsion 16 T / (pi d^3), kip in to kip ft."""
    section = np.pi * inputs["d_in"] ** 3 / 32
    bending = 12 * inputs["M_kip_ft"] / section

    def allowed(equivalent: Callable[[np.ndarray], float]) -> float:
        return where(lambda T: equivalent(state(bending, xy=12 * T / (2 * section))), inputs["S_y_ksi"], 0, 100)

    return {"T_allow_tresca_kip_ft": allowed(tresca), "T_allow_mises_kip_ft": allowed(von_mises)}


def thin_cylinder(inputs: Figures) -> Figures:
    """Hoop p d / 2t and axial p d / 4t, nothing through the wall."""
    hoop_times_t = inputs["p_MPa"] * inputs["d_inner_m"] * 1000 / 2
    limit = inputs["S_y"] / inputs["fos"]

    def wall(equivalent: Callable[[np.ndarray], float]) -> float:
        return where(lambda t: equivalent(state(hoop_times_t / t, hoop_times_t / t / 2)), limit, 1, 100)

    return {"t_tresca_mm": wall(tresca), "t_mises_mm": wall(von_mises)}


def bolt(inputs: Figures) -> Figures:
    """Mean tension and mean shear over the bolt's area."""

    def stressed(d: float) -> float:
        area = np.pi * d**2 / 4
        return float(von_mises(state(inputs["P_N"] / area, xy=inputs["V_N"] / area)))

    return {"d_mm": where(stressed, inputs["S_y"] / inputs["fos"], 1, 100)}


def shaft_diameter(inputs: Figures) -> Figures:
    """Of a round shaft in bending and torsion, kN m to N mm."""

    def diameter(equivalent: Callable[[np.ndarray], float]) -> float:
        def stressed(d: float) -> float:
            section = np.pi * d**3 / 32
            return equivalent(state(inputs["M_kNm"] * 1e6 / section, xy=inputs["Mt_kNm"] * 1e6 / (2 * section)))

        return where(stressed, inputs["S_y"] / inputs["fos"], 10, 1000)

    return {"d_tresca_mm": diameter(tresca), "d_mises_mm": diameter(von_mises)}


def hydrostatic(inputs: Figures) -> Figures:
    stress = state(inputs["sigma_1"], inputs["sigma_2"], inputs["sigma_3"])
    found = [tresca(stress), von_mises(stress)]
    return {"sigma_tresca": found[0], "sigma_mises": found[1], "margin_is_infinite": found == [0.0, 0.0]}


def both_shears(inputs: Figures) -> Figures:
    stress = state(inputs["sigma_1"], inputs["sigma_2"], inputs["sigma_3"])
    return {"tau_abs_max": max_shear(stress), "tau_in_plane": in_plane_shear(stress)}


def ratio_bounds(_: Figures) -> Figures:
    extremes = np.stack([state(1), state(-1), state(1, 1), state(xy=1), state(1, -1), state(2, 1)], axis=1)
    random = np.random.default_rng(0).normal(size=(6, 20_000))
    ratio = np.divide(*equivalents(np.concatenate([extremes, random], axis=1)))
    return {"ratio_min": ratio.min(), "ratio_max": ratio.max()}


def shear_yield(_: Figures) -> Figures:
    shear = state(xy=1.0)
    return {"tau_y_over_Sy_mises": 1 / von_mises(shear), "tau_y_over_Sy_tresca": 1 / tresca(shear)}


def plane_peak(inputs: Figures) -> Figures:
    stress = state(1.0, inputs["sigma_2_over_sigma_1"])
    return {
        "sigma_1_at_yield_mises": inputs["S_y"] / von_mises(stress),
        "sigma_1_at_yield_tresca": inputs["S_y"] / tresca(stress),
    }


def shaft_surface(inputs: Figures) -> Figures:
    stress = state(inputs["sigma"], xy=inputs["tau"])
    return {"sigma_mises": von_mises(stress), "sigma_tresca": tresca(stress)}


def shifted(inputs: Figures) -> Figures:
    stress = given_state(inputs)
    stress[:3] += inputs["shift"]
    return {"sigma_mises": von_mises(stress), "sigma_tresca": tresca(stress)}


def eurocode(inputs: Figures) -> Figures:
    design = inputs["f_y"] / inputs["gamma_M0"]
    use = von_mises(state(inputs["sigma_x_Ed"], inputs["sigma_z_Ed"], xy=inputs["tau_Ed"])) / design
    return {"criterion_value": use**2, "sqrt_of_criterion": use, "passes": use <= 1}


def local_criterion(inputs: Figures) -> Figures:
    first, second = state(*inputs["case_1"]), state(*inputs["case_2"])
    sums, limit = 3 * mean(np.stack([first, second], axis=1)), 4 * inputs["S"]
    return {
        "sum_1": sums[0],
        "limit": limit,
        "passes_1": sums[0] <= limit,
        "sum_2": sums[1],
        "passes_2": sums[1] <= limit,
        "mises_2": von_mises(second),
    }


PUBLISHED: list[tuple[str, Answer]] = [
    # Boresi & Schmidt, Advanced Mechanics of Materials, ch. 4, p. 124: confirmed
    ("crit-boresi-p124", strength_factors),
    # Dieter, Mechanical Metallurgy, 3rd ed., Example 3-2, p. 78: confirmed
    ("crit-dieter-3-2", dieter),
    # Boresi & Schmidt, ch. 2, p. 46 (von Mises = 3/sqrt(2) tau_oct added): confirmed
    ("crit-boresi-2-oct", octahedral),
    # Boresi & Schmidt, ch. 2, p. 45: confirmed
    ("crit-boresi-2-4", principals_and_shear),
    # Pytel & Kiusalaas, Mechanics of Materials, Example 12.7, p. 440: confirmed
    ("crit-pytel-12-7", allowed_torque),
    # Bansal, A Textbook of Strength of Materials, Problem 24.12, p. 1027: confirmed
    ("crit-bansal-24-12", thin_cylinder),
    # Bansal, Problem 24.10, p. 1019: confirmed
    ("crit-bansal-24-10", bolt),
    # Ugural & Fenster, Advanced Strength and Applied Elasticity, Example 4.1, p. 101: confirmed
    ("crit-ugural-4-1", shaft_diameter),
    # Budynas & Nisbett, Shigley's Mechanical Engineering Design, Example 5-1 (a) to (d): from memory
    ("crit-shigley-e5-1", strength_factors),
    # the same, Example 5-1 (e), hydrostatic: from memory
    ("crit-shigley-e5-1e", hydrostatic),
    # Hibbeler, Mechanics of Materials, Example 9.10, p. 476: confirmed
    ("crit-abs-shear-hibbeler-9-10", both_shears),
    # algebraic identity; e.g. Dowling or Shigley ch. 5: from memory
    ("crit-ratio-bounds", ratio_bounds),
    # Shigley ch. 5, Eqs. 5-3 and 5-21: from memory
    ("crit-shear-yield-ratio", shear_yield),
    # algebraic identity, tip of the plane-stress ellipse: from memory
    ("crit-plane-stress-peak", plane_peak),
    # tension-torsion tubes after Taylor & Quinney; Shigley Eq. 5-15: from memory
    ("crit-shaft-surface", shaft_surface),
    # identity, on the state of Dieter Example 3-2: from memory
    ("crit-hydrostatic-shift", shifted),
    # EN 1993-1-1:2005, 6.2.1(5), Eq. (6.1): from memory
    ("crit-ec3-6-2-1-5", eurocode),
    # ASME BPVC Section VIII Division 2, 5.3.2: confirmed
    ("crit-asme-local-4S", local_criterion),
]

NOT_OF_THE_KERNEL = {"crit-aisc-g2-w24x62"}
"""A code's shear strength of a web, with 0.6 in place of 0.577: no equivalent stress is formed."""


@pytest.mark.parametrize(("id", "answer"), PUBLISHED, ids=[row[0] for row in PUBLISHED])
def test_published_figure_is_met(id: str, answer: Answer) -> None:
    entry = check(id)
    found = answer(entry["inputs"])
    assert found.keys() == entry["expected"].keys()
    for name, printed in entry["expected"].items():
        where_from = f"{id} {name}: {entry['source']} [{entry['mark']}]"
        tolerance = entry["tolerance"].get(name, 0.0)  # true or false has none
        assert np.max(np.abs(np.subtract(found[name], printed, dtype=float))) <= tolerance, where_from


def test_every_published_criterion_is_tested_or_named_as_none_of_the_kernels() -> None:
    assert {entry["id"] for entry in checks("1 criteria")} == {row[0] for row in PUBLISHED} | NOT_OF_THE_KERNEL


@pytest.mark.parametrize(
    ("stress", "expected_tresca", "expected_von_mises"),
    [
        # shear at yield is half the yield under Tresca, 0.577 of it under von Mises: common practice
        (state(xy=0.5), 1.0, 0.5 * np.sqrt(3)),
        (state(xy=1 / np.sqrt(3)), 2 / np.sqrt(3), 1.0),
        # uniaxial tension s: both theories give s: common practice
        (state(235.0), 235.0, 235.0),
        # equal biaxial tension s: both theories give s: common practice
        (state(235.0, 235.0), 235.0, 235.0),
        # uniaxial s with shear t: sqrt(s^2 + 4 t^2) and sqrt(s^2 + 3 t^2): common practice
        (state(120.0, xy=35.0), np.sqrt(120.0**2 + 4 * 35.0**2), np.sqrt(120.0**2 + 3 * 35.0**2)),
        # biaxial of one sign: Tresca is the larger, its half the absolute maximum shear: common practice
        (state(80.0, 50.0), 80.0, 70.0),
        (state(-80.0, -50.0), 80.0, 70.0),
        # biaxial of opposite signs: Tresca is the difference: common practice
        (state(80.0, -70.0), 150.0, 130.0),
    ],
)
def test_fact_of_the_trade_holds(stress: np.ndarray, expected_tresca: float, expected_von_mises: float) -> None:
    assert equivalents(stress) == pytest.approx((expected_tresca, expected_von_mises), rel=4e-16)
