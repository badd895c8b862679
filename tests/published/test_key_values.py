"""Enthalpies of formation and entropies at 298.15 K against evaluated key values.

A row with an ``exception`` is one that the library departs from on purpose, with the reason; it
must depart indeed, so that the list of exceptions stays true.
"""

from __future__ import annotations

import pytest
from published_values import CheckValue, check_values

from gibbsmin.thermo.library import load_library

CHECKS = check_values("key_values")
AGREEING = [check for check in CHECKS if not check["exception"]]
EXCEPTIONS = [check for check in CHECKS if check["exception"]]


@pytest.mark.parametrize("check", AGREEING, ids=str)
def test_library_agrees_with_the_key_value(check: CheckValue) -> None:
    found = library_value(check)
    assert check.meets(found), f"{found} against {check.value} ± {check.tolerance}"


@pytest.mark.parametrize("check", EXCEPTIONS, ids=str)
def test_exception_is_one(check: CheckValue) -> None:
    assert not check.meets(library_value(check))


def library_value(check: CheckValue) -> float:
    record = load_library()[check["record"]]
    if check["quantity"] == "entropy":
        return record.S298
    return record.dfH298 / 1000
