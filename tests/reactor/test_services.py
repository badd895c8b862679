"""The table of services: every name resolves, every reaction balances, every duty is solvable."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.errors import InputError
from gibbsmin.minimise import minimise
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.model import stage_model
from gibbsmin.reactor.services import Service, find_service, services
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.reaction import Reaction

NAMES = sorted(services())
EXPECTED = {
    "steam reforming",
    "shift",
    "low-temperature shift",
    "methanation",
    "ammonia",
    "methanol",
    "SO2 oxidation",
    "sulphur recovery",
    "sulphur recovery converter",
    "sulphur condenser",
    "combustion",
    "gasification",
    "oxide reduction",
    "carburising",
}
SERVICES = (
    "steam reforming, shift, low-temperature shift, methanation, ammonia, methanol, "
    "SO2 oxidation, sulphur recovery, sulphur recovery converter, sulphur condenser, combustion, "
    "gasification, oxide reduction, carburising"
)


def reactions_of(service: Service) -> list[Reaction]:
    library = load_library()
    return [Reaction.read(text, library) for text in service.key_reactions + service.carbon_routes]


def test_the_services_of_the_trade_are_there() -> None:
    assert set(NAMES) == EXPECTED


@pytest.mark.parametrize("name", NAMES)
def test_records_resolve_and_stand_once(name: str) -> None:
    service, library = services()[name], load_library()
    names = service.consider + service.inert
    assert len(set(names)) == len(names)
    assert not any(library[record].superseded for record in names)


@pytest.mark.parametrize("name", NAMES)
def test_reactions_balance_between_records_considered(name: str) -> None:
    service = services()[name]
    assert service.key_reactions
    for reaction in reactions_of(service):
        written = {substance.text for _, substance in reaction.terms}
        forms = {form.name for _, substance in reaction.terms for form in substance.forms}
        assert written == forms, "each record is named with its state"
        carbon = {"C(graphite)"} if str(reaction) in service.carbon_routes else set()
        assert written - carbon <= {*service.consider, *service.inert}


@pytest.mark.parametrize("name", NAMES)
def test_carbon_routes_form_carbon(name: str) -> None:
    for text in services()[name].carbon_routes:
        formed = {s.text for _, s in Reaction.read(text, load_library()).products}
        assert formed & {"C(graphite)", "Fe3C(cr)"}


@pytest.mark.parametrize("name", NAMES)
def test_each_field_has_its_source(name: str) -> None:
    service = services()[name]
    fields = {
        "consider": service.consider,
        "inert": service.inert,
        "key reaction": service.key_reactions,
        "carbon route": service.carbon_routes,
    }
    assert set(service.sources) == {field for field, values in fields.items() if values}
    assert all(service.sources.values())


@pytest.mark.parametrize("name", NAMES)
def test_a_feed_of_its_key_reaction_comes_to_equilibrium(name: str) -> None:
    service, library = services()[name], load_library()
    reaction = Reaction.read(service.key_reactions[0], library)
    feed = [substance.forms[0] for _, substance in reaction.reactants]
    chemistry = Chemistry(Selection(consider=service.consider))
    model = stage_model(chemistry, feed, library)
    amounts = np.array([[2.0 * float(-number) for number, _ in reaction.reactants]])
    solution = minimise(model.programme(np.array([900.0]), np.array([2e5]), amounts))
    assert solution.certified.all()


def test_capitals_and_blanks_do_not_matter() -> None:
    assert find_service("  Steam  reforming ").name == "steam reforming"
    assert find_service("so2 oxidation").name == "SO2 oxidation"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "steam reformer",
            f'service: found the service "steam reformer"; accepted is one of {SERVICES}.',
        ),
        (
            "xyz",
            f'service: found the service "xyz"; accepted is one of {SERVICES}.',
        ),
    ],
)
def test_an_unknown_service_is_refused(text: str, message: str) -> None:
    with pytest.raises(InputError) as raised:
        find_service(text)
    assert str(raised.value) == message
