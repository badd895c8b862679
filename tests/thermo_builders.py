"""Hand-made records for tests: one good case, and strategies that construct valid ones."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from hypothesis import strategies as st

from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.species import Phase, Piece, Species

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
                *[draw(coefficient) for _ in range(3)],
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
