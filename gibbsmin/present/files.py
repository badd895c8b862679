"""Files that appear whole or not at all, with text that cannot act as a formula."""

from __future__ import annotations

import json
import os
import tempfile
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

from gibbsmin.errors import OutputError

if TYPE_CHECKING:
    import pandas as pd

_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")


def output_suffix(path: Path, accepted: tuple[str, ...]) -> str:
    """The file's ending in lower case.

    Raises
    ------
    OutputError
        when it is none of ``accepted``.
    """
    suffix = path.suffix.lower()
    if suffix not in accepted:
        raise OutputError(
            f'found the ending "{path.suffix}"' if suffix else "found no ending",
            f"accepted is a file that ends in {', '.join(accepted)}",
            file=str(path),
        )
    return suffix


def write_whole(path: Path, write: Callable[[Path], None]) -> None:
    """Let ``write`` fill a file beside the target, then move it there in one step.

    Raises
    ------
    OutputError
        when the folder cannot be written; nothing is left behind.
    """
    try:
        handle, name = tempfile.mkstemp(
            suffix=path.suffix, prefix=f".{path.stem}-", dir=path.parent
        )
        os.close(handle)
    except OSError as error:
        raise _unwritable(path, error) from None
    scratch = Path(name)
    try:
        write(scratch)
        scratch.chmod(0o666 & ~_umask())
        scratch.replace(path)
    except OSError as error:
        raise _unwritable(path, error) from None
    finally:
        scratch.unlink(missing_ok=True)


def write_text(path: Path, text: str) -> None:
    """Write UTF-8 text whole."""
    write_whole(path, lambda scratch: _dump(scratch, text))


def write_json(path: Path, document: Mapping[str, Any]) -> None:
    """A document as UTF-8 JSON with a line for each entry."""
    text = json.dumps(document, indent=2, ensure_ascii=False, allow_nan=False)
    write_text(path, f"{text}\n")


def write_tables(path: Path, tables: dict[str, pd.DataFrame]) -> None:
    """Write tables to a workbook, a sheet each."""
    import pandas as pd

    def fill(scratch: Path) -> None:
        with pd.ExcelWriter(scratch, engine="openpyxl") as writer:
            for name, table in tables.items():
                harmless(table).to_excel(writer, sheet_name=name, index=False)
                sheet = writer.sheets[name]
                sheet.freeze_panes = "A2"
                for column in sheet.columns:
                    width = max(len(str(cell.value or "")) for cell in column)
                    sheet.column_dimensions[column[0].column_letter].width = min(90, width + 2)

    write_whole(path, fill)


def write_csv(path: Path, table: pd.DataFrame) -> None:
    """Write a table as comma-separated values."""
    write_whole(path, lambda scratch: harmless(table).to_csv(scratch, index=False))


def harmless(table: pd.DataFrame) -> pd.DataFrame:
    """The table with an apostrophe before any text that a spreadsheet would run as a formula."""
    return table.map(lambda cell: _harmless_text(cell) if isinstance(cell, str) else cell)


def harmless_names(names: Iterable[str]) -> list[str]:
    """Names of columns, made harmless like cells."""
    return [_harmless_text(name) for name in names]


def _harmless_text(text: str) -> str:
    return f"'{text}" if text.startswith(_FORMULA_STARTS) else text


def _dump(path: Path, text: str) -> None:
    path.write_text(text, encoding="utf-8")


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask


def _unwritable(path: Path, error: OSError) -> OutputError:
    return OutputError(
        f"found that it cannot be written ({(error.strerror or str(error)).lower()})",
        "accepted is a file in a folder that exists and may be written",
        file=str(path),
    )
