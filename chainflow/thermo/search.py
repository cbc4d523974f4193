"""How is a temperature found that makes a rising quantity meet a value?

Newton's method inside a bracket that begins as the range of the data and is narrowed by every
trial; a step that leaves it, or that does not halve the error while changing its sign, is replaced
by a halving. So the search ends whatever the slopes are.
"""

from chainflow.thermo.species import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE

NARROWEST = 1e-11  # [K]: a bracket this narrow holds a jump


class Bracket:
    """The temperatures [K] between which the answer lies; ends count once they were tried."""

    def __init__(self, low: float = LOWEST_TEMPERATURE, high: float = HIGHEST_TEMPERATURE) -> None:
        self.lowest, self.highest = low, high
        self.low, self.high = low, high
        self.low_tried = self.high_tried = False
        self._before = 0.0

    def clip(self, temperature: float) -> float:
        """Return a temperature moved into the range of the data."""
        return min(max(temperature, self.lowest), self.highest)

    def next_trial(self, temperature: float, excess: float, step: float) -> float:
        """Take in a trial whose result was too high by `excess`; return the next temperature.

        `step` [K] is what Newton's method asks for.
        """
        if excess < 0.0:
            self.low, self.low_tried = temperature, True
        else:
            self.high, self.high_tried = temperature, True
        slow = excess * self._before < 0.0 and abs(excess) > 0.5 * abs(self._before)
        self._before = excess
        return self._middle() if slow else self._within(temperature + step)

    def _within(self, better: float) -> float:
        if self.low < better < self.high:
            return better
        if better <= self.low:
            return self._middle() if self.low_tried else self.low
        return self._middle() if self.high_tried else self.high

    def _middle(self) -> float:
        return 0.5 * (self.low + self.high)

    @property
    def empty(self) -> bool:
        """Whether both ends were tried and nothing is left between them."""
        return self.low_tried and self.high_tried and self.high - self.low <= NARROWEST

    def outside(self, temperature: float, excess: float) -> bool:
        """Return whether a trial at an end of the data shows that the answer lies beyond it."""
        too_cold = temperature == self.lowest and excess > 0.0
        return too_cold or (temperature == self.highest and excess < 0.0)
