"""The same points on a Dask cluster; a worker of the cluster that is lost costs time, not points."""

from __future__ import annotations

import pickle
import threading
import time
from collections.abc import Iterable, Iterator
from contextlib import suppress
from typing import Any

from crosscheck.batch.task import BatchError, Outcome, Point, Task, failed, outcome_from, outcome_text

# Connecting takes no longer [s].
CONNECT_LIMIT = 15.0
# The mesh generator has one state per process: two threads of a cluster's worker take turns.
_TURN = threading.Lock()


class Cluster:
    """A Dask cluster; as many points are out as it has workers.

    A point lost with its worker is given to another; one that ends several workers is recorded.

    Parameters
    ----------
    task : Task
        Its function must be importable by name on the workers.
    address : str
        Of the scheduler, such as ``tcp://host:8786``.
    time_limit : float or None
        Longest time from handing a point out to its outcome [s].

    Raises
    ------
    BatchError
        Where the library is absent, the cluster out of reach or its workers of another version.
    """

    def __init__(self, task: Task, address: str, time_limit: float | None = None) -> None:
        try:
            import distributed
        except ImportError:
            raise BatchError(
                '--cluster: needs the library distributed: pip install "crosscheck[cluster]"'
            ) from None
        # Any: the library is typed in part only.
        self.library: Any = distributed
        self.content = pickle.dumps(task)
        self.time_limit = time_limit
        self.out: dict[Any, tuple[Point, float]] = {}
        try:
            self.client: Any = self.library.Client(address, timeout=CONNECT_LIMIT, set_as_default=False)
        except (OSError, ValueError) as fault:
            raise BatchError(f"--cluster: no scheduler answers at {address!r} ({fault})") from None
        try:
            _check_versions(self.client)
        except BaseException:
            self.client.close()
            raise

    def __enter__(self) -> Cluster:
        return self

    def __exit__(self, *_: object) -> None:
        """Call back what is still out."""
        self.client.cancel(list(self.out))
        self.client.close()

    def solve(self, points: Iterable[Point]) -> Iterator[Outcome]:
        """Outcomes as they come, in no order.

        Raises
        ------
        BatchError
            Where the workers cannot run the function.
        """
        waiting = iter(points)
        more = True
        while more or self.out:
            width = max(len(self.client.scheduler_info(n_workers=-1)["workers"]), 1)
            while more and len(self.out) < width:
                point = next(waiting, None)
                if point is None:
                    more = False
                    break
                future = self.client.submit(solve_on_cluster, self.content, point, pure=False)
                self.out[future] = (point, time.monotonic())
            if self.out:
                yield from self._ended()

    def _ended(self) -> list[Outcome]:
        """Outcomes of points that have ended or are too late; they are out no more."""
        with suppress(TimeoutError), self.client.as_current():
            self.library.wait(list(self.out), timeout=1.0, return_when="FIRST_COMPLETED")
        ended: list[Outcome] = []
        for future, (point, since) in list(self.out.items()):
            if future.done():
                ended.append(self._outcome(future, point))
            elif self.time_limit is not None and time.monotonic() - since > self.time_limit:
                future.cancel()
                ended.append(failed(point, "time-out", f"stopped after {self.time_limit:g} s"))
            else:
                continue
            del self.out[future]
        return ended

    def _outcome(self, future: Any, point: Point) -> Outcome:
        if future.status == "finished":
            return outcome_from(future.result())
        fault = future.exception() if future.status == "error" else None
        if isinstance(fault, self.library.KilledWorker):
            return failed(point, "crash", "the workers of the cluster that tried it ended")
        raise BatchError(f"--cluster: its workers cannot solve points ({type(fault).__name__}: {fault})")


def _check_versions(client: Any) -> None:
    version = own_version()
    try:
        found = client.run(own_version)
    except Exception as fault:  # whatever a worker without this package raises
        raise BatchError(
            f"--cluster: its workers cannot run crosscheck ({type(fault).__name__}: {fault}); install "
            "it there"
        ) from None
    if not found:
        raise BatchError("--cluster: the scheduler has no workers; start some")
    others = {worker: theirs for worker, theirs in found.items() if theirs != version}
    for worker, theirs in others.items():
        raise BatchError(
            f"--cluster: worker {worker} has crosscheck {theirs}, here is {version}; must be equal"
        )


def own_version() -> str:
    """Version of this package and of its sources where the call runs."""
    from crosscheck.comparison.provenance import code_digest, installed_version

    return f"{installed_version('crosscheck')} ({code_digest()[:12]})"


def solve_on_cluster(content: bytes, point: Point) -> str:
    """One point in a worker of the cluster, one at a time in each process."""
    with _TURN:
        return outcome_text(pickle.loads(content), point)
