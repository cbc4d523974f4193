"""Do elements and energy balance, for every piece of equipment and for the plant?

Errors are relative to throughput: the largest flow of any element, the largest energy flow.
"""

from __future__ import annotations

import numpy as np

from chainflow.equipment.base import Outcome
from chainflow.equipment.boundary import Product, Supply, Vent
from chainflow.equipment.ports import Flow, Heat, Light, rate_of
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.equipment.sunlight import Sunlight
from chainflow.solver.finishing import Finish, arriving_whole
from chainflow.solver.solution import Balance
from chainflow.thermo.streams import Stream

_BOUNDARY = (Supply, Product, Vent, Sunlight, Grid)


def audit(finish: Finish) -> Balance:
    """Balance every piece of equipment, and the plant by its boundary alone."""
    flowsheet = finish.flowsheet
    by_equipment = {}
    worst_elements = worst_energy = 0.0
    largest = [0.0, 0.0]  # throughput of the busiest piece: a closed plant has none of its own
    for name, piece in flowsheet.equipment.items():
        if isinstance(piece, _BOUNDARY):
            continue
        gains, through = _elements(finish, name)
        energy, size = _energy(finish, name)
        largest = [max(largest[0], through), max(largest[1], size)]
        errors = (_relative(gains, through), _relative(energy, size))
        by_equipment[name] = errors
        worst_elements, worst_energy = max(worst_elements, errors[0]), max(worst_energy, errors[1])
    plant_elements, plant_energy = _plant(finish, *largest)
    return Balance(
        max(worst_elements, plant_elements), max(worst_energy, plant_energy), by_equipment
    )


def _relative(error: np.ndarray | float, size: float) -> float:
    return float(np.abs(error).max(initial=0.0) / size) if size > 0.0 else 0.0


def _top_up(finish: Finish, name: str) -> Stream | None:
    """What a store without a make-up line gets from outside."""
    piece = finish.flowsheet.equipment[name]
    if not isinstance(piece, Store) or finish.flowsheet.line_into(name, "make_up"):
        return None
    one = piece.bought(finish.flowsheet.matter)
    return one.scaled(finish.outcomes[name].results["top_up_mol_s"])


def _inflows(finish: Finish, name: str) -> list[Flow]:
    flows = [*arriving_whole(finish.feeds, name), *finish.outcomes[name].taken]
    extra = _top_up(finish, name)
    return [*flows, extra] if extra is not None else flows


def _elements(finish: Finish, name: str) -> tuple[np.ndarray, float]:
    formula = finish.flowsheet.matter.formula
    gains = np.zeros(formula.shape[0])
    through = 0.0
    for flow in _inflows(finish, name):
        if isinstance(flow, Stream):
            atoms = formula @ flow.flows
            gains, through = gains + atoms, through + float(atoms.sum())
    for flow in finish.outcomes[name].outlets.values():
        if isinstance(flow, Stream):
            gains = gains - formula @ flow.flows
    return gains, through


def _energy(finish: Finish, name: str) -> tuple[float, float]:
    """Energy in less energy out; heat and power lines are inside the outcome's heat and power."""
    outcome = finish.outcomes[name]
    inward = outlet = size = 0.0
    for flow in _inflows(finish, name):
        amount = _stream_energy(flow)
        inward, size = inward + amount, size + abs(amount)
    for flow in outcome.outlets.values():
        amount = _stream_energy(flow)
        outlet, size = outlet + amount, size + abs(amount)
    size += abs(outcome.power) + sum(abs(d.heat) for d in outcome.duties)
    return inward + outcome.heat + outcome.power - outlet - _passing(finish, name), size


def _stream_energy(flow: Flow) -> float:
    """Enthalpy of matter, and light."""
    if isinstance(flow, Stream):
        return float(flow.enthalpy)
    return flow.rate if isinstance(flow, Light) else 0.0


def _passing(finish: Finish, name: str) -> float:
    """Power, light and heat that only pass (splitter, switchboard, heat network) must add up.

    Power that is turned into heat is in the outcome's power.
    """
    outcome = finish.outcomes[name]
    kind = finish.flowsheet.equipment[name].kind
    if outcome.duties or kind not in ("splitter", "switchboard", "heat-network"):
        return 0.0
    passing = [
        f
        for f in arriving_whole(finish.feeds, name)
        if isinstance(f, Heat) or kind != "heat-network"
    ]
    inward = sum(rate_of(f) for f in passing)
    outward = sum(rate_of(f) for f in outcome.outlets.values())
    return outward - inward


def _plant(finish: Finish, atom_size: float, energy_size: float) -> tuple[float, float]:
    """The plant as one box: what crosses its boundary."""
    flowsheet, formula = finish.flowsheet, finish.flowsheet.matter.formula
    atoms, energy = np.zeros(formula.shape[0]), 0.0
    for sign, flow in _crossing(finish):
        if isinstance(flow, Stream):
            these = formula @ flow.flows
            atoms, energy = atoms + sign * these, energy + sign * float(flow.enthalpy)
        else:
            energy += sign * rate_of(flow)
    for name, outcome in finish.outcomes.items():
        if isinstance(flowsheet.equipment[name], _BOUNDARY):
            continue
        energy += _outside_heat(outcome) + _bought_power(finish, name, outcome)
    return _relative(atoms, atom_size), _relative(energy, energy_size)


def _crossing(finish: Finish) -> list[tuple[float, Flow]]:
    """Flows over the boundary: sign +1 in, -1 out."""
    found: list[tuple[float, Flow]] = []
    flowsheet = finish.flowsheet
    for name, piece in flowsheet.equipment.items():
        if isinstance(piece, Supply | Sunlight | Grid):
            found += [(1.0, flow) for flow in finish.outcomes[name].outlets.values()]
        if isinstance(piece, Product | Vent | Grid):
            found += [(-1.0, flow) for flow in arriving_whole(finish.feeds, name)]
        found += [(1.0, flow) for flow in finish.outcomes[name].taken]
        extra = _top_up(finish, name)
        if extra is not None:
            found.append((1.0, extra))
    for stream in finish.streams:
        if not stream.targets and not isinstance(flowsheet.equipment[stream.source], Supply | Grid):
            found.append((-1.0, stream.flow))
    return found


def _outside_heat(outcome: Outcome) -> float:
    """Heat that comes from or goes to outside the plant."""
    return sum(d.heat for d in outcome.duties if d.met_by in ("ambient", "bought"))


def _bought_power(finish: Finish, name: str, outcome: Outcome) -> float:
    """Electricity of equipment whose power call is not linked."""
    linked = {line.inlet for line in finish.flowsheet.into(name)}
    asked = outcome.drawn.get("power", 0.0)
    return float(asked) if "power" not in linked and isinstance(asked, float) else 0.0
