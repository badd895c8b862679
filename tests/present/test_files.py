"""Files appear whole or not at all, and their text cannot act as a formula."""

from __future__ import annotations

import csv
from pathlib import Path

import openpyxl
import pandas as pd
import pytest

from gibbsmin.present.files import write_csv, write_tables, write_text, write_whole

HARMFUL = pd.DataFrame(
    {"text": ["=1+1", "+cmd", "-2", "@x", "\tq", "plain", "e-(g)"], "n": range(7)}
)
HARMLESS = ["'=1+1", "'+cmd", "'-2", "'@x", "'\tq", "plain", "e-(g)"]


def test_no_formula_in_csv(tmp_path: Path) -> None:
    write_csv(tmp_path / "a.csv", HARMFUL)
    with (tmp_path / "a.csv").open(encoding="utf-8", newline="") as file:
        assert [row["text"] for row in csv.DictReader(file)] == HARMLESS


def test_no_formula_in_workbook(tmp_path: Path) -> None:
    write_tables(tmp_path / "a.xlsx", {"values": HARMFUL})
    cells = list(openpyxl.load_workbook(tmp_path / "a.xlsx")["values"]["A"])[1:]
    assert [cell.value for cell in cells] == HARMLESS
    assert {cell.data_type for cell in cells} == {"s"}


def test_a_failed_write_leaves_the_old_file_and_nothing_else(tmp_path: Path) -> None:
    path = tmp_path / "a.txt"
    write_text(path, "old")

    def fail(scratch: Path) -> None:
        scratch.write_text("half", encoding="utf-8")
        raise RuntimeError

    with pytest.raises(RuntimeError):
        write_whole(path, fail)
    assert path.read_text(encoding="utf-8") == "old"
    assert list(tmp_path.iterdir()) == [path]
