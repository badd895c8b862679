"""What is found about one plant sample, frozen.

SI inside: K, Pa, J/mol, fractions of 1.  A figure that the data do not determine is NaN.
Uncertainties are standard ones.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum


@dataclass(frozen=True, slots=True)
class Estimate:
    """A value and its standard uncertainty; both NaN where undefined or not determined."""

    value: float
    uncertainty: float


@dataclass(frozen=True, slots=True)
class Interval:
    """Limits of the stated confidence; an infinite end says that the data give none there."""

    lower: float
    upper: float
    confidence: float


class Stream(StrEnum):
    """Where a measurement was taken."""

    OUTLET = "outlet"
    INLET = "inlet"
    FEED = "feed"


@dataclass(frozen=True, slots=True)
class Measurement:
    """One measurement beside its reconciled value.

    Attributes
    ----------
    name : the analyte as written, lumped ones with plus signs; or such as "flow of steam"
    record : that it is of, empty for lumped analytes and flows
    stream : outlet and inlet carry fractions, the feed flows over their nominal value
    basis : ``dry`` or ``wet`` for a fraction, ``ratio`` for moles to a mole of dry gas, ``flow``
    value, uncertainty : as measured, with its standard uncertainty
    below : the detection limit below which it was reported, else 0; it is then taken as half the
        limit with the standard uncertainty of a rectangular distribution from 0 to the limit
    reconciled : the value that closes the balance
    redundancy : r from 0 to 1: which share of an error would show in this measurement's residual
    adjustment : standardised, residual over u √r; standard normal if all is as stated; NaN where
        nothing judges the measurement
    can_be_judged : False where r is about 0: nothing else in the sample tells about it
    """

    name: str
    record: str
    stream: Stream
    basis: str
    value: float
    uncertainty: float
    below: float
    reconciled: Estimate
    redundancy: float
    adjustment: float
    can_be_judged: bool


@dataclass(frozen=True, slots=True)
class Closure:
    """Chi-square of a least-squares closure, with its degrees of freedom and tail probability.

    ``probability`` is that of a chi-square at least as large if all is as stated; NaN where there
    is no degree of freedom.
    """

    chi_square: float
    degrees_of_freedom: int
    probability: float


@dataclass(frozen=True, slots=True)
class Suspects:
    """Measurements of which one may carry a gross error, likeliest first; empty if none need to.

    Attributes
    ----------
    names : all whose z² is within 3.84 of the largest: the data do not tell them apart at 5 %
    single : the one name, where it is alone and no other test goes along with it; else empty
    size : the likeliest error of the first one, measured less true
    """

    names: tuple[str, ...]
    single: str
    size: float


class Side(StrEnum):
    """Where a reaction stands, from Q against K in the feed and in the sample."""

    AT = "at equilibrium within errors"
    SHORT = "short of equilibrium"
    BEYOND = "beyond equilibrium"
    UNKNOWN = "not decidable"


@dataclass(frozen=True, slots=True)
class ReactionFinding:
    """One reaction of the independent set that was judged.

    Attributes
    ----------
    text : the reaction as written
    coefficients : ν by record name, products positive
    log_quotient : ln Q at the sample's composition and pressure
    log_constant : ln K at the sample's temperature; its uncertainty is that of the thermochemical
        values, alike in all samples, which no other figure here counts (NaN for a K of the user's)
    data_uncertainty : what that makes of T_eq and the approach, K
    log_ratio : ln(Q/K); its uncertainty includes those of temperature and pressure
    affinity : −RT ln(Q/K), J/mol, positive where the reaction wants to go on as written
    equilibrium_temperature : K at which K = Q; NaN where undefined
    approach : T − T_eq, K
    approach_limit : 95 % interval of T − T_eq; one-sided (other end infinite) where a reacting
        species is below 5 of its standard uncertainties
    undefined : why there is no equilibrium temperature, empty where there is one
    side : short of or beyond equilibrium, at the stated significance
    forward : whether it ran as written, from the feed: +1, −1 against, 0 where that is open
    own_constant : whether K(T) is the user's own
    faint : records of the reaction that are below 5 of their standard uncertainties
    """

    text: str
    coefficients: Mapping[str, float]
    log_quotient: Estimate
    log_constant: Estimate
    data_uncertainty: float
    log_ratio: Estimate
    affinity: Estimate
    equilibrium_temperature: Estimate
    approach: Estimate
    approach_limit: Interval
    undefined: str
    side: Side
    forward: int
    own_constant: bool
    faint: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SpeciesFinding:
    """One gas record: fractions of the dry gas (water: moles per mole of dry gas).

    ``measured`` is NaN where the record was not measured by itself.  ``difference`` is reconciled
    less equilibrium over the standard uncertainty of the reconciled value.
    """

    record: str
    measured: float
    reconciled: Estimate
    wet_fraction: Estimate
    equilibrium: float
    difference: float


@dataclass(frozen=True, slots=True)
class Leakage:
    """A trace residue, as a fraction of the dry gas, beside what equilibrium would leave.

    ``below`` is the detection limit where it was read to be below one, else 0.
    """

    record: str
    found: Estimate
    below: float
    equilibrium: float


@dataclass(frozen=True, slots=True)
class EquilibriumFit:
    """Whether full equilibrium explains the sample, and at which temperature it does so best.

    Attributes
    ----------
    at_measured : chi-square difference between equilibrium at the measured temperature (with its
        uncertainty) and the closure alone
    anywhere : the same at the temperature of best fit; no degree of freedom with one reaction
    temperature : of best fit, K
    temperature_limit : its 95 % interval; one-sided where chi-square has no limit on one side
    certified : whether every equilibrium used carries its proof
    """

    at_measured: Closure
    anywhere: Closure
    temperature: Estimate
    temperature_limit: Interval
    certified: bool


@dataclass(frozen=True, slots=True)
class Energetics:
    """Per mole of dry gas, at measured temperature and pressure, the feed reconciled.

    Attributes
    ----------
    excess_gibbs_energy : G of the sample less that of equilibrium, J/mol; never negative
    excess_over_RT : the same over RT
    entropy_as_run, entropy_limit : entropy generated by the stage with the sample and with
        equilibrium as its outlet, J/(mol K), the boundary at the outlet's temperature; NaN where
        a compressor is needed
    """

    excess_gibbs_energy: float
    excess_over_RT: float
    entropy_as_run: float
    entropy_limit: float


@dataclass(frozen=True, slots=True)
class SolidFinding:
    """Activity of a solid or liquid by each route that could form it, the highest first."""

    record: str
    routes: tuple[tuple[str, float], ...]

    @property
    def activity(self) -> float:
        """By the most favourable route."""
        return self.routes[0][1]


class Verdict(StrEnum):
    """The judgement of one sample."""

    NOT_CREDIBLE = "sample not credible"
    AT_EQUILIBRIUM = "at equilibrium within errors"
    SHORT = "short of equilibrium"
    BEYOND = "beyond equilibrium"
    NOT_DECIDABLE = "not decidable"

    @property
    def sentence(self) -> str:
        """What it means, in one sentence."""
        return _MEANINGS[self]


_MEANINGS = {
    Verdict.NOT_CREDIBLE: "The analysis and the feed contradict each other beyond their errors.",
    Verdict.AT_EQUILIBRIUM: "Equilibrium at the measured temperature explains the sample.",
    Verdict.SHORT: "A reaction has not gone as far as equilibrium allows.",
    Verdict.BEYOND: "A reaction appears to have gone further than equilibrium allows.",
    Verdict.NOT_DECIDABLE: "The measurements are too few or too uncertain to tell.",
}


@dataclass(frozen=True, slots=True)
class Judgement:
    """The verdict in words: what is fact, what is likely, what to look at next."""

    verdict: Verdict
    headline: str
    facts: tuple[str, ...]
    likely: tuple[str, ...]
    look_at: tuple[str, ...]


@dataclass(frozen=True)
class SampleCheck:
    """Everything found about one sample.

    Attributes
    ----------
    label : the sample's name, or its time as written
    row : of the file of samples (2 is the first below the header), 0 for the case's own
    temperature, pressure : at the sampling point, K and Pa
    closure : of the element balance
    measurements : in the order given, flows last
    suspects : of a single gross error
    reactions : an independent set
    composition : every gas record of the sample or of equilibrium
    leakages : trace residues
    equilibrium : whether equilibrium fits
    energetics : distance from equilibrium in energy and entropy
    solids : condensed records of these elements, the most likely first
    judgement : the verdict and its sentences
    notes : what was assumed for this sample
    """

    label: str
    row: int
    temperature: Estimate
    pressure: Estimate
    closure: Closure
    measurements: tuple[Measurement, ...]
    suspects: Suspects
    reactions: tuple[ReactionFinding, ...]
    composition: tuple[SpeciesFinding, ...]
    leakages: tuple[Leakage, ...]
    equilibrium: EquilibriumFit
    energetics: Energetics
    solids: tuple[SolidFinding, ...]
    judgement: Judgement
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SampleFault:
    """A sample that could not be used: its label, row and the sentence that says why."""

    label: str
    row: int
    sentence: str


@dataclass(frozen=True)
class Checks:
    """All samples of one reactor, in the order given.

    Attributes
    ----------
    title : the case's
    stage : the stage that the samples leave
    samples : those that could be used
    faults : those that could not
    hazards : what is toxic or flammable in the gas, as sentences
    assumptions : how the measurements were taken and which thresholds were set, as sentences
    sources : of the thermochemical values, full citations
    """

    title: str
    stage: str
    samples: tuple[SampleCheck, ...]
    faults: tuple[SampleFault, ...]
    hazards: tuple[str, ...]
    assumptions: tuple[str, ...]
    sources: tuple[str, ...]
