"""The linear system of a Newton step, from the derivatives of every step of the pass.

Unknown are the changes of the torn variables; everything between follows.  Few torn numbers: the
derivatives are propagated along the pass.  Many: one sparse system over all variables of the loop,
so that cost grows with the number of steps.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from chainflow.solver.nodes import Blocks, Step
from chainflow.solver.variables import Variable

_DENSE_UP_TO = 150  # torn numbers


class Singular(ArithmeticError):
    """The loop's equations do not fix its variables."""


class Linear:
    """(I - dy/dx) d = r for the torn variables, with what follows for other variables.

    With a `leak` that share of each torn variable gets lost on its way.
    """

    def __init__(
        self,
        steps: Sequence[Step],
        blocks: Blocks,
        tears: Sequence[str],
        watched: Sequence[str],
        variables: Mapping[str, Variable],
        leak: float = 0.0,
    ) -> None:
        self.tears, self.watched, self.variables = tears, watched, variables
        self.places = _places(tears, variables)
        self.size = sum(variables[key].size for key in tears)
        self._many, self._leak = self.size > _DENSE_UP_TO, leak
        if self._many:
            self._assemble(steps, blocks)
        else:
            self._propagate(steps, blocks)

    def solve(self, right: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Changes of the torn numbers and of the watched variables for residuals `right`."""
        if self._many:
            return self._solve_sparse(right)
        try:
            change = np.linalg.solve(self._matrix, right)
        except np.linalg.LinAlgError:
            raise Singular("the equations of the loop are singular") from None
        return change, self._watched_rows @ change

    # --- few torn numbers --------------------------------------------------------------------

    def _propagate(self, steps: Sequence[Step], blocks: Blocks) -> None:
        response: dict[str, np.ndarray] = {}
        for key in self.tears:
            unit = np.zeros((self.variables[key].size, self.size))
            unit[:, self.places[key]] = np.eye(self.variables[key].size)
            response[key] = unit
        torn = set(self.tears)
        matrix = (1.0 + self._leak) * np.eye(self.size)
        for step in steps:
            for written in step.writes:
                row: np.ndarray | None = None
                for read in step.reads:
                    if read in response and (written, read) in blocks:
                        part = blocks[written, read] @ response[read]
                        row = part if row is None else row + part
                if row is None:
                    continue
                if written in torn:
                    matrix[self.places[written]] -= row
                else:
                    response[written] = row
        self._matrix = matrix
        none = np.zeros((1, self.size))
        self._watched_rows = (
            np.vstack([response.get(key, none) for key in self.watched])
            if self.watched
            else np.zeros((0, self.size))
        )

    # --- many torn numbers -------------------------------------------------------------------

    def _assemble(self, steps: Sequence[Step], blocks: Blocks) -> None:
        from scipy.sparse import coo_matrix
        from scipy.sparse.linalg import splu

        inside = list(dict.fromkeys([*self.tears, *(w for step in steps for w in step.writes)]))
        places = _places(inside, self.variables)
        total = sum(self.variables[key].size for key in inside)
        diagonal = np.ones(total)
        diagonal[: self.size] += self._leak  # the torn variables come first
        rows, columns, data = [np.arange(total)], [np.arange(total)], [diagonal]
        for (written, read), block in blocks.items():
            if written in places and read in places:
                row, column = np.arange(total)[places[written]], np.arange(total)[places[read]]
                rows.append(np.repeat(row, len(column)))
                columns.append(np.tile(column, len(row)))
                data.append(-block.ravel())
        matrix = coo_matrix(
            (np.concatenate(data), (np.concatenate(rows), np.concatenate(columns))),
            shape=(total, total),
        ).tocsc()
        try:
            self._factors = splu(matrix)
        except RuntimeError:
            raise Singular("the equations of the loop are singular") from None
        self._all_places, self._total = places, total

    def _solve_sparse(self, right: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        full = np.zeros(self._total)
        for key in self.tears:
            full[self._all_places[key]] = right[self.places[key]]
        found = self._factors.solve(full)
        change = np.concatenate([found[self._all_places[key]] for key in self.tears])
        watched = [
            float(found[self._all_places[key]][0]) if key in self._all_places else 0.0
            for key in self.watched
        ]
        return change, np.array(watched)


def _places(keys: Sequence[str], variables: Mapping[str, Variable]) -> dict[str, slice]:
    places, at = {}, 0
    for key in keys:
        places[key] = slice(at, at + variables[key].size)
        at += variables[key].size
    return places
