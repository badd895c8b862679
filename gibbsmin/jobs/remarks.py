"""What a result must say beside its figures: their limits, and the outlet's hazards."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise import Status
from gibbsmin.reactor.audit import AUDIT_LENGTH, AuditEntry, SolvedState
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.thermo.hazards import hazards
from gibbsmin.thermo.species import OWN, Phase, Species

_RADICALS = ("H", "O", "OH", "N", "S", "F", "Cl", "Br", "I")
"""Fragments that a flame makes and a cold gas does not hold (common practice)."""

_MATTERS = 1e-6
"""A record matters from this share of the outlet's amounts."""


def warnings(
    model: StageModel,
    feeds: Sequence[Stream],
    state: SolvedState,
    entries: Sequence[AuditEntry],
    gas_warnings: Iterable[str],
    entropy_remark: str,
) -> tuple[str, ...]:
    """Sentences on what limits the figures, the gravest first."""
    sentences = [
        *_audit_warnings(entries[:AUDIT_LENGTH]),
        *_range_warnings(model, feeds, state),
        *_unchanged_warnings(model, state),
        *(warning for feed in feeds for warning in feed.warnings),
    ]
    sentences += gas_warnings
    if entropy_remark:
        sentences.append(f"Entropy: {entropy_remark}.")
    return tuple(sentences)


def uncertified_warning(status: Status) -> str:
    """Why there are no figures."""
    return f"Not certified, so no figure is given: {status.sentence}"


def own_records_notes(records: Iterable[Species]) -> tuple[str, ...]:
    """Which of the records are the user's own, and from which files."""
    own = [record for record in records if record.source_enthalpy.startswith(OWN)]
    files = dict.fromkeys(
        record.source_enthalpy.removeprefix(OWN).removesuffix(f", {record.name}") for record in own
    )
    names = ", ".join(record.name for record in own)
    return (f"Records of the user's own ({', '.join(files)}): {names}.",) if own else ()


def outlet_hazards(model: StageModel, amounts: FloatArray) -> tuple[str, ...]:
    """The toxic and flammable species of the outlet by name."""
    return hazards_of(record.formula for record in _mattering(model.records, amounts))


def hazards_of(formulas: Iterable[str]) -> tuple[str, ...]:
    """Which of these substances are toxic, and which flammable."""
    known = hazards()
    present = [formula for formula in dict.fromkeys(formulas) if formula in known]
    toxic = [formula for formula in present if known[formula].toxic]
    flammable = [formula for formula in present if known[formula].flammable]
    named = (("Toxic", toxic), ("Flammable", flammable))
    return tuple(f"{kind}: {', '.join(formulas)}." for kind, formulas in named if formulas)


def _audit_warnings(entries: Sequence[AuditEntry]) -> Iterator[str]:
    for entry in entries:
        if not entry.warns:
            continue
        beyond = "" if entry.within_range else " (beyond the range of its heat capacity)"
        if entry.record.phase is Phase.GAS:
            yield (
                f"{entry.record.name} is not considered, yet would reach a mole fraction of "
                f"{entry.would_reach:.3g} in equilibrium with this outlet{beyond}."
            )
        else:
            yield (
                f"{entry.record.name} is not considered, yet its activity is "
                f"{entry.activity:.3g}: it would form{beyond}."
            )


def _unchanged_warnings(model: StageModel, state: SolvedState) -> Iterator[str]:
    """Where nothing reacts: what passes as it came, and in a plant would not."""
    if model.reacts:
        return
    gases = [r for r in _mattering(model.records, state.amounts) if r.phase is Phase.GAS]
    radicals = [record.name for record in gases if record.formula in _RADICALS]
    if radicals:
        yield (
            "Nothing reacts here, so that fragments which recombine in a cooling gas stay in it "
            f"({', '.join(radicals)}): leave them out of the stage before, or let this one react."
        )
    lone = {r.formula for r in model.records if r.phase is not Phase.GAS and r.atoms == 1}
    for symbol in sorted(lone):
        others = [r.name for r in gases if r.atoms > 1 and [e for e, _ in r.elements] == [symbol]]
        if others:
            yield (
                f"Solid or liquid {symbol} forms from lone atoms alone where nothing reacts, not "
                f"from {', '.join(others)}: let the stage react"
                + (', by service = "sulphur condenser".' if symbol == "S" else ".")
            )


def _range_warnings(
    model: StageModel, feeds: Sequence[Stream], state: SolvedState
) -> Iterator[str]:
    used = [(r, state.temperature) for r in _mattering(model.records, state.amounts)]
    for feed in feeds:
        amounts = np.array([first(feed.amounts.get(r.name, 0.0)) for r in model.feed_records])
        T = first(feed.temperature)
        used += [(record, T) for record in _mattering(model.feed_records, amounts)]
    for record, temperature in dict.fromkeys(used):
        if not record.T_low <= temperature <= record.T_high:
            yield (
                f"{record.name} is used at {temperature:.2f} K, beyond the range of its heat "
                f"capacity ({record.T_low:g}–{record.T_high:g} K), which is continued as constant."
            )


def _mattering(records: Sequence[Species], amounts: FloatArray) -> list[Species]:
    least = _MATTERS * amounts.sum()
    return [r for r, amount in zip(records, amounts.tolist(), strict=True) if amount > least]
