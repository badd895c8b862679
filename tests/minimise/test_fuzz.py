"""Random valid programmes: built, not filtered, and certified in full."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from minimise.optimality import assert_optimal

from gibbsmin.minimise import Programme, minimise


@st.composite
def programmes(draw: st.DrawFn) -> Programme:
    """Species of small whole formulas; the supplies are those of random feed amounts."""
    elements = draw(st.integers(1, 5))
    species = draw(st.integers(1, 24))
    columns = st.dictionaries(
        st.integers(0, elements - 1), st.integers(1, 4), min_size=1, max_size=min(3, elements)
    )
    formulas = draw(st.lists(columns, min_size=species, max_size=species))
    matrix = np.zeros((elements, species))
    for column, formula in enumerate(formulas):
        for element, count in formula.items():
            matrix[element, column] = count
    gas = np.array(draw(st.lists(st.booleans(), min_size=species, max_size=species)))
    spread = draw(st.sampled_from([3.0, 30.0, 300.0]))
    energy = st.floats(-1.0, 1.0)
    energies = spread * np.array(draw(st.lists(energy, min_size=species, max_size=species)))
    levels = 100.0 * np.array(draw(st.lists(energy, min_size=elements, max_size=elements)))
    amount = st.one_of(st.just(0.0), st.floats(-4, 2).map(lambda exponent: 10.0**exponent))
    feed = np.array(draw(st.lists(amount, min_size=species, max_size=species)))
    return Programme(
        matrix=matrix,
        supplies=(matrix @ feed)[None],
        energies=(energies + levels @ matrix)[None],
        gas=gas,
        direction=np.ones(elements),
        atoms=matrix.sum(axis=0),
    )


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(programmes())
def test_random_programme_is_certified_and_optimal(programme: Programme) -> None:
    solution = minimise(programme)
    assert solution.certified.all()
    assert_optimal(programme, solution)


@settings(max_examples=25, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(programmes(), st.floats(-6, 6), st.lists(st.floats(-50, 50), min_size=5, max_size=5))
def test_fractions_ignore_the_scale_of_supplies_and_shifts_along_rows(
    programme: Programme, exponent: float, shifts: list[float]
) -> None:
    scale = 10.0**exponent
    shift = np.array(shifts[: programme.matrix.shape[0]])
    moved = Programme(
        matrix=programme.matrix,
        supplies=scale * programme.supplies,
        energies=programme.energies + shift @ programme.matrix,
        gas=programme.gas,
        direction=programme.direction,
        atoms=programme.atoms,
    )
    plain, other = minimise(programme), minimise(moved)
    assert plain.certified.all()
    assert other.certified.all()
    assert _energy(programme, other.amounts[0] / scale) == pytest.approx(
        _energy(programme, plain.amounts[0]), rel=1e-10, abs=1e-9 * programme.supplies.sum()
    )


def _energy(programme: Programme, amounts: np.ndarray) -> float:
    gas = programme.gas & (amounts > 0)
    energy = float(programme.energies[0] @ amounts)
    if gas.any():
        # A difference of logarithms, since the quotient of the smallest numbers is zero.
        energy += float(amounts[gas] @ (np.log(amounts[gas]) - np.log(amounts[gas].sum())))
    return energy
