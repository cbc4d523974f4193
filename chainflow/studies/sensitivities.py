"""How much does each result move when a setting or a knob moves a little?

From the solver's own derivatives at the solution (`chainflow.solver.linearised`), without solving
again; holds stay held. Against solving again they agree to 1e-5, except at kinks, where both sides
of a setting differ and these are of one side, or their mean.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from chainflow.accounts.cuts import sunlight
from chainflow.accounts.deliveries import deliveries
from chainflow.accounts.fuel import FuelLines, fuel_lines, worth_of_lines
from chainflow.accounts.plant import plant_account, plant_value
from chainflow.accounts.purchases import purchases
from chainflow.accounts.worth import of_light
from chainflow.basis.faults import UsageFault
from chainflow.flowsheet.addresses import AddressError
from chainflow.flowsheet.movable import Lever, lever, levers
from chainflow.solver.linear import Singular
from chainflow.solver.linearised import Linearised, Unmovable
from chainflow.solver.lookup import value_at
from chainflow.solver.solution import Solution

if TYPE_CHECKING:
    import pandas as pd

_PLANT = "plant."
_EFFICIENCY = "efficiency."


@dataclass(frozen=True, slots=True)
class Sensitivities:
    """Derivatives of results by settings and knobs.

    Attributes
    ----------
    of, values : addresses of the results, and what they are (SI).
    by : the settings and knobs, each with its value and unit.
    slopes : d result / d setting, SI per SI, shape (results, settings).
    left_out : settings that cannot be moved, with why.
    """

    of: tuple[str, ...]
    values: np.ndarray
    by: tuple[Lever, ...]
    slopes: np.ndarray
    left_out: Mapping[str, str]

    @property
    def elasticities(self) -> np.ndarray:
        """Relative change of each result per relative change of each setting, shape as slopes.

        NaN where a result is zero; zero where a setting is.
        """
        settings = np.array([one.value for one in self.by])
        results = np.where(self.values == 0.0, np.nan, self.values)
        return self.slopes * settings / results[:, None]

    def __getitem__(self, pair: tuple[str, str]) -> float:
        """Return d result / d setting: ``found["plant.efficiency.overall.LHV", "field"]``."""
        names = [one.name for one in self.by]
        result, setting = pair
        if setting in self.left_out:
            raise UsageFault(f"'{setting}' cannot be moved: {self.left_out[setting]}")
        if result not in self.of or setting not in names:
            raise UsageFault(f"there is no sensitivity of '{result}' to '{setting}' here")
        return float(self.slopes[self.of.index(result), names.index(setting)])

    def table(self) -> pd.DataFrame:
        """Return value, unit, slopes (SI) and elasticities by setting as a pandas table."""
        import pandas as pd

        columns: dict[str, Any] = {
            "value": [one.value for one in self.by],
            "unit": [one.unit for one in self.by],
        }
        for name, slopes, relative in zip(self.of, self.slopes, self.elasticities, strict=True):
            columns |= {f"d {name}": slopes, f"elasticity of {name}": relative}
        return pd.DataFrame(columns, index=pd.Index([one.name for one in self.by], name="setting"))


def sensitivities(
    solution: Solution, of: str | Sequence[str], by: Iterable[str] | None = None
) -> Sensitivities:
    """Return the derivatives of results by settings and knobs at a solution.

    Parameters
    ----------
    of : address or addresses of results; ``plant.`` ones follow the document.
    by : addresses of settings and names of knobs; every knob and every number that no knob sets,
        if left out.

    Raises `UsageFault` for an address or a name that is none.
    """
    wanted = (of,) if isinstance(of, str) else tuple(of)
    flowsheet = solution.flowsheet
    try:
        chosen = levers(flowsheet) if by is None else [lever(flowsheet, name) for name in by]
    except AddressError as problem:
        raise UsageFault(str(problem)) from None
    results = Evaluation(wanted)
    values = results(solution)
    try:
        linear = Linearised(solution)
    except Singular as problem:
        raise UsageFault(f"no sensitivities here: {problem}") from None
    weights = linear.weights(linear.gradient(results))
    slopes, moved, left_out = [], list[Lever](), dict[str, str]()
    for one in chosen:
        try:
            pushed, seen = linear.push(one, results)
        except Unmovable as problem:
            left_out[one.name] = str(problem)
            continue
        moved.append(one)
        slopes.append(seen + weights @ pushed + linear.along_bends(pushed, results))
    matrix = np.array(slopes).T if slopes else np.zeros((len(wanted), 0))
    return Sensitivities(wanted, values, tuple(moved), matrix, left_out)


class Evaluation:
    """Reads several results of a solution by their addresses, with no more accounts than needed."""

    def __init__(self, addresses: Sequence[str]) -> None:
        self.addresses = tuple(addresses)
        plant = [a.removeprefix(_PLANT) for a in addresses if a.startswith(_PLANT)]
        self._any_plant = bool(plant)
        self._efficiency_only = all(address.startswith(_EFFICIENCY) for address in plant)
        self._lines: FuelLines | None = None  # of the first solution: they do not move a little

    def __call__(self, solution: Solution) -> np.ndarray:
        """Return the results in SI; NaN for what has no value."""
        data = self._plant_data(solution) if self._any_plant else {}
        return np.array(
            [
                plant_value(data, address.removeprefix(_PLANT))
                if address.startswith(_PLANT)
                else _value(solution, address)
                for address in self.addresses
            ]
        )

    def _plant_data(self, solution: Solution) -> Mapping[str, Any]:
        if not self._efficiency_only:
            return plant_account(solution).as_data()
        self._lines = self._lines or fuel_lines(solution)
        entering = of_light(sunlight(solution), solution.flowsheet.environment)
        entering += purchases(solution).worth
        made = worth_of_lines(solution, self._lines.made)
        delivered = deliveries(solution).worth
        named = {"sunlight_to_fuel": made.over(entering), "overall": delivered.over(entering)}
        return {"efficiency": named}


def _value(solution: Solution, address: str) -> float:
    """Return a result, or the setting that a hold has found."""
    for hold in solution.flowsheet.holds:
        if hold.by == address:
            return solution.pieces[hold.piece].setting(hold.path)
    return value_at(solution, address)
