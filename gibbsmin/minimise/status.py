"""How a state ended, and which method answered."""

from __future__ import annotations

from enum import IntEnum


class Status(IntEnum):
    """The end of one state; stored as small integers so that a batch is one array.

    Only a certified state carries numbers: amounts, multipliers and certificate of every other
    state are NaN.
    """

    CERTIFIED = 0, "The amounts are proved to minimise the Gibbs energy within the tolerances."
    UNCERTIFIED = 1, "No method reached amounts that could be proved right within the tolerances."
    INFEASIBLE = 2, "No non-negative amounts of the candidates meet the supplies."
    INVALID = 3, "An energy or a supply is not a finite number."
    UNMET = 4, "No temperature meets what is specified."
    AMBIGUOUS = 5, "More than one temperature meets what is specified."
    UNSETTLED = 6, "The fugacity coefficients of the gas and its composition did not settle."

    sentence: str

    def __new__(cls, value: int, sentence: str) -> Status:
        member = int.__new__(cls, value)
        member._value_ = value
        member.sentence = sentence
        return member


class Method(IntEnum):
    """The method that answered a state; stored as small integers like :class:`Status`."""

    NONE = 0, "No method answered."
    CONIC = 1, "An interior-point solution of the conic programme, polished by Newton's method."
    COMPILED = (
        2,
        "The compiled Newton method on log balances, from a linear programme or neighbours.",
    )
    RECOVERY = (
        3,
        "The compiled method by one of its recovery steps: another start, other exchanges.",
    )

    sentence: str

    def __new__(cls, value: int, sentence: str) -> Method:
        member = int.__new__(cls, value)
        member._value_ = value
        member.sentence = sentence
        return member
