"""A block of states in lanes: start each, gather those of one basis, solve and prove them together.

What is not proved here keeps its status, for :mod:`gibbsmin.minimise.kernel.states` to answer.
Which path a state takes depends on that state alone, so that a batch equals a loop of its states.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.lane_equations import evaluate_lanes, judge_phases
from gibbsmin.minimise.kernel.lane_newton import solve_group, take_state
from gibbsmin.minimise.kernel.lane_proof import prove_lanes
from gibbsmin.minimise.kernel.loading import (
    CERTIFIED,
    COMPILED,
    is_proved,
    load_state,
    whole_face,
)
from gibbsmin.minimise.kernel.log_newton import guess_fractions
from gibbsmin.minimise.kernel.pivots import forget_all, seen_from, spare_place
from gibbsmin.minimise.kernel.residuals import list_unknowns
from gibbsmin.minimise.kernel.simplex import find_basis, forces_zero
from gibbsmin.minimise.kernel.storage import Answers, Lanes, LaneScratch, Network, Tableau, Window
from gibbsmin.minimise.kernel.tableau import renew_reduced
from gibbsmin.minimise.kernel.vector import LANES

_LEFT = -1
"""Place of a state that is not for the lanes."""


def solve_in_lanes(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
) -> None:
    """Answer what the lanes can prove, window by window."""
    states = energies.shape[0]
    first = 0
    while first < states:
        unused = scratch.pivots.taken[0] == 0
        end = min(first + scratch.window.place.size, states)
        last = start_window(network, scratch, energies, supplies, first, end)
        solve_window(network, scratch, energies, supplies, tolerances, answers, first, last)
        if last < end:
            forget_all(scratch.pivots)
            if last == first and unused:
                last += 1  # more pivots than the memory holds: not for the lanes
        first = last


def start_window(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    first: int,
    end: int,
) -> int:
    """Start the states from ``first`` on while tableaus can be kept; return where that ends."""
    for s in range(first, end):
        place = start_state(network, scratch, energies[s], supplies[s], s - first)
        if place == spare_place(scratch.pivots):
            return s
        scratch.window.place[s - first] = place
    return end


def start_state(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    member: int,
) -> int:
    """Linear programme and guess of one state, kept in the window; return its basis' place.

    States with species forced to zero or without gas are not for the lanes.
    """
    state, tableau, window = scratch.state, scratch.tableau, scratch.window
    if not load_state(network, state, energies, supplies):
        return _LEFT
    place = find_basis(network, state, tableau, scratch.pivots, scratch.equations, True)
    if place == spare_place(scratch.pivots):
        return place
    if place < 0 or not whole_face(state):
        return _LEFT
    seen = seen_from(scratch.pivots, place, tableau)
    if not feeds_gas(seen, network.gases):
        return _LEFT
    renew_reduced(state, seen)
    window.log_total[member] = guess_fractions(
        seen, scratch.point, scratch.equations, network.gases
    )
    for i in range(tableau.reduced.size):
        window.reduced[member, i] = tableau.reduced[i]
    for j in range(tableau.supply.size):
        window.supply[member, j] = tableau.supply[j]
        window.log_fraction[member, j] = scratch.point.log_fraction[j]
    return place


def feeds_gas(tableau: Tableau, gases: int) -> bool:
    """Whether a gas row has a supply of its own, and no row forces species to zero."""
    fed = False
    for j in range(tableau.rank[0]):
        if tableau.supply[j] == 0.0:
            if forces_zero(tableau, j):
                return False
        elif tableau.basis[j] < gases:
            fed = True
    return fed


def solve_window(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
    first: int,
    last: int,
) -> None:
    """Solve the states of each basis, and prove and store what was solved."""
    window, equations, lanes = scratch.window, scratch.equations, scratch.lanes
    sort_by_place(window, scratch.pivots.taken[0], last - first)
    for place in range(scratch.pivots.taken[0]):
        begin, end = window.begin[place], window.begin[place + 1]
        if begin == end:
            continue
        seen = seen_from(scratch.pivots, place, scratch.tableau)
        size = list_unknowns(seen, scratch.point, equations, network.gases)
        settled = solve_group(
            seen, equations.unknown, size, lanes, window, begin, end, network.gases
        )
        for eight in range(begin, settled, LANES):
            for lane in range(LANES):
                member = window.order[min(eight + lane, settled - 1)]
                take_state(seen, lanes, window, lane, member)
                take_given(network, lanes, energies, supplies, lane, first + member)
            evaluate_lanes(seen, equations.unknown, size, lanes, network.gases)
            judge_phases(seen, equations.unknown, size, lanes, network.gases)
            prove_lanes(network, seen, lanes)
            for lane in range(min(LANES, settled - eight)):
                s = first + window.order[eight + lane]
                store_lane(network, lanes, tolerances, answers, lane, s)


def sort_by_place(window: Window, places: int, count: int) -> None:
    """List the window's members place by place, those of one place in their own order."""
    begin = window.begin
    for place in range(places + 2):
        begin[place] = 0
    for member in range(count):
        if window.place[member] != _LEFT:
            begin[window.place[member] + 2] += 1
    for place in range(places):
        begin[place + 2] += begin[place + 1]
    for member in range(count):
        if window.place[member] != _LEFT:
            at = begin[window.place[member] + 1]
            window.order[at] = member
            begin[window.place[member] + 1] = at + 1


def take_given(
    network: Network,
    lanes: Lanes,
    energies: FloatArray,
    supplies: FloatArray,
    lane: int,
    s: int,
) -> None:
    """Load g̃ and b of a state into a lane."""
    for i in range(energies.shape[1]):
        lanes.energies[i, lane] = energies[s, network.order[i]]
    for e in range(supplies.shape[1]):
        lanes.feed[e, lane] = supplies[s, e]


def store_lane(
    network: Network,
    lanes: Lanes,
    tolerances: FloatArray,
    answers: Answers,
    lane: int,
    s: int,
) -> None:
    """Write a lane's answer where its certificate stands."""
    for k in range(tolerances.size):
        answers.figures[s, k] = lanes.figures[k, lane]
    if not is_proved(answers.figures[s], tolerances):
        return
    for i in range(network.order.size):
        column = network.order[i]
        answers.amounts[s, column] = lanes.amounts[i, lane]
        answers.forces[s, column] = lanes.forces[i, lane]
    for e in range(answers.multipliers.shape[1]):
        answers.multipliers[s, e] = lanes.multipliers[e, lane]
    answers.status[s] = CERTIFIED
    answers.method[s] = COMPILED
