"""The compiled form of this kernel, once it pays."""

from __future__ import annotations

from gibbsmin.minimise.compiling import CompiledForm
from gibbsmin.reactor.kernel.deviations import deviate_states

_MODULES = ("rows", "system", "respond", "conditions", "deviations")
_INLINED = {
    "add",
    "copy",
    "deviation",
    "stands_in",
    "one_norm",
    "invert",
    "choose_basis",
    "solve_gas",
    "fill_energies",
    "fill_supplies",
    "respond",
    "fill_contents",
    "take_off_inlet",
    "follow",
    "settle_conditions",
    "write_conversions",
    "write_deviations",
    "deviate_states",
}
"""All but the entry: each is called in one place, and has many arrays to be handed over."""

_COMPILING = 15.0  # seconds


deviation_form = CompiledForm(
    deviate_states,
    [f"gibbsmin.reactor.kernel.{name}" for name in _MODULES],
    _INLINED,
    _COMPILING,
)
