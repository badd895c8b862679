"""Enthalpy and entropy of streams, and the entropy balance."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
import pytest

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.energy import energy_balance
from gibbsmin.reactor.inlet import Inlet, inlet_of
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

LIBRARY = load_library()
RECORDS = [LIBRARY["N2(g)"], LIBRARY["O2(g)"], LIBRARY["C(graphite)"]]
TABLE = PropertyTable.of(RECORDS)
MIXTURE = Mixture.of(TABLE)


def test_ideal_mixing_of_air() -> None:
    # R Σ x ln x of 79/21, the textbook's 4.28 J/mol/K.
    apart = TABLE.entropy(300.0) @ np.array([0.79, 0.21, 0.0])
    mixed = MIXTURE.entropy(300.0, 1e5, np.array([0.79, 0.21, 0.0]))
    expected = -GAS_CONSTANT * (0.79 * np.log(0.79) + 0.21 * np.log(0.21))
    assert mixed - apart == pytest.approx(expected, rel=1e-12)


def test_pressure_lowers_the_entropy_of_gases_alone() -> None:
    amounts = np.array([1.0, 0.0, 5.0])
    drop = MIXTURE.entropy(500.0, 1e5, amounts) - MIXTURE.entropy(500.0, 1e6, amounts)
    assert drop == pytest.approx(GAS_CONSTANT * np.log(10.0), rel=1e-9)


def test_many_states_equal_each_alone() -> None:
    T, P = np.array([300.0, 900.0]), np.array([1e5, 3e6])
    amounts = np.array([[1.0, 0.0, 0.0], [0.3, 0.5, 2.0]])
    together = MIXTURE.entropy(T, P, amounts)
    alone = [MIXTURE.entropy(t, p, n) for t, p, n in zip(T, P, amounts, strict=True)]
    np.testing.assert_array_equal(together, alone)
    enthalpies = [MIXTURE.enthalpy(t, p, n) for t, p, n in zip(T, P, amounts, strict=True)]
    np.testing.assert_array_equal(MIXTURE.enthalpy(T, P, amounts), enthalpies)


def test_entropy_balance_and_what_is_impossible() -> None:
    found = energy_balance(
        heat=np.array([300.0, 300.0, 300.0]),
        shaft_work=np.zeros(3),
        entropy_in=np.array([100.0, 100.0, 100.0]),
        entropy_out=np.array([110.0, 90.0, 110.0]),
        boundary_temperature=np.full(3, 300.0),
        needs_compressor=np.array([False, False, True]),
    )
    np.testing.assert_allclose(found.entropy_generation, [9.0, -11.0, np.nan])
    assert found.impossible.tolist() == [False, True, False]


def test_an_inlet_sums_its_streams_each_at_its_own_conditions() -> None:
    hot = Stream("hot", 600.0, 2e5, {"N2(g)": 2.0}, "mol", False)
    cold = Stream("cold", 300.0, 5e5, {"O2(g)": 1.0, "C(graphite)": 1.0}, "mol", False)
    inlet = inlet_of([hot, cold], LIBRARY)
    apart = [inlet_of([stream], LIBRARY) for stream in (hot, cold)]
    assert inlet.enthalpy == pytest.approx(sum(one.enthalpy for one in apart), rel=1e-14)
    assert inlet.entropy == pytest.approx(sum(one.entropy for one in apart), rel=1e-14)
    # The solid's enthalpy at 5 bar is V (P − P°) above its energy.
    pressed = LIBRARY["C(graphite)"].molar_volume * 4e5
    assert inlet.internal_energy == pytest.approx(
        inlet.enthalpy - GAS_CONSTANT * (2.0 * 600.0 + 300.0) - pressed, rel=1e-14
    )
    assert inlet.volume == pytest.approx(GAS_CONSTANT * (2.0 * 600.0 / 2e5 + 300.0 / 5e5))
    assert (inlet.lowest_pressure, inlet.temperature) == (2e5, 450.0)


def test_a_batch_of_inlets_equals_each_alone() -> None:
    T, n = np.array([400.0, 700.0, 900.0]), np.array([0.0, 1.0, 2.0])

    def streams(T: float | FloatArray, n: float | FloatArray) -> list[Stream]:
        return [
            Stream("a", T, 2e5, {"N2(g)": 1.0, "O2(g)": n}, "mol", False),
            Stream("b", 300.0, 1e5, {"C(graphite)": n}, "mol", False),
        ]

    batch = inlet_of(streams(T, n), LIBRARY)
    for i in range(3):
        alone = inlet_of(streams(float(T[i]), float(n[i])), LIBRARY)
        for field in fields(Inlet)[1:]:
            one, many = getattr(alone, field.name), getattr(batch, field.name)
            np.testing.assert_array_equal(one[0], many[i], err_msg=field.name)
