"""Organic gases and liquids, chosen from published tables that are checked against each other.

``curated_organics.csv`` lists the substances.  A gas takes its enthalpy of formation from the
Active Thermochemical Tables, else from CRC, else from TRC; its entropy from CRC, else from TRC;
its heat capacity from TRC.  A value counts as supported when another source lies within
``ENTHALPY_WITHIN``, ``ENTROPY_WITHIN`` or ``HEAT_CAPACITY_WITHIN`` of it.  Values that no source
supports although others are at hand are refused unless the list names the source to follow and
the reason.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Final

import numpy as np
from gibbsmin.data.build import reference_tables as tables
from gibbsmin.data.build.boiling import (
    REMARK,
    perry_liquid,
    with_boiling_point,
    with_vaporization,
)
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.trc import TrcGas

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.thermo.fit import Table, fit_heat_capacity, gibbs_errors
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.species import Phase

ATCT: Final = "ATcT"
CRC: Final = "CRC-standard"
CRC_VAPORIZATION: Final = "CRC-vaporization"
TRC: Final = "TRC-gas"
WEBBOOK: Final = "WebBook"
POLING: Final = "Poling"
YAWS: Final = "Yaws"
PERRY_LIQUID: Final = "Perry-2-153"

ENTHALPY_WITHIN: Final = 4e3
"""J/mol, or half a per cent of the value where that is more (perfluorinated substances)."""

ENTROPY_WITHIN: Final = 2.0
"""J/mol/K, or half a per cent of the value where that is more (long chains)."""

HEAT_CAPACITY_WITHIN: Final = 0.025
"""Relative, at 298.15 K."""

_RELATIVE: Final = 0.005
_PREFERENCE: Final = (ATCT, CRC, TRC)
# A compilation that contains estimates and repeats the others: heard only where no other speaks.
_WEAK: Final = frozenset({YAWS})
_LOWEST: Final = 100.0
"""K; nothing is asked of a gas below, where the equation bends most."""

_GAS_GRID: Final = (*range(125, 500, 25), *range(500, 1000, 50), *range(1000, 5001, 200))


@dataclass(frozen=True, slots=True)
class Choice:
    """A value, its source, and the other sources that support it and that differ."""

    value: float
    source: str
    support: tuple[str, ...]
    differing: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Organic:
    """A row of the list with what the sources say of the gas: J/mol and J/mol/K by source."""

    row: tables.Row
    enthalpies: dict[str, float]
    entropies: dict[str, float]
    heat_capacities: dict[str, float]

    @property
    def cas(self) -> str:
        return self.row["cas"]

    def enthalpy(self) -> Choice | None:
        return _choose(self.enthalpies, self.row["enthalpy"], ENTHALPY_WITHIN, _RELATIVE)

    def entropy(self) -> Choice | None:
        return _choose(self.entropies, self.row["entropy"], ENTROPY_WITHIN, _RELATIVE)

    def heat_capacity(self) -> Choice | None:
        only_trc = self.row["heat_capacity"] or TRC
        return _choose(
            self.heat_capacities, self.row["heat_capacity"], 0.0, HEAT_CAPACITY_WITHIN, (only_trc,)
        )


def organic_records() -> Iterator[BuildRecord]:
    """The gases of the list, and the liquids it asks for."""
    for organic in organics():
        gas = gas_record(organic)
        yield gas
        if organic.row["liquid"]:
            yield liquid_record(organic, gas)


@cache
def organics() -> tuple[Organic, ...]:
    """Each row of the list with the values that the sources give."""
    return tuple(_gather(row) for row in tables.curated_list("organics"))


def gas_record(organic: Organic) -> BuildRecord:
    """The gas.

    Raises
    ------
    LookupError
        If the list holds a substance whose sources contradict each other or lack a value.
    """
    enthalpy, entropy, Cp = organic.enthalpy(), organic.entropy(), organic.heat_capacity()
    trc = TrcGas.of(organic.cas)
    if enthalpy is None or entropy is None or Cp is None or trc is None:
        raise LookupError(f"the sources do not settle {organic.row['common_name']}")
    T = _grid(trc)
    H, S = trc.enthalpy(T), trc.entropy(T)
    pieces = fit_heat_capacity(T, trc.heat_capacity(T), H, S)
    errors = gibbs_errors(pieces, Table.read(T, trc.heat_capacity(T), H, S))
    uncertainty = tables.value(tables.ATCT_GAS, organic.cas, "uncertainty")
    return BuildRecord(
        formula=organic.row["formula"],
        state="g",
        phase=Phase.GAS,
        common_name=organic.row["common_name"],
        cas=organic.cas,
        dfH298=enthalpy.value,
        # The source prints intervals of 95 %.
        u_dfH298=uncertainty / 2 if uncertainty and enthalpy.source == ATCT else None,
        S298=entropy.value,
        pieces=pieces,
        source_enthalpy=enthalpy.source,
        source_entropy=entropy.source,
        source_heat_capacity=TRC,
        fit_error=float(np.max(np.abs(errors))),
        remark=_remark(organic, enthalpy, entropy),
    )


def liquid_record(organic: Organic, gas: BuildRecord) -> BuildRecord:
    """The liquid, tied to its gas by vaporization (see :mod:`boiling`).

    The enthalpy of formation is that of the Active Thermochemical Tables where they hold both
    phases, else the gas's less CRC's enthalpy of vaporization at 298.15 K.
    """
    cas = organic.cas
    direct = tables.value(tables.ATCT_LIQUID, cas, "Hfl") if gas.source_enthalpy == ATCT else None
    uncertainty = tables.value(tables.ATCT_LIQUID, cas, "uncertainty") if direct else None
    T, Cp = perry_liquid(cas)
    pieces = fit_heat_capacity(T, Cp)
    liquid = BuildRecord(
        formula=gas.formula,
        state="l",
        phase=Phase.LIQUID,
        common_name=gas.common_name,
        cas=cas,
        dfH298=direct or 0.0,
        u_dfH298=uncertainty / 2 if uncertainty else None,
        S298=0.0,
        pieces=pieces,
        source_enthalpy=ATCT if direct else CRC_VAPORIZATION,
        source_entropy=CRC_VAPORIZATION,
        source_heat_capacity=PERRY_LIQUID,
        fit_error=float(np.max(np.abs(gibbs_errors(pieces, Table.read(T, Cp))))),
        remark=REMARK,
    )
    if not direct:
        heat = _required(tables.value(tables.CRC_VAPORIZATION, cas, "Hvap298"))
        liquid = with_vaporization(liquid, gas, heat, REFERENCE_TEMPERATURE)
    boiling_point = _required(tables.value(tables.CRC_VAPORIZATION, cas, "Tb"))
    return with_boiling_point(liquid, gas, boiling_point)


def _gather(row: tables.Row) -> Organic:
    cas = row["cas"]
    trc = TrcGas.of(cas)
    from_trc: dict[str, float | None] = {"H": None, "S": None, "Cp": None}
    if trc is not None:
        T = np.array([REFERENCE_TEMPERATURE])
        from_trc = {
            "H": trc.enthalpy_of_formation(parse_formula(row["formula"])),
            "S": float(trc.absolute_entropy(T)[0]),
            "Cp": float(trc.heat_capacity(T)[0]),
        }
    return Organic(
        row,
        _known(
            {
                ATCT: tables.value(tables.ATCT_GAS, cas, "Hfg"),
                CRC: tables.value(tables.CRC_STANDARD, cas, "Hfg"),
                TRC: from_trc["H"],
                WEBBOOK: tables.value(tables.WEBBOOK, cas, "Hfg"),
                YAWS: tables.value(tables.YAWS, cas, "Hfg"),
            }
        ),
        _known(
            {
                CRC: tables.value(tables.CRC_STANDARD, cas, "S0g"),
                TRC: from_trc["S"],
                WEBBOOK: tables.value(tables.WEBBOOK, cas, "S0g"),
                YAWS: tables.value(tables.YAWS, cas, "S0g"),
            }
        ),
        _known(
            {
                TRC: from_trc["Cp"],
                CRC: tables.value(tables.CRC_STANDARD, cas, "Cpg"),
                POLING: tables.value(tables.POLING, cas, "Cpg"),
            }
        ),
    )


def _choose(
    values: dict[str, float],
    named: str,
    within: float,
    relative: float,
    preference: tuple[str, ...] = _PREFERENCE,
) -> Choice | None:
    """The first supported value in order of preference, or that of the source named."""
    for source in (named,) if named else preference:
        if source not in values:
            continue
        value = values[source]
        limit = max(within, relative * abs(value))
        others = [other for other in values if other not in (source, *_WEAK)] or [
            other for other in values if other != source
        ]
        support = tuple(o for o in others if abs(values[o] - value) <= limit)
        differing = tuple(o for o in others if o not in support and o not in _WEAK)
        if named or support or not differing or source == ATCT:
            return Choice(value, source, support, differing)
    return None


def _remark(organic: Organic, enthalpy: Choice, entropy: Choice) -> str:
    parts = [organic.row["reason"]] if organic.row["reason"] else []
    if not organic.row["enthalpy"] and not enthalpy.support and enthalpy.differing:
        other = enthalpy.differing[0]
        difference = (organic.enthalpies[other] - enthalpy.value) / 1000
        parts.append(f"enthalpy of formation in {other} differs by {difference:+.1f} kJ/mol")
    if not enthalpy.support and not enthalpy.differing:
        parts.append("enthalpy of formation from one source")
    if not entropy.support and not entropy.differing:
        parts.append("entropy from one source")
    return "; ".join(parts)


def _grid(trc: TrcGas) -> FloatArray:
    low = max(_LOWEST, min(trc.T_low, REFERENCE_TEMPERATURE))
    inside = [T for T in _GAS_GRID if low < T < trc.T_high]
    return np.unique([low, *inside, REFERENCE_TEMPERATURE, trc.T_high])


def _known(values: dict[str, float | None]) -> dict[str, float]:
    return {source: value for source, value in values.items() if value}


def _required(value: float | None) -> float:
    if value is None:
        raise LookupError("the list asks for a liquid that the sources lack")
    return value
