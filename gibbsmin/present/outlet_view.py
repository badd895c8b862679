"""The outlet on the terminal: figures in tables, then what limits them in sentences."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np
from rich.console import Group, RenderableType
from rich.text import Text

from gibbsmin.minimise import Status
from gibbsmin.present.layout import heading, pairs, sentences, table
from gibbsmin.present.quantities import (
    amount_unit,
    amounts_in,
    fraction,
    heat,
    molar_unit,
    pressure,
    significant,
    temperature,
)
from gibbsmin.present.real_gas_view import real_gas_view
from gibbsmin.reactor.activities import ROUTES_AGREE, ROUTES_SHOWN
from gibbsmin.reactor.audit import AUDIT_LENGTH, AuditEntry
from gibbsmin.results import CAUTIONS, Outlet, StageOutlet
from gibbsmin.thermo.species import Phase
from gibbsmin.units import to_unit

_SHOWN_FROM = 1e-9
_MANYFOLD = 1000.0
"""Per cent of what was fed; a formation beyond is read better from the composition."""


def outlet_view(outlet: Outlet) -> RenderableType:
    """Everything known of an outlet, stage by stage; what several stages note is told once."""
    parts: list[RenderableType] = [heading(outlet.title)] if outlet.title else []
    told: set[str] = set()
    for stage in outlet.stages:
        parts += [_conditions(stage), Text("")]
        if stage.status is Status.CERTIFIED:
            parts += [_composition(outlet, stage), pairs(_lines(outlet, stage))]
        if stage.real_gas is not None:
            parts += [heading("Real gas"), *real_gas_view(outlet, stage, stage.real_gas)]
        if stage.extents:
            parts += [
                heading("Reactions, one set that tells all that happened"),
                _extents(outlet, stage),
            ]
        if stage.audit:
            parts += [heading("Not in the outlet, nearest to it first"), _audit(stage)]
        parts += sentences("Warnings", stage.warnings)
        parts += sentences("Notes", [note for note in stage.notes if note not in told])
        told |= set(stage.notes)
        parts += sentences("Hazards of the outlet", stage.hazards)
    if len(outlet.stages) > 1:
        parts += [heading("All stages together"), _totals(outlet)]
        parts.append(pairs(_conversion(outlet.conversion)))
    parts += sentences("Cautions", CAUTIONS)
    return Group(*parts)


def _totals(outlet: Outlet) -> RenderableType:
    """A line a stage, so that it shows where heat goes and work is lost; then the sums."""
    rows = [
        (
            stage.name,
            f"{stage.temperature - 273.15:.1f}",
            heat(stage.heat, outlet.is_flow),
            f"{heat(stage.entropy.value, outlet.is_flow)}/K",
            heat(stage.entropy.lost_work, outlet.is_flow),
        )
        for stage in outlet.stages
    ]
    rows.append(
        (
            "total",
            "",
            heat(outlet.heat, outlet.is_flow),
            f"{heat(outlet.entropy_generation, outlet.is_flow)}/K",
            heat(outlet.lost_work, outlet.is_flow),
        )
    )
    headers = ("stage", "outlet, °C", "heat added", "entropy generated", "lost work")
    return table(headers, rows, words=("stage",))


def _conditions(stage: StageOutlet) -> Text:
    certified = stage.status is Status.CERTIFIED
    return Text.assemble(
        f"{stage.name}: {temperature(stage.temperature)}, {pressure(stage.pressure)}, ",
        f"{_gas(stage)}, ",
        ("certified" if certified else "NOT CERTIFIED", "" if certified else "bold"),
    )


def _gas(stage: StageOutlet) -> str:
    return "ideal gas" if stage.real_gas is None else f"{stage.real_gas.equation} gas"


def _composition(outlet: Outlet, stage: StageOutlet) -> RenderableType:
    """Gases from 1 ppb and every solid or liquid that is there, the largest first."""
    unit = amount_unit(outlet.unit, outlet.is_flow)
    amounts = amounts_in(unit, stage.records, stage.amounts)
    wet, dry = stage.mole_fractions, stage.dry_mole_fractions
    rows = []
    for phase in Phase:
        columns = [i for i, record in enumerate(stage.records) if record.phase is phase]
        for i in sorted(columns, key=lambda i: -np.nan_to_num(stage.amounts[i])):
            gas = phase is Phase.GAS
            if wet[i] < _SHOWN_FROM if gas else stage.amounts[i] == 0.0:
                continue
            rows.append(
                (
                    stage.records[i].name,
                    significant(float(amounts[i])),
                    fraction(float(wet[i])) if gas else "",
                    fraction(float(dry[i])) if gas else "",
                    phase.value,
                )
            )
    hidden = len(stage.records) - len(rows)
    if hidden:
        rows.append((f"{hidden} more, absent or below 1 ppb", "", "", "", ""))
    return table(("species", unit, "wet gas", "dry gas", "phase"), rows, words=("species", "phase"))


def _lines(outlet: Outlet, stage: StageOutlet) -> Iterator[tuple[str, str]]:
    yield from _conversion(stage.conversion)
    if stage.removed:
        unit = amount_unit(outlet.unit, outlet.is_flow)
        records = [record for record in stage.records if record.name in stage.removed]
        taken = amounts_in(unit, records, np.array([stage.removed[r.name] for r in records]))
        pairs_taken = zip(records, taken.tolist(), strict=True)
        yield "taken out", ", ".join(f"{r.name} {significant(n)} {unit}" for r, n in pairs_taken)
    added = "removed" if stage.heat < 0 else "added"
    yield f"heat {added}", heat(abs(stage.heat), outlet.is_flow)
    if stage.shaft_work:
        gained = "gained" if stage.shaft_work < 0 else "put in"
        yield f"shaft work {gained}", heat(abs(stage.shaft_work), outlet.is_flow)
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
            ", ".join(
                f"{a.label} {significant(a.value, 4)} {a.unit}".rstrip()
                for a in stage.activities
                if not np.isnan(a.value)
            ),
        )
    for figure in stage.figures:
        yield figure.name, f"{significant(figure.value)} {figure.unit}".rstrip()
    proof = stage.certificate
    yield (
        "certificate",
        f"gap {proof.gap:.1e} RT per mole of atoms, balance {proof.balance:.1e}, "
        f"stationarity {proof.stationarity:.1e}",
    )


def _conversion(shares_by_name: Mapping[str, float]) -> Iterator[tuple[str, str]]:
    """What was used up of each substance fed, and what was formed beyond what was fed of it.

    Nothing is told where nothing changed, nor of a formation that a trace in the feed makes huge.
    """
    shares = {name: round(100 * value, 2) for name, value in shares_by_name.items()}
    if not any(shares.values()):
        return
    converted = [f"{name} {abs(share):.2f} %" for name, share in shares.items() if share >= 0]
    formed = [
        f"{name} +{-share:.2f} %" for name, share in shares.items() if -_MANYFOLD <= share < 0
    ]
    if converted:
        yield "conversion", ", ".join(converted)
    if formed:
        yield "formation", ", ".join(formed) + " of what was fed"


def _extents(outlet: Outlet, stage: StageOutlet) -> RenderableType:
    unit = molar_unit(outlet.unit, outlet.is_flow)
    rows = [(extent.reaction, significant(to_unit(extent.value, unit))) for extent in stage.extents]
    return table(("reaction", f"extent, {unit}"), rows, words=("reaction",))


def _audit(stage: StageOutlet) -> RenderableType:
    rows = []
    for entry in stage.audit[:AUDIT_LENGTH]:
        remarks = ["left out"] if entry.left_out else ["WARNING"] if entry.warns else []
        remarks += [] if entry.within_range else ["beyond its range"]
        remarks += _route_remark(entry)
        gas = entry.record.phase is Phase.GAS
        rows.append(
            (
                entry.record.name,
                fraction(entry.would_reach) if gas else "",
                "" if gas else significant(entry.activity, 4),
                ", ".join(remarks),
            )
        )
    return table(("record", "would reach", "activity", "remark"), rows, words=("record", "remark"))


def _route_remark(entry: AuditEntry) -> list[str]:
    """The routes' own figures, where they disagree."""
    if len(entry.routes) < 2:
        return []
    first, last = entry.routes[0], entry.routes[-1]
    if first.log_activity - last.log_activity < ROUTES_AGREE:
        return []
    plainest = sorted(entry.routes, key=lambda route: route.awkwardness)[:ROUTES_SHOWN]
    return ["; ".join(f"{route.text}: {significant(route.activity, 3)}" for route in plainest)]
