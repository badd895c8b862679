"""Equilibria of real gases: the certified convex problem at fixed φ inside, φ settled outside.

At fixed fugacity coefficients the problem is that of an ideal gas whose energies have gained
ln φ, convex and certified like any other.  ln φ follows the composition that it leads to until
both agree, so that the whole problem is stationary; its residual counts to the certificate's
stationarity.  Where enthalpy is given, the partial molar departures H̄ᵢ take part in the same way:
near the last temperature T₀ the energies gain ln φᵢ + H̄ᵢ/R (1/T − 1/T₀), the enthalpies H̄ᵢ.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise import (
    Programme,
    Solution,
    Status,
    minimise,
    minimise_heated,
    unanswered,
)
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.settle import SETTLED, settle, settle_along
from gibbsmin.thermo.real_gas import RealGas


@dataclass(frozen=True)
class Fugacity:
    """Fugacity coefficients of B solved states.

    Attributes
    ----------
    logarithms : (B, S) ln φ used; 0 for solids and liquids
    error : (B,) largest difference to ln φ of the composition found; NaN where not solved
    """

    logarithms: FloatArray
    error: FloatArray

    def with_states(self, index: IntArray, others: Fugacity) -> Fugacity:
        """These states with some replaced by others."""
        logarithms, error = self.logarithms.copy(), self.error.copy()
        logarithms[index], error[index] = others.logarithms, others.error
        return Fugacity(logarithms, error)


def real_equilibria(
    model: StageModel,
    gas: RealGas,
    temperature: FloatArray,
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray | None = None,
) -> tuple[Solution, Fugacity]:
    """B states at T (K) and P (Pa); ln φ (B, S) of states near by may be given to start from."""
    programme = model.programme(temperature, pressure, feed)
    columns = np.flatnonzero(model.gas)
    pulls = gas.pulls(temperature)
    found = unanswered(programme)

    def answer(logs: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
        energies = programme.energies[index]
        energies[:, columns] += logs
        part = minimise(_part(programme, index, energies))
        _put(found, index, part)
        n = part.amounts[:, columns]
        state = gas.state(temperature[index], pressure[index], n, pulls.of_states(index))
        return _known(state.log_fugacity, n), state.y

    if start is None:
        settled = settle_along(answer, np.zeros((len(feed), columns.size)))
    else:
        settled = settle(answer, np.nan_to_num(start[:, columns]))
    logarithms = np.zeros(programme.energies.shape)
    logarithms[:, columns] = settled.x
    return _judged(found, settled.error), Fugacity(logarithms, settled.error)


def real_heated_equilibria(
    model: StageModel,
    gas: RealGas,
    enthalpy: FloatArray,
    pressure: FloatArray,
    feed: FloatArray,
    start: FloatArray,
) -> tuple[Solution, FloatArray, Fugacity]:
    """B states of given enthalpy (B,) J, sought from ``start`` (B,) K, and their temperatures."""
    programme, warmth = model.heated_programme(enthalpy, pressure, feed, start)
    columns = np.flatnonzero(model.gas)
    found = unanswered(programme)
    temperature = start.copy()
    logarithms = np.zeros(programme.energies.shape)

    def answer(x: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
        constants, kelvins = np.split(x, 2, axis=1)
        energies, offsets = programme.energies[index], warmth.offsets[index]
        energies[:, columns] += constants
        # In units of the first temperature looked at, so that both halves have one size.
        offsets[:, columns] += kelvins * start[index, np.newaxis]
        heated = replace(
            warmth,
            offsets=offsets,
            contents=warmth.contents[index],
            start=temperature[index],
        )
        part, T = minimise_heated(_part(programme, index, energies), heated)
        _put(found, index, part)
        temperature[index] = np.where(part.certified, T, temperature[index])
        n = part.amounts[:, columns]
        state = gas.state(T, pressure[index], n)
        logs = _known(state.log_fugacity, n)
        slopes = _known(state.log_fugacity_by_temperature, n)
        logarithms[index[:, np.newaxis], columns] = logs
        scale = (T / start[index])[:, np.newaxis]
        return np.hstack([logs + slopes, -slopes * scale]), np.hstack([state.y, state.y])

    settled = settle_along(answer, np.zeros((len(feed), 2 * columns.size)))
    solution = _judged(found, settled.error)
    T = np.where(solution.certified, temperature, np.nan)
    return solution, T, Fugacity(logarithms, settled.error)


def _part(programme: Programme, index: IntArray, energies: FloatArray) -> Programme:
    return replace(programme, supplies=programme.supplies[index], energies=energies)


def _known(values: FloatArray, amounts: FloatArray) -> FloatArray:
    """0 in place of NaN where a solved state has no gas."""
    return np.where((amounts.sum(axis=1) == 0.0)[:, np.newaxis], 0.0, values)


def _judged(solution: Solution, error: FloatArray) -> Solution:
    """The solution with φ's residual in its stationarity; what did not settle is uncertified."""
    unsettled = solution.certified & ~(error <= SETTLED)
    certificate = replace(
        solution.certificate, stationarity=solution.certificate.stationarity + error
    )
    if not unsettled.any():
        return replace(solution, certificate=certificate)
    status = np.where(unsettled, np.int8(Status.UNSETTLED), solution.status).astype(np.int8)
    amounts, multipliers = solution.amounts.copy(), solution.multipliers.copy()
    amounts[unsettled] = multipliers[unsettled] = np.nan
    return replace(
        solution, amounts=amounts, multipliers=multipliers, status=status, certificate=certificate
    )


def _put(whole: Solution, index: IntArray, part: Solution) -> None:
    """Write the answers of some states over those that stand there."""
    for ours, theirs in ((whole, part), (whole.certificate, part.certificate)):
        for field in fields(ours):
            array = getattr(ours, field.name)
            if isinstance(array, np.ndarray):
                array[index] = getattr(theirs, field.name)
