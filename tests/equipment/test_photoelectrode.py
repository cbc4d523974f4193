"""The photoelectrode: where its curves cross, what it makes, and where the light goes."""

from math import inf, isfinite

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import ValidationError

from chainflow.basis.constants import ELEMENTARY_CHARGE, FARADAY
from chainflow.equipment.photo.circuit import Circuit, Overpotential
from chainflow.equipment.photo.electrode_curves import MeasuredElectrode, ShapedElectrode
from chainflow.equipment.photo.junctions import Junction
from chainflow.thermo.components import Matter
from tests.equipment.feeds import MATTER
from tests.equipment.photo import BUDGET, OXIDE, TANDEM, at_work, codes, device, results

EV = ELEMENTARY_CHARGE
LIGHTS = st.sampled_from([0.0, 1e-6, 3.0, 40.0, 110.0, 300.0])

# ---------------------------------------------------------------------- curves that cross
JUNCTIONS = st.builds(
    Junction,
    light=LIGHTS,
    dark=st.sampled_from([1e-25, 1e-12, 1e-5, 1.0]),
    level=st.floats(0.02, 0.2),
    series=st.sampled_from([0.0, 1e-4, 5e-3]),
    shunt=st.sampled_from([inf, 10.0, 0.05]),
)
MEASURED = st.builds(
    lambda start, steps, scale: MeasuredElectrode(
        tuple(start + 0.05 * i for i in range(len(steps))),
        tuple(np.cumsum(steps).tolist()),
        scale,
    ),
    st.floats(-1.0, 2.0),
    st.lists(st.sampled_from([0.0, 0.0, 0.5, 3.0, 20.0]), min_size=3, max_size=12).filter(any),
    st.sampled_from([1e-3, 1.0]),
)
SHAPED = st.builds(
    lambda onset, rise, width, limit: ShapedElectrode(onset, onset + rise, width, limit),
    st.floats(-1.0, 2.0),
    st.floats(0.01, 1.0),
    st.floats(0.02, 0.3),
    st.sampled_from([1e-3, 20.0, 150.0]),
)
CIRCUITS = st.builds(
    Circuit,
    electrode=st.one_of(MEASURED, SHAPED),
    part=st.sampled_from([1.0, 0.4]),
    junctions=st.lists(JUNCTIONS, max_size=3).map(tuple),
    counter=st.builds(Overpotential, st.floats(0.02, 0.2), st.sampled_from([1e-8, 1e-2, 10.0])),
    resistance=st.sampled_from([0.0, 5e-4, 0.02]),
    base=st.sampled_from([0.0, 1.23]),
    bias=st.sampled_from([0.0, 0.5, 4.0]),
)


@settings(max_examples=600, deadline=None, derandomize=True)
@given(CIRCUITS)
def test_a_crossing_is_found_for_every_pair_of_monotone_curves_that_has_one(circuit):
    """Just below the current found more is given than needed, just above it less (or it ends)."""
    has_one = circuit.limit > 0.0 and circuit.given(0.0) > circuit.needed(0.0)
    assert circuit.crosses == has_one
    density = circuit.density
    if not has_one:
        assert density == 0.0
        return
    assert 0.0 < density <= circuit.limit
    below, above = density * (1.0 - 1e-9), density * (1.0 + 1e-9)
    assert circuit.given(below) > circuit.needed(below) - 1e-9
    if above < circuit.limit:
        assert circuit.given(above) < circuit.needed(above) + 1e-9
    # whatever is at its limit takes what is left: the voltages add up
    around = circuit.base + circuit.counter.voltage(density) + density * circuit.resistance
    total = sum(circuit.voltages()) + circuit.bias
    assert total == pytest.approx(around + circuit.drive, abs=1e-9)
    assert all(isfinite(x) for x in (circuit.per_volt, circuit.by_electrode, circuit.by_cell))


@settings(max_examples=200, deadline=None, derandomize=True)
@given(CIRCUITS)
def test_curves_are_monotone(circuit):
    if not circuit.limit > 0.0:
        return
    grid = np.linspace(0.0, 0.999, 40) * circuit.limit
    needed = [circuit.needed(x) for x in grid]
    offered = [circuit.given(x) for x in grid]
    assert (np.diff(needed) >= -1e-12).all()
    assert (np.diff(offered) <= 1e-12).all()


def test_an_unlit_junction_that_leaks_is_monotone():
    """Driven backwards its diode passes J_0 and its shunt the rest: V = -(J - J_0) R far below."""
    junction = Junction(light=0.0, dark=1.0, level=0.0625, series=0.0, shunt=10.0)
    volts = [junction.voltage(density) for density in np.linspace(0.0, 3.0, 301)]
    assert (np.diff(volts) < 0.0).all()
    assert volts[-1] == pytest.approx(-(3.0 - 1.0) * 10.0, rel=1e-12)


def test_more_given_moves_the_crossing_as_its_slopes_say():
    from dataclasses import replace

    piece = device(**TANDEM)
    circuit = piece.circuit(800.0)
    more, less = (replace(circuit, bias=volts).density for volts in (1e-5, -1e-5))
    assert circuit.per_volt == pytest.approx((more - less) / 2e-5, rel=1e-5)
    bright, dim = (piece.circuit(800.0 * (1.0 + x)).density for x in (1e-5, -1e-5))
    relative = (bright - dim) / 2e-5 / circuit.density
    assert circuit.by_electrode + circuit.by_cell == pytest.approx(relative, rel=1e-5)


def test_on_a_flat_piece_of_a_measured_curve_only_light_moves_the_current():
    from dataclasses import replace

    flat = MeasuredElectrode((0.2, 0.4, 0.6, 0.8, 1.0), (0.0, 20.0, 20.0, 20.0, 40.0), 1.0)
    circuit = Circuit(flat, 1.0, (), Overpotential(0.03, 10.0), 1e-4, 0.0, 0.6)
    assert circuit.density == pytest.approx(20.0, rel=1e-12)
    assert (circuit.per_volt, circuit.by_electrode, circuit.by_cell) == (0.0, 1.0, 0.0)
    assert 0.4 < circuit.drive < 0.6  # what overpotential and drop leave of 0.6 V
    assert replace(circuit, bias=0.62).density == pytest.approx(20.0, rel=1e-12)
    brighter = replace(circuit, electrode=replace(flat, scale=1.01))
    assert brighter.density == pytest.approx(20.2, rel=1e-12)


@pytest.mark.parametrize(
    ("onset", "more", "says"),
    [
        ("1.7 V", {"cell": {"gaps": ["1.4 eV"]}}, "the cell gives 0.94 V where 1.7 V are needed"),
        ("0.5 V", {"bias": "0.2 V"}, "the bias gives 0.2 V where 0.5 V are needed"),
        # 0.859 V (detailed balance, computed) - 0.178 V (non-radiative) - 0.013 V (less light)
        (
            "1.5 V",
            {"cell": {"gaps": ["1.1 eV"]}, "bias": "0.2 V"},
            "the cell and the bias give 0.87 V where 1.5 V are needed",
        ),
        (
            "0.5 V",
            {},
            (
                "nothing gives a voltage where 0.5 V are needed; put a solar 'cell' behind or set "
                "'bias'"
            ),
        ),
    ],
)
def test_curves_that_do_not_cross(onset, more, says):
    piece = device(band_gap="2 eV", shape={"onset": onset, "half_wave": "1.9 V"}, **more)
    outcome = at_work(piece)
    assert outcome.unmet == {"hydrogen": f"these curves do not cross: {says}"}
    assert outcome.results["current_density_A_m2"] == 0.0
    assert float(outcome.outlets["hydrogen"].total) == 0.0


def test_in_dim_light_a_device_stands_still_and_says_so():
    piece = device(**{**TANDEM, "shape": {"onset": "1.1 V", "half_wave": "1.3 V"}})
    assert at_work(piece).unmet == {}
    dim = at_work(piece, 1.0)
    assert dim.unmet == {}
    assert "too-dim" in {caution.code for caution in dim.cautions}
    assert float(dim.outlets["hydrogen"].total) == 0.0
    dark = at_work(piece, 0.0)
    assert dark.unmet == {}
    assert dark.cautions == ()


# --------------------------------------------------------------------- hand calculations
def test_hydrogen_follows_from_the_current_by_faraday():
    found = results(device(**TANDEM, faraday_efficiency="97 %"))
    assert found["current_A"] == pytest.approx(100.0 * found["current_density_A_m2"], rel=1e-12)
    made = 0.97 * found["current_A"] / (2.0 * FARADAY)
    assert found["hydrogen_mol_s"] == pytest.approx(made, rel=1e-12)


def test_the_solar_to_hydrogen_efficiency_is_that_of_the_definition():
    # Chen et al., J. Mater. Res. 25 (2010) 3: j (1.23 V) eta_F / P; with a bias 1.23 V less it
    found = results(device(**TANDEM, faraday_efficiency="97 %"))
    density = found["current_density_A_m2"] / 10.0  # [mA/cm2]
    assert found["solar_to_hydrogen"] == pytest.approx(density * 1.23 * 0.97 / 100.0, rel=1e-3)
    assert found["solar_to_hydrogen_net_of_bias"] == found["solar_to_hydrogen"]
    biased = results(device(**OXIDE, bias="0.8 V"))
    density = biased["current_density_A_m2"] / 10.0
    assert biased["solar_to_hydrogen_net_of_bias"] == pytest.approx(
        density * (1.23 - 0.8) / 100.0, rel=4e-3
    )


def test_the_plateau_is_available_current_times_the_efficiencies():
    """14.59 mA/cm2 above 2.0 eV in 1000.37 W/m2, computed elsewhere from the spectrum."""
    piece = device(**{**TANDEM, "separation": "70 %", "catalyst": "90 %"})
    found = results(piece)
    assert found["available_current_A_m2"] == pytest.approx(145.9 / 1.00037, rel=0.001)
    assert found["electrode_limit_A_m2"] == pytest.approx(
        0.8 * 0.7 * 0.9 * found["available_current_A_m2"], rel=1e-12
    )


def test_a_silicon_cell_behind_gets_the_light_between_the_gaps():
    """44.23 less 14.59 mA/cm2 between 1.1 and 2.0 eV, computed elsewhere; 5 % is reflected and 5 %
    of what lies above 2.0 eV gets through."""
    found = results(device(**{**TANDEM, "cell": {"gaps": ["1.1 eV"], "quantum_efficiency": 1}}))
    between = 0.95 * (442.3 - 145.9 + 0.05 * 145.9) / 1.00037
    assert found["cell_limit_A_m2"] == pytest.approx(between, rel=0.001)


def test_open_circuit_voltage_of_an_ideal_cell_is_that_of_the_detailed_balance():
    """1.12 eV: 0.878 V (method Ruehle 2016, computed) with all the light for itself; half of the
    aperture gives half the current through half the area."""
    alone = {
        "gaps": ["1.12 eV"],
        "place": "beside",
        "quantum_efficiency": 1,
        "radiative_efficiency": 1,
    }
    found = results(device(**{**OXIDE, "reflection": 0.0, "cell": alone}))
    assert found["cell_open_circuit_V"] == pytest.approx(0.878, abs=0.005)
    # the non-radiative loss: kT/q ln(1/radiative efficiency), 25.69 mV at 25 degC
    lossy = results(
        device(**{**OXIDE, "reflection": 0.0, "cell": {**alone, "radiative_efficiency": 1e-3}})
    )
    assert found["cell_open_circuit_V"] - lossy["cell_open_circuit_V"] == pytest.approx(
        0.02569 * np.log(1000.0), rel=1e-3
    )
    softer = results(device(**{**OXIDE, "reflection": 0.0, "cell": {**alone, "ideality": 2}}))
    assert softer["cell_open_circuit_V"] == pytest.approx(found["cell_open_circuit_V"], abs=1e-4)


def test_cells_in_series_have_the_voltage_of_all_and_share_the_current():
    one = results(device(**{**TANDEM, "cell": {"gaps": ["1.1 eV"]}, "bias": "1 V"}))
    three = results(device(**{**TANDEM, "cell": {"gaps": ["1.1 eV"], "in_series": 3}}))
    assert three["cell_open_circuit_V"] == pytest.approx(3 * one["cell_open_circuit_V"], rel=1e-12)
    assert three["cell_limit_A_m2"] == pytest.approx(one["cell_limit_A_m2"] / 3, rel=1e-12)


def test_one_diode_with_shunt_is_its_equation():
    junction = Junction(light=120.0, dark=1e-9, level=0.03, series=1e-4, shunt=0.2)
    for density in (0.0, 60.0, 119.9, 121.0):
        inner = junction.voltage(density) + density * junction.series
        found = 120.0 - 1e-9 * np.expm1(inner / 0.03) - inner / 0.2
        assert found == pytest.approx(density, abs=1e-9)
        step = (junction.voltage(density + 1e-5) - junction.voltage(density - 1e-5)) / 2e-5
        assert junction.steepness(density) == pytest.approx(step, rel=1e-5)


def test_an_overpotential_is_tafels_law_at_high_currents():
    law = Overpotential(0.06, 1e-5)
    assert law.voltage(100.0) - law.voltage(10.0) == pytest.approx(0.06, abs=1e-6)
    # 10 mA/cm2 over 1 nA/cm2 are seven decades of 50 mV: 0.35 V, the oxygen electrode by default
    assert Overpotential(0.05, 1e-5).voltage(100.0) == pytest.approx(0.35, abs=0.001)


def test_the_shape_is_zero_at_the_onset_half_at_the_half_wave_and_full_far_beyond():
    curve = ShapedElectrode(0.5, 0.8, 0.05, 100.0)
    assert curve.drive(0.0) == pytest.approx(0.5, abs=1e-12)
    assert curve.drive(49.88) == pytest.approx(0.8, abs=1e-4)
    assert curve.drive(99.9999) > 1.4
    for density in (0.1, 50.0, 99.0):
        step = (curve.drive(density + 1e-6) - curve.drive(density - 1e-6)) / 2e-6
        assert curve.steepness(density) == pytest.approx(step, rel=1e-5)


def test_a_photocathode_is_the_mirror_image_with_a_dark_anode():
    law = {"tafel_slope": "50 mV", "exchange_current": "1e-5 A/m2"}
    found = results(
        device(
            electrode="photocathode",
            band_gap="1.6 eV",
            shape={"onset": "0.6 V", "half_wave": "0.3 V"},
            cell={"gaps": ["1.1 eV"], "in_series": 3},
            counter_electrode=law,
        )
    )
    assert found["electrode_potential_V"] < 0.6
    needed = found["reversible_V"] + found["counter_electrode_V"] + found["electrolyte_V"]
    assert found["needed_V"] == pytest.approx(needed - found["electrode_potential_V"], rel=1e-12)
    assert found["cell_V"] == pytest.approx(found["needed_V"], rel=1e-12)


# --------------------------------------------------------------- common practice, no source
def test_the_same_current_flows_through_all_parts():
    """Common practice, no source: in series the same current flows through both."""
    piece = device(**TANDEM)
    circuit = piece.circuit(1000.0)
    density = circuit.density
    (junction,) = circuit.junctions
    volts, drive = junction.voltage(density), circuit.electrode.drive(density)
    needed = drive + circuit.counter.voltage(density) + density * circuit.resistance
    assert volts == pytest.approx(needed, abs=1e-9)
    assert results(piece)["cell_V"] == pytest.approx(volts, abs=1e-9)


def test_the_cell_supplies_what_the_photoelectrode_does_not():
    """Common practice, no source: 1.23 V and overpotentials of about 0.8 V are needed, the
    photoelectrode supplies about 0.6 V, so the cell behind it must supply the rest, 1.43 V."""
    slow = {"tafel_slope": "60 mV", "exchange_current": "1e-5 A/m2"}
    found = results(
        device(
            band_gap="2.1 eV",
            separation="70 %",
            shape={"onset": "0.65 V", "half_wave": "0.9 V", "width": "60 mV"},
            cell={"gaps": ["1.3 eV", "1.0 eV"], "radiative_efficiency": 0.002},
            counter_electrode={"tafel_slope": "100 mV", "exchange_current": "0.05 A/m2"},
            dark_electrode=slow,
            electrolyte_resistance="8 ohm*cm2",
        )
    )
    assert found["overpotentials_V"] == pytest.approx(0.8, abs=0.05)
    assert found["photovoltage_V"] == pytest.approx(0.6, abs=0.05)
    rest = found["reversible_V"] + found["overpotentials_V"] - found["photovoltage_V"]
    assert found["cell_V"] == pytest.approx(rest, abs=1e-9)
    assert found["cell_V"] == pytest.approx(1.43, abs=0.05)


@pytest.mark.parametrize("irradiance", [50.0, 400.0, 1000.0])
def test_solar_to_hydrogen_is_current_density_times_1_23_v_over_irradiance(irradiance):
    """Common practice, no source."""
    found = results(device(**TANDEM), irradiance)
    share = found["current_density_A_m2"] * 1.23 / irradiance
    assert found["solar_to_hydrogen"] == pytest.approx(share, rel=1e-3)


# ------------------------------------------------------------------------- energy
@pytest.mark.parametrize("irradiance", [0.0, 1.0, 300.0, 1000.0])
@pytest.mark.parametrize("bias", ["0 V", "0.4 V"])
@pytest.mark.parametrize("beside", [False, True])
def test_the_budget_adds_up_to_light_and_bias(irradiance, bias, beside):
    cell = {"gaps": ["1.5 eV", "0.9 eV"]} | ({"place": "beside", "area": "30 %"} if beside else {})
    found = results(device(**{**OXIDE, "cell": cell, "bias": bias}), irradiance)
    parts = [found[name] for name in BUDGET]
    total = found["light_W"] + found["bias_power_W"]
    assert sum(parts) == pytest.approx(total, rel=1e-12, abs=1e-9)
    assert min(parts) >= -1e-9 * total


def test_a_junction_driven_through_its_shunt_keeps_the_budget():
    """The lower junction makes less than the current that the others press through it."""
    cell = {"gaps": ["1.3 eV", "1.25 eV"], "shunt_resistance": "30 ohm*cm2"}
    piece = device(**{**OXIDE, "cell": cell, "bias": "1.2 V"})
    found = results(piece)
    assert found["current_density_A_m2"] > found["cell_limit_A_m2"]
    parts = [found[name] for name in BUDGET]
    assert sum(parts) == pytest.approx(found["light_W"] + found["bias_power_W"], rel=1e-12)
    assert min(parts) >= 0.0


def test_light_is_hydrogen_heat_and_light_passed():
    """In enthalpies: each mol of hydrogen takes the formation enthalpy of its water, 285.83 kJ/mol
    (CODATA Key Values 1989), and what its moisture evaporates."""
    outcome = at_work(device(**TANDEM, temperature="25 degC"))
    found = outcome.results
    rejected = -sum(duty.heat for duty in outcome.duties)
    stored = found["light_W"] - rejected
    made = found["hydrogen_mol_s"]
    moisture = 0.03169 / (1.0 - 0.03169) * 1.5 * 43.99e3  # 3169 Pa at 25 degC, IAPWS; 43.99 kJ/mol
    assert stored / made == pytest.approx(285.83e3 + moisture, rel=1e-3)
    passed = next(d for d in outcome.duties if d.purpose == "light passed")
    assert -passed.heat == found["passed_W"]


def test_no_device_beats_its_detailed_balance():
    """A lossless device of two absorbers is at most the series tandem of its gaps."""
    from chainflow.equipment.sun.photons import reference_photons
    from chainflow.thermo.detailed_balance import DetailedBalance

    balance = DetailedBalance(reference_photons())
    for lower in ("0.9 eV", "1.1 eV", "1.3 eV"):
        found = results(device(**{**OXIDE, "cell": {"gaps": [lower], "in_series": 2}}))
        limit = balance.tandem(2.0 * EV, float(lower[:3]) * EV, 0.0).efficiency
        assert found["solar_to_hydrogen"] < limit


# ------------------------------------------------------------------------- cautions
def test_band_edges_against_the_two_half_reactions():
    assert "band-edge" not in codes(device(**TANDEM, conduction_edge="0.4 V"))
    biased = {**OXIDE, "bias": "0.9 V"}
    assert "band-edge" not in codes(device(**biased, conduction_edge="0.4 V"))
    deep = device(**TANDEM, conduction_edge="-1.2 V")  # valence band at 0.8 V: no oxygen
    assert "band-edge" in codes(deep)
    alone = {**OXIDE, "shape": {"onset": "-0.3 V", "half_wave": "-0.1 V"}}
    assert "band-edge" in codes(device(**alone, conduction_edge="0.4 V"))
    assert "band-edge" not in codes(device(**alone, conduction_edge="-0.2 V"))
    cathode = {
        "electrode": "photocathode",
        "band_gap": "1.1 eV",
        "shape": {"onset": "0.5 V", "half_wave": "0.2 V"},
        "bias": "1.6 V",
    }
    assert "band-edge" in codes(device(**cathode, conduction_edge="0.1 V"))
    assert "band-edge" not in codes(device(**cathode, conduction_edge="-0.5 V"))


def test_a_photovoltage_beyond_the_detailed_balance_is_doubted():
    good = device(**{**OXIDE, "shape": {"onset": "-0.7 V", "half_wave": "-0.5 V"}})
    assert "photovoltage-above-limit" in codes(good)
    assert "photovoltage-above-limit" not in codes(device(**TANDEM))


# ------------------------------------------------------------------------- wrong settings
@pytest.mark.parametrize(
    ("settings", "says"),
    [
        ({"band_gap": "2 eV"}, "'shape' is missing, as {onset:"),
        (
            {**OXIDE, "curve": {"potential": [0, 1, 2], "current_density": [0, 1, 2]}},
            "'shape' and 'curve' are both given",
        ),
        ({**OXIDE, "measured_at": 900.0}, "'measured_at' is of a measured 'curve'"),
        (
            {"band_gap": "2 eV", "shape": {"onset": "0.8 V", "half_wave": "0.5 V"}},
            "wanted a half-wave above the onset of a photoanode",
        ),
        (
            {**OXIDE, "electrode": "photocathode"},
            "wanted a half-wave below the onset of a photocathode",
        ),
        (
            {**OXIDE, "cell": {"gaps": ["2.2 eV"]}},
            "'cell.gaps': 2.2 eV behind a photoelectrode of 2 eV gets hardly any light",
        ),
        ({**OXIDE, "cell": {"gaps": ["1 eV", "1.4 eV"]}}, "1.4 eV stands behind 1 eV"),
        ({**OXIDE, "cell": {"gaps": ["1 eV"], "area": "40 %"}}, "write 'place: beside'"),
        (
            {
                **OXIDE,
                "shape": {**OXIDE["shape"], "saturation": "3 mA/cm2"},
                "catalyst": "80 %",
            },
            "'catalyst' is already in 'shape.saturation'",
        ),
        ({**OXIDE, "band_gap": "2 V"}, "'2 V' is a voltage, wanted a band gap in eV"),
        ({**OXIDE, "cell": {"gaps": []}}, "at least 1 item"),
    ],
)
def test_what_is_said_of_wrong_settings(settings, says):
    with pytest.raises(ValidationError) as caught:
        device(**settings)
    (error,) = caught.value.errors()
    assert says in error["msg"]


@pytest.mark.parametrize(
    ("settings", "path", "says"),
    [
        ({"temperature": "120 degC"}, ("temperature",), "wanted 0 to 100 degC"),
        ({"temperature": "99 degC"}, ("temperature",), "the water boils"),
        ({"quantum_efficiency": "95 %"}, ("quantum_efficiency",), "only 90.25 % of the photons"),
        (
            {"shape": {**OXIDE["shape"], "saturation": "15 mA/cm2"}},
            ("shape", "saturation"),
            "give 13.16 mA/cm2 at most",  # 0.95 * 0.95 * 14.58
        ),
    ],
)
def test_what_is_said_of_settings_that_cannot_be(settings, path, says):
    ((where, text),) = device(**{**OXIDE, **settings}).setting_faults(MATTER)
    assert where == path
    assert says in text


def test_it_needs_hydrogen_oxygen_and_water_among_the_components():
    ((path, text),) = device(**OXIDE).setting_faults(Matter.of(("H2", "H2O")))
    assert path == ("kind",)
    assert text == "electrolysis needs O2 among the components"


def test_a_power_port_is_there_only_with_a_bias():
    assert device(**TANDEM).port("power", inlet=True) is None
    assert device(**TANDEM, bias="0.2 V").port("power", inlet=True) is not None
