"""A block of states in lanes: start each, gather those of one basis, solve and prove them together.

What is not proved here keeps its status, for :mod:`gibbsmin.minimise.kernel.states` to answer.
Without a coarse grid the path of a state depends on that state alone, as long as there is memory
for the tableaus it meets, so that a batch equals a loop of its states.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.active_set import carrier, leaving_member, most_supersaturated
from gibbsmin.minimise.kernel.lane_between import start_between
from gibbsmin.minimise.kernel.lane_equations import evaluate_lanes, judge_phases
from gibbsmin.minimise.kernel.lane_newton import put_in, solve_group, take_out, take_state
from gibbsmin.minimise.kernel.lane_proof import prove_lanes
from gibbsmin.minimise.kernel.lane_storage import Lanes, LaneScratch, Window
from gibbsmin.minimise.kernel.loading import (
    CERTIFIED,
    COMPILED,
    is_proved,
    load_state,
    whole_face,
)
from gibbsmin.minimise.kernel.log_newton import guess_fractions
from gibbsmin.minimise.kernel.pivots import after_exchange, forget_all, seen_from, spare_place
from gibbsmin.minimise.kernel.residuals import evaluate_condensed, evaluate_gas, list_unknowns
from gibbsmin.minimise.kernel.simplex import feeds_gas, find_basis
from gibbsmin.minimise.kernel.storage import Answers, Network
from gibbsmin.minimise.kernel.tableau import renew_reduced, renew_supply
from gibbsmin.minimise.kernel.vector import LANES

_LEFT, _UNTRIED = -1, -2
"""Places of a state that the lanes could not prove, and of one they have yet to take."""

_ROUNDS = 4


def solve_in_lanes(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    stride: int,
    answers: Answers,
) -> None:
    """Answer what the lanes can prove, one stretch of states after another.

    With a stride above 1, a coarse grid of every so many states is solved first, and those
    between start from a curve through it.
    """
    states = energies.shape[0]
    stretch = scratch.window.kept.size
    for first in range(0, states, stretch):
        last = min(first + stretch, states)
        for s in range(first, last):
            scratch.window.kept[s - first] = _UNTRIED
        if stride > 1:
            solve_cold(
                network, scratch, energies, supplies, tolerances, answers, first, last, stride
            )
            count = start_between(
                network, scratch, energies, supplies, answers, first, last, stride
            )
            solve_members(network, scratch, energies, supplies, tolerances, answers, first, count)
        solve_cold(network, scratch, energies, supplies, tolerances, answers, first, last, 1)


def solve_cold(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
    first: int,
    last: int,
    stride: int,
) -> None:
    """Solve every so many states of a stretch by itself, but for those already tried."""
    window, pivots = scratch.window, scratch.pivots
    count = 0
    s = first
    while s < last:
        place = _LEFT
        if window.kept[s - first] == _UNTRIED:
            unused = pivots.taken[0] == 0
            place = start_state(network, scratch, energies[s], supplies[s], count)
            if place == spare_place(pivots) and not unused:
                solve_members(
                    network, scratch, energies, supplies, tolerances, answers, first, count
                )
                forget_all(pivots)
                forget_places(window, last - first)
                count = 0
                continue
            window.kept[s - first] = _LEFT
            if place >= 0 and place != spare_place(pivots):
                window.place[count] = place
                window.state[count] = s
                count += 1
        s += stride
    solve_members(network, scratch, energies, supplies, tolerances, answers, first, count)


def forget_places(window: Window, count: int) -> None:
    """Keep of each state only whether it was tried."""
    for at in range(count):
        if window.kept[at] != _UNTRIED:
            window.kept[at] = _LEFT


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
    log_total = guess_fractions(seen, scratch.point, scratch.equations, network.gases)
    put_in(window, member, tableau, scratch.point, log_total)
    return place


def solve_members(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
    first: int,
    count: int,
) -> None:
    """Solve the states in the window, again where phases enter or leave."""
    window = scratch.window
    for _ in range(_ROUNDS):
        solve_round(network, scratch, energies, supplies, tolerances, answers, first, count)
        turned = False
        for member in range(count):
            place = window.place[member]
            window.place[member] = _LEFT
            if place != _LEFT and window.turns[member]:
                s = window.state[member]
                following = turn(network, scratch, energies[s], supplies[s], place, member)
                window.place[member] = following
                turned = turned or following != _LEFT
        if not turned:
            return


def turn(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    place: int,
    member: int,
) -> int:
    """Let a phase leave or enter the basis of a state; return the place of the new one.

    The choice is that of :func:`gibbsmin.minimise.kernel.log_newton.update_phases`.
    """
    state, point, gases = scratch.state, scratch.point, network.gases
    load_state(network, state, energies, supplies)
    seen = seen_from(scratch.pivots, place, scratch.tableau)
    log_total = take_out(scratch.window, member, seen, point)
    evaluate_gas(seen, point, gases, log_total)
    row = evaluate_condensed(seen, point, gases, True)
    if row >= 0:
        column = carrier(seen, point, gases, row)
    else:
        column = most_supersaturated(state, seen, point, gases)
        if column >= 0:
            row = leaving_member(seen, point, gases, column, True)
    if column < 0 or row < 0:
        return _LEFT
    following = after_exchange(scratch.pivots, place, row, column)
    if following == spare_place(scratch.pivots):
        return _LEFT
    point.log_fraction[row] = point.exponent[column] if column < gases else 0.0
    turned = seen_from(scratch.pivots, following, scratch.tableau)
    renew_supply(state, turned)
    if not feeds_gas(turned, gases):
        return _LEFT
    renew_reduced(state, turned)
    put_in(scratch.window, member, turned, point, log_total)
    return following


def solve_round(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    tolerances: FloatArray,
    answers: Answers,
    first: int,
    count: int,
) -> None:
    """Solve the states of each basis, and prove and store what was solved."""
    window, equations, lanes = scratch.window, scratch.equations, scratch.lanes
    sort_by_place(window, scratch.pivots.taken[0], count)
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
                take_given(network, lanes, energies, supplies, lane, window.state[member])
            evaluate_lanes(seen, equations.unknown, size, lanes, network.gases)
            judge_phases(seen, equations.unknown, size, lanes, network.gases)
            prove_lanes(network, seen, lanes)
            for lane in range(min(LANES, settled - eight)):
                member = window.order[eight + lane]
                s = window.state[member]
                if store_lane(network, lanes, tolerances, answers, lane, s):
                    window.kept[s - first] = place
                    window.kept_total[s - first] = window.log_total[member]


def sort_by_place(window: Window, places: int, count: int) -> None:
    """List the first members of the window place by place, those of one place in order."""
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
) -> bool:
    """Write a lane's answer where its certificate stands; return whether it does."""
    for k in range(tolerances.size):
        answers.figures[s, k] = lanes.figures[k, lane]
    if not is_proved(answers.figures[s], tolerances):
        return False
    for i in range(network.order.size):
        column = network.order[i]
        answers.amounts[s, column] = lanes.amounts[i, lane]
        answers.forces[s, column] = lanes.forces[i, lane]
    for e in range(answers.multipliers.shape[1]):
        answers.multipliers[s, e] = lanes.multipliers[e, lane]
    answers.status[s] = CERTIFIED
    answers.method[s] = COMPILED
    return True
