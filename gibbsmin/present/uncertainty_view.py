"""Error bars and sensitivities on the terminal."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from rich.console import Group, RenderableType
from rich.text import Text

from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.present.layout import heading, sentences, table
from gibbsmin.present.quantities import fraction, heat_unit, significant
from gibbsmin.results import Outlet, StageOutlet

_SHOWN_FROM = 1e-6
_MOST = 0.9
_MAIN_SPECIES = 4
_ROUNDING = 1e-12
_COUNTS = 0.01
"""Share of a main result's variance from which a record's number is listed."""

ASSUMPTIONS = (
    "Uncertainties are standard ones (one sigma), to first order.",
    "Numbers of the case without a stated uncertainty are taken as exact; enthalpies and entropies "
    "without a published one have a stated default of their class of record.",
    "Different numbers are taken as independent unless the case states a correlation, though "
    "enthalpies from one network of reactions are not.",
)


def uncertainty_view(outlet: Outlet, error_bars: Sequence[Sensitivities]) -> RenderableType:
    """How sure each result is and what makes it unsure, stage by stage."""
    parts: list[RenderableType] = []
    for stage, found in zip(outlet.stages, error_bars, strict=True):
        parts.append(heading(f"How sure: {stage.name}"))
        if np.isnan(found.matrix).all():
            parts += [Text("  No derivatives here, so no error bars: " + _WHY), Text("")]
            continue
        parts.append(_bars(outlet, stage, found))
        parts += [heading("What a step of each number changes"), _steps(outlet, stage, found)]
        parts += sentences("Near an onset", near_onsets(found))
    parts += sentences("Assumptions", ASSUMPTIONS)
    return Group(*parts)


_WHY = (
    "the state is not certified, has no gas, stands at the onset of a phase, or takes up heat at "
    "constant temperature."
)


def near_onsets(found: Sensitivities) -> list[str]:
    """Sentences on phases that two standard uncertainties may make appear or vanish."""
    return [
        f"{name} is {'there' if amount > 0.0 else 'absent'}, but within two standard "
        f"uncertainties of {'vanishing' if amount > 0.0 else 'forming'}: the error bars do not "
        "hold beyond its onset; --monte-carlo 20000 gives the spread there and how likely it is."
        for name, amount, near in zip(
            found.phases,
            found.phase_amounts[0].tolist(),
            found.near_onset[0].tolist(),
            strict=True,
        )
        if near
    ]


def _bars(outlet: Outlet, stage: StageOutlet, found: Sensitivities) -> RenderableType:
    sizes = dict(zip(found.results, found.uncertainties[0].tolist(), strict=True))
    rows = []
    for result, value, scale, unit in shown_values(outlet, stage):
        size = sizes[result]
        if not size > 0.0:
            continue
        shown = fraction(value) if unit == "fraction" else f"{significant(value)} {unit}".rstrip()
        bar = fraction_bar(value, size) if unit == "fraction" else significant(size / scale, 2)
        rows.append((result, shown, f"± {bar}", _makers(found, result)))
    return table(
        ("result", "value", "uncertainty", "most of it from"),
        rows,
        words=("result", "most of it from"),
    )


def shown_values(outlet: Outlet, stage: StageOutlet) -> Iterator[tuple[str, float, float, str]]:
    """Result, value in its unit, SI per unit, and the unit."""
    energy = heat_unit(outlet.is_flow)
    yield "temperature", stage.temperature, 1.0, "K"
    yield "pressure", stage.pressure / 1e5, 1e5, "bar"
    yield "heat", stage.heat / 1e3, 1e3, energy
    yield "shaft work", stage.shaft_work / 1e3, 1e3, energy
    yield "entropy generation", stage.entropy.value / 1e3, 1e3, f"{energy}/K"
    yield "lost work", stage.entropy.lost_work / 1e3, 1e3, energy
    for label, fractions in (
        ("fraction", stage.mole_fractions),
        ("dry fraction", stage.dry_mole_fractions),
    ):
        for column in np.argsort(-np.nan_to_num(fractions)).tolist():
            if fractions[column] >= _SHOWN_FROM:
                name = stage.records[column].name
                yield f"{label} {name}", float(fractions[column]), 1.0, "fraction"
    for name, value in stage.conversion.items():
        if abs(value) > _SHOWN_FROM:
            yield f"conversion {name}", value, 1.0, "fraction"


def fraction_bar(value: float, size: float) -> str:
    """An uncertainty in the unit in which the fraction is shown."""
    if abs(value) >= 1e-4:
        return f"{significant(100 * size, 2)} %"
    return f"{significant(1e6 * size, 2)} ppm"


def _makers(found: Sensitivities, result: str) -> str:
    """The inputs that make most of a result's variance, the largest first."""
    parts = found.contributions[0, found.results.index(result)]
    total = parts.sum()
    named, reached = [], 0.0
    for place in np.argsort(-parts).tolist()[:3]:
        named.append(f"{found.inputs[place].name} {100 * parts[place] / total:.0f} %")
        reached += parts[place] / total
        if reached > _MOST:
            break
    return ", ".join(named)


def _steps(outlet: Outlet, stage: StageOutlet, found: Sensitivities) -> RenderableType:
    """Change of the main results by a step of each number that matters."""
    fractions = np.nan_to_num(stage.dry_mole_fractions)
    main = [
        f"dry fraction {stage.records[c].name}"
        for c in np.argsort(-fractions).tolist()[:_MAIN_SPECIES]
        if fractions[c] > 0.0
    ]
    by_unit = {r: (scale, unit) for r, _, scale, unit in shown_values(outlet, stage)}
    results = [
        name
        for name in ("temperature", "heat", *main)
        # A number that is given follows one input alone, itself.
        if np.count_nonzero(found.matrix[0, found.results.index(name)]) > 1
    ]
    places = [found.results.index(name) for name in results]
    share = found.contributions[0, places]
    with np.errstate(invalid="ignore", divide="ignore"):
        share = np.nan_to_num(share / share.sum(axis=1, keepdims=True)).max(axis=0, initial=0.0)
    largest = np.abs(found.matrix[0, places]).max(axis=1, initial=0.0)
    rows = []
    for k, each in enumerate(found.inputs):
        of_case = each.name.startswith(("feed.", "outlet.", "stage."))
        changes = found.matrix[0, places, k]
        changes = np.where(np.abs(changes) > _ROUNDING * largest, changes, 0.0)
        if not changes.any() or not (of_case or share[k] > _COUNTS):
            continue
        cells = []
        for name, change in zip(results, changes.tolist(), strict=True):
            scale, unit = by_unit[name]
            size = 100 * change if unit == "fraction" else change / scale
            cells.append(f"{'+' if size > 0.0 else ''}{significant(size, 2)}")
        rows.append((each.name, each.step_text, *cells))
    headers = [
        f"{name.removeprefix('dry fraction ')} dry, %"
        if by_unit[name][1] == "fraction"
        else f"{name}, {by_unit[name][1]}"
        for name in results
    ]
    return table(("number", "by", *headers), rows, words=("number",))
