"""The outlet on the terminal: figures in tables, then what limits them in sentences."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from gibbsmin.minimise import Status
from gibbsmin.present.quantities import (
    amount_unit,
    amounts_in,
    fraction,
    heat,
    pressure,
    significant,
    temperature,
)
from gibbsmin.results import Outlet, StageOutlet
from gibbsmin.thermo.species import Phase

AUDIT_LENGTH = 10
"""The audit's entries that are shown: the most weighty ones."""

_SHOWN_FROM = 1e-9


def outlet_view(outlet: Outlet) -> RenderableType:
    """Everything known of an outlet, stage by stage."""
    parts: list[RenderableType] = [Text(outlet.title, style="bold")]
    for stage in outlet.stages:
        parts += [_heading(stage), Padding(_composition(outlet, stage), (1, 0, 1, 2))]
        parts.append(Padding(_figures(outlet, stage), (0, 0, 1, 2)))
        if stage.audit:
            parts += [
                Text("Not in the outlet, yet nearest to it", style="bold"),
                Padding(_audit(stage), (0, 0, 1, 2)),
            ]
        parts += _sentences("Warnings", stage.warnings)
        parts += _sentences("Cautions", stage.cautions)
    return Group(*parts)


def _heading(stage: StageOutlet) -> Text:
    certified = stage.status is Status.CERTIFIED
    return Text.assemble(
        f"{stage.name}: {temperature(stage.temperature)}, {pressure(stage.pressure)}, ideal gas, ",
        ("certified" if certified else "NOT CERTIFIED", "" if certified else "bold"),
    )


def _composition(outlet: Outlet, stage: StageOutlet) -> Table:
    """Gases from 1 ppb and every solid or liquid that is there, the largest first."""
    unit = amount_unit(outlet.unit, outlet.is_flow)
    amounts = amounts_in(unit, stage.records, stage.amounts)
    wet, dry = stage.mole_fractions, stage.dry_mole_fractions
    table = Table(box=None, pad_edge=False, show_edge=False, padding=(0, 3, 0, 0))
    table.add_column("species")
    for header in (unit, "wet gas", "dry gas"):
        table.add_column(header, justify="right")
    hidden = 0
    for phase in Phase:
        columns = [i for i, record in enumerate(stage.records) if record.phase is phase]
        for i in sorted(columns, key=lambda i: -np.nan_to_num(stage.amounts[i])):
            absent = stage.amounts[i] == 0.0 if phase is not Phase.GAS else wet[i] < _SHOWN_FROM
            if absent:
                hidden += 1
                continue
            gas = phase is Phase.GAS
            table.add_row(
                stage.records[i].name,
                significant(float(amounts[i])),
                fraction(float(wet[i])) if gas else phase.value,
                fraction(float(dry[i])) if gas else "",
            )
    if hidden:
        table.caption = f"and {hidden} considered records that are absent or below 1 ppb"
        table.caption_justify = "left"
    return table


def _figures(outlet: Outlet, stage: StageOutlet) -> Table:
    table = Table(box=None, pad_edge=False, show_edge=False, show_header=False)
    table.add_column(style="bold", no_wrap=True)
    table.add_column(overflow="fold")
    for label, text in _lines(outlet, stage):
        table.add_row(label, text)
    return table


def _lines(outlet: Outlet, stage: StageOutlet) -> Iterator[tuple[str, str]]:
    converted = [
        f"{name} {100 * value:.2f} %" for name, value in stage.conversion.items() if not value < 0
    ]
    formed = [
        f"{name} +{-100 * value:.2f} %" for name, value in stage.conversion.items() if value < 0
    ]
    if converted:
        yield "conversion", ", ".join(converted)
    if formed:
        yield "formation", ", ".join(formed) + " of what was fed"
    added = "removed" if stage.heat < 0 else "added"
    yield f"heat {added}", heat(abs(stage.heat), outlet.is_flow)
    entropy = stage.entropy
    if not np.isnan(entropy.value):
        yield (
            "entropy generated",
            f"{heat(entropy.value, outlet.is_flow)}/K "
            f"(boundary at {entropy.boundary_temperature:.2f} K)",
        )
        yield (
            "lost work",
            f"{heat(entropy.lost_work, outlet.is_flow)} "
            f"(surroundings at {entropy.surroundings_temperature:.2f} K)",
        )
    if stage.activities:
        yield (
            "activities",
            ", ".join(f"{a.label} {significant(a.value, 4)} {a.unit}" for a in stage.activities),
        )
    proof = stage.certificate
    yield (
        "certificate",
        f"gap {proof.gap:.1e} RT per mole of atoms, balance {proof.balance:.1e}, "
        f"stationarity {proof.stationarity:.1e}",
    )


def _audit(stage: StageOutlet) -> Table:
    table = Table(box=None, pad_edge=False, show_edge=False, padding=(0, 3, 0, 0))
    table.add_column("record")
    table.add_column("would reach", justify="right")
    table.add_column("activity", justify="right")
    table.add_column("")
    for entry in stage.audit[:AUDIT_LENGTH]:
        remarks = ["left out"] if entry.left_out else ["WARNING"] if entry.warns else []
        remarks += [] if entry.within_range else ["beyond its range"]
        gas = entry.record.phase is Phase.GAS
        table.add_row(
            entry.record.name,
            fraction(entry.would_reach) if gas else "",
            "" if gas else significant(entry.activity, 4),
            ", ".join(remarks),
        )
    return table


def _sentences(title: str, sentences: tuple[str, ...]) -> Iterator[RenderableType]:
    if sentences:
        yield Text(title, style="bold")
        for sentence in sentences:
            yield Padding(Text(sentence), (0, 0, 0, 2))
