"""Heat over temperature: where a path is cut, and the entropy that goes with each part."""

from dataclasses import replace

import numpy as np
import pytest

from chainflow.equipment.base import Site
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.path_cuts import find_way
from chainflow.equipment.separation import Condenser
from chainflow.thermo.dew import dew_slopes, oil_dew_slopes
from chainflow.thermo.phases import any_liquid
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import saturation_temperature
from tests.equipment.cases import CASES, named
from tests.equipment.cases_liquid_fuels import PARAFFINS, product
from tests.equipment.feeds import FLUE, MATTER, PRODUCT, SYNTHESIS, WATER, stream

MET = ("power", "heat", "own", "ambient", "bought")
SITE = Site(MATTER, ambient=200.0)  # so cold that nothing is cut at the ambient


def at(inlet, celsius, pressure=None):
    return Stream.at(MATTER, inlet.flows, celsius + 273.15, pressure or inlet.pressure)


def duties(inlet, celsius, site=SITE):
    return cooling_duties("heat", inlet, at(inlet, celsius), site)


@pytest.mark.parametrize(
    ("inlet", "celsius"),
    [
        (SYNTHESIS, 500.0),
        (FLUE, 150.0),
        (FLUE, 30.0),
        (PRODUCT, 25.0),
        (WATER, 300.0),
        (WATER, 80.0),
    ],
)
def test_the_parts_make_up_the_whole(inlet, celsius):
    found, outlet = duties(inlet, celsius), at(inlet, celsius)
    assert sum(d.heat for d in found) == pytest.approx(outlet.enthalpy - inlet.enthalpy, rel=1e-12)
    entropy = sum(d.heat / d.mean for d in found)
    assert entropy == pytest.approx(outlet.entropy - inlet.entropy, rel=1e-9)
    assert found[0].start == inlet.temperature
    assert found[-1].end == pytest.approx(celsius + 273.15)
    assert [d.end for d in found[:-1]] == [d.start for d in found[1:]]


def test_a_gas_that_stays_one_is_one_part():
    assert len(duties(SYNTHESIS, 500.0)) == 1
    assert len(duties(FLUE, 150.0)) == 1


def test_a_wet_gas_is_cut_at_its_dew_point():
    found = duties(FLUE, 30.0)
    steam = FLUE.fraction("H2O") * FLUE.pressure
    # without dissolved gas the dew point is the boiling point at the partial pressure
    assert found[0].end == pytest.approx(saturation_temperature(steam), abs=0.05)
    assert len(found) == 7
    per_kelvin = [d.heat / (d.end - d.start) for d in found]
    assert per_kelvin[1] > 3 * per_kelvin[0]  # condensing begins with a jump
    assert per_kelvin[1:] == sorted(per_kelvin[1:], reverse=True)


def test_boiling_water_takes_its_heat_at_one_temperature():
    heating, boiling, superheating = duties(WATER, 300.0)
    level = saturation_temperature(WATER.pressure)
    assert boiling.start == pytest.approx(level, rel=1e-8)
    assert boiling.end == pytest.approx(level, rel=1e-8)
    assert boiling.heat > 3e4  # 32 kJ/mol at 30 bar
    assert boiling.mean == pytest.approx(level, rel=0.01)  # two data sets
    assert heating.heat > superheating.heat > 0.0


def test_water_with_a_trace_of_gas_boils_where_water_does():
    """A trace spreads the boiling over a hundredth of a kelvin, not over the whole way there."""
    flows = WATER.flows.copy()
    flows[MATTER.components.index("H2")] = 1e-5 * WATER.total
    traced = Stream.at(MATTER, flows, 298.15, WATER.pressure)
    level = saturation_temperature(WATER.pressure)
    found = duties(traced, 300.0)
    boiling = sum(d.heat for d in found if d.start > level - 2.0 and d.end < level + 0.1)
    (_, pure, _) = duties(WATER, 300.0)
    assert boiling == pytest.approx(pure.heat, rel=0.01)  # 2 K of liquid are 0.5 % of it
    assert found[-1].curve  # from there on it is a gas


def test_fog_is_no_shape_of_its_own():
    """At the dew point round-off decides whether a little is liquid; the parts do not."""
    fog = Condenser.model_validate({"temperature": "40 degC"}).operate({"inlet": FLUE}, {}, SITE)
    gas = fog.outlets["gas"]
    for shift in (-1e-3, 0.0, 1e-3):
        inlet = Stream.from_enthalpy(
            MATTER, gas.flows, gas.enthalpy * (1.0 + shift * 1e-3), gas.pressure, gas.temperature
        )
        (only,) = duties(inlet, 150.0)
        assert len(only.curve) == 4


@pytest.mark.parametrize("inlet", [FLUE, PRODUCT])
def test_the_parts_follow_the_heat_of_condensing(inlet):
    """Between its ends no part is off the real curve by more than 3 % of the heat (a pin: 2.6)."""
    found = duties(inlet, 30.0)[1:]
    whole = sum(d.heat for d in found)
    for part in found:
        before = Stream.at(MATTER, inlet.flows, part.start, inlet.pressure).enthalpy
        for share in np.linspace(0.1, 0.9, 9):
            level = part.start + share * (part.end - part.start)
            real = Stream.at(MATTER, inlet.flows, level, inlet.pressure).enthalpy - before
            assert abs(real - share * part.heat) < 0.03 * abs(whole)


def test_condensing_is_boiling_backwards():
    steam = Stream.at(MATTER, WATER.flows, 573.15, WATER.pressure)
    down, up = duties(steam, 25.0), duties(WATER, 300.0)
    assert [d.heat for d in down] == pytest.approx([-d.heat for d in up[::-1]], rel=1e-9)
    assert [d.mean for d in down] == pytest.approx([d.mean for d in up[::-1]], rel=1e-9)


def test_the_path_is_cut_at_the_ambient():
    cold = stream({"N2": 1.0}, 5.0, 2.0)
    below, above = duties(cold, 60.0, Site(MATTER))
    assert below.end == above.start == 298.15


def test_without_a_line_and_without_detail_it_is_one_plain_duty():
    plain = Site(MATTER, detail=False)
    (only,) = duties(FLUE, 30.0, plain)
    assert only.heat == pytest.approx(at(FLUE, 30.0).enthalpy - FLUE.enthalpy)


def test_nothing_to_do_is_no_heat():
    nothing = FLUE.scaled(0.0)
    for inlet, celsius in ((nothing, 30.0), (FLUE, 1400.0)):
        assert sum(d.heat for d in duties(inlet, celsius)) == pytest.approx(0.0, abs=1e-6)


def test_a_condenser_that_keeps_its_carbon_dioxide_books_it_so():
    """The gas that does not dissolve does not in the path of the heat either."""
    for dissolved in (True, False):
        condenser = Condenser.model_validate({"temperature": "40 degC", "dissolved": dissolved})
        outcome = condenser.operate({"inlet": FLUE}, {}, SITE)
        leaving = sum(outcome.outlets[name].entropy for name in ("gas", "liquid"))
        with_heat = sum(d.heat / d.mean for d in outcome.duties)
        assert with_heat == pytest.approx(leaving - FLUE.entropy, rel=1e-9)


def test_the_mean_is_that_of_a_reversible_engine():
    """Many small engines along the path give the power of one at the mean temperature."""
    (whole,) = duties(FLUE, 150.0)
    steps = np.linspace(FLUE.temperature, 423.15, 2001)
    path = [Stream.at(MATTER, FLUE.flows, t, FLUE.pressure).enthalpy for t in steps]
    middle = 0.5 * (steps[1:] + steps[:-1])
    small = sum(
        (a - b) * (1.0 - 298.15 / t) for a, b, t in zip(path, path[1:], middle, strict=False)
    )
    assert -whole.heat * (1.0 - 298.15 / whole.mean) == pytest.approx(small, rel=1e-6)


@named([case for case in CASES if case.equipment.kind in ("heater", "cooler", "condenser")])
@pytest.mark.parametrize("ports", [("inlet", "power"), ("inlet", "heat")])
def test_how_much_heat_it_is_does_not_hang_on_its_shape(case, ports):
    """A pass that does not ask for the shape of heat finds the same power, and the same slopes."""
    found, shapes = [], (True, False)
    for shaped in shapes:
        site = replace(case.site, inlets=frozenset(ports), detail=shaped, shaped=shaped)
        outcome = case.equipment.operate(case.feeds, case.asked, site)
        slopes = case.equipment.slopes(case.feeds, case.asked, site, outcome)
        by_power = slopes.get("inlet", {}).get("drawn:power", np.zeros(1))
        met = {how: sum(d.heat for d in outcome.duties if d.met_by == how) for how in MET}
        found.append((met, outcome.power, by_power))
    (met, power, by_power), (plain_met, plain_power, plain_by_power) = found
    size = sum(abs(heat) for heat in met.values())
    assert plain_met == pytest.approx(met, abs=1e-9 * size)
    assert plain_power == pytest.approx(power, abs=1e-9 * size)
    scale = np.abs(by_power).max() or 1.0
    assert plain_by_power == pytest.approx(by_power, abs=1e-9 * scale)


@pytest.mark.parametrize("celsius", [60.0, 150.0])
def test_a_path_is_cut_where_oil_or_water_begins_to_condense(celsius):
    """Just above the first cut all is gas, just below it is not; it moves as its slopes say."""
    hot = product(PARAFFINS, 600.0, 20.0, 12, 1e-9 if celsius < 100.0 else 0.2)
    way = find_way(hot, celsius + 273.15, ("CO2",))
    dew, by_flows = way.dry_from, {"oil": oil_dew_slopes, "water": dew_slopes}[way.dew_of]
    assert not any_liquid(PARAFFINS, hot.flows, dew * (1 + 1e-11), hot.pressure)
    assert any_liquid(PARAFFINS, hot.flows, dew * (1 - 1e-11), hot.pressure)
    slopes = by_flows(PARAFFINS, hot.flows, dew, hot.pressure)
    for place in np.flatnonzero(hot.flows > 1e-3):
        moved = []
        for sign in (1.0, -1.0):
            flows = hot.flows.copy()
            flows[place] *= 1.0 + 1e-5 * sign
            changed = Stream.at(PARAFFINS, flows, hot.temperature, hot.pressure)
            moved.append(find_way(changed, celsius + 273.15, ("CO2",)).dry_from)
        found = (moved[0] - moved[1]) / (2e-5 * hot.flows[place])
        assert slopes[place] == pytest.approx(found, rel=1e-5, abs=1e-6 * np.abs(slopes).max())


@pytest.mark.parametrize(
    ("inlet", "celsius"), [(FLUE, 30.0), (at(FLUE, 40.0), 150.0), (at(PRODUCT, 60.0), 30.0)]
)
def test_cuts_move_as_they_say(inlet, celsius):
    """With the start of the path, the dew point and the flows, against central differences."""
    start, flows, pressure = float(inlet.temperature), inlet.flows, float(inlet.pressure)

    def way(level, amounts):
        return find_way(Stream.at(MATTER, amounts, level, pressure), celsius + 273.15, ("CO2",))

    own = way(start, flows)
    moves = [np.array([cut.by_start for cut in own.cuts])]
    ends = [(way(start + 0.01, flows), way(start - 0.01, flows), 0.02)]
    dew = dew_slopes(MATTER, flows, own.dry_from, pressure) if own.dry_from < 1e3 else 0.0 * flows
    for place in np.flatnonzero(flows):
        by = "by_water" if place == MATTER.water else "by_rest"
        moves.append(np.array([getattr(cut, by) + cut.by_dew * dew[place] for cut in own.cuts]))
        step = np.zeros(len(flows))
        step[place] = 1e-5 * flows[place]
        ends.append((way(start, flows + step), way(start, flows - step), 2.0 * step[place]))
    assert len(own.cuts) >= 5
    for slopes, (high, low, by) in zip(moves, ends, strict=True):
        levels = [[cut.temperature for cut in end.cuts] for end in (high, low)]
        seen = (np.array(levels[0]) - np.array(levels[1])) / by
        assert slopes == pytest.approx(seen, rel=1e-4, abs=1e-5 * max(np.abs(seen).max(), 1e-3))
