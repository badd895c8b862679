"""Which form of the minimiser's kernel serves: as it stands, or compiled."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from gibbsmin.minimise.compiling import CompiledForm
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
_SECONDS_PER_ENTRY = 4.5e-5  # measured: one state costs this times rows × (species + rows)
_COMPILING = 20.0  # seconds


class _Forms:
    """Which form serves next; one a process."""

    def __init__(self) -> None:
        self._form = CompiledForm(
            _entry,
            __file__,
            [f"gibbsmin.minimise.kernel.{name}" for name in _MODULES],
            _INNERMOST,
            _COMPILING,
        )

    def choose(self, network: Network, states: int) -> SolveStates:
        """The form for a batch, by what interpreting it would add to the time spent."""
        rows, species = network.matrix.shape
        seconds = states * rows * (species + rows) * _SECONDS_PER_ENTRY
        return self._form.after(seconds) or interpreted


def settle_form() -> None:
    """Choose the compiled forms once and for all, so that equal batches give equal bits.

    Both forms are right to the last digits, but not to the last bit.
    """
    CompiledForm.settle()


def interpreted(*arguments: Any) -> None:
    """:func:`solve_states` by the interpreter, with the compiled form's silence on overflow."""
    with np.errstate(all="ignore"):
        solve_states(*arguments)


def _entry(fingerprint: int) -> SolveStates:
    """An entry bound to the sources it is compiled from."""

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


forms = _Forms()
