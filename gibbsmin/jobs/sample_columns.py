"""Columns of a table of samples: what their titles mean."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.jobs.sample_flow import nominal_flow, stream_named
from gibbsmin.jobs.sample_reading import STEAM_RATIO, in_fraction_unit, read_fraction_unit
from gibbsmin.units import Unit, read_amount, read_quantity

_LABELS = ("label", "time")
_UNCERTAINTY, _INLET, _FEED = "u ", "inlet ", "feed."


@dataclass(frozen=True)
class Column:
    """What one column holds.

    ``kind`` is label, basis, normalised, temperature, pressure, outlet, inlet or feed; ``name`` the
    analyte or stream; ``basis`` dry, wet or empty where it is left to the sample; ``unit`` that of
    a fraction; ``scale`` and ``offset`` lead from a number to SI, or to a ratio of flows.
    """

    title: str
    kind: str
    name: str = ""
    is_uncertainty: bool = False
    basis: str = ""
    unit: str = ""
    scale: float = 1.0
    offset: float = 0.0


def read_column(title: str, case: Case) -> Column:
    """What a column's title says.

    Raises
    ------
    InputError
        for one that names no measurement, and a unit that does not fit.
    """
    text, _, unit = title.partition(",")
    text, unit = text.strip(), unit.strip()
    if text.casefold() in (*_LABELS, "basis", "normalised"):
        lowered = text.casefold()
        return Column(title, "label" if lowered in _LABELS else lowered)
    is_uncertainty = text.startswith(_UNCERTAINTY)
    if is_uncertainty:
        text = text.removeprefix(_UNCERTAINTY).strip()
    if text in ("temperature", "pressure"):
        found = read_quantity(f"1 {unit}", text, case.site_pressure).unit
        offset = 0.0 if is_uncertainty else found.offset
        return Column(title, text, text, is_uncertainty, scale=found.factor, offset=offset)
    if text.startswith(_FEED):
        name = text.removeprefix(_FEED)
        return _feed_column(title, name, unit, is_uncertainty, case)
    place = "inlet" if text.startswith(_INLET) else "outlet"
    analyte = text.removeprefix(_INLET).strip()
    if analyte == STEAM_RATIO:
        return Column(title, place, analyte, is_uncertainty)
    for part in analyte.split("+"):
        resolve(part.strip(), case.library)
    basis = unit.rpartition(" ")[2] if unit.endswith((" dry", " wet")) else ""
    fraction = read_fraction_unit(unit.removesuffix(basis))
    return Column(
        title,
        place,
        analyte,
        is_uncertainty,
        basis,
        fraction,
        scale=in_fraction_unit(1.0, fraction),
    )


def _feed_column(title: str, name: str, unit: str, is_uncertainty: bool, case: Case) -> Column:
    stream = stream_named(name, case.feeds)
    if is_uncertainty and unit == "%":
        return Column(title, "feed", name, True, unit="%", scale=0.01)
    found: Unit = read_amount(f"1 {unit}").unit
    scale = found.factor / nominal_flow(stream, found, case.library)
    return Column(title, "feed", name, is_uncertainty, scale=scale)


def refuse_doubles(columns: Sequence[Column], file: str) -> None:
    """Raise InputError for two columns of the same measurement."""
    seen: dict[tuple[str, str, bool], str] = {}
    for column in columns:
        if column.kind == "label":
            continue
        meaning = column.kind, column.name, column.is_uncertainty
        if meaning in seen:
            raise InputError(
                f'found the same as in column "{seen[meaning]}"',
                "accepted is one column for each measurement",
                key=f'column "{column.title}"',
                file=file,
            )
        seen[meaning] = column.title
