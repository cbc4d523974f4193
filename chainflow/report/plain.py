"""How does text reach any terminal, pipe or file without harm?

Titles may hold any text: control characters are never printed raw, and letters that the output's
encoding does not know become question marks.
"""

from __future__ import annotations

import sys
from typing import IO, TYPE_CHECKING, Literal, TextIO

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table

_PIPE_WIDTH = 1000  # characters; a pipe has no edge to wrap at


def printable(text: str, encoding: str = "utf-8") -> str:
    """Return one line of text that is safe to print in an encoding."""
    shown = "".join(
        letter if letter.isprintable() else letter.encode("unicode_escape").decode("ascii")
        for letter in text
    )
    return shown.encode(encoding, "replace").decode(encoding)


def encoding_of(out: IO[str]) -> str:
    """Return the encoding of an output that is known to Python; UTF-8 if it names none."""
    name = getattr(out, "encoding", None) or "utf-8"
    try:
        "".encode(name)
    except LookupError:
        return "ascii"
    return name


def console(out: TextIO | None = None) -> Console:
    """Return a rich console: styles on a terminal only, and none at all under NO_COLOR."""
    import os

    from rich.console import Console

    class Piped(Console):
        """A console that leaves it to the command what to do when its reader has gone."""

        def on_broken_pipe(self) -> None:
            raise BrokenPipeError

    out = out or sys.stdout
    terminal = bool(getattr(out, "isatty", lambda: False)())
    styled = terminal and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"
    return Piped(
        file=out,
        force_terminal=terminal,
        color_system="auto" if styled else None,
        width=None if terminal else _PIPE_WIDTH,
        highlight=False,
        markup=False,
        emoji=False,
    )


def plain_table(*columns: str, right: tuple[str, ...] = (), whole: tuple[str, ...] = ()) -> Table:
    """Return an empty table; columns in `whole` are not wrapped."""
    from rich import box
    from rich.table import Table

    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    for name in columns:
        justify: Literal["left", "right"] = "right" if name in right else "left"
        table.add_column(name, justify=justify, overflow="fold", no_wrap=name in whole)
    return table
