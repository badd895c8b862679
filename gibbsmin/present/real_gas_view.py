"""A real gas for people: its coefficients, and what an ideal gas would have given, in one table."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from rich.console import RenderableType

from gibbsmin.present.layout import pairs, table
from gibbsmin.present.quantities import amount_unit, amounts_in, fraction, heat, significant
from gibbsmin.results import Comparison, Outlet, RealGasOutlet, StageOutlet

_SHOWN_FROM = 1e-3


def real_gas_view(outlet: Outlet, stage: StageOutlet, gas: RealGasOutlet) -> list[RenderableType]:
    """Compressibility and the comparison with an ideal gas."""
    phases = "one stable phase" if gas.stable else "not stable: a liquid would form beside it"
    parts: list[RenderableType] = [
        pairs(
            [
                ("compressibility", significant(gas.compressibility)),
                ("gas", phases),
                ("fugacity coefficients settled to", f"{gas.settled:.1e}"),
            ]
        )
    ]
    coefficients = {
        record.name: value
        for record, value in zip(stage.records, gas.fugacity_coefficients.tolist(), strict=True)
        if not np.isnan(value)
    }
    if gas.comparison:
        rows = [_row(outlet, stage, entry, coefficients) for entry in gas.comparison]
        compared = ("", "ideal gas", "real gas", "change", "fugacity coefficient")
        return [*parts, table(compared, rows, words=("",))]
    wet = dict(zip((r.name for r in stage.records), stage.mole_fractions.tolist(), strict=True))
    alone = [
        (name, fraction(wet[name]), significant(value, 5))
        for name, value in coefficients.items()
        if wet[name] > _SHOWN_FROM
    ]
    headers = ("species", "wet gas", "fugacity coefficient")
    return [*parts, table(headers, alone, words=("species",))]


def _row(
    outlet: Outlet, stage: StageOutlet, entry: Comparison, coefficients: Mapping[str, float]
) -> tuple[str, ...]:
    name, ideal, real = _shown(outlet, stage, entry)
    change = ""
    if entry.ideal and entry.name != "temperature":
        # Adding 0 takes the sign off a change that rounds to none.
        change = f"{round(100.0 * (entry.real / entry.ideal - 1.0), 2) + 0.0:+.2f} %"
    coefficient = significant(coefficients[name], 5) if name in coefficients else ""
    return name, ideal, real, change, coefficient


def _shown(outlet: Outlet, stage: StageOutlet, entry: Comparison) -> tuple[str, str, str]:
    """Name and both values as the rest of the report writes them."""
    values = (entry.ideal, entry.real)
    kind, _, record = entry.name.partition(" ")
    if kind == "y":
        ideal, real = (fraction(value) for value in values)
        return record, ideal, real
    if kind == "amount":
        unit = amount_unit(outlet.unit, outlet.is_flow)
        (found,) = (r for r in stage.records if r.name == record)
        ideal, real = (
            significant(float(amounts_in(unit, [found], np.array([value]))[0])) for value in values
        )
        return f"{record}, {unit}", ideal, real
    if kind == "temperature":
        ideal, real = (f"{value - 273.15:.2f} °C" for value in values)
    else:
        ideal, real = (heat(value, outlet.is_flow) for value in values)
    return entry.name, ideal, real
