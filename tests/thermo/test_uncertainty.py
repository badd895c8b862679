"""Standard uncertainties: what a record carries goes first, then the default of its class."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from gibbsmin.thermo.fuel_correlations import OWN_HEATING_VALUE
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.uncertainty import (
    BY_DEFINITION,
    OWN_RECORD,
    PUBLISHED,
    record_uncertainties,
    uncertainty_classes,
)

LIBRARY = load_library()


def test_published_ones_are_taken_as_they_are() -> None:
    record = LIBRARY["CO2(g)"]
    found = record_uncertainties([record])
    assert found.enthalpy[0] == record.u_dfH298
    assert found.entropy[0] == record.u_S298
    assert (*found.enthalpy_origins, *found.entropy_origins) == (PUBLISHED, PUBLISHED)


def test_those_of_a_users_own_record_say_so() -> None:
    record = replace(LIBRARY["CO2(g)"], source_entropy="own: mine.toml, CO2(g)")
    found = record_uncertainties([record])
    assert found.entropy_origins == (OWN_RECORD,)
    assert found.enthalpy_origins == (PUBLISHED,)


def test_every_record_of_the_library_has_one_with_its_origin() -> None:
    found = record_uncertainties(LIBRARY.records)
    for values in (found.enthalpy, found.entropy):
        assert np.all(np.isfinite(values))
        assert np.all(values >= 0)
    known = {PUBLISHED, BY_DEFINITION}
    for origin in (*found.enthalpy_origins, *found.entropy_origins):
        assert origin in known or origin.startswith("judgement: ")


def test_reference_states_have_an_exact_enthalpy_and_compounds_do_not() -> None:
    # BO(g) has a tabulated enthalpy of zero by chance.
    iron, oxide = record_uncertainties([LIBRARY["Fe(alpha)"], LIBRARY["BO(g)"]]).enthalpy
    assert iron == 0.0
    assert oxide == 4000.0


@pytest.mark.parametrize(
    ("changes", "expected"),
    [
        ({"source_enthalpy": "JANAF"}, 4000.0),
        ({"source_enthalpy": "JANAF", "charge": 1.0}, 8000.0),
        ({"source_enthalpy": "CRC-standard"}, 1500.0),
        ({"source_enthalpy": "no class of its own"}, 6000.0),
        ({"source_enthalpy": OWN_HEATING_VALUE.key, "molar_mass": 0.02}, 3000.0),
    ],
)
def test_default_is_that_of_the_class(changes: dict[str, object], expected: float) -> None:
    record: Species = replace(LIBRARY["CO2(g)"], u_dfH298=float("nan"), **changes)
    assert record_uncertainties([record]).enthalpy[0] == pytest.approx(expected)


def test_entropy_of_an_evaluated_gas_is_known_better() -> None:
    methane = replace(LIBRARY["CH4(g)"], u_S298=float("nan"))
    other = replace(methane, source_enthalpy="JANAF")
    assert record_uncertainties([methane, other]).entropy.tolist() == [0.15, 0.5]


def test_classes_name_sources_of_the_library() -> None:
    keys = {source.key for source in LIBRARY.sources} | {OWN_HEATING_VALUE.key, ""}
    assert {source for _, source, _ in uncertainty_classes()} <= keys
    assert all(c.reason.startswith("judgement: ") for c in uncertainty_classes().values())
