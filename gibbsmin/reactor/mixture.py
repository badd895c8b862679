"""A gas mixture with pure solids and liquids: energies, enthalpy, entropy, volume at T and P.

The gas is ideal, or real by a cubic equation of state.  Solids and liquids are pure, with a
constant molar volume V where one is known (else 0):

    G = G°(T) + V (P − P°),   H = H°(T) + V (P − P°),   S = S°(T).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray, IntArray, shared
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.thermo.gas_state import GasState
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.real_gas import Equation, RealGas
from gibbsmin.thermo.species import Phase

_SMALLEST = np.finfo(np.float64).smallest_subnormal


@dataclass(frozen=True, eq=False)
class Mixture:
    """The records of a stream or an outlet.

    Temperatures (K) and pressures (Pa) are of one shape (...), amounts (..., S) in mol.

    Attributes
    ----------
    properties : standard properties of the S records
    gas : (S,) which of them share the gas
    volumes : (S,) m³/mol of solids and liquids; 0 for gases and where none is known
    real : the gases in an equation of state, or None for an ideal gas
    """

    properties: PropertyTable
    gas: BoolArray
    volumes: FloatArray
    real: RealGas | None

    @classmethod
    def of(cls, properties: PropertyTable, equation: Equation | None = None) -> Self:
        """The mixture of a table's records; without an equation its gas is ideal."""
        records = properties.records
        gas = np.array([record.phase is Phase.GAS for record in records], dtype=bool)
        volumes = np.array([record.molar_volume for record in records], dtype=float)
        real = None
        if equation is not None:
            gases = [r for r in records if r.phase is Phase.GAS]
            real = RealGas.of(equation, gases) if gases else None
        return cls(properties, gas, np.where(gas | np.isnan(volumes), 0.0, volumes), real)

    def of_states(self, index: IntArray) -> Self:
        """The mixture of some of the states, where the records' numbers differ between them."""
        if self.properties.deviations is None:
            return self
        return replace(self, properties=self.properties.of_states(index))

    def reduced_energies(self, temperature: npt.ArrayLike, pressure: npt.ArrayLike) -> FloatArray:
        """g̃ = G/RT of every record, (..., S), for gases with + ln(P/P°) and as if ideal."""
        T, P = np.asarray(temperature, dtype=float), shared(pressure)
        energies = self.properties.reduced_gibbs_energy(T)
        energies += np.where(self.gas, np.log(P / STANDARD_PRESSURE)[..., np.newaxis], 0.0)
        for column in np.flatnonzero(self.volumes).tolist():
            excess = self.volumes[column] * (P - STANDARD_PRESSURE)
            energies[..., column] += excess / (GAS_CONSTANT * T)
        return energies

    def pressure_terms(self, pressure: npt.ArrayLike) -> FloatArray:
        """V (P − P°) of solids and liquids in J/mol, (..., S); 0 for gases."""
        excess = np.asarray(pressure, dtype=float) - STANDARD_PRESSURE
        return excess[..., np.newaxis] * self.volumes

    def gas_state(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> GasState | None:
        """The gas in its equation of state; None for an ideal gas."""
        if self.real is None:
            return None
        return self.real.state(temperature, pressure, amounts[..., self.gas])

    def log_fugacity(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """ln φ of every record, (..., S); 0 for solids, liquids and gases that are ideal."""
        result = np.zeros(amounts.shape)
        state = self.gas_state(temperature, pressure, amounts)
        if state is not None:
            result[..., self.gas] = np.nan_to_num(state.log_fugacity, nan=0.0)
        return result

    def enthalpy(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """H in J, from the elements at 298.15 K."""
        H = _dot(amounts, self.properties.enthalpy(temperature))
        if self._has_volumes:
            H = H + self._of_volumes(pressure, amounts)
        state = self.gas_state(temperature, pressure, amounts)
        return H if state is None else H + self._of_gas(state.enthalpy_departure, amounts)

    def entropy(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """S = Σ nᵢ Sᵢ(T) − R Σgas nᵢ ln(yᵢ P/P°) + departure in J/K, absolute."""
        pure = _dot(amounts, self.properties.entropy(temperature))
        gases = amounts[..., self._gases]
        total = np.einsum("...s->...", gases)
        logarithm = np.log(np.asarray(pressure, dtype=float) / STANDARD_PRESSURE)
        mixing = _dot(gases, _log(gases)) - total * (_log(total) - logarithm)
        S = np.asarray(pure - GAS_CONSTANT * mixing)
        state = self.gas_state(temperature, pressure, amounts)
        return S if state is None else S + self._of_gas(state.entropy_departure, amounts)

    def heat_capacity(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """∂H/∂T at constant P and amounts, J/K."""
        Cp = _dot(amounts, self.properties.heat_capacity(temperature))
        state = self.gas_state(temperature, pressure, amounts)
        return Cp if state is None else Cp + self._of_gas(state.heat_capacity_departure, amounts)

    def gas_volume(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """Z N R T/P of the gas, m³."""
        T, P = np.asarray(temperature, dtype=float), np.asarray(pressure, dtype=float)
        ideal = np.einsum("...s->...", amounts[..., self._gases]) * (GAS_CONSTANT * T / P)
        state = self.gas_state(temperature, pressure, amounts)
        return ideal if state is None else np.asarray(ideal * np.nan_to_num(state.Z, nan=1.0))

    def pressure_work(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """H − U in J: P V of the gas; solids and liquids take up no room and have U = H°."""
        P = np.asarray(pressure, dtype=float)
        work = P * self.gas_volume(temperature, P, amounts)
        return work + self._of_volumes(P, amounts) if self._has_volumes else work

    def internal_energy(
        self, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
    ) -> FloatArray:
        """U in J: see :meth:`pressure_work`."""
        H = self.enthalpy(temperature, pressure, amounts)
        return np.asarray(H - self.pressure_work(temperature, pressure, amounts))

    @cached_property
    def _has_volumes(self) -> bool:
        return bool(self.volumes.any())

    @cached_property
    def _gases(self) -> slice | IntArray:
        """The gases' columns, without a copy of them where they come first."""
        columns = np.flatnonzero(self.gas)
        first = np.array_equal(columns, np.arange(columns.size))
        return slice(columns.size) if first else columns

    def _of_volumes(self, pressure: npt.ArrayLike, amounts: FloatArray) -> FloatArray:
        """Σ nᵢ Vᵢ (P − P°) of solids and liquids, J."""
        excess = np.asarray(pressure, dtype=float) - STANDARD_PRESSURE
        return np.asarray(excess * (amounts @ self.volumes))

    def _of_gas(self, per_mole: FloatArray, amounts: FloatArray) -> FloatArray:
        """A departure of the whole gas; 0 where there is no gas."""
        total = amounts[..., self.gas].sum(axis=-1)
        return np.asarray(np.where(total > 0.0, total * per_mole, 0.0 * total))


def _dot(a: FloatArray, b: FloatArray) -> FloatArray:
    """Sum of products over the records, without a temporary array."""
    return np.asarray(np.einsum("...s,...s->...", a, b))


def _log(x: FloatArray) -> FloatArray:
    """ln x, finite at 0: there x ln x is 0."""
    positive = np.asarray(np.maximum(x, _SMALLEST))
    np.log(positive, out=positive)
    return positive
