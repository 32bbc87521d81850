"""Worker processes: every point has its outcome, whatever happens to the process that solves it."""

from __future__ import annotations

import time
from itertools import count, islice
from pathlib import Path

import pytest

from crosscheck.batch.task import BatchError, Point, Task
from crosscheck.batch.workers import Crew


@pytest.fixture(autouse=True)
def functions(monkeypatch):
    """The functions are importable by name, here and in workers."""
    monkeypatch.syspath_prepend(str(Path(__file__).parent))
    import point_functions

    return point_functions


def outcomes(task, whats, workers=2, time_limit=None):
    points = [Point(number, what) for number, what in enumerate(whats)]
    with Crew(task, workers, time_limit) as crew:
        found = list(crew.solve(points))
    assert sorted(outcome.number for outcome in found) == list(range(len(points)))
    return sorted(found, key=lambda outcome: outcome.number)


@pytest.mark.parametrize("workers", [1, 2, 3])
def test_outcomes_do_not_depend_on_the_number_of_workers(functions, workers):
    found = outcomes(Task(functions.square, "c"), range(20), workers)
    expected = [{"square": n * n, "threads": "1", "context": "c"} for n in range(20)]
    assert [outcome.found for outcome in found] == expected


def test_each_trouble_costs_one_point(functions):
    whats = [1, "segmentation fault", 2, "exception", "hang", "not finite", "print", 3]
    found = outcomes(Task(functions.trouble, None), whats, time_limit=1.0)
    kinds = [outcome.failure.kind if outcome.failure else outcome.found["square"] for outcome in found]
    assert kinds == [1, "crash", 4, "exception", "time-out", "exception", 0, 9]
    assert "signal 11" in found[1].failure.text
    assert found[3].failure.text == "ValueError: no such number"
    assert found[4].failure.text == "stopped after 1 s"


def test_every_point_a_crash_is_still_every_point(functions):
    found = outcomes(Task(functions.trouble, None), ["segmentation fault"] * 3)
    assert [outcome.failure.kind for outcome in found] == ["crash"] * 3


def test_points_are_taken_as_they_are_needed(functions):
    """An endless iterator: memory cannot depend on how many there are."""
    with Crew(Task(functions.square, None), 2) as crew:
        found = list(islice(crew.solve(Point(n, n) for n in count()), 10))
    assert len(found) == 10


def test_workers_stay_from_one_call_to_the_next(functions):
    with Crew(Task(functions.own_process, None), 1) as crew:
        first, second = (next(crew.solve([Point(0, None)])).found for _ in range(2))
    assert first == second


def test_a_busy_worker_is_stopped_at_once(functions):
    with Crew(Task(functions.trouble, None), 2) as crew:
        assert next(crew.solve([Point(0, "hang"), Point(1, 1)])).found == {"square": 1}
        (busy,) = crew.busy
        before = time.monotonic()
    assert time.monotonic() - before < 5
    assert busy.process.exitcode == -9


def test_a_worker_that_cannot_start_ends_the_batch(functions):
    with pytest.raises(BatchError, match=r"cannot start.*no_such_module_anywhere"):
        outcomes(Task(functions.square, functions.NotThere()), [1, 2])
