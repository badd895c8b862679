"""Lays out samples that were taken alike as one batch: its plan, and its readings as arrays."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.sample import GasRules, PlantSample, SampleRules
from gibbsmin.jobs.sample_reading import STEAM_RATIO, GasReading
from gibbsmin.jobs.sample_sense import records_of
from gibbsmin.reactor.balance import elements_of
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.results import WATER
from gibbsmin.sample.equilibrium_fit import Readings
from gibbsmin.sample.findings import Stream as Place
from gibbsmin.sample.plan import Analysis, Feed, Plan, Reading, plan_of
from gibbsmin.thermo.library import Library

_AMOUNTS = ".amounts."


@dataclass(frozen=True)
class Reactor:
    """The stage that samples leave and the streams that enter it."""

    stage: StageCase
    streams: tuple[Stream, ...]
    rules: SampleRules
    flow_uncertainties: Mapping[str, float]
    """Share of each stream's flow."""
    part_uncertainties: Mapping[str, Mapping[str, float]]
    """Share of single records of a stream, by stream."""


def reactor_of(
    case: Case, stage: StageCase, streams: Sequence[Stream], rules: SampleRules
) -> Reactor:
    """The reactor with the uncertainties that the case states of its streams."""
    flows = {stream.name: rules.uncertainty.flow for stream in streams}
    parts: dict[str, dict[str, float]] = {}
    for stated in case.uncertainties:
        name = stated.name.removeprefix("feed.")
        if name in flows and stated.is_share and stated.value > 0.0:
            flows[name] = stated.value
        owner, amounts, record = name.partition(_AMOUNTS)
        stream = next((s for s in streams if s.name == owner), None)
        if amounts and stream is not None and record in stream.amounts and stated.value > 0.0:
            nominal = first(stream.amounts[record])
            share = stated.value if stated.is_share else stated.value / nominal
            parts.setdefault(owner, {})[record] = share
    return Reactor(stage, tuple(streams), rules, flows, parts)


def elements_fed(reactor: Reactor, library: Library) -> set[str]:
    """Symbols of all elements that the streams bring."""
    names = {name for stream in reactor.streams for name in stream.amounts}
    return set(elements_of([library[name] for name in names]))


def batch_plan(
    reactor: Reactor, samples: Sequence[PlantSample], fed: set[str], library: Library
) -> Plan:
    """The plan of samples that were taken alike."""
    rules = reactor.rules
    outlet = _analysis(
        (sample.outlet for sample in samples),
        rules.outlet,
        samples[0].dry,
        samples[0].normalised,
        [name for name in rules.dried if _made_of(name, fed, library)],
        fed,
        library,
    )
    feeds = []
    analysed = rules.inlet_stream or reactor.streams[0].name
    for stream in reactor.streams:
        if stream.name == analysed and samples[0].inlet:
            inlet = _analysis(
                (sample.inlet for sample in samples),
                rules.inlet,
                samples[0].inlet_dry,
                samples[0].inlet_normalised,
                [name for name in rules.dried if _is_wet(name, stream, samples)],
                fed,
                library,
            )
            feeds.append(Feed(stream, inlet))
        else:
            feeds.append(Feed(stream, None, tuple(reactor.part_uncertainties.get(stream.name, ()))))
    return plan_of(reactor.stage.chemistry, outlet, feeds, library)


def batch_readings(
    reactor: Reactor, plan: Plan, samples: Sequence[PlantSample]
) -> tuple[Readings, FloatArray, FloatArray]:
    """Readings, the detection limits that they were below (else 0), and u(P), of one plan."""
    values = np.full((len(samples), len(plan.readings)), np.nan)
    uncertainties = np.full_like(values, np.nan)
    below = np.zeros(values.shape)
    for state, sample in enumerate(samples):
        for column, reading in enumerate(plan.readings):
            found = _reading(reactor, reading, sample)
            if found is not None:
                values[state, column] = found.value
                uncertainties[state, column] = found.uncertainty
                below[state, column] = found.below
    conditions = np.array(
        [(s.temperature, s.u_temperature, s.pressure, s.u_pressure) for s in samples]
    ).T
    T, u_T, P, u_P = conditions
    ideal = np.zeros((len(samples), len(plan.model.records)))
    return Readings(values, uncertainties, T, u_T, P, ideal), below, u_P


def _reading(reactor: Reactor, reading: Reading, sample: PlantSample) -> GasReading | None:
    if reading.place is Place.OUTLET:
        return sample.outlet.get(reading.name)
    if reading.place is Place.INLET:
        return sample.inlet.get(reading.name)
    if reading.record:
        return GasReading(1.0, reactor.part_uncertainties[reading.stream][reading.record])
    ratio, u = sample.feeds.get(reading.stream, (1.0, math.nan))
    return GasReading(ratio, reactor.flow_uncertainties[reading.stream] * ratio if u != u else u)


def _analysis(
    readings: Iterable[Mapping[str, GasReading]],
    rules: GasRules,
    dry: bool,
    normalised: bool,
    dried: Sequence[str],
    fed: set[str],
    library: Library,
) -> Analysis:
    """The analytes of all samples; those that no element allows take no part."""
    names = [
        analyte
        for analyte in dict.fromkeys(name for sample in readings for name in sample)
        if (analyte == STEAM_RATIO or not dry or not {*dried} & {*records_of(analyte, library)})
        and all(_made_of(name, fed, library) for name in records_of(analyte, library))
    ]
    analytes = tuple(records_of(name, library) for name in names)
    held = [record for analyte in analytes for record in analyte]
    records = tuple(dict.fromkeys([*held, *rules.unmeasured, *dried]))
    return Analysis(analytes, tuple(names), dry, normalised, records, tuple(dried))


def _is_wet(name: str, stream: Stream, samples: Sequence[PlantSample]) -> bool:
    """Whether an analysed stream holds what drying removes: by the case, or by a steam ratio."""
    stated = name == WATER and any(STEAM_RATIO in sample.inlet for sample in samples)
    return name in stream.amounts or stated


def _made_of(name: str, fed: set[str], library: Library) -> bool:
    return {symbol for symbol, _ in library[name].elements} <= fed
