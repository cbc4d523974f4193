"""Electrolysers by model: curves, sizing, crossover, heat and gases."""

import numpy as np
import pytest

from chainflow.basis.constants import FARADAY
from chainflow.equipment.base import Site
from chainflow.equipment.cells import along, solid_oxide
from chainflow.equipment.cells.alkaline import AlkalineCell
from chainflow.equipment.cells.losses import rising_root
from chainflow.equipment.cells.pem import PemCell
from chainflow.equipment.cells.solid_oxide import SolidOxideCell
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.equilibrium import equilibrate
from tests.equipment.feeds import MATTER, stream
from tests.equipment.stacks import (
    AIR,
    STEAM,
    WATER,
    at_work,
    electrolyser,
    heat_supplied,
    rises,
    voltages,
)

KG_OF_H2 = 2.01588e-3  # [kg/mol]
FULL = {"current_density": 2e4}


# ------------------------------------------------------------------------- polarisation curves
# Tabled so that a reader can compare: cell voltage [V] at current densities [A/cm2].  These are
# pins: our own code printed them, the outside values stand in tests/outside/test_cell_models.py.
DENSITIES = (0.05, 0.1, 0.2, 0.3, 0.5, 1.0, 2.0)
PEM = {  # set, degC, bar
    ("han-2015", 80, 1): (1.580, 1.609, 1.646, 1.673, 1.717, 1.800, 1.928),
    ("han-2015", 60, 1): (1.629, 1.657, 1.695, 1.723, 1.769, 1.857, 1.999),
    ("han-2015", 80, 30): (1.671, 1.701, 1.738, 1.765, 1.809, 1.892, 2.020),
    ("bernt-2016", 80, 1): (1.456, 1.473, 1.493, 1.507, 1.529, 1.571, 1.643),
    ("espinosa-lopez-2018", 80, 1): (1.670, 1.703, 1.741, 1.767, 1.807, 1.881, 2.003),
}
LOW_DENSITIES = (0.02, 0.05, 0.1, 0.2, 0.3, 0.4)
ALKALINE = {  # set of the empirical curve or kinetics of the physical model, degC, bar
    ("ulleberg-1998", 80, 7): (1.387, 1.469, 1.550, 1.664, 1.758, 1.843),
    ("ulleberg-1998", 60, 7): (1.464, 1.555, 1.642, 1.764, 1.863, 1.952),
    ("ulleberg-1998", 80, 30): (1.421, 1.504, 1.585, 1.699, 1.792, 1.877),
    ("ulleberg-2003", 80, 7): (1.378, 1.465, 1.549, 1.664, 1.757, 1.841),
    ("henao-2014", 80, 7): (1.444, 1.520, 1.587, 1.672, 1.736, 1.792),
    ("henao-2014", 60, 7): (1.503, 1.585, 1.661, 1.764, 1.848, 1.925),
    ("abdin-2017", 80, 7): (1.542, 1.573, 1.609, 1.669, 1.722, 1.771),
}
HOT_DENSITIES = (0.05, 0.1, 0.3, 0.5, 0.7, 1.0)
SOLID_OXIDE = {  # degC, sweep; 70 % of pure steam converted, 10 % hydrogen where it enters, 1 bar
    (700, "air"): (1.025, 1.046, 1.166, 1.294, 1.425, 1.621),
    (750, "air"): (1.010, 1.019, 1.101, 1.194, 1.290, 1.434),
    (800, "air"): (0.995, 0.999, 1.053, 1.122, 1.193, 1.302),
    (850, "air"): (0.982, 0.983, 1.017, 1.067, 1.122, 1.206),
    (800, "oxygen"): (1.016, 1.021, 1.077, 1.147, 1.219, 1.328),
}


def alkaline(name):
    if name.startswith("ulleberg"):
        return AlkalineCell(set=name)
    return AlkalineCell(method="physical", kinetics=name)


def curves():
    """Every curve with its published bounds: (name, curve, reversible, [A/cm2], [V])."""
    for name in ("han-2015", "bernt-2016", "espinosa-lopez-2018"):
        for celsius in (50, 65, 80):
            for bar in (1, 30):
                cell = PemCell(set=name)
                yield (
                    f"pem {name} {celsius} {bar}",
                    cell.curve(celsius + 273.15, bar * 1e5),
                    3.0,
                    2.6,
                )
    for name in ("ulleberg-1998", "ulleberg-2003"):
        for celsius in (30, 60, 80):
            yield (
                f"alkaline {name} {celsius}",
                alkaline(name).curve(celsius + 273.15, 7e5),
                0.3,
                2.2,
            )
    for kinetics in ("henao-2014", "abdin-2017"):
        for celsius in (40, 60, 80):
            yield (
                f"alkaline {kinetics} {celsius}",
                alkaline(kinetics).curve(celsius + 273.15, 7e5),
                0.8,
                3.0,
            )


@pytest.mark.parametrize("entry", list(curves()), ids=lambda entry: entry[0])
def test_each_curve_rises_from_the_reversible_voltage_and_stays_in_the_published_range(entry):
    """Upper bounds: PEM 2.2 to 2.3 V in the industrial range (Carmo et al. 2013; IRENA 2020, as
    reprinted in Chem. Soc. Rev. 51 (2022) 4583), here 2.6 V with the coldest cells; alkaline
    1.4 to 3 V at 0.2 to 0.8 A/cm2 (same reprint)."""
    _, curve, highest, most = entry
    found = voltages(curve, np.linspace(0.0, highest, 61))
    assert rises(found)
    assert found[0] == pytest.approx(curve.losses(0.0).reversible, abs=0.2)
    assert found[0] >= curve.losses(0.0).reversible
    assert found[-1] <= most


@pytest.mark.parametrize("key", PEM, ids=str)
def test_pem_curves_as_tabled_pin(key):
    name, celsius, bar = key
    curve = PemCell(set=name).curve(celsius + 273.15, bar * 1e5)
    assert voltages(curve, DENSITIES) == pytest.approx(PEM[key], abs=6e-4)


@pytest.mark.parametrize("key", ALKALINE, ids=str)
def test_alkaline_curves_as_tabled_pin(key):
    name, celsius, bar = key
    curve = alkaline(name).curve(celsius + 273.15, bar * 1e5)
    assert voltages(curve, LOW_DENSITIES) == pytest.approx(ALKALINE[key], abs=6e-4)


@pytest.mark.parametrize("key", SOLID_OXIDE, ids=str)
def test_solid_oxide_curves_as_tabled_pin(key):
    celsius, sweep = key
    assert hot_voltages(celsius, AIR if sweep == "air" else None) == pytest.approx(
        SOLID_OXIDE[key], abs=6e-4
    )


def hot_voltages(celsius, sweep):
    pieces = [
        electrolyser("solid-oxide", celsius, 1, current_density=1e4 * i) for i in HOT_DENSITIES
    ]
    return [at_work(piece, sweep=sweep).results["voltage_V"] for piece in pieces]


def test_solid_oxide_curves_rise_and_stay_in_the_published_range():
    """1.0 to 1.5 V at 0.3 to 1 A/cm2, 700 to 850 degC (Chen et al., Energy Mater. 5 (2025) 500045,
    table 1)."""
    for celsius in (750, 800, 850):
        found = hot_voltages(celsius, AIR)
        assert rises(found)
        assert all(1.0 <= voltage <= 1.5 for voltage in found[2:])


@pytest.mark.parametrize(
    "piece",
    [
        electrolyser("pem", 70, 20, **FULL),
        electrolyser("alkaline", 70, 20, current_density=2500.0),
        electrolyser("alkaline", 70, 20, current_density=2500.0, alkaline={"method": "physical"}),
        electrolyser("solid-oxide", 780, 1, current_density=5000.0),
    ],
    ids=lambda piece: piece.model,
)
def test_the_losses_add_up_to_the_voltage(piece):
    found = at_work(piece).results
    parts = ("reversible_V", "activation_V", "ohmic_V", "concentration_V", "unsplit_V")
    assert sum(found[name] for name in parts) == pytest.approx(found["voltage_V"], rel=1e-14)
    assert all(found[name] >= 0.0 for name in parts)
    if "activation_anode_V" in found:
        both = found["activation_anode_V"] + found["activation_cathode_V"]
        assert both == pytest.approx(found["activation_V"], rel=1e-14)


def test_pem_loses_more_when_thicker_colder_drier_or_closer_to_its_limit():
    base = PemCell().curve(353.15, 1e6).voltage(2e4)
    for other in (
        PemCell(thickness=200e-6).curve(353.15, 1e6),
        PemCell(water_content=14.0).curve(353.15, 1e6),
        PemCell(limiting_current=2.2e4).curve(353.15, 1e6),
        PemCell(contact_resistance=5e-6).curve(353.15, 1e6),
        PemCell().curve(333.15, 1e6),
        PemCell().curve(353.15, 3e6),
    ):
        assert other.voltage(2e4) > base


def test_an_overridden_number_replaces_that_of_the_set():
    cell = PemCell(set="bernt-2016", thickness=100e-6)
    assert cell.thickness == 100e-6
    assert cell.anode_transfer == 1.51
    assert PemCell().thickness == 127e-6


def test_alkaline_activation_is_never_negative_and_pressure_adds_nernst():
    cell = AlkalineCell()
    low, high = cell.curve(353.15, 1.2e5), cell.curve(353.15, 30e5)
    assert low.losses(0.5).activation == 0.0
    at_7 = cell.curve(353.15, 7e5).voltage(3000.0)
    assert low.voltage(3000.0) < at_7 < high.voltage(3000.0)


# -------------------------------------------------------------------------------- random points
def random_points():
    """100 operating points per technology, over the settings that are allowed."""
    chance = np.random.default_rng(20)

    def between(low, high):
        return float(chance.uniform(low, high))

    for _ in range(100):
        name = str(chance.choice(["han-2015", "bernt-2016", "espinosa-lopez-2018"]))
        yield electrolyser(
            "pem",
            between(20, 90),
            between(1.5, 80),
            current_density=between(100, 4e4),
            pem={"set": name, "thickness": between(20e-6, 200e-6)},
            rectifier=between(0.9, 1.0),
            auxiliaries=between(0.0, 0.1),
        )
        yield electrolyser(
            "alkaline",
            between(30, 90),
            between(1.5, 40),
            current_density=between(20, 6000),
            alkaline={"method": str(chance.choice(["empirical", "physical"]))},
        )
        yield electrolyser(
            "solid-oxide",
            between(650, 900),
            between(1, 1.5),
            current_density=between(50, 1.2e4),
            solid_oxide={"conversion": between(0.2, 0.9), "inlet_hydrogen": between(0.02, 0.2)},
        )
        points = np.cumsum(chance.uniform(0.02, 0.3, 5))
        branch = {
            "current_density": (1e4 * points).tolist(),
            "voltage": (1.35 + 0.5 * points).tolist(),
        }
        yield electrolyser(
            "measured", between(30, 90), between(1.5, 3), curve=branch, cell_area=between(20, 500)
        )


RANDOM = list(random_points())


@pytest.mark.parametrize("model", ["pem", "alkaline", "solid-oxide", "measured"])
def test_no_random_point_beats_thermodynamics(model):
    """Voltage above reversible; below 100 % HHV unless heat is supplied, and then counted."""
    points = [piece for piece in RANDOM if piece.model == model]
    assert len(points) == 100
    for piece in points:
        outcome = at_work(piece, sweep=AIR if model == "solid-oxide" else None)
        found = outcome.results
        assert found["voltage_V"] > found["reversible_V"]
        assert not [c for c in outcome.cautions if c.code == "below-reversible-voltage"]
        gained = found["stack_efficiency_HHV"] * found["direct_current_W"]
        supplied = heat_supplied(outcome)
        assert gained <= (found["direct_current_W"] + supplied) * (1.0 + 1e-12) + _as_vapour(piece)
        if supplied == 0.0:
            assert found["stack_efficiency_HHV"] < 1.0
        assert found["fence_efficiency_LHV"] <= found["stack_efficiency_LHV"]


def _as_vapour(piece):
    """What steam brings: the feed of a hot stack arrives evaporated and warm [W], at most."""
    if piece.model != "solid-oxide":
        return 0.0
    outcome = at_work(piece, sweep=AIR)
    cold = stream({"H2O": 1.0}, 25.0, 1.0)
    return outcome.drawn["water"] * float(STEAM.enthalpy - cold.enthalpy)


# --------------------------------------------------------------------------------------- sizing
@pytest.mark.parametrize(
    ("model", "celsius", "density"),
    [("pem", 80, 1.5e4), ("alkaline", 75, 2500.0), ("solid-oxide", 800, 6e3)],
)
def test_power_hydrogen_area_and_rating_size_the_same_stack(model, celsius, density):
    extra = {"rectifier": 0.97, "auxiliaries": 0.04}
    by_power = at_work(electrolyser(model, celsius, 1.5, current_density=density, **extra))
    found = by_power.results
    made, area = found["hydrogen_mol_s"], found["cell_area_m2"]
    others = [
        electrolyser(model, celsius, 1.5, current_density=density, hydrogen=made, **extra),
        electrolyser(model, celsius, 1.5, cell_area=area, hydrogen=made, **extra),
        electrolyser(model, celsius, 1.5, cell_area=area, **extra),
        electrolyser(model, celsius, 1.5, cell_area=area, current_density=density, **extra),
        electrolyser(model, celsius, 1.5, rating=1e6, current_density=density, **extra),
    ]
    for piece in others:
        outcome = at_work(piece)
        assert outcome.power == pytest.approx(1e6, rel=1e-10)
        for name in ("hydrogen_mol_s", "cell_area_m2", "current_density_A_m2", "voltage_V"):
            assert outcome.results[name] == pytest.approx(found[name], rel=1e-10)


def test_part_load_moves_along_the_curve():
    piece = electrolyser("pem", 80, 30, current_density=2e4, rating=1e6, minimum_load=0.1)
    loads = np.array([0.05, 0.1, 0.3, 0.6, 1.0, 1.2])
    outcomes = [at_work(piece, power=1e6 * load) for load in loads]
    assert rises([o.results["voltage_V"] for o in outcomes])
    assert [o.results["load"] for o in outcomes] == pytest.approx(loads, rel=1e-12)
    faraday = [o.results["faraday_efficiency"] for o in outcomes]
    assert rises(faraday)
    best = max(outcomes, key=lambda o: o.results["stack_efficiency_LHV"])
    assert 0.1 < best.results["load"] < 1.0  # crossover below, losses above
    codes = [{c.code for c in o.cautions} for o in outcomes]
    assert "below-minimum-load" in codes[0]
    assert "above-rating" in codes[-1]
    assert not {"below-minimum-load", "above-rating"} & codes[3]


def test_rectifier_and_auxiliaries_are_told_apart():
    piece = electrolyser("pem", 80, 30, rectifier=0.96, auxiliaries=0.05, **FULL)
    outcome = at_work(piece)
    found = outcome.results
    direct = found["direct_current_W"]
    assert direct == pytest.approx(1e6 / (1 / 0.96 + 0.05), rel=1e-14)
    assert found["rectifier_loss_W"] == pytest.approx(direct * (1 / 0.96 - 1), rel=1e-12)
    assert found["auxiliaries_W"] == pytest.approx(0.05 * direct, rel=1e-12)
    ratio = found["fence_energy_use_J_kg"] / found["stack_energy_use_J_kg"]
    assert ratio == pytest.approx(1e6 / direct, rel=1e-12)
    use = direct / found["hydrogen_kg_s"]
    assert found["stack_energy_use_J_kg"] == pytest.approx(use, rel=1e-12)
    assert found["water_use"] == pytest.approx(found["water_kg_s"] / found["hydrogen_kg_s"])


# ---------------------------------------------------------------------------------------- gases
def test_hydrogen_crossing_leaves_with_the_oxygen_or_is_burnt():
    open_one = at_work(electrolyser("pem", 80, 30, **FULL))
    closed = at_work(electrolyser("pem", 80, 30, pem={"recombination": 0.9}, **FULL))
    for outcome, share in ((open_one, 1.0), (closed, 0.1)):
        found = outcome.results
        gross = found["current_A"] / (2 * FARADAY)
        lost = gross - found["hydrogen_mol_s"]
        leaving = float(outcome.outlets["oxygen"].flow("H2"))
        assert leaving == pytest.approx(share * lost, rel=1e-9)
        oxygen = float(outcome.outlets["oxygen"].flow("O2"))
        assert found["hydrogen_in_oxygen"] == pytest.approx(leaving / (leaving + oxygen), rel=1e-12)
    assert open_one.results["faraday_efficiency"] == closed.results["faraday_efficiency"]
    assert "hydrogen-in-oxygen" in {c.code for c in open_one.cautions}
    assert "hydrogen-in-oxygen" not in {c.code for c in closed.cautions}


def test_crossover_follows_pressure_thickness_and_supersaturation():
    def crossed(bar=30, **pem):
        piece = electrolyser("pem", 80, bar, pem=pem, **FULL)
        return 1.0 - at_work(piece).results["faraday_efficiency"]

    assert crossed(15) < crossed(30) < crossed(60)
    assert crossed(thickness=50e-6) > crossed(thickness=178e-6)
    assert crossed(supersaturation=400.0) > crossed()  # 40 bar cm2/A
    assert crossed(oxygen_crossover=0.3) == pytest.approx(1.3 * crossed(), rel=1e-9)


def test_both_gases_leave_saturated():
    outcome = at_work(electrolyser("pem", 80, 30, pem={"oxygen_pressure": 3e5}, **FULL))
    vapour = 47416.0  # [Pa] at 80 degC, Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387
    assert float(outcome.outlets["hydrogen"].fraction("H2O")) == pytest.approx(vapour / 30e5, 1e-4)
    assert float(outcome.outlets["oxygen"].fraction("H2O")) == pytest.approx(vapour / 3e5, 1e-4)


def test_a_little_power_into_a_large_pressurised_stack_makes_no_hydrogen():
    outcome = at_work(electrolyser("pem", 80, 30, cell_area=50.0), power=50.0)
    assert float(outcome.outlets["hydrogen"].flow("H2")) == 0.0
    assert outcome.results["faraday_efficiency"] == 0.0
    assert "stack_energy_use_J_kg" not in outcome.results


# ---------------------------------------------------------------------------------- solid oxide
@pytest.mark.parametrize(
    ("feed", "celsius", "bar", "conversion"),
    [
        ({"H2O": 0.9, "H2": 0.1}, 800, 1, 0.7),
        ({"H2O": 0.6, "CO2": 0.3, "H2": 0.1}, 800, 1, 0.7),
        ({"H2O": 0.6, "CO2": 0.3, "H2": 0.1}, 650, 20, 0.6),
        ({"CO2": 0.9, "H2": 0.1}, 850, 1, 0.5),
        ({"H2O": 0.5, "CO2": 0.2, "H2": 0.1, "N2": 0.2}, 750, 5, 0.8),
    ],
)
def test_the_gas_in_the_cell_is_at_the_equilibrium_of_cantera(feed, celsius, bar, conversion):
    """At both ends of the cell: H2O per H2 by our own solver and by Cantera's."""
    level, pressure = celsius + 273.15, bar * 1e5
    cell = SolidOxideCell(conversion=conversion)
    fed = MATTER.vector(feed)
    found = solid_oxide.converted(cell, fed, MATTER, level, pressure)
    ratio = found.gas.steam_ratio(found.oxygen_along, np.full(along.NODES, level))
    entering = fed + found.recirculated * found.product
    for end, gas in ((0, entering), (-1, found.product)):
        hot = equilibrate(MATTER, gas, level, pressure, solid_oxide.SPECIES).flows
        expected = hot[MATTER.index["H2O"]] / hot[MATTER.index["H2"]]
        assert ratio[end] == pytest.approx(expected, rel=1e-8)


def test_the_cell_is_integrated_to_a_tenth_of_a_millivolt(monkeypatch):
    def voltage(nodes):
        monkeypatch.setattr(along, "NODES", nodes)
        along.nodes.cache_clear()
        piece = electrolyser("solid-oxide", 800, 1, current_density=5e3)
        return at_work(piece, sweep=AIR).results["voltage_V"]

    usual, fine = voltage(along.NODES), voltage(401)
    monkeypatch.undo()
    along.nodes.cache_clear()
    assert usual == pytest.approx(fine, abs=1e-4)


def test_current_by_voltage_is_voltage_by_current_turned_round():
    reversible = np.linspace(0.85, 1.0, along.NODES)
    cell = along.AlongCell.of(reversible, np.full(along.NODES, 4e-5), 1.0)
    for density in (1e-3, 10.0, 1e3, 1e4):
        voltage = cell.voltage(density)
        assert voltage >= cell.extreme
        if density > 100.0:
            assert cell.density(voltage) == pytest.approx(density, rel=1e-6)
        power = density * voltage
        assert cell.density_for(power) == pytest.approx(density, rel=1e-9)
    assert cell.density(0.9) == 0.0


def test_below_at_and_above_the_thermoneutral_voltage():
    neutral = electrolyser("solid-oxide", 800, 1, solid_oxide={"thermoneutral": True})
    middle = at_work(neutral).results
    assert middle["stack_heat_W"] == 0.0
    assert middle["voltage_V"] == pytest.approx(middle["thermoneutral_V"], rel=1e-12)
    assert middle["voltage_V"] == pytest.approx(1.2867, abs=2e-3)  # own enthalpies
    low, high = (
        at_work(
            electrolyser("solid-oxide", 800, 1, current_density=f * middle["current_density_A_m2"])
        )
        for f in (0.5, 1.5)
    )
    assert low.results["stack_heat_W"] > 0.0 == low.results["cooling_W"]
    assert high.results["stack_heat_W"] < 0.0 < high.results["cooling_W"]
    assert any(d.purpose == "stack" and d.met_by == "bought" for d in low.duties)


def test_product_is_recirculated_until_the_inlet_holds_its_hydrogen():
    feed = MATTER.vector({"H2O": 1.0})
    cell = SolidOxideCell(conversion=0.7, inlet_hydrogen=0.1)
    found = solid_oxide.converted(cell, feed, MATTER, 1073.15, 1e5)
    entering = feed + found.recirculated * found.product
    assert entering[MATTER.index["H2"]] / entering.sum() == pytest.approx(0.1, rel=1e-12)
    assert found.per_pass < 0.7
    enough = MATTER.vector({"H2O": 0.8, "H2": 0.2})
    assert solid_oxide.converted(cell, enough, MATTER, 1073.15, 1e5).recirculated == 0.0


def test_the_feed_follows_from_current_and_conversion():
    mixed = stream({"H2O": 0.6, "CO2": 0.3, "H2": 0.1}, 300.0, 1.5)
    piece = electrolyser(
        "solid-oxide", 800, 1, current_density=5e3, solid_oxide={"conversion": 0.6}
    )
    outcome = at_work(piece, water=mixed, sweep=AIR)
    oxygen_atoms = outcome.results["current_A"] / (2 * FARADAY)
    assert outcome.drawn["water"] == pytest.approx(oxygen_atoms / (0.6 * 0.9), rel=1e-12)
    assert outcome.drawn["sweep"] == pytest.approx(0.5 * oxygen_atoms * 3.0, rel=1e-12)
    made = float(outcome.outlets["oxygen"].flow("O2")) - 0.21 * outcome.drawn["sweep"]
    assert made == pytest.approx(0.5 * oxygen_atoms, rel=1e-12)


def test_sweeping_with_air_lowers_the_voltage_and_pressure_raises_it():
    def voltage(bar=1.0, sweep=None):
        piece = electrolyser("solid-oxide", 800, bar, current_density=5e3)
        return at_work(piece, sweep=sweep).results["voltage_V"]

    assert voltage(sweep=AIR) < voltage() < voltage(bar=1.5)


def test_a_hotter_entry_lowers_the_voltage():
    def voltage(entry):
        piece = electrolyser(
            "solid-oxide", 800, 1, current_density=5e3, solid_oxide={"entry": entry + 273.15}
        )
        return at_work(piece).results["voltage_V"]

    plain = at_work(electrolyser("solid-oxide", 800, 1, current_density=5e3)).results["voltage_V"]
    assert voltage(800.0) == pytest.approx(plain, rel=1e-12)
    assert voltage(850.0) < plain < voltage(760.0)


def test_cautions_of_a_hot_stack():
    rich = stream({"H2O": 0.05, "CO2": 0.85, "H2": 0.1}, 300.0, 12.0)
    piece = electrolyser(
        "solid-oxide", 650, 10, current_density=3e3, solid_oxide={"conversion": 0.85}
    )
    outcome = at_work(piece, water=rich)
    assert {"carbon-activity", "high-conversion"} <= {c.code for c in outcome.cautions}
    assert outcome.results["carbon_activity"] > 1.0


# ---------------------------------------------------------------------------------- small parts
@pytest.mark.parametrize("target", [1e-12, 1e-3, 1.0, 1e6])
def test_a_rising_function_is_met(target):
    found = rising_root(lambda x: x**3 + x, target, 1.0)
    assert found**3 + found == pytest.approx(target, rel=1e-12)


def test_a_ceiling_is_not_passed():
    found = rising_root(lambda x: x / (1.0 - x), 1e9, 0.5, 1.0)
    assert found < 1.0
    assert found / (1.0 - found) == pytest.approx(1e9, rel=1e-6)
    assert rising_root(lambda x: x, 0.0, 1.0) == 0.0


def test_models_without_a_curve_still_say_how_far_from_reversible_they_are():
    piece = electrolyser("voltage", 60, 30, voltage=1.9)
    found = at_work(piece).results
    assert found["reversible_V"] == reversible_voltage(333.15)
    assert "cell_area_m2" not in found


def test_a_called_stack_is_run_on_what_its_server_gives():
    piece = electrolyser("pem", 80, 30, hydrogen=1.0, **FULL)
    site = Site(MATTER, 298.15, frozenset({"water", "power"}), frozenset())
    outcome = piece.operate({"water": WATER}, {}, site)
    assert outcome.results["hydrogen_mol_s"] == pytest.approx(1.0, rel=1e-12)
    assert outcome.drawn["power"] == outcome.power


@pytest.mark.parametrize("model", ["specific-energy", "pem"])
def test_without_water_power_makes_nothing(model):
    size = {"energy_use": 1.9e8} if model == "specific-energy" else FULL
    outcome = at_work(electrolyser(model, 60, 30, **size), water=stream({"N2": 1.0}, 25, 30))
    assert outcome.unmet
    assert outcome.results["hydrogen_mol_s"] == 0.0
    assert outcome.results["stack_efficiency_LHV"] == 0.0
    assert "stack_energy_use_J_kg" not in outcome.results
    assert float(outcome.outlets["hydrogen"].total) == 0.0
    assert outcome.heat == pytest.approx(-outcome.power)
