"""What batches of stages cost beside the minimiser: ratios within one run.

    cd tests; ../.venv/bin/python -m benchmarks.batches [states]

prints, on all cores: what a scan adds to the minimiser's own time on a reformer grid, what an
adiabatic batch costs beside an isothermal one, what error bars cost and what a real gas; before
that how a million states stream to a file.  Processor time counts all threads, and is moved less
by what else is running.
"""

from __future__ import annotations

import sys
import tempfile
from collections.abc import Callable
from copy import deepcopy
from dataclasses import replace
from pathlib import Path
from resource import RUSAGE_SELF, getrusage
from time import perf_counter, process_time
from typing import Any

import numpy as np

import gibbsmin
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import conditions_of
from gibbsmin.jobs.stated import Correlation, StatedUncertainty
from gibbsmin.jobs.train import run_train
from gibbsmin.minimise import minimise, minimise_heated, settle_form
from gibbsmin.present.scan_run import run_scan

CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "29 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0, "C2H6": 0.03, "N2": 0.02},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "29 bar",
            "unit": "mol",
            "amounts": {"H2O": 3.0},
        },
        "air": {
            "temperature": "700 degC",
            "pressure": "29 bar",
            "unit": "mol",
            "amounts": {"O2": 0.5, "N2": 1.88},
        },
    },
    "species": {"consider": ["CH4", "C2H6", "H2O", "CO", "CO2", "H2", "N2", "O2", "C(graphite)"]},
}
STEAM = {"vary": "feed.steam.amounts.H2O", "first": "2 mol", "last": "4 mol", "count": 100}
AMMONIA: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "400 degC",
            "pressure": "300 bar",
            "unit": "mol",
            "amounts": {"H2": 3.0, "N2": 1.0, "CH4": 0.1, "Ar": 0.05, "NH3": 0.1},
        }
    },
    "outlet": {"temperature": "470 degC", "pressure": "150 bar"},
    "species": {"consider": ["H2", "N2", "NH3", "CH4", "Ar"], "inert": ["CH4", "Ar"]},
    "axis": [
        {"vary": "outlet.temperature", "first": "350 degC", "last": "550 degC", "count": 200},
        {"vary": "outlet.pressure", "first": "80 bar", "last": "300 bar", "count": 100},
    ],
}
REAL = "Soave-Redlich-Kwong"
REPEATS = 5


def best(task: Callable[[], object], clock: Callable[[], float] = perf_counter) -> float:
    """Shortest of some runs, s."""
    times = []
    for _ in range(REPEATS):
        begun = clock()
        task()
        times.append(clock() - begun)
    return min(times)


def cases(states: int) -> tuple[Case, Case]:
    """The same stage at given temperatures, and adiabatic over the preheat."""
    count = states // 100
    outlet = {"vary": "outlet.temperature", "first": "800 degC", "last": "1100 degC"}
    preheat = {"vary": "feed.gas.temperature", "first": "300 degC", "last": "600 degC"}
    at_temperature = deepcopy(CASE) | {
        "outlet": {"temperature": "900 degC", "pressure": "25 bar"},
        "axis": [outlet | {"count": count}, STEAM],
    }
    adiabatic = deepcopy(CASE) | {
        "outlet": {"heat": "0 kJ", "pressure": "25 bar"},
        "axis": [preheat | {"count": count}, STEAM],
    }
    return gibbsmin.load_case(at_temperature), gibbsmin.load_case(adiabatic)


def real_gas_ratio(tables: dict[str, Any]) -> float:
    """Processor time of a scan with a real gas over that with an ideal one."""
    times = []
    for gas in (REAL, "ideal"):
        given = deepcopy(tables)
        given["outlet"]["gas"] = gas
        case = gibbsmin.load_case(given)
        times.append(best(lambda c=case: list(gibbsmin.scan_blocks(c)), process_time))
    return times[0] / times[1]


def unsure(case: Case) -> Case:
    """The case with unsure feeds and conditions, and correlated enthalpies."""
    numbers = {
        "feed.gas.amounts.CH4(g)": 0.01,
        "feed.steam": 0.02,
        "outlet.pressure": 0.005,
    }
    stated = [StatedUncertainty(name, share, is_share=True) for name, share in numbers.items()]
    stated.append(StatedUncertainty("outlet.temperature", 3.0, is_share=False))
    together = (Correlation("CO(g).enthalpy", "CO2(g).enthalpy", 0.7),)
    return replace(case, uncertainties=tuple(stated), correlations=together)


def cost_of_error_bars(case: Case) -> tuple[float, float]:
    """A scan with them over one without, in time and in processor time.

    Both take turns, so that what else is running weighs on both.
    """
    times = np.empty((REPEATS, 2, 2))
    for repeat in range(REPEATS):
        for which in range(2):
            begun = perf_counter(), process_time()
            list(gibbsmin.scan_blocks(case, uncertainty=bool(which)))
            times[repeat, which] = perf_counter() - begun[0], process_time() - begun[1]
    shortest = times.min(axis=0)
    wall, used = (shortest[1] / shortest[0]).tolist()
    return wall, used


def stream(states: int) -> None:
    """A grid written to .parquet as the command does it; peak memory of the process."""
    case = cases(states)[0]
    with tempfile.TemporaryDirectory() as folder:
        begun = perf_counter()
        run_scan(case, conditions_of(case), Path(folder) / "grid.parquet", "benchmark")
        seconds = perf_counter() - begun
    peak = getrusage(RUSAGE_SELF).ru_maxrss / 1024
    print(f"{states} states to .parquet in {seconds:.1f} s, peak memory {peak:.0f} MB")


def main() -> None:
    states = int(sys.argv[1]) if len(sys.argv) > 1 else 100_000
    stream(10 * states)  # first, so that the peak is its own
    settle_form()
    isothermal, adiabatic = cases(states)
    programmes = []
    for case in (isothermal, adiabatic):
        grid = conditions_of(case)
        values = [inside for inside, _ in grid.block(0, grid.states)]
        varied = applied(case, case.axes, values, case.library)
        found = next(iter(run_train(varied, case.library))).states
        at, inlet = found.equilibria, found.inlet
        if case is isothermal:
            problem = found.model.programme(at.temperature, at.pressure, inlet.amounts)
            programmes.append(best(lambda p=problem: minimise(p)))
        else:
            heated = found.model.heated_programme(
                inlet.enthalpy, at.pressure, inlet.amounts, inlet.temperature
            )
            programmes.append(best(lambda p=heated: minimise_heated(*p)))
    grid_of_scan = cases(states)[0]
    processor = best(lambda: list(gibbsmin.scan_blocks(grid_of_scan)), process_time)
    processor /= best(lambda: minimise(problem), process_time)
    scans = [best(lambda c=case: list(gibbsmin.scan_blocks(c))) for case in (isothermal, adiabatic)]
    bars = [cost_of_error_bars(case) for case in (isothermal, adiabatic, unsure(isothermal))]
    print(f"{states} states of a reformer with air, all cores, best of {REPEATS}")
    print(f"minimiser alone, at temperature     {1e6 * programmes[0] / states:8.2f} µs a state")
    print(f"minimiser alone, adiabatic          {programmes[1] / programmes[0]:8.2f} times that")
    print(
        f"scan, at temperature                {scans[0] / programmes[0]:8.2f} times the minimiser"
    )
    print(f"the same in processor time          {processor:8.2f} times")
    print(
        f"scan, adiabatic                     {scans[1] / scans[0]:8.2f} times that at temperature"
    )
    for kind, (wall, used) in zip(
        ("at temperature", "adiabatic", "unsure feeds"), bars, strict=True
    ):
        print(f"error bars, {kind:<23} {wall:8.2f} times the scan ({used:.2f} in processor time)")
    preheat = {"vary": "feed.gas.temperature", "first": "300 degC", "last": "400 degC"}
    adiabatic_ammonia = AMMONIA | {
        "outlet": {"heat": "0 kJ", "pressure": "150 bar"},
        "axis": [preheat | {"count": 200}, AMMONIA["axis"][1]],
    }
    outlet = {"vary": "outlet.temperature", "first": "600 degC", "last": "950 degC", "count": 200}
    reformer = CASE | {
        "outlet": {"temperature": "900 degC", "pressure": "40 bar"},
        "axis": [outlet, STEAM],
    }
    for label, tables in (
        ("reformer", reformer),
        ("ammonia", AMMONIA),
        ("ammonia, adiabatic", adiabatic_ammonia),
    ):
        print(f"real gas, {label:<19}{real_gas_ratio(tables):15.2f} times an ideal one")


if __name__ == "__main__":
    main()
