"""A stage as a convex programme: chemistry in, arrays out, for one state or many."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.minimise import Programme
from gibbsmin.reactor.balance import (
    ElementBalance,
    element_balance,
    require_every_element_held,
)
from gibbsmin.reactor.candidates import Selection, choose_candidates
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species


@dataclass(frozen=True)
class StageModel:
    """The candidates of a stage with their properties and balance.

    Attributes
    ----------
    records : the S candidates, gases first
    gas : (S,) which of them share the gas mixture
    inert : (S,) which of them pass through unchanged
    properties : Cp, H, S and G of the candidates
    feed_records : the F records that enter
    balance : the element balance between both
    """

    records: tuple[Species, ...]
    gas: BoolArray
    inert: BoolArray
    properties: PropertyTable
    feed_records: tuple[Species, ...]
    balance: ElementBalance

    def energies(self, temperature: FloatArray, pressure: FloatArray) -> FloatArray:
        """g̃ = G/RT, for gases + ln(P/P°); (B,) and (B,) to (B, S)."""
        return reduced_energies(self.properties, self.gas, temperature, pressure)

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


def stage_model(selection: Selection, feed: Sequence[Species], library: Library) -> StageModel:
    """Choose the candidates for a feed and build their balance.

    Raises
    ------
    BalanceError
        when the feed holds an element that no candidate contains.
    """
    candidates = choose_candidates(selection, feed, library)
    require_every_element_held(candidates.records, feed, library)
    return StageModel(
        records=candidates.records,
        gas=candidates.gas,
        inert=candidates.inert,
        properties=PropertyTable.of(candidates.records),
        feed_records=tuple(feed),
        balance=element_balance(candidates.records, feed, candidates.inert),
    )


def reduced_energies(
    properties: PropertyTable, gas: BoolArray, temperature: npt.ArrayLike, pressure: npt.ArrayLike
) -> FloatArray:
    """g̃ = G(T)/RT of every record of a table, for gases + ln(P/P°); shape T.shape + (S,)."""
    T = np.asarray(temperature, dtype=float)
    energies = properties.gibbs_energy(T) / (GAS_CONSTANT * T)[..., np.newaxis]
    logarithm = np.log(np.asarray(pressure, dtype=float) / STANDARD_PRESSURE)
    return energies + np.where(gas, logarithm[..., np.newaxis], 0.0)
