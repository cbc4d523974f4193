"""What in this answer can hurt somebody, or would not work in steel?

Judged from what is really in the streams; mole fractions of the gas, pressure [Pa], temperature
[K]. One caution for each kind of hazard, naming the lines. Values with their sources stand at the
constants. This is a study tool: nothing here replaces a hazard study.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from chainflow.accounts.flammability import ALARM_SHARE, LIMITS, gas_mixture
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.densities import liquefying
from chainflow.thermo.species import component_species
from chainflow.thermo.streams import Stream

CLOSING_SENTENCE = (
    "This is a study tool: local codes and a licensed engineer decide what may be built and run."
)

EXPOSURE_LIMITS = {  # [mol/mol], mean over 8 hours
    "CO": (20e-6, "EU 2017/164"),
    "CH3OH": (200e-6, "EU 2006/15"),
    "NH3": (20e-6, "EU 2000/39"),
    "NO": (2e-6, "EU 2017/164"),
    "NO2": (0.5e-6, "EU 2017/164"),
    "H2S": (5e-6, "EU 2009/161"),
}  # CO in the directive's text; the others from memory
OXYGEN_ENRICHED = 0.235  # [mol/mol], OSHA 29 CFR 1910.146, from memory
CARBON_DIOXIDE = 0.5  # [mol/mol], gas that is mostly CO2; our own threshold
HIGH_PRESSURE = 100e5  # [Pa], our own threshold
HOT_HYDROGEN_TEMPERATURE = 477.0  # [K], 204 degC, API RP 941, from memory
HOT_HYDROGEN_PRESSURE = 3.5e5  # [Pa] partial pressure, API RP 941, from memory
NEARLY_PURE = 0.9  # mole fraction from which a component liquefies as if alone; our own threshold
WELL_BELOW_CRITICAL = 0.75  # T / Tc below which Raoult's law serves mixtures; our own threshold
DUSTING_RANGE = (673.15, 1073.15)  # [K], 400-800 degC: Grabke; AMPP paper 07416
_MOST_NAMES = 6
_HOT_GAS = 1000.0  # [K], above this a gas with oxygen burns at once and is no lurking mixture


@dataclass(frozen=True, slots=True)
class Remark:
    """A caution or idealisation with the equipment it belongs to, if any."""

    code: str
    equipment: str | None
    text: str
    minimum_work: float | None = None  # [W], of an idealisation


def cautions(solution: Solution) -> tuple[Remark, ...]:
    """Return all cautions of an answer: the equipment's own, then those of the streams."""
    own = [
        Remark(caution.code, name, caution.text)
        for name, outcome in solution.outcomes.items()
        for caution in outcome.cautions
    ]
    return (*own, *_dusting(solution), *stream_cautions(solution))


def idealisations(solution: Solution) -> tuple[Remark, ...]:
    """Return everything the answer takes for free, with the least work it hides where known."""
    own = [
        Remark(found.code, name, found.text, outcome.results.get("minimum_work_W"))
        for name, outcome in solution.outcomes.items()
        for found in outcome.idealisations
    ]
    recycles = [
        Remark(fault.code, None, fault.text)
        for fault in solution.remarks
        if fault.code == "drop-free-recycle"
    ]
    return (*own, *recycles)


def stream_cautions(solution: Solution) -> Iterator[Remark]:
    """Yield one caution for each kind of hazard found in the streams."""
    lines = [s for s in solution.streams if isinstance(s.flow, Stream) and float(s.flow.total) > 0]
    for code, finds, sentence in _HAZARDS:
        found = [(line, note) for line in lines if (note := finds(line.flow))]  # type: ignore[arg-type] # streams only
        if found:
            yield Remark(code, found[0][0].source, f"{sentence}: {_listed(found)}")


def _listed(found: list[tuple[SolvedStream, str]]) -> str:
    named = [f"{line.key} ({note})" for line, note in found[:_MOST_NAMES]]
    more = len(found) - len(named)
    return ", ".join(named) + (f" and {more} more" if more > 0 else "")


def _shares(stream: Stream) -> dict[str, float]:
    """Return the mole fractions of the gas; empty if there is none."""
    total = float(stream.gas.sum())
    if total <= 0.0:
        return {}
    pairs = zip(stream.matter.components, stream.gas.tolist(), strict=True)
    return {name: flow / total for name, flow in pairs if flow > 0.0}


def _percent(share: float) -> str:
    return f"{100 * share:.3g} %"


def _flammable_mixture(stream: Stream) -> str:
    mixture = gas_mixture(stream)
    if not mixture.flammable or float(stream.temperature) > _HOT_GAS:
        return ""
    return f"{_percent(mixture.fuel)} fuel, {_percent(mixture.oxygen)} O2"


def _near_flammable(stream: Stream) -> str:
    mixture = gas_mixture(stream)
    if mixture.flammable or not mixture.within(ALARM_SHARE):
        return ""
    if float(stream.temperature) > _HOT_GAS:
        return ""
    return f"{_percent(mixture.fuel)} fuel, {_percent(mixture.oxygen)} O2"


def _flammable_contents(stream: Stream) -> str:
    mixture = gas_mixture(stream)
    if mixture.fuel < mixture.lower:
        return ""
    shares = _shares(stream)
    main = max((name for name in shares if name in LIMITS), key=lambda n: shares[n], default="")
    return f"{_percent(shares[main])} {main}" if main else f"{_percent(mixture.fuel)} fuel"


def _toxic(stream: Stream) -> str:
    shares = _shares(stream)
    over = {n: s for n, s in shares.items() if n in EXPOSURE_LIMITS and s > EXPOSURE_LIMITS[n][0]}
    if not over:
        return ""
    return ", ".join(f"{name} {1e6 * share:.3g} ppm" for name, share in over.items())


def _oxygen_enriched(stream: Stream) -> str:
    oxygen = _shares(stream).get("O2", 0.0)
    return f"{_percent(oxygen)} O2" if oxygen > OXYGEN_ENRICHED else ""


def _carbon_dioxide(stream: Stream) -> str:
    share = _shares(stream).get("CO2", 0.0)
    return f"{_percent(share)} CO2" if share > CARBON_DIOXIDE else ""


def _high_pressure(stream: Stream) -> str:
    pressure = float(stream.pressure)
    return f"{pressure / 1e5:.4g} bar" if pressure > HIGH_PRESSURE else ""


def _hot_hydrogen(stream: Stream) -> str:
    partial = _shares(stream).get("H2", 0.0) * float(stream.pressure)
    level = float(stream.temperature)
    if partial <= HOT_HYDROGEN_PRESSURE or level <= HOT_HYDROGEN_TEMPERATURE:
        return ""
    return f"{partial / 1e5:.3g} bar of H2 at {level - 273.15:.4g} degC"


def _liquid_expected(stream: Stream) -> str:
    level, pressure, shares = float(stream.temperature), float(stream.pressure), _shares(stream)
    names = liquefying(stream.matter, stream.gas, level, pressure)
    sure = [name for name in names if shares[name] >= NEARLY_PURE or _far_below(name, level)]
    if not sure:
        return ""
    return f"{', '.join(sure)} at {level - 273.15:.4g} degC and {pressure / 1e5:.4g} bar"


def _far_below(name: str, level: float) -> bool:
    critical = component_species()[name].input_data["critical-parameters"]
    return bool(level < WELL_BELOW_CRITICAL * critical["critical-temperature"])


_HAZARDS: tuple[tuple[str, Callable[[Stream], str], str], ...] = (
    (
        "flammable-mixture",
        _flammable_mixture,
        "fuel and oxygen are together in one line within the flammable range",
    ),
    (
        "near-flammable-mixture",
        _near_flammable,
        "fuel and oxygen in one line come within a factor of two of the flammable range",
    ),
    (
        "liquid-expected",
        _liquid_expected,
        "the answer has a gas where a liquid is expected, its enthalpy and density are wrong there",
    ),
    (
        "hot-hydrogen",
        _hot_hydrogen,
        "hot hydrogen attacks carbon steel (API RP 941), choose the steel for it",
    ),
    (
        "oxygen-enriched",
        _oxygen_enriched,
        "above 23.5 % oxygen much burns that does not burn in air, keep oil and grease out",
    ),
    (
        "toxic-contents",
        _toxic,
        "poisonous if it leaks, above the 8-hour limits",
    ),
    (
        "flammable-contents",
        _flammable_contents,
        "flammable if it leaks into air",
    ),
    (
        "asphyxiating-contents",
        _carbon_dioxide,
        "a leak of carbon dioxide gathers in low places and suffocates",
    ),
    (
        "high-pressure",
        _high_pressure,
        "above 100 bar",
    ),
)


def _dusting(solution: Solution) -> Iterator[Remark]:
    """Yield cautions for metal dusting: carbon-forming gas with CO in the range that eats steel."""
    for name, outcome in solution.outcomes.items():
        activity = outcome.results.get("carbon_activity", 0.0)
        product = outcome.outlets.get("product")
        if activity <= 1.0 or not isinstance(product, Stream):
            continue
        level = float(product.temperature)
        if DUSTING_RANGE[0] <= level <= DUSTING_RANGE[1] and product.flow("CO") > 0.0:
            text = (
                f"carbon activity {activity:.3g} with CO at {level - 273.15:.4g} degC: "
                "metal dusting eats steels between 400 and 800 degC"
            )
            yield Remark("metal-dusting", name, text)
