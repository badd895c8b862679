"""The README shows what the program prints."""

from __future__ import annotations

from pathlib import Path

import pytest
from typer.testing import CliRunner

from gibbsmin.cli import app

ROOT = Path(__file__).parent.parent


def test_output_is_the_real_one(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    result = CliRunner().invoke(app, ["predict", "examples/reformer/case.toml"])
    shown = (ROOT / "README.md").read_text(encoding="utf-8")
    printed = [line for line in result.stdout.splitlines() if "certificate" not in line]
    assert len(printed) > 30
    assert [line for line in printed if line not in shown.splitlines()] == []


def test_case_is_the_real_one() -> None:
    case = (ROOT / "examples" / "reformer" / "case.toml").read_text(encoding="utf-8").strip()
    assert case in (ROOT / "README.md").read_text(encoding="utf-8")


def test_the_real_gas_table_is_what_predict_prints(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    table = text.split("tells, for its second bed:\n\n```\n")[1].split("\n```")[0].splitlines()
    result = CliRunner().invoke(app, ["predict", "examples/ammonia_converter/case.toml"])
    printed = [line.rstrip() for line in result.stdout.splitlines()]
    assert len(table) == 7
    assert [line for line in table if line not in printed] == []
