"""Calls that need nothing of one another: side by side in worker processes where each takes long."""

from __future__ import annotations

import base64
import pickle
from collections.abc import Callable, Sequence
from typing import Any

import beam_theory
import fe_models
from crosscheck.batch.task import BatchError, Point, Task
from crosscheck.batch.workers import Crew, usable_cores
from crosscheck.comparison.comparing import compare
from crosscheck.comparison.result import Result
from crosscheck.section_file.model import SectionFile

# What a side raises where it cannot take a section; arithmetic that fails is told and not hidden.
UNSOLVED = (fe_models.FeError, beam_theory.TheoryError, ArithmeticError)
# Sections of fewer unknowns are solved and drawn sooner than workers start. A number of the section and no
# time, so that the same input is always computed in the same way.
MANY_UNKNOWNS = 10_000

Function = Callable[[Any, Any], Any]


def is_large(result: Result) -> bool:
    """Whether work on a section is worth worker processes."""
    return result.mesh.unknowns >= MANY_UNKNOWNS


class Bench:
    """Calls ``function(context, what)`` for many ``what``; to be used in a ``with`` block.

    Parameters
    ----------
    function : callable
        Importable by name.
    context : object
        Goes to every worker once.
    beside : bool
        In worker processes, one for each core; else here, one after another.
    """

    def __init__(self, function: Function, context: Any, beside: bool) -> None:
        self._function, self._context = function, context
        self._crew = Crew(Task(_packed, (function, context)), usable_cores()) if beside else None

    def __enter__(self) -> Bench:
        return self

    def __exit__(self, *fault: object) -> None:
        if self._crew is not None:
            self._crew.__exit__(*fault)

    def work(self, whats: Sequence[Any], words: str, tell: Callable[[str], None]) -> list[Any]:
        """What comes of every call, in order; progress is told under ``words``.

        Raises
        ------
        BatchError
            Where a worker dies or its function raises.
        """
        found: dict[int, Any] = {}
        tell(words)
        if self._crew is None:
            for number, what in enumerate(whats):
                found[number] = self._function(self._context, what)
                tell(f"{words}, {len(found)} of {len(whats)}")
        else:
            for outcome in self._crew.solve(Point(number, what) for number, what in enumerate(whats)):
                if outcome.failure is not None:
                    raise BatchError(f"{words}: {outcome.failure.text}")
                found[outcome.number] = pickle.loads(base64.b64decode(outcome.found))
                tell(f"{words}, {len(found)} of {len(whats)}")
        return [found[number] for number in range(len(whats))]


def _packed(call: tuple[Function, Any], what: Any) -> str:
    """What comes of a call as text that JSON can hold."""
    function, context = call
    return base64.b64encode(pickle.dumps(function(context, what))).decode()


def comparison_of(_: None, trial: tuple[SectionFile, float]) -> Result | str:
    """Both sides of a section compared at an accuracy, or why they cannot be."""
    try:
        return compare(*trial)
    except UNSOLVED as fault:
        return " ".join(str(fault).split())
