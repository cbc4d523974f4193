"""What reactors over one catalyst share: who reacts, who is missing, stated conversions.

Flows [mol/s].  Oxygen burns on every one of these catalysts.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated

from chainflow.basis.quantities import measured
from chainflow.equipment.base import Array
from chainflow.equipment.reactions import Reaction
from chainflow.equipment.reactor_base import Product
from chainflow.equipment.reactors import Reactor
from chainflow.thermo.components import Matter

SHIFT = ("H2", "H2O", "CO", "CO2")
METHANATION = (*SHIFT, "CH4")
OXYGEN = ("O2",)
Approach = Annotated[float, measured("K", ge=0.0, le=200.0, difference=True)]


def those_there(matter: Matter, reacting: tuple[str, ...]) -> tuple[str, ...]:
    """Return the reacting species, and oxygen where it is a component."""
    return tuple(name for name in (*reacting, *OXYGEN) if name in matter.index)


def missing_components(
    matter: Matter, names: tuple[str, ...], what: str
) -> Iterator[tuple[tuple[str, ...], str]]:
    """Yield the fault of components that a reaction needs."""
    missing = [name for name in names if name not in matter.index]
    if missing:
        yield ("kind",), f"{what} needs {', '.join(missing)} among the components"


def stated_reaction(
    flows: Array, matter: Matter, share: float, equations: tuple[str, str]
) -> Reaction:
    """Return one reaction by the conversion of CO2, or its CO twin where there is no CO2."""
    carbon_dioxide = flows[matter.index["CO2"]] > 0.0 or "CO" not in matter.index
    key, equation = ("CO2", equations[0]) if carbon_dioxide else ("CO", equations[1])
    return Reaction(equation=equation, conversion={key: share})


def converted(flows: Array, matter: Matter, reaction: Reaction) -> Product:
    """Return what one reaction makes of a feed."""
    return Reactor(reactions=(reaction,)).convert(flows, matter)
