"""Routes side by side: the same sunlight, one basis, points that add up, files that fail."""

import csv
import io
import json

import pytest
from typer.testing import CliRunner

from chainflow import cli
from chainflow.basis.faults import UsageFault
from chainflow.report.compared import comparison_csv, comparison_document, print_comparison
from chainflow.studies.compare import compare
from chainflow.studies.figures import figures
from chainflow.studies.stages import stages
from tests.flowsheets.shipped import FOLDER, NAMES, solved
from tests.heat_plants import TWO_HEATERS
from tests.plants import HYDROGEN, METHANE, PARTED

KWH = 3.6e6
STORE, GAS, BATTERY = (
    FOLDER / f"{name}.yaml" for name in ("hydrogen-store", "methane-store", "battery")
)


@pytest.fixture(scope="module")
def three():
    return compare([STORE, GAS, BATTERY])


def value(found, key, place, group=None):
    (row,) = [r for r in figures(found) if r.key == key and group in (None, r.group)]
    return row.values[place]


@pytest.mark.parametrize("name", [n for n in NAMES if not n.startswith("methane-cycle-")])
@pytest.mark.parametrize("basis", ["LHV", "HHV", "exergy"])
def test_stages_and_what_is_left_add_up_to_one(name, basis):
    from chainflow.accounts.plant import plant_account

    solution = solved(name)
    found = stages(solution, plant_account(solution), basis)
    assert sum(found.lost.values()) + found.out == pytest.approx(1.0, abs=1e-12)


def test_points_add_up_to_the_difference(three):
    told = list(three.differences())
    assert [other.name for _, other, _ in told] == ["methane-store", "battery"]
    for _, _, one in told:
        assert sum(one.gained.values()) == pytest.approx(one.second - one.first, abs=1e-12)
    assert [one.of for _, _, one in told] == ["what is kept", "power"]


def test_hydrogen_against_methane_by_hand(three):
    """Synthesis keeps 802.3 / (4 x 241.8) = 82.95 % of the hydrogen's LHV and loses 17 %."""
    _, _, one = next(three.differences())
    hydrogen = 0.1255  # of the light: methane-store's hand check, 2.51 MW of 20
    circulation = 0.0030  # membrane and circulator: 52 and 7 kW of 20 MW
    wanted = (1.0 - 802.3 / (4 * 241.8)) * hydrogen + circulation
    assert -one.gained["synthesis"] == pytest.approx(wanted, rel=0.03)
    # compression: 156 kW less 28 kW of 20 MW, the hand checks of both files
    assert one.gained["compression and storage"] == pytest.approx((156 - 28) / 20000, rel=0.05)


def test_energy_densities_by_hand(three):
    """33.33 kWh/kg of hydrogen; 23.3 kg/m3 at 350 bar (reference equation of state)."""
    assert value(three, "energy_J_kg", 0) / KWH == pytest.approx(33.33, rel=1e-3)
    assert value(three, "energy_J_m3", 0) / KWH == pytest.approx(33.33 * 23.3, rel=0.01)
    assert value(three, "volume_m3", 0) == pytest.approx(1e5 / (33.33 * 23.3), rel=0.01)
    # bare cells, 182.5 Wh/kg and 475 Wh/L, nine tenths of them used
    assert value(three, "mass_kg", 2) == pytest.approx(1e5 / (0.1825 * 0.9), rel=1e-6)
    assert value(three, "volume_m3", 2) == pytest.approx(1e5 / (475 * 0.9), rel=1e-6)


def test_with_vessel_by_hand(three):
    """Bottles of 5 % by mass and 80 % by volume, cells of 67 and 33 % of their housing."""
    for key, shares in (("mass", (0.05, 0.67)), ("volume", (0.80, 0.33))):
        unit = {"mass": "kg", "volume": "m3"}[key]
        for place, share in zip((0, 2), shares, strict=True):
            bare = value(three, f"{key}_{unit}", place)
            assert value(three, f"{key}_with_vessel_{unit}", place) == pytest.approx(bare / share)
    assert value(three, "vessel", 0) == "hydrogen-350"
    assert value(three, "vessel", 2) == "housing"


def test_size_for_another_energy(three):
    other = compare([STORE], energy=1e3 * KWH)
    assert value(other, "mass_kg", 0) == pytest.approx(value(three, "mass_kg", 0) / 100)


def test_upper_heating_value_counts_in_the_store_too(three):
    found = compare([STORE], basis="HHV")
    ratio = value(found, "energy_J_kg", 0) / value(three, "energy_J_kg", 0)
    assert ratio == pytest.approx(285.83 / 241.82, rel=1e-4)  # of hydrogen


def test_same_file_twice():
    found = compare([STORE, STORE])
    assert [route.name for route in found.routes] == ["hydrogen-store", "hydrogen-store (2)"]
    ((_, _, one),) = found.differences()
    assert set(one.gained.values()) == {0.0}
    assert "no stage differs" in comparison_document(found)["differences"][0]["text"]


def test_one_file_only():
    found = compare([STORE])
    assert list(found.differences()) == []
    assert (found.exit_code, found.notes) == (0, ())


def test_amounts_are_scaled_to_the_first_sunlight(tmp_path, three):
    half = tmp_path / "half.yaml"
    half.write_text(GAS.read_text().replace("aperture: 25000 m2", "aperture: 12500 m2"))
    found = compare([STORE, half])
    assert found.scales["half"] == pytest.approx(2.0, rel=1e-12)
    assert "the sunlight differs" in found.notes[0]
    assert value(found, "CO2_kg_s", 1) == pytest.approx(value(three, "CO2_kg_s", 1), rel=1e-6)
    assert value(found, "needed_W", 1) == pytest.approx(value(three, "needed_W", 1), rel=1e-6)


def test_differing_basis(tmp_path):
    one, other = tmp_path / "one.yaml", tmp_path / "other.yaml"
    one.write_text(HYDROGEN)
    other.write_text(METHANE)  # HHV
    found = compare([one, other])
    assert found.basis == "LHV"
    assert "differ in their basis" in found.notes[0]
    assert compare([one, other], basis="exergy").basis == "exergy"
    assert compare([other]).basis == "HHV"
    with pytest.raises(UsageFault, match="wanted LHV, HHV, exergy"):
        compare([one], basis="lhv")


def test_settings_go_where_they_are_known(three):
    found = compare([STORE, GAS], {"field": "10 %"})
    assert value(found, "light -> power", 0) == pytest.approx(0.10)
    assert value(found, "light -> power", 1) == value(three, "light -> power", 1)
    assert found.notes == ("field is set in hydrogen-store only: methane-store has no such name",)
    with pytest.raises(UsageFault, match=r"none of the flowsheets has it .did you mean 'field'"):
        compare([STORE, GAS], {"fild": "10 %"})
    with pytest.raises(UsageFault, match="hydrogen-store"):
        compare([STORE, GAS], {"field": "10 bar"})


@pytest.fixture
def failing(tmp_path):
    """A file that is wrong, one without a steady state, and one that is not there."""
    wrong, short = tmp_path / "wrong.yaml", tmp_path / "short.yaml"
    wrong.write_text(HYDROGEN.replace("kind: pump", "kind: pmup"))
    short.write_text(
        HYDROGEN.replace("aperture: 10000 m2", "aperture: 1 m2")
        .replace("energy_use: 52 kWh/kg,", "energy_use: 52 kWh/kg, hydrogen: 100 kg/h,")
        .replace("board.rest -> stack.power", "board.stack -> stack.power")
    )
    return wrong, short, tmp_path / "missing.yaml"


def test_one_that_fails_does_not_stop_the_others(failing):
    wrong, short, missing = failing
    found = compare([wrong, STORE, short, missing])
    assert [route.solved for route in found.routes] == [False, True, False, False]
    assert found.exit_code == 1
    assert compare([STORE, short, wrong]).exit_code == 3
    assert compare([missing, STORE]).exit_code == 4
    entries = comparison_document(found)["routes"]
    assert entries[0]["problem"]["code"] == "unknown-kind"
    assert entries[2]["problem"]["code"] == "short-of-power"
    assert entries[1]["efficiency"]["sunlight_to_fuel"] > 0.1
    assert "efficiency" not in entries[0]


def test_all_fail(failing):
    found = compare(failing)
    out = io.StringIO()
    print_comparison(found, out)
    assert out.getvalue().count("not solved") >= 3
    assert (found.exit_code, found.sunlight) == (1, None)


@pytest.mark.parametrize("width", [60, 80, 120, 200])
def test_table_fits_the_width(width, three, monkeypatch):
    class Terminal(io.StringIO):
        def isatty(self):
            return True

    monkeypatch.setenv("COLUMNS", str(width))
    monkeypatch.setenv("NO_COLOR", "1")
    out = Terminal()
    print_comparison(three, out)
    table = out.getvalue().split("Differences")[0]
    assert max(map(len, table.splitlines())) <= width
    for route in three.routes:
        assert table.count(route.name) == 1
    assert table.count("sunlight to power") == (2 if width == 60 else 1)


def test_csv_has_a_column_for_each(three):
    rows = list(csv.reader(io.StringIO(comparison_csv(three))))
    head = ["group", "figure", "unit", "hydrogen-store", "methane-store", "battery"]
    assert rows[0] == head
    assert {len(row) for row in rows} == {len(head)}
    by_key = {row[1]: row for row in rows}
    assert float(by_key["sunlight_to_power"][3]) == pytest.approx(0.0513, abs=1e-4)
    assert by_key["sunlight_to_power"][4] == ""
    assert by_key["pressure_Pa"][2:5] == ["Pa", "35000000.0", "25000000.0"]


# --- the command ---------------------------------------------------------------------------------


def run(*arguments):
    return CliRunner().invoke(cli.app, ["compare", *map(str, arguments)])


def test_command_prints_the_table():
    result = run(STORE, GAS)
    assert (result.exit_code, result.stderr) == (0, "")
    assert "methane-store against hydrogen-store, sunlight to what is kept" in result.stdout
    assert "Store for 100 MWh" in result.stdout


def test_command_with_a_failing_file(failing):
    wrong, short, _ = failing
    result = run(STORE, short, wrong)
    assert result.exit_code == 3
    assert "hydrogen-store" in result.stdout
    assert "short of" in result.stdout
    assert "unknown" in result.stderr or "pmup" in result.stderr


def test_command_writes_json_and_csv(tmp_path):
    result = run(STORE, "--json", "-", "--csv", tmp_path / "c.csv", "--energy", "1 GWh")
    found = json.loads(result.stdout)
    assert (found["format"], found["energy_J"]) == (1, 3.6e12)
    assert found["routes"][0]["store"]["content"] == "H2"
    assert (tmp_path / "c.csv").read_text().startswith("group,figure,unit,hydrogen-store")


@pytest.mark.parametrize(
    ("more", "code", "said"),
    [
        (("--energy", "100 kg"), 2, "--energy"),
        (("--energy", "-1 MWh"), 2, "--energy"),
        (("--basis", "MHV"), 2, "basis"),
        (("--set", "nothing=1"), 2, "none of the flowsheets"),
        (("--csv", "/nowhere/c.csv"), 4, "no directory"),
        (("--csv", STORE), 2, "one of the flowsheets"),
        (("--json", STORE), 2, "the flowsheet itself"),
    ],
)
def test_wrong_usage(more, code, said):
    before = STORE.read_text()
    result = run(STORE, *more)
    assert result.exit_code == code
    assert said in result.stderr
    assert STORE.read_text() == before


def test_no_file_is_wrong_usage():
    assert run().exit_code == 2


# --- heat and power from elsewhere --------------------------------------------------------------


def test_electric_heat_of_a_network_is_no_heat_of_its_own(tmp_path):
    """60 of 620 kW needed are short in the problem of 1978, here at 0.1464 of its size: 8.8 kW."""
    file = tmp_path / "heaters.yaml"
    file.write_text(TWO_HEATERS, encoding="utf-8")
    found = compare([file])
    electric, own = (value(found, key, 0, "heat") for key in ("electric_W", "recovered_W"))
    assert electric == pytest.approx(60e3 * 0.1464, rel=0.01)
    assert own + electric == pytest.approx(value(found, "needed_W", 0, "heat"), rel=1e-12)


def test_every_way_of_meeting_heat_is_told():
    found = compare([FOLDER / "hydrogen-liquid.yaml"])
    ways = ("recovered_W", "electric_W", "ambient_W")
    met = sum(value(found, way, 0, "heat") for way in ways)
    assert met == pytest.approx(value(found, "needed_W", 0, "heat"), rel=1e-12)


def test_power_of_a_grid_of_its_own_counts_once(tmp_path):
    """A compressor on a second grid is the plant with a compressor on bought power."""
    press = "  press: {kind: compressor, pressure: 200 bar, aftercool: 35 degC}\n"
    text = PARTED.replace("  town:", press + "  town:").replace(
        "kept -> town", "kept -> press -> town"
    )
    grid = text.replace("equipment:\n", "equipment:\n  other: {kind: grid}\n")
    grid = grid.replace("lines:\n", "lines:\n  - other.power -> press.power\n")
    files = [tmp_path / "plain.yaml", tmp_path / "grid.yaml"]
    for file, words in zip(files, (text, grid), strict=True):
        file.write_text(words, encoding="utf-8")
    found = compare(files)
    for stage in ("electrolysis", "synthesis", "compression and storage"):
        plain, other = (value(found, stage, place, "lost") for place in (0, 1))
        assert other == pytest.approx(plain, rel=1e-9)


# --- costs -----------------------------------------------------------------------------------

PRICED = """
costs:
  currency: {currency}
  interest: 0 %
  lifetime: 20 a
  hours: 2000 h
  equipment:
    field: {{size: field.power.rate, purchase: 1000 {currency}/kW}}
"""


@pytest.fixture(scope="module")
def priced(tmp_path_factory):
    """Two of one size in two currencies, a third ten times as large, a fourth without costs."""
    folder = tmp_path_factory.mktemp("priced")
    texts = {
        "crowns": METHANE + PRICED.format(currency="crowns"),
        "marks": METHANE + PRICED.format(currency="marks"),
        "large": METHANE.replace("6000 m2", "60000 m2") + PRICED.format(currency="crowns"),
        "free": METHANE,
    }
    for name, text in texts.items():
        (folder / f"{name}.yaml").write_text(text, encoding="utf-8")
    return {name: folder / f"{name}.yaml" for name in texts}


def test_costs_side_by_side_by_hand(priced):
    """850 W/m2 x 6000 m2 x 20 % = 1020 kW at 1000 each; 1/20 of it a year, over 2000 h."""
    found = compare([priced["crowns"], priced["large"], priced["free"]], basis="LHV")
    assert "what is installed in large is scaled in proportion" in found.notes[1]
    assert value(found, "installed", 0) == pytest.approx(1.02e6, rel=1e-12)
    assert value(found, "installed", 1) == pytest.approx(1.02e6, rel=1e-9)  # on the same sunlight
    assert value(found, "installed", 2) is None
    sold = found.routes[0].account.sold.material
    fuel = sum(float(stream.lhv) for _, stream in sold) / 1e3 * 2000  # [kWh] a year
    for place in (0, 1):
        assert value(found, "fuel_per_kWh", place) == pytest.approx(1.02e6 / 20 / fuel, rel=1e-9)
    assert value(found, "fuel_per_kWh", 2) is None
    assert [value(found, "currency", place) for place in range(3)] == ["crowns", "crowns", None]


def test_costs_on_the_upper_heating_value(priced):
    lower, upper = (compare([priced["crowns"]], basis=basis) for basis in ("LHV", "HHV"))
    ratio = value(lower, "fuel_per_kWh", 0) / value(upper, "fuel_per_kWh", 0)
    assert ratio == pytest.approx(890.6 / 802.3, rel=2e-3)  # methane, ISO 6976


def test_two_currencies_are_named_and_nothing_is_exchanged(priced, capsys):
    found = compare([priced["crowns"], priced["marks"]])
    assert [value(found, "currency", place) for place in (0, 1)] == ["crowns", "marks"]
    assert value(found, "installed", 0) == value(found, "installed", 1)
    print_comparison(found)
    (line,) = [row for row in capsys.readouterr().out.splitlines() if row.startswith("currency")]
    assert line.split() == ["currency", "crowns", "marks"]
    (note,) = found.notes
    assert note.startswith("the costs are in crowns, marks: nothing is exchanged")
    entries = comparison_document(found)["routes"]
    assert [entry["cost"]["currency"] for entry in entries] == ["crowns", "marks"]
