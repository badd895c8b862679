"""Chemical formulas as an engineer writes them, read into element counts and charge.

Grammar::

    formula  = [prefix] part { "·" part } { "+" | "-" }    or the electron, "e-"
    prefix   = word or locants and a hyphen, repeated: "n-", "cis-", "1,3-", "trans-2-"
    part     = [number] group { group }
    group    = (symbol | "(" group { group } ")" | "[" group { group } "]") [number]
    number   = digits with at most one decimal point, above zero

``*`` is read as the hydrate dot; raised and lowered digits are read as plain ones.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from functools import lru_cache

from gibbsmin.errors import FormulaError
from gibbsmin.thermo.elements import SYMBOLS

ACCEPTED = "accepted is a formula such as CH4, Ca(OH)2, CaSO4·2H2O or H3O+"

_PREFIX = re.compile(r"(?:(?:[a-z]+|\d+(?:,\d+)*)-)+(?=[A-Z(\[])")
_SYMBOL = re.compile(r"[A-Z][a-z]?")
_NUMBER = re.compile(r"\d+(?:\.\d+)?")
_CHARGE = re.compile(r"(?<=.)(?:\++|-+)$")
_DOTS = str.maketrans("*•⋅", "···")
_CLOSING = {"(": ")", "[": "]"}


@dataclass(frozen=True, slots=True)
class Formula:
    """Composition of a substance.

    Parameters
    ----------
    text
        The formula, with the hydrate dot written "·".
    elements
        Pairs of symbol and count, sorted by symbol; empty for the electron.
    charge
        In elementary charges.
    """

    text: str
    elements: tuple[tuple[str, float], ...]
    charge: float = 0.0

    @property
    def atoms(self) -> float:
        """Number of atoms, Σ of the element counts."""
        return sum(count for _, count in self.elements)


def plain_text(text: str) -> str:
    """The text with raised and lowered digits as plain ones, one hydrate dot, no outer blanks."""
    return unicodedata.normalize("NFKC", text).translate(_DOTS).strip()


@lru_cache(maxsize=8192)
def parse_formula(text: str) -> Formula:
    """Read a formula.

    Parameters
    ----------
    text
        A formula such as ``CH4``, ``Ca(OH)2``, ``CaSO4·2H2O``, ``Fe0.947O``, ``n-C4H10``,
        ``H3O+`` or ``e-``; no state symbol.

    Raises
    ------
    FormulaError
        If the text is no formula; the message says what is wrong and where.
    """
    formula = plain_text(text)
    if formula == "e-":
        return Formula(formula, (), -1.0)
    charge = _CHARGE.search(formula)
    signs = charge.group() if charge else ""
    counts = _Reader(formula, formula.removesuffix(signs)).read()
    elements = tuple(sorted(counts.items()))
    return Formula(formula, elements, float(signs.count("+") - signs.count("-")))


class _Reader:
    """Recursive descent; each method reads one rule of the grammar.

    ``text`` is what errors quote, ``body`` the same without its charge.
    """

    def __init__(self, text: str, body: str) -> None:
        self.text = text
        self.body = body
        prefix = _PREFIX.match(body)
        self.position = prefix.end() if prefix else 0

    def read(self) -> dict[str, float]:
        counts: dict[str, float] = {}
        # A number in front is the reader's own only where it counts one part of several.
        factor = self.number() if "·" in self.body else 1.0
        _add(counts, self.part(""), factor)
        while self.next() == "·":
            self.position += 1
            factor = self.number()
            _add(counts, self.part(""), factor)
        if self.position < len(self.body):
            raise self.error(f'"{self.next()}" is out of place')
        return counts

    def part(self, closing: str) -> dict[str, float]:
        start = self.position
        counts: dict[str, float] = {}
        while self.position < len(self.body) and self.next() not in (")", "]", "·"):
            group = self.group()
            _add(counts, group, self.number())
        if closing and self.next() != closing:
            self.position = start - 1
            raise self.error(f'"{self.next()}" is not closed')
        if not counts:
            raise self.error("an element symbol is missing")
        return counts

    def group(self) -> dict[str, float]:
        character = self.next()
        if character in _CLOSING:
            self.position += 1
            counts = self.part(_CLOSING[character])
            self.position += 1
            return counts
        symbol = _SYMBOL.match(self.body, self.position)
        if symbol is None:
            raise self.error(f'"{character}" is out of place')
        name = symbol.group()
        if name not in SYMBOLS:
            raise self.error(f'"{name}" is no element')
        self.position = symbol.end()
        return {name: 1.0}

    def number(self) -> float:
        number = _NUMBER.match(self.body, self.position)
        if number is None:
            return 1.0
        value = float(number.group())
        if value == 0:
            raise self.error(f'the count "{number.group()}" is zero')
        self.position = number.end()
        return value

    def next(self) -> str:
        return self.body[self.position : self.position + 1]

    def error(self, problem: str) -> FormulaError:
        if not self.text:
            return FormulaError("found an empty formula", ACCEPTED)
        where = (
            f"at position {self.position + 1}" if self.position < len(self.body) else "at the end"
        )
        return FormulaError(f'found "{self.text}", where {problem} {where}', ACCEPTED)


def _add(counts: dict[str, float], more: dict[str, float], factor: float) -> None:
    for symbol, count in more.items():
        counts[symbol] = counts.get(symbol, 0.0) + factor * count
