"""Reads and writes the text of a reaction: "CH4 + 2 H2O = CO2 + 4 H2"."""

from __future__ import annotations

import re
from collections.abc import Iterable
from fractions import Fraction
from typing import Final

from gibbsmin.errors import ReactionError
from gibbsmin.thermo.formula import plain_text

ACCEPTED: Final = 'accepted is a reaction such as "CH4 + 2 H2O = CO2 + 4 H2"'

_ARROW: Final = re.compile(r"<=>|<->|=>|->|⇌|→|↔|=")
# A plus sign belongs to an ion where it is written to the end of its word and the next word is
# another plus sign, or the state follows; anywhere else it stands between two species.
_PLUS: Final = re.compile(r"(?<=\s)\+|\+(?!\s*(?:\+|$)|\([a-z]+\))")
_NUMBER: Final = r"\d+\s*/\s*\d+|\d+\.?\d*|\.\d+"
_TERM: Final = re.compile(
    rf"(?:(?P<number>{_NUMBER})(?:\s*[*·]\s*|\s+|(?=[A-Za-z(\[])))?(?P<name>\S.*)"
)
_DECIMAL_COMMA: Final = re.compile(r"\d+,\d+\s")

# Denominators up to this are written as a fraction, others as a decimal where it is short.
_FRACTIONS: Final = 12


def read_equation(text: str) -> tuple[tuple[Fraction, str], ...]:
    """The species of a reaction with their coefficients, negative on the left.

    Parameters
    ----------
    text
        Two sides with "=", "->", "→" or "⇌" between them, each a sum of species with an integer,
        a decimal or a fraction in front.

    Raises
    ------
    ReactionError
        If the text does not read as a reaction.
    """
    plain = plain_text(text).replace("\N{FRACTION SLASH}", "/")
    sides = _ARROW.split(plain)
    if len(sides) != 2:
        number = "no" if len(sides) == 1 else "more than one"
        raise ReactionError(f'found "{text}", which has {number} sign between two sides', ACCEPTED)
    left, right = (_read_side(side, text) for side in sides)
    return (*((-number, name) for number, name in left), *right)


def _read_side(side: str, text: str) -> list[tuple[Fraction, str]]:
    return [_read_term(term.strip(), text) for term in _PLUS.split(side)]


def _read_term(term: str, text: str) -> tuple[Fraction, str]:
    if _DECIMAL_COMMA.match(term):
        raise ReactionError(
            f'found "{term}", which has a decimal comma', 'accepted is a point, as in "0.5 O2"'
        )
    match = _TERM.fullmatch(term)
    if match is None:
        raise ReactionError(f'found "{text}", where a species is missing', ACCEPTED)
    number = (match["number"] or "1").replace(" ", "")
    numerator, _, denominator = number.partition("/")
    if Fraction(numerator) == 0 or (denominator and int(denominator) == 0):
        raise ReactionError(
            f'found "{term}", whose coefficient has a zero', "accepted is a number above zero"
        )
    return Fraction(number), match["name"].strip()


def written_equation(terms: Iterable[tuple[Fraction, str]]) -> str:
    """The text of a reaction; negative coefficients stand on the left."""
    terms = tuple(terms)
    left = [written_term(-number, name) for number, name in terms if number < 0]
    right = [written_term(number, name) for number, name in terms if number > 0]
    return f"{' + '.join(left)} = {' + '.join(right)}"


def written_term(number: Fraction, name: str) -> str:
    """A species with its coefficient, which is left out where it is 1."""
    return name if number == 1 else f"{written_number(number)} {name}"


def written_number(number: Fraction) -> str:
    """An integer, a simple fraction or a decimal that means exactly this number."""
    if number.denominator > _FRACTIONS:
        decimal = repr(float(number))
        if "e" not in decimal and Fraction(decimal) == number:
            return decimal
    return str(number)
