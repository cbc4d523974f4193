"""Costs of the six routes of the village: the same figures for the same equipment, by hand.

Every figure is invented; what is checked is the arithmetic and that routes can be compared.
"""

import pytest

from chainflow.accounts.costs import cost_account
from tests.flowsheets.shipped import HUGE, as_data, solved, text_of

ROUTES = (
    "hydrogen-store",
    "hydrogen-liquid",
    "methane-compressed",
    "methane-liquid",
    "liquid-fuel",
    "battery",
)
MACHINES = {"press", "lift"}  # compressors: one figure by whatever name
FANS = {"blower", "fan"}


def block(name):
    return as_data(text_of(name))["costs"]


def plain(piece, entry):
    """The figures of a piece without the address that sizes it."""
    kind = "machine" if piece in MACHINES else "fan" if piece in FANS else piece
    return kind, {key: value for key, value in entry.items() if key not in ("size", "per")}


def test_the_heads_are_alike():
    heads = [
        {k: v for k, v in block(n).items() if k not in ("equipment", "bought")} for n in ROUTES
    ]
    assert all(head == heads[0] for head in heads)


def test_the_same_equipment_costs_the_same():
    """All but the stores, each of which keeps something else."""
    seen = {}
    for name in ROUTES:
        for piece, entry in block(name)["equipment"].items():
            if piece in ("fuel", "naphtha", "kerosene", "diesel"):
                continue
            kind, figures = plain(piece, entry)
            assert seen.setdefault(kind, figures) == figures, (name, piece)
    assert {"field", "stack", "machine", "engine", "reactor", "cold-box"} <= seen.keys()


def test_the_same_things_are_bought_at_the_same_price():
    prices = [block(name)["bought"]["material"] for name in ROUTES if "bought" in block(name)]
    for name in ("water", "bought", "air"):
        assert len({prices_of[name] for prices_of in prices if name in prices_of}) == 1


@pytest.mark.parametrize("name", ROUTES)
def test_a_store_holds_six_hours(name):
    """Invented cost per kg x 6 h x 100 kg/h; the battery gives its power for 6 h."""
    if name == "battery":
        assert as_data(text_of(name))["knobs"]["hours"] == "6 h"
        return
    per_mass = {
        "hydrogen-store": 700,
        "hydrogen-liquid": 150,
        "methane-compressed": 60,
        "methane-liquid": 40,
        "liquid-fuel": 2,
    }[name]
    stores = block(name)["equipment"]
    for piece in ("naphtha", "kerosene", "diesel") if name in HUGE else ("fuel",):
        assert stores[piece]["reference"] == "100 kg/h"
        assert float(stores[piece]["purchase"].split()[0]) == per_mass * 6 * 100


@pytest.mark.parametrize(
    ("name", "fuel", "power"),
    [
        ("hydrogen-store", 887 / 4890, 1007 / 2054),
        ("hydrogen-liquid", 1154 / 4180, 1417 / 2346),
        ("methane-compressed", 970 / 4140, 1074 / 1736),
        ("methane-liquid", 1028 / 4080, 1131 / 1716),
        ("liquid-fuel", 1122 / 3480, 1211 / 1462),
        ("battery", None, 1082 / 6880),
    ],
)
def test_levelised_costs_by_hand(name, fuel, power):
    """Thousands of crowns a year over MWh a year, as added up in the files; good to 0.5 %."""
    costs = cost_account(solved(name)).as_data()["levelised"]
    assert costs["power"]["per_kWh"] == pytest.approx(power, rel=5e-3)
    if fuel is None:
        assert costs["fuel"]["LHV_per_kWh"] is None
    else:
        assert costs["fuel"]["LHV_per_kWh"] == pytest.approx(fuel, rel=5e-3)


@pytest.mark.parametrize("name", ROUTES)
def test_everything_bought_has_a_price(name):
    assert cost_account(solved(name)).unpriced == ()
