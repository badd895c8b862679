"""Conversion against temperature through adiabatic beds, as staged converters are designed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.train import Step, run_train
from gibbsmin.present.plots.labels import Placer, Spot, around, settle, way_of
from gibbsmin.present.plots.style import COLOURS, foot, name_axes, new_figure
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import solve_stage
from gibbsmin.thermo.library import Library

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

_ZERO_CELSIUS = 273.15
_POINTS = 241
_POINTS_IN_BED = 41
_SAME_LINE = 1.0
"""Per cent of conversion within which the equilibria of two beds share a line."""

_HEADROOM = 113.0
"""Per cent at the head of the plot, so that labels of the last beds find room above 100 %."""

_SAME_PLACE = 0.01
_AROUND = 150.0
"""K about the mean of what is mixed before a bed, within which its own temperature is."""

_SPOTS = 41
_FAR = (12.0, 20.0, 30.0, 42.0)
_SOLID, _DASHED = "-", (0, (4, 2))


@dataclass(frozen=True)
class _Path:
    """One step's way through the plot: temperatures (K) and conversions of the key (%)."""

    step: Step
    fed: float
    T: FloatArray
    conversion: FloatArray

    @property
    def is_bed(self) -> bool:
        return _is_bed(self.step.stage)


def beds_of(case: Case) -> list[StageCase]:
    """The adiabatic stages in which reactions run."""
    return [stage for stage in case.stages if _is_bed(stage)]


def plot_beds(case: Case) -> Figure:
    """Each adiabatic bed's operating line up to equilibrium, and the steps between the beds.

    Conversion is of the substance that most beds use up, of what entered the first of them and
    what joined since.  Along a bed's line the temperature follows from its enthalpy balance.  An
    equilibrium line is that of what enters a bed, at the bed's outlet pressure; beds whose lines
    are within 1 % share one.

    Raises
    ------
    InputError
        for a case without an adiabatic bed, and for one with a stage that has no answer.
    """
    library = case.library
    steps = list(run_train(case, library))
    beds = [k for k, step in enumerate(steps) if _is_bed(step.stage)]
    if not beds:
        raise InputError(
            "found no adiabatic bed",
            'accepted is a case with a stage of heat = "0 kW" in which reactions run',
            key="plot",
            file=case.file,
        )
    for step in steps:
        if not step.states.equilibria.solution.certified.all():
            raise InputError(
                f"found that {step.stage.name} has no answer",
                "accepted are stages that are certified, to plot",
                key="plot",
                file=case.file,
            )
    key = _key([steps[k] for k in beds])
    users = [k for k in beds if _used(steps[k], key) > 0.0]
    paths = list(_paths(steps[users[0] : users[-1] + 1], key))
    ends = np.concatenate([path.T for path in paths])
    margin = 0.1 * float(np.ptp(ends)) + 10.0
    T = np.linspace(ends.min() - margin, ends.max() + margin, _POINTS)
    lines = _equilibrium_lines(paths, key, T, library)
    figure, (axes,) = new_figure(case.title)
    name_axes(axes, "temperature, °C", f"conversion of {key}, %")
    foot(figure)
    lowest = min(0.0, *(float(path.conversion.min()) for path in paths))
    axes.set_xlim(T[0] - _ZERO_CELSIUS, T[-1] - _ZERO_CELSIUS)
    axes.set_ylim(lowest - 3.0, _HEADROOM)
    settle(figure)
    _draw(axes, paths, T - _ZERO_CELSIUS, lines)
    return figure


def _draw(axes: Axes, paths: Sequence[_Path], T: FloatArray, lines: dict[str, FloatArray]) -> None:
    ways = []
    for path in paths:
        x = path.T - _ZERO_CELSIUS
        axes.plot(
            x,
            path.conversion,
            color=COLOURS[1] if path.is_bed else COLOURS[2],
            linestyle=_SOLID if path.is_bed else _DASHED,
            linewidth=1.8 if path.is_bed else 1.2,
            marker="o",
            markersize=3.5,
            markevery=[0, x.size - 1],
        )
        ways.append(way_of(axes, x, path.conversion))
    for conversion in lines.values():
        axes.plot(T, conversion, color=COLOURS[0], linewidth=1.8)
        ways.append(way_of(axes, T, conversion))
    for before, path in pairwise(paths):
        x = np.array([before.T[-1], path.T[0]]) - _ZERO_CELSIUS
        y = np.array([before.conversion[-1], path.conversion[0]])
        if abs(x[1] - x[0]) > _SAME_PLACE or abs(y[1] - y[0]) > _SAME_PLACE:
            # A stream joins right before a bed.
            axes.plot(x, y, color=COLOURS[2], linestyle=_DASHED, linewidth=1.2)
            ways.append(way_of(axes, x, y))
    placer = Placer(axes, ways)
    for path in paths:
        if path.is_bed:
            points = [
                (float(path.T[k]) - _ZERO_CELSIUS, float(path.conversion[k]))
                for k in (path.T.size // 2, 0, -1)
            ]
            end = points[-1]
            text = f"{path.step.stage.name}: {end[1]:.1f} % at {end[0]:.0f} °C"
            near = [spot for point in points for spot in around(*point)]
            far = [spot for by in _FAR for spot in around(*end, by)]
            placer.place(text, [*near, *far], COLOURS[1])
    for text, conversion in lines.items():
        picks = np.linspace(0.9, 0.1, _SPOTS) * (T.size - 1)
        spots = [
            Spot(float(T[k]), float(conversion[k]), 5.0, 5.0 * side)
            for k in picks.astype(int)
            for side in (1.0, -1.0)
        ]
        placer.place(text, spots, COLOURS[0])


def _is_bed(stage: StageCase) -> bool:
    heat = stage.specification.heat
    adiabatic = heat is not None and np.ndim(heat) == 0 and float(heat) == 0.0
    return adiabatic and stage.chemistry.reactions == "equilibrium"


def _key(beds: Sequence[Step]) -> str:
    """The substance that most beds use up; of several, that which the first uses up most."""
    used = {
        record.name: [_used(bed, record.name) for bed in beds]
        for record in beds[0].states.inlet.records
    }
    return max(used, key=lambda name: (sum(u > 1e-9 for u in used[name]), max(used[name])))


def _used(step: Step, name: str) -> float:
    """The share of what enters that a stage uses up."""
    entering = _amount(step, name, entering=True)
    return 1.0 - _amount(step, name, entering=False) / entering if entering > 0.0 else 0.0


def _amount(step: Step, name: str, *, entering: bool) -> float:
    """Amount of a substance in all its forms, in a stage's inlet or outlet."""
    formula = name.rpartition("(")[0]
    records = step.states.inlet.records if entering else step.states.model.records
    amounts = step.states.inlet.amounts[0] if entering else step.states.equilibria.amounts[0]
    return float(sum(n for r, n in zip(records, amounts, strict=True) if r.formula == formula))


def _paths(steps: Sequence[Step], key: str) -> list[_Path]:
    """The ways of all steps from the first bed on.

    ``fed`` is what would be there of the key had none reacted: of what comes from the step before
    as much as went into it, of a stream that joins what it brings.
    """
    formula = key.rpartition("(")[0]
    fed_by: dict[str, float] = {}
    paths: list[_Path] = []
    for step in steps:
        fed = 0.0
        for stream, share in zip(step.streams, step.shares, strict=True):
            brought = sum(
                float(np.ravel(amount)[0])
                for name, amount in stream.amounts.items()
                if name.rpartition("(")[0] == formula
            )
            before = fed_by.get(stream.name)
            fed += brought if before is None else before * float(np.ravel(share)[0])
        fed_by[step.stage.name] = fed
        path = _path(step, key, fed)
        if paths and not path.is_bed:
            # Whatever joins or is mixed on the way, it starts where the step before ended.
            start = paths[-1]
            path = replace(
                path,
                T=np.array([start.T[-1], path.T[-1]]),
                conversion=np.array([start.conversion[-1], path.conversion[-1]]),
            )
        paths.append(path)
    return paths


def _path(step: Step, key: str, fed: float) -> _Path:
    """From inlet to outlet; through a bed the conversion x at which the enthalpy balance holds.

    With n(x) = n_in + x (n_out − n_in) and H(n(x), T) = H_in:
    x = (H_in − H(n_in, T)) / (H(n_out, T) − H(n_in, T)).
    """
    found, inlet, model = step.states.equilibria, step.states.inlet, step.states.model
    T_in, T_out = float(inlet.temperature[0]), float(found.temperature[0])
    ends = [
        100.0 * (1.0 - _amount(step, key, entering=entering) / fed) for entering in (True, False)
    ]
    columns = {record.name: column for column, record in enumerate(model.records)}
    if not _is_bed(step.stage) or any(r.name not in columns for r in inlet.records):
        return _Path(step, fed, np.array([T_in, T_out]), np.array(ends))
    entering = np.zeros((1, len(model.records)))
    for record, amount in zip(inlet.records, inlet.amounts[0], strict=True):
        entering[0, columns[record.name]] = amount
    P = found.pressure[0]
    if len(step.streams) > 1:
        near = T_in + np.linspace(-_AROUND, _AROUND, _POINTS)
        H = model.mixture.enthalpy(near, P, np.repeat(entering, near.size, axis=0))
        T_in = float(np.interp(inlet.enthalpy[0], H, near))
    T = np.linspace(T_in, T_out, _POINTS_IN_BED)
    H_in, H_out = (
        model.mixture.enthalpy(T, P, np.repeat(n, T.size, axis=0))
        for n in (entering, found.amounts[:1])
    )
    x = np.linspace(0.0, 1.0, T.size)
    x[1:-1] = ((inlet.enthalpy[0] - H_in) / (H_out - H_in))[1:-1]
    return _Path(step, fed, T, ends[0] + x * (ends[1] - ends[0]))


def _equilibrium_lines(
    paths: Sequence[_Path], key: str, T: FloatArray, library: Library
) -> dict[str, FloatArray]:
    """Conversion at equilibrium over T in %, by the words that name the line."""
    lines: dict[str, FloatArray] = {}
    for path in paths:
        if not path.is_bed:
            continue
        conversion = _equilibrium(path, key, T, library)
        known = [np.interp(path.T[-1], T, line - conversion) for line in lines.values()]
        if any(abs(difference) < _SAME_LINE for difference in known):
            continue
        pressure = float(path.step.states.equilibria.pressure[0]) / 1e5
        lines[f"equilibrium, {path.step.stage.name}, {pressure:.3g} bar"] = conversion
    if len(lines) == 1:
        (name, line), *_ = lines.items()
        return {f"equilibrium at {name.rpartition(', ')[2]}": line}
    return lines


def _equilibrium(path: _Path, key: str, T: FloatArray, library: Library) -> FloatArray:
    step = path.step
    streams = [
        replace(s, temperature=np.full(T.size, float(np.ravel(s.temperature)[0])))
        for s in step.streams
    ]
    specification = Specification(temperature=T, pressure=float(step.states.equilibria.pressure[0]))
    states = solve_stage(step.stage.chemistry, specification, None, streams, library)
    formula = key.rpartition("(")[0]
    columns = [record.formula == formula for record in states.model.records]
    return np.asarray(100.0 * (1.0 - states.equilibria.amounts[:, columns].sum(axis=1) / path.fed))
