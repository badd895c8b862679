"""Checked samples as files: .json, .csv, .xlsx or .parquet."""

from __future__ import annotations

from os import PathLike
from pathlib import Path
from typing import TYPE_CHECKING

from gibbsmin.present.check_document import check_document
from gibbsmin.present.check_table import check_table
from gibbsmin.present.files import (
    harmless_names,
    output_suffix,
    write_csv,
    write_json,
    write_tables,
    write_whole,
)
from gibbsmin.results import CAUTIONS
from gibbsmin.sample.findings import Checks

if TYPE_CHECKING:
    import pandas as pd

ENDINGS = (".json", ".csv", ".xlsx", ".parquet")


def require_check_ending(path: Path) -> str:
    """The file's ending; raises OutputError for one that checks are not written in."""
    return output_suffix(path, ENDINGS)


def write_checks(checks: Checks, path: str | PathLike[str]) -> None:
    """Write the samples in the form that the file's ending names: one row a sample.

    The workbook has a second sheet with assumptions, sources and cautions.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    path = Path(path)
    suffix = require_check_ending(path)
    if suffix == ".json":
        write_json(path, check_document(checks))
        return
    table = check_table(checks)
    if suffix == ".parquet":
        write_whole(path, lambda scratch: table.to_parquet(scratch, index=False))
        return
    table.columns = harmless_names(table.columns)
    if suffix == ".csv":
        write_csv(path, table)
    else:
        write_tables(path, {"samples": table, "remarks": _remarks(checks)})


def _remarks(checks: Checks) -> pd.DataFrame:
    import pandas as pd

    kinds = (
        ("assumption", checks.assumptions),
        ("source", checks.sources),
        ("hazard", checks.hazards),
        ("caution", CAUTIONS),
    )
    rows = [(kind, sentence) for kind, sentences in kinds for sentence in sentences]
    return pd.DataFrame(rows, columns=["kind", "sentence"])
