"""A scan on a cluster gives the file that it gives alone, though a worker is killed."""

from __future__ import annotations

import json
import os
import signal
import threading
import time
from collections.abc import Iterator
from concurrent.futures import CancelledError
from copy import deepcopy
from pathlib import Path
from typing import Any

import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.errors import InputError, OutputError
from gibbsmin.jobs.conditions import conditions_of
from gibbsmin.present.cluster import blocks_on, connected
from gibbsmin.present.scan_parts import fingerprint_of
from gibbsmin.present.scan_run import run_scan

# dask and its event loop warn of things that are theirs to mend.
pytestmark = pytest.mark.filterwarnings("ignore")

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
        {"vary": "outlet.temperature", "first": "500 degC", "last": "900 degC", "count": 40},
        {"vary": "feed.gas.amounts.H2O", "first": 0.5, "last": 4.0, "count": 10},
    ],
}
BLOCK = 10
BLOCKS = 40


@pytest.fixture(scope="module")
def client() -> Iterator[Any]:
    from distributed import Client, LocalCluster

    with (
        LocalCluster(n_workers=2, threads_per_worker=1, dashboard_address=None) as cluster,
        Client(cluster) as client,
    ):
        yield client


def run(path: Path, client: Any = None) -> None:
    case = gibbsmin.load_case(deepcopy(CASE))
    fingerprint = fingerprint_of(json.dumps(CASE))
    run_scan(case, conditions_of(case), path, fingerprint, block=BLOCK, client=client)


def test_a_killed_worker_costs_no_row(tmp_path: Path, client: Any) -> None:
    alone, together = tmp_path / "alone.csv", tmp_path / "together.csv"
    run(alone)
    workers = client.run(os.getpid)
    assert len(workers) == 2
    left_at_the_kill = []

    def kill_midway() -> None:
        parts = tmp_path / "together.csv.parts"
        while len(list(parts.glob("block-*.npz"))) < 3:
            time.sleep(0.002)
        os.kill(next(iter(workers.values())), signal.SIGKILL)
        left_at_the_kill.append(BLOCKS - len(list(parts.glob("block-*.npz"))))

    killer = threading.Thread(target=kill_midway)
    killer.start()
    run(together, client)
    killer.join()
    assert left_at_the_kill[0] > 0, "the worker was lost while there was work left"
    assert together.read_bytes() == alone.read_bytes()


def test_a_worker_lost_again_and_again_is_one_sentence() -> None:
    case = gibbsmin.load_case(deepcopy(CASE))

    class Lost:
        def result(self) -> None:
            raise CancelledError

    class Client:
        def scatter(self, data: Any, **_: Any) -> Any:
            return data

        def submit(self, *_: Any, **__: Any) -> Lost:
            return Lost()

    take = blocks_on(Client(), case, conditions_of(case), BLOCK, uncertainty=False)
    with pytest.raises(OutputError) as error:
        take(0)
    assert str(error.value) == (
        "cluster: found that workers were lost again and again; accepted is the same command once "
        "more, which goes on where this stopped."
    )


def test_a_case_lost_with_its_only_worker_is_handed_out_again() -> None:
    case = gibbsmin.load_case(deepcopy(CASE))
    handed_out = []

    class Block:
        def __init__(self, number: int) -> None:
            self.number = number

        def result(self) -> int:
            if self.number == 1:
                raise CancelledError
            return self.number

    class Client:
        def scatter(self, data: Any, **_: Any) -> int:
            handed_out.append(data)
            return len(handed_out)

        def submit(self, *_: Any, shared: int, **__: Any) -> Block:
            return Block(shared)

    conditions = conditions_of(case)
    take = blocks_on(Client(), case, conditions, BLOCK, uncertainty=False)
    assert [take(0), take(1)] == [2, 2]
    assert handed_out == [(case, conditions)] * 2


def test_the_command_runs_on_workers_of_its_own(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_text(
        '[feed.gas]\ntemperature = "520 degC"\npressure = "30 bar"\nunit = "mol"\n'
        "amounts = { CH4 = 1, H2O = 3 }\n"
        '[outlet]\ntemperature = "850 degC"\npressure = "25 bar"\n'
        '[species]\nconsider = ["CH4", "H2O", "CO", "CO2", "H2"]\n'
        '[[axis]]\nvary = "outlet.temperature"\nvalues = ["700 degC", "800 degC"]\n'
    )
    out = tmp_path / "out.csv"
    arguments = ["scan", str(case), "--out", str(out), "--cluster", "local"]
    result = CliRunner().invoke(app, arguments)
    assert result.exit_code == 0, result.output
    assert len(out.read_text().splitlines()) == 3


def test_an_address_where_nothing_answers_is_one_sentence(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("gibbsmin.present.cluster._SECONDS", 0.5)
    with pytest.raises(InputError) as error, connected("tcp://127.0.0.1:9"):
        pass
    sentence = str(error.value)
    assert sentence.startswith('cluster: found no cluster at "tcp://127.0.0.1:9" (')
    assert sentence.endswith('); accepted is the address of a running scheduler, or "local".')
