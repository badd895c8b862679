"""What a user's record draws from measurements: calorimetry, and constants of a reaction."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.jobs.feed_parts import within
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.measured_constants import LawComparison, compare_laws
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.thermo.third_law import (
    Contribution,
    ThirdLawEntropy,
    Transition,
    Vapour,
    third_law_entropy,
)

if TYPE_CHECKING:
    from gibbsmin.jobs.record_schema import CalorimetryTable, ConstantsTable

AGREE = 2.0
"""Standard uncertainties within which two values are said to agree."""


@dataclass(frozen=True)
class Evaluated:
    """A record with what was drawn, sentences on how, and the evaluations themselves."""

    record: Species
    findings: tuple[str, ...] = ()
    third_law: ThirdLawEntropy | None = None
    laws: LawComparison | None = None

    def further(self, record: Species, said: Sequence[str], **evaluations: Any) -> Evaluated:
        """With one evaluation more."""
        return replace(self, record=record, findings=(*self.findings, *said), **evaluations)


def with_calorimetry(given: CalorimetryTable, before: Evaluated, *, known: bool) -> Evaluated:
    """The record with its third-law entropy; one that is ``known`` stays and is compared.

    A vapour's entropy, at its boiling, is brought to 298.15 K by the record's own heat capacity,
    which counts as exact.
    """
    record = before.record
    end, vapour = REFERENCE_TEMPERATURE, None
    if given.vapour is not None:
        end = given.vapour.boiling
        vapour = Vapour(
            given.vapour.pressure,
            given.vapour.critical_temperature,
            given.vapour.critical_pressure,
        )
    residual = Contribution("residual entropy", given.residual_entropy, 0.0)
    with within("calorimetry"):
        law = third_law_entropy(
            given.temperature,
            given.unit * np.array(given.heat_capacity),
            end,
            transitions=[
                Transition(t.temperature, t.enthalpy, t.uncertainty, t.name)
                for t in given.transition
            ],
            relative_uncertainty=given.relative_uncertainty,
            residual=residual if given.residual_entropy else None,
            vapour=vapour,
        )
    parts = list(law.contributions)
    if vapour is not None:
        bare = replace(record, dfH298=0.0, S298=0.0)
        step = -float(PropertyTable.of([bare]).entropy(end)[0])
        parts.append(Contribution(f"{end:g} K to 298.15 K, gas", step, 0.0))
    S298, u_S298 = sum(part.value for part in parts), law.uncertainty
    law = ThirdLawEntropy(REFERENCE_TEMPERATURE, S298, u_S298, tuple(parts))
    said = [
        f"Third law: S(298.15 K) = {S298:.3f} ± {u_S298:.3f} J/(mol K), of",
        *(f"  {part.name}: {part.value:.3f} ± {part.uncertainty:.3f}" for part in parts),
    ]
    if not known:
        return before.further(replace(record, S298=S298, u_S298=u_S298), said, third_law=law)
    difference = S298 - record.S298
    u = float(np.hypot(u_S298, np.nan_to_num(record.u_S298)))
    verdict = "they agree"
    if abs(difference) > AGREE * u:
        verdict = "they DISAGREE" + (
            ": disorder that the crystal keeps at 0 K is stated as residual_entropy"
            if difference < 0.0
            else ""
        )
    said.append(
        f"That is {difference:+.3f} ± {u:.3f} J/(mol K) from the entropy that the record takes, "
        f"{record.S298:.3f}: {verdict}."
    )
    return before.further(record, said, third_law=law)


def with_constants(given: ConstantsTable, before: Evaluated, library: Library) -> Evaluated:
    """The record with what measured constants say of it."""
    record = before.record
    with within("constants"):
        bare = replace(record, dfH298=_or(record.dfH298, 0.0), S298=_or(record.S298, 0.0))
        reaction = Reaction.read(given.reaction, library.overruled([bare]))
        coefficients = {
            _form(substance.forms, record.name): float(number)
            for number, substance in reaction.terms
        }
        laws = compare_laws(
            record, coefficients, given.temperature, given.log10_K, given.uncertainty
        )
    said = [
        f"Second law: ΔfH = {laws.second_law_enthalpy / 1e3:.3f} ± "
        f"{laws.u_second_law_enthalpy / 1e3:.3f} kJ/mol, S = {laws.second_law_entropy:.2f} ± "
        f"{laws.u_second_law_entropy:.2f} J/(mol K)."
    ]
    enthalpy, u_enthalpy = laws.second_law_enthalpy, laws.u_second_law_enthalpy
    entropy, u_entropy = laws.second_law_entropy, laws.u_second_law_entropy
    correlation = laws.second_law_correlation
    if np.isfinite(record.S298):
        said.append(_third_law(laws))
        enthalpy, u_enthalpy = laws.third_law_enthalpy, laws.u_third_law_enthalpy
        entropy, u_entropy = record.S298, record.u_S298
        correlation = laws.third_law_correlation
    if np.isfinite(record.dfH298):
        away = (enthalpy - record.dfH298) / 1e3
        u = float(np.hypot(u_enthalpy, np.nan_to_num(record.u_dfH298))) / 1e3
        verdict = "they agree" if abs(away) <= AGREE * u else "they DISAGREE"
        said.append(
            f"That is {away:+.3f} ± {u:.3f} kJ/mol from the enthalpy that the record states: "
            f"{verdict}."
        )
    else:
        said.append(correlated(record.name, correlation))
    evaluated = replace(
        record,
        dfH298=_or(record.dfH298, enthalpy),
        u_dfH298=_or(record.u_dfH298, u_enthalpy if np.isnan(record.dfH298) else np.nan),
        S298=entropy,
        u_S298=u_entropy,
    )
    return before.further(evaluated, said, laws=laws)


def correlated(name: str, coefficient: float) -> str:
    """How to tell a case that a record's enthalpy and entropy do not err independently."""
    return (
        "Its enthalpy and entropy err together: error bars want a [[correlation]] with between = "
        f'["{name}.enthalpy", "{name}.entropy"] and coefficient = {coefficient:.3f}.'
    )


def _third_law(laws: LawComparison) -> str:
    agree = "agree" if laws.consistent else "DISAGREE"
    return (
        f"Third law: ΔfH = {laws.third_law_enthalpy / 1e3:.3f} ± "
        f"{laws.u_third_law_enthalpy / 1e3:.3f} kJ/mol, drifting by {laws.drift:.3f} ± "
        f"{laws.u_drift:.3f} kJ/mol in 1000 K: the laws {agree}."
    )


def _form(forms: Sequence[Species], name: str) -> Species:
    """The form of a substance that bears the name, else its gas, else its first."""
    named = [form for form in forms if form.name == name]
    return next(iter([*named, *(form for form in forms if form.phase is Phase.GAS), *forms]))


def _or(value: float, otherwise: float) -> float:
    return otherwise if np.isnan(value) else value
