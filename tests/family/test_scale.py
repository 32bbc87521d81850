"""Many members: what they cost, what a cluster changes (nothing), and what memory they take (the same)."""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
TABLES = ("sweep.csv", "sweep.json")
LOCAL_CLUSTER = """
import sys
from distributed import LocalCluster
if __name__ == "__main__":
    with LocalCluster(n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None) as cluster:
        print(cluster.scheduler_address, *(w.process.pid for w in cluster.workers.values()), flush=True)
        sys.stdin.read()
"""


@pytest.mark.long
def test_a_cluster_gives_the_same_tables_also_when_a_worker_is_killed(run, process, angle, tmp_path):
    script = tmp_path / "local_cluster.py"
    script.write_text(LOCAL_CLUSTER)
    varied = ("sweep", angle, "--vary", "t from 0.5 to 9 in 40", "--accuracy", "1e-2", "--quantity", "area")
    assert run(*varied, "--out", tmp_path / "here")[0] == 1
    with subprocess.Popen(
        [sys.executable, script],
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.DEVNULL, text=True,
    ) as cluster:  # fmt: skip
        assert cluster.stdin is not None
        assert cluster.stdout is not None
        try:
            address, worker, _ = cluster.stdout.readline().split()
            for name, kill in (("calm", False), ("killed", True)):
                running = process(*varied, "--out", tmp_path / name, "--cluster", address)
                journal = tmp_path / name / "journal.jsonl"
                while kill and (not journal.exists() or journal.read_bytes().count(b"\n") < 10):
                    assert running.poll() is None
                    time.sleep(0.01)
                if kill:
                    os.kill(int(worker), 9)
                _, err = running.communicate(timeout=300)
                assert running.returncode == 1, err
                for table in TABLES:
                    assert (tmp_path / name / table).read_bytes() == (tmp_path / "here" / table).read_bytes()
        finally:
            cluster.stdin.close()
            cluster.wait(60)


def fastest(process, channel, count, workers, most=3):
    """Seconds of the best of several sweeps of a channel from depth over thickness 1000 to 4."""
    found = []
    for _ in range(most):
        before = time.monotonic()
        varied = f"slenderness from 1000 to 4 in {count} log"
        running = process("sweep", channel, "--vary", varied, "--workers", workers)
        running.communicate()
        assert running.returncode == 1
        found.append(time.monotonic() - before)
    return min(found)


@pytest.mark.long
def test_sixty_channels_on_two_workers(process, channel):
    """All quantities at the default accuracy in 20 s; other work on the machine only makes it slower."""
    assert fastest(process, channel, 60, 2) <= 20


@pytest.mark.long
def test_two_workers_against_one(process, channel):
    """At least 1.7 times as fast; starting the program and its workers is a part that cannot be shared."""
    alone, shared = (fastest(process, channel, 200, workers, 2) for workers in (1, 2))
    assert alone / shared >= 1.7, (alone, shared)


@pytest.mark.long
def test_memory_does_not_grow_with_members(angle, tmp_path):
    """Peak memory of the command and of its workers, for fifty members and for five hundred."""
    peaks = []
    for count in (50, 500):
        code = (
            "import resource, sys\nfrom crosscheck.command_line import main\n"
            f"status = main(['sweep', {str(angle)!r}, '--vary', 't from 1 to 9 in {count}', '--out', "
            f"{str(tmp_path / str(count))!r}, '--accuracy', '1e-2', '--quantity', 'area'])\n"
            "own, workers = (resource.getrusage(who).ru_maxrss for who in "
            "(resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN))\n"
            "sys.stderr.write(f'{own} {workers}')\n"
        )
        ran = subprocess.run(
            [sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True
        )
        peaks.append([int(word) for word in ran.stderr.split()])
    for few, many in zip(*peaks, strict=True):
        assert many < 1.1 * few + 10_000, peaks
