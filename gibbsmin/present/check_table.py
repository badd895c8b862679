"""Checked samples as a table: one row a sample, those that could not be used among them."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from gibbsmin.sample.findings import Checks, Estimate, SampleCheck, SampleFault, Stream

if TYPE_CHECKING:
    import pandas as pd

NOT_USED = "not used"
"""What stands for a verdict where a sample could not be used."""


def check_table(checks: Checks) -> pd.DataFrame:
    """One row a sample, in the order of the rows.

    Columns name their units; ``u`` before a name is its standard uncertainty.
    """
    import pandas as pd

    rows = [(sample.row, _row(sample)) for sample in checks.samples]
    rows += [(fault.row, _fault(fault)) for fault in checks.faults]
    rows.sort(key=lambda pair: pair[0])
    return pd.DataFrame([row for _, row in rows])


def _fault(fault: SampleFault) -> dict[str, Any]:
    return {"label": fault.label, "row": fault.row, "verdict": NOT_USED, "headline": fault.sentence}


def _row(sample: SampleCheck) -> dict[str, Any]:
    row: dict[str, Any] = {
        "label": sample.label,
        "row": sample.row,
        "verdict": sample.judgement.verdict.value,
        "headline": sample.judgement.headline,
        "temperature, K": sample.temperature.value,
        "pressure, bar": sample.pressure.value / 1e5,
        "closure chi-square": sample.closure.chi_square,
        "closure degrees of freedom": sample.closure.degrees_of_freedom,
        "closure p": sample.closure.probability,
        "suspects": " or ".join(sample.suspects.names),
    }
    for reaction in sample.reactions:
        name = reaction.text
        row |= _pair(f"T - T_eq, K: {name}", reaction.approach)
        row[f"u of the data, K: {name}"] = reaction.data_uncertainty
        row[f"T - T_eq lower 95 %, K: {name}"] = reaction.approach_limit.lower
        row[f"T - T_eq upper 95 %, K: {name}"] = reaction.approach_limit.upper
        row |= _pair(f"ln(Q/K): {name}", reaction.log_ratio)
        row[f"side: {name}"] = reaction.side.value
    fit = sample.equilibrium
    row["equilibrium chi-square difference"] = fit.at_measured.chi_square
    row["equilibrium p"] = fit.at_measured.probability
    row |= _pair("temperature of best fit, K", fit.temperature)
    row["temperature of best fit lower 95 %, K"] = fit.temperature_limit.lower
    row["temperature of best fit upper 95 %, K"] = fit.temperature_limit.upper
    row["excess Gibbs energy, J/mol dry gas"] = sample.energetics.excess_gibbs_energy
    row["entropy generated as run, J/K/mol dry gas"] = sample.energetics.entropy_as_run
    row["entropy generated at equilibrium, J/K/mol dry gas"] = sample.energetics.entropy_limit
    for measurement in sample.measurements:
        place = "" if measurement.stream is not Stream.INLET else "inlet "
        row[f"adjustment in u: {place}{measurement.name}"] = measurement.adjustment
    for species in sample.composition:
        row |= _pair(f"reconciled {species.record}, mol/mol dry gas", species.reconciled)
        row[f"equilibrium {species.record}, mol/mol dry gas"] = species.equilibrium
    for solid in sample.solids:
        row[f"activity {solid.record}"] = solid.activity
    return row


def _pair(name: str, estimate: Estimate) -> dict[str, float]:
    return {name: estimate.value, f"u {name}": estimate.uncertainty}
