"""What a check assumed and rests on, as sentences."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from gibbsmin.jobs.remarks import hazards_of
from gibbsmin.jobs.sample import PlantSample
from gibbsmin.jobs.sample_plan import Reactor
from gibbsmin.jobs.sample_reading import STEAM_RATIO
from gibbsmin.sample.findings import SampleCheck
from gibbsmin.thermo.library import Library

NOT_COUNTED = (
    "The uncertainty of the thermochemical values is the same in all samples; it is told beside "
    "each reaction (u of the data) and not counted in the verdict."
)


_PRESENT = 1e-6
"""Fraction of the dry gas from which a substance is there."""


def hazards_in(found: Sequence[SampleCheck], library: Library) -> tuple[str, ...]:
    """The toxic and flammable species of the samples' gas by name."""
    return hazards_of(
        library[species.record].formula
        for sample in found
        for species in sample.composition
        if max(np.nan_to_num([species.measured, species.reconciled.value])) > _PRESENT
    )


def assumptions_of(reactor: Reactor, samples: Sequence[PlantSample]) -> tuple[str, ...]:
    """How measurements were taken, and where the verdict draws its lines."""
    return tuple(_assumptions(reactor, samples))


def _assumptions(reactor: Reactor, samples: Sequence[PlantSample]) -> Iterator[str]:
    rules, own = reactor.rules, reactor.rules.uncertainty
    yield (
        f"Where a sample states no uncertainty, readings have {_percent(own.reading)} of the "
        f"reading and {_percent(own.floor)} of the gas in quadrature "
        f"({1e6 * own.trace_floor:.2g} ppm for readings in ppm), the temperature "
        f"{own.temperature:g} K, the pressure {_percent(own.pressure)}: each a standard "
        "uncertainty."
    )
    if len(reactor.streams) > 1:
        flows = ", ".join(
            f"{name} {_percent(share)}" for name, share in reactor.flow_uncertainties.items()
        )
        yield f"Standard uncertainties of the feed flows: {flows}."
    if any(STEAM_RATIO in {*sample.outlet, *sample.inlet} for sample in samples):
        yield (
            f"Steam ratios have a standard uncertainty of {_percent(own.steam_ratio)} of "
            "themselves where none is stated."
        )
    dried = ", ".join(rules.dried)
    if any(sample.dry for sample in samples):
        yield f"Drying removed {dried} and nothing else; its amount follows from the balance."
    if any(sample.normalised for sample in samples):
        yield (
            "Analyses scaled to 100 % say nothing by their sum, which takes one degree of freedom "
            "away."
        )
    if any(r.below for sample in samples for r in sample.outlet.values()):
        yield (
            "A reading below its detection limit L is taken as L/2 with a standard uncertainty of "
            "L/√12, as for a rectangular distribution from 0 to L."
        )
    yield (
        "The gas holds what is measured, what drying removed"
        + (f", {', '.join(rules.outlet.unmeasured)}" if rules.outlet.unmeasured else "")
        + " and nothing else; no solid or liquid leaves with it."
    )
    yield (
        f"Levels: not credible below p = {rules.thresholds.credible:g} of the closure, suspects "
        f"below {rules.thresholds.suspect:g}, off equilibrium below "
        f"{rules.thresholds.equilibrium:g}; a reaction is not decidable where its 95 % interval is "
        f"wider than {rules.thresholds.resolution:g} K to one side."
    )
    for reaction in rules.reactions:
        if reaction.constant is not None:
            yield (
                f"K of {reaction.text} is the case's own, for this reaction alone; the fit of "
                "equilibrium to the whole sample uses the library's."
            )
    yield _of_gas(reactor)
    yield NOT_COUNTED


def _of_gas(reactor: Reactor) -> str:
    equation = reactor.stage.chemistry.equation
    if equation is None:
        return "The gas is ideal."
    return (
        f"The gas is that of {equation.value}; its fugacity coefficients are those of the gas as "
        "measured, also where other temperatures are tried."
    )


def notes_of(sample: PlantSample) -> tuple[str, ...]:
    """What was assumed for one sample."""
    return tuple(
        f"{analyte} is below its detection limit of {1e6 * reading.below:.4g} ppm."
        for analyte, reading in [*sample.outlet.items(), *sample.inlet.items()]
        if reading.below
    )


def sources_of(checks: Sequence[SampleCheck], library: Library) -> tuple[str, ...]:
    """Citations of the values of all records in the samples, each once."""
    names = dict.fromkeys(each.record for check in checks for each in check.composition)
    keys = dict.fromkeys(
        key
        for name in names
        for key in (
            library[name].source_enthalpy,
            library[name].source_entropy,
            library[name].source_heat_capacity,
        )
        if key
    )
    return tuple(dict.fromkeys(library.source(key).citation for key in keys))


def _percent(share: float) -> str:
    return f"{100 * share:.3g} %"
