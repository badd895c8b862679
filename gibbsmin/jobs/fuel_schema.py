"""The case file's ``[feed.NAME.fuel]`` tables: fuels known by elements and heating value."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import NOTHING, each
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.thermo.fuel import FUEL_ELEMENTS, Basis
from gibbsmin.thermo.species import Phase
from gibbsmin.units import read_density, read_heating_value, read_share, shown

_ELEMENTS = '{ C = "72 %", H = "5 %", O = "12 %" }'
_OXIDES = '{ SiO2 = "55 %", Al2O3 = "30 %", CaO = "15 %" }'
_HEATING_VALUES = ("higher_heating_value", "lower_heating_value")


def _elements(given: object) -> Mapping[str, Any]:
    if not isinstance(given, Mapping) or not given:
        raise InputError(
            f"found {shown(given)}" if given else "found nothing",
            f"accepted is a table of elements and their shares by mass, such as {_ELEMENTS}",
        )
    for symbol in given:
        if symbol not in FUEL_ELEMENTS:
            raise InputError(
                "found what is no element of a fuel",
                f"accepted is {', '.join(FUEL_ELEMENTS[:-1])} or {FUEL_ELEMENTS[-1]}",
                key=str(symbol),
            )
    return given


def _basis(given: object) -> Basis:
    try:
        return Basis(str(given))
    except ValueError:
        words = [f'"{basis}"' for basis in Basis]
        raise InputError(
            "found nothing" if given is None else f"found {shown(given)}",
            f"accepted is {', '.join(words[:-1])} or {words[-1]}",
        ) from None


def _ash(given: object) -> object:
    if given == "inert":
        return {}
    if isinstance(given, Mapping) and given:
        return given
    raise InputError(
        f"found {shown(given)}",
        f'accepted is "inert", or a table of oxides and their shares by mass, such as {_OXIDES}',
    )


def _phase(given: object) -> Phase:
    if given not in (Phase.SOLID.value, Phase.LIQUID.value):
        raise InputError(f"found {shown(given)}", 'accepted is "solid" or "liquid"')
    return Phase(str(given))


class FuelTable(Table):
    """A fuel's analysis by mass and its heating value, each with its basis.

    Moisture is a share of the fuel as received; ash is one of the same where that is the basis,
    and of the dry fuel otherwise.
    """

    analysis: Annotated[
        Mapping[str, float], each(read_share, _ELEMENTS), BeforeValidator(_elements)
    ] = MISSING
    basis: Annotated[Basis, BeforeValidator(_basis)] = MISSING
    ash: Annotated[float, BeforeValidator(read_share)] = 0.0
    moisture: Annotated[float, BeforeValidator(read_share)] = 0.0
    ash_composition: Annotated[
        Mapping[str, float], each(read_share, _OXIDES), BeforeValidator(_ash)
    ] = NOTHING
    higher_heating_value: Annotated[float | None, BeforeValidator(read_heating_value)] = None
    lower_heating_value: Annotated[float | None, BeforeValidator(read_heating_value)] = None
    heating_value_basis: Annotated[Basis | None, BeforeValidator(_basis)] = None
    phase: Annotated[Phase, BeforeValidator(_phase)] = Phase.SOLID
    density: Annotated[float | None, BeforeValidator(read_density)] = None

    @model_validator(mode="after")
    def _one_heating_value(self) -> Self:
        given = [key for key in _HEATING_VALUES if getattr(self, key) is not None]
        if len(given) != 1:
            raise InputError(
                "found no heating value" if not given else f"found {given[1]} beside {given[0]}",
                "accepted is one of higher_heating_value and lower_heating_value, such as "
                '"28.5 MJ/kg"',
                key=_HEATING_VALUES[len(given) // 2],
            )
        return self

    @model_validator(mode="after")
    def _density_of_a_liquid(self) -> Self:
        if self.phase is Phase.LIQUID and self.density is None:
            raise InputError(
                "found no density of a liquid fuel, from which its entropy and heat capacity are "
                "estimated",
                'accepted is a density such as "0.96 kg/L"',
                key="density",
            )
        if self.phase is Phase.SOLID and self.density is not None:
            raise InputError(
                "found a density of a solid fuel, for which it has no use",
                'accepted is a density of a liquid one, with phase = "liquid"',
                key="density",
            )
        return self
