"""Onsets and targets as files: .json, .csv or .xlsx."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from gibbsmin.present.files import harmless_names, write_csv, write_tables, write_text
from gibbsmin.present.outlet_files import require_ending
from gibbsmin.present.search_document import search_table


def write_search(document: dict[str, Any], path: Path) -> None:
    """Write an onset's or target's document in the form that the file's ending names.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    suffix = require_ending(path)
    if suffix == ".json":
        write_text(path, json.dumps(document, indent=2, ensure_ascii=False, allow_nan=False) + "\n")
        return
    table = search_table(document)
    table.columns = harmless_names(table.columns)
    if suffix == ".csv":
        write_csv(path, table)
    else:
        write_tables(path, {"crossings" if "crossings" in document else "answers": table})
