"""What enters a stage."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True)
class Stream:
    """A feed in SI units.

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
    """

    name: str
    temperature: float
    pressure: float
    amounts: Mapping[str, float]
    unit: str
    is_flow: bool
