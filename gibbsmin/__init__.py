"""Chemical equilibrium for process and plant engineers.

:func:`load_case` reads a case, :func:`predict` gives its certified outlet and
:func:`uncertainty` its error bars.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from gibbsmin.jobs.case import Case, load_case
    from gibbsmin.jobs.check import check
    from gibbsmin.jobs.monte_carlo import MonteCarlo, monte_carlo
    from gibbsmin.jobs.onset import Onset, onset
    from gibbsmin.jobs.onset_uncertainty import onset_uncertainty
    from gibbsmin.jobs.predict import predict
    from gibbsmin.jobs.scan import Scan, scan, scan_blocks
    from gibbsmin.jobs.sensitivity import Sensitivities
    from gibbsmin.jobs.target import Target, target
    from gibbsmin.jobs.uncertainty import uncertainty
    from gibbsmin.present.scan_files import write_scan
    from gibbsmin.results import Outlet, StageOutlet
    from gibbsmin.sample.findings import Checks, SampleCheck

__all__ = [
    "Case",
    "Checks",
    "MonteCarlo",
    "Onset",
    "Outlet",
    "SampleCheck",
    "Scan",
    "Sensitivities",
    "StageOutlet",
    "Target",
    "check",
    "load_case",
    "monte_carlo",
    "onset",
    "onset_uncertainty",
    "predict",
    "scan",
    "scan_blocks",
    "target",
    "uncertainty",
    "write_scan",
]

_HOMES = {
    "Case": "gibbsmin.jobs.case",
    "Checks": "gibbsmin.sample.findings",
    "SampleCheck": "gibbsmin.sample.findings",
    "check": "gibbsmin.jobs.check",
    "MonteCarlo": "gibbsmin.jobs.monte_carlo",
    "monte_carlo": "gibbsmin.jobs.monte_carlo",
    "Outlet": "gibbsmin.results",
    "StageOutlet": "gibbsmin.results",
    "load_case": "gibbsmin.jobs.case",
    "Onset": "gibbsmin.jobs.onset",
    "onset": "gibbsmin.jobs.onset",
    "onset_uncertainty": "gibbsmin.jobs.onset_uncertainty",
    "Target": "gibbsmin.jobs.target",
    "target": "gibbsmin.jobs.target",
    "predict": "gibbsmin.jobs.predict",
    "Scan": "gibbsmin.jobs.scan",
    "scan": "gibbsmin.jobs.scan",
    "scan_blocks": "gibbsmin.jobs.scan",
    "Sensitivities": "gibbsmin.jobs.sensitivity",
    "uncertainty": "gibbsmin.jobs.uncertainty",
    "write_scan": "gibbsmin.present.scan_files",
}


def __getattr__(name: str) -> Any:
    # A command that needs none of this, such as --help, does not wait for numpy.
    if name not in _HOMES:
        raise AttributeError(f"module 'gibbsmin' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
