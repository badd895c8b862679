"""The conditions that meet a stage's specification once its data have changed.

The equations are those of :mod:`gibbsmin.reactor.stage_changes`.
"""

from __future__ import annotations

from math import log

from gibbsmin.arrays import FloatArray
from gibbsmin.reactor.kernel.rows import add
from gibbsmin.reactor.kernel.storage import (
    AT_ENTROPY,
    AT_TEMPERATURE,
    Given,
    Laid,
    Scratch,
    States,
)


def settle_conditions(laid: Laid, states: States, given: Given, scratch: Scratch, b: int) -> None:
    """Put d ln T and d ln P into the specification, and both into every change of the amounts.

    What is taken up of enthalpy (or energy) and entropy then stands in the contents.
    """
    pV = fill_contents(laid, states, scratch, b)
    take_off_inlet(laid, states, given, scratch, b)
    contents, T, P = scratch.contents, states.temperature[b], states.pressure[b]
    width = contents.shape[1]
    count = width - 2
    heat = given.heat[b if given.heat.shape[0] > 1 else 0]
    temperature = given.temperature[b if given.temperature.shape[0] > 1 else 0]
    room = given.room[b if given.room.shape[0] > 1 else 0]
    asked = contents[1] if laid.kind == AT_ENTROPY else contents[0]
    a, c = (1.0, 0.0) if laid.kind == AT_TEMPERATURE else (asked[count], asked[count + 1])
    d, e = (0.0, 1.0)
    if laid.closed:
        d, e = 0.0 - contents[2, count] / pV, 1.0 - contents[2, count + 1] / pV
    determinant = a * e - c * d
    log_T, log_P = scratch.solved[0], scratch.solved[1]
    for k in range(count):
        if laid.kind == AT_TEMPERATURE:
            of_T = temperature[k] / T
        elif laid.kind == AT_ENTROPY:
            of_T = -asked[k]
        else:
            of_T = heat[k] - asked[k]
        if laid.closed:
            of_P = contents[2, k] / pV - room[k] / states.volume[b]
        else:
            of_P = room[k] / P
        log_T[k] = (of_T * e - c * of_P) / determinant
        log_P[k] = (a * of_P - of_T * d) / determinant
    moved = False
    for k in range(count):
        moved |= log_T[k] != 0.0 or log_P[k] != 0.0
    if not moved:
        return
    for i in range(laid.gas.size):
        follow(scratch.amounts[i], log_T, log_P, count)
        if not laid.gas[i]:
            follow(scratch.energies[i], log_T, log_P, count)
    follow(contents[0], log_T, log_P, count)
    follow(contents[1], log_T, log_P, count)


def follow(row: FloatArray, log_T: FloatArray, log_P: FloatArray, count: int) -> None:
    """What d ln T and d ln P make of a row."""
    along_T, along_P = row[count], row[count + 1]
    for k in range(count):
        row[k] += along_T * log_T[k] + along_P * log_P[k]


def fill_contents(laid: Laid, states: States, scratch: Scratch, b: int) -> float:
    """Changes of the outlet's enthalpy (energy in a closed vessel), entropy and P V of the gas.

    Gives P V itself.
    """
    R, P0 = laid.gas_constant, laid.standard_pressure
    T, P, n, gas = states.temperature[b], states.pressure[b], states.amounts[b], laid.gas
    content, entropy, room = scratch.contents[0], scratch.contents[1], scratch.contents[2]
    width = content.size
    count = width - 2
    total, of_solids = 0.0, 0.0
    for i in range(n.size):
        total += n[i] if gas[i] else 0.0
        of_solids += n[i] * laid.volumes[i]
    for k in range(width):
        content[k], entropy[k], room[k] = 0.0, 0.0, 0.0
    for i in range(n.size):
        changes = scratch.amounts[i]
        per_mole, disorder = states.enthalpies[b, i], states.entropies[b, i]
        if gas[i]:
            if n[i] > 0.0:
                disorder -= R * log(n[i] / total * P / P0)
            if laid.closed:
                per_mole -= R * T
                add(room, R * T, changes, width)
        elif laid.closed:
            per_mole -= laid.volumes[i] * (P - P0)
        if gas[i] or n[i] > 0.0:
            of_H, of_S = laid.enthalpies[i], laid.entropies[i]
            for k in range(width):
                content[k] += per_mole * changes[k] + n[i] * of_H[k]
                entropy[k] += disorder * changes[k] + n[i] * of_S[k]
    pV: float = total * R * T
    Cp = states.heat_capacity[b]
    content[count] += Cp * T
    entropy[count] += Cp
    room[count] += pV
    entropy[count + 1] -= pV / T
    if laid.closed:
        content[count] -= pV
        pressure_work = 0.0
    else:
        pressure_work = P * of_solids
    content[count + 1] += pressure_work
    return pV


def take_off_inlet(laid: Laid, states: States, given: Given, scratch: Scratch, b: int) -> None:
    """Less what enters, by its own changes and by those of its records' numbers."""
    content, entropy = scratch.contents[0], scratch.contents[1]
    count = content.size - 2
    of_content = given.content[b if given.content.shape[0] > 1 else 0]
    of_entropy = given.entropy[b if given.entropy.shape[0] > 1 else 0]
    for c in range(given.columns.size):
        content[given.columns[c]] -= of_content[c]
        entropy[given.columns[c]] -= of_entropy[c]
    for f in range(laid.fed_enthalpies.shape[0]):
        add(content, -states.fed[b, f], laid.fed_enthalpies[f], count)
        add(entropy, -states.fed[b, f], laid.fed_entropies[f], count)
