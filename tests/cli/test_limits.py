"""`chainflow limits` as it is typed."""

import json

import pytest
from typer.testing import CliRunner

from chainflow import cli


@pytest.fixture
def run():
    runner = CliRunner()

    def call(*arguments):
        return runner.invoke(cli.app, [str(argument) for argument in arguments])

    return call


def test_one_gap_is_printed(run):
    result = run("limits", "--gap", "2.1 eV")
    assert (result.exit_code, result.stderr) == (0, "")
    for words in (
        "Band gap 2.1 eV",
        "12.48 mA/cm2, light up to 590.4 nm",
        "15.3 % solar to hydrogen",
        "0.8 V overpotential: 2.029 V",
        "2.1 eV and the best behind it",
        "no hydrogen without a second absorber",
    ):
        assert words in result.stdout


def test_a_pair_is_printed(run):
    text = run("limits", "--gap", "1.7 eV", "--gap", "1.1 eV", "--overpotential", "500 mV").stdout
    assert "1.7 / 1.1 eV in series" in text
    assert "(lower limits)" in text
    assert "0.5 V overpotential: 1.729 V" in text


def test_json_to_stdout_is_all_there_is(run):
    found = json.loads(run("limits", "--gap", "2 eV", "--json", "-").stdout)
    assert found["splitting"][1]["overpotential_V"] == 0.8


def test_json_to_a_file_beside_the_answer(run, tmp_path):
    result = run("limits", "--gap", "2 eV", "--json", tmp_path / "a.json")
    assert "Solar to hydrogen" in result.stdout
    assert json.loads((tmp_path / "a.json").read_text())["absorbers"][0]["gap_eV"] == 2.0


def test_the_usage_says_what_is_typed(run):
    usage = run("limits", "--help").stdout.splitlines()[0]
    assert usage.endswith("limits --gap GAP [--gap GAP] [OPTIONS]")


@pytest.mark.parametrize(
    ("words", "says"),
    [
        ((), "no band gap is given: chainflow limits --gap '2.1 eV'"),
        (("--gap", "2.1"), "--gap '2.1' has no unit: wanted a band gap in eV, as '1.1 eV'"),
        (("--gap", "2.1", "eV"), "'eV' stands alone: put a number and its unit in quotes"),
        (("--gap", "2.1 V"), "--gap '2.1 V' is a voltage, wanted a band gap in eV"),
        (("--gap", "9 eV"), "out of range: wanted at least 0.31 eV, at most 4.4 eV"),
        (("--gap", "2 eV", "--gap", "2 eV"), "the two band gaps are the same"),
        (("--gap", "2 eV", "--overpotential", "1 eV"), "--overpotential '1 eV' is an energy"),
        (("--gap", "2 eV", "--overpotential", "-1 V"), "wanted at least 0 V, at most 3 V"),
    ],
)
def test_wrong_usage_is_2_and_one_sentence(run, words, says):
    result = run("limits", *words)
    assert result.exit_code == 2
    assert result.stdout == ""
    assert says in result.stderr
    assert len(result.stderr.splitlines()) == 1
