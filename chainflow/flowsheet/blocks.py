"""The optional blocks at the top of a file: ``environment``, ``rungs`` and ``costs``.

None of them changes what is solved; they say how the answer is accounted for.
"""

from __future__ import annotations

from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from chainflow.basis.faults import Fault
from chainflow.equipment.base import Equipment
from chainflow.flowsheet.cost_plan import CostPlan, CostReader
from chainflow.flowsheet.costs import CostBlock
from chainflow.flowsheet.environment import Surroundings
from chainflow.flowsheet.messages import complaints
from chainflow.flowsheet.money import DEFAULT_CURRENCY
from chainflow.flowsheet.rungs import NamedCut, RungReader
from chainflow.flowsheet.tree import Mapping, Node, Text, place_at, plain
from chainflow.thermo.exergy import STANDARD_ENVIRONMENT, Environment

BLOCKS = ("environment", "rungs", "costs")
_Model = TypeVar("_Model", bound=BaseModel)


@dataclass(frozen=True, slots=True)
class Blocks:
    """How a flowsheet wants to be accounted for."""

    environment: Environment = STANDARD_ENVIRONMENT
    cuts: tuple[NamedCut, ...] = ()
    costs: CostPlan | None = None


def read_blocks(
    root: Mapping,
    pieces: AnyMapping[str, Equipment],
    broken: frozenset[str],
    components: tuple[str, ...],
    linked: frozenset[str],
    faults: list[Fault],
) -> Blocks:
    """Return the blocks of a file; what is wrong goes into `faults`.

    Parameters
    ----------
    broken : names of equipment with faults of its own; nothing more is said about it.
    linked : outlets (``name.port``) from which a line starts.
    """
    surroundings = _model(root, "environment", Surroundings, {}, faults)
    cuts = RungReader(pieces, broken, linked, faults).read(root.get("rungs"))
    node = root.get("costs")
    block = _model(root, "costs", CostBlock, {"currency": _currency(node)}, faults)
    costs = None
    if block is not None and isinstance(node, Mapping):
        costs = CostReader(block, node, pieces, broken, components, faults).plan()
    environment = STANDARD_ENVIRONMENT if surroundings is None else surroundings.environment()
    return Blocks(environment, cuts, costs)


def _currency(node: Node | None) -> str:
    word = node.get("currency") if isinstance(node, Mapping) else None
    return (word.value or "") if isinstance(word, Text) else DEFAULT_CURRENCY


def _model(
    root: Mapping, key: str, cls: type[_Model], context: dict[str, Any], faults: list[Fault]
) -> _Model | None:
    """Return a block as its model; None if there is none or it is wrong."""
    node = root.get(key)
    if node is None or (isinstance(node, Text) and node.value is None):
        return None
    if not isinstance(node, Mapping):
        text = f"{key}: wanted a map with entries such as {', '.join(list(cls.model_fields)[:3])}"
        faults.append(Fault("wrong-value", text).located(node.place))
        return None
    try:
        return cls.model_validate(plain(node), context=context)
    except ValidationError as problem:
        for complaint in complaints(problem, cls, key):
            spot = place_at(node, complaint.path, at_key=complaint.at_key)
            if not complaint.path:
                spot = root.entries[key][0]
            faults.append(Fault(complaint.code, complaint.text).located(spot))
        return None
