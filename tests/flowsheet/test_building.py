"""From words to a checked flowsheet: what is taken over, what is remarked, what `--set` changes."""

import hashlib
import re

import pytest

from chainflow.basis.faults import FileFault, FlowsheetFault, UsageFault
from chainflow.flowsheet.building import read_flowsheet, read_text
from chainflow.thermo.chains import chains_in
from chainflow.thermo.components import DEFAULT_COMPONENTS

METHANE = """\
title: Methane store for a valley
basis: HHV
ambient: 15 degC
components: [H2, N2, H2O, CO, CO2, CH4]
knobs:
  hot: 320 degC
  carbon: {CO2: $share, N2: rest}
  share: 99 %
  cold: 300 degC
equipment:
  gas:
    {kind: supply, composition: {H2: 80 %, CO2: rest}, temperature: 25 degC,
     pressure: 12 bar, flow: 100 kg/h}
  more:
    {kind: supply, composition: $carbon, temperature: 25 degC, pressure: 12 bar, flow: 0.5 Nm3/h}
  mix: {kind: mixer}
  reactor: {kind: methanation-reactor, temperature: $hot}
  dry: {kind: condenser, temperature: 30 degC, pressure_drop: 0.5 bar}
  town: {kind: product}
lines:
  - gas -> mix -> reactor -> dry -> town
  - more -> mix
holds:
  - hold: reactor.product.fraction.CH4
    at: 60 %
    by: reactor.temperature
    within: [250 degC, 450 degC]
"""


def remarks_of(text, overrides=None):
    return [(remark.code, remark.line) for remark in read_text(text, overrides).remarks]


# ------------------------------------------------------------------------------- taken over
def test_the_small_entries():
    sheet = read_text(METHANE)
    assert sheet.title == "Methane store for a valley"
    assert sheet.basis == "HHV"
    assert sheet.ambient == pytest.approx(288.15)
    assert sheet.components == ("H2", "N2", "H2O", "CO", "CO2", "CH4")
    assert sheet.matter.components == sheet.components
    assert sheet.sha256 == hashlib.sha256(METHANE.encode()).hexdigest()
    assert list(sheet.equipment) == ["gas", "more", "mix", "reactor", "dry", "town"]


def test_many_chains_are_written_by_their_carbon_numbers():
    plain = METHANE.replace("CO2, CH4]", "CO2, CH4, C2H6, C3H8, n-C4H10, n-C5H12, C2H4, C3H6, wax]")
    short = METHANE.replace("CO2, CH4]", "CO2, C1-C5, C2-C3=, wax]")
    assert read_text(short).components == read_text(plain).components
    assert chains_in("C29+") == ("n-C29H60", "n-C30H62", "wax")
    assert chains_in("C20=") == ("1-C20H40",)
    assert chains_in("CH4") is None


def test_settings_are_si_inside():
    sheet = read_text(METHANE)
    assert sheet.equipment["gas"].flow == (pytest.approx(100 / 3600), "kg")
    # 22.41396954 l/mol at 0 degC and 1.01325 bar, CODATA 2018
    assert sheet.equipment["more"].flow == (pytest.approx(0.5 / 3600 / 22.41396954e-3), "mol")
    assert sheet.equipment["dry"].pressure_drop == pytest.approx(5e4)
    assert sheet.equipment["gas"].composition == {"H2": pytest.approx(0.8), "CO2": "rest"}


def test_knobs_may_hold_maps_and_other_knobs():
    sheet = read_text(METHANE)
    assert sheet.equipment["reactor"].temperature == pytest.approx(593.15)
    assert sheet.equipment["more"].composition == {"CO2": pytest.approx(0.99), "N2": "rest"}


def test_holds_are_aimed_in_si():
    (hold,) = read_text(METHANE).holds
    assert (hold.text, hold.by, hold.piece, hold.path) == (
        "reactor.product.fraction.CH4",
        "reactor.temperature",
        "reactor",
        ("temperature",),
    )
    assert (hold.at, hold.low, hold.high) == (0.6, pytest.approx(523.15), pytest.approx(723.15))
    assert (hold.unit, hold.by_unit) == ("1", "K")


SMALL = """\
equipment:
  a: {kind: supply, composition: {H2: 1}, temperature: 25 degC, pressure: 2 bar, flow: 1 mol/s}
  b: {kind: product}
lines: [a -> b]
"""


def test_what_may_be_left_out():
    sheet = read_text(SMALL)
    assert (sheet.title, sheet.basis, sheet.ambient) == ("", "LHV", 298.15)
    assert sheet.components == DEFAULT_COMPONENTS
    assert (sheet.holds, sheet.remarks, dict(sheet.knobs)) == ((), (), {})


@pytest.mark.parametrize("empty", ["holds:\n", "holds: []\n", "knobs:\n", "knobs: {}\n"])
def test_empty_entries_are_as_if_left_out(empty):
    assert read_text(empty + SMALL).equipment == read_text(SMALL).equipment


def test_titles_are_any_text_and_components_stay_text():
    sheet = read_text(
        'title: "1e3 \\e[31m: yes"\ncomponents: [H2, NO]\n' + SMALL.replace("{H2: 1}", "{NO: 1}")
    )
    assert sheet.title == "1e3 \x1b[31m: yes"
    assert sheet.components == ("H2", "NO")  # nitric oxide, not "no"
    assert sheet.equipment["a"].composition == {"NO": 1.0}


def test_trains_need_not_be_joined():
    two = SMALL.replace(
        "lines:",
        "  c: {kind: sunlight, irradiance: 1 W/m2, aperture: 1 m2}\n  d: {kind: vent}\nlines:",
    )
    sheet = read_text(two.replace("[a -> b]", "[a -> b, c -> d]"))
    assert len(sheet.lines) == 2


def test_the_order_of_the_file_is_the_order_of_the_flowsheet():
    head, rest = METHANE.split("equipment:\n")
    pieces, tail = rest.split("lines:\n")
    turned = "".join(re.split(r"(?m)^(?=  [a-z])", pieces)[::-1])
    sheet = read_text(f"{head}equipment:\n{turned}lines:\n{tail}")
    assert list(sheet.equipment) == ["town", "dry", "reactor", "mix", "more", "gas"]


def test_a_file_and_its_text_are_one(tmp_path):
    path = tmp_path / "methane.yaml"
    path.write_text(METHANE, encoding="utf-8")
    sheet = read_flowsheet(path)
    assert sheet.path == str(path)
    assert sheet.equipment == read_text(METHANE).equipment
    assert sheet.sha256 == read_text(METHANE).sha256


def test_a_file_that_is_not_there(tmp_path):
    with pytest.raises(FileFault, match=r"cannot read .*nothing\.yaml.*: No such file"):
        read_flowsheet(tmp_path / "nothing.yaml")
    with pytest.raises(FileFault, match="Is a directory"):
        read_flowsheet(tmp_path)


# --------------------------------------------------------------------------------- remarks
def test_what_takes_no_part_is_remarked_and_left_out():
    extra = SMALL.replace("lines:", "  spare: {kind: mixer}\nlines:")
    assert remarks_of(extra) == [("unused-equipment", 4)]
    assert list(read_text(extra).equipment) == ["a", "b"]


def test_an_unused_knob_is_remarked():
    assert remarks_of("knobs: {sun: 3 W/m2}\n" + SMALL) == [("unused-knob", 1)]


def test_an_environment_at_another_temperature_than_the_ambient_is_remarked():
    apart = "environment: {temperature: 15 degC}\n" + SMALL
    assert remarks_of(apart) == [("two-surroundings", 1)]
    (remark,) = read_text(apart).remarks
    assert remark.text.startswith("environment: it is at 15 degC, 'ambient' at 25 degC: ")
    assert remarks_of("ambient: 15 degC\n" + apart) == []
    (remark,) = read_text(SMALL, {"environment.temperature": "15 degC"}).remarks
    assert (remark.code, remark.place) == ("two-surroundings", None)
    assert remarks_of("ambient: 15 degC\n" + SMALL) == []  # the usual one is a convention


def test_a_main_outlet_without_a_line_is_remarked():
    text = SMALL.replace("b: {kind: product}", "b: {kind: heater, temperature: 50 degC}")
    assert remarks_of(text) == [("unlinked-outlet", 3)]
    (remark,) = read_text(text).remarks
    assert remark.text == "b: 'b.outlet' is not linked, what comes there leaves the plant"


def test_an_optional_outlet_without_a_line_is_not():
    text = SMALL.replace(
        "b: {kind: product}", "b: {kind: separator, recovery: {H2: 50 %}}\n  c: {kind: vent}"
    )
    assert remarks_of(text.replace("[a -> b]", "[a -> b -> c]")) == []


# -------------------------------------------------------------------------------- overrides
@pytest.mark.parametrize(
    ("address", "text", "piece", "path", "value"),
    [
        ("hot", "400 degC", "reactor", ("temperature",), 673.15),
        ("reactor.temperature", "400 degC", "reactor", ("temperature",), 673.15),
        ("reactor.temperature", "$cold", "reactor", ("temperature",), 573.15),
        ("share", "98 %", "more", ("composition", "CO2"), 0.98),
        ("more.composition.CO2", "97 %", "more", ("composition", "CO2"), 0.97),
        ("gas.flow", "3 mol/s", "gas", ("flow",), 3.0),
        ("dry.pressure_drop", "1 bar", "dry", ("pressure_drop",), 1e5),
        ("mix.let_down", "true", "mix", ("let_down",), 1.0),
    ],
)
def test_set_changes_one_value(address, text, piece, path, value):
    changed, plain = read_text(METHANE, {address: text}), read_text(METHANE)
    assert changed.equipment[piece].setting(path) == pytest.approx(value)
    assert changed.remarks == plain.remarks
    others = [name for name in plain.equipment if name != piece]
    assert all(changed.equipment[name] == plain.equipment[name] for name in others)
    assert changed.sha256 == plain.sha256  # the file is the same


def test_set_wins_over_a_knob_at_the_same_place():
    sheet = read_text(METHANE, {"hot": "400 degC", "reactor.temperature": "410 degC"})
    assert sheet.equipment["reactor"].temperature == pytest.approx(683.15)


def test_set_adds_a_setting_that_the_file_leaves_out():
    sheet = read_text(METHANE, {"reactor.approach": "20 K"})
    assert sheet.equipment["reactor"].approach == pytest.approx(20.0)


def test_knobs_as_they_now_are_are_kept():
    assert read_text(METHANE, {"share": "98 %"}).knobs["share"] == "98 %"
    assert read_text(METHANE).knobs["share"] == "99 %"


@pytest.mark.parametrize(
    ("overrides", "says"),
    [
        ({"reactor.temperature": "1 bar"}, "--set: reactor: temperature: '1 bar' is a pressure"),
        ({"hot": "1 bar"}, "--set hot: reactor: temperature: '1 bar' is a pressure"),
        ({"hott": "1 bar"}, "there is no knob 'hott' (did you mean 'hot'?)"),
        (
            {"raector.temperature": "1 bar"},
            "there is no equipment 'raector' (did you mean 'reactor'?)",
        ),
        ({"gas.composition.XX": "5 %"}, "--set: gas: composition"),
        ({"gas.kind": "suply"}, "there is no kind 'suply' (did you mean 'supply'?)"),
        ({"reactor.temperature": "$warm"}, "--set: there is no knob 'warm'"),
        ({"gas.composition.N2": "30 %"}, "--set: gas: composition: the shares add up to 110 %"),
        ({"mix.kind": "heater"}, "--set: mix: give one of"),
        (
            {"environment.humidty": "50 %"},
            "environment: there is no setting 'humidty' (did you mean",
        ),
        ({"costs.interest": "5 kg"}, "--set: costs: interest: '5 kg' is a mass"),
        ({".": "1"}, "there is no equipment ''"),
        ({"a" + ".b" * 5000: "1"}, "no setting lies so deep"),
    ],
)
def test_a_wrong_set_is_wrong_usage(overrides, says):
    with pytest.raises(UsageFault) as caught:
        read_text(METHANE, overrides)
    assert says in str(caught.value)
    assert str(caught.value).isprintable()


def test_surroundings_and_costs_can_be_set_too():
    assert (
        read_text(METHANE, {"environment.temperature": "5 degC"}).environment.temperature == 278.15
    )
    costs = "\ncosts: {interest: 7 %, lifetime: 25 a, hours: 2000 h, equipment: {}}\n"
    found = read_text(METHANE + costs, {"costs.interest": "5 %"}).blocks.costs
    assert found is not None
    assert found.interest == pytest.approx(0.05)


def test_a_fault_of_the_file_stays_one_whatever_is_set():
    with pytest.raises(FlowsheetFault):
        read_text(METHANE.replace("kind: mixer", "kind: mixr"), {"hot": "400 degC"})


@pytest.mark.parametrize("name", ["\N{SUPERSCRIPT TWO}", "\N{ARABIC-INDIC DIGIT THREE}", "1", "-1"])
def test_digits_of_other_scripts_are_names_like_any_other(name):
    """`isdigit` says yes to some that `int` does not take."""
    with pytest.raises(FlowsheetFault):
        read_text(SMALL.replace("{H2: 1}", f"{{{name}: 1}}"))
    with pytest.raises(UsageFault, match="--set: "):
        read_text(SMALL, {f"a.composition.{name}": "3 %"})
