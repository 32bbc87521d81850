"""Proof that the verification suite can fail.

Every deliberate fault turns a check red, and every check is turned red by a fault. The whole catalogue takes
minutes; a few faults run every day.

    python tests/verification/faults/matrix.py        the matrix of faults and checks
"""

from __future__ import annotations

import pytest
from checks import suite_checks
from injection import CATALOGUE, Fault, altered, side, turned_red, without_faults

EVERY_DAY = (
    "sign of the closing flow",
    "factor two of the cell area",
    "missing constant of a hole",
    "lost jump round a hole",
    "effect turned round",
)


def test_every_fault_can_be_made() -> None:
    """Each stands in its file exactly once, and what comes of it is Python."""
    assert len({(f.name, f.path) for f in CATALOGUE}) == len(CATALOGUE) >= 30
    for fault in CATALOGUE:
        altered(fault)


@pytest.mark.parametrize("fault", [f for f in CATALOGUE if f.name in EVERY_DAY], ids=lambda f: f.name)
def test_a_fault_turns_the_suite_red(fault: Fault) -> None:
    assert turned_red(fault, (), suite_checks(side(fault), rows=False))


@pytest.mark.long
def test_every_fault_and_every_check() -> None:
    """Faults in turn; each runs the checks that none has turned red yet, then the others until one fails."""
    unseen = {name for name, _ in suite_checks()}
    silent = []
    memory = without_faults()
    for fault in CATALOGUE:
        checks = suite_checks(side(fault))
        red = turned_red(
            fault,
            [c for c in checks if c[0] in unseen],
            [c for c in checks if c[0] not in unseen],
            memory,
        )
        unseen -= set(red)
        if not red:
            silent.append(fault.name)
    assert not silent, f"faults that nothing sees: {silent}"
    assert not unseen, f"checks that no fault turns red: {sorted(unseen)}"
