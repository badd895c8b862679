"""Temperature approach to equilibrium, and other shifts of a record's energy.

An approach of ΔT to a reaction (positive: short of equilibrium as written) sets it to equilibrium
at T_s = T − sgn(ΔrH) ΔT.  Either the shift δ falls on one key record of each named reaction,

    δ_K = ν_K⁻¹ (ν g̃(T_s) − ν g̃(T)),

so that every reaction without a key record is at equilibrium; or all other reactions are frozen.
A least-norm δ is never taken: it would move the reactions that nobody named.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species


@dataclass(frozen=True)
class Approach:
    """One named reaction.

    Attributes
    ----------
    text : the reaction as the user wrote it
    coefficients : ν by record name, products positive
    difference : ΔT in K, positive when short of equilibrium as written; (B,) for B states
    key : the record that takes the shift, empty for the reaction's record with most atoms
    """

    text: str
    coefficients: Mapping[str, float]
    difference: Values
    key: str = ""


@dataclass(frozen=True)
class Shift:
    """What is added to g̃ of the candidates: approaches, and offsets of single records.

    Attributes
    ----------
    properties : of the S candidates
    stoichiometry : (R, S) ν of the named reactions
    differences : ΔT in K, (R,), or (R, B) where B states differ in them
    keys : (R,) columns of the key records
    offsets : (S,) energies in J/mol, such as that of whisker carbon over graphite
    log_activities : (S,) ln a of records whose activity is fixed, such as carbon in an alloy
    texts : (R,) the reactions as written
    """

    properties: PropertyTable
    stoichiometry: FloatArray
    differences: FloatArray
    keys: tuple[int, ...]
    offsets: FloatArray
    log_activities: FloatArray
    texts: tuple[str, ...]

    def at(self, temperature: npt.ArrayLike) -> FloatArray:
        """δ of each candidate, T.shape + (S,).

        Raises
        ------
        InputError
            when a reaction's enthalpy changes sign between T and T_s.
        """
        T = np.asarray(temperature, dtype=float)
        if not self.keys and not self.offsets.any():
            return np.broadcast_to(self.log_activities, (*T.shape, self.log_activities.size))
        shift = self.offsets / (GAS_CONSTANT * T)[..., np.newaxis] + self.log_activities
        if not self.keys:
            return np.asarray(shift)
        missing = np.stack([self._constants_gap(r, T) for r in range(len(self.keys))], axis=-1)
        nu_keys = self.stoichiometry[:, self.keys]
        shift[..., list(self.keys)] += np.linalg.solve(nu_keys, missing[..., np.newaxis])[..., 0]
        return np.asarray(shift)

    def of_states(self, index: IntArray) -> Shift:
        """The shift of some of the states."""
        alike = self.differences.ndim == 1
        differences = self.differences if alike else self.differences[:, index]
        return replace(self, properties=self.properties.of_states(index), differences=differences)

    def senses(self, temperature: npt.ArrayLike) -> FloatArray:
        """Sign of ΔrH of each named reaction, (R,) + T.shape; 0 where its approach has no meaning.

        That is where T_s is not above absolute zero or ΔrH changes sign between T and T_s.  All
        temperatures are for the same differences, and for the records' own numbers.
        """
        T = np.asarray(temperature, dtype=float)
        table = self.properties.deviating(None)
        senses = []
        for nu, difference in zip(self.stoichiometry, self.differences.tolist(), strict=True):
            sense = np.sign(table.enthalpy(T) @ nu)
            shifted = T - sense * difference
            there = np.sign(table.enthalpy(np.maximum(shifted, 1.0)) @ nu)
            senses.append(np.where((shifted > 0.0) & (there == sense), sense, 0.0))
        return np.array(senses)

    def shifted_temperature(self, reaction: int, temperature: npt.ArrayLike) -> FloatArray:
        """T_s of one reaction."""
        T = np.asarray(temperature, dtype=float)
        nu = self.stoichiometry[reaction]
        differences = np.broadcast_to(self.differences[reaction], T.shape)
        enthalpy = self.properties.enthalpy(T) @ nu
        shifted = T - np.sign(enthalpy) * differences
        if np.any(shifted <= 0.0):
            raise InputError(
                f"found an approach of {differences[shifted <= 0.0][0]:g} K for "
                f'"{self.texts[reaction]}", which leads below absolute zero',
                "accepted is a smaller approach",
                key="approach",
            )
        changed = np.sign(self.properties.enthalpy(shifted) @ nu) != np.sign(enthalpy)
        changed &= ~np.isnan(T)
        if np.any(changed):
            raise InputError(
                f"found an approach of {differences[changed][0]:g} K for "
                f'"{self.texts[reaction]}", whose enthalpy changes sign within it',
                "accepted is a smaller approach, or a fixed conversion in its place",
                key="approach",
            )
        return np.asarray(shifted)

    def _constants_gap(self, reaction: int, T: FloatArray) -> FloatArray:
        """ln K(T) − ln K(T_s) = ν g̃(T_s) − ν g̃(T) of one reaction."""
        nu = self.stoichiometry[reaction]
        shifted = self.shifted_temperature(reaction, T)
        here = self.properties.gibbs_energy(T) @ nu / (GAS_CONSTANT * T)
        there = self.properties.gibbs_energy(shifted) @ nu / (GAS_CONSTANT * shifted)
        return np.asarray(there - here)


def shift_of(
    properties: PropertyTable,
    approaches: Sequence[Approach],
    offsets: Mapping[str, float],
    activities: Mapping[str, float],
) -> Shift:
    """Lay out approaches, offsets (J/mol) and activities over the candidates, a table's records.

    Raises
    ------
    InputError
        for a reaction with a record that is no candidate, a key that is not in its reaction or
        is not unique, or dependent reactions.
    """
    records = properties.records
    names = [record.name for record in records]
    stoichiometry = np.zeros((len(approaches), len(names)))
    keys = []
    for row, approach in enumerate(approaches):
        for name, coefficient in approach.coefficients.items():
            if name not in names:
                raise InputError(
                    f'found "{name}" in "{approach.text}", which is no candidate',
                    "accepted is a reaction between records to consider",
                    key="approach",
                )
            stoichiometry[row, names.index(name)] = coefficient
        keys.append(names.index(approach.key or _default_key(approach, records)))
    if approaches and np.linalg.matrix_rank(stoichiometry) < len(approaches):
        raise InputError(
            f"found reactions that depend on each other: {_listed(approaches)}",
            "accepted are independent reactions",
            key="approach",
        )
    if approaches and np.linalg.matrix_rank(stoichiometry[:, keys]) < len(approaches):
        raise InputError(
            f"found the key records {', '.join(names[k] for k in keys)}, which cannot tell the "
            f"reactions apart: {_listed(approaches)}",
            "accepted is a key of its own for each reaction",
            key="approach",
        )
    return Shift(
        properties=properties,
        stoichiometry=stoichiometry,
        differences=np.array(np.broadcast_arrays(*(each.difference for each in approaches))),
        keys=tuple(keys),
        offsets=np.array([offsets.get(name, 0.0) for name in names]),
        log_activities=np.log([activities.get(name, 1.0) for name in names]),
        texts=tuple(approach.text for approach in approaches),
    )


def _default_key(approach: Approach, records: Sequence[Species]) -> str:
    """The reaction's record with most atoms; a tie is refused."""
    taking_part = [record for record in records if record.name in approach.coefficients]
    most = max(record.atoms for record in taking_part)
    largest = [record.name for record in taking_part if record.atoms == most]
    if len(largest) > 1:
        raise InputError(
            f'found no key for "{approach.text}", in which {" and ".join(largest)} are equally '
            "large",
            "accepted is a key, the record that the approach holds back",
            key="approach",
        )
    return largest[0]


def _listed(approaches: Sequence[Approach]) -> str:
    return ", ".join(f'"{approach.text}"' for approach in approaches)
