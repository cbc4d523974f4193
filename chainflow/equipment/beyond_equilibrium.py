"""Does a stated conversion go further than the reaction can go by itself?

A reaction ends where its quotient Q of partial pressures (ideal gas, 1 bar) reaches the constant K
at the outlet.  What is stated beyond that would need work, or a product that is taken away while it
forms.  Flows [mol/s], temperature [K], pressure [Pa].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from math import log

from chainflow.basis.constants import GAS_CONSTANT, ICE_POINT, P_REFERENCE
from chainflow.equipment.base import Array, Caution
from chainflow.equipment.reactions import Reaction
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import reaction_gibbs
from chainflow.thermo.streams import Stream

_COMPLETE = 1e-6  # share of the gas below which what reacts is used up in practice
_NEAR = 0.01  # of ln Q: a conversion copied from an equilibrium is not beyond it
_HALVINGS = 50


def beyond_equilibrium(
    feed: Stream, product: Stream, reactions: Iterable[Reaction], matter: Matter
) -> Iterator[Caution]:
    """Yield a caution for each stated reaction that passes its equilibrium at the product."""
    if float(product.gas.sum()) == 0.0:
        return
    level, pressure = float(product.temperature), float(product.pressure)
    for reaction in reactions:
        extent = reaction.extent_of(feed.flows, matter)
        if extent == 0.0:
            continue
        numbers = reaction.numbers
        constant = -reaction_gibbs(numbers, level) / (GAS_CONSTANT * level)
        step = reaction.vector(matter)

        def excess(back: float, step: Array = step, constant: float = constant) -> float:
            gas = (product.gas - back * step).clip(0.0)
            return _log_quotient(step, gas, pressure) - constant

        direction = 1.0 if extent > 0.0 else -1.0
        past = direction * excess(0.0)
        if past <= _NEAR:
            continue
        least, most = 0.0, 1.0
        for _ in range(_HALVINGS):
            middle = 0.5 * (least + most)
            if direction * excess(middle * extent) > 0.0:
                least = middle
            else:
                most = middle
        yield Caution("beyond-equilibrium", _sentence(reaction, feed, extent * (1.0 - most), level))


def _log_quotient(step: Array, gas: Array, pressure: float) -> float:
    """Ln Q; what is not there counts as a trace."""
    total = float(gas.sum())
    order = log(pressure / P_REFERENCE)
    return sum(
        number * (log(max(amount / total, _COMPLETE)) + order)
        for number, amount in zip(step.tolist(), gas.tolist(), strict=True)
        if number
    )


def _sentence(reaction: Reaction, feed: Stream, extent: float, level: float) -> str:
    uses = -1.0 if extent >= 0.0 else 1.0
    name, number = next((n, k) for n, k in reaction.numbers.items() if k * uses > 0.0)
    there = float(feed.flow(name))
    share = f"{100.0 * abs(extent * number) / there:.3g} % of the {name}" if there else "none"
    return (
        f"'{reaction.equation}' is stated to go beyond its equilibrium at {level - ICE_POINT:.4g} "
        f"degC, which ends at {share} with all else as stated: it would take work; state less, or "
        "change the temperature or pressure"
    )
