"""Implicit derivatives against states solved anew, and against closed forms."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import pytest

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import Programme, Solution, minimise
from gibbsmin.reactor.approach import Approach
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.derivatives import Derivatives, derivatives, energy_slopes
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library

FloatArray = npt.NDArray[np.float64]

STATES = 7
CASES = {
    "reforming": "CH4 H2O CO CO2 H2 C2H6 C(graphite) H2O(l)",
    "combustion": "CH4 O2 N2 CO CO2 H2 H2O OH NO H O",
    "sulphur": "H2S O2 N2 SO2 S2 S6 S8 COS H2O H2 CO CO2 S(l) CH4",
    "iron": "CO CO2 H2 H2O Fe3O4(cr) Fe0.947O(cr) Fe(alpha) Fe3C(cr) C(graphite)",
    "lime": "CaO(cr) CO2 H2O N2 CaCO3(calcite) Ca(OH)2(cr)",
    "ammonia": "N2 H2 NH3 Ar CH4",
    "chlorine": "HCl O2 Cl2 H2O H2 Cl N2",
}
CRITERION = 1e-6
# Traces grow by up to exp(600 Δ ln T); wider steps show the error of the difference itself.
STEP_LN_T = 5e-5


@dataclass(frozen=True)
class States:
    """Solved states of one model and how to solve their neighbours."""

    model: StageModel
    T: FloatArray
    P: FloatArray
    feed: FloatArray

    def programme(self, ln_T: float = 0.0, ln_P: float = 0.0, feed: object = 0.0) -> Programme:
        T, P = self.T * np.exp(ln_T), self.P * np.exp(ln_P)
        return self.model.programme(T, P, self.feed + np.asarray(feed, dtype=float))

    @property
    def solution(self) -> Solution:
        return minimise(self.programme())

    def derivatives(self) -> Derivatives:
        solution = self.solution
        slopes = mixture_slopes(self.model.mixture, self.T, self.P, solution.amounts)
        return derivatives(
            self.programme(),
            solution,
            energy_slopes(self.model, self.T, slopes.enthalpies),
            slopes.energies_by_pressure,
            self.model.balance.feed_matrix,
        )

    def difference(self, change: Callable[[float], Programme], step: float) -> FloatArray:
        """Central difference of the fourth order."""

        def amounts(h: float) -> FloatArray:
            return minimise(change(h)).amounts

        near = amounts(step) - amounts(-step)
        far = amounts(2 * step) - amounts(-2 * step)
        return (8 * near - far) / (12 * step)


def make_states(names: str, chemistry: Chemistry | None = None, seed: int = 7) -> States:
    random = np.random.default_rng(seed)
    library = load_library()
    records = [library.resolve(name) for name in names.split()]
    consider = tuple(record.name for record in records)
    chemistry = chemistry or Chemistry(Selection(consider=consider))
    fed = records[:4]
    return States(
        stage_model(chemistry, fed, library),
        T=random.uniform(500.0, 2200.0, STATES),
        P=10 ** random.uniform(4.0, 7.0, STATES),
        feed=10 ** random.uniform(-1.0, 1.0, (STATES, len(fed))),
    )


def same_phases(states: States, programmes: list[Programme]) -> npt.NDArray[np.bool_]:
    """Where the neighbours hold the same phases, so that a difference has a meaning."""
    here = states.solution.amounts > 0.0
    kept = [(minimise(p).amounts > 0.0) == here for p in programmes]
    return np.asarray(np.all(kept, axis=(0, 2)))


def assert_close(found: FloatArray, difference: FloatArray, natural: FloatArray) -> None:
    """|analytic − central| ≤ 1e-6 max(|d|, 0.01 n × the natural unit)."""
    scale = np.maximum(np.abs(difference), 0.01 * natural)
    assert (np.abs(found - difference) <= CRITERION * scale).all()


@pytest.mark.parametrize("case", CASES)
def test_derivatives_meet_central_differences_of_solved_states(case: str) -> None:
    states = make_states(CASES[case])
    found, amounts = states.derivatives(), states.solution.amounts
    assert found.regular.sum() >= STATES - 1
    kept = found.regular & same_phases(
        states, [states.programme(ln_T=h, ln_P=k) for h, k in ((1e-3, 0), (-1e-3, 0), (0, 2e-3))]
    )
    assert kept.sum() >= STATES - 2
    by_T = states.difference(lambda h: states.programme(ln_T=h), STEP_LN_T)
    by_P = states.difference(lambda h: states.programme(ln_P=h), 1e-3)
    assert_close(found.log_temperature[kept], by_T[kept], amounts[kept])
    assert_close(found.log_pressure[kept], by_P[kept], amounts[kept])
    mixed = states.feed * [1.0, -0.5, 0.3, -0.2]
    by_feed = states.difference(lambda h: states.programme(feed=h * mixed), 3e-4)
    along = np.einsum("bsk,bk->bs", found.directions, mixed)
    assert_close(along[kept], by_feed[kept], amounts[kept])


def test_an_approach_and_an_offset_are_followed() -> None:
    reforming = {"CH4(g)": -1.0, "H2O(g)": -1.0, "CO(g)": 1.0, "H2(g)": 3.0}
    chemistry = Chemistry(
        Selection(consider=("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")),
        approaches=(Approach("CH4 + H2O = CO + 3 H2", reforming, 15.0),),
        offsets={"C(graphite)": 4000.0},
    )
    states = make_states("CH4 H2O CO CO2", chemistry)
    found = states.derivatives()
    assert found.regular.all()
    by_T = states.difference(lambda h: states.programme(ln_T=h), STEP_LN_T)
    assert_close(found.log_temperature, by_T, states.solution.amounts)


def test_a_dimerisation_has_the_derivative_of_its_closed_form() -> None:
    """With degree α of dissociation of A2 and K = 4α²P/(1 − α²): ∂α/∂ln P = −α(1 − α²)/2."""
    states = make_states("O2 O")
    states = States(states.model, np.array([3200.0]), np.array([1e5]), np.array([[1.0, 0.0]]))
    found, (amounts,) = states.derivatives(), states.solution.amounts
    alpha = amounts[1] / 2
    enthalpies = states.model.properties.enthalpy(3200.0)
    heat = (2 * enthalpies[1] - enthalpies[0]) / (GAS_CONSTANT * 3200.0)
    slope = alpha * (1 - alpha**2) / 2
    assert found.log_pressure[0] == pytest.approx([slope, -2 * slope], rel=1e-9)
    assert found.log_temperature[0] == pytest.approx([-heat * slope, 2 * heat * slope], rel=1e-9)


def test_a_change_of_all_feeds_in_proportion_changes_all_amounts_in_proportion() -> None:
    states = make_states(CASES["iron"])
    found, amounts = states.derivatives(), states.solution.amounts
    along = np.einsum("bsk,bk->bs", found.directions, states.feed)
    kept = found.regular
    # Two paths of round-off; amounts reach down to those of traces, each by its own size.
    assert along[kept] == pytest.approx(amounts[kept], rel=1e-9, abs=0.0)


def test_a_state_without_gas_has_no_derivatives() -> None:
    states = make_states("CaO(cr) Al2O3(alpha) CaAl2O4(cr)")
    found = states.derivatives()
    assert not found.regular.any()
    assert np.isnan(found.log_temperature).all()


def test_a_decomposition_at_its_own_pressure_has_no_derivatives() -> None:
    """CaCO3, CaO and CO2 alone: T and P are not independent while all three are there."""
    states = make_states("CaO(cr) CO2 CaCO3(calcite)")
    gibbs = states.model.properties.gibbs_energy(1100.0)
    names = [record.name for record in states.model.records]
    nu = np.array([{"CaCO3(calcite)": -1.0}.get(name, 1.0) for name in names])
    pressure = 1e5 * np.exp(-gibbs @ nu / (GAS_CONSTANT * 1100.0))
    states = States(states.model, np.array([1100.0]), np.array([pressure]), np.ones((1, 3)))
    assert not states.derivatives().regular.any()


def test_a_new_element_has_no_derivative_while_the_others_do() -> None:
    states = make_states("N2 H2 NH3 Ar")
    feed = states.feed.copy()
    feed[:, 3] = 0.0
    found = States(states.model, states.T, states.P, feed).derivatives()
    assert found.regular.all()
    assert np.isnan(found.directions[..., 3]).all()
    assert np.isfinite(found.directions[..., :3]).all()
    assert np.isfinite(found.log_temperature).all()
