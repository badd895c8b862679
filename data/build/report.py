"""The table of fit errors that the build prints."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

from gibbsmin.data.build.record import BuildRecord

from gibbsmin.thermo.species import Phase

LIMITS: Final = (1e-4, 2e-4, 1e-3)

EXCEPTIONS: Final = {
    "AlBr3(cr)": "between 370.6 K and 400 K the table's H and S rise 0.12 kJ/mol less than its Cp",
}
"""Records of the main tables whose largest |ΔG/RT| is above 1e-3, and the fault that makes it."""


def fit_report(records: Sequence[BuildRecord]) -> str:
    """Count, shares within limits of |ΔG/RT| and worst record of each class, and the exceptions."""
    main = [record for record in records if record.source_heat_capacity == "JANAF"]
    classes = {
        f"main, {phase.value}": [record for record in main if record.phase is phase]
        for phase in Phase
    }
    classes["curated"] = [record for record in records if record.source_heat_capacity != "JANAF"]
    header = f"{'class':14}{'records':>8}" + "".join(f"{f'<= {limit:.0e}':>10}" for limit in LIMITS)
    lines = [f"{header}  worst", *(_line(name, group) for name, group in classes.items())]
    lines += [
        f"above {LIMITS[-1]:.0e}: {name}: {EXCEPTIONS.get(name, 'no reason is known')}"
        for name in above_limit(main)
    ]
    return "\n".join(lines)


def above_limit(records: Sequence[BuildRecord]) -> list[str]:
    """Names of the records whose fit error is above the widest limit."""
    return [record.name for record in records if record.fit_error > LIMITS[-1]]


def _line(name: str, records: Sequence[BuildRecord]) -> str:
    worst = max(records, key=lambda record: record.fit_error)
    shares = (sum(record.fit_error <= limit for record in records) for limit in LIMITS)
    cells = "".join(f"{share / len(records):10.2%}" for share in shares)
    return f"{name:14}{len(records):8d}{cells}  {worst.name} {worst.fit_error:.1e}"
