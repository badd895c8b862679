"""Physical constants and reference conditions, in SI units.

The Boltzmann and Avogadro constants and the elementary charge are exact by definition
(SI, 2019; CODATA 2018 and 2022 list the same values).
"""

from typing import Final

BOLTZMANN_CONSTANT: Final = 1.380649e-23
"""J/K, exact."""

AVOGADRO_CONSTANT: Final = 6.02214076e23
"""1/mol, exact."""

ELEMENTARY_CHARGE: Final = 1.602176634e-19
"""C, exact."""

PLANCK_CONSTANT: Final = 6.62607015e-34
"""J s, exact."""

SPEED_OF_LIGHT: Final = 299792458.0
"""m/s, exact."""

GAS_CONSTANT: Final = BOLTZMANN_CONSTANT * AVOGADRO_CONSTANT
"""R in J/(mol K), exact: 8.31446261815324."""

FARADAY_CONSTANT: Final = ELEMENTARY_CHARGE * AVOGADRO_CONSTANT
"""F in C/mol, exact."""

REFERENCE_TEMPERATURE: Final = 298.15
"""K; enthalpies of formation and standard entropies are tabulated here."""

STANDARD_PRESSURE: Final = 1e5
"""Pa; P° of every standard state in the library."""

STANDARD_ATMOSPHERE: Final = 101325.0
"""Pa, exact."""
