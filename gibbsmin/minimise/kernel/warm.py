"""A start from the states before: their potentials, carried along the line of a grid.

Neighbours in a batch are neighbours on a grid.  The basis and its tableau stay; along a straight
line of equal steps the potentials are extrapolated through the last three states.
"""

from __future__ import annotations

from math import nan

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.heat import load_heated
from gibbsmin.minimise.kernel.storage import Answers, Network, Scratch, State, Tableau
from gibbsmin.minimise.kernel.tableau import renew_reduced, renew_supply

_FAR = 4.0  # change of a basis member's g̃ beyond which a cold start is cheaper
_UNEVEN = 0.3  # relative change of the step beyond which there is no straight line
_UNMET = 1e-11


def resume(
    network: Network,
    scratch: Scratch,
    energies: FloatArray,
    supplies: FloatArray,
    contents: FloatArray,
    offsets: FloatArray,
    temperatures: FloatArray,
    answers: Answers,
    s: int,
    run: int,
) -> float:
    """Predict the potentials of state ``s`` from the ``run`` states solved just before it.

    Where its enthalpy is given, its temperature too.  Return ln N, or NaN where the states
    before are no guide.
    """
    heated = temperatures[s] > 0.0
    state, tableau, point = scratch.state, scratch.tableau, scratch.point
    multipliers, log_totals = answers.multipliers, scratch.log_totals
    if not same_rows(network, supplies[s], supplies[s - 1]):
        return nan
    change, bend = differences(network, tableau, energies, s, run)
    if change > _FAR:
        return nan
    supply_change, supply_bend = supply_differences(supplies, s, run)
    straight = bend <= _UNEVEN * change and supply_bend <= _UNEVEN * supply_change
    if heated and run >= 2:
        step = contents[s] - contents[s - 1]
        even = abs(step - (contents[s - 1] - contents[s - 2])) <= _UNEVEN * abs(step)
        straight = straight and even
    points = min(run, 3) if straight else 1
    if heated:
        scratch.temperature[0] = extrapolate(
            temperatures[s - 1],
            temperatures[s - 2] if points > 1 else 0.0,
            temperatures[s - 3] if points == 3 else 0.0,
            points,
        )
        load_heated(network, scratch, contents[s], offsets[s])
    renew_supply(state, tableau)
    renew_reduced(state, tableau)
    if not retired_rows_hold(state, tableau):
        return nan
    for j in range(tableau.rank[0]):
        member = tableau.basis[j]
        if member >= network.gases:
            point.log_fraction[j] = 0.0
            continue
        potential = -state.energies[member]
        if points == 1:
            potential = point.log_fraction[j]
        else:
            for p in range(network.first[member], network.first[member + 1]):
                e = network.row[p]
                value = extrapolate(
                    multipliers[s - 1, e],
                    multipliers[s - 2, e],
                    multipliers[s - 3, e] if points == 3 else 0.0,
                    points,
                )
                potential += network.entry[p] * value
        point.log_fraction[j] = potential
    return extrapolate(log_totals[0], log_totals[1], log_totals[2], points)


def extrapolate(last: float, second: float, third: float, points: int) -> float:
    """The next value of a sequence, by a polynomial through its last one, two or three."""
    if points == 3:
        return 3.0 * (last - second) + third
    return 2.0 * last - second if points == 2 else last


def same_rows(network: Network, supplies: FloatArray, before: FloatArray) -> bool:
    """Whether the supplies leave the same face as those before, as far as single rows say."""
    for e in range(supplies.size):
        if network.sign[e] != 0 and (supplies[e] == 0.0) != (before[e] == 0.0):
            return False
    return True


def retired_rows_hold(state: State, tableau: Tableau) -> bool:
    """Whether the supplies of dependent rows still agree with the others."""
    species = tableau.reduced.size
    for j in range(tableau.rank[0], tableau.supply.size):
        total = 0.0
        size = 0.0
        for e in range(state.supplies.size):
            term = tableau.entries[j, species + e] * state.supplies[e]
            total += term
            size += abs(term)
        if abs(total) > _UNMET * size:
            return False
    return True


def differences(
    network: Network, tableau: Tableau, energies: FloatArray, s: int, run: int
) -> tuple[float, float]:
    """Largest first and second difference of the basis members' g̃ over the last states."""
    change = 0.0
    bend = 0.0
    for j in range(tableau.rank[0]):
        column = network.order[tableau.basis[j]]
        step = energies[s, column] - energies[s - 1, column]
        change = max(change, abs(step))
        if run >= 2:
            before = energies[s - 1, column] - energies[s - 2, column]
            bend = max(bend, abs(step - before))
    return change, bend


def supply_differences(supplies: FloatArray, s: int, run: int) -> tuple[float, float]:
    """The same of the supplies, each relative to its own size."""
    change = 0.0
    bend = 0.0
    for e in range(supplies.shape[1]):
        size = abs(supplies[s, e])
        if size == 0.0:
            continue
        step = (supplies[s, e] - supplies[s - 1, e]) / size
        change = max(change, abs(step))
        if run >= 2:
            bend = max(bend, abs(step - (supplies[s - 1, e] - supplies[s - 2, e]) / size))
    return change, bend
