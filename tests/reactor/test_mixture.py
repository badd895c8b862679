"""Solids and liquids under pressure, against hand calculations."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import at_temperature
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.model import stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

LIBRARY = load_library()


def test_pressure_raises_enthalpy_and_gibbs_energy_of_solids_by_their_volume_alone() -> None:
    records = [LIBRARY["N2(g)"], LIBRARY["C(graphite)"]]
    mixture = Mixture.of(PropertyTable.of(records))
    T, carbon = 1000.0, np.array([0.0, 1.0])
    # 5.30 cm³/mol (density 2.27 g/cm³, handbook) times 999 bar: 529 J.
    assert mixture.enthalpy(T, 1e8, carbon) - mixture.enthalpy(T, 1e5, carbon) == pytest.approx(
        529.0, abs=3.0
    )
    assert mixture.entropy(T, 1e8, carbon) == mixture.entropy(T, 1e5, carbon)
    assert mixture.internal_energy(T, 1e8, carbon) == pytest.approx(
        mixture.internal_energy(T, 1e5, carbon), rel=1e-12
    )
    energies = mixture.reduced_energies(np.array([T, T]), np.array([1e5, 1e8]))
    assert np.diff(energies[:, 1])[0] == pytest.approx(529.0 / (GAS_CONSTANT * T), rel=6e-3)
    assert np.diff(energies[:, 0])[0] == pytest.approx(np.log(1000.0), rel=1e-12)


def test_water_under_pressure_evaporates_more() -> None:
    """Poynting's factor exp(V (P − p)/RT): 1.0753 at 25 °C and 100 bar with V = 18.07 cm³/mol."""
    feed = [LIBRARY["N2(g)"], LIBRARY["H2O(l)"]]
    model = stage_model(Chemistry(reactions="none", condense=("H2O",)), feed, LIBRARY)
    P = np.array([1e5, 100e5])
    found = at_temperature(model, np.full(2, 298.15), P, np.array([[10.0, 1.0], [100.0, 1.0]]))
    names = [record.name for record in model.records]
    moist = found.amounts[:, names.index("H2O(g)")]
    share = moist / (moist + found.amounts[:, names.index("N2(g)")])
    partial = share * P
    assert (found.amounts[:, names.index("H2O(l)")] > 0.0).all()
    assert partial[1] / partial[0] == pytest.approx(1.0750, abs=5e-4)


def test_a_diamond_is_pressed_out_of_graphite_where_their_volumes_say() -> None:
    """ΔG = 2.90 kJ/mol at 25 °C, volumes 5.30 and 3.42 cm³/mol: 15.4 kbar of constant volumes.

    A sum that textbooks make (recalled); with compressibility it is 16 kbar.
    """
    records = [LIBRARY["N2(g)"], LIBRARY["C(graphite)"]]
    mixture = Mixture.of(PropertyTable.of(records))
    terms = mixture.pressure_terms(np.array(15.4e8))
    diamond = 3.4173e-6 * (15.4e8 - 1e5)
    assert terms[1] - diamond == pytest.approx(2900.0, abs=60.0)
