"""Turns the arrays of a batch into findings, one sample at a time."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.sample.batch import Batch, difference, tail_probability
from gibbsmin.sample.energetics import excess_in_joules
from gibbsmin.sample.evidence import Evidence
from gibbsmin.sample.findings import (
    Closure,
    Energetics,
    EquilibriumFit,
    Estimate,
    Interval,
    Leakage,
    Measurement,
    ReactionFinding,
    SampleCheck,
    SpeciesFinding,
    Stream,
)
from gibbsmin.sample.plan import Reading
from gibbsmin.sample.reaction_findings import reaction_findings
from gibbsmin.sample.suspects import suspects_of
from gibbsmin.sample.thresholds import Thresholds
from gibbsmin.sample.verdict import verdict_of

_TRACE = 1e-3
"""Dry fractions below this are traces, whose leakage says more than a temperature."""


@dataclass(frozen=True)
class Label:
    """What identifies a sample, and what was assumed for it."""

    text: str
    row: int
    notes: tuple[str, ...] = ()


def findings_of(batch: Batch, labels: Sequence[Label], thresholds: Thresholds) -> list[SampleCheck]:
    """One finding a sample, in order."""
    closures = _closures(
        batch.closed.chi_square,
        batch.closed.degrees_of_freedom,
    )
    measurements = _measurements(batch)
    suspects = suspects_of(
        batch.plan,
        batch.closed,
        batch.readings.uncertainties,
        [closure.probability for closure in closures],
        thresholds,
    )
    reactions = reaction_findings(batch, thresholds)
    species = _species(batch)
    fits = _fits(batch)
    energies = _energetics(batch)
    T, P = _estimates(batch)
    checks = []
    for state, label in enumerate(labels):
        closure, own = closures[state], reactions[state]
        leakages = _leakages(species[state], own, measurements[state])
        evidence = Evidence(
            T[state],
            closure,
            measurements[state],
            suspects[state],
            own,
            leakages,
            fits[state],
            thresholds,
        )
        checks.append(
            SampleCheck(
                label=label.text,
                row=label.row,
                temperature=T[state],
                pressure=P[state],
                closure=closure,
                measurements=measurements[state],
                suspects=suspects[state],
                reactions=own,
                composition=species[state],
                leakages=leakages,
                equilibrium=fits[state],
                energetics=energies[state],
                solids=batch.solids[state],
                judgement=verdict_of(evidence),
                notes=label.notes,
            )
        )
    return checks


def _closures(chi_square: FloatArray, degrees: IntArray) -> list[Closure]:
    probability = tail_probability(chi_square, degrees)
    columns = chi_square.tolist(), degrees.tolist(), probability.tolist()
    return [Closure(*values) for values in zip(*columns, strict=True)]


def _estimates(batch: Batch) -> tuple[list[Estimate], list[Estimate]]:
    readings = batch.readings
    return (
        _paired(readings.temperature, readings.u_temperature),
        _paired(readings.pressure, batch.u_pressure),
    )


def _paired(values: FloatArray, uncertainties: FloatArray) -> list[Estimate]:
    pairs = zip(values.tolist(), uncertainties.tolist(), strict=True)
    return [Estimate(value, u) for value, u in pairs]


def _measurements(batch: Batch) -> list[tuple[Measurement, ...]]:
    closed, equations = batch.closed, batch.plan.closure
    x = closed.unknowns
    whole = x @ equations.below.T
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = x @ equations.above.T / whole
        rows = equations.above - ratio[..., np.newaxis] * equations.below
        rows = rows / whole[..., np.newaxis]
    u = np.sqrt(np.maximum(np.einsum("bmi,bij,bmj->bm", rows, closed.covariance, rows), 0.0))
    arrays = (
        batch.readings.values,
        batch.readings.uncertainties,
        batch.below,
        ratio,
        u,
        closed.redundancy,
        closed.adjustments,
        closed.can_be_judged,
    )
    places = batch.plan.readings
    return [
        tuple(
            _measurement(reading, *values)
            for reading, *values in zip(places, *row, strict=True)
            if values[0] == values[0]
        )
        for row in zip(*(array.tolist() for array in arrays), strict=True)
    ]


def _measurement(
    reading: Reading,
    value: float,
    uncertainty: float,
    below: float,
    fitted: float,
    u_fitted: float,
    redundancy: float,
    adjustment: float,
    judged: bool,
) -> Measurement:
    return Measurement(
        reading.name,
        reading.record,
        reading.place,
        reading.basis,
        value,
        uncertainty,
        below,
        Estimate(fitted, u_fitted),
        redundancy,
        adjustment,
        judged,
    )


def _species(batch: Batch) -> list[tuple[SpeciesFinding, ...]]:
    plan, closed = batch.plan, batch.closed
    n = plan.outlet_count
    y, covariance = closed.unknowns[:, :n], closed.covariance[:, :n, :n]
    known = closed.determined[:, :n]
    u = np.where(known, np.sqrt(np.diagonal(covariance, axis1=1, axis2=2)), np.nan)
    total = y.sum(axis=1)[:, np.newaxis]
    wet = y / total
    slopes = (np.eye(n) - wet[..., np.newaxis]) / total[..., np.newaxis]
    u_wet = np.sqrt(np.einsum("bij,bjk,bik->bi", slopes, covariance, slopes))
    u_wet = np.where(known.all(axis=1, keepdims=True), u_wet, np.nan)

    amounts, model = batch.equilibria.amounts, plan.model
    dried = {r.name for r, dry in zip(plan.species, plan.dry.tolist(), strict=True) if not dry}
    counted = model.gas & np.array([record.name not in dried for record in model.records])
    equilibrium = amounts / amounts[:, counted].sum(axis=1, keepdims=True)
    at = equilibrium[:, list(plan.columns)]
    with np.errstate(divide="ignore", invalid="ignore"):
        z = np.where(u > 0.0, (y - at) / u, np.nan)
    y = np.where(known, y, np.nan)
    arrays = (_measured(batch), y, u, np.where(known, wet, np.nan), u_wet, at, z)
    names = [record.name for record in plan.species]
    return [
        tuple(
            SpeciesFinding(name, measured, Estimate(a, b), Estimate(c, d), e, f)
            for name, measured, a, b, c, d, e, f in zip(names, *row, strict=True)
        )
        for row in zip(*(array.tolist() for array in arrays), strict=True)
    ]


def _measured(batch: Batch) -> FloatArray:
    """(B, n_y) the outlet's own readings of single records, NaN elsewhere."""
    plan = batch.plan
    found = np.full((len(batch.readings.values), plan.outlet_count), np.nan)
    of_outlet = plan.outlet.analytes
    names = [record.name for record in plan.species]
    for column, analyte in enumerate(of_outlet):
        if len(analyte) == 1:
            found[:, names.index(analyte[0])] = batch.readings.values[:, column]
    return found


def _leakages(
    species: Sequence[SpeciesFinding],
    reactions: Sequence[ReactionFinding],
    measurements: Sequence[Measurement],
) -> tuple[Leakage, ...]:
    below = {m.record: m.below for m in measurements if m.stream is Stream.OUTLET}
    reacting = {name for reaction in reactions for name in reaction.coefficients}
    return tuple(
        Leakage(each.record, each.reconciled, below.get(each.record, 0.0), each.equilibrium)
        for each in species
        if each.record in reacting and each.reconciled.value < _TRACE
    )


def _fits(batch: Batch) -> list[EquilibriumFit]:
    at_measured = _closures(*difference(batch.measured_fit, batch.closed))
    anywhere = _closures(*difference(batch.best_fit, batch.closed))
    temperatures = _paired(batch.best_fit.temperature, batch.best_fit.u_temperature)
    limits = zip(batch.lower.tolist(), batch.upper.tolist(), strict=True)
    certified = np.isfinite(batch.measured_fit.chi_square)
    return [
        EquilibriumFit(first, second, temperature, Interval(*ends, 0.95), proved)
        for first, second, temperature, ends, proved in zip(
            at_measured, anywhere, temperatures, limits, certified.tolist(), strict=True
        )
    ]


def _energetics(batch: Batch) -> list[Energetics]:
    found = batch.energetics
    columns = (
        excess_in_joules(found.excess_over_RT, batch.readings.temperature),
        found.excess_over_RT,
        found.entropy_as_run,
        found.entropy_limit,
    )
    return [Energetics(*row) for row in zip(*(c.tolist() for c in columns), strict=True)]
