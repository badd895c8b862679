"""The compiled form of this kernel, once it pays."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from gibbsmin.minimise.compiling import CompiledForm
from gibbsmin.reactor.kernel.deviations import deviate_states

_MODULES = ("rows", "system", "respond", "conditions", "deviations")
_INNERMOST = {"add", "copy", "deviation", "stands_in", "one_norm"}
_COMPILING = 15.0  # seconds


def _entry(fingerprint: int) -> Callable[..., Any]:
    """An entry bound to the sources it is compiled from."""

    def solve(
        laid: Any,
        states: Any,
        given: Any,
        scratch: Any,
        passed: Any,
        out: Any,
        first: int,
        last: int,
    ) -> int:
        deviate_states(laid, states, given, scratch, passed, out, first, last)
        return fingerprint

    return solve


deviation_form = CompiledForm(
    _entry,
    __file__,
    [f"gibbsmin.reactor.kernel.{name}" for name in _MODULES],
    _INNERMOST,
    _COMPILING,
)
