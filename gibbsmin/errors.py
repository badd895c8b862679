"""The project's errors: one root, each with its data as fields.

Every input error reads as one sentence that names the file and the key (where they are known),
what was found and what is accepted.  A layer that knows only the value raises it; the layer that
knows where the value stands adds the place with :meth:`InputError.at`.
"""

from __future__ import annotations

from typing import Any, Self


class GibbsminError(Exception):
    """Root of all errors that gibbsmin raises on purpose."""


class InputError(GibbsminError, ValueError):
    """Something given by the user cannot be used.

    Parameters
    ----------
    found
        What was found, as a clause: ``found "850 bar", which is a pressure``.
    accepted
        What is accepted, as a clause: ``accepted is a temperature such as "850 degC"``.
    key
        Dotted path of the key in its file, empty when unknown.
    file
        Name of the file, empty when unknown.
    """

    def __init__(self, found: str, accepted: str, *, key: str = "", file: str = "") -> None:
        super().__init__(found, accepted)
        self.found = found
        self.accepted = accepted
        self.key = key
        self.file = file

    def at(self, *, key: str = "", file: str = "") -> Self:
        """Add the place where the value stands; what is known already is kept."""
        self.key = self.key or key
        self.file = self.file or file
        return self

    def __str__(self) -> str:
        place = "".join(f"{part}: " for part in (self.file, self.key) if part)
        return f"{place}{self.found}; {self.accepted}."

    def __reduce__(self) -> tuple[Any, ...]:
        # Exceptions pickle by their positional arguments alone; the fields travel as state.
        return (type(self), (self.found, self.accepted), self.__dict__)


class UnitError(InputError):
    """A quantity whose unit is unknown, ambiguous or of the wrong dimension."""


class FormulaError(InputError):
    """A chemical formula that cannot be read."""


class UnknownSpeciesError(InputError, KeyError):
    """A name that no library record bears, or that several do."""

    __str__ = InputError.__str__


class ReactionError(InputError):
    """A reaction that cannot be read or is not balanced."""


class BalanceError(InputError):
    """A feed whose elements the candidates cannot hold."""


class OutputError(InputError):
    """A file that cannot be written."""
