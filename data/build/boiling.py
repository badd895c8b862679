"""Ties liquids to their gases: enthalpy by vaporization, entropy by the normal boiling point.

The ideal gas at 1 atm and the liquid meet at the normal boiling point, so that the record boils
there; it thereby carries what the vapour lacks to an ideal gas.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from gibbsmin.data.build import reference_tables as tables
from gibbsmin.data.build.evaluate import properties_of
from gibbsmin.data.build.record import BuildRecord

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import (
    GAS_CONSTANT,
    REFERENCE_TEMPERATURE,
    STANDARD_ATMOSPHERE,
    STANDARD_PRESSURE,
)

REMARK = "entropy from the normal boiling point"


def with_vaporization(liquid: BuildRecord, gas: BuildRecord, heat: float, T: float) -> BuildRecord:
    """The liquid with the enthalpy that makes ``heat`` its enthalpy of vaporization at T, J/mol."""
    H_liquid, H_gas = properties_of(liquid, gas).enthalpy(T)
    return replace(liquid, dfH298=round(float(liquid.dfH298 + H_gas - heat - H_liquid), 1))


def with_boiling_point(liquid: BuildRecord, gas: BuildRecord, T: float) -> BuildRecord:
    """The liquid with the entropy that lets it boil at T under 1 atm."""
    G_liquid, G_gas = properties_of(liquid, gas).gibbs_energy(T)
    at_atmosphere = G_gas + GAS_CONSTANT * T * math.log(STANDARD_ATMOSPHERE / STANDARD_PRESSURE)
    S298 = liquid.S298 + (G_liquid - at_atmosphere) / T
    return replace(liquid, S298=round(float(S298), 3))


def perry_liquid(cas: str) -> tuple[FloatArray, FloatArray]:
    """Perry's polynomial of a liquid on a grid: T in K, Cp in J/mol/K."""
    row = tables.table(tables.PERRY_LIQUID)[cas]
    low, high = float(row["Tmin"]), float(row["Tmax"])
    T = np.unique([*np.linspace(low, high, 12), REFERENCE_TEMPERATURE])
    T = T[(low <= T) & (high >= T)]
    Cp = sum(float(row[name]) * T**power for power, name in enumerate("ABCDE"))
    # The table counts per kilomole.
    return T, np.asarray(Cp) / 1000
