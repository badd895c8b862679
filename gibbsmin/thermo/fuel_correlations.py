"""Published correlations for fuels that are known by their elements alone.

Shares are by mass, of the elements C, H, O, N, S and Cl in dry and ash-free fuel unless another
basis is named; a missing element counts as none.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import AVOGADRO_CONSTANT, GAS_CONSTANT
from gibbsmin.thermo.elements import atomic_weights
from gibbsmin.thermo.tables import Source

SOLID_ENTROPY: Final = Source(
    "Eiserman-1980",
    "W. Eiserman, P. Johnson, W. L. Conger, Estimating thermodynamic properties of coal, char, tar "
    "and ash, Fuel Processing Technology 3, 39-53 (1980)",
    "estimate; coefficients recalled from memory, found to meet 43 organic crystals of the CRC "
    "Handbook within 14 % (root mean square)",
)
LIQUID_ENTROPY: Final = Source(
    "Glasser-2004",
    "L. Glasser, H. D. B. Jenkins, Standard absolute entropies from volume or density: Part II. "
    "Organic liquids and solids, Thermochimica Acta 414, 125-130 (2004)",
    "estimate; coefficients recalled from memory, found to meet 60 organic liquids of the library "
    "within 10 % (root mean square)",
)
SOLID_HEAT_CAPACITY: Final = Source(
    "Merrick-1983",
    "D. Merrick, Mathematical models of the thermal decomposition of coal: 2. Specific heats and "
    "heats of reaction, Fuel 62, 540-546 (1983)",
    "estimate; equation recalled from memory",
)
LIQUID_HEAT_CAPACITY: Final = Source(
    "Cragoe-1929",
    "C. S. Cragoe, Thermal properties of petroleum products, U.S. Bureau of Standards "
    "Miscellaneous Publication 97 (1929)",
    "estimate; equation recalled from memory",
)
HEATING_VALUE_CHECK: Final = Source(
    "Channiwala-2002",
    "S. A. Channiwala, P. P. Parikh, A unified correlation for estimating HHV of solid, liquid and "
    "gaseous fuels, Fuel 81, 1051-1063 (2002)",
    "equation recalled from memory",
)
OWN_HEATING_VALUE: Final = Source(
    "heating value", "The heating value that the case gives for its fuel", "the user's"
)
FUEL_SOURCES: Final = (
    OWN_HEATING_VALUE,
    SOLID_ENTROPY,
    LIQUID_ENTROPY,
    SOLID_HEAT_CAPACITY,
    LIQUID_HEAT_CAPACITY,
)

_RELATIVE_SPREAD: Final = 0.15
_OXYGEN_RICH: Final = 0.5
_RELATIVE_SPREAD_OXYGEN_RICH: Final = 0.35
_RELATIVE_SPREAD_LIQUID: Final = 0.10

_WATER_DENSITY: Final = 999.0
"""kg/m³ at 15 °C, to which specific gravities refer (common knowledge)."""


def solid_entropy(shares: Mapping[str, float]) -> tuple[float, float]:
    """Absolute entropy of a solid fuel at 298.15 K and its standard uncertainty, J/(kg K).

    s = c [37.1635 − 31.4767 exp(−0.564682 h/(c+n)) + 20.1145 o/(c+n) + 54.3111 n/(c+n)
    + 44.6712 s/(c+n)], with c, h, o, n, s in mol/kg (:data:`SOLID_ENTROPY`); chlorine counts as
    nothing.

    The uncertainty is what the equation misses known crystals by: 15 %, and 35 % above half an
    atom of oxygen to one of carbon, where sugars come out 35 to 48 % high.
    """
    c, h, o, n, s, _ = _moles(shares)
    base = c + n
    value = c * (
        37.1635
        - 31.4767 * np.exp(-0.564682 * h / base)
        + (20.1145 * o + 54.3111 * n + 44.6712 * s) / base
    )
    spread = _RELATIVE_SPREAD_OXYGEN_RICH if o > _OXYGEN_RICH * c else _RELATIVE_SPREAD
    return float(value), float(spread * value)


def liquid_entropy(density: float) -> tuple[float, float]:
    """Absolute entropy of a liquid fuel at 298.15 K and its standard uncertainty, J/(kg K).

    S/(J/(mol K)) = 1133 V/nm³ + 44 for a molecule of volume V (:data:`LIQUID_ENTROPY`).  The molar
    mass of an oil is not known, so the 44 is left out, which is 4 % of S at 400 g/mol.

    Parameters
    ----------
    density
        kg/m³ at room temperature.
    """
    value = 1133.0e27 / (AVOGADRO_CONSTANT * density)
    return value, _RELATIVE_SPREAD_LIQUID * value


def solid_heat_capacity(shares: Mapping[str, float], T: npt.ArrayLike) -> FloatArray:
    """Heat capacity of a solid fuel, J/(kg K); the shape is that of T in K.

    c = R a [g(380 K/T) + 2 g(1800 K/T)],  g(z) = exp(z) [z/(exp(z) − 1)]², with a the atoms in
    mol/kg (:data:`SOLID_HEAT_CAPACITY`).  At high T it tends to Dulong and Petit's 3 R an atom.
    """
    T = np.asarray(T, dtype=float)
    a = float(np.sum(_moles(shares)))
    return np.asarray(GAS_CONSTANT * a * (_einstein(380.0 / T) + 2.0 * _einstein(1800.0 / T)))


def liquid_heat_capacity(density: float) -> tuple[float, float]:
    """Heat capacity c = a + b T of a mineral oil: a in J/(kg K) and b in J/(kg K²).

    c/(cal/(g K)) = (0.403 + 0.00081 t/°C)/√d, with d the specific gravity at 15 °C, stated for 0
    to 400 °C (:data:`LIQUID_HEAT_CAPACITY`).  It misses the library's pure liquid hydrocarbons by
    8 % (root mean square): paraffins lie above it, aromatics below.

    Parameters
    ----------
    density
        kg/m³ at 15 °C.
    """
    per_calorie = 4184.0 / np.sqrt(density / _WATER_DENSITY)
    return float(per_calorie * (0.403 - 0.00081 * 273.15)), float(per_calorie * 0.00081)


def usual_heating_value(shares: Mapping[str, float], ash: float) -> float:
    """Higher heating value that a dry fuel of this composition usually has, J/kg.

    HHV/(MJ/kg) = 0.3491 C + 1.1783 H + 0.1005 S − 0.1034 O − 0.0151 N − 0.0211 ash, in per cent by
    mass of the dry fuel (:data:`HEATING_VALUE_CHECK`; mean absolute error there 1.45 %).

    Parameters
    ----------
    shares, ash
        Of the dry fuel, ash included.
    """
    weights = {"C": 0.3491, "H": 1.1783, "S": 0.1005, "O": -0.1034, "N": -0.0151}
    megajoule = sum(100.0 * shares.get(e, 0.0) * weight for e, weight in weights.items())
    return 1e6 * (megajoule - 0.0211 * 100.0 * ash)


def _moles(shares: Mapping[str, float]) -> FloatArray:
    """Atoms of C, H, O, N, S and Cl in mol/kg."""
    weights = atomic_weights()
    return np.array([shares.get(e, 0.0) / weights[e] for e in ("C", "H", "O", "N", "S", "Cl")])


def _einstein(z: FloatArray) -> FloatArray:
    return np.asarray(np.exp(z) * (z / np.expm1(z)) ** 2)
