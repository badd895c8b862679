"""A block of states, one after the other: the order of the methods."""

from __future__ import annotations

from math import isfinite, isnan

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.log_newton import guess_fractions, minimise_from
from gibbsmin.minimise.kernel.proof import BALANCE, GAP, STATIONARITY, prove
from gibbsmin.minimise.kernel.simplex import start_from_costs
from gibbsmin.minimise.kernel.storage import Answers, Network, Scratch
from gibbsmin.minimise.kernel.tableau import renew_reduced
from gibbsmin.minimise.kernel.warm import resume
from gibbsmin.minimise.status import Method, Status

CERTIFIED = int(Status.CERTIFIED)
UNCERTIFIED = int(Status.UNCERTIFIED)
INFEASIBLE = int(Status.INFEASIBLE)
INVALID = int(Status.INVALID)
COMPILED = int(Method.COMPILED)
RECOVERY = int(Method.RECOVERY)

_COLD_LIMIT = 80
_WARM_LIMIT = 12


def solve_states(
    network: Network,
    scratch: Scratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    warm: bool,
    answers: Answers,
) -> None:
    """Answer each state of a block: from its neighbours, else cold, else by recovery steps."""
    run = 0  # states certified in a row, on which the next may build
    for s in range(energies.shape[0]):
        if not load(network, scratch, energies[s], supplies[s]):
            answers.status[s] = INVALID
            run = 0
            continue
        figures = answers.figures[s]
        certified = warm and run > 0
        if certified:
            certified = solve_warm(
                network, scratch, energies, supplies, tolerances, answers, s, run, figures
            )
        status = CERTIFIED
        answers.method[s] = COMPILED
        if not certified:
            run = 0
            status = solve_cold(network, scratch, tolerances, figures, True, True)
        if status == UNCERTIFIED:
            answers.method[s] = RECOVERY
            status = recover(network, scratch, energies[s], supplies[s], tolerances, figures)
        answers.status[s] = status
        if status == CERTIFIED:
            store(network, scratch, answers, s)
            run = run + 1 if whole_face(scratch) else 0


def load(network: Network, scratch: Scratch, energies: FloatArray, supplies: FloatArray) -> bool:
    """Copy one state into the scratch, gases first; False where a value is not finite."""
    state = scratch.state
    finite = True
    for i in range(energies.size):
        value = energies[network.order[i]]
        finite = finite and isfinite(value)
        state.energies[i] = value
    for e in range(supplies.size):
        finite = finite and isfinite(supplies[e])
        state.supplies[e] = supplies[e]
    return finite


def solve_warm(
    network: Network,
    scratch: Scratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
    s: int,
    run: int,
    figures: FloatArray,
) -> bool:
    """Newton's method from the states before; False where that leads nowhere soon."""
    log_total = resume(
        network,
        scratch.state,
        scratch.tableau,
        scratch.point,
        energies,
        supplies,
        answers.multipliers,
        scratch.log_totals,
        s,
        run,
    )
    if isnan(log_total):
        return False
    return finish(network, scratch, tolerances, figures, log_total, True, _WARM_LIMIT)


def solve_cold(
    network: Network,
    scratch: Scratch,
    tolerances: FloatArray,
    figures: FloatArray,
    diluted: bool,
    keep: bool,
) -> int:
    """Linear programme, then Newton's method from its basis."""
    tableau, point, equations = scratch.tableau, scratch.point, scratch.equations
    if not start_from_costs(network, scratch.state, tableau, equations, diluted):
        return INFEASIBLE
    renew_reduced(scratch.state, tableau)
    log_total = guess_fractions(tableau, point, equations, network.gases)
    if finish(network, scratch, tolerances, figures, log_total, keep, _COLD_LIMIT):
        return CERTIFIED
    return UNCERTIFIED


def recover(
    network: Network,
    scratch: Scratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    figures: FloatArray,
) -> int:
    """Try the other ways to exchange phases and to guess the start; the last way's status."""
    status = UNCERTIFIED
    for attempt in range(1, 4):
        load(network, scratch, energies, supplies)
        diluted = attempt == 1
        keep = attempt == 2
        status = solve_cold(network, scratch, tolerances, figures, diluted, keep)
        if status == CERTIFIED:
            break
    return status


def finish(
    network: Network,
    scratch: Scratch,
    tolerances: FloatArray,
    figures: FloatArray,
    log_total: float,
    keep: bool,
    limit: int,
) -> bool:
    """Newton's method and the certificate; whether the state is proved."""
    state, tableau, point = scratch.state, scratch.tableau, scratch.point
    log_total = minimise_from(
        state, tableau, point, scratch.equations, network.gases, log_total, keep, limit
    )
    if isnan(log_total):
        return False
    prove(network, state, tableau, point, scratch.proof, figures)
    history = scratch.log_totals
    history[2], history[1], history[0] = history[1], history[0], log_total
    return bool(
        figures[GAP] <= tolerances[GAP]
        and figures[BALANCE] <= tolerances[BALANCE]
        and figures[STATIONARITY] <= tolerances[STATIONARITY]
    )


def whole_face(scratch: Scratch) -> bool:
    """Whether no species is forced to zero, so that the tableau serves the next state too."""
    for i in range(scratch.state.face.size):
        if not scratch.state.face[i]:
            return False
    return True


def store(network: Network, scratch: Scratch, answers: Answers, s: int) -> None:
    """Write amounts, potentials and driving forces in the programme's order."""
    for i in range(scratch.point.amounts.size):
        column = network.order[i]
        answers.amounts[s, column] = scratch.point.amounts[i]
        answers.forces[s, column] = scratch.proof.forces[i]
    for e in range(scratch.proof.multipliers.size):
        answers.multipliers[s, e] = scratch.proof.multipliers[e]
