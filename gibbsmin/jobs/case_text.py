"""Reads a case file's text into plain tables."""

from __future__ import annotations

import re
import tomllib
from os import PathLike
from pathlib import Path
from typing import Any

from gibbsmin.errors import InputError

_PLACE = re.compile(r"(?P<reason>.*?) \(at (?P<place>.*)\)", re.DOTALL)


def read_tables(path: str | PathLike[str], kind: str = "case file") -> dict[str, Any]:
    """The tables of a TOML file; ``kind`` is what errors call it.

    Raises
    ------
    InputError
        when there is no such file, or it cannot be read, is not UTF-8 or is not TOML; the
        sentence gives line and column where they are known.
    """
    file, accepted = str(path), f"accepted is the path of a {kind} in TOML"
    try:
        return tomllib.loads(_read_text(Path(path), accepted))
    except InputError as error:
        raise error.at(file=file) from None
    except tomllib.TOMLDecodeError as error:
        raise InputError(*_not_toml(str(error)), file=file) from None
    except (RecursionError, ValueError):
        # Python bounds the depth of brackets and the digits of an integer.
        raise InputError(
            "found tables nested too deeply or a number too long", accepted, file=file
        ) from None


def _read_text(path: Path, accepted: str) -> str:
    try:
        # An editor's byte order mark is no part of the text.
        return path.read_bytes().decode("utf-8-sig")
    except FileNotFoundError:
        raise InputError("found no such file", accepted) from None
    except IsADirectoryError:
        raise InputError("found a folder", accepted) from None
    except OSError as error:
        raise InputError(f"found a file that cannot be read ({error.strerror})", accepted) from None
    except UnicodeDecodeError as error:
        line = error.object[: error.start].count(b"\n") + 1
        raise InputError(
            f"found text that is not UTF-8 in line {line}", "accepted is a file saved as UTF-8"
        ) from None
    except ValueError:
        raise InputError("found a path that names no file", accepted) from None


def _not_toml(message: str) -> tuple[str, str]:
    """What was found and what is accepted, from the parser's message."""
    match = _PLACE.fullmatch(message)
    reason, place = (match["reason"], match["place"]) if match else (message, "")
    reason = reason[:1].lower() + reason[1:]
    found = f"found text that is not TOML{f' at {place}' if place else ''} ({reason})"
    return found, 'accepted is TOML, where text and quantities such as "850 degC" stand in quotes'
