"""Hand-made records for tests: one good case, and strategies that construct valid ones."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from hypothesis import strategies as st

from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Piece, Species
from gibbsmin.thermo.tables import Source

NAN = float("nan")


def make_species(name: str = "H2O(g)", **changes: Any) -> Species:
    """A record with the composition of its name and invented properties."""
    formula, _, rest = name.partition("(") if name.count("(") == 1 else _split(name)
    state = rest.rstrip(")")
    composition = parse_formula(formula)
    phase = {"g": Phase.GAS, "l": Phase.LIQUID}.get(state, Phase.SOLID)
    species = Species(
        name=name,
        formula=formula,
        state=state,
        phase=phase,
        common_name="",
        cas="",
        elements=composition.elements,
        charge=composition.charge,
        molar_mass=0.018,
        dfH298=-241826.0,
        u_dfH298=40.0,
        S298=188.834,
        u_S298=0.01,
        molar_volume=NAN,
        pieces=(Piece(298.15, 3000.0, 30.0, 10.0),),
    )
    return replace(species, **changes)


def _split(name: str) -> tuple[str, str, str]:
    formula, _, state = name.rpartition("(")
    return formula, "(", state


coefficient = st.floats(-20, 20)


@st.composite
def species_records(draw: st.DrawFn) -> Species:
    """A record with one to four pieces, some of which begin with a transition."""
    widths = draw(st.lists(st.floats(50, 1500), min_size=1, max_size=4))
    low = draw(st.floats(50, 400))
    pieces = []
    for k, width in enumerate(widths):
        transition = draw(st.sampled_from([0.0, 0.0, 750.0, 20000.0])) if k else 0.0
        pieces.append(
            Piece(
                low,
                low + width,
                draw(st.floats(20, 200)),
                draw(coefficient),
                draw(coefficient),
                draw(coefficient),
                draw(st.floats(-1, 1)),
                transition,
                "melting" if transition else "",
            )
        )
        low += width
    return make_species(
        dfH298=draw(st.floats(-2e6, 2e6)),
        S298=draw(st.floats(0, 500)),
        pieces=tuple(pieces),
    )


def small_library() -> Library:
    """Invented values; names, forms and statuses as they occur in the real one."""
    named = {
        "C(graphite)": {"common_name": "graphite", "cas": "7782-42-5"},
        "C(diamond)": {"common_name": "diamond"},
        "C(g)": {"common_name": "carbon"},
        "CH4(g)": {"common_name": "methane", "cas": "74-82-8"},
        "CH3(g)": {"common_name": "methyl"},
        "CH2(g)": {"common_name": "methylene"},
        "CH(g)": {"common_name": "methylidyne"},
        "C2H5OH(g)": {"common_name": "ethanol", "cas": "64-17-5"},
        "C2H5OH(l)": {"common_name": "ethanol", "cas": "64-17-5"},
        "CH3OCH3(g)": {"common_name": "dimethyl ether"},
        "CO(g)": {"common_name": "carbon monoxide"},
        "CO2(g)": {"common_name": "carbon dioxide"},
        "CaSO4·2H2O(cr)": {"common_name": "gypsum"},
        "FeO(cr)": {"status": "superseded"},
        "FeO(l)": {},
        "Fe0.947O(cr)": {"common_name": "wüstite"},
        "H2O(g)": {"common_name": "water"},
        "H2O(l)": {"common_name": "water"},
        "H2SO4(l)": {"common_name": "sulphuric acid"},
        "NH4Cl(cr)": {"common_name": "ammonium chloride"},
        "Na+(g)": {},
        "SiO2(quartz)": {"common_name": "silica"},
        "SiO2(cristobalite)": {"common_name": "silica"},
        "SiO2(l)": {"common_name": "silica"},
        "e-(g)": {"common_name": "electron"},
    }
    records = tuple(make_species(name, **changes) for name, changes in named.items())
    return Library(records, (Source("tables", "A. Author, Tables, 1998.", "published values"),))
