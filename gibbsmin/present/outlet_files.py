"""The outlet as a file: .json, .csv or .xlsx."""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING

from gibbsmin.present.files import output_suffix, write_csv, write_tables, write_text
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


def write_outlet(outlet: Outlet, path: Path) -> None:
    """Write an outlet in the form that the file's ending names.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    suffix = require_ending(path)
    if suffix == ".json":
        document = outlet_document(outlet)
        write_text(path, json.dumps(document, indent=2, ensure_ascii=False, allow_nan=False) + "\n")
    elif suffix == ".csv":
        write_csv(path, composition_table(outlet))
    else:
        write_tables(
            path,
            {
                "composition": composition_table(outlet),
                "figures": _figures(outlet),
                "reactions": _reactions(outlet),
                "yields": _yields(outlet),
                "audit": _audit(outlet),
                "remarks": _remarks(outlet),
            },
        )


def composition_table(outlet: Outlet) -> pd.DataFrame:
    """The outlet's frame with its amounts in the reported unit, which the column's name states."""
    unit = amount_unit(outlet.unit, outlet.is_flow)
    table = outlet.to_frame()
    table["amount"] = [
        amount
        for stage in outlet.stages
        for amount in amounts_in(unit, stage.records, stage.amounts).tolist()
    ]
    return table.rename(columns={"amount": f"amount, {unit}"})


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
