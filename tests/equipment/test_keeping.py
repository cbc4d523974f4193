"""Liquefiers, liquefied streams, and what a store says about what it keeps."""

import pytest
from pydantic import ValidationError

from chainflow.equipment.liquefier import Liquefier
from chainflow.equipment.stores import Store
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.liquefied import LIQUEFIABLE, cold_at, cold_of_enthalpy, saturated
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)
HYDROGEN = {"contents": {"H2": 1}, "temperature": 288.15, "pressure": 700e5}


def stream(amounts, celsius=25.0, bar=1.0):
    return Stream.at(MATTER, MATTER.vector(amounts), celsius + 273.15, bar * 1e5)


def kept(settings, drawn=1.0):
    from chainflow.equipment.base import Site

    return Store(**settings).run({}, {"draw": drawn}, Site(MATTER)).results


# ---------------------------------------------------------------------------- liquefied streams
@pytest.mark.parametrize("name", LIQUEFIABLE)
def test_temperature_and_phases_are_found_again_from_the_enthalpy(name):
    pressure = 8e5
    for share in (0.0, 0.3, 1.0):
        state = saturated(name, pressure, share)
        again = cold_of_enthalpy(name, state.enthalpy, pressure)
        assert again.temperature == pytest.approx(state.temperature, rel=1e-8)
        assert again.vapour == pytest.approx(share, abs=1e-6)
    colder = cold_at(name, saturated(name, pressure, 0.0).temperature - 1.0, pressure)
    assert cold_of_enthalpy(name, colder.enthalpy, pressure).temperature == pytest.approx(
        colder.temperature, abs=1e-5
    )


@pytest.mark.parametrize("name", LIQUEFIABLE)
@pytest.mark.parametrize("beyond", [1e-14, 1e-12, 1e-10, 1e-9, 1e-8, 5e-8, 1e-7, 2e-7, 1e-6])
def test_a_state_next_to_saturation_is_found(name, beyond):
    """Round-off beyond boiling liquid or saturated vapour is no state without an answer."""
    for pressure in (8e5, 30e5) if name == "CO2" else (1.3e5, 3e5, 8e5):
        liquid, vapour = (saturated(name, pressure, share) for share in (0.0, 1.0))
        more = beyond * (vapour.enthalpy - liquid.enthalpy)
        for enthalpy, state in (
            (liquid.enthalpy - more, liquid),
            (vapour.enthalpy + more, vapour),
        ):
            found = cold_of_enthalpy(name, enthalpy, pressure)
            assert found.temperature == pytest.approx(state.temperature, rel=1e-5)
            assert found.entropy == pytest.approx(state.entropy, rel=1e-5, abs=1e-4)
            assert found.enthalpy == enthalpy


@pytest.mark.parametrize("name", LIQUEFIABLE)
@pytest.mark.parametrize("beside", [1e-11, 1e-9, 3e-9, 1e-8, 1e-7, 1e-6])
def test_a_temperature_next_to_boiling_has_a_phase(name, beside):
    """Colder it is liquid, warmer vapour; with no more than round-off between, liquid."""
    pressure = 8e5 if name == "CO2" else 1.3e5
    liquid, vapour = (saturated(name, pressure, share) for share in (0.0, 1.0))
    colder = cold_at(name, liquid.temperature * (1.0 - beside), pressure)
    warmer = cold_at(name, liquid.temperature * (1.0 + beside), pressure)
    little = 1e-3 + 150.0 * beside * liquid.temperature  # 150 J/mol/K is more than any of them has
    assert colder.enthalpy == pytest.approx(liquid.enthalpy, abs=little)
    assert colder.vapour == 0.0
    after = liquid if beside < 1e-10 else vapour
    assert warmer.enthalpy == pytest.approx(after.enthalpy, abs=little)
    assert warmer.vapour == after.vapour


@pytest.mark.parametrize(
    ("name", "bar", "vapour", "capacity"),
    [
        ("CH4", 1.01325, 0.0, 55.9),  # 3.48 kJ/kg/K
        ("CH4", 1.01325, 1.0, 35.4),  # 2.21
        ("N2", 1.01325, 0.0, 57.2),  # 2.04
        ("N2", 1.01325, 1.0, 31.5),  # 1.12
        ("H2", 1.01325, 0.0, 19.5),  # 9.66
        ("H2", 1.01325, 1.0, 24.4),  # 12.1
    ],
)
def test_heat_capacity_at_saturation(name, bar, vapour, capacity):
    """A saturated vapour warms, a boiling liquid cools: neither slope is that of evaporation.

    Heat capacities of handbooks [J/mol/K], from memory; the fluids of 1979 are within a tenth, the
    liquid hydrogen within a seventh.
    """
    state = saturated(name, bar * 1e5, vapour)
    flows = MATTER.vector({name: 2.0})
    for more in (0.0, 1e-6, 1e-5, 1.00001e-5, 1e-4):
        beside = state.temperature * (1.0 + (more if vapour else -more))
        enthalpy = cold_at(name, beside, bar * 1e5).enthalpy if more else state.enthalpy
        found = Stream.from_enthalpy(MATTER, flows, 2.0 * enthalpy, bar * 1e5)
        slope = enthalpy_slopes(found)[1] / 2.0
        assert slope == pytest.approx(capacity, rel=0.15 if name == "H2" else 0.1)


def test_hydrogen_just_below_boiling_has_its_temperature():
    """The search for it must not look over saturation, where any step seems small enough."""
    liquid, vapour = (saturated("H2", 1.3e5, share) for share in (0.0, 1.0))
    colder = cold_of_enthalpy("H2", liquid.enthalpy - 1e-3, 1.3e5)
    assert liquid.temperature - colder.temperature == pytest.approx(1e-3 / 22.2, rel=0.01)  # pin
    warmer = cold_of_enthalpy("H2", vapour.enthalpy + 1e-3, 1.3e5)
    assert warmer.temperature - vapour.temperature == pytest.approx(1e-3 / 27.0, rel=0.01)  # pin


@pytest.mark.parametrize("name", ["H2", "CH4", "N2", "O2"])
def test_the_cold_gas_joins_the_gas_of_the_species_table(name):
    # 1 bar and 200 K; only the spins of hydrogen jump, by 2.1 kJ/kg = 4.3 J/mol
    flows = MATTER.vector({name: 1.0})
    gas = MATTER.gas_state(flows, 200.0, 1e5)
    cold = cold_at(name, 200.0 - 1e-9, 1e5)
    assert cold.enthalpy == pytest.approx(gas.enthalpy, abs=5.0 if name == "H2" else 1e-3)
    assert cold.entropy == pytest.approx(gas.entropy, abs=0.03 if name == "H2" else 1e-5)


def test_entropy_of_a_cold_stream_follows_its_heat():
    flows = MATTER.vector({"CH4": 2.0})
    one, other = (Stream.at(MATTER, flows, level, 1e5) for level in (105.0, 105.1))
    gained = (other.enthalpy - one.enthalpy) / 105.05
    assert other.entropy - one.entropy == pytest.approx(gained, rel=1e-4)
    capacity = enthalpy_slopes(one)[1]
    assert other.enthalpy - one.enthalpy == pytest.approx(0.1 * capacity, rel=1e-3)


def test_liquid_let_down_flashes():
    liquid = Stream.at(MATTER, MATTER.vector({"CH4": 1.0}), 150.0, 20e5)
    after = liquid.at_pressure(1.2e5)
    assert after.temperature == pytest.approx(saturated("CH4", 1.2e5, 0.0).temperature, abs=1e-6)
    assert 0.0 < after.phase_totals["gas"] < 1.0
    assert after.enthalpy == liquid.enthalpy


def test_a_mixture_is_no_liquefied_gas():
    with pytest.raises(StateError, match="has to be one pure component"):
        Stream.liquefied(MATTER, MATTER.vector({"CH4": 1.0, "N2": 0.1}), 100.0, 1e5)
    with pytest.raises(StateError, match="is solid"):
        Stream.at(MATTER, MATTER.vector({"CH4": 1.0}), 80.0, 1e5)


# ------------------------------------------------------------------------------------ liquefier
def test_work_is_ideal_work_over_efficiency():
    feed = stream({"H2": 2.0}, 25.0, 20.0)
    outcome = Liquefier(efficiency=0.3).run({"inlet": feed})
    assert outcome.results["work_W"] == pytest.approx(outcome.results["ideal_work_W"] / 0.3)
    perfect = Liquefier(efficiency=1.0).run({"inlet": feed})
    liquid = perfect.outlets["liquid"]
    assert perfect.power == pytest.approx(liquid.exergy() - feed.exergy(), rel=1e-6)


def test_unconverted_hydrogen_takes_less_work_and_boils_away():
    feed = stream({"H2": 2.0}, 25.0, 20.0)
    converted, normal = (Liquefier(conversion=c).run({"inlet": feed}) for c in (True, False))
    assert normal.results["work_W"] < converted.results["work_W"]
    left = normal.results
    assert left["conversion_heat_J_kg"] > left["vaporisation_heat_J_kg"]
    assert [c.code for c in normal.cautions] == ["unconverted-hydrogen"]
    liquid = normal.outlets["liquid"]
    fate = Stream.from_enthalpy(MATTER, liquid.flows, liquid.enthalpy, liquid.pressure)
    assert fate.phase_totals["gas"] == pytest.approx(2.0)


def test_boil_off_leaves_as_cold_vapour():
    feed = stream({"CH4": 2.0}, 25.0, 30.0)
    outcome = Liquefier(component="CH4", boil_off=0.1).run({"inlet": feed})
    assert outcome.outlets["boil_off"].phase_totals["gas"] == pytest.approx(0.2)
    assert outcome.outlets["liquid"].phase_totals["liquid"] == pytest.approx(1.8)
    assert outcome.outlets["boil_off"].temperature == outcome.outlets["liquid"].temperature


def test_wrong_liquefiers_are_refused():
    ((path, text),) = Liquefier(component="CO").setting_faults(MATTER)
    assert path == ("component",)
    assert "CO cannot be liquefied here" in text
    ((path, text),) = Liquefier(pressure=20e5).setting_faults(MATTER)
    assert path == ("pressure",)
    assert "H2 does not boil at 20 bar, its critical pressure is 12.84 bar" in text


# ---------------------------------------------------------------------------------------- store
def test_storing_carbon_dioxide_as_a_liquid_above_its_critical_point_is_refused():
    carbon = {"contents": {"CO2": 1}, "phase": "liquid", "pressure": 70e5}
    ((path, text),) = Store(**carbon, temperature=308.15).setting_faults(MATTER)
    assert path == ("temperature",)
    assert text.startswith("CO2 has no liquid at 35 degC, above its critical temperature of 31.0")
    ((path, text),) = Store(**{**carbon, "pressure": 90e5}, temperature=290.0).setting_faults(
        MATTER
    )
    assert path == ("pressure",)
    assert "above its critical pressure of 73.8" in text
    ((path, text),) = Store(**{**carbon, "pressure": 20e5}, temperature=290.0).setting_faults(
        MATTER
    )
    assert "CO2 is a gas at 16.85 degC and 20 bar, it boils at -19.5" in text
    assert not list(Store(**{**carbon, "pressure": 20e5}, temperature=248.0).setting_faults(MATTER))


def test_only_pure_known_gases_are_kept_as_liquids():
    both = {"contents": {"CO2": 0.9, "N2": 0.1}, "phase": "liquid"}
    faults = list(Store(**both, pressure=20e5, temperature=248.0).setting_faults(MATTER))
    assert "a liquefied gas has to be pure" in faults[0][1]
    other = {"contents": {"CO": 1}, "phase": "liquid"}
    ((_, text),) = Store(**other, pressure=1e5, temperature=80.0).setting_faults(MATTER)
    assert "CO cannot be kept as a liquefied gas here" in text
    water = {"contents": {"H2O": 1}, "phase": "liquid"}
    assert not list(Store(**water, pressure=1e5, temperature=298.0).setting_faults(MATTER))


def test_vessel_figures_scale_what_is_kept_and_can_be_overridden():
    bare, tank = kept(HYDROGEN), kept({**HYDROGEN, "vessel": "hydrogen-700", "inventory": 5.0})
    assert bare["energy_with_vessel_J_kg"] == bare["energy_J_kg"]
    assert tank["energy_with_vessel_J_kg"] == pytest.approx(0.055 * tank["energy_J_kg"])
    assert tank["vessel_kg"] == pytest.approx(5.0 * (1 / 0.055 - 1))
    assert tank["volume_m3"] == pytest.approx(5.0 / tank["density_kg_m3"])
    own = kept({**HYDROGEN, "vessel": "hydrogen-700", "mass_share": 0.06})
    assert own["energy_with_vessel_J_kg"] == pytest.approx(0.06 * own["energy_J_kg"])


def test_losses_are_per_day_of_the_inventory():
    sphere = {"contents": {"H2": 1}, "temperature": 20.9, "pressure": 1.3e5, "inventory": 1e5}
    results = kept({**sphere, "vessel": "liquid-hydrogen-sphere"})
    assert results["share_liquid"] == 1.0
    assert results["share_lost_per_day"] == pytest.approx(5e-4)
    assert results["loss_kg_s"] * 86400.0 == pytest.approx(50.0)
    with pytest.raises(ValidationError, match="out of range"):
        Store(**sphere, loss=-1e-9)


def test_a_gas_that_is_liquefied_in_the_store_gets_a_caution():
    carbon = {"contents": {"CO2": 1}, "phase": "liquid", "pressure": 20e5, "temperature": 248.15}
    outcome = Store(**carbon).run({"returns": (stream({"CO2": 1.0}, 30.0, 20.0),)}, {"draw": 1.0})
    assert [c.code for c in outcome.cautions] == ["liquefied-in-store"]
    assert any(d.met_by == "bought" and d.heat < 0.0 for d in outcome.duties)
