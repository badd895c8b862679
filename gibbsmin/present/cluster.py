"""The blocks of a scan on a dask.distributed cluster: same rows, same order, on many machines.

A worker is given the case and the numbers of the states, and sends the block's table back.  A
block whose worker is lost is given to another.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from concurrent.futures import CancelledError
from contextlib import contextmanager
from importlib import import_module
from typing import TYPE_CHECKING, Any

from gibbsmin.errors import InputError, OutputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions
from gibbsmin.jobs.scan import scan_block
from gibbsmin.minimise import settle_form

if TYPE_CHECKING:
    import pandas as pd

LOCAL = "local"
"""The address that means workers on this machine, one for each processor."""

_SECONDS = 20
_LOSSES = 10
"""Workers that a block may lose before it is given up."""


@contextmanager
def connected(address: str) -> Iterator[Any]:
    """A client of the cluster at an address such as ``tcp://10.0.0.5:8786``, or ``local``.

    Raises
    ------
    InputError
        where dask.distributed is missing, or nothing answers at the address.
    """
    try:
        config: Any = import_module("dask.config")
        distributed: Any = import_module("distributed")
    except ImportError:
        raise InputError(
            "found no dask.distributed",
            "accepted is an installation with gibbsmin[cluster]",
            key="cluster",
        ) from None
    with config.set({"distributed.scheduler.allowed-failures": _LOSSES}):
        if address == LOCAL:
            with (
                distributed.LocalCluster(threads_per_worker=1, dashboard_address=None) as cluster,
                distributed.Client(cluster) as client,
            ):
                yield client
            return
        try:
            client = distributed.Client(address, timeout=_SECONDS)
        except (OSError, ValueError, TimeoutError) as error:
            reason = str(error).splitlines()[0][:100] if str(error) else type(error).__name__
            raise InputError(
                f'found no cluster at "{address}" ({reason})',
                'accepted is the address of a running scheduler, or "local"',
                key="cluster",
            ) from None
        with client:
            yield client


def at_once(client: Any) -> int:
    """Blocks to hand out at a time: so many that no worker waits, so few that memory holds them."""
    threads: int = sum(client.nthreads().values())
    return max(2, 2 * threads)


def blocks_on(
    client: Any, case: Case, conditions: Conditions, block: int, *, uncertainty: bool
) -> Callable[[int], pd.DataFrame]:
    """A function that has the block of a number solved by the cluster, and waits for it.

    Raises
    ------
    OutputError
        from that function, where a block has lost too many workers.
    """
    distributed: Any = import_module("distributed")
    lost = (distributed.KilledWorker, CancelledError)
    shared = _handed_out(client, case, conditions)

    def take(index: int) -> pd.DataFrame:
        nonlocal shared
        for _ in range(_LOSSES):
            handed_out = shared
            coming = client.submit(
                _solve,
                index,
                shared=handed_out,
                block=block,
                uncertainty=uncertainty,
                pure=False,
                retries=2,
            )
            try:
                table: pd.DataFrame = coming.result()
            except lost:
                # The worker may have held the only copy of the case, which nothing restores.
                if shared is handed_out:
                    shared = _handed_out(client, case, conditions)
                continue
            return table
        raise OutputError(
            "found that workers were lost again and again",
            "accepted is the same command once more, which goes on where this stopped",
            key="cluster",
        )

    return take


def _handed_out(client: Any, case: Case, conditions: Conditions) -> Any:
    """What all blocks need, copied to every worker."""
    return client.scatter((case, conditions), broadcast=True, hash=False)


def _solve(
    index: int, *, shared: tuple[Case, Conditions], block: int, uncertainty: bool
) -> pd.DataFrame:
    case, conditions = shared
    settle_form()
    first = index * block
    last = min(first + block, conditions.states)
    return scan_block(case, conditions, first, last, uncertainty=uncertainty)
