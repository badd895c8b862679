"""Services: what is usually considered in a reactor of a known duty.

A service names the records that form on the catalyst or in the flame of its duty, those that pass
it unchanged, its key reactions, and the reactions by which carbon can form there.  All of it is a
proposal: a result prints it, and a user overrides it line by line.
"""

from __future__ import annotations

import csv
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Final

from gibbsmin.errors import InputError

_FIELDS: Final = ("consider", "inert", "key reaction", "carbon route")


@dataclass(frozen=True)
class Service:
    """One duty.

    Attributes
    ----------
    name : as a user writes it
    consider : record names of the candidates; those whose elements are not fed fall away
    inert : record names that pass unchanged where they are fed
    key_reactions : the reactions by which the duty is judged
    carbon_routes : reactions that could form carbon; empty where the duty rules it out
    sources : where each of these comes from, by field; "common practice" of the trade
    """

    name: str
    consider: tuple[str, ...]
    inert: tuple[str, ...]
    key_reactions: tuple[str, ...]
    carbon_routes: tuple[str, ...]
    sources: Mapping[str, str]

    @property
    def too_slow(self) -> tuple[str, ...]:
        """What does not form in this service: carbon, where no route leads to it."""
        return () if self.carbon_routes else ("C(graphite)",)


@cache
def services() -> Mapping[str, Service]:
    """All services of the table ``services.csv`` by name."""
    text = files("gibbsmin.data").joinpath("services.csv").read_text(encoding="utf-8")
    rows: dict[str, list[dict[str, str]]] = {}
    for row in csv.DictReader(text.splitlines()):
        rows.setdefault(row["service"], []).append(row)
    return MappingProxyType({name: _service(name, parts) for name, parts in rows.items()})


def find_service(name: str) -> Service:
    """The service of that name; capitals and blanks around it do not matter.

    Raises
    ------
    InputError
        If there is none; the message lists all.
    """
    known = {key.casefold(): key for key in services()}
    wanted = " ".join(name.casefold().split())
    if wanted in known:
        return services()[known[wanted]]
    raise InputError(
        f'found the service "{name}"',
        f"accepted is one of {', '.join(services())}",
        key="service",
    )


def _service(name: str, rows: list[dict[str, str]]) -> Service:
    values: dict[str, list[str]] = {field: [] for field in _FIELDS}
    sources: dict[str, str] = {}
    for row in rows:
        values[row["kind"]] += row["value"].split(";")
        sources[row["kind"]] = row["source"]
    consider, inert, reactions, routes = (tuple(values[field]) for field in _FIELDS)
    return Service(name, consider, inert, reactions, routes, MappingProxyType(sources))
