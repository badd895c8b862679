"""The units that engineers write, and what each means.

The trade's units stand in ``units.csv`` with their definitions, those that need a question in
``unit_questions.csv``; both are read quickly.  What is in neither is left to pint, which costs
most of a second to load and is loaded only then.
"""

from __future__ import annotations

import csv
import difflib
import re
import unicodedata
from dataclasses import replace
from functools import cache
from importlib.resources import files
from typing import Any

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import GibbsminError
from gibbsmin.units.unit import Dimension, Unit

_GAUGE = re.compile(r"(?P<stem>.+?)[ _]?(?P<sign>\(g\)|g|G|gauge|\(a\)|a|A|abs|absolute)")
_PINT_TEXT = re.compile(r"[A-Za-zµμ_][A-Za-z0-9µμ_*/(). -]{0,40}")


class UnclearUnitError(GibbsminError):
    """A unit that cannot be taken as it stands, and why.

    Where it could mean two things, ``dimension`` is what the user may have had in mind and
    ``accepted`` what to write then.
    """

    def __init__(
        self, reason: str, dimension: Dimension = Dimension.OTHER, accepted: str = ""
    ) -> None:
        super().__init__(reason, dimension, accepted)
        self.reason = reason
        self.dimension = dimension
        self.accepted = accepted


@cache
def find_unit(text: str, site_pressure: float) -> Unit:
    """The unit that a text names; gauge pressures are above ``site_pressure`` in Pa.

    Raises
    ------
    UnclearUnitError
        when the unit is unknown, or could mean two things.
    """
    unit = _trade_unit(_plain(text), site_pressure) or _pint_unit(_plain(text))
    if unit is None:
        raise UnclearUnitError(f'whose unit "{text}" is not known{_nearest(_plain(text))}')
    return replace(unit, text=text)


def _plain(text: str) -> str:
    """One spelling for degree signs, powers and blanks."""
    text = unicodedata.normalize("NFKC", text.strip().replace("º", "°"))
    text = re.sub(r"(\^|\*\*)(?=\d)", "", text)
    text = re.sub(r"\s*/\s*|\s+per\s+", "/", text)
    text = re.sub(r"^(deg(rees?|\.)?|°)\s*([CFKR])$", r"deg\3", text)
    return re.sub(r"\s+", " ", text)


def _trade_unit(text: str, site_pressure: float) -> Unit | None:
    """A unit of the table, alone, per time or with a sign of gauge; None if it is none of these."""
    if text in _questions():
        row = _questions()[text]
        raise UnclearUnitError(
            f'whose unit "{text}" could be {row["meanings"]}',
            Dimension(row["dimension"]),
            f"accepted is {row['accepted']}",
        )
    if text in _table():
        return _table()[text]
    gauge = _GAUGE.fullmatch(text)
    stem = _table().get(gauge["stem"]) if gauge else None
    if gauge and stem and stem.dimension is Dimension.PRESSURE:
        is_gauge = gauge["sign"].strip("(").lower().startswith("g")
        return replace(stem, offset=site_pressure if is_gauge else 0.0)
    counted, _, time = text.rpartition("/")
    above = _trade_unit(counted, site_pressure) if counted else None
    below = _trade_unit(time, site_pressure) or _pint_unit(time) if above else None
    if above is None or below is None or below.dimension is not Dimension.TIME:
        return None
    return Unit(text, above.dimension.per_time, above.factor / below.factor)


@cache
def _table() -> dict[str, Unit]:
    """Units of the trade by every spelling."""
    table: dict[str, Unit] = {}
    for row in _rows("units.csv"):
        factor = float(row["factor"])
        if row["reference_T_K"]:
            factor *= float(row["reference_P_Pa"]) / (GAS_CONSTANT * float(row["reference_T_K"]))
        unit = Unit(row["unit"], Dimension(row["dimension"]), factor, float(row["offset"] or 0))
        table |= dict.fromkeys([row["unit"], *filter(None, row["aliases"].split(";"))], unit)
    return table


@cache
def _questions() -> dict[str, dict[str, str]]:
    """Ambiguous units: their meanings, and what to write instead."""
    rows = _rows("unit_questions.csv")
    return {unit: row for row in rows for unit in row["units"].split(";")}


def _rows(name: str) -> list[dict[str, str]]:
    text = files("gibbsmin.data").joinpath(name).read_text(encoding="utf-8")
    return list(csv.DictReader(text.splitlines()))


def _nearest(text: str) -> str:
    """The nearest known unit as a clause, empty if none is near."""
    counted, slash, time = text.partition("/")
    parts = [_nearest_word(part) for part in ([counted, time] if slash else [counted])]
    return f' (nearest: "{"/".join(filter(None, parts))}")' if all(parts) else ""


def _nearest_word(text: str) -> str:
    words = {word.casefold(): word for word in reversed([*_table(), "barg", "psig", "kPag"])}
    near = difflib.get_close_matches(text.casefold(), words, n=1, cutoff=0.6)
    return words[near[0]] if near else ""


_PINT_DIMENSIONS = {
    Dimension.TEMPERATURE: "[temperature]",
    Dimension.PRESSURE: "[pressure]",
    Dimension.MOLAR_AMOUNT: "[substance]",
    Dimension.MOLAR_FLOW: "[substance]/[time]",
    Dimension.MASS: "[mass]",
    Dimension.MASS_FLOW: "[mass]/[time]",
    Dimension.VOLUME: "[volume]",
    Dimension.VOLUME_FLOW: "[volume]/[time]",
    Dimension.ENERGY: "[energy]",
    Dimension.POWER: "[power]",
    Dimension.TIME: "[time]",
}


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry()


def _pint_unit(text: str) -> Unit | None:
    """A unit that only pint knows; None if it does not, or if the unit has an offset.

    A word that differs from one of the trade's only in case is left unknown, since pint would
    take ``pa`` for a picoyear.
    """
    folded = {word.casefold() for word in [*_table(), *_questions()]}
    words = re.findall(r"[^\W\d]\w*", text)
    if (
        not _PINT_TEXT.fullmatch(text)
        or re.search(r"//|\*\*|\b\d", text)
        or any(word.casefold() in folded and word not in _table() for word in words)
    ):
        return None
    try:
        quantity = _registry().Quantity(1.0, re.sub(r"\b([a-z]+)(\d)\b", r"\1**\2", text))
        base = quantity.to_base_units()
        has_offset = (0.0 * quantity).to_base_units().magnitude != 0.0
    except Exception:  # pint's parser fails in many ways, with a bare AssertionError too
        return None
    if has_offset:
        return None
    for dimension, expression in _PINT_DIMENSIONS.items():
        if base.check(expression):
            return Unit(text, dimension, float(base.magnitude))
    return Unit(text, Dimension.OTHER, float(base.magnitude))
