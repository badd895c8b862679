"""Plant samples as a case or a table gives them, in SI."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from gibbsmin.jobs.sample_reading import GasReading, UncertaintyRules
from gibbsmin.sample.reactions import GivenConstant
from gibbsmin.sample.thresholds import Thresholds


@dataclass(frozen=True)
class GasRules:
    """How a gas is analysed where a sample does not say otherwise.

    Attributes
    ----------
    dry : whether fractions are of the gas without what drying removed
    normalised : whether they were scaled to 100 %
    unmeasured : records that the gas may hold though no reading counts them
    """

    dry: bool = True
    normalised: bool = False
    unmeasured: tuple[str, ...] = ()


@dataclass(frozen=True)
class AskedReaction:
    """A reaction that the user wants judged, with its own K(T) where one is given."""

    text: str
    coefficients: Mapping[str, float]
    constant: GivenConstant | None


@dataclass(frozen=True)
class SampleRules:
    """What all samples of a case have in common.

    Attributes
    ----------
    stage : the stage they leave, empty for the last
    outlet, inlet : how their gases are analysed
    inlet_stream : the stream that inlet analyses are of, empty for the stage's first
    dried : records that drying removes
    uncertainty : where a sample gives none
    reactions : to be judged; empty for an independent set
    thresholds : of the verdict
    """

    stage: str = ""
    outlet: GasRules = field(default_factory=GasRules)
    inlet: GasRules = field(default_factory=GasRules)
    inlet_stream: str = ""
    dried: tuple[str, ...] = ("H2O(g)",)
    uncertainty: UncertaintyRules = field(default_factory=UncertaintyRules)
    reactions: tuple[AskedReaction, ...] = ()
    thresholds: Thresholds = field(default_factory=Thresholds)


@dataclass(frozen=True)
class PlantSample:
    """One sample; ``row`` is its place in a table, 0 in the case.

    Gases are readings by analyte as written (several records with plus signs); feeds are flows
    over their nominal ones, with the standard uncertainty of that ratio.
    """

    label: str
    row: int
    temperature: float
    u_temperature: float
    pressure: float
    u_pressure: float
    dry: bool
    normalised: bool
    outlet: Mapping[str, GasReading]
    inlet: Mapping[str, GasReading] = field(default_factory=dict)
    inlet_dry: bool = True
    inlet_normalised: bool = False
    feeds: Mapping[str, tuple[float, float]] = field(default_factory=dict)
