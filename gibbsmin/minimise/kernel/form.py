"""One source, two forms: the kernel's functions as they stand, or compiled by numba.

Loading numba and a compiled form takes the better part of a second, and compiling half a minute,
which a single state does not repay: interpreted it takes milliseconds.  So a process interprets
until it has spent about what the compiled form would cost, and compiles from there on.  The
compiled form is kept on disk beside the sources, or in the user's cache where that place cannot
be written.
"""

from __future__ import annotations

import hashlib
import importlib
import threading
from collections.abc import Callable
from pathlib import Path
from types import FunctionType
from typing import Any

import numpy as np

from gibbsmin.minimise.kernel.states import solve_states
from gibbsmin.minimise.kernel.storage import Network

SolveStates = Callable[..., Any]

_MODULES = (
    "tableau",
    "simplex",
    "linear",
    "exponential",
    "residuals",
    "active_set",
    "heat",
    "log_newton",
    "search",
    "proof",
    "warm",
    "states",
)
_INNERMOST = {
    "evaluate_gas",
    "exponentials",
    "fill_residuals",
    "fill_jacobian",
    "solve_in_place",
    "update_phases",
    "evaluate_condensed",
    "most_supersaturated",
    "evaluate_energies",
    "reduce_enthalpies",
    "heat_residual",
    "border",
}
"""Called in every iteration: compiled into their callers, which saves handing over the arrays."""

_SECONDS_PER_ENTRY = 4.5e-5  # measured: one state costs this times rows × (species + rows)
_LOADING = 1.0  # seconds
_COMPILING = 20.0  # seconds
_OPTIONS: dict[str, Any] = {
    "error_model": "numpy",
    # Sums may be reordered for the vector unit; infinities and NaN keep their meaning.
    "fastmath": {"reassoc", "contract", "nsz", "arcp"},
    # The kernel allocates nothing, so counting references would only cost time.
    "_nrt": False,
}


class _Forms:
    """Which form serves next; one a process."""

    def __init__(self) -> None:
        self._lock = threading.Lock()
        self._spent = 0.0
        self._compiled: SolveStates | None = None

    def choose(self, network: Network, states: int) -> SolveStates:
        """The form for a batch, by what interpreting it would add to the time spent."""
        rows, species = network.matrix.shape
        with self._lock:
            self._spent += states * rows * (species + rows) * _SECONDS_PER_ENTRY
            if self._compiled is None and self._spent > _price():
                self._compiled = _compile()
            return self._compiled or interpreted

    def settle(self) -> None:
        """Serve the compiled form from here on, whatever the batches' sizes."""
        with self._lock:
            if self._compiled is None:
                self._compiled = _compile()


forms = _Forms()


def settle_form() -> None:
    """Choose the compiled form once and for all, so that equal batches give equal bits.

    Both forms are right to the last digits, but not to the last bit.
    """
    forms.settle()


def interpreted(*arguments: Any) -> None:
    """:func:`solve_states` by the interpreter, with the compiled form's silence on overflow."""
    with np.errstate(all="ignore"):
        solve_states(*arguments)


def _price() -> float:
    """Seconds that the compiled form costs, by whether one newer than the sources is on disk."""
    folder = Path(__file__).parent
    changed = max(source.stat().st_mtime for source in folder.glob("*.py"))
    kept = (folder / "__pycache__").glob(f"{Path(__file__).stem}.*.nbi")
    return _LOADING if any(file.stat().st_mtime > changed for file in kept) else _COMPILING


def _compile() -> SolveStates:
    """Hand every function of the kernel to numba and compile the entry on its first call."""
    from numba import njit
    from numba.extending import register_jitable

    sources = hashlib.sha256()
    for name in _MODULES:
        module = importlib.import_module(f"gibbsmin.minimise.kernel.{name}")
        sources.update(Path(str(module.__file__)).read_bytes())
        for function in vars(module).values():
            if isinstance(function, FunctionType) and function.__module__ == module.__name__:
                inlined = function.__name__ in _INNERMOST
                register_jitable(forceinline=inlined, **_OPTIONS)(function)
    entry = _entry(int.from_bytes(sources.digest()[:7]))
    compiled: SolveStates = njit(cache=True, nogil=True, **_OPTIONS)(entry)
    return compiled


def _entry(fingerprint: int) -> SolveStates:
    """An entry bound to the sources it is compiled from.

    numba keys its cache by the entry's own code and what it closes over; the fingerprint lets a
    change in any module of the kernel count.
    """

    def solve(
        network: Any,
        scratch: Any,
        energies: Any,
        supplies: Any,
        tolerances: Any,
        warm: Any,
        contents: Any,
        offsets: Any,
        temperatures: Any,
        answers: Any,
    ) -> int:
        solve_states(
            network,
            scratch,
            energies,
            supplies,
            tolerances,
            warm,
            contents,
            offsets,
            temperatures,
            answers,
        )
        return fingerprint

    return solve
