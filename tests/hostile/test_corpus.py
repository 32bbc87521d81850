"""Bad and borderline inputs: each gives its status and says why, quickly, and touches nothing else."""

from __future__ import annotations

import pytest
from odd_commands import COMMANDS
from odd_drawings import DRAWINGS
from odd_sections import SECTIONS
from odd_tables import OUTLINES, TABLES
from trial import SECRET, Trial, time_limit

from crosscheck.command_line import main

TRIALS = (*SECTIONS, *TABLES, *OUTLINES, *DRAWINGS, *COMMANDS)
# What no input of under a megabyte may take; nearly all take a tenth of a second.
SECONDS = 60.0


def tree(folder):
    """Every file below a folder."""
    return {path.relative_to(folder).as_posix() for path in folder.rglob("*")}


@pytest.mark.parametrize(
    "trial",
    [pytest.param(t, id=t.name, marks=[pytest.mark.long] if t.long else []) for t in TRIALS],
)
def test_status_and_words(trial: Trial, tmp_path, monkeypatch, capsys):
    (tmp_path / "secret.csv").write_text(SECRET)
    given = tmp_path / "given"
    given.mkdir()
    trial.lay(given)
    monkeypatch.chdir(given)
    monkeypatch.setenv("COLUMNS", "160")
    before = tree(tmp_path)
    with time_limit(SECONDS):
        status = main(trial.command)
    out, err = capsys.readouterr()
    said = out + err if status < 2 else err
    assert status == trial.status, said[:900]
    for words in trial.words:
        assert words in said, said[:900]
    for words in ("internal fault", "Traceback", "\x1b", SECRET, *trial.never):
        assert words not in out + err
    assert status < 2 or all(line.isprintable() and len(line) < 2000 for line in err.splitlines())
    made = tree(tmp_path) - before
    assert all(name.startswith("given/out") for name in made), made
    assert not [name for name in made if name.endswith(".part")]


def test_names_are_told_apart():
    names = [trial.name for trial in TRIALS]
    assert len(set(names)) == len(names)
