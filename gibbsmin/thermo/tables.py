"""Reads the library's tables: comma-separated text with a header row, one folder."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from importlib.resources.abc import Traversable
from itertools import pairwise

from gibbsmin.errors import InputError
from gibbsmin.thermo.elements import molar_mass
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.species import Phase, Piece, Species

NAN = float("nan")


@dataclass(frozen=True, slots=True)
class Source:
    """Where values come from.

    Parameters
    ----------
    key
        What the records' source fields name.
    citation
        The work in full.
    status
        Licence, or on what footing the values stand.
    """

    key: str
    citation: str
    status: str


def read_sources(folder: Traversable) -> tuple[Source, ...]:
    """The rows of ``sources.csv``."""
    return tuple(Source(*row) for row in _rows(folder, "sources.csv"))


def read_species(folder: Traversable) -> tuple[Species, ...]:
    """The records of ``species.csv`` with their pieces of ``heat_capacity.csv``.

    The tables are in kJ/mol, J/mol/K and cm³/mol; the records are in SI units.

    Raises
    ------
    InputError
        If a row cannot be used; the message names the table, the row and what is wrong.
    """
    pieces: dict[str, list[Piece]] = {}
    for name, *fields in _rows(folder, "heat_capacity.csv"):
        try:
            piece = _piece(fields)
        except ValueError as error:
            raise _row_error(error, "accepted are numbers").at(
                file="heat_capacity.csv", key=name
            ) from None
        pieces.setdefault(name, []).append(piece)
    records = []
    for row in _rows(folder, "species.csv"):
        try:
            records.append(_species(row, tuple(pieces.get(row[0], ()))))
        except InputError as error:
            raise error.at(file="species.csv", key=row[0]) from None
        except ValueError as error:
            raise _row_error(
                error, f"accepted are numbers and one of the phases {', '.join(Phase)}"
            ).at(file="species.csv", key=row[0]) from None
    return tuple(records)


def _rows(folder: Traversable, file: str) -> Iterator[list[str]]:
    lines = folder.joinpath(file).read_text(encoding="utf-8").splitlines()
    rows = csv.reader(lines)
    header = next(rows)
    for row in rows:
        if len(row) != len(header):
            raise InputError(
                f"found a row of {len(row)} fields", f"accepted is a row of {len(header)}"
            ).at(file=file, key=row[0] if row else "")
        yield row


def _row_error(error: ValueError, accepted: str) -> InputError:
    return InputError(f"found a row that cannot be read ({error})", accepted)


def _piece(fields: list[str]) -> Piece:
    *numbers, transition, label = fields
    low, high, A, B, C, D, E = map(float, numbers)
    return Piece(low, high, A, B, C, D, E, 1000 * float(transition or 0), label)


def _species(row: list[str], pieces: tuple[Piece, ...]) -> Species:
    name, formula, state, phase, common_name, cas = row[:6]
    dfH298, u_dfH298, S298, u_S298, volume = _optional_numbers(row[6:11])
    source_enthalpy, source_entropy, source_heat_capacity, status = row[11:15]
    (fit_error,) = _optional_numbers(row[15:16])
    if name != f"{formula}({state})":
        raise InputError(
            f'found the formula "{formula}" and the state "{state}"',
            "accepted are those that the name puts together",
        )
    _check_pieces(pieces)
    composition = parse_formula(formula)
    return Species(
        name=name,
        formula=formula,
        state=state,
        phase=Phase(phase),
        common_name=common_name,
        cas=cas,
        elements=composition.elements,
        charge=composition.charge,
        molar_mass=molar_mass(composition.elements, composition.charge),
        dfH298=1e3 * dfH298,
        u_dfH298=1e3 * u_dfH298,
        S298=S298,
        u_S298=u_S298,
        molar_volume=1e-6 * volume,
        pieces=pieces,
        source_enthalpy=source_enthalpy,
        source_entropy=source_entropy,
        source_heat_capacity=source_heat_capacity,
        status=status,
        fit_error=fit_error,
        remark=row[16],
    )


def _optional_numbers(fields: Iterable[str]) -> list[float]:
    return [float(field) if field else NAN for field in fields]


def _check_pieces(pieces: tuple[Piece, ...]) -> None:
    if not pieces:
        raise InputError("found no heat capacity", "accepted is at least one piece")
    for piece in pieces:
        if not 0 < piece.T_low < piece.T_high:
            raise InputError(
                f"found a piece from {piece.T_low:.10g} K to {piece.T_high:.10g} K",
                "accepted is a range that rises from above 0 K",
            )
    for below, above in pairwise(pieces):
        if below.T_high != above.T_low:
            raise InputError(
                f"found a piece that ends at {below.T_high:.10g} K before one that begins at "
                f"{above.T_low:.10g} K",
                "accepted are pieces that abut",
            )
