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
