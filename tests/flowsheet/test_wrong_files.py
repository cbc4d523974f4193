"""What a wrong file is told: every message word for word, with its place and code.

The files stand in `wrong/*.txt`, each with what must be said of it below a line of dashes; `--set`
before a file stands for the option.  Numbers in the messages of `plants.txt` that come from
properties (heat in kW) are pins.
"""

import re
from pathlib import Path

import pytest

from chainflow.basis.faults import FlowsheetFault, NotSolved, UsageFault
from chainflow.equipment.register import kinds
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import solve_flowsheet

FILES = Path(__file__).parent / "wrong"
SAID = re.compile(r"(?:(?P<line>\d+):\d+ |not solved )\[(?P<code>[a-z-]+)\] (?P<text>.+)|usage: .+")


def _wrong_files():
    """Every wrong file: (name, text, overrides, what must be said)."""
    for path in sorted(FILES.glob("*.txt")):
        for block in path.read_text(encoding="utf-8").split("=== ")[1:]:
            name, _, rest = block.partition("\n")
            text, said = rest.rsplit("---\n", 1)
            options = re.findall(r"^--set (.+?)=(.+)\n", text, re.MULTILINE)
            text = re.sub(r"^--set .+\n", "", text, flags=re.MULTILINE)
            yield pytest.param(text, dict(options), said.strip().splitlines(), id=name)


WRONG = list(_wrong_files())


def said_of(text, overrides):
    """What is said of a file, one line for each fault."""
    try:
        solve_flowsheet(read_text(text, overrides))
    except FlowsheetFault as problem:
        return [f"{f.line}:{f.column} [{f.code}] {f.text}" for f in problem.faults]
    except UsageFault as problem:
        return [f"usage: {problem}"]
    except NotSolved as problem:
        return [f"not solved [{problem.code}] {problem}"]
    return []


@pytest.mark.parametrize(("text", "overrides", "said"), WRONG)
def test_what_a_wrong_file_is_told(text, overrides, said):
    assert said_of(text, overrides) == said


def test_there_are_many_wrong_files():
    assert len(WRONG) >= 140


@pytest.mark.parametrize(("text", "overrides", "said"), WRONG)
def test_messages_are_one_printable_sentence(text, overrides, said):
    for sentence in said:
        assert SAID.fullmatch(sentence)
        assert sentence.isprintable()
        named = ", ".join(kinds())  # grows with every kind and is no part of the wording
        assert len(sentence.replace(named, "")) < 420
        assert not sentence.endswith((".", ":", ";", " "))
        assert not re.search(r"\bNone\b|\bdict\b|<class|Traceback|''", sentence)


@pytest.mark.parametrize(("text", "overrides", "said"), WRONG)
def test_places_lie_in_the_file(text, overrides, said):
    lines = text.splitlines() or [""]
    for sentence in said:
        match = SAID.fullmatch(sentence)
        if match["line"]:
            row, column = (int(number) for number in sentence.split(" ")[0].split(":"))
            assert 1 <= row <= len(lines)
            assert 1 <= column <= len(lines[row - 1]) + 1


def test_all_faults_of_a_file_come_at_once_and_in_its_order():
    (text,) = [param.values[0] for param in WRONG if param.id == "many at once"]
    places = [tuple(map(int, s.split(" ")[0].split(":"))) for s in said_of(text, {})]
    assert len(places) == 5
    assert places == sorted(places)


def test_mending_what_is_said_ends_with_a_plant_that_solves():
    """The messages of a file with five faults are enough to put it right."""
    text = """\
equipment:
  sun: {kind: sunlight, irradiance: 850 W/m2, aperture: 600}
  field: {kind: pv-feild, efficiency: 20 %}
  town: {kind: product}
lines:
  - sun.lite -> field
  - field.power -> twon
"""
    mends = {
        "for instance '600 m2'": ("aperture: 600}", "aperture: 600 m2}"),
        "did you mean 'pv-field'?": ("pv-feild", "pv-field"),
        "did you mean 'light'?": ("sun.lite", "sun.light"),
        "did you mean 'town'?": ("-> twon", "-> town"),
    }
    rounds = 0
    while said := said_of(text, {}):
        hints = [hint for hint in mends if any(hint in sentence for sentence in said)]
        assert hints, said
        for hint in hints:
            text = text.replace(*mends.pop(hint))
        rounds += 1
    assert not mends
    assert rounds == 2  # what hangs on a fault is seen when that is mended
