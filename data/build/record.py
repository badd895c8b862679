"""What the build knows of one species record before it is written to the tables."""

from __future__ import annotations

from dataclasses import dataclass

from gibbsmin.thermo.species import Phase, Piece


@dataclass(frozen=True, slots=True)
class BuildRecord:
    """One species record, ready to be written.

    ``dfH298`` and its standard uncertainty are in J/mol, ``S298`` and its in J/(mol K),
    ``molar_volume`` in m³/mol; ``None`` stands for unknown.  The pieces abut, in SI units, as
    :func:`gibbsmin.thermo.fit.fit_heat_capacity` returns them.  ``fit_error`` is the largest
    |ΔG/RT| of the pieces against the source's points over the record's range, zero where the
    source itself is a Cp equation of this form.  The three ``source_*`` fields are keys of
    ``sources.csv``.
    """

    formula: str
    state: str
    phase: Phase
    common_name: str
    dfH298: float
    S298: float
    pieces: tuple[Piece, ...]
    source_enthalpy: str
    source_entropy: str
    source_heat_capacity: str
    cas: str = ""
    u_dfH298: float | None = None
    u_S298: float | None = None
    molar_volume: float | None = None
    status: str = ""
    fit_error: float = 0.0
    remark: str = ""

    @property
    def name(self) -> str:
        return f"{self.formula}({self.state})"


@dataclass(frozen=True, slots=True)
class SourceEntry:
    """A row of ``sources.csv``: how a source is cited and on what footing its values stand."""

    key: str
    citation: str
    status: str
