"""A batch from its first point to its last, whoever solves them."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from crosscheck.batch.journal import Journal
from crosscheck.batch.task import Outcome, Point, Task
from crosscheck.batch.workers import Crew, usable_cores

if TYPE_CHECKING:
    from crosscheck.batch.cluster import Cluster

Told = Callable[[Outcome], None]


@dataclass(frozen=True)
class Hands:
    """Who solves the points: so many processes here, or a cluster at an address.

    ``workers`` None: one for each core. ``time_limit``: longest time for one point [s].
    """

    workers: int | None = None
    cluster: str | None = None
    time_limit: float | None = None

    def ready_for(self, task: Task) -> Crew | Cluster:
        """Processes or cluster for a task, to be used in a ``with`` block.

        Raises
        ------
        BatchError
            Where the cluster cannot be used.
        """
        if self.cluster is None:
            return Crew(task, self.workers or usable_cores(), self.time_limit)
        from crosscheck.batch.cluster import Cluster

        return Cluster(task, self.cluster, self.time_limit)


def run_points(
    task: Task, points: Iterable[Point], journal: Journal, hands: Hands, told: Told = lambda _: None
) -> None:
    """Solve every point that the journal does not have yet.

    Parameters
    ----------
    task : Task
        What is done with a point.
    points : iterable of Point
        Taken one after another, never all at once.
    journal : Journal
        Receives the outcomes.
    hands : Hands
        Who solves them.
    told : callable
        Hears of every outcome when it is on disk.

    Raises
    ------
    BatchError
        Where the batch cannot go on; the journal can be resumed.
    """
    rest = (point for point in points if point.number not in journal)
    # Left by Ctrl-C too, so that no worker outlives its batch.
    with hands.ready_for(task) as crew:
        for outcome in crew.solve(rest):
            journal.add(outcome)
            told(outcome)
