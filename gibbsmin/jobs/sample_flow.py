"""A stream's flow at the time of a sample, over the one that the case gives."""

from __future__ import annotations

from collections.abc import Sequence

from gibbsmin.errors import InputError, UnitError
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.thermo.library import Library
from gibbsmin.units import Dimension, Unit, read_amount, read_amount_unit, shown

_MASS = (Dimension.MASS, Dimension.MASS_FLOW)


def flow_ratio(name: str, given: object, streams: Sequence[Stream], library: Library) -> float:
    """A measured flow over the stream's nominal one.

    Raises
    ------
    InputError
        for a name that is no stream, and what is no flow above zero in its kind of unit.
    """
    stream = stream_named(name, streams)
    measure = read_amount(given, read_amount_unit(stream.unit))
    ratio = measure.value / nominal_flow(stream, measure.unit, library)
    if ratio <= 0.0:
        raise UnitError(f"found {shown(given)}", "accepted is a flow above zero")
    return ratio


def stream_named(name: str, streams: Sequence[Stream]) -> Stream:
    """The stream of that name."""
    for stream in streams:
        if stream.name == name:
            return stream
    raise InputError(
        f"found {shown(name)}, which is no stream",
        f"accepted is one of {', '.join(stream.name for stream in streams)}",
    )


def nominal_flow(stream: Stream, unit: Unit, library: Library) -> float:
    """The case's flow in the SI of a unit: mol, or kg; per second if a flow.

    Raises
    ------
    UnitError
        for a flow in place of a quantity, or the other way round.
    """
    if unit.dimension.is_flow != stream.is_flow:
        raise UnitError(
            f'found a unit "{unit.text}"',
            f'accepted is a unit of the same kind as the stream\'s "{stream.unit}"',
        )
    amounts = {name: first(amount) for name, amount in stream.amounts.items()}
    if unit.dimension not in _MASS:
        return sum(amounts.values())
    return sum(amount * library[name].molar_mass for name, amount in amounts.items())
