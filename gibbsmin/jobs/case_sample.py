"""Turns a case's ``[sample]`` table into the rules for its samples, and into its own sample."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.jobs.case_reactions import coefficients_of
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import item_key, placed, resolve
from gibbsmin.jobs.sample import AskedReaction, GasRules, PlantSample, SampleRules
from gibbsmin.jobs.sample_flow import flow_ratio
from gibbsmin.jobs.sample_reading import (
    STEAM_RATIO,
    GasReading,
    UncertaintyRules,
    read_own_uncertainty,
    read_reading,
)
from gibbsmin.reactor.streams import Stream
from gibbsmin.sample.reactions import GivenConstant
from gibbsmin.sample.thresholds import Thresholds
from gibbsmin.thermo.library import Library
from gibbsmin.units import read_share, read_temperature, read_temperature_difference, shown

if TYPE_CHECKING:
    from gibbsmin.jobs.sample_schema import ReactionTable, SampleTable

_SHARES = ("reading", "floor", "trace_floor", "pressure", "flow", "steam_ratio")


def read_rules(
    table: SampleTable, streams: Sequence[Stream], stages: Sequence[StageCase], library: Library
) -> SampleRules:
    """What the case says of all its samples.

    Raises
    ------
    InputError
        for names that are no stages, streams, records or reactions.
    """
    names = [stage.name for stage in stages]
    if table.stage and table.stage not in names:
        raise InputError(
            f"found {shown(table.stage)}, which is no stage",
            f"accepted is one of {', '.join(names)}",
            key="sample.stage",
        )
    inlet = GasRules()
    inlet_stream = ""
    if table.inlet is not None:
        inlet_stream = table.inlet.stream or ""
        if inlet_stream and inlet_stream not in [stream.name for stream in streams]:
            raise InputError(
                f"found {shown(inlet_stream)}, which is no stream",
                f"accepted is one of {', '.join(stream.name for stream in streams)}",
                key="sample.inlet.stream",
            )
        unmeasured = _records("sample.inlet.unmeasured", table.inlet.unmeasured, library)
        inlet = GasRules(table.inlet.basis == "dry", table.inlet.normalised, unmeasured)
    given = table.thresholds
    return SampleRules(
        stage=table.stage,
        outlet=GasRules(
            table.basis == "dry",
            table.normalised,
            _records("sample.unmeasured", table.unmeasured, library),
        ),
        inlet=inlet,
        inlet_stream=inlet_stream,
        dried=_records("sample.removed_by_drying", table.removed_by_drying, library),
        uncertainty=read_uncertainty_rules(table.uncertainty),
        reactions=tuple(
            _reaction(item_key("sample.reaction", index), reaction, library)
            for index, reaction in enumerate(table.reaction)
        ),
        thresholds=Thresholds(given.credible, given.suspect, given.equilibrium, given.resolution),
    )


def read_sample(
    table: SampleTable, rules: SampleRules, streams: Sequence[Stream], library: Library
) -> PlantSample | None:
    """The case's own sample; None where the table only tells how samples are taken."""
    if table.analysis is None:
        return None
    for key in ("temperature", "pressure"):
        if getattr(table, key) is None:
            raise InputError(
                "found nothing",
                f"accepted is the {key} at the sampling point",
                key=f"sample.{key}",
            )
    assert table.temperature is not None and table.pressure is not None  # noqa: S101, PT018
    own = rules.uncertainty
    inlet = {}
    if table.inlet is not None and table.inlet.analysis is not None:
        inlet = _readings("sample.inlet.analysis", table.inlet.analysis, own)
    outlet = _readings("sample.analysis", table.analysis, own)
    for readings, ratio in (
        (outlet, table.steam_ratio),
        (inlet, table.inlet.steam_ratio if table.inlet else None),
    ):
        if ratio is not None:
            readings[STEAM_RATIO] = GasReading(ratio, own.steam_ratio * ratio)
    feeds = {}
    for name, amount in table.feed.items():
        with placed(f"sample.feed.{name}"):
            feeds[name] = (flow_ratio(name, amount, streams, library), math.nan)
    return PlantSample(
        label=table.label,
        row=0,
        temperature=table.temperature,
        u_temperature=own.temperature,
        pressure=table.pressure,
        u_pressure=own.pressure * table.pressure,
        dry=rules.outlet.dry,
        normalised=rules.outlet.normalised,
        outlet=outlet,
        inlet=inlet,
        inlet_dry=rules.inlet.dry,
        inlet_normalised=rules.inlet.normalised,
        feeds=feeds,
    )


def read_uncertainty_rules(table: Mapping[str, Any]) -> UncertaintyRules:
    """Standard uncertainties: the general ones by their keys, all others by analyte."""
    general: dict[str, float] = {}
    own: dict[str, float] = {}
    for name, value in table.items():
        with placed(f"sample.uncertainty.{name}"):
            if name in _SHARES:
                general[name] = read_share(value)
            elif name == "temperature":
                general[name] = read_temperature_difference(value)
            else:
                own[name] = read_own_uncertainty(value)
                continue
            if general[name] <= 0.0 and name not in ("reading", "floor", "trace_floor"):
                raise InputError(f"found {shown(value)}", "accepted is above zero")
    return UncertaintyRules(**general, own=own)


def _readings(
    key: str, analysis: Mapping[str, Any], rules: UncertaintyRules
) -> dict[str, GasReading]:
    readings = {}
    for analyte, given in analysis.items():
        with placed(f"{key}.{analyte}"):
            readings[analyte] = read_reading(given, analyte, rules)
    return readings


def _records(key: str, texts: Sequence[str], library: Library) -> tuple[str, ...]:
    with placed(key):
        return tuple(dict.fromkeys(resolve(text, library).name for text in texts))


def _reaction(key: str, table: ReactionTable, library: Library) -> AskedReaction:
    with placed(f"{key}.reaction"):
        coefficients = coefficients_of(table.reaction, library)
    constant = None
    if table.equilibrium_constant is not None:
        constant = _constant(f"{key}.equilibrium_constant", table.equilibrium_constant)
    return AskedReaction(table.reaction, coefficients, constant)


def _constant(key: str, table: Mapping[str, Any]) -> GivenConstant:
    points = {}
    for text, K in table.items():
        with placed(f"{key}.{text}"):
            if isinstance(K, bool) or not isinstance(K, int | float) or not 0.0 < K < math.inf:
                raise InputError(f"found {shown(K)}", "accepted is a K above 0, for P° = 1 bar")
            points[read_temperature(text)] = math.log(K)
    if len(points) < 2:
        raise InputError(
            "found one temperature", "accepted are at least two, so that K(T) follows", key=key
        )
    T = sorted(points)
    return GivenConstant(np.array(T), np.array([points[each] for each in T]))
