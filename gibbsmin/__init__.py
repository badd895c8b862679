"""Chemical equilibrium for process and plant engineers.

A case is read by :func:`load_case`.  What can be asked of it:

=====================  =======================================================================
:func:`predict`        its certified outlets; :func:`write_outlet` writes them
:func:`uncertainty`    their error bars; :func:`monte_carlo` by random draws
:func:`scan`           outlets over a grid or a table of conditions; :func:`write_scan`
:func:`onset`          where a phase forms; :func:`onset_uncertainty` how surely
:func:`target`         where a result meets a value; :func:`write_search` writes either's document
:func:`check`          plant samples judged; :func:`write_checks`, :func:`write_report`
=====================  =======================================================================

Without a case, :func:`load_library` gives the species records and :func:`reaction` a reaction's
enthalpy, entropy and constant.  Documents are what the command line prints as JSON, and
:mod:`gibbsmin.present.plots` draws.  Values are in SI units.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from gibbsmin.errors import GibbsminError, InputError, OutputError
    from gibbsmin.jobs.case import Case, load_case
    from gibbsmin.jobs.check import check
    from gibbsmin.jobs.monte_carlo import MonteCarlo, monte_carlo
    from gibbsmin.jobs.onset import Onset, onset
    from gibbsmin.jobs.onset_uncertainty import onset_uncertainty
    from gibbsmin.jobs.predict import predict
    from gibbsmin.jobs.reaction import reaction
    from gibbsmin.jobs.scan import Scan, scan, scan_blocks
    from gibbsmin.jobs.sensitivity import Sensitivities
    from gibbsmin.jobs.target import Target, target
    from gibbsmin.jobs.uncertainty import uncertainty
    from gibbsmin.present.check_document import check_document
    from gibbsmin.present.check_files import write_checks
    from gibbsmin.present.check_table import check_table
    from gibbsmin.present.outlet_document import outlet_document
    from gibbsmin.present.outlet_files import write_outlet
    from gibbsmin.present.report import write_report
    from gibbsmin.present.scan_files import write_scan
    from gibbsmin.present.search_document import onset_document, target_document
    from gibbsmin.present.search_files import write_search
    from gibbsmin.results import Outlet, StageOutlet
    from gibbsmin.sample.findings import Checks, SampleCheck
    from gibbsmin.thermo.library import load_library

__all__ = [
    "Case",
    "Checks",
    "GibbsminError",
    "InputError",
    "MonteCarlo",
    "Onset",
    "Outlet",
    "OutputError",
    "SampleCheck",
    "Scan",
    "Sensitivities",
    "StageOutlet",
    "Target",
    "check",
    "check_document",
    "check_table",
    "load_case",
    "load_library",
    "monte_carlo",
    "onset",
    "onset_document",
    "onset_uncertainty",
    "outlet_document",
    "predict",
    "reaction",
    "scan",
    "scan_blocks",
    "target",
    "target_document",
    "uncertainty",
    "write_checks",
    "write_outlet",
    "write_report",
    "write_scan",
    "write_search",
]

_HOMES = {
    "Case": "gibbsmin.jobs.case",
    "Checks": "gibbsmin.sample.findings",
    "GibbsminError": "gibbsmin.errors",
    "InputError": "gibbsmin.errors",
    "MonteCarlo": "gibbsmin.jobs.monte_carlo",
    "Onset": "gibbsmin.jobs.onset",
    "Outlet": "gibbsmin.results",
    "OutputError": "gibbsmin.errors",
    "SampleCheck": "gibbsmin.sample.findings",
    "Scan": "gibbsmin.jobs.scan",
    "Sensitivities": "gibbsmin.jobs.sensitivity",
    "StageOutlet": "gibbsmin.results",
    "Target": "gibbsmin.jobs.target",
    "check": "gibbsmin.jobs.check",
    "check_document": "gibbsmin.present.check_document",
    "check_table": "gibbsmin.present.check_table",
    "load_case": "gibbsmin.jobs.case",
    "load_library": "gibbsmin.thermo.library",
    "monte_carlo": "gibbsmin.jobs.monte_carlo",
    "onset": "gibbsmin.jobs.onset",
    "onset_document": "gibbsmin.present.search_document",
    "onset_uncertainty": "gibbsmin.jobs.onset_uncertainty",
    "outlet_document": "gibbsmin.present.outlet_document",
    "predict": "gibbsmin.jobs.predict",
    "reaction": "gibbsmin.jobs.reaction",
    "scan": "gibbsmin.jobs.scan",
    "scan_blocks": "gibbsmin.jobs.scan",
    "target": "gibbsmin.jobs.target",
    "target_document": "gibbsmin.present.search_document",
    "uncertainty": "gibbsmin.jobs.uncertainty",
    "write_checks": "gibbsmin.present.check_files",
    "write_outlet": "gibbsmin.present.outlet_files",
    "write_report": "gibbsmin.present.report",
    "write_scan": "gibbsmin.present.scan_files",
    "write_search": "gibbsmin.present.search_files",
}


def __getattr__(name: str) -> Any:
    # A command that needs none of this, such as --help, does not wait for numpy.
    if name not in _HOMES:
        raise AttributeError(f"module 'gibbsmin' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    return [*globals(), *__all__]
