"""Simple records from a table: one row each, one piece of heat capacity."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from gibbsmin.errors import InputError

_COLUMNS = (
    "name",
    "source",
    "enthalpy, kJ/mol",
    "entropy, J/(mol K)",
    "first, K",
    "last, K",
    "A",
    "B",
    "C",
    "D",
    "E",
)
"""Cp in J/(mol K) = A + B t + C t² + D t³ + E/t², t = T/(1000 K)."""


def read_record_rows(path: Path) -> list[dict[str, Any]]:
    """Rows of a .csv or .xlsx file as tables of a library file.

    Raises
    ------
    InputError
        for another kind of file, one that does not read, and columns other than those named.
    """
    import pandas as pd

    file, suffix = str(path), path.suffix.lower()
    if suffix not in (".csv", ".xlsx"):
        raise InputError(
            f'found the ending "{path.suffix}"', "accepted is .toml, .csv or .xlsx", file=file
        )
    try:
        table = pd.read_csv(path) if suffix == ".csv" else pd.read_excel(path)
    except FileNotFoundError:
        raise InputError("found no such file", "accepted is one that exists", file=file) from None
    except (ValueError, OSError) as error:
        raise InputError(
            f"found what does not read as a table ({str(error).splitlines()[0][:100]})",
            "accepted is .toml, .csv or .xlsx",
            file=file,
        ) from None
    missing = [name for name in _COLUMNS[:7] if name not in table]
    strange = [str(name) for name in table if name not in _COLUMNS]
    if missing or strange:
        raise InputError(
            f"found no column {missing[0]}" if missing else f'found the column "{strange[0]}"',
            f"accepted are {', '.join(_COLUMNS)}",
            file=file,
        )
    return [
        _row(dict(zip(table.columns, cells, strict=True))) for cells in table.to_numpy().tolist()
    ]


def _row(cells: dict[str, Any]) -> dict[str, Any]:
    coefficients = {k: cells[k] for k in "ABCDE" if k in cells and cells[k] == cells[k]}
    return {
        "name": cells["name"],
        "source": cells["source"],
        "enthalpy": f"{cells['enthalpy, kJ/mol']} kJ/mol",
        "entropy": f"{cells['entropy, J/(mol K)']} J/(mol K)",
        "heat_capacity": [
            {
                "first": f"{cells['first, K']} K",
                "last": f"{cells['last, K']} K",
                "unit": "J/(mol K)",
                **coefficients,
            }
        ],
    }
