from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from minimise.problems import PROBLEMS, REFORMER, build

from gibbsmin.minimise import Certificate, Programme, Settings, minimise
from gibbsmin.minimise.certificate import certify

WATER = build({"H2(g)": 0.0, "O2(g)": 0.0, "H2O(g)": -5.0}, {"H2(g)": 2, "O2(g)": 1})


def gibbs_energy(programme: Programme, amounts: np.ndarray) -> float:
    gas = programme.gas & (amounts > 0)
    mixing = amounts[gas] @ np.log(amounts[gas] / amounts[gas].sum())
    return float(programme.energies[0] @ amounts + mixing)


def certify_all(programme: Programme, amounts: np.ndarray, multipliers: np.ndarray) -> Certificate:
    face = np.ones((1, amounts.size), dtype=np.bool_)
    return certify(programme, amounts[None], multipliers[None], face)


def test_values_by_hand() -> None:
    """Equal amounts of the three gases, λ_H = −1, λ_O = −2; ε = ln(e⁻² + e⁻⁴ + e) by hand."""
    amounts = np.ones(3)
    proof = certify_all(WATER, amounts, np.array([-1.0, -2.0]))
    # a·λ − g̃ of H2, O2, H2O: −2, −4, −4 + 5
    np.testing.assert_allclose(proof.driving_forces[0], [-2.0, -4.0, 1.0])
    # The largest misfit is that of O2: −ln 3 + 4.
    assert proof.stationarity[0] == pytest.approx(4.0 - np.log(3.0))
    # b = (4, 2), A n = (4, 3): the oxygen row is off by 1 in 5.
    assert proof.balance[0] == pytest.approx(0.2)
    violation = np.log(np.exp(-2.0) + np.exp(-4.0) + np.exp(1.0))
    termwise = 3 * -np.log(3.0) + 2.0 + 4.0 - 1.0 + violation * (2 + 2 + 3)
    unbalanced = abs((-2.0 - violation) * -1.0)
    assert proof.gap[0] == pytest.approx((termwise + unbalanced) / 7.0)


def test_condensed_violation_is_repaired() -> None:
    programme = build({"C(s)": 1.0, "CO(g)": 0.0, "O2(g)": 0.0}, {"C(s)": 1, "O2(g)": 1})
    proof = certify_all(programme, np.array([1.0, 0.0, 1.0]), np.array([1.5, -3.0]))
    # ε = 0.5, so λ′ = (1, −3.5): gap = C(s): 0, O2: 0 + 7, over 3 atoms.
    assert proof.gap[0] == pytest.approx(7.0 / 3.0)
    assert proof.stationarity[0] == np.inf  # CO is zero though its potential asks for e⁻¹·⁵


def test_gap_bounds_the_error_of_any_feasible_amounts() -> None:
    """Weak duality: the bound holds for every multiplier, and for amounts far from optimal."""
    programme = PROBLEMS["reformer"].subset(0)
    best = minimise(programme)
    minimum = gibbs_energy(programme, best.amounts[0])
    # CH4 + H2O = CO + 3 H2 and CO + H2O = CO2 + H2 leave the balance closed.
    reactions = np.array([[-1, -1, 1, 0, 3, 0, 0], [0, -1, -1, 1, 1, 0, 0]], dtype=np.float64)
    random = np.random.default_rng(1)
    reach = 0.2 * best.amounts[0, 0]  # methane is the scarcest that reacts
    for _ in range(200):
        amounts = best.amounts[0] + random.uniform(-reach, reach, 2) @ reactions
        assert (amounts >= 0).all()
        multipliers = best.multipliers[0] + random.normal(size=4) * 10.0 ** random.uniform(-6, 1)
        proof = certify_all(programme, amounts, multipliers)
        excess = gibbs_energy(programme, amounts) - minimum
        assert proof.balance[0] < 1e-14
        assert proof.gap[0] * (amounts @ programme.atoms) >= excess - 1e-12
        assert excess >= -1e-12


def test_gap_grows_with_the_square_of_the_composition_error() -> None:
    programme = PROBLEMS["reformer"].subset(0)
    best = minimise(programme)
    reaction = np.array([0, -1, -1, 1, 1, 0, 0], dtype=np.float64)
    gaps, errors = [], []
    for extent in (1e-4, 1e-5):
        proof = certify_all(programme, best.amounts[0] + extent * reaction, best.multipliers[0])
        gaps.append(proof.gap[0])
        errors.append(proof.stationarity[0])
    assert gaps[0] / gaps[1] == pytest.approx(100.0, rel=0.01)
    assert errors[0] / errors[1] == pytest.approx(10.0, rel=0.01)


@pytest.mark.parametrize("fault", ["composition", "phase", "balance", "multipliers", "zeroed"])
def test_a_wrong_answer_is_not_within_the_tolerances(fault: str) -> None:
    name = "reformer over carbon" if fault == "phase" else "reformer"
    programme = PROBLEMS[name].subset(0)
    best = minimise(programme)
    amounts, multipliers = best.amounts[0].copy(), best.multipliers[0].copy()
    if fault == "composition":
        amounts += 1e-8 * np.array([0, -1, -1, 1, 1, 0, 0])
    elif fault == "phase":
        without = build(
            {species: energy for species, energy in REFORMER.items() if species != "C(s)"},
            {"CH4(g)": 3, "H2O(g)": 0.5, "N2(g)": 0.1},
        )
        other = minimise(without)
        amounts, multipliers = np.append(other.amounts[0], 0.0), other.multipliers[0]
    elif fault == "balance":
        amounts[5] *= 1.0 + 1e-10
    elif fault == "multipliers":
        multipliers[0] += 1e-8
    else:
        amounts[6] = amounts[0] = 0.0
    assert certify_all(programme, best.amounts[0], best.multipliers[0]).within(Settings())[0]
    assert not certify_all(programme, amounts, multipliers).within(Settings())[0]


def test_species_outside_the_face_do_not_count() -> None:
    programme = PROBLEMS["element at zero amount"]
    solution = minimise(programme)
    absent = np.zeros(9, dtype=np.bool_)
    absent[[5, 7, 8]] = True  # N2, SO2, H2S
    np.testing.assert_array_equal(solution.certificate.driving_forces[0] == -np.inf, absent)
    np.testing.assert_array_equal(solution.amounts[0, absent], 0.0)
    np.testing.assert_array_equal(  # rows C, H, N, O, S
        np.isnan(solution.multipliers[0]), [False, False, True, False, True]
    )


def test_nan_is_never_within() -> None:
    nothing = np.array([np.nan])
    proof = Certificate(nothing, np.zeros(1), np.zeros(1), np.zeros((1, 1)))
    assert not proof.within(Settings())[0]
    assert not replace(proof, gap=np.zeros(1), balance=nothing).within(Settings())[0]
    assert not replace(proof, gap=np.zeros(1), stationarity=nothing).within(Settings())[0]
