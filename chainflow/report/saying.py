"""Sentences on stderr, and what is left of stdout when nobody reads it."""

from __future__ import annotations

import contextlib
import os
import sys
from collections.abc import Iterable
from pathlib import Path

import typer

from chainflow.basis.faults import Fault


def say(text: str) -> None:
    """Print to stderr, one safe line for each line of text."""
    from chainflow.report.plain import encoding_of, printable

    encoding = encoding_of(sys.stderr)
    for line in text.splitlines() or [""]:
        typer.echo(f"chainflow: {printable(line, encoding)}", err=True)


def say_faults(faults: Iterable[Fault], file: Path | None, what: str = "") -> None:
    """Print faults or remarks, each at its place in the file."""
    for fault in faults:
        where = "" if fault.place is None else f"{file}:{fault.place}: "
        say(f"{where}{what}{fault.text}")


def say_bug(problem: Exception) -> None:
    """Print that something is wrong with the program, and where if that is asked for."""
    if os.environ.get("CHAINFLOW_DEBUG"):
        import traceback

        traceback.print_exception(problem)
    name = type(problem).__name__
    first = str(problem).partition("\n")[0]
    say(
        f"a bug of ours (please report): {name}: {first} "
        "[CHAINFLOW_DEBUG=1 prints where it happened]"
    )


def forget_output() -> None:
    """Send what is left for stdout nowhere, so that Python's last flush cannot fail."""
    with contextlib.suppress(OSError):  # an output without a file behind it has no last flush
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
