"""A scan that was killed goes on where it stopped, and its file is that of an unbroken one."""

from __future__ import annotations

import json
import multiprocessing
import os
import signal
import subprocess
import sys
import time
from copy import deepcopy
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.errors import OutputError
from gibbsmin.jobs.conditions import conditions_of
from gibbsmin.present.scan_parts import fingerprint_of
from gibbsmin.present.scan_run import run_scan

CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0, "H2O": 3.0},
        }
    },
    "outlet": {"temperature": "850 degC", "pressure": "25 bar"},
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]},
    "axis": [
        {"vary": "outlet.temperature", "first": "500 degC", "last": "900 degC", "count": 60},
        {"vary": "feed.gas.amounts.H2O", "first": 0.5, "last": 4.0, "count": 5},
    ],
}
TOML = """
[feed.gas]
temperature = "520 degC"
pressure = "30 bar"
unit = "mol"
amounts = { CH4 = 1, H2O = 3 }
[outlet]
temperature = "850 degC"
pressure = "25 bar"
[species]
consider = ["CH4", "H2O", "CO", "CO2", "H2"]
"""
STEAM = """
[feed.steam]
temperature = "520 degC"
pressure = "30 bar"
unit = "mol"
amounts = { H2O = 1 }
"""
AXIS = """
[[axis]]
vary = "outlet.temperature"
first = "500 degC"
last = "900 degC"
count = 2_000_000
"""
BLOCK = 15
KILLS = 20


def write(path: Path, tables: dict[str, Any] = CASE) -> None:
    case = gibbsmin.load_case(deepcopy(tables))
    run_scan(case, conditions_of(case), path, fingerprint_of(json.dumps(tables)), block=BLOCK)


@pytest.mark.parametrize("ending", ["csv", "parquet"])
def test_after_twenty_kills_the_file_is_the_same(tmp_path: Path, ending: str) -> None:
    whole, broken = tmp_path / f"whole.{ending}", tmp_path / f"broken.{ending}"
    write(whole)
    longest = 1.0  # s; shortened whenever a run ends before its kill
    random = np.random.default_rng(20)
    fork = multiprocessing.get_context("fork")
    killed = 0
    for _ in range(400):
        process = fork.Process(target=write, args=(broken,))
        process.start()
        process.join(random.uniform(0.05, 1.0) * longest)
        if process.is_alive():
            assert process.pid is not None
            os.kill(process.pid, signal.SIGKILL)
            process.join()
            killed += 1
        else:
            longest *= 0.7
        if killed == KILLS:
            break
        if broken.exists():
            assert broken.read_bytes() == whole.read_bytes(), "it appears whole or not at all"
            broken.unlink()
    assert killed == KILLS
    write(broken)
    assert broken.read_bytes() == whole.read_bytes()
    # Scratch files of killed processes may stay; the folder of blocks does not.
    assert not broken.with_name(f"{broken.name}.parts").exists()


def test_finished_blocks_are_not_solved_again(tmp_path: Path) -> None:
    path = tmp_path / "scan.csv"
    case = gibbsmin.load_case(deepcopy(CASE))
    folder = tmp_path / "scan.csv.parts"
    process = multiprocessing.get_context("fork").Process(target=write, args=(path,))
    process.start()
    while len(list(folder.glob("block-*.npz"))) < 4:  # they need not end in their order
        time.sleep(0.001)
    os.kill(process.pid or 0, signal.SIGKILL)
    process.join()
    stamps = {part.name: part.stat().st_mtime_ns for part in folder.glob("block-*.npz")}
    assert len(stamps) >= 4
    seen = []

    def blocks() -> None:
        from gibbsmin.jobs.scan import scan_block
        from gibbsmin.present.scan_parts import kept_blocks

        conditions = conditions_of(case)

        def solve(index: int) -> Any:
            seen.append(index)
            return scan_block(case, conditions, index * BLOCK, (index + 1) * BLOCK)

        for _ in kept_blocks(path, fingerprint_of(json.dumps(CASE)), 20, solve):
            pass

    blocks()
    assert sorted(seen) == [k for k in range(20) if f"block-{k:06d}.npz" not in stamps]
    assert {p.name: p.stat().st_mtime_ns for p in folder.glob("block-*.npz")}.items() >= (
        stamps.items()
    )


def test_a_scan_broken_off_from_the_keyboard_says_how_to_go_on(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_text(TOML + AXIS)
    arguments = ["scan", str(case), "--out", str(tmp_path / "scan.csv")]
    process = subprocess.Popen(  # noqa: S603 our own command
        [sys.executable, "-c", "from gibbsmin.cli import main; main()", *arguments],
        stderr=subprocess.PIPE,
        text=True,
    )
    parts = tmp_path / "scan.csv.parts"
    while process.poll() is None and not list(parts.glob("block-*.npz")):
        time.sleep(0.005)
    process.send_signal(signal.SIGINT)
    _, told = process.communicate(timeout=60)
    assert told == "Broken off; the same command goes on where this stopped.\n"
    assert process.returncode == 130
    assert sorted(path.name for path in tmp_path.iterdir()) == ["case.toml", "scan.csv.parts"]


def test_a_plot_of_a_table_is_refused_before_any_work(tmp_path: Path) -> None:
    arguments = ["scan", "case.toml", "--table", "runs.csv", "--plot", "map.png"]
    result = CliRunner().invoke(app, [*arguments, "--out", str(tmp_path / "out.csv")])
    assert result.exit_code == 2
    assert result.output == (
        "plot: found a plot of a table of conditions; accepted is a plot of a grid of one or two "
        "axes.\n"
    )


def test_blocks_of_another_case_are_refused(tmp_path: Path) -> None:
    path = tmp_path / "scan.csv"
    folder = tmp_path / "scan.csv.parts"
    folder.mkdir()
    (folder / "fingerprint.txt").write_text("another")
    (folder / "block-000000.npz").write_bytes(b"")
    with pytest.raises(OutputError) as error:
        write(path)
    assert str(error.value) == (
        f"{folder}: found blocks of another case, other conditions or other options; accepted is "
        "another file to write, or scan.csv once this folder is removed."
    )


def test_a_scan_that_was_refused_does_not_stand_in_the_way_of_the_mended_one(
    tmp_path: Path,
) -> None:
    case = tmp_path / "case.toml"
    axis = '[[axis]]\nratio = "H2O/C"\nscale = "{}"\nvalues = [3, 4]\n'
    out = tmp_path / "out.csv"
    arguments = ["scan", str(case), "--out", str(out)]
    case.write_text(TOML + STEAM + axis.format("steem"))
    result = CliRunner().invoke(app, arguments)
    assert (result.exit_code, result.output) == (
        2,
        f'{case}: axis.H2O/C: found "steem" to be scaled, which is no stream; accepted is one of '
        "gas, steam.\n",
    )
    assert [path.name for path in tmp_path.iterdir()] == ["case.toml"]
    case.write_text(TOML + STEAM + axis.format("steam"))
    result = CliRunner().invoke(app, arguments)
    assert (result.exit_code, result.output) == (
        0,
        f"2 states written to {out}.\nThe gas is taken as ideal; an equation of state would move "
        "CH4(g) from about 1.84 % to 1.86 % at 1123.2 K and 25 bar: "
        'set gas = "Soave-Redlich-Kwong".\n',
    )


def test_states_that_are_refused_are_counted(tmp_path: Path) -> None:
    case, table, out = (tmp_path / name for name in ("case.toml", "runs.csv", "out.csv"))
    case.write_text(TOML.replace('pressure = "25 bar"', 'pressure_drop = "1 bar"'))
    rows = ["2", "31", "3"]
    table.write_text("\n".join(['"outlet.pressure_drop, bar"', *rows]))
    arguments = ["scan", str(case), "--table", str(table), "--out", str(out)]
    result = CliRunner().invoke(app, arguments)
    assert result.exit_code == 1
    assert result.output == (
        f"3 states written to {out}; 1 of them is not certified and carries its reason.\n"
        "The gas is taken as ideal; an equation of state would move CH4(g) from about 3.92 % to "
        '3.96 % at 1123.2 K and 28 bar: set gas = "Soave-Redlich-Kwong".\n'
    )
    third = out.read_text().splitlines()[2]
    assert third.endswith(
        "outlet.pressure_drop: found a drop of 31 bar from 30 bar; accepted is a drop that leaves "
        "a pressure above zero."
    )


def test_the_command_takes_a_table_and_error_bars(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_text(TOML + '[uncertainty]\noutlet.temperature = "5 K"\n')
    table = tmp_path / "runs.csv"
    table.write_text('label,"outlet.temperature, degC"\nmonday,800\n=tuesday,820\n')
    out = tmp_path / "out.csv"
    arguments = ["scan", str(case), "--table", str(table), "--out", str(out), "--uncertainty"]
    result = CliRunner().invoke(app, arguments)
    assert result.exit_code == 0, result.output
    assert result.output == f"2 states written to {out}.\n"
    lines = out.read_text().splitlines()
    assert lines[0].startswith('label,"outlet.temperature, degC",status,gap,"temperature, K"')
    assert '"u(temperature), K"' in lines[0]
    assert lines[2].startswith("'=tuesday,820.0,certified")


def test_a_missing_table_is_one_sentence(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_text(TOML)
    missing = tmp_path / "none.csv"
    for path, sentence in (
        (missing, f"{missing}: found no such file; accepted is a table that exists."),
        (
            tmp_path / "none.txt",
            f'{tmp_path / "none.txt"}: found the ending ".txt"; accepted is a table in .csv, '
            ".xlsx, .parquet.",
        ),
    ):
        arguments = ["scan", str(case), "--table", str(path), "--out", str(tmp_path / "o.csv")]
        result = CliRunner().invoke(app, arguments)
        assert result.exit_code == 2
        assert result.output.strip() == sentence
