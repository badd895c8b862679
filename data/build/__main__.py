"""Remakes every table of the library: ``python -m gibbsmin.data.build``."""

from __future__ import annotations

from pathlib import Path

from gibbsmin.data.build.library import library_tables
from gibbsmin.data.build.report import fit_report
from gibbsmin.data.build.write import write


def main() -> None:
    tables, fits = library_tables()
    write(Path(__file__).resolve().parent.parent, tables)
    print(fit_report(fits))


if __name__ == "__main__":
    main()
