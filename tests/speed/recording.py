"""Record what is asked of Cantera phases during a solve, and ask it again without anything else."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any

import numpy as np

from chainflow.thermo.components import Matter
from chainflow.thermo.reactants import Reactants


class RecordingPhase:
    """Stands before a phase and notes every setting, reading and call."""

    def __init__(self, phase: Any, log: list[tuple[Any, str, str, Any]]) -> None:
        object.__setattr__(self, "_phase", phase)
        object.__setattr__(self, "_log", log)

    def __setattr__(self, name: str, value: Any) -> None:
        kept = tuple(v.copy() if isinstance(v, np.ndarray) else v for v in value)
        self._log.append((self._phase, "set", name, kept))
        setattr(self._phase, name, value)

    def __getattr__(self, name: str) -> Any:
        found = getattr(self._phase, name)
        if callable(found):

            def called(*args: Any, **kwargs: Any) -> Any:
                self._log.append((self._phase, "call", name, (args, kwargs)))
                return found(*args, **kwargs)

            return called
        self._log.append((self._phase, "get", name, None))
        return found


@contextmanager
def recorded(matter: Matter) -> Iterator[list[tuple[Any, str, str, Any]]]:
    """Record all Cantera calls of the gas and of every reacting mixture."""
    log: list[tuple[Any, str, str, Any]] = []
    kept = matter._gas
    matter._gas = RecordingPhase(kept, log)
    original = Reactants.balance

    def balance(self: Reactants, *args: Any) -> Any:
        alone, diluted = self._alone, self._diluted
        self._alone, self._diluted = RecordingPhase(alone, log), RecordingPhase(diluted, log)
        try:
            return original(self, *args)
        finally:
            self._alone, self._diluted = alone, diluted

    Reactants.balance = balance  # put back below
    try:
        yield log
    finally:
        matter._gas, Reactants.balance = kept, original  # as it was


def replay(log: list[tuple[Any, str, str, Any]]) -> float:
    """Ask it all again; the seconds of CPU that it takes."""
    start = time.process_time()
    for phase, what, name, value in log:
        if what == "set":
            setattr(phase, name, value)
        elif what == "get":
            getattr(phase, name)
        else:
            getattr(phase, name)(*value[0], **value[1])
    return time.process_time() - start


def seconds(work: Callable[[], Any]) -> float:
    """CPU time of one call."""
    start = time.process_time()
    work()
    return time.process_time() - start


def forget() -> None:
    """Drop the states and equilibria that are kept from one call to the next, no fixed tables."""
    for name, module in list(sys.modules.items()):
        if not name.startswith("chainflow."):
            continue
        for found in list(vars(module).values()):
            if hasattr(found, "cache_info") and found.cache_info().maxsize is not None:
                found.cache_clear()


__all__ = ["forget", "recorded", "replay", "seconds"]
