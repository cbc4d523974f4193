import io
import re

import pytest

from chainflow.accounts.hazards import CLOSING_SENTENCE
from chainflow.report.plain import printable
from chainflow.report.printed import print_answer
from chainflow.report.results_printed import print_results
from tests.heat_plants import TWO_HEATERS
from tests.plants import BOUGHT, CYCLE, HYDROGEN, METHANE, solved


class Terminal(io.StringIO):
    """A stand-in for a terminal."""

    encoding = "utf-8"

    def isatty(self):
        return True


def printed(text):
    out = io.StringIO()
    print_answer(solved(text), out)
    return out.getvalue()


def test_the_short_answer_comes_first():
    text = printed(METHANE)
    places = [
        text.index(word)
        for word in (
            "Methane with a recycle",
            "solved in",
            "overall efficiency",
            "light -> power",
            "water returned",
            "CO2 returned",
            "bought",
            "delivered",
            "\nStreams",
            "\nPower, heat and light",
            "\nIdealisations",
            "\nCautions",
            CLOSING_SENTENCE,
        )
    ]
    assert places == sorted(places)


def test_a_named_rung_that_nothing_passes_is_told():
    text = printed(METHANE + "\nrungs:\n  drain: [blower.condensate]\n  kept: power kept\n")
    assert "left out of the rungs, nothing passes: drain, kept\n" in text


def test_the_basis_of_the_file_comes_first():
    assert "% HHV (" in printed(METHANE).split("overall efficiency")[1].split("\n")[0]
    assert "% LHV (" in printed(HYDROGEN).split("overall efficiency")[1].split("\n")[0]


def test_bought_heat_and_cold_are_named():
    text = printed(BOUGHT)
    assert "of heat for warm (heating" in text
    assert "of cooling for chill (cooling, 25.0 to -20.0 degC)" in text
    assert "of power for press" in text


def test_a_stream_line():
    (line,) = (
        row for row in printed(METHANE).splitlines() if "stack.hydrogen -> dryh.inlet" in row
    )
    words = line.split()
    assert "H2" in words
    assert "60.0" in words
    assert "12" in words
    assert words[-1] == "gas"


@pytest.mark.parametrize("text", [HYDROGEN, METHANE, CYCLE, BOUGHT])
def test_no_codes_for_terminals_into_a_pipe_and_nothing_wrapped(text):
    found = printed(text)
    assert "\x1b" not in found
    assert sum("sun.light -> field.light" in row for row in found.splitlines()) <= 1
    assert all(len(row) < 400 or "," in row for row in found.splitlines())


def test_a_terminal_gets_styles_unless_it_wants_none(monkeypatch):
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")
    out = Terminal()
    print_answer(solved(HYDROGEN), out)
    assert "\x1b[1m" in out.getvalue()
    for name, value in (("NO_COLOR", "1"), ("TERM", "dumb")):
        with monkeypatch.context() as inside:
            inside.setenv(name, value)
            out = Terminal()
            print_answer(solved(HYDROGEN), out)
            assert "\x1b" not in out.getvalue()


def test_a_narrow_terminal_keeps_names_whole(monkeypatch):
    monkeypatch.setenv("COLUMNS", "80")
    monkeypatch.setenv("NO_COLOR", "1")
    out = Terminal()
    print_answer(solved(METHANE), out)
    table = out.getvalue().partition("\nStreams\n")[2].partition("Power, heat")[0]
    assert "stack.hydrogen ->" in table
    assert "dryh.inlet" in table
    assert "kg/h" not in table
    assert all(len(row) <= 80 for row in table.splitlines())


def test_an_output_that_knows_ascii_only_gets_ascii():
    raw = io.BytesIO()
    out = io.TextIOWrapper(raw, encoding="ascii", errors="strict")
    text = HYDROGEN.replace("Hydrogen by the river", "W\u00e4rme \u2600")
    print_answer(solved(text), out)
    out.flush()
    assert raw.getvalue().decode("ascii").startswith("W?rme ?")


def test_control_characters_of_a_title_are_not_printed_raw():
    text = HYDROGEN.replace(
        "title: Hydrogen by the river (invented)", 'title: "red \\e[31m bell \\a \\u202e [bold]x"'
    )
    first = printed(text).splitlines()[0]
    assert first == "red \\x1b[31m bell \\x07 \\u202e [bold]x"


def test_lone_surrogates_can_be_printed():
    assert printable("a\ud800b") == "a\\ud800b"


def test_results_of_equipment_in_usual_units():
    """20 % of 800 W/m2 on 5000 m2 at 53 kWh/kg: 15.1 kg/h, 1.4 V and 39.39 kWh/kg aside."""
    text = """\
equipment:
  sun: {kind: sunlight, irradiance: 800 W/m2, aperture: 5000 m2}
  field: {kind: pv-field, efficiency: 20 %}
  water: {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  stack: {kind: electrolyser, energy_use: 53 kWh/kg, temperature: 60 degC, pressure: 1 bar}
  town: {kind: product}
lines:
  - sun -> field -> stack.power
  - water.draw -> stack.water
  - stack.hydrogen -> town
"""
    out = io.StringIO()
    print_results(solved(text), out)
    shown = [" ".join(line.split()) for line in out.getvalue().splitlines()]
    assert "Results of the equipment" in shown
    assert "hydrogen 15.09 kg/h" in shown  # 800 kW / 53 kWh/kg
    assert "direct current 800 kW" in shown


EXCHANGER = """
components: [N2]
equipment:
  flue: {kind: supply, composition: {N2: 1}, temperature: 180 degC, pressure: 2 bar, flow: 1 mol/s}
  cool: {kind: supply, composition: {N2: 1}, temperature: 60 degC, pressure: 2 bar, flow: 1 mol/s}
  bundle: {kind: heat-exchanger, approach: 30 K}
  out: {kind: vent}
lines: [flue -> bundle.hot, cool -> bundle.cold, bundle.hot_out -> out, bundle.cold_out -> out]
holds:
  - {hold: bundle.mean_difference_K, at: 40 K, by: bundle.approach, within: [1 K, 100 K]}
"""


def test_temperature_differences_stay_in_kelvin():
    """Equal flows keep one distance over the whole length, but for 1 % of heat capacity."""
    solution, out = solved(EXCHANGER), io.StringIO()
    print_answer(solution, out)
    print_results(solution, out)
    shown = out.getvalue()
    (hold,) = solution.holds
    assert hold.value == pytest.approx(40.0, rel=0.02)
    assert re.search(
        r"bundle\.mean_difference_K +40 K +40 K +bundle\.approach +(39|40)\.\d+ K\n", shown
    )
    assert re.search(r"  mean difference +40 K\n", shown)
    assert re.search(r"  pinch +\d+\.?\d* degC\n", shown)


def test_losses_that_are_only_round_off_are_not_named():
    """A heater destroys nothing: its network does, where heat falls by the approach."""
    shown = printed(TWO_HEATERS)
    (line,) = [row for row in shown.splitlines() if row.startswith("exergy lost in")]
    names = [part.split()[0] for part in line.removeprefix("exergy lost in").split(",")]
    assert names == ["field", "net"]
