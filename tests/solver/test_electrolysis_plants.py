"""Whole plants with electrolysers by model and with fuel cells: solved, closed, held."""

import pytest

from chainflow.basis.faults import FlowsheetFault
from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.solver.solve import solve_flowsheet

PLANT = """
components: [H2, O2, N2, H2O, CO, CO2, CH4]
equipment:
  sun:    {{kind: sunlight, irradiance: 850 W/m2, aperture: 60000 m2}}
  field:  {{kind: pv-field, efficiency: 20 %}}
  board:  {{kind: switchboard}}
  water:  {{kind: store, contents: {{H2O: 1}}, temperature: 25 degC, pressure: 1 bar}}
  feed:   {{kind: pump, pressure: 30 bar}}
  stack:  {{kind: electrolyser, temperature: 80 degC, pressure: 30 bar, {stack}}}
  dry:    {{kind: condenser, temperature: 30 degC}}
  press:  {{kind: compressor, pressure: 100 bar}}
  fuel:   {{kind: product}}
lines:
  - sun -> field -> board.supply
  - board.pump -> feed.power
  - board.press -> press.power
  - board.rest -> stack
  - water.draw -> feed -> stack.water
  - stack -> dry -> press -> fuel
  - dry.liquid -> water.returns
"""
HOT = """
equipment:
  grid:   {kind: grid}
  water:  {kind: store, contents: {H2O: 1}, temperature: 25 degC, pressure: 1.2 bar}
  steam:  {kind: heater, temperature: 150 degC}
  air:    {kind: supply, composition: {N2: 79 %, O2: rest}, temperature: 25 degC,
           pressure: 1.2 bar}
  stack:  {kind: electrolyser, model: solid-oxide, hydrogen: 100 kg/h, current_density: 0.6 A/cm2,
           temperature: 800 degC, pressure: 1.2 bar}
  dry:    {kind: condenser, temperature: 30 degC}
  fuel:   {kind: product}
lines:
  - grid -> stack
  - water.draw -> steam -> stack.water
  - air -> stack.sweep
  - stack -> dry -> fuel
  - dry.liquid -> water.returns
holds:
  - {hold: stack.stack_heat, at: 0 W, by: stack.current_density, within: [0.2 A/cm2, 1.5 A/cm2]}
"""
CELL = """
equipment:
  gas:   {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 2 bar, flow: 1 mol/s}
  air:   {kind: supply, composition: {N2: 79 %, O2: rest}, temperature: 25 degC, pressure: 2 bar}
  blend: {kind: mixer}
  cell:  {kind: fuel-cell, model: pem, pem: {fuel_use: 70 %}, cell_area: 40 m2,
          temperature: 70 degC, pressure: 1.5 bar}
  again: {kind: compressor, pressure: 2 bar}
  split: {kind: splitter, shares: {back: 90 %, purge: rest}}
  town:  {kind: product}
  stack: {kind: vent}
lines:
  - gas -> blend -> cell -> town
  - air -> cell.oxidiser
  - cell.spent_fuel -> split
  - split.back -> again -> blend
  - split.purge -> stack
  - cell.exhaust -> stack
"""
FILE = "current density [A/cm2],voltage [V]\n0.1,1.55\n0.5,1.65\n1.0,1.75\n2.0,1.90\n"


def solved(flowsheet):
    solution = solve_flowsheet(flowsheet)
    assert solution.balance.elements < 1e-9
    assert solution.balance.energy < 1e-9
    return solution


@pytest.mark.parametrize(
    "stack",
    [
        "model: pem, current_density: 2 A/cm2",
        "model: pem, cell_area: 300 m2, rectifier: 96 %, auxiliaries: 4 %",
        "model: pem, rating: 12 MW, current_density: 2 A/cm2, pem: {set: bernt-2016}",
        "model: alkaline, cell_area: 2000 m2",
        "model: alkaline, cell_area: 2000 m2, alkaline: {method: physical}",
    ],
)
def test_a_plant_runs_on_what_the_sun_leaves(stack):
    solution = solved(read_text(PLANT.format(stack=stack)))
    found = solution.outcomes["stack"].results
    assert solution.outcomes["stack"].power == pytest.approx(
        float(solution.outcomes["board"].outlets["rest"]), rel=1e-9
    )
    assert found["reversible_V"] < found["voltage_V"] < 2.3
    assert solution.passes <= 12


def test_a_number_of_the_cells_can_be_held_by():
    text = PLANT.format(stack="model: pem, cell_area: 300 m2, pem: {thickness: 100 um}") + (
        "holds:\n  - {hold: stack.faraday_efficiency, at: 0.98, by: stack.pem.thickness, "
        "within: [20 um, 400 um]}\n"
    )
    solution = solved(read_text(text))
    assert solution.outcomes["stack"].results["faraday_efficiency"] == pytest.approx(0.98, rel=1e-8)


def test_a_hot_stack_is_held_thermoneutral():
    solution = solved(read_text(HOT))
    found = solution.outcomes["stack"].results
    assert found["voltage_V"] == pytest.approx(found["thermoneutral_V"], rel=1e-6)
    assert found["voltage_V"] == pytest.approx(1.2867, abs=2e-3)


def test_a_fuel_cell_with_its_spent_fuel_led_back():
    solution = solved(read_text(CELL))
    purged = float(solution.outcomes["split"].outlets["purge"].flow("H2"))
    assert purged == pytest.approx(1.0 * 0.3 * 0.1 / (1 - 0.3 * 0.9), rel=1e-8)
    assert solution.outcomes["cell"].outlets["power"] > 0.5 * (1 - purged) * 241.8e3


def test_a_curve_is_looked_for_beside_the_flowsheet(tmp_path, monkeypatch):
    (tmp_path / "curves").mkdir()
    (tmp_path / "curves" / "stack.csv").write_text(FILE, encoding="utf-8")
    path = tmp_path / "plant.yaml"
    stack = "model: measured, cell_area: 300 m2, curve: curves/stack.csv"
    path.write_text(PLANT.format(stack=stack), encoding="utf-8")
    monkeypatch.chdir(tmp_path.parent)
    solution = solved(read_flowsheet(path))
    assert 1.55 < solution.outcomes["stack"].results["voltage_V"] < 1.9
    whole = stack.replace("curves/", f"{tmp_path}/curves/")
    again = solved(read_text(PLANT.format(stack=whole)))
    assert (
        again.outcomes["stack"].results["voltage_V"]
        == solution.outcomes["stack"].results["voltage_V"]
    )


def test_a_curve_in_amperes_is_refused_where_it_is_named(tmp_path):
    (tmp_path / "stack.csv").write_text("current [A],voltage [V]\n1,2\n2,3\n", encoding="utf-8")
    path = tmp_path / "plant.yaml"
    path.write_text(
        PLANT.format(stack="model: measured, cell_area: 300 m2, curve: stack.csv"), encoding="utf-8"
    )
    with pytest.raises(FlowsheetFault) as caught:
        read_flowsheet(path)
    (fault,) = caught.value.faults
    assert fault.text == (
        "stack: curve: 'stack.csv': column 'current [A]' is a current, wanted a current density in "
        "A/cm2: divide by the active area of a cell"
    )
    assert fault.line == 9
