"""What the README shows is what happens."""

import doctest
import re
import shlex
from pathlib import Path

import pytest
from typer.testing import CliRunner

from chainflow import cli
from chainflow.equipment.register import kinds
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet

TOP = Path(__file__).parents[1]
README = (TOP / "README.md").read_text(encoding="utf-8")


def blocks(language):
    return re.findall(rf"^```{language}\n(.*?)^```$", README, re.DOTALL | re.MULTILINE)


def first_not_printed(shown, printed):
    """Return the first line shown that is not printed in its place, or None.

    A line `...` stands for any lines, `...` in a line for any text; runs of spaces are alike.
    """
    left = iter([" ".join(line.split()) for line in printed.splitlines()])
    skipping = False
    for line in shown.splitlines():
        if line.strip() == "...":
            skipping = True
            continue
        parts = [re.escape(" ".join(part.split())) for part in line.split("...")]
        wanted = r"\s*.*\s*".join(parts)
        for printed_line in left:
            if re.fullmatch(wanted, printed_line):
                break
            if not skipping:
                return line
        else:
            return line
        skipping = False
    return None if skipping or next(left, None) is None else "the end"


@pytest.mark.parametrize("block", blocks("console"), ids=lambda b: b.splitlines()[0][12:60])
def test_a_command_prints_what_is_shown(block, monkeypatch):
    monkeypatch.chdir(TOP)
    command, shown = block.split("\n", 1)
    program, *arguments = shlex.split(command.removeprefix("$ "))
    assert program == "chainflow"
    result = CliRunner().invoke(cli.app, arguments)
    assert result.exit_code == (3 if "inert" in command else 1 if "press." in command else 0)
    assert first_not_printed(shown, result.output) is None


def test_a_wrong_line_is_noticed():
    printed = "a\nb\nc\nwater  99 % \n"
    assert first_not_printed("a\n...\nwater 99 %\n", printed) is None
    assert first_not_printed("a\n...\nwater ... %\n", printed) is None
    assert first_not_printed("a\n...\nwater 98 %\n", printed) == "water 98 %"
    assert first_not_printed("a\nwater 99 %\n", printed) == "water 99 %"
    assert first_not_printed("a\nb\n", printed) == "the end"


def test_the_python_session(monkeypatch):
    monkeypatch.chdir(TOP)
    (session,) = blocks("pycon")
    test = doctest.DocTestParser().get_doctest(session, {}, "README", None, None)
    runner = doctest.DocTestRunner()
    runner.run(test)
    assert runner.tries == 5
    assert runner.failures == 0


def test_the_flowsheet_solves():
    (text,) = blocks("yaml")
    solution = solve_flowsheet(read_text(text))
    assert solution.remarks == ()
    assert solution.holds[0].reached == pytest.approx(3.0, rel=1e-9)


def test_the_kind_is_the_example():
    (text,) = blocks("python")
    file = TOP / "examples" / "solar-collector" / "solar_collector.py"
    assert text == file.read_text(encoding="utf-8")


def test_the_two_commands_do_their_whole_setup():
    run, tests = blocks("sh")
    for command in (run, tests):
        assert command.startswith("python3 -m venv .venv && .venv/bin/pip install ")
        assert len(command.splitlines()) == 1
    assert run.strip().endswith("chainflow solve flowsheets/methane-cycle.yaml")
    assert tests.strip().endswith("python -m pytest -q -n auto")
    assert "sudo apt-get install -y python3-venv" in README


def test_numbers_of_things():
    assert f"{len(kinds())} kinds of\nequipment" in README
    shipped = sorted(file.stem for file in (TOP / "flowsheets").glob("*.yaml"))
    assert f"`flowsheets/` holds {len(shipped)} flowsheets" in README
    assert f"{len(shipped)} flowsheets to start from" in README
    assert [name for name in shipped if f"`{name}`" not in README] == []
