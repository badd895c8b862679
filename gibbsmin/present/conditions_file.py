"""Reads a table of conditions from a file: .csv, .xlsx or .parquet."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError

if TYPE_CHECKING:
    import pandas as pd

ENDINGS = (".csv", ".xlsx", ".parquet")


def read_conditions(path: Path) -> pd.DataFrame:
    """The table as it stands, its numbers as numbers.

    Raises
    ------
    InputError
        for a file that is missing or of another kind, or that does not read as a table.
    """
    import pandas as pd

    suffix = path.suffix.lower()
    if suffix not in ENDINGS:
        raise InputError(
            f'found the ending "{path.suffix}"' if suffix else "found no ending",
            f"accepted is a table in {', '.join(ENDINGS)}",
            file=str(path),
        )
    try:
        if suffix == ".csv":
            return pd.read_csv(path)
        return pd.read_excel(path) if suffix == ".xlsx" else pd.read_parquet(path)
    except FileNotFoundError:
        raise InputError(
            "found no such file", "accepted is a table that exists", file=str(path)
        ) from None
    except (ValueError, OSError, KeyError, ImportError) as error:
        reason = str(error).splitlines()[0][:120] or type(error).__name__
        raise InputError(
            f"found what does not read as a table ({reason})",
            f"accepted is a table in {', '.join(ENDINGS)}",
            file=str(path),
        ) from None
