"""The report of checked samples: what it says, that it is safe, and how a browser shows it."""

from __future__ import annotations

import re
import shutil
import subprocess
from html.parser import HTMLParser
from pathlib import Path

import pandas as pd
import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.jobs.history import history_of, trend_sentences
from gibbsmin.present.report import report_page
from gibbsmin.sample.findings import Checks, Verdict

HISTORY = Path(__file__).parents[2] / "examples" / "reformer_history"


@pytest.fixture(scope="module")
def checks() -> Checks:
    case = gibbsmin.load_case(HISTORY / "case.toml")
    return gibbsmin.check(case, pd.read_csv(HISTORY / "samples.csv"))


def test_the_history_tells_the_truth_that_was_put_in(checks: Checks) -> None:
    """Loss of activity of 20 K over 59 weeks, CO2 read high in week 23, the steam meter from 41."""
    series = {each.name: each.trend for each in history_of(checks)}
    approach = series["T − T_eq of CH4(g) + H2O(g) = CO(g) + 3 H2(g)"]
    assert approach is not None
    assert approach.drifts(0.01)
    assert approach.slope == pytest.approx(20.0 / 59.0, abs=0.15)
    meter = series["Adjustment of flow of steam"]
    assert meter is not None
    assert meter.changes(0.01)
    assert abs(meter.change - 40) <= 1
    bad = checks.samples[22]
    assert bad.label == "week 23"
    assert bad.judgement.verdict is Verdict.NOT_CREDIBLE
    assert "CO2" in bad.suspects.names
    sentences = trend_sentences(checks, history_of(checks))
    assert sentences[-1] == (
        "Tested: 5 series, drift by Mann and Kendall, change by Pettitt, each with false alarms of "
        "1 %, if samples are independent."
    )


def test_before_the_meter_drifts_hardly_a_sample_is_called_incredible(checks: Checks) -> None:
    """At the 1 % level, of 40 samples with one bad day: a few false alarms at most."""
    early = [s.judgement.verdict is Verdict.NOT_CREDIBLE for s in checks.samples[:40]]
    assert early[22]
    assert sum(early) <= 4


class _Reader(HTMLParser):
    """Collects tags, and checks that what is opened is closed."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.seen: set[str] = set()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.seen.add(tag)
        if tag not in ("meta", "path", "use", "rect", "br"):
            self.open.append(tag)
        for name, value in attrs:
            if name in ("src", "href") or name.endswith(":href"):
                assert value is None or value.startswith("#"), "nothing is fetched"

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:  # noqa: ARG002 the parser calls it so
        self.seen.add(tag)

    def handle_endtag(self, tag: str) -> None:
        if tag in self.open:
            while self.open.pop() != tag:
                pass


def test_the_page_stands_by_itself(checks: Checks) -> None:
    page = report_page(checks)
    reader = _Reader()
    reader.feed(page)
    assert not reader.open
    assert {"svg", "table", "h1"} <= reader.seen
    assert "script" not in reader.seen
    assert "@page { size: A4" in page
    assert "Equilibrium is a limit, not a rate" in page
    for source in checks.sources:
        assert source[:30].replace("&", "&amp;") in page


def test_text_from_files_is_escaped(tmp_path: Path) -> None:
    table = pd.read_csv(HISTORY / "samples.csv").head(3)
    table["time"] = ["<script>alert(1)</script>", "a & b", "$x$"]
    text = (HISTORY / "case.toml").read_text(encoding="utf-8")
    case = tmp_path / "case.toml"
    case.write_text(text.replace("Steam reformer", "<b>Steam</b> reformer"), encoding="utf-8")
    page = report_page(gibbsmin.check(gibbsmin.load_case(case), table))
    assert "<script>" not in page
    assert "<b>Steam" not in page
    assert "&lt;script&gt;alert(1)&lt;/script&gt;" in page
    assert "a &amp; b" in page


def test_the_command_writes_the_page(tmp_path: Path) -> None:
    page = tmp_path / "report.html"
    arguments = ["check", str(HISTORY / "case.toml"), "--samples", str(HISTORY / "samples.csv")]
    result = CliRunner().invoke(app, [*arguments, "--report", str(page)])
    assert result.exit_code == 0, result.output
    assert page.read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    assert "Over time" in result.output
    result = CliRunner().invoke(app, [*arguments, "--report", str(tmp_path / "report.pdf")])
    assert result.exit_code == 2
    assert result.output.strip() == (
        f'{tmp_path / "report.pdf"}: found the ending ".pdf"; accepted is a file that ends in '
        ".html."
    )


@pytest.mark.skipif(shutil.which("chromium") is None, reason="no headless Chromium here")
@pytest.mark.parametrize("width", [390, 1400])
def test_a_browser_shows_it_without_sideways_scrolling(
    checks: Checks, tmp_path: Path, width: int
) -> None:
    """The page itself is never wider than the window: wide tables scroll by themselves."""
    probe = "<script>document.title = 'W' + document.documentElement.scrollWidth</script></body>"
    page = tmp_path / "report.html"
    page.write_text(report_page(checks).replace("</body>", probe), encoding="utf-8")
    shown = subprocess.run(  # noqa: S603 our own page in a browser of the system
        [
            str(shutil.which("chromium")),
            "--headless",
            "--no-sandbox",
            "--disable-gpu",
            f"--user-data-dir={tmp_path / 'profile'}",
            f"--window-size={width},1200",
            "--dump-dom",
            page.as_uri(),
        ],
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )
    found = re.search(r"<title>W(\d+)</title>", shown.stdout)
    assert found is not None, shown.stderr[-500:]
    # A headless window is no narrower than 500 pixels.
    assert int(found[1]) <= max(width, 500)
