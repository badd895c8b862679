"""The formulas most like a mistyped one, by the letters and by what they are made of."""

from __future__ import annotations

from collections.abc import Mapping

from gibbsmin.errors import FormulaError
from gibbsmin.thermo.formula import parse_formula, plain_text
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.spelling import folded


def nearest_formulas(
    text: str, by_formula: Mapping[str, tuple[Species, ...]], count: int
) -> list[tuple[Species, ...]]:
    """The groups of records whose formula or common name is most like the text, best first.

    A formula of the same composition comes first; then what needs the fewest letters changed,
    put in or taken out (in a common name a change weighs less the longer the name); of these,
    the composition nearest to that of the text, if it has one.
    """
    wanted = plain_text(text)
    letters = wanted.casefold()
    name = folded(wanted)
    counts = _counts(wanted)

    def rank(forms: tuple[Species, ...]) -> tuple[bool, float, float, int, bool, str]:
        record = forms[0]
        difference = _difference(counts, dict(record.elements)) if counts else 0.0
        changes = float(edit_distance(letters, record.formula.casefold()))
        for common_name in {folded(form.common_name) for form in forms if form.common_name}:
            changes = min(changes, _name_distance(name, common_name))
        length = abs(len(wanted) - len(record.formula))
        other_case = wanted != record.formula
        return (difference > 0, changes, difference, length, other_case, record.formula)

    return sorted(by_formula.values(), key=rank)[:count]


def edit_distance(one: str, other: str) -> int:
    """The least number of letters to change, put in or take out that turns one into the other."""
    if one == other:
        return 0
    previous = list(range(len(other) + 1))
    for i, letter in enumerate(one, start=1):
        current = [i]
        for j, letter_of_other in enumerate(other, start=1):
            change = previous[j - 1] + (letter != letter_of_other)
            current.append(min(change, previous[j] + 1, current[j - 1] + 1))
        previous = current
    return previous[-1]


def _name_distance(wanted: str, name: str) -> float:
    if len(wanted) >= 4 and wanted in name.split():
        return 0.5
    return edit_distance(wanted, name) * min(1.0, 5 / len(wanted)) if wanted else len(name)


def _counts(text: str) -> dict[str, float]:
    try:
        return dict(parse_formula(text).elements)
    except FormulaError:
        return {}


def _difference(one: dict[str, float], other: dict[str, float]) -> float:
    return sum(abs(one.get(symbol, 0.0) - other.get(symbol, 0.0)) for symbol in {*one, *other})
