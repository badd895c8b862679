"""Checked samples on the terminal: one in full, or many in a short table."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.text import Text

from gibbsmin.jobs.history import history_of, trend_sentences
from gibbsmin.present.check_table import NOT_USED
from gibbsmin.present.layout import heading, number, pairs, sentences, table
from gibbsmin.present.quantities import fraction, pressure, significant, temperature
from gibbsmin.results import CAUTIONS
from gibbsmin.sample.findings import (
    Checks,
    Interval,
    Measurement,
    ReactionFinding,
    SampleCheck,
    Stream,
    Verdict,
)

_LONGEST = 40
"""Samples listed one by one; of more, those that need a look are."""

_INFINITE = float("inf")


def check_view(checks: Checks) -> RenderableType:
    """One sample in full, several as a table of a line each."""
    parts: list[RenderableType] = [heading(checks.title)] if checks.title else []
    if len(checks.samples) + len(checks.faults) == 1 and checks.samples:
        parts += _sample(checks.samples[0])
    else:
        parts += _history(checks)
        parts += sentences("Over time", trend_sentences(checks, history_of(checks)))
    parts += sentences("Assumptions", checks.assumptions)
    parts += sentences("Hazards of the gas", checks.hazards)
    parts += sentences("Cautions", CAUTIONS)
    return Group(*parts)


def _sample(sample: SampleCheck) -> list[RenderableType]:
    judgement = sample.judgement
    conditions = f"{temperature(sample.temperature.value)}, {pressure(sample.pressure.value)}"
    parts: list[RenderableType] = [
        Text(f"{sample.label}: {conditions}"),
        Text(""),
        heading(judgement.headline),
    ]
    parts += sentences("What is fact", judgement.facts)
    parts += sentences("What is likely", judgement.likely)
    parts += sentences("What to look at next", judgement.look_at)
    parts += [heading("Measurements"), _measurements(sample)]
    parts.append(heading("Reactions"))
    for reaction in sample.reactions:
        parts += _reaction(reaction)
    parts += [heading("Gas, beside equilibrium at the measured conditions"), _composition(sample)]
    parts.append(pairs(figures_of(sample)))
    if sample.solids:
        parts += [heading("Solids and liquids that the gas could form"), _solids(sample)]
    parts += sentences("Notes", sample.notes)
    return parts


def _measurements(sample: SampleCheck) -> RenderableType:
    rows = [
        (
            f"{m.stream.value} {m.name}" if m.stream is Stream.INLET else m.name,
            _read(m, m.value) if not m.below else f"<{_read(m, m.below)}",
            _read(m, m.uncertainty),
            _read(m, m.reconciled.value),
            number(m.redundancy, 2),
            number(m.adjustment, 2) if m.can_be_judged else "cannot be judged",
        )
        for m in sample.measurements
    ]
    headers = ("measurement", "measured", "± u", "reconciled", "redundancy", "adjustment, in u √r")
    return table(headers, rows, words=("measurement",))


def _read(measurement: Measurement, value: float) -> str:
    """Fractions as such, ratios as numbers; flows over what the case gives."""
    if measurement.stream is Stream.FEED:
        return f"{significant(value, 4)} ×"
    if measurement.basis == "ratio":
        return significant(value, 4)
    return fraction(value)


def _reaction(reaction: ReactionFinding) -> Iterator[RenderableType]:
    """A reaction and where it stands; its figures under it."""
    yield Padding(Text(f"{reaction.text}: {reaction.side}"), (0, 0, 0, 2), expand=False)
    ratio, affinity = reaction.log_ratio, reaction.affinity
    rows = []
    if ratio.value == ratio.value:
        rows = [
            ("ln(Q/K)", f"{number(ratio.value, 3)} ± {number(ratio.uncertainty, 3)}"),
            (
                "affinity",
                f"{number(affinity.value / 1e3, 2)} ± {number(affinity.uncertainty / 1e3, 2)} "
                "kJ/mol",
            ),
        ]
    limit = f"95 %: {_interval(reaction.approach_limit)} K"
    if reaction.undefined:
        rows.append(("T − T_eq", f"undefined, {reaction.undefined}"))
    elif reaction.faint:
        rows.append(("T − T_eq", f"{limit}, for {' and '.join(reaction.faint)} is faint"))
    else:
        T_eq, approach = reaction.equilibrium_temperature, reaction.approach
        rows += [
            ("T_eq", f"{temperature(T_eq.value)} ± {number(T_eq.uncertainty, 1)} K"),
            (
                "T − T_eq",
                f"{number(approach.value, 1)} ± {number(approach.uncertainty, 1)} K, {limit}",
            ),
        ]
        if reaction.own_constant:
            rows.append(("K", "of the case, not of the library"))
        else:
            rows.append(("u of the data", f"{number(reaction.data_uncertainty, 1)} K"))
    yield Padding(pairs(rows), (0, 0, 0, 2), expand=False)


def _probability(value: float) -> str:
    return "<0.001" if value < 0.001 else number(value, 3)


def _interval(interval: Interval) -> str:
    if interval.lower == -_INFINITE and interval.upper == _INFINITE:
        return "no limit"
    if interval.lower == -_INFINITE:
        return f"at most {number(interval.upper, 1)}"
    if interval.upper == _INFINITE:
        return f"at least {number(interval.lower, 1)}"
    return f"{number(interval.lower, 1)} to {number(interval.upper, 1)}"


def _composition(sample: SampleCheck) -> RenderableType:
    rows = [
        (
            each.record,
            fraction(each.measured),
            fraction(each.reconciled.value),
            fraction(each.reconciled.uncertainty),
            fraction(each.equilibrium),
            number(each.difference, 1),
            fraction(each.wet_fraction.value),
        )
        for each in sample.composition
    ]
    headers = (
        "of the dry gas",
        "measured",
        "reconciled",
        "± u",
        "equilibrium",
        "difference, in u",
        "wet gas",
    )
    return table(headers, rows, words=("of the dry gas",))


def figures_of(sample: SampleCheck) -> Iterator[tuple[str, str]]:
    """The temperature of best fit, excess Gibbs energy and entropies, each with its value."""
    fit, energetics = sample.equilibrium, sample.energetics
    if fit.temperature.value == fit.temperature.value:
        limits = Interval(
            fit.temperature_limit.lower - 273.15, fit.temperature_limit.upper - 273.15, 0.95
        )
        yield (
            "temperature of best fit",
            f"{temperature(fit.temperature.value)}, 95 %: {_interval(limits)} °C",
        )
    yield (
        "excess Gibbs energy",
        f"{significant(energetics.excess_gibbs_energy)} J per mole of dry gas, "
        f"{significant(energetics.excess_over_RT)} RT",
    )
    if energetics.entropy_as_run == energetics.entropy_as_run:
        yield (
            "entropy generated, as run",
            f"{significant(energetics.entropy_as_run)} J/K per mole of dry gas",
        )
        yield (
            "entropy generated, at equilibrium",
            f"{significant(energetics.entropy_limit)} J/K per mole of dry gas",
        )


def _solids(sample: SampleCheck) -> RenderableType:
    rows = [
        (solid.record if place == 0 else "", text, significant(activity, 3))
        for solid in sample.solids
        for place, (text, activity) in enumerate(solid.routes)
    ]
    return table(("record", "route", "activity"), rows, words=("record", "route"))


def _history(checks: Checks) -> list[RenderableType]:
    counts = Counter(sample.judgement.verdict for sample in checks.samples)
    rows = [(verdict.value, str(counts[verdict])) for verdict in Verdict if counts[verdict]]
    if checks.faults:
        rows.append((NOT_USED, str(len(checks.faults))))
    parts: list[RenderableType] = [heading("Verdicts"), table(("verdict", "samples"), rows)]
    every = len(checks.samples) <= _LONGEST
    listed = [
        sample
        for sample in checks.samples
        if every or sample.judgement.verdict is not Verdict.AT_EQUILIBRIUM
    ][:_LONGEST]
    lines = [
        (
            sample.label,
            f"{sample.temperature.value - 273.15:.1f}",
            _probability(sample.closure.probability),
            _probability(sample.equilibrium.at_measured.probability),
            sample.judgement.headline,
        )
        for sample in listed
    ]
    headers = ("sample", "T, °C", "closure p", "equilibrium p", "verdict")
    parts.append(heading("Samples" if every else "Samples off equilibrium, the first ones"))
    parts.append(table(headers, lines, words=("sample", "verdict")))
    faults = [f"{fault.label}: {fault.sentence}" for fault in checks.faults[:_LONGEST]]
    return parts + sentences("Not used", faults)
