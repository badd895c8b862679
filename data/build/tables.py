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
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.errors import GibbsminError

_CODE = re.compile(r"(?P<formula>.+)\((?P<state>[a-z,]+)\)$")
_TITLE = re.compile(r"(?P<words>.+?)\s*\((?P<formula>\S+)\)$")
_LABEL = re.compile(r"(?P<lower>\w+) <--> (?P<upper>\w+)")

# Cells that contradict the rest of their row or column, by table, temperature and column.  Most
# are entropies at 200 K that disagree with Cp and H; the Gibbs function is made from them.
_FAULTY_ROWS_AT_200: Final = [
    "C-016",
    "C-021",
    "C-041",
    "C-052",
    "C-056",
    "C-094",
    "C-123",
    "C-127",
    "Cl-061",
    "Cl-117",
    "D-008",
    "D-017",
    "D-018",
    "D-019",
    "H-080",
    "N-024",
    "O-034",
    "O-056",
]
FAULTY_CELLS: Final = frozenset(
    {
        ("Al-053", 836.0, "H"),
        ("Al-053", 836.0, "gibbs_function"),
        ("B-065", 1220.0, "gibbs_function"),
        ("B-116", 1900.0, "S"),
        ("B-133", 300.0, "S"),
        ("B-133", 300.0, "gibbs_function"),
        ("B-133", 600.0, "S"),
        ("H-034", 596.0, "H"),
        ("H-034", 596.0, "gibbs_function"),
        ("Li-024", 1820.0, "H"),
        ("Li-024", 1820.0, "gibbs_function"),
        *((table, 200.0, "S") for table in _FAULTY_ROWS_AT_200),
        *((table, 200.0, "gibbs_function") for table in _FAULTY_ROWS_AT_200),
    }
)

# Gaseous atoms whose H and S fall behind their Cp, step by step, above these temperatures in K.
CONSISTENT_TO: Final = {
    "Ba-005": 4600.0,
    "Cr-005": 5000.0,
    "Cs-005": 3200.0,
    "K-005": 4300.0,
    "Mn-005": 4400.0,
    "Na-005": 4300.0,
    "Rb-005": 3200.0,
    "Sr-006": 4500.0,
}

# Crystals whose tables run on beyond the range in which they are stable, with a heat capacity so
# steep that, continued, it would make them the stable form again; cut where that range ends, in K.
STABLE_TO: Final = {
    "Br-108": 559.0,
    "C-073": 1174.0,
    "Ca-003": 1115.0,
    "Cl-169": 467.0,
    "Cs-002": 301.55,
    "Cs-022": 1278.0,
    "Cs-023": 940.0,
    "Fe-023": 1463.0,
    "K-002": 336.35,
    "K-017": 857.0,
    "K-022": 1221.0,
    "Mg-002": 923.0,
    "Mg-018": 1400.0,
    "Na-020": 1157.0,
    "Na-031": 1445.0,
    "Rb-002": 312.65,
    "Ti-002": 1166.0,
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

    @property
    def remark(self) -> str:
        """What the user should know of faults of the table that this reading leaves out."""
        if self.key in CONSISTENT_TO:
            return (
                f"the table's H and S fall behind its Cp above {CONSISTENT_TO[self.key]:.0f} K; "
                "the range ends there"
            )
        if self.key in STABLE_TO:
            return (
                "the table runs on beyond the form's stable range, where its Cp, continued, would "
                "bring it back; the range ends there"
            )
        rows = sorted({T for table, T, _ in FAULTY_CELLS if table == self.key})
        return f"the table's entropy or enthalpy at {rows[0]:.0f} K is left out" if rows else ""

    def between(self, T_low: float, T_high: float = np.inf) -> MainTable:
        """The table cut to a range of temperatures."""
        kept = (T_low <= self.T) & (T_high >= self.T)
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
    values, printed = values[kept], np.array([_is_number(row[5]) for row in rows])[kept]
    # A marker at a printed temperature repeats that row; doubled markers are a transition.
    same = np.all(np.abs(np.diff(values[:, :3], axis=0)) <= [0.0, 0.002, 0.002], axis=1)
    repeats = same & printed[:-1]
    T, Cp, S, function, H = values[np.append(True, ~repeats)].T
    home = next(row for row in rows if _number(row[0]) == REFERENCE_TEMPERATURE)
    columns = {"S": S, "gibbs_function": function, "H": 1000 * H}
    function[T == REFERENCE_TEMPERATURE] = float(home[2])
    for faulty_key, faulty_T, column in FAULTY_CELLS:
        if faulty_key == key:
            columns[column][faulty_T == T] = np.nan
    table = MainTable(
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
    return table.between(0.0, (CONSISTENT_TO | STABLE_TO).get(key, np.inf))


def _number(cell: str) -> float:
    cell = cell.strip()
    return float(cell) if cell and not cell.endswith("inf") else float("nan")


def _is_number(cell: str) -> bool:
    return not cell.strip() or cell.strip()[-1] in "0123456789.f"


def _labels(rows: list[list[str]]) -> Iterator[tuple[float, str]]:
    for row in rows:
        label = _LABEL.match(row[5].strip())
        if row[5].startswith("Cp "):
            yield float(row[0]), "lambda"
        elif row[5].strip() == "UNDEFINED":
            yield float(row[0]), "undefined"
        elif label is not None:
            lower, upper = label["lower"].lower(), label["upper"].lower()
            word = "melting" if (lower, upper) == ("crystal", "liquid") else f"{lower}–{upper}"
            yield float(row[0]), word
