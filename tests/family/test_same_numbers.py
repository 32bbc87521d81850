"""A member's numbers do not depend on what its process solved before, to the last digit."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
CODE = """
import json, sys
from crosscheck.family.members import Family, solve_member
from crosscheck.family.ranges import ranges_of
from crosscheck.section_file.reader import read_source
source = read_source(sys.argv[1])
family = Family(source, (), ranges_of(["t from 0.5 to 9 in 1000"], source), 1e-2)
for number in sys.argv[2:]:
    print(json.dumps(solve_member(family, [family.ranges[0].values[int(number)]])))
"""


def solved(angle, *numbers):
    """Members solved one after another in a process of their own."""
    ran = subprocess.run(
        [sys.executable, "-c", CODE, str(angle), *map(str, numbers)],
        cwd=ROOT, capture_output=True, text=True, check=True,
    )  # fmt: skip
    return ran.stdout.splitlines()


def test_first_in_a_process_or_later(angle):
    """This one came out otherwise when it was the first."""
    first, again = solved(angle, 928, 928)
    assert first == again
    assert solved(angle, 30, 928)[1] == first
