"""Properties of T: derivatives, continuity, ends of the range, shapes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from numpy.testing import assert_allclose
from thermo_builders import make_species, species_records

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Piece, Species

batches = st.lists(species_records(), min_size=1, max_size=4)
temperatures = st.floats(30, 8000)


def breaks(record: Species) -> list[float]:
    return [piece.T_low for piece in record.pieces] + [record.T_high]


@given(species_records(), temperatures)
def test_derivatives(record: Species, T: float) -> None:
    # A central difference errs by about (step/T)² of the value: 1e-8 here; 1e-6 leaves round-off.
    step = 1e-4 * T
    if any(abs(T - limit) <= step for limit in breaks(record)):
        T += 3 * step
    table = PropertyTable.of([record])
    low, high = T - step, T + step
    Cp = table.heat_capacity(T)
    scale = 1e-6 * (1 + abs(record.dfH298) / T + np.abs(Cp))
    dH = (table.enthalpy(high) - table.enthalpy(low)) / (2 * step)
    dS = (table.entropy(high) - table.entropy(low)) / (2 * step)
    assert np.all(np.abs(dH - Cp) <= scale)
    assert np.all(np.abs(dS - Cp / T) <= scale / T + 1e-9)
    assert_allclose(
        table.gibbs_energy(T), table.enthalpy(T) - T * table.entropy(T), rtol=1e-14, atol=1e-8
    )


@given(species_records())
def test_reference_values_are_met(record: Species) -> None:
    if any(limit == 298.15 for limit in breaks(record)):
        return
    table = PropertyTable.of([record])
    assert_allclose(table.enthalpy(298.15), record.dfH298, rtol=1e-13, atol=1e-6)
    assert_allclose(table.entropy(298.15), record.S298, rtol=1e-13, atol=1e-9)


@given(species_records())
def test_pieces_join(record: Species) -> None:
    table = PropertyTable.of([record])
    transitions = [piece.transition for piece in record.pieces] + [0.0]
    for T, transition in zip(breaks(record), transitions, strict=True):
        below = np.nextafter(T, 0)
        step_H = table.enthalpy(T) - table.enthalpy(below)
        step_S = table.entropy(T) - table.entropy(below)
        assert_allclose(step_H, transition, atol=1e-7 + 1e-14 * abs(record.dfH298))
        assert_allclose(step_S, transition / T, atol=1e-9)
        assert_allclose(table.gibbs_energy(T), table.gibbs_energy(below), rtol=1e-12, atol=1e-6)


@given(species_records(), st.floats(1.0, 3.0))
def test_heat_capacity_is_constant_beyond_the_range(record: Species, factor: float) -> None:
    table = PropertyTable.of([record])
    above, below = factor * record.T_high, record.T_low / factor
    assert_allclose(table.heat_capacity(above), table.heat_capacity(record.T_high), rtol=1e-12)
    assert_allclose(table.heat_capacity(below), table.heat_capacity(record.T_low), rtol=1e-12)
    assert table.within_range(above)[0] == (above <= record.T_high)
    assert table.within_range(below)[0] == (below >= record.T_low)


@settings(deadline=None)  # the loop of single calls is slow on purpose
@given(batches, hnp.arrays(float, hnp.array_shapes(max_dims=3, max_side=3), elements=temperatures))
def test_a_batch_equals_single_calls(
    records: list[Species], T: np.ndarray[tuple[int, ...], np.dtype[np.float64]]
) -> None:
    table = PropertyTable.of(records)
    singles = [PropertyTable.of([record]) for record in records]
    for name in ("heat_capacity", "enthalpy", "entropy", "gibbs_energy", "within_range"):
        batch = getattr(table, name)(T)
        assert batch.shape == (*T.shape, len(records))
        loop = [[getattr(single, name)(value)[0] for single in singles] for value in T.ravel()]
        assert_allclose(batch, np.reshape(loop, batch.shape), rtol=1e-13, atol=1e-9)


def test_a_long_batch_crosses_blocks() -> None:
    table = PropertyTable.of([make_species(), make_species("CO(g)", dfH298=-110000.0)])
    T = np.linspace(200, 5000, 100_001)
    values = table.enthalpy(T)
    for k in (0, 16_383, 16_384, 50_000, 100_000):
        assert np.array_equal(values[k], table.enthalpy(T[k]))


def test_hand_calculation() -> None:
    # Cp = 30 + 10 t: H(1000) − H(298.15) = 30·701.85 + 5(1000² − 298.15²)/1000.
    table = PropertyTable.of([make_species()])
    assert_allclose(table.heat_capacity(1000.0), [40.0], rtol=1e-15)
    increment = 30 * 701.85 + 5e-3 * (1e6 - 298.15**2)
    assert_allclose(table.enthalpy(1000.0), [-241826.0 + increment], rtol=1e-14)
    entropy = 188.834 + 30 * np.log(1000 / 298.15) + 10 * 0.70185
    assert_allclose(table.entropy(1000.0), [entropy], rtol=1e-14)


def test_record_that_begins_above_the_reference_temperature() -> None:
    # Constant Cp = 50 throughout: H(298.15 K) is reached by the continued end piece.
    table = PropertyTable.of([make_species(pieces=(Piece(500.0, 900.0, 50.0),))])
    assert_allclose(table.enthalpy(500.0), [-241826.0 + 50 * (500 - 298.15)], rtol=1e-14)


def test_nan_stays_nan_and_no_record_gives_no_column() -> None:
    assert np.isnan(PropertyTable.of([make_species()]).gibbs_energy(np.nan)).all()
    assert PropertyTable.of([]).enthalpy([300.0, 400.0]).shape == (2, 0)


@pytest.mark.parametrize("T", [0.0, -1.0, [300.0, -5.0, np.nan]])
def test_temperature_not_above_zero_is_refused(T: float | list[float]) -> None:
    table = PropertyTable.of([make_species()])
    with pytest.raises(InputError) as caught:
        table.enthalpy(T)
    assert str(caught.value) == (
        f"found a temperature of {np.nanmin(T):.10g} K; "
        "accepted is a temperature above absolute zero."
    )


def test_the_table_cannot_be_changed() -> None:
    table = PropertyTable.of([make_species()])
    with pytest.raises(ValueError, match="read-only"):
        table.coefficients[0, 0] = 1.0


@given(batches, temperatures)
def test_reduced_energy_is_that_over_rt(records: list[Species], T: float) -> None:
    table = PropertyTable.of(records)
    expected = table.gibbs_energy(T) / (GAS_CONSTANT * T)
    scale = np.abs(table.enthalpy(T) / (GAS_CONSTANT * T)) + np.abs(table.entropy(T)) + 1.0
    assert (np.abs(table.reduced_gibbs_energy(T) - expected) <= 1e-13 * scale).all()
