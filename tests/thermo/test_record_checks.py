"""Checks of records: each fault of its own, and how a record stands to the library's."""

from __future__ import annotations

from dataclasses import replace

import pytest

from gibbsmin.thermo.library import Library, load_library
from gibbsmin.thermo.record_checks import check_record
from gibbsmin.thermo.species import Piece, Species

EMPTY = Library(())


def good() -> Species:
    return replace(load_library()["CO2(g)"], pieces=(Piece(298.15, 1500.0, 30.0, 10.0),))


def test_a_good_record_without_a_counterpart_has_no_other_remark() -> None:
    assert list(check_record(good(), EMPTY)) == ["The library has no record of this name."]


@pytest.mark.parametrize(
    ("record", "sentence"),
    [
        (
            replace(good(), pieces=(Piece(298.15, 1000.0, 30.0, -40.0),)),
            "The heat capacity is not above zero near 1000 K.",
        ),
        (
            replace(good(), pieces=(*good().pieces, Piece(1500.0, 2000.0, 49.5))),
            "The heat capacity steps by +10.0 % at 1500 K.",
        ),
        (
            replace(good(), S298=3.0),
            "An entropy of 3.0 J/(mol K) is unusually low for a gas: is it absolute?",
        ),
        (
            replace(good(), pieces=(Piece(400.0, 800.0, 40.0),)),
            "The range 400 to 800 K does not hold 298.15 K: between, the heat capacity is "
            "continued as a constant.",
        ),
    ],
)
def test_a_fault_is_told(record: Species, sentence: str) -> None:
    assert next(iter(check_record(record, EMPTY))) == sentence


def test_a_transition_may_step() -> None:
    pieces = (*good().pieces, Piece(1500.0, 2000.0, 60.0, transition=5000.0, label="melting"))
    assert list(check_record(replace(good(), pieces=pieces), EMPTY)) == [
        "The library has no record of this name."
    ]


def test_a_record_is_held_against_the_librarys() -> None:
    library = load_library()
    ours = library["CO2(g)"]
    moved = replace(ours, dfH298=ours.dfH298 + 1000.0, S298=ours.S298 - 0.5)
    first, second, third = check_record(moved, library)
    assert first == "Against the library: ΔfH +1.000 kJ/mol, S -0.500 J/(mol K)."
    assert second.startswith("Its Cp differs by +0.00 % at 298.15 K, +0.00 % at 500 K, ")
    # ΔG/RT = 1000/(298.15 R) + 0.5/R.
    assert third.startswith("Its G/RT differs by +0.4635 at 298.15 K, ")
