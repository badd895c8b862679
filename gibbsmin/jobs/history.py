"""A history of samples: series that tell whether it gets worse, and since when."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.sample.findings import Checks, SampleCheck, Stream, Verdict
from gibbsmin.sample.trends import Trend, trend_of

SIGNIFICANCE = 0.01
"""Rate of false alarms of each series' tests."""


@dataclass(frozen=True)
class Series:
    """One figure of every sample, (n,), with its standard uncertainty; NaN where unknown.

    ``trend`` is None for too few samples.
    """

    name: str
    unit: str
    values: FloatArray
    uncertainties: FloatArray
    trend: Trend | None


def history_of(checks: Checks) -> tuple[Series, ...]:
    """Approach of each reaction, the closure, and the standardised adjustment of each flow.

    Approaches count credible samples alone; the others tell of measurements, so that they count
    all.
    """
    series = []
    for name, unit, values, sizes in _figures(checks.samples):
        array = np.array(values)
        series.append(Series(name, unit, array, np.array(sizes), trend_of(name, array)))
    return tuple(series)


def _figures(
    samples: tuple[SampleCheck, ...],
) -> Iterator[tuple[str, str, list[float], list[float]]]:
    nan = float("nan")
    if not samples:
        return
    credible = [s.judgement.verdict is not Verdict.NOT_CREDIBLE for s in samples]
    for place, reaction in enumerate(samples[0].reactions):
        found = [
            sample.reactions[place] if place < len(sample.reactions) else None for sample in samples
        ]
        told = [
            each is not None and ok and not each.faint
            for each, ok in zip(found, credible, strict=True)
        ]
        yield (
            f"T − T_eq of {reaction.text}",
            "K",
            [r.approach.value if r and ok else nan for r, ok in zip(found, told, strict=True)],
            [
                r.approach.uncertainty if r and ok else nan
                for r, ok in zip(found, told, strict=True)
            ],
        )
    yield (
        "Chi-square of the closure over its degrees of freedom",
        "",
        [
            s.closure.chi_square / s.closure.degrees_of_freedom
            if s.closure.degrees_of_freedom
            else nan
            for s in samples
        ],
        [nan] * len(samples),
    )
    names = dict.fromkeys(
        measurement.name
        for sample in samples
        for measurement in sample.measurements
        if measurement.stream is Stream.FEED and measurement.can_be_judged
    )
    for name in names:
        yield (
            f"Adjustment of {name}",
            "u √r",
            [_adjustment(sample, name) for sample in samples],
            [1.0] * len(samples),
        )


def _adjustment(sample: SampleCheck, name: str) -> float:
    for measurement in sample.measurements:
        if measurement.name == name and measurement.can_be_judged:
            return measurement.adjustment
    return float("nan")


def _signed(value: float) -> str:
    return f"{value:+.3g}".replace("-", "\N{MINUS SIGN}")


def trend_sentences(checks: Checks, series: tuple[Series, ...]) -> list[str]:
    """What drifts or changes, in words, with the tests and their rate of false alarms."""
    said = []
    for each in series:
        trend = each.trend
        if trend is None:
            continue
        unit = f" {each.unit}" if each.unit else ""
        drifts, changes = trend.drifts(SIGNIFICANCE), trend.changes(SIGNIFICANCE)
        if changes and trend.change_probability <= trend.drift_probability:
            said.append(
                f"{each.name} changes by {_signed(trend.step)}{unit} at "
                f"{checks.samples[trend.change].label} "
                f"(p = {trend.change_probability:.1g})."
            )
        elif drifts:
            said.append(
                f"{each.name} drifts by {_signed(trend.slope)}{unit} from sample to sample "
                f"(p = {trend.drift_probability:.1g})."
            )
    tested = sum(each.trend is not None for each in series)
    if tested:
        said.append(
            f"Tested: {tested} series, drift by Mann and Kendall, change by Pettitt, each with "
            f"false alarms of {100 * SIGNIFICANCE:g} %, if samples are independent."
        )
    return said
