"""The results that a target may be set on: how their values are read, and where they come from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.feed_parts import moles_of, resolve
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.conversion import conversions
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import WATER
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.units import (
    Measure,
    read_amount,
    read_entropy,
    read_heat,
    read_pressure,
    read_share,
    read_temperature,
    shown,
)

Reader = Callable[[object], float]


@dataclass(frozen=True)
class Result:
    """A number of a solved stage.

    Attributes
    ----------
    of : takes it in SI, (B,), from the stage
    read : how its value is read, in SI
    unit, per_unit : in which it is told, and the SI value of one
    """

    of: Callable[[Step], FloatArray]
    read: Reader
    unit: str
    per_unit: float


_OF_STAGE: Mapping[str, Callable[[Step], FloatArray]] = {
    "temperature": lambda step: step.states.equilibria.temperature,
    "pressure": lambda step: step.states.equilibria.pressure,
    "heat": lambda step: step.states.energy.heat,
    "shaft work": lambda step: step.states.energy.shaft_work,
    "entropy generation": lambda step: step.states.energy.entropy_generation,
    "lost work": lambda step: (
        step.stage.surroundings_temperature * step.states.energy.entropy_generation
    ),
}
_SHORT = "y"
"""What the columns of a scan call a fraction."""


def result_of(text: str, case: Case) -> Result:
    """A result by its name, which may be that of a scan's column.

    Results are ``temperature``, ``pressure``, ``heat``, ``shaft work``, ``entropy generation``,
    ``lost work`` and, with a species, ``fraction`` (or ``y``), ``dry fraction``, ``amount``,
    ``conversion`` and ``activity``.  A unit after a comma, as in a column's name, says nothing.

    Raises
    ------
    InputError
        for another text; a record that is no candidate is told when the result is taken.
    """
    name = text.partition(", ")[0]
    unit, per_unit = _told_in(name, case)
    if name in _OF_STAGE:
        return Result(_OF_STAGE[name], _reader_of_stage(name, case), unit, per_unit)
    kind, _, species = name.rpartition(" ")
    kind = "fraction" if kind == _SHORT else kind
    if kind not in _OF_SPECIES:
        raise InputError(
            f'found "{text}", which is no result',
            f"accepted is {', '.join(_OF_STAGE)}, or one of {', '.join(_OF_SPECIES)} with a "
            'species, such as "dry fraction CH4"',
        )
    record = resolve(species, case.library)
    of = _OF_SPECIES[kind]
    read = _reader_of_species(kind, record, case)
    return Result(lambda step: of(step, record.name), read, unit, per_unit)


def _told_in(name: str, case: Case) -> tuple[str, float]:
    """The unit in which a result is told, and the SI value of one."""
    is_flow = case.feeds[0].is_flow
    energy = "kW" if is_flow else "kJ"
    units = {
        "temperature": ("K", 1.0),
        "pressure": ("bar", 1e5),
        "entropy generation": (f"{energy}/K", 1e3),
        "amount": ("mol/s" if is_flow else "mol", 1.0),
        "activity": ("", 1.0),
    }
    if name in _OF_STAGE:
        return units.get(name, (energy, 1e3))
    return units.get(name.partition(" ")[0], ("%", 0.01))


def _reader_of_stage(result: str, case: Case) -> Reader:
    """Reads its value; gauge pressures stand on the case's site pressure."""
    if result == "temperature":
        return read_temperature
    if result == "pressure":
        return lambda given: read_pressure(given, case.site_pressure)
    is_entropy = result == "entropy generation"

    def read(given: object) -> float:
        measure = read_entropy(given) if is_entropy else read_heat(given)
        what = "an entropy" if is_entropy else "a heat"
        _require_counting_alike(what, measure, case.feeds[0])
        return measure.value

    return read


def _reader_of_species(result: str, record: Species, case: Case) -> Reader:
    """Reads a share, an activity, or an amount in moles, mass or volume of ideal gas, in mol."""
    if result != "amount":
        return _plain if result == "activity" else read_share

    def read(given: object) -> float:
        measure = read_amount(given)
        _require_counting_alike("an amount", measure, case.feeds[0])
        return sum(moles_of(measure, {record: 1.0}).values())

    return read


def _require_counting_alike(what: str, measure: Measure, stream: Stream) -> None:
    if measure.value and measure.unit.dimension.is_flow != stream.is_flow:
        raise UnitError(
            f'found {what} in "{measure.unit.text}", while the feeds are in "{stream.unit}"',
            f"accepted is {'a flow' if stream.is_flow else 'a quantity'}, as the feeds are",
        )


def _plain(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or given <= 0.0:
        raise InputError(f"found {shown(given)}", "accepted is a number above zero, such as 0.5")
    return float(given)


def _column(step: Step, name: str) -> int:
    names = [record.name for record in step.states.model.records]
    if name not in names:
        raise InputError(
            f'found "{name}", which is no candidate of {step.stage.name}',
            f"accepted is one of {', '.join(names)}",
            key="target.result",
        )
    return names.index(name)


def _amount(step: Step, name: str) -> FloatArray:
    return step.states.equilibria.amounts[:, _column(step, name)]


def _fraction(step: Step, name: str, without: str = "") -> FloatArray:
    records = step.states.model.records
    counted = np.array([r.phase is Phase.GAS and r.name != without for r in records])
    if not counted[_column(step, name)]:
        raise InputError(
            f'found "{name}", which is no part of that gas',
            f"accepted is a gas, such as {records[int(np.argmax(counted))].name}",
            key="target.result",
        )
    with np.errstate(invalid="ignore", divide="ignore"):
        total = step.states.equilibria.amounts[:, counted].sum(axis=1)
        return np.asarray(_amount(step, name) / total)


def _conversion(step: Step, name: str) -> FloatArray:
    shares = conversions(
        step.states.inlet, step.states.model.records, step.states.equilibria.amounts
    )
    if name not in shares:
        raise InputError(
            f'found "{name}", which does not enter {step.stage.name}',
            f"accepted is one of {', '.join(shares)}",
            key="target.result",
        )
    return shares[name]


def _activity(step: Step, name: str) -> FloatArray:
    forces = step.states.equilibria.solution.certificate.driving_forces
    return np.asarray(np.exp(forces[:, _column(step, name)]))


_OF_SPECIES: Mapping[str, Callable[[Step, str], FloatArray]] = {
    "fraction": _fraction,
    "dry fraction": lambda step, name: _fraction(step, name, WATER),
    "conversion": _conversion,
    "amount": _amount,
    "activity": _activity,
}
