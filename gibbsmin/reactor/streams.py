"""What enters a stage."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np

from gibbsmin.arrays import FloatArray

Values: TypeAlias = float | FloatArray
"""One value, or one for each of B states."""


@dataclass(frozen=True)
class Stream:
    """A feed in SI units: of one state, or of a batch where its values are arrays (B,).

    Parameters
    ----------
    name
        As the user calls it.
    temperature
        K.
    pressure
        Pa, absolute.
    amounts
        Record name to mol, or to mol/s where ``is_flow``.
    unit
        The unit the user wrote the amounts in, for reports.
    is_flow
        Whether the amounts are per time.
    remarks
        What the result should say of how it was given.
    warnings
        What the result should warn of: what of it looks wrong.
    """

    name: str
    temperature: Values
    pressure: Values
    amounts: Mapping[str, Values]
    unit: str
    is_flow: bool
    remarks: tuple[str, ...] = ()
    warnings: tuple[str, ...] = ()


def first(value: Values) -> float:
    """The value of the first state, of which a single result tells."""
    return float(np.ravel(value)[0])
