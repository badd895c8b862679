"""What reacted: an independent set of reactions with their extents, and where each element went.

Any set of reactions that spans what the element balance leaves open describes a change as well as
any other.  Here each reaction makes or uses one key record from the basis records, which are
chosen so that the reactions are those of the trade: with O2 about, combustions; else reactions
with steam, hydrogen and carbon monoxide.  A substance in several forms takes part in one of them,
and the others come about by a change of its form.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.thermo.balance import balances, composition, simplest
from gibbsmin.thermo.equation import written_equation
from gibbsmin.thermo.species import Phase, Species

_OXIDISING: Final = ("O2(g)", "CO2(g)", "H2O(g)", "N2(g)", "SO2(g)", "HCl(g)")
_REDUCING: Final = ("H2O(g)", "H2(g)", "CO(g)", "N2(g)", "H2S(g)", "HCl(g)", "CO2(g)")
_DEPENDENT: Final = 1e-10
_LARGEST_DENOMINATOR: Final = 10_000
_ROUNDING: Final = 1e-12
"""Share of an element's feed below which nothing was converted."""


@dataclass(frozen=True)
class KeyedReaction:
    """A reaction of an independent set, in the smallest integers.

    Attributes
    ----------
    key : the record that this reaction tells of; empty where the user names it
    terms : coefficient by record name, products positive
    """

    key: str
    terms: Mapping[str, Fraction]

    def __str__(self) -> str:
        return written_equation((_readable(number), name) for name, number in self.terms.items())


def independent_reactions(
    records: Sequence[Species], fed: Collection[str] = ()
) -> tuple[KeyedReaction, ...]:
    """A reaction for each record that is not in the basis, in the order of the records.

    Parameters
    ----------
    records
        Those of feed and outlet that matter; traces would each bring a reaction of their own.
    fed
        Names of the feed's records; a key that is one of them stands on the left.
    """
    ordered = sorted(records, key=_preference({record.name for record in records}))
    main: dict[str, Species] = {}
    for record in ordered:
        main.setdefault(record.formula, record)
    substances = list(main.values())
    reactions = [
        _keyed(substances, vector, fed) for vector in balances([composition(r) for r in substances])
    ]
    reactions += [
        _keyed([main[record.formula], record], [Fraction(-1), Fraction(1)], fed)
        for record in ordered
        if record is not main[record.formula]
    ]
    place = {record.name: k for k, record in enumerate(records)}
    return tuple(sorted(reactions, key=lambda reaction: place[reaction.key]))


def keyed_extents(
    reactions: Sequence[KeyedReaction], names: Sequence[str], changes: FloatArray
) -> FloatArray:
    """Extents ξ in mol of each reaction as written, by Δn = Σ ξ ν of the keys.

    A key takes part in no other reaction but the changes of its form, so that the extents stay
    the same whichever traces are left out of the set.

    Parameters
    ----------
    names
        Of the S records.
    changes
        Outlet less feed, shape (..., S), mol; the result has shape (..., R).
    """
    keys = [reaction.key for reaction in reactions]
    columns = [list(names).index(key) for key in keys]
    coefficients = np.array([[float(r.terms.get(key, 0)) for key in keys] for r in reactions])
    return np.asarray(changes[..., columns] @ np.linalg.inv(coefficients))


def named_extents(stoichiometry: FloatArray, changes: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Extents of reactions that the user names, by least squares, and what they leave over.

    Parameters
    ----------
    stoichiometry
        ν, shape (R, S), products positive.
    changes
        Outlet less feed, shape (..., S), mol.

    Returns
    -------
    extents (..., R), and the change that these reactions do not explain, (..., S); it is 0 where
    they span all that happened.

    Raises
    ------
    InputError
        If the reactions depend on each other.
    """
    if np.linalg.matrix_rank(stoichiometry) < len(stoichiometry):
        raise InputError(
            "found reactions that depend on each other", "accepted are independent reactions"
        )
    extents = changes @ np.linalg.pinv(stoichiometry, rcond=_DEPENDENT)
    return extents, changes - extents @ stoichiometry


def element_shares(counts: FloatArray, feed: FloatArray, outlet: FloatArray) -> FloatArray:
    """Yield by element: share of each element fed that leaves in each record.

    Parameters
    ----------
    counts
        Element counts, shape (E, S).
    feed, outlet
        Amounts of the same S records, shape (..., S), mol.

    Returns
    -------
    shape (..., E, S); NaN for an element that is not fed.
    """
    fed = feed @ counts.T
    total = np.where(fed > 0.0, fed, np.nan)
    return np.asarray(counts * outlet[..., np.newaxis, :] / total[..., np.newaxis])


def element_selectivities(counts: FloatArray, feed: FloatArray, outlet: FloatArray) -> FloatArray:
    """Share of what was converted of each element that is found in each record newly formed.

    As :func:`element_shares`, of the records' net formation; 0 for a record that is used up, NaN
    for an element of which nothing is converted.
    """
    formed = counts * np.maximum(outlet - feed, 0.0)[..., np.newaxis, :]
    converted = formed.sum(axis=-1)
    least = _ROUNDING * (feed @ counts.T)
    total = np.where(converted > least, converted, np.nan)
    return np.asarray(
        np.where(np.isnan(outlet)[..., np.newaxis, :], np.nan, formed) / total[..., np.newaxis]
    )


def _preference(names: Collection[str]) -> Callable[[Species], tuple[int, bool, bool, int, float]]:
    first = _OXIDISING if "O2(g)" in names else _REDUCING

    def rank(record: Species) -> tuple[int, bool, bool, int, float]:
        listed = first.index(record.name) if record.name in first else len(first)
        condensed = record.phase is not Phase.GAS
        lone_atom = not condensed and record.atoms == 1
        return listed, lone_atom, condensed, len(record.elements), record.atoms

    return rank


def _readable(number: Fraction) -> Fraction:
    """Five digits of what has no short form, as a fuel's elements bring it."""
    return (
        number if number.denominator <= _LARGEST_DENOMINATOR else Fraction(f"{float(number):.5g}")
    )


def _keyed(
    records: Sequence[Species], vector: Sequence[Fraction], fed: Collection[str]
) -> KeyedReaction:
    taking_part = [(r.name, number) for r, number in zip(records, vector, strict=True) if number]
    # The free column of the elimination comes last among those that take part.
    key = taking_part[-1][0]
    integers = simplest([number for _, number in reversed(taking_part)])
    sign = -1 if key in fed else 1
    names = [name for name, _ in reversed(taking_part)]
    return KeyedReaction(
        key, {name: sign * number for name, number in zip(names, integers, strict=True)}
    )
