"""Take any one line out of a shipped flowsheet: what is said then names what is missing."""

import re

import pytest

from chainflow.accounts.plant import plant_account
from chainflow.basis.faults import ChainflowError, FlowsheetFault
from chainflow.flowsheet.building import read_text
from chainflow.flowsheet.linkage import open_outlets
from chainflow.solver.solve import solve_flowsheet
from tests.flowsheets.shipped import HUGE, NAMES, numbers, solved, text_of

LONG = (  # many lines, each one a solve
    *("methane-cycle", "methane-cycle-direct", "methane-liquid", "hydrogen-liquid"),
    *("steam-methane", "solar-heat-syngas", *HUGE),
)
IDLE = ("title", "basis", "components")  # the defaults of these are what the files say, or names


def without(text: str, place: int) -> str:
    lines = text.split("\n")
    return "\n".join(lines[:place] + lines[place + 1 :])


def entries(name: str, *, joining: bool) -> list[int]:
    """Return places of written lines: those under `lines`, or all the others.

    Those under `costs` are left out: most of them may be missing, and what costs nothing is named.
    """
    found, section = [], ""
    for place, line in enumerate(text_of(name).split("\n")):
        if not line.strip() or line.strip().startswith("#"):
            continue
        section = line.split(":")[0] if not line.startswith(" ") else section
        if section == "costs" and line.startswith(" "):
            continue
        is_joining = section == "lines" and line.startswith(" ")
        if is_joining == joining:
            found.append(place)
    return found


def words(text: str) -> set[str]:
    """Return the addresses in a sentence, and the names they begin with."""
    found = set(re.findall(r"[a-z][a-z0-9_-]*(?:\.[a-z][a-z0-9_-]*)*", text))
    return found | {address.split(".")[0] for address in found}


def said(text: str) -> tuple[bool, set[str]]:
    """Return whether a flowsheet is refused, and all names and addresses in what is said of it.

    That is what its faults name; or what remarks name, what is bought, and what leaves the plant.
    What is not linked is said before the reason why there is no steady state, too.
    """
    remarked: set[str] = set()
    try:
        flowsheet = read_text(text)
        remarked = {word for remark in flowsheet.remarks for word in words(remark.text)}
        remarked |= set(open_outlets(flowsheet))
        solution = solve_flowsheet(flowsheet)
    except ChainflowError as problem:
        return True, remarked | words(str(problem))
    bought = plant_account(solution).bought
    named = {f"{name}.power" for name in bought.power}
    named |= {f"{name}.{port}" for name, _ in bought.heat for port in ("heat", "power")}
    named |= {stream.key for stream in solution.streams if not stream.targets}
    for remark in solution.remarks:
        named |= words(remark.text)
    return False, named


@pytest.mark.parametrize(
    "name",
    [pytest.param(n, marks=pytest.mark.slow) if n in LONG else n for n in NAMES],
)
def test_a_line_between_equipment(name):
    for place in entries(name, joining=True):
        line = text_of(name).split("\n")[place].strip().removeprefix("- ").split("#")[0]
        ports = [part.strip() for part in line.split("->")]
        refused, named = said(without(text_of(name), place))
        if refused:
            assert named & {*ports, *(port.split(".")[0] for port in ports)}, line
        elif not named & {*ports, *(port.split(".")[0] for port in ports)}:
            carried = numbers(solved(name))[ports[0]]
            assert sum(carried[:-2]) < 1e-9, line  # only what carries nothing goes unnoticed


@pytest.mark.parametrize("name", NAMES)
def test_any_other_line(name):
    """A knob, a piece of equipment or a heading that is missing is a fault that names it."""
    for place in entries(name, joining=False):
        line = text_of(name).split("\n")[place]
        word = re.match(r"\s*(?:- \{hold: )?([\w-]+)", line).group(1)
        if word in IDLE or line.startswith("    "):  # one of the settings below a name
            continue
        if "hold:" in line:
            knobs = re.findall(r"\$(\w+)", line)
            assert not knobs or set(knobs) & said(without(text_of(name), place))[1]
            continue
        with pytest.raises(FlowsheetFault) as caught:
            read_text(without(text_of(name), place))
        heading = not line.startswith(" ") or line.endswith(":")
        for fault in caught.value.faults:
            assert fault.line is not None
            assert heading or word in words(fault.text), (line, fault)


@pytest.mark.parametrize("name", NAMES)
def test_what_stands_idle_changes_no_number(name):
    for word in ("title", "basis"):
        text = re.sub(rf"(?m)^{word}: .*\n", "", text_of(name))
        assert text != text_of(name)
        assert numbers(solve_flowsheet(read_text(text))) == numbers(solved(name))
