"""A stream of a fuel known by its elements and heating value: its record, moisture and ash."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.feed_parts import ANALYSIS_SPREAD, placed
from gibbsmin.thermo.fuel import Basis, Fuel, fuel_record
from gibbsmin.thermo.fuel_correlations import FUEL_SOURCES, usual_heating_value
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.thermo.stable_form import Substance
from gibbsmin.units import Dimension, Measure, Unit

if TYPE_CHECKING:
    from gibbsmin.jobs.fuel_schema import FuelTable

_WATER = "H2O(l)"
_POSSIBLE = (3e6, 60e6)
"""J/kg of dry and ash-free matter, wider than any solid or liquid fuel (judged)."""

_UNUSUAL = 0.10
"""A heating value further than this from what the elements usually give is warned of."""


@dataclass(frozen=True)
class FuelFeed:
    """A fuel stream.

    Attributes
    ----------
    record : of the dry and ash-free matter
    amounts : mol (or mol/s) by record name, with moisture and ash
    unit : in which the user counts the whole
    remarks, warnings : sentences for the result
    """

    record: Species
    amounts: dict[str, float]
    unit: Unit
    remarks: tuple[str, ...]
    warnings: tuple[str, ...]


def fuel_feed(
    name: str, table: FuelTable, total: Measure, temperature: float, library: Library
) -> FuelFeed:
    """The fuel of a feed table.

    Raises
    ------
    InputError
        for a name that a library record has, an analysis or ash that does not add up to 100 %, no
        combustible matter, or a total that is no mass.
    """
    key = f"feed.{name}"
    called = name.strip().casefold()
    if library.forms(name) or any(r.common_name.casefold() == called for r in library.records):
        raise InputError(
            f'found a fuel called "{name}", as records of the library are',
            "accepted is a name of its own",
            key=key,
        )
    if total.unit.dimension not in (Dimension.MASS, Dimension.MASS_FLOW):
        raise UnitError(
            f'found "{total.unit.text}" of a fuel, whose molecules are not known',
            'accepted is a mass as received, such as "2 t" or "500 kg/h"',
            key=f"{key}.total",
        )
    fuel, remarks = _as_received(name, table)
    with placed(f"{key}.fuel.{_given_heating_value(table)}"):
        heating_value = _heating_value(table, fuel, library)
    density = float("nan") if table.density is None else table.density
    with placed(f"{key}.fuel.analysis"):
        record = fuel_record(name, fuel.matter_shares, heating_value, table.phase, density, library)
    amounts = {record.name: total.value * fuel.matter / record.molar_mass}
    if fuel.moisture:
        amounts[_WATER] = total.value * fuel.moisture / library[_WATER].molar_mass
    ash = _ash_records(f"{key}.fuel.ash_composition", table.ash_composition, temperature, library)
    for oxide, share in ash.items():
        amounts[oxide.name] = total.value * fuel.ash * share / oxide.molar_mass
    return FuelFeed(
        record,
        amounts,
        total.unit,
        (*remarks, *_remarks(name, fuel, record, heating_value, bool(ash))),
        _heating_value_warning(name, fuel, heating_value),
    )


def _as_received(name: str, table: FuelTable) -> tuple[Fuel, tuple[str, ...]]:
    """The fuel's parts as received, scaled to 1, and a remark where they had to be."""
    as_received = table.basis is Basis.AS_RECEIVED
    counted = {"ash": table.ash if table.basis is not Basis.DRY_AND_ASH_FREE else 0.0}
    counted["moisture"] = table.moisture if as_received else 0.0
    elements = sum(table.analysis.values())
    total = elements + sum(counted.values())
    with_these = " and ".join(word for word, share in counted.items() if share)
    text = f"{100 * total:.6g} %" + (f" with {with_these}" if with_these else "")
    if abs(total - 1.0) > ANALYSIS_SPREAD:
        raise InputError(
            f"found an analysis that adds up to {text}, {table.basis}",
            f"accepted is {100 * (1 - ANALYSIS_SPREAD):g} to {100 * (1 + ANALYSIS_SPREAD):g} %",
            key=f"feed.{name}.fuel.analysis",
        )
    # Ash and moisture stay as they are stated; the elements make up the rest.
    moisture = table.moisture
    ash = table.ash if as_received else table.ash * (1.0 - moisture)
    matter = 1.0 - ash - moisture
    if matter <= 0.0 or elements <= 0.0:
        raise InputError(
            "found ash and moisture that leave no fuel",
            "accepted are shares that leave some",
            key=f"feed.{name}.fuel.ash",
        )
    shares = {symbol: share * matter / elements for symbol, share in table.analysis.items()}
    fuel = Fuel(shares, ash=ash, moisture=moisture)
    if abs(total - 1.0) <= 1e-9:
        return fuel, ()
    return fuel, (f"The analysis of {name} adds up to {text} and is scaled to 100 %.",)


def _given_heating_value(table: FuelTable) -> str:
    return "higher_heating_value" if table.lower_heating_value is None else "lower_heating_value"


def _heating_value(table: FuelTable, fuel: Fuel, library: Library) -> float:
    """Higher heating value of the dry and ash-free matter, J/kg."""
    kind: Literal["higher", "lower"] = "higher"
    given = table.higher_heating_value
    if table.lower_heating_value is not None:
        kind, given = "lower", table.lower_heating_value
    value = fuel.higher_heating_value(
        given or 0.0, kind, table.heating_value_basis or table.basis, library
    )
    low, high = _POSSIBLE
    if not low <= value <= high:
        raise InputError(
            f"found a heating value that makes {value / 1e6:.3g} MJ/kg, higher, of the dry and "
            "ash-free fuel",
            f"accepted is {low / 1e6:g} to {high / 1e6:g} MJ/kg of it",
        )
    return value


def _ash_records(
    key: str, composition: Mapping[str, float], temperature: float, library: Library
) -> dict[Species, float]:
    """Mass shares of the ash by record: of each oxide the solid or liquid form stable at T."""
    if not composition:
        return {}
    total = sum(composition.values())
    if abs(total - 1.0) > ANALYSIS_SPREAD:
        raise InputError(
            f"found an ash composition that adds up to {100 * total:.6g} %",
            f"accepted is {100 * (1 - ANALYSIS_SPREAD):g} to {100 * (1 + ANALYSIS_SPREAD):g} %",
            key=key,
        )
    records: dict[Species, float] = {}
    for text, share in composition.items():
        with placed(f"{key}.{text}"):
            forms = library.substance(text)
        solid = tuple(form for form in forms if form.phase is not Phase.GAS)
        if not solid:
            raise InputError(
                f'found "{text}", of which the library holds gas alone',
                "accepted are solids or liquids",
                key=f"{key}.{text}",
            )
        stable = solid[int(Substance(text, solid).stable(temperature))]
        records[stable] = records.get(stable, 0.0) + share / total
    return records


def _remarks(
    name: str, fuel: Fuel, record: Species, heating_value: float, ash_reacts: bool
) -> tuple[str, ...]:
    source = next(source for source in FUEL_SOURCES if source.key == record.source_entropy)
    sentences = [
        f"The entropy of {name}, {record.S298 / record.molar_mass:.0f} ± "
        f"{record.u_S298 / record.molar_mass:.0f} J/(kg K) of its dry and ash-free matter, is an "
        f"estimate by {source.citation} ({source.status.removeprefix('estimate; ')}).",
        f"The enthalpy of formation of {name} follows from its higher heating value, "
        f"{heating_value / 1e6:.4g} MJ/kg dry and ash free.",
    ]
    if fuel.ash and not ash_reacts:
        sentences.append(
            f"The ash of {name}, {100 * fuel.ash:.3g} % as received, is taken as inert and left "
            "out of the balances, its heat too."
        )
    return tuple(sentences)


def _heating_value_warning(name: str, fuel: Fuel, heating_value: float) -> tuple[str, ...]:
    """A sentence where the heating value is not what the elements usually give."""
    dry = fuel.on(Basis.DRY)
    shares = {symbol: share / dry for symbol, share in fuel.elements.items()}
    usual = usual_heating_value(shares, fuel.ash / dry)
    given = heating_value * fuel.matter / dry
    if abs(given - usual) <= _UNUSUAL * usual:
        return ()
    return (
        f"The heating value of {name} is {given / 1e6:.4g} MJ/kg (higher, dry), while its elements "
        f"usually give {usual / 1e6:.4g} MJ/kg (Channiwala and Parikh, 2002): look at its unit "
        "and its basis.",
    )
