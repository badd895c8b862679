"""Activities of solids and liquids that a sample's gas could deposit, by each route.

A gas short of equilibrium has no single activity of carbon: methane may deposit what carbon
monoxide would take up.  Routes and their arithmetic are those of :mod:`gibbsmin.reactor.routes`;
here they are chosen once for a batch of samples.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.reactor.balance import elements_of
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.routes import Route, routes_to
from gibbsmin.sample.findings import SolidFinding
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species

_SHOWN = 5
_NEGLIGIBLE = 1e-3
"""Activity below which a record is told only if no other is nearer to forming."""

_ROUTES = 4
_AWKWARD = 10
"""Routes in fractions of a mole are shown only where there is no other."""

_LARGEST_LOG = 700.0


def solids_of(
    species: Sequence[Species],
    amounts: FloatArray,
    log_fugacity: FloatArray,
    faint: BoolArray,
    temperature: FloatArray,
    pressure: FloatArray,
    library: Library,
) -> list[tuple[SolidFinding, ...]]:
    """For each of B samples the likeliest condensed records, each with its routes.

    Parameters
    ----------
    species
        The gas records of the samples.
    amounts
        Of them, (B, n).
    log_fugacity
        ln φ of them, (B, n); 0 in an ideal gas.
    faint
        Which of them are below their uncertainty, (B, n); no route starts from them.
    """
    targets = [
        record
        for record in library.of_elements(elements_of(species))
        if record.phase is not Phase.GAS and not _organic(record)
    ]
    if not targets or not len(amounts):
        return [() for _ in amounts]
    seen = np.where(faint, 0.0, amounts)
    with np.errstate(divide="ignore"):
        logs = np.log(seen / amounts.sum(axis=1, keepdims=True))
    of_gas, of_targets = (Mixture.of(PropertyTable.of(part)) for part in (species, targets))
    potentials = logs + log_fugacity + of_gas.reduced_energies(temperature, pressure)
    energies = of_targets.reduced_energies(temperature, pressure)
    ways = routes_to(targets, energies[0], species, seen.max(axis=0), np.zeros(len(species)))
    names = [record.name for record in species]
    values = [
        _values(routes, names, potentials) - energies[:, [j]] for j, routes in enumerate(ways)
    ]
    return [
        _likeliest(targets, ways, [value[state] for value in values])
        for state in range(len(amounts))
    ]


def _organic(record: Species) -> bool:
    return {"C", "H"} <= {symbol for symbol, _ in record.elements}


def _values(routes: Sequence[Route], names: Sequence[str], potentials: FloatArray) -> FloatArray:
    """Σ x μ/RT of each route, (B, routes); NaN where one of its records is absent."""
    shares = np.zeros((len(routes), len(names)))
    for row, route in enumerate(routes):
        for name, share in route.shares:
            shares[row, names.index(name)] = share
    there = np.isfinite(potentials)
    values = np.where(there, potentials, 0.0) @ shares.T
    lacking = (~there).astype(float) @ (shares != 0.0).astype(float).T
    return np.where(lacking > 0.0, np.nan, values)


def _likeliest(
    targets: Sequence[Species], ways: Sequence[Sequence[Route]], values: Sequence[FloatArray]
) -> tuple[SolidFinding, ...]:
    found = []
    for target, routes, logs in zip(targets, ways, values, strict=True):
        plain = [route.awkwardness < _AWKWARD for route in routes]
        told = [
            (log, route.text)
            for route, log, is_plain in zip(routes, logs.tolist(), plain, strict=True)
            if log == log and (is_plain or not any(plain))
        ]
        told = sorted(told, key=lambda way: -way[0])[:_ROUTES]
        if told:
            pairs = tuple((text, float(np.exp(min(log, _LARGEST_LOG)))) for log, text in told)
            found.append(SolidFinding(target.name, pairs))
    found = sorted(found, key=lambda finding: -finding.activity)[:_SHOWN]
    return tuple(f for place, f in enumerate(found) if place == 0 or f.activity >= _NEGLIGIBLE)
