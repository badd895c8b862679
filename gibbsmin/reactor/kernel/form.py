"""The compiled form of this kernel, once it pays."""

from __future__ import annotations

from gibbsmin.minimise.compiling import CompiledForm
from gibbsmin.reactor.kernel.deviations import deviate_states

_MODULES = ("rows", "system", "respond", "conditions", "deviations")
_INNERMOST = {"add", "copy", "deviation", "stands_in", "one_norm"}
_COMPILING = 15.0  # seconds


deviation_form = CompiledForm(
    deviate_states,
    [f"gibbsmin.reactor.kernel.{name}" for name in _MODULES],
    _INNERMOST,
    _COMPILING,
)
