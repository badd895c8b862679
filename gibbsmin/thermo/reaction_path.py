"""A reaction at several temperatures, each with its path by way of 298.15 K.

The path takes the reactants from T to 298.15 K, lets them react there and takes the products to
T.  H and S being functions of state, the three parts add up to ΔrH(T) and ΔrS(T).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.thermo.reaction import Reaction, Term, weighted_sum
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.stable_form import PhaseChange, Substance

# J/mol; the records' fits leave G uncertain by about this much at a phase change.
_IN_BALANCE = 50.0


@dataclass(frozen=True, slots=True)
class PathPart:
    """Enthalpy in J/mol and entropy in J/mol/K of one part of the path."""

    enthalpy: float
    entropy: float


@dataclass(frozen=True, slots=True)
class PathChange:
    """A phase change of a reactant (negative coefficient) or product on the path."""

    coefficient: Fraction
    substance: str
    change: PhaseChange


@dataclass(frozen=True, slots=True)
class ReactionRow:
    """A reaction at one temperature, per mole of reaction as written; SI units.

    ``forms`` pairs each substance with the record that counts at T.
    """

    temperature: float
    enthalpy: float
    entropy: float
    gibbs_energy: float
    log10_K: float
    forms: tuple[tuple[str, str], ...]
    reactants_to_reference: PathPart
    reaction_at_reference: PathPart
    products_from_reference: PathPart
    phase_changes: tuple[PathChange, ...]


@dataclass(frozen=True, slots=True)
class ReferenceValues:
    """The reaction at 298.15 K from the tabulated enthalpies of formation and entropies.

    ``records`` pairs each coefficient with the record that counts there.
    """

    enthalpy: float
    entropy: float
    gibbs_energy: float
    log10_K: float
    records: tuple[tuple[Fraction, Species], ...]


@dataclass(frozen=True, slots=True)
class ReactionStudy:
    """A reaction at several temperatures, with what the user should know about the values."""

    reaction: Reaction
    rows: tuple[ReactionRow, ...]
    reference: ReferenceValues
    warnings: tuple[str, ...]


def study_reaction(reaction: Reaction, temperatures: npt.ArrayLike) -> ReactionStudy:
    """Evaluate a reaction and its path.

    Parameters
    ----------
    reaction
        The reaction.
    temperatures
        One or more temperatures in K, above 0.

    Raises
    ------
    InputError
        If a temperature is not above absolute zero.
    """
    T = np.atleast_1d(np.asarray(temperatures, dtype=np.float64))
    changes = _changes(reaction, T)
    H, S = reaction.enthalpy(T), reaction.entropy(T)
    G, log10_K = reaction.gibbs_energy(T), reaction.log10_K(T)
    forms = _forms(reaction, T)
    before, after = _increments(reaction.reactants, T), _increments(reaction.products, T)
    at_reference = PathPart(
        float(reaction.enthalpy(REFERENCE_TEMPERATURE)),
        float(reaction.entropy(REFERENCE_TEMPERATURE)),
    )
    rows = tuple(
        ReactionRow(
            float(T[k]),
            float(H[k]),
            float(S[k]),
            float(G[k]),
            float(log10_K[k]),
            forms[k],
            PathPart(float(before[0][k]), float(before[1][k])),
            at_reference,
            PathPart(float(after[0][k]), float(after[1][k])),
            tuple(change for change in changes if _on_the_way(change.change, float(T[k]))),
        )
        for k in range(T.size)
    )
    warnings = (*_range_warnings(reaction, T), *_form_warnings(reaction, T, changes))
    return ReactionStudy(reaction, rows, reference_values(reaction), warnings)


def reference_values(reaction: Reaction) -> ReferenceValues:
    """ΔrH, ΔrS, ΔrG and log10 K at 298.15 K from the records' tabulated values alone."""
    T = REFERENCE_TEMPERATURE
    records = tuple((number, s.forms[int(s.stable(T))]) for number, s in reaction.terms)
    H = sum(float(number) * record.dfH298 for number, record in records)
    S = sum(float(number) * record.S298 for number, record in records)
    G = H - T * S
    return ReferenceValues(H, S, G, float(-G / (GAS_CONSTANT * T * np.log(10))), records)


def _increments(terms: Sequence[Term], T: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Σ ν (X(T) − X(298.15 K)) for X = H and S, each of the shape of T."""

    def enthalpy(substance: Substance) -> FloatArray:
        return substance.enthalpy(T) - substance.enthalpy(REFERENCE_TEMPERATURE)

    def entropy(substance: Substance) -> FloatArray:
        return substance.entropy(T) - substance.entropy(REFERENCE_TEMPERATURE)

    return weighted_sum(terms, enthalpy), weighted_sum(terms, entropy)


def _forms(reaction: Reaction, T: FloatArray) -> list[tuple[tuple[str, str], ...]]:
    columns = [
        [(substance.text, substance.forms[place].name) for place in substance.stable(T)]
        for _, substance in reaction.terms
    ]
    return list(zip(*columns, strict=True))


def _changes(reaction: Reaction, T: FloatArray) -> list[PathChange]:
    """All phase changes between 298.15 K and any of the temperatures."""
    low = min(REFERENCE_TEMPERATURE, float(T.min()))
    high = max(REFERENCE_TEMPERATURE, float(T.max()))
    return [
        PathChange(number, substance.text, change)
        for number, substance in reaction.terms
        for change in substance.phase_changes(low, high)
    ]


def _on_the_way(change: PhaseChange, T: float) -> bool:
    low, high = sorted((REFERENCE_TEMPERATURE, T))
    return low < change.temperature <= high


def _range_warnings(reaction: Reaction, T: FloatArray) -> list[str]:
    warnings = []
    for _, substance in reaction.terms:
        place = substance.stable(T)
        for j, record in enumerate(substance.forms):
            outside = T[(place == j) & ((record.T_low > T) | (record.T_high < T))]
            if outside.size:
                warnings.append(range_warning(record, outside))
    return warnings


def range_warning(record: Species, outside: FloatArray) -> str:
    """Says that a record's values at these temperatures, K, lie beyond its range."""
    shown = ", ".join(f"{T:.6g}" for T in outside[:3]) + (", …" if outside.size > 3 else "")
    return (
        f"{record.name} is tabulated from {record.T_low:.6g} K to {record.T_high:.6g} K; "
        f"at {shown} K its heat capacity is continued as a constant."
    )


def _form_warnings(reaction: Reaction, T: FloatArray, changes: Sequence[PathChange]) -> list[str]:
    warnings = []
    for _, substance in reaction.terms:
        warnings += [
            f"{record.name} is superseded{_because(record)}."
            for record in substance.forms
            if record.superseded
        ]
        warnings += [
            f"{record.name} would be the stable form of {substance.text} but is superseded"
            f"{_because(record)}; to use it all the same, name it."
            for record in substance.preferred_left_out(np.append(T, REFERENCE_TEMPERATURE))
        ]
    for item in changes:
        change = item.change
        if abs(change.gibbs_step) > _IN_BALANCE:
            warnings.append(
                f"{change.lower} gives way to {change.upper} at {change.temperature:.6g} K because "
                f"its range ends there, {abs(change.gibbs_step) / 1000:.3g} kJ/mol away from the "
                "balance of the two."
            )
    return warnings


def _because(record: Species) -> str:
    return f" ({record.remark.rstrip('.')})" if record.remark else ""
