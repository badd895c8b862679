"""Turns judged reactions into findings: where each stands, and what leaves a figure undefined."""

from __future__ import annotations

import numpy as np
from scipy.special import ndtri

from gibbsmin.arrays import BoolArray
from gibbsmin.sample.batch import Batch
from gibbsmin.sample.findings import Estimate, Interval, ReactionFinding, Side
from gibbsmin.sample.judged import Judged
from gibbsmin.sample.reactions import HIGHEST, LOWEST
from gibbsmin.sample.thresholds import Z_95, Thresholds

_FLAT = "its enthalpy is next to zero, so that Q tells no temperature"
_NEVER = f"K and Q are equal at no temperature from {LOWEST:.0f} to {HIGHEST:.0f} K"
_ZERO = "a reacting record is zero in the reconciled sample"
_OPEN = "the sample does not determine all reacting records"


def reaction_findings(batch: Batch, thresholds: Thresholds) -> list[tuple[ReactionFinding, ...]]:
    """The judged reactions of each sample."""
    per_reaction = [_findings(batch, judged, thresholds) for judged in batch.reactions]
    states = len(batch.readings.temperature)
    return [tuple(found[state] for found in per_reaction) for state in range(states)]


def _findings(batch: Batch, judged: Judged, thresholds: Thresholds) -> list[ReactionFinding]:
    arrays = (
        judged.log_Q,
        judged.u_log_Q,
        judged.log_K,
        judged.log_ratio,
        judged.u_log_ratio,
        judged.affinity,
        judged.u_affinity,
        judged.temperature,
        judged.u_temperature,
        judged.approach,
        judged.u_approach,
        judged.lower,
        judged.upper,
        judged.forward,
        judged.u_log_K,
        judged.data_uncertainty,
    )
    sides = _sides(judged, thresholds)
    reasons = _reasons(judged)
    names = [record.name for record in batch.plan.species]
    faint = [
        tuple(name for name, is_faint in zip(names, row, strict=True) if is_faint)
        for row in judged.faint.tolist()
    ]
    reaction = judged.reaction
    rows = zip(*(array.tolist() for array in arrays), strict=True)
    return [
        ReactionFinding(
            text=reaction.text,
            coefficients=reaction.coefficients,
            log_quotient=Estimate(row[0], row[1]),
            log_constant=Estimate(row[2], row[14]),
            data_uncertainty=row[15],
            log_ratio=Estimate(row[3], row[4]),
            affinity=Estimate(row[5], row[6]),
            equilibrium_temperature=Estimate(row[7], row[8]),
            approach=Estimate(row[9], row[10]),
            approach_limit=Interval(row[11], row[12], 0.95),
            undefined=reason,
            side=side,
            forward=row[13],
            own_constant=reaction.own_constant,
            faint=own,
        )
        for row, reason, side, own in zip(rows, reasons, sides, faint, strict=True)
    ]


def _sides(judged: Judged, thresholds: Thresholds) -> list[Side]:
    any_faint = np.asarray(judged.faint.any(axis=1))
    critical = float(ndtri(1.0 - 0.5 * thresholds.equilibrium))
    with np.errstate(invalid="ignore", divide="ignore"):
        z = judged.log_ratio / judged.u_log_ratio
    above = np.where(any_faint, judged.ratio_lower > 0.0, z > critical)
    below = np.where(any_faint, judged.ratio_upper < 0.0, z < -critical)
    way = np.where(judged.forward == 0, 1, judged.forward)
    short = (below & (way > 0)) | (above & (way < 0))
    beyond = (above & (way > 0)) | (below & (way < 0))
    close = _close(judged, any_faint, thresholds)
    return [
        Side.SHORT if a else Side.BEYOND if b else Side.AT if c else Side.UNKNOWN
        for a, b, c in zip(short.tolist(), beyond.tolist(), close.tolist(), strict=True)
    ]


def _close(judged: Judged, any_faint: BoolArray, thresholds: Thresholds) -> BoolArray:
    """Whether the data could have told a departure of the resolution asked for."""
    with np.errstate(invalid="ignore"):
        sharp = Z_95 * judged.u_approach <= thresholds.resolution
        sharp |= judged.flat & np.isfinite(judged.u_log_ratio)
    nearest = np.minimum(np.abs(judged.lower), np.abs(judged.upper))
    return np.where(any_faint, nearest <= thresholds.resolution, sharp)


def _reasons(judged: Judged) -> list[str]:
    rows = zip(
        judged.temperature.tolist(), judged.log_Q.tolist(), judged.flat.tolist(), strict=True
    )
    return [
        ""
        if T == T
        else _OPEN
        if log_Q != log_Q
        else _ZERO
        if np.isinf(log_Q)
        else _FLAT
        if flat
        else _NEVER
        for T, log_Q, flat in rows
    ]
