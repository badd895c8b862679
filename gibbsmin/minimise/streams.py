"""Grids too large for memory: a block at a time."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from gibbsmin.minimise.dispatch import minimise
from gibbsmin.minimise.programme import Programme
from gibbsmin.minimise.settings import Settings
from gibbsmin.minimise.solution import Solution


def minimise_blocks(
    blocks: Iterable[Programme], settings: Settings | None = None
) -> Iterator[Solution]:
    """Answer the blocks of a large batch one by one, each when it is asked for.

    Only the block at hand is in memory, so that ten million states need no more than one block
    of them; 100,000 states of a small system keep both cores busy.
    """
    for block in blocks:
        yield minimise(block, settings or Settings())
