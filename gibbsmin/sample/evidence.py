"""What a verdict rests on, and its facts as sentences."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from gibbsmin.sample.findings import (
    Closure,
    EquilibriumFit,
    Estimate,
    Leakage,
    Measurement,
    ReactionFinding,
    Side,
    Suspects,
)
from gibbsmin.sample.thresholds import Thresholds

_MINUS = "\N{MINUS SIGN}"
_CELSIUS_ZERO = 273.15
_SMALLEST = 1e-6
_WITH_ARTICLE = ("flow of ", "steam ratio")
_MISREADING = 100.0
"""K by which a thermocouple may well be wrong, or off the place where the gas froze."""

APPROACH = f"T {_MINUS} T_eq"
"""How sentences name the distance of a temperature from that of equilibrium."""


@dataclass(frozen=True)
class Evidence:
    """All that was found about one sample, with the thresholds that it is judged by."""

    temperature: Estimate
    closure: Closure
    measurements: Sequence[Measurement]
    suspects: Suspects
    reactions: Sequence[ReactionFinding]
    leakages: Sequence[Leakage]
    fit: EquilibriumFit
    thresholds: Thresholds

    @property
    def closes(self) -> bool:
        """Whether the balance closes, or cannot be tested."""
        return not self.closure.probability < self.thresholds.credible

    @property
    def fits(self) -> bool:
        """Whether equilibrium at the measured temperature fits.

        The fit knows the library's K alone; where the user gives one, the reactions decide.
        """
        if any(reaction.own_constant for reaction in self.reactions):
            return all(reaction.side is Side.AT for reaction in self.reactions)
        return self.fit.at_measured.probability >= self.thresholds.equilibrium

    @property
    def fits_elsewhere(self) -> bool:
        """Whether several reactions agree on one temperature."""
        return self.fit.anywhere.probability >= self.thresholds.equilibrium

    @property
    def thermocouple_may_err(self) -> bool:
        """Whether equilibrium fits so near to the measured temperature that it may be misread."""
        away = abs(self.fit.temperature.value - self.temperature.value)
        return self.fits_elsewhere and away <= _MISREADING


def facts(evidence: Evidence) -> Iterator[str]:
    """What the figures say, without interpretation."""
    yield from _closure(evidence)
    yield from _fit(evidence)
    for reaction in evidence.reactions:
        yield _reaction(reaction)
    for leakage in evidence.leakages:
        yield f"{residue(leakage)}."


def _closure(evidence: Evidence) -> Iterator[str]:
    closure = evidence.closure
    if closure.degrees_of_freedom == 0:
        yield "Nothing in the sample is redundant, so that its closure cannot be tested."
        return
    closes = "closes" if evidence.closes else "does not close"
    freedom = closure.degrees_of_freedom
    yield (
        f"The element balance {closes} within the stated errors: chi-square "
        f"{closure.chi_square:.1f} with {freedom} {_plural('degree', freedom)} of freedom "
        f"({probability(closure.probability)})."
    )
    unjudged = [m.name for m in evidence.measurements if not m.can_be_judged]
    if unjudged:
        yield (
            f"Nothing else in the sample tells about {listed(unjudged, 'and')}: "
            f"{'this' if len(unjudged) == 1 else 'these'} cannot be judged."
        )


def _fit(evidence: Evidence) -> Iterator[str]:
    fit = evidence.fit
    if not fit.certified:
        yield "The equilibrium of this sample's feed could not be certified."
        return
    at, anywhere, best = fit.at_measured, fit.anywhere, fit.temperature
    if at.degrees_of_freedom:
        p = probability(at.probability)
        yield (
            f"Equilibrium at the measured temperature "
            f"{_fits(at, evidence)} the sample: chi-square difference "
            f"{at.chi_square:.1f} with {at.degrees_of_freedom} "
            f"{_plural('degree', at.degrees_of_freedom)} of freedom ({p})."
        )
    else:
        yield "Equilibrium cannot be tested: it leaves as much open as the measurements fix."
    if best.value == best.value:
        ending = ""
        if anywhere.degrees_of_freedom:
            well = "it fits" if evidence.fits_elsewhere else "it does not fit there either"
            ending = f"; {well} ({probability(anywhere.probability)})"
        yield (
            f"Equilibrium fits best at {celsius(best.value)}, with a standard uncertainty of "
            f"{best.uncertainty:.1f} K{ending}."
        )


def _fits(at: Closure, evidence: Evidence) -> str:
    fits = at.probability >= evidence.thresholds.equilibrium
    return "fits" if fits else "does not fit"


def _reaction(reaction: ReactionFinding) -> str:
    name = f"{reaction.text}, by the K of the case" if reaction.own_constant else reaction.text
    if reaction.faint and reaction.log_quotient.value == reaction.log_quotient.value:
        return f"{name}: {_limit(reaction)}; {_below(reaction.faint)}."
    if reaction.undefined:
        ratio = reaction.log_ratio.value
        figure = f" ln(Q/K) is {signed(ratio, 2)}." if abs(ratio) < float("inf") else ""
        return f"{name}: T_eq is undefined, {reaction.undefined}.{figure}"
    return f"{name}: {approach(reaction)}, {reaction.side}."


def _limit(reaction: ReactionFinding) -> str:
    limit = reaction.approach_limit
    if limit.upper < float("inf"):
        return f"{APPROACH} is at most {signed(limit.upper)} K (95 %)"
    if limit.lower > -float("inf"):
        return f"{APPROACH} is at least {signed(limit.lower)} K (95 %)"
    return f"no limit of {APPROACH} follows"


def _below(faint: Sequence[str]) -> str:
    verb = "is" if len(faint) == 1 else "are"
    return f"{listed(faint, 'and')} {verb} below 5 standard uncertainties"


def approach(reaction: ReactionFinding) -> str:
    """T − T_eq with its uncertainty; ln(Q/K) where that is undefined."""
    distance, ratio = reaction.approach, reaction.log_ratio
    if distance.uncertainty == distance.uncertainty:
        return f"{APPROACH} = {signed(distance.value)} ± {distance.uncertainty:.1f} K"
    if ratio.uncertainty == ratio.uncertainty:
        return f"ln(Q/K) = {signed(ratio.value, 2)} ± {ratio.uncertainty:.2g}"
    return _limit(reaction)


def residue(leakage: Leakage) -> str:
    """A trace beside what equilibrium would leave."""
    found = f"{ppm(leakage.found.value)} ± {ppm(leakage.found.uncertainty)}"
    found = f"below {ppm(leakage.below)}" if leakage.below else found
    return f"{leakage.record} is {found} of the dry gas, {ppm(leakage.equilibrium)} at equilibrium"


def standing(evidence: Evidence, reaction: ReactionFinding) -> str:
    """How far a reaction is from equilibrium, by its trace residue where that says more."""
    for leakage in evidence.leakages:
        if leakage.record in reaction.coefficients and not leakage.below:
            return residue(leakage)
    return approach(reaction)


def celsius(kelvin: float) -> str:
    """A temperature in degrees Celsius."""
    return f"{kelvin - _CELSIUS_ZERO:.1f} °C".replace("-", _MINUS)


def signed(value: float, decimals: int = 1) -> str:
    """A difference with its sign."""
    return f"{value:+.{decimals}f}".replace("-", _MINUS)


def ppm(fraction: float) -> str:
    """A small fraction."""
    if fraction != fraction:
        return "not known"
    return f"{1e6 * fraction:.0f} ppm" if fraction >= 1e-4 else f"{1e6 * fraction:.2g} ppm"


def probability(value: float) -> str:
    """A tail probability, which means little below a millionth."""
    return f"p = {value:.2g}" if value >= _SMALLEST else f"p < {_SMALLEST:.0e}".replace("e-0", "e-")


def listed(names: Sequence[str], conjunction: str) -> str:
    """Names in a sentence, those of flows and ratios with their article."""
    names = [f"the {name}" if name.startswith(_WITH_ARTICLE) else name for name in names]
    return f"{', '.join(names[:-1])} {conjunction} {names[-1]}" if len(names) > 1 else names[0]


def _plural(word: str, count: int) -> str:
    return word if count == 1 else f"{word}s"
