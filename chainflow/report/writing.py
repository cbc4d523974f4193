"""How do answers get onto disk whole or not at all?

A file is written beside its place and moved there when it is complete. What is not a regular file
(a pipe, a device) is written to directly, since it cannot be replaced.
"""

from __future__ import annotations

import os
import tempfile
from collections.abc import Mapping
from pathlib import Path

from chainflow.basis.faults import FileFault


def check_writable(path: Path) -> None:
    """Raise `FileFault` if a file cannot be written at `path`, as far as one can tell before."""
    target = _target(path)
    if target.is_dir():
        raise FileFault(f"{path} is a directory: name a file to write to")
    if target.exists():
        if not os.access(target, os.W_OK):
            raise FileFault(f"{path} cannot be written: permission denied")
        return
    _check_directory(target.parent, path)


def check_directory(path: Path) -> None:
    """Raise `FileFault` if a directory for several files cannot be used or made."""
    target = _target(path)
    if target.exists() and not target.is_dir():
        raise FileFault(f"{path} is a file: name a directory to write to")
    nearest = target
    while not nearest.exists():
        nearest = nearest.parent
    _check_directory(nearest, path)


def write_whole(path: Path, text: str) -> None:
    """Write one text file, whole or not at all; raises `FileFault`."""
    target = _target(path)
    try:
        if target.exists() and not target.is_file():
            with target.open("w", encoding="utf-8", newline="\n") as special:
                special.write(text)
            return
        _move({_beside(target, text): target})
    except OSError as problem:
        raise FileFault(f"{path} cannot be written: {_reason(problem)}") from problem


def write_all(directory: Path, texts: Mapping[str, str]) -> None:
    """Write several files into a directory, which is made if needed; raises `FileFault`.

    All are complete on disk before the first takes its place.
    """
    ready: dict[Path, Path] = {}
    try:
        directory.mkdir(parents=True, exist_ok=True)
        for name, text in texts.items():
            ready[_beside(directory / name, text)] = directory / name
        _move(ready)
    except OSError as problem:
        raise FileFault(f"{directory} cannot be written: {_reason(problem)}") from problem
    finally:
        for temporary in ready:
            temporary.unlink(missing_ok=True)


def _move(ready: Mapping[Path, Path]) -> None:
    for temporary, target in ready.items():
        try:
            temporary.replace(target)
        finally:
            temporary.unlink(missing_ok=True)


def _beside(target: Path, text: str) -> Path:
    """Write the text to a new file in the same directory and return its path."""
    handle, name = tempfile.mkstemp(dir=target.parent, prefix=f".{target.name}.")
    temporary = Path(name)
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
        temporary.chmod(_mode(target))
    except BaseException:
        temporary.unlink(missing_ok=True)
        raise
    return temporary


def _mode(target: Path) -> int:
    """Return the permissions of the file that is replaced, or those a new file would get."""
    if target.exists():
        return target.stat().st_mode & 0o777
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask


def _target(path: Path) -> Path:
    """Follow symbolic links, so that they stay and what they point at is written."""
    try:
        return path.resolve()
    except (OSError, RuntimeError) as problem:
        raise FileFault(f"{path} cannot be written: {problem}") from problem


def _check_directory(directory: Path, path: Path) -> None:
    if not directory.is_dir():
        raise FileFault(f"{path} cannot be written: there is no directory {directory}")
    if not os.access(directory, os.W_OK | os.X_OK):
        raise FileFault(f"{path} cannot be written: permission denied in {directory}")


def _reason(problem: OSError) -> str:
    return problem.strerror or str(problem)
