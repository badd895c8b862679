"""Reads the main tables: the NIST-JANAF Thermochemical Tables as text, from the package janaf.

Columns used are T, Cp, S, −[G − H(Tr)]/T and H − H(Tr), and the enthalpy of formation at
298.15 K.  The tabulated Gibbs energies of formation and equilibrium constants are never loaded
as data; they are independent checks (see the tests).
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace
from importlib.util import find_spec
from pathlib import Path

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.errors import GibbsminError

_CODE = re.compile(r"(?P<formula>.+)\((?P<state>[a-z,]+)\)$")
_TITLE = re.compile(r"(?P<words>.+?)\s*\((?P<formula>\S+)\)$")
_LABEL = re.compile(r"(?P<lower>\w+) <--> (?P<upper>\w+)")

# Single cells that contradict the rest of their row or column: (table, T, column).
_FAULTY_CELLS = {
    ("B-116", 1900.0, "S"),
    ("B-133", 600.0, "S"),
    ("B-133", 300.0, "S"),
    ("B-065", 1220.0, "gibbs_function"),
    ("Hf-004", 2500.0, "H"),
}


@dataclass(frozen=True, slots=True)
class MainTable:
    """One table of the main source, from its first row with T > 0.

    ``H`` is H − H(298.15 K) in J/mol, ``gibbs_function`` is −[G − H(298.15 K)]/T in J/mol/K,
    ``dfH298`` in J/mol; ``code`` is the alphabetical formula of the table's head.
    """

    key: str
    words: str
    formula: str
    code: str
    state: str
    T: FloatArray
    Cp: FloatArray
    S: FloatArray
    gibbs_function: FloatArray
    H: FloatArray
    dfH298: float
    labels: tuple[tuple[float, str], ...]

    @property
    def S298(self) -> float:
        return float(self.S[self.T == REFERENCE_TEMPERATURE][0])

    def between(self, T_low: float, T_high: float = np.inf) -> MainTable:
        """The table cut to a range of temperatures."""
        kept = (self.T >= T_low) & (self.T <= T_high)
        columns = {
            name: getattr(self, name)[kept] for name in ("T", "Cp", "S", "gibbs_function", "H")
        }
        return replace(self, **columns)


def read_main_tables() -> Iterator[MainTable]:
    """All tables of the main source, sorted by their key."""
    for path in sorted(folder().glob("*.txt")):
        yield read_table(path.stem, path.read_text(encoding="utf-8"))


def folder() -> Path:
    """Folder of the text tables, found without importing the package that carries them."""
    package = find_spec("janaf")
    if package is None or package.origin is None:
        raise GibbsminError('the package "janaf" is not installed; install "gibbsmin[build]"')
    return Path(package.origin).parent / "data"


def read_table(key: str, text: str) -> MainTable:
    """One table from its text: a head line, a line of column names, and rows parted by tabs."""
    head, _, *lines = text.splitlines()
    title, code = head.split("\t")
    in_code, in_title = _CODE.match(code.strip()), _TITLE.match(title.strip())
    if in_code is None or in_title is None:
        raise GibbsminError(f"table {key} has no readable head: {head!r}")
    rows = [line.split("\t") for line in lines if line.strip()]
    values = np.array([[_number(cell) for cell in row[:5]] for row in rows])
    kept = (values[:, 0] > 0.0) & (values[:, 1] > 0.0) & ~np.isnan(values).any(axis=1)
    # The marker of a melting point in a table that runs on is a row like any other.
    T, Cp, S, function, H = values[kept].T
    home = next(row for row in rows if _number(row[0]) == REFERENCE_TEMPERATURE)
    columns = {"S": S, "gibbs_function": function, "H": 1000 * H}
    function[T == REFERENCE_TEMPERATURE] = float(home[2])
    for table, faulty_T, column in _FAULTY_CELLS:
        if table == key:
            columns[column][T == faulty_T] = np.nan
    return MainTable(
        key=key,
        words=in_title["words"],
        formula=in_title["formula"],
        code=in_code["formula"],
        state=in_code["state"],
        T=T,
        Cp=Cp,
        dfH298=1000 * float(home[5]),
        labels=tuple(_labels(rows)),
        **columns,
    )


def _number(cell: str) -> float:
    cell = cell.strip()
    return float(cell) if cell and not cell.endswith("inf") else float("nan")


def _labels(rows: list[list[str]]) -> Iterator[tuple[float, str]]:
    for row in rows:
        label = _LABEL.match(row[5].strip()) if len(row) > 5 else None
        if label is not None:
            lower, upper = label["lower"].lower(), label["upper"].lower()
            word = "melting" if (lower, upper) == ("crystal", "liquid") else f"{lower}–{upper}"
            yield float(row[0]), word
