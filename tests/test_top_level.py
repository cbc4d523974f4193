"""At the top of the repository stands what everybody needs to find, and nothing else."""

from pathlib import Path

TOP = Path(__file__).parents[1]
FILES = {"README.md", "DEVELOPERS.md", "LICENSE", "pyproject.toml"}
FOLDERS = {"chainflow", "flowsheets", "examples", "tests"}
MADE = {"build", "dist"}  # by building a wheel; git ignores them


def test_nothing_else_stands_at_the_top():
    found = {p.name for p in TOP.iterdir() if not p.name.startswith(".")} - MADE
    assert {name for name in found if not name.endswith(".egg-info")} == FILES | FOLDERS


def test_files_are_files_and_folders_are_folders():
    assert all((TOP / name).is_file() for name in FILES)
    assert all((TOP / name).is_dir() for name in FOLDERS)
