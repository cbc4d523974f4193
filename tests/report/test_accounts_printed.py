"""The accounts as they are printed: what is asked for is there, and nothing else."""

import io
import re

import pytest

from chainflow.accounts.plant import plant_account
from chainflow.report.accounts_printed import print_accounts
from chainflow.report.csv_files import csv_texts
from chainflow.report.printed import print_answer
from tests.flowsheets.shipped import solved as shipped
from tests.plants import BOUGHT, CYCLE, METHANE, solved


def accounts(solution):
    out = io.StringIO()
    print_accounts(solution, out)
    return out.getvalue()


def answer(solution):
    out = io.StringIO()
    print_answer(solution, out)
    return out.getvalue()


def test_rungs_losses_carbon_and_water():
    text = accounts(solved(CYCLE))
    for title in ("Rungs", "Where the exergy goes", "Carbon and water"):
        assert f"\n{title}\n" in text
    assert re.search(r"fuel kept -> power out .* co2press .* kW own power", text)
    assert re.search(r"field +destroyed in it +37.29 MW +78.5 %", text)
    assert re.search(r"capture.stackgas +thrown away with a stream", text)
    assert "not known: no origin for heat of fuel, material of bought" in text
    assert "'origin: fossil' (or biogenic, air) to the supply or store" in text


def test_every_loss_is_printed_or_summed():
    solution = solved(METHANE)
    text = accounts(solution)
    losses = plant_account(solution).losses
    least = 1e-4 * losses.entering_total
    round_off = 1e-9 * losses.entering_total  # what balances close to
    small = [x for x in losses.losses if round_off < abs(x.exergy) < least]
    assert small
    assert f"{len(small)} smaller ones" in text
    large = [x for x in losses.losses if abs(x.exergy) >= least]
    assert all(re.search(rf"^{x.where} ", text, re.MULTILINE) for x in large)


def test_a_plant_without_sunlight_shows_no_share_of_it():
    text = accounts(solved(BOUGHT))
    assert re.search(r"all that enters .* MW +- +1.05", text)
    assert "not known: no origin for power of press, heat of warm, material of gas" in text


def test_intensities_that_are_known():
    text = METHANE.replace("bought:  {kind: supply,", "bought:  {kind: supply, origin: fossil,")
    shown = re.search(r"CO2 intensity +([\d.]+) g/kWh of fuel", accounts(solved(text)))
    # 44.01 g per 802.3 kJ of methane: 197.5 g/kWh, and what is purged
    assert float(shown[1]) == pytest.approx(197.5, rel=0.05)


def test_costs_are_printed_where_the_file_has_them():
    text = answer(shipped("battery"))
    assert "\nCosts, crowns of 2023\n" in text
    assert re.search(r"power delivered +0.157\d crowns/kWh", text)
    assert re.search(r"battery +22.9\d MWh +5499000 +15 a", text)
    assert "Costs" not in answer(solved(METHANE))


def test_the_short_answer_stays_short():
    assert "Where the exergy goes" not in answer(solved(CYCLE))


def test_what_is_free_is_named():
    block = """
costs: {interest: 5 %, lifetime: 20 a, hours: 3000 h,
        bought: {power: 60 money/MWh, material: {gas: 20 money/MWh}}, sold: {heat: 5 money/MWh}}
"""
    text = answer(solved(BOUGHT + block))
    assert "\nCosts, money\n" in text
    assert re.search(r"taken as free +heat, cold: bought at no price", text)
    assert re.search(r"taken as free +press, warm, chill: no cost given", text)
    assert re.search(r"money for material.gas bought \(\d", text)


def test_losses_and_costs_are_in_the_plant_table():
    rows = csv_texts(shipped("battery"))["plant.csv"].splitlines()
    assert any(row.startswith("loss,field destroyed,exergy,") for row in rows)
    assert any(row.startswith("cost,power,per kWh,0.157") for row in rows)
