"""Newton's method on eight states of one basis at a time, each at its own pace.

The method is that of :mod:`gibbsmin.minimise.kernel.log_newton` without its exchanges: a state that
needs another basis leaves the lanes with its place marked, one that needs many iterations for
good.  A lane whose state is done takes
the next one.  No lane feels its neighbours, so that the answer depends on the state alone.
"""

from __future__ import annotations

from gibbsmin.arrays import IntArray
from gibbsmin.minimise.kernel.lane_equations import (
    evaluate_lanes,
    fill_lane_jacobian,
    fill_lane_residuals,
    judge_phases,
    list_entries,
    solve_lanes,
)
from gibbsmin.minimise.kernel.lane_storage import Lanes, Window
from gibbsmin.minimise.kernel.storage import Point, Tableau
from gibbsmin.minimise.kernel.vector import LANES, larger, load, magnitude, smaller, spread, store

_LAST = 1e-7  # residual from which one step more leaves less than round-off
_NEAR = 0.1  # residual below which phases are judged
_AT_ODDS = 1e-11
_LONGEST_STEP = 8.0
_ITERATIONS = 12
_IDLE = -1


def solve_group(
    tableau: Tableau,
    unknown: IntArray,
    size: int,
    lanes: Lanes,
    window: Window,
    first: int,
    last: int,
    gases: int,
) -> int:
    """Solve ``window.order[first:last]``, states of one basis; return the end of those settled.

    The settled ones are moved to the front of their part of ``order``.
    """
    list_entries(tableau, unknown, size, lanes, gases)
    following = first
    settled = first
    busy = 0
    for lane in range(LANES):
        lanes.held[lane] = _IDLE
        if following < last:
            take_state(tableau, lanes, window, lane, window.order[following])
            following += 1
            busy += 1
    while busy > 0:
        evaluate_lanes(tableau, unknown, size, lanes, gases)
        fill_lane_residuals(tableau, unknown, size, lanes)
        judge_phases(tableau, unknown, size, lanes, gases)
        fill_lane_jacobian(tableau, unknown, size, lanes)
        solve_lanes(lanes, size + 1)
        take_lane_steps(unknown, size, lanes)
        for lane in range(LANES):
            if lanes.held[lane] == _IDLE:
                continue
            residual = lanes.residual[0, lane]
            lanes.spent[lane] += 1
            done = residual <= _LAST
            at_odds = residual < _NEAR and not lanes.odds[0, lane] <= _AT_ODDS
            if not (done or at_odds or lanes.spent[lane] == _ITERATIONS):
                continue
            member = lanes.held[lane]
            window.turns[member] = at_odds
            if done or at_odds:
                keep_state(tableau, lanes, window, lane)
            if done and not at_odds:
                window.order[settled] = member
                settled += 1
            lanes.held[lane] = _IDLE
            busy -= 1
            if following < last:
                take_state(tableau, lanes, window, lane, window.order[following])
                following += 1
                busy += 1
    return settled


def put_in(window: Window, member: int, tableau: Tableau, point: Point, log_total: float) -> None:
    """Let a state that was started wait in the window."""
    for i in range(tableau.reduced.size):
        window.reduced[member, i] = tableau.reduced[i]
    for j in range(tableau.supply.size):
        window.supply[member, j] = tableau.supply[j]
        window.log_fraction[member, j] = point.log_fraction[j]
    window.log_total[member] = log_total


def take_out(window: Window, member: int, tableau: Tableau, point: Point) -> float:
    """Take a state of the window up where it stands; return its ln N."""
    for i in range(tableau.reduced.size):
        tableau.reduced[i] = window.reduced[member, i]
    for j in range(tableau.supply.size):
        tableau.supply[j] = window.supply[member, j]
        point.log_fraction[j] = window.log_fraction[member, j]
    return float(window.log_total[member])


def take_state(tableau: Tableau, lanes: Lanes, window: Window, lane: int, member: int) -> None:
    """Load a state of the window into a lane."""
    lanes.held[lane] = member
    lanes.spent[lane] = 0
    for i in range(tableau.reduced.size):
        lanes.reduced[i, lane] = window.reduced[member, i]
    for j in range(tableau.supply.size):
        lanes.supply[j, lane] = window.supply[member, j]
        lanes.log_fraction[j, lane] = window.log_fraction[member, j]
    lanes.log_total[0, lane] = window.log_total[member]


def keep_state(tableau: Tableau, lanes: Lanes, window: Window, lane: int) -> None:
    """Write where a lane stands back to its state of the window."""
    member = lanes.held[lane]
    for j in range(tableau.supply.size):
        window.log_fraction[member, j] = lanes.log_fraction[j, lane]
    window.log_total[member] = lanes.log_total[0, lane]


def take_lane_steps(unknown: IntArray, size: int, lanes: Lanes) -> None:
    """Move each lane along its step, shortened to the longest allowed."""
    longest = spread(0.0)
    for k in range(size + 1):
        longest = larger(magnitude(load(lanes.step, k)), longest)
    scale = smaller(_LONGEST_STEP / longest, spread(1.0))
    for k in range(size):
        j = unknown[k]
        store(lanes.log_fraction, j, load(lanes.log_fraction, j) + scale * load(lanes.step, k))
    store(lanes.log_total, 0, load(lanes.log_total, 0) + scale * load(lanes.step, size))
