"""The journal: exact after any end, and only for its own inputs."""

from __future__ import annotations

import errno
import os
import resource
import signal
import subprocess
import sys
from pathlib import Path

import pytest

from crosscheck.batch.journal import Journal, JournalMismatch
from crosscheck.batch.task import BatchError, Failure, Outcome

INPUTS = {"file": "abc", "accuracy": 1e-5}


def journal(path, resume=False, inputs=INPUTS, points=5):
    return Journal(path, inputs, points, resume=resume)


def written(path, numbers, **options):
    with journal(path, **options) as book:
        for number in numbers:
            book.add(Outcome(number, {"value": number / 7}))


def numbers(path):
    with journal(path, resume=True) as book:
        return [outcome.number for outcome in book.outcomes()]


def test_outcomes_come_back_in_the_order_of_points_and_to_the_last_digit(tmp_path):
    path = tmp_path / "journal"
    with journal(path) as book:
        book.add(Outcome(3, {"value": 0.1 + 0.2, "word": "\u00fc\n"}))
        book.add(Outcome(0, failure=Failure("crash", "why")))
    with journal(path, resume=True) as book:
        assert book.done == 2
        assert 3 in book
        assert 1 not in book
        assert list(book.outcomes()) == [
            Outcome(0, failure=Failure("crash", "why")),
            Outcome(3, {"value": 0.1 + 0.2, "word": "\u00fc\n"}),
        ]


def test_cut_anywhere_it_loses_only_what_was_not_whole(tmp_path):
    """Every length that an end at any moment could leave."""
    path = tmp_path / "journal"
    written(path, [2, 0, 4])
    whole = path.read_bytes()
    ends = [i + 1 for i, byte in enumerate(whole) if byte == ord("\n")]
    for length in range(len(whole) + 1):
        path.write_bytes(whole[:length])
        kept = sum(end <= length for end in ends[1:])
        assert numbers(path) == sorted([2, 0, 4][:kept]), length
        written(path, [1], resume=True)
        assert numbers(path) == sorted([1, *[2, 0, 4][:kept]]), length


def test_a_line_that_was_changed_is_not_believed(tmp_path):
    path = tmp_path / "journal"
    written(path, [0, 1, 2])
    path.write_bytes(path.read_bytes().replace(b'"number": 1', b'"number": 3'))
    assert numbers(path) == [0, 2]


def test_it_belongs_to_its_inputs(tmp_path):
    path = tmp_path / "journal"
    written(path, [0])
    with pytest.raises(JournalMismatch, match=r"accuracy 1e-05, now 0\.001.*another\s+folder"):
        journal(path, resume=True, inputs={**INPUTS, "accuracy": 1e-3})
    with pytest.raises(JournalMismatch, match="points 5, now 6"):
        journal(path, resume=True, points=6)
    assert numbers(path) == [0]


def test_unfinished_work_is_not_thrown_away(tmp_path):
    path = tmp_path / "journal"
    written(path, [0, 1])
    with pytest.raises(JournalMismatch, match=r"2 of 5 points.*--resume"):
        journal(path)
    written(path, [2, 3, 4], resume=True)
    with journal(path) as book:
        assert book.done == 0


def test_something_else_is_not_overwritten(tmp_path):
    path = tmp_path / "journal"
    path.write_text("a diary\n")
    with pytest.raises(JournalMismatch, match="not a journal"):
        journal(path, resume=True)
    assert path.read_text() == "a diary\n"


def test_two_runs_do_not_share_one(tmp_path):
    path = tmp_path / "journal"
    with journal(path), pytest.raises(JournalMismatch, match="in use by another run"):
        journal(path, resume=True)


def test_full_disk_leaves_a_journal_that_can_be_resumed(tmp_path, monkeypatch):
    """A write that stops half way, as on a full disk."""
    path = tmp_path / "journal"
    with journal(path) as book:
        book.add(Outcome(0, "first"))

        class Full:
            """The file with room for ten more bytes."""

            def __init__(self, file):
                self.file, self.room = file, 10

            def write(self, content):
                if self.room == 0:
                    raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))
                self.room, taken = 0, self.file.write(content[: self.room])
                return taken

            def __getattr__(self, name):
                return getattr(self.file, name)

        book.file = Full(book.file)
        with pytest.raises(BatchError, match=r"No space left.*1 of 5 points are safe.*--resume"):
            book.add(Outcome(1, "second"))
    assert numbers(path) == [0]


def test_the_systems_own_refusal_in_the_middle_of_a_line(tmp_path):
    """A limit of the system on the size of files: the write is cut short, then refused."""
    path = tmp_path / "journal"
    code = (
        "import resource, signal, sys\n"
        "from pathlib import Path\n"
        "from crosscheck.batch.journal import Journal\n"
        "from crosscheck.batch.task import BatchError, Outcome\n"
        f"resource.setrlimit(resource.RLIMIT_FSIZE, (1000, {resource.RLIM_INFINITY}))\n"
        f"book = Journal(Path({str(path)!r}), {INPUTS!r}, 50, resume=False)\n"
        "try:\n"
        "    for n in range(50): book.add(Outcome(n, 'x' * 40))\n"
        "except BatchError as fault: sys.exit(f'{n} {fault}')\n"
    )
    root = Path(__file__).resolve().parents[2]
    ran = subprocess.run([sys.executable, "-c", code], cwd=root, capture_output=True, text=True, check=False)
    assert ran.returncode == 1
    done = int(ran.stderr.split()[0])
    assert done > 3
    assert f"{done} of 50 points are safe" in ran.stderr
    with journal(path, resume=True, points=50) as book:
        assert book.done == done


def test_a_folder_that_is_not_there(tmp_path):
    with pytest.raises(BatchError, match="cannot be written"):
        journal(tmp_path / "nowhere" / "journal")


def test_killed_while_writing(tmp_path):
    """SIGKILL while lines are written as fast as they go: what is there is whole and in order."""
    path = tmp_path / "journal"
    code = (
        "import sys\nfrom pathlib import Path\nfrom crosscheck.batch.journal import Journal\n"
        "from crosscheck.batch.task import Outcome\n"
        f"book = Journal(Path({str(path)!r}), {INPUTS!r}, 10**6, resume=False)\nprint('go', flush=True)\n"
        "for n in range(10**6): book.add(Outcome(n, n / 7))\n"
    )
    root = Path(__file__).resolve().parents[2]
    with subprocess.Popen([sys.executable, "-c", code], cwd=root, stdout=subprocess.PIPE) as process:
        assert process.stdout is not None
        process.stdout.readline()
        while path.stat().st_size < 20_000:
            pass
        process.send_signal(signal.SIGKILL)
    with journal(path, resume=True, points=10**6) as book:
        found = list(book.outcomes())
    assert len(found) > 100
    assert found == [Outcome(n, n / 7) for n in range(len(found))]
