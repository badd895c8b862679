"""Checked samples as a document of plain values, for JSON; NaN and infinity become null."""

from __future__ import annotations

import math
from typing import Any

from gibbsmin.results import CAUTIONS
from gibbsmin.sample.findings import (
    Checks,
    Closure,
    Estimate,
    Interval,
    Measurement,
    ReactionFinding,
    SampleCheck,
    SpeciesFinding,
)


def check_document(checks: Checks) -> dict[str, Any]:
    """Everything found; fractions are of 1, K, bar, J/mol and J/(mol K), per mole of dry gas."""
    return {
        "title": checks.title,
        "stage": checks.stage,
        "samples": [_sample(sample) for sample in checks.samples],
        "not_used": [
            {"label": fault.label, "row": fault.row, "reason": fault.sentence}
            for fault in checks.faults
        ],
        "hazards": list(checks.hazards),
        "assumptions": list(checks.assumptions),
        "sources": list(checks.sources),
        "cautions": list(CAUTIONS),
    }


def _sample(sample: SampleCheck) -> dict[str, Any]:
    fit, energetics, judgement = sample.equilibrium, sample.energetics, sample.judgement
    return {
        "label": sample.label,
        "row": sample.row,
        "verdict": judgement.verdict.value,
        "headline": judgement.headline,
        "facts": list(judgement.facts),
        "likely": list(judgement.likely),
        "look_at": list(judgement.look_at),
        "temperature_K": _estimate(sample.temperature),
        "pressure_bar": _estimate(
            Estimate(sample.pressure.value / 1e5, sample.pressure.uncertainty / 1e5)
        ),
        "closure": _closure(sample.closure),
        "measurements": [_measurement(each) for each in sample.measurements],
        "suspects": {
            "names": list(sample.suspects.names),
            "single": sample.suspects.single or None,
            "size": _number(sample.suspects.size),
        },
        "reactions": [_reaction(each) for each in sample.reactions],
        "composition": [_species(each) for each in sample.composition],
        "leakages": [
            {
                "species": each.record,
                "found": _estimate(each.found),
                "below_detection_limit": each.below or None,
                "equilibrium": _number(each.equilibrium),
            }
            for each in sample.leakages
        ],
        "equilibrium": {
            "certified": fit.certified,
            "at_measured_temperature": _closure(fit.at_measured),
            "at_best_temperature": _closure(fit.anywhere),
            "best_temperature_K": _estimate(fit.temperature),
            "best_temperature_limits_K": _interval(fit.temperature_limit),
        },
        "excess_gibbs_energy_J_per_mol": _number(energetics.excess_gibbs_energy),
        "excess_gibbs_energy_over_RT": _number(energetics.excess_over_RT),
        "entropy_generation_as_run_J_per_mol_K": _number(energetics.entropy_as_run),
        "entropy_generation_at_equilibrium_J_per_mol_K": _number(energetics.entropy_limit),
        "solids": [
            {
                "record": solid.record,
                "routes": [
                    {"reaction": text, "activity": _number(activity)}
                    for text, activity in solid.routes
                ],
            }
            for solid in sample.solids
        ],
        "notes": list(sample.notes),
    }


def _measurement(measurement: Measurement) -> dict[str, Any]:
    return {
        "name": measurement.name,
        "stream": measurement.stream.value,
        "basis": measurement.basis,
        "value": _number(measurement.value),
        "uncertainty": _number(measurement.uncertainty),
        "below_detection_limit": measurement.below or None,
        "reconciled": _estimate(measurement.reconciled),
        "redundancy": _number(measurement.redundancy),
        "adjustment": _number(measurement.adjustment),
        "can_be_judged": measurement.can_be_judged,
    }


def _reaction(reaction: ReactionFinding) -> dict[str, Any]:
    return {
        "reaction": reaction.text,
        "ln_Q": _estimate(reaction.log_quotient),
        "ln_K": _estimate(reaction.log_constant),
        "data_uncertainty_K": _number(reaction.data_uncertainty),
        "ln_Q_over_K": _estimate(reaction.log_ratio),
        "affinity_J_per_mol": _estimate(reaction.affinity),
        "equilibrium_temperature_K": _estimate(reaction.equilibrium_temperature),
        "approach_K": _estimate(reaction.approach),
        "approach_limits_K": _interval(reaction.approach_limit),
        "undefined": reaction.undefined or None,
        "side": reaction.side.value,
        "forward": reaction.forward,
        "own_constant": reaction.own_constant,
        "faint": list(reaction.faint),
    }


def _species(species: SpeciesFinding) -> dict[str, Any]:
    return {
        "species": species.record,
        "measured": _number(species.measured),
        "reconciled": _estimate(species.reconciled),
        "wet_fraction": _estimate(species.wet_fraction),
        "equilibrium": _number(species.equilibrium),
        "difference": _number(species.difference),
    }


def _closure(closure: Closure) -> dict[str, Any]:
    return {
        "chi_square": _number(closure.chi_square),
        "degrees_of_freedom": closure.degrees_of_freedom,
        "probability": _number(closure.probability),
    }


def _interval(interval: Interval) -> dict[str, Any]:
    return {
        "lower": _number(interval.lower),
        "upper": _number(interval.upper),
        "confidence": interval.confidence,
    }


def _estimate(estimate: Estimate) -> dict[str, Any]:
    return {"value": _number(estimate.value), "uncertainty": _number(estimate.uncertainty)}


def _number(value: float) -> float | None:
    return value if math.isfinite(value) else None
