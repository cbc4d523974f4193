import pytest

from chainflow.accounts.hazards import cautions, idealisations, stream_cautions
from tests.plants import CYCLE, METHANE, one_line, solved

HALF = "H2: 50 %, N2: rest"
GAS = "CO2: 50 %, CH4: rest"


def codes(composition, temperature="25 degC", pressure="1 bar", components=""):
    names = [part.split(":")[0].strip() for part in composition.split(",")]
    solution = one_line(composition, temperature, pressure, components or ", ".join(names))
    return {remark.code: remark for remark in stream_cautions(solution)}


@pytest.mark.parametrize(
    ("code", "there", "not_there"),
    [
        ("flammable-mixture", ("H2: 30 %, O2: 15 %, N2: rest",), ("H2: 99 %, O2: rest",)),
        ("near-flammable-mixture", ("H2: 97 %, O2: rest",), ("H2: 99 %, O2: rest",)),
        ("oxygen-enriched", ("N2: 76 %, O2: rest",), ("N2: 79 %, O2: rest",)),
        ("toxic-contents", ("N2: 99.99 %, CO: rest",), ("N2: 99.999 %, CO: rest",)),
        ("flammable-contents", ("CH4: 5 %, N2: rest",), ("CH4: 4 %, N2: rest",)),
        ("asphyxiating-contents", ("CO2: 60 %, N2: rest",), ("CO2: 40 %, N2: rest",)),
        ("high-pressure", ("N2: 1", "25 degC", "101 bar"), ("N2: 1", "25 degC", "99 bar")),
        ("hot-hydrogen", ("H2: 1", "250 degC", "4 bar"), ("H2: 1", "200 degC", "4 bar")),
        ("hot-hydrogen", (HALF, "250 degC", "8 bar"), (HALF, "250 degC", "6 bar")),
        # carbon dioxide boils at 64.3 bar at 25 degC (Span and Wagner 1996)
        ("liquid-expected", ("CO2: 1", "25 degC", "68 bar"), ("CO2: 1", "25 degC", "60 bar")),
        # half CO2 in methane at that partial pressure is a dense gas, no liquid
        ("liquid-expected", ("CO2: 1", "20 degC", "70 bar"), (GAS, "25 degC", "140 bar")),
    ],
)  # fmt: skip
def test_a_caution_comes_with_its_cause_and_not_without(code, there, not_there):
    assert code in codes(*there)
    assert code not in codes(*not_there)


def test_methanol_vapour_below_its_dew_point():
    # vapour pressure of methanol 16.9 kPa at 25 degC (CRC Handbook, from memory)
    assert "liquid-expected" in codes("CH3OH: 30 %, N2: rest", "25 degC", "1 bar")
    assert "liquid-expected" not in codes("CH3OH: 10 %, N2: rest", "25 degC", "1 bar")


def test_a_caution_names_line_and_amount():
    remark = codes("N2: 99.99 %, CO: rest")["toxic-contents"]
    assert remark.equipment == "gas"
    assert "gas.outlet (CO 100 ppm)" in remark.text


def test_plain_water_and_nitrogen_are_harmless():
    assert codes("N2: 1", "25 degC", "5 bar") == {}
    assert codes("H2O: 1", "25 degC", "5 bar") == {}


def test_the_worst_stream_comes_first_and_few_are_named():
    remark = next(r for r in stream_cautions(solved(CYCLE)) if r.code == "oxygen-enriched")
    shares = [float(part.split(" %")[0]) for part in remark.text.split("(")[1:]]
    assert shares == sorted(shares, reverse=True)
    carbon = next(r for r in stream_cautions(solved(CYCLE)) if r.code == "asphyxiating-contents")
    assert "more" in carbon.text


def test_cautions_of_equipment_are_collected():
    found = {(remark.code, remark.equipment) for remark in cautions(solved(CYCLE))}
    own = {
        (caution.code, name)
        for name, outcome in solved(CYCLE).outcomes.items()
        for caution in outcome.cautions
    }
    assert own
    assert own <= found


def test_idealisations_carry_the_least_work_they_hide():
    solution = solved(METHANE)
    remark = next(r for r in idealisations(solution) if r.code == "free-separation")
    assert remark.equipment == "sieve"
    assert remark.minimum_work == solution.outcomes["sieve"].results["minimum_work_W"] > 0.0


def test_a_recycle_without_pressure_drop_is_an_idealisation():
    text = METHANE.replace(", pressure_drop: 0.8 bar", "").replace(", pressure_drop: 0.2 bar", "")
    text = text.replace(
        "blower:  {kind: compressor, pressure: 12 bar, stages: 1}",
        "blower:  {kind: cooler, temperature: 30 degC}",
    )
    text = text.replace("  - board.blower -> blower.power\n", "")
    remarks = [r for r in idealisations(solved(text)) if r.code == "drop-free-recycle"]
    assert len(remarks) == 1
    assert "reactor" in remarks[0].text


def test_dusting_needs_carbon_and_the_range_of_temperature():
    text = """
components: [H2, H2O, CO, CO2, CH4]
knobs: {hot: 650 degC, rich: 45 %}
equipment:
  gas:   {kind: supply, composition: {CO: $rich, H2O: 20 %, H2: rest}, temperature: 300 degC,
           pressure: 20 bar, flow: 1 mol/s}
  shift: {kind: reactor, equilibrium: [H2, H2O, CO, CO2, CH4], temperature: $hot}
  sky:   {kind: vent}
lines:
  - gas -> shift -> sky
"""

    def found(**knobs):
        return {remark.code for remark in cautions(solved(text, **knobs))}

    assert "metal-dusting" in found()
    assert "metal-dusting" not in found(hot="900 degC")
    assert "metal-dusting" not in found(rich="10 %")
