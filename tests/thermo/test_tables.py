"""Reading the library's tables: units, gaps, and rows that cannot be used."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

import gibbsmin.thermo.tables as tables
from gibbsmin.errors import InputError
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Piece

SPECIES_HEADER = (
    "name,formula,state,phase,common_name,cas,dfH298_kJ_per_mol,u_dfH298_kJ_per_mol,"
    "S298_J_per_mol_K,u_S298_J_per_mol_K,molar_volume_cm3_per_mol,source_enthalpy,"
    "source_entropy,source_heat_capacity,status,fit_error_G_RT,remark"
)
SPECIES_ROW = 'Fe(cr),Fe,cr,solid,iron,7439-89-6,0,,27.3,0.1,7.09,made,made,made,,1e-05,"a, b"'
PIECES_HEADER = "name,T_low_K,T_high_K,A,B,C,D,E,transition_kJ_per_mol,transition"
PIECES = ("Fe(cr),298.15,1184,20,30,0,0,-0.1,,", "Fe(cr),1184,1665,24,8,0,0,0,0.9,alpha–gamma")


def folder(path: Path, species: str = SPECIES_ROW, pieces: tuple[str, ...] = PIECES) -> Path:
    (path / "species.csv").write_text(f"{SPECIES_HEADER}\n{species}\n", encoding="utf-8")
    text = "\n".join((PIECES_HEADER, *pieces))
    (path / "heat_capacity.csv").write_text(f"{text}\n", encoding="utf-8")
    (path / "sources.csv").write_text("key,citation,status\nmade,Made up,none\n", encoding="utf-8")
    return path


@pytest.fixture(autouse=True)
def weights(monkeypatch: pytest.MonkeyPatch) -> None:
    """Iron's atomic weight, so that these tests need no table but their own."""
    monkeypatch.setattr(tables, "molar_mass", lambda *_: 0.055845)


def test_units_and_gaps(tmp_path: Path) -> None:
    library = Library.read(folder(tmp_path))
    (iron,) = library.records
    assert (iron.name, iron.phase, iron.remark) == ("Fe(cr)", Phase.SOLID, "a, b")
    assert iron.elements == (("Fe", 1.0),)
    assert (iron.dfH298, iron.S298, iron.u_S298) == (0.0, 27.3, 0.1)
    assert np.isnan(iron.u_dfH298)
    assert_allclose(iron.molar_volume, 7.09e-6)
    assert iron.pieces == (
        Piece(298.15, 1184.0, 20.0, 30.0, 0.0, 0.0, -0.1),
        Piece(1184.0, 1665.0, 24.0, 8.0, transition=900.0, label="alpha–gamma"),
    )
    assert (iron.T_low, iron.T_high, iron.atoms, iron.superseded) == (298.15, 1665.0, 1.0, False)
    assert library.source("made").citation == "Made up"


@pytest.mark.parametrize(
    ("species", "pieces", "message"),
    [
        (
            SPECIES_ROW.replace("27.3", "x"),
            PIECES,
            "species.csv: Fe(cr): found a row that cannot be read (could not convert string to "
            "float: 'x'); accepted are numbers and one of the phases gas, liquid, solid.",
        ),
        (
            SPECIES_ROW.replace("solid", "ice"),
            PIECES,
            "species.csv: Fe(cr): found a row that cannot be read ('ice' is not a valid Phase); "
            "accepted are numbers and one of the phases gas, liquid, solid.",
        ),
        (
            SPECIES_ROW.replace("Fe(cr),Fe", "Fe(cr),F"),
            PIECES,
            'species.csv: Fe(cr): found the formula "F" and the state "cr"; '
            "accepted are those that the name puts together.",
        ),
        (
            SPECIES_ROW.replace("Fe", "Fx"),
            tuple(piece.replace("Fe", "Fx") for piece in PIECES),
            'species.csv: Fx(cr): found "Fx", where "Fx" is no element at position 1; '
            "accepted is a formula such as CH4, Ca(OH)2, CaSO4·2H2O or H3O+.",
        ),
        (
            SPECIES_ROW + ",more",
            PIECES,
            "species.csv: Fe(cr): found a row of 18 fields; accepted is a row of 17.",
        ),
        (
            SPECIES_ROW,
            (),
            "species.csv: Fe(cr): found no heat capacity; accepted is at least one piece.",
        ),
        (
            SPECIES_ROW,
            PIECES[::-1],
            "species.csv: Fe(cr): found a piece that ends at 1665 K before one that begins at "
            "298.15 K; accepted are pieces that abut.",
        ),
        (
            SPECIES_ROW,
            (PIECES[0].replace("1184", "100"),),
            "species.csv: Fe(cr): found a piece from 298.15 K to 100 K; "
            "accepted is a range that rises from above 0 K.",
        ),
        (
            SPECIES_ROW,
            (PIECES[0].replace("1184", "high"),),
            "heat_capacity.csv: Fe(cr): found a row that cannot be read (could not convert string "
            "to float: 'high'); accepted are numbers.",
        ),
    ],
)
def test_refused(tmp_path: Path, species: str, pieces: tuple[str, ...], message: str) -> None:
    with pytest.raises(InputError) as caught:
        Library.read(folder(tmp_path, species, pieces))
    assert str(caught.value) == message
