"""Addresses: one way to name any setting or result."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chainflow.basis.faults import UsageFault
from chainflow.equipment.base import Outcome
from chainflow.equipment.ports import Heat
from chainflow.equipment.register import kinds
from chainflow.flowsheet.addresses import (
    PROPERTY_UNITS,
    AddressError,
    of_outcome,
    parse_result,
    parse_setting,
    property_of,
    short_name,
    unit_of_result,
)
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.streams import Stream

MATTER = Matter.of(DEFAULT_COMPONENTS)
PIECES = {
    name: kinds()[kind].model_validate(settings)
    for name, kind, settings in (
        (
            "stack",
            "electrolyser",
            {
                "energy_use": "52 kWh/kg",
                "temperature": "60 degC",
                "pressure": "30 bar",
                "hydrogen": "20 kg/h",
            },
        ),
        ("split", "splitter", {"shares": {"recycle": "95 %", "purge": "rest"}}),
        (
            "blend",
            "blend",
            {"module": {"over": {"H2": 1, "CO2": -1}, "under": {"CO": 1, "CO2": 1}, "value": 2}},
        ),
        (
            "make",
            "reactor",
            {
                "reactions": [
                    {"equation": "CO2 + 4 H2 -> CH4 + 2 H2O", "conversion": {"CO2": "20 %"}},
                    {"equation": "CO2 + H2 -> CO + H2O", "extent": "0.1 mol/s"},
                ],
                "temperature": "250 degC",
            },
        ),
        (
            "tank",
            "store",
            {
                "contents": {"CO2": 0.9, "N2": "rest"},
                "temperature": "25 degC",
                "pressure": "30 bar",
            },
        ),
        ("engine", "engine", {"efficiency": "42 % LHV", "temperature": "120 degC"}),
        ("board", "switchboard", {}),
        ("press", "compressor", {"pressure": "30 bar"}),
        ("fuel", "product", {}),
    )
}


def setting(address):
    return parse_setting(address, PIECES)


def result(address):
    return parse_result(address, PIECES, DEFAULT_COMPONENTS)


# -------------------------------------------------------------------------------- settings
@pytest.mark.parametrize(
    ("address", "unit", "value"),
    [
        ("stack.temperature", "K", 333.15),
        ("stack.energy_use", "J/kg", 52 * 3.6e6),
        ("stack.rectifier", "1", 1.0),
        ("split.shares.recycle", "1", 0.95),
        ("blend.module.value", "", 2.0),
        ("blend.module.over.CO2", "", -1.0),
        ("make.reactions.0.conversion.CO2", "1", 0.2),
        ("make.reactions.1.extent", "mol/s", 0.1),
        ("make.temperature", "K", 523.15),
        ("tank.contents.CO2", "1", 0.9),
        ("engine.efficiency", "1", 0.42),
        ("engine.excess", "1", 0.0),
        ("press.pressure", "Pa", 30e5),
    ],
)
def test_a_setting_is_found_read_and_moved(address, unit, value):
    found = setting(address)
    piece = PIECES[found.piece]
    assert found.unit == unit
    assert piece.setting(found.path) == pytest.approx(value, rel=1e-12)
    other = piece.with_setting(found.path, 0.5 * value)
    assert other.setting(found.path) == pytest.approx(0.5 * value, rel=1e-12)
    assert piece.setting(found.path) == pytest.approx(value, rel=1e-12)  # the old one is as it was


def test_moving_a_number_keeps_what_it_counts():
    richer = PIECES["stack"].with_setting(("hydrogen",), 0.01)
    assert (richer.hydrogen.value, richer.hydrogen.per) == (0.01, "kg")
    better = PIECES["engine"].with_setting(("efficiency",), 0.5)
    assert (better.efficiency.value, better.efficiency.basis) == (0.5, "LHV")


def test_moving_one_reaction_leaves_the_others():
    moved = PIECES["make"].with_setting(("reactions", "0", "conversion", "CO2"), 0.4)
    assert moved.reactions[0].conversion == {"CO2": 0.4}
    assert moved.reactions[1] == PIECES["make"].reactions[1]


@pytest.mark.parametrize(
    ("address", "says"),
    [
        ("stak.temperature", "there is no equipment 'stak' (did you mean 'stack'?)"),
        (
            "stack.temprature",
            "stack (electrolyser) has no setting 'temprature' (did you mean 'temperature'?)",
        ),
        ("stack", "stack (electrolyser) has no setting ''"),
        ("split.shares", "is no number, name one entry of it: recycle, purge"),
        ("split.shares.recycel", "there is no 'recycel' in split.shares (did you mean 'recycle'?)"),
        ("split.shares.purge", "is 'rest' and no number that can be moved"),
        ("blend.ratio", "is not set: give it a value to start from"),
        ("blend.module", "is no number, name one entry of it: over, under, value"),
        ("make.reactions.2.extent", "there is no '2' in make.reactions"),
        ("make.reactions.0.extent", "is not set: give it a value to start from"),
        (
            "make.reactions.0.equation",
            "is 'CO2 + 4 H2 -> CH4 + 2 H2O' and no number that can be moved",
        ),
        ("stack.model", "is 'specific-energy' and no number that can be moved"),
        ("press.stages", "is 'auto' and no number that can be moved"),
        ("tank.pure", "is False and no number that can be moved"),
        ("stack.temperature.value", "there is no 'value' in stack.temperature"),
        ("plant.efficiency", "wanted equipment, one of its ports or a store"),
        ("", "there is no equipment ''"),
        ("stack.\x1b[31m", r"'stack.\x1b[31m' is no address, wanted words joined by dots"),
    ],
)
def test_what_is_said_of_a_wrong_setting(address, says):
    with pytest.raises(AddressError) as caught:
        setting(address)
    assert says in str(caught.value)


# --------------------------------------------------------------------------------- results
@pytest.mark.parametrize(
    ("address", "where", "name", "prop", "argument", "unit"),
    [
        ("stack.hydrogen.flow", "outlet", "hydrogen", "flow", "", "mol/s"),
        ("stack.hydrogen.flow.H2", "outlet", "hydrogen", "flow", "H2", "mol/s"),
        ("stack.hydrogen.mass_flow", "outlet", "hydrogen", "mass_flow", "", "kg/s"),
        ("stack.water.temperature", "inlet", "water", "temperature", "", "K"),
        ("stack.power.rate", "inlet", "power", "rate", "", "W"),
        ("make.product.ratio.H2/CO2", "outlet", "product", "ratio", "H2/CO2", "1"),
        ("make.product.dry_fraction.CH4", "outlet", "product", "dry_fraction", "CH4", "1"),
        ("split.purge.pressure", "outlet", "purge", "pressure", "", "Pa"),
        ("tank.anything.fraction.N2", "outlet", "anything", "fraction", "N2", "1"),
        ("tank.returns.flow", "inlet", "returns", "flow", "", "mol/s"),
        ("board.rest.rate", "outlet", "rest", "rate", "", "W"),
        ("make.duty.heat", "duty", "heat", "", "", "W"),
        ("press.duty.power", "duty", "power", "", "", "W"),
        ("tank.net", "own", "net_mol_s", "", "", "mol/s"),
        ("tank.net_mol_s", "own", "net_mol_s", "", "", "mol/s"),
        ("press.discharge", "own", "discharge_K", "", "", "K"),
        ("stack.stack_efficiency_LHV", "own", "stack_efficiency_LHV", "", "", "1"),
        ("fuel.inlet.flow", "inlet", "inlet", "flow", "", "mol/s"),
    ],
)
def test_a_result_is_found(address, where, name, prop, argument, unit):
    found = result(address)
    assert (found.where, found.name, found.prop, found.argument, found.unit) == (
        where,
        name,
        prop,
        argument,
        unit,
    )


def test_a_name_that_is_inlet_and_outlet_means_the_outlet():
    assert result("make.heat.rate").where == "outlet"
    assert result("make.power.rate").where == "inlet"


@pytest.mark.parametrize(
    ("address", "says"),
    [
        ("stack", "names no result, wanted stack.port.property or stack.result"),
        (
            "stack.hydrogn.flow",
            "stack (electrolyser) has no port 'hydrogn' (did you mean 'hydrogen'?)",
        ),
        ("stack.hydrogen.flw", "a port has no 'flw' (did you mean 'flow'?)"),
        ("stack.hydrogen.flow.H3", "there is no component 'H3'"),
        ("stack.hydrogen.fraction", "wanted stack.hydrogen.fraction.CO2"),
        ("stack.hydrogen.ratio.H2", "wanted stack.hydrogen.ratio.H2/CO2"),
        ("stack.hydrogen.temperature.H2", "'temperature' takes nothing behind it"),
        ("stack.hydrogen.flow.H2/O2", "'flow' takes nothing behind it"),
        ("make.duty.cost", "wanted make.duty.heat or make.duty.power"),
        ("make.duty", "wanted make.duty.heat or make.duty.power"),
        (
            "tank.nett",
            "tank (store) has no result 'nett' (did you mean 'net'?); it has top_up, net",
        ),
        ("fuel.worth", "a port's property has three words, as in stack.hydrogen.flow"),
        ("stack." + "x" * 300, "is no address, wanted words joined by dots"),
    ],
)
def test_what_is_said_of_a_wrong_result(address, says):
    with pytest.raises(AddressError) as caught:
        result(address)
    assert says in str(caught.value)


def test_a_compound_unit_is_not_taken_for_its_last_part():
    names = ("conductance_W_K", "flux_mol_m2_s", "density_kg_m3", "water_m3_s", "work_J_kg")
    units = ["W/K", "mol/(m2*s)", "kg/m3", "m3/s", "J/kg"]
    assert [unit_of_result(name) for name in names] == units


# results that are plain numbers though their first word does not say so
NUMBERS_ALONE = (
    "stage_cut",
    "purity",
    "recovery",
    "para_share",
    "share_liquid",
    "working_share",
    "share_lost_per_day",
    "hour_of_year",
    "modules",
    "strings",
    "coupling_loss",
    "best_cells",
    "receiver_efficiency",
    "solar_to_hydrogen",
    "solar_to_hydrogen_net_of_bias",
    "current_by_electrode",
    "current_by_cell",
)


@pytest.mark.parametrize("cls", kinds().values(), ids=lambda cls: cls.kind)
def test_own_results_end_in_their_unit(cls):
    for name in cls.gives:
        alone = name in NUMBERS_ALONE or name.split("_")[0] in (
            "stages",
            "stack",
            "fence",
            "load",
            "faraday",
            "hydrogen",
            "water",
            "carbon",
            "conversion",
            "efficiency",
            "growth",
            "purity",
            "recovery",
            "share",
            "stage",
            "usage",
            "bed",
            "dry",
            "relative",
            "upper",
        )
        assert unit_of_result(name) != "1" or alone, name
        assert name.startswith(short_name(name))


def test_a_short_name_means_the_first_result_of_that_name():
    assert result("stack.hydrogen").name == "hydrogen_mol_s"
    assert result("stack.hydrogen_kg_s").unit == "kg/s"


# ------------------------------------------------------------------------------- properties
GAS = Stream.at(MATTER, MATTER.vector({"H2": 3.0, "CO2": 1.0, "H2O": 0.01}), 400.0, 5e5)


@pytest.mark.parametrize(
    ("prop", "argument", "value"),
    [
        ("flow", "", 4.01),
        ("flow", "CO2", 1.0),
        ("flow", "O2", 0.0),
        ("fraction", "H2", 3 / 4.01),
        ("dry_fraction", "H2", 0.75),
        ("ratio", "H2/CO2", 3.0),
        ("ratio", "H2/O2", math.inf),
        ("temperature", "", 400.0),
        ("pressure", "", 5e5),
    ],
)
def test_properties_of_a_stream(prop, argument, value):
    assert property_of(GAS, prop, argument) == pytest.approx(value)


def test_properties_of_heat_and_power():
    heat = Heat(5e3, 500.0, 400.0, 448.1)
    assert property_of(heat, "rate", "") == 5e3
    assert property_of(heat, "temperature", "") == 448.1
    assert property_of(7e3, "rate", "") == 7e3
    for flow, prop in ((heat, "flow"), (7e3, "temperature"), (GAS, "rate")):
        with pytest.raises(AddressError, match="this port carries"):
            property_of(flow, prop, "")


def test_duties_and_own_results():
    outcome = Outcome({}, power=3.0, results={"net_mol_s": 2.0})
    assert of_outcome(outcome, "duty", "power") == 3.0
    assert of_outcome(outcome, "duty", "heat") == 0.0
    assert of_outcome(outcome, "own", "net_mol_s") == 2.0


# ------------------------------------------------------------------------------------- fuzz
WORDS = st.one_of(
    st.sampled_from(
        [
            *PIECES,
            *PROPERTY_UNITS,
            *DEFAULT_COMPONENTS,
            "duty",
            "heat",
            "power",
            "rest",
            "product",
            "shares",
            "recycle",
            "reactions",
            "0",
            "conversion",
            "module",
            "over",
            "H2/CO2",
            "H2/",
            "",
            "plant",
        ]
    ),
    st.text(max_size=8),
)


@given(st.lists(WORDS, max_size=6).map(".".join))
def test_any_text_is_an_address_or_a_clear_refusal(address):
    for find in (setting, result):
        try:
            found = find(address)
        except AddressError as problem:
            assert str(problem).isprintable()
            assert len(str(problem)) < 500
        else:
            assert found.piece in PIECES


def test_an_address_fault_is_no_usage_fault_by_itself():
    """Whoever asks decides: a hold makes it a fault of the file, an option wrong usage."""
    assert not issubclass(AddressError, UsageFault)
