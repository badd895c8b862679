"""A scan's table as a file, written block by block: .csv, .parquet or .xlsx."""

from __future__ import annotations

from collections.abc import Iterator
from os import PathLike
from pathlib import Path
from typing import TYPE_CHECKING, Any

from gibbsmin.errors import OutputError
from gibbsmin.jobs.conditions import LABEL
from gibbsmin.jobs.scan import Scan
from gibbsmin.present.files import (
    harmless,
    harmless_names,
    output_suffix,
    write_tables,
    write_whole,
)

if TYPE_CHECKING:
    import pandas as pd

ENDINGS = (".csv", ".parquet", ".xlsx")
_SHEET_ROWS = 1_048_575


def require_scan_ending(path: Path) -> str:
    """The file's ending, refused before any work is done where no scan can be written so."""
    return require_written(path, ENDINGS)


def require_written(path: Path, accepted: tuple[str, ...]) -> str:
    """The file's ending, one of those accepted; .parquet only where pyarrow can write it.

    Raises
    ------
    OutputError
        for another ending, and for .parquet without pyarrow.
    """
    suffix = output_suffix(path, accepted)
    if suffix == ".parquet":
        try:
            import pyarrow  # noqa: F401 an extra that may be missing
        except ImportError:
            raise OutputError(
                "found no pyarrow, which writes .parquet",
                "accepted is .csv, or an installation with gibbsmin[parquet]",
                file=str(path),
            ) from None
    return suffix


def write_scan(found: Scan, path: str | PathLike[str]) -> None:
    """Write a scan's table to a .csv, .parquet or .xlsx file; it appears whole or not at all.

    Text that a spreadsheet would run as a formula has an apostrophe before it.

    Raises
    ------
    OutputError
        for another ending, and for a file that cannot be written.
    """
    write_blocks(iter([found.table]), Path(path))


def write_blocks(blocks: Iterator[pd.DataFrame], path: Path) -> None:
    """Write the blocks of a scan one after another."""
    suffix = require_scan_ending(path)
    if suffix == ".xlsx":
        _write_workbook(blocks, path)
    elif suffix == ".csv":
        write_whole(path, lambda scratch: _fill_csv(blocks, scratch))
    else:
        write_parquet(blocks, path)


def write_parquet(blocks: Iterator[pd.DataFrame], path: Path) -> None:
    """Write tables of the same columns one after another into one file."""
    write_whole(path, lambda scratch: _fill_parquet(blocks, scratch))


def _write_workbook(blocks: Iterator[pd.DataFrame], path: Path) -> None:
    import pandas as pd

    table = pd.concat(blocks, ignore_index=True)
    if len(table) > _SHEET_ROWS:
        raise OutputError(
            f"found {len(table)} states, more than a sheet can hold",
            f"accepted are at most {_SHEET_ROWS}, or .csv or .parquet",
            file=str(path),
        )
    table.columns = harmless_names(table.columns)
    write_tables(path, {"scan": table})


def _fill_csv(blocks: Iterator[pd.DataFrame], path: Path) -> None:
    for index, block in enumerate(blocks):
        # The cells are numbers and our own words, but for labels and the names above them.
        if LABEL in block:
            block = block.assign(**{LABEL: harmless(block[[LABEL]])[LABEL]})
        block = block.set_axis(harmless_names(block.columns), axis=1)
        block.to_csv(path, mode="a", header=index == 0, index=False)


def _fill_parquet(blocks: Iterator[pd.DataFrame], path: Path) -> None:
    import pyarrow as pa
    import pyarrow.parquet as pq

    writer: Any = None
    try:
        for block in blocks:
            rows = _plain_texts(pa.Table.from_pandas(block, preserve_index=False))
            writer = writer or pq.ParquetWriter(path, rows.schema)
            writer.write_table(rows)
    finally:
        if writer is not None:
            writer.close()


def _plain_texts(rows: Any) -> Any:
    """The rows with repeated texts spelled out: the file's own encoding is of one kind in all."""
    import pyarrow as pa

    fields = [
        pa.field(f.name, pa.string()) if pa.types.is_dictionary(f.type) else f for f in rows.schema
    ]
    return rows.cast(pa.schema(fields))
