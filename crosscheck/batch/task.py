"""What a batch is made of: one function, the points it is called with, and what came of each."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Literal

from crosscheck.faults import CrosscheckError, one_line

FailureKind = Literal["exception", "crash", "time-out"]


class BatchError(CrosscheckError):
    """A batch that cannot go on: workers that do not start, a cluster out of reach, a full disk."""


@dataclass(frozen=True)
class Task:
    """A function of a module, called as ``function(context, point.what)``; it gives what JSON can hold.

    ``context`` goes to every worker once and must be picklable.
    """

    function: Callable[[Any, Any], Any]
    context: Any


@dataclass(frozen=True)
class Point:
    """One call: its number in the order of the batch, and what the function is given."""

    number: int
    what: Any


@dataclass(frozen=True)
class Failure:
    """Why a point has nothing to show."""

    kind: FailureKind
    text: str


@dataclass(frozen=True)
class Outcome:
    """What came of a point: what the function gave, or why it gave nothing."""

    number: int
    found: Any = None
    failure: Failure | None = None

    @property
    def text(self) -> str:
        """The outcome as one line of JSON.

        Raises
        ------
        ValueError
            Where it holds a number that is not finite.
        """
        body: dict[str, Any] = {"number": self.number}
        if self.failure is None:
            body["found"] = self.found
        else:
            body["failure"] = [self.failure.kind, self.failure.text]
        return json.dumps(body, ensure_ascii=False, allow_nan=False)


def outcome_from(text: str) -> Outcome:
    """The outcome that a line of JSON tells."""
    body = json.loads(text)
    failure = Failure(*body["failure"]) if "failure" in body else None
    return Outcome(int(body["number"]), body.get("found"), failure)


def failed(point: Point, kind: FailureKind, text: str) -> Outcome:
    """A point that gave nothing."""
    return Outcome(point.number, failure=Failure(kind, one_line(text, 300)))


def outcome_text(task: Task, point: Point) -> str:
    """Call the function for a point; whatever it raises is recorded on the point.

    Returns
    -------
    str
        The outcome as :attr:`Outcome.text`.
    """
    try:
        return Outcome(point.number, task.function(task.context, point.what)).text
    except Exception as fault:
        return failed(point, "exception", f"{type(fault).__name__}: {fault}").text
