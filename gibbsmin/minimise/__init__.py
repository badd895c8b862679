"""Minimum of the Gibbs energy over batches of states: arrays only, no chemistry."""

from gibbsmin.minimise.between import Interval, largest_between
from gibbsmin.minimise.certificate import Certificate
from gibbsmin.minimise.compiled import Warmth
from gibbsmin.minimise.dispatch import minimise, minimise_heated, unanswered
from gibbsmin.minimise.kernel.form import settle_form
from gibbsmin.minimise.programme import Programme
from gibbsmin.minimise.settings import Settings
from gibbsmin.minimise.solution import Solution
from gibbsmin.minimise.status import Method, Status
from gibbsmin.minimise.streams import minimise_blocks

__all__ = [
    "Certificate",
    "Interval",
    "Method",
    "Programme",
    "Settings",
    "Solution",
    "Status",
    "Warmth",
    "largest_between",
    "minimise",
    "minimise_blocks",
    "minimise_heated",
    "settle_form",
    "unanswered",
]
