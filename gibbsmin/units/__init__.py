"""Units at the edge: quantities as engineers write them, to SI floats and back.

Conventions: gauge pressures (``barg``, ``bar(g)``, ``psig``, ``kPag``) are above the site's
pressure, all others absolute; Nm3 at 0 °C and 101.325 kPa, Sm3 at 15 °C and 101.325 kPa, scf at
60 °F and 14.696 psi, each counted as an ideal gas; the calorie is thermochemical, 4.184 J, the Btu
that of the International Table, 1055.056 J.  A unit that a unit library would take for something
else (``C``, ``ton``, ``MT``, ``Nm``) is asked about, and a number without a unit is refused.
"""

from gibbsmin.units.molar import read_molar_energy, read_molar_entropy
from gibbsmin.units.reading import (
    Measure,
    read_amount,
    read_amount_unit,
    read_heat,
    read_pressure,
    read_pressure_drop,
    read_quantity,
    read_share,
    read_site_pressure,
    read_temperature,
    read_temperature_difference,
    read_volume,
    shown,
    to_unit,
)
from gibbsmin.units.specific import read_density, read_entropy, read_heating_value
from gibbsmin.units.unit import Dimension, Unit

__all__ = [
    "Dimension",
    "Measure",
    "Unit",
    "read_amount",
    "read_amount_unit",
    "read_density",
    "read_entropy",
    "read_heat",
    "read_heating_value",
    "read_molar_energy",
    "read_molar_entropy",
    "read_pressure",
    "read_pressure_drop",
    "read_quantity",
    "read_share",
    "read_site_pressure",
    "read_temperature",
    "read_temperature_difference",
    "read_volume",
    "shown",
    "to_unit",
]
