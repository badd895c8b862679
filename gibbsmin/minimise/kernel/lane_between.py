"""Starts for the states between those of a coarse grid: potentials on a curve through it.

Neighbours in a batch are neighbours on a grid.  Where the energies and the supplies of a state lie
on the curve through its neighbours on the coarse grid, which are known, its potentials will too.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.lane_newton import put_in
from gibbsmin.minimise.kernel.lane_storage import LaneScratch, Window
from gibbsmin.minimise.kernel.loading import load_state
from gibbsmin.minimise.kernel.pivots import seen_from
from gibbsmin.minimise.kernel.simplex import feeds_gas
from gibbsmin.minimise.kernel.storage import Answers, Network, Tableau
from gibbsmin.minimise.kernel.tableau import renew_reduced, renew_supply
from gibbsmin.minimise.kernel.warm import retired_rows_hold

_FAR = 0.3  # distance of a basis member's g̃ from the curve
_UNEVEN = 0.1  # relative distance of a supply from the curve


def start_between(
    network: Network,
    scratch: LaneScratch,
    energies: FloatArray,
    supplies: FloatArray,
    answers: Answers,
    first: int,
    last: int,
    stride: int,
) -> int:
    """Put the states between solved ones of equal phases into the window; return their number."""
    window = scratch.window
    intervals = (last - first - 1) // stride
    count = 0
    for k in range(intervals):
        begin = first + k * stride
        place = window.kept[k * stride]
        if not same_phases(scratch, place, window.kept[(k + 1) * stride], network.gases):
            continue
        seen = seen_from(scratch.pivots, place, scratch.tableau)
        for s in range(begin + 1, begin + stride):
            if not load_state(network, scratch.state, energies[s], supplies[s]):
                continue
            nodes = curve(
                network, scratch, seen, energies, supplies, first, k, intervals, stride, s
            )
            if nodes == 0 or not retired_rows_hold(scratch.state, seen):
                continue
            renew_supply(scratch.state, seen)
            if not feeds_gas(seen, network.gases):
                continue
            renew_reduced(scratch.state, seen)
            log_total = follow_curve(network, scratch, seen, answers, first, nodes)
            put_in(window, count, seen, scratch.point, log_total)
            window.place[count] = place
            window.state[count] = s
            count += 1
    return count


def same_phases(scratch: LaneScratch, place: int, other: int, gases: int) -> bool:
    """Whether two solved states have the same condensed phases: potentials turn where one ends."""
    if place == other:
        return place >= 0
    if place < 0 or other < 0:
        return False
    pivots = scratch.pivots
    balance = 0
    for j in range(pivots.rank[place]):
        member = pivots.basis[place, j]
        if member >= gases:
            balance += 1
            found = False
            for h in range(pivots.rank[other]):
                found = found or pivots.basis[other, h] == member
            if not found:
                return False
    for h in range(pivots.rank[other]):
        balance -= pivots.basis[other, h] >= gases
    return balance == 0


def curve(
    network: Network,
    scratch: LaneScratch,
    tableau: Tableau,
    energies: FloatArray,
    supplies: FloatArray,
    first: int,
    k: int,
    intervals: int,
    stride: int,
    s: int,
) -> int:
    """Nodes and weights of the cubic, else of the straight line, that leads to a state.

    Return how many they are, 0 where neither does.
    """
    window = scratch.window
    place = window.kept[k * stride]
    start = min(max(k - 1, 0), intervals - 3)
    cubic = intervals >= 3
    if cubic:
        for p in range(4):
            node = window.kept[(start + p) * stride]
            cubic = cubic and same_phases(scratch, place, node, network.gases)
    if cubic:
        t = (s - first) / stride - start
        set_node(window, 0, first + start * stride, -(t - 1.0) * (t - 2.0) * (t - 3.0) / 6.0)
        set_node(window, 1, first + (start + 1) * stride, t * (t - 2.0) * (t - 3.0) / 2.0)
        set_node(window, 2, first + (start + 2) * stride, -t * (t - 1.0) * (t - 3.0) / 2.0)
        set_node(window, 3, first + (start + 3) * stride, t * (t - 1.0) * (t - 2.0) / 6.0)
        if on_curve(network, window, tableau, energies, supplies, 4, s):
            return 4
    t = (s - first) / stride - k
    set_node(window, 0, first + k * stride, 1.0 - t)
    set_node(window, 1, first + (k + 1) * stride, t)
    return 2 if on_curve(network, window, tableau, energies, supplies, 2, s) else 0


def set_node(window: Window, p: int, state: int, weight: float) -> None:
    """One node of the curve."""
    window.node[p] = state
    window.weight[p] = weight


def on_curve(
    network: Network,
    window: Window,
    tableau: Tableau,
    energies: FloatArray,
    supplies: FloatArray,
    nodes: int,
    s: int,
) -> bool:
    """Whether a state lies about where the curve has it, by its basis' g̃ and its supplies."""
    for j in range(tableau.rank[0]):
        column = network.order[tableau.basis[j]]
        distance = energies[s, column]
        for p in range(nodes):
            distance -= window.weight[p] * energies[window.node[p], column]
        if not abs(distance) <= _FAR:
            return False
    for e in range(supplies.shape[1]):
        distance = supplies[s, e]
        for p in range(nodes):
            distance -= window.weight[p] * supplies[window.node[p], e]
        if not abs(distance) <= _UNEVEN * abs(supplies[s, e]):
            return False
    return True


def follow_curve(
    network: Network,
    scratch: LaneScratch,
    tableau: Tableau,
    answers: Answers,
    first: int,
    nodes: int,
) -> float:
    """Set u of the basis' gases from the curve of the potentials; return ln N on it."""
    window, multipliers = scratch.window, scratch.equations.step
    for e in range(tableau.supply.size):
        multipliers[e] = 0.0
        for p in range(nodes):
            multipliers[e] += window.weight[p] * answers.multipliers[window.node[p], e]
    for j in range(tableau.rank[0]):
        member = tableau.basis[j]
        scratch.point.log_fraction[j] = 0.0
        if member < network.gases:
            potential = -scratch.state.energies[member]
            for p in range(network.first[member], network.first[member + 1]):
                potential += network.entry[p] * multipliers[network.row[p]]
            scratch.point.log_fraction[j] = potential
    log_total = 0.0
    for p in range(nodes):
        log_total += window.weight[p] * window.kept_total[window.node[p] - first]
    return log_total
