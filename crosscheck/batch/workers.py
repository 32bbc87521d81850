"""Worker processes with one numerical thread each; one that dies or takes too long costs its own point only.

A pool of the standard library breaks as a whole when a process dies, so the workers are looked after here.
"""

from __future__ import annotations

import multiprocessing
import os
import pickle
import signal
import sys
import threading
import time
from collections.abc import Iterable, Iterator
from contextlib import contextmanager, suppress
from multiprocessing.connection import Connection, wait

from crosscheck.batch.task import BatchError, Outcome, Point, Task, failed, outcome_from, outcome_text

# A worker that has not imported the function by then will not do so [s].
START_LIMIT = 120.0
READY = b"ready"
ONE_THREAD = dict.fromkeys(
    (
        "OMP_NUM_THREADS",
        "OPENBLAS_NUM_THREADS",
        "MKL_NUM_THREADS",
        "BLIS_NUM_THREADS",
        "VECLIB_MAXIMUM_THREADS",
    ),
    "1",
)


def usable_cores() -> int:
    """Cores that this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


class Crew:
    """Worker processes that stay from one call of :meth:`solve` to the next.

    Parameters
    ----------
    task : Task
        Its function must be importable by name.
    workers : int
        Processes at most; each starts when there is a point for it.
    time_limit : float or None
        Longest time for one point [s].
    """

    def __init__(self, task: Task, workers: int, time_limit: float | None = None) -> None:
        self.content = pickle.dumps(task)
        self.workers = workers
        self.time_limit = time_limit
        self.idle: list[_Worker] = []
        self.busy: list[_Worker] = []

    def __enter__(self) -> Crew:
        return self

    def __exit__(self, *_: object) -> None:
        """End every process at once, whatever it is doing."""
        for worker in (*self.busy, *self.idle):
            worker.stop()
        self.busy, self.idle = [], []

    def solve(self, points: Iterable[Point]) -> Iterator[Outcome]:
        """Outcomes as they come, in no order; a point is taken from its iterator when a worker is free.

        Raises
        ------
        BatchError
            Where a worker cannot be started.
        """
        waiting = iter(points)
        while len(self.busy) < self.workers and self._give_next(waiting):
            pass
        while self.busy:
            for worker in self._stirring():
                outcome = worker.outcome()
                if outcome is None:
                    continue
                self.busy.remove(worker)
                if worker.alive:
                    self.idle.append(worker)
                self._give_next(waiting)
                # The worker is busy again before the outcome is written down.
                yield outcome

    def _give_next(self, waiting: Iterator[Point]) -> bool:
        """Hand the next point to a free worker or a new one; False where there is none left."""
        point = next(waiting, None)
        if point is None:
            return False
        if self.idle:
            worker = self.idle.pop()
            worker.give(point)
        else:
            worker = _Worker(self.content, point, self.time_limit)
        self.busy.append(worker)
        return True

    def _stirring(self) -> list[_Worker]:
        """Workers that have something to tell or whose time is over."""
        deadline = min(worker.deadline for worker in self.busy)
        rest = None if deadline == float("inf") else max(deadline - time.monotonic(), 0.0)
        told = wait([worker.pipe for worker in self.busy], rest)
        now = time.monotonic()
        return [worker for worker in self.busy if worker.pipe in told or worker.deadline <= now]


class _Worker:
    """One process, the point it works on, and when it must be done."""

    def __init__(self, content: bytes, point: Point, time_limit: float | None) -> None:
        self.time_limit = time_limit
        self.ready = False
        self.alive = True
        context = multiprocessing.get_context("spawn")
        self.pipe, theirs = context.Pipe()
        self.process = context.Process(target=work, args=(theirs, content), daemon=True)
        with _born_quiet():
            self.process.start()
        theirs.close()
        self.point = point
        self.deadline = time.monotonic() + START_LIMIT
        self._send(point)

    def give(self, point: Point) -> None:
        """Start on the next point."""
        self.point = point
        self._set_deadline()
        self._send(point)

    def outcome(self) -> Outcome | None:
        """What came of the point; None where nothing has yet."""
        if not self.pipe.poll():
            return self._too_late() if self.deadline <= time.monotonic() else None
        try:
            message = self.pipe.recv_bytes()
        except (EOFError, OSError):
            return self._died()
        if message == READY:
            self.ready = True
            self._set_deadline()
            return None
        if not self.ready:
            raise BatchError(f"a worker process cannot start: {message.decode()}")
        return outcome_from(message.decode())

    def stop(self) -> None:
        """End the process at once."""
        self.alive = False
        self.process.kill()
        self.process.join()
        self.pipe.close()

    def _set_deadline(self) -> None:
        self.deadline = float("inf") if self.time_limit is None else time.monotonic() + self.time_limit

    def _send(self, point: Point) -> None:
        # A worker that is gone already is found by its silence.
        with suppress(OSError):
            self.pipe.send(point)

    def _too_late(self) -> Outcome:
        self.stop()
        if not self.ready:
            raise BatchError(f"a worker process cannot start: nothing heard of it in {START_LIMIT:g} s")
        return failed(self.point, "time-out", f"stopped after {self.time_limit:g} s")

    def _died(self) -> Outcome:
        self.process.join()
        self.alive = False
        self.pipe.close()
        how = _ending(self.process.exitcode)
        if not self.ready:
            raise BatchError(f"a worker process cannot start: it ended with {how}")
        return failed(self.point, "crash", f"the worker process ended with {how}")


def _ending(exit_code: int | None) -> str:
    """How a process ended, in words."""
    if exit_code is not None and exit_code < 0:
        with suppress(ValueError):
            return f"signal {-exit_code} ({signal.strsignal(-exit_code) or 'unknown'})"
    return f"exit status {exit_code}"


@contextmanager
def _born_quiet() -> Iterator[None]:
    """What a process started here inherits: one numerical thread, no Ctrl-C (its parent ends it)."""
    before = {name: os.environ.get(name) for name in ONE_THREAD}
    os.environ.update(ONE_THREAD)
    mask = None
    if hasattr(signal, "pthread_sigmask"):
        mask = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    try:
        yield
    finally:
        if mask is not None:
            signal.pthread_sigmask(signal.SIG_SETMASK, mask)
        for name, value in before.items():
            if value is None:
                del os.environ[name]
            else:
                os.environ[name] = value


def work(pipe: Connection, content: bytes) -> None:
    """Life of a worker process: import once, then one point after another until the pipe closes."""
    if hasattr(signal, "pthread_sigmask"):
        signal.signal(signal.SIGINT, signal.SIG_IGN)
        signal.pthread_sigmask(signal.SIG_UNBLOCK, {signal.SIGINT})
    threading.Thread(target=_end_with_parent, daemon=True).start()
    _silence()
    try:
        task: Task = pickle.loads(content)
    except Exception as fault:
        pipe.send_bytes(f"{type(fault).__name__}: {fault}".encode())
        return
    pipe.send_bytes(READY)
    while True:
        try:
            point = pipe.recv()
            pipe.send_bytes(outcome_text(task, point).encode())
        except (EOFError, OSError):
            return


def _silence() -> None:
    """Nothing that native code prints gets among the output of the command."""
    nowhere = os.open(os.devnull, os.O_WRONLY)
    for stream in (1, 2):
        os.dup2(nowhere, stream)
    os.close(nowhere)
    sys.stdout = sys.stderr = open(os.devnull, "w")  # noqa: SIM115 - lives as long as the process


def _end_with_parent() -> None:
    """A parent that was killed cannot end its workers: they see it go."""
    parent = multiprocessing.parent_process()
    if parent is not None:
        wait([parent.sentinel])
        os._exit(1)
