"""How far can one absorber, or two in series, go in splitting water with sunlight?

The limits of the detailed balance (see `chainflow.thermo.detailed_balance`) at 25 degC under the
global reference spectrum, without any overpotential and with a given one. SI throughout, band gaps
in J. A real device stays below: it reflects, recombines and has resistances.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from chainflow.basis.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK, T_REFERENCE
from chainflow.basis.faults import UsageFault
from chainflow.equipment.sun.photons import reference_photons
from chainflow.thermo.detailed_balance import Best, CellLimit, DetailedBalance
from chainflow.thermo.electrochemistry import reversible_voltage


@dataclass(frozen=True, slots=True)
class Absorber:
    """What a gap can do by itself."""

    gap: float
    wavelength: float  # longest whose photons it takes [m]
    available: float  # current density, one electron per photon [A/m2]
    share: float  # solar to hydrogen if all these electrons split water [-]
    cell: CellLimit  # as a solar cell


@dataclass(frozen=True, slots=True)
class Pair:
    """Two gaps in series."""

    gaps: tuple[float, float]
    efficiency: float  # solar to hydrogen [-]
    current_density: float  # [A/m2]
    limited_by: str  # upper, lower, or neither where the voltage is what lacks


@dataclass(frozen=True, slots=True)
class Splitting:
    """Solar to hydrogen at one overpotential."""

    overpotential: float  # of everything together [V]
    needed: float  # reversible voltage and overpotential [V]
    alone: tuple[Best, ...]  # each gap by itself
    pair: Pair | None  # the two gaps in series
    behind: Best | None  # a gap with the best one behind it
    front: Best | None  # a gap with the best one in front of it
    best_one: Best
    best_two: Best


@dataclass(frozen=True, slots=True)
class Limits:
    """All limits for one or two gaps."""

    irradiance: float  # of the spectrum [W/m2]
    absorbers: tuple[Absorber, ...]  # upper first
    best_cell: Best
    splitting: tuple[Splitting, ...]  # without overpotential first


def limits(gaps: Sequence[float], overpotential: float) -> Limits:
    """Return the limits of one gap or of two in series.

    Parameters
    ----------
    gaps : one or two band gaps [J]; the larger one is in front.
    overpotential : what the reaction needs beyond the reversible voltage, of both electrodes and
        the electrolyte together [V], not below zero.

    Raises `UsageFault` for another number of gaps, or two equal ones.
    """
    if not 1 <= len(gaps) <= 2:
        raise UsageFault(f"{len(gaps)} band gaps are given, wanted one, or two for a series tandem")
    ordered = tuple(sorted(gaps, reverse=True))
    if len(set(ordered)) < len(ordered):
        raise UsageFault("the two band gaps are the same: the lower absorber would get no light")
    balance = DetailedBalance(reference_photons())
    wanted = dict.fromkeys((0.0, overpotential))
    return Limits(
        balance.photons.total,
        tuple(_absorber(balance, gap) for gap in ordered),
        balance.best_cell(),
        tuple(_splitting(balance, ordered, extra) for extra in wanted),
    )


def _absorber(balance: DetailedBalance, gap: float) -> Absorber:
    available = balance.photons.current_above(gap)
    share = available * reversible_voltage(T_REFERENCE) / balance.photons.total
    return Absorber(gap, PLANCK * LIGHT_SPEED / gap, available, share, balance.cell(gap))


def _splitting(
    balance: DetailedBalance, gaps: tuple[float, ...], overpotential: float
) -> Splitting:
    needed = reversible_voltage(T_REFERENCE) + overpotential
    alone = tuple(Best((g,), float(balance.one_absorber(g, needed).efficiency)) for g in gaps)
    single = len(gaps) == 1
    return Splitting(
        overpotential,
        needed,
        alone,
        None if single else _pair(balance, gaps, needed),
        balance.best_behind(gaps[0], needed) if single else None,
        balance.best_in_front(gaps[0], needed) if single else None,
        balance.best_absorber(needed),
        balance.best_tandem(needed),
    )


def _pair(balance: DetailedBalance, gaps: tuple[float, ...], needed: float) -> Pair:
    upper, lower = gaps
    found = balance.tandem(upper, lower, needed)
    first = balance.photons.current_above(upper)
    second = balance.photons.current_above(lower) - first
    current = float(found.current_density)
    close = current > 0.98 * min(first, second)
    limited = ("upper" if first < second else "lower") if close else "voltage"
    return Pair((upper, lower), float(found.efficiency), current, limited)


# --- as plain data -------------------------------------------------------------------------------


def limits_document(found: Limits) -> dict[str, Any]:
    """Return limits as plain data; names end in their unit, gaps in eV."""
    return {
        "spectrum": "ASTM G173-03 global",
        "irradiance_W_m2": found.irradiance,
        "temperature_K": T_REFERENCE,
        "absorbers": [_absorber_entry(one) for one in found.absorbers],
        "best_cell": _best_entry(found.best_cell, "efficiency"),
        "splitting": [_splitting_entry(one) for one in found.splitting],
    }


def _absorber_entry(one: Absorber) -> dict[str, Any]:
    cell = one.cell
    return {
        "gap_eV": in_volts(one.gap),
        "longest_wavelength_m": one.wavelength,
        "available_current_A_m2": one.available,
        "solar_to_hydrogen_of_all_photons": one.share,
        "cell": {
            "short_circuit_A_m2": float(cell.short_circuit),
            "open_circuit_V": float(cell.open_circuit),
            "fill_factor": float(cell.fill_factor),
            "efficiency": float(cell.efficiency),
        },
    }


def _splitting_entry(one: Splitting) -> dict[str, Any]:
    pair = one.pair
    return {
        "overpotential_V": one.overpotential,
        "needed_V": one.needed,
        "one_absorber": [_best_entry(best) for best in one.alone],
        "tandem": None
        if pair is None
        else {
            "gaps_eV": [in_volts(gap) for gap in pair.gaps],
            "solar_to_hydrogen": pair.efficiency,
            "current_density_A_m2": pair.current_density,
            "limited_by": pair.limited_by,
        },
        "best_behind": _best_entry(one.behind),
        "best_in_front": _best_entry(one.front),
        "best_one_absorber": _best_entry(one.best_one),
        "best_tandem": _best_entry(one.best_two),
    }


def _best_entry(best: Best | None, name: str = "solar_to_hydrogen") -> dict[str, Any] | None:
    if best is None:
        return None
    return {"gaps_eV": [in_volts(gap) for gap in best.gaps], name: best.efficiency}


def in_volts(gap: float) -> float:
    """Return a band gap [J] in eV, without the round-off of the way back."""
    return round(gap / ELEMENTARY_CHARGE, 12)
