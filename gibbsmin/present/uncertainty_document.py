"""Error bars in an outlet's document: an uncertainty beside each value, and what makes it."""

from __future__ import annotations

from typing import Any

import numpy as np

from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.present.quantities import amount_unit, amounts_in
from gibbsmin.results import Outlet, StageOutlet

_LISTED = 0.01
"""Share of a result's variance, or of its largest change by one step, from which it is listed."""


def add_error_bars(
    entry: dict[str, Any], outlet: Outlet, stage: StageOutlet, found: Sensitivities
) -> None:
    """Put uncertainties beside the values of a stage's entry, and its sensitivities at its end."""
    sizes = dict(zip(found.results, found.uncertainties[0].tolist(), strict=True))
    entry["temperature_K_uncertainty"] = sizes["temperature"]
    entry["pressure_bar_uncertainty"] = sizes["pressure"] / 1e5
    for key, result in (
        ("heat", "heat"),
        ("shaft_work", "shaft work"),
        ("entropy_generation", "entropy generation"),
        ("lost_work", "lost work"),
    ):
        entry[key]["uncertainty"] = sizes[result] / 1e3
    amounts = np.array([sizes[f"amount {record.name}"] for record in stage.records])
    in_unit = amounts_in(amount_unit(outlet.unit, outlet.is_flow), stage.records, amounts)
    for species, amount in zip(entry["species"], in_unit.tolist(), strict=True):
        name = species["name"]
        species["amount_uncertainty"] = amount
        species["mole_fraction_uncertainty"] = sizes.get(f"fraction {name}", float("nan"))
        species["dry_mole_fraction_uncertainty"] = sizes.get(f"dry fraction {name}", float("nan"))
    entry["conversion_uncertainty"] = {
        name: sizes[f"conversion {name}"] for name in entry["conversion"]
    }
    entry["phases_near_onset"] = [
        name for name, near in zip(found.phases, found.near_onset[0].tolist(), strict=True) if near
    ]
    entry["inputs"] = [
        {
            "name": each.name,
            "step": each.step_text,
            "uncertainty_in_steps": float(np.ravel(each.uncertainty)[0]),
            "origin": each.origin,
        }
        for each in found.inputs
    ]
    entry["sensitivities"] = _sensitivities(found)


def _sensitivities(found: Sensitivities) -> list[dict[str, Any]]:
    """Change by one step (SI) and share of the variance, of each result by each input it feels."""
    rows = []
    for r, result in enumerate(found.results):
        changes, parts = found.matrix[0, r], found.contributions[0, r]
        total = parts.sum()
        largest = np.abs(changes).max(initial=0.0)
        for k in np.argsort(-np.abs(changes)).tolist():
            share = float(parts[k] / total) if total > 0.0 else 0.0
            if largest > 0.0 and (abs(changes[k]) > _LISTED * largest or abs(share) > _LISTED):
                rows.append(
                    {
                        "result": result,
                        "input": found.inputs[k].name,
                        "change_per_step": float(changes[k]),
                        "share_of_variance": share,
                    }
                )
    return rows
