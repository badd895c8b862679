"""The README shows what the program prints."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path
from typing import Any

import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.reactor.services import services

ROOT = Path(__file__).parent.parent
TEXT = (ROOT / "README.md").read_text(encoding="utf-8")


def blocks(language: str) -> list[str]:
    return re.findall(rf"^```{language}\n(.*?)^```$", TEXT, re.MULTILINE | re.DOTALL)


CASE, *PARTS = (tomllib.loads(block) for block in blocks("toml"))


def test_a_case_with_each_part_shown_is_accepted() -> None:
    assert len(PARTS) >= 7
    for part in PARTS:
        tables: dict[str, Any] = {**CASE, **part}
        tables["feed"] = {**CASE["feed"], **part.get("feed", {})}
        if "wood" in tables["feed"]:
            tables["species"] = {}
        case = gibbsmin.load_case(tables)
        assert len(case.feeds) == len(tables["feed"])
        assert len(case.axes) == len(part.get("axis", []))
        assert (case.onset is not None, case.target is not None, case.sample is not None) == (
            "onset" in part,
            "target" in part,
            "sample" in part,
        )
        assert bool(case.uncertainties) == ("uncertainty" in part)


def test_every_option_is_told_and_no_other() -> None:
    helped = set()
    for command in ("predict", "scan", "onset", "check", "species", "reaction"):
        result = CliRunner().invoke(app, [command, "--help"])
        helped |= set(re.findall(r"--[a-z][a-z-]+", result.stdout))
    own = re.sub(r"^python3 .*$", "", TEXT, flags=re.MULTILINE)
    assert set(re.findall(r"--[a-z][a-z-]+", own)) == helped


def test_every_service_is_named() -> None:
    section = " ".join(TEXT.split("### Services")[1].split("###")[0].split())
    assert [name for name in services() if f"`{name}`" not in section] == []


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
