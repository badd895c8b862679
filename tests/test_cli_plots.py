"""Plots as a user asks for them: predict, scan and onset with --plot."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from xml.etree import ElementTree

import pytest
from plot_cases import EXAMPLES
from typer.testing import CliRunner

from gibbsmin.cli import app
from gibbsmin.jobs.case import load_case
from gibbsmin.jobs.predict import predict
from gibbsmin.minimise import Status

REFORMER = EXAMPLES / "reformer" / "case.toml"
MAP = EXAMPLES / "reformer_map" / "case.toml"
CONVERTER = EXAMPLES / "sulphur_dioxide_converter" / "case.toml"


def run(*arguments: object, code: int = 0) -> str:
    result = CliRunner().invoke(app, [str(a) for a in arguments])
    assert result.exit_code == code, result.output
    return result.output


def words_in(path: Path) -> str:
    """The texts that a document tells beside its letters, which are drawn."""
    text = path.read_text()
    ElementTree.fromstring(text)  # noqa: S314 our own document
    return text


@pytest.mark.parametrize(
    ("case", "options", "words"),
    [
        (REFORMER, (), "H2O(l) from 175 °C"),
        (CONVERTER, (), "equilibrium at 1.37 bar"),
        (CONVERTER, ("--show", "cooling", "--stage", "bed 1"), "outlet of bed 1 at 1.37 bar"),
        (CONVERTER, ("--show", "lost work"), "lost work, kW"),
    ],
)
def test_predict_draws(case: Path, options: tuple[str, ...], words: str, tmp_path: Path) -> None:
    plot = tmp_path / "plot.svg"
    shown = run("predict", case, "--plot", plot, *options)
    assert "certified" in shown
    assert f"<!-- {words}" in words_in(plot) or words in words_in(plot)


def test_scan_draws_what_its_file_tells(tmp_path: Path) -> None:
    out, plot = tmp_path / "map.csv", tmp_path / "map.svg"
    run("scan", MAP, "--out", out, "--plot", plot, "--show", "dry fraction CH4")
    words = words_in(plot)
    assert "CH4(g) in the dry gas, mol %" in words
    assert "without C(graphite)" in words


def test_scan_along_one_axis(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    head, first, *_ = MAP.read_text().split("[[axis]]")
    case.write_text(f"{head}[[axis]]{first}")
    out, plot = tmp_path / "line.csv", tmp_path / "line.svg"
    run("scan", case, "--out", out, "--plot", plot, "--show", "dry", "--log")
    assert "dry gas, mol %" in words_in(plot)


def test_onset_draws(tmp_path: Path) -> None:
    plot = tmp_path / "onset.svg"
    run("onset", MAP, "--plot", plot)
    assert "with C(graphite)" in words_in(plot)
    text = MAP.read_text()
    target = text.replace(
        '[onset]\nphase = "C(graphite)"', '[target]\nresult = "dry fraction CH4"\nvalue = "20 %"'
    )
    assert target != text
    case = tmp_path / "case.toml"
    case.write_text(target)
    run("onset", case, "--plot", plot)
    assert "dry fraction CH4 20 %" in words_in(plot)


def test_what_is_wrong_is_told_before_any_work(tmp_path: Path) -> None:
    plot, out = tmp_path / "plot.svg", tmp_path / "map.csv"
    wrong = tmp_path / "plot.pdf"
    message = f'{wrong}: found the ending ".pdf"; accepted is a file that ends in .png, .svg.'
    assert run("predict", REFORMER, "--plot", wrong, code=2).strip() == message
    assert run("scan", MAP, "--out", out, "--plot", wrong, code=2).strip() == message
    assert run("onset", MAP, "--plot", wrong, code=2).strip() == message
    shown = run("predict", REFORMER, "--plot", plot, "--show", "heat", code=2)
    assert shown.strip() == (
        'show: found "heat" to show; accepted is one of beds, cooling, lost work.'
    )
    shown = run("scan", MAP, "--out", out, "--plot", plot, "--show", "y CH5(g)", code=2)
    assert shown.startswith('show: found "y CH5(g)", which the scan does not tell; accepted is a ')
    shown = run("scan", MAP, "--out", out, "--plot", plot, "--show", "heat", "--log", code=2)
    assert shown.strip() == (
        "log: found two axes to plot with a logarithmic ordinate; accepted is one axis."
    )
    assert not out.exists()
    assert not plot.exists()


def test_an_outlet_without_an_answer_has_no_plot(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    whole = predict(load_case(REFORMER))
    lost = replace(whole, stages=(replace(whole.final, status=Status.UNCERTIFIED),))
    monkeypatch.setattr("gibbsmin.jobs.predict.predict", lambda _: lost)
    plot = tmp_path / "plot.svg"
    shown = run("predict", REFORMER, "--plot", plot, code=1)
    assert shown.endswith("No plot was drawn: the outlet is not certified.\n")
    assert not plot.exists()
