"""Species, their properties as functions of temperature, and reactions between them."""

from gibbsmin.thermo.elements import molar_mass
from gibbsmin.thermo.formula import Formula, parse_formula
from gibbsmin.thermo.library import Library, load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.reaction_path import ReactionRow, ReactionStudy, study_reaction
from gibbsmin.thermo.species import Phase, Piece, Species
from gibbsmin.thermo.stable_form import PhaseChange, Substance
from gibbsmin.thermo.tables import Source

__all__ = [
    "Formula",
    "Library",
    "Phase",
    "PhaseChange",
    "Piece",
    "PropertyTable",
    "Reaction",
    "ReactionRow",
    "ReactionStudy",
    "Source",
    "Species",
    "Substance",
    "load_library",
    "molar_mass",
    "parse_formula",
    "study_reaction",
]
