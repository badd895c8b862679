"""Onsets and targets as files: .json, .csv or .xlsx."""

from __future__ import annotations

from os import PathLike
from pathlib import Path
from typing import Any

from gibbsmin.present.files import harmless_names, write_csv, write_json, write_tables
from gibbsmin.present.outlet_files import require_ending
from gibbsmin.present.search_document import search_table


def write_search(document: dict[str, Any], path: str | PathLike[str]) -> None:
    """Write an onset's or target's document in the form that the file's ending names.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    path = Path(path)
    suffix = require_ending(path)
    if suffix == ".json":
        write_json(path, document)
        return
    table = search_table(document)
    table.columns = harmless_names(table.columns)
    if suffix == ".csv":
        write_csv(path, table)
    else:
        write_tables(path, {"crossings" if "crossings" in document else "answers": table})
