from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pytest
from minimise.problems import PROBLEMS, REFORMER, TEN_SPECIES, build
from scipy.optimize import brentq, root

from gibbsmin.minimise import Method, Programme, Solution, Status, minimise


def amounts_of(energies: Mapping[str, float], solution: Solution) -> dict[str, float]:
    return dict(zip(energies, solution.amounts[0], strict=True))


def test_ten_species() -> None:
    """Minimum and amounts as confirmed for White, Johnson & Dantzig's problem."""
    programme = PROBLEMS["ten species"]
    solution = minimise(programme)
    n = solution.amounts[0]
    minimum = n @ (programme.energies[0] + np.log(n / n.sum()))
    assert minimum == pytest.approx(-47.76109085936572, abs=1e-12)
    expected = {
        "H(g)": 0.0406680874,
        "H2(g)": 0.147730354,
        "H2O(g)": 0.783153354,
        "N(g)": 0.00141421981,
        "N2(g)": 0.485246649,
        "NH(g)": 0.000693172078,
        "NO(g)": 0.0273993107,
        "O(g)": 0.0179472796,
        "O2(g)": 0.0373143659,
        "OH(g)": 0.0968713239,
    }
    assert amounts_of(TEN_SPECIES, solution) == pytest.approx(
        expected, rel=4e-9
    )  # nine digits are known
    np.testing.assert_allclose(
        solution.multipliers[0], [-9.78505501, -12.96892069, -15.22206015], atol=1e-8
    )
    np.testing.assert_allclose(programme.supplies[0] @ solution.multipliers[0], minimum, rtol=1e-13)


def test_methane_and_steam_at_1000_K() -> None:
    """Smith, Van Ness & Abbott, Introduction to Chemical Engineering Thermodynamics, Example
    13.14, with the book's Gibbs energies of formation in J/mol and R = 8.314 J/(mol K)."""
    printed = {"CH4(g)": 19720, "H2O(g)": -192420, "CO(g)": -200240, "CO2(g)": -395790, "H2(g)": 0}
    energies = {name: energy / (8.314 * 1000) for name, energy in printed.items()}
    solution = minimise(build(energies, {"CH4(g)": 2, "H2O(g)": 3}))
    fractions = solution.amounts[0] / solution.amounts[0].sum()
    np.testing.assert_allclose(
        fractions, [0.01958312, 0.09797391, 0.17427059, 0.03707212, 0.67110026], atol=1e-8
    )
    # The book's multipliers are those of A n = b added to the Gibbs energy, so −λ.
    np.testing.assert_allclose(
        -solution.multipliers[0], [0.763510954, 0.199418371, 25.068311589], atol=1e-8
    )


@pytest.mark.parametrize(("carbon", "steam"), [(1.0, 3.0), (1.0, 1.6), (2.0, 9.0)])
def test_reforming_by_equilibrium_constants(carbon: float, steam: float) -> None:
    """The balances and two equilibrium constants solved for the logarithms of the amounts."""
    energies = {name: REFORMER[name] for name in ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)")}
    reactions = np.array([[-1, -1, 1, 0, 3], [0, -1, -1, 1, 1]])
    log_K = -reactions @ np.array(list(energies.values()))
    elements = np.array([[1, 0, 1, 1, 0], [4, 2, 0, 0, 2], [0, 1, 1, 2, 0]])

    def misfit(log_n: np.ndarray) -> np.ndarray:
        n = np.exp(log_n)
        balance = elements @ n - [carbon, 4 * carbon + 2 * steam, steam]
        return np.r_[balance, reactions @ (log_n - np.log(n.sum())) - log_K]

    found = root(misfit, np.zeros(5), tol=1e-14)
    assert np.abs(misfit(found.x)).max() < 1e-12
    expected = np.exp(found.x)
    solution = minimise(build(energies, {"CH4(g)": carbon, "H2O(g)": steam}))
    np.testing.assert_allclose(solution.amounts[0], expected, rtol=1e-10)


def test_boudouard_by_its_equilibrium_constant() -> None:
    """CO alone over carbon: y(CO2)/y(CO)² = K, and carbon takes what CO2 leaves."""
    energies = {"CO(g)": -24.1, "CO2(g)": -47.6, "C(s)": 0.0}
    K = np.exp(2 * -24.1 + 47.6)
    fraction = brentq(lambda y: y - K * (1 - y) ** 2, 0, 1, xtol=1e-15)
    # 2 CO = CO2 + C with extent ξ: y = ξ / (1 − ξ).
    extent = fraction / (1 + fraction)
    solution = minimise(build(energies, {"CO(g)": 1}))
    np.testing.assert_allclose(solution.amounts[0], [1 - 2 * extent, extent, extent], rtol=1e-12)


def test_hydrogen_left_by_a_stoichiometric_flame_at_300_K() -> None:
    """y(H2)^1.5 = √2 exp(−91.6), of the order of 4e-27."""
    solution = minimise(PROBLEMS["stoichiometric flame"])
    hydrogen = (np.sqrt(2) * np.exp(-91.6)) ** (2 / 3)
    assert 3.5e-27 < hydrogen < 4.5e-27
    np.testing.assert_allclose(solution.amounts[0] / 2, [hydrogen, hydrogen / 2, 1.0], rtol=1e-12)


def test_fractions_near_the_smallest_number() -> None:
    """H2O = H2 + ½ O2 with g̃ = 320 + 160, and 3/2 O2 = O3 with 470 − 480: O3 holds the oxygen."""
    y = minimise(PROBLEMS["fractions near 1e-300"]).amounts[0]
    # y(H2) = 3 y(O3) + 2 y(O2); y(H2) y(O3)^(1/3) = exp(−320 − 470/3) and O2 is e^−… as abundant
    log_hydrogen = np.log(y[1])
    assert log_hydrogen + np.log(y[2]) / 2 == pytest.approx(-480.0, abs=1e-11)
    assert np.log(y[3]) - 1.5 * np.log(y[2]) == pytest.approx(10.0, abs=1e-11)
    assert y[1] == pytest.approx(2 * y[2] + 3 * y[3], rel=1e-13)
    assert y[3] < 1e-190


def test_carbon_monoxide_alone() -> None:
    n = minimise(PROBLEMS["carbon monoxide that cannot part"]).amounts[0]
    np.testing.assert_array_equal(n, [1.0, 0.0])


def test_solids_without_gas_take_the_cheapest_pair() -> None:
    """3 CaO + 2 SiO2: CaSiO3 + Ca2SiO4 (−1575) is the cheapest that closes the balance."""
    n = minimise(PROBLEMS["no gas at all"]).amounts[0]
    np.testing.assert_allclose(n, [0.0, 0.0, 1.0, 1.0], atol=1e-15)


@pytest.mark.parametrize(("energy", "burnt"), [(-426.0, False), (-424.0, True)])
def test_limestone_burns_where_its_pressure_passes_that_of_the_gas(
    energy: float, burnt: bool
) -> None:
    """CaO + CO2 is at −425."""
    energies = {"CaCO3(s)": energy, "CaO(s)": -260.0, "CO2(g)": -165.0}
    n = minimise(build(energies, {"CaCO3(s)": 1})).amounts[0]
    np.testing.assert_allclose(n, [0, 1, 1] if burnt else [1, 0, 0], atol=1e-15)


def test_limestone_at_its_pressure_is_certified() -> None:
    energies = {"CaCO3(s)": -425.0, "CaO(s)": -260.0, "CO2(g)": -165.0}
    solution = minimise(build(energies, {"CaCO3(s)": 1}))
    assert solution.certified.all()
    np.testing.assert_allclose(solution.certificate.driving_forces[0], 0.0, atol=1e-12)


def test_charges_balance_and_follow_ionisation() -> None:
    n = minimise(PROBLEMS["plasma"]).amounts[0]
    argon, argon_ion, electron, nitrogen, nitrogen_ion = n
    assert electron == pytest.approx(argon_ion + nitrogen_ion, rel=1e-13)
    assert np.log(argon_ion * electron / argon / n.sum()) == pytest.approx(-38.0, abs=1e-12)
    assert np.log(nitrogen_ion * electron / nitrogen / n.sum()) == pytest.approx(-36.0, abs=1e-12)


def test_holds_are_kept() -> None:
    held = amounts_of(REFORMER, minimise(PROBLEMS["held conversion"]))
    assert held["CH4(g)"] == pytest.approx(0.4, rel=1e-14)
    assert held["CO(g)"] == pytest.approx(held["CO2(g)"], rel=1e-13)
    difference = amounts_of(REFORMER, minimise(PROBLEMS["held difference of mixed sign"]))
    assert difference["CO(g)"] - difference["H2(g)"] == pytest.approx(-2.0, rel=1e-13)


@pytest.mark.parametrize("name", ["reformer", "reformer over carbon", "ten species", "plasma"])
@pytest.mark.parametrize("scale", [1e-6, 1e6])
def test_fractions_ignore_the_scale_of_the_supplies(name: str, scale: float) -> None:
    programme = PROBLEMS[name]
    scaled = rebuilt(programme, supplies=scale * programme.supplies)
    np.testing.assert_allclose(
        minimise(scaled).amounts / scale, minimise(programme).amounts, rtol=1e-10, atol=0
    )


@pytest.mark.parametrize("name", ["reformer", "reformer over carbon", "ten species", "plasma"])
def test_energies_may_shift_along_the_rows(name: str) -> None:
    programme = PROBLEMS[name]
    shift = np.linspace(-40, 60, programme.matrix.shape[0])
    shifted = rebuilt(programme, energies=programme.energies + shift @ programme.matrix)
    plain, moved = minimise(programme), minimise(shifted)
    np.testing.assert_allclose(moved.amounts, plain.amounts, rtol=1e-10, atol=0)
    np.testing.assert_allclose(moved.multipliers, plain.multipliers + shift, atol=1e-9)


def test_rows_may_be_replaced_by_a_mixed_basis() -> None:
    """A′ = M A, b′ = M b with M of mixed sign, and d with A′ᵀd = atoms."""
    programme = PROBLEMS["reformer over carbon"]
    M = np.array([[1.0, -2, 0, 0], [0, 1, 3, -1], [1, 1, -1, 1], [0, 0, 1, 2], [1, -1, 3, -1]])
    matrix = M @ programme.matrix
    direction = np.linalg.lstsq(matrix.T, programme.atoms, rcond=None)[0]
    mixed = rebuilt(
        programme, matrix=matrix, supplies=programme.supplies @ M.T, direction=direction
    )
    np.testing.assert_allclose(
        minimise(mixed).amounts, minimise(programme).amounts, rtol=1e-10, atol=0
    )


def test_a_batch_equals_its_states_one_by_one() -> None:
    feeds = [
        {"CH4(g)": 1.0, "H2O(g)": steam, "N2(g)": nitrogen}
        for steam in np.linspace(0.0, 3.0, 7)
        for nitrogen in (0.0, 0.1)
    ]
    programme = build(REFORMER, *feeds)
    batch = minimise(programme)
    assert batch.certified.all()
    for state in range(len(feeds)):
        single = minimise(programme.subset(state))
        np.testing.assert_allclose(batch.amounts[state], single.amounts[0], rtol=1e-10, atol=0)
        np.testing.assert_allclose(
            batch.multipliers[state], single.multipliers[0], rtol=0, atol=1e-9
        )
        assert batch.status[state] == single.status[0]


def test_a_batch_may_be_empty() -> None:
    programme = PROBLEMS["reformer"].subset(0, 0)
    solution = minimise(programme)
    assert solution.amounts.shape == (0, 7)
    assert solution.certificate.driving_forces.shape == (0, 7)
    assert solution.certified.shape == (0,)


@pytest.mark.parametrize(
    ("where", "value", "status"),
    [
        ("supplies", np.nan, Status.INVALID),
        ("supplies", np.inf, Status.INVALID),
        ("supplies", -1.0, Status.INFEASIBLE),
        ("energies", np.nan, Status.INVALID),
        ("energies", -np.inf, Status.INVALID),
    ],
)
def test_a_bad_state_is_flagged_and_the_others_are_untouched(
    where: str, value: float, status: Status
) -> None:
    programme = build(REFORMER, *[{"CH4(g)": 1.0, "H2O(g)": 2.0 + state} for state in range(3)])
    good = minimise(programme)
    spoilt = getattr(programme, where).copy()
    spoilt[1, 0] = value
    solution = minimise(rebuilt(programme, **{where: spoilt}))
    np.testing.assert_array_equal(solution.status, [Status.CERTIFIED, status, Status.CERTIFIED])
    np.testing.assert_array_equal(solution.method, [Method.COMPILED, Method.NONE, Method.COMPILED])
    for found in (solution.amounts, solution.multipliers, solution.certificate.driving_forces):
        assert np.isnan(found[1]).all()
    for name in ("gap", "balance", "stationarity"):
        assert np.isnan(getattr(solution.certificate, name)[1])
    np.testing.assert_allclose(solution.amounts[[0, 2]], good.amounts[[0, 2]], rtol=1e-12)


def test_elements_in_a_ratio_that_no_candidate_has_are_infeasible() -> None:
    """More oxygen than CO2 can take, and carbon that is nowhere to go."""
    programme = build({"CO(g)": -55.0, "CO2(g)": -160.0}, {"CO2(g)": 1}, {"CO(g)": 1})
    off = rebuilt(programme, supplies=np.array([[1.0, 2.1], [1.0, 0.9]]))
    np.testing.assert_array_equal(minimise(off).status, [Status.INFEASIBLE] * 2)


def rebuilt(programme: Programme, **changed: np.ndarray) -> Programme:
    names = ("matrix", "supplies", "energies", "gas", "direction", "atoms")
    return Programme(**{name: getattr(programme, name) for name in names} | changed)
