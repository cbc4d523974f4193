"""Every command, every exit code; run in this process."""

import json
import sys

import pytest
from typer.testing import CliRunner

from chainflow import cli
from tests.plants import HYDROGEN, METHANE

SHORT = HYDROGEN.replace("aperture: 10000 m2", "aperture: 1 m2").replace(
    "energy_use: 52 kWh/kg,", "energy_use: 52 kWh/kg, hydrogen: 100 kg/h,"
).replace("board.rest -> stack.power", "board.stack -> stack.power")  # fmt: skip


@pytest.fixture
def run():
    runner = CliRunner()

    def call(*arguments):
        return runner.invoke(cli.app, [str(argument) for argument in arguments])

    return call


@pytest.fixture
def file(tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text(HYDROGEN)
    return path


def test_solve_prints_the_answer(run, file):
    result = run("solve", file)
    assert result.exit_code == 0
    assert "overall efficiency" in result.stdout
    assert result.stderr == ""


def test_quiet_prints_nothing(run, file):
    result = run("solve", file, "--quiet")
    assert (result.exit_code, result.stdout, result.stderr) == (0, "", "")


def test_json_to_stdout_is_all_there_is(run, file):
    result = run("solve", file, "--json", "-")
    assert result.exit_code == 0
    assert json.loads(result.stdout)["solved"] is True


def test_json_to_a_file_beside_the_answer(run, file, tmp_path):
    result = run("solve", file, "--json", tmp_path / "a.json")
    assert result.exit_code == 0
    assert "overall efficiency" in result.stdout
    assert json.loads((tmp_path / "a.json").read_text())["solved"] is True


def test_csv(run, file, tmp_path):
    assert run("solve", file, "--csv", tmp_path / "out", "--quiet").exit_code == 0
    names = sorted(path.name for path in (tmp_path / "out").iterdir())
    assert names == ["duties.csv", "equipment.csv", "plant.csv", "streams.csv"]


def test_set_changes_a_knob_and_a_setting(run, file):
    plain = json.loads(run("solve", file, "--json", "-").stdout)
    changed = json.loads(
        run(
            "solve", file, "--json", "-", "--set", "sun=400 W/m2",
            "--set", "stack.energy_use=60 kWh/kg",
        ).stdout
    )  # fmt: skip
    assert changed["plant"]["sunlight_W"] == plain["plant"]["sunlight_W"] / 2
    made, before = (
        found["equipment"]["stack"]["results"]["hydrogen_mol_s"]
        / found["streams"]["board.rest"]["rate_W"]
        for found in (changed, plain)
    )
    assert made / before == pytest.approx(52 / 60, rel=1e-12)


# --- 1: the file is wrong ------------------------------------------------------------------------


@pytest.fixture
def wrong(tmp_path):
    path = tmp_path / "wrong.yaml"
    text = HYDROGEN.replace("efficiency: 20 %", "efficiency: 20 bar")
    path.write_text(text.replace("kind: product", "kind: produkt"))
    return path


def test_a_wrong_file_is_1_with_every_fault_and_its_place(run, wrong):
    result = run("solve", wrong)
    assert result.exit_code == 1
    assert result.stdout == ""
    lines = result.stderr.splitlines()
    assert len(lines) == 2
    assert all(line.startswith(f"chainflow: {wrong}:") for line in lines)
    assert "product" in result.stderr


def test_a_wrong_file_still_writes_the_document(run, wrong, tmp_path):
    result = run("solve", wrong, "--json", tmp_path / "a.json", "--csv", tmp_path / "out")
    assert result.exit_code == 1
    found = json.loads((tmp_path / "a.json").read_text())
    assert found["solved"] is False
    assert found["problem"] is None
    assert len(found["faults"]) == 2
    assert set(found["faults"][0]) == {"code", "line", "column", "text"}
    assert not (tmp_path / "out").exists()


def test_a_wrong_file_with_json_to_stdout_keeps_stdout_clean(run, wrong):
    result = run("solve", wrong, "--json", "-")
    assert result.exit_code == 1
    assert len(json.loads(result.stdout)["faults"]) == 2


def test_check_finds_the_same_faults(run, wrong):
    assert run("check", wrong).stderr == run("solve", wrong).stderr
    assert run("check", wrong).exit_code == 1


# --- 2: wrong usage ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "arguments",
    [
        ["--set", "sun"],
        ["--set", "=5"],
        ["--set", "sum=800 W/m2"],
        ["--set", "sun=800"],
        ["--set", "stack.temperatur=60 degC"],
        ["--set", "stac.temperature=60 degC"],
        ["--bogus"],
        ["second-file"],
    ],
)
def test_wrong_usage_is_2_and_writes_nothing(run, file, tmp_path, arguments):
    result = run("solve", file, *arguments, "--json", tmp_path / "a.json")
    assert result.exit_code == 2
    assert result.stdout == ""
    assert result.stderr
    assert not (tmp_path / "a.json").exists()


def test_the_flowsheet_itself_is_not_overwritten(run, file):
    result = run("solve", file, "--json", file.parent / "." / file.name)
    assert result.exit_code == 2
    assert "is the flowsheet itself" in result.stderr
    assert file.read_text() == HYDROGEN


def test_no_file_is_2(run):
    assert run("solve").exit_code == 2


def test_an_unknown_command_is_2(run):
    assert run("slove").exit_code == 2


def test_near_misses_are_named(run, file):
    assert "did you mean 'sun'" in run("solve", file, "--set", "sum=800 W/m2").stderr


# --- 3: no steady state --------------------------------------------------------------------------


def test_short_of_power_is_3_and_writes_the_document(run, tmp_path):
    path = tmp_path / "short.yaml"
    path.write_text(SHORT)
    result = run("solve", path, "--json", tmp_path / "a.json", "--csv", tmp_path / "out")
    assert result.exit_code == 3
    assert "board" in result.stderr
    found = json.loads((tmp_path / "a.json").read_text())
    assert found["solved"] is False
    assert found["faults"] == []
    assert found["flowsheet"]["title"] == "Hydrogen by the river (invented)"
    assert set(found["problem"]) == {"code", "text", "details"}
    assert found["problem"]["text"] in result.stderr
    assert not (tmp_path / "out").exists()
    first, *_, last = result.stderr.splitlines()
    assert first.startswith("chainflow: not linked, so leaving the plant: ")
    assert last == f"chainflow: {found['problem']['text']}"


# --- 4: files that cannot be read or written -----------------------------------------------------


def test_a_missing_file_is_4(run, tmp_path):
    result = run("solve", tmp_path / "none.yaml", "--json", tmp_path / "a.json")
    assert result.exit_code == 4
    assert "none.yaml" in result.stderr
    assert not (tmp_path / "a.json").exists()


def test_a_directory_for_a_file_is_4(run, tmp_path):
    assert run("solve", tmp_path).exit_code == 4
    assert run("check", tmp_path / "none.yaml").exit_code == 4


def test_outputs_are_checked_before_anything_is_solved(run, file, tmp_path, monkeypatch):
    def never(*_):
        raise AssertionError("solved although the output cannot be written")

    monkeypatch.setattr("chainflow.solver.solve.solve_flowsheet", never)
    assert run("solve", file, "--json", tmp_path / "none" / "a.json").exit_code == 4
    assert run("solve", file, "--json", tmp_path).exit_code == 4
    assert run("solve", file, "--csv", file).exit_code == 4


# --- 70 and 130 ----------------------------------------------------------------------------------


def broken(problem):
    def call(*_):
        raise problem

    return call


def test_an_unexpected_exception_is_70_in_one_line(run, file, monkeypatch):
    monkeypatch.delenv("CHAINFLOW_DEBUG", raising=False)
    problem = ZeroDivisionError("float division\nby zero")
    monkeypatch.setattr("chainflow.solver.solve.solve_flowsheet", broken(problem))
    result = run("solve", file)
    assert result.exit_code == 70
    assert len(result.stderr.splitlines()) == 1
    assert "a bug of ours (please report): ZeroDivisionError: float division" in result.stderr


def test_debug_prints_where_it_happened(run, file, monkeypatch):
    monkeypatch.setenv("CHAINFLOW_DEBUG", "1")
    monkeypatch.setattr("chainflow.solver.solve.solve_flowsheet", broken(KeyError("x")))
    result = run("solve", file)
    assert result.exit_code == 70
    assert "Traceback" in result.stderr


def test_interrupted_is_130(run, file, monkeypatch):
    monkeypatch.setattr("chainflow.solver.solve.solve_flowsheet", broken(KeyboardInterrupt()))
    result = run("solve", file)
    assert (result.exit_code, result.stdout) == (130, "")
    assert "interrupted" in result.stderr


def test_interrupted_outside_a_command_is_130_too(monkeypatch):
    monkeypatch.setattr(cli, "app", broken(KeyboardInterrupt()))
    with pytest.raises(SystemExit) as left:
        cli.main()
    assert left.value.code == 130


# --- the other commands --------------------------------------------------------------------------


def test_version(run):
    from chainflow import __version__

    assert run("--version").stdout == f"chainflow {__version__}\n"


def test_help_names_every_command(run):
    text = run("--help").stdout
    assert all(word in text for word in ("solve", "check", "kinds", "schema", "--version"))
    assert all(word in run("solve", "--help").stdout for word in ("--json", "--csv", "--set"))


def test_check_says_who_sets_each_amount(run, tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text(METHANE)
    result = run("check", path)
    assert result.exit_code == 0
    rows = {row.split("  ")[0]: row.split() for row in result.stdout.splitlines()}
    assert rows["field.power -> board.supply"][-2:] == ["field.power", "(offers)"]
    assert rows["water.draw -> feed.inlet"][-4:] == ["stack.water", "(calls)", "through", "feed"]
    assert rows["board.feed -> feed.power"][-2:] == ["feed.power", "(calls)"]
    assert "Loop 1:" in result.stdout
    assert "board.rest" in result.stdout.split("Closed by moving:")[1]


def test_check_without_loops(run, tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text("""
equipment:
  gas:  {kind: supply, composition: {CH4: 1}, temperature: 25 degC, pressure: 2 bar, flow: 1 mol/s}
  town: {kind: product}
lines:
  - gas -> town
""")
    assert "No loops" in run("check", path).stdout


def test_kinds(run):
    listed = run("kinds").stdout.splitlines()
    assert len(listed) >= 27
    assert any(line.startswith("electrolyser ") for line in listed)
    assert "energy_use" in run("kinds", "electrolyser").stdout
    wrong = run("kinds", "reaktor")
    assert wrong.exit_code == 2
    assert "did you mean 'reactor'" in wrong.stderr


def test_schema_is_json(run):
    result = run("schema")
    assert result.exit_code == 0
    assert "equipment" in json.loads(result.stdout)["properties"]


def test_solve_does_not_import_pandas(run, file, monkeypatch):
    monkeypatch.setitem(sys.modules, "pandas", None)  # an import would fail
    assert run("solve", file).exit_code == 0


def test_a_weather_file_that_is_not_there(run, file):
    text = HYDROGEN.replace("irradiance: $sun", "weather: hill.epw")
    assert text != HYDROGEN
    file.write_text(text)
    result = run("solve", file)
    assert result.exit_code == 4
    assert result.stdout == ""
    said = "sun: cannot read the weather file 'hill.epw': No such file or directory"
    assert f":{text[: text.index('weather: hill')].count(chr(10)) + 1}:3: {said}" in result.stderr
    file.write_text(text.replace("kind: pump, ", "kind: pump, stages: 3, "))
    result = run("solve", file)  # with everything else that is wrong
    assert result.exit_code == 1
    assert said in result.stderr
    assert "there is no setting 'stages'" in result.stderr


LIT = """
equipment:
  sun: {kind: sunlight, irradiance: 800 W/m2, aperture: 10 m2}
  water: {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1 bar}
  device:
    kind: photoelectrode
    band_gap: 2.0 eV
    %s
  fuel: {kind: product}
lines:
  - sun.light -> device.light
  - water.draw -> device.water
  - device.hydrogen -> fuel
"""
SHAPE = "shape: {onset: 0.5 V, half_wave: 0.8 V}"


@pytest.mark.parametrize(
    "settings",
    [
        "curve: none.csv",
        f"quantum_efficiency: none.csv\n    {SHAPE}",
        f"{SHAPE}\n    cell: {{gaps: [1.1 eV], curve: none.csv}}",
    ],
    ids=["electrode", "quantum efficiency", "cell"],
)
def test_a_curve_that_is_not_there(run, file, settings):
    """As a weather file that is not there: a file cannot be read, 4."""
    file.write_text(LIT % settings)
    result = run("solve", file)
    assert result.exit_code == 4
    said = "device: cannot read the curve 'none.csv': No such file or directory"
    assert f":5:3: {said}" in result.stderr
    assert len(result.stderr.splitlines()) == 1


HUNG = """
equipment:
  sun: {kind: sunlight, irradiance: 800 W/m2, aperture: 1000 m2}
  field: {kind: pv-field, model: one-diode, coupling: {load: stack, cells: 300}}
  water: {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 2 bar}
  stack:
    {kind: electrolyser, model: measured, curve: none.csv, cell_area: 1 m2, pressure: 1 bar,
     temperature: 60 degC}
  fuel: {kind: product}
lines:
  - sun.light -> field.light
  - field.power -> stack.power
  - water.draw -> stack.water
  - stack.hydrogen -> fuel
"""


def test_a_field_that_hangs_on_a_stack_whose_curve_is_not_there(run, file):
    """That the stack could not be made is no second fault."""
    file.write_text(HUNG)
    result = run("check", file)
    assert result.exit_code == 4
    assert result.stderr.count("\n") == 1
    assert ":6:3: stack: cannot read the curve 'none.csv'" in result.stderr


def test_a_stack_s_curve_that_is_not_there(run, file):
    """What hangs on the missing piece, as the call of its pump, is no fault of its own."""
    stated = "energy_use: 52 kWh/kg,"
    assert stated in HYDROGEN
    file.write_text(HYDROGEN.replace(stated, "model: measured, curve: none.csv, cell_area: 1 m2,"))
    result = run("solve", file)
    assert result.exit_code == 4
    assert "stack: cannot read the curve 'none.csv': No such file" in result.stderr
    assert len(result.stderr.splitlines()) == 1


def test_why_without_an_efficiency_keeps_the_answer(run, file, tmp_path):
    written = tmp_path / "night.json"
    result = run("solve", file, "--set", "sun=0 W/m2", "--why", "--json", written)
    assert result.exit_code == 0
    assert "--why: nothing useful comes out" in result.stderr
    assert "Streams" in result.stdout
    assert json.loads(written.read_text())["solved"] is True


def test_compare_says_places_as_an_editor_follows_them(run, file, tmp_path):
    wrong, missing = tmp_path / "wrong.yaml", tmp_path / "missing.yaml"
    wrong.write_text("- a list\n")
    result = run("compare", wrong, missing, file)
    assert result.exit_code == 1
    assert f"chainflow: {wrong}:1:1: wanted a map" in result.stderr
    assert f"chainflow: cannot read '{missing}': No such file" in result.stderr
