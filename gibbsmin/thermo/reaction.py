"""Reactions: read from text, balanced, combined after Hess, and their properties over T.

ΔrX = Σ ν X for X = H, S, G;  log10 K = −ΔrG / (R T ln 10), for P° = 1 bar.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import ReactionError
from gibbsmin.thermo.balance import CHARGE, balances, composition, imbalance, simplest
from gibbsmin.thermo.equation import read_equation, written_equation, written_number
from gibbsmin.thermo.formula import plain_text
from gibbsmin.thermo.index import split_name
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.stable_form import Substance

Term = tuple[Fraction, Substance]


@dataclass(frozen=True, eq=False)
class Reaction:
    """A balanced reaction; reactions add, subtract and scale, and so do their properties.

    The properties take T in K of any shape and return an array of the same shape, per mole of
    reaction as written.  Each substance counts in the form that is stable at T, or in the one
    form that it names.

    Parameters
    ----------
    terms
        Pairs of coefficient and substance, negative for reactants; a substance stands once.

    Raises
    ------
    ReactionError
        If nothing is left of the reaction or it is not balanced; a balance is offered where it
        is unique.
    """

    terms: tuple[Term, ...]

    def __post_init__(self) -> None:
        if not self.terms:
            raise ReactionError(
                "found a reaction in which everything cancels out",
                "accepted is one in which something is consumed and something formed",
            )
        wrong = imbalance([(n, composition(s.forms[0])) for n, s in self.terms])
        if wrong:
            raise ReactionError(
                f'found "{self}", which is not balanced: {_described(wrong)}',
                f"accepted is a balanced reaction, {_offer(self.terms)}",
            )

    @classmethod
    def of(cls, terms: Iterable[Term]) -> Self:
        """The reaction of these terms, of which those of one substance are summed."""
        totals: dict[tuple[str, ...], Term] = {}
        for number, substance in terms:
            before, first = totals.get(substance.key, (Fraction(), substance))
            totals[substance.key] = (before + number, first)
        return cls(tuple((number, s) for number, s in totals.values() if number))

    @classmethod
    def read(cls, text: str, library: Library) -> Self:
        """The reaction that a text describes, its species looked up in the library.

        Parameters
        ----------
        text
            Such as ``CH4 + 2 H2O = CO2 + 4 H2``.  ``H2O(g)`` is that record at all temperatures,
            ``H2O`` whichever form is stable.

        Raises
        ------
        ReactionError
            If the text is no reaction or is not balanced.
        UnknownSpeciesError
            If the library does not hold one of the species.
        """
        terms = []
        for number, name in read_equation(text):
            terms.append((number, _substance(name, library)))
        return cls.of(terms)

    def __str__(self) -> str:
        return written_equation((number, substance.text) for number, substance in self.terms)

    def __add__(self, other: Reaction) -> Reaction:
        return Reaction.of((*self.terms, *other.terms))

    def __sub__(self, other: Reaction) -> Reaction:
        return self + -other

    def __neg__(self) -> Reaction:
        return -1 * self

    def __mul__(self, factor: Fraction | int | float) -> Reaction:
        exact = _exact(factor)
        return Reaction.of((exact * number, substance) for number, substance in self.terms)

    __rmul__ = __mul__

    def __truediv__(self, divisor: Fraction | int | float) -> Reaction:
        return self * (1 / _exact(divisor))

    @property
    def reactants(self) -> tuple[Term, ...]:
        """The terms on the left; their coefficients are negative."""
        return tuple(term for term in self.terms if term[0] < 0)

    @property
    def products(self) -> tuple[Term, ...]:
        """The terms on the right."""
        return tuple(term for term in self.terms if term[0] > 0)

    def enthalpy(self, T: npt.ArrayLike) -> FloatArray:
        """ΔrH in J/mol."""
        return weighted_sum(self.terms, lambda substance: substance.enthalpy(T))

    def entropy(self, T: npt.ArrayLike) -> FloatArray:
        """ΔrS in J/mol/K."""
        return weighted_sum(self.terms, lambda substance: substance.entropy(T))

    def gibbs_energy(self, T: npt.ArrayLike) -> FloatArray:
        """ΔrG = ΔrH − T ΔrS in J/mol."""
        return weighted_sum(self.terms, lambda substance: substance.gibbs_energy(T))

    def log10_K(self, T: npt.ArrayLike) -> FloatArray:
        """Decimal logarithm of the equilibrium constant."""
        RT = GAS_CONSTANT * np.asarray(T, dtype=np.float64)
        return -self.gibbs_energy(T) / (RT * math.log(10))


def _substance(name: str, library: Library) -> Substance:
    forms = library.substance(name)
    formula = forms[0].formula
    if split_name(plain_text(name))[1]:
        return Substance(forms[0].name, forms)
    return Substance(formula, forms, tuple(r for r in library.forms(formula) if r not in forms))


def weighted_sum(terms: Sequence[Term], values: Callable[[Substance], FloatArray]) -> FloatArray:
    """Σ ν X over the terms."""
    return np.asarray(sum(float(number) * values(substance) for number, substance in terms))


def _exact(number: Fraction | int | float) -> Fraction:
    """A float is taken for the decimal that it prints as: 0.1 is one tenth."""
    if not math.isfinite(number):
        raise ReactionError(f"found the factor {number}", "accepted is a finite number")
    return Fraction(repr(number)) if isinstance(number, float) else Fraction(number)


def _described(wrong: dict[str, tuple[Fraction, Fraction]]) -> str:
    def side(number: Fraction, symbol: str) -> str:
        sign = "+" if symbol == CHARGE and number > 0 else ""
        return sign + written_number(number)

    return ", ".join(
        f"{symbol} {side(left, symbol)} on the left and {side(right, symbol)} on the right"
        for symbol, (left, right) in wrong.items()
    )


def _offer(terms: Sequence[Term]) -> str:
    """Says which coefficients balance the species on their sides, where one set of ratios does."""
    basis = balances([composition(substance.forms[0]) for _, substance in terms])
    if len(basis) > 1:
        return "and these species allow more than one"
    if basis:
        vector = basis[0] if basis[0][0] * terms[0][0] > 0 else [-n for n in basis[0]]
        signs = zip(vector, terms, strict=True)
        if all(number * term[0] > 0 for number, term in signs):
            names = (substance.text for _, substance in terms)
            return f'here "{written_equation(zip(simplest(vector), names, strict=True))}"'
    return "but these species on these sides allow none"
