"""Temperature as an unknown of the minimiser: against the bracketed search and the library."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
import pytest

import gibbsmin.reactor.conditions as conditions
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import Settings, minimise, minimise_heated
from gibbsmin.minimise.kernel.heat import evaluate_energies
from gibbsmin.minimise.kernel.storage import network_of, scratch_for
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import at_enthalpy, at_temperature
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library

FloatArray = npt.NDArray[np.float64]

STATES = 200
CASES = {
    "reforming": "CH4 H2O CO CO2 H2 N2 O2 C2H6 C(graphite) H2O(l)",
    "combustion": "CH4 O2 N2 CO CO2 H2 H2O OH NO H O",
    "sulphur": "H2S O2 N2 SO2 S2 S6 S8 COS H2O H2 CO CO2 S(l) CH4",
    "iron": "CO CO2 H2 H2O Fe3O4(cr) Fe0.947O(cr) Fe(alpha) Fe3C(cr) C(graphite)",
    "lime": "CaO(cr) CO2 N2 H2O CaCO3(calcite) Ca(OH)2(cr)",
}


def model_of(names: str) -> StageModel:
    library = load_library()
    records = [library.resolve(name) for name in names.split()]
    chemistry = Chemistry(
        Selection(consider=tuple(record.name for record in records)),
        offsets={"C(graphite)": 3000.0} if "C(graphite)" in names else {},
    )
    return stage_model(chemistry, records[:4], library)


def random_states(model: StageModel, seed: int) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Temperatures, pressures and feeds."""
    random = np.random.default_rng(seed)
    return (
        random.uniform(400.0, 2500.0, STATES),
        10 ** random.uniform(4.0, 7.0, STATES),
        10 ** random.uniform(-1.0, 1.0, (STATES, len(model.feed_records))),
    )


@pytest.mark.parametrize("case", CASES)
def test_the_temperature_of_a_known_enthalpy_is_found_again(case: str) -> None:
    model = model_of(CASES[case])
    T, P, feed = random_states(model, seed=3)
    there = at_temperature(model, T, P, feed)
    enthalpy = model.mixture.enthalpy(T, P, there.amounts)
    found = at_enthalpy(model, enthalpy, P, feed, start=np.full(STATES, 700.0))
    assert found.solution.certified.all()
    # Where condensed forms meet, any split at that temperature has an enthalpy of its own.
    plain = np.isnan(found.upper_share)
    assert plain.sum() >= STATES - 3
    assert found.temperature[plain] == pytest.approx(T[plain], rel=1e-11)
    total = there.amounts.sum(axis=1, keepdims=True)
    assert (np.abs(found.amounts - there.amounts)[plain] <= 1e-9 * total[plain]).all()


@pytest.mark.parametrize("case", CASES)
def test_hardly_any_state_is_left_to_the_bracketed_search(case: str) -> None:
    model = model_of(CASES[case])
    T, P, feed = random_states(model, seed=4)
    enthalpy = model.mixture.enthalpy(T, P, at_temperature(model, T, P, feed).amounts)
    start = np.full(STATES, 1000.0)
    solution, found = minimise_heated(*model.heated_programme(enthalpy, P, feed, start))
    assert solution.certified.mean() >= 0.97
    assert np.isnan(found[~solution.certified]).all()


def test_neighbours_on_a_grid_give_what_each_state_gives_by_itself() -> None:
    model = model_of(CASES["combustion"])
    feed = np.column_stack([np.full(400, 1.0), np.linspace(1.2, 3.0, 400), np.full((400, 2), 3.0)])
    enthalpy = np.linspace(-1e5, 2e5, 400)
    P = np.full(400, 1e5)
    problem = model.heated_programme(enthalpy, P, feed, np.full(400, 600.0))
    warm, T_warm = minimise_heated(*problem)
    cold, T_cold = minimise_heated(*problem, Settings(warm_start=False))
    assert warm.certified.all()
    assert cold.certified.all()
    assert T_warm == pytest.approx(T_cold, rel=1e-11)
    assert warm.amounts == pytest.approx(cold.amounts, rel=1e-8, abs=1e-11)


def test_the_kernels_energies_are_the_librarys() -> None:
    model = model_of(CASES["iron"])
    T = np.array([1234.5])
    P = np.array([3e5])
    programme, warmth = model.heated_programme(np.zeros(1), P, np.ones((1, 4)), T)
    network = network_of(programme.matrix, programme.gas, programme.direction, programme.atoms)
    scratch = scratch_for(network, warmth.pieces.reshape(7, -1), np.array(warmth.breaks))
    scratch.heat.offset[:] = warmth.offsets[0]
    scratch.heat.constant[:] = programme.energies[0]
    for temperature in (150.0, 298.15, 700.0, 1042.0, 1184.9, 3000.0):
        evaluate_energies(scratch.state, scratch.heat, temperature)
        at = np.array([temperature])
        assert scratch.state.energies == pytest.approx(model.energies(at, P)[0], rel=1e-12)
        H = model.properties.enthalpy(at)[0] + model.shift.offsets
        H = H + model.mixture.pressure_terms(P)[0]
        assert scratch.heat.enthalpy * GAS_CONSTANT == pytest.approx(H, rel=1e-12)
        Cp = model.properties.heat_capacity(at)[0]
        assert scratch.heat.capacity * GAS_CONSTANT == pytest.approx(Cp, rel=1e-12)


def test_the_answer_is_the_certified_one_of_its_temperature() -> None:
    model = model_of(CASES["sulphur"])
    T, P, feed = random_states(model, seed=5)
    enthalpy = model.mixture.enthalpy(T, P, at_temperature(model, T, P, feed).amounts)
    solution, found = minimise_heated(
        *model.heated_programme(enthalpy, P, feed, np.full(STATES, 900.0))
    )
    done = solution.certified
    again = minimise(model.programme(found[done], P[done], feed[done]))
    assert again.amounts == pytest.approx(solution.amounts[done], rel=1e-7, abs=1e-11)
    assert (solution.certificate.gap[done] <= Settings().gap_tolerance).all()


def test_a_state_without_a_finite_enthalpy_is_flagged_and_the_rest_untouched() -> None:
    model = model_of(CASES["reforming"])
    T, P, feed = random_states(model, seed=6)
    enthalpy = model.mixture.enthalpy(T, P, at_temperature(model, T, P, feed).amounts)
    broken = enthalpy.copy()
    broken[5] = np.nan
    start = np.full(STATES, 800.0)
    one = at_enthalpy(model, broken, P, feed, start)
    other = at_enthalpy(model, enthalpy, P, feed, start)
    assert np.isnan(one.temperature[5])
    assert np.isnan(one.amounts[5]).all()
    kept = np.arange(STATES) != 5
    assert one.temperature[kept] == pytest.approx(other.temperature[kept], rel=1e-11)


def test_a_melt_is_left_to_the_search_that_splits_it() -> None:
    """Half of the heat of melting of alumina in argon: the plateau at 2327 K with its split."""
    library = load_library()
    records = [library[name] for name in ("Ar(g)", "Al2O3(alpha)", "Al2O3(l)")]
    chemistry = Chemistry(Selection(consider=tuple(record.name for record in records)))
    model = stage_model(chemistry, records[:2], library)
    feed, P = np.ones((1, 2)), np.array([1e5])
    below = model.properties.enthalpy(2327.0)
    enthalpy = np.array([below[0] + (below[1] + below[2]) / 2])
    start = np.array([2000.0])
    solution, _ = minimise_heated(*model.heated_programme(enthalpy, P, feed, start))
    assert not solution.certified[0]
    found = conditions.at_enthalpy(model, enthalpy, P, feed, start)
    assert found.temperature[0] == pytest.approx(2327.0, abs=0.1)
    assert found.upper_share[0] == pytest.approx(0.5, abs=0.01)
