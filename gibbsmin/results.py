"""The outlet: what leaves a reactor at equilibrium, with everything that is known about it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise import Method, Status
from gibbsmin.reactor.audit import AuditEntry, ElementActivity
from gibbsmin.reactor.energy import EntropyGeneration
from gibbsmin.thermo.species import Phase, Species

if TYPE_CHECKING:
    import pandas as pd

WATER = "H2O(g)"

CAUTIONS = (
    "Equilibrium is a limit, not a rate: a real outlet may fall short of it.",
    "Design, relief and safety decisions follow local codes and licensed practice.",
)
"""What every report ends with."""


@dataclass(frozen=True)
class StateCertificate:
    """The proof that comes with one state.

    Attributes
    ----------
    gap : duality gap in RT per mole of feed atoms
    balance : largest relative residual of the balance's rows
    stationarity : largest departure of a record present from its chemical potential, in RT
    """

    gap: float
    balance: float
    stationarity: float


@dataclass(frozen=True)
class StageOutlet:
    """One stage's outlet.

    Amounts are in mol, or mol/s where the feed is a flow; heat in J or W, positive into the
    stage.  Where the state is not certified every figure is NaN.

    Attributes
    ----------
    name : the stage's name
    status, method : whether the state is certified, and which method answered
    temperature, pressure : K and Pa
    records : candidates, gases first
    amounts : (S,) amounts of the candidates
    removed : amounts of them that are taken out and do not go on
    certificate : the proof
    element_potentials : chemical potential of each element in RT
    conversion : share of each feed record's substance that is used up; negative is formation
    heat : heat added, or removed when negative
    shaft_work : work put in by the shaft, or gained when negative
    entropy : entropy generation and lost work
    activities : p(O2), a(C), … of the elements present
    audit : records that are not in the outlet, the most weighty first
    warnings, notes, hazards : sentences on what limits the figures, on how they came about, and
        on what is toxic or flammable in the outlet
    """

    name: str
    status: Status
    method: Method
    temperature: float
    pressure: float
    records: tuple[Species, ...]
    amounts: FloatArray
    removed: Mapping[str, float]
    certificate: StateCertificate
    element_potentials: Mapping[str, float]
    conversion: Mapping[str, float]
    heat: float
    shaft_work: float
    entropy: EntropyGeneration
    activities: tuple[ElementActivity, ...]
    audit: tuple[AuditEntry, ...]
    warnings: tuple[str, ...]
    notes: tuple[str, ...]
    hazards: tuple[str, ...]

    @property
    def certified(self) -> bool:
        """Whether the state is proved."""
        return self.status is Status.CERTIFIED

    @property
    def mole_fractions(self) -> FloatArray:
        """Mole fractions in the gas, (S,); NaN for solids and liquids."""
        return self._fractions(without=())

    @property
    def dry_mole_fractions(self) -> FloatArray:
        """Mole fractions in the gas without its water, (S,); NaN for water, solids and liquids."""
        return self._fractions(without=(WATER,))

    def _fractions(self, without: tuple[str, ...]) -> FloatArray:
        counted = np.array(
            [r.phase is Phase.GAS and r.name not in without for r in self.records], dtype=bool
        )
        fractions = np.full(len(self.records), np.nan)
        total = self.amounts[counted].sum()
        if total > 0.0:
            fractions[counted] = self.amounts[counted] / total
        return fractions

    def to_frame(self) -> pd.DataFrame:
        """One row a candidate: phase, amount (mol or mol/s), wet and dry mole fraction."""
        import pandas as pd

        return pd.DataFrame(
            {
                "species": [record.name for record in self.records],
                "phase": [record.phase.value for record in self.records],
                "amount": self.amounts,
                "mole_fraction": self.mole_fractions,
                "dry_mole_fraction": self.dry_mole_fractions,
            }
        )


@dataclass(frozen=True)
class Outlet:
    """What leaves the stages of a case, in order.

    Attributes
    ----------
    title : the case's title
    unit : the user's unit of amounts, in which reports are written
    is_flow : whether amounts are flows (mol/s, W) or quantities (mol, J)
    conversion : share of each substance of the case's streams that the last outlet holds no more
    stages : one outlet a stage
    """

    title: str
    unit: str
    is_flow: bool
    conversion: Mapping[str, float]
    stages: tuple[StageOutlet, ...]

    @property
    def final(self) -> StageOutlet:
        """The outlet of the last stage."""
        return self.stages[-1]

    @property
    def heat(self) -> float:
        """Heat added over all stages, J or W."""
        return sum(stage.heat for stage in self.stages)

    @property
    def entropy_generation(self) -> float:
        """Entropy generated over all stages, J/K or W/K; NaN where one has no figure."""
        return sum(stage.entropy.value for stage in self.stages)

    @property
    def lost_work(self) -> float:
        """Work lost over all stages, J or W; NaN where one has no figure."""
        return sum(stage.entropy.lost_work for stage in self.stages)

    @property
    def certified(self) -> bool:
        """Whether every stage is certified."""
        return all(stage.certified for stage in self.stages)

    def to_frame(self) -> pd.DataFrame:
        """The stages' tables under one another, each row with its stage's name."""
        import pandas as pd

        frames = [stage.to_frame().assign(stage=stage.name) for stage in self.stages]
        table = pd.concat(frames, ignore_index=True)
        return table[["stage", *(name for name in table.columns if name != "stage")]]
