"""What a place gives to equipment, and what equipment did there.

SI throughout; heat and power [W] are positive into the equipment.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Flow, Heat
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream


@dataclass(frozen=True, slots=True)
class Caution:
    """A doubtful but usable result: what was seen and why it matters."""

    code: str
    text: str


@dataclass(frozen=True, slots=True)
class Site:
    """What the place gives: the matter, the ambient temperature [K] and which ports are linked.

    `detail` asks for what only the printed answer needs (duty segments, cautions); `shaped` for
    how heat on a line is spread over its temperatures; `electric` names the linked inlets that
    power reaches where heat could come, too.
    """

    matter: Matter
    ambient: float = 298.15
    inlets: frozenset[str] = frozenset()
    outlets: frozenset[str] = frozenset()
    detail: bool = True
    electric: frozenset[str] = frozenset()
    shaped: bool = True


@dataclass(frozen=True, slots=True)
class Outcome:
    """What equipment did: flows at every outlet, amounts asked for, duties and results."""

    outlets: dict[str, Flow]
    drawn: dict[str, float | Heat] = field(default_factory=dict)
    duties: tuple[Duty, ...] = ()
    power: float = 0.0  # net electric power into the equipment [W]
    results: dict[str, float] = field(default_factory=dict)
    cautions: tuple[Caution, ...] = ()
    idealisations: tuple[Caution, ...] = ()
    taken: tuple[Stream, ...] = ()  # matter that no line brings: CO2 out of the air
    unmet: dict[str, str] = field(default_factory=dict)  # port -> why its amount has no answer
    inner: Any = None  # what `slopes` may use again, of no meaning outside

    @property
    def heat(self) -> float:
        """Net heat into the equipment that is not electric [W]."""
        return sum(duty.heat for duty in self.duties if duty.met_by != "power")
