"""A worker's arrays in one piece of memory.

The compiler guards its vector loops by checks, at run time, of whether arrays may overlap, and
falls back to plain loops, which round differently, where they might.  In one piece the arrays
always lie at the same distances, so that equal batches give equal bits.
"""

from __future__ import annotations

from typing import Any, TypeVar

import numpy as np

_ALIGNED = 64
_APART = 256
"""Bytes between neighbours, more than a vector loop looks ahead."""

Nested = TypeVar("Nested", bound=tuple[Any, ...])


def in_one_memory(parts: Nested) -> Nested:
    """Copies of all arrays in (nested) named tuples, laid out one after another.

    An array that views the memory of the one before it goes on viewing that.
    """
    total = _length(parts) + _ALIGNED
    memory = np.zeros(total, dtype=np.uint8)
    first = -memory.ctypes.data % _ALIGNED
    copy, _ = _laid_out(parts, memory, first)
    placed: Nested = copy
    return placed


def _length(part: Any) -> int:
    if isinstance(part, np.ndarray):
        return -(-part.nbytes // _ALIGNED) * _ALIGNED + _APART
    return sum(map(_length, part)) if isinstance(part, tuple) else 0


def _laid_out(part: Any, memory: np.ndarray, at: int) -> tuple[Any, int]:
    """The part with its arrays copied into memory from ``at`` on, and where the next may begin."""
    if isinstance(part, np.ndarray):
        room = memory[at : at + part.nbytes].view(part.dtype).reshape(part.shape)
        room[...] = part
        return room, at + _length(part)
    if not isinstance(part, tuple):
        return part, at
    members: list[Any] = []
    before: Any = None
    for member in part:
        if isinstance(member, np.ndarray) and member.base is not None and member.base is before:
            copy = members[-1].view(member.dtype)
        else:
            copy, at = _laid_out(member, memory, at)
        members.append(copy)
        before = member
    return (type(part)._make(members) if hasattr(part, "_make") else tuple(members)), at
