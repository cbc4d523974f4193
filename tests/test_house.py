"""Data goes one way through the rooms: no module imports from a room to its right."""

import ast
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parents[1] / "chainflow"
ROOMS = ["basis", "thermo", "equipment", "flowsheet", "solver"]
ROOMS += ["accounts", "studies", "report", "cli"]
MODULES = [p for p in sorted(PACKAGE.rglob("*.py")) if p.relative_to(PACKAGE).parts[0] in ROOMS]
MODULES.append(PACKAGE / "cli.py")


def imported(tree):
    """Return the rooms that a module imports from, wherever in it the import stands."""
    for node in ast.walk(tree):
        names = [node.module] if isinstance(node, ast.ImportFrom) else []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        if isinstance(node, ast.ImportFrom):
            assert node.level == 0, "relative import"
            names += [f"{node.module}.{alias.name}" for alias in node.names]
        yield from (n.split(".")[1] for n in names if n and n.startswith("chainflow."))


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_no_import_from_the_right(path):
    own = ROOMS.index(path.relative_to(PACKAGE).parts[0].removesuffix(".py"))
    rooms = set(imported(ast.parse(path.read_text(encoding="utf-8"))))
    assert not rooms & set(ROOMS[own + 1 :])


def test_every_module_has_a_room():
    """Only the front, its runner and the command line stand outside the rooms."""
    outside = {p.name for p in PACKAGE.glob("*.py")}
    assert outside == {"__init__.py", "__main__.py", "cli.py"}
    folders = {p.name for p in PACKAGE.iterdir() if p.is_dir() and list(p.rglob("*.py"))}
    assert folders <= set(ROOMS)
