"""What in this answer can hurt somebody, or would not work in steel?

Judged from what is really in the streams; mole fractions of the gas, pressure [Pa], temperature
[K]. One caution for each kind of hazard, naming the lines. Values with their sources stand at the
constants. This is a study tool: nothing here replaces a hazard study.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import NamedTuple

from chainflow.accounts.flammability import ALARM_SHARE, LIMITS, NO_GAS, Mixture, gas_mixture
from chainflow.accounts.mirrors import mirrors_astray
from chainflow.basis.constants import ICE_POINT
from chainflow.basis.formatting import format_quantity
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.densities import liquefying
from chainflow.thermo.species import species_of
from chainflow.thermo.streams import Stream

CLOSING_SENTENCE = (
    "This is a study tool: local codes and a licensed engineer decide what may be built and run."
)


class Exposure(NamedTuple):
    """Occupational exposure limit as a mean over 8 hours [mol/mol], and who says so."""

    limit: float
    source: str


EXPOSURE_LIMITS = {  # all from memory of the directives named
    "CO": Exposure(20e-6, "EU 2017/164"),
    "CH3OH": Exposure(200e-6, "EU 2006/15"),
    "NH3": Exposure(20e-6, "EU 2000/39"),
    "NO": Exposure(2e-6, "EU 2017/164"),
    "NO2": Exposure(0.5e-6, "EU 2017/164"),
}
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


class Finding(NamedTuple):
    """What was found in a stream; the larger the severity, the worse."""

    severity: float
    note: str


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
    own += [
        Remark("sun-not-followed", name, text) for name, text in mirrors_astray(solution.flowsheet)
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
    """Yield one caution for each kind of hazard found in the streams, the worst stream first."""
    lines = [(s, s.flow) for s in solution.streams if isinstance(s.flow, Stream)]
    flowing = [(line, stream) for line, stream in lines if float(stream.total) > 0.0]
    for code, finds, sentence in _HAZARDS:
        found = [(line, finding) for line, stream in flowing if (finding := finds(stream))]
        if found:
            worst = sorted(found, key=lambda pair: -pair[1].severity)
            yield Remark(code, worst[0][0].source, f"{sentence}: {_listed(worst)}")


def _listed(found: list[tuple[SolvedStream, Finding]]) -> str:
    named = [f"{line.key} ({finding.note})" for line, finding in found[:_MOST_NAMES]]
    more = len(found) - len(named)
    return ", ".join(named) + (f" and {more} more" if more > 0 else "")


def _shares(stream: Stream) -> dict[str, float]:
    """Return the mole fractions of the gas; empty if there is next to none."""
    total = float(stream.gas.sum())
    if total <= NO_GAS * float(stream.total):
        return {}
    pairs = zip(stream.matter.components, stream.gas.tolist(), strict=True)
    return {name: flow / total for name, flow in pairs if flow > 0.0}


def _percent(share: float) -> str:
    return f"{100 * share:.3g} %"


def _flammable_mixture(stream: Stream) -> Finding | None:
    mixture = gas_mixture(stream)
    if not mixture.flammable or float(stream.temperature) > _HOT_GAS:
        return None
    return _fuel_and_oxygen(mixture)


def _near_flammable(stream: Stream) -> Finding | None:
    mixture = gas_mixture(stream)
    if mixture.flammable or not mixture.within(ALARM_SHARE):
        return None
    return _fuel_and_oxygen(mixture) if float(stream.temperature) <= _HOT_GAS else None


def _fuel_and_oxygen(mixture: Mixture) -> Finding:
    note = f"{_percent(mixture.fuel)} fuel, {_percent(mixture.oxygen)} O2"
    return Finding(min(mixture.fuel, mixture.oxygen), note)


def _flammable_contents(stream: Stream) -> Finding | None:
    mixture = gas_mixture(stream)
    if mixture.fuel < mixture.lower:
        return None
    shares = _shares(stream)
    main = max((name for name in shares if name in LIMITS), key=lambda n: shares[n], default="")
    note = f"{_percent(shares[main])} {main}" if main else f"{_percent(mixture.fuel)} fuel"
    return Finding(mixture.fuel, note)


def _toxic(stream: Stream) -> Finding | None:
    shares = {name: share for name, share in _shares(stream).items() if name in EXPOSURE_LIMITS}
    over = {name: share for name, share in shares.items() if share > EXPOSURE_LIMITS[name].limit}
    if not over:
        return None
    note = ", ".join(
        f"{name} {format_quantity(share, '1', digits=3)}" for name, share in over.items()
    )
    return Finding(max(share / EXPOSURE_LIMITS[name].limit for name, share in over.items()), note)


def _oxygen_enriched(stream: Stream) -> Finding | None:
    oxygen = _shares(stream).get("O2", 0.0)
    return Finding(oxygen, f"{_percent(oxygen)} O2") if oxygen > OXYGEN_ENRICHED else None


def _carbon_dioxide(stream: Stream) -> Finding | None:
    share = _shares(stream).get("CO2", 0.0)
    return Finding(share, f"{_percent(share)} CO2") if share > CARBON_DIOXIDE else None


def _high_pressure(stream: Stream) -> Finding | None:
    pressure = float(stream.pressure)
    return Finding(pressure, f"{pressure / 1e5:.4g} bar") if pressure > HIGH_PRESSURE else None


def _hot_hydrogen(stream: Stream) -> Finding | None:
    partial = _shares(stream).get("H2", 0.0) * float(stream.pressure)
    level = float(stream.temperature)
    if partial <= HOT_HYDROGEN_PRESSURE or level <= HOT_HYDROGEN_TEMPERATURE:
        return None
    return Finding(level, f"{partial / 1e5:.3g} bar of H2 at {level - ICE_POINT:.4g} degC")


def _liquid_expected(stream: Stream) -> Finding | None:
    level, pressure, shares = float(stream.temperature), float(stream.pressure), _shares(stream)
    if not shares:
        return None
    oil = stream.matter.oil  # what can condense as oil has done so already
    found = liquefying(stream.matter, stream.gas, level, pressure)
    names = [name for name in found if oil is None or name not in oil.names]
    sure = [name for name in names if shares[name] >= NEARLY_PURE or _far_below(name, level)]
    if not sure:
        return None
    note = f"{', '.join(sure)} at {level - ICE_POINT:.4g} degC and {pressure / 1e5:.4g} bar"
    return Finding(pressure, note)


def _far_below(name: str, level: float) -> bool:
    critical = species_of(name).input_data["critical-parameters"]
    return bool(level < WELL_BELOW_CRITICAL * critical["critical-temperature"])


_HAZARDS: tuple[tuple[str, Callable[[Stream], Finding | None], str], ...] = (
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
                f"carbon activity {activity:.3g} with CO at {level - ICE_POINT:.4g} degC: "
                "metal dusting eats steels between 400 and 800 degC"
            )
            yield Remark("metal-dusting", name, text)
