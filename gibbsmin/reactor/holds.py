"""Holds: linear conditions that a stage adds to its element balance.

A hold reads Σ c_i n_i = Σ s_f n_f, with coefficients c on the outlet's amounts and s on the feed's.
Being linear it leaves the programme convex, so a held state is certified like any other.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from gibbsmin.errors import InputError
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.species import Phase, Species

WATER_FORMULA = "H2O"


@dataclass(frozen=True)
class Hold:
    """One condition: coefficients by record name on the outlet and on the feed.

    Those on the feed may be arrays (B,), one for each of B states.
    """

    label: str
    outlet: Mapping[str, float]
    feed: Mapping[str, Values]


def frozen(name: str) -> Hold:
    """The record leaves in the amount in which it enters."""
    return Hold(f"{name} frozen", {name: 1.0}, {name: 1.0})


def fixed_conversion(name: str, conversion: Values) -> Hold:
    """n_out = (1 − x) n_in; a negative x is formation."""
    return Hold(f"{name} converted", {name: 1.0}, {name: 1.0 - conversion})


def held_gas_fraction(name: str, fraction: float, records: Iterable[Species], dry: bool) -> Hold:
    """n − y Σ n_gas = 0, the sum without water where the fraction is dry."""
    outlet = {
        record.name: -fraction
        for record in records
        if record.phase is Phase.GAS and not (dry and record.formula == WATER_FORMULA)
    }
    outlet[name] = outlet.get(name, 0.0) + 1.0
    return Hold(f"{name} at a fraction", outlet, {})


def held_element_share(
    record: Species, share: Values, element: str, feed: Sequence[Species]
) -> Hold:
    """The record keeps this share of an element fed, such as unburnt char of the carbon.

    Raises
    ------
    InputError
        where the record has no such element.
    """
    own = dict(record.elements).get(element)
    if own is None:
        raise InputError(
            f'found "{element}", which {record.name} does not hold',
            f"accepted is one of its elements: {', '.join(dict(record.elements))}",
            key=f"held_fraction.{record.name}",
        )
    counts = {other.name: dict(other.elements).get(element, 0.0) for other in feed}
    return Hold(
        f"{record.name} at a share of {element}",
        {record.name: 1.0},
        {name: share * count / own for name, count in counts.items() if count},
    )
