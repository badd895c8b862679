"""The species record: one substance in one physical form, with its standard properties."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import Final

SUPERSEDED: Final = "superseded"
FEED_ONLY: Final = "feed only"


class Phase(StrEnum):
    """State of aggregation of a record."""

    GAS = "gas"
    LIQUID = "liquid"
    SOLID = "solid"


OWN = "own: "
"""What the source of a user's own record begins with; the file's name follows."""


@dataclass(frozen=True, slots=True)
class Piece:
    """One temperature range of a heat capacity.

    Cp/(J/mol/K) = A + B t + C t² + D t³ + E/t²,  t = T/(1000 K)

    This is the Shomate form, as NIST publishes coefficients.

    Parameters
    ----------
    T_low, T_high
        Limits in K; the upper limit belongs to the next piece.
    A, B, C, D, E
        Coefficients in J/mol/K.
    transition
        Enthalpy in J/mol taken up at ``T_low`` before the piece begins.
    label
        Name of that transition, empty where there is none.
    """

    T_low: float
    T_high: float
    A: float
    B: float = 0.0
    C: float = 0.0
    D: float = 0.0
    E: float = 0.0
    transition: float = 0.0
    label: str = ""


@dataclass(frozen=True, slots=True)
class Species:
    """A record of the library; SI units, P° = 1 bar, T = 298.15 K where no other is named.

    Parameters
    ----------
    name
        Formula and state, ``CO2(g)``.
    formula, state
        The two parts of the name.
    phase
        State of aggregation.
    common_name, cas
        Everyday name and registry number, empty where unknown.
    elements
        Pairs of symbol and count, sorted by symbol.
    charge
        In elementary charges.
    molar_mass
        kg/mol.
    dfH298, u_dfH298
        Enthalpy of formation and its standard uncertainty, J/mol; NaN = unknown.
    S298, u_S298
        Absolute entropy and its standard uncertainty, J/mol/K; NaN = unknown.
    molar_volume
        m³/mol of a condensed record, NaN where unknown.
    pieces
        Heat capacity; the pieces abut and rise in temperature.
    source_enthalpy, source_entropy, source_heat_capacity
        Keys of the library's table of sources.
    status
        Empty, "superseded" or "feed only" (a case's own fuel): with one of these the record is no
        candidate unless it is named.
    fit_error
        Largest |ΔG/RT| of the pieces against the source's points; NaN = unknown.
    remark
        What else the user should know.
    """

    name: str
    formula: str
    state: str
    phase: Phase
    common_name: str
    cas: str
    elements: tuple[tuple[str, float], ...]
    charge: float
    molar_mass: float
    dfH298: float
    u_dfH298: float
    S298: float
    u_S298: float
    molar_volume: float
    pieces: tuple[Piece, ...]
    source_enthalpy: str = ""
    source_entropy: str = ""
    source_heat_capacity: str = ""
    status: str = ""
    fit_error: float = float("nan")
    remark: str = ""

    @property
    def T_low(self) -> float:
        """Lower end of the record's range, K."""
        return self.pieces[0].T_low

    @property
    def T_high(self) -> float:
        """Upper end of the record's range, K."""
        return self.pieces[-1].T_high

    @property
    def atoms(self) -> float:
        """Number of atoms, Σ of the element counts; 0 for the electron."""
        return sum(count for _, count in self.elements)

    @property
    def organic(self) -> bool:
        """True for a record of carbon and hydrogen, with or without other elements."""
        return {"C", "H"} <= {symbol for symbol, _ in self.elements}

    @property
    def superseded(self) -> bool:
        """True for a form that is a candidate only where the user names it."""
        return self.status == SUPERSEDED

    @property
    def proposed(self) -> bool:
        """True for a record that is a candidate without being named."""
        return self.status not in (SUPERSEDED, FEED_ONLY)
