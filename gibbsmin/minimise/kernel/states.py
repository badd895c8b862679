"""A block of states, one after the other: the order of the methods."""

from __future__ import annotations

from math import inf, isnan, nan

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.heat import evaluate_energies, guess_temperature, load_heated
from gibbsmin.minimise.kernel.loading import (
    CERTIFIED,
    COMPILED,
    INFEASIBLE,
    INVALID,
    RECOVERY,
    UNCERTIFIED,
    is_proved,
    load_state,
    whole_face,
)
from gibbsmin.minimise.kernel.log_newton import guess_fractions, minimise_from
from gibbsmin.minimise.kernel.proof import prove
from gibbsmin.minimise.kernel.search import search_temperature
from gibbsmin.minimise.kernel.simplex import start_from_costs
from gibbsmin.minimise.kernel.storage import Answers, Network, Scratch
from gibbsmin.minimise.kernel.tableau import renew_reduced
from gibbsmin.minimise.kernel.warm import resume

WARM, COLD, LAST = 0, 1, 4
"""Ways to start a state: from the states before, cold, and the recovery steps up to the last."""

_ITERATIONS = 80
_WARM_ITERATIONS = 12


def solve_states(
    network: Network,
    scratch: Scratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    warm: bool,
    contents: FloatArray,
    offsets: FloatArray,
    temperatures: FloatArray,
    answers: Answers,
) -> None:
    """Answer each state of a block: from its neighbours, else cold, else by recovery steps.

    A temperature above 0 is where to look for the one at which the state has its content, H/R;
    ``energies`` then are what does not depend on it, and the temperature found takes its place.
    """
    gases = network.gases
    state, tableau, point = scratch.state, scratch.tableau, scratch.point
    run = 0  # states certified in a row, on which the next may build
    for s in range(energies.shape[0]):
        if answers.status[s] == CERTIFIED:  # in lanes, which leave nothing to build on
            run = 0
            continue
        status = UNCERTIFIED if load_state(network, state, energies[s], supplies[s]) else INVALID
        start = temperatures[s]
        heated = start > 0.0
        way = WARM if warm and run > 0 else COLD
        while status == UNCERTIFIED and way <= LAST:
            if way == WARM:
                log_total = resume(
                    network,
                    scratch,
                    energies,
                    supplies,
                    contents,
                    offsets,
                    temperatures,
                    answers,
                    s,
                    run,
                )
            else:
                run = 0
                load_state(network, state, energies[s], supplies[s])
                scratch.temperature[0] = start
                if heated:
                    load_heated(network, scratch, contents[s], offsets[s])
                log_total = start_cold(network, scratch, way)
            if log_total == inf:
                status = INFEASIBLE
            elif not isnan(log_total):
                limit = _WARM_ITERATIONS if way == WARM else _ITERATIONS
                log_total = minimise_from(
                    state,
                    tableau,
                    point,
                    scratch.equations,
                    scratch.heat,
                    scratch.temperature,
                    gases,
                    log_total,
                    keeps(way),
                    limit,
                )
                if not isnan(log_total):
                    prove(network, state, tableau, point, scratch.proof, answers.figures[s])
                    if is_proved(answers.figures[s], tolerances):
                        status = CERTIFIED
            way += 1
        answers.status[s] = status
        answers.method[s] = COMPILED if way <= COLD + 1 else RECOVERY
        if heated:
            temperatures[s] = scratch.temperature[0] if status == CERTIFIED else nan
        if status == CERTIFIED:
            store(network, scratch, answers, s)
            remember(scratch.log_totals, log_total)
            run = run + 1 if whole_face(state) else 0
        else:
            run = 0


def start_cold(network: Network, scratch: Scratch, way: int) -> float:
    """Linear programme, by guessed fractions except in the last two ways; ln N, +∞ infeasible.

    Where the enthalpy is given, recovery is a search in temperature; +∞ where it fails.
    """
    state, tableau = scratch.state, scratch.tableau
    heated = scratch.temperature[0] > 0.0
    if heated and way > COLD:
        return search_temperature(network, scratch)
    diluted = way <= COLD + 1
    if not start_from_costs(network, state, tableau, scratch.pivots, scratch.equations, diluted):
        return inf
    if heated:
        T = guess_temperature(state, tableau, scratch.heat, scratch.temperature[0])
        if inf == T:
            return nan
        scratch.temperature[0] = T
        evaluate_energies(state, scratch.heat, T)
    renew_reduced(state, tableau)
    return guess_fractions(tableau, scratch.point, scratch.equations, network.gases)


def keeps(way: int) -> bool:
    """Whether all phases stay when one enters (:func:`add_phase`)."""
    return way in (WARM, COLD, COLD + 2)


def remember(log_totals: FloatArray, log_total: float) -> None:
    """Put ln N before the two latest."""
    log_totals[2], log_totals[1] = log_totals[1], log_totals[0]
    log_totals[0] = log_total


def store(network: Network, scratch: Scratch, answers: Answers, s: int) -> None:
    """Write amounts, potentials and driving forces in the programme's order."""
    for i in range(scratch.point.amounts.size):
        column = network.order[i]
        answers.amounts[s, column] = scratch.point.amounts[i]
        answers.forces[s, column] = scratch.proof.forces[i]
    for e in range(scratch.proof.multipliers.size):
        answers.multipliers[s, e] = scratch.proof.multipliers[e]
