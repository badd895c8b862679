"""What a plot shows: columns of a scan by the words of a user, in the units of a page."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from difflib import get_close_matches

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.scan import Scan, column_of
from gibbsmin.results import WATER

_UNITS = {"degC": "°C", "degF": "°F", "m3": "m³"}
_PROPOSED = 8
_DRY = "dry "
_FRACTION = "fraction "


@dataclass(frozen=True)
class Quantity:
    """A result over the states of a scan, in the unit that its name ends with.

    Attributes
    ----------
    name : as an axis of a plot is named
    short : as a line is labelled
    stage : of a train; empty for a single one
    values, band : (states,) values, and their standard uncertainty where it is known
    """

    name: str
    short: str
    stage: str
    values: FloatArray
    band: FloatArray | None


def quantity(found: Scan, show: str, stage: str = "") -> Quantity:
    """A result by its column, with or without unit, or in the words of a target.

    ``y CH4(g)``, ``fraction CH4``, ``dry fraction CH4``, ``conversion CH4``, ``heat`` and
    ``heat, kW`` are such words; ``amount C(graphite)`` is another.

    Raises
    ------
    InputError
        for what the scan does not tell.
    """
    named = [name for name in stages_of(found) if show.startswith(f"{name}: ")]
    before = prefix(found, named[0] if named else stage)
    columns = numbers(found)
    wanted = show.removeprefix(before)
    dry = wanted.startswith(_DRY)
    spelled = wanted.removeprefix(_DRY)
    if spelled.startswith(_FRACTION):
        spelled = f"y {spelled.removeprefix(_FRACTION)}"
    names = [spelled] if dry else [wanted, spelled]
    for column in columns:
        if not column.startswith(before):
            continue
        label = column.removeprefix(before)
        plain_label = label.partition(", ")[0]
        if {label, plain_label, plain_label.removesuffix("(g)")} & set(names):
            return _worded(found, column, before, dry=dry)
    told = [c.removeprefix(before) for c in columns if c.startswith(before)]
    near = get_close_matches(show, told, _PROPOSED, 0.5) or told
    listed = ", ".join(f'"{c}"' for c in near[:_PROPOSED])
    raise InputError(
        f'found "{show}", which the scan does not tell' if show else "found nothing to show",
        f"accepted is a column of it, such as {listed}",
        key="show",
    )


def gases(found: Scan, stage: str, *, dry: bool) -> list[Quantity]:
    """Every gas in mol %, of the whole gas or of the dry one."""
    before = prefix(found, stage)
    columns = [c for c in numbers(found) if c.startswith(f"{before}y ")]
    if dry:
        columns = [c for c in columns if c != f"{before}y {WATER}"]
    return [_worded(found, column, before, dry=dry) for column in columns]


def condensed(found: Scan, stage: str) -> list[Quantity]:
    """The amounts of solids and liquids that are there in any state."""
    before = prefix(found, stage)
    columns = [c for c in numbers(found) if c.startswith(f"{before}amount ")]
    amounts = [_worded(found, column, before, dry=False) for column in columns]
    return [each for each in amounts if highest(each) > 0.0]


def highest(shown: Quantity) -> float:
    """The highest of a quantity's values; 0 where it has none."""
    known = shown.values[np.isfinite(shown.values)]
    return float(known.max()) if known.size else 0.0


def numbers(found: Scan) -> list[str]:
    """The columns of results that are numbers, without their uncertainties."""
    axes = {column_of(axis) for axis in found.axes}
    columns = [str(c) for c in found.table.select_dtypes("number") if c not in axes]
    return [c for c in columns if not _is_uncertainty(c)]


def _is_uncertainty(column: str) -> bool:
    return column.rpartition(": ")[2].startswith("u(")


def prefix(found: Scan, stage: str) -> str:
    """What a stage's columns start with: nothing for a single one; the last, unless it is named.

    Raises
    ------
    InputError
        for a stage that the scan does not tell of.
    """
    stages = stages_of(found)
    if not stage:
        return f"{stages[-1]}: " if stages else ""
    if stage not in stages:
        raise InputError(
            f'found "{stage}", which is no stage of the scan',
            f"accepted is one of {', '.join(stages)}" if stages else "accepted is none to name",
            key="stage",
        )
    return f"{stage}: "


def stages_of(found: Scan) -> list[str]:
    """The stages of a train whose results stand in the scan, in order; none for a single one."""
    ending = ": status"
    return [str(c).removesuffix(ending) for c in found.table if str(c).endswith(ending)]


def axis_name(axis: Axis) -> str:
    """An axis in words with its unit: ``outlet temperature, °C``; ``H2O/C, mol/mol``."""
    if axis.scale:
        return f"{axis.name}, mol/mol"
    place, _, rest = axis.name.partition(".")
    if place in ("stage", "feed"):
        holder, _, rest = rest.partition(".")
        place = f"{holder}:"
    words = f"{place} {rest.removeprefix('amounts.')}".replace("_", " ").replace(".", " ")
    return f"{words}, {unit(axis)}" if axis.unit else words


def unit(axis: Axis) -> str:
    """An axis's unit as a page shows it."""
    return _UNITS.get(axis.unit, axis.unit)


def prefixed(largest: float, is_flow: bool) -> tuple[float, str]:
    """W or J, with its prefix, in which figures up to this size stand on an axis."""
    unit = "W" if is_flow else "J"
    for prefix_, factor in (("G", 1e9), ("M", 1e6), ("k", 1e3)):
        if abs(largest) >= 5.0 * factor:
            return factor, f"{prefix_}{unit}"
    return 1.0, unit


def _worded(found: Scan, column: str, before: str, *, dry: bool) -> Quantity:
    """A column as a page shows it: shares in percent, names in words."""
    label = column.removeprefix(before)
    kind, _, rest = label.partition(" ")
    values, band = found.table[column].to_numpy(), _band(found, column)
    if kind in ("y", "conversion"):
        values, band = 100.0 * values, None if band is None else 100.0 * band
    if dry:
        water = f"{before}y {WATER}"
        wet = found.table[water].to_numpy() if water in found.table else 0.0
        values, band = values / (1.0 - wet), None
    if kind == "y":
        name, short = f"{rest} in the {'dry ' if dry else ''}gas, mol %", rest
    elif kind == "conversion":
        name, short = f"conversion of {rest}, %", rest
    elif kind == "amount":
        name, short = rest, rest.partition(", ")[0]
    elif kind == "heat,":
        name, short = f"heat added, {rest}", "heat added"
    else:
        name, short = label, label.partition(", ")[0]
    return Quantity(f"{before}{name}", short, before.removesuffix(": "), values, band)


def _band(found: Scan, column: str) -> FloatArray | None:
    """The standard uncertainty that stands beside a column, if one does."""
    before, colon, name = column.rpartition(": ")
    label, comma, rest = name.partition(", ")
    beside = f"{before}{colon}u({label}){comma}{rest}"
    return found.table[beside].to_numpy() if beside in found.table else None


def remarks(found: Scan, shown: Sequence[Quantity]) -> list[str]:
    """What the foot of a page says of bands and of states without an answer."""
    sentences = []
    if any(each.band is not None for each in shown):
        sentences.append("Bands: one standard uncertainty to either side.")
    elif shown and any(_is_uncertainty(str(column)) for column in found.table):
        sentences.append("No band: the scan does not tell how sure this is.")
    statuses = [str(c) for c in found.table if str(c).rpartition(": ")[2] == "status"]
    answered = (found.table[statuses].astype(str) == "certified").all(axis=1)
    missing = int((~answered).sum())
    if missing:
        sentences.append(f"{missing} of {len(found.table)} states have no answer.")
    return sentences


def sides(shown: Sequence[Quantity]) -> FloatArray:
    """All finite values of some quantities, with the ends of their bands."""
    parts = [q.values for q in shown]
    parts += [q.values + sign * q.band for q in shown for sign in (-1, 1) if q.band is not None]
    values = np.concatenate(parts) if parts else np.zeros(0)
    return np.asarray(values[np.isfinite(values)])
