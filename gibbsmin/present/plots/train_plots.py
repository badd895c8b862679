"""Plots of a train: conversion against temperature through its beds, and a cooling curve."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.predict import predict
from gibbsmin.jobs.train import Step, run_train
from gibbsmin.present.plots.style import COLOURS, label_ends, name_axes, new_figure, plain
from gibbsmin.present.quantities import heat_unit, significant
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates, solve_stage
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_ZERO_CELSIUS = 273.15
_POINTS = 241
_COOLING_POINTS = 1601
_COLDEST = 298.15
_TRACE = 1e-6


def plot_train(case: Case) -> Figure:
    """The beds of a staged converter where there are several, else the outlet's cooling curve."""
    beds = [s for s in case.stages if s.specification.heat == 0.0 and _reacts(s.chemistry)]
    return plot_converter(case) if len(beds) > 1 else plot_cooling(case)


def plot_converter(case: Case) -> Figure:
    """Conversion against temperature: the equilibrium line, each bed and each step between.

    The line is that of the feed at the first bed's pressure; a bed runs along its adiabatic line
    up to equilibrium at its own pressure.  The conversion is that of the substance of the feed
    that the first bed uses up most.
    """
    library = case.library
    steps = list(run_train(case, library))
    key = _key(steps[0])
    fed = _substance(steps[0], key, entering=True)
    figure, (axes,) = new_figure(case.title)
    T = float(steps[0].states.inlet.temperature[0])
    conversion = 0.0
    ends = [T]
    for step in steps:
        found = step.states.equilibria
        T_next = float(found.temperature[0])
        reached = 1.0 - _substance(step, key, entering=False) / fed
        bed = _reacts(step.stage.chemistry)
        axes.plot(
            [T - _ZERO_CELSIUS, T_next - _ZERO_CELSIUS],
            [100.0 * conversion, 100.0 * reached],
            color=COLOURS[1] if bed else COLOURS[2],
            linestyle="-" if bed else (0, (4, 2)),
            linewidth=1.8 if bed else 1.2,
            marker="o",
            markersize=3.5,
        )
        if bed:
            axes.annotate(
                plain(step.stage.name),
                xy=(T - _ZERO_CELSIUS, 100.0 * conversion),
                xytext=(-7, 0),
                textcoords="offset points",
                fontsize=9.0,
                color=COLOURS[1],
                ha="right",
                va="center",
                annotation_clip=False,
            )
        T, conversion = T_next, reached
        ends.append(T)
    line, shares = _equilibrium_line(steps[0], key, fed, ends, library)
    axes.plot(line - _ZERO_CELSIUS, 100.0 * shares, color=COLOURS[0], linewidth=1.8)
    pressure = float(steps[0].states.equilibria.pressure[0]) / 1e5
    axes.set_xlim(line[0] - _ZERO_CELSIUS, line[-1] - _ZERO_CELSIUS)
    axes.set_ylim(-2.0, 102.0)
    end = (line[-1] - _ZERO_CELSIUS, 100.0 * shares[-1])
    label_ends(axes, [(*end, f"equilibrium\n{significant(pressure, 3)} bar", COLOURS[0])])
    name_axes(axes, "temperature, °C", f"conversion of {key}, %")
    return figure


def plot_cooling(case: Case) -> Figure:
    """Temperature against heat removed, as the outlet cools at its pressure without reacting.

    Substances condense as they are; where a solid or liquid first appears the curve bends.

    Raises
    ------
    InputError
        for an outlet that is colder than 25 °C already.
    """
    library = case.library
    outlet = predict(case).final
    if outlet.temperature <= _COLDEST + 1.0:
        raise InputError(
            f"found an outlet at {outlet.temperature:.2f} K",
            f"accepted is one hotter than {_COLDEST} K, to cool",
            key="plot",
            file=case.file,
        )
    amounts = {
        record.name: amount
        for record, amount in zip(outlet.records, outlet.amounts.tolist(), strict=True)
        if amount > _TRACE * outlet.amounts.sum()
    }
    T = np.linspace(outlet.temperature, _COLDEST, _COOLING_POINTS)
    stream = Stream("outlet", np.full(T.size, T[0]), outlet.pressure, amounts, "mol", True)
    states = _cooled(stream, T, outlet.pressure, library)
    removed = -states.energy.heat / 1e3
    figure, (axes,) = new_figure(case.title)
    axes.plot(removed, T - _ZERO_CELSIUS, color=COLOURS[2], linewidth=1.9)
    for name, place in _first_appearances(states):
        axes.plot(removed[place], T[place] - _ZERO_CELSIUS, "o", color=COLOURS[1], markersize=4.5)
        axes.annotate(
            plain(f"{name} from {T[place] - _ZERO_CELSIUS:.0f} °C"),
            xy=(removed[place], T[place] - _ZERO_CELSIUS),
            xytext=(9, 9),
            textcoords="offset points",
            fontsize=9.0,
            color=COLOURS[1],
        )
    axes.set_xlim(0.0, float(np.nanmax(removed)) * 1.02)
    axes.set_ylim(bottom=0.0)
    pressure = significant(outlet.pressure / 1e5, 4)
    is_flow = case.feeds[0].is_flow
    name_axes(
        axes,
        f"heat removed from the outlet at {pressure} bar, {heat_unit(is_flow)}",
        "temperature, °C",
    )
    return figure


def _reacts(chemistry: Chemistry) -> bool:
    return chemistry.reactions == "equilibrium"


def _key(step: Step) -> str:
    """The substance that the first stage uses up most."""
    inlet = step.states.inlet
    used = [
        1.0 - _substance(step, record.name, entering=False) / float(amount)
        if amount > 0.0
        else -np.inf
        for record, amount in zip(inlet.records, inlet.amounts[0], strict=True)
    ]
    return inlet.records[int(np.argmax(used))].name


def _substance(step: Step, name: str, *, entering: bool) -> float:
    """Amount of a substance in all its forms, in a stage's inlet or outlet."""
    inlet, model = step.states.inlet, step.states.model
    formula = name.rpartition("(")[0]
    records = inlet.records if entering else model.records
    amounts = inlet.amounts[0] if entering else step.states.equilibria.amounts[0]
    return float(sum(n for r, n in zip(records, amounts, strict=True) if r.formula == formula))


def _equilibrium_line(
    first: Step, key: str, fed: float, ends: Sequence[float], library: Library
) -> tuple[FloatArray, FloatArray]:
    """Conversion of the feed at equilibrium, over the temperatures of the train."""
    margin = 0.12 * (max(ends) - min(ends)) + 10.0
    T = np.linspace(min(ends) - margin, max(ends) + margin, _POINTS)
    pressure = float(first.states.equilibria.pressure[0])
    streams = [
        replace(stream, temperature=np.full(T.size, stream.temperature)) for stream in first.streams
    ]
    states = solve_stage(
        first.stage.chemistry,
        Specification(temperature=T, pressure=pressure),
        None,
        streams,
        library,
    )
    formula = key.rpartition("(")[0]
    columns = [record.formula == formula for record in states.model.records]
    return T, 1.0 - states.equilibria.amounts[:, columns].sum(axis=1) / fed


def _cooled(stream: Stream, T: FloatArray, pressure: float, library: Library) -> StageStates:
    condensable = tuple(
        dict.fromkeys(
            library[name].formula
            for name in stream.amounts
            if any(f.phase is not Phase.GAS for f in library.forms(library[name].formula))
        )
    )
    return solve_stage(
        Chemistry(reactions="none", condense=condensable),
        Specification(temperature=T, pressure=pressure),
        None,
        [stream],
        library,
    )


def _first_appearances(states: StageStates) -> list[tuple[str, int]]:
    """Solids and liquids and where on the way down each first appears."""
    found = []
    amounts = states.equilibria.amounts
    for column, record in enumerate(states.model.records):
        present = np.flatnonzero(amounts[:, column] > 0.0)
        if record.phase is not Phase.GAS and present.size and present[0] > 0:
            found.append((record.name, int(present[0])))
    return found
