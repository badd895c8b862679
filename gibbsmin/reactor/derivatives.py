"""How an equilibrium state answers to a small change of temperature, pressure or feed.

With D = diag(n_gas), λ the potentials of the balance's rows, η = ln N, and dg̃ the change of g̃ at
fixed composition, the conditions of equilibrium change by

    dn_i = n_i (dη + a_i·dλ − dg̃_i)          gases
    a_c·dλ = dg̃_c                             condensed phases present
    A dn = db,   Σ_gas dn_i = N dη

which is linear in dλ, dη and the dn_c.  It is solved in the basis of the most abundant records
(:mod:`gibbsmin.reactor.abundant_basis`), in which the condensed phases have a row each, so that
their dλ follow at once and their dn_c at the end; between them stands one system of the gas's
basis records and η.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import Programme, Solution
from gibbsmin.reactor.abundant_basis import AbundantBasis, abundant_basis
from gibbsmin.reactor.model import StageModel

_LARGEST_CONDITION = 1e12
_ONSET = 1e-8
"""An absent phase whose driving force is nearer to 0 than this, in RT, stands at its onset."""

_ROUNDING = 1e-9
"""What elimination leaves of a change of supplies that the records present take up whole."""


@dataclass(frozen=True)
class Responses:
    """What B states answer to K changes; NaN where a state has no derivatives.

    Attributes
    ----------
    amounts : (B, S, K) dn, mol
    forces : (B, S, K) d(a·λ − g̃): for a condensed phase that is absent, of its driving force
    regular : (B,) False where there is no derivative: an uncertified state, a state without gas,
        at the onset of a phase, or where the phases present leave a composition or temperature
        free (condensed forms in equilibrium, a decomposition at its own pressure)
    """

    amounts: FloatArray
    forces: FloatArray
    regular: BoolArray


@dataclass(frozen=True)
class Derivatives:
    """Derivatives of the amounts of B states; NaN where the state has none.

    Attributes
    ----------
    log_temperature : (B, S) ∂n/∂ln T at constant P and feed, mol
    log_pressure : (B, S) ∂n/∂ln P at constant T and feed, mol
    directions : (B, S, K) ∂n along each direction of the supplies at constant T and P; NaN along
        one that no records present can take up, such as a new element
    regular : (B,) False where there is no derivative, as in :class:`Responses`
    """

    log_temperature: FloatArray
    log_pressure: FloatArray
    directions: FloatArray
    regular: BoolArray


def derivatives(
    programme: Programme,
    solution: Solution,
    slopes: FloatArray,
    pressure_slopes: FloatArray,
    directions: FloatArray,
    fugacity_slopes: FloatArray | None = None,
) -> Derivatives:
    """Implicit derivatives of solved states.

    Parameters
    ----------
    programme, solution
        The states and their answers.
    slopes
        ∂g̃/∂ln T at constant P, shape (B, S), such as :func:`energy_slopes` gives.
    pressure_slopes
        ∂g̃/∂ln P, shape (B, S): 1 for an ideal gas.
    directions
        Changes of the supplies b, shape (m, K), such as the feed matrix of the balance.
    fugacity_slopes
        ∂ln φ/∂n of a real gas, shape (B, S, S).
    """
    energies = np.stack([slopes, pressure_slopes], axis=-1)
    found = responses(programme, solution, energies, directions, fugacity_slopes)
    changes = found.amounts
    return Derivatives(changes[..., 0], changes[..., 1], changes[..., 2:], found.regular)


def responses(
    programme: Programme,
    solution: Solution,
    energies: FloatArray,
    directions: FloatArray,
    fugacity_slopes: FloatArray | None = None,
) -> Responses:
    """What solved states answer to changes of their energies, then of their supplies.

    In a real gas the energies answer to the amounts in turn: dg̃ gains J dn, J = ∂ln φ/∂n, so that
    with the answer G to each energy, (1 − G J) dn is the answer at fixed φ.

    Parameters
    ----------
    programme, solution
        The states and their answers.
    energies
        Changes dg̃ at constant supplies, shape (B, S, K₁).
    directions
        Changes of the supplies b at constant g̃, shape (m, K₂) or (B, m, K₂); K = K₁ + K₂.
    fugacity_slopes
        J, shape (B, S, S); None for an ideal gas.
    """
    if fugacity_slopes is not None:
        return _real_responses(programme, solution, energies, directions, fugacity_slopes)
    amounts, gas = solution.amounts, programme.gas
    usable = solution.certified & (np.where(gas, amounts, 0.0).sum(axis=1) > 0.0)
    near = np.abs(solution.certificate.driving_forces) < _ONSET
    usable &= ~np.any(~gas & (amounts == 0.0) & near, axis=1)

    n = np.where(usable[:, np.newaxis], amounts, 0.0)
    weights = np.where(gas, n, np.where(n > 0.0, np.inf, 0.0))
    basis = abundant_basis(programme.matrix, directions, weights)
    given, along = energies.shape[-1], directions.shape[-1]
    energies = np.concatenate([energies, np.zeros((*n.shape, along))], axis=2)
    supplies = np.concatenate([np.zeros((*basis.columns.shape, given)), basis.directions], axis=2)
    changes, forces, solvable = _solve(basis, n, gas, energies, supplies)

    chosen = np.zeros(n.shape, dtype=bool)
    states, rows = np.nonzero(basis.columns >= 0)
    chosen[states, basis.columns[states, rows]] = True
    regular = usable & solvable & np.all(chosen | gas | (n == 0.0), axis=1)
    changes[~regular] = np.nan
    forces[~regular] = np.nan
    return Responses(changes, forces, regular)


def _real_responses(
    programme: Programme,
    solution: Solution,
    energies: FloatArray,
    directions: FloatArray,
    fugacity_slopes: FloatArray,
) -> Responses:
    species = energies.shape[1]
    each = np.broadcast_to(np.eye(species), (len(energies), species, species))
    fixed = responses(programme, solution, np.concatenate([each, energies], axis=2), directions)
    to_energies, rest = np.split(fixed.amounts, [species], axis=2)
    forces_of_energies, forces = np.split(fixed.forces, [species], axis=2)
    regular = fixed.regular[:, np.newaxis, np.newaxis]
    J = np.where(regular, fugacity_slopes, 0.0)
    looped = np.eye(species) - np.where(regular, to_energies, 0.0) @ J
    amounts = np.linalg.solve(looped, rest)
    return Responses(amounts, forces + forces_of_energies @ (J @ amounts), fixed.regular)


def energy_slopes(
    model: StageModel, temperature: FloatArray, partial_enthalpies: FloatArray
) -> FloatArray:
    """∂g̃/∂ln T at constant P of a stage's candidates: (B,) K to (B, S).

    It is −H̄/RT, H̄ the partial molar enthalpies (B, S) of
    :func:`gibbsmin.reactor.mixture_slopes.mixture_slopes`, with the slope of an offset,
    −offset/RT, and of an approach,

        ∂δ_K/∂ln T = ν_K⁻¹ (ν H(T)/RT − (T/T_s) ν H(T_s)/R T_s),

    in which T_s keeps its distance from T.
    """
    T, shift = temperature, model.shift
    RT = GAS_CONSTANT * T[:, np.newaxis]
    slopes = -(partial_enthalpies + shift.offsets) / RT
    if shift.keys:
        enthalpies = model.properties.enthalpy(T)
        keys = list(shift.keys)
        nu = shift.stoichiometry
        gaps = enthalpies @ nu.T / RT
        for reaction in range(len(keys)):
            T_s = shift.shifted_temperature(reaction, T)
            there = model.properties.enthalpy(T_s) @ nu[reaction] / (GAS_CONSTANT * T_s)
            gaps[:, reaction] -= T / T_s * there
        slopes[:, keys] += np.linalg.solve(nu[:, keys], gaps[..., np.newaxis])[..., 0]
    return np.asarray(slopes)


def _solve(
    basis: AbundantBasis,
    n: FloatArray,
    gas: BoolArray,
    energies: FloatArray,
    supplies: FloatArray,
) -> tuple[FloatArray, FloatArray, BoolArray]:
    """dn and d(a·λ − g̃) for changes dg̃ (B, S, K) and db′ (B, m, K), and where determined."""
    A, columns = basis.matrix, basis.columns
    state = np.arange(len(n))[:, np.newaxis]
    filled = columns >= 0
    of_gas = filled & gas[columns]
    n_gas = np.where(gas, n, 0.0)

    # Rows of condensed phases: dλ_c = dg̃_c, which the gases feel as a change of their energies.
    potentials = np.where((filled & ~of_gas)[..., np.newaxis], energies[state, columns], 0.0)
    felt = energies - np.einsum("bmi,bmk->bik", A, potentials)
    gas_rows = np.where(of_gas[..., np.newaxis], A, 0.0)

    system, right = _system(gas_rows, n_gas, felt, np.where(of_gas[..., None], supplies, 0.0))
    solved, solvable = _solve_scaled(system, right)
    forces = np.einsum("bmi,bmk->bik", gas_rows, solved[:, :-1]) - felt
    changes = n_gas[..., np.newaxis] * (solved[:, -1:] + forces)

    missing = supplies - np.einsum("bmi,bik->bmk", A, changes)
    states, rows = np.nonzero(filled & ~of_gas)
    changes[states, columns[states, rows]] = missing[states, rows]
    unheld = np.any(~filled[..., np.newaxis] & (np.abs(supplies) > _ROUNDING), axis=1)
    outside = unheld[:, np.newaxis]
    return np.where(outside, np.nan, changes), np.where(outside, np.nan, forces), solvable


def _system(
    A: FloatArray, n: FloatArray, felt: FloatArray, supplies: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """The equations of the gas's basis records and of η; rows of other records are 0."""
    weighted = A * n[:, np.newaxis]
    edge = weighted.sum(axis=2)[..., np.newaxis]
    corner = np.zeros((len(n), 1, 1))
    system = np.block([[weighted @ A.swapaxes(1, 2), edge], [edge.swapaxes(1, 2), corner]])
    of_rows = supplies + weighted @ felt
    of_total = np.einsum("bi,bik->bk", n, felt)[:, np.newaxis]
    return system, np.concatenate([of_rows, of_total], axis=1)


def _solve_scaled(system: FloatArray, right: FloatArray) -> tuple[FloatArray, BoolArray]:
    """LU solution after symmetric scaling to a unit diagonal, 0 where singular.

    The row of η has no diagonal; it is scaled by its own largest entry.
    """
    diagonal = np.diagonal(system, axis1=1, axis2=2).copy()
    diagonal[:, -1] = np.abs(system[:, -1]).max(axis=1)
    empty = diagonal == 0.0
    scale = 1.0 / np.sqrt(np.where(empty, 1.0, diagonal))
    scaled = system * scale[:, :, np.newaxis] * scale[:, np.newaxis]
    rows = np.arange(system.shape[1] - 1)
    scaled[:, rows, rows] = np.where(empty[:, :-1], 1.0, scaled[:, rows, rows])
    condition = np.linalg.cond(scaled, 1)
    solvable: BoolArray = np.asarray(condition < _LARGEST_CONDITION)
    scaled[~solvable] = np.eye(system.shape[1])
    solved = np.linalg.solve(scaled, right * scale[..., np.newaxis])
    return np.where(solvable[:, None, None], solved, 0.0) * scale[..., np.newaxis], solvable
