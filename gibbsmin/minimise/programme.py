"""The canonical problem: a batch of Gibbs-energy minimisations that share one matrix."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.errors import InputError

_DIRECTION_SLACK = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Programme:
    """Minimise Σ_gas n (g̃ + ln(n/N)) + Σ_condensed n g̃ subject to A n = b, n ≥ 0.

    N = Σ_gas n.  Every state of the batch has its own g̃ and b; A is shared.  Rows of A may be
    dependent and of mixed sign, and b may have any sign.  The arrays are taken as double
    precision and are not copied where they are so already.

    Parameters
    ----------
    matrix
        A, shape (rows, species): element counts, charge, holds.
    supplies
        b, shape (states, rows), mol.
    energies
        g̃ = G/RT, gases with + ln(P/P°), shape (states, species).
    gas
        Whether each species belongs to the gas, shape (species,).
    direction
        d with Aᵀd ≥ 1 for every species, shape (rows,).  It bounds the programme and repairs
        the multipliers of a certificate: 1 on element rows and 0 on holds; with a charge row
        1 + Z and −1 (Z the largest positive charge per atom).
    atoms
        Atoms in one mole of each species, shape (species,); 0 for the electron.

    Raises
    ------
    InputError
        A shape does not fit, the matrix is not finite, an atom count is negative, or the
        direction does not do what it must.  Values that are not finite in ``supplies`` or
        ``energies`` spoil their own state only (:attr:`Status.INVALID`).
    """

    matrix: FloatArray
    supplies: FloatArray
    energies: FloatArray
    gas: BoolArray
    direction: FloatArray
    atoms: FloatArray

    def __post_init__(self) -> None:
        for field in fields(self):
            kind = np.bool_ if field.name == "gas" else np.float64
            array = _as_array(field.name, getattr(self, field.name), kind)
            object.__setattr__(self, field.name, array)
        self._check_shapes()
        self._check_values()

    @property
    def states(self) -> int:
        """Number of states in the batch."""
        return int(self.supplies.shape[0])

    def subset(self, first: int, count: int = 1) -> Programme:
        """The programme of some consecutive states."""
        chosen = slice(first, first + count)
        return replace(self, supplies=self.supplies[chosen], energies=self.energies[chosen])

    def _check_shapes(self) -> None:
        if self.matrix.ndim != 2 or 0 in self.matrix.shape:
            raise InputError(
                f"found an array of shape {self.matrix.shape}",
                "accepted is (rows, species), each at least 1",
                key="programme.matrix",
            )
        rows, species = self.matrix.shape
        states = self.supplies.shape[0] if self.supplies.ndim == 2 else "states"
        accepted: dict[str, tuple[int | str, ...]] = {
            "supplies": (states, rows),
            "energies": (states, species),
            "gas": (species,),
            "direction": (rows,),
            "atoms": (species,),
        }
        for name, shape in accepted.items():
            found = getattr(self, name).shape
            if found != shape:
                raise InputError(
                    f"found an array of shape {found}",
                    f"accepted is ({', '.join(map(str, shape))}{',' if len(shape) == 1 else ''})"
                    f" beside a matrix of shape {self.matrix.shape}",
                    key=f"programme.{name}",
                )

    def _check_values(self) -> None:
        if not np.isfinite(self.matrix).all():
            raise InputError(
                "found an entry that is not finite",
                "accepted are finite numbers",
                key="programme.matrix",
            )
        if not (np.isfinite(self.atoms) & (self.atoms >= 0)).all():
            raise InputError(
                "found a count that is negative or not finite",
                "accepted are atoms in one mole of each species, 0 or more",
                key="programme.atoms",
            )
        lift = self.direction @ self.matrix
        if not (lift >= 1 - _DIRECTION_SLACK).all():
            column = int(np.argmin(np.where(np.isnan(lift), -np.inf, lift)))
            raise InputError(
                f"found {lift[column]:g} for the species in column {column}",
                "accepted is a direction d with Aᵀd ≥ 1 for every species",
                key="programme.direction",
            )


def _as_array(
    name: str, value: npt.ArrayLike, kind: type[np.bool_] | type[np.float64]
) -> npt.NDArray[np.bool_ | np.float64]:
    try:
        return np.ascontiguousarray(value, dtype=kind)
    except (TypeError, ValueError):
        raise InputError(
            "found something that is no array of numbers",
            "accepted is an array of numbers",
            key=f"programme.{name}",
        ) from None
