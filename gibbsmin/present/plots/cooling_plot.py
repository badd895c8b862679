"""Cooling curve: temperature against the heat removed from an outlet."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.predict import predict
from gibbsmin.present.plots.labels import Placer, around, settle, way_of
from gibbsmin.present.plots.quantity import prefixed
from gibbsmin.present.plots.style import COLOURS, foot, name_axes, new_figure
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates, solve_stage
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import Outlet, StageOutlet
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_ZERO_CELSIUS = 273.15
_POINTS = 401
_FINE = 201
_COLDEST = 298.15
_TRACE = 1e-6


def plot_cooling(case: Case, stage: str = "") -> Figure:
    """Temperature against heat removed, as what a stage passes on cools without reacting.

    The pressure stays; substances condense and freeze as they are, and where a solid or liquid
    first appears the curve bends.  What is taken out of the outlet does not take part.

    Raises
    ------
    InputError
        for a stage that is not there, and for an outlet that is colder than 25 °C already or has
        no answer.
    """
    whole = predict(case)
    try:
        outlet = _outlet_of(whole, stage)
    except InputError as error:
        raise error.at(file=case.file) from None
    T = np.linspace(outlet.temperature, _COLDEST, _POINTS)
    states = _cooled(outlet, T, case.library)
    removed = -states.energy.heat
    factor, unit = prefixed(float(np.nanmax(removed)), whole.is_flow)
    removed, celsius = removed / factor, T - _ZERO_CELSIUS
    figure, (axes,) = new_figure(case.title)
    pressure = f"{outlet.pressure / 1e5:.4g} bar"
    name_axes(
        axes, f"heat removed from the {_called(outlet)} at {pressure}, {unit}", "temperature, °C"
    )
    missing = int(np.isnan(removed).sum())
    foot(figure, [f"{missing} of {T.size} points have no answer."] if missing else [])
    axes.plot(removed, celsius, color=COLOURS[2], linewidth=1.9)
    axes.set_xlim(0.0, 1.02 * float(np.nanmax(removed)))
    axes.set_ylim(0.0, 1.04 * float(celsius[0]))
    settle(figure)
    placer = Placer(axes, [way_of(axes, removed, celsius)])
    for name, at in _first_appearances(outlet, T, states, case.library):
        y = at - _ZERO_CELSIUS
        x = float(np.interp(-y, -celsius, removed))
        axes.plot(x, y, "o", color=COLOURS[1], markersize=4.5)
        spots = [spot for spot in around(x, y, 7.0) if spot.above] + around(x, y, 12.0)
        placer.place(f"{name} from {y:.0f} °C", spots, COLOURS[1])
    return figure


def _called(outlet: StageOutlet) -> str:
    return outlet.name if outlet.name.endswith("outlet") else f"outlet of {outlet.name}"


def _outlet_of(whole: Outlet, stage: str) -> StageOutlet:
    """The outlet to cool."""
    names = [each.name for each in whole.stages]
    if stage and stage not in names:
        raise InputError(
            f'found "{stage}", which is no stage', f"accepted is {', '.join(names)}", key="stage"
        )
    outlet = whole.stages[names.index(stage)] if stage else whole.final
    if not outlet.certified:
        raise InputError(
            f"found an outlet without an answer ({outlet.status.sentence.rstrip('.')})",
            "accepted is one that is certified, to cool",
            key="plot",
        )
    if outlet.temperature <= _COLDEST + 1.0:
        raise InputError(
            f"found an outlet at {outlet.temperature:.2f} K",
            f"accepted is one hotter than {_COLDEST} K, to cool",
            key="plot",
        )
    return outlet


def _cooled(outlet: StageOutlet, T: FloatArray, library: Library) -> StageStates:
    """What goes on from the outlet, at each temperature and its own pressure."""
    amounts = {
        record.name: amount - outlet.removed.get(record.name, 0.0)
        for record, amount in zip(outlet.records, outlet.amounts.tolist(), strict=True)
    }
    least = _TRACE * sum(amounts.values())
    amounts = {name: amount for name, amount in amounts.items() if amount > least}
    stream = Stream("outlet", np.full(T.size, T[0]), outlet.pressure, amounts, "mol", True)
    formulas = dict.fromkeys(library[name].formula for name in amounts)
    condensable = tuple(
        formula
        for formula in formulas
        if any(form.phase is not Phase.GAS for form in library.forms(formula))
    )
    return solve_stage(
        Chemistry(reactions="none", condense=condensable),
        Specification(temperature=T, pressure=outlet.pressure),
        None,
        [stream],
        library,
    )


def _first_appearances(
    outlet: StageOutlet, T: FloatArray, states: StageStates, library: Library
) -> Iterator[tuple[str, float]]:
    """Solids and liquids and the temperature from which each is there on the way down.

    The step of the curve in which one appears is cut into fine ones.
    """
    for name, place in _appearing(states):
        fine = np.linspace(T[place - 1], T[place], _FINE)
        known = dict(_appearing(_cooled(outlet, fine, library)))
        yield name, float(fine[known.get(name, _FINE - 1) - 1])


def _appearing(states: StageStates) -> Iterator[tuple[str, int]]:
    """Solids and liquids that are not there at first, and the first state that each is in."""
    amounts = states.equilibria.amounts
    for column, record in enumerate(states.model.records):
        present = np.flatnonzero(amounts[:, column] > 0.0)
        if record.phase is not Phase.GAS and present.size and present[0] > 0:
            yield record.name, int(present[0])
