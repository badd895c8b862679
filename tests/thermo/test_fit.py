"""The fitter, against tables made from a heat capacity that is known in closed form."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.thermo.fit import Table, fit_heat_capacity, gibbs_errors
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Piece, Species

GRID = np.array([200.0, 250.0, 298.15, 300.0, *range(350, 500, 50), *range(500, 3001, 100)])


def species(*pieces: Piece) -> Species:
    return Species(
        "X(g)", "X", "g", Phase.GAS, "", "", (), 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, pieces
    )


def columns(record: Species, T: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Cp, H − H(Tr) and S − S(Tr) of a record whose enthalpy and entropy at Tr are zero."""
    table = PropertyTable.of([record])
    return tuple(f(T)[:, 0] for f in (table.heat_capacity, table.enthalpy, table.entropy))  # type: ignore[return-value]


def vibrating(T: FloatArray, temperature: float = 2000.0) -> FloatArray:
    """Cp/R of a diatomic harmonic oscillator of a characteristic temperature."""
    x = temperature / T
    return GAS_CONSTANT * (3.5 + x**2 * np.exp(x) / np.expm1(x) ** 2)


def vibrating_functions(
    T: FloatArray, temperature: float = 2000.0
) -> tuple[FloatArray, FloatArray]:
    def h(T: FloatArray | float) -> FloatArray:
        return np.asarray(3.5 * np.asarray(T) + temperature / np.expm1(temperature / np.asarray(T)))

    def s(T: FloatArray | float) -> FloatArray:
        x = temperature / np.asarray(T)
        return np.asarray(3.5 * np.log(T) + x / np.expm1(x) - np.log(-np.expm1(-x)))

    Tr = REFERENCE_TEMPERATURE
    return GAS_CONSTANT * (h(T) - h(Tr)), GAS_CONSTANT * (s(T) - s(Tr))


def cp_of(piece: Piece, T: float) -> float:
    t = T / 1000
    return piece.A + piece.B * t + piece.C * t**2 + piece.D * t**3 + piece.E / t**2


def test_shomate_table_is_returned_as_one_piece() -> None:
    truth = Piece(200.0, 3000.0, 25.5, 13.2, -3.4, 0.3, 0.05)
    (found,) = fit_heat_capacity(GRID, *columns(species(truth), GRID))
    assert (found.T_low, found.T_high) == (200.0, 3000.0)
    for T in (200.0, 700.0, 3000.0):
        assert cp_of(found, T) == pytest.approx(cp_of(truth, T), abs=2e-4)


def test_constant_heat_capacity_gives_one_coefficient() -> None:
    (found,) = fit_heat_capacity(GRID, np.full(GRID.shape, 20.786))
    assert found == Piece(200.0, 3000.0, 20.786)


@pytest.mark.parametrize("tolerance", [1e-3, 1e-4, 2e-5])
def test_tolerance_is_met_by_more_pieces(tolerance: float) -> None:
    data = (GRID, vibrating(GRID), *vibrating_functions(GRID))
    pieces = fit_heat_capacity(*data, tolerance=tolerance)
    assert np.max(np.abs(gibbs_errors(pieces, Table.read(*data)))) <= tolerance


@settings(max_examples=25, deadline=None)
@given(st.floats(500, 5000))
def test_pieces_abut_and_heat_capacity_is_continuous(temperature: float) -> None:
    data = (GRID, vibrating(GRID, temperature), *vibrating_functions(GRID, temperature))
    pieces = fit_heat_capacity(*data, tolerance=1e-5)
    assert (pieces[0].T_low, pieces[-1].T_high) == (200.0, 3000.0)
    for below, above in pairwise(pieces):
        assert below.T_high == above.T_low
        assert cp_of(below, below.T_high) == pytest.approx(cp_of(above, above.T_low), abs=1e-8)


def test_errors_are_those_of_the_property_table() -> None:
    H, S = vibrating_functions(GRID)
    pieces = fit_heat_capacity(GRID, vibrating(GRID), H, S, tolerance=1e-3)
    ours = columns(species(*pieces), GRID)
    G = (ours[1] - GRID * ours[2]) - (H - GRID * S)
    expected = G / (GAS_CONSTANT * GRID)
    found = gibbs_errors(pieces, Table.read(GRID, vibrating(GRID), H, S))
    assert found == pytest.approx(expected, abs=1e-12)


def test_transition_enthalpy_is_the_step_of_H() -> None:
    truth = species(
        Piece(298.15, 600.0, 30.0, 10.0),
        Piece(600.0, 1200.0, 40.0, 0.0, transition=5000.0, label="melting"),
    )
    low, high = np.arange(300.0, 600.0, 50.0), np.arange(650.0, 1201.0, 50.0)
    below, above = columns(truth, np.array([600.0 - 1e-9])), columns(truth, np.array([600.0]))
    T = np.concatenate([[298.15], low, [600.0, 600.0], high])
    Cp, H, S = (
        np.concatenate([a, b, c, d])
        for a, b, c, d in zip(
            columns(truth, np.concatenate([[298.15], low])),
            below,
            above,
            columns(truth, high),
            strict=True,
        )
    )
    pieces = fit_heat_capacity(T, Cp, H, S, labels={600.0: "melting"})
    assert [(p.transition, p.label) for p in pieces] == [
        (0.0, ""),
        (pytest.approx(5000.0, abs=1e-3), "melting"),
    ]
    assert columns(species(*pieces), high)[1] == pytest.approx(columns(truth, high)[1], abs=0.5)


def test_cells_that_are_not_known_are_left_out() -> None:
    Cp, (H, S) = vibrating(GRID), vibrating_functions(GRID)
    H[7] = S[9] = Cp[11] = np.nan
    pieces = fit_heat_capacity(GRID, Cp, H, S, tolerance=1e-4)
    true_H = vibrating_functions(GRID)[0]
    assert columns(species(*pieces), GRID)[1] == pytest.approx(true_H, rel=2e-4, abs=2.0)


def test_heat_capacities_alone_give_enthalpy_and_entropy() -> None:
    T = np.arange(300.0, 1501.0, 25.0)
    pieces = fit_heat_capacity(T, vibrating(T))
    found = PropertyTable.of([species(*pieces)])
    H, S = vibrating_functions(np.array([300.0, 1500.0]))
    ends = np.array([300.0, 1500.0])
    assert np.diff(found.enthalpy(ends)[:, 0]) == pytest.approx(np.diff(H), rel=1e-4)
    assert np.diff(found.entropy(ends)[:, 0]) == pytest.approx(np.diff(S), rel=1e-4)


@pytest.mark.parametrize(
    ("T", "Cp", "message"),
    [
        (
            [300.0],
            [30.0],
            "found columns of different lengths, or less than two rows; accepted are two or more "
            "temperatures and one value of each column for each.",
        ),
        (
            [400.0, 300.0],
            [30.0, 31.0],
            "found temperatures that fall, or one that stands more than twice; accepted are "
            "rising temperatures in K, doubled at a transition.",
        ),
        (
            [300.0, 400.0],
            [30.0, -1.0],
            "found a heat capacity that is no positive number; accepted are heat capacities in "
            "J/mol/K above zero.",
        ),
    ],
)
def test_bad_columns_are_refused(T: list[float], Cp: list[float], message: str) -> None:
    with pytest.raises(InputError) as caught:
        fit_heat_capacity(T, Cp)
    assert str(caught.value) == message
