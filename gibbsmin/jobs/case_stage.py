"""Turns a case's tables of stages into what the reactor layer takes."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.case_reactions import coefficients_of
from gibbsmin.jobs.case_selection import proposed, read_selection
from gibbsmin.jobs.feed_parts import item_key, placed, resolve
from gibbsmin.reactor.approach import Approach
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry, HeldFraction
from gibbsmin.reactor.services import Service, find_service
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.real_gas import equation_named

if TYPE_CHECKING:
    from gibbsmin.jobs.case_schema import CaseTable
    from gibbsmin.jobs.stage_schema import ApproachTable, OutletTable, SpeciesTable


Value = TypeVar("Value")


@dataclass(frozen=True)
class StageCase:
    """One stage of a case.

    Parameters
    ----------
    name
        As reports call it.
    key
        Where it stands in the case file, and how axes and uncertainties name it: ``outlet``, or
        ``stage.`` and its name.
    feeds
        Names of the streams that enter here, beside the outlet of the stage before.
    chemistry
        Which records may appear in the outlet, and what holds them back.
    specification
        Its two given conditions.
    boundary_temperature
        Where heat crosses into the stage, K, one or (B,); None means at the outlet's temperature.
    surroundings_temperature
        For lost work, K.
    reference_oxygen
        Fraction of O2 in the dry gas at which emissions are told; None tells none.
    extents
        Reactions whose extents are told, as ν by record name.
    bypass
        Share of what enters that goes around the reaction and joins its outlet; one or (B,).
    removed
        Share of each record that is taken out of the outlet; each one or (B,).
    own_species
        Whether it names its candidates itself, in place of the case's.
    service
        The trade's proposal that it follows where the case does not say otherwise.
    """

    name: str
    key: str
    feeds: tuple[str, ...]
    chemistry: Chemistry
    specification: Specification
    boundary_temperature: Values | None
    surroundings_temperature: float
    bypass: Values
    removed: Mapping[str, Values]
    own_species: bool = False
    service: Service | None = None
    reference_oxygen: float | None = None
    extents: tuple[Mapping[str, float], ...] = ()


def read_stages(
    table: CaseTable, streams: Sequence[Stream], library: Library
) -> tuple[StageCase, ...]:
    """The stages in order; streams that no stage names enter the first.

    Raises
    ------
    InputError
        for names that are no streams, records or reactions, and for a heat that does not count
        like the feeds (per time, or not).
    """
    names = [stream.name for stream in streams]
    named = [name for stage in table.stage for name in stage.feeds or ()]
    if table.outlet is not None:
        return (
            _stage("outlet", "outlet", tuple(names), table.outlet, None, table, streams, library),
        )
    stages: list[StageCase] = []
    for index, stage in enumerate(table.stage):
        key = item_key("stage", index, stage.name)
        if key in [each.key for each in stages]:
            raise InputError(
                f'found two stages named "{stage.name}"',
                "accepted is a name of its own for each stage",
                key="stage",
            )
        for name in stage.feeds or ():
            if name not in names or named.count(name) > 1:
                raise InputError(
                    f'found "{name}", which '
                    + ("two stages name" if name in names else "is no stream"),
                    f"accepted is each stream once: {', '.join(names)}",
                    key=f"{key}.feeds",
                )
        feeds = stage.feeds or ()
        if index == 0:
            feeds = (*feeds, *(name for name in names if name not in named))
            if not feeds:
                raise InputError(
                    "found no stream for the first stage",
                    f"accepted is at least one: {', '.join(names)}",
                    key=f"{key}.feeds",
                )
        stages.append(_stage(stage.name, key, feeds, stage, stage.species, table, streams, library))
    return tuple(stages)


def _stage(
    name: str,
    key: str,
    feeds: tuple[str, ...],
    stage: OutletTable,
    species: SpeciesTable | None,
    table: CaseTable,
    streams: Sequence[Stream],
    library: Library,
) -> StageCase:
    selection_key = "species" if species is None else f"{key}.species"
    given = species or table.species
    selection = read_selection(selection_key, given, library)
    service = None
    if stage.service is not None:
        service = _service(f"{key}.service", stage.service)
        selection = proposed(service, given.model_fields_set, selection)
    return StageCase(
        name=name,
        key=key,
        feeds=feeds,
        chemistry=_chemistry(key, stage, selection, library),
        specification=_specification(key, stage, streams[0]),
        boundary_temperature=stage.boundary_temperature,
        surroundings_temperature=stage.surroundings_temperature,
        bypass=stage.bypass,
        removed=_by_record(f"{key}.remove", stage.remove, library),
        own_species=species is not None,
        service=service,
        reference_oxygen=stage.reference_oxygen,
        extents=_extents(f"{key}.extents", stage.extents, library),
    )


def _service(key: str, name: str) -> Service:
    try:
        return find_service(name)
    except InputError as error:
        error.key = key
        raise


def _specification(key: str, stage: OutletTable, stream: Stream) -> Specification:
    heat = None
    if stage.heat is not None:
        if stage.heat.value and stage.heat.unit.dimension.is_flow != stream.is_flow:
            kind = "a flow, such as kW" if stream.is_flow else "a quantity, such as kJ"
            raise UnitError(
                f'found a heat in "{stage.heat.unit.text}", while the feeds are in "{stream.unit}"',
                f"accepted is {kind}",
                key=f"{key}.heat",
            )
        heat = stage.heat.value
    if stage.volume is not None and stream.is_flow:
        raise UnitError(
            f'found the volume of a closed vessel, while the feeds flow, in "{stream.unit}"',
            "accepted is a pressure, or feeds that are quantities",
            key=f"{key}.volume",
        )
    return Specification(
        temperature=stage.temperature,
        heat=heat,
        heat_loss=stage.heat_loss,
        entropy_of_feed=stage.entropy == "feed",
        pressure=stage.pressure,
        pressure_drop=stage.pressure_drop,
        volume=stage.volume,
    )


def _chemistry(key: str, stage: OutletTable, selection: Selection, library: Library) -> Chemistry:
    fractions = _by_record(f"{key}.held_fraction", stage.held_fraction, library)
    with placed(f"{key}.condense"):
        condense = tuple(resolve(text, library).formula for text in stage.condense)
    return Chemistry(
        selection=selection,
        reactions=stage.reactions,
        condense=condense,
        conversions=_by_record(f"{key}.conversion", stage.conversion, library),
        fractions=tuple(
            HeldFraction(name, share, basis) for name, (share, basis) in fractions.items()
        ),
        approaches=tuple(
            _approach(item_key(f"{key}.approach", index), approach, library)
            for index, approach in enumerate(stage.approach)
        ),
        others=stage.others,
        offsets=_by_record(f"{key}.offset", stage.offset, library),
        activities=_by_record(f"{key}.activity", stage.activity, library),
        equation=None if stage.gas == "ideal" else equation_named(stage.gas),
    )


def _approach(key: str, table: ApproachTable, library: Library) -> Approach:
    with placed(f"{key}.reaction"):
        coefficients = coefficients_of(table.reaction, library)
    chosen = ""
    if table.key is not None:
        with placed(f"{key}.key"):
            chosen = resolve(table.key, library).name
            if chosen not in coefficients:
                raise InputError(
                    f'found "{table.key}", which is not in "{table.reaction}"',
                    f"accepted is one of {', '.join(coefficients)}",
                )
    return Approach(table.reaction, coefficients, table.approach, chosen)


def _extents(key: str, texts: Sequence[str], library: Library) -> tuple[Mapping[str, float], ...]:
    with placed(key):
        return tuple(coefficients_of(text, library) for text in texts)


def _by_record(key: str, values: Mapping[str, Value], library: Library) -> dict[str, Value]:
    found = {}
    for text, value in values.items():
        with placed(f"{key}.{text}"):
            found[resolve(text, library).name] = value
    return found
