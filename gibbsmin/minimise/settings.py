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
    compiled
        Whether the compiled method goes first (default), the conic one taking what it leaves;
        otherwise the conic method answers every state.
    warm_start
        Whether the compiled method starts a state from others of the batch where those are near
        (default): the one before it, or in small systems, of which it solves eight states at a
        time, a coarse grid.  The answer is the same to 1e-10.
    threads
        Threads of the compiled method; 0 (default) for as many as there are processors.

    Raises
    ------
    InputError
        A tolerance is not a positive finite number, or the threads are no whole number ≥ 0.
    """

    gap_tolerance: float = 1e-10
    balance_tolerance: float = 1e-12
    stationarity_tolerance: float = 1e-10
    compiled: bool = True
    warm_start: bool = True
    threads: int = 0

    def __post_init__(self) -> None:
        if type(self.threads) is not int or self.threads < 0:
            raise InputError(
                f"found {self.threads!r}",
                "accepted is a whole number, 0 or more",
                key="settings.threads",
            )
        for field in fields(self):
            if not field.name.endswith("_tolerance"):
                continue
            value = getattr(self, field.name)
            if not (isinstance(value, int | float) and isfinite(value) and value > 0):
                raise InputError(
                    f"found {value!r}",
                    "accepted is a positive finite number",
                    key=f"settings.{field.name}",
                )
