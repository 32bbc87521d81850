"""Overrides from the command line, faults counted and carried, text that must not reach a terminal raw."""

from __future__ import annotations

import pickle
from collections.abc import Callable

import pytest

from crosscheck.faults import Fault, SectionFaults

Lines = Callable[..., list[str]]

GOOD = (
    'units = "mm N"\n[points]\na = [0, 0]\nb = [50, 0]\nc = [50, 80]\n'
    '[[walls]]\npath = ["a", "b", "c"]\nthickness = 2\n'
)
ARITHMETIC = "a number or arithmetic on parameters (+ - * / ** ( ) sqrt sin cos tan pi)"


@pytest.mark.parametrize(
    ("override", "key", "words"),
    [
        ("tt = 3", 'set "tt = 3"', 'must be a parameter of [parameters], got "tt"; did you mean "t"?'),
        ("t 3", 'set "t 3"', 'must be of the form "name = value", got "t 3"'),
        ("t = 1 / 0", 'set "t = 1 / 0"', f'must be {ARITHMETIC}, got "1 / 0"; division by zero'),
    ],
)
def test_override_faults(fault_lines: Lines, override: str, key: str, words: str) -> None:
    text = GOOD.replace("thickness = 2", 'thickness = "t"') + "[parameters]\nt = 2\n"
    assert fault_lines(text, [override]) == [f"{key}: {words}"]


def test_override_of_a_file_without_parameters(fault_lines: Lines) -> None:
    assert fault_lines(GOOD, ["t = 2"]) == [
        'set "t = 2": must be left out: the file has no [parameters], got "t"'
    ]


def test_control_sequences_do_not_reach_the_terminal(fault_lines: Lines) -> None:
    (line,) = fault_lines(GOOD + '"\\u001b[31m" = 1\n')
    assert line.startswith('walls[0]."\\x1b[31m": must be a known key of [[walls]]')


def test_names_are_printable(fault_lines: Lines) -> None:
    (line,) = fault_lines(GOOD + 'name = "a\\nb"\n')
    assert line.startswith("walls[0].name: must be 1 to 60 printable characters on one line")


@pytest.mark.parametrize(
    ("entry", "keys"),
    [
        ('path = ["a", "q"]\nthickness = -2\nmaterial = "gold"\ndirect_share = 2',
         ["path[1]", "thickness", "material", "direct_share"]),
        ('path = ["q", "a", "b"]\nthickness = [1, -1, 0]\nsmooth = true\narc = {through = [0, "x"]}',
         ["path[0]", "thickness[1]", "thickness[2]", "smooth", "arc", "arc.through[1]"]),
        ('path = ["a", "a"]\nthickness = {from = -1, to = 1}\narc = {through = ["x", 0]}',
         ["path[1]", "thickness.from", "arc.through[0]"]),
        ('thickness = -2\nmaterial = "gold"', ["path", "thickness", "material"]),
    ],
    ids=["unknown point", "list", "twice in a row", "no path"],
)  # fmt: skip
def test_a_faulty_path_hides_no_other_fault(fault_lines: Lines, entry: str, keys: list[str]) -> None:
    lines = fault_lines(GOOD + f"[[walls]]\n{entry}\n")
    assert {line.split(": ")[0] for line in lines} == {f"walls[1].{key}" for key in keys}


def test_many_faults_are_counted(fault_lines: Lines) -> None:
    lines = fault_lines(GOOD + "".join(f"k{n} = 1\n" for n in range(150)))
    assert len(lines) == 101
    assert lines[-1] == "and 50 more faults"


def test_faults_travel_between_processes() -> None:
    fault = Fault("lipped.toml", "walls[2].thickness", "-1.2", "> 0")
    assert str(fault) == "lipped.toml: walls[2].thickness: must be > 0, got -1.2"
    again = pickle.loads(pickle.dumps(SectionFaults([fault], 3)))
    assert again.faults == (fault,)
    assert again.lines == (fault.text, "lipped.toml: and 3 more faults")
