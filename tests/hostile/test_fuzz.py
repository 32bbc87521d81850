"""Any section file: refused with reasons, or solved with numbers that stand; never anything else.

A shrunk failure becomes a file in ``regressions`` and is run for ever after.
"""

from __future__ import annotations

import math
from collections import Counter
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from grammar import mutated, section_texts
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from trial import time_limit

from crosscheck import Result
from crosscheck.commands.compare import compare_file

SHIPPED = Path(__file__).parents[2] / "cases" / "sections"
# Those that need no file beside them and are solved in a moment.
TEXTS = [
    text
    for path in sorted(SHIPPED.glob("*.toml"))
    if "file =" not in (text := path.read_text(encoding="utf-8"))
    and ".csv" not in text
    and text.count("[[") < 14
]
REGRESSIONS = sorted((Path(__file__).parent / "regressions").glob("*.toml"))
EVERY = {"deadline": None, "suppress_health_check": list(HealthCheck), "database": None}
EVERYDAY = settings(max_examples=60, derandomize=True, **EVERY)
LONG = settings(max_examples=10_000, print_blob=True, **EVERY)
SECONDS = 60.0
# What came of the examples, by status; the long run prints it.
CAME: Counter[str] = Counter()


def judged(text: str, capsys: pytest.CaptureFixture[str]) -> list[str]:
    """What is wrong with the answer to a text."""
    with TemporaryDirectory() as folder:
        path = Path(folder) / "any.toml"
        path.write_text(text, encoding="utf-8")
        with time_limit(SECONDS):
            result, status = compare_file(str(path), (), 1e-3, lambda _: None, pictures=False)
    said = capsys.readouterr().err.splitlines()
    CAME[f"status {int(status)}"] += 1
    if result is None:
        wrong = [line for line in said if not line.isprintable() or len(line) > 2000 or folder not in line]
        if not said or status not in (2, 3):
            wrong.append(f"refused with status {int(status)} and {len(said)} lines")
        if status == 2:
            wrong += [line for line in said if "must be" not in line and " more faults" not in line]
        return wrong
    return unsound(result)


def unsound(result: Result) -> list[str]:
    """What is wrong with a result in itself."""
    wrong = [f"{c.name}: {c.value:.3g} > {c.allowed:.3g}" for c in result.checks if not c.passed]
    for row in result.quantities:
        numbers = [row.fe.value, row.fe.low, row.fe.high, *row.theory.values()]
        wrong += [f"{row.name} {row.load}: {n}" for n in numbers if n is not None and not math.isfinite(n)]
        if row.fe.value is not None and not row.fe.low <= row.fe.value <= row.fe.high:  # type: ignore[operator]
            wrong.append(f"{row.name} {row.load}: {row.fe}")
    if not result.accuracy_met and "NOT REACHED" not in result.accuracy_note:
        wrong.append(result.accuracy_note)
    return wrong


any_text = st.one_of(
    section_texts(), section_texts(), mutated(section_texts()), mutated(st.sampled_from(TEXTS))
)


@given(text=any_text)
@EVERYDAY
def test_any_text(capsys, text):
    assert judged(text, capsys) == []


@pytest.mark.long
@given(text=any_text)
@LONG
def test_any_text_of_ten_thousand(capsys, text):
    assert judged(text, capsys) == []


@pytest.mark.long
def test_the_long_run_solved_many():
    assert CAME["status 0"] + CAME["status 1"] > 2_000, CAME


@pytest.mark.parametrize("path", REGRESSIONS, ids=lambda path: path.stem)
def test_what_once_failed(path, capsys):
    assert judged(path.read_text(encoding="utf-8"), capsys) == []
