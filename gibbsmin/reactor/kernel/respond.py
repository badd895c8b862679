"""What the amounts and driving forces of one state answer to every change.

The equations are those of :mod:`gibbsmin.reactor.derivatives`.
"""

from __future__ import annotations

from gibbsmin.reactor.kernel.rows import add, copy
from gibbsmin.reactor.kernel.storage import Given, Laid, Scratch, States
from gibbsmin.reactor.kernel.system import choose_basis, solve_gas, stands_in

_ONSET = 1e-8
"""An absent phase whose driving force is nearer to 0 than this, in RT, stands at its onset."""

_ROUNDING = 1e-9
"""What elimination leaves of a change of supplies that the records present take up whole."""


def respond(laid: Laid, states: States, given: Given, scratch: Scratch, b: int) -> bool:
    """dn and d(a·λ − g̃) along all columns; False where the state has no derivatives."""
    n, gas = states.amounts[b], laid.gas
    species, m = n.size, scratch.columns.size
    total = 0.0
    for i in range(species):
        if gas[i]:
            total += n[i]
        elif n[i] == 0.0 and abs(states.forces[b, i]) < _ONSET:
            return False
    if not total > 0.0:
        return False
    choose_basis(laid, n, scratch)
    for i in range(species):
        if not gas[i] and n[i] > 0.0 and not stands_in(scratch.columns, i):
            return False
    fill_energies(laid, states, given, scratch, b)
    if not fill_supplies(laid, given, scratch, b):
        return False
    columns, work, energies = scratch.columns, scratch.work, scratch.energies
    width = energies.shape[1]

    # Rows of condensed phases: dλ_c = dg̃_c, which the gases feel as a change of their energies.
    count = 0
    for r in range(m):
        column = columns[r]
        if column < 0:
            continue
        if gas[column]:
            scratch.rows[count] = r
            count += 1
            continue
        copy(scratch.contents[3], energies[column], width)
        for i in range(species):
            if work[r, i] != 0.0:
                add(energies[i], -work[r, i], scratch.contents[3], width)
    if not solve_gas(laid, n, total, scratch, count):
        return False

    right = scratch.solved
    for i in range(species):
        row = energies[i]
        for k in range(width):
            row[k] = -row[k]
        for p in range(count):
            share = work[scratch.rows[p], i]
            if share != 0.0:
                add(row, share, right[p], width)
        changes = scratch.amounts[i]
        if gas[i]:
            for k in range(width):
                changes[k] = n[i] * (right[count, k] + row[k])
        else:
            for k in range(width):
                changes[k] = 0.0
    for r in range(m):
        column = columns[r]
        if column >= 0 and not gas[column]:
            changes = scratch.amounts[column]
            copy(changes, scratch.supplies[r], width)
            for i in range(species):
                if gas[i] and work[r, i] != 0.0:
                    add(changes, -work[r, i], scratch.amounts[i], width)
    return True


def fill_energies(laid: Laid, states: States, given: Given, scratch: Scratch, b: int) -> None:
    """dg̃ = (dH − T dS)/RT of each record, its slope along ln T, and that along ln P."""
    R = laid.gas_constant
    T, P = states.temperature[b], states.pressure[b]
    RT = R * T
    count = laid.enthalpies.shape[1] - 2
    own = given.energies.shape[0] == 0
    for i in range(laid.gas.size):
        row = scratch.energies[i]
        if own:
            for k in range(count):
                row[k] = laid.enthalpies[i, k] / RT - laid.entropies[i, k] / R
        else:
            for k in range(count):
                row[k] = given.energies[b, i, k]
        row[count] = states.slopes[b, i]
        row[count + 1] = 1.0 if laid.gas[i] else P * laid.volumes[i] / RT


def fill_supplies(laid: Laid, given: Given, scratch: Scratch, b: int) -> bool:
    """db′ along all columns; False where no record present can take up what is changed."""
    supplies, work = scratch.supplies, scratch.work
    m, width = supplies.shape
    species = laid.gas.size
    for r in range(m):
        for k in range(width):
            supplies[r, k] = 0.0
    columns = given.columns
    changed = given.fed[b if given.fed.shape[0] > 1 else 0]
    for f in range(laid.feed.shape[1]):
        touched = False
        for c in range(columns.size):
            touched = touched or changed[f, c] != 0.0
        if not touched:
            continue
        for r in range(m):
            share = work[r, species + f]
            if scratch.columns[r] < 0:
                if abs(share) > _ROUNDING:
                    return False
            else:
                for c in range(columns.size):
                    supplies[r, columns[c]] += share * changed[f, c]
    return True
