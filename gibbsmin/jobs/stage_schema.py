"""The case file's tables of stages: ``[outlet]`` for one stage, ``[[stage]]`` for a train."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, Field, ValidationInfo, model_validator

from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.jobs.table_schema import (
    MISSING,
    Names,
    Table,
    Temperature,
    read_names,
    read_texts,
    site_pressure,
)
from gibbsmin.reactor.trade_figures import OXYGEN_IN_AIR
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.units import (
    Measure,
    read_heat,
    read_molar_energy,
    read_pressure,
    read_pressure_drop,
    read_share,
    read_temperature,
    read_temperature_difference,
    read_volume,
    shown,
)

IDEAL_GAS = "ideal"
EQUATIONS = tuple(equation.value for equation in Equation)
"""How a stage's gas may be taken."""

_OF_ENERGY = ("temperature", "heat", "heat_loss", "entropy")
_OF_ROOM = ("pressure", "pressure_drop", "volume")


def _names_or_all(given: object) -> Literal["all"] | tuple[str, ...]:
    if given == "all":
        return "all"
    if not given or not isinstance(given, list | tuple):
        raise InputError(
            "found an empty list" if given == [] else f"found {shown(given)}",
            'accepted is "all" or a list of species, such as ["CH4", "H2O"]',
        )
    return read_names(given)


def _pressure(given: object, info: ValidationInfo) -> float:
    return read_pressure(given, site_pressure(info))


def _pressure_drop(given: object) -> float | None:
    return None if given is None else read_pressure_drop(given)


def read_text(given: object) -> str:
    """Text that is not empty."""
    if not isinstance(given, str) or not given.strip():
        raise InputError(f"found {shown(given)}", "accepted is text")
    return given.strip()


def word(*accepted: str) -> BeforeValidator:
    """One of these words."""

    def read(given: object) -> object:
        if given not in accepted:
            words = " or ".join(f'"{word}"' for word in accepted)
            raise InputError(f"found {shown(given)}", f"accepted is {words}")
        return given

    return BeforeValidator(read)


def each(read: Callable[[object], Any], example: str) -> BeforeValidator:
    """A table of species, each value read alike; nothing stays nothing."""

    def values(given: object) -> Mapping[str, Any] | None:
        if given is None:
            return None
        if not isinstance(given, Mapping):
            raise InputError(
                f"found {shown(given)}", f"accepted is a table of species, such as {example}"
            )
        read_values = {}
        for name, value in given.items():
            try:
                read_values[str(name)] = read(value)
            except InputError as error:
                raise error.at(key=str(name)) from None
        return read_values

    return BeforeValidator(values)


def _activity(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not 0.0 < given < 1e30:
        raise InputError(f"found {shown(given)}", "accepted is an activity above 0, such as 0.6")
    return float(given)


def _held(given: object) -> tuple[float, str]:
    """A share of the gas, or of an element fed: "0.5 % dry", "2 % of C"."""
    accepted = (
        'accepted is a share and what it is of, such as "0.5 % dry", "0.5 % wet" or "2 % of C"'
    )
    if isinstance(given, str):
        share, _, basis = given.strip().rpartition(" ")
        share = share.removesuffix(" of")
        if basis in ("wet", "dry") or (basis.isalpha() and given.strip().endswith(f"of {basis}")):
            return read_share(share), basis
    raise InputError(f"found {shown(given)}", accepted)


def _reference_oxygen(given: object) -> float:
    share = read_share(given)
    if share >= OXYGEN_IN_AIR:
        raise InputError(
            f"found {shown(given)}, which is not below the oxygen of air",
            'accepted is a share of the dry gas below 20.95 %, such as "3 %"',
        )
    return share


def _reactions(given: object) -> tuple[str, ...]:
    return read_texts(given, 'accepted is a list of reactions, such as ["CH4 + H2O = CO + 3 H2"]')


def _tables(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple):
        raise InputError(f"found {shown(given)}", "accepted are [[stage.approach]] tables")
    return tuple(given)


NOTHING: Any = Field(default_factory=dict)
"""A table that may be left away."""

_Shares = Annotated[Mapping[str, float], each(read_share, '{ CH4 = "80 %" }')]


def _files(given: object) -> tuple[str, ...]:
    if not isinstance(given, list | tuple) or not all(isinstance(name, str) for name in given):
        raise InputError(
            f"found {shown(given)}", 'accepted is a list of library files, such as ["mine.toml"]'
        )
    return tuple(given)


class SpeciesTable(Table):
    """``[species]`` or ``[stage.species]``: the candidates."""

    consider: Annotated[Literal["all"] | tuple[str, ...], BeforeValidator(_names_or_all)] = "all"
    leave_out: Names = ()
    inert: Names = ()
    library: Annotated[tuple[str, ...], BeforeValidator(_files)] = ()


class ApproachTable(Table):
    """``[[stage.approach]]``: one named reaction and its distance from equilibrium."""

    reaction: Annotated[str, BeforeValidator(read_text)] = MISSING
    approach: Annotated[float, BeforeValidator(read_temperature_difference)] = MISSING
    key: Annotated[str, BeforeValidator(read_text)] | None = None


class OutletTable(Table):
    """``[outlet]``: the one stage, or what every ``[[stage]]`` may say."""

    temperature: Annotated[float | None, BeforeValidator(read_temperature)] = None
    heat: Annotated[Measure | None, BeforeValidator(read_heat)] = None
    heat_loss: Annotated[float | None, BeforeValidator(read_share)] = None
    entropy: Annotated[Literal["feed"] | None, word("feed")] = None
    pressure: Annotated[float | None, BeforeValidator(_pressure)] = None
    pressure_drop: Annotated[float | None, BeforeValidator(_pressure_drop)] = None
    volume: Annotated[float | None, BeforeValidator(read_volume)] = None
    service: Annotated[str, BeforeValidator(read_text)] | None = None
    boundary_temperature: Annotated[float | None, BeforeValidator(read_temperature)] = None
    surroundings_temperature: Temperature = REFERENCE_TEMPERATURE
    reference_oxygen: Annotated[float | None, BeforeValidator(_reference_oxygen)] = None
    reactions: Annotated[Literal["equilibrium", "none"], word("equilibrium", "none")] = (
        "equilibrium"
    )
    condense: Names = ()
    conversion: _Shares = NOTHING
    held_fraction: Annotated[
        Mapping[str, tuple[float, str]], each(_held, '{ CH4 = "0.5 % dry" }')
    ] = NOTHING
    approach: Annotated[tuple[ApproachTable, ...], BeforeValidator(_tables)] = ()
    others: Annotated[Literal["equilibrium", "frozen"], word("equilibrium", "frozen")] = (
        "equilibrium"
    )
    offset: Annotated[
        Mapping[str, float], each(read_molar_energy, '{ "C(graphite)" = "5 kJ/mol" }')
    ] = NOTHING
    activity: Annotated[Mapping[str, float], each(_activity, '{ "C(graphite)" = 0.6 }')] = NOTHING
    remove: _Shares = NOTHING
    extents: Annotated[tuple[str, ...], BeforeValidator(_reactions)] = ()
    bypass: Annotated[float, BeforeValidator(read_share)] = 0.0
    gas: Annotated[str, word(IDEAL_GAS, *EQUATIONS)] = IDEAL_GAS

    @model_validator(mode="after")
    def _two_conditions(self) -> Self:
        self._one_condition(_OF_ENERGY)
        self._one_condition(_OF_ROOM)
        if self.entropy and self.volume:
            raise InputError(
                'found entropy = "feed" with a volume',
                "accepted is a pressure with it, or a heat in its place",
                key="volume",
            )
        return self

    def _one_condition(self, keys: tuple[str, ...]) -> None:
        given = [key for key in keys if getattr(self, key) is not None]
        listed = f"{', '.join(keys[:-1])} and {keys[-1]}"
        if not given:
            raise InputError("found nothing", f"accepted is one of {listed}", key=keys[0])
        if len(given) > 1:
            raise InputError(
                f"found {given[1]} beside {given[0]}", f"accepted is one of {listed}", key=given[1]
            )


class StageTable(OutletTable):
    """``[[stage]]``: one stage of a train."""

    name: Annotated[str, BeforeValidator(read_text)] = MISSING
    feeds: Names | None = None
    species: SpeciesTable | None = None
