"""Common names compared without regard to capitals and to British or American spelling."""

from __future__ import annotations

from typing import Final

_SPELLINGS: Final = (("sulph", "sulf"), ("aluminium", "aluminum"), ("caesium", "cesium"))


def folded(name: str) -> str:
    """The name in small letters, one spelling and single blanks."""
    name = " ".join(name.casefold().split())
    for one, other in _SPELLINGS:
        name = name.replace(one, other)
    return name
