"""The numbers that a case's results rest on, each with a step and a standard uncertainty.

An input is named as an axis is: ``outlet.temperature``, ``feed.steam.amounts.H2O(g)``; a whole
stream, all its amounts in proportion, is ``feed.steam``; a record's numbers are
``CO(g).enthalpy`` and ``CO(g).entropy``.  A step is what sensitivities are told for: 10 K, 1 bar,
1 kJ/mol, 1 J/(mol K), or 1 % of an amount.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, fields

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.reactor.stage_changes import SpecificationChanges
from gibbsmin.reactor.stream_changes import RecordChanges, StreamChanges
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.uncertainty import record_uncertainties

_STAGE_STEPS: Mapping[str, tuple[float, str]] = {
    "temperature": (10.0, "10 K"),
    "pressure": (1e5, "1 bar"),
    "pressure_drop": (1e4, "0.1 bar"),
    "heat": (1e3, "1 kJ"),
    "volume": (1e-3, "1 L"),
}
_SHARE = 0.01


@dataclass(frozen=True)
class Input:
    """One number: its name, its step in SI and in words, and how sure it is.

    Attributes
    ----------
    name : as an axis is named
    step : SI value of one step, (B,) where the number varies over the states
    step_text : such as "10 K"
    uncertainty : standard uncertainty in steps, of the same shapes
    origin : where the uncertainty comes from
    """

    name: str
    step: Values
    step_text: str
    uncertainty: Values
    origin: str


@dataclass(frozen=True)
class InputChanges:
    """What one step of each of K inputs does, to records, streams by name and stages by key."""

    inputs: tuple[Input, ...]
    records: RecordChanges
    streams: Mapping[str, StreamChanges]
    stages: Mapping[str, SpecificationChanges]

    def combined(self, weights: FloatArray) -> InputChanges:
        """Columns of combinations: the changes (..., K) times weights (K, K)."""

        def of(columns: Mapping[str, FloatArray]) -> dict[str, FloatArray]:
            return {name: values @ weights for name, values in columns.items()}

        records = self.records
        return InputChanges(
            self.inputs,
            RecordChanges(of(records.enthalpy), of(records.entropy), records.count),
            {
                name: StreamChanges(
                    each.temperature @ weights, each.pressure @ weights, of(each.amounts)
                )
                for name, each in self.streams.items()
            },
            {
                key: SpecificationChanges(
                    **{f.name: getattr(each, f.name) @ weights for f in fields(each)}
                )
                for key, each in self.stages.items()
            },
        )


def record_inputs(records: Sequence[Species]) -> list[Input]:
    """Enthalpies of formation and entropies, published or by class of record."""
    known = record_uncertainties(records)
    inputs = []
    for k, record in enumerate(records):
        for kind, step, text, values, origins in (
            ("enthalpy", 1e3, "1 kJ/mol", known.enthalpy, known.enthalpy_origins),
            ("entropy", 1.0, "1 J/(mol K)", known.entropy, known.entropy_origins),
        ):
            name = f"{record.name}.{kind}"
            inputs.append(Input(name, step, text, float(values[k]) / step, origins[k]))
    return inputs


def stream_inputs(streams: Iterable[Stream]) -> list[Input]:
    """Temperature, pressure, the whole flow and each amount of the streams; none has a default."""
    inputs = []
    for stream in streams:
        place = f"feed.{stream.name}"
        inputs += [
            _exact(f"{place}.temperature", *_STAGE_STEPS["temperature"]),
            _exact(f"{place}.pressure", *_STAGE_STEPS["pressure"]),
            _exact(place, _SHARE, "1 %"),
        ]
        for name, amount in stream.amounts.items():
            step = _SHARE * np.asarray(amount, dtype=float)
            inputs.append(_exact(f"{place}.amounts.{name}", step, "1 %"))
    return inputs


def stage_inputs(stages: Iterable[StageCase]) -> list[Input]:
    """The numbers of each stage's specification."""
    return [
        _exact(f"{stage.key}.{field}", *_STAGE_STEPS[field])
        for stage in stages
        for field in _STAGE_STEPS
        if getattr(stage.specification, field) is not None
    ]


def input_changes(case: Case, inputs: Sequence[Input]) -> InputChanges:
    """One step of each input, laid out for the reactor's first-order changes."""
    count = len(inputs)
    places = {each.name: k for k, each in enumerate(inputs)}

    def column(name: str) -> FloatArray:
        """The input's step in its own column, (K,) or (B, K); zeros for what is no input."""
        if name not in places:
            return np.zeros(count)
        place = places[name]
        changes = np.zeros((*np.shape(inputs[place].step), count))
        changes[..., place] = inputs[place].step
        return changes

    def of_records(kind: str) -> dict[str, FloatArray]:
        return {name.removesuffix(kind): column(name) for name in places if name.endswith(kind)}

    def of_amount(place: str, name: str, amount: Values) -> FloatArray:
        own = np.atleast_2d(column(f"{place}.amounts.{name}"))
        if place not in places:
            return own
        return own + np.asarray(amount, dtype=float)[..., np.newaxis] * column(place)

    def of_stream(stream: Stream) -> StreamChanges:
        place = f"feed.{stream.name}"
        return StreamChanges(
            np.atleast_2d(column(f"{place}.temperature")),
            np.atleast_2d(column(f"{place}.pressure")),
            {name: of_amount(place, name, amount) for name, amount in stream.amounts.items()},
        )

    def of_stage(stage: StageCase) -> SpecificationChanges:
        names = [field.name for field in fields(SpecificationChanges)]
        return SpecificationChanges(**{n: column(f"{stage.key}.{n}") for n in names})

    return InputChanges(
        tuple(inputs),
        RecordChanges(of_records(".enthalpy"), of_records(".entropy"), count),
        {stream.name: of_stream(stream) for stream in case.feeds},
        {stage.key: of_stage(stage) for stage in case.stages},
    )


def _exact(name: str, step: Values, text: str) -> Input:
    return Input(name, step, text, 0.0, "taken as exact")
