"""A stage as a convex programme: chemistry in, arrays out, for one state or many."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.minimise import Programme, Warmth
from gibbsmin.reactor.approach import Shift, shift_of
from gibbsmin.reactor.balance import (
    Balance,
    element_balance,
    reaction_balance,
    require_every_element_held,
    substance_balance,
)
from gibbsmin.reactor.candidates import choose_candidates, forms_of_feed, gases_first
from gibbsmin.reactor.chemistry import Chemistry, holds_of
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species

LOWEST_TEMPERATURE = 100.0
HIGHEST_TEMPERATURE = 6000.0
"""K; where a temperature is looked for."""


@dataclass(frozen=True)
class StageModel:
    """The candidates of a stage with their properties, balance and shifts of energy.

    Attributes
    ----------
    records : the S candidates, gases first
    mixture : what they make together: energies, enthalpy, entropy and volume
    feed_records : the F records that enter
    balance : what is conserved between both
    shift : what is added to the candidates' energies
    reacts : whether anything but the form of substances may change
    inert : names of records that pass unchanged where others react
    """

    records: tuple[Species, ...]
    mixture: Mixture
    feed_records: tuple[Species, ...]
    balance: Balance
    shift: Shift
    reacts: bool
    inert: tuple[str, ...] = ()

    def of_states(self, index: IntArray) -> StageModel:
        """The model of some of the states, where they differ in holds, approaches or numbers."""
        return replace(
            self,
            mixture=self.mixture.of_states(index),
            balance=self.balance.of_states(index),
            shift=self.shift.of_states(index),
        )

    @property
    def gas(self) -> BoolArray:
        """(S,) which of the candidates share the gas."""
        return self.mixture.gas

    @property
    def reacting(self) -> BoolArray:
        """(S,) which of the candidates other substances may form from."""
        return np.array([self.reacts and r.name not in self.inert for r in self.records], bool)

    @property
    def properties(self) -> PropertyTable:
        """Standard Cp, H, S and G of the candidates."""
        return self.mixture.properties

    @property
    def restrained(self) -> bool:
        """Whether the outlet is short of full equilibrium, so that routes may disagree."""
        return len(self.balance.rows) > len(self.balance.elements) or bool(self.shift.keys)

    @property
    def fraction_rows(self) -> list[int]:
        """Rows of the balance that hold a fraction of the gas, and so weigh on all its records."""
        elements = len(self.balance.elements)
        counts = np.count_nonzero(self.balance.matrix, axis=1)
        return [row for row in range(elements, len(counts)) if elements and counts[row] > 1]

    def energies(self, temperature: npt.ArrayLike, pressure: npt.ArrayLike) -> FloatArray:
        """g̃ = G/RT + δ, for gases + ln(P/P°) and as if ideal; T.shape + (S,)."""
        energies = self.mixture.reduced_energies(temperature, pressure)
        energies += self.shift.at(temperature)
        return energies

    def programme(
        self, temperature: FloatArray, pressure: FloatArray, feed: FloatArray
    ) -> Programme:
        """The programme of B states: temperature (B,) K, pressure (B,) Pa, feed (B, F) mol."""
        return Programme(
            matrix=self.balance.matrix,
            supplies=self.balance.supplies(feed),
            energies=self.energies(temperature, pressure),
            gas=self.gas,
            direction=self.balance.direction,
            atoms=self.balance.atoms,
        )

    def heated_programme(
        self, contents: FloatArray, pressure: FloatArray, feed: FloatArray, start: FloatArray
    ) -> tuple[Programme, Warmth]:
        """The programme of B states of given enthalpy (B,) J, sought from ``start`` (B,) K.

        There is none with an approach, whose shift is no function of the records' own energies.
        """
        logarithm = np.log(pressure / STANDARD_PRESSURE)[:, np.newaxis]
        programme = Programme(
            matrix=self.balance.matrix,
            supplies=self.balance.supplies(feed),
            energies=np.where(self.gas, logarithm, 0.0) + self.shift.log_activities,
            gas=self.gas,
            direction=self.balance.direction,
            atoms=self.balance.atoms,
        )
        offsets = self.shift.offsets + self.mixture.pressure_terms(pressure)
        off = self.properties.deviations
        if off is not None:
            offsets = offsets + off.enthalpy
            programme.energies[:] -= off.entropy / GAS_CONSTANT
        breaks = self.properties.breaks
        pieces = self.properties.coefficients.reshape(7, len(self.records), len(breaks) + 1)
        warmth = Warmth(
            pieces=pieces / GAS_CONSTANT,
            breaks=breaks,
            offsets=offsets / GAS_CONSTANT,
            contents=contents / GAS_CONSTANT,
            start=start,
            limits=(LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE),
        )
        return programme, warmth


def stage_model(chemistry: Chemistry, feed: Sequence[Species], library: Library) -> StageModel:
    """Choose the candidates for a feed and build their balance.

    Raises
    ------
    BalanceError
        when the feed holds an element that no candidate contains.
    InputError
        when the chemistry names records or reactions that do not fit.
    """
    records = candidates_of(chemistry, feed, library)
    if chemistry.reactions != "none":
        require_every_element_held(records, feed, library)
    shift = shift_of(
        library.properties(records), chemistry.approaches, chemistry.offsets, chemistry.activities
    )
    if chemistry.reactions == "none":
        balance = substance_balance(records, feed)
    elif chemistry.others == "frozen":
        balance = reaction_balance(records, feed, shift.stoichiometry)
    else:
        balance = element_balance(records, feed)
    holds = holds_of(chemistry, records, feed, library)
    return StageModel(
        records=records,
        mixture=Mixture.of(shift.properties, chemistry.equation),
        feed_records=tuple(feed),
        balance=balance.with_holds(records, feed, holds),
        shift=shift,
        reacts=chemistry.reactions == "equilibrium",
        inert=chemistry.selection.inert_among(feed, library),
    )


def candidates_of(
    chemistry: Chemistry, feed: Sequence[Species], library: Library
) -> tuple[Species, ...]:
    """The records that may leave a stage with this feed, gases first.

    Raises
    ------
    InputError
        when the chemistry names records that do not fit.
    """
    if chemistry.reactions == "none":
        records = forms_of_feed(chemistry.condense, feed, library)
    else:
        records = choose_candidates(chemistry.selection, feed, library)
    if chemistry.others == "frozen":
        records = gases_first(list(dict.fromkeys([*records, *feed])))
    return records
