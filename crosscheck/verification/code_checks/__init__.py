"""Code verification: checks that need no published number, one module a group.

A module of this package has a tuple `CHECKS` of `CodeCheck`; its name stands in `MODULES`.
"""

from __future__ import annotations

from importlib import import_module

from crosscheck.verification.check import CodeCheck

MODULES: tuple[str, ...] = (
    "manufactured",
    "exactness",
    "corner_rate",
    "bounds",
    "error_bars",
    "equilibrium",
    "reciprocity",
    "redundancy",
    "invariances",
    "divided_walls",
    "stresses",
    "hand_sheet",
    "levels",
    "lumping",
    "each_level",
    "joint_terms",
    "fe_flows",
    "judgement",
    "self_checks",
    "limits",
)


def code_checks() -> tuple[CodeCheck, ...]:
    """All code checks, in the order of MODULES."""
    found: list[CodeCheck] = []
    for module in MODULES:
        found += import_module(f"{__name__}.{module}").CHECKS
    return tuple(found)
