"""What is reported of an electrolyser: voltages, energy per hydrogen, losses, and what is doubtful.

SI throughout. Ratios that do not depend on how much flows are given at rest too.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from chainflow.basis.constants import FARADAY
from chainflow.equipment.base import Caution, Site, material
from chainflow.equipment.cells.alkaline import HIGHEST_DENSITY
from chainflow.equipment.cells.gases import LiquidFed, Made, SteamFed, hydrogen_mass
from chainflow.equipment.cells.measured import MeasuredCurve
from chainflow.equipment.cells.sizing import Working
from chainflow.equipment.ports import Feeds
from chainflow.thermo.carbon import carbon_activity
from chainflow.thermo.electrochemistry import reversible_voltage

if TYPE_CHECKING:
    from chainflow.equipment.electrolysis import Electrolyser

MOST_HYDROGEN = 0.02  # in oxygen; half the lower explosion limit of about 4 % (common practice)
MOST_CONVERSION = 0.80  # of steam in one pass; common practice, no source
COOLING = 75.0  # [K] below the stack, where a gas that is cooled may still deposit carbon
NEAR_LIMIT = 0.95
BASES = ("LHV", "HHV")
LOW_PRESSURE = 5e5  # [Pa], below which supersaturation counts for most of the crossing


def report(
    piece: Electrolyser, stack: Any, at: Working, made: Made, heat: float, feeds: Feeds, site: Site
) -> tuple[dict[str, float], tuple[Caution, ...]]:
    """Return results and cautions of a stack at work."""
    results = _amounts(at, made, feeds)
    results |= _voltages(piece, at, made)
    results |= _ratios(piece, stack, at, made, feeds, site)
    results |= {
        "stack_heat_W": heat,
        "cooling_W": max(-heat, 0.0),
        "rectifier_loss_W": at.direct * (1.0 / piece.rectifier - 1.0),
        "auxiliaries_W": at.direct * piece.auxiliaries,
    }
    if piece.rating:
        results["load"] = results["direct_current_W"] / piece.rating * piece.drawn
    if isinstance(stack.gases, SteamFed):
        results |= _hot(stack.gases, site)
    return results, tuple(_cautions(piece, stack, at, results, site))


def _amounts(at: Working, made: Made, feeds: Feeds) -> dict[str, float]:
    hydrogen = float(made.gases["hydrogen"].flow("H2"))
    water = material(feeds, "water")
    found = {
        "hydrogen_mol_s": hydrogen,
        "hydrogen_kg_s": hydrogen * hydrogen_mass(),
        "water_kg_s": made.drawn["water"] * float(water.mass_flow),
        "direct_current_W": at.direct,
        "voltage_V": at.voltage,
        "current_A": at.current,
    }
    if at.density > 0.0 or at.area > 0.0:
        found |= {"current_density_A_m2": at.density, "cell_area_m2": at.area}
    return found


def _voltages(piece: Electrolyser, at: Working, made: Made) -> dict[str, float]:
    if piece.model in ("specific-energy", "voltage"):
        return {"reversible_V": reversible_voltage(piece.temperature)}
    found = at.losses.results()
    if at.current > 0.0:
        found["thermoneutral_V"] = (made.leaving - made.heated) / at.current
    return found


def _ratios(
    piece: Electrolyser, stack: Any, at: Working, made: Made, feeds: Feeds, site: Site
) -> dict[str, float]:
    """Energy and water per hydrogen, and efficiencies, at the stack and at the fence."""
    if stack.unmet:  # power goes in and nothing is made of it
        return {f"{place}_efficiency_{b}": 0.0 for place in ("stack", "fence") for b in BASES}
    drawn, per_current = piece.drawn, 2.0 * FARADAY * at.voltage
    hydrogen, lower, higher = _gained(stack.gases, at, site)
    found: dict[str, float] = {}
    if not isinstance(stack.gases, SteamFed):
        found["faraday_efficiency"] = at.share.net
        crossed = at.share.crossed
        oxygen = 0.5 * (at.share.net + crossed)
        found["hydrogen_in_oxygen"] = crossed / (crossed + oxygen) if crossed > 0.0 else 0.0
    if hydrogen > 0.0:
        use = per_current / (hydrogen * hydrogen_mass())
        found |= {"stack_energy_use_J_kg": use, "fence_energy_use_J_kg": use * drawn}
        leaving = float(made.gases["hydrogen"].flow("H2")) * hydrogen_mass()
        if leaving > 0.0:
            water = made.drawn["water"] * float(material(feeds, "water").mass_flow)
            found["water_use"] = water / leaving
    for basis, value in zip(BASES, (lower, higher), strict=True):
        share = value / per_current
        found |= {f"stack_efficiency_{basis}": share, f"fence_efficiency_{basis}": share / drawn}
    return found


def _gained(gases: LiquidFed | SteamFed, at: Working, site: Site) -> tuple[float, float, float]:
    """Hydrogen [mol], LHV and HHV [J] that the product gained, per mol that the current could make.

    Hydrogen alone says nothing where CO is made beside it: it is zero then.
    """
    matter = site.matter
    place = matter.index["H2"]
    if not isinstance(gases, SteamFed):
        net = at.share.net
        return net, net * float(matter.lhv[place]), net * float(matter.hhv[place])
    change = (gases.found.product - gases.feed.flows) / gases.found.oxygen
    carbon = gases.found.gas.carbon > 0.0
    return (
        0.0 if carbon else float(change[place]),
        float(matter.lhv @ change),
        float(matter.hhv @ change),
    )


def _hot(gases: SteamFed, site: Site) -> dict[str, float]:
    found = {"conversion_per_pass": gases.found.per_pass}
    if gases.found.gas.carbon > 0.0:
        found["carbon_activity"] = carbon_activity(
            site.matter, gases.found.product, gases.temperature, gases.pressure
        )
    return found


def _cautions(
    piece: Electrolyser, stack: Any, at: Working, results: dict[str, float], site: Site
) -> Iterator[Caution]:
    limit = results.get("reversible_V", 0.0)
    if at.voltage < limit:
        text = (
            f"{at.voltage:.4g} V per cell is below the reversible voltage {limit:.4g} V: no "
            "stack can do that"
        )
        yield Caution("below-reversible-voltage", text)
    yield from _load(piece, results)
    if at.current > 0.0:
        yield from _leak(piece, results)
        yield from _range(piece, stack, at)
    if isinstance(stack.gases, SteamFed):
        yield from _hot_cautions(stack.gases, results, site)


def _load(piece: Electrolyser, results: dict[str, float]) -> Iterator[Caution]:
    load = results.get("load")
    if load is None:
        return
    if load > 1.0 + 1e-9:
        text = f"the stack draws {100 * load:.4g} % of its rating: enlarge it or send less power"
        yield Caution("above-rating", text)
    least = piece.minimum_load or 0.0
    if 0.0 < load < least:
        text = (
            f"the stack draws {100 * load:.4g} % of its rating, below its minimum load of "
            f"{100 * least:.4g} %: switch it off or keep it above"
        )
        yield Caution("below-minimum-load", text)


def _leak(piece: Electrolyser, results: dict[str, float]) -> Iterator[Caution]:
    share = results.get("hydrogen_in_oxygen", 0.0)
    if share > MOST_HYDROGEN:
        text = (
            f"{100 * share:.3g} % hydrogen in the oxygen, stacks trip at "
            f"{100 * MOST_HYDROGEN:g} %: more current, less pressure, a thicker membrane or a "
            "recombination catalyst lowers it"
        )
        yield Caution("hydrogen-in-oxygen", text)
    cell = piece.pem
    if cell is not None and cell.supersaturation == 0.0 and piece.pressure < LOW_PRESSURE:
        text = (
            f"at {piece.pressure / 1e5:.3g} bar most hydrogen that crosses does so by "
            "supersaturation, which is left out: 'pem.supersaturation' counts it"
        )
        yield Caution("supersaturation-left-out", text)


def _range(piece: Electrolyser, stack: Any, at: Working) -> Iterator[Caution]:
    if at.density > NEAR_LIMIT * stack.curve.limit:
        text = (
            f"{at.density / 1e4:.4g} A/cm2 is close to the limiting current of "
            f"{stack.curve.limit / 1e4:.4g} A/cm2"
        )
        yield Caution("near-limiting-current", text)
    cell = piece.alkaline
    if cell is not None and cell.method == "empirical" and at.density > HIGHEST_DENSITY * 1.001:
        text = (
            f"{at.density / 1e4:.4g} A/cm2 is above the {HIGHEST_DENSITY / 1e4:.4g} A/cm2 of "
            "the published curve: the formula goes on"
        )
        yield Caution("outside-the-curve", text)
    if isinstance(stack.curve, MeasuredCurve):
        text = stack.curve.outside(at.density)
        if text:
            yield Caution("outside-the-curve", text)


def _hot_cautions(gases: SteamFed, results: dict[str, float], site: Site) -> Iterator[Caution]:
    per_pass = results["conversion_per_pass"]
    if per_pass > MOST_CONVERSION:
        text = (
            f"{100 * per_pass:.3g} % of the steam and CO2 is converted in one pass, above "
            f"{100 * MOST_CONVERSION:g} % parts of a cell starve: convert less or recirculate "
            "more"
        )
        yield Caution("high-conversion", text)
    if "carbon_activity" not in results:
        return
    product, level = gases.found.product, gases.temperature
    cold = carbon_activity(site.matter, product, level - COOLING, gases.pressure)
    for where, activity in (("in the stack", results["carbon_activity"]), ("when cooled", cold)):
        if activity > 1.0:
            text = (
                f"carbon activity {activity:.3g} {where}: carbon can form; convert less or "
                "add steam"
            )
            yield Caution("carbon-activity", text)
            return
