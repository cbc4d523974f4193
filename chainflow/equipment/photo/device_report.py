"""What is reported of a photoelectrochemical device: voltages, efficiency, where the light went.

SI throughout. Current densities are of the device's aperture. The budget counts hydrogen by its
work at 25 degC and 1 bar, as the published solar-to-hydrogen efficiency does, and adds up to the
light and the bias.
"""

from __future__ import annotations

from collections.abc import Iterator
from math import log1p
from typing import TYPE_CHECKING

from chainflow.basis.constants import ELEMENTARY_CHARGE, T_REFERENCE
from chainflow.equipment.base import Caution
from chainflow.equipment.cells.gases import hydrogen_mass
from chainflow.equipment.photo.circuit import Circuit
from chainflow.equipment.photo.light_paths import Taken, current_at
from chainflow.equipment.photo.measured_points import EfficiencyCurve
from chainflow.thermo.detailed_balance import emission, thermal_voltage
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.streams import Stream

if TYPE_CHECKING:
    from chainflow.equipment.photoelectrode import Photoelectrode, Work

MOST_JUNCTIONS = 6
_JUNCTIONS = tuple(f"junction_{i}_V" for i in range(1, MOST_JUNCTIONS + 1))
_LITTLE = 0.01  # share of a quantum efficiency beyond the gap that is not worth a word
_EDGES = 0.0, reversible_voltage(T_REFERENCE)  # of the two half reactions [V]
RESULTS: tuple[str, ...] = (
    "hydrogen_mol_s",
    "hydrogen_kg_s",
    "water_kg_s",
    "water_use",
    "solar_to_hydrogen",
    "solar_to_hydrogen_net_of_bias",
    "current_density_A_m2",
    "current_A",
    "area_m2",
    "available_current_A_m2",
    "electrode_limit_A_m2",
    "cell_limit_A_m2",
    "reversible_V",
    "electrode_potential_V",
    "photovoltage_V",
    "overpotentials_V",
    "counter_electrode_V",
    "electrolyte_V",
    "needed_V",
    "cell_V",
    *_JUNCTIONS,
    "cell_open_circuit_V",
    "current_per_volt_S_m2",
    "current_by_electrode",
    "current_by_cell",
    "light_W",
    "bias_power_W",
    "not_absorbed_W",
    "passed_W",
    "not_collected_W",
    "thermalised_W",
    "voltage_not_used_W",
    "hydrogen_work_W",
    "device_heat_W",
)


def report(
    piece: Photoelectrode, work: Work, water: Stream
) -> tuple[dict[str, float], tuple[Caution, ...]]:
    """Return results and cautions of a device."""
    results = _amounts(work, water) | _currents(work) | _voltages(piece, work)
    results |= _budget(piece, work) | _efficiencies(piece, work)
    results["device_heat_W"] = work.heat
    return results, tuple(_cautions(piece, work, results))


def _amounts(work: Work, water: Stream) -> dict[str, float]:
    hydrogen = float(work.made.gases["hydrogen"].flow("H2"))
    needs = work.made.drawn["water"] * float(water.mass_flow)
    found = {
        "hydrogen_mol_s": hydrogen,
        "hydrogen_kg_s": hydrogen * hydrogen_mass(),
        "water_kg_s": needs,
        "current_A": work.current,
        "area_m2": work.light.area,
    }
    if hydrogen > 0.0:
        found["water_use"] = needs / found["hydrogen_kg_s"]
    return found


def _currents(work: Work) -> dict[str, float]:
    circuit = work.circuit
    found = {
        "current_density_A_m2": circuit.density,
        "available_current_A_m2": work.paths.available * work.light.irradiance,
        "electrode_limit_A_m2": circuit.electrode.limit * circuit.part,
        "current_per_volt_S_m2": circuit.per_volt,
        "current_by_electrode": circuit.by_electrode,
    }
    if circuit.junctions:
        found["cell_limit_A_m2"] = min(one.light for one in circuit.junctions)
        found["current_by_cell"] = circuit.by_cell
    return found


def _voltages(piece: Photoelectrode, work: Work) -> dict[str, float]:
    """Voltages at the crossing; without one, those at which current would begin."""
    circuit = work.circuit
    found = {"reversible_V": piece.reversible}
    if not circuit.limit > 0.0:
        return found
    _, own = piece.dark_laws
    density, drive = circuit.density, circuit.drive
    counter, dropped = circuit.counter.voltage(density), density * circuit.resistance
    dark = own.law.voltage(density)
    ideal = 0.0 if circuit.base else piece.reversible
    junctions = circuit.voltages()
    found |= {
        "electrode_potential_V": piece.direction * drive,
        "photovoltage_V": ideal + dark - drive,
        "overpotentials_V": dark + counter + dropped,
        "counter_electrode_V": counter,
        "electrolyte_V": dropped,
        "needed_V": circuit.base + counter + dropped + drive,
    }
    if junctions:
        found["cell_V"] = sum(junctions)
        found["cell_open_circuit_V"] = circuit.given(0.0) - circuit.bias
        if piece.cell is not None and len(junctions) == len(piece.cell.gaps):
            found |= dict(zip(_JUNCTIONS, junctions, strict=False))
    return found


def _budget(piece: Photoelectrode, work: Work) -> dict[str, float]:
    """Where the light went [W]; adds up to light and bias."""
    paths, rate = work.paths, work.light.rate
    count = piece.cell.in_series if piece.cell else 1
    absorbers = [(paths.electrode, 1), *((taken, count) for taken in paths.junctions)]
    shares = [_shares(taken, times * work.current, rate) for taken, times in absorbers]
    lost, hot, lifted = (sum(one[place] for one in shares) for place in range(3))
    bias, hydrogen = piece.bias * work.current, _work(piece, work)
    return {
        "light_W": rate,
        "bias_power_W": bias,
        "not_absorbed_W": paths.not_absorbed * rate,
        "passed_W": paths.passed * rate,
        "not_collected_W": lost,
        "thermalised_W": hot,
        "voltage_not_used_W": lifted + bias - hydrogen,
        "hydrogen_work_W": hydrogen,
    }


def _shares(taken: Taken, current: float, rate: float) -> tuple[float, float, float]:
    """Split the light of an absorber [W] that drives a current [A].

    Photons that become no current; what the others have above the gap; and their gaps. A junction
    that is driven through its shunt carries more than its light.
    """
    light, most = taken.energy * rate, taken.photons * rate
    used = min(current, most)
    collected = light * used / most if most > 0.0 else 0.0
    lifted = used * taken.gap / ELEMENTARY_CHARGE
    return light - collected, collected - lifted, lifted


def _work(piece: Photoelectrode, work: Work) -> float:
    """Work to make the hydrogen at 25 degC and 1 bar [W]."""
    return work.current * piece.faraday_efficiency * reversible_voltage(T_REFERENCE)


def _efficiencies(piece: Photoelectrode, work: Work) -> dict[str, float]:
    irradiance, density = work.light.irradiance, work.circuit.density
    if not irradiance > 0.0:
        return {"solar_to_hydrogen": 0.0, "solar_to_hydrogen_net_of_bias": 0.0}
    volts = piece.faraday_efficiency * reversible_voltage(T_REFERENCE)
    return {
        "solar_to_hydrogen": density * volts / irradiance,
        "solar_to_hydrogen_net_of_bias": density * (volts - piece.bias) / irradiance,
    }


def no_crossing(circuit: Circuit) -> str:
    """Say what is given and what is needed where the curves do not cross."""
    if not circuit.limit > 0.0:
        return "these curves do not cross: no current flows where no light arrives"
    needed = f"{circuit.needed(0.0):.2g} V are needed"
    if not circuit.junctions and not circuit.bias:
        return (
            f"these curves do not cross: nothing gives a voltage where {needed}; put a solar "
            "'cell' behind or set 'bias'"
        )
    names = [
        n for n, there in (("the cell", circuit.junctions), ("the bias", circuit.bias)) if there
    ]
    gives = "gives" if len(names) == 1 else "give"
    return (
        f"these curves do not cross: {' and '.join(names)} {gives} {circuit.given(0.0):.2g} V "
        f"where {needed}"
    )


# --- cautions ------------------------------------------------------------------------------------


def _cautions(piece: Photoelectrode, work: Work, results: dict[str, float]) -> Iterator[Caution]:
    circuit = work.circuit
    if work.light.irradiance > 0.0 and not circuit.crosses:
        text = f"in {work.light.irradiance:.4g} W/m2 {no_crossing(circuit)}: it stands still"
        yield Caution("too-dim", text)
    if circuit.crosses:
        stray = circuit.electrode.stray(circuit.drive)
        if stray:
            text = f"{results['electrode_potential_V']:.4g} V at the photoelectrode is {stray}"
            yield Caution("outside-the-curve", text)
        for one in circuit.junctions:
            away = one.stray(circuit.density)
            if away:
                yield Caution("outside-the-curve", f"{circuit.density:.4g} A/m2 is {away}")
        yield from _too_good(piece, work, results)
    yield from _beyond_gap(piece)
    yield from _edges(piece)


def _too_good(piece: Photoelectrode, work: Work, results: dict[str, float]) -> Iterator[Caution]:
    """A photovoltage that not even the detailed balance allows."""
    level = thermal_voltage(piece.temperature)
    most_current = work.paths.electrode.photons * work.light.irradiance / work.circuit.part
    dark = emission(piece.band_gap, piece.temperature)
    left = most_current - work.circuit.density / work.circuit.part
    limit = level * log1p(max(left, 0.0) / dark)
    found = results["photovoltage_V"]
    if found > limit:
        text = (
            f"the photoelectrode supplies {found:.3g} V, a gap of "
            f"{piece.band_gap / ELEMENTARY_CHARGE:.3g} eV {limit:.3g} V at most: check "
            "the curve, or the 'dark_electrode' it is compared with"
        )
        yield Caution("photovoltage-above-limit", text)


def _beyond_gap(piece: Photoelectrode) -> Iterator[Caution]:
    if not isinstance(piece.quantum_efficiency, EfficiencyCurve):
        return
    points = piece.quantum_efficiency.sorted()
    inside = current_at(points, piece.band_gap)
    everything = current_at(points, 1e-3 * piece.band_gap)
    if everything - inside > _LITTLE * everything:
        text = (
            f"{100.0 * (1.0 - inside / everything):.3g} % of the current of the quantum efficiency "
            "lies below the band gap and does not count: check 'band_gap'"
        )
        yield Caution("quantum-efficiency-below-gap", text)


def _edges(piece: Photoelectrode) -> Iterator[Caution]:
    """Band edges against the two half reactions, 0 and 1.23 V; edges are known to 0.2 V or so."""
    if piece.conduction_edge is None:
        return
    conduction = piece.conduction_edge
    valence = conduction + piece.band_gap / ELEMENTARY_CHARGE
    hydrogen, oxygen = _EDGES
    alone = piece.cell is None and not piece.bias
    if piece.electrode == "photoanode" and valence < oxygen:
        text = f"the valence band edge, {valence:.3g} V, is below 1.23 V: holes make no oxygen"
        yield Caution("band-edge", text)
    if conduction > hydrogen and (alone or piece.electrode == "photocathode"):
        text = (
            f"the conduction band edge, {conduction:.3g} V, is above 0 V: electrons make no "
            "hydrogen" + ("" if piece.electrode == "photocathode" else " without a cell or a bias")
        )
        yield Caution("band-edge", text)
    if piece.electrode == "photocathode" and alone and valence < oxygen:
        text = (
            f"the valence band edge, {valence:.3g} V, is below 1.23 V: holes make no oxygen "
            "without a cell or a bias"
        )
        yield Caution("band-edge", text)
