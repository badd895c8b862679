"""The minimiser's answer to a batch."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.minimise.certificate import Certificate
from gibbsmin.minimise.status import Status


@dataclass(frozen=True, slots=True, eq=False)
class Solution:
    """Amounts, multipliers and proof of every state; NaN where a state is not certified.

    Parameters
    ----------
    amounts
        n, shape (states, species), mol.
    multipliers
        λ of the rows of A, shape (states, rows), in RT: the chemical potentials of the elements.
        NaN for a row whose species must all be zero (its potential is unbounded), 0 for a row
        that depends on others (only sums Aᵀλ have a meaning then).
    status
        A :class:`Status` for each state, shape (states,), as small integers.
    method
        The :class:`Method` that answered each state, shape (states,), as small integers.
    certificate
        The proof of each state.
    """

    amounts: FloatArray
    multipliers: FloatArray
    status: npt.NDArray[np.int8]
    method: npt.NDArray[np.int8]
    certificate: Certificate

    def with_states(self, index: IntArray, others: Solution) -> Solution:
        """This solution with some states replaced by others."""
        replaced = _replaced(self, index, others)
        certificate = _replaced(self.certificate, index, others.certificate)
        return Solution(**(replaced | {"certificate": Certificate(**certificate)}))

    @property
    def certified(self) -> BoolArray:
        """Whether each state is proved, shape (states,)."""
        return np.equal(self.status, Status.CERTIFIED)


def _replaced(ours: Any, index: IntArray, theirs: Any) -> dict[str, Any]:
    """The arrays of one object with some states taken from another's."""
    arrays = {}
    for field in fields(ours):
        array = getattr(ours, field.name)
        if isinstance(array, np.ndarray):
            array = array.copy()
            array[index] = getattr(theirs, field.name)
            arrays[field.name] = array
    return arrays
