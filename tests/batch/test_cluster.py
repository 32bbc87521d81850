"""The same points on a local Dask cluster of two workers, also when one is killed midway."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PREFIX = "import sys; sys.path.insert(0, {folder!r})\n"
CODE = """
import os, signal, threading
from point_functions import *
from crosscheck.batch.task import Point, Task
from crosscheck.batch.running import Hands, run_points
from crosscheck.batch.cluster import Cluster
from distributed import LocalCluster

if __name__ == "__main__":
    with LocalCluster(n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None) as cluster:
        address = cluster.scheduler_address
        with Cluster(Task(slow_square, 0.02), address) as crew:
            found = []
            for outcome in crew.solve(Point(n, n) for n in range(40)):
                found.append(outcome)
                if len(found) == 10 and KILL:
                    os.kill(next(iter(crew.client.run(os.getpid).values())), 9)
        squares = sorted((each.number, each.found["square"]) for each in found)
        print(squares == [(n, n * n) for n in range(40)])
        with Cluster(Task(trouble, None), address, 3.0) as crew:
            whats = [1, "exception", "hang", 2]
            found = sorted(crew.solve(Point(n, what) for n, what in enumerate(whats)), key=lambda o: o.number)
        print([each.failure.kind if each.failure else each.found["square"] for each in found])
"""


def script(tmp_path, kill):
    path = tmp_path / "on_cluster.py"
    folder = str(Path(__file__).parent)
    path.write_text(PREFIX.format(folder=folder) + CODE.replace("KILL", str(kill)))
    environment = {**os.environ, "PYTHONPATH": os.pathsep.join((str(ROOT), folder))}
    return subprocess.run(
        [sys.executable, path], env=environment, capture_output=True, text=True, timeout=300, check=False
    )


@pytest.mark.parametrize("kill", [True, pytest.param(False, marks=pytest.mark.long)])
def test_every_point_has_its_outcome(tmp_path, kill):
    ran = script(tmp_path, kill)
    assert ran.stdout.splitlines() == ["True", "[1, 'exception', 'time-out', 4]"], ran.stderr[-2000:]


def test_no_scheduler_there(monkeypatch):
    from crosscheck.batch import cluster
    from crosscheck.batch.task import BatchError, Task

    monkeypatch.setattr(cluster, "CONNECT_LIMIT", 0.5)
    with pytest.raises(BatchError, match="no scheduler answers"):
        cluster.Cluster(Task(print, None), "tcp://127.0.0.1:1")


def test_absent_library_is_told_with_the_remedy(monkeypatch):
    from crosscheck.batch.cluster import Cluster
    from crosscheck.batch.task import BatchError, Task

    monkeypatch.setitem(sys.modules, "distributed", None)
    with pytest.raises(BatchError, match=r"pip install \"crosscheck\[cluster\]\""):
        Cluster(Task(print, None), "tcp://127.0.0.1:1")
