"""The columns of a scan's table: what is told of each stage in every state."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.jobs.error_bars import ErrorBars
from gibbsmin.jobs.real_gas import real_gas_columns
from gibbsmin.jobs.scan_layout import StageLayout
from gibbsmin.jobs.step_results import results_of
from gibbsmin.jobs.train import Step
from gibbsmin.minimise import Status
from gibbsmin.thermo.species import Phase

UNITS = ("K", "bar", "kW", "kJ", "kW/K", "kJ/K", "mol", "mol/s")
"""What may follow a comma at the end of a column's name."""

_STATUSES = [status.name.lower() for status in Status]


def columns_of(
    step: Step, layout: StageLayout, states: int, bars: ErrorBars | None, before: str
) -> dict[str, Any]:
    """A stage's columns, with units in their names where they are not plain numbers.

    With error bars, ``u(NAME)`` is the standard uncertainty of the column NAME, in its unit.  All
    names start with ``before``.
    """
    found = step.states.equilibria
    columns: dict[str, Any] = {
        "status": named(found.solution.status, _STATUSES),
        "gap": found.solution.certificate.gap,
    }
    for name, unit, factor, result, values in _values(step, layout):
        label = f"{name}, {unit}" if unit else name
        columns[label] = values / factor if factor != 1.0 else values
        if bars is not None:
            # A record that cannot be in these states is not there for sure.
            size = bars.uncertainties.get(result)
            size = 0.0 * values if size is None else size / factor if factor != 1.0 else size
            columns[f"u({name}), {unit}" if unit else f"u({name})"] = size
    columns["phases"] = _phases(step)
    columns |= real_gas_columns(step.states)
    if bars is not None:
        columns["near an onset"] = bars.near_onset
    return {
        f"{before}{key}": np.broadcast_to(v, (states,)) if isinstance(v, np.ndarray) else v
        for key, v in columns.items()
    }


def reasons_of(steps: Sequence[Step]) -> Any:
    """Why a state has no answer, by the first stage that has none; empty where it has."""
    texts, codes = [""], np.zeros(len(steps[0].states.equilibria.temperature), dtype=np.int64)
    for step in steps:
        status = step.states.equilibria.solution.status
        before = f"{step.stage.name}: " if len(steps) > 1 else ""
        failed = (codes == 0) & (status != Status.CERTIFIED)
        codes[failed] = len(texts) + status[failed]
        texts += [f"{before}{member.sentence}" for member in Status]
    return named(codes, texts)


def named(codes: Any, names: Sequence[str]) -> Any:
    """Names by their numbers, without a text in memory for each state."""
    import pandas as pd

    categories = _categories(tuple(names))
    return pd.Categorical.from_codes(codes, dtype=categories, validate=False)


@lru_cache(maxsize=64)
def _categories(names: tuple[str, ...]) -> Any:
    """The kind of a column of these texts: laying one out takes longer than filling it."""
    import pandas as pd

    return pd.CategoricalDtype(pd.Index(list(names)))


def _values(step: Step, layout: StageLayout) -> Iterator[tuple[str, str, float, str, FloatArray]]:
    """Name, unit, SI per unit, the result's name among the sensitivities, and SI values."""
    results = results_of(step, dry=False)
    unit, moles = ("kW", "mol/s") if step.streams[0].is_flow else ("kJ", "mol")
    for name, of_unit, factor in (
        ("temperature", "K", 1.0),
        ("pressure", "bar", 1e5),
        ("heat", unit, 1e3),
        ("entropy generation", f"{unit}/K", 1e3),
    ):
        yield name, of_unit, factor, name, results[name]
    absent = 0.0 * step.states.equilibria.amounts[:, 0]
    not_fed = np.full(absent.size, np.nan)
    for record in layout.records:
        if record.phase is Phase.GAS:
            result = f"fraction {record.name}"
            yield f"y {record.name}", "", 1.0, result, results.get(result, absent)
        else:
            result = f"amount {record.name}"
            yield result, moles, 1.0, result, results.get(result, absent)
    for result in (f"conversion {record.name}" for record in layout.fed):
        yield result, "", 1.0, result, results.get(result, not_fed)


def _phases(step: Step) -> Any:
    """The solids and liquids that are there, such as "C(graphite) + H2O(l)"; "gas" for none."""
    import pandas as pd

    model, amounts = step.states.model, step.states.equilibria.amounts
    condensed = np.flatnonzero(~model.gas)
    present = amounts[:, condensed] > 0.0
    # Rows are told apart by a number each: most tables hold a handful of kinds.
    kind, numbers = pd.factorize(row_numbers(present))
    firsts = [int((kind == number).argmax()) for number in range(len(numbers))]
    names = [
        " + ".join(model.records[c].name for c in condensed[present[row]]) or "gas"
        for row in firsts
    ]
    unsolved = np.isnan(amounts[:, 0])
    return named(np.where(unsolved, len(names), kind), [*names, ""])


def row_numbers(present: BoolArray) -> IntArray:
    """The same number for equal rows and, beyond 62 columns but for chance, only for these."""
    width = present.shape[1]
    weights: Any = np.left_shift(1, np.arange(width, dtype=np.int64))
    if width > 62:
        weights = np.asarray(
            np.random.default_rng(width).integers(1 << 50, size=width, dtype=np.int64)
        )
    return np.asarray(present @ weights)
