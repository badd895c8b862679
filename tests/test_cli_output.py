"""What reaches a terminal, a pipe or a full disk: legible figures, and no traceback."""

from __future__ import annotations

import os
import pty
import subprocess
import sys
from pathlib import Path

import pytest
from typer.testing import CliRunner

from gibbsmin.cli import app

CASE = Path(__file__).parents[1] / "examples" / "reformer" / "case.toml"
COMMAND = [sys.executable, "-c", "from gibbsmin.cli import main; main()"]


def run(*arguments: str, **settings: str) -> subprocess.CompletedProcess[bytes]:
    return subprocess.run(  # noqa: S603 - our own command
        [*COMMAND, *arguments], capture_output=True, env=os.environ | settings, check=False
    )


@pytest.mark.parametrize("encoding", ["latin-1", "cp1252", "cp437"])
def test_a_minus_sign_stays_one_in_any_encoding(encoding: str) -> None:
    done = run("reaction", "CO + H2O = CO2 + H2", "-t", "600 K", PYTHONIOENCODING=encoding)
    assert done.returncode == 0, done.stderr
    assert done.stderr == b""
    printed = done.stdout.decode(encoding)
    # ΔrH of the shift reaction, -38.9 kJ/mol at 600 K (NIST-JANAF tables, 1998)
    assert "-38." in printed
    assert "?" not in printed


def test_a_narrow_terminal_breaks_no_figure() -> None:
    main, terminal = pty.openpty()
    process = subprocess.Popen(  # noqa: S603 - our own command
        [*COMMAND, "predict", str(CASE)],
        stdout=terminal,
        env=os.environ | {"COLUMNS": "40", "LINES": "24"},
    )
    os.close(terminal)
    printed = b""
    try:
        while part := os.read(main, 65536):
            printed += part
    except OSError:
        pass  # Linux's way to say that the other end is closed
    os.close(main)
    assert process.wait() == 0
    lines = printed.decode().splitlines()
    (hydrogen,) = (line for line in lines if line.strip().startswith("H2(g)"))
    assert hydrogen.split() == ["H2(g)", "286.75", "48.308", "%", "72.641", "%", "gas"]


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no device that is always full")
def test_a_full_disk_is_one_sentence() -> None:
    with Path("/dev/full").open("wb") as full:
        done = subprocess.run(  # noqa: S603 - our own command
            [*COMMAND, "predict", str(CASE)], stdout=full, stderr=subprocess.PIPE, check=False
        )
    assert done.returncode == 2
    assert done.stderr == b"The output cannot be written: no space left on device.\n"


@pytest.mark.parametrize("name", ["show", "stage"])
def test_a_choice_without_a_plot_is_refused(name: str) -> None:
    result = CliRunner().invoke(app, ["predict", str(CASE), f"--{name}", "beds"])
    assert result.exit_code == 2
    assert result.stderr == (f"found --{name} without a plot; accepted is --plot FILE beside it.\n")
