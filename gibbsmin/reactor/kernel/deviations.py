"""Standard deviations of solved states, one state after the other.

K independent changes of one standard uncertainty each are followed through; only the roots of
their sums of squares leave, so that nothing of the size of a sensitivity is kept beyond one state.
"""

from __future__ import annotations

from math import nan, sqrt

from gibbsmin.arrays import FloatArray
from gibbsmin.reactor.kernel.conditions import settle_conditions
from gibbsmin.reactor.kernel.respond import respond
from gibbsmin.reactor.kernel.rows import add, deviation
from gibbsmin.reactor.kernel.storage import (
    AT_TEMPERATURE,
    ENTROPY_GENERATION,
    FIRST,
    HEAT,
    PRESSURE,
    TEMPERATURE,
    Given,
    Laid,
    Passed,
    Scratch,
    States,
)


def deviate_states(
    laid: Laid,
    states: States,
    given: Given,
    scratch: Scratch,
    passed: Passed,
    out: FloatArray,
    first: int,
    last: int,
) -> None:
    """Write the deviations of the states from first up to last into the rows of ``out``."""
    for b in range(first, last):
        if states.usable[b] and respond(laid, states, given, scratch, b):
            settle_conditions(laid, states, given, scratch, b)
            write_deviations(laid, states, given, scratch, passed, out, b)
            continue
        for r in range(out.shape[1]):
            out[b, r] = nan
        if passed.temperature.shape[0] > 0:
            passed.temperature[b] = nan
            passed.pressure[b] = nan
            passed.amounts[b] = nan


def write_deviations(
    laid: Laid,
    states: States,
    given: Given,
    scratch: Scratch,
    passed: Passed,
    out: FloatArray,
    b: int,
) -> None:
    """The root of the sum of squares of each result's changes, and what the next stage takes."""
    count = scratch.contents.shape[1] - 2
    T, P, n, gas = states.temperature[b], states.pressure[b], states.amounts[b], laid.gas
    log_T, log_P = scratch.solved[0], scratch.solved[1]
    row = scratch.contents[3]
    out[b, TEMPERATURE] = T * deviation(log_T, count)
    out[b, PRESSURE] = P * deviation(log_P, count)

    heat_in = given.heat[b if given.heat.shape[0] > 1 else 0]
    for k in range(count):
        if laid.kind == AT_TEMPERATURE:
            row[k] = scratch.contents[0, k]
        else:
            row[k] = heat_in[k]
    out[b, HEAT] = deviation(row, count)
    boundary = states.boundary[b]
    along = states.heat[b] / boundary**2 * T if laid.boundary_follows else 0.0
    for k in range(count):
        row[k] = scratch.contents[1, k] - row[k] / boundary + along * log_T[k]
    out[b, ENTROPY_GENERATION] = nan if states.needs_compressor[b] else deviation(row, count)

    total = 0.0
    for k in range(count):
        row[k] = 0.0
    for i in range(n.size):
        if gas[i]:
            total += n[i]
            add(row, 1.0, scratch.amounts[i], count)
    place = FIRST
    for i in range(n.size):
        if gas[i]:
            y, squares = n[i] / total, 0.0
            changes = scratch.amounts[i]
            for k in range(count):
                change = changes[k] - y * row[k]
                squares += change * change
            out[b, place] = sqrt(squares) / total
        else:
            out[b, place] = deviation(scratch.amounts[i], count)
        place += 1
    for c in range(laid.condensed.size):
        out[b, place] = deviation(scratch.energies[laid.condensed[c]], count)
        place += 1
    write_conversions(laid, states, given, scratch, out, place, b)
    if passed.temperature.shape[0] > 0:
        for k in range(count):
            passed.temperature[b, k] = T * log_T[k]
            passed.pressure[b, k] = P * log_P[k]
            for i in range(n.size):
                passed.amounts[b, i, k] = scratch.amounts[i, k]


def write_conversions(
    laid: Laid,
    states: States,
    given: Given,
    scratch: Scratch,
    out: FloatArray,
    place: int,
    b: int,
) -> None:
    """d(1 − out/in) = (out/in d in − d out)/in, all forms of a substance counted together."""
    row = scratch.contents[3]
    count = row.size - 2
    changed = given.fed[b if given.fed.shape[0] > 1 else 0]
    n = states.amounts[b]
    for f in range(laid.same.shape[0]):
        entering, leaving = 0.0, 0.0
        for j in range(laid.same.shape[1]):
            entering += states.fed[b, j] if laid.same[f, j] else 0.0
        for k in range(count):
            row[k] = 0.0
        for i in range(n.size):
            if laid.forms[f, i]:
                leaving += n[i]
                add(row, -1.0, scratch.amounts[i], count)
        left = leaving / entering
        for j in range(laid.same.shape[1]):
            if laid.same[f, j]:
                for c in range(given.columns.size):
                    row[given.columns[c]] += left * changed[j, c]
        out[b, place + f] = deviation(row, count) / entering
