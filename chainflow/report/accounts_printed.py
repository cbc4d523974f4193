"""The accounts as people read them: rungs and what is used there, losses, carbon, water, costs.

Plain lines and tables through rich, in engineering units; what the short answer has no room for.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, TextIO

from chainflow.accounts.carbon import KWH, CarbonAccount
from chainflow.accounts.costs import CostAccount
from chainflow.accounts.efficiency import Efficiency
from chainflow.accounts.losses import LossMap
from chainflow.accounts.plant import PlantAccount, plant_account
from chainflow.accounts.water import WaterAccount
from chainflow.accounts.worth import BASES
from chainflow.basis.formatting import format_number, format_quantity
from chainflow.report import numbers
from chainflow.report.plain import console, plain_table
from chainflow.solver.solution import Solution

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table

_LEAST = 1e-4  # of the exergy that enters: smaller losses share one line
_ROUND_OFF = 1e-9  # of it: how far the loops close, not worth that line
_LABEL = 26  # characters
_CAUSES = {
    "destroyed": "destroyed in it",
    "heat": "thrown away as heat",
    "light": "thrown away as light",
    "power": "thrown away as power",
    "stream": "thrown away with a stream",
    "kept": "stays in its store",
}


def print_accounts(solution: Solution, out: TextIO | None = None) -> None:
    """Print all accounts of a solution."""
    screen, account = console(out), plant_account(solution)
    _title(screen, "Rungs")
    screen.print(_rung_table(account.efficiency))
    _title(screen, "Where the exergy goes")
    screen.print(_loss_table(account.losses))
    _title(screen, "Carbon and water")
    for line in (*_carbon(account.carbon), *_water(account.water), *_purges(account)):
        screen.print(line, soft_wrap=True)


def print_costs(screen: Console, costs: CostAccount) -> None:
    """Print the costs that the file asks for."""
    _title(screen, f"Costs, {costs.currency}" + (f" of {costs.year}" if costs.year else ""))
    for line in _cost_lines(costs):
        screen.print(line, soft_wrap=True)
    if costs.pieces:
        screen.print(_cost_table(costs))


def _title(screen: Console, title: str) -> None:
    screen.print()
    screen.print(title, style="bold")


def _line(label: str, text: str) -> str:
    return f"{label:<{_LABEL}} {text}"


def _rung_table(found: Efficiency) -> Table:
    table = plain_table("rung", *BASES, "used and bought on the way", right=BASES)
    for rung in found.rungs:
        uses = [f"{use.equipment} {numbers.energy(use.rate)} {use.what}" for use in rung.uses]
        ratios = [numbers.percent(rung.ratio[basis]) for basis in BASES]
        table.add_row(f"{rung.start} -> {rung.end}", *ratios, ", ".join(uses))
    table.add_row("overall", *(numbers.percent(found.overall[basis]) for basis in BASES), "")
    return table


def _loss_table(losses: LossMap) -> Table:
    right = ("exergy", "of sunlight", "kWh per kWh fuel")
    table = plain_table("where", "how", *right, right=right)

    def row(where: str, how: str, exergy: float) -> None:
        shares = numbers.percent(losses.share_of_sunlight(exergy)), losses.per_fuel(exergy)
        per_fuel = "-" if shares[1] is None else format_number(shares[1], 3)
        table.add_row(where, how, numbers.energy(exergy), shares[0], per_fuel)

    least, nothing = _LEAST * losses.entering_total, _ROUND_OFF * losses.entering_total
    shown = [loss for loss in losses.losses if abs(loss.exergy) >= least]
    for loss in shown:
        row(loss.where, _CAUSES[loss.cause], loss.exergy)
    small = [loss for loss in losses.losses if nothing < abs(loss.exergy) < least]
    if small:
        row(
            f"{len(small)} smaller" + (" ones" if len(small) > 1 else " one"),
            "",
            sum(loss.exergy for loss in small),
        )
    for name, exergy in losses.products.items():
        row(name, "useful", exergy)
    row("all that enters", "", losses.entering_total)
    return table


def _carbon(carbon: CarbonAccount) -> Iterator[str]:
    if carbon.efficiency is not None:
        yield _line("carbon kept in the fuel", numbers.percent(carbon.efficiency, 4))
    if carbon.entering or carbon.from_air:
        entering = sum(carbon.entering.values()) + carbon.from_air
        text = f"{format_quantity(entering, 'mol/s')} in, balance {carbon.closure or 0.0:.0e}"
        yield _line("carbon", text)
    for key, flow in carbon.leaving.items():
        yield _line("", f"{format_quantity(flow, 'mol/s')} out at {key}")
    if carbon.unknown:
        yield _line("CO2 intensity", f"not known: no origin for {', '.join(carbon.unknown)}")
        yield _line("", _how_to_know(carbon.unknown))
        return
    for what, mass, rate in (
        ("fuel", carbon.emission("making"), carbon.fuel_lhv),
        ("power", carbon.emission("making", "using"), carbon.power),
    ):
        if mass is not None and rate > 0.0:
            shown = f"{format_number(1e3 * mass / rate * KWH, 4)} g/kWh of {what}"
            yield _line("CO2 intensity", f"{shown}, building the plant left out")


def _how_to_know(unknown: tuple[str, ...]) -> str:
    """What to write into the file so that the intensity is known."""
    settings = {
        "material": "'origin: fossil' (or biogenic, air) to the supply or store",
        "power": "'carbon_intensity: 100 g/kWh' to the grid",
        "heat": "the heat needs power or a heat-network, bought heat has no intensity",
    }
    kinds = dict.fromkeys(text.partition(" ")[0] for text in unknown)
    return f"give {'; '.join(settings[kind] for kind in kinds)}"


def _water(water: WaterAccount) -> Iterator[str]:
    if water.consumed <= 0.0:
        return
    yield _line(
        "water used by reactions",
        f"{format_quantity(water.consumed, 'mol/s')}, topped up "
        f"{format_quantity(water.top_up, 'mol/s')}",
    )
    if water.per_stoichiometric is not None:
        text = f"{format_number(water.per_stoichiometric, 4)} of what the fuel made must take"
        per_fuel = water.as_data()["top_up_kg_kWh_fuel"]
        if per_fuel is not None:
            text += f", {format_number(per_fuel, 3)} kg/kWh of fuel"
        yield _line("water topped up", text)


def _purges(account: PlantAccount) -> Iterator[str]:
    for purge in account.purges:
        share = numbers.percent(purge.share_of_fuel)
        yield _line(
            f"fuel lost at {purge.key}",
            f"{numbers.energy(float(purge.stream.lhv))} LHV, {share} of the fuel: "
            f"{numbers.composition(purge.stream)} %",
        )


def _cost_lines(costs: CostAccount) -> Iterator[str]:
    word = costs.currency
    found = costs.as_data()["levelised"]
    if found["fuel"]["LHV_per_kWh"] is not None:
        shown = [
            f"{format_number(found['fuel']['LHV_per_kWh'])} {word}/kWh LHV",
            f"{format_number(found['fuel']['HHV_per_kWh'])} {word}/kWh HHV",
            f"{format_number(found['fuel']['per_kg'])} {word}/kg",
        ]
        yield _line("fuel", ", ".join(shown))
    if found["power"]["per_kWh"] is not None:
        yield _line("power delivered", f"{format_number(found['power']['per_kWh'])} {word}/kWh")
    yield _line("installed", f"{format_number(costs.installed)} {word}")
    hours = format_number(costs.hours / 3600.0)
    yield _line("a year", f"{format_number(costs.total)} {word} at {hours} full-load hours")
    for (what, _), cost in costs.bought.items():
        share = numbers.percent(costs.share(cost))
        yield _line("", f"{format_number(cost)} {word} for {what} bought ({share})")
    for (what, _), earned in costs.credited.items():
        yield _line("", f"{format_number(earned)} {word} for {what} sold")
    if costs.unpriced:
        yield _line("taken as free", f"{', '.join(costs.unpriced)}: bought at no price")
    if costs.without_cost:
        yield _line("taken as free", f"{', '.join(costs.without_cost)}: no cost given")


def _cost_table(costs: CostAccount) -> Table:
    right = ("size", "installed", "lifetime", "a year", "share")
    table = plain_table("equipment", *right, right=right)
    pieces = sorted(costs.pieces.items(), key=lambda pair: -pair[1].yearly)
    for name, piece in pieces:
        table.add_row(
            name,
            format_quantity(piece.size, piece.size_unit),
            format_number(piece.installed),
            f"{format_number(piece.lifetime)} a",
            format_number(piece.yearly),
            numbers.percent(costs.share(piece.yearly)),
        )
    return table
