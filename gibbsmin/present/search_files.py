"""Onsets and targets as files: .json, .csv, .xlsx or .parquet."""

from __future__ import annotations

from os import PathLike
from pathlib import Path
from typing import Any

from gibbsmin.present.files import harmless_names, write_csv, write_json, write_tables
from gibbsmin.present.scan_files import require_written, write_parquet
from gibbsmin.present.search_document import search_table

ENDINGS = (".csv", ".xlsx", ".json", ".parquet")


def require_search_ending(path: Path) -> str:
    """The file's ending, refused before any work is done where no answer can be written so."""
    return require_written(path, ENDINGS)


def write_search(document: dict[str, Any], path: str | PathLike[str]) -> None:
    """Write an onset's or target's document in the form that the file's ending names.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    path = Path(path)
    suffix = require_search_ending(path)
    if suffix == ".json":
        write_json(path, document)
        return
    table = search_table(document)
    if suffix == ".parquet":
        write_parquet(iter([table]), path)
        return
    table.columns = harmless_names(table.columns)
    if suffix == ".csv":
        write_csv(path, table)
    else:
        write_tables(path, {"crossings" if "crossings" in document else "answers": table})
