"""Which species of a gas react, to which amounts, and how do the amounts answer to changes?

`Reactants` is a set of species that can turn into each other as ideal gases; everything else in
the gas is a diluent that only thins them. Amounts [mol/s] of one case, temperature [K], pressure
[Pa]. Cantera solves, on a phase of exactly these species (an element that is absent makes its
solver fall back to slow and poor methods); helium stands in for the diluent.
"""

from functools import cache, lru_cache
from typing import Any, NamedTuple

import cantera as ct
import numpy as np

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo.components import Array
from chainflow.thermo.species import gas_phase, species_of
from chainflow.thermo.validity import StateError

TOLERANCE = 1e-12  # of Cantera's solver; below 1e-13 it falls through to a worse one
BALANCED = 1e-9  # share of each element that an answer may miss before the next method is tried
MOST_PROJECTIONS = 20  # onto the element balance; one is enough where nothing is scarce
ROUND_OFF = 1e-15  # of the most plentiful element
# Its Newton method on element potentials ends within 15 steps or, in some cold gases with oxygen
# left over, wanders for thousands; then its minimiser of the Gibbs energy is quicker.  The last is
# what it does by itself: all methods, as long as they take.
_TRIES: tuple[dict[str, Any], ...] = (
    {"solver": "element_potential", "max_steps": 30},
    {"solver": "gibbs"},
    {},
)
TRACE = 1e-20  # share of the whole below which a species or an element counts as absent
FLOOR = 1e-10  # share of what could form that an absent species counts for in the slopes
DILUENT = "He"


class Response(NamedTuple):
    """Slopes of the amounts by what is fed and by temperature."""

    by_element: Array  # (species, elements) [mol/mol]
    by_diluent: Array  # (species,) [mol/mol]
    by_temperature: Array  # (species,) [mol/(s K)]


class Balance(NamedTuple):
    """Amounts at equilibrium (species,) [mol/s] and their slopes."""

    amounts: Array
    response: Response


class Reactants:
    """Species that react with each other; make it with `reactants_of`."""

    def __init__(self, names: tuple[str, ...]) -> None:
        self.names = names
        formula = element_matrix(names)
        self.formula = formula[independent_rows(formula)]
        self._atoms = self.formula.sum(axis=0)
        self._inverse_formula = np.divide(
            1.0, self.formula, out=np.full(self.formula.shape, np.inf), where=self.formula > 0.0
        )
        elements = len(self.formula)
        self._bordered = np.vstack([self.formula, np.ones(len(names))])
        self._unit_changes = np.eye(elements + 1, elements + 2)
        self._unit_changes[-1, elements] = -1.0
        self._alone = gas_phase(names)
        self._diluted = gas_phase((*names, DILUENT))

    def balance(
        self, amounts: Array, diluent: float, temperature: float, pressure: float
    ) -> Balance:
        """Return the equilibrium of amounts thinned by a diluent, with its slopes."""
        return _balance(self, amounts.tobytes(), diluent, temperature, pressure)

    def find(self, amounts: Array, diluent: float, temperature: float, pressure: float) -> Balance:
        """Work out what `balance` keeps."""
        fed = self.formula @ amounts
        found = self._composition(amounts, fed, diluent, temperature, pressure)
        response = self._response(found, fed, diluent, temperature)
        missing = fed - self.formula @ found
        for _ in range(MOST_PROJECTIONS):
            found = found + response.by_element @ missing
            found[found < TRACE * (found.sum() + diluent)] = 0.0
            missing = fed - self.formula @ found
            if np.abs(missing).max() <= ROUND_OFF * fed.max():
                break
        for array in (found, *response):
            array.setflags(write=False)
        return Balance(found, response)

    def _composition(
        self, amounts: Array, fed: Array, diluent: float, temperature: float, pressure: float
    ) -> Array:
        count = len(self.names)
        phase, start = self._alone, amounts
        if diluent > 0.0:
            phase, start = self._diluted, np.full(count + 1, diluent)
            start[:count] = amounts
        shares = start[:count]
        for options in _TRIES:
            phase.TPX = temperature, pressure, start
            try:
                phase.equilibrate("TP", rtol=TOLERANCE, **options)
            except ct.CanteraError as problem:
                if options:
                    continue
                raise StateError(
                    f"no equilibrium found for {', '.join(self.names)} at {temperature:g} K and "
                    f"{pressure:g} Pa: {_last_line(problem)}"
                ) from problem
            shares = phase.X[:count]
            shares = shares * (float(fed.sum()) / float(self._atoms @ shares))
            if (np.abs(self.formula @ shares - fed) <= BALANCED * fed).all():
                break
        return shares

    def enthalpies(self, temperature: float) -> Array:
        """Return the enthalpies of the species as ideal gases [J/mol]."""
        self._alone.TP = temperature, 1e5
        return self._alone.standard_enthalpies_RT * (GAS_CONSTANT * temperature)

    def heat_capacities(self, temperature: float) -> Array:
        """Return the heat capacities of the species as ideal gases [J/(mol K)]."""
        self._alone.TP = temperature, 1e5
        return self._alone.standard_cp_R * GAS_CONSTANT

    def _response(self, amounts: Array, fed: Array, diluent: float, temperature: float) -> Response:
        """Solve for the slopes; ``dn_i = n_i (a_i . dlambda + dlnN + h_i/RT^2 dT)``.

        Unknowns are the element potentials and the total; columns of the right-hand side are the
        elements, the diluent and the temperature. A species that is absent counts with a trace of
        what its scarcest element would allow, so that CO2 alone still has slopes.
        """
        elements = len(fed)
        most = (self._inverse_formula * fed[:, np.newaxis]).min(axis=0)
        n = np.maximum(amounts, FLOOR * most)
        weighted = self._bordered * n
        matrix = weighted @ self._bordered.T
        scale = 1.0 / np.sqrt(matrix.diagonal())
        matrix[-1, -1] = -diluent
        heats = n * (self.enthalpies(temperature) / (GAS_CONSTANT * temperature**2))
        wanted = self._unit_changes.copy()
        wanted[:, -1] = -(self._bordered @ heats)
        scaled = matrix * scale * scale[:, np.newaxis]
        answer = np.linalg.solve(scaled, wanted * scale[:, np.newaxis])
        slopes = weighted.T @ (answer * scale[:, np.newaxis])
        slopes[:, -1] += heats
        return Response(slopes[:, :elements], slopes[:, -2], slopes[:, -1])


@lru_cache(maxsize=64)  # a reactor asks again for its slopes, its report, its next bed
def _balance(
    reactants: Reactants, raw: bytes, diluent: float, temperature: float, pressure: float
) -> Balance:
    return reactants.find(np.frombuffer(raw), diluent, temperature, pressure)


@cache
def reactants_of(names: tuple[str, ...]) -> Reactants:
    """Return the one `Reactants` of these species."""
    return Reactants(names)


def element_matrix(names: tuple[str, ...]) -> Array:
    """Return atoms per molecule, shape (elements, species), elements in alphabetical order."""
    used = [species_of(name).composition for name in names]
    elements = sorted({element for atoms in used for element in atoms})
    return np.array([[atoms.get(element, 0.0) for atoms in used] for element in elements])


def independent_rows(matrix: Array) -> list[int]:
    """Return the places of rows that span all rows of a matrix."""
    chosen: list[int] = []
    for row in range(len(matrix)):
        if np.linalg.matrix_rank(matrix[[*chosen, row]]) > len(chosen):
            chosen.append(row)
    return chosen


def convertible(names: tuple[str, ...]) -> tuple[str, ...]:
    """Return the species that take part in at least one reaction among the named ones."""
    if not names:
        return ()
    matrix = element_matrix(names)
    _, sizes, directions = np.linalg.svd(matrix)
    rank = int((sizes > 1e-10 * sizes[0]).sum())
    reacting = np.abs(directions[rank:]).max(axis=0, initial=0.0) > 1e-10
    return tuple(name for name, moves in zip(names, reacting, strict=True) if moves)


def _last_line(problem: Any) -> str:
    lines = [line.strip() for line in str(problem).splitlines() if line.strip("* \t")]
    return lines[-1] if lines else "the solver gave up"
