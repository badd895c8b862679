"""Which form of the minimiser's kernel serves: as it stands, or compiled."""

from __future__ import annotations

from collections.abc import Callable
from math import inf
from typing import Any, NamedTuple

import numpy as np

from gibbsmin.minimise.compiling import CompiledForm
from gibbsmin.minimise.kernel.lane_batch import solve_in_lanes
from gibbsmin.minimise.kernel.states import solve_states
from gibbsmin.minimise.kernel.storage import Network

Entry = Callable[..., Any]

_MODULES = (
    "tableau",
    "pivots",
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
    "loading",
    "states",
)
_VECTORS = ("vector", "vector_code")
_SIDE_BY_SIDE = ("elementary", "lane_equations", "lane_newton", "lane_proof")
_LANES = (*_MODULES, *_SIDE_BY_SIDE, "lane_between", "lane_batch")
_INNERMOST = {
    "exponential",
    "logarithm",
    "start_state",
    "take_given",
    "put_in",
    "curve",
    "set_node",
    "same_phases",
    "on_curve",
    "follow_curve",
    "retired_rows_hold",
    "store_lane",
    "take_state",
    "keep_state",
    "is_proved",
    "sum_listed",
    "weigh_row",
    "fill_entries",
    "feeds_gas",
    "forces_zero",
    "whole_face",
    "renew_reduced",
    "seen_from",
    "enter",
    "leaving_row",
    "known_after",
    "after_exchange",
    "renew_costs",
    "renew_supply",
    "find_feasible",
    "improve",
    "first_place",
    "same_signs",
    "sign_of",
    "set_costs",
    "restrict_to_face",
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


class Form(NamedTuple):
    """The kernel's entries: one state after another, and states in lanes where those pay."""

    solve_states: Entry
    solve_in_lanes: Entry | None


class _Forms:
    """Which form serves next; one a process."""

    def __init__(self) -> None:
        self._states = CompiledForm(solve_states, _named(_MODULES), _INNERMOST, _COMPILING)
        self._lanes = CompiledForm(
            solve_in_lanes,
            _named(_LANES),
            _INNERMOST,
            _COMPILING,
            in_order=_named(_SIDE_BY_SIDE),
            told=_named(_VECTORS),
        )

    def choose(self, network: Network, states: int) -> Form:
        """The form for a batch, by what interpreting it would add to the time spent."""
        rows, species = network.matrix.shape
        seconds = states * rows * (species + rows) * _SECONDS_PER_ENTRY
        one_by_one = self._states.after(seconds)
        return Form(one_by_one, self._lanes.after(inf)) if one_by_one else interpreted


def _named(modules: tuple[str, ...]) -> list[str]:
    return [f"gibbsmin.minimise.kernel.{name}" for name in modules]


def settle_form() -> None:
    """Choose the compiled forms once and for all, so that equal batches give equal bits.

    Both forms are right to the last digits, but not to the last bit.
    """
    CompiledForm.settle()


def _interpret(*arguments: Any) -> None:
    """:func:`solve_states` by the interpreter, with the compiled form's silence on overflow."""
    with np.errstate(all="ignore"):
        solve_states(*arguments)


interpreted = Form(_interpret, None)

forms = _Forms()
