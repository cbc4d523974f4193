"""Fischer-Tropsch synthesis, the flash drum and cuts: limits, trends, hand checks."""

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.equipment.base import Site
from chainflow.equipment.chain_lengths import ChainLengths, Olefins
from chainflow.equipment.expansion import Pump
from chainflow.equipment.fischer_tropsch import FischerTropschReactor
from chainflow.equipment.liquid_fuels import Cut, FlashDrum, carbon_numbers
from chainflow.equipment.published import maretto_1999
from chainflow.equipment.synthesis_bed import Bed
from chainflow.thermo.chains import WAX, alkane, alkene
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream
from tests.equipment.cases_liquid_fuels import ALL, GASES, PARAFFINS, product, syngas

PLAIN = ChainLengths(0.0, 1.0, Olefins(0.0, 0.0, 0.3), 30)
GIVEN = {"temperature": "220 degC", "conversion": "50 %"}


def reactor(**settings):
    return FischerTropschReactor.model_validate({**GIVEN, **settings})


def run(piece, feed, port="feed", **site):
    return piece.run({port: feed}, site=Site(feed.matter, **site))


def said(settings, cls=FischerTropschReactor):
    with pytest.raises(ValidationError) as caught:
        cls.model_validate(settings)
    (error,) = caught.value.errors()
    return error["msg"]


# ----------------------------------------------------------------------------- distribution
@pytest.mark.parametrize("growth", [0.5, 0.7, 0.85, 0.9, 0.95, 0.98])
@pytest.mark.parametrize("longest", [4, 12, 30])
def test_all_carbon_is_somewhere(growth, longest):
    for chains in (
        ChainLengths(0.0, 1.0, Olefins(0.0, 0.0, 0.3), longest),
        ChainLengths(0.05, 0.5, Olefins(0.1, 2.0, 0.3), longest),
    ):
        assert chains.carbon(growth).sum() == pytest.approx(1.0, rel=1e-14)
        made = chains.made(growth, ALL)
        assert np.abs(ALL.formula @ made).max() <= 1e-14
        assert (np.delete(made, [ALL.index["CO"], ALL.index["H2"]]) >= 0.0).all()


def test_chains_thin_out_by_the_growth_per_carbon_atom():
    made = PLAIN.made(0.87, ALL)
    moles = [made[ALL.index[alkane(n)]] for n in range(1, 31)]
    assert np.divide(moles[1:], moles[:-1]) == pytest.approx(np.full(29, 0.87), rel=1e-12)


def test_olefins_fall_with_the_length_and_end_at_twenty():
    chains = ChainLengths(0.0, 1.0, Olefins(0.1, 2.0, 0.3), 30)
    made = chains.made(0.9, ALL)
    ratios = [made[ALL.index[alkene(n)]] / made[ALL.index[alkane(n)]] for n in range(2, 21)]
    assert ratios[0] == pytest.approx(0.1)
    assert ratios[1:] == pytest.approx([2.0 * np.exp(-0.3 * (n - 3)) for n in range(3, 21)])
    assert carbon_numbers(ALL)[ALL.index[alkene(20)]] == 20


def test_alkenes_that_are_no_components_are_alkanes():
    some = Matter.of((*GASES, "C3H6", *(alkane(n) for n in range(2, 13)), WAX))
    made = ChainLengths(0.0, 1.0, Olefins(0.1, 2.0, 0.3), 12).made(0.9, some)
    assert made[some.index["C3H6"]] == pytest.approx(2.0 * made[some.index["C3H8"]])
    plain = ChainLengths(0.0, 1.0, Olefins(0.0, 0.0, 0.3), 12).made(0.9, some)
    assert made[some.index["n-C5H12"]] == pytest.approx(plain[some.index["n-C5H12"]])


def test_what_c2_loses_goes_to_longer_chains_and_extra_methane_comes_off_all():
    plain, less = PLAIN.carbon(0.9), ChainLengths(0.0, 0.5, Olefins(0, 0, 0.3), 30).carbon(0.9)
    assert less[1] == pytest.approx(0.5 * plain[1])
    assert less[0] == pytest.approx(plain[0])
    assert less[2:] / plain[2:] == pytest.approx(np.full(29, less[2] / plain[2]))
    more = ChainLengths(0.08, 1.0, Olefins(0, 0, 0.3), 30).carbon(0.9)
    assert more[0] == pytest.approx(0.92 * plain[0] + 0.08)


def test_methane_alone_is_methanation():
    """Growth towards nothing is not allowed; extra methane near one comes close: CO + 3 H2."""
    made = ChainLengths(0.999999, 1.0, Olefins(0, 0, 0.3), 30).made(0.9, ALL)
    assert -made[ALL.index["H2"]] == pytest.approx(3.0, abs=1e-5)


# --------------------------------------------------------------------------------- reactor
def test_hundred_random_points_keep_atoms_and_give_heat():
    random = np.random.default_rng(11)
    for _ in range(100):
        settings = {
            "temperature": random.uniform(460.0, 620.0),
            "conversion": random.uniform(0.05, 0.9),
            "chain_growth": random.uniform(0.6, 0.98),
            "extra_methane": random.uniform(0.0, 0.3),
            "two_share": random.uniform(0.0, 1.0),
            "olefin_ratio": random.uniform(0.0, 6.0),
            "shift_approach": random.choice([0.0, random.uniform(0.0, 1.0)]),
        }
        level = settings["temperature"] - 273.15
        feed = syngas(ALL, level, random.uniform(5.0, 40.0), H2=random.uniform(6.0, 9.0))
        outcome = run(FischerTropschReactor.model_validate(settings), feed)
        made = outcome.outlets["product"]
        atoms = ALL.formula @ feed.flows
        assert np.abs(ALL.formula @ made.flows - atoms).max() <= 1e-12 * atoms.sum()
        assert (made.flows >= 0.0).all()
        assert outcome.heat < 0.0
        assert made.enthalpy == pytest.approx(feed.enthalpy + outcome.heat, rel=1e-12)
        assert made.lhv < feed.lhv
        ideal = outcome.results["growth_probability"]
        assert ideal == settings["chain_growth"]


def test_more_growth_makes_longer_chains_and_uses_less_hydrogen():
    grid = np.linspace(0.6, 0.98, 12)
    results = [run(reactor(chain_growth=float(a)), syngas(ALL)).results for a in grid]
    for name, sign in (("share_wax", 1), ("usage_H2_CO", -1), ("share_methane", -1)):
        assert (sign * np.diff([r[name] for r in results]) > 0.0).all(), name


def test_shares_of_the_carbon_are_complete():
    outcome = run(reactor(shift_approach="70 %"), syngas(ALL))
    feed, made = syngas(ALL), outcome.outlets["product"]
    carbon = carbon_numbers(ALL)
    gained = (made.flows - feed.flows) * carbon
    used = feed.flow("CO") - made.flow("CO")
    light = gained[(carbon >= 2) & (carbon <= 4)].sum() / used
    results = outcome.results
    whole = results["share_methane"] + light + results["share_C5_plus"] + results["share_CO2"]
    assert whole == pytest.approx(1.0, rel=1e-12)
    assert 0.0 < results["share_wax"] < results["share_C5_plus"]


def test_shift_at_the_full_way_is_the_equilibrium():
    from chainflow.thermo.electrochemistry import GAS_CONSTANT
    from chainflow.thermo.species import polynomial

    made = run(reactor(temperature="300 degC", shift_approach="100 %"), syngas(ALL)).outlets[
        "product"
    ]
    quotient = made.flow("CO2") * made.flow("H2") / (made.flow("CO") * made.flow("H2O"))
    g = {n: polynomial(n).gibbs(573.15) for n in ("CO2", "H2", "CO", "H2O")}
    constant = np.exp((g["CO"] + g["H2O"] - g["CO2"] - g["H2"]) / (GAS_CONSTANT * 573.15))
    assert quotient == pytest.approx(constant, rel=1e-6)
    some = run(reactor(temperature="300 degC", shift_approach="30 %"), syngas(ALL))
    none = run(reactor(temperature="300 degC"), syngas(ALL))
    carbon_dioxide = [o.outlets["product"].flow("CO2") for o in (none, some)] + [made.flow("CO2")]
    ahead = carbon_dioxide[2] - carbon_dioxide[0]
    assert carbon_dioxide[1] - carbon_dioxide[0] == pytest.approx(0.3 * ahead)


def test_heat_is_given_off_at_the_temperature_of_the_reactor():
    outcome = run(reactor(longest="12"), syngas(PARAFFINS), outlets=frozenset({"heat"}))
    heat = outcome.outlets["heat"]
    assert heat.start == heat.end == pytest.approx(493.15)
    per_monoxide = heat.rate / (0.5 * 2.0)
    assert 130e3 < per_monoxide < 170e3  # what remains after the feed is heated to 220 degC


@pytest.mark.parametrize("growth_by", ["yermakova-2000", "song-2004", "vervloet-2012"])
def test_a_correlation_agrees_with_the_gas_that_it_leads_to(growth_by):
    import importlib

    module = importlib.import_module(f"chainflow.equipment.published.{growth_by.replace('-', '_')}")
    feed = syngas(ALL)
    outcome = run(reactor(growth_by=growth_by, temperature="225 degC"), feed)
    made = outcome.outlets["product"]
    ratio = made.flow("H2") / made.flow("CO")
    expected = module.chain_growth(ratio, 498.15, module.NUMBERS)
    found = outcome.results["growth_probability"]
    assert found == pytest.approx(min(max(expected, 0.70), 0.96), rel=1e-9)


def test_a_correlation_beyond_what_is_believed_is_held_back_and_says_so():
    outcome = run(reactor(growth_by="song-2004", temperature="300 degC"), syngas(ALL))
    assert outcome.results["growth_probability"] == 0.70
    assert "chain-growth-limited" in {c.code for c in outcome.cautions}
    lifted = run(reactor(growth_by="song-2004", numbers={"b": "0.75"}), syngas(ALL))
    plain = run(reactor(growth_by="song-2004"), syngas(ALL))
    name = "growth_probability"
    assert lifted.results[name] > plain.results[name] + 0.05


# ----------------------------------------------------------------------------- cobalt bed
def conversion(mass, **more):
    settings = {"temperature": "225 degC", "catalyst": mass, **more}
    piece = FischerTropschReactor.model_validate(settings)
    return run(piece, syngas(ALL)).results["conversion_per_pass"]


def test_more_catalyst_or_activity_converts_more_and_never_all():
    found = [conversion(float(m)) for m in (1.0, 10.0, 50.0, 200.0, 1000.0, 1e5)]
    assert (np.diff(found) > 0.0).all()
    assert found[-1] < 1.0
    assert conversion(50.0, activity=4.0) == pytest.approx(conversion(200.0), rel=1e-12)


def test_a_thin_bed_reacts_at_the_rate_of_its_feed():
    feed = syngas(ALL)
    a, b = maretto_1999.constants(498.15, maretto_1999.NUMBERS)
    share = feed.flows / feed.flows.sum() * 25e5
    p_co, p_h2 = share[ALL.index["CO"]], share[ALL.index["H2"]]
    rate = a * p_co * p_h2 / (1.0 + b * p_co) ** 2
    assert conversion(1e-3) * feed.flow("CO") == pytest.approx(1e-3 * rate, rel=1e-4)


def test_the_bed_agrees_with_stepping_along_it():
    feed, made = syngas(ALL), PLAIN.made(0.9, ALL)
    mass, steps = 400.0, 40_000
    gas = carbon_numbers(ALL) <= 9
    a, b = maretto_1999.constants(498.15, maretto_1999.NUMBERS)
    x, f = 0.0, feed.flow("CO")

    def rate(x):
        n = feed.flows + made * f * x
        p = n / n[gas].sum() * 25e5
        p_co = p[ALL.index["CO"]]
        return a * p_co * p[ALL.index["H2"]] / (1.0 + b * p_co) ** 2

    for _ in range(steps):  # midpoint rule
        half = x + 0.5 * mass / steps * rate(x) / f
        x += mass / steps * rate(half) / f
    bed = Bed(mass, maretto_1999.NUMBERS)
    assert bed.conversion(feed.flows, made, 498.15, 25e5, ALL) == pytest.approx(x, rel=1e-6)


def test_a_bed_short_of_hydrogen_stops_where_it_ends():
    piece = FischerTropschReactor.model_validate({"temperature": "225 degC", "catalyst": 1e6})
    outcome = run(piece, syngas(ALL, H2=1.0))
    assert not outcome.unmet
    assert 0.0 <= outcome.outlets["product"].flow("H2") < 1e-6


# ------------------------------------------------------------------------- wrong settings
def test_wrong_settings_get_one_clear_sentence():
    assert "out of range" in said({**GIVEN, "chain_growth": "1.0"})
    assert "0.98" in said({**GIVEN, "chain_growth": "1.0"})
    assert "out of range" in said({**GIVEN, "conversion": "120 %"})
    assert said({"temperature": "220 degC"}).endswith("give one of 'conversion' and 'catalyst'")
    assert "'conversion' and 'catalyst'" in said({**GIVEN, "catalyst": "10 kg"})
    assert "there is no bb in the model in use" in said(
        {**GIVEN, "growth_by": "song-2004", "numbers": {"bb": "1"}}
    )
    assert "100 %, wanted some chains" in said({**GIVEN, "extra_methane": "100 %"})
    assert "'temperature' and 'adiabatic'" in said({**GIVEN, "adiabatic": "true"})
    assert "30" in said({**GIVEN, "longest": "31"})


def test_missing_components_are_named():
    piece = reactor()
    found = list(piece.setting_faults(PARAFFINS))
    assert len(found) == 1
    assert "n-C13H28" in found[0][1]
    assert "n-C12H26," not in found[0][1]
    assert not list(reactor(longest="12").setting_faults(PARAFFINS))
    wanted = reactor(longest="12", olefin_ratio="3")
    assert ["no 1-alkene" in text for _, text in wanted.setting_faults(PARAFFINS)] == [True]
    core = Matter.of(DEFAULT_COMPONENTS)
    assert any("C2H6" in text for _, text in reactor().setting_faults(core))


def test_too_much_for_its_hydrogen_is_said_with_numbers():
    outcome = run(reactor(conversion="90 %"), syngas(ALL, H2=2.0))
    assert "the feed has 2:" in outcome.unmet["feed"]
    assert outcome.outlets["product"].flow("H2") == pytest.approx(0.0, abs=1e-12)


# --------------------------------------------------------------------------------- drum
def drum(celsius, inlet, **settings):
    piece = FlashDrum.model_validate({"temperature": f"{celsius} degC", **settings})
    return run(piece, inlet, "inlet")


def test_outlets_of_a_drum_are_the_phases_of_its_inlet():
    inlet = product(ALL, 220.0, 24.0, 30)
    outcome = drum(40.0, inlet)
    held = Stream.at(ALL, inlet.flows, 313.15, 24e5)
    gas, oil, water = (outcome.outlets[name] for name in ("gas", "oil", "water"))
    assert gas.flows == pytest.approx(held.gas)
    assert oil.flows == pytest.approx(held.liquid)
    assert water.flows == pytest.approx(held.water)
    assert outcome.heat == pytest.approx(held.enthalpy - inlet.enthalpy, rel=1e-9)
    assert outcome.results["oil_kg_s"] == pytest.approx(oil.mass_flow)


def test_each_outlet_of_a_drum_stays_in_one_phase():
    """What leaves is at its dew or bubble point: found again at the same state it is the same."""
    outcome = drum(40.0, product(ALL, 220.0, 24.0, 30))
    for name, phase in (("gas", "gas"), ("oil", "liquid"), ("water", "water")):
        s = outcome.outlets[name]
        again = Stream.at(ALL, s.flows, s.temperature, s.pressure)
        assert again.phase_totals[phase] == pytest.approx(s.total, rel=1e-6)


def test_a_colder_or_denser_drum_keeps_more_oil():
    inlet = product(ALL, 220.0, 24.0, 30)
    mass = [drum(t, inlet).results["oil_kg_s"] for t in (150.0, 120.0, 90.0, 60.0, 30.0, 5.0)]
    assert (np.diff(mass) > 0.0).all()
    by_pressure = [
        drum(40.0, inlet, pressure=f"{p} bar").results["oil_kg_s"] for p in (1, 2, 5, 10, 20)
    ]
    assert (np.diff(by_pressure) > 0.0).all()


def test_a_drum_without_a_temperature_takes_no_heat():
    inlet = product(ALL, 60.0, 24.0, 30)
    outcome = run(FlashDrum.model_validate({"pressure": "2 bar"}), inlet, "inlet")
    assert outcome.heat == 0.0
    assert not outcome.duties
    leaving = sum(s.enthalpy for s in outcome.outlets.values())
    assert leaving == pytest.approx(inlet.enthalpy, rel=1e-13)
    assert {s.temperature for s in outcome.outlets.values()} == {outcome.outlets["gas"].temperature}


def test_carbon_dioxide_stays_in_the_gas_if_told_so():
    inlet = product(ALL, 220.0, 24.0, 30)
    assert drum(40.0, inlet).outlets["water"].flow("CO2") > 0.0
    assert drum(40.0, inlet, dissolved="false").outlets["water"].flow("CO2") == 0.0


def test_a_drum_above_its_feed_is_a_fault():
    piece = FlashDrum.model_validate({"pressure": "30 bar"})
    (fault,) = piece.pressure_faults({"inlet": (10e5,)})
    assert "pump or compressor" in fault[1]


def test_a_pump_does_the_work_of_volume_on_an_oil():
    flows = PARAFFINS.vector({"n-C10H22": 1.0})
    inlet = Stream.at(PARAFFINS, flows, 300.0, 1e5)
    pump = Pump.model_validate({"pressure": "51 bar", "efficiency": "100 %"})
    outcome = run(pump, inlet, "inlet")
    # 0.73 kg/L at 20 degC, CRC Handbook: 0.195 L/mol times 50 bar
    assert outcome.power == pytest.approx(195e-6 * 50e5, rel=0.01)
    assert outcome.outlets["outlet"].temperature == pytest.approx(300.0, abs=1e-6)
    assert outcome.outlets["outlet"].entropy == pytest.approx(inlet.entropy, rel=1e-12)


# ---------------------------------------------------------------------------------- cuts
def test_cuts_take_their_carbon_numbers_and_leave_the_rest():
    inlet = product(ALL, 40.0, 24.0, 30, 0.2)
    cuts = {"naphtha": "C5-C9", "kerosene": "C9-C16", "wax": "C21+"}
    outcome = run(Cut.model_validate({"cuts": cuts, "heat": "100 kJ/mol"}), inlet, "inlet")
    carbon = carbon_numbers(ALL)
    parts = outcome.outlets
    assert sum(s.flows for s in parts.values()) == pytest.approx(inlet.flows, rel=1e-15)
    for name, low, high in (("naphtha", 5, 9), ("kerosene", 10, 16), ("wax", 21, 40)):
        there = np.flatnonzero(parts[name].flows)
        assert carbon[there].min() == low
        assert carbon[there].max() == high
    left = set(carbon[np.flatnonzero(parts["rest"].flows)])
    assert left == {0.0, 1.0, 2.0, 3.0, 4.0, 17.0, 18.0, 19.0, 20.0}
    assert outcome.results["minimum_work_W"] > 0.0


def test_a_cut_that_costs_nothing_is_owned_up_to():
    inlet = product(ALL, 40.0, 24.0, 30, 0.2)
    free = run(Cut.model_validate({"cuts": {"heavy": "C5+"}}), inlet, "inlet")
    assert [note.code for note in free.idealisations] == ["free-separation"]
    paid = run(Cut.model_validate({"cuts": {"heavy": "C5+"}, "heat": "80 kJ/mol"}), inlet, "inlet")
    assert not paid.idealisations


def test_wrong_cuts_get_one_clear_sentence():
    for text in ("C5..C9", "5-9", "C5-", "n-C5", "C100"):
        assert "is no range of carbon numbers" in said({"cuts": {"light": text}}, Cut)
    assert "ends before it begins" in said({"cuts": {"light": "C9-C5"}}, Cut)
    assert "cannot be called 'rest'" in said({"cuts": {"rest": "C5-C9"}}, Cut)
    assert "at least 1" in said({"cuts": {}}, Cut)
    piece = Cut.model_validate({"cuts": {"all": "C1+", "none": "C5-C9"}})
    (fault,) = piece.setting_faults(ALL)
    assert fault[0] == ("cuts", "none")
    assert "no hydrocarbon of C5-C9 is left" in fault[1]
