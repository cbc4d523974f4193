"""What is reported of a fuel cell: voltage, losses, efficiency, heat, and what is doubtful.

SI throughout.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from chainflow.equipment.base import Array, Caution, Site
from chainflow.equipment.cells import solid_oxide
from chainflow.equipment.cells.fuel_cells import Used, Working
from chainflow.thermo.carbon import carbon_activity
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate
from chainflow.thermo.streams import Stream

if TYPE_CHECKING:
    from chainflow.equipment.fuel_cell import FuelCell

_TRACE = 1e-5  # mole fraction of CO that poisons a PEM cell; common practice, no source


def report(
    piece: FuelCell, fuel: Stream, used: Used, at: Working, heat: float, site: Site
) -> tuple[dict[str, float], tuple[Caution, ...]]:
    """Return results and cautions of a fuel cell at work."""
    matter = site.matter
    lower, higher = float(matter.lhv @ fuel.flows), float(matter.hhv @ fuel.flows)
    results = {
        "fuel_W": lower,
        "direct_current_W": at.direct,
        "voltage_V": at.voltage,
        **at.losses.results(),
        "current_A": at.current,
        "current_density_A_m2": at.density,
        "cell_area_m2": at.area,
        "stack_heat_W": heat,
        "cooling_W": max(-heat, 0.0),
        "inverter_loss_W": at.direct * (1.0 - piece.inverter),
        "auxiliaries_W": at.direct * piece.auxiliaries,
    }
    given = piece.inverter - piece.auxiliaries
    for basis, value in (("LHV", lower), ("HHV", higher)):
        share = at.direct / value if value > 0.0 else 0.0
        results |= {f"stack_efficiency_{basis}": share, f"efficiency_{basis}": share * given}
    if piece.rating:
        results["load"] = at.direct * given / piece.rating
    cautions = list(_cautions(piece, fuel, results))
    if piece.solid_oxide is not None and fuel.flows.any():
        cautions += _soot(piece, fuel.flows, used, results, matter)
    return results, tuple(cautions)


def _cautions(piece: FuelCell, fuel: Stream, results: dict[str, float]) -> Iterator[Caution]:
    if results.get("load", 0.0) > 1.0 + 1e-9:
        text = (
            f"the cells give {100 * results['load']:.4g} % of their rating: enlarge them or "
            "send less fuel"
        )
        yield Caution("above-rating", text)
    monoxide = float(fuel.fraction("CO")) if "CO" in fuel.matter.index else 0.0
    if piece.model == "pem" and monoxide > _TRACE:
        text = (
            f"{monoxide:.2g} CO in the fuel poisons a PEM cell, wanted below {_TRACE:g}: take "
            "it out before"
        )
        yield Caution("carbon-monoxide-into-cell", text)


def _soot(
    piece: FuelCell, fuel: Array, used: Used, results: dict[str, float], matter: Matter
) -> Iterator[Caution]:
    """Note the carbon activity where the fuel enters."""
    assert piece.solid_oxide is not None
    if "C" not in matter.elements:
        return
    back = piece.solid_oxide.recirculation / (1.0 - piece.solid_oxide.recirculation)
    entering = fuel + back * used.spent
    if not float(matter.formula[matter.elements.index("C")] @ entering) > 0.0:
        return
    names = tuple(name for name in solid_oxide.SPECIES if name in matter.index)
    gas = equilibrate(matter, entering, piece.entry, piece.pressure, names).flows
    activity = carbon_activity(matter, gas, piece.entry, piece.pressure)
    results["carbon_activity"] = activity
    if activity > 1.0:
        text = (
            f"carbon activity {activity:.3g} where the fuel enters: soot can form; add steam "
            "or recirculate more"
        )
        yield Caution("carbon-activity", text)
