"""What the kernel's functions share: the fixed part of a batch, and a worker's scratch memory.

Plain named tuples of arrays, because both the interpreter and the compiler take them.  They are
small on purpose: each function receives the few arrays it works on.  The kernel orders species
with the gases first; ``order`` leads back to the programme's columns.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray, IntArray

ZERO = 1e-9
"""Tableau entries below this are no pivots."""

FORBIDDEN = 1e30
"""g̃ of a species that the supplies force to zero: its fraction underflows to exactly 0."""


class Network(NamedTuple):
    """The part of a programme that all its states share.

    ``matrix`` is A (rows, species) with the gases first, ``gases`` their number, ``log_matrix``
    ln|a|.  ``first``, ``row`` and ``entry`` list the nonzero entries of A column by column.
    ``sign`` of a row is +1 or −1 when all its entries have that sign, else 0.
    """

    matrix: FloatArray
    gases: int
    order: IntArray
    direction: FloatArray
    atoms: FloatArray
    lift: FloatArray
    sign: IntArray
    first: IntArray
    row: IntArray
    entry: FloatArray
    log_matrix: FloatArray


class State(NamedTuple):
    """One state: g̃, b, and whether the supplies allow each species to be positive."""

    energies: FloatArray
    supplies: FloatArray
    face: BoolArray


class Heat(NamedTuple):
    """What a state whose enthalpy is given needs: its energies as functions of temperature.

    ``pieces`` (7, species × pieces) and ``breaks`` are those of
    :func:`gibbsmin.minimise.kernel.heat.evaluate_energies`; ``offset`` is added to H/R and
    ``constant`` to g̃.  ``target`` is H/R wanted, the lowest and the highest T, and the frozen
    heat capacity over R of the point at hand.
    """

    pieces: FloatArray
    breaks: FloatArray
    offset: FloatArray
    constant: FloatArray
    enthalpy: FloatArray
    capacity: FloatArray
    reduced: FloatArray
    target: FloatArray


class Tableau(NamedTuple):
    """A basis B: ``entries`` ν = B⁻¹[A | I], ``supply`` B⁻¹b, ``reduced`` g̃ − νᵀg̃_B.

    ``basis[j]`` is the member of row j: a species or, from ``species`` on, the artificial variable
    of a row.  ``rank[0]`` rows bind; those beyond are dependent or forced to zero.
    """

    entries: FloatArray
    basis: IntArray
    supply: FloatArray
    reduced: FloatArray
    rank: IntArray


class Pivots(NamedTuple):
    """Tableaus by the pivots that led to them (:mod:`gibbsmin.minimise.kernel.pivots`).

    ``root[0]`` is the latest of the first places, ``child`` of a place the latest of those that
    one step leads to, ``sibling`` the one before it; ``key`` is the step, ``sign`` of a first place
    the signs of the supplies.  ``taken[0]`` places are taken; the last one is spare.
    """

    entries: FloatArray
    basis: IntArray
    rank: IntArray
    sign: IntArray
    key: IntArray
    child: IntArray
    sibling: IntArray
    root: IntArray
    taken: IntArray


class Point(NamedTuple):
    """Where the iteration stands.

    ``log_fraction`` is u_j = ln y of the gas members, 0 for condensed ones; ``exponent`` is ln y
    of every gas and ``fraction`` y itself; ``amounts`` is n; ``condensed`` the amount of each row's
    condensed member.  ``power`` and ``bits`` are one piece of memory, read as doubles and as whole
    numbers.
    """

    log_fraction: FloatArray
    exponent: FloatArray
    amounts: FloatArray
    condensed: FloatArray
    fraction: FloatArray
    power: FloatArray
    bits: IntArray


class Equations(NamedTuple):
    """The log balances of the rows listed in ``unknown`` and their linearisation."""

    unknown: IntArray
    gain: FloatArray
    loss: FloatArray
    weight: FloatArray
    jacobian: FloatArray
    step: FloatArray


class Proof(NamedTuple):
    """λ, a·λ − g̃, and for each row b − A n and |b| + |A| n."""

    multipliers: FloatArray
    forces: FloatArray
    residual: FloatArray
    size: FloatArray


class Scratch(NamedTuple):
    """One worker's memory, reused from state to state; ``log_totals`` are the last three ln N.

    ``temperature`` is T of the state at hand where its enthalpy is given, else 0.
    """

    state: State
    tableau: Tableau
    pivots: Pivots
    point: Point
    equations: Equations
    proof: Proof
    heat: Heat
    log_totals: FloatArray
    temperature: FloatArray


class Answers(NamedTuple):
    """Where a block's answers go, state by state; ``figures`` are gap, balance, stationarity."""

    amounts: FloatArray
    multipliers: FloatArray
    forces: FloatArray
    figures: FloatArray
    status: npt.NDArray[np.int8]
    method: npt.NDArray[np.int8]


def network_of(
    matrix: FloatArray, gas: BoolArray, direction: FloatArray, atoms: FloatArray
) -> Network:
    """Order the species with the gases first and list the nonzero entries of each column."""
    order = np.argsort(~gas, kind="stable").astype(np.int64)
    A = np.ascontiguousarray(matrix[:, order])
    columns, rows = np.nonzero(A.T)
    entry = A[rows, columns]
    with np.errstate(divide="ignore"):
        log_matrix = np.log(np.abs(A))
    sign = np.where((A >= 0).all(axis=1), 1, np.where((A <= 0).all(axis=1), -1, 0))
    return Network(
        matrix=A,
        gases=int(gas.sum()),
        order=order,
        direction=direction,
        atoms=np.ascontiguousarray(atoms[order]),
        lift=direction @ A,
        sign=sign.astype(np.int64),
        first=np.searchsorted(columns, np.arange(A.shape[1] + 1)).astype(np.int64),
        row=rows.astype(np.int64),
        entry=entry,
        log_matrix=log_matrix,
    )


def scratch_for(network: Network, pieces: FloatArray, breaks: FloatArray) -> Scratch:
    """Memory for one worker, of order rows × (species + rows), beside the energies' pieces."""
    rows, species = network.matrix.shape
    power = np.zeros(species)
    return Scratch(
        State(np.zeros(species), np.zeros(rows), np.ones(species, dtype=np.bool_)),
        Tableau(
            entries=np.zeros((rows, species + rows)),
            basis=np.zeros(rows, dtype=np.int64),
            supply=np.zeros(rows),
            reduced=np.zeros(species),
            rank=np.zeros(1, dtype=np.int64),
        ),
        pivots_for(rows, species, 0),
        Point(
            np.zeros(rows),
            np.zeros(species),
            np.zeros(species),
            np.zeros(rows),
            np.zeros(species),
            power=power,
            bits=power.view(np.int64),
        ),
        Equations(
            unknown=np.zeros(rows, dtype=np.int64),
            gain=np.zeros(rows),
            loss=np.zeros(rows),
            weight=np.zeros(species),
            jacobian=np.zeros((rows + 2, rows + 2)),
            step=np.zeros(rows + 2),
        ),
        Proof(np.zeros(rows), np.zeros(species), np.zeros(rows), np.zeros(rows)),
        Heat(
            pieces,
            breaks,
            offset=np.zeros(species),
            constant=np.zeros(species),
            enthalpy=np.zeros(species),
            capacity=np.zeros(species),
            reduced=np.zeros(species),
            target=np.zeros(4),
        ),
        log_totals=np.zeros(3),
        temperature=np.zeros(1),
    )


def pivots_for(rows: int, species: int, places: int) -> Pivots:
    """Memory for some tableaus to keep, and the spare one."""

    def none(*shape: int) -> IntArray:
        return np.full(shape, -1, dtype=np.int64)

    return Pivots(
        entries=np.zeros((places + 1, rows, species + rows)),
        basis=none(places + 1, rows),
        rank=none(places + 1),
        sign=none(places + 1, rows),
        key=none(places + 1),
        child=none(places + 1),
        sibling=none(places + 1),
        root=none(1),
        taken=np.zeros(1, dtype=np.int64),
    )
