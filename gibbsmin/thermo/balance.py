"""Element balance of a reaction, in exact fractions."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from math import gcd, lcm
from typing import Final

from gibbsmin.thermo.species import Species

CHARGE: Final = "charge"

# Integers larger than this, as a non-stoichiometric solid brings them, are worse to read than
# decimals.
_LARGEST_INTEGER: Final = 99
_LARGEST_DENOMINATOR: Final = 10**6


def composition(species: Species) -> dict[str, Fraction]:
    """Counts of the elements, and the charge under ``CHARGE`` where there is any."""
    counts = {symbol: _exact(count) for symbol, count in species.elements}
    return counts | {CHARGE: _exact(species.charge)} if species.charge else counts


def imbalance(
    terms: Sequence[tuple[Fraction, Mapping[str, Fraction]]],
) -> dict[str, tuple[Fraction, Fraction]]:
    """Totals on the left and on the right of every element that differs, and of charge."""
    symbols = sorted({symbol for _, counts in terms for symbol in counts})
    # Charge reads best at the end.
    symbols.sort(key=lambda symbol: symbol == CHARGE)
    totals = {
        symbol: (
            sum((-n * c.get(symbol, 0) for n, c in terms if n < 0), Fraction()),
            sum((n * c.get(symbol, 0) for n, c in terms if n > 0), Fraction()),
        )
        for symbol in symbols
    }
    return {symbol: (left, right) for symbol, (left, right) in totals.items() if left != right}


def balances(compositions: Sequence[Mapping[str, Fraction]]) -> list[list[Fraction]]:
    """A basis of all coefficients that balance the species: the null space, by elimination."""
    symbols = sorted({symbol for counts in compositions for symbol in counts})
    matrix = [[counts.get(s, Fraction()) for counts in compositions] for s in symbols]
    pivots: list[int] = []
    row = 0
    for column in range(len(compositions)):
        pivot = next((r for r in range(row, len(matrix)) if matrix[r][column]), None)
        if pivot is None:
            continue
        matrix[row], matrix[pivot] = matrix[pivot], matrix[row]
        divisor = matrix[row][column]
        matrix[row] = [value / divisor for value in matrix[row]]
        for r, other in enumerate(matrix):
            if r != row and other[column]:
                factor = other[column]
                matrix[r] = [a - factor * b for a, b in zip(other, matrix[row], strict=True)]
        pivots.append(column)
        row += 1
    basis = []
    for free in sorted(set(range(len(compositions))) - set(pivots)):
        vector = [Fraction()] * len(compositions)
        vector[free] = Fraction(1)
        for r, column in enumerate(pivots):
            vector[column] = -matrix[r][free]
        basis.append(vector)
    return basis


def simplest(coefficients: Sequence[Fraction]) -> list[Fraction]:
    """The same ratios in the smallest integers, or with the first 1 where those are large."""
    denominator = lcm(*(number.denominator for number in coefficients))
    divisor = gcd(*(int(number * denominator) for number in coefficients))
    integers = [number * denominator / divisor for number in coefficients]
    if max(abs(number) for number in integers) <= _LARGEST_INTEGER:
        return integers
    return [number / abs(coefficients[0]) for number in coefficients]


def _exact(count: float) -> Fraction:
    return Fraction(count).limit_denominator(_LARGEST_DENOMINATOR)
