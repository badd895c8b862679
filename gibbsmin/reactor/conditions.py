"""The unknown conditions of a stage: temperature from heat or entropy, pressure from volume.

At equilibrium of an ideal gas with condensed phases G(T, P) and A(T, V) are concave in T, so
enthalpy, energy and entropy never fall as T rises: there is at most one temperature, bracketed and
closed in on with all states together.  Under an approach all temperatures are looked for.  Where
condensed forms meet, the enthalpy jumps; the heat is then taken up at that temperature, and the
answer is a mixture of the states on its two sides.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import Solution, minimise, minimise_heated
from gibbsmin.reactor.answers import every_answer
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.model import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE, StageModel
from gibbsmin.reactor.real_equilibria import (
    Fugacity,
    real_equilibria,
    real_heated_equilibria,
)
from gibbsmin.reactor.roots import root_near

_LOWEST_PRESSURE, _HIGHEST_PRESSURE = 1e-4, 1e10
_SIDE = 1e-10
"""Share of T by which the two sides of a jump are solved apart from it, where forms tie."""

_MET = 1e-11
_MET_BY_REAL_GAS = 1e-9
_ROUNDING = 1e-14
"""Shares of N R T and of the enthalpy itself by which an enthalpy may miss.

Fugacity coefficients settle to 5e-11, and the departure of the enthalpy with them."""

_JUMP = 1e-9
"""A residual of this share that is left at full resolution of T is a plateau."""


@dataclass(frozen=True)
class Equilibria:
    """B solved states at their conditions.

    Attributes
    ----------
    temperature, pressure : (B,) K and Pa; NaN where none was found
    amounts : (B, S), on a plateau the mixture of its two sides
    solution : the certified solution (of the lower side on a plateau)
    upper_share : (B,) share of the upper side; NaN off a plateau
    answers : (2, B) K, the lowest and the highest where several temperatures meet what is
        specified, so that none is chosen; NaN elsewhere
    fugacity : fugacity coefficients of a real gas; None for an ideal one
    """

    temperature: FloatArray
    pressure: FloatArray
    amounts: FloatArray
    solution: Solution
    upper_share: FloatArray
    answers: FloatArray
    fugacity: Fugacity | None = None

    def with_states(self, index: IntArray, others: Equilibria) -> Equilibria:
        """These states with some replaced by others."""

        def put(ours: FloatArray, theirs: FloatArray) -> FloatArray:
            ours = ours.copy()
            ours[index] = theirs
            return ours

        return Equilibria(
            put(self.temperature, others.temperature),
            put(self.pressure, others.pressure),
            put(self.amounts, others.amounts),
            self.solution.with_states(index, others.solution),
            put(self.upper_share, others.upper_share),
            put(self.answers.T, others.answers.T).T,
            self.fugacity and others.fugacity and self.fugacity.with_states(index, others.fugacity),
        )


def at_temperature(
    model: StageModel,
    temperature: FloatArray,
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray | None = None,
) -> Equilibria:
    """Equilibria of B states at given temperature and pressure.

    ``start`` is ln φ (B, S) of states near by, from which a real gas settles sooner.
    """
    gas = model.mixture.real
    if gas is None:
        return _found(temperature, pressure, minimise(model.programme(temperature, pressure, feed)))
    solution, fugacity = real_equilibria(model, gas, temperature, pressure, feed, start)
    return _found(temperature, pressure, solution, fugacity)


def _found(
    temperature: FloatArray,
    pressure: FloatArray,
    solution: Solution,
    fugacity: Fugacity | None = None,
) -> Equilibria:
    """States off any plateau, with one answer each."""
    nothing = np.full((2, *temperature.shape), np.nan)
    return Equilibria(
        temperature, pressure, solution.amounts, solution, nothing[0], nothing, fugacity
    )


def at_enthalpy(
    model: StageModel,
    enthalpy: FloatArray,
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray,
) -> Equilibria:
    """Equilibria whose enthalpy (B,) in J is given, such as those of an adiabatic stage.

    Temperature is an unknown of the minimiser where that is possible; states that it leaves, such
    as plateaus, and those under an approach are bracketed.
    """

    def content(mixture: Mixture, found: Equilibria) -> FloatArray:
        return mixture.enthalpy(found.temperature, found.pressure, found.amounts)

    if model.shift.keys:
        return _at_content(model, enthalpy, content, pressure, feed, start)
    gas, fugacity, met = model.mixture.real, None, _MET
    if gas is None:
        solution, T = minimise_heated(*model.heated_programme(enthalpy, pressure, feed, start))
    else:
        solution, T, fugacity = real_heated_equilibria(model, gas, enthalpy, pressure, feed, start)
        met = _MET_BY_REAL_GAS
    found = _found(T, pressure, solution, fugacity)
    left = np.flatnonzero(~_holds(found, content(model.mixture, found), enthalpy, met))
    if left.size == 0:
        return found
    some = model.of_states(left)
    bracketed = _at_content(some, enthalpy[left], content, pressure[left], feed[left], start[left])
    return found.with_states(left, bracketed)


def _holds(found: Equilibria, content: FloatArray, wanted: FloatArray, met: float) -> BoolArray:
    """Whether the enthalpy is what was wanted, to a share of N R T; NaN does not."""
    thermal = GAS_CONSTANT * found.temperature * found.amounts.sum(axis=1)
    return np.asarray(np.abs(content - wanted) <= met * thermal + _ROUNDING * np.abs(wanted))


def at_entropy(
    model: StageModel,
    entropy: FloatArray,
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray,
) -> Equilibria:
    """Equilibria whose entropy (B,) in J/K is given, such as those of a reversible expansion."""

    def content(mixture: Mixture, found: Equilibria) -> FloatArray:
        return mixture.entropy(found.temperature, found.pressure, found.amounts)

    return _at_content(model, entropy, content, pressure, feed, start)


def at_volume(
    model: StageModel, temperature: FloatArray, volume: FloatArray, feed: FloatArray
) -> Equilibria:
    """Equilibria in a closed vessel: P V = Z N_gas R T; solids and liquids take up no room.

    N_gas(P)/P falls as P rises, so that there is at most one pressure.
    """

    near = _Near(model, temperature.size)

    def solved(P: FloatArray, index: IntArray) -> Equilibria:
        return near.solved(temperature[index], P, feed[index], index)

    def residual(log_P: FloatArray, index: IntArray) -> FloatArray:
        P = np.exp(log_P)
        filled = model.mixture.gas_volume(temperature[index], P, solved(P, index).amounts)
        return np.asarray(np.log(volume[index]) - np.log(np.maximum(filled, 1e-300)))

    start = np.log(np.maximum(feed.sum(axis=1), 1e-300) * GAS_CONSTANT * temperature / volume)
    limits = np.log(_LOWEST_PRESSURE), np.log(_HIGHEST_PRESSURE)
    log_P = root_near(residual, start, 1.0, limits)
    return solved(np.exp(log_P), np.arange(log_P.size))


def at_energy_and_volume(
    model: StageModel, energy: FloatArray, volume: FloatArray, feed: FloatArray, start: FloatArray
) -> Equilibria:
    """Equilibria of a closed rigid vessel whose internal energy U = H − P V (B,) in J is given."""

    def solved(T: FloatArray, index: IntArray) -> Equilibria:
        return at_volume(model.of_states(index), T, volume[index], feed[index])

    def content(found: Equilibria, index: IntArray) -> FloatArray:
        mixture = model.mixture.of_states(index)
        return mixture.internal_energy(found.temperature, found.pressure, found.amounts)

    return _between(model, solved, content, energy, start)


class _Near:
    """Solves states again and again, real gases from the fugacity coefficients found before."""

    def __init__(self, model: StageModel, states: int) -> None:
        self._model = model
        self._logarithms = np.zeros((states, len(model.records)))

    def solved(self, T: FloatArray, P: FloatArray, feed: FloatArray, index: IntArray) -> Equilibria:
        """States at T and P, whose places in the batch are ``index``."""
        found = at_temperature(self._model.of_states(index), T, P, feed, self._logarithms[index])
        if found.fugacity is not None:
            good = found.solution.certified
            self._logarithms[index[good]] = found.fugacity.logarithms[good]
        return found


def _at_content(
    model: StageModel,
    wanted: FloatArray,
    content: Callable[[Mixture, Equilibria], FloatArray],
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray,
) -> Equilibria:
    near = _Near(model, wanted.size)

    def solved(T: FloatArray, index: IntArray) -> Equilibria:
        return near.solved(T, pressure[index], feed[index], index)

    def of_some(found: Equilibria, index: IntArray) -> FloatArray:
        return content(model.mixture.of_states(index), found)

    return _between(model, solved, of_some, wanted, start)


def _between(
    model: StageModel,
    solved: Callable[[FloatArray, IntArray], Equilibria],
    content: Callable[[Equilibria, IntArray], FloatArray],
    wanted: FloatArray,
    start: FloatArray,
) -> Equilibria:
    """The states whose content meets what is wanted, mixed of both sides where it jumps."""

    def residual(T: FloatArray, index: IntArray) -> FloatArray:
        return content(solved(T, index), index) - wanted[index]

    everything = np.arange(wanted.size)
    answers = np.full((2, wanted.size), np.nan)
    if model.shift.keys:
        T, answers = every_answer(
            model.shift, residual, wanted.size, (LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE)
        )
    else:
        T = root_near(residual, start, 50.0, (LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE))
    missing = residual(T, everything)
    # Heat capacity times T: what resolution in T leaves of the content is far below it.
    scale = np.abs(residual(1.001 * T, everything) - missing) * 1e3
    jumps = np.abs(missing) > _JUMP * scale
    found = replace(solved(np.where(jumps, T * (1.0 - _SIDE), T), everything), answers=answers)
    if not jumps.any():
        return found
    beyond = solved(np.where(jumps, T * (1.0 + _SIDE), T), everything)
    upper = replace(beyond, temperature=found.temperature)
    below, above = content(found, everything), content(upper, everything)
    with np.errstate(invalid="ignore", divide="ignore"):
        share = np.where(jumps, (wanted - below) / (above - below), np.nan)
    mixed = found.amounts + share[:, np.newaxis] * (upper.amounts - found.amounts)
    amounts = np.where(jumps[:, np.newaxis], mixed, found.amounts)
    return replace(found, amounts=amounts, upper_share=share)
