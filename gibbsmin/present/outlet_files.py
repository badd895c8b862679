"""The outlet as a file: .json, .csv or .xlsx."""

from __future__ import annotations

from collections.abc import Sequence
from os import PathLike
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.jobs.monte_carlo import QUANTILES, MonteCarlo
from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.present.files import output_suffix, write_csv, write_json, write_tables
from gibbsmin.present.monte_carlo_view import spread_table
from gibbsmin.present.outlet_document import outlet_document
from gibbsmin.present.quantities import amount_unit, amounts_in, heat_unit, molar_unit
from gibbsmin.results import CAUTIONS, Outlet, StageOutlet
from gibbsmin.units import to_unit

if TYPE_CHECKING:
    import pandas as pd

ENDINGS = (".csv", ".xlsx", ".json")


def require_ending(path: Path) -> str:
    """The file's ending, refused before any work is done where no outlet can be written so."""
    return output_suffix(path, ENDINGS)


def write_outlet(
    outlet: Outlet,
    path: str | PathLike[str],
    error_bars: Sequence[Sensitivities] = (),
    spread: MonteCarlo | None = None,
) -> None:
    """Write an outlet in the form that the file's ending names, with its error bars if given.

    A .csv file holds the composition alone, with what error bars and draws tell of its fractions.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    path = Path(path)
    suffix = require_ending(path)
    if suffix == ".json":
        write_json(path, outlet_document(outlet, error_bars, spread))
    elif suffix == ".csv":
        write_csv(path, composition_table(outlet, error_bars, spread))
    else:
        write_tables(
            path,
            {
                "composition": composition_table(outlet, error_bars, spread),
                "figures": _figures(outlet),
                "reactions": _reactions(outlet),
                "yields": _yields(outlet),
                "audit": _audit(outlet),
                "remarks": _remarks(outlet),
                **({"uncertainty": _uncertainty(error_bars)} if error_bars else {}),
                **({} if spread is None else {"monte carlo": spread_table(spread)}),
            },
        )


def composition_table(
    outlet: Outlet,
    error_bars: Sequence[Sensitivities] = (),
    spread: MonteCarlo | None = None,
) -> pd.DataFrame:
    """The outlet's frame with its amounts in the reported unit, which the column's name states."""
    unit = amount_unit(outlet.unit, outlet.is_flow)
    table = outlet.to_frame()
    table["amount"] = [
        amount
        for stage in outlet.stages
        for amount in amounts_in(unit, stage.records, stage.amounts).tolist()
    ]
    table = table.rename(columns={"amount": f"amount, {unit}"})
    for column, kind in (("mole_fraction", "fraction"), ("dry_mole_fraction", "dry fraction")):
        if error_bars:
            table[f"{column}_uncertainty"] = [
                float(found.uncertainties[0, found.results.index(f"{kind} {record.name}")])
                if f"{kind} {record.name}" in found.results
                else float("nan")
                for stage, found in zip(outlet.stages, error_bars, strict=True)
                for record in stage.records
            ]
        if spread is not None:
            for place, level in enumerate(QUANTILES):
                table[f"{column}_quantile_{level}"] = [
                    found.quantile(f"{kind} {record.name}", place)
                    for stage, found in zip(outlet.stages, spread.stages, strict=True)
                    for record in stage.records
                ]
    return table


def _uncertainty(error_bars: Sequence[Sensitivities]) -> pd.DataFrame:
    """Standard uncertainty of each result in SI, and the input that makes most of it."""
    import pandas as pd

    rows = []
    for found in error_bars:
        sizes, parts = found.uncertainties[0], found.contributions[0]
        for r, result in enumerate(found.results):
            top = int(np.argmax(np.nan_to_num(parts[r])))
            share = parts[r, top] / parts[r].sum() if sizes[r] > 0.0 else float("nan")
            rows.append((found.stage, result, sizes[r], found.inputs[top].name, share))
    columns = ["stage", "result", "uncertainty_SI", "largest_input", "share_of_variance"]
    return pd.DataFrame(rows, columns=columns)


def _figures(outlet: Outlet) -> pd.DataFrame:
    import pandas as pd

    rows = [
        (stage.name, figure, value, unit)
        for stage in outlet.stages
        for figure, value, unit in _stage_figures(stage, heat_unit(outlet.is_flow))
    ]
    return pd.DataFrame(rows, columns=["stage", "figure", "value", "unit"])


def _stage_figures(stage: StageOutlet, energy: str) -> list[tuple[str, float | str, str]]:
    entropy = stage.entropy
    return [
        ("status", stage.status.name.lower(), ""),
        ("temperature", stage.temperature, "K"),
        ("pressure", stage.pressure / 1e5, "bar"),
        *((f"conversion of {name}", value, "1") for name, value in stage.conversion.items()),
        ("heat added", stage.heat / 1e3, energy),
        ("entropy generation", entropy.value / 1e3, f"{energy}/K"),
        ("boundary temperature", entropy.boundary_temperature, "K"),
        ("lost work", entropy.lost_work / 1e3, energy),
        ("surroundings temperature", entropy.surroundings_temperature, "K"),
        *((activity.label, activity.value, activity.unit or "1") for activity in stage.activities),
        *((figure.name, figure.value, figure.unit or "1") for figure in stage.figures),
        *(
            (f"chemical potential of {element}", value, "RT")
            for element, value in stage.element_potentials.items()
        ),
        ("certificate: duality gap", stage.certificate.gap, "RT per mole of feed atoms"),
        ("certificate: balance", stage.certificate.balance, "1"),
        ("certificate: stationarity", stage.certificate.stationarity, "RT"),
    ]


def _reactions(outlet: Outlet) -> pd.DataFrame:
    import pandas as pd

    unit = molar_unit(outlet.unit, outlet.is_flow)
    rows = [
        (stage.name, extent.reaction, to_unit(extent.value, unit), unit)
        for stage in outlet.stages
        for extent in stage.extents
    ]
    return pd.DataFrame(rows, columns=["stage", "reaction", "extent", "unit"])


def _yields(outlet: Outlet) -> pd.DataFrame:
    import pandas as pd

    rows = [
        (stage.name, found.element, found.record, found.share, found.selectivity)
        for stage in outlet.stages
        for found in stage.yields
    ]
    return pd.DataFrame(rows, columns=["stage", "element", "record", "share", "selectivity"])


def _audit(outlet: Outlet) -> pd.DataFrame:
    import pandas as pd

    rows = [
        (stage.name, e.record.name, e.would_reach, e.activity, e.left_out, e.within_range)
        for stage in outlet.stages
        for e in stage.audit
    ]
    columns = ["stage", "record", "would_reach", "activity", "left_out", "within_range"]
    return pd.DataFrame(rows, columns=columns)


def _remarks(outlet: Outlet) -> pd.DataFrame:
    import pandas as pd

    rows = [
        (stage.name, kind, sentence)
        for stage in outlet.stages
        for kind, sentences in (
            ("warning", stage.warnings),
            ("note", stage.notes),
            ("hazard", stage.hazards),
            ("caution", CAUTIONS),
        )
        for sentence in sentences
    ]
    return pd.DataFrame(rows, columns=["stage", "kind", "sentence"])
