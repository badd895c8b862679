"""A scan from its case file to its own file, which goes on where it was broken off."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions
from gibbsmin.jobs.scan import AHEAD, block_size, scan_block
from gibbsmin.minimise import settle_form
from gibbsmin.present.cluster import at_once, blocks_on
from gibbsmin.present.scan_files import require_scan_ending, write_blocks
from gibbsmin.present.scan_parts import forget_blocks, kept_blocks
from gibbsmin.present.scan_progress import Tally

if TYPE_CHECKING:
    import pandas as pd


def run_scan(
    case: Case,
    conditions: Conditions,
    path: Path,
    fingerprint: str,
    *,
    block: int | None = None,
    uncertainty: bool = False,
    client: Any = None,
) -> Tally:
    """Solve what is not kept from an earlier run, and write the file whole.

    A client of a cluster (:func:`gibbsmin.present.cluster.connected`) has the blocks solved there.

    Raises
    ------
    OutputError
        for a file that cannot be written, and for kept blocks of another scan.
    """
    require_scan_ending(path)
    block = block or block_size(case, uncertainty=uncertainty)
    count = -(-conditions.states // block)
    if count > 1:
        # What is kept and what is solved later must agree to the last bit.
        settle_form()

    def solved_here(index: int) -> pd.DataFrame:
        first = index * block
        last = min(first + block, conditions.states)
        return scan_block(case, conditions, first, last, uncertainty=uncertainty)

    solve: Callable[[int], pd.DataFrame] = solved_here
    ahead = AHEAD
    if client is not None:
        solve = blocks_on(client, case, conditions, block, uncertainty=uncertainty)
        ahead = at_once(client)
    blocks = kept_blocks(path, fingerprint, count, solve, ahead)
    tally = Tally(blocks, conditions.states)
    write_blocks(iter(tally), path)
    forget_blocks(path)
    return tally
