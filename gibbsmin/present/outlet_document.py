"""The outlet as a document of plain values, for JSON; NaN and infinity become null."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import asdict
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.monte_carlo import MonteCarlo
from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.present.monte_carlo_view import spread_document
from gibbsmin.present.quantities import amount_unit, amounts_in, heat_unit, molar_unit
from gibbsmin.present.uncertainty_document import add_error_bars
from gibbsmin.reactor.audit import AUDIT_LENGTH, AuditEntry
from gibbsmin.results import CAUTIONS, Outlet, StageOutlet
from gibbsmin.units import to_unit


def outlet_document(
    outlet: Outlet,
    error_bars: Sequence[Sensitivities] = (),
    spread: MonteCarlo | None = None,
) -> dict[str, Any]:
    """The whole outlet; one entry of ``stages`` each stage, in order.

    Amounts are in ``unit``; heat is positive into the stage, in kW or kJ; chemical potentials
    of the elements are in RT.  Error bars, where they are given, stand beside the values, and the
    spread over random draws at the end of each stage.
    """
    stages = [_stage(outlet, stage) for stage in outlet.stages]
    if error_bars:
        for entry, stage, found in zip(stages, outlet.stages, error_bars, strict=True):
            add_error_bars(entry, outlet, stage, found)
    if spread is not None:
        for entry, of_stage in zip(stages, spread.stages, strict=True):
            entry["monte_carlo"] = spread_document(of_stage, spread.draws, spread.seed)
    document = {
        "title": outlet.title,
        "status": "certified" if outlet.certified else "not certified",
        "stages": stages,
        "total": _total(outlet),
        "cautions": list(CAUTIONS),
    }
    plain: dict[str, Any] = _without_nan(document)
    return plain


def _total(outlet: Outlet) -> dict[str, Any]:
    energy = heat_unit(outlet.is_flow)
    return {
        "conversion": dict(outlet.conversion),
        "heat": {"value": outlet.heat / 1e3, "unit": energy},
        "entropy_generation": {"value": outlet.entropy_generation / 1e3, "unit": f"{energy}/K"},
        "lost_work": {"value": outlet.lost_work / 1e3, "unit": energy},
    }


def _stage(outlet: Outlet, stage: StageOutlet) -> dict[str, Any]:
    unit = amount_unit(outlet.unit, outlet.is_flow)
    energy = heat_unit(outlet.is_flow)
    return {
        "name": stage.name,
        "status": stage.status.name.lower(),
        "method": stage.method.name.lower(),
        "temperature_K": stage.temperature,
        "pressure_bar": stage.pressure / 1e5,
        "certificate": asdict(stage.certificate),
        "unit": unit,
        "species": _species(unit, stage),
        "removed": dict(zip(stage.removed, _removed(unit, stage).tolist(), strict=True)),
        "conversion": dict(stage.conversion),
        "heat": {"value": stage.heat / 1e3, "unit": energy},
        "shaft_work": {"value": stage.shaft_work / 1e3, "unit": energy},
        "entropy_generation": {
            "value": stage.entropy.value / 1e3,
            "unit": f"{energy}/K",
            "boundary_temperature_K": stage.entropy.boundary_temperature,
        },
        "lost_work": {
            "value": stage.entropy.lost_work / 1e3,
            "unit": energy,
            "surroundings_temperature_K": stage.entropy.surroundings_temperature,
        },
        "element_chemical_potentials": dict(stage.element_potentials),
        "activities": [
            {"name": a.label, "record": a.record, "value": a.value, "unit": a.unit}
            for a in stage.activities
        ],
        "figures": [asdict(figure) for figure in stage.figures],
        "extents": [
            {"reaction": extent.reaction, "value": to_unit(extent.value, _moles(outlet))}
            for extent in stage.extents
        ],
        "extent_unit": _moles(outlet),
        "yields": [asdict(found) for found in stage.yields],
        "real_gas": _real_gas(stage),
        "warnings": list(stage.warnings),
        "notes": list(stage.notes),
        "hazards": list(stage.hazards),
        "audit": [_audit_entry(entry) for entry in stage.audit[:AUDIT_LENGTH]],
    }


def _species(unit: str, stage: StageOutlet) -> list[dict[str, Any]]:
    columns = zip(
        stage.records,
        amounts_in(unit, stage.records, stage.amounts).tolist(),
        stage.mole_fractions.tolist(),
        stage.dry_mole_fractions.tolist(),
        strict=True,
    )
    return [
        {
            "name": record.name,
            "phase": record.phase.value,
            "amount": amount,
            "mole_fraction": wet,
            "dry_mole_fraction": dry,
        }
        for record, amount, wet, dry in columns
    ]


def _real_gas(stage: StageOutlet) -> dict[str, Any] | None:
    """What the equation of state says; nothing for an ideal gas.  Comparisons are in SI units."""
    gas = stage.real_gas
    if gas is None:
        return None
    coefficients = zip(stage.records, gas.fugacity_coefficients.tolist(), strict=True)
    return {
        "equation": gas.equation,
        "compressibility": gas.compressibility,
        "fugacity_coefficients": {r.name: c for r, c in coefficients if not math.isnan(c)},
        "settled": gas.settled,
        "stable": gas.stable,
        "second_phase": dict(gas.second_phase),
        "comparison": [asdict(each) for each in gas.comparison],
    }


def _removed(unit: str, stage: StageOutlet) -> FloatArray:
    records = [record for record in stage.records if record.name in stage.removed]
    return amounts_in(unit, records, np.array([stage.removed[r.name] for r in records]))


def _moles(outlet: Outlet) -> str:
    return molar_unit(outlet.unit, outlet.is_flow)


def _audit_entry(entry: AuditEntry) -> dict[str, Any]:
    value = (
        {"activity": entry.activity}
        if math.isnan(entry.would_reach)
        else {"would_reach": entry.would_reach}
    )
    return {
        "name": entry.record.name,
        **value,
        "left_out": entry.left_out,
        "within_range": entry.within_range,
        "routes": [{"reaction": route.text, "value": route.activity} for route in entry.routes],
    }


def _without_nan(value: Any) -> Any:
    if isinstance(value, dict):
        return {key: _without_nan(item) for key, item in value.items()}
    if isinstance(value, list):
        return [_without_nan(item) for item in value]
    if isinstance(value, float) and not math.isfinite(value):
        return None
    return value
