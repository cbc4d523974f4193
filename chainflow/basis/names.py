"""What may be called what, and which known word was probably meant?

Names of equipment, ports and knobs are plain lower-case ASCII; the words that addresses use are
kept back for them. Near misses come from ``difflib`` of the standard library.
"""

import re
from collections.abc import Iterable
from difflib import get_close_matches
from itertools import islice
from typing import Final

NAME_PATTERN: Final = r"[a-z][a-z0-9_-]*"
"""Regular expression, to be matched against the whole word."""

RESERVED: Final = frozenset(
    {
        "flow",
        "mass_flow",
        "fraction",
        "dry_fraction",
        "temperature",
        "pressure",
        "ratio",
        "rate",
        "duty",
        "plant",
    }
)
"""Words of addresses: no name may be one of these."""

LONGEST_NAME: Final = 64
"""Longest name that is taken, in characters; tables and drawings have to hold it."""

MOST_COMPARED: Final = 500
"""Most known words that are compared when a near miss is looked for."""

_NAME = re.compile(NAME_PATTERN)


def is_name(word: str) -> bool:
    """Whether a word is well formed as a name and not kept back for addresses."""
    return name_trouble(word) == ""


def name_trouble(word: str) -> str:
    """Say in one sentence what is wrong with a name; empty text if nothing is."""
    if len(word) > LONGEST_NAME:
        return f"the name {shorten(word)} is longer than {LONGEST_NAME} characters: shorten it"
    if not _NAME.fullmatch(word):
        return (
            f"{shorten(word)} is not a name: start with a lower-case letter and go on with "
            "lower-case letters, digits, '-' or '_'"
        )
    if word in RESERVED:
        return f"'{word}' is a word of addresses and cannot be a name: choose another one"
    return ""


def suggest(word: str, known: Iterable[str]) -> str:
    """Return " (did you mean 'x'?)" for the nearest known word, or "" if none is near.

    Case counts for nothing, so ``h2`` finds ``H2``. Very long words are not compared at all, and
    no more than a few hundred known ones, so that a hostile file cannot buy time with them.
    """
    if len(word) > LONGEST_NAME:
        return ""
    some = islice((candidate for candidate in known if candidate != word), MOST_COMPARED)
    by_folded = {candidate.casefold(): candidate for candidate in some}
    near = get_close_matches(word.casefold(), list(by_folded), n=1, cutoff=0.6)
    return f" (did you mean {shorten(by_folded[near[0]], LONGEST_NAME)}?)" if near else ""


def shorten(text: str, longest: int = 40) -> str:
    """Quote a text from a file so that it is safe to print: one line, ASCII escapes, cut short."""
    cut = text if len(text) <= longest else text[:longest] + "..."
    return "'" + "".join(_printable(letter) for letter in cut) + "'"


def _printable(letter: str) -> str:
    return letter if letter.isprintable() else letter.encode("unicode_escape").decode("ascii")
