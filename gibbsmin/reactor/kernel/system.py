"""The system that one state's changes solve, in the basis of its most abundant records.

See :mod:`gibbsmin.reactor.abundant_basis` and :mod:`gibbsmin.reactor.derivatives`.
"""

from __future__ import annotations

from math import inf, sqrt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.reactor.kernel.rows import add
from gibbsmin.reactor.kernel.storage import Laid, Scratch

_LARGEST_CONDITION = 1e12

_ZERO = 1e-9
"""Entries of the reduced balance below this are round-off."""


def choose_basis(laid: Laid, n: FloatArray, scratch: Scratch) -> None:
    """The balance in terms of the most abundant records: see :mod:`.abundant_basis`."""
    work, columns = scratch.work, scratch.columns
    m, species, fed = columns.size, n.size, laid.feed.shape[1]
    for r in range(m):
        columns[r] = -1
        for i in range(species):
            work[r, i] = laid.matrix[r, i]
        for f in range(fed):
            work[r, species + f] = laid.feed[r, f]
    for _ in range(m):
        heaviest, column = 0.0, -1
        for i in range(species):
            weight = n[i] if laid.gas[i] or n[i] == 0.0 else inf
            if weight > heaviest:
                for r in range(m):
                    if columns[r] < 0 and abs(work[r, i]) > _ZERO:
                        heaviest, column = weight, i
                        break
        if column < 0:
            return
        row, size = -1, 0.0
        for r in range(m):
            if columns[r] < 0 and abs(work[r, column]) > size:
                row, size = r, abs(work[r, column])
        inverse = 1.0 / work[row, column]
        for j in range(species + fed):
            work[row, j] *= inverse
        work[row, column] = 1.0
        for r in range(m):
            factor = work[r, column]
            if r != row and factor != 0.0:
                for j in range(species + fed):
                    work[r, j] -= factor * work[row, j]
                work[r, column] = 0.0
        columns[row] = column


def stands_in(columns: IntArray, column: int) -> bool:
    """Whether a column is one of the basis."""
    for r in range(columns.size):
        if columns[r] == column:
            return True
    return False


def solve_gas(laid: Laid, n: FloatArray, total: float, scratch: Scratch, count: int) -> bool:
    """The system of the gas's basis records and η, scaled to a unit diagonal, by its inverse."""
    system, right, scale, work = scratch.system, scratch.right, scratch.scale, scratch.work
    species, size, width = n.size, count + 1, scratch.right.shape[1]
    for p in range(size):
        for q in range(2 * size):
            system[p, q] = 0.0
        system[p, size + p] = 1.0
        if p < count:
            for k in range(width):
                right[p, k] = scratch.supplies[scratch.rows[p], k]
        else:
            for k in range(width):
                right[p, k] = 0.0
    for i in range(species):
        if not laid.gas[i] or n[i] == 0.0:
            continue
        for p in range(count):
            weighted = n[i] * work[scratch.rows[p], i]
            if weighted == 0.0:
                continue
            for q in range(p + 1):
                system[p, q] += weighted * work[scratch.rows[q], i]
            system[count, p] += weighted
            add(right[p], weighted, scratch.energies[i], width)
        add(right[count], n[i], scratch.energies[i], width)
    largest = 0.0
    for p in range(count):
        scale[p] = 1.0 / sqrt(system[p, p])
        largest = max(largest, abs(system[count, p]))
    if largest == 0.0:
        return False
    scale[count] = 1.0 / sqrt(largest)
    for p in range(size):
        for q in range(p + 1):
            system[p, q] *= scale[p] * scale[q]
            system[q, p] = system[p, q]
    if not invert(system, size):
        return False
    for p in range(size):
        row = scratch.solved[p]
        for k in range(width):
            row[k] = 0.0
        for q in range(size):
            add(row, scale[p] * system[p, size + q] * scale[q], right[q], width)
    return total > 0.0


def invert(system: FloatArray, size: int) -> bool:
    """Gauss-Jordan with partial pivoting of [M | 1]; False where M is as good as singular."""
    before = one_norm(system, 0, size)
    for k in range(size):
        pivot = k
        for p in range(k + 1, size):
            if abs(system[p, k]) > abs(system[pivot, k]):
                pivot = p
        if not abs(system[pivot, k]) > 0.0:
            return False
        if pivot != k:
            for q in range(2 * size):
                system[k, q], system[pivot, q] = system[pivot, q], system[k, q]
        inverse = 1.0 / system[k, k]
        for q in range(2 * size):
            system[k, q] *= inverse
        for p in range(size):
            factor = system[p, k]
            if p != k and factor != 0.0:
                for q in range(2 * size):
                    system[p, q] -= factor * system[k, q]
    return before * one_norm(system, size, size) < _LARGEST_CONDITION


def one_norm(system: FloatArray, start: int, size: int) -> float:
    """Largest sum of magnitudes of a column."""
    largest = 0.0
    for q in range(start, start + size):
        total = 0.0
        for p in range(size):
            total += abs(system[p, q])
        largest = max(largest, total)
    return largest
