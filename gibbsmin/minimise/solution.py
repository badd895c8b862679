"""The minimiser's answer to a batch."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
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

    @property
    def certified(self) -> BoolArray:
        """Whether each state is proved, shape (states,)."""
        return np.equal(self.status, Status.CERTIFIED)
