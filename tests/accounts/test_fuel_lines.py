"""Which lines are the cuts "fuel made" and "fuel kept"?"""

from chainflow.accounts.fuel import FuelLines, fuel_lines
from tests.plants import BOUGHT, CYCLE, ENGINE_INSIDE, HYDROGEN, METHANE, solved

ONCE = """
components: [H2, O2, H2O, CO, CO2, CH4]
equipment:
  hydrogen: {{kind: supply, composition: {{H2: 1}}, temperature: 25 degC, pressure: 10 bar,
           flow: 4 mol/s}}
  carbon:   {{kind: supply, composition: {{CO2: 1}}, temperature: 25 degC, pressure: 10 bar,
           flow: 1 mol/s}}
  mix:      {{kind: mixer}}
  reactor:  {{kind: methanation-reactor, temperature: 320 degC}}
  dry:      {{kind: condenser, temperature: 30 degC}}
{more}
  town:     {{kind: product}}
lines:
  - hydrogen -> mix
  - carbon -> mix
  - mix -> reactor -> dry
{lines}
"""


def once(more, *lines):
    text = ONCE.format(more=more, lines="\n".join(f"  - {line}" for line in lines))
    return fuel_lines(solved(text))


def test_hydrogen_is_made_in_the_stack_and_kept_in_the_store():
    assert fuel_lines(solved(HYDROGEN)) == FuelLines(("stack.hydrogen",), ("fuel.rest",))


def test_with_a_recycle_the_cut_lies_behind_the_branch_that_goes_back():
    # sieve.passed goes back to the reactor, so reactor.product is not final; the purge is lost
    assert fuel_lines(solved(METHANE)) == FuelLines(("sieve.kept",), ("fuel.rest",))


def test_a_burner_whose_heat_becomes_power_is_a_use():
    assert fuel_lines(solved(CYCLE)) == FuelLines(("reactor.product",), ("fuel.rest",))


def test_hydrogen_burnt_to_run_the_own_electrolyser_is_not_fuel_made():
    assert fuel_lines(solved(ENGINE_INSIDE)) == FuelLines(("reactor.product",), ("knock.gas",))


def test_bought_fuel_is_not_made():
    assert fuel_lines(solved(BOUGHT)).made == ()


def test_without_a_store_what_arrives_is_kept():
    assert once("", "dry -> town") == FuelLines(("reactor.product",), ("dry.gas",))


def test_of_two_stores_the_last_one_counts():
    stores = """
  first:  {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 9 bar}
  second: {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 8 bar}"""
    found = once(
        stores, "dry -> first.returns", "first.rest -> second.returns", "second.rest -> town"
    )
    assert found == FuelLines(("reactor.product",), ("second.rest",))


def test_two_products_behind_one_store_count_the_store_once():
    more = """
  store: {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 9 bar}
  parts: {kind: splitter, shares: {one: 30 %, two: rest}}
  city:  {kind: product}"""
    found = once(
        more,
        "dry -> store.returns",
        "store.rest -> parts",
        "parts.one -> town",
        "parts.two -> city",
    )
    assert found.kept == ("store.rest",)


def test_a_part_that_goes_round_a_store_makes_the_lines_at_the_use_count():
    more = """
  parts: {kind: splitter, shares: {one: 30 %, two: rest}}
  store: {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 9 bar}
  join:  {kind: mixer, let_down: true}"""
    found = once(
        more,
        "dry -> parts",
        "parts.one -> store.returns",
        "parts.two -> join",
        "store.rest -> join",
        "join -> town",
    )
    assert found.kept == ("join.outlet",)


def test_fuel_that_stays_in_a_store_is_made():
    store = """
  store: {kind: store, contents: {CH4: 1}, temperature: 30 degC, pressure: 9 bar}"""
    found = once(store, "dry -> store.returns")
    assert found == FuelLines(("reactor.product",), ("dry.gas",), staying=("store.rest",))


def test_what_leads_to_vents_only_does_not_count():
    more = """
  parts: {kind: splitter, shares: {one: 30 %, two: rest}}
  sky:   {kind: vent}
  burn:  {kind: vent}"""
    found = once(more, "dry -> parts", "parts.one -> sky", "parts.two -> burn")
    assert found == FuelLines((), ())


def test_a_thin_product_becomes_a_fuel_line_where_it_is_enriched():
    text = """
components: [H2, H2O, CO2, CH3OH, N2]
equipment:
  gas:     {kind: supply, composition: {H2: 3 %, CO2: 7 %, N2: rest}, temperature: 25 degC,
           pressure: 50 bar, flow: 10 mol/s}
  reactor: {kind: reactor, reactions: [{equation: CO2 + 3 H2 -> CH3OH + H2O,
           conversion: {H2: 90 %}}], temperature: 220 degC}
  sieve:   {kind: separator, recovery: {CH3OH: 95 %}}
  town:    {kind: product}
  sky:     {kind: vent}
lines:
  - gas -> reactor -> sieve
  - sieve.kept -> town
  - sieve.passed -> sky
"""
    assert fuel_lines(solved(text)) == FuelLines(("sieve.kept",), ("sieve.kept",))


def test_power_for_compressors_does_not_make_an_engine_a_use():
    # the engine drives only the compressor of the product: its fuel is used inside the plant
    more = """
  parts:  {kind: splitter, shares: {out: rest, own: 20 %}}
  down:   {kind: valve, pressure: 1.2 bar}
  air:    {kind: supply, composition: {O2: 1}, temperature: 25 degC, pressure: 1.2 bar}
  engine: {kind: engine, efficiency: 40 %, temperature: 120 degC}
  board:  {kind: switchboard}
  net:    {kind: vent}
  press:  {kind: compressor, pressure: 12 bar}"""
    lines = (
        "dry -> parts",
        "parts.own -> down -> engine.fuel",
        "air -> engine.oxidiser",
        "engine.power -> board.supply",
        "board.press -> press.power",
        "board.rest -> net",
        "parts.out -> press -> town",
    )
    found = once(more, *lines)
    assert found.kept == ("press.outlet",)
