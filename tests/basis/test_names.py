"""Names, near misses, and text that is safe to print."""

import time

import pytest

from chainflow.basis.names import RESERVED, is_name, name_trouble, shorten, suggest


@pytest.mark.parametrize("word", ["a", "stack", "heat-pump", "tank_2", "x" * 64])
def test_names_that_are_taken(word):
    assert is_name(word)


ODD = ["", "Stack", "2nd", "-a", "_a", "a.b", "a b", "é", "a\n", "a$", "x" * 65]


@pytest.mark.parametrize("word", [*ODD, *sorted(RESERVED)])
def test_names_that_are_refused_with_a_reason(word):
    assert not is_name(word)
    assert name_trouble(word)


def test_near_misses_are_found_whatever_the_case():
    assert suggest("methnation", ["shift", "methanation"]) == " (did you mean 'methanation'?)"
    assert suggest("h2", ["H2", "O2"]) == " (did you mean 'H2'?)"
    assert suggest("kilogram", ["x", "y"]) == ""
    assert suggest("a", []) == ""


def test_a_near_miss_from_a_file_is_safe_to_print():
    assert suggest("area", ["\ufeffarea"]) == " (did you mean '\\ufeffarea'?)"


def test_near_misses_cost_no_time_on_hostile_input():
    start = time.perf_counter()
    suggest("x" * 100_000, ["x" * 64] * 10)
    suggest("x" * 60, (f"{'x' * 50}{number}" for number in range(100_000)))
    assert time.perf_counter() - start < 2.0


def test_quoted_text_is_one_printable_line():
    assert shorten("12 bar") == "'12 bar'"
    assert shorten("a\x1b[31m\nb") == "'a\\x1b[31m\\nb'"
    assert shorten("x" * 50) == "'" + "x" * 40 + "...'"
