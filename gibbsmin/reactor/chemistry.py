"""What may happen in a stage: candidates, holds, approaches and shifts of energy."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

from gibbsmin.errors import InputError
from gibbsmin.reactor.approach import Approach
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.holds import (
    Hold,
    fixed_conversion,
    frozen,
    held_element_share,
    held_gas_fraction,
)
from gibbsmin.reactor.streams import Values, first
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import Species


@dataclass(frozen=True)
class HeldFraction:
    """A record's fraction in the outlet: of the wet or dry gas, or of an element fed."""

    record: str
    value: Values
    basis: Literal["wet", "dry"] | str
    """``wet``, ``dry``, or the symbol of the element whose share stays in the record."""


@dataclass(frozen=True)
class Chemistry:
    """What a stage's catalyst, or the lack of one, allows.

    Attributes
    ----------
    selection : the candidates; its inert records are held at their inlet amounts
    reactions : ``equilibrium``; or ``none``, where substances only change their form
    condense : names of substances that may condense or evaporate where nothing reacts
    conversions : fixed conversion by record of the feed, (B,) for B states
    fractions : fractions held at the outlet; of the gas, the same in all states
    approaches : named reactions and their distance from equilibrium
    others : what the reactions do that no approach names
    offsets : energy added to a record, J/mol
    activities : fixed activity of a solid or liquid, as in an alloy
    equation : equation of state of the gas; None is an ideal gas
    """

    selection: Selection = field(default_factory=Selection)
    reactions: Literal["equilibrium", "none"] = "equilibrium"
    condense: tuple[str, ...] = ()
    conversions: Mapping[str, Values] = field(default_factory=dict)
    fractions: tuple[HeldFraction, ...] = ()
    approaches: tuple[Approach, ...] = ()
    others: Literal["equilibrium", "frozen"] = "equilibrium"
    offsets: Mapping[str, float] = field(default_factory=dict)
    activities: Mapping[str, float] = field(default_factory=dict)
    equation: Equation | None = None


def holds_of(
    chemistry: Chemistry, candidates: Sequence[Species], feed: Sequence[Species], library: Library
) -> list[Hold]:
    """The chemistry's holds as linear conditions.

    Raises
    ------
    InputError
        when a held record is no candidate, or a frozen or converted one is not in the feed.
    """
    names = {record.name for record in candidates}
    fed = {record.name for record in feed}
    inert = chemistry.selection.inert_among(feed, library)
    holds = [frozen(name) for name in inert if name in fed]
    for name, conversion in chemistry.conversions.items():
        if name not in fed:
            raise InputError(
                f'found "{name}", which does not enter the stage',
                f"accepted is a record that does: {', '.join(sorted(fed))}",
                key="conversion",
            )
        holds.append(fixed_conversion(name, conversion))
    for held in chemistry.fractions:
        if held.basis in ("wet", "dry"):
            holds.append(
                held_gas_fraction(held.record, first(held.value), candidates, held.basis == "dry")
            )
        else:
            holds.append(held_element_share(library[held.record], held.value, held.basis, feed))
    for name in [*chemistry.conversions, *(held.record for held in chemistry.fractions)]:
        if name not in names:
            raise InputError(
                f'found "{name}", which is no candidate',
                "accepted is a record to consider",
                key="conversion" if name in chemistry.conversions else "held_fraction",
            )
    return holds
