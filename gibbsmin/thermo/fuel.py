"""Fuels known by their elements and heating value: coal, biomass, heavy oil.

The combustible matter becomes a record of its own whose enthalpy of formation is set so that its
combustion to CO2(g), H2O(l), SO2(g), N2(g) and HCl(g) at 298.15 K gives off the heating value;
entropy and heat capacity are estimates.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum
from typing import Final, Literal

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.thermo.elements import atomic_weights
from gibbsmin.thermo.fit import fit_heat_capacity
from gibbsmin.thermo.fuel_correlations import (
    LIQUID_ENTROPY,
    LIQUID_HEAT_CAPACITY,
    OWN_HEATING_VALUE,
    SOLID_ENTROPY,
    SOLID_HEAT_CAPACITY,
    liquid_entropy,
    liquid_heat_capacity,
    solid_entropy,
    solid_heat_capacity,
)
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import FEED_ONLY, Phase, Piece, Species

FUEL_ELEMENTS: Final = ("C", "H", "O", "N", "S", "Cl")

BURNT_TO: Final = {"C": "CO2(g)", "S": "SO2(g)", "N": "N2(g)", "O": "O2(g)", "Cl": "HCl(g)"}
"""Products of combustion; the hydrogen that HCl leaves becomes water."""

_SOLID_RANGE: Final = np.linspace(273.15, 573.15, 31)
"""K; a solid fuel decomposes above, and is seldom fed colder."""

_LIQUID_RANGE: Final = (273.15, 673.15)


class Basis(StrEnum):
    """What a share or a heating value of a fuel is counted on."""

    AS_RECEIVED = "as received"
    DRY = "dry"
    DRY_AND_ASH_FREE = "dry and ash free"


@dataclass(frozen=True)
class Fuel:
    """A fuel as received, in kg per kg; all together they are 1.

    Attributes
    ----------
    elements : C, H, O, N, S, Cl of the combustible matter, without the moisture's own
    ash, moisture : the rest
    """

    elements: Mapping[str, float]
    ash: float
    moisture: float

    @property
    def matter(self) -> float:
        """Share of dry and ash-free matter."""
        return 1.0 - self.ash - self.moisture

    @property
    def matter_shares(self) -> dict[str, float]:
        """Elements by mass of the dry and ash-free matter; those that are not there left out."""
        total = sum(self.elements.values())
        return {e: share / total for e, share in self.elements.items() if share > 0.0}

    def on(self, basis: Basis) -> float:
        """kg of that basis in a kg as received."""
        if basis is Basis.AS_RECEIVED:
            return 1.0
        return 1.0 - self.moisture if basis is Basis.DRY else self.matter

    @property
    def water_formed(self) -> float:
        """Water that combustion forms, mol per kg as received."""
        weights = atomic_weights()
        hydrogen = self.elements.get("H", 0.0) / weights["H"]
        return (hydrogen - self.elements.get("Cl", 0.0) / weights["Cl"]) / 2

    def higher_heating_value(
        self, given: float, kind: Literal["higher", "lower"], basis: Basis, library: Library
    ) -> float:
        """Higher heating value of the dry and ash-free matter, J/kg.

        A lower heating value is short of it by the evaporation, at 298.15 K, of the water formed
        and, as received, of the moisture.

        Parameters
        ----------
        given
            J/kg of the basis, at constant pressure.
        """
        as_received = given * self.on(basis)
        if kind == "lower":
            steam, water = library["H2O(g)"], library["H2O(l)"]
            moisture = self.moisture if basis is Basis.AS_RECEIVED else 0.0
            evaporated = self.water_formed + moisture / water.molar_mass
            as_received += evaporated * (steam.dfH298 - water.dfH298)
        return as_received / self.matter


def fuel_record(
    name: str,
    shares: Mapping[str, float],
    heating_value: float,
    phase: Phase,
    density: float,
    library: Library,
) -> Species:
    """The record of a fuel's dry and ash-free matter; a mole of it holds a mole of carbon.

    Parameters
    ----------
    name
        How the fuel is called, in place of a formula.
    shares
        Elements by mass, adding up to 1.
    heating_value
        Higher heating value, J/kg.
    phase
        Solid or liquid.
    density
        Of a liquid, kg/m³.

    Raises
    ------
    InputError
        for a fuel without carbon, or with more chlorine than hydrogen to bind it.
    """
    weights = atomic_weights()
    moles = {e: shares[e] / weights[e] for e in sorted(shares)}
    if not moles.get("C"):
        raise InputError("found a fuel without carbon", "accepted is an analysis with carbon")
    if moles.get("Cl", 0.0) > moles.get("H", 0.0):
        raise InputError(
            "found more chlorine than hydrogen to bind it",
            "accepted is an analysis whose chlorine burns to HCl",
        )
    # Six decimals keep reactions readable; they are far finer than any analysis.
    counts = {e: round(amount / moles["C"], 6) for e, amount in moles.items()}
    molar_mass = sum(count * weights[e] for e, count in counts.items())
    solid = phase is Phase.SOLID
    entropy, u_entropy = solid_entropy(shares) if solid else liquid_entropy(density)
    source = SOLID_ENTROPY if solid else LIQUID_ENTROPY
    state = "am" if solid else "l"
    return Species(
        name=f"{name}({state})",
        formula=name,
        state=state,
        phase=phase,
        common_name="",
        cas="",
        elements=tuple(counts.items()),
        charge=0.0,
        molar_mass=molar_mass,
        dfH298=heating_value * molar_mass + _products(counts, library),
        u_dfH298=float("nan"),
        S298=entropy * molar_mass,
        u_S298=u_entropy * molar_mass,
        molar_volume=float("nan") if solid else molar_mass / density,
        pieces=_pieces(shares, molar_mass, phase, density),
        source_enthalpy=OWN_HEATING_VALUE.key,
        source_entropy=source.key,
        source_heat_capacity=(SOLID_HEAT_CAPACITY if solid else LIQUID_HEAT_CAPACITY).key,
        status=FEED_ONLY,
        remark=(
            f"entropy estimated as {entropy:.0f} ± {u_entropy:.0f} J/(kg K), "
            f"{source.key.replace('-', ' ')}; enthalpy of formation from the heating value"
        ),
    )


def _products(counts: Mapping[str, float], library: Library) -> float:
    """Enthalpy of formation of what a mole of fuel burns to, J/mol."""
    water = (counts.get("H", 0.0) - counts.get("Cl", 0.0)) / 2
    others = sum(
        counts.get(e, 0.0) * library[product].dfH298 / dict(library[product].elements)[e]
        for e, product in BURNT_TO.items()
    )
    return others + water * library["H2O(l)"].dfH298


def _pieces(
    shares: Mapping[str, float], molar_mass: float, phase: Phase, density: float
) -> tuple[Piece, ...]:
    if phase is Phase.SOLID:
        Cp = molar_mass * solid_heat_capacity(shares, _SOLID_RANGE)
        return fit_heat_capacity(_SOLID_RANGE, Cp, heat_capacity_tolerance=1e-4)
    constant, slope = liquid_heat_capacity(density)
    return (Piece(*_LIQUID_RANGE, A=molar_mass * constant, B=molar_mass * slope * 1000.0),)
