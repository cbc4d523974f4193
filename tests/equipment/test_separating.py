"""Capture, membranes, pressure swing and water treatment: limits, order, and what is refused."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.equipment.adsorption import PressureSwing
from chainflow.equipment.base import Site
from chainflow.equipment.capture import Absorber, AirCapture, least_work
from chainflow.equipment.membranes import Membrane
from chainflow.equipment.permeation import cross_flow, local_flux, well_mixed
from chainflow.equipment.water_treatment import WaterTreatment
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
SITE = Site(MATTER)
GPU = 3.3464e-10  # [mol/(m2 s Pa)]


def stream(amounts, celsius=25.0, bar=1.0):
    return Stream.at(MATTER, MATTER.vector(amounts), celsius + 273.15, bar * 1e5)


# ------------------------------------------------------------------------------------- capture
def test_an_absorber_takes_its_share_and_moisture_only_from_the_feed():
    wet = stream({"CO2": 1.0, "N2": 7.0, "H2O": 0.5}, 40.0)
    dry = stream({"CO2": 1.0, "N2": 7.0}, 40.0)
    for feed, moist in ((wet, True), (dry, False)):
        outcome = Absorber(share=0.9).run({"feed": feed})
        assert outcome.outlets["co2"].flow("CO2") == pytest.approx(0.9, rel=1e-12)
        assert (outcome.outlets["co2"].flow("H2O") > 0.0) is moist
        assert outcome.outlets["clean"].flow("CO2") == pytest.approx(0.1, rel=1e-12)


def test_pilot_figures_follow_the_content_between_the_two_that_were_run():
    def heat(content):
        feed = stream({"CO2": content, "N2": 1.0 - content}, 40.0)
        return Absorber(figures="mea-pilot").run({"feed": feed}).results["heat_use_J_kg"]

    assert heat(0.02) == heat(0.05) == pytest.approx(4.80e6)
    assert heat(0.10) == pytest.approx(heat(0.3)) == pytest.approx(4.33e6)
    assert heat(0.05) > heat(0.07) > heat(0.10)


def test_stated_numbers_go_before_the_figures():
    feed = stream({"CO2": 1.0, "N2": 7.0}, 40.0)
    results = Absorber(figures="mea-base", heat_use=2e6, power_use=1e5).run({"feed": feed}).results
    assert results["stated_heat_W"] == pytest.approx(2e6 * results["captured_kg_s"])
    assert results["stated_power_W"] == pytest.approx(1e5 * results["captured_kg_s"])


def test_capture_for_less_than_the_least_work_is_an_idealisation():
    feed = stream({"CO2": 1.0, "N2": 7.0}, 40.0)
    outcome = Absorber(heat_use=0.0, power_use=0.0).run({"feed": feed})
    assert [note.code for note in outcome.idealisations] == ["free-separation"]
    outcome = AirCapture(heat_use=0.0, power_use=1e5).run({}, {"co2": 1.0}, SITE)
    assert [note.code for note in outcome.idealisations] == ["free-separation"]


def test_air_capture_serves_what_is_asked_or_offers_a_flow():
    asked = AirCapture().run({}, {"co2": 2.0}, SITE)
    offered = AirCapture(flow=2.0).run({}, {}, SITE)
    for outcome in (asked, offered):
        assert outcome.outlets["co2"].total == pytest.approx(2.0)
        assert outcome.results["from_air_mol_s"] == pytest.approx(2.0)
        assert sum(float(s.total) for s in outcome.taken) == pytest.approx(2.0)


def test_taking_more_of_the_air_takes_more_work():
    works = [least_work(420e-6, share) for share in (1e-6, 0.25, 0.5, 0.75, 0.99)]
    assert works == sorted(works)
    assert works[0] == pytest.approx(-np.log(420e-6), rel=1e-3)


def test_a_hundred_random_captures_keep_the_second_law():
    random = np.random.default_rng(7)
    for _ in range(100):
        content = random.uniform(0.02, 0.5)
        piece = Absorber(
            share=random.uniform(0.1, 1.0),
            heat_use=random.uniform(2e6, 6e6),
            pressure=random.uniform(1e5, 3e5),
        )
        feed = stream({"CO2": content, "N2": 1 - content}, random.uniform(25, 50))
        assert 0.0 <= piece.run({"feed": feed}).results["efficiency_exergy"] < 1.0


# ----------------------------------------------------------------------------------- membranes
FEED = [0.02, 4.0, 1.0, 0.01, 0.3, 0.1, 1.0]
PERMEANCES = [x * GPU for x in (1000, 150, 60, 12, 3, 2, 1.5)]


def test_without_permeate_pressure_cross_flow_has_a_closed_form():
    # then d ln n_i / ds = -Q_i and A p = sum n_i0 (1 - exp(-Q_i s)) / Q_i
    s = 2e7
    flows, q, p = np.array(FEED), np.array(PERMEANCES), 30e5
    area = float((flows * -np.expm1(-q * s) / q).sum()) / p
    left = cross_flow(FEED, PERMEANCES, area, p, 1e-6)
    assert left == pytest.approx(list(flows * np.exp(-q * s)), rel=1e-5, abs=1e-7)


@pytest.mark.parametrize("area", [3.0, 30.0, 100.0, 300.0])
def test_cross_flow_agrees_with_another_integrator(area):
    from scipy.integrate import solve_ivp

    q = np.array(PERMEANCES)

    def slope(_, flows):
        x = np.maximum(flows, 0.0) / flows.sum()
        j = local_flux(list(x), PERMEANCES, 30e5, 2e5)
        return -q * x * 30e5 * j / (j + q * 2e5)

    found = solve_ivp(slope, (0.0, area), FEED, method="Radau", rtol=1e-9, atol=1e-12)
    left = cross_flow(FEED, PERMEANCES, area, 30e5, 2e5)
    assert np.abs(np.array(left) - found.y[:, -1]).max() < 1e-6 * sum(FEED)


def test_the_integration_has_converged():
    for area in (1.0, 30.0, 100.0, 400.0):
        usual = cross_flow(FEED, PERMEANCES, area, 30e5, 2e5)
        closer = cross_flow(FEED, PERMEANCES, area, 30e5, 2e5, tolerance=1e-12)
        gaps = [abs(a - b) / n for a, b, n in zip(usual, closer, FEED, strict=True)]
        assert max(gaps) < 5e-7


def test_a_small_membrane_is_well_mixed():
    area = 1e-3
    crossed = cross_flow(FEED, PERMEANCES, area, 30e5, 2e5)
    mixed = well_mixed(FEED, PERMEANCES, area, 30e5, 2e5)
    passed = [n - a for n, a in zip(FEED, crossed, strict=True)]
    assert passed == pytest.approx([n - b for n, b in zip(FEED, mixed, strict=True)], rel=3e-4)


def test_many_well_mixed_cells_in_a_row_are_cross_flow():
    errors = []
    crossed = np.array(cross_flow(FEED, PERMEANCES, 30.0, 30e5, 2e5))
    for count in (50, 100, 200):
        left = FEED
        for _ in range(count):
            left = well_mixed(left, PERMEANCES, 30.0 / count, 30e5, 2e5)
        errors.append(np.abs(np.array(left) - crossed).max())
    assert errors[0] / errors[1] == pytest.approx(2.0, rel=0.1)  # first order
    assert errors[1] / errors[2] == pytest.approx(2.0, rel=0.1)


def test_a_mixed_membrane_parts_worse_than_cross_flow():
    feed = stream({"CH4": 3.0, "CO2": 2.0}, 40.0, 16.0)
    one = {"area": 300.0, "permeate_pressure": 1.1e5}
    crossed, mixed = (
        Membrane(**one, model=model).run({"feed": feed}).outlets["retentate"]
        for model in ("cross-flow", "well-mixed")
    )
    assert crossed.fraction("CH4") > mixed.fraction("CH4")


def test_more_area_passes_more_and_hydrogen_stops_at_the_permeate_pressure():
    feed = stream({"H2": 3.0, "N2": 1.0}, 60.0, 30.0)
    cuts = []
    for area in (1.0, 3.0, 10.0, 100.0, 1000.0):
        piece = Membrane(area=area, permeate_pressure=2e5, permeance={"H2": 3000 * GPU})
        outcome = piece.run({"feed": feed})
        cuts.append(outcome.results["stage_cut"])
    assert cuts == sorted(cuts)
    retentate = outcome.outlets["retentate"]
    assert retentate.fraction("H2") * 30e5 == pytest.approx(2e5, rel=1e-5)


def test_no_pressure_to_pass_against_and_no_area_leave_the_feed():
    feed = stream({"H2": 3.0, "N2": 1.0}, 60.0, 30.0)
    for settings in (
        {"area": 10.0, "permeate_pressure": 29e5},
        {"area": 1e-9, "permeate_pressure": 1e5},
    ):
        outcome = Membrane(**settings, permeance={"H2": 150 * GPU}).run({"feed": feed})
        assert outcome.results["stage_cut"] == pytest.approx(0.0, abs=1e-9)


def test_a_hundred_random_membranes_pass_no_component_against_its_pressure():
    random = np.random.default_rng(3)
    for _ in range(100):
        flows = random.dirichlet(np.ones(4))
        q = list(random.uniform(0, 200, 4) * GPU)
        low = random.uniform(1e5, 9e5)
        for model in (cross_flow, well_mixed):
            left = model(list(flows), q, random.uniform(0.1, 300), 10e5, low)
            assert all(0.0 <= a <= n for a, n in zip(left, flows, strict=True))


def test_wrong_membranes_are_refused_with_one_sentence():
    with pytest.raises(ValidationError, match="out of range"):
        Membrane(area=1.0, permeate_pressure=1e5, permeance={"H2": "-150 GPU"})
    with pytest.raises(ValidationError, match="nothing passes: give at least one permeance"):
        Membrane(area=1.0, permeate_pressure=1e5, permeance={"H2": 0.0})
    piece = Membrane(area=1.0, permeate_pressure=2e5)
    faults = list(piece.pressure_faults({"feed": (1e5,)}))
    assert len(faults) == 1
    assert "put a compressor before it" in faults[0][1]
    dry = Matter.of(("Ar",))
    ((path, text),) = piece.setting_faults(dry)
    assert path == ("permeance",)
    assert "no component of this plant has a permeance" in text


def test_liquid_and_plasticising_feeds_get_cautions():
    wet = stream({"CH4": 1.0, "CO2": 1.0, "H2O": 0.5}, 20.0, 16.0)
    outcome = Membrane(area=10.0, permeate_pressure=1e5).run({"feed": wet})
    assert {c.code for c in outcome.cautions} == {"liquid-at-membrane", "membrane-swells"}


# ------------------------------------------------------------------------------ pressure swing
def test_pressure_swing_gives_recovery_and_purity():
    feed = stream({"H2": 4.0, "CO2": 0.8, "CH4": 0.2, "H2O": 0.01}, 60.0, 25.0)
    outcome = PressureSwing(recovery=0.85, purity=0.999).run({"feed": feed})
    product = outcome.outlets["product"]
    assert product.flow("H2") == pytest.approx(3.4, rel=1e-12)
    assert product.fraction("H2") == pytest.approx(0.999, rel=1e-12)
    assert product.flow("H2O") == 0.0
    assert product.flow("CO2") / product.flow("CH4") == pytest.approx(4.0)


def test_a_feed_purer_than_wanted_is_not_made_worse():
    feed = stream({"H2": 4.0, "N2": 1e-3}, 30.0, 25.0)
    outcome = PressureSwing(purity=0.99).run({"feed": feed})
    assert outcome.results["purity"] == pytest.approx(feed.fraction("H2"), rel=1e-9)


def test_pressure_swing_refuses_a_feed_below_its_tail_gas():
    assert list(PressureSwing(tail_pressure=2e5).pressure_faults({"feed": (1.5e5,)}))
    with pytest.raises(ValidationError, match="out of range"):
        PressureSwing(recovery=1.2)


def test_vacuum_for_nothing_is_an_idealisation():
    feed = stream({"CO2": 1.0, "N2": 5.0}, 30.0, 1.05)
    piece = PressureSwing(
        component="CO2", purity=0.95, product_pressure=1.01325e5, tail_pressure=1.03e5
    )
    assert [n.code for n in piece.run({"feed": feed}).idealisations] == ["free-separation"]


# ------------------------------------------------------------------------------------- water
def test_water_treatment_splits_and_warms():
    raw = stream({"H2O": 4.0}, 15.0, 3.0)
    outcome = WaterTreatment(recovery=0.5, power_use=3.6e6).run({"inlet": raw})
    water, reject = outcome.outlets["water"], outcome.outlets["reject"]
    assert water.total == pytest.approx(2.0)
    assert reject.total == pytest.approx(2.0)
    # 1 kWh in a cubic metre of product and one of reject: 3.6e6 J / (2000 kg * 4186 J/kg/K)
    assert water.temperature - raw.temperature == pytest.approx(0.43, abs=0.01)
    assert outcome.power == pytest.approx(3.6e6 * outcome.results["water_m3_s"])


def test_a_call_passes_through_water_treatment():
    assert WaterTreatment().passes_calls
