"""Keeps the finished blocks of a scan, so that one that was broken off goes on where it stopped.

The blocks stand in a folder beside the file to write, with a fingerprint of the case and its
conditions; the folder goes when the file is whole.
"""

from __future__ import annotations

import hashlib
import shutil
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.errors import OutputError
from gibbsmin.jobs.scan import AHEAD, in_order
from gibbsmin.jobs.scan_columns import named
from gibbsmin.present.files import write_whole

if TYPE_CHECKING:
    import pandas as pd

_FINGERPRINT = "fingerprint.txt"


def fingerprint_of(*parts: str | bytes) -> str:
    """One number for what a scan rests on: the case's text, its conditions, its options."""
    total = hashlib.sha256()
    for part in parts:
        data = part.encode() if isinstance(part, str) else part
        total.update(len(data).to_bytes(8, "big"))
        total.update(data)
    return total.hexdigest()


def kept_blocks(
    path: Path,
    fingerprint: str,
    count: int,
    solve: Callable[[int], pd.DataFrame],
    ahead: int = AHEAD,
) -> Iterator[pd.DataFrame]:
    """The blocks in order: those that are kept, the others solved (``ahead`` at a time) and kept.

    Raises
    ------
    OutputError
        when the folder holds blocks of another scan, or cannot be written.
    """
    folder = _folder(path)
    stamp = folder / _FINGERPRINT
    others = stamp.exists() and stamp.read_text(encoding="utf-8") != fingerprint
    if others and _has_blocks(folder):
        raise OutputError(
            "found blocks of another case, other conditions or other options",
            f"accepted is another file to write, or {path.name} once this folder is removed",
            file=str(folder),
        )
    try:
        folder.mkdir(exist_ok=True)
    except OSError as error:
        raise OutputError(
            f"found that it cannot be written ({(error.strerror or str(error)).lower()})",
            "accepted is a file in a folder that exists and may be written",
            file=str(folder),
        ) from None
    write_whole(stamp, lambda scratch: _write_text(scratch, fingerprint))

    def block(index: int) -> pd.DataFrame:
        part = folder / f"block-{index:06d}.npz"
        if not part.exists():
            _keep(solve(index), part)
        # What was solved just now is read back too, so that every run gives the same bytes.
        return _kept(part)

    try:
        yield from in_order(block, range(count), ahead)
    finally:
        # A scan that is refused leaves nothing that would stand in the way of a mended one.
        if not _has_blocks(folder):
            forget_blocks(path)


def forget_blocks(path: Path) -> None:
    """Remove the folder of a scan whose file is whole."""
    shutil.rmtree(_folder(path), ignore_errors=True)


def _has_blocks(folder: Path) -> bool:
    return any(folder.glob("block-*.npz"))


def _folder(path: Path) -> Path:
    return path.with_name(f"{path.name}.parts")


def _keep(block: pd.DataFrame, part: Path) -> None:
    """Texts that repeat are kept as numbers, beside the list of those texts."""
    arrays: dict[str, Any] = {"names": np.array([str(name) for name in block.columns])}
    for k in range(block.shape[1]):
        column = block.iloc[:, k]
        if column.dtype == "category":
            arrays[f"{k} texts"] = np.array(column.cat.categories, dtype=str)
            column = column.cat.codes
        arrays[f"{k}"] = _array(column)

    def write(scratch: Path) -> None:
        with scratch.open("wb") as file:
            np.savez(file, **arrays)

    write_whole(part, write)


def _kept(part: Path) -> pd.DataFrame:
    import pandas as pd

    with np.load(part, allow_pickle=False) as file:
        columns: dict[str, Any] = {}
        for k, name in enumerate(file["names"].tolist()):
            columns[name] = file[f"{k}"]
            if f"{k} texts" in file:
                columns[name] = named(columns[name], file[f"{k} texts"].tolist())
    return pd.DataFrame(columns, copy=False)


def _array(column: pd.Series) -> np.ndarray:
    values = column.to_numpy()
    return values if values.dtype.kind in "fib" else values.astype(str)


def _write_text(path: Path, text: str) -> None:
    path.write_text(text, encoding="utf-8")
