"""Gives the main tables' substances the formulas, form words and names of the trade.

The tables are filed by alphabetical formulas; their titles carry a structural one, which mostly
is the trade's own.  Rules turn the rest; ``names.csv`` holds what no rule can know.
"""

from __future__ import annotations

import csv
import re
from functools import cache
from importlib.resources import files
from math import gcd
from typing import Final

from gibbsmin.errors import GibbsminError
from gibbsmin.thermo.formula import parse_formula

_OXYGEN_FIRST = re.compile(r"^O([A-Z][a-z]?)(?=[A-Z])(.+)$")
_CENTRAL_CARBON: Final = re.compile(r"^SiCH3(.+)$")
_MULTIPLE = re.compile(r"^\((?P<unit>(?:[A-Z][a-z]?\d*)+)\)(?P<count>\d+)$")
_KEPT_UNITS = ("OH", "CN", "HBO2", "HF")
_ION = re.compile(r"(?P<signs>\++|-+)$")
_SPELLING = (
    ("alumin", "alumini"),
    ("cesium", "caesium"),
    ("hydrofluoric acid-d", "deuterium fluoride"),
)

_FORM_WORDS: Final = {"orthorhombic": "rhombic", "alpha-delta": "alpha"}
_ANIONS = [
    "bromide",
    "carbide",
    "chloride",
    "fluoride",
    "hydride",
    "iodide",
    "nitride",
    "oxide",
    "silicide",
    "sulfide",
]
_PREFIXES = ("", "", "di", "tri", "tetra", "penta", "hexa", "hepta", "octa", "nona", "deca")
# Metals of one valence: their salts need no multiplying prefix.
_VALENCES = {
    **dict.fromkeys(["H", "Li", "Na", "K", "Rb", "Cs"], 1),
    **dict.fromkeys(["Be", "Mg", "Ca", "Sr", "Ba", "Zn"], 2),
    "Al": 3,
}
_VALENCE_OF_ANION = {"oxide": 2, "sulfide": 2, "nitride": 3, "carbide": 4, "silicide": 4}
_WITHOUT_MONO = ("carbide", "nitride", "sulfide", "silicide")
_OLIGOMERS = {2: "dimer", 3: "trimer", 4: "tetramer", 5: "pentamer", 6: "hexamer"}
_DIATOMIC = frozenset(["H2", "D2", "N2", "O2", "F2", "Cl2", "Br2", "I2"])
_NOBLE = frozenset(["He", "Ne", "Ar", "Kr", "Xe", "Rn"])


@cache
def overrides() -> dict[str, dict[str, str]]:
    """Rows of ``names.csv`` by the key of their table; empty cells leave the rule in force."""
    text = files("gibbsmin.data.build").joinpath("names.csv").read_text(encoding="utf-8")
    return {row["table"]: row for row in csv.DictReader(text.splitlines())}


def trade_formula(key: str, title_formula: str, code: str) -> str:
    """Formula of the trade for a table; its composition is checked against the table's code."""
    formula = overrides().get(key, {}).get("formula") or _by_rule(title_formula)
    ours, theirs = parse_formula(formula), parse_formula("e-" if code == "e1-" else code)
    if ours.elements != theirs.elements or ours.charge != theirs.charge:
        raise GibbsminError(f"table {key}: {formula} is not the composition of {code}")
    return formula


def _by_rule(formula: str) -> str:
    formula = re.sub(r"\.(?=[A-Z]|\d[A-Z])", "·", formula)
    formula = re.sub(r"^\((\(.+\)\d)\)$", r"\1", formula)
    multiple = _MULTIPLE.match(formula)
    if multiple and not any(unit in multiple["unit"] for unit in _KEPT_UNITS):
        count = int(multiple["count"])
        formula = "".join(
            f"{symbol}{int(number or 1) * count}"
            for symbol, number in re.findall(r"([A-Z][a-z]?)(\d*)", multiple["unit"])
        )
    formula = _OXYGEN_FIRST.sub(r"\1O\2", formula)
    return _CENTRAL_CARBON.sub(r"CH3Si\1", formula)


def form_word(key: str, words: str) -> str:
    """Form of a crystal from its title: ``alpha``, ``quartz``; empty where it names none."""
    override = overrides().get(key, {}).get("state")
    if override:
        return override
    _, _, form = words.partition(", ")
    parts = [part.strip().lower() for part in form.split(",") if part.strip()]
    word = "-".join(reversed(parts)) if parts[:1] == ["cristobalite"] else "-".join(parts)
    return _FORM_WORDS.get(word, word)


def common_name(key: str, words: str, formula: str, state: str) -> str:
    """Everyday name, lower case: the title's words, with prefixes where they would mislead."""
    override = overrides().get(key, {}).get("common_name")
    if override:
        return override
    base = words.partition(",")[0].strip().lower()
    for found, ours in _SPELLING:
        base = re.sub(rf"\b{found}(?=um|\b|$)", ours, base)
    signs = _ION.search(formula)
    elements = re.findall(r"([A-Z][a-z]?)(\d*)", formula.rstrip("+-"))
    if len(elements) == 1 and " " not in base:
        base = _element(base, formula, int(elements[0][1] or 1), state)
    elif len(elements) == 2 and "." not in formula:
        base = _binary(base, *((symbol, int(number or 1)) for symbol, number in elements))
    if signs:
        base = f"{base} {'cation' if '+' in signs.group() else 'anion'}"
    return base


def _element(name: str, formula: str, count: int, state: str) -> str:
    if count > 1:
        return name if formula in _DIATOMIC else f"{_PREFIXES[count]}{name}"
    atom = state == "g" and formula[-1] not in "+-" and formula not in _NOBLE
    return f"atomic {name}" if atom else name


def _binary(name: str, first: tuple[str, int], second: tuple[str, int]) -> str:
    """Name of a compound of two elements, by the numbers of their atoms where that is needed."""
    (metal, m), (_, n) = first, second
    words = name.split()
    if len(words) != 2 or words[1] not in _ANIONS or max(m, n) >= len(_PREFIXES):
        return name
    anion = words[1]
    valence, of_anion = _VALENCES.get(metal, 0), _VALENCE_OF_ANION.get(anion, 1)
    if valence * m == of_anion * n:
        units = m * gcd(valence, of_anion) // of_anion
        return name if units == 1 else f"{name} {_OLIGOMERS[units]}"
    prefix = _PREFIXES[n] or ("" if anion in _WITHOUT_MONO else "mono")
    if anion == "oxide" and prefix[-1:] in ("a", "o"):
        prefix = prefix[:-1]
    return f"{_PREFIXES[m]}{words[0]} {prefix}{anion}"
