"""What the multipliers of a solved state say about species that are not in it.

At the optimum a record j would be in equilibrium with the outlet at y_j = exp(a_j·λ − g̃_j) as a
gas, or with that activity as a pure phase.  The sum a_j·λ is determined only where a_j is a
combination of the columns of records present; elsewhere nothing is said.  Where more than the
elements is held, records are judged by routes from the actual partial pressures instead.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.routes import Route, routes_to
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.real_gas import RealGas
from gibbsmin.thermo.species import Phase, Species

AUDIT_LENGTH = 10
"""The audit's entries that people are shown and warned of: the most weighty ones."""

_RANK_TOLERANCE = 1e-9
_GAS_THRESHOLD = 1e-4
_PHASE_THRESHOLD = 1.0
_SATURATION_ROUNDING = 1e-9


@dataclass(frozen=True)
class AuditEntry:
    """One record that is not in the outlet.

    Attributes
    ----------
    record : the record
    would_reach : mole fraction in equilibrium with the outlet (gases, else NaN)
    activity : activity against the pure phase, 1 when saturated (solids and liquids, else NaN)
    left_out : whether the user or the service leaves it out by name: it is listed, not warned of
    within_range : whether the temperature is within the record's range
    routes : where routes disagree, each with its own figure, the most favourable first
    """

    record: Species
    would_reach: float
    activity: float
    left_out: bool
    within_range: bool
    routes: tuple[Route, ...] = ()

    @property
    def weight(self) -> float:
        """Value over the threshold of a warning: 1e-4 for gases, saturation for phases."""
        if self.record.phase is Phase.GAS:
            return self.would_reach / _GAS_THRESHOLD
        return self.activity / _PHASE_THRESHOLD

    @property
    def warns(self) -> bool:
        """Whether the record is likely to have been forgotten."""
        return not self.left_out and self.weight > 1.0 + _SATURATION_ROUNDING


@dataclass(frozen=True)
class SolvedState:
    """One solved state: its conditions (K, Pa), amounts (S,) and multipliers (m,)."""

    temperature: float
    pressure: float
    amounts: FloatArray
    multipliers: FloatArray


def log_activities(
    model: StageModel, state: SolvedState, records: Sequence[Species], pressure: float
) -> FloatArray:
    """a_j·λ − g̃_j(T, P) of each record; NaN where the outlet does not determine it."""
    columns = element_counts(records, model.balance.rows)
    energies = _energies(records, state.temperature, pressure)
    potentials = np.nan_to_num(state.multipliers, nan=0.0) @ columns
    return np.where(_determined(model, state, columns), potentials - energies, np.nan)


def element_potentials(model: StageModel, state: SolvedState) -> dict[str, float]:
    """λ of the element and charge rows in RT; NaN where the outlet does not determine it.

    Of an element that is only in a held record, or only in fixed proportion to another, nothing
    but sums are known.
    """
    elements = model.balance.elements
    unit_columns = np.eye(len(model.balance.rows))[:, : len(elements)]
    determined = _determined(model, state, unit_columns)
    values = np.where(determined, state.multipliers[: len(elements)], np.nan)
    return dict(zip(elements, values.tolist(), strict=True))


def routes_at(
    model: StageModel, state: SolvedState, records: Sequence[Species], pressure: float
) -> list[tuple[Route, ...]]:
    """Routes to each record from the partial pressures of a state."""
    present = model.gas & (state.amounts > 0.0)
    gas_total = state.amounts[present].sum()
    logs = np.zeros(state.amounts.shape)
    logs[present] = np.log(state.amounts[present] / gas_total)
    potentials = logs + model.mixture.reduced_energies(state.temperature, state.pressure)
    potentials += model.mixture.log_fugacity(state.temperature, state.pressure, state.amounts)
    energies = _energies(records, state.temperature, pressure)
    return routes_to(records, energies, model.records, state.amounts, potentials, model.reacting)


def audit(
    model: StageModel, state: SolvedState, library: Library, left_out: Sequence[str]
) -> tuple[AuditEntry, ...]:
    """Judge every library record of these elements that is not in the outlet.

    Gases that are candidates are in the outlet by their own equilibrium; candidates that are
    solid or liquid are judged where they are absent.  The most weighty come first.
    """
    taking_part = {
        record.name
        for record, amount in zip(model.records, state.amounts, strict=True)
        if record.phase is Phase.GAS or amount > 0.0
    }
    supplied = elements_of(
        [r for r, amount in zip(model.records, state.amounts, strict=True) if amount > 0.0]
    )
    records = [
        record
        for record in library.of_elements(supplied)
        if record.name not in taking_part and _is_judged(model, record)
    ]
    if not records:
        return ()
    if model.restrained:
        routes = routes_at(model, state, records, state.pressure)
        logs = np.array([r[0].log_activity if r else np.nan for r in routes])
    else:
        routes = [()] * len(records)
        logs = log_activities(model, state, records, state.pressure)
    logs = logs - _log_fugacities(model, state, records)
    with np.errstate(over="ignore"):
        values = np.exp(logs)
    entries = (
        AuditEntry(
            record=record,
            would_reach=value if record.phase is Phase.GAS else np.nan,
            activity=np.nan if record.phase is Phase.GAS else value,
            left_out=record.name in left_out,
            within_range=record.T_low <= state.temperature <= record.T_high,
            routes=ways,
        )
        for record, value, ways in zip(records, values.tolist(), routes, strict=True)
        if not np.isnan(value)
    )
    return tuple(sorted(entries, key=lambda entry: (-entry.weight, entry.record.name)))


def _log_fugacities(
    model: StageModel, state: SolvedState, records: Sequence[Species]
) -> FloatArray:
    """ln φ of each record as a trace in the outlet's gas; 0 for solids, liquids and ideal gases."""
    logs = np.zeros(len(records))
    real = model.mixture.real
    if real is None or not state.amounts[model.gas].any():
        return logs
    traces = [record for record in records if record.phase is Phase.GAS]
    gases = [r for r in model.records if r.phase is Phase.GAS]
    amounts = np.append(state.amounts[model.gas], np.zeros(len(traces)))
    whole = RealGas.of(real.equation, [*gases, *traces])
    found = whole.state(state.temperature, state.pressure, amounts).log_fugacity
    logs[[record.phase is Phase.GAS for record in records]] = found[len(gases) :]
    return logs


def _is_judged(model: StageModel, record: Species) -> bool:
    """Whether the audit looks at a record.

    Where nothing reacts, only other forms of the stage's substances may appear.  Where the stage
    is held short of equilibrium, gases and organic records are held by the same slowness, and
    would be supersaturated beyond sense; phases such as carbon, sulphur and salts are judged.
    """
    if not model.reacts:
        return any(record.formula == other.formula for other in model.records)
    if model.restrained:
        return record.phase is not Phase.GAS and not record.organic
    return True


def _energies(records: Sequence[Species], temperature: float, pressure: float) -> FloatArray:
    return Mixture.of(PropertyTable.of(records)).reduced_energies(temperature, pressure)


def _determined(model: StageModel, state: SolvedState, columns: FloatArray) -> BoolArray:
    """Which columns are combinations of the columns of records present.

    Records outside the model take no part in its holds, so their columns are zero there.
    """
    present = model.balance.matrix[:, state.amounts > 0.0]
    if not present.shape[1]:
        return np.zeros(columns.shape[1], dtype=bool)
    basis, sizes, _ = np.linalg.svd(present, full_matrices=False)
    basis = basis[:, sizes > _RANK_TOLERANCE * sizes[0]]
    outside = columns - basis @ (basis.T @ columns)
    determined: BoolArray = np.all(np.abs(outside) <= _RANK_TOLERANCE, axis=0)
    return determined
