"""Tolerances of the minimiser, in one frozen object."""

from __future__ import annotations

from dataclasses import dataclass, fields
from math import isfinite

from gibbsmin.errors import InputError


@dataclass(frozen=True, slots=True)
class Settings:
    """What a certificate must show, and how far a solver may go.

    Parameters
    ----------
    gap_tolerance
        Largest duality gap per mole of feed atoms, in RT (default 1e-10).
    balance_tolerance
        Largest relative residual of a row of the balance (default 1e-12).
    stationarity_tolerance
        Largest difference between a present species' potential and that of its elements, in RT
        (default 1e-10): the relative error of each mole fraction.

    Raises
    ------
    InputError
        A tolerance is not a positive finite number.
    """

    gap_tolerance: float = 1e-10
    balance_tolerance: float = 1e-12
    stationarity_tolerance: float = 1e-10

    def __post_init__(self) -> None:
        for field in fields(self):
            value = getattr(self, field.name)
            if not (isinstance(value, int | float) and isfinite(value) and value > 0):
                raise InputError(
                    f"found {value!r}",
                    "accepted is a positive finite number",
                    key=f"settings.{field.name}",
                )
