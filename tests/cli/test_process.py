"""What only a process of its own can show: pipes, signals, encodings, time and imports."""

import os
import subprocess
import sys

import pytest

from tests.plants import HYDROGEN

COMMAND = [sys.executable, "-m", "chainflow"]


@pytest.fixture
def file(tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text(HYDROGEN)
    return path


def run(*arguments, **environment):
    return subprocess.run(
        [*COMMAND, *map(str, arguments)],
        capture_output=True,
        text=True,
        env={**os.environ, **environment},
        timeout=60,
    )


def test_a_module_run_solves_into_a_pipe_without_codes_for_terminals(file):
    result = run("solve", file, FORCE_COLOR="")
    assert result.returncode == 0
    assert "\x1b" not in result.stdout
    assert result.stderr == ""


def test_a_reader_that_goes_away_is_no_error(file):
    with subprocess.Popen(
        [*COMMAND, "solve", str(file)], stdout=subprocess.PIPE, stderr=subprocess.PIPE
    ) as process:
        process.stdout.close()
        errors = process.stderr.read()
    assert (process.returncode, errors) == (0, b"")


def test_an_output_that_is_full_is_4(file):
    with open("/dev/full", "w") as full:
        result = subprocess.run(
            [*COMMAND, "solve", str(file)], stdout=full, stderr=subprocess.PIPE, timeout=60
        )
    assert result.returncode == 4
    assert result.stderr == (
        b"chainflow: cannot read or write the output: No space left on device\n"
    )


def test_a_closed_output_is_no_bug(file):
    command = " ".join([*COMMAND, "solve", str(file), ">&-", "2>&-"])
    assert subprocess.run(["sh", "-c", command], timeout=60).returncode == 0


def test_a_title_that_the_output_cannot_show(tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text(HYDROGEN.replace("by the river", "\u00fcber alles \U0001f31e"), "utf-8")
    result = run("solve", path, PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert result.returncode == 0
    assert result.stdout.startswith("Hydrogen ?ber alles ?")


def test_the_help_takes_less_than_0_4_s_of_cpu():
    code = "import sys, time; sys.argv = ['chainflow', '--help']\n"
    code += "from chainflow.cli import app\n"
    code += "try: app()\n"
    code += "finally: print(time.process_time(), file=sys.stderr)"
    result = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, timeout=60
    )
    assert float(result.stderr.splitlines()[-1]) < 0.4


@pytest.mark.parametrize("code", ["import chainflow", "import chainflow.cli"])
def test_the_front_is_cheap_to_import(code):
    heavy = (
        "cantera",
        "numpy",
        "scipy",
        "pandas",
        "pint",
        "networkx",
        "ruamel",
        "rich",
        "pydantic",
    )
    code += f"; import sys; print([name for name in {heavy} if name in sys.modules])"
    result = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, timeout=60
    )
    assert result.stdout == "[]\n"


CLEAR = """
equipment:
  sun: {kind: sunlight, place: {latitude: 46 deg, longitude: 9 deg}, aperture: 1000 m2}
  field: {kind: pv-field, efficiency: 20 %}
  out: {kind: product}
lines:
  - sun.light -> field.light
  - field.power -> out
"""


@pytest.mark.parametrize("shown", ["", "default", "error::DeprecationWarning:pvlib.tools"])
def test_names_that_libraries_give_up_are_no_word_to_the_user(file, shown):
    """Whatever warnings he has Python show; pvlib warns of pandas when it computes the sky."""
    file.write_text(CLEAR)
    result = run("solve", file, PYTHONWARNINGS=shown)
    assert (result.returncode, result.stderr) == (0, "")
