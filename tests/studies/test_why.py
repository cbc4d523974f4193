"""Reasons: losses that add up, and the settings that matter, against solving again."""

import json

import pytest
from typer.testing import CliRunner

from chainflow import cli
from chainflow.accounts.efficiency import efficiency
from chainflow.accounts.worth import BASES
from chainflow.basis.faults import UsageFault
from chainflow.flowsheet.building import read_text
from chainflow.flowsheet.movable import lever, moved
from chainflow.solver.solve import solve_flowsheet
from chainflow.studies.why import rung_losses, why
from tests.flowsheets.shipped import FOLDER, NAMES, solved
from tests.heat_plants import TWO_HEATERS
from tests.plants import HYDROGEN
from tests.plants import solved as solved_text


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("basis", BASES)
def test_points_add_up(name, basis):
    found = efficiency(solved(name))
    lost = [rung.share for rung in rung_losses(found.rungs, basis)]
    assert sum(lost) + found.overall[basis] == pytest.approx(1.0, abs=1e-12)


def test_pieces_stand_largest_first():
    shares = [piece.share for piece in why(solved("hydrogen-store")).pieces]
    assert shares == sorted(shares, reverse=True)
    assert 0.0 < sum(shares) <= 1.0


def test_hydrogen_store_in_words():
    """The hand check of the file: 80 points in the field, 42 % of the rest by the engine."""
    first, second, *moving = why(solved("hydrogen-store")).sentences()
    assert first.startswith("Of 100 points LHV that go in, 80 are lost from light to power, ")
    assert second.startswith("Of the exergy that goes in, most is destroyed in field (")
    assert len(moving) == 3
    engine = "Raising $engine by 1 % (from 42 % to 42.42 %) raises the overall efficiency by 1 % "
    assert any(sentence.startswith(engine) for sentence in moving)
    assert any("$energy_use" in sentence and " lowers " in sentence for sentence in moving)


def test_a_step_is_what_solving_again_gives():
    solution = solved("methane-store")
    found = why(solution)
    before = found.efficiency
    for matter in found.settings[:3]:
        one = lever(solution.flowsheet, matter.setting.name)
        again = solve_flowsheet(moved(solution.flowsheet, one, matter.step))
        after = why(again).efficiency
        assert after / before - 1.0 == pytest.approx(matter.effect, rel=0.02)  # a whole per cent


def test_an_end_of_a_range_is_lowered():
    moving = {m.setting.name: m for m in why(solved("methane-store")).settings}
    assert moving["stack.rectifier"].step < 0.0 > moving["stack.rectifier"].effect


def test_an_approach_is_a_difference_and_no_temperature():
    """0.44 kW a K above the pinch: ten more cost 4.4 of 791 kW."""
    sentence = next(s for s in why(solved_text(TWO_HEATERS)).sentences() if "net.approach" in s)
    assert sentence == (
        "Raising net.approach by 10 K (from 10 K to 20 K) lowers the overall efficiency by 0.56 % "
        "(-0.11 points)."
    )


def test_fuel_is_explained_where_nothing_is_delivered():
    text = HYDROGEN.replace("  - fuel.rest -> town\n", "")
    assert why(solve_flowsheet(read_text(text))).of == "sunlight_to_fuel"


def test_no_efficiency_is_said():
    text = """
equipment:
  air: {kind: supply, composition: {N2: 1}, temperature: 25 degC, pressure: 1 bar, flow: 1 mol/s}
  out: {kind: vent}
lines: [air -> out]
"""
    with pytest.raises(UsageFault, match="there is no efficiency"):
        why(solve_flowsheet(read_text(text)))


def test_command(tmp_path):
    run, file = CliRunner(), str(FOLDER / "hydrogen-store.yaml")
    result = run.invoke(cli.app, ["solve", file, "--why"])
    assert result.exit_code == 0
    assert "\nWhy\n- Of 100 points LHV that go in" in result.stdout
    result = run.invoke(cli.app, ["solve", file, "--why", "--json", "-"])
    reasons = json.loads(result.stdout)["why"]
    assert reasons["sentences"][0].startswith("Of 100 points LHV")
    assert {"setting", "slope", "elasticity"} <= set(reasons["settings"][0])
    result = run.invoke(cli.app, ["solve", file, "--json", "-"])
    assert "why" not in json.loads(result.stdout)
