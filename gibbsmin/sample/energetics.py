"""How far a sample's gas is from equilibrium in Gibbs energy, and what entropy its stage makes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.streams import first
from gibbsmin.sample.plan import Plan
from gibbsmin.thermo.properties import PropertyTable


@dataclass(frozen=True, eq=False)
class EnergeticsBatch:
    """Per mole of dry gas, (B,): excess Gibbs energy over RT; entropies generated, J/(mol K)."""

    excess_over_RT: FloatArray
    entropy_as_run: FloatArray
    entropy_limit: FloatArray


def energetics(
    plan: Plan, gas: FloatArray, inlet: FloatArray, log_fugacity: FloatArray, found: Equilibria
) -> EnergeticsBatch:
    """Excess Gibbs energy and entropies of samples beside their equilibria.

    Parameters
    ----------
    gas, inlet
        Reconciled y (B, n_y) and z (B, n_z), which have the same elements.
    log_fugacity
        ln φ (B, n_y) of the gas as measured.
    found
        Equilibrium of what z brings at the samples' T and P.
    """
    amounts = np.zeros(found.amounts.shape)
    amounts[:, list(plan.columns)] = gas
    entropy_in, enthalpy_in, compressor = _entering(plan, inlet, found.pressure)
    as_run = _generated(plan, amounts, found, entropy_in, enthalpy_in)
    limit = _generated(plan, found.amounts, found, entropy_in, enthalpy_in)
    return EnergeticsBatch(
        _excess(plan, gas, log_fugacity, found),
        np.where(compressor, np.nan, as_run),
        np.where(compressor, np.nan, limit),
    )


def _excess(plan: Plan, gas: FloatArray, log_fugacity: FloatArray, found: Equilibria) -> FloatArray:
    """(G − G_eq)/RT = Σ n (g̃ + ln(y φ) − a·λ), term by term, since λ·b is the least G/RT.

    By subtraction of the two energies rounding would leave more than a small excess.
    """
    forces = found.solution.certificate.driving_forces[:, list(plan.columns)]
    there = gas > 0.0
    logs = np.log(np.where(there, gas, 1.0)) - np.log(gas.sum(axis=1, keepdims=True))
    if found.fugacity is not None:
        # The driving forces are those with φ of the equilibrium.
        logs += log_fugacity - found.fugacity.logarithms[:, list(plan.columns)]
    with np.errstate(invalid="ignore"):
        excess = np.where(there, gas * (logs - np.where(there, forces, 0.0)), 0.0).sum(axis=1)
    return np.where(found.solution.certified, np.maximum(excess, 0.0), np.nan)


def _entering(
    plan: Plan, inlet: FloatArray, pressure: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Entropy and enthalpy of the streams, each at its own conditions; a compressor's need."""
    real = plan.model.mixture.real
    table = PropertyTable.of(plan.model.feed_records)
    mixture = Mixture.of(table, None if real is None else real.equation)
    entropy, enthalpy = np.zeros(len(inlet)), np.zeros(len(inlet))
    compressor = np.zeros(len(inlet), dtype=bool)
    for feed, brought in zip(plan.feeds, plan.inlets, strict=True):
        amounts = inlet @ brought.T
        T, P = first(feed.stream.temperature), first(feed.stream.pressure)
        entropy += mixture.entropy(T, P, amounts)
        enthalpy += mixture.enthalpy(T, P, amounts)
        compressor |= (amounts[:, mixture.gas] > 0.0).any(axis=1) & (pressure > P)
    return entropy, enthalpy, compressor


def _generated(
    plan: Plan,
    amounts: FloatArray,
    found: Equilibria,
    entropy_in: FloatArray,
    enthalpy_in: FloatArray,
) -> FloatArray:
    """S_out − S_in − Q/T with the boundary at the outlet's temperature."""
    model, T = plan.model, found.temperature
    entropy = model.mixture.entropy(T, found.pressure, amounts)
    heat = model.mixture.enthalpy(T, found.pressure, amounts) - enthalpy_in
    return np.asarray(entropy - entropy_in - heat / T)


def excess_in_joules(excess_over_RT: FloatArray, temperature: FloatArray) -> FloatArray:
    """J/mol."""
    return excess_over_RT * GAS_CONSTANT * temperature
