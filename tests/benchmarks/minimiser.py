"""Time the minimiser's methods against each other: ``python -m benchmarks.minimiser``.

Run from ``tests/``.  Prints, for each system, µs a state of two parametrised conic loops, of the
compiled method cold and warm, and their ratios, all on one core in one run; then what happened
to the torture set, the agreement of the two methods and a streamed grid's memory.

The plain loop writes the total amount of gas as a sum in each cone, as one would at first; the
sparse one gives it a variable of its own, which many gases need.  Both run at the solver's own
tolerances, where amounts are right to some 1e-5 of the total; the compiled method's are to 1e-13.
"""

from __future__ import annotations

import argparse
import resource
import sys
import time
from collections.abc import Iterator

import cvxpy as cp
import numpy as np
from benchmarks.systems import grid, ordinary, systems, torture

from gibbsmin.minimise import Method, Programme, Settings, Status, minimise, minimise_blocks

LOOP_STATES = {"reformer": 60, "combustion": 40, "sulphur": 40, "big": 8}
GRIDS = {
    "reformer": (200, 100),
    "combustion": (200, 50),
    "sulphur": (200, 50),
    "big": (200, 10),
}
COLD = Settings(threads=1, warm_start=False)
WARM = Settings(threads=1)


def best(programme: Programme, settings: Settings, repeats: int = 3) -> float:
    """Shortest of some runs, in µs a state."""
    seconds = []
    for _ in range(repeats):
        start = time.perf_counter()
        minimise(programme, settings)
        seconds.append(time.perf_counter() - start)
    return 1e6 * min(seconds) / programme.states


def conic_loop(programme: Programme, *, sparse: bool) -> float:
    """Median µs a state of one parametrised cvxpy problem, solved again for each state."""
    rows, species = programme.matrix.shape
    gases = int(programme.gas.sum())
    order = np.argsort(~programme.gas, kind="stable")
    energies, supplies = cp.Parameter(species), cp.Parameter(rows)
    n = cp.Variable(species, nonneg=True)
    total = cp.Variable() if sparse else cp.sum(n[:gases])
    mixing = cp.sum(cp.rel_entr(n[:gases], total * np.ones(gases)))
    constraints = [programme.matrix[:, order] @ n == supplies]
    if sparse:
        constraints.append(total == cp.sum(n[:gases]))
    problem = cp.Problem(cp.Minimize(mixing + energies @ n), constraints)
    seconds = []
    for state in range(programme.states):
        energies.value = programme.energies[state, order]
        supplies.value = programme.supplies[state]
        start = time.perf_counter()
        try:
            problem.solve(solver=cp.CLARABEL)
        except cp.SolverError:
            continue
        seconds.append(time.perf_counter() - start)
    return 1e6 * float(np.median(seconds[1:]))  # the first solve also builds the problem


def speed() -> None:
    """Table of µs a state and ratios."""
    print(
        f"{'system':<12}{'rows×species':>14}{'plain loop':>12}{'sparse loop':>12}{'cold':>8}"
        f"{'ratios':>12}{'grid cold':>11}{'warm':>8}{'ratio':>7}{'two threads':>13}"
    )
    for name, system in systems().items():
        minimise(ordinary(name, 20_000), COLD)  # load the compiled form
        many = ordinary(name, 10_000)
        few = ordinary(name, LOOP_STATES[name])
        plain, sparse = conic_loop(few, sparse=False), conic_loop(few, sparse=True)
        cold = best(many, COLD)
        points = grid(name, *GRIDS[name])
        grid_cold, grid_warm = best(points, COLD), best(points, WARM)
        both = best(many, Settings(threads=2, warm_start=False))
        size = f"{len(system.elements)}×{len(system.records)}"
        print(
            f"{name:<12}{size:>14}{plain:>12.0f}{sparse:>12.0f}{cold:>8.2f}"
            f"{plain / cold:>7.0f}{sparse / cold:>5.0f}"
            f"{grid_cold:>11.2f}{grid_warm:>8.2f}{grid_cold / grid_warm:>7.2f}"
            f"{cold / both:>12.2f}×"
        )


def reliability(states: int) -> None:
    """Which method answered ordinary and torture states."""
    for name in systems():
        for kind in (ordinary, torture):
            solution = minimise(kind(name, states))
            methods = ", ".join(
                f"{method.name.lower()} {np.sum(solution.method == method)}" for method in Method
            )
            unsolved = np.sum(solution.status != Status.CERTIFIED)
            print(f"{name:<12}{kind.__name__:<10}{states} states, unsolved {unsolved}: {methods}")


def agreement(states: int) -> None:
    """Largest difference of the two methods' amounts, relative to the total."""
    for name in systems():
        programme = ordinary(name, states, seed=11)
        fast, slow = minimise(programme), minimise(programme, Settings(compiled=False))
        both = fast.certified & slow.certified
        total = fast.amounts[both].sum(axis=1, keepdims=True)
        difference = np.abs(fast.amounts[both] - slow.amounts[both]) / total
        condensed = ~programme.gas
        phases = (fast.amounts[both][:, condensed] > 0) == (slow.amounts[both][:, condensed] > 0)
        print(
            f"{name:<12}{both.sum()}/{states} proved by both, largest difference "
            f"{difference.max():.1e}, other phases in {np.sum(~phases.all(axis=1))}"
        )


def stream(states: int) -> None:
    """A reformer grid of many states in blocks; peak memory of the process."""
    block = 100_000

    def blocks() -> Iterator[Programme]:
        for first in range(0, states, block):
            pressure = 1.0 + 20.0 * first / states
            T = np.linspace(700.0, 1300.0, block)
            supplies = np.repeat(ordinary("reformer", 1, seed=5).supplies, block, axis=0)
            yield systems()["reformer"].programme(T, np.full(block, pressure), supplies)

    start = time.perf_counter()
    certified = sum(int(solution.certified.sum()) for solution in minimise_blocks(blocks()))
    seconds = time.perf_counter() - start
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"streamed {certified}/{states} certified in {seconds:.0f} s, peak memory {peak:.0f} MB")


def main() -> None:
    """Run the parts asked for."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("parts", nargs="*", default=["speed", "reliability", "agreement", "stream"])
    parser.add_argument("--agreement", type=int, default=500, help="states a system")
    parser.add_argument("--states", type=int, default=20_000, help="states for reliability")
    parser.add_argument("--stream", type=int, default=10_000_000, help="states to stream")
    options = parser.parse_args(sys.argv[1:])
    if "stream" in options.parts:
        stream(options.stream)  # first, so that the peak is its own
    if "speed" in options.parts:
        speed()
    if "reliability" in options.parts:
        reliability(options.states)
    if "agreement" in options.parts:
        agreement(options.agreement)


if __name__ == "__main__":
    main()
