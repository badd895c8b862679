"""The command line: arguments, exit codes, and everything that is printed.

Bad input ends with one sentence on standard error and exit code 2.  Commands import what they
need when they run, so that help and errors come at once.
"""

# Importing a command's module adds it to the application, in the order of the help.
from gibbsmin.cli import predicting, scanning, searching, checking, records  # isort: skip
from gibbsmin.cli.app import app
from gibbsmin.cli.output import print_in_plain_letters

__all__ = ["app", "checking", "main", "predicting", "records", "scanning", "searching"]


def main() -> None:
    """Entry point of the console command."""
    print_in_plain_letters()
    app()
