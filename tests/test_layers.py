"""The house's rule: a layer imports only from the layers above it."""

from __future__ import annotations

import ast
from pathlib import Path

import gibbsmin

PACKAGE = Path(gibbsmin.__file__).parent
LAYERS = (
    ("errors", "constants", "arrays", "data"),
    ("units",),
    ("thermo",),
    ("minimise",),
    ("reactor",),
    ("results",),
    ("sample",),
    ("jobs",),
    ("present",),
    ("cli",),
)
RANK = {part: rank for rank, parts in enumerate(LAYERS) for part in parts}
SOURCES = sorted(PACKAGE.rglob("*.py"))


def part_of(path: Path) -> str:
    return path.relative_to(PACKAGE).with_suffix("").parts[0]


def imported_parts(path: Path) -> set[str]:
    """First names below gibbsmin that a module imports, wherever in the file it does so."""
    names: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: imports are absolute"
            if node.module == "gibbsmin":
                names |= {f"gibbsmin.{alias.name}" for alias in node.names}
            elif node.module:
                names.add(node.module)
    return {name.split(".")[1] for name in names if name.startswith("gibbsmin.")}


def test_every_module_belongs_to_a_layer() -> None:
    parts = {part_of(path) for path in SOURCES} - {"__init__"}
    assert parts <= set(RANK)
    assert {"thermo", "minimise", "reactor", "results", "jobs", "present", "cli"} <= parts


def test_imports_run_one_way() -> None:
    against = [
        f"{path.relative_to(PACKAGE)} imports gibbsmin.{part}"
        for path in SOURCES
        if part_of(path) != "__init__"
        for part in imported_parts(path)
        if RANK[part] > RANK[part_of(path)]
    ]
    assert against == []


def test_minimiser_knows_no_chemistry() -> None:
    imported = {
        part for path in (PACKAGE / "minimise").rglob("*.py") for part in imported_parts(path)
    }
    assert imported <= {"minimise", "arrays", "errors"}


def test_only_the_command_line_prints() -> None:
    printing = [
        str(path.relative_to(PACKAGE))
        for path in SOURCES
        if part_of(path) != "cli"
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8")))
        if isinstance(node, ast.Call)
        and isinstance(node.func, ast.Name)
        and node.func.id == "print"
    ]
    assert printing == []
