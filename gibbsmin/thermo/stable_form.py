"""The form of a substance that is stable at T, and where one form gives way to another.

Of the forms within whose range T lies, the stable one has the lowest Gibbs energy at 1 bar.
Where T lies in no form's range, the forms whose ranges end nearest to it compete.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species

# A form that is stable over less than this, in K, may be passed over as a way station.
_SEARCH_STEP: Final = 1.0
_SHARPNESS: Final = 1e-8

_NAMES: Final = {
    (Phase.SOLID, Phase.LIQUID): "melting",
    (Phase.LIQUID, Phase.GAS): "evaporation to the ideal gas at 1 bar",
    (Phase.SOLID, Phase.GAS): "sublimation to the ideal gas at 1 bar",
}


@dataclass(frozen=True, slots=True)
class PhaseChange:
    """What happens to a substance on heating through a temperature.

    Parameters
    ----------
    lower, upper
        Names of the records below and above; equal where one record holds both forms.
    kind
        "melting", "alpha–beta" and the like.
    temperature
        K.
    enthalpy
        J/mol taken up on heating.
    gibbs_step
        J/mol by which G steps; zero unless the range of the lower form ends short of the
        temperature at which the two would be in balance.
    """

    lower: str
    upper: str
    kind: str
    temperature: float
    enthalpy: float
    gibbs_step: float = 0.0


@dataclass(frozen=True, eq=False)
class Substance:
    """One or more forms of a formula, of which the stable one counts at each temperature.

    The properties take T in K of any shape and return an array of the same shape, J/mol or
    J/mol/K.  A substance with one form is that record at all temperatures.

    Parameters
    ----------
    text
        How a reaction writes it: a formula, or the name of its one record.
    forms
        The records that compete, at least one.
    left_out
        Superseded forms, which do not compete.
    """

    text: str
    forms: tuple[Species, ...]
    left_out: tuple[Species, ...] = ()

    @cached_property
    def _table(self) -> PropertyTable:
        return PropertyTable.of(self.forms)

    @property
    def key(self) -> tuple[str, ...]:
        """The names of the forms; equal keys mean equal substances."""
        return tuple(record.name for record in self.forms)

    def stable(self, T: npt.ArrayLike) -> IntArray:
        """Position in ``forms`` of the stable form."""
        energies = self._table.gibbs_energy(T)
        T = np.asarray(T, dtype=np.float64)[..., np.newaxis]
        outside = np.maximum(np.maximum(self._table.T_low - T, T - self._table.T_high), 0.0)
        nearest = outside == outside.min(axis=-1, keepdims=True)
        return np.asarray(np.where(nearest, energies, np.inf).argmin(axis=-1))

    def preferred_left_out(self, T: FloatArray) -> tuple[Species, ...]:
        """The superseded forms that would be stable at some of the temperatures, shape (N,)."""
        table = PropertyTable.of(self.left_out)
        lower = table.gibbs_energy(T) < self.gibbs_energy(T)[:, np.newaxis]
        preferred = np.any(lower & table.within_range(T), axis=0)
        return tuple(r for r, is_so in zip(self.left_out, preferred.tolist(), strict=True) if is_so)

    def enthalpy(self, T: npt.ArrayLike) -> FloatArray:
        """H of the stable form, which includes its enthalpy of formation at 298.15 K."""
        return self._of_stable(self._table.enthalpy(T), T)

    def entropy(self, T: npt.ArrayLike) -> FloatArray:
        """S of the stable form."""
        return self._of_stable(self._table.entropy(T), T)

    def gibbs_energy(self, T: npt.ArrayLike) -> FloatArray:
        """G = H − T S of the stable form."""
        return self._of_stable(self._table.gibbs_energy(T), T)

    def _of_stable(self, values: FloatArray, T: npt.ArrayLike) -> FloatArray:
        place = self.stable(T)[..., np.newaxis]
        return np.asarray(np.take_along_axis(values, place, axis=-1)[..., 0])

    def phase_changes(self, T_low: float, T_high: float) -> tuple[PhaseChange, ...]:
        """The changes above ``T_low`` up to ``T_high``, in K, in the order of heating.

        Between forms, the temperature at which ΔG = 0 is bracketed to 1e-8 K; within a record,
        its transitions are reported where it is the stable form.
        """
        if T_high <= T_low:
            return ()
        bounds = [T_low, *self._crossings(T_low, T_high), T_high]
        changes = []
        for begin, end in pairwise(bounds):
            form = self.forms[int(self.stable(begin))]
            if begin > T_low:
                changes.append(self._change(begin))
            changes += [
                PhaseChange(form.name, form.name, piece.label, piece.T_low, piece.transition)
                for piece in form.pieces
                if piece.transition and begin < piece.T_low <= end
            ]
        return tuple(changes)

    def _crossings(self, T_low: float, T_high: float) -> list[float]:
        """First temperatures at which a form other than that just below is stable."""
        if len(self.forms) == 1:
            return []
        grid = np.linspace(T_low, T_high, 2 + int((T_high - T_low) / _SEARCH_STEP))
        stable = self.stable(grid)
        crossings = []
        for k in np.flatnonzero(np.diff(stable)):
            low, end = float(grid[k]), float(grid[k + 1])
            while self.stable(low) != stable[k + 1]:
                low = self._end_of_form(low, end)
                crossings.append(low)
        return crossings

    def _end_of_form(self, low: float, high: float) -> float:
        form = self.stable(low)
        while high - low > _SHARPNESS:
            middle = (low + high) / 2
            if self.stable(middle) == form:
                low = middle
            else:
                high = middle
        return high

    def _change(self, T: float) -> PhaseChange:
        above = int(self.stable(T))
        below = int(self.stable(T - 2 * _SHARPNESS))
        H, G = self._table.enthalpy(T), self._table.gibbs_energy(T)
        lower, upper = self.forms[below], self.forms[above]
        return PhaseChange(
            lower.name,
            upper.name,
            _NAMES.get((lower.phase, upper.phase), "change of form"),
            T,
            float(H[above] - H[below]),
            float(G[above] - G[below]),
        )
