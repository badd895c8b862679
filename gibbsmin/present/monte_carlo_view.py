"""The spread of a case's results over random draws: on the terminal, as a document, as a table."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from rich.console import Group, RenderableType

from gibbsmin.jobs.monte_carlo import QUANTILES, MonteCarlo, Spread
from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.present.layout import heading, sentences, table
from gibbsmin.present.quantities import fraction, significant
from gibbsmin.present.uncertainty_view import fraction_bar, shown_values
from gibbsmin.results import Outlet, StageOutlet

if TYPE_CHECKING:
    import pandas as pd

_ROUNDING = 1e-13
"""Of a value: what a spread must exceed to be shown, else it is round-off."""

_HEADERS = ("result", "value", "first order", "Monte Carlo", "2.5 %", "median", "97.5 %")


def monte_carlo_view(
    outlet: Outlet, error_bars: Sequence[Sensitivities], found: MonteCarlo
) -> RenderableType:
    """Each result's spread beside its first-order error bar, stage by stage."""
    parts: list[RenderableType] = []
    for stage, bars, spread in zip(outlet.stages, error_bars, found.stages, strict=True):
        parts += [heading(f"Spread over random draws: {stage.name}")]
        parts += [_spreads(outlet, stage, bars, spread)]
        parts += sentences("Phases", phase_sentences(spread))
    parts += sentences("Draws", draw_sentences(found))
    return Group(*parts)


def phase_sentences(spread: Spread) -> list[str]:
    """How likely each solid or liquid is, with what so many draws leave open."""
    return [
        f"{name} is there in {100 * share:.1f} % of the draws "
        f"(± {100 * np.sqrt(share * (1.0 - share) / spread.solved):.1g} %)."
        if 0.0 < share < 1.0
        else f"{name} is there in {'all' if share == 1.0 else 'none'} of the draws."
        for name, share in zip(spread.phases, spread.probabilities.tolist(), strict=True)
        if spread.solved
    ]


def draw_sentences(found: MonteCarlo) -> list[str]:
    """What was drawn, and what of it came to nothing."""
    lines = [
        f"{found.draws} draws from seed {found.seed}: every number that is not exact is drawn from "
        "a normal distribution of its standard uncertainty, with its stated correlations."
    ]
    lines += [
        f"{spread.stage}: {found.draws - spread.solved} of the draws have no certified answer and "
        "are left out."
        for spread in found.stages
        if spread.solved < found.draws
    ]
    if found.cut_off:
        lines.append(f"{found.cut_off} amounts were drawn below zero and taken as zero.")
    return lines


def _spreads(
    outlet: Outlet, stage: StageOutlet, bars: Sensitivities, spread: Spread
) -> RenderableType:
    first_order = dict(zip(bars.results, bars.uncertainties[0].tolist(), strict=True))
    rows = []
    for result, value, scale, unit in shown_values(outlet, stage):
        deviation = spread.deviation(result) / scale
        if not deviation > _ROUNDING * abs(value):
            continue

        def text(number: float, unit: str = unit) -> str:
            return fraction(number) if unit == "fraction" else significant(number)

        def bar(size: float, value: float = value, unit: str = unit) -> str:
            if np.isnan(size):
                return "–"
            shown = fraction_bar(value, size) if unit == "fraction" else significant(size, 2)
            return f"± {shown}"

        quantiles = spread.quantiles[:, spread.results.index(result)] / scale
        shown = text(value) if unit == "fraction" else f"{text(value)} {unit}".rstrip()
        bars_of = (bar(first_order[result] / scale), bar(deviation))
        rows.append((result, shown, *bars_of, *(text(number) for number in quantiles.tolist())))
    return table(_HEADERS, rows, words=("result",))


def spread_document(spread: Spread, draws: int, seed: int) -> dict[str, Any]:
    """One stage's spread as plain values, in SI."""
    return {
        "draws": draws,
        "seed": seed,
        "solved": spread.solved,
        "results": [
            {
                "result": name,
                "mean": float(spread.means[k]),
                "standard_deviation": float(spread.deviations[k]),
                "quantiles": {
                    str(level): float(values[k])
                    for level, values in zip(QUANTILES, spread.quantiles, strict=True)
                },
            }
            for k, name in enumerate(spread.results)
        ],
        "phase_probability": dict(zip(spread.phases, spread.probabilities.tolist(), strict=True)),
    }


def spread_table(found: MonteCarlo) -> pd.DataFrame:
    """One row a result, in SI, and one a phase, whose mean is its probability."""
    import pandas as pd

    levels = [f"quantile_{level}" for level in QUANTILES]
    rows: list[tuple[Any, ...]] = []
    for spread in found.stages:
        columns = zip(spread.means, spread.deviations, *spread.quantiles, strict=True)
        rows += [
            (spread.stage, name, *map(float, values))
            for name, values in zip(spread.results, columns, strict=True)
        ]
        rows += [
            (spread.stage, f"probability of {name}", share, *[float("nan")] * (1 + len(levels)))
            for name, share in zip(spread.phases, spread.probabilities.tolist(), strict=True)
        ]
    return pd.DataFrame(
        rows, columns=["stage", "result", "mean_SI", "standard_deviation_SI", *levels]
    )
