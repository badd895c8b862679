"""How sure an onset is: the crossing moves with every number that the driving force rests on.

At a crossing D(s, θ) = 0, so that ds = −(∂D/∂θ dθ)/(∂D/∂s), and

    u(s)² = Σ_kl (∂D/∂θ_k) u_k C_kl u_l (∂D/∂θ_l) / (∂D/∂s)²

to first order; the axis's own number is what is looked for and does not count.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.crossings import beside
from gibbsmin.jobs.error_bars import error_bars
from gibbsmin.jobs.onset import Onset, without_phase
from gibbsmin.jobs.search import driving_force, path_of, stage_named
from gibbsmin.jobs.train import run_train

_STEP = 1e-5
"""Share of the axis for the slope along it."""


def onset_uncertainty(case: Case, found: Onset) -> FloatArray:
    """Standard uncertainty of each crossing (Z,), in the axis's unit; NaN where there is none."""
    if found.row.size == 0:
        return np.zeros(0)
    stage = stage_named(case, found.stage, "onset.stage")
    path = path_of(case, stage, case.library)
    kept_out = without_phase(case, stage, found.phase)
    own = _own_input(path.axis)
    stated = tuple(each for each in case.uncertainties if each.name != own)
    kept_out = replace(kept_out, uncertainties=stated)
    axes, values = [path.axis], [found.position]
    if path.second is not None:
        axes.append(path.second)
        values.append(path.second.values[found.row])
    varied = applied(kept_out, axes, values, path.library)
    steps = list(run_train(varied, path.library))
    bars = error_bars(varied, steps, path.library)
    chosen = next(
        bar
        for bar, step in zip(bars, steps, strict=True)
        if step.stage.key == stage.key and not step.joins
    )
    of_force = chosen.uncertainties[f"driving force {found.phase}"]
    below, above = beside(path.grid, found.position, _STEP)
    low, high = (
        driving_force(path.step(kept_out, place, found.row), found.phase)
        for place in (below, above)
    )
    slope = (high - low) / (above - below)
    with np.errstate(divide="ignore", invalid="ignore"):
        in_SI = np.where(slope == 0.0, np.nan, of_force / np.abs(slope))
    (a, b), (x, y) = path.axis.values[[0, -1]], path.axis.shown[[0, -1]]
    return np.asarray(in_SI * abs((y - x) / (b - a)))


def _own_input(axis: Axis) -> str:
    """The input that an axis varies: a number of the case, or a whole stream by a ratio."""
    return f"feed.{axis.scale}" if axis.scale else axis.name
