"""What the functions of this kernel share, as plain named tuples of arrays.

K changes of the data, then ln T and ln P, are the J = K + 2 columns of every array of changes;
they lie innermost, so that each step is a vector operation over them.
"""

from __future__ import annotations

from typing import NamedTuple

from gibbsmin.arrays import BoolArray, FloatArray, IntArray

AT_TEMPERATURE, AT_CONTENT, AT_ENTROPY = 0, 1, 2
"""What fixes the temperature: itself, the enthalpy (in a closed vessel the energy), the entropy."""

TEMPERATURE, PRESSURE, HEAT, ENTROPY_GENERATION, FIRST = 0, 1, 2, 3, 4
"""Rows of the results; from ``FIRST`` on stand species, driving forces and conversions."""


class Laid(NamedTuple):
    """What all states of a stage share.

    ``matrix`` (m, S) is A and ``feed`` (m, F) its columns of the feed's records.  ``condensed``
    lists the columns that are no gases, ``same`` (F, F) and ``forms`` (F, S) tell which records
    are forms of a fed one.  ``enthalpies`` and ``entropies`` (S, J) are changes of the records'
    numbers, those after ``fed_`` (F, J) of the records that enter.  ``kind`` is one of the three
    above.
    """

    matrix: FloatArray
    feed: FloatArray
    gas: BoolArray
    volumes: FloatArray
    condensed: IntArray
    same: BoolArray
    forms: BoolArray
    enthalpies: FloatArray
    entropies: FloatArray
    fed_enthalpies: FloatArray
    fed_entropies: FloatArray
    kind: int
    closed: bool
    boundary_follows: bool
    gas_constant: float
    standard_pressure: float


class States(NamedTuple):
    """The states' own numbers, (B,), (B, S) or (B, F).

    ``enthalpies`` and ``entropies`` are molar, with the pressure terms of solids and liquids but
    without mixing; ``slopes`` is ∂g̃/∂ln T.
    """

    usable: BoolArray
    temperature: FloatArray
    pressure: FloatArray
    amounts: FloatArray
    forces: FloatArray
    enthalpies: FloatArray
    entropies: FloatArray
    heat_capacity: FloatArray
    slopes: FloatArray
    heat: FloatArray
    boundary: FloatArray
    needs_compressor: BoolArray
    volume: FloatArray
    fed: FloatArray


class Given(NamedTuple):
    """K changes of what enters and of what is asked; a first axis of 1 stands for all states.

    ``energies`` (B, S, K) are changes of g̃ that the records' numbers alone do not give, or empty.
    ``fed`` (B, F, L), ``content`` and ``entropy`` (B, L) are those of what enters, but for the
    records' numbers, in L of the ``columns``; in the others it does not change.  ``heat``
    and ``temperature`` are asked for, and so is ``room``: the pressure or, in a closed vessel, the
    volume.
    """

    energies: FloatArray
    columns: IntArray
    fed: FloatArray
    content: FloatArray
    entropy: FloatArray
    heat: FloatArray
    temperature: FloatArray
    room: FloatArray


class Passed(NamedTuple):
    """K changes of what leaves, for the next stage; of no states where nothing follows."""

    temperature: FloatArray
    pressure: FloatArray
    amounts: FloatArray


class Scratch(NamedTuple):
    """A worker's arrays: J = K + 2 columns, m rows, S species, F fed records."""

    work: FloatArray  # (m, S + F)
    columns: IntArray  # (m,)
    rows: IntArray  # (m,) rows of the gas's basis records
    supplies: FloatArray  # (m, J)
    energies: FloatArray  # (S, J), then of a·λ − g̃
    amounts: FloatArray  # (S, J)
    system: FloatArray  # (m + 1, 2 (m + 1))
    right: FloatArray  # (m + 1, J)
    solved: FloatArray  # (m + 1, J)
    scale: FloatArray  # (m + 1,)
    contents: FloatArray  # (4, J): taken up of enthalpy or energy, of entropy, P V, a row at hand
